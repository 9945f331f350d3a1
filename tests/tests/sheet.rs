//! A map's sign, its activation, the catalogue of heads, and what the sheet says of electrodes and head.
use inward_core::head::heads;
use inward_core::map::MapUnit;
use inward_core::report::{FittedMap, HeadSettings, Polarity, Sheet};
use inward_core::{MapReport, Request, Settings, Study, Vec3};
use inward_tests::{Draw, Electrodes, Mixture, PlainSeries, example};
use std::time::Instant;

fn open(electrodes: Option<&str>, maps: &str, settings: Settings) -> Study {
    let request =
        Request { electrodes: electrodes.map(str::as_bytes), maps: maps.as_bytes(), settings, ..Request::default() };
    Study::open(&request).unwrap()
}

fn watch(settings: Settings) -> Study {
    open(Some(&example("watch_electrodes.tsv")), &example("watch_maps.tsv"), settings)
}

fn fit(study: &Study, index: usize) -> FittedMap {
    match study.fit(index).unwrap() {
        MapReport::Fitted(map) => *map,
        MapReport::Failed { name, .. } => panic!("{name} was not fitted"),
    }
}

fn sheet(study: &Study, index: usize) -> Sheet {
    study.sheet(index, &fit(study, index))
}

fn out(labels: &[&str]) -> Settings {
    Settings { exclude: labels.iter().map(|label| (*label).into()).collect(), ..Settings::default() }
}

fn value<'a>(sheet: &'a Sheet, code: &str) -> &'a str {
    &sheet.rows.iter().find(|row| row.code == code).unwrap_or_else(|| panic!("no row {code}")).value
}

fn negated(values: &[f64]) -> Vec<f64> {
    values.iter().map(|v| -v).collect()
}

#[test]
fn a_turned_sign_turns_the_moment_and_no_other_digit() {
    let plain = watch(Settings::default());
    let turned = watch(Settings { flip: vec![1, 3, 3], ..Settings::default() });
    assert!(plain.count() >= 5);
    for index in 0..plain.count() {
        let (a, b) = (fit(&plain, index), fit(&turned, index));
        if ![1, 3].contains(&index) {
            assert_eq!(a, b);
            continue;
        }
        assert!(!a.flipped && b.flipped);
        // Equality of all fields but those that turn is equality of bits.
        let mut expected = a.clone();
        expected.flipped = true;
        expected.dipole.direction = -a.dipole.direction;
        expected.dipole.canonical_direction = -a.dipole.canonical_direction;
        expected.measured = negated(&a.measured);
        expected.projected = negated(&a.projected);
        expected.residual = negated(&a.residual);
        assert_eq!(b, expected);
        assert_eq!(a.residual_variance.to_bits(), b.residual_variance.to_bits());
    }
}

#[test]
fn a_turned_sign_is_turned_at_left_out_electrodes_too() {
    let settings = out(&["C3", "Pz"]);
    let (plain, turned) = (watch(settings.clone()), watch(Settings { flip: vec![0], ..settings }));
    let (a, b) = (sheet(&plain, 0), sheet(&turned, 0));
    for (a, b) in a.electrodes.iter().zip(&b.electrodes) {
        assert_eq!(a.misfit.to_bits(), b.misfit.to_bits(), "{}", a.label);
        let opposite = |a: &str, b: &str| a.parse::<f64>().unwrap() == -b.parse::<f64>().unwrap();
        assert!(opposite(&a.measured, &b.measured) && opposite(&a.projected, &b.projected), "{a:?} {b:?}");
    }
}

#[test]
fn words_follow_the_sign_once_it_is_declared_and_imply_none_before() {
    let declared = Settings { polarity: Polarity::Declared, ..Settings::default() };
    let up = sheet(&watch(declared.clone()), 0);
    let down = sheet(&watch(Settings { flip: vec![0], ..declared }), 0);
    assert!(!up.figure.axis && !down.figure.axis);
    assert_eq!(up.figure.dipole.direction, -down.figure.dipole.direction);
    assert!(up.alt.turned.contains("It points up") && down.alt.turned.contains("It points down"), "{:?}", down.alt);
    assert_eq!(value(&down, "polarity"), "turned, declared");
    assert_ne!(value(&up, "direction"), value(&down, "direction"));

    for flip in [vec![], vec![0]] {
        let axis = sheet(&watch(Settings { flip, ..Settings::default() }), 0);
        assert!(axis.figure.axis);
        let views = [&axis.alt.above, &axis.alt.behind, &axis.alt.left, &axis.alt.turned];
        let all = views.into_iter().chain([&axis.sentence]).chain(axis.rows.iter().map(|row| &row.value));
        for text in all.cloned().chain(axis.rows.iter().map(|row| row.label.to_string())) {
            for word in ["points", "inward", "outward", "Direction", "positive pole"] {
                assert!(!text.contains(word), "{text}");
            }
        }
        assert!(axis.alt.turned.contains("runs between"), "{}", axis.alt.turned);
        assert!(value(&axis, "direction").starts_with("±("));
        assert!(axis.sentence.contains("A low residual variance alone does not show"));
    }
}

#[test]
fn an_activation_scales_the_strength_alone_and_makes_it_comparable() {
    for unit in [MapUnit::Relative, MapUnit::Microvolt, MapUnit::Volt] {
        let settings = Settings { map_unit: unit, ..Settings::default() };
        let plain = watch(settings.clone());
        let scaled = watch(Settings { activation_sd: vec![None, Some(2.5)], ..settings });
        for index in 0..3 {
            let (a, b) = (fit(&plain, index), fit(&scaled, index));
            let mut expected = a.clone();
            if index == 1 {
                expected.activation_sd = Some(2.5);
                expected.dipole.strength = a.dipole.strength * 2.5;
                expected.dipole.strength_comparable = true;
            }
            assert_eq!(b, expected);
            assert_eq!(a.dipole.strength_comparable, unit != MapUnit::Relative);
        }
        let texts = [&plain, &scaled].map(|study| sheet(study, 1).rows.into_iter().find(|row| row.code == "strength"));
        let [plain, scaled] = texts.map(|row| row.unwrap().meaning);
        assert_eq!(plain.contains("not comparable"), unit == MapUnit::Relative);
        assert!(scaled.contains("standard deviation") && !scaled.contains("not comparable"));
    }
    let note = |sd: Vec<Option<f64>>| {
        let notes = watch(Settings { activation_sd: sd, ..Settings::default() }).notes();
        notes.into_iter().find(|note| note.code.as_str() == "unit-relative").unwrap().message
    };
    let count = watch(Settings::default()).count();
    let messages = [note(vec![]), note(vec![Some(1.0)]), note(vec![Some(1.0); count])];
    assert!(messages[0].contains("not comparable") && messages[1].contains("only between"), "{messages:?}");
    assert!(!messages[2].contains("not comparable") && messages[2].contains("comparable"), "{messages:?}");
}

/// Every head of the catalogue finds a dipole whose map was made by the plain series in that head.
#[test]
fn every_head_of_the_catalogue_finds_an_independently_made_dipole() {
    let set = Electrodes::set(71);
    let mut draw = Draw::from(1979);
    let mut named = Vec::new();
    for head in heads() {
        let layers: Vec<(f64, f64)> = head.shells.iter().map(|shell| (shell.ratio, shell.conductivity)).collect();
        let series = PlainSeries::new(&layers, 88.0);
        let truth: Vec<(Vec3, Vec3)> = (0..6)
            .map(|_| (draw.position(0.1, 0.85) * layers[0].0, draw.direction() * draw.between(5.0, 40.0)))
            .collect();
        let maps: Vec<Vec<f64>> = truth
            .iter()
            .map(|(p, m)| series.lead(*p, &set.directions, 1e-13).iter().map(|row| row.dot(*m)).collect())
            .collect();
        let names = ["a", "b", "c", "d", "e", "f"];
        let columns: Vec<(&str, &[f64])> = names.into_iter().zip(maps.iter().map(Vec::as_slice)).collect();
        let chosen = HeadSettings { shells: Some(head.shells.clone()), ..HeadSettings::default() };
        let settings =
            Settings { head: Some(chosen), map_unit: MapUnit::Microvolt, polarity: Polarity::Declared, ..out(&[]) };
        let study = open(None, &set.maps(&columns), settings);
        assert_eq!(study.head().name, Some(head.name));
        assert!(!study.head().radius_is_fitted && !study.head().centre_is_fitted);
        for (index, (position, moment)) in truth.iter().enumerate() {
            let map = fit(&study, index);
            let place = format!("{}, {index}: {:?}", head.name, map.dipole);
            assert!(map.residual_variance < 1e-12, "{place}");
            assert!((map.dipole.canonical_mm - *position * 88.0).norm() < 1e-3, "{place}");
            let found = map.dipole.canonical_direction * map.dipole.strength;
            assert!((found - *moment).norm() < 1e-4 * moment.norm(), "{place}");
        }
        let sheet = sheet(&study, 0);
        assert_eq!((sheet.head.title, sheet.head.source), (head.title, head.source));
        assert_eq!(value(&sheet, "head"), head.title);
        named.push(head.name);
    }
    named.dedup();
    assert_eq!(named.len(), heads().len());
    assert!((4..=6).contains(&named.len()));

    let mut edited = heads()[0].shells.clone();
    edited[2].conductivity *= 1.01;
    let head = HeadSettings { shells: Some(edited), radius_mm: Some(85.0), ..HeadSettings::default() };
    let study = watch(Settings { head: Some(head), ..Settings::default() });
    let report = study.head();
    assert_eq!((report.name, report.centre_is_fitted, report.radius_is_fitted), (None, true, false));
    assert_eq!(sheet(&study, 0).head.title, "Edited shells");
    assert_eq!(watch(Settings::default()).head().name, Some(heads()[0].name));
}

#[test]
fn the_figure_is_the_report_in_scalp_radii() {
    let study = watch(out(&["Cz"]));
    let head = study.head();
    let near = |a: Vec3, b: Vec3| (a - b).norm() < 1e-12;
    for index in 0..study.count() {
        let map = fit(&study, index);
        let figure = study.sheet(index, &map).figure;
        assert!(near(figure.dipole.position * head.radius_mm * 1e-3, map.dipole.canonical_mm * 1e-3));
        assert_eq!(figure.dipole.direction, map.dipole.canonical_direction);
        assert_eq!(figure.shells.len(), head.shells.len());
        for (drawn, shell) in figure.shells.iter().zip(&head.shells) {
            assert!(
                (drawn.radius * head.radius_mm - shell.outer_radius_mm).abs() < 1e-9 && drawn.tissue == shell.tissue
            );
        }
        assert_eq!(figure.shells.last().map(|shell| shell.radius), Some(1.0));
        let electrodes = study.electrodes();
        assert_eq!(figure.electrodes.len(), electrodes.len());
        for (drawn, electrode) in figure.electrodes.iter().zip(&electrodes) {
            let arm = electrode.position_mm - head.centre_mm;
            assert!(near(*drawn, arm * (1.0 / arm.norm())), "{}", electrode.label);
        }
    }
}

#[test]
fn the_list_of_electrodes_tells_the_report() {
    for settings in [Settings::default(), out(&["Cz", "P8", "O1"])] {
        let study = watch(settings);
        for index in 0..study.count() {
            let map = fit(&study, index);
            let list = study.sheet(index, &map).electrodes;
            let picture = study.picture(&map).unwrap();
            let drawn: Vec<(&str, bool)> = picture.electrodes.iter().map(|e| (e.label.as_str(), e.used)).collect();
            assert_eq!(list.iter().map(|e| (e.label.as_str(), e.used)).collect::<Vec<_>>(), drawn);
            let used: Vec<_> = list.iter().filter(|e| e.used).collect();
            assert_eq!(used.len(), map.measured.len());
            let limit = map.scale_limit();
            let mut shares = 0.0f64;
            for (k, electrode) in used.iter().enumerate() {
                for (text, number) in [
                    (&electrode.measured, map.measured[k]),
                    (&electrode.projected, map.projected[k]),
                    (&electrode.residual, map.residual[k]),
                ] {
                    let told: f64 = text.parse().unwrap();
                    assert!((told - number).abs() <= 0.005 * limit, "{electrode:?}: {number}");
                }
                assert_eq!(electrode.misfit, map.residual[k].abs());
                shares += electrode.share.parse().unwrap_or(0.0f64);
            }
            assert!((shares - 100.0).abs() < 2.0, "{shares}");
            assert!(list.iter().all(|e| e.used != e.share.is_empty()));
            let said = format!("{} of {}", used.len(), list.len());
            let sheet = study.sheet(index, &map);
            let told = value(&sheet, "electrodes");
            assert!(if used.len() == list.len() { said.starts_with(told) } else { said == told }, "{told}");
        }
    }
}

/// What the dipole has at electrodes that are left out, by the plain series.
#[test]
fn predictions_at_left_out_electrodes_are_those_of_an_independent_series() {
    let set = Electrodes::set(71);
    let series = PlainSeries::standard();
    let maps = Mixture::many(&series, &set.directions, 0.8, 9, &mut Draw::from(7));
    let names: Vec<String> = (0..maps.len()).map(|k| format!("m{k}")).collect();
    let columns: Vec<(&str, &[f64])> =
        names.iter().zip(&maps).map(|(name, map)| (name.as_str(), map.values.as_slice())).collect();
    let left = ["C3", "Oz", "FT10", "Fp1"];
    for (unit, factor) in [(MapUnit::Microvolt, 1.0), (MapUnit::Volt, 1e-6)] {
        let settings = Settings { map_unit: unit, activation_sd: vec![Some(3.0); 4], ..out(&left) };
        let study = open(None, &set.maps(&columns), settings);
        for (index, made) in maps.iter().enumerate() {
            let map = fit(&study, index);
            let list = study.sheet(index, &map).electrodes;
            let dipole = &map.dipole;
            let moment = dipole.canonical_direction * (dipole.strength * factor / map.activation_sd.unwrap_or(1.0));
            let lead = series.lead(dipole.canonical_mm * (1.0 / 88.0), &set.directions, 1e-13);
            let predicted: Vec<f64> = lead.iter().map(|row| row.dot(moment)).collect();
            let mean = |values: &[f64]| {
                let used = list.iter().zip(values).filter(|(e, _)| e.used).map(|(_, v)| v);
                used.sum::<f64>() / map.measured.len() as f64
            };
            let means = (mean(&made.values), mean(&predicted));
            let limit = map.scale_limit();
            let mut checked = 0;
            for (k, electrode) in list.iter().enumerate().filter(|(_, e)| !e.used) {
                assert!(left.contains(&electrode.label.as_str()) && electrode.label == set.labels[k]);
                let (measured, predicted) = (made.values[k] - means.0, predicted[k] - means.1);
                let off = (electrode.misfit - (measured - predicted).abs()).abs();
                assert!(off < 1e-7 * limit, "{}, {}: off by {off:e}", made.kind, electrode.label);
                // Volts are written as microvolts.
                let told = electrode.projected.parse::<f64>().unwrap() * factor;
                assert!((told - predicted).abs() <= 0.005 * limit, "{electrode:?}: {predicted}");
                checked += 1;
            }
            assert_eq!(checked, left.len());
        }
    }
}

/// A left-out electrode may lack a value that other maps have.
#[test]
fn a_left_out_electrode_without_a_value_has_a_prediction_alone() {
    let maps = example("watch_maps.tsv");
    let gap: String = maps
        .lines()
        .map(|line| match line.split_once('\t') {
            Some(("Cz", rest)) => format!("Cz\tn/a\t{}\n", rest.split_once('\t').unwrap().1),
            _ => format!("{line}\n"),
        })
        .collect();
    let study = open(Some(&example("watch_electrodes.tsv")), &gap, out(&["Cz"]));
    let list = sheet(&study, 0).electrodes;
    let cz = list.iter().find(|e| e.label == "Cz").unwrap();
    assert_eq!((cz.measured.as_str(), cz.residual.as_str(), cz.share.as_str(), cz.misfit), ("", "", "", 0.0));
    assert!(cz.projected.parse::<f64>().unwrap().is_finite());
    assert!(!sheet(&study, 1).electrodes.iter().find(|e| e.label == "Cz").unwrap().measured.is_empty());
}

#[test]
fn other_settings_on_read_tables_give_what_a_new_study_gives() {
    let shells = HeadSettings { shells: Some(heads()[2].shells.clone()), ..HeadSettings::default() };
    let all = [
        Settings::default(),
        out(&["Cz"]),
        out(&["Cz", "Fp1", "nobody"]),
        Settings { flip: vec![2], polarity: Polarity::Declared, ..out(&["Cz"]) },
        Settings { head: Some(shells), ..out(&["Cz"]) },
        Settings { head: Some(HeadSettings { radius_mm: Some(85.0), ..HeadSettings::default() }), ..out(&[]) },
        Settings { activation_sd: vec![Some(2.0)], map_unit: MapUnit::Volt, ..Settings::default() },
        Settings::default(),
    ];
    let mut study = watch(Settings::default());
    for settings in all {
        study = study.with(settings.clone()).unwrap();
        let fresh = watch(settings);
        assert_eq!(study.preamble(), fresh.preamble());
        for index in 0..study.count() {
            let (a, b) = (fit(&study, index), fit(&fresh, index));
            assert_eq!(a, b);
            assert_eq!(study.sheet(index, &a), fresh.sheet(index, &b));
            let [a, b] = [(&study, &a), (&fresh, &b)].map(|(study, map)| format!("{:?}", study.picture(map)));
            assert_eq!(a, b);
        }
    }
    let refused = |settings: Settings| study.with(settings).unwrap_err().finding().code.as_str();
    assert_eq!(refused(Settings { flip: vec![99], ..Settings::default() }), "map-index");
    let everyone: Vec<String> = study.electrodes().into_iter().map(|e| e.label).collect();
    assert_eq!(refused(Settings { exclude: everyone, ..Settings::default() }), "electrodes-too-few");
}

/// The times are of one run, so that what else the machine does touches both.
#[test]
fn leaving_one_electrode_out_costs_a_fraction_of_reading_again() {
    let set = Electrodes::set(71);
    let maps = Mixture::many(&PlainSeries::standard(), &set.directions, 0.85, 60, &mut Draw::from(5));
    let names: Vec<String> = (0..6000).map(|k| format!("m{k}")).collect();
    let columns: Vec<(&str, &[f64])> =
        names.iter().enumerate().map(|(k, name)| (name.as_str(), maps[k % maps.len()].values.as_slice())).collect();
    let table = set.maps(&columns);
    let answered = |study: Study| {
        let map = fit(&study, 0);
        (study.sheet(0, &map), study.picture(&map).is_some())
    };
    let timed = |work: &dyn Fn() -> (Sheet, bool)| {
        (0..3)
            .map(|_| {
                let start = Instant::now();
                assert!(work().1);
                start.elapsed().as_secs_f64()
            })
            .fold(f64::INFINITY, f64::min)
    };
    let study = open(None, &table, Settings::default());
    let again = timed(&|| answered(open(None, &table, out(&["Cz"]))));
    let change = timed(&|| answered(study.with(out(&["Cz"])).unwrap()));
    println!("read again {:.1} ms, other settings {:.1} ms", 1e3 * again, 1e3 * change);
    assert!(change < 0.6 * again, "{change} s of {again} s");
}
