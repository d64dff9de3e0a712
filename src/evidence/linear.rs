//! Worked examples of data sheets: linear regulators.

use super::check::{Bound, Check, Subject};
use super::rig::placed;
use crate::fitted::Stage;
use crate::grid::OperatingPoint;
use crate::ledger::Slot;
use crate::model::{self, Solved};
use crate::sheet::linear_regulator::{DropoutPoint, GroundPoint, LinearRegulatorSheet};
use crate::sheet::{BoardSheet, Datum};
use crate::stage::Circuit;
use crate::units::Dimension as D;

struct Example {
    v_in: f64,
    v_out: f64,
    load: f64,
    i_gnd: f64,
    ambient: f64,
    r_th: f64,
}

impl Example {
    fn solve(&self) -> Option<Solved> {
        let sheet = LinearRegulatorSheet {
            v_in_max: Datum::of(100.0),
            i_out_max: Datum::of(10.0),
            dropout: vec![DropoutPoint { i: Datum::of(1.0), v: Datum::of(0.3) }],
            i_gnd: vec![GroundPoint { i: Datum::of(self.load), i_gnd: Datum::of(self.i_gnd) }],
            r_th_ja: Some(Datum::of(self.r_th)),
            t_j_max: Datum::of(125.0),
            ..LinearRegulatorSheet::default()
        };
        let stage = Stage::on_rail(&Circuit::Linear(placed(&sheet)), self.v_out, &BoardSheet::default(), &[]);
        let point = OperatingPoint {
            input_voltage: self.v_in,
            load: self.load,
            ambient: self.ambient,
            switching_frequency: 0.0,
        };
        model::evaluate(&stage, point).ok()
    }

    fn loss(&self) -> f64 {
        self.solve().map_or(f64::NAN, |solved| solved.loss())
    }

    fn junction(&self) -> f64 {
        self.solve().and_then(|solved| solved.temperatures[Slot::Regulator.index()]).unwrap_or(f64::NAN)
    }
}

pub(super) fn checks(list: &mut Vec<Check>) {
    let mut add = |what: &str, source: &str, check: Check| {
        list.push(check.about(Subject::Linear, what, source));
    };
    let base = Example { v_in: 30.0, v_out: 5.0, load: 0.05, i_gnd: 1e-3, ambient: 25.0, r_th: 1.0 };
    add(
        "loss, 30 V to 5 V, 50 mA, 1 mA to ground",
        "LT3010 data sheet (Linear Technology), p. 11",
        Check::printed(1.28, 0.01, D::Power, base.loss()),
    );

    // ground currents of 0.2 mA and 1 mA: from memory
    let sheet = "LT3012B data sheet (Linear Technology), p. 11; its ground currents from memory";
    let at = |v_in, load, i_gnd| Example { v_in, load, i_gnd, ..base };
    let rows = [
        (0.76, at(48.0, 0.005, 0.2e-3), 0.23),
        (0.19, at(48.0, 0.05, 1e-3), 2.20),
        (0.04, at(72.0, 0.005, 0.2e-3), 0.35),
        (0.01, at(72.0, 0.05, 1e-3), 3.42),
    ];
    for (_, example, printed) in &rows {
        let what = format!("loss, {} V to 5 V, {} mA", example.v_in, 1e3 * example.load);
        let check = if *printed == 0.23 {
            Check::within(*printed, 0.01 / printed, D::Power, example.loss())
                .because("one unit of the last digit: the sheet's formula gives 0.2246 W and it prints 0.23")
        } else {
            Check::printed(*printed, 0.01, D::Power, example.loss())
        };
        add(&what, sheet, check);
    }
    let mean: f64 = rows.iter().map(|(share, example, _)| share * example.loss()).sum();
    add("mean of 76, 19, 4 and 1 % of the time", sheet, Check::printed(0.64, 0.01, D::Power, mean));

    let sheet = "LT3014B data sheet (Linear Technology), p. 9";
    let at = Example { load: 0.02, i_gnd: 0.55e-3, ambient: 50.0, r_th: 50.0, ..base };
    add("loss, 30 V to 5 V, 20 mA", sheet, Check::printed(0.52, 0.01, D::Power, at.loss()));
    add("junction, 50 K/W from 50 °C", sheet, Check::printed(76.0, 1.0, D::Temperature, at.junction()));

    let sheet = "PAM3112 data sheet (Diodes Inc), p. 8";
    let at = Example { v_in: 3.3, v_out: 1.2, load: 0.15, i_gnd: 70e-6, ambient: 40.0, r_th: 250.0 };
    add("loss, 3.3 V to 1.2 V, 150 mA", sheet, Check::printed(0.315, 1e-3, D::Power, at.loss()));
    add("junction, 250 K/W from 40 °C", sheet, {
        Check::within(118.75, 0.13 / 118.75, D::Temperature, at.junction())
            .because("the sheet multiplies watts that it has rounded by 250 K/W")
    });

    add(
        "efficiency, 12 V to 5 V: not above V_o/V_i",
        "common practice",
        Check::of(
            5.0 / 12.0,
            Example { v_in: 12.0, load: 1.0, ..base }
                .solve()
                .and_then(|s| s.efficiency())
                .unwrap_or(f64::NAN),
            D::Ratio,
            Bound::AtMost,
        )
        .because("a linear regulator passes the whole load current from the input"),
    );
}
