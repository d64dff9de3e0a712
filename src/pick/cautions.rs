//! What speaks for care with the first place: deratings that it misses somewhere on the grid.

use crate::budget::Budget;
use crate::candidate::Candidate;
use crate::findings::Finding;
use crate::grid::OperatingPoint;
use crate::input::kind::AnySheet;
use crate::ledger::Slot;

use super::entry::Outcome;
use super::slots;

/// Warnings of the first place at the ends of the grid, one a slot and kind with its point, the gravest first.
pub(crate) fn of(budget: &Budget, outcome: &Outcome) -> Vec<(OperatingPoint, Finding)> {
    let base = budget.stages.iter().find(|stage| stage.name == outcome.stage);
    let (Some(base), Some(first)) = (base, outcome.ranking.first()) else { return Vec::new() };
    let mut sheet = base.clone();
    for (slot, name) in &first.parts {
        if let Some((name, part)) = part(budget, *slot, name) {
            slots::put_sheet(&mut sheet, *slot, &name, &part);
        }
    }
    let candidate = Candidate::new(budget, &sheet);
    let mut headline = candidate.headline();
    if let Some(frequency) = first.switching_frequency {
        headline.switching_frequency = frequency;
    }
    candidate.findings_at_ends(headline)
}

fn part(budget: &Budget, slot: Slot, name: &str) -> Option<(std::sync::Arc<str>, AnySheet)> {
    let library = &budget.library;
    match slot {
        Slot::HighSide | Slot::LowSide => {
            library.mosfets.get(name).map(|(name, sheet)| (name, AnySheet::Mosfet(sheet)))
        }
        Slot::ParallelSchottky | Slot::FreewheelDiode => {
            library.diodes.get(name).map(|(name, sheet)| (name, AnySheet::Diode(sheet)))
        }
        Slot::Inductor => library.inductors.get(name).map(|(name, sheet)| (name, AnySheet::Inductor(sheet))),
        Slot::Controller => {
            library.controllers.get(name).map(|(name, sheet)| (name, AnySheet::Controller(sheet)))
        }
        Slot::Regulator => {
            library.linear_regulators.get(name).map(|(name, sheet)| (name, AnySheet::LinearRegulator(sheet)))
        }
        _ => None,
    }
}
