//! Hot to cold ratio of a channel's resistance (E11), read off known places without a library power.

/// 25 °C in K, the reference of on-resistances.
pub const COLD_KELVIN: f64 = 298.15;
/// 0 °C in K.
const ZERO_KELVIN: f64 = 273.15;

/// First place, °C.
const FIRST: f64 = -64.0;
/// Distance of neighbouring places, K.
const STEP: f64 = 16.0;
/// Number of places: up to 560 °C.
const PLACES: usize = 40;
/// Terms of the binomial series; half a step away from a place it is right to a part in 1e15.
const TERMS: usize = 8;

/// R(T)/R(25 °C) = ((T + 273.15)/298.15)^p (E11).
#[derive(Clone, Debug, PartialEq)]
pub struct HotLaw {
    /// p
    exponent: f64,
    /// The ratio at every place.
    ratios: [f64; PLACES],
    /// Coefficients of (1 + d)^p - 1.
    binomial: [f64; TERMS],
}

impl HotLaw {
    /// The law with an exponent.
    pub fn of(exponent: f64) -> Self {
        let mut coefficient = 1.0;
        HotLaw {
            exponent,
            ratios: std::array::from_fn(|place| ((kelvin_at(place)) / COLD_KELVIN).powf(exponent)),
            binomial: std::array::from_fn(|k| {
                coefficient *= (exponent - k as f64) / (k + 1) as f64;
                coefficient
            }),
        }
    }

    /// The ratio at a temperature in °C: a binomial series about the nearest place.
    #[inline(always)]
    pub fn at(&self, t_j: f64) -> f64 {
        let place = (t_j - (FIRST - 0.5 * STEP)) * (1.0 / STEP);
        // places below the first and numbers that are none are sorted out here
        let index = place as i32 as usize;
        let (true, Some(ratio), Some(per_kelvin)) =
            (place >= 0.0, self.ratios.get(index), PER_KELVIN.get(index))
        else {
            return ((t_j + ZERO_KELVIN) / COLD_KELVIN).powf(self.exponent);
        };
        let d = (t_j + ZERO_KELVIN) * per_kelvin - 1.0;
        let [c1, c2, c3, c4, c5, c6, c7, c8] = self.binomial;
        let tail = d * (c5 + d * (c6 + d * (c7 + d * c8)));
        ratio + ratio * (d * (c1 + d * (c2 + d * (c3 + d * (c4 + tail)))))
    }
}

const fn kelvin_at(place: usize) -> f64 {
    FIRST + STEP * place as f64 + ZERO_KELVIN
}

/// 1/T of every place, 1/K.
const PER_KELVIN: [f64; PLACES] = {
    let mut inverse = [0.0; PLACES];
    let mut place = 0;
    while place < PLACES {
        inverse[place] = 1.0 / kelvin_at(place);
        place += 1;
    }
    inverse
};

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn equals_the_library_power() {
        // the standard library's power is the outside value; the bound is some units of the last place
        for p in [0.3, 1.2, 1.7, 2.6] {
            let law = HotLaw::of(p);
            for tenth in -900..9000 {
                let t_j = 0.1 * f64::from(tenth);
                let power = ((t_j + ZERO_KELVIN) / COLD_KELVIN).powf(p);
                assert!((law.at(t_j) / power - 1.0).abs() < 5e-15, "{p} {t_j}");
            }
            assert!(law.at(f64::NAN).is_nan());
        }
    }
}
