//! Which group the labels are in, and where it lies: that of the nuclei, a subgroup, a parent, that of some atoms.
//!
//! Here: the choice, which atoms are permuted and which truly turned. Not here: the search for groups (`group::detect`), the
//! best fit of a group that the nuclei do not have (`group::parent`), descent (`labelling::descent`).

use super::descent::Descent;
use super::sites::{bonds, sites};
use super::{LabelError, atom};
use crate::group::{
    self, DetectSettings, Detection, Deviation, GroupName, PointGroup, Rung, Site, SiteOperation, Symmetry, fit_parent,
};
use crate::model::Molecule;
use crate::wavefunction::{Operations, PartialPermutation, Settled, Turned};
use nalgebra::{Matrix3, Vector3};

/// What is asked for beside the group of the nuclei.
#[derive(Debug, Clone, PartialEq, Eq, Default)]
pub struct Choice {
    /// Labels in this group.
    pub group: Option<GroupName>,
    /// Atoms, from 0, that alone define the symmetry.
    pub frame: Option<Vec<usize>>,
    /// Of several orientations of a subgroup, this one, from 0.
    pub orientation: usize,
}

/// How the group of the labels came about.
#[derive(Debug, Clone, Default)]
pub struct Derivation {
    /// The group of the frame's atoms, or of all nuclei, within the tolerance.
    pub found: Option<GroupName>,
    /// Descent from the group found.
    pub descent: Option<Descent>,
    /// In words, the orientations that a subgroup of this name can have; the one taken is `orientation`.
    pub orientations: Vec<String>,
    /// Which of them was taken.
    pub orientation: usize,
    /// Atoms that define the group, where not all do.
    pub frame: Option<Vec<usize>>,
    /// Root mean square distance of turned sites from their like, bohr, where the group was fitted.
    pub misfit_bohr: Option<f64>,
    /// Atoms that some operation carries onto no like atom: their functions are truly turned.
    pub turned: Vec<usize>,
    /// Largest distance of a turned atom of the frame from the nearest of its kind, bohr, over atoms truly turned.
    pub turned_distance_bohr: f64,
}

/// A group with its place, and what operations do to atoms.
#[derive(Debug, Clone)]
pub struct Placement {
    /// Groups near all nuclei.
    pub detection: Detection,
    /// The group of the labels. Atoms truly turned stay where they are in its permutations.
    pub symmetry: Symmetry,
    /// How it came about.
    pub derivation: Derivation,
}

/// Groups are listed up to this displacement of a nucleus, bohr (0.3 Å).
const LADDER_BOHR: f64 = 0.3 / crate::model::ANGSTROM_PER_BOHR;

/// Finds the groups near the nuclei and places the one asked for.
///
/// # Errors
/// [`LabelError`] when there is no atom, two like atoms coincide, or the group asked for cannot be laid over the sites.
pub fn place(molecule: &Molecule, tolerance_bohr: f64, choice: &Choice) -> Result<Placement, LabelError> {
    let all_sites = sites(molecule);
    let all_bonds = bonds(molecule);
    let settings = DetectSettings { limit_bohr: LADDER_BOHR.max(tolerance_bohr) };
    let detection = group::detect(&all_sites, &settings)?;
    let frame = choice.frame.as_ref().filter(|frame| frame.len() < molecule.atoms.len());
    let scene = match frame {
        None => Scene { detection: detection.clone(), sites: all_sites.clone(), bonds: all_bonds.clone() },
        Some(frame) => {
            let part: Vec<Site> = frame.iter().map(|&atom| all_sites[atom]).collect();
            let place = |atom: usize| frame.binary_search(&atom).ok();
            let inside = all_bonds.iter().filter_map(|&(a, b)| Some((place(a)?, place(b)?))).collect();
            Scene { detection: group::detect(&part, &settings)?, sites: part, bonds: inside }
        }
    };
    let (mut symmetry, mut derivation) = scene.choose(tolerance_bohr, choice)?;
    if frame.is_some() && symmetry.group.name() == GroupName::K {
        return Err(LabelError::SphericalFrame);
    }
    if let Some(frame) = frame {
        // Sites of the frame become atoms again.
        for passage in &mut symmetry.passages {
            passage.atoms.iter_mut().for_each(|atom| *atom = frame[*atom]);
            passage.bonds.iter_mut().for_each(|bond| *bond = (frame[bond.0], frame[bond.1]));
        }
        derivation.frame = Some(frame.clone());
    }
    let foreign = frame.is_some() || derivation.misfit_bohr.is_some() || symmetry.deviation.max > tolerance_bohr;
    if foreign {
        let landed = Landed::of(&symmetry, &all_sites, 2.0 * tolerance_bohr);
        symmetry.deviation = landed.deviation(&symmetry, &all_sites);
        symmetry.permutations = landed.permutations;
        derivation.turned = landed.turned;
        derivation.turned_distance_bohr = landed.distance;
    }
    Ok(Placement { detection, symmetry, derivation })
}

/// Sites that define the symmetry, and the groups near them.
struct Scene {
    detection: Detection,
    sites: Vec<Site>,
    bonds: Vec<(usize, usize)>,
}

impl Scene {
    fn at(&self, rung: &Rung) -> Result<Symmetry, LabelError> {
        Ok(self.detection.place(rung, &self.sites, Some(&self.bonds))?)
    }

    fn choose(&self, tolerance_bohr: f64, choice: &Choice) -> Result<(Symmetry, Derivation), LabelError> {
        let found = self.detection.at(tolerance_bohr);
        let derivation = Derivation { found: Some(found.name), ..Derivation::default() };
        let Some(wanted) = choice.group.filter(|wanted| *wanted != found.name) else {
            if choice.orientation > 0 {
                let (asked, orientations) = (choice.orientation + 1, vec!["that of the atoms".to_owned()]);
                return Err(LabelError::Orientation { asked, group: found.name, orientations });
            }
            return Ok((self.at(found)?, derivation));
        };
        if found.name == GroupName::K {
            return Ok((self.on_an_atom(wanted)?, derivation));
        }
        let symmetry = self.at(found)?;
        let mut subgroups = symmetry.group.subgroups()?;
        subgroups.retain(|subgroup| subgroup.group.name() == wanted);
        if !subgroups.is_empty() {
            let orientations: Vec<String> = subgroups.iter().map(|subgroup| subgroup.description.clone()).collect();
            let Some(subgroup) = subgroups.get(choice.orientation) else {
                return Err(LabelError::Orientation { asked: choice.orientation + 1, group: wanted, orientations });
            };
            let mut members = subgroup.embedding.clone();
            members.sort_unstable();
            let descent = Descent::to(&symmetry, &members, &self.sites, &self.bonds)?;
            let placed = descent.symmetry.clone();
            let descent = Some(descent);
            return Ok((placed, Derivation { descent, orientations, orientation: choice.orientation, ..derivation }));
        }
        if let Some(rung) = self.detection.ladder.iter().find(|rung| rung.name == wanted) {
            return Ok((self.at(rung)?, derivation));
        }
        if wanted.is_continuous() {
            return Err(LabelError::Continuous { wanted, found: found.name });
        }
        let (symmetry, misfit) = self.fitted(wanted, &symmetry)?;
        Ok((symmetry, Derivation { misfit_bohr: Some(misfit), ..derivation }))
    }

    /// Any group fits an atom in any axes.
    fn on_an_atom(&self, wanted: GroupName) -> Result<Symmetry, LabelError> {
        let group = PointGroup::standard(wanted)?;
        let in_place: Vec<u32> = (0_u32..).take(self.sites.len()).collect();
        let operations =
            group.elements().iter().map(|element| in_place_operation(&in_place, *element.operation.matrix())).collect();
        let positions = vec![Vector3::zeros(); self.sites.len()];
        let rung = Rung { name: wanted, deviation: Deviation::default(), operations, positions };
        let mut symmetry = self.at(&rung)?;
        "the axes of the file; the nucleus leaves them free".clone_into(&mut symmetry.frame.convention);
        Ok(symmetry)
    }

    /// A group that the sites do not have, where its operations fit best.
    fn fitted(&self, wanted: GroupName, have: &Symmetry) -> Result<(Symmetry, f64), LabelError> {
        let group = PointGroup::standard(wanted)?;
        let known: Vec<Matrix3<f64>> = (0..have.group.elements().len()).map(|element| have.matrix(element)).collect();
        let fit = fit_parent(&self.sites, &group, &known)?;
        let in_place: Vec<u32> = (0_u32..).take(self.sites.len()).collect();
        let operations = group
            .elements()
            .iter()
            .map(|element| in_place_operation(&in_place, fit.axes.transpose() * element.operation.matrix() * fit.axes))
            .collect();
        let positions = self.sites.iter().map(|site| site.position - fit.centre).collect();
        let deviation = Deviation { max: fit.misfit, rms: fit.misfit };
        let rung = Rung { name: wanted, deviation, operations, positions };
        let mut symmetry = Detection { ladder: Vec::new(), centre: fit.centre, searched_bohr: 0.0 }.place(
            &rung,
            &self.sites,
            Some(&self.bonds),
        )?;
        symmetry.frame.convention = format!("where {wanted} fits the atoms best");
        Ok((symmetry, fit.misfit))
    }
}

fn in_place_operation(in_place: &[u32], matrix: Matrix3<f64>) -> SiteOperation {
    SiteOperation { permutation: in_place.to_vec(), proper: matrix.determinant() > 0.0, matrix, displacement: 0.0 }
}

/// Which atoms the operations of a group carry onto like atoms.
struct Landed {
    permutations: Vec<Vec<usize>>,
    turned: Vec<usize>,
    distance: f64,
}

impl Landed {
    /// Atoms land where they come within `reach` of a like atom, under every operation, and so do those they land on.
    fn of(symmetry: &Symmetry, sites: &[Site], reach: f64) -> Self {
        let nearest = group::NearestSites::of(sites);
        let n_elements = symmetry.group.elements().len();
        let centre = symmetry.frame.centre;
        // The nearest like site of every turned one, and how near it is.
        let mut images: Vec<Vec<(usize, f64)>> = Vec::with_capacity(n_elements);
        for element in 0..n_elements {
            let matrix = symmetry.matrix(element);
            let place = |site: &Site| centre + matrix * (site.position - centre);
            images.push(sites.iter().map(|site| nearest.of_kind(site.kind, &place(site))).collect());
        }
        let mut lands: Vec<bool> =
            (0..sites.len()).map(|site| images.iter().all(|image| image[site].1 <= reach)).collect();
        for image in &images {
            // Two that would land on one place do not land.
            let mut taken = vec![usize::MAX; sites.len()];
            for site in 0..sites.len() {
                let to = image[site].0;
                if lands[site] && std::mem::replace(&mut taken[to], site) != usize::MAX {
                    lands[site] = false;
                }
            }
        }
        loop {
            let stays: Vec<bool> =
                (0..sites.len()).map(|site| lands[site] && images.iter().all(|image| lands[image[site].0])).collect();
            if stays == lands {
                break;
            }
            lands = stays;
        }
        let turned: Vec<usize> = (0..sites.len()).filter(|&site| !lands[site]).collect();
        let permutations = images
            .iter()
            .map(|image| (0..sites.len()).map(|site| if lands[site] { image[site].0 } else { site }).collect())
            .collect();
        let farthest = |site: &usize| images.iter().map(|image| image[*site].1).fold(0.0, f64::max);
        Self { permutations, distance: turned.iter().map(farthest).fold(0.0, f64::max), turned }
    }

    /// How far the atoms that land lie from where they would be if they had the group.
    fn deviation(&self, symmetry: &Symmetry, sites: &[Site]) -> Deviation {
        let landing: Vec<usize> = (0..sites.len()).filter(|site| self.turned.binary_search(site).is_err()).collect();
        let about = |site: usize| sites[site].position - symmetry.frame.centre;
        let order = self.permutations.len() as f64;
        let squares = landing.iter().map(|&site| {
            let images = self.permutations.iter().enumerate();
            let mean: Vector3<f64> = images
                .map(|(element, permutation)| symmetry.matrix(element).tr_mul(&about(permutation[site])) / order)
                .sum();
            (mean - about(site)).norm_squared()
        });
        let (max, sum) = squares.fold((0.0_f64, 0.0), |(max, sum), square| (max.max(square), sum + square));
        Deviation { max: max.sqrt(), rms: (sum / landing.len().max(1) as f64).sqrt() }
    }
}

/// The operations of a placed group on orbitals, by permutation where all atoms land, else truly turned.
///
/// # Errors
/// [`LabelError::Turning`] when an operation carries an atom onto one with other functions.
pub fn operations(settled: &Settled, placement: &Placement) -> Result<Operations, LabelError> {
    let symmetry = &placement.symmetry;
    let turned = &placement.derivation.turned;
    if turned.is_empty() {
        return Ok(Operations::Permuting(atom::turnings(&settled.basis, symmetry)?));
    }
    let elements = symmetry
        .permutations
        .iter()
        .enumerate()
        .map(|(element, permutation)| {
            let lands = |(atom, &image): (usize, &usize)| turned.binary_search(&atom).is_err().then_some(image);
            let partial: PartialPermutation = permutation.iter().enumerate().map(lands).collect();
            (symmetry.matrix(element), partial)
        })
        .collect();
    let (basis, overlap) = (settled.basis.clone(), settled.overlap.clone());
    Ok(Operations::Turned(Turned::new(basis, overlap, symmetry.frame.centre, elements)))
}
