//! Copper: its resistance against temperature.

/// R(T)/R(25 °C) of copper: (1 + 0.00393 (T - 20)) / (1 + 0.00393 x 5), T in °C (E30).
///
/// Source: coefficient 0.00393 /K at 20 °C of IEC 60028. Valid from about -50 to 200 °C.
#[inline]
pub fn hot_ratio(temperature: f64) -> f64 {
    (1.0 + PER_KELVIN * (temperature - 20.0)) * PER_COLD
}

/// R(20 °C)/R(25 °C).
const PER_COLD: f64 = 1.0 / (1.0 + PER_KELVIN * 5.0);
/// Temperature coefficient at 20 °C, 1/K.
pub const PER_KELVIN: f64 = 0.003_93;

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn agrees_with_the_standard() {
        // IEC 60028: R(T)/R(20 °C) at 60, 100 and 125 °C; printed to four or five digits
        for (temperature, ratio) in [(60.0, 1.1572), (100.0, 1.3144), (125.0, 1.41265)] {
            let ours: f64 = hot_ratio(temperature) / hot_ratio(20.0);
            assert!((ours / ratio - 1.0).abs() < 1e-9);
        }
        // a handbook's table on the base of 25 °C, whose coefficient is itself rounded to three digits: one unit of its last
        assert!((hot_ratio(100.0) / 1.2890 - 1.0).abs() < 1e-4);
    }
}
