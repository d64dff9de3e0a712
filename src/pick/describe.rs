//! From standings to entries: everything that is said of a combination, evaluated once more for the few that are shown.

use crate::candidate::Candidate;
use crate::findings::Severity;
use crate::grid::OperatingPoint;
use crate::ledger::ALL_MECHANISMS;
use crate::limits::Limits;
use crate::report::{needs, words};
use crate::requirements;
use crate::sweep::{self, Watch};

use super::entry::{Counts, Disqualified, Entry, Gap, Outcome, ordered};
use super::judge;
use super::points::holds;
use super::search::{FaultCount, Found, Plan};
use super::space::Space;
use super::tops::Standing;

/// The outcome of a search.
pub fn outcome(space: &Space<'_>, plan: Plan, found: &Found) -> Outcome {
    let entries = |standings: Vec<Standing>| sweep::map(&standings, |standing| entry(space, *standing));
    let disqualified = found.faults.iter().map(|fault| fault.combinations).sum();
    Outcome {
        version: env!("CARGO_PKG_VERSION").into(),
        budget: space.budget.name.clone(),
        values: space.budget.values,
        input: space.budget.fingerprint(),
        stage: space.base.name.clone(),
        currency: space.budget.currency.clone(),
        by: space.by,
        top: plan.top,
        exhaustive: plan.exhaustive,
        slice: plan.slice,
        complete: found.complete,
        counts: Counts {
            all: space.all,
            screened: space.len(),
            visited: found.visited,
            abandoned: found.abandoned,
            disqualified,
            sound: found.sound,
            points: found.solved,
        },
        ranking: entries(found.top.list().to_vec()),
        not_comparable: entries(found.apart.list().to_vec()),
        unbeaten: entries(found.front.list().copied().collect()),
        disqualified: left_out(space, &found.faults),
    }
}

/// Everything about one combination.
pub fn entry(space: &Space<'_>, standing: Standing) -> Entry {
    let digits = space.digits(standing.place);
    let sheet = space.sheet(&digits);
    let candidate = Candidate::new(space.budget, &sheet);
    let point = candidate.headline();
    let solved = candidate.evaluate(point).ok();
    let parts = ordered(&space.choices).into_iter().filter_map(|slot| {
        Some((space.choices.get(slot)?.slot, space.option(&digits, slot)?.name.to_string()))
    });
    let judgements = requirements::judge(&candidate, &Watch::default());
    let missed = judgements.iter().filter(|judgement| !judgement.met);
    let gaps = candidate.not_modelled.iter().map(|missing| Gap {
        lacking: missing.lacking.name().into(),
        slot: missing.slot.name().into(),
        mechanism: missing.mechanism.name().into(),
        needs: missing.needs.into(),
    });
    let mechanisms = solved.iter().flat_map(|solved| {
        let of = |mechanism| (mechanism, solved.ledger.mechanism(mechanism));
        ALL_MECHANISMS.into_iter().map(of).filter(|(_, watts)| *watts > 0.0)
    });
    Entry {
        place: standing.place,
        parts: parts.collect(),
        switching_frequency: (!sheet.is_linear()).then_some(point.switching_frequency),
        value: space.by.turned(standing.value),
        loss: solved.as_ref().map_or(0.0, |solved| solved.loss()),
        efficiency: solved.as_ref().and_then(|solved| solved.efficiency()),
        price: standing.price,
        hottest: solved.as_ref().and_then(|solved| solved.hottest()),
        mechanisms: mechanisms.collect(),
        missed: missed.map(|j| needs::sentence(&j.requirement.limit, &j.requirement.at)).collect(),
        needs: space.apart(&digits).into_iter().map(Into::into).collect(),
        not_modelled: gaps.collect(),
    }
}

/// Parts that were screened out, then reasons of combinations, the most frequent first.
fn left_out(space: &Space<'_>, faults: &[FaultCount]) -> Vec<Disqualified> {
    let parts = space.screened.iter().map(|screened| Disqualified {
        slot: Some(screened.slot),
        part: Some(screened.part.to_string()),
        reason: screened.reason.clone(),
        combinations: screened.combinations,
        example: None,
    });
    let mut reasons: Vec<Disqualified> = faults
        .iter()
        .map(|fault| Disqualified {
            slot: fault.fault.slot,
            part: None,
            reason: judge::words(fault.fault.kind).into(),
            combinations: fault.combinations,
            example: Some(example(space, fault)),
        })
        .collect();
    reasons.sort_by(order);
    parts.chain(reasons).collect()
}

/// The most frequent reason first.
pub fn order(a: &Disqualified, b: &Disqualified) -> std::cmp::Ordering {
    b.combinations.cmp(&a.combinations).then_with(|| (a.slot, &a.reason).cmp(&(b.slot, &b.reason)))
}

/// The first combination of a reason, and what it is exactly.
fn example(space: &Space<'_>, fault: &FaultCount) -> String {
    let digits = space.digits(fault.first);
    let name = |slot: usize| space.option(&digits, slot).map(|option| option.name.to_string());
    let mut names: Vec<String> = ordered(&space.choices)
        .into_iter()
        .filter(|slot| space.choices.get(*slot).is_some_and(|choice| choice.options.len() > 1))
        .filter_map(name)
        .collect();
    names.extend(
        space.frequency(&digits).map(|frequency| words::set(frequency, crate::units::Dimension::Frequency)),
    );
    let combination = names.join(" + ");
    let Some(point) = space.points_of(&digits).list.get(fault.fault.point) else { return combination };
    match detail(space, fault, *point) {
        Some(detail) => format!("{combination}: {detail} ({})", words::point(point)),
        None => combination,
    }
}

fn detail(space: &Space<'_>, fault: &FaultCount, point: OperatingPoint) -> Option<String> {
    let sheet = space.sheet(&space.digits(fault.first));
    let candidate = Candidate::new(space.budget, &sheet);
    match candidate.evaluate(point) {
        Err(reason) => Some(reason.to_string()),
        Ok(solved) if fault.fault.kind == "requirement_missed" => {
            let margin = Limits::of(&sheet).margin(&solved);
            let required = &space.points_of(&space.digits(fault.first)).required;
            let mut here = required.iter().filter(|(place, _)| *place == fault.fault.point);
            let missed = here.find(|(_, requirement)| !holds(&requirement.limit, &solved, margin));
            missed.map(|(_, requirement)| needs::sentence(&requirement.limit, &requirement.at))
        }
        Ok(solved) => {
            let findings = candidate.findings(&solved);
            let critical = findings.into_iter().filter(|finding| finding.severity == Severity::Critical);
            let mut own = critical.filter(|finding| finding.kind == fault.fault.kind);
            own.find(|finding| Some(finding.slot) == fault.fault.slot).map(|finding| finding.text)
        }
    }
}
