//! Review: everything about a budget in one document, for the design review.

use std::io::{self, Write};

use crate::answer::Answer;
use crate::budget::Budget;
use crate::compare::Asked;
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
    Question { request, asked: Asked::new(budget, request.stage.as_deref(), watch) }
}

struct Question<'a> {
    request: &'a Request,
    asked: Asked<'a>,
}

impl Answer for Question<'_> {
    fn document(&self) -> Document {
        self.asked.with(|comparison| {
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
        self.asked.json(out)
    }

    fn csv(&self, out: &mut dyn Write) -> io::Result<()> {
        self.asked.csv(out)
    }

    fn met(&self) -> bool {
        self.asked.met()
    }
}
