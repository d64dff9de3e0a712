//! Points as rows of a CSV file: units in the headers, full precision, one column an account of the stages present.

use crate::candidate::Candidate;
use crate::findings::Severity;
use crate::ledger::{ALL_SLOTS, Account, Slot};
use crate::record::Record;

/// Which columns the stages present need.
#[derive(Clone, Debug)]
pub struct Columns {
    accounts: Vec<Account>,
    temperatures: Vec<Slot>,
    stages: Vec<StageCells>,
}

/// What all rows of a stage have in common.
#[derive(Clone, Debug)]
struct StageCells {
    /// Name in the budget.
    stage: String,
    /// Which of the accounts it books to.
    booked: Vec<bool>,
    /// The mechanisms that lack data.
    not_modelled: String,
}

/// Columns before those of the accounts.
const FIXED: &str = "stage,mode,reason,input_voltage [V],load [A],ambient [degC],switching_frequency [Hz],duty,ripple [A],peak [A],\
                     valley [A],effective_frequency [Hz],input_power [W],output_power [W],loss [W],efficiency";

impl Columns {
    /// Columns of some stages.
    pub fn of(candidates: &[Candidate<'_>]) -> Self {
        let all = crate::ledger::ALL_ACCOUNTS.iter().map(|row| row.0);
        let present =
            |account: &Account| candidates.iter().any(|candidate| candidate.accounts.contains(account));
        let accounts: Vec<Account> = all.filter(present).collect();
        let warm = |slot: &Slot| {
            let unheated = matches!(slot, Slot::InputCapacitors | Slot::OutputCapacitors | Slot::Board);
            !unheated && candidates.iter().any(|candidate| candidate.part_names[slot.index()].is_some())
        };
        let stages = candidates.iter().map(|candidate| StageCells::of(candidate, &accounts)).collect();
        Columns { temperatures: ALL_SLOTS.into_iter().filter(warm).collect(), stages, accounts }
    }

    /// The header line.
    pub fn header(&self) -> Vec<u8> {
        format!("{}\n", self.titles().join(",")).into_bytes()
    }

    /// Titles with their units.
    pub fn titles(&self) -> Vec<String> {
        let mut titles: Vec<String> = FIXED.split(',').map(str::to_owned).collect();
        for account in &self.accounts {
            titles.push(format!("{}.{} [W]", account.slot().name(), account.mechanism().name()));
        }
        for slot in &self.temperatures {
            titles.push(format!("{}.temperature [degC]", slot.name()));
        }
        titles.extend(["thermal_loop_gain", "not_modelled", "findings"].map(str::to_owned));
        titles
    }

    /// Adds the line of one point.
    pub fn row(&self, record: &Record<'_>, line: &mut Vec<u8>) {
        let mut fields = Line { line, begun: false };
        self.fill(record, &mut fields);
        fields.line.push(b'\n');
    }

    /// Hands the fields of one point over, one a title.
    pub fn fill(&self, record: &Record<'_>, fields: &mut impl Fields) {
        let (candidate, point) = (record.candidate, &record.point);
        let Some(cells) = self.stages.iter().find(|cells| cells.stage == candidate.name()) else { return };
        fields.text(candidate.name());
        match &record.outcome {
            Err(reason) => {
                fields.text("infeasible");
                fields.text(&reason.to_string());
            }
            Ok(detail) => {
                let mode = detail.solved.waveform.map_or("linear", |waveform| waveform.mode.name());
                fields.text(mode);
                fields.text("");
            }
        }
        fields.number(Some(point.input_voltage));
        fields.number(Some(point.load));
        fields.number(Some(point.ambient));
        fields.number((!candidate.sheet.is_linear()).then_some(point.switching_frequency));
        let solved = record.outcome.as_ref().ok().map(|detail| &detail.solved);
        let waveform = solved.and_then(|solved| solved.waveform.as_ref());
        fields.number(waveform.map(|w| w.duty));
        fields.number(waveform.map(|w| w.ripple()));
        fields.number(waveform.map(|w| w.peak));
        fields.number(waveform.map(|w| w.valley));
        fields.number(waveform.map(|w| w.frequency));
        fields.number(solved.map(|solved| solved.input_power()));
        fields.number(solved.map(|solved| solved.output_power()));
        fields.number(solved.map(|solved| solved.loss()));
        fields.number(solved.and_then(|solved| solved.efficiency()));
        for (account, booked) in self.accounts.iter().zip(&cells.booked) {
            fields.number(solved.filter(|_| *booked).map(|solved| solved.ledger.get(*account)));
        }
        for slot in &self.temperatures {
            fields.number(solved.and_then(|solved| solved.temperatures[slot.index()]));
        }
        fields.number(record.outcome.as_ref().ok().map(|detail| detail.loop_gain));
        fields.text(&cells.not_modelled);
        let findings = record.outcome.as_ref().map_or(&[][..], |detail| &detail.findings);
        let mut kinds = String::new();
        for f in findings.iter().filter(|finding| finding.severity > Severity::Note) {
            let gap = if kinds.is_empty() { "" } else { " " };
            [gap, f.slot.name(), ".", f.kind, ":", f.severity.name()]
                .iter()
                .for_each(|part| kinds.push_str(part));
        }
        fields.text(&kinds);
    }
}

impl StageCells {
    fn of(candidate: &Candidate<'_>, accounts: &[Account]) -> Self {
        let missing = candidate.not_modelled.iter();
        let missing: Vec<String> =
            missing.map(|m| format!("{}.{}", m.slot.name(), m.mechanism.name())).collect();
        StageCells {
            stage: candidate.name().to_owned(),
            booked: accounts.iter().map(|account| candidate.accounts.contains(account)).collect(),
            not_modelled: missing.join(" "),
        }
    }
}

/// Takes the fields of a point one by one.
pub trait Fields {
    /// Words; empty for none.
    fn text(&mut self, words: &str);
    /// A number at full precision, or none.
    fn number(&mut self, value: Option<f64>);
}

/// Fields of a CSV line.
struct Line<'a> {
    line: &'a mut Vec<u8>,
    begun: bool,
}

impl Line<'_> {
    fn separate(&mut self) {
        if self.begun {
            self.line.push(b',');
        }
        self.begun = true;
    }
}

impl Fields for Line<'_> {
    fn text(&mut self, words: &str) {
        self.separate();
        text(self.line, words);
    }

    fn number(&mut self, value: Option<f64>) {
        self.separate();
        number(self.line, value);
    }
}

/// Adds a number at full precision; nothing without one.
fn number(line: &mut Vec<u8>, value: Option<f64>) {
    if let Some(value) = value.filter(|value| value.is_finite()) {
        // the shortest digits that read back to the same bits, whole numbers without their ".0"; no negative zero
        let mut digits = zmij::Buffer::new();
        let digits = digits.format_finite(value + 0.0);
        line.extend_from_slice(digits.strip_suffix(".0").unwrap_or(digits).as_bytes());
    }
}

/// Adds text as one field; text that a spreadsheet would take for a formula gets an apostrophe before it.
pub fn text(line: &mut Vec<u8>, text: &str) {
    let text = crate::printable::printable(text);
    let formula = text.starts_with(['=', '+', '-', '@', '\t', '\r']);
    let quoted = formula || text.contains(['"', ',', ';', '\n', '\r']);
    if quoted {
        line.push(b'"');
    }
    if formula {
        line.push(b'\'');
    }
    if quoted {
        line.extend_from_slice(text.replace('"', "\"\"").as_bytes());
        line.push(b'"');
    } else {
        line.extend_from_slice(text.as_bytes());
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn numbers_read_back_and_text_is_no_formula() {
        for value in [0.0, 0.1, 1.0 / 3.0, 4e-7, -2.5e-12, 123_456.789, 1e22, 400e3] {
            let mut line = Vec::new();
            number(&mut line, Some(value));
            let read: f64 = String::from_utf8(line).expect("ascii").parse().expect("a number");
            assert_eq!(read.to_bits(), value.to_bits());
        }
        let mut line = Vec::new();
        text(&mut line, "=HYPERLINK(\"x\")");
        assert_eq!(line, b"\"'=HYPERLINK(\"\"x\"\")\"");
        let mut line = Vec::new();
        number(&mut line, Some(f64::NAN));
        assert_eq!(line, b"");
    }
}
