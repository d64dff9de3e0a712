//! Capacitor: the keys of its data sheet.

use super::common::{Descriptive, PRICE};
use super::datum::Datum;
use super::form::{Form, Key, KeyVisitor};
use crate::units::Dimension as D;

/// A capacitor as its data sheet states it.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct CapacitorSheet {
    /// `about`, `source`, `together`.
    pub descriptive: Descriptive,
    /// Capacitance at the working voltage, F.
    pub capacitance: Datum,
    /// Equivalent series resistance, Ω.
    pub esr: Datum,
    /// Equivalent series inductance, H.
    pub esl: Option<Datum>,
    /// Voltage rating, V.
    pub v_max: Datum,
    /// RMS ripple current rating, A.
    pub i_rms_max: Option<Datum>,
    /// Price of one piece.
    pub price: Option<Datum>,
}

const CAPACITANCE: Key = Key::new("capacitance", D::Capacitance, "capacitance at the working voltage")
    .sane(1e-10, 0.1)
    .example("10 µF");
const ESR: Key = Key::new("esr", D::Resistance, "series resistance at the ripple's frequency")
    .zero()
    .sane(1e-5, 10.0)
    .example("3 mΩ");
const ESL: Key = Key::new("esl", D::Inductance, "series inductance")
    .zero()
    .sane(0.0, 1e-7)
    .absent("0 nH assumed when absent")
    .example("0.5 nH")
    .starter();
const V_MAX: Key = Key::new("v_max", D::Voltage, "voltage rating").sane(1.0, 1e3).example("50 V");
const I_RMS_MAX: Key =
    Key::new("i_rms_max", D::Current, "RMS ripple current rating").sane(0.01, 100.0).example("4 A").starter();

impl Form for CapacitorSheet {
    fn keys(&mut self, v: &mut dyn KeyVisitor) {
        self.descriptive.keys(v);
        v.required(&CAPACITANCE, &mut self.capacitance);
        v.required(&ESR, &mut self.esr);
        v.optional(&ESL, &mut self.esl);
        v.required(&V_MAX, &mut self.v_max);
        v.optional(&I_RMS_MAX, &mut self.i_rms_max);
        v.optional(&PRICE, &mut self.price);
    }
}
