//! The quantities of a budget: what each measures, what may stand there, an example.

use crate::grid::AxisName;
use crate::sheet::form::Key;
use crate::units::Dimension as D;

pub(crate) const OUTPUT_VOLTAGE: Key =
    Key::new("output_voltage", D::Voltage, "voltage of the rail").sane(0.3, 200.0).example("3.3 V");
pub(crate) const RATED_LOAD: Key =
    Key::new("rated_load", D::Current, "full load").sane(1e-4, 1e3).example("10 A");

pub(crate) const INPUT_VOLTAGE: Key =
    Key::new("input_voltage", D::Voltage, "input voltage").sane(0.8, 500.0).example("24 V");
pub(crate) const LOAD: Key = Key::new("load", D::Current, "load current, or a percentage of rated_load")
    .zero()
    .sane(1e-7, 1e3)
    .example("6 A");
pub(crate) const AMBIENT: Key =
    Key::new("ambient", D::Temperature, "air around the rail").signed().sane(-60.0, 150.0).example("60 °C");
pub(crate) const SWITCHING_FREQUENCY: Key =
    Key::new("switching_frequency", D::Frequency, "switching frequency").sane(1e4, 2e7).example("400 kHz");

pub(crate) const SHARE: Key = Key::new("share", D::Ratio, "share of time").example("70 %");
pub(crate) const BATTERY_ENERGY: Key =
    Key::new("energy", D::Energy, "what the battery holds").sane(0.1, 1e9).example("50 Wh");
pub(crate) const COUPLING: Key =
    Key::new("thermal_coupling", D::ThermalResistance, "K of the heated slot per W of the heating slot")
        .zero()
        .sane(0.01, 200.0)
        .example("6 K/W");

pub(crate) const EFFICIENCY_MIN: Key =
    Key::new("efficiency_min", D::Ratio, "smallest efficiency").example("90 %");
pub(crate) const JUNCTION_MARGIN_MIN: Key =
    Key::new("junction_margin_min", D::TemperatureDifference, "smallest distance to a junction rating")
        .zero()
        .example("25 K");
pub(crate) const LOSS_MAX: Key = Key::new("loss_max", D::Power, "largest loss").example("2.5 W");

/// The key of an axis.
pub(crate) const fn of_axis(axis: AxisName) -> &'static Key {
    match axis {
        AxisName::InputVoltage => &INPUT_VOLTAGE,
        AxisName::Load => &LOAD,
        AxisName::Ambient => &AMBIENT,
        AxisName::SwitchingFrequency => &SWITCHING_FREQUENCY,
    }
}

/// Accuracy of a bench instrument.
pub(crate) const fn accuracy(name: &'static str) -> Key {
    Key::new(name, D::Ratio, "accuracy of reading").zero().sane(0.0, 0.1).example("0.1 %")
}

/// Share of a rating that may be used.
pub(crate) const fn derated(name: &'static str) -> Key {
    Key::new(name, D::Ratio, "share of the rating that may be used").sane(0.2, 1.0).example("80 %")
}
