//! Quantities: `6.8 mΩ` to an SI number of the dimension that is expected.

use super::error::Blame;
use super::node::Node;
use super::units;
use crate::hints::nearest;
use crate::units::Dimension;

/// What is expected: a dimension and an example of it for the messages.
#[derive(Clone, Copy, Debug)]
pub struct Expected<'a> {
    /// The dimension.
    pub dimension: Dimension,
    /// An example such as `6.8 mΩ`.
    pub example: &'a str,
}

impl<'a> Expected<'a> {
    /// A dimension with the usual example.
    pub const fn of(dimension: Dimension) -> Self {
        Expected { dimension, example: units::example(dimension) }
    }

    /// A dimension with an example of one's own, when that is a single quantity.
    pub fn like(dimension: Dimension, example: &'a str) -> Self {
        let usable = !example.is_empty() && !example.contains(['{', '[', ':', ',']);
        Expected { dimension, example: if usable { example } else { units::example(dimension) } }
    }
}

/// Reads a value of a file as a quantity.
///
/// # Errors
/// What is wrong with it and what would be right.
pub(crate) fn read(node: &Node, expected: Expected<'_>) -> Result<f64, Blame> {
    let Expected { dimension, example } = expected;
    match node {
        Node::Text(text) => parse(text, expected),
        Node::Int(number) if dimension == Dimension::Number => Ok(*number as f64),
        Node::Float(number) if dimension == Dimension::Number => finite(*number),
        Node::Float(number) if !number.is_finite() => finite(*number),
        Node::Int(_) | Node::Float(_) => Err(bare(&node.scalar().unwrap_or_default(), expected)),
        Node::Null => Err(Blame::new(
            format!("has no value; {} is expected", dimension.words()),
            format!("write a value, for example {example}, or take the key out"),
        )),
        Node::Bool(_) | Node::List(_) | Node::Map(_) => Err(Blame::new(
            format!("{} stands here; {} is expected", node.words(), dimension.words()),
            format!("write it like {example}{}", comma_hint(node)),
        )),
    }
}

/// `[1,5 mΩ]` is a list of two: say so.
fn comma_hint(node: &Node) -> String {
    match node {
        Node::List(items) => match items.as_slice() {
            [Node::Int(whole), Node::Text(rest)] if rest.starts_with(|c: char| c.is_ascii_digit()) => {
                format!("; decimals take a point: {whole}.{rest}")
            }
            _ => String::new(),
        },
        _ => String::new(),
    }
}

/// Reads a text as a quantity.
///
/// # Errors
/// What is wrong with it and what would be right.
pub fn parse(text: &str, expected: Expected<'_>) -> Result<f64, Blame> {
    let Expected { dimension, example } = expected;
    let text = text.trim_matches(is_space);
    let (number, unit) = split(text);
    if number.is_empty() {
        return Err(no_number(text, expected));
    }
    if unit.starts_with(',') || number.ends_with(',') {
        let point = text.replacen(',', ".", 1);
        return Err(Blame::new(
            "a comma stands in the number",
            format!("decimals take a point: {point}; thousands are not grouped"),
        ));
    }
    if unit.is_empty() {
        return match dimension {
            Dimension::Number => scale(number, 0, 1.0),
            _ => Err(bare(number, expected)),
        };
    }
    let Some(found) = units::find(unit) else { return Err(unknown_unit(unit, expected)) };
    if found.dimension == dimension {
        return scale(number, found.exponent, found.factor);
    }
    if dimension == Dimension::Number {
        return Err(Blame::new(
            format!("{unit} is {}, a plain number is expected", unit_words(found.dimension)),
            format!("write the number without a unit, for example {example}"),
        ));
    }
    Err(Blame::new(
        format!("{unit} is {}, {} is expected", unit_words(found.dimension), dimension.words()),
        format!("write it like {example}{}", kelvin_hint(dimension, found.dimension)),
    ))
}

fn unit_words(dimension: Dimension) -> &'static str {
    dimension.words()
}

fn kelvin_hint(expected: Dimension, found: Dimension) -> &'static str {
    match (expected, found) {
        (Dimension::Temperature, Dimension::TemperatureDifference) => {
            "; temperatures are in °C, differences in K"
        }
        (Dimension::TemperatureDifference, Dimension::Temperature) => {
            "; differences are in K, temperatures in °C"
        }
        (Dimension::Temperature, Dimension::Charge) => "; C alone is the coulomb",
        _ => "",
    }
}

/// A number without the unit it needs.
fn bare(number: &str, expected: Expected<'_>) -> Blame {
    let Expected { dimension, example } = expected;
    let unit = example.trim_start_matches(|c: char| !c.is_alphabetic() && !"%°".contains(c));
    let reason = format!("{} needs its unit", dimension.words());
    let hint = match dimension {
        Dimension::Ratio => match number.parse::<f64>() {
            Ok(fraction) if fraction > 0.0 && fraction <= 1.0 => {
                format!("write {number} % , or {} % if {number} is a fraction", short(100.0 * fraction))
            }
            _ => format!("write {number} %"),
        },
        _ => format!("write {number} {unit}, or whichever unit it is in"),
    };
    Blame::new(reason, hint.replace(" % ,", " %,"))
}

/// A percentage without the dust of binary fractions.
fn short(value: f64) -> f64 {
    (value * 1e9).round() / 1e9
}

fn no_number(text: &str, expected: Expected<'_>) -> Blame {
    let Expected { dimension, example } = expected;
    let lower = text.to_ascii_lowercase();
    let start = lower.trim_start_matches(['+', '-', '.']);
    let reason = if text.is_empty() {
        format!("has no value; {} is expected", dimension.words())
    } else if start.starts_with("nan") || start.starts_with("inf") {
        "not a finite number".to_string()
    } else {
        format!("this is no number; {} is expected", dimension.words())
    };
    Blame::new(reason, format!("write it like {example}"))
}

fn unknown_unit(unit: &str, expected: Expected<'_>) -> Blame {
    let Expected { dimension, example } = expected;
    let shown: String = unit.chars().take(20).collect();
    let mut spellings = units::all_spellings();
    // a near miss of the right dimension is the better guess
    spellings.sort_by_key(|(_, other)| *other != dimension);
    let own = spellings.iter().filter(|(_, other)| *other == dimension).map(|(unit, _)| unit.as_str());
    let all = spellings.iter().map(|(unit, _)| unit.as_str());
    let guess = nearest_unit(unit, own).or_else(|| nearest_unit(unit, all));
    let hint = match (guess, dimension) {
        (_, Dimension::Number) => format!("write the number without a unit, for example {example}"),
        (Some(guess), _) => format!("did you mean {guess}?"),
        (None, _) => format!("write it like {example}"),
    };
    Blame::new(format!("{shown} is no known unit; {} is expected", dimension.words()), hint)
}

fn nearest_unit<'a>(unit: &str, known: impl Iterator<Item = &'a str> + Clone) -> Option<&'a str> {
    let spelt = unit.to_lowercase().replace(['µ', 'μ'], "u");
    let same = known.clone().find(|candidate| candidate.to_lowercase().replace('µ', "u") == spelt);
    // any two letters are near some unit
    same.or_else(|| nearest(unit, known).filter(|_| spelt.chars().count() > 2))
}

/// The number at the start of a text and what follows it.
fn split(text: &str) -> (&str, &str) {
    let bytes = text.as_bytes();
    let digits = |from: usize| from + bytes[from..].iter().take_while(|byte| byte.is_ascii_digit()).count();
    let mut place = usize::from(matches!(bytes.first(), Some(b'+' | b'-')));
    if text.starts_with('\u{2212}') {
        place = '\u{2212}'.len_utf8();
    }
    let start = place;
    place = digits(place);
    let mut count = place - start;
    if bytes.get(place) == Some(&b'.') {
        let end = digits(place + 1);
        count += end - place - 1;
        place = end;
    }
    if count == 0 {
        return ("", text);
    }
    if matches!(bytes.get(place), Some(b'e' | b'E')) {
        let sign = usize::from(matches!(bytes.get(place + 1), Some(b'+' | b'-')));
        let end = digits(place + 1 + sign);
        if end > place + 1 + sign {
            place = end;
        }
    }
    (&text[..place], text[place..].trim_start_matches(is_space))
}

fn is_space(c: char) -> bool {
    c.is_whitespace()
}

/// The number times ten to the exponent, scaled in its decimal text: 12 n is bit for bit 12e-9.
fn scale(number: &str, exponent: i32, factor: f64) -> Result<f64, Blame> {
    let number = number.replace('\u{2212}', "-");
    let (mantissa, own) = match number.split_once(['e', 'E']) {
        Some((mantissa, own)) => (mantissa, own.parse::<i32>().unwrap_or(i32::MAX)),
        None => (number.as_str(), 0),
    };
    let power = own.saturating_add(exponent);
    let value: f64 = format!("{mantissa}e{power}").parse().unwrap_or(f64::NAN);
    let value = finite(value * factor)?;
    let zero = !mantissa.bytes().any(|byte| (b'1'..=b'9').contains(&byte));
    if value == 0.0 && !zero {
        return Err(Blame::new("too small a number to be told from zero", "check the exponent"));
    }
    Ok(value)
}

fn finite(value: f64) -> Result<f64, Blame> {
    if value.is_finite() {
        return Ok(value);
    }
    Err(Blame::new("not a finite number", "write a number in digits; check its exponent"))
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::units::Dimension as D;

    fn ok(text: &str, dimension: D) -> f64 {
        parse(text, Expected::of(dimension)).expect(text)
    }

    fn fault(text: &str, dimension: D) -> String {
        let blame = parse(text, Expected::of(dimension)).expect_err(text);
        format!("{}; {}", blame.reason, blame.hint)
    }

    #[test]
    fn numbers_keep_every_bit() {
        // the literal of the language is the outside value
        assert_eq!(ok("12 nC", D::Charge).to_bits(), 12e-9_f64.to_bits());
        assert_eq!(ok("6.8mΩ", D::Resistance).to_bits(), 6.8e-3_f64.to_bits());
        assert_eq!(ok("0.1 %", D::Ratio).to_bits(), 0.1e-2_f64.to_bits());
        assert_eq!(ok("1.2e3 mV", D::Voltage), 1.2);
        assert_eq!(ok("1e-3 V", D::Voltage), 1e-3);
        assert_eq!(ok("50 Wh", D::Energy), 180_000.0);
        assert_eq!(ok("1200 mm3", D::Volume).to_bits(), 1200e-9_f64.to_bits());
        assert_eq!(ok("30 mW/cm³", D::PowerDensity), 30e3);
        assert_eq!(ok("100 A/µs", D::CurrentSlope), 1e8);
        assert_eq!(ok("-40 °C", D::Temperature), -40.0);
        assert_eq!(ok("\u{2212}40\u{A0}degC", D::Temperature), -40.0);
        assert_eq!(ok(".5 V", D::Voltage), 0.5);
        assert_eq!(ok("0 mΩ", D::Resistance), 0.0);
        assert_eq!(ok("4.0", D::Number), 4.0);
    }

    #[test]
    fn messages_say_what_is_expected() {
        assert_eq!(
            fault("6.8 nC", D::Resistance),
            "nC is a charge, a resistance is expected; write it like 6.8 mΩ"
        );
        assert_eq!(
            fault("6.8", D::Resistance),
            "a resistance needs its unit; write 6.8 mΩ, or whichever unit it is in"
        );
        assert_eq!(
            fault("0.9", D::Ratio),
            "a percentage needs its unit; write 0.9 %, or 90 % if 0.9 is a fraction"
        );
        assert_eq!(
            fault("400 khz", D::Frequency),
            "khz is no known unit; a frequency is expected; did you mean kHz?"
        );
        assert_eq!(
            fault("1,5 mΩ", D::Resistance),
            "a comma stands in the number; decimals take a point: 1.5 mΩ; thousands are not grouped"
        );
        assert!(fault("60 C", D::Temperature).contains("C alone is the coulomb"));
        assert!(fault("40 °C", D::TemperatureDifference).contains("differences are in K"));
        assert!(fault("4 V", D::Number).contains("a plain number is expected"));
        assert!(fault("4 turns", D::Number).contains("without a unit"));
    }

    #[test]
    fn what_is_no_finite_number_is_refused() {
        for text in ["nan V", ".inf V", "-.inf", "1e999 V", "1e99999999999 V", "1e-400 V"] {
            assert!(parse(text, Expected::of(D::Voltage)).is_err(), "{text}");
        }
        for text in ["", "V", "e5 V", "--1 V", "+ V", "."] {
            assert!(fault(text, D::Voltage).contains("a voltage is expected"), "{text}");
        }
        assert!(read(&Node::Float(f64::NAN), Expected::of(D::Number)).is_err());
        assert!(read(&Node::Float(f64::INFINITY), Expected::of(D::Voltage)).is_err());
    }

    #[test]
    fn a_comma_that_made_a_list_is_explained() {
        let node = Node::List(vec![Node::Int(1), Node::Text("5 mΩ".into())]);
        let blame = read(&node, Expected::of(D::Resistance)).expect_err("a list");
        assert!(blame.hint.contains("1.5 mΩ"), "{blame:?}");
    }
}
