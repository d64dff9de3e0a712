//! `lossbook report`

use std::path::PathBuf;
use std::sync::Arc;

use clap::{Args, ValueEnum};
use lossbook::answer::Answer;
use lossbook::budget::Budget;
use lossbook::report::Document;
use lossbook::review::{self, Request};
use lossbook::sweep::Watch;
use lossbook::{energy, headroom, pick, sensitivity, spread};

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
  lossbook report rail.yaml -o review.html --date 2026-12-01
  lossbook report rail.yaml -o review.html --with spread,headroom
  lossbook report rail.yaml -o review.html --stage synchronous --bench bench.csv")]
pub(crate) struct Options {
    #[command(flatten)]
    subject: Subject,

    #[command(flatten)]
    values: Values,

    /// A date to print; without it a rerun gives the same bytes.
    #[arg(long, value_name = "DATE")]
    date: Option<String>,

    /// Sections of further questions: any of spread, sensitivity, headroom, energy.
    #[arg(long, value_name = "QUESTIONS", value_delimiter = ',')]
    with: Vec<Further>,

    /// Bench file of the stage named with --stage: adds what `reconcile` says of it.
    #[arg(long, value_name = "BENCH.csv", requires = "stage")]
    bench: Option<PathBuf>,

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

/// A question whose answer is added.
#[derive(Clone, Copy, Debug, PartialEq, Eq, ValueEnum)]
enum Further {
    /// What the parts' tolerances do.
    Spread,
    /// What a percent of each input does, and what would buy half a percent of efficiency.
    Sensitivity,
    /// What load, ambient and thermal resistance each part allows.
    Headroom,
    /// Energy over the profile.
    Energy,
}

impl Options {
    /// Answers to the further questions, in the order asked, the bench last.
    fn further(&self, budget: &Budget, watch: &Watch) -> Result<Vec<Document>, Failure> {
        let mut further = Vec::new();
        for question in &self.with {
            further.push(match question {
                Further::Spread => {
                    let request = spread::Request { stage: None, draws: spread::DRAWS, seed: 1 };
                    spread::answer(budget, &request, watch).document()
                }
                Further::Sensitivity => {
                    let request = sensitivity::Request::default();
                    sensitivity::answer(budget, &request).document()
                }
                Further::Headroom => headroom::answer(budget, &headroom::Request::default()).document(),
                Further::Energy => {
                    super::energy::needs_profile(budget)?;
                    energy::answer(budget, &energy::Request::default()).document()
                }
            });
        }
        if let (Some(bench), Some(stage)) = (&self.bench, &self.subject.stage) {
            further.push(super::reconcile::beside(budget, stage, bench)?.document());
        }
        Ok(further)
    }

    pub(crate) fn run(&self, common: &Common) -> Result<Exit, Failure> {
        let mut budget = self.subject.load()?;
        self.values.apply(&mut budget);
        let watch = Arc::new(Watch::default());
        let request = Request {
            stage: self.subject.stage.clone(),
            date: self.date.clone(),
            shortlist: pick::Question::search(&budget, pick::Request::default(), &watch)
                .map(|question| question.document()),
            further: self.further(&budget, &watch)?,
        };
        let format = match self.format {
            Kind::Html => Format::Html,
            Kind::Markdown => Format::Markdown,
            Kind::Text => Format::Text,
        };
        let writing = Writing { format, output: self.output.clone() };
        desk::give(&review::answer(&budget, &request, &watch), &writing, common, &watch)
    }
}
