//! Ratings as bare numbers: the quick look at a solved point that a long search can afford.
//!
//! [`crate::ratings`] puts the same limits into words; a test holds the two against each other.

use crate::fitted::{Kind, Stage};
use crate::ledger::{ALL_SLOTS, SLOTS, Slot};
use crate::loss::esr::{self, End};
use crate::model::Solved;
use crate::ratings::{BEYOND_BELIEF, saturation_current, temperature_limits};
use crate::sheet::Datum;
use crate::stage::{Circuit, RectifierSheet, StageSheet};
use crate::waveform::Waveform;

/// Ratings of the parts of a stage, all devices of a slot together.
#[derive(Clone, Debug, PartialEq)]
pub struct Limits {
    /// Temperature rating by slot, °C; infinite without one.
    pub temperature: [f64; SLOTS],
    /// Current rating by slot, A: RMS, or the mean of a freewheel diode; infinite without one.
    pub current: [f64; SLOTS],
    /// Peak current at which the inductor saturates, A.
    pub saturation: f64,
    /// Ripple current rating of each kind of capacitor, A each; empty when no kind of the bank has one.
    pub ripple: [Vec<f64>; 2],
}

/// What exceeds its rating: the slot, and the kind of finding that [`crate::ratings`] makes of it.
pub type Exceeded = (Slot, &'static str);

impl Default for Limits {
    fn default() -> Self {
        Limits {
            temperature: [f64::INFINITY; SLOTS],
            current: [f64::INFINITY; SLOTS],
            saturation: f64::INFINITY,
            ripple: [Vec::new(), Vec::new()],
        }
    }
}

impl Limits {
    /// The ratings of a stage that depend on currents and temperatures.
    pub fn of(sheet: &StageSheet) -> Self {
        let mut limits = Limits::default();
        for (slot, limit) in temperature_limits(sheet) {
            limits.temperature[slot.index()] = limit;
        }
        let all = |rating: Option<&Datum>, count: u32| {
            rating.map_or(f64::INFINITY, |rating| rating.value * f64::from(count))
        };
        let current = &mut limits.current;
        match &sheet.circuit {
            Circuit::Linear(regulator) => {
                current[Slot::Regulator.index()] = all(Some(&regulator.sheet.i_out_max), regulator.count);
            }
            Circuit::Switched(stage) => {
                let (high, inductor) = (&stage.high_side, &stage.inductor);
                current[Slot::HighSide.index()] = all(high.sheet.i_d_max.as_ref(), high.count);
                match &stage.rectifier {
                    RectifierSheet::Synchronous { low_side, .. } => {
                        current[Slot::LowSide.index()] = all(low_side.sheet.i_d_max.as_ref(), low_side.count);
                    }
                    RectifierSheet::Diode { freewheel_diode: diode } => {
                        current[Slot::FreewheelDiode.index()] = all(Some(&diode.sheet.i_f_max), diode.count);
                    }
                }
                current[Slot::Inductor.index()] = all(inductor.sheet.i_rms_max.as_ref(), inductor.count);
                limits.saturation = saturation_current(&inductor.sheet)
                    .map_or(f64::INFINITY, |(limit, _)| limit * f64::from(inductor.count));
                limits.ripple = [&stage.input_capacitors, &stage.output_capacitors].map(|bank| {
                    let ratings: Vec<f64> =
                        bank.iter().map(|kind| all(kind.sheet.i_rms_max.as_ref(), 1)).collect();
                    if ratings.iter().any(|rating| rating.is_finite()) { ratings } else { Vec::new() }
                });
            }
        }
        limits
    }

    /// Smallest distance of any temperature to its rating, K; infinite when no part has one.
    pub fn margin(&self, solved: &Solved) -> f64 {
        let margins = self.temperature.iter().zip(&solved.temperatures);
        margins.filter_map(|(limit, t)| Some(limit - (*t)?)).fold(f64::INFINITY, f64::min)
    }

    /// The first rating that a solved point exceeds.
    pub fn exceeded(&self, stage: &Stage, solved: &Solved) -> Option<Exceeded> {
        for (slot, (limit, t)) in ALL_SLOTS.into_iter().zip(self.temperature.iter().zip(&solved.temperatures))
        {
            if let Some(t) = t {
                if t > limit {
                    return Some((slot, "junction_rating"));
                }
                if *t > BEYOND_BELIEF {
                    return Some((slot, "beyond_belief"));
                }
            }
        }
        let above = |slot: Slot, stress: f64| {
            (stress > self.current[slot.index()]).then_some((slot, "current_rating"))
        };
        match (&solved.waveform, &stage.kind) {
            (Some(waveform), Kind::Switched(switched)) => {
                let rms = |share: f64| (share * waveform.mean_square).sqrt();
                if waveform.peak > self.saturation {
                    return Some((Slot::Inductor, "saturation"));
                }
                above(Slot::HighSide, rms(waveform.duty))
                    .or_else(|| above(Slot::LowSide, rms(waveform.off_duty)))
                    .or_else(|| {
                        let mean = waveform.off_duty * 0.5 * (waveform.valley + waveform.peak);
                        above(Slot::FreewheelDiode, mean)
                    })
                    .or_else(|| above(Slot::Inductor, waveform.inductor_square().sqrt()))
                    .or_else(|| {
                        let square = waveform.input_capacitor_square(solved.point.load);
                        self.ripple_above(0, (&switched.input_bank, End::Input), waveform, square)
                    })
                    .or_else(|| {
                        let square = waveform.output_capacitor_square(solved.point.load);
                        self.ripple_above(1, (&switched.output_bank, End::Output), waveform, square)
                    })
            }
            _ => above(Slot::Regulator, solved.point.load),
        }
    }

    fn ripple_above(
        &self,
        which: usize,
        (bank, end): (&crate::parts::capacitor::Bank, End),
        waveform: &Waveform,
        mean_square: f64,
    ) -> Option<Exceeded> {
        let ratings = self.ripple.get(which)?;
        let exceeded = match (bank.kinds.as_slice(), ratings.as_slice()) {
            (_, []) => false,
            ([kind], [rating]) => mean_square.sqrt() / kind.n > *rating,
            (kinds, ratings) => esr::shares(bank, end, waveform, mean_square)
                .iter()
                .zip(kinds)
                .zip(ratings)
                .any(|((share, kind), rating)| share.mean_square.sqrt() / kind.n > *rating),
        };
        let slot = if which == 0 { Slot::InputCapacitors } else { Slot::OutputCapacitors };
        exceeded.then_some((slot, "ripple_current_rating"))
    }
}
