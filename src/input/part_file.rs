//! One library file: its parts, and what is wrong with them.

use std::collections::HashSet;
use std::path::Path;
use std::sync::Arc;

use super::error::Blame;
use super::error::InputError;
use super::kind::{ALL_KINDS, AnySheet, PartKind};
use super::listed::listed;
use super::node::Node;
use super::notes::{MOST_OF_STRETCH, Notes};
use super::outline::{Outline, guard};
use super::path::Trail;
use super::place::{Source, resolve};
use super::stretches::Stretch;
use super::{parallel, yaml};
use crate::budget::InputFile;
use crate::files;
use crate::hints::nearest;
use crate::printable::printable;
use crate::sheet::form::Faults;

/// Whose gaps are worth a warning.
#[derive(Clone, Debug)]
pub(crate) enum Attention {
    /// Every part's.
    Everyone,
    /// Those of the parts named.
    Named(HashSet<Box<str>>),
}

impl Attention {
    fn is_on(&self, name: &str) -> bool {
        match self {
            Attention::Everyone => true,
            Attention::Named(names) => names.contains(name),
        }
    }
}

/// A part as read.
#[derive(Debug)]
pub(crate) struct ReadPart {
    /// Its kind.
    pub(crate) kind: PartKind,
    /// Its name.
    pub(crate) name: Arc<str>,
    /// Its sheet; `None` when it has errors.
    pub(crate) sheet: Option<AnySheet>,
}

/// A file as read.
#[derive(Debug, Default)]
pub(crate) struct PartFile {
    /// The file with its hash; `None` when it could not be read.
    pub(crate) input: Option<InputFile>,
    /// Its parts.
    pub(crate) parts: Vec<ReadPart>,
    /// Errors and warnings with their places.
    pub(crate) faults: Vec<InputError>,
}

/// Keys that only a budget has.
const BUDGET_KEYS: [&str; 4] = ["budget", "stages", "output_voltage", "headline"];

/// True when the keys at the top of a file are those of a budget.
pub(crate) fn is_budget(outline: &Outline) -> bool {
    outline.top.iter().any(|(key, _)| BUDGET_KEYS.contains(&&**key))
}

/// Reads a library file.
pub(crate) fn read(path: &Path, attention: &Attention) -> PartFile {
    let file = match files::read_text(path) {
        Ok(file) => file,
        Err(fault) => {
            let error = InputError::of_file(path, format!("cannot be read: {fault}"), fault.hint());
            return PartFile { faults: vec![error], ..PartFile::default() };
        }
    };
    let input = Some(InputFile { path: path.to_path_buf(), sha256: file.sha256 });
    match guard(path, &file.text) {
        Ok(outline) => PartFile { input, ..read_text(path, &file.text, &outline, attention) },
        Err(faults) => PartFile { input, parts: Vec::new(), faults },
    }
}

/// Reads the text of a library file that has passed the guard.
pub(crate) fn read_text(path: &Path, text: &str, outline: &Outline, attention: &Attention) -> PartFile {
    let mut file = PartFile { faults: top_faults(path, text, outline), ..PartFile::default() };
    let known: Vec<&Stretch> = outline
        .stretches
        .iter()
        .filter(|stretch| stretch.kind.as_ref().is_none_or(|kind| PartKind::from_key(kind).is_some()))
        .collect();
    for read in parallel::map(&known, |stretch| read_stretch(path, text, stretch, attention)) {
        file.parts.extend(read.parts);
        file.faults.extend(read.faults);
    }
    file.faults.sort_by_key(|fault| (fault.line, fault.column));
    file
}

/// Keys at the top that are no kinds of part.
fn top_faults(path: &Path, text: &str, outline: &Outline) -> Vec<InputError> {
    let kinds = || ALL_KINDS.iter().map(|kind| kind.key());
    if outline.top.is_empty() {
        let hint = format!("a library file has one of the keys {} at its top", listed(kinds()));
        return vec![InputError::of_file(path, "the file holds no parts", hint)];
    }
    if is_budget(outline) {
        let hint = "name it on the command line; `parts:` names folders of parts only";
        return vec![InputError::of_file(path, "the file is a budget, not a library of parts", hint)];
    }
    let mut notes = Notes::default();
    for (key, _) in outline.top.iter().filter(|(key, _)| PartKind::from_key(key).is_none()) {
        let hint = match nearest(key, kinds()) {
            Some(near) => format!("did you mean `{near}`?"),
            None => format!("the keys at the top of a library file are {}", listed(kinds())),
        };
        notes.key_error(&Trail::TOP.key(key), Blame::new("unknown kind of part", hint));
    }
    let source = Source { file: path, text, first_line: 1, above: 0, library: false };
    resolve(notes.list, &source)
}

fn read_stretch(path: &Path, text: &str, stretch: &Stretch, attention: &Attention) -> PartFile {
    let own = text.get(stretch.start..stretch.end).unwrap_or_default();
    let above = usize::from(stretch.kind.is_some());
    let source = Source { file: path, text: own, first_line: stretch.line, above, library: true };
    let node = match yaml::read(own) {
        Ok(node) => node,
        Err(fault) => return PartFile { faults: vec![source.yaml_fault(&fault)], ..PartFile::default() },
    };
    let (mut notes, mut parts) = (Notes::at_most(MOST_OF_STRETCH), Vec::new());
    match (&stretch.kind, &node) {
        (Some(kind), node) => read_kind(kind, node, attention, (&mut parts, &mut notes)),
        (None, Node::Map(kinds)) => {
            for (kind, node) in kinds {
                read_kind(kind, node, attention, (&mut parts, &mut notes));
            }
        }
        (None, other) => {
            let hint = format!("the keys at the top are {}", listed(ALL_KINDS.iter().map(|kind| kind.key())));
            notes.value_error(&Trail::TOP, other, Blame::new("a mapping is expected", hint));
        }
    }
    PartFile { input: None, parts, faults: resolve(notes.list, &source) }
}

fn read_kind(
    key: &str,
    node: &Node,
    attention: &Attention,
    (parts, notes): (&mut Vec<ReadPart>, &mut Notes),
) {
    let Some(kind) = PartKind::from_key(key) else { return };
    let top = Trail::TOP;
    let trail = top.key(key);
    match node {
        Node::Map(entries) => {
            for (name, node) in entries {
                let part = read_part(kind, (name, node), &trail, (attention, notes));
                parts.push(part);
            }
        }
        Node::Null => notes.doubt(&trail, Blame::new("holds no parts", "add parts below it, or take it out")),
        other => {
            let reason = format!("{} stands here; a mapping from names to parts is expected", other.words());
            notes.value_error(
                &trail,
                other,
                Blame::new(reason, "write `name:` and the keys of the part below"),
            );
        }
    }
}

fn read_part(
    kind: PartKind,
    (name, node): (&str, &Node),
    trail: &Trail<'_>,
    (attention, notes): (&Attention, &mut Notes),
) -> ReadPart {
    let trail = trail.key(name);
    let (errors, kept) = (notes.errors(), notes.list.len());
    if name.trim() != name || name.is_empty() || name == "all" || printable(name) != name {
        let blame =
            Blame::new("is no usable name of a part", "use letters, digits and dashes; `all` is taken");
        notes.key_error(&trail, blame);
    }
    let sheet = kind.read(node, &trail, notes);
    let sound = notes.errors() == errors;
    if attention.is_on(name) {
        if sound {
            let mut gaps = Faults::default();
            sheet.gaps(&mut gaps);
            notes.add_gaps(gaps, &trail);
        }
    } else {
        notes.forget_warnings(kept);
    }
    ReadPart { kind, name: name.into(), sheet: sound.then_some(sheet) }
}
