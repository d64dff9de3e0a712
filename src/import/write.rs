//! Parts as a library file.

use crate::input::node::Node;

/// A part with its name and keys, a key a line.
pub(crate) fn part(name: &str, node: &Node, text: &mut String) {
    text.push_str(&format!("  {}:\n", word(name)));
    if let Node::Map(entries) = node {
        for (key, value) in entries {
            text.push_str(&format!("    {key}: {}\n", flow(value)));
        }
    }
}

fn flow(node: &Node) -> String {
    match node {
        Node::Map(entries) => {
            let entries: Vec<String> =
                entries.iter().map(|(key, value)| format!("{key}: {}", flow(value))).collect();
            format!("{{{}}}", entries.join(", "))
        }
        Node::List(items) => {
            let items: Vec<String> = items.iter().map(flow).collect();
            format!("[{}]", items.join(", "))
        }
        Node::Text(text) => word(text),
        other => other.scalar().unwrap_or_default(),
    }
}

/// Text as it stands when nothing in it means anything to YAML, else in quotes.
fn word(text: &str) -> String {
    let harmless = |c: char| c.is_alphanumeric() || " .+-−_/%°Ω²³()@".contains(c);
    let is_other = text.parse::<f64>().is_ok()
        || matches!(
            text.to_ascii_lowercase().as_str(),
            "true" | "false" | "null" | "yes" | "no" | "on" | "off" | "y" | "n"
        );
    let first = text.chars().next().is_some_and(|c| c.is_alphanumeric() || c == '.');
    if first && !text.ends_with(' ') && text.chars().all(harmless) && !is_other {
        text.to_owned()
    } else {
        // a JSON string is a YAML string
        serde_json::Value::from(text).to_string()
    }
}
