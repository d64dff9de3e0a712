//! Findings: what a reader should know beside a number. Data here; the wording of a place is the renderer's.

use std::fmt;

use crate::fitted::{Kind, Rectifier, Stage, Switched};
use crate::gaps::{Effect, Gaps, RECOVERY_EXPONENT};
use crate::ledger::{Account, Mechanism, Slot};
use crate::sheet::BoardSheet;
use crate::stage::{Circuit, LightLoad, RectifierSheet, StageSheet};
use crate::values;

/// How much a finding matters.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash, PartialOrd, Ord)]
pub enum Severity {
    /// An assumption.
    Note,
    /// A derating or a check that is missed.
    Warning,
    /// A rating that is exceeded.
    Critical,
}

impl Severity {
    /// Name in outputs.
    pub const fn name(self) -> &'static str {
        match self {
            Severity::Note => "note",
            Severity::Warning => "warning",
            Severity::Critical => "critical",
        }
    }

    /// Mark beside a number.
    pub const fn mark(self) -> &'static str {
        match self {
            Severity::Note => "*",
            Severity::Warning => "!",
            Severity::Critical => "!!",
        }
    }
}

/// One finding on a slot of a stage.
#[derive(Clone, Debug, PartialEq, serde::Serialize)]
pub struct Finding {
    /// What it is about: `voltage_derating`.
    pub kind: &'static str,
    /// Which slot; the name of the files.
    #[serde(serialize_with = "slot_name")]
    pub slot: Slot,
    /// How much it matters.
    #[serde(serialize_with = "severity_name")]
    pub severity: Severity,
    /// In words, with numbers and units.
    pub text: String,
}

fn slot_name<S: serde::Serializer>(slot: &Slot, serializer: S) -> Result<S::Ok, S::Error> {
    serializer.serialize_str(slot.name())
}

fn severity_name<S: serde::Serializer>(severity: &Severity, serializer: S) -> Result<S::Ok, S::Error> {
    serializer.serialize_str(severity.name())
}

impl Finding {
    /// A finding in words.
    pub fn new(severity: Severity, kind: &'static str, slot: Slot, text: impl Into<String>) -> Self {
        Finding { kind, slot, severity, text: text.into() }
    }
}

/// A mechanism that cannot be computed for want of a datum.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash, PartialOrd, Ord)]
pub struct NotModelled {
    /// Slot in which the watts would be booked.
    pub slot: Slot,
    /// What is not modelled, or only in part.
    pub mechanism: Mechanism,
    /// The missing key.
    pub needs: &'static str,
    /// Slot of the part that lacks the key.
    pub lacking: Slot,
}

impl fmt::Display for NotModelled {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        write!(f, "{} of {}: needs {}", self.mechanism.words(), self.slot.words(), self.needs)?;
        if self.lacking == self.slot { Ok(()) } else { write!(f, " of {}", self.lacking.words()) }
    }
}

/// Mechanisms of a stage that lack data (E60): listed, never booked as 0 W.
pub fn not_modelled(stage: &Stage) -> Vec<NotModelled> {
    let Kind::Switched(stage) = &stage.kind else { return Vec::new() };
    let mut missing = Vec::new();
    let mut need = |absent: bool, slot, mechanism, needs| {
        if absent {
            missing.push(NotModelled { slot, mechanism, needs, lacking: slot });
        }
    };
    need(stage.high_side.q_oss.is_none(), Slot::HighSide, Mechanism::OutputCharge, "q_oss");
    match &stage.rectifier {
        Rectifier::Synchronous { low_side, schottky } => {
            need(low_side.q_oss.is_none(), Slot::LowSide, Mechanism::OutputCharge, "q_oss");
            if let Some(diode) = schottky {
                need(diode.q_c.is_none(), Slot::ParallelSchottky, Mechanism::OutputCharge, "q_c");
                need(diode.leakage.is_none(), Slot::ParallelSchottky, Mechanism::Leakage, "i_r");
            }
        }
        Rectifier::Diode(diode) => {
            need(diode.q_c.is_none(), Slot::FreewheelDiode, Mechanism::OutputCharge, "q_c");
            need(diode.leakage.is_none(), Slot::FreewheelDiode, Mechanism::Leakage, "i_r");
        }
    }
    need(!knows_node_charge(stage), Slot::Inductor, Mechanism::Ringing, "q_oss");
    need(stage.inductor.ac_per_root_hertz.is_none(), Slot::Inductor, Mechanism::AcWinding, "r_ac");
    need(stage.inductor.core.is_none(), Slot::Inductor, Mechanism::Core, "core");
    need(stage.input_bank.kinds.is_empty(), Slot::InputCapacitors, Mechanism::Esr, "input_capacitors");
    need(stage.output_bank.kinds.is_empty(), Slot::OutputCapacitors, Mechanism::Esr, "output_capacitors");
    if let Rectifier::Synchronous { low_side, schottky: None } = &stage.rectifier
        && low_side.recovery.is_none()
    {
        // the body diode of the low side recovers in the high side
        let (slot, mechanism, lacking) = (Slot::HighSide, Mechanism::Recovery, Slot::LowSide);
        missing.push(NotModelled { slot, mechanism, needs: "q_rr", lacking });
    }
    missing
}

/// True when the charge of any device on the switch node is known.
fn knows_node_charge(stage: &Switched) -> bool {
    let rectifier = match &stage.rectifier {
        Rectifier::Synchronous { low_side, schottky } => {
            low_side.q_oss.is_some() || schottky.as_ref().is_some_and(|diode| diode.q_c.is_some())
        }
        Rectifier::Diode(diode) => diode.q_c.is_some(),
    };
    rectifier || stage.high_side.q_oss.is_some()
}

/// Accounts that a stage books to: those of its slots less those without any data.
pub fn accounts(stage: &Stage) -> Vec<Account> {
    let missing = not_modelled(stage);
    let in_stage = |account: &Account| match &stage.kind {
        Kind::Linear(_) => account.slot() == Slot::Regulator,
        Kind::Switched(stage) => match (account.slot(), &stage.rectifier) {
            (Slot::Regulator, _) => false,
            (Slot::FreewheelDiode, rectifier) => matches!(rectifier, Rectifier::Diode(_)),
            (Slot::LowSide, Rectifier::Diode(_)) => false,
            (Slot::LowSide, Rectifier::Synchronous { schottky: Some(_), .. }) => {
                *account != Account::LowSideDeadTime
            }
            (Slot::ParallelSchottky, rectifier) => {
                matches!(rectifier, Rectifier::Synchronous { schottky: Some(_), .. })
            }
            (_, Rectifier::Diode(diode)) => match account {
                Account::HighSideDeadTime => false,
                Account::HighSideRecovery => diode.recovery.is_some(),
                _ => true,
            },
            (_, Rectifier::Synchronous { low_side, schottky }) => {
                *account != Account::HighSideRecovery || (schottky.is_none() && low_side.recovery.is_some())
            }
        },
    };
    // the devices on the node share output charge: what one lacks, another may still have
    let in_part = match &stage.kind {
        Kind::Switched(stage) => knows_node_charge(stage),
        Kind::Linear(_) => false,
    };
    let has_data = |account: &Account| {
        let lacking = |m: &NotModelled| {
            m.slot == account.slot()
                && m.mechanism == account.mechanism()
                && !(in_part && m.mechanism == Mechanism::OutputCharge)
        };
        !missing.iter().any(lacking)
    };
    crate::ledger::ALL_ACCOUNTS
        .iter()
        .map(|row| row.0)
        .filter(|account| in_stage(account) && has_data(account))
        .collect()
}

/// What the model assumes about the parts of a stage, whatever the point.
pub fn assumptions(stage: &StageSheet, board: &BoardSheet) -> Vec<Finding> {
    let mut notes = Vec::new();
    // only one diode of a stage recovers, and none beside a Schottky
    let recovers_in = match &stage.circuit {
        Circuit::Switched(switched) => match &switched.rectifier {
            RectifierSheet::Synchronous { parallel_schottky: None, .. } => Some(Slot::LowSide),
            RectifierSheet::Synchronous { .. } => None,
            RectifierSheet::Diode { .. } => Some(Slot::FreewheelDiode),
        },
        Circuit::Linear(_) => None,
    };
    let mut of = |slot: Slot, sheet: &dyn Gaps| {
        let assumed = sheet.gaps().into_iter().filter(|gap| {
            let recovers = recovers_in.is_some_and(|diode| diode == slot);
            gap.effect == Effect::Assumed && (gap.kind != RECOVERY_EXPONENT || recovers)
        });
        notes.extend(assumed.map(|gap| {
            let text =
                if gap.key.is_empty() { gap.text.to_owned() } else { format!("{}: {}", gap.key, gap.text) };
            Finding::new(Severity::Note, gap.kind, slot, text)
        }));
    };
    match &stage.circuit {
        Circuit::Linear(regulator) => of(Slot::Regulator, &*regulator.sheet),
        Circuit::Switched(stage) => {
            of(Slot::HighSide, &*stage.high_side.sheet);
            match &stage.rectifier {
                RectifierSheet::Synchronous { low_side, parallel_schottky } => {
                    of(Slot::LowSide, &*low_side.sheet);
                    parallel_schottky.iter().for_each(|diode| of(Slot::ParallelSchottky, &*diode.sheet));
                }
                RectifierSheet::Diode { freewheel_diode } => {
                    of(Slot::FreewheelDiode, &*freewheel_diode.sheet)
                }
            }
            of(Slot::Inductor, &*stage.inductor.sheet);
            of(Slot::Controller, &*stage.controller.sheet);
        }
    }
    if let Circuit::Switched(switched) = &stage.circuit {
        let sheet = &switched.controller.sheet;
        if matches!(switched.light_load, LightLoad::PulseSkipping(_)) && sheet.i_q_sleep.is_none() {
            let text = "no i_q_sleep: i_q is assumed while pulses are skipped";
            notes.push(Finding::new(Severity::Note, "i_q_sleep_assumed", Slot::Controller, text));
        }
    }
    let paths = [&board.input_path, &board.load_path];
    if matches!(stage.circuit, Circuit::Linear(_))
        && paths.iter().any(|path| path.as_ref().is_some_and(|r| r.value > 0.0))
    {
        let text = "input_path and load_path of the board are not booked to a linear stage";
        notes.push(Finding::new(Severity::Note, "board_not_booked", Slot::Regulator, text));
    }
    for value in values::all(stage, board) {
        if value.datum.typical_is_assumed() && value.modelled {
            let from = match (value.datum.min, value.datum.max) {
                (Some(_), Some(_)) => "the middle of min and max",
                (None, Some(_)) => "max",
                _ => "min",
            };
            let text = format!("no typical value of {}: {from} is used", value.path);
            notes.push(Finding::new(Severity::Note, "typical_assumed", value.slot, text));
        }
    }
    notes
}
