//! Laws that hold for every point group, tried on every family to n = 30, the cubic and icosahedral groups.
#![allow(clippy::unwrap_used, reason = "a test may stop at once")]

use nalgebra::{DMatrix, Matrix3};
use orbsieve::group::irrep_name::Letter;
use std::sync::LazyLock;

use orbsieve::group::{GroupError, GroupName, IrrepName, PointGroup, harmonics, identify};

/// Every finite group to n = 30.
fn every_name() -> Vec<GroupName> {
    use GroupName::{C1, Ci, Cn, Cnh, Cnv, Cs, Dn, Dnd, Dnh, I, Ih, O, Oh, Sn, T, Td, Th};
    let mut names = vec![C1, Cs, Ci, T, Td, Th, O, Oh, I, Ih];
    for n in 2..=30 {
        names.extend([Cn(n), Cnv(n), Cnh(n), Dn(n), Dnh(n), Dnd(n), Sn(2 * n)]);
    }
    names
}

fn group(name: GroupName) -> PointGroup {
    PointGroup::standard(name).unwrap_or_else(|error| panic!("{name}: {error}"))
}

/// All of [`every_name`], made once.
static GROUPS: LazyLock<Vec<PointGroup>> = LazyLock::new(|| every_name().into_iter().map(group).collect());

#[test]
fn rows_and_columns_of_character_tables_are_orthogonal() {
    for group in GROUPS.iter() {
        let name = group.name();
        let order = group.order() as f64;
        assert_eq!(name.order(), Some(group.order()));
        for (i, a) in group.irreps().iter().enumerate() {
            for (j, b) in group.irreps().iter().enumerate() {
                let sum: f64 = group
                    .classes()
                    .iter()
                    .zip(a.characters.iter().zip(&b.characters))
                    .map(|(c, (x, y))| c.weight * x * y)
                    .sum();
                let expected = if i == j { a.constituents as f64 } else { 0.0 };
                assert!((sum - expected).abs() < 1e-10, "{name}: {} and {}: {sum}", a.name, b.name);
            }
            assert!((a.characters[0] - a.dimension as f64).abs() < 1e-12);
        }
        // Σ d² over the complex irreps is the order: a pair of conjugates of dimension d/2 each gives 2(d/2)².
        let squares: usize =
            group.irreps().iter().map(|irrep| irrep.dimension * irrep.dimension / irrep.constituents).sum();
        assert_eq!(squares, group.order(), "{name}");
        // Columns: Σ χ(a)χ(b)/constituents is |G|/size where b is conjugate to a or to a⁻¹, half of it where only to one of them,
        // since the real character of a pair is that of an element and of its inverse.
        for (i, a) in group.classes().iter().enumerate() {
            let inverse = group.elements()[group.inverse(a.members[0])].class_idx;
            for (j, _) in group.classes().iter().enumerate() {
                let sum: f64 =
                    group.irreps().iter().map(|r| r.characters[i] * r.characters[j] / r.constituents as f64).sum();
                let centraliser = order / a.members.len() as f64;
                let expected = match (j == i, j == inverse) {
                    (true, true) => centraliser,
                    (true, false) | (false, true) => centraliser / 2.0,
                    (false, false) => 0.0,
                };
                assert!((sum - expected).abs() < 1e-9 * order, "{name}: columns {i} and {j}: {sum}");
            }
        }
    }
}

#[test]
fn matrices_represent_the_group_and_have_its_characters() {
    for group in GROUPS.iter() {
        let name = group.name();
        for irrep in group.irreps() {
            assert_eq!(irrep.matrices.len(), group.order());
            assert_eq!(irrep.partners.len(), irrep.dimension, "{name} {}", irrep.name);
            for (a, (element, matrix)) in group.elements().iter().zip(&irrep.matrices).enumerate() {
                let character = irrep.characters[element.class_idx];
                assert!(
                    (matrix.trace() - character).abs() < 1e-9,
                    "{name} {}: {}: {} {character}",
                    irrep.name,
                    element.symbol,
                    matrix.trace()
                );
                let product = matrix.transpose() * matrix;
                assert!((product - nalgebra::DMatrix::identity(irrep.dimension, irrep.dimension)).amax() < 1e-9);
                for b in (0..group.order()).step_by(1 + group.order() / 12) {
                    let difference = matrix * &irrep.matrices[b] - &irrep.matrices[group.multiply(a, b)];
                    assert!(difference.amax() < 1e-9, "{name} {}: D(a)D(b) = D(ab)", irrep.name);
                }
            }
        }
    }
}

#[test]
fn products_are_whole_and_squares_split() {
    for group in GROUPS.iter() {
        let name = group.name();
        let n = group.irreps().len();
        // All pairs of small groups, a sample of large ones.
        for (a, b) in (0..n).flat_map(|a| (0..n).step_by(1 + n / 16).map(move |b| (a, b))) {
            let product = group.product(a, b).unwrap_or_else(|error| panic!("{name}: {error}"));
            let dimension: usize = product.iter().map(|(at, times)| times * group.irreps()[*at].dimension).sum();
            assert_eq!(dimension, group.irreps()[a].dimension * group.irreps()[b].dimension);
        }
        for a in 0..n {
            let mut halves = group.symmetric_square(a).unwrap();
            halves.extend(group.antisymmetric_square(a).unwrap());
            let mut counts = vec![0; n];
            for (at, times) in halves {
                counts[at] += times;
            }
            let whole: Vec<(usize, usize)> = counts.into_iter().enumerate().filter(|(_, times)| *times > 0).collect();
            assert_eq!(whole, group.product(a, a).unwrap(), "{name} {}", group.irreps()[a].name);
            assert!(group.product(a, a).unwrap().iter().any(|(at, _)| *at == group.totally_symmetric()));
        }
    }
}

#[test]
fn a_name_survives_identification_and_printing() {
    for group in GROUPS.iter() {
        let name = group.name();
        let operations: Vec<_> = group.elements().iter().map(|element| *element.operation.matrix()).collect();
        assert_eq!(identify(&operations).unwrap().0, name);
        assert_eq!(name.to_string().parse::<GroupName>().unwrap(), name);
        assert_eq!(name.pretty().parse::<GroupName>().unwrap(), name);
    }
}

#[test]
fn irrep_names_are_distinct_and_parse_back() {
    let continuous = [GroupName::Cinfv, GroupName::Dinfh, GroupName::K].map(group);
    for group in GROUPS.iter().chain(&continuous) {
        let name = group.name();
        for (at, irrep) in group.irreps().iter().enumerate() {
            let read = irrep.name.to_string().parse().unwrap();
            assert_eq!(group.irrep_idx(&read), Ok(at), "{name} {}", irrep.name);
        }
        assert_eq!(group.totally_symmetric(), 0);
    }
}

/// Σ over the group of D_ij D_kl is |G|/d when i = k and j = l, else 0 (irreps over the real numbers with one constituent), and
/// between different irreps always 0.
#[test]
fn matrix_elements_are_orthogonal() {
    use GroupName::{Cn, Dn, Dnd, I, O, Td};
    for name in [Cn(5), Dn(3), Dnd(4), GroupName::Dnh(6), GroupName::Cnv(7), Td, O, I, GroupName::Ih, GroupName::Th] {
        let group = group(name);
        let entries: Vec<(usize, usize, usize)> = group
            .irreps()
            .iter()
            .enumerate()
            .filter(|(_, irrep)| irrep.constituents == 1)
            .flat_map(|(at, irrep)| {
                (0..irrep.dimension).flat_map(move |i| (0..irrep.dimension).map(move |j| (at, i, j)))
            })
            .collect();
        for &(a, i, j) in &entries {
            for &(b, k, l) in &entries {
                let pairs = group.irreps()[a].matrices.iter().zip(&group.irreps()[b].matrices);
                let sum: f64 = pairs.map(|(left, right)| left[(i, j)] * right[(k, l)]).sum();
                let expected = if (a, i, j) == (b, k, l) {
                    group.order() as f64 / group.irreps()[a].dimension as f64
                } else {
                    0.0
                };
                assert!((sum - expected).abs() < 1e-8, "{name}");
            }
        }
    }
}

#[test]
fn the_product_table_is_that_of_the_matrices() {
    for group in GROUPS.iter() {
        let name = group.name();
        let matrix = |at: usize| group.elements()[at].operation.matrix();
        assert!((matrix(0) - Matrix3::identity()).amax() < 1e-12);
        for a in 0..group.order() {
            assert!((matrix(a) * matrix(group.inverse(a)) - Matrix3::identity()).amax() < 1e-12);
            for b in (0..group.order()).step_by(1 + group.order() / 12) {
                assert!((matrix(a) * matrix(b) - matrix(group.multiply(a, b))).amax() < 1e-12, "{name}");
            }
        }
    }
}

/// Partners called x, y, z turn as coordinates do, Rx, Ry, Rz as an axial vector, degree 2 as products of two coordinates.
#[test]
fn partners_turn_as_the_functions_they_are_named_after() {
    let mut compared = 0;
    for group in GROUPS.iter() {
        let name = group.name();
        for irrep in group.irreps().iter().filter(|irrep| irrep.dimension > 1) {
            for (element, matrix) in group.elements().iter().zip(&irrep.matrices) {
                let operation = element.operation.matrix();
                let expected = DMatrix::from_fn(irrep.dimension, irrep.dimension, |i, j| {
                    image_component(operation, &irrep.partners[i], &irrep.partners[j]).unwrap_or(f64::NAN)
                });
                if expected.iter().all(|entry| entry.is_finite()) {
                    assert!((matrix - expected).amax() < 1e-9, "{name} {} {}", irrep.name, element.symbol);
                    compared += 1;
                }
            }
        }
    }
    assert!(compared > 5000, "{compared}");
}

/// Component along function `of` of the image of function `from`, by turning vectors and symmetric traceless matrices.
fn image_component(operation: &Matrix3<f64>, of: &str, from: &str) -> Option<f64> {
    let axis = |name: &str| ["x", "y", "z"].iter().position(|axis| *axis == name);
    if let (Some(i), Some(j)) = (axis(of), axis(from)) {
        return Some(operation[(i, j)]);
    }
    let axial = |name: &str| name.strip_prefix('R').and_then(axis);
    if let (Some(i), Some(j)) = (axial(of), axial(from)) {
        return Some(operation.determinant() * operation[(i, j)]);
    }
    let (of, from) = (quadratic(of)?, quadratic(from)?);
    Some((operation * from * operation.transpose()).component_mul(&of).sum())
}

/// The matrix of a quadratic form, of unit length.
fn quadratic(name: &str) -> Option<Matrix3<f64>> {
    let entries: &[(usize, usize, f64)] = match name {
        "z2" => &[(0, 0, -1.0), (1, 1, -1.0), (2, 2, 2.0)],
        "x2-y2" => &[(0, 0, 1.0), (1, 1, -1.0)],
        "xy" => &[(0, 1, 1.0), (1, 0, 1.0)],
        "xz" => &[(0, 2, 1.0), (2, 0, 1.0)],
        "yz" => &[(1, 2, 1.0), (2, 1, 1.0)],
        _ => return None,
    };
    let mut form = Matrix3::zeros();
    for &(i, j, value) in entries {
        form[(i, j)] = value;
    }
    Some(form.normalize())
}

/// E_k has the character 2cos(2πk/n) under the principal turn: Cn, or S2n where that is the principal one.
#[test]
fn numbers_of_e_irreps_count_turns() {
    for group in GROUPS.iter() {
        let name = group.name();
        let (n, improper) = match name {
            GroupName::Cn(n) | GroupName::Cnv(n) | GroupName::Cnh(n) | GroupName::Dn(n) | GroupName::Dnh(n) => {
                (n, false)
            }
            GroupName::Dnd(n) if n % 2 == 1 => (n, false),
            GroupName::Dnd(n) => (2 * n, true),
            GroupName::Sn(n) if n % 4 == 2 => (n / 2, false),
            GroupName::Sn(n) => (n, true),
            _ => continue,
        };
        let angle = std::f64::consts::TAU / f64::from(n);
        let (c, s) = (angle.cos(), angle.sin());
        let principal = Matrix3::new(c, -s, 0.0, s, c, 0.0, 0.0, 0.0, if improper { -1.0 } else { 1.0 });
        let at = group
            .elements()
            .iter()
            .find(|element| (element.operation.matrix() - principal).amax() < 1e-9)
            .unwrap()
            .class_idx;
        let mut numbers = Vec::new();
        for irrep in group.irreps() {
            let IrrepName::Mulliken { letter, number, .. } = irrep.name else { panic!("{name}") };
            match letter {
                Letter::E => {
                    let k = number.unwrap_or(1);
                    numbers.push(k);
                    assert!(
                        (irrep.characters[at] - 2.0 * (f64::from(k) * angle).cos()).abs() < 1e-12,
                        "{name} {}",
                        irrep.name
                    );
                    assert_eq!(number.is_none(), n.div_ceil(2) - 1 == 1, "{name}: a sole E has no number");
                }
                Letter::A if n > 2 || !matches!(name, GroupName::Dn(_) | GroupName::Dnh(_)) => {
                    assert!(irrep.characters[at] > 0.0);
                }
                Letter::B if n > 2 => assert!(irrep.characters[at] < 0.0),
                _ => {}
            }
        }
        numbers.sort_unstable();
        numbers.dedup();
        assert_eq!(u32::try_from(numbers.len()), Ok(n.div_ceil(2) - 1), "{name}: every k from 1 up");
    }
}

#[test]
fn continuous_groups_keep_orthogonality_by_their_weights() {
    for name in [GroupName::Cinfv, GroupName::Dinfh, GroupName::K] {
        let group = group(name);
        assert!((group.classes().iter().map(|class| class.weight).sum::<f64>() - 1.0).abs() < 1e-12);
        for (i, a) in group.irreps().iter().enumerate() {
            for (j, b) in group.irreps().iter().enumerate() {
                let rows = a.characters.iter().zip(&b.characters).zip(group.classes());
                let mean: f64 = rows.map(|((x, y), class)| x * y * class.weight).sum();
                assert!((mean - if i == j { 1.0 } else { 0.0 }).abs() < 1e-10, "{name}: {} {}", a.name, b.name);
            }
            for (element, matrix) in group.elements().iter().zip(&a.matrices) {
                assert!((matrix.trace() - a.characters[element.class_idx]).abs() < 1e-9, "{name} {}", a.name);
            }
        }
    }
}

/// Every subgroup: its elements are the parent's seen in other axes, and subduction keeps dimensions and characters.
#[test]
fn subgroups_lie_in_their_parents() {
    use GroupName::{Cnh, Cnv, Dn, Dnd, Dnh, Ih, Oh, Sn, Td, Th};
    for name in [
        Cnh(6),
        Cnv(8),
        Dn(12),
        Dnh(6),
        Dnh(5),
        Dnd(4),
        Dnd(5),
        Dnd(6),
        Sn(12),
        Td,
        Th,
        Oh,
        Ih,
        GroupName::Dinfh,
        GroupName::Cinfv,
    ] {
        let group = group(name);
        let mut subgroups = group.subgroups().unwrap();
        subgroups.push(group.abelian_subgroup());
        for subgroup in subgroups {
            assert!((subgroup.axes.determinant() - 1.0).abs() < 1e-9);
            for (element, &at) in subgroup.group.elements().iter().zip(&subgroup.embedding) {
                let seen = subgroup.axes * group.elements()[at].operation.matrix() * subgroup.axes.transpose();
                assert!((seen - element.operation.matrix()).amax() < 1e-9, "{name} {}", subgroup.description);
            }
            for (a, irrep) in group.irreps().iter().enumerate() {
                // High |m| of a linear parent folds back in no subgroup of order 2, but C∞v keeps them all.
                let parts = group.subduce(&subgroup, a).unwrap();
                let dimension: usize =
                    parts.iter().map(|(at, times)| times * subgroup.group.irreps()[*at].dimension).sum();
                assert_eq!(dimension, irrep.dimension, "{name} {} {}", subgroup.group.name(), irrep.name);
            }
        }
    }
}

#[test]
fn what_is_no_representation_is_refused() {
    let group = group(GroupName::Td);
    assert!(matches!(group.decompose(&[1.0, 1.0]), Err(GroupError::ClassCount { found: 2, expected: 5 })));
    assert!(matches!(group.decompose(&[1.0, 0.0, 0.0, 0.0, 0.0]), Err(GroupError::NotWhole { .. })));
    assert!(matches!(group.decompose(&[-1.0; 5]), Err(GroupError::NotWhole { .. })));
    assert!(matches!(group.decompose(&[f64::NAN; 5]), Err(GroupError::NotWhole { .. })));
    assert!(PointGroup::standard(GroupName::Cn(0)).is_err());
    assert!(PointGroup::standard(GroupName::Dnh(65)).is_err());
    assert!(PointGroup::standard(GroupName::Sn(5)).is_err());
}

/// Orbitals' weights add to one: the projector coefficients of all irreps sum to the identity alone.
#[test]
fn projectors_resolve_the_identity() {
    for group in GROUPS.iter() {
        let name = group.name();
        let mut sum = vec![0.0; group.order()];
        for a in 0..group.irreps().len() {
            for (total, coefficient) in sum.iter_mut().zip(group.projector_coefficients(a)) {
                *total += coefficient;
            }
        }
        for (at, total) in sum.into_iter().enumerate() {
            let expected = if at == 0 { 1.0 } else { 0.0 };
            assert!((total - expected).abs() < 1e-10, "{name}");
        }
    }
}

/// The largest supported groups are made in full; every irrep finds partners among harmonics.
#[test]
fn the_highest_axes_work() {
    for name in ["C64", "C64v", "C64h", "D64", "D64h", "D64d", "S128", "D63d", "D63h"] {
        let group = group(name.parse().unwrap());
        assert!(group.irreps().iter().all(|irrep| irrep.matrices.len() == group.order()), "{name}");
    }
}

#[test]
fn harmonics_of_high_degree_stay_orthogonal() {
    let group = group(GroupName::I);
    for l in [3, 7, 30] {
        let matrix = harmonics::rotation(l, group.elements()[7].operation.matrix());
        let n = 2 * l + 1;
        assert!((&matrix * matrix.transpose() - DMatrix::identity(n, n)).amax() < 1e-10, "l = {l}");
    }
}
