//! What irreps of one column are in the group of the next: the same, or what descent in symmetry makes of them.
//!
//! Here: which of two groups is the lower one, how it lies in the higher one. Not here: pairs of levels (`diagram::correlation`).

use super::DiagramError;
use super::correlation::{Parts, unchanged};
use super::level::Column;
use crate::group::{GroupName, IrrepName, PointGroup, Subgroup};
use crate::report::document::{Document, Geometry};
use crate::report::unicode::pretty;
use nalgebra::Matrix3;

/// Entries of two operations that are one differ by no more: planes through a line stand 6.9° apart in the stand-in of a linear group.
const SAME_OPERATION: f64 = 0.15;

/// Unit vectors x, y, z in a file's coordinates.
type Axes = [[f64; 3]; 3];

/// Two columns in terms of one group.
#[derive(Debug, Clone, PartialEq)]
pub struct Kin {
    /// Irreps of the left column in the lower group.
    pub left: Parts,
    /// Irreps of the right column in the lower group.
    pub right: Parts,
    /// How one group lies in the other, where they differ.
    pub words: Option<String>,
    /// What to know before trusting the lines.
    pub caution: Option<String>,
}

/// Why there are no lines.
#[derive(Debug, Clone, PartialEq)]
pub enum Unrelated {
    /// In words, for the diagram.
    Reason(String),
    /// A way was asked for that there is not.
    Way(DiagramError),
}

/// Puts the irreps of two neighbouring columns into the lower of their groups.
///
/// A subgroup can lie in a group in several ways. Where they differ in what irreps become, the axes of both files decide: they serve
/// when the coordinates of both files are in one frame, as those of a distorted molecule are.
///
/// `way`, from 1, decides where it is given.
///
/// # Errors
/// [`Unrelated`].
pub fn kin(
    documents: (&Document, &Document),
    columns: (&Column, &Column),
    way: Option<usize>,
) -> Result<Kin, Unrelated> {
    let (a, b) = (&documents.0.geometry, &documents.1.geometry);
    if a.point_group == b.point_group {
        let caution =
            if documents.0.source.formula == documents.1.source.formula { turned(a, b, columns.0) } else { None };
        return Ok(Kin { left: unchanged(columns.0), right: unchanged(columns.1), words: None, caution });
    }
    match (descent(a, b, columns.0, way)?, descent(b, a, columns.1, way)?) {
        (Some((left, words)), _) => Ok(Kin { left, right: unchanged(columns.1), words: Some(words), caution: None }),
        (None, Some((right, words))) => {
            Ok(Kin { left: unchanged(columns.0), right, words: Some(words), caution: None })
        }
        (None, None) => Err(Unrelated::Reason(format!(
            "No lines between {} and {}: neither is a subgroup of the other; --group with a common subgroup gives lines.",
            pretty(&a.point_group),
            pretty(&b.point_group)
        ))),
    }
}

/// Of two files with one group and one formula: what irreps of the first are called in the second, if the coordinates are in one frame
/// and the axes lie differently.
fn turned(a: &Geometry, b: &Geometry, column: &Column) -> Option<String> {
    let group = PointGroup::standard(a.point_group.parse().ok()?).ok()?;
    let irreps = names_of(column);
    let parts = parts(&group, &by_axes(&a.axes, &b.axes, &group, &group)?, &irreps)?;
    let changed: Vec<String> = parts
        .iter()
        .filter(|(here, there)| there.first().is_some_and(|(name, _)| name != *here))
        .map(|(here, there)| format!("{} is {}", pretty(here), pretty(&sum(there))))
        .collect();
    (!changed.is_empty()).then(|| {
        format!(
            "The axes of {} lie differently in two files: if their coordinates are in one frame, {} in the other; lines join equal \
             names.",
            pretty(&a.point_group),
            changed.join(", ")
        )
    })
}

/// `A1g + B1g`.
fn sum(parts: &[(String, usize)]) -> String {
    let term = |(name, times): &(String, usize)| if *times == 1 { name.clone() } else { format!("{times}{name}") };
    parts.iter().map(term).collect::<Vec<_>>().join(" + ")
}

/// What the irreps of `column`, which has the group of `high`, become in the group of `low`; `None` when that is no subgroup.
fn descent(
    high: &Geometry,
    low: &Geometry,
    column: &Column,
    way: Option<usize>,
) -> Result<Option<(Parts, String)>, Unrelated> {
    let (pretty_high, pretty_low) = (pretty(&high.point_group), pretty(&low.point_group));
    let fails = || Unrelated::Reason(format!("No lines between {pretty_high} and {pretty_low}: a group is not known."));
    let name = |geometry: &Geometry| geometry.point_group.parse::<GroupName>().map_err(|_| fails());
    let (high_name, low_name) = (name(high)?, name(low)?);
    let irreps: Vec<&str> = names_of(column);
    let words = |how: &str| format!("Lines from {pretty_high} to {pretty_low} by descent in symmetry{how}.");
    let below = PointGroup::standard(low_name).map_err(|_| fails())?;
    if high_name == GroupName::K {
        return Ok(of_an_atom(&irreps, &below).map(|parts| (parts, words(""))));
    }
    if low_name == GroupName::K {
        return Ok(None);
    }
    let above = PointGroup::standard(high_name).map_err(|_| fails())?;
    let mut ways: Vec<Parts> = Vec::new();
    for subgroup in above.subgroups().map_err(|_| fails())?.iter().filter(|subgroup| subgroup.group.name() == low_name)
    {
        let Some(parts) = parts(&above, subgroup, &irreps) else { continue };
        let settings = subgroup.group.settings();
        let renamed =
            settings.iter().map(|setting| renamed(&parts, &subgroup.group, &setting.swaps)).collect::<Vec<_>>();
        for way in std::iter::once(parts).chain(renamed) {
            if !ways.contains(&way) {
                ways.push(way);
            }
        }
    }
    if ways.is_empty() {
        return Ok(None);
    }
    let in_words = |parts: &Parts| {
        let differs = |irrep: &&String| ways.iter().any(|other| other.get(*irrep) != parts.get(*irrep));
        let line = |irrep: &String| format!("{} → {}", pretty(irrep), pretty(&sum(&parts[irrep])));
        parts.keys().filter(differs).map(line).collect::<Vec<_>>().join(", ")
    };
    if let Some(way) = way {
        let missing = DiagramError::Way { way, high: pretty_high.clone(), low: pretty_low.clone(), ways: ways.len() };
        let parts = way.checked_sub(1).and_then(|at| ways.get(at)).ok_or(Unrelated::Way(missing))?;
        let how = if ways.len() > 1 { format!(", way {way}: {}", in_words(parts)) } else { String::new() };
        return Ok(Some((parts.clone(), words(&how))));
    }
    if let [only] = ways.as_slice() {
        return Ok(Some((only.clone(), words(""))));
    }
    let measured =
        by_axes(&high.axes, &low.axes, &above, &below).and_then(|subgroup| parts(&above, &subgroup, &irreps));
    if let Some(parts) = measured.filter(|parts| ways.contains(parts)) {
        let how = format!(", axes as the coordinates of both files have them: {}", in_words(&parts));
        return Ok(Some((parts, words(&how))));
    }
    let list: Vec<String> =
        ways.iter().zip(1..).map(|(parts, at)| format!("--way {at}: {}", in_words(parts))).collect();
    Err(Unrelated::Reason(format!(
        "No lines between {pretty_high} and {pretty_low}: the coordinates of the files are in no common frame that would choose among \
         the ways down ({}); --group {} labels both in one group.",
        list.join("; "),
        low.point_group
    )))
}

fn names_of(column: &Column) -> Vec<&str> {
    let mut names: Vec<&str> =
        column.levels.iter().flat_map(|level| &level.content).map(|(irrep, _)| irrep.as_str()).collect();
    names.sort_unstable();
    names.dedup();
    names
}

/// Subduction by name; `None` when a name is not of the group or the elements are no subgroup.
fn parts(above: &PointGroup, subgroup: &Subgroup, irreps: &[&str]) -> Option<Parts> {
    let part = |irrep: &&str| {
        let at = above.irrep_idx(&irrep.parse().ok()?).ok()?;
        Some(((*irrep).to_owned(), named(&subgroup.group, &above.subduce(subgroup, at).ok()?)))
    };
    irreps.iter().map(part).collect()
}

fn named(group: &PointGroup, sum: &[(usize, usize)]) -> Vec<(String, usize)> {
    let mut parts: Vec<(String, usize)> =
        sum.iter().map(|&(irrep, times)| (group.irreps()[irrep].name.to_string(), times)).collect();
    parts.sort();
    parts
}

/// The same with the names of another setting.
fn renamed(parts: &Parts, group: &PointGroup, swaps: &[(usize, usize)]) -> Parts {
    let name = |irrep: usize| group.irreps()[irrep].name.to_string();
    let other = |old: &String| {
        swaps.iter().find(|(from, _)| name(*from) == *old).map_or_else(|| old.clone(), |&(_, to)| name(to))
    };
    let rename = |(irrep, sum): (&String, &Vec<(String, usize)>)| {
        let mut sum: Vec<(String, usize)> = sum.iter().map(|(name, times)| (other(name), *times)).collect();
        sum.sort();
        (irrep.clone(), sum)
    };
    parts.iter().map(rename).collect()
}

/// Levels of an atom in any group: s, p, d … of parity (−1)^l.
fn of_an_atom(irreps: &[&str], below: &PointGroup) -> Option<Parts> {
    let part = |irrep: &&str| {
        let IrrepName::Atomic { l, .. } = irrep.parse().ok()? else { return None };
        let sum = below.decompose(&below.shell_characters(usize::from(l))).ok()?;
        Some(((*irrep).to_owned(), named(below, &sum)))
    };
    irreps.iter().map(part).collect()
}

/// The subgroup as it lies in the group above when the coordinates of both files are in one frame.
///
/// `None` unless each of its operations is one of the group above, and products agree.
fn by_axes(high: &Axes, low: &Axes, above: &PointGroup, below: &PointGroup) -> Option<Subgroup> {
    let rows = |axes: &Axes| Matrix3::from_fn(|row, column| axes[row][column]);
    let turn = rows(high) * rows(low).transpose();
    let image = |element: &crate::group::Element| {
        let matrix = turn * element.operation.matrix() * turn.transpose();
        let miss = |at: &usize| (above.elements()[*at].operation.matrix() - matrix).amax();
        let nearest = (0..above.elements().len()).min_by(|a, b| miss(a).total_cmp(&miss(b)))?;
        (miss(&nearest) <= SAME_OPERATION).then_some(nearest)
    };
    let embedding: Vec<usize> = below.elements().iter().map(image).collect::<Option<_>>()?;
    let order = embedding.len();
    let agrees =
        |a: usize| (0..order).all(|b| above.multiply(embedding[a], embedding[b]) == embedding[below.multiply(a, b)]);
    let faithful = (0..order).all(|a| embedding[..a].iter().all(|other| *other != embedding[a]));
    (faithful && (0..order).all(agrees)).then(|| Subgroup {
        group: below.clone(),
        embedding,
        axes: turn.transpose(),
        description: "axes of both files".to_owned(),
    })
}

#[cfg(test)]
mod tests {
    use super::{by_axes, parts};
    use crate::group::PointGroup;
    use nalgebra::Matrix3;

    /// Parts of irreps when x, y, z of the lower group point along these axes of the higher one.
    fn measured(high: &str, low: &str, axes: Matrix3<f64>, irrep: &str) -> Option<Vec<String>> {
        let (above, below) =
            (PointGroup::standard(high.parse().ok()?).ok()?, PointGroup::standard(low.parse().ok()?).ok()?);
        let rows = |axes: Matrix3<f64>| [0, 1, 2].map(|row| [0, 1, 2].map(|column| axes[(row, column)]));
        let subgroup = by_axes(&rows(Matrix3::identity()), &rows(axes), &above, &below)?;
        Some(parts(&above, &subgroup, &[irrep])?[irrep].iter().map(|(name, _)| name.clone()).collect())
    }

    #[test]
    fn the_axes_of_both_files_choose_among_the_ways_down() {
        let half = std::f64::consts::FRAC_1_SQRT_2;
        let diagonal = Matrix3::new(half, half, 0.0, -half, half, 0.0, 0.0, 0.0, 1.0);
        // Descent in symmetry, tables of common practice: Oh → D4h with C2′ along the axes, or along diagonals, exchanges B1g and B2g.
        assert_eq!(measured("Oh", "D4h", Matrix3::identity(), "Eg").unwrap(), ["A1g", "B1g"]);
        assert_eq!(measured("Oh", "D4h", Matrix3::identity(), "T2g").unwrap(), ["B2g", "Eg"]);
        assert_eq!(measured("Oh", "D4h", diagonal, "Eg").unwrap(), ["A1g", "B2g"]);
        assert_eq!(measured("Oh", "D4h", diagonal, "T2g").unwrap(), ["B1g", "Eg"]);
        let odd = Matrix3::new(0.8, 0.6, 0.0, -0.6, 0.8, 0.0, 0.0, 0.0, 1.0);
        assert_eq!(measured("Oh", "D4h", odd, "Eg"), None);
    }
}
