//! `lossbook template`

use std::path::PathBuf;

use clap::Args;
use clap::builder::PossibleValuesParser;
use lossbook::import;
use lossbook::input::{self, TEMPLATES};

use super::options::Common;
use super::{Exit, Failure, desk, terminal};

/// A starter file with comments: type in a data sheet from its first page to its last, or say what a rail must do.
///
/// Required keys stand with values to replace; optional ones say what happens without them.
#[derive(Args, Debug)]
#[command(after_help = "\
Examples:
  lossbook template mosfets > parts/mine.yaml
  lossbook template budget -o rail.yaml
  lossbook template csv > mosfets.csv           a table for `lossbook import`")]
pub(crate) struct Options {
    /// What to start.
    #[arg(value_name = "KIND", value_parser = PossibleValuesParser::new(TEMPLATES.into_iter().chain([CSV])))]
    kind: String,

    /// Write it to this new file instead of standard output.
    #[arg(short, long, value_name = "FILE")]
    output: Option<PathBuf>,
}

/// The table that `import` reads.
const CSV: &str = "csv";

impl Options {
    pub(crate) fn run(&self, _: &Common) -> Result<Exit, Failure> {
        // hours of typing may be in a file of that name
        if let Some(file) = self.output.as_ref().filter(|file| file.is_file()) {
            return Err(Failure::asked(
                format!(
                    "{} exists, and a template would take the place of what is in it",
                    terminal::shown(file)
                ),
                "name a new file",
            ));
        }
        let text = if self.kind == CSV { Some(import::TEMPLATE.into()) } else { input::template(&self.kind) };
        let Some(text) = text else {
            return Err(Failure::asked("there is no such template", TEMPLATES.join(", ")));
        };
        desk::to(self.output.as_deref(), |out| out.write_all(text.as_bytes()))?;
        Ok(Exit::Done)
    }
}
