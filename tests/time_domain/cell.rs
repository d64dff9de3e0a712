//! Transient solution of a switching cell and of the switch node: fourth-order Runge-Kutta with small equal steps.

use lossbook::evidence::switching::{CHARGE_VOLTAGE, Cell, Motion, Swing};

/// Step of the edges, s.
pub(crate) const STEP: f64 = 2e-12;

/// One step of the classical Runge-Kutta method.
fn step<const N: usize>(x: [f64; N], h: f64, slope: &impl Fn(&[f64; N]) -> [f64; N]) -> [f64; N] {
    let moved = |by: &[f64; N], h: f64| -> [f64; N] { std::array::from_fn(|i| x[i] + h * by[i]) };
    let a = slope(&x);
    let b = slope(&moved(&a, 0.5 * h));
    let c = slope(&moved(&b, 0.5 * h));
    let d = slope(&moved(&c, h));
    std::array::from_fn(|i| x[i] + h / 6.0 * (a[i] + 2.0 * b[i] + 2.0 * c[i] + d[i]))
}

/// Capacitance C0 (1 + v/v0)^-1/2 of which the charge at 20 V is given.
#[derive(Clone, Copy)]
struct Junction {
    zero_bias: f64,
    v0: f64,
}

impl Junction {
    fn new(charge: f64, v0: f64) -> Self {
        Junction { zero_bias: charge / (2.0 * v0 * ((1.0 + CHARGE_VOLTAGE / v0).sqrt() - 1.0)), v0 }
    }

    fn at(&self, v: f64) -> f64 {
        self.zero_bias / (1.0 + v.max(0.0) / self.v0).sqrt()
    }
}

/// On-resistance that limits the channel, Ω; its own conduction is taken out again.
const R_OHMIC: f64 = 2e-3;

/// Energy in the channel over one edge, J.
///
/// States: gate voltage, drain voltage, energy.
///   channel   i = min(g (v_gs - V_th), v_ds / R)
///   drain     dv_ds/dt = (I - i)/(C_h(v_ds) + C_r(V_i - v_ds)); held at V_i by the rectifier while i < I
///   gate      (C + L_s g/R_g) dv_gs/dt = (V_drive - v_gs)/R_g + C_gd(v_ds) dv_ds/dt, L_s only while the channel
///             is not ohmic; C carries Q_gs2 from threshold to plateau
fn edge(cell: &Cell, current: f64, on: bool, h: f64) -> f64 {
    let c_gs = cell.q_gs2 / cell.plateau;
    let c_gd = Junction::new(cell.q_gd, cell.junction);
    let (c_high, c_low) =
        (Junction::new(cell.q_high, cell.junction), Junction::new(cell.q_low, cell.junction));
    let (drive, resistance) = if on { (cell.v_drive, cell.r_on) } else { (0.0, cell.r_off) };
    let slope = |x: &[f64; 3]| {
        let [v_gs, v_ds, _] = *x;
        let saturated = (cell.transconductance * (v_gs - cell.v_th)).max(0.0);
        let ohmic = v_ds.max(0.0) / R_OHMIC;
        let channel = saturated.min(ohmic);
        let held = v_ds >= cell.v_in && channel < current;
        let dv_ds =
            if held { 0.0 } else { (current - channel) / (c_high.at(v_ds) + c_low.at(cell.v_in - v_ds)) };
        let conducting = saturated > 0.0 && saturated < ohmic;
        let inductive = if conducting { cell.l_source * cell.transconductance / resistance } else { 0.0 };
        let dv_gs = ((drive - v_gs) / resistance + c_gd.at(v_ds) * dv_ds) / (c_gs + inductive);
        let useful = (v_ds * channel - channel * channel * R_OHMIC).max(0.0);
        [dv_gs, dv_ds, useful]
    };
    let mut x = if on { [0.0, cell.v_in, 0.0] } else { [cell.v_drive, current * R_OHMIC, 0.0] };
    for _ in 0..2_000_000 {
        x = step(x, h, &slope);
        x[1] = x[1].min(cell.v_in);
        // on: the drain has come down to the ohmic drop; off: the channel is empty and the rectifier conducts
        let done =
            if on { x[1] < 1.001 * current * R_OHMIC + 1e-4 } else { x[0] < cell.v_th && x[1] >= cell.v_in };
        if done {
            return x[2];
        }
    }
    panic!("the edge does not end: {cell:?}");
}

/// Energy of both edges in the channel, J.
pub(crate) fn energy(cell: &Cell, h: f64) -> f64 {
    edge(cell, cell.i_on, true, h) + edge(cell, cell.i_off, false, h)
}

/// Energy burnt in a small resistance that pulls the node from `v` to `target`, J; the other switch's capacitance charges
/// along.
fn pulled(c_high: &Junction, c_low: &Junction, v_in: f64, v: f64, target: f64) -> f64 {
    let resistance = 1.0;
    let slope = |x: &[f64; 2]| {
        let i = (target - x[0]) / resistance;
        [i / (c_high.at(v_in - x[0]) + c_low.at(x[0])), i * i * resistance]
    };
    let mut x = [v, 0.0];
    let smallest = resistance * (c_high.at(v_in) + c_low.at(v_in));
    for _ in 0..1_000_000 {
        if (x[0] - target).abs() < 1e-5 * v_in {
            return x[1];
        }
        x = step(x, 0.02 * smallest, &slope);
    }
    panic!("the node does not arrive");
}

/// Energy of a swing, J.
///
/// States: inductor current into the node, node voltage, energy in the winding. The inductor leads to the output voltage.
pub(crate) fn swing(s: &Swing) -> f64 {
    let (c_high, c_low) = (Junction::new(s.q_high, s.junction), Junction::new(s.q_low, s.junction));
    let moved = |start: [f64; 3], winding: f64, time: f64, h: f64| {
        let slope = |x: &[f64; 3]| {
            let [i, v, _] = *x;
            let c = c_high.at(s.v_in - v) + c_low.at(v);
            [(s.v_out - v - winding * i) / s.inductance, i / c, winding * i * i]
        };
        let mut x = start;
        for _ in 0..(time / h).round() as u64 {
            x = step(x, h, &slope);
            x[1] = x[1].clamp(0.0, s.v_in);
        }
        x
    };
    let duty = s.v_out / s.v_in;
    let ripple = (s.v_in - s.v_out) * duty / (s.inductance * s.frequency);
    match s.motion {
        Motion::Lifted => {
            let reverse = 0.5 * ripple - s.load;
            let x = moved([reverse, 0.0, 0.0], 0.0, s.dead, s.dead / 4000.0);
            pulled(&c_high, &c_low, s.v_in, x[1], s.v_in)
        }
        Motion::Lowered => {
            let peak = 0.5 * ripple + s.load;
            let x = moved([-peak, s.v_in, 0.0], 0.0, s.dead, s.dead / 4000.0);
            pulled(&c_high, &c_low, s.v_in, x[1], 0.0)
        }
        Motion::Ringing => {
            // a winding resistance that lets the ringing die within the run; the energy does not depend on it
            let winding = 0.3 * (s.inductance / (c_high.at(s.v_in) + c_low.at(s.v_out))).sqrt();
            let time = 60.0 * s.inductance / winding;
            moved([0.0, 0.0, 0.0], winding, time, time / 200_000.0)[2]
        }
        Motion::Settled => pulled(&c_high, &c_low, s.v_in, s.v_out, s.v_in),
    }
}
