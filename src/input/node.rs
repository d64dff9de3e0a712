//! What a YAML text says, before anybody knows what it means.

/// A value of a file. Keys keep their order; no key stands twice.
#[derive(Clone, Debug, PartialEq)]
pub(crate) enum Node {
    /// Nothing, `~` or `null`.
    Null,
    /// true or false.
    Bool(bool),
    /// A whole number.
    Int(i64),
    /// Any other number; also NaN and the infinities, which the readers refuse.
    Float(f64),
    /// Text.
    Text(Box<str>),
    /// A list.
    List(Vec<Node>),
    /// A mapping.
    Map(Entries),
}

/// Keys and values of a mapping in the order written.
pub(crate) type Entries = Vec<(Box<str>, Node)>;

impl Node {
    /// The value of a key of a mapping.
    pub(crate) fn get(&self, name: &str) -> Option<&Node> {
        match self {
            Node::Map(entries) => entries.iter().find(|(key, _)| &**key == name).map(|(_, value)| value),
            _ => None,
        }
    }

    /// What it is, for messages: "a list".
    pub(crate) fn words(&self) -> &'static str {
        match self {
            Node::Null => "nothing",
            Node::Bool(_) => "true or false",
            Node::Int(_) | Node::Float(_) => "a plain number",
            Node::Text(_) => "text",
            Node::List(_) => "a list",
            Node::Map(_) => "a mapping",
        }
    }

    /// Text of a single value, as it would be written; `None` for lists and mappings.
    pub(crate) fn scalar(&self) -> Option<String> {
        match self {
            Node::Null => Some(String::new()),
            Node::Bool(flag) => Some(flag.to_string()),
            Node::Int(number) => Some(number.to_string()),
            Node::Float(number) => Some(number.to_string()),
            Node::Text(text) => Some(text.to_string()),
            Node::List(_) | Node::Map(_) => None,
        }
    }
}
