//! Atoms named by a person: elements, numbers, ranges, shells of bonds.
//!
//! ```text
//! atoms = item { "," item }
//! item  = element | number | number "-" number | "shell" number "around" (element | number)
//! ```
//! Not here: what becomes of the others (`labelling::placement`).

use super::sites;
use crate::model::{Molecule, elements};
use thiserror::Error;

/// An item that names no atom.
#[derive(Debug, Clone, PartialEq, Eq, Error)]
pub enum AtomsError {
    /// In no known form.
    #[error(
        "`{item}` names no atoms: expected an element (Co), a number (3), a range (1-7), or `shell 1 around Fe`, \
         separated by commas"
    )]
    Form {
        /// As typed.
        item: String,
    },
    /// In a known form, but the molecule has none of these.
    #[error("`{item}` names no atom of this molecule, which has {n_atoms} atoms")]
    Nobody {
        /// As typed.
        item: String,
        /// Number of atoms.
        n_atoms: usize,
    },
}

/// Indices from 0 of the atoms that `text` names, ascending.
///
/// A shell holds the atoms that many bonds away from the nearest of the atoms around which it is; those are not in it.
///
/// # Errors
/// [`AtomsError`] with the first item that names nobody.
pub fn atoms(molecule: &Molecule, text: &str) -> Result<Vec<usize>, AtomsError> {
    let mut chosen = Vec::new();
    for item in text.split(',').map(str::trim) {
        let found = named(molecule, item).ok_or_else(|| AtomsError::Form { item: item.to_owned() })?;
        if found.is_empty() {
            return Err(AtomsError::Nobody { item: item.to_owned(), n_atoms: molecule.atoms.len() });
        }
        chosen.extend(found);
    }
    chosen.sort_unstable();
    chosen.dedup();
    Ok(chosen)
}

fn named(molecule: &Molecule, item: &str) -> Option<Vec<usize>> {
    let n_atoms = molecule.atoms.len();
    let words: Vec<&str> = item.split_whitespace().collect();
    if let [shell, number, around, centre] = words.as_slice()
        && shell.eq_ignore_ascii_case("shell")
        && around.eq_ignore_ascii_case("around")
    {
        let bonds_away = number.parse::<usize>().ok().filter(|number| *number > 0)?;
        return Some(shell_of(molecule, &named(molecule, centre)?, bonds_away));
    }
    if let Some((first, last)) = item.split_once('-') {
        let (first, last): (usize, usize) = (first.trim().parse().ok()?, last.trim().parse().ok()?);
        return (first > 0 && first <= last).then(|| (first - 1..last.min(n_atoms)).collect());
    }
    if let Ok(number) = item.parse::<usize>() {
        return Some(number.checked_sub(1).filter(|atom| *atom < n_atoms).into_iter().collect());
    }
    let element = elements::atomic_number(item);
    let is_symbol = element > 0 && item.chars().all(char::is_alphabetic);
    is_symbol.then(|| {
        (0..n_atoms).filter(|&atom| molecule.atoms[atom].element == element && !molecule.atoms[atom].ghost).collect()
    })
}

fn shell_of(molecule: &Molecule, centres: &[usize], bonds_away: usize) -> Vec<usize> {
    let bonds = sites::bonds(molecule);
    let mut steps = vec![usize::MAX; molecule.atoms.len()];
    for &centre in centres {
        steps[centre] = 0;
    }
    for step in 1..=bonds_away.min(molecule.atoms.len()) {
        for &(a, b) in &bonds {
            for (from, to) in [(a, b), (b, a)] {
                if steps[from] == step - 1 && steps[to] == usize::MAX {
                    steps[to] = step;
                }
            }
        }
    }
    (0..steps.len()).filter(|&atom| steps[atom] == bonds_away).collect()
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::model::read_xyz;

    fn ammine() -> Molecule {
        let text = "5\n\nCo 0 0 0\nN 0 0 1.96\nN 0 0 -1.96\nH 0.9 0 2.3\nH 0.9 0 -2.3\n";
        read_xyz(text.as_bytes()).expect("a plain XYZ file").0
    }

    #[test]
    fn atoms_are_named_in_every_form() {
        let molecule = ammine();
        for (text, expected) in [
            ("Co,N", vec![0, 1, 2]),
            ("2-3", vec![1, 2]),
            ("1, 5", vec![0, 4]),
            ("Co, shell 1 around Co", vec![0, 1, 2]),
            ("shell 2 around 1", vec![3, 4]),
            ("4-99", vec![3, 4]),
        ] {
            assert_eq!(atoms(&molecule, text), Ok(expected), "{text}");
        }
    }

    #[test]
    fn what_names_nobody_is_said() {
        let molecule = ammine();
        for text in ["", "Xy", "0", "3-1", "shell 0 around Co", "shell one around Co", "Co;N"] {
            assert!(atoms(&molecule, text).is_err(), "{text}");
        }
        assert!(matches!(atoms(&molecule, "Fe"), Err(AtomsError::Nobody { .. })));
        assert!(matches!(atoms(&molecule, "6"), Err(AtomsError::Nobody { .. })));
    }
}
