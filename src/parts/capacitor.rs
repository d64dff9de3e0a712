//! Capacitor banks: kinds in parallel and their impedances.

use crate::sheet::capacitor::CapacitorSheet;
use crate::stage::Placed;

/// A bank of capacitors: one or more kinds in parallel.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct Bank {
    /// Kinds, each with its number in parallel.
    pub kinds: Vec<Kind>,
}

/// n capacitors of one kind in parallel.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Kind {
    /// Number in parallel.
    pub n: f64,
    /// Capacitance of all, F.
    pub capacitance: f64,
    /// Series resistance of all in parallel, Ω.
    pub esr: f64,
    /// Series inductance of all in parallel, H.
    pub esl: f64,
}

impl Bank {
    /// Reads the kinds of a bank.
    pub fn fit(placed: &[Placed<CapacitorSheet>]) -> Self {
        let kind = |placed: &Placed<CapacitorSheet>| {
            let (sheet, n) = (&*placed.sheet, f64::from(placed.count));
            Kind {
                n,
                capacitance: n * sheet.capacitance.value,
                esr: sheet.esr.value / n,
                esl: sheet.esl.as_ref().map_or(0.0, |esl| esl.value) / n,
            }
        };
        Bank { kinds: placed.iter().map(kind).collect() }
    }
}
