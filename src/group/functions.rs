//! Which simple functions of x, y, z and which rotations belong to an irrep.

/// Simple functions of an irrep; partners of one set stand in one entry, `(x, y)`.
#[derive(Debug, Clone, PartialEq, Eq, Default)]
pub struct Functions {
    /// Of x, y, z.
    pub linear: Vec<String>,
    /// Of Rx, Ry, Rz.
    pub rotations: Vec<String>,
    /// Of the products of two: `x2+y2`, `z2`, `(xz, yz)`.
    pub quadratic: Vec<String>,
    /// Of the pure functions of degree three, where they are simple.
    pub cubic: Vec<String>,
}
