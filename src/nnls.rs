//! Least squares with few unknowns that cannot be negative, with their uncertainties.

use crate::fit::least_squares;

/// A column's coefficient with its standard uncertainty.
#[derive(Clone, Copy, Debug, Default, PartialEq)]
pub struct Coefficient {
    /// Zero when the term does not earn its place.
    pub value: f64,
    /// One standard uncertainty; for a term left at zero, that which it would have.
    pub sigma: f64,
}

/// A fit of three terms.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Fit {
    /// Coefficients in the order of the columns.
    pub terms: [Coefficient; 3],
    /// Sum of squares of what is left, each over its standard uncertainty.
    pub chi_square: f64,
    /// Factor by which the uncertainties were widened because the scatter is larger than stated; 1 or more.
    pub widened: f64,
}

/// What one more term must lower the sum of squares by to earn its place (Akaike 1974).
const PRICE: f64 = 2.0;

/// Fits values with standard uncertainties by non-negative multiples of three columns.
///
/// With three columns every set of terms can be tried: each is solved by plain least squares on rows weighted by
/// 1/sigma, sets with a negative coefficient are left out, and of the rest the one with the lowest sum of squares plus
/// `PRICE` a term wins. Uncertainties are those of the normal equations (JCGM 100:2008, H.3), widened by the square
/// root of the reduced sum of squares when that exceeds 1 (Birge 1932). `None` with too few or too similar rows.
pub fn fit(rows: &[[f64; 3]], values: &[f64], sigmas: &[f64]) -> Option<Fit> {
    if rows.len() < 4 {
        return None;
    }
    let weighted = |pick: &[usize]| -> Vec<[f64; 3]> {
        rows.iter()
            .zip(sigmas)
            .map(|(row, sigma)| {
                let mut out = [0.0; 3];
                for (place, column) in pick.iter().enumerate() {
                    out[place] = row[*column] / sigma;
                }
                out
            })
            .collect()
    };
    let scaled: Vec<f64> = values.iter().zip(sigmas).map(|(value, sigma)| value / sigma).collect();
    let mut best: Option<(f64, Vec<usize>, [f64; 3], f64)> = None;
    for set in 0..8_usize {
        let pick: Vec<usize> = (0..3).filter(|column| set >> column & 1 == 1).collect();
        let rows = weighted(&pick);
        let x = solve(&rows, &scaled, pick.len())?;
        if x.iter().any(|value| *value < 0.0) {
            continue;
        }
        let left = |row: &[f64; 3], value: &f64| value - row.iter().zip(&x).map(|(a, b)| a * b).sum::<f64>();
        let chi_square: f64 = rows.iter().zip(&scaled).map(|(row, value)| left(row, value).powi(2)).sum();
        let price = chi_square + PRICE * pick.len() as f64;
        if best.as_ref().is_none_or(|(least, ..)| price < *least) {
            best = Some((price, pick, x, chi_square));
        }
    }
    let (_, pick, x, chi_square) = best?;
    let freedom = rows.len() - pick.len();
    let widened = (chi_square / freedom as f64).max(1.0).sqrt();
    let mut terms = [Coefficient::default(); 3];
    for (column, term) in terms.iter_mut().enumerate() {
        // the uncertainty of a term at zero is that with it beside the others
        let mut with = pick.clone();
        if !with.contains(&column) {
            with.push(column);
        }
        let place = with.iter().position(|one| *one == column)?;
        let variance = inverse_diagonal(&weighted(&with), with.len(), place)?;
        let value = pick.iter().position(|one| *one == column).map_or(0.0, |place| x[place]);
        *term = Coefficient { value, sigma: widened * variance.sqrt() };
    }
    Some(Fit { terms, chi_square, widened })
}

fn solve(rows: &[[f64; 3]], values: &[f64], count: usize) -> Option<[f64; 3]> {
    let cut = |row: &[f64; 3]| [row[0], row[1]];
    match count {
        0 => Some([0.0; 3]),
        1 => {
            let rows: Vec<[f64; 1]> = rows.iter().map(|row| [row[0]]).collect();
            least_squares(&rows, values).map(|[a]| [a, 0.0, 0.0])
        }
        2 => {
            let rows: Vec<[f64; 2]> = rows.iter().map(cut).collect();
            least_squares(&rows, values).map(|[a, b]| [a, b, 0.0])
        }
        _ => least_squares(rows, values),
    }
}

/// One diagonal element of the inverse of AᵀA: the squared length of its dual row, by solving AᵀA z = e.
fn inverse_diagonal(rows: &[[f64; 3]], count: usize, place: usize) -> Option<f64> {
    let mut a = [[0.0; 4]; 3];
    for (i, row_i) in a.iter_mut().enumerate().take(count) {
        for j in 0..count {
            row_i[j] = rows.iter().map(|row| row[i] * row[j]).sum();
        }
        row_i[3] = if i == place { 1.0 } else { 0.0 };
    }
    // Gauss and Jordan on a positive definite matrix of at most three rows
    for pivot in 0..count {
        let head = a[pivot][pivot];
        if head <= 0.0 || head.is_nan() {
            return None;
        }
        for cell in &mut a[pivot] {
            *cell /= head;
        }
        let source = a[pivot];
        for (i, row) in a.iter_mut().enumerate().take(count) {
            if i != pivot {
                let share = row[pivot];
                for (cell, from) in row.iter_mut().zip(&source) {
                    *cell -= share * from;
                }
            }
        }
    }
    let variance = a[place][3];
    (variance > 0.0 && variance.is_finite()).then_some(variance)
}

#[cfg(test)]
mod tests {
    use super::*;

    fn rows(loads: &[f64]) -> Vec<[f64; 3]> {
        loads.iter().map(|load| [1.0, *load, load * load]).collect()
    }

    #[test]
    fn exact_terms_are_found_and_negative_ones_are_not() {
        let loads = [0.1, 0.5, 1.0, 2.0, 4.0, 8.0];
        let sigmas = [0.001; 6];
        let values = loads.map(|load| 0.03 + 0.003 * load * load);
        let found = fit(&rows(&loads), &values, &sigmas).expect("well spread");
        assert!((found.terms[0].value - 0.03).abs() < 1e-12 && (found.terms[2].value - 0.003).abs() < 1e-13);
        assert_eq!(found.terms[1].value, 0.0);
        assert!(found.terms[1].sigma > 0.0);
        let overbooked = loads.map(|load| -0.02 * load);
        let found = fit(&rows(&loads), &overbooked, &sigmas).expect("well spread");
        assert!(found.terms.iter().all(|term| term.value == 0.0) && found.widened > 1.0);
    }

    #[test]
    fn uncertainty_of_a_mean() {
        // a constant through n equal readings: sigma/√n, any textbook
        let loads = [1.0, 2.0, 3.0, 4.0, 5.0, 6.0, 7.0, 8.0, 9.0];
        let values = [0.5; 9];
        let found = fit(&rows(&loads), &values, &[0.3; 9]).expect("well spread");
        assert!((found.terms[0].sigma - 0.1).abs() < 1e-12);
    }

    #[test]
    fn one_load_says_nothing_about_a_curve() {
        assert_eq!(fit(&rows(&[2.0; 6]), &[0.1; 6], &[0.01; 6]), None);
        assert_eq!(fit(&rows(&[1.0, 2.0, 3.0]), &[0.1; 3], &[0.01; 3]), None);
    }
}
