//! What a derivation of a switched stage is made from: the model's own terms at the settled temperatures.

use crate::fitted::Nodes;
use crate::model::{Heated, Prepared, Unheated};
use crate::stage::SwitchedSheet;
use crate::waveform::{Mode, Waveform};

/// A switched stage at one point with everything the model computed there.
pub(super) struct Case<'a> {
    pub(super) sheet: &'a SwitchedSheet,
    pub(super) prepared: &'a Prepared<'a>,
    pub(super) heated: &'a Heated,
    pub(super) unheated: &'a Unheated,
    pub(super) nodes: &'a Nodes,
}

impl Case<'_> {
    pub(super) fn waveform(&self) -> &Waveform {
        &self.heated.waveform
    }

    pub(super) fn continuous(&self) -> bool {
        self.waveform().is_continuous()
    }

    /// Symbol of the pulses per second: the clock, unless pulses are skipped.
    pub(super) fn f(&self) -> &'static str {
        if self.waveform().mode == Mode::PulseSkipping { "f_e" } else { "f_SW" }
    }

    pub(super) fn v_in(&self) -> f64 {
        self.prepared.point.input_voltage
    }
}
