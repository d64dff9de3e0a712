//! Budgets in a schema: the rail, its grid, its stages and what is asked of them.

use serde_json::{Map, Value, json};

use super::forms;
use super::quantities::{plain, text};
use crate::grid::{ALL_AXES, AxisName};
use crate::input::budget_keys as keys;
use crate::input::budget_stages::slots;
use crate::input::kind::PartKind;
use crate::ledger::{ALL_SLOTS, Slot};
use crate::sheet::BoardSheet;
use crate::sheet::form::{Form, Key, KeyVisitor, Need};
use crate::stage::LightLoad;
use crate::units::Dimension;

/// Definitions that several keys of a budget share.
pub(super) fn definitions() -> Map<String, Value> {
    let mut definitions = Map::new();
    for axis in ALL_AXES {
        let value = coordinate(axis);
        let range = json!({
            "type": "object",
            "properties": {
                "from": value, "to": value,
                "points": {"type": "integer", "minimum": 1},
                "spacing": {"enum": ["linear", "log"]},
            },
            "required": ["from", "to", "points"],
            "additionalProperties": false,
        });
        let list = json!({"type": "array", "items": value, "minItems": 1});
        definitions.insert(format!("axis_{}", axis.name()), json!({"anyOf": [value, list, range]}));
    }
    let count = json!({"type": "integer", "minimum": 1});
    definitions.insert(
        "placed_part".into(),
        json!({"anyOf": [{"type": "string"}, {
            "type": "object",
            "properties": {"part": {"type": "string"}, "count": count},
            "required": ["part"],
            "additionalProperties": false,
        }]}),
    );
    definitions
}

/// A coordinate; a load may be a percentage of the rated load.
fn coordinate(axis: AxisName) -> Value {
    let key = keys::of_axis(axis);
    match axis {
        AxisName::Load => json!({"anyOf": [plain(key.dimension), plain(Dimension::Ratio)]}),
        _ => plain(key.dimension),
    }
}

fn reference(name: &str) -> Value {
    json!({"$ref": format!("#/$defs/{name}")})
}

fn object(properties: Map<String, Value>, required: &[&str]) -> Value {
    json!({"type": "object", "properties": properties, "required": required, "additionalProperties": false})
}

fn quantity(key: &Key) -> Value {
    json!({"allOf": [plain(key.dimension)], "description": key.about, "examples": [key.example]})
}

fn quantities<'k>(keys: impl IntoIterator<Item = &'k Key>) -> Map<String, Value> {
    keys.into_iter().map(|key| (key.name.to_owned(), quantity(key))).collect()
}

/// Coordinates of a point, any of them.
fn coordinates() -> Map<String, Value> {
    ALL_AXES.into_iter().map(|axis| (axis.name().to_owned(), coordinate(axis))).collect()
}

/// A budget file.
pub(super) fn budget() -> Value {
    let mut all = Map::new();
    let mut add = |key: &str, schema: Value| all.insert(key.into(), schema);
    add("budget", text("title of the rail"));
    add("about", text("one line on the rail"));
    add("source", text("where the requirements come from"));
    let folders = json!({"type": "array", "items": {"type": "string"}, "minItems": 1});
    let about = "folder of part files, or a list of folders, relative to this file";
    add("parts", json!({"anyOf": [{"type": "string"}, folders], "description": about}));
    add("currency", text("of all prices"));
    add("output_voltage", quantity(&keys::OUTPUT_VOLTAGE));
    add("rated_load", quantity(&keys::RATED_LOAD));
    let axes = ALL_AXES.map(|axis| (axis.name().to_owned(), reference(&format!("axis_{}", axis.name()))));
    add("grid", object(axes.into_iter().collect(), &["input_voltage", "load", "ambient"]));
    add("headline", object(coordinates(), &["input_voltage", "load", "ambient"]));
    let mut limits = quantities([&keys::EFFICIENCY_MIN, &keys::JUNCTION_MARGIN_MIN, &keys::LOSS_MAX]);
    limits.extend(coordinates());
    add("requirements", json!({"type": "array", "items": object(limits, &[])}));
    add("stages", json!({"type": "object", "additionalProperties": stage(), "minProperties": 1}));
    add("board", board());
    let mut point = quantities([&keys::SHARE]);
    point.extend(coordinates());
    add("profile", json!({"type": "array", "items": object(point, &["share"])}));
    add("battery", object(quantities([&keys::BATTERY_ENERGY]), &["energy"]));
    let meters = ["input_voltage", "input_current", "output_voltage", "output_current"];
    add("bench", object(quantities(&meters.map(keys::accuracy)), &meters));
    add("shortlist", shortlist());
    let margins = ["voltage", "gate_voltage", "saturation", "ripple_current"].map(keys::derated);
    let mut derating = quantities(&margins);
    derating.insert("junction_margin".into(), plain(Dimension::TemperatureDifference));
    add("derating", object(derating, &[]));
    let mut whole = object(all, &["budget", "parts", "output_voltage", "grid", "headline", "stages"]);
    if let Some(object) = whole.as_object_mut() {
        object.insert("title".into(), "budget".into());
    }
    whole
}

/// A stage: which slots it has depends on its rectifier.
fn stage() -> Value {
    let of = |rectifier: &str| {
        let mut properties = Map::new();
        properties.insert("rectifier".into(), json!({"const": rectifier}));
        let mut required = vec!["rectifier"];
        for slot in slots(rectifier) {
            let part = reference("placed_part");
            let bank = matches!(slot, Slot::InputCapacitors | Slot::OutputCapacitors);
            let schema = if bank { json!({"anyOf": [part, {"type": "array", "items": part}]}) } else { part };
            properties.insert(slot.name().into(), schema);
            if *slot != Slot::ParallelSchottky {
                required.push(slot.name());
            }
        }
        if rectifier != "linear" {
            properties.insert("light_load".into(), light_load());
            properties.insert("switching_frequency".into(), reference("axis_switching_frequency"));
        }
        object(properties, &required)
    };
    let kinds: Vec<Value> = ["synchronous", "diode", "linear"].into_iter().map(of).collect();
    json!({"anyOf": kinds})
}

/// A form of one key, to ask a choice for its schema.
struct Alone(LightLoad);

const LIGHT_LOAD: Key = Key::new("light_load", Dimension::Number, "what happens below half the ripple");

impl Form for Alone {
    fn keys(&mut self, visitor: &mut dyn KeyVisitor) {
        visitor.choice(&LIGHT_LOAD, Need::Optional, &mut self.0);
    }
}

fn light_load() -> Value {
    let mut schema = forms::schema_of(&mut Alone(LightLoad::default()));
    schema["properties"]["light_load"].take()
}

fn board() -> Value {
    let mut schema = forms::schema_of(&mut BoardSheet::default());
    let heating: Map<String, Value> =
        ALL_SLOTS.iter().map(|slot| (slot.name().to_owned(), plain(keys::COUPLING.dimension))).collect();
    let heated: Map<String, Value> =
        ALL_SLOTS.iter().map(|slot| (slot.name().to_owned(), object(heating.clone(), &[]))).collect();
    let mut coupling = object(heated, &[]);
    coupling["description"] = keys::COUPLING.about.into();
    schema["properties"]["thermal_coupling"] = coupling;
    schema
}

fn shortlist() -> Value {
    let mut properties = Map::new();
    properties.insert("stage".into(), json!({"type": "string"}));
    properties.insert("switching_frequency".into(), reference("axis_switching_frequency"));
    for slot in ALL_SLOTS {
        let Some(kind) = PartKind::of_slot(slot) else { continue };
        let names = json!({"type": "array", "items": {"type": "string"}, "minItems": 1});
        // a filter names keys of the kind; which of them hold one quantity the reader knows
        let mut filter = forms::schema_of(&mut *kind.empty_form());
        let keys: Vec<String> =
            filter["properties"].as_object().map(|keys| keys.keys().cloned().collect()).unwrap_or_default();
        let bound = json!({"type": ["string", "number"]});
        let limit = json!({
            "type": "object",
            "properties": {"at_least": bound, "at_most": bound},
            "minProperties": 1,
            "additionalProperties": false,
        });
        filter = object(keys.into_iter().map(|key| (key, limit.clone())).collect(), &[]);
        let schema = json!({"anyOf": [{"const": "all"}, {"type": "string"}, names, filter]});
        properties.insert(slot.name().into(), schema);
    }
    object(properties, &["stage"])
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn the_keys_are_those_of_the_reader() {
        let schema = budget();
        let keys = schema["properties"].as_object().expect("keys");
        let mut ours: Vec<&str> = keys.keys().map(String::as_str).collect();
        let mut theirs = crate::input::budget::KEYS.to_vec();
        ours.sort_unstable();
        theirs.sort_unstable();
        assert_eq!(ours, theirs);
    }
}
