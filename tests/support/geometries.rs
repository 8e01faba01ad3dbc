//! Sets of sites built from formulas, with invented but sensible distances in bohr, and ways to move and disturb them.

use nalgebra::{Matrix3, Point3, Rotation3, Unit, Vector3};
use orbsieve::group::{GroupName, PointGroup, Site};

/// One ångström in bohr.
pub const ANGSTROM: f64 = 1.0 / 0.529_177_210_903;

/// A fixed sequence of numbers (xorshift), the same on every machine.
pub struct Random(u64);

impl Random {
    pub fn new(seed: u64) -> Self {
        let mut random = Self(seed.wrapping_mul(0x9E37_79B9_7F4A_7C15) | 1);
        for _ in 0..8 {
            random.unit();
        }
        random
    }

    /// From 0 to 1.
    pub fn unit(&mut self) -> f64 {
        self.0 ^= self.0 << 13;
        self.0 ^= self.0 >> 7;
        self.0 ^= self.0 << 17;
        (self.0 >> 11) as f64 / (1_u64 << 53) as f64
    }

    /// Within a ball of radius 1.
    fn in_ball(&mut self) -> Vector3<f64> {
        loop {
            let place = Vector3::from_fn(|_, _| 2.0 * self.unit() - 1.0);
            if place.norm() <= 1.0 {
                return place;
            }
        }
    }

    fn rotation(&mut self) -> Rotation3<f64> {
        let axis = Unit::new_normalize(self.in_ball() + Vector3::new(0.0, 0.0, 1e-3));
        Rotation3::from_axis_angle(&axis, std::f64::consts::TAU * self.unit())
    }
}

/// Turned, shifted and reordered at random.
pub fn scrambled(sites: &[Site], random: &mut Random) -> Vec<Site> {
    let (turn, shift) = (random.rotation(), random.in_ball() * 20.0);
    let mut moved: Vec<(f64, Site)> = sites
        .iter()
        .map(|site| (random.unit(), Site { kind: site.kind, position: turn * site.position + shift }))
        .collect();
    moved.sort_by(|a, b| a.0.total_cmp(&b.0));
    moved.into_iter().map(|(_, site)| site).collect()
}

/// Every site moved by at most `epsilon`.
pub fn disturbed(sites: &[Site], epsilon: f64, random: &mut Random) -> Vec<Site> {
    sites.iter().map(|site| Site { kind: site.kind, position: site.position + random.in_ball() * epsilon }).collect()
}

/// Sites of three kinds on a shaken lattice inside a ball.
pub fn generic(n: u16, seed: u64) -> Vec<Site> {
    let mut random = Random::new(seed);
    // A ball of radius `half` holds 4.19 half³ lattice points.
    let half = (1..40).find(|half: &i32| 4 * half.pow(3) > i32::from(n)).unwrap();
    let mut places: Vec<Vector3<f64>> = Vec::new();
    for i in -half..=half {
        for j in -half..=half {
            for k in -half..=half {
                places.push(Vector3::new(f64::from(i), f64::from(j), f64::from(k)) * 4.5 + random.in_ball() * 1.2);
            }
        }
    }
    places.sort_by(|a, b| a.norm().total_cmp(&b.norm()));
    places.truncate(usize::from(n));
    places.iter().map(|x| site(u32::from(random.unit() < 0.5), *x)).collect()
}

/// Orbits of points of no symmetry under the group, each of its own kind.
pub fn sites_of_group(name: GroupName) -> Vec<Site> {
    let group = PointGroup::standard(name).unwrap();
    let n_orbits = if group.order() <= 2 { 5 } else { 3 };
    // Large rings need large radii to keep their sites apart.
    let radius = 4.0 + 0.6 * (group.order() as f64);
    let mut sites = Vec::new();
    for orbit in 0..n_orbits {
        let k = f64::from(orbit);
        let angle = 0.31 / (1.0 + 0.1 * group.order() as f64) * (1.0 + 1.7 * k);
        let point = Vector3::new(
            radius * (1.0 + 0.13 * k) * angle.cos(),
            radius * (1.0 + 0.13 * k) * angle.sin(),
            2.1 + 1.3 * k * k - 0.4 * k + 0.31 * radius,
        );
        sites.extend(group.elements().iter().map(|element| site(orbit, element.operation.matrix() * point)));
    }
    sites
}

/// Kind 0 is the heaviest atom.
fn site(kind: u32, position: Vector3<f64>) -> Site {
    Site { kind, position: position.into() }
}

fn at(kind: u32, x: f64, y: f64, z: f64) -> Site {
    Site { kind, position: Point3::new(x, y, z) }
}

/// n sites round z, the first at `degrees` from x.
fn ring(kind: u32, n: u32, radius: f64, height: f64, degrees: f64) -> Vec<Site> {
    (0..n)
        .map(|k| {
            let angle = degrees.to_radians() + std::f64::consts::TAU * f64::from(k) / f64::from(n);
            at(kind, radius * angle.cos(), radius * angle.sin(), height)
        })
        .collect()
}

/// All images of sites under products of the generators.
fn orbit(generators: &[Matrix3<f64>], sites: &[Site]) -> Vec<Site> {
    let mut images = sites.to_vec();
    let mut next = 0;
    while next < images.len() {
        for generator in generators {
            let image = Site { kind: images[next].kind, position: generator * images[next].position };
            if !images.iter().any(|known| known.kind == image.kind && (known.position - image.position).norm() < 1e-6) {
                images.push(image);
            }
        }
        next += 1;
    }
    images
}

fn turn(axis: Vector3<f64>, degrees: f64) -> Matrix3<f64> {
    Rotation3::from_axis_angle(&Unit::new_normalize(axis), degrees.to_radians()).into_inner()
}

fn ethane(twist: f64, other_end: u32) -> Vec<Site> {
    let mut sites = vec![at(0, 0.0, 0.0, 1.45), at(0, 0.0, 0.0, -1.45)];
    sites.extend(ring(1, 3, 1.93, 2.2, 0.0));
    sites.extend(ring(other_end, 3, 1.93, -2.2, twist));
    sites
}

/// Two five-rings with hydrogens above and below an atom, one of them twisted by so many degrees.
pub fn sandwich(twist: f64) -> Vec<Site> {
    let mut sites = vec![at(0, 0.0, 0.0, 0.0)];
    for (height, degrees) in [(3.1, 0.0), (-3.1, twist)] {
        sites.extend(ring(1, 5, 2.3, height, degrees));
        sites.extend(ring(2, 5, 4.33, 1.01 * height, degrees));
    }
    sites
}

/// S4 about z as powers of one matrix.
fn s4() -> Matrix3<f64> {
    Matrix3::new(0.0, 1.0, 0.0, -1.0, 0.0, 0.0, 0.0, 0.0, -1.0)
}

/// Saddle-shaped ring of eight with one hydrogen each; half of these exchanged for another kind.
fn tub(substituted: bool) -> Vec<Site> {
    let half_turn = turn(Vector3::x(), 180.0);
    let mut sites = orbit(&[s4(), half_turn], &[at(0, 3.1, 1.26, 0.73)]);
    let hydrogen = at(1, 4.7, 2.1, 1.3);
    if substituted {
        sites.extend(orbit(&[s4()], &[hydrogen]));
        sites.extend(orbit(&[s4()], &[Site { kind: 2, position: half_turn * hydrogen.position }]));
    } else {
        sites.extend(orbit(&[s4(), half_turn], &[hydrogen]));
    }
    sites
}

/// Flat six-rings bound through a nitrogen in the directions of the six half-axes, each turned about its own bond.
fn six_rings(twist: f64) -> Vec<Site> {
    let mut ligand = Vec::new();
    for (kind, across, along) in
        [(1, 0.0, 4.0), (2, 2.2, 5.2), (2, 2.3, 7.8), (2, 0.0, 9.1), (3, 4.0, 4.2), (3, 4.1, 8.8), (3, 0.0, 11.2)]
    {
        let place = turn(Vector3::z(), twist) * Vector3::new(across, 0.0, along);
        ligand.push(site(kind, place));
    }
    let cycle = turn(Vector3::new(1.0, 1.0, 1.0), 120.0);
    let mut sites = vec![at(0, 0.0, 0.0, 0.0)];
    sites.extend(orbit(&[turn(Vector3::z(), 180.0), turn(Vector3::x(), 180.0), cycle], &ligand));
    sites
}

/// Three flat six-rings on one atom, all turned the same way about their bonds, and a fourth substituent on the axis.
fn propeller() -> Vec<Site> {
    let mut blade = Vec::new();
    for k in 0..6 {
        let angle = f64::from(k) * std::f64::consts::FRAC_PI_3;
        for (kind, radius) in [(1, 2.63), (2, 4.69)] {
            if kind == 2 && k == 3 {
                continue;
            }
            let flat = Vector3::new(radius * angle.cos() + 5.5, radius * angle.sin(), 0.0);
            blade.push(site(kind, turn(Vector3::y(), 17.0) * turn(Vector3::x(), 42.0) * flat));
        }
    }
    let mut sites = vec![at(0, 0.0, 0.0, 0.0), at(3, 0.0, 0.0, 2.0)];
    sites.extend(orbit(&[turn(Vector3::z(), 120.0)], &blade));
    sites
}

fn icosahedron(kind: u32, radius: f64) -> Vec<Site> {
    let golden = f64::midpoint(1.0, 5.0_f64.sqrt());
    even_orders_and_signs(kind, [0.0, 1.0, golden], radius / (1.0 + golden * golden).sqrt())
}

fn even_orders_and_signs(kind: u32, [a, b, c]: [f64; 3], scale: f64) -> Vec<Site> {
    let mut sites: Vec<Site> = Vec::new();
    for signs in 0..8_u32 {
        let sign = |bit: u32| if (signs >> bit) & 1 == 0 { scale } else { -scale };
        let (x, y, z) = (a * sign(0), b * sign(1), c * sign(2));
        for place in [[x, y, z], [y, z, x], [z, x, y]] {
            let place = Vector3::from(place);
            if !sites.iter().any(|known| (known.position.coords - place).norm() < 1e-9) {
                sites.push(site(kind, place));
            }
        }
    }
    sites
}

fn buckyball() -> Vec<Site> {
    let golden = f64::midpoint(1.0, 5.0_f64.sqrt());
    [[0.0, 1.0, 3.0 * golden], [1.0, 2.0 + golden, 2.0 * golden], [golden, 2.0, 2.0 * golden + 1.0]]
        .into_iter()
        .flat_map(|corner| even_orders_and_signs(0, corner, 1.35))
        .collect()
}

fn naphthalene() -> Vec<Site> {
    // Two hexagons of edge 2.65 sharing the edge on y.
    let edge: f64 = 2.65;
    let across = edge * 3.0_f64.sqrt();
    let mut sites = vec![at(0, 0.0, 0.5 * edge, 0.0), at(0, 0.0, -0.5 * edge, 0.0)];
    for (sx, sy) in [(1.0, 1.0), (1.0, -1.0), (-1.0, 1.0), (-1.0, -1.0)] {
        sites.push(at(0, sx * 0.5 * across, sy * edge, 0.0));
        sites.push(at(0, sx * across, sy * 0.5 * edge, 0.0));
        sites.push(at(1, sx * 0.5 * across, sy * (edge + 2.05), 0.0));
        sites.push(at(1, sx * (across + 1.78), sy * (0.5 * edge + 1.02), 0.0));
    }
    sites
}

/// The geometry of this name.
pub fn molecule(text: &str) -> Vec<Site> {
    molecules().into_iter().find(|(name, ..)| *name == text).unwrap().2
}

/// Name, point group by common practice, sites.
pub fn molecules() -> Vec<(&'static str, &'static str, Vec<Site>)> {
    let tetrahedron = [(1.0, 1.0, 1.0), (1.0, -1.0, -1.0), (-1.0, 1.0, -1.0), (-1.0, -1.0, 1.0)];
    let octahedron = ring(1, 4, 4.0, 0.0, 0.0).into_iter().chain([at(1, 0.0, 0.0, 4.0), at(1, 0.0, 0.0, -4.0)]);
    let with_centre = |sites: Vec<Site>| [vec![at(0, 0.0, 0.0, 0.0)], sites].concat();
    let tetra = |kind, scale: f64| -> Vec<Site> {
        tetrahedron.iter().map(|&(x, y, z)| at(kind, x * scale, y * scale, z * scale)).collect()
    };
    let arm = [at(1, 1.7, 1.7, 1.7), at(2, 2.5, 3.2, 0.8)];
    let chelate = [at(1, 2.9, 1.1, 2.0), at(2, 4.6, 2.9, 1.3), at(3, 5.3, 4.6, 2.4)];
    vec![
        ("water", "C2v", vec![at(0, 0.0, 0.0, 0.0), at(1, 1.431, 0.0, 1.109), at(1, -1.431, 0.0, 1.109)]),
        ("pyramidal XY3", "C3v", with_centre(ring(1, 3, 1.77, 0.72, 0.0))),
        ("planar XY3", "D3h", with_centre(ring(1, 3, 2.5, 0.0, 10.0))),
        ("ethane eclipsed", "D3h", ethane(0.0, 1)),
        ("ethane staggered", "D3d", ethane(60.0, 1)),
        ("ethane skew", "D3", ethane(20.0, 1)),
        ("ethane skew, one end substituted", "C3", ethane(20.0, 2)),
        ("ethane staggered, one end substituted", "C3v", ethane(60.0, 2)),
        ("benzene", "D6h", [ring(0, 6, 2.63, 0.0, 0.0), ring(1, 6, 4.69, 0.0, 0.0)].concat()),
        ("tub", "D2d", tub(false)),
        ("tub substituted", "S4", tub(true)),
        ("sandwich eclipsed", "D5h", sandwich(0.0)),
        ("sandwich staggered", "D5d", sandwich(36.0)),
        ("sandwich in between", "D5", sandwich(15.0)),
        ("four arms", "S4", with_centre(orbit(&[s4()], &arm))),
        ("propeller", "C3", propeller()),
        ("tris-chelate", "D3", with_centre(orbit(&[turn(Vector3::z(), 120.0), turn(Vector3::x(), 180.0)], &chelate))),
        ("six ligands", "Oh", with_centre(octahedron.collect())),
        ("six flat rings", "Th", six_rings(0.0)),
        ("six twisted rings", "T", six_rings(20.0)),
        ("square pyramid", "C4v", with_centre([ring(1, 4, 3.6, -0.6, 0.0), vec![at(1, 0.0, 0.0, 3.3)]].concat())),
        ("square MX4", "D4h", with_centre(ring(1, 4, 4.2, 0.0, 20.0))),
        ("two squares", "D4h", [ring(0, 4, 3.0, 0.0, 0.0), ring(1, 4, 5.0, 0.0, 45.0)].concat()),
        (
            "tetrahedral MX2Y2",
            "C2v",
            vec![
                at(0, 0.0, 0.0, 0.0),
                at(1, 3.2, 0.0, 2.3),
                at(1, -3.2, 0.0, 2.3),
                at(2, 0.0, 3.2, -2.3),
                at(2, 0.0, -3.2, -2.3),
            ],
        ),
        (
            "two bridges",
            "D2h",
            vec![
                at(0, 1.7, 0.0, 0.0),
                at(0, -1.7, 0.0, 0.0),
                at(1, 0.0, 1.9, 0.0),
                at(1, 0.0, -1.9, 0.0),
                at(1, 2.8, 0.0, 1.95),
                at(1, 2.8, 0.0, -1.95),
                at(1, -2.8, 0.0, 1.95),
                at(1, -2.8, 0.0, -1.95),
            ],
        ),
        ("linear XYZ", "Cinfv", vec![at(0, 0.0, 0.0, 0.0), at(1, 0.0, 0.0, 2.2), at(2, 0.0, 0.0, -2.0)]),
        ("linear XYX", "Dinfh", vec![at(0, 0.0, 0.0, 0.0), at(1, 2.2, 0.0, 0.0), at(1, -2.2, 0.0, 0.0)]),
        ("tetrahedron MX4", "Td", with_centre(tetra(1, 1.9))),
        ("tetrahedron X4", "Td", tetra(0, 1.5)),
        ("icosahedral cage", "Ih", [icosahedron(0, 3.2), icosahedron(1, 5.5)].concat()),
        ("buckyball", "Ih", buckyball()),
        (
            "ethene",
            "D2h",
            vec![
                at(0, 1.26, 0.0, 0.0),
                at(0, -1.26, 0.0, 0.0),
                at(1, 2.33, 1.75, 0.0),
                at(1, 2.33, -1.75, 0.0),
                at(1, -2.33, 1.75, 0.0),
                at(1, -2.33, -1.75, 0.0),
            ],
        ),
        ("naphthalene", "D2h", naphthalene()),
        (
            "bent XY2 with two Z across",
            "C2v",
            vec![
                at(0, 0.0, 0.0, 0.0),
                at(1, 2.4, 0.0, 1.5),
                at(1, -2.4, 0.0, 1.5),
                at(1, 4.8, 0.0, 0.3),
                at(1, -4.8, 0.0, 0.3),
                at(2, 0.0, 1.7, -1.2),
                at(2, 0.0, -1.7, -1.2),
            ],
        ),
        (
            "pyramid of four kinds",
            "C1",
            vec![at(0, 0.0, 0.0, 0.5), at(1, 2.0, 0.0, 0.0), at(2, -1.2, 1.9, 0.0), at(3, -1.3, -2.1, 0.0)],
        ),
        ("three kinds", "Cs", vec![at(0, 0.0, 0.0, 0.0), at(1, 2.0, 0.0, 0.0), at(2, -0.9, 2.3, 0.0)]),
    ]
}
