//! Plain text for terminals and mails: no boxes, one line under titles, wrapped to a width.

use std::io::{self, Write};

use comfy_table::{
    Cell as BoxCell, CellAlignment, ColumnConstraint, ContentArrangement, LineStyle, Table as Boxes,
    TableStyle, Width,
};
use unicode_width::UnicodeWidthStr;

use super::panels::{self, GAP, Span};
use super::{Render, braille};
use crate::printable::printable;
use crate::report::figure::Plot;
use crate::report::{
    Alignment, Block, Cell, Document, Equation, Figure, Layout, Printed, RowKind, Severity, Table,
};

/// Text of a width, with colour when told.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub struct Text {
    /// Columns of the terminal or page.
    pub width: usize,
    /// True for bold and coloured words (ECMA-48 SGR).
    pub colour: bool,
}

/// Sentences read badly beyond this width.
const WIDEST_SENTENCE: usize = 100;
/// Narrower than this nothing is laid out; lines then run over.
const NARROWEST: usize = 40;

// Stand-ins of no width for colours while lines are laid out; `printable` lets none through from outside.
const BOLD: char = '\u{2061}';
const YELLOW: char = '\u{2062}';
const RED: char = '\u{2063}';
const PLAIN: char = '\u{2064}';
/// Stand-in for the line above a total.
const RULE: &str = "─";

impl Render for Text {
    fn render(&self, document: &Document, out: &mut dyn Write) -> io::Result<()> {
        let mut text = String::new();
        if !document.title.is_empty() {
            self.heading(&mut text, 1, &document.title);
        }
        for block in &document.blocks {
            if !text.is_empty() {
                text.push('\n');
            }
            self.block(&mut text, block);
        }
        out.write_all(self.coloured(&text).as_bytes())
    }
}

impl Text {
    fn block(&self, text: &mut String, block: &Block) {
        match block {
            Block::Heading { level, text: words, .. } => self.heading(text, *level, words),
            Block::Paragraph { text: words, strong: false } => self.wrap(text, "", &printable(words)),
            Block::Paragraph { text: words, strong: true } => {
                self.wrap(text, "", &format!("{BOLD}{}{PLAIN}", printable(words)));
            }
            Block::List(items) => items.iter().for_each(|item| self.wrap(text, "- ", &printable(item))),
            Block::Facts(facts) => self.facts(text, facts),
            Block::Notice { severity, text: words } => {
                let first = format!("{}{}:{PLAIN} ", colour(*severity), severity.name());
                self.wrap(text, &first, &printable(words));
            }
            Block::Table(table) => self.table(text, table),
            Block::Equation(step) => self.equation(text, step),
            Block::Figure(figure) => self.figure(text, figure),
        }
    }

    /// Lines drawn with dots where they fit, else the figure in words.
    fn figure(&self, text: &mut String, figure: &Figure) {
        let drawn = match &figure.plot {
            Plot::Curves(curves) => braille::lines(curves, self.width),
            _ => None,
        };
        let Some(lines) = drawn else {
            return self.wrap(text, "figure: ", &printable(&figure.summary()));
        };
        self.wrap(text, "", &printable(&figure.title));
        for line in lines {
            text.push_str(line.trim_end_matches(['\u{2800}', ' ']));
            text.push('\n');
        }
    }

    fn equation(&self, text: &mut String, step: &Equation) {
        self.wrap(text, "", &printable(&step.name));
        let indent = " ".repeat(step.symbol.width() + 3);
        self.wrap(text, &format!("  {} = ", step.symbol), &printable(&step.formula));
        if step.numbers != step.formula && step.numbers != step.result {
            self.wrap(text, &format!("{indent}= "), &printable(&step.numbers));
        }
        self.wrap(text, &format!("{indent}= "), &format!("{BOLD}{}{PLAIN}", printable(&step.result)));
        self.wrap(text, "  ", &printable(&step.authority));
    }

    fn heading(&self, text: &mut String, level: u8, words: &str) {
        let words = printable(words);
        self.wrap(text, "", &format!("{BOLD}{words}{PLAIN}"));
        let under = match level {
            1 => "═",
            2 => "─",
            _ => return,
        };
        text.push_str(&under.repeat(words.width().min(self.sentence_width())));
        text.push('\n');
    }

    fn facts(&self, text: &mut String, facts: &[(String, Cell)]) {
        let widest = facts.iter().map(|(name, _)| printable(name).width()).max().unwrap_or(0);
        for (name, value) in facts {
            let name = printable(name);
            let padding = " ".repeat(widest - name.width() + GAP);
            self.wrap(text, &format!("{name}{padding}"), &printable(&value.sentence()));
        }
    }

    fn table(&self, text: &mut String, table: &Table) {
        if !table.caption.is_empty() {
            self.wrap(text, "", &printable(&table.caption));
        }
        let layout = escaped(table.layout());
        let spans = panels::spans(table, &layout);
        for (place, panel) in panels::split(table, &spans, self.width()).iter().enumerate() {
            if place > 0 {
                text.push('\n');
            }
            for line in self.panel(table, &layout, &spans, panel) {
                text.push_str(&line);
                text.push('\n');
            }
        }
        layout.notes.iter().for_each(|note| self.wrap(text, "", note));
    }

    /// Lines of some columns of a table.
    fn panel(&self, table: &Table, layout: &Layout, spans: &[Span], panel: &[usize]) -> Vec<String> {
        let mut boxes = Boxes::new();
        boxes.load_style(TableStyle::new().header_separator(LineStyle::none().fill('─').junction('─')));
        boxes.set_content_arrangement(ContentArrangement::Dynamic);
        boxes.set_width(u16::try_from(self.width() + 1).unwrap_or(u16::MAX));
        boxes.set_header(titles(table, layout, panel));
        for row in &layout.rows {
            if row.kind == RowKind::Total {
                boxes.add_row(panel.iter().map(|_| BoxCell::new(RULE)));
            }
            boxes.add_row(panel.iter().map(|place| boxed(layout, table, row, *place)));
        }
        let natural: usize = panel.iter().map(|place| spans[*place].natural + GAP).sum();
        for (place, column) in panel.iter().zip(boxes.column_iter_mut()) {
            // one blank of the gap is the column's, the other stands for the line between columns
            column.set_padding((0, 1));
            let least =
                if natural <= self.width() + GAP { spans[*place].natural } else { spans[*place].least };
            column.set_constraint(ColumnConstraint::LowerBoundary(Width::Fixed((least + 1) as u16)));
        }
        let lines: Vec<String> = boxes.lines().map(|line| line.trim_end().to_string()).collect();
        let widest = lines.iter().filter(|line| !is_rule(line)).map(|line| line.width()).max().unwrap_or(0);
        let full = |line: String| if is_rule(&line) { RULE.repeat(widest) } else { line };
        lines.into_iter().map(full).collect()
    }

    fn width(&self) -> usize {
        self.width.max(NARROWEST)
    }

    fn sentence_width(&self) -> usize {
        self.width().min(WIDEST_SENTENCE)
    }

    /// Words wrapped between blanks; lines after the first are indented to stand below the first word.
    fn wrap(&self, text: &mut String, first: &str, words: &str) {
        let indent = first.width();
        text.push_str(first);
        let mut column = indent;
        for (place, word) in words.split(' ').enumerate() {
            if place > 0 && column + 1 + word.width() > self.sentence_width() && column > indent {
                text.push('\n');
                text.push_str(&" ".repeat(indent));
                column = indent;
            } else if place > 0 {
                text.push(' ');
                column += 1;
            }
            text.push_str(word);
            column += word.width();
        }
        text.push('\n');
    }

    /// Stand-ins replaced by colours, or taken out. No colour runs over the end of a line.
    fn coloured(&self, text: &str) -> String {
        let mut shown = String::with_capacity(text.len());
        let mut open = None;
        for c in text.chars() {
            match c {
                BOLD | YELLOW | RED | PLAIN if !self.colour => {}
                BOLD | YELLOW | RED => {
                    open = Some(c);
                    shown.push_str(sequence(c));
                }
                PLAIN => {
                    open = None;
                    shown.push_str(sequence(c));
                }
                '\n' if open.is_some() => {
                    shown.push_str(sequence(PLAIN));
                    shown.push('\n');
                    shown.push_str(open.map_or("", sequence));
                }
                other => shown.push(other),
            }
        }
        shown
    }
}

fn sequence(stand_in: char) -> &'static str {
    match stand_in {
        BOLD => "\u{1b}[1m",
        YELLOW => "\u{1b}[33m",
        RED => "\u{1b}[1;31m",
        _ => "\u{1b}[0m",
    }
}

fn colour(severity: Severity) -> char {
    match severity {
        Severity::Note => BOLD,
        Severity::Warning => YELLOW,
        Severity::Critical => RED,
    }
}

/// True for a line that is nothing but stand-ins for a rule.
fn is_rule(line: &str) -> bool {
    !line.is_empty() && line.chars().all(|c| matches!(c, '─' | ' '))
}

fn escaped(mut layout: Layout) -> Layout {
    let clean = |text: &mut String| *text = printable(text).into_owned();
    layout.titles.iter_mut().chain(&mut layout.notes).for_each(clean);
    layout.rows.iter_mut().flat_map(|row| &mut row.cells).for_each(|cell| clean(&mut cell.text));
    layout
}

/// Titles at the bottom of their line or two.
fn titles(table: &Table, layout: &Layout, panel: &[usize]) -> Vec<BoxCell> {
    let two_lines = panel.iter().any(|place| table.columns[*place].over.is_some());
    let title = |place: &usize| {
        let words = &layout.titles[*place];
        let over = table.columns[*place].over.as_deref().unwrap_or_default();
        let words = if two_lines { format!("{}\n{words}", printable(over)) } else { words.clone() };
        BoxCell::new(words).set_alignment(alignment(table, *place))
    };
    panel.iter().map(title).collect()
}

fn alignment(table: &Table, place: usize) -> CellAlignment {
    match table.columns[place].alignment {
        Alignment::Left => CellAlignment::Left,
        Alignment::Right => CellAlignment::Right,
    }
}

/// A cell with its mark; marks of a column of numbers are padded to one width, so that the digits stay aligned.
fn boxed(layout: &Layout, table: &Table, row: &crate::report::LaidRow, place: usize) -> BoxCell {
    let Some(cell) = row.cells.get(place) else { return BoxCell::new("") };
    let widest =
        layout.rows.iter().filter_map(|row| row.cells.get(place)).map(|cell| cell.mark.width()).max();
    let widest = widest.filter(|_| table.columns[place].alignment == Alignment::Right).unwrap_or(0);
    BoxCell::new(painted(cell, row.kind, widest)).set_alignment(alignment(table, place))
}

fn painted(cell: &Printed, kind: RowKind, mark_width: usize) -> String {
    let words = match kind {
        RowKind::Body => cell.text.clone(),
        _ if cell.text.is_empty() => String::new(),
        _ => format!("{BOLD}{}{PLAIN}", cell.text),
    };
    if mark_width == 0 && cell.mark.is_empty() {
        return words;
    }
    // no-break spaces: a mark stays with its number
    let padding = "\u{a0}".repeat(mark_width.saturating_sub(cell.mark.width()));
    let mark = match cell.severity {
        Some(severity) => format!("{}{}{PLAIN}", colour(severity), cell.mark),
        None => cell.mark.clone(),
    };
    format!("{words}\u{a0}{mark}{padding}")
}

#[cfg(test)]
#[path = "text_tests.rs"]
mod tests;
