//! Labels on one line moved apart as little as can be: no two overlap, their order stays.
//!
//! Not here: what the labels say, leader lines.

/// Places for labels of height `pitch` wanted at `wanted`, within `low..=high`.
///
/// Minimises Σ(placeᵢ − wantedᵢ)² with placeᵢ₊₁ − placeᵢ ≥ `pitch`. With zᵢ = placeᵢ − i·pitch this is isotonic regression, solved by
/// pooling neighbours that are out of order; bounds then only clip the z.
///
/// # Shapes and units
/// `wanted` ascends; all lengths in one unit. When n labels do not fit, they start at `low` and pass `high`.
/// # Holds
/// Order and distance, always; labels that are far enough apart stay where they are.
/// # Source
/// Pool-adjacent-violators: "An empirical distribution function for sampling with incomplete information", Ann. Math. Stat. 26, 641
/// (1955); from memory.
#[must_use]
pub fn spread(wanted: &[f64], pitch: f64, low: f64, high: f64) -> Vec<f64> {
    let mut blocks: Vec<(f64, usize)> = Vec::new();
    for (at, place) in wanted.iter().enumerate() {
        let mut block = (place - at as f64 * pitch, 1);
        while let Some(&(mean, n)) = blocks.last().filter(|(mean, _)| *mean > block.0) {
            blocks.pop();
            block = ((mean * n as f64 + block.0 * block.1 as f64) / (n + block.1) as f64, n + block.1);
        }
        blocks.push(block);
    }
    let last = high - wanted.len().saturating_sub(1) as f64 * pitch;
    let pooled = blocks.into_iter().flat_map(|(mean, n)| std::iter::repeat_n(mean, n));
    pooled.enumerate().map(|(at, mean)| mean.min(last).max(low) + at as f64 * pitch).collect()
}

#[cfg(test)]
mod tests {
    use super::spread;
    use proptest::prelude::*;

    #[test]
    fn labels_far_apart_stay() {
        assert_eq!(spread(&[1.0, 4.0, 9.0], 2.0, 0.0, 10.0), [1.0, 4.0, 9.0]);
    }

    #[test]
    fn two_at_one_place_move_alike() {
        assert_eq!(spread(&[5.0, 5.0], 2.0, 0.0, 10.0), [4.0, 6.0]);
        assert_eq!(spread(&[0.0, 0.0], 2.0, 0.0, 10.0), [0.0, 2.0]);
        assert_eq!(spread(&[10.0, 10.0], 2.0, 0.0, 10.0), [8.0, 10.0]);
    }

    /// Sum of squares of the displacements.
    fn cost(places: &[f64], wanted: &[f64]) -> f64 {
        places.iter().zip(wanted).map(|(a, b)| (a - b).powi(2)).sum()
    }

    proptest! {
        #[test]
        fn none_overlap_and_no_allowed_step_is_better(mut wanted in prop::collection::vec(0.0..100.0_f64, 1..40)) {
            wanted.sort_by(f64::total_cmp);
            let (pitch, low, high) = (2.0, 0.0, 100.0);
            let places = spread(&wanted, pitch, low, high);
            prop_assert!(places.windows(2).all(|pair| pair[1] - pair[0] >= pitch - 1e-9));
            prop_assert!(places.iter().all(|place| (low - 1e-9..=high + 1e-9).contains(place)));
            // The problem is convex: where no block of neighbours gains by a small step, nothing does.
            for first in 0..places.len() {
                for last in first..places.len() {
                    for step in [-1e-4, 1e-4] {
                        let mut other = places.clone();
                        other[first..=last].iter_mut().for_each(|place| *place += step);
                        let allowed = other.windows(2).all(|pair| pair[1] - pair[0] >= pitch - 1e-9)
                            && other.iter().all(|place| (low..=high).contains(place));
                        prop_assert!(!allowed || cost(&other, &wanted) >= cost(&places, &wanted) - 1e-9);
                    }
                }
            }
        }
    }
}
