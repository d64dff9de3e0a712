//! Axes, coordinates and points of a budget.

use super::budget_keys::of_axis;
use super::datum;
use super::error::Blame;
use super::fields::Fields;
use super::listed::listed;
use super::node::Node;
use super::notes::Notes;
use super::path::Trail;
use super::quantity::{self, Expected};
use super::show::engineering;
use crate::grid::{ALL_AXES, Axis, AxisName, Grid, PartialPoint};
use crate::hints::{Vocabulary, hint, nearest};
use crate::sheet::Datum;
use crate::sheet::form::Key;
use crate::units::Dimension;

/// Largest number of points of a budget, over all stages.
pub(crate) const MOST_POINTS: u64 = 1_000_000_000;

/// What loads in percent refer to.
#[derive(Clone, Copy, Debug, PartialEq)]
pub(crate) enum RatedLoad {
    /// A, as stated.
    Stated(f64),
    /// Not stated: a load in percent is an error.
    Absent,
    /// Stated, but wrong: a load in percent cannot be read, and has been complained of.
    Broken,
}

/// One plain quantity of a budget.
pub(crate) fn value(node: &Node, key: &Key, trail: &Trail<'_>, notes: &mut Notes) -> Option<f64> {
    let value = datum::bounded(node, key, trail, notes)?;
    datum::doubt_magnitude(&Datum::of(value), key, trail, node, notes);
    Some(value)
}

/// A coordinate on an axis; a load may be a percentage of the rated load.
pub(crate) fn coordinate(
    (axis, rated): (AxisName, RatedLoad),
    node: &Node,
    trail: &Trail<'_>,
    notes: &mut Notes,
) -> Option<f64> {
    let percent = matches!(node, Node::Text(text) if text.trim_end().ends_with('%'));
    if axis != AxisName::Load || !percent {
        return value(node, of_axis(axis), trail, notes);
    }
    let blame = match (quantity::read(node, Expected::of(Dimension::Ratio)), rated) {
        (_, RatedLoad::Broken) => return None,
        (Ok(share), RatedLoad::Stated(full)) if share >= 0.0 => return Some(share * full),
        (Ok(_), RatedLoad::Stated(_)) => Blame::new("is negative", "a load is zero or above"),
        (Ok(_), RatedLoad::Absent) => {
            Blame::new("a load in percent needs rated_load", "add `rated_load: 10 A`, or write the load in A")
        }
        (Err(blame), _) => blame,
    };
    notes.value_error(trail, node, blame);
    None
}

/// Values of an axis: one value, a list, or `{from, to, points, spacing}`.
pub(crate) fn axis(
    (name, rated): (AxisName, RatedLoad),
    node: &Node,
    trail: &Trail<'_>,
    notes: &mut Notes,
) -> Option<Axis> {
    match node {
        Node::Map(_) => range((name, rated), node, trail, notes),
        Node::List(items) => {
            if items.is_empty() {
                let example = of_axis(name).example;
                notes.value_error(
                    trail,
                    node,
                    Blame::new("is an empty list", format!("write a value, such as {example}")),
                );
                return None;
            }
            let before = notes.errors();
            let mut values: Vec<f64> = Vec::with_capacity(items.len());
            for (index, item) in items.iter().enumerate() {
                let trail = trail.item(index);
                let Some(value) = coordinate((name, rated), item, &trail, notes) else { continue };
                if values.contains(&value) {
                    notes.value_warning(
                        &trail,
                        item,
                        Blame::new("stands twice in the list", "take one of the two out"),
                    );
                }
                values.push(value);
            }
            (notes.errors() == before).then_some(Axis::List(values))
        }
        single => coordinate((name, rated), single, trail, notes).map(|value| Axis::List(vec![value])),
    }
}

fn range(axis: (AxisName, RatedLoad), node: &Node, trail: &Trail<'_>, notes: &mut Notes) -> Option<Axis> {
    let example = of_axis(axis.0).example;
    let like = format!("`{{from: {example}, to: {example}, points: 5}}`");
    let mut fields = Fields::open(node, trail, &like, notes)?;
    let mut end = |name: &str, notes: &mut Notes| {
        let node = fields.require(name, example, notes)?;
        coordinate(axis, node, &trail.key(name), notes)
    };
    let (from, to) = (end("from", notes), end("to", notes));
    let points = fields
        .require("points", "5", notes)
        .and_then(|node| whole(node, 2..=MOST_POINTS, &trail.key("points"), notes));
    let log = match fields.take("spacing") {
        None => Some(false),
        Some(node) => spacing(node, &trail.key("spacing"), notes),
    };
    fields.close(|| vec!["from", "to", "points", "spacing"], notes);
    let (from, to, points, log) = (from?, to?, points?, log?);
    let blame = if from >= to {
        let words = |value| engineering(value, of_axis(axis.0).dimension);
        Blame::new(
            format!("from ({}) is not below to ({})", words(from), words(to)),
            "swap them; for a single value write just the value",
        )
    } else if log && from <= 0.0 {
        Blame::new(
            "even ratios cannot start at zero or below",
            "start above zero, or write `spacing: linear`",
        )
    } else {
        return Some(Axis::Range { from, to, points, log });
    };
    notes.at_value(&trail.key("from"), blame);
    None
}

fn spacing(node: &Node, trail: &Trail<'_>, notes: &mut Notes) -> Option<bool> {
    match node {
        Node::Text(word) if &**word == "log" => Some(true),
        Node::Text(word) if &**word == "linear" => Some(false),
        other => {
            notes.value_error(trail, other, Blame::new("is no spacing", "write `linear` or `log`"));
            None
        }
    }
}

/// A whole number in a range.
pub(crate) fn whole(
    node: &Node,
    range: std::ops::RangeInclusive<u64>,
    trail: &Trail<'_>,
    notes: &mut Notes,
) -> Option<u64> {
    let number = match node {
        Node::Int(number) => u64::try_from(*number).ok(),
        Node::Float(number) if number.fract() == 0.0 && (0.0..1e15).contains(number) => Some(*number as u64),
        _ => None,
    };
    if let Some(number) = number.filter(|number| range.contains(number)) {
        return Some(number);
    }
    let reason = format!("a whole number from {} to {} is expected", range.start(), range.end());
    notes.value_error(trail, node, Blame::new(reason, format!("write it like {}", (*range.start()).max(4))));
    None
}

/// The coordinates that a mapping names.
pub(crate) fn point(fields: &mut Fields<'_, '_>, rated: RatedLoad, notes: &mut Notes) -> PartialPoint {
    let mut point = PartialPoint::default();
    for axis in ALL_AXES {
        let Some(node) = fields.take(axis.name()) else { continue };
        if let Some(value) = coordinate((axis, rated), node, &fields.trail.key(axis.name()), notes) {
            point.set(axis, value);
        }
    }
    point
}

/// The grid, in the order written.
pub(crate) fn grid(node: &Node, rated: RatedLoad, trail: &Trail<'_>, notes: &mut Notes) -> Option<Grid> {
    let like = "`{input_voltage: 24 V, load: [1 A, 6 A], ambient: 25 °C, switching_frequency: 400 kHz}`";
    let mut fields = Fields::open(node, trail, like, notes)?;
    let before = notes.errors();
    let mut axes = Vec::new();
    let written: Vec<&str> = fields.untaken().map(|(key, _)| key).collect();
    for key in written {
        let Some(name) = AxisName::from_name(key) else { continue };
        let Some(node) = fields.take(key) else { continue };
        let trail = trail.key(key);
        if let Some(values) = axis((name, rated), node, &trail, notes) {
            axes.push((name, values));
        }
    }
    for axis in ALL_AXES.into_iter().filter(|axis| *axis != AxisName::SwitchingFrequency) {
        if !fields.has(axis.name()) {
            fields.require(axis.name(), of_axis(axis).example, notes);
        }
    }
    fields.close_with(Some(Vocabulary::Axis), || ALL_AXES.map(AxisName::name).to_vec(), notes);
    (notes.errors() == before).then_some(Grid { axes })
}

/// The word of a value that must be one of a few.
pub(crate) fn word<'w>(
    node: &Node,
    (words, vocabulary): (&[&'w str], Option<Vocabulary>),
    trail: &Trail<'_>,
    notes: &mut Notes,
) -> Option<&'w str> {
    let given = node.scalar().unwrap_or_default();
    let found = words.iter().copied().find(|word| *word == given);
    if found.is_none() {
        let known = || words.iter().copied();
        let ours = vocabulary.and_then(|vocabulary| hint(vocabulary, &given, known()));
        let near = ours.or_else(|| nearest(&given, known()).map(|near| format!("did you mean `{near}`?")));
        let hint = near.unwrap_or_else(|| format!("write one of {}", listed(known())));
        notes.value_error(trail, node, Blame::new("is not known here", hint));
    }
    found
}
