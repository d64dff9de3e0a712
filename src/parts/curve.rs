//! Straight lines between data-sheet points.

/// A curve through points: linear between them, the first value held below them, the last segment continued above.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct Curve {
    lines: Vec<Line>,
}

/// A straight line that counts from one point of a curve to the next.
#[derive(Clone, Copy, Debug, PartialEq)]
struct Line {
    from: f64,
    value: f64,
    slope: f64,
}

/// Where an x falls among the points of a curve; serves every curve through points at the same x.
#[derive(Clone, Copy, Debug)]
pub struct Place {
    line: usize,
    beyond: f64,
}

impl Curve {
    /// A curve through points (x, y) in any order; of two points at one x the later counts.
    pub fn through(points: impl IntoIterator<Item = (f64, f64)>) -> Self {
        let mut sorted: Vec<[f64; 2]> = Vec::new();
        for (x, y) in points {
            match sorted.binary_search_by(|point| point[0].total_cmp(&x)) {
                Ok(place) => sorted[place] = [x, y],
                Err(place) => sorted.insert(place, [x, y]),
            }
        }
        let slope = |pair: &[[f64; 2]]| match pair {
            [a, b] => (b[1] - a[1]) / (b[0] - a[0]),
            _ => 0.0,
        };
        let last = slope(sorted.get(sorted.len().saturating_sub(2)..).unwrap_or_default());
        let slopes = sorted.windows(2).map(slope).chain([last]);
        let line = |(point, slope): (&[f64; 2], f64)| Line { from: point[0], value: point[1], slope };
        Curve { lines: sorted.iter().zip(slopes).map(line).collect() }
    }

    /// The place of x.
    #[inline(always)]
    pub fn place(&self, x: f64) -> Place {
        let mut place = Place { line: 0, beyond: 0.0 };
        for (index, line) in self.lines.iter().enumerate() {
            // the first value holds below the first point
            if x <= line.from {
                break;
            }
            place = Place { line: index, beyond: x - line.from };
        }
        place
    }

    /// Value at a place.
    #[inline(always)]
    pub fn on(&self, place: Place) -> f64 {
        self.lines.get(place.line).map_or(0.0, |line| line.value + line.slope * place.beyond)
    }

    /// Value at x.
    #[inline(always)]
    pub fn at(&self, x: f64) -> f64 {
        self.on(self.place(x))
    }

    /// Value at x, clamped to the values at both ends.
    #[inline]
    pub fn clamped_at(&self, x: f64) -> f64 {
        match self.lines.last() {
            Some(last) => self.at(x.min(last.from)),
            None => 0.0,
        }
    }

    /// Where the points stand, in order.
    pub fn xs(&self) -> impl Iterator<Item = f64> + '_ {
        self.lines.iter().map(|line| line.from)
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn holds_below_and_continues_above() {
        let curve = Curve::through([(5.0, 0.43), (1.0, 0.36), (10.0, 0.50)]);
        assert_eq!(curve.at(0.1), 0.36);
        assert!((curve.at(3.0) - 0.395).abs() < 1e-15);
        assert!((curve.at(15.0) - 0.57).abs() < 1e-15);
        assert_eq!(curve.clamped_at(15.0), 0.50);
        assert_eq!(Curve::through([(2.0, 0.7)]).at(9.0), 0.7);
    }
}
