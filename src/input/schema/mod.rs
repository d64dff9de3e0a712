//! JSON Schema of part and budget files, for editors that complete and check while somebody types.
//!
//! Made from the very forms that the reader reads: there is no second list of keys. Draft 2020-12 of the specification.

mod budget;
mod forms;
mod quantities;

use serde_json::{Map, Value, json};

use super::kind::ALL_KINDS;

/// What there are schemas of.
pub const SCHEMAS: [&str; 2] = ["parts", "budget"];

/// The dialect that the schemas are written in.
const DIALECT: &str = "https://json-schema.org/draft/2020-12/schema";

/// A schema of part files or of budget files, or one that fits either; `None` for anything but [`SCHEMAS`].
pub fn schema(kind: Option<&str>) -> Option<Value> {
    let mut whole = match kind {
        Some("parts") => parts(),
        Some("budget") => budget::budget(),
        None => json!({"title": "a file of parts or a budget", "anyOf": [
            {"$ref": "#/$defs/budget_file"},
            {"$ref": "#/$defs/part_file"},
        ]}),
        Some(_) => return None,
    };
    let mut defs = quantities::definitions();
    defs.extend(budget::definitions());
    if kind.is_none() {
        defs.insert("budget_file".into(), budget::budget());
        defs.insert("part_file".into(), parts());
    }
    let object = whole.as_object_mut()?;
    object.insert("$schema".into(), DIALECT.into());
    object.insert("$defs".into(), Value::Object(defs));
    Some(whole)
}

/// A file of parts: a mapping from kind to name to part.
fn parts() -> Value {
    let mut properties = Map::new();
    for kind in ALL_KINDS {
        let part = forms::schema_of(&mut *kind.empty_form());
        properties.insert(
            kind.key().into(),
            json!({
                "description": format!("{} by name", kind.plural()),
                "type": ["object", "null"],
                "additionalProperties": part,
            }),
        );
    }
    json!({
        "title": "parts",
        "description": "a folder of such files is a library",
        "type": "object",
        "properties": properties,
        "additionalProperties": false,
    })
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::input::kind::PartKind;

    #[test]
    fn every_key_of_a_starter_stands_in_the_schema() {
        for kind in ALL_KINDS {
            let schema = parts();
            let part = &schema["properties"][kind.key()]["additionalProperties"];
            let starter = crate::input::template(kind.key()).expect("a starter");
            let lines = starter.lines().skip_while(|line| !line.starts_with(kind.key())).skip(2);
            let keys = lines.filter_map(|line| line.trim_start().trim_start_matches("# ").split_once(':'));
            let mut count = 0;
            for (key, _) in keys {
                assert!(part["properties"].get(key).is_some(), "{}: {key}", kind.key());
                count += 1;
            }
            assert!(count > 4);
        }
        assert!(PartKind::from_key("mosfets").is_some());
    }

    #[test]
    fn only_known_kinds_have_a_schema() {
        assert!(
            schema(None).is_some() && schema(Some("parts")).is_some() && schema(Some("budget")).is_some()
        );
        assert!(schema(Some("other")).is_none());
    }
}
