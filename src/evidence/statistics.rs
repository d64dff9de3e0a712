//! Statistics of relative differences.

/// Square root of the mean square.
pub(super) fn rms(values: &[f64]) -> f64 {
    (values.iter().map(|value| value * value).sum::<f64>() / values.len() as f64).sqrt()
}

/// Arithmetic mean; not a number for no values.
pub(super) fn mean(values: &[f64]) -> f64 {
    values.iter().sum::<f64>() / values.len() as f64
}

/// The largest of the magnitudes; not a number when any value is none.
pub(super) fn worst(values: &[f64]) -> f64 {
    values.iter().fold(0.0, |worst: f64, value| if value.abs() <= worst { worst } else { value.abs() })
}
