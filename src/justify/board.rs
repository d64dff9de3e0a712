//! Entries of the capacitors and of the board (E40, E41).

use super::book::{Book, SQUARE_AMPERES};
use super::case::Case;
use super::laws;
use crate::ledger::Account;
use crate::loss::esr::Esr;
use crate::parts::capacitor::Bank;
use crate::units::Dimension as D;

pub(super) fn banks(case: &Case<'_>, book: &mut Book<'_>) {
    let mean = if case.continuous() { "D·I_OUT" } else { "D·(I_V + I_P)/2" };
    let stage = case.prepared.stage;
    let square = format!("max(D·m - ({mean})^2, 0)");
    let input = ["CI", "input_capacitors", &square];
    bank(Account::InputCapacitorsEsr, input, (&stage.input_bank, &case.unheated.input_esr), book);
    let output = ["CO", "output_capacitors", "max(I_L² - I_OUT^2, 0)"];
    bank(Account::OutputCapacitorsEsr, output, (&stage.output_bank, &case.unheated.output_esr), book);
}

fn bank(account: Account, [end, slot, square]: [&str; 3], (bank, esr): (&Bank, &Esr), book: &mut Book<'_>) {
    if bank.kinds.is_empty() {
        return;
    }
    book.entry(account);
    let words = slot.replace('_', " ");
    book.law(&laws::RAMP).step(
        &format!("I_{end}²: squared RMS current of the {words}"),
        square,
        esr.mean_square,
        SQUARE_AMPERES,
    );
    book.law(&laws::BANK);
    let (resistance, name) = (format!("ESR_{end}"), format!("P_{end}_esr: {words}, ESR"));
    match bank.kinds.as_slice() {
        [kind] => {
            book.datum(&resistance, &format!("{slot}[0].esr"), (kind.esr, D::Resistance, ""));
            book.given(
                &format!("n_{end}"),
                kind.n,
                super::book::PURE,
                format!("capacitors in parallel in {slot}"),
            );
            book.step(&name, &format!("I_{end}²·{resistance}/n_{end}"), esr.watts, D::Power);
        }
        kinds => {
            let each: Vec<String> = (0..kinds.len())
                .flat_map(|place| ["capacitance", "esr", "esl"].map(|key| format!("{slot}[{place}].{key}")))
                .filter_map(|path| book.origins.find(&path).map(|value| book.origins.words(value)))
                .collect();
            let origin = format!(
                "effective resistance: each harmonic divides by the impedances of the kinds, squares scaled to I_{end}²; {}",
                each.join("; ")
            );
            book.given(&resistance, esr.resistance, D::Resistance, origin);
            book.step(&name, &format!("I_{end}²·{resistance}"), esr.watts, D::Power);
        }
    }
}

pub(super) fn derive(case: &Case<'_>, book: &mut Book<'_>) {
    book.entry(Account::BoardCopper);
    let copper = &case.unheated.copper;
    book.law(&laws::BOARD);
    let steps = [
        ("P_B_HS: high-side path", "D·m·R_PATH_HS·k_B", copper.high_side_path),
        ("P_B_LS: low-side path", "D_2·m·R_PATH_LS·k_B", copper.low_side_path),
        ("P_B_OUT: output path", "I_L²·R_PATH_OUT·k_B", copper.output_path),
        ("P_B_IN: input path", "(D·(I_V + I_P)/2)^2·R_PATH_IN·k_B", copper.input_path),
        ("P_B_LOAD: load path", "I_OUT^2·R_LOAD·k_B", copper.load_path),
    ];
    for (label, equation, watts) in steps {
        book.step(label, equation, watts, D::Power);
    }
    let sum = "P_B_HS + P_B_LS + P_B_OUT + P_B_IN + P_B_LOAD";
    book.step("P_B_copper: board, copper", sum, copper.watts, D::Power);
    book.entry(Account::BoardSense);
    book.step("P_B_sense: board, sense", "I_L²·R_SENSE·k_B", case.unheated.sense.watts, D::Power);
    book.entry(Account::BoardSnubber);
    book.datum("C_SNUB", "board.snubber", (0.0, D::Capacitance, "not in the budget, 0 F"));
    let equation = format!("C_SNUB·V_IN^2·{}", case.f());
    book.step("P_B_snubber: board, snubber", &equation, case.unheated.snubber.watts, D::Power);
}
