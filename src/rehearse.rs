//! Rehearse: readings that a bench would give, invented from a budget, with hidden changes and the noise of instruments.

use std::fmt::Write;

use crate::bench::{Accuracy, Reading};
use crate::budget::{BenchAccuracy, Budget};
use crate::candidate::Candidate;
use crate::fitted::Stage;
use crate::grid::{Axis, AxisName, PartialPoint};
use crate::hints::nearest;
use crate::model;
use crate::random::Stream;
use crate::report::words;
use crate::stage::StageSheet;
use crate::values;

/// What is asked.
#[derive(Clone, Debug)]
pub struct Request {
    /// Name of the stage.
    pub stage: String,
    /// Coordinates of all rows but the load; those left open are the headline's.
    pub at: PartialPoint,
    /// Values that differ from the budget: key path and value.
    pub hidden: Vec<(String, f64)>,
    /// Accuracy of the instruments.
    pub accuracy: BenchAccuracy,
    /// Seed of their noise.
    pub seed: u64,
}

/// Most rows of a rehearsal.
const MOST_ROWS: u64 = 24;

/// The dimension of the value at a key path of a stage or its board.
///
/// # Errors
/// A hint at the nearest path.
pub fn dimension(budget: &Budget, sheet: &StageSheet, path: &str) -> Result<crate::units::Dimension, String> {
    let mut board = budget.board.clone();
    values::fill_board(&mut board);
    let all = values::all(sheet, &board);
    match all.iter().find(|value| value.path == path) {
        Some(value) => Ok(value.dimension),
        None => Err(match nearest(path, all.iter().map(|value| value.path.as_str())) {
            Some(near) => format!("did you mean `{near}`?"),
            None => "paths are slot and key, such as `board.output_path`".into(),
        }),
    }
}

/// Readings of a bench on a stage with hidden changes; each reading off by a random share of its accuracy, evenly
/// between both ends, as JCGM 100 takes a stated accuracy. Loads at which the stage cannot run are left out.
///
/// # Errors
/// When the budget has no such stage, or a path is unknown.
pub fn readings(budget: &Budget, request: &Request) -> Result<Vec<Reading>, String> {
    let sheet = budget.stages.iter().find(|sheet| sheet.name == request.stage).ok_or("no such stage")?;
    let candidate = Candidate::typical(budget, sheet);
    let (mut changed, mut board) = (sheet.clone(), budget.board.clone());
    values::fill_board(&mut board);
    for (path, value) in &request.hidden {
        if !values::set(&mut changed, &mut board, path, *value) {
            return Err(format!("no value `{path}`"));
        }
    }
    if let Some(reason) = values::contradiction(&changed) {
        return Err(reason);
    }
    let stage = Stage::on_rail(&changed.circuit, budget.output_voltage, &board, &budget.coupling);
    let mut readings = Vec::new();
    for (row, load) in loads(budget).into_iter().enumerate() {
        let point = candidate.at(PartialPoint { load: Some(load), ..request.at });
        let Ok(solved) = model::evaluate(&stage, point) else { continue };
        let mut noise = Stream::new(request.seed, row as u64);
        let mut read = |value: f64, accuracy: &Accuracy| {
            six_digits(value + accuracy.half_width(value) * (2.0 * noise.uniform() - 1.0))
        };
        readings.push(Reading {
            line: 0,
            input_voltage: read(point.input_voltage, &request.accuracy.input_voltage),
            input_current: read(solved.input_power() / point.input_voltage, &request.accuracy.input_current),
            output_voltage: read(budget.output_voltage, &request.accuracy.output_voltage),
            output_current: read(load, &request.accuracy.output_current),
            ambient: Some(point.ambient),
            switching_frequency: (!sheet.is_linear()).then_some(point.switching_frequency),
        });
    }
    Ok(readings)
}

/// Loads of the budget, or as many spread evenly over its range.
fn loads(budget: &Budget) -> Vec<f64> {
    match budget.grid.axis(AxisName::Load) {
        None => vec![budget.headline.load],
        Some(axis) if axis.len() <= MOST_ROWS => axis.values().filter(|load| *load > 0.0).collect(),
        Some(axis) => {
            let low = axis.values().filter(|load| *load > 0.0).fold(f64::INFINITY, f64::min);
            let high = axis.values().fold(0.0, f64::max);
            Axis::Range { from: low, to: high, points: MOST_ROWS, log: true }.values().collect()
        }
    }
}

/// As a good instrument shows it.
fn six_digits(value: f64) -> f64 {
    format!("{value:.5e}").parse().unwrap_or(value)
}

/// A bench file of invented readings that says so.
///
/// # Errors
/// As [`readings`].
pub fn file(budget: &Budget, request: &Request) -> Result<String, String> {
    let readings = readings(budget, request)?;
    let sheet = budget.stages.iter().find(|sheet| sheet.name == request.stage).ok_or("no such stage")?;
    let mut text = format!(
        "# Invented readings, made by `lossbook rehearse` with seed {}: no rail was measured.\n# {}, stage {}.\n",
        request.seed,
        budget.name.replace(['\n', '\r'], " "),
        request.stage
    );
    for (path, value) in &request.hidden {
        let dimension = dimension(budget, sheet, path)?;
        // writing to a String cannot fail
        let _ = writeln!(text, "# Hidden change: {path} is {} here.", words::set(*value, dimension));
    }
    let linear = sheet.is_linear();
    text.push_str("input_voltage [V],input_current [A],output_voltage [V],output_current [A],ambient [degC]");
    text.push_str(if linear { "\n" } else { ",switching_frequency [Hz]\n" });
    for row in readings {
        let fields = [
            Some(row.input_voltage),
            Some(row.input_current),
            Some(row.output_voltage),
            Some(row.output_current),
            row.ambient,
            row.switching_frequency,
        ];
        let fields: Vec<String> = fields.iter().flatten().map(ToString::to_string).collect();
        text.push_str(&fields.join(","));
        text.push('\n');
    }
    Ok(text)
}
