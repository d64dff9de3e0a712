//! Numbers on shades of grey, graver ones darker; marks repeat what the shades say.

use super::{Anchor, Canvas, WIDTH, round};
use crate::report::figure::Heat;

const LEFT: f64 = 92.0;
const TOP: f64 = 42.0;
const ROW: f64 = 30.0;

/// Draws the cells; returns the height used.
pub(super) fn draw(heat: &Heat, canvas: &mut Canvas) -> f64 {
    let wide = ((WIDTH - LEFT - 4.0) / heat.columns.len().max(1) as f64).min(120.0);
    let right = LEFT + wide * heat.columns.len() as f64;
    canvas.text([4.0, TOP - 26.0], Anchor::Start, "a", &format!("{}, {}", heat.y, heat.unit));
    canvas.text([right, TOP - 26.0], Anchor::End, "a", &heat.x);
    for (place, name) in heat.columns.iter().enumerate() {
        canvas.text([LEFT + wide * (place as f64 + 0.5), TOP - 7.0], Anchor::Middle, "t", name);
    }
    for (row, (name, cells)) in heat.rows.iter().enumerate() {
        let top = TOP + ROW * row as f64;
        canvas.text([LEFT - 8.0, top + 19.0], Anchor::End, "t", name);
        for (place, cell) in cells.iter().enumerate() {
            let shade = cell.shade.map_or(255.0, |shade| 250.0 - 190.0 * shade.clamp(0.0, 1.0));
            let grey = shade as u8;
            let left = LEFT + wide * place as f64;
            canvas.add(format_args!(
                "<rect x=\"{}\" y=\"{}\" width=\"{}\" height=\"{ROW}\" fill=\"rgb({grey},{grey},{grey})\" class=\"b\"/>",
                round(left),
                round(top),
                round(wide)
            ));
            let class = if grey < 130 { "t w" } else { "t" };
            let mark = cell.severity.map_or(String::new(), |severity| format!(" {}", severity.mark()));
            let words = format!("{}{mark}", cell.text);
            canvas.text([left + 0.5 * wide, top + 19.5], Anchor::Middle, class, &words);
        }
    }
    TOP + ROW * heat.rows.len() as f64 + 8.0
}
