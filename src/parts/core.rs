//! Core of an inductor: the law behind its loss, from Steinmetz data, maker's points or a material table.
//!
//! Which form applies when:
//! - Maker's loss points (E33): gapped, powder and moulded inductors, whose core size and material are not published.
//! - k, alpha, beta (E32, iGSE): a known core near the frequency and swing of the fit, with both slopes between about 0.2 and
//!   0.8 of the period. Measured on two ferrites it reads 15 % high at one half, 28 % low at a tenth, 20-22 % rms over
//!   all triangles: one exponent cannot follow a material whose exponent grows with frequency.
//! - Material table (E34): a known core with a data sheet's curves at three or more frequencies and amplitudes. Each slope
//!   is looked up at its own frequency. On the same measurements 13-16 % rms, steep slopes included. Beyond the data it
//!   continues with the exponents of the nearest point: supply points up to f/(2 D) of the steepest slope.
//!
//! None of them knows bias, temperature or tolerance of the material.

use std::f64::consts::{LN_2, PI};

use crate::fit;
use crate::near::Power;
use crate::sheet::inductor::{Core, InductorSheet};

/// Core loss of one inductor against volt-seconds, duties and frequency.
#[derive(Clone, Debug, PartialEq)]
pub enum CoreLaw {
    /// One exponent each for frequency and flux (E32, E33).
    Power(Box<PowerLaw>),
    /// Local exponents from a table of the material (E34).
    Material(MaterialLaw),
}

/// P = K (s λ)^β f^α (D1^(1-α) + D2^(1-α)) with λ the volt-seconds of the rising slope.
#[derive(Clone, Debug, PartialEq)]
pub struct PowerLaw {
    /// K
    pub k: f64,
    /// Exponent of frequency.
    pub alpha: f64,
    /// Exponent of the flux swing or of the ripple.
    pub beta: f64,
    /// s: flux swing in T (or ripple in A) per volt-second.
    pub per_volt_second: f64,
    /// f^α
    pub of_frequency: Power,
    /// (s λ)^β
    pub of_swing: Power,
    /// D^(1-α)
    pub of_duty: Power,
}

impl PowerLaw {
    /// From K, both exponents and the swing per volt-second.
    pub fn of(k: f64, alpha: f64, beta: f64, per_volt_second: f64) -> Self {
        let [of_frequency, of_swing, of_duty] = [alpha, beta, 1.0 - alpha].map(Power::of);
        PowerLaw { k, alpha, beta, per_volt_second, of_frequency, of_swing, of_duty }
    }
}

impl CoreLaw {
    /// The law of a data sheet, when it has core data.
    pub fn fit(sheet: &InductorSheet) -> Option<Self> {
        if let Some(core) = &sheet.core {
            return Self::of_core(core);
        }
        // maker's points (E33): ln P = a + α ln f + β ln dI at D = 1/2, with the ripple of the unsaturated inductance
        let [a, alpha, beta] = fit::plane(&sheet.core_loss_logs())?;
        let at_half = LN_2 * alpha; // ln of 2 (1/2)^(1-α)
        let per_volt_second = 1.0 / sheet.inductance.value;
        Some(CoreLaw::Power(Box::new(PowerLaw::of((a - at_half).exp(), alpha, beta, per_volt_second))))
    }

    fn of_core(core: &Core) -> Option<Self> {
        let (volume, per_volt_second) = (core.volume.value, 1.0 / (core.turns.value * core.area.value));
        if let (Some(k), Some(alpha), Some(beta)) = (&core.k, &core.alpha, &core.beta) {
            let (alpha, beta) = (alpha.value, beta.value);
            let k = volume * igse_coefficient(k.value, alpha, beta);
            return Some(CoreLaw::Power(Box::new(PowerLaw::of(k, alpha, beta, per_volt_second))));
        }
        MaterialLaw::fit(&core.material_logs(), volume, per_volt_second).map(CoreLaw::Material)
    }
}

/// k_i = k / (2^β π^(α-1/2) Γ((α+1)/2)/Γ(α/2+1)) of the iGSE for a triangle.
///
/// Venkatachalam et al., COMPEL 2002; closed form of its integral of |cos θ|^α over a period, 2 √π Γ((α+1)/2)/Γ(α/2+1).
pub fn igse_coefficient(k: f64, alpha: f64, beta: f64) -> f64 {
    let gammas = libm::tgamma(0.5 * (alpha + 1.0)) / libm::tgamma(0.5 * alpha + 1.0);
    k / (beta.exp2() * PI.powf(alpha - 0.5) * gammas)
}

/// Ratio of the loss of a symmetric triangle to that of a sine of equal frequency and amplitude, by the iGSE.
pub fn triangle_to_sine(alpha: f64) -> f64 {
    igse_coefficient(1.0, alpha, 0.0) * alpha.exp2()
}

/// Fit quadratic in (ln f, ln B) to the sine loss of a material, continued log-linearly outside its data (E34).
#[derive(Clone, Debug, PartialEq)]
pub struct MaterialLaw {
    coefficients: [f64; 6],
    /// Range of the data in ln f and ln B.
    range: [[f64; 2]; 2],
    volume: f64,
    /// Flux swing in T per volt-second.
    pub per_volt_second: f64,
}

impl MaterialLaw {
    /// From points (ln f, ln amplitude, ln density) and the core's volume (m³) and swing per volt-second.
    pub fn fit(points: &[[f64; 3]], volume: f64, per_volt_second: f64) -> Option<Self> {
        let coefficients = fit::quadric(points)?;
        let range = [0, 1].map(|axis| {
            let values = || points.iter().map(|point| point[axis]);
            [values().fold(f64::INFINITY, f64::min), values().fold(f64::NEG_INFINITY, f64::max)]
        });
        Some(MaterialLaw { coefficients, range, volume, per_volt_second })
    }

    /// Logarithm of the sine loss density (W/m³) and its local exponents (α, β) at ln f and ln amplitude.
    pub fn sine(&self, ln_f: f64, ln_b: f64) -> (f64, f64, f64) {
        let [c0, c1, c2, c3, c4, c5] = self.coefficients;
        let x = ln_f.clamp(self.range[0][0], self.range[0][1]);
        let y = ln_b.clamp(self.range[1][0], self.range[1][1]);
        let alpha = c1 + 2.0 * c3 * x + c4 * y;
        let beta = c2 + c4 * x + 2.0 * c5 * y;
        let inside = c0 + c1 * x + c2 * y + c3 * x * x + c4 * x * y + c5 * y * y;
        (inside + alpha * (ln_f - x) + beta * (ln_b - y), alpha, beta)
    }

    /// Loss density (W/m³) of a symmetric triangle of a frequency (Hz) and an amplitude (T).
    pub fn symmetric_triangle(&self, frequency: f64, amplitude: f64) -> f64 {
        let (ln_sine, alpha, _) = self.sine(frequency.ln(), amplitude.ln());
        ln_sine.exp() * triangle_to_sine(alpha)
    }

    /// Loss (W) of slopes that take the shares D1 and D2 of a period: each is half of a symmetric triangle at its own
    /// frequency f/(2 D) (composite waveform hypothesis, Sullivan et al. 2010, from memory).
    pub fn watts(&self, swing: f64, frequency: f64, duties: [f64; 2]) -> f64 {
        let slope = |duty: f64| {
            if duty <= 0.0 {
                0.0
            } else {
                duty * self.symmetric_triangle(frequency / (2.0 * duty), 0.5 * swing)
            }
        };
        self.volume * (slope(duties[0]) + slope(duties[1]))
    }
}
