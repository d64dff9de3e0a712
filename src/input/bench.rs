//! Bench files: measured points as CSV with the unit of each column in its header.

use std::path::Path;

use super::error::{InputError, InputErrors, Severity};
use super::quantity::{self, Expected};
use super::units;
use crate::bench::Reading;
use crate::files;
use crate::hints::nearest;
use crate::units::Dimension as D;

/// A column of a bench file.
struct Column {
    name: &'static str,
    dimension: D,
    unit: &'static str,
    needed: bool,
}

const COLUMNS: [Column; 6] = [
    Column { name: "input_voltage", dimension: D::Voltage, unit: "V", needed: true },
    Column { name: "input_current", dimension: D::Current, unit: "A", needed: true },
    Column { name: "output_voltage", dimension: D::Voltage, unit: "V", needed: true },
    Column { name: "output_current", dimension: D::Current, unit: "A", needed: true },
    Column { name: "ambient", dimension: D::Temperature, unit: "degC", needed: false },
    Column { name: "switching_frequency", dimension: D::Frequency, unit: "Hz", needed: false },
];

/// A header that says it all, for the messages.
const EXAMPLE: &str = "input_voltage [V],input_current [A],output_voltage [V],output_current [A]";
/// Faults that are listed before the rest is only counted.
const MOST: usize = 50;

/// Reads a bench file; lines that begin with `#` are remarks.
///
/// # Errors
/// Every fault of the file with its row and column.
pub fn load_bench(path: &Path) -> Result<Vec<Reading>, InputErrors> {
    let text = files::read_text(path)
        .map_err(|fault| InputError::of_file(path, fault.to_string(), fault.hint()))?
        .text;
    parse(path, &text)
}

/// Reads the text of a bench file.
///
/// # Errors
/// Every fault of the file with its row and column.
pub fn parse(path: &Path, text: &str) -> Result<Vec<Reading>, InputErrors> {
    let mut faults = Faults { path, list: Vec::new(), more: 0 };
    let mut reader = csv::ReaderBuilder::new()
        .has_headers(false)
        .flexible(true)
        .comment(Some(b'#'))
        .trim(csv::Trim::All)
        .from_reader(text.as_bytes());
    let mut header: Option<Header> = None;
    let mut readings = Vec::new();
    for record in reader.records() {
        let record = match record {
            Ok(record) => record,
            Err(error) => {
                faults.add((0, 0), "", None, (error.to_string(), "save the file as plain CSV".into()));
                break;
            }
        };
        let line = record.position().map_or(0, |position| position.line() as usize);
        match &header {
            None => header = Some(Header::read(&record, line, &mut faults)),
            Some(header) => readings.extend(header.row(&record, line, &mut faults)),
        }
    }
    if header.is_none() {
        let hint = format!("the first line names the columns: {EXAMPLE}");
        faults.add((0, 0), "", None, ("is empty".into(), hint));
    } else if readings.is_empty() && faults.list.is_empty() {
        faults.add((0, 0), "", None, ("has a header but no rows".into(), "add a measured point".into()));
    }
    faults.finish(readings)
}

struct Faults<'a> {
    path: &'a Path,
    list: Vec<InputError>,
    more: usize,
}

impl Faults<'_> {
    fn add(
        &mut self,
        (line, column): (usize, usize),
        path: &str,
        value: Option<&str>,
        (reason, hint): (String, String),
    ) {
        if self.list.len() == MOST {
            self.more += 1;
            return;
        }
        let fault = InputError::of_file(self.path, reason, hint);
        let value = value.map(str::to_owned);
        self.list.push(InputError {
            severity: Severity::Error,
            line,
            column,
            path: path.into(),
            value,
            ..fault
        });
    }

    fn finish(mut self, readings: Vec<Reading>) -> Result<Vec<Reading>, InputErrors> {
        if self.more > 0 {
            let reason = format!("has {} more faults", self.more);
            self.list.push(InputError::of_file(self.path, reason, "correct those above first"));
        }
        if self.list.is_empty() { Ok(readings) } else { Err(InputErrors(self.list)) }
    }
}

/// Column of a field in its line, from 1, as far as quotes allow to tell.
fn column_of(record: &csv::StringRecord, field: usize) -> usize {
    1 + record.iter().take(field).map(|text| text.chars().count() + 1).sum::<usize>()
}

/// Which field holds which column, and its unit.
struct Header {
    fields: Vec<Option<(usize, String)>>,
    width: usize,
    sound: bool,
}

impl Header {
    fn read(record: &csv::StringRecord, line: usize, faults: &mut Faults<'_>) -> Header {
        let mut places: [Option<(usize, String)>; COLUMNS.len()] = Default::default();
        let before = faults.list.len();
        if record.len() == 1 && record.get(0).is_some_and(|text| text.contains(';')) {
            let hint = format!("separate the columns with commas and write decimals with a point: {EXAMPLE}");
            faults.add((line, 1), "", None, ("the columns are separated by semicolons".into(), hint));
        } else {
            for (field, text) in record.iter().enumerate() {
                let at = (line, column_of(record, field));
                match Self::title(text) {
                    Ok((place, _)) if places[place].is_some() => {
                        let hint = "keep one of the two columns".to_owned();
                        faults.add(
                            at,
                            COLUMNS[place].name,
                            None,
                            ("stands twice in the header".into(), hint),
                        );
                    }
                    Ok((place, unit)) => places[place] = Some((field, unit)),
                    Err(fault) => faults.add(at, "", Some(text), fault),
                }
            }
            for (column, place) in COLUMNS.iter().zip(&places) {
                if column.needed && place.is_none() {
                    let hint = format!("add a column `{} [{}]`", column.name, column.unit);
                    faults.add((line, 1), column.name, None, ("is missing from the header".into(), hint));
                }
            }
        }
        let sound = faults.list.len() == before;
        Header { fields: places.into(), width: record.len(), sound }
    }

    /// Place of a column among [`COLUMNS`] and its unit, from `input_voltage [V]`.
    fn title(text: &str) -> Result<(usize, String), (String, String)> {
        let (name, rest) = text.split_once('[').unwrap_or((text, ""));
        let name = name.trim();
        let Some(place) = COLUMNS.iter().position(|column| column.name == name) else {
            let names = COLUMNS.map(|column| column.name);
            let hint = match nearest(name, names) {
                Some(near) => format!("did you mean `{near}`?"),
                None => format!("the columns are {}", names.join(", ")),
            };
            return Err(("is no column of a bench file".into(), hint));
        };
        let column = &COLUMNS[place];
        let unit = rest.trim_end().trim_end_matches(']').trim();
        let like = format!("write `{} [{}]`", column.name, column.unit);
        if unit.is_empty() {
            return Err(("has no unit".into(), like));
        }
        match units::find(unit) {
            Some(found) if found.dimension == column.dimension => Ok((place, unit.to_owned())),
            Some(found) => {
                let reason = format!(
                    "{unit} is {}, {} is expected",
                    found.dimension.words(),
                    column.dimension.words()
                );
                Err((reason, like))
            }
            None => Err((format!("{unit} is no unit"), like)),
        }
    }

    fn row(&self, record: &csv::StringRecord, line: usize, faults: &mut Faults<'_>) -> Option<Reading> {
        if !self.sound {
            return None;
        }
        if record.len() != self.width {
            let reason = format!("has {} fields, the header has {}", record.len(), self.width);
            let hint = "decimals take a point, and every row fills every column".to_owned();
            faults.add((line, 1), "", None, (reason, hint));
            return None;
        }
        let before = faults.list.len();
        let mut values = [None; COLUMNS.len()];
        for ((column, place), value) in COLUMNS.iter().zip(&self.fields).zip(&mut values) {
            let Some((field, unit)) = place else { continue };
            let text = record.get(*field).unwrap_or_default();
            match number(text, unit, column) {
                Ok(read) => *value = Some(read),
                Err(fault) => faults.add((line, column_of(record, *field)), column.name, Some(text), fault),
            }
        }
        if faults.list.len() > before {
            return None;
        }
        let [input_voltage, input_current, output_voltage, output_current, ambient, switching_frequency] =
            values;
        Some(Reading {
            line,
            input_voltage: input_voltage?,
            input_current: input_current?,
            output_voltage: output_voltage?,
            output_current: output_current?,
            ambient,
            switching_frequency,
        })
    }
}

fn number(text: &str, unit: &str, column: &Column) -> Result<f64, (String, String)> {
    let digits = |c: char| c.is_ascii_digit() || "+-.eE".contains(c);
    if text.is_empty() {
        return Err(("is empty".into(), "write the reading, or take the row out".into()));
    }
    if !text.chars().all(digits) {
        let hint = "the unit stands in the header, decimals take a point".to_owned();
        return Err(("is no plain number".into(), hint));
    }
    let expected = Expected::of(column.dimension);
    let value = quantity::parse(&format!("{text} {unit}"), expected).map_err(|b| (b.reason, b.hint))?;
    let least = if column.dimension == D::Temperature { -273.15 } else { 0.0 };
    let zero_is_fine = column.name == "output_current" || column.dimension == D::Temperature;
    if value < least || (value == 0.0 && !zero_is_fine) {
        return Err(("cannot be measured on a running rail".into(), "check the sign and the range".into()));
    }
    Ok(value)
}

#[cfg(test)]
mod tests {
    use super::*;

    fn read(text: &str) -> Result<Vec<Reading>, String> {
        parse(Path::new("bench.csv"), text).map_err(|errors| errors.to_string())
    }

    #[test]
    fn units_of_the_header_count_and_remarks_do_not() {
        let text = "# invented\ninput_current [mA],input_voltage [V],output_voltage [V],output_current [A]\n900,24,3.3,6\n";
        let readings = read(text).expect("sound");
        assert_eq!(readings.len(), 1);
        let row = readings[0];
        assert_eq!((row.line, row.input_current, row.input_voltage, row.ambient), (3, 0.9, 24.0, None));
    }

    #[test]
    fn all_faults_at_once_with_row_and_column() {
        let text = format!("{EXAMPLE}\n24,0.9,3.3,6\n24,-0.9,3.3,x\n24,0.9,3.3\n");
        let errors = read(&text).expect_err("three faults");
        for part in [
            "bench.csv:3:4: `input_current`",
            "bench.csv:3:13: `output_current`",
            "bench.csv:4:1: has 3 fields",
        ] {
            assert!(errors.contains(part), "{part} in {errors}");
        }
    }

    #[test]
    fn headers_are_held_to_their_units() {
        let errors = read("input_voltage,input_curent [A],output_voltage [mA],output_current [A]\n1,1,1,1\n");
        let errors = errors.expect_err("faults");
        for part in ["has no unit", "did you mean `input_current`", "mA is a current, a voltage is expected"]
        {
            assert!(errors.contains(part), "{part} in {errors}");
        }
        assert!(read("").is_err_and(|errors| errors.contains("is empty")));
        assert!(
            read("input_voltage [V];input_current [A]\n").is_err_and(|errors| errors.contains("semicolons"))
        );
    }
}
