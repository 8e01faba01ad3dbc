//! Where the standard axes of a group lie among the sites, and by which rule.
//!
//! The rules are those of IUPAC 1997 and Mulliken 1955: planar C2v and D2h molecules have x across the plane; D2h z through the most
//! atoms, then bonds; C2' of Dn and Dnh (even n) through the most atoms, then bonds; σv of Cnv (even n) through the most atoms, in C2v
//! the yz plane. What they leave open is settled by the places of the sites alone, so that turning or reordering changes nothing.

use super::arrangement::Arrangement;
use super::detect::Rung;
use super::error::GroupError;
use super::fit::intertwiner;
use super::identify::standard_frames;
use super::ladder::nearest;
use super::linear::axes_along;
use super::point_group::PointGroup;
use super::schoenflies::GroupName;
use super::symmetry::{Frame, OtherSetting, Passage, Site, Symmetry};
use nalgebra::{Matrix3, Point3, Vector3};
use std::cmp::Ordering;

/// Sites nearer than this (bohr) to an axis or plane are on it; positions are symmetrised.
const ON: f64 = 1e-4;

/// Lengths that differ by less (bohr) do not settle a choice, unless nothing else does.
const ALIKE: [f64; 2] = [1e-3, 1e-7];

/// Chooses the axes, and puts the operations in the order of the group's elements.
pub(super) fn place(
    centre: Point3<f64>,
    rung: &Rung,
    sites: &[Site],
    bonds: Option<&[(usize, usize)]>,
) -> Result<Symmetry, GroupError> {
    let group = PointGroup::standard(rung.name)?;
    let matrices: Vec<Matrix3<f64>> = rung.operations.iter().map(|operation| operation.matrix).collect();
    let neighbours;
    let bonds = if let Some(bonds) = bonds {
        bonds
    } else {
        let places = rung.positions.iter().map(|x| Site { kind: 0, position: Point3::from(*x) });
        neighbours = Arrangement::of(&places.collect::<Vec<_>>()).neighbours();
        &neighbours
    };
    let scene = Scene { name: rung.name, matrices: &matrices, sites, positions: &rung.positions, bonds };
    let axes = scene.chosen(scene.candidates()?);
    // Which operation each element is, and the axes made exact for all of them.
    let standard: Vec<Matrix3<f64>> = group.elements().iter().map(|element| *element.operation.matrix()).collect();
    let order: Vec<usize> = standard.iter().map(|s| nearest(&matrices, &(axes.transpose() * s * axes))).collect();
    let ordered: Vec<Matrix3<f64>> = order.iter().map(|&at| matrices[at]).collect();
    let axes = intertwiner(&axes, &ordered, &standard).unwrap_or(axes);
    let permutations =
        order.iter().map(|&at| rung.operations[at].permutation.iter().map(|&image| image as usize).collect()).collect();
    let passages = [0, 1, 2].map(|axis| scene.passage(&axes, axis));
    let settings = group.settings();
    let mut convention = scene.convention(&axes, &passages);
    if settings.iter().any(|setting| scene.ties(&axes, &(setting.rotation * axes))) {
        convention.push_str("; atoms and bonds do not tell it from the other choice, so their kinds and distances do");
    }
    let other_settings = settings
        .into_iter()
        .map(|setting| OtherSetting {
            description: setting.description,
            swaps: setting
                .swaps
                .iter()
                .map(|&(here, there)| (group.irreps()[here].name, group.irreps()[there].name))
                .collect(),
        })
        .collect();
    Ok(Symmetry {
        frame: Frame { centre, axes, convention },
        permutations,
        deviation: rung.deviation,
        passages,
        other_settings,
        rotational_symmetry_number: rung.name.rotational_symmetry_number().unwrap_or(1),
        group,
    })
}

/// All that the choice of axes may look at.
struct Scene<'a> {
    name: GroupName,
    matrices: &'a [Matrix3<f64>],
    sites: &'a [Site],
    /// Symmetrised, about the centre.
    positions: &'a [Vector3<f64>],
    bonds: &'a [(usize, usize)],
}

impl Scene<'_> {
    /// Right-handed axes that make the operations the standard ones, one of each set that the group's own turns connect.
    fn candidates(&self) -> Result<Vec<Matrix3<f64>>, GroupError> {
        let candidates = match self.name {
            GroupName::K => vec![Matrix3::identity()],
            GroupName::Cinfv | GroupName::Dinfh => {
                let along = self.leading(None);
                along.iter().flat_map(|z| [axes_along(z), axes_along(&-z)]).collect()
            }
            GroupName::C1 | GroupName::Ci => self.leading(None).iter().flat_map(|z| self.about(z)).collect(),
            GroupName::Cs | GroupName::Cn(_) | GroupName::Cnh(_) | GroupName::Sn(_) => {
                let (_, frames) = standard_frames(self.matrices)?;
                let z: Vector3<f64> = frames.first().map_or_else(Vector3::z, |axes| axes.row(2).transpose());
                [z, -z].iter().flat_map(|z| self.about(z)).collect()
            }
            _ => standard_frames(self.matrices)?.1,
        };
        Ok(self.inequivalent(candidates))
    }

    /// Frames about z with x towards one of the leading sites.
    fn about(&self, z: &Vector3<f64>) -> Vec<Matrix3<f64>> {
        let frames = self
            .leading(Some(z))
            .into_iter()
            .map(|x| Matrix3::from_rows(&[x.transpose(), z.cross(&x).transpose(), z.transpose()]));
        let frames: Vec<_> = frames.collect();
        if frames.is_empty() { vec![axes_along(z)] } else { frames }
    }

    /// Directions to the outermost sites, seen along `axis` where one is given, of the kind with the fewest such sites.
    fn leading(&self, axis: Option<&Vector3<f64>>) -> Vec<Vector3<f64>> {
        const MOST: usize = 120;
        let flat = |x: &Vector3<f64>| axis.map_or(*x, |axis| x - axis * axis.dot(x));
        let mut sites: Vec<(u32, Vector3<f64>)> =
            self.sites.iter().zip(self.positions).map(|(site, x)| (site.kind, flat(x))).collect();
        sites.retain(|(_, x)| x.norm() > ON);
        sites.sort_by(|a, b| a.0.cmp(&b.0).then(b.1.norm().total_cmp(&a.1.norm())));
        let shells = sites.chunk_by(|a, b| a.0 == b.0).map(|kind| {
            let outermost = kind.first().map_or(0.0, |(_, x)| x.norm());
            kind.iter().take_while(move |(_, x)| x.norm() > outermost - ALIKE[0]).map(|(_, x)| x.normalize())
        });
        let shells = shells.map(Iterator::collect::<Vec<_>>);
        shells.min_by_key(Vec::len).map(|shell| shell.into_iter().take(MOST).collect()).unwrap_or_default()
    }

    /// One of each set of frames that proper operations turn into each other: all sites look the same in them.
    fn inequivalent(&self, frames: Vec<Matrix3<f64>>) -> Vec<Matrix3<f64>> {
        let proper: Vec<&Matrix3<f64>> = self.matrices.iter().filter(|matrix| matrix.determinant() > 0.0).collect();
        let mut kept: Vec<Matrix3<f64>> = Vec::new();
        for frame in frames {
            let known = kept.iter().any(|known| proper.iter().any(|r| (known * **r - frame).amax() < 1e-6));
            if !known {
                kept.push(frame);
            }
        }
        kept
    }

    fn chosen(&self, candidates: Vec<Matrix3<f64>>) -> Matrix3<f64> {
        let mut pool = candidates;
        for rule in self.rules() {
            keep_best(&mut pool, |axes| rule(self, axes), Ord::cmp);
        }
        for alike in ALIKE {
            for (x, y, z) in [(0.0, 0.0, 1.0), (1.0, 0.0, 0.0), (0.0, 1.0, 0.0), (1.0, 2.0, 3.0), (3.0, -1.0, 2.0)] {
                let direction = Vector3::new(x, y, z).normalize();
                keep_best(&mut pool, |axes| self.profile(&axes.tr_mul(&direction)), |a, b| compare(a, b, alike));
            }
        }
        pool.first().copied().unwrap_or_else(Matrix3::identity)
    }

    /// Whether the rules cannot tell two frames apart.
    fn ties(&self, a: &Matrix3<f64>, b: &Matrix3<f64>) -> bool {
        self.rules().iter().all(|rule| rule(self, a) == rule(self, b))
    }

    /// What is to be greatest, in this order.
    fn rules(&self) -> Vec<fn(&Self, &Matrix3<f64>) -> usize> {
        match self.name {
            GroupName::Dn(2) | GroupName::Dnh(2) => vec![
                |scene, axes| usize::from(scene.atoms_in_plane(axes, 0) == scene.positions.len()),
                |scene, axes| scene.passage(axes, 2).atoms.len(),
                |scene, axes| scene.passage(axes, 2).bonds.len(),
                |scene, axes| scene.atoms_in_plane(axes, 0),
            ],
            GroupName::Dn(n) | GroupName::Dnh(n) if n % 2 == 0 => {
                vec![|scene, axes| scene.passage(axes, 0).atoms.len(), |scene, axes| scene.passage(axes, 0).bonds.len()]
            }
            GroupName::Cnv(2) => {
                vec![|scene, axes| scene.atoms_in_plane(axes, 0), |scene, axes| scene.bonds_in_plane(axes, 0)]
            }
            GroupName::Cnv(n) if n % 2 == 0 => {
                vec![|scene, axes| scene.atoms_in_plane(axes, 1), |scene, axes| scene.bonds_in_plane(axes, 1)]
            }
            _ => Vec::new(),
        }
    }

    fn middles(&self) -> impl Iterator<Item = ((usize, usize), Vector3<f64>)> {
        self.bonds.iter().filter_map(|&(a, b)| Some(((a, b), (self.positions.get(a)? + self.positions.get(b)?) * 0.5)))
    }

    fn passage(&self, axes: &Matrix3<f64>, axis: usize) -> Passage {
        let direction: Vector3<f64> = axes.row(axis).transpose();
        let on = |x: &Vector3<f64>| x.cross(&direction).norm() < ON;
        Passage {
            atoms: (0..self.positions.len()).filter(|&at| on(&self.positions[at])).collect(),
            bonds: self
                .middles()
                .filter(|((a, _), middle)| on(middle) && !on(&self.positions[*a]))
                .map(|(bond, _)| bond)
                .collect(),
        }
    }

    fn atoms_in_plane(&self, axes: &Matrix3<f64>, normal: usize) -> usize {
        self.positions.iter().filter(|x| axes.row(normal).transpose().dot(x).abs() < ON).count()
    }

    fn bonds_in_plane(&self, axes: &Matrix3<f64>, normal: usize) -> usize {
        self.middles().filter(|(_, middle)| axes.row(normal).transpose().dot(middle).abs() < ON).count()
    }

    /// Heights of the sites along a direction, kind by kind, from the highest down.
    fn profile(&self, direction: &Vector3<f64>) -> Vec<f64> {
        let mut heights: Vec<(u32, f64)> =
            self.sites.iter().zip(self.positions).map(|(site, x)| (site.kind, x.dot(direction))).collect();
        heights.sort_by(|a, b| a.0.cmp(&b.0).then(b.1.total_cmp(&a.1)));
        heights.into_iter().map(|(_, height)| height).collect()
    }

    /// One line of words.
    fn convention(&self, axes: &Matrix3<f64>, passages: &[Passage; 3]) -> String {
        let plane = |normal: usize| counted(self.atoms_in_plane(axes, normal), "atom");
        let [x, _, z] = passages.each_ref().map(through);
        let planar = self.atoms_in_plane(axes, 0) == self.positions.len();
        match self.name {
            GroupName::K => "any axes serve; those of the file are kept".to_owned(),
            GroupName::Cinfv | GroupName::Dinfh => "z: along the molecule; x across it is free".to_owned(),
            GroupName::C1 | GroupName::Ci => "any axes serve; z and x point to outer atoms".to_owned(),
            GroupName::Cs => "z: across the mirror plane; x in it is free, put towards outer atoms".to_owned(),
            GroupName::Cn(n) | GroupName::Cnh(n) => format!("z: C{n} axis; x is free, put towards outer atoms"),
            GroupName::Sn(n) => format!("z: S{n} axis; x is free, put towards outer atoms"),
            GroupName::Dn(2) | GroupName::Dnh(2) => {
                let x =
                    if planar { "across the molecular plane".to_owned() } else { format!("with {} in yz", plane(0)) };
                format!("z: C2 axis {z}, the most of the three; x: {x}")
            }
            GroupName::Cnv(2) => {
                let plane = if planar {
                    "the molecular plane".to_owned()
                } else {
                    format!("the plane with the most atoms ({})", plane(0))
                };
                format!("z: C2 axis; yz: {plane}")
            }
            GroupName::Dn(n) | GroupName::Dnh(n) if n % 2 == 0 => {
                let second = self.passage(&(turned(n) * axes), 0);
                format!("z: C{n} axis; x: C2' {x}, the other half turns C2'' {}", through(&second))
            }
            GroupName::Dn(n) | GroupName::Dnh(n) => format!("z: C{n} axis; x: C2' {x}"),
            GroupName::Dnd(n) => format!(
                "z: {}{} axis; x: C2' {x}",
                if n % 2 == 0 { 'S' } else { 'C' },
                if n % 2 == 0 { 2 * n } else { n }
            ),
            GroupName::Cnv(n) if n % 2 == 0 => {
                let other = counted(self.atoms_in_plane(&(turned(n) * axes), 1), "atom");
                format!("z: C{n} axis; xz: sigma_v with {}, the other planes sigma_d with {other}", plane(1))
            }
            GroupName::Cnv(n) => format!("z: C{n} axis; xz: sigma_v with {}", plane(1)),
            GroupName::T | GroupName::Th => "x, y, z: the C2 axes".to_owned(),
            GroupName::Td => "x, y, z: the S4 axes".to_owned(),
            GroupName::O | GroupName::Oh => format!("x, y, z: the C4 axes, each {z}"),
            GroupName::I | GroupName::Ih => format!("z: a C5 axis {z}; y: a C2 axis"),
        }
    }
}

/// The axes of the other family of half turns or planes: half a step round z.
fn turned(n: u32) -> Matrix3<f64> {
    let (s, c) = (std::f64::consts::PI / f64::from(n)).sin_cos();
    Matrix3::new(c, s, 0.0, -s, c, 0.0, 0.0, 0.0, 1.0)
}

fn counted(n: usize, thing: &str) -> String {
    format!("{n} {thing}{}", if n == 1 { "" } else { "s" })
}

fn through(passage: &Passage) -> String {
    match (passage.atoms.len(), passage.bonds.len()) {
        (0, 0) => "through no atom or bond".to_owned(),
        (atoms, 0) => format!("through {}", counted(atoms, "atom")),
        (0, bonds) => format!("through {}", counted(bonds, "bond")),
        (atoms, bonds) => format!("through {} and {}", counted(atoms, "atom"), counted(bonds, "bond")),
    }
}

/// Keeps the candidates with the greatest value, and those alike.
fn keep_best<T>(
    pool: &mut Vec<Matrix3<f64>>,
    value: impl Fn(&Matrix3<f64>) -> T,
    compare: impl Fn(&T, &T) -> Ordering,
) {
    if pool.len() < 2 {
        return;
    }
    let values: Vec<T> = pool.iter().map(value).collect();
    let Some(best) = values.iter().reduce(|best, value| if compare(value, best).is_gt() { value } else { best }) else {
        return;
    };
    let mut kept = values.iter().map(|value| compare(value, best).is_eq());
    pool.retain(|_| kept.next().unwrap_or(false));
}

fn compare(a: &[f64], b: &[f64], alike: f64) -> Ordering {
    let first = a.iter().zip(b).find(|(a, b)| (*a - *b).abs() > alike);
    first.map_or(Ordering::Equal, |(a, b)| a.total_cmp(b))
}
