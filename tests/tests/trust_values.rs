//! Quantiles, Moran's I and the bounds of independent noise against values from elsewhere.
use inward_core::math::{Autocorrelation, chi_squared_3_quantile, dot, f_quantile, neighbours, normal_above};
use inward_core::report::Assessment;
use inward_core::{MapReport, Request, Settings, Study, Vec3};
use inward_tests::{Draw, Electrodes, data};
use serde_json::{Value, json};

fn values() -> Value {
    serde_json::from_str(&data("trust_values.json")).unwrap()
}

fn list(value: &Value) -> impl Iterator<Item = &Value> {
    let list = value.as_array().unwrap();
    assert!(!list.is_empty());
    list.iter()
}

fn close(found: f64, known: &Value, tolerance: f64, what: &str) {
    let known = known.as_f64().unwrap();
    assert!((found - known).abs() <= tolerance * known.abs().max(1e-300), "{what}: {found}, not {known}");
}

/// SciPy 1.17 `stats.f.ppf`, `stats.chi2.ppf` and `stats.norm.sf`; reference/trust_values.py.
#[test]
fn quantiles_are_those_of_scipy() {
    let values = values();
    for case in list(&values["f3"]) {
        let [level, freedom] = ["level", "freedom"].map(|key| case[key].as_f64().unwrap());
        close(f_quantile(level, 3.0, freedom), &case["value"], 1e-11, &format!("F, {level}, {freedom}"));
    }
    for case in list(&values["chi3"]) {
        let level = case["level"].as_f64().unwrap();
        close(chi_squared_3_quantile(level), &case["value"], 1e-12, &format!("χ², {level}"));
    }
    for case in list(&values["normal_above"]) {
        let z = case["z"].as_f64().unwrap();
        close(normal_above(z), &case["value"], 1e-12, &format!("normal, {z}"));
    }
}

/// Dense matrices of NumPy, whose moments 400,000 simulated residuals confirm; reference/trust_values.py.
#[test]
fn moran_and_its_moments_are_those_of_dense_matrices() {
    for case in list(&values()["moran"]) {
        let [count, seed] = ["count", "seed"].map(|key| case[key].as_f64().unwrap());
        let points: Vec<Vec3> = Electrodes::spread(count as usize, -0.35).directions;
        let column = |j: f64| -> Vec<f64> {
            points.iter().map(|p| ((j + 2.0) * (p[0] + 0.5 * j * p[1] + (2.0 - j) * p[2])).sin()).collect()
        };
        let mut basis: Vec<Vec<f64>> = Vec::new();
        for mut column in std::iter::once(vec![1.0; points.len()]).chain((0..6).map(|j| column(f64::from(j)))) {
            remove(&mut column, &basis);
            remove(&mut column, &basis);
            let length = dot(&column, &column).sqrt();
            basis.push(column.iter().map(|value| value / length).collect());
        }
        let mut error: Vec<f64> = points
            .iter()
            .enumerate()
            .map(|(k, p)| (1.7 * seed + (k * k) as f64).sin() + 0.8 * (3.0 * p[0] + seed).cos())
            .collect();
        remove(&mut error, &basis);
        let pairs = neighbours(&points, 6);
        assert_eq!(pairs.len() as u64, case["pairs"].as_u64().unwrap());
        let found = Autocorrelation::new(&error, &basis, &pairs).unwrap();
        close(found.moran, &case["moran"], 1e-9, "I");
        close(found.expected, &case["expected"], 1e-9, "E[I]");
        close(found.z, &case["z"], 1e-8, "z");
        assert!((found.p - normal_above(found.z)).abs() < 1e-15);
        assert_eq!(Autocorrelation::new(&vec![0.0; points.len()], &basis, &pairs), None);
    }
}

fn remove(values: &mut [f64], basis: &[Vec<f64>]) {
    for column in basis {
        let share = dot(values, column);
        values.iter_mut().zip(column).for_each(|(value, column)| *value -= share * column);
    }
}

/// Cramér–Rao from the six-column Jacobian, 40 digits (tests/reference, `spheres.py`): noise of 0.1 µV at 21 electrodes, a
/// radial dipole of 10 nAm at (0, 0, 60) mm in shells of 80/85/92 mm with a skull ratio of 80 has standard deviations of
/// 7.555, 6.968 and 3.501 mm; the 95 % volume is (4/3) π Π sd · 7.814727903^1.5.
#[test]
fn independent_noise_gives_the_cramer_rao_bound() {
    let rows = data("potentials_cartesian.csv");
    let rows = rows.lines().filter(|line| line.starts_with("3shell_r80,"));
    let electrodes: String = rows
        .map(|line| line.split(',').collect::<Vec<_>>())
        .map(|row| {
            let position = [3, 4, 5].map(|column| 92.0 * row[column].parse::<f64>().unwrap());
            format!("{}\t{}\t{}\t{}\n", row[2], position[0], position[1], position[2])
        })
        .collect();
    let shells = [(80.0, 0.33), (85.0, 0.33 / 80.0), (92.0, 0.33)];
    let series = inward_tests::PlainSeries::new(&shells.map(|(outer, sigma)| (outer / 92.0, sigma)), 92.0);
    let places: Vec<Vec3> = electrodes
        .lines()
        .map(|line| line.split('\t').skip(1).map(|number| number.parse().unwrap()).collect::<Vec<f64>>())
        .map(|p| Vec3::new(p[0], p[1], p[2]) * (1.0 / 92.0))
        .collect();
    assert_eq!(places.len(), 21);
    let lead = series.lead(Vec3::new(0.0, 0.0, 60.0 / 92.0), &places, 1e-15);
    let labels = electrodes.lines().map(|line| line.split('\t').next().unwrap());
    let maps: String = labels.zip(lead).map(|(label, lead)| format!("{label}\t{}\n", 10.0 * lead[2])).collect();
    let specs: Vec<Value> = ["brain", "skull", "scalp"]
        .iter()
        .zip(shells)
        .map(|(tissue, (outer, sigma))| json!({ "tissue": tissue, "ratio": outer / 92.0, "conductivity": sigma }))
        .collect();
    let settings: Settings = serde_json::from_value(json!({
        "head": { "shells": specs, "centre_mm": [0, 0, 0], "radius_mm": 92 },
        "mapUnit": "uV", "noise": { "sd": 0.1 }, "axes": "right-front-up", "mirror": false,
    }))
    .unwrap();
    let electrodes = "label\tx\ty\tz\n".to_owned() + &electrodes;
    let maps = "label\tm\n".to_owned() + &maps;
    let request =
        Request { electrodes: Some(electrodes.as_bytes()), maps: maps.as_bytes(), settings, ..Request::default() };
    let study = Study::open(&request).unwrap();
    let MapReport::Fitted(map) = study.assess(0, &[Assessment::Region]).unwrap() else { panic!("no fit") };
    let noise = map.region.unwrap().noise_only;
    let covariance = noise.covariance_mm2.unwrap();
    let sd = [0, 1, 2].map(|axis| covariance[axis][axis].sqrt());
    for (found, known) in sd.iter().zip([7.555, 6.968, 3.501]) {
        assert!((found - known).abs() < 6e-4, "{sd:?}");
    }
    assert_eq!((noise.noise_sd, noise.noise_from), (0.1, "settings"));
    // The profile region is no ellipsoid; beside one of 7 mm semi-axes times 2.8 it differs, by less than a third.
    let ellipsoid = 4.0 / 3.0 * std::f64::consts::PI * sd.iter().product::<f64>() * 7.814727903f64.powf(1.5) * 1e-3;
    assert!((noise.profile_volume_ml / ellipsoid - 1.0).abs() < 0.33, "{} {ellipsoid}", noise.profile_volume_ml);
}

/// With little noise the region of a fit is an ellipsoid, whose volume is known.
#[test]
fn the_profile_region_of_little_noise_is_the_ellipsoid() {
    use inward_core::fit::Fitter;
    use inward_core::forward::LeadField;
    use inward_core::head::Shells;
    let electrodes = Electrodes::set(71);
    let fitter = Fitter::new(LeadField::new(&Shells::standard(), 88.0, electrodes.directions.clone()));
    let mut draw = Draw::from(12);
    for _ in 0..20 {
        let map = fitter.project(draw.position(0.2, 0.7), draw.direction() * 20.0);
        let fit = fitter.fit(&map).unwrap();
        let sd = 0.002;
        let covariance = fitter.tangent(&fit).covariance(sd).unwrap();
        let excess = sd * sd * chi_squared_3_quantile(0.95) / dot(&map, &map);
        let profile = fitter.profile(&map, &fit, fit.residual_variance + excess, 400).unwrap();
        let product: f64 = covariance.eigen().values.iter().map(|value| value.sqrt()).product();
        let volume = 4.0 / 3.0 * std::f64::consts::PI * product * chi_squared_3_quantile(0.95).powf(1.5);
        assert!((profile.volume / volume - 1.0).abs() < 0.03, "{} {volume}", profile.volume);
        assert!(!profile.reaches_boundary);
    }
}
