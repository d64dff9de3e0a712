//! The question as an answer: searched or merged once, then written in any format.

use std::cell::OnceCell;
use std::io::{self, Write};

use serde::Serialize;
use serde::ser::{SerializeMap, Serializer};

use crate::answer::Answer;
use crate::budget::{Budget, Shortlist};
use crate::report::Document;
use crate::stage::StageSheet;
use crate::sweep::Watch;

use super::describe;
use super::entry::{Entry, Outcome};
use super::insight::Insight;
use super::search::{Plan, search};
use super::space::Space;
use super::{By, Request};

/// A budget with the stage that its shortlist is about.
#[derive(Clone, Copy, Debug)]
struct Rail<'a> {
    budget: &'a Budget,
    shortlist: &'a Shortlist,
    stage: &'a StageSheet,
}

impl<'a> Rail<'a> {
    fn of(budget: &'a Budget) -> Option<Rail<'a>> {
        let shortlist = budget.shortlist.as_ref()?;
        let stage = budget.stages.iter().find(|stage| stage.name == shortlist.stage)?;
        Some(Rail { budget, shortlist, stage })
    }

    fn space(&self, by: By) -> Space<'a> {
        Space::of(self.budget, self.stage, self.shortlist, by)
    }
}

/// Where the ranking comes from.
#[derive(Clone, Debug)]
enum Source<'a> {
    /// A search of the budget's shortlist.
    Search { rail: Rail<'a>, request: Request, watch: &'a Watch },
    /// Slices put together, perhaps with the budget that they came from.
    Merged { outcome: Box<Outcome>, rail: Option<Rail<'a>> },
}

/// A question about a shortlist.
#[derive(Debug)]
pub struct Question<'a> {
    source: Source<'a>,
    picked: OnceCell<Picked>,
}

/// A ranking and what there is to say about its winner.
#[derive(Clone, Debug, PartialEq)]
pub struct Picked {
    /// The ranking.
    pub outcome: Outcome,
    /// About the winner; not for slices, interrupted searches, or merged ones without their budget.
    pub insight: Option<Insight>,
}

impl<'a> Question<'a> {
    /// A search of a budget's shortlist; `None` when it has none.
    pub fn search(budget: &'a Budget, request: Request, watch: &'a Watch) -> Option<Self> {
        Rail::of(budget).map(|rail| Question::from(Source::Search { rail, request, watch }))
    }

    /// Slices put together; with their budget there is more to say about the winner.
    pub fn merged(outcome: Outcome, budget: Option<&'a Budget>) -> Self {
        Question::from(Source::Merged { outcome: Box::new(outcome), rail: budget.and_then(Rail::of) })
    }

    fn from(source: Source<'a>) -> Self {
        Question { source, picked: OnceCell::new() }
    }

    fn rail(&self) -> Option<Rail<'a>> {
        match &self.source {
            Source::Search { rail, .. } => Some(*rail),
            Source::Merged { rail, .. } => *rail,
        }
    }

    /// The ranking, searched when first asked for.
    pub fn picked(&self) -> &Picked {
        self.picked.get_or_init(|| match &self.source {
            Source::Merged { outcome, rail } => {
                let insight = rail.map(|rail| Insight::of(&rail.space(outcome.by), outcome));
                Picked { insight, outcome: (**outcome).clone() }
            }
            Source::Search { rail, request, watch } => {
                let space = rail.space(request.by);
                let plan = Plan { top: request.top, exhaustive: request.exhaustive, slice: request.slice };
                let outcome = describe::outcome(&space, plan, &search(&space, plan, watch));
                let whole = outcome.complete && outcome.slice.is_whole();
                Picked { insight: whole.then(|| Insight::of(&space, &outcome)), outcome }
            }
        })
    }
}

impl Answer for Question<'_> {
    fn document(&self) -> Document {
        crate::report::shortlist::document(self.picked(), self.rail().map(|rail| rail.budget))
    }

    fn json(&self, out: &mut dyn Write) -> io::Result<()> {
        serde_json::to_writer_pretty(&mut *out, self.picked())?;
        writeln!(out)
    }

    fn csv(&self, out: &mut dyn Write) -> io::Result<()> {
        let picked = self.picked();
        let mut writer = csv::Writer::from_writer(out);
        let outcome = &picked.outcome;
        let entries: Vec<&Entry> = outcome.ranking.iter().chain(&outcome.not_comparable).collect();
        let slots: Vec<_> = entries
            .first()
            .map(|entry| entry.parts.iter().map(|(slot, _)| *slot).collect())
            .unwrap_or_default();
        writer.write_record(header(outcome, &slots))?;
        for list in [&outcome.ranking, &outcome.not_comparable] {
            for (place, entry) in list.iter().enumerate() {
                writer.write_record(row(place + 1, entry))?;
            }
        }
        writer.flush()
    }

    /// A ranking with a first place that meets every requirement.
    fn met(&self) -> bool {
        self.picked().outcome.ranking.first().is_some_and(|first| first.missed.is_empty())
    }
}

fn header(outcome: &Outcome, slots: &[crate::ledger::Slot]) -> Vec<String> {
    let unit = match outcome.by {
        By::Price => outcome.currency.clone().unwrap_or_default(),
        by => by.unit().into(),
    };
    let with_unit =
        |name: &str, unit: &str| if unit.is_empty() { name.into() } else { format!("{name} [{unit}]") };
    let currency = outcome.currency.as_deref().unwrap_or_default();
    let mut header = vec!["rank".to_owned()];
    header.extend(slots.iter().map(|slot| slot.name().to_owned()));
    header.extend([
        "switching_frequency [Hz]".into(),
        with_unit(outcome.by.name(), &unit),
        "loss [W]".into(),
        "efficiency".into(),
        with_unit("price", currency),
        "hottest".into(),
        "hottest [degC]".into(),
        "requirements_missed".into(),
        "needs".into(),
    ]);
    // the value ranked by may bear the name of a column that follows
    if outcome.by == By::Price {
        header[slots.len() + 2] = with_unit("value", &unit);
    }
    header
}

fn row(rank: usize, entry: &Entry) -> Vec<String> {
    let number = |value: Option<f64>| value.map(|value| value.to_string()).unwrap_or_default();
    let mut row = vec![rank.to_string()];
    row.extend(entry.parts.iter().map(|(_, part)| part.clone()));
    row.extend([
        number(entry.switching_frequency),
        number(Some(entry.value)),
        number(Some(entry.loss)),
        number(entry.efficiency),
        number(entry.price),
        entry.hottest.map(|(slot, _)| slot.name().to_owned()).unwrap_or_default(),
        number(entry.hottest.map(|(_, temperature)| temperature)),
        entry.missed.len().to_string(),
        entry.needs.join(" "),
    ]);
    row
}

impl Serialize for Picked {
    fn serialize<S: Serializer>(&self, serializer: S) -> Result<S::Ok, S::Error> {
        let mut map = serializer.serialize_map(None)?;
        self.outcome.entries(&mut map)?;
        if let Some(insight) = &self.insight {
            insight.entries(&mut map)?;
        }
        map.end()
    }
}
