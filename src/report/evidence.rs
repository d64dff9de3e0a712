//! Evidence as a document.

use super::{Cell, Column, Document, Severity, Table};
use crate::evidence::{ALL_SUBJECTS, Bound, Check, Evidence, Subject};
use crate::report::words;
use crate::units::Dimension as D;

/// Checks by subject; with `full` also the single ones that a summary stands for.
pub fn document(evidence: &Evidence, full: bool) -> Document {
    let mut document = Document::new("Evidence");
    let failures: Vec<&Check> = evidence.failures().collect();
    let count = words::count(evidence.checks.len(), "check");
    document.verdict(match failures.len() {
        0 => format!("All of {count} against the world outside hold."),
        failed => format!("{failed} of {count} against the world outside fail."),
    });
    document.paragraph(
        "Outside values come from worked examples in data sheets, from standards, from measurements, and from \
         transient solutions that share no code with the model. \"calc\" means computed with a general-purpose \
         numerical library. Some examples take a coarser form, such as no ripple or a lossless duty: the model is \
         driven there by its inputs.",
    );
    if !failures.is_empty() {
        document.heading(2, "Failures");
        document.table(table("checks that fail", &failures));
    }
    for subject in ALL_SUBJECTS {
        section(evidence, subject, full, &mut document);
    }
    weak_points(&mut document);
    document
}

fn section(evidence: &Evidence, subject: Subject, full: bool, document: &mut Document) {
    let of_subject: Vec<&Check> = evidence.checks.iter().filter(|check| check.subject == subject).collect();
    let shown: Vec<&Check> = of_subject.iter().filter(|check| full || !check.detail).copied().collect();
    if shown.is_empty() {
        return;
    }
    document.heading(2, subject.words());
    document.table(table("", &shown));
    let hidden = of_subject.len() - shown.len();
    if hidden > 0 {
        document.paragraph(format!(
            "Behind the summaries stand {}: lossbook evidence --full.",
            words::count(hidden, "single check")
        ));
    }
}

fn table(caption: &str, checks: &[&Check]) -> Table {
    let columns = vec![
        Column::text("what"),
        Column::text("source"),
        Column::quantity("outside"),
        Column::quantity("ours"),
        Column::quantity("difference"),
        Column::quantity("may differ"),
        Column::text("because"),
        Column::text("outcome"),
    ];
    let mut table = Table::new(caption, columns);
    for check in checks {
        let outcome = if check.holds() {
            Cell::text("holds")
        } else {
            Cell::text("fails").flagged(Severity::Critical, "")
        };
        let (limit, difference, tolerance) = match check.bound {
            Bound::Within(tolerance) => ("", difference(check), allowed(tolerance)),
            Bound::AtMost => ("≤ ", Cell::Blank, Cell::Blank),
            Bound::AtLeast => ("≥ ", Cell::Blank, Cell::Blank),
        };
        let outside = Cell::setting(check.outside, check.dimension);
        table.row(vec![
            Cell::text(&check.what),
            Cell::text(&check.source),
            if limit.is_empty() { outside } else { Cell::text(format!("{limit}{}", outside.shown())) },
            ours(check),
            difference,
            tolerance,
            Cell::text(&check.reason),
            outcome,
        ]);
    }
    table
}

/// Ours; a rounding error of the last bits is no digit worth showing.
fn ours(check: &Check) -> Cell {
    match check.bound {
        Bound::Within(_) if check.difference().abs() < 1e-12 => Cell::setting(check.outside, check.dimension),
        Bound::Within(_) => Cell::setting(check.ours, check.dimension),
        // a limit on a rounding error says enough by holding
        _ if check.ours.abs() < 1e-6 && check.ours != 0.0 => Cell::text("< 10⁻⁶"),
        _ => Cell::quantity(check.ours, check.dimension),
    }
}

/// Differences below what the table shows are one word, so that last bits never change it.
fn difference(check: &Check) -> Cell {
    let difference = check.difference();
    if difference.abs() < 5e-6 { Cell::text("< 0.001 %") } else { Cell::quantity(difference, D::Ratio) }
}

fn allowed(tolerance: f64) -> Cell {
    match tolerance {
        0.0 => Cell::text("0"),
        small if small < 5e-6 => Cell::text("< 0.001 %"),
        other => Cell::quantity(other, D::Ratio),
    }
}

fn weak_points(document: &mut Document) {
    document.heading(2, "Where the model is weak");
    document.list(vec![
        "Switching edges: overlap and output charge of one stage can be off by a fifth; over many they agree to a \
         few percent. Data-sheet charges and gate resistances are themselves uncertain by more."
            .into(),
        "Reverse recovery: charge against current is a power law with an exponent from memory; the slope of the \
         current, the junction temperature and the shape of the recovery are left out. Nothing outside checks it here."
            .into(),
        "Core loss: a single set of k, alpha, beta reads about 28 % low where one slope is a tenth of the period and \
         15 % high at one half; a material table is good to about 16 %. Bias, temperature and tolerance of the \
         material are left out of both."
            .into(),
        "Board parasitics: loop and package inductances other than the common source, ringing of hard edges and \
         magnetic coupling are left out; measured edge times take their place."
            .into(),
        "Temperatures: one thermal resistance a part stands for a board, its copper and its airflow.".into(),
        "Estimates do not replace measurement. Hot parts and stored energy can injure.".into(),
    ]);
}
