#![doc = include_str!("model.md")]
//!
//! # In code
//!
//! From a fitted stage, an operating point and temperatures to every contribution of the ledger: [`Prepared`] holds what
//! temperatures do not change, [`Prepared::heated`] calls the mechanisms of [`crate::loss`], [`evaluate`] settles the heat.

use crate::edges::{self, NodeCapacitance};
use crate::fitted::{
    CONTROLLER, Drive, HIGH, INDUCTOR, Kind, NODES, Nodes, RECTIFIER, Rectifier, SCHOTTKY, Stage, Switched,
};
use crate::grid::OperatingPoint;
use crate::infeasible::Infeasible;
use crate::loss::{
    ac_winding::{self, AcWinding},
    bias::{self, Bias},
    conduction::{self, Channel, DeadTimeEnds, Forward},
    copper::{self, Copper},
    core::{self, Core},
    dead_time::{self, DeadTime, HighSideDeadTime},
    esr::{self, End, Esr},
    gate_drive::{self, DrivePower, GatePower},
    leakage::{self, Leakage, ReverseVoltage},
    output_charge::{self, IdleSwing, OutputCharge},
    overlap::{self, EdgeConditions, LowSideOverlap, Overlap},
    recovery::{self, Recovery},
    ringing::{self, Ringing},
    sense::{self, Sense},
    snubber::{self, Snubber},
    winding::{self, Winding},
};
use crate::near::at_least;
use crate::parts::controller::Supply;
use crate::parts::copper::hot_ratio;
use crate::parts::core::CoreLaw;
pub use crate::solved::{Solved, Temperatures};
use crate::waveform::{CurrentPath, LightLoadRule, OffPath, Waveform};

/// Smallest distance of the drive voltage to the plateau at the peak current, V (E13).
pub const LEAST_OVERDRIVE: f64 = 0.3;

/// What does not depend on temperature at one operating point of a switched stage.
#[derive(Clone, Copy, Debug)]
pub struct Prepared<'a> {
    /// The stage.
    pub stage: &'a Switched,
    /// V_OUT at the load, V.
    pub output_voltage: f64,
    /// Where it runs.
    pub point: OperatingPoint,
    /// V_OUT + I R_load, V: what the inductor works against.
    pub v_out: f64,
    /// What the gates see.
    pub drive: Drive,
    /// L at the load current, H.
    pub inductance: f64,
    /// R(T)/R(25 °C) of the board's copper.
    pub board_ratio: f64,
    /// Board resistances in series with the high side, the rectifier and the inductor at the board's temperature, Ω.
    pub paths: [f64; 3],
    /// Reverse voltages of a diode: input and output; without logarithms when no diode has leakage data.
    pub reverse: [ReverseVoltage; 2],
    /// Capacitance of the switch node.
    pub node: NodeCapacitance,
    /// Q_node at the input voltage, C.
    pub node_charge: f64,
    /// E_cap(0), J.
    pub node_energy: f64,
    /// Gate-drain charge of the high side at the input voltage, C.
    pub q_gd: f64,
    /// How the idle node swings.
    pub idle_swing: IdleSwing,
    /// 1/(f L), A/V.
    pub ripple_per_volt: f64,
    /// Drop of the low side's body diode at the load current, V; 0 without a low side.
    pub body_diode: f64,
    /// f^α of the core loss; 0 without such a law.
    pub core_at_clock: f64,
    /// V_s: what the gate charge is drawn from (E21), V.
    pub v_supply: f64,
    /// R_ac(f) - R_dc at 25 °C, not below 0, Ω; `None` without data.
    pub ac_excess: Option<f64>,
}

/// Resistances at their temperatures over those at 25 °C.
#[derive(Clone, Copy, Debug)]
#[allow(missing_docs)] // named as the parts
pub struct HotRatios {
    pub high_side: f64,
    pub low_side: f64,
    pub winding: f64,
}

/// Contributions that heat a part, with their terms. A mechanism that the stage does not have is `None`.
#[derive(Clone, Copy, Debug)]
#[allow(missing_docs)] // named as the accounts of the ledger
pub struct Heated {
    pub waveform: Waveform,
    pub high_conduction: Channel,
    pub overlap: Overlap,
    pub output_charge: OutputCharge,
    pub recovery: Option<Recovery>,
    pub high_gate: GatePower,
    pub rectifier: HeatedRectifier,
    pub winding: Winding,
    pub ac_winding: Option<AcWinding>,
    pub core: Option<Core>,
    pub ringing: Ringing,
    pub drive: DrivePower,
    pub bias: Bias,
}

/// Contributions of the rectifier and what it adds to the high side.
#[derive(Clone, Copy, Debug)]
#[allow(missing_docs)] // named as the accounts of the ledger
pub enum HeatedRectifier {
    Synchronous {
        conduction: Channel,
        overlap: LowSideOverlap,
        output_charge: OutputCharge,
        /// Booked to the low side, or to the Schottky across it.
        dead_time: DeadTime,
        gate: GatePower,
        /// `Some` with a Schottky across the low side; `Some(None)` when its leakage is unknown.
        schottky: Option<Option<Leakage>>,
        high_dead_time: HighSideDeadTime,
    },
    Diode {
        conduction: Forward,
        leakage: Option<Leakage>,
    },
}

/// Contributions that heat no part of the heat network.
#[derive(Clone, Debug)]
#[allow(missing_docs)] // named as the accounts of the ledger
pub struct Unheated {
    pub input_esr: Esr,
    pub output_esr: Esr,
    pub copper: Copper,
    pub sense: Sense,
    pub snubber: Snubber,
}

impl<'a> Prepared<'a> {
    /// Everything about a point that temperatures do not change.
    #[inline]
    pub fn new(stage: &'a Switched, output_voltage: f64, point: OperatingPoint) -> Self {
        let v_in = point.input_voltage;
        let controller = &stage.controller;
        let drive = stage.drive(v_in, output_voltage);
        let board = &stage.board;
        let board_ratio = hot_ratio(board.temperature.unwrap_or(point.ambient));
        let v_out = output_voltage + point.load * board.load_path * board_ratio;
        let leaks = match &stage.rectifier {
            Rectifier::Synchronous { schottky, .. } => schottky.as_ref().is_some_and(|d| d.leakage.is_some()),
            Rectifier::Diode(diode) => diode.leakage.is_some(),
        };
        let rectifier = match &stage.rectifier {
            Rectifier::Synchronous { low_side, schottky } => {
                let own = low_side.q_oss.unwrap_or_default();
                own.plus(schottky.as_ref().and_then(|diode| diode.q_c).unwrap_or_default())
            }
            Rectifier::Diode(diode) => diode.q_c.unwrap_or_default(),
        };
        let node = NodeCapacitance { high_side: stage.high_side.q_oss.unwrap_or_default(), rectifier };
        let (inductance, node_charge) = (stage.inductor.inductance(point.load), node.total_charge(v_in));
        let ac = stage.inductor.ac_per_root_hertz;
        Prepared {
            stage,
            output_voltage,
            point,
            v_out,
            drive,
            inductance,
            board_ratio,
            paths: [board.high_side_path, board.low_side_path, board.output_path + board.sense]
                .map(|r| r * board_ratio),
            reverse: if leaks { [v_in, v_out].map(ReverseVoltage::of) } else { Default::default() },
            node,
            node_charge,
            node_energy: node.capacitive_energy(v_in, 0.0),
            q_gd: stage.high_side.q_gd.charge(v_in),
            idle_swing: IdleSwing::of(inductance, node_charge, v_in, v_out),
            body_diode: match &stage.rectifier {
                Rectifier::Synchronous { low_side, .. } => low_side.body_diode(point.load),
                Rectifier::Diode(_) => 0.0,
            },
            core_at_clock: match &stage.inductor.core {
                Some(CoreLaw::Power(law)) => law.of_frequency.at(point.switching_frequency),
                _ => 0.0,
            },
            ripple_per_volt: 1.0 / (point.switching_frequency * inductance),
            v_supply: match controller.supply {
                Supply::External(efficiency) => controller.v_drive / efficiency,
                _ if stage.drives_from_input(output_voltage) => v_in,
                _ => v_out,
            },
            ac_excess: ac.map(|ac| (ac * point.switching_frequency.sqrt() - stage.inductor.dcr).max(0.0)),
        }
    }

    /// The path of the inductor current at temperatures.
    #[inline(always)]
    pub fn current_path(&self, t: &Nodes) -> CurrentPath {
        self.path(t, &self.hot(t))
    }

    /// How much the resistances have grown at temperatures.
    #[inline(always)]
    pub fn hot(&self, t: &Nodes) -> HotRatios {
        HotRatios {
            high_side: self.stage.high_side.hot_ratio(t[HIGH]),
            low_side: match &self.stage.rectifier {
                Rectifier::Synchronous { low_side, .. } => low_side.hot_ratio(t[RECTIFIER]),
                Rectifier::Diode(_) => 1.0,
            },
            winding: self.stage.inductor.hot_ratio(t[INDUCTOR]),
        }
    }

    #[inline(always)]
    fn path(&self, t: &Nodes, hot: &HotRatios) -> CurrentPath {
        let (stage, point) = (self.stage, &self.point);
        let [high_path, r_path, series_path] = self.paths;
        let off = match &stage.rectifier {
            Rectifier::Synchronous { schottky, .. } => OffPath::Synchronous {
                r_channel: self.drive.r_low * hot.low_side,
                r_path,
                v_dead: schottky
                    .as_ref()
                    .map_or(self.body_diode, |diode| diode.forward_voltage(point.load, t[SCHOTTKY])),
                dead_share: (stage.controller.t_1 + stage.controller.t_2) * point.switching_frequency,
            },
            Rectifier::Diode(diode) => {
                OffPath::Diode { v_f: diode.forward_voltage(point.load, t[RECTIFIER]), r_path }
            }
        };
        CurrentPath {
            v_in: point.input_voltage,
            v_out: self.v_out,
            load: point.load,
            frequency: point.switching_frequency,
            inductance: self.inductance,
            ripple_per_volt: self.ripple_per_volt,
            r_high: self.drive.r_high * hot.high_side + high_path,
            r_series: stage.inductor.dcr * hot.winding + series_path,
            off,
        }
    }

    /// How the rectifier behaves at light load.
    #[inline]
    pub fn light_load_rule(&self) -> LightLoadRule {
        LightLoadRule {
            blocks: self.stage.blocks,
            skip_peak: self.stage.skip_peak,
            t_on_min: self.stage.controller.t_on_min,
        }
    }

    /// Currents and duties at temperatures; fails where no waveform or no gate drive exists.
    #[inline(always)]
    pub fn waveform(&self, t: &Nodes, hot: &HotRatios) -> Result<Waveform, Infeasible> {
        let Some(waveform) = Waveform::solve(&self.path(t, hot), self.light_load_rule()) else {
            return Err(Infeasible::InputTooLow { v_in: self.point.input_voltage, v_out: self.v_out });
        };
        let overdrive = self.drive.v_high - self.stage.high_side.plateau(waveform.peak);
        if overdrive <= LEAST_OVERDRIVE {
            return Err(Infeasible::DriveTooLow { v_drive: self.drive.v_high, peak: waveform.peak });
        }
        Ok(waveform)
    }

    /// What heats the parts at temperatures; fails where no waveform or no gate drive exists.
    pub fn heated(&self, t: &Nodes) -> Result<Heated, Infeasible> {
        let hot = self.hot(t);
        Ok(self.heated_by(self.waveform(t, &hot)?, t, &hot))
    }

    /// What heats the parts at temperatures with the waveform that belongs to them.
    #[inline(always)]
    pub fn heated_by(&self, waveform: Waveform, t: &Nodes, hot: &HotRatios) -> Heated {
        let (stage, v_in) = (self.stage, self.point.input_voltage);
        let (controller, high) = (&stage.controller, &stage.high_side);
        let frequency = waveform.frequency;

        // high side
        let i_on = at_least(0.0, waveform.valley);
        let durations = edges::edge_durations(high, &self.drive.high_gate, self.q_gd, [i_on, waveform.peak]);
        let conditions = EdgeConditions {
            v_in,
            i_on,
            i_off: waveform.peak,
            node_energy: self.node_energy,
            surplus_current: high.transconductance * (self.drive.v_high - high.plateau(i_on)),
            frequency,
        };
        let v_node = output_charge::voltage_before_turn_on(
            &waveform,
            &self.node,
            v_in,
            controller.t_2,
            self.idle_swing,
        );
        let met = if v_node > 0.0 { self.node.capacitive_energy(v_in, v_node) } else { self.node_energy };
        let r_high = self.drive.r_high * hot.high_side;
        let high_gate = gate_drive::gate_power(self.drive.q_high, &self.drive.high_gate, frequency);

        // rectifier
        let law = match &stage.rectifier {
            Rectifier::Synchronous { low_side, schottky: None } => low_side.recovery.as_ref(),
            Rectifier::Synchronous { .. } => None,
            Rectifier::Diode(diode) => diode.recovery.as_ref(),
        };
        let switched_off = if waveform.is_continuous() { waveform.valley } else { 0.0 };
        let rectifier = self.heated_rectifier(&waveform, t, hot);
        let low_gate = match &rectifier {
            HeatedRectifier::Synchronous { gate, .. } => *gate,
            HeatedRectifier::Diode { .. } => GatePower::default(),
        };

        // inductor
        let inductor = &stage.inductor;
        let ringing = if waveform.is_continuous() {
            Ringing::default()
        } else {
            ringing::ringing(&self.node, v_in, v_node, frequency)
        };

        Heated {
            waveform,
            high_conduction: conduction::high_side(&waveform, r_high),
            overlap: overlap::high_side(&conditions, durations),
            output_charge: output_charge::high_side(met, v_node, frequency),
            recovery: law.map(|law| recovery::recovery(law, v_in, switched_off, frequency)),
            high_gate,
            rectifier,
            winding: winding::winding(&waveform, inductor.dcr * hot.winding),
            ac_winding: self
                .ac_excess
                .map(|excess| ac_winding::ac_winding(&waveform, self.point.load, excess * hot.winding)),
            core: inductor
                .core
                .as_ref()
                .map(|law| core::core(&waveform, law, inductor.n, self.core_at_clock)),
            ringing,
            drive: gate_drive::drive_power(&high_gate, &low_gate, self.v_supply, frequency),
            bias: bias::bias(&waveform, v_in, controller.i_q, controller.i_q_sleep),
        }
    }

    #[inline(always)]
    fn heated_rectifier(&self, waveform: &Waveform, t: &Nodes, hot: &HotRatios) -> HeatedRectifier {
        let (stage, v_in) = (self.stage, self.point.input_voltage);
        let controller = &stage.controller;
        match &stage.rectifier {
            Rectifier::Diode(diode) => HeatedRectifier::Diode {
                conduction: conduction::freewheel_diode(waveform, diode, t[RECTIFIER]),
                leakage: leakage::leakage(waveform, diode, self.reverse, t[RECTIFIER]),
            },
            Rectifier::Synchronous { low_side, schottky } => {
                let (t_1, t_2, frequency) = (controller.t_1, controller.t_2, waveform.frequency);
                let ends = DeadTimeEnds::of(waveform, t_1, t_2);
                let resistance = self.drive.r_low * hot.low_side;
                let reverse = at_least(0.0, -waveform.valley);
                let (overlap, high_dead_time) = if reverse > 0.0 {
                    let t_fi = edges::current_fall(low_side, self.drive.low_gate.r_off, reverse);
                    let v_sd = stage.high_side.body_diode(reverse);
                    (
                        overlap::low_side(v_in, reverse, t_fi, frequency),
                        dead_time::high_side(reverse, v_sd, t_2, self.node_charge, frequency),
                    )
                } else {
                    Default::default()
                };
                let moved = waveform.peak * t_1;
                let output_charge = if controller.adaptive || moved >= self.node_charge {
                    OutputCharge::default()
                } else {
                    output_charge::low_side(&self.node, v_in, moved, frequency)
                };
                // whatever carries the dead-time current: the Schottky when one is fitted (E19)
                let drop = |current| match schottky {
                    Some(diode) => diode.forward_voltage(current, t[SCHOTTKY]),
                    None => low_side.body_diode(current),
                };
                HeatedRectifier::Synchronous {
                    conduction: conduction::low_side(waveform, ends, t_1, t_2, resistance),
                    overlap,
                    output_charge,
                    dead_time: dead_time::rectifier(waveform, ends, [t_1, t_2], self.node_charge, drop),
                    gate: gate_drive::gate_power(self.drive.q_low, &self.drive.low_gate, frequency),
                    schottky: schottky
                        .as_ref()
                        .map(|diode| leakage::leakage(waveform, diode, self.reverse, t[SCHOTTKY])),
                    high_dead_time,
                }
            }
        }
    }

    /// The contributions that heat no part of the heat network.
    #[inline(always)]
    pub fn unheated(&self, waveform: &Waveform) -> Unheated {
        let (stage, load) = (self.stage, self.point.load);
        let input_square = waveform.input_capacitor_square(load);
        let output_square = waveform.output_capacitor_square(load);
        Unheated {
            input_esr: esr::esr(&stage.input_bank, End::Input, waveform, input_square),
            output_esr: esr::esr(&stage.output_bank, End::Output, waveform, output_square),
            copper: copper::copper(waveform, &stage.board, load, self.board_ratio),
            sense: sense::sense(waveform, stage.board.sense * self.board_ratio),
            snubber: snubber::snubber(stage.board.snubber, self.point.input_voltage, waveform.frequency),
        }
    }

    /// E8: on-time and off-time limits of continuous mode.
    pub fn check_times(&self, waveform: &Waveform) -> Result<(), Infeasible> {
        let controller = &self.stage.controller;
        if !waveform.is_continuous() {
            return Ok(());
        }
        let (on_time, off_time) =
            (waveform.duty / waveform.frequency, waveform.off_duty / waveform.frequency);
        if on_time < controller.t_on_min {
            return Err(Infeasible::OnTime { on_time, least: controller.t_on_min });
        }
        let least = controller.t_off_min.max(controller.t_1 + controller.t_2);
        if off_time < least {
            return Err(Infeasible::OffTime { off_time, least });
        }
        Ok(())
    }
}

impl Heated {
    /// Watts that heat each node.
    #[inline(always)]
    pub fn node_watts(&self) -> Nodes {
        let mut watts = [0.0; NODES];
        watts[HIGH] = self.high_conduction.watts
            + self.overlap.watts
            + self.output_charge.watts
            + self.recovery.map_or(0.0, |recovery| recovery.watts)
            + self.high_gate.watts;
        match &self.rectifier {
            HeatedRectifier::Synchronous {
                conduction,
                overlap,
                output_charge,
                dead_time,
                gate,
                schottky,
                high_dead_time,
            } => {
                watts[HIGH] += high_dead_time.watts;
                watts[RECTIFIER] = conduction.watts + overlap.watts + output_charge.watts + gate.watts;
                match schottky {
                    Some(leakage) => {
                        watts[SCHOTTKY] = dead_time.watts + leakage.map_or(0.0, |leakage| leakage.watts);
                    }
                    None => watts[RECTIFIER] += dead_time.watts,
                }
            }
            HeatedRectifier::Diode { conduction, leakage } => {
                watts[RECTIFIER] = conduction.watts + leakage.map_or(0.0, |leakage| leakage.watts);
            }
        }
        watts[INDUCTOR] = self.winding.watts
            + self.ac_winding.map_or(0.0, |ac| ac.watts)
            + self.core.map_or(0.0, |core| core.watts)
            + self.ringing.watts;
        watts[CONTROLLER] = self.drive.watts + self.bias.watts;
        watts
    }
}

/// Evaluates a stage at a point: temperatures and losses together (E50).
pub fn evaluate(stage: &Stage, point: OperatingPoint) -> Result<Solved, Infeasible> {
    match &stage.kind {
        Kind::Linear(regulator) => crate::heat::settle_linear(regulator, stage.output_voltage, point),
        Kind::Switched(switched) => {
            crate::heat::settle(&Prepared::new(switched, stage.output_voltage, point))
        }
    }
}
