//! Slices: a share of the combinations for one machine of several.

use std::str::FromStr;

use super::space::Space;

/// Share `number` of `of`; number 1 of 1 is everything.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub struct Slice {
    /// From 1.
    pub number: u64,
    /// How many slices there are.
    pub of: u64,
}

impl Default for Slice {
    fn default() -> Self {
        Slice { number: 1, of: 1 }
    }
}

impl FromStr for Slice {
    type Err = String;

    fn from_str(text: &str) -> Result<Slice, String> {
        let (number, of) = text.split_once('/').ok_or("write it as K/N, for example 3/16")?;
        let read = |text: &str| {
            text.trim()
                .parse::<u64>()
                .map_err(|_| format!("`{text}` is no whole number; write K/N, for example 3/16"))
        };
        let slice = Slice { number: read(number)?, of: read(of)? };
        if slice.number == 0 || slice.number > slice.of {
            return Err(format!("slices are numbered from 1 to {}", slice.of));
        }
        Ok(slice)
    }
}

impl Slice {
    /// True for everything.
    pub fn is_whole(&self) -> bool {
        self.of == 1
    }

    /// Number of combinations in the slice: every `of`-th group of combinations with the same switches.
    pub fn len(&self, space: &Space<'_>) -> u64 {
        let (all, group) = (space.len(), space.group().max(1));
        let groups = all / group;
        (groups + self.of - self.number) / self.of * group
    }

    /// The place in the search of the combination at an index of the slice.
    pub fn index(&self, space: &Space<'_>, index: u64) -> u64 {
        let group = space.group().max(1);
        (index / group * self.of + self.number - 1) * group + index % group
    }
}
