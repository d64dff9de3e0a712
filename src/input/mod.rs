//! Files in, validated types out.
//!
//! A text is guarded first (`outline`: nesting, doubled keys, aliases), then read (`yaml`) into nodes, then into forms
//! (`reader`) or sections of a budget. Nobody stops at the first fault: each is noted by its key path (`notes`), and
//! only when there are notes are their lines looked up (`place`) and drawn ([`render`]).

pub mod at;
pub mod bench;
mod budget;
mod budget_checks;
mod budget_grid;
mod budget_keys;
mod budget_stages;
mod budget_terms;
pub mod check;
mod datum;
pub mod error;
mod fields;
mod inherit;
mod keys;
pub(crate) mod kind;
mod library;
mod listed;
pub(crate) mod node;
pub(crate) mod notes;
mod outline;
mod parallel;
mod part_file;
pub(crate) mod path;
mod place;
mod probe;
pub mod quantity;
mod reader;
pub mod render;
pub(crate) mod sample;
mod schema;
mod shelf;
mod shortlist;
mod show;
mod stretches;
pub mod template;
mod units;
mod yaml;

use std::path::{Path, PathBuf};

use crate::budget::{Budget, InputFile, Library};
pub use check::{Checked, check_path};
pub use error::{InputError, InputErrors, Severity, Warning};
pub use schema::{SCHEMAS, schema};
pub use template::{TEMPLATES, template};

/// A library with its warnings and the files it was read from.
pub type LoadedLibrary = (Library, Vec<Warning>, Vec<InputFile>);

/// Reads folders of parts, or single files of parts.
///
/// # Errors
/// Every error of every file.
pub fn load_library(paths: &[PathBuf]) -> Result<LoadedLibrary, InputErrors> {
    let loaded = library::load(paths, &part_file::Attention::Everyone);
    let (errors, warnings) = library::split(loaded.faults);
    if errors.is_empty() { Ok((loaded.library, warnings, loaded.inputs)) } else { Err(InputErrors(errors)) }
}

/// Reads a budget with the library that it names.
///
/// # Errors
/// Every error of every file.
pub fn load_budget(path: &Path) -> Result<(Budget, Vec<Warning>), InputErrors> {
    let (budget, faults) = budget::load(path);
    let (errors, warnings) = library::split(faults);
    match budget {
        Some(budget) if errors.is_empty() => Ok((budget, warnings)),
        _ => Err(InputErrors(errors)),
    }
}

#[cfg(test)]
mod tests;
