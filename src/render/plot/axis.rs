//! Axes: where round numbers stand.

use crate::report::figure::Scale;
use crate::report::number::{Form, show};
use crate::units::Dimension;

/// An axis with its range and its round numbers.
pub(in crate::render) struct Axis<'a> {
    scale: &'a Scale,
    low: f64,
    high: f64,
    /// Round numbers in the range.
    pub(in crate::render) ticks: Vec<f64>,
}

impl<'a> Axis<'a> {
    /// The axis that holds all values; `floor` and `ceiling` are limits that round numbers do not pass.
    pub(in crate::render) fn around(
        scale: &'a Scale,
        values: impl Iterator<Item = f64>,
        [floor, ceiling]: [f64; 2],
    ) -> Self {
        let fits = |value: &f64| value.is_finite() && (!scale.log || *value > 0.0);
        let (mut low, mut high) = values
            .filter(fits)
            .fold((f64::INFINITY, f64::NEG_INFINITY), |(low, high), value| (low.min(value), high.max(value)));
        if low > high {
            (low, high) = if scale.log { (1.0, 10.0) } else { (0.0, 1.0) };
        }
        if low == high {
            (low, high) = if scale.log { (low * 0.5, high * 2.0) } else { (low - 0.5, high + 0.5) };
        }
        if scale.log {
            let ticks = decades(low, high);
            return Axis { scale, low, high, ticks };
        }
        let step = round_step((high - low) / 6.0);
        let low = ((low / step).floor() * step).max(floor);
        let high = ((high / step - 1e-9).ceil() * step).min(ceiling);
        let count = ((high - low) / step + 1e-6).floor() as i32;
        let first = (low / step).round();
        let ticks = (0..=count).map(|k| (first + f64::from(k)) * step).collect();
        Axis { scale, low, high, ticks }
    }

    /// Place of a value, 0 at the low end and 1 at the high end; `None` off a logarithmic axis.
    pub(in crate::render) fn place(&self, value: f64) -> Option<f64> {
        if self.scale.log {
            return (value > 0.0).then(|| (value / self.low).ln() / (self.high / self.low).ln());
        }
        Some((value - self.low) / (self.high - self.low))
    }

    /// True for values within the range.
    pub(in crate::render) fn holds(&self, value: f64) -> bool {
        value >= self.low * (1.0 - 1e-9) && value <= self.high * (1.0 + 1e-9)
    }

    /// A round number with its unit.
    pub(in crate::render) fn label(&self, tick: f64) -> String {
        match self.scale.form {
            Form::Efficiency | Form::Share => show(tick, Form::Setting(Dimension::Ratio)),
            Form::Result(dimension) => show(tick, Form::Setting(dimension)),
            other => show(tick, other),
        }
    }

    /// What the axis measures.
    pub(in crate::render) fn title(&self) -> &'a str {
        &self.scale.title
    }
}

/// 1, 2 and 5 of each decade, or the decades alone when there are many.
fn decades(low: f64, high: f64) -> Vec<f64> {
    let many = (high / low).log10() > 3.2;
    let mantissas: &[f64] = if many { &[1.0] } else { &[1.0, 2.0, 5.0] };
    let mut ticks = Vec::new();
    for decade in low.log10().floor() as i32..=high.log10().ceil() as i32 {
        for mantissa in mantissas {
            // through text: 2e-1 is then 0.2 to the last bit
            let tick: f64 = format!("{mantissa}e{decade}").parse().unwrap_or(f64::NAN);
            if tick >= low * (1.0 - 1e-9) && tick <= high * (1.0 + 1e-9) {
                ticks.push(tick);
            }
        }
    }
    ticks
}

/// 1, 2 or 5 times a power of ten, not below a step.
fn round_step(step: f64) -> f64 {
    let power = 10f64.powf(step.log10().floor());
    let mantissa = step / power;
    let round = if mantissa <= 1.0 {
        1.0
    } else if mantissa <= 2.0 {
        2.0
    } else if mantissa <= 5.0 {
        5.0
    } else {
        10.0
    };
    round * power
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn round_numbers_stand_inside_the_range() {
        let log = Scale { title: "load".into(), form: Form::Setting(Dimension::Current), log: true };
        let axis = Axis::around(&log, [0.05, 10.0].into_iter(), [0.0, f64::INFINITY]);
        assert_eq!(axis.ticks, [0.05, 0.1, 0.2, 0.5, 1.0, 2.0, 5.0, 10.0]);
        assert_eq!(axis.label(0.05), "50 mA");
        assert_eq!((axis.place(0.05), axis.place(0.0)), (Some(0.0), None));
        let linear = Scale { title: "efficiency".into(), form: Form::Efficiency, log: false };
        let axis = Axis::around(&linear, [0.131, 0.96].into_iter(), [0.0, 1.0]);
        assert_eq!(axis.ticks.len(), 6);
        assert_eq!(axis.label(axis.ticks[1]), "20 %");
        assert_eq!(axis.place(1.0), Some(1.0));
    }
}
