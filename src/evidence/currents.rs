//! Currents of lossless stages, from the watts booked in resistances of a nano-ohm.

use super::check::{Bound, Check, Subject};
use super::rig::{Rig, capacitor, coil, diode, switch};
use crate::ledger::Account as A;
use crate::sheet::Datum;
use crate::stage::LightLoad;
use crate::units::Dimension as D;

/// Resistance that measures a current, Ω.
const PROBE: f64 = 1e-9;
const SOURCE: &str = "calc: SciPy quadrature of the waveform";

/// A row of the table: how it runs, and its duties, ripple and RMS currents.
struct Row {
    v_in: f64,
    v_out: f64,
    load: f64,
    inductance: f64,
    frequency: f64,
    drops: Option<(f64, f64)>,
    duties: [f64; 2],
    ripple: f64,
    /// Inductor, switch, freewheel path, output and input capacitors.
    rms: [f64; 5],
}

#[rustfmt::skip]
const ROWS: [Row; 6] = [
    Row { v_in: 12.0, v_out: 5.0, load: 3.0, inductance: 10e-6, frequency: 300e3, drops: None,
        duties: [0.416666667, 0.583333333], ripple: 0.972222222,
        rms: [3.013099402, 1.944947300, 2.301292681, 0.280656381, 1.490073824] },
    Row { v_in: 12.0, v_out: 3.3, load: 5.0, inductance: 4.7e-6, frequency: 500e3, drops: None,
        duties: [0.275, 0.725], ripple: 1.018085106,
        rms: [5.008630030, 2.626547746, 4.264694797, 0.293895855, 2.237884730] },
    Row { v_in: 5.0, v_out: 1.2, load: 3.0, inductance: 1e-6, frequency: 1e6, drops: None,
        duties: [0.24, 0.76], ripple: 0.912,
        rms: [3.011529844, 1.475342292, 2.625390851, 0.263271723, 1.287724691] },
    Row { v_in: 12.0, v_out: 3.3, load: 2.0, inductance: 10e-6, frequency: 500e3, drops: Some((0.05, 0.45)),
        duties: [0.302419355, 0.697580645], ripple: 0.523185484,
        rms: [2.005694457, 1.102984896, 1.675181952, 0.151030640, 0.922358833] },
    Row { v_in: 12.0, v_out: 5.0, load: 0.2, inductance: 10e-6, frequency: 300e3, drops: None,
        duties: [0.267261242, 0.374165739], ripple: 0.623609564,
        rms: [0.288353848, 0.186131609, 0.220233890, 0.207720827, 0.166434766] },
    Row { v_in: 24.0, v_out: 5.0, load: 0.1, inductance: 22e-6, frequency: 400e3, drops: None,
        duties: [0.138918126, 0.527888877], ripple: 0.299936862,
        rms: [0.141406474, 0.064542930, 0.125817332, 0.099978952, 0.061088149] },
];

impl Row {
    fn rig(&self) -> Rig {
        let mut rig = Rig::ideal(self.v_in, self.v_out, self.load, self.frequency);
        rig.high_side = switch(self.drops.map_or(PROBE, |(v_on, _)| v_on / self.load));
        rig.diode = self.drops.map(|(_, v_f)| diode(&[(1.0, v_f)]));
        rig.inductor = coil(self.inductance, PROBE);
        rig.input_capacitor = capacitor(PROBE);
        rig.output_capacitor = capacitor(PROBE);
        // the path of the rectifier, synchronous or not
        rig.board.low_side_path = Some(Datum::of(PROBE));
        rig.light_load = LightLoad::DiodeEmulation;
        rig
    }
}

pub(super) fn checks(list: &mut Vec<Check>) {
    for row in &ROWS {
        let rig = row.rig();
        let discontinuous = row.duties[0] + row.duties[1] < 0.999;
        let at = format!(
            "{} V to {} V, {} A, {} µH, {} kHz{}",
            row.v_in,
            row.v_out,
            row.load,
            (1e6 * row.inductance * 1e3).round() / 1e3,
            row.frequency / 1e3,
            if discontinuous { ", discontinuous" } else { "" }
        );
        let switch_resistance = row.drops.map_or(PROBE, |(v_on, _)| v_on / row.load);
        let rms = |account, resistance: f64| (rig.watts(account) / resistance).sqrt();
        let ours = [
            ("D1", row.duties[0], rig.wave(|w| w.duty), D::Ratio),
            ("D2", row.duties[1], rig.wave(|w| w.off_duty), D::Ratio),
            ("ripple", row.ripple, rig.wave(|w| w.ripple()), D::Current),
            ("RMS of the inductor", row.rms[0], rms(A::InductorWinding, PROBE), D::Current),
            ("RMS of the switch", row.rms[1], rms(A::HighSideConduction, switch_resistance), D::Current),
            ("RMS of the rectifier", row.rms[2], rms(A::BoardCopper, PROBE), D::Current),
            ("RMS of the output capacitors", row.rms[3], rms(A::OutputCapacitorsEsr, PROBE), D::Current),
            ("RMS of the input capacitors", row.rms[4], rms(A::InputCapacitorsEsr, PROBE), D::Current),
        ];
        let mut worst: f64 = 0.0;
        let mut details = Vec::new();
        for (name, outside, value, dimension) in ours {
            let check = Check::within(outside, 3e-8, dimension, value)
                .because("nine printed digits, and a nano-ohm in the probes")
                .about(Subject::Currents, format!("{name}, {at}"), SOURCE)
                .one_of_many();
            // not a number counts as far off
            worst = if check.difference().abs() <= worst { worst } else { check.difference().abs() };
            details.push(check);
        }
        list.push(
            Check::of(3e-8, worst, D::Number, Bound::AtMost)
                .because("nine printed digits, and a nano-ohm in the probes")
                .about(
                    Subject::Currents,
                    format!("duties, ripple, five RMS currents, {at}: worst difference"),
                    SOURCE,
                ),
        );
        list.append(&mut details);
    }
}
