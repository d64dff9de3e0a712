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
    /// Its name as a cell.
    name: Vec<u8>,
    /// Which of the accounts it books to.
    booked: Vec<bool>,
    /// Cell of the mechanisms that lack data.
    not_modelled: Vec<u8>,
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
        let mut line = FIXED.to_owned();
        for account in &self.accounts {
            line.push_str(&format!(",{}.{} [W]", account.slot().name(), account.mechanism().name()));
        }
        for slot in &self.temperatures {
            line.push_str(&format!(",{}.temperature [degC]", slot.name()));
        }
        line.push_str(",thermal_loop_gain,not_modelled,findings\n");
        line.into_bytes()
    }

    /// Adds the line of one point.
    pub fn row(&self, record: &Record<'_>, line: &mut Vec<u8>) {
        let (candidate, point) = (record.candidate, &record.point);
        let Some(cells) = self.stages.iter().find(|cells| cells.stage == candidate.name()) else { return };
        line.extend_from_slice(&cells.name);
        match &record.outcome {
            Err(reason) => {
                line.extend_from_slice(b",infeasible,");
                text(line, &reason.to_string());
            }
            Ok(detail) => {
                let mode = detail.solved.waveform.map_or("linear", |waveform| waveform.mode.name());
                line.push(b',');
                text(line, mode);
                line.push(b',');
            }
        }
        number(line, Some(point.input_voltage));
        number(line, Some(point.load));
        number(line, Some(point.ambient));
        number(line, (!candidate.sheet.is_linear()).then_some(point.switching_frequency));
        let solved = record.outcome.as_ref().ok().map(|detail| &detail.solved);
        let waveform = solved.and_then(|solved| solved.waveform.as_ref());
        number(line, waveform.map(|w| w.duty));
        number(line, waveform.map(|w| w.ripple()));
        number(line, waveform.map(|w| w.peak));
        number(line, waveform.map(|w| w.valley));
        number(line, waveform.map(|w| w.frequency));
        number(line, solved.map(|solved| solved.input_power()));
        number(line, solved.map(|solved| solved.output_power()));
        number(line, solved.map(|solved| solved.loss()));
        number(line, solved.and_then(|solved| solved.efficiency()));
        for (account, booked) in self.accounts.iter().zip(&cells.booked) {
            number(line, solved.filter(|_| *booked).map(|solved| solved.ledger.get(*account)));
        }
        for slot in &self.temperatures {
            number(line, solved.and_then(|solved| solved.temperatures[slot.index()]));
        }
        number(line, record.outcome.as_ref().ok().map(|detail| detail.loop_gain));
        line.push(b',');
        line.extend_from_slice(&cells.not_modelled);
        line.push(b',');
        if let Ok(detail) = &record.outcome {
            let grave = detail.findings.iter().filter(|finding| finding.severity > Severity::Note);
            for (place, f) in grave.enumerate() {
                // names of the program's own: nothing to quote
                let gap = if place == 0 { "" } else { " " };
                let parts = [gap, f.slot.name(), ".", f.kind, ":", f.severity.name()];
                parts.iter().for_each(|part| line.extend_from_slice(part.as_bytes()));
            }
        }
        line.push(b'\n');
    }
}

impl StageCells {
    fn of(candidate: &Candidate<'_>, accounts: &[Account]) -> Self {
        let cell = |content: &str| {
            let mut cell = Vec::new();
            text(&mut cell, content);
            cell
        };
        let missing: Vec<String> = candidate
            .not_modelled
            .iter()
            .map(|m| format!("{}.{}", m.slot.name(), m.mechanism.name()))
            .collect();
        StageCells {
            stage: candidate.name().to_owned(),
            name: cell(candidate.name()),
            booked: accounts.iter().map(|account| candidate.accounts.contains(account)).collect(),
            not_modelled: cell(&missing.join(" ")),
        }
    }
}

/// Adds a comma and a number at full precision; nothing after the comma without one.
fn number(line: &mut Vec<u8>, value: Option<f64>) {
    line.push(b',');
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
            let read: f64 = String::from_utf8(line).expect("ascii")[1..].parse().expect("a number");
            assert_eq!(read.to_bits(), value.to_bits());
        }
        let mut line = Vec::new();
        text(&mut line, "=HYPERLINK(\"x\")");
        assert_eq!(line, b"\"'=HYPERLINK(\"\"x\"\")\"");
        let mut line = Vec::new();
        number(&mut line, Some(f64::NAN));
        assert_eq!(line, b",");
    }
}
