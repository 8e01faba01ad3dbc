//! Level diagrams as a reader takes them: run the program, read the SVG back.

use super::xml::{self, Element};
use serde_json::Value;
use std::process::{Command, Output};

pub fn path(name: &str) -> String {
    format!("tests/molecules/{name}.molden")
}

pub fn run(arguments: &[&str]) -> Output {
    Command::new(env!("CARGO_BIN_EXE_orbsieve"))
        .args(arguments)
        .current_dir(env!("CARGO_MANIFEST_DIR"))
        .output()
        .unwrap()
}

pub fn printed(arguments: &[&str]) -> String {
    let output = run(arguments);
    assert_eq!(output.status.code(), Some(0), "{arguments:?}: {}", String::from_utf8_lossy(&output.stderr));
    String::from_utf8(output.stdout).unwrap()
}

/// The diagram of one file, with more options.
pub fn diagram(name: &str, more: &[&str]) -> Vec<Element> {
    let file = path(name);
    xml::read(&printed(&[&["label", &file, "--quiet", "--format", "svg"], more].concat()))
}

pub fn series(names: &[&str], more: &[&str]) -> Vec<Element> {
    let files: Vec<String> = names.iter().map(|name| path(name)).collect();
    let mut arguments = vec!["levels", "--quiet"];
    arguments.extend(files.iter().map(String::as_str));
    xml::read(&printed(&[&arguments, more].concat()))
}

pub fn labelled(name: &str, more: &[&str]) -> Value {
    let file = path(name);
    serde_json::from_str(&printed(&[&["label", &file, "--quiet", "--format", "json"], more].concat())).unwrap()
}

/// A level of a diagram, put together from its marks.
#[derive(Debug, Clone)]
pub struct Level {
    pub file: usize,
    pub spin: String,
    pub set: u64,
    pub irrep: String,
    pub label: String,
    pub energy: f64,
    pub orbitals: Vec<u64>,
    /// Places of its bars, and their ends.
    pub bars: Vec<[f64; 3]>,
    pub arrows: f64,
    /// Base line of the label's text.
    pub label_at: f64,
    pub label_text: String,
}

/// Numbers in path data.
pub fn numbers(path: &str) -> Vec<f64> {
    path.split(|c: char| c.is_ascii_alphabetic() || c == ' ').filter_map(|word| word.parse().ok()).collect()
}

pub fn levels(elements: &[Element]) -> Vec<Level> {
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
pub fn axis(elements: &[Element]) -> impl Fn(f64) -> f64 {
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
pub const ALL: [&str; 2] = ["--range", "-1000000,1000000"];

/// A line between two columns.
#[derive(Debug)]
pub struct Link {
    pub column: usize,
    pub irrep: String,
    pub from: u64,
    pub to: u64,
    pub corners: Vec<(f64, f64)>,
}

pub fn links(elements: &[Element]) -> Vec<Link> {
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
