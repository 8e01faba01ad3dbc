//! Whether rule and number agree, and why not when they do not.
//!
//! Not here: words for a reader (`report::transitions`).

use super::moments::Strengths;
use super::rules::Allowed;
use crate::labelling::{Labelled, SetLabel};

/// A moment (square root of a strength) below this is taken for zero, atomic units; more where orbitals are less orthonormal.
const NOISE: f64 = 1e-4;
/// An allowed pair of a smaller strength is weak.
const WEAK: f64 = 1e-4;
/// An oscillator strength above this in one form, with next to nothing in the other, is not settled by the basis.
const FORMS_APART: f64 = 0.02;
/// A set below this purity explains moments that symmetry forbids.
const IMPURE: f64 = 0.9999;
/// Nuclei farther off their group than this explain them too, bohr.
const DISTORTED: f64 = 2e-4;

/// An operator whose rule is compared.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Operator {
    /// r and ∇.
    ElectricDipole,
    /// r × ∇.
    MagneticDipole,
    /// Traceless products of two coordinates.
    Quadrupole,
}

/// What causes a moment that the rule forbids.
#[derive(Debug, Clone, Copy, PartialEq)]
pub enum Cause {
    /// The less pure set of the pair has this purity.
    Impure(f64),
    /// The nuclei lie this far from the group, bohr.
    Distorted(f64),
    /// The orbitals are orthonormal only to this.
    Rounded(f64),
    /// None of these: the group is too high for the wavefunction.
    Unknown,
}

/// A disagreement, or an agreement that deserves a word.
#[derive(Debug, Clone, PartialEq)]
pub enum Finding {
    /// Forbidden, yet there.
    Forbidden {
        /// Of which operator.
        operator: Operator,
        /// Its largest component, by index.
        component: usize,
        /// Square root of that component's strength.
        moment: f64,
        /// Why.
        causes: Vec<Cause>,
    },
    /// Electric-dipole allowed, yet next to nothing in both forms: this strength in the length form.
    WeakThoughAllowed(f64),
    /// Next to nothing in one form and not in the other: oscillator strengths in length and velocity form.
    FormsDiffer(f64, f64),
    /// One of the sets lacks partners, so the sums are not those of a level.
    Incomplete,
}

/// Compares every component of every operator with its rule.
#[must_use]
pub fn findings(labelled: &Labelled, from: &SetLabel, to: &SetLabel, allowed: &Allowed, s: &Strengths) -> Vec<Finding> {
    let noise = NOISE.max(10.0 * labelled.settled.residual);
    let mut found = Vec::new();
    let dipole: [f64; 3] = std::array::from_fn(|axis| s.length[axis].max(s.velocity[axis]));
    let compared: [(Operator, &[f64], &[usize]); 3] = [
        (Operator::ElectricDipole, &dipole, &allowed.electric_dipole),
        (Operator::MagneticDipole, &s.magnetic, &allowed.magnetic_dipole),
        (Operator::Quadrupole, &s.quadrupole, &allowed.quadrupole),
    ];
    for (operator, strengths, components) in compared {
        let largest = (0..strengths.len())
            .filter(|component| !components.contains(component))
            .max_by(|&a, &b| strengths[a].total_cmp(&strengths[b]).then(b.cmp(&a)));
        if let Some(component) = largest.filter(|&component| strengths[component].sqrt() > noise) {
            let moment = strengths[component].sqrt();
            found.push(Finding::Forbidden { operator, component, moment, causes: causes(labelled, from, to) });
        }
    }
    let (length, velocity): (f64, f64) = (s.length.iter().sum(), s.velocity.iter().sum());
    if !allowed.electric_dipole.is_empty() && length.min(velocity) < WEAK {
        let forms = (s.oscillator_length().unwrap_or(0.0), s.oscillator_velocity().unwrap_or(0.0));
        if forms.0.max(forms.1) > FORMS_APART {
            found.push(Finding::FormsDiffer(forms.0, forms.1));
        } else if length < WEAK {
            found.push(Finding::WeakThoughAllowed(length));
        }
    }
    if !from.complete || !to.complete {
        found.push(Finding::Incomplete);
    }
    found
}

fn causes(labelled: &Labelled, from: &SetLabel, to: &SetLabel) -> Vec<Cause> {
    let mut causes = Vec::new();
    let orbitals = labelled.spins.iter().find(|spin| spin.spin == from.spin).map(|spin| &spin.orbitals);
    let purity = from
        .orbitals
        .iter()
        .chain(&to.orbitals)
        .filter_map(|&orbital| orbitals?.get(orbital))
        .map(|label| label.purity)
        .fold(1.0, f64::min);
    if purity < IMPURE {
        causes.push(Cause::Impure(purity));
    }
    let deviation = labelled.symmetry.deviation.max;
    if deviation > DISTORTED {
        causes.push(Cause::Distorted(deviation));
    }
    if causes.is_empty() && labelled.settled.residual > NOISE {
        causes.push(Cause::Rounded(labelled.settled.residual));
    }
    if causes.is_empty() {
        causes.push(Cause::Unknown);
    }
    causes
}
