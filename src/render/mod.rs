//! Documents into formats: one trait, one small file a format.

mod braille;
mod html;
mod markdown;
mod panels;
pub mod plot;
mod text;

use std::io::{self, Write};

pub use html::Html;
pub use markdown::Markdown;
pub use text::Text;

use crate::report::Document;

/// A format that people read.
pub trait Render {
    /// Writes a document whole.
    ///
    /// # Errors
    /// When `out` cannot be written.
    fn render(&self, document: &Document, out: &mut dyn Write) -> io::Result<()>;
}
