//! Points as the JSON contract has them.

use serde::Serialize;
use serde::ser::{SerializeMap, SerializeSeq, Serializer};

use crate::budget::Limit;
use crate::candidate::{self, Candidate};
use crate::compare::Comparison;
use crate::findings::{Finding, NotModelled, Severity};
use crate::fitted::Kind;
use crate::grid::OperatingPoint;
use crate::infeasible::Infeasible;
use crate::ledger::{ALL_SLOTS, Slot};
use crate::loss::esr::{self, End};
use crate::model::{self, Solved};

/// One point of one stage: solved, or with the reason why it cannot be built.
#[derive(Clone, Debug)]
pub struct Record<'a> {
    /// The stage.
    pub candidate: &'a Candidate<'a>,
    /// Where.
    pub point: OperatingPoint,
    /// What came out.
    pub outcome: Result<Detail, Infeasible>,
}

/// A solved point with what is reported beside it.
#[derive(Clone, Debug)]
pub struct Detail {
    /// Waveform, temperatures, ledger.
    pub solved: Solved,
    /// Thermal loop gain.
    pub loop_gain: f64,
    /// Findings of this point.
    pub findings: Vec<Finding>,
}

impl Detail {
    /// True when a part is used beyond a rating.
    pub fn exceeds_a_rating(&self) -> bool {
        self.findings.iter().any(|finding| finding.severity == Severity::Critical)
    }
}

impl<'a> Record<'a> {
    /// Evaluates a point with all that is reported.
    pub fn of(candidate: &'a Candidate<'a>, point: OperatingPoint) -> Self {
        let stage = candidate.fitted(point);
        let outcome = model::evaluate(&stage, point).map(|solved| Detail {
            loop_gain: candidate::loop_gain(&stage, &solved),
            findings: candidate.findings_of(&stage, &solved),
            solved,
        });
        Record { candidate, point, outcome }
    }
}

impl Serialize for Record<'_> {
    fn serialize<S: Serializer>(&self, serializer: S) -> Result<S::Ok, S::Error> {
        let mut map = serializer.serialize_map(None)?;
        let (candidate, point) = (self.candidate, &self.point);
        map.serialize_entry("stage", candidate.name())?;
        map.serialize_entry("input_voltage", &point.input_voltage)?;
        map.serialize_entry("load", &point.load)?;
        map.serialize_entry("ambient", &point.ambient)?;
        if !candidate.sheet.is_linear() {
            map.serialize_entry("switching_frequency", &point.switching_frequency)?;
        }
        match &self.outcome {
            Err(reason) => {
                map.serialize_entry("mode", "infeasible")?;
                map.serialize_entry("reason", &reason.to_string())?;
                map.serialize_entry("not_modelled", &Missing(&candidate.not_modelled))?;
            }
            Ok(detail) => solved_entries(&mut map, candidate, detail)?,
        }
        map.end()
    }
}

fn solved_entries<M: SerializeMap>(
    map: &mut M,
    candidate: &Candidate<'_>,
    detail: &Detail,
) -> Result<(), M::Error> {
    let solved = &detail.solved;
    match &solved.waveform {
        None => map.serialize_entry("mode", "linear")?,
        Some(waveform) => {
            map.serialize_entry("mode", waveform.mode.name())?;
            map.serialize_entry("duty", &waveform.duty)?;
            map.serialize_entry("ripple", &waveform.ripple())?;
            map.serialize_entry("peak", &waveform.peak)?;
            map.serialize_entry("valley", &waveform.valley)?;
            map.serialize_entry("effective_frequency", &waveform.frequency)?;
        }
    }
    map.serialize_entry("input_power", &solved.input_power())?;
    map.serialize_entry("output_power", &solved.output_power())?;
    map.serialize_entry("loss", &solved.loss())?;
    map.serialize_entry("efficiency", &solved.efficiency())?;
    map.serialize_entry("entries", &Entries(candidate, solved))?;
    let banks = banks(candidate, solved);
    if !banks.is_empty() {
        map.serialize_entry("banks", &banks)?;
    }
    map.serialize_entry("not_modelled", &Missing(&candidate.not_modelled))?;
    map.serialize_entry("temperatures", &Temperatures(solved))?;
    map.serialize_entry("thermal_loop_gain", &detail.loop_gain)?;
    map.serialize_entry("findings", &AllFindings(&detail.findings, &candidate.assumptions))
}

/// Entries of the ledger, one an account.
struct Entries<'a>(&'a Candidate<'a>, &'a Solved);

#[derive(Serialize)]
struct Entry<'a> {
    slot: &'static str,
    part: &'a str,
    mechanism: &'static str,
    watts: f64,
}

impl Serialize for Entries<'_> {
    fn serialize<S: Serializer>(&self, serializer: S) -> Result<S::Ok, S::Error> {
        let Entries(candidate, solved) = self;
        let mut list = serializer.serialize_seq(Some(candidate.accounts.len()))?;
        for account in &candidate.accounts {
            list.serialize_element(&Entry {
                slot: account.slot().name(),
                part: candidate.part_names[account.slot().index()].as_deref().unwrap_or(""),
                mechanism: account.mechanism().name(),
                watts: solved.ledger.get(*account),
            })?;
        }
        list.end()
    }
}

/// One kind of capacitor of a bank of several kinds: its share of the bank's entry.
#[derive(Clone, Debug, PartialEq, Serialize)]
pub struct BankShare {
    /// Which bank.
    pub slot: &'static str,
    /// Name of the kind.
    pub part: String,
    /// W
    pub watts: f64,
    /// RMS current of each capacitor, A.
    pub rms_each: f64,
}

/// Shares of banks that consist of several kinds (E40).
pub fn banks(candidate: &Candidate<'_>, solved: &Solved) -> Vec<BankShare> {
    let mut list = Vec::new();
    let fitted = candidate.fitted(solved.point);
    let (Kind::Switched(stage), Some(waveform)) = (&fitted.kind, &solved.waveform) else {
        return list;
    };
    let load = solved.point.load;
    let ends = [
        (Slot::InputCapacitors, &stage.input_bank, End::Input, waveform.input_capacitor_square(load)),
        (Slot::OutputCapacitors, &stage.output_bank, End::Output, waveform.output_capacitor_square(load)),
    ];
    let parts = candidate.sheet.parts();
    for (slot, bank, end, mean_square) in ends {
        if bank.kinds.len() < 2 {
            continue;
        }
        let names = parts.iter().filter(|part| part.slot == slot);
        let shares = esr::shares(bank, end, waveform, mean_square);
        for ((share, kind), part) in shares.iter().zip(&bank.kinds).zip(names) {
            list.push(BankShare {
                slot: slot.name(),
                part: part.name.to_owned(),
                watts: share.watts,
                rms_each: share.mean_square.sqrt() / kind.n,
            });
        }
    }
    list
}

/// Mechanisms that lack data.
pub struct Missing<'a>(pub &'a [NotModelled]);

#[derive(Serialize)]
struct MissingEntry {
    lacking: &'static str,
    slot: &'static str,
    mechanism: &'static str,
    needs: &'static str,
}

impl Serialize for Missing<'_> {
    fn serialize<S: Serializer>(&self, serializer: S) -> Result<S::Ok, S::Error> {
        serializer.collect_seq(self.0.iter().map(|missing| MissingEntry {
            slot: missing.slot.name(),
            lacking: missing.lacking.name(),
            mechanism: missing.mechanism.name(),
            needs: missing.needs,
        }))
    }
}

struct Temperatures<'a>(&'a Solved);

impl Serialize for Temperatures<'_> {
    fn serialize<S: Serializer>(&self, serializer: S) -> Result<S::Ok, S::Error> {
        let known = ALL_SLOTS.iter().filter_map(|slot| {
            self.0.temperatures[slot.index()].map(|temperature| (slot.name(), temperature))
        });
        serializer.collect_map(known)
    }
}

struct AllFindings<'a>(&'a [Finding], &'a [Finding]);

impl Serialize for AllFindings<'_> {
    fn serialize<S: Serializer>(&self, serializer: S) -> Result<S::Ok, S::Error> {
        serializer.collect_seq(self.0.iter().chain(self.1))
    }
}

/// What became of the requirements, stage by stage.
pub struct Judgements<'a>(pub &'a Comparison<'a>);

#[derive(Serialize)]
struct JudgementEntry<'a> {
    stage: &'a str,
    requirement: &'static str,
    limit: f64,
    #[serde(skip_serializing_if = "Option::is_none")]
    input_voltage: Option<f64>,
    #[serde(skip_serializing_if = "Option::is_none")]
    load: Option<f64>,
    #[serde(skip_serializing_if = "Option::is_none")]
    ambient: Option<f64>,
    #[serde(skip_serializing_if = "Option::is_none")]
    switching_frequency: Option<f64>,
    met: bool,
    value: Option<f64>,
    #[serde(skip_serializing_if = "Option::is_none")]
    reason: Option<String>,
}

impl Serialize for Judgements<'_> {
    fn serialize<S: Serializer>(&self, serializer: S) -> Result<S::Ok, S::Error> {
        let stages = self.0.candidates.iter().zip(&self.0.judgements);
        serializer.collect_seq(stages.flat_map(|(candidate, judgements)| {
            judgements.iter().map(move |judgement| {
                let (requirement, limit) = match judgement.requirement.limit {
                    Limit::EfficiencyMin(limit) => ("efficiency_min", limit),
                    Limit::JunctionMarginMin(limit) => ("junction_margin_min", limit),
                    Limit::LossMax(limit) => ("loss_max", limit),
                };
                let at = &judgement.requirement.at;
                let outcome = judgement.decisive.as_ref().map(|(_, outcome)| outcome);
                JudgementEntry {
                    stage: candidate.name(),
                    requirement,
                    limit,
                    input_voltage: at.input_voltage,
                    load: at.load,
                    ambient: at.ambient,
                    switching_frequency: at.switching_frequency,
                    met: judgement.met,
                    value: outcome.and_then(|outcome| outcome.as_ref().ok().copied()),
                    reason: outcome.and_then(|outcome| outcome.as_ref().err().map(ToString::to_string)),
                }
            })
        }))
    }
}
