//! Lists of words in messages.

/// Words in backticks, the first forty of them.
pub(crate) fn listed<'a>(words: impl IntoIterator<Item = &'a str>) -> String {
    const SHOWN: usize = 40;
    let words: Vec<&str> = words.into_iter().collect();
    let mut text = words.iter().take(SHOWN).map(|word| format!("`{word}`")).collect::<Vec<_>>().join(", ");
    if words.len() > SHOWN {
        text.push_str(&format!(" and {} more", words.len() - SHOWN));
    }
    text
}
