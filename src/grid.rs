//! Operating points and the grid over them; the order of iteration is the order of every output.

/// Where a rail runs. Linear stages ignore the frequency.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct OperatingPoint {
    /// V_IN, V.
    pub input_voltage: f64,
    /// I_OUT, A.
    pub load: f64,
    /// T_A, °C.
    pub ambient: f64,
    /// f_SW, Hz; 0 where a stage has none.
    pub switching_frequency: f64,
}

/// The four axes of a grid.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash, PartialOrd, Ord)]
pub enum AxisName {
    /// V_IN
    InputVoltage,
    /// I_OUT
    Load,
    /// T_A
    Ambient,
    /// f_SW
    SwitchingFrequency,
}

/// The axes in the order of the documentation.
pub const ALL_AXES: [AxisName; 4] =
    [AxisName::InputVoltage, AxisName::Load, AxisName::Ambient, AxisName::SwitchingFrequency];

impl AxisName {
    /// Name in files and outputs.
    pub const fn name(self) -> &'static str {
        match self {
            AxisName::InputVoltage => "input_voltage",
            AxisName::Load => "load",
            AxisName::Ambient => "ambient",
            AxisName::SwitchingFrequency => "switching_frequency",
        }
    }

    /// The axis of a name.
    pub fn from_name(name: &str) -> Option<AxisName> {
        ALL_AXES.into_iter().find(|axis| axis.name() == name)
    }
}

impl OperatingPoint {
    /// Coordinate on an axis.
    pub fn get(&self, axis: AxisName) -> f64 {
        match axis {
            AxisName::InputVoltage => self.input_voltage,
            AxisName::Load => self.load,
            AxisName::Ambient => self.ambient,
            AxisName::SwitchingFrequency => self.switching_frequency,
        }
    }

    /// The same point with another coordinate on one axis.
    #[must_use]
    pub fn with(mut self, axis: AxisName, value: f64) -> Self {
        match axis {
            AxisName::InputVoltage => self.input_voltage = value,
            AxisName::Load => self.load = value,
            AxisName::Ambient => self.ambient = value,
            AxisName::SwitchingFrequency => self.switching_frequency = value,
        }
        self
    }
}

/// A point of which some coordinates are left open.
#[derive(Clone, Copy, Debug, Default, PartialEq)]
pub struct PartialPoint {
    /// V_IN, V.
    pub input_voltage: Option<f64>,
    /// I_OUT, A.
    pub load: Option<f64>,
    /// T_A, °C.
    pub ambient: Option<f64>,
    /// f_SW, Hz.
    pub switching_frequency: Option<f64>,
}

impl PartialPoint {
    /// Coordinate on an axis, if it is fixed.
    pub fn get(&self, axis: AxisName) -> Option<f64> {
        match axis {
            AxisName::InputVoltage => self.input_voltage,
            AxisName::Load => self.load,
            AxisName::Ambient => self.ambient,
            AxisName::SwitchingFrequency => self.switching_frequency,
        }
    }

    /// Fixes a coordinate.
    pub fn set(&mut self, axis: AxisName, value: f64) {
        match axis {
            AxisName::InputVoltage => self.input_voltage = Some(value),
            AxisName::Load => self.load = Some(value),
            AxisName::Ambient => self.ambient = Some(value),
            AxisName::SwitchingFrequency => self.switching_frequency = Some(value),
        }
    }

    /// Fills the open coordinates from another point.
    #[must_use]
    pub fn or(&self, other: OperatingPoint) -> OperatingPoint {
        ALL_AXES.iter().fold(other, |point, axis| match self.get(*axis) {
            Some(value) => point.with(*axis, value),
            None => point,
        })
    }
}

/// Values of one axis; a range is computed when asked, so its length costs no memory.
#[derive(Clone, Debug, PartialEq)]
pub enum Axis {
    /// Stated values.
    List(Vec<f64>),
    /// Evenly spaced values from one end to the other.
    Range {
        /// First value.
        from: f64,
        /// Last value.
        to: f64,
        /// Number of values, 1 or more.
        points: u64,
        /// True for even ratios instead of even differences.
        log: bool,
    },
}

impl Axis {
    /// Number of values.
    pub fn len(&self) -> u64 {
        match self {
            Axis::List(values) => values.len() as u64,
            Axis::Range { points, .. } => *points,
        }
    }

    /// True without values.
    pub fn is_empty(&self) -> bool {
        self.len() == 0
    }

    /// The value at a place; both ends of a range are exact. Places beyond the end give the last value.
    pub fn at(&self, index: u64) -> f64 {
        match self {
            Axis::List(values) => values.get(index as usize).or(values.last()).copied().unwrap_or(0.0),
            Axis::Range { from, .. } if index == 0 => *from,
            Axis::Range { to, points, .. } if index + 1 >= *points => *to,
            Axis::Range { from, to, points, log } => {
                let share = index as f64 / (*points - 1) as f64;
                if *log { from * (to / from).powf(share) } else { from + (to - from) * share }
            }
        }
    }

    /// All values.
    pub fn values(&self) -> impl Iterator<Item = f64> + '_ {
        (0..self.len()).map(|index| self.at(index))
    }
}

/// The axes of a grid in the order they are written; the last one runs fastest.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct Grid {
    /// Axes as written.
    pub axes: Vec<(AxisName, Axis)>,
}

impl Grid {
    /// An axis by name.
    pub fn axis(&self, name: AxisName) -> Option<&Axis> {
        self.axes.iter().find(|(axis, _)| *axis == name).map(|(_, values)| values)
    }

    /// The same grid with one axis replaced, or added last.
    #[must_use]
    pub fn with(&self, name: AxisName, values: Axis) -> Grid {
        let mut grid = self.clone();
        match grid.axes.iter_mut().find(|(axis, _)| *axis == name) {
            Some(place) => place.1 = values,
            None => grid.axes.push((name, values)),
        }
        grid
    }

    /// The same grid without an axis.
    #[must_use]
    pub fn without(&self, name: AxisName) -> Grid {
        Grid { axes: self.axes.iter().filter(|(axis, _)| *axis != name).cloned().collect() }
    }

    /// Number of points.
    pub fn len(&self) -> u64 {
        self.axes.iter().map(|(_, values)| values.len()).fold(1, u64::saturating_mul)
    }

    /// True without points.
    pub fn is_empty(&self) -> bool {
        self.len() == 0
    }

    /// The point at a place; axes that the grid lacks stay at zero.
    pub fn point(&self, index: u64) -> OperatingPoint {
        let start = OperatingPoint { input_voltage: 0.0, load: 0.0, ambient: 0.0, switching_frequency: 0.0 };
        let (mut point, mut rest) = (start, index);
        for (name, values) in self.axes.iter().rev() {
            let length = values.len().max(1);
            point = point.with(*name, values.at(rest % length));
            rest /= length;
        }
        point
    }

    /// All points in order.
    pub fn points(&self) -> impl Iterator<Item = OperatingPoint> + '_ {
        (0..self.len()).map(|index| self.point(index))
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn last_axis_runs_fastest() {
        let grid = Grid {
            axes: vec![
                (AxisName::Load, Axis::List(vec![1.0, 2.0])),
                (AxisName::InputVoltage, Axis::Range { from: 10.0, to: 20.0, points: 3, log: false }),
            ],
        };
        let seen: Vec<_> = grid.points().map(|point| (point.load, point.input_voltage)).collect();
        assert_eq!(seen, [(1.0, 10.0), (1.0, 15.0), (1.0, 20.0), (2.0, 10.0), (2.0, 15.0), (2.0, 20.0)]);
    }

    #[test]
    fn ranges_hit_both_ends() {
        let axis = Axis::Range { from: 0.05, to: 10.0, points: 24, log: true };
        let values: Vec<f64> = axis.values().collect();
        assert_eq!((values[0], values[23]), (0.05, 10.0));
        assert!(values.windows(2).all(|pair| pair[1] > pair[0]));
    }
}
