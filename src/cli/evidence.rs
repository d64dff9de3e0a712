//! `lossbook evidence`

use std::sync::Arc;

use clap::Args;
use lossbook::evidence::{self, Request};
use lossbook::sweep::Watch;

use super::options::{Common, Writing};
use super::{Exit, Failure, desk};

/// Why the model should be believed: every check against the world outside, computed now.
///
/// Worked examples of data sheets, standards, measurements and independent transient solutions, each with its source, the
/// outside value, ours, the difference, and how large it may be and why. Exit code 1 when a check fails.
#[derive(Args, Debug)]
#[command(after_help = "\
Examples:
  lossbook evidence
  lossbook evidence --full                        also the single checks behind each summary
  lossbook evidence --format json -o evidence.json")]
pub(crate) struct Options {
    /// Every single check, also those that a summary stands for; JSON and CSV always have them.
    #[arg(long)]
    full: bool,

    #[command(flatten)]
    writing: Writing,
}

impl Options {
    pub(crate) fn run(&self, common: &Common) -> Result<Exit, Failure> {
        let watch = Arc::new(Watch::default());
        desk::give(&evidence::answer(Request { full: self.full }), &self.writing, common, &watch)
    }
}
