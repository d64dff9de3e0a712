//! Reconcile: measured points beside the budget, what the difference looks like over the load, and what could absorb it.

use std::io::{self, Write};

use serde::Serialize;

use crate::absorb::{self, Absorbers, Row};
use crate::answer::Answer;
use crate::bench::Reading;
use crate::budget::{BenchAccuracy, Budget};
use crate::candidate::Candidate;
use crate::grid::{OperatingPoint, PartialPoint};
use crate::model;
use crate::nnls;
use crate::tolerance::Rig;
use crate::worst::ValueSet;

/// What is asked.
#[derive(Clone, Debug)]
pub struct Request {
    /// Name of the stage that was measured.
    pub stage: String,
    /// What the bench reads.
    pub readings: Vec<Reading>,
    /// How well.
    pub accuracy: BenchAccuracy,
}

/// Standard uncertainties within which a difference is none: 95 % of a normal distribution, rounded (JCGM 100, 6.3.3).
pub const COVERAGE: f64 = 2.0;
/// Share of the booked loss that the covered uncertainty may have where agreement means something.
pub const RESOLUTION: f64 = 0.25;

/// What a point says about the budget.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Serialize)]
#[serde(rename_all = "snake_case")]
pub enum Verdict {
    /// The difference is within the uncertainty, and that is small beside the loss.
    Agrees,
    /// The difference is beyond the uncertainty.
    Disagrees,
    /// The uncertainty is too large beside the loss, or the model cannot run there.
    CannotTell,
}

impl Verdict {
    /// In words.
    pub const fn words(self) -> &'static str {
        match self {
            Verdict::Agrees => "agrees",
            Verdict::Disagrees => "disagrees",
            Verdict::CannotTell => "cannot tell",
        }
    }
}

/// The whole answer.
#[derive(Clone, Debug, Serialize)]
pub struct Reconciliation {
    /// Version of the program.
    pub lossbook: &'static str,
    /// Name of the budget.
    pub budget: String,
    /// Set of values the budget is booked with.
    pub values: ValueSet,
    /// Name of the stage.
    pub stage: String,
    /// Rows of the bench that were used.
    pub points: Vec<Point>,
    /// Rows that no converter gives.
    pub rejected: Vec<Rejected>,
    /// What is left over the load; none with too few or too similar loads.
    pub remainder: Option<Remainder>,
    /// What could absorb it.
    pub absorbers: Absorbers,
}

/// A measured point beside the budget.
#[derive(Clone, Debug, Serialize)]
pub struct Point {
    /// Line of the bench file.
    pub line: usize,
    /// V_IN, V.
    pub input_voltage: f64,
    /// I_OUT, A.
    pub load: f64,
    /// T_A, °C.
    pub ambient: f64,
    /// f_SW, Hz; 0 in a linear stage.
    pub switching_frequency: f64,
    /// Measured V_OUT, V.
    pub output_voltage: f64,
    /// Measured efficiency, a fraction; none without load.
    pub measured_efficiency: Option<f64>,
    /// W
    pub measured_loss: f64,
    /// One standard uncertainty of it, W.
    pub measured_loss_sigma: f64,
    /// Loss that the budget books there, W.
    pub booked_loss: Option<f64>,
    /// Measured less booked, W.
    pub difference: Option<f64>,
    /// The same in standard uncertainties.
    pub deviation: Option<f64>,
    /// What it says about the budget.
    pub verdict: Verdict,
    /// Why the budget books nothing there.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub reason: Option<String>,
}

/// A row that was left out.
#[derive(Clone, Debug, PartialEq, Serialize)]
pub struct Rejected {
    /// Line of the bench file.
    pub line: usize,
    /// Why.
    pub reason: String,
}

/// Difference over the load: P = constant + linear I + quadratic I².
#[derive(Clone, Copy, Debug, PartialEq, Serialize)]
pub struct Remainder {
    /// Does not depend on the load.
    pub constant: Watts,
    /// Grows with the load.
    pub linear: Volts,
    /// Grows with its square.
    pub quadratic: Ohms,
    /// Sum of squared deviations from the three terms, each over its uncertainty.
    pub chi_square: f64,
    /// Factor by which the uncertainties were widened because the points scatter more than stated.
    pub widened: f64,
}

/// A power with one standard uncertainty.
#[derive(Clone, Copy, Debug, PartialEq, Serialize)]
pub struct Watts {
    /// W
    pub watts: f64,
    /// W
    pub sigma: f64,
}

/// A voltage with one standard uncertainty.
#[derive(Clone, Copy, Debug, PartialEq, Serialize)]
pub struct Volts {
    /// V
    pub volts: f64,
    /// V
    pub sigma: f64,
}

/// A resistance with one standard uncertainty.
#[derive(Clone, Copy, Debug, PartialEq, Serialize)]
pub struct Ohms {
    /// Ω
    pub ohms: f64,
    /// Ω
    pub sigma: f64,
}

/// Reconciles a stage of a budget with a bench; none when the budget has no stage of that name.
pub fn reconcile(budget: &Budget, request: &Request) -> Option<Reconciliation> {
    let sheet = budget.stages.iter().find(|sheet| sheet.name == request.stage)?;
    let candidate = Candidate::typical(budget, sheet);
    let mut reconciliation = Reconciliation {
        lossbook: env!("CARGO_PKG_VERSION"),
        budget: budget.name.clone(),
        values: ValueSet::Typical,
        stage: request.stage.clone(),
        points: Vec::new(),
        rejected: Vec::new(),
        remainder: None,
        absorbers: Absorbers::default(),
    };
    let mut rows = Vec::new();
    for reading in &request.readings {
        match reading.absurdity(budget.output_voltage) {
            Some(reason) => reconciliation.rejected.push(Rejected { line: reading.line, reason }),
            None => {
                let (point, row) = point(&candidate, reading, &request.accuracy);
                reconciliation.points.push(point);
                rows.extend(row);
            }
        }
    }
    reconciliation.remainder = remainder(&reconciliation.points);
    if rows.len() > 2 {
        let rig = Rig::new(budget, sheet).with_whole_board();
        reconciliation.absorbers = absorb::absorbers(&rig, &rows);
    }
    Some(reconciliation)
}

/// A reading beside the budget, and its row for the fits when the budget books a loss there.
fn point(candidate: &Candidate<'_>, reading: &Reading, accuracy: &BenchAccuracy) -> (Point, Option<Row>) {
    let at: OperatingPoint = candidate.at(PartialPoint {
        input_voltage: Some(reading.input_voltage),
        load: Some(reading.output_current),
        ambient: reading.ambient,
        switching_frequency: reading.switching_frequency.filter(|_| !candidate.sheet.is_linear()),
    });
    let measured = reading.loss(accuracy);
    // the rail as it was measured, not as it was meant
    let mut stage = candidate.stage.clone();
    stage.output_voltage = reading.output_voltage;
    let booked = model::evaluate(&stage, at).map(|solved| solved.loss());
    let difference = booked.as_ref().ok().map(|booked| measured.watts - booked);
    let deviation = difference.map(|difference| difference / measured.sigma);
    let verdict = match (&booked, deviation) {
        (Ok(_), Some(deviation)) if deviation.abs() > COVERAGE => Verdict::Disagrees,
        (Ok(booked), Some(_)) if COVERAGE * measured.sigma <= RESOLUTION * booked => Verdict::Agrees,
        _ => Verdict::CannotTell,
    };
    let row = Row {
        point: at,
        output_voltage: reading.output_voltage,
        measured: measured.watts,
        sigma: measured.sigma,
    };
    let has_load = reading.output_current > 0.0;
    let point = Point {
        line: reading.line,
        input_voltage: reading.input_voltage,
        load: reading.output_current,
        ambient: at.ambient,
        switching_frequency: at.switching_frequency,
        output_voltage: reading.output_voltage,
        measured_efficiency: has_load.then(|| reading.output_power() / reading.input_power()),
        measured_loss: measured.watts,
        measured_loss_sigma: measured.sigma,
        booked_loss: booked.as_ref().ok().copied(),
        difference,
        deviation,
        verdict,
        reason: booked.as_ref().err().map(ToString::to_string),
    };
    // an instrument without any error has no place in a weighted fit
    let usable = booked.is_ok() && measured.sigma > 0.0;
    (point, usable.then_some(row))
}

fn remainder(points: &[Point]) -> Option<Remainder> {
    let used: Vec<(&Point, f64)> = points
        .iter()
        .filter(|point| point.measured_loss_sigma > 0.0)
        .filter_map(|point| Some((point, point.difference?)))
        .collect();
    let rows: Vec<[f64; 3]> = used.iter().map(|(point, _)| [1.0, point.load, point.load.powi(2)]).collect();
    let values: Vec<f64> = used.iter().map(|(_, difference)| *difference).collect();
    let sigmas: Vec<f64> = used.iter().map(|(point, _)| point.measured_loss_sigma).collect();
    let fit = nnls::fit(&rows, &values, &sigmas)?;
    let [constant, linear, quadratic] = fit.terms;
    Some(Remainder {
        constant: Watts { watts: constant.value, sigma: constant.sigma },
        linear: Volts { volts: linear.value, sigma: linear.sigma },
        quadratic: Ohms { ohms: quadratic.value, sigma: quadratic.sigma },
        chi_square: fit.chi_square,
        widened: fit.widened,
    })
}

/// The answer in every form.
#[derive(Debug)]
pub struct Reconciled<'a> {
    /// The budget.
    pub budget: &'a Budget,
    /// What came out.
    pub result: Reconciliation,
}

impl Answer for Reconciled<'_> {
    fn document(&self) -> crate::report::Document {
        crate::report::reconcile::document(self.budget, &self.result)
    }

    fn json(&self, out: &mut dyn Write) -> io::Result<()> {
        serde_json::to_writer_pretty(&mut *out, &self.result)?;
        writeln!(out)
    }

    fn csv(&self, out: &mut dyn Write) -> io::Result<()> {
        let mut writer = csv::Writer::from_writer(out);
        writer.write_record([
            "line",
            "input_voltage [V]",
            "load [A]",
            "ambient [°C]",
            "switching_frequency [Hz]",
            "measured loss [W]",
            "sigma [W]",
            "booked loss [W]",
            "difference [W]",
            "deviation [sigma]",
            "verdict",
            "reason",
        ])?;
        let number = |value: Option<f64>| value.map_or_else(String::new, |value| value.to_string());
        for point in &self.result.points {
            writer.write_record([
                point.line.to_string(),
                point.input_voltage.to_string(),
                point.load.to_string(),
                point.ambient.to_string(),
                point.switching_frequency.to_string(),
                point.measured_loss.to_string(),
                point.measured_loss_sigma.to_string(),
                number(point.booked_loss),
                number(point.difference),
                number(point.deviation),
                point.verdict.words().replace(' ', "_"),
                point.reason.clone().unwrap_or_default(),
            ])?;
        }
        for rejected in &self.result.rejected {
            let mut row = vec![rejected.line.to_string()];
            row.extend(std::iter::repeat_n(String::new(), 9));
            row.extend(["rejected".into(), rejected.reason.clone()]);
            writer.write_record(row)?;
        }
        writer.flush()
    }
}
