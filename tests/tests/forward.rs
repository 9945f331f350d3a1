//! The lead field against values from outside: 40-digit series and closed forms.
use inward_core::Vec3;
use inward_core::forward::LeadField;
use inward_core::head::{ShellSpec, Shells};
use inward_tests::{Draw, Electrodes, PlainSeries, data};
use std::collections::BTreeMap;

fn shells(layers: &[(f64, f64)]) -> Shells {
    let specs = layers.iter().enumerate().map(|(k, &(ratio, conductivity))| ShellSpec {
        tissue: format!("shell {}", k + 1),
        ratio,
        conductivity,
    });
    Shells::new(specs.collect()).unwrap()
}

/// Shells and scalp radius in mm of an isotropic model of the tables, by its name.
fn model(name: &str) -> Option<(Vec<(f64, f64)>, f64)> {
    let ratio = || name.rsplit_once("_r").and_then(|(_, text)| text.parse::<f64>().ok());
    if name.ends_with("10x") {
        None
    } else if name.starts_with("hom") {
        Some((vec![(1.0, 0.33)], 92.0))
    } else if name.starts_with("3shell") {
        Some((vec![(80.0 / 92.0, 0.33), (85.0 / 92.0, 0.33 / ratio()?), (1.0, 0.33)], 92.0))
    } else {
        let layers = [(79.0, 0.33), (80.0, 1.65), (85.0, 0.33 / ratio()?), (90.0, 0.33)];
        Some((layers.map(|(r, s)| (r / 90.0, s)).to_vec(), 90.0))
    }
}

#[test]
fn agrees_with_forty_digit_values_per_model_depth_and_orientation() {
    let table = data("potentials_axis.csv");
    let mut groups: BTreeMap<(String, String, String), Vec<(f64, f64)>> = BTreeMap::new();
    for line in table.lines().skip(1) {
        let row: Vec<&str> = line.split(',').collect();
        let key = (row[0].into(), row[1].into(), row[2].into());
        groups.entry(key).or_default().push((row[3].parse().unwrap(), row[4].parse().unwrap()));
    }
    let mut draw = Draw::from(40);
    let (mut worst_exact, mut worst_quick, mut count) = (0.0f64, 0.0f64, 0);
    for ((name, r0, orientation), values) in &groups {
        let Some((layers, radius)) = model(name) else { continue };
        let distance: f64 = r0.parse::<f64>().unwrap() / radius;
        let turns: [&dyn Fn(Vec3) -> Vec3; 2] = [&|p| p, &draw.rotation()];
        for turn in turns {
            let directions = values.iter().map(|(angle, _)| {
                let angle = angle.to_radians();
                turn(Vec3::new(angle.sin(), 0.0, angle.cos()))
            });
            let field = LeadField::new(&shells(&layers), radius, directions.collect());
            let position = turn(Vec3::new(0.0, 0.0, distance));
            let moment = turn(if orientation == "rad" { Vec3::new(0.0, 0.0, 10.0) } else { Vec3::new(10.0, 0.0, 0.0) });
            let largest = values.iter().fold(0.0f64, |most, (_, v)| most.max(v.abs()));
            let error = |rows: ndarray::Array2<f64>| {
                let differences = rows
                    .rows()
                    .into_iter()
                    .zip(values)
                    .map(|(row, (_, v))| (row[0] * moment[0] + row[1] * moment[1] + row[2] * moment[2] - v).abs());
                differences.fold(0.0, f64::max) / largest
            };
            let (exact, quick) = (error(field.exact(position)), error(field.quick(position)));
            assert!(exact <= 1e-9, "{name}, {r0} mm, {orientation}: series off by {exact:e}");
            assert!(quick <= 1e-8, "{name}, {r0} mm, {orientation}: quick evaluation off by {quick:e}");
            (worst_exact, worst_quick, count) = (worst_exact.max(exact), worst_quick.max(quick), count + 1);
        }
    }
    // 7 isotropic models, 11 depths, 2 orientations, each as tabulated and turned.
    assert_eq!(count, 7 * 11 * 2 * 2);
    println!("largest error of the series {worst_exact:.1e}, of the quick evaluation {worst_quick:.1e}");
}

#[test]
fn agrees_off_the_axes() {
    let table = data("potentials_cartesian.csv");
    let mut groups: BTreeMap<String, Vec<(Vec3, f64, f64)>> = BTreeMap::new();
    for line in table.lines().skip(1) {
        let row: Vec<&str> = line.split(',').collect();
        let number = |k: usize| row[k].parse::<f64>().unwrap();
        let name = row[0].replace("3shell_", "3shell_80_85_92_").replace("4shell_", "4shell_79_80_85_90_csf5_");
        groups.entry(name).or_default().push((Vec3::new(number(3), number(4), number(5)), number(6), number(7)));
    }
    let mut count = 0;
    for (name, values) in groups {
        let Some((layers, radius)) = model(&name) else { continue };
        let field = LeadField::new(&shells(&layers), radius, values.iter().map(|(e, ..)| *e).collect());
        let rows = field.exact(Vec3::new(-30.0, 24.0, 32.0) * (1.0 / radius));
        let found: Vec<f64> = rows.rows().into_iter().map(|row| 3.0 * row[0] - 4.0 * row[1] + 12.0 * row[2]).collect();
        let mean = found.iter().sum::<f64>() / found.len() as f64;
        for (v, (_, raw, referenced)) in found.iter().zip(&values) {
            assert!((v - raw).abs() < 1e-9 && (v - mean - referenced).abs() < 1e-9, "{name}: {v} for {raw}");
        }
        count += 1;
    }
    assert_eq!(count, 3);
}

/// Central dipole: surface potential over that of a homogeneous head (de Munck & Peters 1993, degree one alone).
#[test]
fn a_central_dipole_is_weakened_by_the_skull_as_computed() {
    for (ratio, expected) in [(80.0, 0.6566377352), (25.0, 0.9124102185), (15.0, 0.9799679119)] {
        let e = vec![Vec3::new(0.0, 0.6, 0.8)];
        let layered = shells(&[(80.0 / 92.0, 0.33), (85.0 / 92.0, 0.33 / ratio), (1.0, 0.33)]);
        let layered = LeadField::new(&layered, 92.0, e.clone());
        let plain = LeadField::new(&shells(&[(1.0, 0.33)]), 92.0, e);
        for axis in [1, 2] {
            for (a, b) in [
                (layered.exact(Vec3::ZERO), plain.exact(Vec3::ZERO)),
                (layered.quick(Vec3::ZERO), plain.quick(Vec3::ZERO)),
            ] {
                let found = a[[0, axis]] / b[[0, axis]];
                assert!((found - expected).abs() < 1e-9, "1:{ratio}: {found}");
            }
        }
    }
}

/// Homogeneous sphere in closed form (Wilson & Bayley 1950; Frank 1952), µV per nAm: `radial` is the moment along the
/// dipole's axis, `across` the part of the moment at right angles to it, along the electrode's direction.
fn closed_form(b: f64, c: f64, radial: f64, across: f64, radius: f64, sigma: f64) -> f64 {
    let d = (1.0 - 2.0 * b * c + b * b).sqrt();
    let along = 2.0 * (c - b) / d.powi(3) + (2.0 * c - b) / (d * (1.0 + d));
    let aside = 2.0 / d.powi(3) + (1.0 + d) / (d * (1.0 + d - b * c));
    1e3 * (radial * along + across * aside) / (4.0 * std::f64::consts::PI * sigma * radius * radius)
}

#[test]
fn equal_conductivities_are_a_homogeneous_sphere() {
    let equal = shells(&[(0.85, 0.33), (0.9, 0.33), (0.95, 0.33), (1.0, 0.33)]);
    let mut draw = Draw::from(3);
    let mut worst = 0.0f64;
    for _ in 0..200 {
        let axis = draw.direction();
        let b = draw.between(0.0, 0.98 * 0.85);
        let electrodes: Vec<Vec3> = (0..40).map(|_| draw.direction()).chain([axis, axis * -1.0]).collect();
        let field = LeadField::new(&equal, 90.0, electrodes.clone());
        let rows = field.exact(axis * b);
        let moment = draw.direction() * 10.0;
        let radial = moment.dot(axis);
        let expected: Vec<f64> = electrodes
            .iter()
            .map(|&e| {
                let c = e.dot(axis);
                closed_form(b, c, radial, moment.dot(e) - radial * c, 90.0, 0.33)
            })
            .collect();
        let largest = expected.iter().fold(0.0f64, |most, v| most.max(v.abs()));
        for (row, v) in rows.rows().into_iter().zip(&expected) {
            let found = row[0] * moment[0] + row[1] * moment[1] + row[2] * moment[2];
            worst = worst.max((found - v).abs() / largest);
        }
    }
    assert!(worst <= 1e-9, "{worst:e}");
    println!("homogeneous sphere: largest error {worst:.1e}");
}

/// Largest errors of the series and of the quick evaluation in one head, over positions up to the limit of sources.
fn errors_against_plain_series(layers: &[(f64, f64)], draw: &mut Draw) -> (f64, f64) {
    let plain = PlainSeries::new(layers, 88.0);
    let electrodes = Electrodes::spread(60, -1.0).directions;
    let field = LeadField::new(&shells(layers), 88.0, electrodes.clone());
    let mut worst = (0.0f64, 0.0f64);
    for k in 0..24 {
        let eccentricity = [0.0, 0.03, 0.5, 0.9, 0.95, 0.98][k % 6];
        // Close under an electrode too.
        let axis = if k % 4 == 0 { electrodes[k] } else { draw.direction() };
        let position = axis * (eccentricity * layers[0].0);
        let expected = plain.lead(position, &electrodes, 1e-15);
        let largest = expected.iter().fold(0.0f64, |most, row| row.0.iter().fold(most, |m, v| m.max(v.abs())));
        let error = |rows: ndarray::Array2<f64>| {
            let pairs = rows.rows().into_iter().zip(&expected);
            pairs.flat_map(|(row, v)| [0, 1, 2].map(|i| (row[i] - v[i]).abs())).fold(0.0, f64::max) / largest
        };
        worst = (worst.0.max(error(field.exact(position))), worst.1.max(error(field.quick(position))));
    }
    worst
}

#[test]
fn agrees_with_a_plain_series_in_heads_of_many_shells() {
    let layers: [&[(f64, f64)]; 4] = [
        &[(79.0 / 88.0, 0.33), (81.0 / 88.0, 1.79), (85.0 / 88.0, 0.0132), (1.0, 0.33)],
        &[(0.8, 0.2), (0.82, 0.45), (0.84, 1.6), (0.87, 0.03), (0.9, 0.006), (0.95, 0.03), (1.0, 0.4)],
        &[(0.84, 0.14), (0.92, 0.0042), (1.0, 0.43)],
        &[(0.95, 0.33), (1.0, 0.02)],
    ];
    let mut draw = Draw::from(7);
    for layers in layers {
        let (exact, quick) = errors_against_plain_series(layers, &mut draw);
        println!("{} shells: series {exact:.1e}, quick {quick:.1e}", layers.len());
        assert!(exact <= 1e-9 && quick <= 1e-8, "{layers:?}: {exact:e}, {quick:e}");
    }
}

#[test]
fn agrees_with_a_plain_series_in_heads_that_nobody_has() {
    let mut draw = Draw::from(77);
    let mut worst = (0.0f64, 0.0f64);
    for k in 0..80 {
        let count = 1 + k % 8;
        let mut ratios: Vec<f64> = (1..count).map(|_| draw.between(0.6, 0.99)).collect();
        ratios.sort_by(f64::total_cmp);
        ratios.push(1.0);
        let layers: Vec<(f64, f64)> =
            ratios.into_iter().map(|ratio| (ratio, 10f64.powf(draw.between(-4.0, 1.0)))).collect();
        let (exact, quick) = errors_against_plain_series(&layers, &mut draw);
        assert!(exact <= 1e-9 && quick <= 1e-8, "{layers:?}: {exact:e}, {quick:e}");
        worst = (worst.0.max(exact), worst.1.max(quick));
    }
    println!("80 invented heads: series {:.1e}, quick {:.1e}", worst.0, worst.1);
}

#[test]
fn the_gradient_is_that_of_the_series() {
    let electrodes = Electrodes::spread(40, -1.0).directions;
    let field = LeadField::new(&Shells::standard(), 88.0, electrodes);
    let mut draw = Draw::from(11);
    for k in 0..30 {
        let distance = if k == 0 { 0.0 } else { draw.between(0.0, 0.87) };
        let position = draw.direction() * distance;
        let gradient = field.gradient(position);
        let largest = gradient.iter().fold(0.0f64, |most, v| most.max(v.abs()));
        let h = 1e-4;
        for j in 0..3 {
            let step = |size: f64| Vec3(std::array::from_fn(|i| if i == j { size } else { 0.0 }));
            let at = |size: f64| field.exact(position + step(size));
            // Five points: error of order h⁴.
            let slope = (at(-2.0 * h) - at(2.0 * h) + (at(h) - at(-h)) * 8.0) / (12.0 * h);
            for (index, row) in slope.rows().into_iter().enumerate() {
                for i in 0..3 {
                    let column = [[0, 1, 2], [1, 3, 4], [2, 4, 5]][i][j];
                    let error = (row[i] - gradient[[index, column]]).abs() / largest;
                    assert!(error < 1e-6, "at {position:?}: {error:e}");
                }
            }
        }
    }
}

#[test]
fn deep_sources_need_few_terms_and_shallow_ones_many() {
    let field = LeadField::new(&Shells::standard(), 88.0, vec![Vec3::new(0.0, 0.0, 1.0)]);
    let terms = |distance: f64| field.series().terms(distance, 0);
    assert!(terms(0.1) < 20 && terms(0.5) < 80, "{} {}", terms(0.1), terms(0.5));
    assert!(terms(0.88) > 2 * terms(0.6), "{} {}", terms(0.88), terms(0.6));
}
