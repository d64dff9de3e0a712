//! Figures of merit: on-resistance times a gate charge, the shortcut that the full loss is held against.

use crate::candidate::Candidate;
use crate::fitted::{Kind, Rectifier, Stage};
use crate::ledger::Slot;
use crate::stage::StageSheet;

use super::space::Space;
use super::substitutes::Substitutes;

/// The figures of merit of a slot, and what the loss says.
#[derive(Clone, Debug, PartialEq)]
pub struct Merit {
    /// High side or low side.
    pub slot: Slot,
    /// Name, figure in Ω C, loss at the headline in W with this part and the winner's others; least loss first.
    pub parts: Vec<(String, f64, f64)>,
}

impl Merit {
    /// The part with the best figure, when another one has less loss.
    pub fn disagreement(&self) -> Option<(&str, &str, f64)> {
        let (winner, _, least) = self.parts.first()?;
        let (best, _, loss) = self.parts.iter().min_by(|a, b| a.1.total_cmp(&b.1))?;
        (best != winner).then_some((best.as_str(), winner.as_str(), loss - least))
    }
}

/// R_DS(on) Q_GD of the high side and R_DS(on) Q_G of the low side of one stage, at its drive, Ω C; charges as printed.
pub fn figures(stage: &Stage) -> Vec<(Slot, f64)> {
    let Kind::Switched(stage) = &stage.kind else { return Vec::new() };
    let (drive, high) = (&stage.full_drive, &stage.high_side);
    let mut figures = vec![(Slot::HighSide, high.on_resistance.at(drive.v_high) * high.gate_charge.q_gd)];
    if let Rectifier::Synchronous { low_side, .. } = &stage.rectifier {
        let charge = low_side.gate_charge.at(drive.v_low);
        figures.push((Slot::LowSide, low_side.on_resistance.at(drive.v_low) * charge));
    }
    figures
}

/// Those of a slot of MOSFETs that has a choice.
pub fn of(space: &Space<'_>, substitutes: &Substitutes) -> Option<Merit> {
    let slot = substitutes.slot.filter(|slot| matches!(slot, Slot::HighSide | Slot::LowSide))?;
    let figure = |sheet: &StageSheet| {
        let candidate = Candidate::new(space.budget, sheet);
        figures(&candidate.stage).into_iter().find(|(own, _)| *own == slot).map(|(_, figure)| figure)
    };
    let parts = substitutes
        .list
        .iter()
        .filter_map(|other| Some((other.name.clone(), figure(&other.sheet)?, other.loss)));
    let mut parts: Vec<(String, f64, f64)> = parts.collect();
    parts.sort_by(|a, b| a.2.total_cmp(&b.2));
    (parts.len() > 1).then_some(Merit { slot, parts })
}
