//! The difference of two budgets as a document.

use crate::diff::{Difference, Pair};
use crate::ledger::Slot;
use crate::model::Solved;
use crate::ratings;
use crate::report::{Cell, Column, Document, Severity, Table, caption, words};
use crate::units::Dimension as D;

/// Sentences first, then entries, loads and inputs.
pub fn document(difference: &Difference<'_>) -> Document {
    let (before, after) = (difference.before, difference.after);
    let mut document = Document::new(if before.name == after.name {
        format!("{}: two versions", before.name)
    } else {
        format!("{} and {}", before.name, after.name)
    });
    document.fact("first", Cell::text(format!("{} · {}", before.name, caption::origin(before))));
    document.fact("second", Cell::text(format!("{} · {}", after.name, caption::origin(after))));
    for pair in &difference.pairs {
        document.verdict(format!("{}: {}.", name(pair), sentence(pair)));
    }
    for (names, which) in [(&difference.only_before, "first"), (&difference.only_after, "second")] {
        if !names.is_empty() {
            document.notice(Severity::Note, format!("only in the {which}: {}", words::list(names)));
        }
    }
    if difference.pairs.is_empty() {
        document.notice(Severity::Warning, "the two budgets have no stage of one name");
    }
    for pair in &difference.pairs {
        document.heading(2, name(pair));
        one(pair, &mut document);
    }
    document
}

fn name(pair: &Pair<'_>) -> String {
    let (before, after) = (pair.before.candidate.name(), pair.after.candidate.name());
    if before == after { before.to_owned() } else { format!("{before} -> {after}") }
}

/// "efficiency -0.42 points: recovery +210 mW, gate drive +50.0 mW; low_side demo-n40-3m1 -> demo-n40-2m2".
pub fn sentence(pair: &Pair<'_>) -> String {
    let inputs: Vec<String> = pair
        .changes
        .iter()
        .map(|change| format!("{} {} -> {}", change.what, change.from, change.to))
        .collect();
    let inputs = if inputs.is_empty() { "the inputs are the same".to_owned() } else { inputs.join(", ") };
    let Some([before, after]) = pair.solved() else {
        let reason =
            |record: &crate::record::Record<'_>| record.outcome.as_ref().err().map(ToString::to_string);
        return match (reason(&pair.before), reason(&pair.after)) {
            (Some(_), Some(_)) => format!("runs in neither; {inputs}"),
            (Some(reason), None) => format!("runs now, did not before ({reason}); {inputs}"),
            (_, reason) => format!("runs no more: {}; {inputs}", reason.unwrap_or_default()),
        };
    };
    let mechanisms = pair.mechanisms();
    let total: f64 = mechanisms.iter().map(|(_, watts)| watts.abs()).sum();
    // those that make up nine tenths of what moved, three at least
    let mut seen = 0.0;
    let told = mechanisms.iter().enumerate().take_while(|(place, (_, watts))| {
        let more = *place < 3 || seen < 0.9 * total;
        seen += watts.abs();
        more && watts.abs() > 0.005 * total
    });
    let told: Vec<String> = told.map(|(_, (m, watts))| format!("{} {}", m.words(), signed(*watts))).collect();
    let head = match (before.efficiency(), after.efficiency()) {
        (Some(a), Some(b)) => format!("efficiency {} points", points(b - a)),
        _ => format!("loss {}", signed(after.loss() - before.loss())),
    };
    if told.is_empty() {
        format!("no change; {inputs}")
    } else {
        format!("{head}: {}; {inputs}", told.join(", "))
    }
}

/// A change of watts with its sign.
fn signed(watts: f64) -> String {
    let shown = Cell::watts(watts).shown();
    if watts > 0.0 { format!("+{shown}") } else { shown }
}

fn points(change: f64) -> String {
    let hundredths = 100.0 * change;
    if hundredths.abs() < 0.005 { "±0.00".into() } else { format!("{hundredths:+.2}") }
}

fn one(pair: &Pair<'_>, document: &mut Document) {
    document.heading(3, format!("{}: inputs that differ", name(pair)));
    if pair.changes.is_empty() {
        document.paragraph("None.");
    } else {
        document.table(inputs(pair));
    }
    let Some(solved) = pair.solved() else {
        for record in [&pair.before, &pair.after] {
            if let Err(reason) = &record.outcome {
                let at = words::point(&record.point);
                document.notice(Severity::Critical, format!("cannot run at {at}: {reason}"));
            }
        }
        return;
    };
    document.heading(3, format!("{}: at the headline", name(pair)));
    document.fact("first", Cell::text(words::point(&pair.before.point)));
    document.fact("second", Cell::text(words::point(&pair.after.point)));
    document.table(headline(pair, solved));
    document.heading(3, format!("{}: entry by entry", name(pair)));
    document.table(entries(pair, solved));
    document.heading(3, format!("{}: over the load", name(pair)));
    document.table(loads(pair));
}

fn inputs(pair: &Pair<'_>) -> Table {
    let columns = vec![
        Column::text("input"),
        Column::text("first"),
        Column::text("second"),
        Column::quantity("alone changes the loss by"),
    ];
    let mut table = Table::new("", columns);
    for change in &pair.changes {
        table.row(vec![
            Cell::text(&change.what),
            Cell::text(&change.from),
            Cell::text(&change.to),
            change.effect.map_or(Cell::missing("alone it cannot run"), |watts| Cell::text(signed(watts))),
        ]);
    }
    if let (Some(all), true) = (pair.loss(), pair.changes.len() > 1) {
        let alone: Option<f64> = pair.changes.iter().map(|change| change.effect).sum();
        let together = alone.map_or(Cell::Blank, |alone| Cell::text(signed(all - alone)));
        table.row(vec![Cell::text("by acting together"), Cell::Blank, Cell::Blank, together]);
        table.total(vec![Cell::text("all"), Cell::Blank, Cell::Blank, Cell::text(signed(all))]);
    }
    table
}

fn headline(pair: &Pair<'_>, [before, after]: [&Solved; 2]) -> Table {
    let columns = vec![
        Column::text(""),
        Column::quantity("first"),
        Column::quantity("second"),
        Column::quantity("change"),
    ];
    let mut table = Table::new("", columns);
    if let (Some(a), Some(b)) = (before.efficiency(), after.efficiency()) {
        let change = Cell::text(format!("{} points", points(b - a)));
        table.row(vec![Cell::text("efficiency"), Cell::efficiency(a), Cell::efficiency(b), change]);
    }
    let (a, b) = (before.loss(), after.loss());
    table.row(vec![Cell::text("loss"), Cell::watts(a), Cell::watts(b), Cell::text(signed(b - a))]);
    let margin =
        |record: &crate::record::Record<'_>, solved| ratings::junction_margin(record.candidate.sheet, solved);
    if let (Some(a), Some(b)) = (margin(&pair.before, before), margin(&pair.after, after)) {
        let cell = |(slot, margin): (Slot, f64)| Cell::text(format!("{} {margin:.1} K", slot.words()));
        let change = Cell::text(format!("{:+.1} K", b.1 - a.1));
        table.row(vec![Cell::text("least margin"), cell(a), cell(b), change]);
    }
    table
}

fn entries(pair: &Pair<'_>, [before, after]: [&Solved; 2]) -> Table {
    let columns = vec![
        Column::text("slot"),
        Column::text("mechanism"),
        Column::quantity("first"),
        Column::quantity("second"),
        Column::quantity("change"),
    ];
    let mut table = Table::new("", columns).with_keys(2);
    let mut all = pair.entries();
    let change = |both: &[Option<f64>; 2]| both[1].unwrap_or(0.0) - both[0].unwrap_or(0.0);
    all.sort_by(|a, b| change(&b.1).abs().total_cmp(&change(&a.1).abs()));
    for (account, both) in all.iter().filter(|(_, both)| both.iter().flatten().any(|watts| *watts != 0.0)) {
        let cell = |watts: Option<f64>| watts.map_or(Cell::Blank, Cell::watts);
        table.row(vec![
            Cell::text(account.slot().words()),
            Cell::text(account.mechanism().words()),
            cell(both[0]),
            cell(both[1]),
            Cell::text(signed(change(both))),
        ]);
    }
    let (a, b) = (before.loss(), after.loss());
    let words = Cell::text("loss");
    table.total(vec![words, Cell::Blank, Cell::watts(a), Cell::watts(b), Cell::text(signed(b - a))]);
    table
}

fn loads(pair: &Pair<'_>) -> Table {
    let columns = vec![
        Column::quantity("load"),
        Column::quantity("first").under("efficiency"),
        Column::quantity("second").under("efficiency"),
        Column::quantity("points").under("efficiency"),
        Column::quantity("first").under("loss"),
        Column::quantity("second").under("loss"),
        Column::quantity("change").under("loss"),
    ];
    let mut table = Table::new("", columns);
    for (load, [a, b]) in &pair.loads {
        let of = |solved: &Option<Solved>| solved.as_ref().and_then(Solved::efficiency);
        let cell = |value: Option<f64>| value.map_or(Cell::missing(""), Cell::efficiency);
        let watts =
            |solved: &Option<Solved>| solved.as_ref().map_or(Cell::missing(""), |s| Cell::watts(s.loss()));
        let both = of(a).zip(of(b)).map_or(Cell::Blank, |(a, b)| Cell::text(points(b - a)));
        let change = match (a, b) {
            (Some(a), Some(b)) => Cell::text(signed(b.loss() - a.loss())),
            _ => Cell::Blank,
        };
        let load = Cell::setting(*load, D::Current);
        table.row(vec![load, cell(of(a)), cell(of(b)), both, watts(a), watts(b), change]);
    }
    table
}
