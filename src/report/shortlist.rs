//! The ranking of a shortlist as a document.

use crate::budget::Budget;
use crate::ledger::Slot;
use crate::pick::cautions;
use crate::pick::entry::{Disqualified, Entry, Outcome};
use crate::pick::{By, NAMED, Picked, merit};
use crate::report::number::{Form, show};
use crate::report::{Cell, Column, Document, Severity, Table, shortlist_insight, words};
use crate::units::Dimension as D;

/// Rows of tables that may be long.
const MOST_ROWS: usize = 20;

/// The whole answer: which parts to take, the ranking, what was left out, how sure it is.
pub fn document(picked: &Picked, budget: Option<&Budget>) -> Document {
    let outcome = &picked.outcome;
    let mut document = Document::new(outcome.budget.clone());
    document.fact("stage", Cell::text(&outcome.stage));
    document.fact("ranked by", Cell::text(outcome.by.words()));
    if let Some(budget) = budget {
        document.fact("headline", Cell::text(words::point(&budget.headline)));
    }
    document.fact("combinations", Cell::text(ways(outcome)));
    let values = outcome.values.name();
    let origin = format!("lossbook {} · input {} · {values} values", outcome.version, outcome.input);
    document.fact("computed by", Cell::text(origin));
    if !outcome.complete {
        let text = "Incomplete: the search was interrupted; this is the best of what was seen.";
        document.notice(Severity::Critical, text);
    }
    if !outcome.slice.is_whole() {
        let text = format!(
            "Slice {} of {} only: put all slices together with --merge.",
            outcome.slice.number, outcome.slice.of
        );
        document.notice(Severity::Warning, text);
    }
    document.verdict(format!("Verdict: {}.", verdict(picked)));
    for (point, finding) in budget.map(|budget| cautions::of(budget, outcome)).unwrap_or_default() {
        let (slot, at) = (finding.slot.words(), words::point(&point));
        document.notice(finding.severity, format!("The first place: {slot}: {} (at {at}).", finding.text));
    }
    if !outcome.ranking.is_empty() {
        document.heading(2, "Ranking");
        document.table(ranking(outcome, &outcome.ranking, budget));
        requirements(outcome, &mut document);
    }
    if !outcome.not_comparable.is_empty() {
        document.heading(2, "Not comparable");
        document.paragraph("These lack data that a rival has, so part of their loss is missing. They are ranked among themselves.");
        document.table(ranking(outcome, &outcome.not_comparable, budget));
    }
    if let Some(insight) = &picked.insight {
        shortlist_insight::add(outcome, insight, &mut document);
    }
    if outcome.by.is_loss() && outcome.unbeaten.len() > 1 {
        document.heading(2, "Not beaten in both loss and price");
        document.table(unbeaten(outcome));
    }
    document.heading(2, "Left out");
    left_out(outcome, &mut document);
    document
}

/// "synchronous · leaders over the load": the origin stands at the top of the answer once.
pub(super) fn caption(outcome: &Outcome, what: &str) -> String {
    format!("{} · {what}", outcome.stage)
}

fn ways(outcome: &Outcome) -> String {
    let counts = &outcome.counts;
    let mut text = format!("{} in the shortlist", counts.all);
    if counts.screened < counts.all {
        text.push_str(&format!(", {} after ratings", counts.screened));
    }
    if counts.visited < counts.screened {
        text.push_str(&format!(", {} looked at", counts.visited));
    }
    text.push_str(&format!("; {} sound, {} disqualified", counts.sound, counts.disqualified));
    if counts.abandoned > 0 {
        text.push_str(&format!(", {} abandoned, as they cannot reach the top any more", counts.abandoned));
    }
    text.push_str(&format!("; {} points solved", counts.points));
    text
}

/// Names of the parts that were a choice, and the frequency.
pub(super) fn combination(outcome: &Outcome, entry: &Entry) -> String {
    let chosen = entry.parts.iter().filter(|(slot, _)| NAMED.contains(slot) || varies(outcome, *slot));
    let names: Vec<&str> = chosen.map(|(_, part)| part.as_str()).collect();
    match entry.switching_frequency {
        Some(frequency) => format!("{} at {}", names.join(" + "), words::set(frequency, D::Frequency)),
        None => names.join(" + "),
    }
}

/// True when the ranking has several parts in a slot.
fn varies(outcome: &Outcome, slot: Slot) -> bool {
    let mut parts = outcome.ranking.iter().chain(&outcome.not_comparable).map(|entry| entry.part(slot));
    let first = parts.next();
    parts.any(|part| Some(part) != first)
}

/// A value that was ranked by.
pub(super) fn value(outcome: &Outcome, value: f64) -> Cell {
    match outcome.by {
        By::HeadlineLoss | By::ProfileLoss | By::WorstLoss => Cell::watts(value),
        By::JunctionMargin => Cell::quantity(value, D::TemperatureDifference),
        By::Price => price(outcome, Some(value)),
    }
}

fn price(outcome: &Outcome, price: Option<f64>) -> Cell {
    match (price, outcome.currency.as_deref()) {
        (None, _) => Cell::missing("a part without a price"),
        (Some(price), Some(currency)) => Cell::text(format!("{price:.2} {currency}")),
        (Some(price), None) => Cell::text(format!("{price:.2}")),
    }
}

fn verdict(picked: &Picked) -> String {
    let outcome = &picked.outcome;
    let Some(first) = outcome.ranking.first() else {
        return match (outcome.counts.screened, outcome.not_comparable.is_empty()) {
            (0, _) => "no combination is left after ratings; see what was left out".into(),
            (_, false) => "no combination has all the data that its rivals have".into(),
            _ => "no combination runs at every point within its ratings; see what was left out".into(),
        };
    };
    let mut text = format!("{}, {}", combination(outcome, first), value(outcome, first.value).shown());
    if let Some(second) = outcome.ranking.get(1) {
        let lead = (second.value - first.value).abs();
        let close = picked.insight.as_ref().and_then(|insight| insight.lead.as_ref());
        let ahead = value(outcome, lead).shown();
        match close.filter(|lead| lead.too_close_to_call).and_then(|lead| lead.spread) {
            Some(spread) => text.push_str(&format!(
                "; too close to call against {}: {ahead} apart, while the model's spread in overlap and output charge is {}",
                combination(outcome, second),
                show(spread, Form::Result(D::Power))
            )),
            None => text.push_str(&format!(", {ahead} ahead of {}", combination(outcome, second))),
        }
    }
    match first.missed.len() {
        0 => {}
        missed => text.push_str(&format!("; it misses {}", words::count(missed, "requirement"))),
    }
    text
}

fn ranking(outcome: &Outcome, entries: &[Entry], budget: Option<&Budget>) -> Table {
    let Some(first) = entries.first() else { return Table::default() };
    let ranked = &outcome.ranking;
    let named = |slot: &Slot| NAMED.contains(slot) || varies(outcome, *slot);
    let slots: Vec<Slot> = first.parts.iter().map(|(slot, _)| *slot).filter(named).collect();
    let apart = entries.iter().any(|entry| !entry.needs.is_empty());
    let missed = entries.iter().any(|entry| !entry.missed.is_empty());
    let mut columns = vec![Column::quantity("rank")];
    columns.extend(slots.iter().map(|slot| Column::text(slot.words())));
    columns.push(Column::quantity("f_SW"));
    if outcome.by != By::HeadlineLoss && outcome.by != By::Price {
        columns.push(Column::quantity(match outcome.by {
            By::ProfileLoss => "loss, profile",
            By::WorstLoss => "loss, worst",
            _ => "margin",
        }));
    }
    columns.extend([
        Column::quantity("loss"),
        Column::quantity("efficiency"),
        Column::text("hottest"),
        Column::quantity("price"),
    ]);
    let figures: Vec<Vec<(Slot, f64)>> =
        entries.iter().map(|entry| figures(entry, outcome, budget)).collect();
    let with_merit: Vec<Slot> = [Slot::HighSide, Slot::LowSide]
        .into_iter()
        .filter(|slot| figures.iter().any(|of| of.iter().any(|(own, _)| own == slot)))
        .collect();
    for slot in &with_merit {
        let charge = if *slot == Slot::HighSide { "R Q_GD [mΩ nC]" } else { "R Q_G [mΩ nC]" };
        columns.push(Column::quantity(charge).under(slot.words()));
    }
    if missed {
        columns.push(Column::quantity("misses"));
    }
    columns.push(Column::text(if apart { "why apart" } else { "why not first" }));
    let mut table = Table::new(caption(outcome, "loss and temperature at the headline"), columns);
    for (place, entry) in entries.iter().enumerate() {
        let mut cells = vec![Cell::count(place as u64 + 1)];
        cells.extend(slots.iter().map(|slot| Cell::text(entry.part(*slot).unwrap_or_default())));
        cells.push(entry.switching_frequency.map_or(Cell::Blank, |f| Cell::setting(f, D::Frequency)));
        if outcome.by != By::HeadlineLoss && outcome.by != By::Price {
            cells.push(value(outcome, entry.value));
        }
        cells.push(Cell::watts(entry.loss));
        cells.push(entry.efficiency.map_or_else(|| Cell::missing("no load"), Cell::efficiency));
        cells.push(Cell::text(entry.hottest.map_or_else(String::new, |(slot, t)| {
            format!("{} {}", slot.words(), Cell::temperature(t).shown())
        })));
        cells.push(price(outcome, entry.price));
        for slot in &with_merit {
            let figure = figures[place].iter().find(|(own, _)| own == slot);
            cells.push(figure.map_or(Cell::Blank, |(_, figure)| Cell::ratio(figure * 1e12)));
        }
        if missed {
            cells.push(Cell::count(entry.missed.len() as u64));
        }
        let why = match (entry.needs.is_empty(), ranked.first()) {
            (false, _) => format!("not comparable: needs {}", words::list(&entry.needs)),
            (true, Some(best)) if best.place != entry.place => behind(entry, best),
            _ => String::new(),
        };
        cells.push(Cell::text(why));
        table.row(cells);
    }
    table
}

/// "+110 mW gate drive, +60 mW output charge".
fn behind(entry: &Entry, first: &Entry) -> String {
    let more = entry.behind(first);
    let words: Vec<String> = more
        .iter()
        .map(|(mechanism, watts)| format!("+{} {}", show(*watts, Form::Result(D::Power)), mechanism.words()))
        .collect();
    words.join(", ")
}

/// Figures of merit of the MOSFETs of an entry.
fn figures(entry: &Entry, outcome: &Outcome, budget: Option<&Budget>) -> Vec<(Slot, f64)> {
    let stage = budget.and_then(|budget| {
        let base = budget.stages.iter().find(|stage| stage.name == outcome.stage)?;
        let mut sheet = base.clone();
        for (slot, part) in &entry.parts {
            let (name, found) = crate::input::kind::PartKind::of_slot(*slot)?.find(&budget.library, part)?;
            crate::pick::slots::put_sheet(&mut sheet, *slot, &name, &found);
        }
        Some(crate::fitted::Stage::fit(&sheet, budget))
    });
    stage.map(|stage| merit::figures(&stage)).unwrap_or_default()
}

fn requirements(outcome: &Outcome, document: &mut Document) {
    let Some(first) = outcome.ranking.first() else { return };
    for missed in &first.missed {
        document.notice(Severity::Warning, format!("The first place misses a requirement: {missed}."));
    }
}

fn unbeaten(outcome: &Outcome) -> Table {
    let columns = vec![Column::text("combination"), Column::quantity("price"), Column::quantity("loss")];
    let mut table = Table::new(caption(outcome, outcome.by.words()), columns);
    for entry in outcome.unbeaten.iter().take(MOST_ROWS) {
        table.row(vec![
            Cell::text(combination(outcome, entry)),
            price(outcome, entry.price),
            value(outcome, entry.value),
        ]);
    }
    table
}

fn left_out(outcome: &Outcome, document: &mut Document) {
    if outcome.disqualified.is_empty() {
        document.paragraph("Nothing.");
        return;
    }
    let columns = vec![
        Column::text("slot"),
        Column::text("part"),
        Column::text("reason"),
        Column::quantity("combinations"),
        Column::text("first example"),
    ];
    let mut table = Table::new(caption(outcome, "disqualified"), columns).with_keys(2);
    let row = |one: &Disqualified| {
        vec![
            Cell::text(one.slot.map_or_else(String::new, Slot::words)),
            Cell::text(one.part.as_deref().unwrap_or("")),
            Cell::text(&one.reason),
            Cell::count(one.combinations),
            Cell::text(one.example.as_deref().unwrap_or("")),
        ]
    };
    // reasons of combinations first: they are few
    let (parts, reasons): (Vec<_>, Vec<_>) = outcome.disqualified.iter().partition(|one| one.part.is_some());
    reasons.iter().for_each(|one| table.row(row(one)));
    parts.iter().take(MOST_ROWS).for_each(|one| table.row(row(one)));
    document.table(table);
    if parts.len() > MOST_ROWS {
        let more = parts.len() - MOST_ROWS;
        document.paragraph(format!("And {} more; --format json lists them all.", words::count(more, "part")));
    }
    if outcome.counts.abandoned > 0 {
        document.paragraph(
            "Abandoned combinations are not among these counts; --exhaustive follows each to its end.",
        );
    }
}
