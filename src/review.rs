//! Review: everything about a budget in one document, for the design review.

use std::cell::OnceCell;
use std::io::{self, Write};

use crate::answer::Answer;
use crate::budget::Budget;
use crate::candidate::Candidate;
use crate::compare::Comparison;
use crate::report::Document;
use crate::report::review::{self, Material};
use crate::sweep::Watch;

/// What is asked.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct Request {
    /// The stage whose requirements decide the exit code; any stage when absent.
    pub stage: Option<String>,
    /// A date to print; none by default, so that a rerun gives the same bytes.
    pub date: Option<String>,
    /// The ranking of the shortlist, when there is one.
    pub shortlist: Option<Document>,
    /// Answers to further questions, each a section of its own.
    pub further: Vec<Document>,
}

/// The whole budget for a design review.
pub fn answer<'a>(budget: &'a Budget, request: &'a Request, watch: &'a Watch) -> impl Answer + 'a {
    Question { budget, request, watch, met: OnceCell::new() }
}

struct Question<'a> {
    budget: &'a Budget,
    request: &'a Request,
    watch: &'a Watch,
    met: OnceCell<bool>,
}

impl Question<'_> {
    /// Compares, remembers whether the requirements are met, and hands the comparison on.
    fn with<T>(&self, render: impl FnOnce(&Comparison<'_>) -> T) -> T {
        let candidates = Candidate::all(self.budget);
        let comparison = Comparison::of(self.budget, &candidates, self.watch);
        let named = self.request.stage.as_ref();
        let stage = named.and_then(|name| candidates.iter().position(|candidate| candidate.name() == name));
        self.met.get_or_init(|| comparison.requirements_met(stage));
        render(&comparison)
    }
}

impl Answer for Question<'_> {
    fn document(&self) -> Document {
        self.with(|comparison| {
            let Request { date, shortlist, further, .. } = self.request;
            review::document(&Material {
                comparison,
                date: date.as_deref(),
                shortlist: shortlist.as_ref(),
                further,
            })
        })
    }

    /// The numbers behind the review: those of the comparison.
    fn json(&self, out: &mut dyn Write) -> io::Result<()> {
        self.with(|comparison| serde_json::to_writer_pretty(&mut *out, comparison))?;
        writeln!(out)
    }

    fn csv(&self, out: &mut dyn Write) -> io::Result<()> {
        crate::compare::answer(self.budget, &crate::compare::Request::default(), self.watch).csv(out)
    }

    fn met(&self) -> bool {
        if self.met.get().is_none() {
            self.with(|_| ());
        }
        self.met.get().copied().unwrap_or_default()
    }
}
