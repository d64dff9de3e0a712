//! Screening: parts whose ratings or gate do not suit the rail at all, before anything is evaluated.

use crate::budget::Budget;
use crate::fitted::{Kind, Stage};
use crate::input::kind::AnySheet;
use crate::ledger::Slot;
use crate::report::number::quantity;
use crate::stage::StageSheet;
use crate::units::Dimension as D;

use super::points::Extremes;

/// Why a part cannot stand in a slot, in words; `None` when nothing speaks against it.
///
/// `stage` holds the part, with the controller that it is judged with.
pub(crate) fn unsuitable(
    (sheet, slot): (&AnySheet, Slot),
    stage: &StageSheet,
    budget: &Budget,
    extremes: &Extremes,
) -> Option<String> {
    let volts = |value: f64| quantity(value, D::Voltage);
    let below = |key: &str, limit: f64, what: &str, stress: f64| {
        (stress > limit).then(|| format!("{key} {} is below {what} {}", volts(limit), volts(stress)))
    };
    let v_in = extremes.highest_input;
    match sheet {
        AnySheet::Mosfet(sheet) => {
            let gate = |v_in: f64| match &Stage::fit(stage, budget).kind {
                Kind::Switched(switched) => {
                    let drive = switched.drive(v_in, budget.output_voltage);
                    if slot == Slot::HighSide { drive.v_high } else { drive.v_low }
                }
                Kind::Linear(_) => f64::INFINITY,
            };
            let (most, least) = (gate(v_in), gate(extremes.lowest_input));
            let plateau = sheet.v_gs_plateau.value;
            below("v_ds_max", sheet.v_ds_max.value, "V_IN", v_in)
                .or_else(|| below("v_gs_max", sheet.v_gs_max.value, "the drive", most))
                .or_else(|| {
                    (least < plateau).then(|| {
                        format!("the drive, {}, is below its plateau {}", volts(least), volts(plateau))
                    })
                })
        }
        AnySheet::Diode(sheet) => below("v_rrm", sheet.v_rrm.value, "V_IN", v_in),
        AnySheet::Capacitor(sheet) => {
            let input = slot == Slot::InputCapacitors;
            let (what, stress) = if input { ("V_IN", v_in) } else { ("V_OUT", budget.output_voltage) };
            below("v_max", sheet.v_max.value, what, stress)
        }
        AnySheet::Controller(sheet) => below("v_in_max", sheet.v_in_max.value, "V_IN", v_in),
        AnySheet::LinearRegulator(sheet) => below("v_in_max", sheet.v_in_max.value, "V_IN", v_in),
        AnySheet::Inductor(_) => None,
    }
}
