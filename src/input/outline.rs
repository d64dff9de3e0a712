//! Guard before reading: one pass over the YAML events of a text that refuses what must not be read on.
//!
//! Refused: nesting deeper than [`DEEPEST`], anchors, aliases, tags, merge keys, keys that are no words, the same key
//! twice, a second document, and whatever is no YAML. The pass also finds where each part of a library begins, so
//! that a large file can be read part by part.

use std::borrow::Cow;
use std::path::Path;

use saphyr_parser::{Event, Marker, Parser, ScanError, Span};

use super::error::Blame;
use super::error::{InputError, OtherPlace};
use super::keys::Keys;
use super::notes::MOST;
use super::place::{Spot, excerpt};
use super::stretches::{self, Stretch};
use crate::printable::printable;

/// Most keys of one mapping: parts of one kind in one file.
const MOST_KEYS: usize = 1_000_000;

/// Deepest nesting of mappings and lists.
pub(crate) const DEEPEST: usize = 64;

/// What the guard learnt of a text.
#[derive(Clone, Debug, Default, PartialEq, Eq)]
pub(crate) struct Outline {
    /// Keys at the top with their lines.
    pub(crate) top: Vec<(Box<str>, usize)>,
    /// The text in stretches: some entries of a block mapping under a top key, or the whole of a top key.
    pub(crate) stretches: Vec<Stretch>,
}

/// Checks a text and finds its outline.
///
/// # Errors
/// All faults found, each with its place.
pub(crate) fn guard(file: &Path, text: &str) -> Result<Outline, Vec<InputError>> {
    let mut guard = Guard::new(file, text);
    if let Some((line, column)) = separator(text) {
        let spot = Spot { line, start: column, end: column + 1 };
        guard.fault(spot, "a Unicode line separator stands here", "use ordinary line ends");
        return Err(guard.faults);
    }
    for event in Parser::new_from_str(text) {
        match event {
            Ok((event, span)) => guard.event(event, span),
            Err(error) => guard.scan_error(&error),
        }
        if guard.stop || guard.faults.len() >= MOST {
            break;
        }
    }
    if guard.faults.is_empty() { Ok(guard.outline()) } else { Err(guard.faults) }
}

/// YAML 1.1 ends lines at these, YAML 1.2 does not: two readers would see two texts.
fn separator(text: &str) -> Option<(usize, usize)> {
    let place = text.find(['\u{85}', '\u{2028}', '\u{2029}'])?;
    let before = &text[..place];
    let start = before.rfind('\n').map_or(0, |end| end + 1);
    Some((1 + before.matches('\n').count(), before[start..].chars().count()))
}

/// An open mapping or list.
struct Frame<'t> {
    mapping: bool,
    flow: bool,
    start: Marker,
    /// True when a value must come next.
    after_key: bool,
    keys: Keys<'t>,
}

struct Guard<'t> {
    file: &'t Path,
    text: &'t str,
    lines: Vec<usize>,
    stack: Vec<Frame<'t>>,
    documents: usize,
    top: Vec<(Box<str>, Spot)>,
    /// Line and column of the entries of each block mapping under a top key.
    entries: Vec<(usize, Spot)>,
    faults: Vec<InputError>,
    stop: bool,
}

impl<'t> Guard<'t> {
    fn new(file: &'t Path, text: &'t str) -> Self {
        let lines = std::iter::once(0).chain(text.match_indices('\n').map(|(place, _)| place + 1)).collect();
        Guard {
            file,
            text,
            lines,
            stack: Vec::new(),
            documents: 0,
            top: Vec::new(),
            entries: Vec::new(),
            faults: Vec::new(),
            stop: false,
        }
    }

    fn event(&mut self, event: Event<'t>, span: Span) {
        let spot = Spot::new(span.start, span.end);
        match event {
            Event::DocumentStart(_) => {
                self.documents += 1;
                if self.documents > 1 {
                    self.fault(spot, "a second YAML document begins here", "put it into a file of its own");
                    self.stop = true;
                }
            }
            Event::Alias(_) => self.reference(spot),
            Event::Scalar(text, _, anchor, tag) => {
                if anchor != 0 {
                    self.reference(spot);
                }
                if tag.is_some() {
                    self.tag(spot);
                }
                self.scalar(text, spot);
            }
            Event::MappingStart(anchor, tag) => self.open(true, (anchor != 0, tag.is_some()), span),
            Event::SequenceStart(anchor, tag) => self.open(false, (anchor != 0, tag.is_some()), span),
            Event::MappingEnd | Event::SequenceEnd => {
                self.stack.pop();
            }
            _ => {}
        }
    }

    fn open(&mut self, mapping: bool, (anchor, tag): (bool, bool), span: Span) {
        let spot = Spot::new(span.start, span.end);
        if anchor {
            self.reference(spot);
        }
        if tag {
            self.tag(spot);
        }
        if let Some(frame) = self.stack.last_mut().filter(|frame| frame.mapping) {
            if frame.after_key {
                frame.after_key = false;
            } else {
                frame.after_key = true;
                self.fault(spot, "a list or a mapping stands where a key is expected", "write `key: value`");
            }
        }
        if self.stack.len() >= DEEPEST {
            self.too_deep(spot);
        }
        let flow = span.end.index() > span.start.index();
        self.stack.push(Frame { mapping, flow, start: span.start, after_key: false, keys: Keys::default() });
    }

    fn too_deep(&mut self, spot: Spot) {
        let reason = format!("more than {DEEPEST} mappings and lists are nested here");
        self.fault(spot, reason, "no file of this program needs more than ten; check the brackets");
        self.stop = true;
    }

    fn scalar(&mut self, text: Cow<'t, str>, spot: Spot) {
        let depth = self.stack.len();
        let Some(frame) = self.stack.last_mut().filter(|frame| frame.mapping) else { return };
        if frame.after_key {
            frame.after_key = false;
            return;
        }
        frame.after_key = true;
        if depth == 1 {
            self.top.push((text.as_ref().into(), spot));
        } else if let Some(top) = self.top.len().checked_sub(1).filter(|_| depth == 2 && !frame.flow) {
            self.entries.push((top, spot));
        }
        if text == "<<" {
            self.fault(spot, "merge keys are not read", "write the keys out");
        } else if frame.keys.len() >= MOST_KEYS {
            let reason = format!("more than {MOST_KEYS} keys stand in one mapping");
            self.fault(spot, reason, "split it into several files");
            self.stop = true;
        } else if let Some(first) = frame.keys.add(text.clone(), spot) {
            self.doubled(&text, first, spot);
        }
    }

    fn doubled(&mut self, key: &str, first: Spot, second: Spot) {
        let mut fault = self.located(
            second,
            Blame::new(
                format!("the key `{}` stands here a second time", printable(key)),
                "keep one of the two",
            ),
        );
        fault.other = Some(Box::new(OtherPlace {
            label: "given here first".into(),
            file: self.file.to_path_buf(),
            line: first.line,
            column: first.start + 1,
            excerpt: self.line(first.line).map(|line| excerpt(line, first)),
        }));
        self.faults.push(fault);
    }

    fn reference(&mut self, spot: Spot) {
        self.fault(
            spot,
            "anchors and aliases (`&`, `*`) are not read",
            "write the value out, or put it in quotes",
        );
    }

    fn tag(&mut self, spot: Spot) {
        self.fault(spot, "tags (`!`) are not read", "write the bare value, or put it in quotes");
    }

    fn scan_error(&mut self, error: &ScanError) {
        self.stop = true;
        let mark = error.marker();
        let spot = Spot { line: mark.line(), start: mark.col(), end: mark.col() + 1 };
        let tab = [spot.line, spot.line + 1].into_iter().find_map(|line| {
            let text = self.line(line)?;
            let indent = text.len() - text.trim_start().len();
            let column = text[..indent].find('\t')?;
            Some(Spot { line, start: column, end: column + 1 })
        });
        if let Some(tab) = tab {
            self.fault(tab, "the line is indented with a tab", "indent with spaces");
        } else if error.info().contains("recursion limit") {
            self.too_deep(spot);
        } else if error.info().contains("anchor") {
            self.reference(spot);
        } else if let Some(open) = self.unclosed(error.info()) {
            let (bracket, pair) = if open.mapping { ('{', '}') } else { ('[', ']') };
            let spot = Spot { line: open.start.line(), start: open.start.col(), end: open.start.col() + 1 };
            let hint = format!("add the `{pair}`, and a comma between items");
            self.fault(spot, format!("the `{bracket}` opened here is not closed properly"), hint);
        } else {
            self.fault(spot, format!("this is no YAML: {}", error.info()), hint_for(error.info()));
        }
    }

    /// The innermost open bracket, when a complaint is about its end.
    fn unclosed(&self, info: &str) -> Option<&Frame<'t>> {
        let about_end = ["flow", "node content", "end of stream"].iter().any(|words| info.contains(words));
        self.stack.last().filter(|frame| frame.flow && about_end)
    }

    fn fault(&mut self, spot: Spot, reason: impl Into<String>, hint: impl Into<String>) {
        let fault = self.located(spot, Blame::new(reason, hint));
        self.faults.push(fault);
    }

    fn located(&self, spot: Spot, blame: Blame) -> InputError {
        InputError {
            line: spot.line,
            column: spot.start + 1,
            excerpt: self.line(spot.line).map(|line| excerpt(line, spot)),
            ..InputError::of_file(self.file, blame.reason, blame.hint)
        }
    }

    fn line(&self, line: usize) -> Option<&'t str> {
        let start = *self.lines.get(line.checked_sub(1)?)?;
        self.text.get(start..)?.split('\n').next()
    }

    fn outline(self) -> Outline {
        let stretches = stretches::cut(self.text, &self.lines, &self.top, &self.entries);
        let top = self.top.into_iter().map(|(name, spot)| (name, spot.line)).collect();
        Outline { top, stretches }
    }
}

/// The usual way out of a parser's complaint.
fn hint_for(info: &str) -> &'static str {
    if info.contains("mapping values are not allowed") {
        "put a text that contains `: ` in quotes; check the indentation"
    } else if info.contains("quoted scalar") {
        "close the quotes, and write a backslash in double quotes as \\\\"
    } else if info.contains("unexpected character") {
        "put the value in quotes"
    } else if info.contains("simple key") {
        "every line of a mapping is `key: value`"
    } else {
        "check the indentation and the brackets near this place"
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    fn faults(text: &str) -> Vec<String> {
        match guard(Path::new("x"), text) {
            Ok(_) => Vec::new(),
            Err(faults) => faults.iter().map(|f| format!("{}:{} {}", f.line, f.column, f.reason)).collect(),
        }
    }

    #[test]
    fn what_must_not_be_read_is_refused_with_its_place() {
        let cases = [
            ("a: 1\nb: 2\na: 3\n", "3:1 the key `a` stands here a second time"),
            ("a: {b: 1, b: 2}\n", "1:11 the key `b` stands here a second time"),
            ("a: &x 1\n", "1:4 anchors and aliases (`&`, `*`) are not read"),
            ("a: *x\n", "1:4 anchors and aliases (`&`, `*`) are not read"),
            ("a: !t 1\n", "1:4 tags (`!`) are not read"),
            ("<<: {}\n", "1:1 merge keys are not read"),
            ("? [a]\n: 1\n", "1:3 a list or a mapping stands where a key is expected"),
            ("a: 1\n---\nb: 2\n", "2:1 a second YAML document begins here"),
            ("a: 1\n\tb: 2\n", "2:1 the line is indented with a tab"),
            ("a:\n\t- 1\n", "2:1 the line is indented with a tab"),
            ("a: x\u{2028}b: 1\n", "1:5 a Unicode line separator stands here"),
        ];
        for (text, expected) in cases {
            assert_eq!(faults(text), [expected], "{text:?}");
        }
        assert!(faults("a: [1, 2\n")[0].starts_with("1:4 the `[` opened here is not closed"));
        assert!(faults("a: b: c\n")[0].contains("mapping values are not allowed"));
    }

    #[test]
    fn nesting_is_cut_off_at_once() {
        let deep = "{a: ".repeat(200_000);
        let started = std::time::Instant::now();
        assert_eq!(faults(&deep), ["1:1021 more than 64 mappings and lists are nested here"]);
        assert!(started.elapsed().as_secs() < 2);
        assert!(faults(&format!("{}1{}", "[".repeat(64), "]".repeat(64))).is_empty());
    }

    #[test]
    fn many_keys_are_compared_by_hash() {
        let many: String = (0..100).map(|i| format!("k{i}: 1\n")).collect();
        assert!(faults(&many).is_empty());
        assert_eq!(faults(&(many + "k50: 1\n")), ["101:1 the key `k50` stands here a second time"]);
    }
}
