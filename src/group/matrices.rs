//! Real matrices of irreps on standard partners, and the simple functions that belong to each irrep.
//!
//! Partners are sought among functions of lowest degree: x, y, z; degree 2; degree 3; Rx, Ry, Rz; then degree 4, 5, … A function is
//! projected on the irrep, its images under the group span the partners' space, and further functions in standard order, projected
//! on that space, become the other partners. So clean functions come out as such, and the result depends on nothing but the name of the group.

use super::error::GroupError;
use super::functions::{Functions, Named, Space, Sparse};
use super::multiplication::{Multiplication, Step};
use super::schoenflies::{GroupName, MAX_AXIS_ORDER};
use nalgebra::{DMatrix, DVector, Matrix3};

/// Norms below this are rounding.
const NOTHING: f64 = 1e-9;

/// What is known of an irrep before its matrices: everything by character.
pub(super) struct Sought<'a> {
    pub(super) dimension: usize,
    pub(super) constituents: usize,
    /// One character per element.
    pub(super) characters: &'a [f64],
}

/// What this file finds for one irrep.
#[derive(Clone, Default)]
pub(super) struct Found {
    pub(super) matrices: Vec<DMatrix<f64>>,
    pub(super) partners: Vec<String>,
    pub(super) functions: Functions,
}

/// A space with the generators' action on it, from which all images follow.
struct Representation<'a> {
    space: Space,
    steps: &'a [Step],
    order: usize,
    /// By element index; only generators are filled.
    generators: Vec<(usize, Sparse)>,
    functions: Vec<Named>,
}

/// Matrices, partners and functions of every irrep sought.
///
/// # Errors
/// [`GroupError::Characters`] when an irrep is found in no space, which the irreps of a point group never are.
pub(super) fn realise(
    name: GroupName,
    operations: &[Matrix3<f64>],
    group: &Multiplication,
    sought: &[Sought<'_>],
) -> Result<Vec<Found>, GroupError> {
    let mut found: Vec<Found> = sought.iter().map(|_| Found::default()).collect();
    let degrees = |range: std::ops::RangeInclusive<usize>| range.map(Space::Harmonics);
    // A plane group of an axis of order n needs degree n + 1 at most: z times the pair of m = n.
    let highest = 2 * MAX_AXIS_ORDER as usize;
    for space in degrees(1..=3).chain([Space::Rotations]).chain(degrees(4..=highest)) {
        let simple = matches!(space, Space::Rotations | Space::Harmonics(1..=3));
        let open: Vec<usize> = (0..sought.len()).filter(|&at| needs(&sought[at], &found[at])).collect();
        if !simple && open.is_empty() {
            break;
        }
        let traces: Vec<f64> = operations.iter().map(|operation| space.character(operation)).collect();
        let occurs = |at: usize| {
            let sum: f64 = traces.iter().zip(sought[at].characters).map(|(a, b)| a * b).sum();
            sum / group.order() as f64 > 0.5
        };
        if !simple && !open.iter().any(|&at| occurs(at)) {
            continue;
        }
        let representation = Representation::of(space, name, operations, group);
        if simple {
            representation.sort_functions(sought, &mut found);
        }
        for at in open.into_iter().filter(|&at| occurs(at)) {
            if let Some((matrices, partners)) = representation.partners(&sought[at]) {
                found[at].matrices = matrices;
                found[at].partners = partners;
            }
        }
    }
    for (irrep, found) in sought.iter().zip(&mut found) {
        if irrep.dimension == 1 {
            found.matrices = irrep.characters.iter().map(|&character| DMatrix::from_element(1, 1, character)).collect();
            let simple = &found.functions;
            let mut names = simple.linear.iter().chain(&simple.quadratic).chain(&simple.cubic).chain(&simple.rotations);
            found.partners = vec![names.next().map_or("1", String::as_str).to_owned()];
        } else if found.matrices.is_empty() {
            let law = "presence among harmonics";
            return Err(GroupError::Characters { law, deviation: 1.0, limit: 0.0 });
        }
        found.functions.with_trace(irrep.characters.iter().all(|character| *character > 0.5));
    }
    Ok(found)
}

fn needs(irrep: &Sought<'_>, found: &Found) -> bool {
    irrep.dimension > 1 && found.matrices.is_empty()
}

impl<'a> Representation<'a> {
    fn of(space: Space, name: GroupName, operations: &[Matrix3<f64>], group: &'a Multiplication) -> Self {
        let generators = group.generators().map(|at| (at, space.matrix(&operations[at]))).collect();
        let functions = space.functions(name);
        Self { space, steps: group.steps(), order: group.order(), generators, functions }
    }

    fn generator(&self, at: usize) -> Option<&Sparse> {
        self.generators.iter().find(|(generator, _)| *generator == at).map(|(_, matrix)| matrix)
    }

    /// Images of a function under every element.
    fn images(&self, function: &DVector<f64>) -> Vec<DVector<f64>> {
        let mut images = vec![DVector::zeros(0); self.order];
        if let Some(first) = images.first_mut() {
            *first = function.clone();
        }
        for step in self.steps {
            if let Some(generator) = self.generator(step.generator) {
                images[step.element] = generator.times(&images[step.previous]);
            }
        }
        images
    }

    /// The part of a function that belongs to an irrep, from its images.
    fn projected(&self, irrep: &Sought<'_>, images: &[DVector<f64>]) -> DVector<f64> {
        let factor = irrep.dimension as f64 / irrep.constituents as f64 / self.order as f64;
        let mut sum = DVector::zeros(self.space.dimension());
        for (image, character) in images.iter().zip(irrep.characters) {
            sum.axpy(factor * character, image, 1.0);
        }
        sum
    }

    /// Matrices on the first irreducible subspace found, and names of the partners.
    fn partners(&self, irrep: &Sought<'_>) -> Option<(Vec<DMatrix<f64>>, Vec<String>)> {
        let space = self.functions.iter().find_map(|function| {
            let first = self.projected(irrep, &self.images(&function.vector));
            let first = first.clone().try_normalize(0.1)?;
            // The images of a function span one copy of the irrep, or several: then another function is tried.
            let span = orthonormal(self.images(&first), irrep.dimension + 1);
            (span.len() == irrep.dimension).then_some(span)
        })?;
        let onto = |function: &Named| {
            let mut sum = DVector::zeros(self.space.dimension());
            for axis in &space {
                sum.axpy(axis.dot(&function.vector), axis, 1.0);
            }
            sum
        };
        let basis = orthonormal(self.functions.iter().map(onto), irrep.dimension);
        let names = basis.iter().zip(1..).map(|(partner, number)| {
            let named = self.functions.iter().find(|function| function.vector.dot(partner) > 1.0 - 1e-6);
            named.map_or_else(|| number.to_string(), |function| function.name.clone())
        });
        Some((self.matrices(&basis), names.collect()))
    }

    /// Matrices of all elements on an invariant orthonormal basis.
    fn matrices(&self, basis: &[DVector<f64>]) -> Vec<DMatrix<f64>> {
        let d = basis.len();
        let on_generators: Vec<(usize, DMatrix<f64>)> = self
            .generators
            .iter()
            .map(|(at, matrix)| {
                let images: Vec<_> = basis.iter().map(|partner| matrix.times(partner)).collect();
                (*at, DMatrix::from_fn(d, d, |i, j| basis[i].dot(&images[j])))
            })
            .collect();
        let mut matrices = vec![DMatrix::identity(d, d); self.order];
        for step in self.steps {
            if let Some((_, generator)) = on_generators.iter().find(|(at, _)| *at == step.generator) {
                matrices[step.element] = generator * &matrices[step.previous];
            }
        }
        matrices
    }

    /// Enters the named functions of this space that lie wholly in one irrep, partners together.
    fn sort_functions(&self, sought: &[Sought<'_>], found: &mut [Found]) {
        let mut sets: Vec<Vec<usize>> = Vec::new();
        for set in (0..self.functions.len()).map(|at| vec![at]) {
            // Join with every earlier set that a generator links it to.
            let (linked, mut others): (Vec<_>, Vec<_>) =
                sets.into_iter().partition(|other| other.iter().any(|&a| set.iter().any(|&b| self.linked(a, b))));
            let mut joined: Vec<usize> = linked.into_iter().flatten().chain(set).collect();
            joined.sort_unstable();
            others.push(joined);
            sets = others;
        }
        sets.sort();
        for set in sets {
            let images: Vec<_> = set.iter().map(|&at| self.images(&self.functions[at].vector)).collect();
            for (irrep, found) in sought.iter().zip(found.iter_mut()) {
                let whole = irrep.dimension == set.len()
                    && images.iter().all(|images| self.projected(irrep, images).norm() > 1.0 - 1e-6);
                if whole {
                    let names: Vec<&str> = set.iter().map(|&at| self.functions[at].name.as_str()).collect();
                    found.functions.enter(self.space, &names);
                }
            }
        }
    }

    fn linked(&self, a: usize, b: usize) -> bool {
        let (a, b) = (&self.functions[a].vector, &self.functions[b].vector);
        self.generators
            .iter()
            .any(|(_, matrix)| matrix.times(a).dot(b).abs() > NOTHING || matrix.times(b).dot(a).abs() > NOTHING)
    }
}

/// The first `most` independent of the vectors, made orthonormal in their order.
fn orthonormal(vectors: impl IntoIterator<Item = DVector<f64>>, most: usize) -> Vec<DVector<f64>> {
    let mut basis: Vec<DVector<f64>> = Vec::new();
    for mut vector in vectors {
        // Twice, so that rounding of nearly dependent vectors does not stay.
        for _ in 0..2 {
            for axis in &basis {
                let overlap = axis.dot(&vector);
                vector.axpy(-overlap, axis, 1.0);
            }
        }
        if let Some(unit) = vector.try_normalize(1e-3) {
            basis.push(unit);
            if basis.len() == most {
                break;
            }
        }
    }
    basis
}

impl Functions {
    fn enter(&mut self, space: Space, names: &[&str]) {
        let text = match names {
            [single] => (*single).to_owned(),
            several => format!("({})", several.join(", ")),
        };
        match space {
            Space::Harmonics(1) => self.linear.push(text),
            // Beside its partner z² means 2z² − x² − y²; alone the trace does not matter.
            Space::Harmonics(2) if names.len() > 1 => self.quadratic.push(text.replace("z2,", "2z2-x2-y2,")),
            Space::Harmonics(2) => self.quadratic.push(text),
            Space::Rotations => self.rotations.push(text),
            Space::Harmonics(_) => self.cubic.push(text),
        }
    }

    /// Adds x² + y² + z² to the totally symmetric irrep, in the way printed tables combine it with z² and x² − y².
    fn with_trace(&mut self, totally_symmetric: bool) {
        if !totally_symmetric {
            return;
        }
        let has = |wanted: &str| self.quadratic.iter().any(|name| name == wanted);
        let with = match (has("z2"), has("x2-y2")) {
            (true, true) => vec!["x2", "y2", "z2"],
            (true, false) => vec!["x2+y2", "z2"],
            _ => vec!["x2+y2+z2"],
        };
        self.quadratic.retain(|name| name != "z2" && name != "x2-y2");
        self.quadratic.splice(0..0, with.into_iter().map(str::to_owned));
    }
}
