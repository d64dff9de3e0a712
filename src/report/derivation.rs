//! Derivations as a document: equations with numbers, and a table of where every number comes from.

use crate::budget::Budget;
use crate::justify::Derivation;
use crate::justify::book::{Chapter, Line};
use crate::ledger::Account;
use crate::report::{Block, Cell, Column, Document, Equation, Severity, Table, caption, words};

/// Derivations of one or more stages.
pub fn document(budget: &Budget, derivations: &[Derivation<'_>]) -> Document {
    let mut document = Document::new(format!("{}: every number justified", budget.name));
    document.paragraph(
        "Each line shows an equation in the symbols of the data sheets, the same with numbers, its result, and who says so. \
         Symbols that no line derives are listed with their origin at the end of each stage. Estimates do not replace measurement.",
    );
    for derivation in derivations {
        add(derivation, 2, &mut document);
    }
    document
}

/// Adds one derivation with headings from a level on.
pub fn add(derivation: &Derivation<'_>, level: u8, document: &mut Document) {
    let name = derivation.candidate.name();
    document.heading(level, format!("Derivation of {name}"));
    document.fact("point", Cell::text(words::point(&derivation.record.point)));
    let detail = match &derivation.record.outcome {
        Ok(detail) => detail,
        Err(reason) => {
            document.notice(Severity::Critical, format!("{name} cannot run here: {reason}"));
            return;
        }
    };
    let mut chapter = None;
    let mut account = None;
    for line in &derivation.lines {
        if chapter != Some(line.chapter) || account != line.account {
            document.heading(level + 1, format!("{name}: {}", heading(line.chapter, line.account)));
            if chapter != Some(line.chapter) {
                remarks(derivation, line.chapter, document);
            }
        }
        (chapter, account) = (Some(line.chapter), line.account);
        document.blocks.push(Block::Equation(equation(line)));
    }
    if !derivation.candidate.sheet.is_linear() {
        document.fact("thermal loop gain", Cell::ratio(detail.loop_gain));
        document.paragraph(
            "Spectral radius of the matrix dT/dT by which a warmer part warms itself and others through its losses (E51); stable below 1.",
        );
    }
    for missing in &derivation.candidate.not_modelled {
        document.notice(Severity::Note, format!("not modelled: {missing}"));
    }
    document.heading(level + 1, format!("{name}: where the numbers come from"));
    document.table(origins(derivation));
}

fn heading(chapter: Chapter, account: Option<Account>) -> String {
    match (chapter, account) {
        (_, Some(account)) => format!("{}, {}", account.slot().words(), account.mechanism().words()),
        (Chapter::Waveform, _) => "waveform".into(),
        (Chapter::Edges, _) => "node and edges".into(),
        (Chapter::Entry, _) => "entries".into(),
        (Chapter::Heat, _) => "temperatures".into(),
        (Chapter::Balance, _) => "sum and balance".into(),
    }
}

fn remarks(derivation: &Derivation<'_>, chapter: Chapter, document: &mut Document) {
    for (_, remark) in derivation.remarks.iter().filter(|(of, _)| *of == chapter) {
        document.paragraph(remark.clone());
    }
}

fn equation(line: &Line) -> Equation {
    let law = line.law;
    let mut authority =
        if law.number.is_empty() { law.source.to_owned() } else { format!("{}: {}", law.number, law.source) };
    if !law.limits.is_empty() {
        authority.push_str(&format!("; valid: {}", law.limits));
    }
    Equation {
        name: line.name.clone(),
        symbol: line.symbol.clone(),
        formula: line.equation.clone(),
        numbers: line.substituted(),
        result: line.measure.show(line.value),
        authority,
    }
}

fn origins(derivation: &Derivation<'_>) -> Table {
    let columns = vec![Column::text("symbol"), Column::text("value"), Column::text("origin")];
    let fixed = words::point(&derivation.record.point);
    let mut table = Table::new(caption::stage(derivation.candidate, &fixed), columns);
    for input in derivation.given() {
        table.row(vec![
            Cell::text(&input.symbol),
            Cell::text(input.measure.show(input.value)),
            Cell::text(&input.origin),
        ]);
    }
    table
}
