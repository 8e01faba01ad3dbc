//! What each verb puts into a table for a paper: columns, caption with the tolerance, honest notes.
//!
//! Not here: how cells are set (`report::typeset`).

use super::document::{Document, Geometry, SetEntry};
use super::modes::ModesDocument;
use super::states::{ConfigurationEntry, StatesDocument};
use super::table::TableDocument;
use super::text::{EV_PER_HARTREE, TextOptions, shown};
use super::transitions::TransitionEntry;
use super::typeset::{Cell, Piece, Sheet, joined, number, words};
use crate::labelling::composition::ranges;
use crate::model::Spin;

/// A dash for what is not there.
fn none() -> Cell {
    words("–")
}

fn label(name: Option<&str>) -> Cell {
    name.map_or_else(none, |name| vec![Piece::Label(name.to_owned())])
}

fn functions(names: &[&str]) -> Cell {
    if names.is_empty() {
        return none();
    }
    joined(names.iter().map(|name| vec![Piece::Function((*name).to_owned())]), ", ")
}

fn electronvolts(energy: Option<f64>) -> Cell {
    energy.map_or_else(none, |energy| number(format!("{:.3}", energy * EV_PER_HARTREE)))
}

fn columns(heads: &[(&str, bool)]) -> Vec<(Cell, bool)> {
    heads.iter().map(|&(head, numbers)| (words(head), numbers)).collect()
}

/// `of C6H6 in D6h (nuclei within 0.0000 Å of it, tolerance 0.01 Å)`.
fn in_group(what: &str, formula: &str, geometry: &Geometry) -> Cell {
    vec![
        Piece::Words(format!("{what} of {formula} in ")),
        Piece::Group(geometry.point_group.clone()),
        Piece::Words(format!(
            " (nuclei within {:.4} Å of it, tolerance {} Å)",
            geometry.deviation_max_angstrom,
            format!("{:.6}", geometry.tolerance_angstrom).trim_end_matches('0').trim_end_matches('.')
        )),
    ]
}

/// Axes, file, title: what makes labels reproducible.
fn provenance(document: &Document) -> Vec<String> {
    let source = &document.source;
    let title = if source.title.is_empty() { String::new() } else { format!(", titled “{}”", source.title) };
    let mut notes = vec![format!("From {}{title}; axes: {}", source.file, document.geometry.axes_convention)];
    if let Some(basis) = &document.basis {
        notes.push(format!("Orbitals are orthonormal to {:.0e}", basis.orthonormality_residual));
    }
    let (group, nuclei) = (&document.geometry.point_group, &document.geometry.nuclear_group);
    if group != nuclei {
        notes.push(format!("Labels are in {group}, while all nuclei have {nuclei}"));
    }
    notes.extend(document.geometry.warnings.iter().cloned());
    notes
}

/// Sets of each spin: those around the frontier, or all of them.
#[must_use]
pub fn label_sheets(document: &Document, options: TextOptions) -> Vec<Sheet> {
    let sets = document.sets.as_deref().unwrap_or_default();
    let frontier = document.frontier.as_ref().map(|frontier| frontier.spins.as_slice()).unwrap_or_default();
    let unrestricted = sets.iter().any(|set| set.spin == Spin::Beta);
    let of_spin = |spin: Spin| {
        let all: Vec<&SetEntry> = sets.iter().filter(|set| set.spin == spin).collect();
        let place = frontier.iter().find(|entry| entry.spin == spin);
        let range = shown(&all, place, options);
        let mark = |set: &SetEntry| match place {
            Some(place) if place.homo == Some(set.set) => "HOMO",
            Some(place) if place.lumo == Some(set.set) => "LUMO",
            Some(place) if place.somo.contains(&set.set) => "SOMO",
            _ => "",
        };
        let row = |set: &&SetEntry| {
            let from_zero: Vec<usize> = set.orbitals.iter().map(|orbital| orbital - 1).collect();
            vec![
                label(set.label.as_deref()),
                words(mark(set)),
                electronvolts(set.energy_hartree),
                set.electrons.map_or_else(none, |n| number(super::text::count(n))),
                number(format!("{:.4}", set.purity)),
                words(ranges(&from_zero).replace('-', "–")),
                words(super::text::made_of(&set.character)),
                words(super::text::remark(set)),
            ]
        };
        let what = match (unrestricted, spin) {
            (false, _) => "Orbitals",
            (true, Spin::Alpha) => "Alpha orbitals",
            (true, Spin::Beta) => "Beta orbitals",
        };
        let mut notes = provenance(document);
        if range.len() < all.len() {
            notes.push(format!("Sets {} to {} of {}", range.start + 1, range.end, all.len()));
        }
        notes.push(
            "Purity: smallest weight of the irrep in an orbital of the set; composition: Löwdin shares, which depend on the basis; \
             differences of orbital energies are no band energies"
                .to_owned(),
        );
        notes.extend(document.cautions.iter().cloned());
        Sheet {
            caption: in_group(what, &document.source.formula, &document.geometry),
            columns: columns(&[
                ("Label", false),
                ("", false),
                ("Energy/eV", true),
                ("Electrons", true),
                ("Purity", true),
                ("Orbitals", false),
                ("Composition", false),
                ("Remark", false),
            ]),
            rows: all[range].iter().map(row).collect(),
            notes,
        }
    };
    let spins: &[Spin] = if unrestricted { &[Spin::Alpha, Spin::Beta] } else { &[Spin::Alpha] };
    spins.iter().map(|&spin| of_spin(spin)).collect()
}

fn rule(allowed: Option<bool>, components: &[&str]) -> Cell {
    match allowed {
        None => words("no rule"),
        Some(false) => words("forbidden"),
        Some(true) => functions(components),
    }
}

fn oscillator(f: Option<f64>) -> Cell {
    f.map_or_else(none, |f| number(format!("{f:.4}")))
}

fn transition_row(entry: &TransitionEntry, unrestricted: bool) -> Vec<Cell> {
    let end = |name: &str| if name.starts_with("set ") { words(name) } else { label(Some(name)) };
    let mut pair = end(&entry.from);
    pair.push(Piece::To);
    pair.extend(end(&entry.to));
    if unrestricted {
        pair.push(Piece::Words(format!(" ({:?})", entry.spin).to_lowercase()));
    }
    let product = joined(entry.product.iter().map(|name| label(Some(name))), " + ");
    let helpers = joined(
        entry.vibronic.iter().map(|helper| label(Some(&helper.irrep))).fold(Vec::new(), |mut known, helper| {
            if !known.contains(&helper) {
                known.push(helper);
            }
            known
        }),
        ", ",
    );
    vec![
        pair,
        electronvolts(entry.energy_hartree),
        if product.is_empty() { none() } else { product },
        rule(entry.electric_dipole.allowed, &entry.electric_dipole.polarisation),
        oscillator(entry.electric_dipole.oscillator_strength),
        oscillator(entry.electric_dipole.oscillator_strength_velocity),
        rule(entry.magnetic_dipole.allowed, &entry.magnetic_dipole.components),
        if helpers.is_empty() { none() } else { helpers },
    ]
}

/// Transitions between sets.
#[must_use]
pub fn transition_sheets(document: &Document) -> Vec<Sheet> {
    let entries = document.transitions.as_deref().unwrap_or_default();
    let unrestricted = document.sets.iter().flatten().any(|set| set.spin == Spin::Beta);
    let mut notes = provenance(document);
    notes.extend(document.cautions.iter().cloned());
    let remarks = entries
        .iter()
        .flat_map(|entry| entry.remarks.iter().map(move |remark| format!("{} → {}: {remark}", entry.from, entry.to)));
    notes.extend(remarks);
    vec![Sheet {
        caption: in_group("Transitions between sets of orbitals", &document.source.formula, &document.geometry),
        columns: columns(&[
            ("Transition", false),
            ("Orbital gap/eV", true),
            ("Product", false),
            ("E dipole", false),
            ("f (length)", true),
            ("f (velocity)", true),
            ("M dipole", false),
            ("Opened by", false),
        ]),
        rows: entries.iter().map(|entry| transition_row(entry, unrestricted)).collect(),
        notes,
    }]
}

/// The character table.
#[must_use]
pub fn table_sheets(document: &TableDocument) -> Vec<Sheet> {
    let group = Piece::Group(document.point_group.clone());
    let classes = document.classes.iter().map(|class| (vec![Piece::Class(class.symbol.clone())], true));
    let row = |irrep: &super::table::IrrepEntry| {
        let star = irrep.conjugate_pair.then(|| Piece::Words("*".to_owned()));
        let name = [Piece::Label(irrep.name.clone())].into_iter().chain(star).collect();
        let characters = irrep.exact.iter().map(|character| number(character.clone()));
        let functions = joined(irrep.functions.iter().map(|name| vec![Piece::Function(name.clone())]), ", ");
        [name].into_iter().chain(characters).chain([functions]).collect()
    };
    let mut notes = vec![format!("Axes: {}", document.axes_convention)];
    if document.irreps.iter().any(|irrep| irrep.conjugate_pair) {
        notes.push("*: two complex-conjugate irreps taken together as one real representation".to_owned());
    }
    vec![Sheet {
        caption: vec![Piece::Words("Characters of ".to_owned()), group.clone()],
        columns: [(vec![group], false)].into_iter().chain(classes).chain(columns(&[("Functions", false)])).collect(),
        rows: document.irreps.iter().map(row).collect(),
        notes,
    }]
}

/// `t2g^3 eg^1` with its shells set.
fn configuration_cell(entry: &ConfigurationEntry) -> Cell {
    let shells = entry.shells.iter().map(|shell| vec![Piece::Shell(shell.symbol.clone(), shell.electrons)]);
    joined(shells, " ")
}

/// Terms of each configuration; none where only levels, or a free ion, were asked for.
#[must_use]
pub fn states_sheets(document: &StatesDocument) -> Vec<Sheet> {
    let sheet = |entry: &ConfigurationEntry| {
        let row = |term: &super::states::TermEntry| {
            let components = term.spin_orbit.as_ref().map(|components| {
                joined(
                    components.iter().map(|component| {
                        let count = if component.count == 1 { String::new() } else { component.count.to_string() };
                        vec![Piece::Label(format!("{count}{}", component.irrep))]
                    }),
                    " + ",
                )
            });
            let modes = term.jahn_teller.modes.iter().map(|mode| label(Some(&mode.irrep)));
            let modes = joined(modes, ", ");
            vec![
                vec![Piece::Term(term.term.clone())],
                number(term.count.to_string()),
                number(term.states.to_string()),
                components.unwrap_or_else(none),
                if modes.is_empty() { none() } else { modes },
            ]
        };
        let mut caption = vec![Piece::Words("Terms of ".to_owned())];
        caption.extend(configuration_cell(entry));
        caption.push(Piece::Words(" in ".to_owned()));
        caption.push(Piece::Group(document.point_group.clone()));
        let from = document.file.as_ref().map(|file| format!("Configuration from the occupations in {file}"));
        let ground = format!("Ground term {}: {}", entry.ground.terms.join(", "), entry.ground.caution);
        let jahn_teller = "Jahn–Teller: vibrations that split the term in first order, without spin–orbit coupling";
        Sheet {
            caption,
            columns: columns(&[
                ("Term", false),
                ("Number", true),
                ("States", true),
                ("Spin–orbit components", false),
                ("Jahn–Teller", false),
            ]),
            rows: entry.terms.iter().map(row).collect(),
            notes: from.into_iter().chain([ground, jahn_teller.to_owned()]).collect(),
        }
    };
    [&document.configuration, &document.to].into_iter().flatten().map(sheet).collect()
}

/// Modes of the file, or the count from the nuclei where it has none.
#[must_use]
pub fn mode_sheets(document: &ModesDocument) -> Vec<Sheet> {
    let formula = &document.source.formula;
    let yes = |allowed: Option<bool>| match allowed {
        Some(true) => words("yes"),
        Some(false) => none(),
        None => words("?"),
    };
    let notes = [format!("From {}; axes: {}", document.source.file, document.geometry.axes_convention)]
        .into_iter()
        .chain(document.cautions.iter().cloned())
        .collect();
    if document.sets.is_empty() {
        let row = |entry: &super::modes::ActivityEntry| {
            vec![
                label(Some(&entry.irrep)),
                number(entry.n.to_string()),
                functions(&entry.polarisation),
                yes(Some(entry.raman)),
            ]
        };
        return vec![Sheet {
            caption: in_group("Vibrations", formula, &document.geometry),
            columns: columns(&[("Irrep", false), ("Number", true), ("Infrared", false), ("Raman", false)]),
            rows: document.decomposition.activity.iter().map(row).collect(),
            notes,
        }];
    }
    let row = |set: &super::modes::ModeSetEntry| {
        let from_zero: Vec<usize> = set.modes.iter().map(|mode| mode.mode - 1).collect();
        let wavenumbers: Vec<f64> = set.modes.iter().filter_map(|mode| mode.wavenumber_per_cm).collect();
        let mean = wavenumbers.iter().sum::<f64>() / wavenumbers.len().max(1) as f64;
        let vibration = set.kind == "vibration";
        let remark = if vibration { set.remarks.join("; ") } else { set.kind.to_owned() };
        vec![
            label(set.irrep.as_deref()),
            words(ranges(&from_zero).replace('-', "–")),
            if wavenumbers.is_empty() { none() } else { number(format!("{mean:.1}")) },
            if set.infrared == Some(true) && vibration { functions(&set.polarisation) } else { none() },
            if vibration { yes(set.raman) } else { none() },
            words(remark),
        ]
    };
    vec![Sheet {
        caption: in_group("Normal modes", formula, &document.geometry),
        columns: columns(&[
            ("Irrep", false),
            ("Modes", false),
            ("Wavenumber/cm⁻¹", true),
            ("Infrared", false),
            ("Raman", false),
            ("Remark", false),
        ]),
        rows: document.sets.iter().map(row).collect(),
        notes,
    }]
}
