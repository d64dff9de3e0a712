//! Charge and energy of a junction's capacitance (E14).

use crate::sheet::Datum;

/// A charge that grows with the square root of the voltage: C ~ v^-1/2.
#[derive(Clone, Copy, Debug, Default, PartialEq)]
pub struct JunctionCharge {
    /// Q(v)/√v, C/√V.
    coefficient: f64,
}

impl JunctionCharge {
    /// From a charge at a voltage.
    pub fn from_charge(charge: f64, voltage: f64) -> Self {
        JunctionCharge { coefficient: charge / voltage.sqrt() }
    }

    /// From a capacitance at a voltage: Q = 2 C v.
    pub fn from_capacitance(capacitance: f64, voltage: f64) -> Self {
        Self::from_charge(2.0 * capacitance * voltage, voltage)
    }

    /// From a data sheet's charge, else its capacitance, each stated at the condition of that key.
    pub fn from_sheet(charge: Option<&Datum>, capacitance: Option<&Datum>, condition: &str) -> Option<Self> {
        let from_charge = charge.and_then(|q| Some(Self::from_charge(q.value, q.condition(condition)?)));
        from_charge.or_else(|| {
            capacitance.and_then(|c| Some(Self::from_capacitance(c.value, c.condition(condition)?)))
        })
    }

    /// The charge of n junctions in parallel.
    #[must_use]
    pub fn times(self, n: f64) -> Self {
        JunctionCharge { coefficient: self.coefficient * n }
    }

    /// Both charges together.
    #[must_use]
    pub fn plus(self, other: JunctionCharge) -> Self {
        JunctionCharge { coefficient: self.coefficient + other.coefficient }
    }

    /// Q(v) = Q_ref √(v/v_ref), C.
    #[inline]
    pub fn charge(self, v: f64) -> f64 {
        self.coefficient * v.sqrt()
    }

    /// E(v) = Q(v) v / 3, J: the integral of v dQ.
    #[inline]
    pub fn energy(self, v: f64) -> f64 {
        self.charge(v) * v * (1.0 / 3.0)
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn energy_is_the_integral_of_v_dq() {
        // trapezoidal sum of v dQ, an outside check by the definition of energy
        let junction = JunctionCharge::from_capacitance(400e-12, 20.0);
        assert!((junction.charge(20.0) - 16e-9).abs() < 1e-20);
        let steps = 20_000;
        let voltage = |k: i32| 24.0 * f64::from(k) / f64::from(steps);
        let sum: f64 = (0..steps)
            .map(|k| {
                let (a, b) = (voltage(k), voltage(k + 1));
                0.5 * (a + b) * (junction.charge(b) - junction.charge(a))
            })
            .sum();
        assert!((sum / junction.energy(24.0) - 1.0).abs() < 1e-6);
    }
}
