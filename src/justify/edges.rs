//! What the switching entries share: charge of the node, plateaus, edge times (E13 to E15).

use super::book::{Book, Chapter, Measure};
use super::case::Case;
use super::resistance::{self, Switch};
use super::{laws, resistance::high_side};
use crate::edges::EdgeDurations;
use crate::fitted::Rectifier;
use crate::parts::junction::JunctionCharge;
use crate::parts::mosfet::ASSUMED_GATE_RESISTANCE;
use crate::units::Dimension as D;

const SIEMENS: Measure = Measure::Unit("S");

pub(super) fn derive(case: &Case<'_>, book: &mut Book<'_>) {
    book.open(Chapter::Edges);
    node(case, book);
    let high = high_side(case);
    let drivers = &case.prepared.stage.controller.high_side;
    gate_loop(&high, "high_side", [drivers.r_source, drivers.r_sink], book);
    let edges = &case.heated.overlap.edges;
    let i_on = case.waveform().valley.max(0.0);
    book.law(&laws::PLATEAU).step("I_ON: current switched on", "max(I_V, 0)", i_on, D::Current);
    times(case, &high, edges, book);
}

/// Junction charge of one slot at V_IN (E14); zero when the data sheet lacks it.
fn charge(
    case: &Case<'_>,
    book: &mut Book<'_>,
    label: [&str; 3],
    keys: [&str; 2],
    law: Option<JunctionCharge>,
) {
    let [symbol, slot, condition] = label;
    let end = symbol.trim_start_matches("Q_OSS_").trim_start_matches("Q_C_").to_owned();
    let name = format!("{symbol}: charge of {} at V_IN", slot.replace('_', " "));
    let [of_charge, of_capacitance] = keys.map(|key| format!("{slot}.{key}"));
    let Some(law) = law else {
        book.given(symbol, 0.0, D::Charge, format!("not modelled: needs {of_charge}"));
        return;
    };
    let value = law.charge(case.v_in());
    let (reference, voltage) = (format!("Q_REF_{end}"), format!("V_REF_{end}"));
    book.law(&laws::JUNCTION);
    if book.origins.find(&of_charge).is_some() {
        book.datum(&reference, &of_charge, (0.0, D::Charge, ""));
        book.condition(&voltage, &of_charge, condition, 1.0);
        book.step(&name, &format!("n_{end}·{reference}·√(V_IN/{voltage})"), value, D::Charge);
    } else {
        let capacitance = format!("C_REF_{end}");
        book.datum(&capacitance, &of_capacitance, (0.0, D::Capacitance, ""));
        book.condition(&voltage, &of_capacitance, condition, 1.0);
        book.step(&name, &format!("n_{end}·2·{capacitance}·√({voltage}·V_IN)"), value, D::Charge);
    }
}

fn node(case: &Case<'_>, book: &mut Book<'_>) {
    let stage = case.prepared.stage;
    charge(case, book, ["Q_OSS_HS", "high_side", "v_ds"], ["q_oss", "c_oss"], stage.high_side.q_oss);
    let rectifier = match &stage.rectifier {
        Rectifier::Synchronous { low_side, schottky } => {
            charge(case, book, ["Q_OSS_LS", "low_side", "v_ds"], ["q_oss", "c_oss"], low_side.q_oss);
            match schottky {
                Some(diode) => {
                    book.given("n_SK", diode.n, super::book::PURE, "diodes in parallel in parallel_schottky");
                    charge(case, book, ["Q_C_SK", "parallel_schottky", "v_r"], ["q_c", "c_j"], diode.q_c);
                    "Q_OSS_LS + Q_C_SK"
                }
                None => "Q_OSS_LS",
            }
        }
        Rectifier::Diode(diode) => {
            book.given("n_FD", diode.n, super::book::PURE, "diodes in parallel in freewheel_diode");
            charge(case, book, ["Q_C_FD", "freewheel_diode", "v_r"], ["q_c", "c_j"], diode.q_c);
            "Q_C_FD"
        }
    };
    let node = &case.prepared.node;
    book.law(&laws::NODE);
    book.step(
        "Q_R: charge between node and ground at V_IN",
        rectifier,
        node.rectifier.charge(case.v_in()),
        D::Charge,
    );
    book.step(
        "Q_NODE: charge that moves the node by V_IN",
        "Q_OSS_HS + Q_R",
        case.prepared.node_charge,
        D::Charge,
    );
    book.step(
        "E_CAP: energy of the whole node met by the high side",
        "Q_OSS_HS·V_IN/3 + V_IN·Q_R - Q_R·V_IN/3",
        case.prepared.node_energy,
        D::Energy,
    );
}

/// Gate resistances, transconductance, capacitance between threshold and plateau.
fn gate_loop(switch: &Switch<'_>, driver: &str, [r_source, r_sink]: [f64; 2], book: &mut Book<'_>) {
    let Switch { slot, end, curves, sheet, .. } = *switch;
    driver_resistances(end, driver, [r_source, r_sink], book);
    book.datum(
        &format!("R_G_{end}"),
        &format!("{slot}.r_g"),
        (ASSUMED_GATE_RESISTANCE, D::Resistance, "absent, 1 Ω assumed"),
    );
    book.datum(&format!("V_GS(th)_{end}"), &format!("{slot}.v_gs_th"), (0.0, D::Voltage, ""));
    book.datum(&format!("V_PL(test)_{end}"), &format!("{slot}.v_gs_plateau"), (0.0, D::Voltage, ""));
    book.condition(&format!("I_TEST_{end}"), &format!("{slot}.v_gs_plateau"), "i_d", 1.0);
    book.datum(
        &format!("L_S_{end}"),
        &format!("{slot}.l_source"),
        (0.0, D::Inductance, "absent, 0 H assumed"),
    );
    book.law(&laws::PLATEAU);
    book.step(
        &format!("g_{end}: transconductance of all devices"),
        &format!("n_{end}·I_TEST_{end}/(V_PL(test)_{end} - V_GS(th)_{end})"),
        curves.transconductance,
        SIEMENS,
    );
    let equation = match (&sheet.q_gs2, &sheet.q_g_th, &sheet.q_sw) {
        (Some(_), ..) => {
            book.datum(&format!("Q_GS2_{end}"), &format!("{slot}.q_gs2"), (0.0, D::Charge, ""));
            None
        }
        (_, Some(_), _) => {
            book.datum(&format!("Q_G(th)_{end}"), &format!("{slot}.q_g_th"), (0.0, D::Charge, ""));
            Some(format!("Q_GS_{end} - Q_G(th)_{end}"))
        }
        (.., Some(_)) => {
            book.datum(&format!("Q_SW_{end}"), &format!("{slot}.q_sw"), (0.0, D::Charge, ""));
            Some(format!("Q_SW_{end} - Q_GD_{end}"))
        }
        _ => Some(format!("Q_GS_{end}·(1 - V_GS(th)_{end}/V_PL(test)_{end})")),
    };
    book.datum(&format!("Q_GS_{end}"), &format!("{slot}.q_gs"), (0.0, D::Charge, ""));
    book.datum(&format!("Q_GD_{end}"), &format!("{slot}.q_gd"), (0.0, D::Charge, ""));
    if let Some(equation) = equation {
        let name = if sheet.q_gs2_is_estimated() { "estimated" } else { "from what is printed" };
        book.step(
            &format!("Q_GS2_{end}: charge between threshold and plateau, {name}"),
            &equation,
            sheet.q_gs2(),
            D::Charge,
        );
    }
    book.step(
        &format!("C_GS_{end}: gate capacitance between threshold and plateau, all devices"),
        &format!("n_{end}·Q_GS2_{end}/(V_PL(test)_{end} - V_GS(th)_{end})"),
        curves.gate_capacitance,
        D::Capacitance,
    );
    book.step(
        &format!("R_ON_{end}: gate loop while charging"),
        &format!("R_SRC_{end} + R_G_{end}/n_{end}"),
        r_source + curves.r_g,
        D::Resistance,
    );
    book.step(
        &format!("R_OFF_{end}: gate loop while discharging"),
        &format!("R_SNK_{end} + R_G_{end}/n_{end}"),
        r_sink + curves.r_g,
        D::Resistance,
    );
}

/// Output resistances of a driver: as given, or drive voltage over peak current.
pub(super) fn driver_resistances(end: &str, driver: &str, values: [f64; 2], book: &mut Book<'_>) {
    for ((symbol, [r, i]), value) in
        [("R_SRC", ["r_source", "i_source"]), ("R_SNK", ["r_sink", "i_sink"])].into_iter().zip(values)
    {
        let (symbol, path) = (format!("{symbol}_{end}"), format!("controller.{driver}.{i}"));
        if book.origins.find(&path).is_none() {
            book.datum(&symbol, &format!("controller.{driver}.{r}"), (value, D::Resistance, "absent"));
            continue;
        }
        let current = format!("I{}", &symbol[1..]);
        book.datum(&current, &path, (1.0, D::Current, ""));
        let name = format!("{symbol}: driver resistance, estimated from its peak current");
        book.law(&laws::PLATEAU).step(&name, &format!("V_DRIVE/{current}"), value, D::Resistance);
    }
}

/// One plateau voltage at a current.
pub(super) fn plateau(switch: &Switch<'_>, symbol: &str, current: (&str, f64), book: &mut Book<'_>) {
    let end = switch.end;
    book.law(&laws::PLATEAU).step(
        &format!("{symbol}: plateau voltage at {}", current.0),
        &format!("V_GS(th)_{end} + {}/g_{end}", current.0),
        switch.curves.plateau(current.1),
        D::Voltage,
    );
}

fn times(case: &Case<'_>, high: &Switch<'_>, edges: &EdgeDurations, book: &mut Book<'_>) {
    let (i_on, i_off) = (case.waveform().valley.max(0.0), case.waveform().peak);
    plateau(high, "V_PL_ON", ("I_ON", i_on), book);
    plateau(high, "V_PL_OFF", ("I_P", i_off), book);
    book.condition("V_REF_GD", "high_side.q_gd", "v_ds", 1.0);
    book.law(&laws::JUNCTION).step(
        "Q_GD(in): gate-drain charge of all devices at V_IN",
        "n_HS·Q_GD_HS·√(V_IN/V_REF_GD)",
        case.prepared.q_gd,
        D::Charge,
    );
    book.law(&laws::EDGES);
    let given = &high.curves.edge_times;
    let rise = "R_ON_HS·C_GS_HS·ln((V_GS_HS - V_GS(th)_HS)/(V_GS_HS - V_PL_ON)) + L_S_HS/n_HS·I_ON/(V_GS_HS - (V_GS(th)_HS + V_PL_ON)/2)";
    edge(book, ["t_ri", "current rise at turn-on", rise], edges.t_ri, given.t_ri.is_some());
    let fall = "Q_GD(in)·R_ON_HS/(V_GS_HS - V_PL_ON)";
    edge(book, ["t_fv", "voltage fall at turn-on", fall], edges.t_fv, given.t_fv.is_some());
    edge(
        book,
        ["t_rv", "voltage rise at turn-off", "Q_GD(in)·R_OFF_HS/V_PL_OFF"],
        edges.t_rv,
        given.t_rv.is_some(),
    );
    let fall = "R_OFF_HS·C_GS_HS·ln(V_PL_OFF/V_GS(th)_HS) + L_S_HS/n_HS·I_P/((V_GS(th)_HS + V_PL_OFF)/2)";
    edge(book, ["t_fi", "current fall at turn-off", fall], edges.t_fi, given.t_fi.is_some());
}

/// An edge time by its formula, or as it was measured.
fn edge(book: &mut Book<'_>, [symbol, name, equation]: [&str; 3], value: f64, measured: bool) {
    if !measured {
        book.step(&format!("{symbol}: {name}"), equation, value, D::Time);
        return;
    }
    let path = format!("controller.high_side.edge_times.{symbol}");
    let own = format!("high_side.edge_times.{symbol}");
    let path = if book.origins.find(&path).is_some() { path } else { own };
    book.datum(symbol, &path, (value, D::Time, "measured"));
}

/// Gate loop of the low side, needed only where the valley is negative.
pub(super) fn low_side_gate(case: &Case<'_>, book: &mut Book<'_>) {
    if let Some(low) = resistance::low_side(case) {
        let drivers = &case.prepared.stage.controller.low_side;
        gate_loop(&low, "low_side", [drivers.r_source, drivers.r_sink], book);
    }
}
