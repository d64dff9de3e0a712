//! Diff: what changed between two budgets, entry by entry and over the load, and which inputs did it.

mod changes;

use std::io::{self, Write};

use serde::Serialize;

use crate::answer::Answer;
use crate::budget::Budget;
use crate::candidate::Candidate;
use crate::grid::{AxisName, OperatingPoint};
use crate::ledger::{ALL_MECHANISMS, Account, Mechanism};
use crate::loads;
use crate::model::Solved;
use crate::record::Record;
pub use changes::Change;

/// What is asked.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct Request {
    /// The stage; every stage that both budgets have when absent.
    pub stage: Option<String>,
}

/// Compares two budgets, or two versions of one.
pub fn answer<'a>(before: &'a Budget, after: &'a Budget, request: &'a Request) -> impl Answer + 'a {
    Question { before, after, request }
}

struct Question<'a> {
    before: &'a Budget,
    after: &'a Budget,
    request: &'a Request,
}

/// Both budgets side by side.
pub struct Difference<'a> {
    /// The first budget.
    pub before: &'a Budget,
    /// The second budget.
    pub after: &'a Budget,
    /// Stages of both.
    pub pairs: Vec<Pair<'a>>,
    /// Names of stages that only the first has.
    pub only_before: Vec<&'a str>,
    /// Names of stages that only the second has.
    pub only_after: Vec<&'a str>,
}

/// One stage in both budgets.
pub struct Pair<'a> {
    /// In the first, at its headline.
    pub before: Record<'a>,
    /// In the second, at its headline.
    pub after: Record<'a>,
    /// What differs in the inputs, with what each difference alone does.
    pub changes: Vec<Change>,
    /// Loads of either axis with both outcomes, the other coordinates as at each headline.
    pub loads: Vec<(f64, [Option<Solved>; 2])>,
}

impl Pair<'_> {
    /// Both outcomes, where both stages run.
    pub fn solved(&self) -> Option<[&Solved; 2]> {
        let of = |record: &'_ Record<'_>| record.outcome.is_ok();
        match (&self.before.outcome, &self.after.outcome) {
            (Ok(before), Ok(after)) if of(&self.before) => Some([&before.solved, &after.solved]),
            _ => None,
        }
    }

    /// Change of the loss, W.
    pub fn loss(&self) -> Option<f64> {
        self.solved().map(|[before, after]| after.loss() - before.loss())
    }

    /// Mechanisms by how much their watts changed, the largest first.
    pub fn mechanisms(&self) -> Vec<(Mechanism, f64)> {
        let Some([before, after]) = self.solved() else { return Vec::new() };
        let change = |m: &Mechanism| after.ledger.mechanism(*m) - before.ledger.mechanism(*m);
        let mut all: Vec<_> =
            ALL_MECHANISMS.iter().map(|m| (*m, change(m))).filter(|(_, w)| *w != 0.0).collect();
        all.sort_by(|a, b| b.1.abs().total_cmp(&a.1.abs()));
        all
    }

    /// Entries of either stage with both watts; `None` where a stage does not book to the account.
    pub fn entries(&self) -> Vec<(Account, [Option<f64>; 2])> {
        let Some(solved) = self.solved() else { return Vec::new() };
        let candidates = [self.before.candidate, self.after.candidate];
        let watts = |account: Account| {
            [0, 1].map(|side| {
                candidates[side].accounts.contains(&account).then(|| solved[side].ledger.get(account))
            })
        };
        let all = crate::ledger::ALL_ACCOUNTS.iter().map(|row| (row.0, watts(row.0)));
        all.filter(|(_, watts)| watts.iter().any(Option::is_some)).collect()
    }
}

impl Question<'_> {
    fn with<T>(&self, render: impl FnOnce(&Difference<'_>) -> T) -> T {
        let wanted = |name: &str| self.request.stage.as_deref().is_none_or(|asked| asked == name);
        let of = |budget| -> Vec<Candidate<'_>> {
            Candidate::all(budget).into_iter().filter(|candidate| wanted(candidate.name())).collect()
        };
        let (before, after) = (of(self.before), of(self.after));
        let mut pairs = Vec::new();
        for a in &before {
            if let Some(b) = partner(a, &before, &after) {
                pairs.push(pair(a, b));
            }
        }
        let alone = |these: &'_ [Candidate<'_>], place: usize| -> Vec<usize> {
            let paired = |c: &Candidate<'_>| {
                pairs.iter().any(|pair| [&pair.before, &pair.after][place].candidate.name() == c.name())
            };
            (0..these.len()).filter(|at| !paired(&these[*at])).collect()
        };
        let only_before = alone(&before, 0).into_iter().map(|at| before[at].name()).collect();
        let only_after = alone(&after, 1).into_iter().map(|at| after[at].name()).collect();
        render(&Difference { before: self.before, after: self.after, pairs, only_before, only_after })
    }
}

/// The stage of the same name; of two budgets with one stage each, the other one.
fn partner<'a, 'b>(
    a: &Candidate<'_>,
    before: &[Candidate<'_>],
    after: &'a [Candidate<'b>],
) -> Option<&'a Candidate<'b>> {
    let same = after.iter().find(|b| b.name() == a.name());
    same.or(match (before, after) {
        ([_], [only]) => Some(only),
        _ => None,
    })
}

fn pair<'a>(a: &'a Candidate<'a>, b: &'a Candidate<'a>) -> Pair<'a> {
    let axis = |candidate: &Candidate<'_>| {
        candidate.grid.axis(AxisName::Load).map(loads::printed).unwrap_or_default()
    };
    let mut all: Vec<f64> = axis(a).into_iter().chain(axis(b)).collect();
    all.sort_by(f64::total_cmp);
    all.dedup();
    let at = |candidate: &Candidate<'_>, load: f64| -> Option<Solved> {
        candidate.evaluate(candidate.headline().with(AxisName::Load, load)).ok()
    };
    Pair {
        before: Record::of(a, a.headline()),
        after: Record::of(b, b.headline()),
        changes: changes::between(a, b),
        loads: all.into_iter().map(|load| (load, [at(a, load), at(b, load)])).collect(),
    }
}

impl Answer for Question<'_> {
    fn document(&self) -> crate::report::Document {
        self.with(crate::report::difference::document)
    }

    fn json(&self, out: &mut dyn Write) -> io::Result<()> {
        self.with(|difference| serde_json::to_writer_pretty(&mut *out, &whole(difference)))?;
        writeln!(out)
    }

    fn csv(&self, out: &mut dyn Write) -> io::Result<()> {
        self.with(|difference| {
            let mut bytes = b"stage,slot,mechanism,before [W],after [W],difference [W]\n".to_vec();
            for pair in &difference.pairs {
                for (account, [a, b]) in pair.entries() {
                    crate::columns::text(&mut bytes, pair.before.candidate.name());
                    let number =
                        |watts: Option<f64>| watts.map_or(String::new(), |watts| format!("{watts:?}"));
                    let change = b.unwrap_or(0.0) - a.unwrap_or(0.0);
                    bytes.extend_from_slice(
                        format!(
                            ",{},{},{},{},{change:?}\n",
                            account.slot().name(),
                            account.mechanism().name(),
                            number(a),
                            number(b)
                        )
                        .as_bytes(),
                    );
                }
            }
            out.write_all(&bytes)
        })
    }
}

#[derive(Serialize)]
struct Whole<'a> {
    lossbook: &'static str,
    budget: &'a str,
    values: crate::worst::ValueSet,
    other: &'a str,
    stages: Vec<StageEntry<'a>>,
    only_in_first: &'a [&'a str],
    only_in_second: &'a [&'a str],
}

#[derive(Serialize)]
struct StageEntry<'a> {
    stage: &'a str,
    other_stage: &'a str,
    sentence: String,
    loss_difference: Option<f64>,
    first: &'a Record<'a>,
    second: &'a Record<'a>,
    entries: Vec<Entry>,
    loads: Vec<LoadEntry>,
    changes: &'a [Change],
}

#[derive(Serialize)]
struct Entry {
    slot: &'static str,
    mechanism: &'static str,
    first: Option<f64>,
    second: Option<f64>,
    difference: f64,
}

#[derive(Serialize)]
struct LoadEntry {
    load: f64,
    loss: [Option<f64>; 2],
    efficiency: [Option<f64>; 2],
}

fn whole<'a>(difference: &'a Difference<'a>) -> Whole<'a> {
    let entry = |(account, [a, b]): (Account, [Option<f64>; 2])| Entry {
        slot: account.slot().name(),
        mechanism: account.mechanism().name(),
        first: a,
        second: b,
        difference: b.unwrap_or(0.0) - a.unwrap_or(0.0),
    };
    let at_load = |(load, both): &(f64, [Option<Solved>; 2])| LoadEntry {
        load: *load,
        loss: [0, 1].map(|side| both[side].as_ref().map(Solved::loss)),
        efficiency: [0, 1].map(|side| both[side].as_ref().and_then(Solved::efficiency)),
    };
    let stage = |pair: &'a Pair<'a>| StageEntry {
        stage: pair.before.candidate.name(),
        other_stage: pair.after.candidate.name(),
        sentence: crate::report::difference::sentence(pair),
        loss_difference: pair.loss(),
        first: &pair.before,
        second: &pair.after,
        entries: pair.entries().into_iter().map(entry).collect(),
        loads: pair.loads.iter().map(at_load).collect(),
        changes: &pair.changes,
    };
    Whole {
        lossbook: env!("CARGO_PKG_VERSION"),
        budget: &difference.before.name,
        values: difference.before.values,
        other: &difference.after.name,
        stages: difference.pairs.iter().map(stage).collect(),
        only_in_first: &difference.only_before,
        only_in_second: &difference.only_after,
    }
}

/// Loss of a stage at a point, W; `None` where it cannot run.
fn loss_at(stage: &crate::fitted::Stage, point: OperatingPoint) -> Option<f64> {
    crate::model::evaluate(stage, point).ok().map(|solved| solved.loss())
}
