//! Which way we look: a parallel projection onto the paper, z of the standard frame upwards.
//!
//! Not here: pixels (`picture::raster`).

use nalgebra::{Matrix3, Vector3};

/// A parallel projection.
#[derive(Debug, Clone, PartialEq)]
pub struct View {
    /// Rows: to the right, upwards, towards the eye.
    turn: Matrix3<f64>,
    /// In words.
    pub description: String,
}

impl View {
    /// From a place given by its azimuth from x towards y and its elevation above xy, in degrees.
    #[must_use]
    pub fn from_angles(azimuth: f64, elevation: f64) -> Self {
        let (a, e) = (azimuth.to_radians(), elevation.to_radians());
        let right = Vector3::new(-a.sin(), a.cos(), 0.0);
        let towards = Vector3::new(e.cos() * a.cos(), e.cos() * a.sin(), e.sin());
        let up = towards.cross(&right);
        Self {
            turn: Matrix3::from_rows(&[right.transpose(), up.transpose(), towards.transpose()]),
            description: format!(
                "parallel projection seen from azimuth {azimuth}° (from x towards y) and elevation {elevation}° above the xy plane, z upwards"
            ),
        }
    }

    /// The view of every picture: all three axes can be told apart, none is hidden behind another.
    #[must_use]
    pub fn standard() -> Self {
        Self::from_angles(25.0, 22.0)
    }

    /// Right, up and towards the eye of a vector of the standard frame.
    #[must_use]
    pub fn project(&self, vector: &Vector3<f64>) -> Vector3<f64> {
        self.turn * vector
    }
}
