//! `lossbook tabulate`

use std::sync::Arc;

use clap::{Args, ValueEnum};
use lossbook::input::quantity::{self, Expected};
use lossbook::sweep::Watch;
use lossbook::tabulate::{self, Load, Request, Split};
use lossbook::units::Dimension;

use super::load::{Subject, Values};
use super::options::{Common, Writing};
use super::{Exit, Failure, desk};

/// Efficiency and loss over the grid of a budget: loads down, input voltages across.
///
/// Text and Markdown round and select; JSON and CSV always carry the whole grid at full precision.
#[derive(Args, Debug)]
#[command(after_help = "\
Examples:
  lossbook tabulate rail.yaml
  lossbook tabulate rail.yaml --stage diode --loads 10%,25%,50%,75%,100%
  lossbook tabulate rail.yaml --split mechanism --full
  lossbook tabulate rail.yaml --format csv -o rail.csv")]
pub(crate) struct Options {
    #[command(flatten)]
    subject: Subject,

    /// Every load of the budget instead of round ones, and more columns: powers, input current, mode, hottest part.
    #[arg(long)]
    full: bool,

    /// Loads of the rows: percent of rated_load, or currents, such as 10%,50%,100% or 500mA,2A.
    #[arg(long, value_name = "LOADS", value_delimiter = ',', value_parser = load)]
    loads: Option<Vec<Load>>,

    /// Columns for the loss of each part or of each mechanism.
    #[arg(long, value_name = "INTO")]
    split: Option<Into>,

    #[command(flatten)]
    values: Values,

    #[command(flatten)]
    writing: Writing,
}

/// What the loss is split into.
#[derive(Clone, Copy, Debug, ValueEnum)]
enum Into {
    /// One column a part.
    Part,
    /// One column a mechanism.
    Mechanism,
}

impl Options {
    pub(crate) fn run(&self, common: &Common) -> Result<Exit, Failure> {
        let mut budget = self.subject.load()?;
        self.values.apply(&mut budget);
        let wants_rating = |loads: &Vec<Load>| loads.iter().any(|load| matches!(load, Load::OfRated(_)));
        if budget.rated_load.is_none() && self.loads.as_ref().is_some_and(wants_rating) {
            let hint =
                "add `rated_load: 10 A` to the budget, or give the loads as currents: --loads 500mA,2A";
            return Err(Failure::asked("loads in percent need the rated load", hint));
        }
        let request = Request {
            stage: self.subject.stage.clone(),
            full: self.full,
            loads: self.loads.clone(),
            split: self.split.map(|into| match into {
                Into::Part => Split::Part,
                Into::Mechanism => Split::Mechanism,
            }),
        };
        let watch = Arc::new(Watch::default());
        desk::give(&tabulate::answer(&budget, &request, &watch), &self.writing, common, &watch)
    }
}

/// A load in percent of the rated load or as a current.
fn load(text: &str) -> Result<Load, String> {
    let read = |dimension, example| {
        let expected = Expected { dimension, example };
        quantity::parse(text, expected).map_err(|blame| format!("{}; {}", blame.reason, blame.hint))
    };
    let load = if text.trim_end().ends_with('%') {
        Load::OfRated(read(Dimension::Ratio, "50 %")?)
    } else {
        Load::Amperes(read(Dimension::Current, "50 % or 2 A")?)
    };
    match load {
        Load::OfRated(value) | Load::Amperes(value) if value < 0.0 => Err("a load is not negative".into()),
        load => Ok(load),
    }
}
