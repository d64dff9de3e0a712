//! Tables that are too wide: titles wrap first, then the table is split and its row names repeated.

use unicode_width::UnicodeWidthStr;

use crate::report::{Alignment, LaidRow, Layout, Table};

/// Space between two columns.
pub(super) const GAP: usize = 2;
/// Words wrap in columns down to this width.
const LEAST_WORDS: usize = 16;

/// Widths that a column can have.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub(super) struct Span {
    /// Below this, numbers or words would break.
    pub least: usize,
    /// Nothing wraps from here on.
    pub natural: usize,
}

/// Widths of every column; titles may wrap between words, numbers may not wrap at all.
pub(super) fn spans(table: &Table, layout: &Layout) -> Vec<Span> {
    let of_column = |place: usize| {
        let column = &table.columns[place];
        let over = column.over.as_deref().unwrap_or_default();
        let title = &layout.titles[place];
        let longest_word =
            title.split(' ').chain(over.split(' ')).map(UnicodeWidthStr::width).max().unwrap_or(0);
        let cells = body_width(&layout.rows, place);
        let natural = cells.max(title.width()).max(over.width());
        let unbroken = if column.alignment == Alignment::Right { cells } else { cells.min(LEAST_WORDS) };
        Span { least: unbroken.max(longest_word).min(natural), natural }
    };
    (0..table.columns.len()).map(of_column).collect()
}

/// Width of the cells of a column, with room for the widest number beside the widest mark.
fn body_width(rows: &[LaidRow], place: usize) -> usize {
    let cells = || rows.iter().filter_map(|row| row.cells.get(place));
    let text = cells().map(|cell| cell.text.width()).max().unwrap_or(0);
    let mark = cells().map(|cell| cell.mark.width()).max().unwrap_or(0);
    if mark == 0 { text } else { text + 1 + mark }
}

/// Columns of each panel: all of them when they fit, else the keys and as many others as fit.
///
/// Columns under one shared heading stay together where that is possible.
pub(super) fn split(table: &Table, spans: &[Span], width: usize) -> Vec<Vec<usize>> {
    let all: Vec<usize> = (0..spans.len()).collect();
    let needed = |places: &[usize]| places.iter().map(|place| spans[*place].least + GAP).sum::<usize>();
    if needed(&all) <= width + GAP {
        return vec![all];
    }
    let (keys, rest) = all.split_at(table.keys.min(all.len()));
    let fits = |panel: &[usize], more: &[usize]| needed(keys) + needed(panel) + needed(more) <= width + GAP;
    let mut panels: Vec<Vec<usize>> = Vec::new();
    let mut panel: Vec<usize> = Vec::new();
    for group in
        rest.chunk_by(|left, right| over(table, *left).is_some() && over(table, *left) == over(table, *right))
    {
        // a group that no panel can hold is taken apart
        let pieces = if fits(&[], group) { vec![group] } else { group.chunks(1).collect() };
        for piece in pieces {
            if !panel.is_empty() && !fits(&panel, piece) {
                panels.push(std::mem::take(&mut panel));
            }
            panel.extend(piece);
        }
    }
    panels.push(panel);
    panels.into_iter().map(|panel| keys.iter().copied().chain(panel).collect()).collect()
}

fn over(table: &Table, place: usize) -> Option<&str> {
    table.columns[place].over.as_deref()
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::report::{Cell, Column};

    #[test]
    fn wide_tables_are_split_between_groups_and_keep_their_keys() {
        let mut columns = vec![Column::text("load")];
        for volts in ["19 V", "24 V", "29 V"] {
            columns.push(Column::number("efficiency").under(volts));
            columns.push(Column::number("loss").under(volts));
        }
        let mut table = Table::new("c", columns);
        let numbers = (0..6).map(|place| Cell::watts(f64::from(place) + 0.5));
        table.row(std::iter::once(Cell::text("6 A")).chain(numbers).collect());
        let spans = spans(&table, &table.layout());
        assert_eq!(split(&table, &spans, 100).len(), 1);
        assert_eq!(split(&table, &spans, 45), [vec![0, 1, 2, 3, 4], vec![0, 5, 6]]);
        assert_eq!(split(&table, &spans, 10).len(), 6);
    }
}
