//! Key paths: where in a file a value stands, as a trail while reading and as a list of steps once it is kept.

use std::fmt;

/// One step from a mapping or list to what is inside it.
#[derive(Clone, Debug, PartialEq, Eq, Hash)]
pub(crate) enum Step {
    /// Into the value of a key.
    Key(Box<str>),
    /// Into an item of a list, from 0.
    Item(usize),
}

/// Steps from the top of a file: `mosfets.demo-n40-6m8.r_ds_on[0].typ`.
#[derive(Clone, Debug, Default, PartialEq, Eq, Hash)]
pub(crate) struct KeyPath(pub Vec<Step>);

impl KeyPath {
    /// The path extended by one inside a form: `core.material[2].density`. Form keys contain no dots or brackets.
    #[must_use]
    pub(crate) fn with(mut self, inside: &str) -> Self {
        for part in inside.split('.').filter(|part| !part.is_empty()) {
            let (name, items) = part.split_once('[').unwrap_or((part, ""));
            if !name.is_empty() {
                self.0.push(Step::Key(name.into()));
            }
            let indices = items.split('[').filter_map(|item| item.trim_end_matches(']').parse().ok());
            self.0.extend(indices.map(Step::Item));
        }
        self
    }

    /// Name of the step at a place, when it is a key.
    pub(crate) fn key(&self, place: usize) -> Option<&str> {
        match self.0.get(place) {
            Some(Step::Key(name)) => Some(name),
            _ => None,
        }
    }
}

/// Writes steps as they would be typed.
pub(crate) fn write_steps(f: &mut impl fmt::Write, steps: &[Step]) -> fmt::Result {
    for (place, step) in steps.iter().enumerate() {
        match step {
            Step::Key(name) if place == 0 => write!(f, "{name}")?,
            Step::Key(name) => write!(f, ".{name}")?,
            Step::Item(index) => write!(f, "[{index}]")?,
        }
    }
    Ok(())
}

impl fmt::Display for KeyPath {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        write_steps(f, &self.0)
    }
}

/// A key path under construction: a chain of steps on the stack, free until somebody needs it.
#[derive(Clone, Copy, Debug)]
pub(crate) struct Trail<'a> {
    parent: Option<&'a Trail<'a>>,
    step: TrailStep<'a>,
}

#[derive(Clone, Copy, Debug)]
enum TrailStep<'a> {
    Top,
    Key(&'a str),
    Item(usize),
}

impl<'a> Trail<'a> {
    /// Top of a file.
    pub(crate) const TOP: Trail<'static> = Trail { parent: None, step: TrailStep::Top };

    /// Into the value of a key.
    pub(crate) fn key(&'a self, name: &'a str) -> Trail<'a> {
        Trail { parent: Some(self), step: TrailStep::Key(name) }
    }

    /// Into an item of a list.
    pub(crate) fn item(&'a self, index: usize) -> Trail<'a> {
        Trail { parent: Some(self), step: TrailStep::Item(index) }
    }

    /// The key whose value this leads to; `None` for an item of a list.
    pub(crate) fn last_key(&self) -> Option<&'a str> {
        match self.step {
            TrailStep::Key(name) => Some(name),
            _ => None,
        }
    }

    /// The path to keep.
    pub(crate) fn path(&self) -> KeyPath {
        let mut steps = Vec::new();
        let mut here = Some(self);
        while let Some(trail) = here {
            match trail.step {
                TrailStep::Top => {}
                TrailStep::Key(name) => steps.push(Step::Key(name.into())),
                TrailStep::Item(index) => steps.push(Step::Item(index)),
            }
            here = trail.parent;
        }
        steps.reverse();
        KeyPath(steps)
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn trails_and_paths_print_alike() {
        let top = Trail::TOP;
        let (a, b) = (top.key("mosfets"), "demo.n40");
        let part = a.key(b);
        let list = part.key("r_ds_on");
        let item = list.item(2);
        assert_eq!(item.key("typ").path().to_string(), "mosfets.demo.n40.r_ds_on[2].typ");
        assert_eq!(part.path().with("r_ds_on[2].typ"), item.key("typ").path());
        assert_eq!(Trail::TOP.path().to_string(), "");
    }
}
