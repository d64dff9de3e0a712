//! The review of a budget as a document: what was asked, what came out, why, and from what.

use crate::compare::Comparison;
use crate::justify::{Derivation, Request as Justification};
use crate::report::{
    Block, Cell, Column, Document, Severity, Table, balance, caption, comparison as parts, derivation,
};
use crate::report::{figures, needs, tables, words};
use crate::tabulate;

/// What a review is made from.
pub struct Material<'a> {
    /// The stages side by side.
    pub comparison: &'a Comparison<'a>,
    /// A date to print.
    pub date: Option<&'a str>,
    /// The ranking of the shortlist.
    pub shortlist: Option<&'a Document>,
    /// Answers to further questions.
    pub further: &'a [Document],
}

/// The whole review.
pub fn document(material: &Material<'_>) -> Document {
    let comparison = material.comparison;
    let budget = comparison.budget;
    let mut document = Document::new(budget.name.clone());
    if let Some(about) = &budget.about {
        document.paragraph(about.clone());
    }
    document.fact("rail", Cell::text(parts::rail(comparison)));
    document.fact("headline", Cell::text(words::point(&budget.headline)));
    if let Some(source) = &budget.source {
        document.fact("source", Cell::text(source));
    }
    document.fact("computed by", Cell::text(caption::origin(budget)));
    if let Some(date) = material.date {
        document.fact("date", Cell::text(date));
    }
    document.verdict(format!("Verdict: {}.", comparison.sentence()));
    cautions(&mut document);
    document.heading(2, "What the rail must do");
    needs::requirements(comparison, &mut document);
    document.heading(2, "Balance at the headline");
    document.table(balance::table(comparison));
    side_by_side(comparison, &mut document);
    drawn(comparison, &mut document);
    document.heading(2, "Crossovers");
    parts::crossovers(comparison, &mut document);
    efficiency_tables(comparison, &mut document);
    if let Some(shortlist) = material.shortlist {
        document.heading(2, "Shortlist");
        nested(shortlist, 1, &mut document);
    }
    for answer in material.further {
        // "Rail: spread by part tolerance" is a section "Spread by part tolerance" of the rail's review
        let own = answer.title.strip_prefix(budget.name.as_str()).unwrap_or(&answer.title);
        let title = own.trim_start_matches([':', ' ']);
        let mut letters = title.chars();
        let first = letters.next().map(|letter| letter.to_uppercase().to_string()).unwrap_or_default();
        document.heading(2, first + letters.as_str());
        nested(answer, 1, &mut document);
    }
    document.heading(2, "Findings");
    super::checks::findings(comparison, &mut document);
    gaps(comparison, &mut document);
    appendix(comparison, &mut document);
    inputs(comparison, &mut document);
    document
}

fn cautions(document: &mut Document) {
    document.notice(
        Severity::Warning,
        "These are estimates and do not replace measurement. Hot parts burn and stored energy injures, also after the supply is \
         off. The model covers non-isolated low-voltage rails only. Local codes and licensed practice come first.",
    );
}

fn side_by_side(comparison: &Comparison<'_>, document: &mut Document) {
    document.heading(2, "Stages side by side");
    document.table(parts::summary(comparison));
    for record in &comparison.headline {
        if let Err(reason) = &record.outcome {
            document.notice(Severity::Critical, format!("{} cannot run: {reason}", record.candidate.name()));
        }
    }
    document.heading(3, "Loss by mechanism");
    document.table(parts::by_mechanism(comparison));
    for (place, record) in comparison.headline.iter().enumerate() {
        let cold = comparison.cold.get(place).and_then(Option::as_ref);
        if let Ok(detail) = &record.outcome {
            document.heading(3, format!("Every watt of {}", record.candidate.name()));
            document.table(parts::ledger(record, detail, cold));
        }
    }
}

/// Figures, each with its numbers in a table.
fn drawn(comparison: &Comparison<'_>, document: &mut Document) {
    document.heading(2, "Efficiency against load");
    document.paragraph("The numbers at round loads stand under “Efficiency and loss in numbers”.");
    for figure in figures::efficiency(comparison) {
        document.blocks.push(Block::Figure(figure));
    }
    document.heading(2, "Loss against load");
    for (figure, table) in figures::loss_over_load(comparison) {
        document.heading(3, figure.title.clone());
        document.blocks.push(Block::Figure(figure));
        document.table(table);
    }
    document.heading(2, "Loss by part");
    if let Some(figure) = figures::loss_by_part(comparison) {
        document.blocks.push(Block::Figure(figure));
    }
    document.table(parts::by_part(comparison));
    document.heading(2, "Temperatures");
    document.table(super::checks::temperatures(comparison));
    document.heading(3, "Margins over the grid");
    for (figure, table) in figures::margins(comparison) {
        document.blocks.push(Block::Figure(figure));
        document.table(table);
    }
}

fn efficiency_tables(comparison: &Comparison<'_>, document: &mut Document) {
    document.heading(2, "Efficiency and loss in numbers");
    let all = tables::document(comparison.budget, comparison.candidates, &tabulate::Request::default());
    nested(&all, 1, document);
}

/// Adds the blocks of another document with its headings lowered.
fn nested(other: &Document, lower: u8, document: &mut Document) {
    for block in &other.blocks {
        match block {
            Block::Heading { level, text, .. } => document.heading(level + lower, text.clone()),
            other => document.blocks.push(other.clone()),
        }
    }
}

fn gaps(comparison: &Comparison<'_>, document: &mut Document) {
    document.heading(2, "Assumed and not modelled");
    let columns =
        vec![Column::text("stage"), Column::text("what"), Column::text("slot"), Column::text("in words")];
    let mut table =
        Table::new(caption::budget(comparison.budget, "whatever the point"), columns).with_keys(2);
    for candidate in comparison.candidates {
        for note in &candidate.assumptions {
            table.row(vec![
                Cell::text(candidate.name()),
                Cell::text("assumed"),
                Cell::text(note.slot.words()),
                Cell::text(&note.text),
            ]);
        }
        for missing in &candidate.not_modelled {
            table.row(vec![
                Cell::text(candidate.name()),
                Cell::text("not modelled"),
                Cell::text(missing.slot.words()),
                Cell::text(missing.to_string()),
            ]);
        }
    }
    if table.rows.is_empty() {
        document.paragraph("Nothing is assumed, and every mechanism is modelled.");
    } else {
        document.table(table);
    }
}

fn appendix(comparison: &Comparison<'_>, document: &mut Document) {
    document.heading(2, "Appendix: every number at the headline");
    document.paragraph("Equations in the symbols of the data sheets, then with numbers; numbers beginning with E name the laws of the model's document.");
    for candidate in comparison.candidates {
        let derived = Derivation::of(candidate, candidate.headline(), &Justification::default());
        derivation::add(&derived, 3, document);
    }
}

fn inputs(comparison: &Comparison<'_>, document: &mut Document) {
    let budget = comparison.budget;
    document.heading(2, "Inputs");
    document.fact("program", Cell::text(concat!("lossbook ", env!("CARGO_PKG_VERSION"))));
    document.fact("input fingerprint", Cell::text(budget.fingerprint()));
    let columns = vec![Column::text("file"), Column::text("SHA-256")];
    let mut files = Table::new(caption::budget(budget, "files read"), columns);
    for input in &budget.inputs {
        files.row(vec![Cell::text(input.path.display().to_string()), Cell::text(&input.sha256)]);
    }
    document.table(files);
    document.table(sources(comparison));
}

/// Every part used with what its file says of it.
fn sources(comparison: &Comparison<'_>) -> Table {
    let columns = vec![
        Column::text("stage"),
        Column::text("slot"),
        Column::text("part"),
        Column::quantity("count"),
        Column::text("source"),
    ];
    let mut table = Table::new(caption::budget(comparison.budget, "parts"), columns).with_keys(2);
    for candidate in comparison.candidates {
        let origins = crate::justify::origin::Origins::of(candidate.sheet, &comparison.budget.board, None);
        for part in candidate.sheet.parts() {
            let source = origins.source_of(part.slot, part.name);
            table.row(vec![
                Cell::text(candidate.name()),
                Cell::text(part.slot.words()),
                Cell::text(part.name),
                Cell::count(u64::from(part.count)),
                source.map_or(Cell::missing("no source given"), Cell::text),
            ]);
        }
    }
    table
}
