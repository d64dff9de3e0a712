//! `lossbook justify`

use std::sync::Arc;

use clap::Args;
use lossbook::grid::PartialPoint;
use lossbook::hints::{self, Vocabulary};
use lossbook::input::at;
use lossbook::justify::{self, Request};
use lossbook::ledger::{ALL_MECHANISMS, ALL_SLOTS, Mechanism, Slot};
use lossbook::sweep::Watch;

use super::load::{Subject, Values};
use super::options::{Common, Writing};
use super::{Exit, Failure, desk};

/// Every number of a budget derived: equation, numbers, sources, limits of validity.
///
/// Waveform first, then each booked entry, then temperatures, sum and balance; where each input comes from stands at the end.
#[derive(Args, Debug)]
#[command(after_help = "\
Examples:
  lossbook justify rail.yaml --stage synchronous
  lossbook justify rail.yaml -s diode --at \"input_voltage=24V load=6A ambient=60degC\"
  lossbook justify rail.yaml -s synchronous --slot high_side --mechanism overlap")]
pub(crate) struct Options {
    #[command(flatten)]
    subject: Subject,

    /// Coordinates of the point, the others as at the headline: "input_voltage=24V load=6A ambient=60degC".
    #[arg(long, value_name = "POINT", value_parser = point)]
    at: Option<PartialPoint>,

    /// Only what the entries of this slot need.
    #[arg(long, value_name = "SLOT", value_parser = slot)]
    slot: Option<Slot>,

    /// Only what the entries of this mechanism need.
    #[arg(long, value_name = "MECHANISM", value_parser = mechanism)]
    mechanism: Option<Mechanism>,

    #[command(flatten)]
    values: Values,

    #[command(flatten)]
    writing: Writing,
}

impl Options {
    pub(crate) fn run(&self, common: &Common) -> Result<Exit, Failure> {
        let mut budget = self.subject.load()?;
        self.values.apply(&mut budget);
        let request = Request {
            stage: self.subject.stage.clone(),
            at: self.at.unwrap_or_default(),
            slot: self.slot,
            mechanism: self.mechanism,
        };
        desk::give(&justify::answer(&budget, &request), &self.writing, common, &Arc::new(Watch::default()))
    }
}

/// A point on the command line.
pub(crate) fn point(text: &str) -> Result<PartialPoint, String> {
    at::parse(text).map_err(|blame| format!("{}; {}", blame.reason, blame.hint))
}

fn slot(text: &str) -> Result<Slot, String> {
    let known = ALL_SLOTS.map(Slot::name);
    Slot::from_name(text).ok_or_else(|| unknown(Vocabulary::Slot, text, &known))
}

fn mechanism(text: &str) -> Result<Mechanism, String> {
    let known = ALL_MECHANISMS.map(Mechanism::name);
    Mechanism::from_name(text).ok_or_else(|| unknown(Vocabulary::Mechanism, text, &known))
}

fn unknown(vocabulary: Vocabulary, text: &str, known: &[&'static str]) -> String {
    let hint = hints::hint(vocabulary, text, known.iter().copied());
    hint.unwrap_or_else(|| format!("it is one of {}", known.join(", ")))
}
