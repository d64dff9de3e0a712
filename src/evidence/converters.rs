//! Whole converters in time: duty, peak, valley and conduction against exact periodic steady states.
//!
//! The circuit is piecewise linear: a source, resistances, an inductor, an output capacitor with series resistance, a
//! constant load current, diodes of a threshold and a slope. Its periodic steady state is computed with matrix
//! exponentials in the tests (`tests/time_domain.rs`), which share no code with the model; the results stand here, and
//! the tests compute them anew and compare.

use super::check::{Bound, Check, Subject};
use super::rig::{Rig, capacitor, coil, dead_time, diode, points, switch};
use super::statistics::{mean, worst};
use crate::ledger::Account as A;
use crate::sheet::Datum;
use crate::stage::LightLoad;
use crate::units::Dimension as D;

/// What carries the current while the high side is off.
#[derive(Clone, Copy, Debug, PartialEq)]
pub enum Low {
    /// A channel, and around it two dead times (s) in which body diodes of threshold (V) and slope (Ω) conduct; true when
    /// it blocks at zero current.
    Channel {
        /// Ω
        resistance: f64,
        /// Threshold, V, and slope, Ω, of both body diodes.
        body: [f64; 2],
        /// After and before the high side's pulse, s.
        dead: [f64; 2],
        /// Blocks at zero current.
        emulates: bool,
    },
    /// A diode of threshold (V) and slope (Ω).
    Diode([f64; 2]),
}

/// A converter: V, A, H, Hz, Ω, F.
#[derive(Clone, Copy, Debug, PartialEq)]
#[allow(missing_docs)] // the usual words
pub struct Converter {
    pub v_in: f64,
    pub v_out: f64,
    pub load: f64,
    pub inductance: f64,
    pub frequency: f64,
    pub r_high: f64,
    pub low: Low,
    pub dcr: f64,
    pub c_out: f64,
    pub esr_out: f64,
    pub esr_in: f64,
}

/// Names of what is compared, and whether it is a power.
pub const COLUMNS: [(&str, D); 10] = [
    ("duty", D::Ratio),
    ("peak", D::Current),
    ("valley", D::Current),
    ("high-side conduction", D::Power),
    ("rectifier conduction", D::Power),
    ("dead time", D::Power),
    ("high-side dead time", D::Power),
    ("winding", D::Power),
    ("output ESR", D::Power),
    ("input ESR", D::Power),
];

/// Values of the columns; 0 where a converter has none.
pub type Steady = [f64; COLUMNS.len()];

impl Converter {
    /// The same converter as a stage of the model.
    pub fn rig(&self) -> Rig {
        let mut rig = Rig::ideal(self.v_in, self.v_out, self.load, self.frequency);
        rig.high_side = switch(self.r_high);
        rig.inductor = coil(self.inductance, self.dcr);
        rig.output_capacitor = capacitor(self.esr_out);
        rig.output_capacitor.capacitance = Datum::of(self.c_out);
        rig.input_capacitor = capacitor(self.esr_in);
        let law = |[threshold, slope]: [f64; 2]| [(0.0, threshold), (10.0, threshold + 10.0 * slope)];
        match self.low {
            Low::Channel { resistance, body, dead: [after, before], emulates } => {
                rig.low_side = switch(resistance);
                rig.low_side.v_sd = points(&law(body));
                rig.high_side.v_sd = points(&law(body));
                rig.controller.dead_time = Some(dead_time(after, before));
                rig.light_load =
                    if emulates { LightLoad::DiodeEmulation } else { LightLoad::ForcedContinuous };
            }
            Low::Diode(forward) => rig.diode = Some(diode(&law(forward))),
        }
        rig
    }

    /// What the model makes of it.
    pub fn model(&self) -> Steady {
        let rig = self.rig();
        let rectifier = if rig.diode.is_some() { A::FreewheelDiodeConduction } else { A::LowSideConduction };
        let accounts = [
            A::HighSideConduction,
            rectifier,
            A::LowSideDeadTime,
            A::HighSideDeadTime,
            A::InductorWinding,
            A::OutputCapacitorsEsr,
            A::InputCapacitorsEsr,
        ];
        let mut steady = [f64::NAN; COLUMNS.len()];
        if let Ok(solved) = rig.solve()
            && let Some(waveform) = solved.waveform
        {
            steady[..3].copy_from_slice(&[waveform.duty, waveform.peak, waveform.valley]);
            for (place, account) in accounts.into_iter().enumerate() {
                steady[3 + place] = solved.ledger.get(account);
            }
        }
        steady
    }

    /// A few words.
    pub fn words(&self) -> String {
        let kind = match self.low {
            Low::Channel { emulates: true, .. } => "diode emulation",
            Low::Channel { .. } => "synchronous",
            Low::Diode(_) => "diode",
        };
        format!("{kind}, {} V to {} V, {} A", self.v_in, self.v_out, self.load)
    }
}

/// Largest relative difference of one entry; the ripple of the output voltage makes ESR the weakest.
pub const LIMIT: f64 = 0.02;
/// The same for series resistances of capacitors.
pub const LIMIT_ESR: f64 = 0.03;
/// Largest mean of the differences of all entries.
pub const LIMIT_MEAN: f64 = 0.003;

/// The largest difference allowed in a column.
pub fn limit(column: usize) -> f64 {
    if COLUMNS[column].0.contains("ESR") { LIMIT_ESR } else { LIMIT }
}

/// Relative differences of the model, column by column; none where neither has anything. A valley is compared to the peak,
/// since it passes through zero, and the dead time of the high side to that of both sides.
pub fn differences(ours: &Steady, exact: &Steady) -> Vec<(usize, f64)> {
    let compared = (0..COLUMNS.len()).filter(|place| exact[*place].abs() > 1e-9 || ours[*place].abs() > 1e-9);
    compared.map(|place| (place, (ours[place] - exact[place]) / scale(exact, place))).collect()
}

/// What a difference in a column is judged against.
fn scale(exact: &Steady, column: usize) -> f64 {
    match column {
        2 => exact[1],
        6 => exact[5] + exact[6],
        _ => exact[column],
    }
}

/// Two converters computed elsewhere: D1, high side, rectifier, winding, output ESR.
pub fn computed_elsewhere() -> [(Converter, [f64; 5]); 2] {
    let synchronous = Converter {
        v_in: 12.0,
        v_out: 5.0,
        load: 3.0,
        inductance: 10e-6,
        frequency: 300e3,
        r_high: 20e-3,
        low: Low::Channel { resistance: 12e-3, body: [0.7, 0.0], dead: [0.0; 2], emulates: false },
        dcr: 25e-3,
        c_out: 47e-6,
        esr_out: 5e-3,
        esr_in: 0.0,
    };
    let diode = Converter {
        v_in: 24.0,
        v_out: 5.0,
        load: 0.1,
        inductance: 22e-6,
        frequency: 400e3,
        r_high: 0.1,
        low: Low::Diode([0.4, 50e-3]),
        dcr: 60e-3,
        esr_out: 30e-3,
        ..synchronous
    };
    [
        (synchronous, [0.42677041, 0.077534049, 0.062434412, 0.22698925, 0.000395456]),
        (diode, [0.14361075, 0.000459376, 0.031903395, 0.001238095, 0.000318665]),
    ]
}

/// The columns of [`computed_elsewhere`].
pub const ELSEWHERE_COLUMNS: [usize; 5] = [0, 3, 4, 7, 8];

pub(super) fn checks(list: &mut Vec<Check>) {
    let source = "calc: exact periodic steady state, matrix exponentials, SciPy";
    for (converter, outside) in computed_elsewhere() {
        let ours = converter.model();
        let discontinuous = matches!(converter.low, Low::Diode(_));
        for (column, outside) in ELSEWHERE_COLUMNS.into_iter().zip(outside) {
            let (name, dimension) = COLUMNS[column];
            let (tolerance, reason) = match (name, discontinuous) {
                ("output ESR", _) => (0.03, "the closed form neglects the ripple of the output voltage"),
                ("duty", true) => (0.02, "discontinuous duties neglect the resistances (E5)"),
                (_, true) => (0.01, "discontinuous currents neglect the resistances (E5)"),
                _ => (0.003, "drops are taken at the load current"),
            };
            list.push(Check::within(outside, tolerance, dimension, ours[column]).because(reason).about(
                Subject::SteadyState,
                format!("{name}, {}", converter.words()),
                source,
            ));
        }
    }
    recorded(list);
}

fn recorded(list: &mut Vec<Check>) {
    let source = "exact periodic steady state, matrix exponentials (tests/time_domain.rs)";
    let mut by_column: Vec<Vec<f64>> = vec![Vec::new(); COLUMNS.len()];
    let mut details = Vec::new();
    for (converter, exact) in super::recorded::CONVERTERS {
        let ours = converter.model();
        for (column, difference) in differences(&ours, exact) {
            by_column[column].push(difference);
            let (name, dimension) = COLUMNS[column];
            let own = limit(column) * (scale(exact, column) / exact[column]).abs();
            details.push(
                Check::within(exact[column], own, dimension, ours[column])
                    .because("drops are taken at the load current, the output voltage as constant")
                    .about(Subject::SteadyState, format!("{name}, {}", converter.words()), source)
                    .one_of_many(),
            );
        }
    }
    let count = super::recorded::CONVERTERS.len();
    for (column, differences) in by_column.iter().enumerate() {
        let name = COLUMNS[column].0;
        let count_of = differences.len();
        let judged = match column {
            2 => ", as a share of the peak",
            6 => ", as a share of both dead times",
            _ => "",
        };
        list.push(
            Check::of(limit(column), worst(differences), D::Ratio, Bound::AtMost)
                .because("drops are taken at the load current, the output voltage as constant")
                .about(
                    Subject::SteadyState,
                    format!("{name}: worst difference in {count_of} of {count} converters{judged}"),
                    source,
                ),
        );
    }
    let entries: Vec<f64> = by_column.iter().flatten().map(|difference| difference.abs()).collect();
    list.push(
        Check::of(LIMIT_MEAN, mean(&entries), D::Ratio, Bound::AtMost)
            .because("duty, peak, valley and every conduction entry")
            .about(Subject::SteadyState, format!("mean size of all {} differences", entries.len()), source),
    );
    list.append(&mut details);
}
