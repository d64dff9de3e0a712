//! `lossbook compare`

use std::sync::Arc;

use clap::Args;
use lossbook::compare::{self, Request};
use lossbook::sweep::Watch;

use super::load::{Subject, Values};
use super::options::{Common, Writing};
use super::{Exit, Failure, desk};

/// The stages of a budget side by side, and the loads at which one overtakes another.
///
/// Efficiency, loss by part and by mechanism, temperatures and margins at the headline point; then efficiency and loss
/// over the load, the crossovers, and every requirement with its outcome.
#[derive(Args, Debug)]
#[command(after_help = "\
Examples:
  lossbook compare rail.yaml
  lossbook compare rail.yaml --stage synchronous   exit code 1 when this one misses a requirement
  lossbook compare rail.yaml --plot
  lossbook compare rail.yaml --format markdown -o rail.md")]
pub(crate) struct Options {
    #[command(flatten)]
    subject: Subject,
    #[command(flatten)]
    values: Values,

    /// Draw efficiency against load; in text when the terminal has 72 columns or more.
    #[arg(long)]
    plot: bool,

    #[command(flatten)]
    writing: Writing,
}

impl Options {
    pub(crate) fn run(&self, common: &Common) -> Result<Exit, Failure> {
        let mut budget = self.subject.load()?;
        self.values.apply(&mut budget);
        let request = Request { stage: self.subject.stage.clone(), plot: self.plot };
        let watch = Arc::new(Watch::default());
        desk::give(&compare::answer(&budget, &request, &watch), &self.writing, common, &watch)
    }
}
