//! Energy over the budget's profile: per day and year, days of battery, and what one stage saves against another.

use std::io::{self, Write};

use serde::Serialize;

use crate::answer::Answer;
use crate::average::{self, ProfilePower};
use crate::budget::Budget;
use crate::candidate::Candidate;
use crate::grid::PartialPoint;
use crate::infeasible::Infeasible;
use crate::sweep;
use crate::worst::ValueSet;

/// Seconds of a day.
pub const DAY: f64 = 86_400.0;
/// Seconds of a common year.
pub const YEAR: f64 = 365.0 * DAY;

/// What is asked.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct Request {
    /// The stage that the others are held against; all against all when absent.
    pub stage: Option<String>,
}

/// Energy of the stages of a budget over its profile.
pub fn answer<'a>(budget: &'a Budget, request: &'a Request) -> impl Answer + 'a {
    Question { budget, request }
}

struct Question<'a> {
    budget: &'a Budget,
    request: &'a Request,
}

/// The whole answer.
#[derive(Clone, Debug, Serialize)]
pub struct Energy {
    /// Version of the program.
    pub lossbook: &'static str,
    /// Name of the budget.
    pub budget: String,
    /// Set of values.
    pub values: ValueSet,
    /// Energy of the battery, J.
    pub battery: Option<f64>,
    /// Stages in the order written.
    pub stages: Vec<StageEnergy>,
}

/// One stage over the profile.
#[derive(Clone, Debug, Serialize)]
pub struct StageEnergy {
    /// Name of the stage.
    pub stage: String,
    /// What it draws and loses.
    pub usage: Option<Use>,
    /// Why it cannot serve the profile.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub reason: Option<String>,
    /// What it saves against each other stage that can.
    pub savings: Vec<Saving>,
}

/// Energy that a stage draws and loses.
#[derive(Clone, Copy, Debug, PartialEq, Serialize)]
pub struct Use {
    /// Mean output power, W.
    pub mean_output: f64,
    /// Mean loss, W.
    pub mean_loss: f64,
    /// Energy delivered over energy drawn; none without load.
    pub efficiency: Option<f64>,
    /// Drawn a day, J.
    pub energy_per_day: f64,
    /// Drawn a year, J.
    pub energy_per_year: f64,
    /// Lost a day, J.
    pub loss_per_day: f64,
    /// Lost a year, J.
    pub loss_per_year: f64,
    /// Days that the battery lasts.
    pub battery_days: Option<f64>,
}

impl Use {
    fn of(power: ProfilePower, battery: Option<f64>) -> Self {
        let input = power.output + power.loss;
        Use {
            mean_output: power.output,
            mean_loss: power.loss,
            efficiency: power.efficiency(),
            energy_per_day: input * DAY,
            energy_per_year: input * YEAR,
            loss_per_day: power.loss * DAY,
            loss_per_year: power.loss * YEAR,
            battery_days: battery.filter(|_| input > 0.0).map(|energy| energy / input / DAY),
        }
    }
}

/// What one stage saves against another; negative when it uses more.
#[derive(Clone, Debug, PartialEq, Serialize)]
pub struct Saving {
    /// The other stage.
    pub against: String,
    /// J
    pub energy_per_day: f64,
    /// J
    pub energy_per_year: f64,
    /// Days of battery that are gained.
    pub battery_days: Option<f64>,
}

impl Question<'_> {
    fn ask(&self) -> Energy {
        let candidates = Candidate::all(self.budget);
        let battery = self.budget.battery;
        let power = |candidate: &Candidate<'_>| average::over_profile(candidate, PartialPoint::default());
        let powers: Vec<Option<Result<ProfilePower, Infeasible>>> = sweep::map(&candidates, power);
        let uses: Vec<Option<Use>> = powers
            .iter()
            .map(|power| {
                power.as_ref().and_then(|power| power.as_ref().ok()).map(|power| Use::of(*power, battery))
            })
            .collect();
        let named = |name: &str| self.request.stage.as_ref().is_none_or(|stage| stage == name);
        let savings = |place: usize| -> Vec<Saving> {
            let Some(own) = uses[place] else { return Vec::new() };
            if !named(candidates[place].name()) {
                return Vec::new();
            }
            let others = candidates.iter().zip(&uses).enumerate().filter(|(other, _)| *other != place);
            others
                .filter_map(|(_, (candidate, other))| {
                    let other = (*other)?;
                    Some(Saving {
                        against: candidate.name().to_owned(),
                        energy_per_day: other.energy_per_day - own.energy_per_day,
                        energy_per_year: other.energy_per_year - own.energy_per_year,
                        battery_days: own
                            .battery_days
                            .zip(other.battery_days)
                            .map(|(own, other)| own - other),
                    })
                })
                .collect()
        };
        let stages =
            candidates.iter().zip(powers).enumerate().map(|(place, (candidate, power))| StageEnergy {
                stage: candidate.name().to_owned(),
                usage: uses[place],
                reason: power.and_then(Result::err).map(|reason| reason.to_string()),
                savings: savings(place),
            });
        Energy {
            lossbook: env!("CARGO_PKG_VERSION"),
            budget: self.budget.name.clone(),
            values: self.budget.values,
            battery,
            stages: stages.collect(),
        }
    }
}

impl Answer for Question<'_> {
    fn document(&self) -> crate::report::Document {
        crate::report::energy::document(self.budget, &self.ask())
    }

    fn json(&self, out: &mut dyn Write) -> io::Result<()> {
        serde_json::to_writer_pretty(&mut *out, &self.ask())?;
        writeln!(out)
    }

    fn csv(&self, out: &mut dyn Write) -> io::Result<()> {
        let mut writer = csv::Writer::from_writer(out);
        writer.write_record([
            "stage",
            "mean output [W]",
            "mean loss [W]",
            "efficiency",
            "energy per day [J]",
            "energy per year [J]",
            "loss per day [J]",
            "loss per year [J]",
            "battery [days]",
            "reason",
        ])?;
        let number = |value: Option<f64>| value.map_or_else(String::new, |value| value.to_string());
        for stage in self.ask().stages {
            let own = stage.usage;
            let field = |pick: fn(Use) -> f64| number(own.map(pick));
            writer.write_record([
                stage.stage,
                field(|own| own.mean_output),
                field(|own| own.mean_loss),
                number(own.and_then(|own| own.efficiency)),
                field(|own| own.energy_per_day),
                field(|own| own.energy_per_year),
                field(|own| own.loss_per_day),
                field(|own| own.loss_per_year),
                number(own.and_then(|own| own.battery_days)),
                stage.reason.unwrap_or_default(),
            ])?;
        }
        writer.flush()
    }
}
