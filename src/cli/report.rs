//! `lossbook report`

use std::path::PathBuf;
use std::sync::Arc;

use clap::{Args, ValueEnum};
use lossbook::review::{self, Request};
use lossbook::sweep::Watch;

use super::load::{Subject, Values};
use super::options::{Common, Format, Writing};
use super::{Exit, Failure, desk};

/// Everything about a budget in one file for the design review, with drawings.
///
/// One self-contained page without script: requirements, verdict, balance, stages side by side, efficiency and loss over the
/// load, temperature margins, findings, assumptions, the derivation of every number at the headline, inputs with their SHA-256.
#[derive(Args, Debug)]
#[command(after_help = "\
Examples:
  lossbook report rail.yaml --output review.html
  lossbook report rail.yaml -o review.html --date 2026-12-01")]
pub(crate) struct Options {
    #[command(flatten)]
    subject: Subject,

    #[command(flatten)]
    values: Values,

    /// A date to print; without it a rerun gives the same bytes.
    #[arg(long, value_name = "DATE")]
    date: Option<String>,

    /// How the review is written; only the page has drawings.
    #[arg(short, long, value_name = "FORMAT", default_value = "html")]
    format: Kind,

    /// Write the review to this file, whole or not at all, instead of standard output.
    #[arg(short, long, value_name = "FILE")]
    output: Option<PathBuf>,
}

/// Formats of a review.
#[derive(Clone, Copy, Debug, ValueEnum)]
enum Kind {
    /// One page for a browser.
    Html,
    /// Markdown, without drawings.
    Markdown,
    /// Plain text, without drawings.
    Text,
}

impl Options {
    pub(crate) fn run(&self, common: &Common) -> Result<Exit, Failure> {
        let mut budget = self.subject.load()?;
        self.values.apply(&mut budget);
        let watch = Arc::new(Watch::default());
        let request = Request { stage: self.subject.stage.clone(), date: self.date.clone(), shortlist: None };
        let format = match self.format {
            Kind::Html => Format::Html,
            Kind::Markdown => Format::Markdown,
            Kind::Text => Format::Text,
        };
        let writing = Writing { format, output: self.output.clone() };
        desk::give(&review::answer(&budget, &request, &watch), &writing, common, &watch)
    }
}
