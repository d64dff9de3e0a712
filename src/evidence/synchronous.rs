//! Worked examples of data sheets: synchronous stages.

use super::check::{Check, Subject};
use super::rig::{HUGE, Rig, capacitor, coil, dead_time, points, switch};
use crate::ledger::{Account as A, Slot};
use crate::sheet::Datum;
use crate::sheet::mosfet::HotRatio;
use crate::units::Dimension as D;

const ADP1872: &str = "ADP1872/ADP1882 data sheet (Analog Devices), p. 29-30";
const NCP3170: &str = "NCP3170 data sheet (onsemi), p. 14-17, eq. 5-21";

pub(super) fn checks(list: &mut Vec<Check>) {
    let mut add = |what: &str, source: &str, check: Check| {
        list.push(check.about(Subject::Synchronous, what, source));
    };

    // 12 V to 1.8 V, 15 A, 300 kHz; no ripple term
    let mut rig = Rig::ideal(12.0, 1.8, 15.0, 300e3);
    rig.high_side = switch(5.4e-3);
    rig.low_side = switch(5.4e-3);
    let solved = rig.solve().map(|solved| solved.ledger);
    let both = solved.map_or(f64::NAN, |l| l.get(A::HighSideConduction) + l.get(A::LowSideConduction));
    add("channels of both switches, 15 A in 5.4 mΩ", ADP1872, Check::printed(1.215, 1e-3, D::Power, both));
    rig.low_side.v_sd = points(&[(15.0, 0.84)]);
    rig.controller.dead_time = Some(dead_time(20e-9, 20e-9));
    let dead = rig.watts(A::LowSideDeadTime);
    add(
        "body diode, 0.84 V for 20 ns at both edges",
        ADP1872,
        Check::printed(151.2e-3, 1e-4, D::Power, dead),
    );
    rig.inductor = coil(HUGE, 3e-3);
    add("winding of 3 mΩ", ADP1872, Check::printed(0.675, 1e-3, D::Power, rig.watts(A::InductorWinding)));
    let mut half = Rig::ideal(3.6, 1.8, 15.0, 300e3);
    half.input_capacitor = capacitor(1e-3);
    add(
        "input capacitors, 7.5 A RMS (the worst duty, one half) in 1 mΩ",
        ADP1872,
        Check::printed(56.25e-3, 1e-5, D::Power, half.watts(A::InputCapacitorsEsr)),
    );
    let ripple = 1.5 * 12f64.sqrt();
    let mut rippled = Rig::ideal(12.0, 1.8, 15.0, 300e3);
    rippled.inductor = coil((12.0 - 1.8) * 0.15 / (300e3 * ripple), 0.0);
    rippled.output_capacitor = capacitor(1.4e-3);
    add(
        "output capacitors, 1.5 A RMS in 1.4 mΩ",
        ADP1872,
        Check::printed(3.15e-3, 1e-5, D::Power, rippled.watts(A::OutputCapacitorsEsr)),
    );

    // 12 V to 3.3 V, 3 A, 500 kHz, 4.7 µH
    let mut rig = Rig::ideal(12.0, 3.3, 3.0, 500e3);
    rig.inductor = coil(4.7e-6, 0.0);
    add("duty", NCP3170, Check::printed(0.275, 1e-3, D::Ratio, rig.wave(|w| w.duty)));
    rig.inductor = coil(4.7e-6, 6.73e-3);
    rig.input_capacitor = capacitor(10e-3);
    add("ripple", NCP3170, Check::printed(1.02, 0.01, D::Current, rig.wave(|w| w.ripple())));
    add("RMS current of the inductor", NCP3170, {
        Check::printed(3.01, 0.01, D::Current, rig.wave(|w| w.inductor_square().sqrt()))
    });
    add("peak", NCP3170, Check::printed(3.51, 0.01, D::Current, rig.wave(|w| w.peak)));
    add("winding of 6.73 mΩ", NCP3170, Check::printed(61e-3, 1e-3, D::Power, rig.watts(A::InductorWinding)));
    add(
        "input capacitors of 10 mΩ",
        NCP3170,
        Check::printed(18e-3, 1e-3, D::Power, rig.watts(A::InputCapacitorsEsr)),
    );
    let mut lossless = rig.clone();
    lossless.inductor = coil(4.7e-6, 0.0);
    let input_rms = |rig: &Rig| (rig.watts(A::InputCapacitorsEsr) / 10e-3).sqrt();
    add("RMS current of the input capacitors, with the ripple", "calc: quadrature", {
        Check::printed(1.3484, 1e-4, D::Current, input_rms(&lossless))
    });
    rig.inductor = coil(HUGE, 6.73e-3);
    add("RMS current of the input capacitors, without the ripple", NCP3170, {
        Check::printed(1.34, 0.01, D::Current, input_rms(&rig))
    });

    // hot resistance, through the data sheet's ratio at the temperature
    let mut rig = Rig::ideal(25.0, 12.0, 5.0, 200e3);
    rig.point.ambient = 125.0;
    for side in [&mut rig.high_side, &mut rig.low_side] {
        *side = switch(6.9e-3);
        side.r_ds_on_hot = Some(HotRatio { t_j: Datum::of(125.0), ratio: Datum::of(1.5) });
    }
    let sheet = "LT8705 data sheet (Linear Technology), p. 38";
    add("low side, 25 V to 12 V, 5 A, 6.9 mΩ, 1.5 times when hot", sheet, {
        Check::printed(0.13, 0.01, D::Power, rig.watts(A::LowSideConduction))
    });
    // the lossless duty of the sheet: voltages a million-fold, so that the drops lose their influence
    rig.point.input_voltage *= 1e6;
    rig.output_voltage *= 1e6;
    rig.inductor = coil(1e6 * HUGE, 0.0);
    let squared = "LT8705 data sheet, p. 38, corrected: it squares the duty and prints 0.06 W";
    add("high side, the same", squared, {
        Check::printed(0.124, 1e-3, D::Power, rig.watts(A::HighSideConduction))
            .because("half a unit of the last digit; the square of a mean is not the mean of squares")
    });

    let mut rig = Rig::ideal(18.0, 12.0, 5.0, 200e3);
    rig.point.ambient = 70.0;
    rig.low_side = switch(9e-3);
    rig.low_side.r_ds_on_hot = Some(HotRatio { t_j: Datum::of(73.6), ratio: Datum::of(1.2) });
    rig.low_side.r_th_ja = Some(Datum::of(40.0));
    let sheet = "LTC3780 data sheet (Linear Technology), p. 23";
    add("low side, 18 V to 12 V, 5 A, 9 mΩ, 1.2 times when hot", sheet, {
        Check::printed(90e-3, 1e-3, D::Power, rig.watts(A::LowSideConduction))
    });
    add("its junction, 40 K/W from 70 °C", sheet, {
        Check::printed(73.6, 0.1, D::Temperature, rig.temperature(Slot::LowSide))
    });

    let mut rig = Rig::ideal(12.0, 5.0, 1.0, 100e3);
    rig.high_side.q_g = vec![Datum::at(25e-9, "v_gs", 10.0)];
    rig.low_side.q_g = vec![Datum::at(50e-9, "v_gs", 10.0)];
    let watts = [A::HighSideGateDrive, A::LowSideGateDrive, A::ControllerGateDrive].map(|a| rig.watts(a));
    add(
        "gate drive current, 25 nC and 50 nC at 100 kHz",
        "LTC1148 data sheet (Linear Technology), p. 12",
        Check::printed(7.5e-3, 1e-4, D::Current, watts.iter().sum::<f64>() / 10.0),
    );
}
