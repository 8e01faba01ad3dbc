//! The `audit` part of the document: verdict, numbers behind it, likely origin.
//!
//! Here: names instead of indices, sentences. Not here: how the numbers come about (`crate::audit`), its printed form
//! (`report::audit_text`).

use super::build;
use super::document::{Document, Weight};
use super::placement::highest_l;
use super::unicode::pretty;
use crate::audit::density::Shells;
use crate::audit::kept::Kept;
use crate::audit::spin::Pair;
use crate::audit::verdict::{Degeneracy, OpenShell, Origin, Verdict};
use crate::audit::{Audit, Limits};
use crate::labelling::{Labelled, Thresholds};
use crate::model::{Molecule, Spin, elements};
use schemars::JsonSchema;
use serde::Serialize;
use serde_json::{Map, Value, json};
use std::collections::BTreeMap;

/// The verdict and the numbers behind it.
#[derive(Debug, Clone, Serialize, JsonSchema)]
pub struct AuditEntry {
    /// `intact`, `rotated`, `mixed` or `broken`.
    #[schemars(extend("enum" = ["intact", "rotated", "mixed", "broken"]))]
    pub verdict: &'static str,
    /// The same in one line.
    pub summary: String,
    /// Where it is likely to come from; empty for intact and rotated ones.
    pub origins: Vec<String>,
    /// Largest subgroup of each density.
    pub kept_group: KeptGroupEntry,
    /// Operations that some density has lost.
    pub operations_lost: Vec<String>,
    /// Electrons that the worst operation carries out of place, at least.
    pub electrons_carried_max: f64,
    /// Some operations lost exchange the alpha and the beta density.
    pub swaps_spin: bool,
    /// ⟨S²⟩; null where fractional occupations leave it open.
    pub s_squared: Option<f64>,
    /// S(S + 1) of the spin that the numbers of electrons ask for.
    pub s_squared_ideal: f64,
    /// The difference of the two.
    pub s_squared_contamination: Option<f64>,
    /// Overlaps of corresponding orbitals, largest first.
    pub corresponding_overlaps: Vec<f64>,
    /// Pairs below the limit.
    pub magnetic_pairs: Vec<PairEntry>,
    /// Orbitals of the spin in excess without a partner.
    pub unpaired: Vec<PairEntry>,
    /// What every operation keeps.
    pub retention: Vec<RetentionEntry>,
    /// Orbitals of several irreps, worst first.
    pub mixed_orbitals: Vec<MixedEntry>,
    /// Orbitals of degenerate irreps that are no standard partner.
    pub turned_partners: usize,
    /// The group that all densities keep, and labels in it; null when it is the whole group.
    pub subgroup: Option<SubgroupEntry>,
    /// Limits that decided the verdict.
    pub limits: LimitEntry,
}

/// Largest subgroup of each density.
#[derive(Debug, Clone, Serialize, JsonSchema)]
pub struct KeptGroupEntry {
    /// Both spins.
    pub total_density: String,
    /// Alpha.
    pub alpha_density: String,
    /// Beta.
    pub beta_density: String,
    /// Alpha less beta.
    pub spin_density: String,
}

/// What one operation keeps of each density, 0 to 1; null for densities that are not there.
#[derive(Debug, Clone, Serialize, JsonSchema)]
pub struct RetentionEntry {
    /// Symbol of the operation.
    pub operation: String,
    /// Both spins.
    pub total: f64,
    /// Alpha.
    pub alpha: f64,
    /// Beta.
    pub beta: Option<f64>,
    /// Alpha less beta, −1 when reversed.
    pub spin: Option<f64>,
    /// Beta by alpha turned.
    pub alpha_to_beta: Option<f64>,
}

/// An orbital of several irreps.
#[derive(Debug, Clone, Serialize, JsonSchema)]
pub struct MixedEntry {
    /// From 1 within the spin, file order.
    pub index: usize,
    /// `alpha` or `beta`.
    pub spin: Spin,
    /// As the file gives it.
    pub energy_hartree: Option<f64>,
    /// It holds electrons.
    pub occupied: bool,
    /// Operations keep it among orbitals of its own energy.
    pub at_one_energy: bool,
    /// Every operation carries it onto itself or one other that shares atoms with it.
    pub localised: bool,
    /// Largest first.
    pub weights: Vec<Weight>,
}

/// Corresponding orbitals.
#[derive(Debug, Clone, Serialize, JsonSchema)]
pub struct PairEntry {
    /// Overlap of the two; 0 without a partner.
    pub overlap: f64,
    /// Atoms of the alpha orbital with their shares.
    pub alpha: Vec<AtomShare>,
    /// The same of the beta orbital.
    pub beta: Vec<AtomShare>,
}

/// Share of an orbital on one atom.
#[derive(Debug, Clone, Serialize, JsonSchema)]
pub struct AtomShare {
    /// Element and number, such as `C 3`.
    pub atom: String,
    /// Gross population.
    pub share: f64,
}

/// A subgroup and the labels in it.
#[derive(Debug, Clone, Serialize, JsonSchema)]
pub struct SubgroupEntry {
    /// Its name.
    pub point_group: String,
    /// Where its axes lie in the frame of the group above.
    pub placed: String,
    /// Where its axes lie among the atoms.
    pub axes_convention: String,
    /// Unit vectors x, y, z in the file's coordinates.
    pub axes: [[f64; 3]; 3],
    /// Irrep above → sum of irreps here.
    #[schemars(with = "BTreeMap<String, String>")]
    pub correlation: Map<String, Value>,
    /// Every orbital, alpha first.
    pub orbitals: Vec<SubgroupLabel>,
}

/// One orbital in both groups.
#[derive(Debug, Clone, Serialize, JsonSchema)]
pub struct SubgroupLabel {
    /// From 1 within the spin, file order.
    pub index: usize,
    /// `alpha` or `beta`.
    pub spin: Spin,
    /// Largest irrep of the group above, in brackets of `?` where it is below the purity limit.
    pub parent: String,
    /// Largest irrep of the subgroup.
    pub irrep: String,
    /// Its weight.
    pub purity: f64,
}

/// Limits used.
#[derive(Debug, Clone, Serialize, JsonSchema)]
pub struct LimitEntry {
    /// Electrons that a kept operation may carry out of place.
    pub electrons_carried: f64,
    /// Smallest weight of an orbital that belongs to one irrep.
    pub pure: f64,
    /// Overlap below which corresponding orbitals are a magnetic pair.
    pub magnetic_overlap: f64,
    /// Energies this near are one energy.
    pub degeneracy_hartree: f64,
}

/// Shares of atoms below this are not listed.
const SHARE_FLOOR: f64 = 0.05;
/// Less than this is rounding, whose last digits hang on the processor.
const ROUNDING: f64 = 1e-8;

/// The document of `audit`: that of `label` with the verdict.
#[must_use]
pub fn audit_document(
    file: &str,
    molecule: &Molecule,
    labelled: &Labelled,
    audit: &Audit,
    thresholds: &Thresholds,
) -> Document {
    let mut document = build::label_document(file, molecule, labelled, None, thresholds, build::Wanted::default());
    document.transitions = None;
    document.cautions = cautions(audit);
    document.audit = Some(entry(molecule, labelled, audit));
    document
}

/// Electrons that the worst operation carries out of place in any density.
fn carried_worst(audit: &Audit) -> f64 {
    let kept = &audit.kept;
    let all = [&kept.total, &kept.alpha, &kept.beta, &kept.spin];
    all.iter().map(|kept| kept.carried_worst).fold(audit.lost_sphere.unwrap_or(0.0), f64::max)
}

fn cautions(audit: &Audit) -> Vec<String> {
    let text = match audit.electrons.shells {
        Shells::RestrictedOpen => "one set of orbitals, some with one electron: taken as of parallel spins",
        Shells::Fractional => "fractional occupations: each spin is given half of the density, and ⟨S²⟩ is not known",
        Shells::Closed | Shells::Unrestricted => return Vec::new(),
    };
    vec![text.to_owned()]
}

fn word(verdict: Verdict) -> &'static str {
    match verdict {
        Verdict::Intact => "intact",
        Verdict::Rotated => "rotated",
        Verdict::Mixed => "mixed",
        Verdict::Broken => "broken",
    }
}

fn entry(molecule: &Molecule, labelled: &Labelled, audit: &Audit) -> AuditEntry {
    let group = &labelled.symmetry.group;
    let symbols: Vec<&str> = group.elements().iter().map(|element| element.symbol.as_str()).collect();
    let symbol = |at: usize| symbols.get(at).map_or_else(|| format!("R{at}"), |symbol| (*symbol).to_owned());
    let kept = &audit.kept;
    let all = [&kept.total, &kept.alpha, &kept.beta, &kept.spin];
    let mut lost: Vec<usize> = all.iter().flat_map(|kept| kept.lost.iter().copied()).collect();
    lost.sort_unstable();
    lost.dedup();
    let pairs = |pairs: &[Pair]| pairs.iter().map(|pair| pair_entry(molecule, pair)).collect::<Vec<_>>();
    AuditEntry {
        verdict: word(audit.verdict()),
        summary: summary(labelled, audit),
        origins: audit.origins(labelled).iter().map(|origin| origin_text(labelled, origin)).collect(),
        kept_group: KeptGroupEntry {
            total_density: kept.total.name.to_string(),
            alpha_density: kept.alpha.name.to_string(),
            beta_density: kept.beta.name.to_string(),
            spin_density: kept.spin.name.to_string(),
        },
        operations_lost: lost.into_iter().map(symbol).collect(),
        electrons_carried_max: carried_worst(audit),
        swaps_spin: !audit.swaps.is_empty(),
        s_squared: audit.spin.s_squared,
        s_squared_ideal: audit.spin.ideal,
        s_squared_contamination: audit.spin.contamination(),
        corresponding_overlaps: audit.spin.overlaps.clone(),
        magnetic_pairs: pairs(&audit.spin.magnetic),
        unpaired: pairs(&audit.spin.unpaired),
        retention: audit
            .densities
            .retention
            .iter()
            .enumerate()
            .map(|(at, here)| RetentionEntry {
                operation: symbol(at),
                total: here.total,
                alpha: here.alpha,
                beta: here.beta,
                spin: here.spin,
                alpha_to_beta: here.alpha_to_beta,
            })
            .collect(),
        mixed_orbitals: mixed(molecule, labelled, audit),
        turned_partners: audit.turned_partners,
        subgroup: subgroup(labelled, audit),
        limits: limits(&audit.limits),
    }
}

fn limits(limits: &Limits) -> LimitEntry {
    LimitEntry {
        electrons_carried: limits.carried,
        pure: limits.pure,
        magnetic_overlap: limits.magnetic,
        degeneracy_hartree: limits.degeneracy_hartree,
    }
}

fn pair_entry(molecule: &Molecule, pair: &Pair) -> PairEntry {
    let shares = |shares: &[f64]| {
        let mut listed: Vec<AtomShare> = shares
            .iter()
            .enumerate()
            .filter(|(_, share)| **share >= SHARE_FLOOR)
            .map(|(atom, &share)| AtomShare {
                atom: format!("{} {}", elements::label(&molecule.atoms[atom]), atom + 1),
                share,
            })
            .collect();
        listed.sort_by(|a, b| (b.share * 1e6).round().total_cmp(&(a.share * 1e6).round()));
        listed
    };
    PairEntry { overlap: pair.overlap, alpha: shares(&pair.alpha), beta: shares(&pair.beta) }
}

fn mixed(molecule: &Molecule, labelled: &Labelled, audit: &Audit) -> Vec<MixedEntry> {
    let group = &labelled.symmetry.group;
    let of = |mixed: &crate::audit::mixing::Mixed| {
        let set = &molecule.orbital_sets[mixed.spin_idx];
        let label = &labelled.spins[mixed.spin_idx].orbitals[mixed.orbital];
        let weight = |&(irrep, weight): &(usize, f64)| Weight { irrep: group.irreps()[irrep].name.to_string(), weight };
        MixedEntry {
            index: mixed.orbital + 1,
            spin: set.spin,
            energy_hartree: set.orbitals[mixed.orbital].energy,
            occupied: mixed.occupied,
            at_one_energy: mixed.at_one_energy,
            localised: mixed.localised,
            weights: label.weights.iter().map(weight).collect(),
        }
    };
    audit.mixed.iter().map(of).collect()
}

fn subgroup(labelled: &Labelled, audit: &Audit) -> Option<SubgroupEntry> {
    let descent = audit.descent.as_ref()?;
    let above = &labelled.symmetry.group;
    let below = &descent.subgroup.group;
    let correlation = descent
        .parents_up_to(highest_l(labelled))
        .map(|(at, name)| (name.to_string(), json!(descent.correlation_text(at))))
        .collect();
    let mut orbitals = Vec::new();
    for spin in &labelled.spins {
        let weights = descent.weights(spin.expectations.view());
        for (i, (label, row)) in spin.orbitals.iter().zip(weights.outer_iter()).enumerate() {
            let (irrep, purity) = row
                .iter()
                .copied()
                .enumerate()
                .fold((0, f64::NEG_INFINITY), |best, entry| if entry.1 > best.1 { entry } else { best });
            let largest = label.weights.first().map_or("?".to_owned(), |&(at, _)| above.irreps()[at].name.to_string());
            orbitals.push(SubgroupLabel {
                index: i + 1,
                spin: spin.spin,
                parent: if label.irrep.is_some() { largest } else { format!("?{largest}?") },
                irrep: below.irreps()[irrep].name.to_string(),
                purity,
            });
        }
    }
    let frame = &descent.symmetry.frame;
    Some(SubgroupEntry {
        point_group: below.name().to_string(),
        placed: descent.subgroup.description.clone(),
        axes_convention: frame.convention.clone(),
        axes: std::array::from_fn(|row| std::array::from_fn(|column| frame.axes[(row, column)])),
        correlation,
        orbitals,
    })
}

/// One line: the word, what it means here, the numbers behind it.
fn summary(labelled: &Labelled, audit: &Audit) -> String {
    let group = pretty(&audit.whole_group(labelled).to_string());
    let limits = &audit.limits;
    let worst = carried_worst(audit);
    let invariant = format!(
        "all densities keep {group} (no operation carries more than {:.1e} electrons out of place)",
        worst.max(ROUNDING)
    );
    match audit.verdict() {
        Verdict::Intact => format!("intact: {invariant} and every orbital belongs to one irrep"),
        Verdict::Rotated => {
            let at_one = audit.mixed.len();
            let mut parts = Vec::new();
            if audit.turned_partners > 0 {
                parts.push(format!(
                    "{} orbitals of degenerate irreps are turned among their partners",
                    audit.turned_partners
                ));
            }
            if at_one > 0 {
                parts.push(format!("{at_one} mix irreps within {:.0e} hartree", limits.degeneracy_hartree));
            }
            format!("rotated: {invariant}; {}, which loses nothing", parts.join(" and "))
        }
        Verdict::Mixed => {
            let harmful: Vec<_> = audit.mixed.iter().filter(|mixed| !mixed.is_harmless()).collect();
            let filled = harmful.iter().filter(|mixed| mixed.occupied).count();
            let how = if harmful.iter().all(|mixed| mixed.localised) {
                "are localised"
            } else {
                "mix irreps at different energies"
            };
            format!("mixed: {invariant}, but {} orbitals ({filled} with electrons) {how}", harmful.len())
        }
        Verdict::Broken => {
            let kept = &audit.kept;
            let named = [("total", &kept.total), ("alpha", &kept.alpha), ("beta", &kept.beta), ("spin", &kept.spin)];
            let part = |(name, kept): &(&str, &Kept)| {
                if *name == "spin" && audit.densities.retention[0].spin.is_none() {
                    "no spin density".to_owned()
                } else if kept.is_whole() && audit.lost_sphere.is_none() {
                    format!("{name} all")
                } else {
                    format!("{name} {}", pretty(&kept.name.to_string()))
                }
            };
            let parts: Vec<String> = named.iter().map(part).collect();
            let swaps =
                if audit.swaps.is_empty() { "" } else { "; operations lost by one spin exchange alpha and beta" };
            format!(
                "broken: of {group} the densities keep: {}; the worst operation carries at least {worst:.3} electrons out of place, limit {}{swaps}",
                parts.join(", "),
                limits.carried
            )
        }
    }
}

fn origin_text(labelled: &Labelled, origin: &Origin) -> String {
    let group = &labelled.symmetry.group;
    match origin {
        Origin::Geometry { nuclei } => {
            let off = if labelled.derivation.turned.is_empty() {
                let off = labelled.symmetry.deviation.max * crate::model::ANGSTROM_PER_BOHR;
                format!("up to {off:.4} Å from {}", pretty(&group.name().to_string()))
            } else {
                format!("{} atoms land on no like atom under {}", labelled.derivation.turned.len(), pretty(&group.name().to_string()))
            };
            format!("geometry: the nuclei themselves are exactly only {}; {off}", pretty(&nuclei.to_string()))
        }
        Origin::OpenShell(shell) => open_shell_text(shell),
        Origin::SpinPolarisation => {
            "spin: the total density is whole; only the alpha and beta densities break the symmetry".to_owned()
        }
        Origin::Density => "density: no degenerate shell is open and the nuclei have the group; the electrons settle in a \
             solution of lower symmetry (a localised hole or charge, or a state that the method should mix)"
            .to_owned(),
        Origin::Orbitals => {
            "orbitals only: a unitary mixing among orbitals of equal occupation (localised orbitals, for one); the state is \
             not touched"
                .to_owned()
        }
    }
}

fn open_shell_text(shell: &OpenShell) -> String {
    let name = pretty(&shell.name.symbol());
    let held = format!(
        "open degenerate shell {name}^{}: {name} orbitals hold {:.2} alpha and {:.2} beta electrons, sets of {}",
        shell.electrons, shell.alpha, shell.beta, shell.dimension
    );
    let follows = match shell.degeneracy {
        Degeneracy::JahnTeller => "one determinant fills single real components: a Jahn–Teller situation",
        Degeneracy::RennerTeller => {
            "one determinant fills a single real component: a degenerate state of a linear molecule (Renner–Teller)"
        }
        Degeneracy::Atom => "one determinant shows one component of a term",
        Degeneracy::Undecided => {
            "one real component for each spin: a determinant that mixes the terms of the configuration, of which some \
             are degenerate (Jahn–Teller) and some not"
        }
    };
    format!("{held}; {follows}")
}
