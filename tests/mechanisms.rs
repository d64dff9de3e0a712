//! Single mechanisms against their equations worked out by hand, with plain numbers: what no published example covers.
//!
//! Source of each: the definition of the quantity, written out here a second time. Tolerance 1e-9 where not said: rounding
//! alone, since temperatures play no part.

use lossbook::evidence::rig::{HUGE, Rig, coil, dead_time, diode, edges, points, switch};
use lossbook::ledger::Account as A;
use lossbook::loss::esr::{End, esr};
use lossbook::loss::overlap::{EdgeConditions, textbook};
use lossbook::parts::capacitor::{Bank, Kind};
use lossbook::sheet::mosfet::Recovery;
use lossbook::sheet::{Datum, diode::LeakagePoint};
use lossbook::stage::LightLoad;
use lossbook::waveform::{Mode, Waveform, ramp_mean_square};

fn same(ours: f64, by_hand: f64, tolerance: f64) {
    assert!(by_hand > 0.0 && (ours / by_hand - 1.0).abs() <= tolerance, "ours {ours}, by hand {by_hand}");
}

/// 12 V to 3 V, D = 1/4, 100 kHz, 11.25 µH: 2 A of ripple.
fn rippled(load: f64) -> Rig {
    let mut rig = Rig::ideal(12.0, 3.0, load, 100e3);
    rig.inductor = coil(9.0 * 0.25 / (100e3 * 2.0), 0.0);
    rig
}

#[test]
fn input_path_carries_the_mean_input_current_hot() {
    let mut rig = rippled(4.0);
    rig.board.input_path = Some(Datum::of(1e-2));
    rig.board.temperature = Some(Datum::of(100.0));
    // a quarter of 4 A; copper at 100 °C over 25 °C
    same(rig.watts(A::BoardCopper), 1e-2 * (1.3144 / 1.01965), 1e-9);
}

#[test]
fn negative_valley_flows_in_the_high_sides_diode_once_the_node_is_up() {
    let mut rig = rippled(0.0);
    rig.high_side.v_sd = points(&[(1.0, 0.7)]);
    rig.high_side.q_oss = Some(Datum::at(4e-9, "v_ds", 12.0));
    rig.low_side.q_oss = Some(Datum::at(6e-9, "v_ds", 12.0));
    rig.controller.dead_time = Some(dead_time(50e-9, 30e-9));
    // valley -1 A: 10 nC take 10 ns of 30 ns
    // the least drop of the low side's diode, 50 mV for 80 ns, moves the duty by some 1e-4
    same(rig.watts(A::HighSideDeadTime), 1.0 * 0.7 * 20e-9 * 100e3, 1e-3);
    rig.low_side.edge_times = Some(edges([0.0, 0.0, 0.0, 5e-9]));
    same(rig.watts(A::LowSideOverlap), 0.5 * 12.0 * 1.0 * 5e-9 * 100e3, 1e-3);
}

#[test]
fn gate_drive_is_shared_by_resistances() {
    let mut rig = Rig::ideal(12.0, 3.0, 1.0, 200e3);
    rig.high_side.q_g = vec![Datum::at(20e-9, "v_gs", 10.0)];
    rig.low_side.q_g = vec![Datum::at(50e-9, "v_gs", 10.0)];
    rig.high_side.r_g = Some(Datum::of(1.0));
    rig.low_side.r_g = Some(Datum::of(2.0));
    // drivers of 1 Ω each way
    let (high, low) = (200e3 * 20e-9 * 10.0 * 0.5, 200e3 * 50e-9 * 10.0 * 2.0 / 3.0);
    same(rig.watts(A::HighSideGateDrive), high, 1e-9);
    same(rig.watts(A::LowSideGateDrive), low, 1e-9);
    same(rig.watts(A::ControllerGateDrive), 200e3 * 70e-9 * 10.0 - high - low, 1e-9);
}

#[test]
fn leakage_flows_at_the_input_and_at_the_resting_voltage() {
    let mut rig = rippled(0.25);
    let mut sheet = diode(&[(1.0, 0.5)]);
    sheet.i_r = vec![LeakagePoint { v_r: Datum::of(12.0), t_j: Datum::of(25.0), i: Datum::of(1e-3) }];
    rig.diode = Some(sheet);
    let (d1, d2) = (rig.wave(|w| w.duty), rig.wave(|w| w.off_duty));
    assert!(d1 + d2 < 0.9);
    // in proportion to the voltage
    let by_hand = d1 * 12.0 * 1e-3 + (1.0 - d1 - d2) * 3.0 * 0.25e-3;
    same(rig.watts(A::FreewheelDiodeLeakage), by_hand, 1e-9);
}

#[test]
fn a_short_rest_lifts_the_node_in_part() {
    let mut rig = rippled(0.8);
    rig.light_load = LightLoad::DiodeEmulation;
    rig.high_side.q_oss = Some(Datum::at(400e-9, "v_ds", 12.0));
    rig.low_side.q_oss = Some(Datum::at(400e-9, "v_ds", 12.0));
    rig.controller.dead_time = Some(dead_time(1e-6, 0.0));
    let rest = (1.0 - rig.wave(|w| w.duty) - rig.wave(|w| w.off_duty)) / 100e3;
    let quarter = std::f64::consts::FRAC_PI_2 * (11.25e-6 * 800e-9 / 12.0f64).sqrt();
    assert!(rest < 0.8 * quarter, "{rest} {quarter}");
    let v = 3.0 * rest / quarter;
    let q = |v: f64| 400e-9 * (v / 12.0).sqrt();
    let e = |v: f64| q(v) * v / 3.0;
    let by_hand = e(12.0 - v) + 12.0 * (q(12.0) - q(v)) - (e(12.0) - e(v));
    same(rig.watts(A::HighSideOutputCharge), by_hand * 100e3, 1e-9);
}

#[test]
fn the_textbook_sum_is_what_textbooks_print() {
    let at = EdgeConditions {
        v_in: 12.0,
        i_on: 2.0,
        i_off: 3.0,
        node_energy: 0.0,
        surplus_current: 1.0,
        frequency: 2e5,
    };
    let times = lossbook::edges::EdgeDurations { t_ri: 1e-9, t_fv: 2e-9, t_rv: 3e-9, t_fi: 4e-9 };
    same(textbook(&at, times), 0.5 * 12.0 * (2.0 * 3e-9 + 3.0 * 7e-9) * 2e5, 1e-12);
}

#[test]
fn recovery_grows_with_the_root_of_the_current() {
    let mut rig = rippled(5.0);
    let law = Recovery { charge: Datum::at(20e-9, "i", 1.0), ..Recovery::default() };
    rig.low_side.q_rr = Some(law.clone());
    // valley 4 A: twice the charge
    same(rig.watts(A::HighSideRecovery), 12.0 * 40e-9 * 100e3, 1e-9);
    // the test counted 10 nC of output charge
    let mut counted = Recovery { includes_q_oss: Some(true), ..law };
    counted.charge.conditions.extend(Datum::at(0.0, "v_r", 12.0).conditions);
    rig.low_side.q_rr = Some(counted);
    rig.low_side.q_oss = Some(Datum::at(10e-9, "v_ds", 12.0));
    same(rig.watts(A::HighSideRecovery), 12.0 * 30e-9 * 100e3, 1e-9);
}

#[test]
fn a_snubber_is_charged_and_discharged_once_a_cycle() {
    let mut rig = rippled(4.0);
    rig.board.snubber = Some(Datum::of(1e-9));
    same(rig.watts(A::BoardSnubber), 1e-9 * 144.0 * 100e3, 1e-12);
}

#[test]
fn the_shortest_on_time_sets_the_smallest_peak() {
    let mut rig = rippled(1e-3);
    rig.light_load = LightLoad::DiodeEmulation;
    rig.controller.t_on_min = Some(Datum::of(200e-9));
    same(rig.wave(|w| w.peak), 9.0 * 200e-9 / 11.25e-6, 1e-9);
    assert_eq!(rig.wave(|w| f64::from(u8::from(w.mode == Mode::PulseSkipping))), 1.0);
    // charge balance: the load is the mean of the pulses
    same(rig.wave(|w| 0.5 * w.peak * (w.duty + w.off_duty)), 1e-3, 1e-9);
    rig.light_load = LightLoad::PulseSkipping(lossbook::stage::SkipPeak { peak: Datum::of(0.5) });
    same(rig.wave(|w| w.peak), 0.5, 1e-9);
}

#[test]
fn source_inductance_slows_the_current() {
    let mut rig = Rig::ideal(12.0, 3.0, 10.0, 100e3);
    rig.inductor = coil(HUGE, 0.0);
    rig.high_side = lossbook::sheet::MosfetSheet {
        l_source: Some(Datum::of(1e-9)),
        v_gs_plateau: Datum::at(2.0, "i_d", 10.0),
        edge_times: None,
        ..switch(0.0)
    };
    // threshold 1 V, plateau 2 V, drive 10 V: both edges by the inductance alone
    let (rise, fall) = (1e-9 * 10.0 / (10.0 - 1.5), 1e-9 * 10.0 / 1.5);
    same(rig.watts(A::HighSideOverlap), 0.5 * 12.0 * 10.0 * (rise + fall) * 100e3, 1e-6);
}

/// A waveform by its duties and ends.
fn waveform(duty: f64, off_duty: f64, valley: f64, peak: f64) -> Waveform {
    let mode = if duty + off_duty < 0.999 { Mode::Discontinuous } else { Mode::Continuous };
    Waveform {
        mode,
        duty,
        off_duty,
        valley,
        peak,
        mean_square: ramp_mean_square(valley, peak),
        frequency: 200e3,
        clock: 200e3,
        v_on: 9.0,
        falling_slope: 1.0,
        inductance: 1e-5,
    }
}

/// Watts of a bank of two kinds: Fourier coefficients by summing samples, impedances by division of complex numbers, scaled
/// to the RMS current.
fn by_samples(bank: &Bank, current: impl Fn(f64) -> f64, frequency: f64, mean_square: f64) -> f64 {
    let samples = 20_000;
    let place = |k: u32| (f64::from(k) + 0.5) / f64::from(samples);
    let values: Vec<f64> = (0..samples).map(|k| current(place(k))).collect();
    let (mut sum, mut watts) = (0.0, 0.0);
    for n in 1..=200 {
        let w = std::f64::consts::TAU * f64::from(n);
        let (mut re, mut im) = (0.0, 0.0);
        for (k, value) in (0..samples).zip(&values) {
            let (sin, cos) = (w * place(k)).sin_cos();
            re += value * cos / f64::from(samples);
            im -= value * sin / f64::from(samples);
        }
        let square = 2.0 * (re * re + im * im);
        let z = |kind: &Kind| {
            let omega = w * frequency;
            (kind.esr, omega * kind.esl - 1.0 / (omega * kind.capacitance))
        };
        let [(r1, x1), (r2, x2)] = [z(&bank.kinds[0]), z(&bank.kinds[1])];
        // current divider: each kind carries the other's impedance over the sum of both
        let total = (r1 + r2).powi(2) + (x1 + x2).powi(2);
        watts += square * (r1 * (r2 * r2 + x2 * x2) + r2 * (r1 * r1 + x1 * x1)) / total;
        sum += square;
    }
    watts * mean_square / sum
}

#[test]
fn mixed_banks_share_by_impedance() {
    // the two resonate with one another near the fifth harmonic, so that the shape of the current matters
    let ceramic = Kind { n: 1.0, capacitance: 2.2e-6, esr: 3e-3, esl: 0.5e-9 };
    let bulk = Kind { n: 1.0, capacitance: 22e-6, esr: 60e-3, esl: 10e-9 };
    let bank = Bank { kinds: vec![ceramic, bulk] };
    for w in [waveform(0.25, 0.75, 3.0, 5.0), waveform(0.2, 0.5, 0.0, 2.0)] {
        let end = w.duty + w.off_duty;
        let rising = |x: f64| w.valley + (w.peak - w.valley) * x / w.duty;
        let switch_current = |x: f64| if x < w.duty { rising(x) } else { 0.0 };
        let inductor_current = |x: f64| match x {
            x if x < w.duty => rising(x),
            x if x < end => w.peak - (w.peak - w.valley) * (x - w.duty) / w.off_duty,
            _ => 0.0,
        };
        // 200 harmonics of samples against as many closed ones
        let ours = esr(&bank, End::Input, &w, 1.0).watts;
        same(ours, by_samples(&bank, switch_current, w.frequency, 1.0), 2e-3);
        let ours = esr(&bank, End::Output, &w, 1.0).watts;
        same(ours, by_samples(&bank, inductor_current, w.frequency, 1.0), 2e-3);
    }
}

/// Rectangular pulses of a thousandth of the period: |c_n| = I sin(π n D)/(π n), all harmonics summed one by one.
#[test]
fn short_pulses_need_many_harmonics() {
    let first = Kind { n: 1.0, capacitance: 1e-6, esr: 3e-3, esl: 0.2e-9 };
    let second = Kind { n: 1.0, capacitance: 100e-6, esr: 30e-3, esl: 5e-9 };
    let bank = Bank { kinds: vec![first, second] };
    let w = Waveform { frequency: 10e3, clock: 10e3, ..waveform(1e-3, 0.999, 4.0, 4.0) };
    let (mut sum, mut watts) = (0.0, 0.0);
    for n in 1..=12_013 {
        let n = f64::from(n);
        let square = 2.0 * ((std::f64::consts::PI * n * 1e-3).sin() / (std::f64::consts::PI * n)).powi(2);
        let omega = std::f64::consts::TAU * n * 10e3;
        let [(r1, x1), (r2, x2)] =
            [first, second].map(|k| (k.esr, omega * k.esl - 1.0 / (omega * k.capacitance)));
        let total = (r1 + r2).powi(2) + (x1 + x2).powi(2);
        watts += square * (r1 * (r2 * r2 + x2 * x2) + r2 * (r1 * r1 + x1 * x1)) / total;
        sum += square;
    }
    // beyond 4096 the spectrum is sampled
    same(esr(&bank, End::Input, &w, 1.0).watts, watts / sum, 5e-3);
}
