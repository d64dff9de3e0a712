//! Points with error bars about a line at zero, and a curve through them.

use super::axis::Axis;
use super::curves::{HEIGHT, LEFT, RIGHT, TOP, XAxis, frame};
use super::{Anchor, Canvas, INKS, WIDTH, labels, round};
use crate::report::figure::Errors;

/// Half the width of the feet of a bar.
const FOOT: f64 = 3.5;
/// Radius of a point.
const RADIUS: f64 = 3.4;

/// Draws the points; returns the height used.
pub(super) fn draw(errors: &Errors, canvas: &mut Canvas) -> f64 {
    let xs = errors.points.iter().map(|point| point.x);
    let ends = errors.points.iter().flat_map(|point| [point.y - point.half, point.y + point.half]);
    let ys = ends.chain([0.0]);
    let x = XAxis { axis: Axis::around(&errors.x, xs, [0.0, f64::INFINITY]) };
    let y = Axis::around(&errors.y, ys, [f64::NEG_INFINITY, f64::INFINITY]);
    let height = |value: f64| y.place(value).map(|share| TOP + HEIGHT * (1.0 - share));
    frame(&x, &y, canvas);
    if let Some(zero) = height(0.0) {
        canvas.line([LEFT, zero], [WIDTH - RIGHT, zero], "f");
        canvas.text([WIDTH - RIGHT + 14.0, zero + 4.0], Anchor::Start, "t", "as booked");
    }
    curve(errors, &x, height, canvas);
    let ink = INKS[1];
    for point in &errors.points {
        let (Some(at), Some(middle)) = (x.at(point.x), height(point.y)) else { continue };
        let (Some(low), Some(high)) = (height(point.y - point.half), height(point.y + point.half)) else {
            continue;
        };
        canvas.line([at, low], [at, high], "b");
        for end in [low, high] {
            canvas.line([at - FOOT, end], [at + FOOT, end], "b");
        }
        let fill = if point.stands_out { ink } else { "#fff" };
        canvas.add(format_args!(
            "<circle cx=\"{}\" cy=\"{}\" r=\"{RADIUS}\" fill=\"{fill}\" stroke=\"{ink}\" stroke-width=\"1.4\"/>",
            round(at),
            round(middle)
        ));
    }
    TOP + HEIGHT + 46.0
}

/// The curve with its words at its end.
fn curve(errors: &Errors, x: &XAxis<'_>, height: impl Fn(f64) -> Option<f64>, canvas: &mut Canvas) {
    let places: Vec<[f64; 2]> =
        errors.curve.iter().filter_map(|(at, value)| Some([x.at(*at)?, height(*value)?])).collect();
    let Some(end) = places.last() else { return };
    let steps: Vec<String> =
        places.iter().map(|[at, height]| format!("{} {}", round(*at), round(*height))).collect();
    let ink = INKS[0];
    canvas.add(format_args!(
        "<path d=\"M{}\" class=\"c\" stroke=\"{ink}\" stroke-dasharray=\"8 4\"/>",
        steps.join("L")
    ));
    let words = labels::fit(&errors.curve_label, RIGHT - 20.0);
    canvas.text([WIDTH - RIGHT + 14.0, end[1] + 4.0], Anchor::Start, "t", &words);
}
