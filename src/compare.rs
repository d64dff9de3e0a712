//! The stages of a budget side by side at the headline point, and where one overtakes another.

use crate::answer::Answer;
use crate::budget::Budget;
use crate::sweep::Watch;

/// What is asked.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct Request {
    /// The stage whose requirements decide the exit code; any stage when absent.
    pub stage: Option<String>,
}

/// Compares the stages of a budget.
pub fn answer<'a>(budget: &'a Budget, request: &'a Request, watch: &'a Watch) -> impl Answer + 'a {
    Comparison { budget, request, watch }
}

#[expect(dead_code)]
struct Comparison<'a> {
    budget: &'a Budget,
    request: &'a Request,
    watch: &'a Watch,
}

impl Answer for Comparison<'_> {
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
