//! Lines in a terminal: dots of braille, two across and four down a letter, with the names at the ends.

use unicode_width::UnicodeWidthStr;

use super::plot::axis::Axis;
use crate::printable::printable;
use crate::report::figure::Curves;
use crate::report::number::Form;

/// Below this width nothing is drawn.
pub(super) const LEAST_WIDTH: usize = 72;
/// Lines of the drawing.
const ROWS: usize = 15;
/// Bits of the dots of a braille letter by column and row (Unicode block U+2800).
const DOTS: [[u8; 4]; 2] = [[0x01, 0x02, 0x04, 0x40], [0x08, 0x10, 0x20, 0x80]];
/// Most columns of the names at the ends.
const WIDEST_NAME: usize = 24;

/// The drawing as lines of text, or `None` when it does not fit.
pub(super) fn lines(curves: &Curves, width: usize) -> Option<Vec<String>> {
    if width < LEAST_WIDTH {
        return None;
    }
    let xs = curves.series.iter().flat_map(|line| line.points.iter().map(|point| point.0));
    let ys = curves.series.iter().flat_map(|line| line.points.iter().filter_map(|point| point.1));
    let ceiling = if matches!(curves.y.form, Form::Efficiency | Form::Share) { 1.0 } else { f64::INFINITY };
    let x = Axis::around(&curves.x, xs, [0.0, f64::INFINITY]);
    let y = Axis::around(&curves.y, ys, [0.0, ceiling]);
    let names: Vec<String> = curves.series.iter().map(|line| printable(&line.label).into_owned()).collect();
    let name_width = names.iter().map(|name| name.width()).max().unwrap_or(0).min(WIDEST_NAME);
    let left = y.ticks.iter().map(|tick| y.label(*tick).width()).max().unwrap_or(0);
    let columns = width.checked_sub(left + name_width + 5)?.min(90);
    let mut field = Field::new(columns);
    let mut ends: Vec<(usize, &str)> = Vec::new();
    for (line, name) in curves.series.iter().zip(&names) {
        let mut before = None;
        for (at, value) in &line.points {
            let place = x.place(*at).zip(value.and_then(|value| y.place(value)));
            if let Some(place) = place {
                field.stroke(before.unwrap_or(place), place);
            }
            before = place;
        }
        if let Some((_, height)) = before {
            ends.push((field.row(height), name));
        }
    }
    Some(assemble(&field, &ends, [&x, &y], left))
}

/// Dots of the drawing.
struct Field {
    columns: usize,
    cells: Vec<u8>,
}

impl Field {
    fn new(columns: usize) -> Self {
        Field { columns, cells: vec![0; columns * ROWS] }
    }

    /// Line of text of a height between 0 and 1.
    fn row(&self, height: f64) -> usize {
        self.dot((0.0, height)).1 / 4
    }

    fn dot(&self, (x, y): (f64, f64)) -> (usize, usize) {
        let (wide, high) = ((2 * self.columns - 1) as f64, (4 * ROWS - 1) as f64);
        ((x.clamp(0.0, 1.0) * wide).round() as usize, ((1.0 - y.clamp(0.0, 1.0)) * high).round() as usize)
    }

    /// Sets the dots between two places, without gaps.
    fn stroke(&mut self, from: (f64, f64), to: (f64, f64)) {
        let ((x0, y0), (x1, y1)) = (self.dot(from), self.dot(to));
        let steps = x0.abs_diff(x1).max(y0.abs_diff(y1)).max(1);
        for step in 0..=steps {
            let share = step as f64 / steps as f64;
            let between = |a: usize, b: usize| (a as f64 + share * (b as f64 - a as f64)).round() as usize;
            let (x, y) = (between(x0, x1), between(y0, y1));
            if let Some(cell) = self.cells.get_mut(y / 4 * self.columns + x / 2) {
                *cell |= DOTS[x % 2][y % 4];
            }
        }
    }

    fn line(&self, row: usize) -> String {
        let cells = self.cells.iter().skip(row * self.columns).take(self.columns);
        cells.map(|cell| char::from_u32(0x2800 + u32::from(*cell)).unwrap_or(' ')).collect()
    }
}

/// Axes, dots and names in lines.
fn assemble(field: &Field, ends: &[(usize, &str)], [x, y]: [&Axis<'_>; 2], left: usize) -> Vec<String> {
    let mut lines = vec![format!("{:>left$} {}", "", y.title())];
    let labels: Vec<(usize, String)> =
        y.ticks.iter().filter_map(|tick| Some((field.row(y.place(*tick)?), y.label(*tick)))).collect();
    let names = apart(ends);
    for row in 0..ROWS {
        let label = labels.iter().find(|(at, _)| *at == row).map_or("", |(_, label)| label);
        let name = names.iter().find(|(at, _)| *at == row).map_or(String::new(), |(_, name)| {
            format!(" {}", name.chars().take(WIDEST_NAME).collect::<String>())
        });
        let pad = " ".repeat(left - label.width());
        lines.push(format!("{pad}{label} │{}{name}", field.line(row)));
    }
    lines.push(format!("{:>left$} └{}", "", "─".repeat(field.columns)));
    lines.push(ticks(field, x, left));
    lines.push(format!("{:>left$}  {}", "", x.title()));
    lines
}

/// Names on lines of their own, near where their lines end.
fn apart<'a>(ends: &[(usize, &'a str)]) -> Vec<(usize, &'a str)> {
    let mut sorted = ends.to_vec();
    sorted.sort_by_key(|(row, _)| *row);
    let mut next = 0;
    for (row, _) in &mut sorted {
        *row = (*row).max(next);
        next = *row + 1;
    }
    let mut limit = ROWS;
    for (row, _) in sorted.iter_mut().rev() {
        *row = (*row).min(limit.saturating_sub(1));
        limit = *row;
    }
    sorted
}

/// Round numbers under the drawing, as far as they do not touch.
fn ticks(field: &Field, x: &Axis<'_>, left: usize) -> String {
    let mut line = " ".repeat(left + 2);
    let mut used = 0;
    for tick in &x.ticks {
        let (Some(place), label) = (x.place(*tick), x.label(*tick)) else { continue };
        let column = field.dot((place, 0.0)).0 / 2;
        let start =
            column.saturating_sub(label.width() / 2).min((field.columns + 2).saturating_sub(label.width()));
        if start < used {
            continue;
        }
        line.push_str(&" ".repeat(start - used));
        line.push_str(&label);
        used = start + label.width() + 1;
        line.push(' ');
    }
    line.trim_end().to_owned()
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::report::figure::{Scale, Series};
    use crate::units::Dimension;

    #[test]
    fn a_line_rises_from_corner_to_corner() {
        let points = (1..=100).map(|i| (f64::from(i), Some(f64::from(i) * 0.01))).collect();
        let curves = Curves {
            x: Scale { title: "load".into(), form: Form::Setting(Dimension::Current), log: false },
            y: Scale { title: "efficiency".into(), form: Form::Efficiency, log: false },
            series: vec![Series { label: "one".into(), stroke: 0, group: 0, points }],
            marks: Vec::new(),
        };
        assert_eq!(lines(&curves, LEAST_WIDTH - 1), None);
        let drawn = lines(&curves, 80).expect("wide enough");
        assert!(drawn.iter().all(|line| line.width() <= 80), "{drawn:#?}");
        assert!(drawn[1].starts_with("100 % │") && drawn[1].ends_with(" one"));
        let dots = |line: &str| line.chars().filter(|c| ('\u{2801}'..='\u{28FF}').contains(c)).count();
        assert!((1..=ROWS).all(|row| dots(&drawn[row]) > 0));
    }
}
