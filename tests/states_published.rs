//! Published and independently worked out rows on states: each with its source, none used by the program.
//!
//! "Matrix groups": worked out from explicitly generated matrices by another program, checked by the number of microstates.
#![allow(clippy::unwrap_used, reason = "a test may stop at once")]

use orbsieve::group::irrep_name::Parity;
use orbsieve::group::{DoubleGroup, GroupName, PointGroup};
use orbsieve::states::jahn_teller::{self, JahnTeller};
use orbsieve::states::{Configuration, Term, spin_orbit, terms, transitions};

const SPLITTING_1929: &str = "Termaufspaltung in Kristallen, Ann. Phys. 3, 133 (1929), half-integer J";
const MATRIX_GROUPS: &str = "matrix groups";
const BY_HAND: &str = "by hand from the axial rotation group";

struct Setting {
    group: PointGroup,
    double: DoubleGroup,
}

impl Setting {
    fn of(name: &str) -> Self {
        let group = PointGroup::standard(name.parse::<GroupName>().unwrap()).unwrap();
        let double = DoubleGroup::of(&group).unwrap();
        Self { group, double }
    }

    fn terms(&self, text: &str) -> Vec<Term> {
        terms(&self.group, &Configuration::parse(&self.group, text).unwrap()).unwrap()
    }

    /// An irrep of the double group by Γ number, `E1/2` style or Mulliken name.
    fn irrep(&self, name: &str) -> usize {
        let irreps = self.double.irreps();
        let found = irreps.iter().position(|irrep| {
            irrep.name.to_string() == name
                || irrep.name.gamma().is_some_and(|gamma| gamma.replace("Gamma", "Γ") == name)
        });
        found.unwrap_or_else(|| panic!("{}: no {name}", self.group.name()))
    }

    /// `Γ6+2Γ8` as sorted (irrep, count).
    fn sum(&self, text: &str) -> Vec<(usize, usize)> {
        let mut sum: Vec<(usize, usize)> = text
            .split('+')
            .map(|part| {
                let digits = part.len() - part.trim_start_matches(|c: char| c.is_ascii_digit()).len();
                let count = if digits == 0 { 1 } else { part[..digits].parse().unwrap() };
                (self.irrep(&part[digits..]), count)
            })
            .collect();
        sum.sort_unstable();
        sum
    }

    fn term(&self, symbol: &str) -> Term {
        let digits = symbol.len() - symbol.trim_start_matches(|c: char| c.is_ascii_digit()).len();
        let irrep = self.group.irrep_idx(&symbol[digits..].parse().unwrap()).unwrap();
        Term { multiplicity: symbol[..digits].parse().unwrap(), irrep, count: 1 }
    }

    fn components(&self, symbol: &str) -> Vec<(usize, usize)> {
        spin_orbit::components(&self.group, &self.double, &self.term(symbol)).unwrap()
    }
}

/// `3T1 + 2 1E` as sorted text, one entry a kind.
fn listed(text: &str) -> Vec<String> {
    let mut kinds: Vec<String> =
        text.split(" + ").map(|kind| if kind.contains(' ') { kind.to_owned() } else { format!("1 {kind}") }).collect();
    kinds.sort();
    kinds
}

#[test]
fn terms_of_open_shells() {
    // group, configurations with the same terms, terms, source
    let rows: &[(&str, &[&str], &str, &str)] = &[
        ("O", &["t2^1", "t2^5"], "2T2", MATRIX_GROUPS),
        ("O", &["t2^2", "t2^4"], "3T1 + 1A1 + 1E + 1T2", MATRIX_GROUPS),
        ("O", &["t2^3"], "4A2 + 2E + 2T1 + 2T2", MATRIX_GROUPS),
        ("O", &["e^1", "e^3"], "2E", MATRIX_GROUPS),
        ("O", &["e^2"], "3A2 + 1A1 + 1E", MATRIX_GROUPS),
        ("O", &["t2^1 e^1", "t2^5 e^1", "t2^1 e^3", "t2^5 e^3"], "3T1 + 3T2 + 1T1 + 1T2", MATRIX_GROUPS),
        ("O", &["t2^1 e^2", "t2^5 e^2"], "4T1 + 2 2T1 + 2 2T2", MATRIX_GROUPS),
        (
            "O",
            &["t2^2 e^1", "t2^4 e^1", "t2^2 e^3", "t2^4 e^3"],
            "4T1 + 4T2 + 2A1 + 2A2 + 2 2E + 2 2T1 + 2 2T2",
            MATRIX_GROUPS,
        ),
        (
            "O",
            &["t2^2 e^2", "t2^4 e^2"],
            "5T2 + 3A2 + 3E + 3 3T1 + 2 3T2 + 2 1A1 + 1A2 + 3 1E + 1T1 + 3 1T2",
            MATRIX_GROUPS,
        ),
        ("Ih", &["t1u^2"], "3T1g + 1Ag + 1Hg", MATRIX_GROUPS),
        ("D4h", &["eg^2"], "3A2g + 1A1g + 1B1g + 1B2g", MATRIX_GROUPS),
        ("D6h", &["e1g^2", "e2u^2"], "3A2g + 1A1g + 1E2g", MATRIX_GROUPS),
        ("D6h", &["e1g^3 e2u^1"], "3B1u + 3B2u + 3E1u + 1B1u + 1B2u + 1E1u", MATRIX_GROUPS),
        ("Dinfh", &["pi_g^2", "pi_u^2"], "3Sigma_g- + 1Sigma_g+ + 1Delta_g", BY_HAND),
        ("Cinfv", &["delta^2"], "3Sigma- + 1Gamma + 1Sigma+", BY_HAND),
        ("Cinfv", &["pi^1 delta^1"], "3Pi + 1Pi + 3Phi + 1Phi", BY_HAND),
        // Free atoms: common practice, checked by counting M_L and M_S in tests/states_laws.rs.
        ("Kh", &["p^2", "p^4"], "3P_g + 1S_g + 1D_g", "common practice"),
        ("Kh", &["p^3"], "4S_u + 2P_u + 2D_u", "common practice"),
        ("Kh", &["d^2", "d^8"], "3F_g + 3P_g + 1G_g + 1D_g + 1S_g", "common practice"),
        ("Kh", &["d^3", "d^7"], "4F_g + 4P_g + 2P_g + 2 2D_g + 2F_g + 2G_g + 2H_g", "common practice"),
    ];
    for &(group, configurations, expected, source) in rows {
        let setting = Setting::of(group);
        for text in configurations {
            let found: Vec<String> = setting
                .terms(text)
                .iter()
                .map(|term| format!("{} {}", term.count, term.symbol(&setting.group)))
                .collect();
            let mut found = found;
            found.sort();
            assert_eq!(found, listed(expected), "{group} {text}; {source}");
        }
    }
}

#[test]
fn ground_terms_of_octahedral_complexes() {
    // Ground terms of octahedral d1 to d9: J. Am. Chem. Soc. 136, 9453 (2014), table 2.
    let setting = Setting::of("Oh");
    for (text, expected) in [
        ("t2g^1", "2T2g"),
        ("t2g^2", "3T1g"),
        ("t2g^3", "4A2g"),
        ("t2g^3 eg^1", "5Eg"),
        ("t2g^4", "3T1g"),
        ("t2g^3 eg^2", "6A1g"),
        ("t2g^5", "2T2g"),
        ("t2g^4 eg^2", "5T2g"),
        ("t2g^6", "1A1g"),
        ("t2g^5 eg^2", "4T1g"),
        ("t2g^6 eg^1", "2Eg"),
        ("t2g^6 eg^2", "3A2g"),
        ("t2g^6 eg^3", "2Eg"),
    ] {
        let configuration = Configuration::parse(&setting.group, text).unwrap();
        let list = terms(&setting.group, &configuration).unwrap();
        let ground = orbsieve::states::ground(&setting.group, &configuration, &list);
        let names: Vec<String> = ground.terms.iter().map(|&at| list[at].symbol(&setting.group)).collect();
        assert_eq!(names, [expected], "{text}");
    }
}

#[test]
fn half_integer_levels_in_fields() {
    // Of a conjugate pair the two numbers stand together.
    let rows: &[(&str, &[&str])] = &[
        ("O", &["Γ6", "Γ8", "Γ7+Γ8", "Γ6+Γ7+Γ8", "Γ6+2Γ8", "Γ6+Γ7+2Γ8", "Γ6+2Γ7+2Γ8", "Γ6+Γ7+3Γ8"]),
        ("D4", &["Γ6", "Γ6+Γ7", "Γ6+2Γ7", "2Γ6+2Γ7", "3Γ6+2Γ7"]),
        ("D3", &["E1/2", "E1/2+E3/2", "2E1/2+E3/2", "3E1/2+E3/2", "3E1/2+2E3/2"]),
    ];
    for (group, levels) in rows {
        let setting = Setting::of(group);
        for (at, expected) in levels.iter().enumerate() {
            let twice_j = u16::try_from(2 * at + 1).unwrap();
            let found = spin_orbit::level_in_field(&setting.double, twice_j, Parity::Even).unwrap();
            assert_eq!(found, setting.sum(expected), "{group} J = {twice_j}/2; {SPLITTING_1929}");
        }
    }
}

#[test]
fn products_in_the_double_group_of_the_cube() {
    let setting = Setting::of("O");
    for (a, b, expected) in [
        ("A2", "Γ6", "Γ7"),
        ("E", "Γ6", "Γ8"),
        ("T1", "Γ6", "Γ6+Γ8"),
        ("T2", "Γ6", "Γ7+Γ8"),
        ("E", "Γ8", "Γ6+Γ7+Γ8"),
        ("T1", "Γ8", "Γ6+Γ7+2Γ8"),
        ("T2", "Γ8", "Γ6+Γ7+2Γ8"),
        ("Γ6", "Γ6", "A1+T1"),
        ("Γ7", "Γ7", "A1+T1"),
        ("Γ6", "Γ7", "A2+T2"),
        ("Γ6", "Γ8", "E+T1+T2"),
        ("Γ7", "Γ8", "E+T1+T2"),
        ("Γ8", "Γ8", "A1+A2+E+2T1+2T2"),
    ] {
        let found = setting.double.product(setting.irrep(a), setting.irrep(b)).unwrap();
        assert_eq!(found, setting.sum(expected), "{a} × {b}; {MATRIX_GROUPS}");
    }
}

#[test]
fn numbers_of_double_valued_irreps() {
    // Γ numbers and Eⱼ names: Properties of the Thirty-Two Point Groups (1963) and common practice, from memory.
    for (group, names) in [
        ("C1", "A1/2=Γ2"),
        ("Cs", "E1/2=Γ3,4"),
        ("C2v", "E1/2=Γ5"),
        ("D2", "E1/2=Γ5"),
        ("C3", "E1/2=Γ4,5 A3/2=Γ6"),
        ("C3v", "E1/2=Γ4 E3/2=Γ5,6"),
        ("D4", "E1/2=Γ6 E3/2=Γ7"),
        ("D2d", "E1/2=Γ6 E3/2=Γ7"),
        ("D6", "E1/2=Γ7 E5/2=Γ8 E3/2=Γ9"),
        ("D3h", "E1/2=Γ7 E5/2=Γ8 E3/2=Γ9"),
        ("T", "E1/2=Γ5 F3/2=Γ6,7"),
        ("Td", "E1/2=Γ6 E5/2=Γ7 F3/2=Γ8"),
        ("Oh", "E1/2g=Γ6g E5/2g=Γ7g F3/2g=Γ8g E1/2u=Γ6u E5/2u=Γ7u F3/2u=Γ8u"),
        ("I", "E1/2=Γ6 E7/2=Γ7 F3/2=Γ8 I5/2=Γ9"),
    ] {
        let double = Setting::of(group).double;
        let found: Vec<String> = double.irreps()[double.n_single()..]
            .iter()
            .map(|irrep| format!("{}={}", irrep.name, irrep.name.gamma().unwrap().replace("Gamma", "Γ")))
            .collect();
        assert_eq!(found.join(" "), names, "{group}");
    }
}

#[test]
fn spin_orbit_components() {
    // group, term, components, first-order splitting, source
    let rows: &[(&str, &str, &str, bool, &str)] = &[
        ("O", "2T2", "Γ7+Γ8", true, MATRIX_GROUPS),
        ("O", "2E", "Γ8", false, MATRIX_GROUPS),
        ("O", "3A2", "T2", false, MATRIX_GROUPS),
        ("O", "3E", "T1+T2", false, MATRIX_GROUPS),
        ("O", "3T1", "A1+E+T1+T2", true, MATRIX_GROUPS),
        ("O", "3T2", "A2+E+T1+T2", true, MATRIX_GROUPS),
        ("C2v", "3A2", "A1+B1+B2", false, MATRIX_GROUPS),
        ("C2v", "3A1", "A2+B1+B2", false, MATRIX_GROUPS),
        ("C2v", "3B1", "A1+A2+B2", false, MATRIX_GROUPS),
        ("C2v", "3B2", "A1+A2+B1", false, MATRIX_GROUPS),
        // ³Σ⁻ gives 0⁺ and 1; ²Π gives 1/2 and 3/2; ³Π gives 0⁺, 0⁻, 1, 2 (common practice).
        ("Dinfh", "3Sigma_g-", "Sigma_g++Pi_g", false, BY_HAND),
        ("Cinfv", "2Pi", "E1/2+E3/2", true, BY_HAND),
    ];
    for &(group, term, expected, first_order, source) in rows {
        let setting = Setting::of(group);
        let expected = if expected.contains("++") {
            vec![(setting.irrep("Sigma_g+"), 1), (setting.irrep("Pi_g"), 1)]
        } else {
            setting.sum(expected)
        };
        let mut expected = expected;
        expected.sort_unstable();
        assert_eq!(setting.components(term), expected, "{group} {term}; {source}");
        let found = spin_orbit::splits_in_first_order(&setting.group, &setting.term(term)).unwrap();
        assert_eq!(found, first_order, "{group} {term}");
    }
    let linear = Setting::of("Cinfv");
    let names: Vec<String> =
        linear.components("3Pi").iter().map(|(at, _)| linear.double.irreps()[*at].name.to_string()).collect();
    assert_eq!(names, ["Sigma+", "Sigma-", "Pi", "Delta"]);
}

#[test]
fn one_f_electron_in_a_cubic_site() {
    // Ce(III), ²F: the lower level J = 5/2 becomes Γ7 + Γ8 (matrix groups).
    let atom = Setting::of("Kh");
    let term = atom.terms("f^1")[0];
    let levels = spin_orbit::components(&atom.group, &atom.double, &term).unwrap();
    let names: Vec<String> = levels.iter().map(|(at, _)| atom.double.irreps()[*at].name.to_string()).collect();
    assert_eq!(names, ["5/2_u", "7/2_u"]);
    let configuration = Configuration::parse(&atom.group, "f^1").unwrap();
    let ground = orbsieve::states::ground(&atom.group, &configuration, &[term]);
    assert_eq!(ground.twice_j, Some(5));
    let cube = Setting::of("O");
    let split = spin_orbit::level_in_field(&cube.double, 5, Parity::Odd).unwrap();
    assert_eq!(split, cube.sum("Γ7+Γ8"));
    let centred = Setting::of("Oh");
    let split = spin_orbit::level_in_field(&centred.double, 5, Parity::Odd).unwrap();
    assert_eq!(split, centred.sum("Γ7u+Γ8u"));
}

#[test]
fn vibrations_that_open_forbidden_transitions() {
    // From the totally symmetric ground state: modes whose product with the state holds x, y or z. All rows: matrix groups; benzene's
    // e2g also in J. Chem. Phys. 112, 2798 (2000).
    for (group, state, modes) in [
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
        let group = Setting::of(group).group;
        let state = group.irrep_idx(&state.parse().unwrap()).unwrap();
        let opens = |mode: &usize| {
            let product = group.product(state, *mode).unwrap();
            group.vector_irreps().iter().any(|(vector, _)| product.iter().any(|(irrep, _)| irrep == vector))
        };
        let mut found: Vec<String> =
            (0..group.irreps().len()).filter(opens).map(|mode| group.irreps()[mode].name.to_string()).collect();
        found.sort();
        assert_eq!(found.join(" "), modes, "{} {}", group.name(), group.irreps()[state].name);
    }
}

#[test]
fn singlets_and_triplets_of_carbonyls() {
    // Formaldehyde: ³A2 (n, π*) has an A1 sublevel that meets ¹A1 (π, π*) and the ground state; ¹A2 is not among the sublevels of ³A2.
    let setting = Setting::of("C2v");
    let sublevels = setting.components("3A2");
    assert!(sublevels.iter().any(|(irrep, _)| *irrep == setting.irrep("A1")));
    assert!(!sublevels.iter().any(|(irrep, _)| *irrep == setting.irrep("A2")));
}

#[test]
fn selection_rules_between_states() {
    // group, from, to, spin-allowed, electric dipole by the orbital parts, by spin–orbit components. Benzene, MX6, formaldehyde and O2:
    // matrix groups or by hand; the lowest triplet of benzene stays dark even with spin–orbit coupling (common practice).
    for (group, from, to, spin, orbital, borrowed) in [
        ("D6h", "1A1g", "1E1u", true, "E1u", "E1u"),
        ("D6h", "1A1g", "1B2u", true, "", ""),
        ("D6h", "1A1g", "3B1u", false, "", ""),
        ("D6h", "1A1g", "3E1u", false, "E1u", "A2u E1u"),
        ("Oh", "1A1g", "1T1g", true, "", ""),
        ("Oh", "1A1g", "3T1g", false, "", ""),
        ("Td", "1A1", "1T2", true, "T2", "T2"),
        ("Td", "1A1", "1T1", true, "", ""),
        ("C2v", "1A1", "1A2", true, "", ""),
        ("C2v", "1A1", "3A2", false, "", "A1 B1 B2"),
        ("C2v", "1A1", "1B2", true, "B2", "B2"),
        ("Dinfh", "3Sigma_g-", "1Delta_g", false, "", ""),
        ("Dinfh", "3Sigma_g-", "1Sigma_g+", false, "", ""),
        ("Dinfh", "3Sigma_g-", "3Sigma_u-", true, "Sigma_u+", "Pi_u Sigma_u+"),
        ("Kh", "2S_g", "2P_u", true, "P_u", "P_u"),
        ("Kh", "1S_g", "3P_u", false, "P_u", "P_u"),
        ("Kh", "1S_g", "1D_g", true, "", ""),
        ("Kh", "1S_g", "5P_u", false, "P_u", "P_u"),
    ] {
        let setting = Setting::of(group);
        let (a, b) = (setting.term(from), setting.term(to));
        let found = transitions(&setting.group, &setting.double, &[a], Some(&[b])).unwrap();
        let names = |irreps: &[usize]| {
            let mut names: Vec<String> =
                irreps.iter().map(|&irrep| setting.group.irreps()[irrep].name.to_string()).collect();
            names.sort();
            names.join(" ")
        };
        let rule = &found[0];
        assert_eq!(rule.spin_allowed, spin, "{group} {from} {to}");
        assert_eq!(names(&rule.electric_dipole), orbital, "{group} {from} {to}");
        assert_eq!(names(&rule.borrowed), borrowed, "{group} {from} {to}");
    }
    // MX6 ¹A1g → ¹T1g is allowed for a magnetic dipole, ¹T2g and ¹Eg for a quadrupole.
    let setting = Setting::of("Oh");
    let excited = ["1T1g", "1T2g", "1Eg"].map(|symbol| setting.term(symbol));
    let found = transitions(&setting.group, &setting.double, &[setting.term("1A1g")], Some(&excited)).unwrap();
    let magnetic: Vec<bool> = found.iter().map(|rule| !rule.magnetic_dipole.is_empty()).collect();
    let quadrupole: Vec<bool> = found.iter().map(|rule| !rule.quadrupole.is_empty()).collect();
    assert_eq!((magnetic, quadrupole), (vec![true, false, false], vec![false, true, true]));
}

#[test]
fn jahn_teller_active_modes() {
    // E ⊗ e, T ⊗ (e + t2), … : common practice; Γ8 ⊗ (e + t2): matrix groups through the antisymmetric square.
    for (group, irrep, modes) in [
        ("Oh", "Eg", "Eg"),
        ("Oh", "T1g", "Eg+T2g"),
        ("Oh", "T2g", "Eg+T2g"),
        ("Td", "T2", "E+T2"),
        ("D4h", "Eg", "B1g+B2g"),
        ("D6h", "E1g", "E2g"),
        ("D3h", "E'", "E'"),
        ("C3v", "E", "E"),
        ("C4v", "E", "B1+B2"),
        ("Ih", "T1u", "Hg"),
        ("Ih", "Gg", "Gg+Hg"),
        ("Ih", "Hg", "Gg+2Hg"),
        ("O", "Γ8", "E+T2"),
    ] {
        let setting = Setting::of(group);
        let found = jahn_teller::of_level(&setting.group, &setting.double, setting.irrep(irrep)).unwrap();
        assert_eq!(found, JahnTeller::Active(setting.sum(modes)), "{group} {irrep}");
    }
    for (group, level) in [("O", "Γ6"), ("D3", "E1/2"), ("D3", "E3/2"), ("C1", "A1/2"), ("Oh", "A2g"), ("C3", "A3/2")]
    {
        let setting = Setting::of(group);
        let found = jahn_teller::of_level(&setting.group, &setting.double, setting.irrep(level)).unwrap();
        assert_eq!(found, JahnTeller::Stable, "{group} {level}");
    }
    let linear = Setting::of("Dinfh");
    let pi = linear.irrep("Pi_g");
    assert_eq!(jahn_teller::of_irrep(&linear.group, pi).unwrap(), JahnTeller::Linear);
}
