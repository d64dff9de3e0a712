//! The spread of a budget's stages as a document.

use crate::budget::Budget;
use crate::draws::Band;
use crate::report::{Cell, Column, Document, Severity, Table, bars, caption, words};
use crate::spread::{Contributor, PointSpread, Spread};
use crate::units::Dimension as D;

/// The whole answer: the draws stage by stage, the contributors, the interior scan, what the model leaves open.
pub fn document(budget: &Budget, spread: &Spread) -> Document {
    let mut document = Document::new(format!("{}: spread by part tolerance", budget.name));
    document.fact("computed by", Cell::text(caption::origin(budget)));
    document.fact("draws", Cell::text(format!("{}, seed {}", spread.draws, spread.seed)));
    document.paragraph(
        "Each value with printed limits is drawn evenly between them (where one limit is printed the typical value is \
         the other end), each with a stated deviation from a normal distribution; points of one curve move together, \
         and so does every value of a part marked together: true. Root-sum-square adds what each tolerance does alone; \
         worst takes every limit on its bad side at once.",
    );
    for stage in stages(spread) {
        document.heading(2, stage);
        if spread.untouched.iter().any(|name| name == stage) {
            document.paragraph("No value of this stage states a tolerance: nothing to draw.");
            continue;
        }
        document.table(draws(spread, stage));
        contributors(budget, spread, stage, &mut document);
    }
    interior(spread, &mut document);
    model(spread, &mut document);
    document
}

/// Names of the stages in order.
fn stages(spread: &Spread) -> Vec<&str> {
    let mut names: Vec<&str> = spread.points.iter().map(|point| point.stage.as_str()).collect();
    names.dedup();
    names
}

fn at(point: &PointSpread) -> String {
    let mut words = format!(
        "V_IN {}, T_A {}",
        words::set(point.input_voltage, D::Voltage),
        words::set(point.ambient, D::Temperature)
    );
    if let Some(frequency) = point.switching_frequency {
        words.push_str(&format!(", f_SW {}", words::set(frequency, D::Frequency)));
    }
    words
}

fn draws(spread: &Spread, stage: &str) -> Table {
    let mut columns = vec![Column::quantity("load")];
    let loss = ["typical", "mean", "5 %", "95 %", "RSS low", "RSS high", "worst"];
    columns.extend(loss.map(|title| Column::quantity(title).under("loss")));
    columns.extend(["mean", "5 %"].map(|title| Column::quantity(title).under("efficiency")));
    columns.push(Column::quantity("95 %").under("hottest part"));
    let points = || spread.points.iter().filter(|point| point.stage == stage);
    let fixed = points().next().map(at).unwrap_or_default();
    let drawn = format!("values drawn {} times, seed {}", spread.draws, spread.seed);
    let what = format!("{stage} · {fixed}");
    let mut table = Table::new(format!("{what} · {drawn}"), columns);
    for point in points() {
        let none = || Cell::missing(point.reason.clone().unwrap_or_default());
        let watts = |value: Option<f64>| value.map_or_else(none, Cell::watts);
        let band = |band: Option<Band>, of: fn(Band) -> f64, cell: fn(f64) -> Cell| {
            band.map_or_else(none, |band| cell(of(band)))
        };
        let mut load = Cell::setting(point.load, D::Current);
        if point.unusable > 0 {
            let reason = point.reason.as_deref().unwrap_or("cannot run");
            load = load.flagged(
                Severity::Warning,
                format!("{} of {} draws give no result: {reason}", point.unusable, spread.draws),
            );
        }
        let rss = |pick: fn(f64, crate::spread::TwoSided) -> f64| {
            Some(pick(point.typical?, point.root_sum_square?))
        };
        table.row(vec![
            load,
            watts(point.typical),
            band(point.loss, |b| b.mean, Cell::watts),
            band(point.loss, |b| b.p5, Cell::watts),
            band(point.loss, |b| b.p95, Cell::watts),
            watts(rss(|typical, rss| typical - rss.minus)),
            watts(rss(|typical, rss| typical + rss.plus)),
            watts(point.worst),
            band(point.efficiency, |b| b.mean, Cell::efficiency),
            band(point.efficiency, |b| b.p5, Cell::efficiency),
            band(point.hottest, |b| b.p95, Cell::temperature),
        ]);
    }
    table
}

fn contributors(budget: &Budget, spread: &Spread, stage: &str, document: &mut Document) {
    let list: Vec<&Contributor> =
        spread.contributors.iter().filter(|c| c.stage == stage && c.size() > 0.0).collect();
    if list.is_empty() {
        return;
    }
    document.heading(3, format!("What one tolerance alone does in {stage}"));
    let largest = list.iter().map(|c| c.size()).filter(|size| size.is_finite()).fold(0.0, f64::max);
    let columns = vec![
        Column::text("value"),
        Column::text("part"),
        Column::quantity("lower limit"),
        Column::quantity("upper limit"),
        Column::text("less │ more loss"),
    ];
    let what = format!("{stage} · {}", words::point(&headline(budget, stage)));
    let mut table = Table::new(format!("{what} · typical values but for the one named"), columns);
    let signed = |value: Option<f64>| match value {
        None => Cell::missing("cannot run there"),
        Some(value) => Cell::watts(value),
    };
    for c in list {
        table.row(vec![
            Cell::text(c.path.clone()),
            Cell::text(c.part.clone()),
            signed(c.low),
            signed(c.high),
            Cell::text(bars::two_sided([c.low, c.high], largest)),
        ]);
    }
    document.table(table);
}

/// The headline of a stage, with its own frequency or none.
fn headline(budget: &Budget, stage: &str) -> crate::grid::OperatingPoint {
    let sheet = budget.stages.iter().find(|sheet| sheet.name == stage);
    sheet.map_or(budget.headline, |sheet| crate::candidate::Candidate::typical(budget, sheet).headline())
}

fn interior(spread: &Spread, document: &mut Document) {
    if spread.interior.is_empty() {
        return;
    }
    document.heading(2, "Input voltage of the highest loss");
    document.paragraph(
        "A worst case need not lie at an end of the input voltage: scanned between the ends of the grid, every limit \
         on its bad side.",
    );
    let columns = vec![
        Column::text("stage"),
        Column::quantity("load"),
        Column::quantity("V_IN of the highest loss"),
        Column::quantity("highest loss"),
        Column::quantity("loss at the worse end"),
        Column::text("lies"),
    ];
    let mut table = Table::new("over the input voltage · worst values", columns).with_keys(2);
    for scan in &spread.interior {
        table.row(vec![
            Cell::text(scan.stage.clone()),
            Cell::setting(scan.load, D::Current),
            Cell::quantity(scan.input_voltage, D::Voltage),
            Cell::watts(scan.loss),
            Cell::watts(scan.ends),
            Cell::text(if scan.inside { "between the ends" } else { "at an end" }),
        ]);
    }
    document.table(table);
}

fn model(spread: &Spread, document: &mut Document) {
    document.heading(2, "What the model leaves open");
    document.paragraph(
        "No tolerance of a part, and not in the draws above: another account of the same mechanism would book this much \
         less or more. Overlap: from the lowest reading of a transient solution up to the textbook sum (E17); recovery: \
         its charge growing with the current to the power of 0.5 to 1 (E18).",
    );
    let columns = vec![
        Column::text("stage"),
        Column::quantity("load"),
        Column::text("mechanism"),
        Column::quantity("less"),
        Column::quantity("more"),
    ];
    let mut table = Table::new("another account · typical values", columns).with_keys(3);
    for point in &spread.points {
        for term in &point.model {
            table.row(vec![
                Cell::text(point.stage.clone()),
                Cell::setting(point.load, D::Current),
                Cell::text(term.mechanism.replace('_', " ")),
                Cell::watts(term.low),
                Cell::watts(term.high),
            ]);
        }
    }
    if table.rows.is_empty() {
        document.paragraph("Nothing here: no stage switches.");
    } else {
        document.table(table);
    }
}
