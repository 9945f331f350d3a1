//! Small tables as people have them, one for each format and trap: what a person sees in them is what is read, whatever the
//! files are called, in whatever order they come, and again when it is written in another form. `data/understood/`, made and
//! told by `reference/understood_samples.py`.
use inward_core::electrode::{Electrode, Label, standard_position};
use inward_core::map::Maps;
use inward_core::report::ErrorReport;
use inward_core::{Error, Report, Request, Settings, Study, Vec3, analyse};
use inward_tests::{tests_folder, understood};
use serde_json::{Map, Value, json};
use std::collections::{BTreeMap, BTreeSet};

/// Files that belong together, by name, and what is said about them.
struct Sample {
    what: String,
    files: Vec<(String, Vec<u8>)>,
    settings: Settings,
    told: Value,
}

struct Samples {
    watch: Value,
    all: Vec<Sample>,
}

fn samples() -> Samples {
    let folder = tests_folder().join("data/understood");
    let mut manifest: Value = serde_json::from_slice(&std::fs::read(folder.join("outcomes.json")).unwrap()).unwrap();
    let told = |told: Value| {
        let file = |name: &Value| {
            let name = name.as_str().unwrap();
            (name.to_owned(), std::fs::read(folder.join(name)).unwrap_or_else(|why| panic!("{name}: {why}")))
        };
        Sample {
            what: told["what"].as_str().unwrap().into(),
            files: told["files"].as_array().unwrap().iter().map(file).collect(),
            settings: told.get("settings").map_or_else(Settings::default, |given| {
                serde_json::from_value(given.clone()).unwrap_or_else(|why| panic!("{told}: {why}"))
            }),
            told,
        }
    };
    let Value::Array(list) = manifest["samples"].take() else { panic!("a list of samples") };
    Samples { watch: manifest["watch"].take(), all: list.into_iter().map(told).collect() }
}

fn run(files: &[(String, Vec<u8>)], settings: &Settings) -> Result<Report, Error> {
    let files = files.iter().map(|(name, content)| (name.as_str(), content.as_slice())).collect();
    analyse(&Request { files, settings: settings.clone(), ..Request::default() })
}

fn text(value: &Value) -> &str {
    value.as_str().unwrap_or_else(|| panic!("{value} is no text"))
}

fn list(value: &Value) -> &[Value] {
    value.as_array().unwrap_or_else(|| panic!("{value} is no list"))
}

fn numbers(value: &Value) -> Vec<f64> {
    list(value).iter().map(|number| number.as_f64().unwrap()).collect()
}

/// What differs between what is told and what was found.
struct Check<'a> {
    what: &'a str,
    faults: Vec<String>,
}

impl Check<'_> {
    fn same(&mut self, of: &str, found: impl Into<Value>, told: impl Into<Value>) {
        let (found, told) = (found.into(), told.into());
        if found != told {
            self.faults.push(format!("{}: {of}: {found} found, {told} told", self.what));
        }
    }

    fn close(&mut self, of: &str, found: f64, told: f64, tolerance: f64) {
        if (found - told).abs() > tolerance || found.is_nan() {
            self.faults.push(format!("{}: {of}: {found} found, {told} told", self.what));
        }
    }
}

fn outcome(sample: &Sample, watch: &Value, outcome: &Result<Report, Error>, names: &[(String, String)]) -> Vec<String> {
    let mut check = Check { what: &sample.what, faults: Vec::new() };
    // Names that stand for others are put back.
    let back = |value: Value| {
        let text = names.iter().fold(value.to_string(), |text, (name, given)| text.replace(given, name));
        serde_json::from_str::<Value>(&text).unwrap()
    };
    match (sample.told.get("error"), outcome) {
        (Some(told), Err(error)) => refusal(&mut check, told, &back(json!(ErrorReport::from(error)))),
        (None, Ok(report)) => answer(&mut check, watch, &sample.told["outcome"], &back(json!(report))),
        (Some(told), Ok(_)) => check.faults.push(format!("{}: answered, not refused as {told}", sample.what)),
        (None, Err(error)) => {
            let report = ErrorReport::from(error);
            check.faults.push(format!("{}: refused: {} {:?}", sample.what, report.message, report.place));
        }
    }
    check.faults
}

fn refusal(check: &mut Check, told: &Value, found: &Value) {
    check.same("code", found["code"].clone(), told["code"].clone());
    for key in ["input", "file", "line", "column", "byte", "label", "map"] {
        if let Some(told) = told.get(key) {
            check.same(key, found["where"][key].clone(), told.clone());
        }
    }
    let message = text(&found["message"]);
    for piece in told.get("says").map(list).unwrap_or_default() {
        check.same(&format!("{piece} in {message:?}"), message.contains(text(piece)), true);
    }
    check.same("a next step", text(&found["hint"]).ends_with('.'), true);
}

fn answer(check: &mut Check, watch: &Value, told: &Value, report: &Value) {
    let understood = &report["understood"];
    let facts: Vec<Value> = list(&understood["files"])
        .iter()
        .map(|file| {
            let kept = ["name", "part", "role", "format", "encoding", "rows", "columns", "header", "passed_over"];
            Value::Object(kept.iter().map(|key| ((*key).to_owned(), file[key].clone())).collect())
        })
        .collect();
    for (index, told) in list(&told["files"]).iter().enumerate() {
        let named = |fact: &&Value| fact["name"] == told["name"] && fact["part"] == told["part"];
        let found = facts.iter().find(named).unwrap_or(&Value::Null);
        check.same(&format!("file {index}"), found.clone(), told.clone());
    }
    check.same("number of files", facts.len(), list(&told["files"]).len());

    let mut choices = Map::new();
    for choice in list(&understood["choices"]) {
        let setting = text(&choice["setting"]);
        let key = match (&choice["path"][0], &choice["file"]) {
            (Value::String(first), Value::String(file)) if first == "files" => format!("{file}: {setting}"),
            _ => setting.to_owned(),
        };
        let twice = choices.insert(key, json!([choice["value"], choice["from"]]));
        check.same(&format!("{setting} twice"), twice.is_some(), false);
        check.same(setting, text(&choice["sentence"]).ends_with('.'), true);
    }
    let told_choices = told["choices"].as_object().unwrap();
    for key in choices.keys().chain(told_choices.keys()).collect::<BTreeSet<_>>() {
        let of = |map: &Map<String, Value>| map.get(key).cloned().unwrap_or_default();
        check.same(key, of(&choices), of(told_choices));
    }

    let codes: BTreeSet<&str> = list(&report["notes"]).iter().map(|note| text(&note["code"])).collect();
    let codes_told: BTreeSet<&str> = list(&told["notes"]).iter().map(text).collect();
    check.same("notes", json!(codes), json!(codes_told));

    let labels = |value: &Value| list(value).iter().map(|one| text(one).to_owned()).collect::<Vec<String>>();
    let watched = labels(&watch["labels"]);
    let read = told.get("electrodes_read").map_or_else(|| watched.clone(), labels);
    let shown = |label: &String| told["names"].get(label).map_or(label.as_str(), text).to_owned();
    let electrodes = list(&report["electrodes"]);
    let found: Vec<&str> = electrodes.iter().map(|electrode| text(&electrode["label"])).collect();
    check.same("electrodes", json!(found), json!(read.iter().map(shown).collect::<Vec<_>>()));
    let left_out: Vec<&str> =
        electrodes.iter().filter(|e| e["used"] == json!(false)).map(|electrode| text(&electrode["label"])).collect();
    check.same(
        "left out",
        json!(left_out.iter().collect::<BTreeSet<_>>()),
        json!(told.get("left_out").map(labels).unwrap_or_default().iter().collect::<BTreeSet<_>>()),
    );
    let mut became = json!({ "matched": read.len(), "renamed": [], "without_value": [], "without_position": [],
                             "not_scalp": [], "interpolated": [], "reference": null });
    let more = told.get("labels").and_then(Value::as_object).cloned().unwrap_or_default();
    became.as_object_mut().unwrap().extend(more);
    check.same("labels", understood["labels"].clone(), became);
    if let Some(told) = told.get("times") {
        check.same("times", json!(numbers(&understood["times"]["times"])), json!(numbers(&told["times"])));
        check.same("unit of times", understood["times"]["unit"].clone(), told["unit"].clone());
    } else {
        check.same("times", understood["times"].clone(), Value::Null);
    }
    if found.len() != read.len() {
        return;
    }

    // In canonical axes, from the first electrode: the head's centre is fitted.
    let vector = |value: &Value| Vec3(std::array::from_fn(|axis| value[axis].as_f64().unwrap()));
    let turned = |rows: &Value, p: Vec3| Vec3([0, 1, 2].map(|axis| vector(&rows[axis]).dot(p)));
    let watched_at = |label: &String| watched.iter().position(|known| known == label).unwrap();
    let place = |label: &String| match text(&told["positions"]) {
        "standard" => standard_position(&Label::new(&shown(label))).unwrap() * 88.0,
        kind => {
            let measured = vector(&watch["positions_mm"][watched_at(label)]);
            let moved = told.get("moved").map_or(measured, |rows| turned(rows, measured));
            if kind == "directions" { moved * (88.0 / moved.norm()) } else { moved }
        }
    };
    let tolerance = told.get("tolerance_mm").map_or(1e-9, |number| number.as_f64().unwrap());
    for (electrode, label) in electrodes.iter().zip(&read) {
        let from_first = vector(&electrode["position_mm"]) - vector(&electrodes[0]["position_mm"]);
        let off = turned(&report["head"]["axes"], from_first) - (place(label) - place(&read[0]));
        check.close(&format!("position of {label}"), off.norm(), 0.0, tolerance);
    }

    let maps = list(&report["maps"]);
    let names = || list(&watch["names"]).iter().map(|name| json!([name, name])).collect();
    let maps_told: Vec<Value> = told.get("maps").map_or_else(names, |maps| list(maps).to_vec());
    check.same("number of maps", maps.len(), maps_told.len());
    let tolerance = told.get("tolerance").map_or(1e-9, |number| number.as_f64().unwrap());
    for (map, told) in maps.iter().zip(&maps_told) {
        check.same("name of a map", map["name"].clone(), told[0].clone());
        if let Value::Object(refused) = &told[1] {
            check.same("error of a map", map["error"]["code"].clone(), refused["code"].clone());
            continue;
        }
        if map.get("error").is_some() {
            check.same(text(&told[0]), map["error"]["code"].clone(), Value::Null);
            continue;
        }
        let whole = match &told[1] {
            Value::String(name) => {
                let all = numbers(&watch["maps"][name]);
                read.iter().map(|label| all[watched_at(label)]).collect()
            }
            values => numbers(values),
        };
        let used: Vec<f64> =
            whole.into_iter().zip(&found).filter(|(_, l)| !left_out.contains(l)).map(|(v, _)| v).collect();
        let mean = used.iter().sum::<f64>() / used.len() as f64;
        let measured = numbers(&map["measured"]);
        check.same("number of values", measured.len(), used.len());
        let off = measured.iter().zip(&used).map(|(found, told)| (found - (told - mean)).abs()).fold(0.0, f64::max);
        check.close(&format!("values of {}", told[0]), off, 0.0, tolerance);
    }
}

#[test]
fn what_a_person_sees_in_a_table_is_what_is_read() {
    let samples = samples();
    let faults: Vec<String> = samples
        .all
        .iter()
        .flat_map(|sample| outcome(sample, &samples.watch, &run(&sample.files, &sample.settings), &[]))
        .collect();
    assert!(faults.is_empty(), "{} faults\n{}", faults.len(), faults.join("\n"));
    // Whoever adds a file says what is in it.
    let told: BTreeSet<&str> =
        samples.all.iter().flat_map(|sample| &sample.files).map(|(name, _)| name.as_str()).collect();
    for file in std::fs::read_dir(tests_folder().join("data/understood")).unwrap() {
        let name = file.unwrap().file_name().into_string().unwrap();
        assert!(name == "outcomes.json" || told.contains(name.as_str()), "{name} is in no sample");
    }
}

#[test]
fn names_and_order_of_files_do_not_matter() {
    let samples = samples();
    let mut faults = Vec::new();
    for sample in &samples.all {
        // Several tables of one kind are refused by the last.
        let several = sample.told["error"]["code"] == json!("files-several");
        let names: Vec<(String, String)> =
            (0..).zip(&sample.files).map(|(n, (name, _))| (name.clone(), format!("file-{n}.unheard"))).collect();
        let mut files: Vec<(String, Vec<u8>)> = names
            .iter()
            .zip(&sample.files)
            .map(|((_, given), (_, content))| (given.clone(), content.clone()))
            .collect();
        let mut settings = sample.settings.clone();
        // Those of a file within an archive too.
        let renamed =
            |name: &String| names.iter().fold(name.clone(), |name, (known, given)| name.replace(known, given));
        settings.files = sample.settings.files.iter().map(|(name, wish)| (renamed(name), wish.clone())).collect();
        for turn in 0..files.len().min(if several { 1 } else { 3 }) {
            if turn > 0 {
                files.rotate_left(1);
            }
            let found = outcome(sample, &samples.watch, &run(&files, &settings), &names);
            faults.extend(found.into_iter().map(|fault| format!("turn {turn}: {fault}")));
        }
    }
    assert!(faults.is_empty(), "{} faults\n{}", faults.len(), faults.join("\n"));
}

/// A table in one of several forms, with every digit.
/// Names that leave are others than those that were given.
#[test]
fn a_study_under_other_names_is_the_one_of_files_that_had_them() {
    let mut count = 0;
    for sample in samples().all {
        let names: Vec<(String, String)> =
            sample.files.iter().enumerate().map(|(at, (name, _))| (name.clone(), format!("file {at}"))).collect();
        let open = |files: &[(String, Vec<u8>)], settings: &Settings| {
            let files = files.iter().map(|(name, content)| (name.as_str(), content.as_slice())).collect();
            Study::open(&Request { files, settings: settings.clone(), ..Request::default() })
        };
        let Ok(study) = open(&sample.files, &sample.settings) else { continue };
        let renamed = study.renamed(&names).unwrap();
        let files: Vec<(String, Vec<u8>)> =
            sample.files.iter().zip(&names).map(|((_, content), (_, to))| (to.clone(), content.clone())).collect();
        let other = |name: &String| names.iter().fold(name.clone(), |name, (known, given)| name.replace(known, given));
        let mut settings = sample.settings.clone();
        settings.files = settings.files.into_iter().map(|(name, wishes)| (other(&name), wishes)).collect();
        let direct = open(&files, &settings).unwrap();
        let told = |study: &Study| json!([study.preamble(), study.fit(0).unwrap()]);
        assert_eq!(told(&renamed), told(&direct), "{}", sample.what);
        let text = told(&renamed).to_string();
        for (name, _) in &names {
            assert!(!text.contains(name.as_str()), "{name} is told of {}", sample.what);
        }
        count += 1;
    }
    assert!(count > 100, "{count} samples that can be read");
}

fn written(form: usize, head: &[String], rows: &[(String, Vec<f64>)]) -> String {
    let number = |value: f64| match (value.is_nan(), form) {
        (true, 3) => "null".into(),
        (true, _) => "n/a".into(),
        (_, 2) => value.to_string().replace('.', ","),
        _ => value.to_string(),
    };
    let quoted = |text: &str| format!("\"{}\"", text.replace('"', "\"\""));
    let row = |words: &[String], mark: &str| words.join(mark) + "\n";
    match form {
        3 => {
            let record = |(label, values): &(String, Vec<f64>)| {
                let fields: Vec<String> = head[1..]
                    .iter()
                    .zip(values)
                    .map(|(name, &value)| format!(",{}:{}", json!(name), number(value)))
                    .collect();
                format!("{{{}:{}{}}}", json!(head[0]), json!(label), fields.concat())
            };
            format!("[{}]", rows.iter().map(record).collect::<Vec<_>>().join(",\n"))
        }
        _ => {
            let mark = [",", " ", ";"].get(form).copied().unwrap_or("\t");
            let line = |(label, values): &(String, Vec<f64>)| {
                let words: Vec<String> =
                    std::iter::once(quoted(label)).chain(values.iter().map(|&value| number(value))).collect();
                row(&words, mark)
            };
            let names: Vec<String> = head.iter().map(|name| quoted(name)).collect();
            row(&names, mark) + &rows.iter().map(line).collect::<String>()
        }
    }
}

fn electrode_table(form: usize, electrodes: &[Electrode]) -> String {
    let placed = electrodes.iter().any(|electrode| electrode.position.is_some());
    let row = |electrode: &Electrode| {
        let position = electrode.position.map_or([f64::NAN; 3], |position| position.0);
        (electrode.label.to_string(), if placed { position.to_vec() } else { Vec::new() })
    };
    let head = ["label", "x", "y", "z"].map(String::from);
    written(form, if placed { &head } else { &head[..1] }, &electrodes.iter().map(row).collect::<Vec<_>>())
}

fn map_table(form: usize, maps: &Maps) -> String {
    let head: Vec<String> = std::iter::once("label".to_owned()).chain(maps.names.iter().cloned()).collect();
    let rows: Vec<(String, Vec<f64>)> =
        maps.labels.iter().zip(maps.values.rows()).map(|(label, row)| (label.to_string(), row.to_vec())).collect();
    written(form, &head, &rows)
}

/// Everything of what was read that a table can hold, to the bit.
fn content(electrodes: Option<&[Electrode]>, maps: &Maps) -> Value {
    let bits = |value: &f64| if value.is_nan() { Value::Null } else { json!(value.to_bits()) };
    let electrode =
        |electrode: &Electrode| json!([electrode.label.as_str(), electrode.position.map(|p| p.0.map(f64::to_bits))]);
    json!({
        "electrodes": electrodes.map(|electrodes| electrodes.iter().map(electrode).collect::<Vec<_>>()),
        "labels": maps.labels.iter().map(Label::as_str).collect::<Vec<_>>(),
        "names": maps.names,
        "values": maps.values.iter().map(bits).collect::<Vec<_>>(),
    })
}

#[test]
fn what_was_read_and_is_written_in_another_form_reads_the_same() {
    let mut again = BTreeMap::<usize, usize>::new();
    for sample in &samples().all {
        let files: Vec<(&str, &[u8])> =
            sample.files.iter().map(|(name, content)| (name.as_str(), content.as_slice())).collect();
        let Ok(first) = understood(&files, &sample.settings.wishes()) else { continue };
        let expected = content(first.electrodes.as_deref(), &first.maps);
        for form in 0..5 {
            let tables = [
                first.electrodes.as_deref().map(|electrodes| electrode_table(form, electrodes)),
                Some(map_table(form, &first.maps)),
            ];
            let files: Vec<(&str, &[u8])> = ["first", "second"]
                .into_iter()
                .zip(tables.iter().flatten())
                .map(|(name, text)| (name, text.as_bytes()))
                .collect();
            let second = understood(&files, &Default::default())
                .unwrap_or_else(|error| panic!("{}, form {form}: {error:?}\n{tables:?}", sample.what));
            assert_eq!(
                content(second.electrodes.as_deref(), &second.maps),
                expected,
                "{}, form {form}: {tables:?}",
                sample.what
            );
            *again.entry(form).or_default() += 1;
        }
    }
    assert!(again.values().all(|count| *count > 140), "{again:?}");
}
