//! A point group in its standard frame: elements, classes, irreps, and what is asked of them.
//!
//! Standard frame: z is the principal axis; C2' of Dn, Dnh, Dnd along x; σv of Cnv is the xz plane; Cs has z across the mirror;
//! O and Oh have C4 along x, y, z; T, Td, Th have C2 along x, y, z (S4 in Td); I and Ih have C5 along z, C2 along y and a second C5
//! in the xz plane at (2, 0, 1)/√5 (so σ(xz) in Ih); linear groups lie along z.
//!
//! Linear groups are worked out on a finite stand-in: C26v for C∞v, D26h for D∞h keep all |m| ≤ 12 apart, which is what products of
//! two functions with l ≤ 6 need. Irreps of higher |m| are not listed, and a product that reaches them is an error.

use super::Operation;
use super::atomic;
use super::characters::{class_of, complex_irreps};
use super::elements::{same, standard_operations};
use super::error::GroupError;
use super::functions::Functions;
use super::irrep_name::IrrepName;
use super::matrices::{Found, Sought, realise};
use super::mulliken::Landmarks;
use super::multiplication::Multiplication;
use super::schoenflies::GroupName;
use super::symbols::{pretty, symbols};
use nalgebra::{DMatrix, Matrix3};

/// One operation of a group.
#[derive(Debug, Clone, PartialEq)]
pub struct Element {
    /// Its matrix in the standard frame.
    pub operation: Operation,
    /// ASCII symbol: `E`, `C3`, `C3^2`, `S6^5`, `i`, `sigma_h`, `C2'(1)`.
    pub symbol: String,
    /// Index into [`PointGroup::classes`].
    pub class_idx: usize,
}

/// A class of conjugate elements.
#[derive(Debug, Clone, PartialEq)]
pub struct Class {
    /// ASCII symbol with the number of elements: `2C3`, `3sigma_v`.
    pub symbol: String,
    /// Indices into [`PointGroup::elements`], ascending.
    pub members: Vec<usize>,
    /// What the class counts in a mean over the group: size/|G|. For atoms a weight of quadrature over angles.
    pub weight: f64,
}

/// An irreducible representation, or a pair of complex conjugates as one real representation.
#[derive(Debug, Clone, PartialEq)]
pub struct Irrep {
    /// Its name.
    pub name: IrrepName,
    /// Dimension of the real representation: 2 for a pair.
    pub dimension: usize,
    /// 1, or 2 for a pair: the mean of χ² over the group.
    pub constituents: usize,
    /// One real character per class.
    pub characters: Vec<f64>,
    /// One real orthogonal matrix (dimension × dimension) per element; column j is the image of partner j.
    pub matrices: Vec<DMatrix<f64>>,
    /// The partner functions in the order of the rows, `x`, `y`, `z2`, `x2-y2`, `Rx` …; plain numbers where no simple function serves.
    pub partners: Vec<String>,
    /// Which simple functions belong to it.
    pub functions: Functions,
}

/// A point group with everything worked out.
#[derive(Debug, Clone)]
pub struct PointGroup {
    pub(super) name: GroupName,
    pub(super) elements: Vec<Element>,
    pub(super) multiplication: Multiplication,
    pub(super) classes: Vec<Class>,
    pub(super) irreps: Vec<Irrep>,
}

/// An irrep with its name and characters, before its matrices.
struct NamedIrrep {
    name: IrrepName,
    dimension: usize,
    constituents: usize,
    characters: Vec<f64>,
}

impl NamedIrrep {
    fn by_element(&self, classes: &[Vec<usize>], order: usize) -> Vec<f64> {
        class_of(order, classes).into_iter().map(|class| self.characters[class]).collect()
    }

    fn sought<'a>(&self, characters: &'a [f64]) -> Sought<'a> {
        Sought { dimension: self.dimension, constituents: self.constituents, characters }
    }

    fn with(self, found: Found) -> Irrep {
        let Self { name, dimension, constituents, characters } = self;
        let Found { matrices, partners, functions } = found;
        Irrep { name, dimension, constituents, characters, matrices, partners, functions }
    }
}

/// Real irreps in the order of printed tables: complex conjugates joined, names given.
fn named_irreps(
    name: GroupName,
    operations: &[Matrix3<f64>],
    multiplication: &Multiplication,
    classes: &[Vec<usize>],
) -> Result<Vec<NamedIrrep>, GroupError> {
    let landmarks = Landmarks::of(name, operations);
    let class_of = class_of(operations.len(), classes);
    let mut irreps = Vec::new();
    for (at, irrep) in complex_irreps(multiplication, classes)?.into_iter().enumerate() {
        // Of a pair the first stands for both.
        if irrep.conjugate < at {
            continue;
        }
        let constituents = if irrep.conjugate == at { 1 } else { 2 };
        let dimension = irrep.dimension * constituents;
        let characters: Vec<f64> =
            irrep.characters.iter().map(|character| character.re * constituents as f64).collect();
        if let Some(name) = landmarks.name(dimension, |element| characters[class_of[element]]) {
            irreps.push(NamedIrrep { name, dimension, constituents, characters });
        }
    }
    irreps.sort_by_key(|irrep| irrep.name);
    Ok(irreps)
}

/// Joins the two families of planes through the axis of a linear molecule, and of half turns across it.
///
/// The finite stand-in parts them, the irreps of the linear group do not.
fn joined(
    classes: Vec<Vec<usize>>,
    mut irreps: Vec<NamedIrrep>,
    operations: &[Matrix3<f64>],
) -> (Vec<Vec<usize>>, Vec<NamedIrrep>) {
    // What reflects the xy plane in a line, and what that does to z.
    let family = |class: &[usize]| {
        let matrix = operations[class[0]];
        (matrix[(0, 0)] * matrix[(1, 1)] < matrix[(0, 1)] * matrix[(1, 0)]).then_some(matrix[(2, 2)] > 0.0)
    };
    let mut kept: Vec<(usize, Vec<usize>)> = Vec::new();
    for (at, class) in classes.into_iter().enumerate() {
        let wanted = family(&class);
        match kept.iter_mut().find(|(_, other)| wanted.is_some() && family(other) == wanted) {
            Some((_, other)) => other.extend(class),
            None => kept.push((at, class)),
        }
    }
    for irrep in &mut irreps {
        irrep.characters = kept.iter().map(|(at, _)| irrep.characters[*at]).collect();
    }
    let mut classes: Vec<Vec<usize>> = kept.into_iter().map(|(_, class)| class).collect();
    for class in &mut classes {
        class.sort_unstable();
    }
    (classes, irreps)
}

/// Elements and classes with their symbols.
pub(super) fn elements_and_classes(
    name: GroupName,
    operations: &[Matrix3<f64>],
    members: Vec<Vec<usize>>,
) -> (Vec<Element>, Vec<Class>) {
    let order = operations.len();
    let class_of = class_of(order, &members);
    let (symbols, class_symbols) = symbols(name, operations, &members);
    let elements = operations.iter().zip(symbols).zip(class_of).map(|((matrix, symbol), class_idx)| {
        let operation = Operation::new(*matrix, 1e-9).expect("operations of named groups are orthogonal to 1e-13");
        Element { operation, symbol, class_idx }
    });
    let classes = members.into_iter().zip(class_symbols).map(|(members, symbol)| {
        let weight = members.len() as f64 / order as f64;
        Class { symbol, members, weight }
    });
    (elements.collect(), classes.collect())
}

impl Class {
    /// The symbol as printed: `2C₃`, `3σv`.
    #[must_use]
    pub fn pretty(&self) -> String {
        pretty(&self.symbol)
    }
}

impl PointGroup {
    /// The group of this name in its standard frame.
    ///
    /// ```
    /// # use orbsieve::group::PointGroup;
    /// # fn main() -> Result<(), orbsieve::group::GroupError> {
    /// let group = PointGroup::standard("D5d".parse()?)?;
    /// let e1g = group.irrep_idx(&"E1g".parse()?)?;
    /// let names = |sum: Vec<(usize, usize)>| sum.iter().map(|&(at, _)| group.irreps()[at].name.to_string()).collect::<Vec<_>>();
    /// assert_eq!(names(group.product(e1g, e1g)?), ["A1g", "A2g", "E2g"]);
    /// assert_eq!(group.irreps()[e1g].partners, ["xz", "yz"]);
    /// # Ok(())
    /// # }
    /// ```
    /// # Errors
    /// [`GroupError::AxisOrder`] for an n that is not supported.
    pub fn standard(name: GroupName) -> Result<Self, GroupError> {
        let name = name.validated()?;
        if name == GroupName::K {
            return atomic::full_rotation_group();
        }
        let operations = standard_operations(name);
        let multiplication = Multiplication::of(&operations, |a, b| a * b, same)?;
        let members = multiplication.classes();
        let named = named_irreps(name, &operations, &multiplication, &members)?;
        let (members, named) =
            if name.is_continuous() { joined(members, named, &operations) } else { (members, named) };
        let by_element: Vec<Vec<f64>> =
            named.iter().map(|irrep| irrep.by_element(&members, operations.len())).collect();
        let sought: Vec<Sought<'_>> =
            named.iter().zip(&by_element).map(|(irrep, characters)| irrep.sought(characters)).collect();
        let realised = realise(name, &operations, &multiplication, &sought)?;
        let irreps = named.into_iter().zip(realised).map(|(irrep, found)| irrep.with(found)).collect();
        let (elements, classes) = elements_and_classes(name, &operations, members);
        Ok(Self { name, elements, multiplication, classes, irreps })
    }

    /// Its name.
    #[must_use]
    pub fn name(&self) -> GroupName {
        self.name
    }

    /// Number of elements held: the order, or for continuous groups the size of the stand-in.
    #[must_use]
    pub fn order(&self) -> usize {
        self.elements.len()
    }

    /// Whether the group has infinitely many elements, of which a sample is held.
    #[must_use]
    pub fn is_continuous(&self) -> bool {
        self.name.is_continuous()
    }

    /// The elements, identity first.
    #[must_use]
    pub fn elements(&self) -> &[Element] {
        &self.elements
    }

    /// Index of a·b: first b, then a.
    #[must_use]
    pub fn multiply(&self, a: usize, b: usize) -> usize {
        self.multiplication.product(a, b)
    }

    /// Index of the inverse.
    #[must_use]
    pub fn inverse(&self, a: usize) -> usize {
        self.multiplication.inverse(a)
    }

    /// The smallest power above 0 that is the identity.
    #[must_use]
    pub fn element_order(&self, a: usize) -> usize {
        self.multiplication.powers(a).len()
    }

    /// The classes, that of the identity first.
    #[must_use]
    pub fn classes(&self) -> &[Class] {
        &self.classes
    }

    /// The classes that a printed table shows: all of a finite group, of a continuous one those that stand for the rest.
    ///
    /// For linear groups E, C(φ), σv (and i, S(φ), C2'), for atoms E, C(φ), i, iC(φ), in which characters are functions of φ:
    /// see [`super::exact_character`].
    #[must_use]
    pub fn printed_classes(&self) -> Vec<usize> {
        let shown = |class: &Class| match self.name {
            GroupName::Cinfv | GroupName::Dinfh => {
                let symbol = class.symbol.as_str();
                matches!(symbol, "E" | "2C(phi)" | "i" | "2S(phi)") || symbol.starts_with("inf")
            }
            GroupName::K => matches!(class.symbol.as_str(), "E" | "i" | "C(phi)" | "iC(phi)"),
            _ => true,
        };
        let mut printed: Vec<usize> = (0..self.classes.len()).filter(|&at| shown(&self.classes[at])).collect();
        if self.is_continuous() {
            // Turns before inversion and its products, planes with the turns, as in printed tables.
            let order = ["E", "2C(phi)", "C(phi)", "infsigma_v", "i", "2S(phi)", "iC(phi)", "infC2'"];
            printed.sort_by_key(|&at| order.iter().position(|symbol| *symbol == self.classes[at].symbol));
        }
        printed
    }

    /// The irreps in the order of printed tables.
    #[must_use]
    pub fn irreps(&self) -> &[Irrep] {
        &self.irreps
    }

    /// The index of an irrep by name.
    ///
    /// # Errors
    /// [`GroupError::NoSuchIrrep`] with the names there are.
    pub fn irrep_idx(&self, name: &IrrepName) -> Result<usize, GroupError> {
        self.irreps.iter().position(|irrep| irrep.name == *name).ok_or_else(|| GroupError::NoSuchIrrep {
            group: self.name.to_string(),
            irrep: name.to_string(),
            expected: self.irreps.iter().map(|irrep| irrep.name.to_string()).collect::<Vec<_>>().join(", "),
        })
    }
}
