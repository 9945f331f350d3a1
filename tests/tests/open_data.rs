//! Real maps and heads: `data/open/`, whose README names their sources.
use inward_core::finding::Origin;
use inward_core::fit::Stopped;
use inward_core::report::FittedMap;
use inward_core::{MapReport, Report, Request, Settings, analyse};
use inward_tests::{Draw, MultiStart, PlainSeries, data};

fn open_data(name: &str) -> String {
    data(&format!("open/{name}"))
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
        let maps = open_data(name);
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
        let maps = open_data(name);
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

/// A map at each electrode of a table.
fn noise_at(table: &str) -> String {
    let labels: Vec<&str> = table.lines().skip(1).map(|line| line.split('\t').next().unwrap()).collect();
    let noise = Draw::from(1).noise(labels.len());
    labels.iter().zip(&noise).map(|(label, v)| format!("{label}\t{v}\n")).collect()
}

/// Settings that were not told by the files, and mattered had they been taken otherwise.
fn questions(report: &Report) -> Vec<&'static str> {
    let open = report.understood.choices.iter().filter(|choice| choice.from == Origin::Assumed);
    open.map(|choice| choice.setting).collect()
}

fn codes(report: &Report) -> Vec<&'static str> {
    report.notes.iter().map(|note| note.code.as_str()).collect()
}

/// Positions measured on people; the files call metres "mm".
#[test]
fn measured_heads_are_read_without_a_question_and_fitted() {
    for (name, radius, rms) in [("sub-01", 92.1, 6.9), ("sub-09", 82.2, 4.8)] {
        let table = open_data(&format!("{name}_electrodes.tsv"));
        let coordinates = open_data(&format!("{name}_coordsystem.json"));
        let maps = noise_at(&table);
        let alone = report(Some(&table), &maps, &[]);
        println!(
            "{name}: radius {:.2} mm, rms {:.2} mm, largest deviation {:.1} mm",
            alone.head.radius_mm, alone.head.fit_rms_mm, alone.head.fit_max_mm
        );
        assert!((alone.head.radius_mm - radius).abs() < 0.06, "{name}: {}", alone.head.radius_mm);
        assert!((alone.head.fit_rms_mm - rms).abs() < 0.06, "{name}: {}", alone.head.fit_rms_mm);
        // The labels tell no axes: that is asked, and answered by the description of the coordinates.
        assert!(codes(&alone).contains(&"axes-assumed") && questions(&alone).contains(&"axes"));

        // Landmarks in another system than the electrodes' say nothing of these.
        let elsewhere = coordinates.replacen("System\": \"Other\"", "System\": \"Scanner\"", 1);
        let files = vec![("e", table.as_bytes()), ("c", elsewhere.as_bytes()), ("m", maps.as_bytes())];
        let apart = analyse(&Request { files, ..Request::default() }).unwrap();
        assert!(elsewhere != coordinates && codes(&apart).contains(&"axes-assumed"));

        let files = [("one", table.as_bytes()), ("two", coordinates.as_bytes()), ("three", maps.as_bytes())];
        for order in [[0, 1, 2], [0, 2, 1], [1, 0, 2], [1, 2, 0], [2, 0, 1], [2, 1, 0]] {
            let files = order.map(|at: usize| files[at]).to_vec();
            let told = analyse(&Request { files, ..Request::default() }).unwrap();
            // One map is a map, whatever belongs to it.
            assert_eq!(questions(&told), ["mapsAre", "columnsAre"], "{name} {order:?}");
            let note = |code: &str| told.notes.iter().find(|note| note.code.as_str() == code).unwrap();
            let unit = note("unit-overruled");
            assert!(unit.severity == "warning" && unit.message.contains("millimetres"), "{unit:?}");
            assert!(
                unit.message.contains("metres") && unit.place.as_ref().unwrap().file.as_deref() == Some("one"),
                "{unit:?}"
            );
            let axes = &note("axes-found").message;
            assert!(axes.contains("ears and nose") && axes.contains("x to the right, y to the front, z up"), "{axes}");
            assert!(!codes(&told).contains(&"axes-assumed"));
            assert_eq!(told.electrodes.len(), 70);
            assert_eq!(told.maps, alone.maps, "{name} {order:?}");
        }
    }
}

#[test]
fn computed_maps_are_read_without_a_question() {
    for name in ["uci_control_ica20.tsv", "uci_control_pca20.tsv", "uci_second_ica20.tsv", "uci_second_pca20.tsv"] {
        let report =
            analyse(&Request { files: vec![("a", open_data(name).as_bytes())], ..Request::default() }).unwrap();
        assert_eq!(questions(&report), ["mapsAre"], "{name}");
        assert_eq!((report.electrodes.len(), report.maps.len()), (61, 20), "{name}");
        let labels = &report.understood.labels;
        assert_eq!((labels.matched, labels.without_position.len(), labels.not_scalp.len()), (61, 0, 0), "{name}");
        assert_eq!(codes(&report), ["standard-positions", "unit-relative"], "{name}");
    }
}
