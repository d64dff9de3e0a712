//! Energy over the profile as a document.

use crate::budget::Budget;
use crate::energy::{Energy, StageEnergy, Use};
use crate::report::number::quantity;
use crate::report::{Cell, Column, Document, Severity, Table, caption, words};
use crate::units::Dimension as D;

/// The whole answer: what each stage draws, how long the battery lasts, what is saved.
pub fn document(budget: &Budget, energy: &Energy) -> Document {
    let mut document = Document::new(format!("{}: energy over its profile", budget.name));
    document.fact("computed by", Cell::text(caption::origin(budget)));
    document.fact("profile", Cell::text(profile(budget)));
    if let Some(battery) = energy.battery {
        document.fact("battery", Cell::text(watt_hours(battery)));
    }
    let least = |stage: &&StageEnergy| stage.usage.map_or(f64::INFINITY, |own| own.energy_per_day);
    let able = energy.stages.iter().filter(|stage| stage.usage.is_some());
    if let Some(best) = able.min_by(|a, b| least(a).total_cmp(&least(b))) {
        document.verdict(format!("Verdict: {}.", sentence(best, energy)));
    }
    document.heading(2, "Drawn and lost");
    document.table(table(energy));
    for stage in energy.stages.iter().filter(|stage| stage.reason.is_some()) {
        let reason = stage.reason.clone().unwrap_or_default();
        document.notice(Severity::Warning, format!("{} cannot serve the profile: {reason}", stage.stage));
    }
    if energy.stages.iter().any(|stage| !stage.savings.is_empty()) {
        document.heading(2, "Saved against another stage");
        document.table(savings(energy));
    }
    if energy.battery.is_some() {
        document.paragraph(
            "Battery days are its stated energy over the mean input power: no ageing, no self-discharge, no limit of its \
             own voltage.",
        );
    }
    document
}

fn profile(budget: &Budget) -> String {
    let part = |part: &crate::budget::ProfilePoint| {
        format!(
            "{} of the time {}",
            words::set(part.share, D::Ratio),
            words::set(part.at.or(budget.headline).load, D::Current)
        )
    };
    words::list(&budget.profile.iter().map(part).collect::<Vec<_>>())
}

/// "1.25 kWh": a watt with its prefix, times an hour.
fn watt_hours(joules: f64) -> String {
    format!("{}h", quantity(joules / 3600.0, D::Power))
}

fn days(days: f64) -> String {
    format!("{} days", quantity(days, D::Number))
}

fn sentence(best: &StageEnergy, energy: &Energy) -> String {
    let mut line = format!("{} draws the least", best.stage);
    if let Some(own) = best.usage {
        line.push_str(&format!(", {} a day", watt_hours(own.energy_per_day)));
        if let (Some(lasts), Some(battery)) = (own.battery_days, energy.battery) {
            line.push_str(&format!("; {} last {}", watt_hours(battery), days(lasts)));
        }
    }
    let saved = best.savings.iter().min_by(|a, b| a.energy_per_day.total_cmp(&b.energy_per_day));
    if let Some(saved) = saved {
        line.push_str(&format!("; {} a year less than {}", watt_hours(saved.energy_per_year), saved.against));
    }
    line
}

fn table(energy: &Energy) -> Table {
    let columns = vec![
        Column::text("stage"),
        Column::quantity("mean output"),
        Column::quantity("mean loss"),
        Column::quantity("energy-weighted efficiency"),
        Column::quantity("drawn a day"),
        Column::quantity("drawn a year"),
        Column::quantity("lost a year"),
        Column::quantity("battery"),
    ];
    let mut table = Table::new(format!("over the profile · {} values", energy.values.name()), columns);
    for stage in &energy.stages {
        let cell = |of: &dyn Fn(Use) -> Cell| match stage.usage {
            Some(own) => of(own),
            None => Cell::missing(stage.reason.clone().unwrap_or_default()),
        };
        table.row(vec![
            Cell::text(stage.stage.clone()),
            cell(&|own| Cell::watts(own.mean_output)),
            cell(&|own| Cell::watts(own.mean_loss)),
            cell(&|own| own.efficiency.map_or(Cell::missing("no load"), Cell::efficiency)),
            cell(&|own| Cell::text(watt_hours(own.energy_per_day))),
            cell(&|own| Cell::text(watt_hours(own.energy_per_year))),
            cell(&|own| Cell::text(watt_hours(own.loss_per_year))),
            cell(&|own| own.battery_days.map_or(Cell::Blank, |lasts| Cell::text(days(lasts)))),
        ]);
    }
    table
}

fn savings(energy: &Energy) -> Table {
    let columns = vec![
        Column::text("stage"),
        Column::text("against"),
        Column::quantity("saved a day"),
        Column::quantity("saved a year"),
        Column::quantity("battery gains"),
    ];
    let mut table =
        Table::new(format!("over the profile · {} values", energy.values.name()), columns).with_keys(2);
    for stage in &energy.stages {
        for saving in &stage.savings {
            table.row(vec![
                Cell::text(stage.stage.clone()),
                Cell::text(saving.against.clone()),
                Cell::text(watt_hours(saving.energy_per_day)),
                Cell::text(watt_hours(saving.energy_per_year)),
                saving.battery_days.map_or(Cell::Blank, |gained| Cell::text(days(gained))),
            ]);
        }
    }
    table
}
