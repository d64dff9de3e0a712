//! `lossbook rehearse`

use std::path::{Path, PathBuf};

use clap::Args;
use lossbook::grid::PartialPoint;
use lossbook::input::quantity::{self, Expected};
use lossbook::printable::printable;
use lossbook::rehearse::{self, Request};

use super::load::Subject;
use super::options::Common;
use super::{Exit, Failure, desk};

/// Invented bench readings of a stage, with values changed and the noise of the instruments: a rehearsal for `reconcile`.
///
/// Shows before the measurement what a bench of the stated accuracy would find: change a value, rehearse, reconcile.
#[derive(Args, Debug)]
#[command(after_help = "\
Examples:
  lossbook rehearse rail.yaml -s synchronous --hide board.output_path=4mohm -o bench.csv
  lossbook reconcile rail.yaml bench.csv -s synchronous")]
pub(crate) struct Options {
    #[command(flatten)]
    subject: Subject,

    /// A value that differs from the budget: slot and key, such as board.output_path=4mohm. May be given several times.
    #[arg(long, value_name = "PATH=VALUE")]
    hide: Vec<String>,

    /// Coordinates of all rows but the load, the others as at the headline: "input_voltage=24V ambient=25degC".
    #[arg(long, value_name = "POINT", value_parser = super::sensitivity::point)]
    at: Option<PartialPoint>,

    /// Seed of the noise.
    #[arg(long, value_name = "SEED", default_value_t = 1)]
    seed: u64,

    /// Write the readings to this file instead of standard output.
    #[arg(short, long, value_name = "FILE")]
    output: Option<PathBuf>,
}

impl Options {
    pub(crate) fn run(&self, _: &Common) -> Result<Exit, Failure> {
        let budget = self.subject.load()?;
        let stage = self.subject.only_stage(&budget)?;
        let Some(accuracy) = budget.bench else { return Err(super::reconcile::no_accuracy()) };
        let sheet = budget.stages.iter().find(|sheet| sheet.name == stage);
        let mut hidden = Vec::new();
        for text in &self.hide {
            let Some((path, value)) = text.split_once('=') else {
                let problem = format!("`{}` has no `=`", printable(text));
                return Err(Failure::asked(problem, "write it like --hide board.output_path=4mohm"));
            };
            let Some(sheet) = sheet else { continue };
            let dimension = rehearse::dimension(&budget, sheet, path).map_err(|hint| {
                Failure::asked(format!("the stage has no value `{}`", printable(path)), hint)
            })?;
            let value = quantity::parse(value, Expected::of(dimension)).map_err(|blame| {
                Failure::asked(format!("`{}`: {}", printable(path), blame.reason), blame.hint)
            })?;
            hidden.push((path.to_owned(), value));
        }
        let request = Request { stage, at: self.at.unwrap_or_default(), hidden, accuracy, seed: self.seed };
        let text = rehearse::file(&budget, &request).map_err(|reason| {
            Failure::asked(format!("nothing to rehearse: {reason}"), "check the values given")
        })?;
        let file = self.output.as_deref().filter(|path| *path != Path::new("-"));
        desk::to(file, |out| out.write_all(text.as_bytes()))?;
        Ok(Exit::Done)
    }
}
