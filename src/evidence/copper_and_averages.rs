//! Copper against temperature, and averages of efficiency.

use super::check::{Check, Subject};
use super::rig::{HUGE, Rig, coil};
use crate::average;
use crate::ledger::Account;
use crate::units::Dimension as D;

pub(super) fn checks(list: &mut Vec<Check>) {
    let mut rig = Rig::ideal(12.0, 5.0, 1.0, 100e3);
    rig.inductor = coil(HUGE, 1.0);
    let mut at = |ambient: f64| {
        rig.point.ambient = ambient;
        rig.watts(Account::InductorWinding)
    };
    let cold = at(20.0);
    let standard = "IEC 60028: 0.00393 /K at 20 °C";
    for (temperature, ratio, last_digit) in
        [(60.0, 1.1572, 1e-4), (100.0, 1.3144, 1e-4), (125.0, 1.41265, 1e-5)]
    {
        list.push(Check::printed(ratio, last_digit, D::Number, at(temperature) / cold).about(
            Subject::Copper,
            format!("winding at {temperature} °C over 20 °C"),
            standard,
        ));
    }
    list.push(
        Check::within(1.2890, 1e-4, D::Number, at(100.0) / at(25.0))
            .because("the table rounds its coefficient on the base of 25 °C")
            .about(Subject::Copper, "winding at 100 °C over 25 °C", "handbook table on the base of 25 °C"),
    );

    let ours = average::mean_of_shares([0.90, 0.92, 0.91, 0.85]);
    list.push(Check::within(0.895, 1e-12, D::Ratio, ours).because("arithmetic").about(
        Subject::Copper,
        "mean active efficiency of 90, 92, 91 and 85 %",
        "Regulation (EU) 2019/1782: arithmetic mean at 25, 50, 75 and 100 % load",
    ));
}
