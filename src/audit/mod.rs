//! Does a wavefunction keep the symmetry of its nuclei? Densities, spin, orbitals, and a verdict.
//!
//! Reading order: `density` (what each operation keeps), `kept` (the subgroup that is left), `axis` (axes that the nuclei
//! leave free), `spin` (⟨S²⟩, corresponding orbitals), `mixing` (orbitals of several irreps), `verdict`.
//! Knows no selection rules and prints nothing.

pub mod axis;
pub mod density;
pub mod kept;
pub mod mixing;
pub mod spin;
pub mod verdict;

use crate::group::{GroupName, Site, Symmetry};
use crate::labelling::descent::Descent;
use crate::labelling::{LabelError, Labelled, Thresholds, sites};
use crate::model::{Molecule, Spin};
use density::{Densities, Electrons, Products};
use kept::Kept;
use mixing::Mixed;
use spin::SpinReport;
use thiserror::Error;
use verdict::OpenShell;

/// Why there is no verdict.
#[derive(Debug, Error)]
pub enum AuditError {
    /// No occupations, or none above zero.
    #[error("the file says of no orbital how many electrons it holds (Occup=): a verdict needs the densities")]
    NoOccupations,
    /// An occupation that no orbital can have.
    #[error("{spin:?} orbital {orbital} holds {occupation} electrons: expected 0 to {limit}")]
    Occupation {
        /// From 1.
        orbital: usize,
        /// Its spin.
        spin: Spin,
        /// As the file gives it.
        occupation: f64,
        /// The most it can hold.
        limit: f64,
    },
    /// The subgroup that is left cannot be placed.
    #[error(transparent)]
    Label(#[from] LabelError),
}

/// Every limit that decides a verdict, told back in the report.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Limits {
    /// An operation is kept when it carries no more electrons than this out of place.
    pub carried: f64,
    /// An orbital belongs to one irrep when that holds at least this weight.
    pub pure: f64,
    /// Corresponding orbitals that overlap less are a magnetic pair.
    pub magnetic: f64,
    /// Orbitals within this energy are at one energy, hartree.
    pub degeneracy_hartree: f64,
}

impl Limits {
    /// The limits when nothing else is asked for.
    pub const STANDARD: Self = Self { carried: 0.01, pure: 0.99, magnetic: 0.9, degeneracy_hartree: 1e-3 };
}

/// What each density keeps.
#[derive(Debug, Clone, PartialEq)]
pub struct KeptGroups {
    /// Both spins together.
    pub total: Kept,
    /// Alpha.
    pub alpha: Kept,
    /// Beta.
    pub beta: Kept,
    /// Alpha less beta.
    pub spin: Kept,
}

/// All that an audit finds.
#[derive(Debug, Clone)]
pub struct Audit {
    /// Electrons by spin.
    pub electrons: Electrons,
    /// What every operation keeps.
    pub densities: Densities,
    /// The subgroups that are left.
    pub kept: KeptGroups,
    /// The alpha and the beta density both keep these operations; some lost ones exchange the two.
    pub swaps: Vec<usize>,
    /// The subgroup that all densities keep, placed on the nuclei; None when it is the whole group.
    pub descent: Option<Descent>,
    /// ⟨S²⟩ and corresponding orbitals.
    pub spin: SpinReport,
    /// Orbitals of several irreps, worst first.
    pub mixed: Vec<Mixed>,
    /// Orbitals of degenerate irreps that are no standard partner.
    pub turned_partners: usize,
    /// Of an atom whose density is not round: electrons that the worst rotation carries out of place, at least. All else
    /// is then told in D∞h about the density's own axis.
    pub lost_sphere: Option<f64>,
    /// Degenerate shells that are partly filled.
    pub open_shells: Vec<OpenShell>,
    /// Limits used.
    pub limits: Limits,
}

impl Audit {
    /// Whether no density has lost an operation.
    #[must_use]
    pub fn is_invariant(&self) -> bool {
        let densities = [&self.kept.total, &self.kept.alpha, &self.kept.beta, &self.kept.spin];
        self.lost_sphere.is_none() && densities.into_iter().all(Kept::is_whole)
    }

    /// The group that a density which has lost nothing has.
    #[must_use]
    pub fn whole_group(&self, labelled: &Labelled) -> GroupName {
        if self.lost_sphere.is_some() { GroupName::K } else { labelled.symmetry.group.name() }
    }

    /// The smallest of the subgroups: what both spins keep.
    #[must_use]
    pub fn kept_by_all(&self) -> &Kept {
        let all = [&self.kept.alpha, &self.kept.beta, &self.kept.spin, &self.kept.total];
        all.into_iter().min_by_key(|kept| kept.members.len()).unwrap_or(&self.kept.total)
    }
}

/// Judges a labelled wavefunction.
///
/// The group is that of the labels; where it leaves an axis free (linear molecules, atoms) and the density does not, the
/// axes are turned to the density first, so `labelled` is handed back.
///
/// # Errors
/// [`AuditError`] without usable occupations.
pub fn audit(
    molecule: &Molecule,
    labelled: Labelled,
    thresholds: &Thresholds,
    limits: &Limits,
) -> Result<(Labelled, Audit), AuditError> {
    let electrons = Electrons::of(molecule, &labelled)?;
    // Of atoms that land nowhere the weights say nothing of shells.
    let open_shells = if labelled.derivation.turned.is_empty() {
        verdict::open_shells(&labelled, &electrons.alpha, &electrons.beta)
    } else {
        Vec::new()
    };
    let (labelled, lost_sphere) = round_or_not(molecule, labelled, &electrons, thresholds, limits)?;
    let labelled = axis::adapted(molecule, labelled, &electrons, thresholds, limits)?;
    let densities = density::densities(&electrons, &labelled);
    let kept = kept_groups(&labelled.symmetry, &densities, limits)?;
    let identity = densities.products[0];
    let swaps = kept
        .alpha
        .lost
        .iter()
        .copied()
        .filter(|&element| {
            let here = densities.products[element];
            electrons_carried(here.ab, (identity.aa * identity.bb).sqrt()) <= limits.carried
                && (identity.aa - identity.bb).abs() <= limits.carried
        })
        .collect();
    let mut audit = Audit {
        spin: SpinReport::of(&electrons, &labelled.settled.basis, molecule.atoms.len(), limits.magnetic),
        mixed: mixing::mixed(molecule, &labelled, limits),
        turned_partners: mixing::turned_partners(&labelled),
        open_shells,
        lost_sphere,
        densities,
        kept,
        swaps,
        descent: None,
        limits: *limits,
        electrons,
    };
    let all = audit.kept_by_all();
    if !all.is_whole() {
        let places: Vec<Site> = sites::sites(molecule);
        audit.descent = Some(Descent::to(&labelled.symmetry, &all.members, &places, &sites::bonds(molecule))?);
    }
    Ok((labelled, audit))
}

/// An atom whose density some rotation changes is told in D∞h, with how much the worst one changes it.
fn round_or_not(
    molecule: &Molecule,
    labelled: Labelled,
    electrons: &Electrons,
    thresholds: &Thresholds,
    limits: &Limits,
) -> Result<(Labelled, Option<f64>), AuditError> {
    if labelled.symmetry.group.name() != GroupName::K {
        return Ok((labelled, None));
    }
    let products = density::densities(electrons, &labelled).products;
    let worst = |value: fn(&Products) -> f64| {
        products.iter().map(|here| electrons_carried(value(here), value(&products[0]))).fold(0.0, f64::max)
    };
    let lost = worst(|here| here.aa).max(worst(|here| here.bb));
    if lost <= limits.carried {
        return Ok((labelled, None));
    }
    Ok((axis::about_an_axis(molecule, labelled, electrons, thresholds)?, Some(lost)))
}

/// A loss of the scalar product as electrons.
fn electrons_carried(here: f64, whole: f64) -> f64 {
    (whole - here).max(0.0)
}

/// For each density the electrons that every operation carries out of place, at least, and the subgroup that is left.
///
/// With A = D − RDR⁻¹ the electrons carried are half the sum of |eigenvalues| of A, which is at least the sum of their
/// squares over twice the largest possible one: 1 for one spin, 2 for both together and for their difference.
fn kept_groups(symmetry: &Symmetry, densities: &Densities, limits: &Limits) -> Result<KeptGroups, LabelError> {
    let identity = densities.products[0];
    let kept = |value: fn(&Products) -> f64, share: f64| {
        let carried: Vec<f64> =
            densities.products.iter().map(|here| share * electrons_carried(value(here), value(&identity))).collect();
        Kept::of(&symmetry.group, &carried, limits.carried)
    };
    Ok(KeptGroups {
        total: kept(|here| here.total(), 0.5)?,
        alpha: kept(|here| here.aa, 1.0)?,
        beta: kept(|here| here.bb, 1.0)?,
        spin: kept(|here| here.spin(), 0.5)?,
    })
}
