//! The shortlist of a budget: what may stand in each slot of a stage.

use std::sync::Arc;

use super::budget_grid::{self, RatedLoad, word};
use super::budget_stages::slots;
use super::datum::bounded;
use super::error::Blame;
use super::fields::Fields;
use super::kind::PartKind;
use super::listed::listed;
use super::node::Node;
use super::notes::Notes;
use super::path::Trail;
use super::probe::Probe;
use super::sample::key_names;
use super::shelf::Shelf;
use crate::budget::Shortlist;
use crate::grid::AxisName;
use crate::hints::{Vocabulary, nearest};
use crate::ledger::Slot;
use crate::sheet::form::Key;
use crate::stage::{Circuit, StageSheet};

/// What the shortlist refers to.
#[derive(Clone, Copy, Debug)]
pub(crate) struct Context<'a> {
    /// The library.
    pub(crate) shelf: &'a Shelf<'a>,
    /// Names of the stages as written, and those that were read without error.
    pub(crate) names: &'a [&'a str],
    /// Stages without errors.
    pub(crate) stages: &'a [StageSheet],
}

/// Reads the shortlist.
pub(crate) fn read(
    node: &Node,
    context: Context<'_>,
    trail: &Trail<'_>,
    notes: &mut Notes,
) -> Option<Shortlist> {
    let like = "`{stage: synchronous, high_side: all}`";
    let mut fields = Fields::open(node, trail, like, notes)?;
    let example = context.names.first().copied().unwrap_or("synchronous");
    let stage = fields
        .require("stage", example, notes)
        .and_then(|node| word(node, (context.names, None), &trail.key("stage"), notes))?;
    // a stage with errors has been complained of; its slots are unknown
    let stage = context.stages.iter().find(|candidate| candidate.name == stage)?;
    let own = slots(stage.rectifier_name());
    let mut shortlist = Shortlist { stage: stage.name.clone(), ..Shortlist::default() };
    let written: Vec<&str> = fields.untaken().map(|(key, _)| key).collect();
    for key in written {
        let trail = trail.key(key);
        if let Some(slot) = own.iter().copied().find(|slot| slot.name() == key) {
            let Some(node) = fields.take(key) else { continue };
            one_kind(stage, slot, &trail, notes);
            if let Some(names) = candidates(slot, node, context.shelf, &trail, notes) {
                shortlist.candidates.push((slot, names));
            }
        } else if Slot::from_name(key).is_some() {
            fields.take(key);
            let reason = format!("does not belong to a {} stage", stage.rectifier_name());
            let hint =
                format!("the slots of `{}` are {}", stage.name, listed(own.iter().map(|slot| slot.name())));
            notes.key_error(&trail, Blame::new(reason, hint));
        }
    }
    let axis = AxisName::SwitchingFrequency;
    if let Some(node) = fields.take(axis.name()) {
        let trail = trail.key(axis.name());
        if stage.is_linear() {
            notes.key_error(&trail, Blame::new("a linear stage has no frequency", "take it out"));
        }
        shortlist.switching_frequency = budget_grid::axis((axis, RatedLoad::Absent), node, &trail, notes);
    }
    fields.close_with(
        Some(Vocabulary::Slot),
        || ["stage", axis.name()].into_iter().chain(own.iter().map(|slot| slot.name())).collect(),
        notes,
    );
    Some(shortlist)
}

/// A bank of several kinds of capacitor has no one place for a candidate.
fn one_kind(stage: &StageSheet, slot: Slot, trail: &Trail<'_>, notes: &mut Notes) {
    let Circuit::Switched(switched) = &stage.circuit else { return };
    let bank = match slot {
        Slot::InputCapacitors => &switched.input_capacitors,
        Slot::OutputCapacitors => &switched.output_capacitors,
        _ => return,
    };
    if bank.len() != 1 {
        let reason = format!("the bank of `{}` has {} kinds of capacitor", stage.name, bank.len());
        notes.key_error(trail, Blame::new(reason, "a candidate can only stand for the one kind of a bank"));
    }
}

fn candidates(
    slot: Slot,
    node: &Node,
    shelf: &Shelf<'_>,
    trail: &Trail<'_>,
    notes: &mut Notes,
) -> Option<Vec<Arc<str>>> {
    let kind = PartKind::of_slot(slot)?;
    let names = match node {
        Node::Text(word) if &**word == "all" => kind.names(shelf.library).into_iter().cloned().collect(),
        Node::Map(_) => filtered(kind, node, shelf, trail, notes)?,
        Node::List(items) => {
            let mut names: Vec<Arc<str>> = Vec::new();
            for (index, item) in items.iter().enumerate() {
                let trail = trail.item(index);
                let Some(name) = shelf.name(kind, item, &trail, notes) else { continue };
                if names.contains(&name) {
                    notes.value_warning(
                        &trail,
                        item,
                        Blame::new("stands twice in the list", "take one of the two out"),
                    );
                } else {
                    names.push(name);
                }
            }
            if items.is_empty() {
                notes.value_error(trail, node, Blame::new("is an empty list", "name parts, or write `all`"));
            }
            names
        }
        single => vec![shelf.name(kind, single, trail, notes)?],
    };
    if names.is_empty() && shelf.complete && matches!(node, Node::Text(_)) {
        let reason = format!("the library has no {}", kind.plural());
        notes.value_error(trail, node, Blame::new(reason, "add some, or take the slot out of the shortlist"));
    }
    Some(names)
}

/// A limit of a filter.
struct Limit<'n> {
    path: &'n str,
    at_least: Option<f64>,
    at_most: Option<f64>,
}

/// Parts of a kind whose values lie within all limits; a part that lacks a value does not pass.
fn filtered(
    kind: PartKind,
    node: &Node,
    shelf: &Shelf<'_>,
    trail: &Trail<'_>,
    notes: &mut Notes,
) -> Option<Vec<Arc<str>>> {
    let like = "`all`, a list of names, or `{v_ds_max: {at_least: 40 V}}`";
    Fields::open(node, trail, like, notes)?;
    let Node::Map(entries) = node else { return None };
    let before = notes.errors();
    let mut limits = Vec::new();
    for (path, node) in entries {
        limits.extend(limit(kind, path, node, trail, notes));
    }
    if notes.errors() > before {
        return None;
    }
    let passes = |name: &Arc<str>| {
        kind.find(shelf.library, name).is_some_and(|(_, sheet)| {
            let mut form = sheet.form();
            limits.iter().all(|limit| {
                Probe::values(&mut *form, limit.path).iter().any(|value| {
                    limit.at_least.is_none_or(|least| *value >= least)
                        && limit.at_most.is_none_or(|most| *value <= most)
                })
            })
        })
    };
    let names: Vec<Arc<str>> =
        kind.names(shelf.library).into_iter().filter(|name| passes(name)).cloned().collect();
    if names.is_empty() && shelf.complete {
        let blame = Blame::new(
            format!("none of the {} passes", kind.plural()),
            "loosen the limits; a part that lacks a value does not pass",
        );
        notes.at_value(trail, blame);
    }
    Some(names)
}

fn limit<'n>(
    kind: PartKind,
    path: &'n str,
    node: &Node,
    trail: &Trail<'_>,
    notes: &mut Notes,
) -> Option<Limit<'n>> {
    let trail = trail.key(path);
    let Some(key) = Probe::key(&mut *kind.empty_form(), path) else {
        let names = key_names(&mut *kind.empty_form());
        let hint = match nearest(path, names.iter().copied()) {
            Some(near) if near != path => format!("did you mean `{near}`?"),
            Some(_) => format!("`{path}` holds several values; name one of them: `{path}.` and its key"),
            None => format!("the keys of {} are {}", kind.words(), listed(names)),
        };
        notes.key_error(&trail, Blame::new("no number stands at this key", hint));
        return None;
    };
    let like = format!("`{path}: {{at_least: {}}}`", super::datum::example(key));
    let mut fields = Fields::open(node, &trail, &like, notes)?;
    let mut bound = |name: &str, notes: &mut Notes| {
        let node = fields.take(name)?;
        bounded(node, &Key { bound: crate::sheet::form::Bound::Any, ..*key }, &trail.key(name), notes)
    };
    let before = notes.errors();
    let (at_least, at_most) = (bound("at_least", notes), bound("at_most", notes));
    fields.close(|| vec!["at_least", "at_most"], notes);
    if notes.errors() == before && at_least.zip(at_most).is_some_and(|(least, most)| least > most) {
        notes.at_value(&trail, Blame::new("at_least is above at_most", "swap them"));
    }
    Some(Limit { path, at_least, at_most })
}
