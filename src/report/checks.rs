//! What is checked beside the watts of a comparison: temperatures with their margins, and findings.

use crate::compare::Comparison;
use crate::findings::Severity;
use crate::ledger::ALL_SLOTS;
use crate::ratings;
use crate::report::{Cell, Column, Document, Table, words};
use crate::units::Dimension as D;

pub(super) fn temperatures(comparison: &Comparison<'_>) -> Table {
    let columns = vec![
        Column::text("stage"),
        Column::text("slot"),
        Column::text("part"),
        Column::quantity("temperature"),
        Column::quantity("rating"),
        Column::quantity("margin"),
    ];
    let mut table = Table::new("", columns).with_keys(2);
    for record in &comparison.headline {
        let Ok(detail) = &record.outcome else { continue };
        let limits = ratings::temperature_limits(record.candidate.sheet);
        for slot in ALL_SLOTS {
            let Some(temperature) = detail.solved.temperatures[slot.index()] else { continue };
            let limit = limits.iter().find(|(limited, _)| *limited == slot).map(|(_, limit)| *limit);
            let held = detail.solved.held[slot.index()];
            let margin = limit.filter(|_| !held).map(|limit| limit - temperature);
            let cell = |value: Option<f64>, dimension| {
                value.map_or(Cell::missing("no rating given"), |value| Cell::quantity(value, dimension))
            };
            table.row(vec![
                Cell::text(record.candidate.name()),
                Cell::text(slot.words()),
                Cell::text(record.candidate.part_names[slot.index()].clone().unwrap_or_default()),
                if held {
                    Cell::temperature(temperature).flagged(Severity::Note, "held at ambient: needs r_th_ja")
                } else {
                    Cell::temperature(temperature)
                },
                cell(limit, D::Temperature),
                if held || temperature > ratings::BEYOND_BELIEF {
                    Cell::missing("")
                } else {
                    flagged_margin(cell(margin, D::TemperatureDifference), margin, comparison)
                },
            ]);
        }
    }
    table
}

fn flagged_margin(cell: Cell, margin: Option<f64>, comparison: &Comparison<'_>) -> Cell {
    match margin {
        Some(margin) if margin < 0.0 => cell.flagged(Severity::Critical, ""),
        Some(margin) if margin < comparison.budget.derating.junction_margin => {
            cell.flagged(Severity::Warning, "")
        }
        _ => cell,
    }
}

pub(super) fn findings(comparison: &Comparison<'_>, document: &mut Document) {
    let columns =
        vec![Column::text("stage"), Column::text("severity"), Column::text("slot"), Column::text("finding")];
    let mut table = Table::new("", columns).with_keys(2);
    for record in &comparison.headline {
        let name = record.candidate.name();
        let found = record.outcome.as_ref().map_or(&[][..], |detail| &detail.findings);
        let elsewhere = record.candidate.findings_at_ends(record.point).into_iter().filter(|(_, finding)| {
            !found.iter().any(|here| here.slot == finding.slot && here.kind == finding.kind)
        });
        for (point, finding) in elsewhere {
            table.row(vec![
                Cell::text(name),
                Cell::text(finding.severity.name()),
                Cell::text(finding.slot.words()),
                Cell::text(format!("{} (at {})", finding.text, words::point(&point))),
            ]);
        }
        for finding in found.iter().chain(&record.candidate.assumptions) {
            table.row(vec![
                Cell::text(name),
                Cell::text(finding.severity.name()),
                Cell::text(finding.slot.words()),
                Cell::text(&finding.text),
            ]);
        }
        for missing in &record.candidate.not_modelled {
            table.row(vec![
                Cell::text(name),
                Cell::text("missing"),
                Cell::text(missing.slot.words()),
                Cell::text(format!("{} not modelled: needs {}", missing.mechanism.words(), missing.needs)),
            ]);
        }
    }
    if table.rows.is_empty() {
        document.paragraph("None.");
    } else {
        document.table(table);
    }
}
