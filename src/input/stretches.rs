//! Where a library file can be cut, so that a large one is read piece by piece and on all cores.

use super::place::Spot;

/// Length from which a stretch is not extended, in bytes: long enough to be worth a parser, short enough to be
/// shared among cores.
const STRETCH: usize = 32 * 1024;

/// Stretches of a text that can be read on their own.
#[derive(Clone, Debug, PartialEq, Eq)]
pub(crate) struct Stretch {
    /// First byte.
    pub(crate) start: usize,
    /// First byte after it.
    pub(crate) end: usize,
    /// Line on which it begins, from 1.
    pub(crate) line: usize,
    /// Key at the top of the file to which it belongs; `None` when the stretch repeats that key itself.
    pub(crate) kind: Option<Box<str>>,
}

/// Cuts a text whose lines begin at `lines`: `top` are the keys at its top, `entries` the keys of block mappings under
/// them, each with the number of its top key.
pub(crate) fn cut(
    text: &str,
    lines: &[usize],
    top: &[(Box<str>, Spot)],
    entries: &[(usize, Spot)],
) -> Vec<Stretch> {
    // the end of the text lies beyond its last line
    let byte = |line: usize| lines.get(line - 1).copied().unwrap_or(text.len());
    let in_order = top.windows(2).all(|pair| pair[0].1.line < pair[1].1.line);
    if !in_order || top.iter().any(|(_, spot)| spot.start != 0) {
        return vec![Stretch { start: 0, end: text.len(), line: 1, kind: None }];
    }
    let mut stretches = Vec::new();
    for (index, (name, spot)) in top.iter().enumerate() {
        let end = top.get(index + 1).map_or(text.len(), |(_, next)| byte(next.line));
        let from = entries.partition_point(|(top, _)| *top < index);
        let to = entries.partition_point(|(top, _)| *top <= index);
        let own = &entries[from..to];
        if own.is_empty() {
            stretches.push(Stretch { start: byte(spot.line), end, line: spot.line, kind: None });
        }
        let mut open: Option<Stretch> = None;
        for (place, (_, entry)) in own.iter().enumerate() {
            let (start, line) = (byte(entry.line), entry.line);
            let end = own.get(place + 1).map_or(end, |(_, next)| byte(next.line));
            let stretch = open.get_or_insert_with(|| Stretch { start, end, line, kind: Some(name.clone()) });
            stretch.end = end;
            if stretch.end - stretch.start >= STRETCH {
                stretches.extend(open.take());
            }
        }
        stretches.extend(open);
    }
    stretches
}

#[cfg(test)]
mod tests {
    use std::path::Path;

    use super::super::outline::guard;
    use super::*;

    #[test]
    fn long_files_are_cut_between_parts() {
        let part = format!("  a: {{x: {}}}\n", "1".repeat(STRETCH / 3));
        let text =
            format!("mosfets:\n{}", (0..9).map(|i| part.replace('a', &format!("a{i}"))).collect::<String>());
        let outline = guard(Path::new("x"), &text).expect("sound");
        let pieces: Vec<&str> = outline.stretches.iter().map(|s| &text[s.start..s.end]).collect();
        assert_eq!(pieces.len(), 3);
        assert_eq!(format!("mosfets:\n{}", pieces.concat()), text);
        assert_eq!(outline.stretches.iter().map(|s| s.line).collect::<Vec<_>>(), [2, 5, 8]);
    }

    #[test]
    fn parts_can_be_read_one_by_one() {
        let text = "# head\nmosfets:\n  a:\n    x: 1\n  # note\n  b: {x: 2}\ndiodes: {c: {x: 3}}\nempty:\n";
        let outline = guard(Path::new("x"), text).expect("sound");
        let seen: Vec<_> =
            outline.stretches.iter().map(|s| (s.line, s.kind.as_deref(), &text[s.start..s.end])).collect();
        assert_eq!(
            seen,
            [
                (3, Some("mosfets"), "  a:\n    x: 1\n  # note\n  b: {x: 2}\n"),
                (7, None, "diodes: {c: {x: 3}}\n"),
                (8, None, "empty:\n"),
            ]
        );
    }
}
