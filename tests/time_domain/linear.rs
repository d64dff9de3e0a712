//! Exact solution of linear circuits: matrix exponentials of three by three.
//!
//! State z = (inductor current, capacitor voltage, 1); in each interval z' = M z with a constant M, so that
//! z(t) = exp(M t) z(0) without any error of integration.

pub(crate) type Matrix = [[f64; 3]; 3];
pub(crate) type State = [f64; 3];

pub(crate) fn product(a: &Matrix, b: &Matrix) -> Matrix {
    std::array::from_fn(|i| std::array::from_fn(|j| (0..3).map(|k| a[i][k] * b[k][j]).sum()))
}

pub(crate) fn apply(a: &Matrix, z: &State) -> State {
    std::array::from_fn(|i| (0..3).map(|k| a[i][k] * z[k]).sum())
}

/// exp(M t): Taylor series of M t / 2^k, squared k times.
pub(crate) fn exponential(m: &Matrix, t: f64) -> Matrix {
    let norm = m.iter().flatten().fold(0.0, |norm: f64, x| norm.max((x * t).abs()));
    let halvings = (norm.max(1e-3).log2().ceil() as i32 + 6).max(0);
    let scale = t / f64::from(halvings).exp2();
    let small = m.map(|row| row.map(|x| x * scale));
    let unit: Matrix = std::array::from_fn(|i| std::array::from_fn(|j| if i == j { 1.0 } else { 0.0 }));
    let (mut sum, mut term) = (unit, unit);
    for k in 1..14 {
        term = product(&term, &small).map(|row| row.map(|x| x / f64::from(k)));
        sum = std::array::from_fn(|i| std::array::from_fn(|j| sum[i][j] + term[i][j]));
    }
    for _ in 0..halvings {
        sum = product(&sum, &sum);
    }
    sum
}

/// Solution of a x = b for three unknowns, by elimination with the largest pivot.
pub(crate) fn solve(mut a: Matrix, mut b: State) -> State {
    for column in 0..3 {
        let pivot = (column..3).max_by(|p, q| a[*p][column].abs().total_cmp(&a[*q][column].abs()));
        let pivot = pivot.unwrap_or(column);
        a.swap(column, pivot);
        b.swap(column, pivot);
        for row in column + 1..3 {
            let share = a[row][column] / a[column][column];
            let above = a[column];
            a[row] = std::array::from_fn(|place| a[row][place] - share * above[place]);
            b[row] -= share * b[column];
        }
    }
    for row in (0..3).rev() {
        let known: f64 = (row + 1..3).map(|other| a[row][other] * b[other]).sum();
        b[row] = (b[row] - known) / a[row][row];
    }
    b
}

#[test]
fn exponentials_of_an_oscillator_are_sines() {
    // definition: x'' = -x
    let m = [[0.0, 1.0, 0.0], [-1.0, 0.0, 0.0], [0.0, 0.0, 0.0]];
    for t in [0.01, 1.0, 30.0] {
        let e = exponential(&m, t);
        assert!((e[0][0] - t.cos()).abs() < 1e-12 && (e[0][1] - t.sin()).abs() < 1e-12, "{t} {e:?}");
    }
}
