//! Folders of part files to a library.

use std::collections::{HashMap, HashSet};
use std::path::{Path, PathBuf};
use std::sync::Arc;

use super::error::Blame;
use super::error::{InputError, OtherPlace, Severity};
use super::kind::PartKind;
use super::notes::{MOST, Notes};
use super::part_file::{self, Attention, PartFile, ReadPart};
use super::path::Trail;
use super::place::{Source, resolve};
use super::{outline, parallel};
use crate::budget::{InputFile, Library};
use crate::files;
use crate::printable::printable;

/// A library and how reading it went.
#[derive(Debug, Default)]
pub(crate) struct Loaded {
    /// All sound parts.
    pub(crate) library: Library,
    /// Names of parts that have errors; they exist all the same.
    pub(crate) broken: HashSet<(PartKind, Arc<str>)>,
    /// Files read.
    pub(crate) inputs: Vec<InputFile>,
    /// Errors and warnings.
    pub(crate) faults: Vec<InputError>,
}

/// Reads folders of parts, or single files.
pub(crate) fn load(paths: &[PathBuf], attention: &Attention) -> Loaded {
    let mut loaded = Loaded::default();
    let files = list(paths, &mut loaded.faults);
    let read = parallel::map(&files, |file| part_file::read(file, attention));
    let mut origin: HashMap<(PartKind, Arc<str>), usize> = HashMap::new();
    let mut doubled = Vec::new();
    for (index, PartFile { input, parts, faults }) in read.into_iter().enumerate() {
        loaded.inputs.extend(input);
        loaded.faults.extend(faults);
        for ReadPart { kind, name, sheet } in parts {
            let key = (kind, name.clone());
            if let Some(first) = origin.get(&key) {
                doubled.push((key, *first, index));
                continue;
            }
            match sheet {
                Some(sheet) => {
                    sheet.add_to(&mut loaded.library, name);
                }
                None => {
                    loaded.broken.insert(key.clone());
                }
            }
            origin.insert(key, index);
        }
    }
    for ((kind, name), first, second) in doubled.into_iter().take(MOST) {
        loaded.faults.extend(doubled_part(kind, &name, &files[first], &files[second]));
    }
    let nobody_complained = loaded.faults.iter().all(|fault| fault.severity == Severity::Warning);
    if let Some(path) = paths.first().filter(|_| origin.is_empty() && nobody_complained) {
        loaded.faults.push(InputError::of_file(path, "there are no parts", "add parts to its files"));
    }
    loaded
}

/// The files to read, each once however often and by whatever name it is reached.
fn list(paths: &[PathBuf], faults: &mut Vec<InputError>) -> Vec<PathBuf> {
    let (mut seen, mut files) = (HashSet::new(), Vec::new());
    for path in paths {
        let found = if files::is_folder(path) {
            match files::list_yaml(path) {
                Ok(found) if found.is_empty() => {
                    let hint = "put *.yaml files with parts into it, or name another folder";
                    faults.push(InputError::of_file(path, "the folder holds no *.yaml files", hint));
                    continue;
                }
                Ok(found) => found,
                Err(fault) => {
                    let reason = format!("cannot be read: {fault}");
                    faults.push(InputError::of_file(path, reason, fault.hint()));
                    continue;
                }
            }
        } else {
            vec![path.clone()]
        };
        files.extend(found.into_iter().filter(|file| seen.insert(files::true_place(file))));
    }
    files
}

/// The same name in two files, with both places; the files are read once more for them.
fn doubled_part(kind: PartKind, name: &str, first: &Path, second: &Path) -> Option<InputError> {
    let reason =
        format!("a second {} of this name", kind.words().split_once(' ').map_or("part", |words| words.1));
    let hint = format!(
        "rename one of them, or take it out ({} has it too)",
        printable(&first.display().to_string())
    );
    let mut error = locate(second, kind, name, Blame::new(reason, hint))?;
    if let Some(other) = locate(first, kind, name, Blame::new("", "")) {
        error.other = Some(Box::new(OtherPlace {
            label: "the first one".into(),
            file: other.file,
            line: other.line,
            column: other.column,
            excerpt: other.excerpt,
        }));
    }
    Some(error)
}

fn locate(file: &Path, kind: PartKind, name: &str, blame: Blame) -> Option<InputError> {
    let text = files::read_text(file).ok()?.text;
    outline::guard(file, &text).ok()?;
    let mut notes = Notes::default();
    notes.key_error(&Trail::TOP.key(kind.key()).key(name), blame);
    let source = Source { file, text: &text, first_line: 1, above: 0, library: true };
    resolve(notes.list, &source).into_iter().next()
}

/// Splits faults into errors and warnings, each cut to what anybody would read.
pub(crate) fn split(faults: Vec<InputError>) -> (Vec<InputError>, Vec<InputError>) {
    let (errors, warnings): (Vec<_>, Vec<_>) =
        faults.into_iter().partition(|fault| fault.severity == Severity::Error);
    (cut(errors, Severity::Error), cut(warnings, Severity::Warning))
}

fn cut(mut faults: Vec<InputError>, severity: Severity) -> Vec<InputError> {
    let more = faults.len() > MOST;
    faults.truncate(MOST);
    if let Some(last) = faults.last().filter(|_| more) {
        let rest = InputError::of_file(&last.file, "there are more of the kind", "mend these first");
        faults.push(InputError { severity, ..rest });
    }
    faults
}
