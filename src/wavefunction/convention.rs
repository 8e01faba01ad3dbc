//! What a file's numbers mean: normalisation, order and sign of functions, found by trial.
//!
//! The conventions of dialects are data, in words of mathematics. Whichever makes the orbitals
//! orthonormal is taken; titles are not read. Not here: where the facts come from (`grammar-notes/conventions.md`).

use super::basis::{Basis, Primitives};
use super::cartesian::{self, Powers, squared_norm};
use super::overlap::overlap;
use super::product;
use crate::model::Molecule;
use ndarray::{Array2, ArrayView1, ArrayView2, Axis, parallel::prelude::*};
use std::fmt::Write as _;
use thiserror::Error;

/// Which norm the components of a Cartesian shell have in the file.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum CartesianNorm {
    /// Every component one: the published reading.
    Unit,
    /// All carry the constant of x^l, so that xy has 1/3 when xx has 1.
    OfAxis,
    /// (2i − 1)!!(2j − 1)!!(2k − 1)!!.
    DoubleFactorials,
    /// (2l − 1)!! for all.
    ShellFactor,
}

/// In which order a Cartesian shell's components stand in the file.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum CartesianOrder {
    /// As published to g; h and i lexicographic.
    Published,
    /// x², xy, xz, y², yz, z² and likewise for all degrees.
    Lexicographic,
    /// As published to g; h and i from z^l back to x^l.
    ReversedAboveG,
}

/// Which pure functions the file writes with the opposite sign.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum PureSigns {
    /// None.
    Plain,
    /// m = ±3 of f, m = ±3 and ±4 of g and h.
    ThirdAndFourth,
}

/// One reading of a file.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub struct Convention {
    /// Meaning of contraction coefficients.
    pub primitives: Primitives,
    /// Norm of Cartesian components.
    pub norm: CartesianNorm,
    /// Order of Cartesian components.
    pub order: CartesianOrder,
    /// Signs of pure components.
    pub signs: PureSigns,
}

/// Most likely first: on a tie the earlier one is taken.
const PRIMITIVES: [Primitives; 2] = [Primitives::Normalised, Primitives::Raw];
const NORMS: [CartesianNorm; 4] =
    [CartesianNorm::Unit, CartesianNorm::OfAxis, CartesianNorm::DoubleFactorials, CartesianNorm::ShellFactor];
const ORDERS: [CartesianOrder; 3] =
    [CartesianOrder::Published, CartesianOrder::Lexicographic, CartesianOrder::ReversedAboveG];
const SIGNS: [PureSigns; 2] = [PureSigns::Plain, PureSigns::ThirdAndFourth];

impl Convention {
    /// In words.
    #[must_use]
    pub fn describe(&self) -> String {
        let mut text = match self.primitives {
            Primitives::Normalised => "coefficients of normalised primitives",
            Primitives::Raw => "coefficients that contain the primitives' normalisation",
        }
        .to_owned();
        text.push_str(", contractions scaled to norm one");
        match self.norm {
            CartesianNorm::Unit => {}
            CartesianNorm::OfAxis => text.push_str("; Cartesian components all with the constant of x^l"),
            CartesianNorm::DoubleFactorials => {
                text.push_str("; Cartesian components of squared norm (2i-1)!!(2j-1)!!(2k-1)!!");
            }
            CartesianNorm::ShellFactor => text.push_str("; Cartesian components of squared norm (2l-1)!!"),
        }
        match self.order {
            CartesianOrder::Published => {}
            CartesianOrder::Lexicographic => text.push_str(", in lexicographic order"),
            CartesianOrder::ReversedAboveG => text.push_str(", h and i from z^l back to x^l"),
        }
        if self.signs == PureSigns::ThirdAndFourth {
            text.push_str("; pure components m = ±3 and ±4 with the opposite sign");
        }
        text
    }

    /// Where the canonical functions of one shell stand in the file, and what their coefficients are multiplied with.
    fn of_shell(self, l: usize, pure: bool) -> Vec<(usize, f64)> {
        if l < 2 {
            return (0..=2 * l).map(|k| (k, 1.0)).collect();
        }
        if pure {
            let sign = |k: usize| {
                let m = k.div_ceil(2);
                let flipped = self.signs == PureSigns::ThirdAndFourth && (m == 3 || m == 4);
                if flipped { -1.0 } else { 1.0 }
            };
            return (0..=2 * l).map(|k| (k, sign(k))).collect();
        }
        let factor = |powers: Powers| match self.norm {
            CartesianNorm::Unit => 1.0,
            CartesianNorm::OfAxis => (squared_norm(powers) / squared_norm([l, 0, 0])).sqrt(),
            CartesianNorm::DoubleFactorials => squared_norm(powers).sqrt(),
            CartesianNorm::ShellFactor => squared_norm([l, 0, 0]).sqrt(),
        };
        let in_file: Vec<Powers> = match self.order {
            CartesianOrder::Lexicographic => cartesian::lexicographic(l),
            CartesianOrder::ReversedAboveG if l > 4 => cartesian::lexicographic(l).into_iter().rev().collect(),
            CartesianOrder::Published | CartesianOrder::ReversedAboveG => cartesian::monomials(l),
        };
        cartesian::monomials(l)
            .into_iter()
            .map(|powers| (in_file.iter().position(|other| *other == powers).unwrap_or(0), factor(powers)))
            .collect()
    }

    /// For every canonical function its place in the file and the factor of its coefficient.
    fn components(self, basis: &Basis) -> Vec<(usize, f64)> {
        basis
            .shells()
            .iter()
            .flat_map(|shell| {
                self.of_shell(shell.l, shell.pure).into_iter().map(|(place, factor)| (shell.offset + place, factor))
            })
            .collect()
    }

    /// Readings that differ for a basis with these kinds of shells, most likely first.
    fn candidates(basis: &Basis) -> Vec<Self> {
        let shells = basis.shells();
        let top = |pure: bool| shells.iter().filter(|shell| shell.pure == pure).map(|shell| shell.l).max().unwrap_or(0);
        let (cartesian, pure) = (top(false), top(true));
        // One primitive alone is scaled to norm one however it is meant.
        let contracted = shells.iter().any(|shell| shell.exponents.len() > 1);
        let norms = if cartesian > 1 { &NORMS[..] } else { &NORMS[..1] };
        let orders = if cartesian > 4 {
            &ORDERS[..]
        } else if cartesian > 1 {
            &ORDERS[..2]
        } else {
            &ORDERS[..1]
        };
        let signs = if pure > 2 { &SIGNS[..] } else { &SIGNS[..1] };
        let primitives = if contracted { &PRIMITIVES[..] } else { &PRIMITIVES[..1] };
        let mut all = Vec::new();
        for &primitives in primitives {
            for &signs in signs {
                for &norm in norms {
                    all.extend(orders.iter().map(|&order| Self { primitives, norm, order, signs }));
                }
            }
        }
        all
    }
}

/// One reading tried.
#[derive(Debug, Clone, PartialEq)]
pub struct Trial {
    /// The reading.
    pub convention: Convention,
    /// Largest |CᵀSC − 1| over the sample of orbitals.
    pub residual: f64,
    /// Root of the mean square of CᵀSC − 1 over the sample: what readings are compared by.
    pub rms: f64,
}

/// A file whose convention is settled.
#[derive(Debug, Clone)]
pub struct Settled {
    /// Canonical functions.
    pub basis: Basis,
    /// Their overlap, n_functions × n_functions.
    pub overlap: Array2<f64>,
    /// S·C of each spin: n_orbitals × n_functions.
    pub products: Vec<Array2<f64>>,
    /// The reading taken.
    pub convention: Convention,
    /// Largest |CᵀSC − 1|, see [`settle`].
    pub residual: f64,
    /// The readings tried, in the order of likelihood; none after one that leaves nothing to be wished for.
    pub trials: Vec<Trial>,
}

impl Settled {
    /// Rows over canonical functions as the file would write them: the inverse of what [`settle`] did.
    #[must_use]
    pub fn to_file(&self, rows: ArrayView2<'_, f64>) -> Array2<f64> {
        let components = self.convention.components(&self.basis);
        let mut result = Array2::zeros(rows.dim());
        for (source, mut target) in rows.axis_iter(Axis(0)).zip(result.axis_iter_mut(Axis(0))) {
            for (value, &(place, factor)) in source.iter().zip(&components) {
                target[place] = value / factor;
            }
        }
        result
    }
}

/// No reading makes the orbitals orthonormal.
#[derive(Debug, Clone, PartialEq, Error)]
pub enum ConventionError {
    /// More orbitals than functions cannot be orthonormal.
    #[error(
        "{orbitals} orbitals over {functions} functions cannot be orthonormal: shells are missing from [GTO] (some engines drop h and higher ones)"
    )]
    TooManyOrbitals {
        /// Orbitals of one spin.
        orbitals: usize,
        /// Functions in the file.
        functions: usize,
    },
    /// Every trial failed.
    #[error("{}", failure(*limit, trials))]
    NoneFits {
        /// Largest residual accepted.
        limit: f64,
        /// What was tried.
        trials: Vec<Trial>,
    },
}

fn failure(limit: f64, trials: &[Trial]) -> String {
    let mut text = format!("no convention makes the orbitals orthonormal: |CᵀSC − 1| must be below {limit:e}, tried\n");
    for trial in trials {
        let _ = writeln!(text, "  {:9.2e}  {}", trial.residual, trial.convention.describe());
    }
    text.push_str(
        "a residual near 1 means missing functions or blocks cut short; 1e-2 to 1e-1 coefficients written with two or \
         three digits (ask the engine for more); about 0.5 a basis that is not the orbitals' own",
    );
    text
}

/// Orbitals in the sample on which readings are compared.
const SAMPLE: usize = 96;
/// Up to this many orbitals every pair is checked, beyond by norms and probes.
const ALL_PAIRS: usize = 512;
/// Readings whose root mean square is this near to the best one, or below this value, count as equal: the likelier is taken.
///
/// Readings that a file cannot tell apart (signs on a free atom) agree to rounding, so the margin is narrow: digits
/// cut off in the file make noise in every pair, and a wrong sign of an h function adds to it by a few per cent only.
const TIE_FACTOR: f64 = 1.01;
const TIE_FLOOR: f64 = 1e-10;

/// Tries the readings, takes the one with the smallest CᵀSC − 1, and rewrites the coefficients to canonical functions.
///
/// Smallest in the root mean square over all pairs: the largest entry alone is one pair's noise where the file has few
/// digits. The limit is on the largest entry.
///
/// Readings are compared on a sample of orbitals of both spins; the one taken is confirmed on all: every pair up to
/// 512 orbitals, beyond that every norm and (CᵀSC − 1)v for fixed vectors v of ±1.
///
/// # Errors
/// [`ConventionError`] when no residual is below `limit`; the coefficients may then be rewritten already.
pub fn settle(molecule: &mut Molecule, limit: f64) -> Result<Settled, ConventionError> {
    for set in &molecule.orbital_sets {
        if set.orbitals.len() > molecule.n_functions() {
            return Err(ConventionError::TooManyOrbitals {
                orbitals: set.orbitals.len(),
                functions: molecule.n_functions(),
            });
        }
    }
    let published = Basis::new(&molecule.atoms, &molecule.shells, Primitives::Normalised);
    let candidates = Convention::candidates(&published);
    let samples: Vec<Array2<f64>> = molecule.orbital_sets.iter().map(|set| sample(set.coefficients.view())).collect();
    let mut radial: Vec<(Primitives, Basis, Array2<f64>)> = Vec::new();
    let mut trials = Vec::with_capacity(candidates.len());
    for convention in candidates {
        if !radial.iter().any(|entry| entry.0 == convention.primitives) {
            let basis = Basis::new(&molecule.atoms, &molecule.shells, convention.primitives);
            let matrix = overlap(&basis);
            radial.push((convention.primitives, basis, matrix));
        }
        let Some((_, basis, matrix)) = radial.iter().find(|entry| entry.0 == convention.primitives) else { continue };
        let components = convention.components(basis);
        let (mut residual, mut squares, mut n_pairs) = (0.0, 0.0, 0);
        for sample in &samples {
            let canonical = canonical(sample.view(), &components);
            let deviation = deviation(canonical.view(), product(canonical.view(), matrix.view()).view());
            residual = worse(residual, largest(&deviation));
            squares += deviation.iter().map(|value| value * value).sum::<f64>();
            n_pairs += deviation.len();
        }
        let rms = (squares / n_pairs.max(1) as f64).sqrt();
        trials.push(Trial { convention, residual, rms });
        // A likelier reading wins every tie, and below the floor all is tie: nothing later can be taken.
        if rms <= TIE_FLOOR && residual <= limit {
            break;
        }
    }
    let best = trials.iter().map(|trial| trial.rms).fold(f64::INFINITY, f64::min);
    let tie = (TIE_FACTOR * best).max(TIE_FLOOR);
    let none_fits = |trials: Vec<Trial>| ConventionError::NoneFits { limit, trials };
    let fits = |trial: &Trial| trial.rms <= tie && trial.residual <= limit;
    let Some(chosen) = trials.iter().position(fits) else {
        return Err(none_fits(trials));
    };
    let convention = trials[chosen].convention;
    let Some(at) = radial.iter().position(|entry| entry.0 == convention.primitives) else {
        return Err(none_fits(trials));
    };
    let (_, basis, matrix) = radial.swap_remove(at);
    let components = convention.components(&basis);
    let mut products = Vec::new();
    let mut residual = 0.0;
    for set in &mut molecule.orbital_sets {
        make_canonical(&mut set.coefficients, &components);
        let sc = product(set.coefficients.view(), matrix.view());
        residual = worse(residual, confirm(set.coefficients.view(), sc.view()));
        products.push(sc);
    }
    // NaN is no fit either.
    if residual.is_nan() || residual > limit {
        trials[chosen].residual = residual;
        return Err(none_fits(trials));
    }
    Ok(Settled { basis, overlap: matrix, products, convention, residual, trials })
}

/// The larger of two residuals; NaN wins.
fn worse(a: f64, b: f64) -> f64 {
    if a.is_nan() || b.is_nan() { f64::NAN } else { a.max(b) }
}

/// Rows of coefficients of canonical functions from rows as the file gives them.
fn canonical(rows: ArrayView2<'_, f64>, components: &[(usize, f64)]) -> Array2<f64> {
    let mut result = Array2::zeros(rows.dim());
    for (source, mut target) in rows.axis_iter(Axis(0)).zip(result.axis_iter_mut(Axis(0))) {
        for (value, &(place, factor)) in target.iter_mut().zip(components) {
            *value = factor * source[place];
        }
    }
    result
}

/// As [`canonical`], in place: files are large, and most conventions change nothing.
fn make_canonical(rows: &mut Array2<f64>, components: &[(usize, f64)]) {
    if components.iter().enumerate().all(|(at, &(place, factor))| at == place && factor.to_bits() == 1.0_f64.to_bits())
    {
        return;
    }
    rows.axis_iter_mut(Axis(0)).into_par_iter().for_each_init(Vec::new, |before, mut row| {
        before.clear();
        before.extend(row.iter().copied());
        for (value, &(place, factor)) in row.iter_mut().zip(components) {
            *value = factor * before[place];
        }
    });
}

/// Evenly spread orbitals, the first and the last among them.
fn sample(rows: ArrayView2<'_, f64>) -> Array2<f64> {
    let n = rows.nrows();
    if n <= SAMPLE {
        return rows.to_owned();
    }
    let chosen: Vec<usize> = (0..SAMPLE).map(|k| k * (n - 1) / (SAMPLE - 1)).collect();
    rows.select(Axis(0), &chosen)
}

/// CᵀSC − 1 for all pairs.
fn deviation(coefficients: ArrayView2<'_, f64>, products: ArrayView2<'_, f64>) -> Array2<f64> {
    let mut gram = product(coefficients, products.t());
    gram.diag_mut().map_inplace(|value| *value -= 1.0);
    gram
}

fn largest(deviation: &Array2<f64>) -> f64 {
    deviation.iter().fold(0.0, |worst, value| worse(worst, value.abs()))
}

/// Largest deviation from orthonormality over all orbitals.
fn confirm(coefficients: ArrayView2<'_, f64>, products: ArrayView2<'_, f64>) -> f64 {
    let n = coefficients.nrows();
    if n <= ALL_PAIRS {
        return largest(&deviation(coefficients, products));
    }
    // Sums of SC by signs, block by block: fixed blocks, added in order.
    let blocks: Vec<(f64, Array2<f64>)> = coefficients
        .axis_chunks_iter(Axis(0), PROBED)
        .into_par_iter()
        .zip(products.axis_chunks_iter(Axis(0), PROBED).into_par_iter())
        .enumerate()
        .map(|(block, (coefficients, products))| {
            let mut sums = Array2::zeros((PROBES, products.ncols()));
            let mut worst = 0.0;
            for (step, (c, sc)) in coefficients.outer_iter().zip(products.outer_iter()).enumerate() {
                worst = worse(worst, (c.dot(&sc) - 1.0).abs());
                for (probe, mut sum) in sums.outer_iter_mut().enumerate() {
                    sum.scaled_add(sign(probe, block * PROBED + step), &sc);
                }
            }
            (worst, sums)
        })
        .collect();
    let worst = blocks.iter().fold(0.0, |worst, block| worse(worst, block.0));
    let sums = blocks.into_iter().map(|block| block.1).reduce(|sum, block| sum + block).unwrap_or_default();
    let images: Vec<f64> = coefficients
        .axis_iter(Axis(0))
        .into_par_iter()
        .enumerate()
        .map(|(row, c)| {
            let off = |(probe, sum): (usize, ArrayView1<'_, f64>)| (c.dot(&sum) - sign(probe, row)).abs();
            sums.outer_iter().enumerate().map(off).fold(0.0, worse)
        })
        .collect();
    images.into_iter().fold(worst, worse)
}

/// Vectors of signs that a large set of orbitals is probed with.
const PROBES: usize = 4;
/// Orbitals a thread probes at a time.
const PROBED: usize = 128;

/// One of two signs, the same in every run: the parity of a scrambled counter.
fn sign(probe: usize, row: usize) -> f64 {
    let mut state = ((probe as u64) << 48 ^ row as u64).wrapping_add(0x9E37_79B9_7F4A_7C15);
    // The finalising steps of "Fast splittable pseudorandom number generators", OOPSLA 2014, p. 453.
    state = (state ^ (state >> 30)).wrapping_mul(0xBF58_476D_1CE4_E5B9);
    state = (state ^ (state >> 27)).wrapping_mul(0x94D0_49BB_1331_11EB);
    if (state ^ (state >> 31)) & 1 == 0 { 1.0 } else { -1.0 }
}
