//! Seeded random numbers: one stream a draw, so that a draw is the same on any number of threads.

use rand_chacha::ChaCha8Rng;
use rand_chacha::rand_core::{Rng, SeedableRng};

/// The random numbers of one draw.
#[derive(Clone, Debug)]
pub struct Stream(ChaCha8Rng);

impl Stream {
    /// Stream of a draw; streams of different draws do not overlap.
    pub fn new(seed: u64, draw: u64) -> Self {
        let mut generator = ChaCha8Rng::seed_from_u64(seed);
        generator.set_stream(draw);
        Stream(generator)
    }

    /// Uniform in (0, 1): the middle of one of 2^52 equal cells.
    pub fn uniform(&mut self) -> f64 {
        ((self.0.next_u64() >> 12) as f64 + 0.5) / (1_u64 << 52) as f64
    }

    /// Standard normal (Box and Muller, 1958). `libm` gives the same bits on every machine.
    pub fn normal(&mut self) -> f64 {
        let radius = (-2.0 * libm::log(self.uniform())).sqrt();
        radius * libm::cos(std::f64::consts::TAU * self.uniform())
    }
}

/// Share of a standard normal distribution below a value.
pub fn normal_share(z: f64) -> f64 {
    0.5 * libm::erfc(-z * std::f64::consts::FRAC_1_SQRT_2)
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn moments_and_streams() {
        let draws = 20_000_u64;
        let normals: Vec<f64> = (0..draws).map(|draw| Stream::new(1, draw).normal()).collect();
        let mean = normals.iter().sum::<f64>() / draws as f64;
        let variance = normals.iter().map(|z| (z - mean).powi(2)).sum::<f64>() / draws as f64;
        // standard errors of mean and variance of 20 000 draws are 0.007 and 0.01
        assert!(mean.abs() < 0.03 && (variance - 1.0).abs() < 0.04, "{mean} {variance}");
        assert_eq!(Stream::new(7, 3).uniform(), Stream::new(7, 3).uniform());
        assert_ne!(Stream::new(7, 3).uniform(), Stream::new(7, 4).uniform());
        assert_ne!(Stream::new(7, 3).uniform(), Stream::new(8, 3).uniform());
    }

    #[test]
    fn shares_of_the_normal_distribution() {
        // any table of the normal distribution: 97.5 % below 1.959964
        assert!((normal_share(1.959_963_984_540_054) - 0.975).abs() < 1e-12);
        assert_eq!(normal_share(0.0), 0.5);
    }
}
