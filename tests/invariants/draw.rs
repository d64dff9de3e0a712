//! Random stages that hang together, from numbers between 0 and 1.

use lossbook::budget::Coupling;
use lossbook::evidence::rig::{capacitor, coil, controller, dead_time, diode, placed, points, switch};
use lossbook::fitted::Stage;
use lossbook::grid::OperatingPoint;
use lossbook::infeasible::Infeasible;
use lossbook::ledger::Slot;
use lossbook::model::{self, Solved};
use lossbook::sheet::capacitor::CapacitorSheet;
use lossbook::sheet::controller::DriveSupply;
use lossbook::sheet::diode::{DiodeSheet, ForwardCurve, LeakagePoint};
use lossbook::sheet::inductor::{AcResistance, Core, CoreLossPoint, Saturation};
use lossbook::sheet::mosfet::{HotRatio, MosfetSheet, Recovery};
use lossbook::sheet::{BoardSheet, ControllerSheet, Datum, InductorSheet};
use lossbook::stage::{Circuit, LightLoad, Placed, RectifierSheet, SkipPeak, SwitchedSheet};

/// Numbers of one draw.
pub(crate) const NUMBERS: usize = 96;

/// Takes numbers one by one.
struct Dice<'a> {
    numbers: &'a [f64],
    next: usize,
}

impl Dice<'_> {
    fn unit(&mut self) -> f64 {
        let number = self.numbers[self.next % self.numbers.len()];
        self.next += 1;
        number
    }

    fn between(&mut self, low: f64, high: f64) -> f64 {
        low + (high - low) * self.unit()
    }

    /// Even ratios.
    fn decades(&mut self, low: f64, high: f64) -> f64 {
        low * (high / low).powf(self.unit())
    }

    fn chance(&mut self, share: f64) -> bool {
        self.unit() < share
    }

    fn count(&mut self, most: u32) -> u32 {
        1 + (self.unit() * f64::from(most)) as u32
    }
}

/// A switched stage on a rail at a point.
#[derive(Clone, Debug)]
pub(crate) struct Draw {
    pub(crate) output_voltage: f64,
    pub(crate) point: OperatingPoint,
    pub(crate) circuit: SwitchedSheet,
    pub(crate) board: BoardSheet,
    pub(crate) coupling: Vec<Coupling>,
}

impl Draw {
    pub(crate) fn stage(&self) -> Stage {
        Stage::on_rail(
            &Circuit::Switched(self.circuit.clone()),
            self.output_voltage,
            &self.board,
            &self.coupling,
        )
    }

    pub(crate) fn solve(&self) -> Result<Solved, Infeasible> {
        model::evaluate(&self.stage(), self.point)
    }

    pub(crate) fn is_synchronous(&self) -> bool {
        matches!(self.circuit.rectifier, RectifierSheet::Synchronous { .. })
    }

    /// Changes the sheet of a part.
    pub(crate) fn edit<T: Clone>(part: &mut Placed<T>, change: impl Fn(&mut T)) {
        let mut sheet = (*part.sheet).clone();
        change(&mut sheet);
        part.sheet = sheet.into();
    }

    /// The switch between node and ground, when there is one.
    pub(crate) fn low_side(&mut self) -> Option<&mut Placed<MosfetSheet>> {
        match &mut self.circuit.rectifier {
            RectifierSheet::Synchronous { low_side, .. } => Some(low_side),
            RectifierSheet::Diode { .. } => None,
        }
    }

    /// No loss but conduction, in a current without ripple and without the charge of any junction.
    pub(crate) fn conduction_only(&mut self) {
        let bare = |mosfet: &mut MosfetSheet| {
            mosfet.q_oss = None;
            mosfet.c_oss = None;
            mosfet.q_rr = None;
        };
        Draw::edit(&mut self.circuit.high_side, bare);
        match &mut self.circuit.rectifier {
            RectifierSheet::Synchronous { low_side, parallel_schottky } => {
                Draw::edit(low_side, bare);
                if let Some(diode) = parallel_schottky {
                    Draw::edit(diode, |diode| diode.q_c = None);
                }
            }
            RectifierSheet::Diode { freewheel_diode } => {
                Draw::edit(freewheel_diode, |diode| diode.q_c = None)
            }
        }
        Draw::edit(&mut self.circuit.inductor, |inductor| {
            inductor.inductance = Datum::of(1e8);
            inductor.saturation = Some(Saturation { i: Datum::of(1e6), drop: Datum::of(0.0) });
        });
    }
}

/// A draw. `numbers` lie between 0 and 1.
pub(crate) fn draw(numbers: &[f64]) -> Draw {
    let mut dice = Dice { numbers, next: 0 };
    let d = &mut dice;
    let v_in = d.decades(4.0, 60.0);
    let v_out = v_in * d.between(0.05, 1.02);
    let rated = d.decades(0.3, 30.0);
    let load = if d.chance(0.05) { 0.0 } else { rated * d.decades(1e-3, 1.2) };
    let frequency = d.decades(80e3, 2e6);
    let ripple = rated * d.between(0.1, 0.9);
    let inductance = v_out * (1.0 - v_out / v_in).abs().max(0.02) / (frequency * ripple);
    let synchronous = d.chance(0.7);
    let high_side = Placed { count: d.count(3), ..placed(&mosfet(d, rated, v_out)) };
    let rectifier = if synchronous {
        let low_side = Placed { count: d.count(3), ..placed(&mosfet(d, rated, v_out)) };
        let schottky = Placed { count: d.count(2), ..placed(&schottky(d, rated)) };
        RectifierSheet::Synchronous { low_side, parallel_schottky: d.chance(0.25).then_some(schottky) }
    } else {
        RectifierSheet::Diode { freewheel_diode: Placed { count: d.count(3), ..placed(&schottky(d, rated)) } }
    };
    let inductor =
        Placed { count: d.count(2), ..placed(&inductor(d, [inductance, rated, v_out, frequency])) };
    let light_load = match d.unit() {
        peak if peak < 0.3 => {
            LightLoad::PulseSkipping(SkipPeak { peak: Datum::of(ripple * d.between(0.2, 1.0)) })
        }
        rest if rest < 0.6 || !synchronous => LightLoad::DiodeEmulation,
        _ => LightLoad::ForcedContinuous,
    };
    let banks = [(); 2].map(|()| bank(d));
    let [input_capacitors, output_capacitors] = banks;
    let controller = placed(&controller_sheet(d, frequency));
    let path = |d: &mut Dice<'_>| d.chance(0.5).then(|| Datum::of(d.decades(1e-5, 5e-3) * v_out / rated));
    let board = BoardSheet {
        high_side_path: path(d),
        low_side_path: path(d),
        output_path: path(d),
        sense: path(d),
        input_path: path(d),
        load_path: path(d),
        temperature: d.chance(0.3).then(|| Datum::of(d.between(0.0, 90.0))),
        snubber: d.chance(0.2).then(|| Datum::of(d.decades(1e-10, 3e-9))),
    };
    let other = if synchronous { Slot::LowSide } else { Slot::FreewheelDiode };
    let coupling = if d.chance(0.3) {
        vec![
            Coupling { heated: Slot::HighSide, heating: other, resistance: d.between(0.0, 8.0) },
            Coupling { heated: other, heating: Slot::Inductor, resistance: d.between(0.0, 8.0) },
        ]
    } else {
        Vec::new()
    };
    Draw {
        output_voltage: v_out,
        point: OperatingPoint {
            input_voltage: v_in,
            load,
            ambient: d.between(-20.0, 85.0),
            switching_frequency: frequency,
        },
        circuit: SwitchedSheet {
            high_side,
            rectifier,
            inductor,
            input_capacitors,
            output_capacitors,
            controller,
            light_load,
        },
        board,
        coupling,
    }
}

fn mosfet(d: &mut Dice<'_>, rated: f64, v_out: f64) -> MosfetSheet {
    // a good switch drops half a percent of the output voltage; the better, the more charge
    let r_on = d.decades(5e-4, 1e-2) * v_out / rated;
    let charge = d.decades(0.3, 3.0) * 60e-12 / r_on;
    let v_th = d.between(1.0, 2.2);
    let plateau = v_th + d.between(0.5, 1.2);
    let q_gs = 0.4 * charge;
    MosfetSheet {
        r_ds_on: vec![Datum::at(r_on, "v_gs", 10.0), Datum::at(1.25 * r_on, "v_gs", 4.5)],
        r_ds_on_hot: d.chance(0.7).then(|| HotRatio {
            t_j: Datum::of(d.between(100.0, 175.0)),
            ratio: Datum::of(d.between(1.2, 2.2)),
        }),
        v_gs_th: Datum::of(v_th),
        v_gs_plateau: Datum::at(plateau, "i_d", rated * d.between(0.8, 2.0)),
        q_gs: Datum::of(q_gs),
        q_gs2: d.chance(0.5).then(|| Datum::of(0.4 * q_gs)),
        q_gd: Datum::at(0.3 * charge, "v_ds", 20.0),
        q_g: vec![Datum::at(charge, "v_gs", 4.5)],
        r_g: d.chance(0.8).then(|| Datum::of(d.between(0.0, 3.0))),
        q_oss: d.chance(0.8).then(|| Datum::at(1.5 * charge, "v_ds", 20.0)),
        l_source: d.chance(0.4).then(|| Datum::of(d.between(0.0, 0.5e-9))),
        v_sd: points(&[(0.1 * rated, d.between(0.5, 0.7)), (rated, d.between(0.7, 0.9))]),
        q_rr: d.chance(0.6).then(|| Recovery {
            charge: Datum::at(charge * d.between(0.2, 3.0), "i", rated),
            exponent: d.chance(0.5).then(|| Datum::of(d.between(0.4, 1.0))),
            includes_q_oss: None,
        }),
        edge_times: None,
        r_th_ja: d.chance(0.8).then(|| Datum::of(d.decades(10.0, 80.0))),
        ..switch(r_on)
    }
}

fn schottky(d: &mut Dice<'_>, rated: f64) -> DiodeSheet {
    let (low, high) = (d.between(0.25, 0.4), d.between(0.42, 0.7));
    let curve = |t_j: f64, by: f64| ForwardCurve {
        t_j: Datum::of(t_j),
        points: points(&[(0.1 * rated, low - by), (rated, high - by)]),
    };
    let curves =
        if d.chance(0.6) { vec![curve(25.0, 0.0), curve(125.0, 0.08)] } else { vec![curve(25.0, 0.0)] };
    let cold = rated * d.decades(1e-7, 1e-5);
    let leak = |t_j: f64, i: f64| LeakagePoint { v_r: Datum::of(40.0), t_j: Datum::of(t_j), i: Datum::of(i) };
    let leakage = match d.unit() {
        none if none < 0.2 => Vec::new(),
        one if one < 0.5 => vec![leak(25.0, cold)],
        _ => vec![leak(25.0, cold), leak(125.0, cold * d.decades(30.0, 300.0))],
    };
    DiodeSheet {
        v_f: curves,
        i_r: leakage,
        q_c: d.chance(0.7).then(|| Datum::at(rated * d.decades(0.3e-9, 3e-9), "v_r", 20.0)),
        q_rr: None,
        r_th_ja: d.chance(0.8).then(|| Datum::of(d.decades(8.0, 60.0))),
        ..diode(&[])
    }
}

fn inductor(d: &mut Dice<'_>, [inductance, rated, v_out, frequency]: [f64; 4]) -> InductorSheet {
    let resistance = d.decades(1e-3, 2e-2) * v_out / rated;
    let kind = d.unit();
    let core = Core {
        k: Some(Datum::of(d.decades(0.5, 20.0))),
        alpha: Some(Datum::of(d.between(1.2, 1.7))),
        beta: Some(Datum::of(d.between(2.2, 2.8))),
        volume: Datum::of(1e-9 * d.decades(100.0, 2000.0)),
        // a swing of some tens of millitesla
        area: Datum::of(inductance * rated * d.between(0.3, 1.0) / (8.0 * 0.15)),
        turns: Datum::of(8.0),
        ..Core::default()
    };
    let loss = |f: f64, ripple: f64| CoreLossPoint {
        frequency: Datum::of(f * frequency),
        ripple: Datum::of(ripple * rated),
        loss: Datum::of(2e-3 * v_out * rated * f.powf(1.4) * (ripple / 0.3).powf(2.3)),
    };
    InductorSheet {
        saturation: Some(Saturation {
            i: Datum::of(rated * d.between(1.3, 3.0)),
            drop: Datum::of(d.between(0.1, 0.4)),
        }),
        r_ac: d.chance(0.5).then(|| AcResistance {
            frequency: Datum::of(frequency),
            r: Datum::of(resistance * d.between(1.0, 20.0)),
        }),
        core: (kind < 0.5).then_some(core),
        core_loss: if kind > 0.7 { vec![loss(1.0, 0.3), loss(2.0, 0.3), loss(1.0, 0.6)] } else { Vec::new() },
        r_th: d.chance(0.8).then(|| Datum::of(d.decades(10.0, 60.0))),
        ..coil(inductance, resistance)
    }
}

fn bank(d: &mut Dice<'_>) -> Vec<Placed<CapacitorSheet>> {
    let kinds = d.count(3) - 1;
    (0..kinds)
        .map(|_| {
            let mut sheet = capacitor(d.decades(5e-4, 5e-2));
            sheet.capacitance = Datum::of(d.decades(1e-6, 3e-4));
            sheet.esl = d.chance(0.5).then(|| Datum::of(d.decades(2e-10, 5e-9)));
            Placed { count: d.count(4), ..placed(&sheet) }
        })
        .collect()
}

fn controller_sheet(d: &mut Dice<'_>, frequency: f64) -> ControllerSheet {
    let mut sheet = controller();
    let v_drive = d.between(4.5, 10.0);
    sheet.v_drive = Datum::of(v_drive);
    sheet.v_boot_drop = d.chance(0.5).then(|| Datum::of(d.between(0.0, 0.5)));
    for driver in [Some(&mut sheet.high_side), sheet.low_side.as_mut()].into_iter().flatten() {
        driver.r_source = Some(Datum::of(d.decades(0.5, 8.0)));
        driver.r_sink = Some(Datum::of(d.decades(0.3, 5.0)));
    }
    let mut dead = dead_time(d.between(0.0, 0.03) / frequency, d.between(0.0, 0.03) / frequency);
    dead.adaptive = Some(d.chance(0.4));
    sheet.dead_time = Some(dead);
    match d.unit() {
        input if input < 0.4 => sheet.drive_supply = DriveSupply::Input,
        output if output < 0.7 => sheet.drive_supply = DriveSupply::Output,
        _ => {}
    }
    sheet.i_q = Datum::of(d.decades(1e-5, 5e-3));
    sheet.i_q_sleep = d.chance(0.5).then(|| Datum::of(1e-5));
    sheet.t_on_min = d.chance(0.5).then(|| Datum::of(d.between(0.0, 0.1) / frequency));
    sheet.t_off_min = d.chance(0.5).then(|| Datum::of(d.between(0.0, 0.1) / frequency));
    sheet.r_th_ja = d.chance(0.5).then(|| Datum::of(d.decades(20.0, 80.0)));
    sheet
}
