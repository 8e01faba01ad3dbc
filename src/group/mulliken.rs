//! Which name an irrep gets: Mulliken's rules applied to characters and axes of the standard frame.
//!
//! Here: real characters in, names out. Not here: how names print (`group::irrep_name`).
//!
//! Source of the rules: Report on Notation for the Spectra of Polyatomic Molecules, J. Chem. Phys. 23, 1997 (1955), kept by the
//! IUPAC Recommendations 1997, Pure Appl. Chem. 69, 1641 (1997).

use super::elements::{same, turn_z};
use super::irrep_name::{IrrepName, Letter, Parity, Prime, Reflection};
use super::schoenflies::GroupName;
use nalgebra::{Matrix3, Vector3};

/// The operations whose characters decide the name; indices of elements.
pub(super) struct Landmarks {
    name: GroupName,
    /// Turn by the smallest angle about z: Cn, or S2n in D(n)d with n even and in S(2n) with n even; with 2π over its angle.
    principal: Option<(usize, u32)>,
    /// Half turn about x, or else the xz plane.
    secondary: Option<usize>,
    /// Half turns about z, y, x.
    half_turns: [Option<usize>; 3],
    horizontal: Option<usize>,
    inversion: Option<usize>,
}

impl Landmarks {
    pub(super) fn of(name: GroupName, operations: &[Matrix3<f64>]) -> Self {
        let find = |matrix: Matrix3<f64>| operations.iter().position(|operation| same(operation, &matrix));
        let diagonal = |x: f64, y: f64, z: f64| find(Matrix3::from_diagonal(&Vector3::new(x, y, z)));
        let improper = |n| find(Matrix3::from_diagonal(&Vector3::new(1.0, 1.0, -1.0)) * turn_z(1, n)).map(|at| (at, n));
        let proper = |n| find(turn_z(1, n)).map(|at| (at, n));
        let principal = match name {
            GroupName::Cn(n) | GroupName::Cnv(n) | GroupName::Cnh(n) | GroupName::Dn(n) | GroupName::Dnh(n) => {
                proper(n)
            }
            GroupName::Dnd(n) if n % 2 == 0 => improper(2 * n),
            GroupName::Dnd(n) => proper(n),
            GroupName::Sn(n) if n % 4 == 0 => improper(n),
            GroupName::Sn(n) => proper(n / 2),
            GroupName::Td => improper(4),
            GroupName::O | GroupName::Oh => proper(4),
            GroupName::I | GroupName::Ih => proper(5),
            GroupName::Cinfv | GroupName::Dinfh => proper(super::elements::LINEAR_AXIS_ORDER),
            GroupName::C1 | GroupName::Cs | GroupName::Ci | GroupName::T | GroupName::Th | GroupName::K => None,
        };
        let (half_turn_x, plane_xz) = (diagonal(1.0, -1.0, -1.0), diagonal(1.0, -1.0, 1.0));
        let secondary = match name {
            GroupName::Dn(_) | GroupName::Dnh(_) | GroupName::Dnd(_) => half_turn_x,
            // In linear groups the planes decide between Σ⁺ and Σ⁻.
            GroupName::Cnv(_) | GroupName::Cinfv | GroupName::Dinfh => plane_xz,
            _ => None,
        };
        Self {
            name,
            principal,
            secondary,
            half_turns: [diagonal(-1.0, -1.0, 1.0), diagonal(-1.0, 1.0, -1.0), half_turn_x],
            horizontal: diagonal(1.0, 1.0, -1.0),
            inversion: diagonal(-1.0, -1.0, -1.0),
        }
    }

    /// The name of the irrep of this dimension (of the real representation) and characters by element.
    ///
    /// `None` for irreps of the finite stand-in of a linear group that belong to no irrep of the linear group.
    pub(super) fn name(&self, dimension: usize, character: impl Fn(usize) -> f64) -> Option<IrrepName> {
        let positive = |at: usize| character(at) > 0.0;
        let parity = self.inversion.map(|at| if positive(at) { Parity::Even } else { Parity::Odd });
        if matches!(self.name, GroupName::Cinfv | GroupName::Dinfh) {
            return self.linear(dimension, parity, character);
        }
        let primed = match self.name {
            GroupName::Cs => true,
            GroupName::Cnh(n) | GroupName::Dnh(n) => n % 2 == 1,
            _ => false,
        };
        let prime =
            self.horizontal.filter(|_| primed).map(|at| if positive(at) { Prime::Single } else { Prime::Double });
        let number_by = |at: Option<usize>| at.map(|at| if positive(at) { 1 } else { 2 });
        let (letter, number) = match dimension {
            1 if matches!(self.name, GroupName::Dn(2) | GroupName::Dnh(2)) => {
                let kept: Vec<u8> =
                    (1..).zip(self.half_turns).filter(|(_, at)| at.is_some_and(positive)).map(|(n, _)| n).collect();
                match kept.as_slice() {
                    [axis] => (Letter::B, Some(*axis)),
                    _ => (Letter::A, None),
                }
            }
            1 if matches!(self.name, GroupName::O | GroupName::Oh | GroupName::Td) => {
                (Letter::A, number_by(self.principal.map(|(at, _)| at)))
            }
            1 => {
                let symmetric = self.principal.is_none_or(|(at, _)| positive(at));
                (if symmetric { Letter::A } else { Letter::B }, number_by(self.secondary))
            }
            2 => (Letter::E, self.turns(&character)),
            3 => (
                Letter::T,
                // In the icosahedral groups the traces are 1 + 2cos72° > 0 and 1 + 2cos144° < 0, in the cubic ones 1 and −1.
                number_by(self.principal.map(|(at, _)| at)),
            ),
            4 => (Letter::G, None),
            5 => (Letter::H, None),
            _ => return None,
        };
        Some(IrrepName::Mulliken { parity, prime, letter, number })
    }

    /// k of E_k: the character under the principal turn by 2π/n is 2cos(2πk/n). No number where there is only one k.
    fn turns(&self, character: impl Fn(usize) -> f64) -> Option<u8> {
        if matches!(self.name, GroupName::Td | GroupName::O | GroupName::Oh) {
            return None;
        }
        let (at, n) = self.principal?;
        let highest = (n - 1) / 2;
        if highest == 1 { None } else { quantum_number(character(at), n) }
    }

    fn linear(&self, dimension: usize, parity: Option<Parity>, character: impl Fn(usize) -> f64) -> Option<IrrepName> {
        let (principal, n) = self.principal?;
        if dimension == 2 {
            let m = quantum_number(character(principal), n)?;
            return Some(IrrepName::Linear { parity, m, reflection: None });
        }
        // χ = −1 under the smallest turn is |m| = n/2, where both functions of a pair part: beyond the table.
        if character(principal) < 0.0 {
            return None;
        }
        let reflection = if character(self.secondary?) > 0.0 { Reflection::Plus } else { Reflection::Minus };
        Some(IrrepName::Linear { parity, m: 0, reflection: Some(reflection) })
    }
}

/// k with χ = 2cos(2πk/n), 0 ≤ k ≤ n/2.
fn quantum_number(character: f64, n: u32) -> Option<u8> {
    let turns = (character / 2.0).clamp(-1.0, 1.0).acos() / std::f64::consts::TAU * f64::from(n);
    #[expect(clippy::cast_possible_truncation, clippy::cast_sign_loss, reason = "between 0 and n/2 ≤ 64")]
    let k = turns.round() as u8;
    (k > 0).then_some(k)
}
