//! MOSFET: the curves of the model, for n devices in parallel.

use crate::near::{Power, at_least};
use crate::parts::curve::Curve;
use crate::parts::junction::JunctionCharge;
use crate::sheet::edge_times::EdgeTimes;
use crate::sheet::mosfet::{MosfetSheet, Recovery};
use crate::stage::Placed;

/// n MOSFETs in parallel with the curves read from their data sheet.
#[derive(Clone, Debug, PartialEq)]
pub struct Mosfet {
    /// Number in parallel.
    pub n: f64,
    /// 1/n
    share: f64,
    /// On-resistance of one device at 25 °C against gate voltage.
    pub on_resistance: OnResistance,
    /// Exponent p of R(T) = R_25 (T/298.15 K)^p (E11).
    pub hot_exponent: f64,
    /// The power with this exponent.
    hot: Power,
    /// Threshold voltage, V.
    pub v_th: f64,
    /// 1/V_th, 1/V.
    pub per_threshold: f64,
    /// Transconductance of all devices, n I_test/(V_pl,test - V_th), S (E13).
    pub transconductance: f64,
    /// Its inverse, V/A.
    volts_per_ampere: f64,
    /// Gate capacitance between threshold and plateau of all devices, F (E13).
    pub gate_capacitance: f64,
    /// Gate-drain charge of all devices against voltage.
    pub q_gd: JunctionCharge,
    /// Output charge of all devices against voltage, when known.
    pub q_oss: Option<JunctionCharge>,
    /// Gate charge of one device.
    pub gate_charge: GateCharge,
    /// Internal gate resistance of all devices in parallel, Ω.
    pub r_g: f64,
    /// Common-source inductance of all devices in parallel, H.
    pub l_source: f64,
    /// Body diode forward voltage of one device.
    pub v_sd: Curve,
    /// Reverse recovery of the body diode, when known.
    pub recovery: Option<RecoveryLaw>,
    /// Measured edge times.
    pub edge_times: GivenEdges,
    /// Thermal resistance junction to ambient of one device, K/W.
    pub r_th: Option<f64>,
}

impl Mosfet {
    /// Fits the curves; edge times of the driver win over those of the part.
    pub fn fit(placed: &Placed<MosfetSheet>, driver_edges: Option<&EdgeTimes>) -> Self {
        let (sheet, n) = (&*placed.sheet, f64::from(placed.count));
        let (v_th, v_pl) = (sheet.v_gs_th.value, sheet.v_gs_plateau.value);
        let i_test = sheet.v_gs_plateau.condition("i_d").unwrap_or(1.0);
        let q_gd = JunctionCharge::from_sheet(Some(&sheet.q_gd), None, "v_ds").unwrap_or_default();
        let q_oss = JunctionCharge::from_sheet(sheet.q_oss.as_ref(), sheet.c_oss.as_ref(), "v_ds");
        let own_edges = sheet.edge_times.clone().unwrap_or_default();
        let edges = driver_edges.cloned().unwrap_or_default().or(Some(&own_edges));
        Mosfet {
            n,
            share: 1.0 / n,
            on_resistance: OnResistance::fit(sheet),
            hot_exponent: hot_exponent(sheet),
            hot: Power::of(hot_exponent(sheet)),
            v_th,
            per_threshold: 1.0 / v_th,
            transconductance: n * i_test / (v_pl - v_th),
            volts_per_ampere: (v_pl - v_th) / (n * i_test),
            gate_capacitance: n * sheet.q_gs2() / (v_pl - v_th),
            q_gd: q_gd.times(n),
            q_oss: q_oss.map(|q| q.times(n)),
            gate_charge: GateCharge::fit(sheet),
            r_g: sheet.r_g.as_ref().map_or(ASSUMED_GATE_RESISTANCE, |r_g| r_g.value) / n,
            l_source: sheet.l_source.as_ref().map_or(0.0, |l| l.value) / n,
            v_sd: Curve::through(sheet.v_sd.iter().map(|point| (point.i.value, point.v.value))),
            recovery: sheet.q_rr.as_ref().map(|recovery| RecoveryLaw::fit(recovery, n, q_oss)),
            edge_times: GivenEdges::fit(&edges),
            r_th: sheet.r_th_ja.as_ref().map(|r_th| r_th.value),
        }
    }

    /// R(T_j)/R(25 °C) = ((T_j + 273.15)/298.15)^p (E11).
    #[inline(always)]
    pub fn hot_ratio(&self, t_j: f64) -> f64 {
        self.hot.at((t_j + ZERO_KELVIN) * (1.0 / COLD_KELVIN))
    }

    /// Plateau voltage at a drain current of all devices (E13), V.
    #[inline(always)]
    pub fn plateau(&self, current: f64) -> f64 {
        self.v_th + current * self.volts_per_ampere
    }

    /// Body diode forward voltage at a current of all devices, V; never below 50 mV.
    #[inline(always)]
    pub fn body_diode(&self, current: f64) -> f64 {
        at_least(0.05, self.v_sd.at(current * self.share))
    }
}

/// 0 °C in K.
const ZERO_KELVIN: f64 = 273.15;
/// 25 °C in K, the reference of on-resistances.
const COLD_KELVIN: f64 = 298.15;
/// Internal gate resistance assumed when the data sheet prints none, Ω.
pub const ASSUMED_GATE_RESISTANCE: f64 = 1.0;
/// Hot to cold ratio assumed when the data sheet prints none (common practice), at 125 °C.
pub const ASSUMED_HOT_RATIO: f64 = 1.5;

fn hot_exponent(sheet: &MosfetSheet) -> f64 {
    let (t_hot, ratio) = match &sheet.r_ds_on_hot {
        Some(hot) => (hot.t_j.value, hot.ratio.value),
        None => (125.0, ASSUMED_HOT_RATIO),
    };
    ratio.ln() / ((t_hot + ZERO_KELVIN) / COLD_KELVIN).ln()
}

/// On-resistance of one device at 25 °C against gate voltage (E10).
#[derive(Clone, Debug, PartialEq)]
pub struct OnResistance {
    /// Points (v_gs, R), sorted by voltage.
    points: Vec<[f64; 2]>,
    v_th: f64,
}

impl OnResistance {
    fn fit(sheet: &MosfetSheet) -> Self {
        let mut points: Vec<[f64; 2]> = sheet
            .r_ds_on
            .iter()
            .map(|point| [point.condition("v_gs").unwrap_or(10.0), point.value])
            .collect();
        points.sort_by(|a, b| a[0].total_cmp(&b[0]));
        OnResistance { points, v_th: sheet.v_gs_th.value }
    }

    /// Lowest gate voltage for which the data sheet states a resistance, V.
    pub fn lowest_specified(&self) -> f64 {
        self.points.first().map_or(0.0, |point| point[0])
    }

    /// R = a + b/(v_gs - V_th) between neighbouring points, clamped at both ends, Ω.
    pub fn at(&self, v_gs: f64) -> f64 {
        let (Some(first), Some(last)) = (self.points.first(), self.points.last()) else {
            return 0.0;
        };
        if v_gs <= first[0] {
            return first[1];
        }
        for pair in self.points.windows(2) {
            if let [[v_a, r_a], [v_b, r_b]] = *pair
                && v_gs < v_b
            {
                // inverse overdrive: the law is a straight line in it
                let inverse = |v: f64| 1.0 / (v - self.v_th);
                let b = (r_a - r_b) / (inverse(v_a) - inverse(v_b));
                return r_b + b * (inverse(v_gs) - inverse(v_b));
            }
        }
        last[1]
    }
}

/// Gate charge of one device against gate voltage (E20).
#[derive(Clone, Debug, PartialEq)]
pub struct GateCharge {
    /// Points (v_gs, Q_g), sorted by voltage.
    points: Vec<[f64; 2]>,
    /// Q_gs + Q_gd as printed, C.
    floor: f64,
    /// Q_gd as printed, C.
    pub q_gd: f64,
    v_plateau: f64,
}

impl GateCharge {
    fn fit(sheet: &MosfetSheet) -> Self {
        let mut points: Vec<[f64; 2]> =
            sheet.q_g.iter().map(|point| [point.condition("v_gs").unwrap_or(10.0), point.value]).collect();
        points.sort_by(|a, b| a[0].total_cmp(&b[0]));
        GateCharge {
            points,
            floor: sheet.q_gs.value + sheet.q_gd.value,
            q_gd: sheet.q_gd.value,
            v_plateau: sheet.v_gs_plateau.value,
        }
    }

    /// Q_g(V), C: linear between points; beyond them along the slope from the plateau, not below Q_gs + Q_gd.
    pub fn at(&self, v: f64) -> f64 {
        let charge = match self.points.as_slice() {
            [] => 0.0,
            [first, ..] if v <= first[0] => self.beyond(*first, v),
            [.., last] if v >= last[0] => self.beyond(*last, v),
            points => points.windows(2).find(|pair| v < pair[1][0]).map_or(0.0, |pair| {
                pair[0][1] + (pair[1][1] - pair[0][1]) * (v - pair[0][0]) / (pair[1][0] - pair[0][0])
            }),
        };
        charge.max(self.floor)
    }

    fn beyond(&self, [v_ref, q_ref]: [f64; 2], v: f64) -> f64 {
        let rise = v_ref - self.v_plateau;
        let slope = if rise > 0.0 { ((q_ref - self.floor) / rise).max(0.0) } else { 0.0 };
        q_ref + (v - v_ref) * slope
    }
}

/// Recovery charge of n devices against the current that is switched off (E18).
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct RecoveryLaw {
    /// n Q_rr,ref, C.
    pub charge: f64,
    /// n I_ref, A.
    pub current: f64,
    /// 1/(n I_ref), 1/A.
    pub per_current: f64,
    /// Exponent of the growth with current.
    pub exponent: f64,
    /// Output charge that the test counted too, C.
    pub counted_output_charge: f64,
}

/// Growth of the recovery charge with current when the data sheet says nothing (from memory; 0.5 to 1 in the literature).
pub const ASSUMED_RECOVERY_EXPONENT: f64 = 0.5;

impl RecoveryLaw {
    /// From the data sheet of one device; `junction` is its output or junction charge.
    pub fn fit(recovery: &Recovery, n: f64, junction: Option<JunctionCharge>) -> Self {
        let counted = match (recovery.includes_q_oss, recovery.charge.condition("v_r"), junction) {
            (Some(true), Some(v_r), Some(junction)) => n * junction.charge(v_r),
            _ => 0.0,
        };
        let current = n * recovery.charge.condition("i").unwrap_or(1.0);
        RecoveryLaw {
            charge: n * recovery.charge.value,
            current,
            per_current: 1.0 / current,
            exponent: recovery.exponent.as_ref().map_or(ASSUMED_RECOVERY_EXPONENT, |exponent| exponent.value),
            counted_output_charge: counted,
        }
    }
}

/// Edge times that were measured, s.
#[derive(Clone, Copy, Debug, Default, PartialEq)]
pub struct GivenEdges {
    /// Current rise at turn-on.
    pub t_ri: Option<f64>,
    /// Voltage fall at turn-on.
    pub t_fv: Option<f64>,
    /// Voltage rise at turn-off.
    pub t_rv: Option<f64>,
    /// Current fall at turn-off.
    pub t_fi: Option<f64>,
}

impl GivenEdges {
    fn fit(edges: &EdgeTimes) -> Self {
        GivenEdges {
            t_ri: edges.t_ri.as_ref().map(|t| t.value),
            t_fv: edges.t_fv.as_ref().map(|t| t.value),
            t_rv: edges.t_rv.as_ref().map(|t| t.value),
            t_fi: edges.t_fi.as_ref().map(|t| t.value),
        }
    }
}
