//! The points at which a combination is evaluated, in the order in which they settle the question soonest.

use std::collections::HashMap;

use crate::budget::{Limit, Requirement};
use crate::candidate::Candidate;
use crate::grid::{ALL_AXES, OperatingPoint};
use crate::model::Solved;

use super::By;

/// Points of a combination: those that make its value first, then those that may only disqualify it.
#[derive(Clone, Debug, Default)]
pub struct Points {
    /// All points, each once.
    pub list: Vec<OperatingPoint>,
    /// Weight of each of the leading points in the value.
    pub weights: Vec<f64>,
    /// Requirements that disqualify: place of the point and what must hold there.
    pub required: Vec<(usize, Requirement)>,
    /// Place of each point by the bits of its coordinates.
    places: HashMap<[u64; 4], usize>,
}

/// Voltages between which the rail runs.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Extremes {
    /// V
    pub lowest_input: f64,
    /// V
    pub highest_input: f64,
}

impl Points {
    /// The points of a stage for an order of ranking.
    pub fn of(candidate: &Candidate<'_>, by: By) -> Points {
        let headline = candidate.headline();
        // heavy load, heat and voltage first: whatever fails, fails there
        let mut grid: Vec<OperatingPoint> = candidate.grid.points().collect();
        let stress = |point: &OperatingPoint| [point.load, point.ambient, point.input_voltage];
        grid.sort_by(|a, b| {
            let pairs = stress(b).into_iter().zip(stress(a));
            pairs.fold(std::cmp::Ordering::Equal, |order, (b, a)| order.then(b.total_cmp(&a)))
        });
        let profile: Vec<(OperatingPoint, f64)> =
            candidate.budget.profile.iter().map(|step| (candidate.at(step.at), step.share)).collect();
        let mut points = Points::default();
        match by {
            By::HeadlineLoss => points.objective(headline, 1.0),
            By::ProfileLoss => profile.iter().for_each(|(point, share)| points.objective(*point, *share)),
            By::WorstLoss | By::JunctionMargin => grid.iter().for_each(|point| points.objective(*point, 1.0)),
            By::Price => {}
        }
        for point in grid.into_iter().chain([headline]).chain(profile.into_iter().map(|(point, _)| point)) {
            points.add(point);
        }
        if by == By::Price {
            for requirement in &candidate.budget.requirements {
                for point in candidate.grid_at(requirement.at).points() {
                    let place = points.add(point);
                    points.required.push((place, *requirement));
                }
            }
        }
        points
    }

    fn objective(&mut self, point: OperatingPoint, weight: f64) {
        let before = self.list.len();
        let place = self.add(point);
        if place == before {
            self.weights.push(weight);
        } else if let Some(own) = self.weights.get_mut(place) {
            *own += weight;
        }
    }

    /// The place of a point, added when it is new.
    fn add(&mut self, point: OperatingPoint) -> usize {
        let list = &mut self.list;
        *self.places.entry(ALL_AXES.map(|axis| point.get(axis).to_bits())).or_insert_with(|| {
            list.push(point);
            list.len() - 1
        })
    }

    /// The highest and lowest input voltage.
    pub fn extremes(&self) -> Extremes {
        let voltages = || self.list.iter().map(|point| point.input_voltage);
        Extremes {
            lowest_input: voltages().fold(f64::INFINITY, f64::min),
            highest_input: voltages().fold(0.0, f64::max),
        }
    }
}

/// True when a limit holds at a solved point; `margin` is the smallest distance to a temperature rating, K.
pub fn holds(limit: &Limit, solved: &Solved, margin: f64) -> bool {
    match limit {
        // undefined without load: nothing to hold
        Limit::EfficiencyMin(least) => solved.efficiency().is_none_or(|efficiency| efficiency >= *least),
        Limit::JunctionMarginMin(least) => margin >= *least,
        Limit::LossMax(most) => solved.loss() <= *most,
    }
}
