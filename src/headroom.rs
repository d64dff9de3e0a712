//! Headroom: how far load, ambient and thermal resistance may go until a part reaches its temperature limit less the
//! margin (E52), by root finding on the full model.

use std::io::{self, Write};

use serde::Serialize;

use crate::answer::Answer;
use crate::budget::Budget;
use crate::candidate::Candidate;
use crate::fitted::{Kind, NODES, Stage, slot_of};
use crate::grid::{AxisName, OperatingPoint, PartialPoint};
use crate::infeasible::Infeasible;
use crate::ledger::Slot;
use crate::model;
use crate::ratings;
use crate::root::{self, Bound, Reach};
use crate::sweep;
use crate::worst::ValueSet;

/// What is asked.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct Request {
    /// Only this stage.
    pub stage: Option<String>,
    /// Coordinates of the point; those left open are the headline's.
    pub at: PartialPoint,
}

/// Largest load that is looked at, times the largest of the budget.
const FARTHEST_LOAD: f64 = 20.0;
/// Lowest ambient that is looked at, °C: the coldest that parts are commonly rated for.
const COLDEST: f64 = -55.0;
/// Thermal resistances that are looked at, K/W.
const RESISTANCES: (f64, f64) = (1e-3, 1e4);

/// Headroom of the stages of a budget.
pub fn answer<'a>(budget: &'a Budget, request: &'a Request) -> impl Answer + 'a {
    Question { budget, request }
}

struct Question<'a> {
    budget: &'a Budget,
    request: &'a Request,
}

/// The whole answer.
#[derive(Clone, Debug, Serialize)]
pub struct Headroom {
    /// Version of the program.
    pub lossbook: &'static str,
    /// Name of the budget.
    pub budget: String,
    /// Set of values.
    pub values: ValueSet,
    /// Distance to the limits that is kept, K.
    pub margin: f64,
    /// Stages in the order written.
    pub stages: Vec<StageRoom>,
}

/// One stage at its point.
#[derive(Clone, Debug, Serialize)]
pub struct StageRoom {
    /// Name of the stage.
    pub stage: String,
    /// V_IN, V.
    pub input_voltage: f64,
    /// I_OUT, A.
    pub load: f64,
    /// T_A, °C.
    pub ambient: f64,
    /// f_SW, Hz; 0 in a linear stage.
    pub switching_frequency: f64,
    /// Why it cannot run there.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub reason: Option<String>,
    /// Parts with a temperature limit.
    pub parts: Vec<PartRoom>,
}

/// One part.
#[derive(Clone, Debug, Serialize)]
pub struct PartRoom {
    /// Where it sits.
    pub slot: &'static str,
    /// Its name.
    pub part: String,
    /// Temperature limit less the margin, °C.
    pub limit: f64,
    /// Temperature at the point, °C; none when the stage cannot run there.
    pub temperature: Option<f64>,
    /// Largest load, A, the other coordinates as at the point.
    pub load: Bound,
    /// Largest ambient, °C.
    pub ambient: Bound,
    /// Largest thermal resistance of one piece to ambient, K/W.
    pub r_th: Bound,
    /// Its thermal resistance now, K/W; none when the data sheet gives none.
    pub r_th_now: Option<f64>,
    /// What has to be done about its heat.
    pub spreading: Spreading,
}

/// The smallest heat-spreading that keeps a part at its limit less the margin.
#[derive(Clone, Copy, Debug, PartialEq, Serialize)]
#[serde(tag = "answer", rename_all = "snake_case")]
pub enum Spreading {
    /// Its own way to ambient is enough.
    NoneNeeded,
    /// A second way of at most so much beside its own, K/W.
    Beside {
        /// K/W of each piece.
        r_th: f64,
    },
    /// No heat path helps: ambient and its neighbours alone are too hot.
    NoneHelps,
    /// Its own thermal resistance is not known; the largest one is.
    Unknown,
}

impl Question<'_> {
    fn ask(&self) -> Headroom {
        let named = |name: &str| self.request.stage.as_ref().is_none_or(|stage| stage == name);
        let candidates: Vec<Candidate<'_>> = self
            .budget
            .stages
            .iter()
            .filter(|sheet| named(&sheet.name))
            .map(|sheet| Candidate::new(self.budget, sheet))
            .collect();
        Headroom {
            lossbook: env!("CARGO_PKG_VERSION"),
            budget: self.budget.name.clone(),
            values: self.budget.values,
            margin: self.budget.derating.junction_margin,
            stages: sweep::map(&candidates, |candidate| stage(candidate, candidate.at(self.request.at))),
        }
    }
}

fn stage(candidate: &Candidate<'_>, point: OperatingPoint) -> StageRoom {
    let limits = ratings::temperature_limits(candidate.sheet);
    let solved = candidate.evaluate(point);
    StageRoom {
        stage: candidate.name().to_owned(),
        input_voltage: point.input_voltage,
        load: point.load,
        ambient: point.ambient,
        switching_frequency: point.switching_frequency,
        parts: limits
            .into_iter()
            .map(|(slot, limit)| {
                let now = solved.as_ref().ok().and_then(|solved| solved.temperatures[slot.index()]);
                let target = limit - candidate.budget.derating.junction_margin;
                part(candidate, point, Limit { slot, target }, now)
            })
            .collect(),
        reason: solved.err().map(|reason| reason.to_string()),
    }
}

/// A part and the temperature it may reach.
#[derive(Clone, Copy)]
struct Limit {
    slot: Slot,
    target: f64,
}

impl Limit {
    /// Distance to the temperature it may reach; a part that runs away is beyond any.
    fn spare(&self, stage: &Stage, point: OperatingPoint) -> Result<f64, String> {
        match model::evaluate(stage, point) {
            // a slot without a temperature of its own stays at ambient
            Ok(solved) => Ok(self.target - solved.temperatures[self.slot.index()].unwrap_or(point.ambient)),
            Err(Infeasible::NoStableTemperature { slot, .. }) if slot == self.slot => Ok(f64::NEG_INFINITY),
            Err(reason) => Err(reason.to_string()),
        }
    }
}

fn part(candidate: &Candidate<'_>, point: OperatingPoint, limit: Limit, now: Option<f64>) -> PartRoom {
    let largest_of_grid =
        candidate.grid.axis(AxisName::Load).map_or(0.0, |axis| axis.values().fold(0.0, f64::max));
    let most = [largest_of_grid, point.load, candidate.budget.rated_load.unwrap_or(0.0)];
    let most = FARTHEST_LOAD * most.into_iter().fold(0.0, f64::max);
    let along = |axis: AxisName| {
        move |value: f64| {
            let point = point.with(axis, value);
            limit.spare(&candidate.fitted(point), point)
        }
    };
    let base = candidate.fitted(point);
    let pieces = pieces(candidate, limit.slot);
    let r_th_now = r_th(&base, limit.slot).map(|whole| whole * pieces);
    let with_r_th = |each: f64| limit.spare(&resisting(&base, limit.slot, each / pieces), point);
    let r_th = root::largest(with_r_th, Reach { from: RESISTANCES.0, to: RESISTANCES.1, log: true });
    PartRoom {
        slot: limit.slot.name(),
        part: candidate.part_names[limit.slot.index()].clone().unwrap_or_default(),
        limit: limit.target,
        temperature: now,
        load: root::largest(along(AxisName::Load), Reach { from: most * 1e-6, to: most, log: true }),
        ambient: root::largest(
            along(AxisName::Ambient),
            Reach { from: COLDEST, to: limit.target.max(COLDEST) + 1.0, log: false },
        ),
        spreading: spreading(&r_th, r_th_now),
        r_th,
        r_th_now,
    }
}

fn spreading(largest: &Bound, now: Option<f64>) -> Spreading {
    match (largest, now) {
        (Bound::AlreadyExceeded, _) => Spreading::NoneHelps,
        (_, None) => Spreading::Unknown,
        (Bound::Value { value }, Some(now)) if now > *value => {
            // conductances of parallel ways add
            Spreading::Beside { r_th: 1.0 / (1.0 / value - 1.0 / now) }
        }
        _ => Spreading::NoneNeeded,
    }
}

/// Number of pieces in a slot.
fn pieces(candidate: &Candidate<'_>, slot: Slot) -> f64 {
    let parts = candidate.sheet.parts();
    parts.iter().find(|part| part.slot == slot).map_or(1.0, |part| f64::from(part.count))
}

/// Node of a slot in a switched stage.
fn node(stage: &crate::fitted::Switched, slot: Slot) -> Option<usize> {
    (0..NODES).find(|node| slot_of(*node, stage.is_synchronous()) == slot)
}

/// Thermal resistance of all pieces of a slot together, K/W.
fn r_th(stage: &Stage, slot: Slot) -> Option<f64> {
    match &stage.kind {
        Kind::Linear(regulator) => regulator.r_th.map(|each| each / regulator.n),
        Kind::Switched(switched) => switched.heat.to_ambient[node(switched, slot)?],
    }
}

/// The stage with another thermal resistance of all pieces of a slot together.
fn resisting(stage: &Stage, slot: Slot, whole: f64) -> Stage {
    let mut stage = stage.clone();
    match &mut stage.kind {
        Kind::Linear(regulator) => regulator.r_th = Some(whole * regulator.n),
        Kind::Switched(switched) => {
            if let Some(node) = node(switched, slot) {
                switched.heat.set(node, whole);
            }
        }
    }
    stage
}

impl Answer for Question<'_> {
    fn document(&self) -> crate::report::Document {
        crate::report::headroom::document(self.budget, &self.ask())
    }

    fn json(&self, out: &mut dyn Write) -> io::Result<()> {
        serde_json::to_writer_pretty(&mut *out, &self.ask())?;
        writeln!(out)
    }

    fn csv(&self, out: &mut dyn Write) -> io::Result<()> {
        let mut writer = csv::Writer::from_writer(out);
        writer.write_record([
            "stage",
            "slot",
            "part",
            "limit less margin [°C]",
            "temperature [°C]",
            "largest load",
            "largest load [A]",
            "largest ambient",
            "largest ambient [°C]",
            "largest r_th",
            "largest r_th [K/W]",
            "r_th now [K/W]",
            "heat path needed beside [K/W]",
        ])?;
        let number = |value: Option<f64>| value.map_or_else(String::new, |value| value.to_string());
        for stage in self.ask().stages {
            for part in &stage.parts {
                let mut row = vec![stage.stage.clone(), part.slot.to_owned(), part.part.clone()];
                row.push(part.limit.to_string());
                row.push(number(part.temperature));
                for bound in [&part.load, &part.ambient, &part.r_th] {
                    row.extend([bound.name().to_owned(), number(bound.value())]);
                }
                row.push(number(part.r_th_now));
                row.push(match part.spreading {
                    Spreading::Beside { r_th } => r_th.to_string(),
                    _ => String::new(),
                });
                writer.write_record(row)?;
            }
        }
        writer.flush()
    }
}
