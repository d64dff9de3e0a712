//! Sweeps: an ordered map over blocks of work, in parallel, taken up serially in order.
//!
//! The only user of rayon. The blocks do not depend on the number of threads, so results are the same to the byte.

use std::ops::Range;
use std::sync::atomic::{AtomicBool, AtomicU64, Ordering};

use rayon::prelude::*;

/// Items of one block.
const BLOCK: u64 = 512;
/// Blocks in flight at a time; bounds the memory of a sweep.
const WINDOW: u64 = 32;

/// What a sweep and its observer share: how far it is, and whether it shall stop.
#[derive(Debug, Default)]
pub struct Watch {
    /// Items done.
    pub done: AtomicU64,
    /// Items in all, once known.
    pub total: AtomicU64,
    /// Set to end the sweep early.
    pub stop: AtomicBool,
}

impl Watch {
    /// True when the sweep shall end early.
    pub fn stopped(&self) -> bool {
        self.stop.load(Ordering::Relaxed)
    }

    /// Counts items as done.
    pub fn advance(&self, items: u64) {
        self.done.fetch_add(items, Ordering::Relaxed);
    }
}

/// Works on blocks of the items `0..count` in parallel and hands the results to `take` in order.
///
/// Ends early with `Ok(false)` when the watch says stop, or with the first error of `take`.
pub fn in_order<T: Send, E>(
    count: u64,
    watch: &Watch,
    work: impl Fn(Range<u64>) -> T + Sync,
    mut take: impl FnMut(T) -> Result<(), E>,
) -> Result<bool, E> {
    watch.total.fetch_add(count, Ordering::Relaxed);
    let blocks = count.div_ceil(BLOCK);
    let compute = |first: u64| -> Vec<T> {
        let block = |block: u64| {
            let range = block * BLOCK..((block + 1) * BLOCK).min(count);
            let items = range.end - range.start;
            let result = work(range);
            watch.advance(items);
            result
        };
        (first..(first + WINDOW).min(blocks)).into_par_iter().map(block).collect()
    };
    let mut ready = Vec::new();
    for first in (0..blocks).step_by(WINDOW as usize) {
        if watch.stopped() {
            return Ok(false);
        }
        // one window is taken up while the next is worked on
        let mut coming = Vec::new();
        rayon::in_place_scope(|scope| {
            scope.spawn(|_| coming = compute(first));
            ready.drain(..).try_for_each(&mut take)
        })?;
        ready = coming;
    }
    ready.into_iter().try_for_each(take)?;
    Ok(true)
}

/// Maps items in parallel, results in order.
pub fn map<'a, I: Sync, T: Send>(items: &'a [I], work: impl Fn(&'a I) -> T + Sync + Send) -> Vec<T> {
    items.par_iter().map(work).collect()
}

/// Number of threads in use.
pub fn threads() -> usize {
    rayon::current_num_threads()
}

/// Sets the number of threads; false when a sweep has already run.
pub fn set_threads(threads: usize) -> bool {
    rayon::ThreadPoolBuilder::new().num_threads(threads).build_global().is_ok()
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn results_come_in_order_and_stop_on_request() {
        let watch = Watch::default();
        let mut seen = Vec::new();
        let done = in_order(
            5000,
            &watch,
            |range| range,
            |range| {
                seen.extend(range);
                Ok::<(), ()>(())
            },
        );
        assert_eq!(done, Ok(true));
        assert_eq!(seen, (0..5000).collect::<Vec<u64>>());
        watch.stop.store(true, Ordering::Relaxed);
        assert_eq!(in_order(10, &watch, |_| (), |()| Ok::<(), ()>(())), Ok(false));
    }

    #[test]
    fn a_sweep_gives_the_same_bytes_on_one_and_two_threads() {
        use crate::answer::Answer;
        use crate::grid::{Axis, AxisName};
        let path = std::path::Path::new(env!("CARGO_MANIFEST_DIR")).join("budgets/soil-probe.yaml");
        let (mut budget, _) = crate::input::load_budget(&path).expect("a shipped budget");
        // some windows of blocks
        let loads = Axis::Range { from: 20e-6, to: 0.3, points: 3000, log: true };
        budget.grid = budget.grid.with(AxisName::Load, loads);
        let csv = |threads: usize| {
            let pool = rayon::ThreadPoolBuilder::new().num_threads(threads).build().expect("threads");
            let (request, watch) = Default::default();
            let mut bytes = Vec::new();
            let write = || crate::tabulate::answer(&budget, &request, &watch).csv(&mut bytes);
            pool.install(write).expect("a Vec takes every byte");
            bytes
        };
        let one = csv(1);
        assert!(one.len() > 1_000_000);
        assert_eq!(one, csv(2));
    }
}
