//! Dead time: the inductor current flows in a diode while both switches are off (E19, E17).

use crate::loss::conduction::DeadTimeEnds;
use crate::near::at_least;
use crate::waveform::Waveform;

/// Dead-time loss and what it is made of.
#[derive(Clone, Copy, Debug, Default, PartialEq)]
pub struct DeadTime {
    /// Diode time after high-side turn-off, less the node's transit, s.
    pub t_after: f64,
    /// Mean current in it, A.
    pub i_after: f64,
    /// Diode drop there, V.
    pub v_after: f64,
    /// Diode time before high-side turn-on, s; 0 when the rectifier has blocked.
    pub t_before: f64,
    /// Mean current in it, A.
    pub i_before: f64,
    /// Diode drop there, V.
    pub v_before: f64,
    /// f_e (t I V + t I V), W.
    pub watts: f64,
}

/// f_e (max(t_1 - Q_node/I_p, 0) I_1 V_sd(I_1) + t_2 I_2 V_sd(I_2)) with the mean currents of the two intervals (E19).
///
/// `drop` gives the diode's voltage in V at a current in A of all devices. Source: ISL6314 data sheet eq. 22, which uses
/// peak and valley; the mean currents and the node's transit are derived.
#[inline(always)]
pub fn rectifier(
    waveform: &Waveform,
    ends: DeadTimeEnds,
    [t_1, t_2]: [f64; 2],
    node_charge: f64,
    drop: impl Fn(f64) -> f64,
) -> DeadTime {
    let transit = if waveform.peak > 0.0 { node_charge / waveform.peak } else { f64::INFINITY };
    let t_after = at_least(0.0, t_1 - transit);
    let i_after = at_least(0.0, 0.5 * (waveform.peak + ends.i_after));
    let v_after = drop(i_after);
    let (t_before, i_before) = if waveform.is_continuous() {
        (t_2, at_least(0.0, 0.5 * (waveform.valley + ends.i_before)))
    } else {
        (0.0, 0.0)
    };
    let v_before = drop(i_before);
    let watts = waveform.frequency * (t_after * i_after * v_after + t_before * i_before * v_before);
    DeadTime { t_after, i_after, v_after, t_before, i_before, v_before, watts }
}

/// Dead-time loss in the high side's body diode and what it is made of.
#[derive(Clone, Copy, Debug, Default, PartialEq)]
pub struct HighSideDeadTime {
    /// |I_v|, A.
    pub current: f64,
    /// Body diode drop there, V.
    pub v_sd: f64,
    /// What the node's rise leaves of the dead time, s.
    pub time: f64,
    /// |I_v| V_sd time f, W.
    pub watts: f64,
}

/// Negative valley: once the node has risen the current flows in the high side's body diode,
/// |I_v| V_sd max(t_2 - Q_node/|I_v|, 0) f (E17). Derived.
#[inline(always)]
pub fn high_side(current: f64, v_sd: f64, t_2: f64, node_charge: f64, frequency: f64) -> HighSideDeadTime {
    let time = at_least(0.0, t_2 - node_charge / current);
    HighSideDeadTime { current, v_sd, time, watts: current * v_sd * time * frequency }
}
