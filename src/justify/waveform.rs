//! The waveform: resistances in the path, duty, ripple, valley, peak, mode (E1 to E6).

use super::book::{Book, Chapter, PURE, SQUARE_AMPERES};
use super::case::Case;
use super::{laws, resistance};
use crate::fitted::{RECTIFIER, Rectifier, SCHOTTKY};
use crate::units::Dimension as D;
use crate::waveform::{Mode, OffPath};

pub(super) fn derive(case: &Case<'_>, book: &mut Book<'_>) {
    book.open(Chapter::Waveform);
    resistance::board(case, book);
    drive(case, book);
    resistance::channel(&resistance::high_side(case), book);
    if let Some(low) = resistance::low_side(case) {
        resistance::channel(&low, book);
    }
    resistance::winding(case, book);
    inductance(case, book);
    book.law(&laws::BALANCE).step(
        "V_O: voltage at the end of the output path",
        "V_OUT + I_OUT·R_LOAD·k_B",
        case.prepared.v_out,
        D::Voltage,
    );
    if case.continuous() {
        continuous(case, book);
    } else {
        discontinuous(case, book);
    }
    let waveform = case.waveform();
    let equation = if case.continuous() { "m" } else { "(D + D_2)·m" };
    book.law(&laws::RAMP).step(
        "I_L²: squared RMS current of the inductor",
        equation,
        waveform.inductor_square(),
        SQUARE_AMPERES,
    );
}

/// Drive voltages, cut to the input where the drive is made from it.
fn drive(case: &Case<'_>, book: &mut Book<'_>) {
    let controller = &case.prepared.stage.controller;
    let drive = &case.prepared.drive;
    book.datum("V_DRIVE", "controller.v_drive", (controller.v_drive, D::Voltage, ""));
    book.datum("V_BOOT", "controller.v_boot_drop", (0.0, D::Voltage, "absent, 0 V"));
    // a drive made from the input is cut to it
    let available = if drive.v_low < controller.v_drive { "min(V_DRIVE, V_IN)" } else { "V_DRIVE" };
    book.law(&laws::ON_RESISTANCE).step(
        "V_GS_HS: gate voltage of the high side",
        &format!("{available} - V_BOOT"),
        drive.v_high,
        D::Voltage,
    );
    if case.prepared.stage.is_synchronous() {
        book.step("V_GS_LS: gate voltage of the low side", available, drive.v_low, D::Voltage);
    }
}

fn inductance(case: &Case<'_>, book: &mut Book<'_>) {
    let sheet = &case.sheet.inductor.sheet;
    let value = case.prepared.inductance;
    match &sheet.saturation {
        Some(_) if sheet.inductance_curve.is_empty() => {
            book.datum("L_0", "inductor.inductance", (value, D::Inductance, ""));
            book.datum("s_SAT", "inductor.saturation.drop", (0.0, D::Number, ""));
            book.datum("I_SAT", "inductor.saturation.i", (1.0, D::Current, ""));
            book.law(&laws::INDUCTANCE).step(
                "L: inductance at the load current",
                "L_0·max(1 - s_SAT·(I_OUT/(n_L·I_SAT))^2, 0.1)/n_L",
                value,
                D::Inductance,
            );
        }
        _ => {
            let points = book.origins.points("inductor.inductance_curve");
            book.given(
                "L",
                value,
                D::Inductance,
                format!("linear between points of inductance_curve: {points}"),
            );
        }
    }
}

/// Diode drop at the load current during the dead times, or of the freewheel diode.
fn diode_drop(case: &Case<'_>, book: &mut Book<'_>, symbol: &str) {
    let load = case.prepared.point.load;
    forward_voltage(case, book, symbol, load, "I_OUT");
}

/// The voltage of whatever diode carries the current, as a given number with the points it was read between.
pub(super) fn forward_voltage(case: &Case<'_>, book: &mut Book<'_>, symbol: &str, current: f64, words: &str) {
    let (value, slot, key, t_j) = match &case.prepared.stage.rectifier {
        Rectifier::Synchronous { schottky: Some(diode), .. } => {
            let t_j = case.nodes[SCHOTTKY];
            (diode.forward_voltage(current, t_j), "parallel_schottky", "v_f", Some(t_j))
        }
        Rectifier::Synchronous { low_side, .. } => (low_side.body_diode(current), "low_side", "v_sd", None),
        Rectifier::Diode(diode) => {
            let t_j = case.nodes[RECTIFIER];
            (diode.forward_voltage(current, t_j), "freewheel_diode", "v_f", Some(t_j))
        }
    };
    let points = book.origins.points(&format!("{slot}.{key}"));
    let temperature = t_j
        .map_or(String::new(), |t_j| format!(" and {} ", super::book::Measure::Of(D::Temperature).show(t_j)));
    let at = super::book::Measure::Of(D::Current).show(current);
    book.given(
        symbol,
        value,
        D::Voltage,
        format!("{slot}.{key} read at {words} = {at}{temperature}, linear between points (E25): {points}"),
    );
}

fn continuous(case: &Case<'_>, book: &mut Book<'_>) {
    let waveform = case.waveform();
    let path = case.prepared.current_path(case.nodes);
    book.law(&laws::BALANCE);
    book.step(
        "R_h: resistance while the node is high",
        "R_DS(on)_HS + R_PATH_HS·k_B",
        path.r_high,
        D::Resistance,
    );
    book.step(
        "R_s: resistance in series with the inductor",
        "R_L + (R_PATH_OUT + R_SENSE)·k_B",
        path.r_series,
        D::Resistance,
    );
    match path.off {
        OffPath::Synchronous { r_path, dead_share, .. } => {
            book.step("R_p: path of the low side", "R_PATH_LS·k_B", r_path, D::Resistance);
            dead_times(book);
            book.step("d_t: share of the period in dead time", "(t_1 + t_2)·f_SW", dead_share, PURE);
            diode_drop(case, book, "V_SD");
            book.step(
                "D: duty, share of the period for which the node is high",
                "(V_O + I_OUT·R_s + (1 - d_t)·I_OUT·R_DS(on)_LS + I_OUT·R_p + d_t·V_SD)/(V_IN - I_OUT·R_h + I_OUT·(R_DS(on)_LS + R_p))",
                waveform.duty,
                PURE,
            );
        }
        OffPath::Diode { r_path, .. } => {
            book.step("R_p: path of the diode", "R_PATH_LS·k_B", r_path, D::Resistance);
            diode_drop(case, book, "V_F");
            book.step(
                "D: duty, share of the period for which the node is high",
                "(V_O + I_OUT·R_s + V_F + I_OUT·R_p)/(V_IN - I_OUT·R_h + V_F + I_OUT·R_p)",
                waveform.duty,
                PURE,
            );
        }
    }
    book.step("D_2: share of the period in which the current falls", "1 - D", waveform.off_duty, PURE);
    book.law(&laws::RIPPLE);
    book.step(
        "V_ON: voltage across the inductance while the current rises",
        "V_IN - I_OUT·(R_h + R_s) - V_O",
        waveform.v_on,
        D::Voltage,
    );
    book.step("ΔI: ripple, peak to peak", "V_ON·D/(f_SW·L)", waveform.ripple(), D::Current);
    book.step("I_V: valley", "I_OUT - ΔI/2", waveform.valley, D::Current);
    book.step("I_P: peak", "I_OUT + ΔI/2", waveform.peak, D::Current);
    book.law(&laws::RAMP);
    book.step(
        "m: mean square of the ramp from valley to peak",
        "(I_V^2 + I_V·I_P + I_P^2)/3",
        waveform.mean_square,
        SQUARE_AMPERES,
    );
    book.law(&laws::RIPPLE);
    book.step("s: falling slope of the current", "ΔI·f_SW/D_2", waveform.falling_slope, D::CurrentSlope);
    let why = if case.prepared.stage.blocks {
        "the load is not below half the ripple, so the rectifier never blocks"
    } else {
        "the rectifier conducts both ways (forced_continuous)"
    };
    book.remark(format!("Mode: continuous; {why}."));
}

/// Dead times of the controller.
pub(super) fn dead_times(book: &mut Book<'_>) {
    for (symbol, key) in [("t_1", "after_high_side"), ("t_2", "before_high_side")] {
        book.datum(symbol, &format!("controller.dead_time.{key}"), (0.0, D::Time, "absent, 0 s"));
    }
}

fn discontinuous(case: &Case<'_>, book: &mut Book<'_>) {
    let waveform = case.waveform();
    let v_off = waveform.falling_slope * waveform.inductance;
    book.law(&laws::DISCONTINUOUS);
    book.step(
        "V_ON: voltage across the inductance while the current rises",
        "V_IN - V_O",
        waveform.v_on,
        D::Voltage,
    );
    if case.prepared.stage.is_synchronous() {
        book.step("V_OFF: voltage across it while the current falls", "V_O", v_off, D::Voltage);
        dead_times(book);
    } else {
        diode_drop(case, book, "V_F");
        book.step("V_OFF: voltage across it while the current falls", "V_O + V_F", v_off, D::Voltage);
    }
    if waveform.mode == Mode::PulseSkipping {
        book.datum(
            "I_SKIP",
            "light_load.peak",
            (case.prepared.stage.skip_peak, D::Current, "not stated, 0 A"),
        );
        book.datum("t_ON(min)", "controller.t_on_min", (0.0, D::Time, "absent, 0 s"));
        book.law(&laws::SKIPPING);
        book.step(
            "I_P: peak, the smallest pulse",
            "max(I_SKIP, V_ON·t_ON(min)/L)",
            waveform.peak,
            D::Current,
        );
        book.step(
            "f_e: pulses per second that carry the load",
            "2·I_OUT/(I_P^2·L·(1/V_ON + 1/V_OFF))",
            waveform.frequency,
            D::Frequency,
        );
        book.remark(
            "Mode: pulse skipping; at the full frequency the peak would fall below the smallest pulse.",
        );
    } else {
        book.step("I_P: peak", "√(2·I_OUT/(f_SW·L·(1/V_ON + 1/V_OFF)))", waveform.peak, D::Current);
        book.remark("Mode: discontinuous; the load is below half the ripple and the rectifier blocks.");
    }
    let f = case.f();
    book.given("I_V", 0.0, D::Current, "the current rests at zero");
    book.step(
        "D: share of the period in which the current rises",
        &format!("L·I_P·{f}/V_ON"),
        waveform.duty,
        PURE,
    );
    book.step(
        "D_2: share of the period in which the current falls",
        &format!("L·I_P·{f}/V_OFF"),
        waveform.off_duty,
        PURE,
    );
    book.step("s: falling slope of the current", "V_OFF/L", waveform.falling_slope, D::CurrentSlope);
    book.law(&laws::RAMP);
    book.step(
        "m: mean square of the ramp from zero to peak",
        "I_P^2/3",
        waveform.mean_square,
        SQUARE_AMPERES,
    );
}
