//! The comparison of stages as a document.

use crate::candidate::Candidate;
use crate::compare::Comparison;
use crate::findings::{Finding, Severity};
use crate::ledger::{ALL_ACCOUNTS, ALL_FAMILIES, ALL_SLOTS, Account, Family, Mechanism};
use crate::model::Solved;
use crate::ratings;
use crate::record::{Detail, Record};
use crate::report::{Block, Cell, Column, Document, Table, balance, caption, checks, figures, needs, words};
use crate::units::Dimension as D;

/// The whole answer: rail, verdict, balance, stages side by side, curves (drawn when told), crossovers, requirements.
pub fn document(comparison: &Comparison<'_>, plot: bool) -> Document {
    let budget = comparison.budget;
    let mut document = Document::new(budget.name.clone());
    document.fact("rail", Cell::text(rail(comparison)));
    document.fact("headline", Cell::text(words::point(&budget.headline)));
    document.fact("computed by", Cell::text(caption::origin(budget)));
    document.verdict(format!("Verdict: {}.", comparison.sentence()));
    document.heading(2, "Balance at the headline");
    document.table(balance::table(comparison));
    document.heading(2, "Stages side by side");
    document.table(summary(comparison));
    for record in &comparison.headline {
        if let Err(reason) = &record.outcome {
            document.notice(Severity::Critical, format!("{} cannot run: {reason}", record.candidate.name()));
        }
    }
    document.heading(2, "Loss by mechanism");
    document.table(by_mechanism(comparison));
    document.heading(2, "Loss by part");
    document.table(by_part(comparison));
    for (place, record) in comparison.headline.iter().enumerate() {
        let cold = comparison.cold.get(place).and_then(Option::as_ref);
        if let Ok(detail) = &record.outcome {
            document.heading(2, format!("Every watt of {}", record.candidate.name()));
            document.table(ledger(record, detail, cold));
        }
    }
    document.heading(2, "Temperatures");
    document.table(checks::temperatures(comparison));
    document.heading(2, "Efficiency and loss over the load");
    if plot {
        document.blocks.push(Block::Figure(figures::efficiency_at_headline(comparison)));
    }
    document.table(curves(comparison));
    document.heading(2, "Crossovers");
    crossovers(comparison, &mut document);
    document.heading(2, "Requirements");
    needs::requirements(comparison, &mut document);
    document.heading(2, "Findings at the headline and at the ends of the grid");
    checks::findings(comparison, &mut document);
    document
}

pub(super) fn rail(comparison: &Comparison<'_>) -> String {
    let budget = comparison.budget;
    let mut rail = words::set(budget.output_voltage, D::Voltage);
    if let Some(rated) = budget.rated_load {
        rail.push_str(&format!(" at up to {}", words::set(rated, D::Current)));
    }
    if let Some(axis) = budget.grid.axis(crate::grid::AxisName::InputVoltage) {
        let low = axis.values().fold(f64::INFINITY, f64::min);
        let high = axis.values().fold(f64::NEG_INFINITY, f64::max);
        rail.push_str(&if low == high {
            format!(" from {}", words::set(low, D::Voltage))
        } else {
            format!(" from {} to {}", words::set(low, D::Voltage), words::set(high, D::Voltage))
        });
    }
    rail
}

/// One column a stage after a first column.
fn stage_columns(comparison: &Comparison<'_>, first: &str) -> Vec<Column> {
    let mut columns = vec![Column::text(first)];
    columns.extend(comparison.candidates.iter().map(|candidate| Column::quantity(candidate.name())));
    columns
}

/// A row with one cell a stage; stages that cannot run show a dash.
pub(super) fn row(
    comparison: &Comparison<'_>,
    name: &str,
    cell: impl Fn(&Record<'_>, &Detail) -> Cell,
) -> Vec<Cell> {
    let mut cells = vec![Cell::text(name)];
    cells.extend(comparison.headline.iter().map(|record| match &record.outcome {
        Ok(detail) => cell(record, detail),
        Err(_) => Cell::missing(""),
    }));
    cells
}

pub(super) fn summary(comparison: &Comparison<'_>) -> Table {
    let mut table = Table::new("", stage_columns(comparison, "at the headline"));
    table.row(row(comparison, "efficiency", |record, detail| {
        let efficiency = detail.solved.efficiency().map_or(Cell::missing("no load"), Cell::efficiency);
        gravest(efficiency, record, detail)
    }));
    table.row(row(comparison, "loss", |_, detail| Cell::watts(detail.solved.loss())));
    table.row(row(comparison, "input power", |_, detail| Cell::watts(detail.solved.input_power())));
    table.row(row(comparison, "loss with 25 °C values", |record, _| {
        let place =
            comparison.candidates.iter().position(|candidate| candidate.name() == record.candidate.name());
        let cold = place.and_then(|place| comparison.cold.get(place)).and_then(Option::as_ref);
        cold.map_or(Cell::missing("cannot run at 25 °C"), |cold| Cell::watts(cold.loss()))
    }));
    table.row(row(comparison, "mode", |_, detail| {
        let mode = detail.solved.waveform.map_or("linear", |waveform| waveform.mode.name());
        Cell::text(mode.replace('_', " "))
    }));
    table.row(row(comparison, "switching frequency", |_, detail| match &detail.solved.waveform {
        Some(waveform) => Cell::quantity(waveform.frequency, D::Frequency),
        None => Cell::Blank,
    }));
    table.row(row(comparison, "duty", |_, detail| match &detail.solved.waveform {
        Some(waveform) => Cell::share(waveform.duty),
        None => Cell::Blank,
    }));
    table.row(row(comparison, "ripple, peak to peak", |_, detail| match &detail.solved.waveform {
        Some(waveform) => Cell::quantity(waveform.ripple(), D::Current),
        None => Cell::Blank,
    }));
    table.row(row(comparison, "hottest part", |_, detail| match detail.solved.hottest() {
        Some((slot, temperature)) => {
            Cell::text(format!("{} {}", slot.words(), Cell::temperature(temperature).shown()))
        }
        None => Cell::missing("no thermal data"),
    }));
    table.row(row(comparison, "least margin", |record, detail| {
        match ratings::junction_margin(record.candidate.sheet, &detail.solved) {
            Some((slot, margin)) => Cell::text(format!("{} {margin:.1} K", slot.words())),
            None => Cell::missing("no temperature rating"),
        }
    }));
    table.row(row(comparison, "thermal loop gain", |_, detail| Cell::ratio(detail.loop_gain)));
    table.row(row(comparison, "parts", |record, _| price(record.candidate)));
    table.row(row(comparison, "assumed", |record, _| Cell::count(record.candidate.assumptions.len() as u64)));
    table.row(row(comparison, "not modelled", |record, _| {
        Cell::count(record.candidate.not_modelled.len() as u64)
    }));
    table
}

fn price(candidate: &Candidate<'_>) -> Cell {
    match candidate.price() {
        Some(price) => {
            let currency = candidate.budget.currency.as_deref().unwrap_or("");
            Cell::text(format!("{price:.2} {currency}").trim_end().to_owned())
        }
        None => Cell::missing("a part has no price"),
    }
}

/// The number with the gravest rating finding beside it.
fn gravest(cell: Cell, record: &Record<'_>, detail: &Detail) -> Cell {
    match detail.findings.first() {
        Some(finding) if finding.severity == Severity::Critical => {
            let text = format!("{}: {} {}", record.candidate.name(), finding.slot.words(), finding.text);
            cell.flagged(Severity::Critical, text)
        }
        _ => cell,
    }
}

fn share_of(watts: f64, solved: &Solved) -> String {
    let loss = solved.loss();
    if loss > 0.0 { Cell::share(watts / loss).shown() } else { "—".into() }
}

/// Watts and share of the loss in one cell.
fn watts_and_share(watts: f64, solved: &Solved) -> Cell {
    Cell::text(format!("{}  {:>6}", Cell::watts(watts).shown(), share_of(watts, solved)))
}

pub(super) fn by_mechanism(comparison: &Comparison<'_>) -> Table {
    let mut table = Table::new("", stage_columns(comparison, "mechanism"));
    let largest = |watts: &dyn Fn(&Solved) -> f64| {
        let solved = comparison.headline.iter().filter_map(|record| record.outcome.as_ref().ok());
        solved.map(|detail| watts(&detail.solved)).fold(0.0, f64::max)
    };
    for family in ALL_FAMILIES {
        let mut mechanisms: Vec<_> = crate::ledger::ALL_MECHANISMS
            .into_iter()
            .filter(|m| {
                m.family() == family
                    && comparison.candidates.iter().any(|c| books(c, |a| a.mechanism() == *m))
            })
            .collect();
        mechanisms.sort_by(|a, b| {
            largest(&|s| s.ledger.mechanism(*b)).total_cmp(&largest(&|s| s.ledger.mechanism(*a)))
        });
        mechanisms.retain(|m| largest(&|s| s.ledger.mechanism(*m)) > 0.0 || lacks(comparison, *m));
        for mechanism in &mechanisms {
            table.row(row(comparison, &mechanism.words(), |record, detail| {
                let candidate = record.candidate;
                let lacking: Vec<String> = candidate
                    .not_modelled
                    .iter()
                    .filter(|missing| missing.mechanism == *mechanism)
                    .map(ToString::to_string)
                    .collect();
                let booked = books(candidate, |account| account.mechanism() == *mechanism);
                let watts = || watts_and_share(detail.solved.ledger.mechanism(*mechanism), &detail.solved);
                match (booked, lacking.is_empty()) {
                    (true, true) => watts(),
                    (true, false) => {
                        let remark = format!("in part not modelled: {}", lacking.join("; "));
                        watts().flagged(Severity::Note, remark)
                    }
                    (false, false) => Cell::missing(format!("not modelled: {}", lacking.join("; "))),
                    (false, true) => Cell::Blank,
                }
            }));
        }
        if !mechanisms.is_empty() {
            table.subtotal(row(comparison, &subtotal_name(family), |_, detail| {
                watts_and_share(detail.solved.ledger.family(family), &detail.solved)
            }));
        }
    }
    table.total(row(comparison, "loss", |record, detail| {
        let cell = watts_and_share(detail.solved.loss(), &detail.solved);
        match record.candidate.not_modelled.len() {
            0 => cell,
            missing => {
                cell.flagged(Severity::Note, format!("{}: {missing} not modelled", record.candidate.name()))
            }
        }
    }));
    table
}

/// True when a stage lacks data for a mechanism.
fn lacks(comparison: &Comparison<'_>, mechanism: Mechanism) -> bool {
    comparison.candidates.iter().any(|c| c.not_modelled.iter().any(|missing| missing.mechanism == mechanism))
}

fn subtotal_name(family: Family) -> String {
    format!("= {}", family.name())
}

fn books(candidate: &Candidate<'_>, wanted: impl Fn(&Account) -> bool) -> bool {
    candidate.accounts.iter().any(wanted)
}

pub(super) fn by_part(comparison: &Comparison<'_>) -> Table {
    let mut table = Table::new("", stage_columns(comparison, "slot"));
    for slot in ALL_SLOTS {
        if !comparison.candidates.iter().any(|candidate| books(candidate, |account| account.slot() == slot)) {
            continue;
        }
        table.row(row(comparison, &slot.words(), |record, detail| {
            if books(record.candidate, |account| account.slot() == slot) {
                watts_and_share(detail.solved.ledger.slot(slot), &detail.solved)
            } else {
                Cell::Blank
            }
        }));
    }
    table.total(row(comparison, "loss", |_, detail| watts_and_share(detail.solved.loss(), &detail.solved)));
    table
}

/// All entries of one stage, the largest first, beside those with every part at 25 °C.
pub(super) fn ledger(record: &Record<'_>, detail: &Detail, cold: Option<&Solved>) -> Table {
    let columns = vec![
        Column::text("slot"),
        Column::text("part"),
        Column::text("mechanism"),
        Column::quantity("loss"),
        Column::quantity("share"),
        Column::quantity("with 25 °C values"),
    ];
    let candidate = record.candidate;
    let fixed = words::point(&record.point);
    let mut table = Table::new(fixed, columns).with_keys(3);
    let solved = &detail.solved;
    let mut entries: Vec<_> =
        ALL_ACCOUNTS.iter().map(|row| row.0).filter(|a| candidate.accounts.contains(a)).collect();
    entries.sort_by(|a, b| solved.ledger.get(*b).total_cmp(&solved.ledger.get(*a)));
    let cold_cell =
        |watts: &dyn Fn(&Solved) -> f64| cold.map_or(Cell::missing(""), |cold| Cell::watts(watts(cold)));
    for account in entries {
        let watts = solved.ledger.get(account);
        if watts == 0.0 {
            continue;
        }
        table.row(vec![
            Cell::text(account.slot().words()),
            Cell::text(candidate.part_names[account.slot().index()].clone().unwrap_or_default()),
            Cell::text(account.mechanism().words()),
            Cell::watts(watts),
            Cell::text(share_of(watts, solved)),
            cold_cell(&|cold| cold.ledger.get(account)),
        ]);
    }
    for missing in &candidate.not_modelled {
        table.row(vec![
            Cell::text(missing.slot.words()),
            Cell::text(candidate.part_names[missing.slot.index()].clone().unwrap_or_default()),
            Cell::text(missing.mechanism.words()),
            Cell::missing(format!("not modelled: needs {}", missing.needs)),
            Cell::Blank,
            Cell::Blank,
        ]);
    }
    table.total(vec![
        Cell::text("loss"),
        Cell::text(caption::gaps(candidate)),
        Cell::Blank,
        Cell::watts(solved.loss()),
        Cell::text(share_of(solved.loss(), solved)),
        cold_cell(&|cold| cold.loss()),
    ]);
    table
}

fn curves(comparison: &Comparison<'_>) -> Table {
    let mut columns = vec![Column::quantity("load")];
    for candidate in comparison.candidates {
        let name = match candidate.not_modelled.len() {
            0 => candidate.name().to_owned(),
            missing => format!("{} ({missing} not modelled)", candidate.name()),
        };
        columns.push(Column::quantity("efficiency").under(&name));
        columns.push(Column::quantity("loss").under(&name));
    }
    let headline = &comparison.budget.headline;
    let fixed = format!(
        "V_IN {}, T_A {}{}",
        words::set(headline.input_voltage, D::Voltage),
        words::set(headline.ambient, D::Temperature),
        frequencies(comparison)
    );
    let mut table = Table::new(fixed, columns);
    for (index, load) in comparison.loads.iter().enumerate() {
        let mut cells = vec![Cell::setting(*load, D::Current)];
        let details = comparison.curves.iter().filter_map(|curve| curve.get(index)?.outcome.as_ref().ok());
        let losses = details.filter(|detail| !detail.exceeds_a_rating());
        let least = losses.map(|detail| detail.solved.loss()).fold(f64::INFINITY, f64::min);
        for curve in &comparison.curves {
            match curve.get(index).map(|record| &record.outcome) {
                Some(Ok(detail)) => {
                    let critical = detail.findings.first().filter(|f| f.severity == Severity::Critical);
                    let flag = |cell: Cell| match critical {
                        Some(finding) => cell.flagged(
                            Severity::Critical,
                            format!("{}: {}", finding.slot.words(), kind_words(finding)),
                        ),
                        None => cell,
                    };
                    let efficiency =
                        detail.solved.efficiency().map_or(Cell::missing("no load"), Cell::efficiency);
                    cells.push(flag(efficiency));
                    let loss = Cell::watts(detail.solved.loss());
                    let best = critical.is_none()
                        && detail.solved.loss() <= least
                        && comparison.candidates.len() > 1;
                    cells.push(if best { Cell::text(format!("{} <", loss.shown())) } else { loss });
                }
                Some(Err(reason)) => {
                    cells.push(Cell::missing(reason.to_string()));
                    cells.push(Cell::missing(""));
                }
                None => {}
            }
        }
        table.row(cells);
    }
    table
}

/// ", f_SW 300 kHz", or each stage's own when they differ; nothing without switched stages.
fn frequencies(comparison: &Comparison<'_>) -> String {
    let switched = comparison.candidates.iter().filter(|candidate| !candidate.sheet.is_linear());
    let own: Vec<(&str, f64)> =
        switched.map(|candidate| (candidate.name(), candidate.headline().switching_frequency)).collect();
    match own.as_slice() {
        [] => String::new(),
        [(_, first), rest @ ..] if rest.iter().all(|(_, frequency)| frequency == first) => {
            format!(", f_SW {}", words::set(*first, D::Frequency))
        }
        _ => {
            let each = own.iter().map(|(name, f)| format!("{name} {}", words::set(*f, D::Frequency)));
            format!(", f_SW {}", each.collect::<Vec<_>>().join(", "))
        }
    }
}

fn kind_words(finding: &Finding) -> String {
    finding.kind.replace('_', " ")
}

pub(super) fn crossovers(comparison: &Comparison<'_>, document: &mut Document) {
    if comparison.crossovers.is_empty() {
        document.paragraph("No stage overtakes another within the loads of the grid.");
        return;
    }
    let columns = vec![
        Column::quantity("V_IN"),
        Column::quantity("load"),
        Column::text("less loss below"),
        Column::text("less loss above"),
    ];
    let fixed = format!(
        "T_A {}{}",
        words::set(comparison.budget.headline.ambient, D::Temperature),
        frequencies(comparison)
    );
    let mut table = Table::new(fixed, columns).with_keys(2);
    let mut sorted: Vec<_> = comparison.crossovers.iter().collect();
    sorted.sort_by(|a, b| a.input_voltage.total_cmp(&b.input_voltage).then(a.load.total_cmp(&b.load)));
    for crossover in sorted {
        table.row(vec![
            Cell::setting(crossover.input_voltage, D::Voltage),
            Cell::quantity(crossover.load, D::Current),
            Cell::text(&crossover.below),
            Cell::text(&crossover.above),
        ]);
    }
    document.table(table);
}
