//! Faults as the readers find them: by key path. Their lines and columns are looked up afterwards ([`super::place`]).

use super::error::{Blame, Severity};
use super::node::Node;
use super::path::{KeyPath, Trail};
use crate::sheet::form::{Fault, Faults, Form};

/// What to mark in the file.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub(crate) enum Mark {
    /// The key, or the first line of a list's item.
    Key,
    /// The value, when it stands on one line; else its key.
    Value,
}

/// A fault without its line.
#[derive(Clone, Debug, PartialEq)]
pub(crate) struct Note {
    /// Error or warning.
    pub(crate) severity: Severity,
    /// Where.
    pub(crate) path: KeyPath,
    /// What to mark there.
    pub(crate) mark: Mark,
    /// Single value as written.
    pub(crate) value: Option<String>,
    /// What is wrong.
    pub(crate) reason: String,
    /// The way out.
    pub(crate) hint: String,
}

/// Most notes of one severity that are kept; a file that is wrong all over need not be listed in full.
pub(crate) const MOST: usize = 1000;

/// The same for each stretch of a large file.
pub(crate) const MOST_OF_STRETCH: usize = 100;

/// Collects faults; nobody stops at the first.
#[derive(Debug)]
pub(crate) struct Notes {
    /// Kept notes in the order found.
    pub(crate) list: Vec<Note>,
    most: usize,
    errors: usize,
    warnings: usize,
}

impl Default for Notes {
    fn default() -> Self {
        Notes::at_most(MOST)
    }
}

impl Notes {
    /// Keeps so many errors and so many warnings at most.
    pub(crate) fn at_most(most: usize) -> Self {
        Notes { list: Vec::new(), most, errors: 0, warnings: 0 }
    }

    /// An error about a key: missing, unknown, in the wrong place.
    pub(crate) fn key_error(&mut self, trail: &Trail<'_>, blame: Blame) {
        self.add(Severity::Error, trail.path(), Mark::Key, None, blame);
    }

    /// An error about a value.
    pub(crate) fn value_error(&mut self, trail: &Trail<'_>, node: &Node, blame: Blame) {
        self.add(Severity::Error, trail.path(), Mark::Value, node.scalar(), blame);
    }

    /// A doubt about a value.
    pub(crate) fn value_warning(&mut self, trail: &Trail<'_>, node: &Node, blame: Blame) {
        self.add(Severity::Warning, trail.path(), Mark::Value, node.scalar(), blame);
    }

    /// An error that marks a value without repeating it.
    pub(crate) fn at_value(&mut self, trail: &Trail<'_>, blame: Blame) {
        self.add(Severity::Error, trail.path(), Mark::Value, None, blame);
    }

    /// A doubt that marks a value without repeating it.
    pub(crate) fn doubt(&mut self, trail: &Trail<'_>, blame: Blame) {
        self.add(Severity::Warning, trail.path(), Mark::Value, None, blame);
    }

    /// Whatever a form says against itself.
    pub(crate) fn add_faults(&mut self, form: &dyn Form, trail: &Trail<'_>) {
        let mut faults = Faults::default();
        form.cross_check(&mut faults);
        for Fault { path, reason, hint, warning } in faults.0 {
            let severity = if warning { Severity::Warning } else { Severity::Error };
            self.add(severity, trail.path().with(&path), Mark::Value, None, Blame { reason, hint });
        }
    }

    /// What a part leaves open, as warnings.
    pub(crate) fn add_gaps(&mut self, gaps: Faults, trail: &Trail<'_>) {
        for Fault { path, reason, hint, .. } in gaps.0 {
            self.add(Severity::Warning, trail.path().with(&path), Mark::Key, None, Blame { reason, hint });
        }
    }

    /// Drops the warnings among the notes from a place on.
    pub(crate) fn forget_warnings(&mut self, from: usize) {
        let mut place = 0;
        self.list.retain(|note| {
            place += 1;
            place <= from || note.severity == Severity::Error
        });
    }

    /// Notes that a key is missing from the mapping at a trail.
    pub(crate) fn missing(&mut self, trail: &Trail<'_>, name: &str, hint: impl Into<String>) {
        self.key_error(trail, Blame::new(missing(name), hint));
    }

    /// Takes a complaint about a missing key back: it is there, misspelt.
    pub(crate) fn forget_missing(&mut self, trail: &Trail<'_>, name: &str) {
        let (path, reason) = (trail.path(), missing(name));
        let kept = self.list.len();
        self.list.retain(|note| note.path != path || note.reason != reason);
        self.errors -= kept - self.list.len();
    }

    /// Number of errors so far.
    pub(crate) fn errors(&self) -> usize {
        self.errors
    }

    fn add(
        &mut self,
        severity: Severity,
        path: KeyPath,
        mark: Mark,
        value: Option<String>,
        Blame { reason, hint }: Blame,
    ) {
        let count = match severity {
            Severity::Error => &mut self.errors,
            Severity::Warning => &mut self.warnings,
        };
        *count += 1;
        if *count <= self.most {
            self.list.push(Note { severity, path, mark, value, reason, hint });
        }
    }
}

fn missing(name: &str) -> String {
    format!("`{name}` is missing")
}
