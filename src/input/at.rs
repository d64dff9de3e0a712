//! Points on the command line: "input_voltage=24V load=6A ambient=60degC".

use super::error::Blame;
use super::quantity::{self, Expected};
use crate::grid::{ALL_AXES, AxisName, PartialPoint};
use crate::hints::{self, Vocabulary};
use crate::units::Dimension;

/// What the coordinates of an axis measure, with an example.
fn expected(axis: AxisName) -> Expected<'static> {
    let (dimension, example) = match axis {
        AxisName::InputVoltage => (Dimension::Voltage, "24V"),
        AxisName::Load => (Dimension::Current, "6A"),
        AxisName::Ambient => (Dimension::Temperature, "60degC"),
        AxisName::SwitchingFrequency => (Dimension::Frequency, "400kHz"),
    };
    Expected { dimension, example }
}

/// Coordinates of a text: a new one begins at every word with an `=`, so that a unit may stand apart from its number.
fn words(text: &str) -> Vec<String> {
    let mut words: Vec<String> = Vec::new();
    for word in text.split([' ', ',', ';']).filter(|word| !word.is_empty()) {
        match words.last_mut() {
            Some(last) if !word.contains('=') => {
                last.push(' ');
                last.push_str(word);
            }
            _ => words.push(word.to_owned()),
        }
    }
    words
}

/// Reads coordinates separated by spaces or commas.
///
/// # Errors
/// What is wrong with a coordinate and what would be right.
pub fn parse(text: &str) -> Result<PartialPoint, Blame> {
    let mut point = PartialPoint::default();
    for word in words(text) {
        let form = || format!("write it like {}", EXAMPLE);
        let Some((name, value)) = word.split_once('=').map(|(name, value)| (name.trim(), value.trim()))
        else {
            return Err(Blame::new(format!("`{word}` has no `=`"), form()));
        };
        let Some(axis) = AxisName::from_name(name) else {
            let known = ALL_AXES.map(AxisName::name);
            let hint = hints::hint(Vocabulary::Axis, name, known)
                .unwrap_or_else(|| format!("the coordinates are {}", known.join(", ")));
            return Err(Blame::new(format!("there is no coordinate `{name}`"), hint));
        };
        if point.get(axis).is_some() {
            return Err(Blame::new(format!("`{name}` is given twice"), "keep one of them".to_owned()));
        }
        let read = quantity::parse(value, expected(axis))?;
        let limits = match axis {
            AxisName::Ambient => (-273.15, f64::INFINITY),
            AxisName::Load => (0.0, f64::INFINITY),
            _ => (f64::MIN_POSITIVE, f64::INFINITY),
        };
        if read < limits.0 {
            return Err(Blame::new(format!("`{name}` cannot be {value}"), form()));
        }
        point.set(axis, read);
    }
    Ok(point)
}

/// A point as it is written.
pub const EXAMPLE: &str = "\"input_voltage=24V load=6A ambient=60degC\"";

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn points_are_read_and_slips_explained() {
        let point = parse("input_voltage=24V load=6A, ambient=60degC").expect("a point");
        assert_eq!((point.input_voltage, point.load, point.ambient), (Some(24.0), Some(6.0), Some(60.0)));
        assert_eq!(point.switching_frequency, None);
        let reason = |text| parse(text).expect_err("wrong").hint;
        assert!(reason("vin=24V").contains("input_voltage"));
        assert!(reason("load=-1A").contains("write it like"));
        assert!(reason("load").contains("write it like"));
        assert!(parse("load=1A load=2A").is_err());
        assert!(parse("ambient=60K").is_err());
    }
}
