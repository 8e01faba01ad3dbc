//! Which point groups a set of sites has, exactly and nearly: the ladder of groups by how far the sites deviate.
//!
//! Not here: where the standard axes lie (`group::frame`).

use super::arrangement::Arrangement;
use super::error::GroupError;
use super::frame;
use super::ladder::{self, FittedGroup, NOISE};
use super::linear;
use super::matching::{self, SiteOperation};
use super::schoenflies::GroupName;
use super::symmetry::{Deviation, Site, Symmetry};
use nalgebra::{Point3, Vector3};
use thiserror::Error;

/// Two sites of one kind nearer than this (bohr) are one place given twice.
const SAME_PLACE: f64 = 1e-3;

/// What to search for.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct DetectSettings {
    /// Groups are listed up to this deviation of the worst site, bohr.
    pub limit_bohr: f64,
}

impl Default for DetectSettings {
    /// 0.3 Å: farther from symmetric than a fifth of a bond, likeness says little.
    fn default() -> Self {
        Self { limit_bohr: 0.3 / 0.529_177_210_903 }
    }
}

/// Sites that cannot be searched.
#[derive(Debug, Clone, PartialEq, Error)]
pub enum DetectError {
    /// No sites.
    #[error("no sites: a point group needs at least one")]
    NoSites,
    /// A coordinate that is no finite number, or so large that squares overflow.
    #[error("site {site} has a coordinate {value}: expected a number within ±{limit:e} bohr")]
    Coordinate {
        /// Index of the site, from 0.
        site: usize,
        /// The coordinate.
        value: f64,
        /// Largest magnitude allowed.
        limit: f64,
    },
    /// A limit that is no sensible length.
    #[error("limit {limit} bohr: expected a length from 0 to {highest}")]
    Limit {
        /// The limit asked for.
        limit: f64,
        /// Largest allowed.
        highest: f64,
    },
    /// Two sites of one kind at one place.
    #[error("sites {first} and {second} of one kind are {distance:e} bohr apart, limit {limit:e}")]
    SamePlace {
        /// Index of one, from 0.
        first: usize,
        /// Index of the other.
        second: usize,
        /// Their distance in bohr.
        distance: f64,
        /// The least distance allowed.
        limit: f64,
    },
    /// Too many sites of one kind at one distance from the centre.
    #[error("{sites} sites look alike in too many ways to find the operations that exchange them")]
    TooMuchAlike {
        /// Number of sites.
        sites: usize,
    },
    /// A group beyond those supported.
    #[error(transparent)]
    Group(#[from] GroupError),
}

/// A group that the sites have to within a deviation.
#[derive(Debug, Clone, PartialEq)]
#[non_exhaustive]
pub struct Rung {
    /// Its name.
    pub name: GroupName,
    /// How far the sites are from having it.
    pub deviation: Deviation,
    /// Matrices about the centre, in the axes of the file, in the order of `PointGroup::standard(name)` (for continuous groups those of
    /// the finite stand-in); each with the site that it carries every site to. They form a group to 1e-12.
    pub operations: Vec<SiteOperation>,
    /// Where the sites would be if they had the group exactly, about the centre, bohr.
    pub positions: Vec<Vector3<f64>>,
}

impl Rung {
    /// Number of operations, `None` for continuous groups.
    #[must_use]
    pub fn order(&self) -> Option<usize> {
        self.name.order()
    }
}

impl From<FittedGroup> for Rung {
    fn from(group: FittedGroup) -> Self {
        let FittedGroup { name, operations, positions, deviation } = group;
        Self { name, deviation, operations, positions }
    }
}

/// The groups of a set of sites.
#[derive(Debug, Clone, PartialEq)]
pub struct Detection {
    /// By growing order and strictly growing deviation, never empty. The first is what the sites have to within the noise of six
    /// decimals; a later one need not contain an earlier one, but is larger.
    pub ladder: Vec<Rung>,
    /// The centroid of the sites, through which all operations go, bohr.
    pub centre: Point3<f64>,
    /// Up to which deviation groups were searched, bohr: less than asked for where too many sites look alike.
    pub searched_bohr: f64,
}

/// Finds the groups that the sites have, exactly or up to a deviation.
///
/// The deviation of a group is how far the sites lie from the nearest arrangement that has it exactly: the mean over all operations
/// of where they carry the sites.
/// # Holds
/// Turning, shifting and reordering the sites changes nothing but the matrices and permutations.
/// # Errors
/// [`DetectError`]: no sites, numbers that are none, or two sites of one kind at one place.
pub fn detect(sites: &[Site], settings: &DetectSettings) -> Result<Detection, DetectError> {
    const HIGHEST_LIMIT: f64 = 10.0;
    let limit = settings.limit_bohr;
    if !(0.0..=HIGHEST_LIMIT).contains(&limit) {
        return Err(DetectError::Limit { limit, highest: HIGHEST_LIMIT });
    }
    let arrangement = checked(sites)?;
    let limit = limit.max(NOISE);
    let detection = |ladder: Vec<FittedGroup>, searched_bohr| Detection {
        ladder: ladder::thinned(ladder).into_iter().map(Rung::from).collect(),
        centre: arrangement.centroid,
        searched_bohr,
    };
    if arrangement.extent() < SAME_PLACE {
        return Ok(detection(vec![linear::atom(&arrangement)], limit));
    }
    if linear::distance_from_line(&arrangement.positions, &arrangement.best_line()) <= NOISE {
        return Ok(detection(linear::linear_groups(&arrangement, limit, false), limit));
    }
    let search =
        matching::search(&arrangement, limit).ok_or(DetectError::TooMuchAlike { sites: arrangement.n_sites() })?;
    let mut groups = ladder::groups(&arrangement, &search.operations, search.limit);
    let line = arrangement.best_line();
    let turned_round =
        groups.iter().flat_map(|group| &group.operations).any(|operation| line.dot(&(operation.matrix * line)) < 0.0);
    groups.extend(linear::linear_groups(&arrangement, limit, turned_round));
    Ok(detection(groups, search.limit))
}

pub(super) fn checked(sites: &[Site]) -> Result<Arrangement, DetectError> {
    const FARTHEST: f64 = 1e6;
    if sites.is_empty() {
        return Err(DetectError::NoSites);
    }
    for (site, place) in sites.iter().enumerate() {
        if let Some(&value) = place.position.iter().find(|value| !(-FARTHEST..=FARTHEST).contains(*value)) {
            return Err(DetectError::Coordinate { site, value, limit: FARTHEST });
        }
    }
    let arrangement = Arrangement::of(sites);
    for (first, (x, &kind)) in arrangement.positions.iter().zip(&arrangement.kinds).enumerate() {
        if let Some((second, distance)) = arrangement.nearest(kind, x, SAME_PLACE, Some(first)) {
            return Err(DetectError::SamePlace { first, second, distance, limit: SAME_PLACE });
        }
    }
    Ok(arrangement)
}

impl Detection {
    /// The largest group whose deviation (of the worst site) is within the tolerance; the first where none is.
    #[must_use]
    pub fn at(&self, tolerance_bohr: f64) -> &Rung {
        let within = self.ladder.iter().rev().find(|rung| rung.deviation.max <= tolerance_bohr);
        within.unwrap_or(&self.ladder[0])
    }

    /// Chooses the standard axes of a group of the ladder by the rules for axes and says where every operation carries each site.
    ///
    /// `sites` are those given to [`detect`], `bonds` pairs of their indices; without bonds nearest neighbours serve.
    /// # Errors
    /// [`GroupError`] for a group that is not supported.
    pub fn place(&self, rung: &Rung, sites: &[Site], bonds: Option<&[(usize, usize)]>) -> Result<Symmetry, GroupError> {
        frame::place(self.centre, rung, sites, bonds)
    }
}
