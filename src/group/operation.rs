//! A symmetry operation as an orthogonal matrix, and what kind of operation it is.
//!
//! Not here: products and groups (`group::multiplication`), names that depend on the whole group (`group::symbols`).

use nalgebra::{Matrix3, Unit, Vector3};
use thiserror::Error;

/// What an [`Operation`] does, read off its matrix.
#[derive(Debug, Clone, Copy, PartialEq)]
pub enum Kind {
    /// Nothing.
    Identity,
    /// Inversion through the centre.
    Inversion,
    /// Mirror plane with this unit normal.
    Reflection {
        /// Unit normal of the plane.
        normal: Unit<Vector3<f64>>,
    },
    /// Turn by `angle` (0, π] about `axis`, right-handed.
    Rotation {
        /// Unit vector along the axis.
        axis: Unit<Vector3<f64>>,
        /// Angle in radians.
        angle: f64,
    },
    /// Turn by `angle` about `axis`, then reflection in the plane across it.
    Improper {
        /// Unit vector along the axis.
        axis: Unit<Vector3<f64>>,
        /// Angle in radians.
        angle: f64,
    },
}

/// A matrix that is no symmetry operation.
#[derive(Debug, Clone, Copy, PartialEq, Error)]
pub enum OperationError {
    /// MᵀM differs from 1.
    #[error("matrix is not orthogonal: it deviates by {deviation:e}, limit {limit:e}")]
    NotOrthogonal {
        /// Largest entry of |MᵀM − 1|.
        deviation: f64,
        /// The limit asked for.
        limit: f64,
    },
}

/// A symmetry operation about the origin: a matrix acting on columns (x, y, z).
///
/// Invariant: orthogonal to within the limit given to [`Operation::new`].
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Operation {
    matrix: Matrix3<f64>,
}

impl Operation {
    /// Checks orthogonality to within `limit`.
    ///
    /// # Errors
    /// [`OperationError::NotOrthogonal`] with the measured deviation.
    pub fn new(matrix: Matrix3<f64>, limit: f64) -> Result<Self, OperationError> {
        let deviation = (matrix.transpose() * matrix - Matrix3::identity()).amax();
        // A NaN compares false and is refused.
        if deviation <= limit { Ok(Self { matrix }) } else { Err(OperationError::NotOrthogonal { deviation, limit }) }
    }

    /// The 3 × 3 orthogonal matrix.
    #[must_use]
    pub fn matrix(&self) -> &Matrix3<f64> {
        &self.matrix
    }

    /// True for rotations and the identity, false for operations that change handedness.
    #[must_use]
    pub fn is_proper(&self) -> bool {
        self.matrix.determinant() > 0.0
    }

    /// What the operation does; angles are exact to about 1e-8 for matrices orthogonal to 1e-15.
    ///
    /// Axis and angle come from the antisymmetric part, or from the symmetric part near a half turn.
    #[must_use]
    pub fn kind(&self) -> Kind {
        const LIMIT: f64 = 1e-6;
        let proper = self.is_proper();
        let rotation = if proper { self.matrix } else { -self.matrix };
        let (axis, angle) = axis_angle(&rotation);
        // −1·C(φ) = S(φ + π): the improper operation turns by π − φ the other way round.
        match (proper, angle) {
            (true, a) if a < LIMIT => Kind::Identity,
            (false, a) if a < LIMIT => Kind::Inversion,
            (false, a) if a > std::f64::consts::PI - LIMIT => Kind::Reflection { normal: axis },
            (true, angle) => Kind::Rotation { axis, angle },
            (false, a) => Kind::Improper { axis: -axis, angle: std::f64::consts::PI - a },
        }
    }
}

/// Axis and angle in [0, π] of a proper rotation.
pub(super) fn axis_angle(rotation: &Matrix3<f64>) -> (Unit<Vector3<f64>>, f64) {
    let twist = Vector3::new(
        rotation[(2, 1)] - rotation[(1, 2)],
        rotation[(0, 2)] - rotation[(2, 0)],
        rotation[(1, 0)] - rotation[(0, 1)],
    );
    let angle = (0.5 * twist.norm()).atan2(0.5 * (rotation.trace() - 1.0));
    if twist.norm() > 1e-4 {
        return (Unit::new_normalize(twist), angle);
    }
    if angle < 1.0 {
        return (Vector3::z_axis(), angle);
    }
    // Near a half turn R + 1 = 2 aaᵀ: take the longest column; its first large entry is made positive.
    let twice = rotation + Matrix3::identity();
    let longest = (0..3).max_by(|&i, &j| twice.column(i).norm().total_cmp(&twice.column(j).norm())).unwrap_or(2);
    let mut axis: Vector3<f64> = twice.column(longest).into();
    if axis.dot(&twist) < 0.0 {
        axis = -axis;
    }
    (Unit::new_normalize(axis), angle)
}
