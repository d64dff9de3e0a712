//! Taking parts by name from the library that a budget names.

use std::collections::HashSet;
use std::sync::Arc;

use super::budget_grid::whole;
use super::error::Blame;
use super::fields::Fields;
use super::kind::{ALL_KINDS, PartKind};
use super::node::Node;
use super::notes::Notes;
use super::path::Trail;
use crate::budget::{Library, PartsOf};
use crate::hints::nearest;
use crate::printable::printable;
use crate::stage::Placed;

/// Most parts in parallel in one slot.
const MOST_PARALLEL: u64 = 1000;

/// A library as a budget sees it.
#[derive(Debug)]
pub(crate) struct Shelf<'a> {
    /// All sound parts.
    pub(crate) library: &'a Library,
    /// Parts with errors: known by name, and complained of already.
    pub(crate) broken: &'a HashSet<(PartKind, Arc<str>)>,
    /// False when files could not be read, so that a name may be missing for that reason.
    pub(crate) complete: bool,
    /// The folders searched, in words.
    pub(crate) folders: String,
}

impl Shelf<'_> {
    /// The name of a part of a kind as the library keeps it; a fault is noted when there is none.
    pub(crate) fn name(
        &self,
        kind: PartKind,
        node: &Node,
        trail: &Trail<'_>,
        notes: &mut Notes,
    ) -> Option<Arc<str>> {
        let name = match node {
            Node::Text(_) | Node::Int(_) | Node::Float(_) => node.scalar().unwrap_or_default(),
            other => {
                let reason =
                    format!("{} stands here; the name of {} is expected", other.words(), kind.words());
                notes.value_error(
                    trail,
                    other,
                    Blame::new(reason, "write the name, or `{part: name, count: 2}`"),
                );
                return None;
            }
        };
        if let Some((name, _)) = kind.find(self.library, &name) {
            return Some(name);
        }
        if self.complete && !self.broken.contains(&(kind, Arc::from(name.as_str()))) {
            notes.value_error(trail, node, self.unknown(kind, &name));
        }
        None
    }

    fn unknown(&self, kind: PartKind, name: &str) -> Blame {
        let shown = printable(name);
        let is_other = |other: &PartKind| {
            other.find(self.library, name).is_some() || self.broken.contains(&(*other, Arc::from(name)))
        };
        if let Some(other) = ALL_KINDS.iter().find(|other| **other != kind && is_other(other)) {
            return Blame::new(
                format!("`{shown}` is {}; this slot takes {}", other.words(), kind.words()),
                format!("name a part listed under `{}`", kind.key()),
            );
        }
        let broken = self.broken.iter().filter(|(other, _)| *other == kind).map(|(_, name)| &**name);
        let known = kind.names(self.library).into_iter().map(|name| &**name);
        let mut hint = match nearest(name, known.chain(broken)) {
            Some(near) => format!("did you mean `{}`? ", printable(near)),
            None => format!("add it under `{}`; ", kind.key()),
        };
        hint.push_str(&format!("(searched: {})", self.folders));
        Blame::new(format!("no part is named `{shown}` among the {}", kind.plural()), hint)
    }

    /// A part with its count: `name` or `{part: name, count: 2}`.
    pub(crate) fn place<T>(
        &self,
        (kind, parts): (PartKind, &PartsOf<T>),
        node: &Node,
        trail: &Trail<'_>,
        notes: &mut Notes,
    ) -> Option<Placed<T>> {
        let (name, count) = match node {
            Node::Map(_) => {
                let like = "`name`, or `{part: name, count: 2}`";
                let mut fields = Fields::open(node, trail, like, notes)?;
                let name = fields
                    .require("part", "its name", notes)
                    .and_then(|node| self.name(kind, node, &trail.key("part"), notes));
                let count = match fields.take("count") {
                    None => Some(1),
                    Some(node) => whole(node, 1..=MOST_PARALLEL, &trail.key("count"), notes),
                };
                fields.close(|| vec!["part", "count"], notes);
                (name?, count?)
            }
            single => (self.name(kind, single, trail, notes)?, 1),
        };
        let (name, sheet) = parts.get(&name)?;
        Some(Placed { name, sheet, count: u32::try_from(count).unwrap_or(1) })
    }
}
