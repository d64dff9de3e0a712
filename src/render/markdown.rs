//! Markdown with pipe tables: CommonMark 0.31 and the tables of GitHub Flavored Markdown 0.29.

use std::io::{self, Write};

use super::Render;
use crate::printable::printable;
use crate::report::{Alignment, Block, Cell, Document, Equation, RowKind, Table};

/// Markdown; the caption of a table is a line above it.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq)]
pub struct Markdown;

impl Render for Markdown {
    fn render(&self, document: &Document, out: &mut dyn Write) -> io::Result<()> {
        let mut parts = Vec::with_capacity(document.blocks.len() + 1);
        if !document.title.is_empty() {
            parts.push(format!("# {}\n", escape(&document.title)));
        }
        parts.extend(document.blocks.iter().map(block));
        out.write_all(parts.join("\n").as_bytes())
    }
}

fn block(block: &Block) -> String {
    match block {
        Block::Heading { level, text, .. } => {
            format!("{} {}\n", "#".repeat(usize::from(*level).clamp(1, 6)), escape(text))
        }
        Block::Paragraph { text, strong: false } => format!("{}\n", escape_line(text)),
        Block::Paragraph { text, strong: true } => format!("**{}**\n", escape(text.trim())),
        Block::List(items) => items.iter().map(|item| format!("- {}\n", escape_line(item))).collect(),
        Block::Facts(facts) => facts.iter().map(fact).collect(),
        Block::Notice { severity, text } => format!("> **{}:** {}\n", severity.name(), escape(text)),
        Block::Table(table) => pipes(table),
        Block::Equation(step) => equation(step),
        Block::Figure(figure) => format!("Figure: {}\n", escape(&figure.summary())),
    }
}

/// Each side of an equation on a line of its own, as code: nothing in it is markup.
fn equation(step: &Equation) -> String {
    let code = |words: &str| printable(words).replace('`', "'");
    let numbers = if step.numbers == step.formula || step.numbers == step.result {
        String::new()
    } else {
        format!("    = {}\n", code(&step.numbers))
    };
    format!(
        "{}\n\n    {} = {}\n{numbers}    = {}\n\n{}\n",
        escape_line(&step.name),
        code(&step.symbol),
        code(&step.formula),
        code(&step.result),
        escape_line(&step.authority)
    )
}

fn fact((name, value): &(String, Cell)) -> String {
    format!("- {}: {}\n", escape_line(name), escape(&value.sentence()))
}

fn pipes(table: &Table) -> String {
    let layout = table.layout();
    let title = |(place, words): (usize, &String)| match &table.columns[place].over {
        Some(over) => escape(&format!("{over}, {words}")),
        None => escape(words),
    };
    let mut lines: Vec<Vec<String>> = vec![layout.titles.iter().enumerate().map(title).collect()];
    for row in &layout.rows {
        let cells = row.cells.iter().map(|cell| escape(&cell.whole()));
        let strong = |cell: String| if cell.is_empty() { cell } else { format!("**{cell}**") };
        lines.push(if row.kind == RowKind::Body { cells.collect() } else { cells.map(strong).collect() });
    }
    let width = |place: usize| lines.iter().map(|line| line[place].chars().count()).max().unwrap_or(0).max(3);
    let widths: Vec<usize> = (0..table.columns.len()).map(width).collect();
    let right = |place: usize| table.columns[place].alignment == Alignment::Right;
    let marker = |(place, width): (usize, &usize)| match right(place) {
        true => format!("{}:", "-".repeat(width - 1)),
        false => "-".repeat(*width),
    };
    let markers = widths.iter().enumerate().map(marker).collect();
    lines.insert(1, markers);
    let pad = |(place, cell): (usize, &String)| {
        let width = widths[place];
        if right(place) { format!("{cell:>width$}") } else { format!("{cell:<width$}") }
    };
    let line = |cells: &Vec<String>| {
        format!("| {} |\n", cells.iter().enumerate().map(pad).collect::<Vec<_>>().join(" | "))
    };
    let body: String = lines.iter().map(line).collect();
    let caption =
        if table.caption.is_empty() { String::new() } else { format!("{}\n\n", escape_line(&table.caption)) };
    let notes: String = layout.notes.iter().map(|note| format!("\n{}\n", escape_line(note))).collect();
    format!("{caption}{body}{notes}")
}

/// Text that starts a line: also what would make it a heading, list or rule there.
fn escape_line(text: &str) -> String {
    let escaped = escape(text.trim_start());
    let digits = escaped.chars().take_while(char::is_ascii_digit).count();
    let (number, rest) = escaped.split_at(digits);
    if digits > 0 && rest.starts_with(['.', ')']) {
        return format!("{number}\\{rest}");
    }
    if escaped.starts_with(['#', '+', '-', '=']) { format!("\\{escaped}") } else { escaped }
}

/// Every character that means something inside a line gets a backslash; so do the starts of bare links.
fn escape(text: &str) -> String {
    let clean = printable(text);
    // printable's own backslashes are escaped like any other
    let mut escaped = String::with_capacity(clean.len() + 8);
    let mut rest = clean.as_ref();
    while let Some(c) = rest.chars().next() {
        // an underscore inside a word, as in V_IN, is never emphasis
        let inside = |c: Option<char>| c.is_some_and(char::is_alphanumeric);
        let in_word = inside(escaped.chars().next_back()) && inside(rest.chars().nth(1));
        let special = (c == '_' && !in_word)
            || matches!(c, '\\' | '|' | '`' | '*' | '[' | ']' | '<' | '>' | '~' | '&' | '$' | '@' | '^');
        let link = rest.starts_with("://") || (c == '.' && ends_with_www(&escaped));
        if special || link {
            escaped.push('\\');
        }
        escaped.push(c);
        rest = &rest[c.len_utf8()..];
    }
    escaped
}

fn ends_with_www(text: &str) -> bool {
    text.len() >= 3 && text.as_bytes()[text.len() - 3..].eq_ignore_ascii_case(b"www")
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::report::{Column, Severity};

    fn markdown(document: &Document) -> String {
        let mut out = Vec::new();
        Markdown.render(document, &mut out).expect("written to memory");
        String::from_utf8(out).expect("UTF-8")
    }

    #[test]
    fn tables_are_pipes_with_a_caption_line() {
        let mut document = Document::new("Rail");
        document.heading(2, "Loss");
        let mut table =
            Table::new("demo, 24 V", vec![Column::text("part"), Column::number("loss").under("24 V")]);
        table.row(vec![Cell::text("a|b"), Cell::watts(0.3125)]);
        table.row(vec![Cell::text("c"), Cell::missing("no data")]);
        table.total(vec![Cell::text("total"), Cell::watts(1.2).flagged(Severity::Warning, "")]);
        document.table(table);
        let expected = "\
# Rail

## Loss

demo, 24 V

| part      | 24 V, loss \\[W\\] |
| --------- | ---------------: |
| a\\|b      |            0.312 |
| c         |          — \\[1\\] |
| **total** |      **1.200 !** |

\\[1\\] no data

! warning
";
        assert_eq!(markdown(&document), expected);
    }

    #[test]
    fn nothing_from_outside_becomes_markup() {
        assert_eq!(
            escape("*a* _b_ `c` <d> [e](f) ![g]"),
            "\\*a\\* \\_b\\_ \\`c\\` \\<d\\> \\[e\\](f) !\\[g\\]"
        );
        assert_eq!(escape("x\ny\u{1b}"), "x\\\\ny\\\\u{1b}");
        assert_eq!(escape("https://www.example.org"), "https\\://www\\.example.org");
        assert_eq!(escape("&lt;"), "\\&lt;");
        assert_eq!(escape_line("# a"), "\\# a");
        assert_eq!(escape_line("1. a"), "1\\. a");
        assert_eq!(escape_line("- a"), "\\- a");
        assert_eq!(escape_line("1.5 W"), "1\\.5 W");
        assert_eq!(escape_line("24 V"), "24 V");
    }
}
