//! How sure the first place of a ranking is, and where other parts would lead.

use crate::pick::bands::{Pair, SlotBands};
use crate::pick::entry::Outcome;
use crate::pick::insight::Insight;
use crate::report::number::{Form, show};
use crate::report::shortlist::caption;
use crate::report::{Cell, Column, Document, Severity, Table, words};
use crate::units::Dimension as D;

/// Values listed by name; the rest is counted.
const MOST_VALUES: usize = 12;

/// Adds leaders over the load, robustness and figures of merit.
pub(super) fn add(outcome: &Outcome, insight: &Insight, document: &mut Document) {
    if !insight.bands.is_empty() {
        document.heading(2, "Who leads at which load");
        document.paragraph(
            "Slot by slot, the other slots as in the first place, the other coordinates as at the headline.",
        );
        document.table(bands(outcome, &insight.bands));
        document
            .list(insight.bands.iter().flat_map(|slot| slot.pairs.iter().map(|p| pair(slot, p))).collect());
    }
    if !insight.robustness.is_empty() {
        document.heading(2, "How sure the first place is");
        document.paragraph("The smallest change of each data-sheet value that would cost the first place; rivals with the same part change with it.");
        robustness(outcome, insight, document);
    }
    for merit in &insight.merit {
        if let Some((best, winner, more)) = merit.disagreement() {
            document.notice(
                Severity::Note,
                format!(
                    "The figure of merit would choose {best} for the {}, yet it loses {} more than {winner} at the headline.",
                    merit.slot.words(),
                    watts(more)
                ),
            );
        }
    }
}

fn watts(value: f64) -> String {
    show(value, Form::Result(D::Power))
}

fn amperes(value: f64) -> String {
    show(value, Form::Result(D::Current))
}

fn bands(outcome: &Outcome, slots: &[SlotBands]) -> Table {
    let columns = vec![
        Column::text("slot"),
        Column::text("least loss with"),
        Column::quantity("from"),
        Column::quantity("to"),
    ];
    let mut table = Table::new(caption(outcome, "leaders over the load"), columns);
    for slot in slots {
        for band in &slot.bands {
            table.row(vec![
                Cell::text(slot.slot.replace('_', " ")),
                Cell::text(&band.part),
                Cell::quantity(band.from, D::Current),
                Cell::quantity(band.to, D::Current),
            ]);
        }
    }
    table
}

/// "high side: a overtakes b at 1.2 A".
fn pair(slot: &SlotBands, pair: &Pair) -> String {
    let name = slot.slot.replace('_', " ");
    let Pair { first, second, crossovers } = pair;
    if crossovers.is_empty() {
        return format!("{name}: {first} and {second} do not change places at any load");
    }
    let places: Vec<String> = crossovers
        .iter()
        .map(|crossover| {
            format!("{} overtakes {} at {}", crossover.above, crossover.below, amperes(crossover.load))
        })
        .collect();
    format!("{name}: {}", words::list(&places))
}

fn robustness(outcome: &Outcome, insight: &Insight, document: &mut Document) {
    let columns = vec![Column::text("value"), Column::text("part"), Column::quantity("change")];
    let mut table = Table::new(caption(outcome, "robustness of the first place"), columns);
    let delicate = insight.robustness.iter().filter_map(|one| Some((one, one.change?)));
    for (tolerance, change) in delicate.clone().take(MOST_VALUES) {
        let sign = if change < 0.0 { "−" } else { "+" };
        table.row(vec![
            Cell::text(&tolerance.path),
            Cell::text(&tolerance.part),
            Cell::text(format!("{sign}{}", Cell::share(change.abs()).shown())),
        ]);
    }
    let (all, some) = (insight.robustness.len(), delicate.count());
    if some > 0 {
        document.table(table);
    }
    if some > MOST_VALUES {
        let more = words::count(some - MOST_VALUES, "value");
        document.paragraph(format!("{more} more would have to be further off; --format json lists them."));
    }
    if all > some {
        let rest = words::count(all - some, "value");
        document.paragraph(format!("{rest} cannot cost the first place between −90 % and +300 %."));
    }
}
