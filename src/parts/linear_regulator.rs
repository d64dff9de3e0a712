//! Linear regulator: the curves of the model, for n parts in parallel.

use crate::parts::curve::Curve;
use crate::sheet::linear_regulator::LinearRegulatorSheet;
use crate::stage::Placed;

/// n linear regulators in parallel with the curves read from their data sheet.
#[derive(Clone, Debug, PartialEq)]
pub struct LinearRegulator {
    /// Number in parallel.
    pub n: f64,
    dropout: Curve,
    i_gnd: Curve,
    /// Thermal resistance junction to ambient of one part, K/W.
    pub r_th: Option<f64>,
}

impl LinearRegulator {
    /// Fits the curves.
    pub fn fit(placed: &Placed<LinearRegulatorSheet>) -> Self {
        let sheet = &*placed.sheet;
        LinearRegulator {
            n: f64::from(placed.count),
            dropout: Curve::through(sheet.dropout.iter().map(|point| (point.i.value, point.v.value))),
            i_gnd: Curve::through(sheet.i_gnd.iter().map(|point| (point.i.value, point.i_gnd.value))),
            r_th: sheet.r_th_ja.as_ref().map(|r_th| r_th.value),
        }
    }

    /// Smallest input less output voltage at a load, V.
    pub fn dropout(&self, load: f64) -> f64 {
        self.dropout.at(load / self.n).max(0.0)
    }

    /// Ground current of all parts at a load, A.
    pub fn ground_current(&self, load: f64) -> f64 {
        self.n * self.i_gnd.at(load / self.n).max(0.0)
    }
}
