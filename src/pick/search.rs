//! The search: every combination in blocks, in parallel, with an exact bound on what can still reach the top.

use std::ops::Range;

use crate::fitted::Stage;
use crate::limits::Limits;
use crate::sweep::{self, Watch};
use crate::tolerance::Rig;
use crate::worst::Taken;

use super::judge::{Fault, Judgement, judge};
use super::slice::Slice;
use super::space::Space;
use super::tops::{Front, Standing, Tops};

/// How a search is run.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Plan {
    /// Places asked for.
    pub top: usize,
    /// True to follow every combination to its end.
    pub exhaustive: bool,
    /// Share of the combinations.
    pub slice: Slice,
}

/// Combinations disqualified for one reason.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub struct FaultCount {
    /// The reason, as first met.
    pub fault: Fault,
    /// Place of the combination that showed it first.
    pub first: u64,
    /// How many.
    pub combinations: u64,
}

/// What a search found.
#[derive(Clone, Debug, Default)]
pub struct Found {
    /// The best comparable combinations.
    pub top: Tops,
    /// The best of those that lack data which a rival has.
    pub apart: Tops,
    /// Combinations not beaten in both value and price.
    pub front: Front,
    /// Reasons of disqualification.
    pub faults: Vec<FaultCount>,
    /// Combinations that run everywhere within their ratings.
    pub sound: u64,
    /// Combinations that could not reach the top any more.
    pub abandoned: u64,
    /// Combinations looked at.
    pub visited: u64,
    /// Points solved.
    pub solved: u64,
    /// False when the search was stopped.
    pub complete: bool,
}

/// Searches a space.
pub fn search(space: &Space<'_>, plan: Plan, watch: &Watch) -> Found {
    let begun = Found { top: Tops::of(plan.top), apart: Tops::of(plan.top), ..Found::default() };
    let count = plan.slice.len(space);
    let known = std::sync::RwLock::new(begun);
    let work = |range: Range<u64>| {
        // the threads of one window all read what the windows before have found: never what another thread is finding
        let mut block = match known.read() {
            Ok(known) => Found { faults: Vec::new(), ..known.bare() },
            Err(_) => Found::default(),
        };
        block.run(space, plan, range, watch);
        block
    };
    let taken = sweep::in_order(count, watch, work, |block| {
        if let Ok(mut known) = known.write() {
            known.absorb(block);
        }
        Ok::<(), std::convert::Infallible>(())
    });
    let mut found = known.into_inner().unwrap_or_default();
    found.complete = taken == Ok(true) && found.visited == count;
    found
}

impl Found {
    /// The same standings without any counts.
    fn bare(&self) -> Found {
        let (top, apart, front) = (self.top.clone(), self.apart.clone(), self.front.clone());
        Found { top, apart, front, ..Found::default() }
    }

    fn run(&mut self, space: &Space<'_>, plan: Plan, range: Range<u64>, watch: &Watch) {
        let mut stage: Option<(Stage, Limits)> = None;
        let (mut digits, mut before) = (Vec::new(), Vec::new());
        for index in range {
            if watch.stopped() {
                return;
            }
            space.visit(plan.slice.index(space, index), &mut digits);
            let place = space.place(&digits);
            self.visited += 1;
            if let Some(slot) = space.clash(&digits) {
                self.count(Fault { slot: Some(slot), kind: "drive_clash", point: 0 }, place, 1);
                continue;
            }
            let price = space.price(&digits);
            let start = match (space.by.starts_at_price(), price) {
                (false, _) => space.by.floor(),
                (true, Some(price)) => price,
                (true, None) => {
                    self.count(Fault { slot: None, kind: "no_price", point: 0 }, place, 1);
                    continue;
                }
            };
            let is_apart = space.is_apart(&digits);
            let cut = if plan.exhaustive { f64::INFINITY } else { self.cut(space, is_apart, price) };
            if start > cut {
                self.abandoned += 1;
                continue;
            }
            let (stage, limits) = match &mut stage {
                Some((stage, limits)) => {
                    space.assemble((stage, limits), &before, &digits);
                    (stage, limits)
                }
                none => {
                    let sheet = space.sheet(&digits);
                    let (stage, limits) = none.insert((Stage::fit(&sheet, space.budget), Limits::of(&sheet)));
                    (stage, limits)
                }
            };
            before.clone_from(&digits);
            let points = space.points_of(&digits);
            let taken =
                Taken::of(space.budget.values, stage, || Rig::new(space.budget, &space.sheet(&digits)));
            match judge((&taken, limits), (points, space.by), (start, cut), &mut self.solved) {
                Judgement::Abandoned => self.abandoned += 1,
                Judgement::Disqualified(fault) => self.count(fault, place, 1),
                Judgement::Value(value) => {
                    self.sound += 1;
                    let standing = Standing { value, place, price };
                    if is_apart {
                        self.apart.add(standing);
                    } else {
                        self.top.add(standing);
                        if space.by.is_loss() {
                            self.front.add(standing);
                        }
                    }
                }
            }
        }
    }

    /// The value above which a combination of a price is of no use.
    fn cut(&self, space: &Space<'_>, is_apart: bool, price: Option<f64>) -> f64 {
        if is_apart {
            return self.apart.cut();
        }
        match price.filter(|_| space.by.is_loss()) {
            Some(price) => self.top.cut().max(self.front.cut(price)),
            None => self.top.cut(),
        }
    }

    fn count(&mut self, fault: Fault, first: u64, combinations: u64) {
        let same = |known: &&mut FaultCount| known.fault.slot == fault.slot && known.fault.kind == fault.kind;
        match self.faults.iter_mut().find(same) {
            Some(known) => known.combinations += combinations,
            None => self.faults.push(FaultCount { fault, first, combinations }),
        }
    }

    /// Takes up what a block has found.
    fn absorb(&mut self, block: Found) {
        self.top.merge(&block.top);
        self.apart.merge(&block.apart);
        self.front.merge(&block.front);
        for fault in block.faults {
            self.count(fault.fault, fault.first, fault.combinations);
        }
        self.sound += block.sound;
        self.abandoned += block.abandoned;
        self.visited += block.visited;
        self.solved += block.solved;
    }
}
