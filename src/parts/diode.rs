//! Diode: the curves of the model, for n devices in parallel.

use crate::fit;
use crate::near::at_least;
use crate::parts::curve::Curve;
use crate::parts::junction::JunctionCharge;
use crate::parts::mosfet::RecoveryLaw;
use crate::sheet::diode::{DiodeSheet, LeakagePoint};
use crate::stage::Placed;

/// n diodes in parallel with the curves read from their data sheet.
#[derive(Clone, Debug, PartialEq)]
pub struct Diode {
    /// Number in parallel.
    pub n: f64,
    /// 1/n
    share: f64,
    /// Forward voltage of one device.
    pub forward: ForwardLaw,
    /// Reverse leakage of one device, when known.
    pub leakage: Option<LeakageLaw>,
    /// Junction charge of all devices, when known.
    pub q_c: Option<JunctionCharge>,
    /// Reverse recovery, PN diodes only.
    pub recovery: Option<RecoveryLaw>,
    /// Thermal resistance junction to ambient of one device, K/W.
    pub r_th: Option<f64>,
}

impl Diode {
    /// Fits the curves.
    pub fn fit(placed: &Placed<DiodeSheet>) -> Self {
        let (sheet, n) = (&*placed.sheet, f64::from(placed.count));
        let q_c = JunctionCharge::from_sheet(sheet.q_c.as_ref(), sheet.c_j.as_ref(), "v_r");
        Diode {
            n,
            share: 1.0 / n,
            forward: ForwardLaw::fit(sheet),
            leakage: LeakageLaw::fit(&sheet.i_r),
            q_c: q_c.map(|q| q.times(n)),
            recovery: sheet.q_rr.as_ref().map(|recovery| RecoveryLaw::fit(recovery, n, q_c)),
            r_th: sheet.r_th_ja.as_ref().map(|r_th| r_th.value),
        }
    }

    /// Forward voltage at a current of all devices and a junction temperature, V.
    #[inline(always)]
    pub fn forward_voltage(&self, current: f64, t_j: f64) -> f64 {
        self.forward.at(current * self.share, t_j)
    }

    /// Growth of the forward voltage with temperature at a current of all devices, V/K.
    #[inline]
    pub fn forward_drift(&self, current: f64) -> f64 {
        self.forward.drift(current * self.share)
    }
}

/// Forward voltage against current and temperature (E25).
#[derive(Clone, Debug, PartialEq)]
pub struct ForwardLaw {
    /// V_f at the first temperature, V.
    cold: Curve,
    /// dV_f/dT, V/K, through points at the same currents; 0 with one temperature.
    drift: Curve,
    /// The first temperature, °C.
    t_cold: f64,
}

impl ForwardLaw {
    fn fit(sheet: &DiodeSheet) -> Self {
        let curves: Vec<(f64, Curve)> = sheet
            .v_f
            .iter()
            .map(|curve| {
                let points = curve.points.iter().map(|point| (point.i.value, point.v.value));
                (curve.t_j.value, Curve::through(points))
            })
            .collect();
        match curves.as_slice() {
            [(t_cold, cold), (t_hot, hot), ..] => {
                let currents: Vec<f64> = cold.xs().chain(hot.xs()).collect();
                let through = |y: &dyn Fn(f64) -> f64| Curve::through(currents.iter().map(|i| (*i, y(*i))));
                let drift = through(&|i| (hot.at(i) - cold.at(i)) / (t_hot - t_cold));
                ForwardLaw { cold: through(&|i| cold.at(i)), drift, t_cold: *t_cold }
            }
            [(t_only, only)] => ForwardLaw { cold: only.clone(), drift: Curve::default(), t_cold: *t_only },
            [] => ForwardLaw { cold: Curve::default(), drift: Curve::default(), t_cold: 25.0 },
        }
    }

    /// V_f(i, T) of one device, V: linear between the two temperatures and beyond them, floor 50 mV.
    #[inline(always)]
    pub fn at(&self, i: f64, t_j: f64) -> f64 {
        let place = self.cold.place(i);
        at_least(0.05, self.cold.on(place) + self.drift.on(place) * (t_j - self.t_cold))
    }

    /// dV_f/dT of one device at a current, V/K.
    #[inline]
    pub fn drift(&self, i: f64) -> f64 {
        self.drift.at(i)
    }
}

/// Reverse leakage against voltage and temperature (E27): ln I_R = c0 + c1 T + m ln V.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct LeakageLaw {
    constant: f64,
    /// Growth with temperature, 1/K.
    pub per_kelvin: f64,
    /// Exponent m of the growth with voltage.
    pub voltage_exponent: f64,
}

/// ln 2 / 10 K: doubles every 10 K (common practice), assumed with one temperature only.
pub const ASSUMED_LEAKAGE_SLOPE: f64 = std::f64::consts::LN_2 / 10.0;

impl LeakageLaw {
    fn fit(points: &[LeakagePoint]) -> Option<Self> {
        let logs: Vec<[f64; 3]> =
            points.iter().map(|p| [p.t_j.value, p.v_r.value.ln(), p.i.value.ln()]).collect();
        // both slopes from the points; else the temperature slope with m = 1; else m with the assumed slope; else neither
        let both = fit::plane(&logs);
        let by_temperature = || {
            let rows: Vec<[f64; 2]> = logs.iter().map(|[t, _, _]| [1.0, *t]).collect();
            let values: Vec<f64> = logs.iter().map(|[_, v, i]| i - v).collect();
            fit::least_squares(&rows, &values).map(|[c0, c1]| [c0, c1, 1.0])
        };
        let by_voltage = || {
            let rows: Vec<[f64; 2]> = logs.iter().map(|[_, v, _]| [1.0, *v]).collect();
            let values: Vec<f64> = logs.iter().map(|[t, _, i]| i - ASSUMED_LEAKAGE_SLOPE * t).collect();
            fit::least_squares(&rows, &values).map(|[c0, m]| [c0, ASSUMED_LEAKAGE_SLOPE, m])
        };
        let single =
            || logs.first().map(|[t, v, i]| [i - ASSUMED_LEAKAGE_SLOPE * t - v, ASSUMED_LEAKAGE_SLOPE, 1.0]);
        let [constant, per_kelvin, voltage_exponent] =
            both.or_else(by_temperature).or_else(by_voltage).or_else(single)?;
        Some(LeakageLaw { constant, per_kelvin, voltage_exponent })
    }

    /// Logarithm of the leakage of one device in A at ln v_r (V) and T_j (°C).
    #[inline]
    pub fn ln_at(&self, ln_v_r: f64, t_j: f64) -> f64 {
        self.constant + self.per_kelvin * t_j + self.voltage_exponent * ln_v_r
    }

    /// Leakage of one device at a reverse voltage (V) and a junction temperature (°C), A.
    pub fn at(&self, v_r: f64, t_j: f64) -> f64 {
        self.ln_at(v_r.ln(), t_j).exp()
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::sheet::Datum;

    fn point(v_r: f64, t_j: f64, i: f64) -> LeakagePoint {
        LeakagePoint { v_r: Datum::of(v_r), t_j: Datum::of(t_j), i: Datum::of(i) }
    }

    #[test]
    fn leakage_passes_through_its_points() {
        let law =
            LeakageLaw::fit(&[point(40.0, 25.0, 60e-6), point(40.0, 125.0, 15e-3)]).expect("two points");
        assert!((law.at(40.0, 25.0) / 60e-6 - 1.0).abs() < 1e-12);
        assert!((law.at(40.0, 125.0) / 15e-3 - 1.0).abs() < 1e-12);
        // m = 1 with one voltage
        assert!((law.at(20.0, 25.0) / 30e-6 - 1.0).abs() < 1e-12);
        // common practice: one point doubles every 10 K
        let single = LeakageLaw::fit(&[point(40.0, 25.0, 60e-6)]).expect("one point");
        assert!((single.at(40.0, 35.0) / 120e-6 - 1.0).abs() < 1e-12);
        let three =
            LeakageLaw::fit(&[point(40.0, 25.0, 60e-6), point(40.0, 125.0, 15e-3), point(10.0, 25.0, 30e-6)])
                .expect("three points");
        assert!((three.voltage_exponent - 0.5).abs() < 1e-12);
        assert_eq!(LeakageLaw::fit(&[]), None);
    }
}
