//! A stage with its curves fitted and its drive resolved: what the model evaluates.

use crate::budget::{Budget, Coupling};
use crate::edges::GateLoop;
use crate::ledger::{SLOTS, Slot};
use crate::parts::capacitor::Bank;
use crate::parts::controller::{Controller, Supply};
use crate::parts::diode::Diode;
use crate::parts::inductor::Inductor;
use crate::parts::linear_regulator::LinearRegulator;
use crate::parts::mosfet::Mosfet;
use crate::sheet::{BoardSheet, Datum};
use crate::stage::{Circuit, LightLoad, RectifierSheet, StageSheet, SwitchedSheet};

/// A stage ready to be evaluated.
#[derive(Clone, Debug, PartialEq)]
pub struct Stage {
    /// V_OUT, V.
    pub output_voltage: f64,
    /// What it consists of.
    pub kind: Kind,
}

/// What a fitted stage consists of.
#[derive(Clone, Debug, PartialEq)]
pub enum Kind {
    /// Synchronous or diode stage.
    Switched(Box<Switched>),
    /// Linear regulator.
    Linear(LinearRegulator),
}

/// A switched stage with fitted parts.
#[derive(Clone, Debug, PartialEq)]
pub struct Switched {
    /// Switch between input and switch node.
    pub high_side: Mosfet,
    /// What carries the current while it is off.
    pub rectifier: Rectifier,
    /// Inductor.
    pub inductor: Inductor,
    /// Bank at the input.
    pub input_bank: Bank,
    /// Bank at the output.
    pub output_bank: Bank,
    /// Controller.
    pub controller: Controller,
    /// Copper, sense, snubber.
    pub board: Board,
    /// Drive at the full drive voltage.
    pub full_drive: Drive,
    /// True when the rectifier blocks at zero current.
    pub blocks: bool,
    /// Smallest peak of a pulse, A; 0 when none is stated.
    pub skip_peak: f64,
    /// How heat flows.
    pub heat: HeatFlow,
}

/// What carries the inductor current while the high side is off.
#[derive(Clone, Debug, PartialEq)]
#[allow(clippy::large_enum_variant)] // one a stage; a box would cost the heat loop an indirection
pub enum Rectifier {
    /// A MOSFET, perhaps with a Schottky diode across it.
    Synchronous {
        /// The MOSFET.
        low_side: Mosfet,
        /// The Schottky diode across it.
        schottky: Option<Diode>,
    },
    /// A diode.
    Diode(Diode),
}

/// Resistances of the board at 25 °C, Ω, its temperature and its snubber.
#[derive(Clone, Copy, Debug, Default, PartialEq)]
pub struct Board {
    /// In series with the high side.
    pub high_side_path: f64,
    /// In series with the rectifier.
    pub low_side_path: f64,
    /// In series with the inductor.
    pub output_path: f64,
    /// Sense resistor in series with the inductor.
    pub sense: f64,
    /// Before the input capacitors.
    pub input_path: f64,
    /// After the output capacitors.
    pub load_path: f64,
    /// Temperature of the copper, °C; ambient when absent.
    pub temperature: Option<f64>,
    /// Snubber capacitance, F.
    pub snubber: f64,
}

impl Board {
    fn fit(sheet: &BoardSheet) -> Self {
        let value = |datum: &Option<Datum>| datum.as_ref().map_or(0.0, |datum| datum.value);
        Board {
            high_side_path: value(&sheet.high_side_path),
            low_side_path: value(&sheet.low_side_path),
            output_path: value(&sheet.output_path),
            sense: value(&sheet.sense),
            input_path: value(&sheet.input_path),
            load_path: value(&sheet.load_path),
            temperature: sheet.temperature.as_ref().map(|t| t.value),
            snubber: value(&sheet.snubber),
        }
    }
}

/// What the gates see at one drive voltage; depends on the input voltage only while that is below the drive voltage.
#[derive(Clone, Copy, Debug, Default, PartialEq)]
pub struct Drive {
    /// Gate voltage of the high side, V.
    pub v_high: f64,
    /// Gate voltage of the low side, V.
    pub v_low: f64,
    /// On-resistance of the high side at 25 °C, all devices, Ω.
    pub r_high: f64,
    /// On-resistance of the low side at 25 °C, all devices, Ω.
    pub r_low: f64,
    /// High-side gate behind its driver.
    pub high_gate: GateLoop,
    /// Low-side gate behind its driver.
    pub low_gate: GateLoop,
    /// Gate charge of the high side, all devices, C.
    pub q_high: f64,
    /// Gate charge of the low side, which switches at about zero volts: Q_g - Q_gd, all devices, C.
    pub q_low: f64,
}

/// Nodes of the heat network of a switched stage; a linear stage has the regulator alone.
pub const NODES: usize = 5;
/// High side.
pub const HIGH: usize = 0;
/// Low side or freewheel diode.
pub const RECTIFIER: usize = 1;
/// Inductor.
pub const INDUCTOR: usize = 2;
/// Schottky diode across the low side.
pub const SCHOTTKY: usize = 3;
/// Controller.
pub const CONTROLLER: usize = 4;

/// Temperatures or watts of the nodes.
pub type Nodes = [f64; NODES];

/// How heat flows from the nodes to ambient and to one another (E50).
#[derive(Clone, Debug, Default, PartialEq)]
pub struct HeatFlow {
    /// R_th/n of each node, K/W; `None` keeps the node at ambient.
    pub to_ambient: [Option<f64>; NODES],
    /// The same with 0 for a node that stays at ambient, K/W.
    pub resistance: Nodes,
    /// Slots of the nodes that have a temperature.
    pub slots: [Option<Slot>; NODES],
    /// Slots of the nodes without a thermal resistance.
    pub held: [bool; SLOTS],
    /// K of each pair: heated node, heating slot, K/W.
    pub coupling: Vec<(usize, Slot, f64)>,
}

impl HeatFlow {
    /// Gives a node another thermal resistance of all its devices together, K/W.
    pub fn set(&mut self, node: usize, whole: f64) {
        self.to_ambient[node] = Some(whole);
        self.resistance[node] = whole;
        if let Some(slot) = self.slots[node] {
            self.held[slot.index()] = false;
        }
    }
}

/// Slot of a heat node.
pub fn slot_of(node: usize, synchronous: bool) -> Slot {
    match node {
        HIGH => Slot::HighSide,
        RECTIFIER if synchronous => Slot::LowSide,
        RECTIFIER => Slot::FreewheelDiode,
        INDUCTOR => Slot::Inductor,
        SCHOTTKY => Slot::ParallelSchottky,
        _ => Slot::Controller,
    }
}

impl Stage {
    /// Fits the curves of a stage of a budget.
    pub fn fit(sheet: &StageSheet, budget: &Budget) -> Self {
        Self::on_rail(&sheet.circuit, budget.output_voltage, &budget.board, &budget.coupling)
    }

    /// Fits the curves of a circuit on a rail.
    pub fn on_rail(
        circuit: &Circuit,
        output_voltage: f64,
        board: &BoardSheet,
        coupling: &[Coupling],
    ) -> Self {
        let kind = match circuit {
            Circuit::Linear(regulator) => Kind::Linear(LinearRegulator::fit(regulator)),
            Circuit::Switched(switched) => Kind::Switched(Box::new(Switched::fit(switched, board, coupling))),
        };
        Stage { output_voltage, kind }
    }
}

impl Switched {
    fn fit(sheet: &SwitchedSheet, board: &BoardSheet, coupling: &[Coupling]) -> Self {
        let controller_sheet = &*sheet.controller.sheet;
        let synchronous = matches!(sheet.rectifier, RectifierSheet::Synchronous { .. });
        let controller = Controller::fit(controller_sheet, synchronous);
        let high_side = Mosfet::fit(&sheet.high_side, controller_sheet.high_side.edge_times.as_ref());
        let rectifier = match &sheet.rectifier {
            RectifierSheet::Synchronous { low_side, parallel_schottky } => {
                let edges = controller_sheet.low_side.as_ref().and_then(|driver| driver.edge_times.as_ref());
                Rectifier::Synchronous {
                    low_side: Mosfet::fit(low_side, edges),
                    schottky: parallel_schottky.as_ref().map(Diode::fit),
                }
            }
            RectifierSheet::Diode { freewheel_diode } => Rectifier::Diode(Diode::fit(freewheel_diode)),
        };
        let inductor = Inductor::fit(&sheet.inductor);
        let heat = heat_flow(&high_side, &rectifier, &inductor, controller.r_th, coupling);
        let mut switched = Switched {
            high_side,
            rectifier,
            inductor,
            input_bank: Bank::fit(&sheet.input_capacitors),
            output_bank: Bank::fit(&sheet.output_capacitors),
            controller,
            board: Board::fit(board),
            full_drive: Drive::default(),
            blocks: !synchronous || sheet.light_load != LightLoad::ForcedContinuous,
            skip_peak: match &sheet.light_load {
                LightLoad::PulseSkipping(skip) => skip.peak.value,
                _ => 0.0,
            },
            heat,
        };
        switched.full_drive = switched.drive_of(switched.controller.v_drive);
        switched
    }

    /// Draws the consequences of parts that were exchanged: what the gates see and how heat flows.
    pub fn reassemble(&mut self, coupling: &[Coupling]) {
        self.heat =
            heat_flow(&self.high_side, &self.rectifier, &self.inductor, self.controller.r_th, coupling);
        self.full_drive = self.drive_of(self.controller.v_drive);
    }

    /// True with a MOSFET as rectifier.
    pub fn is_synchronous(&self) -> bool {
        matches!(self.rectifier, Rectifier::Synchronous { .. })
    }

    /// True when the drive power is taken from the input on a rail of this voltage.
    pub fn drives_from_input(&self, output_voltage: f64) -> bool {
        match self.controller.supply {
            Supply::Input => true,
            Supply::Output => output_voltage < self.controller.v_drive,
            Supply::External(_) => false,
        }
    }

    /// What the gates see at an input voltage: a drive made from the input is cut to it (E10).
    #[inline]
    pub fn drive(&self, v_in: f64, output_voltage: f64) -> Drive {
        if v_in < self.controller.v_drive && self.drives_from_input(output_voltage) {
            self.drive_of(v_in)
        } else {
            self.full_drive
        }
    }

    fn drive_of(&self, v_drive: f64) -> Drive {
        let v_high = v_drive - self.controller.v_boot_drop;
        let high = &self.high_side;
        let mut drive = Drive {
            v_high,
            v_low: v_drive,
            r_high: high.on_resistance.at(v_high) / high.n,
            high_gate: GateLoop::of(v_high, high.r_g, &self.controller.high_side),
            q_high: high.n * high.gate_charge.at(v_high),
            ..Drive::default()
        };
        if let Rectifier::Synchronous { low_side, .. } = &self.rectifier {
            drive.low_gate = GateLoop::of(v_drive, low_side.r_g, &self.controller.low_side);
            drive.r_low = low_side.on_resistance.at(v_drive) / low_side.n;
            drive.q_low = low_side.n * (low_side.gate_charge.at(v_drive) - low_side.gate_charge.q_gd);
        }
        drive
    }
}

fn heat_flow(
    high_side: &Mosfet,
    rectifier: &Rectifier,
    inductor: &Inductor,
    controller: Option<f64>,
    coupling: &[Coupling],
) -> HeatFlow {
    let (rectifier_r, schottky_r, synchronous) = match rectifier {
        Rectifier::Synchronous { low_side, schottky } => {
            let schottky_r = schottky.as_ref().and_then(|diode| diode.r_th.map(|r| r / diode.n));
            (low_side.r_th.map(|r| r / low_side.n), schottky_r, true)
        }
        Rectifier::Diode(diode) => (diode.r_th.map(|r| r / diode.n), None, false),
    };
    let to_ambient = [
        high_side.r_th.map(|r| r / high_side.n),
        rectifier_r,
        inductor.r_th.map(|r| r / inductor.n),
        schottky_r,
        controller,
    ];
    let node_of = |slot: Slot| (0..NODES).find(|node| slot_of(*node, synchronous) == slot);
    let coupling = coupling
        .iter()
        .filter_map(|pair| Some((node_of(pair.heated)?, pair.heating, pair.resistance)))
        .filter(|(node, ..)| to_ambient[*node].is_some())
        .collect();
    let has_schottky = matches!(rectifier, Rectifier::Synchronous { schottky: Some(_), .. });
    let slots = std::array::from_fn(|node| {
        let exists = match node {
            SCHOTTKY => has_schottky,
            CONTROLLER => controller.is_some(),
            _ => true,
        };
        exists.then(|| slot_of(node, synchronous))
    });
    let mut held = [false; SLOTS];
    for (node, to_ambient) in to_ambient.iter().enumerate() {
        held[slot_of(node, synchronous).index()] = to_ambient.is_none();
    }
    HeatFlow { to_ambient, held, resistance: to_ambient.map(|r| r.unwrap_or(0.0)), slots, coupling }
}
