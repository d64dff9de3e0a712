//! Checking a file or a folder, whether it holds budgets or parts.

use std::path::{Path, PathBuf};

use super::error::{InputError, InputErrors, Warning};
use super::part_file::{Attention, is_budget};
use super::{budget, library, outline};
use crate::budget::{Budget, InputFile, Library};
use crate::files;

/// What a check found to be sound.
#[derive(Debug, Default)]
pub struct Checked {
    /// Budgets, each with the library it names.
    pub budgets: Vec<Budget>,
    /// Parts of library files named themselves.
    pub library: Library,
    /// Every file that was read, once.
    pub files: Vec<InputFile>,
    /// Doubts and assumptions.
    pub warnings: Vec<Warning>,
}

/// Reads a budget, a library file, or every file of a folder.
///
/// # Errors
/// Every error of every file.
pub fn check_path(path: &Path) -> Result<Checked, InputErrors> {
    let files = if files::is_folder(path) {
        files::list_yaml(path)
            .map_err(|fault| InputError::of_file(path, format!("cannot be read: {fault}"), fault.hint()))?
    } else {
        vec![path.to_path_buf()]
    };
    let (budgets, parts): (Vec<PathBuf>, Vec<PathBuf>) =
        files.into_iter().partition(|file| holds_budget(file));
    let (mut checked, mut faults) = (Checked::default(), Vec::new());
    if budgets.is_empty() || !parts.is_empty() {
        let paths = if parts.is_empty() { vec![path.to_path_buf()] } else { parts };
        let loaded = library::load(&paths, &Attention::Everyone);
        checked.library = loaded.library;
        checked.files = loaded.inputs;
        faults.extend(loaded.faults);
    }
    for file in budgets {
        let (budget, found) = budget::load(&file);
        faults.extend(found);
        let inputs = budget.iter().flat_map(|budget| &budget.inputs);
        let new: Vec<_> = inputs.filter(|input| !checked.files.contains(input)).cloned().collect();
        checked.files.extend(new);
        checked.budgets.extend(budget);
    }
    // several budgets share a library, and what is wrong with it is said once
    let mut said: Vec<InputError> = Vec::with_capacity(faults.len());
    for fault in faults {
        if !said.contains(&fault) {
            said.push(fault);
        }
    }
    let (errors, warnings) = library::split(said);
    checked.warnings = warnings;
    if errors.is_empty() { Ok(checked) } else { Err(InputErrors(errors)) }
}

/// True for a file with the keys of a budget; what cannot be read is left to the reader of parts to complain of.
fn holds_budget(file: &Path) -> bool {
    let text = files::read_text(file).map(|file| file.text).unwrap_or_default();
    outline::guard(file, &text).is_ok_and(|outline| is_budget(&outline))
}
