//! Resistances hot: copper, channels, winding (E10, E11, E30).

use super::book::{Book, PURE};
use super::case::Case;
use super::laws;
use crate::fitted::{HIGH, INDUCTOR, RECTIFIER, Rectifier};
use crate::parts::mosfet::{ASSUMED_HOT_RATIO, Mosfet};
use crate::sheet::MosfetSheet;
use crate::stage::RectifierSheet;
use crate::units::Dimension as D;

/// A MOSFET of the stage: its slot's name in key paths, the ending of its symbols, sheet, curves, drive.
pub(super) struct Switch<'a> {
    pub(super) slot: &'static str,
    pub(super) end: &'static str,
    pub(super) sheet: &'a MosfetSheet,
    pub(super) curves: &'a Mosfet,
    pub(super) v_gate: f64,
    pub(super) r_cold: f64,
    pub(super) t_j: f64,
}

pub(super) fn high_side<'a>(case: &'a Case<'_>) -> Switch<'a> {
    let drive = &case.prepared.drive;
    Switch {
        slot: "high_side",
        end: "HS",
        sheet: &case.sheet.high_side.sheet,
        curves: &case.prepared.stage.high_side,
        v_gate: drive.v_high,
        r_cold: drive.r_high,
        t_j: case.nodes[HIGH],
    }
}

pub(super) fn low_side<'a>(case: &'a Case<'_>) -> Option<Switch<'a>> {
    let drive = &case.prepared.drive;
    match (&case.sheet.rectifier, &case.prepared.stage.rectifier) {
        (RectifierSheet::Synchronous { low_side, .. }, Rectifier::Synchronous { low_side: curves, .. }) => {
            Some(Switch {
                slot: "low_side",
                end: "LS",
                sheet: &low_side.sheet,
                curves,
                v_gate: drive.v_low,
                r_cold: drive.r_low,
                t_j: case.nodes[RECTIFIER],
            })
        }
        _ => None,
    }
}

/// The ratio k_B of the board's copper, hot over 25 °C.
pub(super) fn board(case: &Case<'_>, book: &mut Book<'_>) {
    let ambient = case.prepared.point.ambient;
    book.datum("T_B", "board.temperature", (ambient, D::Temperature, "absent, the ambient temperature"));
    book.law(&laws::COPPER).step(
        "k_B: board copper, hot over 25 °C",
        "(1 + 0.00393·(T_B - 20))/(1 + 0.00393·5)",
        case.prepared.board_ratio,
        PURE,
    );
    for (symbol, key) in [
        ("R_PATH_HS", "high_side_path"),
        ("R_PATH_LS", "low_side_path"),
        ("R_PATH_OUT", "output_path"),
        ("R_SENSE", "sense"),
        ("R_PATH_IN", "input_path"),
        ("R_LOAD", "load_path"),
    ] {
        book.datum(symbol, &format!("board.{key}"), (0.0, D::Resistance, "not in the budget, 0 Ω"));
    }
}

/// V_GS, R at 25 °C and hot, all devices.
pub(super) fn channel(switch: &Switch<'_>, book: &mut Book<'_>) {
    let Switch { slot, end, .. } = *switch;
    let n = switch.curves.n;
    book.given(&format!("n_{end}"), n, PURE, format!("devices in parallel in {slot}"));
    let r_25 = cold(switch, book);
    let (t_hot, ratio) = (format!("T_HOT_{end}"), format!("r_HOT_{end}"));
    book.datum(&t_hot, &format!("{slot}.r_ds_on_hot.t_j"), (125.0, D::Temperature, "absent, 125 °C assumed"));
    book.datum(
        &ratio,
        &format!("{slot}.r_ds_on_hot.ratio"),
        (ASSUMED_HOT_RATIO, D::Number, "absent, 1.5 assumed (common practice)"),
    );
    book.given(
        &format!("T_J_{end}"),
        switch.t_j,
        D::Temperature,
        "settled together with the losses, see the temperatures",
    );
    book.law(&laws::HOT).step(
        &format!("p_{end}: exponent of the on-resistance over temperature"),
        &format!("ln({ratio})/ln(({t_hot} + 273.15)/298.15)"),
        switch.curves.hot_exponent,
        PURE,
    );
    let hot = switch.curves.hot_ratio(switch.t_j);
    book.step(
        &format!("R_DS(on)_{end}: on-resistance of all devices at T_J"),
        &format!("{r_25}/n_{end}·((T_J_{end} + 273.15)/298.15)^p_{end}"),
        switch.r_cold * hot,
        D::Resistance,
    );
}

/// R of one device at 25 °C and the drive voltage; returns its symbol.
fn cold(switch: &Switch<'_>, book: &mut Book<'_>) -> String {
    let Switch { slot, end, v_gate, .. } = *switch;
    let symbol = format!("R_25_{end}");
    let value = switch.r_cold * switch.curves.n;
    let mut points: Vec<(usize, f64)> = switch
        .sheet
        .r_ds_on
        .iter()
        .enumerate()
        .map(|(at, r)| (at, r.condition("v_gs").unwrap_or(10.0)))
        .collect();
    points.sort_by(|a, b| a.1.total_cmp(&b.1));
    let between = points.windows(2).find(|pair| pair[0].1 < v_gate && v_gate < pair[1].1);
    let Some([(a, _), (b, _)]) = between.and_then(|pair| <[(usize, f64); 2]>::try_from(pair).ok()) else {
        let nearest = match points.first() {
            Some(first) if v_gate <= first.1 => Some(first),
            _ => points.iter().rev().find(|point| point.1 <= v_gate).or(points.last()),
        };
        let path = format!("{slot}.r_ds_on[{}]", nearest.map_or(0, |point| point.0));
        book.datum(&symbol, &path, (value, D::Resistance, "held"));
        return symbol;
    };
    for (which, place) in [("A", a), ("B", b)] {
        let path = format!("{slot}.r_ds_on[{place}]");
        book.datum(&format!("R_{which}_{end}"), &path, (value, D::Resistance, ""));
        book.condition(&format!("V_{which}_{end}"), &path, "v_gs", 10.0);
    }
    book.datum(&format!("V_GS(th)_{end}"), &format!("{slot}.v_gs_th"), (0.0, D::Voltage, ""));
    let inverse = |v: &str| format!("1/({v}_{end} - V_GS(th)_{end})");
    let (at, first, last) = (inverse("V_GS"), inverse("V_A"), inverse("V_B"));
    book.law(&laws::ON_RESISTANCE).step(
        &format!("{symbol}: on-resistance of one device at 25 °C and the drive voltage"),
        &format!("R_B_{end} + (R_A_{end} - R_B_{end})·({at} - {last})/({first} - {last})"),
        value,
        D::Resistance,
    );
    symbol
}

/// Winding resistance at its temperature, all inductors in parallel.
pub(super) fn winding(case: &Case<'_>, book: &mut Book<'_>) {
    let n = case.prepared.stage.inductor.n;
    book.given("n_L", n, PURE, "inductors in parallel");
    book.datum("R_DC", "inductor.dcr", (0.0, D::Resistance, ""));
    book.given(
        "T_L",
        case.nodes[INDUCTOR],
        D::Temperature,
        "settled together with the losses, see the temperatures",
    );
    book.law(&laws::COPPER).step(
        "k_L: winding copper, hot over 25 °C",
        "(1 + 0.00393·(T_L - 20))/(1 + 0.00393·5)",
        case.prepared.stage.inductor.hot_ratio(case.nodes[INDUCTOR]),
        PURE,
    );
    book.step("R_L: winding resistance, hot", "R_DC/n_L·k_L", case.heated.winding.resistance, D::Resistance);
}
