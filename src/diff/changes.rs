//! Which inputs differ between two stages, and what each difference alone does to the loss at the first headline.

use serde::Serialize;

use super::loss_at;
use crate::budget::Coupling;
use crate::candidate::Candidate;
use crate::fitted::Stage;
use crate::grid::{ALL_AXES, AxisName, OperatingPoint};
use crate::ledger::Slot;
use crate::report::words::set;
use crate::sheet::BoardSheet;
use crate::stage::{Circuit, LightLoad, Placed, RectifierSheet, StageSheet};
use crate::units::Dimension as D;
use crate::values;

/// One difference of the inputs.
#[derive(Clone, Debug, PartialEq, Serialize)]
pub struct Change {
    /// What differs: "low_side", "f_SW", "board.output_path".
    pub what: String,
    /// In the first budget.
    pub from: String,
    /// In the second budget.
    pub to: String,
    /// Change of the loss at the first headline when only this is taken from the second budget, W; `None` where the
    /// stage then cannot run.
    pub effect: Option<f64>,
}

/// A stage on its rail at its headline, as it was written.
#[derive(Clone)]
struct Setup {
    sheet: StageSheet,
    board: BoardSheet,
    coupling: Vec<Coupling>,
    output_voltage: f64,
    point: OperatingPoint,
}

impl Setup {
    fn of(candidate: &Candidate<'_>) -> Self {
        Setup {
            sheet: candidate.sheet.clone(),
            board: candidate.budget.board.clone(),
            coupling: candidate.budget.coupling.clone(),
            output_voltage: candidate.budget.output_voltage,
            point: candidate.headline(),
        }
    }

    fn loss(&self) -> Option<f64> {
        let stage = Stage::on_rail(&self.sheet.circuit, self.output_voltage, &self.board, &self.coupling);
        loss_at(&stage, self.point)
    }
}

/// Collects differences between two setups.
struct Comparer<'a> {
    a: &'a Setup,
    b: &'a Setup,
    found: Vec<Change>,
}

impl Comparer<'_> {
    /// Adds a difference; `take` takes it over from the second setup.
    fn add(&mut self, what: &str, [from, to]: [String; 2], take: impl FnOnce(&mut Setup, &Setup)) {
        let mut moved = self.a.clone();
        take(&mut moved, self.b);
        let effect = moved.loss().zip(self.a.loss()).map(|(moved, before)| moved - before);
        self.found.push(Change { what: what.into(), from, to, effect });
    }
}

/// All differences of the inputs of two stages.
pub(super) fn between(a: &Candidate<'_>, b: &Candidate<'_>) -> Vec<Change> {
    let (a, b) = (Setup::of(a), Setup::of(b));
    let mut comparer = Comparer { a: &a, b: &b, found: Vec::new() };
    rail(&mut comparer);
    circuits(&mut comparer);
    board(&mut comparer);
    comparer.found
}

fn rail(comparer: &mut Comparer<'_>) {
    let (a, b) = (comparer.a, comparer.b);
    if a.output_voltage != b.output_voltage {
        let words = [a, b].map(|setup| set(setup.output_voltage, D::Voltage));
        comparer.add("V_OUT", words, |moved, other| moved.output_voltage = other.output_voltage);
    }
    for axis in ALL_AXES {
        let (symbol, dimension) = match axis {
            AxisName::InputVoltage => ("V_IN", D::Voltage),
            AxisName::Load => ("I_OUT", D::Current),
            AxisName::Ambient => ("T_A", D::Temperature),
            AxisName::SwitchingFrequency => ("f_SW", D::Frequency),
        };
        let (from, to) = (a.point.get(axis), b.point.get(axis));
        let both_have = axis != AxisName::SwitchingFrequency || (from > 0.0 && to > 0.0);
        if from != to && both_have {
            let words = [set(from, dimension), set(to, dimension)];
            comparer.add(symbol, words, |moved, other| {
                moved.point = moved.point.with(axis, other.point.get(axis))
            });
        }
    }
}

fn circuits(comparer: &mut Comparer<'_>) {
    let (a, b) = (comparer.a, comparer.b);
    match (&a.sheet.circuit, &b.sheet.circuit) {
        (Circuit::Linear(from), Circuit::Linear(to)) => {
            part(comparer, Slot::Regulator, [from, to], |moved, other| {
                moved.sheet.circuit = other.sheet.circuit.clone()
            });
        }
        (Circuit::Switched(from), Circuit::Switched(to)) => {
            part(comparer, Slot::HighSide, [&from.high_side, &to.high_side], |moved, other| {
                switched(moved, other, |moved, other| moved.high_side = other.high_side.clone());
            });
            rectifiers(comparer, [&from.rectifier, &to.rectifier]);
            part(comparer, Slot::Inductor, [&from.inductor, &to.inductor], |moved, other| {
                switched(moved, other, |moved, other| moved.inductor = other.inductor.clone());
            });
            let banks = [&from.input_capacitors, &to.input_capacitors];
            bank(comparer, Slot::InputCapacitors, banks, |moved, other| {
                switched(moved, other, |moved, other| {
                    moved.input_capacitors = other.input_capacitors.clone()
                });
            });
            let banks = [&from.output_capacitors, &to.output_capacitors];
            bank(comparer, Slot::OutputCapacitors, banks, |moved, other| {
                switched(moved, other, |moved, other| {
                    moved.output_capacitors = other.output_capacitors.clone()
                });
            });
            part(comparer, Slot::Controller, [&from.controller, &to.controller], |moved, other| {
                switched(moved, other, |moved, other| moved.controller = other.controller.clone());
            });
            if from.light_load != to.light_load {
                let words = [light_load(&from.light_load), light_load(&to.light_load)];
                comparer.add("light_load", words, |moved, other| {
                    switched(moved, other, |moved, other| moved.light_load = other.light_load.clone());
                });
            }
        }
        _ => {
            let words = [a, b].map(|setup| setup.sheet.rectifier_name().to_owned());
            comparer.add("rectifier", words, |moved, other| {
                moved.sheet = other.sheet.clone();
                let frequency = other.point.switching_frequency;
                moved.point = moved.point.with(AxisName::SwitchingFrequency, frequency);
            });
        }
    }
}

/// Takes something over between two switched stages.
fn switched(
    moved: &mut Setup,
    other: &Setup,
    take: impl FnOnce(&mut crate::stage::SwitchedSheet, &crate::stage::SwitchedSheet),
) {
    if let (Circuit::Switched(moved), Circuit::Switched(other)) =
        (&mut moved.sheet.circuit, &other.sheet.circuit)
    {
        take(moved, other);
    }
}

fn rectifiers(comparer: &mut Comparer<'_>, both: [&RectifierSheet; 2]) {
    let take = |moved: &mut Setup, other: &Setup| {
        switched(moved, other, |moved, other| moved.rectifier = other.rectifier.clone());
    };
    match both {
        [
            RectifierSheet::Synchronous { low_side: from, parallel_schottky: across_from },
            RectifierSheet::Synchronous { low_side: to, parallel_schottky: across_to },
        ] => {
            part(comparer, Slot::LowSide, [from, to], |moved, other| {
                switched(moved, other, |moved, other| {
                    if let (
                        RectifierSheet::Synchronous { low_side, .. },
                        RectifierSheet::Synchronous { low_side: taken, .. },
                    ) = (&mut moved.rectifier, &other.rectifier)
                    {
                        *low_side = taken.clone();
                    }
                });
            });
            if across_from != across_to {
                let name = |across: &Option<Placed<_>>| across.as_ref().map_or("none".into(), named);
                comparer.add("parallel_schottky", [name(across_from), name(across_to)], |moved, other| {
                    switched(moved, other, |moved, other| {
                        if let (
                            RectifierSheet::Synchronous { parallel_schottky, .. },
                            RectifierSheet::Synchronous { parallel_schottky: taken, .. },
                        ) = (&mut moved.rectifier, &other.rectifier)
                        {
                            parallel_schottky.clone_from(taken);
                        }
                    });
                });
            }
        }
        [RectifierSheet::Diode { freewheel_diode: from }, RectifierSheet::Diode { freewheel_diode: to }] => {
            part(comparer, Slot::FreewheelDiode, [from, to], take);
        }
        _ => {
            let words = [comparer.a, comparer.b].map(|setup| setup.sheet.rectifier_name().to_owned());
            comparer.add("rectifier", words, take);
        }
    }
}

fn named<T>(placed: &Placed<T>) -> String {
    if placed.count == 1 { placed.name.to_string() } else { format!("{} x {}", placed.count, placed.name) }
}

fn part<T: PartialEq>(
    comparer: &mut Comparer<'_>,
    slot: Slot,
    [from, to]: [&Placed<T>; 2],
    take: impl FnOnce(&mut Setup, &Setup),
) {
    if from == to {
        return;
    }
    let mut words = [named(from), named(to)];
    if words[0] == words[1] {
        let keys = moved_values(comparer, slot);
        words[1] = if keys.is_empty() {
            format!("{} (changed)", words[1])
        } else {
            format!("{} with {keys}", words[1])
        };
    }
    comparer.add(slot.name(), words, take);
}

/// Values of a slot that differ while the part's name is the same.
fn moved_values(comparer: &Comparer<'_>, slot: Slot) -> String {
    let of = |setup: &Setup| values::all(&setup.sheet, &setup.board);
    let (before, after) = (of(comparer.a), of(comparer.b));
    let in_slot = before.iter().filter(|value| value.slot == slot);
    let moved = in_slot.filter_map(|value| {
        let now = after.iter().find(|now| now.path == value.path)?;
        let key = value.path.split_once('.').map_or(value.path.as_str(), |(_, key)| key);
        let from_to = [value, now].map(|value| set(value.datum.value, value.dimension));
        (now.datum.value != value.datum.value).then(|| format!("{key} {} -> {}", from_to[0], from_to[1]))
    });
    moved.collect::<Vec<_>>().join(", ")
}

fn bank(
    comparer: &mut Comparer<'_>,
    slot: Slot,
    both: [&Vec<Placed<crate::sheet::CapacitorSheet>>; 2],
    take: impl FnOnce(&mut Setup, &Setup),
) {
    if both[0] == both[1] {
        return;
    }
    let mut words = both.map(|bank| {
        let names: Vec<String> = bank.iter().map(named).collect();
        if names.is_empty() { "none".to_owned() } else { names.join(" + ") }
    });
    if words[0] == words[1] {
        words[1] = format!("{} with {}", words[1], moved_values(comparer, slot));
    }
    comparer.add(slot.name(), words, take);
}

fn light_load(light_load: &LightLoad) -> String {
    match light_load {
        LightLoad::ForcedContinuous => "forced continuous".into(),
        LightLoad::DiodeEmulation => "diode emulation".into(),
        LightLoad::PulseSkipping(skip) => format!("pulse skipping at {}", set(skip.peak.value, D::Current)),
    }
}

fn board(comparer: &mut Comparer<'_>) {
    let (a, b) = (comparer.a, comparer.b);
    if a.sheet.is_linear() || b.sheet.is_linear() {
        return;
    }
    if a.board != b.board {
        let of = |setup: &Setup| -> Vec<values::Value> {
            let all = values::all(&setup.sheet, &setup.board);
            all.into_iter().filter(|value| value.slot == Slot::Board).collect()
        };
        let (before, after) = (of(a), of(b));
        let differs = |value: &values::Value, others: &[values::Value]| {
            let other = others.iter().find(|other| other.path == value.path);
            other.is_none_or(|other| other.datum.value != value.datum.value)
        };
        let mut paths: Vec<&str> =
            before.iter().filter(|value| differs(value, &after)).map(|value| value.path.as_str()).collect();
        paths.extend(
            after.iter().filter(|v| !before.iter().any(|b| b.path == v.path)).map(|v| v.path.as_str()),
        );
        let list = |these: &[values::Value]| -> String {
            let shown = |value: &values::Value| {
                let number = set(value.datum.value, value.dimension);
                let key = value.path.split_once('.').map_or(value.path.as_str(), |(_, key)| key);
                if paths.len() == 1 { number } else { format!("{key} {number}") }
            };
            let words: Vec<String> =
                these.iter().filter(|value| paths.contains(&value.path.as_str())).map(shown).collect();
            if words.is_empty() { "not stated".into() } else { words.join(", ") }
        };
        let words = [list(&before), list(&after)];
        let what = if let [only] = paths.as_slice() { *only } else { "board" };
        if !paths.is_empty() {
            comparer.add(what, words, |moved, other| moved.board = other.board.clone());
        }
    }
    if a.coupling != b.coupling {
        let words = [a, b].map(|setup| match setup.coupling.len() {
            1 => "1 pair".to_owned(),
            pairs => format!("{pairs} pairs"),
        });
        comparer.add("thermal_coupling", words, |moved, other| moved.coupling = other.coupling.clone());
    }
}
