//! Requirements of a budget: whether a stage meets them, and where it comes closest to failing.

use crate::budget::{Limit, Requirement};
use crate::candidate::Candidate;
use crate::grid::OperatingPoint;
use crate::infeasible::Infeasible;
use crate::model::Solved;
use crate::ratings;
use crate::sweep::{self, Watch};

/// What became of one requirement in one stage.
#[derive(Clone, Debug, PartialEq)]
pub struct Judgement {
    /// The requirement.
    pub requirement: Requirement,
    /// True when it is met at every point asked for, and there is one that can be judged.
    pub met: bool,
    /// The point that decides, with its value; a point that cannot be built decides at once.
    pub decisive: Option<(OperatingPoint, Result<f64, Infeasible>)>,
    /// Number of points looked at.
    pub points: u64,
}

/// Judges every requirement of the budget for one stage.
pub fn judge(candidate: &Candidate<'_>, watch: &Watch) -> Vec<Judgement> {
    candidate.budget.requirements.iter().map(|requirement| judge_one(candidate, requirement, watch)).collect()
}

/// True when all are met.
pub fn all_met(judgements: &[Judgement]) -> bool {
    judgements.iter().all(|judgement| judgement.met)
}

fn judge_one(candidate: &Candidate<'_>, requirement: &Requirement, watch: &Watch) -> Judgement {
    let grid = candidate.grid_at(requirement.at);
    let mut decisive: Option<(f64, OperatingPoint, Result<f64, Infeasible>)> = None;
    let worst_of = |range: std::ops::Range<u64>| {
        let mut worst: Option<(f64, OperatingPoint, Result<f64, Infeasible>)> = None;
        for index in range {
            let point = grid.point(index);
            let value = match candidate.evaluate(point) {
                Err(reason) => Some(Err(reason)),
                Ok(solved) => value(candidate, &requirement.limit, &solved).map(Ok),
            };
            if let Some(value) = value {
                let spare =
                    value.as_ref().map_or(f64::NEG_INFINITY, |value| spare(&requirement.limit, *value));
                if worst.as_ref().is_none_or(|(least, ..)| spare < *least) {
                    worst = Some((spare, point, value));
                }
            }
        }
        worst
    };
    // the error type has no values: taking up a block cannot fail
    let taken = sweep::in_order(grid.len(), watch, worst_of, |worst| {
        if let Some(worst) = worst
            && decisive.as_ref().is_none_or(|(least, ..)| worst.0 < *least)
        {
            decisive = Some(worst);
        }
        Ok::<(), std::convert::Infallible>(())
    });
    // what cannot be judged is not met
    let met = taken == Ok(true) && decisive.as_ref().is_some_and(|(spare, ..)| *spare >= 0.0);
    Judgement {
        requirement: *requirement,
        met,
        decisive: decisive.map(|(_, point, value)| (point, value)),
        points: grid.len(),
    }
}

/// The value that a limit is about; `None` where it is undefined (efficiency without load, no rated temperature).
fn value(candidate: &Candidate<'_>, limit: &Limit, solved: &Solved) -> Option<f64> {
    match limit {
        Limit::EfficiencyMin(_) => solved.efficiency(),
        Limit::JunctionMarginMin(_) => {
            ratings::junction_margin(candidate.sheet, solved).map(|(_, margin)| margin)
        }
        Limit::LossMax(_) => Some(solved.loss()),
    }
}

/// Distance to the limit, negative when it is missed.
fn spare(limit: &Limit, value: f64) -> f64 {
    match limit {
        Limit::EfficiencyMin(least) | Limit::JunctionMarginMin(least) => value - least,
        Limit::LossMax(most) => most - value,
    }
}
