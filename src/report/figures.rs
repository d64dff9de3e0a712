//! Figures of a review, with the tables of their numbers.

use crate::candidate::Candidate;
use crate::compare::Comparison;
use crate::findings::Severity;
use crate::grid::{Axis, AxisName, OperatingPoint};
use crate::infeasible::Infeasible;
use crate::ledger::{ALL_MECHANISMS, ALL_SLOTS, Mechanism};
use crate::loads;
use crate::model::Solved;
use crate::ratings;
use crate::report::figure::{Curves, Heat, HeatCell, Layer, Plot, Scale, Series, Stack};
use crate::report::number::Form;
use crate::report::{Cell, Column, Figure, Table, caption, tables, words};
use crate::sweep;
use crate::units::Dimension as D;

/// Loads at which a line is drawn.
const POINTS: u64 = 121;
/// Input voltages with a line each.
const MOST_LINES: usize = 3;
/// Loads with a bar or a column each.
const MOST_BARS: usize = 9;

fn at(comparison: &Comparison<'_>) -> String {
    format!("T_A {}", words::set(comparison.budget.headline.ambient, D::Temperature))
}

/// Loads from the smallest above zero to the largest, evenly spaced on a logarithmic axis.
fn fine_loads(comparison: &Comparison<'_>) -> Vec<f64> {
    let Some(axis) = comparison.budget.grid.axis(AxisName::Load) else { return Vec::new() };
    let positive = || axis.values().filter(|load| *load > 0.0);
    let (low, high) = (positive().fold(f64::INFINITY, f64::min), positive().fold(0.0, f64::max));
    if high <= low {
        return positive().take(1).collect();
    }
    Axis::Range { from: low, to: high, points: POINTS, log: true }.values().collect()
}

fn voltages(candidate: &Candidate<'_>) -> Vec<f64> {
    let mut values = tables::values(candidate, AxisName::InputVoltage);
    values.sort_by(f64::total_cmp);
    values.dedup();
    if values.len() <= MOST_LINES {
        return values;
    }
    vec![values[0], values[values.len() / 2], values[values.len() - 1]]
}

fn solve(candidate: &Candidate<'_>, point: OperatingPoint) -> Option<Solved> {
    candidate.evaluate(point).ok()
}

/// One line a stage and input voltage.
fn lines(comparison: &Comparison<'_>, volts: impl Fn(&Candidate<'_>) -> Vec<f64> + Sync) -> Vec<Series> {
    let loads = fine_loads(comparison);
    let numbered: Vec<_> = comparison.candidates.iter().enumerate().collect();
    let lines: Vec<Vec<Series>> = sweep::map(&numbered, |(group, candidate)| {
        let all = volts(candidate).into_iter().enumerate();
        all.map(|(stroke, v_in)| {
            let base = candidate.headline().with(AxisName::InputVoltage, v_in);
            let point = |load: &f64| {
                let solved = solve(candidate, base.with(AxisName::Load, *load));
                (*load, solved.and_then(|solved| solved.efficiency()))
            };
            let label = format!("{}, {}", candidate.name(), words::set(v_in, D::Voltage));
            Series { label, stroke, group: *group, points: loads.iter().map(point).collect() }
        })
        .collect()
    });
    lines.into_iter().flatten().collect()
}

/// Efficiency against load at the headline's input voltage, one line a stage: what fits a terminal.
pub(super) fn efficiency_at_headline(comparison: &Comparison<'_>) -> Figure {
    let v_in = comparison.budget.headline.input_voltage;
    let mut series = lines(comparison, |_| vec![v_in]);
    for (line, candidate) in series.iter_mut().zip(comparison.candidates) {
        line.stroke = line.group;
        line.label = candidate.name().to_owned();
    }
    let fixed = format!("V_IN {}, {}", words::set(v_in, D::Voltage), at(comparison));
    Figure {
        title: "Efficiency against load".into(),
        caption: caption::budget(comparison.budget, &fixed),
        description: in_words(&series),
        plot: Plot::Curves(Curves {
            x: Scale { title: "load, I_OUT".into(), form: Form::Setting(D::Current), log: true },
            y: Scale { title: "efficiency".into(), form: Form::Efficiency, log: false },
            series,
            marks: crossovers(comparison),
        }),
    }
}

/// Efficiency against load, one line a stage and input voltage: on a logarithmic and on a linear axis.
pub(super) fn efficiency(comparison: &Comparison<'_>) -> Vec<Figure> {
    let series = lines(comparison, voltages);
    let marks = crossovers(comparison);
    let fixed =
        format!("{}; dashes tell input voltages apart; upright lines mark crossovers", at(comparison));
    [true, false]
        .into_iter()
        .map(|log| Figure {
            title: format!(
                "Efficiency against load, {} load axis",
                if log { "logarithmic" } else { "linear" }
            ),
            caption: caption::budget(comparison.budget, &fixed),
            description: in_words(&series),
            plot: Plot::Curves(Curves {
                x: Scale { title: "load, I_OUT".into(), form: Form::Setting(D::Current), log },
                y: Scale { title: "efficiency".into(), form: Form::Efficiency, log: false },
                series: series.clone(),
                marks: if log { marks.clone() } else { Vec::new() },
            }),
        })
        .collect()
}

/// "synchronous, 24 V: 93.65 % at most, at 5 A; 90.1 % at 10 A".
fn in_words(series: &[Series]) -> String {
    let one = |line: &Series| {
        let known = || line.points.iter().filter_map(|(load, value)| Some((*load, (*value)?)));
        let best = known().max_by(|a, b| a.1.total_cmp(&b.1));
        let (Some(best), Some(last)) = (best, known().next_back()) else {
            return format!("{}: cannot run", line.label);
        };
        format!(
            "{}: {} at best, at {}; {} at {}",
            line.label,
            Cell::efficiency(best.1).shown(),
            Cell::quantity(best.0, D::Current).shown(),
            Cell::efficiency(last.1).shown(),
            Cell::quantity(last.0, D::Current).shown()
        )
    };
    series.iter().map(one).collect::<Vec<_>>().join(". ")
}

/// Crossovers at the headline's input voltage.
fn crossovers(comparison: &Comparison<'_>) -> Vec<(f64, String)> {
    let here =
        comparison.crossovers.iter().filter(|c| c.input_voltage == comparison.budget.headline.input_voltage);
    here.map(|crossover| (crossover.load, Cell::quantity(crossover.load, D::Current).shown())).collect()
}

/// A few loads of the printed ones, both ends among them.
fn bar_loads(comparison: &Comparison<'_>) -> Vec<f64> {
    let axis = comparison.budget.grid.axis(AxisName::Load);
    let all: Vec<f64> = axis.map(loads::printed).unwrap_or_default();
    if all.len() <= MOST_BARS {
        return all;
    }
    (0..MOST_BARS).map(|k| all[k * (all.len() - 1) / (MOST_BARS - 1)]).collect()
}

/// Loss against load, stacked by mechanism: one figure and table a stage.
pub(super) fn loss_over_load(comparison: &Comparison<'_>) -> Vec<(Figure, Table)> {
    let loads = bar_loads(comparison);
    comparison.candidates.iter().map(|candidate| stacked(comparison, candidate, &loads)).collect()
}

fn stacked(comparison: &Comparison<'_>, candidate: &Candidate<'_>, loads: &[f64]) -> (Figure, Table) {
    let points: Vec<_> = loads.iter().map(|load| candidate.headline().with(AxisName::Load, *load)).collect();
    let solved: Vec<_> = points.iter().map(|point| candidate.evaluate(*point)).collect();
    let mechanisms: Vec<_> = ALL_MECHANISMS
        .into_iter()
        .filter(|m| candidate.accounts.iter().any(|account| account.mechanism() == *m))
        .filter(|m| solved.iter().flatten().any(|solved| solved.ledger.mechanism(*m) > 0.0))
        .collect();
    let layers = mechanisms.iter().map(|mechanism| {
        let watts = solved.iter().map(|solved| Some(solved.as_ref().ok()?.ledger.mechanism(*mechanism)));
        Layer { name: mechanism.words(), fill: *mechanism as usize, values: watts.collect() }
    });
    let headline = &comparison.budget.headline;
    let fixed = format!("V_IN {}, {}", words::set(headline.input_voltage, D::Voltage), at(comparison));
    let places: Vec<String> = loads.iter().map(|load| words::set(*load, D::Current)).collect();
    let table = mechanisms_down(candidate, &fixed, &mechanisms, (&places, &solved));
    let largest = solved.iter().flatten().map(Solved::loss).fold(0.0, f64::max);
    let figure = Figure {
        title: format!("Loss of {} against load, stacked by mechanism", candidate.name()),
        caption: caption::stage(candidate, &fixed),
        description: format!(
            "Stacked bars for loads from {} to {}; the tallest is {}. The table below has the numbers.",
            places.first().map_or("", String::as_str),
            places.last().map_or("", String::as_str),
            Cell::watts(largest).shown()
        ),
        plot: Plot::Stack(Stack {
            x: "load, I_OUT".into(),
            y: Scale { title: "loss".into(), form: Form::Result(D::Power), log: false },
            places,
            layers: layers.collect(),
        }),
    };
    (figure, table)
}

/// Loss by mechanism, loads across.
fn mechanisms_down(
    candidate: &Candidate<'_>,
    fixed: &str,
    mechanisms: &[Mechanism],
    (places, solved): (&[String], &[Result<Solved, Infeasible>]),
) -> Table {
    let mut columns = vec![Column::text("mechanism")];
    columns.extend(places.iter().map(Column::quantity));
    let mut table = Table::new(caption::stage(candidate, fixed), columns);
    let row = |name: String, watts: &dyn Fn(&Solved) -> f64, say_why: bool| {
        let mut cells = vec![Cell::text(name)];
        cells.extend(solved.iter().map(|solved| match solved {
            Ok(solved) => Cell::watts(watts(solved)),
            Err(reason) if say_why => Cell::missing(reason.to_string()),
            Err(_) => Cell::missing(""),
        }));
        cells
    };
    for mechanism in mechanisms {
        table.row(row(mechanism.words(), &|solved| solved.ledger.mechanism(*mechanism), false));
    }
    table.total(row("loss".into(), &Solved::loss, true));
    table
}

/// Share of each part in the loss at the headline, one bar a stage.
pub(super) fn loss_by_part(comparison: &Comparison<'_>) -> Option<Figure> {
    let solved: Vec<Option<&Solved>> = comparison
        .headline
        .iter()
        .map(|record| record.outcome.as_ref().ok().map(|detail| &detail.solved))
        .collect();
    let any = |test: &dyn Fn(&Solved) -> bool| solved.iter().flatten().any(|solved| test(solved));
    if !any(&|solved| solved.loss() > 0.0) {
        return None;
    }
    let layers =
        ALL_SLOTS.into_iter().filter(|slot| any(&|solved| solved.ledger.slot(*slot) > 0.0)).map(|slot| {
            let share =
                |solved: &Option<&Solved>| solved.map(|solved| solved.ledger.slot(slot) / solved.loss());
            Layer { name: slot.words(), fill: slot.index(), values: solved.iter().map(share).collect() }
        });
    let places = comparison.candidates.iter().zip(&solved).map(|(candidate, solved)| match solved {
        Some(solved) => format!("{}, {}", candidate.name(), Cell::watts(solved.loss()).shown()),
        None => format!("{}, cannot run", candidate.name()),
    });
    Some(Figure {
        title: "Share of each part in the loss".into(),
        caption: caption::budget(comparison.budget, &words::point(&comparison.budget.headline)),
        description: "One bar a stage, each 100 % of that stage's loss. The table below has the numbers."
            .into(),
        plot: Plot::Stack(Stack {
            x: "stage and its loss at the headline".into(),
            y: Scale { title: "share of the loss".into(), form: Form::Share, log: false },
            places: places.collect(),
            layers: layers.collect(),
        }),
    })
}

/// Least temperature margin over input voltage and load at the hottest ambient of the grid, one a stage.
pub(super) fn margins(comparison: &Comparison<'_>) -> Vec<(Figure, Table)> {
    let headline = comparison.budget.headline.ambient;
    let axis = comparison.budget.grid.axis(AxisName::Ambient);
    let ambient = axis.map_or(headline, |axis| axis.values().fold(headline, f64::max));
    let loads = bar_loads(comparison);
    comparison.candidates.iter().map(|candidate| margin_map(comparison, candidate, &loads, ambient)).collect()
}

fn margin_map(
    comparison: &Comparison<'_>,
    candidate: &Candidate<'_>,
    loads: &[f64],
    ambient: f64,
) -> (Figure, Table) {
    let wanted = comparison.budget.derating.junction_margin;
    let volts = tables::chosen(&tables::values(candidate, AxisName::InputVoltage));
    let columns: Vec<String> = loads.iter().map(|load| words::set(*load, D::Current)).collect();
    let mut titles = vec![Column::quantity("V_IN")];
    titles.extend(columns.iter().map(Column::quantity));
    let fixed =
        format!("margin of the part nearest to its rating, T_A {}", words::set(ambient, D::Temperature));
    let mut table = Table::new(caption::stage(candidate, &fixed), titles);
    let mut least: Option<f64> = None;
    let rows = volts.iter().map(|v_in| {
        let mut cells = vec![Cell::setting(*v_in, D::Voltage)];
        let row = loads.iter().map(|load| {
            let base = candidate.headline().with(AxisName::InputVoltage, *v_in);
            let point = base.with(AxisName::Ambient, ambient).with(AxisName::Load, *load);
            let margin = candidate.evaluate(point).map_err(|reason| reason.to_string()).and_then(|solved| {
                ratings::junction_margin(candidate.sheet, &solved).ok_or("no temperature rating".into())
            });
            match margin {
                Err(reason) => {
                    cells.push(Cell::missing(reason));
                    HeatCell { text: "—".into(), shade: None, severity: None }
                }
                Ok((slot, margin)) => {
                    least = Some(least.map_or(margin, |least| least.min(margin)));
                    let severity = match margin {
                        margin if margin < 0.0 => Some(Severity::Critical),
                        margin if margin < wanted => Some(Severity::Warning),
                        _ => None,
                    };
                    let words = format!(
                        "{} {}",
                        slot.words(),
                        Cell::quantity(margin, D::TemperatureDifference).shown()
                    );
                    let cell = Cell::text(words);
                    cells.push(severity.map_or(cell.clone(), |severity| cell.flagged(severity, "")));
                    // no shade from twice the wanted margin on, the darkest below the rating
                    let shade = (1.0 - margin / (2.0 * wanted.max(1.0))).clamp(0.0, 1.0);
                    HeatCell { text: format!("{margin:.0}"), shade: Some(shade), severity }
                }
            }
        });
        let row: Vec<HeatCell> = row.collect();
        table.row(std::mem::take(&mut cells));
        (words::set(*v_in, D::Voltage), row)
    });
    let rows: Vec<_> = rows.collect();
    let description = match least {
        Some(least) => format!(
            "Numbers on shades over input voltage and load; the least margin is {}. The table below names the parts.",
            Cell::quantity(least, D::TemperatureDifference).shown()
        ),
        None => "No point has a margin: no temperature rating, or the stage cannot run.".into(),
    };
    let figure = Figure {
        title: format!("Temperature margin of {}", candidate.name()),
        caption: format!(
            "{} · ! less than {} to the rating, !! above the rating",
            caption::stage(candidate, &fixed),
            words::set(wanted, D::TemperatureDifference)
        ),
        description,
        plot: Plot::Heat(Heat {
            x: "load, I_OUT".into(),
            y: "V_IN".into(),
            columns,
            rows,
            unit: "margin in K".into(),
        }),
    };
    (figure, table)
}
