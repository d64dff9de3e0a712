//! Board copper, sense resistor and snubber: the keys of a budget's `board`.

use super::datum::Datum;
use super::form::{Form, Key, KeyVisitor};
use crate::units::Dimension as D;

/// Resistances of the board at 25 °C and what else belongs to no part.
///
/// `thermal_coupling` is a matrix between slots; the budget keeps it apart ([`crate::budget::Budget::coupling`]).
#[derive(Clone, Debug, Default, PartialEq)]
pub struct BoardSheet {
    /// In series with the high side, Ω.
    pub high_side_path: Option<Datum>,
    /// In series with the low side or freewheel diode, Ω.
    pub low_side_path: Option<Datum>,
    /// In series with the inductor, Ω.
    pub output_path: Option<Datum>,
    /// Sense resistor in series with the inductor, Ω.
    pub sense: Option<Datum>,
    /// Before the input capacitors, Ω.
    pub input_path: Option<Datum>,
    /// After the output capacitors, Ω.
    pub load_path: Option<Datum>,
    /// Temperature of the copper, °C; ambient when absent.
    pub temperature: Option<Datum>,
    /// Snubber capacitance at the switch node, F.
    pub snubber: Option<Datum>,
}

const HIGH_SIDE_PATH: Key = path("high_side_path", "in series with the high side").example("0.5 mΩ");
const LOW_SIDE_PATH: Key =
    path("low_side_path", "in series with the low side or the freewheel diode").example("0.5 mΩ");
const OUTPUT_PATH: Key = path("output_path", "in series with the inductor").example("1 mΩ");
const SENSE: Key = path("sense", "sense resistor in series with the inductor").example("0 mΩ");
const INPUT_PATH: Key = path("input_path", "fuse, filter, reverse-polarity switch").example("2 mΩ");
const LOAD_PATH: Key =
    path("load_path", "after the output capacitors, inside the regulation loop").example("0 mΩ");
const TEMPERATURE: Key = Key::new("temperature", D::Temperature, "temperature of the copper")
    .signed()
    .sane(-60.0, 200.0)
    .absent("ambient when absent")
    .example("60 °C");
const SNUBBER: Key = Key::new("snubber", D::Capacitance, "RC snubber at the switch node")
    .zero()
    .sane(0.0, 1e-7)
    .example("0 pF");

const fn path(name: &'static str, about: &'static str) -> Key {
    Key::new(name, D::Resistance, about).zero().sane(0.0, 0.5).absent("0 mΩ when absent")
}

impl Form for BoardSheet {
    fn keys(&mut self, v: &mut dyn KeyVisitor) {
        v.optional(&HIGH_SIDE_PATH, &mut self.high_side_path);
        v.optional(&LOW_SIDE_PATH, &mut self.low_side_path);
        v.optional(&OUTPUT_PATH, &mut self.output_path);
        v.optional(&SENSE, &mut self.sense);
        v.optional(&INPUT_PATH, &mut self.input_path);
        v.optional(&LOAD_PATH, &mut self.load_path);
        v.optional(&TEMPERATURE, &mut self.temperature);
        v.optional(&SNUBBER, &mut self.snubber);
    }
}
