//! Kinds of part: their keys at the top of a library file, and the slots they fit.

use std::sync::Arc;

use super::node::Node;
use super::notes::Notes;
use super::path::Trail;
use super::reader::read_checked;
use crate::budget::Library;
use crate::gaps::Gaps;
use crate::ledger::Slot;
use crate::sheet::form::{Faults, Form};
use crate::sheet::{
    CapacitorSheet, ControllerSheet, DiodeSheet, InductorSheet, LinearRegulatorSheet, MosfetSheet,
};

/// A kind of part.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash)]
pub(crate) enum PartKind {
    /// `mosfets`
    Mosfet,
    /// `diodes`
    Diode,
    /// `inductors`
    Inductor,
    /// `capacitors`
    Capacitor,
    /// `controllers`
    Controller,
    /// `linear_regulators`
    LinearRegulator,
}

/// All kinds in the order of the documentation.
pub(crate) const ALL_KINDS: [PartKind; 6] = [
    PartKind::Mosfet,
    PartKind::Diode,
    PartKind::Inductor,
    PartKind::Capacitor,
    PartKind::Controller,
    PartKind::LinearRegulator,
];

impl PartKind {
    /// Key at the top of a library file.
    pub(crate) const fn key(self) -> &'static str {
        match self {
            PartKind::Mosfet => "mosfets",
            PartKind::Diode => "diodes",
            PartKind::Inductor => "inductors",
            PartKind::Capacitor => "capacitors",
            PartKind::Controller => "controllers",
            PartKind::LinearRegulator => "linear_regulators",
        }
    }

    /// In prose: "a MOSFET".
    pub(crate) const fn words(self) -> &'static str {
        match self {
            PartKind::Mosfet => "a MOSFET",
            PartKind::Diode => "a diode",
            PartKind::Inductor => "an inductor",
            PartKind::Capacitor => "a capacitor",
            PartKind::Controller => "a controller",
            PartKind::LinearRegulator => "a linear regulator",
        }
    }

    /// In prose, several: "MOSFETs".
    pub(crate) const fn plural(self) -> &'static str {
        match self {
            PartKind::Mosfet => "MOSFETs",
            PartKind::Diode => "diodes",
            PartKind::Inductor => "inductors",
            PartKind::Capacitor => "capacitors",
            PartKind::Controller => "controllers",
            PartKind::LinearRegulator => "linear regulators",
        }
    }

    /// The kind of a key.
    pub(crate) fn from_key(key: &str) -> Option<PartKind> {
        ALL_KINDS.into_iter().find(|kind| kind.key() == key)
    }

    /// The kind that fits a slot; `None` for the board.
    pub(crate) const fn of_slot(slot: Slot) -> Option<PartKind> {
        match slot {
            Slot::HighSide | Slot::LowSide => Some(PartKind::Mosfet),
            Slot::ParallelSchottky | Slot::FreewheelDiode => Some(PartKind::Diode),
            Slot::Inductor => Some(PartKind::Inductor),
            Slot::InputCapacitors | Slot::OutputCapacitors => Some(PartKind::Capacitor),
            Slot::Controller => Some(PartKind::Controller),
            Slot::Regulator => Some(PartKind::LinearRegulator),
            Slot::Board => None,
        }
    }

    /// Reads a part of this kind.
    pub(crate) fn read(self, node: &Node, trail: &Trail<'_>, notes: &mut Notes) -> AnySheet {
        fn read<T: Form + Default>(node: &Node, trail: &Trail<'_>, notes: &mut Notes) -> Arc<T> {
            let mut sheet = T::default();
            read_checked(&mut sheet, node, trail, notes);
            Arc::new(sheet)
        }
        match self {
            PartKind::Mosfet => AnySheet::Mosfet(read(node, trail, notes)),
            PartKind::Diode => AnySheet::Diode(read(node, trail, notes)),
            PartKind::Inductor => AnySheet::Inductor(read(node, trail, notes)),
            PartKind::Capacitor => AnySheet::Capacitor(read(node, trail, notes)),
            PartKind::Controller => AnySheet::Controller(read(node, trail, notes)),
            PartKind::LinearRegulator => AnySheet::LinearRegulator(read(node, trail, notes)),
        }
    }

    /// An empty sheet of this kind, for asking its keys.
    pub(crate) fn empty_form(self) -> Box<dyn Form> {
        match self {
            PartKind::Mosfet => Box::<MosfetSheet>::default(),
            PartKind::Diode => Box::<DiodeSheet>::default(),
            PartKind::Inductor => Box::<InductorSheet>::default(),
            PartKind::Capacitor => Box::<CapacitorSheet>::default(),
            PartKind::Controller => Box::<ControllerSheet>::default(),
            PartKind::LinearRegulator => Box::<LinearRegulatorSheet>::default(),
        }
    }

    /// Names of the library's parts of this kind, in its order.
    pub(crate) fn names(self, library: &Library) -> Vec<&Arc<str>> {
        match self {
            PartKind::Mosfet => library.mosfets.iter().map(|(name, _)| name).collect(),
            PartKind::Diode => library.diodes.iter().map(|(name, _)| name).collect(),
            PartKind::Inductor => library.inductors.iter().map(|(name, _)| name).collect(),
            PartKind::Capacitor => library.capacitors.iter().map(|(name, _)| name).collect(),
            PartKind::Controller => library.controllers.iter().map(|(name, _)| name).collect(),
            PartKind::LinearRegulator => library.linear_regulators.iter().map(|(name, _)| name).collect(),
        }
    }

    /// The part of a name with the name as the library keeps it.
    pub(crate) fn find(self, library: &Library, name: &str) -> Option<(Arc<str>, AnySheet)> {
        fn wrap<T>(found: (Arc<str>, Arc<T>), make: fn(Arc<T>) -> AnySheet) -> (Arc<str>, AnySheet) {
            (found.0, make(found.1))
        }
        match self {
            PartKind::Mosfet => library.mosfets.get(name).map(|found| wrap(found, AnySheet::Mosfet)),
            PartKind::Diode => library.diodes.get(name).map(|found| wrap(found, AnySheet::Diode)),
            PartKind::Inductor => library.inductors.get(name).map(|found| wrap(found, AnySheet::Inductor)),
            PartKind::Capacitor => library.capacitors.get(name).map(|found| wrap(found, AnySheet::Capacitor)),
            PartKind::Controller => {
                library.controllers.get(name).map(|found| wrap(found, AnySheet::Controller))
            }
            PartKind::LinearRegulator => {
                library.linear_regulators.get(name).map(|found| wrap(found, AnySheet::LinearRegulator))
            }
        }
    }
}

/// A sheet of any kind.
#[derive(Clone, Debug, PartialEq)]
pub(crate) enum AnySheet {
    /// A MOSFET.
    Mosfet(Arc<MosfetSheet>),
    /// A diode.
    Diode(Arc<DiodeSheet>),
    /// An inductor.
    Inductor(Arc<InductorSheet>),
    /// A capacitor.
    Capacitor(Arc<CapacitorSheet>),
    /// A controller.
    Controller(Arc<ControllerSheet>),
    /// A linear regulator.
    LinearRegulator(Arc<LinearRegulatorSheet>),
}

impl AnySheet {
    /// Adds the part to a library; false when its name is taken.
    pub(crate) fn add_to(self, library: &mut Library, name: Arc<str>) -> bool {
        match self {
            AnySheet::Mosfet(sheet) => library.mosfets.add(name, sheet),
            AnySheet::Diode(sheet) => library.diodes.add(name, sheet),
            AnySheet::Inductor(sheet) => library.inductors.add(name, sheet),
            AnySheet::Capacitor(sheet) => library.capacitors.add(name, sheet),
            AnySheet::Controller(sheet) => library.controllers.add(name, sheet),
            AnySheet::LinearRegulator(sheet) => library.linear_regulators.add(name, sheet),
        }
    }

    /// A copy of the form, for visitors.
    pub(crate) fn form(&self) -> Box<dyn Form> {
        match self {
            AnySheet::Mosfet(sheet) => Box::new(MosfetSheet::clone(sheet)),
            AnySheet::Diode(sheet) => Box::new(DiodeSheet::clone(sheet)),
            AnySheet::Inductor(sheet) => Box::new(InductorSheet::clone(sheet)),
            AnySheet::Capacitor(sheet) => Box::new(CapacitorSheet::clone(sheet)),
            AnySheet::Controller(sheet) => Box::new(ControllerSheet::clone(sheet)),
            AnySheet::LinearRegulator(sheet) => Box::new(LinearRegulatorSheet::clone(sheet)),
        }
    }

    /// What the model assumes or leaves out because the sheet does not say it.
    pub(crate) fn gaps(&self, faults: &mut Faults) {
        let gaps = match self {
            AnySheet::Mosfet(sheet) => sheet.gaps(),
            AnySheet::Diode(sheet) => sheet.gaps(),
            AnySheet::Inductor(sheet) => sheet.gaps(),
            AnySheet::Capacitor(sheet) => sheet.gaps(),
            AnySheet::Controller(sheet) => sheet.gaps(),
            AnySheet::LinearRegulator(sheet) => sheet.gaps(),
        };
        for gap in gaps {
            faults.warn(gap.key, gap.text, gap.hint);
        }
    }
}
