//! An abstract finite group: the product table, inverses, powers, classes.
//!
//! Made from any elements with a product and an equality, so that matrices (point groups) and quaternions (double groups) share it.
//! Not here: what an element does in space.

use super::error::GroupError;

/// The product table of a finite group whose identity has index 0.
///
/// Invariant: rows and columns are permutations, row 0 is the identical one.
#[derive(Debug, Clone, PartialEq, Eq)]
pub struct Multiplication {
    order: usize,
    /// Entry a·order + b: the index of a·b.
    table: Vec<u32>,
    inverses: Vec<u32>,
    steps: Vec<Step>,
}

/// How one element is reached: `element` = `generator` · `previous`, with `previous` reached earlier (or the identity).
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub struct Step {
    /// The element reached.
    pub element: usize,
    /// The left factor, one of a few.
    pub generator: usize,
    /// The right factor.
    pub previous: usize,
}

/// All products of `generators`, starting with `identity`, in an order that depends on nothing but the arguments.
///
/// # Errors
/// [`GroupError::TooManyElements`] when there are more than `limit`.
pub fn closure<T: Clone>(
    identity: T,
    generators: &[T],
    product: impl Fn(&T, &T) -> T,
    same: impl Fn(&T, &T) -> bool,
    limit: usize,
) -> Result<Vec<T>, GroupError> {
    let mut elements = vec![identity];
    let mut next = 0;
    while let Some(element) = elements.get(next).cloned() {
        for generator in generators {
            let found = product(generator, &element);
            if !elements.iter().any(|known| same(known, &found)) {
                if elements.len() >= limit {
                    return Err(GroupError::TooManyElements { limit });
                }
                elements.push(found);
            }
        }
        next += 1;
    }
    Ok(elements)
}

impl Multiplication {
    /// The table of all `elements` of a group, identity first.
    ///
    /// A few elements are found that generate all others; only their products are formed and looked up, the rest follows.
    ///
    /// # Errors
    /// [`GroupError::NotClosed`] when a product is missing.
    pub fn of<T>(
        elements: &[T],
        product: impl Fn(&T, &T) -> T,
        same: impl Fn(&T, &T) -> bool,
    ) -> Result<Self, GroupError> {
        let order = elements.len();
        let mut rows: Vec<Option<Vec<u32>>> = vec![None; order];
        let mut generators: Vec<usize> = Vec::new();
        let mut steps = Vec::with_capacity(order);
        let identical = (0_u32..).take(order).collect();
        if let Some(first) = rows.first_mut() {
            *first = Some(identical);
        }
        while let Some(generator) = rows.iter().position(Option::is_none) {
            generators.push(generator);
            rows[generator] = Some(row(elements, generator, &product, &same)?);
            steps.push(Step { element: generator, generator, previous: 0 });
            let mut reached: Vec<usize> = (0..order).filter(|a| rows[*a].is_some()).collect();
            let mut next = 0;
            while let Some(&previous) = reached.get(next) {
                for &generator in &generators {
                    let (Some(left), Some(right)) = (&rows[generator], &rows[previous]) else { continue };
                    let element = left[previous] as usize;
                    if rows[element].is_none() {
                        rows[element] = Some(right.iter().map(|&b| left[b as usize]).collect());
                        steps.push(Step { element, generator, previous });
                        reached.push(element);
                    }
                }
                next += 1;
            }
        }
        let table: Vec<u32> = rows.into_iter().flatten().flatten().collect();
        let mut inverses = vec![0_u32; order];
        for (at, _) in table.iter().enumerate().filter(|(_, product)| **product == 0) {
            inverses[at / order] = u32::try_from(at % order).unwrap_or(u32::MAX);
        }
        Ok(Self { order, table, inverses, steps })
    }

    /// Number of elements.
    #[must_use]
    pub fn order(&self) -> usize {
        self.order
    }

    /// Index of a·b.
    #[must_use]
    pub fn product(&self, a: usize, b: usize) -> usize {
        self.table[a * self.order + b] as usize
    }

    /// Index of the inverse.
    #[must_use]
    pub fn inverse(&self, a: usize) -> usize {
        self.inverses[a] as usize
    }

    /// How every element but the identity is reached from the generators, each after what it is made of.
    #[must_use]
    pub fn steps(&self) -> &[Step] {
        &self.steps
    }

    /// Elements that generate the group.
    pub fn generators(&self) -> impl Iterator<Item = usize> {
        self.steps.iter().filter(|step| step.previous == 0 && step.element == step.generator).map(|step| step.generator)
    }

    /// The powers a⁰ = identity, a, a², … short of the identity again.
    #[must_use]
    pub fn powers(&self, a: usize) -> Vec<usize> {
        let mut powers = vec![0];
        let mut power = a;
        while power != 0 {
            powers.push(power);
            power = self.product(a, power);
        }
        powers
    }

    /// Index of x·a·x⁻¹.
    #[must_use]
    pub fn conjugate(&self, a: usize, by: usize) -> usize {
        self.product(self.product(by, a), self.inverse(by))
    }

    /// Classes of conjugate elements, each ascending, in the order of their first elements.
    #[must_use]
    pub fn classes(&self) -> Vec<Vec<usize>> {
        let mut seen = vec![false; self.order];
        let mut classes = Vec::new();
        for a in 0..self.order {
            if seen[a] {
                continue;
            }
            let mut class: Vec<usize> = (0..self.order).map(|by| self.conjugate(a, by)).collect();
            class.sort_unstable();
            class.dedup();
            for &member in &class {
                seen[member] = true;
            }
            classes.push(class);
        }
        classes
    }
}

/// Indices of the products of one element with all, which must be a permutation.
fn row<T>(
    elements: &[T],
    a: usize,
    product: impl Fn(&T, &T) -> T,
    same: impl Fn(&T, &T) -> bool,
) -> Result<Vec<u32>, GroupError> {
    let order = elements.len();
    let mut taken = vec![false; order];
    (0..order)
        .map(|b| {
            let found = product(&elements[a], &elements[b]);
            let at = elements.iter().position(|known| same(known, &found));
            let at = at.filter(|at| !std::mem::replace(&mut taken[*at], true));
            at.and_then(|at| u32::try_from(at).ok()).ok_or(GroupError::NotClosed { order, a, b })
        })
        .collect()
}

#[cfg(test)]
mod tests {
    use super::*;

    /// Permutations of three things.
    fn s3() -> Vec<[usize; 3]> {
        closure([0, 1, 2], &[[1, 2, 0], [1, 0, 2]], |a, b| b.map(|at| a[at]), |a, b| a == b, 6).unwrap()
    }

    #[test]
    fn permutations_of_three_have_three_classes() {
        let elements = s3();
        let group = Multiplication::of(&elements, |a, b| b.map(|at| a[at]), |a, b| a == b).unwrap();
        for (a, left) in elements.iter().enumerate() {
            assert_eq!(group.product(a, group.inverse(a)), 0);
            for (b, right) in elements.iter().enumerate() {
                assert_eq!(elements[group.product(a, b)], right.map(|at| left[at]));
            }
        }
        let mut sizes: Vec<usize> = group.classes().iter().map(Vec::len).collect();
        sizes.sort_unstable();
        assert_eq!(sizes, [1, 2, 3]);
        assert_eq!(group.steps().len(), 5);
    }

    #[test]
    fn sets_that_are_no_group_are_refused() {
        let mut elements = s3();
        elements.pop();
        assert!(Multiplication::of(&elements, |a, b| b.map(|at| a[at]), |a, b| a == b).is_err());
        assert!(closure(0_u64, &[1], |a, b| a + b, |a, b| a == b, 50).is_err());
    }
}
