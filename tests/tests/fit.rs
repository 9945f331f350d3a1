//! The best dipole: against a slow dense search, known answers and statistics.
use inward_core::Vec3;
use inward_core::fit::{Fit, Fitter, Stopped};
use inward_core::forward::LeadField;
use inward_core::head::{ShellSpec, Shells};
use inward_tests::{Draw, Electrodes, Mixture, MultiStart, PlainSeries};
use std::thread;

/// Largest distance of a source from the centre in the default head, in scalp radii.
const REACH: f64 = 0.98 * 79.0 / 88.0;

fn standard(electrodes: &Electrodes) -> Fitter {
    Fitter::new(LeadField::new(&Shells::standard(), 88.0, electrodes.directions.clone()))
}

/// Fits of all maps, and the same by dense search, on two threads.
fn compare(electrodes: usize, count: usize, seed: u64) {
    let electrodes = Electrodes::set(electrodes);
    let series = PlainSeries::standard();
    let maps = Mixture::many(&series, &electrodes.directions, REACH, count, &mut Draw::from(seed));
    let fitter = standard(&electrodes);
    let search = MultiStart::new(series, electrodes.directions.clone(), REACH);
    let half = maps.len().div_ceil(2);
    let (mut worst, mut best) = (f64::MIN, f64::MAX);
    let mut boundary = 0;
    thread::scope(|scope| {
        let parts: Vec<_> = maps
            .chunks(half)
            .map(|part| scope.spawn(|| part.iter().map(|map| check(&fitter, &search, map)).collect::<Vec<_>>()))
            .collect();
        for part in parts {
            for (excess, stopped) in part.join().unwrap() {
                (worst, best) = (worst.max(excess), best.min(excess));
                boundary += usize::from(stopped == Stopped::Boundary);
            }
        }
    });
    println!(
        "{} electrodes, {} maps: residual variance above the dense search by {worst:.1e} at most, below it by {:.1e}; {boundary} on the boundary",
        electrodes.count(),
        maps.len(),
        -best
    );
    assert!(boundary > 0 && boundary < maps.len(), "maps of both sorts are among them");
}

/// How far the engine's residual variance lies above that of the dense search.
fn check(fitter: &Fitter, search: &MultiStart, map: &Mixture) -> (f64, Stopped) {
    let fit = fitter.fit(&map.values).unwrap();
    let (reference, place) = search.best(&map.values);
    let excess = fit.residual_variance - reference;
    assert!(
        excess <= 1e-6,
        "{}: {} at {:?}, but {reference} at {place:?}",
        map.kind,
        fit.residual_variance,
        fit.position
    );
    let again = search.residual_variance(fit.position, &map.values);
    assert!(
        (again - fit.residual_variance).abs() < 1e-7,
        "{}: {} there by the series, {} told",
        map.kind,
        again,
        fit.residual_variance
    );
    assert!(fit.position.norm() <= REACH * (1.0 + 1e-12), "{}: outside", map.kind);
    let on_boundary = fit.position.norm() > REACH * (1.0 - 1e-9);
    assert_eq!(
        on_boundary,
        fit.stopped == Stopped::Boundary,
        "{}: {:?} at {}",
        map.kind,
        fit.stopped,
        fit.position.norm()
    );
    assert_ne!(fit.stopped, Stopped::IterationLimit, "{}", map.kind);
    (excess, fit.stopped)
}

#[test]
fn none_of_the_mixed_maps_is_worse_than_a_dense_search_at_19_electrodes() {
    compare(19, 504, 19);
}

#[test]
fn none_of_the_mixed_maps_is_worse_than_a_dense_search_at_32_electrodes() {
    compare(32, 504, 32);
}

#[test]
fn none_of_the_mixed_maps_is_worse_than_a_dense_search_at_71_electrodes() {
    compare(71, 504, 71);
}

#[test]
fn none_of_the_mixed_maps_is_worse_than_a_dense_search_at_128_electrodes() {
    compare(128, 504, 128);
}

#[test]
fn a_dipole_without_noise_is_found_again() {
    let electrodes = Electrodes::set(32);
    let series = PlainSeries::standard();
    let fitter = standard(&electrodes);
    let mut draw = Draw::from(5);
    for k in 0..300 {
        let eccentricity = if k == 0 { 0.0 } else { draw.between(0.0, 0.97) };
        let position = draw.position(1.0, 1.0) * (eccentricity * 79.0 / 88.0);
        let moment = draw.direction() * draw.between(1.0, 50.0);
        let map: Vec<f64> =
            series.lead(position, &electrodes.directions, 1e-15).iter().map(|row| row.dot(moment)).collect();
        let fit = fitter.fit(&map).unwrap();
        assert!((fit.position - position).norm() * 88.0 < 1e-4, "{position:?}: {fit:?}");
        assert!((fit.moment - moment).norm() < 1e-4 * moment.norm(), "{moment:?}: {fit:?}");
        assert!(fit.residual_variance < 1e-12, "{fit:?}");
        assert_eq!(fit.stopped, Stopped::Converged);
    }
}

#[test]
fn a_map_fits_the_same_alone_and_among_others() {
    let electrodes = Electrodes::set(71);
    let series = PlainSeries::standard();
    let maps = Mixture::many(&series, &electrodes.directions, REACH, 45, &mut Draw::from(8));
    let fitter = standard(&electrodes);
    let values: Vec<&[f64]> = maps.iter().map(|map| map.values.as_slice()).collect();
    let together: Vec<Option<Fit>> = fitter.fit_batch(&values);
    let alone: Vec<Option<Fit>> = values.iter().map(|map| fitter.fit(map)).collect();
    // Equal numbers, bit for bit: no sum may depend on what else is in the batch.
    assert_eq!(together, alone);
    let mixed: Vec<&[f64]> = values.iter().rev().copied().collect();
    let reversed: Vec<Option<Fit>> = fitter.fit_batch(&mixed).into_iter().rev().collect();
    assert_eq!(together, reversed);
}

#[test]
fn a_constant_map_has_no_fit() {
    let fitter = standard(&Electrodes::set(19));
    assert_eq!(fitter.fit(&[3.7; 19]), None);
    assert_eq!(fitter.fit(&[0.0; 19]), None);
}

/// What a homogeneous head makes of a three-shell head with this skull ratio.
struct Equivalent {
    skull: f64,
    /// Position over true position, and strength over true strength, of small eccentricities.
    limit: f64,
    strength: f64,
    /// Position over true position at .4, .6 and .8 of the scalp radius.
    radial: [f64; 3],
    tangential: [f64; 3],
    /// Residual variance in per cent of a radial dipole at .8.
    left_over: f64,
}

const EQUIVALENT: [Equivalent; 3] = [
    Equivalent {
        skull: 80.0,
        limit: 0.61023957,
        strength: 0.65663774,
        radial: [0.6222, 0.6416, 0.6849],
        tangential: [0.6209, 0.6381, 0.6761],
        left_over: 0.907,
    },
    Equivalent {
        skull: 25.0,
        limit: 0.79935118,
        strength: 0.91241022,
        radial: [0.7999, 0.8051, 0.8282],
        tangential: [0.7997, 0.8042, 0.8244],
        left_over: 0.329,
    },
    Equivalent {
        skull: 15.0,
        limit: 0.87262638,
        strength: 0.97996791,
        radial: [0.8684, 0.8671, 0.8797],
        tangential: [0.8687, 0.8672, 0.8777],
        left_over: 0.164,
    },
];

/// A map of three shells fitted in a homogeneous sphere of the same radius. Values computed independently with 40
/// digits (tests/reference); in the limit of small eccentricity position × F2/F1 and strength × F1 hold exactly.
/// Ary, Klein & Fender 1981 published about 0.6 for a skull ratio of 80 (from memory).
#[test]
fn a_homogeneous_head_gives_the_known_equivalent_eccentricity() {
    let electrodes = Electrodes::spread(642, -1.0).directions;
    let whole = Shells::new(vec![ShellSpec { tissue: "head".into(), ratio: 1.0, conductivity: 0.33 }]).unwrap();
    let fitter = Fitter::new(LeadField::new(&whole, 92.0, electrodes.clone()));
    let axis = Draw::from(1981).direction();
    let across = axis.cross(Vec3::new(0.0, 0.0, 1.0)).unit().unwrap();
    let mut worst = 0.0f64;
    for Equivalent { skull: ratio, limit, strength, radial, tangential, left_over } in EQUIVALENT {
        let layers = [(80.0 / 92.0, 0.33), (85.0 / 92.0, 0.33 / ratio), (1.0, 0.33)];
        let series = PlainSeries::new(&layers, 92.0);
        let fit = |b: f64, moment: Vec3| {
            let rows = series.lead(axis * b, &electrodes, 1e-14);
            fitter.fit(&rows.iter().map(|row| row.dot(moment)).collect::<Vec<_>>()).unwrap()
        };
        let small = fit(0.01, across * 10.0);
        assert!((small.position.norm() / 0.01 - limit).abs() < 1e-4, "1:{ratio}: {}", small.position.norm() / 0.01);
        assert!((small.moment.norm() / 10.0 - strength).abs() < 1e-4, "1:{ratio}: {}", small.moment.norm() / 10.0);
        for (k, b) in [0.4, 0.6, 0.8].into_iter().enumerate() {
            for (moment, known) in [(axis, radial[k]), (across, tangential[k])] {
                let found = fit(b, moment * 10.0);
                let quotient = found.position.norm() / b;
                worst = worst.max((quotient - known).abs());
                assert!((quotient - known).abs() < 2e-3, "1:{ratio}, {b}: {quotient}, not {known}");
            }
        }
        let rest = 100.0 * fit(0.8, axis * 10.0).residual_variance;
        assert!((rest - left_over).abs() < 0.05 * left_over, "1:{ratio}: {rest} % left over, not {left_over}");
    }
    println!("equivalent eccentricity: off by {worst:.1e} at most");
}

/// Fixed dipole plus white noise of variance s²: E[RV] = (N − 7) s² / (|v|² + (N − 1) s²), v the noiseless map.
#[test]
fn noise_leaves_over_what_the_degrees_of_freedom_say() {
    let series = PlainSeries::standard();
    for (count, level, seed) in [(19, 0.1, 1), (32, 0.1, 2), (71, 0.05, 3), (71, 0.2, 4), (128, 0.1, 5)] {
        let electrodes = Electrodes::set(count);
        let fitter = standard(&electrodes);
        let rows = series.lead(Vec3::new(-0.3, 0.25, 0.4), &electrodes.directions, 1e-12);
        let clean: Vec<f64> = rows.iter().map(|row| row.dot(Vec3::new(4.0, 3.0, 8.0))).collect();
        let mean = clean.iter().sum::<f64>() / clean.len() as f64;
        let power: f64 = clean.iter().map(|v| (v - mean) * (v - mean)).sum();
        let n = count as f64;
        let variance = level * level * power / n;
        let mut draw = Draw::from(seed);
        let runs = 600;
        let found: Vec<f64> = (0..runs)
            .map(|_| {
                let map: Vec<f64> = clean.iter().map(|v| v + variance.sqrt() * draw.normal()).collect();
                fitter.fit(&map).unwrap().residual_variance
            })
            .collect();
        let average = found.iter().sum::<f64>() / f64::from(runs);
        let spread = (found.iter().map(|v| (v - average) * (v - average)).sum::<f64>() / f64::from(runs - 1)).sqrt();
        let expected = (n - 7.0) * variance / (power + (n - 1.0) * variance);
        // Four standard errors, and what the formula itself leaves out (it is of first order in the noise).
        let allowed = 4.0 * spread / f64::from(runs).sqrt() + 0.004 * expected;
        println!("{count} electrodes, noise {level}: {average:.5}, expected {expected:.5} ± {allowed:.5}");
        assert!((average - expected).abs() < allowed, "{count}, {level}: {average}, not {expected}");
    }
}
