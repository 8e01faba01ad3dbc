//! States of a configuration as data: terms, ground term, spin–orbit components, rules, Jahn–Teller modes, correlation.
//!
//! Not here: how any of it is worked out (`states`), its text (`report::states_text`).

use super::document::SCHEMA;
use crate::group::double_name::half;
use crate::group::irrep_name::{IrrepName, Parity};
use crate::group::products::Decomposition;
use crate::group::{DoubleGroup, DoubleName, PointGroup};
use crate::states::jahn_teller::{self, JahnTeller};
use crate::states::{self, Certainty, Configuration, Correlation, Ground, StatesError, Term, spin_orbit};
use schemars::JsonSchema;
use serde::Serialize;

/// Everything `states` tells.
#[derive(Debug, Clone, Serialize, JsonSchema)]
pub struct StatesDocument {
    /// Name and version of the layout.
    #[schemars(extend("const" = SCHEMA))]
    pub schema: &'static str,
    /// The file that the configuration was read from, null when it was typed.
    pub file: Option<String>,
    /// Name of the group.
    pub point_group: String,
    /// Shells and terms; null where levels alone were asked for, or where a file has no clean configuration.
    pub configuration: Option<ConfigurationEntry>,
    /// Why a file's open shell is no configuration; empty where it is one.
    pub obstacles: Vec<String>,
    /// Another configuration, to whose terms transitions go.
    pub to: Option<ConfigurationEntry>,
    /// Rules between terms, where asked for.
    pub transitions: Vec<TransitionEntry>,
    /// A free ion's shell between free ion and strong field.
    pub correlation: Option<CorrelationEntry>,
    /// Splitting of J levels and of terms of a free ion, where asked for.
    pub levels: Vec<LevelEntry>,
}

/// A configuration with its terms.
#[derive(Debug, Clone, Serialize, JsonSchema)]
pub struct ConfigurationEntry {
    /// `t2g^3 eg^1`.
    pub text: String,
    /// Its shells.
    pub shells: Vec<ShellEntry>,
    /// Electrons in them.
    pub electrons: u32,
    /// Ways to place these.
    pub microstates: f64,
    /// All terms, highest spin first.
    pub terms: Vec<TermEntry>,
    /// The ground term.
    pub ground: GroundEntry,
}

/// One shell.
#[derive(Debug, Clone, Serialize, JsonSchema)]
pub struct ShellEntry {
    /// `t2g`, `3e1g`, `4f`.
    pub symbol: String,
    /// Its irrep.
    pub irrep: String,
    /// Electrons in it.
    pub electrons: u32,
    /// Places for electrons.
    pub places: u32,
}

/// Terms of one kind.
#[derive(Debug, Clone, Serialize, JsonSchema)]
pub struct TermEntry {
    /// `3T1g`.
    pub term: String,
    /// 2S + 1.
    pub multiplicity: u16,
    /// Irrep of the orbital part.
    pub irrep: String,
    /// How many there are.
    pub count: usize,
    /// States in all of them.
    pub states: usize,
    /// Components of one of them; null where they leave what is kept of a continuous group.
    pub spin_orbit: Option<Vec<ComponentEntry>>,
    /// Whether spin–orbit coupling splits it in first order.
    pub first_order_splitting: bool,
    /// What the Jahn–Teller theorem says without spin–orbit coupling.
    pub jahn_teller: JahnTellerEntry,
}

/// A component in the double group.
#[derive(Debug, Clone, Serialize, JsonSchema)]
pub struct ComponentEntry {
    /// `E1/2g`, `T2g`.
    pub irrep: String,
    /// `Gamma6g`; null for single-valued irreps, linear groups and atoms.
    pub gamma: Option<String>,
    /// J of an atom, Ω of a linear molecule; null elsewhere.
    pub quantum_number: Option<String>,
    /// How often the irrep occurs.
    pub count: usize,
    /// Levels that time reversal leaves: half the count where a level takes the irrep twice.
    pub levels: usize,
    /// States in each level.
    pub degeneracy: usize,
    /// What the Jahn–Teller theorem says of a level.
    pub jahn_teller: JahnTellerEntry,
}

/// What the Jahn–Teller theorem says.
#[derive(Debug, Clone, Serialize, JsonSchema)]
pub struct JahnTellerEntry {
    /// `stable`, `active`, `linear` (Renner–Teller only) or `atom`.
    #[schemars(extend("enum" = ["stable", "active", "linear", "atom"]))]
    pub verdict: &'static str,
    /// Vibrations that split the state in first order.
    pub modes: Vec<ModeEntry>,
}

/// Vibrations of one irrep.
#[derive(Debug, Clone, Serialize, JsonSchema)]
pub struct ModeEntry {
    /// Their irrep.
    pub irrep: String,
    /// How many the molecule has; null without a file.
    pub in_molecule: Option<usize>,
}

/// The ground term.
#[derive(Debug, Clone, Serialize, JsonSchema)]
pub struct GroundEntry {
    /// One term, or those that Hund's rules leave.
    pub terms: Vec<String>,
    /// `closed`, `only`, `rules`, `several_shells` or `undecided`.
    #[schemars(extend("enum" = ["closed", "only", "rules", "several_shells", "undecided"]))]
    pub certainty: &'static str,
    /// Of an atom, J of the lowest level.
    pub j: Option<String>,
    /// In words.
    pub caution: String,
}

/// Rules between two kinds of terms.
#[derive(Debug, Clone, Serialize, JsonSchema)]
pub struct TransitionEntry {
    /// Lower term in the list.
    pub from: String,
    /// The other.
    pub to: String,
    /// Equal multiplicities.
    pub spin_allowed: bool,
    /// By spin and orbitals.
    pub electric_dipole: OperatorEntry,
    /// By spin and orbitals.
    pub magnetic_dipole: OperatorEntry,
    /// By spin and orbitals.
    pub electric_quadrupole: OperatorEntry,
    /// What spin–orbit coupling adds to the electric dipole.
    pub spin_orbit: BorrowedEntry,
}

/// Whether an operator joins two states.
#[derive(Debug, Clone, Serialize, JsonSchema)]
pub struct OperatorEntry {
    /// Spin and orbitals allow it.
    pub allowed: bool,
    /// Components that the orbitals allow, whatever the spins.
    pub components: Vec<String>,
}

/// An electric dipole between spin–orbit components.
#[derive(Debug, Clone, Serialize, JsonSchema)]
pub struct BorrowedEntry {
    /// Some pair of components allows it.
    pub allowed: bool,
    /// Least order of spin–orbit coupling that gives it; 0 where none is needed.
    pub order: u16,
    /// Polarisations.
    pub components: Vec<String>,
}

/// From free ion to strong field.
#[derive(Debug, Clone, Serialize, JsonSchema)]
pub struct CorrelationEntry {
    /// `d^3`.
    pub free_ion: String,
    /// Orbitals of the shell in the group, `eg + t2g`.
    pub orbitals: String,
    /// Ways to place the electrons.
    pub microstates: f64,
    /// Terms of the free ion and what they become.
    pub weak_field: Vec<FreeTermEntry>,
    /// Ways to fill the orbitals and their terms.
    pub strong_field: Vec<FillingEntry>,
    /// All terms of both, by kind.
    pub terms: Vec<KindEntry>,
    /// Both lists count the same terms.
    pub lists_agree: bool,
}

/// A term of the free ion in the field.
#[derive(Debug, Clone, Serialize, JsonSchema)]
pub struct FreeTermEntry {
    /// `4F_g`.
    pub term: String,
    /// How many of them the free ion has.
    pub count: usize,
    /// What one becomes.
    pub becomes: Vec<KindEntry>,
}

/// A filling of the split shell.
#[derive(Debug, Clone, Serialize, JsonSchema)]
pub struct FillingEntry {
    /// `t2g^2 eg^1`.
    pub configuration: String,
    /// Its terms.
    pub terms: Vec<KindEntry>,
}

/// A kind of term or irrep and how many.
#[derive(Debug, Clone, Serialize, JsonSchema)]
pub struct KindEntry {
    /// `4T1g`.
    pub term: String,
    /// How many.
    pub count: usize,
}

/// A level or a term of a free ion in the group.
#[derive(Debug, Clone, Serialize, JsonSchema)]
pub struct LevelEntry {
    /// `J = 7/2` or `4F`.
    pub level: String,
    /// Under inversion of the ion.
    #[schemars(extend("enum" = ["even", "odd"]))]
    pub parity: &'static str,
    /// Irreps that it becomes.
    pub components: Vec<ComponentEntry>,
}

/// A group with its double group, and what a file adds.
pub struct Stage<'a> {
    /// The group.
    pub group: &'a PointGroup,
    /// Its double group.
    pub double: &'a DoubleGroup,
    /// The vibrations of the molecule, where there is one.
    pub vibrations: Option<&'a Decomposition>,
}

impl StatesDocument {
    /// A document that says nothing yet.
    #[must_use]
    pub fn new(group: &PointGroup, file: Option<String>) -> Self {
        Self {
            schema: SCHEMA,
            file,
            point_group: group.name().to_string(),
            configuration: None,
            obstacles: Vec::new(),
            to: None,
            transitions: Vec::new(),
            correlation: None,
            levels: Vec::new(),
        }
    }
}

impl Stage<'_> {
    /// Terms, ground term, components and Jahn–Teller modes of a configuration.
    ///
    /// # Errors
    /// [`StatesError::BeyondTable`] for terms beyond what is kept of a continuous group.
    pub fn configuration(&self, configuration: &Configuration) -> Result<ConfigurationEntry, StatesError> {
        let terms = states::terms(self.group, configuration)?;
        let ground = states::ground(self.group, configuration, &terms);
        let shells = configuration.shells().iter().map(|shell| ShellEntry {
            symbol: shell.symbol(),
            irrep: shell.name.to_string(),
            electrons: shell.electrons,
            places: shell.places,
        });
        Ok(ConfigurationEntry {
            text: configuration.to_string(),
            shells: shells.collect(),
            electrons: configuration.electrons(),
            microstates: configuration.microstates(),
            terms: terms.iter().map(|term| self.term(term)).collect::<Result<_, _>>()?,
            ground: self.ground(&terms, &ground),
        })
    }

    fn term(&self, term: &Term) -> Result<TermEntry, StatesError> {
        let components = match spin_orbit::components(self.group, self.double, term) {
            Ok(components) => Some(self.components(&components)?),
            Err(StatesError::BeyondTable { .. }) => None,
            Err(error) => return Err(error),
        };
        Ok(TermEntry {
            term: term.symbol(self.group),
            multiplicity: term.multiplicity,
            irrep: self.group.irreps()[term.irrep].name.to_string(),
            count: term.count,
            states: term.states(self.group),
            spin_orbit: components,
            first_order_splitting: spin_orbit::splits_in_first_order(self.group, term)?,
            jahn_teller: self.jahn_teller(jahn_teller::of_irrep(self.group, term.irrep)?),
        })
    }

    fn components(&self, components: &Decomposition) -> Result<Vec<ComponentEntry>, StatesError> {
        let entry = |&(irrep, count): &(usize, usize)| {
            let of = &self.double.irreps()[irrep];
            Ok(ComponentEntry {
                irrep: of.name.to_string(),
                gamma: of.name.gamma(),
                quantum_number: quantum_number(of.name),
                count,
                levels: count / of.copies_in_level(),
                degeneracy: of.dimension * of.copies_in_level(),
                jahn_teller: self.jahn_teller(jahn_teller::of_level(self.group, self.double, irrep)?),
            })
        };
        components.iter().map(entry).collect()
    }

    fn jahn_teller(&self, verdict: JahnTeller) -> JahnTellerEntry {
        let (verdict, modes) = match verdict {
            JahnTeller::Stable => ("stable", Vec::new()),
            JahnTeller::Linear => ("linear", Vec::new()),
            JahnTeller::Atom => ("atom", Vec::new()),
            JahnTeller::Active(modes) => ("active", modes),
        };
        let in_molecule = |irrep: usize| {
            self.vibrations.map(|all| all.iter().find(|(mode, _)| *mode == irrep).map_or(0, |(_, count)| *count))
        };
        let modes = modes.into_iter().map(|(irrep, _)| ModeEntry {
            irrep: self.group.irreps()[irrep].name.to_string(),
            in_molecule: in_molecule(irrep),
        });
        JahnTellerEntry { verdict, modes: modes.collect() }
    }

    fn ground(&self, terms: &[Term], ground: &Ground) -> GroundEntry {
        let (certainty, caution) = match ground.certainty {
            Certainty::Closed => ("closed", "every shell is full or empty"),
            Certainty::Only => ("only", "the only term of this configuration"),
            Certainty::Rules if self.group.is_continuous() => {
                ("rules", "lowest of this configuration by Hund's rules, which can fail")
            }
            Certainty::Rules => (
                "rules",
                "lowest of this configuration by Hund's rules, which can fail; another configuration, such as that of low spin, may lie lower",
            ),
            Certainty::SeveralShells => (
                "several_shells",
                "highest spin; Hund's rules were found for one open shell and decide less surely where there are several",
            ),
            Certainty::Undecided => {
                ("undecided", "Hund's rules stop at highest spin: which of these lies lowest takes a calculation")
            }
        };
        GroundEntry {
            terms: ground.terms.iter().map(|&at| terms[at].symbol(self.group)).collect(),
            certainty,
            j: ground.twice_j.map(half),
            caution: caution.to_owned(),
        }
    }

    /// Rules between terms of one configuration, or from those of one to those of another.
    ///
    /// # Errors
    /// As [`states::transitions()`].
    pub fn transitions(
        &self,
        from: &Configuration,
        to: Option<&Configuration>,
    ) -> Result<Vec<TransitionEntry>, StatesError> {
        let left = states::terms(self.group, from)?;
        let right = to.map(|to| states::terms(self.group, to)).transpose()?;
        let found = states::transitions(self.group, self.double, &left, right.as_deref())?;
        let right = right.as_ref().unwrap_or(&left);
        let irreps = self.group.irreps();
        let entry = |rule: &states::Transition| {
            let operator =
                |which: &[usize], of: fn(&crate::group::functions::Functions) -> &Vec<String>| OperatorEntry {
                    allowed: rule.spin_allowed && !which.is_empty(),
                    components: single_names(which.iter().flat_map(|&irrep| of(&irreps[irrep].functions))),
                };
            let borrowed = single_names(rule.borrowed.iter().flat_map(|&irrep| &irreps[irrep].functions.linear));
            TransitionEntry {
                from: left[rule.from].symbol(self.group),
                to: right[rule.to].symbol(self.group),
                spin_allowed: rule.spin_allowed,
                electric_dipole: operator(&rule.electric_dipole, |functions| &functions.linear),
                magnetic_dipole: operator(&rule.magnetic_dipole, |functions| &functions.rotations),
                electric_quadrupole: operator(&rule.quadrupole, |functions| &functions.quadratic),
                spin_orbit: BorrowedEntry {
                    allowed: !borrowed.is_empty(),
                    order: if rule.is_allowed() { 0 } else { rule.borrowed_order },
                    components: borrowed,
                },
            }
        };
        Ok(found.iter().map(entry).collect())
    }

    /// Splitting of one J, whole or half.
    ///
    /// # Errors
    /// As [`spin_orbit::level_in_field`].
    pub fn level(&self, level: String, twice_j: u16, parity: Parity) -> Result<LevelEntry, StatesError> {
        let components = spin_orbit::level_in_field(self.double, twice_j, parity)?;
        let parity = if parity == Parity::Even { "even" } else { "odd" };
        Ok(LevelEntry { level, parity, components: self.components(&components)? })
    }

    /// lⁿ between free ion and strong field; `atom` is the full rotation group.
    #[must_use]
    pub fn correlation(&self, atom: &PointGroup, correlation: &Correlation) -> CorrelationEntry {
        let kinds = |terms: &[Term]| -> Vec<KindEntry> {
            terms.iter().map(|term| KindEntry { term: term.symbol(self.group), count: term.count }).collect()
        };
        let (weak, strong) = (correlation.weak_total(), correlation.strong_total());
        let weak_field = correlation.weak_field.iter().map(|(term, irreps)| FreeTermEntry {
            term: term.symbol(atom),
            count: term.count,
            becomes: irreps
                .iter()
                .map(|&(irrep, count)| KindEntry {
                    term: format!("{}{}", term.multiplicity, self.group.irreps()[irrep].name),
                    count,
                })
                .collect(),
        });
        let strong_field = correlation.strong_field.iter().map(|(configuration, terms)| FillingEntry {
            configuration: configuration.to_string(),
            terms: kinds(terms),
        });
        let orbitals = correlation.orbitals.iter().map(|&(irrep, count)| {
            let symbol = self.group.irreps()[irrep].name.symbol();
            if count == 1 { symbol } else { format!("{count}{symbol}") }
        });
        CorrelationEntry {
            free_ion: correlation.free.to_string(),
            orbitals: orbitals.collect::<Vec<_>>().join(" + "),
            microstates: correlation.free.microstates(),
            weak_field: weak_field.collect(),
            strong_field: strong_field.collect(),
            terms: kinds(&weak),
            lists_agree: weak == strong,
        }
    }
}

/// J of an atom, Ω (with the sign of Σ) of a linear molecule.
fn quantum_number(name: DoubleName) -> Option<String> {
    match name {
        DoubleName::Level { twice_j, .. } | DoubleName::Spinor { twice_j, gamma: None, .. } => Some(half(twice_j)),
        DoubleName::Single(IrrepName::Atomic { l, .. }) => Some(l.to_string()),
        DoubleName::Single(IrrepName::Linear { m, reflection, .. }) => {
            let sign = reflection
                .map_or("", |sign| if sign == crate::group::irrep_name::Reflection::Plus { "+" } else { "-" });
            Some(format!("{m}{sign}"))
        }
        _ => None,
    }
}

/// `(x, y)` and `z` as x, y, z.
fn single_names<'a>(sets: impl Iterator<Item = &'a String>) -> Vec<String> {
    let mut names: Vec<String> = Vec::new();
    for set in sets {
        for name in set.trim_matches(['(', ')']).split(", ") {
            if !names.iter().any(|known| known == name) {
                names.push(name.to_owned());
            }
        }
    }
    names.sort();
    names
}
