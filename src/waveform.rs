//! Waveforms of a switched stage (E2-E8) from resistances and drops given as numbers.

use crate::near::at_least;

/// How a stage runs at a point.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash, PartialOrd, Ord)]
pub enum Mode {
    /// The inductor current never rests; it may go negative.
    Continuous,
    /// The inductor current rests at zero for a part of the period.
    Discontinuous,
    /// Discontinuous with a fixed peak: the frequency follows the load.
    PulseSkipping,
    /// A linear regulator.
    Linear,
}

impl Mode {
    /// Name in outputs.
    pub const fn name(self) -> &'static str {
        match self {
            Mode::Continuous => "continuous",
            Mode::Discontinuous => "discontinuous",
            Mode::PulseSkipping => "pulse_skipping",
            Mode::Linear => "linear",
        }
    }
}

/// What the inductor current sees at one set of temperatures. All resistances hot, in Ω.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct CurrentPath {
    /// V_IN, V.
    pub v_in: f64,
    /// Output voltage at the end of the output path: V_OUT + I R_load, V.
    pub v_out: f64,
    /// I_OUT, A.
    pub load: f64,
    /// f_SW, Hz.
    pub frequency: f64,
    /// L at the load current, H.
    pub inductance: f64,
    /// 1/(f L): ripple a volt across the inductance makes in a period, A/V.
    pub ripple_per_volt: f64,
    /// R_h: high-side channel and its path.
    pub r_high: f64,
    /// R_s: winding, output path and sense resistor.
    pub r_series: f64,
    /// What the current sees while the high side is off.
    pub off: OffPath,
}

/// What the current sees while the high side is off.
#[derive(Clone, Copy, Debug, PartialEq)]
pub enum OffPath {
    /// A MOSFET, with a diode during the dead times.
    Synchronous {
        /// R_c: channel, Ω.
        r_channel: f64,
        /// R_p: low-side path, Ω.
        r_path: f64,
        /// Diode drop during the dead times at the load current, V.
        v_dead: f64,
        /// d_t: share of the period in dead time.
        dead_share: f64,
    },
    /// A diode.
    Diode {
        /// Forward voltage at the load current, V.
        v_f: f64,
        /// R_p: its path, Ω.
        r_path: f64,
    },
}

/// How the rectifier behaves at light load.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct LightLoadRule {
    /// True when it blocks at zero current.
    pub blocks: bool,
    /// Smallest peak of a pulse, A; 0 when none is stated.
    pub skip_peak: f64,
    /// Shortest on-time, s.
    pub t_on_min: f64,
}

/// Currents and duties of a switched stage.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Waveform {
    /// How the stage runs.
    pub mode: Mode,
    /// D1: share of the period for which the switch node is high.
    pub duty: f64,
    /// D2: share of the period in which the current falls.
    pub off_duty: f64,
    /// I_v, A.
    pub valley: f64,
    /// I_p, A.
    pub peak: f64,
    /// Mean square m of the ramp between valley and peak, A².
    pub mean_square: f64,
    /// f_e: pulses per second, Hz.
    pub frequency: f64,
    /// f: the clock, Hz.
    pub clock: f64,
    /// Voltage across the inductance while the current rises, V.
    pub v_on: f64,
    /// Falling slope of the current, A/s.
    pub falling_slope: f64,
    /// L at the load current, H.
    pub inductance: f64,
}

/// Mean square of a ramp from a to b (E4): (a² + a b + b²)/3, A².
#[inline(always)]
pub fn ramp_mean_square(a: f64, b: f64) -> f64 {
    (a * a + a * b + b * b) * (1.0 / 3.0)
}

impl Waveform {
    /// The waveform of a current path, or `None` when no duty makes this output voltage.
    ///
    /// Continuous conduction (E2, E3) unless the rectifier blocks and the load is below half the ripple (E5, E6).
    #[inline(always)]
    pub fn solve(path: &CurrentPath, rule: LightLoadRule) -> Option<Waveform> {
        let continuous = Waveform::continuous(path)?;
        if rule.blocks && path.load < 0.5 * continuous.ripple() {
            return Waveform::discontinuous(path, rule);
        }
        (continuous.duty < 1.0 && continuous.v_on > 0.0).then_some(continuous)
    }

    /// E2, E3: volt-second balance with every drop at the load current. The duty may come out at 1 or more: the caller
    /// decides. Derived; agrees with an exact periodic steady state to 1e-5.
    #[inline(always)]
    pub fn continuous(path: &CurrentPath) -> Option<Waveform> {
        let i = path.load;
        let (numerator, denominator) = match path.off {
            OffPath::Synchronous { r_channel, r_path, v_dead, dead_share } => (
                path.v_out
                    + i * path.r_series
                    + (1.0 - dead_share) * i * r_channel
                    + i * r_path
                    + dead_share * v_dead,
                path.v_in - i * path.r_high + i * (r_channel + r_path),
            ),
            OffPath::Diode { v_f, r_path } => {
                let drop = v_f + i * r_path;
                (path.v_out + i * path.r_series + drop, path.v_in - i * path.r_high + drop)
            }
        };
        if denominator <= 0.0 {
            return None;
        }
        let duty = numerator / denominator;
        let v_on = path.v_in - i * (path.r_high + path.r_series) - path.v_out;
        let ripple = v_on * duty * path.ripple_per_volt;
        let (valley, peak) = (i - 0.5 * ripple, i + 0.5 * ripple);
        Some(Waveform {
            mode: Mode::Continuous,
            duty,
            off_duty: 1.0 - duty,
            valley,
            peak,
            mean_square: ramp_mean_square(valley, peak),
            frequency: path.frequency,
            clock: path.frequency,
            v_on,
            falling_slope: ripple * path.frequency / (1.0 - duty),
            inductance: path.inductance,
        })
    }

    /// E5, E6: the rectifier blocks at zero current; below a smallest peak the frequency falls instead of the peak.
    ///
    /// Charge balance of triangular pulses, lossless but for the diode's drop. Source of the maker's form
    /// I = I_p² f L V_i/(2 V_o (V_i - V_o)): LT1376 data sheet p. 11. Smallest peak: derived.
    #[inline(always)]
    pub fn discontinuous(path: &CurrentPath, rule: LightLoadRule) -> Option<Waveform> {
        let v_on = path.v_in - path.v_out;
        let v_off = match path.off {
            OffPath::Synchronous { .. } => path.v_out,
            OffPath::Diode { v_f, .. } => path.v_out + v_f,
        };
        if v_on <= 0.0 {
            return None;
        }
        let (i, l, f) = (path.load, path.inductance, path.frequency);
        // times of the rise and of the fall of one pulse per ampere of peak, and of both
        let (rise, fall) = (l / v_on, l / v_off);
        let pulse = rise + fall;
        let natural_peak = (2.0 * i / (f * pulse)).sqrt();
        let smallest_peak = at_least(rule.skip_peak, v_on * rule.t_on_min / l);
        let (mode, peak, frequency) = if natural_peak < smallest_peak {
            (Mode::PulseSkipping, smallest_peak, 2.0 * i / (smallest_peak * smallest_peak * pulse))
        } else {
            (Mode::Discontinuous, natural_peak, f)
        };
        Some(Waveform {
            mode,
            duty: rise * peak * frequency,
            off_duty: fall * peak * frequency,
            valley: 0.0,
            peak,
            mean_square: peak * peak / 3.0,
            frequency,
            clock: f,
            v_on,
            falling_slope: v_off / l,
            inductance: l,
        })
    }

    /// Peak to peak ripple of the inductor current, A.
    #[inline(always)]
    pub fn ripple(&self) -> f64 {
        self.peak - self.valley
    }

    /// Share of the period in which the inductor current rests at zero.
    #[inline(always)]
    pub fn idle_share(&self) -> f64 {
        at_least(0.0, 1.0 - self.duty - self.off_duty)
    }

    /// True while the rectifier never blocks.
    #[inline(always)]
    pub fn is_continuous(&self) -> bool {
        self.mode == Mode::Continuous
    }

    /// Squared RMS current of the inductor, A² (E4).
    #[inline(always)]
    pub fn inductor_square(&self) -> f64 {
        if self.is_continuous() { self.mean_square } else { (self.duty + self.off_duty) * self.mean_square }
    }

    /// Mean input current of the high side, A.
    #[inline(always)]
    pub fn mean_input_current(&self) -> f64 {
        0.5 * self.duty * (self.valley + self.peak)
    }

    /// Squared RMS current of the input capacitors, A² (E4).
    #[inline(always)]
    pub fn input_capacitor_square(&self, load: f64) -> f64 {
        let mean = if self.is_continuous() { self.duty * load } else { self.mean_input_current() };
        at_least(0.0, self.duty * self.mean_square - mean * mean)
    }

    /// Squared RMS current of the output capacitors, A² (E4).
    #[inline(always)]
    pub fn output_capacitor_square(&self, load: f64) -> f64 {
        at_least(0.0, self.inductor_square() - load * load)
    }
}
