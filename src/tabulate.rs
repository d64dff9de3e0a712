//! Efficiency and loss over the grid.

use crate::answer::Answer;
use crate::budget::Budget;
use crate::sweep::Watch;

/// What is asked.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct Request {
    /// Only this stage.
    pub stage: Option<String>,
    /// All loads of the budget and all columns, in text and Markdown.
    pub full: bool,
    /// Loads of the rows, instead of round ones.
    pub loads: Option<Vec<Load>>,
    /// Columns for parts or for mechanisms.
    pub split: Option<Split>,
}

/// A load as asked for.
#[derive(Clone, Copy, Debug, PartialEq)]
pub enum Load {
    /// A
    Amperes(f64),
    /// Fraction of rated_load.
    OfRated(f64),
}

/// What the loss is split into.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Split {
    /// One column a part.
    Part,
    /// One column a mechanism.
    Mechanism,
}

/// Tabulates the stages of a budget.
pub fn answer<'a>(budget: &'a Budget, request: &'a Request, watch: &'a Watch) -> impl Answer + 'a {
    Tables { budget, request, watch }
}

#[expect(dead_code)]
struct Tables<'a> {
    budget: &'a Budget,
    request: &'a Request,
    watch: &'a Watch,
}

impl Answer for Tables<'_> {
    fn document(&self) -> crate::report::Document {
        crate::report::Document::new(&self.budget.name)
    }
    fn json(&self, out: &mut dyn std::io::Write) -> std::io::Result<()> {
        writeln!(out, "{{}}")
    }
    fn csv(&self, out: &mut dyn std::io::Write) -> std::io::Result<()> {
        writeln!(out)
    }
}
