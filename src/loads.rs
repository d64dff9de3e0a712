//! Loads to print: round figures within the budget's axis, or those asked for.

use crate::grid::Axis;

/// Fewest loads that make a table worth reading.
const FEWEST: usize = 6;

/// Loads of a printed table, A: the values of a list; of a range the round figures in it and its upper end.
pub fn printed(axis: &Axis) -> Vec<f64> {
    match axis {
        Axis::List(values) => values.clone(),
        Axis::Range { from, to, points, .. } => {
            let series: [&[f64]; 3] = [
                &[1.0, 2.0, 5.0],
                &[1.0, 1.5, 2.0, 3.0, 5.0, 7.0],
                &[1.0, 1.2, 1.5, 1.8, 2.2, 2.7, 3.3, 3.9, 4.7, 5.6, 6.8, 8.2],
            ];
            let wanted = FEWEST.min(usize::try_from(*points).unwrap_or(FEWEST));
            let figures = series.iter().map(|mantissas| round_figures(*from, *to, mantissas));
            let enough = figures.into_iter().find(|loads| loads.len() >= wanted);
            enough.unwrap_or_else(|| axis.values().take(24).collect())
        }
    }
}

/// Figures of a series of mantissas between two loads, the upper one always among them.
fn round_figures(from: f64, to: f64, mantissas: &[f64]) -> Vec<f64> {
    if !(from > 0.0 && to > from) {
        return Vec::new();
    }
    let mut loads = Vec::new();
    for decade in from.log10().floor() as i32..=to.log10().ceil() as i32 {
        for mantissa in mantissas {
            // through text: 2e-1 is then 0.2 to the last bit
            let load: f64 = format!("{mantissa}e{decade}").parse().unwrap_or(f64::NAN);
            if load >= from * (1.0 - 1e-9) && load < to * (1.0 - 1e-9) {
                loads.push(load);
            }
        }
    }
    loads.push(to);
    loads
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn round_figures_and_the_upper_end() {
        let axis = Axis::Range { from: 0.05, to: 10.0, points: 24, log: true };
        assert_eq!(printed(&axis), [0.05, 0.1, 0.2, 0.5, 1.0, 2.0, 5.0, 10.0]);
        let narrow = Axis::Range { from: 1.0, to: 6.0, points: 11, log: false };
        assert_eq!(printed(&narrow), [1.0, 1.5, 2.0, 3.0, 5.0, 6.0]);
        let few = Axis::Range { from: 1.0, to: 2.0, points: 3, log: false };
        assert_eq!(printed(&few), [1.0, 1.5, 2.0]);
    }
}
