//! Level diagrams side by side: lines between equal irreps, from a group to its subgroup; none without a reason.

#![allow(clippy::unwrap_used, reason = "a test may stop at once")]

mod support;

use serde_json::Value;
use std::collections::{BTreeMap, BTreeSet};
use support::diagrams::{ALL, Link, labelled, levels, links, path, printed, run, series};
use support::xml::{self, Element};

/// Whether two segments cross in a point inside both.
fn cross(a: [(f64, f64); 2], b: [(f64, f64); 2]) -> bool {
    let side = |p: (f64, f64), q: (f64, f64), r: (f64, f64)| (q.0 - p.0) * (r.1 - p.1) - (q.1 - p.1) * (r.0 - p.0);
    side(a[0], a[1], b[0]) * side(a[0], a[1], b[1]) < -1e-9 && side(b[0], b[1], a[0]) * side(b[0], b[1], a[1]) < -1e-9
}

#[test]
fn lines_of_one_irrep_never_cross_and_join_equal_running_numbers() {
    for names in [
        &["sf6_sto3g", "sf6_631gs"][..],
        &["water_sto3g", "water_631gs", "water_g"],
        &["ferrocene_d5h_sto3g", "cyclopentadienide_d5h_631g"],
        &["ethene_631gs", "mixed_ethene"],
        &["oxygen_triplet_631gs", "nitrogen_631gs", "ethyne_631gs"],
        &["sf6_sto3g", "sf6_stretched_d4h_sto3g"],
    ] {
        let descends = names.contains(&"sf6_stretched_d4h_sto3g");
        let elements = series(names, &[&ALL[..], if descends { &["--way", "1"] } else { &[] }].concat());
        let (links, drawn) = (links(&elements), levels(&elements));
        assert!(links.len() > 3, "{names:?}");
        for (at, a) in links.iter().enumerate() {
            for b in links[..at].iter().filter(|b| b.column == a.column && b.irrep == a.irrep) {
                let pieces = |link: &Link| link.corners.windows(2).map(|pair| [pair[0], pair[1]]).collect::<Vec<_>>();
                let crossing = pieces(a).iter().any(|x| pieces(b).iter().any(|y| cross(*x, *y)));
                assert!(!crossing, "{names:?}: {a:?} {b:?}");
            }
        }
        // Over all levels the k-th of an irrep is the one whose running number is k.
        if !descends && drawn.iter().all(|level| !level.label.contains('+')) {
            for link in &links {
                let column = (link.column - 1) % names.len() + 1;
                let spin = &["", "alpha", "beta"][..];
                let label = |file: usize, set: u64| {
                    let at = drawn
                        .iter()
                        .find(|level| level.file == file && level.set == set && spin.contains(&level.spin.as_str()));
                    at.unwrap().label.clone()
                };
                assert_eq!(label(column, link.from), label(column + 1, link.to), "{names:?}");
            }
        }
    }
}

#[test]
fn lines_stay_within_a_spin() {
    let elements = series(&["oxygen_triplet_631gs", "nitrogen_631gs"], &ALL);
    let (links, drawn) = (links(&elements), levels(&elements));
    // Columns: alpha of both files, then beta of both.
    assert_eq!(links.iter().map(|link| link.column).collect::<BTreeSet<_>>(), BTreeSet::from([1, 3]));
    // Nitrogen is restricted: seven electrons up, seven down.
    for spin in ["alpha", "beta"] {
        let of = |file: usize| {
            drawn.iter().filter(move |level| level.file == file && level.spin == spin).map(|level| level.arrows)
        };
        assert!((of(2).sum::<f64>() - 7.0).abs() < 1e-9);
        assert!((of(1).sum::<f64>() - if spin == "alpha" { 9.0 } else { 7.0 }).abs() < 1e-9);
    }
}

#[test]
fn a_parent_splits_into_what_its_irreps_become() {
    // Descent in symmetry Oh → D4h, C2′ along the axes (tables of common practice; from memory).
    let published: BTreeMap<&str, &[&str]> = BTreeMap::from([
        ("A1g", &["A1g"][..]),
        ("Eg", &["A1g", "B1g"]),
        ("T1g", &["A2g", "Eg"]),
        ("T2g", &["B2g", "Eg"]),
        ("A2u", &["B1u"]),
        ("Eu", &["A1u", "B1u"]),
        ("T1u", &["A2u", "Eu"]),
        ("T2u", &["B2u", "Eu"]),
    ]);
    let names = ["sf6_sto3g", "sf6_stretched_d4h_sto3g"];
    let elements = series(&names, &[&ALL[..], &["--way", "1"]].concat());
    let (links, drawn) = (links(&elements), levels(&elements));
    let of = |file: usize| drawn.iter().filter(move |level| level.file == file).collect::<Vec<_>>();
    for level in of(1) {
        let mut parts: Vec<&str> =
            links.iter().filter(|link| link.from == level.set).map(|link| link.irrep.as_str()).collect();
        parts.sort_unstable();
        assert_eq!(parts, published[level.irrep.as_str()], "{level:?}");
    }
    for level in of(2) {
        let from: Vec<&Link> = links.iter().filter(|link| link.to == level.set).collect();
        assert_eq!(from.len(), 1, "the same basis: every level comes from one");
        assert_eq!(from[0].irrep, level.irrep);
    }
    // Second path: the parent file labelled in D4h itself. Its k-th b1g belongs to the set that the lines say.
    let (parent, descended) = (labelled(names[0], &[]), labelled(names[0], &["--group", "D4h"]));
    let set_of = |document: &Value, orbital: u64| {
        let sets = document["sets"].as_array().unwrap().clone();
        sets.into_iter().find(|set| set["orbitals"].as_array().unwrap().contains(&orbital.into())).unwrap()
    };
    let mut counted: BTreeMap<String, usize> = BTreeMap::new();
    let mut compared = 0;
    for set in descended["sets"].as_array().unwrap() {
        let above = set_of(&parent, set["orbitals"][0].as_u64().unwrap())["set"].as_u64().unwrap();
        let irreps = set["irrep"].as_str().or(set["content"].as_str()).unwrap();
        for irrep in irreps.split(" + ") {
            let k = counted.entry(irrep.to_owned()).or_default();
            *k += 1;
            // Cores of like atoms lie at one energy: which comes first is chance.
            if set["energy_hartree"].as_f64().unwrap() > -5.0 {
                let label = format!("{k}{}", irrep.to_lowercase());
                let level = of(2).into_iter().find(|level| level.label == label).unwrap();
                let link = links.iter().find(|link| link.to == level.set).unwrap();
                assert_eq!(link.from, above, "{label}");
                compared += 1;
            }
        }
    }
    assert!(compared > 20, "{compared}");
}

#[test]
fn files_in_one_frame_choose_the_way_down_themselves() {
    // The stretched octahedron's nuclei moved back onto those of an octahedron, in the same coordinates.
    let scratch = tempfile::tempdir().unwrap();
    let (stretched, regular) = (path("sf6_stretched_d4h_sto3g"), scratch.path().join("regular.molden"));
    let regular = regular.to_str().unwrap();
    let moved = ["purify", &stretched, "--group", "Oh", "--geometry", "--tolerance", "0.3", "--output", regular];
    printed(&moved);
    for files in [[regular, &stretched], [&stretched, regular]] {
        let elements = xml::read(&printed(&[&["levels", "--quiet"], &files[..], &ALL].concat()));
        let split: BTreeSet<String> = links(&elements).into_iter().map(|link| link.irrep).collect();
        assert!(split.contains("B1g") && split.contains("B2g"), "{split:?}");
        let note = elements.iter().find(|element| element.text.contains("axes as the coordinates of both files"));
        assert!(note.is_some_and(|note| note.text.contains("Oh to D4h")), "{note:?}");
        let drawn = levels(&elements);
        for level in drawn.iter().filter(|level| level.irrep == "T2g") {
            let (here, set) = (level.file, level.set);
            let parts = links(&elements).into_iter().filter(|link| if here == 1 { link.from } else { link.to } == set);
            let parts: BTreeSet<String> = parts.map(|link| link.irrep).collect();
            assert_eq!(parts, BTreeSet::from(["B2g".to_owned(), "Eg".to_owned()]));
        }
    }
}

#[test]
fn no_kinship_no_lines() {
    let (a, b) = (path("bf3_d3h_631gs"), path("clf5_c4v_sto3g"));
    let output = run(&["levels", &a, &b]);
    assert_eq!(output.status.code(), Some(0));
    let (drawn, said) = (String::from_utf8(output.stdout).unwrap(), String::from_utf8(output.stderr).unwrap());
    assert!(links(&xml::read(&drawn)).is_empty());
    assert!(said.contains("No lines between D3h and C4v: neither is a subgroup of the other"), "{said}");
    assert!(drawn.contains("neither is a subgroup"), "the figure says so too");
    // Two ways down, and files in no common frame: the reader is asked, told what differs, and no line is drawn.
    let (a, b) = (path("sf6_sto3g"), path("sf6_stretched_d4h_sto3g"));
    let output = run(&["levels", &a, &b]);
    assert_eq!(output.status.code(), Some(0));
    assert!(links(&xml::read(&String::from_utf8(output.stdout).unwrap())).is_empty());
    let said = String::from_utf8(output.stderr).unwrap();
    assert!(said.contains("--way 1: Eg → A1g + B1g") && said.contains("--way 2: Eg → A1g + B2g"), "{said}");
    let output = run(&["levels", &a, &b, "--way", "3"]);
    assert_eq!(output.status.code(), Some(2));
    assert!(String::from_utf8(output.stderr).unwrap().contains("there is no way 3 from Oh to D4h: there are 2"));
    // In a common subgroup there are lines.
    assert!(links(&series(&["bf3_d3h_631gs", "clf5_c4v_sto3g"], &["--group", "C2v"])).len() > 5);
}

#[test]
fn an_atom_meets_a_complex() {
    // Levels of the free ion against those of an octahedral complex: 3d becomes eg + t2g (crystal-field theory).
    let elements = series(&["zinc_ion_def2svp", "sf6_sto3g"], &ALL);
    let drawn = levels(&elements);
    let d = drawn.iter().find(|level| level.label == "1d_g").unwrap().set;
    let parts: BTreeSet<String> =
        links(&elements).into_iter().filter(|link| link.from == d).map(|link| link.irrep).collect();
    assert_eq!(parts, BTreeSet::from(["Eg".to_owned(), "T2g".to_owned()]));
}

#[test]
fn counting_from_the_frontier_joins_the_highest_filled() {
    // Two cores in carbon monoxide, one in hydrogen fluoride.
    let names = ["hydrogen_fluoride_631gs", "carbon_monoxide_631gs"];
    let lowest = series(&names, &ALL);
    let frontier = series(&names, &[&ALL[..], &["--count", "frontier"]].concat());
    let drawn = levels(&frontier);
    let highest = |file: usize| {
        let filled = drawn.iter().filter(|level| level.file == file && level.irrep == "Sigma+" && level.arrows > 0.5);
        filled.max_by(|a, b| a.energy.total_cmp(&b.energy)).unwrap().set
    };
    let joined =
        |elements: &[Element]| links(elements).iter().any(|link| (link.from, link.to) == (highest(1), highest(2)));
    assert!(joined(&frontier) && !joined(&lowest));
}

#[test]
fn other_cores_are_told() {
    let (a, b) = (path("water_631gs"), path("xtb_water"));
    let said = |more: &[&str]| String::from_utf8(run(&[&["levels", &a, &b], more].concat()).stderr).unwrap();
    assert!(said(&[]).contains("different cores"), "{}", said(&[]));
    assert!(!said(&["--count", "frontier"]).contains("different cores"));
}

#[test]
fn zero_at_the_highest_level_with_electrons() {
    let drawn = levels(&series(&["water_631gs", "ammonia_631gs"], &["--zero", "homo"]));
    for file in [1, 2] {
        let filled = drawn.iter().filter(|level| level.file == file && level.arrows > 0.0).map(|level| level.energy);
        assert!(filled.fold(f64::MIN, f64::max).abs() < 1e-9);
    }
}

#[test]
fn the_same_bytes_on_any_number_of_threads() {
    let (a, b) = (path("sf6_sto3g"), path("sf6_stretched_d4h_sto3g"));
    let with = |threads: &str| printed(&["levels", &a, &b, "--threads", threads]);
    assert_eq!(with("1"), with("4"));
}
