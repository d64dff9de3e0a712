//! Readings of a bench: what was measured, and how well (JCGM 100:2008, "GUM").

use crate::budget::BenchAccuracy;

/// One row of a bench file.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Reading {
    /// Line of the file.
    pub line: usize,
    /// V_IN, V.
    pub input_voltage: f64,
    /// I_IN, A.
    pub input_current: f64,
    /// V_OUT, V.
    pub output_voltage: f64,
    /// I_OUT, A.
    pub output_current: f64,
    /// T_A, °C, when it was noted.
    pub ambient: Option<f64>,
    /// f_SW, Hz, when it was noted.
    pub switching_frequency: Option<f64>,
}

/// Stated accuracy of one instrument: a half-width made of a share of the reading and a constant of its range.
#[derive(Clone, Copy, Debug, Default, PartialEq)]
pub struct Accuracy {
    /// Fraction of the reading.
    pub of_reading: f64,
    /// Share of the range times its full scale, in the unit of the reading.
    pub of_range: f64,
}

impl Accuracy {
    /// Half-width of what the reading may be off by, in its unit.
    pub fn half_width(&self, reading: f64) -> f64 {
        self.of_reading * reading.abs() + self.of_range
    }
}

/// Loss of a reading with its uncertainty.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct MeasuredLoss {
    /// V_IN I_IN - V_OUT I_OUT, W.
    pub watts: f64,
    /// Half-widths of the four readings, combined in squares, W.
    pub half_width: f64,
    /// One standard uncertainty, W.
    pub sigma: f64,
}

impl Reading {
    /// V_IN I_IN, W.
    pub fn input_power(&self) -> f64 {
        self.input_voltage * self.input_current
    }

    /// V_OUT I_OUT, W.
    pub fn output_power(&self) -> f64 {
        self.output_voltage * self.output_current
    }

    /// Loss and its standard uncertainty.
    ///
    /// u² = Σ (∂P/∂x u(x))² over the four readings (JCGM 100:2008, 5.1.2, independent inputs), u(x) = a/√3 for a stated
    /// accuracy ± a taken as a rectangular distribution (4.3.7).
    pub fn loss(&self, bench: &BenchAccuracy) -> MeasuredLoss {
        let parts = [
            self.input_current * bench.input_voltage.half_width(self.input_voltage),
            self.input_voltage * bench.input_current.half_width(self.input_current),
            self.output_current * bench.output_voltage.half_width(self.output_voltage),
            self.output_voltage * bench.output_current.half_width(self.output_current),
        ];
        let half_width = parts.iter().map(|part| part * part).sum::<f64>().sqrt();
        MeasuredLoss {
            watts: self.input_power() - self.output_power(),
            half_width,
            sigma: half_width / 3.0_f64.sqrt(),
        }
    }

    /// Why no converter gives such a row, or `None`. `rail` is the voltage that the output should have, V.
    pub fn absurdity(&self, rail: f64) -> Option<String> {
        let near = |value: f64| (value / rail - 1.0).abs() < NEAR_RAIL;
        if !near(self.output_voltage) {
            let columns = [
                ("input_voltage", self.input_voltage),
                ("output_current", self.output_current),
                ("input_current", self.input_current),
            ];
            if let Some((name, value)) = columns.into_iter().find(|(_, value)| near(*value)) {
                return Some(format!(
                    "output_voltage reads {} V and {name} {value}: the two columns look swapped, the rail has {rail} V",
                    self.output_voltage
                ));
            }
            return Some(format!("output_voltage reads {} V, the rail has {rail} V", self.output_voltage));
        }
        if self.output_power() > self.input_power() {
            let efficiency = 100.0 * self.output_power() / self.input_power();
            let swapped = near(self.input_voltage) || self.input_voltage < self.output_voltage;
            let hint =
                if swapped { "input and output look swapped" } else { "check ranges, leads and columns" };
            return Some(format!("more power leaves than enters (efficiency {efficiency:.2} %): {hint}"));
        }
        None
    }
}

/// Relative distance to the rail's voltage within which an output voltage is believed.
const NEAR_RAIL: f64 = 0.2;

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn half_a_percent_on_each_reading_at_95_percent_efficiency() {
        // by hand, from JCGM 100: 0.005 sqrt(2 (1 + 0.95²))/0.05 = 19.5 % of the loss, over √3 11.3 %
        let each = Accuracy { of_reading: 0.005, of_range: 0.0 };
        let bench = BenchAccuracy {
            input_voltage: each,
            input_current: each,
            output_voltage: each,
            output_current: each,
        };
        let reading = Reading {
            line: 2,
            input_voltage: 20.0,
            input_current: 0.05,
            output_voltage: 3.3,
            output_current: 0.95 / 3.3,
            ambient: None,
            switching_frequency: None,
        };
        let loss = reading.loss(&bench);
        assert!((loss.watts - 0.05).abs() < 1e-12);
        // three digits are what the sentence prints
        assert!((100.0 * loss.half_width / loss.watts - 19.5).abs() < 0.05);
        assert!((100.0 * loss.sigma / loss.watts - 11.3).abs() < 0.05);
    }

    #[test]
    fn ranges_add_a_constant() {
        let meter = Accuracy { of_reading: 0.001, of_range: 0.004 };
        assert!((meter.half_width(10.0) - 0.014).abs() < 1e-15);
    }

    #[test]
    fn absurd_rows_are_named() {
        let row = Reading {
            line: 2,
            input_voltage: 24.0,
            input_current: 0.9,
            output_voltage: 3.3,
            output_current: 6.0,
            ambient: None,
            switching_frequency: None,
        };
        assert_eq!(row.absurdity(3.3), None);
        let above = Reading { input_current: 0.7, ..row };
        assert!(above.absurdity(3.3).is_some_and(|reason| reason.contains("efficiency 117.86 %")));
        let swapped = Reading { output_voltage: 6.0, output_current: 3.3, ..row };
        assert!(
            swapped
                .absurdity(3.3)
                .is_some_and(|reason| reason.contains("output_current 3.3: the two columns"))
        );
    }
}
