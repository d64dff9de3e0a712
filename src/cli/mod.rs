//! The command line: one short file a verb, the words of it in one place.
//!
//! A new verb is a file with a clap `Args` struct and a `run`, a variant of [`Verb`] and an arm of [`Verb::run`].

pub(crate) mod bug;
mod check;
mod compare;
mod desk;
mod diff;
mod energy;
mod evidence;
mod failure;
mod headroom;
mod import;
pub(crate) mod interrupt;
mod justify;
mod load;
mod manual;
mod options;
mod pick;
mod progress;
mod reconcile;
mod rehearse;
mod report;
mod schema;
mod sensitivity;
mod spread;
mod tabulate;
mod template;
pub(crate) mod terminal;
mod words;

use clap::{Parser, Subcommand};

pub(crate) use failure::{Exit, Failure};
use options::Common;

/// Books every watt lost in a step-down rail to one part and one mechanism.
///
/// Synchronous rectifier, freewheel diode and linear regulator side by side, from a folder of parts and a budget file.
#[derive(Debug, Parser)]
#[command(
    name = "lossbook",
    version,
    arg_required_else_help = true,
    subcommand_required = true,
    subcommand_help_heading = "Verbs",
    subcommand_value_name = "VERB",
    disable_help_subcommand = false,
    after_help = AFTER,
)]
pub(crate) struct Command {
    #[command(subcommand)]
    pub(crate) verb: Verb,
    #[command(flatten)]
    pub(crate) common: Common,
}

const AFTER: &str = "\
Start with:
  lossbook template mosfets > parts/mine.yaml   type in a data sheet
  lossbook template budget > rail.yaml          say what the rail must do
  lossbook check rail.yaml                      what is wrong, assumed or missing
  lossbook compare rail.yaml                    the stages side by side

Exit codes: 0 done, 1 done and a requirement fails, 2 could not do it, 130 interrupted.
Results go to standard output, everything else to standard error.

Estimates do not replace measurement; hot parts and stored energy can injure.";

/// What can be asked.
#[derive(Debug, Subcommand)]
pub(crate) enum Verb {
    Compare(compare::Options),
    Justify(justify::Options),
    Report(report::Options),
    Evidence(evidence::Options),
    Tabulate(tabulate::Options),
    Pick(pick::Options),
    Import(import::Options),
    Diff(diff::Options),
    Schema(schema::Options),
    Completions(manual::Completions),
    Manual(manual::Manual),
    Check(check::Options),
    Template(template::Options),
    Spread(spread::Options),
    Sensitivity(sensitivity::Options),
    Headroom(headroom::Options),
    Energy(energy::Options),
    Reconcile(reconcile::Options),
    Rehearse(rehearse::Options),
}

impl Verb {
    /// Does it.
    pub(crate) fn run(&self, common: &Common) -> Result<Exit, Failure> {
        match self {
            Verb::Compare(options) => options.run(common),
            Verb::Justify(options) => options.run(common),
            Verb::Report(options) => options.run(common),
            Verb::Evidence(options) => options.run(common),
            Verb::Tabulate(options) => options.run(common),
            Verb::Pick(options) => options.run(common),
            Verb::Import(options) => options.run(common),
            Verb::Diff(options) => options.run(common),
            Verb::Schema(options) => options.run(common),
            Verb::Completions(options) => options.run(common),
            Verb::Manual(options) => options.run(common),
            Verb::Check(options) => options.run(common),
            Verb::Template(options) => options.run(common),
            Verb::Spread(options) => options.run(common),
            Verb::Sensitivity(options) => options.run(common),
            Verb::Energy(options) => options.run(common),
            Verb::Headroom(options) => options.run(common),
            Verb::Reconcile(options) => options.run(common),
            Verb::Rehearse(options) => options.run(common),
        }
    }
}
