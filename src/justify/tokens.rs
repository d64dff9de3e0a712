//! Equations as text: symbols of the data sheets, numbers, functions, signs.

/// A piece of an equation.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Token<'a> {
    /// A symbol that is known.
    Symbol(&'a str),
    /// Anything else: numbers, functions, signs, spaces.
    Other(&'a str),
}

impl<'a> Token<'a> {
    /// The piece as it stands.
    pub fn text(&self) -> &'a str {
        match self {
            Token::Symbol(text) | Token::Other(text) => text,
        }
    }

    /// The symbol, when it is one.
    pub fn symbol(&self) -> Option<&'a str> {
        match self {
            Token::Symbol(text) => Some(text),
            Token::Other(_) => None,
        }
    }
}

/// Splits an equation; of several symbols that begin alike the longest known one counts: `R_DS(on)_HS` before `R_DS`.
pub fn split(equation: &str, known: impl Fn(&str) -> bool) -> Vec<Token<'_>> {
    let mut tokens = Vec::new();
    let mut rest = equation;
    while let Some(first) = rest.chars().next() {
        let word = word_length(rest);
        let symbol = if first.is_alphabetic() { longest(rest, word, &known) } else { None };
        let length = symbol.unwrap_or(word.max(first.len_utf8()));
        let (piece, after) = rest.split_at(length);
        tokens.push(if symbol.is_some() { Token::Symbol(piece) } else { Token::Other(piece) });
        rest = after;
    }
    tokens
}

/// Length of the letters, digits and underscores at the start.
fn word_length(text: &str) -> usize {
    text.find(|c: char| !c.is_alphanumeric() && c != '_').unwrap_or(text.len())
}

/// Length of the longest known symbol at the start: a word, or words joined by parentheses as in `R_DS(on)_HS`.
fn longest(text: &str, word: usize, known: &impl Fn(&str) -> bool) -> Option<usize> {
    let mut found = known(&text[..word]).then_some(word);
    let mut end = word;
    while text[end..].starts_with('(') {
        let Some(close) = text[end..].find(')') else { break };
        let inside = &text[end + 1..end + close];
        if !inside.chars().all(char::is_alphabetic) {
            break;
        }
        end += close + 1;
        end += word_length(&text[end..]);
        if known(&text[..end]) {
            found = Some(end);
        }
    }
    found
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn the_longest_known_symbol_counts() {
        let known = ["R_DS(on)_HS", "R", "I_P", "m"];
        let symbols = |text| -> Vec<String> {
            let tokens = split(text, |name| known.contains(&name));
            tokens.iter().filter_map(Token::symbol).map(str::to_owned).collect()
        };
        assert_eq!(symbols("max(m·R_DS(on)_HS, 0)/R·(I_P)^2"), ["m", "R_DS(on)_HS", "R", "I_P"]);
        let text = "√(R)·ln(m/I_P) - 0.5";
        let whole: String = split(text, |name| known.contains(&name)).iter().map(Token::text).collect();
        assert_eq!(whole, text);
    }
}
