//! How far something may go: a scan for the first place where nothing is left to spare, then bisection.

use serde::Serialize;

/// Where it is looked.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Reach {
    /// Where the scan starts.
    pub from: f64,
    /// Where it ends.
    pub to: f64,
    /// True for even ratios instead of even differences.
    pub log: bool,
}

/// How far it may go.
#[derive(Clone, Debug, PartialEq, Serialize)]
#[serde(tag = "answer", rename_all = "snake_case")]
pub enum Bound {
    /// So far.
    Value {
        /// The largest value.
        value: f64,
    },
    /// As far as was looked.
    Unbounded,
    /// Not even to where the scan starts.
    AlreadyExceeded,
    /// There is something to spare up to where something else ends it.
    EndsBefore {
        /// The largest value that works at all; none when nothing does.
        value: Option<f64>,
        /// What ends it.
        reason: String,
    },
}

impl Bound {
    /// Name in files.
    pub const fn name(&self) -> &'static str {
        match self {
            Bound::Value { .. } => "value",
            Bound::Unbounded => "unbounded",
            Bound::AlreadyExceeded => "already_exceeded",
            Bound::EndsBefore { .. } => "ends_before",
        }
    }

    /// The number in it.
    pub const fn value(&self) -> Option<f64> {
        match self {
            Bound::Value { value } => Some(*value),
            Bound::EndsBefore { value, .. } => *value,
            _ => None,
        }
    }
}

/// Steps of the scan.
const STEPS: u32 = 120;
/// Halvings of the bisection: below any rounding of the ends.
const HALVINGS: u32 = 60;

/// Largest x from the start of a reach up to which `spare` stays at zero or above; what cannot be evaluated ends it.
pub fn largest(spare: impl Fn(f64) -> Result<f64, String>, reach: Reach) -> Bound {
    let at = |step: u32| {
        let share = f64::from(step) / f64::from(STEPS);
        match (step, reach.log) {
            (0, _) => reach.from,
            (STEPS, _) => reach.to,
            (_, true) => reach.from * (reach.to / reach.from).powf(share),
            (_, false) => reach.from + (reach.to - reach.from) * share,
        }
    };
    let mut good: Option<f64> = None;
    let mut ended: Option<(f64, String)> = None;
    for step in 0..=STEPS {
        let x = at(step);
        match spare(x) {
            Ok(spare) if spare >= 0.0 => {
                good = Some(x);
                ended = None;
            }
            Ok(_) => {
                return match (good, ended) {
                    (None, _) => Bound::AlreadyExceeded,
                    // between the two lies a stretch that cannot be evaluated: it ends what is sure
                    (Some(good), Some((bad, reason))) => {
                        Bound::EndsBefore { value: Some(edge(&spare, good, bad)), reason }
                    }
                    (Some(good), None) => Bound::Value { value: edge(&spare, good, x) },
                };
            }
            Err(reason) => {
                ended.get_or_insert((x, reason));
            }
        }
    }
    match (good, ended) {
        (Some(good), Some((bad, reason))) => {
            Bound::EndsBefore { value: Some(edge(&spare, good, bad)), reason }
        }
        (Some(_), None) => Bound::Unbounded,
        (None, ended) => {
            Bound::EndsBefore { value: None, reason: ended.map(|end| end.1).unwrap_or_default() }
        }
    }
}

/// Last place with something to spare between one that has and one that has not.
fn edge(spare: &impl Fn(f64) -> Result<f64, String>, mut good: f64, mut bad: f64) -> f64 {
    for _ in 0..HALVINGS {
        let middle = 0.5 * (good + bad);
        if spare(middle).is_ok_and(|spare| spare >= 0.0) {
            good = middle;
        } else {
            bad = middle;
        }
    }
    good
}

#[cfg(test)]
mod tests {
    use super::*;

    const REACH: Reach = Reach { from: 0.0, to: 12.0, log: false };

    #[test]
    fn all_four_answers() {
        let found = largest(|x| Ok(2.0 - x * x), REACH);
        // the root of two, to the last halving
        assert!(found.value().is_some_and(|x| (x - 2.0_f64.sqrt()).abs() < 1e-14), "{found:?}");
        assert_eq!(largest(|_| Ok(1.0), REACH), Bound::Unbounded);
        assert_eq!(largest(|_| Ok(-1.0), REACH), Bound::AlreadyExceeded);
        let ends = largest(|x| if x > 3.0 { Err("too far".into()) } else { Ok(1.0) }, REACH);
        assert!(
            matches!(&ends, Bound::EndsBefore { value: Some(x), reason } if (x - 3.0).abs() < 1e-12 && reason == "too far")
        );
        let nowhere = largest(|_| Err("never".into()), REACH);
        assert_eq!(nowhere, Bound::EndsBefore { value: None, reason: "never".into() });
    }

    #[test]
    fn a_slow_start_is_no_end() {
        let found = largest(|x| if x < 1.0 { Err("too low".into()) } else { Ok(5.0 - x) }, REACH);
        assert!(found.value().is_some_and(|x| (x - 5.0).abs() < 1e-12) && found.name() == "value");
    }
}
