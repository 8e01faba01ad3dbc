//! What symmetry allows between two irreps: electric and magnetic dipole, quadrupole, two photons, vibronic helpers.
//!
//! Here: rules by name, no molecule needed. Not here: how strong anything is (`selection::moments`).

use crate::group::{GroupError, GroupName, PointGroup};
use nalgebra::{Matrix3, Matrix6};

/// Names of the six quadratic functions in the order used here.
pub const QUADRATIC: [&str; 6] = ["xx", "yy", "zz", "xy", "xz", "yz"];

/// A weight of an irrep in a function counts from here on: exact weights are 0 or at least 1/|G|.
const PRESENT: f64 = 1e-6;

/// Which irreps the functions of the operators belong to, worked out once a group.
#[derive(Debug, Clone)]
pub struct Operators {
    /// For x, y, z: the irreps it has a part in.
    dipole: [Vec<usize>; 3],
    /// For Rx, Ry, Rz.
    rotation: [Vec<usize>; 3],
    /// For xx, yy, zz, xy, xz, yz (two-photon tensor).
    quadratic: [Vec<usize>; 6],
    /// The same with the trace taken out (quadrupole).
    quadrupole: [Vec<usize>; 6],
    /// Which irreps are even under inversion; empty without a centre.
    even: Vec<bool>,
}

/// What is allowed for one pair of irreps.
#[derive(Debug, Clone, PartialEq, Eq)]
pub struct Allowed {
    /// Irreps of the product with multiplicities.
    pub product: Vec<(usize, usize)>,
    /// Indices (0, 1, 2 for x, y, z) of the allowed polarisations; empty when forbidden.
    pub electric_dipole: Vec<usize>,
    /// Indices of allowed components Rx, Ry, Rz.
    pub magnetic_dipole: Vec<usize>,
    /// Indices into [`QUADRATIC`] of allowed traceless components.
    pub quadrupole: Vec<usize>,
    /// Indices into [`QUADRATIC`] of allowed two-photon components.
    pub two_photon: Vec<usize>,
    /// With an inversion centre: whether parity changes, as Laporte's rule asks of an electric dipole.
    pub parity_changes: Option<bool>,
}

/// A vibration that opens a forbidden transition, first order (Herzberg–Teller).
#[derive(Debug, Clone, PartialEq, Eq)]
pub struct Helper {
    /// Irrep of the vibration.
    pub irrep: usize,
    /// Polarisations it gives.
    pub polarisation: Vec<usize>,
}

/// Weight of each irrep in one function that turns by `element(R)`, its own diagonal entry under R.
fn parts(group: &PointGroup, element: impl Fn(&Matrix3<f64>) -> f64) -> Vec<usize> {
    let values: Vec<f64> = group.elements().iter().map(|operation| element(operation.operation.matrix())).collect();
    let weight = |irrep: usize| -> f64 {
        group.projector_coefficients(irrep).iter().zip(&values).map(|(coefficient, value)| coefficient * value).sum()
    };
    (0..group.irreps().len()).filter(|&irrep| weight(irrep) > PRESENT).collect()
}

/// ⟨q|R|q⟩ for q = ab of unit-normalised monomials xx, yy, zz, √2 xy, √2 xz, √2 yz.
fn quadratic_matrix(matrix: &Matrix3<f64>) -> Matrix6<f64> {
    const PAIRS: [(usize, usize); 6] = [(0, 0), (1, 1), (2, 2), (0, 1), (0, 2), (1, 2)];
    Matrix6::from_fn(|row, column| {
        let ((a, b), (c, d)) = (PAIRS[row], PAIRS[column]);
        let scale = |pair: (usize, usize)| if pair.0 == pair.1 { 1.0 } else { std::f64::consts::SQRT_2 };
        scale((a, b)) * scale((c, d)) * 0.5 * (matrix[(a, c)] * matrix[(b, d)] + matrix[(a, d)] * matrix[(b, c)])
    })
}

/// The same with the trace (xx + yy + zz)/3 taken out of xx, yy, zz.
fn quadrupole_diagonal(matrix: &Matrix3<f64>, q: usize) -> f64 {
    let full = quadratic_matrix(matrix);
    // The trace is invariant: P = 1 − tt/3 on the first three components.
    if q < 3 { full[(q, q)] - 1.0 / 3.0 } else { full[(q, q)] }
}

/// For each irrep whether it is even under inversion; empty without a centre.
fn even(group: &PointGroup) -> Vec<bool> {
    let inversion =
        group.elements().iter().find(|element| (element.operation.matrix() + Matrix3::identity()).amax() < 1e-9);
    inversion.map_or(Vec::new(), |inversion| {
        group.irreps().iter().map(|irrep| irrep.characters[inversion.class_idx] > 0.0).collect()
    })
}

impl Operators {
    /// Projects the functions of each operator onto the irreps.
    #[must_use]
    pub fn new(group: &PointGroup) -> Self {
        if group.name() == GroupName::K {
            return Self::of_atom(group);
        }
        Self {
            dipole: std::array::from_fn(|a| parts(group, |matrix| matrix[(a, a)])),
            rotation: std::array::from_fn(|a| parts(group, |matrix| matrix.determinant() * matrix[(a, a)])),
            quadratic: std::array::from_fn(|q| parts(group, |matrix| quadratic_matrix(matrix)[(q, q)])),
            quadrupole: std::array::from_fn(|q| parts(group, |matrix| quadrupole_diagonal(matrix, q))),
            even: even(group),
        }
    }

    /// The elements held of all rotations are a sample, too few to project with: the operators are known by their angular momentum.
    fn of_atom(group: &PointGroup) -> Self {
        let of = |l: usize| group.orbital_irrep(l).into_iter().collect::<Vec<_>>();
        let rotation: Vec<usize> = group.rotation_irreps().into_iter().map(|(irrep, _)| irrep).collect();
        let with_trace = [of(0), of(2)].concat();
        Self {
            dipole: std::array::from_fn(|_| of(1)),
            rotation: std::array::from_fn(|_| rotation.clone()),
            quadratic: std::array::from_fn(|q| if q < 3 { with_trace.clone() } else { of(2) }),
            quadrupole: std::array::from_fn(|_| of(2)),
            even: even(group),
        }
    }

    /// The rules between irreps `from` and `to`.
    ///
    /// # Errors
    /// [`GroupError::BeyondTable`] where a product in a continuous group leaves the irreps kept.
    pub fn between(&self, group: &PointGroup, from: usize, to: usize) -> Result<Allowed, GroupError> {
        let product = group.product(from, to)?;
        let held = |irreps: &[usize]| irreps.iter().any(|irrep| product.iter().any(|term| term.0 == *irrep));
        let which = |components: &[Vec<usize>]| -> Vec<usize> {
            (0..components.len()).filter(|&component| held(&components[component])).collect()
        };
        Ok(Allowed {
            electric_dipole: which(&self.dipole),
            magnetic_dipole: which(&self.rotation),
            quadrupole: which(&self.quadrupole),
            two_photon: which(&self.quadratic),
            parity_changes: (!self.even.is_empty()).then(|| self.even[from] != self.even[to]),
            product,
        })
    }

    /// The irreps that each of x, y, z has a part in.
    #[must_use]
    pub fn of_dipole(&self) -> &[Vec<usize>; 3] {
        &self.dipole
    }

    /// The same of Rx, Ry, Rz.
    #[must_use]
    pub fn of_rotation(&self) -> &[Vec<usize>; 3] {
        &self.rotation
    }

    /// The same of the six traceless products in the order of [`QUADRATIC`].
    #[must_use]
    pub fn of_quadrupole(&self) -> &[Vec<usize>; 6] {
        &self.quadrupole
    }

    /// Which of x, y, z reach a state of irrep `state` from the totally symmetric one.
    #[must_use]
    pub fn polarisation(&self, state: usize) -> Vec<usize> {
        (0..3).filter(|&axis| self.dipole[axis].contains(&state)).collect()
    }

    /// Whether a vibration of this irrep changes the second power of a coordinate: Raman activity.
    #[must_use]
    pub fn is_raman_active(&self, irrep: usize) -> bool {
        self.quadratic.iter().any(|parts| parts.contains(&irrep))
    }

    /// Whether an irrep is even under inversion; false without a centre.
    #[must_use]
    pub fn is_even(&self, irrep: usize) -> bool {
        self.even.get(irrep).copied().unwrap_or(false)
    }

    /// The irreps of Rx, Ry, Rz, each once.
    #[must_use]
    pub fn rotations(&self) -> Vec<usize> {
        let mut irreps = self.rotation.concat();
        irreps.sort_unstable();
        irreps.dedup();
        irreps
    }

    /// Irreps of the three sublevels of a triplet whose orbital part has irrep `orbital`, with multiplicities.
    ///
    /// Spin–orbit coupling is totally symmetric, so a sublevel mixes with singlets of the same irrep.
    ///
    /// # Errors
    /// As [`PointGroup::product`].
    pub fn triplet_sublevels(&self, group: &PointGroup, orbital: usize) -> Result<Vec<(usize, usize)>, GroupError> {
        let mut counts = vec![0; group.irreps().len()];
        for rotation in self.rotations() {
            for (irrep, n) in group.product(orbital, rotation)? {
                counts[irrep] += n;
            }
        }
        Ok(counts.into_iter().enumerate().filter(|(_, n)| *n > 0).collect())
    }

    /// Vibrations that make a state of irrep `state` reachable by an electric dipole from the totally symmetric one.
    ///
    /// Irreps whose product leaves those kept of a continuous group are left out: no vibration has them.
    #[must_use]
    pub fn helpers(&self, group: &PointGroup, state: usize) -> Vec<Helper> {
        let opened = |irrep: usize| {
            let product = group.product(irrep, state).ok()?;
            let within =
                |axis: &usize| self.dipole[*axis].iter().any(|part| product.iter().any(|term| term.0 == *part));
            let polarisation: Vec<usize> = (0..3).filter(within).collect();
            (!polarisation.is_empty()).then_some(Helper { irrep, polarisation })
        };
        (0..group.irreps().len()).filter_map(opened).collect()
    }
}
