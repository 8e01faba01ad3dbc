//! What is printed of point groups, typed by hand, judges what the program works out.
//!
//! Character tables stand in `published/characters.txt`; splittings of levels, products and descents here, each with its source.

#![expect(clippy::unwrap_used, reason = "a test fails by panicking")]

use orbsieve::group::{GroupError, IrrepName, PointGroup};
use std::collections::BTreeMap;

fn group(name: &str) -> PointGroup {
    PointGroup::standard(name.parse().unwrap()).unwrap()
}

/// `A1+2E` as multiplicities by name.
fn sum(text: &str) -> BTreeMap<String, usize> {
    let mut sum = BTreeMap::new();
    for term in text.split('+').map(str::trim) {
        let digits = term.len() - term.trim_start_matches(|c: char| c.is_ascii_digit()).len();
        let times = if digits == 0 { 1 } else { term[..digits].parse().unwrap() };
        // Published rows write orbitals small; names know no case.
        let name: IrrepName = term[digits..].parse().unwrap_or_else(|error| panic!("{error}"));
        *sum.entry(name.to_string()).or_insert(0) += times;
    }
    sum
}

/// Multiplicities by name of what the program found.
fn found(group: &PointGroup, terms: Result<Vec<(usize, usize)>, GroupError>) -> BTreeMap<String, usize> {
    terms.unwrap().into_iter().map(|(at, times)| (group.irreps()[at].name.to_string(), times)).collect()
}

fn irrep(group: &PointGroup, name: &str) -> usize {
    group.irrep_idx(&name.parse().unwrap()).unwrap()
}

/// A character as written in the tables: `-1`, `2cos144`, `-√2`.
fn character(text: &str) -> f64 {
    let (sign, size) = text.strip_prefix('-').map_or((1.0, text), |size| (-1.0, size));
    let size = if let Some(degrees) = size.strip_prefix("2cos") {
        2.0 * degrees.parse::<f64>().unwrap().to_radians().cos()
    } else if let Some(square) = size.strip_prefix('√') {
        square.parse::<f64>().unwrap().sqrt()
    } else {
        size.parse().unwrap()
    };
    sign * size
}

#[test]
fn printed_character_tables() {
    let text = include_str!("published/characters.txt");
    let mut groups = 0;
    for block in text.split("\n\n").filter(|block| !block.starts_with('#')) {
        let mut lines = block.trim().lines();
        let (name, symbols) = lines.next().unwrap().split_once(": ").unwrap();
        let group = group(name);
        let columns: Vec<usize> = symbols
            .split_whitespace()
            .map(|symbol| {
                let at = group.classes().iter().position(|class| class.symbol == symbol);
                at.unwrap_or_else(|| panic!("{name}: no class {symbol}"))
            })
            .collect();
        assert_eq!(columns.len(), group.classes().len(), "{name}");
        let mut names = Vec::new();
        for line in lines {
            let mut fields = line.split('|');
            let mut row = fields.next().unwrap().split_whitespace();
            let irrep_name = row.next().unwrap();
            names.push(irrep_name.to_owned());
            let irrep = &group.irreps()[irrep(&group, irrep_name)];
            for (text, &column) in row.zip(&columns) {
                let (printed, computed) = (character(text), irrep.characters[column]);
                assert!(
                    (printed - computed).abs() < 1e-12,
                    "{name} {irrep_name} {}: {computed}",
                    group.classes()[column].symbol
                );
            }
            let functions = &irrep.functions;
            for (printed, computed) in fields.zip([&functions.linear, &functions.rotations, &functions.quadratic]) {
                let printed: Vec<&str> = printed.split_whitespace().collect();
                let computed: Vec<String> = computed.iter().map(|function| function.replace(' ', "")).collect();
                assert_eq!(printed, computed, "{name} {irrep_name}");
            }
        }
        let ours: Vec<String> = group.irreps().iter().map(|irrep| irrep.name.to_string()).collect();
        assert_eq!(names, ours, "{name}: the order of irreps is the printed one");
        groups += 1;
    }
    assert!(groups >= 20, "{groups} groups");
}

/// Splitting of s, p, d, f, g, h, i levels.
///
/// "Splitting of terms in crystals" (Termaufspaltung in Kristallen), Ann. Phys. 3, 133 (1929), and its extension to other groups;
/// rows recomputed from explicit matrix groups when they were collected.
const LEVELS: &[(&str, [&str; 7])] = &[
    ("O", ["A1", "T1", "E+T2", "A2+T1+T2", "A1+E+T1+T2", "E+2T1+T2", "A1+A2+E+T1+2T2"]),
    ("Oh", ["a1g", "t1u", "eg+t2g", "a2u+t1u+t2u", "a1g+eg+t1g+t2g", "eu+2t1u+t2u", "a1g+a2g+eg+t1g+2t2g"]),
    ("Td", ["a1", "t2", "e+t2", "a1+t1+t2", "a1+e+t1+t2", "e+t1+2t2", "a1+a2+e+t1+2t2"]),
    ("D4", ["A1", "A2+E", "A1+B1+B2+E", "A2+B1+B2+2E", "2A1+A2+B1+B2+2E", "A1+2A2+B1+B2+3E", "2A1+A2+2B1+2B2+3E"]),
    ("D3", ["A1", "A2+E", "A1+2E", "A1+2A2+2E", "2A1+A2+3E", "A1+2A2+4E", "3A1+2A2+4E"]),
    ("Ih", ["ag", "t1u", "hg", "t2u+gu", "gg+hg", "t1u+t2u+hu", "ag+t1g+gg+hg"]),
    (
        "D4h",
        [
            "a1g",
            "a2u+eu",
            "a1g+b1g+b2g+eg",
            "a2u+b1u+b2u+2eu",
            "2a1g+a2g+b1g+b2g+2eg",
            "a1u+2a2u+b1u+b2u+3eu",
            "2a1g+a2g+2b1g+2b2g+3eg",
        ],
    ),
    ("D3d", ["a1g", "a2u+eu", "a1g+2eg", "a1u+2a2u+2eu", "2a1g+a2g+3eg", "a1u+2a2u+4eu", "3a1g+2a2g+4eg"]),
    ("C4v", ["a1", "a1+e", "a1+b1+b2+e", "a1+b1+b2+2e", "2a1+a2+b1+b2+2e", "2a1+a2+b1+b2+3e", "2a1+a2+2b1+2b2+3e"]),
    ("C3v", ["a1", "a1+e", "a1+2e", "2a1+a2+2e", "2a1+a2+3e", "2a1+a2+4e", "3a1+2a2+4e"]),
];

#[test]
fn splitting_of_levels() {
    for (name, rows) in LEVELS {
        let group = group(name);
        for (l, row) in rows.iter().enumerate() {
            assert_eq!(sum(row), found(&group, group.decompose(&group.shell_characters(l))), "{name} l = {l}");
        }
    }
    for (name, d) in [("D5h", "a1'+e2'+e1''"), ("D5d", "a1g+e1g+e2g")] {
        let group = group(name);
        assert_eq!(sum(d), found(&group, group.decompose(&group.shell_characters(2))), "{name}");
    }
    // The first l above 0 with a totally symmetric function is 4 in O and 6 in I.
    for (name, first) in [("O", 4), ("I", 6)] {
        let group = group(name);
        let symmetric = |l: &usize| group.decompose(&group.shell_characters(*l)).unwrap()[0].0 == 0;
        assert_eq!((1..10).find(symmetric), Some(first), "{name}");
    }
}

/// Direct products: (group, left, right, sum). Recomputed from explicit matrix groups when they were collected; those of D∞h by hand
/// from the rotation group about an axis.
const PRODUCTS: &[(&str, &str, &str, &str)] = &[
    ("O", "E", "E", "A1+A2+E"),
    ("O", "E", "T1", "T1+T2"),
    ("O", "E", "T2", "T1+T2"),
    ("O", "T1", "T1", "A1+E+T1+T2"),
    ("O", "T2", "T2", "A1+E+T1+T2"),
    ("O", "T1", "T2", "A2+E+T1+T2"),
    ("O", "A2", "T1", "T2"),
    ("I", "T1", "T1", "A+T1+H"),
    ("I", "T2", "T2", "A+T2+H"),
    ("I", "T1", "T2", "G+H"),
    ("I", "T1", "G", "T2+G+H"),
    ("I", "T2", "G", "T1+G+H"),
    ("I", "T1", "H", "T1+T2+G+H"),
    ("I", "T2", "H", "T1+T2+G+H"),
    ("I", "G", "G", "A+T1+T2+G+H"),
    ("I", "G", "H", "T1+T2+G+2H"),
    ("I", "H", "H", "A+T1+T2+2G+2H"),
    ("D4", "E", "E", "A1+A2+B1+B2"),
    ("D3", "E", "E", "A1+A2+E"),
    ("D6", "E1", "E1", "A1+A2+E2"),
    ("D6", "E2", "E2", "A1+A2+E2"),
    ("D6", "E1", "E2", "B1+B2+E1"),
    ("D6", "B1", "E1", "E2"),
    ("Dinfh", "PIG", "PIG", "SIGMAG|SIGMAG-|DELTAG"),
    ("Dinfh", "PIU", "PIG", "SIGMAU|SIGMAU-|DELTAU"),
    ("Dinfh", "PIU", "DELTAG", "PIU|PHIU"),
    ("Dinfh", "DELTAG", "DELTAG", "SIGMAG|SIGMAG-|GAMMAG"),
    ("Cinfv", "PI", "PI", "SIGMA|SIGMA-|DELTA"),
];

/// `+` parts terms, or `|` where names carry signs.
fn signed_sum(text: &str) -> BTreeMap<String, usize> {
    if !text.contains('|') {
        return sum(text);
    }
    text.split('|').map(|name| (name.parse::<IrrepName>().unwrap().to_string(), 1)).collect()
}

#[test]
fn direct_products() {
    for (name, a, b, expected) in PRODUCTS {
        let group = group(name);
        let (a, b) = (irrep(&group, a), irrep(&group, b));
        assert_eq!(signed_sum(expected), found(&group, group.product(a, b)), "{name}");
        assert_eq!(group.product(a, b), group.product(b, a));
    }
    // Squares, from the same source.
    for (name, of, symmetric, antisymmetric) in [
        ("O", "E", "A1+E", "A2"),
        ("O", "T1", "A1+E+T2", "T1"),
        ("O", "T2", "A1+E+T2", "T1"),
        ("D4", "E", "A1+B1+B2", "A2"),
        ("Dinfh", "PIG", "SIGMAG|DELTAG", "SIGMAG-|"),
    ] {
        let group = group(name);
        let of = irrep(&group, of);
        assert_eq!(signed_sum(symmetric), found(&group, group.symmetric_square(of)), "{name}");
        assert_eq!(
            signed_sum(antisymmetric.trim_end_matches('|')),
            found(&group, group.antisymmetric_square(of)),
            "{name}"
        );
    }
    // Angular momenta couple to |a − b| … a + b; of equal ones L = 2l, 2l − 2, … are symmetric (Clebsch–Gordan series).
    let atom = group("Kh");
    let (p, d) = (irrep(&atom, "P_u"), irrep(&atom, "D_g"));
    assert_eq!(sum("P_u+D_u+F_u"), found(&atom, atom.product(p, d)));
    assert_eq!(sum("S_g+D_g"), found(&atom, atom.symmetric_square(p)));
    assert_eq!(sum("P_g+F_g"), found(&atom, atom.antisymmetric_square(d)));
    // Beyond the irreps kept there is an error, no wrong sum.
    let linear = group("Dinfh");
    let high = irrep(&linear, "KAPPAG");
    assert!(matches!(linear.product(high, high), Err(GroupError::BeyondTable { reach: 14, limit: 12, .. })));
}

/// Descent: (parent, child, words that its description holds, (irrep of the parent, sum in the child)). Recomputed from explicit
/// matrix groups when they were collected; linear rows by hand.
type Descent<'a> = (&'a str, &'a str, &'a str, &'a [(&'a str, &'a str)]);

const DESCENTS: &[Descent<'static>] = &[
    (
        "Oh",
        "D4h",
        "same axes",
        &[
            ("A1g", "A1g"),
            ("A2g", "B1g"),
            ("Eg", "A1g+B1g"),
            ("T1g", "A2g+Eg"),
            ("T2g", "B2g+Eg"),
            ("A2u", "B1u"),
            ("Eu", "A1u+B1u"),
            ("T1u", "A2u+Eu"),
            ("T2u", "B2u+Eu"),
        ],
    ),
    (
        "Oh",
        "D3d",
        "z along (1, 1, 1)",
        &[
            ("A1g", "A1g"),
            ("A2g", "A2g"),
            ("Eg", "Eg"),
            ("T1g", "A2g+Eg"),
            ("T2g", "A1g+Eg"),
            ("T1u", "A2u+Eu"),
            ("T2u", "A1u+Eu"),
        ],
    ),
    (
        "Oh",
        "Td",
        "same axes",
        &[
            ("A1u", "A2"),
            ("A2u", "A1"),
            ("T1u", "T2"),
            ("T2u", "T1"),
            ("A2g", "A2"),
            ("Eg", "E"),
            ("T1g", "T1"),
            ("T2g", "T2"),
        ],
    ),
    (
        "Oh",
        "C4v",
        "same axes",
        &[
            ("Eg", "A1+B1"),
            ("T1g", "A2+E"),
            ("T2g", "B2+E"),
            ("T1u", "A1+E"),
            ("T2u", "B1+E"),
            ("A2u", "B2"),
            ("Eu", "A2+B2"),
        ],
    ),
    ("Td", "C3v", "z along (1, 1, 1)", &[("T1", "A2+E"), ("T2", "A1+E"), ("E", "E")]),
    ("Td", "D2d", "same axes", &[("E", "A1+B1"), ("T1", "A2+E"), ("T2", "B2+E"), ("A2", "B1")]),
    ("Td", "C2v", "turned by -45°", &[("E", "A1+A2"), ("T1", "A2+B1+B2"), ("T2", "A1+B1+B2")]),
    (
        "D4h",
        "D2h",
        "same axes",
        &[
            ("A1g", "Ag"),
            ("B1g", "Ag"),
            ("A2g", "B1g"),
            ("B2g", "B1g"),
            ("Eg", "B2g+B3g"),
            ("A2u", "B1u"),
            ("B2u", "B1u"),
            ("Eu", "B2u+B3u"),
        ],
    ),
    (
        "D6h",
        "D3h",
        "same axes",
        &[
            ("A1g", "A1'"),
            ("A2g", "A2'"),
            ("B1u", "A1'"),
            ("B2u", "A2'"),
            ("E2g", "E'"),
            ("E1u", "E'"),
            ("E1g", "E''"),
            ("E2u", "E''"),
            ("A2u", "A2''"),
            ("B2g", "A2''"),
        ],
    ),
    (
        "Dinfh",
        "D2h",
        "same axes",
        &[
            ("SIGMAG", "Ag"),
            ("SIGMAG-", "B1g"),
            ("SIGMAU", "B1u"),
            ("SIGMAU-", "Au"),
            ("PIG", "B2g+B3g"),
            ("PIU", "B2u+B3u"),
            ("DELTAG", "Ag+B1g"),
            ("DELTAU", "Au+B1u"),
        ],
    ),
    ("Cinfv", "C2v", "same axes", &[("SIGMA", "A1"), ("SIGMA-", "A2"), ("PI", "B1+B2"), ("DELTA", "A1+A2")]),
];

#[test]
fn descent_in_symmetry() {
    for (parent, child, words, rows) in DESCENTS {
        let group = group(parent);
        let subgroups = group.subgroups().unwrap();
        let subgroup = subgroups
            .iter()
            .find(|subgroup| subgroup.group.name().to_string() == *child && subgroup.description.contains(words))
            .unwrap_or_else(|| panic!("{parent} → {child}, {words}"));
        for (from, to) in *rows {
            let of = irrep(&group, from);
            assert_eq!(sum(to), found(&subgroup.group, group.subduce(subgroup, of)), "{parent} → {child}: {from}");
        }
    }
    // C∞v has no inversion and never descends to D2h.
    let linear = group("Cinfv").subgroups().unwrap();
    assert!(linear.iter().all(|subgroup| subgroup.group.name().to_string() != "D2h"));
}

/// Where x, y, z and the rotations belong; recomputed from explicit matrix groups when they were collected.
#[test]
fn irreps_of_coordinates_and_rotations() {
    for (name, coordinates, rotations) in [
        ("Oh", "T1u", "T1g"),
        ("Td", "T2", "T1"),
        ("Ih", "T1u", "T1g"),
        ("D6h", "A2u+E1u", "A2g+E1g"),
        ("D4h", "A2u+Eu", "A2g+Eg"),
        ("D3h", "A2''+E'", "A2'+E''"),
        ("D5d", "A2u+E1u", "A2g+E1g"),
        ("D2d", "B2+E", "A2+E"),
        ("D4d", "B2+E1", "A2+E3"),
        ("C2v", "A1+B1+B2", "A2+B1+B2"),
        ("D2h", "B1u+B2u+B3u", "B1g+B2g+B3g"),
    ] {
        let group = group(name);
        assert_eq!(sum(coordinates), found(&group, Ok(group.vector_irreps())), "{name}");
        assert_eq!(sum(rotations), found(&group, Ok(group.rotation_irreps())), "{name}");
    }
}
