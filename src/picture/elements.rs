//! The symmetry elements of a group as lines, planes and a point, and the molecule among them as SVG.
//!
//! Axes carry at both ends the sign that crystallographers print for their order: two arcs, triangle, square, …
//! Colours are left to the page (`currentColor`, classes). Not here: operations (`group`), the turnable form (`page`).

use super::skeleton::Skeleton;
use super::view::View;
use crate::group::operation::Kind;
use crate::group::{GroupName, PointGroup};
use nalgebra::{Rotation3, Unit, Vector3};
use std::f64::consts::TAU;
use std::fmt::Write as _;
use svg::Document;
use svg::node::element::{Circle, Description, Group, Line, Path, Polygon, Text, Title};

/// Two directions are one when they differ by no more than this.
const SAME: f64 = 1e-6;
/// Units a side of the drawing.
const SIDE: f64 = 480.0;

/// An axis with everything that happens about it.
#[derive(Debug, Clone, PartialEq)]
pub struct Axis {
    /// Unit vector in the standard frame.
    pub direction: Vector3<f64>,
    /// Order of its rotations, 1 where there are only rotary reflections; 0 for a continuous axis.
    pub fold: u32,
    /// Order of its rotary reflections, 0 without any.
    pub rotary: u32,
    /// Symbols of its operations of the highest order: `C3` and `S6`.
    pub names: Vec<String>,
}

/// A mirror plane.
#[derive(Debug, Clone, PartialEq)]
pub struct Plane {
    /// Unit normal in the standard frame.
    pub normal: Vector3<f64>,
    /// Symbol, `sigma_d`.
    pub name: String,
}

/// All elements through the centre.
#[derive(Debug, Clone, PartialEq, Default)]
pub struct Elements {
    /// In the order of the group's operations.
    pub axes: Vec<Axis>,
    /// Likewise.
    pub planes: Vec<Plane>,
    /// A centre of inversion.
    pub centre: bool,
}

/// `2C3` → `C3`.
fn bare(symbol: &str) -> String {
    symbol.trim_start_matches(|sign: char| sign.is_ascii_digit()).to_owned()
}

#[expect(clippy::cast_possible_truncation, clippy::cast_sign_loss, reason = "a positive number up to some dozens")]
fn fold_of(angle: f64) -> u32 {
    (TAU / angle).round() as u32
}

/// Reads the elements off the operations; of a linear molecule the axis, what lies across it, and the centre.
#[must_use]
pub fn elements(group: &PointGroup) -> Elements {
    let continuous = group.name().is_continuous();
    let mut found = Elements::default();
    if group.name() == GroupName::K {
        return found;
    }
    for element in group.elements() {
        let name = bare(&group.classes()[element.class_idx].symbol);
        match element.operation.kind() {
            Kind::Identity => {}
            Kind::Inversion => found.centre = true,
            Kind::Reflection { normal } => {
                // Of a continuous family no member stands out.
                if !continuous || normal.z.abs() > 1.0 - SAME {
                    found.planes.push(Plane { normal: normal.into_inner(), name });
                }
            }
            Kind::Rotation { axis, angle } => found.add_axis(axis, Some(fold_of(angle)), name, angle, continuous),
            Kind::Improper { axis, angle } => found.add_axis(axis, None, name, angle, continuous),
        }
    }
    found
}

impl Elements {
    fn add_axis(&mut self, axis: Unit<Vector3<f64>>, fold: Option<u32>, name: String, angle: f64, continuous: bool) {
        let axis = axis.into_inner();
        if continuous {
            if axis.z.abs() > 1.0 - SAME && self.axes.is_empty() {
                self.axes.push(Axis { direction: Vector3::z(), fold: 0, rotary: 0, names: vec!["Cinf".to_owned()] });
            }
            return;
        }
        let same = |other: &Axis| axis.cross(&other.direction).norm() < SAME;
        let at = self.axes.iter().position(same).unwrap_or_else(|| {
            self.axes.push(Axis { direction: axis, fold: 1, rotary: 0, names: Vec::new() });
            self.axes.len() - 1
        });
        let line = &mut self.axes[at];
        let lowest = fold_of(angle);
        // One turn of the full circle by its order: powers have larger angles, or are no n-th part at all.
        if (angle * f64::from(lowest) - TAU).abs() > 1e-6 || line.names.contains(&name) {
            return;
        }
        match fold {
            Some(fold) if fold > line.fold => {
                line.fold = fold;
                line.names.retain(|name| name.starts_with('S'));
                line.names.insert(0, name);
            }
            None if lowest > line.rotary => {
                line.rotary = lowest;
                line.names.retain(|name| !name.starts_with('S'));
                line.names.push(name);
            }
            _ => {}
        }
    }

    /// Kinds of elements in order of appearance with their numbers: `C3, S6` four times.
    #[must_use]
    pub fn kinds(&self) -> Vec<(String, usize)> {
        let mut kinds: Vec<(String, usize)> = Vec::new();
        let axes = self.axes.iter().map(|axis| axis.names.join(", "));
        for name in axes.chain(self.planes.iter().map(|plane| plane.name.clone())) {
            match kinds.iter_mut().find(|kind| kind.0 == name) {
                Some(kind) => kind.1 += 1,
                None => kinds.push((name, 1)),
            }
        }
        if self.centre {
            kinds.push(("i".to_owned(), 1));
        }
        kinds
    }

    /// Which of the kinds an axis or plane called so is.
    fn kind_of(&self, name: &str) -> usize {
        self.kinds().iter().position(|kind| kind.0 == name).unwrap_or(0)
    }
}

/// Patterns of lines, one a kind, then again from the first.
const DASHES: [&str; 6] = ["none", "7 3", "2 3", "9 3 2 3", "4 2", "1 2"];

/// Pattern of a kind of element.
#[must_use]
pub fn dashes(kind: usize) -> &'static str {
    DASHES[kind % DASHES.len()]
}

/// Where places of the standard frame fall on the drawing.
struct Paper<'a> {
    view: &'a View,
    scale: f64,
}

impl Paper<'_> {
    /// From the left, from the top, and towards the eye.
    fn place(&self, vector: &Vector3<f64>) -> Vector3<f64> {
        let seen = self.view.project(vector) * self.scale;
        Vector3::new(SIDE / 2.0 + seen.x, SIDE / 2.0 - seen.y, seen.z)
    }

    fn path(&self, points: impl Iterator<Item = Vector3<f64>>) -> String {
        let mut path = String::new();
        for (at, point) in points.enumerate() {
            let place = self.place(&point);
            let _ = write!(path, "{}{:.1} {:.1}", if at == 0 { "M" } else { "L" }, place.x, place.y);
        }
        path
    }
}

/// The molecule among its symmetry elements as an SVG drawing of its own.
///
/// Lines and planes reach a little beyond the outermost atom; halves of axes behind the molecule are drawn first.
#[must_use]
pub fn symmetry_elements(skeleton: &Skeleton, group: &PointGroup, view: &View) -> String {
    let shown = elements(group);
    let outermost = skeleton.atoms.iter().map(|atom| atom.place.norm() + atom.radius).fold(1.0, f64::max);
    let reach = 1.18 * outermost;
    let paper = Paper { view, scale: 0.43 * SIDE / reach };
    let mut document = Document::new()
        .set("viewBox", (0, 0, SIDE, SIDE))
        .set("class", "elements")
        .set("role", "img")
        .set("aria-labelledby", "elements-title elements-text")
        .add(Title::new("The molecule with its symmetry elements").set("id", "elements-title"))
        .add(Description::new().set("id", "elements-text").add(svg::node::Text::new(description(&shown, group))));
    for plane in &shown.planes {
        document = document.add(plane_path(plane, &shown, &paper, outermost));
    }
    for towards in [false, true] {
        for axis in &shown.axes {
            document = document.add(half_axis(axis, &shown, &paper, reach, towards));
        }
    }
    document = document.add(molecule(skeleton, &paper));
    // Before the molecule lies only what sticks out of it, so that no symbol is struck through.
    for axis in &shown.axes {
        document = document.add(tip(axis, skeleton, &shown, &paper, reach));
    }
    if shown.centre {
        let centre = paper.place(&Vector3::zeros());
        document =
            document.add(Circle::new().set("class", "centre").set("cx", centre.x).set("cy", centre.y).set("r", 4.5));
    }
    document.add(frame(&paper, reach)).to_string()
}

fn description(shown: &Elements, group: &PointGroup) -> String {
    let kinds: Vec<String> = shown.kinds().iter().map(|(name, count)| format!("{count} × {name}")).collect();
    format!("Point group {}: {}", group.name(), if kinds.is_empty() { "none".to_owned() } else { kinds.join("; ") })
}

/// A disc in the plane, seen from the side.
fn plane_path(plane: &Plane, shown: &Elements, paper: &Paper<'_>, radius: f64) -> Path {
    let onto = Rotation3::rotation_between(&Vector3::z(), &plane.normal)
        .unwrap_or_else(|| Rotation3::from_axis_angle(&Vector3::x_axis(), std::f64::consts::PI));
    let points = (0..60).map(|k| {
        let angle = TAU * f64::from(k) / 60.0;
        onto * Vector3::new(angle.cos(), angle.sin(), 0.0) * radius
    });
    Path::new()
        .set("class", "plane")
        .set("d", format!("{}Z", paper.path(points)))
        .set("stroke-dasharray", dashes(shown.kind_of(&plane.name)))
}

/// The half of an axis on the side of the eye, or behind, with its sign at the end.
fn half_axis(axis: &Axis, shown: &Elements, paper: &Paper<'_>, reach: f64, towards: bool) -> Group {
    let end = sense(axis, paper, towards) * reach;
    let line =
        line(paper, &Vector3::zeros(), &end).set("stroke-dasharray", dashes(shown.kind_of(&axis.names.join(", "))));
    let group = Group::new().set("class", if towards { "axis near" } else { "axis far" }).add(line);
    let end = paper.place(&end);
    sign(axis.fold, end.x, end.y).into_iter().fold(group, Group::add)
}

/// The part of the half towards the eye that lies beyond the last atom on it.
fn tip(axis: &Axis, skeleton: &Skeleton, shown: &Elements, paper: &Paper<'_>, reach: f64) -> Group {
    let direction = sense(axis, paper, true);
    let on_axis = skeleton.atoms.iter().filter_map(|atom| {
        let along = atom.place.dot(&direction);
        (along > 0.0 && (atom.place - direction * along).norm() < atom.radius).then_some(along + 1.4 * atom.radius)
    });
    let Some(start) = on_axis.reduce(f64::max) else { return Group::new() };
    let line = line(paper, &(direction * start.min(reach)), &(direction * reach));
    Group::new()
        .set("class", "axis near")
        .add(line.set("stroke-dasharray", dashes(shown.kind_of(&axis.names.join(", ")))))
}

/// The direction of an axis towards the eye, or away from it.
fn sense(axis: &Axis, paper: &Paper<'_>, towards: bool) -> Vector3<f64> {
    if (paper.place(&axis.direction).z >= 0.0) == towards { axis.direction } else { -axis.direction }
}

fn line(paper: &Paper<'_>, from: &Vector3<f64>, to: &Vector3<f64>) -> Line {
    let (from, to) = (paper.place(from), paper.place(to));
    Line::new().set("x1", tenths(from.x)).set("y1", tenths(from.y)).set("x2", tenths(to.x)).set("y2", tenths(to.y))
}

fn tenths(x: f64) -> f64 {
    (x * 10.0).round() / 10.0
}

/// The printed sign of an axis of this order; a ring for a continuous one.
fn sign(fold: u32, x: f64, y: f64) -> Option<Box<dyn svg::Node>> {
    const SIZE: f64 = 6.0;
    match fold {
        0 => {
            Some(Box::new(Circle::new().set("class", "ring").set("cx", tenths(x)).set("cy", tenths(y)).set("r", SIZE)))
        }
        1 => None,
        2 => {
            let (left, right, y) = (tenths(x - SIZE), tenths(x + SIZE), tenths(y));
            Some(Box::new(
                Path::new().set("d", format!("M{left} {y}A7.5 7.5 0 0 1 {right} {y}A7.5 7.5 0 0 1 {left} {y}Z")),
            ))
        }
        fold => {
            let corners: Vec<String> = (0..fold)
                .map(|k| {
                    let angle = TAU * (f64::from(k) + if fold == 4 { 0.5 } else { 0.0 }) / f64::from(fold);
                    format!("{:.1},{:.1}", x + SIZE * angle.sin(), y - SIZE * angle.cos())
                })
                .collect();
            Some(Box::new(Polygon::new().set("points", corners.join(" "))))
        }
    }
}

/// Atoms and bonds, the farthest first.
fn molecule(skeleton: &Skeleton, paper: &Paper<'_>) -> Group {
    /// Symbols are written into circles of at least this radius.
    const READABLE: f64 = 6.5;
    let mut drawn: Vec<(f64, Group)> = Vec::new();
    for &(a, b) in &skeleton.bonds {
        let [a, b] = [a, b].map(|atom| &skeleton.atoms[atom].place);
        // Behind both of its atoms, so that no symbol is struck through.
        let depth = paper.place(a).z.min(paper.place(b).z) - 1e-6;
        drawn.push((depth, Group::new().add(line(paper, a, b).set("class", "bond"))));
    }
    for (at, atom) in skeleton.atoms.iter().enumerate() {
        let place = paper.place(&atom.place);
        let radius = (atom.radius * paper.scale * 1.1).clamp(3.5, 13.0);
        let mut group = Group::new()
            .set("class", "atom")
            .add(Title::new(format!("{} {}", atom.symbol, at + 1)))
            .add(Circle::new().set("cx", tenths(place.x)).set("cy", tenths(place.y)).set("r", tenths(radius)));
        if radius >= READABLE {
            let size = tenths(radius * 1.15);
            group = group.add(
                Text::new(&atom.symbol)
                    .set("x", tenths(place.x))
                    .set("y", tenths(place.y + 0.36 * size))
                    .set("font-size", size)
                    .set("text-anchor", "middle"),
            );
        }
        drawn.push((place.z, group));
    }
    drawn.sort_by(|a, b| a.0.total_cmp(&b.0));
    drawn.into_iter().fold(Group::new(), |all, (_, group)| all.add(group))
}

/// The letters of the standard frame beyond the ends of its axes.
fn frame(paper: &Paper<'_>, reach: f64) -> Group {
    ["x", "y", "z"].iter().enumerate().fold(Group::new().set("class", "frame"), |group, (axis, letter)| {
        let direction = Vector3::ith(axis, 1.0);
        let text = paper.place(&(direction * reach * 1.11));
        group.add(line(paper, &(direction * reach * 0.92), &(direction * reach * 1.03))).add(
            Text::new(*letter)
                .set("x", tenths(text.x))
                .set("y", tenths(text.y + 5.0))
                .set("font-size", 15)
                .set("font-style", "italic")
                .set("text-anchor", "middle"),
        )
    })
}
