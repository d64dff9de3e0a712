//! Exact periodic steady state of a converter.
//!
//! A period is a row of intervals; in each one the node is tied to a source through a resistance:
//!   high side on (V_i, R_h) · dead time (-V_sd, slope) · low side on (0, R_c) or diode (-V_f, slope) · dead time again,
//! or idle with no current at all. With a negative current the second dead time ties the node to V_i + V_sd.
//! Unknown are the current and the capacitor voltage at the start and the on-time; they follow from the period closing
//! and from the mean output voltage.

use lossbook::evidence::converters::{COLUMNS, Converter, Low, Steady};

use super::linear::{Matrix, State, apply, exponential, solve};

/// Steps of an interval over which squares are summed by Simpson's rule.
const STEPS: usize = 64;

#[derive(Clone, Copy, PartialEq)]
enum Part {
    High,
    HighBody,
    Rectifier,
    Dead,
    Idle,
}

/// The load is a resistance V_o/I: output voltage = share · capacitor voltage + parallel · inductor current.
fn divider(c: &Converter) -> (f64, f64) {
    let load = c.v_out / c.load;
    (load / (load + c.esr_out), load * c.esr_out / (load + c.esr_out))
}

/// What a period adds up to.
#[derive(Default)]
struct Sums {
    current: f64,
    voltage: f64,
    output_energy: f64,
    charge_in: f64,
    square_in: f64,
    energy: [f64; 4],
    square: f64,
    ripple_square: f64,
    high_time: f64,
    peak: f64,
    valley: f64,
}

struct Period<'a> {
    c: &'a Converter,
    z: State,
    sums: Sums,
    time: f64,
}

impl Period<'_> {
    /// z' = M z with the node at `source` through `resistance`.
    fn matrix(&self, source: f64, resistance: f64) -> Matrix {
        let c = self.c;
        let (share, parallel) = divider(c);
        [
            [-(resistance + c.dcr + parallel) / c.inductance, -share / c.inductance, source / c.inductance],
            [share / c.c_out, -share * c.load / (c.v_out * c.c_out), 0.0],
            [0.0; 3],
        ]
    }

    fn idle_matrix(&self) -> Matrix {
        let c = self.c;
        [[0.0; 3], [0.0, -divider(c).0 * c.load / (c.v_out * c.c_out), 0.0], [0.0; 3]]
    }

    /// Runs an interval, adding up with Simpson's rule.
    fn run(&mut self, part: Part, m: &Matrix, duration: f64, [threshold, slope]: [f64; 2]) {
        let c = self.c;
        let step = exponential(m, duration / STEPS as f64);
        let mut z = self.z;
        for k in 0..=STEPS {
            let weight = match k {
                0 | STEPS => 1.0,
                odd if odd % 2 == 1 => 4.0,
                _ => 2.0,
            } * duration
                / (3.0 * STEPS as f64);
            let (i, v) = (z[0], z[1]);
            self.sums.current += weight * i;
            let (share, parallel) = divider(c);
            let v_out = share * v + parallel * i;
            self.sums.voltage += weight * v_out;
            self.sums.output_energy += weight * v_out * v_out * c.load / c.v_out;
            self.sums.square += weight * i * i;
            self.sums.ripple_square += weight * (i - v_out * c.load / c.v_out).powi(2);
            let lost = weight * (i.abs() * threshold + i * i * slope);
            match part {
                Part::High => self.sums.energy[0] += lost,
                Part::Rectifier => self.sums.energy[1] += lost,
                Part::Dead => self.sums.energy[2] += lost,
                Part::HighBody => self.sums.energy[3] += lost,
                Part::Idle => {}
            }
            if matches!(part, Part::High | Part::HighBody) {
                self.sums.charge_in += weight * i;
                self.sums.square_in += weight * i * i;
                if k < STEPS {
                    self.sums.high_time += duration / STEPS as f64;
                }
            }
            self.sums.peak = self.sums.peak.max(i);
            self.sums.valley = self.sums.valley.min(i);
            if k < STEPS {
                z = apply(&step, &z);
            }
        }
        self.z = z;
        self.time += duration;
    }

    /// When the current reaches zero within `longest`, by bisection on the exact solution.
    fn zero_crossing(&self, m: &Matrix, longest: f64) -> Option<f64> {
        let current = |t: f64| apply(&exponential(m, t), &self.z)[0];
        if current(longest) > 0.0 {
            return None;
        }
        let (mut low, mut high) = (0.0, longest);
        for _ in 0..60 {
            let middle = 0.5 * (low + high);
            if current(middle) > 0.0 { low = middle } else { high = middle }
        }
        Some(0.5 * (low + high))
    }
}

/// One period from a state with an on-time.
fn period(c: &Converter, start: State, t_on: f64) -> (State, Sums) {
    let whole = 1.0 / c.frequency;
    let sums = Sums { peak: f64::NEG_INFINITY, valley: f64::INFINITY, ..Sums::default() };
    let mut p = Period { c, z: start, sums, time: 0.0 };
    let high = p.matrix(c.v_in, c.r_high);
    match c.low {
        Low::Channel { resistance, body, dead: [after, before], emulates } => {
            // the period starts with the dead time before the high side's pulse
            let blocked = emulates && start[0].abs() < 1e-12;
            if before > 0.0 && !blocked {
                let (part, source) =
                    if start[0] < 0.0 { (Part::HighBody, c.v_in + body[0]) } else { (Part::Dead, -body[0]) };
                let m = p.matrix(source, body[1]);
                p.run(part, &m, before, body);
            }
            p.run(Part::High, &high, t_on, [0.0, c.r_high]);
            if after > 0.0 {
                let m = p.matrix(-body[0], body[1]);
                p.run(Part::Dead, &m, after, body);
            }
            let low = p.matrix(0.0, resistance);
            let rest = whole - p.time;
            match p.zero_crossing(&low, rest).filter(|_| emulates) {
                Some(time) => p.run(Part::Rectifier, &low, time, [0.0, resistance]),
                None => p.run(Part::Rectifier, &low, rest, [0.0, resistance]),
            }
        }
        Low::Diode(forward) => {
            p.run(Part::High, &high, t_on, [0.0, c.r_high]);
            let low = p.matrix(-forward[0], forward[1]);
            let rest = whole - p.time;
            let time = p.zero_crossing(&low, rest).unwrap_or(rest);
            p.run(Part::Rectifier, &low, time, forward);
        }
    }
    let rest = whole - p.time;
    if rest > 1e-9 * whole {
        p.z[0] = 0.0;
        let idle = p.idle_matrix();
        p.run(Part::Idle, &idle, rest, [0.0; 2]);
    }
    (p.z, p.sums)
}

/// The periodic steady state, column by column, and by how much the powers do not balance, W.
pub(crate) fn steady(c: &Converter) -> (Steady, f64) {
    let guess = 0.5 * (c.v_in - c.v_out) * (c.v_out / c.v_in) / (c.inductance * c.frequency);
    let mut x = [(c.load - guess).max(if blocks(c) { 0.0 } else { f64::NEG_INFINITY }), c.v_out, 0.0];
    let peak = (2.0 * c.load * (c.v_in - c.v_out) * c.v_out / (c.v_in * c.inductance * c.frequency)).sqrt();
    x[2] = if blocks(c) && c.load < guess {
        c.inductance * peak / (c.v_in - c.v_out)
    } else {
        c.v_out / (c.v_in * c.frequency)
    };
    let residual = |x: &State| {
        let (end, sums) = period(c, [x[0], x[1], 1.0], x[2]);
        [end[0] - x[0], end[1] - x[1], sums.voltage * c.frequency - c.v_out]
    };
    // Newton with differences; the equations are all but linear
    for _ in 0..40 {
        let r = residual(&x);
        if r.iter().all(|r| r.abs() < 1e-13 * c.v_out) {
            break;
        }
        let steps = [1e-4 * (c.load + guess), 1e-4 * c.v_out, 1e-4 * x[2]];
        let mut jacobian = [[0.0; 3]; 3];
        for column in 0..3 {
            let mut moved = x;
            moved[column] += steps[column];
            let changed = residual(&moved);
            for row in 0..3 {
                jacobian[row][column] = (changed[row] - r[row]) / steps[column];
            }
        }
        let by = solve(jacobian, r);
        for place in 0..3 {
            x[place] -= by[place];
        }
        x[2] = x[2].clamp(1e-4 / c.frequency, 0.999 / c.frequency);
        if blocks(c) {
            x[0] = x[0].max(0.0);
        }
    }
    let (end, s) = period(c, [x[0], x[1], 1.0], x[2]);
    assert!(
        (end[0] - x[0]).abs() < 1e-9 * s.peak && (end[1] - x[1]).abs() < 1e-9 * c.v_out,
        "{c:?} does not close"
    );
    assert!(
        (s.current * c.frequency / c.load.max(s.peak) - c.load / c.load.max(s.peak)).abs() < 1e-9,
        "mean current"
    );
    let f = c.frequency;
    let input_mean = s.charge_in * f;
    let steady = [
        s.high_time * f,
        s.peak,
        s.valley,
        s.energy[0] * f,
        s.energy[1] * f,
        s.energy[2] * f,
        s.energy[3] * f,
        s.square * c.dcr * f,
        s.ripple_square * c.esr_out * f,
        (s.square_in * f - input_mean * input_mean) * c.esr_in,
    ];
    // everything that enters leaves again; the input capacitor's loss is outside of the loop integrated here
    let lost: f64 = steady[3..9].iter().sum();
    let balance = c.v_in * input_mean - s.output_energy * f - lost;
    assert_eq!(COLUMNS.len(), steady.len());
    (steady, balance)
}

fn blocks(c: &Converter) -> bool {
    !matches!(c.low, Low::Channel { emulates: false, .. })
}
