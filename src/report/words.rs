//! Small words: plurals, lists, points.

use crate::grid::OperatingPoint;
use crate::report::number::{Form, show};
use crate::units::Dimension as D;

/// "1 requirement", "3 requirements".
pub fn count(number: usize, noun: &str) -> String {
    if number == 1 { format!("1 {noun}") } else { format!("{number} {noun}s") }
}

/// "a", "a and b", "a, b and c".
pub fn list<T: AsRef<str>>(items: &[T]) -> String {
    match items {
        [] => String::new(),
        [only] => only.as_ref().to_owned(),
        [first @ .., last] => {
            let first: Vec<&str> = first.iter().map(AsRef::as_ref).collect();
            format!("{} and {}", first.join(", "), last.as_ref())
        }
    }
}

/// "V_IN 24 V, I_OUT 6 A, T_A 60 °C, f_SW 400 kHz"; no frequency when the point has none.
pub fn point(point: &OperatingPoint) -> String {
    let mut words = format!(
        "V_IN {}, I_OUT {}, T_A {}",
        set(point.input_voltage, D::Voltage),
        set(point.load, D::Current),
        set(point.ambient, D::Temperature)
    );
    if point.switching_frequency > 0.0 {
        words.push_str(&format!(", f_SW {}", set(point.switching_frequency, D::Frequency)));
    }
    words
}

/// A number as somebody set it.
pub fn set(value: f64, dimension: D) -> String {
    show(value, Form::Setting(dimension))
}
