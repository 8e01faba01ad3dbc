//! A point group placed on a set of sites: where its axes lie and which site each operation carries where.

use nalgebra::{Matrix3, Point3};

/// A place of one kind: kinds are alike when element, shells and ghost status are alike.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Site {
    /// Equal for sites that an operation may carry onto each other.
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
