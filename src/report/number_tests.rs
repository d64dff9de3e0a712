//! Prefixes after the SI brochure, 9th edition, table 7; the rest is our own typography.

use super::*;
use Dimension as D;

#[test]
fn results_have_three_digits_and_a_prefix() {
    let shown = |value, dimension| show(value, Form::Result(dimension));
    assert_eq!(shown(0.04463, D::Power), "44.6 mW");
    assert_eq!(shown(2.2996, D::Current), "2.30 A");
    assert_eq!(shown(400e3, D::Frequency), "400 kHz");
    assert_eq!(shown(3.3e-6, D::Inductance), "3.30 µH");
    assert_eq!(shown(12e-9, D::Charge), "12.0 nC");
    assert_eq!(shown(0.9996, D::Power), "1.00 W");
    assert_eq!(shown(999.4e-6, D::Power), "999 µW");
    assert_eq!(shown(0.99999, D::Power), "1.00 W");
    assert_eq!(shown(-0.0123, D::Power), "-12.3 mW");
    assert_eq!(shown(1e-15, D::Power), "1.00 fW");
    assert_eq!(shown(1e-22, D::Power), "1.00e-22 W");
    assert_eq!(shown(18.0, D::ThermalResistance), "18.0 K/W");
    assert_eq!(shown(1.2e-6, D::Volume), "1200 mm³");
    assert_eq!(shown(1e8, D::CurrentSlope), "100 A/µs");
    assert_eq!(shown(0.3, D::Ratio), "30.0 %");
    assert_eq!(shown(12345.6, D::Number), "12346");
    assert_eq!(shown(0.0312, D::Number), "0.0312");
}

#[test]
fn nothing_prints_as_minus_zero_or_as_a_zero_that_it_is_not() {
    assert_eq!(show(0.0, Form::Result(D::Power)), "0 W");
    assert_eq!(show(-0.0, Form::Result(D::Power)), "0 W");
    assert_eq!(show(-0.0, Form::Efficiency), "0 %");
    assert_eq!(show(-1e-9, Form::Efficiency), ">-0.01 %");
    assert_eq!(show(1e-9, Form::Share), "<0.1 %");
    assert_eq!(show(-0.01, Form::Result(D::Temperature)), ">-0.1 °C");
    assert_eq!(show(f64::NAN, Form::Result(D::Power)), "—");
    assert_eq!(show(f64::INFINITY, Form::Setting(D::Power)), "—");
}

#[test]
fn percent_and_temperatures_have_fixed_decimals() {
    assert_eq!(show(0.93651, Form::Efficiency), "93.65 %");
    assert_eq!(show(0.2324, Form::Share), "23.2 %");
    assert_eq!(show(82.594, Form::Result(D::Temperature)), "82.6 °C");
    assert_eq!(show(300.0, Form::Result(D::Temperature)), "300.0 °C");
    assert_eq!(show(300.1, Form::Result(D::Temperature)), "> 300 °C");
    assert_eq!(show(25.0, Form::Result(D::TemperatureDifference)), "25.0 K");
    assert_eq!(show(24.0, Form::Count), "24");
}

#[test]
fn settings_look_as_they_were_written() {
    let shown = |value, dimension| show(value, Form::Setting(dimension));
    assert_eq!(shown(24.0, D::Voltage), "24 V");
    assert_eq!(shown(4.75, D::Voltage), "4.75 V");
    assert_eq!(shown(0.05, D::Current), "50 mA");
    assert_eq!(shown(123.456, D::Voltage), "123.456 V");
    assert_eq!(shown(0.05 * 200f64.powf(1.0 / 23.0), D::Current), "62.95 mA");
    assert_eq!(shown(10.0 / 3.0, D::Current), "3.333 A");
    assert_eq!(shown(60.0, D::Temperature), "60 °C");
    assert_eq!(shown(100.0, D::Number), "100");
    assert_eq!(shown(0.8, D::Ratio), "80 %");
    assert_eq!(shown(400e3, D::Frequency), "400 kHz");
    assert_eq!(shown(0.1 + 0.2, D::Current), "300 mA");
}

#[test]
fn a_column_shares_prefix_and_decimals() {
    let column = |values: &[f64], form, dimension| {
        let prefix = shared_prefix(values.iter().copied(), dimension);
        let scale = Scale::new(values, form, prefix);
        let shown: Vec<String> = values.iter().map(|value| scale.show(*value)).collect();
        (scale.unit().to_string(), shown.join(" "))
    };
    let power = Form::Result(D::Power);
    assert_eq!(
        column(&[0.0446, 0.3125, 1.342, 0.0], power, D::Power),
        ("W".into(), "0.045 0.312 1.342 0".into())
    );
    assert_eq!(column(&[0.0446, 0.00003], power, D::Power), ("mW".into(), "44.60 0.03".into()));
    assert_eq!(column(&[207.0, 1.04, 1e-6], power, D::Power), ("W".into(), "207.0 1.0 <0.1".into()));
    assert_eq!(column(&[0.9365, 0.8], Form::Efficiency, D::Ratio), ("%".into(), "93.65 80.00".into()));
    assert_eq!(
        column(&[0.05, 0.5, 10.0], Form::Setting(D::Current), D::Current),
        ("A".into(), "0.05 0.50 10.00".into())
    );
    assert_eq!(column(&[1.0, 10.0], Form::Setting(D::Current), D::Current), ("A".into(), "1 10".into()));
    assert_eq!(column(&[0.0], power, D::Power), ("W".into(), "0".into()));
    let hot = Form::Result(D::Temperature);
    assert_eq!(column(&[82.59, 412.0], hot, D::Temperature), ("°C".into(), "82.6 > 300".into()));
}
