//! The verdict, and where broken symmetry is likely to come from.
//!
//! Here: which of four words fits, open degenerate shells, the origin. Not here: the sentence (`report`).

use super::Audit;
use super::density::Occupied;
use crate::group::{GroupName, IrrepName};
use crate::labelling::Labelled;

/// What a wavefunction makes of the symmetry of its nuclei.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Verdict {
    /// Every orbital belongs to one irrep, degenerate ones to one partner.
    Intact,
    /// Partners, or orbitals at one energy, are turned among themselves: nothing is lost.
    Rotated,
    /// The densities are invariant, orbitals at different energies mix irreps.
    Mixed,
    /// A density has lost operations.
    Broken,
}

/// What the theorems say of an open degenerate shell.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Degeneracy {
    /// The state is degenerate in space: a Jahn–Teller situation.
    JahnTeller,
    /// The same in a linear molecule: Renner–Teller.
    RennerTeller,
    /// An atom: a term of several components, of which one determinant shows one.
    Atom,
    /// One electron of each spin: the terms of the configuration decide.
    Undecided,
}

/// A degenerate irrep of which some partners are filled and others not.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct OpenShell {
    /// The irrep, of an atom's full group where the axes are its density's.
    pub name: IrrepName,
    /// Its dimension.
    pub dimension: usize,
    /// Electrons in the shell.
    pub electrons: usize,
    /// Alpha electrons in orbitals of the irrep, by weight.
    pub alpha: f64,
    /// Beta electrons.
    pub beta: f64,
    /// What follows.
    pub degeneracy: Degeneracy,
}

/// Where broken symmetry is likely to come from.
#[derive(Debug, Clone, PartialEq)]
pub enum Origin {
    /// The nuclei themselves have exactly only this group.
    Geometry {
        /// The group of the first rung of the ladder.
        nuclei: GroupName,
    },
    /// A real component of a degenerate shell is filled, another not.
    OpenShell(OpenShell),
    /// The total density is whole: the spins alone break the symmetry.
    SpinPolarisation,
    /// The electrons lie in space otherwise than the nuclei ask for.
    Density,
    /// Densities are whole: only orbitals are mixed.
    Orbitals,
}

/// A shell is open when its electrons of one spin miss a full number of sets by at least this.
const OPEN: f64 = 0.5;

/// Degenerate irreps with electrons that fill no whole number of sets in one spin.
#[must_use]
pub fn open_shells(labelled: &Labelled, alpha: &Occupied, beta: &Occupied) -> Vec<OpenShell> {
    let group = &labelled.symmetry.group;
    let held = |spin: &Occupied, irrep: usize| -> f64 {
        let labels = &labelled.spins[spin.set_idx].orbitals;
        let weight =
            |orbital: usize| labels[orbital].weights.iter().find(|entry| entry.0 == irrep).map_or(0.0, |entry| entry.1);
        spin.orbitals.iter().zip(&spin.occupations).map(|(&orbital, n)| n * weight(orbital)).sum()
    };
    let mut open = Vec::new();
    for (irrep, of_group) in group.irreps().iter().enumerate().filter(|(_, irrep)| irrep.dimension > 1) {
        let dimension = of_group.dimension as f64;
        let (a, b) = (held(alpha, irrep), held(beta, irrep));
        let misses = |n: f64| (n / dimension - (n / dimension).round()).abs() * dimension >= OPEN;
        if !misses(a) && !misses(b) {
            continue;
        }
        let full = ((a.round() / dimension).floor()).min((b.round() / dimension).floor()).max(0.0);
        #[expect(clippy::cast_possible_truncation, clippy::cast_sign_loss, reason = "a few electrons, not negative")]
        let electrons = (a.round() + b.round() - 2.0 * dimension * full).max(0.0) as usize;
        let degeneracy = match of_group.name {
            IrrepName::Atomic { .. } => Degeneracy::Atom,
            IrrepName::Linear { .. } => Degeneracy::RennerTeller,
            IrrepName::Mulliken { .. } if of_group.dimension == 2 && electrons == 2 => Degeneracy::Undecided,
            IrrepName::Mulliken { .. } => Degeneracy::JahnTeller,
        };
        open.push(OpenShell {
            name: of_group.name,
            dimension: of_group.dimension,
            electrons,
            alpha: a,
            beta: b,
            degeneracy,
        });
    }
    open
}

impl Audit {
    /// The word that fits.
    #[must_use]
    pub fn verdict(&self) -> Verdict {
        if !self.is_invariant() {
            Verdict::Broken
        } else if self.mixed.iter().any(|mixed| !mixed.is_harmless()) {
            Verdict::Mixed
        } else if !self.mixed.is_empty() || self.turned_partners > 0 {
            Verdict::Rotated
        } else {
            Verdict::Intact
        }
    }

    /// Likely origins, the most telling first; empty for intact and rotated ones.
    #[must_use]
    pub fn origins(&self, labelled: &Labelled) -> Vec<Origin> {
        let mut origins: Vec<Origin> = Vec::new();
        let exact = &labelled.detection.ladder[0];
        let lower = !exact.name.is_continuous() && exact.operations.len() < labelled.symmetry.group.order();
        if lower && self.kept_by_all().members.len() >= exact.operations.len() {
            origins.push(Origin::Geometry { nuclei: exact.name });
        }
        match self.verdict() {
            Verdict::Intact | Verdict::Rotated => return Vec::new(),
            Verdict::Mixed if origins.is_empty() || self.mixed.iter().any(|mixed| mixed.localised) => {
                return vec![Origin::Orbitals];
            }
            Verdict::Mixed => return origins,
            Verdict::Broken => {}
        }
        origins.extend(self.open_shells.iter().map(|shell| Origin::OpenShell(*shell)));
        if self.kept.total.is_whole() && self.lost_sphere.is_none() {
            origins.push(Origin::SpinPolarisation);
        } else if origins.is_empty() {
            origins.push(Origin::Density);
        }
        origins
    }
}
