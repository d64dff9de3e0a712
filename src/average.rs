//! Averages of efficiency: two of them, never confused.

use crate::candidate::Candidate;
use crate::grid::{AxisName, OperatingPoint, PartialPoint};
use crate::infeasible::Infeasible;

/// Shares of the rated load at which the mean active efficiency is taken.
pub const ACTIVE_SHARES: [f64; 4] = [0.25, 0.50, 0.75, 1.00];

/// Arithmetic mean of the efficiencies at 25, 50, 75 and 100 % of the rated load (A); other coordinates as at `point`.
///
/// Regulation (EU) 2019/1782 averages so for mains-fed external supplies; an on-board rail borrows the load points and the
/// averaging, nothing else of it.
pub fn mean_active(candidate: &Candidate<'_>, point: OperatingPoint, rated: f64) -> Result<f64, Infeasible> {
    let mut efficiencies = [0.0; ACTIVE_SHARES.len()];
    for (efficiency, share) in efficiencies.iter_mut().zip(ACTIVE_SHARES) {
        let solved = candidate.evaluate(point.with(AxisName::Load, share * rated))?;
        *efficiency = solved.efficiency().unwrap_or(0.0);
    }
    Ok(mean_of_shares(efficiencies))
}

/// Arithmetic mean of the efficiencies at the four shares.
pub fn mean_of_shares(efficiencies: [f64; ACTIVE_SHARES.len()]) -> f64 {
    efficiencies.iter().sum::<f64>() / ACTIVE_SHARES.len() as f64
}

/// Mean powers of a profile.
#[derive(Clone, Copy, Debug, Default, PartialEq)]
pub struct ProfilePower {
    /// Mean output power, W.
    pub output: f64,
    /// Mean loss, W.
    pub loss: f64,
}

impl ProfilePower {
    /// Energy delivered over energy drawn; undefined without load.
    pub fn efficiency(&self) -> Option<f64> {
        (self.output > 0.0).then(|| self.output / (self.output + self.loss))
    }
}

/// Mean output power and loss over the budget's profile, or `None` without one. Coordinates that neither the profile nor
/// `at` names come from the headline.
pub fn over_profile(candidate: &Candidate<'_>, at: PartialPoint) -> Option<Result<ProfilePower, Infeasible>> {
    let profile = &candidate.budget.profile;
    if profile.is_empty() {
        return None;
    }
    let mut power = ProfilePower::default();
    for part in profile {
        let mut named = at;
        for axis in crate::grid::ALL_AXES {
            if let Some(value) = part.at.get(axis) {
                named.set(axis, value);
            }
        }
        match candidate.evaluate(candidate.at(named)) {
            Ok(solved) => {
                power.output += part.share * solved.output_power();
                power.loss += part.share * solved.loss();
            }
            Err(reason) => return Some(Err(reason)),
        }
    }
    Some(Ok(power))
}
