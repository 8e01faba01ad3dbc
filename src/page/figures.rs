//! Pictures of orbitals with captions that say what is drawn.

use super::names::{function, name};
use super::tables::electronvolts;
use crate::model::Spin;
use crate::picture::OrbitalPicture;
use crate::picture::orbital::{ENCLOSED, SIDE};
use crate::report::document::{Document, SetEntry};
use base64::Engine as _;
use base64::engine::general_purpose::STANDARD;
use maud::{Markup, html};

/// The pictures of one set, in the order of its orbitals.
#[derive(Debug, Clone, PartialEq)]
pub struct SetPictures {
    /// Number of the set in the document.
    pub set: usize,
    /// One an orbital.
    pub partners: Vec<OrbitalPicture>,
    /// The standard partners that are drawn where the file has others, turned among themselves.
    pub turned_to: Option<Vec<String>>,
}

/// Which role a set has at the frontier: `HOMO`, `LUMO`, `SOMO`, or none.
pub fn role(document: &Document, set: &SetEntry) -> &'static str {
    let spins = document.frontier.as_ref().map(|frontier| frontier.spins.as_slice()).unwrap_or_default();
    match spins.iter().find(|entry| entry.spin == set.spin) {
        Some(entry) if entry.homo == Some(set.set) => "HOMO",
        Some(entry) if entry.lumo == Some(set.set) => "LUMO",
        Some(entry) if entry.somo.contains(&set.set) => "SOMO",
        _ => "",
    }
}

/// ` α` or ` β` where the file has both.
pub fn spin_sign(document: &Document, spin: Spin) -> &'static str {
    let unrestricted = document.sets.iter().flatten().any(|set| set.spin == Spin::Beta);
    match (unrestricted, spin) {
        (false, _) => "",
        (true, Spin::Alpha) => " α",
        (true, Spin::Beta) => " β",
    }
}

/// The label of a set, or its number where it has none.
pub fn set_name(set: &SetEntry) -> Markup {
    html! { @if let Some(label) = &set.label { (name(label)) } @else { "set " (set.set) } }
}

/// All pictures, or nothing without any.
pub fn orbitals(document: &Document, pictures: &[SetPictures], view: &str) -> Markup {
    let sets = document.sets.as_deref().unwrap_or_default();
    let shown =
        || pictures.iter().filter_map(|pictures| Some((pictures, sets.iter().find(|set| set.set == pictures.set)?)));
    let coarse =
        pictures.iter().flat_map(|set| &set.partners).any(|picture| (picture.level.on_grid - 1.0).abs() > 0.05);
    html! {
        section #orbitals {
            h2 { "Orbitals at the frontier" }
            p.note {
                "Surfaces of constant |ψ|, each enclosing " (format!("{:.0}", 100.0 * ENCLOSED))
                " % of its own orbital’s density; light: ψ above zero, dark and hatched: below (the sign of a whole orbital has no meaning). "
                "Computed from the file’s own functions; axes are those of the point group; " (view) "."
            }
            div.sets { @for (pictures, set) in shown() { (set_figures(document, pictures, set)) } }
            @if coarse {
                p.note { "Where the grid holds other than 1 of an orbital, a core is too sharp for it or the orbital reaches beyond it; the share enclosed then refers to what the grid holds." }
            }
        }
    }
}

fn set_figures(document: &Document, pictures: &SetPictures, set: &SetEntry) -> Markup {
    let of =
        |index: usize| document.orbitals.iter().flatten().find(|entry| entry.spin == set.spin && entry.index == index);
    html! {
        div.set {
            h3 {
                (set_name(set)) (spin_sign(document, set.spin))
                @let role = role(document, set);
                @if !role.is_empty() { " " span.role { (role) } }
                span.aside {
                    @if let Some(energy) = set.energy_hartree { (electronvolts(energy)) " eV" }
                    @if let Some(electrons) = set.electrons { " · " (super::tables::electrons(electrons)) " e⁻" }
                }
            }
            div.partners {
                @for (at, (picture, &index)) in pictures.partners.iter().zip(&set.orbitals).enumerate() {
                    @match pictures.turned_to.as_ref().and_then(|names| names.get(at)) {
                        Some(partner) => (figure(picture, "Partner", Some(partner), set)),
                        None => (figure(picture, &format!("Orbital {index}"), of(index).and_then(|orbital| orbital.component.as_deref()), set)),
                    }
                }
            }
            @if pictures.turned_to.is_some() {
                p.note { "Standard partners: combinations of orbitals " (super::tables::indices(&set.orbitals)) ", which the file has turned among themselves." }
            }
        }
    }
}

fn figure(picture: &OrbitalPicture, what: &str, component: Option<&str>, set: &SetEntry) -> Markup {
    let label = set.label.as_deref().map_or_else(String::new, crate::report::unicode::pretty);
    let partner = component.map(|component| format!(", {component}")).unwrap_or_default();
    let alt = format!("{what} of {label}{partner}: surface of |ψ| = {:.3}", picture.level.value);
    let turned = component.is_none() && set.degeneracy > 1 && set.irrep.is_some();
    html! {
        figure {
            img alt=(alt) width=(SIDE) height=(SIDE)
                src=(format!("data:image/png;base64,{}", STANDARD.encode(&picture.png)));
            figcaption {
                (what) @if let Some(component) = component { " " (function(component)) } @if turned { ", partners turned as in the file" }
                br;
                span.aside {
                    "|ψ| = " (format!("{:.4}", picture.level.value)) " " i { "a" } sub { "0" } sup { "−3/2" }
                    @if (picture.level.on_grid - 1.0).abs() > 0.05 { "; grid holds " (format!("{:.2}", picture.level.on_grid)) }
                }
            }
        }
    }
}
