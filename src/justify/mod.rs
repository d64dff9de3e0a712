//! Justify: the derivation of a budget at one point, for a reviewer who trusts nobody.
//!
//! Every result is the model's own: the mechanisms return their named terms with the watts, and a line sets such a term
//! beside its equation, its inputs and where they come from. Nothing is computed twice; a test evaluates every printed
//! equation from its printed inputs.

mod board;
pub mod book;
mod case;
mod edges;
mod gate;
mod heat;
pub mod laws;
mod linear;
mod magnetics;
pub mod origin;
mod rectifier;
mod resistance;
mod switches;
pub mod tokens;
mod waveform;

use std::io::{self, Write};

use serde::ser::{Serialize, SerializeMap, Serializer};

use crate::answer::Answer;
use crate::budget::Budget;
use crate::candidate::Candidate;
use crate::fitted::Kind;
use crate::grid::{OperatingPoint, PartialPoint};
use crate::heat::nodes_of;
use crate::infeasible::Infeasible;
use crate::ledger::{Account, Mechanism, Slot};
use crate::model::{Prepared, Solved};
use crate::record::{Detail, Record};
use crate::stage::{Circuit, StageSheet};
use crate::units::Dimension as D;
use book::{Book, Chapter, Input, Line};
use case::Case;
use origin::Origins;

/// What is asked.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct Request {
    /// The stage; every stage when absent.
    pub stage: Option<String>,
    /// Coordinates that differ from the headline's.
    pub at: PartialPoint,
    /// Only what this slot needs.
    pub slot: Option<Slot>,
    /// Only what this mechanism needs.
    pub mechanism: Option<Mechanism>,
}

/// Derives the budget of one stage or of every stage at one point.
pub fn answer<'a>(budget: &'a Budget, request: &'a Request) -> impl Answer + 'a {
    Question { budget, request }
}

struct Question<'a> {
    budget: &'a Budget,
    request: &'a Request,
}

impl Question<'_> {
    fn with<T>(&self, render: impl FnOnce(&[Derivation<'_>]) -> T) -> T {
        let wanted = |sheet: &&StageSheet| self.request.stage.as_ref().is_none_or(|name| *name == sheet.name);
        let sheets = self.budget.stages.iter().filter(wanted);
        let candidates: Vec<_> = sheets.map(|sheet| Candidate::new(self.budget, sheet)).collect();
        let derivations: Vec<_> =
            candidates.iter().map(|c| Derivation::of(c, c.at(self.request.at), self.request)).collect();
        render(&derivations)
    }
}

impl Answer for Question<'_> {
    fn document(&self) -> crate::report::Document {
        self.with(|derivations| crate::report::derivation::document(self.budget, derivations))
    }

    fn json(&self, out: &mut dyn Write) -> io::Result<()> {
        self.with(|derivations| match derivations {
            [one] => serde_json::to_writer_pretty(&mut *out, &Whole(self.budget, one)),
            many => serde_json::to_writer_pretty(&mut *out, &All(self.budget, many)),
        })?;
        writeln!(out)
    }

    fn csv(&self, out: &mut dyn Write) -> io::Result<()> {
        self.with(|derivations| {
            let mut bytes =
                b"stage,chapter,slot,mechanism,name,symbol,equation,value,unit,law,source\n".to_vec();
            for derivation in derivations {
                for line in &derivation.lines {
                    line_as_csv(derivation.candidate.name(), line, &mut bytes);
                }
            }
            out.write_all(&bytes)
        })
    }
}

fn line_as_csv(stage: &str, line: &Line, bytes: &mut Vec<u8>) {
    let account = |name: fn(Account) -> &'static str| line.account.map_or("", name);
    let value = format!("{:?}", line.value);
    let cells = [
        stage,
        line.chapter.name(),
        account(|account| account.slot().name()),
        account(|account| account.mechanism().name()),
        &line.name,
        &line.symbol,
        &line.equation,
        &value,
        line.measure.unit(),
        line.law.number,
        line.law.source,
    ];
    for (place, cell) in cells.iter().enumerate() {
        if place > 0 {
            bytes.push(b',');
        }
        crate::columns::text(bytes, cell);
    }
    bytes.push(b'\n');
}

/// The derivation of one stage at one point.
#[derive(Debug)]
pub struct Derivation<'a> {
    /// The stage.
    pub candidate: &'a Candidate<'a>,
    /// The point with its outcome.
    pub record: Record<'a>,
    /// Lines in reading order; none where the stage cannot run.
    pub lines: Vec<Line>,
    /// What was found on the way, in words.
    pub remarks: Vec<(Chapter, String)>,
}

impl<'a> Derivation<'a> {
    /// Derives a stage at a point.
    pub fn of(candidate: &'a Candidate<'a>, point: OperatingPoint, request: &Request) -> Self {
        let record = Record::of(candidate, point);
        let written = match &record.outcome {
            Ok(detail) => write(candidate, detail),
            Err(_) => Ok((Vec::new(), Vec::new())),
        };
        // the point has been solved with these very terms: it can be prepared again
        let (mut lines, mut remarks) = written.unwrap_or_default();
        if request.slot.is_some() || request.mechanism.is_some() {
            (lines, remarks) = book::narrowed(lines, remarks, |account| {
                request.slot.is_none_or(|slot| account.slot() == slot)
                    && request.mechanism.is_none_or(|mechanism| account.mechanism() == mechanism)
            });
        }
        Derivation { candidate, record, lines, remarks }
    }

    /// The inputs of all lines that no line derives, in the order of their first use.
    pub fn given(&self) -> Vec<&Input> {
        let mut given: Vec<&Input> = Vec::new();
        for input in self.lines.iter().flat_map(|line| &line.inputs).filter(|input| !input.derived) {
            if !given.iter().any(|known| known.symbol == input.symbol) {
                given.push(input);
            }
        }
        given
    }
}

type Written = (Vec<Line>, Vec<(Chapter, String)>);

/// Writes every line of a solved point.
fn write(candidate: &Candidate<'_>, detail: &Detail) -> Result<Written, Infeasible> {
    let solved = &detail.solved;
    let (sheet, board) = candidate.sheets(solved.point);
    let fitted = candidate.fitted(solved.point);
    let origins = Origins::of(&sheet, &board, candidate.budget.source.as_deref());
    let mut book = Book::new(&origins);
    coordinates(solved, &mut book);
    match (&fitted.kind, &sheet.circuit) {
        (Kind::Linear(regulator), _) => {
            let contributions =
                crate::linear::contributions(regulator, solved.output_voltage, &solved.point)?;
            linear::derive(regulator, &contributions, solved, &mut book);
        }
        (Kind::Switched(stage), Circuit::Switched(sheet)) => {
            let prepared = Prepared::new(stage, solved.output_voltage, solved.point);
            let nodes = nodes_of(&prepared, solved);
            let heated = prepared.heated(&nodes)?;
            let unheated = prepared.unheated(&heated.waveform);
            let case =
                Case { sheet, prepared: &prepared, heated: &heated, unheated: &unheated, nodes: &nodes };
            waveform::derive(&case, &mut book);
            edges::derive(&case, &mut book);
            switches::derive(&case, &mut book);
            rectifier::derive(&case, &mut book);
            magnetics::derive(&case, &mut book);
            board::banks(&case, &mut book);
            gate::controller(&case, &mut book);
            board::derive(&case, &mut book);
            heat::temperatures(&case, &mut book);
        }
        (Kind::Switched(_), Circuit::Linear(_)) => {}
    }
    heat::balance(solved, &mut book);
    Ok((book.lines, book.remarks))
}

fn coordinates(solved: &Solved, book: &mut Book<'_>) {
    let point = &solved.point;
    book.given("V_IN", point.input_voltage, D::Voltage, "operating point, input_voltage");
    book.given("I_OUT", point.load, D::Current, "operating point, load");
    book.given("T_A", point.ambient, D::Temperature, "operating point, ambient");
    if point.switching_frequency > 0.0 {
        book.given("f_SW", point.switching_frequency, D::Frequency, "operating point, switching_frequency");
    }
    book.given("V_OUT", solved.output_voltage, D::Voltage, "budget, output_voltage");
}

/// One derivation as the whole answer.
struct Whole<'a>(&'a Budget, &'a Derivation<'a>);
/// Several derivations in one answer.
struct All<'a>(&'a Budget, &'a [Derivation<'a>]);

impl Serialize for Whole<'_> {
    fn serialize<S: Serializer>(&self, serializer: S) -> Result<S::Ok, S::Error> {
        let mut map = serializer.serialize_map(None)?;
        head(&mut map, self.0)?;
        body(&mut map, self.1)?;
        map.end()
    }
}

impl Serialize for All<'_> {
    fn serialize<S: Serializer>(&self, serializer: S) -> Result<S::Ok, S::Error> {
        let mut map = serializer.serialize_map(None)?;
        head(&mut map, self.0)?;
        map.serialize_entry("stages", self.1)?;
        map.end()
    }
}

impl Serialize for Derivation<'_> {
    fn serialize<S: Serializer>(&self, serializer: S) -> Result<S::Ok, S::Error> {
        let mut map = serializer.serialize_map(None)?;
        body(&mut map, self)?;
        map.end()
    }
}

fn head<M: SerializeMap>(map: &mut M, budget: &Budget) -> Result<(), M::Error> {
    map.serialize_entry("lossbook", env!("CARGO_PKG_VERSION"))?;
    map.serialize_entry("budget", &budget.name)?;
    map.serialize_entry("values", &budget.values)
}

fn body<M: SerializeMap>(map: &mut M, derivation: &Derivation<'_>) -> Result<(), M::Error> {
    map.serialize_entry("stage", derivation.candidate.name())?;
    map.serialize_entry("point", &derivation.record)?;
    let remarks: Vec<&str> = derivation.remarks.iter().map(|(_, words)| words.as_str()).collect();
    map.serialize_entry("remarks", &remarks)?;
    map.serialize_entry("lines", &derivation.lines)
}

impl Serialize for Line {
    fn serialize<S: Serializer>(&self, serializer: S) -> Result<S::Ok, S::Error> {
        let mut map = serializer.serialize_map(None)?;
        map.serialize_entry("chapter", self.chapter.name())?;
        if let Some(account) = self.account {
            map.serialize_entry("slot", account.slot().name())?;
            map.serialize_entry("mechanism", account.mechanism().name())?;
        }
        map.serialize_entry("name", &self.name)?;
        map.serialize_entry("symbol", &self.symbol)?;
        map.serialize_entry("equation", &self.equation)?;
        map.serialize_entry("substituted", &self.substituted())?;
        map.serialize_entry("inputs", &self.inputs)?;
        map.serialize_entry("value", &self.value)?;
        map.serialize_entry("unit", self.measure.unit())?;
        map.serialize_entry("law", self.law.number)?;
        map.serialize_entry("source", self.law.source)?;
        map.serialize_entry("limits", self.law.limits)?;
        map.end()
    }
}

impl Serialize for Input {
    fn serialize<S: Serializer>(&self, serializer: S) -> Result<S::Ok, S::Error> {
        let mut map = serializer.serialize_map(Some(4))?;
        map.serialize_entry("symbol", &self.symbol)?;
        map.serialize_entry("value", &self.value)?;
        map.serialize_entry("unit", self.measure.unit())?;
        map.serialize_entry("origin", &self.origin)?;
        map.end()
    }
}
