//! Output charge: energy of the node capacitance that a switch burns when it turns on (E16, E16c).

use crate::edges::NodeCapacitance;
use crate::near::at_least;
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
/// output voltage and rings out. Source: derived.
#[inline(always)]
pub fn voltage_before_turn_on(
    waveform: &Waveform,
    node: &NodeCapacitance,
    v_in: f64,
    t_2: f64,
    swing: IdleSwing,
) -> f64 {
    if !waveform.is_continuous() {
        swing.voltage(waveform)
    } else if waveform.valley < 0.0 {
        node.lifted(v_in, -waveform.valley * t_2)
    } else {
        0.0
    }
}

/// How the idle node of discontinuous mode swings (E16).
#[derive(Clone, Copy, Debug, Default, PartialEq)]
pub struct IdleSwing {
    /// t_q = π/2 √(L Q_node/V_i), s.
    pub quarter: f64,
    /// Where the whole swing ends: V_o, V.
    pub v_end: f64,
}

impl IdleSwing {
    /// From the inductance (H) and the charge of the node (C).
    pub fn of(inductance: f64, node_charge: f64, v_in: f64, v_out: f64) -> Self {
        let quarter = std::f64::consts::FRAC_PI_2 * (inductance * node_charge / v_in).sqrt();
        IdleSwing { quarter, v_end: v_out.min(v_in) }
    }

    /// Voltage to which the node has swung, w V_o with w = min(1, t_idle/t_q), V.
    #[inline(always)]
    pub fn voltage(self, waveform: &Waveform) -> f64 {
        // compared in shares of the period: at 0 A the period is infinite
        let needed = self.quarter * waveform.frequency;
        let idle = waveform.idle_share();
        let swing = if idle >= needed { 1.0 } else { idle / needed };
        swing * self.v_end
    }
}

/// High side: E_cap(v_node) f_e (E16), with the energy met at the node's voltage in J.
#[inline(always)]
pub fn high_side(energy: f64, v_node: f64, frequency: f64) -> OutputCharge {
    let energy = at_least(0.0, energy);
    OutputCharge { v_node, energy, watts: energy * frequency }
}

/// Low side turned on before the node has fallen, when I_p t_1 < Q_node (E16c). Zero beyond, and with adaptive dead time.
///
/// Source: derived. `moved` is the charge I_p t_1 that the inductor takes from the node in the first dead time.
pub fn low_side(node: &NodeCapacitance, v_in: f64, moved: f64, frequency: f64) -> OutputCharge {
    let v_node = node.lowered(v_in, moved);
    let energy = at_least(0.0, node.early_turn_on_energy(v_in, v_node));
    OutputCharge { v_node, energy, watts: energy * frequency }
}
