//! What else could stand in one slot of the winner, all other slots as they are.

use crate::candidate::Candidate;
use crate::fitted::Stage;
use crate::ledger::Slot;
use crate::limits::Limits;
use crate::report::words;
use crate::stage::StageSheet;
use crate::sweep;
use crate::tolerance::Rig;
use crate::units::Dimension;
use crate::worst::Taken;

use super::judge::{Judgement, judge};
use super::space::{Digits, Space};

/// A slot of the winner, or its frequency, with all that could stand there.
#[derive(Clone, Debug)]
pub struct Substitutes {
    /// The slot; `None` for the frequency.
    pub slot: Option<Slot>,
    /// Its place among the digits of a combination.
    pub digit: usize,
    /// What runs everywhere within its ratings, best first; the winner's own is among them.
    pub list: Vec<Substitute>,
}

/// The winner with one part exchanged.
#[derive(Clone, Debug)]
pub struct Substitute {
    /// Name of the part, or the frequency in words.
    pub name: String,
    /// The combination.
    pub digits: Digits,
    /// What is ranked by, lower being better.
    pub value: f64,
    /// Loss at the headline, W.
    pub loss: f64,
    /// The stage, called by the name of the part.
    pub sheet: StageSheet,
}

impl Substitutes {
    /// Those of every slot that has a choice.
    pub fn of(space: &Space<'_>, winner: &[usize]) -> Vec<Substitutes> {
        (0..winner.len()).filter_map(|digit| Substitutes::in_slot(space, winner, digit)).collect()
    }

    fn in_slot(space: &Space<'_>, winner: &[usize], digit: usize) -> Option<Substitutes> {
        let choice = space.choices.get(digit);
        let count = choice.map_or(space.frequencies.len(), |choice| choice.options.len());
        if count < 2 {
            return None;
        }
        let places: Vec<usize> = (0..count).collect();
        let tried = sweep::map(&places, |place| {
            let mut digits = winner.to_vec();
            digits[digit] = *place;
            substitute(space, digits, digit)
        });
        let mut list: Vec<Substitute> = tried.into_iter().flatten().collect();
        list.sort_by(|a, b| a.value.total_cmp(&b.value).then_with(|| a.digits.cmp(&b.digits)));
        Some(Substitutes { slot: choice.map(|choice| choice.slot), digit, list })
    }

    /// The slot in words.
    pub fn words(&self) -> String {
        self.slot.map_or_else(|| "switching frequency".into(), Slot::words)
    }

    /// The slot as in files.
    pub fn name(&self) -> &'static str {
        self.slot.map_or("switching_frequency", Slot::name)
    }
}

fn substitute(space: &Space<'_>, digits: Digits, digit: usize) -> Option<Substitute> {
    if space.is_apart(&digits) || space.clash(&digits).is_some() {
        return None;
    }
    let mut sheet = space.sheet(&digits);
    let name = match space.option(&digits, digit) {
        Some(option) => option.name.to_string(),
        None => words::set(space.frequency(&digits)?, Dimension::Frequency),
    };
    sheet.name.clone_from(&name);
    let (stage, limits) = (Stage::fit(&sheet, space.budget), Limits::of(&sheet));
    let start = if space.by.starts_at_price() { space.price(&digits)? } else { space.by.floor() };
    let points = space.points_of(&digits);
    let taken = Taken::of(space.budget.values, &stage, || Rig::new(space.budget, &sheet));
    match judge((&taken, &limits), (points, space.by), (start, f64::INFINITY), &mut 0) {
        Judgement::Value(value) => {
            let candidate = Candidate::new(space.budget, &sheet);
            let loss = candidate.evaluate(candidate.headline()).ok()?.loss();
            Some(Substitute { name, digits, value, loss, sheet })
        }
        _ => None,
    }
}
