//! Sensitivities as a document.

use crate::budget::Budget;
use crate::grid::OperatingPoint;
use crate::report::number::{Form, show};
use crate::report::{Cell, Column, Document, Severity, Table, bars, caption, words};
use crate::sensitivity::{Sensitivity, StageSensitivity};
use crate::units::Dimension as D;

/// Inputs listed for each stage.
const LISTED: usize = 20;

/// The whole answer: for each stage the slopes, then what would buy the gain.
pub fn document(budget: &Budget, sensitivity: &Sensitivity) -> Document {
    let mut document = Document::new(format!("{}: sensitivity of the loss", budget.name));
    document.fact("computed by", Cell::text(caption::origin(budget)));
    document.paragraph(
        "Change of the settled loss in percent for one percent more of each input (one kelvin more of a temperature), by \
         central differences of the model with a step checked against half of it.",
    );
    for stage in &sensitivity.stages {
        document.heading(2, stage.stage.clone());
        match (&stage.reason, stage.loss) {
            (Some(reason), _) => document.notice(Severity::Critical, format!("cannot run: {reason}")),
            (None, Some(loss)) => {
                document.fact("loss", Cell::watts(loss));
                if let Some(efficiency) = stage.efficiency {
                    document.fact("efficiency", Cell::efficiency(efficiency));
                }
                document.table(slopes(stage));
                let gain = show(sensitivity.gain, Form::Setting(D::Ratio));
                document.heading(3, format!("What would buy {} {gain} of efficiency", stage.stage));
                document.table(purchases(stage));
            }
            (None, None) => {}
        }
    }
    document
}

fn at(stage: &StageSensitivity) -> String {
    words::point(&OperatingPoint {
        input_voltage: stage.input_voltage,
        load: stage.load,
        ambient: stage.ambient,
        switching_frequency: stage.switching_frequency.unwrap_or(0.0),
    })
}

fn slopes(stage: &StageSensitivity) -> Table {
    let columns = vec![
        Column::text("input"),
        Column::text("part"),
        Column::quantity("value"),
        Column::quantity("loss"),
        Column::text("for one more"),
        Column::text("less │ more loss"),
    ];
    let what = format!("{} · {}", stage.stage, at(stage));
    let mut table = Table::new(format!("{what} · around typical values"), columns).with_keys(2);
    let largest = stage.slopes.iter().map(|slope| slope.percent.abs()).fold(0.0, f64::max);
    for slope in stage.slopes.iter().take(LISTED) {
        let percent = Cell::text(format!("{:+.3} %", slope.percent));
        let doubt = "the slope changes within the step: a border of a mode or of a clamp is near";
        table.row(vec![
            Cell::text(slope.path.clone()),
            Cell::text(slope.part.clone()),
            Cell::setting(slope.value, slope.dimension),
            if slope.doubtful { percent.flagged(Severity::Note, doubt) } else { percent },
            Cell::text(slope.per),
            Cell::text(bars::two_sided([Some(slope.percent), None], largest)),
        ]);
    }
    if let Some(more) = stage.slopes.len().checked_sub(LISTED).filter(|more| *more > 0) {
        table.row(vec![Cell::text(format!("{more} smaller ones in the JSON and CSV output"))]);
    }
    table
}

fn purchases(stage: &StageSensitivity) -> Table {
    let columns = vec![
        Column::text("value"),
        Column::text("part"),
        Column::quantity("now"),
        Column::quantity("needed"),
        Column::quantity("change"),
        Column::quantity("largest gain"),
    ];
    let what = format!("{} · {}", stage.stage, at(stage));
    let mut table =
        Table::new(format!("{what} · each value moved alone from its typical value"), columns).with_keys(2);
    for purchase in stage.purchases.iter().take(LISTED) {
        let needed = match purchase.needed {
            Some(needed) => Cell::quantity(needed, purchase.dimension),
            None => Cell::missing(purchase.reason.clone().unwrap_or_default()),
        };
        let change = match purchase.factor {
            Some(factor) if factor > 2.0 => Cell::text(format!("{factor:.1} times")),
            Some(factor) => Cell::text(format!("{:+.1} %", 100.0 * (factor - 1.0))),
            None => Cell::Blank,
        };
        table.row(vec![
            Cell::text(purchase.path.clone()),
            Cell::text(purchase.part.clone()),
            Cell::setting(purchase.value, purchase.dimension),
            needed,
            change,
            if purchase.needed.is_some() { Cell::Blank } else { Cell::efficiency(purchase.best) },
        ]);
    }
    table
}
