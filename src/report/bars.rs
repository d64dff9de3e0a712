//! Bars of block characters, for lists whose lengths shall be seen at a glance.

/// Cells of one half of a two-sided bar.
const HALF: usize = 10;
/// Keeps its place in every format, unlike a plain space.
const SPACE: &str = "\u{a0}";

/// A bar from a middle line: what lowers to the left, what raises to the right, all to the same largest value.
pub fn two_sided(values: [Option<f64>; 2], largest: f64) -> String {
    let known = || values.into_iter().flatten();
    let left = known().fold(0.0, f64::min).abs();
    let right = known().fold(0.0, f64::max);
    let (left, right) = (cells(left, largest), cells(right, largest));
    format!("{}{}│{}", SPACE.repeat(HALF - left), "█".repeat(left), "█".repeat(right))
}

/// A bar from the left.
pub fn one_sided(value: f64, largest: f64) -> String {
    "█".repeat(cells(value, largest))
}

/// Cells of a length; what is not zero has at least one.
fn cells(value: f64, largest: f64) -> usize {
    if !(value > 0.0 && largest > 0.0) {
        return 0;
    }
    ((value / largest * HALF as f64).round() as usize).clamp(1, HALF)
}

/// Cells of one half of an error bar, which stands in wide tables.
const ERROR_HALF: usize = 7;

/// A value with its half-width about a zero line, all to the same largest end: "   ─●─│   ".
pub fn error_bar(value: f64, half: f64, largest: f64) -> String {
    let place = |x: f64| {
        let cells = if largest > 0.0 { x / largest * ERROR_HALF as f64 } else { 0.0 };
        (cells.round().clamp(-(ERROR_HALF as f64), ERROR_HALF as f64) + ERROR_HALF as f64) as usize
    };
    let (from, to, middle) = (place(value - half), place(value + half), place(value));
    let cell = |at: usize| match at {
        at if at == middle => "●",
        at if (from..=to).contains(&at) => "─",
        at if at == ERROR_HALF => "│",
        _ => SPACE,
    };
    (0..=2 * ERROR_HALF).map(cell).collect()
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn bars_share_one_scale() {
        let plain = |values| two_sided(values, 2.0).replace(SPACE, " ");
        assert_eq!(plain([Some(-1.0), Some(2.0)]), "     █████│██████████");
        assert_eq!(plain([None, Some(0.001)]), "          │█");
        assert_eq!(plain([Some(0.0), Some(0.0)]), "          │");
        assert_eq!(one_sided(1.0, 2.0), "█████");
        let plain = |value, half| error_bar(value, half, 2.0).replace(SPACE, " ");
        assert_eq!(plain(0.0, 0.6), "     ──●──     ");
        assert_eq!(plain(1.0, 0.3), "       │ ──●─  ");
    }
}
