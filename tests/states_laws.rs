//! Laws of terms, levels and double groups, tried on every family of groups; second paths that share no code with the program's.
#![allow(clippy::unwrap_used, reason = "a test may stop at once")]

use orbsieve::group::irrep_name::{IrrepName, Parity};
use orbsieve::group::{DoubleGroup, GroupName, Kramers, PointGroup};
use orbsieve::states::{Configuration, Term, correlation, spin_orbit, terms, transitions};
use proptest::prelude::*;
use std::collections::BTreeMap;
use std::sync::Mutex;

fn group(name: GroupName) -> PointGroup {
    PointGroup::standard(name).unwrap_or_else(|error| panic!("{name}: {error}"))
}

/// Made once a run: random cases come back to the same few.
fn named(name: &str) -> &'static PointGroup {
    static KNOWN: Mutex<BTreeMap<String, &'static PointGroup>> = Mutex::new(BTreeMap::new());
    let mut known = KNOWN.lock().unwrap();
    known.entry(name.to_owned()).or_insert_with(|| Box::leak(Box::new(group(name.parse().unwrap()))))
}

/// Every family, axes to n, and the cubic, icosahedral and linear groups.
fn every_name(n: u32) -> Vec<GroupName> {
    use GroupName::{C1, Ci, Cinfv, Cn, Cnh, Cnv, Cs, Dinfh, Dn, Dnd, Dnh, I, Ih, O, Oh, Sn, T, Td, Th};
    let mut names = vec![C1, Cs, Ci, T, Td, Th, O, Oh, I, Ih, Cinfv, Dinfh];
    for n in 2..=n {
        names.extend([Cn(n), Cnv(n), Cnh(n), Dn(n), Dnh(n), Dnd(n), Sn(2 * n)]);
    }
    names
}

#[test]
fn double_groups_have_all_irreps_and_orthogonal_rows() {
    for name in every_name(12) {
        let single = group(name);
        let double = DoubleGroup::of(&single).unwrap();
        let irreps = double.irreps();
        let spinors = &irreps[double.n_single()..];
        let squares: usize = spinors.iter().map(|irrep| irrep.dimension.pow(2) / irrep.constituents).sum();
        assert_eq!(squares, single.order(), "{name}: double-valued irreps fill the other half of the group");
        let size: usize = double.classes().iter().map(|class| class.size).sum();
        assert_eq!(size, 2 * single.order());
        for (i, a) in irreps.iter().enumerate() {
            for (j, b) in irreps.iter().enumerate().skip(i) {
                let mean = double.mean(&[&a.characters, &b.characters]);
                let expected = if i == j { a.constituents as f64 } else { 0.0 };
                assert!((mean - expected).abs() < 1e-9, "{name}: {} and {}: {mean}", a.name, b.name);
            }
        }
        let mut names: Vec<String> = irreps.iter().map(|irrep| irrep.name.to_string()).collect();
        names.sort();
        names.dedup();
        assert_eq!(names.len(), irreps.len(), "{name}: two irreps of one name");
    }
}

#[test]
fn half_integer_levels_split_into_whole_kramers_levels() {
    for name in every_name(9) {
        let double = DoubleGroup::of(&group(name)).unwrap();
        for twice_j in (1..=25).step_by(2) {
            for parity in [Parity::Even, Parity::Odd] {
                let mut states = 0;
                for (irrep, count) in spin_orbit::level_in_field(&double, twice_j, parity).unwrap() {
                    let of = &double.irreps()[irrep];
                    assert!(irrep >= double.n_single());
                    // Time reversal: nothing half-integer is less than doubly degenerate.
                    assert_eq!(count % of.copies_in_level(), 0, "{name} J = {twice_j}/2 {}", of.name);
                    assert_eq!(of.dimension * of.copies_in_level() % 2, 0);
                    assert_eq!(of.kramers == Some(Kramers::Conjugates), of.constituents == 2);
                    states += count * of.dimension;
                }
                assert_eq!(states, usize::from(twice_j) + 1);
            }
        }
    }
}

#[test]
fn whole_j_in_the_double_group_are_functions_of_that_degree() {
    for name in every_name(8) {
        let single = group(name);
        let double = DoubleGroup::of(&single).unwrap();
        for l in 0_u16..=6 {
            let parity = if l % 2 == 0 { Parity::Even } else { Parity::Odd };
            let shell = single.decompose(&single.shell_characters(usize::from(l))).unwrap();
            assert_eq!(spin_orbit::level_in_field(&double, 2 * l, parity).unwrap(), shell, "{name} l = {l}");
        }
    }
}

#[test]
fn descent_of_levels_goes_through_any_group_between() {
    for name in ["O", "Oh", "Td", "Ih", "D6h", "D4d", "D3h", "T", "D5d"] {
        let parent = named(name);
        let double = DoubleGroup::of(parent).unwrap();
        for subgroup in parent.subgroups().unwrap() {
            let onto = DoubleGroup::of(&subgroup.group).unwrap();
            for twice_j in 0..=9 {
                for parity in [Parity::Even, Parity::Odd] {
                    let mut through = BTreeMap::new();
                    for (irrep, count) in spin_orbit::level_in_field(&double, twice_j, parity).unwrap() {
                        for (below, times) in double.subduce(&subgroup, &onto, irrep).unwrap() {
                            *through.entry(below).or_insert(0) += count * times;
                        }
                    }
                    let straight: BTreeMap<usize, usize> =
                        spin_orbit::level_in_field(&onto, twice_j, parity).unwrap().into_iter().collect();
                    assert_eq!(through, straight, "{name} → {}, 2J = {twice_j}", subgroup.group.name());
                }
            }
        }
    }
}

/// Terms of an atom by counting M_L and M_S of determinants: the bookkeeping of textbooks.
fn by_counting(shells: &[(u8, u32)]) -> BTreeMap<(u16, u8), usize> {
    let mut counts: BTreeMap<(i32, i32), i64> = BTreeMap::from([((0, 0), 1)]);
    for &(l, electrons) in shells {
        let places: Vec<(i32, i32)> = (-i32::from(l)..=i32::from(l)).flat_map(|m| [(m, 1), (m, -1)]).collect();
        // [electrons placed] → (M_L, 2M_S) → ways
        let mut placed = vec![BTreeMap::from([((0, 0), 1_i64)])];
        placed.resize(electrons as usize + 1, BTreeMap::new());
        for (m, spin) in places {
            for n in (1..=electrons as usize).rev() {
                let before = placed[n - 1].clone();
                for ((ml, ms), ways) in before {
                    *placed[n].entry((ml + m, ms + spin)).or_insert(0) += ways;
                }
            }
        }
        let mut next = BTreeMap::new();
        for (&(ml, ms), &ways) in &counts {
            for (&(more_l, more_s), &more) in &placed[electrons as usize] {
                *next.entry((ml + more_l, ms + more_s)).or_insert(0) += ways * more;
            }
        }
        counts = next;
    }
    let at = |ml, ms| counts.get(&(ml, ms)).copied().unwrap_or(0);
    let mut found = BTreeMap::new();
    for &(ml, ms) in counts.keys().filter(|(ml, ms)| *ml >= 0 && *ms >= 0) {
        let count = at(ml, ms) - at(ml + 1, ms) - at(ml, ms + 2) + at(ml + 1, ms + 2);
        if count > 0 {
            let key = (u16::try_from(ms + 1).unwrap(), u8::try_from(ml).unwrap());
            found.insert(key, usize::try_from(count).unwrap());
        }
    }
    found
}

fn of_atom(atom: &PointGroup, shells: &[(u8, u32)]) -> BTreeMap<(u16, u8), usize> {
    let filled: Vec<(usize, Option<u32>, u32)> = shells
        .iter()
        .map(|&(l, electrons)| (atom.orbital_irrep(usize::from(l)).unwrap(), Some(u32::from(l) + 1), electrons))
        .collect();
    let configuration = Configuration::new(atom, &filled).unwrap();
    let parity = shells.iter().map(|&(l, electrons)| u32::from(l) * electrons).sum::<u32>() % 2;
    terms(atom, &configuration)
        .unwrap()
        .into_iter()
        .map(|term| match atom.irreps()[term.irrep].name {
            IrrepName::Atomic { l, parity: found } => {
                assert_eq!(found == Parity::Odd, parity == 1);
                ((term.multiplicity, l), term.count)
            }
            other => panic!("{other}"),
        })
        .collect()
}

#[test]
fn terms_of_atoms_agree_with_counting() {
    let atom = group(GroupName::K);
    for (l, places) in [(0, 2), (1, 6), (2, 10), (3, 14)] {
        for electrons in 0..=places {
            assert_eq!(of_atom(&atom, &[(l, electrons)]), by_counting(&[(l, electrons)]), "l = {l}, n = {electrons}");
        }
    }
    for shells in [&[(1, 2), (2, 3)][..], &[(0, 1), (1, 3), (2, 2)], &[(2, 1), (3, 7)], &[(2, 2), (3, 6)], &[(4, 3)]] {
        assert_eq!(of_atom(&atom, shells), by_counting(shells), "{shells:?}");
    }
}

#[test]
fn weak_and_strong_field_count_the_same_terms() {
    let atom = named("Kh");
    for name in
        ["O", "Oh", "Td", "D4h", "D3", "C3v", "D3d", "D5h", "Ih", "C2v", "C4", "S4", "T", "Cinfv", "Dinfh", "D4d"]
    {
        let in_field = named(name);
        let double = DoubleGroup::of(in_field).unwrap();
        for (l, places) in [(1, 6), (2, 10), (3, 14)] {
            // In lower symmetry the ways to fill seven shells are many: f only where orbitals stay together.
            if l == 3 && in_field.decompose(&in_field.shell_characters(3)).unwrap().len() > 4 {
                continue;
            }
            for electrons in 0..=places {
                let both = correlation(atom, in_field, &double, l, electrons).unwrap();
                assert_eq!(both.weak_total(), both.strong_total(), "{name} l = {l} n = {electrons}");
                let states: usize = both.weak_total().iter().map(|term| term.states(in_field)).sum();
                assert!((states as f64 - both.free.microstates()).abs() < 0.5);
            }
        }
    }
}

/// Characters of n electrons in spin-orbitals under an operation and a turn of the spins by `angle`, from power sums alone.
fn spin_orbital_character(powers: &[f64], electrons: usize, angle: f64) -> f64 {
    let sums: Vec<f64> = (1..=electrons).map(|k| powers[k] * 2.0 * (k as f64 * angle / 2.0).cos()).collect();
    let mut elementary = vec![1.0];
    for n in 1..=electrons {
        let sum: f64 = (1..=n).map(|k| sums[k - 1] * elementary[n - k] * if k % 2 == 1 { 1.0 } else { -1.0 }).sum();
        elementary.push(sum / n as f64);
    }
    elementary[electrons]
}

#[test]
fn terms_carry_the_character_of_antisymmetrised_spin_orbitals() {
    for name in ["O", "Ih", "D4h", "D5d", "C3", "S4", "T", "Th", "C3v", "D3h", "C5h", "D6"] {
        let group = named(name);
        for irrep in 0..group.irreps().len() {
            let places = 2 * group.irreps()[irrep].dimension;
            for electrons in 0..=places {
                let filled = [(irrep, None, u32::try_from(electrons).unwrap())];
                let list = terms(group, &Configuration::new(group, &filled).unwrap()).unwrap();
                for (class_idx, class) in group.classes().iter().enumerate() {
                    let mut element = 0;
                    let powers: Vec<f64> = (0..=electrons)
                        .map(|_| {
                            let character = group.irreps()[irrep].characters[group.elements()[element].class_idx];
                            element = group.multiply(class.members[0], element);
                            character
                        })
                        .collect();
                    for angle in [0.0, 0.7, 2.1, 3.3] {
                        let straight = spin_orbital_character(&powers, electrons, angle);
                        let summed: f64 = list
                            .iter()
                            .map(|term| {
                                let twice = i32::from(term.twice_spin());
                                let spin: f64 =
                                    (-twice..=twice).step_by(2).map(|m| (f64::from(m) * angle / 2.0).cos()).sum();
                                term.count as f64 * spin * group.irreps()[term.irrep].characters[class_idx]
                            })
                            .sum();
                        assert!(
                            (straight - summed).abs() < 1e-8,
                            "{name} {}^{electrons} {}: {straight} {summed}",
                            group.irreps()[irrep].name,
                            class.symbol
                        );
                    }
                }
            }
        }
    }
}

#[test]
fn components_fill_the_term_and_keep_parity_and_spin() {
    for name in every_name(6) {
        let group = group(name);
        let double = DoubleGroup::of(&group).unwrap();
        for irrep in 0..group.irreps().len() {
            for multiplicity in 1..=6 {
                let term = Term { multiplicity, irrep, count: 1 };
                // Linear molecules keep Ω to 25/2.
                let Ok(components) = spin_orbit::components(&group, &double, &term) else { continue };
                let states: usize = components.iter().map(|(at, n)| n * double.irreps()[*at].dimension).sum();
                assert_eq!(states, term.states(&group));
                let half = multiplicity % 2 == 0;
                assert!(components.iter().all(|(at, _)| (*at >= double.n_single()) == half));
            }
        }
    }
}

#[test]
fn electric_dipoles_change_parity_and_rules_are_the_same_both_ways() {
    for name in ["Oh", "D4h", "Ih", "D3d", "Dinfh", "C2h", "Kh", "Td", "C3"] {
        let group = named(name);
        let double = DoubleGroup::of(group).unwrap();
        let list: Vec<Term> = (0..group.irreps().len())
            .filter(|&irrep| group.irreps()[irrep].dimension <= 5)
            .flat_map(|irrep| [1, 2, 3].map(|multiplicity| Term { multiplicity, irrep, count: 1 }))
            .filter(|term| spin_orbit::components(group, &double, term).is_ok())
            .take(40)
            .collect();
        let there = transitions(group, &double, &list, Some(&list)).unwrap();
        for rule in &there {
            let back = &there[rule.to * list.len() + rule.from];
            assert_eq!((back.from, back.to), (rule.to, rule.from));
            assert_eq!(back.electric_dipole, rule.electric_dipole);
            assert_eq!(back.borrowed, rule.borrowed);
            // What a term gives as a whole its components give too.
            if rule.spin_allowed {
                assert!(rule.electric_dipole.iter().all(|irrep| rule.borrowed.contains(irrep)), "{name}");
            }
            let parity = |at: usize| group.irreps()[list[at].irrep].name.to_string().contains('u');
            if group.irreps().iter().any(|irrep| irrep.name.to_string().contains('u'))
                && parity(rule.from) == parity(rule.to)
            {
                assert!(rule.electric_dipole.is_empty() && rule.borrowed.is_empty(), "{name}: Laporte");
            }
        }
    }
}

proptest! {
    #![proptest_config(ProptestConfig::with_cases(200))]

    #[test]
    fn states_of_all_terms_are_the_microstates(
        name in prop::sample::select(vec!["C1", "C2v", "C3", "D3h", "D4h", "Td", "Oh", "Ih", "D5d", "S4", "T", "C6h", "Dinfh", "Kh"]),
        picks in prop::collection::vec((0_usize..1000, 0_u32..100), 1..5),
    ) {
        let group = named(name);
        let shells: Vec<(usize, Option<u32>, u32)> = picks
            .iter()
            .zip(1..)
            .map(|(&(irrep, electrons), number)| {
                // Low l and |m|: products stay within what continuous groups keep.
                let kept = if group.is_continuous() { 3 } else { group.irreps().len() };
                let irrep = irrep % kept;
                let places = u32::try_from(2 * group.irreps()[irrep].dimension).unwrap();
                (irrep, Some(number), electrons % (places + 1))
            })
            .collect();
        let Ok(configuration) = Configuration::new(group, &shells) else { return Ok(()) };
        let Ok(list) = terms(group, &configuration) else { return Ok(()) };
        let states: usize = list.iter().map(|term| term.states(group)).sum();
        prop_assert!((states as f64 - configuration.microstates()).abs() < 0.5);
        // Holes: the same terms.
        let holes: Vec<(usize, Option<u32>, u32)> = configuration
            .shells()
            .iter()
            .map(|shell| (shell.irrep, shell.number, shell.places - shell.electrons))
            .collect();
        let holes = terms(group, &Configuration::new(group, &holes).unwrap()).unwrap();
        let multiplicities = |list: &[Term]| -> Vec<(u16, usize, usize)> {
            list.iter().map(|term| (term.multiplicity, group.irreps()[term.irrep].dimension, term.count)).collect()
        };
        // A full shell of an ungerade or signed irrep is totally symmetric, so even the irreps agree.
        prop_assert_eq!(multiplicities(&list), multiplicities(&holes));
        prop_assert_eq!(list, holes);
    }

    #[test]
    fn no_text_makes_the_reader_panic(text in "\\PC{0,40}", name in prop::sample::select(vec!["Oh", "D26", "Dinfh", "Kh", "C1"])) {
        let _ = Configuration::parse(named(name), &text);
    }

    #[test]
    fn configurations_survive_a_round_trip(
        name in prop::sample::select(vec!["C2v", "D3h", "D4h", "Td", "Oh", "Ih", "D26", "Dinfh", "Kh"]),
        picks in prop::collection::vec((0_usize..1000, 0_u32..100), 1..6),
    ) {
        let group = named(name);
        let shells: Vec<(usize, Option<u32>, u32)> = picks
            .iter()
            .zip(1..)
            .map(|(&(irrep, electrons), number)| {
                let irrep = if name == "Kh" { group.orbital_irrep(irrep % 4).unwrap() } else { irrep % group.irreps().len() };
                let places = u32::try_from(2 * group.irreps()[irrep].dimension).unwrap();
                (irrep, Some(number), electrons % (places + 1))
            })
            .collect();
        let Ok(configuration) = Configuration::new(group, &shells) else { return Ok(()) };
        prop_assert_eq!(Configuration::parse(group, &configuration.to_string()).unwrap(), configuration);
    }
}
