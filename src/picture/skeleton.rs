//! Atoms as small spheres and bonds as sticks, in greys: heavier is darker.
//!
//! No colour means an element: symbols stand in `picture::elements`, and orbitals keep the colours to themselves.

use super::grid::bounds;
use crate::group::Symmetry;
use crate::labelling::sites::bonds;
use crate::model::{Molecule, elements};
use nalgebra::Vector3;

/// Radius of a stick, bohr.
pub const STICK: f64 = 0.13;

/// One atom.
#[derive(Debug, Clone, PartialEq)]
pub struct Ball {
    /// Place in the standard frame, bohr.
    pub place: Vector3<f64>,
    /// Radius drawn, bohr: a third of the covalent radius.
    pub radius: f64,
    /// Atomic number, 0 for ghosts.
    pub element: u8,
    /// Symbol, ghosts in parentheses.
    pub symbol: String,
}

/// The molecule to be drawn.
#[derive(Debug, Clone, PartialEq)]
pub struct Skeleton {
    /// Atoms in file order.
    pub atoms: Vec<Ball>,
    /// Pairs of indices.
    pub bonds: Vec<(usize, usize)>,
}

impl Skeleton {
    /// Atoms in the standard frame of their group; bonds by distance.
    #[must_use]
    pub fn new(molecule: &Molecule, symmetry: &Symmetry) -> Self {
        let atoms = molecule
            .atoms
            .iter()
            .map(|atom| Ball {
                place: symmetry.standard_coordinates(&atom.position),
                radius: 0.33 * elements::covalent_radius_bohr(atom.element).unwrap_or(1.2),
                element: if atom.ghost { 0 } else { atom.element },
                symbol: elements::label(atom),
            })
            .collect();
        Self { atoms, bonds: bonds(molecule) }
    }

    /// Opposite corners of the box around the nuclei.
    #[must_use]
    pub fn bounds(&self) -> (Vector3<f64>, Vector3<f64>) {
        bounds(self.atoms.iter().map(|atom| atom.place))
    }
}
