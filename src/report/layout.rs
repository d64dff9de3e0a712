//! A table with its numbers printed: what every format of lines and boxes starts from.

use std::collections::BTreeMap;

use super::number::{self, Form, Scale};
use super::{Cell, RowKind, Severity, Table, Units};
use crate::units::Dimension;

/// Remarks of a table that are spelt out below it.
const MOST_NOTES: usize = 9;

/// A table as it will be read, nothing escaped yet.
#[derive(Clone, Debug, PartialEq)]
pub struct Layout {
    /// Titles with their units: `loss [W]`.
    pub titles: Vec<String>,
    /// Rows, each as long as the titles.
    pub rows: Vec<LaidRow>,
    /// Remarks below the table, in the order of their numbers.
    pub notes: Vec<String>,
}

/// A row of printed cells.
#[derive(Clone, Debug, PartialEq)]
pub struct LaidRow {
    /// What it is.
    pub kind: RowKind,
    /// Cells from left to right.
    pub cells: Vec<Printed>,
}

/// A printed cell.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct Printed {
    /// Number or words.
    pub text: String,
    /// What stands behind it: a severity mark, the number of a remark.
    pub mark: String,
    /// The gravest remark on it.
    pub severity: Option<Severity>,
}

impl Printed {
    /// Text and mark together.
    pub fn whole(&self) -> String {
        match (self.text.is_empty(), self.mark.is_empty()) {
            (_, true) => self.text.clone(),
            (true, false) => self.mark.clone(),
            (false, false) => format!("{} {}", self.text, self.mark),
        }
    }
}

impl Table {
    /// Prints every cell: units into titles, one prefix a dimension for the columns that share it, remarks numbered.
    pub fn layout(&self) -> Layout {
        let scales = self.scales();
        let titles = self.columns.iter().zip(&scales).map(|(column, scale)| match scale {
            Some(scale) if !scale.unit().is_empty() => format!("{} [{}]", column.title, scale.unit()),
            _ => column.title.clone(),
        });
        let mut notes = Notes::default();
        let rows = self.rows.iter().map(|row| {
            let cell = |place: usize| row.cells.get(place).unwrap_or(&Cell::Blank);
            let cells =
                scales.iter().enumerate().map(|(place, scale)| notes.print(cell(place), scale.as_ref()));
            LaidRow { kind: row.kind, cells: cells.collect() }
        });
        let rows = rows.collect();
        Layout { titles: titles.collect(), rows, notes: notes.lines() }
    }

    /// The scale of each column that has its unit in the title.
    fn scales(&self) -> Vec<Option<Scale>> {
        let mut all: BTreeMap<Dimension, Vec<f64>> = BTreeMap::new();
        let columns: Vec<Option<(Form, Vec<f64>)>> = (0..self.columns.len())
            .map(|place| {
                if self.columns[place].units == Units::InCells {
                    return None;
                }
                let mut numbers = self.rows.iter().filter_map(|row| row.cells.get(place)?.value()).peekable();
                let form = numbers.peek()?.1;
                let values: Vec<f64> =
                    numbers.filter(|number| number.1 == form).map(|number| number.0).collect();
                if let Form::Result(dimension) | Form::Setting(dimension) = form {
                    all.entry(dimension).or_default().extend(&values);
                }
                Some((form, values))
            })
            .collect();
        let prefix = |form| match form {
            Form::Result(dimension) | Form::Setting(dimension) => {
                number::shared_prefix(all.get(&dimension).into_iter().flatten().copied(), dimension)
            }
            _ => 0,
        };
        columns
            .into_iter()
            .map(|column| column.map(|(form, values)| Scale::new(&values, form, prefix(form))))
            .collect()
    }
}

/// Remarks met so far, and marks that need a legend.
#[derive(Default)]
struct Notes {
    remarks: Vec<String>,
    more: usize,
    bare: BTreeMap<Severity, ()>,
}

impl Notes {
    fn print(&mut self, cell: &Cell, scale: Option<&Scale>) -> Printed {
        match cell {
            Cell::Missing { reason } => {
                Printed { text: "—".into(), mark: self.number(reason), severity: None }
            }
            Cell::Flagged { cell, severity, reason } => {
                let inner = self.print(cell, scale);
                let number = if reason.is_empty() {
                    self.bare.insert(*severity, ());
                    String::new()
                } else {
                    self.number(&format!("{}: {reason}", severity.name()))
                };
                let marks = [inner.mark.as_str(), severity.mark(), &number];
                let mark: Vec<&str> = marks.into_iter().filter(|mark| !mark.is_empty()).collect();
                let severity = inner.severity.max(Some(*severity));
                Printed { text: inner.text, mark: mark.join(" "), severity }
            }
            other => {
                let text = match (other.value(), scale) {
                    (Some((value, form)), Some(scale)) if scale.suits(form) => scale.show(value),
                    _ => other.shown(),
                };
                Printed { text, ..Printed::default() }
            }
        }
    }

    /// The number of a remark, the same for the same words.
    fn number(&mut self, remark: &str) -> String {
        if remark.is_empty() {
            return String::new();
        }
        if let Some(place) = self.remarks.iter().position(|known| known == remark) {
            return format!("[{}]", place + 1);
        }
        if self.remarks.len() == MOST_NOTES {
            self.more += 1;
            return "[+]".into();
        }
        self.remarks.push(remark.into());
        format!("[{}]", self.remarks.len())
    }

    fn lines(self) -> Vec<String> {
        let numbered =
            self.remarks.iter().enumerate().map(|(place, remark)| format!("[{}] {remark}", place + 1));
        let mut lines: Vec<String> = numbered.collect();
        match self.more {
            0 => {}
            1 => lines.push("[+] one more of this kind, in the JSON and CSV output".into()),
            more => lines.push(format!("[+] {more} more of this kind, in the JSON and CSV output")),
        }
        let legend: Vec<String> =
            self.bare.keys().map(|severity| format!("{} {}", severity.mark(), severity.name())).collect();
        if !legend.is_empty() {
            lines.push(legend.join(", "));
        }
        lines
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::report::Column;

    #[test]
    fn units_go_to_titles_and_remarks_below() {
        let columns = vec![
            Column::text("part"),
            Column::number("loss"),
            Column::number("cold"),
            Column::quantity("own"),
        ];
        let mut table = Table::new("c", columns);
        table.row(vec![Cell::text("a"), Cell::watts(0.0446), Cell::watts(0.04), Cell::watts(0.04)]);
        table.row(vec![Cell::text("b"), Cell::missing("no data"), Cell::missing("no data")]);
        table.total(vec![Cell::text("t"), Cell::watts(1.342).flagged(Severity::Critical, "too hot")]);
        let layout = table.layout();
        assert_eq!(layout.titles, ["part", "loss [W]", "cold [W]", "own"]);
        let whole =
            |row: usize| layout.rows[row].cells.iter().map(Printed::whole).collect::<Vec<_>>().join("|");
        assert_eq!(whole(0), "a|0.045|0.0400|40.0 mW");
        assert_eq!(whole(1), "b|— [1]|— [1]|");
        assert_eq!(whole(2), "t|1.342 !! [2]||");
        assert_eq!(layout.notes, ["[1] no data", "[2] critical: too hot"]);
    }

    #[test]
    fn many_remarks_are_counted_and_bare_marks_explained() {
        let mut table = Table::new("c", vec![Column::number("x")]);
        for place in 0..12 {
            table.row(vec![Cell::missing(format!("reason {place}"))]);
        }
        table.row(vec![Cell::count(1).flagged(Severity::Warning, "")]);
        let layout = table.layout();
        assert_eq!(layout.notes.len(), 11);
        assert_eq!(layout.notes[9], "[+] 3 more of this kind, in the JSON and CSV output");
        assert_eq!(layout.notes[10], "! warning");
        assert_eq!(layout.rows[11].cells[0].whole(), "— [+]");
    }
}
