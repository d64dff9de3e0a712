//! What a data sheet leaves open: mechanisms that are then not modelled, and what is assumed instead.

use crate::sheet::common::Descriptive;
use crate::sheet::form::Faults;
use crate::sheet::{
    CapacitorSheet, ControllerSheet, Datum, DiodeSheet, InductorSheet, LinearRegulatorSheet, MosfetSheet,
};

fn source(descriptive: &Descriptive, gaps: &mut Faults) {
    if descriptive.source.is_none() {
        gaps.warn("", "gives no source", "add `source:` so that others can check the values");
    }
}

fn at_ambient(r_th: Option<&Datum>, gaps: &mut Faults) {
    if r_th.is_none() {
        gaps.warn(
            "",
            "gives no r_th_ja: the part stays at ambient temperature",
            "add `r_th_ja` on your board",
        );
    }
}

/// Gaps of a MOSFET.
pub(crate) fn mosfet(sheet: &MosfetSheet, gaps: &mut Faults) {
    source(&sheet.descriptive, gaps);
    if sheet.r_ds_on_hot.is_none() {
        gaps.warn(
            "",
            "gives no r_ds_on_hot: 1.5 at 125 °C is assumed",
            "add `r_ds_on_hot: {t_j: 150 °C, ratio: 1.7}`",
        );
    }
    if sheet.q_gs2_is_estimated() {
        gaps.warn(
            "q_gs",
            "gives no q_gs2: its share after the threshold is estimated from threshold and plateau",
            "add `q_gs2`, `q_g_th` or `q_sw` from the gate charge curve",
        );
    }
    if sheet.r_g.is_none() {
        gaps.warn("", "gives no r_g: 1 Ω is assumed", "add `r_g`, the internal gate resistance");
    }
    if sheet.q_oss.is_none() && sheet.c_oss.is_none() {
        gaps.warn("", "gives neither q_oss nor c_oss: output charge is not modelled", "add `q_oss`");
    }
    if sheet.q_rr.is_none() {
        gaps.warn("", "gives no q_rr: recovery of the body diode is not modelled", "add `q_rr`");
    }
    at_ambient(sheet.r_th_ja.as_ref(), gaps);
}

/// Gaps of a diode.
pub(crate) fn diode(sheet: &DiodeSheet, gaps: &mut Faults) {
    source(&sheet.descriptive, gaps);
    match sheet.i_r.len() {
        0 => gaps.warn("", "gives no i_r: leakage is not modelled", "add `i_r`, best at two temperatures"),
        1 => gaps.warn(
            "i_r",
            "gives one point: a doubling per 10 K is assumed",
            "add a point at another temperature",
        ),
        _ => {}
    }
    if sheet.q_c.is_none() && sheet.c_j.is_none() {
        gaps.warn("", "gives neither q_c nor c_j: its share of output charge is not modelled", "add `q_c`");
    }
    at_ambient(sheet.r_th_ja.as_ref(), gaps);
}

/// Gaps of an inductor.
pub(crate) fn inductor(sheet: &InductorSheet, gaps: &mut Faults) {
    source(&sheet.descriptive, gaps);
    if sheet.core.is_none() && sheet.core_loss.is_empty() {
        gaps.warn("", "gives no core data: core loss is not modelled", "add `core` or `core_loss`");
    }
    if sheet.r_ac.is_none() {
        gaps.warn(
            "",
            "gives no r_ac: AC winding loss is not modelled",
            "add `r_ac: {frequency: 500 kHz, r: 60 mΩ}`",
        );
    }
}

/// Gaps of a capacitor.
pub(crate) fn capacitor(sheet: &CapacitorSheet, gaps: &mut Faults) {
    source(&sheet.descriptive, gaps);
}

/// Gaps of a controller.
pub(crate) fn controller(sheet: &ControllerSheet, gaps: &mut Faults) {
    source(&sheet.descriptive, gaps);
    let drivers = [("high_side", Some(&sheet.high_side)), ("low_side", sheet.low_side.as_ref())];
    for (name, driver) in drivers {
        if driver.is_some_and(|driver| driver.is_estimated()) {
            gaps.warn(
                name,
                "is stated by peak currents: its resistances are estimated as v_drive / i",
                "give r_source and r_sink when the data sheet has them",
            );
        }
    }
}

/// Gaps of a linear regulator.
pub(crate) fn linear_regulator(sheet: &LinearRegulatorSheet, gaps: &mut Faults) {
    source(&sheet.descriptive, gaps);
    at_ambient(sheet.r_th_ja.as_ref(), gaps);
}
