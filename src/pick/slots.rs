//! The slots of a shortlist, what may stand in each, and how a part gets into a stage.

use std::sync::Arc;

use crate::budget::Budget;
use crate::findings;
use crate::fitted::{Kind, Rectifier, Stage, Switched};
use crate::input::kind::{AnySheet, PartKind};
use crate::ledger::Slot;
use crate::parts::capacitor::Bank;
use crate::parts::controller::Controller;
use crate::parts::diode::Diode;
use crate::parts::inductor::Inductor;
use crate::parts::linear_regulator::LinearRegulator;
use crate::parts::mosfet::Mosfet;
use crate::stage::{Circuit, Placed, RectifierSheet, StageSheet};

/// Slots in the order in which combinations are counted: the first one changes slowest.
pub const COUNTING: [Slot; 9] = [
    Slot::Regulator,
    Slot::Controller,
    Slot::InputCapacitors,
    Slot::OutputCapacitors,
    Slot::ParallelSchottky,
    Slot::HighSide,
    Slot::LowSide,
    Slot::FreewheelDiode,
    Slot::Inductor,
];

/// A part that may stand in a slot.
#[derive(Clone, Debug)]
pub struct Part {
    /// Name in the library.
    pub name: Arc<str>,
    /// The data sheet.
    pub(crate) sheet: AnySheet,
    /// Price of all pieces in the slot.
    pub price: Option<f64>,
    /// Data that it lacks.
    pub needs: Vec<&'static str>,
}

/// A slot with the parts that may stand in it.
#[derive(Clone, Debug)]
pub struct Choice {
    /// The slot.
    pub slot: Slot,
    /// The parts, in the order of the shortlist.
    pub options: Vec<Part>,
}

/// The slots of the stage in [`COUNTING`] order: those of the shortlist, and the rectifying and filtering ones that keep their part.
pub fn choices(budget: &Budget, stage: &StageSheet, listed: &[(Slot, Vec<Arc<str>>)]) -> Vec<Choice> {
    let mut choices = Vec::new();
    for slot in COUNTING {
        let Some(count) = count_in(stage, slot) else { continue };
        let Some(kind) = PartKind::of_slot(slot) else { continue };
        let own = || stage.parts().into_iter().filter(|part| part.slot == slot).map(|part| part.name.into());
        let names: Vec<Arc<str>> = match listed.iter().find(|(listed, _)| *listed == slot) {
            Some((_, names)) => names.clone(),
            // a bank that keeps its kinds is no choice
            None if matches!(slot, Slot::InputCapacitors | Slot::OutputCapacitors) => continue,
            None => own().collect(),
        };
        let options = names.iter().filter_map(|name| {
            let (name, sheet) = kind.find(&budget.library, name)?;
            let price = price(&sheet).map(|price| price * f64::from(count));
            let mut with = stage.clone();
            put_sheet(&mut with, slot, &name, &sheet);
            let needs = needs(&Stage::fit(&with, budget), slot);
            Some(Part { name, sheet, price, needs })
        });
        choices.push(Choice { slot, options: options.collect() });
    }
    choices
}

/// Data that the part in a slot lacks; a resistance that is not stated at the drive counts, for a stronger drive's is used.
fn needs(stage: &Stage, slot: Slot) -> Vec<&'static str> {
    let missing = findings::not_modelled(stage);
    let lacking = missing.iter().filter(|missing| missing.lacking == slot);
    let mut needs: Vec<&'static str> = lacking.map(|missing| missing.needs).collect();
    if let Kind::Switched(stage) = &stage.kind {
        let undriven = match (slot, &stage.rectifier) {
            (Slot::HighSide, _) => stage.full_drive.v_high < stage.high_side.on_resistance.lowest_specified(),
            (Slot::LowSide, Rectifier::Synchronous { low_side, .. }) => {
                stage.full_drive.v_low < low_side.on_resistance.lowest_specified()
            }
            _ => false,
        };
        if undriven {
            needs.push("r_ds_on at this drive voltage");
        }
    }
    needs
}

/// Number of pieces in a slot; `None` when the stage has no such slot, or a bank that is not of one kind.
fn count_in(stage: &StageSheet, slot: Slot) -> Option<u32> {
    let mut parts = stage.parts().into_iter().filter(|part| part.slot == slot);
    let first = parts.next()?;
    parts.next().is_none().then_some(first.count)
}

fn price(sheet: &AnySheet) -> Option<f64> {
    let price = match sheet {
        AnySheet::Mosfet(sheet) => &sheet.price,
        AnySheet::Diode(sheet) => &sheet.price,
        AnySheet::Inductor(sheet) => &sheet.price,
        AnySheet::Capacitor(sheet) => &sheet.price,
        AnySheet::Controller(sheet) => &sheet.price,
        AnySheet::LinearRegulator(sheet) => &sheet.price,
    };
    price.as_ref().map(|price| price.value)
}

/// Puts a part into a slot of a stage as it is meant; the number of pieces stays.
pub(crate) fn put_sheet(stage: &mut StageSheet, slot: Slot, name: &Arc<str>, sheet: &AnySheet) {
    fn put<T>(placed: &mut Placed<T>, name: &Arc<str>, sheet: &Arc<T>) {
        *placed = Placed { name: name.clone(), sheet: sheet.clone(), count: placed.count };
    }
    match (&mut stage.circuit, slot, sheet) {
        (Circuit::Linear(placed), _, AnySheet::LinearRegulator(sheet)) => put(placed, name, sheet),
        (Circuit::Switched(stage), Slot::HighSide, AnySheet::Mosfet(sheet)) => {
            put(&mut stage.high_side, name, sheet);
        }
        (Circuit::Switched(stage), Slot::Inductor, AnySheet::Inductor(sheet)) => {
            put(&mut stage.inductor, name, sheet);
        }
        (Circuit::Switched(stage), Slot::Controller, AnySheet::Controller(sheet)) => {
            put(&mut stage.controller, name, sheet);
        }
        (Circuit::Switched(stage), Slot::InputCapacitors, AnySheet::Capacitor(sheet)) => {
            stage.input_capacitors.iter_mut().for_each(|placed| put(placed, name, sheet));
        }
        (Circuit::Switched(stage), Slot::OutputCapacitors, AnySheet::Capacitor(sheet)) => {
            stage.output_capacitors.iter_mut().for_each(|placed| put(placed, name, sheet));
        }
        (Circuit::Switched(stage), slot, sheet) => match (&mut stage.rectifier, slot, sheet) {
            (RectifierSheet::Synchronous { low_side, .. }, Slot::LowSide, AnySheet::Mosfet(sheet)) => {
                put(low_side, name, sheet);
            }
            (
                RectifierSheet::Synchronous { parallel_schottky: Some(placed), .. },
                Slot::ParallelSchottky,
                AnySheet::Diode(sheet),
            ) => put(placed, name, sheet),
            (RectifierSheet::Diode { freewheel_diode }, Slot::FreewheelDiode, AnySheet::Diode(sheet)) => {
                put(freewheel_diode, name, sheet);
            }
            _ => {}
        },
        _ => {}
    }
}

/// A part with its curves fitted.
#[derive(Clone, Debug)]
#[allow(missing_docs)] // named as the kinds of part
pub enum FittedPart {
    Mosfet(Box<Mosfet>),
    Diode(Diode),
    Inductor(Inductor),
    Bank(Bank),
    Controller(Controller),
    Regulator(LinearRegulator),
}

/// The fitted part that stands in a slot of a fitted stage.
pub fn take_fitted(stage: &Stage, slot: Slot) -> Option<FittedPart> {
    match (&stage.kind, slot) {
        (Kind::Linear(regulator), Slot::Regulator) => Some(FittedPart::Regulator(regulator.clone())),
        (Kind::Linear(_), _) => None,
        (Kind::Switched(stage), slot) => match (slot, &stage.rectifier) {
            (Slot::HighSide, _) => Some(FittedPart::Mosfet(Box::new(stage.high_side.clone()))),
            (Slot::Inductor, _) => Some(FittedPart::Inductor(stage.inductor.clone())),
            (Slot::Controller, _) => Some(FittedPart::Controller(stage.controller.clone())),
            (Slot::InputCapacitors, _) => Some(FittedPart::Bank(stage.input_bank.clone())),
            (Slot::OutputCapacitors, _) => Some(FittedPart::Bank(stage.output_bank.clone())),
            (Slot::LowSide, Rectifier::Synchronous { low_side, .. }) => {
                Some(FittedPart::Mosfet(Box::new(low_side.clone())))
            }
            (Slot::ParallelSchottky, Rectifier::Synchronous { schottky: Some(diode), .. })
            | (Slot::FreewheelDiode, Rectifier::Diode(diode)) => Some(FittedPart::Diode(diode.clone())),
            _ => None,
        },
    }
}

/// Puts a fitted part into a slot of a fitted stage; the stage must be reassembled before it is evaluated.
pub fn put_fitted(stage: &mut Switched, slot: Slot, part: &FittedPart) {
    match (part, slot) {
        (FittedPart::Mosfet(mosfet), Slot::HighSide) => stage.high_side.clone_from(mosfet),
        (FittedPart::Inductor(inductor), _) => stage.inductor.clone_from(inductor),
        (FittedPart::Controller(controller), _) => stage.controller = controller.clone(),
        (FittedPart::Bank(bank), Slot::InputCapacitors) => stage.input_bank.clone_from(bank),
        (FittedPart::Bank(bank), _) => stage.output_bank.clone_from(bank),
        (part, _) => match (&mut stage.rectifier, part) {
            (Rectifier::Synchronous { low_side, .. }, FittedPart::Mosfet(mosfet)) => {
                low_side.clone_from(mosfet);
            }
            (Rectifier::Synchronous { schottky, .. }, FittedPart::Diode(diode)) => {
                *schottky = Some(diode.clone());
            }
            (Rectifier::Diode(own), FittedPart::Diode(diode)) => own.clone_from(diode),
            _ => {}
        },
    }
}
