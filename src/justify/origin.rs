//! Where a number comes from: part, key, typical or limit, test conditions, source.

use crate::ledger::Slot;
use crate::report::words;
use crate::sheet::common::Descriptive;
use crate::sheet::{BoardSheet, Datum};
use crate::stage::{Circuit, RectifierSheet, StageSheet};
use crate::values::{self, Value};

/// The data-sheet values of a stage with the sources of its parts.
#[derive(Debug)]
pub struct Origins {
    values: Vec<Value>,
    sources: Vec<(Slot, String, String)>,
}

impl Origins {
    /// Of a stage of a budget.
    pub fn of(stage: &StageSheet, board: &BoardSheet, source_of_board: Option<&str>) -> Self {
        let mut sources = part_sources(stage);
        if let Some(source) = source_of_board {
            sources.push((Slot::Board, "board".into(), source.to_owned()));
        }
        Origins { values: values::all(stage, board), sources }
    }

    /// The value at a key path.
    pub fn find(&self, path: &str) -> Option<&Value> {
        self.values.iter().find(|value| value.path == path)
    }

    /// All values.
    pub fn all(&self) -> &[Value] {
        &self.values
    }

    /// Source of the part in a slot.
    pub fn source_of(&self, slot: Slot, part: &str) -> Option<&str> {
        self.sources.iter().find(|known| known.0 == slot && known.1 == part).map(|known| known.2.as_str())
    }

    /// "demo-n40-6m8, q_gd = 2.1 nC typ at v_ds 20 V (p. 4)".
    pub fn words(&self, value: &Value) -> String {
        let key = value.path.split_once('.').map_or(value.path.as_str(), |(_, key)| key);
        let mut text = format!(
            "{}, {key} = {} {}",
            value.part,
            words::set(value.datum.value, value.dimension),
            which(&value.datum)
        );
        let conditions: Vec<String> = value
            .datum
            .conditions
            .iter()
            .map(|condition| {
                format!("{} {}", condition.key, words::set(condition.value, condition.dimension))
            })
            .collect();
        if !conditions.is_empty() {
            text.push_str(&format!(" at {}", conditions.join(", ")));
        }
        let own = value.datum.source.as_deref();
        if let Some(source) = own.or_else(|| self.source_of(value.slot, &value.part)) {
            text.push_str(&format!(" ({source})"));
        }
        text
    }

    /// The values whose key paths begin alike, one after another: points of a curve.
    pub fn points(&self, prefix: &str) -> String {
        let points: Vec<String> = self
            .values
            .iter()
            .filter(|value| {
                value
                    .path
                    .strip_prefix(prefix)
                    .is_some_and(|rest| rest.starts_with(['[', '.']) || rest.is_empty())
            })
            .map(|value| {
                let mut point = words::set(value.datum.value, value.dimension);
                for condition in &value.datum.conditions {
                    point.push_str(&format!(
                        " at {} {}",
                        condition.key,
                        words::set(condition.value, condition.dimension)
                    ));
                }
                let key = value.path.rsplit_once('.').map_or("", |(_, key)| key);
                format!("{key} {point}")
            })
            .collect();
        points.join(", ")
    }
}

/// Which of the printed numbers the value is.
pub fn which(datum: &Datum) -> &'static str {
    let is = |limit: Option<f64>| limit == Some(datum.value);
    if is(datum.typ) {
        "typ"
    } else if is(datum.max) {
        "max"
    } else if is(datum.min) {
        "min"
    } else if datum.typ.is_none() && datum.min.is_some() && datum.max.is_some() {
        "middle of min and max"
    } else {
        "as set"
    }
}

fn part_sources(stage: &StageSheet) -> Vec<(Slot, String, String)> {
    let mut sources = Vec::new();
    let mut add = |slot, name: &str, about: &Descriptive| {
        if let Some(source) = &about.source {
            sources.push((slot, name.to_owned(), source.clone()));
        }
    };
    match &stage.circuit {
        Circuit::Linear(part) => add(Slot::Regulator, &part.name, &part.sheet.descriptive),
        Circuit::Switched(switched) => {
            add(Slot::HighSide, &switched.high_side.name, &switched.high_side.sheet.descriptive);
            match &switched.rectifier {
                RectifierSheet::Synchronous { low_side, parallel_schottky } => {
                    add(Slot::LowSide, &low_side.name, &low_side.sheet.descriptive);
                    if let Some(part) = parallel_schottky {
                        add(Slot::ParallelSchottky, &part.name, &part.sheet.descriptive);
                    }
                }
                RectifierSheet::Diode { freewheel_diode: part } => {
                    add(Slot::FreewheelDiode, &part.name, &part.sheet.descriptive);
                }
            }
            add(Slot::Inductor, &switched.inductor.name, &switched.inductor.sheet.descriptive);
            let banks = [
                (Slot::InputCapacitors, &switched.input_capacitors),
                (Slot::OutputCapacitors, &switched.output_capacitors),
            ];
            for (slot, bank) in banks {
                bank.iter().for_each(|part| add(slot, &part.name, &part.sheet.descriptive));
            }
            add(Slot::Controller, &switched.controller.name, &switched.controller.sheet.descriptive);
        }
    }
    sources
}
