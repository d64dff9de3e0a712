//! Entries of the low side, of a Schottky across it, and of a freewheel diode (E12, E16c, E17, E19, E26, E27).

use super::book::{Book, Measure, PURE, SQUARE_AMPERES};
use super::case::Case;
use super::resistance;
use super::waveform::forward_voltage;
use super::{edges, gate, laws};
use crate::fitted::{RECTIFIER, Rectifier, SCHOTTKY};
use crate::ledger::Account;
use crate::loss::conduction::{Channel, DeadTimeEnds, Forward};
use crate::loss::dead_time::DeadTime;
use crate::loss::leakage::Leakage;
use crate::loss::output_charge::OutputCharge;
use crate::loss::overlap::LowSideOverlap;
use crate::model::HeatedRectifier;
use crate::units::Dimension as D;

pub(super) fn derive(case: &Case<'_>, book: &mut Book<'_>) {
    match &case.heated.rectifier {
        HeatedRectifier::Synchronous { conduction, overlap, output_charge, dead_time, schottky, .. } => {
            channel(case, conduction, book);
            low_overlap(case, overlap, book);
            early_turn_on(case, output_charge, book);
            if schottky.is_none() {
                book.entry(Account::LowSideDeadTime);
                dead_times(case, dead_time, ["P_LS_dead_time", "low side"], book);
            }
            gate::low_side(case, book);
            if let Some(leaking) = schottky {
                book.entry(Account::ParallelSchottkyDeadTime);
                dead_times(case, dead_time, ["P_SK_dead_time", "parallel Schottky"], book);
                if let Some(leaking) = leaking {
                    book.entry(Account::ParallelSchottkyLeakage);
                    leakage(case, leaking, ["P_SK_leakage", "parallel_schottky", "n_SK"], book);
                }
            }
        }
        HeatedRectifier::Diode { conduction, leakage: leaking } => {
            forward(case, conduction, book);
            if let Some(leaking) = leaking {
                book.entry(Account::FreewheelDiodeLeakage);
                leakage(case, leaking, ["P_FD_leakage", "freewheel_diode", "n_FD"], book);
            }
        }
    }
}

fn channel(case: &Case<'_>, conduction: &Channel, book: &mut Book<'_>) {
    book.entry(Account::LowSideConduction);
    let controller = &case.prepared.stage.controller;
    let ends = DeadTimeEnds::of(case.waveform(), controller.t_1, controller.t_2);
    let f = case.f();
    book.law(&laws::CHANNEL);
    let (after, before, share) = if case.continuous() {
        ("I_P - s·t_1", "I_V + s·t_2", format!("max(D_2 - (t_1 + t_2)·{f}, 0)"))
    } else {
        ("max(I_P - s·t_1, 0)", "0", format!("max(D_2 - t_1·{f}, 0)"))
    };
    book.step("I_A: current after the first dead time", after, ends.i_after, D::Current);
    book.step("I_B: current before the second dead time", before, ends.i_before, D::Current);
    book.step("D_LS: share of the period in the channel", &share, conduction.share, PURE);
    book.step(
        "m_LS: mean square of the current there",
        "(I_A^2 + I_A·I_B + I_B^2)/3",
        conduction.mean_square,
        SQUARE_AMPERES,
    );
    book.step("P_LS_conduction: low side, conduction", "D_LS·m_LS·R_DS(on)_LS", conduction.watts, D::Power);
}

fn low_overlap(case: &Case<'_>, overlap: &LowSideOverlap, book: &mut Book<'_>) {
    book.entry(Account::LowSideOverlap);
    let name = "P_LS_overlap: low side, overlap";
    if case.waveform().valley >= 0.0 {
        book.law(&laws::OVERLAP).step(
            &format!("{name}; none, the valley is not negative"),
            "0",
            overlap.watts,
            D::Power,
        );
        return;
    }
    let Some(low) = resistance::low_side(case) else { return };
    if low.curves.edge_times.t_fi.is_none() {
        edges::low_side_gate(case, book);
        book.law(&laws::PLATEAU).step("I_REV: current switched off", "-I_V", overlap.current, D::Current);
        edges::plateau(&low, "V_PL_LS", ("I_REV", overlap.current), book);
        book.law(&laws::EDGES).step(
            "t_fi_LS: current fall",
            "R_OFF_LS·C_GS_LS·ln(V_PL_LS/V_GS(th)_LS) + L_S_LS/n_LS·I_REV/((V_GS(th)_LS + V_PL_LS)/2)",
            overlap.t_fi,
            D::Time,
        );
    } else {
        book.given("t_fi_LS", overlap.t_fi, D::Time, "measured edge time of the low side");
    }
    book.law(&laws::OVERLAP).step(
        name,
        &format!("V_IN·(-I_V)/2·t_fi_LS·{}", case.f()),
        overlap.watts,
        D::Power,
    );
}

fn early_turn_on(case: &Case<'_>, charge: &OutputCharge, book: &mut Book<'_>) {
    book.entry(Account::LowSideOutputCharge);
    let (prepared, waveform) = (case.prepared, case.waveform());
    let controller = &prepared.stage.controller;
    let moved = waveform.peak * controller.t_1;
    let name = "P_LS_output_charge: low side, output charge";
    book.law(&laws::EARLY);
    if controller.adaptive || moved >= prepared.node_charge {
        let why = if controller.adaptive {
            "none, the driver waits for the node"
        } else {
            "none, the node has fallen within the dead time"
        };
        book.step(&format!("{name}; {why}"), "0", charge.watts, D::Power);
        return;
    }
    let node = &prepared.node;
    let (a, b) = (node.rectifier.charge(case.v_in()), node.high_side.charge(case.v_in()));
    let hypotenuse = (a * a + b * b).sqrt();
    book.step("Q_DOWN: charge that the inductor takes in the dead time", "I_P·t_1", moved, D::Charge);
    book.step("Q_HYP: scale of the swing", "√(Q_R^2 + Q_OSS_HS^2)", hypotenuse, D::Charge);
    book.step("σ_LS: place on the swing", "(Q_DOWN - Q_R)/Q_HYP", (moved - a) / hypotenuse, PURE);
    book.step(
        "V_EARLY: node voltage when the low side turns on",
        "V_IN·(1 - ((σ_LS·Q_OSS_HS + √(max(1 - σ_LS^2, 0))·Q_R)/Q_HYP)^2)",
        charge.v_node,
        D::Voltage,
    );
    book.step(
        "E_EARLY: energy burnt",
        "max(Q_R·√(V_EARLY/V_IN)·V_EARLY/3 + V_IN·Q_OSS_HS·(1 - √((V_IN - V_EARLY)/V_IN)) - Q_OSS_HS/3·(V_IN - (V_IN - V_EARLY)·√((V_IN - V_EARLY)/V_IN)), 0)",
        charge.energy,
        D::Energy,
    );
    book.step(name, &format!("E_EARLY·{}", case.f()), charge.watts, D::Power);
}

fn dead_times(case: &Case<'_>, dead: &DeadTime, [symbol, words]: [&str; 2], book: &mut Book<'_>) {
    let f = case.f();
    book.law(&laws::DEAD_TIME);
    let transit = if case.waveform().peak > 0.0 { "max(t_1 - Q_NODE/I_P, 0)" } else { "0" };
    book.step(
        "t_D1: diode time after high-side turn-off, less the node's transit",
        transit,
        dead.t_after,
        D::Time,
    );
    book.step("I_D1: mean current in it", "max((I_P + I_A)/2, 0)", dead.i_after, D::Current);
    forward_voltage(case, book, "V_D1", dead.i_after, "I_D1");
    let name = format!("{symbol}: {words}, dead time");
    if case.continuous() {
        book.step(
            "I_D2: mean current before high-side turn-on",
            "max((I_V + I_B)/2, 0)",
            dead.i_before,
            D::Current,
        );
        forward_voltage(case, book, "V_D2", dead.i_before, "I_D2");
        book.step(&name, &format!("{f}·(t_D1·I_D1·V_D1 + t_2·I_D2·V_D2)"), dead.watts, D::Power);
    } else {
        book.step(
            &format!("{name}; the first edge only"),
            &format!("{f}·t_D1·I_D1·V_D1"),
            dead.watts,
            D::Power,
        );
    }
}

/// Places of the three-point Gauss-Legendre rule on (0, 1); the weights are 5, 8 and 5 eighteenths.
const PLACES: [f64; 3] = [0.112_701_665_379_258_3, 0.5, 0.887_298_334_620_741_7];

fn forward(case: &Case<'_>, conduction: &Forward, book: &mut Book<'_>) {
    book.entry(Account::FreewheelDiodeConduction);
    book.law(&laws::FORWARD);
    let waveform = case.waveform();
    for (index, place) in PLACES.into_iter().enumerate() {
        let (symbol, at) = (format!("I_F{}", index + 1), waveform.valley + place * waveform.ripple());
        book.step(
            &format!("{symbol}: current at a place of the rule"),
            &format!("I_V + {place}·(I_P - I_V)"),
            at,
            D::Current,
        );
        forward_voltage(case, book, &format!("V_F{}", index + 1), at, &symbol);
    }
    book.step(
        "P_F: mean of current times forward voltage over the falling ramp",
        "(5·I_F1·V_F1 + 8·I_F2·V_F2 + 5·I_F3·V_F3)/18",
        conduction.mean_power,
        D::Power,
    );
    book.step("P_FD_conduction: freewheel diode, conduction", "D_2·P_F", conduction.watts, D::Power);
}

fn leakage(case: &Case<'_>, leaking: &Leakage, [symbol, slot, n]: [&str; 3], book: &mut Book<'_>) {
    book.law(&laws::LEAKAGE);
    let node =
        if matches!(case.prepared.stage.rectifier, Rectifier::Diode(_)) { RECTIFIER } else { SCHOTTKY };
    let t_j = Measure::Of(D::Temperature).show(case.nodes[node]);
    let points = book.origins.points(&format!("{slot}.i_r"));
    let origin = |v: &str| format!("{slot}.i_r at {v} and {t_j}, ln I_R fitted to: {points}");
    book.given("I_R(in)", leaking.at_input, D::Current, origin("V_IN"));
    let words = slot.replace('_', " ");
    if case.continuous() {
        book.step(
            &format!("{symbol}: {words}, leakage"),
            &format!("{n}·D·V_IN·I_R(in)"),
            leaking.watts,
            D::Power,
        );
    } else {
        book.given("I_R(out)", leaking.at_output, D::Current, origin("V_O"));
        let equation = format!("{n}·(D·V_IN·I_R(in) + max(1 - D - D_2, 0)·V_O·I_R(out))");
        book.step(&format!("{symbol}: {words}, leakage"), &equation, leaking.watts, D::Power);
    }
}
