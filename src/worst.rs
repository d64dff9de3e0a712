//! Which side of each tolerance an answer takes: the typical values, or at each point the side that raises its loss.

use std::collections::BTreeMap;
use std::ops::Deref;
use std::sync::{Arc, PoisonError, RwLock};

use serde::{Serialize, Serializer};

use crate::fitted::Stage;
use crate::grid::OperatingPoint;
use crate::infeasible::Infeasible;
use crate::model;
use crate::sheet::BoardSheet;
use crate::stage::StageSheet;
use crate::tolerance::{Lever, Rig, Settings};

/// The set of data-sheet values that an answer is computed with; every header, caption and file says which.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq)]
pub enum ValueSet {
    /// The typical value of everything.
    #[default]
    Typical,
    /// Of each value with a printed limit, the side that raises the loss at that point.
    Worst,
}

impl ValueSet {
    /// The set of a name.
    pub fn from_name(name: &str) -> Option<ValueSet> {
        [ValueSet::Typical, ValueSet::Worst].into_iter().find(|set| set.name() == name)
    }

    /// Name in files, captions and options.
    pub const fn name(self) -> &'static str {
        match self {
            ValueSet::Typical => "typical",
            ValueSet::Worst => "worst",
        }
    }
}

impl Serialize for ValueSet {
    fn serialize<S: Serializer>(&self, serializer: S) -> Result<S::Ok, S::Error> {
        serializer.serialize_str(self.name())
    }
}

/// A fitted stage, owned by its candidate or shared between points.
#[derive(Clone, Debug)]
pub enum Fitted<'s> {
    /// With typical values.
    Own(&'s Stage),
    /// With the worst values of some points.
    Shared(Arc<Stage>),
}

impl Deref for Fitted<'_> {
    type Target = Stage;

    fn deref(&self) -> &Stage {
        match self {
            Fitted::Own(stage) => stage,
            Fitted::Shared(stage) => stage,
        }
    }
}

/// A stage with the set of values that is taken of it.
#[derive(Debug)]
pub enum Taken<'s> {
    /// Typical values, fitted already.
    Typical(&'s Stage),
    /// At each point those that raise the loss there.
    Worst(Box<WorstCase>),
}

impl<'s> Taken<'s> {
    /// A set of a fitted stage; `rig` moves its values when they have to be.
    pub fn of(values: ValueSet, stage: &'s Stage, rig: impl FnOnce() -> Rig) -> Self {
        match values {
            ValueSet::Typical => Taken::Typical(stage),
            ValueSet::Worst => Taken::Worst(Box::new(WorstCase::new(rig()))),
        }
    }

    /// The stage at a point.
    pub fn at(&self, point: OperatingPoint) -> Fitted<'_> {
        match self {
            Taken::Typical(stage) => Fitted::Own(stage),
            Taken::Worst(worst) => Fitted::Shared(worst.stage_at(point)),
        }
    }
}

/// Where a value stands between its limits.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq, PartialOrd, Ord)]
pub enum Side {
    /// Lower limit, or the typical value when none is printed.
    Low,
    /// Typical value.
    #[default]
    Typical,
    /// Upper limit, or the typical value when none is printed.
    High,
}

/// A stage with each of its tolerances set to either side alone.
#[derive(Debug)]
pub struct WorstCase {
    rig: Rig,
    levers: Vec<Lever>,
    /// The stage with one lever at its lower and at its upper limit; `None` when that contradicts another value.
    sides: Vec<[Option<Stage>; 2]>,
    /// Stages by the sides they take.
    known: RwLock<BTreeMap<Vec<Side>, Arc<Stage>>>,
}

impl WorstCase {
    /// Fits the stage twice for every value that has a printed limit.
    pub fn new(rig: Rig) -> Self {
        let levers: Vec<Lever> = rig.levers().into_iter().filter(Lever::has_limits).collect();
        let fit = |lever: &Lever, side| rig.fit(&lever.settings(side)).ok();
        let sides =
            levers.iter().map(|lever| [fit(lever, Side::Low), fit(lever, Side::High)]).collect::<Vec<_>>();
        WorstCase { rig, levers, sides, known: RwLock::default() }
    }

    /// The stage whose every limited value stands on the side that raises the loss at a point.
    ///
    /// The side is found by the sign of the sensitivity: the loss with this value alone at either limit. A limit at
    /// which the stage cannot run counts as raising it. A combination of limits that contradict one another keeps
    /// those that fit, in the order of the ledger.
    pub fn stage_at(&self, point: OperatingPoint) -> Arc<Stage> {
        let sides = self.sides_at(point);
        if let Some(stage) = self.known.read().unwrap_or_else(PoisonError::into_inner).get(&sides) {
            return stage.clone();
        }
        let stage = Arc::new(self.rig.fit(&self.settings(&sides)).unwrap_or_else(|_| self.rig.typical()));
        self.known.write().unwrap_or_else(PoisonError::into_inner).insert(sides, stage.clone());
        stage
    }

    /// The side of every limited value at a point, with its lever.
    pub fn chosen(&self, point: OperatingPoint) -> Vec<(&Lever, Side)> {
        self.levers.iter().zip(self.sides_at(point)).collect()
    }

    fn sides_at(&self, point: OperatingPoint) -> Vec<Side> {
        let loss = |stage: &Option<Stage>| match stage.as_ref().map(|stage| evaluate(stage, point)) {
            None => f64::NEG_INFINITY,
            Some(Err(_)) => f64::INFINITY,
            Some(Ok(loss)) => loss,
        };
        let side = |pair: &[Option<Stage>; 2]| {
            let (low, high) = (loss(&pair[0]), loss(&pair[1]));
            if low > high {
                Side::Low
            } else if high > low {
                Side::High
            } else {
                Side::Typical
            }
        };
        self.sides.iter().map(side).collect()
    }

    /// The sheets of the stage and of its board with the values taken at a point.
    pub fn sheets_at(&self, point: OperatingPoint) -> (StageSheet, BoardSheet) {
        self.rig.sheets(&self.settings(&self.sides_at(point)))
    }

    fn settings(&self, sides: &[Side]) -> Settings {
        let mut settings = Vec::new();
        for (lever, side) in self.levers.iter().zip(sides) {
            if *side != Side::Typical {
                settings.extend(lever.settings(*side));
            }
        }
        if self.rig.fit(&settings).is_ok() {
            return settings;
        }
        // limits that contradict one another: take them in turn, as far as they go together
        let mut kept = Vec::new();
        for (lever, side) in self.levers.iter().zip(sides).filter(|(_, side)| **side != Side::Typical) {
            let before = kept.len();
            kept.extend(lever.settings(*side));
            if self.rig.fit(&kept).is_err() {
                kept.truncate(before);
            }
        }
        kept
    }
}

fn evaluate(stage: &Stage, point: OperatingPoint) -> Result<f64, Infeasible> {
    model::evaluate(stage, point).map(|solved| solved.loss())
}
