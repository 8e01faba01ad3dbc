//! Pixels with depth: shaded triangles, spheres, sticks and strokes under a parallel projection.
//!
//! Every layer keeps what is nearest to the eye. Not here: what is drawn (`picture::orbital`), colours (`picture::ink`).

use super::ink::{Colour, Pixels};
use super::surface::Vertex;
use super::view::View;
use nalgebra::Vector3;

/// Pixels drawn for one that is kept, along each side: smooth edges.
const FINER: usize = 2;

/// From the left, above and before the paper.
const LIGHT: Vector3<f64> = Vector3::new(-0.416, 0.541, 0.731);

/// A colour as it looks on a surface with this normal (right, up, towards the eye).
///
/// Ambient and diffuse light, a little gloss, and darker where the surface turns away, which draws its outline.
/// Reflection by the cosine law and the half-way vector: common practice.
fn shaded(colour: Colour, normal: Vector3<f64>) -> Colour {
    let normal = if normal.z < 0.0 { -normal } else { normal };
    let diffuse = normal.dot(&LIGHT).max(0.0);
    let half_way = (LIGHT + Vector3::z()).normalize();
    let gloss = 0.22 * normal.dot(&half_way).max(0.0).powi(30);
    let outline = (normal.z / 0.35).min(1.0) * 0.45 + 0.55;
    colour.map(|channel| (channel * (0.50 + 0.52 * diffuse) * outline + gloss).min(1.0))
}

/// What is nearest at each pixel.
pub struct Layer {
    depth: Vec<f64>,
    colour: Vec<Colour>,
}

/// Which part of space is on the paper.
pub struct Raster<'a> {
    view: &'a View,
    /// Pixels a side, before they are joined.
    side: usize,
    /// Pixels a bohr.
    scale: f64,
    /// Right and up of the middle, bohr.
    middle: (f64, f64),
}

impl<'a> Raster<'a> {
    /// A square of `side` pixels over the box of projected places from `low` to `high`, with a margin.
    pub fn over(view: &'a View, side: usize, low: Vector3<f64>, high: Vector3<f64>) -> Self {
        let side = side * FINER;
        let span = (high.x - low.x).max(high.y - low.y).max(1.0) * 1.06;
        Self {
            view,
            side,
            scale: side as f64 / span,
            middle: (f64::midpoint(low.x, high.x), f64::midpoint(low.y, high.y)),
        }
    }

    /// Pixels a side as they are drawn, before they are joined.
    pub fn pixels(&self) -> f64 {
        self.side as f64
    }

    /// A layer with nothing on it.
    pub fn layer(&self) -> Layer {
        let n = self.side * self.side;
        Layer { depth: vec![f64::NEG_INFINITY; n], colour: vec![[0.0; 3]; n] }
    }

    /// Pixel coordinates (from the left, from the top) and depth in bohr.
    fn pixel(&self, place: &Vector3<f64>) -> Vector3<f64> {
        let seen = self.view.project(place);
        let half = self.side as f64 / 2.0;
        Vector3::new(half + (seen.x - self.middle.0) * self.scale, half - (seen.y - self.middle.1) * self.scale, seen.z)
    }

    /// Visits the pixels in a box by their middles.
    fn visit(&self, low: (f64, f64), high: (f64, f64), mut see: impl FnMut(usize, f64, f64)) {
        let (left, right) = (self.clamped(low.0), self.clamped(high.0 + 1.0));
        let (top, bottom) = (self.clamped(low.1), self.clamped(high.1 + 1.0));
        for row in top..bottom {
            for column in left..right {
                see(row * self.side + column, column as f64 + 0.5, row as f64 + 0.5);
            }
        }
    }

    #[expect(clippy::cast_possible_truncation, clippy::cast_sign_loss, reason = "clamped to the paper")]
    fn clamped(&self, x: f64) -> usize {
        x.clamp(0.0, self.side as f64) as usize
    }

    /// A triangle with normals between those of its corners; `ink` says its colour at a pixel.
    pub fn triangle(&self, layer: &mut Layer, corners: &[Vertex; 3], ink: impl Fn(f64, f64) -> Colour) {
        let [a, b, c] = corners.map(|corner| self.pixel(&corner.place));
        let normals = corners.map(|corner| self.view.project(&corner.normal));
        let area = (b.x - a.x) * (c.y - a.y) - (c.x - a.x) * (b.y - a.y);
        if area.abs() < 1e-12 {
            return;
        }
        let low = (a.x.min(b.x).min(c.x), a.y.min(b.y).min(c.y));
        let high = (a.x.max(b.x).max(c.x), a.y.max(b.y).max(c.y));
        self.visit(low, high, |at, x, y| {
            let v = ((x - a.x) * (c.y - a.y) - (c.x - a.x) * (y - a.y)) / area;
            let w = ((b.x - a.x) * (y - a.y) - (x - a.x) * (b.y - a.y)) / area;
            let u = 1.0 - v - w;
            // A hair over the edge, so that no gap shows between neighbours.
            if u.min(v).min(w) >= -1e-9 {
                let normal = normals[0] * u + normals[1] * v + normals[2] * w;
                let normal = normal.try_normalize(1e-12).unwrap_or_else(Vector3::z);
                layer.paint(at, a.z * u + b.z * v + c.z * w, || shaded(ink(x, y), normal));
            }
        });
    }

    /// A sphere.
    pub fn sphere(&self, layer: &mut Layer, place: &Vector3<f64>, radius: f64, colour: Colour) {
        let middle = self.pixel(place);
        let reach = radius * self.scale;
        self.visit((middle.x - reach, middle.y - reach), (middle.x + reach, middle.y + reach), |at, x, y| {
            let (right, up) = ((x - middle.x) / reach, (middle.y - y) / reach);
            let rest = 1.0 - right * right - up * up;
            if rest >= 0.0 {
                let normal = Vector3::new(right, up, rest.sqrt());
                layer.paint(at, middle.z + radius * normal.z, || shaded(colour, normal));
            }
        });
    }

    /// A stick between two places, seen from the side.
    pub fn stick(&self, layer: &mut Layer, ends: [&Vector3<f64>; 2], radius: f64, colours: [Colour; 2]) {
        let [a, b] = ends.map(|end| self.pixel(end));
        let reach = radius * self.scale;
        let along = Vector3::new(b.x - a.x, b.y - a.y, 0.0);
        let length = along.norm();
        // Seen from its end a stick hides behind its atom.
        let Some(direction) = along.try_normalize(1e-6) else { return };
        let low = (a.x.min(b.x) - reach, a.y.min(b.y) - reach);
        let high = (a.x.max(b.x) + reach, a.y.max(b.y) + reach);
        self.visit(low, high, |at, x, y| {
            let from = Vector3::new(x - a.x, y - a.y, 0.0);
            let t = from.dot(&direction) / length;
            let aside = (from.x * direction.y - from.y * direction.x) / reach;
            if (0.0..=1.0).contains(&t) && aside.abs() <= 1.0 {
                let towards = (1.0 - aside * aside).sqrt();
                // The direction across the stick, up being against the rows.
                let normal = Vector3::new(direction.y * aside, direction.x * aside, towards);
                let depth = a.z + (b.z - a.z) * t + radius * towards;
                layer.paint(at, depth, || shaded(colours[usize::from(t > 0.5)], normal));
            }
        });
    }

    /// A stroke on the paper itself between two points in shares of the side, from the left and from the top.
    pub fn stroke(&self, layer: &mut Layer, a: (f64, f64), b: (f64, f64), width: f64, colour: Colour) {
        let side = self.side as f64;
        let [a, b] = [a, b].map(|end| (end.0 * side, end.1 * side));
        let reach = width * side / 2.0;
        let (dx, dy) = (b.0 - a.0, b.1 - a.1);
        let length = (dx * dx + dy * dy).max(1e-12);
        let low = (a.0.min(b.0) - reach, a.1.min(b.1) - reach);
        let high = (a.0.max(b.0) + reach, a.1.max(b.1) + reach);
        self.visit(low, high, |at, x, y| {
            let t = (((x - a.0) * dx + (y - a.1) * dy) / length).clamp(0.0, 1.0);
            if (x - a.0 - t * dx).hypot(y - a.1 - t * dy) <= reach {
                layer.paint(at, 0.0, || colour);
            }
        });
    }

    /// Surfaces over the skeleton, which shines through them by `clarity`, strokes over both; `FINER`² pixels joined into one.
    pub fn join(&self, skeleton: &Layer, surfaces: &Layer, strokes: &Layer, clarity: f64) -> Pixels {
        let seen = |at: usize| -> Option<Colour> {
            if strokes.is_painted(at) {
                return Some(strokes.colour[at]);
            }
            match (surfaces.is_painted(at), skeleton.is_painted(at)) {
                (false, false) => None,
                (true, true) if surfaces.depth[at] > skeleton.depth[at] => Some(std::array::from_fn(|channel| {
                    (1.0 - clarity) * surfaces.colour[at][channel] + clarity * skeleton.colour[at][channel]
                })),
                (true, false) => Some(surfaces.colour[at]),
                (_, true) => Some(skeleton.colour[at]),
            }
        };
        let side = self.side / FINER;
        let share = 1.0 / (FINER * FINER) as f64;
        let mut rgba = Vec::with_capacity(side * side);
        for row in 0..side {
            for column in 0..side {
                let mut sum = [0.0; 3];
                let mut painted = 0.0_f64;
                for fine in 0..FINER * FINER {
                    let at = (row * FINER + fine / FINER) * self.side + column * FINER + fine % FINER;
                    if let Some(colour) = seen(at) {
                        painted += 1.0;
                        sum.iter_mut().zip(colour).for_each(|(sum, channel)| *sum += channel);
                    }
                }
                let [red, green, blue] = sum.map(|channel| channel / painted.max(1.0));
                rgba.push([red, green, blue, painted * share]);
            }
        }
        Pixels { side, rgba }
    }
}

impl Layer {
    fn paint(&mut self, at: usize, depth: f64, colour: impl FnOnce() -> Colour) {
        if depth > self.depth[at] {
            self.depth[at] = depth;
            self.colour[at] = colour();
        }
    }

    fn is_painted(&self, at: usize) -> bool {
        self.depth[at] > f64::NEG_INFINITY
    }
}
