//! The question "why should I believe this": every outside check with its outcome.

use std::cell::OnceCell;
use std::io::{self, Write};

use serde::ser::{Serialize, SerializeMap, Serializer};

use super::check::{Bound, Check};
use crate::answer::Answer;
use crate::report::Document;

/// What is asked.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq)]
pub struct Request {
    /// Every single check, also those that a summary stands for.
    pub full: bool,
}

/// Computes all checks and answers with them.
pub fn answer(request: Request) -> impl Answer {
    Question { request, evidence: OnceCell::new() }
}

struct Question {
    request: Request,
    evidence: OnceCell<Evidence>,
}

impl Question {
    fn evidence(&self) -> &Evidence {
        self.evidence.get_or_init(|| Evidence { checks: super::checks() })
    }
}

/// All checks with their outcome.
#[derive(Clone, Debug, PartialEq)]
pub struct Evidence {
    /// By subject.
    pub checks: Vec<Check>,
}

impl Evidence {
    /// Computes them.
    pub fn now() -> Self {
        Evidence { checks: super::checks() }
    }

    /// Checks that fail.
    pub fn failures(&self) -> impl Iterator<Item = &Check> {
        self.checks.iter().filter(|check| !check.holds())
    }
}

impl Answer for Question {
    fn document(&self) -> Document {
        crate::report::evidence::document(self.evidence(), self.request.full)
    }

    fn json(&self, out: &mut dyn Write) -> io::Result<()> {
        serde_json::to_writer_pretty(&mut *out, self.evidence())?;
        writeln!(out)
    }

    fn csv(&self, out: &mut dyn Write) -> io::Result<()> {
        let mut sheet = csv::Writer::from_writer(out);
        sheet.write_record([
            "subject",
            "what",
            "source",
            "unit",
            "outside",
            "ours",
            "difference",
            "bound",
            "tolerance",
            "reason",
            "holds",
        ])?;
        for check in &self.evidence().checks {
            let difference = check.difference().to_string();
            let (bound, tolerance) = bound(check.bound);
            let tolerance = tolerance.map_or_else(String::new, |tolerance| tolerance.to_string());
            sheet.write_record([
                check.subject.name(),
                &check.what,
                &check.source,
                unit(check),
                &check.outside.to_string(),
                &check.ours.to_string(),
                &difference,
                bound,
                &tolerance,
                &check.reason,
                if check.holds() { "true" } else { "false" },
            ])?;
        }
        sheet.flush()
    }

    fn met(&self) -> bool {
        self.evidence().failures().next().is_none()
    }
}

/// Unit of the values in files; a ratio is a fraction there.
fn unit(check: &Check) -> &'static str {
    match check.dimension {
        crate::units::Dimension::Ratio => "",
        dimension => dimension.unit(),
    }
}

fn bound(bound: Bound) -> (&'static str, Option<f64>) {
    match bound {
        Bound::Within(tolerance) => ("within", Some(tolerance)),
        Bound::AtMost => ("at_most", None),
        Bound::AtLeast => ("at_least", None),
    }
}

impl Serialize for Evidence {
    fn serialize<S: Serializer>(&self, serializer: S) -> Result<S::Ok, S::Error> {
        let mut map = serializer.serialize_map(None)?;
        map.serialize_entry("lossbook", env!("CARGO_PKG_VERSION"))?;
        map.serialize_entry("holds", &(self.failures().next().is_none()))?;
        map.serialize_entry("checks", &self.checks)?;
        map.end()
    }
}

impl Serialize for Check {
    fn serialize<S: Serializer>(&self, serializer: S) -> Result<S::Ok, S::Error> {
        let (name, tolerance) = bound(self.bound);
        let finite = |value: f64| value.is_finite().then_some(value);
        let mut map = serializer.serialize_map(None)?;
        map.serialize_entry("subject", self.subject.name())?;
        map.serialize_entry("what", &self.what)?;
        map.serialize_entry("source", &self.source)?;
        map.serialize_entry("unit", unit(self))?;
        map.serialize_entry("outside", &self.outside)?;
        map.serialize_entry("ours", &finite(self.ours))?;
        map.serialize_entry("difference", &finite(self.difference()))?;
        map.serialize_entry("bound", name)?;
        map.serialize_entry("tolerance", &tolerance)?;
        map.serialize_entry("reason", &self.reason)?;
        map.serialize_entry("detail", &self.detail)?;
        map.serialize_entry("holds", &self.holds())?;
        map.end()
    }
}
