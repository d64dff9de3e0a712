//! Heat (E50, E51): loss and temperature settle together.

use crate::booking::ledger;
use crate::fitted::{CONTROLLER, HIGH, INDUCTOR, NODES, Nodes, RECTIFIER, Rectifier, SCHOTTKY, slot_of};
use crate::grid::OperatingPoint;
use crate::infeasible::{HOTTEST, Infeasible};
use crate::ledger::{SLOTS, Slot};
use crate::linear;
use crate::loss::leakage::Leakage;
use crate::model::{Heated, HeatedRectifier, HotRatios, Prepared, Solved, Temperatures};
use crate::parts::copper::PER_KELVIN;
use crate::parts::diode::Diode;
use crate::parts::linear_regulator::LinearRegulator;
use crate::waveform::{Mode, Waveform};

/// Largest movement of any temperature at which the loop ends, K.
pub const SETTLED: f64 = 1e-6;
/// Nodes whose temperatures move losses: the first ones. That of the controller, the last one, follows.
const MUTUAL: usize = CONTROLLER;
/// Passes of the quick search that are not asked whether they have settled: from the first guess it takes that many.
const APPROACHES: usize = 2;
/// Passes after which the quick search gives way to the careful one.
const QUICK_PASSES: usize = 12;
/// Passes after which the careful search gives up.
const CAREFUL_PASSES: usize = 4000;
/// Loop gain of a node above which a Newton step is not trusted.
const STEEP: f64 = 0.9;
/// Sum of estimated gains above which the exact gain is asked for.
const SUSPECT: f64 = 0.4;

/// Temperatures, losses and ledger of a switched stage at a point.
///
/// Newton steps with estimated slopes; when they do not settle, or end where the thermal loop gain is suspicious, plain
/// passes from ambient upwards decide.
#[inline(always)]
pub fn settle(prepared: &Prepared<'_>) -> Result<Solved, Infeasible> {
    if prepared.stage.heat.coupling.is_empty() { quick::<false>(prepared) } else { quick::<true>(prepared) }
}

/// The quick search; compiled apart for parts that warm one another, so that the others need not carry what that takes.
#[inline(always)]
fn quick<const COUPLED: bool>(prepared: &Prepared<'_>) -> Result<Solved, Infeasible> {
    let mut search = Search::from(first_guess(prepared));
    // the first passes only approach: nothing but the watts of the nodes is kept of them
    for _ in 0..APPROACHES {
        let hot = prepared.hot(&search.t);
        let Ok(waveform) = prepared.waveform(&search.t, &hot) else {
            return careful(prepared);
        };
        // two calls that are compiled apart: one knows the mode and need not ask for it in every mechanism
        let sound = if waveform.is_continuous() {
            let waveform = Waveform { mode: Mode::Continuous, ..waveform };
            search.approach::<COUPLED>(prepared, waveform, &hot)
        } else {
            search.approach::<COUPLED>(prepared, waveform, &hot)
        };
        if !sound {
            return careful(prepared);
        }
    }
    for _ in APPROACHES..QUICK_PASSES {
        let Some(heated) = heated_at(prepared, &search.t) else {
            break;
        };
        let image = image::<COUPLED>(prepared, &heated);
        if search.is_settled(&image) {
            if !search.is_trusted() && loop_gain(prepared, &search.t)? >= 1.0 {
                break;
            }
            // the controller only follows, but it too must stay below what is believed (E51)
            if image[CONTROLLER].is_nan() || image[CONTROLLER] >= HOTTEST {
                break;
            }
            prepared.check_times(&heated.waveform)?;
            search.t[CONTROLLER] = image[CONTROLLER];
            return Ok(solved(prepared, &search.t, &heated));
        }
        if !search.step(prepared, &heated, &image) {
            break;
        }
    }
    careful(prepared)
}

/// What heats the parts at temperatures that the quick search tries; `None` sends it to the careful one.
#[inline(always)]
fn heated_at(prepared: &Prepared<'_>, t: &Nodes) -> Option<Heated> {
    let hot = prepared.hot(t);
    let waveform = prepared.waveform(t, &hot).ok()?;
    Some(prepared.heated_by(waveform, t, &hot))
}

/// Ambient and what cold resistances and the cold diode warm the parts with the load current and the lossless duty.
#[inline(always)]
fn first_guess(prepared: &Prepared<'_>) -> Nodes {
    let (stage, point) = (prepared.stage, &prepared.point);
    let duty = prepared.v_out / point.input_voltage;
    let square = point.load * point.load;
    let mut watts = [0.0; MUTUAL];
    watts[HIGH] = duty * square * prepared.drive.r_high;
    watts[RECTIFIER] = (1.0 - duty)
        * match &stage.rectifier {
            Rectifier::Synchronous { .. } => square * prepared.drive.r_low,
            Rectifier::Diode(diode) => point.load * diode.forward_voltage(point.load, point.ambient),
        };
    watts[INDUCTOR] = square * stage.inductor.dcr;
    let mut t = [point.ambient; NODES];
    for node in 0..MUTUAL {
        t[node] += stage.heat.resistance[node] * watts[node];
    }
    t
}

/// State of the quick search for the settled temperatures.
///
/// The slope of an image has two parts: the node's own loss grows with its own temperature, and the conduction of all
/// nodes moves the duty and thereby every loss. The first is known; the second is read off the last step.
struct Search {
    t: Nodes,
    /// Temperatures of the pass before.
    t_before: [f64; MUTUAL],
    /// Image of the pass before.
    image_before: [f64; MUTUAL],
    /// d(image)/dT of each node by its own temperature, in the pass before.
    slopes: [f64; MUTUAL],
    /// Shift of each image with the growth of all conduction that moves the duty, K/W.
    common: [f64; MUTUAL],
    /// True until the first step.
    is_fresh: bool,
}

impl Search {
    #[inline(always)]
    fn from(t: Nodes) -> Self {
        let none = [0.0; MUTUAL];
        Search { t, t_before: none, image_before: none, slopes: none, common: none, is_fresh: true }
    }

    #[inline(always)]
    fn is_settled(&self, image: &Nodes) -> bool {
        // a movement that is no number does not count as settled
        (0..MUTUAL).fold(true, |settled, node| settled & ((image[node] - self.t[node]).abs() <= SETTLED))
    }

    /// True when the slopes leave no doubt that the loop gain is below 1.
    #[inline(always)]
    fn is_trusted(&self) -> bool {
        self.slopes.iter().map(|slope| slope.abs()).sum::<f64>() < SUSPECT
    }

    /// A pass with the waveform at the temperatures reached; false when the search should give up.
    #[inline(always)]
    fn approach<const COUPLED: bool>(
        &mut self,
        prepared: &Prepared<'_>,
        waveform: Waveform,
        hot: &HotRatios,
    ) -> bool {
        let heated = prepared.heated_by(waveform, &self.t, hot);
        let image = image::<COUPLED>(prepared, &heated);
        self.step(prepared, &heated, &image)
    }

    /// Moves every node to where the images meet the temperatures; false when the search should give up.
    #[inline(always)]
    fn step(&mut self, prepared: &Prepared<'_>, heated: &Heated, image: &Nodes) -> bool {
        let (growth, resistance) = (Growth::of(prepared, heated, &self.t), &prepared.stage.heat.resistance);
        let mut slopes = [0.0; MUTUAL];
        for node in 0..MUTUAL {
            slopes[node] = resistance[node] * (growth.conduction[node] + growth.leakage[node]);
        }
        if !self.is_fresh {
            self.read_common(image, &growth, &slopes);
        }
        // (1 - slope) d - common Σ growth d = image - t for the movements d of all nodes, the sum over what moves the duty
        let (mut own, mut free, mut feedback) = ([0.0; MUTUAL], 0.0, 0.0);
        for node in 0..MUTUAL {
            own[node] = 1.0 / (1.0 - slopes[node]);
            free += growth.duty[node] * own[node] * (image[node] - self.t[node]);
            feedback += growth.duty[node] * own[node] * self.common[node];
        }
        let shift = free / (1.0 - feedback);
        let mut sound = feedback.abs() < STEEP;
        self.t_before.copy_from_slice(&self.t[..MUTUAL]);
        for node in 0..MUTUAL {
            self.t[node] += own[node] * (image[node] - self.t[node] + self.common[node] * shift);
            sound &= (slopes[node].abs() < STEEP) & (self.t[node] < HOTTEST);
        }
        self.image_before.copy_from_slice(&image[..MUTUAL]);
        (self.slopes, self.is_fresh) = (slopes, false);
        sound
    }

    /// What the slopes leave unexplained of the last step goes to the growth of all conduction.
    #[inline(always)]
    fn read_common(&mut self, image: &Nodes, growth: &Growth, slopes: &[f64; MUTUAL]) {
        let (mut left, mut shift, mut size) = ([0.0; MUTUAL], 0.0, 0.0);
        for node in 0..MUTUAL {
            let moved = self.t[node] - self.t_before[node];
            let own = 0.5 * (slopes[node] + self.slopes[node]) * moved;
            left[node] = image[node] - self.image_before[node] - own;
            shift += growth.duty[node] * moved;
            size += growth.duty[node].abs() * moved.abs();
        }
        // parts that grow and parts that shrink may cancel: then the duty has hardly moved
        if shift.abs() > 0.1 * size {
            let per_shift = 1.0 / shift;
            self.common = left.map(|left| left * per_shift);
        }
    }
}

/// Growth of the loss of each node with its own temperature, W/K.
struct Growth {
    /// Resistances and forward voltages.
    conduction: [f64; MUTUAL],
    /// That part of them that moves the duty.
    duty: [f64; MUTUAL],
    /// Leakage grows exponentially.
    leakage: [f64; MUTUAL],
}

impl Growth {
    /// Main parts of dP/dT at temperatures.
    #[inline(always)]
    fn of(prepared: &Prepared<'_>, heated: &Heated, t: &Nodes) -> Self {
        let stage = prepared.stage;
        let (mut conduction, mut leakage) = ([0.0; MUTUAL], [0.0; MUTUAL]);
        let of_channel = |watts: f64, exponent: f64, t_j: f64| watts * exponent / (t_j + 273.15);
        let of_leakage = |leakage: &Option<Leakage>, diode: &Diode| match (leakage, &diode.leakage) {
            (Some(leakage), Some(law)) => leakage.watts * law.per_kelvin,
            _ => 0.0,
        };
        conduction[HIGH] = of_channel(heated.high_conduction.watts, stage.high_side.hot_exponent, t[HIGH]);
        match (&heated.rectifier, &stage.rectifier) {
            (
                HeatedRectifier::Synchronous { conduction: channel, schottky: leaking, .. },
                Rectifier::Synchronous { low_side, schottky },
            ) => {
                conduction[RECTIFIER] = of_channel(channel.watts, low_side.hot_exponent, t[RECTIFIER]);
                if let (Some(leaking), Some(diode)) = (leaking, schottky) {
                    leakage[SCHOTTKY] = of_leakage(leaking, diode);
                }
            }
            (HeatedRectifier::Diode { conduction: forward, leakage: leaking }, Rectifier::Diode(diode)) => {
                let mean = 0.5 * (heated.waveform.valley + heated.waveform.peak);
                conduction[RECTIFIER] = forward.share * mean * diode.forward_drift(mean);
                leakage[RECTIFIER] = of_leakage(leaking, diode);
            }
            _ => {}
        }
        let copper = heated.winding.watts + heated.ac_winding.map_or(0.0, |ac| ac.watts);
        conduction[INDUCTOR] = copper * PER_KELVIN / (1.0 + PER_KELVIN * (t[INDUCTOR] - 20.0));
        // in discontinuous mode the pulses know no resistance
        let duty = match heated.rectifier {
            _ if heated.waveform.is_continuous() => conduction,
            HeatedRectifier::Diode { .. } => [0.0, conduction[RECTIFIER], 0.0, 0.0],
            HeatedRectifier::Synchronous { .. } => [0.0; MUTUAL],
        };
        Growth { conduction, duty, leakage }
    }
}

/// The ledger at temperatures that are given, not settled: "what if everything stayed at 25 °C".
#[inline(never)]
pub fn at_temperatures(prepared: &Prepared<'_>, temperatures: &Nodes) -> Result<Solved, Infeasible> {
    let hot = prepared.hot(temperatures);
    let waveform = prepared.waveform(temperatures, &hot)?;
    prepared.check_times(&waveform)?;
    let heated = prepared.heated_by(waveform, temperatures, &hot);
    Ok(solved(prepared, temperatures, &heated))
}

#[inline(always)]
fn solved(prepared: &Prepared<'_>, temperatures: &Nodes, heated: &Heated) -> Solved {
    let waveform = heated.waveform;
    let unheated = prepared.unheated(&waveform);
    Solved {
        point: prepared.point,
        output_voltage: prepared.output_voltage,
        waveform: Some(waveform),
        temperatures: by_slot(prepared, temperatures),
        held: prepared.stage.heat.held,
        ledger: ledger(heated, &unheated),
    }
}

#[inline(always)]
fn by_slot(prepared: &Prepared<'_>, temperatures: &Nodes) -> Temperatures {
    let mut slots = [None; SLOTS];
    for (slot, temperature) in prepared.stage.heat.slots.iter().zip(temperatures) {
        if let Some(slot) = slot {
            slots[slot.index()] = Some(*temperature);
        }
    }
    slots
}

/// Temperatures of the nodes of a solved point.
pub fn nodes_of(prepared: &Prepared<'_>, solved: &Solved) -> Nodes {
    let synchronous = prepared.stage.is_synchronous();
    let at = |node: usize| solved.temperatures[slot_of(node, synchronous).index()];
    std::array::from_fn(|node| at(node).unwrap_or(prepared.point.ambient))
}

/// T_a + R_th P/n + sum of K P of other slots when any are coupled, for every node (E50).
#[inline(always)]
fn image<const COUPLED: bool>(prepared: &Prepared<'_>, heated: &Heated) -> Nodes {
    let heat = &prepared.stage.heat;
    let watts = heated.node_watts();
    let mut image = [prepared.point.ambient; NODES];
    for node in 0..NODES {
        image[node] += heat.resistance[node] * watts[node];
    }
    if COUPLED {
        return coupled(prepared, heated.waveform, watts, image);
    }
    image
}

/// The image with K P of the other slots.
#[inline(never)]
fn coupled(prepared: &Prepared<'_>, waveform: Waveform, watts: Nodes, mut image: Nodes) -> Nodes {
    let synchronous = prepared.stage.is_synchronous();
    for (node, heating, k) in &prepared.stage.heat.coupling {
        // a controller without a thermal resistance has no temperature, but it warms others
        let source = (0..NODES).find(|source| slot_of(*source, synchronous) == *heating);
        image[*node] +=
            k * source.map_or_else(|| unheated_watts(prepared, &waveform, *heating), |source| watts[source]);
    }
    image
}

/// Watts of a slot that has no temperature of its own but warms others.
fn unheated_watts(prepared: &Prepared<'_>, waveform: &Waveform, slot: Slot) -> f64 {
    let unheated = prepared.unheated(waveform);
    match slot {
        Slot::InputCapacitors => unheated.input_esr.watts,
        Slot::OutputCapacitors => unheated.output_esr.watts,
        Slot::Board => unheated.copper.watts + unheated.sense.watts + unheated.snubber.watts,
        _ => 0.0,
    }
}

/// The image of temperatures, outside the quick search.
#[inline(never)]
fn image_at(prepared: &Prepared<'_>, t: &Nodes) -> Result<Nodes, Infeasible> {
    let hot = prepared.hot(t);
    let waveform = prepared.waveform(t, &hot)?;
    Ok(image::<true>(prepared, &prepared.heated_by(waveform, t, &hot)))
}

fn largest(values: &Nodes) -> f64 {
    values.iter().fold(0.0, |largest: f64, value| largest.max(value.abs()))
}

/// Plain passes from ambient upwards: they reach the lowest settled temperature, which is the one a cold start finds.
#[cold]
fn careful(prepared: &Prepared<'_>) -> Result<Solved, Infeasible> {
    let mut t = [prepared.point.ambient; NODES];
    let mut weight: f64 = 1.0;
    let mut last_sign = [0.0; NODES];
    for _ in 0..CAREFUL_PASSES {
        let image = image_at(prepared, &t)?;
        let mut difference = [0.0; NODES];
        for node in 0..NODES {
            difference[node] = image[node] - t[node];
        }
        if largest(&difference) <= SETTLED {
            let gain = loop_gain(prepared, &t)?;
            if gain >= 1.0 {
                return Err(unstable(prepared, &t, gain));
            }
            return at_temperatures(prepared, &t);
        }
        // a difference that changes sign is a swing: halve the steps
        let swings = (0..NODES).any(|node| difference[node] * last_sign[node] < 0.0);
        if swings {
            weight = (0.5 * weight).max(0.05);
        }
        last_sign = difference;
        for node in 0..NODES {
            t[node] += weight * difference[node];
        }
        if !t.iter().all(|t| *t < HOTTEST) {
            let hottest = t.map(|t| if t.is_finite() { t.min(HOTTEST) } else { HOTTEST });
            let gain = loop_gain(prepared, &hottest).unwrap_or(f64::INFINITY);
            return Err(unstable(prepared, &t, gain));
        }
    }
    let gain = loop_gain(prepared, &t).unwrap_or(f64::INFINITY);
    Err(unstable(prepared, &t, gain))
}

fn unstable(prepared: &Prepared<'_>, t: &Nodes, gain: f64) -> Infeasible {
    let hottest = (0..NODES).max_by(|a, b| t[*a].total_cmp(&t[*b])).unwrap_or(HIGH);
    Infeasible::NoStableTemperature { slot: slot_of(hottest, prepared.stage.is_synchronous()), gain }
}

/// Step of the differences that make the loop gain, K.
const GAIN_STEP: f64 = 1e-3;

/// Thermal loop gain (E51): spectral radius of d(image)/dT by central differences.
pub fn loop_gain(prepared: &Prepared<'_>, t: &Nodes) -> Result<f64, Infeasible> {
    // no loss depends on the temperature of the controller: its column is zero
    let mut jacobian = [[0.0; MUTUAL]; MUTUAL];
    for column in 0..MUTUAL {
        if prepared.stage.heat.to_ambient[column].is_none() {
            continue;
        }
        let mut moved = *t;
        moved[column] = t[column] + GAIN_STEP;
        let above = image_at(prepared, &moved)?;
        moved[column] = t[column] - GAIN_STEP;
        let below = image_at(prepared, &moved)?;
        for row in 0..MUTUAL {
            jacobian[row][column] = (above[row] - below[row]) / (2.0 * GAIN_STEP);
        }
    }
    Ok(spectral_radius(jacobian))
}

/// Squarings of the matrix for its spectral radius: they leave an error of some parts in 1e5.
const SQUARINGS: usize = 16;

/// Spectral radius as the limit of |A^m|^(1/m) by squarings: n0 √(n1 √(n2 …)) with the norm n of each square.
fn spectral_radius(mut a: [[f64; MUTUAL]; MUTUAL]) -> f64 {
    let mut norms = [0.0; SQUARINGS];
    for norm in &mut norms {
        *norm = a.as_flattened().iter().fold(0.0, |norm: f64, x| norm.max(x.abs()));
        if *norm == 0.0 {
            return 0.0;
        }
        let scale = 1.0 / *norm;
        let unit = a.map(|row| row.map(|x| x * scale));
        a = unit.map(|row| std::array::from_fn(|column| (0..MUTUAL).map(|k| row[k] * unit[k][column]).sum()));
    }
    norms.iter().rev().fold(1.0, |radius: f64, norm| norm * radius.sqrt())
}

/// Temperature and ledger of a linear regulator: its loss does not depend on its temperature.
pub fn settle_linear(
    regulator: &LinearRegulator,
    output_voltage: f64,
    point: OperatingPoint,
) -> Result<Solved, Infeasible> {
    let ledger = linear::contributions(regulator, output_voltage, &point)?.ledger();
    let rise = regulator.r_th.map_or(0.0, |r_th| r_th / regulator.n * ledger.loss());
    let temperature = point.ambient + rise;
    if temperature >= HOTTEST {
        return Err(Infeasible::NoStableTemperature { slot: Slot::Regulator, gain: 0.0 });
    }
    let mut temperatures = [None; SLOTS];
    temperatures[Slot::Regulator.index()] = Some(temperature);
    let mut held = [false; SLOTS];
    held[Slot::Regulator.index()] = regulator.r_th.is_none();
    Ok(Solved { point, output_voltage, waveform: None, temperatures, held, ledger })
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn spectral_radius_of_known_matrices() {
        let mut a = [[0.0; MUTUAL]; MUTUAL];
        a[0][0] = 0.3;
        a[1][1] = -0.7;
        assert!((spectral_radius(a) - 0.7).abs() < 1e-4);
        // eigenvalues ±√(0.4·0.1)
        let mut b = [[0.0; MUTUAL]; MUTUAL];
        b[0][1] = 0.4;
        b[1][0] = 0.1;
        assert!((spectral_radius(b) - 0.2).abs() < 1e-4);
        assert_eq!(spectral_radius([[0.0; MUTUAL]; MUTUAL]), 0.0);
    }
}
