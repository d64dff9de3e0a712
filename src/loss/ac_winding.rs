//! AC winding: what the ripple adds because the winding's resistance grows with frequency (E31).

use crate::waveform::Waveform;

/// AC winding loss and what it is made of.
#[derive(Clone, Copy, Debug, Default, PartialEq)]
pub struct AcWinding {
    /// Squared RMS of the ripple, A².
    pub ripple_square: f64,
    /// R_ac(f) - R_dc, hot, Ω.
    pub excess_resistance: f64,
    /// Their product, W.
    pub watts: f64,
}

/// (I_L,rms² - I²)(R_ac(f) - R_dc), not below 0 (E31). `excess_resistance` hot, in Ω.
///
/// R_ac(f) = R_ac,ref √(f/f_ref) by skin effect, at the clock's frequency: while skipping the pulses keep their width.
#[inline(always)]
pub fn ac_winding(waveform: &Waveform, load: f64, excess_resistance: f64) -> AcWinding {
    let ripple_square = waveform.output_capacitor_square(load);
    AcWinding { ripple_square, excess_resistance, watts: ripple_square * excess_resistance }
}
