//! `lossbook headroom`

use std::sync::Arc;

use clap::Args;
use lossbook::grid::PartialPoint;
use lossbook::headroom::{self, Request};
use lossbook::sweep::Watch;

use super::load::{Subject, Values};
use super::options::{Common, Writing};
use super::{Exit, Failure, desk};

/// The largest load, ambient and thermal resistance that each part allows, and the heat-spreading it needs.
#[derive(Args, Debug)]
#[command(after_help = "\
Examples:
  lossbook headroom rail.yaml
  lossbook headroom rail.yaml --stage synchronous --at \"ambient=70degC\" --values worst")]
pub(crate) struct Options {
    #[command(flatten)]
    subject: Subject,

    /// Coordinates of the point, the others as at the headline: "input_voltage=24V load=6A ambient=60degC".
    #[arg(long, value_name = "POINT", value_parser = super::sensitivity::point)]
    at: Option<PartialPoint>,

    #[command(flatten)]
    values: Values,

    #[command(flatten)]
    writing: Writing,
}

impl Options {
    pub(crate) fn run(&self, common: &Common) -> Result<Exit, Failure> {
        let mut budget = self.subject.load()?;
        self.values.apply(&mut budget);
        let request = Request { stage: self.subject.stage.clone(), at: self.at.unwrap_or_default() };
        let watch = Arc::new(Watch::default());
        desk::give(&headroom::answer(&budget, &request), &self.writing, common, &watch)
    }
}
