//! `lossbook spread`

use std::sync::Arc;

use clap::Args;
use lossbook::spread::{self, Request};
use lossbook::sweep::Watch;

use super::load::Subject;
use super::options::{Common, Writing};
use super::{Exit, Failure, desk};

/// What the tolerances of the parts do to loss, efficiency and temperature.
///
/// Random draws over every value that states limits or a deviation, with root-sum-square and worst values beside them;
/// the ten tolerances that matter most; the input voltage of the highest loss; and, kept apart, what the model leaves
/// open. The same seed gives the same bytes on any number of threads.
#[derive(Args, Debug)]
#[command(after_help = "\
Examples:
  lossbook spread rail.yaml
  lossbook spread rail.yaml --stage synchronous --draws 50000 --seed 7
  lossbook spread rail.yaml --format json -o spread.json")]
pub(crate) struct Options {
    #[command(flatten)]
    subject: Subject,

    /// Number of random draws.
    #[arg(long, value_name = "N", default_value_t = spread::DRAWS, value_parser = clap::value_parser!(u64).range(20..=1_000_000))]
    draws: u64,

    /// Seed of the draws.
    #[arg(long, value_name = "SEED", default_value_t = 1)]
    seed: u64,

    #[command(flatten)]
    writing: Writing,
}

impl Options {
    pub(crate) fn run(&self, common: &Common) -> Result<Exit, Failure> {
        let budget = self.subject.load()?;
        let request = Request { stage: self.subject.stage.clone(), draws: self.draws, seed: self.seed };
        let watch = Arc::new(Watch::default());
        desk::give(&spread::answer(&budget, &request, &watch), &self.writing, common, &watch)
    }
}
