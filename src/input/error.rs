//! What is wrong with an input file, where, and the way out.

use std::fmt;
use std::path::{Path, PathBuf};

use thiserror::Error;

use crate::printable::printable;

/// How bad it is.
#[derive(Clone, Copy, Debug, PartialEq, Eq, PartialOrd, Ord)]
pub enum Severity {
    /// Doubtful or assumed; the work goes on.
    Warning,
    /// Nothing can be done with it.
    Error,
}

/// One fault of an input file.
#[derive(Clone, Debug, PartialEq, Eq, Error)]
#[error("{}", self.one_line())]
pub struct InputError {
    /// Error or warning.
    pub severity: Severity,
    /// File or folder, as named by the user or the budget.
    pub file: PathBuf,
    /// Line from 1; 0 when it is about the whole file.
    pub line: usize,
    /// Column from 1, in characters.
    pub column: usize,
    /// Key path from the top of the file, without the part: `r_ds_on[0].typ`.
    pub path: String,
    /// Part of the library that it is about; empty elsewhere.
    pub part: String,
    /// Value as written, when a single value is at fault.
    pub value: Option<String>,
    /// What is wrong.
    pub reason: String,
    /// What would be right.
    pub hint: String,
    /// The line of the file and what to mark in it.
    pub excerpt: Option<Excerpt>,
    /// A second place that has to do with it.
    pub other: Option<Box<OtherPlace>>,
}

/// A line of a file with a mark.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Excerpt {
    /// The line, control characters replaced, cut around the mark when it is long.
    pub text: String,
    /// First byte marked in `text`.
    pub start: usize,
    /// First byte after the mark.
    pub end: usize,
}

/// A second place, such as the first of two equal keys.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct OtherPlace {
    /// What is there: "given here first".
    pub label: String,
    /// Its file.
    pub file: PathBuf,
    /// Its line from 1.
    pub line: usize,
    /// Its column from 1.
    pub column: usize,
    /// The line and what to mark in it.
    pub excerpt: Option<Excerpt>,
}

/// A doubt or an assumption about an input; the same make as an error, with [`Severity::Warning`].
pub type Warning = InputError;

impl InputError {
    /// A fault of a whole file or folder.
    pub fn of_file(file: &Path, reason: impl Into<String>, hint: impl Into<String>) -> Self {
        InputError {
            severity: Severity::Error,
            file: file.to_path_buf(),
            line: 0,
            column: 0,
            path: String::new(),
            part: String::new(),
            value: None,
            reason: reason.into(),
            hint: hint.into(),
            excerpt: None,
            other: None,
        }
    }

    /// Key and part in words: "`q_gd` of demo-n40-6m8: ", empty when there is neither.
    pub fn subject(&self) -> String {
        match (self.path.is_empty(), self.part.is_empty()) {
            (true, true) => String::new(),
            (false, true) => format!("`{}`: ", printable(&self.path)),
            (true, false) => format!("{}: ", printable(&self.part)),
            (false, false) => format!("`{}` of {}: ", printable(&self.path), printable(&self.part)),
        }
    }

    /// File, line and column as compilers print them.
    pub fn place(&self) -> String {
        let file = self.file.display().to_string();
        let file = printable(&file);
        if self.line == 0 { file.into_owned() } else { format!("{file}:{}:{}", self.line, self.column) }
    }

    fn one_line(&self) -> String {
        let value = match &self.value {
            Some(value) if !value.is_empty() => format!(" (found: {})", short(&printable(value))),
            _ => String::new(),
        };
        let hint = if self.hint.is_empty() { String::new() } else { format!("; {}", printable(&self.hint)) };
        format!("{}: {}{}{value}{hint}", self.place(), self.subject(), printable(&self.reason))
    }
}

/// Reason and way out of a fault.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Blame {
    /// What is wrong.
    pub reason: String,
    /// The way out.
    pub hint: String,
}

impl Blame {
    /// Both texts.
    pub fn new(reason: impl Into<String>, hint: impl Into<String>) -> Self {
        Blame { reason: reason.into(), hint: hint.into() }
    }
}

/// All faults found in one go; at least one of them is an error.
#[derive(Clone, Debug, Default, PartialEq, Eq)]
pub struct InputErrors(pub Vec<InputError>);

impl std::error::Error for InputErrors {}

impl fmt::Display for InputErrors {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        for (place, error) in self.0.iter().enumerate() {
            let end = if place + 1 == self.0.len() { "" } else { "\n" };
            write!(f, "{error}{end}")?;
        }
        Ok(())
    }
}

impl From<InputError> for InputErrors {
    fn from(error: InputError) -> Self {
        InputErrors(vec![error])
    }
}

/// At most sixty characters of a value.
fn short(text: &str) -> String {
    if text.chars().count() <= 60 {
        return text.to_string();
    }
    text.chars().take(57).chain("...".chars()).collect()
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn one_line_names_everything() {
        let error = InputError {
            line: 7,
            column: 12,
            path: "q_gd".into(),
            part: "demo\u{1b}[31m".into(),
            value: Some("2.1 V".into()),
            ..InputError::of_file(
                Path::new("parts/a.yaml"),
                "V is a voltage, a charge is expected",
                "write nC",
            )
        };
        assert_eq!(
            error.to_string(),
            "parts/a.yaml:7:12: `q_gd` of demo\\u{1b}[31m: V is a voltage, a charge is expected (found: 2.1 V); write nC"
        );
    }
}
