//! Every data-sheet value of a stage by key path: what worst case, spread, sensitivity, robustness and justify share.
//!
//! Paths are slot and key as in the files: `high_side.q_gd`, `low_side.r_ds_on[1]`, `input_capacitors[0].esr`,
//! `board.output_path`. The list of values is that of the forms in [`crate::sheet`]; there is no second one.

use std::sync::Arc;

use crate::ledger::Slot;
use crate::sheet::datum::Datum;
use crate::sheet::form::{Bound, Choice, Faults, Form, FormList, Key, KeyVisitor, Need, OptionalForm};
use crate::sheet::{BoardSheet, common::Descriptive};
use crate::stage::{Circuit, LightLoad, Placed, RectifierSheet, StageSheet};
use crate::units::Dimension;

/// Where a value stands, as shown to a visitor.
#[derive(Clone, Copy, Debug)]
pub struct Place<'a> {
    /// Slot and key: `high_side.q_gd`.
    pub path: &'a str,
    /// The slot.
    pub slot: Slot,
    /// Name of the part, or "board".
    pub part: &'a str,
    /// The key.
    pub key: &'static Key,
    /// True when the part's tolerances move together.
    pub together: bool,
}

impl Place<'_> {
    /// True for a value the model reads: not a rating, not a price.
    pub fn is_modelled(&self) -> bool {
        let rating = ["_max", "price"].iter().any(|end| self.key.name.ends_with(end));
        !rating
    }
}

/// Shows every value of a stage and its board to `visit`, in the order of the ledger and of the forms. Values may be
/// changed; a part that is changed is copied first, the library stays as it is.
pub fn walk(stage: &mut StageSheet, board: &mut BoardSheet, visit: &mut dyn FnMut(&Place<'_>, &mut Datum)) {
    match &mut stage.circuit {
        Circuit::Linear(regulator) => part(Slot::Regulator, "", regulator, visit),
        Circuit::Switched(switched) => {
            part(Slot::HighSide, "", &mut switched.high_side, visit);
            match &mut switched.rectifier {
                RectifierSheet::Synchronous { low_side, parallel_schottky } => {
                    part(Slot::LowSide, "", low_side, visit);
                    if let Some(diode) = parallel_schottky {
                        part(Slot::ParallelSchottky, "", diode, visit);
                    }
                }
                RectifierSheet::Diode { freewheel_diode } => {
                    part(Slot::FreewheelDiode, "", freewheel_diode, visit)
                }
            }
            part(Slot::Inductor, "", &mut switched.inductor, visit);
            let banks = [
                (Slot::InputCapacitors, &mut switched.input_capacitors),
                (Slot::OutputCapacitors, &mut switched.output_capacitors),
            ];
            for (slot, bank) in banks {
                for (index, kind) in bank.iter_mut().enumerate() {
                    part(slot, &format!("[{index}]"), kind, visit);
                }
            }
            part(Slot::Controller, "", &mut switched.controller, visit);
            if let LightLoad::PulseSkipping(peak) = &mut switched.light_load {
                let name = switched.controller.name.clone();
                let mut walker = Walker {
                    path: "light_load".into(),
                    slot: Slot::Controller,
                    part: &name,
                    together: false,
                    visit,
                };
                peak.keys(&mut walker);
            }
            let mut walker =
                Walker { path: "board".into(), slot: Slot::Board, part: "board", together: false, visit };
            board.keys(&mut walker);
        }
    }
}

/// A value of a stage: where it stands and what it is.
#[derive(Clone, Debug, PartialEq)]
pub struct Value {
    /// Slot and key: `high_side.q_gd`.
    pub path: String,
    /// The slot.
    pub slot: Slot,
    /// Name of the part, or "board".
    pub part: String,
    /// The value with its tolerance, conditions and source.
    pub datum: Datum,
    /// What it measures.
    pub dimension: Dimension,
    /// One line on what it is.
    pub about: &'static str,
    /// True when the part's tolerances move together.
    pub together: bool,
    /// False for ratings and prices, which no loss depends on.
    pub modelled: bool,
}

/// All values of a stage and its board.
pub fn all(stage: &StageSheet, board: &BoardSheet) -> Vec<Value> {
    let mut values = Vec::new();
    walk(&mut stage.clone(), &mut board.clone(), &mut |place, datum| {
        values.push(Value {
            path: place.path.into(),
            slot: place.slot,
            part: place.part.into(),
            datum: datum.clone(),
            dimension: place.key.dimension,
            about: place.key.about,
            together: place.together,
            modelled: place.is_modelled(),
        });
    });
    values
}

/// Sets the value at a path; false when there is none.
pub fn set(stage: &mut StageSheet, board: &mut BoardSheet, path: &str, value: f64) -> bool {
    let mut found = false;
    walk(stage, board, &mut |place, datum| {
        if place.path == path {
            datum.value = value;
            found = true;
        }
    });
    found
}

/// Sets values by their place in the list of [`all`].
pub fn set_places(stage: &mut StageSheet, board: &mut BoardSheet, settings: &[(usize, f64)]) {
    let mut here = 0;
    walk(stage, board, &mut |_, datum| {
        if let Some((_, value)) = settings.iter().find(|(place, _)| *place == here) {
            datum.value = *value;
        }
        here += 1;
    });
}

/// Why the values of a stage contradict one another: a threshold above its plateau and the like.
pub fn contradiction(stage: &StageSheet) -> Option<String> {
    let mut faults = Faults::default();
    match &stage.circuit {
        Circuit::Linear(regulator) => regulator.sheet.cross_check(&mut faults),
        Circuit::Switched(switched) => {
            switched.high_side.sheet.cross_check(&mut faults);
            match &switched.rectifier {
                RectifierSheet::Synchronous { low_side, parallel_schottky } => {
                    low_side.sheet.cross_check(&mut faults);
                    if let Some(diode) = parallel_schottky {
                        diode.sheet.cross_check(&mut faults);
                    }
                }
                RectifierSheet::Diode { freewheel_diode } => freewheel_diode.sheet.cross_check(&mut faults),
            }
            switched.inductor.sheet.cross_check(&mut faults);
            for kind in switched.input_capacitors.iter().chain(&switched.output_capacitors) {
                kind.sheet.cross_check(&mut faults);
            }
            switched.controller.sheet.cross_check(&mut faults);
        }
    }
    faults.0.into_iter().find(|fault| !fault.warning).map(|fault| fault.reason)
}

/// Gives every resistance of the board that is left out the value 0 Ω, so that it can be moved.
pub fn fill_board(board: &mut BoardSheet) {
    board.keys(&mut Filler);
}

/// Fills in what is 0 when absent.
struct Filler;

impl KeyVisitor for Filler {
    fn required(&mut self, _key: &'static Key, _slot: &mut Datum) {}

    fn optional(&mut self, key: &'static Key, slot: &mut Option<Datum>) {
        if slot.is_none() && key.dimension == Dimension::Resistance && key.bound == Bound::NonNegative {
            *slot = Some(Datum::of(0.0));
        }
    }

    fn inline(&mut self, _key: &'static Key, _slot: &mut Datum) {}

    fn data(&mut self, _key: &'static Key, _need: Need, _slot: &mut Vec<Datum>) {}

    fn flag(&mut self, _key: &'static Key, _slot: &mut Option<bool>) {}

    fn text(&mut self, _key: &'static Key, _slot: &mut Option<String>) {}

    fn form(&mut self, _key: &'static Key, _slot: &mut dyn Form) {}

    fn optional_form(&mut self, _key: &'static Key, _slot: &mut dyn OptionalForm) {}

    fn forms(&mut self, _key: &'static Key, _need: Need, _slot: &mut dyn FormList) {}

    fn choice(&mut self, _key: &'static Key, _need: Need, _slot: &mut dyn Choice) {}
}

/// Shows the values of one form to `visit` with their key paths, for parts that stand in no slot yet.
pub fn walk_form(form: &mut dyn Form, visit: &mut dyn FnMut(&Place<'_>, &mut Datum)) {
    let mut walker = Walker { path: String::new(), slot: Slot::Board, part: "", together: false, visit };
    form.keys(&mut walker);
}

fn part<T: Form + Clone + Described>(
    slot: Slot,
    index: &str,
    placed: &mut Placed<T>,
    visit: &mut dyn FnMut(&Place<'_>, &mut Datum),
) {
    let sheet = Arc::make_mut(&mut placed.sheet);
    let together = sheet.descriptive().together == Some(true);
    let path = format!("{}{index}", slot.name());
    sheet.keys(&mut Walker { path, slot, part: &placed.name, together, visit });
}

/// A sheet that says something of itself.
trait Described {
    fn descriptive(&self) -> &Descriptive;
}

impl Described for crate::sheet::MosfetSheet {
    fn descriptive(&self) -> &Descriptive {
        &self.descriptive
    }
}

impl Described for crate::sheet::DiodeSheet {
    fn descriptive(&self) -> &Descriptive {
        &self.descriptive
    }
}

impl Described for crate::sheet::InductorSheet {
    fn descriptive(&self) -> &Descriptive {
        &self.descriptive
    }
}

impl Described for crate::sheet::CapacitorSheet {
    fn descriptive(&self) -> &Descriptive {
        &self.descriptive
    }
}

impl Described for crate::sheet::ControllerSheet {
    fn descriptive(&self) -> &Descriptive {
        &self.descriptive
    }
}

impl Described for crate::sheet::LinearRegulatorSheet {
    fn descriptive(&self) -> &Descriptive {
        &self.descriptive
    }
}

struct Walker<'a> {
    path: String,
    slot: Slot,
    part: &'a str,
    together: bool,
    visit: &'a mut dyn FnMut(&Place<'_>, &mut Datum),
}

impl Walker<'_> {
    /// Runs `inner` with the path grown by a key and an index.
    fn below(&mut self, key: &str, index: Option<usize>, inner: impl FnOnce(&mut Self)) {
        let length = self.path.len();
        if length > 0 && !key.is_empty() {
            self.path.push('.');
        }
        self.path.push_str(key);
        if let Some(index) = index {
            self.path.push_str(&format!("[{index}]"));
        }
        inner(self);
        self.path.truncate(length);
    }

    fn show(&mut self, key: &'static Key, datum: &mut Datum) {
        let Walker { path, slot, part, together, visit } = self;
        visit(&Place { path, slot: *slot, part, key, together: *together }, datum);
    }
}

impl KeyVisitor for Walker<'_> {
    fn required(&mut self, key: &'static Key, slot: &mut Datum) {
        self.below(key.name, None, |walker| walker.show(key, slot));
    }

    fn optional(&mut self, key: &'static Key, slot: &mut Option<Datum>) {
        if let Some(datum) = slot {
            self.required(key, datum);
        }
    }

    fn inline(&mut self, key: &'static Key, slot: &mut Datum) {
        self.show(key, slot);
    }

    fn data(&mut self, key: &'static Key, _need: Need, slot: &mut Vec<Datum>) {
        for (index, datum) in slot.iter_mut().enumerate() {
            self.below(key.name, Some(index), |walker| walker.show(key, datum));
        }
    }

    fn flag(&mut self, _key: &'static Key, _slot: &mut Option<bool>) {}

    fn text(&mut self, _key: &'static Key, _slot: &mut Option<String>) {}

    fn form(&mut self, key: &'static Key, slot: &mut dyn Form) {
        self.below(key.name, None, |walker| slot.keys(walker));
    }

    fn optional_form(&mut self, key: &'static Key, slot: &mut dyn OptionalForm) {
        if let Some(form) = slot.get() {
            self.form(key, form);
        }
    }

    fn forms(&mut self, key: &'static Key, _need: Need, slot: &mut dyn FormList) {
        for index in 0..slot.len() {
            if let Some(form) = slot.get(index) {
                self.below(key.name, Some(index), |walker| form.keys(walker));
            }
        }
    }

    fn choice(&mut self, key: &'static Key, _need: Need, slot: &mut dyn Choice) {
        if let Some(form) = slot.get() {
            self.form(key, form);
        }
    }
}
