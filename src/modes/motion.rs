//! How the 3N displacements of the nuclei fall into irreps: translations, rotations, vibrations, stretches.
//!
//! Here: counting from permutations of nuclei alone. Not here: modes of a file.

use crate::group::products::Decomposition;
use crate::group::{GroupError, GroupName, Symmetry};
use crate::model::Atom;
use nalgebra::{Matrix3, Vector3};

/// Nuclei this near a common line, bohr, form a linear molecule.
const ON_LINE: f64 = 1e-2;

/// Irreps of the nuclei's displacements.
#[derive(Debug, Clone, PartialEq, Eq, Default)]
pub struct Motion {
    /// x, y, z.
    pub translations: Decomposition,
    /// Rx, Ry, Rz; two of them for a linear molecule, none for an atom.
    pub rotations: Decomposition,
    /// The 3N − 6 (3N − 5 when linear) others.
    pub vibrations: Decomposition,
}

impl Motion {
    /// How many vibrations have this irrep.
    #[must_use]
    pub fn n_vibrations(&self, irrep: usize) -> usize {
        self.vibrations.iter().find(|term| term.0 == irrep).map_or(0, |term| term.1)
    }
}

/// Indices of the atoms that have a nucleus.
#[must_use]
pub fn nuclei(atoms: &[Atom]) -> Vec<usize> {
    (0..atoms.len()).filter(|&atom| !atoms[atom].ghost && atoms[atom].element > 0).collect()
}

/// The direction of the common line of these nuclei in the axes of the file; None when they are not on one, or fewer than two.
#[must_use]
pub fn line(atoms: &[Atom], nuclei: &[usize]) -> Option<Vector3<f64>> {
    let first = atoms[*nuclei.first()?].position;
    let from_first = |&atom: &usize| atoms[atom].position - first;
    let farthest = nuclei.iter().map(from_first).max_by(|a, b| a.norm().total_cmp(&b.norm()))?;
    let direction = farthest.try_normalize(1e-6)?;
    let off = |v: Vector3<f64>| (v - direction * direction.dot(&v)).norm();
    nuclei.iter().all(|atom| off(from_first(atom)) < ON_LINE).then_some(direction)
}

/// Characters of a representation, one a class, from the permutation and the matrix (standard frame) of one of its elements.
fn characters(symmetry: &Symmetry, of: impl Fn(&[usize], &Matrix3<f64>) -> f64) -> Vec<f64> {
    let group = &symmetry.group;
    let classes = group.classes().iter();
    classes
        .map(|class| {
            let first = class.members.first().copied().unwrap_or(0);
            of(&symmetry.permutations[first], group.elements()[first].operation.matrix())
        })
        .collect()
}

/// Decomposes the displacements of the nuclei.
///
/// # Source
/// Characters of 3N displacements: nuclei left in place times the trace of the operation (common practice).
/// # Errors
/// [`GroupError::NotWhole`] when the permutations are not those of the group.
pub fn motion(atoms: &[Atom], symmetry: &Symmetry) -> Result<Motion, GroupError> {
    let group = &symmetry.group;
    let nuclei = nuclei(atoms);
    if group.name() == GroupName::K || nuclei.len() < 2 {
        let translations = if nuclei.is_empty() { Vec::new() } else { group.vector_irreps() };
        return Ok(Motion { translations, ..Motion::default() });
    }
    let line = line(atoms, &nuclei).map(|direction| symmetry.frame.axes * direction);
    let all = characters(symmetry, |permutation, matrix| {
        nuclei.iter().filter(|&&atom| permutation[atom] == atom).count() as f64 * matrix.trace()
    });
    let translations = characters(symmetry, |_, matrix| matrix.trace());
    let rotations = characters(symmetry, |_, matrix| {
        let about_line = line.map_or(0.0, |line| line.dot(&(matrix * line)));
        matrix.determinant() * (matrix.trace() - about_line)
    });
    let rest: Vec<f64> = (0..all.len()).map(|class| all[class] - translations[class] - rotations[class]).collect();
    Ok(Motion {
        translations: group.decompose(&translations)?,
        rotations: group.decompose(&rotations)?,
        vibrations: group.decompose(&rest)?,
    })
}

/// Irreps of the stretches of bonds, where the bonds are plain: every nucleus is bonded, the bonds join all nuclei, the
/// operations carry bonds onto bonds, and what is left of the vibrations is no less than nothing.
#[must_use]
pub fn stretches(
    atoms: &[Atom],
    bonds: &[(usize, usize)],
    symmetry: &Symmetry,
    motion: &Motion,
) -> Option<(Decomposition, Decomposition)> {
    let group = &symmetry.group;
    let nuclei = nuclei(atoms);
    if bonds.is_empty() || !joined(&nuclei, bonds) {
        return None;
    }
    let image = |permutation: &[usize], bond: &(usize, usize)| {
        let (a, b) = (permutation[bond.0], permutation[bond.1]);
        (a.min(b), a.max(b))
    };
    let whole = symmetry
        .permutations
        .iter()
        .all(|permutation| bonds.iter().all(|bond| bonds.binary_search(&image(permutation, bond)).is_ok()));
    if !whole {
        return None;
    }
    let kept = characters(symmetry, |permutation, _| {
        bonds.iter().filter(|bond| image(permutation, bond) == **bond).count() as f64
    });
    let stretches = group.decompose(&kept).ok()?;
    let rest: Option<Decomposition> = (0..group.irreps().len())
        .map(|irrep| {
            let n = stretches.iter().find(|term| term.0 == irrep).map_or(0, |term| term.1);
            motion.n_vibrations(irrep).checked_sub(n).map(|left| (irrep, left))
        })
        .collect();
    Some((stretches, rest?.into_iter().filter(|term| term.1 > 0).collect()))
}

/// Whether the bonds join all nuclei into one molecule.
fn joined(nuclei: &[usize], bonds: &[(usize, usize)]) -> bool {
    let Some(&first) = nuclei.first() else { return false };
    let mut reached = vec![first];
    let mut next = 0;
    while next < reached.len() {
        let here = reached[next];
        for &(a, b) in bonds.iter().filter(|bond| bond.0 == here || bond.1 == here) {
            let other = if a == here { b } else { a };
            if !reached.contains(&other) {
                reached.push(other);
            }
        }
        next += 1;
    }
    reached.len() == nuclei.len()
}
