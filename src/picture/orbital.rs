//! Pictures of orbitals: both lobes of a surface that encloses a stated share of the density, over the molecule.
//!
//! Not here: which orbitals (`cli`), captions (`page`).

use super::grid::{self, Level, bounds};
use super::ink::{AXES, Colour, HATCH, NEGATIVE, POSITIVE, grey};
use super::raster::{Layer, Raster};
use super::skeleton::{STICK, Skeleton};
use super::surface::{Triangle, surface};
use super::view::View;
use crate::group::Frame;
use crate::wavefunction::Basis;
use nalgebra::Vector3;
use ndarray::ArrayView2;
use rayon::prelude::*;
use std::io;

/// Share of ∫ψ² that the surfaces enclose.
pub const ENCLOSED: f64 = 0.80;
/// Pixels a side.
pub const SIDE: usize = 360;
/// How much atoms and bonds shine through a surface.
const CLARITY: f64 = 0.28;
/// Distance of hatch lines and their width, shares of the side.
const HATCH_STEP: f64 = 0.016;
const HATCH_WIDTH: f64 = 0.26;

/// One orbital, drawn.
#[derive(Debug, Clone, PartialEq)]
pub struct OrbitalPicture {
    /// The picture.
    pub png: Vec<u8>,
    /// The surface and what it encloses.
    pub level: Level,
    /// Distance of neighbours on the grid, bohr.
    pub step_bohr: f64,
}

/// Draws orbitals (rows over the canonical functions) to one scale: the partners of a set belong together.
///
/// # Errors
/// What the PNG writer says.
pub fn orbital_pictures(
    skeleton: &Skeleton,
    frame: &Frame,
    basis: &Basis,
    rows: ArrayView2<'_, f64>,
    view: &View,
) -> io::Result<Vec<OrbitalPicture>> {
    let places: Vec<Vector3<f64>> = skeleton.atoms.iter().map(|atom| atom.place).collect();
    let (grid, values) = grid::around(basis, rows, frame, &places, ENCLOSED);
    let cell = grid.step.powi(3);
    let drawn: Vec<(Level, [Vec<Triangle>; 2])> = values
        .outer_iter()
        .collect::<Vec<_>>()
        .into_par_iter()
        .map(|orbital| {
            let orbital = orbital.to_vec();
            let level = grid::level(&orbital, cell, ENCLOSED);
            let lobes = [1.0, -1.0].map(|sign| surface(&grid, &orbital, sign, level.value));
            (level, lobes)
        })
        .collect();
    let atoms = skeleton.atoms.iter().flat_map(|atom| {
        let reach = Vector3::repeat(atom.radius);
        let seen = view.project(&atom.place);
        [seen - reach, seen + reach]
    });
    let corners = drawn.iter().flat_map(|(_, lobes)| lobes.iter().flatten().flatten());
    let (low, high) = bounds(atoms.chain(corners.map(|corner| view.project(&corner.place))));
    let raster = Raster::over(view, SIDE, low, high);
    drawn
        .into_par_iter()
        .map(|(level, lobes)| {
            let png = draw(&raster, view, skeleton, &lobes)?;
            Ok(OrbitalPicture { png, level, step_bohr: grid.step })
        })
        .collect()
}

fn draw(raster: &Raster<'_>, view: &View, skeleton: &Skeleton, lobes: &[Vec<Triangle>; 2]) -> io::Result<Vec<u8>> {
    let (mut bodies, mut surfaces, mut strokes) = (raster.layer(), raster.layer(), raster.layer());
    for &(a, b) in &skeleton.bonds {
        let [a, b] = [&skeleton.atoms[a], &skeleton.atoms[b]];
        raster.stick(&mut bodies, [&a.place, &b.place], STICK, [grey(a.element), grey(b.element)]);
    }
    for atom in &skeleton.atoms {
        raster.sphere(&mut bodies, &atom.place, atom.radius, grey(atom.element));
    }
    let [positive, negative] = lobes;
    for triangle in positive {
        raster.triangle(&mut surfaces, triangle, |_, _| POSITIVE);
    }
    for triangle in negative {
        raster.triangle(&mut surfaces, triangle, |right, down| hatched(right, down, raster.pixels() * HATCH_STEP));
    }
    axes(raster, view, &mut strokes);
    raster.join(&bodies, &surfaces, &strokes, CLARITY).to_png()
}

/// Oblique lines on the dark lobes.
fn hatched(right: f64, down: f64, step: f64) -> Colour {
    if ((right + down) / step).rem_euclid(1.0) < HATCH_WIDTH { HATCH } else { NEGATIVE }
}

/// x, y and z at the lower left, their letters of straight strokes: a picture that is cut out keeps its axes.
fn axes(raster: &Raster<'_>, view: &View, strokes: &mut Layer) {
    const CORNER: (f64, f64) = (0.085, 0.905);
    const LENGTH: f64 = 0.07;
    const LETTER: f64 = 0.012;
    /// Strokes in units of half a letter, right and up.
    type Letter = &'static [((f64, f64), (f64, f64))];
    const LETTERS: [Letter; 3] = [
        &[((-0.7, -1.0), (0.7, 1.0)), ((-0.7, 1.0), (0.7, -1.0))],
        &[((-0.7, 1.0), (0.0, 0.0)), ((0.7, 1.0), (-0.5, -1.4))],
        &[((-0.7, 1.0), (0.7, 1.0)), ((0.7, 1.0), (-0.7, -1.0)), ((-0.7, -1.0), (0.7, -1.0))],
    ];
    for (axis, letter) in LETTERS.iter().enumerate() {
        let seen = view.project(&Vector3::ith(axis, 1.0));
        let tip = (CORNER.0 + LENGTH * seen.x, CORNER.1 - LENGTH * seen.y);
        raster.stroke(strokes, CORNER, tip, 0.008, AXES);
        let middle = (CORNER.0 + 1.32 * LENGTH * seen.x, CORNER.1 - 1.32 * LENGTH * seen.y);
        // An axis that points at the eye has its letter beside its tip.
        let aside = if seen.xy().norm() < 0.45 { -0.022 } else { 0.0 };
        for (from, to) in *letter {
            let on_paper = |point: &(f64, f64)| (middle.0 + aside + LETTER * point.0, middle.1 - LETTER * point.1);
            raster.stroke(strokes, on_paper(from), on_paper(to), 0.0055, AXES);
        }
    }
}
