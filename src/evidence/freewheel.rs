//! Worked examples of data sheets: stages with a freewheel diode, and conduction fits of diodes.
//!
//! Data sheets take the lossless duty. Ours knows the drops, so a check that needs the lossless duty raises both voltages
//! a million-fold: currents and conduction stay, the drops lose their influence on the duty.

use super::check::{Check, Subject};
use super::rig::{HUGE, Rig, coil, diode, edges, switch};
use crate::budget::Coupling;
use crate::ledger::{Account as A, Slot};
use crate::sheet::Datum;
use crate::units::Dimension as D;

/// Factor by which voltages are raised to make drops negligible.
const LOFTY: f64 = 1e6;

/// A stage at one point of a worked example.
struct Example {
    v_in: f64,
    v_out: f64,
    load: f64,
    frequency: f64,
    switch: f64,
    v_f: f64,
    winding: f64,
}

impl Example {
    /// With the lossless duty.
    fn rig(&self) -> Rig {
        let mut rig = Rig::ideal(LOFTY * self.v_in, LOFTY * self.v_out, self.load, self.frequency);
        rig.high_side = switch(self.switch);
        rig.diode = Some(diode(&[(self.load, self.v_f)]));
        rig.inductor = coil(LOFTY * HUGE, self.winding);
        rig
    }

    /// Overlap with linear edges of a duration together, s.
    fn overlap(&self, edge: f64) -> f64 {
        let mut rig = Rig::ideal(self.v_in, self.v_out, self.load, self.frequency);
        rig.diode = Some(diode(&[(self.load, self.v_f)]));
        rig.high_side.edge_times = Some(edges([0.5 * edge, 0.0, 0.0, 0.5 * edge]));
        rig.watts(A::HighSideOverlap)
    }
}

pub(super) fn checks(list: &mut Vec<Check>) {
    let mut add = |what: &str, source: &str, check: Check| {
        list.push(check.about(Subject::Freewheel, what, source));
    };

    let at =
        Example { v_in: 12.0, v_out: 5.0, load: 1.0, frequency: 500e3, switch: 0.3, v_f: 0.63, winding: 0.1 };
    let sheet = "LT1956 data sheet (Linear Technology), p. 19";
    let rig = at.rig();
    add("switch of 0.3 Ω, 12 V to 5 V, 1 A", sheet, {
        Check::printed(0.125, 1e-3, D::Power, rig.watts(A::HighSideConduction))
    });
    add("overlap, edges of 57 ns in all", sheet, Check::printed(0.171, 1e-3, D::Power, at.overlap(57e-9)));
    add("diode of 0.63 V", sheet, {
        Check::printed(0.37, 0.01, D::Power, rig.watts(A::FreewheelDiodeConduction))
    });
    add("winding of 0.1 Ω", sheet, Check::printed(0.1, 0.01, D::Power, rig.watts(A::InductorWinding)));

    let sheet = "LT3507 data sheet (Linear Technology), p. 22-23";
    let rows = [
        (2.5, 1.6, 0.18, [0.14, 0.11, 0.46, 0.13], 0.01),
        (3.3, 1.0, 0.22, [0.09, 0.07, 0.24, 0.05], 0.005),
        (1.2, 1.0, 0.22, [0.03, 0.07, 0.36, 0.05], 0.005),
    ];
    for (v_out, load, r_switch, [conduction, overlap, forward, winding], half) in rows {
        let at =
            Example { v_in: 8.0, v_out, load, frequency: 500e3, switch: r_switch, v_f: 0.45, winding: 0.05 };
        let rig = at.rig();
        // the sheet adds the forward voltage to the output alone
        let raised = Example { v_out: v_out + 0.45, ..at };
        let name = |part: &str| format!("{part}, 8 V to {v_out} V, {load} A");
        add(&name("switch"), sheet, {
            Check::printed(conduction, 0.01, D::Power, rig.watts(A::HighSideConduction))
        });
        add(&name("overlap, 17 ns an edge"), sheet, {
            Check::printed(overlap, 0.01, D::Power, raised.overlap(34e-9))
        });
        add(&name("diode"), sheet, {
            let ours = raised.rig().watts(A::FreewheelDiodeConduction);
            let reason = if half > 0.005 {
                "one unit of the last digit: the sheet's own formula gives 0.454 W and it prints 0.46"
            } else {
                "half a unit of the last printed digit"
            };
            Check::within(forward, half / forward, D::Power, ours).because(reason)
        });
        add(&name("winding"), sheet, {
            Check::printed(winding, 0.01, D::Power, rig.watts(A::InductorWinding))
        });
    }

    monolithic(&mut add);
    fits(&mut add);
}

/// A switch and its controller on one die: every loss of the example heats the same junction.
fn monolithic(add: &mut impl FnMut(&str, &str, Check)) {
    let sheet = "B5973D data sheet (ST), p. 27-28";
    let v_f = 0.05;
    // the output voltage that makes the sheet's duty of 0.3 with the drops
    let v_out = 0.3 * (12.0 - 2.0 * 0.4 + v_f) - v_f;
    let mut rig = Rig::ideal(12.0, v_out, 2.0, 250e3);
    rig.point.ambient = 70.0;
    rig.high_side = switch(0.4);
    rig.high_side.edge_times = Some(edges([70e-9, 0.0, 0.0, 70e-9]));
    rig.high_side.r_th_ja = Some(Datum::of(42.0));
    rig.diode = Some(diode(&[(2.0, v_f)]));
    rig.controller.i_q = Datum::of(2.5e-3);
    rig.coupling = vec![Coupling { heated: Slot::HighSide, heating: Slot::Controller, resistance: 42.0 }];
    let [conduction, overlap, bias] =
        [A::HighSideConduction, A::HighSideOverlap, A::ControllerBias].map(|account| rig.watts(account));
    add("switch of 0.4 Ω, 2 A at a duty of 0.3", sheet, Check::printed(0.48, 0.01, D::Power, conduction));
    add("overlap, 70 ns an edge at 12 V", sheet, Check::printed(0.42, 0.01, D::Power, overlap));
    add("bias of 2.5 mA", sheet, Check::printed(0.03, 0.01, D::Power, bias));
    add("all three", sheet, Check::printed(0.93, 0.01, D::Power, conduction + overlap + bias));
    add("junction, 42 K/W from 70 °C", sheet, {
        Check::printed(109.06, 0.01, D::Temperature, rig.temperature(Slot::HighSide))
    });
}

/// Threshold-plus-slope laws printed by a maker.
fn fits(add: &mut impl FnMut(&str, &str, Check)) {
    // half the time in the diode, currents from 8 A to 16 A
    let mean = |points: &[(f64, f64)]| {
        let mut rig = Rig::ideal(LOFTY * 2.0, LOFTY, 12.0, 100e3);
        rig.diode = Some(diode(points));
        rig.inductor = coil(LOFTY * 0.5 / (100e3 * 8.0), 0.0);
        rig.watts(A::FreewheelDiodeConduction) / 0.5
    };
    let mean_square = (8.0 * 8.0 + 8.0 * 16.0 + 16.0 * 16.0) / 3.0;
    add(
        "STPS16L40CT from its points, 0.45 V at 8 A and 0.64 V at 16 A, ramp of 8-16 A",
        "data sheet (ST)",
        {
            Check::within(
                0.26 * 12.0 + 0.024 * mean_square,
                0.011,
                D::Power,
                mean(&[(8.0, 0.45), (16.0, 0.64)]),
            )
            .because("0.024 Ω is rounded to 2 %, and makes half of the loss")
        },
    );
    add("STPS10L40C, threshold and slope given as points, ramp of 8-16 A", "data sheet (ST)", {
        let ours = mean(&[(0.0, 0.33), (20.0, 0.33 + 20.0 * 0.026)]);
        Check::within(0.33 * 12.0 + 0.026 * mean_square, 1e-5, D::Power, ours)
            .because("the same law; the duty is lossless to a millionth")
    });
}
