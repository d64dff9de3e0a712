//! The space of combinations: every part of every slot with every frequency, counted in a fixed order.

use std::sync::Arc;

use crate::budget::{Budget, Shortlist};
use crate::candidate::Candidate;
use crate::fitted::{Kind, Stage};
use crate::grid::Axis;
use crate::ledger::Slot;
use crate::limits::Limits;
use crate::stage::StageSheet;

use super::By;
use super::points::Points;
use super::screen::unsuitable;
use super::slots::{self, Choice, FittedPart};

/// A part that was screened out.
#[derive(Clone, Debug, PartialEq)]
pub struct Screened {
    /// The slot.
    pub slot: Slot,
    /// Name of the part.
    pub part: Arc<str>,
    /// Why.
    pub reason: String,
    /// Combinations that it would have stood in.
    pub combinations: u64,
}

/// Everything about a shortlist that no single combination changes.
#[derive(Clone, Debug)]
pub struct Space<'a> {
    /// The budget.
    pub budget: &'a Budget,
    /// The stage that the shortlist names, as written.
    pub base: &'a StageSheet,
    /// Slots with the parts that passed the screening.
    pub choices: Vec<Choice>,
    /// Candidate frequencies; one `None` when the stage keeps its own.
    pub frequencies: Vec<Option<f64>>,
    /// Points of each frequency.
    pub points: Vec<Points>,
    /// Parts that were screened out.
    pub screened: Vec<Screened>,
    /// Combinations before the screening.
    pub all: u64,
    /// Order of ranking.
    pub by: By,
    /// For each slot the places of its options, the most promising first.
    order: Vec<Vec<usize>>,
    /// Fitted parts by controller, slot and option.
    fitted: Vec<Vec<Vec<FittedPart>>>,
    /// Limits of the stage with each option: by slot and option.
    limits: Vec<Vec<Limits>>,
    /// Pairs of controller and part that do not go together: by controller, slot and option.
    clashes: Vec<Vec<Vec<bool>>>,
    /// What each option lacks that a rival has: by slot and option.
    lacks: Vec<Vec<Vec<&'static str>>>,
    /// Price of the parts that are no choice; `None` when one has none.
    fixed_price: Option<f64>,
}

/// One combination: the option of each slot, and of the frequency last.
pub type Digits = Vec<usize>;

impl<'a> Space<'a> {
    /// The space of a shortlist.
    pub fn of(budget: &'a Budget, base: &'a StageSheet, shortlist: &Shortlist, by: By) -> Self {
        let listed = slots::choices(budget, base, &shortlist.candidates);
        let frequencies: Vec<Option<f64>> = match &shortlist.switching_frequency {
            Some(axis) => axis.values().map(Some).collect(),
            None => vec![None],
        };
        let points = frequencies
            .iter()
            .map(|frequency| Points::of(&Candidate::new(budget, &at_frequency(base, *frequency)), by))
            .collect();
        let mut space = Space {
            budget,
            base,
            choices: listed,
            frequencies,
            points,
            screened: Vec::new(),
            all: 0,
            by,
            order: Vec::new(),
            fitted: Vec::new(),
            limits: Vec::new(),
            clashes: Vec::new(),
            lacks: Vec::new(),
            fixed_price: None,
        };
        space.all = space.len();
        space.fixed_price = space.price_of_the_rest();
        space.screen();
        space.fit();
        space.lacks = space.lacking();
        space.order = space.choices.iter().map(|choice| (0..choice.options.len()).collect()).collect();
        space.order = super::promise::order(&space);
        space
    }

    /// Number of combinations.
    pub fn len(&self) -> u64 {
        let options = self.choices.iter().map(|choice| choice.options.len() as u64);
        options.chain([self.frequencies.len() as u64]).fold(1, u64::saturating_mul)
    }

    /// True without combinations.
    pub fn is_empty(&self) -> bool {
        self.len() == 0
    }

    /// Options of the last slots that share one choice of the switches: combinations that stay in one slice.
    pub fn group(&self) -> u64 {
        let inner = self.choices.iter().filter(|choice| choice.slot == Slot::Inductor);
        inner.map(|choice| choice.options.len() as u64).product::<u64>() * self.frequencies.len() as u64
    }

    /// Writes the combination that is visited at a place of the search into `digits`.
    pub fn visit(&self, index: u64, digits: &mut Digits) {
        self.count_out(index, digits);
        for (digit, order) in digits.iter_mut().zip(&self.order) {
            *digit = order.get(*digit).copied().unwrap_or(*digit);
        }
    }

    /// The combination of a place in the order of the shortlist.
    pub fn digits(&self, place: u64) -> Digits {
        let mut digits = Vec::new();
        self.count_out(place, &mut digits);
        digits
    }

    fn count_out(&self, place: u64, digits: &mut Digits) {
        digits.resize(self.choices.len() + 1, 0);
        let mut rest = place;
        for (slot, digit) in digits.iter_mut().enumerate().rev() {
            let length = self.choices.get(slot).map_or(self.frequencies.len(), |choice| choice.options.len());
            let length = (length as u64).max(1);
            *digit = (rest % length) as usize;
            rest /= length;
        }
    }

    /// The place of a combination in the order of the shortlist.
    pub fn place(&self, digits: &[usize]) -> u64 {
        let lengths = self.choices.iter().map(|choice| choice.options.len());
        let lengths = lengths.chain([self.frequencies.len()]);
        digits.iter().zip(lengths).fold(0, |place, (digit, length)| place * length as u64 + *digit as u64)
    }

    /// The option of a slot in a combination.
    pub fn option(&self, digits: &[usize], slot: usize) -> Option<&slots::Part> {
        self.choices.get(slot)?.options.get(*digits.get(slot)?)
    }

    /// The frequency of a combination, when the shortlist sets it.
    pub fn frequency(&self, digits: &[usize]) -> Option<f64> {
        digits.last().and_then(|digit| self.frequencies.get(*digit).copied().flatten())
    }

    /// The points of a combination.
    pub fn points_of(&self, digits: &[usize]) -> &Points {
        // there is a set of points a frequency, and one frequency at least
        &self.points[digits.last().copied().unwrap_or(0).min(self.points.len() - 1)]
    }

    /// Price of a combination; `None` when a part has none.
    pub fn price(&self, digits: &[usize]) -> Option<f64> {
        let options = (0..self.choices.len()).map(|slot| self.option(digits, slot)?.price);
        options.chain([self.fixed_price]).sum()
    }

    /// Data that a combination lacks and a rival in one of its slots has.
    pub fn apart(&self, digits: &[usize]) -> Vec<&'static str> {
        let mut needs = Vec::new();
        for need in self.lacks.iter().zip(digits).filter_map(|(slot, digit)| slot.get(*digit)).flatten() {
            if !needs.contains(need) {
                needs.push(*need);
            }
        }
        needs
    }

    /// True when a combination lacks data that a rival has.
    pub fn is_apart(&self, digits: &[usize]) -> bool {
        self.lacks
            .iter()
            .zip(digits)
            .any(|(slot, digit)| slot.get(*digit).is_some_and(|needs| !needs.is_empty()))
    }

    /// What each option lacks that another option of its slot has.
    fn lacking(&self) -> Vec<Vec<Vec<&'static str>>> {
        let of_choice = |choice: &Choice| {
            let rival_has = |need: &&str| choice.options.iter().any(|rival| !rival.needs.contains(need));
            let lacks = |part: &slots::Part| part.needs.iter().copied().filter(rival_has).collect();
            choice.options.iter().map(lacks).collect()
        };
        self.choices.iter().map(of_choice).collect()
    }

    /// True when a part and the controller of a combination do not go together.
    pub fn clash(&self, digits: &[usize]) -> Option<Slot> {
        let controller = self.controller(digits);
        let clashes = self.clashes.get(controller)?;
        let found = clashes.iter().zip(digits).position(|(slot, digit)| slot.get(*digit) == Some(&true))?;
        Some(self.choices.get(found)?.slot)
    }

    /// The stage of a combination as it is meant.
    pub fn sheet(&self, digits: &[usize]) -> StageSheet {
        let mut sheet = at_frequency(self.base, self.frequency(digits));
        for (slot, choice) in self.choices.iter().enumerate() {
            if let Some(option) = self.option(digits, slot) {
                slots::put_sheet(&mut sheet, choice.slot, &option.name, &option.sheet);
            }
        }
        sheet
    }

    /// Changes a fitted stage and its limits from one combination to another.
    pub fn assemble(&self, (stage, limits): (&mut Stage, &mut Limits), before: &[usize], digits: &[usize]) {
        let controller = self.controller(digits);
        // edge times of a controller win over those of a MOSFET
        let all = self.controller(before) != controller;
        let mut changed = false;
        for (slot, choice) in self.choices.iter().enumerate() {
            let digit = digits[slot];
            if !all && before[slot] == digit {
                continue;
            }
            if let Some(part) = self.fitted[controller][slot].get(digit) {
                match (&mut stage.kind, part) {
                    (Kind::Linear(own), FittedPart::Regulator(regulator)) => own.clone_from(regulator),
                    (Kind::Switched(switched), part) => slots::put_fitted(switched, choice.slot, part),
                    _ => {}
                }
                changed = true;
            }
            let (own, place) = (&self.limits[slot][digit], choice.slot.index());
            limits.temperature[place] = own.temperature[place];
            limits.current[place] = own.current[place];
            match choice.slot {
                Slot::Inductor => limits.saturation = own.saturation,
                Slot::InputCapacitors => limits.ripple[0].clone_from(&own.ripple[0]),
                Slot::OutputCapacitors => limits.ripple[1].clone_from(&own.ripple[1]),
                _ => {}
            }
        }
        if changed && let Kind::Switched(switched) = &mut stage.kind {
            switched.reassemble(&self.budget.coupling);
        }
    }

    fn controller(&self, digits: &[usize]) -> usize {
        let slot = self.choices.iter().position(|choice| choice.slot == Slot::Controller);
        slot.and_then(|slot| digits.get(slot).copied()).unwrap_or(0)
    }

    fn price_of_the_rest(&self) -> Option<f64> {
        let chosen = |slot: Slot| self.choices.iter().any(|choice| choice.slot == slot);
        let parts = self.base.parts();
        let rest = parts.iter().filter(|part| !chosen(part.slot));
        rest.map(|part| Some(part.price? * f64::from(part.count))).sum()
    }

    /// The base with one controller and one part.
    fn with(&self, controller: Option<&slots::Part>, slot: Slot, option: &slots::Part) -> StageSheet {
        let mut sheet = self.base.clone();
        if let Some(controller) = controller {
            slots::put_sheet(&mut sheet, Slot::Controller, &controller.name, &controller.sheet);
        }
        slots::put_sheet(&mut sheet, slot, &option.name, &option.sheet);
        sheet
    }

    fn controllers(&self) -> Vec<Option<slots::Part>> {
        match self.choices.iter().find(|choice| choice.slot == Slot::Controller) {
            Some(choice) => choice.options.iter().cloned().map(Some).collect(),
            None => vec![None],
        }
    }

    /// Takes out the parts that suit the rail with no controller.
    fn screen(&mut self) {
        let Some(extremes) = self.points.first().map(Points::extremes) else { return };
        // controllers first, so that parts are judged with those that stay
        let mut slots: Vec<usize> = (0..self.choices.len()).collect();
        slots.sort_by_key(|slot| self.choices[*slot].slot != Slot::Controller);
        for slot in slots {
            let (name, controllers) = (self.choices[slot].slot, self.controllers());
            let combinations = self.all / (self.choices[slot].options.len() as u64).max(1);
            let mut kept = Vec::new();
            for option in self.choices[slot].options.clone() {
                let with = |controller: &Option<slots::Part>| {
                    let controller = controller.as_ref().filter(|_| name != Slot::Controller);
                    let sheet = self.with(controller, name, &option);
                    unsuitable((&option.sheet, name), &sheet, self.budget, &extremes)
                };
                let reasons: Option<Vec<String>> = controllers.iter().map(with).collect();
                match reasons.and_then(|reasons| reasons.into_iter().next()) {
                    None => kept.push(option),
                    Some(reason) => {
                        let part = option.name.clone();
                        self.screened.push(Screened { slot: name, part, reason, combinations });
                    }
                }
            }
            self.choices[slot].options = kept;
        }
        self.screened.sort_by_key(|screened| screened.slot);
        self.clashes = self.controllers().iter().map(|c| self.clashes_of(c.as_ref(), &extremes)).collect();
    }

    fn clashes_of(
        &self,
        controller: Option<&slots::Part>,
        extremes: &super::points::Extremes,
    ) -> Vec<Vec<bool>> {
        let clash = |slot: Slot, option: &slots::Part| {
            slot != Slot::Controller
                && unsuitable(
                    (&option.sheet, slot),
                    &self.with(controller, slot, option),
                    self.budget,
                    extremes,
                )
                .is_some()
        };
        self.choices
            .iter()
            .map(|choice| choice.options.iter().map(|option| clash(choice.slot, option)).collect())
            .collect()
    }

    /// Fits every part once.
    fn fit(&mut self) {
        let controllers = self.controllers();
        let fitted = |controller: &Option<slots::Part>, choice: &Choice| -> Vec<FittedPart> {
            let options = choice.options.iter().filter_map(|option| {
                let controller = controller.as_ref().filter(|_| choice.slot != Slot::Controller);
                let sheet = self.with(controller, choice.slot, option);
                slots::take_fitted(&Stage::fit(&sheet, self.budget), choice.slot)
            });
            options.collect()
        };
        self.fitted = controllers
            .iter()
            .map(|controller| self.choices.iter().map(|choice| fitted(controller, choice)).collect())
            .collect();
        self.limits = self
            .choices
            .iter()
            .map(|choice| {
                let limits = |option: &slots::Part| Limits::of(&self.with(None, choice.slot, option));
                choice.options.iter().map(limits).collect()
            })
            .collect();
    }
}

/// A stage with one frequency of its own, or as it is.
fn at_frequency(base: &StageSheet, frequency: Option<f64>) -> StageSheet {
    let mut sheet = base.clone();
    if let Some(frequency) = frequency {
        sheet.switching_frequency = Some(Axis::List(vec![frequency]));
    }
    sheet
}
