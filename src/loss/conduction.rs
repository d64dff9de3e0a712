//! Conduction: current through channels (E12) and through a freewheel diode (E26).

use crate::near::at_least;
use crate::parts::diode::Diode;
use crate::waveform::{Waveform, ramp_mean_square};

/// Channel conduction and what it is made of.
#[derive(Clone, Copy, Debug, Default, PartialEq)]
pub struct Channel {
    /// Share of the period in which the channel conducts.
    pub share: f64,
    /// Mean square of the current while it conducts, A².
    pub mean_square: f64,
    /// Resistance of all devices, hot, Ω.
    pub resistance: f64,
    /// share · mean_square · resistance, W.
    pub watts: f64,
}

impl Channel {
    #[inline(always)]
    fn of(share: f64, mean_square: f64, resistance: f64) -> Self {
        Channel { share, mean_square, resistance, watts: share * mean_square * resistance }
    }
}

/// High side: D m R(T_j)/n, with the mean square m of the ramp between valley and peak (E12).
///
/// Source: RMS of a ramp; the mean square, not the squared mean.
#[inline(always)]
pub fn high_side(waveform: &Waveform, resistance: f64) -> Channel {
    Channel::of(waveform.duty, waveform.mean_square, resistance)
}

/// Low side: the falling ramp without its two dead-time ends, times R(T_j)/n (E12).
///
/// `i_after` is the current at the end of the first dead time, `i_before` that at the start of the second; `t_1` and
/// `t_2` are the dead times in s. Source: derived; with the whole ramp the low side is up to 8 % off at large ripple.
#[inline(always)]
pub fn low_side(waveform: &Waveform, ends: DeadTimeEnds, t_1: f64, t_2: f64, resistance: f64) -> Channel {
    let dead = if waveform.is_continuous() { t_1 + t_2 } else { t_1 };
    let share = at_least(0.0, waveform.off_duty - dead * waveform.frequency);
    Channel::of(share, ramp_mean_square(ends.i_after, ends.i_before), resistance)
}

/// Currents at the inner ends of the two dead times, A.
#[derive(Clone, Copy, Debug, Default, PartialEq)]
pub struct DeadTimeEnds {
    /// I_a at the end of the first one.
    pub i_after: f64,
    /// I_b at the start of the second one; 0 when the rectifier blocks before.
    pub i_before: f64,
}

impl DeadTimeEnds {
    /// I_a = I_p - s t_1, I_b = I_v + s t_2 with the falling slope s; discontinuous: I_b = 0 (E12).
    #[inline(always)]
    pub fn of(waveform: &Waveform, t_1: f64, t_2: f64) -> Self {
        let slope = waveform.falling_slope;
        if waveform.is_continuous() {
            DeadTimeEnds { i_after: waveform.peak - slope * t_1, i_before: waveform.valley + slope * t_2 }
        } else {
            DeadTimeEnds { i_after: at_least(0.0, waveform.peak - slope * t_1), i_before: 0.0 }
        }
    }
}

/// Diode conduction and what it is made of.
#[derive(Clone, Copy, Debug, Default, PartialEq)]
pub struct Forward {
    /// D2.
    pub share: f64,
    /// Mean of i V_f(i/n, T_j) over the ramp, W.
    pub mean_power: f64,
    /// share · mean_power, W.
    pub watts: f64,
}

/// Nodes and weights of the three-point Gauss-Legendre rule on (0, 1).
const GAUSS: [(f64, f64); 3] =
    [(0.112_701_665_379_258_3, 5.0 / 18.0), (0.5, 8.0 / 18.0), (0.887_298_334_620_741_7, 5.0 / 18.0)];

/// Freewheel diode: D2 times the mean of i V_f(i/n, T_j) over the ramp (E26).
///
/// Three-point Gauss-Legendre; exact for a threshold-plus-slope law V_T0 I_avg + r_d I_rms² (ST data sheets).
#[inline(always)]
pub fn freewheel_diode(waveform: &Waveform, diode: &Diode, t_j: f64) -> Forward {
    let mut mean_power = 0.0;
    for (place, weight) in GAUSS {
        let i = waveform.valley + place * (waveform.peak - waveform.valley);
        mean_power += weight * i * diode.forward_voltage(i, t_j);
    }
    Forward { share: waveform.off_duty, mean_power, watts: waveform.off_duty * mean_power }
}
