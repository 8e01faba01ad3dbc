//! Moments between orbitals against a reference library, and the transitions of real molecules against published rules.
#![allow(clippy::unwrap_used, reason = "a test may stop at once")]

mod support;

use orbsieve::labelling::{Labelled, Thresholds};
use orbsieve::model::Molecule;
use orbsieve::report::transitions::{Context, TransitionEntry};
use orbsieve::selection::{Choice, Selector, choose};
use orbsieve::wavefunction::{self, Moments};
use serde_json::Value;
use support::files::{disturbed, labelled, molecule, reference};

fn matrices(moments: &Moments) -> Vec<&ndarray::Array2<f64>> {
    moments.position.iter().chain(&moments.gradient).chain(&moments.angular).chain(&moments.second).collect()
}

/// Values by libcint, made by `tests/molecules/scripts/moments.py`: single pairs, and weighted sums over all pairs.
#[test]
fn moments_agree_with_a_reference_library() {
    let reference = reference("moments_sums");
    let reference = reference.as_object().unwrap();
    assert!(reference.len() >= 8);
    for (name, row) in reference {
        let mut molecule = molecule(name);
        let settled = wavefunction::settle(&mut molecule, Thresholds::STANDARD.orthonormality).unwrap();
        let origin = nalgebra::Point3::from_slice(&numbers(&row["origin_bohr"]));
        let orbitals = molecule.orbital_sets[0].coefficients.view();
        let moments = wavefunction::moments(&settled.basis, &origin, orbitals, orbitals);
        for pair in row["pairs"].as_array().unwrap() {
            let place = |key: &str| usize::try_from(pair[key].as_u64().unwrap()).unwrap();
            let (i, j) = (place("bra"), place("ket"));
            for (at, (ours, theirs)) in matrices(&moments).iter().zip(numbers(&pair["moments"])).enumerate() {
                let ours = ours[(i, j)];
                assert!(
                    (ours - theirs).abs() < 1e-8 * theirs.abs().max(1.0),
                    "{name} {at} ({i}, {j}): {ours} {theirs}"
                );
            }
        }
        for (at, (ours, theirs)) in matrices(&moments).iter().zip(numbers(&row["sums"])).enumerate() {
            let sum: f64 = ours.indexed_iter().map(|((i, j), value)| value * (i as f64 + 2.0 * j as f64).cos()).sum();
            let scale = ours.iter().map(|value| value.abs()).sum::<f64>();
            assert!((sum - theirs).abs() < 1e-9 * scale, "{name} {at}: {sum} {theirs}");
        }
    }
}

/// Single elements by the same library through another script, `tests/molecules/scripts/reference_values.py`.
#[test]
fn elements_of_operators_agree_with_a_reference_library() {
    let reference = reference("moments");
    for (name, rows) in reference.as_object().unwrap() {
        let mut molecule = molecule(name);
        let settled = wavefunction::settle(&mut molecule, Thresholds::STANDARD.orthonormality).unwrap();
        let orbitals = molecule.orbital_sets[0].coefficients.view();
        let moments = wavefunction::moments(&settled.basis, &nalgebra::Point3::origin(), orbitals, orbitals);
        let [xx, yy, zz, xy, xz, yz] = &moments.second;
        let second = [xx, xy, xz, yy, yz, zz];
        for row in rows.as_array().unwrap() {
            let index = |key: &str| usize::try_from(row[key].as_u64().unwrap()).unwrap();
            let place = (index("i"), index("j"));
            let ours = moments.position.iter().chain(&moments.gradient).chain(&moments.angular).chain(second);
            let keys = ["r", "nabla", "r_cross_nabla", "xx_xy_xz_yy_yz_zz"];
            let theirs: Vec<f64> = keys.iter().flat_map(|key| numbers(&row[*key])).collect();
            for (at, (ours, theirs)) in ours.zip(theirs).enumerate() {
                let ours = ours[place];
                assert!((ours - theirs).abs() < 1e-8 * theirs.abs().max(1.0), "{name} {at} {place:?}: {ours} {theirs}");
            }
        }
    }
}

fn numbers(value: &Value) -> Vec<f64> {
    value.as_array().unwrap().iter().map(|number| number.as_f64().unwrap()).collect()
}

fn entries(molecule: &Molecule, labelled: &Labelled, window: (usize, usize)) -> Vec<TransitionEntry> {
    let choice = Choice { from: Vec::new(), to: Vec::new(), window, largest_gap: None };
    let pairs = choose(&labelled.spins, &labelled.symmetry.group, &choice).unwrap();
    Context::new(molecule, labelled).entries(&pairs)
}

fn of<'a>(entries: &'a [TransitionEntry], from: &str, to: &str) -> &'a TransitionEntry {
    entries.iter().find(|entry| entry.from == from && entry.to == to).unwrap_or_else(|| panic!("{from} → {to}"))
}

/// Whole sets of pure orbitals on exact nuclei: what the rule forbids is zero in every operator and component.
#[test]
fn forbidden_moments_vanish() {
    for name in [
        "benzene_sto3g",
        "formaldehyde_631gs",
        "permanganate_td_def2svp",
        "sf6_sto3g",
        "ferrocene_d5d_sto3g",
        "allene_d2d_631g",
        "carbon_monoxide_631gs",
        "ethyne_631gs",
        "b12h12_ih_sto3g",
        "boric_acid_c3h_631g",
        "silicic_acid_s4_sto3g",
        "neopentane_t_sto3g",
        "cobalt_ammine_d3_sto3g",
        "neon_def2tzvp",
        "oxygen_triplet_631gs",
    ] {
        let (molecule, labelled) = labelled(name);
        for entry in entries(&molecule, &labelled, (5, 5)) {
            let forbidden = entry.remarks.iter().find(|remark| remark.contains("forbidden in"));
            assert_eq!(forbidden, None, "{name} {} → {}", entry.from, entry.to);
            let strengths = entry.electric_dipole.strength_by_axis_au;
            for (axis, strength) in ["x", "y", "z"].into_iter().zip(strengths) {
                if !entry.electric_dipole.polarisation.contains(&axis) {
                    assert!(strength < 1e-8, "{name} {} → {} {axis}: {strength}", entry.from, entry.to);
                }
            }
        }
    }
}

/// The rules of "tests/selection_published.rs" again, by labels of real orbitals and with numbers beside them.
#[test]
fn named_transitions() {
    let (molecule, labelled_) = labelled("formaldehyde_631gs");
    let formaldehyde = entries(&molecule, &labelled_, (4, 4));
    let n_pi = of(&formaldehyde, "2b2", "2b1");
    assert_eq!((n_pi.product.as_slice(), n_pi.electric_dipole.allowed), (["A2".to_owned()].as_slice(), Some(false)));
    assert_eq!(n_pi.magnetic_dipole.components, ["Rz"]);
    assert!(n_pi.electric_dipole.strength_au < 1e-10 && n_pi.magnetic_dipole.strength_au > 0.1);
    let pi_pi = of(&formaldehyde, "1b1", "2b1");
    assert_eq!(pi_pi.electric_dipole.polarisation, ["z"]);
    assert!(pi_pi.strongest && pi_pi.electric_dipole.strength_by_axis_au[2] > 1.0);
    // ³A2 (n, π*) has an A1 sublevel that meets ¹A1 (π, π*) and the ground state, and none of A2: matrix groups.
    let sublevels = &n_pi.triplets[0].sublevels;
    let a1 = sublevels.iter().find(|sublevel| sublevel.irrep == "A1").unwrap();
    assert!(a1.meets.contains(&"ground".to_owned()) && a1.meets.contains(&"1b1 → 2b1".to_owned()));
    assert!(!sublevels.iter().any(|sublevel| sublevel.irrep == "A2"));
    // Helpers of ¹A2 that H2CO has: one b1, two b2 modes.
    let helpers: Vec<(&str, usize)> =
        n_pi.vibronic.iter().map(|helper| (helper.irrep.as_str(), helper.modes_in_molecule)).collect();
    assert_eq!(helpers, [("B1", 1), ("B2", 2)]);

    let (molecule, labelled_) = labelled("benzene_sto3g");
    let benzene = entries(&molecule, &labelled_, (2, 2));
    let first = &benzene[0];
    assert_eq!(first.product, ["B1u", "B2u", "E1u"]);
    assert_eq!(first.laporte.as_deref(), Some("g-u"));
    let [x, y, z] = first.electric_dipole.strength_by_axis_au;
    assert!((x - y).abs() < 1e-8 && x > 1.0 && z < 1e-10);
    // f = (2/3) ΔE S × 2 electrons of one orbital.
    let f = 4.0 / 3.0 * first.energy_hartree.unwrap() * first.electric_dipole.strength_au;
    assert!((f - first.electric_dipole.oscillator_strength.unwrap()).abs() < 1e-12);
    let working: Vec<&str> = first.vibronic.iter().map(|helper| helper.irrep.as_str()).collect();
    assert_eq!(working, ["B2g", "E2g", "E2g"]);

    // Allene: of the four states of e → e light along the long axis reaches one.
    let (molecule, labelled_) = labelled("allene_d2d_631g");
    let allene = entries(&molecule, &labelled_, (3, 3));
    assert_eq!(of(&allene, "2e", "3e").electric_dipole.polarisation, ["z"]);
    // CO and N2: π → π* along the axis only.
    let (molecule, labelled_) = labelled("nitrogen_631gs");
    let nitrogen = entries(&molecule, &labelled_, (3, 3));
    assert_eq!(of(&nitrogen, "1pi_u", "1pi_g").product, ["Sigma_u+", "Sigma_u-", "Delta_u"]);
    assert_eq!(of(&nitrogen, "1pi_u", "1pi_g").electric_dipole.polarisation, ["z"]);
    // An icosahedral case: x, y and z alike.
    let (molecule, labelled_) = labelled("b12h12_ih_sto3g");
    let cage = entries(&molecule, &labelled_, (4, 4));
    let allowed = cage.iter().find(|entry| entry.electric_dipole.allowed == Some(true)).unwrap();
    let [x, y, z] = allowed.electric_dipole.strength_by_axis_au;
    assert!((x - y).abs() < 1e-7 && (y - z).abs() < 1e-7 && allowed.electric_dipole.polarisation.len() == 3);
}

/// Turned, shifted, reordered, partners mixed: labels, axes and strengths stay, axis by axis.
#[test]
fn strengths_do_not_depend_on_how_the_molecule_lies() {
    for name in ["formaldehyde_631gs", "benzene_sto3g", "allene_d2d_631g", "sf6_sto3g", "carbon_dioxide_631gs"] {
        let (molecule, labels) = labelled(name);
        let expected = entries(&molecule, &labels, (4, 4));
        for seed in [3, 8] {
            let mut turned = disturbed(name, seed);
            let labels = orbsieve::labelling::label(&mut turned, &Thresholds::STANDARD).unwrap();
            let found = entries(&turned, &labels, (4, 4));
            assert_eq!(found.len(), expected.len());
            for a in &expected {
                let b = of(&found, &a.from, &a.to);
                assert_eq!(a.electric_dipole.polarisation, b.electric_dipole.polarisation, "{name}");
                assert_eq!((&a.product, &a.magnetic_dipole.components), (&b.product, &b.magnetic_dipole.components));
                let pairs =
                    a.electric_dipole.strength_by_axis_au.into_iter().zip(b.electric_dipole.strength_by_axis_au);
                for (x, y) in pairs.chain([
                    (a.electric_dipole.velocity_strength_au, b.electric_dipole.velocity_strength_au),
                    (a.magnetic_dipole.strength_au, b.magnetic_dipole.strength_au),
                    (a.electric_quadrupole.strength_au, b.electric_quadrupole.strength_au),
                ]) {
                    assert!((x - y).abs() < 1e-6 * x.abs().max(1.0), "{name} {} → {}: {x} {y}", a.from, a.to);
                }
            }
        }
    }
}

/// Orbitals of two irreps mixed by hand: the forbidden moment is printed with its reason.
#[test]
fn impure_orbitals_are_explained() {
    let (mut molecule, _) = labelled("formaldehyde_631gs");
    let angle: f64 = 0.15;
    let coefficients = &mut molecule.orbital_sets[0].coefficients;
    // n (2b2) with π (1b1): both full, so the density stays.
    let (n, pi) = (coefficients.row(7).to_owned(), coefficients.row(6).to_owned());
    coefficients.row_mut(7).assign(&(&n * angle.cos() + &pi * angle.sin()));
    coefficients.row_mut(6).assign(&(&pi * angle.cos() - &n * angle.sin()));
    let labels = orbsieve::labelling::label(&mut molecule, &Thresholds::STANDARD).unwrap();
    let found = entries(&molecule, &labels, (2, 1));
    let n_pi = of(&found, "2b2", "2b1");
    assert_eq!(n_pi.electric_dipole.allowed, Some(false));
    assert!(n_pi.electric_dipole.strength_au > 1e-3);
    let remark = n_pi.remarks.iter().find(|remark| remark.contains("electric dipole along z forbidden in C2v"));
    assert!(remark.is_some_and(|remark| remark.contains("impure (purity 0.97")), "{:?}", n_pi.remarks);
}

/// Open shells: the ground term by highest spin, and the terms of the excited configuration.
#[test]
fn open_shells_tell_their_states() {
    let (molecule, labels) = labelled("oxygen_triplet_631gs");
    let oxygen = entries(&molecule, &labels, (4, 4));
    let states = of(&oxygen, "1pi_u", "1pi_g").states.as_ref().unwrap();
    assert_eq!(states.ground, ["3Sigma_g-"]);
    // π³π*³ from the ground term of O2: of the triplets light along the axis reaches ³Σu⁻ (the B state; memory).
    let reached: Vec<&str> = states
        .excited
        .iter()
        .filter(|term| term.spin_allowed && !term.polarisation.is_empty())
        .map(|term| term.term.as_str())
        .collect();
    assert_eq!(reached, ["3Sigma_u-"]);
    let (molecule, labels) = labelled("manganese_aqua_sextet_th_sto3g");
    let manganese = entries(&molecule, &labels, (2, 2));
    let states = manganese[0].states.as_ref().unwrap();
    assert_eq!((states.ground[0].as_str(), states.ground_decided), ("6Ag", true));
}

/// A file with orbitals and modes of one geometry tells which of its modes open a state: benzene's ¹B2u borrows through the four
/// e2g pairs (J. Chem. Phys. 112, 2798 (2000)). Their wavenumbers agree with those of another engine at the same level.
#[test]
fn helpers_are_named_by_the_files_own_modes() {
    let (molecule_, labels) = labelled("benzene_with_modes_sto3g");
    let benzene = entries(&molecule_, &labels, (1, 1));
    let helper = benzene[0].vibronic.iter().find(|helper| helper.state == "B2u" && helper.irrep == "E2g").unwrap();
    assert_eq!((helper.modes_in_molecule, helper.modes.len()), (4, 8));
    let other = molecule("psi4_modes_benzene").vibrations.unwrap();
    for mode in &helper.modes {
        let ours = mode.wavenumber_per_cm.unwrap();
        let theirs = other.modes[mode.mode - 1].wavenumber.unwrap();
        assert!((ours - theirs).abs() < 2.0, "{ours} {theirs}");
    }
    // Loss of an e1g electron distorts along e2g: common practice for the benzene cation.
    let split = Context::new(&molecule_, &labels).jahn_teller();
    assert_eq!((split[0].label.as_str(), split[0].vibrations[0].irrep.as_str()), ("1e1g", "E2g"));
}

/// Labels, orbital numbers and places at the frontier name the same sets; what names none is refused with what there is.
#[test]
fn sets_are_chosen_by_many_names() {
    let (_, labels) = labelled("benzene_sto3g");
    let group = &labels.symmetry.group;
    let pairs = |from: &[&str], to: &[&str]| {
        let read = |names: &[&str]| names.iter().map(|name| name.parse()).collect::<Result<Vec<Selector>, _>>();
        let choice = Choice { from: read(from)?, to: read(to)?, window: (3, 3), largest_gap: None };
        choose(&labels.spins, group, &choice)
    };
    let expected = pairs(&["1e1g"], &["1e2u"]).unwrap();
    assert_eq!(expected.len(), 1);
    for (from, to) in [("homo", "lumo"), ("20", "23"), ("HOMO", "1E2U"), ("21", "lumo+0")] {
        assert_eq!(pairs(&[from], &[to]).unwrap(), expected, "{from} {to}");
    }
    assert_eq!(pairs(&["homo-1", "homo"], &[]).unwrap().len(), 6);
    assert_eq!(pairs(&["3e2g"], &["lumo+1"]).unwrap(), pairs(&["homo-1"], &["1b2g"]).unwrap());
    for (from, told) in [
        ("9e1g", "one set has that irrep"),
        ("9e2g", "5 sets have that irrep, numbered from 1"),
        ("1t2g", "no orbital has that irrep; the group has a1g"),
        ("1b2g", "1b2g is empty: no electron can leave it"),
        ("99", "orbitals count from 1 to 36"),
        ("humo", "`humo` names no set"),
        ("0", "`0` names no set"),
        ("homo+1", "`homo+1` names no set"),
        ("99999999999999999999", "names no set"),
    ] {
        let error = pairs(&[from], &["lumo"]).unwrap_err().to_string();
        assert!(error.contains(told), "{error}");
    }
    let narrow = Choice { from: Vec::new(), to: Vec::new(), window: (5, 5), largest_gap: Some(0.6) };
    assert_eq!(choose(&labels.spins, group, &narrow).unwrap(), expected);
}
