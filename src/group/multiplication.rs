//! An abstract finite group: the product table, inverses, classes, powers.
//!
//! Made from any elements with a product and an equality, so that matrices and quaternions (double groups) share it.

/// The product table of a finite group of n elements, identity first.
#[derive(Debug, Clone, PartialEq, Eq)]
pub struct Multiplication {
    order: usize,
    /// Row a, column b: a·b.
    table: Vec<u32>,
    inverses: Vec<u32>,
}

impl Multiplication {
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
}
