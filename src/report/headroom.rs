//! Headroom as a document.

use crate::budget::Budget;
use crate::grid::OperatingPoint;
use crate::headroom::{Headroom, PartRoom, Spreading, StageRoom};
use crate::report::{Cell, Column, Document, Severity, Table, caption, words};
use crate::root::Bound;
use crate::units::Dimension as D;

/// The whole answer: for each stage what each part allows.
pub fn document(budget: &Budget, headroom: &Headroom) -> Document {
    let mut document = Document::new(format!("{}: headroom to the temperature limits", budget.name));
    document.fact("computed by", Cell::text(caption::origin(budget)));
    document.paragraph(format!(
        "The largest load, ambient and thermal resistance to ambient that each part allows at its temperature limit less \
         {}, one at a time, with loss and temperature of all parts settled together (E52).",
        words::set(headroom.margin, D::TemperatureDifference)
    ));
    for stage in &headroom.stages {
        document.heading(2, stage.stage.clone());
        if let Some(reason) = &stage.reason {
            document.notice(Severity::Critical, format!("cannot run at the point: {reason}"));
        }
        if stage.parts.is_empty() {
            document.paragraph("No part of this stage states a temperature limit.");
        } else {
            document.table(table(headroom, stage));
            document.list(stage.parts.iter().filter_map(spreading).collect());
        }
    }
    document
}

fn table(headroom: &Headroom, stage: &StageRoom) -> Table {
    let columns = vec![
        Column::text("part"),
        Column::quantity("may reach"),
        Column::quantity("now"),
        Column::quantity("largest load"),
        Column::quantity("largest ambient"),
        Column::quantity("largest R_th"),
        Column::quantity("R_th now"),
    ];
    let point = words::point(&OperatingPoint {
        input_voltage: stage.input_voltage,
        load: stage.load,
        ambient: stage.ambient,
        switching_frequency: stage.switching_frequency,
    });
    let caption = format!("{} · {point} · {} values", stage.stage, headroom.values.name());
    let mut table = Table::new(caption, columns);
    for part in &stage.parts {
        let now = part.temperature.map_or(Cell::missing("cannot run"), Cell::temperature);
        let hot = part.temperature.is_some_and(|now| now > part.limit);
        table.row(vec![
            Cell::text(format!("{} {}", part.slot.replace('_', " "), part.part)),
            Cell::temperature(part.limit),
            if hot { now.flagged(Severity::Warning, "above what is allowed") } else { now },
            bound(&part.load, D::Current),
            bound(&part.ambient, D::Temperature),
            bound(&part.r_th, D::ThermalResistance),
            part.r_th_now.map_or(Cell::missing("not given"), |now| Cell::quantity(now, D::ThermalResistance)),
        ]);
    }
    table
}

fn bound(bound: &Bound, dimension: D) -> Cell {
    match bound {
        Bound::Value { value } => Cell::quantity(*value, dimension),
        Bound::Unbounded => Cell::text("unbounded"),
        Bound::AlreadyExceeded => Cell::text("already exceeded").flagged(Severity::Critical, ""),
        Bound::EndsBefore { value: Some(value), reason } => {
            let remark = format!("not reached; the stage ends there: {reason}");
            Cell::quantity(*value, dimension).flagged(Severity::Note, remark)
        }
        Bound::EndsBefore { value: None, reason } => Cell::missing(reason.clone()),
    }
}

fn spreading(part: &PartRoom) -> Option<String> {
    let name = part.slot.replace('_', " ");
    match part.spreading {
        Spreading::NoneNeeded => None,
        Spreading::Beside { r_th } => {
            let needed = Cell::quantity(r_th, D::ThermalResistance).shown();
            Some(format!(
                "{name}: each piece needs a second way to ambient of at most {needed} beside its own, in copper or a heat sink."
            ))
        }
        Spreading::NoneHelps => Some(format!(
            "{name}: no heat path to ambient helps; ambient and its neighbours alone bring it above what is allowed."
        )),
        Spreading::Unknown => {
            Some(format!("{name}: its thermal resistance is not given, so it counts as being at ambient."))
        }
    }
}
