//! Crossovers: load currents at which one stage overtakes another.

use serde::Serialize;

use crate::candidate::Candidate;
use crate::grid::{AxisName, OperatingPoint};

/// Loads at which the scan looks before it bisects.
const SCAN: u32 = 240;

/// A load at which the stage with the lower loss changes.
#[derive(Clone, Debug, PartialEq, Serialize)]
pub struct Crossover {
    /// V_IN, V.
    pub input_voltage: f64,
    /// T_A, °C.
    pub ambient: f64,
    /// f_SW of the stage that has one, Hz; 0 when neither has.
    pub switching_frequency: f64,
    /// I_OUT, A.
    pub load: f64,
    /// Stage with the lower loss below that load.
    pub below: String,
    /// Stage with the lower loss above it.
    pub above: String,
}

/// Loads between `from` and `to` (A) at which stages `a` and `b` change places, with the other coordinates as given.
///
/// A scan on a logarithmic axis finds the changes of sign, bisection refines them to 1e-9; loads that one of the two
/// cannot serve are passed over.
pub fn between(
    a: (&Candidate<'_>, OperatingPoint),
    b: (&Candidate<'_>, OperatingPoint),
    from: f64,
    to: f64,
) -> Vec<Crossover> {
    let loss = |(candidate, point): (&Candidate<'_>, OperatingPoint), load: f64| {
        candidate.evaluate(point.with(AxisName::Load, load)).ok().map(|solved| solved.loss())
    };
    let lead = |load: f64| Some(loss(a, load)? - loss(b, load)?);
    let mut found = Vec::new();
    if !(from > 0.0 && to > from) {
        return found;
    }
    let step = (to / from).ln() / f64::from(SCAN);
    let mut before = (from, lead(from));
    for k in 1..=SCAN {
        let load = if k == SCAN { to } else { from * (step * f64::from(k)).exp() };
        let here = (load, lead(load));
        if let ((low, Some(x)), (high, Some(y))) = (before, here)
            && x != 0.0
            && x.signum() != y.signum()
            && let Some(load) = bisect(&lead, low, high, x)
        {
            let (below, above) = if x < 0.0 { (a.0, b.0) } else { (b.0, a.0) };
            let frequency = a.1.switching_frequency.max(b.1.switching_frequency);
            found.push(Crossover {
                input_voltage: a.1.input_voltage,
                ambient: a.1.ambient,
                switching_frequency: frequency,
                load,
                below: below.name().to_owned(),
                above: above.name().to_owned(),
            });
        }
        before = here;
    }
    found
}

fn bisect(lead: &impl Fn(f64) -> Option<f64>, mut low: f64, mut high: f64, at_low: f64) -> Option<f64> {
    while high / low - 1.0 > 1e-9 {
        let middle = (low * high).sqrt();
        if lead(middle)?.signum() == at_low.signum() {
            low = middle;
        } else {
            high = middle;
        }
    }
    Some((low * high).sqrt())
}
