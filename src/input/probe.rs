//! Values of a sheet by key path: what a shortlist filters by.

use crate::sheet::datum::Datum;
use crate::sheet::form::{Choice, Form, FormList, Key, KeyVisitor, Need, OptionalForm};

/// Looks a key path up in a form: `v_ds_max`, `saturation.i`, `r_ds_on`, `r_ds_on[0]`, `core.volume`.
///
/// A list without an index gives the values of all its items.
#[derive(Debug)]
pub(crate) struct Probe<'p> {
    path: &'p str,
    /// True to walk into mappings that are absent, for asking what a path would mean.
    open: bool,
    /// The key at the end of the path, once it is found.
    pub(crate) key: Option<&'static Key>,
    /// Values there, SI.
    pub(crate) values: Vec<f64>,
}

impl<'p> Probe<'p> {
    /// The key that a path names in a kind of form.
    pub(crate) fn key(form: &mut dyn Form, path: &'p str) -> Option<&'static Key> {
        let mut probe = Probe { path, open: true, key: None, values: Vec::new() };
        form.keys(&mut probe);
        probe.key
    }

    /// The values that a form has at a path.
    pub(crate) fn values(form: &mut dyn Form, path: &'p str) -> Vec<f64> {
        let mut probe = Probe { path, open: false, key: None, values: Vec::new() };
        form.keys(&mut probe);
        probe.values
    }

    /// What remains of the path behind a key: its index, if any, and the rest.
    fn behind(&self, key: &Key) -> Option<(Option<usize>, &'p str)> {
        let rest = self.path.strip_prefix(key.name)?;
        let (index, rest) = match rest.strip_prefix('[') {
            Some(indexed) => {
                let (index, rest) = indexed.split_once(']')?;
                (Some(index.parse().ok()?), rest)
            }
            None => (None, rest),
        };
        match rest.strip_prefix('.') {
            Some(inside) if !inside.is_empty() => Some((index, inside)),
            None if rest.is_empty() => Some((index, "")),
            _ => None,
        }
    }

    fn single(&mut self, key: &'static Key, datum: Option<&Datum>) {
        if self.behind(key) == Some((None, "")) {
            self.key = Some(key);
            self.values.extend(datum.map(|datum| datum.value));
        }
    }

    fn inside(&mut self, key: &'static Key, form: &mut dyn Form) {
        if let Some((None, rest)) = self.behind(key).filter(|(_, rest)| !rest.is_empty()) {
            self.walk(rest, form);
        }
    }

    fn walk(&mut self, rest: &'p str, form: &mut dyn Form) {
        let whole = std::mem::replace(&mut self.path, rest);
        form.keys(self);
        self.path = whole;
    }
}

impl KeyVisitor for Probe<'_> {
    fn required(&mut self, key: &'static Key, slot: &mut Datum) {
        self.single(key, Some(slot));
    }

    fn optional(&mut self, key: &'static Key, slot: &mut Option<Datum>) {
        self.single(key, slot.as_ref());
    }

    fn inline(&mut self, key: &'static Key, slot: &mut Datum) {
        if self.path == "typ" {
            self.key = Some(key);
            self.values.push(slot.value);
        }
    }

    fn data(&mut self, key: &'static Key, _: Need, slot: &mut Vec<Datum>) {
        let Some((index, "")) = self.behind(key) else { return };
        self.key = Some(key);
        let wanted = slot.iter().enumerate().filter(|(place, _)| index.is_none_or(|index| index == *place));
        self.values.extend(wanted.map(|(_, datum)| datum.value));
    }

    fn flag(&mut self, _: &'static Key, _: &mut Option<bool>) {}

    fn text(&mut self, _: &'static Key, _: &mut Option<String>) {}

    fn form(&mut self, key: &'static Key, slot: &mut dyn Form) {
        self.inside(key, slot);
    }

    fn optional_form(&mut self, key: &'static Key, slot: &mut dyn OptionalForm) {
        if self.open {
            self.inside(key, slot.open());
        } else if let Some(form) = slot.get() {
            self.inside(key, form);
        }
    }

    fn forms(&mut self, key: &'static Key, _: Need, slot: &mut dyn FormList) {
        let Some((index, rest)) = self.behind(key).filter(|(_, rest)| !rest.is_empty()) else { return };
        if self.open && slot.is_empty() {
            slot.push();
            self.walk_first(rest, slot);
            return;
        }
        for place in (0..slot.len()).filter(|place| index.is_none_or(|index| index == *place)) {
            if let Some(form) = slot.get(place) {
                self.walk(rest, form);
            }
        }
    }

    fn choice(&mut self, key: &'static Key, _: Need, slot: &mut dyn Choice) {
        if let Some(form) = slot.get() {
            self.inside(key, form);
        }
    }
}

impl<'p> Probe<'p> {
    fn walk_first(&mut self, rest: &'p str, slot: &mut dyn FormList) {
        if let Some(form) = slot.get(0) {
            self.walk(rest, form);
        }
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::sheet::{InductorSheet, MosfetSheet};

    #[test]
    fn paths_lead_to_keys_and_values() {
        let mut empty = InductorSheet::default();
        assert_eq!(Probe::key(&mut empty, "core.volume").map(|key| key.name), Some("volume"));
        assert_eq!(
            Probe::key(&mut InductorSheet::default(), "inductance_curve.i").map(|key| key.name),
            Some("i")
        );
        assert!(Probe::key(&mut InductorSheet::default(), "core").is_none());
        assert!(Probe::key(&mut InductorSheet::default(), "cores.volume").is_none());
        let mut mosfet =
            MosfetSheet { r_ds_on: vec![Datum::of(6.8e-3), Datum::of(5.2e-3)], ..MosfetSheet::default() };
        assert_eq!(Probe::values(&mut mosfet, "r_ds_on"), [6.8e-3, 5.2e-3]);
        assert_eq!(Probe::values(&mut mosfet, "r_ds_on[1]"), [5.2e-3]);
        assert!(Probe::values(&mut mosfet, "price").is_empty());
    }
}
