//! The complex character table of a finite group, worked out from its product table alone.
//!
//! Here: class sums, their common eigenvectors, exact values of the characters, pairs of complex conjugates.
//! Not here: names of irreps (`group::mulliken`), matrices in space, any table typed in by hand.

use super::error::GroupError;
use super::exact::{cos_turn, sin_turn};
use super::multiplication::Multiplication;
use nalgebra::{Complex, DMatrix, SymmetricEigen};

/// How far a computed number may lie from the whole number that it must be.
const WHOLE: f64 = 1e-6;

/// An irreducible representation over the complex numbers.
#[derive(Debug, Clone, PartialEq)]
pub struct ComplexIrrep {
    /// Its dimension.
    pub dimension: usize,
    /// One character per class, a sum of roots of unity with correctly rounded terms.
    pub characters: Vec<Complex<f64>>,
    /// Index of the complex conjugate irrep, its own when the characters are real.
    pub conjugate: usize,
    /// Mean of χ(g²): 1 has real matrices, 0 is half of a pair, −1 has real characters but no real matrices (double groups).
    pub indicator: i8,
}

/// All irreps of the group, one for each class, in no particular order.
///
/// The operators that multiply with a class sum commute. Their combination with fixed weights that treats a class and the class of
/// the inverses as conjugates is Hermitian; its eigenvectors are the rows of the character table. Each character is then replaced by
/// the sum of roots of unity that it must be: the multiplicities of the eigenvalues of an element are whole numbers.
///
/// # Errors
/// [`GroupError::Characters`] when a law of characters is missed, which no group of the supported orders does.
/// # Source
/// Characters from class sums: Numer. Math. 10, 446 (1967).
pub fn complex_irreps(group: &Multiplication, classes: &[Vec<usize>]) -> Result<Vec<ComplexIrrep>, GroupError> {
    let class_of = class_of(group.order(), classes);
    let mut closest = 0.0_f64;
    for attempt in 0..8 {
        let eigen = SymmetricEigen::new(class_sum_combination(group, classes, &class_of, attempt));
        let mut values: Vec<f64> = eigen.eigenvalues.iter().copied().collect();
        values.sort_by(f64::total_cmp);
        let gap = values.windows(2).map(|pair| pair[1] - pair[0]).fold(f64::INFINITY, f64::min);
        // Nearly equal eigenvalues would mix two rows; other weights part them.
        if gap > WHOLE {
            return rows(group, classes, &class_of, &eigen.eigenvectors);
        }
        closest = closest.max(gap);
    }
    Err(GroupError::Characters { law: "distinct eigenvalues of class sums", deviation: closest, limit: WHOLE })
}

/// For each element the index of its class.
pub(super) fn class_of(order: usize, classes: &[Vec<usize>]) -> Vec<usize> {
    let mut class_of = vec![0; order];
    for (at, class) in classes.iter().enumerate() {
        for &member in class {
            class_of[member] = at;
        }
    }
    class_of
}

/// Σ w(class) × (multiplication with the class sum) in the basis of class sums divided by √size: Hermitian.
fn class_sum_combination(
    group: &Multiplication,
    classes: &[Vec<usize>],
    class_of: &[usize],
    attempt: u64,
) -> DMatrix<Complex<f64>> {
    let raw = weights(classes.len(), attempt);
    let weights: Vec<Complex<f64>> = classes
        .iter()
        .zip(&raw)
        .map(|(class, weight)| weight + raw[class_of[group.inverse(class[0])]].conj())
        .collect();
    let mut combination = DMatrix::zeros(classes.len(), classes.len());
    for (column, class) in classes.iter().enumerate() {
        for (element, &element_class) in class_of.iter().enumerate() {
            let row = class_of[group.product(element, class[0])];
            // The factor √(size of column / size of row) of the normalised basis.
            let ratio = (class.len() as f64 / classes[row].len() as f64).sqrt();
            combination[(row, column)] += weights[element_class] * ratio;
        }
    }
    combination
}

/// A fixed sequence of complex numbers in the unit square, another for each attempt.
fn weights(count: usize, attempt: u64) -> Vec<Complex<f64>> {
    let mut state = 0x9E37_79B9_7F4A_7C15_u64.wrapping_mul(attempt + 1);
    let mut next = || {
        // A linear congruential step; its upper bits are well mixed.
        state = state.wrapping_mul(6_364_136_223_846_793_005).wrapping_add(1_442_695_040_888_963_407);
        (state >> 33) as f64 / f64::from(1_u32 << 31)
    };
    (0..count).map(|_| Complex::new(next(), next())).collect()
}

/// Rows of the character table from the eigenvectors √size × χ.
fn rows(
    group: &Multiplication,
    classes: &[Vec<usize>],
    class_of: &[usize],
    eigenvectors: &DMatrix<Complex<f64>>,
) -> Result<Vec<ComplexIrrep>, GroupError> {
    let order = group.order() as f64;
    let cyclic = Cyclic::covering(group, classes, class_of);
    let mut irreps = Vec::with_capacity(classes.len());
    for vector in eigenvectors.column_iter() {
        let phase = vector[0].conj() / vector[0].norm();
        let rough: Vec<Complex<f64>> = vector
            .iter()
            .zip(classes)
            .map(|(entry, class)| entry * phase * (order / class.len() as f64).sqrt() / vector.norm())
            .collect();
        let mut characters = vec![Complex::new(f64::NAN, 0.0); classes.len()];
        for cyclic in &cyclic {
            cyclic.fill(&rough, &mut characters)?;
        }
        irreps.push(characters);
    }
    check_orthogonality(&irreps, classes, order)?;
    irreps
        .iter()
        .map(|characters| {
            let conjugate = nearest_row(&irreps, characters);
            let squares: f64 =
                (0..group.order()).map(|element| characters[class_of[group.product(element, element)]].re).sum::<f64>()
                    / order;
            Ok(ComplexIrrep {
                dimension: whole(characters[0].re, "whole dimensions")?,
                characters: characters.clone(),
                conjugate,
                indicator: if squares > 0.5 { 1 } else { -i8::from(squares < -0.5) },
            })
        })
        .collect()
}

/// The powers of one element: their classes, and the roots of unity that their eigenvalues are among.
struct Cyclic {
    /// Class of each power.
    powers: Vec<usize>,
    roots: Vec<Complex<f64>>,
    /// (class, a power in it) for the classes that are taken from this element.
    taken: Vec<(usize, usize)>,
}

impl Cyclic {
    /// A few elements whose powers meet every class, those of highest order first: each class is taken from one of them.
    fn covering(group: &Multiplication, classes: &[Vec<usize>], class_of: &[usize]) -> Vec<Self> {
        let mut powers: Vec<Vec<usize>> = classes
            .iter()
            .map(|class| group.powers(class[0]).into_iter().map(|power| class_of[power]).collect())
            .collect();
        powers.sort_by_key(|powers| std::cmp::Reverse(powers.len()));
        let mut open = vec![true; classes.len()];
        let mut found = Vec::new();
        for powers in powers {
            let taken: Vec<(usize, usize)> = powers
                .iter()
                .enumerate()
                .filter(|(_, class)| std::mem::replace(&mut open[**class], false))
                .map(|(power, &class)| (class, power))
                .collect();
            if !taken.is_empty() {
                let period = i64::try_from(powers.len()).unwrap_or(i64::MAX);
                let roots = (0..period).map(|k| Complex::new(cos_turn(k, period), sin_turn(k, period))).collect();
                found.push(Self { powers, roots, taken });
            }
        }
        found
    }

    /// The characters of the classes taken here: sums of roots of unity by the whole multiplicities of the element's eigenvalues.
    fn fill(&self, rough: &[Complex<f64>], characters: &mut [Complex<f64>]) -> Result<(), GroupError> {
        let period = self.powers.len();
        let mut eigenvalues = Vec::new();
        for k in 0..period {
            let terms =
                self.powers.iter().enumerate().map(|(j, &class)| (rough[class] * self.roots[j * k % period].conj()).re);
            let count = whole(terms.sum::<f64>() / period as f64, "whole multiplicities of eigenvalues")?;
            if count > 0 {
                eigenvalues.push((k, count as f64));
            }
        }
        for &(class, power) in &self.taken {
            characters[class] = eigenvalues.iter().map(|&(k, count)| self.roots[k * power % period] * count).sum();
        }
        Ok(())
    }
}

/// A number that must be whole and not negative.
#[expect(clippy::cast_possible_truncation, clippy::cast_sign_loss, reason = "rounded, and not negative")]
fn whole(value: f64, law: &'static str) -> Result<usize, GroupError> {
    let nearest = value.round().max(0.0);
    let deviation = (value - nearest).abs();
    if deviation < WHOLE { Ok(nearest as usize) } else { Err(GroupError::Characters { law, deviation, limit: WHOLE }) }
}

/// Σ over the group of χ χ'* = |G| or 0.
fn check_orthogonality(rows: &[Vec<Complex<f64>>], classes: &[Vec<usize>], order: f64) -> Result<(), GroupError> {
    for (i, a) in rows.iter().enumerate() {
        for (j, b) in rows.iter().enumerate().skip(i) {
            let sum: Complex<f64> =
                a.iter().zip(b).zip(classes).map(|((x, y), class)| x * y.conj() * class.len() as f64).sum();
            let deviation = (sum / order - if i == j { 1.0 } else { 0.0 }).norm();
            if deviation.is_nan() || deviation > WHOLE {
                return Err(GroupError::Characters { law: "orthogonality of rows", deviation, limit: WHOLE });
            }
        }
    }
    Ok(())
}

fn nearest_row(rows: &[Vec<Complex<f64>>], wanted: &[Complex<f64>]) -> usize {
    let distance = |row: &[Complex<f64>]| -> f64 { row.iter().zip(wanted).map(|(x, y)| (x.conj() - y).norm()).sum() };
    (0..rows.len()).min_by(|&i, &j| distance(&rows[i]).total_cmp(&distance(&rows[j]))).unwrap_or(0)
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::group::multiplication::closure;
    use nalgebra::Quaternion;

    fn dimensions_and_indicators(generators: &[Quaternion<f64>], limit: usize) -> Vec<(usize, i8)> {
        let same = |a: &Quaternion<f64>, b: &Quaternion<f64>| (a.coords - b.coords).amax() < 1e-9;
        let elements = closure(Quaternion::identity(), generators, |a, b| a * b, same, limit).unwrap();
        assert_eq!(elements.len(), limit);
        let group = Multiplication::of(&elements, |a, b| a * b, same).unwrap();
        let irreps = complex_irreps(&group, &group.classes()).unwrap();
        let mut found: Vec<(usize, i8)> = irreps.iter().map(|irrep| (irrep.dimension, irrep.indicator)).collect();
        found.sort_unstable();
        found
    }

    /// The same routine serves double groups: unit quaternions instead of matrices. The double octahedral group has the irreps
    /// A1 A2 E T1 T2 of O and Γ6 Γ7 Γ8 of dimensions 2, 2, 4, which have real characters but no real matrices ("Splitting of terms in
    /// crystals" (Termaufspaltung in Kristallen), Ann. Phys. 3, 133 (1929)).
    #[test]
    fn double_groups_of_the_octahedron_and_of_d2() {
        let octahedral =
            [Quaternion::new(0.5, 0.5, 0.5, 0.5), Quaternion::new(0.5_f64.sqrt(), 0.5_f64.sqrt(), 0.0, 0.0)];
        assert_eq!(
            dimensions_and_indicators(&octahedral, 48),
            [(1, 1), (1, 1), (2, -1), (2, -1), (2, 1), (3, 1), (3, 1), (4, -1)]
        );
        let half_turns = [Quaternion::new(0.0, 1.0, 0.0, 0.0), Quaternion::new(0.0, 0.0, 1.0, 0.0)];
        assert_eq!(dimensions_and_indicators(&half_turns, 8), [(1, 1), (1, 1), (1, 1), (1, 1), (2, -1)]);
    }

    #[test]
    fn complex_conjugates_of_a_cyclic_group_are_paired() {
        let elements: Vec<u32> = (0..7).collect();
        let group = Multiplication::of(&elements, |a, b| (a + b) % 7, |a, b| a == b).unwrap();
        let irreps = complex_irreps(&group, &group.classes()).unwrap();
        assert_eq!(irreps.iter().filter(|irrep| irrep.indicator == 1).count(), 1);
        for (at, irrep) in irreps.iter().enumerate() {
            assert_eq!(irreps[irrep.conjugate].conjugate, at);
            assert_eq!(irrep.conjugate == at, irrep.indicator == 1);
        }
    }
}
