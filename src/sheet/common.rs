//! Keys that several kinds of part share.

use super::datum::Datum;
use super::form::{Faults, Form, Key, KeyVisitor};
use crate::units::Dimension as D;

/// What any part may say of itself.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct Descriptive {
    /// One line on the part.
    pub about: Option<String>,
    /// Where its values come from.
    pub source: Option<String>,
    /// True when its tolerances move together.
    pub together: Option<bool>,
}

const ABOUT: Key = Key::new("about", D::Number, "one line on the part").example("40 V logic level, 5 x 6 mm");
const SOURCE: Key =
    Key::new("source", D::Number, "where the values come from").example("data sheet rev. 2, measured");
const TOGETHER: Key = Key::new("together", D::Number, "its tolerances move together").example("false");

impl Form for Descriptive {
    fn keys(&mut self, v: &mut dyn KeyVisitor) {
        v.text(&ABOUT, &mut self.about);
        v.text(&SOURCE, &mut self.source);
        v.flag(&TOGETHER, &mut self.together);
    }
}

/// Key of the price of one piece.
pub const PRICE: Key =
    Key::new("price", D::Number, "price of one piece in the budget's currency").zero().example("0.38");

/// A forward voltage at a current.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct VoltagePoint {
    /// Current, A.
    pub i: Datum,
    /// Voltage, V.
    pub v: Datum,
}

const POINT_I: Key = Key::new("i", D::Current, "current").sane(1e-6, 1e4).example("20 A");
const POINT_V: Key = Key::new("v", D::Voltage, "voltage").sane(0.01, 5.0).example("0.84 V");

impl Form for VoltagePoint {
    fn keys(&mut self, v: &mut dyn KeyVisitor) {
        v.required(&POINT_I, &mut self.i);
        v.required(&POINT_V, &mut self.v);
    }
}

/// Blames the later of two points at the same place of a table: a curve has one value there.
pub fn distinct(path: &str, key: &str, places: impl IntoIterator<Item = f64>, faults: &mut Faults) {
    let mut seen: Vec<f64> = Vec::new();
    for (index, place) in places.into_iter().enumerate() {
        if seen.contains(&place) {
            faults.error(
                format!("{path}[{index}]"),
                format!("has the same {key} as an earlier point"),
                "keep one of the two",
            );
        }
        seen.push(place);
    }
}
