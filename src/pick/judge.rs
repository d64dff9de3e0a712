//! One combination: its value, or why it has none.

use crate::infeasible::Infeasible;
use crate::ledger::Slot;
use crate::limits::Limits;
use crate::model;
use crate::worst::Taken;

use super::By;
use super::points::{Points, holds};

/// What became of a combination.
#[derive(Clone, Copy, Debug, PartialEq)]
pub enum Judgement {
    /// It runs everywhere within its ratings; lower is better.
    Value(f64),
    /// It cannot reach the places that are asked for.
    Abandoned,
    /// It cannot be taken.
    Disqualified(Fault),
}

/// Why a combination cannot be taken: the slot, what it is about, and the place of the point where it shows.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub struct Fault {
    /// The slot, when one is to blame.
    pub slot: Option<Slot>,
    /// The kind of reason.
    pub kind: &'static str,
    /// Place of the point.
    pub point: usize,
}

/// Judges a stage at all its points; `start` is what is known of the value before (the price), `cut` the value above
/// which it is of no use. `solved` counts the points.
///
/// Every term of a value is 0 or more, or a maximum: what has been added up so far is a lower bound of the value.
pub fn judge(
    (stage, limits): (&Taken<'_>, &Limits),
    (points, by): (&Points, By),
    (start, cut): (f64, f64),
    solved: &mut u64,
) -> Judgement {
    if start > cut {
        return Judgement::Abandoned;
    }
    let mut value = start;
    for (place, point) in points.list.iter().enumerate() {
        let fault = |slot, kind| Judgement::Disqualified(Fault { slot, kind, point: place });
        *solved += 1;
        let stage = &*stage.at(*point);
        let here = match model::evaluate(stage, *point) {
            Ok(here) => here,
            Err(reason) => {
                let (slot, kind) = kind_of(&reason);
                return fault(slot, kind);
            }
        };
        if let Some((slot, kind)) = limits.exceeded(stage, &here) {
            return fault(Some(slot), kind);
        }
        if let Some(weight) = points.weights.get(place) {
            value = match by {
                By::HeadlineLoss | By::ProfileLoss => value + weight * here.loss(),
                By::WorstLoss => value.max(here.loss()),
                By::JunctionMargin => value.max(-limits.margin(&here)),
                By::Price => value,
            };
            if !value.is_finite() && by != By::JunctionMargin {
                return fault(None, "no_finite_value");
            }
            if value > cut {
                return Judgement::Abandoned;
            }
        }
        for (_, requirement) in points.required.iter().filter(|(required, _)| *required == place) {
            if !holds(&requirement.limit, &here, limits.margin(&here)) {
                return fault(None, "requirement_missed");
            }
        }
    }
    Judgement::Value(value)
}

/// The kind of reason, and the slot to blame.
fn kind_of(reason: &Infeasible) -> (Option<Slot>, &'static str) {
    match reason {
        Infeasible::InputTooLow { .. } => (None, "input_too_low"),
        Infeasible::OnTime { .. } => (None, "on_time"),
        Infeasible::OffTime { .. } => (None, "off_time"),
        Infeasible::DriveTooLow { .. } => (Some(Slot::HighSide), "drive_too_low"),
        Infeasible::DropOut { .. } => (Some(Slot::Regulator), "drop_out"),
        Infeasible::NoStableTemperature { slot, .. } => (Some(*slot), "no_stable_temperature"),
    }
}

/// A kind of reason in words.
pub fn words(kind: &str) -> &'static str {
    match kind {
        "input_too_low" => "no duty cycle makes the output voltage",
        "on_time" => "on-time below t_on_min",
        "off_time" => "off-time below t_off_min or both dead times",
        "drive_too_low" => "the drive cannot carry the peak current",
        "drop_out" => "drop-out",
        "no_stable_temperature" => "no stable temperature",
        "junction_rating" => "above its temperature rating",
        "beyond_belief" => "settles above 300 °C",
        "current_rating" => "above its current rating",
        "saturation" => "peak current above saturation",
        "ripple_current_rating" => "above its ripple current rating",
        "requirement_missed" => "misses a requirement",
        "no_price" => "a part without a price",
        "drive_clash" => "does not suit the controller's drive",
        _ => "no finite value",
    }
}
