//! Labels as people write them, heads as they lie in their tables.
use inward_core::electrode::{Label, Landmark};
use inward_core::finding::Origin;
use inward_core::head::{Axes, AxesName, LengthUnit};
use inward_core::placement::{Evidence, Placement, Wishes, place};
use inward_core::report::FittedMap;
use inward_core::{Error, MapReport, Report, Request, Settings, Vec3, analyse};
use inward_tests::{Draw, Electrodes, PlainSeries, electrodes_and_maps, example};

fn electrodes() -> String {
    example("watch_electrodes.tsv")
}

fn maps() -> String {
    example("watch_maps.tsv")
}

fn try_run(electrodes: Option<&str>, maps: &str, settings: Settings) -> Result<Report, Error> {
    analyse(&Request {
        electrodes: electrodes.map(str::as_bytes),
        maps: maps.as_bytes(),
        settings,
        ..Request::default()
    })
}

fn run(electrodes: Option<&str>, maps: &str, settings: Settings) -> Report {
    try_run(electrodes, maps, settings).unwrap()
}

fn fitted(report: &Report) -> Vec<&FittedMap> {
    let maps = report.maps.iter().map(|map| match map {
        MapReport::Fitted(map) => &**map,
        MapReport::Failed { .. } => panic!("{map:?}"),
    });
    maps.collect()
}

fn note<'a>(report: &'a Report, code: &str) -> Option<&'a str> {
    report.notes.iter().find(|note| note.code.as_str() == code).map(|note| note.message.as_str())
}

/// A table of labels with positions, changed.
fn changed(table: &str, label: impl Fn(&str) -> String, place: impl Fn(Vec3) -> Vec3) -> String {
    let row = |line: &str| {
        let fields: Vec<&str> = line.split('\t').collect();
        let p = place(Vec3(std::array::from_fn(|i| fields[i + 1].parse().unwrap())));
        format!("{}\t{}\t{}\t{}\n", label(fields[0]), p[0], p[1], p[2])
    };
    format!("label\tx\ty\tz\n{}", table.lines().skip(1).map(row).collect::<String>())
}

/// A table of maps with other labels.
fn relabelled(maps: &str, label: impl Fn(&str) -> String) -> String {
    let mut lines = maps.lines();
    let header = format!("{}\n", lines.next().unwrap());
    header
        + &lines
            .map(|line| line.split_once('\t').unwrap())
            .map(|(l, rest)| format!("{}\t{rest}\n", label(l)))
            .collect::<String>()
}

/// The answers of two reports are the same head, seen in canonical axes.
fn same_answer(a: &Report, b: &Report, told: &str) {
    for (a, b) in fitted(a).into_iter().zip(fitted(b)) {
        assert!((a.residual_variance - b.residual_variance).abs() < 1e-9, "{told}");
        assert!((a.dipole.canonical_mm - b.dipole.canonical_mm).norm() < 1e-3, "{told}: {:?} {:?}", a.dipole, b.dipole);
        assert_eq!(
            (a.dipole.nearest_site, a.dipole.side, a.dipole.at_boundary),
            (b.dipole.nearest_site, b.dipole.side, b.dipole.at_boundary),
            "{told}"
        );
    }
}

const SHIFT: Vec3 = Vec3::new(7.0, -12.0, 20.0);

#[test]
fn every_quarter_turn_of_a_head_gives_the_same_answer() {
    let (e, m) = (electrodes(), maps());
    let expected = run(Some(&e), &m, Settings::default());
    let anonymous = |label: &str| format!("S-{}", label.replace(['z', 'Z'], "0"));
    let landmarks = [("NAS", [0.0, 97.0, -6.0]), ("LPA", [-74.0, 1.0, -4.0]), ("RPA", [76.0, 0.0, -3.0])];
    for name in AxesName::all() {
        let turn = |p: Vec3| name.axes().to_table(p) + SHIFT;
        let table = changed(&e, str::to_owned, turn);
        let report = run(Some(&table), &m, Settings::default());
        same_answer(&expected, &report, &format!("{name} by labels"));
        assert_eq!(report.head.axes, name.axes().rows());
        let words = note(&report, "axes-found").unwrap();
        assert!(words.contains("labels") && words.contains("Fp1"), "{words}");
        for (a, b) in fitted(&expected).into_iter().zip(fitted(&report)) {
            assert!((turn(a.dipole.position_mm) - b.dipole.position_mm).norm() < 1e-3, "in the table's own frame");
            assert!((name.axes().to_table(a.dipole.direction) - b.dipole.direction).norm() < 1e-5);
        }
        // Labels that tell nothing: by the setting, by landmarks.
        let (table, maps) = (changed(&e, anonymous, turn), relabelled(&m, anonymous));
        let told = run(Some(&table), &maps, Settings { axes: Some(name), ..Settings::default() });
        same_answer(&expected, &told, &format!("{name} as set"));
        assert!(note(&told, "axes-found").unwrap().contains("as set"));
        let rows: String = landmarks
            .iter()
            .map(|(label, p)| (label, turn(Vec3(*p))))
            .map(|(label, p)| format!("{label}\t{}\t{}\t{}\n", p[0], p[1], p[2]))
            .collect();
        let told = run(Some(&(table + &rows)), &maps, Settings::default());
        same_answer(&expected, &told, &format!("{name} by landmarks"));
        assert!(note(&told, "axes-found").unwrap().contains("ears and nose"));
        assert!(note(&told, "not-scalp").unwrap().contains("LPA"));
    }
}

/// A head that lies anyhow is turned upright; one that is tilted a little keeps the axes it is measured in.
#[test]
fn an_oblique_head_is_turned_upright() {
    let set = Electrodes::set(71);
    let upright: Vec<Vec3> = set.directions.iter().map(|&e| e * 90.0).collect();
    let series = PlainSeries::standard();
    let lead = series.lead(Vec3::new(0.3, -0.4, 0.45), &set.directions, 1e-12);
    let values: Vec<f64> = lead.iter().map(|row| row.dot(Vec3::new(1.0, 2.0, -1.0))).collect();
    let maps = set.maps(&[("one", &values)]);
    let expected = run(Some(&set.table(&upright)), &maps, Settings::default());
    let (mut turned, mut kept) = (0, 0);
    for seed in 0..40 {
        let rotation = Draw::from(seed).rotation();
        let table: Vec<Vec3> = upright.iter().map(|&p| rotation(p) + SHIFT).collect();
        let report = run(Some(&set.table(&table)), &maps, Settings::default());
        let axes = report.head.axes;
        if AxesName::all().any(|name| name.axes().rows() == axes) {
            kept += 1;
            let tilt = note(&report, "axes-found").unwrap();
            assert!(tilt.contains("tilted by"), "{tilt}");
        } else {
            turned += 1;
            same_answer(&expected, &report, &format!("rotation {seed}"));
            assert!(note(&report, "axes-found").unwrap().contains("obliquely"));
        }
        let [x, y, z] = axes;
        assert!((x.cross(y) - z).norm() < 1e-12 && (x.norm() - 1.0).abs() < 1e-12, "a rotation");
    }
    assert!(turned > 10 && kept > 0, "{turned} {kept}");
}

#[test]
fn a_mirror_image_is_noticed_and_exchanged_only_when_told() {
    let (e, m) = (electrodes(), maps());
    let expected = run(Some(&e), &m, Settings::default());
    assert_eq!(note(&expected, "mirrored"), None);
    let settings = |mirror| Settings { mirror, ..Settings::default() };
    for name in AxesName::all() {
        let turn = |p: Vec3| name.axes().to_table(Vec3::new(-p[0], p[1], p[2])) + SHIFT;
        let table = changed(&e, str::to_owned, turn);
        let undecided = run(Some(&table), &m, settings(None));
        assert!(note(&undecided, "mirrored").unwrap().contains("mirror image"), "{name}");
        let exchanged = run(Some(&table), &m, settings(Some(true)));
        same_answer(&expected, &exchanged, &format!("{name}"));
        assert_eq!(note(&exchanged, "mirrored"), None);
        let kept = run(Some(&table), &m, settings(Some(false)));
        assert_eq!(note(&kept, "mirrored"), None);
        assert!(kept.maps == undecided.maps, "positions were kept as written");
        for ((a, b), original) in fitted(&exchanged).into_iter().zip(fitted(&kept)).zip(fitted(&expected)) {
            // The place in the table does not depend on what is called right.
            assert!((a.dipole.position_mm - b.dipole.position_mm).norm() < 1e-3);
            assert!((turn(original.dipole.position_mm) - a.dipole.position_mm).norm() < 1e-3);
            let [x, y, z] = b.dipole.canonical_mm.0;
            assert!((a.dipole.canonical_mm - Vec3::new(-x, y, z)).norm() < 1e-3);
        }
    }
}

#[test]
fn labels_that_contradict_the_positions_are_not_believed() {
    let (e, m) = (electrodes(), maps());
    let labels: Vec<String> = e.lines().skip(1).map(|line| line.split('\t').next().unwrap().to_owned()).collect();
    let order = Draw::from(3).order(labels.len());
    let shuffled = |label: &str| labels[order[labels.iter().position(|known| known == label).unwrap()]].clone();
    let report = run(Some(&changed(&e, shuffled, |p| p)), &m, Settings::default());
    assert!(
        note(&report, "axes-assumed").unwrap().contains("labels with standard places fit the positions in no axes")
    );
    assert_eq!(report.head.axes, Axes::CANONICAL.rows());
    // Two of them exchanged: the axes are found, and the two are named.
    for (one, other) in [("T7", "T8"), ("F3", "F4"), ("O1", "Fp1")] {
        let exchanged = |label: &str| match label {
            _ if label == one => other.to_owned(),
            _ if label == other => one.to_owned(),
            _ => label.to_owned(),
        };
        let report = run(Some(&changed(&e, exchanged, |p| p)), &m, Settings::default());
        let warning = note(&report, "labels-misplaced").unwrap();
        let named = [format!(": {one}, {other}."), format!(": {other}, {one}.")];
        assert!(named.iter().any(|named| warning.contains(named)), "{warning}");
    }
    let turned = Settings { axes: Some("front-left-up".parse().unwrap()), ..Settings::default() };
    let warning = run(Some(&e), &m, turned);
    assert!(note(&warning, "axes-contradicted").unwrap().contains("x to the right, y to the front, z up"));
}

/// A small cap about the top of the head tells little: it may be found or left open, never wrong.
#[test]
fn a_small_cap_is_never_turned_wrongly() {
    let all = Electrodes::standard();
    let (mut found, mut left_open) = (0, 0);
    for (reach, jitter) in [(0.9, 2.0), (0.75, 3.0), (0.6, 5.0)] {
        let near: Vec<usize> = (0..all.count()).filter(|&i| all.directions[i][2] > reach).collect();
        let set = all.only(&near);
        for (seed, name) in AxesName::all().take(8).enumerate() {
            let mut draw = Draw::from(seed as u64);
            let positions = set.measured(90.0, Vec3::ZERO, jitter, &mut draw);
            let table: Vec<Vec3> = positions.iter().map(|&p| name.axes().to_table(p)).collect();
            let values = draw.noise(set.count());
            let Ok(report) = try_run(Some(&set.table(&table)), &set.maps(&[("noise", &values)]), Settings::default())
            else {
                continue;
            };
            assert_eq!(note(&report, "mirrored"), None, "{reach} {name}");
            if note(&report, "axes-assumed").is_some() {
                left_open += 1;
            } else {
                assert_eq!(report.head.axes, name.axes().rows(), "{reach} {name}");
                found += 1;
            }
        }
    }
    println!("{found} found, {left_open} left open");
    assert!(found > 0);
}

#[test]
fn labels_may_be_written_in_many_ways() {
    let (e, m) = (electrodes(), maps());
    let expected = run(Some(&e), &m, Settings::default());
    let standard = run(None, &m, Settings::default());
    type Writing = fn(&str) -> String;
    let writings: [(&str, Writing); 9] = [
        ("upper case", |label| label.to_uppercase()),
        ("lower case", |label| label.to_lowercase()),
        ("dots", |label| format!("{label}..")),
        ("prefix", |label| format!("EEG {label}")),
        ("prefix and reference", |label| format!("EEG {}-REF", label.to_uppercase())),
        ("linked ears", |label| format!("{label}-A1A2")),
        ("reference at Cz", |label| format!("{label}-Cz")),
        ("hyphen", |label| {
            let at = label.find(|c: char| c.is_ascii_digit()).unwrap_or(label.len() - 1);
            format!("{}-{}", &label[..at], &label[at..])
        }),
        ("old names", |label| match label {
            "T7" => "T3".into(),
            "T8" => "T4".into(),
            "P7" => "T5".into(),
            "P8" => "T6".into(),
            other => other.into(),
        }),
    ];
    for (name, writing) in writings {
        let report = run(Some(&e), &relabelled(&m, writing), Settings::default());
        assert!(report.maps == expected.maps, "{name}");
        assert!(report.head == expected.head, "{name}");
        assert!(report.electrodes == expected.electrodes, "{name}");
        let changed = !["upper case", "lower case"].contains(&name);
        assert_eq!(note(&report, "labels-renamed").is_some(), changed, "{name}");
        let alone = run(None, &relabelled(&m, writing), Settings::default());
        assert!(alone.maps == standard.maps, "{name}");
        let other = run(Some(&changed_labels(&e, writing)), &m, Settings::default());
        assert!(other.maps == expected.maps, "{name} in the table of electrodes");
    }
    let named = run(None, &relabelled(&m, |label| format!("{label}-A1A2")), Settings::default());
    assert!(note(&named, "reference-named").unwrap().contains("A1A2"));
    assert_eq!(named.electrodes[0].label, "Fp1", "shown without its suffix");
    let old = run(None, &relabelled(&m, |label| label.replace("T7", "T3")), Settings::default());
    assert!(note(&old, "labels-renamed").unwrap().contains("T3 → T7"));
}

fn changed_labels(table: &str, label: impl Fn(&str) -> String) -> String {
    changed(table, label, |p| p)
}

/// As written before all else: a table may hold T3 and T7, and both spellings of a name of one's own.
#[test]
fn a_label_as_written_wins() {
    let set = Electrodes::set(32);
    let mut labels: Vec<String> = (0..32).map(|k| format!("S{k}")).collect();
    labels[3] = "S-4".into();
    let set = Electrodes { labels, ..set };
    let mut draw = Draw::from(5);
    let positions = set.measured(90.0, Vec3::ZERO, 3.0, &mut draw);
    let values = draw.noise(32);
    let report = run(Some(&set.table(&positions)), &set.maps(&[("noise", &values)]), Settings::default());
    assert_eq!(report.electrodes.len(), 32);
    for (k, electrode) in report.electrodes.iter().enumerate() {
        assert_eq!(electrode.label, set.labels[k]);
        assert!((electrode.position_mm - positions[k]).norm() < 1e-9);
    }
    assert_eq!(note(&report, "labels-renamed"), None);
    // The old and the new name of one site, both in the table of electrodes, one of them measured.
    let table = electrodes() + "T3\t-99\t-11\t-4\n";
    let report = run(Some(&table), &maps(), Settings::default());
    assert!(note(&report, "positions-without-value").unwrap().contains("T3"));
    assert_eq!(report.maps, run(Some(&electrodes()), &maps(), Settings::default()).maps);
}

#[test]
fn derivations_and_mixed_references_are_refused_unless_left_out() {
    let m = maps();
    let refused = |from: &str, to: &str| {
        try_run(None, &m.replacen(&format!("\n{from}\t"), &format!("\n{to}\t"), 1), Settings::default()).unwrap_err()
    };
    assert_eq!(refused("Fp1", "Fp1-F7").finding().code.as_str(), "label-bipolar");
    assert_eq!(refused("P3", "EEG P3-O1").finding().code.as_str(), "label-bipolar");
    let ears = |label: &str| match label.chars().last() {
        Some('1' | '3' | '5' | '7' | '9') => format!("{label}-A1"),
        _ => format!("{label}-A2"),
    };
    let error = try_run(None, &relabelled(&m, ears), Settings::default()).unwrap_err();
    assert_eq!(error.finding().code.as_str(), "reference-mixed");
    // One reference is no mixture, and one channel in another way can be left out.
    run(None, &relabelled(&m, |label| format!("{label}-A1")), Settings::default());
    let one = m.replacen("\nFp1\t", "\nFp1-F7\t", 1);
    let report = run(None, &one, Settings { exclude: vec!["Fp1-F7".into()], ..Settings::default() });
    assert!(report.electrodes.iter().any(|e| !e.used));
    assert!(fitted(&report).iter().all(|map| map.measured.len() == 69));
}

#[test]
fn numbered_electrodes_of_a_series_are_no_sites_no_ears_and_no_eyes() {
    let letter = |letter: char| {
        let mut set = Electrodes::spread(32, -0.2);
        set.labels = (1..=32).map(|k| format!("{letter}{k}")).collect();
        let positions = set.measured(88.0, Vec3::ZERO, 1.0, &mut Draw::from(1));
        let values = Draw::from(2).noise(32);
        let report = run(Some(&set.table(&positions)), &set.maps(&[("noise", &values)]), Settings::default());
        assert_eq!(report.electrodes.len(), 32, "{letter}");
        assert_eq!(note(&report, "not-scalp"), None, "{letter}");
        assert!(note(&report, "axes-assumed").is_some(), "{letter}: names of a series tell no axes");
        // Nor do they stand at standard places.
        let alone = try_run(None, &set.maps(&[("noise", &values)]), Settings::default());
        assert_eq!(alone.unwrap_err().finding().code.as_str(), "labels-unmatched", "{letter}");
    };
    ['A', 'E', 'M', 'C', 'F', 'P'].into_iter().for_each(letter);
    // Without a series, they are what they are called.
    let ears = run(
        None,
        &(maps() + "A1\t1\t2\t3\t4\t5\t6\nE1\t1\t2\t3\t4\t5\t6\nE2-M1\t1\t2\t3\t4\t5\t6\n"),
        Settings::default(),
    );
    assert!(note(&ears, "positions-approximate").unwrap().contains("A1"));
    assert!(note(&ears, "not-scalp").unwrap().contains("E1, E2-M1"));
}

#[test]
fn interpolated_channels_are_left_out_like_others() {
    let (e, m) = (electrodes(), maps());
    let settings = Settings { exclude: vec!["Cz".into(), "T8".into()], ..Settings::default() };
    let expected = run(Some(&e), &m, settings);
    let settings =
        Settings { exclude: vec!["EEG Cz".into()], interpolated: vec!["t4".into(), "Q".into()], ..Settings::default() };
    let report = run(Some(&e), &m, settings);
    assert!(report.maps == expected.maps);
    assert!(note(&report, "interpolated").unwrap().contains("t4"));
    assert!(note(&report, "exclude-unmatched").unwrap().contains('Q'));
}

/// Referred to one electrode, which then is zero throughout: a measurement like any other.
#[test]
fn the_recording_reference_is_kept_as_a_measurement() {
    let (e, m) = (electrodes(), maps());
    let mut lines = m.lines();
    let header = lines.next().unwrap();
    let rows: Vec<(&str, Vec<f64>)> = lines
        .map(|line| line.split_once('\t').unwrap())
        .map(|(label, rest)| (label, rest.split('\t').map(|v| v.parse().unwrap()).collect()))
        .collect();
    let reference = rows.iter().find(|(label, _)| *label == "FCz").unwrap().1.clone();
    let referred: String = rows
        .iter()
        .map(|(label, row)| {
            let values: String = row.iter().zip(&reference).map(|(v, r)| format!("\t{}", v - r)).collect();
            format!("{label}{values}\n")
        })
        .collect();
    let expected = run(Some(&e), &m, Settings::default());
    let report = run(Some(&e), &format!("{header}\n{referred}"), Settings::default());
    assert!(note(&report, "reference-channel").unwrap().contains("FCz"));
    assert_eq!(note(&expected, "reference-channel"), None);
    same_answer(&expected, &report, "referred to FCz");
    assert!(fitted(&report).iter().all(|map| map.degrees_of_freedom == 63));
}

#[test]
fn an_unusual_head_is_said_wherever_an_answer_is() {
    let (e, m) = (electrodes(), maps());
    let expected = run(Some(&e), &m, Settings::default());
    let report = run(Some(&e), &m, Settings { unusual_head: true, ..Settings::default() });
    assert!(report.maps == expected.maps);
    assert!(report.head.unusual && !expected.head.unusual);
    let request = Request {
        electrodes: Some(e.as_bytes()),
        maps: m.as_bytes(),
        settings: Settings { unusual_head: true, ..Settings::default() },
        ..Request::default()
    };
    let study = inward_core::Study::open(&request).unwrap();
    for (index, map) in fitted(&report).into_iter().enumerate() {
        assert!(study.sheet(index, map).sentence.contains("may not hold for this head"));
    }
}

/// A dipole's map on every site of the 10-5 system, by the labels alone: the places that the search assumes must be those
/// that the map was made for.
#[test]
fn maps_on_the_finest_system_need_labels_alone() {
    let sites: Vec<_> = inward_core::electrode::standard_sites()
        .iter()
        .filter(|site| !["M1", "M2", "A1", "A2"].contains(&site.name.as_str()))
        .collect();
    assert_eq!(sites.len(), 345);
    let set = Electrodes {
        labels: sites.iter().map(|site| site.name.to_uppercase()).collect(),
        directions: sites.iter().map(|site| site.direction).collect(),
    };
    let series = PlainSeries::standard();
    let position = Vec3::new(-0.35, 0.2, 0.5);
    let lead = series.lead(position, &set.directions, 1e-12);
    let values: Vec<f64> = lead.iter().map(|row| row.dot(Vec3::new(0.5, -1.0, 2.0))).collect();
    let report = run(None, &set.maps(&[("one", &values)]), Settings::default());
    let map = fitted(&report)[0];
    assert!(map.residual_variance < 1e-9, "{}", map.residual_variance);
    assert!((map.dipole.canonical_mm - position * 88.0).norm() < 1e-3, "{:?}", map.dipole);
}

/// Heads of infants and of large adults; half a millimetre beyond is refused.
#[test]
fn heads_from_40_to_120_mm_are_computed() {
    let set = Electrodes::set(32);
    let values = Draw::from(8).noise(32);
    let maps = set.maps(&[("noise", &values)]);
    for (radius, good) in [(40.0, true), (40.5, true), (119.5, true), (120.0, true), (39.5, false), (120.5, false)] {
        let positions: Vec<Vec3> = set.directions.iter().map(|&e| e * radius).collect();
        assert_eq!(try_run(Some(&set.table(&positions)), &maps, Settings::default()).is_ok(), good, "{radius}");
    }
}

fn placed(electrodes: &str, maps: &str, wishes: &Wishes) -> Placement {
    let (table, maps) = electrodes_and_maps(electrodes, maps);
    place(Some(&table), &maps, wishes).unwrap()
}

/// What files beside the tables say: points of the head in the unit of the table, what channels measure, a unit.
#[test]
fn what_files_declare_is_heeded() {
    let (e, m) = (electrodes(), maps());
    let anonymous = |label: &str| format!("S-{}", label.replace(['z', 'Z'], "0"));
    for name in AxesName::all() {
        let turn = |p: Vec3| (name.axes().to_table(p) + SHIFT) * 0.001;
        let landmarks = vec![
            (Landmark::Nasion, turn(Vec3::new(0.0, 97.0, -6.0))),
            (Landmark::Right, turn(Vec3::new(76.0, 0.0, -3.0))),
            (Landmark::Left, turn(Vec3::new(-74.0, 1.0, -4.0))),
        ];
        let table = changed(&e, anonymous, turn);
        let wishes = Wishes { landmarks, declared_unit: Some(LengthUnit::Millimetre), ..Wishes::default() };
        let placement = placed(&table, &relabelled(&m, anonymous), &wishes);
        assert_eq!((placement.axes.name, placement.axes.evidence), (Some(name), Evidence::Landmarks));
        assert!(placement.notes.iter().any(|note| note.code.as_str() == "unit-overruled"));
        let units = placement.choices.iter().find(|choice| choice.setting == "units").unwrap();
        assert_eq!((units.from, &units.value), (Origin::Found, &"m".into()));
        let axes = placement.choices.iter().find(|choice| choice.setting == "axes").unwrap();
        assert_eq!((axes.from, &axes.value), (Origin::Found, &name.to_string().as_str().into()));
        assert!(axes.options.iter().any(|(option, _)| *option == axes.value), "what is in force can be chosen");
    }
    let millimetres = |unit| Wishes { declared_unit: Some(unit), ..Wishes::default() };
    let placement = placed(&e, &m, &millimetres(LengthUnit::Millimetre));
    assert_eq!(placement.choices[0].from, Origin::Declared);
    assert!(!placement.notes.iter().any(|note| note.code.as_str() == "unit-overruled"));
    let wrong = Wishes { unit: Some(LengthUnit::Metre), ..Wishes::default() };
    let (table, read) = electrodes_and_maps(&e, &m);
    assert_eq!(place(Some(&table), &read, &wrong).unwrap_err().finding().code.as_str(), "units-unrecognised");

    let more = m.clone() + "EMG1\t1\t2\t3\t4\t5\t6\n";
    let table = e.clone() + "EMG1\t50\t-60\t90\n";
    let label = || vec![Label::new("emg1")];
    assert_eq!(placed(&table, &more, &Wishes::default()).labels.not_scalp, ["EMG1"]);
    let scalp = placed(&table, &more, &Wishes { scalp: label(), ..Wishes::default() });
    assert_eq!((scalp.labels.matched, scalp.electrodes.len()), (71, 71));
    let other = placed(&e, &m, &Wishes { other_channels: vec![Label::new("cz")], ..Wishes::default() });
    assert_eq!((other.labels.not_scalp, other.electrodes.len()), (vec!["Cz".to_owned()], 69));
}

/// A reference that has a place is an electrode, one without is none.
#[test]
fn a_reference_with_a_place_is_an_electrode() {
    let (e, m) = (electrodes(), maps() + "REF\t0\t0\t0\t0\t0\t0\n");
    let without = run(Some(&e), &m, Settings::default());
    assert!(note(&without, "not-scalp").unwrap().contains("REF"));
    assert_eq!(note(&without, "reference-channel"), None);
    let with = run(Some(&(e + "Ref\t9.7\t30.1\t140.2\n")), &m, Settings::default());
    assert_eq!(with.electrodes.len(), without.electrodes.len() + 1);
    assert!(note(&with, "reference-channel").unwrap().contains("Ref"));
}
