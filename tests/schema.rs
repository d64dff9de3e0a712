//! The schemas: the shipped files pass, files with faults do not.

use std::path::{Path, PathBuf};

use lossbook::{files, input};
use serde_json::Value;

/// A validator of the keywords that the schemas use (JSON Schema, draft 2020-12); an unknown keyword is a failure, so
/// that none goes unchecked. The schemas were also put before a general validator of another language by hand.
struct Validator(Value);

fn validator(kind: Option<&str>) -> Validator {
    Validator(input::schema(kind).expect("a schema"))
}

impl Validator {
    fn is_valid(&self, value: &Value) -> bool {
        self.fits(&self.0, value)
    }

    fn fits(&self, schema: &Value, value: &Value) -> bool {
        let all = |schemas: &Value| schemas.as_array().expect("a list").clone();
        schema.as_object().expect("a schema").iter().all(|(keyword, by)| match keyword.as_str() {
            "$schema" | "$defs" | "title" | "description" | "examples" => true,
            "$ref" => {
                let path = by.as_str().and_then(|path| path.strip_prefix('#')).expect("a path");
                self.fits(self.0.pointer(path).expect("a definition"), value)
            }
            "anyOf" => all(by).iter().any(|schema| self.fits(schema, value)),
            "allOf" => all(by).iter().all(|schema| self.fits(schema, value)),
            "const" => value == by,
            "enum" => all(by).contains(value),
            "type" => match by {
                Value::Array(kinds) => kinds.iter().any(|kind| is_of(value, kind)),
                kind => is_of(value, kind),
            },
            "pattern" => value.as_str().is_none_or(|text| {
                regex_lite::Regex::new(by.as_str().expect("a pattern"))
                    .expect("a valid pattern")
                    .is_match(text)
            }),
            "minimum" => value.as_f64().is_none_or(|number| Some(number) >= by.as_f64()),
            "minItems" => {
                value.as_array().is_none_or(|items| items.len() as u64 >= by.as_u64().expect("a count"))
            }
            "minProperties" => {
                value.as_object().is_none_or(|keys| keys.len() as u64 >= by.as_u64().expect("a count"))
            }
            "items" => value.as_array().is_none_or(|items| items.iter().all(|item| self.fits(by, item))),
            "required" => value
                .as_object()
                .is_none_or(|keys| all(by).iter().all(|key| keys.contains_key(key.as_str().expect("a key")))),
            "properties" => value.as_object().is_none_or(|keys| {
                keys.iter().all(|(key, value)| by.get(key).is_none_or(|schema| self.fits(schema, value)))
            }),
            "additionalProperties" => value.as_object().is_none_or(|keys| {
                let known =
                    |key: &str| schema.get("properties").is_some_and(|known| known.get(key).is_some());
                keys.iter()
                    .filter(|(key, _)| !known(key))
                    .all(|(_, value)| by != &Value::Bool(false) && self.fits(by, value))
            }),
            other => panic!("the keyword {other} is not checked"),
        })
    }
}

fn is_of(value: &Value, kind: &Value) -> bool {
    match kind.as_str().expect("a type") {
        "object" => value.is_object(),
        "array" => value.is_array(),
        "string" => value.is_string(),
        "number" => value.is_number(),
        "integer" => value.is_i64() || value.is_u64(),
        "boolean" => value.is_boolean(),
        "null" => value.is_null(),
        other => panic!("{other} is no type"),
    }
}

fn yaml(text: &str) -> Value {
    serde_yaml::from_str(text).expect("YAML")
}

fn read(path: &Path) -> String {
    files::read_text(path).expect("readable").text
}

fn shipped(folder: &str) -> Vec<PathBuf> {
    files::list_yaml(&PathBuf::from(env!("CARGO_MANIFEST_DIR")).join(folder)).expect("listed")
}

#[test]
fn shipped_files_and_starters_pass() {
    for (kind, folder) in [("budget", "budgets"), ("parts", "parts")] {
        let (own, either) = (validator(Some(kind)), validator(None));
        for path in shipped(folder) {
            let value = yaml(&read(&path));
            assert!(own.is_valid(&value), "{}", path.display());
            assert!(either.is_valid(&value), "{}", path.display());
        }
    }
    for name in input::TEMPLATES {
        let kind = if name == "budget" { "budget" } else { "parts" };
        let value = yaml(&input::template(name).expect("a starter"));
        assert!(validator(Some(kind)).is_valid(&value), "{name}");
    }
}

#[test]
fn slips_are_found() {
    let parts = validator(Some("parts"));
    let capacitor = |line: &str| {
        yaml(&format!("capacitors:\n  c:\n    capacitance: 10 µF\n    v_max: 50 V\n    {line}\n"))
    };
    for right in [
        "esr: 3 mΩ",
        "esr: 3mohm",
        "esr: {typ: 3 mOhm, max: 4 mΩ, source: p. 4}",
        "esr: {max: 3 mΩ, sigma: 5 %}",
    ] {
        assert!(parts.is_valid(&capacitor(right)), "{right}");
    }
    // no unit, wrong dimension, unknown unit, unknown keys, a required key that is missing
    for wrong in [
        "esr: 3",
        "esr: 3 mV",
        "esr: 3 mhm",
        "esr: {typical: 3 mΩ}",
        "esr: 3 mΩ\n    esrr: 3 mΩ",
        "esl: 1 nH",
    ] {
        assert!(!parts.is_valid(&capacitor(wrong)), "{wrong}");
    }
    let budgets = validator(Some("budget"));
    let text = read(&shipped("budgets")[1]);
    for (from, to) in [
        ("rectifier: synchronous", "rectifier: sync"),
        ("spacing: log", "spacing: logarithmic"),
        ("output_voltage: 3.3 V", "output_voltage: 3.3"),
        ("light_load: forced_continuous", "light_load: forced"),
        ("efficiency_min", "efficiency_minimum"),
    ] {
        assert!(text.contains(from), "{from}");
        assert!(!budgets.is_valid(&yaml(&text.replacen(from, to, 1))), "{to}");
    }
}
