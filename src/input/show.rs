//! Numbers for the messages of this folder: a few digits with a prefix. (Results are written elsewhere.)

use crate::units::Dimension;

/// `0.0068` ohm as `6.8 mΩ`.
pub(crate) fn engineering(value: f64, dimension: Dimension) -> String {
    let unit = dimension.unit();
    match dimension {
        Dimension::Number => digits(value),
        Dimension::Ratio => format!("{} %", digits(100.0 * value)),
        Dimension::Volume => format!("{} mm³", digits(1e9 * value)),
        Dimension::Area => format!("{} mm²", digits(1e6 * value)),
        Dimension::CurrentSlope => format!("{} A/µs", digits(1e-6 * value)),
        Dimension::PowerDensity => format!("{} kW/m³", digits(1e-3 * value)),
        Dimension::Temperature | Dimension::TemperatureDifference | Dimension::ThermalResistance => {
            format!("{} {unit}", digits(value))
        }
        _ => {
            let prefixes =
                [(1e9, "G"), (1e6, "M"), (1e3, "k"), (1.0, ""), (1e-3, "m"), (1e-6, "µ"), (1e-9, "n")];
            let fits = |(scale, _): &&(f64, &str)| value.abs() >= 0.999_999 * scale;
            let (scale, prefix) = match value {
                0.0 => (1.0, ""),
                _ => prefixes.iter().find(fits).copied().unwrap_or((1e-12, "p")),
            };
            format!("{} {prefix}{unit}", digits(value / scale))
        }
    }
}

/// Six significant digits without trailing zeros.
fn digits(value: f64) -> String {
    let rounded: f64 = format!("{value:.5e}").parse().unwrap_or(value);
    rounded.to_string()
}

#[cfg(test)]
mod tests {
    use super::*;
    use Dimension as D;

    #[test]
    fn messages_read_like_data_sheets() {
        assert_eq!(engineering(6.8e-3, D::Resistance), "6.8 mΩ");
        assert_eq!(engineering(12e-9, D::Charge), "12 nC");
        assert_eq!(engineering(0.0, D::Voltage), "0 V");
        assert_eq!(engineering(0.3, D::Ratio), "30 %");
        assert_eq!(engineering(4e5, D::Frequency), "400 kHz");
        assert_eq!(engineering(-40.0, D::Temperature), "-40 °C");
        assert_eq!(engineering(1e-9, D::Inductance), "1 nH");
        assert_eq!(engineering(1200e-9, D::Volume), "1200 mm³");
        assert_eq!(engineering(1e9, D::Number), "1000000000");
    }
}
