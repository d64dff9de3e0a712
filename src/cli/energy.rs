//! `lossbook energy`

use std::sync::Arc;

use clap::Args;
use lossbook::budget::Budget;
use lossbook::energy::{self, Request};
use lossbook::sweep::Watch;

use super::load::{Subject, Values};
use super::options::{Common, Writing};
use super::{Exit, Failure, desk};

/// Energy over the profile of a budget: per day and year, days of battery, savings against the other stages.
#[derive(Args, Debug)]
#[command(after_help = "\
Examples:
  lossbook energy rail.yaml
  lossbook energy rail.yaml --stage synchronous           what this stage saves against the others
  lossbook energy rail.yaml --values worst --format csv")]
pub(crate) struct Options {
    #[command(flatten)]
    subject: Subject,

    #[command(flatten)]
    values: Values,

    #[command(flatten)]
    writing: Writing,
}

impl Options {
    pub(crate) fn run(&self, common: &Common) -> Result<Exit, Failure> {
        let mut budget = self.subject.load()?;
        self.values.apply(&mut budget);
        needs_profile(&budget)?;
        let request = Request { stage: self.subject.stage.clone() };
        let watch = Arc::new(Watch::default());
        desk::give(&energy::answer(&budget, &request), &self.writing, common, &watch)
    }
}

/// Fails without a profile.
pub(crate) fn needs_profile(budget: &Budget) -> Result<(), Failure> {
    if budget.profile.is_empty() {
        let hint =
            "add time shares to the budget: `profile: [{share: 70 %, load: 1 A}, {share: 30 %, load: 8 A}]`";
        return Err(Failure::asked("energy needs a profile, and the budget has none", hint));
    }
    Ok(())
}
