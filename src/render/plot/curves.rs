//! Lines over a linear or logarithmic axis, labelled at their ends.

use super::axis::Axis;
use super::{Anchor, Canvas, DASHES, INKS, WIDTH, labels, round};
use crate::report::figure::{Curves, Series};
use crate::report::number::Form;

pub(super) const LEFT: f64 = 62.0;
pub(super) const RIGHT: f64 = 178.0;
pub(super) const TOP: f64 = 26.0;
pub(super) const HEIGHT: f64 = 330.0;

/// Draws the lines; returns the height used.
pub(super) fn draw(curves: &Curves, canvas: &mut Canvas) -> f64 {
    let xs = curves.series.iter().flat_map(|line| line.points.iter().map(|point| point.0));
    let ys = curves.series.iter().flat_map(|line| line.points.iter().filter_map(|point| point.1));
    let limits = match curves.y.form {
        Form::Efficiency | Form::Share => [0.0, 1.0],
        _ => [f64::NEG_INFINITY, f64::INFINITY],
    };
    let x = XAxis { axis: Axis::around(&curves.x, xs, [0.0, f64::INFINITY]) };
    let y = Axis::around(&curves.y, ys, limits);
    let height = |value: f64| y.place(value).map(|share| TOP + HEIGHT * (1.0 - share));
    frame(&x, &y, canvas);
    marks(curves, &x, canvas);
    let ends: Vec<Option<[f64; 2]>> = curves
        .series
        .iter()
        .map(|line| {
            let path = path(line, |value| x.at(value), height);
            let ink = INKS[line.group % INKS.len()];
            let dash = DASHES[line.stroke % DASHES.len()];
            canvas.add(format_args!(
                "<path d=\"{path}\" class=\"c\" stroke=\"{ink}\" stroke-dasharray=\"{dash}\"/>"
            ));
            let last = line.points.iter().rev().find(|point| point.1.is_some())?;
            Some([x.at(last.0)?, height(last.1?)?])
        })
        .collect();
    ends_in_words(curves, &ends, canvas);
    TOP + HEIGHT + 46.0
}

/// Upright lines with their words above, side by side where lines are close.
fn marks(curves: &Curves, x: &XAxis<'_>, canvas: &mut Canvas) {
    let held = curves.marks.iter().filter(|(place, _)| x.axis.holds(*place));
    let shown: Vec<(f64, &String)> = held.filter_map(|(place, words)| Some((x.at(*place)?, words))).collect();
    let wanted: Vec<f64> = shown.iter().map(|(at, _)| *at).collect();
    let places = labels::spread(&wanted, 60.0, [LEFT + 100.0, WIDTH - RIGHT + 40.0]);
    for ((at, words), middle) in shown.iter().zip(places) {
        canvas.line([*at, TOP], [*at, TOP + HEIGHT], "m");
        canvas.text([middle, TOP - 6.0], Anchor::Middle, "t", words);
    }
}

pub(super) struct XAxis<'a> {
    pub(super) axis: Axis<'a>,
}

impl XAxis<'_> {
    pub(super) fn at(&self, value: f64) -> Option<f64> {
        self.axis.place(value).map(|share| LEFT + (WIDTH - LEFT - RIGHT) * share)
    }
}

pub(super) fn frame(x: &XAxis<'_>, y: &Axis<'_>, canvas: &mut Canvas) {
    let bottom = TOP + HEIGHT;
    let right = WIDTH - RIGHT;
    for tick in &x.axis.ticks {
        if let Some(at) = x.at(*tick) {
            canvas.line([at, TOP], [at, bottom], "g");
            canvas.text([at, bottom + 17.0], Anchor::Middle, "t", &x.axis.label(*tick));
        }
    }
    for tick in &y.ticks {
        if let Some(share) = y.place(*tick) {
            let at = TOP + HEIGHT * (1.0 - share);
            canvas.line([LEFT, at], [right, at], "g");
            canvas.text([LEFT - 7.0, at + 4.0], Anchor::End, "t", &y.label(*tick));
        }
    }
    canvas.add(format_args!("<path d=\"M{LEFT} {TOP}V{bottom}H{right}\" class=\"f\"/>"));
    canvas.text([0.5 * (LEFT + right), bottom + 38.0], Anchor::Middle, "a", x.axis.title());
    canvas.text([4.0, TOP - 10.0], Anchor::Start, "a", y.title());
}

/// One stroke a run of values.
fn path(line: &Series, x: impl Fn(f64) -> Option<f64>, y: impl Fn(f64) -> Option<f64>) -> String {
    let mut path = String::new();
    let mut pen_down = false;
    for (at, value) in &line.points {
        let place = x(*at).zip(value.and_then(&y));
        if let Some((at, height)) = place {
            path.push_str(&format!("{}{} {}", if pen_down { "L" } else { "M" }, round(at), round(height)));
        }
        pen_down = place.is_some();
    }
    path
}

/// Labels to the right of the frame, each joined to the end of its line.
fn ends_in_words(curves: &Curves, ends: &[Option<[f64; 2]>], canvas: &mut Canvas) {
    let shown: Vec<(&Series, [f64; 2])> =
        curves.series.iter().zip(ends).filter_map(|(line, end)| Some((line, (*end)?))).collect();
    let wanted: Vec<f64> = shown.iter().map(|(_, end)| end[1]).collect();
    let heights = labels::spread(&wanted, 15.0, [TOP, TOP + HEIGHT]);
    let start = WIDTH - RIGHT + 14.0;
    for ((line, end), height) in shown.iter().zip(heights) {
        let ink = INKS[line.group % INKS.len()];
        let dash = DASHES[line.stroke % DASHES.len()];
        canvas.line([end[0] + 1.0, end[1]], [start - 2.0, height], "l");
        canvas.add(format_args!(
            "<path d=\"M{} {}h26\" class=\"c\" stroke=\"{ink}\" stroke-dasharray=\"{dash}\"/>",
            round(start),
            round(height)
        ));
        canvas.text(
            [start + 31.0, height + 4.0],
            Anchor::Start,
            "t",
            &labels::fit(&line.label, RIGHT - 48.0),
        );
    }
}
