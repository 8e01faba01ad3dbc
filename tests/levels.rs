//! Level diagrams: what is drawn is what `label` says, read back from the SVG; no labels overlap, no lines of an irrep cross.

#![allow(clippy::unwrap_used, reason = "a test may stop at once")]

mod support;

use serde_json::Value;
use std::collections::{BTreeMap, BTreeSet};
use std::process::{Command, Output};
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

fn path(name: &str) -> String {
    format!("tests/molecules/{name}.molden")
}

fn run(arguments: &[&str]) -> Output {
    Command::new(env!("CARGO_BIN_EXE_orbsieve"))
        .args(arguments)
        .current_dir(env!("CARGO_MANIFEST_DIR"))
        .output()
        .unwrap()
}

fn printed(arguments: &[&str]) -> String {
    let output = run(arguments);
    assert_eq!(output.status.code(), Some(0), "{arguments:?}: {}", String::from_utf8_lossy(&output.stderr));
    String::from_utf8(output.stdout).unwrap()
}

/// The diagram of one file, with more options.
fn diagram(name: &str, more: &[&str]) -> Vec<Element> {
    let file = path(name);
    xml::read(&printed(&[&["label", &file, "--quiet", "--format", "svg"], more].concat()))
}

fn series(names: &[&str], more: &[&str]) -> Vec<Element> {
    let files: Vec<String> = names.iter().map(|name| path(name)).collect();
    let mut arguments = vec!["levels", "--quiet"];
    arguments.extend(files.iter().map(String::as_str));
    xml::read(&printed(&[&arguments, more].concat()))
}

fn labelled(name: &str, more: &[&str]) -> Value {
    let file = path(name);
    serde_json::from_str(&printed(&[&["label", &file, "--quiet", "--format", "json"], more].concat())).unwrap()
}

/// A level of a diagram, put together from its marks.
#[derive(Debug, Clone)]
struct Level {
    file: usize,
    spin: String,
    set: u64,
    irrep: String,
    label: String,
    energy: f64,
    orbitals: Vec<u64>,
    /// Places of its bars, and their ends.
    bars: Vec<[f64; 3]>,
    arrows: f64,
    /// Base line of the label's text.
    label_at: f64,
    label_text: String,
}

/// Numbers in path data.
fn numbers(path: &str) -> Vec<f64> {
    path.split(|c: char| c.is_ascii_alphabetic() || c == ' ').filter_map(|word| word.parse().ok()).collect()
}

fn levels(elements: &[Element]) -> Vec<Level> {
    let is_level = |(_, element): &(usize, &Element)| element.has_class("level");
    let level = |(at, element): (usize, &Element)| {
        let column = &elements[element.parent.unwrap()];
        let marks = || elements.iter().filter(|mark| mark.parent == Some(at));
        let bars = || marks().filter(|mark| mark.has_class("bar"));
        let label = marks().find(|mark| mark.name == "text").unwrap();
        Level {
            file: column.get("data-file").parse().unwrap(),
            spin: column.get("data-spin").to_owned(),
            set: element.get("data-set").parse().unwrap(),
            irrep: element.get("data-irrep").to_owned(),
            label: element.get("data-label").to_owned(),
            energy: element.number("data-energy-ev"),
            orbitals: bars().map(|bar| bar.get("data-orbital").parse().unwrap()).collect(),
            bars: bars()
                .map(|bar| {
                    let ends = numbers(bar.get("d"));
                    assert!((ends[1] - ends[3]).abs() < 1e-9, "a bar lies level");
                    [ends[1], ends[0], ends[2]]
                })
                .collect(),
            arrows: marks().filter(|mark| mark.has_class("electron")).map(|mark| mark.number("data-electrons")).sum(),
            label_at: label.number("y"),
            label_text: label.text.clone(),
        }
    };
    elements.iter().enumerate().filter(is_level).map(level).collect()
}

/// eV at a height, from the axis as a reader takes it: the printed numbers and where they stand.
fn axis(elements: &[Element]) -> impl Fn(f64) -> f64 {
    let at = elements.iter().position(|element| element.has_class("axis")).unwrap();
    let ticks: Vec<(f64, f64)> = elements
        .iter()
        .filter(|mark| mark.parent == Some(at) && mark.name == "text")
        .filter_map(|mark| Some((mark.text.replace('−', "-").parse::<f64>().ok()?, mark.number("y") - 0.35 * 7.5)))
        .collect();
    assert!(ticks.len() >= 3, "{ticks:?}");
    let (first, last) = (ticks[0], *ticks.last().unwrap());
    move |y| first.0 + (y - first.1) * (last.0 - first.0) / (last.1 - first.1)
}

/// A range that holds every level.
const ALL: [&str; 2] = ["--range", "-1000000,1000000"];

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

/// A line between two columns.
#[derive(Debug)]
struct Link {
    column: usize,
    irrep: String,
    from: u64,
    to: u64,
    corners: Vec<(f64, f64)>,
}

fn links(elements: &[Element]) -> Vec<Link> {
    let link = |element: &Element| {
        // M x y H x L x y H x
        let at = numbers(element.get("d"));
        assert_eq!(at.len(), 6, "{element:?}");
        Link {
            column: element.get("data-column").parse().unwrap(),
            irrep: element.get("data-irrep").to_owned(),
            from: element.get("data-from-set").parse().unwrap(),
            to: element.get("data-to-set").parse().unwrap(),
            corners: vec![(at[0], at[1]), (at[2], at[1]), (at[3], at[4]), (at[5], at[4])],
        }
    };
    elements.iter().filter(|element| element.has_class("link")).map(link).collect()
}

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
        (&["table", "Oh", "--format", "svg"], 2, "table prints text or json, not svg"),
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
fn the_same_bytes_on_any_number_of_threads() {
    let (a, b) = (path("sf6_sto3g"), path("sf6_stretched_d4h_sto3g"));
    let with = |threads: &str| printed(&["levels", &a, &b, "--threads", threads]);
    assert_eq!(with("1"), with("4"));
}

#[test]
fn a_level_outside_the_range_is_counted_not_moved() {
    let elements = diagram("water_631gs", &["--range", "-20,0"]);
    assert!(levels(&elements).iter().all(|level| (-20.0..=0.0).contains(&level.energy)));
    assert!(elements.iter().any(|element| element.text.contains("2 lower and")), "1a1 and 2a1 lie lower");
}
