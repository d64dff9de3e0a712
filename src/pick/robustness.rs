//! Robustness of first place: how far off a data-sheet value of the winner must be to cost it the lead.

use crate::fitted::Stage;
use crate::ledger::Slot;
use crate::model;
use crate::sheet::BoardSheet;
use crate::sheet::form::Faults;
use crate::sheet::form::Form;
use crate::stage::{Circuit, RectifierSheet, StageSheet};
use crate::sweep;
use crate::tolerance::Rig;
use crate::values;
use crate::worst::Taken;

use super::By;
use super::space::{Digits, Space};
use super::substitutes::Substitutes;

/// Relative changes that are tried before the border is refined.
const STEPS: [f64; 10] = [0.01, 0.02, 0.05, 0.1, 0.2, 0.35, 0.5, 0.9, 2.0, 3.0];
/// Rivals with the same part that are watched beside the best one without it.
const KIN: usize = 4;

/// The smallest change of a value that costs the winner its place.
#[derive(Clone, Debug, PartialEq)]
pub struct Tolerance {
    /// Slot and key; all points of a list together: `high_side.r_ds_on`.
    pub path: String,
    /// Name of the part.
    pub part: String,
    /// Relative change with its sign; `None` when no change from -90 % to +300 % does it.
    pub change: Option<f64>,
}

/// Every modelled value of the winner's parts that were a choice, the most delicate first.
///
/// A rival that has the same part in the same slot gets the same change. `rivals` are other combinations of the ranking.
pub fn of(space: &Space<'_>, winner: &[usize], rivals: &[Digits], slots: &[Substitutes]) -> Vec<Tolerance> {
    if space.by == By::Price {
        return Vec::new();
    }
    let sheet = space.sheet(winner);
    let mut groups: Vec<(String, Slot, String)> = Vec::new();
    for value in values::all(&sheet, &space.budget.board) {
        let path = without_places(&value.path);
        let is_choice = slots.iter().any(|own| own.slot == Some(value.slot));
        if value.modelled && is_choice && !groups.iter().any(|(known, ..)| *known == path) {
            groups.push((path, value.slot, value.part));
        }
    }
    let known = Rivals::of(space, winner, rivals, slots);
    let mut list = sweep::map(&groups, |(path, slot, part)| Tolerance {
        path: path.clone(),
        part: part.clone(),
        change: smallest_change(space, winner, &known, (path, *slot)),
    });
    let size = |tolerance: &Tolerance| tolerance.change.map_or(f64::INFINITY, f64::abs);
    list.sort_by(|a, b| size(a).total_cmp(&size(b)));
    list
}

/// `v_sd[1].v` is `v_sd.v`: the points of a list are changed together.
fn without_places(path: &str) -> String {
    let mut bare = String::new();
    let mut inside = false;
    for c in path.chars() {
        match c {
            '[' => inside = true,
            ']' => inside = false,
            c if !inside => bare.push(c),
            _ => {}
        }
    }
    bare
}

/// Other combinations with their values as they are.
struct Rivals(Vec<(Digits, f64)>);

impl Rivals {
    fn of(space: &Space<'_>, winner: &[usize], ranked: &[Digits], slots: &[Substitutes]) -> Rivals {
        let mut list: Vec<Digits> = ranked.to_vec();
        list.extend(
            slots.iter().flat_map(|slot| slot.list.iter().take(KIN)).map(|other| other.digits.clone()),
        );
        list.sort();
        list.dedup();
        list.retain(|digits| digits != winner);
        let mut valued: Vec<(Digits, f64)> = list
            .into_iter()
            .map(|digits| (digits.clone(), value(space, &space.sheet(&digits), &digits)))
            .collect();
        valued.sort_by(|a, b| a.1.total_cmp(&b.1));
        Rivals(valued)
    }
}

fn smallest_change(
    space: &Space<'_>,
    winner: &[usize],
    rivals: &Rivals,
    (path, slot): (&str, Slot),
) -> Option<f64> {
    let place = space.choices.iter().position(|choice| choice.slot == slot)?;
    let same = |digits: &Digits| digits[place] == winner[place];
    let stranger =
        rivals.0.iter().find(|(digits, _)| !same(digits)).map_or(f64::INFINITY, |(_, value)| *value);
    let kin: Vec<&Digits> = rivals.0.iter().map(|(digits, _)| digits).filter(|d| same(d)).take(KIN).collect();
    // None: no data sheet can say this
    let loses = |change: f64| -> Option<bool> {
        let own = changed(space, winner, (path, slot), change)?;
        let others = kin.iter().map(|digits| changed(space, digits, (path, slot), change));
        let best = others.flatten().fold(stranger, f64::min);
        Some(own > best)
    };
    let in_direction = |sign: f64| -> Option<f64> {
        let mut low = 0.0;
        for step in STEPS {
            if sign < 0.0 && step > 0.9 {
                break;
            }
            if loses(sign * step)? {
                let mut high = step;
                while high - low > 1e-4 * high {
                    let middle = 0.5 * (low + high);
                    if loses(sign * middle)? { high = middle } else { low = middle }
                }
                return Some(sign * high);
            }
            low = step;
        }
        None
    };
    let directions = [in_direction(1.0), in_direction(-1.0)];
    directions.into_iter().flatten().min_by(|a, b| a.abs().total_cmp(&b.abs()))
}

/// The value of a combination with the values at a path changed by a share.
fn changed(space: &Space<'_>, digits: &[usize], (path, slot): (&str, Slot), change: f64) -> Option<f64> {
    let mut sheet = space.sheet(digits);
    let mut board: BoardSheet = space.budget.board.clone();
    values::walk(&mut sheet, &mut board, &mut |place, datum| {
        if place.slot == slot && without_places(place.path) == path {
            datum.value *= 1.0 + change;
        }
    });
    is_coherent(&sheet, slot).then(|| value(space, &sheet, digits))
}

/// What is ranked by, lower being better; infinite where it cannot run.
fn value(space: &Space<'_>, sheet: &StageSheet, digits: &[usize]) -> f64 {
    let stage = Stage::fit(sheet, space.budget);
    let taken = Taken::of(space.budget.values, &stage, || Rig::new(space.budget, sheet));
    let points = space.points_of(digits);
    let mut total = space.by.floor();
    for (point, weight) in points.list.iter().zip(&points.weights) {
        let Ok(solved) = model::evaluate(&taken.at(*point), *point) else { return f64::INFINITY };
        total = match space.by {
            By::JunctionMargin => {
                let margin = crate::ratings::junction_margin(sheet, &solved);
                total.max(margin.map_or(f64::NEG_INFINITY, |(_, margin)| -margin))
            }
            By::WorstLoss => total.max(solved.loss()),
            _ => total + weight * solved.loss(),
        };
    }
    if total.is_nan() { f64::INFINITY } else { total }
}

/// True when the part in a slot has no fault.
fn is_coherent(stage: &StageSheet, slot: Slot) -> bool {
    let mut faults = Faults::default();
    let form: Option<&dyn Form> = match (&stage.circuit, slot) {
        (Circuit::Linear(placed), _) => Some(&*placed.sheet),
        (Circuit::Switched(stage), Slot::HighSide) => Some(&*stage.high_side.sheet),
        (Circuit::Switched(stage), Slot::Inductor) => Some(&*stage.inductor.sheet),
        (Circuit::Switched(stage), Slot::Controller) => Some(&*stage.controller.sheet),
        (Circuit::Switched(stage), slot) => match (&stage.rectifier, slot) {
            (RectifierSheet::Synchronous { low_side, .. }, Slot::LowSide) => Some(&*low_side.sheet),
            (RectifierSheet::Diode { freewheel_diode }, Slot::FreewheelDiode) => {
                Some(&*freewheel_diode.sheet)
            }
            _ => None,
        },
    };
    if let Some(form) = form {
        form.cross_check(&mut faults);
    }
    faults.0.iter().all(|fault| fault.warning)
}
