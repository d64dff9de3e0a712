//! Compare: the stages of a budget side by side, where one overtakes another, and which one to take.

use std::cell::OnceCell;
use std::io::{self, Write};

use serde::ser::{Serialize, SerializeMap, Serializer};

use crate::answer::Answer;
use crate::budget::Budget;
use crate::candidate::Candidate;
use crate::crossover::{self, Crossover};
use crate::findings::Severity;
use crate::grid::{AxisName, OperatingPoint};
use crate::ledger::Mechanism;
use crate::loads;
use crate::model::Solved;
use crate::record::Record;
use crate::requirements::{self, Judgement};
use crate::sweep::{self, Watch};

/// What is asked.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct Request {
    /// The stage whose requirements decide the exit code; any stage when absent.
    pub stage: Option<String>,
    /// Draws efficiency against load.
    pub plot: bool,
}

/// Compares the stages of a budget.
pub fn answer<'a>(budget: &'a Budget, request: &'a Request, watch: &'a Watch) -> impl Answer + 'a {
    Question { request, asked: Asked::new(budget, request.stage.as_deref(), watch) }
}

struct Question<'a> {
    request: &'a Request,
    asked: Asked<'a>,
}

impl Answer for Question<'_> {
    fn document(&self) -> crate::report::Document {
        self.asked.with(|comparison| crate::report::comparison::document(comparison, self.request.plot))
    }

    fn json(&self, out: &mut dyn Write) -> io::Result<()> {
        self.asked.json(out)
    }

    fn csv(&self, out: &mut dyn Write) -> io::Result<()> {
        self.asked.csv(out)
    }

    fn met(&self) -> bool {
        self.asked.met()
    }
}

/// A comparison as every answer built on it asks for it: made when needed, its verdict on the requirements remembered.
pub(crate) struct Asked<'a> {
    budget: &'a Budget,
    stage: Option<&'a str>,
    watch: &'a Watch,
    met: OnceCell<bool>,
}

impl<'a> Asked<'a> {
    /// Of a budget; the requirements of the stage named decide, or those of any stage.
    pub(crate) fn new(budget: &'a Budget, stage: Option<&'a str>, watch: &'a Watch) -> Self {
        Asked { budget, stage, watch, met: OnceCell::new() }
    }

    /// Compares, remembers whether the requirements are met, and hands the comparison on.
    pub(crate) fn with<T>(&self, render: impl FnOnce(&Comparison<'_>) -> T) -> T {
        let candidates = Candidate::all(self.budget);
        let comparison = Comparison::of(self.budget, &candidates, self.watch);
        let place = |name: &str| candidates.iter().position(|candidate| candidate.name() == name);
        self.met.get_or_init(|| comparison.requirements_met(self.stage.and_then(place)));
        render(&comparison)
    }

    /// The comparison as JSON.
    pub(crate) fn json(&self, out: &mut dyn Write) -> io::Result<()> {
        self.with(|comparison| serde_json::to_writer_pretty(&mut *out, comparison))?;
        writeln!(out)
    }

    /// The stages at the headline as CSV.
    pub(crate) fn csv(&self, out: &mut dyn Write) -> io::Result<()> {
        self.with(|comparison| {
            let sheet = crate::columns::Columns::of(comparison.candidates);
            let mut bytes = sheet.header();
            for record in &comparison.headline {
                sheet.row(record, &mut bytes);
            }
            out.write_all(&bytes)
        })
    }

    /// True when the requirements are met.
    pub(crate) fn met(&self) -> bool {
        if self.met.get().is_none() {
            self.with(|_| ());
        }
        self.met.get().copied().unwrap_or(false)
    }
}

/// The relative width of the model's account of overlap and output charge: against a transient solution of the switching
/// cell it reads 0.87 to 1.17 times the truth (E17), so that the truth lies within 15 % of the reading on either side.
pub const EDGE_SPREAD: f64 = 0.15;
/// Two losses closer than this share of the smaller are never told apart.
const SAME: f64 = 1e-3;

/// Most input voltages at which crossovers are looked for.
const MOST_VOLTAGES: usize = 7;

/// Stages of a budget side by side.
#[derive(Debug)]
pub struct Comparison<'a> {
    /// The budget.
    pub budget: &'a Budget,
    /// The stages, in the order written.
    pub candidates: &'a [Candidate<'a>],
    /// Each stage at the headline.
    pub headline: Vec<Record<'a>>,
    /// Each stage at the headline with every part held at 25 °C.
    pub cold: Vec<Option<Solved>>,
    /// Loads of the curves, A.
    pub loads: Vec<f64>,
    /// Each stage over the loads, the other coordinates as at the headline.
    pub curves: Vec<Vec<Record<'a>>>,
    /// Loads at which one stage overtakes another.
    pub crossovers: Vec<Crossover>,
    /// Which stage has the lowest loss in which band of load at the headline's other coordinates.
    pub bands: Vec<Band>,
    /// What became of each requirement in each stage.
    pub judgements: Vec<Vec<Judgement>>,
    /// Which stage to take, and why.
    pub verdict: Verdict,
}

/// A band of load in which one stage has the lowest loss.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Band {
    /// Place of the stage; `None` where no stage can run.
    pub stage: Option<usize>,
    /// Lower end, A.
    pub from: f64,
    /// Upper end, A.
    pub to: f64,
}

/// Which stage has the lowest loss at the headline.
#[derive(Clone, Debug, PartialEq)]
pub enum Verdict {
    /// No stage can run there.
    NoneRuns,
    /// Only one stage can.
    OnlyOne {
        /// Its place.
        stage: usize,
    },
    /// Several run, but only one stays within its ratings.
    OnlySound {
        /// Its place.
        stage: usize,
    },
    /// One leads the next.
    Leads {
        /// Place of the leader.
        stage: usize,
        /// Place of the next.
        next: usize,
        /// Difference of their losses, W.
        lead: f64,
        /// Loss of the leader, W.
        loss: f64,
        /// Mechanism by which the next one loses most against the leader, and by how much, W.
        reason: (Mechanism, f64),
        /// The model's spread in the terms that differ, W.
        spread: f64,
    },
}

impl Verdict {
    /// True when the lead is smaller than the model's own spread in the terms that differ.
    pub fn is_too_close(&self) -> bool {
        matches!(self, Verdict::Leads { lead, loss, spread, .. } if *lead <= spread.max(SAME * loss))
    }

    /// Place of the stage with the lowest loss.
    pub fn stage(&self) -> Option<usize> {
        match self {
            Verdict::NoneRuns => None,
            Verdict::OnlyOne { stage } | Verdict::OnlySound { stage } | Verdict::Leads { stage, .. } => {
                Some(*stage)
            }
        }
    }
}

impl<'a> Comparison<'a> {
    /// Compares the stages of a budget.
    pub fn of(budget: &'a Budget, candidates: &'a [Candidate<'a>], watch: &Watch) -> Self {
        let headline: Vec<Record<'a>> = sweep::map(candidates, |c| Record::of(c, c.headline()));
        let cold = candidates.iter().map(|c| c.evaluate_cold(c.headline()).ok()).collect();
        let loads = budget.grid.axis(AxisName::Load).map(loads::printed).unwrap_or_default();
        let curve = |c: &'a Candidate<'a>| {
            loads.iter().map(|load| Record::of(c, c.headline().with(AxisName::Load, *load))).collect()
        };
        let curves = sweep::map(candidates, curve);
        let judgements = candidates.iter().map(|c| requirements::judge(c, watch)).collect();
        let verdict = verdict(&headline);
        let crossovers = crossovers(budget, candidates);
        let bands = bands(budget, candidates, &crossovers);
        Comparison {
            budget,
            candidates,
            headline,
            cold,
            loads,
            curves,
            crossovers,
            bands,
            judgements,
            verdict,
        }
    }

    /// True when the stage named meets every requirement, or any stage does when none is named.
    pub fn requirements_met(&self, stage: Option<usize>) -> bool {
        match stage {
            Some(stage) => {
                self.judgements.get(stage).is_some_and(|judgements| requirements::all_met(judgements))
            }
            None => self.judgements.iter().any(|judgements| requirements::all_met(judgements)),
        }
    }

    /// The verdict in one line.
    pub fn sentence(&self) -> String {
        crate::report::verdict::sentence(self)
    }
}

/// The model's spread in the terms that differ between two solved points, W (E17).
pub fn spread_between(a: &Solved, b: &Solved) -> f64 {
    let edges = [Mechanism::Overlap, Mechanism::OutputCharge];
    let entries = a.ledger.entries().filter(|(account, _)| edges.contains(&account.mechanism()));
    entries.map(|(account, watts)| EDGE_SPREAD * (watts - b.ledger.get(account)).abs()).sum()
}

fn verdict(headline: &[Record<'_>]) -> Verdict {
    let mut running: Vec<(usize, bool, &Solved)> = headline
        .iter()
        .enumerate()
        .filter_map(|(place, record)| {
            let detail = record.outcome.as_ref().ok()?;
            Some((place, detail.exceeds_a_rating(), &detail.solved))
        })
        .collect();
    // a stage that exceeds a rating leads none that does not
    running.sort_by(|a, b| a.1.cmp(&b.1).then(a.2.loss().total_cmp(&b.2.loss())));
    match running.as_slice() {
        [] => Verdict::NoneRuns,
        [(stage, ..)] => Verdict::OnlyOne { stage: *stage },
        [(stage, false, _), (_, true, _), ..] => Verdict::OnlySound { stage: *stage },
        [(stage, _, best), (next, _, second), ..] => {
            let more = |m: &Mechanism| second.ledger.mechanism(*m) - best.ledger.mechanism(*m);
            let worst = crate::ledger::ALL_MECHANISMS.into_iter().max_by(|a, b| more(a).total_cmp(&more(b)));
            let mechanism = worst.unwrap_or(Mechanism::Conduction);
            Verdict::Leads {
                stage: *stage,
                next: *next,
                lead: second.loss() - best.loss(),
                loss: best.loss(),
                reason: (mechanism, more(&mechanism)),
                spread: spread_between(best, second),
            }
        }
    }
}

/// Crossovers of every pair of stages at the input voltages of the grid, the other coordinates as at the headline.
fn crossovers(budget: &Budget, candidates: &[Candidate<'_>]) -> Vec<Crossover> {
    let Some((from, to)) = load_range(budget) else { return Vec::new() };
    let mut pairs = Vec::new();
    for (place, a) in candidates.iter().enumerate() {
        for b in &candidates[place + 1..] {
            for v_in in input_voltages(budget) {
                pairs.push((a, b, v_in));
            }
        }
    }
    let at =
        |c: &Candidate<'_>, v_in: f64| -> OperatingPoint { c.headline().with(AxisName::InputVoltage, v_in) };
    sweep::map(&pairs, |(a, b, v_in)| crossover::between((a, at(a, *v_in)), (b, at(b, *v_in)), from, to))
        .into_iter()
        .flatten()
        .collect()
}

/// Bands of load between the crossovers at the headline's input voltage, each with the stage that leads in its middle.
fn bands(budget: &Budget, candidates: &[Candidate<'_>], crossovers: &[Crossover]) -> Vec<Band> {
    let Some((from, to)) = load_range(budget) else { return Vec::new() };
    let here = crossovers.iter().filter(|c| c.input_voltage == budget.headline.input_voltage);
    let mut ends: Vec<f64> = here.map(|crossover| crossover.load).chain([from, to]).collect();
    ends.sort_by(f64::total_cmp);
    // every stage that runs, those that exceed a rating last
    let running = |load: f64| {
        let mut running: Vec<(usize, bool, Solved)> = Vec::new();
        for (place, candidate) in candidates.iter().enumerate() {
            if let Ok(solved) = candidate.evaluate(candidate.headline().with(AxisName::Load, load)) {
                let findings = candidate.findings(&solved);
                let exceeds = findings.iter().any(|finding| finding.severity == Severity::Critical);
                running.push((place, exceeds, solved));
            }
        }
        running.sort_by(|a, b| a.1.cmp(&b.1).then(a.2.loss().total_cmp(&b.2.loss())));
        running
    };
    let mut bands: Vec<Band> = Vec::new();
    for pair in ends.windows(2) {
        if let [low, high] = *pair {
            let running = running((low * high).sqrt());
            let stage = running.first().map(|(place, ..)| *place);
            match bands.last_mut() {
                Some(last) if last.stage == stage || is_close(&running, last.stage) => last.to = high,
                _ => bands.push(Band { stage, from: low, to: high }),
            }
        }
    }
    bands
}

/// True when the stage that led before loses no more than the model's spread against the one that leads now.
fn is_close(running: &[(usize, bool, Solved)], before: Option<usize>) -> bool {
    let Some((_, exceeds, best)) = running.first() else { return false };
    running.iter().any(|(place, also_exceeds, solved)| {
        Some(*place) == before
            && exceeds == also_exceeds
            && solved.loss() - best.loss() <= spread_between(best, solved).max(SAME * best.loss())
    })
}

/// Smallest load above zero and largest load of the grid, A.
pub(crate) fn load_range(budget: &Budget) -> Option<(f64, f64)> {
    let axis = budget.grid.axis(AxisName::Load)?;
    let (from, to) = match axis {
        crate::grid::Axis::List(values) => {
            let loaded = || values.iter().copied().filter(|load| *load > 0.0);
            (loaded().fold(f64::INFINITY, f64::min), loaded().fold(0.0, f64::max))
        }
        crate::grid::Axis::Range { from, to, .. } => (if *from > 0.0 { *from } else { to * 1e-4 }, *to),
    };
    (to > from).then_some((from, to))
}

/// Input voltages at which crossovers are looked for: those of the grid, or its ends and the headline's when they are many.
fn input_voltages(budget: &Budget) -> Vec<f64> {
    let mut voltages: Vec<f64> = match budget.grid.axis(AxisName::InputVoltage) {
        Some(axis) if axis.len() <= MOST_VOLTAGES as u64 => axis.values().collect(),
        Some(axis) => vec![axis.at(0), budget.headline.input_voltage, axis.at(axis.len() - 1)],
        None => Vec::new(),
    };
    if !voltages.contains(&budget.headline.input_voltage) {
        voltages.push(budget.headline.input_voltage);
    }
    voltages.sort_by(f64::total_cmp);
    voltages.dedup();
    voltages
}

impl Serialize for Comparison<'_> {
    fn serialize<S: Serializer>(&self, serializer: S) -> Result<S::Ok, S::Error> {
        let mut map = serializer.serialize_map(None)?;
        map.serialize_entry("lossbook", env!("CARGO_PKG_VERSION"))?;
        map.serialize_entry("budget", &self.budget.name)?;
        map.serialize_entry("values", &self.budget.values)?;
        map.serialize_entry("headline", &Headline(&self.budget.headline))?;
        map.serialize_entry("stages", &self.headline)?;
        map.serialize_entry("crossovers", &self.crossovers)?;
        map.serialize_entry("requirements", &crate::record::Judgements(self))?;
        map.serialize_entry("verdict", &self.sentence())?;
        map.end()
    }
}

struct Headline<'a>(&'a OperatingPoint);

impl Serialize for Headline<'_> {
    fn serialize<S: Serializer>(&self, serializer: S) -> Result<S::Ok, S::Error> {
        let has = |axis: &AxisName| *axis != AxisName::SwitchingFrequency || self.0.get(*axis) > 0.0;
        let axes = crate::grid::ALL_AXES.iter().filter(|axis| has(axis));
        serializer.collect_map(axes.map(|axis| (axis.name(), self.0.get(*axis))))
    }
}
