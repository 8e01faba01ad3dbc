//! Names of point groups in Schoenflies notation: print them, and read the usual spellings.
//!
//! Not here: what a name's group consists of (`group::point_group`), which group a set of operations is (`group::identify`).

use super::error::GroupError;
use std::fmt;
use std::str::FromStr;

/// The highest order n of a principal axis that a name may ask for.
///
/// Orders and tables grow with n and its square; beyond this no molecule is known and a typing error is likelier.
pub const MAX_AXIS_ORDER: u32 = 64;

/// A point group by name.
///
/// Numbers are the order n of the principal rotation axis, except in `Sn`, which holds the (even) order of the improper axis.
#[derive(Debug, Clone, Copy, PartialEq, Eq, PartialOrd, Ord, Hash)]
pub enum GroupName {
    /// No symmetry.
    C1,
    /// One mirror plane.
    Cs,
    /// Inversion alone.
    Ci,
    /// One axis, n ≥ 2.
    Cn(u32),
    /// One axis and n planes through it, n ≥ 2.
    Cnv(u32),
    /// One axis and the plane across it, n ≥ 2.
    Cnh(u32),
    /// One axis and n half-turn axes across it, n ≥ 2.
    Dn(u32),
    /// `Dn` and the plane across the axis, n ≥ 2.
    Dnh(u32),
    /// `Dn` and n planes between the half-turn axes, n ≥ 2.
    Dnd(u32),
    /// One improper axis of even order ≥ 4.
    Sn(u32),
    /// Rotations of the tetrahedron.
    T,
    /// The tetrahedron.
    Td,
    /// Rotations of the tetrahedron, and inversion.
    Th,
    /// Rotations of the cube.
    O,
    /// The cube and the octahedron.
    Oh,
    /// Rotations of the icosahedron.
    I,
    /// The icosahedron.
    Ih,
    /// Linear without inversion centre.
    Cinfv,
    /// Linear with inversion centre.
    Dinfh,
    /// All rotations about a point, and inversion: a single atom.
    K,
}

impl GroupName {
    /// Whether the group has infinitely many elements: `Cinfv`, `Dinfh`, `K`.
    #[must_use]
    pub fn is_continuous(self) -> bool {
        matches!(self, Self::Cinfv | Self::Dinfh | Self::K)
    }

    /// Number of elements; `None` for the continuous groups.
    ///
    /// ```
    /// # use orbsieve::group::schoenflies::GroupName;
    /// assert_eq!(GroupName::Dnd(5).order(), Some(20));
    /// assert_eq!(GroupName::Dinfh.order(), None);
    /// ```
    #[must_use]
    pub fn order(self) -> Option<usize> {
        let order = match self {
            Self::C1 => 1,
            Self::Cs | Self::Ci => 2,
            Self::Cn(n) | Self::Sn(n) => n,
            Self::Cnv(n) | Self::Cnh(n) | Self::Dn(n) => n.saturating_mul(2),
            Self::Dnh(n) | Self::Dnd(n) => n.saturating_mul(4),
            Self::T => 12,
            Self::Td | Self::Th | Self::O => 24,
            Self::Oh => 48,
            Self::I => 60,
            Self::Ih => 120,
            Self::Cinfv | Self::Dinfh | Self::K => return None,
        };
        Some(order as usize)
    }

    /// Number of proper rotations: by how many an orientation is counted too often; `None` for C∞ and atoms.
    ///
    /// 1 for C∞v and 2 for D∞h is the rule for linear molecules (common practice).
    #[must_use]
    pub fn rotational_symmetry_number(self) -> Option<usize> {
        match self {
            Self::K => None,
            Self::Cinfv => Some(1),
            Self::Dinfh => Some(2),
            Self::C1 | Self::Cn(_) | Self::Dn(_) | Self::T | Self::O | Self::I => self.order(),
            _ => self.order().map(|order| order / 2),
        }
    }

    /// Checks that the numbers make sense: 2 ≤ n ≤ [`MAX_AXIS_ORDER`], improper orders even and ≥ 4.
    ///
    /// # Errors
    /// [`GroupError::AxisOrder`] with the number and what was expected.
    pub fn validated(self) -> Result<Self, GroupError> {
        let refused = |n, expected| Err(GroupError::AxisOrder { n, expected });
        match self {
            Self::Cn(n) | Self::Cnv(n) | Self::Cnh(n) | Self::Dn(n) | Self::Dnh(n) | Self::Dnd(n)
                if !(2..=MAX_AXIS_ORDER).contains(&n) =>
            {
                refused(n, "an axis of order 2 to 64")
            }
            Self::Sn(n) if n < 4 || n % 2 == 1 || n > 2 * MAX_AXIS_ORDER => {
                refused(n, "an improper axis of even order 4 to 128")
            }
            _ => Ok(self),
        }
    }

    /// With subscripts and ∞: `D₅d`, `D∞h`, `S₄`.
    #[must_use]
    pub fn pretty(self) -> String {
        self.to_string()
            .replace("inf", "∞")
            .chars()
            .map(|c| c.to_digit(10).and_then(|digit| char::from_u32(0x2080 + digit)).unwrap_or(c))
            .collect()
    }
}

impl fmt::Display for GroupName {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        match self {
            Self::C1 => f.pad("C1"),
            Self::Cs => f.pad("Cs"),
            Self::Ci => f.pad("Ci"),
            Self::Cn(n) => f.pad(&format!("C{n}")),
            Self::Cnv(n) => f.pad(&format!("C{n}v")),
            Self::Cnh(n) => f.pad(&format!("C{n}h")),
            Self::Dn(n) => f.pad(&format!("D{n}")),
            Self::Dnh(n) => f.pad(&format!("D{n}h")),
            Self::Dnd(n) => f.pad(&format!("D{n}d")),
            Self::Sn(n) => f.pad(&format!("S{n}")),
            Self::T => f.pad("T"),
            Self::Td => f.pad("Td"),
            Self::Th => f.pad("Th"),
            Self::O => f.pad("O"),
            Self::Oh => f.pad("Oh"),
            Self::I => f.pad("I"),
            Self::Ih => f.pad("Ih"),
            Self::Cinfv => f.pad("Cinfv"),
            Self::Dinfh => f.pad("Dinfh"),
            Self::K => f.pad("Kh"),
        }
    }
}

impl FromStr for GroupName {
    type Err = GroupError;

    /// Reads `D5d`, `d5d`, `D_5d`, `D_{5d}`, `D∞h`, `Dinfh`, `D*h`, `Kh`, and other names of one group: `S2` is Ci, `C1h` is Cs,
    /// `S3` is C3h, `V`, `Vh`, `Vd` are D2, D2h, D2d, `C3i` is S6, `D1` is C2, `D1h` is C2v, `D1d` is C2h.
    fn from_str(text: &str) -> Result<Self, GroupError> {
        let refused = || GroupError::UnknownGroupName { found: text.chars().take(40).collect() };
        let plain = plain(text);
        let named = match plain.as_str() {
            "cs" => Some(Self::Cs),
            "ci" => Some(Self::Ci),
            "t" => Some(Self::T),
            "td" => Some(Self::Td),
            "th" => Some(Self::Th),
            "o" => Some(Self::O),
            "oh" => Some(Self::Oh),
            "i" => Some(Self::I),
            "ih" => Some(Self::Ih),
            "k" | "kh" | "so(3)" | "o(3)" | "so3" | "o3" => Some(Self::K),
            "v" => Some(Self::Dn(2)),
            "vh" => Some(Self::Dnh(2)),
            "vd" => Some(Self::Dnd(2)),
            "cinfv" => Some(Self::Cinfv),
            "dinfh" => Some(Self::Dinfh),
            _ => None,
        };
        if let Some(name) = named {
            return Ok(name);
        }
        let mut characters = plain.chars();
        let family = characters.next().ok_or_else(refused)?;
        let rest = characters.as_str();
        let digits = rest.len() - rest.trim_start_matches(|c: char| c.is_ascii_digit()).len();
        let (number, suffix) = rest.split_at(digits);
        // Five digits are beyond any limit and keep the number from overflowing.
        let n: u32 = number.get(..5).unwrap_or(number).parse().map_err(|_| refused())?;
        if n == 0 {
            return Err(refused());
        }
        axial(family, n, suffix).ok_or_else(refused)?.validated()
    }
}

/// Lower case, without blanks, underscores and braces; subscripts become digits and every infinity sign `inf`.
fn plain(text: &str) -> String {
    let mut plain = String::new();
    for c in text.trim().chars().flat_map(char::to_lowercase) {
        match c {
            '_' | '{' | '}' | ' ' => {}
            '∞' | '*' => plain.push_str("inf"),
            '₀'..='₉' => plain.push(char::from_digit(c as u32 - '₀' as u32, 10).unwrap_or('?')),
            'ₕ' => plain.push('h'),
            'ᵥ' => plain.push('v'),
            _ => plain.push(c),
        }
        if plain.len() > 40 {
            break;
        }
    }
    for spelling in ["infinity", "\\infty", "oo"] {
        plain = plain.replace(spelling, "inf");
    }
    plain
}

/// The group of a family letter, a number of at least 1 and a suffix, in its usual name; `None` where there is no such group.
fn axial(family: char, n: u32, suffix: &str) -> Option<GroupName> {
    Some(match (family, suffix, n) {
        ('c', "", 1) => GroupName::C1,
        ('c', "v" | "h", 1) | ('s', "", 1) => GroupName::Cs,
        ('c', "i", 1) | ('s', "", 2) => GroupName::Ci,
        ('d', "", 1) => GroupName::Cn(2),
        ('d', "h", 1) => GroupName::Cnv(2),
        ('d', "d", 1) => GroupName::Cnh(2),
        ('c', "", n) => GroupName::Cn(n),
        ('c', "v", n) => GroupName::Cnv(n),
        ('c', "h", n) => GroupName::Cnh(n),
        ('c', "i", n) if n % 2 == 1 => GroupName::Sn(n.saturating_mul(2)),
        ('d', "", n) => GroupName::Dn(n),
        ('d', "h", n) => GroupName::Dnh(n),
        ('d', "d", n) => GroupName::Dnd(n),
        ('s', "", n) if n % 2 == 1 => GroupName::Cnh(n),
        ('s', "", n) => GroupName::Sn(n),
        _ => return None,
    })
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn usual_spellings_are_one_name() {
        for (spelling, name) in [
            ("D5d", "D5d"),
            ("d_5d", "D5d"),
            ("D_{5d}", "D5d"),
            ("D₅d", "D5d"),
            ("D∞h", "Dinfh"),
            ("D*h", "Dinfh"),
            ("DOOH", "Dinfh"),
            ("C∞v", "Cinfv"),
            ("c_infv", "Cinfv"),
            ("S2", "Ci"),
            ("S1", "Cs"),
            ("C1h", "Cs"),
            ("C1v", "Cs"),
            ("S3", "C3h"),
            ("S6", "S6"),
            ("C3i", "S6"),
            ("D1", "C2"),
            ("D1h", "C2v"),
            ("D1d", "C2h"),
            ("Vh", "D2h"),
            ("K", "Kh"),
            ("SO(3)", "Kh"),
            ("oh", "Oh"),
            ("IH", "Ih"),
            ("CS", "Cs"),
        ] {
            assert_eq!(spelling.parse::<GroupName>().unwrap().to_string(), name, "{spelling}");
        }
    }

    #[test]
    fn nonsense_is_refused_with_what_was_expected() {
        for text in [
            "",
            "C0",
            "C",
            "Q3",
            "D5x",
            "S",
            "D3.5",
            "C999999999999999999999v",
            "∞∞∞∞∞∞∞∞∞∞∞∞∞∞∞",
            "D65h",
            "S130",
            "C2i",
        ] {
            let error = text.parse::<GroupName>().unwrap_err().to_string();
            assert!(error.contains("expected"), "{text}: {error}");
        }
    }

    #[test]
    fn pretty_has_subscripts() {
        assert_eq!(GroupName::Dnd(12).pretty(), "D₁₂d");
        assert_eq!(GroupName::Dinfh.pretty(), "D∞h");
    }
}
