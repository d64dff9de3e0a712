//! The candidate stages of a budget: which part sits in which slot.

use super::budget_grid::{self, RatedLoad, word};
use super::error::Blame;
use super::fields::Fields;
use super::kind::PartKind;
use super::node::Node;
use super::notes::Notes;
use super::path::Trail;
use super::reader::read_fields;
use super::shelf::Shelf;
use crate::budget::PartsOf;
use crate::grid::{Axis, AxisName};
use crate::hints::Vocabulary;
use crate::ledger::{ALL_SLOTS, Slot};
use crate::printable::printable;
use crate::sheet::CapacitorSheet;
use crate::sheet::form::{Form, Key, KeyVisitor, Need};
use crate::stage::{Circuit, LightLoad, Placed, RectifierSheet, StageSheet, SwitchedSheet};
use crate::units::Dimension;

/// Rectifiers, as written.
const RECTIFIERS: [&str; 3] = ["synchronous", "diode", "linear"];

const LIGHT_LOAD: Key = Key::new("light_load", Dimension::Number, "what happens below half the ripple")
    .example("forced_continuous");

/// Slots that a rectifier has, in the order of the ledger; the board belongs to none.
pub(crate) fn slots(rectifier: &str) -> &'static [Slot] {
    match rectifier {
        "synchronous" => &[
            Slot::HighSide,
            Slot::LowSide,
            Slot::ParallelSchottky,
            Slot::Inductor,
            Slot::InputCapacitors,
            Slot::OutputCapacitors,
            Slot::Controller,
        ],
        "diode" => &[
            Slot::HighSide,
            Slot::FreewheelDiode,
            Slot::Inductor,
            Slot::InputCapacitors,
            Slot::OutputCapacitors,
            Slot::Controller,
        ],
        _ => &[Slot::Regulator],
    }
}

/// Reads all stages.
pub(crate) fn read(node: &Node, shelf: &Shelf<'_>, trail: &Trail<'_>, notes: &mut Notes) -> Vec<StageSheet> {
    let like = "a stage's name and, below it, `rectifier: synchronous` and its parts";
    // opened only for its complaint about anything but a mapping
    if Fields::open(node, trail, like, notes).is_none() {
        return Vec::new();
    }
    let Node::Map(entries) = node else { return Vec::new() };
    let mut stages = Vec::new();
    for (name, node) in entries {
        let trail = trail.key(name);
        if name.trim().is_empty() || printable(name) != **name {
            notes.key_error(
                &trail,
                Blame::new("is no usable name of a stage", "use letters, digits and dashes"),
            );
        }
        let Some(fields) = Fields::open(node, &trail, "`rectifier: synchronous` and its parts", notes) else {
            continue;
        };
        let stage = StageReader { shelf, fields, notes }.read(name);
        stages.extend(stage);
    }
    stages
}

struct StageReader<'a, 'n, 't> {
    shelf: &'a Shelf<'a>,
    fields: Fields<'n, 't>,
    notes: &'a mut Notes,
}

impl StageReader<'_, '_, '_> {
    fn read(mut self, name: &str) -> Option<StageSheet> {
        let Some(node) = self.fields.take("rectifier") else {
            self.fields.missing(
                "rectifier",
                "add `rectifier: synchronous`, or `diode`, or `linear`",
                self.notes,
            );
            return None;
        };
        let rectifier = word(
            node,
            (&RECTIFIERS, Some(Vocabulary::Rectifier)),
            &self.fields.trail.key("rectifier"),
            self.notes,
        )?;
        let circuit = match rectifier {
            "linear" => self.linear(),
            _ => self.switched(rectifier == "synchronous"),
        };
        let frequency = self.frequency(rectifier);
        self.refuse_foreign(rectifier);
        let known = || {
            let own = ["rectifier", "light_load", "switching_frequency"];
            let switched = if rectifier == "linear" { &own[..1] } else { &own[..] };
            switched.iter().copied().chain(slots(rectifier).iter().map(|slot| slot.name())).collect()
        };
        self.fields.close_with(Some(Vocabulary::Slot), known, self.notes);
        Some(StageSheet { name: name.to_string(), circuit: circuit?, switching_frequency: frequency? })
    }

    fn linear(&mut self) -> Option<Circuit> {
        let library = self.shelf.library;
        self.slot(Slot::Regulator, &library.linear_regulators).map(Circuit::Linear)
    }

    fn switched(&mut self, synchronous: bool) -> Option<Circuit> {
        let library = self.shelf.library;
        let high_side = self.slot(Slot::HighSide, &library.mosfets);
        let rectifier = self.rectifier(synchronous);
        let inductor = self.slot(Slot::Inductor, &library.inductors);
        let input_capacitors = self.bank(Slot::InputCapacitors);
        let output_capacitors = self.bank(Slot::OutputCapacitors);
        let controller = self.slot(Slot::Controller, &library.controllers);
        let light_load = self.light_load(synchronous);
        if synchronous && let Some(controller) = &controller {
            let sheet = &controller.sheet;
            let lacking = [("low_side", sheet.low_side.is_none()), ("dead_time", sheet.dead_time.is_none())];
            for (key, _) in lacking.into_iter().filter(|(_, lacks)| *lacks) {
                let blame = Blame::new(
                    format!("{} has no {key}, which a synchronous stage needs", printable(&controller.name)),
                    format!("add `{key}` to the controller, or choose another"),
                );
                self.notes.at_value(&self.fields.trail.key("controller"), blame);
            }
        }
        if let (Some(LightLoad::PulseSkipping(_)), Some(controller)) = (&light_load, &controller)
            && controller.sheet.i_q_sleep.is_none()
        {
            let reason = format!(
                "{} gives no i_q_sleep: i_q is assumed between pulses too",
                printable(&controller.name)
            );
            let blame = Blame::new(reason, "add `i_q_sleep` to the controller when it sleeps between pulses");
            self.notes.doubt(&self.fields.trail.key("light_load"), blame);
        }
        Some(Circuit::Switched(SwitchedSheet {
            high_side: high_side?,
            rectifier: rectifier?,
            inductor: inductor?,
            input_capacitors: input_capacitors?,
            output_capacitors: output_capacitors?,
            controller: controller?,
            light_load: light_load?,
        }))
    }

    fn rectifier(&mut self, synchronous: bool) -> Option<RectifierSheet> {
        let library = self.shelf.library;
        if !synchronous {
            let freewheel_diode = self.slot(Slot::FreewheelDiode, &library.diodes)?;
            return Some(RectifierSheet::Diode { freewheel_diode });
        }
        let low_side = self.slot(Slot::LowSide, &library.mosfets);
        let name = Slot::ParallelSchottky.name();
        let parallel_schottky = match self.fields.take(name) {
            None => None,
            Some(node) => {
                let trail = self.fields.trail.key(name);
                let placed =
                    self.shelf.place((PartKind::Diode, &library.diodes), node, &trail, self.notes)?;
                if placed.sheet.q_rr.is_some() {
                    let blame = Blame::new(
                        format!("{} has q_rr, so it is no Schottky diode", printable(&placed.name)),
                        "its recovery across the low side is not modelled; choose a Schottky diode",
                    );
                    self.notes.doubt(&trail, blame);
                }
                Some(placed)
            }
        };
        Some(RectifierSheet::Synchronous { low_side: low_side?, parallel_schottky })
    }

    fn slot<T>(&mut self, slot: Slot, parts: &PartsOf<T>) -> Option<Placed<T>> {
        let kind = PartKind::of_slot(slot)?;
        let example = format!("the name of {}", kind.words());
        let node = self.fields.require(slot.name(), &example, self.notes)?;
        self.shelf.place((kind, parts), node, &self.fields.trail.key(slot.name()), self.notes)
    }

    fn bank(&mut self, slot: Slot) -> Option<Vec<Placed<CapacitorSheet>>> {
        let name = slot.name();
        let Some(node) = self.fields.take(name) else {
            let hint = format!(
                "add `{name}: [{{part: name, count: 4}}]`, or `{name}: []` to leave them out of the model"
            );
            self.fields.missing(name, &hint, self.notes);
            return None;
        };
        let (trail, capacitors) = (self.fields.trail.key(slot.name()), &self.shelf.library.capacitors);
        let kind = (PartKind::Capacitor, capacitors);
        let Node::List(items) = node else {
            return self.shelf.place(kind, node, &trail, self.notes).map(|placed| vec![placed]);
        };
        let place =
            |(index, item): (usize, &Node)| self.shelf.place(kind, item, &trail.item(index), self.notes);
        // every item is read before any failure counts
        let placed: Vec<Option<_>> = items.iter().enumerate().map(place).collect();
        placed.into_iter().collect()
    }

    fn light_load(&mut self, synchronous: bool) -> Option<LightLoad> {
        struct Wrapped(Need, LightLoad);
        impl Form for Wrapped {
            fn keys(&mut self, v: &mut dyn KeyVisitor) {
                v.choice(&LIGHT_LOAD, self.0, &mut self.1);
            }
        }
        let mut form = match synchronous {
            true => Wrapped(Need::Required, LightLoad::ForcedContinuous),
            false => Wrapped(Need::Optional, LightLoad::DiodeEmulation),
        };
        let before = self.notes.errors();
        read_fields(&mut form, &mut self.fields, self.notes);
        if !synchronous && form.1 == LightLoad::ForcedContinuous && self.notes.errors() == before {
            let blame = Blame::new(
                "a diode cannot carry the current backwards",
                "take light_load out: a diode stage is discontinuous by nature; pulse_skipping is allowed",
            );
            self.notes.at_value(&self.fields.trail.key("light_load"), blame);
        }
        (self.notes.errors() == before).then_some(form.1)
    }

    /// `Some(None)` when the grid's frequency holds.
    fn frequency(&mut self, rectifier: &str) -> Option<Option<Axis>> {
        let axis = AxisName::SwitchingFrequency;
        if rectifier == "linear" {
            return Some(None);
        }
        let Some(node) = self.fields.take(axis.name()) else { return Some(None) };
        let trail = self.fields.trail.key(axis.name());
        budget_grid::axis((axis, RatedLoad::Absent), node, &trail, self.notes).map(Some)
    }

    /// Keys that belong to another rectifier.
    fn refuse_foreign(&mut self, rectifier: &str) {
        let own = slots(rectifier);
        let foreign = ALL_SLOTS.iter().filter(|slot| !own.contains(slot)).map(|slot| slot.name());
        let of_switched = ["light_load", "switching_frequency"];
        let linear = if rectifier == "linear" { &of_switched[..] } else { &[] };
        for key in foreign.chain(linear.iter().copied()) {
            if self.fields.take(key).is_none() {
                continue;
            }
            let hint = match key {
                "board" => "the board stands at the top of the budget".to_string(),
                _ => format!("take it out, or change the rectifier; the slots here are {}", slot_list(own)),
            };
            let blame = Blame::new(format!("does not belong to a {rectifier} stage"), hint);
            self.notes.key_error(&self.fields.trail.key(key), blame);
        }
    }
}

fn slot_list(slots: &[Slot]) -> String {
    super::listed::listed(slots.iter().map(|slot| slot.name()))
}
