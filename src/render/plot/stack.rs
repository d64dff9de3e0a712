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

/// Fills that differ without colour: a shade with a hatch of a direction and a width.
const FILLS: [(&str, &str); 12] = [
    ("#2f4858", ""),
    ("#f2f4f6", "M0 8L8 0M-2 2L2 -2M6 10L10 6"),
    ("#9fb3c1", ""),
    ("#fff7e0", "M0 4H8"),
    ("#7a8b99", "M0 0L8 8M-2 6L2 10M6 -2L10 2"),
    ("#dfe7ec", ""),
    ("#c98b5c", "M4 0V8"),
    ("#f7e9df", "M0 0L8 8M0 8L8 0"),
    ("#55606b", "M0 4H8M4 0V8"),
    ("#e9eef1", "M2 2h1M6 6h1"),
    ("#b9a98f", "M0 8L8 0"),
    ("#ffffff", "M4 0V8"),
];

/// Draws the bars; returns the height used.
pub(super) fn draw(stack: &Stack, canvas: &mut Canvas) -> f64 {
    patterns(stack.layers.len(), canvas);
    let total = |place: usize| -> Option<f64> {
        let values = stack.layers.iter().map(|(_, values)| values.get(place).copied().flatten());
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
        canvas.text([middle, bottom + 17.0], Anchor::Middle, "t", name);
        let Some(total) = totals[place] else {
            canvas.text([middle, bottom - 6.0], Anchor::Middle, "t", "—");
            continue;
        };
        let mut middles = Vec::new();
        let mut below = 0.0;
        for (layer, (_, values)) in stack.layers.iter().enumerate() {
            let Some(value) = values.get(place).copied().flatten().filter(|value| *value > 0.0) else {
                continue;
            };
            let (low, high) = (height(below), height(below + value));
            canvas.add(format_args!(
                "<rect x=\"{}\" y=\"{}\" width=\"{}\" height=\"{}\" fill=\"url(#{}-{layer})\" class=\"b\"/>",
                round(middle - 0.5 * bar),
                round(high),
                round(bar),
                round(low - high),
                canvas.id.clone()
            ));
            middles.push((layer, 0.5 * (low + high)));
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
    for (layer, (name, _)) in stack.layers.iter().enumerate() {
        canvas.add(format_args!(
            "<rect x=\"{}\" y=\"{}\" width=\"16\" height=\"11\" fill=\"url(#{}-{layer})\" class=\"b\"/>",
            round(start),
            round(heights[layer] - 6.0),
            canvas.id.clone()
        ));
        canvas.text([start + 21.0, heights[layer] + 4.0], Anchor::Start, "t", name);
    }
}

fn patterns(count: usize, canvas: &mut Canvas) {
    canvas.add(format_args!("<defs>"));
    for layer in 0..count {
        let (shade, hatch) = FILLS[layer % FILLS.len()];
        let id = canvas.id.clone();
        canvas.add(format_args!(
            "<pattern id=\"{id}-{layer}\" width=\"8\" height=\"8\" patternUnits=\"userSpaceOnUse\"><rect width=\"8\" height=\"8\" fill=\"{shade}\"/><path d=\"{hatch}\" stroke=\"#1b2430\" stroke-width=\"1\"/></pattern>"
        ));
    }
    canvas.add(format_args!("</defs>"));
}
