//! Quantities in a schema: a number with one of the units of its dimension, or a mapping with limits and conditions.

use serde_json::{Map, Value, json};

use crate::input::units;
use crate::sheet::datum::CONDITIONS;
use crate::units::Dimension;

/// All dimensions that a file can state.
const ALL: [Dimension; 20] = [
    Dimension::Voltage,
    Dimension::Current,
    Dimension::Resistance,
    Dimension::Charge,
    Dimension::Capacitance,
    Dimension::Inductance,
    Dimension::Time,
    Dimension::Frequency,
    Dimension::Power,
    Dimension::Energy,
    Dimension::Temperature,
    Dimension::TemperatureDifference,
    Dimension::ThermalResistance,
    Dimension::Ratio,
    Dimension::CurrentSlope,
    Dimension::Volume,
    Dimension::Area,
    Dimension::FluxDensity,
    Dimension::PowerDensity,
    Dimension::Number,
];

/// Name of a dimension in the definitions: "thermal_resistance".
fn name(dimension: Dimension) -> String {
    dimension.words().split_once(' ').map_or("number", |(_, words)| words).replace([' ', '-'], "_")
}

/// Points to the definition of a plain quantity.
pub(super) fn plain(dimension: Dimension) -> Value {
    json!({"$ref": format!("#/$defs/{}", name(dimension))})
}

/// Points to the definition of a data-sheet quantity: plain, or a mapping.
pub(super) fn stated(dimension: Dimension) -> Value {
    json!({"$ref": format!("#/$defs/stated_{}", name(dimension))})
}

/// Definitions of all quantities.
pub(super) fn definitions() -> Map<String, Value> {
    let mut definitions = Map::new();
    for dimension in ALL {
        definitions.insert(name(dimension), number(dimension));
        let mapping = json!({
            "type": "object",
            "properties": limits(dimension),
            "anyOf": [{"required": ["typ"]}, {"required": ["min"]}, {"required": ["max"]}],
            "additionalProperties": false,
        });
        let either = json!({"anyOf": [plain(dimension), mapping]});
        definitions.insert(format!("stated_{}", name(dimension)), either);
    }
    definitions
}

/// A number with a unit of a dimension; bare numbers only where there is no unit.
fn number(dimension: Dimension) -> Value {
    let spellings = units::all_spellings();
    let of_dimension = spellings.iter().filter(|(_, of)| *of == dimension);
    let spelt: Vec<String> = of_dimension.map(|(symbol, _)| pattern(symbol)).collect();
    let digits = "^\\s*[-+\u{2212}]?(?:[0-9]+\\.?[0-9]*|\\.[0-9]+)(?:[eE][-+]?[0-9]+)?";
    if spelt.is_empty() {
        return json!({"anyOf": [{"type": "number"}, {"type": "string", "pattern": format!("{digits}\\s*$")}]});
    }
    json!({
        "type": "string",
        "description": format!("{} with its unit", dimension.words()),
        "pattern": format!("{digits}\\s*(?:{})\\s*$", spelt.join("|")),
        "examples": [units::example(dimension)],
    })
}

/// A pattern for every spelling of a unit.
fn pattern(symbol: &str) -> String {
    let mut pattern = String::new();
    for c in symbol.chars() {
        match c {
            'u' | 'µ' => pattern.push_str("[uµμ]"),
            'Ω' => pattern.push_str("(?:Ω|\u{2126}|[oO]hms?|OHM)"),
            '°' => pattern.push_str("(?:°|º|deg_?)\\s*"),
            '2' => pattern.push_str("\\^?[2²]"),
            '3' => pattern.push_str("\\^?[3³]"),
            '/' => pattern.push_str("\\s*/\\s*"),
            other => pattern.push(other),
        }
    }
    pattern
}

/// Keys of a quantity's own mapping.
pub(super) fn limits(dimension: Dimension) -> Map<String, Value> {
    let mut properties = Map::new();
    for (key, about) in [("typ", "typical value"), ("min", "lower limit"), ("max", "upper limit")] {
        properties.insert(key.into(), json!({"allOf": [plain(dimension)], "description": about}));
    }
    properties.insert(
        "sigma".into(),
        json!({
            "anyOf": [plain(dimension), plain(Dimension::Ratio)],
            "description": "one standard deviation, a percentage of typ or a quantity",
        }),
    );
    properties.extend(conditions());
    properties
}

/// Test conditions and the source, which any mapping of a part may carry.
pub(super) fn conditions() -> Map<String, Value> {
    let mut properties = Map::new();
    for (key, dimension) in CONDITIONS {
        properties.insert(key.into(), json!({"allOf": [plain(dimension)], "description": "test condition"}));
    }
    properties.insert("source".into(), text("where the value was read: p. 4, measured"));
    properties
}

/// Free text.
pub(super) fn text(about: &str) -> Value {
    json!({"type": ["string", "number", "boolean", "null"], "description": about})
}
