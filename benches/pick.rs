//! Speed of a search: solved points a second by brute force, and the large case with the bound.
//!
//! `cargo bench --bench pick`; the large case is 300 high sides x 300 low sides x 10 inductors x 5 frequencies over
//! 40 points of the grid: 180 million evaluations by brute force.

#[path = "../tests/shortlists/mod.rs"]
#[allow(dead_code)]
mod shortlists;

use divan::Bencher;
use divan::counter::ItemsCount;
use lossbook::budget::Budget;
use lossbook::input;
use lossbook::pick::By;
use lossbook::pick::search::{Plan, search};
use lossbook::pick::slice::Slice;
use lossbook::pick::space::Space;
use lossbook::sweep::Watch;
use shortlists::Shape;

fn main() {
    divan::main();
}

fn budget(mosfets: usize, inductors: usize, frequencies: usize) -> Budget {
    let folder = tempfile::tempdir().expect("a temporary folder");
    let light_load = "forced_continuous";
    let shape = Shape { seed: 7, mosfets, inductors, frequencies, trouble: 0.02, loads: 10, light_load };
    input::load_budget(&shortlists::write(folder.path(), shape)).expect("a sound budget").0
}

fn space(budget: &Budget, by: By) -> Space<'_> {
    let shortlist = budget.shortlist.as_ref().expect("a shortlist");
    Space::of(budget, &budget.stages[0], shortlist, by)
}

/// Every combination at every point.
#[divan::bench(sample_count = 3, sample_size = 1)]
fn brute_force(bencher: Bencher) {
    let budget = budget(40, 4, 3);
    let space = space(&budget, By::HeadlineLoss);
    let plan = Plan { top: 20, exhaustive: true, slice: Slice::default() };
    let points = search(&space, plan, &Watch::default()).solved;
    bencher.counter(ItemsCount::new(points)).bench(|| search(&space, plan, &Watch::default()));
}

/// The exact top 20 of 4.5 million combinations.
#[divan::bench(sample_count = 1, sample_size = 1, args = [By::HeadlineLoss, By::ProfileLoss, By::WorstLoss, By::Price])]
fn large_with_bound(bencher: Bencher, by: By) {
    let budget = budget(300, 10, 5);
    let plan = Plan { top: 20, exhaustive: false, slice: Slice::default() };
    bencher.bench(|| search(&space(&budget, by), plan, &Watch::default()));
}
