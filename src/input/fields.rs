//! The keys of one mapping: taken one by one, and whatever nobody took is an unknown key.

use super::error::Blame;
use super::listed::listed;
use super::node::{Entries, Node};
use super::notes::Notes;
use super::path::Trail;
use crate::hints::{Vocabulary, nearest, ours};

/// A mapping that is being read.
#[derive(Debug)]
pub(crate) struct Fields<'n, 't> {
    entries: &'n Entries,
    taken: Vec<bool>,
    /// Where the mapping stands.
    pub(crate) trail: &'t Trail<'t>,
}

impl<'n, 't> Fields<'n, 't> {
    /// Opens a mapping; notes a fault and gives `None` when it is none, or empty. `like` shows what it should be.
    pub(crate) fn open(node: &'n Node, trail: &'t Trail<'t>, like: &str, notes: &mut Notes) -> Option<Self> {
        match node {
            Node::Map(entries) if !entries.is_empty() => {
                Some(Fields { entries, taken: vec![false; entries.len()], trail })
            }
            Node::Map(_) | Node::Null => {
                notes.value_error(
                    trail,
                    node,
                    Blame::new("is empty; a mapping is expected", format!("write {like}")),
                );
                None
            }
            other => {
                let reason = format!("{} stands here; a mapping is expected", other.words());
                notes.value_error(trail, other, Blame::new(reason, format!("write {like}")));
                None
            }
        }
    }

    /// The value of a key, which counts as known from now on.
    pub(crate) fn take(&mut self, name: &str) -> Option<&'n Node> {
        let place = self.entries.iter().position(|(key, _)| &**key == name)?;
        self.taken[place] = true;
        Some(&self.entries[place].1)
    }

    /// The value of a key that must be there; notes a fault when it is not.
    pub(crate) fn require(&mut self, name: &str, example: &str, notes: &mut Notes) -> Option<&'n Node> {
        let found = self.take(name);
        if found.is_none() {
            self.missing(name, &format!("add `{name}: {example}`"), notes);
        }
        found
    }

    /// Notes that a key is missing.
    pub(crate) fn missing(&self, name: &str, hint: &str, notes: &mut Notes) {
        notes.missing(self.trail, name, hint);
    }

    /// A mapping without keys.
    pub(crate) fn empty() -> Self {
        const NONE: &Entries = &Vec::new();
        Fields { entries: NONE, taken: Vec::new(), trail: &Trail::TOP }
    }

    /// The value of a key without counting it as known.
    pub(crate) fn peek(&self, name: &str) -> Option<&'n Node> {
        self.entries.iter().find(|(key, _)| &**key == name).map(|(_, node)| node)
    }

    /// True when the mapping has a key; it does not count as known for that.
    pub(crate) fn has(&self, name: &str) -> bool {
        self.entries.iter().any(|(key, _)| &**key == name)
    }

    /// Keys that nobody took.
    pub(crate) fn untaken(&self) -> impl Iterator<Item = (&'n str, &'n Node)> + '_ {
        let entries = self.entries.iter().zip(&self.taken);
        entries.filter(|(_, taken)| !**taken).map(|((key, node), _)| (&**key, node))
    }

    /// Notes every key that nobody took, with the nearest of the known ones.
    pub(crate) fn close<'k>(self, known: impl FnOnce() -> Vec<&'k str>, notes: &mut Notes) {
        self.close_with(None, known, notes);
    }

    /// Like [`Fields::close`], where a key may also be a word that others use for one of ours.
    pub(crate) fn close_with<'k>(
        self,
        vocabulary: Option<Vocabulary>,
        known: impl FnOnce() -> Vec<&'k str>,
        notes: &mut Notes,
    ) {
        if self.taken.iter().all(|taken| *taken) {
            return;
        }
        let known = known();
        for (key, node) in self.untaken() {
            let decimal = *node == Node::Null && key.starts_with(|c: char| c.is_ascii_digit());
            let ours = vocabulary.map_or(&[][..], |vocabulary| ours(vocabulary, key));
            let ours = ours.iter().find(|word| known.contains(word)).copied();
            let near = ours.or_else(|| nearest(key, known.iter().copied()));
            if let Some(near) = near.filter(|near| !self.has(near)) {
                notes.forget_missing(self.trail, near);
            }
            let hint = match near {
                Some(near) if ours.is_some() && !self.has(near) => format!("it is called `{near}` here"),
                _ if decimal => "decimals take a point, not a comma".to_string(),
                Some(near) if self.has(near) => format!("`{near}` is there already; take this one out"),
                Some(near) => format!("did you mean `{near}`?"),
                None => format!("the keys here are {}", listed(known.iter().copied())),
            };
            notes.key_error(&self.trail.key(key), Blame::new("unknown key", hint));
        }
    }
}
