//! Every error and every note, brought about by an input that deserves it.
use inward_core::electrode::Label;
use inward_core::head::{LengthUnit, ShellSpec};
use inward_core::placement::{Wishes, place};
use inward_core::read::{Encoding, mat};
use inward_core::report::{ErrorReport, Groups, HeadSettings, Note, Questions, hint};
use inward_core::understand::{Baseline, ColumnName, ColumnWishes, ColumnsAre, FileWishes, MapsAre, Times};
use inward_core::{Code, Decomposition, Error, MapReport, Report, Request, Settings, Study, Vec3, analyse, compare};
use inward_tests::{Draw, Electrodes, electrodes_and_maps, example, sample};
use serde_json::json;
use std::collections::BTreeSet;

fn electrodes() -> String {
    example("watch_electrodes.tsv")
}

fn maps() -> String {
    example("watch_maps.tsv")
}

fn run(electrodes: Option<&[u8]>, maps: &[u8], settings: Settings) -> Result<Report, Error> {
    analyse(&Request { electrodes, maps, settings, ..Request::default() })
}

/// The error of an input, in words.
fn error(electrodes: Option<&str>, maps: &str, settings: Settings) -> ErrorReport {
    (&run(electrodes.map(str::as_bytes), maps.as_bytes(), settings).expect_err("an error")).into()
}

fn plain() -> Settings {
    Settings::default()
}

fn unmixing() -> Settings {
    Settings { maps_are: Some(MapsAre::Unmixing), ..plain() }
}

fn head(change: impl FnOnce(&mut HeadSettings)) -> Settings {
    let mut head = HeadSettings::default();
    change(&mut head);
    Settings { head: Some(head), ..plain() }
}

/// The table with one line changed; lines count from 1, the header's is 1.
fn with_line(table: &str, line: usize, change: impl Fn(&str) -> String) -> String {
    table.lines().enumerate().map(|(k, text)| if k + 1 == line { change(text) } else { text.into() } + "\n").collect()
}

fn shell(tissue: &str, ratio: f64, conductivity: f64) -> ShellSpec {
    ShellSpec { tissue: tissue.into(), ratio, conductivity }
}

/// Positions of the example moved somewhere else.
fn moved(change: impl Fn(usize, Vec3) -> Vec3) -> String {
    let mut table = String::from("label\tx\ty\tz\n");
    for (k, line) in electrodes().lines().skip(1).enumerate() {
        let row: Vec<&str> = line.split('\t').collect();
        let p = change(k, Vec3(std::array::from_fn(|i| row[i + 1].parse().unwrap())));
        table += &format!("{}\t{}\t{}\t{}\n", row[0], p[0], p[1], p[2]);
    }
    table
}

/// The error of a binary file.
fn refused(file: &[u8]) -> ErrorReport {
    (&run(None, file, plain()).expect_err("an error")).into()
}

/// Files by name.
fn files(given: &[(&str, &[u8])], settings: Settings) -> Result<Report, Error> {
    analyse(&Request { files: given.to_vec(), settings, ..Request::default() })
}

fn of_file(name: &str, wish: FileWishes) -> Settings {
    Settings { files: [(name.to_owned(), wish)].into(), ..plain() }
}

/// The values of a table without labels and names, a line for each electrode.
fn bare(table: &str) -> String {
    table.lines().skip(1).map(|line| line.split_once('\t').unwrap().1.to_owned() + "\n").collect()
}

/// A table with two labels exchanged.
fn exchanged(table: &str, one: &str, other: &str) -> String {
    table
        .replace(&format!("\n{one}\t"), "\n?\t")
        .replace(&format!("\n{other}\t"), &format!("\n{one}\t"))
        .replace("\n?\t", &format!("\n{other}\t"))
}

/// A table with labels that tell nothing.
fn numbered(table: &str) -> String {
    let line = |(k, line): (usize, &str)| match line.split_once('\t') {
        Some((_, rest)) if k > 0 => format!("S{k}\t{rest}\n"),
        _ => format!("{line}\n"),
    };
    table.lines().enumerate().map(line).collect()
}

/// A table with more after each label.
fn suffixed(table: &str, suffix: &str) -> String {
    let line = |(k, line): (usize, &str)| match line.split_once('\t') {
        Some((label, rest)) if k > 0 => format!("{label}{suffix}\t{rest}\n"),
        _ => format!("{line}\n"),
    };
    table.lines().enumerate().map(line).collect()
}

/// A table with zeros at some labels.
fn zeroed(table: &str, labels: &[&str]) -> String {
    let line = |line: &str| match line.split('\t').collect::<Vec<_>>()[..] {
        [label, ref values @ ..] if labels.contains(&label) => format!("{label}{}\n", "\t0".repeat(values.len())),
        _ => format!("{line}\n"),
    };
    table.lines().map(line).collect()
}

/// Notes about several decompositions: six subjects under one name and two under another, and many of nobody's, with more
/// components than electrodes.
fn of_several() -> Vec<Note> {
    let (set, mut draw) = (Electrodes::set(19), Draw::from(9));
    let mut study = |count: usize, settings: Settings| {
        let maps: Vec<Vec<f64>> = (0..count).map(|_| draw.noise(19)).collect();
        let table = set.maps(&maps.iter().map(|map| ("ICA", &map[..])).collect::<Vec<_>>());
        Study::open(&Request { maps: table.as_bytes(), settings, ..Request::default() }).unwrap()
    };
    let components = Settings { columns_are: Some(ColumnsAre::Components), ..plain() };
    let one = |name: &str, subject: Option<String>, study: Study| Decomposition {
        name: name.into(),
        subject,
        information: None,
        study,
    };
    let sd = Settings { activation_sd: vec![Some(2.0)], exclude: vec!["Cz".into()], ..components.clone() };
    let mut list = vec![one("more", None, study(20, components.clone())), one("partly", None, study(2, sd))];
    list.extend((0..6).map(|k| one("x", Some(format!("s{k}")), study(1, components.clone()))));
    list.extend((0..2).map(|k| one("y", Some(format!("s{k}")), study(1, components.clone()))));
    list.extend((0..9).map(|_| one("n", None, study(1, components.clone()))));
    let notes = compare(&list, &Questions::default(), None).unwrap().notes;
    let severities: Vec<(&str, &str)> = notes.iter().map(|note| (note.code.as_str(), note.severity)).collect();
    assert_eq!(
        severities,
        [
            ("electrode-sets-differ", "warning"),
            ("components-no-sample", "info"),
            ("subjects-few", "info"),
            ("subjects-resampled", "info"),
            ("variance-incomplete", "info"),
            ("rank-deficient", "info"),
            ("pairs-many", "info")
        ]
    );
    for (note, said) in notes.iter().zip([
        "18 in “partly”",
        "no sample",
        "“y” has 2 subjects",
        "4000 times, seed 1",
        ": partly.",
        "20 maps of “more” have rank 19",
        "57 pairs",
    ]) {
        assert!(note.message.contains(said) && note.message.ends_with('.'), "{}", note.message);
    }
    notes
}

/// Two tables whose electrodes have nothing in common.
fn uncommon() -> ErrorReport {
    let half = |from: usize| {
        let set = Electrodes::set(32).only(&(from..from + 12).collect::<Vec<_>>());
        let noise = Draw::from(2).noise(12);
        Study::open(&Request { maps: set.maps(&[("m", &noise)]).as_bytes(), ..Request::default() }).unwrap()
    };
    (&half(0).matches(&half(12), [&[], &[]], ["a", "b"]).expect_err("an error")).into()
}

/// Every error that an input can cause, with the input that causes it.
fn errors() -> Vec<(&'static str, ErrorReport)> {
    let (e, m) = (electrodes(), maps());
    let first_nine: String = m.lines().take(10).map(|line| format!("{line}\n")).collect();
    let many: String = (0..513).map(|k| format!("E{k}\t{}\n", k % 7)).collect();
    let wide = |count: usize| {
        m.lines()
            .skip(1)
            .map(|line| format!("{}{}\n", line.split('\t').next().unwrap(), "\t1".repeat(count)))
            .collect::<String>()
    };
    let mut all = vec![
        ("input-empty", error(Some(&e), "", plain())),
        ("input-empty", error(Some(&e), " \n\t\r\n", plain())),
        ("input-empty", error(Some(""), &m, plain())),
        ("input-too-large", error(Some(&e), &"a 1\n".repeat((64 << 18) + 1), plain())),
        ("table-columns", error(None, "1 2\n3 4\n", plain())),
        ("table-columns", error(Some("label\tx\ty\nA\t1\t2\nB\t3\t4\n"), &m, plain())),
        ("table-columns", error(Some(&e), &with_line(&m, 4, |line| line.replacen("AF3", "", 1)), plain())),
        ("table-ragged", error(Some(&e), &with_line(&m, 4, |line| format!("{line}\t7")), plain())),
        ("number-expected", error(Some(&e), &with_line(&m, 4, |line| line.replacen("-0.69", "two", 1)), plain())),
        ("number-expected", error(Some(&e), &with_line(&m, 4, |line| line.replacen("-0.69", "inf", 1)), plain())),
        ("number-expected", error(Some(&with_line(&e, 4, |line| line.replacen("82.1", "8S.1", 1))), &m, plain())),
        ("number-range", error(Some(&e), &with_line(&m, 4, |line| line.replacen("-0.69", "1e101", 1)), plain())),
        ("number-range", error(Some(&e), &with_line(&m, 4, |line| line.replacen("-0.69", "-1e-101", 1)), plain())),
        ("number-range", error(Some(&e), &with_line(&m, 4, |line| line.replacen("-0.69", "1e999", 1)), plain())),
        ("electrode-off", error(Some(&moved(|k, p| if k == 7 { Vec3::new(1.0, 6.0, 43.0) } else { p })), &m, plain())),
        ("label-duplicate", error(Some(&e), &with_line(&m, 4, |line| line.replacen("AF3", "fp1", 1)), plain())),
        ("label-duplicate", error(Some(&with_line(&e, 4, |line| line.replacen("AF3", "Fp1", 1))), &m, plain())),
        ("label-duplicate", error(None, &m.replacen("\nF7\t", "\nEEG fp 1-Ref\t", 1), plain())),
        ("label-duplicate", error(None, &m.replacen("\nF7\t", "\nT3\t", 1), plain())),
        (
            "label-ambiguous",
            error(
                Some(&(e.replacen("\nCz\t", "\nC z\t", 1) + "C-z\t1\t2\t140\n")),
                &m.replacen("\nCz\t", "\nEEG Cz\t", 1),
                plain(),
            ),
        ),
        ("label-bipolar", error(None, &m.replacen("\nFp1\t", "\nFp1-F7\t", 1), plain())),
        ("label-bipolar", error(Some(&e), &m.replacen("\nFp1\t", "\nEEG Fp1 - F7\t", 1), plain())),
        (
            "reference-mixed",
            error(None, &m.replacen("\nFp1\t", "\nFp1-A1\t", 1).replacen("\nFp2\t", "\nFp2-A2\t", 1), plain()),
        ),
        ("map-laplacian", error(Some(&e), &m, Settings { laplacian: Some(true), ..plain() })),
        ("labels-unmatched", error(Some(&e), "Q1\t3\nQ2\t4\n", plain())),
        ("labels-unmatched", error(None, "Q1\t3\nQ2\t4\n", plain())),
        ("electrodes-too-few", error(Some(&e), &first_nine, plain())),
        ("electrodes-too-few", error(None, &first_nine, plain())),
        (
            "electrodes-too-few",
            error(
                Some(&e),
                &m,
                Settings {
                    exclude: m.lines().skip(10).map(|line| line.split('\t').next().unwrap().into()).collect(),
                    ..plain()
                },
            ),
        ),
        ("electrodes-too-many", error(None, &many, plain())),
        ("electrodes-too-many", error(Some(&many.replace('\t', "\t1\t2\t")), &m, plain())),
        (
            "electrodes-coincident",
            error(Some(&moved(|k, p| if k == 5 { Vec3::new(-24.7, 91.2, 42.2) } else { p })), &m, plain()),
        ),
        ("electrodes-coincident", error(Some(&moved(|_, _| Vec3::new(1.0, 2.0, 3.0))), &m, plain())),
        ("electrodes-collinear", error(Some(&moved(|k, _| Vec3::new(1.0, 2.0, 3.0) * k as f64)), &m, plain())),
        ("electrodes-coplanar", error(Some(&moved(|_, p| Vec3::new(p[0], p[1], 7.0))), &m, plain())),
        ("electrodes-coplanar", error(Some(&moved(|_, p| Vec3::new(p[0], p[1], p[0] - 2.0 * p[1]))), &m, plain())),
        ("units-unrecognised", error(Some(&moved(|_, p| p * 7.0)), &m, plain())),
        ("units-unrecognised", error(Some(&moved(|_, p| p * 1e-9)), &m, plain())),
        ("maps-none", error(Some(&e), "label\nFp1\nFp2\n", plain())),
        ("maps-too-many", error(Some(&e), &wide(65_537), plain())),
        ("map-constant", error(Some(&e), &wide(1), plain())),
        (
            "map-incomplete",
            error(
                None,
                "F3 1 n/a\nF4 2 n/a\nC3 n/a 3\nC4 1 1\nP3 2 2\nP4 3 1\nO1 1 2\nO2 2 3\nFz 3 1\nPz 1 2\nCz 2 3\n",
                plain(),
            ),
        ),
        ("head-invalid", error(Some(&e), &m, head(|head| head.radius_mm = Some(500.0)))),
        ("head-invalid", error(Some(&e), &m, head(|head| head.radius_mm = Some(f64::NAN)))),
        ("head-invalid", error(Some(&e), &m, head(|head| head.centre_mm = Some(Vec3::new(500.0, 0.0, 0.0))))),
        ("head-invalid", error(Some(&e), &m, head(|head| head.centre_mm = Some(Vec3::new(1e200, 0.0, 0.0))))),
        ("head-invalid", error(Some(&e), &m, head(|head| head.centre_mm = Some(Vec3::new(0.0, f64::INFINITY, 0.0))))),
        ("head-invalid", error(Some(&e), &m, head(|head| head.centre_mm = Some(Vec3::new(-24.7, 91.2, 42.2))))),
        ("head-invalid", error(Some(&e), &m, head(|head| head.shells = Some(Vec::new())))),
        ("head-invalid", error(Some(&e), &m, head(|head| head.shells = Some(vec![shell("brain", 0.9, 0.33)])))),
        (
            "head-invalid",
            error(
                Some(&e),
                &m,
                head(|head| head.shells = Some(vec![shell("brain", 0.9, 0.0), shell("scalp", 1.0, 0.3)])),
            ),
        ),
        (
            "head-invalid",
            error(
                Some(&e),
                &m,
                head(|head| head.shells = Some(vec![shell("a", 0.9, 0.3), shell("b", 0.8, 0.3), shell("c", 1.0, 0.3)])),
            ),
        ),
        ("settings-unknown", (&Settings::unknown("colour")).into()),
        ("map-index", error(Some(&e), &m, Settings { flip: vec![0, 4_000_000_000], ..plain() })),
        ("map-index", error(Some(&e), &m, Settings { activation_sd: vec![None; 7], ..plain() })),
    ];
    for sd in [0.0, -1.0, f64::NAN, f64::INFINITY, 1e101, 1e-101] {
        let settings = Settings { activation_sd: vec![None, Some(sd)], ..plain() };
        all.push(("activation-sd-invalid", error(Some(&e), &m, settings)));
    }
    for (key, value) in [
        ("errors", json!({ "electrodesMm": -1 })),
        ("errors", json!({ "skullRatio": [40, 15] })),
        ("errors", json!({ "draws": 50 })),
        ("noise", json!({ "sd": 0 })),
        ("noise", json!({ "singleTrialSd": 3, "trials": 0 })),
        ("sources", json!({ "draws": 10 })),
        ("sources", json!({ "floor": [0.6, 0] })),
        ("sources", json!({ "maxEccentricity": 0.99 })),
        ("limits", json!({ "oneDipole": 0.99, "ruledOut": 0.98 })),
    ] {
        let settings = serde_json::from_value(json!({ key: value })).unwrap();
        all.push(("setting-range", error(Some(&e), &m, settings)));
    }
    let request = Request { electrodes: Some(e.as_bytes()), maps: m.as_bytes(), ..Request::default() };
    let lacking = Study::open(&request).unwrap().verdicts(0..1).unwrap_err();
    all.push(("populations-lacking", (&lacking).into()));
    let dipole = json!({ "map": 0, "position": [0, 0, 0], "direction": [1, 0, 0], "rv": 0.1 });
    let crowd = json!({ "members": [{ "name": "a", "dipoles": vec![dipole; 5001] }] });
    let crowded = Groups::new(&serde_json::from_value(crowd).unwrap()).unwrap_err();
    all.push(("dipoles-too-many", (&crowded).into()));
    let mut bytes = m.clone().into_bytes();
    bytes[40] = 0xff;
    let utf8 = of_file("maps", FileWishes { encoding: Some(Encoding::Utf8), ..FileWishes::default() });
    all.push(("input-encoding", (&run(None, &bytes, utf8).unwrap_err()).into()));
    let mut utf16: Vec<u8> = std::iter::once(0xfeff).chain(m.encode_utf16()).flat_map(u16::to_le_bytes).collect();
    utf16.push(0);
    all.push(("input-encoding", (&run(None, &utf16, plain()).unwrap_err()).into()));
    let refused_files = |given: &[(&str, &[u8])], settings| (&files(given, settings).expect_err("an error")).into();
    let (eb, mb) = (e.as_bytes(), m.as_bytes());
    let matrix = bare(&m);
    let short: String = matrix.lines().take(30).map(|line| format!("{line}\n")).collect();
    let gaps = with_line(&m, 4, |line| format!("{}\tn/a", line.rsplit_once('\t').unwrap().0));
    let late = Settings {
        times: Some(Times { start: 0.0, step: 2.0, unit: Default::default() }),
        baseline: Some(Baseline { from: -100.0, to: -50.0 }),
        ..plain()
    };
    all.extend([
        ("table-large", error(Some(&e), &"Cz 1\n".repeat(70_000), plain())),
        ("table-large", error(Some(&e), &"Cz,".repeat(70_000), plain())),
        ("json-syntax", error(Some(&e), "[[1, 2],\n[3, }", plain())),
        ("json-syntax", error(Some(&e), "{\"maps\": [[1, 2],\n[3, 4]", plain())),
        ("json-content", error(Some(&e), "[1, [2]]", plain())),
        ("json-content", error(Some(&e), &("[".repeat(900) + "1" + &"]".repeat(900)), plain())),
        ("maps-missing", refused_files(&[("a.tsv", eb)], plain())),
        ("files-several", refused_files(&[("a.tsv", mb), ("b.tsv", eb), ("c.tsv", mb)], plain())),
        ("files-several", refused_files(&[("a.tsv", mb), ("b.tsv", eb), ("c.tsv", eb)], plain())),
        ("shape-unmatched", error(Some(&e), &short, plain())),
        (
            "column-unknown",
            error(
                Some(&e),
                &m,
                Settings { columns: ColumnWishes { x: Some(ColumnName::Number(9)), ..Default::default() }, ..plain() },
            ),
        ),
        ("unmixing-singular", error(Some(&e), &gaps, unmixing())),
        ("unmixing-singular", error(Some(&e), &m.replace(|c: char| ('1'..='9').contains(&c), "0"), unmixing())),
        ("baseline-empty", error(Some(&e), &m, late)),
    ]);
    let study = Study::open(&Request { electrodes: None, maps: m.as_bytes(), settings: plain(), ..Request::default() })
        .unwrap();
    for (code, name) in [
        ("input-truncated", "cut.mat"),
        ("input-damaged", "version_9.npy"),
        ("input-hdf5", "level_7_3.mat"),
        ("input-matlab-4", "level_4.mat"),
        ("input-zip", "encrypted.zip"),
        ("input-no-table", "picture.txt"),
        ("array-type", "complex.npy"),
        ("array-type", "only_sparse.mat"),
        ("array-size", "billion_rows.npy"),
        ("array-size", "three.npy"),
        ("number-range", "infinite.npy"),
    ] {
        all.push((code, refused(&sample(name))));
    }
    all.push(("electrodes-uncommon", uncommon()));
    all.push(("map-index", (&study.fit(6).unwrap_err()).into()));
    all
}

#[test]
fn every_error_has_its_code_a_sentence_and_a_next_step() {
    let errors = errors();
    for (expected, error) in &errors {
        assert_eq!(error.code.as_str(), *expected, "{error:?}");
        assert!(error.message.ends_with('.') && error.message.len() > 15, "{error:?}");
        assert!(error.hint.ends_with('.') && error.hint.len() > 15, "{error:?}");
    }
    let met: BTreeSet<&str> = errors.iter().map(|(code, _)| *code).collect();
    let known: BTreeSet<&str> =
        Code::ALL.iter().filter(|code| !hint(**code).is_empty()).map(|code| code.as_str()).collect();
    assert_eq!(met, known, "every error of the list is brought about");
}

#[test]
fn errors_name_input_line_column_label_and_map() {
    let (e, m) = (electrodes(), maps());
    let place = error(Some(&e), &with_line(&m, 4, |line| line.replacen("4.58", "x", 1)), plain()).place.unwrap();
    assert_eq!((place.input, place.line, place.column), (Some("maps"), Some(4), Some(3)));
    assert_eq!((place.label.as_deref(), place.map.as_deref()), (Some("AF3"), Some("engine room")));
    let place = error(Some(&with_line(&e, 6, |line| line.replacen('\t', "\tx", 1))), &m, plain()).place.unwrap();
    assert_eq!(
        (place.input, place.line, place.column, place.label.as_deref()),
        (Some("electrodes"), Some(6), Some(2), Some("Fpz"))
    );
    let place = error(Some(&moved(|k, p| if k == 7 { p * 0.2 } else { p })), &m, plain()).place.unwrap();
    assert_eq!((place.input, place.line, place.label.as_deref()), (Some("electrodes"), Some(9), Some("AF8")));
    // The second of two labels for one electrode is the one that is too many.
    for (from, to, named) in [("F7", "F7-T7", "F7-T7"), ("AF8", "T3", "T7")] {
        let changed = m.replacen(&format!("\n{from}\t"), &format!("\n{to}\t"), 1);
        let line = changed.lines().position(|line| line.starts_with(&format!("{named}\t"))).unwrap() + 1;
        let place = error(Some(&e), &changed, plain()).place.unwrap();
        assert_eq!((place.input, place.line, place.label.as_deref()), (Some("maps"), Some(line), Some(named)));
    }
    // Lines are those of the text, empty ones and remarks counted.
    let spaced = format!("# measured on Tuesday\n\n{}", with_line(&m, 4, |line| line.replacen("4.58", "x", 1)));
    assert_eq!(error(Some(&e), &spaced, plain()).place.unwrap().line, Some(6));
    let duplicate = error(Some(&e), &with_line(&m, 9, |line| line.replacen("AF8", "AF3", 1)), plain());
    assert!(duplicate.message.contains('4') && duplicate.message.contains('9'), "{}", duplicate.message);
    // A map is named as its table has it, whatever number scripts know it by.
    let activation = error(Some(&e), &m, Settings { activation_sd: vec![None, Some(-1.0)], ..plain() });
    assert!(activation.message.contains("“engine room”"), "{}", activation.message);
    // What a square matrix was taken for is said as it was done.
    let square: String =
        (0..70).map(|row| (0..70).map(|k| format!("{} ", (row * 7 + k * k) % 13)).collect::<String>() + "\n").collect();
    for (settings, taken) in [(plain(), "each row"), (unmixing(), "each column")] {
        let report = files(&[("m", square.as_bytes()), ("e", e.as_bytes())], settings).unwrap();
        assert!(report.notes.iter().any(|note| note.message.contains(taken)), "{taken}: {:?}", report.notes);
    }
}

#[test]
fn one_bad_map_does_not_spoil_the_others() {
    let m: String = maps()
        .lines()
        .enumerate()
        .map(|(k, line)| {
            let added = match k {
                0 => "flat\tgap",
                5 => "2\tn/a",
                _ => "2\t1",
            };
            format!("{line}\t{added}\n")
        })
        .collect();
    let report = run(Some(electrodes().as_bytes()), m.as_bytes(), plain()).unwrap();
    let whole = run(Some(electrodes().as_bytes()), maps().as_bytes(), plain()).unwrap();
    assert_eq!(report.maps[..6], whole.maps[..]);
    let codes: Vec<&str> = report.maps[6..]
        .iter()
        .map(|map| match map {
            MapReport::Failed { error, .. } => error.code.as_str(),
            MapReport::Fitted(_) => "none",
        })
        .collect();
    assert_eq!(codes, ["map-constant", "map-incomplete"]);
}

#[test]
fn every_note_is_given_when_it_applies_and_not_otherwise() {
    let (e, m) = (electrodes(), maps());
    let notes = |electrodes: Option<&str>, maps: &str, settings: Settings| -> Vec<(&'static str, &'static str)> {
        let report = run(electrodes.map(str::as_bytes), maps.as_bytes(), settings).unwrap();
        assert!(report.notes.iter().all(|note| note.message.ends_with('.')));
        report.notes.iter().map(|note| (note.code.as_str(), note.severity)).collect()
    };
    let micro = Settings { map_unit: inward_core::map::MapUnit::Microvolt, ..plain() };
    let usual = notes(Some(&e), &m, micro.clone());
    let codes: Vec<&str> = usual.iter().map(|(code, _)| *code).collect();
    assert_eq!(
        codes.iter().collect::<BTreeSet<_>>(),
        ["axes-found", "average-referenced", "electrodes-projected", "unit-recognised"].iter().collect::<BTreeSet<_>>()
    );
    let mut met: BTreeSet<&str> = codes.into_iter().collect();
    let twelve: String = m.lines().take(13).map(|line| format!("{line}\n")).collect();
    let unit = moved(|_, p| {
        let p = p - Vec3::new(0.0, 6.0, 42.7);
        p * (1.0 / p.norm())
    });
    // Sources so close under the scalp need hundreds of terms and more images than there may be.
    let thin_skull = vec![shell("brain", 0.99997, 10.9), shell("scalp", 1.0, 0.0104)];
    // Decimal commas in a table whose fields are divided by commas.
    let divided: String = m
        .lines()
        .skip(1)
        .enumerate()
        .map(|(row, line)| format!("{},-0,{}\n", line.split('\t').next().unwrap(), row * row % 97))
        .collect();
    let cases: Vec<(&str, &str, Option<String>, String, Settings)> = vec![
        ("standard-positions", "info", None, m.clone(), micro.clone()),
        ("unit-sphere-scaled", "info", Some(unit), m.clone(), micro.clone()),
        ("few-electrodes", "warning", Some(e.clone()), twelve.clone(), micro.clone()),
        ("positions-without-value", "info", Some(e.clone()), twelve, micro.clone()),
        ("values-without-position", "warning", Some(e.clone()), format!("{m}Q\t1\t2\t3\t4\t5\t6\n"), micro.clone()),
        ("excluded", "info", Some(e.clone()), m.clone(), Settings { exclude: vec!["cz".into()], ..micro.clone() }),
        (
            "exclude-unmatched",
            "warning",
            Some(e.clone()),
            m.clone(),
            Settings { exclude: vec!["Q".into()], ..micro.clone() },
        ),
        ("unit-relative", "info", Some(e.clone()), m.clone(), plain()),
        ("axes-assumed", "warning", Some(numbered(&e)), numbered(&m), micro.clone()),
        (
            "axes-contradicted",
            "warning",
            Some(e.clone()),
            m.clone(),
            Settings { axes: Some("front-left-up".parse().unwrap()), ..micro.clone() },
        ),
        ("labels-misplaced", "warning", Some(exchanged(&e, "T7", "T8")), m.clone(), micro.clone()),
        ("decimals-suspected", "warning", Some(e.clone()), divided, micro.clone()),
        ("mirrored", "warning", Some(moved(|_, p| Vec3::new(-p[0], p[1], p[2]))), m.clone(), micro.clone()),
        ("labels-renamed", "info", Some(e.clone()), m.replacen("\nFp1\t", "\nEEG Fp1-Ref\t", 1), micro.clone()),
        ("labels-renamed", "info", Some(e.clone()), m.replacen("\nT7\t", "\nT3\t", 1), micro.clone()),
        ("not-scalp", "info", Some(e.clone()), m.clone() + "VEOG\t1\t2\t3\t4\t5\t6\n", micro.clone()),
        ("not-scalp", "info", Some(e.clone() + "LPA\t-70\t0\t-20\n"), m.clone(), micro.clone()),
        ("reference-named", "info", Some(e.clone()), suffixed(&m, "-Cz"), micro.clone()),
        ("reference-channel", "info", Some(e.clone()), zeroed(&m, &["Cz"]), micro.clone()),
        ("channels-zero", "warning", Some(e.clone()), zeroed(&m, &["Cz", "Fz"]), micro.clone()),
        ("positions-approximate", "info", None, m.clone() + "M1\t1\t2\t3\t4\t5\t6\n", micro.clone()),
        (
            "interpolated",
            "info",
            Some(e.clone()),
            m.clone(),
            Settings { interpolated: vec!["cz".into()], ..micro.clone() },
        ),
        ("unusual-head", "warning", Some(e.clone()), m.clone(), Settings { unusual_head: true, ..micro.clone() }),
        (
            "laplacian-suspected",
            "warning",
            Some(e.clone()),
            with_line(&m, 1, |line| line.replacen('\t', "\tCSD ", 1)),
            micro.clone(),
        ),
        (
            "header-assumed",
            "info",
            Some(e.clone()),
            with_line(&m, 1, |line| line.replacen("label", "who", 1)),
            micro.clone(),
        ),
        ("sphere-deviation", "warning", Some(moved(|k, p| if k == 3 { p * 1.3 } else { p })), m.clone(), micro.clone()),
        (
            "series-only",
            "info",
            Some(e.clone()),
            m.clone(),
            Settings { head: Some(HeadSettings { shells: Some(thin_skull), ..HeadSettings::default() }), ..micro },
        ),
    ];
    for (code, severity, electrodes, maps, settings) in cases {
        let found = notes(electrodes.as_deref(), &maps, settings);
        assert!(found.contains(&(code, severity)), "{code}: {found:?}");
        assert!(!usual.contains(&(code, severity)), "{code}");
        met.insert(code);
    }
    let (eb, mb) = (e.as_bytes(), m.as_bytes());
    let latin: Vec<u8> = m.replacen("swell", "d\u{fc}nung", 1).chars().map(|c| c as u8).collect();
    let comma = m.replace('.', ",");
    let titled = format!("Recorded on a Tuesday\nby the keeper\n{m}");
    let wordy: String = m.lines().map(|line| format!("{line}\tnear\n")).collect();
    let matrix = bare(&m);
    let square: String = {
        let line = |row: usize| (0..70).map(|k| format!("{} ", (row * 7 + k * k) % 13)).collect::<String>() + "\n";
        (0..70).map(line).collect()
    };
    let angles: String = std::iter::once("label\tphi\ttheta\n".to_owned())
        .chain(e.lines().skip(1).map(|line| {
            let row: Vec<&str> = line.split('\t').collect();
            let [x, y, z] = [1, 2, 3].map(|k| row[k].parse::<f64>().unwrap());
            format!("{}\t{}\t{}\n", row[0], y.atan2(x).to_degrees(), x.hypot(y).atan2(z - 42.7).to_degrees())
        }))
        .collect();
    let moments = Settings {
        times: Some(Times { start: -2.0, step: 2.0, unit: Default::default() }),
        baseline: Some(Baseline { from: -2.0, to: 0.0 }),
        columns_are: Some(ColumnsAre::TimePoints),
        ..plain()
    };
    let sampling: &[u8] = b"{\"SamplingFrequency\": 256, \"note\": \"calm\"}";
    let several = format!(
        "{{\"labels\": {:?}, \"maps\": [{}], \"other\": [[1, 2], [3, 4]]}}",
        m.lines().skip(1).map(|line| line.split('\t').next().unwrap()).collect::<Vec<_>>(),
        matrix.lines().map(|line| format!("[{}]", line.replace('\t', ","))).collect::<Vec<_>>().join(",")
    );
    type Case<'a> = (&'a str, &'a str, Vec<(&'a str, &'a [u8])>, Settings);
    let of_files: Vec<Case> = vec![
        ("encoding-assumed", "warning", vec![("e", eb), ("m", &latin)], plain()),
        ("decimal-comma", "info", vec![("m", comma.as_bytes()), ("e", eb)], plain()),
        ("title-passed-over", "info", vec![("m", titled.as_bytes()), ("e", eb)], plain()),
        ("columns-passed-over", "info", vec![("m", wordy.as_bytes()), ("e", eb)], plain()),
        ("labels-by-order", "info", vec![("m", matrix.as_bytes()), ("e", eb)], plain()),
        ("orientation-assumed", "warning", vec![("m", square.as_bytes()), ("e", eb)], plain()),
        ("angles-read", "info", vec![("m", mb), ("e", angles.as_bytes())], plain()),
        ("file-unused", "warning", vec![("m", mb), ("e", eb), ("s", sampling)], plain()),
        ("part-unused", "info", vec![("m", several.as_bytes()), ("e", eb)], plain()),
        ("unmixing-suspected", "warning", vec![("unmixing.tsv", mb), ("e", eb)], plain()),
        ("unmixing-inverted", "info", vec![("m", mb), ("e", eb)], unmixing()),
        ("sphering-absent", "warning", vec![("m", mb), ("e", eb)], unmixing()),
        ("baseline-subtracted", "info", vec![("m", mb), ("e", eb)], moments),
    ];
    for (code, severity, given, settings) in of_files {
        let report = files(&given, settings).unwrap_or_else(|error| panic!("{code}: {error:?}"));
        assert!(report.notes.iter().all(|note| note.message.ends_with('.')));
        let found: Vec<_> = report.notes.iter().map(|note| (note.code.as_str(), note.severity)).collect();
        assert!(found.contains(&(code, severity)), "{code}: {found:?}");
        assert!(!usual.contains(&(code, severity)), "{code}");
        met.insert(code);
    }
    let (_, passed_over) = mat::read(&sample("passed_over.mat")).unwrap();
    met.extend(passed_over.iter().map(|note| note.code.as_str()));
    // What files declare beside the tables.
    let (table, read) = electrodes_and_maps(&e, &m);
    let bad = vec![Label::new("Cz")];
    let declared: [(&str, &str, Wishes); 3] = [
        ("unit-overruled", "warning", Wishes { declared_unit: Some(LengthUnit::Metre), ..Wishes::default() }),
        ("channels-bad", "info", Wishes { bad: bad.clone(), ..Wishes::default() }),
        ("unmixing-not-redone", "info", Wishes { components: true, exclude: bad, ..Wishes::default() }),
    ];
    for (code, severity, wishes) in declared {
        let notes = place(Some(&table), &read, &wishes).unwrap().notes;
        let found: Vec<Note> = notes.iter().map(Note::from).collect();
        let found: Vec<(&str, &str)> = found.iter().map(|note| (note.code.as_str(), note.severity)).collect();
        assert!(found.contains(&(code, severity)), "{code}: {found:?}");
        assert!(!usual.contains(&(code, severity)), "{code}");
        met.insert(code);
    }
    met.extend(of_several().into_iter().map(|note| note.code.as_str()));
    let known: BTreeSet<&str> =
        Code::ALL.iter().filter(|code| hint(**code).is_empty()).map(|code| code.as_str()).collect();
    assert_eq!(met, known, "every note of the list is brought about");
}

/// Whatever is typed, the outcome is a finite report or an error with a code; nothing panics.
#[test]
fn spoilt_tables_are_answered_or_refused() {
    let mut draw = Draw::from(2024);
    let pieces = [
        "\t",
        "\n",
        "\r",
        ";",
        ",",
        " ",
        "\"",
        "#",
        "-",
        "1e308",
        "1e-320",
        "-1e308",
        "0",
        "nan",
        "n/a",
        "é",
        "\u{feff}",
        "\0",
        "label",
        "Fp1",
        "99999999999999999999",
    ];
    let mut answered = 0;
    for round in 0..3000 {
        let spoil = |text: String, draw: &mut Draw| {
            let mut text: Vec<char> = text.chars().collect();
            for _ in 0..=(draw.between(0.0, 3.0) as usize) {
                let at = draw.between(0.0, text.len() as f64) as usize;
                match draw.between(0.0, 4.0) as usize {
                    0 => drop(text.drain(at..(at + 1 + draw.between(0.0, 8.0) as usize).min(text.len()))),
                    1 => text.truncate(at.max(1)),
                    _ => {
                        let piece = pieces[draw.between(0.0, pieces.len() as f64) as usize];
                        text.splice(at..at, piece.chars());
                    }
                }
            }
            text.into_iter().collect::<String>()
        };
        let e = if round % 3 == 0 { electrodes() } else { spoil(electrodes(), &mut draw) };
        let m = if round % 3 == 1 { maps() } else { spoil(maps(), &mut draw) };
        match run((round % 5 != 0).then_some(e.as_bytes()), m.as_bytes(), plain()) {
            Ok(report) => {
                answered += 1;
                for map in &report.maps {
                    if let MapReport::Fitted(map) = map {
                        let d = &map.dipole;
                        let numbers = [map.residual_variance, map.adjusted_rv, d.strength, d.depth_mm, d.eccentricity];
                        let all = numbers
                            .iter()
                            .chain(&map.measured)
                            .chain(&map.projected)
                            .chain(&map.residual)
                            .chain(&d.position_mm.0)
                            .chain(&d.direction.0);
                        assert!(all.into_iter().all(|v| v.is_finite()), "round {round}: {map:?}");
                        assert!((0.0..=1.0).contains(&map.residual_variance), "round {round}: {map:?}");
                    }
                }
            }
            Err(error) => assert!(!hint(error.finding().code).is_empty(), "{error:?}"),
        }
    }
    println!("{answered} of 3000 spoilt pairs were answered");
    assert!(answered > 100 && answered < 2900);
}

/// Values near the ends of what a number can hold are fitted as any others, or refused; never answered wrongly.
#[test]
fn very_large_and_very_small_values_are_fitted_or_refused() {
    let set = Electrodes::set(32);
    let values: Vec<f64> = Draw::from(3).noise(32);
    let fit = |scale: f64| {
        let scaled: Vec<f64> = values.iter().map(|v| v * scale).collect();
        run(None, set.maps(&[("m", &scaled)]).as_bytes(), plain()).map(|report| match &report.maps[0] {
            MapReport::Fitted(map) => (**map).clone(),
            MapReport::Failed { .. } => panic!("an only map that fails is an error"),
        })
    };
    let expected = fit(1.0).unwrap();
    for scale in [1e-300, 1e-150, 1e-90, 1e90, 1e150, 1e300] {
        let Ok(map) = fit(scale) else {
            assert!(!(1e-100..1e100).contains(&scale), "{scale:e} is refused");
            continue;
        };
        let d = &map.dipole;
        assert!(
            (map.residual_variance - expected.residual_variance).abs() < 1e-9,
            "{scale:e}: {}",
            map.residual_variance
        );
        assert!((d.direction - expected.dipole.direction).norm() < 1e-6, "{scale:e}: {d:?}");
        assert!((d.strength / scale / expected.dipole.strength - 1.0).abs() < 1e-6, "{scale:e}: {d:?}");
        assert!(map.measured.iter().chain(&map.projected).all(|v| v.is_finite()), "{scale:e}");
    }
}
