//! The order of the search: parts that do well on their own come first, so that the bound bites early.

use crate::candidate::Candidate;

use super::space::Space;

/// For each slot the places of its options, the one with the least loss at the headline first.
///
/// Slot by slot, each with the best parts found so far in the others. Only the time of a search depends on it, not its result.
pub fn order(space: &Space<'_>) -> Vec<Vec<usize>> {
    let mut best: Vec<usize> = vec![0; space.choices.len() + 1];
    let mut orders = Vec::new();
    for slot in 0..space.choices.len() {
        let loss = |option: usize| {
            let mut digits = best.clone();
            digits[slot] = option;
            let sheet = space.sheet(&digits);
            let candidate = Candidate::new(space.budget, &sheet);
            candidate.evaluate(candidate.headline()).map_or(f64::INFINITY, |solved| solved.loss())
        };
        let mut losses: Vec<(f64, usize)> =
            (0..space.choices[slot].options.len()).map(|option| (loss(option), option)).collect();
        losses.sort_by(|a, b| a.0.total_cmp(&b.0).then(a.1.cmp(&b.1)));
        let order: Vec<usize> = losses.into_iter().map(|(_, option)| option).collect();
        if let Some(first) = order.first() {
            best[slot] = *first;
        }
        orders.push(order);
    }
    orders
}
