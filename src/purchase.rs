//! What would buy a gain in efficiency: how far each data-sheet value would have to move, alone.

use serde::Serialize;

use crate::grid::OperatingPoint;
use crate::model::{self, Solved};
use crate::sensitivity::Slope;
use crate::tolerance::{Lever, Rig};
use crate::units::Dimension;

/// Farthest factor that is looked at in either direction.
const FARTHEST: f64 = 1000.0;
/// Steps of the search between no change and the farthest factor.
const STEPS: i32 = 60;

/// The change of one value that gains what is looked for.
#[derive(Clone, Debug, Serialize)]
pub struct Purchase {
    /// Slot and key.
    pub path: String,
    /// Name of the part.
    pub part: String,
    /// What it is.
    pub about: &'static str,
    /// The value now; of a curve the first.
    pub value: f64,
    /// What it measures.
    #[serde(skip)]
    pub dimension: Dimension,
    /// What it would have to become; none when no value gains that much.
    pub needed: Option<f64>,
    /// Needed over present value.
    pub factor: Option<f64>,
    /// Largest gain in efficiency on the way, a fraction.
    pub best: f64,
    /// Why there is no such value.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub reason: Option<String>,
}

/// What every value with a slope would have to become, the smallest change first, those out of reach last.
pub fn all(rig: &Rig, slopes: &[Slope], solved: &Solved, gain: f64) -> Vec<Purchase> {
    let Some(efficiency) = solved.efficiency() else { return Vec::new() };
    let levers = rig.levers();
    let mut all: Vec<Purchase> = slopes
        .iter()
        .filter(|slope| slope.per == "%" && can_be_bought(&slope.path))
        .filter_map(|slope| {
            let lever = levers.iter().find(|lever| lever.path == slope.path)?;
            Some(one(rig, lever, slope.percent < 0.0, (solved.point, efficiency), gain))
        })
        .collect();
    let change = |purchase: &Purchase| purchase.factor.map_or(f64::INFINITY, |factor| factor.ln().abs());
    all.sort_by(|a, b| change(a).total_cmp(&change(b)).then(b.best.total_cmp(&a.best)));
    all
}

/// False for what no better part would change: the places of a curve's points, and thermal resistances, where a hotter
/// part would be the purchase.
fn can_be_bought(path: &str) -> bool {
    let key = path.rsplit('.').next().unwrap_or(path);
    !matches!(key, "i" | "t_j" | "frequency" | "v_r" | "ripple" | "amplitude") && !key.starts_with("r_th")
}

/// Walks a value in the direction that gains and bisects where the gain is reached.
fn one(
    rig: &Rig,
    lever: &Lever,
    upwards: bool,
    (point, efficiency): (OperatingPoint, f64),
    gain: f64,
) -> Purchase {
    let gained = |factor: f64| -> Result<f64, String> {
        let stage = rig.fit(&lever.scaled(factor))?;
        let solved = model::evaluate(&stage, point).map_err(|reason| reason.to_string())?;
        Ok(solved.efficiency().unwrap_or(0.0) - efficiency)
    };
    let mut purchase = Purchase {
        path: lever.path.clone(),
        part: lever.part.clone(),
        about: lever.about,
        value: lever.value(),
        dimension: lever.dimension,
        needed: None,
        factor: None,
        best: 0.0,
        reason: None,
    };
    let step = FARTHEST.ln() / f64::from(STEPS) * if upwards { 1.0 } else { -1.0 };
    let mut before = 1.0;
    for k in 1..=STEPS {
        let factor = (step * f64::from(k)).exp();
        match gained(factor) {
            Err(reason) => {
                purchase.reason = Some(reason);
                return purchase;
            }
            Ok(here) if here >= gain => {
                let factor = bisect(&gained, before, factor, gain);
                purchase.needed = Some(factor * lever.value());
                purchase.factor = Some(factor);
                purchase.best = gain;
                return purchase;
            }
            Ok(here) => purchase.best = purchase.best.max(here),
        }
        before = factor;
    }
    purchase.reason = Some("no value of it gains that much".into());
    purchase
}

fn bisect(gained: &impl Fn(f64) -> Result<f64, String>, mut short: f64, mut enough: f64, gain: f64) -> f64 {
    while (enough / short).ln().abs() > 1e-9 {
        let middle = (short * enough).sqrt();
        // what cannot run between two that do counts as not enough
        if gained(middle).is_ok_and(|here| here >= gain) {
            enough = middle;
        } else {
            short = middle;
        }
    }
    enough
}
