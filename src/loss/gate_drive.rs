//! Gate drive: charging and discharging the gates (E20, E21).

use crate::edges::GateLoop;
use crate::near::at_least;

/// Gate power of one switch and where it is burnt.
#[derive(Clone, Copy, Debug, Default, PartialEq)]
pub struct GatePower {
    /// Gate charge of all devices a cycle, C.
    pub charge: f64,
    /// Gate voltage, V.
    pub v_gate: f64,
    /// Share of Q V_dr that heats the switch itself: mean of r_g/(r_g + r_driver) for charging and discharging.
    pub own_share: f64,
    /// f_e Q V_dr own_share, W, booked to the switch.
    pub watts: f64,
}

/// What one gate costs inside its MOSFET (E21). `charge` in C; `frequency` is f_e in Hz.
#[inline(always)]
pub fn gate_power(charge: f64, gate: &GateLoop, frequency: f64) -> GatePower {
    let GateLoop { v_gate, own_share, .. } = *gate;
    GatePower { charge, v_gate, own_share, watts: frequency * charge * v_gate * own_share }
}

/// Share of the gate power that heats the MOSFET itself; `r_g` and the driver's resistances while charging and while discharging in Ω.
///
/// Of Q V_dr one half is lost while charging and one while discharging; r_g and the driver share each. Source: division of a resistive loss.
pub fn own_share(r_g: f64, [r_source, r_sink]: [f64; 2]) -> f64 {
    0.5 * (share(r_g, r_source) + share(r_g, r_sink))
}

fn share(r_g: f64, r_driver: f64) -> f64 {
    if r_g > 0.0 { r_g / (r_g + r_driver) } else { 0.0 }
}

/// The controller's part of the gate power and what it is made of.
#[derive(Clone, Copy, Debug, Default, PartialEq)]
pub struct DrivePower {
    /// V_s: voltage the charge is drawn from, over the rail's efficiency, V.
    pub v_supply: f64,
    /// f_e (Q_h + Q_l) V_s, W.
    pub total: f64,
    /// total less what heats the switches, W, booked to the controller.
    pub watts: f64,
}

/// f (n_h Q_h + n_l Q_l) V_s less the switches' own parts (E21).
///
/// V_s: input voltage for a drive made from the input, output voltage for one made from the output, V_drive/efficiency
/// for an external rail. The low side switches at about zero volts and needs Q_g - Q_gd (MIC2182 data sheet p. 17).
#[inline(always)]
pub fn drive_power(high: &GatePower, low: &GatePower, v_supply: f64, frequency: f64) -> DrivePower {
    let total = frequency * (high.charge + low.charge) * v_supply;
    DrivePower { v_supply, total, watts: at_least(0.0, total - high.watts - low.watts) }
}
