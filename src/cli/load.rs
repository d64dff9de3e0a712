//! Budgets for the verbs that ask questions of one.

use std::path::{Path, PathBuf};

use clap::{Args, ValueEnum};
use lossbook::budget::Budget;
use lossbook::hints;
use lossbook::input;
use lossbook::printable::printable;
use lossbook::worst::ValueSet;

use super::{Failure, terminal};

/// Which data-sheet values are taken.
#[derive(Args, Debug)]
pub(crate) struct Values {
    /// Data-sheet values: typical, or of each printed limit the side that raises the loss at that point.
    #[arg(long, value_name = "SET", default_value = "typical")]
    pub(crate) values: Set,
}

/// A set of data-sheet values.
#[derive(Clone, Copy, Debug, PartialEq, Eq, ValueEnum)]
pub(crate) enum Set {
    /// The typical value of everything.
    Typical,
    /// Of each value with a printed limit, the side that raises the loss at that point.
    Worst,
}

impl Values {
    /// Makes every question about the budget take this set.
    pub(crate) fn apply(&self, budget: &mut Budget) {
        budget.values = match self.values {
            Set::Typical => ValueSet::Typical,
            Set::Worst => ValueSet::Worst,
        };
    }
}

/// The budget, and the stage that is meant.
#[derive(Args, Debug)]
pub(crate) struct Subject {
    /// Budget file: what the rail must do, its candidate stages and the grid.
    #[arg(value_name = "BUDGET")]
    pub(crate) budget: PathBuf,

    /// Name of one stage of the budget.
    #[arg(short, long, value_name = "STAGE")]
    pub(crate) stage: Option<String>,
}

impl Subject {
    /// Reads the budget with its parts; says on standard error how many doubts there are.
    pub(crate) fn load(&self) -> Result<Budget, Failure> {
        let (budget, warnings) = input::load_budget(&self.budget).map_err(Failure::Input)?;
        if !warnings.is_empty() {
            let count = warnings.len();
            let doubts = if count == 1 { "1 warning".into() } else { format!("{count} warnings") };
            let file = terminal::shown(&self.budget);
            terminal::say(&format!("{doubts} about the inputs; `lossbook check {file}` shows them"));
        }
        self.known_stage(&budget)?;
        Ok(budget)
    }

    /// The stage named, or the only one of the budget.
    pub(crate) fn only_stage(&self, budget: &Budget) -> Result<String, Failure> {
        match (&self.stage, budget.stages.as_slice()) {
            (Some(stage), _) => Ok(stage.clone()),
            (None, [only]) => Ok(only.name.clone()),
            (None, stages) => {
                let names: Vec<String> =
                    stages.iter().map(|stage| format!("--stage {}", printable(&stage.name))).collect();
                Err(Failure::asked("the budget has several stages", format!("add {}", names.join(" or "))))
            }
        }
    }

    fn known_stage(&self, budget: &Budget) -> Result<(), Failure> {
        let names = || budget.stages.iter().map(|stage| stage.name.as_str());
        match self.stage.as_deref() {
            Some(asked) if !names().any(|name| name == asked) => {
                Err(unknown_stage(asked, &self.budget, &names().collect::<Vec<_>>()))
            }
            _ => Ok(()),
        }
    }
}

fn unknown_stage(asked: &str, budget: &Path, known: &[&str]) -> Failure {
    let list: Vec<String> = known.iter().map(|name| format!("`{}`", printable(name))).collect();
    let hint = match hints::nearest(asked, known.iter().copied()) {
        Some(near) => format!("did you mean `{}`? Its stages are {}", printable(near), list.join(", ")),
        None => format!("its stages are {}", list.join(", ")),
    };
    Failure::asked(format!("{} has no stage `{}`", terminal::shown(budget), printable(asked)), hint)
}
