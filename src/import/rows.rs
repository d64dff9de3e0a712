//! A row of the table becomes a part: every cell finds its place, and remembers it for the faults.

use crate::input::node::{Entries, Node};
use crate::input::path::{KeyPath, Step as PathStep};

use super::header::{Column, Leaf, Step};

/// Cells that say "no value".
const NOTHING: [&str; 6] = ["", "-", "–", "—", "n/a", "N/A"];

/// A part made of a row.
#[derive(Clone, Debug)]
pub(crate) struct Row {
    /// Its keys.
    pub(crate) node: Node,
    /// Where each cell went: path in the part, and place of the column.
    pub(crate) cells: Vec<(KeyPath, usize)>,
}

/// Puts the cells of a row into the part.
pub(crate) fn part(columns: &[(usize, Column)], cells: &csv::StringRecord) -> Row {
    let mut row = Row { node: Node::Map(Vec::new()), cells: Vec::new() };
    for (place, column) in columns.iter().filter(|(_, column)| column.leaf != Leaf::Name) {
        let cell = cells.get(*place).unwrap_or_default().trim();
        if NOTHING.contains(&cell) {
            continue;
        }
        let mut path = Vec::new();
        if let Some(goal) = descend(&mut row.node, &column.steps, &mut path) {
            *goal = value(cell, column);
            row.cells.push((KeyPath(path), *place));
        }
    }
    simplify(&mut row.node);
    row
}

/// The text of a cell as a value: a bare number gets the unit of its column.
fn value(cell: &str, column: &Column) -> Node {
    if column.leaf == Leaf::Text {
        return Node::Text(cell.into());
    }
    let bare = cell.chars().all(|c| c.is_ascii_digit() || "+-−.,eE ".contains(c));
    if bare && !column.unit.is_empty() {
        return Node::Text(format!("{cell} {}", column.unit).into());
    }
    match (cell.parse::<i64>(), cell.parse::<f64>(), cell) {
        (Ok(whole), ..) => Node::Int(whole),
        (_, Ok(number), _) if number.is_finite() => Node::Float(number),
        (.., "true" | "TRUE" | "yes") => Node::Bool(true),
        (.., "false" | "FALSE" | "no") => Node::Bool(false),
        _ => Node::Text(cell.into()),
    }
}

/// The place at the end of some steps, made on the way.
fn descend<'n>(node: &'n mut Node, steps: &[Step], path: &mut Vec<PathStep>) -> Option<&'n mut Node> {
    let Some((step, rest)) = steps.split_first() else { return Some(node) };
    let next = match step {
        Step::Key(key) => {
            if !matches!(node, Node::Map(_)) {
                *node = Node::Map(Vec::new());
            }
            let Node::Map(entries) = node else { return None };
            path.push(PathStep::Key(key.as_str().into()));
            entry(entries, key)
        }
        Step::Point(conditions) => {
            if !matches!(node, Node::List(_)) {
                *node = Node::List(Vec::new());
            }
            let Node::List(list) = node else { return None };
            let says = |item: &Node, key: &str| item.get(key).and_then(Node::scalar);
            let same =
                |item: &Node| conditions.iter().all(|(key, value)| says(item, key).as_deref() == Some(value));
            let place = list.iter().position(same).unwrap_or_else(|| {
                let text = |value: &String| Node::Text(value.as_str().into());
                list.push(Node::Map(
                    conditions.iter().map(|(key, value)| ((*key).into(), text(value))).collect(),
                ));
                list.len() - 1
            });
            path.push(PathStep::Item(place));
            list.get_mut(place)?
        }
    };
    descend(next, rest, path)
}

fn entry<'n>(entries: &'n mut Entries, key: &str) -> &'n mut Node {
    let place = entries.iter().position(|(known, _)| &**known == key).unwrap_or_else(|| {
        entries.push((key.into(), Node::Null));
        entries.len() - 1
    });
    &mut entries[place].1
}

/// A quantity with nothing but `typ` is written without it.
fn simplify(node: &mut Node) {
    match node {
        Node::Map(entries) => {
            entries.iter_mut().for_each(|(_, node)| simplify(node));
            if let [(key, only)] = entries.as_mut_slice()
                && &**key == "typ"
            {
                *node = std::mem::replace(only, Node::Null);
            }
        }
        Node::List(items) => items.iter_mut().for_each(simplify),
        _ => {}
    }
}
