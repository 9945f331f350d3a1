//! Real maps and heads, where they lie beside the project: INWARD_OPEN_DATA names their folder. Sources: EEG Database
//! (H. Begleiter; UCI Machine Learning Repository, 1999; CC BY 4.0), maps computed for this project; electrode
//! positions from the open BIDS example tables (Wakeman & Henson 2015, Sci Data 2:150001; CC BY 4.0).
use inward_core::fit::Stopped;
use inward_core::report::FittedMap;
use inward_core::{MapReport, Report, Request, Settings, analyse};
use inward_tests::{Draw, MultiStart, PlainSeries};
use std::io::Write;
use std::path::PathBuf;

/// A file of the open data; without it the check is skipped, and says so.
fn open_data(name: &str) -> Option<String> {
    let beside = PathBuf::from(env!("CARGO_MANIFEST_DIR")).join("../../shared/open");
    let folder = std::env::var_os("INWARD_OPEN_DATA").map_or(beside, PathBuf::from);
    let text = std::fs::read_to_string(folder.join(name)).ok();
    if text.is_none() {
        // Not by `println`: that is not shown for a test that passes.
        let _ =
            writeln!(std::io::stderr(), "SKIPPED: no {name}; INWARD_OPEN_DATA may name the folder of the open data");
    }
    text
}

fn report(electrodes: Option<&str>, maps: &str, exclude: &[&str]) -> Report {
    let settings = Settings { exclude: exclude.iter().map(|&label| label.into()).collect(), ..Settings::default() };
    analyse(&Request {
        electrodes: electrodes.map(str::as_bytes),
        maps: maps.as_bytes(),
        settings,
        ..Request::default()
    })
    .unwrap()
}

fn fitted(report: &Report) -> Vec<&FittedMap> {
    let maps = report.maps.iter().map(|map| match map {
        MapReport::Fitted(map) => &**map,
        MapReport::Failed { .. } => panic!("{map:?}"),
    });
    maps.collect()
}

/// Number of maps under a residual variance of 5, 10 and 15 %.
fn near_dipolar(report: &Report) -> [usize; 3] {
    [0.05, 0.10, 0.15].map(|limit| fitted(report).into_iter().filter(|map| map.residual_variance < limit).count())
}

/// Counts of a coarse grid, given with the data: the global minimum can only find as many or more.
#[test]
fn near_dipolar_components_are_as_many_as_a_coarse_grid_finds() {
    let known: [(&str, &[&str], [usize; 3]); 6] = [
        ("uci_control_ica20.tsv", &[], [1, 3, 4]),
        ("uci_control_pca20.tsv", &[], [1, 1, 2]),
        ("uci_second_ica20.tsv", &[], [0, 0, 1]),
        ("uci_second_pca20.tsv", &[], [0, 1, 1]),
        ("uci_control_ica20.tsv", &["CZ"], [2, 4, 5]),
        ("uci_control_pca20.tsv", &["CZ"], [2, 3, 3]),
    ];
    for (name, exclude, counts) in known {
        let Some(maps) = open_data(name) else { continue };
        let report = report(None, &maps, exclude);
        assert_eq!(report.maps.len(), 20);
        assert_eq!(report.electrodes.len(), 61, "{:?}", report.notes);
        let found = near_dipolar(&report);
        println!("{name} without {exclude:?}: {found:?} of 20 under 5, 10, 15 %");
        for (found, coarse) in found.into_iter().zip(counts) {
            assert!(
                found >= coarse && found <= coarse + 1,
                "{name} without {exclude:?}: {found}, coarse grid {coarse}"
            );
        }
    }
}

#[test]
fn real_maps_are_fitted_as_well_as_by_a_dense_search() {
    for name in ["uci_control_ica20.tsv", "uci_second_pca20.tsv"] {
        let Some(maps) = open_data(name) else { continue };
        let report = report(None, &maps, &[]);
        let radius = report.head.radius_mm;
        let directions =
            report.electrodes.iter().map(|e| (e.position_mm - report.head.centre_mm) * (1.0 / radius)).collect();
        let search = MultiStart::new(PlainSeries::standard(), directions, 0.98 * 79.0 / 88.0);
        for map in fitted(&report) {
            let (reference, _) = search.best(&map.measured);
            assert!(
                map.residual_variance <= reference + 1e-6,
                "{name} {}: {} above {reference}",
                map.name,
                map.residual_variance
            );
            assert_ne!(map.fit.stopped_because, Stopped::IterationLimit);
        }
    }
}

/// Positions measured on people; the files call metres "mm".
#[test]
fn measured_heads_are_read_and_fitted() {
    for (name, radius, rms) in [("sub-01_electrodes.tsv", 92.1, 6.9), ("sub-09_electrodes.tsv", 82.2, 4.8)] {
        let Some(table) = open_data(name) else { continue };
        let labels: Vec<&str> = table.lines().skip(1).map(|line| line.split('\t').next().unwrap()).collect();
        let noise = Draw::from(1).noise(labels.len());
        let maps: String = labels.iter().zip(&noise).map(|(label, v)| format!("{label}\t{v}\n")).collect();
        let report = report(Some(&table), &maps, &[]);
        println!(
            "{name}: radius {:.2} mm, rms {:.2} mm, largest deviation {:.1} mm",
            report.head.radius_mm, report.head.fit_rms_mm, report.head.fit_max_mm
        );
        assert!((report.head.radius_mm - radius).abs() < 0.06, "{name}: {}", report.head.radius_mm);
        assert!((report.head.fit_rms_mm - rms).abs() < 0.06, "{name}: {}", report.head.fit_rms_mm);
        let note = |report: &Report, code: &str| {
            report.notes.iter().find(|note| note.code.as_str() == code).map(|note| note.message.clone())
        };
        let unit = note(&report, "unit-recognised").unwrap();
        assert!(unit.contains("metres"), "{unit}");
        // The labels tell no axes; the points of the file of coordinates do, here as rows of the table.
        assert!(note(&report, "axes-assumed").is_some() && note(&report, "axes-found").is_none());
        let Some(coordinates) = open_data(&name.replace("electrodes.tsv", "coordsystem.json")) else { continue };
        let coordinates: serde_json::Value = serde_json::from_str(&coordinates).unwrap();
        let points = coordinates["AnatomicalLandmarkCoordinates"].as_object().unwrap();
        let rows: String = points.iter().map(|(label, p)| format!("{label}\t{}\t{}\t{}\n", p[0], p[1], p[2])).collect();
        let told = self::report(Some(&format!("{}\n{rows}", table.trim_end())), &maps, &[]);
        let axes = note(&told, "axes-found").unwrap();
        assert!(axes.contains("ears and nose") && axes.contains("x to the right, y to the front, z up"), "{axes}");
        assert_eq!(told.maps, report.maps);
    }
}
