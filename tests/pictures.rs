//! Pictures: values of orbitals against closed forms, norms by summation over a lattice and the law of symmetry; surfaces against spheres
//! and rings; symmetry elements against the counts of textbooks; pixels that do not hang on the number of threads.
#![allow(clippy::unwrap_used, reason = "a test may stop at once")]

use nalgebra::{Matrix3, Point3, Vector3};
use ndarray::{Array2, Axis};
use orbsieve::group::{GroupName, PointGroup};
use orbsieve::labelling::partners::standard_partners;
use orbsieve::labelling::{self, Labelled, Thresholds};
use orbsieve::model::{self, Molecule, Shell, named_atom};
use orbsieve::picture::elements::elements;
use orbsieve::picture::grid::{Grid, level};
use orbsieve::picture::surface::{Triangle, surface};
use orbsieve::picture::{Skeleton, View, ink, orbital_pictures, symmetry_elements};
use orbsieve::wavefunction::basis::Primitives;
use orbsieve::wavefunction::{Basis, values};
use std::collections::BTreeMap;
use std::f64::consts::PI;
use std::path::Path;

/// A molecule of `tests/molecules` with its labels.
fn labelled(name: &str) -> (Molecule, Labelled) {
    let path = Path::new(env!("CARGO_MANIFEST_DIR")).join("tests/molecules").join(name);
    let (mut molecule, _) = model::read_molden(&std::fs::read(path).unwrap()).unwrap();
    let labelled = labelling::label(&mut molecule, &Thresholds::STANDARD).unwrap();
    (molecule, labelled)
}

/// One uncontracted shell at a place off the origin.
fn single(l: usize, pure: bool, exponent: f64, place: [f64; 3]) -> Basis {
    let shell = Shell { atom_idx: 0, l, pure, exponents: vec![exponent], coefficients: vec![1.0] };
    Basis::new(&[named_atom("C", place)], &[shell], Primitives::Normalised)
}

const PLACES: [[f64; 3]; 5] = [[0.0, 0.0, 0.0], [0.7, -0.2, 0.4], [-1.1, 0.6, 0.9], [0.1, -1.5, 0.3], [2.0, 1.0, -1.3]];

#[test]
fn functions_have_the_values_of_their_closed_forms() {
    let (a, place) = (0.83, [0.3, -0.4, 0.2]);
    // Norms of xy and xyz exp(−αr²) from ∫x² exp(−2αx²) = √(π/2α)/4α; the ratios to the others are those of the real spherical
    // harmonics in any table: z², x²−y² of d and z³, xz², z(x²−y²), x(x²−3y²) of f.
    let line = (PI / (2.0 * a)).sqrt();
    let (s, p) = (line.powf(-1.5), (4.0 * a / line.powi(3)).sqrt());
    let (d, f) = (((4.0 * a).powi(2) / line.powi(3)).sqrt(), ((4.0 * a).powi(3) / line.powi(3)).sqrt());
    let (d0, d2) = (d / 12.0_f64.sqrt(), d / 2.0);
    let (f0, f1, f2, f3) = (f / 60.0_f64.sqrt(), f / 40.0_f64.sqrt(), f / 2.0, f / 24.0_f64.sqrt());
    let closed = |l: usize, [x, y, z]: [f64; 3]| -> Vec<f64> {
        let polynomials = match l {
            0 => vec![s],
            1 => vec![p * x, p * y, p * z],
            2 => vec![d0 * (2.0 * z * z - x * x - y * y), d * x * z, d * y * z, d2 * (x * x - y * y), d * x * y],
            _ => vec![
                f0 * z * (2.0 * z * z - 3.0 * x * x - 3.0 * y * y),
                f1 * x * (4.0 * z * z - x * x - y * y),
                f1 * y * (4.0 * z * z - x * x - y * y),
                f2 * z * (x * x - y * y),
                f * x * y * z,
                f3 * x * (x * x - 3.0 * y * y),
                f3 * y * (3.0 * x * x - y * y),
            ],
        };
        let decay = (-a * (x * x + y * y + z * z)).exp();
        polynomials.into_iter().map(|polynomial| polynomial * decay).collect()
    };
    for l in 0..=3 {
        let basis = single(l, true, a, place);
        let rows = Array2::eye(basis.n_functions());
        let found = values(&basis, rows.view(), &PLACES.map(Point3::from));
        for (at, point) in PLACES.iter().enumerate() {
            let relative = std::array::from_fn(|axis| point[axis] - place[axis]);
            for (k, expected) in closed(l, relative).into_iter().enumerate() {
                assert!((found[(k, at)] - expected).abs() < 1e-12, "l {l} function {k}: {} {expected}", found[(k, at)]);
            }
        }
    }
    // Cartesian xx and xy, both of norm one: ∫x⁴ exp(−2αx²) is three times (∫x² …)²/∫….
    let basis = single(2, false, a, [0.0; 3]);
    let rows = Array2::eye(6);
    let [x, y, z] = PLACES[1];
    let found = values(&basis, rows.view(), &[Point3::new(x, y, z)]);
    let decay = (-a * (x * x + y * y + z * z)).exp();
    assert!((found[(0, 0)] - d / 3.0_f64.sqrt() * x * x * decay).abs() < 1e-12);
    assert!((found[(3, 0)] - d * x * y * decay).abs() < 1e-12);
}

#[test]
fn orbitals_of_a_file_have_norm_one_by_summation_over_a_lattice() {
    let (molecule, labelled) = labelled("water_631gs.molden");
    let orbitals = &molecule.orbital_sets[0].coefficients;
    // Without the oxygen core and its neighbour, which are too sharp for any even lattice.
    let valence = orbitals.slice(ndarray::s![2..6, ..]);
    let grid = Grid::over(Vector3::repeat(-9.0), Vector3::repeat(9.0), 0.15, 4e6);
    let found = grid.values(&labelled.settled.basis, valence, &labelled.symmetry.frame);
    let gram = found.dot(&found.t()) * grid.step.powi(3);
    for ((i, j), overlap) in gram.indexed_iter() {
        let expected = if i == j { 1.0 } else { 0.0 };
        // What is left comes from the cusp of the oxygen s functions, which no even lattice resolves.
        assert!((overlap - expected).abs() < 2e-3, "⟨{i}|{j}⟩ = {overlap}");
    }
}

#[test]
fn functions_passed_over_would_have_added_less_than_promised() {
    let (molecule, labelled) = labelled("benzene_631g.molden");
    let orbitals = molecule.orbital_sets[0].coefficients.view();
    let along: Vec<Point3<f64>> = (0..400).map(|k| Point3::new(0.1 * f64::from(k), 0.4, 0.9)).collect();
    let together = values(&labelled.settled.basis, orbitals, &along);
    let shells = labelled.settled.basis.shells();
    for (at, point) in along.iter().enumerate().step_by(37) {
        let alone = values(&labelled.settled.basis, orbitals, std::slice::from_ref(point));
        let most = 1e-7 * shells.len() as f64;
        for orbital in 0..orbitals.nrows() {
            assert!((together[(orbital, at)] - alone[(orbital, 0)]).abs() < most);
        }
    }
    // s functions by hand, nothing passed over.
    let (first, row) = (&shells[0], orbitals.row(0));
    let near = first.centre + Vector3::new(0.05, 0.02, -0.04);
    let by_hand: f64 = shells
        .iter()
        .filter(|shell| shell.l == 0)
        .map(|shell| {
            let squared = (near - shell.centre).norm_squared();
            let radial: f64 = shell.exponents.iter().zip(&shell.factors).map(|(a, f)| f * (-a * squared).exp()).sum();
            row[shell.offset] * radial
        })
        .sum();
    let mut only_s = row.to_owned();
    shells.iter().filter(|shell| shell.l > 0).for_each(|shell| shell.range().for_each(|k| only_s[k] = 0.0));
    let found = values(&labelled.settled.basis, only_s.view().insert_axis(Axis(0)), &[near]);
    assert!((found[(0, 0)] - by_hand).abs() < 1e-6, "{} {by_hand}", found[(0, 0)]);
}

/// ψ(R⁻¹r) = Σ D(R)ⱼₖ ψⱼ(r) for the standard partners of every whole set.
fn partners_turn_as_their_irrep(name: &str, least: usize) {
    let (molecule, labelled) = labelled(name);
    let orbitals = &molecule.orbital_sets[0];
    let occupations: Vec<Option<f64>> = orbitals.orbitals.iter().map(|orbital| orbital.occupation).collect();
    let group = &labelled.symmetry.group;
    let centre = labelled.symmetry.frame.centre;
    let mut seen = 0;
    for set in &labelled.spins[0].sets {
        let coefficients = orbitals.coefficients.view();
        let Some(columns) = standard_partners(&labelled, 0, set, coefficients, &occupations) else { continue };
        seen += 1;
        let d = columns.nrows();
        assert!((columns.transpose() * &columns - nalgebra::DMatrix::<f64>::identity(d, d)).amax() < 1e-12);
        let own = coefficients.select(Axis(0), &set.orbitals);
        let rows = Array2::from_shape_fn((d, d), |(k, j)| columns[(j, k)]).dot(&own);
        let matrices = &group.irreps()[set.irrep.unwrap()].matrices;
        for (element, matrix) in matrices.iter().enumerate().step_by(3) {
            let back: Matrix3<f64> = labelled.symmetry.matrix(element).transpose();
            for place in PLACES {
                let point = centre + Vector3::from(place);
                let both = [point, centre + back * (point - centre)];
                let found = values(&labelled.settled.basis, rows.view(), &both);
                for k in 0..d {
                    let expected: f64 = (0..d).map(|j| matrix[(j, k)] * found[(j, 0)]).sum();
                    assert!((found[(k, 1)] - expected).abs() < 1e-3, "{} {expected}", found[(k, 1)]);
                }
            }
        }
    }
    assert!(seen >= least, "only {seen} sets");
}

#[test]
fn standard_partners_turn_as_their_irrep() {
    partners_turn_as_their_irrep("benzene_631g.molden", 8);
    partners_turn_as_their_irrep("methane_631gs.molden", 3);
    partners_turn_as_their_irrep("turned_ammonia.molden", 3);
}

#[test]
fn a_part_filled_set_keeps_the_partners_of_its_determinant() {
    let (molecule, labelled) = labelled("broken_boron_atom.molden");
    for (spin_idx, (spin, set)) in labelled.spins.iter().zip(&molecule.orbital_sets).enumerate() {
        let occupations: Vec<Option<f64>> = set.orbitals.iter().map(|orbital| orbital.occupation).collect();
        for labels in &spin.sets {
            let unequal = labels.orbitals.iter().any(|&i| occupations[i] != occupations[labels.orbitals[0]]);
            let found = standard_partners(&labelled, spin_idx, labels, set.coefficients.view(), &occupations);
            assert!(!(unequal && found.is_some()));
        }
    }
}

#[test]
fn the_level_encloses_the_share_asked_for() {
    // Of a Gaussian the density within R is a radial integral, here by Simpson's rule.
    let a = 0.5;
    let basis = single(0, false, a, [0.0; 3]);
    let points: Vec<Point3<f64>> = {
        let grid = Grid::over(Vector3::repeat(-6.0), Vector3::repeat(6.0), 0.12, 2e6);
        grid.indices().map(|indices| Point3::from(grid.place(indices))).collect()
    };
    let step = (points[1] - points[0]).norm();
    let found = values(&basis, Array2::eye(1).view(), &points);
    for share in [0.5, 0.8, 0.95] {
        let level = level(found.as_slice().unwrap(), step.powi(3), share);
        let norm = (2.0 * a / PI).powf(0.75);
        let radius = ((norm / level.value).ln() / a).sqrt();
        let density = |r: f64| 4.0 * PI * r * r * norm * norm * (-2.0 * a * r * r).exp();
        let n = 1000;
        let h = radius / f64::from(n);
        let inner: f64 = (1..n).map(|k| density(f64::from(k) * h) * if k % 2 == 1 { 4.0 } else { 2.0 }).sum::<f64>();
        let enclosed = (density(0.0) + density(radius) + inner) * h / 3.0;
        assert!((enclosed - share).abs() < 0.005, "{enclosed} of {share}");
        assert!((level.enclosed - share).abs() < 0.005 && (level.on_grid - 1.0).abs() < 1e-3);
    }
}

/// Area, volume by the divergence theorem, and vertices − edges + faces; panics where an edge has not two triangles.
fn measure(triangles: &[Triangle]) -> (f64, f64, i64) {
    let key = |place: &Vector3<f64>| [place.x.to_bits(), place.y.to_bits(), place.z.to_bits()];
    let (mut area, mut volume) = (0.0, 0.0);
    let mut edges: BTreeMap<_, (i64, i64)> = BTreeMap::new();
    let mut vertices = std::collections::BTreeSet::new();
    let mut faces = 0;
    for [a, b, c] in triangles {
        let corners = [a, b, c].map(|corner| key(&corner.place));
        let face = (b.place - a.place).cross(&(c.place - a.place)) / 2.0;
        area += face.norm();
        volume += a.place.dot(&face) / 3.0;
        // A triangle squeezed to a line or a point where the level meets a lattice point has no inside.
        if corners[0] == corners[1] || corners[1] == corners[2] || corners[2] == corners[0] {
            continue;
        }
        faces += 1;
        vertices.extend(corners);
        for (from, to) in [(0, 1), (1, 2), (2, 0)] {
            let (from, to) = (corners[from], corners[to]);
            let entry = edges.entry((from.min(to), from.max(to))).or_default();
            entry.0 += 1;
            entry.1 += if from < to { 1 } else { -1 };
        }
    }
    assert!(edges.values().all(|&(count, balance)| count == 2 && balance == 0), "an edge without its two triangles");
    let count = |n: usize| i64::try_from(n).unwrap();
    (area, volume, count(vertices.len()) - count(edges.len()) + faces)
}

#[test]
fn surfaces_are_closed_and_have_the_area_and_volume_of_spheres_and_rings() {
    let grid = Grid::over(Vector3::repeat(-2.03), Vector3::new(2.11, 2.17, 2.05), 0.1, 1e6);
    let field = |of: &dyn Fn(Vector3<f64>) -> f64| -> Vec<f64> {
        grid.indices().map(|indices| of(grid.place(indices))).collect()
    };
    let radius = 1.3;
    let sphere = field(&|place| -place.norm());
    let triangles = surface(&grid, &sphere, 1.0, -radius);
    let (area, volume, euler) = measure(&triangles);
    assert!((area / (4.0 * PI * radius * radius) - 1.0).abs() < 0.005, "area {area}");
    assert!((volume / (4.0 / 3.0 * PI * radius.powi(3)) - 1.0).abs() < 0.01, "volume {volume}");
    assert_eq!(euler, 2);
    for corner in triangles.iter().flatten() {
        assert!((corner.place.norm() - radius).abs() < 0.01);
        assert!(corner.normal.dot(&corner.place.normalize()) > 0.995, "normals point outwards");
    }
    // A ring: R = 1.2, r = 0.45; area 4π²Rr, volume 2π²Rr², no handle left over.
    let (large, small) = (1.2, 0.45);
    let ring = field(&|place| -(place.x.hypot(place.y) - large).hypot(place.z));
    let (area, volume, euler) = measure(&surface(&grid, &ring, 1.0, -small));
    assert!((area / (4.0 * PI * PI * large * small) - 1.0).abs() < 0.01, "area {area}");
    assert!((volume / (2.0 * PI * PI * large * small * small) - 1.0).abs() < 0.03, "volume {volume}");
    assert_eq!(euler, 0);
    // The other sign of a field encloses the other lobe.
    let lobes = field(&|place| place.z * (-place.norm_squared()).exp());
    let [above, below] = [1.0, -1.0].map(|sign| surface(&grid, &lobes, sign, 0.2));
    assert!(above.iter().flatten().all(|corner| corner.place.z > 0.0));
    assert!(below.iter().flatten().all(|corner| corner.place.z < 0.0));
    assert!((measure(&above).1 - measure(&below).1).abs() < 0.02);
}

#[test]
fn symmetry_elements_are_as_many_as_textbooks_count() {
    // Axes by their operations, mirror planes, centre: facts of any textbook of group theory; from memory.
    const FACTS: [(&str, &[(&str, usize)]); 13] = [
        ("C1", &[]),
        ("Cs", &[("sigma_h", 1)]),
        ("Ci", &[("i", 1)]),
        ("C2h", &[("C2", 1), ("sigma_h", 1), ("i", 1)]),
        ("C3v", &[("C3", 1), ("sigma_v", 3)]),
        ("S4", &[("C2, S4", 1)]),
        ("D5d", &[("C5, S10", 1), ("C2", 5), ("sigma_d", 5), ("i", 1)]),
        ("D6h", &[("C6, S6", 1), ("C2'", 3), ("C2''", 3), ("sigma_h", 1), ("sigma_d", 3), ("sigma_v", 3), ("i", 1)]),
        ("D3h", &[("C3, S3", 1), ("C2", 3), ("sigma_h", 1), ("sigma_v", 3)]),
        ("Td", &[("C3", 4), ("C2, S4", 3), ("sigma_d", 6)]),
        ("Oh", &[("C3, S6", 4), ("C4, S4", 3), ("C2'", 6), ("sigma_h", 3), ("sigma_d", 6), ("i", 1)]),
        ("Ih", &[("C5, S10", 6), ("C3, S6", 10), ("C2", 15), ("sigma", 15), ("i", 1)]),
        ("Dinfh", &[("Cinf", 1), ("sigma_h", 1), ("i", 1)]),
    ];
    for (name, facts) in FACTS {
        let group = PointGroup::standard(name.parse::<GroupName>().unwrap()).unwrap();
        let mut found = elements(&group).kinds();
        let mut expected: Vec<(String, usize)> = facts.iter().map(|&(kind, count)| (kind.to_owned(), count)).collect();
        found.sort();
        expected.sort();
        assert_eq!(found, expected, "{name}");
    }
}

#[test]
fn the_drawing_names_what_it_shows_and_keeps_names_as_text() {
    let (mut molecule, labelled) = labelled("water_631gs.molden");
    molecule.atoms[0].name = "<script>".to_owned();
    let skeleton = Skeleton::new(&molecule, &labelled.symmetry);
    let svg = symmetry_elements(&skeleton, &labelled.symmetry.group, &View::standard());
    assert!(svg.contains("<title id=\"elements-title\">") && svg.contains("Point group C2v"), "{svg}");
    assert!(!svg.contains("<script"));
    assert_eq!(svg.matches("class=\"atom\"").count(), 3);
    assert_eq!(svg.matches("class=\"bond\"").count(), 2);
    assert_eq!(svg.matches("class=\"plane\"").count(), 2);
}

#[test]
fn pictures_are_the_same_on_any_number_of_threads_and_show_both_lobes() {
    let (molecule, labelled) = labelled("water_631gs.molden");
    let skeleton = Skeleton::new(&molecule, &labelled.symmetry);
    // 1b1, the lone pair across the plane: the same above and below.
    let row = molecule.orbital_sets[0].coefficients.slice(ndarray::s![4..5, ..]);
    let on = |threads: usize| {
        let pool = rayon::ThreadPoolBuilder::new().num_threads(threads).build().unwrap();
        let settled = &labelled.settled;
        pool.install(|| {
            orbital_pictures(&skeleton, &labelled.symmetry.frame, &settled.basis, row, &View::standard()).unwrap()
        })
    };
    let picture = on(1).remove(0);
    assert_eq!(picture, on(3).remove(0));
    assert!(
        (picture.level.enclosed - 0.8).abs() < 0.005 && (picture.level.on_grid - 1.0).abs() < 0.05,
        "{:?}",
        picture.level
    );
    let decoder = png::Decoder::new(std::io::Cursor::new(&picture.png));
    let mut reader = decoder.read_info().unwrap();
    let mut pixels = vec![0; reader.output_buffer_size().unwrap()];
    let info = reader.next_frame(&mut pixels).unwrap();
    assert_eq!((info.width, info.height, info.color_type), (360, 360, png::ColorType::Rgba));
    // Straw has less blue than red; plum and its hatch have about as much blue as red, and less green.
    let painted = || pixels.chunks(4).filter(|pixel| pixel[3] == 255);
    let straw = painted().filter(|pixel| i32::from(pixel[0]) - i32::from(pixel[2]) > 40).count();
    let plum = painted().filter(|pixel| i32::from(pixel[2]) - i32::from(pixel[1]) > 25).count();
    assert!(straw > 3000 && plum > 3000, "{straw} and {plum}");
    let empty = pixels.chunks(4).filter(|pixel| pixel[3] == 0).count();
    assert!(empty > 20_000, "{empty}");
}

#[test]
fn lobes_can_be_told_apart_in_grey() {
    // Luma of video, Rec. ITU-R BT.709: weights of red, green, blue.
    let grey = |colour: ink::Colour| 0.2126 * colour[0] + 0.7152 * colour[1] + 0.0722 * colour[2];
    assert!(grey(ink::POSITIVE) - grey(ink::NEGATIVE) > 0.4);
    assert!(grey(ink::HATCH) - grey(ink::NEGATIVE) > 0.3, "the hatch is seen on its lobe");
}
