//! Least squares with few unknowns, for the curves through data-sheet points.

/// Least-squares solution of `rows · x = values`, or `None` when the rows do not determine it.
///
/// Householder reflections on the columns; a column whose remainder falls below 1e-9 of its length counts as
/// dependent on those before it. Values are of order one to a hundred here (logarithms), so no scaling is needed.
pub fn least_squares<const N: usize>(rows: &[[f64; N]], values: &[f64]) -> Option<[f64; N]> {
    if rows.len() < N || rows.len() != values.len() {
        return None;
    }
    let mut a: Vec<[f64; N]> = rows.to_vec();
    let mut b: Vec<f64> = values.to_vec();
    let mut diagonal = [0.0; N];
    for column in 0..N {
        let whole = a.iter().map(|row| row[column].powi(2)).sum::<f64>().sqrt();
        let rest = a[column..].iter().map(|row| row[column].powi(2)).sum::<f64>().sqrt();
        if rest <= 1e-9 * whole || !rest.is_finite() {
            return None;
        }
        // reflect the column onto its own axis
        let pivot = if a[column][column] > 0.0 { -rest } else { rest };
        let mut mirror: Vec<f64> = a[column..].iter().map(|row| row[column]).collect();
        mirror[0] -= pivot;
        let length = mirror.iter().map(|v| v * v).sum::<f64>();
        for other in column..N {
            let share =
                2.0 * mirror.iter().zip(&a[column..]).map(|(v, row)| v * row[other]).sum::<f64>() / length;
            for (v, row) in mirror.iter().zip(&mut a[column..]) {
                row[other] -= share * v;
            }
        }
        let share = 2.0 * mirror.iter().zip(&b[column..]).map(|(v, value)| v * value).sum::<f64>() / length;
        for (v, value) in mirror.iter().zip(&mut b[column..]) {
            *value -= share * v;
        }
        diagonal[column] = pivot;
    }
    // back substitution
    let mut x = [0.0; N];
    for column in (0..N).rev() {
        let known: f64 = (column + 1..N).map(|other| a[column][other] * x[other]).sum();
        x[column] = (b[column] - known) / diagonal[column];
    }
    x.iter().all(|value| value.is_finite()).then_some(x)
}

/// Coefficients of z = c0 + c1 x + c2 y through points (x, y, z), or `None` when they lie on one line in (x, y).
pub fn plane(points: &[[f64; 3]]) -> Option<[f64; 3]> {
    let rows: Vec<[f64; 3]> = points.iter().map(|[x, y, _]| [1.0, *x, *y]).collect();
    least_squares(&rows, &points.iter().map(|p| p[2]).collect::<Vec<_>>())
}

/// Coefficients of z = c0 + c1 x + c2 y + c3 x² + c4 x y + c5 y² through points (x, y, z), or `None` when they do
/// not determine it.
pub fn quadric(points: &[[f64; 3]]) -> Option<[f64; 6]> {
    let rows: Vec<[f64; 6]> = points.iter().map(|[x, y, _]| [1.0, *x, *y, x * x, x * y, y * y]).collect();
    least_squares(&rows, &points.iter().map(|p| p[2]).collect::<Vec<_>>())
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn exact_planes_and_quadrics_are_found() {
        let points: Vec<[f64; 3]> = (0..4)
            .flat_map(|i| (0..4).map(move |j| (11.0 + f64::from(i), -4.0 + 0.7 * f64::from(j))))
            .map(|(x, y)| [x, y, 2.0 + 1.4 * x + 2.5 * y])
            .collect();
        let [c0, c1, c2] = plane(&points).expect("well spread");
        assert!((c0 - 2.0).abs() < 1e-10 && (c1 - 1.4).abs() < 1e-11 && (c2 - 2.5).abs() < 1e-11);
        let curved: Vec<[f64; 3]> =
            points.iter().map(|[x, y, _]| [*x, *y, 1.0 + 0.3 * x * y - 0.2 * y * y]).collect();
        let c = quadric(&curved).expect("well spread");
        assert!((c[4] - 0.3).abs() < 1e-8 && (c[5] + 0.2).abs() < 1e-8 && c[3].abs() < 1e-8);
    }

    #[test]
    fn points_on_a_line_are_refused() {
        let line: Vec<[f64; 3]> = (0..5).map(f64::from).map(|t| [12.0 + t, 3.0 - 2.0 * t, t]).collect();
        assert_eq!(plane(&line), None);
        assert_eq!(plane(&line[..2]), None);
        let two_frequencies: Vec<[f64; 3]> =
            (0..8).map(|i| [f64::from(i % 2), f64::from(i / 2), 1.0]).collect();
        assert_eq!(quadric(&two_frequencies), None);
    }
}
