//! A stage put together for a check: ideal parts, of which a check makes some real.

use std::sync::Arc;

use crate::budget::Coupling;
use crate::fitted::{Kind, Stage};
use crate::grid::OperatingPoint;
use crate::heat;
use crate::infeasible::Infeasible;
use crate::ledger::{Account, Slot};
use crate::model::{self, Prepared, Solved};
use crate::sheet::capacitor::CapacitorSheet;
use crate::sheet::common::VoltagePoint;
use crate::sheet::controller::{ControllerSheet, DeadTime, DriveSupply, Driver, External};
use crate::sheet::diode::{DiodeSheet, ForwardCurve};
use crate::sheet::edge_times::EdgeTimes;
use crate::sheet::inductor::{InductorSheet, Saturation};
use crate::sheet::mosfet::{HotRatio, MosfetSheet};
use crate::sheet::{BoardSheet, Datum};
use crate::stage::{Circuit, LightLoad, Placed, RectifierSheet, SwitchedSheet};
use crate::waveform::Waveform;

/// A switched stage on a rail at one point, part by part.
#[derive(Clone, Debug)]
pub struct Rig {
    /// V_OUT, V.
    pub output_voltage: f64,
    /// Where it runs.
    pub point: OperatingPoint,
    /// Switch between input and node.
    pub high_side: MosfetSheet,
    /// Switch between node and ground.
    pub low_side: MosfetSheet,
    /// When there is one it stands in place of the low side.
    pub diode: Option<DiodeSheet>,
    /// Inductor.
    pub inductor: InductorSheet,
    /// Input capacitor.
    pub input_capacitor: CapacitorSheet,
    /// Output capacitor.
    pub output_capacitor: CapacitorSheet,
    /// Controller.
    pub controller: ControllerSheet,
    /// What happens at light load.
    pub light_load: LightLoad,
    /// Copper.
    pub board: BoardSheet,
    /// Heat from slot to slot.
    pub coupling: Vec<Coupling>,
}

/// An inductance so large that the ripple vanishes, H.
pub const HUGE: f64 = 1e3;

impl Rig {
    /// A synchronous stage without any loss and without ripple.
    pub fn ideal(input_voltage: f64, output_voltage: f64, load: f64, switching_frequency: f64) -> Self {
        Rig {
            output_voltage,
            point: OperatingPoint { input_voltage, load, ambient: 25.0, switching_frequency },
            high_side: switch(0.0),
            low_side: switch(0.0),
            diode: None,
            inductor: coil(HUGE, 0.0),
            input_capacitor: capacitor(0.0),
            output_capacitor: capacitor(0.0),
            controller: controller(),
            light_load: LightLoad::ForcedContinuous,
            board: BoardSheet::default(),
            coupling: Vec::new(),
        }
    }

    /// The stage with its curves fitted.
    pub fn stage(&self) -> Stage {
        let rectifier = match &self.diode {
            Some(diode) => RectifierSheet::Diode { freewheel_diode: placed(diode) },
            None => RectifierSheet::Synchronous { low_side: placed(&self.low_side), parallel_schottky: None },
        };
        let circuit = Circuit::Switched(SwitchedSheet {
            high_side: placed(&self.high_side),
            rectifier,
            inductor: placed(&self.inductor),
            input_capacitors: vec![placed(&self.input_capacitor)],
            output_capacitors: vec![placed(&self.output_capacitor)],
            controller: placed(&self.controller),
            light_load: self.light_load.clone(),
        });
        Stage::on_rail(&circuit, self.output_voltage, &self.board, &self.coupling)
    }

    /// Loss and temperature at the point.
    ///
    /// # Errors
    /// When the stage cannot run there.
    pub fn solve(&self) -> Result<Solved, Infeasible> {
        model::evaluate(&self.stage(), self.point)
    }

    /// Watts booked to an account; not a number when the stage cannot run.
    pub fn watts(&self, account: Account) -> f64 {
        self.solve().map_or(f64::NAN, |solved| solved.ledger.get(account))
    }

    /// Something about the waveform; not a number when the stage cannot run.
    pub fn wave(&self, of: impl Fn(&Waveform) -> f64) -> f64 {
        self.solve().ok().and_then(|solved| solved.waveform).map_or(f64::NAN, |waveform| of(&waveform))
    }

    /// Temperature of a slot, °C; not a number when the stage cannot run.
    pub fn temperature(&self, slot: Slot) -> f64 {
        self.solve().ok().and_then(|solved| solved.temperatures[slot.index()]).unwrap_or(f64::NAN)
    }

    /// Thermal loop gain where the search for temperatures ended.
    pub fn loop_gain(&self) -> f64 {
        let stage = self.stage();
        let Kind::Switched(switched) = &stage.kind else { return f64::NAN };
        match model::evaluate(&stage, self.point) {
            Err(Infeasible::NoStableTemperature { gain, .. }) => gain,
            Err(_) => f64::NAN,
            Ok(solved) => {
                let prepared = Prepared::new(switched, stage.output_voltage, self.point);
                let nodes = heat::nodes_of(&prepared, &solved);
                heat::loop_gain(&prepared, &nodes).unwrap_or(f64::NAN)
            }
        }
    }
}

/// One part of a kind.
pub fn placed<T: Clone>(sheet: &T) -> Placed<T> {
    Placed { name: "check".into(), sheet: Arc::new(sheet.clone()), count: 1 }
}

/// A MOSFET of a given on-resistance, whatever its temperature; its gate costs nothing and its edges take no time.
pub fn switch(on_resistance: f64) -> MosfetSheet {
    MosfetSheet {
        v_ds_max: Datum::of(100.0),
        v_gs_max: Datum::of(20.0),
        t_j_max: Datum::of(175.0),
        r_ds_on: vec![Datum::at(on_resistance, "v_gs", 10.0)],
        r_ds_on_hot: Some(HotRatio { t_j: Datum::of(125.0), ratio: Datum::of(1.0) }),
        v_gs_th: Datum::of(1.0),
        v_gs_plateau: Datum::at(1.5, "i_d", 1000.0),
        q_gs: Datum::of(0.0),
        q_gs2: Some(Datum::of(0.0)),
        q_gd: Datum::at(0.0, "v_ds", 20.0),
        q_g: vec![Datum::at(0.0, "v_gs", 10.0)],
        r_g: Some(Datum::of(0.0)),
        v_sd: points(&[(1.0, 0.05)]),
        edge_times: Some(edges([0.0; 4])),
        ..MosfetSheet::default()
    }
}

/// Edge times given: current rise, voltage fall, voltage rise, current fall, s.
pub fn edges([t_ri, t_fv, t_rv, t_fi]: [f64; 4]) -> EdgeTimes {
    EdgeTimes {
        t_ri: Some(Datum::of(t_ri)),
        t_fv: Some(Datum::of(t_fv)),
        t_rv: Some(Datum::of(t_rv)),
        t_fi: Some(Datum::of(t_fi)),
    }
}

/// Points (A, V) of a forward voltage.
pub fn points(list: &[(f64, f64)]) -> Vec<VoltagePoint> {
    list.iter().map(|(i, v)| VoltagePoint { i: Datum::of(*i), v: Datum::of(*v) }).collect()
}

/// A diode with a forward voltage through points (A, V), whatever its temperature.
pub fn diode(forward: &[(f64, f64)]) -> DiodeSheet {
    DiodeSheet {
        v_rrm: Datum::of(100.0),
        i_f_max: Datum::of(100.0),
        t_j_max: Datum::of(150.0),
        v_f: vec![ForwardCurve { t_j: Datum::of(25.0), points: points(forward) }],
        ..DiodeSheet::default()
    }
}

/// An inductor that does not saturate and stays at ambient.
pub fn coil(inductance: f64, resistance: f64) -> InductorSheet {
    InductorSheet {
        inductance: Datum::of(inductance),
        saturation: Some(Saturation { i: Datum::of(1e6), drop: Datum::of(0.0) }),
        dcr: Datum::of(resistance),
        ..InductorSheet::default()
    }
}

/// A capacitor of a given series resistance.
pub fn capacitor(resistance: f64) -> CapacitorSheet {
    CapacitorSheet {
        capacitance: Datum::of(1.0),
        esr: Datum::of(resistance),
        v_max: Datum::of(100.0),
        ..CapacitorSheet::default()
    }
}

/// A controller that draws nothing, drives both gates with 10 V from outside and leaves no dead time.
pub fn controller() -> ControllerSheet {
    let driver =
        || Driver { r_source: Some(Datum::of(1.0)), r_sink: Some(Datum::of(1.0)), ..Driver::default() };
    ControllerSheet {
        v_drive: Datum::of(10.0),
        high_side: driver(),
        low_side: Some(driver()),
        dead_time: Some(dead_time(0.0, 0.0)),
        drive_supply: DriveSupply::External(External { efficiency: Datum::of(1.0) }),
        i_q: Datum::of(0.0),
        v_in_max: Datum::of(100.0),
        ..ControllerSheet::default()
    }
}

/// Dead times after and before the high side's pulse, s.
pub fn dead_time(after: f64, before: f64) -> DeadTime {
    DeadTime { after_high_side: Datum::of(after), before_high_side: Datum::of(before), adaptive: None }
}
