//! The committed examples hold what their manifest and README say: what was planted in them is found again.
use inward_core::map::MapUnit;
use inward_core::report::FittedMap;
use inward_core::{MapReport, Report, Request, Settings, Vec3, analyse};
use inward_tests::{data, example};
use serde_json::Value;
use std::collections::BTreeSet;

fn run(electrodes: &str, maps: &str, exclude: &[&str]) -> Report {
    let settings = Settings {
        map_unit: MapUnit::Microvolt,
        exclude: exclude.iter().map(|&label| label.to_owned()).collect(),
        ..Settings::default()
    };
    analyse(&Request { electrodes: Some(electrodes.as_bytes()), maps: maps.as_bytes(), settings, ..Request::default() })
        .unwrap()
}

fn fitted(map: &MapReport) -> &FittedMap {
    match map {
        MapReport::Fitted(map) => map,
        MapReport::Failed { name, error } => panic!("{name}: {}", error.message),
    }
}

/// The one map of a file, with all electrodes but those named.
fn fit(file: &str, exclude: &[&str]) -> FittedMap {
    let report = run(&example("watch_electrodes.tsv"), &example(file), exclude);
    assert_eq!(report.maps.len(), 1, "{file}");
    fitted(&report.maps[0]).clone()
}

fn planted(map: &str) -> Value {
    let record: Value = serde_json::from_str(&data("example_maps.json")).unwrap();
    record["maps"][map].clone()
}

fn vector(value: &Value) -> Vec3 {
    Vec3(std::array::from_fn(|k| value[k].as_f64().unwrap()))
}

/// Distance in mm from the fitted position to each planted source.
fn distances(found: &FittedMap) -> Vec<f64> {
    let sources = planted(&found.name)["sources"].as_array().unwrap().clone();
    sources.iter().map(|source| (found.dipole.position_mm - vector(&source["position_mm"])).norm()).collect()
}

/// Label and value of the electrode that is left over most, and the largest of the others.
fn largest_left_over(found: &FittedMap, labels: &[String]) -> (String, f64, f64) {
    let mut order: Vec<usize> = (0..labels.len()).collect();
    order.sort_by(|&a, &b| found.residual[b].abs().total_cmp(&found.residual[a].abs()));
    (labels[order[0]].clone(), found.residual[order[0]], found.residual[order[1]].abs())
}

fn labels() -> Vec<String> {
    example("watch_electrodes.tsv").lines().skip(1).map(|line| line.split('\t').next().unwrap().into()).collect()
}

#[test]
fn the_electrodes_are_a_measured_cap_on_a_head_that_is_not_quite_a_sphere() {
    let report = run(&example("watch_electrodes.tsv"), &example("watch_maps.tsv"), &[]);
    assert_eq!(report.electrodes.len(), 70);
    assert!((3.0..6.0).contains(&report.head.fit_rms_mm), "{}", report.head.fit_rms_mm);
    let below = |label: &str| {
        let electrode = report.electrodes.iter().find(|electrode| electrode.label == label).unwrap();
        electrode.position_mm.0[2] < report.head.centre_mm.0[2]
    };
    for label in ["F9", "F10", "FT9", "FT10", "TP9", "TP10", "P9", "P10", "Iz"] {
        assert!(below(label), "{label} lies below the sphere's equator");
    }
}

#[test]
fn one_planted_source_is_found_again() {
    for (file, site, eccentricity) in
        [("lamp.tsv", "CP3", 0.80), ("engine_room.tsv", "Fz", 0.28), ("swell.tsv", "C4", 0.72)]
    {
        let found = fit(file, &[]);
        assert_eq!(distances(&found).len(), 1);
        assert!(distances(&found)[0] < 2.0, "{file}: {} mm off", distances(&found)[0]);
        assert!(found.residual_variance < 0.015, "{file}: {}", found.residual_variance);
        assert_eq!(found.dipole.nearest_site, Some(site));
        assert!((found.dipole.eccentricity - eccentricity).abs() < 0.03, "{file}: {}", found.dipole.eccentricity);
        let moment = vector(&planted(&found.name)["sources"][0]["moment_nam"]);
        let turned = (found.dipole.direction * found.dipole.strength - moment).norm() / moment.norm();
        assert!(turned < 0.15, "{file}: the moment is off by {turned}");
    }
    assert!(fit("lamp.tsv", &[]).dipole.radial_share.unwrap() > 0.8, "mostly outwards");
    assert!(fit("swell.tsv", &[]).dipole.radial_share.unwrap() < 0.05, "along the scalp");
}

#[test]
fn two_horns_give_one_dipole_where_neither_is() {
    let found = fit("two_horns.tsv", &[]);
    assert_eq!(distances(&found).len(), 2);
    assert!(distances(&found).iter().all(|&mm| mm > 40.0), "{:?}", distances(&found));
    assert!((0.05..0.10).contains(&found.residual_variance), "{}", found.residual_variance);
    assert!(found.dipole.canonical_mm.0[0].abs() < 10.0, "in the middle");
}

#[test]
fn salt_is_one_source_and_one_bad_electrode() {
    let found = fit("salt.tsv", &[]);
    let bad = planted("salt")["stray"].as_str().unwrap().to_owned();
    let (label, value, next) = largest_left_over(&found, &labels());
    assert_eq!(label, bad);
    assert!((value - 5.0).abs() < 1.0 && next < 1.0, "{value} µV there, {next} µV at the next");
    assert!((0.08..0.13).contains(&found.residual_variance), "{}", found.residual_variance);
    let without = fit("salt.tsv", &[&bad]);
    assert!(without.residual_variance < 0.015, "{}", without.residual_variance);
    assert!(distances(&without)[0] < 2.0, "{} mm off", distances(&without)[0]);
    // Left out of the others, an electrode hardly matters.
    let lamp = fit("lamp.tsv", &[&bad]);
    assert!((lamp.residual_variance - fit("lamp.tsv", &[]).residual_variance).abs() < 0.003);
}

#[test]
fn fog_is_not_one_dipole() {
    let found = fit("fog.tsv", &[]);
    assert_eq!(distances(&found).len(), 24);
    assert!(found.variance_explained < 0.5, "{}", found.variance_explained);
}

/// Unmixed into independent components, most planted sources come out; principal components are mixtures.
#[test]
fn the_night_is_unmixed_well_and_badly() {
    let [independent, principal] = ["night_independent.tsv", "night_principal.tsv"].map(|file| {
        let request = Request { maps: example(file).into_bytes().leak(), ..Request::default() };
        analyse(&request).unwrap().maps.iter().map(|map| fitted(map).clone()).collect::<Vec<_>>()
    });
    let record: Value = serde_json::from_str(&data("example_night.json")).unwrap();
    let found = |maps: &[FittedMap]| {
        let near = |at: &Value| {
            maps.iter().any(|map| {
                map.residual_variance <= 0.15 && (map.dipole.canonical_mm - vector(&at["position_mm"])).norm() < 15.0
            })
        };
        record["planted"].as_array().unwrap().iter().filter(|at| near(at)).count()
    };
    assert_eq!(record["planted"].as_array().unwrap().len(), 16);
    assert_eq!((found(&independent), found(&principal)), (10, 0), "as the README says");
    let near_dipolar = |maps: &[FittedMap]| maps.iter().filter(|map| map.residual_variance <= 0.15).count();
    assert_eq!((near_dipolar(&independent), near_dipolar(&principal)), (15, 3));
}

#[test]
fn the_watch_is_all_six_and_the_manifest_lists_every_file() {
    let manifest: Value = serde_json::from_str(&example("examples.json")).unwrap();
    let entries = manifest.as_array().unwrap();
    assert!(entries.len() >= 6);
    let texts = |key: &str| -> Vec<&str> { entries.iter().filter_map(|entry| entry[key].as_str()).collect() };
    for key in ["name", "title", "line", "maps"] {
        let different: BTreeSet<&str> = texts(key).into_iter().collect();
        assert_eq!(different.len(), entries.len(), "every {key} is another");
    }
    assert!(texts("line").iter().all(|line| line.ends_with('.') && line.len() < 160));
    let folder = std::path::Path::new(env!("CARGO_MANIFEST_DIR")).join("../example_maps");
    let files: BTreeSet<String> = std::fs::read_dir(folder)
        .unwrap()
        .map(|entry| entry.unwrap().file_name().into_string().unwrap())
        .filter(|name| name.ends_with(".tsv"))
        .collect();
    let beside = entries.iter().filter_map(|entry| entry["beside"].as_array()).flatten().filter_map(Value::as_str);
    let named: BTreeSet<String> =
        texts("maps").into_iter().chain(texts("electrodes")).chain(beside).map(String::from).collect();
    assert_eq!(files, named);

    let whole = run(&example("watch_electrodes.tsv"), &example("watch_maps.tsv"), &[]);
    let of_the_watch = entries.iter().filter(|entry| entry["electrodes"] == "watch_electrodes.tsv");
    let singles: Vec<FittedMap> = of_the_watch
        .filter_map(|entry| entry["maps"].as_str())
        .filter(|file| *file != "watch_maps.tsv")
        .map(|file| fit(file, &[]))
        .collect();
    assert_eq!(whole.maps.len(), singles.len());
    for (map, single) in whole.maps.iter().zip(&singles) {
        assert_eq!(fitted(map), single, "the same map alone and among the others");
    }
}
