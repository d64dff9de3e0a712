//! Gate drive: charge, share of each switch, the controller's part (E20, E21), and its bias (E42).

use super::book::{Book, PURE};
use super::case::Case;
use super::laws;
use super::resistance::{self, Switch};
use crate::ledger::Account;
use crate::loss::gate_drive::GatePower;
use crate::model::HeatedRectifier;
use crate::parts::controller::Supply;
use crate::units::Dimension as D;
use crate::waveform::Mode;

pub(super) fn high_side(case: &Case<'_>, book: &mut Book<'_>) {
    book.entry(Account::HighSideGateDrive);
    of_switch(case, &resistance::high_side(case), &case.heated.high_gate, book);
}

pub(super) fn low_side(case: &Case<'_>, book: &mut Book<'_>) {
    let HeatedRectifier::Synchronous { gate, .. } = &case.heated.rectifier else { return };
    let Some(low) = resistance::low_side(case) else { return };
    book.entry(Account::LowSideGateDrive);
    let drivers = &case.prepared.stage.controller.low_side;
    book.datum(
        "R_G_LS",
        "low_side.r_g",
        (crate::parts::mosfet::ASSUMED_GATE_RESISTANCE, D::Resistance, "absent, 1 Ω assumed"),
    );
    super::edges::driver_resistances("LS", "low_side", [drivers.r_source, drivers.r_sink], book);
    of_switch(case, &low, gate, book);
}

fn of_switch(case: &Case<'_>, switch: &Switch<'_>, gate: &GatePower, book: &mut Book<'_>) {
    let end = switch.end;
    charge(switch, gate.charge, book);
    let part = |driver: &str| format!("R_G_{end}/n_{end}/(R_G_{end}/n_{end} + {driver}_{end})");
    let equation = if switch.curves.r_g > 0.0 {
        format!("({} + {})/2", part("R_SRC"), part("R_SNK"))
    } else {
        "0".into()
    };
    book.law(&laws::GATE);
    book.step(
        &format!("w_{end}: share of the gate power burnt in the switch"),
        &equation,
        gate.own_share,
        PURE,
    );
    let slot = switch.slot.replace('_', " ");
    book.step(
        &format!("P_{end}_gate_drive: {slot}, gate drive"),
        &format!("{}·Q_G_{end}·V_GS_{end}·w_{end}", case.f()),
        gate.watts,
        D::Power,
    );
}

/// Gate charge of all devices at the drive voltage (E20).
fn charge(switch: &Switch<'_>, value: f64, book: &mut Book<'_>) {
    let Switch { slot, end, v_gate, sheet, curves, .. } = *switch;
    let mut points: Vec<(usize, f64, f64)> = sheet
        .q_g
        .iter()
        .enumerate()
        .map(|(at, q)| (at, q.condition("v_gs").unwrap_or(10.0), q.value))
        .collect();
    points.sort_by(|a, b| a.1.total_cmp(&b.1));
    let (Some(first), Some(last)) = (points.first(), points.last()) else { return };
    book.datum(&format!("Q_GS_{end}"), &format!("{slot}.q_gs"), (0.0, D::Charge, ""));
    book.datum(&format!("Q_GD_{end}"), &format!("{slot}.q_gd"), (0.0, D::Charge, ""));
    let law = if v_gate <= first.1 || v_gate >= last.1 {
        let at = if v_gate <= first.1 { first } else { last };
        let path = format!("{slot}.q_g[{}]", at.0);
        book.datum(&format!("Q_G(ref)_{end}"), &path, (0.0, D::Charge, ""));
        book.condition(&format!("V_QG_{end}"), &path, "v_gs", 10.0);
        book.datum(&format!("V_PL(test)_{end}"), &format!("{slot}.v_gs_plateau"), (0.0, D::Voltage, ""));
        if at.1 > sheet.v_gs_plateau.value {
            format!(
                "Q_G(ref)_{end} + (V_GS_{end} - V_QG_{end})·max((Q_G(ref)_{end} - Q_GS_{end} - Q_GD_{end})/(V_QG_{end} - V_PL(test)_{end}), 0)"
            )
        } else {
            format!("Q_G(ref)_{end}")
        }
    } else {
        let Some(pair) = points.windows(2).find(|pair| v_gate < pair[1].1) else { return };
        for (which, point) in [("A", &pair[0]), ("B", &pair[1])] {
            let path = format!("{slot}.q_g[{}]", point.0);
            book.datum(&format!("Q_G{which}_{end}"), &path, (0.0, D::Charge, ""));
            book.condition(&format!("V_QG{which}_{end}"), &path, "v_gs", 10.0);
        }
        format!(
            "Q_GA_{end} + (Q_GB_{end} - Q_GA_{end})·(V_GS_{end} - V_QGA_{end})/(V_QGB_{end} - V_QGA_{end})"
        )
    };
    let one = curves.gate_charge.at(v_gate);
    book.law(&laws::GATE_CHARGE);
    book.step(
        &format!("Q_G1_{end}: gate charge of one device at the drive voltage"),
        &format!("max({law}, Q_GS_{end} + Q_GD_{end})"),
        one,
        D::Charge,
    );
    let (equation, name) = if end == "LS" {
        (format!("n_{end}·(Q_G1_{end} - Q_GD_{end})"), "it switches at about zero volts")
    } else {
        (format!("n_{end}·Q_G1_{end}"), "all devices")
    };
    book.step(&format!("Q_G_{end}: gate charge, {name}"), &equation, value, D::Charge);
}

/// The controller's entries: what is left of the gate power, and its own supply.
pub(super) fn controller(case: &Case<'_>, book: &mut Book<'_>) {
    book.entry(Account::ControllerGateDrive);
    book.law(&laws::GATE);
    let stage = case.prepared.stage;
    let equation = match stage.controller.supply {
        Supply::External(_) => {
            book.datum("η_DRIVE", "controller.drive_supply.efficiency", (1.0, D::Number, ""));
            "V_DRIVE/η_DRIVE"
        }
        _ if stage.drives_from_input(case.prepared.output_voltage) => "V_IN",
        _ => "V_O",
    };
    let drive = &case.heated.drive;
    book.step("V_S: voltage the gate charge is drawn from", equation, drive.v_supply, D::Voltage);
    let low = if stage.is_synchronous() { " + Q_G_LS" } else { "" };
    book.step("P_GATES: gate power drawn", &format!("{}·(Q_G_HS{low})·V_S", case.f()), drive.total, D::Power);
    let low = if stage.is_synchronous() { " - P_LS_gate_drive" } else { "" };
    book.step(
        "P_C_gate_drive: controller, gate drive",
        &format!("max(P_GATES - P_HS_gate_drive{low}, 0)"),
        drive.watts,
        D::Power,
    );
    book.entry(Account::ControllerBias);
    book.datum("I_Q", "controller.i_q", (0.0, D::Current, ""));
    book.law(&laws::BIAS);
    let skipping = case.waveform().mode == Mode::PulseSkipping && stage.controller.i_q_sleep.is_some();
    if skipping {
        book.datum("I_SLEEP", "controller.i_q_sleep", (0.0, D::Current, ""));
    }
    let equation = if skipping { "I_SLEEP + (I_Q - I_SLEEP)·f_e/f_SW" } else { "I_Q" };
    book.step("I_BIAS: supply current without switching", equation, case.heated.bias.current, D::Current);
    book.step("P_C_bias: controller, bias", "V_IN·I_BIAS", case.heated.bias.watts, D::Power);
}
