//! Findings: what a reader should know beside a number. Data here; the wording of a place is the renderer's.

use std::fmt;

use crate::fitted::{Kind, Rectifier, Stage};
use crate::ledger::{Account, Mechanism, Slot};
use crate::sheet::common::Descriptive;
use crate::sheet::{BoardSheet, Datum, InductorSheet, MosfetSheet};
use crate::stage::{Circuit, RectifierSheet, StageSheet, SwitchedSheet};
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
    let has_data = |account: &Account| {
        let lacking = |m: &NotModelled| {
            m.slot == account.slot()
                && m.mechanism == account.mechanism()
                && m.mechanism != Mechanism::OutputCharge
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
    match &stage.circuit {
        Circuit::Linear(regulator) => {
            no_thermal_resistance(Slot::Regulator, &regulator.sheet.r_th_ja, &mut notes);
        }
        Circuit::Switched(switched) => of_switched(switched, &mut notes),
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

fn of_switched(stage: &SwitchedSheet, notes: &mut Vec<Finding>) {
    let mut note = |kind, slot, text: String| notes.push(Finding::new(Severity::Note, kind, slot, text));
    let mut mosfet = |slot: Slot, sheet: &MosfetSheet| {
        if sheet.r_ds_on_hot.is_none() {
            note("hot_ratio_assumed", slot, "no r_ds_on_hot: 1.5 at 125 °C assumed".into());
        }
        if sheet.q_gs2_is_estimated() {
            note("q_gs2_estimated", slot, "no q_gs2: q_gs (1 - v_gs_th/v_gs_plateau) estimated".into());
        }
        if sheet.r_g.is_none() {
            note("r_g_assumed", slot, "no r_g: 1 Ω assumed".into());
        }
        if sheet.q_rr.as_ref().is_some_and(|q_rr| q_rr.exponent.is_none()) {
            note("recovery_exponent_assumed", slot, "no exponent of q_rr: 0.5 assumed".into());
        }
        no_thermal_resistance_text(sheet.r_th_ja.as_ref())
            .into_iter()
            .for_each(|text| note("at_ambient", slot, text));
    };
    mosfet(Slot::HighSide, &stage.high_side.sheet);
    let diode = match &stage.rectifier {
        RectifierSheet::Synchronous { low_side, parallel_schottky } => {
            mosfet(Slot::LowSide, &low_side.sheet);
            parallel_schottky.as_ref().map(|placed| (Slot::ParallelSchottky, placed))
        }
        RectifierSheet::Diode { freewheel_diode } => Some((Slot::FreewheelDiode, freewheel_diode)),
    };
    if let Some((slot, placed)) = diode {
        let sheet = &placed.sheet;
        if sheet.v_f.len() < 2 {
            note("v_f_without_drift", slot, "v_f at one temperature only: no drift".into());
        }
        let temperatures = |first: &f64| sheet.i_r.iter().any(|point| point.t_j.value != *first);
        if sheet.i_r.first().is_some_and(|point| !temperatures(&point.t_j.value)) {
            note(
                "leakage_slope_assumed",
                slot,
                "i_r at one temperature only: doubling per 10 K assumed".into(),
            );
        }
        if sheet.q_rr.as_ref().is_some_and(|q_rr| q_rr.exponent.is_none()) {
            note("recovery_exponent_assumed", slot, "no exponent of q_rr: 0.5 assumed".into());
        }
        no_thermal_resistance_text(sheet.r_th_ja.as_ref())
            .into_iter()
            .for_each(|text| note("at_ambient", slot, text));
    }
    inductor(&stage.inductor.sheet, &mut note);
    let controller = &stage.controller.sheet;
    let low_driver = controller.low_side.as_ref().is_some_and(|driver| driver.is_estimated());
    if controller.high_side.is_estimated() || low_driver {
        let text = "driver resistance from the peak current: v_drive / i".to_owned();
        note("driver_estimated", Slot::Controller, text);
    }
}

fn inductor(sheet: &InductorSheet, note: &mut impl FnMut(&'static str, Slot, String)) {
    if sheet.r_th.is_none() && sheet.temperature_rise.is_some() {
        note("r_th_from_rise", Slot::Inductor, "r_th from the printed temperature rise and dcr".into());
    }
}

fn no_thermal_resistance(slot: Slot, r_th: &Option<Datum>, notes: &mut Vec<Finding>) {
    if let Some(text) = no_thermal_resistance_text(r_th.as_ref()) {
        notes.push(Finding::new(Severity::Note, "at_ambient", slot, text));
    }
}

fn no_thermal_resistance_text(r_th: Option<&Datum>) -> Option<String> {
    r_th.is_none().then(|| "no r_th_ja: the part stays at ambient".to_owned())
}

/// True when a part says where its values come from.
pub fn has_source(descriptive: &Descriptive) -> bool {
    descriptive.source.as_ref().is_some_and(|source| !source.trim().is_empty())
}
