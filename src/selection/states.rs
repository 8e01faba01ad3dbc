//! States of configurations: orbital irreps of their terms, triplet sublevels, Jahn–Teller activity.
//!
//! Here: which irreps occur, from the antisymmetry of electrons. Not here: energies, multiplicities term by term.

use super::rules::Operators;
use crate::group::irrep_name::Parity;
use crate::group::products::Decomposition;
use crate::group::{GroupError, GroupName, IrrepName, PointGroup};
use crate::labelling::frontier::{Filling, filling};
use crate::labelling::{SetLabel, SpinLabels};
use std::collections::BTreeMap;

/// A set of orbitals with some electrons.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub struct Shell {
    /// Index of its spin.
    pub spin_idx: usize,
    /// Index of the set within that spin.
    pub set_idx: usize,
    /// Irrep of the set.
    pub irrep: usize,
    /// Electrons in it.
    pub electrons: usize,
    /// What one orbital holds: 2, or 1 for spin orbitals.
    pub capacity: usize,
}

impl Shell {
    /// Electrons that fill it.
    fn full(&self, group: &PointGroup) -> usize {
        self.capacity * group.irreps()[self.irrep].dimension
    }
}

/// The shells that decide the ground state's irrep: part-filled ones, and all filled ones of spin orbitals.
#[derive(Debug, Clone, PartialEq, Eq)]
pub struct Ground {
    /// In order of spin, then energy.
    pub shells: Vec<Shell>,
    /// No part-filled set.
    pub closed: bool,
}

/// Electrons of a set as a whole number.
#[expect(clippy::cast_possible_truncation, clippy::cast_sign_loss, reason = "checked to be a small whole number")]
fn whole(electrons: f64) -> Option<usize> {
    let nearest = electrons.round();
    ((electrons - nearest).abs() < 0.01 && (0.0..1e4).contains(&nearest)).then_some(nearest as usize)
}

/// The configuration that the occupations describe; None where an occupied set has no irrep, lacks partners or holds a fraction of an electron.
#[must_use]
pub fn ground(group: &PointGroup, spins: &[SpinLabels]) -> Option<Ground> {
    let capacity = if spins.len() > 1 { 1 } else { 2 };
    let mut shells = Vec::new();
    let mut closed = true;
    let sets = spins
        .iter()
        .enumerate()
        .flat_map(|(spin_idx, spin)| spin.sets.iter().enumerate().map(move |(set_idx, set)| (spin_idx, set_idx, set)));
    for (spin_idx, set_idx, set) in sets {
        let filled = filling(set, capacity as f64)?;
        if filled == Filling::Empty {
            continue;
        }
        let irrep = set.irrep.filter(|_| set.complete)?;
        closed &= filled == Filling::Full;
        if filled == Filling::Part || capacity == 1 {
            let electrons = whole(set.electrons?)?;
            shells.push(Shell { spin_idx, set_idx, irrep, electrons, capacity });
        }
    }
    debug_assert!(shells.iter().all(|shell| shell.electrons <= shell.full(group)));
    Some(Ground { shells, closed })
}

/// The shells after one electron has gone from one set to another of the same spin; None where that cannot be.
#[must_use]
pub fn excited(
    group: &PointGroup,
    ground: &Ground,
    spins: &[SpinLabels],
    spin_idx: usize,
    from: usize,
    to: usize,
) -> Option<Vec<Shell>> {
    let capacity = if spins.len() > 1 { 1 } else { 2 };
    let mut shells = ground.shells.clone();
    for (set_idx, gains) in [(from, false), (to, true)] {
        let set: &SetLabel = &spins[spin_idx].sets[set_idx];
        let irrep = set.irrep?;
        let known = shells.iter().position(|shell| (shell.spin_idx, shell.set_idx) == (spin_idx, set_idx));
        let at = known.unwrap_or_else(|| {
            // Not listed: empty, or full with both spins.
            let electrons = if gains { 0 } else { capacity * group.irreps()[irrep].dimension };
            shells.push(Shell { spin_idx, set_idx, irrep, electrons, capacity });
            shells.len() - 1
        });
        let shell = &mut shells[at];
        shell.electrons = if gains { shell.electrons + 1 } else { shell.electrons.checked_sub(1)? };
        if shell.electrons > shell.full(group) {
            return None;
        }
    }
    Some(shells)
}

/// Characters of the k-th antisymmetric power, one a class, by Newton's identities over χ(R), χ(R²), …
fn antisymmetric_power(group: &PointGroup, irrep: usize, k: usize) -> Vec<f64> {
    let characters = &group.irreps()[irrep].characters;
    let of_class = |class: &crate::group::Class| {
        let first = class.members.first().copied().unwrap_or(0);
        let mut power = 0;
        let sums: Vec<f64> = (0..k)
            .map(|_| {
                power = group.multiply(power, first);
                characters[group.elements()[power].class_idx]
            })
            .collect();
        let mut elementary = vec![1.0];
        for n in 1..=k {
            let terms = (1..=n).map(|i| if i % 2 == 1 { 1.0 } else { -1.0 } * elementary[n - i] * sums[i - 1]);
            elementary.push(terms.sum::<f64>() / n as f64);
        }
        elementary[k]
    };
    group.classes().iter().map(of_class).collect()
}

/// Orbital irreps of all terms of these shells together, with how many terms have each.
///
/// n electrons in a set V with both spins: every term has a component with the two spins as even as can be, and these
/// components together are Λ^⌈n/2⌉V ⊗ Λ^⌊n/2⌋V. With one spin only it is ΛⁿV. Between shells the product is taken.
///
/// # Errors
/// [`GroupError`] where the sum leaves the irreps kept of a continuous group.
pub fn terms(group: &PointGroup, shells: &[Shell]) -> Result<Decomposition, GroupError> {
    if group.name() == GroupName::K {
        return terms_of_atom(group, shells);
    }
    let mut characters = vec![1.0; group.classes().len()];
    let mut times = |power: Vec<f64>| characters.iter_mut().zip(power).for_each(|(value, factor)| *value *= factor);
    for shell in shells {
        if shell.capacity == 1 {
            times(antisymmetric_power(group, shell.irrep, shell.electrons));
        } else {
            times(antisymmetric_power(group, shell.irrep, shell.electrons.div_ceil(2)));
            times(antisymmetric_power(group, shell.irrep, shell.electrons / 2));
        }
    }
    group.decompose(&characters)
}

/// The same for an atom, by counting M: a term of L has one component for each M from −L to L.
fn terms_of_atom(group: &PointGroup, shells: &[Shell]) -> Result<Decomposition, GroupError> {
    let mut counts: BTreeMap<i64, usize> = BTreeMap::from([(0, 1)]);
    let mut odd = false;
    for shell in shells {
        let IrrepName::Atomic { parity, l } = group.irreps()[shell.irrep].name else { continue };
        let powers = match shell.capacity {
            1 => vec![shell.electrons],
            _ => vec![shell.electrons.div_ceil(2), shell.electrons / 2],
        };
        odd ^= parity == Parity::Odd && shell.electrons % 2 == 1;
        for k in powers {
            counts = convolved(&counts, &subsets(i64::from(l), k));
        }
    }
    let mut found = Vec::new();
    for (irrep_idx, irrep) in group.irreps().iter().enumerate() {
        let IrrepName::Atomic { parity, l } = irrep.name else { continue };
        let of = |m: i64| counts.get(&m).copied().unwrap_or(0);
        let n = of(i64::from(l)).saturating_sub(of(i64::from(l) + 1));
        if (parity == Parity::Odd) == odd && n > 0 {
            found.push((irrep_idx, n));
        }
    }
    let dimension: usize = found.iter().map(|&(irrep, n)| n * group.irreps()[irrep].dimension).sum();
    let expected: usize = counts.values().sum();
    if dimension == expected {
        Ok(found)
    } else {
        let (found, expected) = (dimension as f64, expected as f64);
        Err(GroupError::Incomplete { group: group.name().to_string(), found, expected })
    }
}

/// How many ways of putting k electrons of one spin into the orbitals m = −l … l give each sum of m.
fn subsets(l: i64, k: usize) -> BTreeMap<i64, usize> {
    let mut ways: Vec<BTreeMap<i64, usize>> = vec![BTreeMap::new(); k + 1];
    ways[0].insert(0, 1);
    for m in -l..=l {
        for n in (1..=k).rev() {
            let with: Vec<(i64, usize)> = ways[n - 1].iter().map(|(&sum, &count)| (sum + m, count)).collect();
            for (sum, count) in with {
                *ways[n].entry(sum).or_insert(0) += count;
            }
        }
    }
    ways.swap_remove(k)
}

fn convolved(a: &BTreeMap<i64, usize>, b: &BTreeMap<i64, usize>) -> BTreeMap<i64, usize> {
    let mut sums = BTreeMap::new();
    for (&m, &ways) in a {
        for (&n, &more) in b {
            *sums.entry(m + n).or_insert(0) += ways * more;
        }
    }
    sums
}

/// Irreps of the three sublevels of a triplet whose orbital part has irrep `orbital`.
///
/// Spin–orbit coupling is totally symmetric, so a sublevel mixes with singlets of the same irrep.
///
/// # Errors
/// As [`PointGroup::product`].
pub fn triplet_sublevels(
    group: &PointGroup,
    operators: &Operators,
    orbital: usize,
) -> Result<Decomposition, GroupError> {
    let mut counts = vec![0; group.irreps().len()];
    for rotation in operators.rotations() {
        for (irrep, n) in group.product(orbital, rotation)? {
            counts[irrep] += n;
        }
    }
    Ok(counts.into_iter().enumerate().filter(|(_, n)| *n > 0).collect())
}

/// Irreps of vibrations that split a degenerate level of irrep `level` to first order: those of its symmetric square, less the
/// totally symmetric one.
///
/// # Source
/// "Stability of polyatomic molecules in degenerate electronic states", Proc. R. Soc. Lond. A 161, 220 (1937).
/// # Errors
/// As [`PointGroup::symmetric_square`].
pub fn jahn_teller(group: &PointGroup, level: usize) -> Result<Vec<usize>, GroupError> {
    let symmetric = group.totally_symmetric();
    let square = group.symmetric_square(level)?;
    Ok(square.into_iter().map(|(irrep, _)| irrep).filter(|irrep| *irrep != symmetric).collect())
}
