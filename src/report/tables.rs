//! Efficiency-versus-load tables as a document.

use crate::average;
use crate::budget::Budget;
use crate::candidate::Candidate;
use crate::findings::Severity;
use crate::grid::{AxisName, OperatingPoint, PartialPoint};
use crate::ledger::{ALL_MECHANISMS, ALL_SLOTS};
use crate::loads;
use crate::model::Solved;
use crate::record::{Detail, Record};
use crate::report::{Cell, Column, Document, Table, caption, words};
use crate::tabulate::{Load, Request, Split};
use crate::units::Dimension as D;

/// Most input voltages side by side in one table.
const MOST_VOLTAGES: usize = 6;

/// The tables asked for, stage by stage.
pub fn document(budget: &Budget, candidates: &[Candidate<'_>], request: &Request) -> Document {
    let mut document = Document::new(budget.name.clone());
    for candidate in candidates {
        document.heading(2, candidate.name());
        for missing in &candidate.not_modelled {
            document.notice(Severity::Note, format!("not modelled: {missing}"));
        }
        let (ambients, frequencies) =
            (values(candidate, AxisName::Ambient), values(candidate, AxisName::SwitchingFrequency));
        for ambient in &ambients {
            for frequency in &frequencies {
                let at = PartialPoint {
                    ambient: Some(*ambient),
                    switching_frequency: (*frequency > 0.0).then_some(*frequency),
                    ..PartialPoint::default()
                };
                if request.full || request.split.is_some() {
                    for v_in in values(candidate, AxisName::InputVoltage) {
                        let at = PartialPoint { input_voltage: Some(v_in), ..at };
                        document.table(one_combination(candidate, request, at));
                    }
                } else {
                    document.table(across_voltages(candidate, request, at));
                }
            }
        }
        averages(candidate, &mut document);
    }
    document
}

/// Values of an axis; 0 where the stage has none.
pub(crate) fn values(candidate: &Candidate<'_>, axis: AxisName) -> Vec<f64> {
    candidate.grid.axis(axis).map_or_else(|| vec![0.0], |axis| axis.values().collect())
}

fn rows(candidate: &Candidate<'_>, request: &Request) -> Vec<f64> {
    let budget = candidate.budget;
    if let Some(asked) = &request.loads {
        let rated = budget.rated_load.unwrap_or(0.0);
        let amperes = |load: &Load| match load {
            Load::Amperes(amperes) => *amperes,
            Load::OfRated(share) => share * rated,
        };
        return asked.iter().map(amperes).collect();
    }
    match candidate.grid.axis(AxisName::Load) {
        Some(axis) if request.full => axis.values().collect(),
        Some(axis) => loads::printed(axis),
        None => Vec::new(),
    }
}

fn load_cell(candidate: &Candidate<'_>, request: &Request, load: f64) -> Cell {
    let asked =
        request.loads.as_ref().is_some_and(|loads| loads.iter().any(|load| matches!(load, Load::OfRated(_))));
    match candidate.budget.rated_load {
        Some(rated) if asked => {
            let share = words::set(load / rated, D::Ratio);
            Cell::text(format!("{} ({share})", words::set(load, D::Current)))
        }
        _ => Cell::setting(load, D::Current),
    }
}

fn fixed(candidate: &Candidate<'_>, at: PartialPoint) -> String {
    let mut parts = Vec::new();
    if let Some(v_in) = at.input_voltage {
        parts.push(format!("V_IN {}", words::set(v_in, D::Voltage)));
    } else {
        parts.push(format!("V_IN {}", range(&values(candidate, AxisName::InputVoltage), D::Voltage)));
    }
    parts.push(format!("V_OUT {}", words::set(candidate.budget.output_voltage, D::Voltage)));
    if let Some(frequency) = at.switching_frequency {
        parts.push(format!("f_SW {}", words::set(frequency, D::Frequency)));
    }
    if let Some(ambient) = at.ambient {
        parts.push(format!("T_A {}", words::set(ambient, D::Temperature)));
    }
    parts.join(", ")
}

fn range(values: &[f64], dimension: D) -> String {
    match values {
        [] => String::new(),
        [only] => words::set(*only, dimension),
        [first, .., last] => format!("{} to {}", words::set(*first, dimension), words::set(*last, dimension)),
    }
}

/// Loads down, input voltages across: efficiency and loss.
fn across_voltages(candidate: &Candidate<'_>, request: &Request, at: PartialPoint) -> Table {
    let all = values(candidate, AxisName::InputVoltage);
    let voltages = chosen(&all);
    let mut columns = vec![Column::quantity("load")];
    for v_in in &voltages {
        let over = format!("V_IN {}", words::set(*v_in, D::Voltage));
        columns.push(Column::quantity("efficiency").under(&over));
        columns.push(Column::quantity("loss").under(&over));
    }
    let mut what = fixed(candidate, at);
    if voltages.len() < all.len() {
        what.push_str(&format!(" ({} of {} input voltages; CSV has all)", voltages.len(), all.len()));
    }
    let mut table = Table::new(caption::stage(candidate, &what), columns);
    for load in rows(candidate, request) {
        let mut cells = vec![load_cell(candidate, request, load)];
        for v_in in &voltages {
            let named = PartialPoint { input_voltage: Some(*v_in), load: Some(load), ..at };
            let record = Record::of(candidate, candidate.at(named));
            cells.extend(efficiency_and_loss(&record));
        }
        table.row(cells);
    }
    table
}

/// All values of an axis, or both ends and some between when they are many.
pub(crate) fn chosen(values: &[f64]) -> Vec<f64> {
    if values.len() <= MOST_VOLTAGES {
        return values.to_vec();
    }
    let place = |k: usize| k * (values.len() - 1) / (MOST_VOLTAGES - 1);
    (0..MOST_VOLTAGES).filter_map(|k| values.get(place(k)).copied()).collect()
}

fn efficiency_and_loss(record: &Record<'_>) -> [Cell; 2] {
    match &record.outcome {
        Ok(detail) => {
            let efficiency = detail.solved.efficiency().map_or(Cell::missing("no load"), Cell::efficiency);
            [flagged(efficiency, detail), Cell::watts(detail.solved.loss())]
        }
        Err(reason) => [Cell::missing(reason.to_string()), Cell::missing("")],
    }
}

/// The number with the gravest rating finding beside it.
fn flagged(cell: Cell, detail: &Detail) -> Cell {
    match detail.findings.first() {
        Some(finding) if finding.severity == Severity::Critical => {
            let remark = format!("{}: {}", finding.slot.words(), finding.kind.replace('_', " "));
            cell.flagged(Severity::Critical, remark)
        }
        _ => cell,
    }
}

/// One table for one combination of the other axes: every column, or the loss split by part or mechanism.
fn one_combination(candidate: &Candidate<'_>, request: &Request, at: PartialPoint) -> Table {
    let (titles, split) = split_columns(candidate, request.split);
    let mut columns = vec![Column::quantity("load")];
    if request.full {
        columns.extend(["output power", "input power", "input current"].map(Column::quantity));
    }
    columns.extend(["efficiency", "loss"].map(Column::quantity));
    if request.full {
        columns.push(Column::text("mode"));
        columns.push(Column::text("hottest part"));
    }
    columns.extend(titles.into_iter().map(Column::quantity));
    let mut table = Table::new(caption::stage(candidate, &fixed(candidate, at)), columns);
    for load in rows(candidate, request) {
        let point: OperatingPoint = candidate.at(PartialPoint { load: Some(load), ..at });
        let record = Record::of(candidate, point);
        let mut cells = vec![load_cell(candidate, request, load)];
        match &record.outcome {
            Err(reason) => cells.push(Cell::missing(reason.to_string())),
            Ok(detail) => {
                let solved = &detail.solved;
                if request.full {
                    cells.push(Cell::watts(solved.output_power()));
                    cells.push(Cell::watts(solved.input_power()));
                    cells.push(Cell::quantity(solved.input_power() / point.input_voltage, D::Current));
                }
                cells.extend(efficiency_and_loss(&record));
                if request.full {
                    let mode = solved.waveform.map_or("linear", |waveform| waveform.mode.name());
                    cells.push(Cell::text(mode.replace('_', " ")));
                    cells.push(hottest(solved));
                }
                cells.extend(split.iter().map(|watts| Cell::watts(watts(solved))));
            }
        }
        table.row(cells);
    }
    table
}

fn hottest(solved: &Solved) -> Cell {
    match solved.hottest() {
        Some((slot, temperature)) => {
            Cell::text(format!("{} {}", slot.words(), Cell::temperature(temperature).shown()))
        }
        None => Cell::missing("no thermal data"),
    }
}

type Watts = Box<dyn Fn(&Solved) -> f64>;

fn split_columns(candidate: &Candidate<'_>, split: Option<Split>) -> (Vec<String>, Vec<Watts>) {
    let mut titles = Vec::new();
    let mut watts: Vec<Watts> = Vec::new();
    match split {
        None => {}
        Some(Split::Part) => {
            for slot in ALL_SLOTS {
                if candidate.accounts.iter().any(|account| account.slot() == slot) {
                    titles.push(slot.words());
                    watts.push(Box::new(move |solved| solved.ledger.slot(slot)));
                }
            }
        }
        Some(Split::Mechanism) => {
            for mechanism in ALL_MECHANISMS {
                if candidate.accounts.iter().any(|account| account.mechanism() == mechanism) {
                    titles.push(mechanism.words());
                    watts.push(Box::new(move |solved| solved.ledger.mechanism(mechanism)));
                }
            }
        }
    }
    (titles, watts)
}

/// Mean active efficiency by input voltage and ambient at one frequency; 0 where the stage has none.
fn mean_active(candidate: &Candidate<'_>, what: &str, rated: f64, frequency: f64) -> Table {
    let columns =
        vec![Column::quantity("V_IN"), Column::quantity("T_A"), Column::quantity("mean active efficiency")];
    let own = (frequency > 0.0).then_some(frequency);
    let what = match own {
        Some(frequency) => format!("{what}, f_SW {}", words::set(frequency, D::Frequency)),
        None => what.to_owned(),
    };
    let mut table = Table::new(caption::stage(candidate, &what), columns).with_keys(2);
    for ambient in values(candidate, AxisName::Ambient) {
        for v_in in chosen(&values(candidate, AxisName::InputVoltage)) {
            let named = PartialPoint {
                input_voltage: Some(v_in),
                ambient: Some(ambient),
                switching_frequency: own,
                ..PartialPoint::default()
            };
            let mean = average::mean_active(candidate, candidate.at(named), rated);
            table.row(vec![
                Cell::setting(v_in, D::Voltage),
                Cell::setting(ambient, D::Temperature),
                mean.map_or_else(|reason| Cell::missing(reason.to_string()), Cell::efficiency),
            ]);
        }
    }
    table
}

/// Mean active efficiency by input voltage, and the energy-weighted efficiency of the profile under its own name.
fn averages(candidate: &Candidate<'_>, document: &mut Document) {
    if let Some(rated) = candidate.budget.rated_load {
        let what = format!("mean of 25, 50, 75 and 100 % of {}", words::set(rated, D::Current));
        for frequency in values(candidate, AxisName::SwitchingFrequency) {
            document.table(mean_active(candidate, &what, rated, frequency));
        }
    }
    match average::over_profile(candidate, PartialPoint::default()) {
        None => {}
        Some(Err(reason)) => {
            document.notice(Severity::Warning, format!("the profile cannot be served: {reason}"));
        }
        Some(Ok(power)) => {
            let efficiency = power.efficiency().map_or(Cell::missing("no load"), Cell::efficiency);
            let at = words::point(&candidate.headline());
            document.fact("profile, unnamed coordinates", Cell::text(at));
            document.fact("energy-weighted efficiency over the profile", efficiency);
            document.fact("mean loss over the profile", Cell::watts(power.loss));
        }
    }
}
