//! Powers, logarithms and exponentials close to a place where they are already known.
//!
//! The passes of the heat loop ask for the same functions at places that differ by parts in a thousand. Within 1/256 of
//! the last place a Taylor series of six terms gives the function to a part in 1e16; elsewhere the library function is
//! called and its place remembered. Results depend only on the order of the calls for one point.

/// Largest relative distance at which the series serves.
const CLOSE: f64 = 1.0 / 256.0;

/// Terms of the binomial series.
const TERMS: usize = 6;

/// A power with a fixed exponent p and the coefficients of (1 + d)^p - 1.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Power {
    /// p
    pub exponent: f64,
    binomial: [f64; TERMS],
}

impl Power {
    /// x^p
    pub fn of(exponent: f64) -> Self {
        let mut coefficient = 1.0;
        let binomial = std::array::from_fn(|k| {
            coefficient *= (exponent - k as f64) / (k + 1) as f64;
            coefficient
        });
        Power { exponent, binomial }
    }
}

/// x^p for one exponent p.
#[derive(Clone, Copy, Debug, Default)]
pub struct NearPower {
    inverse: f64,
    value: f64,
}

impl NearPower {
    /// x^p for x > 0. Every call on one value must name the same power.
    #[inline(always)]
    pub fn at(&mut self, x: f64, power: &Power) -> f64 {
        let d = x * self.inverse - 1.0;
        if d.abs() < CLOSE {
            let [c1, c2, c3, c4, c5, c6] = power.binomial;
            let series = d * (c1 + d * (c2 + d * (c3 + d * (c4 + d * (c5 + d * c6)))));
            return self.value + self.value * series;
        }
        self.anchor(x, power.exponent)
    }

    #[inline(never)]
    fn anchor(&mut self, x: f64, p: f64) -> f64 {
        *self = NearPower { inverse: 1.0 / x, value: (p * x.ln()).exp() };
        self.value
    }
}

/// ln x.
#[derive(Clone, Copy, Debug, Default)]
pub struct NearLogarithm {
    inverse: f64,
    value: f64,
}

impl NearLogarithm {
    /// ln x for x > 0.
    #[inline(always)]
    pub fn at(&mut self, x: f64) -> f64 {
        let d = x * self.inverse - 1.0;
        if d.abs() < CLOSE {
            let tail = 0.25 - d * (0.2 - d * (1.0 / 6.0));
            return self.value + d * (1.0 - d * (0.5 - d * (1.0 / 3.0 - d * tail)));
        }
        *self = NearLogarithm { inverse: 1.0 / x, value: x.ln() };
        self.value
    }
}

/// e^x.
#[derive(Clone, Copy, Debug)]
pub struct NearExponential {
    place: f64,
    value: f64,
}

impl Default for NearExponential {
    fn default() -> Self {
        NearExponential { place: 0.0, value: 1.0 }
    }
}

impl NearExponential {
    /// e^x.
    #[inline(always)]
    pub fn at(&mut self, x: f64) -> f64 {
        let d = x - self.place;
        if d.abs() < CLOSE {
            let tail = 1.0 + d * 0.25 * (1.0 + d * 0.2 * (1.0 + d * (1.0 / 6.0)));
            return self.value + self.value * (d * (1.0 + d * 0.5 * (1.0 + d * (1.0 / 3.0) * tail)));
        }
        *self = NearExponential { place: x, value: x.exp() };
        self.value
    }
}

/// What one point remembers from pass to pass.
#[derive(Clone, Copy, Debug, Default)]
pub struct Memory {
    /// Logarithm of the current rise.
    pub current_rise: NearLogarithm,
    /// Logarithm of the current fall.
    pub current_fall: NearLogarithm,
    /// Powers of the core loss.
    pub core: CoreMemory,
    /// Leakage of the diode.
    pub leakage: LeakageMemory,
}

/// Powers of the core loss.
#[derive(Clone, Copy, Debug, Default)]
pub struct CoreMemory {
    /// Swing^β.
    pub swing: NearPower,
    /// D1^(1-α).
    pub rise: NearPower,
    /// D2^(1-α).
    pub fall: NearPower,
    /// f_e^α.
    pub frequency: NearPower,
}

/// Leakage at the input and at the output voltage.
#[derive(Clone, Copy, Debug, Default)]
pub struct LeakageMemory {
    /// At the input voltage.
    pub input: NearExponential,
    /// At the output voltage.
    pub output: NearExponential,
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn the_series_equal_the_library_functions() {
        // the standard library's functions are the outside values; the bound is a few units of the last place
        let close = |ours: f64, std: f64| assert!((ours / std - 1.0).abs() < 2e-15, "{ours} {std}");
        for x0 in [0.02, 0.9, 1.3, 37.0] {
            for step in -60..=60 {
                let x = x0 * (1.0 + f64::from(step) / 61.0 / 256.0);
                for p in [-0.45, 0.5, 1.3, 2.3] {
                    let mut near = NearPower::default();
                    let power = Power::of(p);
                    close(near.at(x0, &power), x0.powf(p));
                    close(near.at(x, &power), x.powf(p));
                }
                let mut near = NearLogarithm::default();
                near.at(x0);
                assert!((near.at(x) - x.ln()).abs() < 2e-15 * x.ln().abs().max(1.0));
                let mut near = NearExponential::default();
                near.at(x0);
                close(
                    near.at(x0 + f64::from(step) / 61.0 / 256.0),
                    (x0 + f64::from(step) / 61.0 / 256.0).exp(),
                );
            }
        }
    }
}
