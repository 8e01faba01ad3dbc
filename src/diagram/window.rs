//! Which energies a diagram shows, and how many levels that leaves out.
//!
//! By default the frontier: valence levels without cores, and the lowest empty ones.

use super::level::{Column, Level};

/// Valence levels lie within this of the highest occupied one: the bonding 2s pair of O2 and F2 lies 31 eV below it in Hartree–Fock
/// orbital energies (our own fixtures), 1s of lithium hydride 59 eV (from memory).
const VALENCE_EV: f64 = 36.0;
/// Empty levels far above mean little in a basis of Gaussians.
const EMPTY_EV: f64 = 10.0;
/// Levels with electrons shown in a column, and empty ones.
const SHOWN: (usize, usize) = (14, 6);
/// Narrowest window.
const NARROWEST_EV: f64 = 1.0;

/// Energies from the lowest to the highest shown, eV, margins included; `None` without levels.
///
/// The window asked for is taken as it is.
#[must_use]
pub fn window(columns: &[Column], asked: Option<(f64, f64)>) -> Option<(f64, f64)> {
    if columns.iter().all(|column| column.levels.is_empty()) {
        return None;
    }
    if asked.is_some() {
        return asked;
    }
    let (mut low, mut high) = (f64::INFINITY, f64::NEG_INFINITY);
    for column in columns {
        for level in around_frontier(column) {
            low = low.min(level.energy_ev);
            high = high.max(level.energy_ev);
        }
    }
    let margin = 0.04 * (high - low);
    let short = (NARROWEST_EV - (high - low)).max(0.0) / 2.0;
    Some((low - margin - short, high + margin + short))
}

/// Levels of one column that the default window holds.
fn around_frontier(column: &Column) -> impl Iterator<Item = &Level> {
    let levels = &column.levels;
    let n_filled = match column.highest_occupied_ev() {
        Some(highest) => levels.partition_point(|level| level.energy_ev <= highest),
        None => 0,
    };
    let (filled, empty) = levels.split_at(n_filled);
    let highest = filled.last().map_or(f64::NEG_INFINITY, |level| level.energy_ev);
    let lowest_empty = empty.first().map_or(f64::INFINITY, |level| level.energy_ev);
    let below = filled.iter().rev().take(SHOWN.0).take_while(move |level| level.energy_ev > highest - VALENCE_EV);
    let above = empty.iter().take(SHOWN.1).take_while(move |level| level.energy_ev < lowest_empty + EMPTY_EV);
    below.chain(above)
}

/// Levels below and above the window.
#[must_use]
pub fn left_out(column: &Column, (low, high): (f64, f64)) -> (usize, usize) {
    let below = column.levels.iter().filter(|level| level.energy_ev < low).count();
    (below, column.levels.iter().filter(|level| level.energy_ev > high).count())
}
