//! A molecule with its shells and orbitals: checked meaning, settled units.
//!
//! Here: what the bytes of a file mean. Lengths in bohr, energies in hartree, always.
//! Not here: the grammar (`grammar`), normalisation and order of functions (`wavefunction::convention`):
//! coefficients stand exactly as the file gives them.

mod atoms;
pub mod elements;
pub mod masses;
mod molden;

pub use atoms::named_atom;
pub use molden::{Reading, looks_like_molden, read_molden, read_molden_passing, read_xyz, write_labels};

use crate::diagnostic::Span;
use nalgebra::Point3;
use ndarray::Array2;

/// One bohr in ångström. CODATA 2018.
pub const ANGSTROM_PER_BOHR: f64 = 0.529_177_210_903;

/// An atom, a ghost centre, or the core of a pseudopotential.
#[derive(Debug, Clone, PartialEq)]
pub struct Atom {
    /// The name as the file writes it.
    pub name: String,
    /// Atomic number of the element that the name means; 0 when it names none (a ghost, a dummy).
    pub element: u8,
    /// The number in the file's atomic-number column: with a pseudopotential this may be the effective charge.
    pub charge: f64,
    /// Basis functions without a nucleus.
    pub ghost: bool,
    /// Core electrons replaced by a pseudopotential, as far as the file tells (`[CORE]`, `[PSEUDO]`, or a charge below the element's).
    pub core_electrons: u32,
    /// Position in bohr, in the file's own axes.
    pub position: Point3<f64>,
}

/// One contracted shell, as the file gives it; an sp shell is two of these, s then p.
#[derive(Debug, Clone, PartialEq)]
pub struct Shell {
    /// Index into [`Molecule::atoms`].
    pub atom_idx: usize,
    /// Angular momentum, 0 to 6.
    pub l: usize,
    /// Pure (2l + 1 functions) or Cartesian ((l + 1)(l + 2)/2).
    pub pure: bool,
    /// Exponents in bohr⁻², all above zero.
    pub exponents: Vec<f64>,
    /// Contraction coefficients as written.
    pub coefficients: Vec<f64>,
}

impl Shell {
    /// Number of functions of the shell.
    #[must_use]
    pub fn n_functions(&self) -> usize {
        if self.pure { 2 * self.l + 1 } else { (self.l + 1) * (self.l + 2) / 2 }
    }
}

/// Spin of an orbital.
#[derive(Debug, Clone, Copy, PartialEq, Eq, PartialOrd, Ord, Hash, serde::Serialize, schemars::JsonSchema)]
#[serde(rename_all = "lowercase")]
pub enum Spin {
    /// Spin up; also every orbital of a restricted file.
    Alpha,
    /// Spin down.
    Beta,
}

/// What the file says of one orbital, beside its coefficients. Absent entries are `None`.
#[derive(Debug, Clone, PartialEq)]
pub struct Orbital {
    /// `Ene=`, hartree.
    pub energy: Option<f64>,
    /// `Occup=`, electrons.
    pub occupation: Option<f64>,
    /// `Sym=`, as written, trimmed.
    pub symmetry: Option<String>,
    /// Bytes of the orbital's header lines in the source.
    pub header: Span,
    /// Bytes of the value of `Sym=` where there is one.
    pub symmetry_value: Option<Span>,
}

/// The orbitals of one spin in file order.
#[derive(Debug, Clone, PartialEq)]
pub struct OrbitalSet {
    /// Alpha also stands for the only set of a restricted file.
    pub spin: Spin,
    /// One entry an orbital.
    pub orbitals: Vec<Orbital>,
    /// n_orbitals × n_functions: one row an orbital, functions in file order, as written.
    pub coefficients: Array2<f64>,
}

/// Normal modes of a file.
#[derive(Debug, Clone, PartialEq)]
pub struct Vibrations {
    /// Atom names and positions in bohr of `[FR-COORD]`.
    pub atoms: Vec<(String, Point3<f64>)>,
    /// One entry a mode.
    pub modes: Vec<Mode>,
}

/// One normal mode.
#[derive(Debug, Clone, PartialEq)]
pub struct Mode {
    /// Wavenumber in cm⁻¹, negative for an imaginary one.
    pub wavenumber: Option<f64>,
    /// Infrared intensity as written.
    pub intensity: Option<f64>,
    /// 3 displacements an atom, x y z, as written; empty when the file lists none.
    pub displacements: Vec<f64>,
}

/// Everything a Molden file means.
#[derive(Debug, Clone, PartialEq)]
pub struct Molecule {
    /// The title, one line, may be empty.
    pub title: String,
    /// Atoms in the order of `[Atoms]`.
    pub atoms: Vec<Atom>,
    /// Shells in the order of their functions.
    pub shells: Vec<Shell>,
    /// Alpha (or restricted) first, then beta where there is one; empty without `[MO]`.
    pub orbital_sets: Vec<OrbitalSet>,
    /// Normal modes, where the file holds some.
    pub vibrations: Option<Vibrations>,
}

impl Molecule {
    /// Number of basis functions, the sum over shells.
    #[must_use]
    pub fn n_functions(&self) -> usize {
        self.shells.iter().map(Shell::n_functions).sum()
    }
}
