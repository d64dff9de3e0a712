//! Stacked bars with hatches, totals on top and the layers named beside the last bar.

use super::axis::Axis;
use super::{Anchor, Canvas, WIDTH, labels, round};
use crate::report::figure::Stack;
use crate::report::number::{Form, show};
use crate::units::Dimension;

const LEFT: f64 = 62.0;
const RIGHT: f64 = 158.0;
const TOP: f64 = 34.0;
const HEIGHT: f64 = 300.0;

/// Fills that differ without colour: a shade and a hatch.
const FILLS: [(&str, &[Hatch]); 18] = [
    ("#2f4858", &[]),
    ("#f2f4f6", &[Hatch::Rising]),
    ("#9fb3c1", &[]),
    ("#fff7e0", &[Hatch::Level]),
    ("#8d9ba7", &[Hatch::Falling]),
    ("#dfe7ec", &[]),
    ("#c98b5c", &[Hatch::Upright]),
    ("#f7e9df", &[Hatch::Rising, Hatch::Falling]),
    ("#6f7b86", &[]),
    ("#ffffff", &[Hatch::Level, Hatch::Upright]),
    ("#b9a98f", &[Hatch::Rising]),
    ("#ffffff", &[Hatch::Upright]),
    ("#d8c3a5", &[]),
    ("#b8cfc4", &[Hatch::Level]),
    ("#7d5a4f", &[]),
    ("#e3dbee", &[Hatch::Falling]),
    ("#c9ced3", &[]),
    ("#fbe3c0", &[Hatch::Upright]),
];

/// Draws the bars; returns the height used.
pub(super) fn draw(stack: &Stack, canvas: &mut Canvas) -> f64 {
    let total = |place: usize| -> Option<f64> {
        let values = stack.layers.iter().map(|layer| layer.values.get(place).copied().flatten());
        values.fold(None, |sum, value| match (sum, value) {
            (None, None) => None,
            (sum, value) => Some(sum.unwrap_or(0.0) + value.unwrap_or(0.0)),
        })
    };
    let totals: Vec<Option<f64>> = (0..stack.places.len()).map(total).collect();
    let limits = if stack.y.form == Form::Share { [0.0, 1.0] } else { [0.0, f64::INFINITY] };
    let y = Axis::around(&stack.y, totals.iter().flatten().copied().chain([0.0]), limits);
    let height = |value: f64| TOP + HEIGHT * (1.0 - y.place(value).unwrap_or(0.0));
    let (bottom, right) = (TOP + HEIGHT, WIDTH - RIGHT);
    for tick in &y.ticks {
        let at = height(*tick);
        canvas.line([LEFT, at], [right, at], "g");
        canvas.text([LEFT - 7.0, at + 4.0], Anchor::End, "t", &y.label(*tick));
    }
    let step = (right - LEFT) / stack.places.len().max(1) as f64;
    let bar = (0.66 * step).min(76.0);
    let mut last: Option<Vec<(usize, f64)>> = None;
    for (place, name) in stack.places.iter().enumerate() {
        let middle = LEFT + step * (place as f64 + 0.5);
        canvas.text([middle, bottom + 17.0], Anchor::Middle, "t", &labels::fit(name, step));
        let Some(total) = totals[place] else {
            canvas.text([middle, bottom - 6.0], Anchor::Middle, "t", "—");
            continue;
        };
        let mut middles = Vec::new();
        let mut below = 0.0;
        for (at, layer) in stack.layers.iter().enumerate() {
            let Some(value) = layer.values.get(place).copied().flatten().filter(|value| *value > 0.0) else {
                continue;
            };
            let (low, high) = (height(below), height(below + value));
            filled(
                layer.fill,
                Area { left: middle - 0.5 * bar, top: high, width: bar, height: low - high },
                canvas,
            );
            middles.push((at, 0.5 * (low + high)));
            below += value;
        }
        let form = if stack.y.form == Form::Share { Form::Share } else { Form::Result(Dimension::Power) };
        if stack.y.form != Form::Share {
            canvas.text([middle, height(total) - 5.0], Anchor::Middle, "t", &show(total, form));
        }
        last = Some(middles);
    }
    canvas.add(format_args!("<path d=\"M{LEFT} {TOP}V{bottom}H{right}\" class=\"f\"/>"));
    canvas.text([0.5 * (LEFT + right), bottom + 38.0], Anchor::Middle, "a", &stack.x);
    canvas.text([4.0, TOP - 18.0], Anchor::Start, "a", y.title());
    names(stack, &last.unwrap_or_default(), canvas);
    bottom + 46.0
}

/// Names of all layers with a sample of their fill, near their place in the last bar.
fn names(stack: &Stack, last: &[(usize, f64)], canvas: &mut Canvas) {
    let wanted: Vec<f64> = (0..stack.layers.len())
        .map(|layer| last.iter().find(|(known, _)| *known == layer).map_or(TOP, |(_, middle)| *middle))
        .collect();
    // from the bottom up, as they are stacked
    let mut ordered = wanted.clone();
    for layer in (0..ordered.len().saturating_sub(1)).rev() {
        ordered[layer] = ordered[layer].max(ordered[layer + 1] + 1e-3);
    }
    let heights = labels::spread(&ordered, 16.0, [TOP, TOP + HEIGHT]);
    let start = WIDTH - RIGHT + 12.0;
    for (at, layer) in stack.layers.iter().enumerate() {
        let area = Area { left: start, top: heights[at] - 6.0, width: 16.0, height: 11.0 };
        filled(layer.fill, area, canvas);
        canvas.text(
            [start + 21.0, heights[at] + 4.0],
            Anchor::Start,
            "t",
            &labels::fit(&layer.name, RIGHT - 36.0),
        );
    }
}

/// A rectangle.
struct Area {
    left: f64,
    top: f64,
    width: f64,
    height: f64,
}

/// A rectangle in the fill of a layer.
fn filled(fill: usize, area: Area, canvas: &mut Canvas) {
    let (shade, hatches) = FILLS[fill % FILLS.len()];
    let [x, y, width, height] = [area.left, area.top, area.width, area.height].map(round);
    canvas.add(format_args!(
        "<rect x=\"{x}\" y=\"{y}\" width=\"{width}\" height=\"{height}\" fill=\"{shade}\" class=\"b\"/>"
    ));
    let lines: String = hatches.iter().map(|hatch| hatch.lines(&area)).collect();
    if !lines.is_empty() {
        canvas.add(format_args!("<path d=\"{lines}\" class=\"b\"/>"));
    }
}

/// Direction of the lines of a hatch.
#[derive(Clone, Copy)]
enum Hatch {
    Level,
    Upright,
    Rising,
    Falling,
}

/// Distance between two lines.
const PITCH: f64 = 5.0;

impl Hatch {
    /// Lines that fill an area to its edges.
    fn lines(self, area: &Area) -> String {
        let Area { left, top, width, height } = *area;
        let (right, bottom) = (left + width, top + height);
        let count = |length: f64| (length / PITCH) as i32;
        let line = |[x1, y1]: [f64; 2], [x2, y2]: [f64; 2]| {
            format!("M{} {}L{} {}", round(x1), round(y1), round(x2), round(y2))
        };
        match self {
            Hatch::Level => (1..=count(height))
                .map(|k| bottom - PITCH * f64::from(k))
                .map(|y| line([left, y], [right, y]))
                .collect(),
            Hatch::Upright => (1..=count(width))
                .map(|k| left + PITCH * f64::from(k))
                .map(|x| line([x, top], [x, bottom]))
                .collect(),
            // x + y constant, or x - y constant, cut off at the four edges
            Hatch::Rising => (1..=count(width + height))
                .map(|k| PITCH * f64::from(k))
                .map(|s| {
                    let (a, b) = ((s - height).max(0.0), s.min(width));
                    line([left + a, top + s - a], [left + b, top + s - b])
                })
                .collect(),
            Hatch::Falling => (1..=count(width + height))
                .map(|k| PITCH * f64::from(k))
                .map(|s| {
                    let (a, b) = ((s - height).max(0.0), s.min(width));
                    line([left + a, bottom - s + a], [left + b, bottom - s + b])
                })
                .collect(),
        }
    }
}
