//! Spread: what the tolerances of the parts do to loss, efficiency and temperature; what the model itself leaves open.

use std::io::{self, Write};

use serde::Serialize;

use crate::answer::Answer;
use crate::budget::Budget;
use crate::candidate::Candidate;
use crate::draws::{Band, Statistics};
use crate::grid::{AxisName, OperatingPoint};
use crate::loads;
use crate::model;
use crate::model_spread::{self, ModelTerm};
use crate::sweep::{self, Watch};
use crate::tolerance::{Lever, Rig, Settings};
use crate::worst::{Side, ValueSet, WorstCase};

/// What is asked.
#[derive(Clone, Debug, PartialEq)]
pub struct Request {
    /// Only this stage.
    pub stage: Option<String>,
    /// Number of random draws.
    pub draws: u64,
    /// Seed of the draws.
    pub seed: u64,
}

/// Draws when nothing else is asked for.
pub const DRAWS: u64 = 10_000;
/// Contributors that are listed for each stage.
pub const CONTRIBUTORS: usize = 10;
/// Input voltages of the interior scan.
const SCAN: u32 = 40;

/// Spreads the stages of a budget.
pub fn answer<'a>(budget: &'a Budget, request: &'a Request, watch: &'a Watch) -> impl Answer + 'a {
    Question { budget, request, watch }
}

struct Question<'a> {
    budget: &'a Budget,
    request: &'a Request,
    watch: &'a Watch,
}

/// The whole answer.
#[derive(Clone, Debug, Serialize)]
pub struct Spread {
    /// Version of the program.
    pub lossbook: &'static str,
    /// Name of the budget.
    pub budget: String,
    /// What the draws scatter around.
    pub values: ValueSet,
    /// Number of draws.
    pub draws: u64,
    /// Seed.
    pub seed: u64,
    /// Stages by load.
    pub points: Vec<PointSpread>,
    /// What each tolerance does alone, the largest first within each stage.
    pub contributors: Vec<Contributor>,
    /// Where over the input voltage the loss is highest.
    pub interior: Vec<Interior>,
    /// Stages that no tolerance touches.
    pub untouched: Vec<String>,
}

/// One stage at one load, the other coordinates as at the headline.
#[derive(Clone, Debug, Serialize)]
pub struct PointSpread {
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
    /// Loss with typical values, W, or why there is none.
    pub typical: Option<f64>,
    /// Loss over the draws, W.
    pub loss: Option<Band>,
    /// Efficiency over the draws; a fraction.
    pub efficiency: Option<Band>,
    /// Temperature of the hottest part over the draws, °C.
    pub hottest: Option<Band>,
    /// Root-sum-square of what each tolerance does alone, W.
    pub root_sum_square: Option<TwoSided>,
    /// Loss with every limit on its worst side, W.
    pub worst: Option<f64>,
    /// Draws that cannot run, or whose values contradict one another.
    pub unusable: u64,
    /// Why the first of them, or the typical values, cannot run.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub reason: Option<String>,
    /// What the model leaves open; no tolerance of a part.
    pub model: Vec<ModelTerm>,
}

/// A change downwards and upwards, both positive.
#[derive(Clone, Copy, Debug, Default, PartialEq, Serialize)]
pub struct TwoSided {
    /// W
    pub minus: f64,
    /// W
    pub plus: f64,
}

/// What one tolerance alone does to the loss at the headline.
#[derive(Clone, Debug, Serialize)]
pub struct Contributor {
    /// Name of the stage.
    pub stage: String,
    /// Slot and key.
    pub path: String,
    /// Name of the part.
    pub part: String,
    /// What it is.
    pub about: &'static str,
    /// Change of the loss with the value at its lower limit, W; none when the stage cannot run there.
    pub low: Option<f64>,
    /// Change of the loss with the value at its upper limit, W.
    pub high: Option<f64>,
}

impl Contributor {
    /// The larger of its two effects, W.
    pub fn size(&self) -> f64 {
        [self.low, self.high].into_iter().map(|side| side.map_or(f64::INFINITY, f64::abs)).fold(0.0, f64::max)
    }
}

/// Where the loss with worst values is highest between the ends of the input voltage.
#[derive(Clone, Debug, Serialize)]
pub struct Interior {
    /// Name of the stage.
    pub stage: String,
    /// I_OUT, A.
    pub load: f64,
    /// Input voltage of the highest loss, V.
    pub input_voltage: f64,
    /// Highest loss, W.
    pub loss: f64,
    /// Higher of the losses at the two ends, W.
    pub ends: f64,
    /// True when the highest loss lies between the ends.
    pub inside: bool,
}

impl Question<'_> {
    fn ask(&self) -> Spread {
        let mut spread = Spread {
            lossbook: env!("CARGO_PKG_VERSION"),
            budget: self.budget.name.clone(),
            values: ValueSet::Typical,
            draws: self.request.draws,
            seed: self.request.seed,
            points: Vec::new(),
            contributors: Vec::new(),
            interior: Vec::new(),
            untouched: Vec::new(),
        };
        let named = |name: &str| self.request.stage.as_ref().is_none_or(|stage| stage == name);
        for sheet in self.budget.stages.iter().filter(|sheet| named(&sheet.name)) {
            let candidate = Candidate::typical(self.budget, sheet);
            self.stage(&candidate, &mut spread);
        }
        spread
    }

    fn stage(&self, candidate: &Candidate<'_>, spread: &mut Spread) {
        let rig = Rig::new(self.budget, candidate.sheet);
        let levers: Vec<Lever> = rig.levers().into_iter().filter(Lever::has_tolerance).collect();
        let worst = WorstCase::new(rig.clone());
        let headline = candidate.headline();
        let loads = self.budget.grid.axis(AxisName::Load).map(loads::printed).unwrap_or_default();
        let points: Vec<OperatingPoint> =
            loads.iter().map(|load| headline.with(AxisName::Load, *load)).collect();
        if levers.is_empty() {
            spread.untouched.push(candidate.name().to_owned());
        }
        let draws = if levers.is_empty() { 0 } else { self.request.draws };
        let statistics = Statistics::of(&rig, &levers, &points, (draws, self.request.seed), self.watch);
        let groups = groups(&levers);
        for (point, statistics) in points.iter().zip(statistics) {
            let solved = candidate.evaluate(*point);
            let reason = statistics.reason.clone().or(solved.as_ref().err().map(ToString::to_string));
            spread.points.push(PointSpread {
                stage: candidate.name().to_owned(),
                input_voltage: point.input_voltage,
                load: point.load,
                ambient: point.ambient,
                switching_frequency: (!candidate.sheet.is_linear()).then_some(point.switching_frequency),
                typical: solved.as_ref().ok().map(model::Solved::loss),
                loss: statistics.loss,
                efficiency: statistics.efficiency,
                hottest: statistics.hottest,
                root_sum_square: root_sum_square(candidate, &rig, &groups, *point),
                worst: model::evaluate(&worst.stage_at(*point), *point).ok().map(|solved| solved.loss()),
                unusable: statistics.unusable,
                reason,
                model: solved.map(|solved| model_spread::terms(candidate, &solved)).unwrap_or_default(),
            });
        }
        let mut contributors = contributors(candidate, &rig, &levers, headline);
        contributors.sort_by(|a, b| b.size().total_cmp(&a.size()));
        contributors.truncate(CONTRIBUTORS);
        spread.contributors.extend(contributors);
        spread.interior.extend(interior(candidate, &worst, &points));
    }
}

/// Levers that move together: those of one part that says so, each other one alone.
fn groups(levers: &[Lever]) -> Vec<[Settings; 2]> {
    let mut groups: Vec<(Option<&str>, [Settings; 2])> = Vec::new();
    for lever in levers {
        let sides = [lever.settings(Side::Low), lever.settings(Side::High)];
        let together = lever.together.as_deref();
        match groups.iter_mut().find(|(name, _)| name.is_some() && *name == together) {
            Some((_, known)) => {
                for (known, side) in known.iter_mut().zip(sides) {
                    known.extend(side);
                }
            }
            None => groups.push((together, sides)),
        }
    }
    groups.into_iter().map(|(_, sides)| sides).collect()
}

/// Change of the loss with some values moved, W; none when the stage cannot run so.
fn change(rig: &Rig, settings: &Settings, point: OperatingPoint, typical: f64) -> Option<f64> {
    let stage = rig.fit(settings).ok()?;
    Some(model::evaluate(&stage, point).ok()?.loss() - typical)
}

/// Square root of the sum of squares of the effects that lower and that raise the loss.
fn root_sum_square(
    candidate: &Candidate<'_>,
    rig: &Rig,
    groups: &[[Settings; 2]],
    point: OperatingPoint,
) -> Option<TwoSided> {
    let typical = candidate.evaluate(point).ok()?.loss();
    let mut squares = TwoSided::default();
    for sides in groups {
        let changes = sides.each_ref().map(|side| change(rig, side, point, typical));
        let [low, high] = [changes[0]?, changes[1]?];
        squares.minus += low.min(high).min(0.0).powi(2);
        squares.plus += low.max(high).max(0.0).powi(2);
    }
    Some(TwoSided { minus: squares.minus.sqrt(), plus: squares.plus.sqrt() })
}

fn contributors(
    candidate: &Candidate<'_>,
    rig: &Rig,
    levers: &[Lever],
    point: OperatingPoint,
) -> Vec<Contributor> {
    let Ok(solved) = candidate.evaluate(point) else { return Vec::new() };
    let typical = solved.loss();
    levers
        .iter()
        .map(|lever| {
            let side = |side| change(rig, &lever.settings(side), point, typical);
            Contributor {
                stage: candidate.name().to_owned(),
                path: lever.path.clone(),
                part: lever.part.clone(),
                about: lever.about,
                low: side(Side::Low),
                high: side(Side::High),
            }
        })
        .collect()
}

/// Scans the input voltage between the ends of the grid at each load, with worst values.
fn interior(candidate: &Candidate<'_>, worst: &WorstCase, points: &[OperatingPoint]) -> Vec<Interior> {
    let Some(axis) = candidate.grid.axis(AxisName::InputVoltage) else { return Vec::new() };
    let low = axis.values().fold(f64::INFINITY, f64::min);
    let high = axis.values().fold(f64::NEG_INFINITY, f64::max);
    if high <= low {
        return Vec::new();
    }
    let scan = |point: &OperatingPoint| {
        let losses: Vec<(f64, f64)> = (0..=SCAN)
            .filter_map(|step| {
                let v_in = low + (high - low) * f64::from(step) / f64::from(SCAN);
                let point = point.with(AxisName::InputVoltage, v_in);
                let solved = model::evaluate(&worst.stage_at(point), point).ok()?;
                Some((v_in, solved.loss()))
            })
            .collect();
        let ends = losses.first()?.1.max(losses.last()?.1);
        let (input_voltage, loss) = losses.into_iter().max_by(|a, b| a.1.total_cmp(&b.1))?;
        let stage = candidate.name().to_owned();
        // less than a ten-thousandth above the ends is no finding
        let inside = loss > ends * 1.0001;
        Some(Interior { stage, load: point.load, input_voltage, loss, ends, inside })
    };
    sweep::map(points, scan).into_iter().flatten().collect()
}

impl Answer for Question<'_> {
    fn document(&self) -> crate::report::Document {
        crate::report::spread::document(self.budget, &self.ask())
    }

    fn json(&self, out: &mut dyn Write) -> io::Result<()> {
        serde_json::to_writer_pretty(&mut *out, &self.ask())?;
        writeln!(out)
    }

    fn csv(&self, out: &mut dyn Write) -> io::Result<()> {
        let mut writer = csv::Writer::from_writer(out);
        let mut header: Vec<String> =
            ["stage", "input_voltage [V]", "load [A]", "ambient [°C]"].map(String::from).into();
        header.push("typical loss [W]".into());
        for (name, unit) in [("loss", " [W]"), ("efficiency", ""), ("hottest", " [°C]")] {
            header.extend(["mean", "p5", "p95"].map(|what| format!("{name} {what}{unit}")));
        }
        header
            .extend(["rss minus [W]", "rss plus [W]", "worst loss [W]", "unusable draws"].map(String::from));
        writer.write_record(&header)?;
        for point in self.ask().points {
            let number = |value: Option<f64>| value.map_or_else(String::new, |value| value.to_string());
            let mut row = vec![point.stage.clone()];
            row.extend([point.input_voltage, point.load, point.ambient].map(|value| value.to_string()));
            row.push(number(point.typical));
            for band in [point.loss, point.efficiency, point.hottest] {
                row.extend([band.map(|b| b.mean), band.map(|b| b.p5), band.map(|b| b.p95)].map(number));
            }
            let rss = point.root_sum_square;
            row.extend([rss.map(|rss| rss.minus), rss.map(|rss| rss.plus), point.worst].map(number));
            row.push(point.unusable.to_string());
            writer.write_record(&row)?;
        }
        writer.flush()
    }
}
