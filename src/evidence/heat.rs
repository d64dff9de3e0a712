//! Temperatures that settle together with the loss.

use super::check::{Bound, Check, Subject};
use super::rig::{HUGE, Rig, coil, diode, points, switch};
use crate::budget::Coupling;
use crate::ledger::Slot;
use crate::sheet::Datum;
use crate::sheet::diode::{ForwardCurve, LeakagePoint};
use crate::sheet::mosfet::HotRatio;
use crate::units::Dimension as D;

/// 0.00393 /K at 20 °C, referred to 25 °C.
const COPPER_AT_25: f64 = 0.003_93 / (1.0 + 0.003_93 * 5.0);

pub(super) fn checks(list: &mut Vec<Check>) {
    let mut add = |what: &str, source: &str, check: Check| {
        list.push(check.about(Subject::Heat, what, source));
    };

    // R_25 (T/298.15 K)^2.3 with a constant loss beside it
    let rows = [(3.0, 20e-3, 0.1, 50.0, 25.0, 40.081694867), (5.0, 10e-3, 0.2, 40.0, 60.0, 83.056121065)];
    for (load, resistance, constant, r_th, ambient, outside) in rows {
        // duty of one half, undisturbed by the drops: voltages of a million
        let mut rig = Rig::ideal(2e6, 1e6, load, 100e3);
        rig.inductor = coil(1e6 * HUGE, 0.0);
        rig.point.ambient = ambient;
        rig.high_side = switch(2.0 * resistance);
        let ratio = (398.15f64 / 298.15).powf(2.3);
        rig.high_side.r_ds_on_hot = Some(HotRatio { t_j: Datum::of(125.0), ratio: Datum::of(ratio) });
        rig.high_side.r_th_ja = Some(Datum::of(r_th));
        rig.controller.i_q = Datum::of(constant / 2e6);
        rig.coupling = vec![Coupling { heated: Slot::HighSide, heating: Slot::Controller, resistance: r_th }];
        let what = format!(
            "switch, {load} A in {} mΩ, {constant} W more, {r_th} K/W from {ambient} °C",
            1e3 * resistance
        );
        add(&what, "calc: root of T = T_a + R_th P(T), SciPy", {
            Check::within(outside, 1e-6, D::Temperature, rig.temperature(Slot::HighSide)).because(
                "temperatures settle to a millionth of a kelvin; the duty is one half to a millionth",
            )
        });
    }

    // a linear law has a closed solution: copper
    let (load, resistance, r_th) = (3.0, 20e-3, 50.0);
    let mut rig = Rig::ideal(12.0, 5.0, load, 100e3);
    rig.inductor = coil(HUGE, resistance);
    rig.inductor.r_th = Some(Datum::of(r_th));
    let heat = r_th * load * load * resistance;
    let closed = (25.0 + heat * (1.0 - 25.0 * COPPER_AT_25)) / (1.0 - COPPER_AT_25 * heat);
    add("winding, 3 A in 20 mΩ, 50 K/W from 25 °C", "closed solution of a linear law", {
        Check::within(closed, 1e-7, D::Temperature, rig.temperature(Slot::Inductor))
            .because("temperatures settle to a millionth of a kelvin")
    });
    rig.point.load = 10.0;
    rig.inductor.dcr = Datum::of(30e-3);
    rig.inductor.r_th = Some(Datum::of(1.08 / (COPPER_AT_25 * 3.0)));
    add(
        "winding that cannot settle: thermal loop gain reported",
        "loop gain of a linear law, a R_th I² R",
        {
            Check::within(1.08, 1e-4, D::Number, rig.loop_gain())
                .because("the gain is a central difference over 2 mK and 16 squarings")
        },
    );
    add("... and no temperature", "no fixed point of a linear law with a gain above 1", {
        let refused = if rig.solve().is_err() { 1.0 } else { 0.0 };
        Check::within(1.0, 0.0, D::Number, refused).because("yes or no")
    });

    leakage(&mut add);
}

/// Runaway of a Schottky diode by its leakage.
fn leakage(add: &mut impl FnMut(&str, &str, Check)) {
    let sheet = "AN869 (ST, 2004): 1/(V_R (1 - δ) c R_th)";
    // V_R 15 V for half the time, 0.055 /K, 10 K/W; 100 mA at the junction temperature that settles
    let mut rig = Rig::ideal(15.0, 7.0, 6.0, 100e3);
    let leak_at =
        |i: f64, t_j: f64| LeakagePoint { v_r: Datum::of(15.0), t_j: Datum::of(t_j), i: Datum::of(i) };
    let law = |i_125: f64| vec![leak_at(i_125, 125.0), leak_at(i_125 * (-5.5f64).exp(), 25.0)];
    let forward = |v: f64| vec![ForwardCurve { t_j: Datum::of(25.0), points: points(&[(1.0, v)]) }];
    let mut sheet_of = diode(&[]);
    sheet_of.v_f = forward(1.0);
    sheet_of.i_r = law(210e-3);
    sheet_of.r_th_ja = Some(Datum::of(10.0));
    rig.diode = Some(sheet_of.clone());
    rig.point.ambient = 60.0;
    let junction = rig.temperature(Slot::FreewheelDiode);
    let leakage = 210e-3 * (0.055 * (junction - 125.0)).exp();
    add("critical leakage: leakage over loop gain, 15 V, half the time, 10 K/W", sheet, {
        Check::within(0.2424, 2e-3, D::Current, leakage / rig.loop_gain())
            .because("printed 242 mA; the gain is a central difference")
    });

    // 3 W forward: 6 A, 1 V, half the time
    sheet_of.r_th_ja = Some(Datum::of(10.1));
    rig.diode = Some(sheet_of);
    let rows = [(40.0, 71.1216), (60.0, 93.0433), (75.0, 113.9745), (78.9, 126.0945)];
    let source = "calc: root of T = T_a + R_th P(T), SciPy, with the data of AN869";
    for (ambient, outside) in rows {
        rig.point.ambient = ambient;
        let what =
            format!("Schottky with 210 mA leakage at 125 °C, 3 W forward, 10.1 K/W, ambient {ambient} °C");
        add(&what, source, {
            Check::printed(outside, 1e-4, D::Temperature, rig.temperature(Slot::FreewheelDiode))
        });
    }
    rig.point.ambient = 79.2;
    add("the same at 79.2 °C: no stable temperature", source, {
        let refused = if rig.solve().is_err() { 1.0 } else { 0.0 };
        Check::of(1.0, refused, D::Number, Bound::AtLeast).because("yes or no")
    });
}
