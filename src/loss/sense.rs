//! Sense resistor in series with the inductor (E41).

use crate::waveform::Waveform;

/// Loss of the sense resistor and what it is made of.
#[derive(Clone, Copy, Debug, Default, PartialEq)]
pub struct Sense {
    /// Squared RMS current, A².
    pub mean_square: f64,
    /// Resistance, hot, Ω.
    pub resistance: f64,
    /// Their product, W.
    pub watts: f64,
}

/// I_L,rms² R_sense (E41). `resistance` hot, in Ω.
#[inline(always)]
pub fn sense(waveform: &Waveform, resistance: f64) -> Sense {
    let mean_square = waveform.inductor_square();
    Sense { mean_square, resistance, watts: mean_square * resistance }
}
