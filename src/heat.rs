//! Heat (E50, E51): loss and temperature settle together.

use crate::fitted::{HIGH, INDUCTOR, NODES, Nodes, RECTIFIER, Rectifier, SCHOTTKY, slot_of};
use crate::grid::OperatingPoint;
use crate::infeasible::{HOTTEST, Infeasible};
use crate::ledger::{SLOTS, Slot};
use crate::model::{Heated, HeatedRectifier, Prepared, Solved, Temperatures, ledger, linear};
use crate::near::Memory;
use crate::parts::copper::PER_KELVIN;
use crate::parts::linear_regulator::LinearRegulator;

/// Largest movement of any temperature at which the loop ends, K.
pub const SETTLED: f64 = 1e-6;
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
/// Newton steps with estimated slopes, then secants; when that does not settle, or ends where the thermal loop gain is
/// suspicious, plain passes from ambient upwards decide.
#[inline]
pub fn settle(prepared: &Prepared<'_>) -> Result<Solved, Infeasible> {
    let mut search = Search::from_ambient(prepared.point.ambient);
    let mut near = Memory::default();
    for _ in 0..QUICK_PASSES {
        let heated = prepared.heated(&search.t, &mut near)?;
        let image = image(prepared, &heated);
        if search.is_settled(&image) {
            if !search.is_trusted() && loop_gain(prepared, &search.t)? >= 1.0 {
                break;
            }
            prepared.check_times(&heated.waveform)?;
            return Ok(solved(prepared, &search.t, &heated));
        }
        if search.is_fresh() {
            search.slopes = estimated_slopes(prepared, &heated, &search.t);
        }
        if !search.step(&image) {
            break;
        }
    }
    careful(prepared)
}

/// State of the quick search for the settled temperatures.
struct Search {
    t: Nodes,
    /// Temperatures and image of the pass before.
    before: Option<(Nodes, Nodes)>,
    /// d(image)/dT of each node along the last step.
    slopes: Nodes,
}

impl Search {
    #[inline]
    fn from_ambient(ambient: f64) -> Self {
        Search { t: [ambient; NODES], before: None, slopes: [0.0; NODES] }
    }

    #[inline]
    fn is_fresh(&self) -> bool {
        self.before.is_none()
    }

    #[inline]
    fn is_settled(&self, image: &Nodes) -> bool {
        self.t.iter().zip(image).all(|(t, image)| (image - t).abs() <= SETTLED)
    }

    /// True when the slopes leave no doubt that the loop gain is below 1.
    #[inline]
    fn is_trusted(&self) -> bool {
        self.slopes.iter().map(|slope| slope.abs()).sum::<f64>() < SUSPECT
    }

    /// Moves every node to where its line meets; false when the search should give up.
    #[inline]
    fn step(&mut self, image: &Nodes) -> bool {
        if let Some((t_before, image_before)) = &self.before {
            for node in 0..NODES {
                let step = self.t[node] - t_before[node];
                if step.abs() > 1e-3 * SETTLED {
                    self.slopes[node] = (image[node] - image_before[node]) / step;
                }
            }
        }
        self.before = Some((self.t, *image));
        let mut sound = true;
        for ((t, image), slope) in self.t.iter_mut().zip(image).zip(&self.slopes) {
            *t += (image - *t) / (1.0 - slope);
            sound &= slope.abs() < STEEP && *t < HOTTEST;
        }
        sound
    }
}

/// The ledger at temperatures that are given, not settled: "what if everything stayed at 25 °C".
pub fn at_temperatures(prepared: &Prepared<'_>, temperatures: &Nodes) -> Result<Solved, Infeasible> {
    let heated = prepared.heated(temperatures, &mut Memory::default())?;
    prepared.check_times(&heated.waveform)?;
    Ok(solved(prepared, temperatures, &heated))
}

#[inline]
fn solved(prepared: &Prepared<'_>, temperatures: &Nodes, heated: &Heated) -> Solved {
    let waveform = heated.waveform;
    let unheated = prepared.unheated(&waveform);
    Solved {
        point: prepared.point,
        output_voltage: prepared.output_voltage,
        waveform: Some(waveform),
        temperatures: by_slot(prepared, temperatures),
        ledger: ledger(heated, &unheated),
    }
}

fn by_slot(prepared: &Prepared<'_>, temperatures: &Nodes) -> Temperatures {
    let mut slots = [None; SLOTS];
    let synchronous = prepared.stage.is_synchronous();
    let has_schottky = matches!(&prepared.stage.rectifier, Rectifier::Synchronous { schottky: Some(_), .. });
    for (node, temperature) in temperatures.iter().enumerate() {
        let slot = slot_of(node, synchronous);
        let exists = match slot {
            Slot::ParallelSchottky => has_schottky,
            Slot::Controller => prepared.stage.heat.to_ambient[node].is_some(),
            _ => true,
        };
        if exists {
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

/// T_a + R_th P/n + sum of K P of other slots, for every node (E50).
#[inline]
fn image(prepared: &Prepared<'_>, heated: &Heated) -> Nodes {
    let heat = &prepared.stage.heat;
    let watts = heated.node_watts();
    let mut image = [prepared.point.ambient; NODES];
    for node in 0..NODES {
        if let Some(r_th) = heat.to_ambient[node] {
            image[node] += r_th * watts[node];
        }
    }
    if !heat.coupling.is_empty() {
        let synchronous = prepared.stage.is_synchronous();
        for (node, heating, k) in &heat.coupling {
            let source = (0..NODES).find(|node| slot_of(*node, synchronous) == *heating);
            image[*node] +=
                k * source.map_or_else(|| unheated_watts(prepared, heated, *heating), |n| watts[n]);
        }
    }
    image
}

/// Watts of a slot that has no temperature of its own but warms others.
fn unheated_watts(prepared: &Prepared<'_>, heated: &Heated, slot: Slot) -> f64 {
    let unheated = prepared.unheated(&heated.waveform);
    match slot {
        Slot::InputCapacitors => unheated.input_esr.watts,
        Slot::OutputCapacitors => unheated.output_esr.watts,
        Slot::Board => unheated.copper.watts + unheated.sense.watts + unheated.snubber.watts,
        _ => 0.0,
    }
}

/// Main part of d(image)/dT of each node: conduction grows with the resistance, leakage exponentially.
#[inline]
fn estimated_slopes(prepared: &Prepared<'_>, heated: &Heated, t: &Nodes) -> Nodes {
    let stage = prepared.stage;
    let mut slopes: Nodes = [0.0; NODES];
    let relative = |exponent: f64, t_j: f64| exponent / (t_j + 273.15);
    slopes[HIGH] = heated.high_conduction.watts * relative(stage.high_side.hot_exponent, t[HIGH]);
    match (&heated.rectifier, &stage.rectifier) {
        (
            HeatedRectifier::Synchronous { conduction, schottky, .. },
            Rectifier::Synchronous { low_side, schottky: diode },
        ) => {
            slopes[RECTIFIER] = conduction.watts * relative(low_side.hot_exponent, t[RECTIFIER]);
            if let (Some(Some(leakage)), Some(diode)) = (schottky, diode) {
                slopes[SCHOTTKY] = leakage.watts * diode.leakage.map_or(0.0, |law| law.per_kelvin);
            }
        }
        (HeatedRectifier::Diode { leakage, conduction }, Rectifier::Diode(diode)) => {
            let mean = 0.5 * (heated.waveform.valley + heated.waveform.peak);
            let drift =
                diode.forward_voltage(mean, t[RECTIFIER] + 1.0) - diode.forward_voltage(mean, t[RECTIFIER]);
            let growth = diode.leakage.map_or(0.0, |law| law.per_kelvin);
            slopes[RECTIFIER] =
                conduction.share * mean * drift + leakage.map_or(0.0, |leakage| leakage.watts) * growth;
        }
        _ => {}
    }
    let copper = heated.winding.watts + heated.ac_winding.map_or(0.0, |ac| ac.watts);
    slopes[INDUCTOR] = copper * PER_KELVIN / (1.0 + PER_KELVIN * (t[INDUCTOR] - 20.0));
    for (slope, to_ambient) in slopes.iter_mut().zip(&stage.heat.to_ambient) {
        *slope *= to_ambient.unwrap_or(0.0);
    }
    slopes
}

fn largest(values: &Nodes) -> f64 {
    values.iter().fold(0.0, |largest: f64, value| largest.max(value.abs()))
}

/// Plain passes from ambient upwards: they reach the lowest settled temperature, which is the one a cold start finds.
#[cold]
fn careful(prepared: &Prepared<'_>) -> Result<Solved, Infeasible> {
    let mut t = [prepared.point.ambient; NODES];
    let mut weight: f64 = 1.0;
    let mut near = Memory::default();
    let mut last_sign = [0.0; NODES];
    for _ in 0..CAREFUL_PASSES {
        let heated = prepared.heated(&t, &mut near)?;
        let image = image(prepared, &heated);
        let mut difference = [0.0; NODES];
        for node in 0..NODES {
            difference[node] = image[node] - t[node];
        }
        if largest(&difference) <= SETTLED {
            let gain = loop_gain(prepared, &t)?;
            if gain >= 1.0 {
                return Err(unstable(prepared, &t, gain));
            }
            prepared.check_times(&heated.waveform)?;
            return Ok(solved(prepared, &t, &heated));
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
    let mut jacobian = [[0.0; NODES]; NODES];
    for column in 0..NODES {
        if prepared.stage.heat.to_ambient[column].is_none() {
            continue;
        }
        let side = |sign: f64| {
            let mut moved = *t;
            moved[column] += sign * GAIN_STEP;
            prepared.heated(&moved, &mut Memory::default()).map(|heated| image(prepared, &heated))
        };
        let (above, below) = (side(1.0)?, side(-1.0)?);
        for row in 0..NODES {
            jacobian[row][column] = (above[row] - below[row]) / (2.0 * GAIN_STEP);
        }
    }
    Ok(spectral_radius(jacobian))
}

/// Spectral radius as the limit of |A^m|^(1/m), by 16 squarings.
fn spectral_radius(mut a: [[f64; NODES]; NODES]) -> f64 {
    let mut logarithm = 0.0;
    let mut power = 1.0;
    for _ in 0..16 {
        let norm = a.iter().flatten().fold(0.0, |norm: f64, x| norm.max(x.abs()));
        if norm == 0.0 {
            return 0.0;
        }
        logarithm += norm.ln() / power;
        let unit = a.map(|row| row.map(|x| x / norm));
        let mut square = [[0.0; NODES]; NODES];
        for row in 0..NODES {
            for column in 0..NODES {
                square[row][column] = (0..NODES).map(|k| unit[row][k] * unit[k][column]).sum();
            }
        }
        a = square;
        power *= 2.0;
    }
    logarithm.exp()
}

/// Temperature and ledger of a linear regulator: its loss does not depend on its temperature.
pub fn settle_linear(
    regulator: &LinearRegulator,
    output_voltage: f64,
    point: OperatingPoint,
) -> Result<Solved, Infeasible> {
    let ledger = linear(regulator, output_voltage, &point)?.ledger();
    let rise = regulator.r_th.map_or(0.0, |r_th| r_th / regulator.n * ledger.loss());
    let temperature = point.ambient + rise;
    if temperature >= HOTTEST {
        return Err(Infeasible::NoStableTemperature { slot: Slot::Regulator, gain: 0.0 });
    }
    let mut temperatures = [None; SLOTS];
    temperatures[Slot::Regulator.index()] = Some(temperature);
    Ok(Solved { point, output_voltage, waveform: None, temperatures, ledger })
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn spectral_radius_of_known_matrices() {
        let mut a = [[0.0; NODES]; NODES];
        a[0][0] = 0.3;
        a[1][1] = -0.7;
        assert!((spectral_radius(a) - 0.7).abs() < 1e-4);
        // eigenvalues ±√(0.4·0.1)
        let mut b = [[0.0; NODES]; NODES];
        b[0][1] = 0.4;
        b[1][0] = 0.1;
        assert!((spectral_radius(b) - 0.2).abs() < 1e-4);
        assert_eq!(spectral_radius([[0.0; NODES]; NODES]), 0.0);
    }
}
