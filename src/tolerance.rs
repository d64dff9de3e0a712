//! Values that move as one, and stages fitted with some of them moved.
//!
//! The list of values is that of [`crate::values`]; the points of one list (`r_ds_on[0]`, `r_ds_on[1]`) are one curve
//! and move together.

use crate::budget::{Budget, Coupling};
use crate::fitted::Stage;
use crate::sheet::{BoardSheet, Datum};
use crate::stage::StageSheet;
use crate::units::Dimension;
use crate::values;
use crate::worst::Side;

/// Standard deviations at which a value without printed limits counts as at its limit (common practice).
pub const SIGMAS_AT_LIMIT: f64 = 3.0;

/// Values of one key that move as one.
#[derive(Clone, Debug, PartialEq)]
pub struct Lever {
    /// Slot and key without places in lists: `high_side.r_ds_on`.
    pub path: String,
    /// Name of the part, or "board".
    pub part: String,
    /// What it measures.
    pub dimension: Dimension,
    /// One line on what it is.
    pub about: &'static str,
    /// What moves with it beyond its own list: the slot when the part's tolerances move together.
    pub together: Option<String>,
    /// Place in the list of all values, and the value.
    pub members: Vec<(usize, Datum)>,
}

/// Values by their place in the list of all values.
pub type Settings = Vec<(usize, f64)>;

impl Lever {
    /// True when a limit is printed that differs from the typical value.
    pub fn has_limits(&self) -> bool {
        let limited = |datum: &Datum| {
            let typical = datum.typical();
            [datum.min, datum.max].into_iter().flatten().any(|limit| Some(limit) != typical)
        };
        self.members.iter().any(|(_, datum)| limited(datum))
    }

    /// True when a limit or a deviation is stated.
    pub fn has_tolerance(&self) -> bool {
        self.members.iter().any(|(_, datum)| datum.has_tolerance())
    }

    /// Its values on one side.
    pub fn settings(&self, side: Side) -> Settings {
        self.members.iter().map(|(place, datum)| (*place, limit(datum, side))).collect()
    }

    /// Its values times a factor.
    pub fn scaled(&self, factor: f64) -> Settings {
        self.members.iter().map(|(place, datum)| (*place, datum.value * factor)).collect()
    }

    /// Its values moved by a step.
    pub fn moved(&self, step: f64) -> Settings {
        self.members.iter().map(|(place, datum)| (*place, datum.value + step)).collect()
    }

    /// The first value, which stands for a curve of several.
    pub fn value(&self) -> f64 {
        self.members.first().map_or(0.0, |(_, datum)| datum.value)
    }
}

/// A value at a limit: as printed, else three standard deviations away, else typical.
fn limit(datum: &Datum, side: Side) -> f64 {
    let away = |sign: f64| datum.sigma.map(|sigma| datum.value + sign * SIGMAS_AT_LIMIT * sigma);
    let limit = match side {
        Side::Typical => None,
        Side::Low => datum.min.or_else(|| if datum.max.is_none() { away(-1.0) } else { None }),
        Side::High => datum.max.or_else(|| if datum.min.is_none() { away(1.0) } else { None }),
    };
    limit.unwrap_or(datum.value)
}

/// A stage on its rail whose values can be moved.
#[derive(Clone, Debug)]
pub struct Rig {
    sheet: StageSheet,
    board: BoardSheet,
    coupling: Vec<Coupling>,
    output_voltage: f64,
}

impl Rig {
    /// A stage of a budget.
    pub fn new(budget: &Budget, sheet: &StageSheet) -> Self {
        Rig {
            sheet: sheet.clone(),
            board: budget.board.clone(),
            coupling: budget.coupling.clone(),
            output_voltage: budget.output_voltage,
        }
    }

    /// The same with every resistance of the board that the budget leaves out present as 0 Ω, so that it can be moved.
    #[must_use]
    pub fn with_whole_board(mut self) -> Self {
        values::fill_board(&mut self.board);
        self
    }

    /// All levers of the values that the model reads, in the order of the ledger.
    pub fn levers(&self) -> Vec<Lever> {
        let mut levers: Vec<Lever> = Vec::new();
        for (place, value) in values::all(&self.sheet, &self.board).into_iter().enumerate() {
            if !value.modelled {
                continue;
            }
            let (slot, key) = value.path.split_once('.').unwrap_or((&value.path, ""));
            let path = format!("{slot}.{}", without_places(key));
            let together = value.together.then(|| slot.to_owned());
            match levers.iter_mut().find(|lever| lever.path == path) {
                Some(lever) => lever.members.push((place, value.datum)),
                None => levers.push(Lever {
                    path,
                    part: value.part,
                    dimension: value.dimension,
                    about: value.about,
                    together,
                    members: vec![(place, value.datum)],
                }),
            }
        }
        levers
    }

    /// The stage with some values moved.
    ///
    /// # Errors
    /// Why the values contradict one another.
    pub fn fit(&self, settings: &[(usize, f64)]) -> Result<Stage, String> {
        let (sheet, board) = self.sheets(settings);
        match values::contradiction(&sheet) {
            Some(reason) => Err(reason),
            None => Ok(Stage::on_rail(&sheet.circuit, self.output_voltage, &board, &self.coupling)),
        }
    }

    /// The sheets of the stage and of its board with some values moved.
    pub fn sheets(&self, settings: &[(usize, f64)]) -> (StageSheet, BoardSheet) {
        let (mut sheet, mut board) = (self.sheet.clone(), self.board.clone());
        values::set_places(&mut sheet, &mut board, settings);
        (sheet, board)
    }

    /// The stage with its typical values.
    pub fn typical(&self) -> Stage {
        Stage::on_rail(&self.sheet.circuit, self.output_voltage, &self.board, &self.coupling)
    }
}

/// `r_ds_on[1]` is `r_ds_on`.
fn without_places(key: &str) -> String {
    let mut inside = false;
    key.chars()
        .filter(|c| {
            inside = match c {
                '[' => true,
                ']' => {
                    inside = false;
                    return false;
                }
                _ => inside,
            };
            !inside
        })
        .collect()
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn limits_are_as_printed_or_three_deviations_away() {
        let printed = Datum { min: Some(2.0), max: Some(5.0), ..Datum::of(3.0) };
        assert_eq!([Side::Low, Side::Typical, Side::High].map(|side| limit(&printed, side)), [2.0, 3.0, 5.0]);
        let one_sided = Datum { max: Some(5.0), sigma: Some(0.5), ..Datum::of(3.0) };
        assert_eq!([Side::Low, Side::High].map(|side| limit(&one_sided, side)), [3.0, 5.0]);
        let normal = Datum { sigma: Some(0.5), ..Datum::of(3.0) };
        assert_eq!([Side::Low, Side::High].map(|side| limit(&normal, side)), [1.5, 4.5]);
        assert_eq!(without_places("core.material[12].density"), "core.material.density");
    }
}
