//! What no section of a budget shows alone: frequencies, the number of points, heat between slots.

use super::budget_grid::MOST_POINTS;
use super::budget_keys as keys;
use super::budget_stages::slots;
use super::error::Blame;
use super::notes::Notes;
use super::path::Trail;
use crate::budget::Coupling;
use crate::grid::{AxisName, Grid};
use crate::ledger::Slot;
use crate::stage::StageSheet;
use crate::units::Dimension;

/// The headline's frequency when it names none: every switched stage needs one, and with several to choose from the
/// headline must choose. 0 when no stage takes it from the grid.
pub(crate) fn frequency(stages: &[StageSheet], grid: &Grid, named: bool, notes: &mut Notes) -> f64 {
    let axis = AxisName::SwitchingFrequency;
    let own = grid.axis(axis);
    let top = Trail::TOP;
    let switched: Vec<&StageSheet> = stages.iter().filter(|stage| !stage.is_linear()).collect();
    for stage in switched.iter().filter(|stage| own.is_none() && stage.switching_frequency.is_none()) {
        let blame = Blame::new(
            "has no switching frequency",
            "add `switching_frequency: 400 kHz` to the grid, or to the stage",
        );
        notes.key_error(&top.key("stages").key(&stage.name), blame);
    }
    let takes_grid = switched.iter().any(|stage| stage.switching_frequency.is_none());
    if own.is_some() && !stages.is_empty() && !takes_grid && notes.errors() == 0 {
        let blame = Blame::new("no stage takes its frequency from the grid", "take it out");
        notes.doubt(&top.key("grid").key(axis.name()), blame);
    }
    let mut axes = switched.iter().filter_map(|stage| stage.switching_frequency.as_ref().or(own));
    if !named && axes.any(|values| values.len() > 1) {
        let blame = Blame::new(
            "the frequency has several values, and the headline names none of them",
            "add `switching_frequency: 400 kHz` to the headline",
        );
        notes.key_error(&top.key("headline"), blame);
    }
    match own {
        Some(values) if takes_grid => values.at(0),
        _ => 0.0,
    }
}

/// A headline's frequency must be one that each stage with a choice runs at, and at least one stage must run at it.
pub(crate) fn headline_frequency(stages: &[StageSheet], grid: &Grid, headline: f64, notes: &mut Notes) {
    let own = grid.axis(AxisName::SwitchingFrequency);
    let place = Trail::TOP.key("headline");
    let place = place.key(AxisName::SwitchingFrequency.name());
    let choices = |stage: &StageSheet| {
        let values = stage.switching_frequency.as_ref().or(own);
        values.map(|values| values.values().take(32).collect::<Vec<_>>()).unwrap_or_default()
    };
    let switched: Vec<&StageSheet> = stages.iter().filter(|stage| !stage.is_linear()).collect();
    let runs = |stage: &&&StageSheet| choices(stage).contains(&headline);
    for stage in
        switched.iter().filter(|stage| stage.switching_frequency.is_some() && choices(stage).len() > 1)
    {
        if !runs(&stage) {
            let values: Vec<String> =
                choices(stage).iter().map(|f| crate::report::words::set(*f, Dimension::Frequency)).collect();
            let blame = Blame::new(
                format!("stage `{}` does not run at this frequency", stage.name),
                format!("name one of its own: {}", values.join(", ")),
            );
            notes.key_error(&place, blame);
        }
    }
    let all_own = switched.iter().all(|stage| stage.switching_frequency.is_some());
    if all_own && !switched.is_empty() && !switched.iter().any(|stage| runs(&stage)) && notes.errors() == 0 {
        let blame =
            Blame::new("no stage runs at this frequency", "take it out, or name one that a stage has");
        notes.key_error(&place, blame);
    }
}

/// No more points than anybody could wait for.
pub(crate) fn count(stages: &[StageSheet], grid: &Grid, notes: &mut Notes) {
    let axis = AxisName::SwitchingFrequency;
    let points = stages.iter().map(|stage| {
        let grid = match (&stage.switching_frequency, stage.is_linear()) {
            (_, true) => grid.without(axis),
            (Some(own), _) => grid.with(axis, own.clone()),
            (None, _) => grid.clone(),
        };
        grid.len()
    });
    let points = points.fold(0, u64::saturating_add).max(grid.without(axis).len());
    if points <= MOST_POINTS {
        return;
    }
    let sizes: Vec<String> =
        grid.axes.iter().map(|(name, values)| format!("{} {}", name.name(), values.len())).collect();
    let reason =
        format!("the stages have {points} points in all, more than {MOST_POINTS} ({})", sizes.join(", "));
    notes.key_error(&Trail::TOP.key("grid"), Blame::new(reason, "take fewer points on an axis"));
}

/// Heat between slots that no stage has together.
pub(crate) fn coupling(stages: &[StageSheet], coupling: &[Coupling], notes: &mut Notes) {
    let has =
        |stage: &StageSheet, slot: Slot| slot == Slot::Board || slots(stage.rectifier_name()).contains(&slot);
    // stages with errors are not among them
    if notes.errors() > 0 {
        return;
    }
    let top = Trail::TOP;
    let board = top.key("board");
    let trail = board.key(keys::COUPLING.name);
    for pair in coupling {
        if !stages.iter().any(|stage| has(stage, pair.heated) && has(stage, pair.heating)) {
            let blame = Blame::new("no stage has both slots", "take it out, or check the names");
            notes.doubt(&trail.key(pair.heated.name()).key(pair.heating.name()), blame);
        }
    }
}
