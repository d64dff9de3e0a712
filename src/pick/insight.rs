//! What a ranking alone does not tell: how sure the first place is, and where another part would lead.

use serde::Serialize;
use serde::ser::{SerializeMap, Serializer};

use crate::candidate::Candidate;
use crate::compare::spread_between;
use crate::model::Solved;

use super::By;
use super::bands::{self, SlotBands};
use super::entry::Outcome;
use super::merit::{self, Merit};
use super::robustness::{self, Tolerance};
use super::space::{Digits, Space};
use super::substitutes::Substitutes;

/// About the winner of a ranking.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct Insight {
    /// The first place against the second.
    pub lead: Option<Lead>,
    /// Slot by slot: who leads at which load.
    pub bands: Vec<SlotBands>,
    /// The most delicate data-sheet values first.
    pub robustness: Vec<Tolerance>,
    /// Figures of merit, by slot.
    pub merit: Vec<Merit>,
}

/// The first place against the second.
#[derive(Clone, Debug, PartialEq, Serialize)]
pub struct Lead {
    /// Difference of what was ranked by, in its unit.
    pub lead: f64,
    /// The model's spread in the terms that differ, W; `None` unless a loss was ranked by.
    pub spread: Option<f64>,
    /// True when the lead is smaller than the spread.
    pub too_close_to_call: bool,
}

impl Insight {
    /// About the winner of an outcome.
    pub fn of(space: &Space<'_>, outcome: &Outcome) -> Insight {
        let Some(first) = outcome.ranking.first() else { return Insight::default() };
        let winner = space.digits(first.place);
        let slots = Substitutes::of(space, &winner);
        let rivals: Vec<Digits> =
            outcome.ranking.iter().skip(1).map(|entry| space.digits(entry.place)).collect();
        Insight {
            lead: lead(space, outcome),
            bands: slots.iter().filter_map(|slot| bands::of(space, slot)).collect(),
            robustness: robustness::of(space, &winner, &rivals, &slots),
            merit: slots.iter().filter_map(|slot| merit::of(space, slot)).collect(),
        }
    }

    /// Writes its keys.
    ///
    /// # Errors
    /// When the serializer fails.
    pub fn entries<M: SerializeMap>(&self, map: &mut M) -> Result<(), M::Error> {
        map.serialize_entry("lead", &self.lead)?;
        map.serialize_entry("bands", &Bands(&self.bands))?;
        map.serialize_entry("robustness", &Tolerances(&self.robustness))?;
        map.serialize_entry("figures_of_merit", &Merits(&self.merit))
    }
}

fn lead(space: &Space<'_>, outcome: &Outcome) -> Option<Lead> {
    let [first, second, ..] = outcome.ranking.as_slice() else { return None };
    let lead = (second.value - first.value).abs();
    let spread = space.by.is_loss().then(|| spread(space, first.place, second.place)).flatten();
    Some(Lead { lead, spread, too_close_to_call: spread.is_some_and(|spread| lead < spread) })
}

/// The model's spread in the terms that differ, over the points that make the value.
fn spread(space: &Space<'_>, a: u64, b: u64) -> Option<f64> {
    let solved = |place: u64| -> Option<Vec<(Solved, f64)>> {
        let digits = space.digits(place);
        let sheet = space.sheet(&digits);
        let candidate = Candidate::new(space.budget, &sheet);
        let points = space.points_of(&digits);
        let weighted = points.list.iter().zip(&points.weights);
        weighted.map(|(point, weight)| Some((candidate.evaluate(*point).ok()?, *weight))).collect()
    };
    let (a, b) = (solved(a)?, solved(b)?);
    let spreads = a.iter().zip(&b).map(|((a, weight), (b, _))| (weight * spread_between(a, b), a.loss()));
    match space.by {
        // at the point where the first one loses most
        By::WorstLoss => spreads.max_by(|x, y| x.1.total_cmp(&y.1)).map(|(spread, _)| spread),
        _ => Some(spreads.map(|(spread, _)| spread).sum()),
    }
}

struct Bands<'a>(&'a [SlotBands]);

#[derive(Serialize)]
struct SlotEntry<'a> {
    slot: &'static str,
    bands: Vec<BandEntry<'a>>,
    pairs: Vec<PairEntry<'a>>,
}

#[derive(Serialize)]
struct BandEntry<'a> {
    part: &'a str,
    from: f64,
    to: f64,
}

#[derive(Serialize)]
struct PairEntry<'a> {
    parts: [&'a str; 2],
    crossovers: &'a [crate::crossover::Crossover],
}

impl Serialize for Bands<'_> {
    fn serialize<S: Serializer>(&self, serializer: S) -> Result<S::Ok, S::Error> {
        serializer.collect_seq(self.0.iter().map(|slot| {
            SlotEntry {
                slot: slot.slot,
                bands: slot
                    .bands
                    .iter()
                    .map(|b| BandEntry { part: &b.part, from: b.from, to: b.to })
                    .collect(),
                pairs: slot
                    .pairs
                    .iter()
                    .map(|p| PairEntry { parts: [&p.first, &p.second], crossovers: &p.crossovers })
                    .collect(),
            }
        }))
    }
}

struct Tolerances<'a>(&'a [Tolerance]);

#[derive(Serialize)]
struct ToleranceEntry<'a> {
    path: &'a str,
    part: &'a str,
    change: Option<f64>,
}

impl Serialize for Tolerances<'_> {
    fn serialize<S: Serializer>(&self, serializer: S) -> Result<S::Ok, S::Error> {
        serializer.collect_seq(self.0.iter().map(|t| ToleranceEntry {
            path: &t.path,
            part: &t.part,
            change: t.change,
        }))
    }
}

struct Merits<'a>(&'a [Merit]);

#[derive(Serialize)]
struct MeritEntry<'a> {
    slot: &'static str,
    part: &'a str,
    figure: f64,
    loss: f64,
}

impl Serialize for Merits<'_> {
    fn serialize<S: Serializer>(&self, serializer: S) -> Result<S::Ok, S::Error> {
        serializer.collect_seq(self.0.iter().flat_map(|merit| {
            merit.parts.iter().map(|(part, figure, loss)| MeritEntry {
                slot: merit.slot.name(),
                part,
                figure: *figure,
                loss: *loss,
            })
        }))
    }
}
