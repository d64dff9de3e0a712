//! Forms in a schema: one property a key, by visiting the form.

use serde_json::{Map, Value, json};

use super::quantities;
use crate::sheet::datum::Datum;
use crate::sheet::form::{Choice, Form, FormList, Key, KeyVisitor, Need, OptionalForm};

/// The schema of a form.
pub(super) fn schema_of(form: &mut dyn Form) -> Value {
    collect(|collector| form.keys(collector), Map::new())
}

/// A mapping inside another one: it may state conditions and a source for all its quantities.
fn nested(form: &mut dyn Form) -> Value {
    collect(|collector| form.keys(collector), quantities::conditions())
}

fn collect(visit: impl FnOnce(&mut Collector), shared: Map<String, Value>) -> Value {
    let mut collector = Collector { properties: shared, ..Collector::default() };
    visit(&mut collector);
    json!({
        "type": "object",
        "properties": collector.properties,
        "required": collector.required,
        "additionalProperties": false,
    })
}

#[derive(Default)]
struct Collector {
    properties: Map<String, Value>,
    required: Vec<&'static str>,
}

impl Collector {
    fn add(&mut self, key: &'static Key, need: Need, mut schema: Value) {
        let mut about = key.about.to_owned();
        if !key.conditions.is_empty() {
            about.push_str(&format!("; states {}", key.conditions.join(", ")));
        }
        if !key.absent.is_empty() {
            about.push_str(&format!("; {}", key.absent));
        }
        if let Some(object) = schema.as_object_mut() {
            object.insert("description".into(), about.into());
        }
        self.properties.insert(key.name.into(), schema);
        if need == Need::Required {
            self.required.push(key.name);
        }
    }
}

/// One of something, or a list of them.
fn one_or_more(item: Value) -> Value {
    json!({"anyOf": [item, {"type": "array", "items": item, "minItems": 1}]})
}

impl KeyVisitor for Collector {
    fn required(&mut self, key: &'static Key, _: &mut Datum) {
        self.add(key, Need::Required, quantities::stated(key.dimension));
    }

    fn optional(&mut self, key: &'static Key, _: &mut Option<Datum>) {
        self.add(key, Need::Optional, quantities::stated(key.dimension));
    }

    fn inline(&mut self, key: &'static Key, _: &mut Datum) {
        self.properties.extend(quantities::limits(key.dimension));
    }

    fn data(&mut self, key: &'static Key, need: Need, _: &mut Vec<Datum>) {
        self.add(key, need, one_or_more(quantities::stated(key.dimension)));
    }

    fn flag(&mut self, key: &'static Key, _: &mut Option<bool>) {
        self.add(key, Need::Optional, json!({"type": "boolean"}));
    }

    fn text(&mut self, key: &'static Key, _: &mut Option<String>) {
        self.add(key, Need::Optional, quantities::text(key.about));
    }

    fn form(&mut self, key: &'static Key, slot: &mut dyn Form) {
        self.add(key, Need::Required, nested(slot));
    }

    fn optional_form(&mut self, key: &'static Key, slot: &mut dyn OptionalForm) {
        self.add(key, Need::Optional, nested(slot.open()));
    }

    fn forms(&mut self, key: &'static Key, need: Need, slot: &mut dyn FormList) {
        self.add(key, need, one_or_more(nested(slot.push())));
    }

    fn choice(&mut self, key: &'static Key, need: Need, slot: &mut dyn Choice) {
        let options = slot.options().iter().enumerate();
        let schemas: Vec<Value> = options
            .map(|(place, (word, takes_mapping))| match slot_form(slot, place, *takes_mapping) {
                Some(inner) => json!({
                    "type": "object",
                    "properties": {*word: inner},
                    "required": [word],
                    "additionalProperties": false,
                }),
                None => json!({"const": word}),
            })
            .collect();
        self.add(key, need, json!({"anyOf": schemas}));
    }
}

/// The schema of the mapping behind an option, when it has one.
fn slot_form(slot: &mut dyn Choice, option: usize, takes_mapping: bool) -> Option<Value> {
    let form = slot.pick(option)?;
    takes_mapping.then(|| nested(form))
}
