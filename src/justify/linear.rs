//! A linear regulator: two entries (E43).

use super::book::{Book, Chapter, PURE};
use super::laws;
use crate::ledger::{Account, Slot};
use crate::linear::LinearContributions;
use crate::model::Solved;
use crate::parts::linear_regulator::LinearRegulator;
use crate::units::Dimension as D;

pub(super) fn derive(
    regulator: &LinearRegulator,
    contributions: &LinearContributions,
    solved: &Solved,
    book: &mut Book<'_>,
) {
    let load = solved.point.load;
    book.open(Chapter::Waveform);
    book.remark("A linear regulator has no waveform: the load current flows all the time.");
    book.given("n_R", regulator.n, PURE, "regulators in parallel");
    let drop_out = regulator.dropout(load);
    let points = book.origins.points("regulator.dropout");
    book.given(
        "V_DO",
        drop_out,
        D::Voltage,
        format!("regulator.dropout at the load, linear between points: {points}"),
    );
    book.law(&laws::LINEAR);
    book.step(
        "V_SPARE: voltage above drop-out",
        "V_IN - V_OUT - V_DO",
        contributions.pass.drop - drop_out,
        D::Voltage,
    );
    book.entry(Account::RegulatorPass);
    book.step("V_DROP: voltage across the pass element", "V_IN - V_OUT", contributions.pass.drop, D::Voltage);
    book.step("P_R_pass: regulator, pass element", "V_DROP·I_OUT", contributions.pass.watts, D::Power);
    book.entry(Account::RegulatorGroundCurrent);
    let points = book.origins.points("regulator.i_gnd");
    let origin = format!("regulator.i_gnd at the load, all parts, linear between points: {points}");
    book.given("I_GND", contributions.ground_current.current, D::Current, origin);
    book.step(
        "P_R_ground_current: regulator, ground current",
        "V_IN·I_GND",
        contributions.ground_current.watts,
        D::Power,
    );
    book.open(Chapter::Heat);
    if let (Some(r_th), Some(t_j)) = (regulator.r_th, solved.temperatures[Slot::Regulator.index()]) {
        book.datum("R_TH_R", "regulator.r_th_ja", (r_th, D::ThermalResistance, ""));
        book.law(&laws::HEAT);
        book.step(
            "T_J_R: junction of the regulator",
            "T_A + R_TH_R/n_R·(P_R_pass + P_R_ground_current)",
            t_j,
            D::Temperature,
        );
    } else {
        book.remark("The regulator has no thermal resistance: it is held at ambient.");
    }
}
