//! The shorter sections of a budget: requirements, profile, battery, bench, derating, board.

use super::budget_grid::{RatedLoad, point, value};
use super::budget_keys as keys;
use super::error::Blame;
use super::fields::Fields;
use super::listed::listed;
use super::node::Node;
use super::notes::Notes;
use super::path::Trail;
use super::reader::read_fields;
use super::sample::key_names;
use crate::bench::Accuracy;
use crate::budget::{BenchAccuracy, Coupling, Derating, Limit, ProfilePoint, Requirement};
use crate::grid::{ALL_AXES, AxisName};
use crate::hints::{Vocabulary, nearest};
use crate::ledger::{ALL_SLOTS, Slot};
use crate::sheet::BoardSheet;
use crate::sheet::form::Key;
use crate::units::Dimension as D;

/// Items of a list, each with its trail; a single mapping counts as a list of one.
fn each<'n>(
    node: &'n Node,
    trail: &Trail<'_>,
    notes: &mut Notes,
    mut read: impl FnMut(&'n Node, &Trail<'_>, &mut Notes),
) {
    match node {
        Node::List(items) if items.is_empty() => {
            notes.value_error(
                trail,
                node,
                Blame::new("is an empty list", "add an entry, or take the key out"),
            );
        }
        Node::List(items) => {
            for (index, item) in items.iter().enumerate() {
                read(item, &trail.item(index), notes);
            }
        }
        single => read(single, trail, notes),
    }
}

/// What the rail must do.
pub(crate) fn requirements(
    node: &Node,
    rated: RatedLoad,
    trail: &Trail<'_>,
    notes: &mut Notes,
) -> Vec<Requirement> {
    let mut all = Vec::new();
    each(node, trail, notes, |item, trail, notes| all.extend(requirement(item, rated, trail, notes)));
    all
}

type MakeLimit = fn(f64) -> Limit;

const LIMITS: [(&Key, MakeLimit); 3] = [
    (&keys::EFFICIENCY_MIN, Limit::EfficiencyMin),
    (&keys::JUNCTION_MARGIN_MIN, Limit::JunctionMarginMin),
    (&keys::LOSS_MAX, Limit::LossMax),
];

fn requirement(node: &Node, rated: RatedLoad, trail: &Trail<'_>, notes: &mut Notes) -> Option<Requirement> {
    let mut fields = Fields::open(node, trail, "`{efficiency_min: 90 %, load: 6 A}`", notes)?;
    let mut limits = Vec::new();
    let mut given = 0;
    for (key, make) in LIMITS {
        let Some(node) = fields.take(key.name) else { continue };
        given += 1;
        let trail = trail.key(key.name);
        let Some(number) = value(node, key, &trail, notes) else { continue };
        if key.name == "efficiency_min" && number > 1.0 {
            notes.value_error(&trail, node, Blame::new("is above 100 %", "no rail gives more than it takes"));
            continue;
        }
        limits.push(make(number));
    }
    let at = point(&mut fields, rated, notes);
    let names = LIMITS.map(|(key, _)| key.name);
    fields.close_with(
        Some(Vocabulary::Axis),
        || names.into_iter().chain(ALL_AXES.map(AxisName::name)).collect(),
        notes,
    );
    if given != 1 {
        let blame = match given {
            0 => Blame::new("sets no limit", format!("add one of {}", listed(names))),
            _ => Blame::new("sets several limits", "give each limit an entry of its own"),
        };
        notes.key_error(trail, blame);
    }
    limits.pop().map(|limit| Requirement { limit, at })
}

/// Time shares of operating points.
pub(crate) fn profile(
    node: &Node,
    rated: RatedLoad,
    trail: &Trail<'_>,
    notes: &mut Notes,
) -> Vec<ProfilePoint> {
    let before = notes.errors();
    let mut all = Vec::new();
    each(node, trail, notes, |item, trail, notes| {
        let Some(mut fields) = Fields::open(item, trail, "`{share: 70 %, load: 1 A}`", notes) else { return };
        let share = fields
            .require("share", keys::SHARE.example, notes)
            .and_then(|node| value(node, &keys::SHARE, &trail.key("share"), notes));
        let at = point(&mut fields, rated, notes);
        fields.close_with(
            Some(Vocabulary::Axis),
            || ["share"].into_iter().chain(ALL_AXES.map(AxisName::name)).collect(),
            notes,
        );
        all.extend(share.map(|share| ProfilePoint { share, at }));
    });
    let sum: f64 = all.iter().map(|point| point.share).sum();
    // shares are typed with a few digits; a millionth is far below any of them
    if notes.errors() == before && (sum - 1.0).abs() > 1e-6 {
        let shown = (sum * 1e8).round() / 1e6;
        let blame = Blame::new(format!("the shares add up to {shown} %, not to 100 %"), "correct the shares");
        notes.key_error(trail, blame);
    }
    all
}

/// Energy of the battery, J.
pub(crate) fn battery(node: &Node, trail: &Trail<'_>, notes: &mut Notes) -> Option<f64> {
    let mut fields = Fields::open(node, trail, "`battery: {energy: 50 Wh}`", notes)?;
    let energy = fields
        .require("energy", keys::BATTERY_ENERGY.example, notes)
        .and_then(|node| value(node, &keys::BATTERY_ENERGY, &trail.key("energy"), notes));
    fields.close(|| vec!["energy"], notes);
    energy
}

/// Accuracies of the bench's instruments.
pub(crate) fn bench(node: &Node, trail: &Trail<'_>, notes: &mut Notes) -> Option<BenchAccuracy> {
    const KEYS: [Key; 4] = [
        keys::accuracy("input_voltage"),
        keys::accuracy("input_current"),
        keys::accuracy("output_voltage"),
        keys::accuracy("output_current"),
    ];
    let like = "`{input_voltage: 0.1 %, input_current: 0.2 %, output_voltage: 0.1 %, output_current: 0.2 %}`";
    let mut fields = Fields::open(node, trail, like, notes)?;
    let read = KEYS.each_ref().map(|key| {
        let node = fields.require(key.name, key.example, notes)?;
        accuracy(node, key, &trail.key(key.name), notes)
    });
    fields.close(|| KEYS.map(|key| key.name).to_vec(), notes);
    let [input_voltage, input_current, output_voltage, output_current] = read;
    Some(BenchAccuracy {
        input_voltage: input_voltage?,
        input_current: input_current?,
        output_voltage: output_voltage?,
        output_current: output_current?,
    })
}

/// Accuracy of one instrument: of reading, or of reading and of range with its full scale.
fn accuracy(node: &Node, key: &Key, trail: &Trail<'_>, notes: &mut Notes) -> Option<Accuracy> {
    if !matches!(node, Node::Map(_)) {
        let of_reading = value(node, key, trail, notes)?;
        return Some(Accuracy { of_reading, of_range: 0.0 });
    }
    let dimension = if key.name.ends_with("voltage") { D::Voltage } else { D::Current };
    let full_scale = Key::new("full_scale", dimension, "full scale of the range");
    let like = "`{reading: 0.1 %, range: 0.05 %, full_scale: 40 V}`";
    let mut fields = Fields::open(node, trail, like, notes)?;
    let mut read = |key: &Key, notes: &mut Notes| {
        let node = fields.require(key.name, key.example, notes)?;
        value(node, key, &trail.key(key.name), notes)
    };
    let reading = read(&keys::accuracy("reading"), notes);
    let range = read(&keys::accuracy("range"), notes);
    let full_scale = read(&full_scale, notes);
    fields.close(|| vec!["reading", "range", "full_scale"], notes);
    Some(Accuracy { of_reading: reading?, of_range: range? * full_scale? })
}

/// Margins to ratings.
pub(crate) fn derating(node: &Node, trail: &Trail<'_>, notes: &mut Notes) -> Derating {
    const RATIOS: [Key; 4] = [
        keys::derated("voltage"),
        keys::derated("gate_voltage"),
        keys::derated("saturation"),
        keys::derated("ripple_current"),
    ];
    const MARGIN: Key =
        Key::new("junction_margin", D::TemperatureDifference, "distance to a junction rating")
            .zero()
            .example("25 K");
    let mut derating = Derating::default();
    let like = "`{voltage: 80 %, junction_margin: 25 K}`";
    let Some(mut fields) = Fields::open(node, trail, like, notes) else { return derating };
    let slots = [
        &mut derating.voltage,
        &mut derating.gate_voltage,
        &mut derating.saturation,
        &mut derating.ripple_current,
    ];
    for (key, slot) in RATIOS.iter().zip(slots) {
        let Some(node) = fields.take(key.name) else { continue };
        let trail = trail.key(key.name);
        match value(node, key, &trail, notes) {
            Some(share) if share > 1.0 => {
                notes.value_error(&trail, node, Blame::new("is above 100 %", "100 % uses a rating in full"));
            }
            Some(share) => *slot = share,
            None => {}
        }
    }
    if let Some(node) = fields.take(MARGIN.name)
        && let Some(margin) = value(node, &MARGIN, &trail.key(MARGIN.name), notes)
    {
        derating.junction_margin = margin;
    }
    fields.close(|| RATIOS.iter().map(|key| key.name).chain([MARGIN.name]).collect(), notes);
    derating
}

/// Copper, sense, snubber and heat from slot to slot.
pub(crate) fn board(node: &Node, trail: &Trail<'_>, notes: &mut Notes) -> (BoardSheet, Vec<Coupling>) {
    let (mut sheet, mut coupling) = (BoardSheet::default(), Vec::new());
    let Some(mut fields) = Fields::open(node, trail, "`{high_side_path: 0.5 mΩ, input_path: 2 mΩ}`", notes)
    else {
        return (sheet, coupling);
    };
    read_fields(&mut sheet, &mut fields, notes);
    if let Some(node) = fields.take(keys::COUPLING.name) {
        coupling = couplings(node, &trail.key(keys::COUPLING.name), notes);
    }
    let known = || key_names(&mut BoardSheet::default()).into_iter().chain([keys::COUPLING.name]).collect();
    fields.close(known, notes);
    (sheet, coupling)
}

/// Slots whose temperature the model computes.
const WARM: [Slot; 6] = [
    Slot::HighSide,
    Slot::LowSide,
    Slot::ParallelSchottky,
    Slot::FreewheelDiode,
    Slot::Inductor,
    Slot::Controller,
];

fn couplings(node: &Node, trail: &Trail<'_>, notes: &mut Notes) -> Vec<Coupling> {
    let like = "`{high_side: {low_side: 6 K/W}}`";
    let mut all = Vec::new();
    let (Some(_), Node::Map(rows)) = (Fields::open(node, trail, like, notes), node) else { return all };
    for (heated, row) in rows {
        let trail = trail.key(heated);
        let heated = slot(heated, &WARM, &trail, notes);
        let (Some(_), Node::Map(cells)) = (Fields::open(row, &trail, "`{low_side: 6 K/W}`", notes), row)
        else {
            continue;
        };
        for (heating, node) in cells {
            let trail = trail.key(heating);
            let heating = slot(heating, &ALL_SLOTS, &trail, notes);
            let resistance = value(node, &keys::COUPLING, &trail, notes);
            let (Some(heated), Some(heating), Some(resistance)) = (heated, heating, resistance) else {
                continue;
            };
            if heated == heating {
                let blame = Blame::new("a slot heats itself through its own r_th_ja", "take it out");
                notes.key_error(&trail, blame);
                continue;
            }
            all.push(Coupling { heated, heating, resistance });
        }
    }
    all
}

fn slot(name: &str, allowed: &[Slot], trail: &Trail<'_>, notes: &mut Notes) -> Option<Slot> {
    let found = allowed.iter().copied().find(|slot| slot.name() == name);
    if found.is_none() {
        let names = || allowed.iter().map(|slot| slot.name());
        let reason = match Slot::from_name(name) {
            Some(_) => "the temperature of this slot is not computed",
            None => "is no slot",
        };
        let hint = match nearest(name, names()) {
            Some(near) => format!("did you mean `{near}`?"),
            None => format!("the slots are {}", listed(names())),
        };
        notes.key_error(trail, Blame::new(reason, hint));
    }
    found
}
