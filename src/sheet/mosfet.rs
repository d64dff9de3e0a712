//! MOSFET: the keys of its data sheet.

use super::common::{Descriptive, PRICE, VoltagePoint, distinct};
use super::datum::Datum;
use super::edge_times::{EDGE_TIMES, EdgeTimes};
use super::form::{Faults, Form, Key, KeyVisitor, Need};
use crate::units::Dimension as D;

/// A MOSFET as its data sheet states it.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct MosfetSheet {
    /// `about`, `source`, `together`.
    pub descriptive: Descriptive,
    /// Largest drain-source voltage, V.
    pub v_ds_max: Datum,
    /// Largest gate-source voltage, V.
    pub v_gs_max: Datum,
    /// Largest drain current, A.
    pub i_d_max: Option<Datum>,
    /// Largest junction temperature, °C.
    pub t_j_max: Datum,
    /// On-resistance at 25 °C against gate voltage, Ω.
    pub r_ds_on: Vec<Datum>,
    /// Hot to cold ratio of the on-resistance.
    pub r_ds_on_hot: Option<HotRatio>,
    /// Threshold voltage, V.
    pub v_gs_th: Datum,
    /// Plateau voltage at a drain current, V.
    pub v_gs_plateau: Datum,
    /// Gate-source charge, C.
    pub q_gs: Datum,
    /// Part of the gate-source charge after the threshold, C.
    pub q_gs2: Option<Datum>,
    /// Part of the gate-source charge up to the threshold, C.
    pub q_g_th: Option<Datum>,
    /// `q_gs2 + q_gd`, C.
    pub q_sw: Option<Datum>,
    /// Gate-drain charge at a drain voltage, C.
    pub q_gd: Datum,
    /// Total gate charge at one or more gate voltages, C.
    pub q_g: Vec<Datum>,
    /// Internal gate resistance, Ω.
    pub r_g: Option<Datum>,
    /// Output charge at a drain voltage, C.
    pub q_oss: Option<Datum>,
    /// Output capacitance at a drain voltage, F.
    pub c_oss: Option<Datum>,
    /// Common-source inductance, H.
    pub l_source: Option<Datum>,
    /// Body diode forward voltage against current.
    pub v_sd: Vec<VoltagePoint>,
    /// Reverse recovery of the body diode.
    pub q_rr: Option<Recovery>,
    /// Measured edge times.
    pub edge_times: Option<EdgeTimes>,
    /// Thermal resistance junction to ambient, K/W.
    pub r_th_ja: Option<Datum>,
    /// Price of one piece, in the budget's currency.
    pub price: Option<Datum>,
}

const V_DS_MAX: Key = Key::new("v_ds_max", D::Voltage, "drain-source rating").sane(5.0, 2e3).example("40 V");
const V_GS_MAX: Key = Key::new("v_gs_max", D::Voltage, "gate-source rating").sane(3.0, 40.0).example("20 V");
const I_D_MAX: Key = Key::new("i_d_max", D::Current, "continuous drain current rating")
    .sane(0.05, 2e3)
    .example("50 A")
    .starter();
const T_J_MAX: Key =
    Key::new("t_j_max", D::Temperature, "junction temperature rating").sane(70.0, 250.0).example("150 °C");
const R_DS_ON: Key = Key::new("r_ds_on", D::Resistance, "on-resistance at 25 °C, a point a gate voltage")
    .at(&["v_gs"])
    .sane(1e-4, 2.0)
    .example("{v_gs: 4.5 V, typ: 6.8 mΩ, max: 8.6 mΩ}");
const R_DS_ON_HOT: Key = Key::new("r_ds_on_hot", D::Number, "on-resistance hot over cold")
    .absent("1.5 at 125 °C assumed when absent")
    .starter();
const V_GS_TH: Key = Key::new("v_gs_th", D::Voltage, "threshold")
    .sane(0.3, 6.0)
    .example("{min: 1.2 V, typ: 1.7 V, max: 2.2 V}");
const V_GS_PLATEAU: Key =
    Key::new("v_gs_plateau", D::Voltage, "plateau of the gate charge curve at its test current")
        .at(&["i_d"])
        .sane(0.8, 10.0)
        .example("{i_d: 20 A, typ: 2.9 V}");
const Q_GS: Key = Key::new("q_gs", D::Charge, "gate-source charge").sane(1e-11, 1e-6).example("3.2 nC");
const Q_GS2: Key = Key::new("q_gs2", D::Charge, "its part after the threshold; or q_g_th, or q_sw")
    .sane(1e-12, 1e-6)
    .absent("estimated from q_gs, threshold and plateau when absent")
    .example("1.3 nC")
    .starter();
const Q_G_TH: Key = Key::new("q_g_th", D::Charge, "gate charge at threshold (q_gs2 = q_gs - q_g_th)")
    .sane(1e-12, 1e-6)
    .example("1.9 nC");
const Q_SW: Key =
    Key::new("q_sw", D::Charge, "switching charge (q_gs2 + q_gd)").sane(1e-12, 1e-6).example("3.4 nC");
const Q_GD: Key = Key::new("q_gd", D::Charge, "gate-drain charge at its test voltage")
    .at(&["v_ds"])
    .sane(1e-12, 1e-6)
    .example("{v_ds: 20 V, typ: 2.1 nC}");
const Q_G: Key = Key::new("q_g", D::Charge, "total gate charge, one or more points")
    .at(&["v_gs"])
    .sane(5e-11, 5e-6)
    .example("{v_gs: 4.5 V, typ: 9.5 nC, max: 13 nC}");
const R_G: Key = Key::new("r_g", D::Resistance, "internal gate resistance")
    .zero()
    .sane(0.0, 100.0)
    .absent("1 Ω assumed when absent")
    .example("1.2 Ω")
    .starter();
const Q_OSS: Key = Key::new("q_oss", D::Charge, "output charge; or c_oss")
    .at(&["v_ds"])
    .sane(1e-11, 1e-5)
    .absent("output charge not modelled when both are absent")
    .example("{v_ds: 20 V, typ: 16 nC}")
    .starter();
const C_OSS: Key =
    Key::new("c_oss", D::Capacitance, "output capacitance at its test voltage, instead of q_oss")
        .at(&["v_ds"])
        .sane(1e-12, 1e-7)
        .example("{v_ds: 20 V, typ: 400 pF}");
const L_SOURCE: Key = Key::new("l_source", D::Inductance, "common-source inductance")
    .zero()
    .sane(0.0, 2e-8)
    .absent("0 nH assumed when absent")
    .example("0.2 nH")
    .starter();
const V_SD: Key = Key::new("v_sd", D::Voltage, "body diode forward voltage, one or more points")
    .example("[{i: 1 A, v: 0.70 V}, {i: 20 A, v: 0.84 V}]");
const Q_RR: Key = Key::new("q_rr", D::Charge, "reverse recovery charge of the body diode")
    .at(&["i"])
    .sane(1e-11, 1e-4)
    .absent("recovery not modelled when absent")
    .starter();
const R_TH_JA: Key = Key::new("r_th_ja", D::ThermalResistance, "junction to ambient on your board")
    .sane(0.5, 500.0)
    .absent("the part stays at ambient when absent")
    .example("42 K/W")
    .starter();

impl Form for MosfetSheet {
    fn keys(&mut self, v: &mut dyn KeyVisitor) {
        self.descriptive.keys(v);
        v.required(&V_DS_MAX, &mut self.v_ds_max);
        v.required(&V_GS_MAX, &mut self.v_gs_max);
        v.optional(&I_D_MAX, &mut self.i_d_max);
        v.required(&T_J_MAX, &mut self.t_j_max);
        v.data(&R_DS_ON, Need::Required, &mut self.r_ds_on);
        v.optional_form(&R_DS_ON_HOT, &mut self.r_ds_on_hot);
        v.required(&V_GS_TH, &mut self.v_gs_th);
        v.required(&V_GS_PLATEAU, &mut self.v_gs_plateau);
        v.required(&Q_GS, &mut self.q_gs);
        v.optional(&Q_GS2, &mut self.q_gs2);
        v.optional(&Q_G_TH, &mut self.q_g_th);
        v.optional(&Q_SW, &mut self.q_sw);
        v.required(&Q_GD, &mut self.q_gd);
        v.data(&Q_G, Need::Required, &mut self.q_g);
        v.optional(&R_G, &mut self.r_g);
        v.optional(&Q_OSS, &mut self.q_oss);
        v.optional(&C_OSS, &mut self.c_oss);
        v.optional(&L_SOURCE, &mut self.l_source);
        v.forms(&V_SD, Need::Required, &mut self.v_sd);
        v.optional_form(&Q_RR, &mut self.q_rr);
        v.optional_form(&EDGE_TIMES, &mut self.edge_times);
        v.optional(&R_TH_JA, &mut self.r_th_ja);
        v.optional(&PRICE, &mut self.price);
    }

    fn cross_check(&self, faults: &mut Faults) {
        let (threshold, plateau) = (self.v_gs_th.value, self.v_gs_plateau.value);
        if threshold >= plateau {
            faults.error(
                "v_gs_plateau",
                format!("the plateau ({}) is not above the threshold ({})", volts(plateau), volts(threshold)),
                "check v_gs_th and v_gs_plateau; the plateau of the gate charge curve lies above the threshold",
            );
        }
        for (index, point) in self.r_ds_on.iter().enumerate() {
            let v_gs = point.condition("v_gs").unwrap_or(f64::INFINITY);
            if v_gs <= threshold {
                faults.error(
                    format!("r_ds_on[{index}]"),
                    format!(
                        "stated at v_gs = {}, which is not above the threshold ({})",
                        volts(v_gs),
                        volts(threshold)
                    ),
                    "state the on-resistance at a drive voltage above v_gs_th",
                );
            }
        }
        let v_gs = |point: &Datum| point.condition("v_gs").unwrap_or(f64::NAN);
        distinct("r_ds_on", "v_gs", self.r_ds_on.iter().map(v_gs), faults);
        distinct("q_g", "v_gs", self.q_g.iter().map(v_gs), faults);
        distinct("v_sd", "i", self.v_sd.iter().map(|point| point.i.value), faults);
        let given = [&self.q_gs2, &self.q_g_th, &self.q_sw].iter().filter(|datum| datum.is_some()).count();
        if given > 1 {
            faults.error("q_gs2", "q_gs2, q_g_th and q_sw say the same thing", "keep one of them");
        }
        let q_gs2 = self.q_gs2();
        if !(q_gs2 > 0.0 && q_gs2 <= self.q_gs.value) {
            let path = if self.q_g_th.is_some() {
                "q_g_th"
            } else if self.q_sw.is_some() {
                "q_sw"
            } else {
                "q_gs2"
            };
            if given > 0 {
                faults.error(
                    path,
                    "leaves no charge between threshold and plateau, or more than q_gs",
                    "q_gs2 lies between 0 and q_gs; q_g_th is below q_gs; q_sw is above q_gd",
                );
            }
        }
        if self.q_oss.is_some() && self.c_oss.is_some() {
            faults.error("c_oss", "q_oss and c_oss are both given", "keep q_oss, the better of the two");
        }
        let lowest =
            self.q_g.iter().filter_map(|point| point.condition("v_gs")).fold(f64::INFINITY, f64::min);
        if lowest < plateau + 0.3 {
            faults.warn(
                "q_g",
                "is stated so close to the plateau that its slope beyond is uncertain",
                "add a point of q_g at the drive voltage",
            );
        }
        for (index, point) in self.q_g.iter().enumerate() {
            if point.value < self.q_gs.value + self.q_gd.value {
                faults.warn(
                    format!("q_g[{index}]"),
                    "the total gate charge is below q_gs + q_gd",
                    "check the three charges; the total contains the other two when v_gs is above the plateau",
                );
            }
        }
        if let Some(recovery) = &self.q_rr {
            if recovery.includes_q_oss == Some(true) && recovery.charge.condition("v_r").is_none() {
                faults.error("q_rr", "includes_q_oss needs the reverse voltage of the test", "add v_r");
            }
            if recovery.includes_q_oss == Some(true) && self.q_oss.is_none() && self.c_oss.is_none() {
                faults.error(
                    "q_rr",
                    "includes_q_oss needs q_oss or c_oss to subtract",
                    "add q_oss, or drop includes_q_oss",
                );
            }
        }
        if let Some(hot) = &self.r_ds_on_hot {
            hot.cross_check(faults);
        }
    }
}

fn volts(value: f64) -> String {
    crate::report::number::setting(value, D::Voltage)
}

impl MosfetSheet {
    /// Gate-source charge between threshold and plateau, C (E13); estimated as q_gs (1 - V_th/V_pl) when not given.
    pub fn q_gs2(&self) -> f64 {
        if let Some(given) = &self.q_gs2 {
            given.value
        } else if let Some(q_g_th) = &self.q_g_th {
            self.q_gs.value - q_g_th.value
        } else if let Some(q_sw) = &self.q_sw {
            q_sw.value - self.q_gd.value
        } else {
            self.q_gs.value * (1.0 - self.v_gs_th.value / self.v_gs_plateau.value)
        }
    }

    /// True when the charge between threshold and plateau is an estimate.
    pub fn q_gs2_is_estimated(&self) -> bool {
        self.q_gs2.is_none() && self.q_g_th.is_none() && self.q_sw.is_none()
    }
}

/// Ratio of the on-resistance at a hot junction to that at 25 °C.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct HotRatio {
    /// Hot junction temperature, °C.
    pub t_j: Datum,
    /// R(t_j)/R(25 °C).
    pub ratio: Datum,
}

const HOT_T_J: Key =
    Key::new("t_j", D::Temperature, "junction temperature of the ratio").sane(75.0, 250.0).example("150 °C");
const HOT_RATIO: Key = Key::new("ratio", D::Number, "R(t_j)/R(25 °C)").sane(1.0, 3.0).example("1.7");

impl Form for HotRatio {
    fn keys(&mut self, v: &mut dyn KeyVisitor) {
        v.required(&HOT_T_J, &mut self.t_j);
        v.required(&HOT_RATIO, &mut self.ratio);
    }

    fn cross_check(&self, faults: &mut Faults) {
        if self.t_j.value <= 25.0 {
            faults.error("r_ds_on_hot.t_j", "is not above 25 °C", "give the ratio at a hot junction");
        }
    }
}

/// Reverse recovery charge and how it was measured.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct Recovery {
    /// Charge at the test current, C.
    pub charge: Datum,
    /// Exponent of its growth with current; 0.5 when absent.
    pub exponent: Option<Datum>,
    /// True when the test counted the output charge too.
    pub includes_q_oss: Option<bool>,
}

const RECOVERY: Key = Key::new("q_rr", D::Charge, "recovery charge at its test current")
    .at(&["i"])
    .sane(1e-11, 1e-4)
    .example("i: 20 A, di_dt: 100 A/µs, v_r: 20 V, typ: 20 nC");
const EXPONENT: Key = Key::new("exponent", D::Number, "growth with current, 0.5 to 1")
    .zero()
    .sane(0.3, 1.2)
    .absent("0.5 assumed when absent")
    .example("0.5");
const INCLUDES_Q_OSS: Key =
    Key::new("includes_q_oss", D::Number, "the test counted the output charge too; needs v_r")
        .example("false");

impl Form for Recovery {
    fn keys(&mut self, v: &mut dyn KeyVisitor) {
        v.inline(&RECOVERY, &mut self.charge);
        v.optional(&EXPONENT, &mut self.exponent);
        v.flag(&INCLUDES_Q_OSS, &mut self.includes_q_oss);
    }
}
