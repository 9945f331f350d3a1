//! Whatever is wrong is said with its file, its place, what was found and what to do; and whatever things are called, they
//! stay text, of bounded length where a sentence mentions them.
use inward_core::finding::{Place, Value as Word};
use inward_core::report::{ErrorReport, Note};
use inward_core::understand::{ColumnName, ColumnWishes, FileWishes, Role};
use inward_core::{MapReport, Report, Request, Settings, analyse};
use inward_tests::{Electrodes, archive, data, example, level5, tests_folder};
use serde_json::{Value, json};
use std::collections::{BTreeMap, BTreeSet};
use std::path::Path;

/// Longest sentence: a dozen names of sixty letters and what is said about them.
const LONGEST: usize = 1200;

/// An error in words, and as it was found.
#[derive(Debug)]
struct Refusal {
    code: &'static str,
    message: String,
    hint: String,
    place: Place,
    values: Vec<(&'static str, Word)>,
}

impl Refusal {
    fn file(&self) -> &str {
        self.place.file.as_deref().unwrap_or_default()
    }
}

fn run(files: &[(&str, &[u8])], settings: &Settings) -> Result<Report, Box<Refusal>> {
    let request = Request { files: files.to_vec(), settings: settings.clone(), ..Request::default() };
    analyse(&request).map_err(|error| {
        let ErrorReport { code, message, place, hint } = (&error).into();
        let values = error.finding().values.clone();
        Box::new(Refusal { code: code.as_str(), message, hint, place: place.unwrap_or_default(), values })
    })
}

fn name(map: &MapReport) -> &str {
    match map {
        MapReport::Fitted(map) => &map.name,
        MapReport::Failed { name, .. } => name,
    }
}

/// Every file of a folder and of those in it, by its path there.
fn files_in(folder: &Path, into: &mut BTreeMap<String, Vec<u8>>) {
    for entry in std::fs::read_dir(folder).into_iter().flatten() {
        let path = entry.unwrap().path();
        if path.is_dir() {
            files_in(&path, into);
        } else {
            let name = path.strip_prefix(tests_folder()).unwrap().to_string_lossy().into_owned();
            into.insert(name, std::fs::read(&path).unwrap());
        }
    }
}

/// What the place of an error must tell: any one of each list.
fn places(code: &str) -> &'static [&'static [&'static str]] {
    match code {
        "input-encoding" | "input-truncated" | "input-damaged" | "input-zip" => &[&["byte"]],
        "array-size" => &[&["byte"]],
        "table-ragged" | "table-large" | "table-columns" => &[&["line"]],
        "json-syntax" | "json-content" => &[&["line"], &["byte"]],
        "number-expected" => &[&["line"], &["column"]],
        "number-range" => &[&["line", "byte"], &["column", "byte"]],
        "label-duplicate" | "label-ambiguous" | "label-bipolar" | "reference-mixed" => &[&["line"], &["label"]],
        "electrode-off" => &[&["line"], &["label"]],
        "map-incomplete" => &[&["map"], &["label"]],
        "map-constant" => &[&["map"]],
        _ => &[],
    }
}

/// The beginning of a name that a sentence mentions.
fn beginning(text: &str) -> String {
    text.chars().take(40).collect()
}

fn said(error: &Refusal) -> Vec<String> {
    let mut faults = Vec::new();
    let place = json!(error.place);
    for keys in places(error.code) {
        if keys.iter().all(|key| place[key].is_null()) {
            faults.push(format!("no {keys:?}"));
        }
    }
    // The sentence says where too: by line, byte or label.
    let told = |key: &str| error.message.contains(&place[key].to_string());
    let told_by = ["line", "byte"].into_iter().filter(|key| !place[key].is_null()).collect::<Vec<_>>();
    if !told_by.is_empty() && place["label"].is_null() && !told_by.iter().any(|key| told(key)) {
        faults.push(format!("{told_by:?} are not in the sentence"));
    }
    for (name, value) in &error.values {
        if let (Word::Text(text), "found" | "label" | "map" | "column" | "other") = (value, *name)
            && !error.message.contains(&beginning(text))
        {
            faults.push(format!("{name} {text:?} is not in the sentence"));
        }
    }
    if !(error.hint.ends_with('.') && error.hint.len() > 15) {
        faults.push("no next step".into());
    }
    if error.message.chars().count() > LONGEST {
        faults.push(format!("{} letters", error.message.chars().count()));
    }
    faults
}

#[test]
fn every_refusal_names_file_place_what_was_found_and_the_next_step() {
    let mut files = BTreeMap::new();
    for folder in ["data/samples", "data/understood", "data/finds", "fuzz/corpus"] {
        files_in(&tests_folder().join(folder), &mut files);
    }
    let electrodes = example("watch_electrodes.tsv");
    let alone = |name: &String| vec![name.clone()];
    let beside = |name: &String| vec!["electrodes.tsv".to_owned(), name.clone()];
    let mut all: Vec<(Vec<String>, Settings)> = files.keys().map(|name| (alone(name), Settings::default())).collect();
    all.extend(files.keys().map(|name| (beside(name), Settings::default())));
    files.insert("electrodes.tsv".into(), electrodes.into());
    // Those that are told to be refused, with their settings.
    let told: Value = serde_json::from_str(&data("understood/outcomes.json")).unwrap();
    for sample in told["samples"].as_array().unwrap().iter().filter(|sample| !sample["error"].is_null()) {
        let given = sample["files"]
            .as_array()
            .unwrap()
            .iter()
            .map(|name| format!("data/understood/{}", name.as_str().unwrap()));
        let settings = sample.get("settings").filter(|settings| settings.get("files").is_none()).cloned();
        all.push((given.collect(), serde_json::from_value(settings.unwrap_or_else(|| json!({}))).unwrap()));
    }
    let mut faults = Vec::new();
    let mut refused: BTreeMap<&str, usize> = BTreeMap::new();
    for (names, settings) in all {
        let given: Vec<(&str, &[u8])> = names.iter().map(|name| (name.as_str(), files[name].as_slice())).collect();
        let Err(error) = run(&given, &settings) else { continue };
        *refused.entry(error.code).or_default() += 1;
        let mut own = said(&error);
        let file = error.file();
        if !names.iter().any(|name| file == *name || file.starts_with(&format!("{name}/"))) {
            own.push(format!("file {file:?}"));
        }
        faults.extend(own.iter().map(|fault| format!("{} {names:?}: {fault}: {}", error.code, error.message)));
    }
    println!("{refused:?}");
    let total: usize = refused.values().sum();
    assert!(faults.is_empty(), "{} of {total}\n{}", faults.len(), faults[..faults.len().min(60)].join("\n"));
    assert!(total > 500 && refused.len() > 30, "{total} refusals, {refused:?}");
}

/// What may stand where a name is expected.
fn names() -> Vec<String> {
    vec![
        "<script>alert(1)</script>".into(),
        "<img src=x onerror=alert(1)>\"'`".into(),
        "\u{202e}gnitirw denrut\u{2066}\u{200f}".into(),
        "L".repeat(10_000),
        "ß日\u{301}".repeat(3_000),
        "nul\0inside".into(),
        "${7*7} {{x}} %s %n\\".into(),
        "../../etc/passwd".into(),
        "a\u{7}b\u{1b}[31mc".into(),
        "__proto__".into(),
        "constructor".into(),
    ]
}

/// Every sentence of a report.
fn sentences(report: &Report) -> impl Iterator<Item = &str> {
    let notes = report.notes.iter().map(|note: &Note| note.message.as_str());
    let choices = report.understood.choices.iter().flat_map(|choice| {
        [choice.sentence.as_str()].into_iter().chain(choice.options.iter().map(|option| option.label.as_str()))
    });
    let maps = report.maps.iter().filter_map(|map| match map {
        MapReport::Failed { error, .. } => Some(error.message.as_str()),
        MapReport::Fitted(_) => None,
    });
    notes.chain(choices).chain(maps)
}

fn bounded(outcome: &Result<Report, Box<Refusal>>, context: &str) {
    let long = |text: &&str| text.chars().count() > LONGEST;
    match outcome {
        Ok(report) => {
            if let Some(sentence) = sentences(report).find(long) {
                panic!("{context}: {}…, {} letters", beginning(sentence), sentence.chars().count());
            }
            let text = serde_json::to_string(report).unwrap();
            serde_json::from_str::<Value>(&text).unwrap();
        }
        Err(error) => {
            assert!(error.message.chars().count() <= LONGEST, "{context}: {} letters", error.message.len());
            assert!(error.message.ends_with('.') && error.hint.ends_with('.'), "{context}: {error:?}");
        }
    }
}

/// Tables in quotes, so that names may hold anything.
fn table(head: &[&str], rows: impl IntoIterator<Item = (String, Vec<f64>)>) -> String {
    let quoted = |text: &str| format!("\"{}\"", text.replace('"', "\"\""));
    let head: Vec<String> = head.iter().map(|name| quoted(name)).collect();
    let row = |(label, values): (String, Vec<f64>)| {
        format!("{}{}\n", quoted(&label), values.iter().map(|v| format!(",{v}")).collect::<String>())
    };
    format!("{}\n{}", head.join(","), rows.into_iter().map(row).collect::<String>())
}

#[test]
fn hostile_names_stay_text_in_reports_and_are_cut_in_sentences() {
    let set = Electrodes::set(19);
    let values = |k: usize| vec![(k as f64 * 0.7).sin() + 0.1, (k as f64 * 1.3).cos()];
    let place = |k: usize| set.directions[k].0.map(|x| x * 90.0).to_vec();
    let rows = |label: &str, of: &dyn Fn(usize) -> Vec<f64>| {
        (0..19).map(|k| (if k == 7 { label.to_owned() } else { set.labels[k].clone() }, of(k))).collect::<Vec<_>>()
    };
    let head = ["label", "x", "y", "z"];
    for name in &names() {
        let context = beginning(name);
        let electrodes = table(&head, rows("T7", &place));
        let maps = table(&["label", "lamp", "fog"], rows("T7", &values));
        let report = |files: &[(&str, &str)], settings: &Settings, what: &str| {
            let files: Vec<(&str, &[u8])> = files.iter().map(|(name, text)| (*name, text.as_bytes())).collect();
            let outcome = run(&files, settings);
            bounded(&outcome, &format!("{what} {context}"));
            outcome
        };
        let good = |files: &[(&str, &str)], what: &str| {
            report(files, &Settings::default(), what)
                .unwrap_or_else(|error| panic!("{what} {context}: {}", error.message))
        };

        // A label of both tables, of the maps alone, of the electrodes alone.
        let own = (table(&head, rows(name, &place)), table(&["label", "lamp", "fog"], rows(name, &values)));
        let both = good(&[("e", &own.0), ("m", &own.1)], "label");
        assert_eq!(both.electrodes[7].label, *name, "{context}");
        let alone = good(&[("e", &electrodes), ("m", &own.1)], "label of the maps");
        assert_eq!(alone.understood.labels.without_position, [name.as_str()], "{context}");
        let alone = good(&[("e", &own.0), ("m", &maps)], "label of the electrodes");
        assert_eq!(alone.understood.labels.without_value, [name.as_str()], "{context}");
        // Twice.
        let twice = table(
            &["label", "lamp"],
            rows(name, &values)
                .into_iter()
                .chain([(name.clone(), vec![1.0, 2.0])])
                .map(|(label, v)| (label, v[..1].to_vec())),
        );
        let error = report(&[("e", &own.0), ("m", &twice)], &Settings::default(), "label twice").unwrap_err();
        assert_eq!((error.code, error.place.label.as_deref()), ("label-duplicate", Some(name.as_str())));

        // The name of a map, good, flat, and with a wrong number.
        let named = good(&[("e", &electrodes), ("m", &table(&["label", name, "fog"], rows("T7", &values)))], "map");
        let found: Vec<&str> = named.maps.iter().map(self::name).collect();
        assert_eq!(found, [name.as_str(), "fog"], "{context}");
        let flat = good(
            &[("e", &electrodes), ("m", &table(&["label", name, "fog"], rows("T7", &|k| vec![1.0, values(k)[1]])))],
            "flat map",
        );
        assert!(
            matches!(&flat.maps[0], MapReport::Failed { error, .. } if error.place.as_ref().unwrap().map.as_deref() == Some(name))
        );
        let wrong = table(&["label", name, "fog"], rows("T7", &values)).replacen(",0.1,", ",1O,", 1);
        let error =
            report(&[("e", &electrodes), ("m", &wrong)], &Settings::default(), "map with a letter").unwrap_err();
        assert_eq!((error.code, error.place.map.as_deref()), ("number-expected", Some(name.as_str())));

        // The name of a column: passed over, and wished for in vain.
        let more =
            electrodes
                .lines()
                .enumerate()
                .map(|(k, line)| {
                    if k == 0 { format!("{line},\"{}\"\n", name.replace('"', "\"\"")) } else { format!("{line},cup\n") }
                })
                .collect::<String>();
        let passed = good(&[("e", &more), ("m", &maps)], "column");
        let options =
            passed.understood.choices.iter().find(|choice| choice.setting == "columns.x").unwrap().options.len();
        assert_eq!(options, 5);
        let wish = ColumnWishes { x: Some(ColumnName::Name(name.clone())), ..ColumnWishes::default() };
        let settings = Settings { columns: wish, ..Settings::default() };
        assert!(report(&[("e", &electrodes), ("m", &maps)], &settings, "column wished for").is_err());
        report(&[("e", &more), ("m", &maps)], &settings, "column of words").unwrap_err();

        // A word where a number should be.
        let word = maps.replacen(",0.1,", &format!(",\"{}\",", name.replace('"', "\"\"")), 1);
        let error = report(&[("e", &electrodes), ("m", &word)], &Settings::default(), "word").unwrap_err();
        assert_eq!(error.code, "number-expected");
        assert!(error.message.contains(&beginning(name)), "{context}: {}", error.message);

        // The name of a file, alone, twice, wrong, within an archive.
        let named = good(&[(name, &electrodes), ("m", &maps)], "file");
        assert!(
            named.inputs.iter().any(|input| input.name == *name)
                && named.understood.files.iter().any(|file| file.name == *name)
        );
        let error = report(&[(name, &electrodes), (name, &maps)], &Settings::default(), "file twice").unwrap_err();
        assert_eq!(error.code, "settings-unknown");
        let error = report(&[("e", &electrodes), (name, &word)], &Settings::default(), "wrong file").unwrap_err();
        assert_eq!(error.file(), name);
        let wishes = FileWishes { role: Some(Role::Unused), ..FileWishes::default() };
        let settings = Settings { files: [(name.clone(), wishes)].into(), ..Settings::default() };
        let unused = report(&[("e", &electrodes), ("m", &maps), (name, &word)], &settings, "file not needed").unwrap();
        assert!(unused.understood.files.iter().any(|file| file.name == *name && file.role == Role::Unused));
        let packed =
            archive(&[(format!("{name}.tsv"), maps.clone().into()), ("e.tsv".into(), electrodes.clone().into())], true);
        let outcome = run(&[("a.zip", &packed)], &Settings::default());
        bounded(&outcome, &format!("archive {context}"));
        // A path whose last part begins with a dot is a hidden file.
        assert!(outcome.is_ok() || name.ends_with('\\'), "{context}: {:?}", outcome.err());

        // Names of variables and keys, and labels of lists.
        let labels: Vec<&String> = (0..19).map(|k| if k == 7 { name } else { &set.labels[k] }).collect();
        let matrix: Vec<Vec<f64>> = (0..19).map(values).collect();
        let json =
            json!({ "labels": labels, name.as_str(): matrix, "positions": (0..19).map(place).collect::<Vec<_>>() })
                .to_string();
        let named = good(&[("j", &json)], "key");
        assert_eq!(named.electrodes[7].label, *name, "{context}");
        assert!(named.understood.files.iter().any(|part| part.part.as_deref() == Some(name)), "{context}");
        let records =
            json!((0..19).map(|k| json!({ "label": labels[k], name.as_str(): values(k)[0] })).collect::<Vec<_>>())
                .to_string();
        assert_eq!(
            good(&[("e", &own.0), ("j", &records)], "key of records").maps.iter().map(self::name).next(),
            Some(name.as_str()),
            "{context}"
        );
        if name.is_ascii() && !name.contains('\0') {
            let column: Vec<u8> = matrix.iter().flat_map(|row| row[0].to_le_bytes()).collect();
            let file = level5::file(&[level5::matrix(6, 19, 1, name, &level5::element(9, &column))]);
            let outcome = run(&[("e", electrodes.as_bytes()), ("v", &file)], &Settings::default());
            bounded(&outcome, &format!("variable {context}"));
            assert!(outcome.is_ok(), "{context}: {:?}", outcome.err());
        }

        // What the user writes.
        let words = vec![name.clone(); 40];
        let settings = Settings { exclude: words.clone(), interpolated: words, ..Settings::default() };
        let left = report(&[("e", &electrodes), ("m", &maps)], &settings, "labels to leave out").unwrap();
        assert!(left.notes.iter().any(|note| note.code.as_str() == "exclude-unmatched"));
    }
}

/// Headers without end, nesting without end, bytes of every kind.
#[test]
fn hostile_files_are_refused_in_a_sentence() {
    let mut all: Vec<(&str, Vec<u8>)> = vec![
        ("a header without end", format!("label{}\nFp1\t1\n", "\tx".repeat(1 << 20)).into()),
        ("a line without end", vec![b'x'; 4 << 20]),
        ("a quote without end", [b"label,x\n\"".to_vec(), vec![b'y'; 1 << 20]].concat()),
        ("nests of lists", "[".repeat(1 << 20).into()),
        ("nests of objects", "{\"a\":".repeat(1 << 18).into()),
        ("nuls", vec![0; 4096]),
        ("nuls in a table", b"label\tx\nFp1\t1\0\nFp2\t\0\n".to_vec()),
        ("every byte", (0..=255).cycle().take(4096).collect()),
        ("marks alone", b"\xff\xfe".to_vec()),
        ("quotes alone", b"\"\"\"\"\"\"\"\n".to_vec()),
        ("commas alone", b",,,,,,\n,,,,\n".to_vec()),
        ("breaks alone", b"\r\n\r\r\n\n".to_vec()),
        ("remarks alone", b"# nothing\n% to see\n".to_vec()),
        ("a minus", b"-".to_vec()),
        ("numbers out of range", b"Fp1\t1e999999999999\nFp2\t-1e-999999\n".to_vec()),
        ("digits without end", format!("Fp1\t{}\n", "9".repeat(100_000)).into()),
    ];
    for (at, code) in [(1, "array-size"), (2, "array-size")] {
        let shape = if at == 1 { "(1000000000, 3)" } else { "(18446744073709551616, 2)" };
        let header = format!("{{'descr': '<f8', 'fortran_order': False, 'shape': {shape}, }}\n");
        let file = [b"\x93NUMPY\x01\x00", &(header.len() as u16).to_le_bytes()[..], header.as_bytes()].concat();
        let error = run(&[("rows.npy", &file)], &Settings::default()).unwrap_err();
        assert_eq!(error.code, code);
        all.push(("a billion rows", file));
    }
    let mut codes = BTreeSet::new();
    for (name, content) in all {
        let error = run(&[(name, &content)], &Settings::default()).expect_err(name);
        let faults = said(&error);
        assert!(faults.is_empty(), "{name}: {} {faults:?}", error.message);
        assert_eq!(error.file(), name);
        codes.insert(error.code);
    }
    println!("{codes:?}");
}
