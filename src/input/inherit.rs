//! A source or test conditions stated once for a nested mapping hold for every quantity in it.

use super::fields::Fields;
use super::notes::Notes;
use super::quantity::{self, Expected};
use crate::sheet::datum::{CONDITIONS, Condition, Datum};
use crate::sheet::form::{Choice, Form, FormList, Key, KeyVisitor, Need, OptionalForm};

/// Takes `source` and the conditions that a form does not know itself, and hands them to its quantities.
pub(crate) fn hand_down(form: &mut dyn Form, fields: &mut Fields<'_, '_>, notes: &mut Notes) {
    let mut heirs = Heirs { source: None, conditions: Vec::new() };
    let untaken: Vec<_> = fields.untaken().collect();
    for (name, node) in untaken {
        if name == "source" {
            fields.take(name);
            heirs.source = node.scalar().filter(|text| !text.is_empty()).map(Into::into);
        }
        let Some((key, dimension)) = CONDITIONS.into_iter().find(|(key, _)| *key == name) else { continue };
        fields.take(name);
        match quantity::read(node, Expected::of(dimension)) {
            Ok(value) => heirs.conditions.push(Condition { key, value, dimension }),
            Err(blame) => notes.value_error(&fields.trail.key(name), node, blame),
        }
    }
    if heirs.source.is_some() || !heirs.conditions.is_empty() {
        form.keys(&mut heirs);
    }
}

struct Heirs {
    source: Option<Box<str>>,
    conditions: Vec<Condition>,
}

impl Heirs {
    fn give(&self, datum: &mut Datum) {
        if datum.source.is_none() {
            datum.source.clone_from(&self.source);
        }
        for condition in &self.conditions {
            if datum.condition(condition.key).is_none() {
                datum.conditions.push(*condition);
            }
        }
    }
}

impl KeyVisitor for Heirs {
    fn required(&mut self, _: &'static Key, slot: &mut Datum) {
        self.give(slot);
    }

    fn optional(&mut self, _: &'static Key, slot: &mut Option<Datum>) {
        if let Some(datum) = slot {
            self.give(datum);
        }
    }

    fn inline(&mut self, _: &'static Key, slot: &mut Datum) {
        self.give(slot);
    }

    fn data(&mut self, _: &'static Key, _: Need, slot: &mut Vec<Datum>) {
        slot.iter_mut().for_each(|datum| self.give(datum));
    }

    fn flag(&mut self, _: &'static Key, _: &mut Option<bool>) {}

    fn text(&mut self, _: &'static Key, _: &mut Option<String>) {}

    fn form(&mut self, _: &'static Key, slot: &mut dyn Form) {
        slot.keys(self);
    }

    fn optional_form(&mut self, _: &'static Key, slot: &mut dyn OptionalForm) {
        if let Some(form) = slot.get() {
            form.keys(self);
        }
    }

    fn forms(&mut self, _: &'static Key, _: Need, slot: &mut dyn FormList) {
        for index in 0..slot.len() {
            if let Some(form) = slot.get(index) {
                form.keys(self);
            }
        }
    }

    fn choice(&mut self, _: &'static Key, _: Need, slot: &mut dyn Choice) {
        if let Some(form) = slot.get() {
            form.keys(self);
        }
    }
}
