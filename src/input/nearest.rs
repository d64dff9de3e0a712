//! Near misses: the known word that somebody probably meant.

/// The known word nearest to a misspelt one, when it is near at all; case, dashes and underscores hardly count.
pub fn nearest<'a>(word: &str, known: impl IntoIterator<Item = &'a str>) -> Option<&'a str> {
    let plain = fold(word);
    let length = plain.chars().count();
    let allowed = (length / 3).clamp(1, 4);
    let distance = |candidate: &'a str| {
        let folded = fold(candidate);
        let near = folded.chars().count().abs_diff(length) <= allowed;
        near.then(|| (strsim::damerau_levenshtein(&plain, &folded), candidate))
    };
    known
        .into_iter()
        .filter_map(distance)
        .min_by_key(|(distance, _)| *distance)
        .filter(|(distance, _)| *distance <= allowed && *distance < length)
        .map(|(_, candidate)| candidate)
}

fn fold(word: &str) -> String {
    word.chars().take(100).filter(|c| !"_- ".contains(*c)).flat_map(char::to_lowercase).collect()
}

/// Words in backticks, the first forty of them.
pub fn listed<'a>(words: impl IntoIterator<Item = &'a str>) -> String {
    const SHOWN: usize = 40;
    let words: Vec<&str> = words.into_iter().collect();
    let mut text = words.iter().take(SHOWN).map(|word| format!("`{word}`")).collect::<Vec<_>>().join(", ");
    if words.len() > SHOWN {
        text.push_str(&format!(" and {} more", words.len() - SHOWN));
    }
    text
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn slips_are_found_and_strangers_are_not() {
        let keys = ["r_ds_on", "r_ds_on_hot", "q_gd", "q_gs", "v_ds_max"];
        assert_eq!(nearest("rds_on", keys), Some("r_ds_on"));
        assert_eq!(nearest("RDSon", keys), Some("r_ds_on"));
        assert_eq!(nearest("R-DS-ON", keys), Some("r_ds_on"));
        assert_eq!(nearest("v_dsmax", keys), Some("v_ds_max"));
        assert_eq!(nearest("q_gdd", keys), Some("q_gd"));
        assert_eq!(nearest("colour", keys), None);
        assert_eq!(nearest("", keys), None);
    }
}
