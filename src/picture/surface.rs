//! The surface of a constant value as triangles, by marching tetrahedra.
//!
//! Each cube of the grid is parted into the six tetrahedra around its main diagonal, so that neighbours share their faces
//! and the surface has no holes and no ambiguous case. Method: "An efficient method of triangulating equi-valued surfaces by using
//! tetrahedral cells", IEICE Transactions E74, 214 (1991); title and page from memory.
//! Not here: which value (`picture::grid`), drawing (`picture::raster`).

use super::grid::Grid;
use nalgebra::Vector3;

/// A corner of a triangle.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Vertex {
    /// Place in the standard frame, bohr.
    pub place: Vector3<f64>,
    /// Unit vector out of the region enclosed.
    pub normal: Vector3<f64>,
}

/// Three corners, anticlockwise seen from outside.
pub type Triangle = [Vertex; 3];

/// Steps along the axes in the six orders: the paths from one end of the main diagonal to the other.
const PATHS: [[usize; 3]; 6] = [[0, 1, 2], [0, 2, 1], [1, 0, 2], [1, 2, 0], [2, 0, 1], [2, 1, 0]];

/// A point of the grid with its value.
#[derive(Clone, Copy)]
struct Corner {
    indices: [usize; 3],
    excess: f64,
}

/// The surface around the region in which `sign`·ψ exceeds `level`.
///
/// # Holds
/// Every edge belongs to two triangles, except at the border of the grid. Normals are gradients of ψ, interpolated.
#[must_use]
pub fn surface(grid: &Grid, values: &[f64], sign: f64, level: f64) -> Vec<Triangle> {
    let field = Field { grid, values, sign, level };
    let mut triangles = Vec::new();
    let cells = Grid { counts: grid.counts.map(|count| count.saturating_sub(1)), ..grid.clone() };
    for first in cells.indices() {
        let cube: [Corner; 8] =
            std::array::from_fn(|bits| field.corner(std::array::from_fn(|axis| first[axis] + (bits >> axis & 1))));
        let inside = cube.iter().filter(|corner| corner.excess > 0.0).count();
        if inside == 0 || inside == 8 {
            continue;
        }
        for path in PATHS {
            let second = 1 << path[0];
            let third = second | 1 << path[1];
            field.tetrahedron([cube[0], cube[second], cube[third], cube[7]], &mut triangles);
        }
    }
    triangles
}

struct Field<'a> {
    grid: &'a Grid,
    values: &'a [f64],
    sign: f64,
    level: f64,
}

impl Field<'_> {
    fn value(&self, indices: [usize; 3]) -> f64 {
        self.sign * self.values[self.grid.at(indices)]
    }

    fn corner(&self, indices: [usize; 3]) -> Corner {
        Corner { indices, excess: self.value(indices) - self.level }
    }

    /// Difference quotient over both neighbours, one-sided at the border; times the step.
    fn gradient(&self, indices: [usize; 3]) -> Vector3<f64> {
        Vector3::from_fn(|axis, _| {
            let (mut below, mut above) = (indices, indices);
            below[axis] = below[axis].saturating_sub(1);
            above[axis] = (above[axis] + 1).min(self.grid.counts[axis] - 1);
            (self.value(above) - self.value(below)) / (above[axis] - below[axis]).max(1) as f64
        })
    }

    /// Where the level is crossed between a corner inside and one outside.
    fn crossing(&self, a: Corner, b: Corner) -> Vertex {
        // The same order from every tetrahedron gives the same bits.
        let (a, b) = if a.indices < b.indices { (a, b) } else { (b, a) };
        let t = a.excess / (a.excess - b.excess);
        let place = self.grid.place(a.indices).lerp(&self.grid.place(b.indices), t);
        let normal = -self.gradient(a.indices).lerp(&self.gradient(b.indices), t);
        Vertex { place, normal: normal.try_normalize(0.0).unwrap_or_else(Vector3::z) }
    }

    /// One triangle where one corner lies apart from the other three, two where it is two against two.
    fn tetrahedron(&self, corners: [Corner; 4], triangles: &mut Vec<Triangle>) {
        let inside: Vec<Corner> = corners.iter().copied().filter(|corner| corner.excess > 0.0).collect();
        let outside: Vec<Corner> = corners.iter().copied().filter(|corner| corner.excess <= 0.0).collect();
        let mut push = |a, b, c| triangles.push(outward([a, b, c]));
        match (inside.as_slice(), outside.as_slice()) {
            (&[one], &[a, b, c]) | (&[a, b, c], &[one]) => {
                push(self.crossing(one, a), self.crossing(one, b), self.crossing(one, c));
            }
            (&[a, b], &[c, d]) => {
                let [ac, ad, bc, bd] = [(a, c), (a, d), (b, c), (b, d)].map(|(p, q)| self.crossing(p, q));
                push(ac, ad, bd);
                push(ac, bd, bc);
            }
            _ => {}
        }
    }
}

/// Turns the corners round where they do not run anticlockwise about the normals.
fn outward([a, b, c]: Triangle) -> Triangle {
    let face = (b.place - a.place).cross(&(c.place - a.place));
    if face.dot(&(a.normal + b.normal + c.normal)) < 0.0 { [a, c, b] } else { [a, b, c] }
}
