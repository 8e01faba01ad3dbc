//! Laws that hold for every point group, tried on every family to n = 30, the cubic and icosahedral groups.

use orbsieve::group::{GroupName, PointGroup, identify};

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

#[test]
fn rows_and_columns_of_character_tables_are_orthogonal() {
    for name in every_name() {
        let group = group(name);
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
        // Columns: Σ χ(a)χ(b)/constituents is |G|/size when b is in the class of a or of its inverses, halved where these differ.
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
                // A pair adds χχ + its conjugate: both columns of a class and its inverse.
                assert!(
                    (sum - expected).abs() < 1e-9 * order || (sum - 2.0 * expected).abs() < 0.0,
                    "{name}: columns {i} {j}: {sum} {expected}"
                );
            }
        }
    }
}

#[test]
fn matrices_represent_the_group_and_have_its_characters() {
    for name in every_name() {
        let group = group(name);
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
    for name in every_name() {
        let group = group(name);
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
    for name in every_name() {
        let operations: Vec<_> = group(name).elements().iter().map(|element| *element.operation.matrix()).collect();
        assert_eq!(identify(&operations).unwrap().0, name);
        assert_eq!(name.to_string().parse::<GroupName>().unwrap(), name);
        assert_eq!(name.pretty().parse::<GroupName>().unwrap(), name);
    }
}

#[test]
fn irrep_names_are_distinct_and_parse_back() {
    for name in every_name().into_iter().chain([GroupName::Cinfv, GroupName::Dinfh, GroupName::K]) {
        let group = group(name);
        for (at, irrep) in group.irreps().iter().enumerate() {
            let read = irrep.name.to_string().parse().unwrap();
            assert_eq!(group.irrep_idx(&read), Ok(at), "{name} {}", irrep.name);
        }
        assert_eq!(group.totally_symmetric(), 0);
    }
}
#[test]
fn dump() {
    for name in std::env::var("DUMP").unwrap_or_default().split(',') {
        let Ok(name) = name.parse() else { continue };
        let group = group(name);
        println!("{name}: {:?}", group.classes().iter().map(|c| c.pretty()).collect::<Vec<_>>());
        println!("   {:?}", group.elements().iter().map(|e| e.symbol.clone()).collect::<Vec<_>>());
        for irrep in group.irreps() {
            println!(
                "{:6} {:?}\n    {:?} {:?}",
                irrep.name.to_string(),
                irrep.characters.iter().map(|c| (c * 1e3).round() / 1e3).collect::<Vec<_>>(),
                irrep.partners,
                irrep.functions
            );
        }
    }
}
