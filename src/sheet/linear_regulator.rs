//! Linear regulator: the keys of its data sheet.

use super::common::{Descriptive, PRICE, distinct};
use super::datum::Datum;
use super::form::{Faults, Form, Key, KeyVisitor, Need};
use crate::units::Dimension as D;

/// A linear regulator as its data sheet states it.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct LinearRegulatorSheet {
    /// `about`, `source`, `together`.
    pub descriptive: Descriptive,
    /// Largest input voltage, V.
    pub v_in_max: Datum,
    /// Largest output current, A.
    pub i_out_max: Datum,
    /// Drop-out voltage against load.
    pub dropout: Vec<DropoutPoint>,
    /// Ground current against load.
    pub i_gnd: Vec<GroundPoint>,
    /// Thermal resistance junction to ambient, K/W.
    pub r_th_ja: Option<Datum>,
    /// Largest junction temperature, °C.
    pub t_j_max: Datum,
    /// Price of one piece.
    pub price: Option<Datum>,
}

const V_IN_MAX: Key =
    Key::new("v_in_max", D::Voltage, "input voltage rating").sane(1.5, 500.0).example("36 V");
const I_OUT_MAX: Key =
    Key::new("i_out_max", D::Current, "output current rating").sane(1e-3, 100.0).example("5 A");
const DROPOUT: Key = Key::new("dropout", D::Voltage, "drop-out voltage against load")
    .example("[{i: 0.1 A, v: 0.15 V}, {i: 5 A, v: 0.9 V}]");
const I_GND: Key = Key::new("i_gnd", D::Current, "ground current against load")
    .example("[{i: 0 A, i_gnd: 1 mA}, {i: 5 A, i_gnd: 60 mA}]");
const R_TH_JA: Key = Key::new("r_th_ja", D::ThermalResistance, "junction to ambient on your board")
    .sane(0.5, 500.0)
    .absent("the part stays at ambient when absent")
    .example("18 K/W")
    .starter();
const T_J_MAX: Key =
    Key::new("t_j_max", D::Temperature, "junction temperature rating").sane(70.0, 250.0).example("125 °C");

impl Form for LinearRegulatorSheet {
    fn keys(&mut self, v: &mut dyn KeyVisitor) {
        self.descriptive.keys(v);
        v.required(&V_IN_MAX, &mut self.v_in_max);
        v.required(&I_OUT_MAX, &mut self.i_out_max);
        v.forms(&DROPOUT, Need::Required, &mut self.dropout);
        v.forms(&I_GND, Need::Required, &mut self.i_gnd);
        v.optional(&R_TH_JA, &mut self.r_th_ja);
        v.required(&T_J_MAX, &mut self.t_j_max);
        v.optional(&PRICE, &mut self.price);
    }

    fn cross_check(&self, faults: &mut Faults) {
        distinct("dropout", "i", self.dropout.iter().map(|point| point.i.value), faults);
        distinct("i_gnd", "i", self.i_gnd.iter().map(|point| point.i.value), faults);
    }
}

/// Drop-out voltage at a load.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct DropoutPoint {
    /// Load, A.
    pub i: Datum,
    /// Smallest input less output voltage, V.
    pub v: Datum,
}

const DROPOUT_I: Key = Key::new("i", D::Current, "load").zero().sane(0.0, 100.0).example("5 A");
const DROPOUT_V: Key =
    Key::new("v", D::Voltage, "drop-out voltage there").zero().sane(0.0, 5.0).example("0.9 V");

impl Form for DropoutPoint {
    fn keys(&mut self, v: &mut dyn KeyVisitor) {
        v.required(&DROPOUT_I, &mut self.i);
        v.required(&DROPOUT_V, &mut self.v);
    }
}

/// Ground current at a load.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct GroundPoint {
    /// Load, A.
    pub i: Datum,
    /// Ground current, A.
    pub i_gnd: Datum,
}

const GROUND_I: Key = Key::new("i", D::Current, "load").zero().sane(0.0, 100.0).example("0 A");
const GROUND_I_GND: Key =
    Key::new("i_gnd", D::Current, "ground current there").zero().sane(0.0, 1.0).example("1 mA");

impl Form for GroundPoint {
    fn keys(&mut self, v: &mut dyn KeyVisitor) {
        v.required(&GROUND_I, &mut self.i);
        v.required(&GROUND_I_GND, &mut self.i_gnd);
    }
}
