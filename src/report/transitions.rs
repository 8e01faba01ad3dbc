//! Transitions between sets of orbitals as data: rules, numbers beside them, and what opens the forbidden ones.
//!
//! Here: the `transitions` part of the document. Not here: printing (`report::transitions_text`).

use super::build::set_label;
use super::rule::{self, AXES, ROTATIONS};
use crate::group::PointGroup;
use crate::labelling::Labelled;
use crate::labelling::configuration::open_shells;
use crate::labelling::frontier::frontier;
use crate::model::{ANGSTROM_PER_BOHR, Atom, Molecule, Spin};
use crate::modes::{self, Kind, ModeThresholds, Motion, assignment};
use crate::selection::agreement::{self, Cause, Finding, Operator};
use crate::selection::rules::QUADRATIC;
use crate::selection::{Allowed, Operators, Pair, Strengths, strengths};
use crate::states::jahn_teller::{self, JahnTeller};
use crate::states::{self, Certainty, Configuration, Term};
use schemars::JsonSchema;
use serde::Serialize;

/// One pair of sets.
#[derive(Debug, Clone, Serialize, JsonSchema)]
pub struct TransitionEntry {
    /// Label of the set an electron leaves; `set 12` where it has no irrep.
    pub from: String,
    /// Label of the set it enters.
    pub to: String,
    /// Number of the first set, from 1 over both spins.
    pub from_set: usize,
    /// Number of the second.
    pub to_set: usize,
    /// `alpha` (also restricted) or `beta`.
    pub spin: Spin,
    /// Difference of orbital energies: no band energy.
    pub energy_hartree: Option<f64>,
    /// Irreps of the product of the two, one entry an occurrence; empty where the rule is not known.
    pub product: Vec<String>,
    /// Rule and number for x, y, z.
    pub electric_dipole: ElectricDipole,
    /// Rule and number for Rx, Ry, Rz.
    pub magnetic_dipole: Magnetic,
    /// Rule and number for the traceless products of two coordinates.
    pub electric_quadrupole: Magnetic,
    /// Rule for the products of two coordinates.
    pub two_photon: TwoPhoton,
    /// `g-u`, `u-g` (allowed), `g-g`, `u-u` (forbidden); null without a centre of inversion.
    pub laporte: Option<String>,
    /// States of the excited configuration; null where the ground configuration is not established.
    pub states: Option<StatesEntry>,
    /// Vibrations that open the forbidden states of the product, first order.
    pub vibronic: Vec<VibronicEntry>,
    /// Triplets of a closed shell and what they meet through spin–orbit coupling.
    #[serde(skip_serializing_if = "Vec::is_empty")]
    pub triplets: Vec<TripletEntry>,
    /// Has the largest oscillator strength of those listed.
    pub strongest: bool,
    /// Where rule and number disagree, or the number deserves a word.
    pub remarks: Vec<String>,
}

/// Electric dipole: `strength_au` is Σ|⟨i|r|j⟩|² over partners, bohr².
#[derive(Debug, Clone, Serialize, JsonSchema)]
pub struct ElectricDipole {
    /// By the product; null where a set has no irrep.
    pub allowed: Option<bool>,
    /// Axes of the report's frame.
    #[schemars(inner(regex(pattern = "^[xyz]$")))]
    pub polarisation: Vec<&'static str>,
    /// Length form, summed over axes.
    pub strength_au: f64,
    /// Length form along x, y, z.
    pub strength_by_axis_au: [f64; 3],
    /// One-electron estimate from the length form and orbital energies; null without a positive difference.
    pub oscillator_strength: Option<f64>,
    /// Velocity form, Σ|⟨i|∇|j⟩|².
    pub velocity_strength_au: f64,
    /// The estimate from the velocity form.
    pub oscillator_strength_velocity: Option<f64>,
}

/// Magnetic dipole, Σ|⟨i|r×∇|j⟩|² about the centre of the group, or quadrupole, Σ over nine traceless components, bohr⁴.
#[derive(Debug, Clone, Serialize, JsonSchema)]
pub struct Magnetic {
    /// By the product; null where a set has no irrep.
    pub allowed: Option<bool>,
    /// Which components.
    pub components: Vec<&'static str>,
    /// Summed over components.
    pub strength_au: f64,
}

/// Two photons.
#[derive(Debug, Clone, Serialize, JsonSchema)]
pub struct TwoPhoton {
    /// By the product; null where a set has no irrep.
    pub allowed: Option<bool>,
    /// Which components.
    pub components: Vec<&'static str>,
}

/// States of the configuration reached, from those of the file's own configuration.
#[derive(Debug, Clone, Serialize, JsonSchema)]
pub struct StatesEntry {
    /// `closed shell`, or the open shells that the ground term comes from: `1t2g^3`.
    pub ground_from: String,
    /// Ground term by Hund's rules, `4A2g`; several where the rules leave them.
    pub ground: Vec<String>,
    /// Whether the rules leave one.
    pub ground_decided: bool,
    /// Terms of the excited configuration, highest spin first.
    pub excited: Vec<ExcitedEntry>,
}

/// Terms of one kind of the excited configuration.
#[derive(Debug, Clone, Serialize, JsonSchema)]
pub struct ExcitedEntry {
    /// `4T2g`.
    pub term: String,
    /// 2S + 1.
    pub multiplicity: u16,
    /// Orbital irrep.
    pub irrep: String,
    /// How many there are.
    pub count: usize,
    /// Same spin as the ground term.
    pub spin_allowed: bool,
    /// Axes along which the ground term reaches it with spin kept; empty when forbidden.
    #[schemars(inner(regex(pattern = "^[xyz]$")))]
    pub polarisation: Vec<&'static str>,
}

/// A vibration that opens a state.
#[derive(Debug, Clone, Serialize, JsonSchema)]
pub struct VibronicEntry {
    /// State of the product it opens.
    pub state: String,
    /// Irrep of the vibration.
    pub irrep: String,
    /// Axes it gives.
    #[schemars(inner(regex(pattern = "^[xyz]$")))]
    pub polarisation: Vec<&'static str>,
    /// Vibrations of that irrep, from the nuclei.
    pub modes_in_molecule: usize,
    /// The file's modes of that irrep.
    #[serde(skip_serializing_if = "Vec::is_empty")]
    pub modes: Vec<ModeReference>,
}

/// A mode of the file.
#[derive(Debug, Clone, PartialEq, Serialize, JsonSchema)]
pub struct ModeReference {
    /// From 1 in file order.
    pub mode: usize,
    /// cm⁻¹, negative when imaginary.
    pub wavenumber_per_cm: Option<f64>,
}

/// One triplet and its sublevels.
#[derive(Debug, Clone, Serialize, JsonSchema)]
pub struct TripletEntry {
    /// Orbital irrep.
    pub irrep: String,
    /// Its three times degenerate spin parts, by irrep.
    pub sublevels: Vec<SublevelEntry>,
}

/// One sublevel irrep.
#[derive(Debug, Clone, Serialize, JsonSchema)]
pub struct SublevelEntry {
    /// Irrep, which is that of the singlets it mixes with.
    pub irrep: String,
    /// Axes along which it gains intensity; empty when those singlets are dark.
    #[schemars(inner(regex(pattern = "^[xyz]$")))]
    pub polarisation: Vec<&'static str>,
    /// `ground` and transitions of this list whose singlets have that irrep.
    pub meets: Vec<String>,
}

/// A degenerate level and the vibrations that split it.
#[derive(Debug, Clone, Serialize, JsonSchema)]
pub struct JahnTellerEntry {
    /// Ground term, or label of the set.
    pub label: String,
    /// What is meant: the file's own configuration, or one electron less or more.
    pub configuration: String,
    /// Irreps of active vibrations that the molecule has.
    pub vibrations: Vec<ActiveVibration>,
    /// Linear molecules have no active vibration in first order.
    pub second_order_only: bool,
}

/// A Jahn–Teller-active vibration.
#[derive(Debug, Clone, Serialize, JsonSchema)]
pub struct ActiveVibration {
    /// Irrep.
    pub irrep: String,
    /// How many the molecule has.
    pub modes_in_molecule: usize,
    /// The file's modes of that irrep.
    #[serde(skip_serializing_if = "Vec::is_empty")]
    pub modes: Vec<ModeReference>,
}

/// Irrep, running number and electrons of an open shell.
type Shell = (usize, Option<u32>, u32);

/// The file's own configuration.
struct Ground {
    shells: Vec<Shell>,
    text: String,
    terms: Vec<Term>,
    decided: bool,
}

/// What transitions are built from.
pub struct Context<'a> {
    /// The molecule, coefficients canonical.
    pub molecule: &'a Molecule,
    /// Its labels.
    pub labelled: &'a Labelled,
    /// Operators of its group.
    pub operators: Operators,
    /// Its vibrations by irrep; None where the nuclei could not be decomposed.
    pub motion: Option<Motion>,
    /// (irrep, mode) of every vibration of the file that has an irrep.
    pub modes: Vec<(usize, ModeReference)>,
}

/// The file's own configuration, in [`JahnTellerEntry`].
pub const OWN: &str = "this configuration";

/// What every reader of the table must know.
pub const CAUTIONS: [&str; 3] = [
    "a label is not an intensity: symmetry says which integrals vanish, not how large the others are",
    "orbital gaps are not band energies: states of one configuration split and mix with those of others",
    "f (length form r, velocity form ∇) is a one-electron estimate with orbital energies, singlet from a closed shell; \
     rotational and quadrupole strengths refer to the centre of the group",
];

/// The file's vibrations by irrep, where its displacements belong to the geometry of the orbitals.
fn file_modes(molecule: &Molecule, labelled: &Labelled) -> Vec<(usize, ModeReference)> {
    const SAME_PLACE_BOHR: f64 = 0.02;
    let Some(vibrations) = &molecule.vibrations else { return Vec::new() };
    let atoms = assignment::atoms_of_modes(&molecule.atoms, vibrations);
    let in_place = |(a, b): (&Atom, &Atom)| (a.position - b.position).norm() < SAME_PLACE_BOHR;
    if atoms.len() != molecule.atoms.len() || !atoms.iter().zip(&molecule.atoms).all(in_place) {
        return Vec::new();
    }
    let assigned = modes::assign(&atoms, vibrations, &labelled.symmetry, &ModeThresholds::STANDARD);
    let of_mode = |(at, label): (usize, &assignment::ModeLabel)| {
        let irrep = label.irrep.filter(|_| label.kind == Kind::Vibration)?;
        Some((irrep, ModeReference { mode: at + 1, wavenumber_per_cm: vibrations.modes[at].wavenumber }))
    };
    assigned.modes.iter().enumerate().filter_map(of_mode).collect()
}

impl<'a> Context<'a> {
    /// Works out operators and vibrations of the molecule.
    #[must_use]
    pub fn new(molecule: &'a Molecule, labelled: &'a Labelled) -> Self {
        let operators = Operators::new(&labelled.symmetry.group);
        let motion = modes::motion(&molecule.atoms, &labelled.symmetry).ok();
        Self { molecule, labelled, operators, motion, modes: file_modes(molecule, labelled) }
    }
}

impl Context<'_> {
    fn group(&self) -> &PointGroup {
        &self.labelled.symmetry.group
    }

    fn name(&self, irrep: usize) -> String {
        self.group().irreps()[irrep].name.to_string()
    }

    /// Number, from 1 over both spins, of a set.
    fn set_number(&self, spin_idx: usize, set: usize) -> usize {
        self.labelled.spins[..spin_idx].iter().map(|spin| spin.sets.len()).sum::<usize>() + set + 1
    }

    fn label(&self, spin_idx: usize, set: usize) -> String {
        set_label(self.group(), &self.labelled.spins[spin_idx].sets[set])
            .unwrap_or_else(|| format!("set {}", self.set_number(spin_idx, set)))
    }

    fn n_modes(&self, irrep: usize) -> usize {
        self.motion.as_ref().map_or(0, |motion| motion.n_vibrations(irrep))
    }

    fn modes_of(&self, irrep: usize) -> Vec<ModeReference> {
        self.modes.iter().filter(|(of, _)| *of == irrep).map(|(_, mode)| mode.clone()).collect()
    }

    /// The entries of these pairs, in the order given.
    #[must_use]
    pub fn entries(&self, pairs: &[Pair]) -> Vec<TransitionEntry> {
        let ground = self.ground();
        let strengths = strengths(self.molecule, self.labelled, pairs);
        let mut entries: Vec<TransitionEntry> = pairs
            .iter()
            .zip(&strengths)
            .map(|(&pair, strengths)| self.entry(pair, strengths, ground.as_ref()))
            .collect();
        let strength = |entry: &TransitionEntry| entry.electric_dipole.oscillator_strength.unwrap_or(0.0);
        let strongest = (0..entries.len())
            .filter(|&at| strength(&entries[at]) > 1e-6)
            .max_by(|&a, &b| strength(&entries[a]).total_cmp(&strength(&entries[b])).then(b.cmp(&a)));
        if let Some(at) = strongest {
            entries[at].strongest = true;
        }
        if ground.is_some_and(|ground| ground.shells.is_empty()) {
            self.add_triplets(&mut entries);
        }
        entries
    }

    fn entry(&self, pair: Pair, strengths: &Strengths, ground: Option<&Ground>) -> TransitionEntry {
        let group = self.group();
        let sets = &self.labelled.spins[pair.spin_idx].sets;
        let (from, to) = (&sets[pair.from], &sets[pair.to]);
        let allowed: Option<Allowed> =
            from.irrep.zip(to.irrep).and_then(|(a, b)| self.operators.between(group, a, b).ok());
        let which = |of: fn(&Allowed) -> &Vec<usize>, names: &[&'static str]| -> (Option<bool>, Vec<&'static str>) {
            let indices = allowed.as_ref().map(of);
            let listed = indices.into_iter().flatten().map(|&at| names[at]).collect();
            (indices.map(|indices| !indices.is_empty()), listed)
        };
        let (dipole, polarisation) = which(|rule| &rule.electric_dipole, &AXES);
        let (magnetic, rotations) = which(|rule| &rule.magnetic_dipole, &ROTATIONS);
        let (quadrupole, quadratic) = which(|rule| &rule.quadrupole, &QUADRATIC);
        let (two_photon, two_photon_components) = which(|rule| &rule.two_photon, &QUADRATIC);
        let remarks = match &allowed {
            Some(rule) => {
                let found = agreement::findings(self.labelled, from, to, rule, strengths);
                found.iter().map(|finding| remark(finding, &group.name().to_string())).collect()
            }
            None => vec!["no rule: a set has no irrep, or the product leaves the irreps kept".to_owned()],
        };
        TransitionEntry {
            from: self.label(pair.spin_idx, pair.from),
            to: self.label(pair.spin_idx, pair.to),
            from_set: self.set_number(pair.spin_idx, pair.from),
            to_set: self.set_number(pair.spin_idx, pair.to),
            spin: from.spin,
            energy_hartree: strengths.energy,
            product: allowed.as_ref().map(|rule| rule::names(group, &rule.product)).unwrap_or_default(),
            electric_dipole: ElectricDipole {
                allowed: dipole,
                polarisation,
                strength_au: tidy(strengths.length.iter().sum()),
                strength_by_axis_au: strengths.length.map(tidy),
                oscillator_strength: strengths.oscillator_length().map(tidy),
                velocity_strength_au: tidy(strengths.velocity.iter().sum()),
                oscillator_strength_velocity: strengths.oscillator_velocity().map(tidy),
            },
            magnetic_dipole: Magnetic {
                allowed: magnetic,
                components: rotations,
                strength_au: tidy(strengths.magnetic.iter().sum()),
            },
            electric_quadrupole: Magnetic {
                allowed: quadrupole,
                components: quadratic,
                strength_au: tidy(strengths.quadrupole_total()),
            },
            two_photon: TwoPhoton { allowed: two_photon, components: two_photon_components },
            laporte: allowed.as_ref().and_then(|rule| rule.parity_changes).zip(from.irrep.zip(to.irrep)).map(
                |(_, (a, b))| {
                    let letter = |irrep| if self.operators.is_even(irrep) { "g" } else { "u" };
                    format!("{}-{}", letter(a), letter(b))
                },
            ),
            states: ground.and_then(|ground| self.states(ground, pair)),
            vibronic: allowed.as_ref().map(|rule| self.vibronic(rule)).unwrap_or_default(),
            triplets: Vec::new(),
            strongest: false,
            remarks,
        }
    }

    /// The file's open shells and the terms that Hund's rules leave; None where they are no configuration of whole sets.
    fn ground(&self) -> Option<Ground> {
        let shells = open_shells(self.group(), &self.labelled.spins).ok()?;
        let shells: Vec<Shell> =
            shells.iter().map(|shell| (shell.irrep, Some(shell.number), shell.electrons)).collect();
        let configuration = Configuration::new(self.group(), &shells).ok()?;
        let terms = states::terms(self.group(), &configuration).ok()?;
        let found = states::ground(self.group(), &configuration, &terms);
        Some(Ground {
            shells,
            text: configuration.to_string(),
            decided: found.certainty != Certainty::Undecided,
            terms: found.terms.iter().map(|&at| terms[at]).collect(),
        })
    }

    /// The shells after one electron has gone from set to set.
    fn excited_shells(&self, ground: &Ground, pair: Pair) -> Option<Vec<Shell>> {
        let sets = &self.labelled.spins[pair.spin_idx].sets;
        let mut shells = ground.shells.clone();
        for (set, gains) in [(&sets[pair.from], false), (&sets[pair.to], true)] {
            let irrep = set.irrep?;
            let number = u32::try_from(set.number).ok()?;
            let known = shells.iter().position(|shell| (shell.0, shell.1) == (irrep, Some(number)));
            let at = known.unwrap_or_else(|| {
                // Not open: empty, or full with both spins.
                let places = u32::try_from(2 * self.group().irreps()[irrep].dimension).unwrap_or(u32::MAX);
                shells.push((irrep, Some(number), if gains { 0 } else { places }));
                shells.len() - 1
            });
            let electrons = &mut shells[at].2;
            *electrons = if gains { *electrons + 1 } else { electrons.checked_sub(1)? };
        }
        Some(shells)
    }

    fn states(&self, ground: &Ground, pair: Pair) -> Option<StatesEntry> {
        let group = self.group();
        let configuration = Configuration::new(group, &self.excited_shells(ground, pair)?).ok()?;
        let terms = states::terms(group, &configuration).ok()?;
        let reached = |term: &Term| {
            let mut axes: Vec<usize> = ground
                .terms
                .iter()
                .filter(|from| from.multiplicity == term.multiplicity)
                .filter_map(|from| self.operators.between(group, from.irrep, term.irrep).ok())
                .flat_map(|rule| rule.electric_dipole)
                .collect();
            axes.sort_unstable();
            axes.dedup();
            rule::axes(&axes)
        };
        Some(StatesEntry {
            ground_from: if ground.shells.is_empty() { "closed shell".to_owned() } else { ground.text.clone() },
            ground: ground.terms.iter().map(|term| term.symbol(group)).collect(),
            ground_decided: ground.decided,
            excited: terms
                .iter()
                .map(|term| ExcitedEntry {
                    term: term.symbol(group),
                    multiplicity: term.multiplicity,
                    irrep: self.name(term.irrep),
                    count: term.count,
                    spin_allowed: ground.terms.iter().any(|from| from.multiplicity == term.multiplicity),
                    polarisation: reached(term),
                })
                .collect(),
        })
    }

    fn vibronic(&self, allowed: &Allowed) -> Vec<VibronicEntry> {
        let forbidden = allowed.product.iter().filter(|(irrep, _)| self.operators.polarisation(*irrep).is_empty());
        forbidden
            .flat_map(|&(state, _)| {
                self.operators.helpers(self.group(), state).into_iter().map(move |helper| (state, helper))
            })
            .filter(|(_, helper)| self.motion.is_none() || self.n_modes(helper.irrep) > 0)
            .map(|(state, helper)| VibronicEntry {
                state: self.name(state),
                irrep: self.name(helper.irrep),
                polarisation: rule::axes(&helper.polarisation),
                modes_in_molecule: self.n_modes(helper.irrep),
                modes: self.modes_of(helper.irrep),
            })
            .collect()
    }

    /// For each triplet the singlets of the same list, and the ground state, that its sublevels meet.
    fn add_triplets(&self, entries: &mut [TransitionEntry]) {
        let group = self.group();
        let symmetric = self.name(group.totally_symmetric());
        let singlets: Vec<(String, Vec<String>)> =
            entries.iter().map(|entry| (format!("{} → {}", entry.from, entry.to), entry.product.clone())).collect();
        for entry in entries {
            let mut irreps: Vec<usize> =
                (0..group.irreps().len()).filter(|&irrep| entry.product.contains(&self.name(irrep))).collect();
            irreps.dedup();
            for irrep in irreps {
                let Ok(sublevels) = self.operators.triplet_sublevels(group, irrep) else { continue };
                let sublevels = sublevels.into_iter().map(|(sublevel, _)| {
                    let name = self.name(sublevel);
                    let with_it = singlets.iter().filter(|(_, product)| product.contains(&name));
                    let ground = (name == symmetric).then(|| "ground".to_owned());
                    SublevelEntry {
                        polarisation: rule::axes(&self.operators.polarisation(sublevel)),
                        meets: ground.into_iter().chain(with_it.map(|(label, _)| label.clone())).collect(),
                        irrep: name,
                    }
                });
                entry.triplets.push(TripletEntry { irrep: self.name(irrep), sublevels: sublevels.collect() });
            }
        }
    }
}

/// Without digits that only rounding decides.
fn tidy(value: f64) -> f64 {
    (value * 1e12).round() / 1e12
}

/// A finding in words.
fn remark(finding: &Finding, group: &str) -> String {
    match finding {
        Finding::Forbidden { operator, component, moment, causes } => {
            let (what, name) = match operator {
                Operator::ElectricDipole => ("electric dipole", AXES[*component]),
                Operator::MagneticDipole => ("magnetic dipole", ROTATIONS[*component]),
                Operator::Quadrupole => ("quadrupole", QUADRATIC[*component]),
            };
            let causes: Vec<String> = causes.iter().map(|cause| explained(cause, group)).collect();
            format!("{what} along {name} forbidden in {group}, yet {moment:.1e} au: {}", causes.join("; "))
        }
        Finding::WeakThoughAllowed(strength) => {
            format!("allowed, yet the strength is {strength:.1e} au: symmetry permits it, the orbitals do not use it")
        }
        Finding::FormsDiffer(length, velocity) => format!(
            "length form gives f = {length:.0e}, velocity form {velocity:.0e}: this basis and these gaps do not settle the strength"
        ),
        Finding::Incomplete => "a set lacks partners: the strength is not that of the whole level".to_owned(),
    }
}

fn explained(cause: &Cause, group: &str) -> String {
    match cause {
        Cause::Impure(purity) => format!("the orbitals are impure (purity {purity:.4})"),
        Cause::Distorted(bohr) => format!("the nuclei lie {:.4} Å off {group}", bohr * ANGSTROM_PER_BOHR),
        Cause::Rounded(residual) => format!("the orbitals are orthonormal to {residual:.0e} only"),
        Cause::Unknown => format!("{group} is too high for this wavefunction; try a subgroup"),
    }
}

impl Context<'_> {
    /// What splits a degenerate ground term, or, of a closed shell, the frontier sets after loss or gain of an electron.
    #[must_use]
    pub fn jahn_teller(&self) -> Vec<JahnTellerEntry> {
        let group = self.group();
        let Some(ground) = self.ground() else { return Vec::new() };
        if !ground.shells.is_empty() {
            let of_term = |term: &Term| self.splitting(term.symbol(group), OWN, term.irrep);
            return ground.terms.iter().filter_map(of_term).collect();
        }
        let capacity = if self.labelled.spins.len() > 1 { 1.0 } else { 2.0 };
        let Some(spin) = self.labelled.spins.first() else { return Vec::new() };
        let found = frontier(&spin.sets, capacity);
        let ends = [(found.homo, "one electron less"), (found.lumo, "one electron more")];
        let of_end = |(set, configuration): (Option<usize>, &str)| {
            let set = set?;
            self.splitting(self.label(0, set), configuration, spin.sets[set].irrep?)
        };
        ends.into_iter().filter_map(of_end).collect()
    }

    /// The vibrations that split a level of this irrep; None where it is not degenerate.
    fn splitting(&self, label: String, configuration: &str, irrep: usize) -> Option<JahnTellerEntry> {
        let (active, linear) = match jahn_teller::of_irrep(self.group(), irrep).ok()? {
            JahnTeller::Active(active) => (active, false),
            JahnTeller::Linear => (Vec::new(), true),
            JahnTeller::Stable | JahnTeller::Atom => return None,
        };
        let vibrations = active
            .into_iter()
            .filter(|&(irrep, _)| self.n_modes(irrep) > 0)
            .map(|(irrep, _)| ActiveVibration {
                irrep: self.name(irrep),
                modes_in_molecule: self.n_modes(irrep),
                modes: self.modes_of(irrep),
            })
            .collect();
        Some(JahnTellerEntry { label, configuration: configuration.to_owned(), vibrations, second_order_only: linear })
    }
}
