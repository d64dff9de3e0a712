//! Sensitivity: what a percent of each input does to the loss, and what would buy a given gain in efficiency.

use std::io::{self, Write};

use serde::Serialize;

use crate::answer::Answer;
use crate::budget::Budget;
use crate::candidate::Candidate;
use crate::fitted::Stage;
use crate::grid::{ALL_AXES, AxisName, OperatingPoint, PartialPoint};
use crate::model;
use crate::purchase::{self, Purchase};
use crate::sweep;
use crate::tolerance::{Lever, Rig, Settings};
use crate::units::Dimension;
use crate::worst::ValueSet;

/// What is asked.
#[derive(Clone, Debug, PartialEq)]
pub struct Request {
    /// Only this stage.
    pub stage: Option<String>,
    /// Coordinates of the point; those left open are the headline's.
    pub at: PartialPoint,
    /// Gain in efficiency that is looked for, a fraction.
    pub gain: f64,
}

impl Default for Request {
    fn default() -> Self {
        Request { stage: None, at: PartialPoint::default(), gain: 0.005 }
    }
}

/// Step of the central differences, relative.
const STEP: f64 = 2e-3;
/// Step of inputs on the temperature scale, K.
const KELVIN_STEP: f64 = 0.2;
/// Relative disagreement of the full and of the half step beyond which a slope is doubted.
const DOUBT: f64 = 0.02;
/// Slopes below this (percent of the loss per percent) are none.
const NOTHING: f64 = 1e-7;

/// The whole answer.
#[derive(Clone, Debug, Serialize)]
pub struct Sensitivity {
    /// Version of the program.
    pub lossbook: &'static str,
    /// Name of the budget.
    pub budget: String,
    /// Set of values around which the inputs move.
    pub values: ValueSet,
    /// Gain in efficiency that is looked for, a fraction.
    pub gain: f64,
    /// Stages in the order written.
    pub stages: Vec<StageSensitivity>,
}

/// One stage at its point.
#[derive(Clone, Debug, Serialize)]
pub struct StageSensitivity {
    /// Name of the stage.
    pub stage: String,
    /// V_IN, V.
    pub input_voltage: f64,
    /// I_OUT, A.
    pub load: f64,
    /// T_A, °C.
    pub ambient: f64,
    /// f_SW, Hz; absent in a linear stage.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub switching_frequency: Option<f64>,
    /// Loss, W.
    pub loss: Option<f64>,
    /// Efficiency, a fraction.
    pub efficiency: Option<f64>,
    /// Why it cannot run there.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub reason: Option<String>,
    /// Slopes, the steepest first.
    pub slopes: Vec<Slope>,
    /// What each data-sheet value would have to become, the smallest change first.
    pub purchases: Vec<Purchase>,
}

/// What an input does to the loss.
#[derive(Clone, Debug, Serialize)]
pub struct Slope {
    /// Slot and key of a value, or name of a coordinate.
    pub path: String,
    /// Name of the part; empty for a coordinate.
    pub part: String,
    /// What it is.
    pub about: &'static str,
    /// Its value; of a curve the first.
    pub value: f64,
    /// What it measures.
    #[serde(serialize_with = "unit")]
    pub dimension: Dimension,
    /// Change of the loss in percent: per percent of the value, or per kelvin of a temperature.
    pub percent: f64,
    /// What one step is: "%" or "K".
    pub per: &'static str,
    /// True when full and half step disagree: a border (of a mode, of a clamp) is near.
    pub doubtful: bool,
}

fn unit<S: serde::Serializer>(dimension: &Dimension, serializer: S) -> Result<S::Ok, S::Error> {
    serializer.serialize_str(dimension.unit())
}

/// Sensitivities of the stages of a budget.
pub fn answer<'a>(budget: &'a Budget, request: &'a Request) -> impl Answer + 'a {
    Question { budget, request }
}

struct Question<'a> {
    budget: &'a Budget,
    request: &'a Request,
}

impl Question<'_> {
    fn ask(&self) -> Sensitivity {
        let named = |name: &str| self.request.stage.as_ref().is_none_or(|stage| stage == name);
        let sheets: Vec<_> = self.budget.stages.iter().filter(|sheet| named(&sheet.name)).collect();
        let stage = |sheet: &&crate::stage::StageSheet| {
            let candidate = Candidate::typical(self.budget, sheet);
            self.stage(&candidate)
        };
        Sensitivity {
            lossbook: env!("CARGO_PKG_VERSION"),
            budget: self.budget.name.clone(),
            values: ValueSet::Typical,
            gain: self.request.gain,
            stages: sweep::map(&sheets, stage),
        }
    }

    fn stage(&self, candidate: &Candidate<'_>) -> StageSensitivity {
        let point = candidate.at(self.request.at);
        let solved = candidate.evaluate(point);
        let rig = Rig::new(self.budget, candidate.sheet);
        let (mut slopes, mut purchases) = (Vec::new(), Vec::new());
        if let Ok(solved) = &solved {
            slopes = self::slopes(candidate, &rig, point);
            purchases = purchase::all(&rig, &slopes, solved, self.request.gain);
        }
        StageSensitivity {
            stage: candidate.name().to_owned(),
            input_voltage: point.input_voltage,
            load: point.load,
            ambient: point.ambient,
            switching_frequency: (!candidate.sheet.is_linear()).then_some(point.switching_frequency),
            loss: solved.as_ref().ok().map(model::Solved::loss),
            efficiency: solved.as_ref().ok().and_then(model::Solved::efficiency),
            reason: solved.err().map(|reason| reason.to_string()),
            slopes,
            purchases,
        }
    }
}

/// Slopes of all values and coordinates of a stage at a point, the steepest first.
///
/// Central differences of the settled loss, with a step checked against half of it.
pub fn slopes(candidate: &Candidate<'_>, rig: &Rig, point: OperatingPoint) -> Vec<Slope> {
    let loss = |stage: &Stage, point| model::evaluate(stage, point).ok().map(|solved| solved.loss());
    let Some(here) = loss(&candidate.stage, point) else { return Vec::new() };
    let mut slopes = Vec::new();
    for lever in rig.levers() {
        let at = |settings: Settings| loss(&rig.fit(&settings).ok()?, point);
        let kelvin = lever.dimension == Dimension::Temperature;
        let moved = |step: f64| at(if kelvin { lever.moved(step) } else { lever.scaled(1.0 + step) });
        if !kelvin && lever.value() == 0.0 {
            continue;
        }
        slopes.extend(slope(&lever, here, kelvin, moved));
    }
    for axis in ALL_AXES {
        if axis == AxisName::SwitchingFrequency && candidate.sheet.is_linear() {
            continue;
        }
        let lever = coordinate(axis, point);
        let kelvin = axis == AxisName::Ambient;
        let value = point.get(axis);
        let moved = |step: f64| {
            let to = if kelvin { value + step } else { value * (1.0 + step) };
            loss(&candidate.stage, point.with(axis, to))
        };
        if kelvin || value != 0.0 {
            slopes.extend(slope(&lever, here, kelvin, moved));
        }
    }
    slopes.sort_by(|a, b| b.percent.abs().total_cmp(&a.percent.abs()));
    slopes
}

/// A coordinate of the point as a lever without members.
fn coordinate(axis: AxisName, point: OperatingPoint) -> Lever {
    let (dimension, about) = match axis {
        AxisName::InputVoltage => (Dimension::Voltage, "input voltage"),
        AxisName::Load => (Dimension::Current, "load"),
        AxisName::Ambient => (Dimension::Temperature, "ambient"),
        AxisName::SwitchingFrequency => (Dimension::Frequency, "switching frequency"),
    };
    let datum = crate::sheet::Datum::of(point.get(axis));
    Lever {
        path: axis.name().into(),
        part: String::new(),
        dimension,
        about,
        together: None,
        members: vec![(0, datum)],
    }
}

/// A slope from the losses at moved values; none when the loss does not move, or cannot be had on either side.
fn slope(lever: &Lever, here: f64, kelvin: bool, moved: impl Fn(f64) -> Option<f64>) -> Option<Slope> {
    let step = if kelvin { KELVIN_STEP } else { STEP };
    let difference = |step: f64| match (moved(step), moved(-step)) {
        (Some(above), Some(below)) => Some((above - below) / (2.0 * step)),
        // one side cannot run or contradicts another value: the other side alone
        (Some(above), None) => Some((above - here) / step),
        (None, Some(below)) => Some((here - below) / step),
        (None, None) => None,
    };
    let (full, half) = (difference(step)?, difference(0.5 * step)?);
    // per unit of relative change to percent per percent; per kelvin to percent per kelvin
    let percent = half / here * if kelvin { 100.0 } else { 1.0 };
    if percent.abs() < NOTHING {
        return None;
    }
    Some(Slope {
        path: lever.path.clone(),
        part: lever.part.clone(),
        about: lever.about,
        value: lever.value(),
        dimension: lever.dimension,
        percent,
        per: if kelvin { "K" } else { "%" },
        doubtful: (full - half).abs() > DOUBT * half.abs(),
    })
}

impl Answer for Question<'_> {
    fn document(&self) -> crate::report::Document {
        crate::report::sensitivity::document(self.budget, &self.ask())
    }

    fn json(&self, out: &mut dyn Write) -> io::Result<()> {
        serde_json::to_writer_pretty(&mut *out, &self.ask())?;
        writeln!(out)
    }

    fn csv(&self, out: &mut dyn Write) -> io::Result<()> {
        let mut writer = csv::Writer::from_writer(out);
        writer.write_record([
            "stage",
            "path",
            "part",
            "value [SI]",
            "unit",
            "loss change [%]",
            "per",
            "doubtful",
            "needed for the gain [SI]",
            "gain is out of reach because",
        ])?;
        for stage in self.ask().stages {
            for slope in &stage.slopes {
                let bought = stage.purchases.iter().find(|purchase| purchase.path == slope.path);
                writer.write_record([
                    stage.stage.as_str(),
                    &slope.path,
                    &slope.part,
                    &slope.value.to_string(),
                    slope.dimension.unit(),
                    &slope.percent.to_string(),
                    slope.per,
                    &slope.doubtful.to_string(),
                    &bought.and_then(|bought| bought.needed).map_or_else(String::new, |v| v.to_string()),
                    bought.and_then(|bought| bought.reason.as_deref()).unwrap_or(""),
                ])?;
            }
        }
        writer.flush()
    }
}
