//! One number of a data sheet: `6.8 mΩ`, or a mapping of `min`, `typ`, `max` with conditions and a source.

use super::error::Blame;
use super::fields::Fields;
use super::node::Node;
use super::notes::Notes;
use super::path::Trail;
use super::quantity::{self, Expected};
use super::show::engineering;
use crate::sheet::datum::{CONDITIONS, Condition, Datum};
use crate::sheet::form::{Bound, Key};
use crate::units::Dimension;

/// Absolute zero, °C (exact by definition of the scale, SI Brochure 9th ed., 2.3.1).
pub(crate) const ABSOLUTE_ZERO: f64 = -273.15;

/// Keys of a quantity's own mapping.
pub(crate) fn known_keys() -> Vec<&'static str> {
    ["typ", "min", "max", "sigma", "source"].into_iter().chain(CONDITIONS.map(|(key, _)| key)).collect()
}

/// Reads the value of a key; faults are noted.
pub(crate) fn read(node: &Node, key: &'static Key, trail: &Trail<'_>, notes: &mut Notes) -> Option<Datum> {
    if !matches!(node, Node::Map(_)) {
        let value = bounded(node, key, trail, notes)?;
        let datum = Datum::of(value);
        needs_conditions(&datum, key, trail, notes)?;
        doubt_magnitude(&datum, key, trail, node, notes);
        return Some(datum);
    }
    let like = format!("`{}: {}`", key.name, example(key));
    let mut fields = Fields::open(node, trail, &like, notes)?;
    let datum = from_fields(&mut fields, key, notes);
    fields.close(known_keys, notes);
    let datum = datum?;
    doubt_magnitude(&datum, key, trail, node, notes);
    Some(datum)
}

/// Reads `min`, `typ`, `max`, conditions and source out of a mapping that may have other keys too.
pub(crate) fn from_fields(
    fields: &mut Fields<'_, '_>,
    key: &'static Key,
    notes: &mut Notes,
) -> Option<Datum> {
    let before = notes.errors();
    let mut limit = |name: &'static str| {
        let node = fields.take(name)?;
        bounded(node, key, &fields.trail.key(name), notes)
    };
    let mut datum = Datum { min: limit("min"), typ: limit("typ"), max: limit("max"), ..Datum::default() };
    // a large library has a million of these: no room for more than there are
    datum.conditions.reserve_exact(CONDITIONS.iter().filter(|(name, _)| fields.has(name)).count());
    for (name, dimension) in CONDITIONS {
        let Some(node) = fields.take(name) else { continue };
        match quantity::read(node, Expected::of(dimension)) {
            Ok(value) => datum.conditions.push(Condition { key: name, value, dimension }),
            Err(blame) => notes.value_error(&fields.trail.key(name), node, blame),
        }
    }
    if let Some(node) = fields.take("source") {
        datum.source = node.scalar().filter(|text| !text.is_empty()).map(Into::into);
        if matches!(node, Node::List(_) | Node::Map(_)) {
            let blame =
                Blame::new(format!("{} stands here; text is expected", node.words()), "write `source: p. 4`");
            notes.value_error(&fields.trail.key("source"), node, blame);
        }
    }
    let sigma = fields.take("sigma");
    if notes.errors() > before {
        return None;
    }
    let Some(typical) = datum.typical() else {
        let blame =
            Blame::new("has none of typ, min and max", format!("write `{}: {}`", key.name, example(key)));
        notes.key_error(fields.trail, blame);
        return None;
    };
    datum.value = typical;
    in_order(&datum, key, fields.trail, notes)?;
    needs_conditions(&datum, key, fields.trail, notes)?;
    if let Some(node) = sigma {
        datum.sigma = Some(deviation(node, typical, key, &fields.trail.key("sigma"), notes)?);
    }
    if datum.typ.is_none() {
        let stand_in = match (datum.min, datum.max) {
            (Some(_), Some(_)) => "the middle of min and max",
            (None, _) => "max",
            (_, None) => "min",
        };
        let reason = format!("has no typ: {stand_in} stands for it");
        notes
            .doubt(fields.trail, Blame::new(reason, "add typ when the data sheet or a measurement gives it"));
    }
    Some(datum)
}

/// An example of a key's value as it would stand in a file.
pub(crate) fn example(key: &Key) -> String {
    if !key.example.is_empty() {
        return key.example.to_string();
    }
    let plain = super::units::example(key.dimension);
    if key.conditions.is_empty() {
        return plain.to_string();
    }
    let condition = |name: &&str| {
        let dimension = CONDITIONS.iter().find(|(known, _)| known == name).map_or(Dimension::Number, |c| c.1);
        format!("{name}: {}", super::units::example(dimension))
    };
    let conditions: Vec<String> = key.conditions.iter().map(condition).collect();
    format!("{{{}, typ: {plain}}}", conditions.join(", "))
}

/// A quantity within the bounds of its key.
pub(crate) fn bounded(node: &Node, key: &Key, trail: &Trail<'_>, notes: &mut Notes) -> Option<f64> {
    let expected = Expected::like(key.dimension, key.example);
    let value = match quantity::read(node, expected) {
        Ok(value) => value,
        Err(blame) => {
            notes.value_error(trail, node, blame);
            return None;
        }
    };
    let reason = match key.bound {
        Bound::Positive if value == 0.0 => "is zero; it must be above zero",
        Bound::Positive | Bound::NonNegative if value < 0.0 => "is negative",
        _ if key.dimension == Dimension::Temperature && value < ABSOLUTE_ZERO => "is below absolute zero",
        _ => return Some(value),
    };
    notes.value_error(trail, node, Blame::new(reason, format!("write it like {}", expected.example)));
    None
}

fn in_order(datum: &Datum, key: &Key, trail: &Trail<'_>, notes: &mut Notes) -> Option<()> {
    let pairs = [
        ("min", datum.min, "typ", datum.typ),
        ("typ", datum.typ, "max", datum.max),
        ("min", datum.min, "max", datum.max),
    ];
    for (low, a, high, b) in pairs {
        if let (Some(a), Some(b)) = (a, b)
            && a > b
        {
            let (a, b) = (engineering(a, key.dimension), engineering(b, key.dimension));
            let blame = Blame::new(
                format!("{high} ({b}) is below {low} ({a})"),
                "check the prefixes; the order is min, typ, max",
            );
            notes.at_value(&trail.key(high), blame);
            return None;
        }
    }
    Some(())
}

fn needs_conditions(datum: &Datum, key: &Key, trail: &Trail<'_>, notes: &mut Notes) -> Option<()> {
    let missing: Vec<&str> =
        key.conditions.iter().copied().filter(|name| datum.condition(name).is_none()).collect();
    if missing.is_empty() {
        return Some(());
    }
    let reason = format!("is stated without its test condition {}", missing.join(", "));
    notes.at_value(trail, Blame::new(reason, format!("write `{}: {}`", key.name, example(key))));
    None
}

/// One standard deviation: a percentage of the typical value, or a quantity of the same kind.
fn deviation(node: &Node, typical: f64, key: &Key, trail: &Trail<'_>, notes: &mut Notes) -> Option<f64> {
    let percent = matches!(node, Node::Text(text) if text.ends_with('%'));
    let result = match key.dimension {
        Dimension::Temperature => quantity::read(node, Expected::of(Dimension::TemperatureDifference)),
        _ if percent => {
            quantity::read(node, Expected::of(Dimension::Ratio)).map(|share| share * typical.abs())
        }
        dimension => quantity::read(node, Expected::like(dimension, "5 %")),
    };
    let blame = match result {
        Ok(sigma) if sigma >= 0.0 => return Some(sigma),
        Ok(_) => Blame::new("is negative", "a standard deviation is zero or above: `sigma: 5 %`"),
        Err(blame) => blame,
    };
    notes.value_error(trail, node, blame);
    None
}

/// A warning when the magnitude is hardly meant.
pub(crate) fn doubt_magnitude(datum: &Datum, key: &Key, trail: &Trail<'_>, node: &Node, notes: &mut Notes) {
    let (low, high) = key.sane;
    // a value that stands right on a limit is not worth a word, whatever its last bit
    let slack = 1e-9 * datum.value.abs();
    if datum.value == 0.0 || (datum.value + slack >= low && datum.value - slack <= high) {
        return;
    }
    let words = |limit: f64| engineering(limit, key.dimension);
    let usual = match (low.is_finite(), high.is_finite()) {
        (true, true) => format!("{} to {}", words(low), words(high)),
        (true, false) => format!("{} or more", words(low)),
        _ => format!("{} or less", words(high)),
    };
    let reason = format!("{} is hardly meant: {usual} is usual here", words(datum.value));
    notes.value_warning(trail, node, Blame::new(reason, "check the prefix of the unit"));
}
