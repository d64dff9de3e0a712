//! What a form looks like: the names of its keys, and an example of it in one line.

use super::datum;
use crate::sheet::datum::Datum;
use crate::sheet::form::{Choice, Form, FormList, Key, KeyVisitor, Need, OptionalForm};

/// Names of a form's keys, and those of a quantity's mapping when its limits stand among them.
pub(crate) fn key_names(form: &mut dyn Form) -> Vec<&'static str> {
    let mut names = Names(Vec::new());
    form.keys(&mut names);
    names.0
}

struct Names(Vec<&'static str>);

impl KeyVisitor for Names {
    fn required(&mut self, key: &'static Key, _: &mut Datum) {
        self.0.push(key.name);
    }

    fn optional(&mut self, key: &'static Key, _: &mut Option<Datum>) {
        self.0.push(key.name);
    }

    fn inline(&mut self, _: &'static Key, _: &mut Datum) {
        self.0.extend(datum::known_keys());
    }

    fn data(&mut self, key: &'static Key, _: Need, _: &mut Vec<Datum>) {
        self.0.push(key.name);
    }

    fn flag(&mut self, key: &'static Key, _: &mut Option<bool>) {
        self.0.push(key.name);
    }

    fn text(&mut self, key: &'static Key, _: &mut Option<String>) {
        self.0.push(key.name);
    }

    fn form(&mut self, key: &'static Key, _: &mut dyn Form) {
        self.0.push(key.name);
    }

    fn optional_form(&mut self, key: &'static Key, _: &mut dyn OptionalForm) {
        self.0.push(key.name);
    }

    fn forms(&mut self, key: &'static Key, _: Need, _: &mut dyn FormList) {
        self.0.push(key.name);
    }

    fn choice(&mut self, key: &'static Key, _: Need, _: &mut dyn Choice) {
        self.0.push(key.name);
    }
}

/// A form in one line: `{i: 20 A, v: 0.84 V}`. Optional keys are shown when they have an example of their own.
pub(crate) fn sample(form: &mut dyn Form) -> String {
    let mut sampler = Sampler(Vec::new());
    form.keys(&mut sampler);
    format!("{{{}}}", sampler.0.join(", "))
}

/// A list of mappings in one line: the key's own example, else one item.
pub(crate) fn list_sample(key: &Key, list: &mut dyn FormList) -> String {
    match key.example {
        "" => format!("[{}]", sample(list.push())),
        example => example.to_string(),
    }
}

struct Sampler(Vec<String>);

impl Sampler {
    fn add(&mut self, key: &Key, example: &str) {
        if !example.is_empty() {
            self.0.push(format!("{}: {example}", key.name));
        }
    }
}

impl KeyVisitor for Sampler {
    fn required(&mut self, key: &'static Key, _: &mut Datum) {
        self.add(key, &datum::example(key));
    }

    fn optional(&mut self, key: &'static Key, _: &mut Option<Datum>) {
        self.add(key, key.example);
    }

    fn inline(&mut self, key: &'static Key, _: &mut Datum) {
        self.0.push(key.example.to_string());
    }

    fn data(&mut self, key: &'static Key, _: Need, _: &mut Vec<Datum>) {
        self.add(key, &datum::example(key));
    }

    fn flag(&mut self, key: &'static Key, _: &mut Option<bool>) {
        self.add(key, key.example);
    }

    fn text(&mut self, _: &'static Key, _: &mut Option<String>) {}

    fn form(&mut self, key: &'static Key, slot: &mut dyn Form) {
        self.add(key, &sample(slot));
    }

    fn optional_form(&mut self, _: &'static Key, _: &mut dyn OptionalForm) {}

    fn forms(&mut self, key: &'static Key, need: Need, slot: &mut dyn FormList) {
        if need == Need::Required {
            self.add(key, &list_sample(key, slot));
        }
    }

    fn choice(&mut self, key: &'static Key, _: Need, _: &mut dyn Choice) {
        self.add(key, key.example);
    }
}
