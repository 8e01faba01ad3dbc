//! Level diagrams: what is drawn is what `label` says, read back from the SVG; no labels overlap, statuses tell what went wrong.

#![allow(clippy::unwrap_used, reason = "a test may stop at once")]

mod support;

use std::collections::{BTreeMap, BTreeSet};
use support::diagrams::{ALL, Level, axis, diagram, labelled, levels, path, printed, run};
use support::xml::{self, Element};

const EV_PER_HARTREE: f64 = 27.211_386_245_988; // CODATA 2018, from memory

/// Restricted, unrestricted, linear, an atom, mixed orbitals, part-filled shells, a cage, effective core potentials.
const DIVERSE: [&str; 18] = [
    "scenario/lantern-3",
    "scenario/bellows-5",
    "scenario/ribbon-2",
    "benzene_631g",
    "oxygen_triplet_631gs",
    "carbon_dioxide_631gs",
    "hydrogen_cyanide_631gs",
    "zinc_ion_def2svp",
    "b12h12_ih_sto3g",
    "ferrocene_d5d_sto3g",
    "manganese_aqua_sextet_th_sto3g",
    "mixed_ethene",
    "localised_methane_boys",
    "broken_boron_atom",
    "broken_chromium_fluoride_d1",
    "nickel_carbonyl_td_ecp",
    "helium_pinwheel_c4",
    "psi4_amidogen_uhf_pure",
];

#[test]
fn every_number_is_that_of_the_labels() {
    for name in DIVERSE {
        let (drawn, document) = (levels(&diagram(name, &ALL)), labelled(name, &[]));
        let sets = document["sets"].as_array().unwrap();
        assert_eq!(drawn.len(), sets.len(), "{name}: no level is dropped");
        let unrestricted = sets.iter().any(|set| set["spin"] == "beta");
        for set in sets {
            let level = drawn.iter().find(|level| level.set == set["set"].as_u64().unwrap()).unwrap();
            let energy = set["energy_hartree"].as_f64().unwrap() * EV_PER_HARTREE;
            assert!((level.energy - energy).abs() < 1e-5, "{name} {set}");
            assert_eq!(level.irrep, set["irrep"].as_str().unwrap_or(""), "{name}");
            let turned = set["content"].as_str().unwrap_or("mixed").to_lowercase();
            assert_eq!(level.label, set["label"].as_str().unwrap_or(&turned), "{name}");
            let orbitals: Vec<u64> = set["orbitals"].as_array().unwrap().iter().map(|n| n.as_u64().unwrap()).collect();
            assert_eq!(level.orbitals, orbitals, "{name}: one bar an orbital");
            let incomplete = set["complete"] == false && !set["irrep"].is_null();
            assert_eq!(level.label_text.contains('*'), incomplete, "{name} {set}");
            assert!((level.arrows - set["electrons"].as_f64().unwrap()).abs() < 1e-5, "{name} {set}");
            let spin = if unrestricted { set["spin"].as_str().unwrap() } else { "" };
            assert_eq!(level.spin, spin, "{name}");
        }
        let electrons: f64 = drawn.iter().map(|level| level.arrows).sum();
        assert!((electrons - document["source"]["electrons"].as_f64().unwrap()).abs() < 1e-3, "{name}: {electrons}");
    }
}

#[test]
fn bars_stand_where_the_axis_says() {
    for name in DIVERSE {
        let elements = diagram(name, &[]);
        let (energy, drawn) = (axis(&elements), levels(&elements));
        assert!(!drawn.is_empty(), "{name}");
        let span = drawn.iter().map(|level| level.energy).fold(f64::MIN, f64::max)
            - drawn.iter().map(|level| level.energy).fold(f64::MAX, f64::min);
        for level in &drawn {
            for bar in &level.bars {
                // Places have two decimals of a point, the axis is 200 points or more.
                assert!((energy(bar[0]) - level.energy).abs() < 3e-4 * span.max(1.0), "{name} {level:?}");
            }
        }
    }
}

#[test]
fn the_window_holds_the_frontier_and_counts_the_rest() {
    for name in DIVERSE {
        let (elements, document) = (diagram(name, &[]), labelled(name, &[]));
        let shown: BTreeSet<u64> = levels(&elements).iter().map(|level| level.set).collect();
        for spin in document["frontier"]["spins"].as_array().unwrap() {
            for which in [&spin["homo"], &spin["lumo"]] {
                assert!(which.as_u64().is_none_or(|set| shown.contains(&set)), "{name} {spin}");
            }
        }
        // "11 lower and 2 higher levels not shown."
        let notes = elements.iter().filter(|element| element.name == "text" && element.text.contains("not shown"));
        let words = notes.flat_map(|note| note.text.split_whitespace().map(str::to_owned).collect::<Vec<_>>());
        let words: Vec<String> = words.collect();
        let counted: usize = words
            .windows(2)
            .filter(|pair| ["lower", "higher"].contains(&pair[1].as_str()))
            .map(|pair| pair[0].parse::<usize>().unwrap())
            .sum();
        assert_eq!(shown.len() + counted, document["sets"].as_array().unwrap().len(), "{name}: {words:?}");
    }
    // Cores of first-row elements are left out, valence 2s is not (facts of the trade).
    let water = levels(&diagram("water_631gs", &[]));
    let labels: Vec<&str> = water.iter().map(|level| level.label.as_str()).collect();
    assert!(labels.contains(&"2a1") && !labels.contains(&"1a1"), "{labels:?}");
}

#[test]
fn no_two_labels_overlap_and_their_order_is_that_of_energy() {
    for (name, more) in
        DIVERSE.iter().flat_map(|name| [(name, &[][..]), (name, &ALL[..]), (name, &["--range", "-20,20"][..])])
    {
        let drawn = levels(&diagram(name, more));
        for spin in ["", "alpha", "beta"] {
            let column: Vec<&Level> = drawn.iter().filter(|level| level.spin == spin).collect();
            for pair in column.windows(2) {
                assert!(pair[0].energy >= pair[1].energy, "{name}: highest first");
                // Text of 7.5 points, subscripts a little below.
                assert!(pair[1].label_at - pair[0].label_at >= 8.5, "{name}: {pair:?}");
            }
        }
    }
}

#[test]
fn no_two_bars_touch() {
    for name in DIVERSE {
        let drawn = levels(&diagram(name, &[]));
        let bars: Vec<[f64; 3]> = drawn.iter().flat_map(|level| level.bars.clone()).collect();
        for (at, a) in bars.iter().enumerate() {
            for b in &bars[..at] {
                let beside = a[2] <= b[1] + 1e-6 || b[2] <= a[1] + 1e-6;
                assert!(beside || (a[0] - b[0]).abs() > 1.3, "{name}: {a:?} {b:?}");
            }
        }
    }
}

#[test]
fn labels_are_set_for_print() {
    let (elements, lantern) = (diagram("scenario/lantern-3", &[]), levels(&diagram("scenario/lantern-3", &[])));
    let text = |label: &str| lantern.iter().find(|level| level.label == label).unwrap().label_text.clone();
    assert_eq!((text("2t2g"), text("6eg")), ("2t2g".to_owned(), "6eg".to_owned()));
    let italics: BTreeSet<&str> = elements
        .iter()
        .filter(|element| element.get("font-style") == "italic")
        .map(|element| element.text.as_str())
        .collect();
    assert_eq!(italics, BTreeSet::from(["O", "a", "e", "t"]));
    let carbon_dioxide = levels(&diagram("carbon_dioxide_631gs", &[]));
    assert!(carbon_dioxide.iter().any(|level| level.label_text == "1πg"), "{carbon_dioxide:?}");
}

#[test]
fn the_gap_is_that_of_the_frontier() {
    for name in ["scenario/lantern-3", "benzene_631g", "oxygen_triplet_631gs"] {
        let (elements, document) = (diagram(name, &[]), labelled(name, &[]));
        let gaps: Vec<&Element> = elements.iter().filter(|element| element.has_class("gap")).collect();
        let spins = document["frontier"]["spins"].as_array().unwrap();
        assert_eq!(gaps.len(), spins.len(), "{name}");
        for (gap, spin) in gaps.iter().zip(spins) {
            let ev = spin["gap_hartree"].as_f64().unwrap() * EV_PER_HARTREE;
            assert!((gap.number("data-gap-ev") - ev).abs() < 1e-5, "{name}");
            assert!(gap.text.contains(&format!("{ev:.2} eV")), "{name}: {}", gap.text);
        }
        assert!(elements.iter().any(|element| element.text.contains("not a band")), "{name}");
    }
}

#[test]
fn transitions_drawn_are_the_allowed_ones() {
    for name in ["benzene_631g", "formaldehyde_631gs", "oxygen_triplet_631gs", "scenario/lantern-3", "sf6_631gs"] {
        let (elements, document) = (diagram(name, &["--transitions"]), labelled(name, &[]));
        let shown: BTreeSet<u64> = levels(&elements).iter().map(|level| level.set).collect();
        let wanted: BTreeMap<(u64, u64), String> = document["transitions"]
            .as_array()
            .unwrap()
            .iter()
            .filter(|entry| entry["electric_dipole"]["allowed"] == true)
            .map(|entry| {
                let axes = entry["electric_dipole"]["polarisation"].as_array().unwrap();
                let axes: Vec<&str> = axes.iter().map(|axis| axis.as_str().unwrap()).collect();
                ((entry["from_set"].as_u64().unwrap(), entry["to_set"].as_u64().unwrap()), axes.join(","))
            })
            .filter(|((from, to), _)| shown.contains(from) && shown.contains(to))
            .collect();
        let drawn: BTreeMap<(u64, u64), String> = elements
            .iter()
            .filter(|element| element.has_class("transition"))
            .map(|element| {
                let set = |name: &str| element.get(name).parse().unwrap();
                ((set("data-from-set"), set("data-to-set")), element.get("data-polarisation").to_owned())
            })
            .collect();
        assert_eq!(drawn, wanted, "{name}");
        assert!(elements.iter().any(|element| element.text.contains("not an intensity")) || wanted.is_empty());
    }
    // The textbook case: e1g → e2u of benzene gives E1u among others, in the plane (common practice).
    let benzene = diagram("benzene_631g", &["--transitions"]);
    assert!(benzene.iter().any(|element| element.get("data-polarisation") == "x,y"));
}

#[test]
fn parts_of_electrons_are_dashed_and_told() {
    let scratch = tempfile::tempdir().unwrap();
    let text = std::fs::read_to_string(path("water_631gs")).unwrap();
    let text = text.replace("Occup=    2.00000", "Occup=    1.50000");
    let file = scratch.path().join("warm.molden");
    std::fs::write(&file, &text).unwrap();
    let elements = xml::read(&printed(&["label", file.to_str().unwrap(), "--quiet", "--format", "svg"]));
    let drawn = levels(&elements);
    let filled: Vec<&Level> = drawn.iter().filter(|level| level.arrows > 0.0).collect();
    assert!(!filled.is_empty() && filled.iter().all(|level| (level.arrows - 1.5).abs() < 1e-6), "{drawn:?}");
    assert!(filled.iter().all(|level| level.label_text.contains("(1.50 e−)")), "{filled:?}");
    let arrows = elements.iter().filter(|element| element.has_class("electron"));
    assert!(arrows.clone().next().is_some());
    let dashed = elements.iter().filter(|mark| {
        let around = mark.parent.is_some_and(|parent| elements[parent].has_class("electron"));
        around && mark.attributes.contains_key("stroke-dasharray")
    });
    assert_eq!(arrows.count(), dashed.count());
    assert!(elements.iter().any(|element| element.text.contains("parts of an electron")));
}

#[test]
fn absurd_or_missing_energies_are_counted_or_refused() {
    let scratch = tempfile::tempdir().unwrap();
    let text = std::fs::read_to_string(path("water_631gs")).unwrap();
    let energies: Vec<&str> = text.lines().filter(|line| line.contains("Ene=")).collect();
    let write = |name: &str, text: &str| {
        let file = scratch.path().join(name);
        std::fs::write(&file, text).unwrap();
        file.to_str().unwrap().to_owned()
    };
    let absurd = write("absurd.molden", &text.replace(energies[0], " Ene= -1e300"));
    let elements = xml::read(&printed(&["label", &absurd, "--quiet", "--format", "svg"]));
    assert!(elements.iter().any(|element| element.text.contains("1 without a usable energy")));
    let mut none = text.clone();
    for line in &energies {
        none = none.replace(&format!("{line}\n"), "");
    }
    let none = write("none.molden", &none);
    let output = run(&["label", &none, "--quiet", "--format", "svg"]);
    assert_eq!(output.status.code(), Some(3));
    assert!(output.stdout.is_empty());
}

#[test]
fn mixed_orbitals_are_shown_as_such() {
    let elements = diagram("mixed_ethene", &[]);
    let mixed = elements.iter().enumerate().filter(|(_, element)| element.has_class("mixed"));
    for (at, level) in mixed.clone() {
        assert!(level.text.contains("no single irrep"), "{}", level.text);
        let bars = elements.iter().filter(|mark| mark.parent == Some(at) && mark.has_class("bar"));
        assert!(bars.into_iter().all(|bar| bar.attributes.contains_key("stroke-dasharray")));
    }
    assert!(mixed.count() > 0);
}

#[test]
fn hostile_names_stay_text() {
    let water = path("water_631gs");
    let names = "<svg onload=\"x()\">&amp;]]>,'\u{7}\u{fffe}é";
    let drawn = printed(&["levels", &water, &water, "--names", names, "--quiet"]);
    let elements = xml::read(&drawn);
    assert_eq!(elements.iter().filter(|element| element.name == "svg").count(), 1);
    assert!(elements.iter().any(|element| element.text.contains("<svg onload=\"x()\">&amp;]]>")));
    let scratch = tempfile::tempdir().unwrap();
    let file = scratch.path().join("a&b<c>\"d'.molden");
    std::fs::copy(&water, &file).unwrap();
    xml::read(&printed(&["label", file.to_str().unwrap(), "--format", "svg"]));
}

#[test]
fn people_who_listen_get_the_levels_too() {
    let elements = diagram("water_631gs", &[]);
    let root = &elements[0];
    assert_eq!((root.get("role"), root.get("width")), ("img", "84mm"));
    let ids: Vec<&str> = root.get("aria-labelledby").split(' ').collect();
    for id in ids {
        assert!(elements.iter().any(|element| element.get("id") == id && !element.text.trim().is_empty()), "{id}");
    }
    // Several diagrams can stand in one page: every id begins with that of the root.
    let named = elements.iter().filter(|element| element.attributes.contains_key("id"));
    assert!(named.into_iter().all(|element| element.get("id").starts_with(root.get("id"))));
    let story = elements.iter().find(|element| element.name == "desc").unwrap();
    assert!(story.text.contains("1b1") && story.text.contains("2 electrons"), "{}", story.text);
    assert_eq!(diagram("water_631gs", &["--width", "double"])[0].get("width"), "174mm");
}

#[test]
fn statuses_tell_what_went_wrong() {
    let water = path("water_631gs");
    let scratch = tempfile::tempdir().unwrap();
    let target = scratch.path().join("levels.svg");
    let target = target.to_str().unwrap();
    for (arguments, status, message) in [
        (&["levels"][..], 2, "FILES"),
        (&["levels", &water, "--format", "json"], 2, "levels prints svg, not json"),
        (&["levels", &water, &water, "--names", "one", "--output", target], 2, "1 names for 2 files"),
        (&["levels", "-", "-", "--output", target], 2, "standard input can be read only once"),
        (&["levels", &water, "--range", "5,-5", "--output", target], 2, "the lower first"),
        (&["levels", &water, "--range", "-1e300,5", "--output", target], 2, "both within a million"),
        (&["levels", "tests/molecules/xyz/sandwich_d5.xyz", "--output", target], 3, ""),
        (&["levels", &water, "nowhere.molden", "--output", target], 3, "cannot read nowhere.molden"),
        (&["levels", "tests/molecules/psi3_water_631gs_broken.molden", "--output", target], 4, "orthonormal"),
        (&["label", &water, "--range", "-5,5"], 2, "add --format svg"),
        (&["label", &water, "--transitions"], 2, "add --format svg"),
        (&["geometry", &water, "--format", "svg"], 2, "geometry prints text or json, not svg"),
        (&["transitions", &water, "--format", "svg"], 2, "not svg"),
        (&["modes", &water, "--format", "svg"], 2, "not svg"),
        (&["table", "Oh", "--format", "svg"], 2, "table prints text, json, latex or md, not svg"),
        (&["states", "Oh", "t2g^2", "--format", "svg"], 2, "not svg"),
        (&["audit", &water, "--format", "svg"], 2, "not svg"),
        (&["levels", &water, "--output", target], 0, ""),
    ] {
        let output = run(arguments);
        let said = String::from_utf8(output.stderr).unwrap();
        assert_eq!(output.status.code(), Some(status), "{arguments:?}: {said}");
        assert!(said.contains(message), "{arguments:?}: {said}");
        assert!(output.stdout.is_empty(), "{arguments:?}");
        assert_eq!(std::path::Path::new(target).exists(), status == 0, "{arguments:?}");
    }
}

#[test]
fn a_level_outside_the_range_is_counted_not_moved() {
    let elements = diagram("water_631gs", &["--range", "-20,0"]);
    assert!(levels(&elements).iter().all(|level| (-20.0..=0.0).contains(&level.energy)));
    assert!(elements.iter().any(|element| element.text.contains("2 lower and")), "1a1 and 2a1 lie lower");
}
