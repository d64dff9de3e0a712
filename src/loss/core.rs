//! Core loss of the inductor (E32-E34).

use crate::parts::core::CoreLaw;
use crate::waveform::{Mode, Waveform};

/// Core loss and what it is made of.
#[derive(Clone, Copy, Debug, Default, PartialEq)]
pub struct Core {
    /// Volt-seconds of the rising slope, V s.
    pub volt_seconds: f64,
    /// Flux swing in T, or for maker's points the ripple in A with the unsaturated inductance.
    pub swing: f64,
    /// D1^(1-α) + D2^(1-α); 0 with a material table.
    pub duty_factor: f64,
    /// Loss of all parts, W.
    pub watts: f64,
}

/// Core loss of n inductors in parallel (E32, E33, E34).
///
/// P = n K (s λ)^β f_e^α (D1^(1-α) + D2^(1-α)), λ = V_on D1/f_e = L dI; iGSE (Venkatachalam et al., COMPEL 2002) in closed form
/// for a triangle. `at_clock` is f^α, which holds unless pulses are skipped. With a material table the composite waveform hypothesis (Sullivan et al. 2010, from memory). Zero at 0 A in discontinuous mode.
#[inline(always)]
pub fn core(waveform: &Waveform, law: &CoreLaw, n: f64, at_clock: f64) -> Core {
    if waveform.frequency <= 0.0 || waveform.duty <= 0.0 {
        return Core::default();
    }
    let volt_seconds = waveform.inductance * waveform.ripple();
    match law {
        CoreLaw::Power(law) => {
            let swing = law.per_volt_second * volt_seconds;
            let duty_factor = law.of_duty.at(waveform.duty) + law.of_duty.at(waveform.off_duty);
            let of_frequency = match waveform.mode {
                Mode::PulseSkipping => law.of_frequency.at(waveform.frequency),
                _ => at_clock,
            };
            let density = law.of_swing.at(swing) * of_frequency;
            Core { volt_seconds, swing, duty_factor, watts: n * law.k * density * duty_factor }
        }
        CoreLaw::Material(law) => {
            let swing = law.per_volt_second * volt_seconds;
            let duties = [waveform.duty, waveform.off_duty];
            Core {
                volt_seconds,
                swing,
                duty_factor: 0.0,
                watts: n * law.watts(swing, waveform.frequency, duties),
            }
        }
    }
}
