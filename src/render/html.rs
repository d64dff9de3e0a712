//! One self-contained HTML page: no script, no request; for screens of any width and for A4 and Letter.
//!
//! Written by hand, since a document is one list of blocks and one loop: everything from outside passes [`escape`].

use std::collections::BTreeMap;
use std::fmt::Write as _;
use std::io::{self, Write};

use super::{Render, plot};
use crate::printable::printable;
use crate::report::{
    Alignment, Block, Cell, Document, Equation, Figure, LaidRow, Layout, Printed, RowKind, Severity, Table,
};

/// A page with a table of contents.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq)]
pub struct Html;

impl Render for Html {
    fn render(&self, document: &Document, out: &mut dyn Write) -> io::Result<()> {
        let mut page = Page::default();
        document.blocks.iter().for_each(|block| page.block(block));
        page.close();
        let title = escape(&document.title);
        write!(
            out,
            "<!DOCTYPE html>\n<html lang=\"en\">\n<head>\n<meta charset=\"utf-8\">\n\
             <meta name=\"viewport\" content=\"width=device-width, initial-scale=1\">\n\
             <meta name=\"generator\" content=\"lossbook {}\">\n<title>{title}</title>\n\
             <link rel=\"icon\" href=\"data:,\">\n<style>\n{STYLE}{}</style>\n</head>\n<body>\n\
             <header><h1>{title}</h1></header>\n",
            env!("CARGO_PKG_VERSION"),
            plot::STYLE
        )?;
        write!(out, "<main>\n{}", page.opening)?;
        if page.contents.len() > 2 {
            let items: String = page
                .contents
                .iter()
                .map(|(id, words)| format!("<li><a href=\"#{id}\">{}</a></li>\n", escape(words)))
                .collect();
            write!(out, "<nav aria-label=\"Contents\"><h2>Contents</h2>\n<ol>\n{items}</ol></nav>\n")?;
        }
        write!(out, "{}</main>\n</body>\n</html>\n", page.body)
    }
}

/// What is written so far.
#[derive(Default)]
struct Page {
    /// Blocks before the first section.
    opening: String,
    body: String,
    contents: Vec<(String, String)>,
    taken: BTreeMap<String, usize>,
    in_section: bool,
    figures: usize,
}

impl Page {
    fn block(&mut self, block: &Block) {
        match block {
            Block::Heading { level, text, anchor } => self.heading(*level, text, anchor),
            Block::Paragraph { text, strong } => {
                let class = if *strong { " class=\"verdict\"" } else { "" };
                self.put(format_args!("<p{class}>{}</p>\n", escape(text)));
            }
            Block::List(items) => {
                let items: String = items.iter().map(|item| format!("<li>{}</li>\n", escape(item))).collect();
                self.put(format_args!("<ul>\n{items}</ul>\n"));
            }
            Block::Facts(facts) => {
                let rows: String = facts.iter().map(fact).collect();
                self.put(format_args!("<dl>\n{rows}</dl>\n"));
            }
            Block::Notice { severity, text } => {
                let name = severity.name();
                self.put(format_args!(
                    "<p class=\"notice {name}\" role=\"note\"><strong>{name}</strong> {}</p>\n",
                    escape(text)
                ));
            }
            Block::Table(table) => {
                let table = table_element(table);
                self.put(format_args!("{table}"));
            }
            Block::Equation(step) => {
                let step = equation(step);
                self.put(format_args!("{step}"));
            }
            Block::Figure(figure) => self.figure(figure),
        }
    }

    fn put(&mut self, words: std::fmt::Arguments<'_>) {
        let place = if self.contents.is_empty() { &mut self.opening } else { &mut self.body };
        // a String takes every byte
        let _ = place.write_fmt(words);
    }

    fn heading(&mut self, level: u8, text: &str, anchor: &str) {
        let id = self.unique(anchor);
        if level == 2 {
            self.close();
            self.contents.push((id.clone(), text.to_owned()));
            self.put(format_args!("<section aria-labelledby=\"{id}\">\n"));
            self.in_section = true;
        }
        let level = level.clamp(2, 6);
        self.put(format_args!("<h{level} id=\"{id}\">{}</h{level}>\n", escape(text)));
    }

    fn close(&mut self) {
        if self.in_section {
            self.put(format_args!("</section>\n"));
            self.in_section = false;
        }
    }

    /// An anchor that no other heading has.
    fn unique(&mut self, anchor: &str) -> String {
        let plain: String = anchor.chars().filter(|c| c.is_alphanumeric() || *c == '-').collect();
        let plain = if plain.is_empty() { "section".to_owned() } else { plain };
        let times = self.taken.entry(plain.clone()).or_insert(0);
        *times += 1;
        // two hyphens stand in no anchor of words
        if *times == 1 { plain } else { format!("{plain}--{times}") }
    }

    fn figure(&mut self, figure: &Figure) {
        self.figures += 1;
        let id = format!("figure--{}", self.figures);
        let drawn = plot::svg(figure, &id);
        let caption = escape(&figure.caption);
        let title = escape(&figure.title);
        let number = self.figures;
        self.put(format_args!(
            "<figure id=\"{id}\">\n<div class=\"wide\" tabindex=\"0\" role=\"group\" aria-label=\"figure {number}\">\n{drawn}</div>\n\
             <figcaption><b>Figure {number}. {title}</b><br>{caption}</figcaption>\n</figure>\n"
        ));
    }
}

fn fact((name, value): &(String, Cell)) -> String {
    format!("<div><dt>{}</dt><dd>{}</dd></div>\n", escape(name), escape(&value.sentence()))
}

fn equation(step: &Equation) -> String {
    let numbers = if step.numbers == step.formula || step.numbers == step.result {
        String::new()
    } else {
        format!("<div>= {}</div>", breakable(&step.numbers))
    };
    format!(
        "<div class=\"step\"><p class=\"what\">{}</p><div class=\"eq\"><div><b>{}</b> = {}</div>{numbers}<div>= <b>{}</b></div></div><p class=\"law\">{}</p></div>\n",
        escape(&step.name),
        escape(&step.symbol),
        breakable(&step.formula),
        escape(&step.result),
        escape(&step.authority)
    )
}

/// An equation that may break after a sign.
fn breakable(words: &str) -> String {
    escape(words).replace('·', "·<wbr>").replace('/', "/<wbr>")
}

fn table_element(table: &Table) -> String {
    let layout = table.layout();
    let head = head(table, &layout);
    let body: String = layout.rows.iter().map(|row| body_row(table, row)).collect();
    let notes: String = layout.notes.iter().map(|note| format!("<li>{}</li>\n", escape(note))).collect();
    let notes = if notes.is_empty() { notes } else { format!("<ul class=\"notes\">\n{notes}</ul>\n") };
    let words = escape(&table.caption);
    let caption = if words.is_empty() { String::new() } else { format!("<caption>{words}</caption>\n") };
    let label = if words.is_empty() { "table".into() } else { words };
    format!(
        "<div class=\"wide\" tabindex=\"0\" role=\"group\" aria-label=\"{label}\">\n<table>\n{caption}<thead>\n{head}</thead>\n<tbody>\n{body}</tbody>\n</table>\n</div>\n{notes}"
    )
}

fn head(table: &Table, layout: &Layout) -> String {
    let mut lines = String::new();
    if table.columns.iter().any(|column| column.over.is_some()) {
        let groups = table.columns.chunk_by(|a, b| a.over.is_some() && a.over == b.over);
        let cells: String = groups
            .map(|group| match &group[0].over {
                Some(over) => format!(
                    "<th scope=\"colgroup\" colspan=\"{}\" class=\"over\">{}</th>",
                    group.len(),
                    escape(over)
                ),
                None => "<td></td>".into(),
            })
            .collect();
        lines.push_str(&format!("<tr>{cells}</tr>\n"));
    }
    let cells: String = layout
        .titles
        .iter()
        .enumerate()
        .map(|(place, title)| format!("<th scope=\"col\"{}>{}</th>", side(table, place), escape(title)))
        .collect();
    lines.push_str(&format!("<tr>{cells}</tr>\n"));
    lines
}

fn side(table: &Table, place: usize) -> &'static str {
    match table.columns.get(place).map(|column| column.alignment) {
        Some(Alignment::Right) => " class=\"r\"",
        _ => "",
    }
}

fn body_row(table: &Table, row: &LaidRow) -> String {
    let kind = match row.kind {
        RowKind::Body => "",
        RowKind::Subtotal => " class=\"subtotal\"",
        RowKind::Total => " class=\"total\"",
    };
    let cells: String = row
        .cells
        .iter()
        .enumerate()
        .map(|(place, cell)| {
            if place < table.keys.min(1) {
                format!("<th scope=\"row\"{}>{}</th>", side(table, place), printed(cell))
            } else {
                format!("<td{}>{}</td>", side(table, place), printed(cell))
            }
        })
        .collect();
    format!("<tr{kind}>{cells}</tr>\n")
}

fn printed(cell: &Printed) -> String {
    let text = escape(&cell.text);
    if cell.mark.is_empty() {
        return text;
    }
    let class = cell.severity.map_or("", Severity::name);
    format!("{text} <span class=\"mark {class}\">{}</span>", escape(&cell.mark))
}

/// Text that cannot become markup, in elements and in quoted attributes; control characters are shown as such.
pub(super) fn escape(text: &str) -> String {
    let mut escaped = String::with_capacity(text.len() + 8);
    for c in printable(text).chars() {
        match c {
            '&' => escaped.push_str("&amp;"),
            '<' => escaped.push_str("&lt;"),
            '>' => escaped.push_str("&gt;"),
            '"' => escaped.push_str("&quot;"),
            '\'' => escaped.push_str("&#39;"),
            other => escaped.push(other),
        }
    }
    escaped
}

/// Style of the page: ink on paper, one accent; rules instead of boxes, so that it prints as it looks.
const STYLE: &str = include_str!("page.css");

#[cfg(test)]
mod tests {
    use super::*;
    use crate::report::Column;

    fn html(document: &Document) -> String {
        let mut out = Vec::new();
        Html.render(document, &mut out).expect("written to memory");
        String::from_utf8(out).expect("UTF-8")
    }

    #[test]
    fn nothing_from_outside_becomes_markup() {
        let hostile = "<script>alert(1)</script>\" onload='x' & \u{1b}";
        let mut document = Document::new(hostile);
        document.heading(2, hostile);
        document.paragraph(hostile);
        document.fact(hostile, Cell::text(hostile));
        document.list(vec![hostile.into()]);
        document.notice(Severity::Warning, hostile);
        let mut table = Table::new(hostile, vec![Column::text(hostile).under(hostile)]);
        table.row(vec![Cell::text(hostile).flagged(Severity::Note, hostile)]);
        document.table(table);
        let page = html(&document);
        assert!(!page.contains("<script") && !page.contains("onload='"));
        assert!(
            page.contains("&lt;script&gt;alert(1)&lt;/script&gt;&quot; onload=&#39;x&#39; &amp; \\u{1b}")
        );
    }

    #[test]
    fn pages_stand_alone_and_anchors_are_unique() {
        let mut document = Document::new("t");
        for _ in 0..3 {
            document.heading(2, "Loss by part");
            document.paragraph("x");
        }
        let page = html(&document);
        for id in ["loss-by-part", "loss-by-part--2", "loss-by-part--3"] {
            assert_eq!(page.matches(&format!("id=\"{id}\"")).count(), 1);
            assert_eq!(page.matches(&format!("href=\"#{id}\"")).count(), 1);
        }
        assert_eq!(page.matches("<section").count(), page.matches("</section>").count());
        assert!(!page.contains("http:") && !page.contains("https:") && !page.contains("url(h"));
    }
}
