//! What the terminal is like, and the one way to say something beside the result.

use std::io::{self, IsTerminal, Write};
use std::path::Path;

use lossbook::printable::printable;

use super::options::Colour;

/// Width where none is known: what fits a page.
pub(crate) const PAGE: usize = 100;

/// Columns of standard output; a page's when it is no terminal.
pub(crate) fn width() -> usize {
    let terminal = terminal_size::terminal_size_of(io::stdout()).map(|(width, _)| usize::from(width.0));
    terminal.filter(|columns| *columns > 0).unwrap_or(PAGE)
}

/// True when text on standard output is to be coloured.
pub(crate) fn colour(when: Colour) -> bool {
    match when {
        Colour::Always => true,
        Colour::Never => false,
        Colour::Auto => io::stdout().is_terminal() && wanted(),
    }
}

/// True when messages are to be coloured.
pub(crate) fn stderr_colour() -> bool {
    io::stderr().is_terminal() && wanted()
}

/// NO_COLOR set to anything but nothing, and terminals that cannot, mean no.
fn wanted() -> bool {
    let set = |name| std::env::var_os(name).is_some_and(|value| !value.is_empty());
    !set("NO_COLOR") && std::env::var_os("TERM").is_none_or(|term| term != "dumb")
}

/// A path as it may be printed.
pub(crate) fn shown(path: &Path) -> String {
    printable(&path.display().to_string()).into_owned()
}

/// Says something beside the result.
pub(crate) fn say(words: &str) {
    let end = if words.ends_with('\n') { "" } else { "\n" };
    // standard error may be closed: then there is no one to tell
    let _ = write!(io::stderr(), "{words}{end}");
}

/// Writes out what standard error may still hold.
pub(crate) fn flush() {
    let _ = io::stderr().flush();
}
