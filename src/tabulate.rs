//! Tabulate: efficiency and loss over the grid; the whole grid is streamed to files, a choice of loads to readers.

use std::io::{self, Write};

use crate::answer::Answer;
use crate::budget::Budget;
use crate::candidate::Candidate;
use crate::columns::Columns;
use crate::record::Record;
use crate::requirements;
use crate::sweep::{self, Watch};

/// What is asked.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct Request {
    /// Only this stage.
    pub stage: Option<String>,
    /// All loads of the budget and all columns, in text and Markdown.
    pub full: bool,
    /// Loads of the rows, instead of round ones.
    pub loads: Option<Vec<Load>>,
    /// Columns for parts or for mechanisms.
    pub split: Option<Split>,
}

/// A load as asked for.
#[derive(Clone, Copy, Debug, PartialEq)]
pub enum Load {
    /// A
    Amperes(f64),
    /// Fraction of rated_load.
    OfRated(f64),
}

/// What the loss is split into.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Split {
    /// One column a part.
    Part,
    /// One column a mechanism.
    Mechanism,
}

/// Tabulates the stages of a budget.
pub fn answer<'a>(budget: &'a Budget, request: &'a Request, watch: &'a Watch) -> impl Answer + 'a {
    Question { budget, request, watch }
}

struct Question<'a> {
    budget: &'a Budget,
    request: &'a Request,
    watch: &'a Watch,
}

impl<'a> Question<'a> {
    /// The stages asked for, in the order written.
    fn candidates(&self) -> Vec<Candidate<'a>> {
        let named = |name: &str| self.request.stage.as_ref().is_none_or(|stage| stage == name);
        self.budget
            .stages
            .iter()
            .filter(|sheet| named(&sheet.name))
            .map(|s| Candidate::new(self.budget, s))
            .collect()
    }

    /// Every point of every stage in order; `write` makes the bytes of a point in parallel, blocks are written in order.
    fn stream(
        &self,
        candidates: &[Candidate<'_>],
        out: &mut dyn Write,
        write: impl Fn(&Record<'_>, &mut Vec<u8>) + Sync,
    ) -> io::Result<()> {
        for candidate in candidates {
            let whole = sweep::in_order(
                candidate.grid.len(),
                self.watch,
                |range| {
                    let mut bytes = Vec::new();
                    for index in range {
                        write(&Record::of(candidate, candidate.grid.point(index)), &mut bytes);
                    }
                    bytes
                },
                |bytes: Vec<u8>| out.write_all(&bytes),
            )?;
            if !whole {
                return Err(io::Error::new(io::ErrorKind::Interrupted, "interrupted"));
            }
        }
        Ok(())
    }
}

impl Answer for Question<'_> {
    fn document(&self) -> crate::report::Document {
        crate::report::tables::document(self.budget, &self.candidates(), self.request)
    }

    #[cfg(feature = "xlsx")]
    fn spreadsheet(&self) -> Option<Result<Vec<u8>, String>> {
        Some(crate::workbook::bytes(self.budget, &self.candidates()))
    }

    fn json(&self, out: &mut dyn Write) -> io::Result<()> {
        let text = |text: &str| serde_json::to_string(text).map_err(io::Error::other);
        write!(
            out,
            "{{\"lossbook\": {}, \"budget\": {}, \"values\": {}, \"points\": [",
            text(env!("CARGO_PKG_VERSION"))?,
            text(&self.budget.name)?,
            text(self.budget.values.name())?
        )?;
        // each point is preceded by its separator; that of the very first one is cut off
        let mut first = Beheaded { out, left: 1 };
        self.stream(&self.candidates(), &mut first, |record, bytes| {
            bytes.extend_from_slice(b",\n");
            // a Vec takes every byte and records have no map keys but text: this cannot fail
            let _ = serde_json::to_writer(bytes, record);
        })?;
        writeln!(out, "\n]}}")
    }

    fn met(&self) -> bool {
        // judged like a comparison: the stage named, or any stage
        self.budget.requirements.is_empty()
            || self.candidates().iter().any(|c| requirements::all_met(&requirements::judge(c, self.watch)))
    }

    fn csv(&self, out: &mut dyn Write) -> io::Result<()> {
        let candidates = self.candidates();
        let columns = Columns::of(&candidates);
        out.write_all(&columns.header())?;
        self.stream(&candidates, out, |record, bytes| columns.row(record, bytes))
    }
}

/// A writer that drops the first bytes it is given.
struct Beheaded<'a> {
    out: &'a mut dyn Write,
    left: usize,
}

impl Write for Beheaded<'_> {
    fn write(&mut self, bytes: &[u8]) -> io::Result<usize> {
        let cut = self.left.min(bytes.len());
        self.left -= cut;
        self.out.write_all(bytes.get(cut..).unwrap_or_default())?;
        Ok(bytes.len())
    }

    fn flush(&mut self) -> io::Result<()> {
        self.out.flush()
    }
}
