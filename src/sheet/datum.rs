//! One number of a data sheet with its tolerance, test conditions and source.

use crate::units::Dimension;

/// A quantity as it is meant: SI value, the limits printed beside it, how it was tested and who says so.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct Datum {
    /// Value the model uses now; after reading this is the typical one, `values` may set another.
    pub value: f64,
    /// Lower limit.
    pub min: Option<f64>,
    /// Typical value.
    pub typ: Option<f64>,
    /// Upper limit.
    pub max: Option<f64>,
    /// One standard deviation, in the unit of the value.
    pub sigma: Option<f64>,
    /// Where the number was read: "p. 4", "measured".
    pub source: Option<Box<str>>,
    /// Test conditions printed beside the value.
    pub conditions: Vec<Condition>,
}

/// A test condition: its key (`v_ds`), SI value and dimension.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Condition {
    /// Key as in the file.
    pub key: &'static str,
    /// SI value.
    pub value: f64,
    /// What it measures.
    pub dimension: Dimension,
}

/// Keys of conditions that any quantity may carry, with what they measure.
pub const CONDITIONS: [(&str, Dimension); 8] = [
    ("v_gs", Dimension::Voltage),
    ("v_ds", Dimension::Voltage),
    ("v_r", Dimension::Voltage),
    ("i_d", Dimension::Current),
    ("i", Dimension::Current),
    ("t_j", Dimension::Temperature),
    ("frequency", Dimension::Frequency),
    ("di_dt", Dimension::CurrentSlope),
];

impl Datum {
    /// A plain value without tolerance.
    pub fn of(value: f64) -> Self {
        Datum { value, typ: Some(value), ..Datum::default() }
    }

    /// A plain value measured at one stated condition.
    pub fn at(value: f64, key: &'static str, condition: f64) -> Self {
        let dimension = CONDITIONS.iter().find(|(name, _)| *name == key).map_or(Dimension::Number, |c| c.1);
        Datum { conditions: vec![Condition { key, value: condition, dimension }], ..Datum::of(value) }
    }

    /// Value of a stated test condition.
    pub fn condition(&self, key: &str) -> Option<f64> {
        self.conditions.iter().find(|condition| condition.key == key).map(|condition| condition.value)
    }

    /// The typical value: `typ`, else the middle of `min` and `max`, else `max`, else `min`.
    pub fn typical(&self) -> Option<f64> {
        match (self.typ, self.min, self.max) {
            (Some(typ), _, _) => Some(typ),
            (None, Some(min), Some(max)) => Some(0.5 * (min + max)),
            (None, None, Some(max)) => Some(max),
            (None, Some(min), None) => Some(min),
            (None, None, None) => None,
        }
    }

    /// True when the value used as typical is not printed as such.
    pub fn typical_is_assumed(&self) -> bool {
        self.typ.is_none()
    }

    /// True when the sheet gives a limit or a deviation besides the typical value.
    pub fn has_tolerance(&self) -> bool {
        self.sigma.is_some()
            || [self.min, self.max].iter().flatten().any(|limit| Some(*limit) != self.typical())
    }
}
