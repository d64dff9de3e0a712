//! Series resistance of capacitor banks (E40).

use std::f64::consts::TAU;

use crate::parts::capacitor::{Bank, Kind};
use crate::waveform::Waveform;

/// Loss of a bank and what it is made of.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct Esr {
    /// Squared RMS current of the bank, A² (E4).
    pub mean_square: f64,
    /// Effective series resistance: watts / mean_square, Ω.
    pub resistance: f64,
    /// I_rms² times the effective resistance, W.
    pub watts: f64,
}

/// Watts and squared RMS current of one kind of a bank.
#[derive(Clone, Copy, Debug, Default, PartialEq)]
pub struct KindShare {
    /// W
    pub watts: f64,
    /// Squared RMS current of all capacitors of the kind, A².
    pub mean_square: f64,
}

/// Which end of the stage a bank stands at: the shape of its current.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum End {
    /// Trapezoids of the high side.
    Input,
    /// Triangles of the inductor.
    Output,
}

/// Loss of a bank with the squared RMS current of E4 (A²): I_rms² ESR/n for one kind; several kinds share the current
/// harmonic by harmonic (E40).
#[inline(always)]
pub fn esr(bank: &Bank, end: End, waveform: &Waveform, mean_square: f64) -> Esr {
    let watts = match bank.kinds.as_slice() {
        [] => 0.0,
        [kind] => mean_square * kind.esr,
        _ => shares(bank, end, waveform, mean_square).iter().map(|share| share.watts).sum(),
    };
    let resistance = if mean_square > 0.0 { watts / mean_square } else { 0.0 };
    Esr { mean_square, resistance, watts }
}

/// Harmonics that are summed one by one; beyond them the spectrum is smooth and is sampled.
const ONE_BY_ONE: f64 = 4096.0;
/// Most harmonics that count, whatever the duty: the sum has long converged.
const MOST_HARMONICS: f64 = 1e12;

/// Shares of the kinds of a bank: each harmonic divides by the impedances ESR + j(ω ESL - 1/(ω C)); the result is scaled
/// so that the squares add up to `mean_square` (A²) of E4 (E40). Source: Fourier series of a trapezoid or triangle.
pub fn shares(bank: &Bank, end: End, waveform: &Waveform, mean_square: f64) -> Vec<KindShare> {
    let mut shares = vec![KindShare::default(); bank.kinds.len()];
    if let ([kind], [share]) = (bank.kinds.as_slice(), shares.as_mut_slice()) {
        *share = KindShare { watts: mean_square * kind.esr, mean_square };
        return shares;
    }
    let d = waveform.duty;
    if mean_square <= 0.0 || waveform.frequency <= 0.0 || d <= 0.0 || d >= 1.0 {
        return shares;
    }
    let harmonics = (12.0 / (d * (1.0 - d))).ceil().clamp(200.0, MOST_HARMONICS);
    let mut sum = 0.0;
    let mut n = 1.0;
    let mut edges = [Turning::of(d), Turning::of(d + waveform.off_duty)];
    let mut admittances = vec![Admittance::default(); bank.kinds.len()];
    while n <= harmonics {
        // beyond the first ones a sample stands for as many harmonics as change neither spectrum nor impedance
        let stands_for = if n <= ONE_BY_ONE { 1.0 } else { (0.02 / d).min(n / 64.0).floor().max(1.0) };
        let w = TAU * (n + 0.5 * (stands_for - 1.0));
        if n <= ONE_BY_ONE {
            edges.iter_mut().for_each(Turning::on);
        } else {
            edges = [Turning::at(w * d), Turning::at(w * (d + waveform.off_duty))];
        }
        n += stands_for;
        let square = 2.0 * stands_for * amplitude_square(end, waveform, w, edges);
        sum += square;
        let omega = w * waveform.frequency;
        let (mut g_sum, mut b_sum) = (0.0, 0.0);
        for (kind, admittance) in bank.kinds.iter().zip(&mut admittances) {
            *admittance = Admittance::of(kind, omega);
            g_sum += admittance.conductance;
            b_sum += admittance.susceptance;
        }
        let through_all = square / (g_sum * g_sum + b_sum * b_sum);
        for (admittance, share) in admittances.iter().zip(&mut shares) {
            share.mean_square += through_all * admittance.square;
        }
    }
    let scale = if sum > 0.0 { mean_square / sum } else { 0.0 };
    for (kind, share) in bank.kinds.iter().zip(&mut shares) {
        share.mean_square *= scale;
        share.watts = share.mean_square * kind.esr;
    }
    shares
}

/// Admittance of one kind at a frequency.
#[derive(Clone, Copy, Debug, Default)]
struct Admittance {
    /// Real part, S.
    conductance: f64,
    /// Imaginary part, S.
    susceptance: f64,
    /// Square of its size, S².
    square: f64,
}

impl Admittance {
    /// 1/(ESR + j(ω ESL - 1/(ω C))).
    fn of(kind: &Kind, omega: f64) -> Self {
        let reactance = omega * kind.esl - 1.0 / (omega * kind.capacitance);
        let square = 1.0 / (kind.esr * kind.esr + reactance * reactance).max(1e-30);
        Admittance { conductance: kind.esr * square, susceptance: -reactance * square, square }
    }
}

/// Cosine and sine of an angle that grows by one turning a harmonic.
#[derive(Clone, Copy, Debug)]
struct Turning {
    cos: f64,
    sin: f64,
    turn: (f64, f64),
}

impl Turning {
    /// Angle 0 before the first harmonic, turning by 2π times a share of the period.
    fn of(share: f64) -> Self {
        let (sin, cos) = (TAU * share).sin_cos();
        Turning { cos: 1.0, sin: 0.0, turn: (cos, sin) }
    }

    /// A given angle.
    fn at(angle: f64) -> Self {
        let (sin, cos) = angle.sin_cos();
        Turning { cos, sin, turn: (1.0, 0.0) }
    }

    /// On to the next harmonic; thousands of turnings leave an error of parts in 1e12.
    fn on(&mut self) {
        let (cos, sin) = self.turn;
        (self.cos, self.sin) = (self.cos * cos - self.sin * sin, self.sin * cos + self.cos * sin);
    }
}

/// |c_n|² of the bank's current with w = 2π n, A²; `edges` are the angles at the ends of the rise and of the fall.
fn amplitude_square(end: End, waveform: &Waveform, w: f64, edges: [Turning; 2]) -> f64 {
    let (d1, d2) = (waveform.duty, waveform.off_duty);
    let rise = waveform.ripple() / d1;
    let [Turning { cos, sin, .. }, Turning { cos: cos_end, sin: sin_end, .. }] = edges;
    let (re, im) = match end {
        // ∫ (I_v + rise x) e^(-jwx) dx over the on-time
        End::Input => {
            let (p, v) = (waveform.peak, waveform.valley);
            (p * sin / w + rise * (cos - 1.0) / (w * w), (p * cos - v) / w - rise * sin / (w * w))
        }
        // two integrations of the changes of slope
        End::Output => {
            let fall = -waveform.ripple() / d2;
            (
                -(rise + (fall - rise) * cos - fall * cos_end) / (w * w),
                ((fall - rise) * sin - fall * sin_end) / (w * w),
            )
        }
    };
    re * re + im * im
}
