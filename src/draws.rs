//! Random draws over the tolerances of a stage: the same to the byte for a seed, whatever the number of threads.

use serde::Serialize;

use crate::fitted::Stage;
use crate::grid::OperatingPoint;
use crate::model;
use crate::random::{Stream, normal_share};
use crate::sheet::Datum;
use crate::sweep::{self, Watch};
use crate::tolerance::{Lever, Rig, Settings};

/// Mean and percentiles.
#[derive(Clone, Copy, Debug, PartialEq, Serialize)]
pub struct Band {
    /// Arithmetic mean.
    pub mean: f64,
    /// 5 % lie below.
    pub p5: f64,
    /// 95 % lie below.
    pub p95: f64,
}

impl Band {
    /// Of a sample, in the order drawn; `None` without any.
    pub fn of(mut sample: Vec<f64>) -> Option<Self> {
        if sample.is_empty() {
            return None;
        }
        let mean = sample.iter().sum::<f64>() / sample.len() as f64;
        sample.sort_by(f64::total_cmp);
        Some(Band { mean, p5: percentile(&sample, 0.05), p95: percentile(&sample, 0.95) })
    }
}

/// Percentile of a sorted sample, linear between its neighbours (Hyndman and Fan 1996, definition 7).
fn percentile(sorted: &[f64], share: f64) -> f64 {
    let place = share * (sorted.len() - 1) as f64;
    let below = place.floor() as usize;
    let above = (below + 1).min(sorted.len() - 1);
    sorted[below] + (place - below as f64) * (sorted[above] - sorted[below])
}

/// What the draws give at one point.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct Statistics {
    /// Loss, W.
    pub loss: Option<Band>,
    /// Efficiency, a fraction.
    pub efficiency: Option<Band>,
    /// Temperature of the hottest part, °C.
    pub hottest: Option<Band>,
    /// Draws without a result.
    pub unusable: u64,
    /// Why the first of them has none.
    pub reason: Option<String>,
}

/// What one draw gives at one point.
struct Sample {
    loss: f64,
    efficiency: Option<f64>,
    hottest: Option<f64>,
}

/// Draws of one block: for each point its samples, and why the first one without a result has none.
type Block = Vec<(Vec<Sample>, u64, Option<String>)>;

impl Statistics {
    /// Draws the levers so many times from a seed and evaluates every point with every draw.
    pub fn of(
        rig: &Rig,
        levers: &[Lever],
        points: &[OperatingPoint],
        (draws, seed): (u64, u64),
        watch: &Watch,
    ) -> Vec<Statistics> {
        let work = |range: std::ops::Range<u64>| -> Block {
            let mut block: Block = points.iter().map(|_| (Vec::new(), 0, None)).collect();
            for draw in range {
                let stage = rig.fit(&settings(levers, &mut Stream::new(seed, draw)));
                for (point, (samples, unusable, reason)) in points.iter().zip(&mut block) {
                    match sample(&stage, *point) {
                        Ok(sample) => samples.push(sample),
                        Err(why) => {
                            *unusable += 1;
                            reason.get_or_insert(why);
                        }
                    }
                }
            }
            block
        };
        let mut all: Block = points.iter().map(|_| (Vec::new(), 0, None)).collect();
        let take = |block: Block| {
            for (whole, part) in all.iter_mut().zip(block) {
                whole.0.extend(part.0);
                whole.1 += part.1;
                whole.2 = whole.2.take().or(part.2);
            }
            Ok::<(), std::convert::Infallible>(())
        };
        // taking up a block cannot fail; a sweep that was stopped has no reader left
        let _ = sweep::in_order(draws, watch, work, take);
        all.into_iter()
            .map(|(samples, unusable, reason)| Statistics {
                loss: Band::of(samples.iter().map(|sample| sample.loss).collect()),
                efficiency: Band::of(samples.iter().filter_map(|sample| sample.efficiency).collect()),
                hottest: Band::of(samples.iter().filter_map(|sample| sample.hottest).collect()),
                unusable,
                reason,
            })
            .collect()
    }
}

fn sample(stage: &Result<Stage, String>, point: OperatingPoint) -> Result<Sample, String> {
    let stage = stage.as_ref().map_err(Clone::clone)?;
    let solved = model::evaluate(stage, point).map_err(|reason| reason.to_string())?;
    let loss = solved.loss();
    if !loss.is_finite() {
        return Err("these values give no finite loss".into());
    }
    Ok(Sample { loss, efficiency: solved.efficiency(), hottest: solved.hottest().map(|(_, t)| t) })
}

/// One draw of every lever. Levers of a part whose tolerances move together take the same place in their bands.
fn settings(levers: &[Lever], stream: &mut Stream) -> Settings {
    let mut settings = Settings::new();
    let mut shared: Vec<(&str, f64)> = Vec::new();
    for lever in levers {
        // every lever takes its numbers, so that one more tolerance elsewhere changes as little as possible
        let own = stream.normal();
        let z = match lever.together.as_deref() {
            None => own,
            Some(group) => match shared.iter().find(|(name, _)| *name == group) {
                Some((_, z)) => *z,
                None => {
                    shared.push((group, own));
                    own
                }
            },
        };
        settings.extend(lever.members.iter().map(|(place, datum)| (*place, drawn(datum, z))));
    }
    settings
}

/// Share of a typical value below which no draw goes.
const LEAST_SHARE: f64 = 0.05;

/// A value at a place of the standard normal distribution: uniform between its limits, or normal with its stated
/// deviation and cut at its limits. Where one limit is printed the typical value is the other end.
fn drawn(datum: &Datum, z: f64) -> f64 {
    let typical = datum.value;
    match datum.sigma {
        Some(sigma) => {
            let value = typical + sigma * z;
            let floor = if typical > 0.0 { LEAST_SHARE * typical } else { f64::NEG_INFINITY };
            value.max(datum.min.unwrap_or(floor)).min(datum.max.unwrap_or(f64::INFINITY))
        }
        None => {
            let (low, high) = (datum.min.unwrap_or(typical), datum.max.unwrap_or(typical));
            low + (high - low) * normal_share(z)
        }
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn percentiles_of_a_known_sample() {
        // definition 7 on 1..=11: the place of 5 % is 0.5, of 95 % 9.5
        let band = Band::of((1..=11).rev().map(f64::from).collect());
        assert_eq!(band, Some(Band { mean: 6.0, p5: 1.5, p95: 10.5 }));
        assert_eq!(Band::of(Vec::new()), None);
    }

    #[test]
    fn draws_keep_to_their_limits() {
        let both = Datum { min: Some(2.0), max: Some(5.0), ..Datum::of(3.0) };
        assert_eq!(drawn(&both, 0.0), 3.5);
        assert!(drawn(&both, 9.0) <= 5.0 && drawn(&both, -9.0) >= 2.0);
        let one = Datum { max: Some(5.0), ..Datum::of(3.0) };
        assert_eq!(drawn(&one, -40.0), 3.0);
        let normal = Datum { sigma: Some(0.1), max: Some(3.15), ..Datum::of(3.0) };
        assert_eq!([drawn(&normal, 1.0), drawn(&normal, 2.0)], [3.1, 3.15]);
    }
}
