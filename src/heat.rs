//! Heat (E50, E51): loss and temperature settle together.

use crate::fitted::{HIGH, INDUCTOR, NODES, Nodes, RECTIFIER, Rectifier, SCHOTTKY, slot_of};
use crate::grid::OperatingPoint;
use crate::infeasible::{HOTTEST, Infeasible};
use crate::ledger::{SLOTS, Slot};
use crate::model::{Contributions, Heated, HeatedRectifier, Prepared, Solved, Temperatures, linear};
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
pub fn settle(prepared: &Prepared<'_>) -> Result<Solved, Infeasible> {
    let (temperatures, heated) = match quick(prepared)? {
        Some(found) => found,
        None => careful(prepared)?,
    };
    prepared.check_times(&heated.waveform)?;
    Ok(solved(prepared, &temperatures, heated))
}

/// The ledger at temperatures that are given, not settled: "what if everything stayed at 25 °C".
pub fn at_temperatures(prepared: &Prepared<'_>, temperatures: &Nodes) -> Result<Solved, Infeasible> {
    let heated = prepared.heated(temperatures)?;
    prepared.check_times(&heated.waveform)?;
    Ok(solved(prepared, temperatures, heated))
}

fn solved(prepared: &Prepared<'_>, temperatures: &Nodes, heated: Heated) -> Solved {
    let waveform = heated.waveform;
    let contributions = Contributions { heated, unheated: prepared.unheated(&waveform) };
    Solved {
        point: prepared.point,
        output_voltage: prepared.output_voltage,
        waveform: Some(waveform),
        temperatures: by_slot(prepared, temperatures),
        ledger: contributions.ledger(),
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
        (HeatedRectifier::Diode { leakage: Some(leakage), .. }, Rectifier::Diode(diode)) => {
            slopes[RECTIFIER] = leakage.watts * diode.leakage.map_or(0.0, |law| law.per_kelvin);
        }
        _ => {}
    }
    let copper = heated.winding.watts + heated.ac_winding.map_or(0.0, |ac| ac.watts);
    slopes[INDUCTOR] = copper * PER_KELVIN / (1.0 + PER_KELVIN * (t[INDUCTOR] - 20.0));
    for node in 0..NODES {
        slopes[node] *= stage.heat.to_ambient[node].unwrap_or(0.0);
    }
    slopes
}

fn largest(values: &Nodes) -> f64 {
    values.iter().fold(0.0, |largest: f64, value| largest.max(value.abs()))
}

/// Newton steps with estimated slopes, then secants. `None` when it does not settle or its end looks unstable.
#[inline]
fn quick(prepared: &Prepared<'_>) -> Result<Option<(Nodes, Heated)>, Infeasible> {
    let mut t = [prepared.point.ambient; NODES];
    let mut before: Option<(Nodes, Nodes)> = None;
    let mut slopes: Nodes = [0.0; NODES];
    for _ in 0..QUICK_PASSES {
        let heated = prepared.heated(&t)?;
        let image = image(prepared, &heated);
        let mut moved = 0.0_f64;
        for node in 0..NODES {
            moved = moved.max((image[node] - t[node]).abs());
        }
        if moved <= SETTLED {
            let stable = slopes.iter().map(|slope| slope.abs()).sum::<f64>() < SUSPECT
                || loop_gain(prepared, &t)? < 1.0;
            return Ok((stable && largest(&t) < HOTTEST).then_some((t, heated)));
        }
        match &before {
            None => slopes = estimated_slopes(prepared, &heated, &t),
            Some((t_before, image_before)) => {
                for node in 0..NODES {
                    let step = t[node] - t_before[node];
                    if step.abs() > 1e-3 * SETTLED {
                        slopes[node] = (image[node] - image_before[node]) / step;
                    }
                }
            }
        }
        before = Some((t, image));
        for node in 0..NODES {
            let slope = slopes[node];
            if !(slope.abs() < STEEP) {
                return Ok(None);
            }
            t[node] += (image[node] - t[node]) / (1.0 - slope);
        }
        if !(largest(&t) < HOTTEST) {
            return Ok(None);
        }
    }
    Ok(None)
}

/// Plain passes from ambient upwards: they reach the lowest settled temperature, which is the one a cold start finds.
fn careful(prepared: &Prepared<'_>) -> Result<(Nodes, Heated), Infeasible> {
    let mut t = [prepared.point.ambient; NODES];
    let mut weight: f64 = 1.0;
    let mut last_sign = [0.0; NODES];
    for _ in 0..CAREFUL_PASSES {
        let heated = prepared.heated(&t)?;
        let image = image(prepared, &heated);
        let mut difference = [0.0; NODES];
        for node in 0..NODES {
            difference[node] = image[node] - t[node];
        }
        if largest(&difference) <= SETTLED {
            let gain = loop_gain(prepared, &t)?;
            if gain < 1.0 {
                return Ok((t, heated));
            }
            return Err(unstable(prepared, &t, gain));
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
        if !(largest(&t) < HOTTEST) {
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
            prepared.heated(&moved).map(|heated| image(prepared, &heated))
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
    if !(temperature < HOTTEST) {
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
