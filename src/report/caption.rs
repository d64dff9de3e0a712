//! The caption line of a table: all that is needed to paste it elsewhere.

use crate::budget::Budget;
use crate::candidate::Candidate;
use crate::report::words;

/// "lossbook 0.1.0 · grain-dryer camera node · input 3f9a21c4 · ... · typical values", or worst values.
pub fn budget(budget: &Budget, what: &str) -> String {
    let mut parts = vec![
        concat!("lossbook ", env!("CARGO_PKG_VERSION")).to_owned(),
        budget.name.clone(),
        format!("input {}", budget.fingerprint()),
    ];
    if !what.is_empty() {
        parts.push(what.to_owned());
    }
    parts.push(format!("{} values", budget.values.name()));
    parts.join(" · ")
}

/// "lossbook 0.1.0 · input 3f9a21c4 · typical values": what an answer about the whole budget says of itself once.
pub fn origin(budget: &Budget) -> String {
    let version = env!("CARGO_PKG_VERSION");
    format!("lossbook {version} · input {} · {} values", budget.fingerprint(), budget.values.name())
}

/// The same for one stage, with what is fixed in the table and the number of assumed and of missing items.
pub fn stage(candidate: &Candidate<'_>, fixed: &str) -> String {
    let assumed = candidate.assumptions.len();
    let missing = candidate.not_modelled.len();
    let what = if fixed.is_empty() {
        candidate.name().to_owned()
    } else {
        format!("{} · {fixed}", candidate.name())
    };
    format!("{} · {assumed} assumed · {missing} not modelled", budget(candidate.budget, &what))
}

/// "2 assumed, 1 not modelled" of a stage, for the place beside a total.
pub fn gaps(candidate: &Candidate<'_>) -> String {
    let missing = candidate.not_modelled.len();
    format!("{}, {} not modelled", words::count(candidate.assumptions.len(), "assumption"), missing)
}
