//! The largest subgroup that a density keeps.
//!
//! Not here: how much of a density each operation keeps (`audit::density`), where the subgroup's axes lie
//! (`labelling::descent`).

use crate::group::{GroupError, GroupName, PointGroup};
use crate::labelling::descent::subgroup_name;

/// Operations that a density keeps.
#[derive(Debug, Clone, PartialEq)]
pub struct Kept {
    /// The subgroup.
    pub name: GroupName,
    /// Elements of the group, a subgroup.
    pub members: Vec<usize>,
    /// The other elements.
    pub lost: Vec<usize>,
    /// Electrons that the worst of the kept operations carries out of place, at least.
    pub carried_kept: f64,
    /// The same of the worst of all operations.
    pub carried_worst: f64,
}

impl Kept {
    /// The largest subgroup whose operations all carry no more than `limit` electrons out of place.
    ///
    /// `carried` holds one number an element. Operations near the limit need not close, so a subgroup is built up from
    /// the operations that carry least.
    ///
    /// # Errors
    /// [`GroupError`] when the operations kept are no point group.
    pub fn of(group: &PointGroup, carried: &[f64], limit: f64) -> Result<Self, GroupError> {
        let worst = |elements: &[usize]| elements.iter().map(|&element| carried[element]).fold(0.0, f64::max);
        let all: Vec<usize> = (0..carried.len()).collect();
        let carried_worst = worst(&all);
        if carried_worst <= limit {
            let name = group.name();
            return Ok(Self { name, members: all, lost: Vec::new(), carried_kept: carried_worst, carried_worst });
        }
        let mut order: Vec<usize> = (1..carried.len()).filter(|&element| carried[element] <= limit).collect();
        order.sort_by(|&a, &b| carried[a].total_cmp(&carried[b]).then(a.cmp(&b)));
        let mut inside = vec![false; carried.len()];
        if let Some(identity) = inside.first_mut() {
            *identity = true;
        }
        for element in order {
            if inside[element] {
                continue;
            }
            let larger = joined(group, &inside, element);
            if (0..carried.len()).all(|at| !larger[at] || at == 0 || carried[at] <= limit) {
                inside = larger;
            }
        }
        let members: Vec<usize> = (0..carried.len()).filter(|&element| inside[element]).collect();
        Ok(Self {
            name: subgroup_name(group, &members)?,
            lost: (0..carried.len()).filter(|&element| !inside[element]).collect(),
            carried_kept: worst(&members[1..]),
            carried_worst,
            members,
        })
    }

    /// Whether every operation is kept.
    #[must_use]
    pub fn is_whole(&self) -> bool {
        self.lost.is_empty()
    }
}

/// The subgroup that a subgroup and one more element generate.
fn joined(group: &PointGroup, inside: &[bool], element: usize) -> Vec<bool> {
    let mut larger = inside.to_vec();
    larger[element] = true;
    let generators: Vec<usize> = (0..larger.len()).filter(|&at| larger[at]).collect();
    let mut reached = generators.clone();
    let mut next = 0;
    while let Some(&left) = reached.get(next) {
        for &right in &generators {
            let product = group.multiply(left, right);
            if !larger[product] {
                larger[product] = true;
                reached.push(product);
            }
        }
        next += 1;
    }
    larger
}
