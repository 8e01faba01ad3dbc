//! Published facts about transitions, vibrations and orbital species, against rules worked out from characters.
//!
//! Sources, by the words used at the rows: "matrix groups": recomputed from explicitly generated matrix groups when the rows were
//! collected; "by hand": from the group of rotations about an axis; "memory": common practice, from memory. Axes follow
//! "Notations and conventions in molecular spectroscopy, Part 2: Symmetry notation", Pure Appl. Chem. 69, 1641 (1997).

#![allow(clippy::unwrap_used, reason = "a test may stop at once")]

mod support;

use nalgebra::Matrix3;
use orbsieve::group::{IrrepName, PointGroup, Symmetry};
use orbsieve::labelling::placement::{self, Choice};
use orbsieve::model::{self, Molecule};
use orbsieve::modes;
use orbsieve::selection::Operators;
use support::files::{labelled, molecule, set_labels};

fn group(name: &str) -> PointGroup {
    PointGroup::standard(name.parse().unwrap()).unwrap()
}

fn irrep(group: &PointGroup, name: &str) -> usize {
    group.irrep_idx(&name.parse::<IrrepName>().unwrap()).unwrap()
}

/// `2A1g E2g` as (irrep, count) in the order of the group.
fn sum(group: &PointGroup, text: &str) -> Vec<(usize, usize)> {
    let term = |word: &str| {
        let digits = word.bytes().take_while(u8::is_ascii_digit).count();
        (irrep(group, &word[digits..]), word[..digits].parse().unwrap_or(1))
    };
    let mut terms: Vec<(usize, usize)> = text.split_whitespace().map(term).collect();
    terms.sort_unstable();
    terms
}

/// Group, irrep left, irrep entered, states of the product, axes of the electric dipole, axes of the magnetic dipole, source.
const EXCITATIONS: &[(&str, &str, &str, &str, &str, &str, &str)] = &[
    ("D6h", "e1g", "e2u", "B1u B2u E1u", "xy", "", "benzene; matrix groups; J. Chem. Phys. 112, 2798 (2000)"),
    ("C2v", "b2", "b1", "A2", "", "z", "formaldehyde n, π*; matrix groups"),
    ("C2v", "b1", "b1", "A1", "z", "", "formaldehyde π, π*; matrix groups"),
    ("C2v", "b2", "a1", "B2", "y", "x", "formaldehyde n, 3s; matrix groups"),
    ("C2v", "b1", "a1", "B1", "x", "y", "water 1b1, 4a1; matrix groups"),
    ("D2h", "b3u", "b2g", "B1u", "z", "", "ethene π, π*, C=C on z, plane yz; matrix groups"),
    ("C2h", "bg", "au", "Bu", "xy", "", "s-trans butadiene; matrix groups"),
    ("D2d", "e", "e", "A1 A2 B1 B2", "z", "z", "allene; matrix groups"),
    ("Oh", "t2g", "eg", "T1g T2g", "", "xyz", "MX6 d-d, also that of [Co(NH3)6]3+; matrix groups"),
    ("Oh", "t1u", "t2g", "A2u Eu T1u T2u", "xyz", "", "MX6 charge transfer; matrix groups"),
    ("Oh", "t2u", "t2g", "A1u Eu T1u T2u", "xyz", "", "MX6 charge transfer; matrix groups"),
    ("Oh", "t2g", "t1u", "A2u Eu T1u T2u", "xyz", "", "MX6 charge transfer; matrix groups"),
    ("Oh", "t2g", "t2u", "A1u Eu T1u T2u", "xyz", "", "MX6 charge transfer; matrix groups"),
    ("Oh", "t1u", "eg", "T1u T2u", "xyz", "", "MX6 charge transfer; matrix groups"),
    ("Td", "t1", "e", "T1 T2", "xyz", "xyz", "permanganate; matrix groups"),
    ("Td", "e", "t2", "T1 T2", "xyz", "xyz", "MX4 d-d, no Laporte rule; matrix groups"),
    ("Ih", "hu", "t1u", "T1g T2g Gg Hg", "", "xyz", "C60; Mater. Sci. Eng. B 19, 122 (1993); matrix groups"),
    ("D5d", "e2g", "e1g", "E1g E2g", "", "xy", "ferrocene; matrix groups"),
    ("D5d", "a1g", "e1g", "E1g", "", "xy", "ferrocene; matrix groups"),
    ("Dinfh", "pi_u", "pi_g", "Sigma_u+ Sigma_u- Delta_u", "z", "", "CO2, N2; by hand"),
    ("D3h", "e''", "a2''", "E'", "xy", "", "matrix groups"),
    ("D3h", "a2''", "e'", "E''", "", "xy", "matrix groups"),
    // By hand from the rotation group: Δl = ±1 with change of parity; ΔL of a magnetic dipole is inside one shell.
    ("K", "p_u", "d_g", "P_u D_u F_u", "xyz", "", "atoms; by hand"),
    ("K", "s_g", "d_g", "D_g", "", "", "atoms; by hand"),
    ("K", "p_u", "p_u", "S_g P_g D_g", "", "xyz", "atoms; by hand"),
    ("K", "s_g", "f_u", "F_u", "", "", "atoms; by hand"),
];

#[test]
fn electronic_excitations() {
    for &(name, from, to, states, electric, magnetic, source) in EXCITATIONS {
        let group = group(name);
        let operators = Operators::new(&group);
        let (from, to) = (irrep(&group, from), irrep(&group, to));
        let rule = operators.between(&group, from, to).unwrap();
        let back = operators.between(&group, to, from).unwrap();
        assert_eq!(rule, back, "{source}");
        assert_eq!(rule.product, sum(&group, states), "{source}");
        let axes = |indices: &[usize]| indices.iter().map(|&axis| ["x", "y", "z"][axis]).collect::<String>();
        assert_eq!(axes(&rule.electric_dipole), electric, "{source}");
        assert_eq!(axes(&rule.magnetic_dipole), magnetic, "{source}");
        // Light reaches a state of the product exactly where that state has the irrep of x, y or z.
        let mut reached: Vec<usize> = rule.product.iter().flat_map(|term| operators.polarisation(term.0)).collect();
        reached.sort_unstable();
        reached.dedup();
        assert_eq!(reached, rule.electric_dipole, "{source}");
        if let Some(changes) = rule.parity_changes {
            assert!(changes || rule.electric_dipole.is_empty(), "{source}: Laporte");
            assert!(!changes || (rule.magnetic_dipole.is_empty() && rule.two_photon.is_empty()), "{source}: parity");
        }
    }
}

#[test]
fn quadratic_operators() {
    // Columns of printed character tables: which irreps xx … yz and the traceless products belong to. Memory.
    for (name, from, to, two_photon, quadrupole) in [
        ("Oh", "a1g", "eg", "xx yy zz", "xx yy zz"),
        ("Oh", "a1g", "t2g", "xy xz yz", "xy xz yz"),
        ("Oh", "a1g", "a1g", "xx yy zz", ""),
        ("C2v", "a1", "a1", "xx yy zz", "xx yy zz"),
        ("D6h", "a1g", "e1g", "xz yz", "xz yz"),
        ("D6h", "a1g", "a1g", "xx yy zz", "xx yy zz"),
        ("K", "s_g", "s_g", "xx yy zz", ""),
        ("K", "s_g", "d_g", "xx yy zz xy xz yz", "xx yy zz xy xz yz"),
        ("Dinfh", "sigma_g", "delta_g", "xx yy xy", "xx yy xy"),
    ] {
        let group = group(name);
        let rule = Operators::new(&group).between(&group, irrep(&group, from), irrep(&group, to)).unwrap();
        let names = |indices: &[usize]| {
            indices.iter().map(|&at| orbsieve::selection::rules::QUADRATIC[at]).collect::<Vec<_>>().join(" ")
        };
        assert_eq!(names(&rule.two_photon), two_photon, "{name} {to}");
        assert_eq!(names(&rule.quadrupole), quadrupole, "{name} {to}");
    }
}

#[test]
fn where_coordinates_and_rotations_belong() {
    // Matrix groups; D2h also in the manual of a quantum-chemistry package (2006).
    for (name, of_x_y_z, of_rotations) in [
        ("Oh", ["T1u", "T1u", "T1u"], ["T1g", "T1g", "T1g"]),
        ("Td", ["T2", "T2", "T2"], ["T1", "T1", "T1"]),
        ("Ih", ["T1u", "T1u", "T1u"], ["T1g", "T1g", "T1g"]),
        ("D6h", ["E1u", "E1u", "A2u"], ["E1g", "E1g", "A2g"]),
        ("D4h", ["Eu", "Eu", "A2u"], ["Eg", "Eg", "A2g"]),
        ("D3h", ["E'", "E'", "A2''"], ["E''", "E''", "A2'"]),
        ("D5d", ["E1u", "E1u", "A2u"], ["E1g", "E1g", "A2g"]),
        ("D2d", ["E", "E", "B2"], ["E", "E", "A2"]),
        ("D4d", ["E1", "E1", "B2"], ["E3", "E3", "A2"]),
        ("C2v", ["B1", "B2", "A1"], ["B2", "B1", "A2"]),
        ("D2h", ["B3u", "B2u", "B1u"], ["B3g", "B2g", "B1g"]),
        ("K", ["P_u", "P_u", "P_u"], ["P_g", "P_g", "P_g"]),
    ] {
        let group = group(name);
        let operators = Operators::new(&group);
        let symmetric = group.totally_symmetric();
        for axis in 0..3 {
            let of_coordinate = operators.between(&group, symmetric, irrep(&group, of_x_y_z[axis])).unwrap();
            assert!(of_coordinate.electric_dipole.contains(&axis), "{name} {axis}");
            let of_rotation = operators.between(&group, symmetric, irrep(&group, of_rotations[axis])).unwrap();
            assert!(of_rotation.magnetic_dipole.contains(&axis), "{name} R{axis}");
        }
    }
}

#[test]
fn vibrations_that_open_forbidden_states() {
    // Matrix groups; for benzene also J. Chem. Phys. 112, 2798 (2000), where e2g is the one at work.
    for (name, state, expected) in [
        ("Oh", "T1g", "A1u Eu T1u T2u"),
        ("Oh", "T2g", "A2u Eu T1u T2u"),
        ("Oh", "Eg", "T1u T2u"),
        ("D6h", "B2u", "B1g E2g"),
        ("D6h", "B1u", "B2g E2g"),
        ("C2v", "A2", "A2 B1 B2"),
        ("D4h", "A2g", "A1u Eu"),
        ("D4h", "B1g", "B2u Eu"),
        ("D4h", "Eg", "A1u A2u B1u B2u Eu"),
    ] {
        let group = group(name);
        let helpers = Operators::new(&group).helpers(&group, irrep(&group, state));
        let found: Vec<(usize, usize)> = helpers.iter().map(|helper| (helper.irrep, 1)).collect();
        assert_eq!(found, sum(&group, expected), "{name} {state}");
    }
    // In MX6 only t1u and t2u of these exist.
    let (molecule, symmetry) = placed("sf6_sto3g");
    let motion = modes::motion(&molecule.atoms, &symmetry).unwrap();
    let operators = Operators::new(&symmetry.group);
    for state in ["T1g", "T2g", "Eg"] {
        let helpers = operators.helpers(&symmetry.group, irrep(&symmetry.group, state));
        let present = helpers.iter().map(|helper| helper.irrep).filter(|&irrep| motion.n_vibrations(irrep) > 0);
        let names: Vec<String> = present.map(|irrep| symmetry.group.irreps()[irrep].name.to_string()).collect();
        assert_eq!(names, ["T1u", "T2u"], "{state}");
    }
}

#[test]
fn sublevels_of_triplets() {
    // Matrix groups.
    for (name, orbital, expected) in [
        ("C2v", "A2", "A1 B1 B2"),
        ("C2v", "A1", "A2 B1 B2"),
        ("C2v", "B1", "A1 A2 B2"),
        ("C2v", "B2", "A1 A2 B1"),
        ("O", "A2", "T2"),
        ("O", "E", "T1 T2"),
        ("O", "T1", "A1 E T1 T2"),
        ("O", "T2", "A2 E T1 T2"),
    ] {
        let group = group(name);
        let found = Operators::new(&group).triplet_sublevels(&group, irrep(&group, orbital)).unwrap();
        assert_eq!(found, sum(&group, expected), "{name} {orbital}");
    }
}

fn place(molecule: &Molecule) -> Symmetry {
    placement::place(molecule, 0.02, &Choice::default()).unwrap().symmetry
}

fn placed(name: &str) -> (Molecule, Symmetry) {
    let molecule = molecule(name);
    let symmetry = place(&molecule);
    (molecule, symmetry)
}

fn from_xyz(text: &str) -> (Molecule, Symmetry) {
    let molecule = model::read_xyz(text.as_bytes()).unwrap().0;
    let symmetry = place(&molecule);
    (molecule, symmetry)
}

const P4: &str = "4\n\nP 0.78 0.78 0.78\nP 0.78 -0.78 -0.78\nP -0.78 0.78 -0.78\nP -0.78 -0.78 0.78\n";

/// Γvib. Matrix groups; linear molecules by hand; water also in the symmetry how-to of a coupled-cluster package.
const VIBRATIONS: &[(&str, &str, &str)] = &[
    ("water_631gs", "C2v", "2A1 B2"),
    ("formaldehyde_631gs", "C2v", "3A1 B1 2B2"),
    ("ammonia_631gs", "C3v", "2A1 2E"),
    ("methane_631gs", "Td", "A1 E 2T2"),
    ("permanganate_td_def2svp", "Td", "A1 E 2T2"),
    ("bf3_d3h_631gs", "D3h", "A1' A2'' 2E'"),
    ("pf5_d3h_sto3g", "D3h", "2A1' 2A2'' 3E' E''"),
    ("xef4_d4h_ecp", "D4h", "A1g B1g B2g A2u B2u 2Eu"),
    ("ptcl4_d4h_ecp", "D4h", "A1g B1g B2g A2u B2u 2Eu"),
    ("sf6_sto3g", "Oh", "A1g Eg T2g 2T1u T2u"),
    ("nickel_carbonyl_td_ecp", "Td", "2A1 2E T1 4T2"),
    ("benzene_sto3g", "D6h", "2A1g A2g 2B2g E1g 4E2g A2u 2B1u 2B2u 3E1u 2E2u"),
    ("ethene_631gs", "D2h", "3Ag B2g 2B3g Au 2B1u 2B2u B3u"),
    ("allene_d2d_631g", "D2d", "3A1 B1 3B2 4E"),
    ("ethane_staggered_d3d_631g", "D3d", "3A1g A1u 2A2u 3Eg 3Eu"),
    ("difluoroethene_c2h_631g", "C2h", "5Ag Bg 2Au 4Bu"),
    ("carbon_dioxide_631gs", "Dinfh", "Sigma_g+ Sigma_u+ Pi_u"),
    ("ethyne_631gs", "Dinfh", "2Sigma_g+ Sigma_u+ Pi_g Pi_u"),
    ("neon_def2tzvp", "K", ""),
];

#[test]
fn vibrations_of_named_molecules() {
    let mut cases: Vec<(&str, Molecule, Symmetry, &str, &str)> = Vec::new();
    for &(name, group, expected) in VIBRATIONS {
        let (molecule, symmetry) = placed(name);
        cases.push((name, molecule, symmetry, group, expected));
    }
    let (molecule, symmetry) = from_xyz(P4);
    cases.push(("P4", molecule, symmetry, "Td", "A1 E T2"));
    for (name, molecule, symmetry, group, expected) in cases {
        assert_eq!(symmetry.group.name(), group.parse().unwrap(), "{name}");
        let motion = modes::motion(&molecule.atoms, &symmetry).unwrap();
        assert_eq!(motion.vibrations, sum(&symmetry.group, expected), "{name}");
        let count = |terms: &[(usize, usize)]| -> usize {
            terms.iter().map(|&(irrep, n)| n * symmetry.group.irreps()[irrep].dimension).sum()
        };
        let all = count(&motion.translations) + count(&motion.rotations) + count(&motion.vibrations);
        assert_eq!(all, 3 * molecule.atoms.len(), "{name}");
    }
    // SF6: two infrared, three Raman fundamentals, t2u silent; with C2' through bonds benzene's 2b2g reads 2b1g.
    let (molecule, symmetry) = placed("sf6_sto3g");
    let motion = modes::motion(&molecule.atoms, &symmetry).unwrap();
    let operators = Operators::new(&symmetry.group);
    let active = |of: &dyn Fn(usize) -> bool| -> usize {
        motion.vibrations.iter().filter(|term| of(term.0)).map(|term| term.1).sum()
    };
    assert_eq!(active(&|irrep| !operators.polarisation(irrep).is_empty()), 2);
    assert_eq!(active(&|irrep| operators.is_raman_active(irrep)), 3);
    let benzene = placed("benzene_sto3g").1;
    let swaps = &benzene.other_settings[0].swaps;
    let named = |text: &str| text.parse::<IrrepName>().unwrap();
    assert!(swaps.contains(&(named("B2g"), named("B1g"))), "{swaps:?}");
}

/// How functions on some atoms, each turning by `turn` where its atom stays in place, fall into irreps.
fn carried(symmetry: &Symmetry, atoms: &[usize], turn: impl Fn(&Matrix3<f64>) -> f64) -> Vec<(usize, usize)> {
    let group = &symmetry.group;
    let of_class = |class: &orbsieve::group::Class| {
        let element = class.members[0];
        let fixed = atoms.iter().filter(|&&atom| symmetry.permutations[element][atom] == atom).count();
        fixed as f64 * turn(group.elements()[element].operation.matrix())
    };
    group.decompose(&group.classes().iter().map(of_class).collect::<Vec<_>>()).unwrap()
}

fn of_element(molecule: &Molecule, element: u8) -> Vec<usize> {
    (0..molecule.atoms.len()).filter(|&atom| molecule.atoms[atom].element == element).collect()
}

/// A σ function keeps its sign; of the two π functions across a bond through the centre the trace is that of x, y, z less one.
#[test]
fn ligand_combinations() {
    for (name, ligand, sigma, pi) in [
        ("sf6_sto3g", 9, "A1g Eg T1u", "T1g T2g T1u T2u"),
        ("permanganate_td_def2svp", 8, "A1 T2", "E T1 T2"),
        ("xef4_d4h_ecp", 9, "A1g B1g Eu", "A2g B2g Eg A2u B2u Eu"),
        ("pf5_d3h_sto3g", 9, "2A1' E' A2''", ""),
    ] {
        let (molecule, symmetry) = placed(name);
        let ligands = of_element(&molecule, ligand);
        assert_eq!(carried(&symmetry, &ligands, |_| 1.0), sum(&symmetry.group, sigma), "{name}, matrix groups");
        if !pi.is_empty() {
            let found = carried(&symmetry, &ligands, |matrix| matrix.trace() - 1.0);
            assert_eq!(found, sum(&symmetry.group, pi), "{name}, matrix groups");
        }
    }
}

const CYCLOPROPENYL: &str = "6\n\nC 0.788 0 0\nC -0.394 0.68243 0\nC -0.394 -0.68243 0\n\
    H 1.868 0 0\nH -0.934 1.61774 0\nH -0.934 -1.61774 0\n";

/// p functions along z on the carbon atoms of rings and chains. Matrix groups.
#[test]
fn pi_species() {
    let mut cases: Vec<(Molecule, Symmetry, &str, &str)> = Vec::new();
    for (name, group, expected) in [
        ("benzene_sto3g", "D6h", "B2g E1g A2u E2u"),
        ("cyclobutadiene_triplet_d4h_sto3g", "D4h", "Eg A2u B2u"),
        ("cyclopentadienide_d5h_631g", "D5h", "A2'' E1'' E2''"),
        ("ferrocene_d5d_sto3g", "D5d", "A1g E1g E2g A2u E1u E2u"),
        ("ferrocene_d5h_sto3g", "D5h", "A1' E1' E2' A2'' E1'' E2''"),
        ("butadiene_c2h_631g", "C2h", "2Bg 2Au"),
    ] {
        let (molecule, symmetry) = placed(name);
        cases.push((molecule, symmetry, group, expected));
    }
    let (molecule, symmetry) = from_xyz(CYCLOPROPENYL);
    cases.push((molecule, symmetry, "D3h", "A2'' E''"));
    for (molecule, symmetry, group, expected) in cases {
        assert_eq!(symmetry.group.name(), group.parse().unwrap());
        let found = carried(&symmetry, &of_element(&molecule, 6), |matrix| matrix[(2, 2)]);
        assert_eq!(found, sum(&symmetry.group, expected), "{group}");
    }
}

/// Labels in order of energy, kept where their irrep is one of these.
fn kept(name: &str, irreps: &[&str]) -> Vec<String> {
    let labels = set_labels(&labelled(name).1, 0);
    labels
        .into_iter()
        .filter(|label| irreps.contains(&label.trim_start_matches(|c: char| c.is_ascii_digit())))
        .collect()
}

/// Species matrix groups; orders from memory, confirmed by the calculations in the files.
#[test]
fn orbitals_of_named_molecules() {
    assert_eq!(kept("benzene_sto3g", &["a2u", "e1g", "e2u", "b2g"]), ["1a2u", "1e1g", "1e2u", "1b2g"]);
    assert_eq!(kept("cyclobutadiene_triplet_d4h_sto3g", &["a2u", "eg", "b2u"]), ["1a2u", "1eg", "1b2u"]);
    // Water in yz: a list printed with the issue of a program that had x and y exchanged.
    assert_eq!(set_labels(&labelled("water_sto3g").1, 0), ["1a1", "2a1", "1b2", "3a1", "1b1", "4a1", "2b2"]);
    for (name, highest, lowest) in [
        ("formaldehyde_631gs", "2b2", "2b1"),
        ("butadiene_c2h_631g", "1bg", "2au"),
        ("carbon_dioxide_631gs", "1pi_g", ""),
        ("allene_d2d_631g", "2e", "3e"),
        ("permanganate_td_def2svp", "1t1", "2e"),
    ] {
        let (_, labelled) = labelled(name);
        let frontier = orbsieve::labelling::frontier::frontier(&labelled.spins[0].sets, 2.0);
        let labels = set_labels(&labelled, 0);
        assert_eq!(labels[frontier.homo.unwrap()], highest, "{name}");
        if !lowest.is_empty() {
            assert_eq!(labels[frontier.lumo.unwrap()], lowest, "{name}");
        }
    }
    // The second empty set of permanganate is the other half of the metal's d shell.
    let permanganate = kept("permanganate_td_def2svp", &["e", "t2"]);
    assert!(permanganate.windows(2).any(|pair| pair[0] == "2e" && pair[1] == "7t2"), "{permanganate:?}");
    // With its hydrogens the ammine is not Oh.
    assert_eq!(placed("cobalt_ammine_d3d_sto3g").1.group.name(), "D3d".parse().unwrap());
}

/// A textbook's solved problem on complexes of cobalt and chromium, recomputed with matrix groups.
#[test]
fn metal_shells_in_complexes() {
    for (name, p, d) in [("Oh", "T1u", "Eg T2g"), ("D3", "A2 E", "A1 2E"), ("D4h", "A2u Eu", "A1g B1g B2g Eg")] {
        let group = group(name);
        for (l, expected) in [(1, p), (2, d)] {
            assert_eq!(group.decompose(&group.shell_characters(l)).unwrap(), sum(&group, expected), "{name}");
        }
    }
    // The d block of ferrocene: a1g + e1g + e2g.
    let (molecule, symmetry) = placed("ferrocene_d5d_sto3g");
    assert_eq!(of_element(&molecule, 26).len(), 1);
    let group = &symmetry.group;
    assert_eq!(group.decompose(&group.shell_characters(2)).unwrap(), sum(group, "A1g E1g E2g"));
}
