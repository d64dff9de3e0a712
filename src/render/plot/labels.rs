//! Labels beside their places: moved apart where they would touch.

/// Heights of labels that want to stand at `wanted` (any order), at least `gap` apart and between two bounds.
pub(super) fn spread(wanted: &[f64], gap: f64, [top, bottom]: [f64; 2]) -> Vec<f64> {
    let mut order: Vec<usize> = (0..wanted.len()).collect();
    order.sort_by(|a, b| wanted[*a].total_cmp(&wanted[*b]));
    let mut places = vec![0.0; wanted.len()];
    let mut next = top;
    for at in &order {
        places[*at] = wanted[*at].max(next);
        next = places[*at] + gap;
    }
    // what ran out below moves up again
    let mut limit = bottom;
    for at in order.iter().rev() {
        places[*at] = places[*at].min(limit);
        limit = places[*at] - gap;
    }
    places
}

/// Width of a letter, generously: drawings know no fonts.
const LETTER: f64 = 6.9;

/// Words cut to a width; what follows the last comma stays: "a-very-long-na…, 24 V".
pub(super) fn fit(words: &str, width: f64) -> String {
    let room = (width / LETTER) as usize;
    let count = words.chars().count();
    if count <= room {
        return words.to_owned();
    }
    let (head, tail) = match words.rfind(", ") {
        Some(comma) if words[comma..].chars().count() + 2 < room => words.split_at(comma),
        _ => (words, ""),
    };
    let kept = room.saturating_sub(tail.chars().count() + 1);
    format!("{}…{tail}", head.chars().take(kept).collect::<String>())
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn long_words_are_cut_and_keep_their_end() {
        assert_eq!(fit("synchronous, 24 V", 140.0), "synchronous, 24 V");
        assert_eq!(fit("synchronous with everything, 24 V", 140.0), "synchronous w…, 24 V");
        assert_eq!(fit("synchronous with everything", 70.0), "synchrono…");
    }

    #[test]
    fn labels_keep_their_distance() {
        let places = spread(&[100.0, 101.0, 20.0, 300.0], 14.0, [0.0, 300.0]);
        assert_eq!(places, [100.0, 114.0, 20.0, 300.0]);
        let places = spread(&[299.0, 300.0], 14.0, [0.0, 300.0]);
        assert_eq!(places, [286.0, 300.0]);
    }
}
