//! `lossbook schema`

use std::path::PathBuf;

use clap::Args;
use clap::builder::PossibleValuesParser;
use lossbook::input::{SCHEMAS, schema};

use super::options::Common;
use super::{Exit, Failure, desk};

/// A JSON Schema of part and budget files: an editor then completes and checks them while you type.
///
/// Many editors take it from a first line such as `# yaml-language-server: $schema=budget.schema.json`.
#[derive(Args, Debug)]
#[command(after_help = "\
Examples:
  lossbook schema budget > budget.schema.json
  lossbook schema parts -o parts.schema.json")]
pub(crate) struct Options {
    /// Files of parts or budgets; without it the schema fits either.
    #[arg(value_name = "KIND", value_parser = PossibleValuesParser::new(SCHEMAS))]
    kind: Option<String>,

    /// Write it to this file instead of standard output.
    #[arg(short, long, value_name = "FILE")]
    output: Option<PathBuf>,
}

impl Options {
    pub(crate) fn run(&self, _: &Common) -> Result<Exit, Failure> {
        let Some(schema) = schema(self.kind.as_deref()) else {
            return Err(Failure::asked("there is no such schema", SCHEMAS.join(", ")));
        };
        desk::to(self.output.as_deref(), |out| {
            serde_json::to_writer_pretty(&mut *out, &schema)?;
            writeln!(out)
        })?;
        Ok(Exit::Done)
    }
}
