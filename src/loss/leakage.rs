//! Reverse leakage of a diode (E27).

use crate::near;
use crate::parts::diode::Diode;
use crate::waveform::Waveform;

/// Leakage loss and what it is made of.
#[derive(Clone, Copy, Debug, Default, PartialEq)]
pub struct Leakage {
    /// Leakage of one device at the input voltage, A.
    pub at_input: f64,
    /// Leakage of one device at the output voltage, A; 0 when the node never rests there.
    pub at_output: f64,
    /// n (D1 V_i I_R(V_i) + (1 - D1 - D2) V_o I_R(V_o)), W.
    pub watts: f64,
}

/// A voltage and its logarithm.
#[derive(Clone, Copy, Debug, Default, PartialEq)]
pub struct ReverseVoltage {
    /// V
    pub volts: f64,
    /// ln of the volts.
    pub logarithm: f64,
}

impl ReverseVoltage {
    /// A voltage with its logarithm.
    pub fn of(volts: f64) -> Self {
        ReverseVoltage { volts, logarithm: volts.ln() }
    }
}

/// n (D1 V_i I_R(V_i, T_j) + (1 - D1 - D2) V_o I_R(V_o, T_j)) (E27), or `None` without leakage data.
///
/// Source: ln I_R linear in T between data-sheet points; AN869 (ST) gives a slope of 0.055 /K. Voltages in V, T_j in °C.
#[inline(always)]
pub fn leakage(
    waveform: &Waveform,
    diode: &Diode,
    [v_in, v_out]: [ReverseVoltage; 2],
    t_j: f64,
) -> Option<Leakage> {
    let law = diode.leakage.as_ref()?;
    let at_input = near::exp(law.ln_at(v_in.logarithm, t_j));
    let idle = if waveform.is_continuous() { 0.0 } else { waveform.idle_share() };
    let at_output = if idle > 0.0 { near::exp(law.ln_at(v_out.logarithm, t_j)) } else { 0.0 };
    let watts = diode.n * (waveform.duty * v_in.volts * at_input + idle * v_out.volts * at_output);
    Some(Leakage { at_input, at_output, watts })
}
