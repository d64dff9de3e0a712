//! Switching edges and swings of the switch node against transient solutions.
//!
//! One switching cell: a constant inductor current, a MOSFET with a gate resistance, a linear transconductance, an ohmic
//! limit, a gate-drain charge and a source inductance, a rectifier that blocks at once; all capacitances fall with
//! voltage as (1 + v/v0)^-1/2. The channel energy of both edges is the sum of overlap and output charge. The transient
//! solutions are computed in the tests (`tests/time_domain.rs`), which share no code with the model; the results stand
//! here, and the tests compute them anew and compare.

use super::check::{Bound, Check, Subject};
use super::rig::{Rig, coil, controller, dead_time, switch};
use super::statistics::{mean, worst};
use crate::edges::{GateLoop, edge_durations};
use crate::ledger::Account as A;
use crate::loss::overlap::{EdgeConditions, textbook};
use crate::parts::mosfet::Mosfet;
use crate::sheet::Datum;
use crate::sheet::mosfet::MosfetSheet;
use crate::stage::LightLoad;
use crate::units::Dimension as D;

/// Voltage at which charges are stated, V.
pub const CHARGE_VOLTAGE: f64 = 20.0;

/// A switching cell: V, A, S, C, Ω, H.
#[derive(Clone, Copy, Debug, PartialEq)]
#[allow(missing_docs)] // the symbols of the model
pub struct Cell {
    pub v_in: f64,
    pub i_on: f64,
    pub i_off: f64,
    pub v_drive: f64,
    pub v_th: f64,
    pub transconductance: f64,
    pub q_gs2: f64,
    /// Plateau less threshold at the test current, V.
    pub plateau: f64,
    pub q_gd: f64,
    pub q_high: f64,
    pub q_low: f64,
    pub junction: f64,
    pub r_on: f64,
    pub r_off: f64,
    pub l_source: f64,
}

/// Pulses a second in the stage that carries a cell, Hz.
const FREQUENCY: f64 = 100e3;

impl Cell {
    fn mosfet(&self) -> MosfetSheet {
        MosfetSheet {
            v_gs_th: Datum::of(self.v_th),
            v_gs_plateau: Datum::at(self.v_th + self.plateau, "i_d", self.transconductance * self.plateau),
            q_gs2: Some(Datum::of(self.q_gs2)),
            q_gd: Datum::at(self.q_gd, "v_ds", CHARGE_VOLTAGE),
            q_oss: Some(Datum::at(self.q_high, "v_ds", CHARGE_VOLTAGE)),
            l_source: Some(Datum::of(self.l_source)),
            edge_times: None,
            ..switch(0.0)
        }
    }

    /// A stage in which the high side turns on at `i_on` and off at `i_off`.
    pub fn rig(&self) -> Rig {
        let mut rig = Rig::ideal(self.v_in, 0.5 * self.v_in, 0.5 * (self.i_on + self.i_off), FREQUENCY);
        let ripple = (self.i_off - self.i_on).max(1e-6);
        rig.inductor = coil(0.25 * self.v_in / (FREQUENCY * ripple), 0.0);
        rig.high_side = self.mosfet();
        rig.low_side.q_oss = Some(Datum::at(self.q_low, "v_ds", CHARGE_VOLTAGE));
        let mut controller = controller();
        controller.v_drive = Datum::of(self.v_drive);
        controller.high_side.r_source = Some(Datum::of(self.r_on));
        controller.high_side.r_sink = Some(Datum::of(self.r_off));
        rig.controller = controller;
        rig
    }

    /// Energy of both edges by the model, J.
    pub fn model(&self) -> f64 {
        let rig = self.rig();
        (rig.watts(A::HighSideOverlap) + rig.watts(A::HighSideOutputCharge)) / FREQUENCY
    }

    /// Energy of both edges by the sum that textbooks print, ½ V I (t_on + t_off) + E_cap, J.
    pub fn textbook(&self) -> f64 {
        let rig = self.rig();
        let mosfet = Mosfet::fit(&super::rig::placed(&rig.high_side), None);
        let gate = GateLoop { v_gate: self.v_drive, r_on: self.r_on, r_off: self.r_off, own_share: 0.0 };
        let edges = [self.i_on, self.i_off];
        let q_gd = mosfet.q_gd.charge(self.v_in);
        let durations = edge_durations(&mosfet, &gate, q_gd, edges);
        let conditions = EdgeConditions {
            v_in: self.v_in,
            i_on: self.i_on,
            i_off: self.i_off,
            node_energy: 0.0,
            surplus_current: 1.0,
            frequency: 1.0,
        };
        textbook(&conditions, durations) + rig.watts(A::HighSideOutputCharge) / FREQUENCY
    }
}

/// What the switch node does.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Motion {
    /// A negative valley lifts the node before the high side turns on (E16): energy burnt by the high side.
    Lifted,
    /// The dead time ends before the node has fallen (E16c): energy burnt by the low side.
    Lowered,
    /// The idle node of discontinuous mode rings out (E16b): energy burnt in the winding.
    Ringing,
    /// The idle node has settled at the output voltage when the high side turns on (E16): energy burnt by the high side.
    Settled,
}

/// A swing of the node: V, A, H, Hz, s, C.
#[derive(Clone, Copy, Debug, PartialEq)]
#[allow(missing_docs)] // the symbols of the model
pub struct Swing {
    pub motion: Motion,
    pub v_in: f64,
    pub v_out: f64,
    pub load: f64,
    pub inductance: f64,
    pub frequency: f64,
    pub dead: f64,
    pub q_high: f64,
    pub q_low: f64,
    pub junction: f64,
}

impl Swing {
    /// The stage in which it happens.
    pub fn rig(&self) -> Rig {
        let mut rig = Rig::ideal(self.v_in, self.v_out, self.load, self.frequency);
        rig.inductor = coil(self.inductance, 0.0);
        rig.high_side.q_oss = Some(Datum::at(self.q_high, "v_ds", CHARGE_VOLTAGE));
        rig.low_side.q_oss = Some(Datum::at(self.q_low, "v_ds", CHARGE_VOLTAGE));
        match self.motion {
            Motion::Lifted => rig.controller.dead_time = Some(dead_time(0.5e-6, self.dead)),
            Motion::Lowered => rig.controller.dead_time = Some(dead_time(self.dead, 0.0)),
            Motion::Ringing | Motion::Settled => {
                rig.controller.dead_time = Some(dead_time(0.1e-6, 0.0));
                rig.light_load = LightLoad::DiodeEmulation;
            }
        }
        rig
    }

    /// Energy that the high side burns when the node starts from ground, by the model, J.
    pub fn whole_node(&self) -> f64 {
        let mut rig = Rig::ideal(self.v_in, 0.5 * self.v_in, 1.0, self.frequency);
        let own = self.rig();
        (rig.high_side, rig.low_side) = (own.high_side, own.low_side);
        rig.watts(A::HighSideOutputCharge) / self.frequency
    }

    /// How far the model may be off, as a share of the energy of the whole node.
    pub fn limit(&self) -> f64 {
        if self.junction < 0.01 { LIMIT_SWING } else { LIMIT_SWING_JUNCTION }
    }

    /// Energy by the model, J.
    pub fn model(&self) -> f64 {
        let account = match self.motion {
            Motion::Lifted | Motion::Settled => A::HighSideOutputCharge,
            Motion::Lowered => A::LowSideOutputCharge,
            Motion::Ringing => A::InductorRinging,
        };
        let rig = self.rig();
        rig.watts(account) / rig.wave(|w| w.frequency)
    }
}

/// Largest difference of one cell, and of the mean of all.
pub const LIMIT: f64 = 0.20;
/// Largest mean difference over the cells.
pub const LIMIT_MEAN: f64 = 0.05;
/// The same for fast edges with real junctions.
pub const LIMIT_FAST: f64 = 0.25;
/// The same for fast edges with real junctions.
pub const LIMIT_FAST_MEAN: f64 = 0.15;
/// Largest difference of a swing's energy, as a share of the energy of the whole node, by the model's own law.
pub const LIMIT_SWING: f64 = 0.015;
/// The same with junctions of 0.7 V.
pub const LIMIT_SWING_JUNCTION: f64 = 0.12;

const SOURCE: &str = "transient solution of the switching cell (tests/time_domain.rs)";
const WHY: &str = "edges are taken one after another; in truth they overlap";

pub(super) fn checks(list: &mut Vec<Check>) {
    use super::recorded::{CELLS, FAST_CELLS};
    population(
        list,
        CELLS,
        "random cells, capacitances as v^-1/2, gate loops of 5-30 Ω",
        [LIMIT, LIMIT_MEAN],
        WHY,
    );
    let why = "fast gates charge on while the node falls, and a junction of 0.7 V stores more energy for its charge";
    let what = "random cells, junctions of 0.5-0.9 V, gate loops of 2-8 Ω, up to 0.3 nH";
    population(list, FAST_CELLS, what, [LIMIT_FAST, LIMIT_FAST_MEAN], why);
    swings(list);
}

fn population(
    list: &mut Vec<Check>,
    cells: &[(Cell, f64)],
    name: &str,
    [each, on_mean]: [f64; 2],
    why: &str,
) {
    let ours: Vec<f64> = cells.iter().map(|(cell, energy)| cell.model() / energy - 1.0).collect();
    let book: Vec<f64> = cells.iter().map(|(cell, energy)| cell.textbook() / energy - 1.0).collect();
    let magnitude = |values: &[f64]| mean(&values.iter().map(|value| value.abs()).collect::<Vec<_>>());
    let mut add = |what: String, outside: f64, value: f64, reason: &str| {
        list.push(Check::of(outside, value, D::Ratio, Bound::AtMost).because(reason).about(
            Subject::Switching,
            what,
            SOURCE,
        ));
    };
    let count = cells.len();
    add(format!("worst difference of {count} {name}"), each, worst(&ours), why);
    add("... size of their mean difference".into(), on_mean, mean(&ours).abs(), why);
    add(
        "... mean size of the difference, against that of ½ V I (t_on + t_off) + E_cap".into(),
        magnitude(&book),
        magnitude(&ours),
        "the sum that textbooks print counts the energy of the node twice",
    );
    for (place, (cell, energy)) in cells.iter().enumerate() {
        let at = format!("{} V, {} A on, {} A off", cell.v_in, cell.i_on, cell.i_off);
        list.push(
            Check::within(*energy, each, D::Energy, cell.model())
                .because(why)
                .about(Subject::Switching, format!("energy a cycle, cell {}: {at}", place + 1), SOURCE)
                .one_of_many(),
        );
    }
}

fn swings(list: &mut Vec<Check>) {
    for (swing, energy) in super::recorded::SWINGS {
        let what = match swing.motion {
            Motion::Lifted => "negative valley lifts the node, high side burns the rest",
            Motion::Lowered => "dead time too short, low side burns the rest",
            Motion::Ringing => "idle node rings out",
            Motion::Settled => "node at the output voltage, high side burns the rest",
        };
        let law = if swing.junction < 0.01 { "capacitances as v^-1/2" } else { "junctions of 0.7 V" };
        let whole = swing.whole_node();
        let reason = if swing.junction < 0.01 {
            "share of the whole node's energy; the current of the swing is taken as constant"
        } else {
            "share of the whole node's energy; (1 + v/v0)^-1/2 stores more energy for its charge than v^-1/2"
        };
        let difference = (swing.model() - energy).abs() / whole;
        list.push(Check::of(swing.limit(), difference, D::Ratio, Bound::AtMost).because(reason).about(
            Subject::Node,
            format!("{what}: {} V to {} V, {} A, {law}", swing.v_in, swing.v_out, swing.load),
            "transient solution of the switch node (tests/time_domain.rs)",
        ));
    }
}
