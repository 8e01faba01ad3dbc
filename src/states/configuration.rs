//! Electron configurations over the irreps of a group: read, printed, counted.
//!
//! Not here: which terms they give (`states::terms`).

use super::error::StatesError;
use crate::group::irrep_name::Parity;
use crate::group::{GroupName, IrrepName, PointGroup};
use std::fmt;

/// Most microstates: characters stay whole to 1e-6 in double precision up to here.
pub const MAX_MICROSTATES: f64 = 1e9;
/// Longest text and most shells read.
const MAX_TEXT: usize = 200;
const MAX_SHELLS: usize = 24;
/// Readings of one text that are told.
const MAX_READINGS: usize = 3;

/// Electrons in the orbitals of one irrep.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub struct Shell {
    /// Index of the irrep in its group.
    pub irrep: usize,
    /// Its name.
    pub name: IrrepName,
    /// Tells shells of one irrep apart; for atoms the principal quantum number.
    pub number: Option<u32>,
    /// Electrons in it.
    pub electrons: u32,
    /// Places: twice the dimension.
    pub places: u32,
}

impl Shell {
    /// Whether it is neither empty nor full.
    #[must_use]
    pub fn is_open(&self) -> bool {
        self.electrons > 0 && self.electrons < self.places
    }

    /// Orbital symbol with its number: `2t2g`, `4f`.
    #[must_use]
    pub fn symbol(&self) -> String {
        let symbol = match self.name {
            // Of a shell of an atom everyone knows the parity.
            IrrepName::Atomic { .. } => self.name.symbol().chars().take(1).collect(),
            _ => self.name.symbol(),
        };
        format!("{}{symbol}", self.number.map_or(String::new(), |number| number.to_string()))
    }
}

/// Shells with their electrons.
///
/// Invariant: no shell holds more electrons than it has places.
#[derive(Debug, Clone, PartialEq, Eq)]
pub struct Configuration {
    shells: Vec<Shell>,
}

impl Configuration {
    /// A configuration of shells `(irrep, running number, electrons)`.
    ///
    /// # Errors
    /// [`StatesError::Overfull`], [`StatesError::TooManyMicrostates`].
    pub fn new(group: &PointGroup, shells: &[(usize, Option<u32>, u32)]) -> Result<Self, StatesError> {
        let mut made = Vec::with_capacity(shells.len());
        for &(irrep, number, electrons) in shells {
            let of = &group.irreps()[irrep];
            let places = u32::try_from(2 * of.dimension).unwrap_or(u32::MAX);
            let shell = Shell { irrep, name: of.name, number, electrons, places };
            if electrons > places {
                return Err(StatesError::Overfull { shell: shell.symbol(), found: electrons, limit: places });
            }
            made.push(shell);
        }
        let configuration = Self { shells: made };
        let found = configuration.microstates();
        if found > MAX_MICROSTATES {
            let configuration = configuration.to_string();
            return Err(StatesError::TooManyMicrostates { configuration, found, limit: MAX_MICROSTATES });
        }
        Ok(configuration)
    }

    /// Reads `t2g^3 eg^1`, `t2g3 eg`, `(t2g)³(eg)¹`, `1pi_g^2`, `4f7 5d1`: carets, superscripts, brackets, commas and blanks as anyone
    /// likes; a shell without a number of electrons holds one. Numbers before a symbol tell shells of one irrep apart.
    ///
    /// Text without blanks is taken apart by the symbols that the group has; where that leaves two readings, it asks for carets.
    ///
    /// # Errors
    /// [`StatesError`] for text that is no configuration of this group.
    pub fn parse(group: &PointGroup, text: &str) -> Result<Self, StatesError> {
        let shortened = || text.chars().take(60).collect::<String>();
        let characters: Vec<char> = normalised(text).chars().collect();
        if characters.iter().all(|c| *c == ' ') {
            return Err(StatesError::Empty { group: group.name().to_string(), example: example(group) });
        }
        let mut reader = Reader { group, text: &characters, dead: vec![false; characters.len() + 1], furthest: 0 };
        let mut readings = Vec::new();
        if characters.len() <= MAX_TEXT {
            reader.read(0, &mut Vec::new(), &mut readings);
        }
        let mut made = Vec::new();
        for reading in &readings {
            made.push(Self::new(group, reading));
        }
        // A reading that overfills a shell is no reading where another does not.
        if made.iter().any(Result::is_ok) {
            made.retain(Result::is_ok);
        }
        let several = made.len() > 1;
        let mut fitting = Vec::with_capacity(made.len());
        for configuration in made {
            fitting.push(configuration?);
        }
        let Some(first) = fitting.first() else {
            return Err(StatesError::Syntax {
                text: shortened(),
                rest: characters[reader.furthest..].iter().take(20).collect::<String>().trim().to_owned(),
                group: group.name().to_string(),
                example: example(group),
                expected: symbols(group).join(", "),
            });
        };
        if several {
            let readings: Vec<String> = fitting.iter().map(ToString::to_string).collect();
            let (text, example) = (shortened(), first.to_string());
            return Err(StatesError::Ambiguous { text, readings: readings.join(" or as "), example });
        }
        let found = fitting.remove(0);
        found.check_numbers()?;
        Ok(found)
    }

    /// The shells as given.
    #[must_use]
    pub fn shells(&self) -> &[Shell] {
        &self.shells
    }

    /// Number of electrons.
    #[must_use]
    pub fn electrons(&self) -> u32 {
        self.shells.iter().map(|shell| shell.electrons).sum()
    }

    /// Number of ways to place the electrons: Π over shells of the binomial of places over electrons.
    #[must_use]
    pub fn microstates(&self) -> f64 {
        self.shells.iter().map(|shell| binomial(shell.places, shell.electrons)).product()
    }

    /// One symbol twice without numbers is rather a slip than two shells.
    fn check_numbers(&self) -> Result<(), StatesError> {
        for (at, shell) in self.shells.iter().enumerate() {
            let same = |other: &Shell| (other.irrep, other.number) == (shell.irrep, shell.number);
            if self.shells[at + 1..].iter().any(same) {
                return Err(StatesError::Repeated { symbol: Shell { number: None, ..*shell }.symbol() });
            }
        }
        Ok(())
    }
}

impl fmt::Display for Configuration {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        let shells: Vec<String> =
            self.shells.iter().map(|shell| format!("{}^{}", shell.symbol(), shell.electrons)).collect();
        f.pad(&shells.join(" "))
    }
}

fn binomial(n: u32, k: u32) -> f64 {
    (0..k).map(|i| f64::from(n - i) / f64::from(i + 1)).product::<f64>().round()
}

/// Orbital symbols of a group.
fn symbols(group: &PointGroup) -> Vec<String> {
    let natural = |name: &IrrepName| match name {
        IrrepName::Atomic { l, parity } => (l % 2 == 0) == (*parity == Parity::Even) && *l <= 6,
        _ => true,
    };
    let names = group.irreps().iter().map(|irrep| irrep.name).filter(natural);
    names.map(|name| Shell { irrep: 0, name, number: None, electrons: 0, places: 0 }.symbol()).collect()
}

fn example(group: &PointGroup) -> String {
    if group.name() == GroupName::K {
        return "d^2".to_owned();
    }
    // The first of the largest.
    let largest = group.irreps().iter().rev().max_by_key(|irrep| irrep.dimension);
    largest.map_or(String::new(), |irrep| format!("{}^2", irrep.name.symbol()))
}

/// Superscripts as `^` and digits, brackets and commas as blanks, `**` as `^`.
fn normalised(text: &str) -> String {
    const SUPERSCRIPTS: [char; 10] = ['⁰', '¹', '²', '³', '⁴', '⁵', '⁶', '⁷', '⁸', '⁹'];
    let mut plain = String::new();
    let mut raised = false;
    for c in text.trim().replace("**", "^").chars() {
        let superscript = SUPERSCRIPTS.iter().zip('0'..).find(|(known, _)| **known == c);
        if let Some((_, digit)) = superscript {
            if !raised {
                plain.push('^');
            }
            plain.push(digit);
        } else if matches!(c, '(' | ')' | '[' | ']' | ',' | ';' | '·' | '\t') {
            plain.push(' ');
        } else if !matches!(c, '{' | '}') {
            plain.push(c);
        }
        raised = superscript.is_some();
    }
    plain
}

/// Finds all readings of a text.
struct Reader<'a> {
    group: &'a PointGroup,
    text: &'a [char],
    /// Places from which no reading reaches the end, so that no text takes long.
    dead: Vec<bool>,
    furthest: usize,
}

/// (irrep, running number, electrons)
type Read = (usize, Option<u32>, u32);

impl Reader<'_> {
    fn read(&mut self, from: usize, shells: &mut Vec<Read>, readings: &mut Vec<Vec<Read>>) {
        let blank = from == 0 || self.text.get(from - 1).is_some_and(|c| *c == ' ');
        let start = from + self.text[from..].iter().take_while(|c| **c == ' ').count();
        self.furthest = self.furthest.max(start);
        if start == self.text.len() {
            readings.push(shells.clone());
            return;
        }
        if self.dead[from] || shells.len() >= MAX_SHELLS || readings.len() >= MAX_READINGS {
            return;
        }
        let before = readings.len();
        // A running number only where it cannot be the electrons of the shell before.
        let digits = if blank || start > from { digits(&self.text[start..]) } else { 0 };
        let number = number(&self.text[start..start + digits]);
        if digits == 0 || number.is_some() {
            let symbol_start = start + digits;
            let rest = &self.text[symbol_start..];
            let longest = rest.iter().take_while(|c| !matches!(c, ' ' | '^')).count().min(16);
            for end in (symbol_start + 1..=symbol_start + longest).rev() {
                let symbol: String = self.text[symbol_start..end].iter().collect();
                let Some(irrep) = self.irrep(&symbol) else { continue };
                for (after, electrons) in self.electrons(end) {
                    shells.push((irrep, number, electrons));
                    self.read(after, shells, readings);
                    shells.pop();
                }
            }
        }
        if readings.len() == before {
            self.dead[from] = true;
        }
    }

    fn irrep(&self, symbol: &str) -> Option<usize> {
        if self.group.name() == GroupName::K {
            const LETTERS: &str = "spdfghik";
            let l = LETTERS.find(&symbol.to_lowercase()).filter(|_| symbol.len() == 1)?;
            return self.group.orbital_irrep(l);
        }
        // Σ without a sign is Σ⁺, and a blank or caret inside a name is none of ours.
        self.group.irrep_idx(&symbol.parse().ok()?).ok()
    }

    /// Where a shell may end, and with how many electrons.
    fn electrons(&self, at: usize) -> Vec<(usize, u32)> {
        let mut skipped = at;
        // `(t2g) ^3`, `t2g ^3`
        while self.text.get(skipped) == Some(&' ') {
            skipped += 1;
        }
        if self.text.get(skipped) == Some(&'^') {
            let found = digits(&self.text[skipped + 1..]);
            let end = skipped + 1 + found;
            return number(&self.text[skipped + 1..end]).map(|electrons| (end, electrons)).into_iter().collect();
        }
        let found = digits(&self.text[at..]);
        if found == 0 {
            // Without blank or number the next shell would run into this symbol.
            let ends = self.text.get(at).is_none_or(|c| *c == ' ');
            return if ends { vec![(at, 1)] } else { Vec::new() };
        }
        number(&self.text[at..at + found]).map(|electrons| (at + found, electrons)).into_iter().collect()
    }
}

fn digits(text: &[char]) -> usize {
    text.iter().take_while(|c| c.is_ascii_digit()).count()
}

fn number(digits: &[char]) -> Option<u32> {
    if digits.is_empty() || digits.len() > 3 {
        return None;
    }
    digits.iter().collect::<String>().parse().ok()
}

#[cfg(test)]
mod tests {
    use super::*;

    fn read(group: &str, text: &str) -> String {
        let group = PointGroup::standard(group.parse().unwrap()).unwrap();
        Configuration::parse(&group, text).map_or_else(|error| error.to_string(), |found| found.to_string())
    }

    #[test]
    fn symbols_and_electrons_are_told_apart_by_the_group() {
        for (group, text, expected) in [
            ("Oh", "t2g3eg1", "t2g^3 eg^1"),
            ("Oh", "t2g eg", "t2g^1 eg^1"),
            ("Oh", "t2g^3eg^0", "t2g^3 eg^0"),
            ("C5v", "a12e13", "a1^2 e1^3"),
            ("C3v", "1e2 2e2", "1e^2 2e^2"),
            ("D26", "a1^1 e1²", "a1^1 e1^2"),
            ("D26", "e12^2", "e12^2"),
            ("D3h", "e'1e''3", "e'^1 e''^3"),
            ("Dinfh", "1πu⁴ 1πg²", "1pi_u^4 1pi_g^2"),
            ("Cinfv", "σ1 π3", "sigma^1 pi^3"),
            ("Kh", "4f13 5d1", "4f^13 5d^1"),
            ("Kh", "1s2 2s2 2p²", "1s^2 2s^2 2p^2"),
            ("Ih", "hu10t1u2", "hu^10 t1u^2"),
        ] {
            assert_eq!(read(group, text), expected, "{group} {text}");
        }
    }

    #[test]
    fn what_is_left_over_is_pointed_at() {
        assert!(read("Oh", "t2g^3 ex^1").contains("cannot read `ex^1`"));
        assert!(read("Oh", "t2g^").contains("cannot read"));
        assert!(read("Kh", "4f7 5q1").contains("cannot read `5q1`"));
        assert!(read("D26", "e12e12e12e12e12e12e12e12e12e12e12e12e12e12e12e12e12e12e12e12!").contains("cannot read"));
    }
}
