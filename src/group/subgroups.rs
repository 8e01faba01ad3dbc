//! Subgroups up to conjugacy, and descent in symmetry.
//!
//! Not here: other settings of one group's axes (`group::settings`).

use super::elements::{LINEAR_AXIS_ORDER, same};
use super::error::GroupError;
use super::identify::{nearest_to_identity, nearness, standard_frames};
use super::multiplication::Multiplication;
use super::point_group::PointGroup;
use super::products::Decomposition;
use super::schoenflies::GroupName;
use nalgebra::{Matrix3, Vector3};
use std::collections::{BTreeMap, BTreeSet};
use std::f64::consts::FRAC_1_SQRT_2;

/// A subgroup in its own standard frame.
#[derive(Debug, Clone)]
pub struct Subgroup {
    /// The subgroup.
    pub group: PointGroup,
    /// For each element of `group` the index of the same operation in the parent.
    pub embedding: Vec<usize>,
    /// Takes coordinates of the parent's frame to those of the subgroup's: rows are the subgroup's axes.
    pub axes: Matrix3<f64>,
    /// In words: where its axes lie in the parent's frame, and which half turns and planes it keeps.
    pub description: String,
}

impl PointGroup {
    /// All subgroups up to conjugacy, largest first, the group itself left out.
    ///
    /// Of conjugate subgroups the one nearest to the parent's axes stands for all. For linear groups those are listed that molecules
    /// meet: the whole axis or axes to order 2. For atoms none, as every point group is one: see [`PointGroup::shell_characters`].
    ///
    /// # Errors
    /// None for groups made by [`PointGroup::standard`].
    pub fn subgroups(&self) -> Result<Vec<Subgroup>, GroupError> {
        let mut known: BTreeMap<GroupName, PointGroup> = BTreeMap::new();
        let mut found = Vec::new();
        if self.name() == GroupName::K {
            return Ok(found);
        }
        for class in subgroups_up_to_conjugacy(&self.multiplication) {
            let members = self.nearest_of(&class)?;
            if members.len() < self.order() && self.is_listed(&members) {
                found.push(self.subgroup_of(&members, &mut known)?);
            }
        }
        found.sort_by_key(|subgroup| std::cmp::Reverse((subgroup.embedding.len(), subgroup.group.name())));
        Ok(found)
    }

    /// What irrep `a` becomes in a subgroup: (irrep of the subgroup, multiplicity).
    ///
    /// # Errors
    /// [`GroupError::NotWhole`] or [`GroupError::NotClosed`] when `subgroup` is not one of this group.
    pub fn subduce(&self, subgroup: &Subgroup, a: usize) -> Result<Decomposition, GroupError> {
        let characters = &self.irreps()[a].characters;
        let restricted = subgroup.group.classes().iter().map(|class| {
            let element = class.members.first().and_then(|&member| subgroup.embedding.get(member)).copied();
            let element = element.and_then(|element| self.elements().get(element));
            element.map_or(f64::NAN, |element| characters[element.class_idx])
        });
        subgroup.group.decompose(&restricted.collect::<Vec<_>>())
    }

    /// The largest abelian subgroup among D2h, C2v, C2h, D2, Cs, C2, Ci, C1: the operations that change no more than signs of x, y, z.
    ///
    /// Its z is the parent's z where its own rules allow, otherwise axes are renamed as the description says.
    /// In icosahedral groups, where half turns lie along y only, it is made of those that commute with the half turn about y.
    ///
    /// # Panics
    /// Never for groups made by [`PointGroup::standard`]: sign changes always form a group.
    #[must_use]
    pub fn abelian_subgroup(&self) -> Subgroup {
        let half_turn_y = Matrix3::from_diagonal(&Vector3::new(-1.0, 1.0, -1.0));
        let icosahedral = matches!(self.name(), GroupName::I | GroupName::Ih | GroupName::K);
        let belongs = |matrix: &Matrix3<f64>| {
            let commutes = same(&(matrix * half_turn_y), &(half_turn_y * matrix));
            same(matrix, &Matrix3::from_diagonal(&matrix.diagonal())) || (icosahedral && commutes)
        };
        let members: Vec<usize> =
            (0..self.order()).filter(|&at| belongs(self.elements()[at].operation.matrix())).collect();
        self.subgroup_of(&members, &mut BTreeMap::new()).expect("sign changes of the axes form a point group")
    }

    /// Of conjugate subgroups the one whose elements, then whose standard axes, agree best with the parent's.
    fn nearest_of(&self, class: &[Bits]) -> Result<Vec<usize>, GroupError> {
        let agreement = |bits: &Bits| self.agreement(bits.members());
        let best = class.iter().map(agreement).max();
        let mut nearest: Option<([i64; 2], Vec<usize>)> = None;
        for bits in class.iter().filter(|bits| Some(agreement(bits)) == best) {
            let members: Vec<usize> = bits.members().collect();
            let near = nearness(&nearest_to_identity(&standard_frames(&self.matrices_of(&members))?.1));
            // Of equally near ones the lowest indices, whatever the order in which they were found.
            if nearest.as_ref().is_none_or(|(other, known)| (near, known) > (*other, &members)) {
                nearest = Some((near, members));
            }
        }
        Ok(nearest.map(|(_, members)| members).unwrap_or_default())
    }

    /// How many directions of z, then of x, the elements keep or reverse, as whole numbers.
    #[expect(clippy::cast_possible_truncation, reason = "sums of at most 256 cosines")]
    fn agreement(&self, members: impl Iterator<Item = usize>) -> [i64; 2] {
        let mut sums = [0.0; 2];
        for member in members {
            let matrix = self.elements()[member].operation.matrix();
            sums[0] += matrix[(2, 2)].abs();
            sums[1] += matrix[(0, 0)].abs();
        }
        sums.map(|sum: f64| (sum * 1e6).round() as i64)
    }

    fn matrices_of(&self, members: &[usize]) -> Vec<Matrix3<f64>> {
        members.iter().map(|&member| *self.elements()[member].operation.matrix()).collect()
    }

    /// Whether a subgroup of the finite stand-in is one that linear molecules have; each kind once.
    fn is_listed(&self, members: &[usize]) -> bool {
        if !self.is_continuous() {
            return true;
        }
        let matrices = || members.iter().map(|&member| self.elements()[member].operation.matrix());
        let turns = matrices().filter(|m| m.determinant() > 0.0 && m[(2, 2)] > 0.5).count();
        // What reflects the xy plane in a line; all lines are alike, so the x axis stands for all.
        let line = |m: &Matrix3<f64>| m[(0, 0)] * m[(1, 1)] < m[(0, 1)] * m[(1, 0)];
        let half_turns = || matrices().filter(|m| line(m) && m[(2, 2)] < 0.0);
        let planes = || matrices().filter(|m| line(m) && m[(2, 2)] > 0.0);
        let is_x = |m: &Matrix3<f64>| (m[(0, 0)] - 1.0).abs() < 1e-6;
        let at_x = if half_turns().next().is_some() {
            half_turns().any(is_x)
        } else {
            planes().next().is_none() || planes().any(is_x)
        };
        let whole_axis = turns == LINEAR_AXIS_ORDER as usize && members.len() == 2 * turns && planes().next().is_some();
        (turns <= 2 && at_x) || whole_axis
    }

    /// The subgroup of these elements; groups already made are taken from `known`.
    fn subgroup_of(
        &self,
        members: &[usize],
        known: &mut BTreeMap<GroupName, PointGroup>,
    ) -> Result<Subgroup, GroupError> {
        let operations = self.matrices_of(members);
        let (name, frames) = standard_frames(&operations)?;
        let name =
            if name == GroupName::Cnv(LINEAR_AXIS_ORDER) && self.is_continuous() { GroupName::Cinfv } else { name };
        let axes = nearest_to_identity(&frames);
        let group = match known.get(&name) {
            Some(group) => group.clone(),
            None => known.entry(name).or_insert(PointGroup::standard(name)?).clone(),
        };
        self.embed(group, members, axes)
    }

    /// The subgroup of these elements with its standard axes where they are wanted.
    ///
    /// `axes` takes coordinates of this group's frame to those of the subgroup's.
    ///
    /// # Errors
    /// [`GroupError::NotClosed`] when the elements are not those of `group` in these axes.
    pub fn embed(&self, group: PointGroup, members: &[usize], axes: Matrix3<f64>) -> Result<Subgroup, GroupError> {
        let operations = self.matrices_of(members);
        let embedding = group.elements().iter().map(|element| {
            let here = axes.transpose() * element.operation.matrix() * axes;
            let at = members.iter().zip(&operations).find(|(_, operation)| same(operation, &here));
            at.map(|(member, _)| *member).ok_or(GroupError::NotClosed { order: members.len(), a: 0, b: 0 })
        });
        let embedding = embedding.collect::<Result<Vec<_>, _>>()?;
        let description = self.describe(&axes, &embedding);
        Ok(Subgroup { group, embedding, axes, description })
    }

    fn describe(&self, axes: &Matrix3<f64>, embedding: &[usize]) -> String {
        let mut kept: Vec<&str> = Vec::new();
        let mut classes: Vec<usize> = embedding.iter().map(|&at| self.elements()[at].class_idx).collect();
        classes.sort_unstable();
        for class in classes {
            let symbol = self.classes()[class].symbol.trim_start_matches(|c: char| c.is_ascii_digit());
            let stem = symbol.strip_prefix("inf").unwrap_or(symbol);
            if (stem == "C2" || stem.starts_with("C2'") || stem.starts_with("C2(") || stem.starts_with("sigma"))
                && !kept.contains(&stem)
            {
                kept.push(stem);
            }
        }
        let axes = axes_in_words(axes);
        if kept.is_empty() { axes } else { format!("{axes}; keeps {}", kept.join(", ")) }
    }
}

/// Where the rows of a rotation point: `same axes`, `turned by 45° about z`, `z along (1, 1, 1), x along (1, -1, 0)`.
fn axes_in_words(axes: &Matrix3<f64>) -> String {
    if same(axes, &Matrix3::identity()) {
        return "same axes".to_owned();
    }
    if axes[(2, 2)] > 1.0 - 1e-9 {
        // Row x is (cos, sin, 0) of the angle turned by.
        let angle = axes[(0, 1)].atan2(axes[(0, 0)]).to_degrees();
        let text = format!("{angle:.2}");
        return format!("axes turned by {}° about z", text.trim_end_matches('0').trim_end_matches('.'));
    }
    let row = |at: usize| direction(&Vector3::new(axes[(at, 0)], axes[(at, 1)], axes[(at, 2)]));
    format!("z along {}, x along {}, y along {}", row(2), row(0), row(1))
}

/// A direction as a coordinate, a triple of small whole numbers, or a triple of decimals.
fn direction(axis: &Vector3<f64>) -> String {
    for (name, unit) in [("x", Vector3::x()), ("y", Vector3::y()), ("z", Vector3::z())] {
        let cosine = axis.dot(&unit);
        if cosine.abs() > 1.0 - 1e-9 {
            return if cosine > 0.0 { name.to_owned() } else { format!("-{name}") };
        }
    }
    let sizes = [1.0, FRAC_1_SQRT_2, 1.0 / 3.0_f64.sqrt(), 1.0 / 6.0_f64.sqrt()];
    let whole =
        sizes.into_iter().map(|size| axis / size).find(|scaled| scaled.iter().all(|c| (c - c.round()).abs() < 1e-6));
    // Adding zero turns −0 into 0.
    if let Some(scaled) = whole.map(|scaled| scaled.map(|c| c.round() + 0.0)) {
        return format!("({}, {}, {})", scaled.x, scaled.y, scaled.z);
    }
    let rounded = axis.map(|c| (c * 1e3).round() / 1e3 + 0.0);
    format!("({:.3}, {:.3}, {:.3})", rounded.x, rounded.y, rounded.z)
}

/// A set of elements, one bit each.
#[derive(Clone, Copy, PartialEq, Eq, PartialOrd, Ord)]
struct Bits([u64; 4]);

impl Bits {
    fn has(&self, at: usize) -> bool {
        self.0[at / 64] >> (at % 64) & 1 == 1
    }

    fn insert(&mut self, at: usize) {
        self.0[at / 64] |= 1 << (at % 64);
    }

    fn of(members: impl IntoIterator<Item = usize>) -> Self {
        let mut bits = Self([0; 4]);
        members.into_iter().for_each(|member| bits.insert(member));
        bits
    }

    fn members(&self) -> impl Iterator<Item = usize> + '_ {
        (0..256).filter(|&at| self.has(at))
    }
}

/// All subgroups by classes of conjugate ones, the trivial and the whole group included.
///
/// Every subgroup is a join of cyclic ones, so joining each subgroup found with each cyclic one finds all.
fn subgroups_up_to_conjugacy(group: &Multiplication) -> Vec<Vec<Bits>> {
    let order = group.order();
    debug_assert!(order <= 256, "an axis order of 64 gives 256 elements");
    let mut cyclic: Vec<(Bits, usize)> = Vec::new();
    for a in 1..order {
        let powers = Bits::of(group.powers(a));
        if !cyclic.iter().any(|(known, _)| *known == powers) {
            cyclic.push((powers, a));
        }
    }
    let trivial = Bits::of([0]);
    let mut seen = BTreeSet::from([trivial]);
    let mut found: Vec<(Vec<Bits>, Vec<usize>)> = vec![(vec![trivial], Vec::new())];
    let mut next = 0;
    while let Some((class, generators)) = found.get(next).cloned() {
        let bits = class[0];
        for &(_, a) in cyclic.iter().filter(|(_, a)| !bits.has(*a)) {
            let generators: Vec<usize> = generators.iter().copied().chain([a]).collect();
            let joined = generated(group, &generators);
            if seen.contains(&joined) {
                continue;
            }
            // The one that `generators` generate comes first.
            let mut class = vec![joined];
            seen.insert(joined);
            for by in 0..order {
                let conjugate = Bits::of(joined.members().map(|member| group.conjugate(member, by)));
                if seen.insert(conjugate) {
                    class.push(conjugate);
                }
            }
            found.push((class, generators));
        }
        next += 1;
    }
    found.into_iter().map(|(class, _)| class).collect()
}

fn generated(group: &Multiplication, generators: &[usize]) -> Bits {
    let mut bits = Bits::of([0]);
    let mut reached = vec![0];
    let mut next = 0;
    while let Some(&element) = reached.get(next) {
        for &generator in generators {
            let product = group.product(generator, element);
            if !bits.has(product) {
                bits.insert(product);
                reached.push(product);
            }
        }
        next += 1;
    }
    bits
}

#[cfg(test)]
mod tests {
    use super::*;

    fn names(name: GroupName) -> Vec<String> {
        let group = PointGroup::standard(name).unwrap();
        group.subgroups().unwrap().iter().map(|subgroup| subgroup.group.name().to_string()).collect()
    }

    #[test]
    fn classes_of_subgroups_are_counted_right() {
        // 98 subgroups of Oh fall into 33 classes, those of Td into 11, of Ih into 22 (common knowledge of crystallography and
        // of the table of marks; from memory). The group itself is not listed.
        for (name, count) in [(GroupName::Oh, 32), (GroupName::Td, 10), (GroupName::Ih, 21), (GroupName::Dnh(6), 31)] {
            assert_eq!(names(name).len(), count, "{name}: {:?}", names(name));
        }
        assert_eq!(names(GroupName::Cnv(2)), ["C2", "Cs", "Cs", "C1"]);
    }

    #[test]
    fn linear_groups_descend_to_what_molecules_have() {
        let names = names(GroupName::Dinfh);
        assert!(names.contains(&"Cinfv".to_owned()) && names.contains(&"D2h".to_owned()), "{names:?}");
        assert!(!names.iter().any(|name| name.contains("13") || name.contains("26")), "{names:?}");
    }

    #[test]
    fn largest_abelian_subgroups() {
        for (parent, child, axes) in [
            ("Oh", "D2h", "same axes"),
            ("Td", "D2", "same axes"),
            ("D6h", "D2h", "same axes"),
            ("D5d", "C2h", "z along x"),
            ("D3h", "C2v", "z along x, x along -z, y along y"),
            ("D3", "C2", "z along"),
            ("C3v", "Cs", "z along"),
            ("Ih", "D2h", "z along"),
            ("Dinfh", "D2h", "same axes"),
            ("Cinfv", "C2v", "same axes"),
            ("C5", "C1", "same axes"),
            ("S6", "Ci", "same axes"),
        ] {
            let group = PointGroup::standard(parent.parse().unwrap()).unwrap();
            let abelian = group.abelian_subgroup();
            assert_eq!(abelian.group.name().to_string(), child, "{parent}");
            assert!(abelian.description.starts_with(axes), "{parent}: {}", abelian.description);
        }
    }
}
