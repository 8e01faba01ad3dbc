//! Double groups: what a group becomes for states of half-integer spin, where a turn by 360° changes the sign.
//!
//! Elements are unit quaternions with a flag for inversion, two for each operation; inversion leaves spins as they are. Their product
//! table, classes, characters, sums, products and squares come from the same code as those of point groups. Single-valued irreps keep
//! their names and indices.
//!
//! Names of double-valued irreps by rule: the letter is the dimension, the subscript the lowest J that holds the irrep. Γ numbers follow
//! those of the single-valued irreps: first spin 1/2, then its products with one-dimensional irreps, then the others by dimension
//! and J; a conjugate pair takes two numbers. That gives the numbers of the book Properties of the Thirty-Two Point Groups (1963; from
//! memory beyond the rows in `tests/states_published.rs`): Γ6 Γ7 Γ8 in O, Γ6 Γ7 in D4, Γ9 for J = 3/2 in D6.

use super::character_table::{self, CharacterTable, Decomposition, Row};
use super::characters::{ComplexIrrep, class_of, complex_irreps};
use super::double_name::DoubleName;
use super::elements::directed_axis;
use super::error::GroupError;
use super::irrep_name::{IrrepName, Parity};
use super::multiplication::Multiplication;
use super::operation::axis_angle;
use super::point_group::PointGroup;
use super::schoenflies::GroupName;
use super::subgroups::Subgroup;
use nalgebra::{Matrix3, Quaternion, Vector3};

/// Twice the highest J of an atom, and twice the highest Ω of a linear molecule, that is kept.
const ATOMIC_TWICE_J: u16 = 39;
const LINEAR_TWICE_OMEGA: u16 = 25;

/// An operation as it acts on spins.
#[derive(Debug, Clone, Copy, PartialEq)]
struct Lift {
    turn: Quaternion<f64>,
    inverted: bool,
}

/// A class of conjugate elements of a double group.
#[derive(Debug, Clone, PartialEq)]
pub struct DoubleClass {
    /// `8C3`, `8RC3` with R the turn by 360°; `3C2+3RC2` where both are conjugate.
    pub symbol: String,
    /// Number of elements; 0 for atoms.
    pub size: usize,
    /// What it counts in a mean over the group.
    pub weight: f64,
    /// Half the angle of rotation, 0 to π: from π/2 on the sign of spinors has changed.
    pub half_angle: f64,
    /// Whether it is a rotation without inversion.
    pub proper: bool,
    /// Index of the class of the point group.
    pub single: usize,
}

/// How time reversal pairs the states of a double-valued irrep into levels.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Kramers {
    /// The irrep is a level by itself.
    Itself,
    /// Two complex conjugate irreps, listed as one, make a level.
    Conjugates,
    /// The same irrep twice makes a level.
    Twice,
}

/// An irrep of a double group, or a pair of complex conjugates.
#[derive(Debug, Clone, PartialEq)]
pub struct DoubleIrrep {
    /// Its name.
    pub name: DoubleName,
    /// Its dimension, of a pair both.
    pub dimension: usize,
    /// 1, or 2 for a pair.
    pub constituents: usize,
    /// One real character per class.
    pub characters: Vec<f64>,
    /// For double-valued irreps.
    pub kramers: Option<Kramers>,
}

impl DoubleIrrep {
    /// How many copies of it make one level that time reversal cannot split: 1 or 2.
    #[must_use]
    pub fn copies_in_level(&self) -> usize {
        if self.kramers == Some(Kramers::Twice) { 2 } else { 1 }
    }
}

/// A double group with everything worked out.
#[derive(Debug, Clone)]
pub struct DoubleGroup {
    name: GroupName,
    /// One lift for each operation, then the same times R; empty for atoms.
    elements: Vec<Lift>,
    class_of: Vec<usize>,
    multiplication: Option<Multiplication>,
    classes: Vec<DoubleClass>,
    irreps: Vec<DoubleIrrep>,
    n_single: usize,
}

impl Lift {
    fn of(operation: &Matrix3<f64>) -> Self {
        let inverted = operation.determinant() < 0.0;
        let rotation = if inverted { -operation } else { *operation };
        let (axis, angle) = axis_angle(&rotation);
        let (sine, cosine) = (angle / 2.0).sin_cos();
        // A half turn has no sense: its axis is given one.
        let axis: Vector3<f64> = if cosine.abs() < 1e-6 { directed_axis(&rotation) } else { axis.into_inner() };
        Self { turn: Quaternion::from_parts(cosine, axis * sine), inverted }
    }

    fn times(&self, other: &Self) -> Self {
        Self { turn: self.turn * other.turn, inverted: self.inverted != other.inverted }
    }

    fn barred(&self) -> Self {
        Self { turn: -self.turn, inverted: self.inverted }
    }

    fn same(&self, other: &Self) -> bool {
        self.inverted == other.inverted && (self.turn - other.turn).coords.amax() < 1e-6
    }

    fn half_angle(&self) -> f64 {
        self.turn.imag().norm().atan2(self.turn.w)
    }
}

/// Trace of a turn by twice `half_angle` on the 2J + 1 states of one J.
fn spin_character(twice_j: u16, half_angle: f64) -> f64 {
    let twice_j = i32::from(twice_j);
    (-twice_j..=twice_j).step_by(2).map(|twice_m| (f64::from(twice_m) * half_angle).cos()).sum()
}

impl DoubleGroup {
    /// The double group of a point group.
    ///
    /// # Errors
    /// None for groups made by [`PointGroup::standard`].
    pub fn of(group: &PointGroup) -> Result<Self, GroupError> {
        let mut double = if group.name() == GroupName::K { Self::of_atom(group) } else { Self::of_elements(group)? };
        double.n_single = group.irreps().len();
        let single = group.irreps().iter().map(|irrep| DoubleIrrep {
            name: DoubleName::Single(irrep.name),
            dimension: irrep.dimension,
            constituents: irrep.constituents,
            characters: double.classes.iter().map(|class| irrep.characters[class.single]).collect(),
            kramers: None,
        });
        double.irreps = single.chain(std::mem::take(&mut double.irreps)).collect();
        Ok(double)
    }

    fn of_elements(group: &PointGroup) -> Result<Self, GroupError> {
        let lifts: Vec<Lift> = group.elements().iter().map(|element| Lift::of(element.operation.matrix())).collect();
        let barred: Vec<Lift> = lifts.iter().map(Lift::barred).collect();
        let elements = [lifts, barred].concat();
        let multiplication = Multiplication::of(&elements, Lift::times, Lift::same)?;
        let original = multiplication.classes();
        let entries = entries(group, &elements, &original);
        let mut rows = complex_irreps(&multiplication, &original)?;
        for row in &mut rows {
            row.characters = entries.iter().map(|entry| row.characters[entry.original]).collect();
        }
        let mut class_of = vec![0; elements.len()];
        for (at, entry) in entries.iter().enumerate() {
            for &member in &entry.members {
                class_of[member] = at;
            }
        }
        let classes = entries.into_iter().map(|entry| entry.class).collect();
        let (irreps, n_single) = (Vec::new(), 0);
        let mut double = Self {
            name: group.name(),
            elements,
            class_of,
            multiplication: Some(multiplication),
            classes,
            irreps,
            n_single,
        };
        double.irreps = double.named(group, &rows);
        Ok(double)
    }

    /// The double-valued of all rows, with names and in order.
    fn named(&self, group: &PointGroup, rows: &[ComplexIrrep]) -> Vec<DoubleIrrep> {
        let rotated = self.class_of[group.order()];
        let inversion = self.elements.iter().position(|lift| lift.inverted && lift.turn.w > 1.0 - 1e-6);
        let parities: &[Option<Parity>] =
            if inversion.is_some() { &[Some(Parity::Even), Some(Parity::Odd)] } else { &[None] };
        let n_single: usize = group.irreps().iter().map(|irrep| irrep.constituents).sum();
        let mut irreps = Vec::new();
        for &parity in parities {
            let mut sorted: Vec<(SortKey, DoubleIrrep)> = rows
                .iter()
                .enumerate()
                .filter(|(at, row)| row.characters[rotated].re < 0.0 && row.conjugate >= *at)
                .filter(|(_, row)| {
                    inversion
                        .is_none_or(|at| (row.characters[self.class_of[at]].re > 0.0) == (parity == Some(Parity::Even)))
                })
                .map(|(at, row)| self.described(group, row, row.conjugate != at, parity))
                .collect();
            sorted.sort_by_key(|(key, _)| *key);
            let mut number = u16::try_from(n_single / parities.len()).unwrap_or(u16::MAX);
            for (_, mut irrep) in sorted {
                let count = u16::try_from(irrep.constituents).unwrap_or(1);
                if let DoubleName::Spinor { gamma, .. } = &mut irrep.name {
                    *gamma = (!group.is_continuous()).then_some((number + 1, number + count));
                }
                number += count;
                irreps.push(irrep);
            }
        }
        irreps
    }

    fn described(
        &self,
        group: &PointGroup,
        row: &ComplexIrrep,
        pair: bool,
        parity: Option<Parity>,
    ) -> (SortKey, DoubleIrrep) {
        let constituents = if pair { 2 } else { 1 };
        let characters: Vec<f64> = row.characters.iter().map(|c| c.re * constituents as f64).collect();
        let dimension = row.dimension * constituents;
        let kramers = match row.indicator {
            0 => Kramers::Conjugates,
            1 => Kramers::Twice,
            _ => Kramers::Itself,
        };
        let holds = |twice_j: &u16| {
            let states = self.spin_characters(*twice_j, parity.unwrap_or(Parity::Even));
            character_table::mean(self, &[&states, &characters]) > 0.5
        };
        // A group with an axis of order n has all its double-valued irreps in J < n.
        let limit = u16::try_from(2 * group.order()).unwrap_or(u16::MAX);
        let twice_j = (1..=limit).step_by(2).find(holds).unwrap_or(limit);
        let half = self.spin_characters(1, parity.unwrap_or(Parity::Even));
        let linked = group.irreps().iter().filter(|irrep| irrep.dimension == 1).any(|irrep| {
            let single: Vec<f64> = self.classes.iter().map(|class| irrep.characters[class.single]).collect();
            character_table::mean(self, &[&half, &single, &characters]) > 0.5
        });
        let rank = match twice_j {
            1 => 0,
            _ if linked && !group.is_continuous() => 1,
            _ => 2,
        };
        // Complex conjugates in a pair count with half their dimension each, levels with the whole.
        let level = dimension * if kramers == Kramers::Twice { 2 } else { 1 };
        let name =
            DoubleName::Spinor { dimension: u8::try_from(dimension).unwrap_or(u8::MAX), twice_j, parity, gamma: None };
        ((rank, level, twice_j), DoubleIrrep { name, dimension, constituents, characters, kramers: Some(kramers) })
    }

    fn of_atom(group: &PointGroup) -> Self {
        let mut classes = Vec::new();
        for (single, class) in group.classes().iter().enumerate() {
            let (angle, proper) = group.angle(single);
            for (sign, shift) in [("", 0.0), ("R", std::f64::consts::PI)] {
                let half_angle = angle / 2.0 + shift;
                let symbol = format!("{sign}{}", class.symbol);
                classes.push(DoubleClass { symbol, size: 0, weight: class.weight / 2.0, half_angle, proper, single });
            }
        }
        let mut double = Self {
            name: GroupName::K,
            elements: Vec::new(),
            class_of: Vec::new(),
            multiplication: None,
            classes,
            irreps: Vec::new(),
            n_single: 0,
        };
        for parity in [Parity::Even, Parity::Odd] {
            for twice_j in (1..=ATOMIC_TWICE_J).step_by(2) {
                let characters = double.spin_characters(twice_j, parity);
                let dimension = usize::from(twice_j) + 1;
                let name = DoubleName::Level { twice_j, parity };
                let kramers = Some(Kramers::Itself);
                double.irreps.push(DoubleIrrep { name, dimension, constituents: 1, characters, kramers });
            }
        }
        double
    }

    /// Its name, that of the point group.
    #[must_use]
    pub fn name(&self) -> GroupName {
        self.name
    }

    /// The classes, those of E and R first.
    #[must_use]
    pub fn classes(&self) -> &[DoubleClass] {
        &self.classes
    }

    /// The classes that a printed table shows: those over the printed classes of the point group, in their order.
    #[must_use]
    pub fn printed_classes(&self, group: &PointGroup) -> Vec<usize> {
        let over = |single: usize| (0..self.classes.len()).filter(move |&at| self.classes[at].single == single);
        group.printed_classes().into_iter().flat_map(over).collect()
    }

    /// Single-valued irreps with the indices that they have in the point group, then the double-valued ones.
    #[must_use]
    pub fn irreps(&self) -> &[DoubleIrrep] {
        &self.irreps
    }

    /// Number of single-valued irreps.
    #[must_use]
    pub fn n_single(&self) -> usize {
        self.n_single
    }

    /// Twice the highest J (atoms) or Ω (linear molecules) kept; none for finite groups, which keep all.
    #[must_use]
    pub fn highest_twice_j(&self) -> Option<u16> {
        match self.name {
            GroupName::K => Some(ATOMIC_TWICE_J),
            GroupName::Cinfv | GroupName::Dinfh => Some(LINEAR_TWICE_OMEGA),
            _ => None,
        }
    }

    /// Characters, one per class, of the 2J + 1 states of one J (whole or half) and parity.
    ///
    /// Parity matters only to operations with inversion; spins are even.
    #[must_use]
    pub fn spin_characters(&self, twice_j: u16, parity: Parity) -> Vec<f64> {
        let sign = |class: &DoubleClass| if class.proper || parity == Parity::Even { 1.0 } else { -1.0 };
        self.classes.iter().map(|class| sign(class) * spin_character(twice_j, class.half_angle)).collect()
    }

    /// How often each irrep occurs in a representation of one real character per class.
    ///
    /// # Errors
    /// As [`PointGroup::decompose`].
    pub fn decompose(&self, characters: &[f64]) -> Result<Decomposition, GroupError> {
        character_table::decompose(self, characters)
    }

    /// The irreps in a ⊗ b. Two members of conjugate pairs multiply as pairs, four products in all.
    ///
    /// # Errors
    /// As [`PointGroup::product`].
    pub fn product(&self, a: usize, b: usize) -> Result<Decomposition, GroupError> {
        character_table::product(self, a, b)
    }

    /// The irreps in the symmetric square of the level that irrep `a` makes.
    ///
    /// # Errors
    /// As [`PointGroup::product`].
    pub fn symmetric_square(&self, a: usize) -> Result<Decomposition, GroupError> {
        character_table::square(self, a, self.irreps[a].copies_in_level(), 1.0)
    }

    /// The irreps in the antisymmetric square of the level that irrep `a` makes (both copies of one that needs two).
    ///
    /// # Errors
    /// As [`PointGroup::product`].
    pub fn antisymmetric_square(&self, a: usize) -> Result<Decomposition, GroupError> {
        character_table::square(self, a, self.irreps[a].copies_in_level(), -1.0)
    }

    /// How often the totally symmetric irrep occurs in a product of representations.
    #[must_use]
    pub fn mean(&self, factors: &[&[f64]]) -> f64 {
        character_table::mean(self, factors)
    }

    /// What irrep `a` becomes in the double group `onto` of a subgroup.
    ///
    /// # Errors
    /// [`GroupError::NotWhole`] or [`GroupError::ClassCount`] when `subgroup` is not one of this group, or this is the group of an atom.
    pub fn subduce(&self, subgroup: &Subgroup, onto: &Self, a: usize) -> Result<Decomposition, GroupError> {
        let axes = Lift::of(&subgroup.axes);
        let back = Lift { turn: axes.turn.conjugate(), inverted: axes.inverted };
        let mut characters = vec![f64::NAN; onto.classes.len()];
        for (lift, &class) in onto.elements.iter().zip(&onto.class_of) {
            let here = back.times(lift).times(&axes);
            if let Some(element) = self.elements.iter().position(|element| element.same(&here)) {
                characters[class] = self.irreps[a].characters[self.class_of[element]];
            }
        }
        onto.decompose(&characters)
    }
}

/// Order of double-valued irreps: spin 1/2, its products with one-dimensional irreps, others; dimension of a level; 2J.
type SortKey = (u8, usize, u16);

/// A class with its members, and one of the classes that products alone tell apart.
struct Entry {
    class: DoubleClass,
    members: Vec<usize>,
    original: usize,
}

/// Classes in the order of the point group's, each before its product with R.
///
/// `original` are those of the product table; classes that the point group joins (planes of linear molecules) are joined here too.
fn entries(group: &PointGroup, elements: &[Lift], original: &[Vec<usize>]) -> Vec<Entry> {
    let order = group.order();
    let class_of = class_of(elements.len(), original);
    let mut entries = Vec::with_capacity(original.len());
    for (single, class) in group.classes().iter().enumerate() {
        let first = class.members.first().copied().unwrap_or(0);
        let (plain, barred) = (class_of[first], class_of[first + order]);
        let stem = class.symbol.trim_start_matches(|c: char| c.is_ascii_digit());
        let stem = stem.strip_prefix("inf").unwrap_or(stem);
        let count = &class.symbol[..class.symbol.len() - stem.len()];
        let turned = if stem == "E" { "R".to_owned() } else { format!("{count}R{stem}") };
        let mut enter = |at: usize, symbol: String, members: Vec<usize>| {
            let lift = elements[original[at][0]];
            let class = DoubleClass {
                symbol,
                size: members.len(),
                weight: members.len() as f64 / elements.len() as f64,
                half_angle: lift.half_angle(),
                proper: !lift.inverted,
                single,
            };
            entries.push(Entry { class, members, original: at });
        };
        if plain == barred {
            let members = class.members.iter().flat_map(|&member| [member, member + order]).collect();
            enter(plain, format!("{}+{turned}", class.symbol), members);
        } else {
            enter(plain, class.symbol.clone(), original[plain].clone());
            enter(barred, turned, original[barred].clone());
        }
    }
    entries
}

impl CharacterTable for DoubleGroup {
    fn title(&self) -> String {
        format!("the double group of {}", self.name)
    }

    fn n_classes(&self) -> usize {
        self.classes.len()
    }

    fn weight(&self, class: usize) -> f64 {
        self.classes[class].weight
    }

    fn n_irreps(&self) -> usize {
        self.irreps.len()
    }

    fn irrep_name(&self, irrep: usize) -> String {
        self.irreps[irrep].name.to_string()
    }

    fn row(&self, irrep: usize) -> Row<'_> {
        let DoubleIrrep { dimension, constituents, ref characters, .. } = self.irreps[irrep];
        Row { dimension, constituents, characters }
    }

    fn character_of_power(&self, irrep: usize, class: usize, k: usize) -> f64 {
        let of = &self.irreps[irrep];
        let (twice_j, parity) = match of.name {
            DoubleName::Level { twice_j, parity } => (twice_j, parity),
            DoubleName::Single(IrrepName::Atomic { l, parity }) => (2 * u16::from(l), parity),
            _ => {
                let Some(multiplication) = &self.multiplication else { return f64::NAN };
                let member = self.class_of.iter().position(|at| *at == class).unwrap_or(0);
                let power = (0..k).fold(0, |power, _| multiplication.product(member, power));
                return of.characters[self.class_of[power]];
            }
        };
        let sign = if self.classes[class].proper || parity == Parity::Even || k.is_multiple_of(2) { 1.0 } else { -1.0 };
        sign * spin_character(twice_j, self.classes[class].half_angle * k as f64)
    }

    fn reach(&self, irrep: usize) -> Option<(u32, u32)> {
        let twice = match self.irreps[irrep].name {
            DoubleName::Level { twice_j, .. } => twice_j,
            DoubleName::Spinor { twice_j, .. } if self.name.is_continuous() => twice_j,
            DoubleName::Single(IrrepName::Atomic { l, .. }) => 2 * u16::from(l),
            DoubleName::Single(IrrepName::Linear { m, .. }) => 2 * u16::from(m),
            _ => return None,
        };
        Some((u32::from(twice), u32::from(self.highest_twice_j()?)))
    }
}
