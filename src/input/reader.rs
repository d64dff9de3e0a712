//! Fills any form from a mapping of a file: every key is read, every fault is noted, none stops the rest.

use super::datum;
use super::error::Blame;
use super::fields::Fields;
use super::inherit::hand_down;
use super::listed::listed;
use super::node::Node;
use super::notes::Notes;
use super::path::Trail;
use super::sample::{key_names, list_sample, sample};
use crate::hints::nearest;
use crate::sheet::datum::Datum;
use crate::sheet::form::{Choice, Form, FormList, Key, KeyVisitor, Need, OptionalForm};

/// Reads a nested mapping into a form; a source or conditions stated for all of it go to each of its quantities.
pub(crate) fn read_form(form: &mut dyn Form, node: &Node, trail: &Trail<'_>, notes: &mut Notes) {
    let Some(mut fields) = open(form, node, trail, notes) else { return };
    read_fields(form, &mut fields, notes);
    hand_down(form, &mut fields, notes);
    fields.close(|| key_names(form), notes);
}

fn open<'n, 't>(
    form: &mut dyn Form,
    node: &'n Node,
    trail: &'t Trail<'t>,
    notes: &mut Notes,
) -> Option<Fields<'n, 't>> {
    // the sample is worth its allocations only when something is wrong
    let sound = matches!(node, Node::Map(entries) if !entries.is_empty());
    let like = match trail.last_key() {
        _ if sound => String::new(),
        Some(key) => format!("`{key}: {}`", sample(form)),
        None => format!("`{}`", sample(form)),
    };
    Fields::open(node, trail, &like, notes)
}

/// Reads the keys of a form out of a mapping that may have other keys too.
pub(crate) fn read_fields(form: &mut dyn Form, fields: &mut Fields<'_, '_>, notes: &mut Notes) {
    form.keys(&mut Reader { fields, notes });
}

/// Reads a form that stands alone, then asks it whether its keys agree with one another.
pub(crate) fn read_checked(form: &mut dyn Form, node: &Node, trail: &Trail<'_>, notes: &mut Notes) {
    let before = notes.errors();
    let Some(mut fields) = Fields::open(node, trail, "its keys below its name, each with a value", notes)
    else {
        return;
    };
    read_fields(form, &mut fields, notes);
    fields.close(|| key_names(form), notes);
    // keys that could not be read are zero, and would be blamed for it
    if notes.errors() == before {
        notes.add_faults(form, trail);
    }
}

struct Reader<'r, 'n, 't> {
    fields: &'r mut Fields<'n, 't>,
    notes: &'r mut Notes,
}

impl<'n, 't> Reader<'_, 'n, 't> {
    fn take(&mut self, key: &'static Key) -> Option<&'n Node> {
        self.fields.take(key.name)
    }

    fn missing(&mut self, key: &'static Key, example: &str) {
        let hint = format!("add `{}: {example}` ({})", key.name, key.about);
        self.notes.missing(self.fields.trail, key.name, hint);
    }

    fn datum(&mut self, key: &'static Key, node: &Node) -> Option<Datum> {
        let trail = self.fields.trail.key(key.name);
        datum::read(node, key, &trail, self.notes)
    }

    fn wrong(&mut self, key: &'static Key, node: &Node, expected: &str, hint: String) {
        let reason = format!("{} stands here; {expected} is expected", node.words());
        self.notes.value_error(&self.fields.trail.key(key.name), node, Blame::new(reason, hint));
    }
}

impl KeyVisitor for Reader<'_, '_, '_> {
    fn required(&mut self, key: &'static Key, slot: &mut Datum) {
        match self.take(key) {
            Some(node) => {
                if let Some(datum) = self.datum(key, node) {
                    *slot = datum;
                }
            }
            None => self.missing(key, &datum::example(key)),
        }
    }

    fn optional(&mut self, key: &'static Key, slot: &mut Option<Datum>) {
        if let Some(node) = self.take(key) {
            *slot = self.datum(key, node);
        }
    }

    fn inline(&mut self, key: &'static Key, slot: &mut Datum) {
        if let Some(datum) = datum::from_fields(self.fields, key, self.notes) {
            *slot = datum;
        }
    }

    fn data(&mut self, key: &'static Key, need: Need, slot: &mut Vec<Datum>) {
        let Some(node) = self.take(key) else {
            if need == Need::Required {
                self.missing(key, &datum::example(key));
            }
            return;
        };
        let trail = self.fields.trail.key(key.name);
        let items = items(node, &trail, key, self.notes);
        slot.reserve_exact(items.len());
        for (place, item) in items {
            let trail = place.steps(&trail);
            slot.extend(datum::read(item, key, &trail, self.notes));
        }
    }

    fn flag(&mut self, key: &'static Key, slot: &mut Option<bool>) {
        match self.take(key) {
            Some(Node::Bool(flag)) => *slot = Some(*flag),
            Some(other) => self.wrong(key, other, "true or false", format!("write `{}: false`", key.name)),
            None => {}
        }
    }

    fn text(&mut self, key: &'static Key, slot: &mut Option<String>) {
        match self.take(key) {
            Some(node @ (Node::List(_) | Node::Map(_))) => {
                self.wrong(key, node, "text", "put a text with `: ` or brackets in quotes".to_string());
            }
            Some(node) => *slot = node.scalar().filter(|text| !text.is_empty()),
            None => {}
        }
    }

    fn form(&mut self, key: &'static Key, slot: &mut dyn Form) {
        match self.take(key) {
            Some(node) => read_form(slot, node, &self.fields.trail.key(key.name), self.notes),
            None => self.missing(key, &sample(slot)),
        }
    }

    fn optional_form(&mut self, key: &'static Key, slot: &mut dyn OptionalForm) {
        if let Some(node) = self.take(key) {
            read_form(slot.open(), node, &self.fields.trail.key(key.name), self.notes);
        }
    }

    fn forms(&mut self, key: &'static Key, need: Need, slot: &mut dyn FormList) {
        let Some(node) = self.take(key) else {
            if need == Need::Required {
                let example = list_sample(key, slot);
                self.missing(key, &example);
            }
            return;
        };
        let trail = self.fields.trail.key(key.name);
        let items = items(node, &trail, key, self.notes);
        slot.reserve(items.len());
        for (place, item) in items {
            let trail = place.steps(&trail);
            read_form(slot.push(), item, &trail, self.notes);
        }
    }

    fn choice(&mut self, key: &'static Key, need: Need, slot: &mut dyn Choice) {
        let words = slot.options().iter().map(|(word, _)| *word);
        let Some(node) = self.take(key) else {
            if need == Need::Required {
                let example = slot.options().first().map_or("", |(word, _)| word);
                self.missing(key, example);
            }
            return;
        };
        let trail = self.fields.trail.key(key.name);
        let (word, inside) = match node {
            Node::Text(word) => (&**word, None),
            Node::Map(entries) if entries.len() == 1 => (&*entries[0].0, Some(&entries[0].1)),
            other => {
                let hint = format!("write one of {}", listed(words));
                return self.wrong(key, other, "a word", hint);
            }
        };
        let Some(option) = slot.options().iter().position(|(known, _)| *known == word) else {
            let hint = match nearest(word, words.clone()) {
                Some(near) => format!("did you mean `{near}`?"),
                None => format!("write one of {}", listed(words)),
            };
            let blame = Blame::new(format!("`{word}` is not known here"), hint);
            return self.notes.value_error(&trail, node, blame);
        };
        match (slot.pick(option), inside) {
            (Some(form), Some(inside)) => read_form(form, inside, &trail.key(word), self.notes),
            (Some(form), None) => {
                let hint = format!("write `{}: {{{word}: {}}}`", key.name, sample(form));
                self.notes.value_error(&trail, node, Blame::new(format!("`{word}` needs its values"), hint));
            }
            (None, Some(_)) => {
                let hint = format!("write `{}: {word}`", key.name);
                self.notes.value_error(&trail, node, Blame::new(format!("`{word}` takes no values"), hint));
            }
            (None, None) => {}
        }
    }
}

/// A single value, or an item of a list.
#[derive(Clone, Copy)]
enum Place {
    Whole,
    Item(usize),
}

impl Place {
    fn steps<'a>(self, trail: &'a Trail<'a>) -> Trail<'a> {
        match self {
            Place::Whole => *trail,
            Place::Item(index) => trail.item(index),
        }
    }
}

/// Items of a list, or the value itself when it is no list.
fn items<'n>(node: &'n Node, trail: &Trail<'_>, key: &Key, notes: &mut Notes) -> Vec<(Place, &'n Node)> {
    let Node::List(list) = node else { return vec![(Place::Whole, node)] };
    if list.is_empty() {
        notes.value_error(trail, node, Blame::new("is an empty list", format!("add a point: {}", key.about)));
    }
    if let [Node::Int(whole), Node::Text(rest)] = list.as_slice()
        && rest.starts_with(|c: char| c.is_ascii_digit())
    {
        let hint = format!("decimals take a point: {whole}.{rest}");
        notes.value_error(trail, node, Blame::new("a comma made two values of one", hint));
        return Vec::new();
    }
    list.iter().enumerate().map(|(index, item)| (Place::Item(index), item)).collect()
}
