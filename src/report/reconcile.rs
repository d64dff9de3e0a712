//! A budget beside its bench as a document.

use crate::absorb::{Absorber, Absorbers};
use crate::budget::Budget;
use crate::grid::Axis;
use crate::reconcile::{COVERAGE, Point, RESOLUTION, Reconciliation, Remainder, Verdict};
use crate::report::figure::{ErrorPoint, Errors, Figure, Plot, Scale};
use crate::report::number::{Form, show};
use crate::report::{Block, Cell, Column, Document, Severity, Table, bars, caption, words};
use crate::units::Dimension as D;

/// Singles, and pairs, that are listed.
const LISTED: usize = 8;

/// The whole answer: the sentence, the points, the remainder in words, what could absorb it.
pub fn document(budget: &Budget, result: &Reconciliation) -> Document {
    let mut document = Document::new(format!("{}: bench of {}", budget.name, result.stage));
    document.fact("computed by", Cell::text(caption::origin(budget)));
    document.fact("stage", Cell::text(result.stage.clone()));
    document.verdict(sentence(result));
    for rejected in &result.rejected {
        let text = format!("line {} left out: {}", rejected.line, rejected.reason);
        document.notice(Severity::Warning, text);
    }
    document.heading(2, "Points");
    document.paragraph(format!(
        "± is one standard uncertainty (JCGM 100): the stated accuracies of the four readings, taken as evenly \
         distributed and independent. A point disagrees beyond {COVERAGE:.0} of them; where {COVERAGE:.0} of them exceed \
         {:.0} % of the booked loss, agreement would mean nothing. The bars show measured less booked, {COVERAGE:.0} \
         standard uncertainties to either side. What the parts' tolerances leave open is not in them: see \
         lossbook spread.",
        100.0 * RESOLUTION
    ));
    document.table(points(result));
    document.heading(2, "Remainder over the load");
    document.blocks.push(Block::Figure(figure(result)));
    document.list(remainder(budget, result));
    document.heading(2, "What could absorb it");
    absorbers(&result.absorbers, result, &mut document);
    document
}

fn sentence(result: &Reconciliation) -> String {
    let count = |verdict| result.points.iter().filter(|point| point.verdict == verdict).count();
    let mut parts = Vec::new();
    for verdict in [Verdict::Agrees, Verdict::Disagrees, Verdict::CannotTell] {
        let points = count(verdict);
        if points > 0 {
            parts.push(match (verdict, points) {
                (Verdict::Agrees, 1) => "1 agrees".into(),
                (Verdict::Agrees, n) => format!("{n} agree"),
                (Verdict::Disagrees, 1) => "1 disagrees".into(),
                (Verdict::Disagrees, n) => format!("{n} disagree"),
                (Verdict::CannotTell, n) => format!("{n} cannot tell"),
            });
        }
    }
    let of = words::count(result.points.len(), "point");
    format!("Verdict: of {of}, {}.", words::list(&parts))
}

fn points(result: &Reconciliation) -> Table {
    let columns = vec![
        Column::quantity("line"),
        Column::quantity("V_IN"),
        Column::quantity("load"),
        Column::quantity("measured"),
        Column::quantity("±"),
        Column::quantity("booked"),
        Column::quantity("difference"),
        Column::quantity("in ±"),
        Column::text("verdict"),
        Column::text("less │ more"),
    ];
    let mut table =
        Table::new(format!("{} · booked with typical values", result.stage), columns).with_keys(1);
    let end = |point: &Point| point.deviation.map_or(0.0, |deviation| deviation.abs() + COVERAGE);
    // very large deviations would squeeze the others to nothing
    let largest = result.points.iter().map(end).fold(0.0, f64::max).min(12.0);
    for point in &result.points {
        let none = || Cell::missing(point.reason.clone().unwrap_or_default());
        let watts = |value: Option<f64>| value.map_or_else(none, Cell::watts);
        let verdict = Cell::text(point.verdict.words());
        table.row(vec![
            Cell::count(point.line as u64),
            Cell::quantity(point.input_voltage, D::Voltage),
            Cell::quantity(point.load, D::Current),
            Cell::watts(point.measured_loss),
            Cell::watts(point.measured_loss_sigma),
            watts(point.booked_loss),
            watts(point.difference),
            point.deviation.map_or_else(none, |deviation| Cell::text(format!("{deviation:+.1}"))),
            if point.verdict == Verdict::Disagrees {
                verdict.flagged(Severity::Warning, "")
            } else {
                verdict
            },
            point
                .deviation
                .map_or(Cell::Blank, |deviation| Cell::text(bars::error_bar(deviation, COVERAGE, largest))),
        ]);
    }
    table
}

/// Measured less booked over the load with error bars, and the three terms through them.
fn figure(result: &Reconciliation) -> Figure {
    let used = || result.points.iter().filter(|point| point.difference.is_some() && point.load > 0.0);
    let points: Vec<ErrorPoint> = used()
        .filter_map(|point| {
            Some(ErrorPoint {
                x: point.load,
                y: point.difference?,
                half: COVERAGE * point.measured_loss_sigma,
                stands_out: point.verdict == Verdict::Disagrees,
            })
        })
        .collect();
    let mut loads: Vec<f64> = points.iter().map(|point| point.x).collect();
    loads.sort_by(f64::total_cmp);
    let curve = || match &result.remainder {
        None => Vec::new(),
        Some(fit) => {
            let at =
                |load: f64| fit.constant.watts + fit.linear.volts * load + fit.quadratic.ohms * load * load;
            let (Some(from), Some(to)) = (loads.first(), loads.last()) else { return Vec::new() };
            let smooth = Axis::Range { from: *from, to: *to, points: 80, log: true };
            smooth.values().map(|load| (load, at(load))).collect()
        }
    };
    Figure {
        title: "Measured less booked over the load".into(),
        caption: format!("{} · bars are {COVERAGE:.0} standard uncertainties to either side", result.stage),
        description: sentence(result),
        plot: Plot::Errors(Errors {
            x: Scale { title: "load".into(), form: Form::Setting(D::Current), log: true },
            y: Scale { title: "measured less booked".into(), form: Form::Result(D::Power), log: false },
            curve: curve(),
            points,
            curve_label: "remainder, three terms".into(),
        }),
    }
}

fn with_sigma(value: f64, sigma: f64, dimension: D) -> String {
    let form = Form::Result(dimension);
    format!("{} ± {}", show(value, form), show(sigma, form))
}

/// The terms of the remainder in the words of the trade.
fn remainder(budget: &Budget, result: &Reconciliation) -> Vec<String> {
    let Some(fit) = &result.remainder else {
        return vec![
            "Too few points, or too similar loads, to tell how the difference grows with the load: four or \
                     more points over a decade of load do."
                .into(),
        ];
    };
    let mut lines = Vec::new();
    let stands_out = |value: f64, sigma: f64| value > COVERAGE * sigma;
    let Remainder { constant, linear, quadratic, .. } = fit;
    if stands_out(quadratic.ohms, quadratic.sigma) {
        let resistance = with_sigma(quadratic.ohms, quadratic.sigma, D::Resistance);
        lines.push(format!(
            "Remainder fits {resistance} of resistance not in the budget: board copper, connections, a winding or a \
             channel hotter or larger than booked."
        ));
    }
    if stands_out(linear.volts, linear.sigma) {
        let share = 100.0 * linear.volts / budget.output_voltage;
        let drop = with_sigma(linear.volts, linear.sigma, D::Voltage);
        lines.push(format!(
            "Part that grows with the load: {drop}: a drop in a diode or a body diode, slower edges, or a gain error of an \
             instrument, {share:.2} % of the output voltage being the same."
        ));
    }
    if stands_out(constant.watts, constant.sigma) {
        let power = with_sigma(constant.watts, constant.sigma, D::Power);
        lines.push(format!("Constant part {power}: bias, core, gate drive or output charge."));
    }
    if lines.is_empty() {
        lines.push("No part of the difference stands out of its uncertainty.".into());
    }
    let below = result.points.iter().filter(|point| point.deviation.is_some_and(|d| d < -COVERAGE)).count();
    if below > 0 {
        lines.push(format!(
            "The budget books more than was measured at {}: what is booked too high cannot show as a remainder.",
            words::count(below, "point")
        ));
    }
    lines.push(format!(
        "All three terms: {}, {}, {}.",
        with_sigma(constant.watts, constant.sigma, D::Power),
        with_sigma(linear.volts, linear.sigma, D::Voltage),
        with_sigma(quadratic.ohms, quadratic.sigma, D::Resistance)
    ));
    if fit.widened > 1.0 {
        lines.push(format!(
            "The points scatter {:.1} times as far about these terms as the instruments explain; the uncertainties are \
             widened by that.",
            fit.widened
        ));
    }
    lines
}

fn absorbers(absorbers: &Absorbers, result: &Reconciliation, document: &mut Document) {
    let rows = result.points.iter().filter(|point| point.difference.is_some()).count().max(1) as f64;
    let rms = |chi_square: f64| (chi_square / rows).sqrt();
    if absorbers.single.is_empty() && absorbers.pairs.is_empty() {
        document.paragraph(format!(
            "The deviations are {:.1} standard uncertainties in the mean square as booked; no value of the budget, moved \
             alone or with another, makes that clearly better.",
            rms(absorbers.chi_square)
        ));
        return;
    }
    document.paragraph(format!(
        "Deviations as booked: {:.1} standard uncertainties in the mean square; about 1 is all that noise explains. Each \
         line moves one value of the budget, or two, never more; lines that do equally well are not told apart by this \
         bench.",
        rms(absorbers.chi_square)
    ));
    let columns = vec![
        Column::text("entry"),
        Column::text("value"),
        Column::quantity("booked"),
        Column::quantity("fits"),
        Column::quantity("±"),
        Column::quantity("deviations left"),
    ];
    let mut table = Table::new(format!("{} · one value moved, or two", result.stage), columns);
    let mut add = |absorber: &Absorber| {
        for (place, change) in absorber.changes.iter().enumerate() {
            let first = place == 0;
            let entry = format!("{} {}", change.slot, change.mechanism).replace('_', " ");
            let entry = if first { entry } else { format!("+ {entry}") };
            let left = format!("{:.2}", rms(absorber.chi_square));
            table.row(vec![
                Cell::text(entry),
                Cell::text(change.path.clone()),
                Cell::setting(change.booked, change.dimension),
                Cell::quantity(change.fitted, change.dimension),
                Cell::quantity(change.sigma, change.dimension),
                if first { Cell::text(left) } else { Cell::Blank },
            ]);
        }
    };
    absorbers.single.iter().take(LISTED).for_each(&mut add);
    absorbers.pairs.iter().take(LISTED).for_each(&mut add);
    document.table(table);
    let more = absorbers.pairs.len().saturating_sub(LISTED);
    if more > 0 {
        let pairs = words::count(more, "other pair");
        document
            .paragraph(format!("{pairs} in the JSON output fit as well: this bench cannot tell them apart."));
    }
}
