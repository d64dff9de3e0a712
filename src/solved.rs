//! A solved point: what the model gives back.

use crate::grid::OperatingPoint;
use crate::ledger::Ledger;
use crate::waveform::Waveform;

/// A solved point: waveform, temperatures and ledger.
#[derive(Clone, Debug, PartialEq)]
pub struct Solved {
    /// Where.
    pub point: OperatingPoint,
    /// V_OUT, V.
    pub output_voltage: f64,
    /// Currents and duties; a linear stage has none.
    pub waveform: Option<Waveform>,
    /// Temperature of each slot that has one, °C.
    pub temperatures: Temperatures,
    /// Slots that stay at ambient because their thermal resistance is unknown: their temperature is no result.
    pub held: [bool; crate::ledger::SLOTS],
    /// Watts of every account.
    pub ledger: Ledger,
}

/// Temperatures by slot, °C; `None` for slots without a temperature of their own.
pub type Temperatures = [Option<f64>; crate::ledger::SLOTS];

impl Solved {
    /// V_OUT I_OUT, W.
    pub fn output_power(&self) -> f64 {
        self.output_voltage * self.point.load
    }

    /// Loss: the sum of the ledger, W.
    pub fn loss(&self) -> f64 {
        self.ledger.loss()
    }

    /// Output power plus loss, W (E60).
    pub fn input_power(&self) -> f64 {
        self.output_power() + self.loss()
    }

    /// Output over input power; undefined without load.
    pub fn efficiency(&self) -> Option<f64> {
        let (output, input) = (self.output_power(), self.input_power());
        (output > 0.0).then(|| output / input)
    }

    /// The hottest slot and its temperature, °C, of those whose thermal resistance is known.
    pub fn hottest(&self) -> Option<(crate::ledger::Slot, f64)> {
        let known = crate::ledger::ALL_SLOTS
            .into_iter()
            .filter(|slot| !self.held[slot.index()])
            .filter_map(|slot| self.temperatures[slot.index()].map(|temperature| (slot, temperature)));
        known.max_by(|a, b| a.1.total_cmp(&b.1))
    }
}
