//! What must not matter, and what must matter in a known way.
use inward_core::report::{EquivalentDipole, FittedMap};
use inward_core::{MapReport, Report, Request, Settings, Vec3, analyse};
use inward_tests::{Draw, Electrodes, Mixture, PlainSeries, example};

/// Electrodes on an invented head with maps of many kinds.
struct Sample {
    set: Electrodes,
    positions: Vec<Vec3>,
    names: Vec<String>,
    maps: Vec<Vec<f64>>,
}

impl Sample {
    fn new(count: usize, seed: u64) -> Self {
        let mut draw = Draw::from(seed);
        let set = Electrodes::set(count);
        let positions = set.measured(90.0, Vec3::new(2.0, -5.0, 12.0), 4.0, &mut draw);
        let maps = Mixture::many(&PlainSeries::standard(), &set.directions, 0.85, 18, &mut draw);
        let names = (0..maps.len()).map(|k| format!("m{k}")).collect();
        Self { set, positions, names, maps: maps.into_iter().map(|map| map.values).collect() }
    }

    fn table(&self) -> String {
        self.set.table(&self.positions)
    }

    fn maps(&self) -> String {
        self.changed_maps(|v| v)
    }

    fn changed_maps(&self, change: impl Fn(f64) -> f64) -> String {
        let maps: Vec<Vec<f64>> = self.maps.iter().map(|map| map.iter().map(|&v| change(v)).collect()).collect();
        let columns: Vec<(&str, &[f64])> =
            self.names.iter().map(String::as_str).zip(maps.iter().map(Vec::as_slice)).collect();
        self.set.maps(&columns)
    }

    fn report(&self) -> Report {
        run(&self.table(), &self.maps())
    }
}

fn run(electrodes: &str, maps: &str) -> Report {
    run_with(electrodes, maps, Settings::default())
}

fn run_with(electrodes: &str, maps: &str, settings: Settings) -> Report {
    let request =
        Request { electrodes: Some(electrodes.as_bytes()), maps: maps.as_bytes(), settings, ..Request::default() };
    analyse(&request).unwrap()
}

fn fitted(report: &Report) -> Vec<&FittedMap> {
    let maps = report.maps.iter().map(|map| match map {
        MapReport::Fitted(map) => &**map,
        MapReport::Failed { .. } => panic!("{map:?}"),
    });
    maps.collect()
}

/// Compares all maps of two reports; `expect` turns the first one's dipole into what the second one's must be.
fn compare(a: &Report, b: &Report, expect: impl Fn(&EquivalentDipole) -> EquivalentDipole, tolerance_mm: f64) {
    let (a, b) = (fitted(a), fitted(b));
    assert_eq!(a.len(), b.len());
    for (a, b) in a.into_iter().zip(b) {
        let expected = expect(&a.dipole);
        let told = format!("{}: {:?}, not {expected:?}", a.name, b.dipole);
        assert!((a.residual_variance - b.residual_variance).abs() < 1e-8, "{told}");
        assert!((expected.position_mm - b.dipole.position_mm).norm() < tolerance_mm, "{told}");
        assert!((expected.direction - b.dipole.direction).norm() < 1e-5, "{told}");
        assert!((expected.strength / b.dipole.strength - 1.0).abs() < 1e-5, "{told}");
        assert!((expected.eccentricity - b.dipole.eccentricity).abs() < 1e-5, "{told}");
        assert_eq!(a.fit.stopped_because, b.fit.stopped_because, "{told}");
    }
}

#[test]
fn a_turned_and_moved_head_gives_the_turned_and_moved_dipole() {
    for (count, seed) in [(19, 1), (32, 2), (71, 3)] {
        let sample = Sample::new(count, seed);
        let turn = Draw::from(seed).rotation();
        let shift = Vec3::new(11.0, -30.0, 7.0);
        let turned: Vec<Vec3> = sample.positions.iter().map(|&p| turn(p) + shift).collect();
        let report = run(&sample.set.table(&turned), &sample.maps());
        let expect = |d: &EquivalentDipole| EquivalentDipole {
            position_mm: turn(d.position_mm) + shift,
            direction: turn(d.direction),
            ..d.clone()
        };
        compare(&sample.report(), &report, expect, 1e-3);
    }
}

/// Potentials of equal moments fall with the square of the radius.
#[test]
fn a_larger_head_scales_lengths_and_strengths() {
    let sample = Sample::new(32, 4);
    for factor in [0.8, 1.2] {
        let scaled: Vec<Vec3> = sample.positions.iter().map(|&p| p * factor).collect();
        let report = run(&sample.set.table(&scaled), &sample.maps());
        let expect = |d: &EquivalentDipole| EquivalentDipole {
            position_mm: d.position_mm * factor,
            strength: d.strength * factor * factor,
            ..d.clone()
        };
        compare(&sample.report(), &report, expect, 1e-4);
        let (a, b) = (&sample.report().head, report.head);
        assert!(
            (a.radius_mm * factor - b.radius_mm).abs() < 1e-9 && (a.fit_rms_mm * factor - b.fit_rms_mm).abs() < 1e-9
        );
    }
}

#[test]
fn metres_centimetres_and_millimetres_mean_the_same() {
    let sample = Sample::new(71, 5);
    let expected = sample.report();
    for (unit, factor) in [("m", 1e-3), ("cm", 0.1)] {
        let scaled: Vec<Vec3> = sample.positions.iter().map(|&p| p * factor).collect();
        let report = run(&sample.set.table(&scaled), &sample.maps());
        compare(&expected, &report, Clone::clone, 1e-5);
        let note =
            report.notes.iter().find(|note| note.code.as_str() == "unit-recognised").expect("a note says which unit");
        assert!(note.message.contains(if unit == "m" { "metres" } else { "centimetres" }), "{}", note.message);
        for (a, b) in expected.electrodes.iter().zip(&report.electrodes) {
            assert!((a.position_mm - b.position_mm).norm() < 1e-9);
        }
    }
}

#[test]
fn a_maps_sign_turns_the_moment_alone() {
    let sample = Sample::new(32, 6);
    let report = run(&sample.table(), &sample.changed_maps(|v| -v));
    compare(&sample.report(), &report, |d| EquivalentDipole { direction: d.direction * -1.0, ..d.clone() }, 1e-9);
}

#[test]
fn a_maps_size_scales_the_strength_alone() {
    let sample = Sample::new(32, 7);
    for factor in [1e-9, 0.37, 1e12] {
        let report = run(&sample.table(), &sample.changed_maps(|v| v * factor));
        compare(&sample.report(), &report, |d| EquivalentDipole { strength: d.strength * factor, ..d.clone() }, 1e-5);
    }
}

#[test]
fn the_reference_does_not_matter() {
    let sample = Sample::new(32, 8);
    let expected = sample.report();
    let shifted = run(&sample.table(), &sample.changed_maps(|v| v + 3.25));
    compare(&expected, &shifted, Clone::clone, 1e-4);
    // Referred to one of the electrodes.
    let maps: Vec<Vec<f64>> = sample.maps.iter().map(|map| map.iter().map(|v| v - map[7]).collect()).collect();
    let columns: Vec<(&str, &[f64])> =
        sample.names.iter().map(String::as_str).zip(maps.iter().map(Vec::as_slice)).collect();
    let referred = run(&sample.table(), &sample.set.maps(&columns));
    compare(&expected, &referred, Clone::clone, 1e-4);
    assert!(referred.notes.iter().any(|note| note.code.as_str() == "average-referenced"));
}

fn shuffled(table: &str, draw: &mut Draw) -> String {
    let lines: Vec<&str> = table.lines().collect();
    let order = draw.order(lines.len() - 1);
    let rows: String = order.iter().map(|&k| format!("{}\n", lines[k + 1])).collect();
    format!("{}\n{rows}", lines[0])
}

#[test]
fn the_order_of_the_rows_does_not_matter() {
    let sample = Sample::new(71, 9);
    let mut draw = Draw::from(9);
    let expected = sample.report();
    let report = run(&shuffled(&sample.table(), &mut draw), &shuffled(&sample.maps(), &mut draw));
    compare(&expected, &report, Clone::clone, 1e-4);
}

#[test]
fn the_case_of_labels_does_not_matter() {
    let sample = Sample::new(32, 10);
    let report = run(&sample.table().to_uppercase().replace("LABEL\tX\tY\tZ", "Label\tX\tY\tZ"), &sample.maps());
    compare(&sample.report(), &report, Clone::clone, 1e-12);
    let alone = |maps: &str| {
        analyse(&Request {
            electrodes: None,
            maps: maps.as_bytes(),
            settings: Settings::default(),
            ..Request::default()
        })
        .unwrap()
    };
    let lower: String = sample
        .maps()
        .lines()
        .map(|line| {
            let (label, rest) = line.split_once('\t').unwrap();
            format!("{}\t{rest}\n", label.to_lowercase())
        })
        .collect();
    compare(&alone(&sample.maps()), &alone(&lower), Clone::clone, 1e-12);
}

/// A table written in another way.
type Change = fn(&str) -> String;

#[test]
fn delimiters_line_ends_and_headers_do_not_matter() {
    let (electrodes, maps) = (example("watch_electrodes.tsv"), example("watch_maps.tsv"));
    // Names without blanks, so that blanks can part the columns.
    let maps = maps.replace("engine room", "engine").replace("two horns", "horns");
    let expected = run(&electrodes, &maps);
    let changes: [(&str, Change); 9] = [
        ("comma", |text| text.replace('\t', ",")),
        ("semicolon", |text| text.replace('\t', ";")),
        ("blanks", |text| text.replace('\t', "   ")),
        ("comma and blank", |text| text.replace('\t', ", ")),
        ("windows", |text| text.replace('\n', "\r\n")),
        ("old line ends", |text| text.replace('\n', "\r")),
        ("byte-order mark", |text| format!("\u{feff}{text}")),
        ("empty lines", |text| format!("\n{}\n\n", text.replace('\n', "\n\n"))),
        ("quotes", |text| text.lines().map(|line| format!("\"{}\"\n", line.replace('\t', "\"\t\""))).collect()),
    ];
    for (name, change) in changes {
        let report = run(&change(&electrodes), &change(&maps));
        assert_eq!(report.maps, expected.maps, "{name}");
        assert_eq!(report.head, expected.head, "{name}");
    }
    let headless = |text: &str| text.split_once('\n').unwrap().1.to_owned();
    let report = run(&headless(&electrodes), &headless(&maps));
    for (a, b) in fitted(&report).into_iter().zip(fitted(&expected)) {
        assert_eq!((&a.dipole, &a.measured), (&b.dipole, &b.measured), "without headers");
        assert!(!a.name.is_empty());
    }
}

#[test]
fn maps_named_by_numbers_have_a_header_all_the_same() {
    let (electrodes, maps) = (example("watch_electrodes.tsv"), example("watch_maps.tsv"));
    let expected = run(&electrodes, &maps);
    let numbered = maps.replacen("label\tlamp\tengine room\tswell\ttwo horns\tsalt\tfog", "label\t0\t1\t2\t3\t4\t5", 1);
    assert_ne!(numbered, maps);
    let report = run(&electrodes, &numbered);
    assert_eq!(report.electrodes, expected.electrodes);
    let names: Vec<&str> = fitted(&report).into_iter().map(|map| map.name.as_str()).collect();
    assert_eq!(names, ["0", "1", "2", "3", "4", "5"]);
    assert!(!report.notes.iter().any(|note| note.code.as_str() == "values-without-position"), "{:?}", report.notes);
}

#[test]
fn more_columns_than_needed_do_not_matter_in_a_named_table() {
    let (electrodes, maps) = (example("watch_electrodes.tsv"), example("watch_maps.tsv"));
    let expected = run(&electrodes, &maps);
    let wider: String = electrodes
        .lines()
        .enumerate()
        .map(|(k, line)| {
            let row: Vec<&str> = line.split('\t').collect();
            let [kind, impedance] = if k == 0 { ["type", "impedance"] } else { ["cup", "4.5"] };
            format!("{kind}\t{}\t{}\t{}\t{impedance}\t{}\n", row[3], row[0], row[2], row[1])
        })
        .collect();
    assert_eq!(run(&wider, &maps).maps, expected.maps);
}

#[test]
fn leaving_out_by_hand_never_moves_the_head() {
    let sample = Sample::new(32, 11);
    let expected = sample.report();
    for label in ["Cz", "T8", "fp1"] {
        let settings = Settings { exclude: vec![label.into()], ..Settings::default() };
        let report = run_with(&sample.table(), &sample.maps(), settings);
        assert_eq!(report.head, expected.head);
        let unused: Vec<&str> = report.electrodes.iter().filter(|e| !e.used).map(|e| e.label.as_str()).collect();
        assert_eq!(unused.len(), 1);
        assert!(unused[0].eq_ignore_ascii_case(label));
        assert!(fitted(&report).iter().all(|map| map.measured.len() == 31 && map.degrees_of_freedom == 24));
    }
}

#[test]
fn only_electrodes_with_a_value_shape_the_head() {
    let sample = Sample::new(32, 12);
    let expected = sample.report();
    let more = sample.table() + "Ear\t99\t0\t-60\nNeck\t0\t-99\t-90\n";
    let report = run(&more, &sample.maps());
    assert_eq!(report.head, expected.head);
    assert_eq!(report.maps, expected.maps);
    assert!(
        report
            .notes
            .iter()
            .any(|note| note.code.as_str() == "positions-without-value" && note.message.contains("Neck"))
    );
    let valued = sample.maps() + &format!("EOG{}\n", "\t12".repeat(sample.maps.len()));
    let report = run(&sample.table(), &valued);
    assert_eq!(report.maps, expected.maps);
    assert!(report.notes.iter().any(|note| note.code.as_str() == "not-scalp" && note.message.contains("EOG")));
}

#[test]
fn a_map_is_fitted_the_same_alone_and_in_a_table() {
    let sample = Sample::new(32, 13);
    let expected = sample.report();
    for (k, map) in fitted(&expected).into_iter().enumerate() {
        let alone = run(&sample.table(), &sample.set.maps(&[(&sample.names[k], &sample.maps[k])]));
        assert_eq!(fitted(&alone)[0], map);
    }
}

#[test]
fn the_numbers_of_a_dipole_agree_with_each_other() {
    let sample = Sample::new(71, 14);
    let report = sample.report();
    let head = &report.head;
    let radii: Vec<f64> = head.shells.iter().map(|shell| shell.outer_radius_mm).collect();
    for (radius, ratio) in radii.iter().zip([79.0, 81.0, 85.0, 88.0]) {
        assert!((radius - head.radius_mm * ratio / 88.0).abs() < 1e-9);
    }
    let conductivities: Vec<f64> = head.shells.iter().map(|shell| shell.conductivity_s_per_m).collect();
    assert_eq!(conductivities, [0.33, 1.79, 0.0132, 0.33]);
    let deviations: Vec<f64> = sample.positions.iter().map(|&p| (p - head.centre_mm).norm() - head.radius_mm).collect();
    let rms = (deviations.iter().map(|d| d * d).sum::<f64>() / deviations.len() as f64).sqrt();
    let most = deviations.iter().fold(0.0f64, |most, d| most.max(d.abs()));
    assert!((rms - head.fit_rms_mm).abs() < 1e-9 && (most - head.fit_max_mm).abs() < 1e-9);
    for map in fitted(&report) {
        let d = &map.dipole;
        assert!((d.position_mm - head.centre_mm - d.canonical_mm).norm() < 1e-9);
        let distance = d.canonical_mm.norm();
        assert!((d.eccentricity - distance / radii[0]).abs() < 1e-12);
        // Down from the inner skull: the outer surface of the cerebrospinal fluid.
        assert!((d.depth_mm - (radii[1] - distance)).abs() < 1e-9);
        assert!((d.direction.norm() - 1.0).abs() < 1e-12);
        let share = (d.direction.dot(d.canonical_mm) / distance).powi(2);
        assert!((d.radial_share.unwrap() - share).abs() < 1e-9);
        let squares = |values: &[f64]| values.iter().map(|v| v * v).sum::<f64>();
        let rv = squares(&map.residual) / squares(&map.measured);
        assert!((map.residual_variance - rv).abs() < 1e-9);
        assert!((map.variance_explained + map.residual_variance - 1.0).abs() < 1e-15);
        let n = map.measured.len() as f64;
        let adjusted = (squares(&map.residual) / (n - 7.0)) / (squares(&map.measured) / (n - 1.0));
        assert!((map.adjusted_rv - adjusted).abs() < 1e-9);
        assert_eq!(map.degrees_of_freedom, 64);
        let side = if d.canonical_mm[0] > 5.0 {
            "right"
        } else if d.canonical_mm[0] < -5.0 {
            "left"
        } else {
            "midline"
        };
        assert_eq!(d.side, side);
        assert_eq!(d.at_boundary, d.eccentricity > 0.98 - 1e-9);
    }
}

#[test]
fn at_the_centre_no_site_and_no_radial_share_are_named() {
    // A potential that is linear over the scalp belongs to a dipole at the centre.
    let set = Electrodes::set(32);
    let map: Vec<f64> = set.directions.iter().map(|e| 3.0 * e[0] - 2.0 * e[1] + 5.0 * e[2]).collect();
    let positions: Vec<Vec3> = set.directions.iter().map(|&e| e * 90.0).collect();
    let report = run(&set.table(&positions), &set.maps(&[("m", &map)]));
    let d = &fitted(&report)[0].dipole;
    assert!(d.canonical_mm.norm() < 1e-3, "{d:?}");
    assert_eq!((d.nearest_site, d.radial_share, d.side), (None, None, "midline"));
    let direction = Vec3::new(3.0, -2.0, 5.0);
    assert!((d.direction - direction * (1.0 / direction.norm())).norm() < 1e-6, "{d:?}");
}

/// Site radially above, side and depth of dipoles put under known sites.
#[test]
fn the_nearest_site_is_the_one_radially_above() {
    let set = Electrodes::set(71);
    let series = PlainSeries::standard();
    let positions: Vec<Vec3> = set.directions.iter().map(|&e| e * 88.0).collect();
    let sites = ["Fp1", "Cz", "CP3", "T8", "Oz", "F4", "P7", "FT8"];
    let maps: Vec<Vec<f64>> = sites
        .iter()
        .map(|site| {
            let at = set.directions[set.labels.iter().position(|label| label == site).unwrap()];
            let rows = series.lead(at * (60.0 / 88.0), &set.directions, 1e-14);
            rows.iter().map(|row| row.dot(Vec3::new(3.0, 5.0, 4.0))).collect()
        })
        .collect();
    let columns: Vec<(&str, &[f64])> = sites.into_iter().zip(maps.iter().map(Vec::as_slice)).collect();
    let report = run(&set.table(&positions), &set.maps(&columns));
    for map in fitted(&report) {
        let d = &map.dipole;
        assert_eq!(d.nearest_site, Some(map.name.as_str()));
        let side = match map.name.as_str() {
            "Cz" | "Oz" => "midline",
            "Fp1" | "CP3" | "P7" => "left",
            _ => "right",
        };
        assert_eq!(d.side, side, "{}", map.name);
        assert!((d.depth_mm - 21.0).abs() < 1e-3, "{}: {}", map.name, d.depth_mm);
        assert!((d.strength - 50f64.sqrt()).abs() < 1e-4, "{}: {}", map.name, d.strength);
    }
}
