//! The best so far: the first places, and the combinations that nothing beats in both value and price.

/// A combination with its value, lower being better.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Standing {
    /// What is ranked by, its sign such that lower is better.
    pub value: f64,
    /// Place in the order of the shortlist; it decides between equal values.
    pub place: u64,
    /// Price, when every part has one.
    pub price: Option<f64>,
}

impl Standing {
    fn order(&self, other: &Standing) -> std::cmp::Ordering {
        self.value.total_cmp(&other.value).then(self.place.cmp(&other.place))
    }
}

/// The best combinations, best first, up to a number.
#[derive(Clone, Debug, Default)]
pub struct Tops {
    list: Vec<Standing>,
    most: usize,
}

impl Tops {
    /// An empty list for so many.
    pub fn of(most: usize) -> Tops {
        Tops { list: Vec::with_capacity(most.saturating_add(1).min(1024)), most }
    }

    /// The value above which nothing gets in any more.
    pub fn cut(&self) -> f64 {
        match self.list.last() {
            Some(last) if self.list.len() >= self.most => last.value,
            _ => f64::INFINITY,
        }
    }

    /// Takes a combination in, if it is good enough and not in the list.
    pub fn add(&mut self, standing: Standing) {
        if let Err(place) = self.list.binary_search_by(|known| known.order(&standing))
            && place < self.most
        {
            self.list.insert(place, standing);
            self.list.truncate(self.most);
        }
    }

    /// Takes in another list.
    pub fn merge(&mut self, other: &Tops) {
        other.list.iter().for_each(|standing| self.add(*standing));
    }

    /// Best first.
    pub fn list(&self) -> &[Standing] {
        &self.list
    }
}

/// Combinations that none beats in both value and price: cheapest first, so that values fall.
#[derive(Clone, Debug, Default)]
pub struct Front {
    list: Vec<(f64, Standing)>,
}

impl Front {
    /// The lowest value to be had for a price.
    pub fn cut(&self, price: f64) -> f64 {
        match self.list.partition_point(|(known, _)| *known <= price).checked_sub(1) {
            Some(last) => self.list.get(last).map_or(f64::INFINITY, |(_, standing)| standing.value),
            None => f64::INFINITY,
        }
    }

    /// Takes a combination in unless another beats or equals it in both; those that it beats go.
    pub fn add(&mut self, standing: Standing) {
        let Some(price) = standing.price else { return };
        let equal = |(known, other): &(f64, Standing)| *known == price && other.value == standing.value;
        if let Some(twin) = self.list.iter_mut().find(|known| equal(known)) {
            // equal in both: the first of the shortlist stands for all
            if standing.place < twin.1.place {
                twin.1 = standing;
            }
            return;
        }
        if self.cut(price) <= standing.value {
            return;
        }
        self.list.retain(|(known, other)| *known < price || other.value < standing.value);
        let place = self.list.partition_point(|(known, _)| *known < price);
        self.list.insert(place, (price, standing));
    }

    /// Takes in another front.
    pub fn merge(&mut self, other: &Front) {
        other.list.iter().for_each(|(_, standing)| self.add(*standing));
    }

    /// Cheapest first.
    pub fn list(&self) -> impl Iterator<Item = &Standing> {
        self.list.iter().map(|(_, standing)| standing)
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    fn standing(value: f64, price: f64, place: u64) -> Standing {
        Standing { value, place, price: Some(price) }
    }

    #[test]
    fn tops_keep_the_best_and_ties_in_order() {
        let mut tops = Tops::of(2);
        assert_eq!(tops.cut(), f64::INFINITY);
        for (value, place) in [(3.0, 0), (1.0, 5), (1.0, 4), (1.0, 5), (2.0, 1)] {
            tops.add(standing(value, 1.0, place));
        }
        assert_eq!(tops.list().iter().map(|s| s.place).collect::<Vec<_>>(), [4, 5]);
        assert_eq!(tops.cut(), 1.0);
    }

    #[test]
    fn the_front_keeps_what_nothing_beats() {
        let mut front = Front::default();
        for (value, price, place) in
            [(3.0, 1.0, 0), (2.0, 2.0, 1), (2.5, 2.0, 2), (1.0, 3.0, 3), (1.5, 1.5, 4)]
        {
            front.add(standing(value, price, place));
        }
        assert_eq!(front.list().map(|s| s.place).collect::<Vec<_>>(), [0, 4, 3]);
        assert_eq!(front.cut(2.0), 1.5);
        assert_eq!(front.cut(0.5), f64::INFINITY);
    }
}
