//! `lossbook diff`

use std::path::PathBuf;
use std::sync::Arc;

use clap::Args;
use lossbook::diff::{self, Request};
use lossbook::sweep::Watch;

use super::load::Subject;
use super::options::{Common, Writing};
use super::{Exit, Failure, desk};

/// What changed between two budgets, or between two versions of one, and which inputs did it.
///
/// Entry by entry at the headline of each and over the load; each input that differs with what it alone does to the loss.
#[derive(Args, Debug)]
#[command(after_help = "\
Examples:
  lossbook diff rail.yaml rail-new.yaml
  lossbook diff rail.yaml rail-new.yaml --stage synchronous --format markdown")]
pub(crate) struct Options {
    /// The first budget file.
    #[arg(value_name = "BUDGET_A")]
    first: PathBuf,

    /// The second budget file.
    #[arg(value_name = "BUDGET_B")]
    second: PathBuf,

    /// Name of one stage that both budgets have.
    #[arg(short, long, value_name = "STAGE")]
    stage: Option<String>,

    #[command(flatten)]
    writing: Writing,
}

impl Options {
    pub(crate) fn run(&self, common: &Common) -> Result<Exit, Failure> {
        let load = |budget: &PathBuf| Subject { budget: budget.clone(), stage: self.stage.clone() }.load();
        let (first, second) = (load(&self.first)?, load(&self.second)?);
        let request = Request { stage: self.stage.clone() };
        desk::give(
            &diff::answer(&first, &second, &request),
            &self.writing,
            common,
            &Arc::new(Watch::default()),
        )
    }
}
