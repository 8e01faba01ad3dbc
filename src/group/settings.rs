//! Other legal choices of axes for one group, and which names of irreps change with them.

use super::elements::{same, turn_z};
use super::point_group::PointGroup;
use super::schoenflies::GroupName;
use nalgebra::Matrix3;

/// Another choice of axes that fits the group as well, and what it does to the names.
#[derive(Debug, Clone, PartialEq)]
pub struct Setting {
    /// Rows are the axes of the other setting: it takes standard coordinates to those of the setting.
    pub rotation: Matrix3<f64>,
    /// In words.
    pub description: String,
    /// (irrep here, what it is called in the other setting), for those that change.
    pub swaps: Vec<(usize, usize)>,
}

impl PointGroup {
    /// The other choices of axes that fit this group and change names of irreps: turns that carry the group onto itself.
    ///
    /// D2 and D2h: the five other orders of the axes. C2v: x and y exchanged. Dn, Dnh and Cnv of even n: the other family of half
    /// turns or planes at x. Other groups have none.
    #[must_use]
    pub fn settings(&self) -> Vec<Setting> {
        let candidates: Vec<(Matrix3<f64>, String)> = match self.name() {
            GroupName::Dn(2) | GroupName::Dnh(2) => orders_of_axes(),
            GroupName::Cnv(2) => vec![(turn_z(1, 4).transpose(), "x and y exchanged".to_owned())],
            GroupName::Dn(n) | GroupName::Dnh(n) if n % 2 == 0 => {
                vec![(
                    turn_z(1, 2 * n).transpose(),
                    "the other half turns, C2'', called C2' and put along x".to_owned(),
                )]
            }
            GroupName::Cnv(n) if n % 2 == 0 => {
                vec![(
                    turn_z(1, 2 * n).transpose(),
                    "the other planes, sigma_d, called sigma_v and put at x".to_owned(),
                )]
            }
            _ => Vec::new(),
        };
        let settings = candidates.into_iter().filter_map(|(rotation, description)| {
            let swaps = self.swaps(&rotation)?;
            Some(Setting { rotation, description, swaps })
        });
        settings.filter(|setting| !setting.swaps.is_empty()).collect()
    }

    /// Which irreps change names when coordinates are turned; `None` when the turn does not carry the group onto itself.
    fn swaps(&self, rotation: &Matrix3<f64>) -> Option<Vec<(usize, usize)>> {
        let seen = self.classes().iter().map(|class| {
            let matrix = self.elements().get(*class.members.first()?)?.operation.matrix();
            let seen = rotation * matrix * rotation.transpose();
            self.elements()
                .iter()
                .find(|element| same(element.operation.matrix(), &seen))
                .map(|element| element.class_idx)
        });
        let seen: Vec<usize> = seen.collect::<Option<_>>()?;
        let mut swaps = Vec::new();
        for (at, irrep) in self.irreps().iter().enumerate() {
            // The name there belongs to the irrep whose character at the operation as seen there is that of the operation here.
            let there = self.irreps().iter().position(|other| {
                seen.iter()
                    .zip(&irrep.characters)
                    .all(|(&class, character)| (other.characters[class] - character).abs() < 1e-9)
            })?;
            if there != at {
                swaps.push((at, there));
            }
        }
        Some(swaps)
    }
}

/// The five other right-handed namings of three axes, signs apart.
fn orders_of_axes() -> Vec<(Matrix3<f64>, String)> {
    let names = ['x', 'y', 'z'];
    [[1, 0, 2], [0, 2, 1], [2, 1, 0], [1, 2, 0], [2, 0, 1]]
        .into_iter()
        .map(|order| {
            let mut rotation = Matrix3::zeros();
            for (row, &column) in order.iter().enumerate() {
                rotation[(row, column)] = 1.0;
            }
            // An exchange of two axes turns one of them round.
            if rotation.determinant() < 0.0 {
                rotation.row_mut(1).neg_mut();
            }
            let [x, y, z] = order.map(|axis| names[axis]);
            (rotation, format!("{x}, {y}, {z} called x, y, z"))
        })
        .collect()
}

#[cfg(test)]
mod tests {
    use super::*;

    fn swaps(name: &str) -> Vec<Vec<(String, String)>> {
        let group = PointGroup::standard(name.parse().unwrap()).unwrap();
        let text = |at: usize| group.irreps()[at].name.to_string();
        group
            .settings()
            .iter()
            .map(|setting| setting.swaps.iter().map(|&(a, b)| (text(a), text(b))).collect())
            .collect()
    }

    #[test]
    fn names_that_depend_on_the_choice_of_axes() {
        let pair = |a: &str, b: &str| (a.to_owned(), b.to_owned());
        assert_eq!(swaps("C2v"), [vec![pair("B1", "B2"), pair("B2", "B1")]]);
        let expected: Vec<_> = ["g", "u"]
            .iter()
            .flat_map(|p| [pair(&format!("B1{p}"), &format!("B2{p}")), pair(&format!("B2{p}"), &format!("B1{p}"))])
            .collect();
        for name in ["D6h", "D4h"] {
            assert_eq!(swaps(name), std::slice::from_ref(&expected));
        }
        assert_eq!(swaps("D2h").len(), 5);
        // The cycle x, y, z → what was y is called x: B2 becomes B3.
        assert!(swaps("D2")[3].contains(&pair("B2", "B3")));
        for name in ["D3h", "D5d", "D2d", "Oh", "Ih", "C3v", "S4", "Dinfh", "C4h"] {
            assert!(swaps(name).is_empty(), "{name}");
        }
    }
}
