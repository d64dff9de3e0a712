//! Which part sits in which slot: a stage as it is meant, before curves are fitted ([`crate::parts`]).

use std::sync::Arc;

use crate::grid::Axis;
use crate::ledger::Slot;
use crate::sheet::form::{Choice, Form, Key, KeyVisitor};
use crate::sheet::{
    CapacitorSheet, ControllerSheet, Datum, DiodeSheet, InductorSheet, LinearRegulatorSheet, MosfetSheet,
};
use crate::units::Dimension as D;

/// A part in a slot: its name in the library, its sheet and how many stand in parallel.
#[derive(Clone, Debug, PartialEq)]
pub struct Placed<T> {
    /// Name in the library.
    pub name: Arc<str>,
    /// The data sheet.
    pub sheet: Arc<T>,
    /// Number in parallel.
    pub count: u32,
}

/// A candidate stage of a budget.
#[derive(Clone, Debug, PartialEq)]
pub struct StageSheet {
    /// Name in the budget.
    pub name: String,
    /// What it consists of.
    pub circuit: Circuit,
    /// Its own switching frequencies, instead of the grid's.
    pub switching_frequency: Option<Axis>,
}

/// What a stage consists of.
#[derive(Clone, Debug, PartialEq)]
#[allow(clippy::large_enum_variant)] // a handful a budget
pub enum Circuit {
    /// Switched, with a synchronous rectifier or a freewheel diode.
    Switched(SwitchedSheet),
    /// A linear regulator.
    Linear(Placed<LinearRegulatorSheet>),
}

/// Parts of a switched stage.
#[derive(Clone, Debug, PartialEq)]
pub struct SwitchedSheet {
    /// Switch between input and switch node.
    pub high_side: Placed<MosfetSheet>,
    /// What carries the current while the high side is off.
    pub rectifier: RectifierSheet,
    /// Inductor.
    pub inductor: Placed<InductorSheet>,
    /// Kinds of capacitor at the input; may be empty.
    pub input_capacitors: Vec<Placed<CapacitorSheet>>,
    /// Kinds of capacitor at the output; may be empty.
    pub output_capacitors: Vec<Placed<CapacitorSheet>>,
    /// Controller.
    pub controller: Placed<ControllerSheet>,
    /// What happens when the load is below half the ripple.
    pub light_load: LightLoad,
}

/// What carries the current while the high side is off.
#[derive(Clone, Debug, PartialEq)]
pub enum RectifierSheet {
    /// A MOSFET, perhaps with a Schottky diode across it.
    Synchronous {
        /// The MOSFET.
        low_side: Placed<MosfetSheet>,
        /// The Schottky diode across it.
        parallel_schottky: Option<Placed<DiodeSheet>>,
    },
    /// A diode.
    Diode {
        /// The diode.
        freewheel_diode: Placed<DiodeSheet>,
    },
}

/// What a stage does when the load is below half the ripple.
#[derive(Clone, Debug, Default, PartialEq)]
pub enum LightLoad {
    /// The inductor current goes negative (synchronous stages only).
    #[default]
    ForcedContinuous,
    /// The rectifier blocks at zero current; what a diode does by nature.
    DiodeEmulation,
    /// Like diode emulation, and pulses never fall below a peak: the frequency falls instead.
    PulseSkipping(SkipPeak),
}

/// The smallest peak of a pulse.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct SkipPeak {
    /// Peak inductor current, A.
    pub peak: Datum,
}

const PEAK: Key =
    Key::new("peak", D::Current, "smallest peak of the inductor current").sane(1e-3, 500.0).example("1.5 A");

impl Form for SkipPeak {
    fn keys(&mut self, v: &mut dyn KeyVisitor) {
        v.required(&PEAK, &mut self.peak);
    }
}

impl Choice for LightLoad {
    fn options(&self) -> &'static [(&'static str, bool)] {
        &[("forced_continuous", false), ("diode_emulation", false), ("pulse_skipping", true)]
    }

    fn pick(&mut self, option: usize) -> Option<&mut dyn Form> {
        *self = match option {
            0 => LightLoad::ForcedContinuous,
            1 => LightLoad::DiodeEmulation,
            _ => LightLoad::PulseSkipping(SkipPeak::default()),
        };
        Choice::get(self)
    }

    fn get(&mut self) -> Option<&mut dyn Form> {
        match self {
            LightLoad::PulseSkipping(peak) => Some(peak),
            _ => None,
        }
    }
}

impl StageSheet {
    /// "synchronous", "diode" or "linear", as in the budget.
    pub fn rectifier_name(&self) -> &'static str {
        match &self.circuit {
            Circuit::Switched(SwitchedSheet { rectifier: RectifierSheet::Synchronous { .. }, .. }) => {
                "synchronous"
            }
            Circuit::Switched(_) => "diode",
            Circuit::Linear(_) => "linear",
        }
    }

    /// True for a linear stage, which has no frequency.
    pub fn is_linear(&self) -> bool {
        matches!(self.circuit, Circuit::Linear(_))
    }

    /// Every part with its slot, name, count and price, in the order of the ledger.
    pub fn parts(&self) -> Vec<PartOfStage<'_>> {
        let mut parts = Vec::new();
        let mut add = |slot, name, count, price: &Option<Datum>| {
            parts.push(PartOfStage { slot, name, count, price: price.as_ref().map(|price| price.value) });
        };
        match &self.circuit {
            Circuit::Linear(regulator) => {
                add(Slot::Regulator, &regulator.name, regulator.count, &regulator.sheet.price);
            }
            Circuit::Switched(switched) => {
                add(
                    Slot::HighSide,
                    &switched.high_side.name,
                    switched.high_side.count,
                    &switched.high_side.sheet.price,
                );
                match &switched.rectifier {
                    RectifierSheet::Synchronous { low_side, parallel_schottky } => {
                        add(Slot::LowSide, &low_side.name, low_side.count, &low_side.sheet.price);
                        if let Some(diode) = parallel_schottky {
                            add(Slot::ParallelSchottky, &diode.name, diode.count, &diode.sheet.price);
                        }
                    }
                    RectifierSheet::Diode { freewheel_diode: diode } => {
                        add(Slot::FreewheelDiode, &diode.name, diode.count, &diode.sheet.price);
                    }
                }
                add(
                    Slot::Inductor,
                    &switched.inductor.name,
                    switched.inductor.count,
                    &switched.inductor.sheet.price,
                );
                let banks = [
                    (Slot::InputCapacitors, &switched.input_capacitors),
                    (Slot::OutputCapacitors, &switched.output_capacitors),
                ];
                for (slot, bank) in banks {
                    for kind in bank {
                        add(slot, &kind.name, kind.count, &kind.sheet.price);
                    }
                }
                let controller = &switched.controller;
                add(Slot::Controller, &controller.name, controller.count, &controller.sheet.price);
            }
        }
        parts
    }
}

/// A part of a stage, whatever its kind.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct PartOfStage<'a> {
    /// Where it sits.
    pub slot: Slot,
    /// Name in the library.
    pub name: &'a str,
    /// Number in parallel.
    pub count: u32,
    /// Price of one piece.
    pub price: Option<f64>,
}
