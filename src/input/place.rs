//! Lines and columns for key paths: a second pass over the events of a text, made only when somebody needs a place.

use std::path::Path;

use saphyr_parser::{Event, Marker, Parser, Span};

use super::error::{Excerpt, InputError};
use super::notes::{Mark, Note};
use super::path::{KeyPath, Step, write_steps};
use super::yaml::YamlFault;
use crate::printable::is_unprintable;

/// A stretch of a file that holds whole values.
#[derive(Clone, Copy, Debug)]
pub(crate) struct Source<'a> {
    /// The file, for messages.
    pub(crate) file: &'a Path,
    /// The text of the stretch.
    pub(crate) text: &'a str,
    /// Line of the file on which it begins, from 1.
    pub(crate) first_line: usize,
    /// Steps of a key path that lead to the stretch and are not repeated in it.
    pub(crate) above: usize,
    /// True when the first two steps of a path are a kind of part and a part.
    pub(crate) library: bool,
}

impl Source<'_> {
    /// What the second parser says of a text that the first one let pass.
    pub(crate) fn yaml_fault(&self, fault: &YamlFault) -> InputError {
        let spot = Spot { line: fault.line, start: fault.column.saturating_sub(1), end: fault.column };
        let line = fault.line.checked_sub(1).and_then(|place| self.text.split('\n').nth(place));
        let hint = match fault.line {
            0 => "write each part on lines of its own below its kind, or split the file",
            _ => "check the indentation and the quotes near this place",
        };
        let reason = match fault.line {
            0 => format!("cannot be read: {}", fault.reason),
            _ => format!("this is no YAML: {}", fault.reason),
        };
        InputError {
            line: if fault.line == 0 { 0 } else { fault.line + self.first_line - 1 },
            column: fault.column,
            excerpt: line.map(|line| excerpt(line, spot)),
            ..InputError::of_file(self.file, reason, hint)
        }
    }
}

/// Where something stands in a text: line from 1, columns from 0 in characters; `end` on the same line.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq)]
pub(crate) struct Spot {
    /// Line from 1.
    pub(crate) line: usize,
    /// First column.
    pub(crate) start: usize,
    /// First column after it.
    pub(crate) end: usize,
}

impl Spot {
    /// From a mark to the end of what begins there; one character when it goes on to the next line.
    pub(crate) fn new(start: Marker, end: Marker) -> Spot {
        let end = if end.line() == start.line() { end.col() } else { start.col() + 1 };
        Spot { line: start.line(), start: start.col(), end: end.max(start.col() + 1) }
    }
}

/// Gives every note its line, column and excerpt.
pub(crate) fn resolve(notes: Vec<Note>, source: &Source<'_>) -> Vec<InputError> {
    let spots = find(&notes, source);
    let lines: Vec<&str> = if notes.is_empty() { Vec::new() } else { source.text.split('\n').collect() };
    notes.into_iter().zip(spots).map(|(note, spot)| place(note, spot, &lines, source)).collect()
}

fn place(note: Note, spot: Option<Spot>, lines: &[&str], source: &Source<'_>) -> InputError {
    let (part, path) = names(&note.path, source.library);
    let line = spot.and_then(|spot| lines.get(spot.line - 1).copied());
    let mut hint = note.hint;
    if let Some((spot, line)) = spot.zip(line).filter(|_| note.reason.ends_with("needs its unit")) {
        hint.push_str(lost_unit(line, spot));
    }
    InputError {
        severity: note.severity,
        file: source.file.to_path_buf(),
        line: spot.map_or(0, |spot| spot.line + source.first_line - 1),
        column: spot.map_or(0, |spot| spot.start + 1),
        path,
        part,
        value: note.value,
        reason: note.reason,
        hint,
        excerpt: spot.zip(line).map(|(spot, line)| excerpt(line, spot)),
        other: None,
    }
}

/// What YAML may have made of the unit of a number.
fn lost_unit(line: &str, spot: Spot) -> &'static str {
    let mut after = line.chars().skip(spot.end);
    match after.next() {
        Some(',') if after.next().is_some_and(|c| c.is_ascii_digit()) => {
            "; decimals take a point, not a comma"
        }
        Some(' ') if after.next() == Some('#') => "; what follows ` #` on a line is a comment",
        _ => "",
    }
}

/// Name of the part and the path inside it.
fn names(path: &KeyPath, library: bool) -> (String, String) {
    let part = if library { path.key(1).unwrap_or("") } else { "" };
    let skip = if part.is_empty() { 0 } else { 2 };
    let mut inside = String::new();
    // writing to a String cannot fail
    let _ = write_steps(&mut inside, &path.0[skip..]);
    (part.to_string(), inside)
}

/// Characters of a long line that are kept before and after the mark.
const CONTEXT: usize = 2000;

/// A line with a mark; control characters replaced, long lines cut around the mark.
pub(crate) fn excerpt(line: &str, spot: Spot) -> Excerpt {
    let (mut text, mut start, mut end) = (String::new(), None, None);
    let first = spot.start.saturating_sub(CONTEXT);
    let last = spot.end.min(spot.start + 2 * CONTEXT) + CONTEXT;
    if first > 0 {
        text.push_str("... ");
    }
    for (column, c) in line.chars().enumerate().skip(first).take_while(|(column, _)| *column < last) {
        if column == spot.start {
            start = Some(text.len());
        }
        if column == spot.end {
            end = Some(text.len());
        }
        text.push(match c {
            '\t' => ' ',
            c if is_unprintable(c) => '\u{FFFD}',
            c => c,
        });
    }
    let start = start.unwrap_or(text.len());
    Excerpt { end: end.unwrap_or(text.len()).max(start), start, text }
}

/// An open mapping or list on the way down.
struct Frame {
    mapping: bool,
    /// Next item of a list.
    next: usize,
    /// Key just read, whose value comes next.
    key: Option<(Step, Spot)>,
    /// Notes whose paths lead here.
    active: Vec<usize>,
    /// Where a value on one line would begin, and the notes that want it.
    start: Marker,
    ends_here: Vec<usize>,
}

/// The spot of every note: of its path, or of the longest part of its path that the text has.
fn find(notes: &[Note], source: &Source<'_>) -> Vec<Option<Spot>> {
    let mut finder = Finder { notes, above: source.above, spots: vec![None; notes.len()], stack: Vec::new() };
    if notes.is_empty() {
        return finder.spots;
    }
    for event in Parser::new_from_str(source.text) {
        let Ok((event, span)) = event else { break };
        finder.event(&event, span);
    }
    finder.spots
}

struct Finder<'a> {
    notes: &'a [Note],
    above: usize,
    spots: Vec<Option<Spot>>,
    stack: Vec<Frame>,
}

impl Finder<'_> {
    fn event(&mut self, event: &Event<'_>, span: Span) {
        match event {
            Event::Scalar(text, ..) => {
                let spot = Spot::new(span.start, span.end);
                match self.stack.last_mut() {
                    Some(frame) if frame.mapping && frame.key.is_none() => {
                        frame.key = Some((Step::Key(text.as_ref().into()), spot));
                    }
                    _ => {
                        let (_, wanting) = self.enter(spot);
                        self.mark_values(&wanting, spot);
                    }
                }
            }
            Event::MappingStart(..) | Event::SequenceStart(..) => {
                let here = Spot::new(span.start, span.end);
                let (active, ends_here) = self.enter(here);
                let mapping = matches!(event, Event::MappingStart(..));
                self.stack.push(Frame { mapping, next: 0, key: None, active, start: span.start, ends_here });
            }
            Event::MappingEnd | Event::SequenceEnd => {
                if let Some(frame) = self.stack.pop() {
                    // a value in brackets on one line is marked whole
                    if span.end.line() == frame.start.line() && span.start.index() < span.end.index() {
                        let end = Marker::new(0, span.start.line(), span.start.col() + 1);
                        self.mark_values(&frame.ends_here, Spot::new(frame.start, end));
                    }
                }
            }
            _ => {}
        }
    }

    /// Steps into the value that begins here: the notes still on their way, and those whose path ends here.
    fn enter(&mut self, here: Spot) -> (Vec<usize>, Vec<usize>) {
        let depth = self.stack.len() + self.above;
        let all = (0..self.notes.len()).collect();
        let (step, spot, candidates) = match self.stack.last_mut() {
            None => (None, here, all),
            Some(frame) if frame.mapping => {
                let Some((step, spot)) = frame.key.take() else { return (Vec::new(), Vec::new()) };
                (Some(step), spot, frame.active.clone())
            }
            Some(frame) => {
                frame.next += 1;
                (Some(Step::Item(frame.next - 1)), here, frame.active.clone())
            }
        };
        let on_path =
            |index: &usize| step.is_none() || self.notes[*index].path.0.get(depth - 1) == step.as_ref();
        let active: Vec<usize> = candidates.into_iter().filter(on_path).collect();
        for index in &active {
            if step.is_some() || self.above == 0 {
                self.spots[*index] = Some(spot);
            }
        }
        let ends = |index: &usize| self.notes[*index].path.0.len() == depth;
        let ends_here = active.iter().copied().filter(ends).collect();
        (active, ends_here)
    }

    fn mark_values(&mut self, wanting: &[usize], spot: Spot) {
        for index in wanting {
            if self.notes[*index].mark == Mark::Value {
                self.spots[*index] = Some(spot);
            }
        }
    }
}

#[cfg(test)]
mod tests {
    use super::super::error::Severity;
    use super::*;

    fn spot_of(text: &str, path: &str, mark: Mark) -> Option<(usize, usize, usize)> {
        let note = Note {
            severity: Severity::Error,
            path: KeyPath::default().with(path),
            mark,
            value: None,
            reason: String::new(),
            hint: String::new(),
        };
        let source = Source { file: Path::new("x"), text, first_line: 1, above: 0, library: false };
        find(&[note], &source)[0].map(|spot| (spot.line, spot.start, spot.end))
    }

    #[test]
    fn keys_values_and_missing_paths_have_spots() {
        let text = "a: {b: 6.8 mΩ  , c: [1, 2]}\nd:\n  - x: 1\n    y: \"q\"\n  - z\n";
        assert_eq!(spot_of(text, "a.b", Mark::Value), Some((1, 7, 13)));
        assert_eq!(spot_of(text, "a.b", Mark::Key), Some((1, 4, 5)));
        assert_eq!(spot_of(text, "a", Mark::Value), Some((1, 3, 27)));
        assert_eq!(spot_of(text, "a.c", Mark::Value), Some((1, 20, 26)));
        assert_eq!(spot_of(text, "a.c[1]", Mark::Value), Some((1, 24, 25)));
        assert_eq!(spot_of(text, "a.none.deep", Mark::Value), Some((1, 0, 1)));
        assert_eq!(spot_of(text, "d[0].y", Mark::Value), Some((4, 7, 10)));
        assert_eq!(spot_of(text, "d[0]", Mark::Value), Some((3, 4, 5)));
        assert_eq!(spot_of(text, "d", Mark::Value), Some((2, 0, 1)));
        assert_eq!(spot_of(text, "d[1]", Mark::Value), Some((5, 4, 5)));
        assert_eq!(spot_of(text, "nothing", Mark::Key), Some((1, 0, 1)));
    }

    #[test]
    fn long_lines_are_cut_around_the_mark() {
        let line = format!("{}µµ{}", "x".repeat(5000), "y".repeat(5000));
        let cut = excerpt(&line, Spot { line: 1, start: 5000, end: 5002 });
        assert_eq!(&cut.text[cut.start..cut.end], "µµ");
        assert!(cut.text.chars().count() < 6100);
    }
}
