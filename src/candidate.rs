//! A candidate stage of a budget with everything about it that does not depend on the point.

use std::sync::Arc;

use crate::budget::Budget;
use crate::findings::{self, Finding, NotModelled, Severity};
use crate::fitted::{Kind, Stage};
use crate::grid::{Axis, AxisName, Grid, OperatingPoint, PartialPoint};
use crate::heat;
use crate::infeasible::Infeasible;
use crate::ledger::{Account, SLOTS, Slot};
use crate::model::{self, Prepared, Solved};
use crate::ratings;
use crate::sheet::BoardSheet;
use crate::stage::StageSheet;
use crate::tolerance::Rig;
use crate::worst::{Fitted, ValueSet, WorstCase};

/// A stage of a budget, fitted, with its constant facts.
#[derive(Clone, Debug)]
pub struct Candidate<'a> {
    /// The budget it belongs to.
    pub budget: &'a Budget,
    /// The stage as it is meant.
    pub sheet: &'a StageSheet,
    /// The stage with its curves, of typical values.
    pub stage: Stage,
    /// Its tolerances, when the budget asks for the worst values.
    pub worst: Option<Arc<WorstCase>>,
    /// Accounts it books to.
    pub accounts: Vec<Account>,
    /// Mechanisms that lack data.
    pub not_modelled: Vec<NotModelled>,
    /// What the model assumes.
    pub assumptions: Vec<Finding>,
    /// Names of the parts by slot; several kinds of one bank are joined with " + ".
    pub part_names: [Option<String>; SLOTS],
    /// Its grid: the budget's, with its own frequencies, or without any.
    pub grid: Grid,
}

impl<'a> Candidate<'a> {
    /// Fits a stage of a budget, with the set of values that the budget asks for.
    pub fn new(budget: &'a Budget, sheet: &'a StageSheet) -> Self {
        Self::with(budget, sheet, budget.values)
    }

    /// The same with typical values, whatever the budget asks for: what tolerances scatter around.
    pub fn typical(budget: &'a Budget, sheet: &'a StageSheet) -> Self {
        Self::with(budget, sheet, ValueSet::Typical)
    }

    /// The same with a set of values.
    pub fn with(budget: &'a Budget, sheet: &'a StageSheet, values: ValueSet) -> Self {
        let stage = Stage::fit(sheet, budget);
        let mut part_names: [Option<String>; SLOTS] = Default::default();
        for part in sheet.parts() {
            match &mut part_names[part.slot.index()] {
                Some(names) => {
                    names.push_str(" + ");
                    names.push_str(part.name);
                }
                empty => *empty = Some(part.name.to_owned()),
            }
        }
        if !sheet.is_linear() {
            part_names[Slot::Board.index()] = Some("board".into());
        }
        let grid = match (&sheet.switching_frequency, sheet.is_linear()) {
            (_, true) => budget.grid.without(AxisName::SwitchingFrequency),
            (Some(own), false) => budget.grid.with(AxisName::SwitchingFrequency, own.clone()),
            (None, false) => budget.grid.clone(),
        };
        let worst = match values {
            ValueSet::Typical => None,
            ValueSet::Worst => Some(Arc::new(WorstCase::new(Rig::new(budget, sheet)))),
        };
        Candidate {
            budget,
            accounts: findings::accounts(&stage),
            not_modelled: findings::not_modelled(&stage),
            assumptions: findings::assumptions(sheet, &budget.board),
            sheet,
            stage,
            worst,
            part_names,
            grid,
        }
    }

    /// All stages of a budget, in the order written.
    pub fn all(budget: &'a Budget) -> Vec<Candidate<'a>> {
        budget.stages.iter().map(|sheet| Candidate::new(budget, sheet)).collect()
    }

    /// Name in the budget.
    pub fn name(&self) -> &'a str {
        &self.sheet.name
    }

    /// The headline with the frequency this stage has there: its own first one, the headline's, or none.
    pub fn headline(&self) -> OperatingPoint {
        self.at(PartialPoint::default())
    }

    /// A point with the coordinates named and those of the headline, with the frequency this stage has there.
    pub fn at(&self, named: PartialPoint) -> OperatingPoint {
        let point = named.or(self.budget.headline);
        match (&self.sheet.switching_frequency, self.sheet.is_linear()) {
            (_, true) => point.with(AxisName::SwitchingFrequency, 0.0),
            (Some(own), false) if named.switching_frequency.is_none() => {
                // the headline chooses among several
                let chosen = own.values().find(|value| *value == self.budget.headline.switching_frequency);
                point.with(AxisName::SwitchingFrequency, chosen.unwrap_or_else(|| own.at(0)))
            }
            _ => point,
        }
    }

    /// The grid with the coordinates named fixed; empty when the stage never runs at the frequency named.
    pub fn grid_at(&self, named: PartialPoint) -> Grid {
        let fixed = crate::grid::ALL_AXES.into_iter().filter_map(|axis| Some((axis, named.get(axis)?)));
        fixed.filter(|(axis, _)| *axis != AxisName::SwitchingFrequency || !self.sheet.is_linear()).fold(
            self.grid.clone(),
            |grid, (axis, value)| {
                let own = self.sheet.switching_frequency.as_ref();
                let foreign = axis == AxisName::SwitchingFrequency
                    && own.is_some_and(|own| !own.values().any(|frequency| frequency == value));
                grid.with(axis, Axis::List(if foreign { Vec::new() } else { vec![value] }))
            },
        )
    }

    /// The fitted stage at a point: of typical values, or of those that raise the loss there.
    pub fn fitted(&self, point: OperatingPoint) -> Fitted<'_> {
        match &self.worst {
            None => Fitted::Own(&self.stage),
            Some(worst) => Fitted::Shared(worst.stage_at(point)),
        }
    }

    /// The sheets of the stage and of its board at a point, with the values that are taken there.
    pub fn sheets(&self, point: OperatingPoint) -> (StageSheet, BoardSheet) {
        match &self.worst {
            None => (self.sheet.clone(), self.budget.board.clone()),
            Some(worst) => worst.sheets_at(point),
        }
    }

    /// Evaluates the stage at a point.
    pub fn evaluate(&self, point: OperatingPoint) -> Result<Solved, Infeasible> {
        model::evaluate(&self.fitted(point), point)
    }

    /// The ledger with every part and the board held at 25 °C: what heat costs is the difference to the settled one.
    pub fn evaluate_cold(&self, point: OperatingPoint) -> Result<Solved, Infeasible> {
        let stage = self.fitted(point);
        match &stage.kind {
            Kind::Linear(_) => model::evaluate(&stage, point),
            Kind::Switched(switched) => {
                let mut cold = switched.clone();
                cold.board.temperature = Some(25.0);
                let prepared = Prepared::new(&cold, stage.output_voltage, point);
                heat::at_temperatures(&prepared, &[25.0; crate::fitted::NODES])
            }
        }
    }

    /// Thermal loop gain at a solved point (E51).
    pub fn loop_gain(&self, solved: &Solved) -> f64 {
        loop_gain(&self.fitted(solved.point), solved)
    }

    /// Findings of a solved point, the most severe first, without the assumptions.
    pub fn findings(&self, solved: &Solved) -> Vec<Finding> {
        self.findings_of(&self.fitted(solved.point), solved)
    }

    /// The same for a point whose fitted stage is at hand.
    pub fn findings_of(&self, stage: &Stage, solved: &Solved) -> Vec<Finding> {
        ratings::check(self.sheet, stage, self.budget, solved)
    }

    /// Warnings and worse at the ends of the grid, one a slot and kind with the point where it was first seen: the largest
    /// input voltage, load and ambient come first, then those of `at`, then the smallest.
    pub fn findings_at_ends(&self, at: OperatingPoint) -> Vec<(OperatingPoint, Finding)> {
        let ends = |axis: AxisName| {
            let of_axis = |axis: &Axis| [axis.at(0), axis.at(axis.len().saturating_sub(1))];
            let values = || self.grid.axis(axis).into_iter().flat_map(of_axis);
            let own = at.get(axis);
            [values().fold(own, f64::max), own, values().fold(own, f64::min)]
        };
        let mut found: Vec<(OperatingPoint, Finding)> = Vec::new();
        for v_in in ends(AxisName::InputVoltage) {
            for load in ends(AxisName::Load) {
                for ambient in ends(AxisName::Ambient) {
                    let point = OperatingPoint { input_voltage: v_in, load, ambient, ..at };
                    let Ok(solved) = self.evaluate(point) else { continue };
                    for finding in self.findings(&solved) {
                        let known = |(_, old): &(OperatingPoint, Finding)| {
                            old.slot == finding.slot && old.kind == finding.kind
                        };
                        if finding.severity > Severity::Note && !found.iter().any(known) {
                            found.push((point, finding));
                        }
                    }
                }
            }
        }
        found.sort_by_key(|(_, finding)| std::cmp::Reverse(finding.severity));
        found
    }

    /// Price of all parts, or `None` when one has none.
    pub fn price(&self) -> Option<f64> {
        self.sheet.parts().iter().map(|part| Some(part.price? * f64::from(part.count))).sum()
    }
}

/// Thermal loop gain of a fitted stage at a solved point (E51).
pub fn loop_gain(stage: &Stage, solved: &Solved) -> f64 {
    match &stage.kind {
        Kind::Linear(_) => 0.0,
        Kind::Switched(switched) => {
            let prepared = Prepared::new(switched, stage.output_voltage, solved.point);
            heat::loop_gain(&prepared, &heat::nodes_of(&prepared, solved)).unwrap_or(f64::INFINITY)
        }
    }
}
