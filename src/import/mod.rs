//! Import: a shortlist kept in a spreadsheet becomes a library file.
//!
//! One row is one part. A header names a key, with the unit of its cells: `q_gd [nC]`. Test conditions have columns of
//! their own (`q_gd.v_ds [V]`), limits stand behind the key (`q_g@4.5V.max [nC]`), and points of a list are told apart by
//! their condition (`r_ds_on@4.5V [mΩ]`, `v_sd@1A [V]`). A cell with a unit of its own keeps it. Empty cells are absent keys.

mod header;
mod rows;
mod write;

use std::fmt;

use crate::input::Severity;
use crate::input::kind::{ALL_KINDS, PartKind};
use crate::input::notes::{Note, Notes};
use crate::input::path::{KeyPath, Step, Trail};
use crate::printable::printable;

use header::{Column, Leaf};

/// A table as it was read.
#[derive(Clone, Debug, PartialEq)]
pub struct Imported {
    /// The good rows as a library file.
    pub yaml: String,
    /// Number of good rows.
    pub good: usize,
    /// Number of rows with faults.
    pub bad: usize,
    /// All faults, from top to bottom.
    pub faults: Vec<CellFault>,
}

/// What is wrong in a cell, a row or a column.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct CellFault {
    /// Line of the table, from 1; the header is line 1.
    pub row: u64,
    /// Column, from 1, when one is to blame.
    pub column: Option<usize>,
    /// Its header.
    pub header: String,
    /// Name of the part.
    pub part: String,
    /// The cell.
    pub value: Option<String>,
    /// What is wrong.
    pub reason: String,
    /// The way out.
    pub hint: String,
}

impl fmt::Display for CellFault {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        write!(f, "row {}", self.row)?;
        if let Some(column) = self.column {
            write!(f, ", column {} `{}`", letters(column), printable(&self.header))?;
        }
        if !self.part.is_empty() {
            write!(f, ", {}", printable(&self.part))?;
        }
        write!(f, ": {}", printable(&self.reason))?;
        if let Some(value) = &self.value {
            write!(f, " (found: {})", printable(value))?;
        }
        if self.hint.is_empty() { Ok(()) } else { write!(f, "; {}", printable(&self.hint)) }
    }
}

/// The name of a column in a spreadsheet: 1 is A, 27 is AA.
fn letters(column: usize) -> String {
    let mut letters = Vec::new();
    let mut rest = column;
    while rest > 0 {
        letters.push(char::from(b'A' + ((rest - 1) % 26) as u8));
        rest = (rest - 1) / 26;
    }
    letters.iter().rev().collect()
}

/// Kinds of part, as keys of a library file.
pub fn kinds() -> [&'static str; 6] {
    ALL_KINDS.map(PartKind::key)
}

/// The kind that the name of a file tells: `mosfets.csv`, `my-inductors.csv`.
pub fn kind_of_name(stem: &str) -> Option<&'static str> {
    let stem = stem.to_lowercase().replace('-', "_");
    // "linear_regulators" before any word that it may contain
    kinds().into_iter().rev().find(|kind| stem.contains(kind.trim_end_matches('s')))
}

/// Reads a table of parts of one kind; `file` is its name for the sources, `sha256` that of its bytes.
///
/// # Errors
/// A text that is no table, or an unknown kind. Faults of single cells are in [`Imported::faults`].
pub fn import(text: &str, kind: &str, (file, sha256): (&str, &str)) -> Result<Imported, String> {
    let kind = PartKind::from_key(kind).ok_or_else(|| format!("`{kind}` is no kind of part"))?;
    let mut reader = csv::ReaderBuilder::new()
        .delimiter(delimiter(text))
        .flexible(true)
        .has_headers(true)
        .from_reader(text.as_bytes());
    let headers = reader.headers().map_err(|error| error.to_string())?.clone();
    let mut table = Table { kind, headers, columns: Vec::new(), faults: Vec::new(), names: Vec::new() };
    table.read_headers();
    let mut yaml = format!(
        "# Imported from {} by lossbook {}; SHA-256 of the table {}.\n\n{}:\n",
        printable(file),
        env!("CARGO_PKG_VERSION"),
        sha256.get(..16).unwrap_or(sha256),
        kind.key()
    );
    let (mut good, mut bad) = (0, 0);
    let header_is_sound = table.faults.is_empty();
    for record in reader.records() {
        let record = record.map_err(|error| error.to_string())?;
        if record.iter().all(|cell| cell.trim().is_empty()) {
            continue;
        }
        match table.row(&record, file) {
            Some((name, node)) if header_is_sound => {
                write::part(&name, &node, &mut yaml);
                good += 1;
            }
            _ => bad += 1,
        }
    }
    Ok(Imported { yaml, good, bad, faults: table.faults })
}

/// Comma, semicolon or tab, whichever the header has most of.
fn delimiter(text: &str) -> u8 {
    let header = text.lines().next().unwrap_or_default();
    let count = |delimiter: u8| header.bytes().filter(|byte| *byte == delimiter).count();
    // of equals the last: the comma
    [b'\t', b';', b','].into_iter().max_by_key(|delimiter| count(*delimiter)).unwrap_or(b',')
}

struct Table {
    kind: PartKind,
    headers: csv::StringRecord,
    columns: Vec<(usize, Column)>,
    faults: Vec<CellFault>,
    names: Vec<String>,
}

impl Table {
    fn fault(&mut self, row: u64, column: Option<usize>, (reason, hint): (String, String)) {
        let header = column.and_then(|column| self.headers.get(column)).unwrap_or_default().trim().to_owned();
        self.faults.push(CellFault {
            row,
            column: column.map(|column| column + 1),
            header,
            part: String::new(),
            value: None,
            reason,
            hint,
        });
    }

    fn read_headers(&mut self) {
        for (place, text) in self.headers.clone().iter().enumerate() {
            if text.trim().is_empty() {
                continue;
            }
            match header::read(text, self.kind) {
                Err(wrong) => self.fault(1, Some(place), wrong),
                Ok(column) if self.columns.iter().any(|(_, known)| known.steps == column.steps) => {
                    let wrong = ("stands twice in the header".into(), "take one of the two out".into());
                    self.fault(1, Some(place), wrong);
                }
                Ok(column) => self.columns.push((place, column)),
            }
        }
        if !self.columns.iter().any(|(_, column)| column.leaf == Leaf::Name) {
            let hint = "add a column `name`; `lossbook template csv` prints a header";
            self.fault(1, None, ("no column holds the names of the parts".into(), hint.into()));
        }
    }

    /// The name and the keys of a row; `None` when it has faults.
    fn row(&mut self, record: &csv::StringRecord, file: &str) -> Option<(String, crate::input::node::Node)> {
        use crate::input::node::Node;
        let line = record.position().map_or(0, csv::Position::line);
        let name_place =
            self.columns.iter().find(|(_, column)| column.leaf == Leaf::Name).map(|(place, _)| *place);
        let name = name_place.and_then(|place| record.get(place)).unwrap_or_default().trim().to_owned();
        let before = self.faults.len();
        if name_place.is_some() {
            let usable = !name.is_empty() && name != "all" && printable(&name) == name;
            let wrong = if !usable {
                Some(("is no usable name of a part", "use letters, digits and dashes; `all` is taken"))
            } else if self.names.contains(&name) {
                Some(("is the name of a part above", "give each part a name of its own"))
            } else {
                None
            };
            if let Some((reason, hint)) = wrong {
                self.fault(line, name_place, (reason.into(), hint.into()));
            }
        }
        let mut row = rows::part(&self.columns, record);
        if let Node::Map(entries) = &mut row.node
            && !entries.iter().any(|(key, _)| &**key == "source")
        {
            entries.insert(0, ("source".into(), Node::Text(format!("{file}, row {line}").into())));
        }
        let mut notes = Notes::default();
        self.kind.read(&row.node, &Trail::TOP, &mut notes);
        for note in notes.list.iter().filter(|note| note.severity == Severity::Error) {
            self.blame(line, note, &row, record);
        }
        for fault in &mut self.faults[before..] {
            fault.part.clone_from(&name);
        }
        let sound = self.faults.len() == before;
        self.names.push(name.clone());
        sound.then_some((name, row.node))
    }

    /// Finds the cell that a fault of a part is about.
    fn blame(&mut self, line: u64, note: &Note, row: &rows::Row, record: &csv::StringRecord) {
        let shared = |path: &KeyPath| path.0.iter().zip(&note.path.0).take_while(|(a, b)| a == b).count();
        // a fault names a value, something inside it, or the mapping that it stands in
        let about = |path: &KeyPath| {
            let shared = shared(path);
            shared > 0 && (shared == note.path.0.len() || shared + 1 >= path.0.len())
        };
        // of several cells of a quantity its value, not a condition
        let is_value = |path: &KeyPath| matches!(path.0.last(), Some(Step::Key(key)) if &**key == "typ");
        let near = |(path, _): &&(KeyPath, usize)| (shared(path), is_value(path));
        let best = row.cells.iter().filter(|(path, _)| about(path)).max_by_key(near);
        let column = best.map(|(_, column)| *column);
        let reason = match column {
            Some(_) => note.reason.clone(),
            None => format!("`{}`: {}", note.path, note.reason),
        };
        self.fault(line, column, (reason, note.hint.clone()));
        if let (Some(column), Some(fault)) = (column, self.faults.last_mut())
            && note.value.is_some()
        {
            fault.value = record.get(column).map(|cell| cell.trim().to_owned());
        }
    }
}

/// A table to start from: MOSFETs, with one invented part.
pub const TEMPLATE: &str = "\
name,about,source,v_ds_max [V],v_gs_max [V],i_d_max [A],t_j_max [°C],r_ds_on@4.5V [mΩ],r_ds_on@4.5V.max [mΩ],r_ds_on@10V [mΩ],\
r_ds_on_hot.t_j [°C],r_ds_on_hot.ratio,v_gs_th.min [V],v_gs_th.typ [V],v_gs_th.max [V],v_gs_plateau [V],v_gs_plateau.i_d [A],\
q_gs [nC],q_gs2 [nC],q_gd [nC],q_gd.v_ds [V],q_g@4.5V [nC],q_g@4.5V.max [nC],r_g [Ω],q_oss [nC],q_oss.v_ds [V],l_source [nH],\
v_sd@1A [V],v_sd@20A [V],q_rr [nC],q_rr.i [A],q_rr.exponent,r_th_ja [K/W],price
my-mosfet,\"40 V logic level, invented\",data sheet rev. 2,40,20,50,150,6.8,8.6,5.2,150,1.7,1.2,1.7,2.2,2.9,20,3.2,1.3,2.1,20,9.5,13,1.2,16,20,0.2,\
0.70,0.84,20,20,0.5,42,0.38
";
