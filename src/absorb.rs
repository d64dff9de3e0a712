//! What in a budget could absorb the remainder of a measurement: one value moved, or two, never more.
//!
//! Many values do the same to a loss. Of those that act on one entry of the ledger, one stands for the others: that
//! which the entry follows most nearly in proportion (the board's copper, the controller's bias current, the core's
//! constant), so that the answer reads as entries of the ledger and not as a list of data-sheet keys.

use serde::Serialize;

use crate::fitted::Stage;
use crate::grid::OperatingPoint;
use crate::ledger::{ALL_ACCOUNTS, Account};
use crate::model::{self, Solved};
use crate::tolerance::{Lever, Rig, Settings};
use crate::units::Dimension;

/// A measured point as the fit sees it.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Row {
    /// Where.
    pub point: OperatingPoint,
    /// Measured output voltage, V.
    pub output_voltage: f64,
    /// Measured loss, W.
    pub measured: f64,
    /// Its standard uncertainty, W.
    pub sigma: f64,
}

/// One value that is moved.
#[derive(Clone, Debug, Serialize)]
pub struct Change {
    /// Slot and key.
    pub path: String,
    /// Name of the part.
    pub part: String,
    /// What it is.
    pub about: &'static str,
    /// What it measures.
    #[serde(skip)]
    pub dimension: Dimension,
    /// In the budget; of a curve the first value.
    pub booked: f64,
    /// What fits the bench best.
    pub fitted: f64,
    /// Its standard uncertainty.
    pub sigma: f64,
    /// Slot of the entry that it moves most.
    pub slot: &'static str,
    /// Mechanism of that entry.
    pub mechanism: &'static str,
}

/// A change, or two together, and what it does to the deviations.
#[derive(Clone, Debug, Serialize)]
pub struct Absorber {
    /// One change or two.
    pub changes: Vec<Change>,
    /// Sum of squared deviations, each over its standard uncertainty, with it.
    pub chi_square: f64,
}

/// What could absorb a remainder, the best first.
#[derive(Clone, Debug, Default, Serialize)]
pub struct Absorbers {
    /// The same without any change.
    pub chi_square: f64,
    /// One value moved.
    pub single: Vec<Absorber>,
    /// Two values moved, where that does better than the best single one.
    pub pairs: Vec<Absorber>,
}

/// Pairs that are refined with the full model.
const REFINED: usize = 60;
/// By how much the sum of squares must fall to count: twice the deviation of one degree of freedom.
const WORTH: f64 = 4.0;
/// Range of a relative change.
const RELATIVE: (f64, f64) = (-0.8, 4.0);
/// Range of a resistance that the budget has at zero, Ω.
const ADDED: (f64, f64) = (0.0, 0.1);
/// Rounds of refinement.
const ROUNDS: usize = 6;

/// A lever with what it does to each row.
struct Handle {
    lever: Lever,
    /// True when the value is zero and moves in ohms; else it moves by a share of itself.
    added: bool,
    /// Change of the loss of each row per unit of movement, over its uncertainty.
    slope: Vec<f64>,
    /// The entry of the ledger that it moves most.
    account: Account,
    /// How far that entry is from following it in proportion; 1 for a resistance that is added.
    unlike: f64,
}

impl Handle {
    fn settings(&self, x: f64) -> Settings {
        if self.added { self.lever.moved(x) } else { self.lever.scaled(1.0 + x) }
    }

    fn range(&self) -> (f64, f64) {
        if self.added { ADDED } else { RELATIVE }
    }

    fn change(&self, x: f64, sigma: f64) -> Change {
        let booked = self.lever.value();
        let (fitted, sigma) =
            if self.added { (x, sigma) } else { (booked * (1.0 + x), booked.abs() * sigma) };
        Change {
            path: self.lever.path.clone(),
            part: self.lever.part.clone(),
            about: self.lever.about,
            dimension: self.lever.dimension,
            booked,
            fitted,
            sigma,
            slot: self.account.slot().name(),
            mechanism: self.account.mechanism().name(),
        }
    }
}

/// Tries one value for each entry of the ledger alone, then every two of them together.
pub fn absorbers(rig: &Rig, rows: &[Row]) -> Absorbers {
    let Some(base) = solve(&rig.typical(), rows) else { return Absorbers::default() };
    let left = deviations(&base, rows);
    let chi_square = squares(&left);
    let handles = handles(rig, rows, &base);
    let mut single: Vec<Absorber> =
        handles.iter().filter_map(|handle| refine(rig, rows, &[handle], &left)).collect();
    single.sort_by(|a, b| a.chi_square.total_cmp(&b.chi_square));
    single.retain(|one| chi_square - one.chi_square > WORTH);
    let best = single.first().map_or(chi_square, |one| one.chi_square);
    let mut pairs: Vec<Absorber> = promising(&handles, &left)
        .into_iter()
        .filter_map(|(a, b)| refine(rig, rows, &[&handles[a], &handles[b]], &left))
        .filter(|pair| best - pair.chi_square > WORTH)
        .collect();
    pairs.sort_by(|a, b| a.chi_square.total_cmp(&b.chi_square));
    // of pairs only those that the bench cannot tell from the best one
    let limit = pairs.first().map_or(0.0, |pair| pair.chi_square + WORTH);
    pairs.retain(|pair| pair.chi_square <= limit);
    Absorbers { chi_square, single, pairs }
}

/// Every row with its measured output voltage; none when a row cannot run.
fn solve(stage: &Stage, rows: &[Row]) -> Option<Vec<Solved>> {
    let mut stage = stage.clone();
    rows.iter()
        .map(|row| {
            stage.output_voltage = row.output_voltage;
            model::evaluate(&stage, row.point).ok()
        })
        .collect()
}

/// (measured - booked)/sigma of every row.
fn deviations(solved: &[Solved], rows: &[Row]) -> Vec<f64> {
    rows.iter().zip(solved).map(|(row, solved)| (row.measured - solved.loss()) / row.sigma).collect()
}

fn squares(left: &[f64]) -> f64 {
    left.iter().map(|left| left * left).sum()
}

/// The value that stands for each entry of the ledger.
fn handles(rig: &Rig, rows: &[Row], base: &[Solved]) -> Vec<Handle> {
    let mut handles: Vec<Handle> = Vec::new();
    for handle in rig.levers().into_iter().filter_map(|lever| handle(rig, lever, rows, base)) {
        let reach = |handle: &Handle| squares(&handle.slope);
        match handles.iter_mut().find(|known| known.account == handle.account) {
            Some(known) => {
                let alike = (handle.unlike - known.unlike).abs() < 1e-3;
                if if alike { reach(&handle) > reach(known) } else { handle.unlike < known.unlike } {
                    *known = handle;
                }
            }
            None => handles.push(handle),
        }
    }
    handles
}

fn handle(rig: &Rig, lever: Lever, rows: &[Row], base: &[Solved]) -> Option<Handle> {
    if lever.dimension == Dimension::Temperature {
        return None;
    }
    let added = lever.value() == 0.0;
    if added && lever.dimension != Dimension::Resistance {
        return None;
    }
    let (low, high) = if added { (0.0, 1e-3) } else { (-0.02, 0.02) };
    let at = |x: f64| {
        let settings = if added { lever.moved(x) } else { lever.scaled(1.0 + x) };
        solve(&rig.fit(&settings).ok()?, rows)
    };
    let (below, above) = (at(low)?, at(high)?);
    let left = [deviations(&below, rows), deviations(&above, rows)];
    let slope = left[0].iter().zip(&left[1]).map(|(below, above)| (below - above) / (high - low)).collect();
    let booked = |solved: &[Solved], account| -> f64 {
        solved.iter().zip(rows).map(|(solved, row)| solved.ledger.get(account) / row.sigma).sum()
    };
    let moved = |account| booked(&above, account) - booked(&below, account);
    let account =
        ALL_ACCOUNTS.iter().map(|row| row.0).max_by(|a, b| moved(*a).abs().total_cmp(&moved(*b).abs()))?;
    let elasticity = moved(account) / (high - low) / booked(base, account);
    let unlike = if added { 1.0 } else { (elasticity - 1.0).abs() };
    let handle = Handle { lever, added, slope, account, unlike };
    // what moves no row by a tenth of its uncertainty within its range is no handle
    (squares(&handle.slope).sqrt() * handle.range().1 > 0.1).then_some(handle)
}

/// Movements by least squares on linear rows, with their standard uncertainties; none when two rows are too alike.
fn movements(handles: &[&Handle], left: &[f64]) -> Option<Vec<(f64, f64)>> {
    let dot = |a: &[f64], b: &[f64]| a.iter().zip(b).map(|(a, b)| a * b).sum::<f64>();
    match handles {
        [one] => {
            let norm = dot(&one.slope, &one.slope);
            Some(vec![(dot(&one.slope, left) / norm, 1.0 / norm.sqrt())])
        }
        [a, b] => {
            let (aa, bb, ab) = (dot(&a.slope, &a.slope), dot(&b.slope, &b.slope), dot(&a.slope, &b.slope));
            let determinant = aa * bb - ab * ab;
            if determinant <= ALIKE * aa * bb {
                return None;
            }
            let (p, q) = (dot(&a.slope, left), dot(&b.slope, left));
            let x = (p * bb - q * ab) / determinant;
            let y = (q * aa - p * ab) / determinant;
            Some(vec![(x, (bb / determinant).sqrt()), (y, (aa / determinant).sqrt())])
        }
        _ => None,
    }
}

/// 1 - r² of two slopes below which the bench cannot tell them apart.
const ALIKE: f64 = 0.05;

/// The pairs that do best on linear rows.
fn promising(handles: &[Handle], left: &[f64]) -> Vec<(usize, usize)> {
    let mut scored = Vec::new();
    for (i, a) in handles.iter().enumerate() {
        for (j, b) in handles.iter().enumerate().skip(i + 1) {
            let Some(found) = movements(&[a, b], left) else { continue };
            let inside = [a, b].iter().zip(&found).all(|(handle, (x, _))| {
                let (low, high) = handle.range();
                (low..=high).contains(x)
            });
            if inside {
                let rest: f64 = (0..left.len())
                    .map(|row| (left[row] - found[0].0 * a.slope[row] - found[1].0 * b.slope[row]).powi(2))
                    .sum();
                scored.push((rest, (i, j)));
            }
        }
    }
    scored.sort_by(|a, b| a.0.total_cmp(&b.0));
    scored.into_iter().take(REFINED).map(|(_, pair)| pair).collect()
}

/// Gauss and Newton on the full model with the slopes of the start; none when it leaves the range or cannot run.
fn refine(rig: &Rig, rows: &[Row], handles: &[&Handle], left: &[f64]) -> Option<Absorber> {
    let mut at = vec![0.0; handles.len()];
    let mut left = left.to_vec();
    let mut sigmas = Vec::new();
    for _ in 0..ROUNDS {
        let found = movements(handles, &left)?;
        for ((x, handle), (step, _)) in at.iter_mut().zip(handles).zip(&found) {
            *x += step;
            let (low, high) = handle.range();
            if !(low..=high).contains(x) {
                return None;
            }
        }
        let settings: Settings =
            handles.iter().zip(&at).flat_map(|(handle, x)| handle.settings(*x)).collect();
        left = deviations(&solve(&rig.fit(&settings).ok()?, rows)?, rows);
        let small = found.iter().all(|(step, sigma)| step.abs() < 0.01 * sigma);
        sigmas = found.iter().map(|(_, sigma)| *sigma).collect();
        if small {
            break;
        }
    }
    let changes = handles.iter().zip(&at).zip(&sigmas).map(|((handle, x), sigma)| handle.change(*x, *sigma));
    Some(Absorber { changes: changes.collect(), chi_square: squares(&left) })
}
