//! Gaps: what a data sheet leaves open, and what the model does instead. `check` warns of them, answers list the
//! assumptions among them beside their numbers.

use crate::sheet::common::Descriptive;
use crate::sheet::mosfet::Recovery;
use crate::sheet::{
    CapacitorSheet, ControllerSheet, Datum, DiodeSheet, InductorSheet, LinearRegulatorSheet, MosfetSheet,
};

/// Something that a data sheet leaves open.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub struct Gap {
    /// Kind of the finding: `r_g_assumed`.
    pub kind: &'static str,
    /// What follows from it.
    pub effect: Effect,
    /// The key to point at; empty when the whole part is meant.
    pub key: &'static str,
    /// In words: "no r_g: 1 Ω is assumed".
    pub text: &'static str,
    /// The way out.
    pub hint: &'static str,
}

/// Kind of the gap that matters only for a diode that recovers in its stage.
pub const RECOVERY_EXPONENT: &str = "recovery_exponent_assumed";

/// What follows from a gap.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Effect {
    /// A value is assumed or estimated.
    Assumed,
    /// A mechanism is not modelled.
    NotModelled,
    /// Nobody can check the values.
    NoSource,
}

/// A data sheet that knows its gaps.
pub trait Gaps {
    /// What it leaves open.
    fn gaps(&self) -> Vec<Gap>;
}

/// Collects the gaps that are there.
#[derive(Default)]
struct Found(Vec<Gap>);

impl Found {
    fn assumed(&mut self, is: bool, kind: &'static str, key: &'static str, words: [&'static str; 2]) {
        self.add(is, Gap { kind, effect: Effect::Assumed, key, text: words[0], hint: words[1] });
    }

    fn not_modelled(&mut self, is: bool, kind: &'static str, words: [&'static str; 2]) {
        self.add(is, Gap { kind, effect: Effect::NotModelled, key: "", text: words[0], hint: words[1] });
    }

    fn add(&mut self, is: bool, gap: Gap) {
        if is {
            self.0.push(gap);
        }
    }

    fn source(&mut self, descriptive: &Descriptive) {
        let silent = descriptive.source.as_ref().is_none_or(|source| source.trim().is_empty());
        let (text, hint) = ("no source is given", "add `source:` so that others can check the values");
        self.add(silent, Gap { kind: "no_source", effect: Effect::NoSource, key: "", text, hint });
    }

    fn thermal_resistance(&mut self, r_th_ja: Option<&Datum>) {
        let words = ["no r_th_ja: the part stays at ambient temperature", "add `r_th_ja` on your board"];
        self.assumed(r_th_ja.is_none(), "at_ambient", "", words);
    }

    fn recovery_exponent(&mut self, recovery: Option<&Recovery>) {
        let silent = recovery.is_some_and(|recovery| recovery.exponent.is_none());
        let words = [
            "no exponent of q_rr: 0.5 is assumed",
            "add `exponent:` when you know how q_rr grows with current",
        ];
        self.assumed(silent, RECOVERY_EXPONENT, "q_rr", words);
    }
}

impl Gaps for MosfetSheet {
    fn gaps(&self) -> Vec<Gap> {
        let mut found = Found::default();
        found.source(&self.descriptive);
        let words =
            ["no r_ds_on_hot: 1.5 at 125 °C is assumed", "add `r_ds_on_hot: {t_j: 150 °C, ratio: 1.7}`"];
        found.assumed(self.r_ds_on_hot.is_none(), "hot_ratio_assumed", "", words);
        let words = [
            "no q_gs2: q_gs (1 - v_gs_th/v_gs_plateau) is estimated",
            "add `q_gs2`, `q_g_th` or `q_sw` from the gate charge curve",
        ];
        found.assumed(self.q_gs2_is_estimated(), "q_gs2_estimated", "q_gs", words);
        let words = ["no r_g: 1 Ω is assumed", "add `r_g`, the internal gate resistance"];
        found.assumed(self.r_g.is_none(), "r_g_assumed", "", words);
        let words = [
            "no l_source: 0 nH of common-source inductance is assumed",
            "add `l_source`, 0 nH where it is negligible",
        ];
        found.assumed(self.l_source.is_none(), "l_source_assumed", "", words);
        let words = ["neither q_oss nor c_oss: output charge is not modelled", "add `q_oss`"];
        found.not_modelled(self.q_oss.is_none() && self.c_oss.is_none(), "no_q_oss", words);
        let words = ["no q_rr: recovery of the body diode is not modelled", "add `q_rr`"];
        found.not_modelled(self.q_rr.is_none(), "no_q_rr", words);
        found.recovery_exponent(self.q_rr.as_ref());
        found.thermal_resistance(self.r_th_ja.as_ref());
        found.0
    }
}

impl Gaps for DiodeSheet {
    fn gaps(&self) -> Vec<Gap> {
        let mut found = Found::default();
        found.source(&self.descriptive);
        let words = ["one temperature only: no drift of v_f", "add the points at a hot junction"];
        found.assumed(self.v_f.len() < 2, "v_f_without_drift", "v_f", words);
        let first = self.i_r.first().map(|point| point.t_j.value);
        let one_temperature =
            first.is_some_and(|first| self.i_r.iter().all(|point| point.t_j.value == first));
        let words =
            ["one temperature only: a doubling per 10 K is assumed", "add a point at another temperature"];
        found.assumed(one_temperature, "leakage_slope_assumed", "i_r", words);
        let words = ["no i_r: leakage is not modelled", "add `i_r`, best at two temperatures"];
        found.not_modelled(self.i_r.is_empty(), "no_i_r", words);
        let words = ["neither q_c nor c_j: its share of output charge is not modelled", "add `q_c`"];
        found.not_modelled(self.q_c.is_none() && self.c_j.is_none(), "no_q_c", words);
        found.recovery_exponent(self.q_rr.as_ref());
        found.thermal_resistance(self.r_th_ja.as_ref());
        found.0
    }
}

impl Gaps for InductorSheet {
    fn gaps(&self) -> Vec<Gap> {
        let mut found = Found::default();
        found.source(&self.descriptive);
        let words = ["no core data: core loss is not modelled", "add `core` or `core_loss`"];
        found.not_modelled(self.core.is_none() && self.core_loss.is_empty(), "no_core", words);
        let words =
            ["no r_ac: AC winding loss is not modelled", "add `r_ac: {frequency: 500 kHz, r: 60 mΩ}`"];
        found.not_modelled(self.r_ac.is_none(), "no_r_ac", words);
        found.0
    }
}

impl Gaps for CapacitorSheet {
    fn gaps(&self) -> Vec<Gap> {
        let mut found = Found::default();
        found.source(&self.descriptive);
        found.0
    }
}

/// Words for a driver that is stated by its peak currents.
const DRIVER: [&str; 2] = [
    "stated by peak currents: its resistances are estimated as v_drive / i",
    "give r_source and r_sink when the data sheet has them",
];

impl Gaps for ControllerSheet {
    fn gaps(&self) -> Vec<Gap> {
        let mut found = Found::default();
        found.source(&self.descriptive);
        found.assumed(self.high_side.is_estimated(), "driver_estimated", "high_side", DRIVER);
        let words = ["no v_boot_drop: 0 V is assumed", "add `v_boot_drop`, the drop of the bootstrap path"];
        found.assumed(self.v_boot_drop.is_none(), "v_boot_drop_assumed", "", words);
        let words = ["no t_on_min: no limit is assumed", "add `t_on_min`, the shortest on-time"];
        found.assumed(self.t_on_min.is_none(), "t_on_min_assumed", "", words);
        let words = ["no t_off_min: no limit is assumed", "add `t_off_min`, the shortest off-time"];
        found.assumed(self.t_off_min.is_none(), "t_off_min_assumed", "", words);
        let low_side = self.low_side.as_ref().is_some_and(|driver| driver.is_estimated());
        found.assumed(low_side, "driver_estimated", "low_side", DRIVER);
        found.0
    }
}

impl Gaps for LinearRegulatorSheet {
    fn gaps(&self) -> Vec<Gap> {
        let mut found = Found::default();
        found.source(&self.descriptive);
        found.thermal_resistance(self.r_th_ja.as_ref());
        found.0
    }
}
