//! Figures without a format: what is drawn, in numbers; [`crate::render::plot`] draws them.

use super::Severity;
use super::number::Form;

/// A drawing with what must be read beside it. Its numbers also stand in a table of the same document.
#[derive(Clone, Debug, PartialEq)]
pub struct Figure {
    /// What is shown.
    pub title: String,
    /// Where and with which values.
    pub caption: String,
    /// The same in words, for those who do not see it.
    pub description: String,
    /// What is drawn.
    pub plot: Plot,
}

impl Figure {
    /// Title and description in one sentence, for formats that draw nothing.
    pub fn summary(&self) -> String {
        format!("{}. {}", self.title, self.description)
    }
}

/// Kinds of drawing.
#[derive(Clone, Debug, PartialEq)]
pub enum Plot {
    /// Lines over a linear or logarithmic axis.
    Curves(Curves),
    /// Bars of layers, one a place.
    Stack(Stack),
    /// A table of numbers on shades.
    Heat(Heat),
    /// Points with error bars and a line at zero.
    Errors(Errors),
}

/// One axis.
#[derive(Clone, Debug, PartialEq)]
pub struct Scale {
    /// What it measures; the unit is added.
    pub title: String,
    /// How its numbers are shown.
    pub form: Form,
    /// True for even ratios.
    pub log: bool,
}

/// Lines in one frame.
#[derive(Clone, Debug, PartialEq)]
pub struct Curves {
    /// From left to right.
    pub x: Scale,
    /// From bottom to top.
    pub y: Scale,
    /// The lines.
    pub series: Vec<Series>,
    /// Upright lines at places of x, with words.
    pub marks: Vec<(f64, String)>,
}

/// Measured differences with what they may be off by.
#[derive(Clone, Debug, PartialEq)]
pub struct Errors {
    /// From left to right.
    pub x: Scale,
    /// From bottom to top; zero is always shown.
    pub y: Scale,
    /// Place, value and half-width of its bar.
    pub points: Vec<ErrorPoint>,
    /// What is fitted to them: places and values.
    pub curve: Vec<(f64, f64)>,
    /// What the curve is.
    pub curve_label: String,
}

/// A point with its error bar.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct ErrorPoint {
    /// Place.
    pub x: f64,
    /// Value.
    pub y: f64,
    /// Half-width of its bar.
    pub half: f64,
    /// True for one that stands out: drawn filled.
    pub stands_out: bool,
}

/// A line.
#[derive(Clone, Debug, PartialEq)]
pub struct Series {
    /// Written at its end.
    pub label: String,
    /// Lines of one stroke look alike: dashes tell them apart without colour.
    pub stroke: usize,
    /// Lines of one group share a colour.
    pub group: usize,
    /// Places in order; a gap where there is no value.
    pub points: Vec<(f64, Option<f64>)>,
}

/// Stacked bars.
#[derive(Clone, Debug, PartialEq)]
pub struct Stack {
    /// What the places are.
    pub x: String,
    /// What is stacked; its form gives the unit.
    pub y: Scale,
    /// Names of the places.
    pub places: Vec<String>,
    /// Layers from the bottom.
    pub layers: Vec<Layer>,
}

/// A layer of stacked bars.
#[derive(Clone, Debug, PartialEq)]
pub struct Layer {
    /// Written beside the last bar.
    pub name: String,
    /// Layers of one fill look alike in every figure.
    pub fill: usize,
    /// One value a place; `None` where the place has none.
    pub values: Vec<Option<f64>>,
}

/// Numbers on shades.
#[derive(Clone, Debug, PartialEq)]
pub struct Heat {
    /// What runs across.
    pub x: String,
    /// What runs down.
    pub y: String,
    /// Names of the columns.
    pub columns: Vec<String>,
    /// Names of the rows with their cells.
    pub rows: Vec<(String, Vec<HeatCell>)>,
    /// What the numbers are, with their unit.
    pub unit: String,
}

/// A cell of a heat map.
#[derive(Clone, Debug, PartialEq)]
pub struct HeatCell {
    /// The number as printed, or a dash.
    pub text: String,
    /// 0 for harmless to 1 for grave; `None` without a value.
    pub shade: Option<f64>,
    /// The gravest finding, if any.
    pub severity: Option<Severity>,
}
