//! Numbers for people. This is the only place that rounds; files carry full precision.
//!
//! Engineering notation: a prefix in steps of a thousand (SI brochure, 9th edition, table 7) and three significant
//! digits. The unit always stands beside the number or in the title of its column. Nothing prints as "-0", and a
//! value that is not zero never prints as zero.

use crate::units::Dimension;

/// Significant digits of a result.
const DIGITS: usize = 3;
/// Temperature above which a number is no longer a result, °C.
const HOTTEST_SHOWN: f64 = 300.0;

/// How a number is shown.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Form {
    /// Computed or measured: three significant digits, "2.30 A".
    Result(Dimension),
    /// Set by somebody: as they would write it, "2.3 A".
    Setting(Dimension),
    /// A fraction as percent with two decimals.
    Efficiency,
    /// A fraction as percent with one decimal.
    Share,
    /// A whole number of things.
    Count,
}

/// SI prefixes in steps of a thousand, from 10^-18 up.
const PREFIXES: [&str; 11] = ["a", "f", "p", "n", "µ", "m", "", "k", "M", "G", "T"];
/// Place of the empty prefix.
const NO_PREFIX: i32 = 6;

/// How a dimension is shown: unit, factor from the unit inside the program, and whether prefixes go with it.
fn shown_unit(dimension: Dimension) -> (&'static str, f64, bool) {
    match dimension {
        Dimension::Ratio => ("%", 100.0, false),
        Dimension::CurrentSlope => ("A/µs", 1e-6, false),
        Dimension::Volume => ("mm³", 1e9, false),
        Dimension::Area => ("mm²", 1e6, false),
        Dimension::Temperature | Dimension::TemperatureDifference | Dimension::ThermalResistance => {
            (dimension.unit(), 1.0, false)
        }
        Dimension::Number => ("", 1.0, false),
        other => (other.unit(), 1.0, true),
    }
}

/// A number on its own with its unit.
pub fn show(value: f64, form: Form) -> String {
    if !value.is_finite() {
        return "—".into();
    }
    match form {
        Form::Result(Dimension::Temperature) => with_unit(&tenths(value), "°C"),
        Form::Result(Dimension::TemperatureDifference) => with_unit(&fixed(value, 1), "K"),
        Form::Result(dimension) => quantity(value, dimension),
        Form::Setting(dimension) => setting(value, dimension),
        Form::Efficiency => with_unit(&fixed(value * 100.0, 2), "%"),
        Form::Share => with_unit(&fixed(value * 100.0, 1), "%"),
        Form::Count => fixed(value, 0),
    }
}

/// Three significant digits with prefix and unit.
pub fn quantity(value: f64, dimension: Dimension) -> String {
    let (unit, factor, prefixed) = shown_unit(dimension);
    if prefixed {
        let (digits, prefix) = engineering(value * factor, DIGITS);
        return with_unit(&digits, &format!("{prefix}{unit}"));
    }
    with_unit(&significant(value * factor, DIGITS), unit)
}

/// As somebody would write it: all digits when there are six or fewer, else four; no zeros at the end.
pub fn setting(value: f64, dimension: Dimension) -> String {
    let (unit, factor, prefixed) = shown_unit(dimension);
    let value = value * factor;
    // six digits give the value back: it was written with no more
    let short =
        format!("{value:.5e}").parse::<f64>().is_ok_and(|read| (read - value).abs() <= 1e-12 * value.abs());
    let count = if short { 6 } else { 4 };
    let (digits, prefix) = if prefixed { engineering(value, count) } else { (significant(value, count), "") };
    with_unit(trimmed(&digits), &format!("{prefix}{unit}"))
}

/// Digits with which a calculation can be followed on paper.
const WORKED_DIGITS: usize = 5;

/// A number of a derivation: five digits with prefix and unit, no zeros at the end.
pub fn worked(value: f64, dimension: Dimension) -> String {
    let (unit, factor, prefixed) = match dimension {
        // equations are written in SI units
        Dimension::Volume | Dimension::Area => (dimension.unit(), 1.0, false),
        other => shown_unit(other),
    };
    if !prefixed {
        return worked_plain(value * factor, unit);
    }
    let (digits, prefix) = engineering(value * factor, WORKED_DIGITS);
    with_unit(trimmed(&digits), &format!("{prefix}{unit}"))
}

/// The same without a prefix, for units that take none: "36.441 A²", "1.2345e-9 V·s".
pub fn worked_plain(value: f64, unit: &str) -> String {
    with_unit(trimmed(&significant(value, WORKED_DIGITS)), unit)
}

/// A temperature with one decimal.
fn tenths(celsius: f64) -> String {
    if celsius > HOTTEST_SHOWN { format!("> {HOTTEST_SHOWN:.0}") } else { fixed(celsius, 1) }
}

/// Digits with the prefix chosen after rounding, so that 999.6 mW becomes 1.00 W.
fn engineering(value: f64, digits: usize) -> (String, &'static str) {
    let Some((mantissa, exponent)) = decompose(value, digits) else { return ("0".into(), "") };
    let step = exponent.div_euclid(3);
    let Some(prefix) = usize::try_from(step + NO_PREFIX).ok().and_then(|place| PREFIXES.get(place)) else {
        return (format!("{value:.*e}", digits - 1), "");
    };
    let whole = (exponent - 3 * step + 1) as usize;
    let sign = if value < 0.0 { "-" } else { "" };
    let text = match mantissa.split_at_checked(whole) {
        Some((front, "")) => format!("{sign}{front}"),
        Some((front, back)) => format!("{sign}{front}.{back}"),
        None => format!("{sign}{mantissa:0<whole$}"),
    };
    (text, prefix)
}

/// Significant digits without a prefix; every digit before the point is kept.
fn significant(value: f64, digits: usize) -> String {
    let Some((_, exponent)) = decompose(value, digits) else { return "0".into() };
    if exponent < -4 {
        return format!("{value:.*e}", digits - 1);
    }
    fixed(value, (digits as i32 - 1 - exponent).max(0) as usize)
}

/// Rounded decimal digits and the power of ten of the first one; none for zero.
fn decompose(value: f64, digits: usize) -> Option<(String, i32)> {
    if value == 0.0 || !value.is_finite() {
        return None;
    }
    let text = format!("{:.*e}", digits - 1, value.abs());
    let (mantissa, exponent) = text.split_once('e')?;
    Some((mantissa.replace('.', ""), exponent.parse().ok()?))
}

/// A fixed number of decimals; "<0.01" instead of a rounded zero, never "-0".
fn fixed(value: f64, decimals: usize) -> String {
    let text = format!("{value:.decimals$}");
    if value == 0.0 {
        return "0".into();
    }
    if text.chars().all(|c| matches!(c, '-' | '0' | '.')) {
        let least = format!("{:.decimals$}", 10f64.powi(-(decimals as i32)));
        return if value > 0.0 { format!("<{least}") } else { format!(">-{least}") };
    }
    text
}

/// Digits without zeros after the point.
fn trimmed(digits: &str) -> &str {
    if digits.contains('.') && !digits.contains('e') {
        digits.trim_end_matches('0').trim_end_matches('.')
    } else {
        digits
    }
}

fn with_unit(digits: &str, unit: &str) -> String {
    if unit.is_empty() { digits.into() } else { format!("{digits} {unit}") }
}

/// One prefix and one number of decimals for a whole column, so that its digits can be compared.
#[derive(Clone, Debug, PartialEq)]
pub struct Scale {
    form: Form,
    factor: f64,
    decimals: usize,
    unit: String,
}

/// Power of ten of the prefix that suits the largest of the values.
pub fn shared_prefix(values: impl IntoIterator<Item = f64>, dimension: Dimension) -> i32 {
    let (_, factor, prefixed) = shown_unit(dimension);
    let largest = largest(values) * factor;
    match decompose(largest, DIGITS) {
        Some((_, exponent)) if prefixed => 3 * exponent.div_euclid(3).clamp(-NO_PREFIX, 4),
        _ => 0,
    }
}

fn largest(values: impl IntoIterator<Item = f64>) -> f64 {
    values.into_iter().filter(|value| value.is_finite()).fold(0.0, |most, value| value.abs().max(most))
}

impl Scale {
    /// The scale of a column: the prefix is given, since columns of one table share it; the decimals suit its values.
    pub fn new(values: &[f64], form: Form, prefix: i32) -> Scale {
        let fixed = |unit: &str, factor, decimals| Scale { form, factor, decimals, unit: unit.into() };
        match form {
            Form::Efficiency => fixed("%", 100.0, 2),
            Form::Share => fixed("%", 100.0, 1),
            Form::Count => fixed("", 1.0, 0),
            Form::Result(Dimension::Temperature) => fixed("°C", 1.0, 1),
            Form::Result(Dimension::TemperatureDifference) => fixed("K", 1.0, 1),
            Form::Result(dimension) | Form::Setting(dimension) => {
                let (unit, factor, _) = shown_unit(dimension);
                let name = PREFIXES.get((prefix / 3 + NO_PREFIX) as usize).copied().unwrap_or_default();
                let mut scale = fixed(&format!("{name}{unit}"), factor * 10f64.powi(-prefix), 0);
                scale.decimals = match form {
                    Form::Setting(_) => scale.decimals_as_set(values),
                    _ => scale.decimals_of_results(values),
                };
                scale
            }
        }
    }

    /// Unit with its prefix, for the title of the column.
    pub fn unit(&self) -> &str {
        &self.unit
    }

    /// True when numbers of this form belong on this scale.
    pub fn suits(&self, form: Form) -> bool {
        let dimension = |form| match form {
            Form::Result(dimension) | Form::Setting(dimension) => Some(dimension),
            _ => None,
        };
        self.form == form || (dimension(form).is_some() && dimension(form) == dimension(self.form))
    }

    /// The number without its unit.
    pub fn show(&self, value: f64) -> String {
        if self.form == Form::Result(Dimension::Temperature) {
            tenths(value)
        } else {
            fixed(value * self.factor, self.decimals)
        }
    }

    /// Three digits of the smallest value, as long as the largest has three or four.
    fn decimals_of_results(&self, values: &[f64]) -> usize {
        let exponent = |value: f64| decompose(value * self.factor, DIGITS).map(|(_, exponent)| exponent);
        let exponents: Vec<i32> = values.iter().filter_map(|value| exponent(*value)).collect();
        let (Some(least), Some(most)) = (exponents.iter().min(), exponents.iter().max()) else { return 0 };
        let digits = DIGITS as i32;
        (digits - 1 - least).clamp(digits - 1 - most, digits - most).max(0) as usize
    }

    /// As many decimals as the values were written with, at most four digits for those that have no end.
    fn decimals_as_set(&self, values: &[f64]) -> usize {
        let needed = |value: f64| {
            let value = value * self.factor;
            let all = format!("{:.9}", value);
            let short = trimmed(&all);
            let decimals = short.split_once('.').map_or(0, |(_, back)| back.len());
            if decimals <= 5 { decimals } else { self.decimals_of_results(&[value / self.factor]) + 1 }
        };
        values.iter().map(|value| needed(*value)).max().unwrap_or(0)
    }
}

#[cfg(test)]
#[path = "number_tests.rs"]
mod tests;
