//! Functions, overlaps, moments, conventions, operations and populations, against a reference library
//! (`tests/molecules/reference`, made by `tests/molecules/scripts/reference_values.py`), laws, and a second path.
#![allow(clippy::unwrap_used, reason = "a test may stop at once")]

use nalgebra::{DMatrix, Matrix3, Point3, Rotation3, Vector3};
use ndarray::{Array1, Array2, Array3, ArrayView2, Axis, stack};
use orbsieve::model::{Atom, Molecule, Orbital, OrbitalSet, Shell, Spin, read_molden};
use orbsieve::wavefunction::basis::Primitives;
use orbsieve::wavefunction::cartesian::{Powers, lexicographic, monomials, pure_over_monomials, squared_norm};
use orbsieve::wavefunction::convention::{CartesianNorm, CartesianOrder, Convention, PureSigns};
use orbsieve::wavefunction::{
    Basis, ConventionError, Operations, Rows, Settled, Turning, lowdin, moments as moments_between, overlap,
    overlap_between, overlap_with_turned, settle,
};
use serde_json::Value;

/// One of the operators of [`moments_between`].
#[derive(Clone, Copy)]
enum Operator {
    Position,
    Gradient,
    Turn,
    SecondMoments,
}

/// An operator's integrals over all functions; second moments as xx, xy, xz, yy, yz, zz.
fn moments(basis: &Basis, operator: Operator, origin: &Point3<f64>) -> Array3<f64> {
    let functions = Array2::eye(basis.n_functions());
    let all = moments_between(basis, origin, functions.view(), functions.view());
    let [xx, yy, zz, xy, xz, yz] = &all.second;
    let parts = match operator {
        Operator::Position => all.position.each_ref().to_vec(),
        Operator::Gradient => all.gradient.each_ref().to_vec(),
        Operator::Turn => all.angular.each_ref().to_vec(),
        Operator::SecondMoments => vec![xx, xy, xz, yy, yz, zz],
    };
    let views: Vec<ArrayView2<'_, f64>> = parts.into_iter().map(|matrix| matrix.view()).collect();
    stack(Axis(0), &views).unwrap()
}

/// The limit that `label` takes.
const LIMIT: f64 = 5e-3;

fn fixture(name: &str) -> Molecule {
    let folder = format!("{}/tests/molecules", env!("CARGO_MANIFEST_DIR"));
    let bytes = std::fs::read(format!("{folder}/{name}.molden"))
        .or_else(|_| std::fs::read(format!("{folder}/scenario/{name}.molden")))
        .unwrap_or_else(|error| panic!("{name}: {error}"));
    read_molden(&bytes).unwrap().0
}

fn settled_fixture(name: &str) -> (Molecule, Settled) {
    let mut molecule = fixture(name);
    let settled = settle(&mut molecule, LIMIT).unwrap_or_else(|error| panic!("{name}: {error}"));
    (molecule, settled)
}

fn reference(name: &str) -> serde_json::Map<String, Value> {
    let path = format!("{}/tests/molecules/reference/{name}.json", env!("CARGO_MANIFEST_DIR"));
    serde_json::from_slice(&std::fs::read(path).unwrap()).unwrap()
}

fn float(value: &Value) -> f64 {
    value.as_f64().unwrap()
}

fn place(value: &Value) -> usize {
    usize::try_from(value.as_u64().unwrap()).unwrap()
}

fn largest(matrix: &Array2<f64>) -> f64 {
    matrix.iter().fold(0.0, |worst, value| worst.max(value.abs()))
}

fn atom(position: Point3<f64>) -> Atom {
    Atom { name: "C".into(), element: 6, charge: 6.0, ghost: false, core_electrons: 0, position }
}

/// A contraction of two primitives, exponents apart for every degree so that no Cartesian shell repeats another's s part.
fn shell(atom_idx: usize, l: usize, pure: bool) -> Shell {
    let exponent = 0.45 + 0.31 * l as f64 + 0.07 * atom_idx as f64;
    Shell { atom_idx, l, pure, exponents: vec![exponent, 2.7 * exponent], coefficients: vec![0.6, 0.5] }
}

fn orbital_set(coefficients: Array2<f64>) -> OrbitalSet {
    let orbital = Orbital { energy: None, occupation: None, symmetry: None, header: 0..0, symmetry_value: None };
    OrbitalSet { spin: Spin::Alpha, orbitals: vec![orbital; coefficients.nrows()], coefficients }
}

/// A bent triatomic in general position with every degree to `l_max`, and orbitals that are orthonormal in canonical functions.
fn generic_molecule(l_max: usize, pure: bool) -> Molecule {
    let atoms: Vec<Atom> = [[0.1, -0.2, 0.3], [1.3, 0.9, -0.7], [-1.1, 0.8, 1.4]].map(Point3::from).map(atom).to_vec();
    let mut shells: Vec<Shell> = (0..=l_max).map(|l| shell(0, l, pure)).collect();
    shells.extend((0..=l_max).filter(|l| l % 3 != 0).map(|l| shell(1, l, pure)));
    shells.extend((0..=l_max).filter(|l| l % 3 == 0).map(|l| shell(2, l, pure)));
    let mut molecule = Molecule { title: String::new(), atoms, shells, orbital_sets: Vec::new(), vibrations: None };
    molecule.orbital_sets.push(orbital_set(orthonormal_rows(&molecule)));
    molecule
}

/// S = LLᵀ, rows of L⁻¹, then two reflections that mix every row with every other.
fn orthonormal_rows(molecule: &Molecule) -> Array2<f64> {
    let basis = Basis::new(&molecule.atoms, &molecule.shells, Primitives::Normalised);
    let s = overlap(&basis);
    let n = basis.n_functions();
    let lower = DMatrix::from_fn(n, n, |i, j| s[(i, j)]).cholesky().unwrap().l();
    let mut rows = lower.solve_lower_triangular(&DMatrix::identity(n, n)).unwrap();
    for step in [1.7, 2.3] {
        let axis = nalgebra::DVector::from_fn(n, |i, _| (step * (i + 1) as f64).sin()).normalize();
        rows -= 2.0 * &axis * (axis.transpose() * &rows);
    }
    Array2::from_shape_fn((n, n), |(i, j)| rows[(i, j)])
}

/// What a writer with this convention would put into the file; worked out here, not by the code under test.
fn written(molecule: &Molecule, convention: Convention) -> Molecule {
    let mut file = molecule.clone();
    let mut offset = 0;
    for shell in &mut file.shells {
        let l = shell.l;
        if convention.primitives == Primitives::Raw {
            for (coefficient, exponent) in shell.coefficients.iter_mut().zip(&shell.exponents) {
                let norm = (2.0 * exponent / std::f64::consts::PI).powf(0.75) * (4.0 * exponent).powf(0.5 * l as f64);
                *coefficient *= norm / squared_norm([l, 0, 0]).sqrt();
            }
        }
        for (set, source) in file.orbital_sets.iter_mut().zip(&molecule.orbital_sets) {
            for (mut row, source) in set.coefficients.outer_iter_mut().zip(source.coefficients.outer_iter()) {
                if l > 1 && shell.pure {
                    for (m, k) in [(3, 5), (3, 6), (4, 7), (4, 8)] {
                        if convention.signs == PureSigns::ThirdAndFourth && m <= l {
                            row[offset + k] = -source[offset + k];
                        }
                    }
                } else if l > 1 {
                    let published = monomials(l);
                    let mut order = published.clone();
                    if convention.order == CartesianOrder::Lexicographic {
                        order = lexicographic(l);
                    } else if convention.order == CartesianOrder::ReversedAboveG && l > 4 {
                        order = lexicographic(l).into_iter().rev().collect();
                    }
                    for (at, powers) in order.iter().enumerate() {
                        let from = published.iter().position(|other| other == powers).unwrap();
                        row[offset + at] = source[offset + from] / norm_in_file(convention.norm, *powers);
                    }
                }
            }
        }
        offset += shell.n_functions();
    }
    file
}

fn norm_in_file(norm: CartesianNorm, powers: Powers) -> f64 {
    let l = powers.iter().sum();
    match norm {
        CartesianNorm::Unit => 1.0,
        CartesianNorm::OfAxis => (squared_norm(powers) / squared_norm([l, 0, 0])).sqrt(),
        CartesianNorm::DoubleFactorials => squared_norm(powers).sqrt(),
        CartesianNorm::ShellFactor => squared_norm([l, 0, 0]).sqrt(),
    }
}

fn conventions(pure: bool) -> Vec<Convention> {
    use CartesianNorm::{DoubleFactorials, OfAxis, ShellFactor, Unit};
    use CartesianOrder::{Lexicographic, Published, ReversedAboveG};
    let plain =
        Convention { primitives: Primitives::Normalised, norm: Unit, order: Published, signs: PureSigns::Plain };
    let mut all = Vec::new();
    for primitives in [Primitives::Normalised, Primitives::Raw] {
        if pure {
            for signs in [PureSigns::Plain, PureSigns::ThirdAndFourth] {
                all.push(Convention { primitives, signs, ..plain });
            }
        } else {
            for norm in [Unit, OfAxis, DoubleFactorials, ShellFactor] {
                for order in [Published, Lexicographic, ReversedAboveG] {
                    all.push(Convention { primitives, norm, order, ..plain });
                }
            }
        }
    }
    all
}

#[test]
fn every_convention_is_told_from_all_others_and_undone() {
    for pure in [true, false] {
        let canonical = generic_molecule(6, pure);
        for convention in conventions(pure) {
            let mut file = written(&canonical, convention);
            // So few digits that readings behind the right one are tried too.
            file.orbital_sets[0].coefficients.mapv_inplace(|value| (value * 1e9).round() / 1e9);
            let mut molecule = file.clone();
            let settled = settle(&mut molecule, LIMIT).unwrap();
            assert_eq!(settled.convention, convention, "{}", convention.describe());
            assert!(settled.residual < 1e-6, "{}: {}", convention.describe(), settled.residual);
            let coefficients = &molecule.orbital_sets[0].coefficients;
            assert!(largest(&(coefficients - &canonical.orbital_sets[0].coefficients)) < 1e-6);
            // And back to what the file had.
            let back = settled.to_file(coefficients.view());
            assert!(largest(&(back - &file.orbital_sets[0].coefficients)) < 1e-9);
            let wrong = settled.trials.iter().filter(|trial| trial.convention != convention);
            assert!(wrong.clone().count() >= 3);
            for trial in wrong {
                assert!(trial.residual > 1e-3, "{} passes for {}", trial.convention.describe(), convention.describe());
            }
        }
    }
}

#[test]
fn few_digits_do_not_hide_the_convention() {
    let canonical = generic_molecule(5, true);
    for convention in conventions(true) {
        let mut file = written(&canonical, convention);
        file.orbital_sets[0].coefficients.mapv_inplace(|value| (value * 1e3).round() / 1e3);
        let settled = settle(&mut file, 0.1).unwrap();
        assert_eq!(settled.convention, convention, "{}", convention.describe());
        assert!(settled.residual > 1e-4, "rounding must be seen: {}", settled.residual);
    }
}

#[test]
fn what_a_free_atom_cannot_tell_is_not_claimed() {
    for convention in conventions(true) {
        let mut canonical = generic_molecule(4, true);
        canonical.atoms.truncate(1);
        canonical.shells.retain(|shell| shell.atom_idx == 0);
        canonical.orbital_sets = vec![orbital_set(orthonormal_rows(&canonical))];
        let mut file = written(&canonical, convention);
        let settled = settle(&mut file, LIMIT).unwrap();
        assert_eq!(settled.convention, conventions(true)[0], "{}", convention.describe());
    }
    // Without d functions only the radial part is tried, and not that where the likelier reading leaves nothing to be wished for.
    let mut molecule = generic_molecule(1, false);
    assert_eq!(settle(&mut molecule.clone(), LIMIT).unwrap().trials.len(), 1);
    molecule.orbital_sets[0].coefficients.mapv_inplace(|value| (value * 1e6).round() / 1e6);
    let settled = settle(&mut molecule, LIMIT).unwrap();
    assert_eq!(settled.trials.len(), 2);
    assert_eq!(settled.convention, conventions(false)[0]);
}

#[test]
fn orbitals_that_fit_no_convention_are_refused_untouched() {
    // m from −l to l is nobody's order; xz before xy is not among the Cartesian ones.
    for pure in [true, false] {
        let mut file = generic_molecule(2, pure);
        let at = 4;
        for mut row in file.orbital_sets[0].coefficients.outer_iter_mut() {
            let block: Vec<f64> = (0..file.shells[2].n_functions()).map(|k| row[at + k]).collect();
            let order: &[usize] = if pure { &[4, 2, 0, 1, 3] } else { &[0, 1, 2, 4, 3, 5] };
            for (k, &from) in order.iter().enumerate() {
                row[at + k] = block[from];
            }
        }
        let before = file.clone();
        let error = settle(&mut file, LIMIT).unwrap_err();
        let ConventionError::NoneFits { limit, trials } = &error else { panic!("{error}") };
        assert!((limit - LIMIT).abs() < f64::EPSILON);
        assert!(trials.iter().all(|trial| trial.residual > 0.05));
        assert_eq!(error.to_string().lines().count(), trials.len() + 2);
        assert_eq!(file, before);
    }
    let mut file = generic_molecule(1, true);
    let rows = file.orbital_sets[0].coefficients.clone();
    let twice = ndarray::concatenate(Axis(0), &[rows.view(), rows.view()]).unwrap();
    let functions = rows.ncols();
    file.orbital_sets = vec![orbital_set(twice)];
    let expected = ConventionError::TooManyOrbitals { orbitals: 2 * functions, functions };
    assert_eq!(settle(&mut file, LIMIT).unwrap_err(), expected);
    let mut file = generic_molecule(1, true);
    file.orbital_sets[0].coefficients[(0, 0)] = f64::NAN;
    assert!(settle(&mut file, LIMIT).is_err());
}

#[test]
fn files_of_every_engine_are_as_orthonormal_as_the_reference_finds_them() {
    for (name, entry) in reference("orthonormality") {
        let (functions, deviation) = (place(&entry["functions"]), float(&entry["deviation"]));
        let mut molecule = fixture(&name);
        assert_eq!(molecule.n_functions(), functions, "{name}");
        let orbitals: Vec<usize> = entry["orbitals"].as_array().unwrap().iter().map(place).collect();
        assert!(molecule.orbital_sets.iter().map(|set| set.orbitals.len()).eq(orbitals), "{name}");
        match settle(&mut molecule, LIMIT) {
            Ok(settled) => {
                let limit = 1.1 * deviation + 1e-12;
                assert!(settled.residual <= limit, "{name}: {} against {deviation}", settled.residual);
                assert_eq!(settled.convention, convention_of(&name, &molecule), "{name}");
            }
            Err(error) => assert!(deviation > 0.1, "{name}: {error}"),
        }
    }
}

/// What was measured of the engine whose name stands first, as far as the file exercises it.
fn convention_of(name: &str, molecule: &Molecule) -> Convention {
    let mut convention = conventions(false)[0];
    let has = |pure: bool, l: usize| molecule.shells.iter().any(|shell| shell.pure == pure && shell.l >= l);
    let engine = name.split('_').next().unwrap();
    if matches!(engine, "xtb" | "psi3") || name.ends_with("_raw") || name.contains("raw_flipped") {
        convention.primitives = Primitives::Raw;
    }
    if matches!(engine, "psi3" | "psi4") && has(false, 2) {
        convention.norm = CartesianNorm::OfAxis;
    }
    if engine == "psi3" && has(false, 2) {
        convention.order = CartesianOrder::Lexicographic;
    }
    if name.contains("flipped") && has(true, 3) {
        convention.signs = PureSigns::ThirdAndFourth;
    }
    if engine == "dialect" && has(false, 2) {
        for (word, norm) in [("bare", CartesianNorm::DoubleFactorials), ("shell", CartesianNorm::ShellFactor)] {
            if name.contains(word) {
                convention.norm = norm;
            }
        }
    }
    convention
}

#[test]
fn overlaps_are_those_of_the_reference_library() {
    for (name, entry) in reference("overlap") {
        let (_, settled) = settled_fixture(&name);
        let s = &settled.overlap;
        let squares: f64 = s.iter().map(|value| value * value).sum();
        let frobenius = float(&entry["frobenius"]);
        assert!((squares.sqrt() / frobenius - 1.0).abs() < 1e-12, "{name}: {} {frobenius}", squares.sqrt());
        // The reference counts functions as the file does.
        let mut canonical_of = vec![0; settled.basis.n_functions()];
        for shell in settled.basis.shells() {
            let lexical = settled.convention.order == CartesianOrder::Lexicographic && shell.l > 1 && !shell.pure;
            for (k, powers) in monomials(shell.l).iter().enumerate().take(shell.n_functions()) {
                let at = if lexical { lexicographic(shell.l).iter().position(|p| p == powers).unwrap() } else { k };
                canonical_of[shell.offset + at] = shell.offset + k;
            }
        }
        let elements = entry["elements"].as_array().unwrap();
        assert!(elements.len() > 10);
        for element in elements {
            let (i, j, value) = (place(&element[0]), place(&element[1]), float(&element[2]));
            let found = s[(canonical_of[i], canonical_of[j])];
            assert!((found - value).abs() < 1e-11, "{name} {i} {j}: {found} against {value}");
        }
    }
}

#[test]
fn moments_between_orbitals_are_those_of_the_reference_library() {
    for (name, rows) in reference("moments") {
        let (molecule, settled) = settled_fixture(&name);
        let coefficients = &molecule.orbital_sets[0].coefficients;
        for (operator, key) in [
            (Operator::Position, "r"),
            (Operator::Gradient, "nabla"),
            (Operator::Turn, "r_cross_nabla"),
            (Operator::SecondMoments, "xx_xy_xz_yy_yz_zz"),
        ] {
            let integrals = moments(&settled.basis, operator, &Point3::origin());
            for row in rows.as_array().unwrap() {
                let (i, j) = (place(&row["i"]), place(&row["j"]));
                let expected = row[key].as_array().unwrap();
                assert_eq!(integrals.len_of(Axis(0)), expected.len());
                for (matrix, expected) in integrals.outer_iter().zip(expected) {
                    let found = coefficients.row(i).dot(&matrix.dot(&coefficients.row(j)));
                    let expected = float(expected);
                    assert!((found - expected).abs() < 1e-9, "{name} {key} {i} {j}: {found} against {expected}");
                }
            }
        }
    }
}

#[test]
fn moments_of_all_degrees_follow_from_moving_and_turning() {
    for pure in [true, false] {
        let molecule = generic_molecule(6, pure);
        let basis = Basis::new(&molecule.atoms, &molecule.shells, Primitives::Normalised);
        let origin = Point3::new(0.4, -0.3, 0.2);
        // Derivative of f at 0, to fourth order in the step.
        let derivative = |f: &dyn Fn(f64) -> Array2<f64>| {
            // Large enough for rounding, small enough for h functions far from the axis: 1e-8 is left, falling as h⁴.
            let h = 1e-3;
            (8.0 * (f(h) - f(-h)) - (f(2.0 * h) - f(-2.0 * h))) / (12.0 * h)
        };
        let gradient = moments(&basis, Operator::Gradient, &origin);
        let turn = moments(&basis, Operator::Turn, &origin);
        for axis in [0, 2] {
            let unit = Vector3::ith_axis(axis);
            let moved = |step: f64| {
                let mut atoms = molecule.atoms.clone();
                for atom in &mut atoms {
                    atom.position += step * *unit;
                }
                overlap_between(&basis, &Basis::new(&atoms, &molecule.shells, Primitives::Normalised))
            };
            // f(r − a) changes with a as −∇f.
            assert!(largest(&(derivative(&moved) + gradient.index_axis(Axis(0), axis))) < 1e-8);
            let turned =
                |angle: f64| overlap_with_turned(&basis, Rotation3::from_axis_angle(&unit, angle).matrix(), &origin);
            // f(R⁻¹r) changes with the angle as −n·(r × ∇)f.
            let difference = largest(&(derivative(&turned) + turn.index_axis(Axis(0), axis)));
            assert!(difference < 1e-7, "{pure} {axis}: {difference:e}");
        }
        let s = overlap(&basis);
        let [position, shifted] = [Point3::origin(), origin].map(|point| moments(&basis, Operator::Position, &point));
        let second = moments(&basis, Operator::SecondMoments, &Point3::origin());
        let second_shifted = moments(&basis, Operator::SecondMoments, &origin);
        let pairs = [(0, 0), (0, 1), (0, 2), (1, 1), (1, 2), (2, 2)];
        for axis in 0..3 {
            let expected = &position.index_axis(Axis(0), axis) - &(origin[axis] * &s);
            assert!(largest(&(&shifted.index_axis(Axis(0), axis) - &expected)) < 1e-12);
        }
        for (component, (a, b)) in pairs.into_iter().enumerate() {
            let (x, y) = (position.index_axis(Axis(0), a), position.index_axis(Axis(0), b));
            let expected = &second.index_axis(Axis(0), component) - &(origin[b] * &x) - &(origin[a] * &y)
                + origin[a] * origin[b] * &s;
            assert!(largest(&(&second_shifted.index_axis(Axis(0), component) - &expected)) < 1e-11);
            let matrix = second.index_axis(Axis(0), component);
            assert!(largest(&(&matrix - &matrix.t())) < 1e-12);
        }
    }
}

#[test]
fn lowdin_populations_are_those_of_the_reference() {
    for (name, entry) in reference("lowdin") {
        let (molecule, settled) = settled_fixture(&name);
        let populations = lowdin(&settled, &molecule).unwrap();
        let shells = settled.basis.shells();
        for (shell, expected) in shells.iter().zip(entry["shells"].as_array().unwrap()) {
            assert_eq!((shell.atom_idx, shell.l), (place(&expected[0]), place(&expected[1])), "{name}");
        }
        for row in entry["orbitals"].as_array().unwrap() {
            let orbital = place(&row["orbital"]);
            let population = populations[0].row(orbital);
            assert!((population.sum() - 1.0).abs() < 1e-8, "{name} {orbital}");
            for (shell, expected) in shells.iter().zip(row["by_shell"].as_array().unwrap()) {
                let found: f64 = shell.range().map(|k| population[k]).sum();
                assert!((found - float(expected)).abs() < 1e-8, "{name} {orbital}: {found} against {expected}");
            }
        }
    }
}

/// Four atoms on a tilted square, functions of every degree, pure and Cartesian; its quarter turn and a mirror.
#[expect(clippy::type_complexity, reason = "a basis and its operations with their permutations, used here only")]
fn square() -> (Basis, Vec<(Matrix3<f64>, Vec<usize>)>) {
    let tilt = Rotation3::from_euler_angles(0.3, -0.8, 1.9).into_inner();
    let corners = [[1.3, 0.0, 0.0], [0.0, 1.3, 0.0], [-1.3, 0.0, 0.0], [0.0, -1.3, 0.0]];
    let atoms = corners.map(|corner| atom(tilt * Point3::from(corner)));
    let kinds = [
        (0, false),
        (1, false),
        (2, true),
        (2, false),
        (3, true),
        (3, false),
        (4, false),
        (5, true),
        (6, true),
        (6, false),
    ];
    let shells: Vec<Shell> = (0..4)
        .flat_map(|atom_idx| {
            kinds.map(|(l, pure)| {
                let mut shell = shell(0, l, pure);
                shell.exponents[0] += if pure { 0.2 } else { 0.0 };
                Shell { atom_idx, ..shell }
            })
        })
        .collect();
    let quarter = Matrix3::new(0.0, -1.0, 0.0, 1.0, 0.0, 0.0, 0.0, 0.0, 1.0);
    let improper = Matrix3::new(0.0, -1.0, 0.0, 1.0, 0.0, 0.0, 0.0, 0.0, -1.0);
    let mirror = Matrix3::from_diagonal(&Vector3::new(1.0, -1.0, 1.0));
    let operations = [(quarter, vec![1, 2, 3, 0]), (improper, vec![1, 2, 3, 0]), (mirror, vec![0, 3, 2, 1])];
    let operations = operations.map(|(matrix, permutation)| (tilt * matrix * tilt.transpose(), permutation)).to_vec();
    (Basis::new(&atoms, &shells, Primitives::Normalised), operations)
}

/// Columns: images of the functions.
fn matrix_of(turning: &Turning, n: usize) -> Array2<f64> {
    let mut matrix = Array2::zeros((n, n));
    for (k, column) in matrix.axis_iter_mut(Axis(1)).enumerate() {
        let mut unit = Array1::zeros(n);
        unit[k] = 1.0;
        turning.apply(unit.view(), column);
    }
    matrix
}

#[test]
fn operations_keep_the_overlap_multiply_and_agree_on_both_paths() {
    let (basis, operations) = square();
    let n = basis.n_functions();
    let s = overlap(&basis);
    let matrices: Vec<Array2<f64>> = operations
        .iter()
        .map(|(matrix, permutation)| {
            let turning = Turning::by_permutation(&basis, permutation, matrix).unwrap();
            let turn = matrix_of(&turning, n);
            assert!(largest(&(turn.t().dot(&s).dot(&turn) - &s)) < 1e-11);
            // More pairs than are worked on together, bra and ket apart.
            let kets = Array2::from_shape_fn((19, n), |(i, k)| (1.3 * (k + 7 * i) as f64).cos());
            let products = kets.dot(&s);
            let operation = Operations::Permuting(vec![turning]);
            let rows = Rows { coefficients: kets.view(), products: products.view() };
            let expected = products.dot(&turn).dot(&kets.t());
            for (i, value) in operation.expectations(rows).column(0).iter().enumerate() {
                assert!((value - expected[(i, i)]).abs() < 1e-9);
            }
            let pairs: Vec<(usize, usize)> = (0..19).flat_map(|i| [(i, 18 - i), (i, (i + 5) % 19)]).collect();
            for (&(bra, ket), value) in pairs.iter().zip(operation.connections(rows, &pairs)) {
                assert!((value - expected[(bra, ket)].powi(2)).abs() < 1e-8 * value.max(1.0));
            }
            let other = overlap_with_turned(&basis, matrix, &Point3::origin());
            assert!(largest(&(other - s.dot(&turn))) < 1e-11);
            turn
        })
        .collect();
    for (a, first) in operations.iter().zip(&matrices) {
        for (b, second) in operations.iter().zip(&matrices) {
            let permutation: Vec<usize> = b.1.iter().map(|&image| a.1[image]).collect();
            let both = Turning::by_permutation(&basis, &permutation, &(a.0 * b.0)).unwrap();
            assert!(largest(&(matrix_of(&both, n) - first.dot(second))) < 1e-11);
        }
    }
    // An operation that carries no atom onto another.
    let matrix = -Rotation3::from_euler_angles(0.2, 0.5, -0.4).into_inner();
    let centre = Point3::new(0.3, 0.1, -0.2);
    let there = overlap_with_turned(&basis, &matrix, &centre);
    let back = overlap_with_turned(&basis, &matrix.transpose(), &centre);
    assert!(largest(&(&there - &back.t())) < 1e-11);
    let identity = overlap_with_turned(&basis, &Matrix3::identity(), &centre);
    assert!(largest(&(identity - &s)) < 1e-13);
}

/// Values of all functions at a point, one row a function.
fn values(basis: &Basis, point: &Point3<f64>) -> Array1<f64> {
    let mut values = Vec::new();
    for shell in basis.shells() {
        let r = point - shell.centre;
        let radial: f64 =
            shell.exponents.iter().zip(&shell.factors).map(|(a, f)| f * (-a * r.norm_squared()).exp()).sum();
        let list = monomials(shell.l);
        let normalised = list.iter().map(|powers| {
            let monomial: f64 = (0..3).map(|axis| r[axis].powi(i32::try_from(powers[axis]).unwrap())).product();
            radial * monomial * (squared_norm([shell.l, 0, 0]) / squared_norm(*powers)).sqrt()
        });
        let normalised: Vec<f64> = normalised.collect();
        if shell.pure {
            for column in pure_over_monomials(shell.l).column_iter() {
                values.push(column.iter().zip(&normalised).map(|(c, v)| c * v).sum());
            }
        } else {
            values.extend(normalised);
        }
    }
    Array1::from(values)
}

#[test]
fn a_turned_orbital_has_the_values_of_the_orbital_at_points_turned_back() {
    let (basis, operations) = square();
    let n = basis.n_functions();
    let row = Array1::from_shape_fn(n, |k| (0.7 * k as f64).sin());
    for (matrix, permutation) in operations {
        let turning = Turning::by_permutation(&basis, &permutation, &matrix).unwrap();
        let mut image = Array1::zeros(n);
        turning.apply(row.view(), image.view_mut());
        for point in [[0.7, 0.2, -0.4], [-1.1, 0.6, 0.9], [0.1, -1.5, 0.3]].map(Point3::from) {
            let there = image.dot(&values(&basis, &point));
            let before = row.dot(&values(&basis, &(matrix.transpose() * point)));
            assert!((there - before).abs() < 1e-11, "{there} against {before}");
        }
    }
}

#[test]
fn an_operation_onto_an_atom_with_other_functions_is_refused() {
    let molecule = generic_molecule(2, true);
    let basis = Basis::new(&molecule.atoms, &molecule.shells, Primitives::Normalised);
    let error = Turning::by_permutation(&basis, &[1, 0, 2], &Matrix3::identity()).unwrap_err();
    assert!(error.to_string().contains("atom 1 onto atom 2"), "{error}");
}

#[test]
fn overlaps_do_not_depend_on_the_number_of_threads() {
    let molecule = generic_molecule(6, false);
    let basis = Basis::new(&molecule.atoms, &molecule.shells, Primitives::Normalised);
    let on = |threads: usize| {
        let pool = rayon::ThreadPoolBuilder::new().num_threads(threads).build().unwrap();
        let bits = |matrix: ArrayView2<'_, f64>| matrix.iter().map(|value| value.to_bits()).collect::<Vec<_>>();
        pool.install(|| {
            let s = overlap(&basis);
            (bits(s.view()), bits(orbsieve::wavefunction::product(s.view(), s.view()).view()))
        })
    };
    assert_eq!(on(1), on(3));
}
