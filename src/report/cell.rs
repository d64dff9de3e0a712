//! One cell: a typed value at full precision, or the reason why there is none.

use super::Severity;
use super::number::{self, Form};
use crate::units::Dimension;

/// What stands in a cell.
#[derive(Clone, Debug, PartialEq)]
pub enum Cell {
    /// Nothing, and nothing is expected.
    Blank,
    /// Words.
    Text(String),
    /// A finite number with what it measures and how it is shown.
    Number {
        /// Full precision, in the unit inside the program.
        value: f64,
        /// How it is shown.
        form: Form,
    },
    /// No value, and why.
    Missing {
        /// "drop-out: ...", "not modelled: needs r_ac".
        reason: String,
    },
    /// A value with a remark.
    Flagged {
        /// The value.
        cell: Box<Cell>,
        /// How much the remark matters.
        severity: Severity,
        /// The remark; empty when the text around says it.
        reason: String,
    },
}

impl Cell {
    /// Words.
    pub fn text(words: impl Into<String>) -> Cell {
        Cell::Text(words.into())
    }

    /// A result with three digits and an SI prefix: "44.6 mW".
    pub fn quantity(value: f64, dimension: Dimension) -> Cell {
        Cell::number(value, Form::Result(dimension))
    }

    /// A number that somebody set, as they would write it: "24 V", "62.5 mA".
    pub fn setting(value: f64, dimension: Dimension) -> Cell {
        Cell::number(value, Form::Setting(dimension))
    }

    /// A power in W.
    pub fn watts(value: f64) -> Cell {
        Cell::quantity(value, Dimension::Power)
    }

    /// A temperature in °C, with one decimal; "> 300 °C" above that.
    pub fn temperature(celsius: f64) -> Cell {
        Cell::quantity(celsius, Dimension::Temperature)
    }

    /// An efficiency given as a fraction, in percent with two decimals.
    pub fn efficiency(fraction: f64) -> Cell {
        Cell::number(fraction, Form::Efficiency)
    }

    /// A share of a whole given as a fraction, in percent with one decimal.
    pub fn share(fraction: f64) -> Cell {
        Cell::number(fraction, Form::Share)
    }

    /// A bare number with three digits.
    pub fn ratio(value: f64) -> Cell {
        Cell::quantity(value, Dimension::Number)
    }

    /// A number of things.
    pub fn count(things: u64) -> Cell {
        Cell::number(things as f64, Form::Count)
    }

    /// A number in any form; one that is not finite becomes [`Cell::Missing`].
    pub fn number(value: f64, form: Form) -> Cell {
        if value.is_finite() { Cell::Number { value, form } } else { Cell::missing("no finite value") }
    }

    /// No value, and why.
    pub fn missing(reason: impl Into<String>) -> Cell {
        Cell::Missing { reason: reason.into() }
    }

    /// The same with a remark, which may be empty when the text around says it.
    #[must_use]
    pub fn flagged(self, severity: Severity, reason: impl Into<String>) -> Cell {
        Cell::Flagged { cell: Box::new(self), severity, reason: reason.into() }
    }

    /// The number inside, with its form.
    pub fn value(&self) -> Option<(f64, Form)> {
        match self {
            Cell::Number { value, form } => Some((*value, *form)),
            Cell::Flagged { cell, .. } => cell.value(),
            _ => None,
        }
    }

    /// The cell on its own, with its unit and without remarks: "44.6 mW", "—" for a missing value.
    pub fn shown(&self) -> String {
        match self {
            Cell::Blank => String::new(),
            Cell::Text(words) => words.clone(),
            Cell::Number { value, form } => number::show(*value, *form),
            Cell::Missing { .. } => "—".into(),
            Cell::Flagged { cell, .. } => cell.shown(),
        }
    }

    /// The cell in a sentence, with its remarks: "131 °C !! (above the rating)".
    pub fn sentence(&self) -> String {
        match self {
            Cell::Missing { reason } if !reason.is_empty() => format!("— ({reason})"),
            Cell::Flagged { cell, severity, reason } => {
                let mark = severity.mark();
                let inner = cell.sentence();
                if reason.is_empty() {
                    format!("{inner} {mark}")
                } else {
                    format!("{inner} {mark} ({reason})")
                }
            }
            other => other.shown(),
        }
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn cells_print_on_their_own() {
        assert_eq!(Cell::watts(0.04463).shown(), "44.6 mW");
        assert_eq!(Cell::efficiency(0.93651).shown(), "93.65 %");
        assert_eq!(Cell::watts(f64::NAN).sentence(), "— (no finite value)");
        assert_eq!(Cell::missing("").sentence(), "—");
        let hot = Cell::temperature(131.04).flagged(Severity::Critical, "above the rating");
        assert_eq!(hot.sentence(), "131.0 °C !! (above the rating)");
        assert_eq!(hot.value().map(|(value, _)| value), Some(131.04));
    }
}
