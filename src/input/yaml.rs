//! YAML text to [`Node`]; the only file that names `serde_yaml`.
//!
//! Texts come here after [`super::outline::guard`] has bounded their nesting and refused aliases, tags, merge keys
//! and doubled keys; what gets past it is refused here once more.

use std::collections::HashSet;
use std::fmt;

use serde::de::{Deserialize, Deserializer, Error, MapAccess, SeqAccess, Visitor};

use super::node::{Entries, Node};

/// Longest text that is read in one piece, in bytes; the parser needs some twenty times as much memory. Library
/// files are longer, but are read part by part.
pub(crate) const LONGEST: usize = 8 * 1024 * 1024;

/// Why a text is no YAML, with its place (line and column from 1; 0 when unknown).
#[derive(Clone, Debug, PartialEq, Eq)]
pub(crate) struct YamlFault {
    /// In the parser's words.
    pub(crate) reason: String,
    /// Line from 1.
    pub(crate) line: usize,
    /// Column from 1.
    pub(crate) column: usize,
}

/// Reads a YAML text.
///
/// # Errors
/// When the text is not YAML or has a key twice.
pub(crate) fn read(text: &str) -> Result<Node, YamlFault> {
    if text.len() > LONGEST {
        let reason = format!("more than {} MiB in one piece", LONGEST / (1024 * 1024));
        return Err(YamlFault { reason, line: 0, column: 0 });
    }
    serde_yaml::from_str(text).map_err(|error| {
        let (line, column) = error.location().map_or((0, 0), |place| (place.line(), place.column()));
        let reason = error.to_string();
        // the place is drawn, so it need not be said
        let reason = reason.split(" at line ").next().unwrap_or(&reason).to_string();
        YamlFault { reason, line, column }
    })
}

impl<'de> Deserialize<'de> for Node {
    fn deserialize<D: Deserializer<'de>>(deserializer: D) -> Result<Self, D::Error> {
        deserializer.deserialize_any(NodeVisitor)
    }
}

struct NodeVisitor;

impl<'de> Visitor<'de> for NodeVisitor {
    type Value = Node;

    fn expecting(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        f.write_str("a value, a list or a mapping")
    }

    fn visit_unit<E>(self) -> Result<Node, E> {
        Ok(Node::Null)
    }

    fn visit_bool<E>(self, value: bool) -> Result<Node, E> {
        Ok(Node::Bool(value))
    }

    fn visit_i64<E>(self, value: i64) -> Result<Node, E> {
        Ok(Node::Int(value))
    }

    fn visit_u64<E>(self, value: u64) -> Result<Node, E> {
        Ok(i64::try_from(value).map_or(Node::Float(value as f64), Node::Int))
    }

    fn visit_i128<E>(self, value: i128) -> Result<Node, E> {
        Ok(Node::Float(value as f64))
    }

    fn visit_u128<E>(self, value: u128) -> Result<Node, E> {
        Ok(Node::Float(value as f64))
    }

    fn visit_f64<E>(self, value: f64) -> Result<Node, E> {
        Ok(Node::Float(value))
    }

    fn visit_str<E>(self, value: &str) -> Result<Node, E> {
        Ok(Node::Text(value.into()))
    }

    fn visit_string<E>(self, value: String) -> Result<Node, E> {
        Ok(Node::Text(value.into()))
    }

    fn visit_seq<A: SeqAccess<'de>>(self, mut items: A) -> Result<Node, A::Error> {
        let mut list = Vec::new();
        while let Some(item) = items.next_element()? {
            list.push(item);
        }
        Ok(Node::List(list))
    }

    fn visit_map<A: MapAccess<'de>>(self, mut items: A) -> Result<Node, A::Error> {
        let mut entries: Entries = Vec::new();
        while let Some(entry) = items.next_entry()? {
            entries.push(entry);
        }
        match doubled(&entries) {
            Some(name) => Err(A::Error::custom(format!("the key `{name}` stands twice"))),
            None => Ok(Node::Map(entries)),
        }
    }
}

/// A key that stands twice.
fn doubled(entries: &Entries) -> Option<&str> {
    if entries.len() <= 32 {
        let earlier = |place: usize| entries[..place].iter().any(|(key, _)| *key == entries[place].0);
        return (1..entries.len()).find(|place| earlier(*place)).map(|place| &*entries[place].0);
    }
    let mut seen = HashSet::with_capacity(entries.len());
    entries.iter().map(|(key, _)| &**key).find(|key| !seen.insert(*key))
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn values_keep_their_kind_and_order() {
        let node = read("b: 6.8 mΩ\na: [1, 0.5, true, ~, '1']\n").expect("YAML");
        let list = vec![Node::Int(1), Node::Float(0.5), Node::Bool(true), Node::Null, Node::Text("1".into())];
        assert_eq!(
            node,
            Node::Map(vec![("b".into(), Node::Text("6.8 mΩ".into())), ("a".into(), Node::List(list))])
        );
    }

    #[test]
    fn doubled_keys_are_refused_in_small_and_large_mappings() {
        assert!(read("a: 1\na: 2\n").is_err_and(|fault| fault.reason.contains("`a` stands twice")));
        let large: String = (0..100).map(|i| format!("k{i}: 1\n")).collect();
        assert!(read(&large).is_ok());
        assert!(read(&(large + "k7: 2\n")).is_err_and(|fault| fault.reason.contains("k7")));
    }

    #[test]
    fn faults_know_their_place() {
        let fault = read("a: 1\n\tb: 2\n").expect_err("a tab");
        assert_eq!((fault.line, fault.column), (2, 1));
    }
}
