//! What symmetry allows between states: electric dipole, magnetic dipole, quadrupole; the spin rule, and what spin–orbit coupling opens.
//!
//! Not here: strengths; transitions between orbitals (`selection`).

use super::error::StatesError;
use super::spin_orbit;
use super::terms::Term;
use crate::group::products::{Decomposition, WHOLE};
use crate::group::{DoubleGroup, PointGroup};

/// Irreps of the operators of one group.
#[derive(Debug, Clone)]
struct Operators {
    dipole: Vec<usize>,
    rotation: Vec<usize>,
    quadrupole: Vec<usize>,
}

/// What is allowed between two kinds of terms.
#[derive(Debug, Clone, PartialEq, Eq)]
pub struct Transition {
    /// Index into the first list of terms.
    pub from: usize,
    /// Index into the second.
    pub to: usize,
    /// Equal multiplicities: without spin–orbit coupling only these combine.
    pub spin_allowed: bool,
    /// Irreps of x, y, z that the orbital parts allow.
    pub electric_dipole: Vec<usize>,
    /// Irreps of Rx, Ry, Rz that the orbital parts allow.
    pub magnetic_dipole: Vec<usize>,
    /// Irreps of the traceless products of two coordinates that the orbital parts allow.
    pub quadrupole: Vec<usize>,
    /// Irreps of x, y, z that some pair of spin–orbit components allows.
    pub borrowed: Vec<usize>,
    /// The least order of spin–orbit coupling that joins the spins: |ΔS|, at least 1 where the orbital parts forbid.
    pub borrowed_order: u16,
}

impl Transition {
    /// Electric dipole, allowed by spin and by orbitals.
    #[must_use]
    pub fn is_allowed(&self) -> bool {
        self.spin_allowed && !self.electric_dipole.is_empty()
    }
}

/// A kind of term with its spin–orbit components, and its place in its list.
struct Side<'a> {
    place: usize,
    term: &'a Term,
    components: &'a Decomposition,
}

/// Rules between every pair of two lists; for one list against itself each pair once, and a kind with itself where there are several of it.
///
/// # Errors
/// As [`spin_orbit::components`].
/// # Source
/// Vanishing integrals by the totally symmetric part of a triple product: common practice.
pub fn transitions(
    group: &PointGroup,
    double: &DoubleGroup,
    from: &[Term],
    to: Option<&[Term]>,
) -> Result<Vec<Transition>, StatesError> {
    let irreps = |found: Decomposition| found.into_iter().map(|(irrep, _)| irrep).collect();
    let operators = Operators {
        dipole: irreps(group.vector_irreps()),
        rotation: irreps(group.rotation_irreps()),
        quadrupole: irreps(group.decompose(&group.shell_characters(2))?),
    };
    let split = |terms: &'_ [Term]| -> Result<Vec<Decomposition>, StatesError> {
        terms.iter().map(|term| spin_orbit::components(group, double, term)).collect()
    };
    let right_terms = to.unwrap_or(from);
    let (left, right) = (split(from)?, split(right_terms)?);
    let mut found = Vec::new();
    for (i, (term, components)) in from.iter().zip(&left).enumerate() {
        let a = Side { place: i, term, components };
        for (j, (term, components)) in right_terms.iter().zip(&right).enumerate() {
            if to.is_none() && (j < i || (j == i && term.count == 1)) {
                continue;
            }
            found.push(between(group, double, &operators, &a, &Side { place: j, term, components }));
        }
    }
    Ok(found)
}

fn between(group: &PointGroup, double: &DoubleGroup, operators: &Operators, a: &Side<'_>, b: &Side<'_>) -> Transition {
    let orbital = |irrep: usize| group.irreps()[irrep].characters.as_slice();
    let allowed =
        |operator: &&usize| group.mean(&[orbital(a.term.irrep), orbital(b.term.irrep), orbital(**operator)]) > WHOLE;
    let through_components = |operator: &&usize| {
        let of = |irrep: usize| double.irreps()[irrep].characters.as_slice();
        a.components
            .iter()
            .any(|&(c, _)| b.components.iter().any(|&(d, _)| double.mean(&[of(c), of(d), of(**operator)]) > WHOLE))
    };
    let electric_dipole: Vec<usize> = operators.dipole.iter().filter(allowed).copied().collect();
    let spin_allowed = a.term.multiplicity == b.term.multiplicity;
    let steps = a.term.multiplicity.abs_diff(b.term.multiplicity);
    let same_kind = steps.is_multiple_of(2);
    Transition {
        from: a.place,
        to: b.place,
        spin_allowed,
        magnetic_dipole: operators.rotation.iter().filter(allowed).copied().collect(),
        quadrupole: operators.quadrupole.iter().filter(allowed).copied().collect(),
        borrowed: operators
            .dipole
            .iter()
            .filter(|operator| same_kind && through_components(operator))
            .copied()
            .collect(),
        borrowed_order: (steps / 2).max(u16::from(electric_dipole.is_empty())),
        electric_dipole,
    }
}
