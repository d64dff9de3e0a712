//! Text from outside made harmless: a name of a part must not paint the terminal or turn the direction of writing.

use std::borrow::Cow;

/// Text with control characters, direction marks and invisible characters shown as escapes (`\u{1b}`).
pub fn printable(text: &str) -> Cow<'_, str> {
    if !text.chars().any(is_unprintable) {
        return Cow::Borrowed(text);
    }
    let mut shown = String::with_capacity(text.len() + 16);
    for c in text.chars() {
        if is_unprintable(c) {
            shown.extend(c.escape_default());
        } else {
            shown.push(c);
        }
    }
    Cow::Owned(shown)
}

/// Control characters, line separators, marks that turn the direction of writing, and characters without width.
pub fn is_unprintable(c: char) -> bool {
    c.is_control()
        || matches!(c,
            '\u{00AD}'                          // soft hyphen
            | '\u{061C}' | '\u{180E}'
            | '\u{200B}'..='\u{200F}'           // zero width, direction marks
            | '\u{2028}'..='\u{202E}'           // line and paragraph separators, embeddings, overrides
            | '\u{2060}'..='\u{206F}'           // invisible operators, isolates
            | '\u{FEFF}' | '\u{FFF9}'..='\u{FFFB}'
            | '\u{E0000}'..='\u{E007F}') // tags
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn names_lose_their_tricks_and_keep_their_letters() {
        assert_eq!(printable("demo-l3µ3 Ω 日本"), "demo-l3µ3 Ω 日本");
        assert!(matches!(printable("demo"), Cow::Borrowed("demo")));
        assert_eq!(printable("a\u{1b}[31m\u{202e}b\n\t"), "a\\u{1b}[31m\\u{202e}b\\n\\t");
        assert_eq!(printable("a\u{2066}\u{200b}\u{9b}"), "a\\u{2066}\\u{200b}\\u{9b}");
    }
}
