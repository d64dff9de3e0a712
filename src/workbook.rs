//! Spreadsheets: one sheet a stage with typed numbers, and a native chart of efficiency against load.

use rust_xlsxwriter::{
    Chart, ChartType, DocProperties, ExcelDateTime, Format, Workbook, Worksheet, XlsxError,
};

use crate::budget::Budget;
use crate::candidate::Candidate;
use crate::columns::{Columns, Fields};
use crate::grid::{AxisName, OperatingPoint};
use crate::printable::printable;
use crate::record::Record;
use crate::report::{caption, tables, words};
use crate::sweep;
use crate::units::Dimension as D;

/// Rows that a sheet can hold below its header.
const MOST_ROWS: u64 = 1_048_575;
/// Points that are evaluated before they are written.
const BLOCK: u64 = 4096;
/// Lines of a chart.
const MOST_LINES: usize = 6;

/// The grid of every stage as the bytes of an XLSX file.
///
/// # Errors
/// When a stage has more points than a sheet has rows, or the library fails; in words.
pub fn bytes(budget: &Budget, candidates: &[Candidate<'_>]) -> Result<Vec<u8>, String> {
    if let Some(large) = candidates.iter().find(|candidate| candidate.grid.len() > MOST_ROWS) {
        let name = printable(large.name()).into_owned();
        return Err(format!(
            "stage {name} has {} points and a sheet holds {MOST_ROWS}; make the grid coarser, or use --format csv",
            large.grid.len()
        ));
    }
    book(budget, candidates).map_err(|error| error.to_string())
}

fn book(budget: &Budget, candidates: &[Candidate<'_>]) -> Result<Vec<u8>, XlsxError> {
    let mut book = Workbook::new();
    // a fixed date: the same inputs give the same bytes
    let made = ExcelDateTime::from_ymd(2000, 1, 1)?;
    let properties = DocProperties::new().set_title(printable(&budget.name)).set_creation_datetime(&made);
    book.set_properties(&properties);
    about(budget, book.add_worksheet())?;
    let mut taken = vec!["about".to_owned()];
    for candidate in candidates {
        let name = sheet_name(candidate.name(), &mut taken);
        let sheet = book.add_worksheet();
        sheet.set_name(&name)?;
        let columns = grid(candidate, sheet)?;
        curves(candidate, &name, columns + 1, sheet)?;
    }
    book.save_to_buffer()
}

/// A name that sheets may have: 31 letters, none of the seven forbidden ones, each name once.
fn sheet_name(name: &str, taken: &mut Vec<String>) -> String {
    let plain: String = printable(name)
        .chars()
        .map(|c| if matches!(c, '[' | ']' | ':' | '*' | '?' | '/' | '\\') { '-' } else { c })
        .take(26)
        .collect();
    let plain = plain.trim_matches('\'').trim();
    let plain = if plain.is_empty() { "stage" } else { plain };
    let mut found = plain.to_owned();
    let mut number = 2;
    while taken.contains(&found.to_lowercase()) {
        found = format!("{plain} {number}");
        number += 1;
    }
    taken.push(found.to_lowercase());
    found
}

fn about(budget: &Budget, sheet: &mut Worksheet) -> Result<(), XlsxError> {
    sheet.set_name("about")?;
    let lines = [
        budget.name.clone(),
        caption::origin(budget),
        format!("headline: {}", words::point(&budget.headline)),
        "SI units as in the headers, temperatures in °C, efficiency as a fraction shown in percent.".into(),
        "Estimates do not replace measurement. Hot parts and stored energy can injure.".into(),
        "Non-isolated low-voltage rails only; local codes and licensed practice come first.".into(),
    ];
    for (row, line) in (0..).zip(&lines) {
        text(sheet, (row, 0), line)?;
    }
    sheet.set_column_width(0, 100)?;
    Ok(())
}

/// Text is never a formula; what looks like one is marked as text for whoever edits the cell.
fn text(sheet: &mut Worksheet, (row, column): (u32, u16), words: &str) -> Result<(), XlsxError> {
    let words = printable(words);
    if words.starts_with(['=', '+', '-', '@']) {
        sheet.write_string_with_format(row, column, words, &Format::new().set_quote_prefix())?;
    } else if !words.is_empty() {
        sheet.write_string(row, column, words)?;
    }
    Ok(())
}

/// How the numbers of a column are shown.
fn number_format(title: &str) -> Format {
    Format::new().set_num_format(match title {
        "efficiency" => "0.00%",
        title if title.ends_with("[W]") => "[=0]0;[<0.001]0.000E+00;0.0000",
        title if title.ends_with("[degC]") => "0.0",
        title if title.ends_with("[Hz]") => "#,##0",
        title if title.ends_with("[A]") => "[=0]0;[<0.001]0.000E+00;0.0000",
        _ => "0.####",
    })
}

/// The whole grid of a stage; returns the number of columns.
fn grid(candidate: &Candidate<'_>, sheet: &mut Worksheet) -> Result<u16, XlsxError> {
    let columns = Columns::of(std::slice::from_ref(candidate));
    let titles = columns.titles();
    let formats: Vec<Format> = titles.iter().map(|title| number_format(title)).collect();
    header(sheet, 0, &titles)?;
    sheet.set_freeze_panes(1, 2)?;
    sheet.set_landscape().set_print_fit_to_pages(1, 0);
    let mut row = 1;
    let mut start = 0;
    while start < candidate.grid.len() {
        let points: Vec<OperatingPoint> = (start..candidate.grid.len().min(start + BLOCK))
            .map(|index| candidate.grid.point(index))
            .collect();
        for record in sweep::map(&points, |point| Record::of(candidate, *point)) {
            let mut fields = Row { sheet, row, column: 0, formats: &formats, fault: None };
            columns.fill(&record, &mut fields);
            if let Some(fault) = fields.fault {
                return Err(fault);
            }
            row += 1;
        }
        start += BLOCK;
    }
    let width = u16::try_from(titles.len()).unwrap_or(u16::MAX);
    sheet.autofilter(0, 0, row.saturating_sub(1).max(1), width.saturating_sub(1))?;
    Ok(width)
}

fn header(sheet: &mut Worksheet, first: u16, titles: &[String]) -> Result<(), XlsxError> {
    let bold = Format::new().set_bold().set_text_wrap().set_align(rust_xlsxwriter::FormatAlign::Top);
    for (column, title) in (first..).zip(titles) {
        sheet.write_string_with_format(0, column, title, &bold)?;
        sheet.set_column_width(column, 14)?;
    }
    Ok(())
}

/// A row that is being filled.
struct Row<'a> {
    sheet: &'a mut Worksheet,
    row: u32,
    column: u16,
    formats: &'a [Format],
    fault: Option<XlsxError>,
}

impl Fields for Row<'_> {
    fn text(&mut self, words: &str) {
        let written = text(self.sheet, (self.row, self.column), words);
        self.fault = self.fault.take().or(written.err());
        self.column += 1;
    }

    fn number(&mut self, value: Option<f64>) {
        // what is not finite would become text
        if let (Some(value), Some(format)) =
            (value.filter(|value| value.is_finite()), self.formats.get(usize::from(self.column)))
        {
            let written = self.sheet.write_number_with_format(self.row, self.column, value, format);
            self.fault = self.fault.take().or(written.err());
        }
        self.column += 1;
    }
}

/// Efficiency over the loads of the grid, one column an input voltage, with a chart beside it.
fn curves(candidate: &Candidate<'_>, name: &str, first: u16, sheet: &mut Worksheet) -> Result<(), XlsxError> {
    let loads = tables::values(candidate, AxisName::Load);
    let mut volts = tables::chosen(&tables::values(candidate, AxisName::InputVoltage));
    volts.truncate(MOST_LINES);
    let headline = candidate.headline();
    let at = format!("T_A {}", words::set(headline.ambient, D::Temperature));
    let mut titles = vec!["load [A]".to_owned()];
    titles.extend(volts.iter().map(|v_in| format!("efficiency at {}, {at}", words::set(*v_in, D::Voltage))));
    header(sheet, first, &titles)?;
    let (amperes, percent) = (number_format("load [A]"), number_format("efficiency"));
    for (row, load) in (1..).zip(&loads) {
        sheet.write_number_with_format(row, first, *load, &amperes)?;
        for (column, v_in) in (first + 1..).zip(&volts) {
            let point = headline.with(AxisName::InputVoltage, *v_in).with(AxisName::Load, *load);
            let solved = candidate.evaluate(point).ok();
            if let Some(efficiency) = solved.and_then(|solved| solved.efficiency()) {
                sheet.write_number_with_format(row, column, efficiency, &percent)?;
            }
        }
    }
    let last = u32::try_from(loads.len()).unwrap_or(u32::MAX).max(1);
    let mut chart = Chart::new(ChartType::ScatterSmooth);
    for column in (first + 1..).take(volts.len()) {
        chart
            .add_series()
            .set_name((name, 0, column))
            .set_categories((name, 1, first, last, first))
            .set_values((name, 1, column, last, column));
    }
    chart.title().set_name(&format!("Efficiency of {name} against load"));
    chart.x_axis().set_name("load [A]");
    let wide = loads.iter().copied().fold(0.0, f64::max)
        > 20.0 * loads.iter().copied().fold(f64::INFINITY, f64::min);
    if wide && loads.iter().all(|load| *load > 0.0) {
        chart.x_axis().set_log_base(10);
    }
    chart.y_axis().set_name("efficiency").set_max(1.0).set_num_format("0%");
    chart.legend().set_position(rust_xlsxwriter::ChartLegendPosition::Bottom);
    chart.set_width(720).set_height(420);
    let beside = first + u16::try_from(volts.len()).unwrap_or(0) + 2;
    sheet.insert_chart(1, beside, &chart)?;
    Ok(())
}
