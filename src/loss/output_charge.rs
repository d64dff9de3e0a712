//! Output charge: energy of the node capacitance that a switch burns when it turns on (E16, E16c).

use crate::edges::NodeCapacitance;
use crate::waveform::Waveform;

/// Energy of the node burnt by one switch and what it is made of.
#[derive(Clone, Copy, Debug, Default, PartialEq)]
pub struct OutputCharge {
    /// Node voltage just before turn-on, V.
    pub v_node: f64,
    /// Energy met, J.
    pub energy: f64,
    /// energy · f_e, W.
    pub watts: f64,
}

/// Node voltage just before the high side turns on, V (E16).
///
/// Continuous: 0, or lifted by a negative valley during the dead time `t_2`. Discontinuous: the node swings towards the
/// output voltage and rings out, w V_o with w = min(1, t_idle/t_q), t_q = π/2 √(L Q_node/V_i). Source: derived.
pub fn voltage_before_turn_on(
    waveform: &Waveform,
    node: &NodeCapacitance,
    v_in: f64,
    v_out: f64,
    t_2: f64,
) -> f64 {
    if waveform.is_continuous() {
        if waveform.valley < 0.0 { node.lifted(v_in, -waveform.valley * t_2) } else { 0.0 }
    } else {
        idle_voltage(waveform, node, v_in, v_out)
    }
}

/// Voltage to which the idle node of discontinuous mode has swung, w V_o, V (E16).
pub fn idle_voltage(waveform: &Waveform, node: &NodeCapacitance, v_in: f64, v_out: f64) -> f64 {
    let quarter_swing =
        std::f64::consts::FRAC_PI_2 * (waveform.inductance * node.total_charge(v_in) / v_in).sqrt();
    // compared in shares of the period: at 0 A the period is infinite
    let needed = quarter_swing * waveform.frequency;
    let idle = waveform.idle_share();
    let swing = if idle >= needed { 1.0 } else { idle / needed };
    swing * v_out.min(v_in)
}

/// High side: E_cap(v_node) f_e (E16).
#[inline]
pub fn high_side(node: &NodeCapacitance, v_in: f64, v_node: f64, frequency: f64) -> OutputCharge {
    let energy = node.capacitive_energy(v_in, v_node).max(0.0);
    OutputCharge { v_node, energy, watts: energy * frequency }
}

/// Low side turned on before the node has fallen, when I_p t_1 < Q_node (E16c). Zero with adaptive dead time.
///
/// Source: derived. `moved` is the charge I_p t_1 that the inductor takes from the node in the first dead time.
#[inline]
pub fn low_side(node: &NodeCapacitance, v_in: f64, moved: f64, frequency: f64) -> OutputCharge {
    if moved >= node.total_charge(v_in) {
        return OutputCharge::default();
    }
    let v_node = node.lowered(v_in, moved);
    let energy = node.early_turn_on_energy(v_in, v_node).max(0.0);
    OutputCharge { v_node, energy, watts: energy * frequency }
}
