//! `lossbook sensitivity`

use std::sync::Arc;

use clap::Args;
use lossbook::grid::PartialPoint;
use lossbook::input::at;
use lossbook::input::quantity::{self, Expected};
use lossbook::sensitivity::{self, Request};
use lossbook::sweep::Watch;
use lossbook::units::Dimension;

use super::load::Subject;
use super::options::{Common, Writing};
use super::{Exit, Failure, desk};

/// What a percent of each input does to the loss, and what would buy half a percent of efficiency.
#[derive(Args, Debug)]
#[command(after_help = "\
Examples:
  lossbook sensitivity rail.yaml --stage synchronous
  lossbook sensitivity rail.yaml -s diode --at \"load=2A\" --gain 1%")]
pub(crate) struct Options {
    #[command(flatten)]
    subject: Subject,

    /// Coordinates of the point, the others as at the headline: "input_voltage=24V load=6A ambient=60degC".
    #[arg(long, value_name = "POINT", value_parser = point)]
    at: Option<PartialPoint>,

    /// Gain in efficiency that is looked for, in percent of the input power.
    #[arg(long, value_name = "PERCENT", default_value = "0.5%", value_parser = gain)]
    gain: f64,

    #[command(flatten)]
    writing: Writing,
}

impl Options {
    pub(crate) fn run(&self, common: &Common) -> Result<Exit, Failure> {
        let budget = self.subject.load()?;
        let request =
            Request { stage: self.subject.stage.clone(), at: self.at.unwrap_or_default(), gain: self.gain };
        let watch = Arc::new(Watch::default());
        desk::give(&sensitivity::answer(&budget, &request), &self.writing, common, &watch)
    }
}

/// A point on the command line.
pub(crate) fn point(text: &str) -> Result<PartialPoint, String> {
    at::parse(text).map_err(|blame| format!("{}; {}", blame.reason, blame.hint))
}

fn gain(text: &str) -> Result<f64, String> {
    let expected = Expected { dimension: Dimension::Ratio, example: "0.5 %" };
    match quantity::parse(text, expected) {
        Err(blame) => Err(format!("{}; {}", blame.reason, blame.hint)),
        Ok(gain) if gain > 0.0 && gain < 1.0 => Ok(gain),
        Ok(_) => Err("a gain lies between 0 and 100 %".into()),
    }
}
