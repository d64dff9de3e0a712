//! `lossbook reconcile`

use std::path::{Path, PathBuf};
use std::sync::Arc;

use clap::Args;
use lossbook::budget::Budget;
use lossbook::input;
use lossbook::reconcile::{self, Reconciled, Request};
use lossbook::sweep::Watch;

use super::load::Subject;
use super::options::{Common, Writing};
use super::{Exit, Failure, desk, terminal};

/// Measured points beside the budget: where they disagree, how the difference grows with the load, what could absorb it.
///
/// The bench file is CSV with the unit in each header: input_voltage [V], input_current [A], output_voltage [V],
/// output_current [A], and if you like ambient [degC] and switching_frequency [Hz]. The accuracy of the instruments
/// stands in the budget under `bench:`.
#[derive(Args, Debug)]
#[command(after_help = "\
Examples:
  lossbook reconcile rail.yaml bench.csv --stage synchronous
  lossbook reconcile rail.yaml bench.csv -s synchronous --format markdown -o bench.md")]
pub(crate) struct Options {
    #[command(flatten)]
    subject: Subject,

    /// Bench file: measured points, CSV.
    #[arg(value_name = "BENCH.csv")]
    bench: PathBuf,

    #[command(flatten)]
    writing: Writing,
}

impl Options {
    pub(crate) fn run(&self, common: &Common) -> Result<Exit, Failure> {
        let budget = self.subject.load()?;
        let stage = self.subject.only_stage(&budget)?;
        let answer = beside(&budget, &stage, &self.bench)?;
        desk::give(&answer, &self.writing, common, &Arc::new(Watch::default()))
    }
}

/// A stage beside its bench file.
pub(crate) fn beside<'a>(budget: &'a Budget, stage: &str, bench: &Path) -> Result<Reconciled<'a>, Failure> {
    let Some(accuracy) = budget.bench else { return Err(no_accuracy()) };
    let readings = input::bench::load_bench(bench).map_err(Failure::Input)?;
    let request = Request { stage: stage.to_owned(), readings, accuracy };
    let Some(result) = reconcile::reconcile(budget, &request) else {
        return Err(Failure::asked("the budget has no such stage", "see `lossbook compare` for its stages"));
    };
    if result.points.is_empty() {
        let reasons: Vec<String> =
            result.rejected.iter().take(5).map(|one| format!("line {}: {}", one.line, one.reason)).collect();
        let file = terminal::shown(bench);
        return Err(Failure::asked(
            format!("no row of {file} is a possible reading: {}", reasons.join("; ")),
            "check the columns and the stage",
        ));
    }
    Ok(Reconciled { budget, result })
}

/// The budget says nothing of its bench.
pub(crate) fn no_accuracy() -> Failure {
    let hint = "add `bench: {input_voltage: 0.1 %, input_current: 0.2 %, output_voltage: 0.1 %, output_current: 0.2 %}` to the budget";
    Failure::asked("the budget does not say how accurate the bench is", hint)
}
