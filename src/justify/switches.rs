//! Entries of the high side (E12, E16 to E18, E21).

use super::book::{Book, Measure, PURE};
use super::case::Case;
use super::gate;
use super::laws;
use crate::fitted::Rectifier;
use crate::ledger::Account;
use crate::loss::overlap::MILLER_WEIGHT;
use crate::model::HeatedRectifier;
use crate::units::Dimension as D;

pub(super) fn derive(case: &Case<'_>, book: &mut Book<'_>) {
    conduction(case, book);
    overlap(case, book);
    output_charge(case, book);
    recovery(case, book);
    dead_time(case, book);
    gate::high_side(case, book);
}

fn conduction(case: &Case<'_>, book: &mut Book<'_>) {
    book.entry(Account::HighSideConduction);
    let watts = case.heated.high_conduction.watts;
    book.law(&laws::CHANNEL).step(
        "P_HS_conduction: high side, conduction",
        "D·m·R_DS(on)_HS",
        watts,
        D::Power,
    );
}

fn overlap(case: &Case<'_>, book: &mut Book<'_>) {
    book.entry(Account::HighSideOverlap);
    let overlap = &case.heated.overlap;
    book.given("k_M", MILLER_WEIGHT, PURE, "share of V I t that a voltage edge burns, 2 E/(Q v) = 2/3 (E14)");
    book.law(&laws::OVERLAP);
    book.step(
        "E_ON: current rise and voltage fall",
        "V_IN·I_ON/2·(t_ri + k_M·t_fv)",
        overlap.on_edge,
        D::Energy,
    );
    book.step(
        "E_ON_NODE: load current while the node is discharged",
        "I_ON·E_CAP/(g_HS·(V_GS_HS - V_PL_ON))",
        overlap.on_node,
        D::Energy,
    );
    book.step("E_OFF_I: current fall", "V_IN·I_P/2·t_fi", overlap.off_current, D::Energy);
    book.step(
        "E_OFF_V: voltage rise, less what charges the node",
        "max(V_IN·I_P/2·k_M·t_rv - E_CAP, 0)",
        overlap.off_voltage,
        D::Energy,
    );
    let equation = format!("(E_ON + E_ON_NODE + E_OFF_I + E_OFF_V)·{}", case.f());
    book.step("P_HS_overlap: high side, overlap", &equation, overlap.watts, D::Power);
}

fn output_charge(case: &Case<'_>, book: &mut Book<'_>) {
    book.entry(Account::HighSideOutputCharge);
    let charge = &case.heated.output_charge;
    book.law(&laws::NODE);
    node_voltage(case, book);
    book.step(
        "E_OSS: energy met at turn-on",
        "max(Q_OSS_HS·√((V_IN - V_NODE)/V_IN)·(V_IN - V_NODE)/3 + V_IN·Q_R·(1 - √(V_NODE/V_IN)) - Q_R/3·(V_IN - V_NODE·√(V_NODE/V_IN)), 0)",
        charge.energy,
        D::Energy,
    );
    let equation = format!("E_OSS·{}", case.f());
    book.step("P_HS_output_charge: high side, output charge", &equation, charge.watts, D::Power);
}

/// Node voltage just before the high side turns on.
fn node_voltage(case: &Case<'_>, book: &mut Book<'_>) {
    let (waveform, prepared) = (case.waveform(), case.prepared);
    let v_node = case.heated.output_charge.v_node;
    let name = "V_NODE: node voltage just before turn-on";
    let charge = prepared.node_charge;
    if case.continuous() {
        if waveform.valley >= 0.0 {
            book.given("V_NODE", 0.0, D::Voltage, "the rectifier carries the current until turn-on");
        } else if charge > 0.0 {
            lifted(case, book, name, v_node);
        } else {
            book.given("V_NODE", v_node, D::Voltage, "a node without capacitance rises at once");
        }
        return;
    }
    let quarter = std::f64::consts::FRAC_PI_2 * (waveform.inductance * charge / case.v_in()).sqrt();
    book.step("t_q: quarter of the idle node's swing", "π/2·√(L·Q_NODE/V_IN)", quarter, D::Time);
    if quarter * waveform.frequency > 0.0 {
        let f = case.f();
        let equation = format!("min(1, max(1 - D - D_2, 0)/(t_q·{f}))·min(V_O, V_IN)");
        book.step(name, &equation, v_node, D::Voltage);
    } else {
        book.step(name, "min(V_O, V_IN)", v_node, D::Voltage);
    }
}

/// A negative valley carries the node up during the dead time.
fn lifted(case: &Case<'_>, book: &mut Book<'_>, name: &str, v_node: f64) {
    let node = &case.prepared.node;
    let (a, b) = (node.rectifier.charge(case.v_in()), node.high_side.charge(case.v_in()));
    let moved = (-case.waveform().valley * case.prepared.stage.controller.t_2).min(a + b);
    book.step(
        "Q_UP: charge that the inductor moves in the dead time",
        "min(-I_V·t_2, Q_NODE)",
        moved,
        D::Charge,
    );
    let hypotenuse = (a * a + b * b).sqrt();
    book.step("Q_HYP: scale of the swing", "√(Q_R^2 + Q_OSS_HS^2)", hypotenuse, D::Charge);
    book.step("σ: place on the swing", "(Q_UP - Q_OSS_HS)/Q_HYP", (moved - b) / hypotenuse, PURE);
    book.step(name, "V_IN·((σ·Q_R + √(max(1 - σ^2, 0))·Q_OSS_HS)/Q_HYP)^2", v_node, D::Voltage);
}

fn recovery(case: &Case<'_>, book: &mut Book<'_>) {
    let Some(recovery) = &case.heated.recovery else { return };
    let (slot, law) = match &case.prepared.stage.rectifier {
        Rectifier::Synchronous { low_side, .. } => ("low_side", low_side.recovery),
        Rectifier::Diode(diode) => ("freewheel_diode", diode.recovery),
    };
    let Some(law) = law else { return };
    book.entry(Account::HighSideRecovery);
    book.law(&laws::RECOVERY);
    let name = "P_HS_recovery: high side, recovery of the rectifier";
    if recovery.charge == 0.0 && case.waveform().valley <= 0.0 {
        book.step(
            "Q_RR: recovery charge; the diode carries no current when the high side turns on",
            "0",
            0.0,
            D::Charge,
        );
    } else {
        let n = if slot == "low_side" { "n_LS" } else { "n_FD" };
        book.datum("Q_RR(ref)", &format!("{slot}.q_rr"), (law.charge, D::Charge, ""));
        book.condition("I_RR(ref)", &format!("{slot}.q_rr"), "i", 1.0);
        book.datum(
            "a_RR",
            &format!("{slot}.q_rr.exponent"),
            (law.exponent, D::Number, "absent, 0.5 assumed (from memory)"),
        );
        book.given(
            "Q_RR(oss)",
            law.counted_output_charge,
            D::Charge,
            "output charge that the test counted too; 0 unless includes_q_oss",
        );
        book.step(
            "Q_RR: recovery charge at the valley",
            &format!("max({n}·Q_RR(ref)·(I_V/({n}·I_RR(ref)))^a_RR - Q_RR(oss), 0)"),
            recovery.charge,
            D::Charge,
        );
    }
    book.step(name, &format!("V_IN·Q_RR·{}", case.f()), recovery.watts, D::Power);
}

/// Body diode of the high side while the valley is negative.
fn dead_time(case: &Case<'_>, book: &mut Book<'_>) {
    let HeatedRectifier::Synchronous { high_dead_time, .. } = &case.heated.rectifier else { return };
    book.entry(Account::HighSideDeadTime);
    book.law(&laws::OVERLAP);
    let name = "P_HS_dead_time: high side, dead time";
    if case.waveform().valley >= 0.0 {
        book.step(&format!("{name}; none, the valley is not negative"), "0", high_dead_time.watts, D::Power);
        return;
    }
    let points = book.origins.points("high_side.v_sd");
    let at = Measure::Of(D::Current).show(high_dead_time.current);
    book.given(
        "V_SD_HS",
        high_dead_time.v_sd,
        D::Voltage,
        format!("high_side.v_sd read at |I_V| = {at}, linear between points: {points}"),
    );
    book.step(
        "t_REST: what the node's rise leaves of the dead time",
        "max(t_2 - Q_NODE/(-I_V), 0)",
        high_dead_time.time,
        D::Time,
    );
    book.step(name, &format!("-I_V·V_SD_HS·t_REST·{}", case.f()), high_dead_time.watts, D::Power);
}
