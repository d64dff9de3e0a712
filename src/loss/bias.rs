//! Bias: what the controller draws without switching (E42).

use crate::waveform::{Mode, Waveform};

/// Bias loss and what it is made of.
#[derive(Clone, Copy, Debug, Default, PartialEq)]
pub struct Bias {
    /// Mean supply current, A.
    pub current: f64,
    /// V_i current, W.
    pub watts: f64,
}

/// V_i I_q, or V_i (I_sleep + (I_q - I_sleep) f_e/f) while pulses are skipped (E42).
///
/// I_q is the non-switching value of the data sheet; the switching one would count the gate charge twice.
#[inline(always)]
pub fn bias(waveform: &Waveform, v_in: f64, i_q: f64, i_q_sleep: Option<f64>) -> Bias {
    let current = match (waveform.mode, i_q_sleep) {
        (Mode::PulseSkipping, Some(sleep)) => sleep + (i_q - sleep) * waveform.frequency / waveform.clock,
        _ => i_q,
    };
    Bias { current, watts: v_in * current }
}
