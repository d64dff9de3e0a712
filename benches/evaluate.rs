//! Speed of one solved point: temperatures and losses together, as sweeps ask for them.
//!
//! `cargo bench --bench evaluate` solves stages of the shipped budgets at random points drawn from a fixed seed, and
//! counts points a second on one core. Nothing is gated on these figures: on a busy machine they scatter widely.

use std::path::Path;

use divan::Bencher;
use divan::counter::ItemsCount;
use lossbook::candidate::Candidate;
use lossbook::grid::{AxisName, OperatingPoint};
use lossbook::input::load_budget;

/// Points of one round.
const POINTS: usize = 4096;

fn main() {
    divan::main();
}

/// Solves points of a stage of a shipped budget.
#[divan::bench(args = [
    ("drifting-buoy.yaml", "synchronous"),
    ("drifting-buoy.yaml", "diode"),
    ("soil-probe.yaml", "synchronous"),
    ("soil-probe.yaml", "diode"),
])]
fn evaluate(bencher: Bencher<'_, '_>, (file, stage): (&str, &str)) {
    let path = Path::new(env!("CARGO_MANIFEST_DIR")).join("budgets").join(file);
    let (budget, _) = load_budget(&path).expect("a shipped budget");
    let sheet = budget.stages.iter().find(|sheet| sheet.name == stage).expect("a stage of it");
    let candidate = Candidate::typical(&budget, sheet);
    let points = random_points(&candidate);
    bencher.counter(ItemsCount::new(POINTS)).bench_local(|| {
        let losses = points.iter().filter_map(|point| candidate.evaluate(*point).ok());
        losses.map(|solved| solved.loss()).sum::<f64>()
    });
}

/// Points within the grid of a candidate: even in voltage and temperature, by ratio in load.
fn random_points(candidate: &Candidate<'_>) -> Vec<OperatingPoint> {
    let mut seed = 0x9E37_79B9_7F4A_7C15_u64;
    // xorshift: the same points on every machine
    let mut random = move || {
        seed ^= seed << 13;
        seed ^= seed >> 7;
        seed ^= seed << 17;
        (seed >> 11) as f64 / (1_u64 << 53) as f64
    };
    let mut within = |axis: AxisName, by_ratio: bool| {
        let ends = candidate.grid.axis(axis).filter(|values| !values.is_empty());
        let (low, high) = ends.map_or((0.0, 0.0), |values| (values.at(0), values.at(values.len() - 1)));
        let share = random();
        if by_ratio && low > 0.0 { low * (high / low).powf(share) } else { low + (high - low) * share }
    };
    let point = |_| OperatingPoint {
        input_voltage: within(AxisName::InputVoltage, false),
        load: within(AxisName::Load, true),
        ambient: within(AxisName::Ambient, false),
        switching_frequency: within(AxisName::SwitchingFrequency, false),
    };
    (0..POINTS).map(point).collect()
}
