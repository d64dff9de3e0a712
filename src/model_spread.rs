//! What the model leaves open at a point: no tolerance of a part, and kept apart from those.

use serde::Serialize;

use crate::candidate::Candidate;
use crate::fitted::{Kind, Rectifier, Stage, Switched};
use crate::heat;
use crate::loss::overlap::{self, EdgeConditions};
use crate::model::{self, Prepared, Solved};

/// Highest reading of the edge account against a transient solution of the switching cell (E17).
const EDGES_READ_HIGH: f64 = 1.17;
/// Range of the exponent with which recovery charge grows with current (E18).
const EXPONENTS: [f64; 2] = [0.5, 1.0];

/// A mechanism that another model would book otherwise.
#[derive(Clone, Debug, PartialEq, Serialize)]
pub struct ModelTerm {
    /// Which mechanism.
    pub mechanism: &'static str,
    /// Lowest change of the loss, W; zero or below.
    pub low: f64,
    /// Highest change of the loss, W; zero or above.
    pub high: f64,
    /// Where the two ends come from.
    pub basis: &'static str,
}

/// Terms of a solved point.
pub fn terms(candidate: &Candidate<'_>, solved: &Solved) -> Vec<ModelTerm> {
    let stage = candidate.fitted(solved.point);
    let Kind::Switched(switched) = &stage.kind else { return Vec::new() };
    edges(switched, stage.output_voltage, solved).into_iter().chain(recovery(&stage, solved)).collect()
}

/// Overlap and output charge of the high side: down to what a transient solution found at the least, up to the textbook sum.
fn edges(stage: &Switched, output_voltage: f64, solved: &Solved) -> Option<ModelTerm> {
    let prepared = Prepared::new(stage, output_voltage, solved.point);
    let heated = prepared.heated(&heat::nodes_of(&prepared, solved)).ok()?;
    let waveform = heated.waveform;
    let conditions = EdgeConditions {
        v_in: solved.point.input_voltage,
        i_on: waveform.valley.max(0.0),
        i_off: waveform.peak,
        node_energy: prepared.node_energy,
        surplus_current: f64::INFINITY,
        frequency: waveform.frequency,
    };
    let booked = heated.overlap.watts + heated.output_charge.watts;
    let textbook = overlap::textbook(&conditions, heated.overlap.edges) + heated.output_charge.watts;
    Some(ModelTerm {
        mechanism: "overlap",
        low: booked / EDGES_READ_HIGH - booked,
        high: (textbook - booked).max(0.0),
        basis: "from the lowest reading of a transient solution up to the textbook sum of overlap and output charge (E17)",
    })
}

/// Recovery with the exponents of the literature, when a diode recovers here.
fn recovery(stage: &Stage, solved: &Solved) -> Option<ModelTerm> {
    let booked = solved.ledger.get(crate::ledger::Account::HighSideRecovery);
    if booked <= 0.0 {
        return None;
    }
    let mut changes = EXPONENTS.iter().map(|exponent| {
        let mut stage = stage.clone();
        let Kind::Switched(switched) = &mut stage.kind else { return 0.0 };
        let law = match &mut switched.rectifier {
            Rectifier::Synchronous { low_side, .. } => low_side.recovery.as_mut(),
            Rectifier::Diode(diode) => diode.recovery.as_mut(),
        };
        if let Some(law) = law {
            law.exponent = *exponent;
        }
        model::evaluate(&stage, solved.point).map_or(0.0, |other| other.loss() - solved.loss())
    });
    let (first, second) = (changes.next()?, changes.next()?);
    Some(ModelTerm {
        mechanism: "recovery",
        low: first.min(second).min(0.0),
        high: first.max(second).max(0.0),
        basis: "charge growing with the current to the power of 0.5 to 1 (E18)",
    })
}
