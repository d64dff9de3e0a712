//! Requirements one by one, as a table.

use crate::budget::Limit;
use crate::compare::Comparison;
use crate::grid::{ALL_AXES, AxisName, PartialPoint};
use crate::report::{Cell, Column, Document, Severity, Table, words};
use crate::requirements::Judgement;
use crate::units::Dimension as D;

/// Adds every requirement with its verdict in every stage.
pub fn requirements(comparison: &Comparison<'_>, document: &mut Document) {
    if comparison.budget.requirements.is_empty() {
        document.paragraph("The budget states none.");
        return;
    }
    let mut columns = vec![Column::text("requirement")];
    columns.extend(comparison.candidates.iter().map(|candidate| Column::text(candidate.name())));
    let mut table = Table::new("", columns);
    for (index, requirement) in comparison.budget.requirements.iter().enumerate() {
        let mut cells = vec![Cell::text(sentence(&requirement.limit, &requirement.at))];
        for judgements in &comparison.judgements {
            cells.push(judgements.get(index).map_or(Cell::Blank, verdict));
        }
        table.row(cells);
    }
    document.table(table);
}

/// "efficiency at least 90 % at I_OUT 6 A".
pub fn sentence(limit: &Limit, at: &PartialPoint) -> String {
    let what = match limit {
        Limit::EfficiencyMin(least) => format!("efficiency at least {}", Cell::efficiency(*least).shown()),
        Limit::JunctionMarginMin(least) => {
            format!("junction margin at least {}", words::set(*least, D::TemperatureDifference))
        }
        Limit::LossMax(most) => format!("loss at most {}", words::set(*most, D::Power)),
    };
    let named: Vec<String> = ALL_AXES
        .into_iter()
        .filter_map(|axis| {
            let value = at.get(axis)?;
            Some(match axis {
                AxisName::InputVoltage => format!("V_IN {}", words::set(value, D::Voltage)),
                AxisName::Load => format!("I_OUT {}", words::set(value, D::Current)),
                AxisName::Ambient => format!("T_A {}", words::set(value, D::Temperature)),
                AxisName::SwitchingFrequency => format!("f_SW {}", words::set(value, D::Frequency)),
            })
        })
        .collect();
    if named.is_empty() { format!("{what}, everywhere") } else { format!("{what} at {}", named.join(", ")) }
}

fn verdict(judgement: &Judgement) -> Cell {
    let verdict = if judgement.met { "met" } else { "missed" };
    let (value, at) = match &judgement.decisive {
        None => {
            let why = match judgement.requirement.limit {
                Limit::EfficiencyMin(_) => "no point with a load",
                Limit::JunctionMarginMin(_) => "no part with a temperature rating and a thermal resistance",
                Limit::LossMax(_) => "no such point",
            };
            return Cell::text(format!("cannot be judged: {why}")).flagged(Severity::Warning, "");
        }
        Some((point, value)) => (value, words::point(point)),
    };
    let text = match value {
        Ok(value) => {
            let number = match judgement.requirement.limit {
                Limit::EfficiencyMin(_) => Cell::efficiency(*value),
                Limit::JunctionMarginMin(_) => Cell::quantity(*value, D::TemperatureDifference),
                Limit::LossMax(_) => Cell::watts(*value),
            };
            if judgement.points > 1 {
                format!("{verdict}: {} at worst ({at})", number.shown())
            } else {
                format!("{verdict}: {}", number.shown())
            }
        }
        Err(reason) => format!("{verdict}: {reason} ({at})"),
    };
    let cell = Cell::text(text);
    if judgement.met { cell } else { cell.flagged(Severity::Warning, "") }
}
