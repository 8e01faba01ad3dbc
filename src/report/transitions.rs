//! Transitions between sets of orbitals as data: rules, numbers beside them, and what opens the forbidden ones.
//!
//! Here: the `transitions` part of the document. Not here: printing (`report::transitions_text`).

use super::build::set_label;
use super::rule::{self, AXES, ROTATIONS};
use crate::group::PointGroup;
use crate::labelling::Labelled;
use crate::model::{ANGSTROM_PER_BOHR, Molecule, Spin};
use crate::modes::{self, Motion};
use crate::selection::agreement::{self, Cause, Finding, Operator};
use crate::selection::rules::QUADRATIC;
use crate::selection::states::{self, Ground};
use crate::selection::{Allowed, Operators, Pair, Strengths, strengths};
use serde::Serialize;

/// One pair of sets.
#[derive(Debug, Clone, Serialize)]
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
#[derive(Debug, Clone, Serialize)]
pub struct ElectricDipole {
    /// By the product; null where a set has no irrep.
    pub allowed: Option<bool>,
    /// Axes of the report's frame.
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
#[derive(Debug, Clone, Serialize)]
pub struct Magnetic {
    /// By the product; null where a set has no irrep.
    pub allowed: Option<bool>,
    /// Which components.
    pub components: Vec<&'static str>,
    /// Summed over components.
    pub strength_au: f64,
}

/// Two photons.
#[derive(Debug, Clone, Serialize)]
pub struct TwoPhoton {
    /// By the product; null where a set has no irrep.
    pub allowed: Option<bool>,
    /// Which components.
    pub components: Vec<&'static str>,
}

/// States of the configuration reached.
#[derive(Debug, Clone, Serialize)]
pub struct StatesEntry {
    /// `closed shell`, or the open shells that the ground state comes from.
    pub ground_from: String,
    /// Orbital irreps that the ground configuration gives.
    pub ground: Vec<String>,
    /// Orbital irreps that the excited configuration gives.
    pub excited: Vec<ExcitedEntry>,
    /// Multiplicities where they are plain: 1 and 3 from a closed shell of restricted orbitals, else empty.
    pub multiplicities: Vec<u8>,
}

/// One irrep of the excited configuration.
#[derive(Debug, Clone, Serialize)]
pub struct ExcitedEntry {
    /// Orbital irrep.
    pub irrep: String,
    /// How many terms have it.
    pub terms: usize,
    /// Axes along which some ground state reaches it with spin kept; empty when forbidden.
    pub polarisation: Vec<&'static str>,
}

/// A vibration that opens a state.
#[derive(Debug, Clone, Serialize)]
pub struct VibronicEntry {
    /// State of the product it opens.
    pub state: String,
    /// Irrep of the vibration.
    pub irrep: String,
    /// Axes it gives.
    pub polarisation: Vec<&'static str>,
    /// Vibrations of that irrep, from the nuclei.
    pub modes_in_molecule: usize,
    /// The file's modes of that irrep.
    #[serde(skip_serializing_if = "Vec::is_empty")]
    pub modes: Vec<ModeReference>,
}

/// A mode of the file.
#[derive(Debug, Clone, PartialEq, Serialize)]
pub struct ModeReference {
    /// From 1 in file order.
    pub mode: usize,
    /// cm⁻¹, negative when imaginary.
    pub wavenumber_per_cm: Option<f64>,
}

/// One triplet and its sublevels.
#[derive(Debug, Clone, Serialize)]
pub struct TripletEntry {
    /// Orbital irrep.
    pub irrep: String,
    /// Its three times degenerate spin parts, by irrep.
    pub sublevels: Vec<SublevelEntry>,
}

/// One sublevel irrep.
#[derive(Debug, Clone, Serialize)]
pub struct SublevelEntry {
    /// Irrep, which is that of the singlets it mixes with.
    pub irrep: String,
    /// Axes along which it gains intensity; empty when those singlets are dark.
    pub polarisation: Vec<&'static str>,
    /// `ground` and transitions of this list whose singlets have that irrep.
    pub meets: Vec<String>,
}

/// A degenerate level and the vibrations that split it.
#[derive(Debug, Clone, Serialize)]
pub struct JahnTellerEntry {
    /// Label of the set.
    pub label: String,
    /// What is meant: the file's own configuration, or one electron less or more.
    pub configuration: String,
    /// Irreps of active vibrations that the molecule has.
    pub vibrations: Vec<ActiveVibration>,
    /// Linear molecules have no active vibration in first order.
    pub second_order_only: bool,
}

/// A Jahn–Teller-active vibration.
#[derive(Debug, Clone, Serialize)]
pub struct ActiveVibration {
    /// Irrep.
    pub irrep: String,
    /// How many the molecule has.
    pub modes_in_molecule: usize,
    /// The file's modes of that irrep.
    #[serde(skip_serializing_if = "Vec::is_empty")]
    pub modes: Vec<ModeReference>,
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

/// What every reader of the table must know.
pub const CAUTIONS: [&str; 3] = [
    "a label is not an intensity: symmetry says which integrals vanish, not how large the others are",
    "orbital gaps are not band energies: states of one configuration split and mix with those of others",
    "f (length form r, velocity form ∇) is a one-electron estimate with orbital energies, singlet from a closed shell; \
     rotational and quadrupole strengths refer to the centre of the group",
];

impl<'a> Context<'a> {
    /// Works out operators and vibrations of the molecule.
    #[must_use]
    pub fn new(molecule: &'a Molecule, labelled: &'a Labelled) -> Self {
        let operators = Operators::new(&labelled.symmetry.group);
        let motion = modes::motion(&molecule.atoms, &labelled.symmetry).ok();
        Self { molecule, labelled, operators, motion, modes: Vec::new() }
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
        let ground = states::ground(self.group(), &self.labelled.spins);
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
        if ground.is_some_and(|ground| ground.closed) && self.labelled.spins.len() == 1 {
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
                strength_au: strengths.length.iter().sum(),
                strength_by_axis_au: strengths.length,
                oscillator_strength: strengths.oscillator_length(),
                velocity_strength_au: strengths.velocity.iter().sum(),
                oscillator_strength_velocity: strengths.oscillator_velocity(),
            },
            magnetic_dipole: Magnetic {
                allowed: magnetic,
                components: rotations,
                strength_au: strengths.magnetic.iter().sum(),
            },
            electric_quadrupole: Magnetic {
                allowed: quadrupole,
                components: quadratic,
                strength_au: strengths.quadrupole_total(),
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

    fn states(&self, ground: &Ground, pair: Pair) -> Option<StatesEntry> {
        let group = self.group();
        let spins = &self.labelled.spins;
        let before = states::terms(group, &ground.shells).ok()?;
        let shells = states::excited(group, ground, spins, pair.spin_idx, pair.from, pair.to)?;
        let after = states::terms(group, &shells).ok()?;
        let reached = |irrep: usize| {
            let mut axes: Vec<usize> = before
                .iter()
                .filter_map(|&(from, _)| self.operators.between(group, from, irrep).ok())
                .flat_map(|rule| rule.electric_dipole)
                .collect();
            axes.sort_unstable();
            axes.dedup();
            rule::axes(&axes)
        };
        let restricted = spins.len() == 1;
        Some(StatesEntry {
            ground_from: self.ground_from(ground),
            ground: rule::names(group, &before),
            excited: after
                .iter()
                .map(|&(irrep, terms)| ExcitedEntry { irrep: self.name(irrep), terms, polarisation: reached(irrep) })
                .collect(),
            multiplicities: if ground.closed && restricted { vec![1, 3] } else { Vec::new() },
        })
    }

    /// `closed shell`, `3eg^2`, or the determinant of spin orbitals.
    fn ground_from(&self, ground: &Ground) -> String {
        if ground.closed {
            return if self.labelled.spins.len() == 1 { "closed shell" } else { "full sets of spin orbitals" }
                .to_owned();
        }
        let open = ground
            .shells
            .iter()
            .filter(|shell| shell.electrons < shell.capacity * self.group().irreps()[shell.irrep].dimension);
        let text = open.map(|shell| format!("{}^{}", self.label(shell.spin_idx, shell.set_idx), shell.electrons));
        text.collect::<Vec<_>>().join(" ")
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
                let Ok(sublevels) = states::triplet_sublevels(group, &self.operators, irrep) else { continue };
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
    /// Degenerate sets whose part-filling splits the nuclei: those of the file, and the frontier sets after loss or gain of an electron.
    #[must_use]
    pub fn jahn_teller(&self) -> Vec<JahnTellerEntry> {
        use crate::labelling::frontier::frontier;
        let group = self.group();
        let capacity = if self.labelled.spins.len() > 1 { 1.0 } else { 2.0 };
        let mut entries = Vec::new();
        for (spin_idx, spin) in self.labelled.spins.iter().enumerate() {
            let found = frontier(&spin.sets, capacity);
            let own = found.somo.iter().map(|&set| (set, "this configuration"));
            let homo = found.homo.map(|set| (set, "one electron less"));
            let lumo = found.lumo.map(|set| (set, "one electron more"));
            for (set, configuration) in own.chain(homo).chain(lumo) {
                let degenerate = |irrep: &usize| group.irreps()[*irrep].dimension > 1;
                let Some(irrep) = spin.sets[set].irrep.filter(degenerate) else { continue };
                let Ok(active) = states::jahn_teller(group, irrep) else { continue };
                let vibrations: Vec<ActiveVibration> = active
                    .into_iter()
                    .filter(|&irrep| self.n_modes(irrep) > 0)
                    .map(|irrep| ActiveVibration {
                        irrep: self.name(irrep),
                        modes_in_molecule: self.n_modes(irrep),
                        modes: self.modes_of(irrep),
                    })
                    .collect();
                entries.push(JahnTellerEntry {
                    label: self.label(spin_idx, set),
                    configuration: configuration.to_owned(),
                    second_order_only: vibrations.is_empty(),
                    vibrations,
                });
            }
        }
        entries
    }
}
