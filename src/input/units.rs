//! Spellings of units: what each measures and its scale.

use crate::units::Dimension as D;

/// A unit of a file: its dimension and how many SI units it is.
#[derive(Clone, Copy, Debug, PartialEq)]
pub(crate) struct Unit {
    /// What it measures.
    pub(crate) dimension: D,
    /// Power of ten, applied to the decimal text of a number so that no digit is lost.
    pub(crate) exponent: i32,
    /// What remains of the scale after the power of ten: 36 for `Wh` (36e2 J).
    pub(crate) factor: f64,
}

/// Unit symbols that take prefixes, with the prefixes that make sense: nobody writes millihertz of a converter, and
/// `mHz` for `MHz` should not pass.
const PREFIXED: [(&str, D, &str, f64, i32); 12] = [
    ("V", D::Voltage, "num k", 1.0, 0),
    ("A", D::Current, "pnum k", 1.0, 0),
    ("Ω", D::Resistance, "num kMG", 1.0, 0),
    ("C", D::Charge, "fpnum ", 1.0, 0),
    ("F", D::Capacitance, "fpnum ", 1.0, 0),
    ("H", D::Inductance, "pnum ", 1.0, 0),
    ("s", D::Time, "fpnum ", 1.0, 0),
    ("Hz", D::Frequency, " kMG", 1.0, 0),
    ("W", D::Power, "pnum k", 1.0, 0),
    ("J", D::Energy, "pnum kM", 1.0, 0),
    ("T", D::FluxDensity, "num ", 1.0, 0),
    ("Wh", D::Energy, "um kM", 36.0, 2),
];

/// Units without prefixes, or whose prefixes are not decimal ones.
const PLAIN: [(&str, D, i32); 24] = [
    ("°C", D::Temperature, 0),
    ("K", D::TemperatureDifference, 0),
    ("mK", D::TemperatureDifference, -3),
    ("K/W", D::ThermalResistance, 0),
    ("°C/W", D::ThermalResistance, 0),
    ("mK/W", D::ThermalResistance, -3),
    ("K/mW", D::ThermalResistance, 3),
    ("%", D::Ratio, -2),
    ("A/s", D::CurrentSlope, 0),
    ("A/ms", D::CurrentSlope, 3),
    ("A/us", D::CurrentSlope, 6),
    ("A/ns", D::CurrentSlope, 9),
    ("mA/ns", D::CurrentSlope, 6),
    ("m3", D::Volume, 0),
    ("cm3", D::Volume, -6),
    ("mm3", D::Volume, -9),
    ("m2", D::Area, 0),
    ("cm2", D::Area, -4),
    ("mm2", D::Area, -6),
    ("W/m3", D::PowerDensity, 0),
    ("kW/m3", D::PowerDensity, 3),
    ("mW/cm3", D::PowerDensity, 3),
    ("W/cm3", D::PowerDensity, 6),
    ("MW/m3", D::PowerDensity, 6),
];

const PREFIXES: [(char, i32); 9] =
    [('f', -15), ('p', -12), ('n', -9), ('u', -6), ('m', -3), (' ', 0), ('k', 3), ('M', 6), ('G', 9)];

/// The unit of a spelling; ASCII and Unicode spellings are equal.
pub(crate) fn find(spelling: &str) -> Option<Unit> {
    let unit = plain_spelling(spelling);
    if let Some((_, dimension, exponent)) = PLAIN.iter().find(|(symbol, ..)| *symbol == unit) {
        return Some(Unit { dimension: *dimension, exponent: *exponent, factor: 1.0 });
    }
    PREFIXED.iter().find_map(|(symbol, dimension, allowed, factor, exponent)| {
        let prefix = unit.strip_suffix(symbol)?;
        let prefix = if prefix.is_empty() { " " } else { prefix };
        let (letter, power) = PREFIXES.iter().find(|(letter, _)| prefix.chars().eq([*letter]))?;
        allowed.contains(*letter).then_some(Unit {
            dimension: *dimension,
            exponent: exponent + power,
            factor: *factor,
        })
    })
}

/// One spelling for all: `µΩ`, `μΩ`, `uohm` and `uOhm` are `uΩ`.
fn plain_spelling(spelling: &str) -> String {
    let mut plain = String::with_capacity(spelling.len());
    for c in spelling.chars() {
        match c {
            'µ' | 'μ' => plain.push('u'),
            '\u{2126}' => plain.push('Ω'),
            'º' => plain.push('°'),
            '³' => plain.push('3'),
            '²' => plain.push('2'),
            '\u{212A}' => plain.push('K'),
            '℃' => plain.push_str("°C"),
            '^' | ' ' | '\u{A0}' => {}
            other => plain.push(other),
        }
    }
    for ohm in ["ohms", "Ohms", "ohm", "Ohm", "OHM"] {
        if let Some(prefix) = plain.strip_suffix(ohm) {
            return format!("{prefix}Ω");
        }
    }
    if let Some(rest) = plain.strip_prefix("deg") {
        return format!("°{}", rest.trim_start_matches('_'));
    }
    plain
}

/// Every spelling offered as a near miss.
pub(crate) fn all_spellings() -> Vec<(String, D)> {
    let mut all: Vec<(String, D)> =
        PLAIN.iter().map(|(symbol, dimension, _)| ((*symbol).to_string(), *dimension)).collect();
    for (symbol, dimension, allowed, ..) in PREFIXED {
        let spell = |letter: char| match letter {
            ' ' => symbol.to_string(),
            'u' => format!("µ{symbol}"),
            other => format!("{other}{symbol}"),
        };
        all.extend(allowed.chars().map(|letter| (spell(letter), dimension)));
    }
    all
}

/// An example of each dimension for messages.
pub(crate) const fn example(dimension: D) -> &'static str {
    match dimension {
        D::Voltage => "3.3 V",
        D::Current => "1.5 A",
        D::Resistance => "6.8 mΩ",
        D::Charge => "12 nC",
        D::Capacitance => "10 µF",
        D::Inductance => "3.3 µH",
        D::Time => "20 ns",
        D::Frequency => "400 kHz",
        D::Power => "2.5 W",
        D::Energy => "50 Wh",
        D::Temperature => "60 °C",
        D::TemperatureDifference => "25 K",
        D::ThermalResistance => "18 K/W",
        D::Ratio => "30 %",
        D::CurrentSlope => "100 A/µs",
        D::Volume => "1200 mm3",
        D::Area => "60 mm2",
        D::FluxDensity => "50 mT",
        D::PowerDensity => "30 kW/m3",
        D::Number => "1.5",
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn spellings_are_equal() {
        for group in [
            &["mΩ", "m\u{2126}", "mohm", "mOhm", "mohms"][..],
            &["µF", "\u{03BC}F", "\u{00B5}F", "uF"],
            &["°C", "degC", "deg C", "ºC", "℃"],
            &["K/W", "°C/W", "degC/W"],
            &["A/µs", "A/us", "mA/ns"],
            &["mm3", "mm³", "mm^3"],
            &["kW/m3", "kW/m³", "mW/cm3", "mW/cm³"],
        ] {
            let units: Vec<_> = group.iter().map(|spelling| find(spelling)).collect();
            assert!(units[0].is_some() && units.iter().all(|unit| *unit == units[0]), "{group:?} {units:?}");
        }
    }

    #[test]
    fn near_misses_of_units_are_no_units() {
        for unit in ["mHz", "KHz", "khz", "v", "", "m", "min", "Mohmm", "kkHz", "x", "GA", "ΩΩ", "Km"] {
            assert_eq!(find(unit), None, "{unit}");
        }
    }

    #[test]
    fn every_spelling_offered_is_known_with_its_dimension() {
        for (spelling, dimension) in all_spellings() {
            assert_eq!(find(&spelling).map(|unit| unit.dimension), Some(dimension), "{spelling}");
        }
    }
}
