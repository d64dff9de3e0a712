//! Pick: which part for each slot of a shortlist, and which frequency.
//!
//! Every combination of the shortlist is evaluated at every point of the grid and of the profile. Parts that do not suit
//! the rail are screened out first, combinations that cannot run everywhere within their ratings are disqualified, both
//! counted by reason. What is left is ranked; combinations that lack data which a rival has are ranked apart.
//!
//! # Speed
//!
//! Parts are fitted once, not once a combination. Losses cannot be negative, so the terms of a value added up so far are
//! a lower bound of it: a combination whose bound is above the last place asked for is abandoned ([`judge`]). The ranking is
//! the same to the byte as with `--exhaustive`, which follows every combination to its end.
//!
//! # More than one machine
//!
//! Combinations are shared out over slices: `--slice 3/16` takes the third of sixteen shares and writes its ranking as
//! JSON; `--merge` puts the files of all slices together, to the same bytes as one run. Any batch scheduler can start
//! them, as an array job of one line:
//!
//! ```text
//! # Slurm
//! sbatch --array=1-16 --wrap 'lossbook pick rail.yaml --slice $SLURM_ARRAY_TASK_ID/16 --format json -o slice-$SLURM_ARRAY_TASK_ID.json'
//!
//! # Kubernetes: a Job with completionMode: Indexed, completions: 16, and in its container
//! #   sh -c 'k=$((JOB_COMPLETION_INDEX + 1)); lossbook pick rail.yaml --slice $k/16 --format json -o /out/slice-$k.json'
//!
//! # GNU parallel, on one machine or over ssh
//! parallel 'lossbook pick rail.yaml --slice {}/16 --format json -o slice-{}.json' ::: $(seq 16)
//!
//! # then, once all are done
//! lossbook pick rail.yaml --merge slice-*.json
//! ```

pub mod bands;
pub(crate) mod cautions;
pub mod describe;
pub mod entry;
pub mod insight;
pub mod judge;
pub mod merge;
pub mod merit;
mod output;
pub mod points;
pub mod promise;
pub mod robustness;
pub mod screen;
pub mod search;
pub mod slice;
pub mod slots;
pub mod space;
pub mod substitutes;
pub mod tops;

use crate::ledger::Slot;

pub use output::{Picked, Question};
pub use slice::Slice;

/// What combinations are ranked by.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum By {
    /// Loss at the headline, W.
    HeadlineLoss,
    /// Mean loss over the profile, W.
    ProfileLoss,
    /// Largest loss on the grid, W.
    WorstLoss,
    /// Smallest distance of any part to its temperature rating on the grid, K; most first.
    JunctionMargin,
    /// Price of all parts, among those that meet the requirements.
    Price,
}

/// All orders of ranking.
pub const ALL_ORDERS: [By; 5] =
    [By::HeadlineLoss, By::ProfileLoss, By::WorstLoss, By::JunctionMargin, By::Price];

impl By {
    /// Name in options and outputs.
    pub const fn name(self) -> &'static str {
        match self {
            By::HeadlineLoss => "headline_loss",
            By::ProfileLoss => "profile_loss",
            By::WorstLoss => "worst_loss",
            By::JunctionMargin => "junction_margin",
            By::Price => "price",
        }
    }

    /// The order of a name.
    pub fn from_name(name: &str) -> Option<By> {
        ALL_ORDERS.into_iter().find(|by| by.name() == name)
    }

    /// In prose.
    pub const fn words(self) -> &'static str {
        match self {
            By::HeadlineLoss => "loss at the headline",
            By::ProfileLoss => "mean loss over the profile",
            By::WorstLoss => "largest loss on the grid",
            By::JunctionMargin => "smallest junction margin on the grid",
            By::Price => "price among those that meet the requirements",
        }
    }

    /// Unit of the value, for headers; empty for a price.
    pub const fn unit(self) -> &'static str {
        match self {
            By::HeadlineLoss | By::ProfileLoss | By::WorstLoss => "W",
            By::JunctionMargin => "K",
            By::Price => "",
        }
    }

    /// True for a loss in W.
    pub const fn is_loss(self) -> bool {
        matches!(self, By::HeadlineLoss | By::ProfileLoss | By::WorstLoss)
    }

    /// True when the value is known before anything is evaluated.
    const fn starts_at_price(self) -> bool {
        matches!(self, By::Price)
    }

    /// What a value is at least, lower being better.
    const fn floor(self) -> f64 {
        if self.is_loss() { 0.0 } else { f64::NEG_INFINITY }
    }

    /// The value as people know it, from one of which lower is better; the same back again.
    pub fn turned(self, value: f64) -> f64 {
        if self == By::JunctionMargin { -value } else { value }
    }
}

/// What is asked.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Request {
    /// Order of ranking.
    pub by: By,
    /// Places asked for.
    pub top: usize,
    /// Follow every combination to its end.
    pub exhaustive: bool,
    /// Share of the combinations.
    pub slice: Slice,
}

impl Default for Request {
    fn default() -> Self {
        Request { by: By::HeadlineLoss, top: 10, exhaustive: false, slice: Slice::default() }
    }
}

/// Slots whose part every entry of a ranking names.
pub const NAMED: [Slot; 5] =
    [Slot::HighSide, Slot::LowSide, Slot::FreewheelDiode, Slot::Inductor, Slot::Regulator];
