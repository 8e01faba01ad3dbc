//! Bars of one column side by side where they would touch: which stand beside which, how wide they are, how tall their arrows.
//!
//! Not here: their labels (`diagram::spread`), their marks (`diagram::column`).

/// Widest bar, points.
pub const BAR: f64 = 15.0;
/// Shortest bar that is taken to keep levels side by side, points.
const SHORT_BAR: f64 = 8.5;
/// Between partners, relative to the bar.
const BETWEEN: f64 = 0.2;
/// Between neighbouring levels side by side, relative to the bar.
const BESIDE: f64 = 0.5;
/// Levels in one lane are at least this far apart, points; the first that fits is taken.
const DISTANCES: [f64; 6] = [9.6, 7.2, 5.4, 4.0, 2.6, 1.6];
/// Half the length of an arrow where there is room, points.
const ARROW: f64 = 4.6;

/// One level to be placed.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Wanted {
    /// Height on paper.
    pub place: f64,
    /// Number of bars.
    pub partners: usize,
}

/// Where the bars of a level stand.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Placed {
    /// Left end of the first bar, from the middle of the column.
    pub left: f64,
    /// Length of a bar.
    pub bar: f64,
    /// From one bar's left end to the next.
    pub step: f64,
    /// Right end of the last bar.
    pub right: f64,
    /// Half the length of its arrows.
    pub arrow: f64,
}

/// Places the bars of levels within `width`, centred on 0.
///
/// Levels farther apart than a bar and its arrows need stand one above the other. Others share the line in lanes, taken in
/// turn; where even touching bars do not fit, bars get shorter, never fewer.
///
/// # Shapes and units
/// `levels` in order of `place`, points.
#[must_use]
pub fn pack(levels: &[Wanted], width: f64) -> Vec<Placed> {
    let mut clusters = Vec::new();
    let mut rest = levels;
    while !rest.is_empty() {
        let apart = |pair: &[Wanted]| pair[1].place - pair[0].place >= DISTANCES[0];
        let n = rest.windows(2).position(apart).map_or(rest.len(), |at| at + 1);
        let (cluster, others) = rest.split_at(n);
        clusters.push(Cluster::new(cluster, width));
        rest = others;
    }
    // One length for all bars, but where that would make all of them too short.
    let longest = |cluster: &Cluster<'_>| BAR.min(width / cluster.total);
    let common = clusters.iter().map(longest).fold(BAR, f64::min).max(SHORT_BAR);
    let placed: Vec<Placed> = clusters.iter().flat_map(|cluster| cluster.place(common.min(longest(cluster)))).collect();
    // Arrows end half-way to the next bar that stands above or below.
    let room = |at: usize| {
        let overlap = |other: &usize| {
            let (a, b): (&Placed, &Placed) = (&placed[at], &placed[*other]);
            *other != at && a.left < b.right && b.left < a.right
        };
        let distance = |other: usize| (levels[other].place - levels[at].place).abs();
        (0..levels.len()).filter(overlap).map(distance).fold(f64::INFINITY, f64::min)
    };
    let arrows: Vec<f64> = (0..levels.len()).map(|at| ARROW.min(0.46 * room(at))).collect();
    placed.iter().zip(arrows).map(|(placed, arrow)| Placed { arrow, ..*placed }).collect()
}

/// Length of a row of bars of length one.
fn row(partners: usize) -> f64 {
    partners as f64 + partners.saturating_sub(1) as f64 * BETWEEN
}

/// Levels that share a line: the lane of each, the longest row of each lane, the length of all with bars of length one.
struct Cluster<'a> {
    levels: &'a [Wanted],
    lane_of: Vec<usize>,
    rows: Vec<f64>,
    total: f64,
}

impl<'a> Cluster<'a> {
    fn new(levels: &'a [Wanted], width: f64) -> Self {
        let with = |distance: f64| {
            let (lane_of, rows) = lanes(levels, distance);
            let total = rows.iter().sum::<f64>() + rows.len().saturating_sub(1) as f64 * BESIDE;
            Self { levels, lane_of, rows, total }
        };
        let fits = DISTANCES.into_iter().map(with).find(|cluster| cluster.total * SHORT_BAR <= width);
        fits.unwrap_or_else(|| with(DISTANCES[DISTANCES.len() - 1]))
    }

    fn place(&self, bar: f64) -> impl Iterator<Item = Placed> {
        let start =
            move |lane: usize| -self.total / 2.0 + self.rows[..lane].iter().map(|row| row + BESIDE).sum::<f64>();
        self.levels.iter().zip(&self.lane_of).map(move |(level, &lane)| {
            let left = (start(lane) + (self.rows[lane] - row(level.partners)) / 2.0) * bar;
            Placed { left, bar, step: bar * (1.0 + BETWEEN), right: left + row(level.partners) * bar, arrow: 0.0 }
        })
    }
}

/// The first lane with room for each level; the longest row of each lane.
fn lanes(levels: &[Wanted], distance: f64) -> (Vec<usize>, Vec<f64>) {
    let mut ends: Vec<f64> = Vec::new();
    let mut rows: Vec<f64> = Vec::new();
    let mut lane_of = Vec::with_capacity(levels.len());
    for level in levels {
        let lane = ends.iter().position(|end| level.place - end >= distance).unwrap_or(ends.len());
        if lane == ends.len() {
            ends.push(level.place);
            rows.push(0.0);
        }
        ends[lane] = level.place;
        rows[lane] = f64::max(rows[lane], row(level.partners));
        lane_of.push(lane);
    }
    (lane_of, rows)
}

#[cfg(test)]
mod tests {
    use super::{BAR, Wanted, pack};
    use proptest::prelude::*;

    fn wanted(place: f64, partners: usize) -> Wanted {
        Wanted { place, partners }
    }

    #[test]
    fn far_levels_are_centred_with_full_bars() {
        let placed = pack(&[wanted(0.0, 1), wanted(30.0, 3)], 100.0);
        assert_eq!((placed[0].left, placed[0].right), (-BAR / 2.0, BAR / 2.0));
        assert!((placed[1].left + placed[1].right).abs() < 1e-9 && (placed[1].bar - BAR).abs() < 1e-12);
    }

    proptest! {
        #[test]
        fn no_bars_lie_on_each_other(mut places in prop::collection::vec(0.0..60.0_f64, 1..30), partners in 1_usize..6) {
            places.sort_by(f64::total_cmp);
            let levels: Vec<Wanted> = places.iter().map(|place| wanted(*place, partners)).collect();
            let placed = pack(&levels, 120.0);
            for (a, at) in placed.iter().zip(&levels) {
                prop_assert!(a.left >= -60.0 - 1e-9 && a.right <= 60.0 + 1e-9);
                for (b, other) in placed.iter().zip(&levels) {
                    let beside = a.right <= b.left + 1e-9 || b.right <= a.left + 1e-9;
                    prop_assert!(at == other || beside || (at.place - other.place).abs() >= 1.6 - 1e-9);
                }
            }
        }
    }
}
