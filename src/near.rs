//! Powers, logarithms and exponentials read off known places.
//!
//! The model asks for them some ten times a pass of the heat loop. Each splits its argument into a place of a table and
//! a small rest for which a short series is right to a part in 1e15; arguments beyond the tables go to the library function.

use std::f64::consts::LN_2;

/// Places between 1 and 2.
const PLACES: usize = 64;
/// Bits of the fraction that number the place.
const PLACE_BITS: u32 = PLACES.trailing_zeros();
/// Bits of the fraction of an f64.
const FRACTION_BITS: u32 = 52;
/// Bits of a number that hold its fraction.
const FRACTION: u64 = (1 << FRACTION_BITS) - 1;
/// Bits of 1.0.
const ONE: u64 = 1.0_f64.to_bits();

/// The middle of a place.
const fn middle(place: usize) -> f64 {
    1.0 + (place as f64 + 0.5) / PLACES as f64
}

/// 1/m of every place's middle m.
const INVERSE: [f64; PLACES] = {
    let mut table = [0.0; PLACES];
    let mut place = 0;
    while place < PLACES {
        table[place] = 1.0 / middle(place);
        place += 1;
    }
    table
};

/// ln m of every place's middle m: 2 artanh((m - 1)/(m + 1)) by its series.
const LOGARITHM: [f64; PLACES] = {
    let mut table = [0.0; PLACES];
    let mut place = 0;
    while place < PLACES {
        let x = (middle(place) - 1.0) / (middle(place) + 1.0);
        let (mut sum, mut k) = (0.0, 39);
        while k > 0 {
            sum = sum * x * x + 1.0 / k as f64;
            k -= 2;
        }
        table[place] = 2.0 * x * sum;
        place += 1;
    }
    table
};

/// 2^(k/[`PLACES`]) by the exponential series.
const ROOTS: [f64; PLACES] = {
    let mut table = [0.0; PLACES];
    let mut place = 0;
    while place < PLACES {
        let x = place as f64 * (LN_2 / PLACES as f64);
        let (mut sum, mut k) = (1.0, 20);
        while k > 0 {
            sum = 1.0 + sum * x / k as f64;
            k -= 1;
        }
        table[place] = sum;
        place += 1;
    }
    table
};

/// A positive number as 2^octave m (1 + rest) with the middle m of a place.
struct Split {
    /// The octave counted from that of the smallest numbers; beyond 2046 for numbers that are not positive and finite.
    octave: u64,
    place: usize,
    rest: f64,
}

/// Octave of 1.
const UNIT_OCTAVE: u64 = ONE >> FRACTION_BITS;

impl Split {
    #[inline(always)]
    fn of(x: f64) -> Self {
        let bits = x.to_bits();
        let place = (bits >> (FRACTION_BITS - PLACE_BITS)) as usize % PLACES;
        let fraction = f64::from_bits(bits & FRACTION | ONE);
        Split { octave: bits >> FRACTION_BITS, place, rest: fraction * INVERSE[place] - 1.0 }
    }
}

/// ln x to a few parts in 1e16 of 1.
#[inline(always)]
pub fn ln(x: f64) -> f64 {
    let Split { octave, place, rest: d } = Split::of(x);
    // zero, tiny, negative, infinite and no numbers
    if octave.wrapping_sub(1) >= 2046 {
        return x.ln();
    }
    let octaves = (octave as i64 - UNIT_OCTAVE as i64) as f64;
    let tail = d * (-0.25 + d * (0.2 + d * (-1.0 / 6.0 + d * (1.0 / 7.0))));
    octaves * LN_2 + (LOGARITHM[place] + d * (1.0 + d * (-0.5 + d * (1.0 / 3.0 + tail))))
}

/// Largest size of an argument of [`exp`] that the table serves.
const EXPONENTIAL_RANGE: f64 = 700.0;
/// Adding it to a number below 2^51 leaves the nearest whole number in the last bits.
const WHOLE: f64 = 6_755_399_441_055_744.0;
/// First bits of ln 2/[`PLACES`]: products with whole numbers below 2^20 are exact.
const STEP_HIGH: f64 = f64::from_bits((LN_2 / PLACES as f64).to_bits() & !((1 << 21) - 1));
/// What they leave of it; ln 2 less its f64 is 2.319e-17.
const STEP_LOW: f64 = LN_2 / PLACES as f64 - STEP_HIGH + 2.319_046_813_846_3e-17 / PLACES as f64;

/// e^x to a few parts in 1e16.
#[inline(always)]
pub fn exp(x: f64) -> f64 {
    if x.abs() >= EXPONENTIAL_RANGE || x.is_nan() {
        return x.exp();
    }
    let shifted = x * (PLACES as f64 / LN_2) + WHOLE;
    let (steps, count) = (shifted - WHOLE, shifted.to_bits());
    let d = x - steps * STEP_HIGH - steps * STEP_LOW;
    let series = d * (1.0 + d * (0.5 + d * (1.0 / 6.0 + d * (1.0 / 24.0 + d * (1.0 / 120.0)))));
    let root = ROOTS[count as usize % PLACES];
    // whole octaves go to the exponent
    let octaves = (count >> PLACE_BITS) << FRACTION_BITS;
    f64::from_bits((root + root * series).to_bits().wrapping_add(octaves))
}

/// Octaves below 1 for which a power has a table; as many above.
const OCTAVES_BELOW: usize = 32;
/// Octaves for which a power has a table.
const OCTAVES: usize = 2 * OCTAVES_BELOW;
/// Terms of the binomial series.
const TERMS: usize = 6;

/// A power with a fixed exponent p.
#[derive(Clone, Debug, PartialEq)]
pub struct Power {
    /// p
    pub exponent: f64,
    /// The power of every octave.
    octaves: [f64; OCTAVES],
    /// The power of every place's middle.
    places: [f64; PLACES],
    /// Coefficients of (1 + d)^p - 1.
    binomial: [f64; TERMS],
}

impl Power {
    /// x^p
    pub fn of(exponent: f64) -> Self {
        let mut coefficient = 1.0;
        Power {
            exponent,
            octaves: std::array::from_fn(|octave| {
                (octave as f64 - OCTAVES_BELOW as f64).exp2().powf(exponent)
            }),
            places: std::array::from_fn(|place| middle(place).powf(exponent)),
            binomial: std::array::from_fn(|k| {
                coefficient *= (exponent - k as f64) / (k + 1) as f64;
                coefficient
            }),
        }
    }

    /// x^p for x > 0, to a few parts in 1e15.
    #[inline(always)]
    pub fn at(&self, x: f64) -> f64 {
        let Split { octave, place, rest: d } = Split::of(x);
        let from_first = octave.wrapping_sub(UNIT_OCTAVE - OCTAVES_BELOW as u64);
        let Some(scale) = self.octaves.get(from_first as usize) else {
            return x.powf(self.exponent);
        };
        let value = scale * self.places[place];
        let [c1, c2, c3, c4, c5, c6] = self.binomial;
        value + value * (d * (c1 + d * (c2 + d * (c3 + d * (c4 + d * (c5 + d * c6))))))
    }
}

/// x, but not below a floor: one instruction, where `max` minds floors that are no number.
#[inline(always)]
pub fn at_least(floor: f64, x: f64) -> f64 {
    if x > floor { x } else { floor }
}

#[cfg(test)]
mod tests {
    use super::*;

    /// Numbers from 1e-9 to 1e9, several a place.
    fn numbers() -> impl Iterator<Item = f64> {
        (-6000..6000).map(|k| 10.0_f64.powf(f64::from(k) * 1.5e-3))
    }

    // the standard library's functions are the outside values; the bounds are a few units of the last place

    #[test]
    fn logarithms_equal_the_library_function() {
        for x in numbers() {
            assert!((ln(x) - x.ln()).abs() < 1e-15 * x.ln().abs().max(1.0), "{x}");
        }
        assert_eq!(ln(0.0), f64::NEG_INFINITY);
        assert!(ln(-1.0).is_nan() && ln(f64::NAN).is_nan());
        assert_eq!(ln(f64::INFINITY), f64::INFINITY);
    }

    #[test]
    fn exponentials_equal_the_library_function() {
        for k in -8000..8000 {
            let x = f64::from(k) * 0.09;
            let std = x.exp();
            assert!(exp(x) == std || (exp(x) / std - 1.0).abs() < 1e-15, "{x}");
        }
        assert!(exp(f64::NAN).is_nan());
        assert_eq!(exp(f64::INFINITY), f64::INFINITY);
    }

    #[test]
    fn powers_equal_the_library_function() {
        for p in [-0.9, -0.45, 0.3, 0.5, 1.3, 1.7, 2.6] {
            let power = Power::of(p);
            for x in numbers() {
                assert!((power.at(x) / x.powf(p) - 1.0).abs() < 3e-15, "{x} {p}");
            }
            assert!((power.at(1e-15) / 1e-15_f64.powf(p) - 1.0).abs() < 3e-15);
            assert!(power.at(f64::NAN).is_nan());
        }
    }
}
