//! Winding: DC resistance with the whole RMS current (E31).

use crate::waveform::Waveform;

/// Winding loss and what it is made of.
#[derive(Clone, Copy, Debug, Default, PartialEq)]
pub struct Winding {
    /// Squared RMS current, A².
    pub mean_square: f64,
    /// Resistance of all parts, hot, Ω.
    pub resistance: f64,
    /// R(T) I_L,rms², W.
    pub watts: f64,
}

/// R(T) I_L,rms² (E31). `resistance` is the hot DC resistance in Ω.
#[inline(always)]
pub fn winding(waveform: &Waveform, resistance: f64) -> Winding {
    let mean_square = waveform.inductor_square();
    Winding { mean_square, resistance, watts: resistance * mean_square }
}
