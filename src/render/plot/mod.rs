//! Drawings as inline SVG: smooth lines, stacked bars, numbers on shades. Legible without colour: dashes and hatches
//! carry what colours carry.

pub(super) mod axis;
mod curves;
mod errors;
mod heat;
mod labels;
mod stack;

use std::fmt::Write;

use super::html::escape;
use crate::report::Figure;
use crate::report::figure::Plot;

/// Width of every drawing in its own units; the page scales it.
const WIDTH: f64 = 760.0;

/// The figure as an SVG element; `id` is unique in the document.
pub fn svg(figure: &Figure, id: &str) -> String {
    let mut canvas = Canvas { body: String::new() };
    let height = match &figure.plot {
        Plot::Curves(curves) => curves::draw(curves, &mut canvas),
        Plot::Stack(stack) => stack::draw(stack, &mut canvas),
        Plot::Heat(heat) => heat::draw(heat, &mut canvas),
        Plot::Errors(errors) => errors::draw(errors, &mut canvas),
    };
    format!(
        "<svg xmlns=\"http://www.w3.org/2000/svg\" viewBox=\"0 0 {WIDTH} {}\" role=\"img\" aria-labelledby=\"{id}-t {id}-d\">\n\
         <title id=\"{id}-t\">{}</title><desc id=\"{id}-d\">{}</desc>\n{}</svg>\n",
        round(height),
        escape(&figure.title),
        escape(&figure.description),
        canvas.body
    )
}

/// What is drawn so far.
struct Canvas {
    body: String,
}

/// Where words stand beside their place.
#[derive(Clone, Copy)]
enum Anchor {
    Start,
    Middle,
    End,
}

impl Canvas {
    /// Adds an element; everything in it must be escaped or made of numbers.
    fn add(&mut self, element: std::fmt::Arguments<'_>) {
        // a String takes every byte
        let _ = self.body.write_fmt(element);
        self.body.push('\n');
    }

    /// Words of a class.
    fn text(&mut self, [x, y]: [f64; 2], anchor: Anchor, class: &str, words: &str) {
        let anchor = match anchor {
            Anchor::Start => "start",
            Anchor::Middle => "middle",
            Anchor::End => "end",
        };
        self.add(format_args!(
            "<text x=\"{}\" y=\"{}\" text-anchor=\"{anchor}\" class=\"{class}\">{}</text>",
            round(x),
            round(y),
            escape(words)
        ));
    }

    /// A straight line of a class.
    fn line(&mut self, [x1, y1]: [f64; 2], [x2, y2]: [f64; 2], class: &str) {
        self.add(format_args!(
            "<line x1=\"{}\" y1=\"{}\" x2=\"{}\" y2=\"{}\" class=\"{class}\"/>",
            round(x1),
            round(y1),
            round(x2),
            round(y2)
        ));
    }
}

/// A coordinate with two decimals and no more zeros than needed.
fn round(value: f64) -> String {
    let text = format!("{value:.2}");
    let short = text.trim_end_matches('0').trim_end_matches('.');
    if short == "-0" { "0".into() } else { short.to_owned() }
}

/// Styles of all drawings.
pub const STYLE: &str = "\
svg{display:block;width:100%;height:auto;font:12px system-ui,sans-serif}
svg text{fill:#1b2430}svg .t{font-size:11.5px}svg .a{font-size:12.5px;font-weight:600}svg .w{fill:#fff}
svg .g{stroke:#d9dee3;stroke-width:.8}svg .f{stroke:#59636e;stroke-width:1;fill:none}svg .l{stroke:#8b959e;stroke-width:.8}
svg .c{fill:none;stroke-width:2.1;stroke-linejoin:round;stroke-linecap:butt}
svg .m{stroke:#59636e;stroke-width:1;stroke-dasharray:2 3}svg .b{stroke:#1b2430;stroke-width:.7}
";

/// Colours of groups, dark enough to print black.
const INKS: [&str; 6] = ["#0b4f6c", "#a23b1e", "#3f6b22", "#6a3d8a", "#8a6d00", "#444c55"];
/// Dashes of strokes.
const DASHES: [&str; 6] = ["none", "8 4", "2 3", "10 3 2 3", "14 5", "5 2"];

#[cfg(test)]
mod tests {
    use super::*;
    use crate::report::figure::{Curves, Scale, Series};
    use crate::report::number::Form;
    use crate::units::Dimension;

    #[test]
    fn drawings_have_titles_words_and_escaped_labels() {
        let points = (1..=40).map(|i| (f64::from(i) * 0.1, Some(0.8 + 0.001 * f64::from(i)))).collect();
        let figure = Figure {
            title: "Efficiency".into(),
            caption: String::new(),
            description: "rises & stays".into(),
            plot: Plot::Curves(Curves {
                x: Scale { title: "load".into(), form: Form::Setting(Dimension::Current), log: true },
                y: Scale { title: "efficiency".into(), form: Form::Efficiency, log: false },
                series: vec![Series { label: "<b>".into(), stroke: 0, group: 0, points }],
                marks: vec![(1.0, "x".into())],
            }),
        };
        let drawn = svg(&figure, "f1");
        assert!(drawn.contains("<title id=\"f1-t\">Efficiency</title>"));
        assert!(drawn.contains("rises &amp; stays"));
        assert!(drawn.contains("&lt;b&gt;") && !drawn.contains("<b>"));
        assert!(drawn.contains("1 A") && !drawn.contains("NaN"));
    }
}
