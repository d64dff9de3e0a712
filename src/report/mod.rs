//! Answers without a format: headings, sentences, lists, facts, notices and tables of typed cells.
//!
//! A question fills a [`Document`]; [`crate::render`] puts it into text, Markdown and so on. Cells keep full
//! precision; [`number`] is the only place that rounds.
//!
//! ```
//! use lossbook::report::{Cell, Column, Document, Severity, Table};
//! use lossbook::units::Dimension;
//!
//! let mut answer = Document::new("Camera node, 3.3 V rail");
//! answer.heading(2, "Loss by part");
//! answer.paragraph("Most of it is conduction.");
//! let mut table = Table::new("synchronous, 24 V, 6 A", vec![Column::text("part"), Column::number("loss")]);
//! table.row(vec![Cell::text("high side"), Cell::watts(0.3125)]);
//! table.row(vec![Cell::text("inductor"), Cell::missing("not modelled: needs r_ac")]);
//! table.total(vec![Cell::text("total"), Cell::watts(0.3125).flagged(Severity::Note, "without AC winding")]);
//! answer.table(table);
//! answer.fact("load", Cell::setting(6.0, Dimension::Current));
//! ```

mod balance;
pub mod bars;
pub mod caption;
mod cell;
mod checks;
pub mod comparison;
pub mod derivation;
pub mod difference;
pub mod energy;
pub mod evidence;
pub mod figure;
mod figures;
pub mod headroom;
mod layout;
pub mod needs;
pub mod number;
pub mod reconcile;
pub mod review;
pub mod sensitivity;
pub mod shortlist;
mod shortlist_insight;
pub mod spread;
mod table;
pub mod tables;
pub mod verdict;
pub mod words;

pub use crate::findings::Severity;
pub use cell::Cell;
pub use figure::Figure;
pub use layout::{LaidRow, Layout, Printed};
pub use table::{Alignment, Column, Row, RowKind, Table, Units};

/// An answer: a title and blocks in reading order.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct Document {
    /// One line that says what this is about; not printed when empty.
    pub title: String,
    /// Blocks from top to bottom.
    pub blocks: Vec<Block>,
}

/// One block of a document.
#[derive(Clone, Debug, PartialEq)]
pub enum Block {
    /// Heading of a section.
    Heading {
        /// 2 for sections, 3 for their parts; 1 is the title's.
        level: u8,
        /// What it says.
        text: String,
        /// Name to link to: lower case letters, digits and hyphens.
        anchor: String,
    },
    /// Sentences; strong ones are the answer itself.
    Paragraph {
        /// What it says.
        text: String,
        /// True for the sentence that must not be missed.
        strong: bool,
    },
    /// Items of equal standing.
    List(Vec<String>),
    /// Names with values.
    Facts(Vec<(String, Cell)>),
    /// A remark that must stand out.
    Notice {
        /// How much it matters.
        severity: Severity,
        /// What it says.
        text: String,
    },
    /// A table.
    Table(Table),
    /// An equation with its numbers.
    Equation(Equation),
    /// A drawing; its numbers also stand in a table.
    Figure(Figure),
}

/// A step of a derivation.
#[derive(Clone, Debug, PartialEq)]
pub struct Equation {
    /// What is derived.
    pub name: String,
    /// Its symbol.
    pub symbol: String,
    /// Right-hand side in symbols.
    pub formula: String,
    /// The same with numbers and units.
    pub numbers: String,
    /// The result with its unit.
    pub result: String,
    /// Who says so, and where it holds.
    pub authority: String,
}

impl Document {
    /// An empty document.
    pub fn new(title: impl Into<String>) -> Self {
        Document { title: title.into(), blocks: Vec::new() }
    }

    /// Adds a heading; its anchor is made of its words.
    pub fn heading(&mut self, level: u8, text: impl Into<String>) {
        let text = text.into();
        let anchor = anchor(&text);
        self.blocks.push(Block::Heading { level, text, anchor });
    }

    /// Adds sentences.
    pub fn paragraph(&mut self, text: impl Into<String>) {
        self.blocks.push(Block::Paragraph { text: text.into(), strong: false });
    }

    /// Adds the sentence that must not be missed.
    pub fn verdict(&mut self, text: impl Into<String>) {
        self.blocks.push(Block::Paragraph { text: text.into(), strong: true });
    }

    /// Adds a list; nothing when it has no items.
    pub fn list(&mut self, items: Vec<String>) {
        if !items.is_empty() {
            self.blocks.push(Block::List(items));
        }
    }

    /// Adds a name with its value, to the facts just before it or as the first of new ones.
    pub fn fact(&mut self, name: impl Into<String>, value: Cell) {
        let fact = (name.into(), value);
        match self.blocks.last_mut() {
            Some(Block::Facts(facts)) => facts.push(fact),
            _ => self.blocks.push(Block::Facts(vec![fact])),
        }
    }

    /// Adds a remark.
    pub fn notice(&mut self, severity: Severity, text: impl Into<String>) {
        self.blocks.push(Block::Notice { severity, text: text.into() });
    }

    /// Adds a table.
    pub fn table(&mut self, table: Table) {
        self.blocks.push(Block::Table(table));
    }
}

/// Words joined by hyphens: "Loss by part, 24 V" is `loss-by-part-24-v`.
fn anchor(text: &str) -> String {
    let words: Vec<String> = text
        .split(|c: char| !c.is_alphanumeric())
        .filter(|word| !word.is_empty())
        .map(str::to_lowercase)
        .collect();
    words.join("-")
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn facts_gather_and_headings_get_anchors() {
        let mut document = Document::new("t");
        document.heading(2, "Loss by part, 24 V");
        document.fact("a", Cell::count(1));
        document.fact("b", Cell::count(2));
        document.list(Vec::new());
        assert_eq!(document.blocks.len(), 2);
        assert!(
            matches!(&document.blocks[0], Block::Heading { anchor, .. } if anchor == "loss-by-part-24-v")
        );
        assert!(matches!(&document.blocks[1], Block::Facts(facts) if facts.len() == 2));
    }
}
