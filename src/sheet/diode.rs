//! Diode: the keys of its data sheet.

use super::common::{Descriptive, PRICE, VoltagePoint, distinct};
use super::datum::Datum;
use super::form::{Faults, Form, Key, KeyVisitor, Need};
use super::mosfet::Recovery;
use crate::units::Dimension as D;

/// A Schottky or PN diode as its data sheet states it.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct DiodeSheet {
    /// `about`, `source`, `together`.
    pub descriptive: Descriptive,
    /// Largest repetitive reverse voltage, V.
    pub v_rrm: Datum,
    /// Largest forward current, A.
    pub i_f_max: Datum,
    /// Largest junction temperature, °C.
    pub t_j_max: Datum,
    /// Forward voltage against current at one or two temperatures.
    pub v_f: Vec<ForwardCurve>,
    /// Reverse leakage at voltages and temperatures.
    pub i_r: Vec<LeakagePoint>,
    /// Junction charge at a reverse voltage, C.
    pub q_c: Option<Datum>,
    /// Junction capacitance at a reverse voltage, F.
    pub c_j: Option<Datum>,
    /// Reverse recovery, PN diodes only.
    pub q_rr: Option<Recovery>,
    /// Thermal resistance junction to ambient, K/W.
    pub r_th_ja: Option<Datum>,
    /// Price of one piece.
    pub price: Option<Datum>,
}

const V_RRM: Key = Key::new("v_rrm", D::Voltage, "reverse voltage rating").sane(5.0, 2e3).example("40 V");
const I_F_MAX: Key =
    Key::new("i_f_max", D::Current, "forward current rating").sane(0.01, 1e3).example("10 A");
const T_J_MAX: Key =
    Key::new("t_j_max", D::Temperature, "junction temperature rating").sane(70.0, 250.0).example("125 °C");
const V_F: Key = Key::new("v_f", D::Voltage, "forward voltage, points at one or two junction temperatures")
    .example("[{t_j: 25 °C, points: [{i: 1 A, v: 0.36 V}, {i: 10 A, v: 0.50 V}]}]");
const I_R: Key = Key::new("i_r", D::Current, "reverse leakage at voltages and temperatures")
    .absent("leakage not modelled when absent; one point: doubling per 10 K assumed")
    .starter()
    .example("[{v_r: 40 V, t_j: 25 °C, i: 60 µA}, {v_r: 40 V, t_j: 125 °C, i: 15 mA}]");
const Q_C: Key = Key::new("q_c", D::Charge, "junction charge; or c_j")
    .at(&["v_r"])
    .sane(1e-12, 1e-6)
    .absent("its share of output charge not modelled when both are absent")
    .example("{v_r: 20 V, typ: 8 nC}")
    .starter();
const C_J: Key = Key::new("c_j", D::Capacitance, "junction capacitance at its test voltage, instead of q_c")
    .at(&["v_r"])
    .sane(1e-13, 1e-7)
    .example("{v_r: 20 V, typ: 200 pF}");
const Q_RR: Key = Key::new("q_rr", D::Charge, "reverse recovery charge, PN diodes only");
const R_TH_JA: Key = Key::new("r_th_ja", D::ThermalResistance, "junction to ambient on your board")
    .sane(0.5, 500.0)
    .absent("the part stays at ambient when absent")
    .example("25 K/W")
    .starter();

impl Form for DiodeSheet {
    fn keys(&mut self, v: &mut dyn KeyVisitor) {
        self.descriptive.keys(v);
        v.required(&V_RRM, &mut self.v_rrm);
        v.required(&I_F_MAX, &mut self.i_f_max);
        v.required(&T_J_MAX, &mut self.t_j_max);
        v.forms(&V_F, Need::Required, &mut self.v_f);
        v.forms(&I_R, Need::Optional, &mut self.i_r);
        v.optional(&Q_C, &mut self.q_c);
        v.optional(&C_J, &mut self.c_j);
        v.optional_form(&Q_RR, &mut self.q_rr);
        v.optional(&R_TH_JA, &mut self.r_th_ja);
        v.optional(&PRICE, &mut self.price);
    }

    fn cross_check(&self, faults: &mut Faults) {
        if self.v_f.len() > 2 {
            faults.error("v_f", "has more than two temperatures", "keep the coldest and the hottest");
        }
        if let [a, b] = self.v_f.as_slice()
            && a.t_j.value == b.t_j.value
        {
            faults.error(
                "v_f[1].t_j",
                "is the temperature of the first list",
                "give two different temperatures",
            );
        }
        for (index, curve) in self.v_f.iter().enumerate() {
            distinct(
                &format!("v_f[{index}].points"),
                "i",
                curve.points.iter().map(|point| point.i.value),
                faults,
            );
        }
        if self.q_c.is_some() && self.c_j.is_some() {
            faults.error("c_j", "q_c and c_j are both given", "keep q_c, the better of the two");
        }
        if let Some(recovery) = &self.q_rr
            && recovery.includes_q_oss == Some(true)
        {
            if recovery.charge.condition("v_r").is_none() {
                faults.error("q_rr", "includes_q_oss needs the reverse voltage of the test", "add v_r");
            }
            if self.q_c.is_none() && self.c_j.is_none() {
                faults.error(
                    "q_rr",
                    "includes_q_oss needs q_c or c_j to subtract",
                    "add q_c, or drop includes_q_oss",
                );
            }
        }
    }
}

/// Forward voltage against current at one junction temperature.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct ForwardCurve {
    /// Junction temperature, °C.
    pub t_j: Datum,
    /// Points of the curve.
    pub points: Vec<VoltagePoint>,
}

const CURVE_T_J: Key = Key::new("t_j", D::Temperature, "junction temperature of the points")
    .signed()
    .sane(-60.0, 250.0)
    .example("25 °C");
const CURVE_POINTS: Key = Key::new("points", D::Voltage, "forward voltage at currents");

impl Form for ForwardCurve {
    fn keys(&mut self, v: &mut dyn KeyVisitor) {
        v.required(&CURVE_T_J, &mut self.t_j);
        v.forms(&CURVE_POINTS, Need::Required, &mut self.points);
    }
}

/// Reverse leakage at a voltage and a temperature.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct LeakagePoint {
    /// Reverse voltage, V.
    pub v_r: Datum,
    /// Junction temperature, °C.
    pub t_j: Datum,
    /// Leakage, A.
    pub i: Datum,
}

const LEAK_V_R: Key = Key::new("v_r", D::Voltage, "reverse voltage").sane(1.0, 2e3).example("40 V");
const LEAK_T_J: Key =
    Key::new("t_j", D::Temperature, "junction temperature").signed().sane(-60.0, 250.0).example("25 °C");
const LEAK_I: Key = Key::new("i", D::Current, "leakage").sane(1e-10, 1.0).example("60 µA");

impl Form for LeakagePoint {
    fn keys(&mut self, v: &mut dyn KeyVisitor) {
        v.required(&LEAK_V_R, &mut self.v_r);
        v.required(&LEAK_T_J, &mut self.t_j);
        v.required(&LEAK_I, &mut self.i);
    }
}
