//! Edges of the switch node (E13-E16c): plateau, edge times, node capacitance and its energy.

use crate::loss::gate_drive;
use crate::near::{self, at_least};
use crate::parts::controller::DriverLaw;
use crate::parts::junction::JunctionCharge;
use crate::parts::mosfet::Mosfet;

/// A MOSFET behind its driver.
#[derive(Clone, Copy, Debug, Default, PartialEq)]
pub struct GateLoop {
    /// Gate voltage while on, V.
    pub v_gate: f64,
    /// Driver and gate resistance while charging, Ω.
    pub r_on: f64,
    /// Driver and gate resistance while discharging, Ω.
    pub r_off: f64,
    /// Share of the gate power that heats the MOSFET (E21).
    pub own_share: f64,
}

impl GateLoop {
    /// Gate resistance of a MOSFET behind a driver, Ω, at a gate voltage, V.
    pub fn of(v_gate: f64, r_g: f64, driver: &DriverLaw) -> Self {
        let own_share = gate_drive::own_share(r_g, [driver.r_source, driver.r_sink]);
        GateLoop { v_gate, r_on: driver.r_source + r_g, r_off: driver.r_sink + r_g, own_share }
    }
}

/// The four edge times, s.
#[derive(Clone, Copy, Debug, Default, PartialEq)]
pub struct EdgeDurations {
    /// Current rise at turn-on.
    pub t_ri: f64,
    /// Voltage fall at turn-on.
    pub t_fv: f64,
    /// Voltage rise at turn-off.
    pub t_rv: f64,
    /// Current fall at turn-off.
    pub t_fi: f64,
}

/// Edge times of the high side that turns on at `i_on` (0 or more) and off at `i_off`, with Q_gd at the input voltage (E15).
///
/// t_ri = R_on C ln((V_dr - V_th)/(V_dr - V_pl)) + L_s I/(V_dr - (V_th + V_pl)/2), t_fv = Q_gd R_on/(V_dr - V_pl),
/// t_rv = Q_gd R_off/V_pl, t_fi = R_off C ln(V_pl/V_th) + L_s I/((V_th + V_pl)/2).
///
/// Source: gate-charge form of the voltage edges as in the FAN5236 data sheet, p. 16 eq. 19-20; the exact RC form of the current edges and the source
/// inductance are derived. Valid while V_dr exceeds the plateau.
#[inline(always)]
pub fn edge_durations(mosfet: &Mosfet, gate: &GateLoop, q_gd: f64, [i_on, i_off]: [f64; 2]) -> EdgeDurations {
    let given = &mosfet.edge_times;
    let per_overdrive = 1.0 / (gate.v_gate - mosfet.plateau(i_on));
    EdgeDurations {
        t_ri: given.t_ri.unwrap_or_else(|| current_rise(mosfet, gate, i_on, per_overdrive)),
        t_fv: given.t_fv.unwrap_or(q_gd * gate.r_on * per_overdrive),
        t_rv: given.t_rv.unwrap_or_else(|| q_gd * gate.r_off / mosfet.plateau(i_off)),
        t_fi: current_fall(mosfet, gate.r_off, i_off),
    }
}

#[inline(always)]
fn current_rise(mosfet: &Mosfet, gate: &GateLoop, current: f64, per_overdrive: f64) -> f64 {
    let (v_th, v_pl) = (mosfet.v_th, mosfet.plateau(current));
    let charging = gate.r_on * mosfet.gate_capacitance * near::ln((gate.v_gate - v_th) * per_overdrive);
    charging + inductive(mosfet, current, gate.v_gate - 0.5 * (v_th + v_pl))
}

/// Time that the common source inductance adds while the driver has `v` volts left for it, s.
#[inline(always)]
fn inductive(mosfet: &Mosfet, current: f64, v: f64) -> f64 {
    if mosfet.l_source > 0.0 { mosfet.l_source * current / v } else { 0.0 }
}

/// Time in which the channel current falls from `current` to zero, s (t_fi of E15), unless it was measured.
#[inline(always)]
pub fn current_fall(mosfet: &Mosfet, r_off: f64, current: f64) -> f64 {
    if let Some(given) = mosfet.edge_times.t_fi {
        return given;
    }
    let (v_th, v_pl) = (mosfet.v_th, mosfet.plateau(current));
    let discharging = r_off * mosfet.gate_capacitance * near::ln(v_pl * mosfet.per_threshold);
    discharging + inductive(mosfet, current, 0.5 * (v_th + v_pl))
}

/// Capacitance of the switch node: that of the high side and that of whatever is between the node and ground.
#[derive(Clone, Copy, Debug, Default, PartialEq)]
pub struct NodeCapacitance {
    /// Q_oss of the high side.
    pub high_side: JunctionCharge,
    /// Q_oss of the low side or Q_c of the diode, plus that of a parallel Schottky.
    pub rectifier: JunctionCharge,
}

impl NodeCapacitance {
    /// Q_node = a + b: charge to move the node between ground and the input, C.
    #[inline(always)]
    pub fn total_charge(&self, v_in: f64) -> f64 {
        self.rectifier.charge(v_in) + self.high_side.charge(v_in)
    }

    /// Energy met by the high side when the node stands at `v_node` just before turn-on, J (E16).
    ///
    /// E = E_h(V_i - v) + V_i (Q_r(V_i) - Q_r(v)) - (E_r(V_i) - E_r(v)). Derived; two equal devices from v = 0 give
    /// V_i Q_oss. Valid for a hard turn-on; zero once the inductor has carried the node to V_i.
    #[inline(always)]
    pub fn capacitive_energy(&self, v_in: f64, v_node: f64) -> f64 {
        // the high side's own stored energy
        let own = self.high_side.energy(v_in - v_node);
        // the rest of the node is charged from the input through the channel
        let charge = self.rectifier.charge(v_in) - self.rectifier.charge(v_node);
        let stored = self.rectifier.energy(v_in) - self.rectifier.energy(v_node);
        own + v_in * charge - stored
    }

    /// Node voltage to which a charge `moved` lifts it from ground, V (E16); exact for C ~ v^-1/2.
    pub fn lifted(&self, v_in: f64, moved: f64) -> f64 {
        let (a, b) = (self.rectifier.charge(v_in), self.high_side.charge(v_in));
        v_in * sine_of_swing(a, b, moved).powi(2)
    }

    /// Node voltage to which a charge `moved` lowers it from the input, V (E16c).
    pub fn lowered(&self, v_in: f64, moved: f64) -> f64 {
        let (a, b) = (self.rectifier.charge(v_in), self.high_side.charge(v_in));
        let sine = sine_of_swing(b, a, moved);
        v_in * (1.0 - sine * sine)
    }

    /// Energy burnt by the low side that turns on while the node is still at `v_node`, J (E16c).
    pub fn early_turn_on_energy(&self, v_in: f64, v_node: f64) -> f64 {
        let (charge, stored) = self.high_side_swing(v_in, v_node);
        self.rectifier.energy(v_node) + v_in * charge - stored
    }

    /// Energy that rings out when the idle node settles at `v_node`, J (E16b).
    pub fn ringing_energy(&self, v_in: f64, v_node: f64) -> f64 {
        let (charge, stored) = self.high_side_swing(v_in, v_node);
        let from_output = v_node * (self.rectifier.charge(v_node) + charge);
        from_output - v_in * charge - self.rectifier.energy(v_node) + stored
    }

    /// Charge and energy by which the high side's capacitance changes between the node at ground and at `v_node`.
    fn high_side_swing(&self, v_in: f64, v_node: f64) -> (f64, f64) {
        let above = v_in - v_node;
        (
            self.high_side.charge(v_in) - self.high_side.charge(above),
            self.high_side.energy(v_in) - self.high_side.energy(above),
        )
    }
}

/// sin θ with θ = asin((x (a + b) - b)/√(a² + b²)) + atan2(b, a) and x = min(1, moved/(a + b)).
#[inline(always)]
fn sine_of_swing(a: f64, b: f64, moved: f64) -> f64 {
    let hypotenuse = (a * a + b * b).sqrt();
    if moved >= a + b || hypotenuse == 0.0 {
        return 1.0;
    }
    // addition theorem: no angle is needed
    let sine = (moved - b) / hypotenuse;
    let cosine = at_least(0.0, 1.0 - sine * sine).sqrt();
    (sine * a + cosine * b) / hypotenuse
}

#[cfg(test)]
mod tests {
    use super::*;

    fn node() -> NodeCapacitance {
        NodeCapacitance {
            high_side: JunctionCharge::from_charge(16e-9, 20.0),
            rectifier: JunctionCharge::from_charge(31e-9, 20.0),
        }
    }

    #[test]
    fn equal_devices_burn_the_input_voltage_times_their_charge() {
        // charge form printed with IRF7832: V_IN Q_oss, here with one Q_oss a device
        let q = JunctionCharge::from_charge(16e-9, 20.0);
        let node = NodeCapacitance { high_side: q, rectifier: q };
        assert!((node.capacitive_energy(24.0, 0.0) / (24.0 * q.charge(24.0)) - 1.0).abs() < 1e-12);
        assert_eq!(node.capacitive_energy(24.0, 24.0), 0.0);
    }

    #[test]
    fn swings_move_just_the_charge_given() {
        // definition of the swing: what the rectifier gains and the high side loses is the charge moved
        let (node, v_in) = (node(), 24.0);
        for share in [0.05, 0.3, 0.5, 0.8, 0.99] {
            let moved = share * node.total_charge(v_in);
            let v = node.lifted(v_in, moved);
            let up = node.rectifier.charge(v) + node.high_side.charge(v_in) - node.high_side.charge(v_in - v);
            assert!((up / moved - 1.0).abs() < 1e-9, "up {share}: {up} of {moved}");
            let v = node.lowered(v_in, moved);
            let down =
                node.high_side.charge(v_in - v) + node.rectifier.charge(v_in) - node.rectifier.charge(v);
            assert!((down / moved - 1.0).abs() < 1e-9, "down {share}: {down} of {moved}");
        }
        assert_eq!(node.lifted(v_in, 1.0), v_in);
        assert_eq!(node.lowered(v_in, 1.0), 0.0);
        assert!(node.lifted(v_in, 0.0).abs() < 1e-12);
    }
}
