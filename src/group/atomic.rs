//! The group of a single atom: all rotations about a point, and inversion.
//!
//! It has infinitely many classes, of which those of a quadrature over the angle of rotation are held. The elements held are those of
//! Ih, closed under products but only a sample: what is invariant under them is spherical as far as degree 5.

use super::elements::{same, standard_operations};
use super::error::GroupError;
use super::functions::{Functions, Space, harmonic_character};
use super::harmonics;
use super::irrep_name::{IrrepName, Parity};
use super::multiplication::Multiplication;
use super::operation::axis_angle;
use super::point_group::{Class, Irrep, PointGroup, elements_and_classes};
use super::schoenflies::GroupName;
use nalgebra::DMatrix;

/// Highest angular momentum of an irrep held: f⁷ reaches 12, f⁷ with an electron in a d shell 14, with two 15.
pub(super) const HIGHEST_L: u8 = 16;

/// Angles of the quadrature: products of three irreps with l ≤ 16, or of two levels with J ≤ 39/2 and an operator, are cosine sums
/// of degree 49 at most, below twice this number.
const N_ANGLES: usize = 28;

/// The group of an atom with irreps S to V (l ≤ 16), even and odd.
///
/// The mean over the group of a function of the angle φ alone is (1/π)∫(1 − cos φ)f(φ)dφ over 0…π; the midpoint rule is exact
/// for cosine sums of degree below 2N.
pub(super) fn full_rotation_group() -> Result<PointGroup, GroupError> {
    let name = GroupName::K;
    let operations = standard_operations(name);
    let multiplication = Multiplication::of(&operations, |a, b| a * b, same)?;
    let (elements, mut classes) = elements_and_classes(name, &operations, multiplication.classes());
    // Classes of the sample weigh nothing; the angles below do.
    let mut angles: Vec<(f64, bool)> = Vec::new();
    for class in &mut classes {
        class.weight = 0.0;
        let matrix = operations[class.members[0]];
        let proper = matrix.determinant() > 0.0;
        angles.push((axis_angle(&if proper { matrix } else { -matrix }).1, proper));
    }
    for proper in [true, false] {
        for j in 0..N_ANGLES {
            let angle = std::f64::consts::PI * (j as f64 + 0.5) / N_ANGLES as f64;
            classes.push(Class {
                symbol: angle_symbol(j, proper),
                members: Vec::new(),
                weight: (1.0 - angle.cos()) / (2 * N_ANGLES) as f64,
            });
            angles.push((angle, proper));
        }
    }
    let mut irreps = Vec::new();
    for parity in [Parity::Even, Parity::Odd] {
        for l in 0..=HIGHEST_L {
            let sign = |proper: bool| if proper || parity == Parity::Even { 1.0 } else { -1.0 };
            let characters = angles
                .iter()
                .map(|&(angle, proper)| sign(proper) * harmonic_character(usize::from(l), angle))
                .collect();
            irreps.push(irrep(l, parity, characters, &operations, &multiplication));
        }
    }
    Ok(PointGroup { name, elements, multiplication, classes, irreps })
}

/// `C(phi)` for the first angle of the quadrature, `C(3phi)`, `C(5phi)` … for the others.
fn angle_symbol(j: usize, proper: bool) -> String {
    let letters = if proper { "C" } else { "iC" };
    if j == 0 { format!("{letters}(phi)") } else { format!("{letters}({}phi)", 2 * j + 1) }
}

fn irrep(
    l: u8,
    parity: Parity,
    characters: Vec<f64>,
    operations: &[nalgebra::Matrix3<f64>],
    group: &Multiplication,
) -> Irrep {
    let degree = usize::from(l);
    let dimension = 2 * degree + 1;
    // Harmonics of degree l have parity (−1)^l; the other parity is the same under rotations.
    let natural = l.is_multiple_of(2) == (parity == Parity::Even);
    let functions = Space::Harmonics(degree).functions(GroupName::K);
    let basis = DMatrix::from_columns(&functions.iter().map(|function| function.vector.clone()).collect::<Vec<_>>());
    let generators: Vec<(usize, DMatrix<f64>)> = group
        .generators()
        .map(|at| {
            let operation = operations[at];
            let sign = if natural || operation.determinant() > 0.0 { 1.0 } else { -1.0 };
            (at, basis.transpose() * harmonics::rotation(degree, &operation) * &basis * sign)
        })
        .collect();
    let mut matrices = vec![DMatrix::identity(dimension, dimension); group.order()];
    for step in group.steps() {
        if let Some((_, generator)) = generators.iter().find(|(at, _)| *at == step.generator) {
            matrices[step.element] = generator * &matrices[step.previous];
        }
    }
    let names: Vec<String> = functions.into_iter().map(|function| function.name).collect();
    let set = || vec![format!("({})", names.join(", "))];
    let mut simple = Functions::default();
    match (l, parity) {
        (0, Parity::Even) => simple.quadratic = vec!["x2+y2+z2".to_owned()],
        (1, Parity::Odd) => simple.linear = set(),
        (1, Parity::Even) => simple.rotations = vec!["(Rx, Ry, Rz)".to_owned()],
        (2, Parity::Even) => simple.quadratic = vec!["(2z2-x2-y2, x2-y2, xy, xz, yz)".to_owned()],
        (3, Parity::Odd) => simple.cubic = set(),
        _ => {}
    }
    let partners = if (l, parity) == (1, Parity::Even) {
        ["Rx", "Ry", "Rz"].map(str::to_owned).to_vec()
    } else if natural {
        names
    } else {
        (1..=dimension).map(|number| number.to_string()).collect()
    };
    Irrep {
        name: IrrepName::Atomic { parity, l },
        dimension,
        constituents: 1,
        characters,
        matrices,
        partners,
        functions: simple,
    }
}
