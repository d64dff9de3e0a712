//! Inductor: the curves of the model, for n parts in parallel.

use crate::parts::copper;
use crate::parts::core::CoreLaw;
use crate::parts::curve::Curve;
use crate::sheet::inductor::InductorSheet;
use crate::stage::Placed;

/// n inductors in parallel with the curves read from their data sheet.
#[derive(Clone, Debug, PartialEq)]
pub struct Inductor {
    /// Number in parallel.
    pub n: f64,
    inductance: InductanceLaw,
    /// Winding resistance of all parts in parallel at 25 °C, Ω.
    pub dcr: f64,
    /// Winding resistance of all parts in parallel at 25 °C over √f, Ω/√Hz, when known.
    pub ac_per_root_hertz: Option<f64>,
    /// Core of one part, when known.
    pub core: Option<CoreLaw>,
    /// Thermal resistance winding to ambient of one part, K/W.
    pub r_th: Option<f64>,
}

impl Inductor {
    /// Fits the curves.
    pub fn fit(placed: &Placed<InductorSheet>) -> Self {
        let (sheet, n) = (&*placed.sheet, f64::from(placed.count));
        let ac = sheet.r_ac.as_ref().map(|ac| ac.r.value / ac.frequency.value.sqrt() / n);
        Inductor {
            n,
            inductance: InductanceLaw::fit(sheet),
            dcr: sheet.dcr.value / n,
            ac_per_root_hertz: ac,
            core: CoreLaw::fit(sheet),
            r_th: sheet.thermal_resistance(),
        }
    }

    /// Effective inductance of all parts in parallel at a load current (E1), H.
    #[inline]
    pub fn inductance(&self, load: f64) -> f64 {
        self.inductance.at(load / self.n) / self.n
    }

    /// R(T)/R(25 °C) of the winding (E30).
    #[inline]
    pub fn hot_ratio(&self, temperature: f64) -> f64 {
        copper::hot_ratio(temperature)
    }
}

/// Inductance of one part against its current (E1).
#[derive(Clone, Debug, PartialEq)]
enum InductanceLaw {
    /// L0 (1 - c I²), not below 0.1 L0.
    Smooth { l0: f64, per_square_ampere: f64 },
    /// Points, clamped at both ends.
    Table(Curve),
}

impl InductanceLaw {
    fn fit(sheet: &InductorSheet) -> Self {
        match &sheet.saturation {
            Some(saturation) if sheet.inductance_curve.is_empty() => InductanceLaw::Smooth {
                l0: sheet.inductance.value,
                per_square_ampere: saturation.drop.value / saturation.i.value.powi(2),
            },
            _ => InductanceLaw::Table(Curve::through(
                sheet.inductance_curve.iter().map(|point| (point.i.value, point.l.value)),
            )),
        }
    }

    #[inline]
    fn at(&self, current: f64) -> f64 {
        match self {
            InductanceLaw::Smooth { l0, per_square_ampere } => {
                l0 * (1.0 - per_square_ampere * current * current).max(0.1)
            }
            InductanceLaw::Table(curve) => curve.clamped_at(current),
        }
    }
}
