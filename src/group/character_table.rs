//! What follows from characters alone, written once for single and double groups: sums of irreps, products, squares, powers.
//!
//! Not here: where characters come from (`group::characters`), what an irrep is called.

use super::error::GroupError;

/// How far a multiplicity may lie from a whole number.
pub const WHOLE: f64 = 1e-6;

/// Irreps by index, each with how often it occurs; ascending.
pub type Decomposition = Vec<(usize, usize)>;

/// One row of a table of real characters.
pub(super) struct Row<'a> {
    /// Dimension of the real representation.
    pub(super) dimension: usize,
    /// Mean of χ² over the group: 1, or 2 for a pair of complex conjugates.
    pub(super) constituents: usize,
    /// One per class.
    pub(super) characters: &'a [f64],
}

/// Classes and rows, whatever the elements are.
pub(super) trait CharacterTable {
    /// Name of the group.
    fn title(&self) -> String;
    /// Number of classes.
    fn n_classes(&self) -> usize;
    /// What a class counts in a mean over the group.
    fn weight(&self, class: usize) -> f64;
    /// Number of irreps.
    fn n_irreps(&self) -> usize;
    /// Name of an irrep.
    fn irrep_name(&self, irrep: usize) -> String;
    /// Characters of an irrep.
    fn row(&self, irrep: usize) -> Row<'_>;
    /// χ(Rᵏ) for R in a class.
    fn character_of_power(&self, irrep: usize, class: usize, k: usize) -> f64;
    /// For continuous groups: twice the |m| or l of an irrep, and twice the highest one kept.
    fn reach(&self, irrep: usize) -> Option<(u32, u32)>;
}

/// Mean over the group of a product of representations.
pub(super) fn mean(table: &impl CharacterTable, factors: &[&[f64]]) -> f64 {
    (0..table.n_classes())
        .map(|class| factors.iter().map(|characters| characters[class]).product::<f64>() * table.weight(class))
        .sum()
}

/// How often each irrep occurs in a representation.
#[expect(clippy::cast_possible_truncation, clippy::cast_sign_loss, reason = "a small whole number, not negative")]
pub(super) fn decompose(table: &impl CharacterTable, characters: &[f64]) -> Result<Decomposition, GroupError> {
    if characters.len() != table.n_classes() {
        return Err(GroupError::ClassCount { found: characters.len(), expected: table.n_classes() });
    }
    let mut found = Vec::new();
    let mut dimension = 0.0;
    for at in 0..table.n_irreps() {
        let row = table.row(at);
        let multiplicity = mean(table, &[row.characters, characters]) / row.constituents as f64;
        let nearest = multiplicity.round().max(0.0);
        let deviation = (multiplicity - nearest).abs();
        if deviation.is_nan() || deviation > WHOLE {
            let irrep = table.irrep_name(at);
            return Err(GroupError::NotWhole { irrep, multiplicity, deviation, limit: WHOLE });
        }
        if nearest > 0.0 {
            dimension += nearest * row.dimension as f64;
            found.push((at, nearest as usize));
        }
    }
    let expected = characters.first().copied().unwrap_or(0.0);
    if (dimension - expected).abs() > 0.5 {
        return Err(GroupError::Incomplete { group: table.title(), found: dimension, expected });
    }
    Ok(found)
}

/// The irreps in a ⊗ b.
pub(super) fn product(table: &impl CharacterTable, a: usize, b: usize) -> Result<Decomposition, GroupError> {
    check_reach(table, a, b)?;
    let (left, right) = (table.row(a).characters, table.row(b).characters);
    decompose(table, &left.iter().zip(right).map(|(x, y)| x * y).collect::<Vec<_>>())
}

/// The irreps in the symmetric (`sign` 1) or antisymmetric (−1) square of `copies` times an irrep: (χ(R)² ± χ(R²))/2.
pub(super) fn square(
    table: &impl CharacterTable,
    irrep: usize,
    copies: usize,
    sign: f64,
) -> Result<Decomposition, GroupError> {
    check_reach(table, irrep, irrep)?;
    let copies = copies as f64;
    let characters = table.row(irrep).characters.iter().enumerate().map(|(class, character)| {
        let character = copies * character;
        f64::midpoint(character * character, sign * copies * table.character_of_power(irrep, class, 2))
    });
    decompose(table, &characters.collect::<Vec<_>>())
}

/// Characters of the antisymmetrised powers Λ⁰, Λ¹, … Λᵈ of an irrep of dimension d: entry `[j][class]`.
///
/// Elementary symmetric functions of the eigenvalues from their power sums χ(Rᵏ): j eⱼ = Σ (−1)^(k−1) eⱼ₋ₖ χ(Rᵏ).
pub(super) fn exterior_powers(table: &impl CharacterTable, irrep: usize) -> Vec<Vec<f64>> {
    let dimension = table.row(irrep).dimension;
    let mut powers = vec![vec![1.0; table.n_classes()]];
    for j in 1..=dimension {
        let of_class = |class: usize| {
            let terms = (1..=j).map(|k| {
                let sign = if k % 2 == 1 { 1.0 } else { -1.0 };
                sign * powers[j - k][class] * table.character_of_power(irrep, class, k)
            });
            terms.sum::<f64>() / j as f64
        };
        let next = (0..table.n_classes()).map(of_class).collect();
        powers.push(next);
    }
    powers
}

fn check_reach(table: &impl CharacterTable, a: usize, b: usize) -> Result<(), GroupError> {
    let (Some((one, limit)), Some((other, _))) = (table.reach(a), table.reach(b)) else { return Ok(()) };
    let reach = one + other;
    if reach <= limit {
        return Ok(());
    }
    let (a, b) = (table.irrep_name(a), table.irrep_name(b));
    Err(GroupError::BeyondTable { a, b, reach: reach / 2, limit: limit / 2 })
}
