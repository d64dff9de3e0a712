//! `lossbook check`

use std::collections::HashSet;
use std::path::PathBuf;

use clap::Args;
use lossbook::budget::Library;
use lossbook::input::{self, Checked, InputErrors};

use super::options::Common;
use super::{Exit, Failure, desk, terminal};

/// Reads budgets and parts, and reports every error and every doubt: assumed, estimated and missing data.
///
/// Errors end with exit code 2. Doubts do not: they say what an answer will rest on.
#[derive(Args, Debug)]
#[command(after_help = "\
Examples:
  lossbook check rail.yaml            the budget and the parts that it names
  lossbook check parts                every part of a folder
  lossbook check parts budgets")]
pub(crate) struct Options {
    /// Budget files, part files, or folders of them.
    #[arg(value_name = "PATH", required = true)]
    paths: Vec<PathBuf>,
}

impl Options {
    pub(crate) fn run(&self, common: &Common) -> Result<Exit, Failure> {
        let (mut sound, mut errors) = (Vec::new(), Vec::new());
        for path in &self.paths {
            match input::check_path(path) {
                Ok(checked) => sound.push(checked),
                Err(InputErrors(found)) => errors.extend(found),
            }
        }
        if !errors.is_empty() {
            return Err(Failure::Input(InputErrors(errors)));
        }
        let colour = terminal::colour(common.colour);
        desk::to(None, |out| {
            let mut warnings = Vec::new();
            for warning in sound.iter().flat_map(|checked| &checked.warnings) {
                // paths that share a library share its doubts
                if !warnings.contains(&warning) {
                    warnings.push(warning);
                    writeln!(out, "{}\n", warning.render(colour))?;
                }
            }
            writeln!(out, "{}", summary(&sound, warnings.len()))
        })?;
        Ok(Exit::Done)
    }
}

/// "7 files, 1 budget, 43 parts: no errors, 3 warnings"
fn summary(sound: &[Checked], warnings: usize) -> String {
    let files: HashSet<_> = sound.iter().flat_map(|checked| &checked.files).map(|file| &file.path).collect();
    let budgets = sound.iter().map(|checked| checked.budgets.len()).sum();
    let of_budgets =
        sound.iter().flat_map(|checked| &checked.budgets).map(|budget| parts_of(&budget.library));
    // budgets of one folder share a library: the largest is what was read
    let parts = sound.iter().map(|checked| parts_of(&checked.library)).chain(of_budgets).max().unwrap_or(0);
    let counts = [counted(files.len(), "file"), counted(budgets, "budget"), counted(parts, "part")];
    let warnings = if warnings == 0 { "no warnings".into() } else { counted(warnings, "warning") };
    format!("{}: no errors, {warnings}", counts.join(", "))
}

fn parts_of(library: &Library) -> usize {
    let kinds = [
        library.mosfets.len(),
        library.diodes.len(),
        library.inductors.len(),
        library.capacitors.len(),
        library.controllers.len(),
        library.linear_regulators.len(),
    ];
    kinds.iter().sum()
}

fn counted(number: usize, thing: &str) -> String {
    if number == 1 { format!("1 {thing}") } else { format!("{number} {thing}s") }
}
