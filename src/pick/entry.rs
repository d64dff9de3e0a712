//! What a search gives: places of the ranking with all that is said about them, and what was left out.

use serde::Serialize;
use serde::ser::{SerializeMap, Serializer};

use crate::ledger::{Mechanism, Slot};
use crate::worst::ValueSet;

use super::slice::Slice;
use super::{By, slots};

/// A combination in the ranking.
#[derive(Clone, Debug, PartialEq)]
pub struct Entry {
    /// Place in the order of the shortlist; it decides between equal values.
    pub place: u64,
    /// Parts by slot.
    pub parts: Vec<(Slot, String)>,
    /// f_SW at the headline, Hz; `None` for a linear stage.
    pub switching_frequency: Option<f64>,
    /// What was ranked by.
    pub value: f64,
    /// Loss at the headline, W.
    pub loss: f64,
    /// Efficiency at the headline, a fraction.
    pub efficiency: Option<f64>,
    /// Price of all parts.
    pub price: Option<f64>,
    /// The hottest part at the headline, °C.
    pub hottest: Option<(Slot, f64)>,
    /// Loss at the headline by mechanism, W.
    pub mechanisms: Vec<(Mechanism, f64)>,
    /// Requirements that it misses.
    pub missed: Vec<String>,
    /// Data that it lacks and a rival has.
    pub needs: Vec<String>,
    /// Mechanisms that are not modelled.
    pub not_modelled: Vec<Gap>,
}

/// A mechanism that is not modelled for want of a datum.
#[derive(Clone, Debug, PartialEq, Serialize)]
pub struct Gap {
    /// Slot of the part that lacks it.
    pub lacking: String,
    /// Slot in which the watts would be booked.
    pub slot: String,
    /// What is not modelled.
    pub mechanism: String,
    /// The missing key.
    pub needs: String,
}

impl Entry {
    /// The part of a slot.
    pub fn part(&self, slot: Slot) -> Option<&str> {
        self.parts.iter().find(|(own, _)| *own == slot).map(|(_, part)| part.as_str())
    }

    /// The mechanisms by which this loses most against another, W more, the largest two.
    pub fn behind(&self, first: &Entry) -> Vec<(Mechanism, f64)> {
        let of = |mechanism: Mechanism| {
            first.mechanisms.iter().find(|(own, _)| *own == mechanism).map_or(0.0, |(_, watts)| *watts)
        };
        let mut more: Vec<(Mechanism, f64)> =
            self.mechanisms.iter().map(|(mechanism, watts)| (*mechanism, watts - of(*mechanism))).collect();
        more.sort_by(|a, b| b.1.total_cmp(&a.1));
        more.retain(|(_, watts)| *watts > 0.0);
        more.truncate(2);
        more
    }
}

/// What was left out, and why.
#[derive(Clone, Debug, PartialEq)]
pub struct Disqualified {
    /// The slot to blame, if one is.
    pub slot: Option<Slot>,
    /// The part, when it was left out on its own account.
    pub part: Option<String>,
    /// Why.
    pub reason: String,
    /// Combinations that it concerns.
    pub combinations: u64,
    /// The first of them in words, when no part is named.
    pub example: Option<String>,
}

/// How many combinations went which way.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq, Serialize)]
pub struct Counts {
    /// In the shortlist.
    pub all: u64,
    /// Left after parts were screened out.
    pub screened: u64,
    /// Looked at.
    pub visited: u64,
    /// Abandoned, because they could not reach the top any more.
    pub abandoned: u64,
    /// Disqualified.
    pub disqualified: u64,
    /// Followed to the end and sound.
    pub sound: u64,
    /// Points solved.
    pub points: u64,
}

/// A ranking.
#[derive(Clone, Debug, PartialEq)]
pub struct Outcome {
    /// Version of the program.
    pub version: String,
    /// Name of the budget.
    pub budget: String,
    /// Set of data-sheet values that was taken.
    pub values: ValueSet,
    /// Fingerprint of all inputs.
    pub input: String,
    /// Name of the stage.
    pub stage: String,
    /// Currency of prices.
    pub currency: Option<String>,
    /// What was ranked by.
    pub by: By,
    /// Places asked for.
    pub top: usize,
    /// True when every combination was followed to its end.
    pub exhaustive: bool,
    /// Which share of the combinations.
    pub slice: Slice,
    /// False when the search was stopped.
    pub complete: bool,
    /// Ways of the combinations.
    pub counts: Counts,
    /// Best first.
    pub ranking: Vec<Entry>,
    /// The best of those that lack data which a rival has.
    pub not_comparable: Vec<Entry>,
    /// Not beaten in both value and price, cheapest first; for losses only.
    pub unbeaten: Vec<Entry>,
    /// What was left out.
    pub disqualified: Vec<Disqualified>,
}

impl Outcome {
    /// Writes its keys, without closing the object.
    ///
    /// # Errors
    /// When the serializer fails.
    pub fn entries<M: SerializeMap>(&self, map: &mut M) -> Result<(), M::Error> {
        map.serialize_entry("lossbook", &self.version)?;
        map.serialize_entry("budget", &self.budget)?;
        map.serialize_entry("values", &self.values)?;
        map.serialize_entry("input", &self.input)?;
        map.serialize_entry("currency", &self.currency)?;
        map.serialize_entry("stage", &self.stage)?;
        map.serialize_entry("by", self.by.name())?;
        map.serialize_entry("top", &self.top)?;
        map.serialize_entry("exhaustive", &self.exhaustive)?;
        if !self.slice.is_whole() {
            map.serialize_entry("slice", &[self.slice.number, self.slice.of])?;
        }
        map.serialize_entry("complete", &self.complete)?;
        map.serialize_entry("combinations", &self.counts)?;
        map.serialize_entry("ranking", &Ranked(&self.ranking))?;
        map.serialize_entry("not_comparable", &Ranked(&self.not_comparable))?;
        map.serialize_entry("not_beaten", &Ranked(&self.unbeaten))?;
        map.serialize_entry("disqualified", &self.disqualified)
    }
}

struct Ranked<'a>(&'a [Entry]);

impl Serialize for Ranked<'_> {
    fn serialize<S: Serializer>(&self, serializer: S) -> Result<S::Ok, S::Error> {
        serializer.collect_seq(self.0.iter().enumerate().map(|(place, entry)| WithRank(place + 1, entry)))
    }
}

struct WithRank<'a>(usize, &'a Entry);

impl Serialize for WithRank<'_> {
    fn serialize<S: Serializer>(&self, serializer: S) -> Result<S::Ok, S::Error> {
        let WithRank(rank, entry) = self;
        let mut map = serializer.serialize_map(None)?;
        map.serialize_entry("rank", rank)?;
        for (slot, part) in &entry.parts {
            map.serialize_entry(slot.name(), part)?;
        }
        map.serialize_entry("switching_frequency", &entry.switching_frequency)?;
        map.serialize_entry("value", &entry.value)?;
        map.serialize_entry("loss", &entry.loss)?;
        map.serialize_entry("efficiency", &entry.efficiency)?;
        map.serialize_entry("price", &entry.price)?;
        map.serialize_entry("not_modelled", &entry.not_modelled)?;
        map.serialize_entry("needs", &entry.needs)?;
        let hottest = entry.hottest.map(|(slot, temperature)| (slot.name(), temperature));
        map.serialize_entry("hottest", &hottest)?;
        map.serialize_entry("mechanisms", &Mechanisms(&entry.mechanisms))?;
        map.serialize_entry("requirements_missed", &entry.missed)?;
        map.serialize_entry("place", &entry.place)?;
        map.end()
    }
}

struct Mechanisms<'a>(&'a [(Mechanism, f64)]);

impl Serialize for Mechanisms<'_> {
    fn serialize<S: Serializer>(&self, serializer: S) -> Result<S::Ok, S::Error> {
        serializer.collect_map(self.0.iter().map(|(mechanism, watts)| (mechanism.name(), watts)))
    }
}

impl Serialize for Disqualified {
    fn serialize<S: Serializer>(&self, serializer: S) -> Result<S::Ok, S::Error> {
        let mut map = serializer.serialize_map(None)?;
        map.serialize_entry("slot", &self.slot.map(Slot::name))?;
        map.serialize_entry("part", &self.part)?;
        map.serialize_entry("reason", &self.reason)?;
        map.serialize_entry("combinations", &self.combinations)?;
        if let Some(example) = &self.example {
            map.serialize_entry("example", example)?;
        }
        map.end()
    }
}

/// Slots in the order in which entries name them: that of the ledger.
pub fn ordered(choices: &[slots::Choice]) -> Vec<usize> {
    let mut places: Vec<usize> = (0..choices.len()).collect();
    places.sort_by_key(|place| choices[*place].slot);
    places
}
