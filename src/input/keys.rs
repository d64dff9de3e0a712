//! Keys of one mapping, for finding the same key twice.

use std::borrow::Cow;
use std::collections::HashMap;

use super::place::Spot;

/// Keys of a mapping with their places; hashed once there are many.
#[derive(Default)]
pub(crate) struct Keys<'t> {
    list: Vec<(Cow<'t, str>, Spot)>,
    hashed: HashMap<Cow<'t, str>, usize>,
}

impl<'t> Keys<'t> {
    /// Number of keys.
    pub(crate) fn len(&self) -> usize {
        self.list.len()
    }

    /// Adds a key; the place of an equal one, if there was one.
    pub(crate) fn add(&mut self, key: Cow<'t, str>, spot: Spot) -> Option<Spot> {
        let known = if self.list.len() < 32 {
            self.list.iter().position(|(earlier, _)| *earlier == key)
        } else {
            if self.hashed.is_empty() {
                self.hashed = self.list.iter().enumerate().map(|(i, (key, _))| (key.clone(), i)).collect();
            }
            self.hashed.get(&key).copied()
        };
        if let Some(known) = known {
            return self.list.get(known).map(|(_, spot)| *spot);
        }
        if !self.hashed.is_empty() {
            self.hashed.insert(key.clone(), self.list.len());
        }
        self.list.push((key, spot));
        None
    }
}
