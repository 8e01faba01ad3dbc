//! Groups found in sets of sites, against geometries built from formulas: every family to n = 30, molecules named in common practice, noise.

#![expect(clippy::unwrap_used, reason = "helpers of tests may fail loudly")]

#[path = "support/geometries.rs"]
mod geometries;

use geometries::{ANGSTROM, Random, disturbed, generic, molecule, molecules, sandwich, scrambled, sites_of_group};
use nalgebra::{Matrix3, Point3, Rotation3, Vector3};
use orbsieve::group::{DetectError, DetectSettings, Detection, GroupName, Site, Symmetry, detect};
use proptest::prelude::{ProptestConfig, prop_assert, prop_assert_eq, proptest};

fn found(sites: &[Site]) -> Detection {
    detect(sites, &DetectSettings::default()).unwrap()
}

fn placed(sites: &[Site], tolerance: f64) -> Symmetry {
    let detection = found(sites);
    detection.place(detection.at(tolerance), sites, None).unwrap()
}

fn name(text: &str) -> GroupName {
    text.parse().unwrap()
}

/// Every claim of a placed group, tested on the sites themselves.
fn assert_consistent(sites: &[Site], symmetry: &Symmetry, text: &str) {
    let limit = 2.0 * symmetry.deviation.max + 1e-9;
    let axes = symmetry.frame.axes;
    assert!((axes * axes.transpose() - Matrix3::identity()).amax() < 1e-12, "{text}: orthogonal axes");
    assert!(axes.determinant() > 0.0, "{text}: right-handed axes");
    assert_eq!(symmetry.permutations.len(), symmetry.group.order());
    for (element, permutation) in symmetry.permutations.iter().enumerate() {
        let matrix = symmetry.matrix(element);
        for (site, &image) in sites.iter().zip(permutation) {
            let carried = symmetry.frame.centre + matrix * (site.position - symmetry.frame.centre);
            let distance = (carried - sites[image].position).norm();
            assert!(distance <= limit, "{text}: element {element} misses by {distance}, limit {limit}");
            assert_eq!(site.kind, sites[image].kind);
        }
    }
    for a in 0..symmetry.group.order().min(24) {
        for b in 0..symmetry.group.order().min(24) {
            let product = &symmetry.permutations[symmetry.group.multiply(a, b)];
            let both = symmetry.permutations[b].iter().map(|&image| symmetry.permutations[a][image]);
            assert!(both.eq(product.iter().copied()), "{text}: permutations multiply as the group");
        }
    }
}

fn every_name() -> Vec<GroupName> {
    use GroupName::{C1, Ci, Cn, Cnh, Cnv, Cs, Dn, Dnd, Dnh, I, Ih, O, Oh, Sn, T, Td, Th};
    let mut names = vec![C1, Cs, Ci, T, Td, Th, O, Oh, I, Ih];
    for n in 2..=30 {
        names.extend([Cn(n), Cnv(n), Cnh(n), Dn(n), Dnh(n), Dnd(n), Sn(2 * n)]);
    }
    names
}

#[test]
fn every_family_is_found_exactly_in_any_position() {
    let mut random = Random::new(1);
    for name in every_name() {
        let sites = scrambled(&sites_of_group(name), &mut random);
        let detection = found(&sites);
        assert_eq!(detection.ladder[0].name, name, "{name}");
        assert!(detection.ladder[0].deviation.max < 1e-9, "{name}: {:e}", detection.ladder[0].deviation.max);
        let rung = detection.at(0.01 * ANGSTROM);
        assert_eq!(rung.name, name, "{name} within the default tolerance");
        let symmetry = detection.place(rung, &sites, None).unwrap();
        assert_consistent(&sites, &symmetry, &name.to_string());
    }
}

#[test]
fn molecules_of_common_practice() {
    let mut random = Random::new(2);
    for (text, group, sites) in molecules() {
        for round in 0..3 {
            let sites = if round == 0 { sites.clone() } else { scrambled(&sites, &mut random) };
            let symmetry = placed(&sites, 0.01 * ANGSTROM);
            assert_eq!(symmetry.group.name(), name(group), "{text}");
            assert!(symmetry.deviation.max < 1e-8, "{text}: deviates by {:e}", symmetry.deviation.max);
            assert_consistent(&sites, &symmetry, text);
        }
    }
}

#[test]
fn rotational_symmetry_numbers() {
    // Common practice: number of proper rotations.
    for (text, number) in [
        ("water", 2),
        ("planar XY3", 6),
        ("benzene", 12),
        ("tetrahedron MX4", 12),
        ("six ligands", 24),
        ("linear XYZ", 1),
        ("linear XYX", 2),
        ("buckyball", 60),
    ] {
        assert_eq!(placed(&molecule(text), 1e-3).rotational_symmetry_number, number, "{text}");
    }
}

#[test]
fn noise_is_reported_as_deviation_and_hides_the_group_below_it() {
    let mut random = Random::new(3);
    for text in ["naphthalene", "benzene", "six ligands", "tetrahedron MX4", "sandwich staggered", "ethane staggered"] {
        let exact = molecule(text);
        let group = found(&exact).ladder[0].name;
        for epsilon in [1e-8, 1e-6, 1e-4, 1e-2, 0.1 * ANGSTROM, 0.2 * ANGSTROM] {
            let sites = scrambled(&disturbed(&exact, epsilon, &mut random), &mut random);
            let detection = found(&sites);
            let rung = detection.ladder.iter().find(|rung| rung.name == group);
            let rung = rung.unwrap_or_else(|| panic!("{text}: {group} not on the ladder at noise {epsilon:e}"));
            // No site moved by more than ε; the nearest symmetric arrangement is no farther away than the exact one in the mean square.
            assert!(rung.deviation.rms <= epsilon, "{text}: {:e} at {epsilon:e}", rung.deviation.rms);
            assert!(rung.deviation.max >= 0.05 * epsilon, "{text}: {:e} at {epsilon:e}", rung.deviation.max);
            assert!(rung.deviation.max <= 2.0 * epsilon, "{text}: {:e} at {epsilon:e}", rung.deviation.max);
            assert_eq!(detection.at(rung.deviation.max * (1.0 + 1e-12)).name, group);
            if epsilon > 1e-4 {
                assert_ne!(detection.at(rung.deviation.max * 0.999).name, group, "{text}");
            }
            for pair in detection.ladder.windows(2) {
                assert!(pair[0].deviation.max < pair[1].deviation.max, "{text}: growing deviation");
                assert!(pair[0].operations.len() < pair[1].operations.len(), "{text}: growing order");
            }
            let symmetry = detection.place(rung, &sites, None).unwrap();
            assert_consistent(&sites, &symmetry, text);
        }
    }
}

/// Mean square distance of the sites from their mean over the operations, all turned by a small rotation.
fn mean_square(sites: &[Site], symmetry: &Symmetry, turn: &Matrix3<f64>) -> f64 {
    let about = |at: usize| sites[at].position - symmetry.frame.centre;
    let order = symmetry.group.order();
    let mut sum = 0.0;
    for at in 0..sites.len() {
        let images = (0..order).map(|element| {
            let matrix = turn * symmetry.matrix(element) * turn.transpose();
            matrix.transpose() * about(symmetry.permutations[element][at])
        });
        sum += (images.sum::<Vector3<f64>>() / order as f64 - about(at)).norm_squared();
    }
    sum / sites.len() as f64
}

#[test]
fn deviation_is_from_the_nearest_symmetric_arrangement() {
    let mut random = Random::new(12);
    for text in ["benzene", "six ligands", "ethane skew", "water"] {
        let sites = scrambled(&disturbed(&molecule(text), 0.2, &mut random), &mut random);
        let group = found(&molecule(text)).ladder[0].name;
        let detection = found(&sites);
        let rung = detection.ladder.iter().find(|rung| rung.name == group).unwrap();
        let symmetry = detection.place(rung, &sites, None).unwrap();
        let here = mean_square(&sites, &symmetry, &Matrix3::identity());
        assert!((here.sqrt() - symmetry.deviation.rms).abs() < 1e-12, "{text}");
        for axis in [Vector3::x_axis(), Vector3::y_axis(), Vector3::z_axis()] {
            let turned = |angle| mean_square(&sites, &symmetry, Rotation3::from_axis_angle(&axis, angle).matrix());
            let slope = (turned(1e-4) - turned(-1e-4)) / 2e-4;
            assert!(slope.abs() < 1e-8, "{text}: turning about {axis:?} changes the mean square by {slope:e} a radian");
            assert!(turned(0.01) > here && turned(-0.01) > here, "{text}: a minimum");
        }
    }
}

#[test]
fn six_decimals_keep_the_group() {
    for (text, group, sites) in molecules() {
        let rounded: Vec<Site> = scrambled(&sites, &mut Random::new(4))
            .iter()
            .map(|site| {
                let position = site.position.map(|x| (x / ANGSTROM * 1e6).round() / 1e6 * ANGSTROM);
                Site { kind: site.kind, position }
            })
            .collect();
        let detection = found(&rounded);
        assert_eq!(detection.ladder[0].name, name(group), "{text}");
        assert!(detection.ladder[0].deviation.max < 1e-6 * ANGSTROM, "{text}");
    }
}

#[test]
fn stretched_octahedron_is_d4h_then_oh() {
    for delta in [1e-3, 1e-2, 0.1, 0.3] {
        let mut sites = molecule("six ligands");
        for site in &mut sites {
            site.position.z *= 1.0 + delta / 4.0;
        }
        let sites = scrambled(&sites, &mut Random::new(5));
        let detection = found(&sites);
        let names: Vec<String> = detection.ladder.iter().map(|rung| rung.name.to_string()).collect();
        assert_eq!(names, ["D4h", "Oh"], "{delta}");
        // Two ligands δ farther out than four: the mean is δ/3 above the four and 2δ/3 below the two.
        assert!((detection.ladder[1].deviation.max - 2.0 / 3.0 * delta).abs() < 1e-9);
        let rms = (delta * delta * (2.0 * 4.0 / 9.0 + 4.0 / 9.0) / 7.0).sqrt();
        assert!((detection.ladder[1].deviation.rms - rms).abs() < 1e-9);
    }
}

#[test]
fn slightly_twisted_sandwich_is_d5_then_eclipsed() {
    let degrees: f64 = 1.0;
    let sites = scrambled(&sandwich(degrees), &mut Random::new(9));
    let detection = found(&sites);
    let names: Vec<String> = detection.ladder.iter().take(2).map(|rung| rung.name.to_string()).collect();
    assert_eq!(names, ["D5", "D5h"]);
    // Both rings meet half way: the outermost sites, 4.33 from the axis, lie off the mean by the sine of half the twist.
    let expected = 4.33 * (degrees.to_radians() / 2.0).sin();
    assert!((detection.ladder[1].deviation.max - expected).abs() < 1e-9);
}

#[test]
fn a_nearly_linear_molecule_shows_what_is_on_the_way() {
    let bent = |height: f64| {
        [(1, -2.0, 0.0), (0, 0.0, height), (1, 2.0, 0.0)]
            .map(|(kind, x, y)| Site { kind, position: Point3::new(x, y, 0.0) })
    };
    let detection = found(&scrambled(&bent(0.03), &mut Random::new(6)));
    let names: Vec<String> = detection.ladder.iter().map(|rung| rung.name.to_string()).collect();
    assert_eq!(names, ["C2v", "Dinfh"]);
    // The central site is 2/3 of the height from the line through the centroid.
    assert!((detection.ladder[1].deviation.max - 0.02).abs() < 1e-9);
    let symmetry = placed(&bent(0.0), 1e-3);
    assert_eq!(symmetry.group.name(), GroupName::Dinfh);
    let uneven = [(1, -2.0), (0, 0.05), (1, 2.0)].map(|(kind, x)| Site { kind, position: Point3::new(x, 0.0, 0.0) });
    let names: Vec<String> = found(&uneven).ladder.iter().map(|rung| rung.name.to_string()).collect();
    assert_eq!(names, ["Cinfv", "Dinfh"]);
}

#[test]
fn special_places() {
    let at = |kind, x: f64| Site { kind, position: Point3::new(x, 0.5, -0.3) };
    assert_eq!(found(&[at(0, 1.0)]).ladder[0].name, GroupName::K);
    assert_eq!(found(&[at(0, 1.0), at(1, 1.0)]).ladder[0].name, GroupName::K, "a ghost on an atom");
    assert_eq!(found(&[at(0, 1.0), at(0, 3.0)]).ladder[0].name, GroupName::Dinfh);
    assert_eq!(found(&[at(0, 1.0), at(1, 3.0)]).ladder[0].name, GroupName::Cinfv);
    let settings = DetectSettings::default();
    assert_eq!(detect(&[], &settings), Err(DetectError::NoSites));
    assert!(matches!(
        detect(&[at(0, 1.0), at(1, 4.0), at(0, 1.0)], &settings),
        Err(DetectError::SamePlace { first: 0, second: 2, .. })
    ));
    assert!(matches!(detect(&[at(0, f64::NAN)], &settings), Err(DetectError::Coordinate { site: 0, .. })));
    assert!(matches!(detect(&[at(0, 1e300)], &settings), Err(DetectError::Coordinate { .. })));
    assert!(matches!(detect(&[at(0, 1.0)], &DetectSettings { limit_bohr: f64::NAN }), Err(DetectError::Limit { .. })));
    let mut ghosts = molecule("benzene");
    ghosts.extend(molecule("benzene").iter().map(|site| Site { kind: site.kind + 7, ..*site }));
    assert_eq!(found(&ghosts).ladder[0].name, GroupName::Dnh(6), "a ghost on every atom");
}

/// Standard coordinates of the sites of one kind.
fn seen(sites: &[Site], kind: u32) -> Vec<Vector3<f64>> {
    let symmetry = placed(sites, 0.01 * ANGSTROM);
    sites.iter().filter(|site| site.kind == kind).map(|site| symmetry.standard_coordinates(&site.position)).collect()
}

#[test]
fn axes_follow_the_convention() {
    const ON: f64 = 1e-6;
    let on = |x: &Vector3<f64>, axis: usize| (0..3).filter(|&k| k != axis).all(|k| x[k].abs() < ON);
    for seed in 0..5 {
        let turned = |text: &str| scrambled(&molecule(text), &mut Random::new(seed));
        // Kinds: 0 is the heaviest atom of each molecule.
        let carbons = seen(&turned("benzene"), 0);
        assert_eq!(carbons.iter().filter(|x| on(x, 0)).count(), 2, "C2' of benzene through atoms");
        let carbons = seen(&turned("ethene"), 0);
        assert!(carbons.iter().all(|x| on(x, 2)), "z of ethene along C=C");
        assert!(seen(&turned("ethene"), 1).iter().all(|x| x.x.abs() < ON), "x of ethene across the plane");
        let carbons = seen(&turned("naphthalene"), 0);
        assert!(carbons.iter().all(|x| x.x.abs() < ON), "x of naphthalene across the plane");
        assert_eq!(carbons.iter().filter(|x| on(x, 2)).count(), 2, "z of naphthalene through the two central atoms");
        assert!(seen(&turned("water"), 1).iter().all(|x| x.x.abs() < ON), "water in yz");
        let ligands = seen(&turned("square MX4"), 1);
        assert_eq!(ligands.iter().filter(|x| on(x, 0)).count(), 2, "C2' of square MX4 through ligands");
        let ligands = seen(&turned("square pyramid"), 1);
        assert_eq!(ligands.iter().filter(|x| x.y.abs() < ON).count(), 3, "sigma_v of square pyramid through ligands");
        let atoms = seen(&turned("planar XY3"), 1);
        assert_eq!(atoms.iter().filter(|x| x.z.abs() < ON).count(), 3, "z of XY3 across the plane");
        assert_eq!(atoms.iter().filter(|x| on(x, 0) && x.x > 0.0).count(), 1, "x of XY3 along a bond");
        let heavy = seen(&turned("bent XY2 with two Z across"), 1);
        assert!(heavy.iter().all(|x| x.x.abs() < ON), "the plane with most atoms is yz");
        let centres = seen(&turned("two bridges"), 0);
        // Two axes pass through two atoms each and no bond: the one through atoms of the first kind is taken.
        assert!(centres.iter().all(|x| on(x, 2)), "z of two bridged centres through these");
    }
}

#[test]
fn convention_tells_the_other_choice() {
    let symmetry = placed(&molecule("benzene"), 1e-3);
    assert_eq!(
        symmetry.frame.convention,
        "z: C6 axis; x: C2' through 4 atoms, the other half turns C2'' through 2 bonds"
    );
    assert_eq!(symmetry.passages[0].atoms.len(), 4);
    let swaps: Vec<String> =
        symmetry.other_settings[0].swaps.iter().map(|(here, there)| format!("{here} {there}")).collect();
    assert_eq!(swaps, ["B1g B2g", "B2g B1g", "B1u B2u", "B2u B1u"]);
    let tied = placed(&molecule("tetrahedral MX2Y2"), 1e-3);
    assert!(tied.frame.convention.contains("do not tell"), "{}", tied.frame.convention);
    assert!(!symmetry.frame.convention.contains("do not tell"));
    assert!(placed(&molecule("planar XY3"), 1e-3).other_settings.is_empty());
    assert_eq!(placed(&molecule("water"), 1e-3).other_settings.len(), 1);
}

#[test]
fn many_sites_take_little_time() {
    // Cut from a cubic lattice: shells with many sites at nearly equal distances.
    let half = 5;
    let mut sites = Vec::new();
    for i in -half..=half {
        for j in -half..=half {
            for k in -half..=half {
                if i * i + j * j + k * k <= 30 {
                    let position = Point3::new(f64::from(i), f64::from(j), f64::from(k)) * 4.5;
                    sites.push(Site { kind: 0, position });
                }
            }
        }
    }
    let sites = scrambled(&sites, &mut Random::new(7));
    let start = std::time::Instant::now();
    assert_eq!(found(&sites).ladder[0].name, GroupName::Oh);
    eprintln!("{} sites of a cubic cluster: {:?}", sites.len(), start.elapsed());
    for n in [1000, 10_000] {
        let sites = generic(n, 8);
        let start = std::time::Instant::now();
        assert_eq!(found(&sites).ladder[0].name, GroupName::C1);
        eprintln!("{n} sites without symmetry: {:?}", start.elapsed());
    }
    // Thousands of like sites on a sphere: searched as far as that is feasible, and it is said how far.
    let n = 8000;
    let places = (0..n).map(|k| {
        let (height, angle) = (1.0 - f64::from(2 * k + 1) / f64::from(n), 2.399_963 * f64::from(k));
        let across = (1.0 - height * height).sqrt();
        Point3::from(Vector3::new(across * angle.cos(), across * angle.sin(), height) * 65.0)
    });
    let sphere: Vec<Site> = places.map(|position| Site { kind: 0, position }).collect();
    let detection = found(&sphere);
    // The spiral has one half turn that exchanges its ends.
    assert_eq!(detection.ladder[0].name, GroupName::Cn(2));
    assert!(detection.searched_bohr < 0.3 * ANGSTROM);
    // Orders of magnitude only: debug builds on a loaded machine.
    assert!(start.elapsed().as_secs() < 60);
}

proptest! {
    #![proptest_config(ProptestConfig::with_cases(400))]

    /// Sites on a coarse grid (many coincidences, lines, planes, equal distances), some shifted a little: every rung holds what it says.
    #[test]
    fn any_sites_give_true_groups(
        places in proptest::collection::vec((0_u32..2, -2_i8..3, -2_i8..3, -2_i8..3), 1..14),
        scale in 0.4_f64..4.0,
        shift in 0_usize..4,
    ) {
        let mut sites: Vec<Site> = places
            .iter()
            .map(|&(kind, x, y, z)| Site { kind, position: Point3::from(Vector3::new(x, y, z).map(f64::from) * scale) })
            .collect();
        sites[0].position.x += [0.0, 1e-7, 1e-4, 0.1][shift];
        match detect(&sites, &DetectSettings::default()) {
            Ok(detection) => for rung in &detection.ladder {
                let symmetry = detection.place(rung, &sites, None).unwrap();
                assert_consistent(&sites, &symmetry, &rung.name.to_string());
            },
            Err(error) => prop_assert!(matches!(error, DetectError::SamePlace { .. }), "{}", error),
        }
    }
}

/// The number of permutations that keep kinds and all distances: found by trying all, for a few sites.
fn n_isometries(sites: &[Site]) -> usize {
    fn extended(sites: &[Site], images: &mut Vec<usize>) -> usize {
        let next = images.len();
        if next == sites.len() {
            return 1;
        }
        let mut count = 0;
        for image in 0..sites.len() {
            let apart = |a: usize, b: usize| (sites[a].position - sites[b].position).norm();
            let fits = !images.contains(&image)
                && sites[image].kind == sites[next].kind
                && images.iter().enumerate().all(|(at, &other)| (apart(at, next) - apart(other, image)).abs() < 1e-6);
            if fits {
                images.push(image);
                count += extended(sites, images);
                images.pop();
            }
        }
        count
    }
    extended(sites, &mut Vec::new())
}

proptest! {
    #![proptest_config(ProptestConfig::with_cases(400))]

    /// The exact group of a few sites has as many operations as there are permutations that keep all distances, and twice as many in
    /// a plane, where the reflection in it moves nothing.
    #[test]
    fn no_operation_is_missed(
        places in proptest::collection::vec((0_u32..2, -1_i8..2, -1_i8..2, -1_i8..2), 3..9),
        seed in 0_u64..1000,
    ) {
        let sites: Vec<Site> = places
            .iter()
            .map(|&(kind, x, y, z)| Site { kind, position: Point3::from(Vector3::new(x, y, z).map(f64::from) * 2.5) })
            .collect();
        let sites = scrambled(&sites, &mut Random::new(seed));
        if let Ok(detection) = detect(&sites, &DetectSettings::default()) {
            let centre = detection.centre;
            let moments: Matrix3<f64> = sites
                .iter()
                .map(|site| (site.position - centre) * (site.position - centre).transpose())
                .sum();
            let rank = moments.rank(1e-6);
            let expected = match rank {
                3 => Some(n_isometries(&sites)),
                2 => Some(2 * n_isometries(&sites)),
                _ => None,
            };
            prop_assert_eq!(detection.ladder[0].order(), expected, "{}", detection.ladder[0].name);
        }
    }
}

proptest! {
    #![proptest_config(ProptestConfig::with_cases(48))]

    /// Turning, shifting and reordering leaves the group, the deviation and the standard coordinates as they are.
    #[test]
    fn motion_changes_nothing_but_the_axes(seed in 0_u64..1_000_000, which in 0_usize..1000, noise in 0_usize..3) {
        let all = molecules();
        let (text, _, sites) = &all[which % all.len()];
        let mut random = Random::new(seed);
        let sites = disturbed(sites, [0.0, 1e-7, 1e-3][noise], &mut random);
        let moved = scrambled(&sites, &mut random);
        let (before, after) = (placed(&sites, 0.01 * ANGSTROM), placed(&moved, 0.01 * ANGSTROM));
        prop_assert_eq!(before.group.name(), after.group.name(), "{}", text);
        prop_assert!((before.deviation.max - after.deviation.max).abs() < 1e-9);
        prop_assert!((before.deviation.rms - after.deviation.rms).abs() < 1e-9);
        prop_assert_eq!(&before.frame.convention, &after.frame.convention);
        // Frames that the group itself connects show the sites alike to within what they deviate; x across a linear molecule is free.
        let limit = 2.0 * before.deviation.max + 1e-6;
        let linear = before.group.is_continuous();
        for site in &sites {
            let place = before.standard_coordinates(&site.position);
            let again = moved.iter().any(|other| {
                let mut apart = after.standard_coordinates(&other.position) - place;
                if linear {
                    apart.x = 0.0;
                    apart.y = 0.0;
                }
                other.kind == site.kind && apart.norm() < limit
            });
            prop_assert!(again, "{}: {:?} is nowhere", text, place);
        }
    }
}
