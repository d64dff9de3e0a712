//! Physical dimensions: what a number measures, its unit inside the program and the words for it.

/// What a quantity of a file measures. Inside the program every quantity is a plain `f64` in the unit given here.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash, PartialOrd, Ord)]
pub enum Dimension {
    /// V
    Voltage,
    /// A
    Current,
    /// Ω
    Resistance,
    /// C
    Charge,
    /// F
    Capacitance,
    /// H
    Inductance,
    /// s
    Time,
    /// Hz
    Frequency,
    /// W
    Power,
    /// J
    Energy,
    /// °C, a place on the temperature scale
    Temperature,
    /// K, a difference of temperatures
    TemperatureDifference,
    /// K/W
    ThermalResistance,
    /// a fraction, written in percent
    Ratio,
    /// A/s
    CurrentSlope,
    /// m³
    Volume,
    /// m²
    Area,
    /// T
    FluxDensity,
    /// W/m³
    PowerDensity,
    /// a bare number
    Number,
}

impl Dimension {
    /// Unit inside the program, as printed: `Ω`, `°C`, empty for a bare number; a ratio is a fraction and prints as `%`.
    pub const fn unit(self) -> &'static str {
        match self {
            Dimension::Voltage => "V",
            Dimension::Current => "A",
            Dimension::Resistance => "Ω",
            Dimension::Charge => "C",
            Dimension::Capacitance => "F",
            Dimension::Inductance => "H",
            Dimension::Time => "s",
            Dimension::Frequency => "Hz",
            Dimension::Power => "W",
            Dimension::Energy => "J",
            Dimension::Temperature => "°C",
            Dimension::TemperatureDifference => "K",
            Dimension::ThermalResistance => "K/W",
            Dimension::Ratio => "%",
            Dimension::CurrentSlope => "A/s",
            Dimension::Volume => "m³",
            Dimension::Area => "m²",
            Dimension::FluxDensity => "T",
            Dimension::PowerDensity => "W/m³",
            Dimension::Number => "",
        }
    }

    /// The dimension in words with its article, for messages: "a resistance".
    pub const fn words(self) -> &'static str {
        match self {
            Dimension::Voltage => "a voltage",
            Dimension::Current => "a current",
            Dimension::Resistance => "a resistance",
            Dimension::Charge => "a charge",
            Dimension::Capacitance => "a capacitance",
            Dimension::Inductance => "an inductance",
            Dimension::Time => "a time",
            Dimension::Frequency => "a frequency",
            Dimension::Power => "a power",
            Dimension::Energy => "an energy",
            Dimension::Temperature => "a temperature",
            Dimension::TemperatureDifference => "a temperature difference",
            Dimension::ThermalResistance => "a thermal resistance",
            Dimension::Ratio => "a percentage",
            Dimension::CurrentSlope => "a current slope",
            Dimension::Volume => "a volume",
            Dimension::Area => "an area",
            Dimension::FluxDensity => "a flux density",
            Dimension::PowerDensity => "a power density",
            Dimension::Number => "a plain number",
        }
    }
}
