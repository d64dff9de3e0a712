//! Faults drawn with the line of the file and a mark under what is wrong.

use annotate_snippets::{AnnotationKind, Group, Level, Origin, Renderer, Snippet};

use super::error::{Excerpt, InputError, InputErrors, Severity};
use crate::printable::printable;

/// Widest line drawn, in characters; longer ones are cut by the renderer.
const WIDTH: usize = 120;

impl InputErrors {
    /// All faults drawn, with an empty line between them.
    pub fn render(&self, color: bool) -> String {
        render(&self.0, color)
    }
}

/// Faults drawn one below the other.
pub fn render(faults: &[InputError], color: bool) -> String {
    let drawn: Vec<String> = faults.iter().map(|fault| fault.render(color)).collect();
    drawn.join("\n\n")
}

impl InputError {
    /// The fault with its line and a mark; colours are ANSI escapes, written only when asked for.
    pub fn render(&self, color: bool) -> String {
        let renderer = if color { Renderer::styled() } else { Renderer::plain() };
        let level = match self.severity {
            Severity::Error => Level::ERROR,
            Severity::Warning => Level::WARNING,
        };
        let file = printable(&self.file.display().to_string()).into_owned();
        let mut group = Group::with_title(level.primary_title(self.title()));
        group = match &self.excerpt {
            Some(excerpt) => group.element(snippet(excerpt, self.line, &file, (AnnotationKind::Primary, ""))),
            None if self.line > 0 => {
                group.element(Origin::path(file).line(self.line).char_column(self.column))
            }
            None => group.element(Origin::path(file)),
        };
        if let Some(other) = &self.other {
            let file = printable(&other.file.display().to_string()).into_owned();
            group = match &other.excerpt {
                Some(excerpt) => {
                    let mark = (AnnotationKind::Context, other.label.as_str());
                    group.element(snippet(excerpt, other.line, &file, mark))
                }
                None => group.element(Origin::path(file).line(other.line).char_column(other.column)),
            };
        }
        if !self.hint.is_empty() {
            group = group.element(Level::HELP.message(printable(&self.hint)));
        }
        renderer.term_width(WIDTH).render(&[group])
    }

    fn title(&self) -> String {
        format!("{}{}", self.subject(), printable(&self.reason))
    }
}

fn snippet<'a>(
    excerpt: &'a Excerpt,
    line: usize,
    file: &str,
    (kind, label): (AnnotationKind, &'a str),
) -> Snippet<'a, annotate_snippets::Annotation<'a>> {
    let mut mark = kind.span(excerpt.start..excerpt.end);
    if !label.is_empty() {
        mark = mark.label(label);
    }
    Snippet::source(excerpt.text.as_str()).line_start(line).path(file.to_string()).annotation(mark)
}

#[cfg(test)]
mod tests {
    use std::path::Path;

    use super::*;

    #[test]
    fn a_fault_is_drawn_with_its_line() {
        let error = InputError {
            line: 7,
            column: 11,
            path: "q_gd".into(),
            part: "demo".into(),
            excerpt: Some(Excerpt { text: "    q_gd: 2.1 V".into(), start: 10, end: 15 }),
            ..InputError::of_file(Path::new("a.yaml"), "V is a voltage, a charge is expected", "write 2.1 nC")
        };
        let expected = "error: `q_gd` of demo: V is a voltage, a charge is expected\n \
                        --> a.yaml:7:11\n  |\n7 |     q_gd: 2.1 V\n  |           ^^^^^\n  |\n  \
                        = help: write 2.1 nC";
        assert_eq!(error.render(false), expected);
        assert!(error.render(true).contains('\u{1b}'));
    }

    #[test]
    fn a_fault_of_a_file_is_drawn_with_its_name() {
        let error = InputError::of_file(Path::new("a\u{1b}.yaml"), "cannot be read", "check it");
        assert_eq!(error.render(false), "error: cannot be read\n--> a\\u{1b}.yaml\n = help: check it");
    }
}
