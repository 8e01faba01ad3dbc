//! Names of irreducible representations: Mulliken, linear (Σ, Π, Δ …) and atomic (S, P, D …), printed and read.
//!
//! A name only, no characters; which name an irrep gets is decided in `group::mulliken`.

use super::error::GroupError;
use std::fmt::{self, Write as _};
use std::str::FromStr;

/// Behaviour under inversion.
#[derive(Debug, Clone, Copy, PartialEq, Eq, PartialOrd, Ord, Hash)]
pub enum Parity {
    /// Even, g.
    Even,
    /// Odd, u.
    Odd,
}

/// Behaviour under the plane across the principal axis.
#[derive(Debug, Clone, Copy, PartialEq, Eq, PartialOrd, Ord, Hash)]
pub enum Prime {
    /// Symmetric, ′.
    Single,
    /// Antisymmetric, ″.
    Double,
}

/// Behaviour of a Σ irrep under planes through the axis.
#[derive(Debug, Clone, Copy, PartialEq, Eq, PartialOrd, Ord, Hash)]
pub enum Reflection {
    /// Symmetric, Σ⁺.
    Plus,
    /// Antisymmetric, Σ⁻.
    Minus,
}

/// The letter of a Mulliken name, which is also the dimension.
#[derive(Debug, Clone, Copy, PartialEq, Eq, PartialOrd, Ord, Hash)]
pub enum Letter {
    /// One-dimensional, symmetric under the principal rotation.
    A,
    /// One-dimensional, antisymmetric under the principal rotation.
    B,
    /// Two-dimensional, or a pair of complex conjugates.
    E,
    /// Three-dimensional (F in older work).
    T,
    /// Four-dimensional.
    G,
    /// Five-dimensional.
    H,
}

/// The name of one irrep. Names compare in the order of printed tables: g before u, ′ before ″, then A B E T G H, then numbers.
#[derive(Debug, Clone, Copy, PartialEq, Eq, PartialOrd, Ord, Hash)]
pub enum IrrepName {
    /// Of a finite group: `A1g`, `E''`.
    Mulliken {
        /// g, u or nothing.
        parity: Option<Parity>,
        /// ′, ″ or nothing.
        prime: Option<Prime>,
        /// A to H.
        letter: Letter,
        /// The number after the letter, where there is one.
        number: Option<u8>,
    },
    /// Of a linear group: `Sigma_g+`, `Pi`.
    Linear {
        /// g, u or nothing.
        parity: Option<Parity>,
        /// |m|, the quantum number of rotation about the axis: 0 is Σ, 1 is Π.
        m: u8,
        /// For Σ only.
        reflection: Option<Reflection>,
    },
    /// Of all rotations about a point and inversion: `P_u`.
    Atomic {
        /// g or u; it need not be that of (−1)^l, as products show.
        parity: Parity,
        /// Angular momentum.
        l: u8,
    },
}

/// Letters by angular momentum, the usual order after F with J, and letters already used, left out.
const ATOMIC_LETTERS: [char; 17] =
    ['S', 'P', 'D', 'F', 'G', 'H', 'I', 'K', 'L', 'M', 'N', 'O', 'Q', 'R', 'T', 'U', 'V'];

/// By |m|: ASCII word, capital, small letter; from 5 on the Greek letters follow the Latin ones of angular momentum,
/// with Θ for Q.
const LINEAR_LETTERS: [(&str, char, char); 13] = [
    ("Sigma", 'Σ', 'σ'),
    ("Pi", 'Π', 'π'),
    ("Delta", 'Δ', 'δ'),
    ("Phi", 'Φ', 'φ'),
    ("Gamma", 'Γ', 'γ'),
    ("Eta", 'Η', 'η'),
    ("Iota", 'Ι', 'ι'),
    ("Kappa", 'Κ', 'κ'),
    ("Lambda", 'Λ', 'λ'),
    ("Mu", 'Μ', 'μ'),
    ("Nu", 'Ν', 'ν'),
    ("Omicron", 'Ο', 'ο'),
    ("Theta", 'Θ', 'θ'),
];

impl Parity {
    /// `g` or `u`.
    #[must_use]
    pub fn letter(self) -> char {
        match self {
            Self::Even => 'g',
            Self::Odd => 'u',
        }
    }
}

impl Letter {
    const ALL: [(Self, char); 6] =
        [(Self::A, 'A'), (Self::B, 'B'), (Self::E, 'E'), (Self::T, 'T'), (Self::G, 'G'), (Self::H, 'H')];

    fn as_char(self) -> char {
        match self {
            Self::A => 'A',
            Self::B => 'B',
            Self::E => 'E',
            Self::T => 'T',
            Self::G => 'G',
            Self::H => 'H',
        }
    }
}

impl IrrepName {
    /// The ASCII symbol of an orbital: `a1g`, `e''`, `sigma_g` (Σ⁺ drops its sign, Σ⁻ keeps it), `pi_u`, `p_u`.
    #[must_use]
    pub fn symbol(&self) -> String {
        let plain = self.to_string().to_lowercase();
        plain.strip_suffix('+').map_or(plain.clone(), str::to_owned)
    }

    /// With subscripts, primes and Greek letters: `A₁g`, `E″`, `Σg⁺`, `Pu`.
    #[must_use]
    pub fn pretty(&self) -> String {
        self.decorated(true)
    }

    /// [`Self::symbol`] with subscripts, primes and Greek letters: `a₁g`, `e″`, `σg`, `σg⁻`, `pu`.
    #[must_use]
    pub fn pretty_symbol(&self) -> String {
        self.decorated(false)
    }

    fn decorated(self, capital: bool) -> String {
        let case = |c: char| if capital { c } else { c.to_ascii_lowercase() };
        let mut text = String::new();
        match self {
            Self::Mulliken { parity, prime, letter, number } => {
                text.push(case(letter.as_char()));
                if let Some(number) = number {
                    text.extend(subscript(number));
                }
                text.extend(parity.map(Parity::letter));
                text.extend(prime.map(|prime| if prime == Prime::Single { '′' } else { '″' }));
            }
            Self::Linear { parity, m, reflection } => {
                if let Some((_, large, small)) = LINEAR_LETTERS.get(usize::from(m)) {
                    text.push(if capital { *large } else { *small });
                } else {
                    text.push(case('E'));
                    text.extend(subscript(m));
                }
                text.extend(parity.map(Parity::letter));
                match reflection {
                    Some(Reflection::Plus) if capital => text.push('⁺'),
                    Some(Reflection::Minus) => text.push('⁻'),
                    _ => {}
                }
            }
            Self::Atomic { parity, l } => {
                text.push(case(ATOMIC_LETTERS.get(usize::from(l)).copied().unwrap_or('?')));
                text.push(parity.letter());
            }
        }
        text
    }
}

fn subscript(number: u8) -> impl Iterator<Item = char> {
    number
        .to_string()
        .chars()
        .filter_map(|c| c.to_digit(10).and_then(|digit| char::from_u32(0x2080 + digit)))
        .collect::<Vec<_>>()
        .into_iter()
}

impl fmt::Display for IrrepName {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        let mut text = String::new();
        match *self {
            Self::Mulliken { parity, prime, letter, number } => {
                text.push(letter.as_char());
                if let Some(number) = number {
                    write!(text, "{number}")?;
                }
                text.extend(parity.map(Parity::letter));
                text.push_str(prime.map_or("", |prime| if prime == Prime::Single { "'" } else { "''" }));
            }
            Self::Linear { parity, m, reflection } => {
                match LINEAR_LETTERS.get(usize::from(m)) {
                    Some((word, _, _)) => text.push_str(word),
                    None => write!(text, "E{m}")?,
                }
                if let Some(parity) = parity {
                    text.push('_');
                    text.push(parity.letter());
                }
                text.push_str(reflection.map_or("", |sign| if sign == Reflection::Plus { "+" } else { "-" }));
            }
            Self::Atomic { parity, l } => {
                text.push(ATOMIC_LETTERS.get(usize::from(l)).copied().unwrap_or('?'));
                text.push('_');
                text.push(parity.letter());
            }
        }
        f.pad(&text)
    }
}

impl FromStr for IrrepName {
    type Err = GroupError;

    /// Reads what [`fmt::Display`] and [`IrrepName::pretty`] print and the usual other spellings: `F1u` (T1u), `A1P`, `A1PP`, `A1"`,
    /// `a2″`, `E1G`, `SIGMA+`, `σg`, `PIG`. A Σ without a sign is Σ⁺.
    ///
    /// Names alone can be ambiguous (`Hg` of Ih, `H_g` of an atom): an underscore or a letter of S, P, D, I … means an atom.
    fn from_str(text: &str) -> Result<Self, GroupError> {
        let refused = || GroupError::UnknownIrrepName { found: text.chars().take(40).collect() };
        if text.len() > 40 {
            return Err(refused());
        }
        let plain = plain(text);
        linear(&plain).or_else(|| atomic(&plain)).or_else(|| mulliken(&plain)).ok_or_else(refused)
    }
}

/// Lower case, digits for subscripts, `'` for every prime sign, Greek letters as words; braces and blanks left out.
fn plain(text: &str) -> String {
    let mut plain = String::new();
    for c in text.chars().flat_map(char::to_lowercase) {
        match c {
            ' ' | '{' | '}' | '^' => {}
            '′' | '’' | '`' => plain.push('\''),
            '″' | '"' | '”' => plain.push_str("''"),
            '⁺' => plain.push('+'),
            '⁻' | '−' | '–' => plain.push('-'),
            '₀'..='₉' => plain.push(char::from_digit(c as u32 - '₀' as u32, 10).unwrap_or('?')),
            'ς' => plain.push_str("sigma"),
            _ => match LINEAR_LETTERS.iter().find(|(_, _, small)| *small == c) {
                Some((word, _, _)) => plain.push_str(&word.to_lowercase()),
                None => plain.push(c),
            },
        }
    }
    plain
}

/// `g`, `u` or nothing, with or without an underscore before it; `None` for anything else.
#[expect(clippy::option_option, reason = "no parity and no match are different things")]
fn parity(text: &str) -> Option<Option<Parity>> {
    match text.strip_prefix('_').unwrap_or(text) {
        "" => Some(None),
        "g" => Some(Some(Parity::Even)),
        "u" => Some(Some(Parity::Odd)),
        _ => None,
    }
}

fn linear(plain: &str) -> Option<IrrepName> {
    const SHORT: [(&str, u8); 3] = [("sg", 0), ("dlt", 2), ("del", 2)];
    let words = LINEAR_LETTERS.iter().zip(0_u8..).map(|((word, _, _), m)| (word.to_lowercase(), m));
    let (m, rest) = words
        .into_iter()
        .find_map(|(word, m)| plain.strip_prefix(&word).map(|rest| (m, rest.to_owned())))
        .or_else(|| {
            // "sg" alone would be the atomic S_g.
            SHORT.iter().find_map(|(short, m)| {
                let rest = plain.strip_prefix(short)?;
                (!rest.is_empty()).then_some((*m, rest.to_owned()))
            })
        })?;
    // The sign stands before or after the parity: Σ+g, Σg+.
    let sign = if rest.contains('+') {
        Some(Reflection::Plus)
    } else if rest.contains('-') {
        Some(Reflection::Minus)
    } else {
        None
    };
    let without: String = rest.chars().filter(|c| !matches!(c, '+' | '-')).collect();
    if rest.len() > without.len() + 1 || (m > 0 && sign.is_some()) {
        return None;
    }
    let reflection = (m == 0).then(|| sign.unwrap_or(Reflection::Plus));
    Some(IrrepName::Linear { parity: parity(&without)?, m, reflection })
}

fn atomic(plain: &str) -> Option<IrrepName> {
    let mut characters = plain.chars();
    let letter = characters.next()?.to_ascii_uppercase();
    let rest = characters.as_str();
    let l = ATOMIC_LETTERS.iter().zip(0_u8..).find(|(known, _)| **known == letter)?.1;
    // F, G, H and T without an underscore are Mulliken letters.
    if matches!(letter, 'F' | 'G' | 'H' | 'T') && !rest.starts_with('_') {
        return None;
    }
    Some(IrrepName::Atomic { parity: parity(rest)??, l })
}

fn mulliken(plain: &str) -> Option<IrrepName> {
    let mut characters = plain.chars();
    let letter = match characters.next()?.to_ascii_uppercase() {
        'F' => Letter::T,
        found => Letter::ALL.iter().find(|(_, known)| *known == found)?.0,
    };
    let rest = characters.as_str();
    let rest = rest.strip_prefix('_').unwrap_or(rest);
    let digits = rest.len() - rest.trim_start_matches(|c: char| c.is_ascii_digit()).len();
    let (number, rest) = rest.split_at(digits);
    let number = if number.is_empty() { None } else { Some(number.parse::<u8>().ok().filter(|n| *n > 0)?) };
    let (stem, prime) = match rest {
        "''" | "pp" => ("", Some(Prime::Double)),
        "'" | "p" => ("", Some(Prime::Single)),
        other => (other, None),
    };
    Some(IrrepName::Mulliken { parity: parity(stem)?, prime, letter, number })
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn names_survive_a_round_trip() {
        for text in [
            "A1g", "B2u", "E''", "A2'", "T1u", "Gg", "Hu", "E10u", "A", "Sigma_g+", "Sigma_u-", "Sigma+", "Pi_u",
            "Delta_g", "Eta_u", "Theta_g", "S_g", "P_u", "D_g", "F_u", "Q_g", "H_u", "T_g", "V_u",
        ] {
            let name: IrrepName = text.parse().unwrap();
            assert_eq!(name.to_string(), text);
            if !matches!(text, "F_u" | "H_u" | "T_g") {
                assert_eq!(name.pretty().parse::<IrrepName>().unwrap(), name, "{}", name.pretty());
            }
        }
    }

    #[test]
    fn usual_spellings_are_read() {
        for (spelling, name) in [
            ("F1u", "T1u"),
            ("F2", "T2"),
            ("AP", "A'"),
            ("A1P", "A1'"),
            ("A1PP", "A1''"),
            ("A1\"", "A1''"),
            ("a2″", "A2''"),
            ("E1G", "E1g"),
            ("AG", "Ag"),
            ("e_{1g}", "E1g"),
            ("SIGMA+", "Sigma+"),
            ("σg", "Sigma_g+"),
            ("Σ⁻", "Sigma-"),
            ("SGG", "Sigma_g+"),
            ("PIG", "Pi_g"),
            ("pi", "Pi"),
            ("DLTU", "Delta_u"),
            ("Σu+", "Sigma_u+"),
        ] {
            assert_eq!(spelling.parse::<IrrepName>().unwrap().to_string(), name, "{spelling}");
        }
    }

    #[test]
    fn nonsense_is_refused() {
        for text in ["", "Z1", "A0", "A1x", "A300", "E'''", "Pi+", "Sigma++", "S", "A1gg", "∞"] {
            assert!(text.parse::<IrrepName>().is_err(), "{text}");
        }
    }

    #[test]
    fn orbital_symbols_are_lower_case() {
        for (name, symbol, pretty) in [
            ("A1g", "a1g", "a₁g"),
            ("A2''", "a2''", "a₂″"),
            ("Sigma_g+", "sigma_g", "σg"),
            ("Sigma_g-", "sigma_g-", "σg⁻"),
            ("Pi_u", "pi_u", "πu"),
            ("P_u", "p_u", "pu"),
        ] {
            let name: IrrepName = name.parse().unwrap();
            assert_eq!(name.symbol(), symbol);
            assert_eq!(name.pretty_symbol(), pretty);
        }
    }

    #[test]
    fn names_sort_as_in_printed_tables() {
        let mut names: Vec<IrrepName> =
            ["A1u", "E2g", "B1g", "A2g", "T1g", "E1g", "A1g"].iter().map(|text| text.parse().unwrap()).collect();
        names.sort();
        let sorted: Vec<String> = names.iter().map(ToString::to_string).collect();
        assert_eq!(sorted, ["A1g", "A2g", "B1g", "E1g", "E2g", "T1g", "A1u"]);
    }
}
