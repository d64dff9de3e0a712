//! Measured edge times, on a MOSFET or on a controller's driver.

use super::datum::Datum;
use super::form::{Form, Key, KeyVisitor};
use crate::units::Dimension as D;

/// Key under which edge times stand.
pub const EDGE_TIMES: Key =
    Key::new("edge_times", D::Time, "measured edge times; each one given replaces its formula");

/// Measured durations of the four edges, each of which replaces its formula in E15.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct EdgeTimes {
    /// Current rise at turn-on, s.
    pub t_ri: Option<Datum>,
    /// Voltage fall at turn-on, s.
    pub t_fv: Option<Datum>,
    /// Voltage rise at turn-off, s.
    pub t_rv: Option<Datum>,
    /// Current fall at turn-off, s.
    pub t_fi: Option<Datum>,
}

const T_RI: Key =
    Key::new("t_ri", D::Time, "current rise at turn-on").zero().sane(1e-10, 1e-6).example("2 ns");
const T_FV: Key =
    Key::new("t_fv", D::Time, "voltage fall at turn-on").zero().sane(1e-10, 1e-6).example("4 ns");
const T_RV: Key =
    Key::new("t_rv", D::Time, "voltage rise at turn-off").zero().sane(1e-10, 1e-6).example("4 ns");
const T_FI: Key =
    Key::new("t_fi", D::Time, "current fall at turn-off").zero().sane(1e-10, 1e-6).example("2 ns");

impl Form for EdgeTimes {
    fn keys(&mut self, v: &mut dyn KeyVisitor) {
        v.optional(&T_RI, &mut self.t_ri);
        v.optional(&T_FV, &mut self.t_fv);
        v.optional(&T_RV, &mut self.t_rv);
        v.optional(&T_FI, &mut self.t_fi);
    }
}

impl EdgeTimes {
    /// These times where given, else those of another source.
    pub fn or(&self, other: Option<&EdgeTimes>) -> EdgeTimes {
        let pick = |own: &Option<Datum>, get: fn(&EdgeTimes) -> &Option<Datum>| {
            own.clone().or_else(|| other.and_then(|other| get(other).clone()))
        };
        EdgeTimes {
            t_ri: pick(&self.t_ri, |e| &e.t_ri),
            t_fv: pick(&self.t_fv, |e| &e.t_fv),
            t_rv: pick(&self.t_rv, |e| &e.t_rv),
            t_fi: pick(&self.t_fi, |e| &e.t_fi),
        }
    }
}
