//! Names of the irreps of double groups: `E1/2g` and `Gamma6g`, beside those of the single group.
//!
//! Not here: which irrep gets which name (`group::double`).

use super::irrep_name::{IrrepName, Parity};
use std::fmt;

/// The name of an irrep of a double group.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum DoubleName {
    /// Single-valued: that of the point group.
    Single(IrrepName),
    /// Double-valued, of a finite or linear group.
    ///
    /// The letter is the dimension (A 1, E 2, F 4, I 6), the subscript the lowest J whose 2J + 1 states hold the irrep; in linear
    /// groups that is Ω.
    Spinor {
        /// 1, 2, 4 or 6; of a conjugate pair both.
        dimension: u8,
        /// Twice the subscript.
        twice_j: u16,
        /// g, u or nothing.
        parity: Option<Parity>,
        /// First and last number in Γ notation; nothing in linear groups, where nobody counts so.
        gamma: Option<(u16, u16)>,
    },
    /// Double-valued, of an atom: J itself.
    Level {
        /// 2J.
        twice_j: u16,
        /// g or u.
        parity: Parity,
    },
}

/// J, S or Ω as a whole number or a fraction: `3/2`.
#[must_use]
pub fn half(twice: u16) -> String {
    if twice.is_multiple_of(2) { (twice / 2).to_string() } else { format!("{twice}/2") }
}

impl DoubleName {
    /// ASCII name in Γ notation, `Gamma6g`; a pair has two numbers, `Gamma5,6`. Nothing for single-valued irreps, linear groups and atoms.
    #[must_use]
    pub fn gamma(&self) -> Option<String> {
        let Self::Spinor { gamma: Some((first, last)), parity, .. } = *self else { return None };
        let numbers = if first == last { first.to_string() } else { format!("{first},{last}") };
        Some(format!("Gamma{numbers}{}", parity.map_or(String::new(), |parity| parity.letter().to_string())))
    }

    /// As printed: `E₁/₂g`, `T₂g`.
    #[must_use]
    pub fn pretty(&self) -> String {
        if let Self::Single(name) = self {
            return name.pretty();
        }
        let subscript = |c: char| c.to_digit(10).and_then(|digit| char::from_u32(0x2080 + digit)).unwrap_or(c);
        self.to_string().replace('_', "").chars().map(subscript).collect()
    }
}

impl fmt::Display for DoubleName {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        let text = match *self {
            Self::Single(name) => name.to_string(),
            Self::Spinor { dimension, twice_j, parity, .. } => {
                let letter = match dimension {
                    1 => 'A',
                    2 => 'E',
                    4 => 'F',
                    _ => 'I',
                };
                let parity = parity.map_or(String::new(), |parity| parity.letter().to_string());
                format!("{letter}{}{parity}", half(twice_j))
            }
            Self::Level { twice_j, parity } => format!("{}_{}", half(twice_j), parity.letter()),
        };
        f.pad(&text)
    }
}
