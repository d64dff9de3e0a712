//! Over the load: which part of a slot leads where, and at which loads the leading ones change places.

use crate::candidate::Candidate;
use crate::compare::load_range;
use crate::crossover::{self, Crossover};
use crate::grid::AxisName;
use crate::sweep;

use super::space::Space;
use super::substitutes::{Substitute, Substitutes};

/// Loads at which the leaders are looked up before the borders are refined.
const SCAN: u32 = 120;
/// Leading parts of a slot whose crossovers are looked for.
const LEADERS: usize = 3;

/// The leaders of one slot over the load, all other slots as in the winner, the other coordinates as at the headline.
#[derive(Clone, Debug, PartialEq)]
pub struct SlotBands {
    /// The slot as in files, or `switching_frequency`.
    pub slot: &'static str,
    /// The bands from the lowest load to the highest.
    pub bands: Vec<Band>,
    /// Pairs of leading parts: names, and the loads at which one overtakes the other.
    pub pairs: Vec<Pair>,
}

/// A band of load in which one part has the lowest loss.
#[derive(Clone, Debug, PartialEq)]
pub struct Band {
    /// Name of the part.
    pub part: String,
    /// A
    pub from: f64,
    /// A
    pub to: f64,
}

/// Two leading parts and where they change places.
#[derive(Clone, Debug, PartialEq)]
pub struct Pair {
    /// The better one at what is ranked by.
    pub first: String,
    /// The other.
    pub second: String,
    /// The loads at which one overtakes the other.
    pub crossovers: Vec<Crossover>,
}

/// Bands and crossovers of a slot; `None` when the grid has no range of loads.
pub fn of(space: &Space<'_>, substitutes: &Substitutes) -> Option<SlotBands> {
    let (from, to) = load_range(space.budget)?;
    let fitted = |substitute| candidate(space, substitute);
    let candidates: Vec<Candidate<'_>> = substitutes.list.iter().map(fitted).collect();
    Some(SlotBands {
        slot: substitutes.name(),
        bands: bands(&candidates, from, to),
        pairs: pairs(&candidates, from, to),
    })
}

fn candidate<'s>(space: &Space<'s>, substitute: &'s Substitute) -> Candidate<'s> {
    Candidate::new(space.budget, &substitute.sheet)
}

fn loss(candidate: &Candidate<'_>, load: f64) -> Option<f64> {
    let point = candidate.headline().with(AxisName::Load, load);
    candidate.evaluate(point).ok().map(|solved| solved.loss())
}

fn bands(candidates: &[Candidate<'_>], from: f64, to: f64) -> Vec<Band> {
    let step = (to / from).ln() / f64::from(SCAN);
    let loads: Vec<f64> =
        (0..=SCAN).map(|k| if k == SCAN { to } else { from * (step * f64::from(k)).exp() }).collect();
    let leaders = sweep::map(&loads, |load| {
        let losses = candidates.iter().enumerate().filter_map(|(place, c)| Some((loss(c, *load)?, place)));
        losses.min_by(|a, b| a.0.total_cmp(&b.0)).map(|(_, place)| place)
    });
    let mut bands: Vec<(usize, Band)> = Vec::new();
    let mut before = None;
    for (load, leader) in loads.iter().zip(leaders) {
        let Some(leader) = leader else {
            before = None;
            continue;
        };
        match (bands.last_mut(), before) {
            (Some((own, band)), Some(_)) if *own == leader => band.to = *load,
            (last, before) => {
                let border = match (&last, before) {
                    (Some((own, _)), Some(before)) => {
                        border(&candidates[*own], &candidates[leader], before, *load)
                    }
                    _ => *load,
                };
                if let (Some((_, band)), Some(_)) = (last, before) {
                    band.to = border;
                }
                let part = candidates[leader].name().to_owned();
                bands.push((leader, Band { part, from: border, to: *load }));
            }
        }
        before = Some(*load);
    }
    bands.into_iter().map(|(_, band)| band).collect()
}

/// The load between two at which one gives way to another.
fn border(a: &Candidate<'_>, b: &Candidate<'_>, mut low: f64, mut high: f64) -> f64 {
    while high / low - 1.0 > 1e-6 {
        let middle = (low * high).sqrt();
        match (loss(a, middle), loss(b, middle)) {
            (Some(a), Some(b)) if a <= b => low = middle,
            _ => high = middle,
        }
    }
    (low * high).sqrt()
}

fn pairs(candidates: &[Candidate<'_>], from: f64, to: f64) -> Vec<Pair> {
    let leaders = &candidates[..candidates.len().min(LEADERS)];
    let mut pairs = Vec::new();
    for (place, a) in leaders.iter().enumerate() {
        pairs.extend(leaders[place + 1..].iter().map(|b| (a, b)));
    }
    sweep::map(&pairs, |(a, b)| Pair {
        first: a.name().into(),
        second: b.name().into(),
        crossovers: crossover::between((a, a.headline()), (b, b.headline()), from, to),
    })
}
