//! The elements: symbols, names, covalent radii, filled shells.
//!
//! Here: what an atom's name in a file means. Not here: masses (no mode of this program needs them).

use super::Atom;

/// Symbol and name, in the order of atomic numbers from 1.
const ELEMENTS: [(&str, &str); 118] = [
    ("H", "Hydrogen"),
    ("He", "Helium"),
    ("Li", "Lithium"),
    ("Be", "Beryllium"),
    ("B", "Boron"),
    ("C", "Carbon"),
    ("N", "Nitrogen"),
    ("O", "Oxygen"),
    ("F", "Fluorine"),
    ("Ne", "Neon"),
    ("Na", "Sodium"),
    ("Mg", "Magnesium"),
    ("Al", "Aluminium"),
    ("Si", "Silicon"),
    ("P", "Phosphorus"),
    ("S", "Sulfur"),
    ("Cl", "Chlorine"),
    ("Ar", "Argon"),
    ("K", "Potassium"),
    ("Ca", "Calcium"),
    ("Sc", "Scandium"),
    ("Ti", "Titanium"),
    ("V", "Vanadium"),
    ("Cr", "Chromium"),
    ("Mn", "Manganese"),
    ("Fe", "Iron"),
    ("Co", "Cobalt"),
    ("Ni", "Nickel"),
    ("Cu", "Copper"),
    ("Zn", "Zinc"),
    ("Ga", "Gallium"),
    ("Ge", "Germanium"),
    ("As", "Arsenic"),
    ("Se", "Selenium"),
    ("Br", "Bromine"),
    ("Kr", "Krypton"),
    ("Rb", "Rubidium"),
    ("Sr", "Strontium"),
    ("Y", "Yttrium"),
    ("Zr", "Zirconium"),
    ("Nb", "Niobium"),
    ("Mo", "Molybdenum"),
    ("Tc", "Technetium"),
    ("Ru", "Ruthenium"),
    ("Rh", "Rhodium"),
    ("Pd", "Palladium"),
    ("Ag", "Silver"),
    ("Cd", "Cadmium"),
    ("In", "Indium"),
    ("Sn", "Tin"),
    ("Sb", "Antimony"),
    ("Te", "Tellurium"),
    ("I", "Iodine"),
    ("Xe", "Xenon"),
    ("Cs", "Caesium"),
    ("Ba", "Barium"),
    ("La", "Lanthanum"),
    ("Ce", "Cerium"),
    ("Pr", "Praseodymium"),
    ("Nd", "Neodymium"),
    ("Pm", "Promethium"),
    ("Sm", "Samarium"),
    ("Eu", "Europium"),
    ("Gd", "Gadolinium"),
    ("Tb", "Terbium"),
    ("Dy", "Dysprosium"),
    ("Ho", "Holmium"),
    ("Er", "Erbium"),
    ("Tm", "Thulium"),
    ("Yb", "Ytterbium"),
    ("Lu", "Lutetium"),
    ("Hf", "Hafnium"),
    ("Ta", "Tantalum"),
    ("W", "Tungsten"),
    ("Re", "Rhenium"),
    ("Os", "Osmium"),
    ("Ir", "Iridium"),
    ("Pt", "Platinum"),
    ("Au", "Gold"),
    ("Hg", "Mercury"),
    ("Tl", "Thallium"),
    ("Pb", "Lead"),
    ("Bi", "Bismuth"),
    ("Po", "Polonium"),
    ("At", "Astatine"),
    ("Rn", "Radon"),
    ("Fr", "Francium"),
    ("Ra", "Radium"),
    ("Ac", "Actinium"),
    ("Th", "Thorium"),
    ("Pa", "Protactinium"),
    ("U", "Uranium"),
    ("Np", "Neptunium"),
    ("Pu", "Plutonium"),
    ("Am", "Americium"),
    ("Cm", "Curium"),
    ("Bk", "Berkelium"),
    ("Cf", "Californium"),
    ("Es", "Einsteinium"),
    ("Fm", "Fermium"),
    ("Md", "Mendelevium"),
    ("No", "Nobelium"),
    ("Lr", "Lawrencium"),
    ("Rf", "Rutherfordium"),
    ("Db", "Dubnium"),
    ("Sg", "Seaborgium"),
    ("Bh", "Bohrium"),
    ("Hs", "Hassium"),
    ("Mt", "Meitnerium"),
    ("Ds", "Darmstadtium"),
    ("Rg", "Roentgenium"),
    ("Cn", "Copernicium"),
    ("Nh", "Nihonium"),
    ("Fl", "Flerovium"),
    ("Mc", "Moscovium"),
    ("Lv", "Livermorium"),
    ("Ts", "Tennessine"),
    ("Og", "Oganesson"),
];

/// Covalent radii in picometres, atomic numbers 1 to 96.
///
/// "Covalent radii revisited", Dalton Trans. 2832 (2008), table 2; low-spin values, from memory. Only used to see bonds.
const COVALENT_RADII_PM: [u16; 96] = [
    31, 28, 128, 96, 84, 76, 71, 66, 57, 58, 166, 141, 121, 111, 107, 105, 102, 106, 203, 176, 170, 160, 153, 139, 139,
    132, 126, 124, 132, 122, 122, 120, 119, 120, 120, 116, 220, 195, 190, 175, 164, 154, 147, 146, 142, 139, 145, 144,
    142, 139, 139, 138, 139, 140, 244, 215, 207, 204, 203, 201, 199, 198, 198, 196, 194, 192, 192, 189, 190, 187, 187,
    175, 170, 162, 151, 144, 141, 136, 136, 132, 145, 146, 148, 140, 150, 150, 260, 221, 215, 206, 200, 196, 190, 187,
    180, 169,
];

/// Atomic number of a symbol or name, in any case, with digits or other signs behind it; 0 when it names none.
///
/// `O1`, `H_2`, `OXYGEN`, `fe` and `Aluminum` are understood.
#[must_use]
pub fn atomic_number(name: &str) -> u8 {
    let letters: String = name.chars().take_while(char::is_ascii_alphabetic).collect();
    let other_spellings = [("Aluminum", 13), ("Sulphur", 16), ("Cesium", 55), ("D", 1), ("T", 1)];
    let found = ELEMENTS
        .iter()
        .position(|(symbol, name)| letters.eq_ignore_ascii_case(symbol) || letters.eq_ignore_ascii_case(name))
        .and_then(|at| u8::try_from(at + 1).ok());
    found
        .or_else(|| other_spellings.iter().find(|entry| letters.eq_ignore_ascii_case(entry.0)).map(|entry| entry.1))
        .unwrap_or(0)
}

/// Whether a pseudopotential may stand for this many electrons of the element: closed shells of a lighter
/// noble gas, with filled d and f shells above it or, in the f block, some of the f electrons.
#[must_use]
pub fn is_core_size(element: u8, electrons: f64) -> bool {
    const CLOSED: [f64; 12] = [2.0, 10.0, 18.0, 28.0, 36.0, 46.0, 54.0, 60.0, 68.0, 78.0, 86.0, 92.0];
    let f_in_core = (57..=103).contains(&element) && (46.0..=92.0).contains(&electrons);
    electrons < f64::from(element) && (CLOSED.contains(&electrons) || f_in_core)
}

/// Symbol of an atomic number; `X` for 0 and what lies beyond the table.
#[must_use]
pub fn symbol(element: u8) -> &'static str {
    usize::from(element).checked_sub(1).and_then(|at| ELEMENTS.get(at)).map_or("X", |entry| entry.0)
}

/// Symbol of an atom, a ghost's in parentheses.
#[must_use]
pub fn label(atom: &Atom) -> String {
    if atom.ghost { format!("({})", symbol(atom.element)) } else { symbol(atom.element).to_owned() }
}

/// Covalent radius in bohr, where the table has one.
#[must_use]
pub fn covalent_radius_bohr(element: u8) -> Option<f64> {
    let radius = usize::from(element).checked_sub(1).and_then(|at| COVALENT_RADII_PM.get(at))?;
    Some(f64::from(*radius) / 100.0 / super::ANGSTROM_PER_BOHR)
}

/// Filled shells (n, l) of the neutral atom by the order n + l, then n; deviations from it do not matter here.
#[must_use]
pub fn occupied_shells(element: u8) -> Vec<(u8, u8)> {
    let mut left = u32::from(element);
    let mut shells = Vec::new();
    for sum in 1..=8_u8 {
        for l in (0..=(sum - 1) / 2).rev() {
            if left == 0 {
                return shells;
            }
            shells.push((sum - l, l));
            left = left.saturating_sub(4 * u32::from(l) + 2);
        }
    }
    shells
}

/// Sum formula of the real atoms: carbon, hydrogen, then the rest by symbol.
///
/// The order is common practice ("On a system of indexing chemical literature", J. Am. Chem. Soc. 22, 478 (1900); from memory).
#[must_use]
pub fn formula(atoms: &[Atom]) -> String {
    let mut counts = std::collections::BTreeMap::new();
    for atom in atoms.iter().filter(|atom| !atom.ghost) {
        *counts.entry(symbol(atom.element)).or_insert(0_usize) += 1;
    }
    let carbon = counts.contains_key("C");
    let rank = |symbol: &str| match symbol {
        "C" => 0,
        "H" if carbon => 1,
        _ => 2,
    };
    let mut ordered: Vec<(&str, usize)> = counts.into_iter().collect();
    ordered.sort_by_key(|(symbol, _)| rank(symbol));
    let term = |(symbol, n): &(&str, usize)| if *n == 1 { (*symbol).to_owned() } else { format!("{symbol}{n}") };
    ordered.iter().map(term).collect()
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn names_of_every_kind_are_understood() {
        for (name, element) in [
            ("H", 1),
            ("O1", 8),
            ("OXYGEN", 8),
            ("fe", 26),
            ("CL", 17),
            ("O_1", 8),
            ("Aluminum", 13),
            ("X", 0),
            ("Bq", 0),
            ("Og", 118),
            ("", 0),
        ] {
            assert_eq!(atomic_number(name), element, "{name}");
        }
    }

    #[test]
    fn shells_fill_in_the_usual_order() {
        assert_eq!(occupied_shells(26), [(1, 0), (2, 0), (2, 1), (3, 0), (3, 1), (4, 0), (3, 2)]);
        assert_eq!(occupied_shells(1), [(1, 0)]);
        assert_eq!(occupied_shells(118).iter().map(|(_, l)| 4 * u32::from(*l) + 2).sum::<u32>(), 118);
    }
}
