//! What a question gives back: the same answer for people, scripts and spreadsheets.

use std::io::{self, Write};

use crate::report::Document;

/// An answer in every form that it has.
pub trait Answer {
    /// For people: rounded, with units.
    fn document(&self) -> Document;

    /// JSON, full precision, SI units.
    ///
    /// # Errors
    /// When `out` cannot be written.
    fn json(&self, out: &mut dyn Write) -> io::Result<()>;

    /// CSV, full precision, units in the header.
    ///
    /// # Errors
    /// When `out` cannot be written.
    fn csv(&self, out: &mut dyn Write) -> io::Result<()>;

    /// A spreadsheet with typed numbers, for answers that have one; a fault is in words.
    fn spreadsheet(&self) -> Option<Result<Vec<u8>, String>> {
        None
    }

    /// False when a requirement fails: for the stage asked about, or for every stage.
    fn met(&self) -> bool {
        true
    }
}
