//! Picking from shortlists. Brute force over all combinations, by a loop that knows no bound, is the outside value.

mod shortlists;

use lossbook::answer::Answer;
use lossbook::budget::Budget;
use lossbook::candidate::Candidate;
use lossbook::findings::Severity;
use lossbook::input;
use lossbook::limits::Limits;
use lossbook::pick::entry::Outcome;
use lossbook::pick::search::{Plan, search};
use lossbook::pick::space::Space;
use lossbook::pick::{ALL_ORDERS, By, Question, Request, Slice, describe, merge};
use lossbook::sweep::Watch;
use shortlists::{Dice, Shape};

fn load(shape: Shape) -> Budget {
    let folder = tempfile::tempdir().expect("a temporary folder");
    input::load_budget(&shortlists::write(folder.path(), shape)).expect("a sound budget").0
}

fn space(budget: &Budget, by: By) -> Space<'_> {
    Space::of(budget, &budget.stages[0], budget.shortlist.as_ref().expect("a shortlist"), by)
}

fn outcome(budget: &Budget, request: Request) -> Outcome {
    let space = space(budget, request.by);
    let plan = Plan { top: request.top, exhaustive: request.exhaustive, slice: request.slice };
    describe::outcome(&space, plan, &search(&space, plan, &Watch::default()))
}

fn json(budget: &Budget, request: Request) -> serde_json::Value {
    let watch = Watch::default();
    let mut bytes = Vec::new();
    Question::search(budget, request, &watch).expect("a shortlist").json(&mut bytes).expect("written");
    serde_json::from_slice(&bytes).expect("JSON")
}

const RANKED: [&str; 3] = ["ranking", "not_comparable", "not_beaten"];

#[test]
fn the_bound_gives_the_bytes_of_brute_force() {
    for seed in 0..60 {
        let budget = load(Shape::small(seed));
        let by = ALL_ORDERS[Dice::new(seed).below(5) as usize];
        let request = Request { by, top: 1 + (seed as usize % 7), ..Request::default() };
        let (bound, brute) =
            (outcome(&budget, request), outcome(&budget, Request { exhaustive: true, ..request }));
        assert_eq!(bound.ranking, brute.ranking, "{seed} {by:?}");
        assert_eq!(bound.not_comparable, brute.not_comparable, "{seed} {by:?}");
        assert_eq!(bound.unbeaten, brute.unbeaten, "{seed} {by:?}");
        assert!(bound.counts.points <= brute.counts.points);
        if seed % 10 == 0 {
            let (bound, brute) =
                (json(&budget, request), json(&budget, Request { exhaustive: true, ..request }));
            RANKED
                .iter()
                .for_each(|key| assert_eq!(bound[key].to_string(), brute[key].to_string(), "{seed}"));
        }
    }
}

#[test]
fn the_ranking_is_that_of_a_plain_loop() {
    for seed in [3, 17, 29] {
        let budget = load(Shape { trouble: 0.0, ..Shape::small(seed) });
        let space = space(&budget, By::HeadlineLoss);
        let mut plain: Vec<(f64, u64)> = Vec::new();
        for place in 0..space.len() {
            let sheet = space.sheet(&space.digits(place));
            let candidate = Candidate::new(&budget, &sheet);
            let headline = candidate.headline();
            let profile = budget.profile.iter().map(|step| candidate.at(step.at));
            let points = candidate.grid.points().chain([headline]).chain(profile);
            let sound = |point| {
                candidate.evaluate(point).is_ok_and(|solved| {
                    candidate.findings(&solved).iter().all(|finding| finding.severity != Severity::Critical)
                })
            };
            if points.into_iter().all(sound) {
                plain.push((candidate.evaluate(headline).expect("it runs").loss(), place));
            }
        }
        plain.sort_by(|a, b| a.0.total_cmp(&b.0).then(a.1.cmp(&b.1)));
        let ranked =
            outcome(&budget, Request { top: 10_000, exhaustive: true, ..Request::default() }).ranking;
        assert_eq!(ranked.len(), plain.len(), "{seed}");
        for (entry, (loss, place)) in ranked.iter().zip(&plain) {
            assert_eq!((entry.value, entry.place), (*loss, *place), "{seed}");
            assert_eq!(entry.value, entry.loss);
        }
    }
}

#[test]
fn the_quick_limits_agree_with_the_findings() {
    // ratings in words and ratings as numbers must not part
    let budget = load(Shape { mosfets: 8, trouble: 0.0, ..Shape::small(5) });
    let space = space(&budget, By::HeadlineLoss);
    let mut exceeded = 0;
    for place in (0..space.len()).step_by(5) {
        let sheet = space.sheet(&space.digits(place));
        let (candidate, limits) = (Candidate::new(&budget, &sheet), Limits::of(&sheet));
        for point in candidate.grid.points() {
            let point = lossbook::grid::OperatingPoint { load: point.load * 3.0, ..point };
            if let Ok(solved) = candidate.evaluate(point) {
                let findings = candidate.findings(&solved);
                let critical: Vec<_> = findings.iter().filter(|f| f.severity == Severity::Critical).collect();
                match limits.exceeded(&candidate.stage, &solved) {
                    Some((slot, kind)) => {
                        exceeded += 1;
                        assert!(critical.iter().any(|f| f.slot == slot && f.kind == kind), "{slot:?} {kind}");
                    }
                    None => assert!(critical.is_empty(), "{critical:?}"),
                }
            }
        }
    }
    assert!(exceeded > 0);
}

#[test]
fn slices_merge_to_the_bytes_of_one_run() {
    for (seed, by, of) in [(1, By::HeadlineLoss, 3), (2, By::WorstLoss, 2), (8, By::Price, 7)] {
        let budget = load(Shape::small(seed));
        let request = Request { by, top: 5, ..Request::default() };
        let watch = Watch::default();
        let slices = (1..=of).rev().map(|number| {
            let request = Request { slice: Slice { number, of }, ..request };
            let mut bytes = Vec::new();
            Question::search(&budget, request, &watch)
                .expect("a shortlist")
                .json(&mut bytes)
                .expect("written");
            merge::read(std::str::from_utf8(&bytes).expect("text")).expect("a slice")
        });
        let merged = merge::merge(slices.collect()).expect("all slices");
        let mut bytes = Vec::new();
        Question::merged(merged, Some(&budget)).json(&mut bytes).expect("written");
        let merged: serde_json::Value = serde_json::from_slice(&bytes).expect("JSON");
        let whole = json(&budget, request);
        for key in RANKED.into_iter().chain(["robustness", "bands", "lead", "figures_of_merit"]) {
            assert_eq!(merged[key].to_string(), whole[key].to_string(), "{seed} {key}");
        }
        let visited = |json: &serde_json::Value| json["combinations"]["visited"].clone();
        assert_eq!(visited(&merged), visited(&whole));
    }
}

#[test]
fn slices_that_do_not_fit_are_refused() {
    let budget = load(Shape::small(4));
    let of =
        |number, top| outcome(&budget, Request { top, slice: Slice { number, of: 3 }, ..Request::default() });
    let says = |slices: Vec<Outcome>, words: &str| {
        let (_, reason) = merge::merge(slices).expect_err(words);
        assert!(reason.contains(words), "{reason}");
    };
    says(vec![of(1, 5), of(3, 5)], "2/3");
    says(vec![of(1, 5), of(2, 5), of(2, 5), of(3, 5)], "twice");
    says(vec![of(1, 5), of(2, 6), of(3, 5)], "--top");
    says(vec![Outcome { complete: false, ..of(1, 5) }, of(2, 5), of(3, 5)], "interrupted");
    says(Vec::new(), "nothing");
}

#[test]
fn missing_data_never_wins() {
    let budget = load(Shape { mosfets: 6, trouble: 0.5, ..Shape::small(11) });
    let outcome = outcome(&budget, Request { top: 100_000, exhaustive: true, ..Request::default() });
    assert!(!outcome.not_comparable.is_empty());
    assert!(outcome.not_comparable.iter().all(|entry| !entry.needs.is_empty()));
    // all in the ranking lack the same data
    let gaps = |entry: &lossbook::pick::entry::Entry| {
        entry.not_modelled.iter().map(|gap| gap.needs.clone()).collect::<Vec<_>>()
    };
    assert!(outcome.ranking.windows(2).all(|pair| gaps(&pair[0]) == gaps(&pair[1])));
}

#[test]
fn every_combination_is_accounted_for() {
    for seed in 0..10 {
        let budget = load(Shape { trouble: 0.3, ..Shape::small(seed) });
        for exhaustive in [false, true] {
            let request = Request { top: 3, exhaustive, ..Request::default() };
            let counts = outcome(&budget, request).counts;
            assert_eq!(counts.visited, counts.screened);
            assert_eq!(counts.visited, counts.sound + counts.disqualified + counts.abandoned);
            assert!(!exhaustive || counts.abandoned == 0);
        }
    }
}

#[test]
fn parts_that_do_not_suit_the_rail_are_counted_by_reason() {
    let path = std::path::Path::new(env!("CARGO_MANIFEST_DIR")).join("budgets/grain-dryer-camera.yaml");
    let budget = input::load_budget(&path).expect("the example loads").0;
    let outcome = outcome(&budget, Request { exhaustive: true, ..Request::default() });
    // four parts of 20 V and 25 V cannot stand 29 V, each in 3 x 3 x 3 combinations
    let parts: Vec<_> = outcome.disqualified.iter().filter(|one| one.part.is_some()).collect();
    assert_eq!(parts.len(), 4);
    assert!(parts.iter().all(|one| one.combinations == 27 && one.reason.contains("v_ds_max")));
    let combinations: u64 =
        outcome.disqualified.iter().filter(|o| o.part.is_none()).map(|o| o.combinations).sum();
    assert_eq!(combinations, outcome.counts.disqualified);
    assert!(outcome.disqualified.iter().all(|one| one.part.is_some() || one.example.is_some()));
}

#[test]
fn a_stopped_search_says_so() {
    let budget = load(Shape::small(6));
    let watch = Watch::default();
    watch.stop.store(true, std::sync::atomic::Ordering::Relaxed);
    let question = Question::search(&budget, Request::default(), &watch).expect("a shortlist");
    assert!(!question.picked().outcome.complete);
    assert!(question.picked().insight.is_none());
}

#[test]
fn a_change_that_costs_the_first_place_does_so() {
    // the smallest change found, and a little more, must put another combination first; a little less must not
    let budget = load(Shape { trouble: 0.0, ..Shape::small(12) });
    let watch = Watch::default();
    let question = Question::search(&budget, Request::default(), &watch).expect("a shortlist");
    let picked = question.picked();
    let insight = picked.insight.as_ref().expect("a whole search");
    let delicate = insight.robustness.iter().find(|one| one.change.is_some()).expect("some value matters");
    let winner = &picked.outcome.ranking[0];
    for (factor, still_first) in [(0.97, true), (1.03, false)] {
        let change = 1.0 + delicate.change.expect("found") * factor;
        let first = shortlists::first_with(&budget, winner, &delicate.path, change);
        assert_eq!(first == winner.place, still_first, "{delicate:?}");
    }
}
