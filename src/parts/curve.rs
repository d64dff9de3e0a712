//! Straight lines between data-sheet points.

/// A curve through points: linear between them, the first value held below them, the last segment continued above.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct Curve {
    points: Vec<[f64; 2]>,
    slope_above: f64,
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
        let slope_above = match sorted.as_slice() {
            [.., a, b] => (b[1] - a[1]) / (b[0] - a[0]),
            _ => 0.0,
        };
        Curve { points: sorted, slope_above }
    }

    /// Value at x.
    #[inline]
    pub fn at(&self, x: f64) -> f64 {
        let (Some(first), Some(last)) = (self.points.first(), self.points.last()) else {
            return 0.0;
        };
        if x <= first[0] {
            return first[1];
        }
        if x >= last[0] {
            return last[1] + self.slope_above * (x - last[0]);
        }
        let mut low = first;
        for high in &self.points[1..] {
            if x < high[0] {
                return low[1] + (high[1] - low[1]) * (x - low[0]) / (high[0] - low[0]);
            }
            low = high;
        }
        last[1]
    }

    /// Value at x, clamped to the values at both ends.
    pub fn clamped_at(&self, x: f64) -> f64 {
        match self.points.last() {
            Some(last) => self.at(x.min(last[0])),
            None => 0.0,
        }
    }

    /// The points, sorted.
    pub fn points(&self) -> &[[f64; 2]] {
        &self.points
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
