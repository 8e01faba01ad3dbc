//! The reader against files it must read alike, and against bytes that are no file at all.
#![allow(clippy::unwrap_used, reason = "a test may stop at once")]

use ndarray::Array2;
use orbsieve::model::{self, Molecule, Spin};
use proptest::prelude::*;

/// How one and the same molecule may be written.
#[derive(Debug, Clone)]
#[expect(clippy::struct_excessive_bools, reason = "each is one independent habit of writing")]
struct Style {
    order: Vec<usize>,
    upper: bool,
    crlf: bool,
    tabs: bool,
    fortran: bool,
    sparse: bool,
    scale: u8,
    alternate: bool,
    parentheses: bool,
    key_shift: usize,
}

fn style() -> impl Strategy<Value = Style> {
    let flags =
        (any::<bool>(), any::<bool>(), any::<bool>(), any::<bool>(), any::<bool>(), any::<bool>(), any::<bool>());
    (Just((0..5).collect::<Vec<usize>>()).prop_shuffle(), flags, 0_u8..3, 0_usize..4).prop_map(
        |(order, (upper, crlf, tabs, fortran, sparse, alternate, parentheses), scale, key_shift)| Style {
            order,
            upper,
            crlf,
            tabs,
            fortran,
            sparse,
            scale,
            alternate,
            parentheses,
            key_shift,
        },
    )
}

/// Numbers with zeros among them; the rows differ, so that a swapped row shows.
fn matrix(rows: usize, seed: f64) -> Array2<f64> {
    Array2::from_shape_fn((rows, 11), |(i, j)| {
        if (i + 2 * j) % 4 == 0 { 0.0 } else { (seed + 3.7 * i as f64 + 0.61 * j as f64).sin() }
    })
}

fn number(value: f64, style: &Style) -> String {
    let text = format!("{value:.17e}");
    if style.fortran { text.replace('e', "D") } else { text }
}

/// Two atoms, shells s, sp, d (pure) on the first and s on the second: 1 + 4 + 5 + 1 functions.
fn print(style: &Style, alpha: &Array2<f64>, beta: &Array2<f64>) -> Vec<u8> {
    let (open, close) = if style.parentheses { ("(", ")") } else { ("", "") };
    let scale = ["", " 1.00", " 0"][usize::from(style.scale)];
    let mut sections = vec![
        format!("[Title]\n a title\n[Atoms] {open}AU{close}\n O1 1 8 0.1 -.25 1.5E0\n H 2 1 0 0 3.25\n"),
        format!(
            "[GTO]\n 1 0\n s 1{scale}\n 5.5 1.0\n sp 1{scale}\n 0.5 0.25 0.75\n d 1{scale}\n 0.125 1.0\n\n 2 0\n s 1{scale}\n 0.5 1.0\n\n"
        ),
        "[5D]\n".to_owned(),
        "[N_Atoms]\n 2\n".to_owned(),
    ];
    let mut orbitals: Vec<(&str, usize)> = (0..alpha.nrows()).map(|i| ("Alpha", i)).collect();
    orbitals.extend((0..beta.nrows()).map(|i| ("Beta", i)));
    if style.alternate {
        orbitals.sort_by_key(|&(_, i)| i);
    }
    let mut text = "[MO]\n".to_owned();
    for (spin, i) in orbitals {
        let row = if spin == "Alpha" { alpha.row(i) } else { beta.row(i) };
        let mut keys = [
            format!(" Sym= {}a\n", i + 1),
            format!(" Ene={}\n", number(-0.5 + i as f64, style)),
            format!(" Spin= {spin}\n"),
            format!(" Occup= {:.1}\n", 1.0),
        ];
        keys.rotate_left(style.key_shift);
        text.push_str(&keys.concat());
        for (j, value) in row.iter().enumerate().filter(|(_, value)| !style.sparse || **value != 0.0) {
            text.extend([format!(" {} {}\n", j + 1, number(*value, style))]);
        }
    }
    sections.push(text);
    let mut whole = "[Molden Format]\n".to_owned();
    for &at in &style.order {
        whole.push_str(&sections[at]);
    }
    if style.upper {
        whole = whole.to_uppercase().replace(" A TITLE", " a title");
    }
    if style.tabs {
        whole = whole
            .replace(' ', "\t")
            .replace("Molden\tFormat", "Molden Format")
            .replace("MOLDEN\tFORMAT", "MOLDEN FORMAT")
            .replace("a\ttitle", "a title");
    }
    if style.crlf {
        whole = whole.replace('\n', "\r\n");
    }
    whole.into_bytes()
}

fn read(bytes: &[u8]) -> Molecule {
    let (molecule, warnings) = model::read_molden(bytes).unwrap_or_else(|found| panic!("refused: {found:?}"));
    assert_eq!(warnings, [], "no warning is due");
    molecule
}

proptest! {
    #![proptest_config(ProptestConfig::with_cases(128))]

    #[test]
    fn every_way_of_writing_reads_alike(style in style(), seed in 0.0..10.0_f64) {
        let (alpha, beta) = (matrix(4, seed), matrix(4, seed + 100.0));
        let molecule = read(&print(&style, &alpha, &beta));
        prop_assert_eq!(&molecule.title, "a title");
        prop_assert_eq!(molecule.atoms.iter().map(|atom| (atom.element, atom.ghost, atom.core_electrons)).collect::<Vec<_>>(), [(8, false, 0), (1, false, 0)]);
        prop_assert_eq!(molecule.atoms[0].position, nalgebra::Point3::new(0.1, -0.25, 1.5));
        let shells: Vec<_> = molecule.shells.iter().map(|shell| (shell.atom_idx, shell.l, shell.pure, shell.exponents[0], shell.coefficients[0])).collect();
        prop_assert_eq!(shells, [(0, 0, false, 5.5, 1.0), (0, 0, false, 0.5, 0.25), (0, 1, false, 0.5, 0.75), (0, 2, true, 0.125, 1.0), (1, 0, false, 0.5, 1.0)]);
        prop_assert_eq!(molecule.orbital_sets.iter().map(|set| set.spin).collect::<Vec<_>>(), [Spin::Alpha, Spin::Beta]);
        for (set, written) in molecule.orbital_sets.iter().zip([alpha, beta]) {
            prop_assert_eq!(&set.coefficients, &written);
            for (i, orbital) in set.orbitals.iter().enumerate() {
                prop_assert_eq!(orbital.energy, Some(-0.5 + i as f64));
                prop_assert_eq!(orbital.occupation, Some(1.0));
            }
        }
    }

    #[test]
    fn any_bytes_are_read_or_refused(bytes in prop::collection::vec(any::<u8>(), 0..400)) {
        let _ = (model::read_molden(&bytes), model::read_xyz(&bytes), model::looks_like_molden(&bytes));
    }

    #[test]
    fn any_damage_is_read_or_refused_and_drawn(style in style(), cuts in prop::collection::vec((any::<prop::sample::Index>(), any::<u8>()), 0..6), end in any::<prop::sample::Index>()) {
        let mut bytes = print(&style, &matrix(2, 1.0), &matrix(1, 2.0));
        for (at, byte) in cuts {
            let at = at.index(bytes.len());
            bytes[at] = byte;
        }
        bytes.truncate(end.index(bytes.len()) + 1);
        match model::read_molden(&bytes) {
            Ok((molecule, _)) => {
                let labels: Vec<Vec<String>> = molecule.orbital_sets.iter().map(|set| vec!["1a".to_owned(); set.orbitals.len()]).collect();
                let _ = model::write_labels(&bytes, &molecule, &labels);
            }
            Err(findings) => {
                prop_assert!(!findings.is_empty());
                for finding in findings {
                    let _ = orbsieve::diagnostic::draw(&finding, "damaged", &bytes);
                }
            }
        }
    }

    #[test]
    fn labels_go_in_and_nothing_else_changes(style in style()) {
        let bytes = print(&style, &matrix(3, 1.0), &matrix(2, 2.0));
        let labels = vec![vec!["1a1g".to_owned(), "1e1u".to_owned(), "2b2".to_owned()], vec!["1a".to_owned(), "2a".to_owned()]];
        let written = model::write_labels(&bytes, &read(&bytes), &labels);
        let again = read(&written);
        for (set, labels) in again.orbital_sets.iter().zip(&labels) {
            prop_assert_eq!(&set.orbitals.iter().map(|orbital| orbital.symmetry.clone().unwrap()).collect::<Vec<_>>(), labels);
        }
        let others = |bytes: &[u8]| bytes.split(|&byte| byte == b'\n').filter(|line| !line.to_ascii_lowercase().windows(4).any(|part| part == b"sym=")).map(<[u8]>::to_vec).collect::<Vec<_>>();
        prop_assert_eq!(others(&bytes), others(&written));
    }
}

const HYDROGEN: &str =
    "[Molden Format]\n[Atoms] AU\n H 1 1 0 0 0\n[GTO]\n1 0\ns 1\n 0.5 1\n\n[MO]\n Ene= -0.5\n 1 1.0\n";

#[test]
fn an_orbital_without_a_label_gets_one_with_the_file_s_line_end() {
    for text in [HYDROGEN.to_owned(), HYDROGEN.replace('\n', "\r\n")] {
        let end = if text.contains('\r') { "\r\n" } else { "\n" };
        let written = model::write_labels(text.as_bytes(), &read(text.as_bytes()), &[vec!["1s_g".to_owned()]]);
        let expected = text.replace(" Ene=", &format!(" Sym= 1s_g{end} Ene="));
        assert_eq!(String::from_utf8(written).unwrap(), expected);
    }
}

/// Atom line, then element, ghost, core electrons.
#[test]
fn names_and_numbers_of_atoms() {
    for (line, element, ghost, core) in [
        ("OXYGEN 1 8", 8, false, 0),
        ("fe2 1 26", 26, false, 0),
        ("Xe 1 26", 54, false, 28),
        ("Ni 1 18", 28, false, 10),
        ("Cr 1 6", 24, false, 18),
        ("O 1 0", 8, true, 0),
        ("Gh(O) 1 8", 8, true, 0),
        ("ghost-O 1 0", 8, true, 0),
        ("Bq 1 0", 0, true, 0),
        ("X 1 0", 0, true, 0),
        ("Cl", 17, false, 0),
    ] {
        let molecule = read(format!("[Molden Format]\n[Atoms] AU\n {line} 0 0 0\n").as_bytes());
        let atom = &molecule.atoms[0];
        assert_eq!((atom.element, atom.ghost, atom.core_electrons), (element, ghost, core), "{line}");
    }
}

#[test]
fn core_sections_win_over_the_charge() {
    for section in ["[core]\n1 : 28\n", "[Core]\nXe : 28\n", "[Pseudo]\nXe 1 26\n", "[Nval]\n Xe: 26\n"] {
        let text = format!("[Molden Format]\n[Atoms] AU\n Xe 1 54 0 0 0\n H 2 1 0 0 3\n{section}");
        let molecule = read(text.as_bytes());
        assert_eq!(molecule.atoms.iter().map(|atom| atom.core_electrons).collect::<Vec<_>>(), [28, 0], "{section}");
    }
}

/// Tags, then whether d, f, g, h, i are pure.
#[test]
fn tags_say_and_imply() {
    for (tags, pure) in [
        ("", [false; 5]),
        ("[5D]", [true, true, false, false, false]),
        ("[5D]\n[9G]", [true; 5]),
        ("[5D]\n[10F]", [true, false, false, false, false]),
        ("[5D10F]\n[15G]", [true, false, false, false, false]),
        ("[7F]", [false, true, false, false, false]),
        ("[9g]\n[21h]", [false, false, true, false, true]),
        ("[21H]\n[9G]\n[28I]", [false, false, true, false, false]),
        ("[11H]\n[13I]", [false, false, false, true, true]),
    ] {
        let shells: String = "dfghi".chars().flat_map(|l| [l.to_string(), " 1 1.0\n 0.5 1.0\n".to_owned()]).collect();
        for text in [
            format!("[Molden Format]\n[Atoms] AU\n C 1 6 0 0 0\n[GTO]\n1 0\n{shells}\n{tags}\n"),
            format!("[Molden Format]\n{tags}\n[GTO]\n1 0\n{shells}\n[Atoms] AU\n C 1 6 0 0 0\n"),
        ] {
            let found: Vec<bool> = read(text.as_bytes()).shells.iter().map(|shell| shell.pure).collect();
            assert_eq!(found, pure, "{tags}");
        }
    }
}

#[test]
fn shells_follow_the_order_of_the_basis_section_and_repeated_numbers_the_order_of_the_atoms() {
    let basis = "[GTO]\n2 0\ns 1\n 2.0 1\n\n1 0\ns 1\n 1.0 1\n\n";
    for (first, second, places) in [(1, 2, [1, 0]), (2, 1, [0, 1]), (1, 1, [1, 0]), (0, 0, [1, 0])] {
        let text = format!("[Molden Format]\n[Atoms] AU\n H {first} 1 0 0 0\n H {second} 1 0 0 1\n{basis}");
        let found: Vec<usize> = read(text.as_bytes()).shells.iter().map(|shell| shell.atom_idx).collect();
        assert_eq!(found, places, "{first} {second}");
    }
}

#[test]
fn angstrom_and_bohr_name_one_place() {
    // 1 bohr in ångström: CODATA 2018, from memory.
    let text = "[Molden Format]\n[Atoms] Angs\n H 1 1 0.529177210903 0 0\n";
    assert!((read(text.as_bytes()).atoms[0].position.x - 1.0).abs() < 1e-12);
    let (xyz, _) = model::read_xyz(b"1\n\n1 0.529177210903 0 0 further columns\n").unwrap();
    assert_eq!((xyz.atoms[0].element, xyz.atoms[0].ghost), (1, false));
    assert!((xyz.atoms[0].position.x - 1.0).abs() < 1e-12);
}

#[test]
fn a_title_in_brackets_is_a_title() {
    assert_eq!(read(b"[Molden Format]\n[Title]\n [Fe(CN)6]4-\n[Atoms] AU\n H 1 1 0 0 0\n").title, "[Fe(CN)6]4-");
}
