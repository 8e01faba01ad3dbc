//! Simple functions of x, y, z and rotations: how operations act on them, and which irrep they belong to.
//!
//! Here: spaces of harmonics of one degree and of the axial vector (Rx, Ry, Rz), with named functions in them.
//! Not here: matrices of irreps on them (`group::matrices`).

use super::harmonics;
use super::schoenflies::GroupName;
use nalgebra::{DVector, Matrix3};

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

/// A set of functions that every operation turns among themselves.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub(super) enum Space {
    /// Real solid harmonics of one degree.
    Harmonics(usize),
    /// Rx, Ry, Rz.
    Rotations,
}

/// A function of a space: its components and what it is called.
pub(super) struct Named {
    pub(super) vector: DVector<f64>,
    pub(super) name: String,
}

/// The matrix of an operation without its zeros: (row, column, value).
pub(super) struct Sparse(Vec<(usize, usize, f64)>);

impl Sparse {
    pub(super) fn times(&self, vector: &DVector<f64>) -> DVector<f64> {
        let mut image = DVector::zeros(vector.len());
        for &(row, column, value) in &self.0 {
            image[row] += value * vector[column];
        }
        image
    }
}

impl Space {
    pub(super) fn dimension(self) -> usize {
        match self {
            Self::Harmonics(l) => 2 * l + 1,
            Self::Rotations => 3,
        }
    }

    /// How an operation acts; column j is the image of function j.
    pub(super) fn matrix(self, operation: &Matrix3<f64>) -> Sparse {
        let dense = match self {
            Self::Harmonics(l) => harmonics::rotation(l, operation),
            // An axial vector turns like a polar one and stays under inversion.
            Self::Rotations => {
                let axial = operation * operation.determinant();
                nalgebra::DMatrix::from_fn(3, 3, |i, j| axial[(i, j)])
            }
        };
        let n = dense.ncols();
        let entries = (0..n).flat_map(|column| (0..n).map(move |row| (row, column)));
        Sparse(
            entries
                .map(|(row, column)| (row, column, dense[(row, column)]))
                .filter(|(_, _, value)| value.abs() > 1e-14)
                .collect(),
        )
    }

    /// Trace of an operation's matrix, from its angle alone.
    pub(super) fn character(self, operation: &Matrix3<f64>) -> f64 {
        let proper = operation.determinant() > 0.0;
        let rotation = if proper { *operation } else { -operation };
        match self {
            Self::Rotations => rotation.trace(),
            Self::Harmonics(l) => {
                let trace = harmonic_character(l, super::operation::axis_angle(&rotation).1);
                if proper || l % 2 == 0 { trace } else { -trace }
            }
        }
    }

    /// Named functions that span the space, orthonormal, in the order in which partners are looked for.
    pub(super) fn functions(self, group: GroupName) -> Vec<Named> {
        let n = self.dimension();
        let unit = |at: usize, name: &str| Named {
            vector: DVector::from_fn(n, |i, _| if i == at { 1.0 } else { 0.0 }),
            name: name.to_owned(),
        };
        let units = |list: &[(usize, &str)]| list.iter().map(|(at, name)| unit(*at, name)).collect();
        match self {
            Self::Rotations => units(&[(0, "Rx"), (1, "Ry"), (2, "Rz")]),
            Self::Harmonics(0) => units(&[(0, "1")]),
            Self::Harmonics(1) => units(&[(1, "x"), (2, "y"), (0, "z")]),
            Self::Harmonics(2) => units(&[(0, "z2"), (3, "x2-y2"), (4, "xy"), (1, "xz"), (2, "yz")]),
            Self::Harmonics(3) if is_cubic(group) => {
                let (five, three) = (0.625_f64.sqrt(), 0.375_f64.sqrt());
                let mix = |a: (usize, f64), b: (usize, f64), name: &str| {
                    let mut vector = DVector::zeros(n);
                    vector[a.0] = a.1;
                    vector[b.0] = b.1;
                    Named { vector, name: name.to_owned() }
                };
                vec![
                    unit(4, "xyz"),
                    mix((1, -three), (5, five), "x3"),
                    mix((2, -three), (6, -five), "y3"),
                    unit(0, "z3"),
                    mix((1, five), (5, three), "x(z2-y2)"),
                    mix((2, five), (6, -three), "y(z2-x2)"),
                    unit(3, "z(x2-y2)"),
                ]
            }
            Self::Harmonics(3) => units(&[
                (0, "z3"),
                (1, "xz2"),
                (2, "yz2"),
                (3, "z(x2-y2)"),
                (4, "xyz"),
                (5, "x(x2-3y2)"),
                (6, "y(3x2-y2)"),
            ]),
            Self::Harmonics(l) => {
                let function = |at: usize| {
                    let sign = match at {
                        0 => "",
                        at if at % 2 == 1 => "+",
                        _ => "-",
                    };
                    unit(at, &format!("Y({l},{sign}{})", at.div_ceil(2)))
                };
                if is_cubic(group) || is_icosahedral(group) {
                    (0..n).map(function).collect()
                } else {
                    // About one axis what is new at this degree has the highest |m|.
                    (1..=l).rev().flat_map(|m| [2 * m - 1, 2 * m]).chain([0]).map(function).collect()
                }
            }
        }
    }
}

/// Groups whose axes treat x, y and z alike.
fn is_cubic(group: GroupName) -> bool {
    matches!(group, GroupName::T | GroupName::Td | GroupName::Th | GroupName::O | GroupName::Oh)
}

fn is_icosahedral(group: GroupName) -> bool {
    matches!(group, GroupName::I | GroupName::Ih | GroupName::K)
}

/// Trace of a turn by `angle` on the functions of degree l: 1 + 2Σ cos(m·angle).
pub(super) fn harmonic_character(l: usize, angle: f64) -> f64 {
    (1..=l).map(|m| 2.0 * (m as f64 * angle).cos()).sum::<f64>() + 1.0
}
