//! The balance of booked watts: input power equals output power plus every part's loss.

use crate::compare::Comparison;
use crate::findings::Severity;
use crate::ledger::ALL_SLOTS;
use crate::report::{Cell, Column, Table, words};

/// One column a stage: output power, loss by slot, and their sum, the input power.
pub(super) fn table(comparison: &Comparison<'_>) -> Table {
    let mut columns = vec![Column::text("booked to")];
    columns.extend(comparison.candidates.iter().map(|candidate| Column::quantity(candidate.name())));
    let mut table = Table::new("", columns);
    let row = |name: &str, cell: &dyn Fn(usize) -> Option<f64>| {
        let mut cells = vec![Cell::text(name)];
        cells
            .extend((0..comparison.headline.len()).map(|place| cell(place).map_or(Cell::Blank, Cell::watts)));
        cells
    };
    let solved = |place: usize| Some(&comparison.headline.get(place)?.outcome.as_ref().ok()?.solved);
    for slot in ALL_SLOTS {
        let books = |place: usize| {
            let accounts = &comparison.candidates.get(place)?.accounts;
            accounts.iter().any(|account| account.slot() == slot).then_some(())
        };
        if (0..comparison.candidates.len()).any(|place| books(place).is_some()) {
            table.row(row(&slot.words(), &|place| {
                books(place)?;
                Some(solved(place)?.ledger.slot(slot))
            }));
        }
    }
    let mut losses = row("= loss", &|place| Some(solved(place)?.loss()));
    for (cell, candidate) in losses.iter_mut().skip(1).zip(comparison.candidates) {
        let missing = candidate.not_modelled.len();
        if missing > 0 && *cell != Cell::Blank {
            let remark =
                format!("{}: {}", candidate.name(), words::count(missing, "mechanism") + " not modelled");
            *cell = cell.clone().flagged(Severity::Note, remark);
        }
    }
    table.subtotal(losses);
    table.row(row("delivered to the load", &|place| Some(solved(place)?.output_power())));
    table.total(row("= drawn from the input", &|place| Some(solved(place)?.input_power())));
    table
}
