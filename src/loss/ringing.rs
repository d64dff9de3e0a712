//! Ringing: the idle node of discontinuous mode rings out into the winding (E16b).

use crate::edges::NodeCapacitance;
use crate::near::at_least;

/// Ringing loss and what it is made of.
#[derive(Clone, Copy, Debug, Default, PartialEq)]
pub struct Ringing {
    /// Voltage at which the node settles, V.
    pub v_node: f64,
    /// Energy a cycle, J.
    pub energy: f64,
    /// energy · f_e, W.
    pub watts: f64,
}

/// E_ring f_e with the node settling at `v_node` (E16b); for linear capacitances ½ (C_h + C_r) v². Derived.
#[inline(always)]
pub fn ringing(node: &NodeCapacitance, v_in: f64, v_node: f64, frequency: f64) -> Ringing {
    let energy = at_least(0.0, node.ringing_energy(v_in, v_node));
    Ringing { v_node, energy, watts: energy * frequency }
}
