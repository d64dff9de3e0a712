//! `lossbook pick`

use std::path::{Path, PathBuf};
use std::sync::Arc;
use std::sync::atomic::Ordering;

use clap::{Args, ValueEnum};
use lossbook::budget::Budget;
use lossbook::files;
use lossbook::pick::{self, By, Question, Request, Slice, merge};
use lossbook::printable::printable;
use lossbook::sweep::Watch;

use super::load::{Subject, Values};
use super::options::{Common, Writing};
use super::{Exit, Failure, desk, interrupt, terminal};

/// Which part for each slot of the budget's shortlist, and which frequency.
///
/// Every combination is evaluated over the grid, ranked, and told why it is not first. Parts and combinations that break
/// a rating or cannot run are counted by reason; those that lack data are ranked apart.
#[derive(Args, Debug)]
#[command(after_help = "\
Examples:
  lossbook pick rail.yaml
  lossbook pick rail.yaml --by price --top 5
  lossbook pick rail.yaml --slice 3/16 --format json -o slice-3.json      one share of sixteen, for an array job
  lossbook pick rail.yaml --merge slice-*.json                            all shares: the same bytes as one run

Ctrl-C ends a long search and prints the best so far, marked incomplete, with exit code 130.")]
pub(crate) struct Options {
    /// Budget file with a shortlist; with --merge it may be left out, and less is said about the winner.
    #[arg(value_name = "BUDGET", required_unless_present = "merge")]
    budget: Option<PathBuf>,

    /// What combinations are ranked by.
    #[arg(long, value_name = "ORDER", default_value = "headline_loss")]
    by: Order,

    /// Places of the ranking.
    #[arg(long, value_name = "N", default_value = "10", value_parser = clap::value_parser!(u32).range(1..=100_000))]
    top: u32,

    /// Follow every combination to its end: the same ranking, later, and full counts of what is left out.
    #[arg(long)]
    exhaustive: bool,

    /// Only share K of N, for one machine of several.
    #[arg(long, value_name = "K/N")]
    slice: Option<Slice>,

    /// Put the JSON files of all slices together.
    #[arg(long, value_name = "FILES", num_args = 1.., conflicts_with_all = ["slice", "exhaustive", "by", "top"])]
    merge: Vec<PathBuf>,

    #[command(flatten)]
    values: Values,

    #[command(flatten)]
    writing: Writing,
}

/// What combinations are ranked by.
#[derive(Clone, Copy, Debug, ValueEnum)]
#[value(rename_all = "snake_case")]
enum Order {
    /// Loss at the headline.
    HeadlineLoss,
    /// Mean loss over the profile.
    ProfileLoss,
    /// Largest loss on the grid.
    WorstLoss,
    /// Smallest distance of any part to its temperature rating on the grid.
    JunctionMargin,
    /// Price, among the combinations that meet the requirements.
    Price,
}

impl From<Order> for By {
    fn from(order: Order) -> By {
        match order {
            Order::HeadlineLoss => By::HeadlineLoss,
            Order::ProfileLoss => By::ProfileLoss,
            Order::WorstLoss => By::WorstLoss,
            Order::JunctionMargin => By::JunctionMargin,
            Order::Price => By::Price,
        }
    }
}

impl Options {
    pub(crate) fn run(&self, common: &Common) -> Result<Exit, Failure> {
        let load = |file: &PathBuf| Subject { budget: file.clone(), stage: None }.load();
        let mut budget = self.budget.as_ref().map(load).transpose()?;
        if let Some(budget) = &mut budget {
            self.values.apply(budget);
        }
        let watch = Arc::new(Watch::default());
        if !self.merge.is_empty() {
            let outcome = self.merged(budget.as_ref())?;
            return desk::give(&Question::merged(outcome, budget.as_ref()), &self.writing, common, &watch);
        }
        let Some(budget) = budget else { return Err(no_shortlist("the budget")) };
        let request = Request {
            by: self.by.into(),
            top: self.top as usize,
            exhaustive: self.exhaustive,
            slice: self.slice.unwrap_or_default(),
        };
        if request.by == By::ProfileLoss && budget.profile.is_empty() {
            let hint = "add `profile:` with shares of time that add up to 100 %, or rank by headline_loss";
            return Err(Failure::asked("ranking by profile_loss needs a profile", hint));
        }
        let question =
            Question::search(&budget, request, &watch).ok_or_else(|| no_shortlist(&budget.name))?;
        interrupt::stops_search(&watch);
        let exit = desk::give(&question, &self.writing, common, &watch)?;
        Ok(if watch.stop.load(Ordering::Relaxed) { Exit::Interrupted } else { exit })
    }

    fn merged(&self, budget: Option<&Budget>) -> Result<pick::entry::Outcome, Failure> {
        let mut slices = Vec::new();
        for file in &self.merge {
            let text = files::read_text(file).map_err(|fault| {
                Failure::asked(format!("{} cannot be read: {fault}", terminal::shown(file)), fault.hint())
            })?;
            let slice = merge::read(&text.text).map_err(|reason| not_a_slice(file, &reason))?;
            slices.push(slice);
        }
        let outcome = merge::merge(slices).map_err(|(file, reason)| {
            let hint = "name the JSON files of all slices of one run, each once";
            match file.and_then(|file| self.merge.get(file)) {
                Some(file) => Failure::asked(format!("{}: {reason}", terminal::shown(file)), hint),
                None => Failure::asked(reason, hint),
            }
        })?;
        match budget.map(Budget::fingerprint) {
            Some(input) if input != outcome.input => Err(Failure::asked(
                "the slices are of other inputs than this budget and its parts",
                "run the slices again, or leave the budget out to see their ranking alone",
            )),
            _ => Ok(outcome),
        }
    }
}

fn not_a_slice(file: &Path, reason: &str) -> Failure {
    let hint = "slices are written with `lossbook pick BUDGET --slice K/N --format json -o FILE`";
    Failure::asked(format!("{} is no slice: {reason}", terminal::shown(file)), hint)
}

fn no_shortlist(name: &str) -> Failure {
    Failure::asked(
        format!("{} has no shortlist", printable(name)),
        "add `shortlist: {stage: synchronous, high_side: all, low_side: all}` to the budget",
    )
}
