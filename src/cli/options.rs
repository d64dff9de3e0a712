//! Options that several verbs share.

use std::path::PathBuf;

use clap::{Args, ValueEnum};
use lossbook::sweep;

use super::Failure;

/// Options of every verb.
#[derive(Args, Debug)]
#[command(next_help_heading = "Options of every verb")]
pub(crate) struct Common {
    /// Colour in text: by default when standard output is a terminal and NO_COLOR is not set.
    #[arg(
        long,
        global = true,
        value_name = "WHEN",
        default_value = "auto",
        alias = "color",
        hide_default_value = true
    )]
    pub(crate) colour: Colour,

    /// Threads for sweeps: by default one a core. Results are the same with any number.
    #[arg(long, global = true, value_name = "N", value_parser = clap::value_parser!(u16).range(1..=1024))]
    pub(crate) threads: Option<u16>,
}

impl Common {
    /// Sets what holds for the whole run.
    pub(crate) fn apply(&self) -> Result<(), Failure> {
        match self.threads {
            Some(threads) if !sweep::set_threads(usize::from(threads)) => {
                Err(Failure::asked("the system gives no threads for sweeps", "try `--threads 1`"))
            }
            _ => Ok(()),
        }
    }
}

/// When text is coloured.
#[derive(Clone, Copy, Debug, PartialEq, Eq, ValueEnum)]
pub(crate) enum Colour {
    /// On a terminal, unless NO_COLOR is set.
    Auto,
    /// Everywhere, also into files and pipes.
    Always,
    /// Nowhere.
    Never,
}

/// Options of verbs that give an answer.
#[derive(Args, Debug)]
pub(crate) struct Writing {
    /// How the answer is written.
    #[arg(short, long, value_name = "FORMAT", default_value = "text")]
    pub(crate) format: Format,

    /// Write the answer to this file, whole or not at all, instead of standard output.
    #[arg(short, long, value_name = "FILE")]
    pub(crate) output: Option<PathBuf>,
}

/// Formats of answers.
#[derive(Clone, Copy, Debug, PartialEq, Eq, ValueEnum)]
pub(crate) enum Format {
    /// Plain text for terminals and mails, rounded.
    #[value(alias = "txt")]
    Text,
    /// One row a point with units in the header, full precision.
    Csv,
    /// SI numbers, full precision.
    Json,
    /// Pipe tables to paste into a report, rounded.
    #[value(alias = "md")]
    Markdown,
    /// One page for a browser, without script, rounded.
    #[value(alias = "htm")]
    Html,
    /// A spreadsheet with typed numbers and a chart, full precision; goes to a file.
    #[cfg(feature = "xlsx")]
    #[value(alias = "spreadsheet")]
    Xlsx,
}
