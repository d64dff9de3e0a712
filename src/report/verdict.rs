//! The verdict of a comparison in one line.

use crate::compare::{Comparison, Verdict};
use crate::findings::Severity;
use crate::report::number::{Form, show};
use crate::report::words;
use crate::requirements;
use crate::units::Dimension as D;

/// Which stage to take at the headline and why, where another is enough, and what the requirements say.
pub fn sentence(comparison: &Comparison<'_>) -> String {
    let name = |place: usize| comparison.candidates.get(place).map_or("", |candidate| candidate.name());
    let mut line = match &comparison.verdict {
        Verdict::NoneRuns => return "no stage can run at the headline".into(),
        Verdict::OnlyOne { stage } => format!("{} is the only stage that runs at the headline", name(*stage)),
        Verdict::OnlySound { stage } => {
            format!("{} is the only stage within its ratings at the headline", name(*stage))
        }
        Verdict::Leads { stage, next, lead, reason: (mechanism, more), spread, .. } => {
            let (lead_words, spread_words) = (watts(*lead), watts(*spread));
            if comparison.verdict.is_too_close() {
                format!(
                    "{} and {} are too close to call at the headline: {lead_words} apart, while the model's spread in overlap and output charge is {spread_words}",
                    name(*stage),
                    name(*next)
                )
            } else {
                format!(
                    "{} loses {lead_words} less than {} at the headline, mainly by {} ({} more in {}{})",
                    name(*stage),
                    name(*next),
                    mechanism.words(),
                    watts(*more),
                    name(*next),
                    if more > lead { ", partly offset elsewhere" } else { "" }
                )
            }
        }
    };
    if let Some(stage) = comparison.verdict.stage() {
        line.push_str(&exceeded(comparison, stage));
        line.push_str(&enough_below(comparison));
        if !comparison.budget.requirements.is_empty() {
            let judgements = comparison.judgements.get(stage).map_or(&[][..], |judgements| judgements);
            let missed = judgements.iter().filter(|judgement| !judgement.met).count();
            line.push_str(&match missed {
                0 => "; it meets every requirement".into(),
                missed => {
                    format!("; it misses {missed} of {}", words::count(judgements.len(), "requirement"))
                }
            });
            if missed > 0 {
                let others = comparison.candidates.iter().zip(&comparison.judgements);
                let meeting: Vec<&str> = others
                    .filter(|(_, j)| requirements::all_met(j))
                    .map(|(candidate, _)| candidate.name())
                    .collect();
                if !meeting.is_empty() {
                    let verb = if meeting.len() == 1 { "misses" } else { "miss" };
                    line.push_str(&format!(", {} {verb} none", words::list(&meeting)));
                }
            }
        }
        let missing = comparison.candidates.get(stage).map_or(0, |candidate| candidate.not_modelled.len());
        if missing > 0 {
            line.push_str(&format!("; {} of it not modelled", words::count(missing, "mechanism")));
        }
    }
    line
}

/// "; but it exceeds ratings: high side v_ds_max": what speaks against a leader.
fn exceeded(comparison: &Comparison<'_>, stage: usize) -> String {
    let detail = comparison.headline.get(stage).and_then(|record| record.outcome.as_ref().ok());
    let critical = detail.into_iter().flat_map(|detail| &detail.findings);
    let named: Vec<String> = critical
        .filter(|finding| finding.severity == Severity::Critical)
        .map(|finding| format!("{} ({})", finding.slot.words(), finding.kind.replace('_', " ")))
        .collect();
    if named.is_empty() {
        String::new()
    } else {
        format!("; but it exceeds ratings: {}", words::list(&named))
    }
}

fn watts(value: f64) -> String {
    show(value, Form::Result(D::Power))
}

/// "; linear is enough below 61 µA, diode up to 1.7 mA": who leads in which band of load. Nothing when one leads everywhere.
fn enough_below(comparison: &Comparison<'_>) -> String {
    let name = |place: usize| comparison.candidates.get(place).map_or("", |candidate| candidate.name());
    let leading: Vec<_> =
        comparison.bands.iter().filter_map(|band| Some((name(band.stage?), band))).collect();
    let [below @ .., (top, _)] = leading.as_slice() else { return String::new() };
    let ends: Vec<String> = below
        .iter()
        .enumerate()
        .map(|(place, (name, band))| {
            let load = show(band.to, Form::Result(D::Current));
            if place == 0 { format!("{name} is enough below {load}") } else { format!("{name} up to {load}") }
        })
        .collect();
    if ends.is_empty() { String::new() } else { format!("; {}, {top} leads above", ends.join(", ")) }
}
