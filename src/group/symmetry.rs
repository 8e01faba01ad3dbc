//! A point group placed on a set of sites: where its axes lie and which site each operation carries where.

use super::irrep_name::IrrepName;
use super::point_group::PointGroup;
use nalgebra::{Matrix3, Point3, Vector3};

/// A place of one kind: kinds are alike when element, shells and ghost status are alike.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Site {
    /// Equal for sites that an operation may carry onto each other. Lower kinds go first where an axis could lie among either, so
    /// kinds should be numbered by what the sites are, not by the order of the file.
    pub kind: u32,
    /// Position in bohr.
    pub position: Point3<f64>,
}

/// How far sites lie from the symmetric arrangement, in bohr.
#[derive(Debug, Clone, Copy, PartialEq, Default)]
pub struct Deviation {
    /// The largest displacement of a site from its symmetrised position.
    pub max: f64,
    /// Root mean square displacement over the sites.
    pub rms: f64,
}

/// The standard axes of a group in the coordinates of the file.
#[derive(Debug, Clone, PartialEq)]
pub struct Frame {
    /// Centre of the group, bohr.
    pub centre: Point3<f64>,
    /// Rows are the unit vectors x, y, z of the standard frame: `axes * (r - centre)` are standard coordinates.
    pub axes: Matrix3<f64>,
    /// In words: what each axis passes through, and by which rule it was chosen.
    pub convention: String,
}

/// What an axis of the frame passes through, in either direction from the centre.
#[derive(Debug, Clone, PartialEq, Eq, Default)]
pub struct Passage {
    /// Indices of the sites on the axis, ascending.
    pub atoms: Vec<usize>,
    /// Bonds whose middle is on the axis, without those along it.
    pub bonds: Vec<(usize, usize)>,
}

/// Another legal choice of axes.
#[derive(Debug, Clone, PartialEq)]
pub struct OtherSetting {
    /// In words.
    pub description: String,
    /// (name here, name there) of the irreps that change.
    pub swaps: Vec<(IrrepName, IrrepName)>,
}

/// A point group with standard axes on a set of sites.
#[derive(Debug, Clone)]
pub struct Symmetry {
    /// The group in its standard frame.
    pub group: PointGroup,
    /// Where that frame lies.
    pub frame: Frame,
    /// For each element of the group the permutation of sites: site i goes to `permutations[element][i]`.
    pub permutations: Vec<Vec<usize>>,
    /// How far the sites are from having the group.
    pub deviation: Deviation,
    /// What x, y and z pass through.
    pub passages: [Passage; 3],
    /// Choices of axes that would give irreps other names.
    pub other_settings: Vec<OtherSetting>,
    /// In how many orientations the sites look the same; 1 for C∞v and atoms, 2 for D∞h.
    pub rotational_symmetry_number: usize,
}

impl Symmetry {
    /// The matrix of an element in the axes of the file, about the centre.
    ///
    /// # Panics
    /// When `element_idx` is not below the number of elements held.
    #[must_use]
    pub fn matrix(&self, element_idx: usize) -> Matrix3<f64> {
        let axes = &self.frame.axes;
        axes.transpose() * self.group.elements()[element_idx].operation.matrix() * axes
    }

    /// Coordinates of a place of the file in the standard frame, bohr.
    #[must_use]
    pub fn standard_coordinates(&self, place: &Point3<f64>) -> Vector3<f64> {
        self.frame.axes * (place - self.frame.centre)
    }
}
