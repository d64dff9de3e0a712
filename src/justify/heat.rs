//! Temperatures (E50), the sum and the balance (E60).

use super::book::{Book, Chapter, PURE};
use super::case::Case;
use super::laws;
use crate::fitted::{CONTROLLER, HIGH, INDUCTOR, NODES, Nodes, RECTIFIER, SCHOTTKY, slot_of};
use crate::ledger::{ALL_ACCOUNTS, Slot};
use crate::model::Solved;
use crate::units::Dimension as D;

/// Symbol of an entry's watts, as its last step defines it.
fn watts_of(lines: &[super::book::Line], slot: Slot) -> Vec<String> {
    let mut symbols = Vec::new();
    for (account, of, _) in ALL_ACCOUNTS {
        let last = lines.iter().rev().find(|line| line.account == Some(account));
        if let Some(line) = last.filter(|_| of == slot) {
            symbols.push(line.symbol.clone());
        }
    }
    symbols
}

fn sum(symbols: &[String]) -> String {
    if symbols.is_empty() { "0".into() } else { symbols.join(" + ") }
}

pub(super) fn temperatures(case: &Case<'_>, book: &mut Book<'_>) {
    book.open(Chapter::Heat);
    book.law(&laws::HEAT);
    let synchronous = case.prepared.stage.is_synchronous();
    let flow = &case.prepared.stage.heat;
    let watts: Nodes = case.heated.node_watts();
    for node in [HIGH, RECTIFIER, INDUCTOR, SCHOTTKY, CONTROLLER] {
        let slot = slot_of(node, synchronous);
        let symbols = watts_of(&book.lines, slot);
        if symbols.is_empty() {
            continue;
        }
        let words = slot.words();
        let power = format!("P_{}", end(node, synchronous));
        book.step(&format!("{power}: loss in the {words}"), &sum(&symbols), watts[node], D::Power);
        let Some(r_th) = flow.to_ambient[node] else {
            book.remark(format!("The {words} has no thermal resistance: it is held at ambient."));
            continue;
        };
        let symbol = format!("R_TH_{}", end(node, synchronous));
        book.given(&symbol, r_th, D::ThermalResistance, resistance_origin(book, slot));
    }
    let others = [
        (Slot::InputCapacitors, case.unheated.input_esr.watts),
        (Slot::OutputCapacitors, case.unheated.output_esr.watts),
        (Slot::Board, case.unheated.copper.watts + case.unheated.sense.watts + case.unheated.snubber.watts),
    ];
    for node in 0..NODES {
        let (slot, name) = (slot_of(node, synchronous), end(node, synchronous));
        if flow.to_ambient[node].is_none() || watts_of(&book.lines, slot).is_empty() {
            continue;
        }
        let mut equation = format!("T_A + R_TH_{name}·P_{name}");
        for (_, heating, k) in flow.coupling.iter().filter(|(heated, ..)| *heated == node) {
            let from = (0..NODES).find(|other| slot_of(*other, synchronous) == *heating);
            let power = match (from, others.iter().find(|other| other.0 == *heating)) {
                (Some(from), _) if !watts_of(&book.lines, *heating).is_empty() => {
                    format!("P_{}", end(from, synchronous))
                }
                (None, Some((_, watts))) => {
                    let symbol = format!("P_{}", heating.name());
                    let symbols = watts_of(&book.lines, *heating);
                    book.step(
                        &format!("{symbol}: loss in the {}", heating.words()),
                        &sum(&symbols),
                        *watts,
                        D::Power,
                    );
                    symbol
                }
                _ => continue,
            };
            let coupling = format!("K_{name}_{}", heating.name());
            book.given(
                &coupling,
                *k,
                D::ThermalResistance,
                format!("budget, thermal_coupling from {}", heating.words()),
            );
            equation.push_str(&format!(" + {coupling}·{power}"));
        }
        let label = format!("T_{name}: temperature of the {}", slot.words());
        book.step(&label, &equation, case.nodes[node], D::Temperature);
    }
}

fn end(node: usize, synchronous: bool) -> &'static str {
    match node {
        HIGH => "HS",
        RECTIFIER if synchronous => "LS",
        RECTIFIER => "FD",
        INDUCTOR => "L",
        SCHOTTKY => "SK",
        _ => "C",
    }
}

/// Where a thermal resistance comes from.
fn resistance_origin(book: &Book<'_>, slot: Slot) -> String {
    let key = if slot == Slot::Inductor { "r_th" } else { "r_th_ja" };
    match book.origins.find(&format!("{}.{key}", slot.name())) {
        Some(value) => format!("{}; divided by the number in parallel", book.origins.words(value)),
        None => format!(
            "rise/(dcr·i²) of the printed temperature_rise ({}); divided by the number in parallel",
            book.origins.points(&format!("{}.temperature_rise", slot.name()))
        ),
    }
}

/// The sum of the entries and the balance.
pub(super) fn balance(solved: &Solved, book: &mut Book<'_>) {
    book.open(Chapter::Balance);
    book.law(&laws::LEDGER);
    let entries: Vec<String> =
        crate::ledger::ALL_SLOTS.into_iter().flat_map(|slot| watts_of(&book.lines, slot)).collect();
    book.step("P_LOSS: loss, the sum of the entries", &sum(&entries), solved.loss(), D::Power);
    book.step("P_OUT: power delivered", "V_OUT·I_OUT", solved.output_power(), D::Power);
    book.step("P_IN: power drawn", "P_OUT + P_LOSS", solved.input_power(), D::Power);
    match solved.efficiency() {
        Some(efficiency) => book.step("η: efficiency", "P_OUT/P_IN", efficiency, PURE),
        None => book.remark("Without load the efficiency is undefined."),
    }
}
