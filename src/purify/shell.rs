//! Orbitals of one spin and occupation: which symmetry-adapted ones stand for them.
//!
//! A *seed* is the first partner of a set; the others follow from it by transfer. A *loose* orbital is pure in its irrep but
//! has no partners beside it. Not here: eigenproblems (`purify::linear`), what an operation does (`purify::projector`).

use super::PurifyError;
use super::linear::{eigen, orthonormalised};
use super::projector::Projector;
use crate::labelling::SpinLabels;
use crate::model::OrbitalSet;
use crate::wavefunction::product;
use ndarray::{Array1, Array2, Axis};
use std::collections::BTreeMap;

/// Least norm² that projection and orthogonalisation may leave of an orbital.
const LEFT: f64 = 1e-4;
/// A set is complete within a space when at least this much of its first partner lies in it.
const COMPLETE: f64 = 0.99;

/// A set whose orbitals miss their irrep by less is pure.
const PURE: f64 = 1e-6;
/// Orbitals within this energy may be mixed at will, hartree.
const ONE_ENERGY: f64 = 1e-3;

/// How much of a direction lies in its irrep, the irrep, and that part.
type Direction = (f64, usize, Array1<f64>);

/// Orbitals with more electrons, already adapted.
#[derive(Default)]
pub struct Above {
    /// First partners by irrep.
    seeds: BTreeMap<usize, Vec<Array1<f64>>>,
    /// Loose orbitals by irrep.
    loose: BTreeMap<usize, Vec<Array1<f64>>>,
}

/// The orbitals to be adapted.
pub struct Shell<'a> {
    /// Operations.
    pub projector: &'a Projector<'a>,
    /// Of the canonical functions.
    pub overlap: &'a Array2<f64>,
    /// Labels of all orbitals of the spin.
    pub labels: &'a SpinLabels,
    /// All orbitals of the spin.
    pub set: &'a OrbitalSet,
    /// Those of this occupation, ascending.
    pub orbitals: &'a [usize],
}

/// Adapted orbitals with their places.
#[derive(Default)]
pub struct Adapted {
    /// Place and coefficients.
    pub rows: Vec<(usize, Array1<f64>)>,
    /// Place and energy.
    pub energies: Vec<(usize, Option<f64>)>,
    /// Places that were exchanged among themselves.
    pub groups: Vec<Vec<usize>>,
    /// Sets with aligned partners.
    pub aligned_sets: usize,
    /// Orbitals of degenerate irreps without.
    pub loose: usize,
}

/// The first partner of a set, or a loose orbital, with the places that it and its partners take.
struct Candidate {
    row: Array1<f64>,
    places: Vec<usize>,
    energy: Option<f64>,
}

#[derive(Default)]
struct Found {
    seeds: BTreeMap<usize, Vec<Candidate>>,
    loose: BTreeMap<usize, Vec<Candidate>>,
}

impl Shell<'_> {
    /// Adapts the orbitals and adds them to those `above` the next ones.
    pub fn adapted(&self, above: &mut Above) -> Result<Adapted, PurifyError> {
        let mut found = Found::default();
        let mut adapted = Adapted::default();
        let mut rest: Vec<usize> = Vec::new();
        for set in &self.labels.sets {
            let here: Vec<usize> =
                set.orbitals.iter().copied().filter(|orbital| self.orbitals.binary_search(orbital).is_ok()).collect();
            match set.irrep {
                Some(irrep)
                    if here.len() == set.degeneracy && here.len() == set.orbitals.len() && self.stands_alone(&here) =>
                {
                    adapted.groups.push(here.clone());
                    self.of_set(irrep, &here, &mut found)?;
                }
                _ => rest.extend(here),
            }
        }
        // What is mixed at one energy comes apart there; only what does not is mixed with all the rest.
        let mut left = Vec::new();
        for cluster in self.at_one_energy(rest) {
            let directions = self.directions(&cluster)?;
            if directions.len() == cluster.len() && directions.iter().all(|entry| entry.0 > COMPLETE) {
                self.of_directions(&cluster, directions, &mut found)?;
                adapted.groups.push(cluster);
            } else {
                left.extend(cluster);
            }
        }
        left.sort_unstable();
        if !left.is_empty() {
            let directions = self.directions(&left)?;
            if directions.len() < left.len() {
                return Err(self.dependent(0.0));
            }
            self.of_directions(&left, directions, &mut found)?;
            adapted.groups.push(left);
        }
        for irrep in 0..self.projector.group.irreps().len() {
            self.place(irrep, &mut found, above, &mut adapted)?;
        }
        Ok(adapted)
    }

    fn row(&self, orbital: usize) -> ndarray::ArrayView1<'_, f64> {
        self.set.coefficients.row(orbital)
    }

    fn mean_energy(&self, orbitals: &[usize]) -> Option<f64> {
        let energies: Option<Vec<f64>> = orbitals.iter().map(|&i| self.set.orbitals[i].energy).collect();
        energies.map(|energies| energies.iter().sum::<f64>() / energies.len() as f64)
    }

    /// The first partner in the span of a complete set; of partners that no operation tells apart, each by itself.
    fn of_set(&self, irrep: usize, orbitals: &[usize], found: &mut Found) -> Result<(), PurifyError> {
        let energy = self.mean_energy(orbitals);
        let images: Vec<Array2<f64>> = orbitals.iter().map(|&i| self.projector.images(self.row(i))).collect();
        if !self.projector.has_partners(irrep) {
            let candidates = images.iter().zip(orbitals).map(|(images, &place)| Candidate {
                row: self.projector.onto_irrep(irrep, images),
                places: vec![place],
                energy,
            });
            found.loose.entry(irrep).or_default().extend(candidates);
            return Ok(());
        }
        let parts = stacked(images.iter().map(|images| self.projector.transfer(irrep, 0, 0, images)), self.width());
        let members = self.set.coefficients.select(Axis(0), orbitals);
        let (_, vectors) = eigen(&self.between(&members, &parts))?;
        let row = vectors.column(orbitals.len() - 1).dot(&parts);
        found.seeds.entry(irrep).or_default().push(Candidate { row, places: orbitals.to_vec(), energy });
        Ok(())
    }

    fn width(&self) -> usize {
        self.set.coefficients.ncols()
    }

    /// Overlaps of rows.
    fn between(&self, bras: &Array2<f64>, kets: &Array2<f64>) -> Array2<f64> {
        product(product(bras.view(), self.overlap.view()).view(), kets.t())
    }

    /// Whether a set is pure, or impure with no other impure orbital at its energy to come apart from.
    fn stands_alone(&self, orbitals: &[usize]) -> bool {
        let impure = |&i: &usize| self.labels.orbitals[i].purity < 1.0 - PURE;
        let energy = |i: usize| self.set.orbitals[i].energy;
        let beside = |&other: &usize| {
            let near =
                |&i: &usize| matches!((energy(i), energy(other)), (Some(a), Some(b)) if (a - b).abs() <= ONE_ENERGY);
            !orbitals.contains(&other) && impure(&other) && orbitals.iter().any(near)
        };
        !orbitals.iter().any(impure) || !self.orbitals.iter().any(beside)
    }

    /// Orbitals in runs of nearly one energy; all of them together where energies are missing.
    fn at_one_energy(&self, mut orbitals: Vec<usize>) -> Vec<Vec<usize>> {
        let energy = |i: usize| self.set.orbitals[i].energy.unwrap_or(0.0);
        orbitals.sort_by(|&a, &b| energy(a).total_cmp(&energy(b)).then(a.cmp(&b)));
        let mut clusters: Vec<Vec<usize>> =
            orbitals.chunk_by(|&a, &b| energy(b) - energy(a) <= ONE_ENERGY).map(<[usize]>::to_vec).collect();
        for cluster in &mut clusters {
            cluster.sort_unstable();
        }
        clusters
    }

    /// The directions in the span of some orbitals that lie most within single irreps, with how much of them does: as many
    /// as there are orbitals, fewer where projection leaves nothing more.
    fn directions(&self, rest: &[usize]) -> Result<Vec<Direction>, PurifyError> {
        let members = self.set.coefficients.select(Axis(0), rest);
        let images: Vec<Array2<f64>> = rest.iter().map(|&i| self.projector.images(self.row(i))).collect();
        let mut directions: Vec<Direction> = Vec::new();
        for irrep in 0..self.projector.group.irreps().len() {
            let parts = stacked(images.iter().map(|images| self.projector.onto_irrep(irrep, images)), self.width());
            let (values, vectors) = eigen(&self.between(&members, &parts))?;
            for (value, vector) in values.iter().zip(vectors.columns()).filter(|(value, _)| **value > LEFT) {
                directions.push((*value, irrep, vector.dot(&parts)));
            }
        }
        // Values are compared to nine digits, so that rounding does not decide between irreps.
        directions.sort_by(|a, b| (b.0 * 1e9).round().total_cmp(&(a.0 * 1e9).round()).then(a.1.cmp(&b.1)));
        directions.truncate(rest.len());
        Ok(directions)
    }

    /// Pure orbitals in the places of `rest`, in order of energy.
    fn of_directions(&self, rest: &[usize], directions: Vec<Direction>, found: &mut Found) -> Result<(), PurifyError> {
        let members = self.set.coefficients.select(Axis(0), rest);
        let mut items: Vec<(usize, bool, Array1<f64>, Option<f64>)> = Vec::new();
        for irrep in 0..self.projector.group.irreps().len() {
            let rows: Vec<Array1<f64>> =
                directions.iter().filter(|entry| entry.1 == irrep).map(|entry| entry.2.clone()).collect();
            let (seeds, loose) = self.parted(irrep, stacked(rows.into_iter(), self.width()))?;
            for (of_seeds, rows) in [(true, seeds), (false, loose)] {
                let (rows, energies) = self.by_energy(rows, rest, &members)?;
                let entries =
                    rows.outer_iter().zip(energies).map(|(row, energy)| (irrep, of_seeds, row.to_owned(), energy));
                items.extend(entries);
            }
        }
        items.sort_by(|a, b| a.3.unwrap_or(0.0).total_cmp(&b.3.unwrap_or(0.0)));
        let mut places = rest.iter().copied();
        for (irrep, is_seed, row, energy) in items {
            let count = if is_seed { self.projector.dimension(irrep) } else { 1 };
            let places: Vec<usize> = places.by_ref().take(count).collect();
            let into = if is_seed { &mut found.seeds } else { &mut found.loose };
            into.entry(irrep).or_default().push(Candidate { row, places, energy });
        }
        Ok(())
    }

    /// First partners of the sets that lie wholly in the span of these rows of one irrep, and what is left of the span.
    fn parted(&self, irrep: usize, rows: Array2<f64>) -> Result<(Array2<f64>, Array2<f64>), PurifyError> {
        let none = Array2::zeros((0, self.width()));
        if rows.nrows() == 0 {
            return Ok((none.clone(), none));
        }
        let (rows, weight) = orthonormalised(&rows, self.overlap, LEFT)?;
        if weight <= LEFT {
            return Err(self.dependent(weight));
        }
        if !self.projector.has_partners(irrep) {
            return Ok((none, rows));
        }
        let images: Vec<Array2<f64>> = rows.outer_iter().map(|row| self.projector.images(row)).collect();
        let parts = stacked(images.iter().map(|images| self.projector.transfer(irrep, 0, 0, images)), self.width());
        let (values, vectors) = eigen(&self.between(&rows, &parts))?;
        let dimension = self.projector.dimension(irrep);
        let complete: Vec<usize> = (0..values.len()).filter(|&k| values[k] > COMPLETE).collect();
        // In a span that is not invariant rounding must not make more sets than there is room for.
        let complete = &complete[complete.len() - complete.len().min(rows.nrows() / dimension)..];
        let seeds = stacked(complete.iter().map(|&k| vectors.column(k).dot(&parts)), self.width());
        let n_left = rows.nrows() - dimension * seeds.nrows();
        if n_left == 0 {
            return Ok((seeds, none));
        }
        let (seeds, _) = orthonormalised(&seeds, self.overlap, LEFT)?;
        let partners = self.all_partners(irrep, &seeds);
        let rest = self.without(&rows, &partners);
        let (_, vectors) = eigen(&self.between(&rest, &rest))?;
        let first = rows.nrows() - n_left;
        let left = stacked((first..rows.nrows()).map(|k| vectors.column(k).dot(&rest)), self.width());
        let (left, _) = orthonormalised(&left, self.overlap, LEFT)?;
        Ok((seeds, left))
    }

    /// Rows that diagonalise Σ|old⟩E⟨old| in their span, from low to high, with its values; as they are without energies.
    fn by_energy(
        &self,
        rows: Array2<f64>,
        rest: &[usize],
        members: &Array2<f64>,
    ) -> Result<(Array2<f64>, Vec<Option<f64>>), PurifyError> {
        let energies: Option<Vec<f64>> = rest.iter().map(|&i| self.set.orbitals[i].energy).collect();
        let Some(energies) = energies.filter(|_| rows.nrows() > 0) else {
            let n = rows.nrows();
            return Ok((rows, vec![None; n]));
        };
        let (rows, _) = orthonormalised(&rows, self.overlap, LEFT)?;
        let overlaps = self.between(&rows, members);
        let weighted = Array2::from_shape_fn(overlaps.dim(), |(i, j)| overlaps[(i, j)] * energies[j]);
        let (values, vectors) = eigen(&product(weighted.view(), overlaps.t()))?;
        Ok((product(vectors.t(), rows.view()), values.iter().copied().map(Some).collect()))
    }

    /// Every partner of every seed.
    fn all_partners(&self, irrep: usize, seeds: &Array2<f64>) -> Array2<f64> {
        let mut partners = Vec::new();
        for seed in seeds.outer_iter() {
            let images = self.projector.images(seed);
            partners
                .extend((0..self.projector.dimension(irrep)).map(|k| self.projector.transfer(irrep, k, 0, &images)));
        }
        stacked(partners.into_iter(), self.width())
    }

    /// Rows less their parts along orthonormal ones.
    fn without(&self, rows: &Array2<f64>, others: &Array2<f64>) -> Array2<f64> {
        if others.nrows() == 0 || rows.nrows() == 0 {
            return rows.clone();
        }
        rows - &product(self.between(rows, others).view(), others.view())
    }

    /// Makes the candidates of one irrep orthonormal among themselves and to those above, and gives them their places.
    fn place(
        &self,
        irrep: usize,
        found: &mut Found,
        above: &mut Above,
        adapted: &mut Adapted,
    ) -> Result<(), PurifyError> {
        let seeds = found.seeds.remove(&irrep).unwrap_or_default();
        let loose = found.loose.remove(&irrep).unwrap_or_default();
        if seeds.is_empty() && loose.is_empty() {
            return Ok(());
        }
        let dimension = self.projector.dimension(irrep);
        let higher_seeds = stacked(above.seeds.get(&irrep).into_iter().flatten().cloned(), self.width());
        let higher_loose = stacked(above.loose.get(&irrep).into_iter().flatten().cloned(), self.width());
        // What a loose orbital above takes from the first partners: its own first partner, whichever component it is.
        let mut barred = higher_seeds.clone();
        if self.projector.has_partners(irrep) && !seeds.is_empty() {
            for row in higher_loose.outer_iter() {
                let images = self.projector.images(row);
                let first =
                    stacked((0..dimension).map(|k| self.projector.transfer(irrep, 0, k, &images)), self.width());
                barred = self.extended(barred, &first)?;
            }
        }
        let rows = self.without(&stacked(seeds.iter().map(|seed| seed.row.clone()), self.width()), &barred);
        let (firsts, weight) = orthonormalised(&rows, self.overlap, LEFT)?;
        if weight <= LEFT {
            return Err(self.dependent(weight));
        }
        let images: Vec<Array2<f64>> = firsts.outer_iter().map(|row| self.projector.images(row)).collect();
        let mut all = firsts.clone();
        for partner in 0..dimension {
            let rows =
                stacked(images.iter().map(|images| self.projector.transfer(irrep, partner, 0, images)), self.width());
            // On nuclei a hair off the overlaps of one partner's orbitals are not quite those of another's.
            let (rows, _) = orthonormalised(&rows, self.overlap, LEFT)?;
            for (seed, row) in seeds.iter().zip(rows.outer_iter()) {
                adapted.rows.push((seed.places[partner], row.to_owned()));
                adapted.energies.push((seed.places[partner], seed.energy));
            }
            if partner > 0 {
                all.append(Axis(0), rows.view()).map_err(|_| self.dependent(0.0))?;
            }
        }
        adapted.aligned_sets += seeds.len();
        above.seeds.entry(irrep).or_default().extend(firsts.outer_iter().map(|row| row.to_owned()));
        if loose.is_empty() {
            return Ok(());
        }
        let mut others = self.all_partners(irrep, &higher_seeds);
        for more in [&higher_loose, &all] {
            others.append(Axis(0), more.view()).map_err(|_| self.dependent(0.0))?;
        }
        let rows = self.without(&stacked(loose.iter().map(|entry| entry.row.clone()), self.width()), &others);
        let (rows, weight) = orthonormalised(&rows, self.overlap, LEFT)?;
        if weight <= LEFT {
            return Err(self.dependent(weight));
        }
        for (entry, row) in loose.iter().zip(rows.outer_iter()) {
            adapted.rows.push((entry.places[0], row.to_owned()));
            adapted.energies.push((entry.places[0], entry.energy));
            above.loose.entry(irrep).or_default().push(row.to_owned());
        }
        adapted.loose += loose.len();
        Ok(())
    }

    /// Orthonormal rows with those directions added that they do not yet span.
    fn extended(&self, mut rows: Array2<f64>, more: &Array2<f64>) -> Result<Array2<f64>, PurifyError> {
        for row in more.outer_iter() {
            let new = self.without(&row.to_owned().insert_axis(Axis(0)), &rows);
            let (new, weight) = orthonormalised(&new, self.overlap, LEFT)?;
            if weight > LEFT {
                rows.append(Axis(0), new.view()).map_err(|_| self.dependent(weight))?;
            }
        }
        Ok(rows)
    }

    fn dependent(&self, weight: f64) -> PurifyError {
        let occupation = self.orbitals.first().and_then(|&i| self.set.orbitals[i].occupation).unwrap_or(0.0);
        PurifyError::Dependent { spin: self.set.spin, occupation, wanted: self.orbitals.len(), weight, limit: LEFT }
    }
}

/// Rows under each other.
fn stacked(rows: impl Iterator<Item = Array1<f64>>, width: usize) -> Array2<f64> {
    let rows: Vec<Array1<f64>> = rows.collect();
    Array2::from_shape_fn((rows.len(), width), |(i, j)| rows[i][j])
}
