//! Files in, validated types out.
pub mod at;
mod budget;
mod budget_grid;
mod budget_keys;
mod budget_stages;
mod budget_terms;
pub mod check;
mod datum;
pub mod error;
mod fields;
mod gaps;
mod inherit;
mod kind;
mod library;
mod listed;
mod node;
mod notes;
mod outline;
mod parallel;
mod part_file;
mod path;
mod place;
mod probe;
pub mod quantity;
mod reader;
pub mod render;
mod sample;
mod schema;
mod shelf;
mod shortlist;
mod show;
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
mod tests {
    use super::*;

    #[test]
    fn example_library_loads() {
        let root = PathBuf::from(env!("CARGO_MANIFEST_DIR")).join("parts");
        match load_library(&[root]) {
            Ok((library, warnings, inputs)) => {
                println!("{} {} {}", library.mosfets.len(), inputs.len(), warnings.len());
                for warning in warnings {
                    println!("{warning}");
                }
            }
            Err(errors) => panic!("{errors}"),
        }
    }

    #[test]
    fn example_budgets_load() {
        let root = PathBuf::from(env!("CARGO_MANIFEST_DIR")).join("budgets");
        for path in crate::files::list_yaml(&root).expect("examples") {
            match load_budget(&path) {
                Ok((budget, warnings)) => {
                    println!(
                        "{} {} {} {:?}",
                        budget.name,
                        budget.grid.len(),
                        warnings.len(),
                        budget.headline
                    );
                }
                Err(errors) => panic!("{errors}"),
            }
        }
    }
}
