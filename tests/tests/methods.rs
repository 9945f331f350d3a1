//! Methods and records, the words that leave for papers and files: they tell what was done and nothing else, with the numbers
//! of the report, and advise nothing.
use inward_core::report::{Assessment, Done, MapReport, Methods, Record};
use inward_core::{Request, Settings, Study, Vec3};
use inward_tests::{Draw, Electrodes, Mixture, Node, PlainSeries, example, tests_folder};
use serde_json::{Map, Value, json};

fn open(request: &Request, settings: &Value) -> Study {
    let settings: Settings = serde_json::from_value(settings.clone()).unwrap();
    let study = Study::open(&Request { settings, build: Some("0123abcd"), ..request.clone() });
    study.unwrap_or_else(|error| panic!("{error:?}"))
}

fn watch(settings: Value) -> Study {
    let (electrodes, maps) = (example("watch_electrodes.tsv"), example("watch_maps.tsv"));
    let request = Request { electrodes: Some(electrodes.as_bytes()), maps: maps.as_bytes(), ..Request::default() };
    open(&request, &settings)
}

/// The watch's maps as those of a table with these names.
fn named(names: [&str; 6]) -> String {
    let maps = example("watch_maps.tsv");
    let (_, rest) = maps.split_once('\n').unwrap();
    format!("label\t{}\n{rest}", names.join("\t"))
}

fn done(done: Value) -> Done {
    serde_json::from_value(done).unwrap()
}

/// Each thing that can be done beyond the fits, with words that stand for it alone.
const ALONE: [(&str, &[&str]); 10] = [
    ("region", &["ellipsoid", "Moran"]),
    ("populations", &["independent noise, one, two, five, twenty and a hundred dipoles"]),
    ("verdict", &["lone electrode", "not dipolar"]),
    ("alternatives", &["parametric bootstrap", "Levenberg–Marquardt", "two free dipoles"]),
    ("influence", &["left out in turn"]),
    ("what_if", &["Maps were fitted again with", "brain-to-skull ratios of 15 to 80"]),
    ("course", &["Global field power"]),
    ("shares", &["near-dipolar share"]),
    ("groups", &["Ward", "silhouette"]),
    ("matches", &["one to one"]),
];

/// All of them.
fn all() -> Value {
    let mut all: Map<String, Value> = ALONE.iter().map(|(one, _)| ((*one).to_owned(), json!(true))).collect();
    all.extend([("decompositions".to_owned(), json!(4)), ("subjects".to_owned(), json!(6))]);
    Value::Object(all)
}

/// Authors and years as running text cites them.
fn cited(paragraph: &str) -> Vec<(String, String)> {
    let words: Vec<&str> = paragraph.split([' ', '(', ')', ';', ',', ':', '.']).collect();
    let is_year = |word: &str| {
        word.len() == 4 && (word.starts_with("19") || word.starts_with("20")) && word.parse::<u32>().is_ok()
    };
    let author =
        |at: usize| words[..at].iter().rev().find(|word| word.len() > 2 && word.starts_with(char::is_uppercase));
    let years = words.iter().enumerate().filter(|(_, word)| is_year(word));
    years.map(|(at, year)| (author(at).unwrap().to_string(), year.to_string())).collect()
}

fn references_match(Methods { paragraph, references }: &Methods, what: &str) {
    let mut sorted = references.clone();
    sorted.sort_by_key(|reference| reference.to_lowercase());
    sorted.dedup();
    assert_eq!(&sorted, references, "{what}");
    let cited = cited(paragraph);
    let is =
        |reference: &str, (author, year): &(String, String)| reference.contains(author) && reference.contains(year);
    for one in &cited {
        assert_eq!(references.iter().filter(|text| is(text, one)).count(), 1, "{one:?} in {what}: {references:?}");
    }
    for reference in references {
        assert!(cited.iter().any(|one| is(reference, one)), "{reference} in {what}: {paragraph}");
    }
}

/// No finding, no advice, nothing left unwritten.
fn modest(text: &str) {
    let disclaimer = "not a diagnostic finding; it does not show extent, propagation or an epileptogenic zone";
    let plain = text.replace(disclaimer, "").to_lowercase();
    const NEVER: [&str; 18] = [
        "diagnos",
        "normal",
        "epileptogenic",
        "located at",
        "focus",
        "focal",
        "generator",
        "source is in",
        "recommend",
        "should",
        "please",
        "must",
        "you ",
        "your",
        "no source",
        "healthy",
        "patholog",
        "  ",
    ];
    for word in NEVER {
        assert!(!plain.contains(word), "“{word}” in: {text}");
    }
    for odd in [
        "NaN",
        "inf ",
        " 1 electrodes",
        "one maps",
        "one subjects",
        "each of one",
        "()",
        "( ",
        " .",
        " ,",
        "..",
        ";.",
        ": .",
    ] {
        assert!(!text.contains(odd), "“{odd}” in: {text}");
    }
}

fn text_of(record: &Record) -> String {
    let parts = record.parts.iter().map(|part| format!("## {}\n{}", part.heading, part.lines.join("\n")));
    format!("# {}\n{}", record.title, parts.collect::<Vec<_>>().join("\n"))
}

/// Methods and, of the first and the last map, records.
fn sound(study: &Study, what: &str) {
    for case in [json!({}), all()] {
        let methods = study.methods(&done(case));
        references_match(&methods, what);
        modest(&methods.paragraph);
        assert!(methods.paragraph.ends_with('.'));
    }
    for index in [0, study.count() - 1] {
        modest(&text_of(&study.record(index, &Done::default()).unwrap()));
    }
}

#[test]
fn what_was_not_done_is_not_mentioned_and_references_are_those_cited() {
    let names = ["-100 ms", "0 ms", "100 ms", "200 ms", "300 ms", "400 ms"];
    let (electrodes, maps) = (example("watch_electrodes.tsv"), named(names));
    let request = Request { electrodes: Some(electrodes.as_bytes()), maps: maps.as_bytes(), ..Request::default() };
    let study = open(&request, &json!({}));
    let plain = study.methods(&Done::default());
    references_match(&plain, "the fits alone");
    let everything = study.methods(&done(all()));
    references_match(&everything, "everything");
    for (one, marks) in ALONE {
        for others in [
            json!({}),
            json!({ "decompositions": 2, "subjects": 2 }),
            json!({ "decompositions": 12, "subjects": 6, "threshold": 0.2 }),
        ] {
            let mut case = others;
            case[one] = json!(true);
            let methods = study.methods(&done(case.clone()));
            references_match(&methods, one);
            modest(&methods.paragraph);
            for (other, foreign) in ALONE {
                // A verdict rests on populations and tells what it takes from pairs.
                let told = other == one;
                for mark in foreign {
                    assert_eq!(
                        methods.paragraph.contains(mark),
                        told,
                        "“{mark}” of {other} in {case}: {}",
                        methods.paragraph
                    );
                }
            }
        }
        assert!(marks.iter().all(|mark| everything.paragraph.contains(mark)), "{one}");
    }
    let of = |case: Value| study.methods(&done(case)).paragraph;
    assert!(
        of(json!({ "decompositions": 4, "subjects": 2 }))
            .contains("In all, four decompositions from two subjects were analysed")
    );
    assert!(of(json!({ "shares": true, "threshold": 0.125 })).contains("at most 12.5 %"));
    assert!(of(json!({ "shares": true })).contains("at most 5, 10 and 15 %"));
    assert!(of(json!({ "groups": true, "group_count": 3 })).contains("into three groups, a number chosen by hand"));
    assert!(!of(json!({ "shares": true, "subjects": 4 })).contains("intervals"));
    assert!(of(json!({ "shares": true, "subjects": 5 })).contains("95 % intervals"));
    assert!(of(json!({ "verdict": true })).contains("maps of each kind – one, two and a hundred dipoles"));
    assert!(of(json!({ "verdict": true, "alternatives": true })).contains("paired (a mirrored pair preferred"));
    assert!(!of(json!({ "verdict": true })).contains("paired"));
}

#[test]
fn every_setting_that_changes_what_is_done_changes_the_paragraph() {
    let names = ["-100 ms", "0 ms", "100 ms", "200 ms", "300 ms", "400 ms"];
    let (electrodes, maps) = (example("watch_electrodes.tsv"), named(names));
    let request = Request { electrodes: Some(electrodes.as_bytes()), maps: maps.as_bytes(), ..Request::default() };
    let shells = |skull: f64| json!([{ "tissue": "brain", "ratio": 0.87, "conductivity": 0.33 }, { "tissue": "skull", "ratio": 0.92, "conductivity": skull }, { "tissue": "scalp", "ratio": 1.0, "conductivity": 0.43 }]);
    let none = json!({});
    let (region, populations, verdict) =
        (json!({ "region": true }), json!({ "populations": true }), json!({ "verdict": true }));
    let alternatives = json!({ "alternatives": true });
    let cases: [(&Value, Value, &str); 43] = [
        (&none, json!({ "head": { "shells": shells(0.02) } }), "three concentric shells (brain, skull and scalp)"),
        (&none, json!({ "head": { "shells": shells(0.01) } }), "0.33, 0.01 and 0.43 S/m (set by hand)"),
        (
            &none,
            json!({ "head": { "shells": [{ "tissue": "head", "ratio": 1.0, "conductivity": 0.33 }] } }),
            "Wilson & Bayley 1950",
        ),
        (
            &none,
            json!({ "head": { "centre_mm": [0, 0, 40] } }),
            "fitted to the electrode positions given, its centre set by hand (radius",
        ),
        (&none, json!({ "head": { "radius_mm": 90 } }), "its radius set by hand (radius 90.0 mm"),
        (
            &none,
            json!({ "head": { "centre_mm": [0, 0, 40], "radius_mm": 85 } }),
            "A sphere was set by hand (radius 85.0 mm",
        ),
        (&none, json!({ "exclude": ["Cz"] }), "69 were used; left out by hand: Cz."),
        (&none, json!({ "exclude": ["Cz", "Pz"] }), "68 were used; left out by hand: Cz, Pz."),
        (
            &none,
            json!({ "interpolated": ["T7"], "exclude": ["Cz"] }),
            "; left out by hand: Cz; left out as interpolated: T7.",
        ),
        (&none, json!({ "axes": "front-left-up" }), "set by hand (x to the front, y to the left, z up)"),
        (&none, json!({ "mirror": true }), "Left and right of the positions were exchanged"),
        (&none, json!({ "unusualHead": true }), "It was declared unusual"),
        (&none, json!({ "mapUnit": "uV" }), "Maps were in µV and moments in nAm"),
        (&none, json!({ "mapUnit": "V" }), "Maps were in V and moments in nAm"),
        (&none, json!({ "flip": [1] }), "with one sign turned"),
        (&none, json!({ "flip": [1, 2] }), "with two signs turned"),
        (&none, json!({ "polarity": "declared" }), "taken as meaningful"),
        (
            &none,
            json!({ "activationSd": [2.0] }),
            "multiplied by the standard deviation of the activation for one map.",
        ),
        (&none, json!({ "activationSd": [2.0, 1, 1, 1, 1, 3] }), "of the activation for six maps."),
        (&none, json!({ "columnsAre": "components" }), "each of six component maps in"),
        (&none, json!({ "columnsAre": "repeats" }), "each of six repeats of a map in"),
        (&none, json!({ "columnsAre": "unrelated" }), "each of six maps in"),
        (&none, json!({ "times": { "start": -0.1, "step": 0.1, "unit": "s" } }), "(−0.1 to 0.4 s)"),
        (&none, json!({ "baseline": { "from": -100, "to": 0 } }), "The mean from −100 to 0 ms was subtracted"),
        (&region, json!({ "columnsAre": "repeats" }), "scatter of the repeats"),
        (&region, json!({ "errors": { "electrodesMm": 2.5 } }), "electrodes 2.5 mm off along the scalp"),
        (&region, json!({ "errors": { "electrodesMm": 0 } }), "electrodes as given"),
        (&region, json!({ "errors": { "skullRatio": [20, 50] } }), "20 to 50 times"),
        (&region, json!({ "errors": { "skullRatio": null } }), "conductivities as modelled"),
        (&region, json!({ "errors": { "sphere": 2 } }), "2 times the standard error"),
        (&region, json!({ "errors": { "sphere": 0 } }), "sphere as modelled"),
        (&region, json!({ "errors": { "backgroundSources": 0 } }), "independent noise strong enough"),
        (&region, json!({ "errors": { "draws": 1500 } }), "1,500 refits"),
        (&region, json!({ "errors": { "seed": 4 } }), "drawn anew (random numbers of seed 4;"),
        (&region, json!({ "noise": { "sd": 1.5 } }), "of standard deviation 1.5 relative units at each electrode"),
        (
            &region,
            json!({ "noise": { "singleTrialSd": 2e-5, "trials": 100 }, "mapUnit": "V" }),
            "2.0 µV at each electrode (an average of 100 trials)",
        ),
        (&alternatives, json!({ "noise": { "sd": 1.5 } }), "of standard deviation 1.5 relative units"),
        (&alternatives, json!({ "sources": { "orientation": "radial" } }), "pointing outwards or inwards"),
        (
            &populations,
            json!({ "sources": { "draws": 2000, "seed": 3 } }),
            "2,000 maps of each kind – independent noise, one, two, five, twenty and a hundred dipoles – simulated for the same electrodes and head (random numbers of seed 3;",
        ),
        (&populations, json!({ "sources": { "maxEccentricity": 0.8, "noise": 0.05 } }), "up to eccentricity 0.8"),
        (&populations, json!({ "sources": { "floor": [-0.25, -0.5] } }), "z = −0.25 − 0.5 y"),
        (
            &verdict,
            json!({ "limits": { "oneDipole": 0.9, "others": 0.01 } }),
            "dipolar (more left over than with at most 90 % of them and than with at most 1 % of",
        ),
        (
            &verdict,
            json!({ "limits": { "ruledOut": 0.99, "loneElectrode": 0.4 } }),
            "one channel with over 40 % of its power",
        ),
    ];
    for (what, settings, words) in &cases {
        let case = done((*what).clone());
        let before = open(&request, &json!({})).methods(&case);
        let after = open(&request, settings).methods(&case);
        assert!(!before.paragraph.contains(words), "“{words}” without {settings}");
        assert!(after.paragraph.contains(words), "“{words}” with {settings}: {}", after.paragraph);
        references_match(&after, words);
        modest(&after.paragraph);
    }
    // What only refits and populations rest on is no word of the fits.
    for settings in [
        json!({ "errors": { "seed": 4 } }),
        json!({ "sources": { "draws": 2000 } }),
        json!({ "limits": { "others": 0.01 } }),
    ] {
        assert_eq!(
            open(&request, &settings).methods(&Done::default()),
            open(&request, &json!({})).methods(&Done::default())
        );
    }
}

#[test]
fn numbers_are_those_of_the_report() {
    for settings in [json!({}), json!({ "mapUnit": "uV", "exclude": ["Cz"], "flip": [0], "polarity": "declared" })] {
        let study = watch(settings);
        let MapReport::Fitted(map) = study.assess(0, &[Assessment::Region]).unwrap() else { panic!("a fit") };
        let record = text_of(&study.record(0, &done(json!({ "region": true }))).unwrap());
        let lines: Vec<&str> = record.lines().collect();
        let sheet = study.sheet(0, &map);
        assert!(lines.contains(&sheet.sentence.as_str()));
        let trust = study.trust(0, &map).unwrap();
        let rows = sheet.rows.iter().chain(&sheet.head.rows).chain(&trust.region.rows);
        let mut compared = 0;
        for row in rows.filter(|row| !["head", "electrodes", "head_radius_mm"].contains(&row.code.as_ref())) {
            let line = format!("{}: {} {}", row.label, row.value, row.unit);
            assert!(lines.contains(&line.trim()), "{line}");
            compared += 1;
        }
        assert!(compared > 25);
        for input in study.preamble().inputs {
            assert!(lines.contains(&format!("{}: SHA-256 {}", input.name, input.sha256).as_str()));
        }
        let used = study.electrodes().iter().filter(|electrode| electrode.used).count();
        let (paragraph, head) = (study.methods(&Done::default()).paragraph, study.head());
        assert!(paragraph.contains(&format!("N = {used} electrodes and {} degrees", map.degrees_of_freedom)));
        assert!(
            paragraph
                .contains(&format!("radius {:.1} mm; electrodes off it by {:.1} mm", head.radius_mm, head.fit_rms_mm))
        );
    }
}

#[test]
fn a_record_has_its_parts_and_says_what_it_is_not() {
    let study = watch(json!({ "sources": { "draws": 1000 } }));
    let headings = |record: &Record| record.parts.iter().map(|part| part.heading).collect::<Vec<_>>();
    let whole = [
        "Status",
        "Inputs",
        "Found and assumed",
        "Model",
        "Fit",
        "Numbers",
        "Uncertainty",
        "Verdict",
        "Other explanations",
        "Limits",
        "Program",
    ];
    for index in 0..study.count() {
        let record = study.record(index, &done(all())).unwrap();
        assert_eq!(headings(&record), whole);
        assert!(record.parts[0].lines[0].starts_with(
            "This is not a diagnostic finding; it does not show extent, propagation or an epileptogenic zone"
        ));
        assert!(record.parts[0].lines[1].contains("Not a medical device"));
        modest(&text_of(&record));
        let MapReport::Fitted(map) = study.assess(index, &[Assessment::Alternatives, Assessment::Verdict]).unwrap()
        else {
            panic!("a fit")
        };
        let verdict = map.verdict.unwrap();
        assert_eq!(record.parts[7].lines[0], verdict.text);
        assert_eq!(
            record.parts[7].lines[1..=verdict.reasons.len()],
            verdict.reasons.iter().map(|reason| reason.text.clone()).collect::<Vec<_>>()
        );
    }
    let plain = study.record(0, &Done::default()).unwrap();
    assert_eq!(headings(&plain), [&whole[..6], &whole[9..]].concat());
    assert!(study.record(6, &Done::default()).is_err());
}

#[test]
fn a_map_that_cannot_be_fitted_says_why() {
    let maps = named(["a", "b", "c", "d", "e", "f"]);
    let more = maps.lines().enumerate().map(|(row, line)| match row {
        0 => format!("{line}\tflat\tgap"),
        5 => format!("{line}\t1\tn/a"),
        _ => format!("{line}\t1\t{row}"),
    });
    let (electrodes, maps) = (example("watch_electrodes.tsv"), more.collect::<Vec<_>>().join("\n"));
    let study = open(
        &Request { electrodes: Some(electrodes.as_bytes()), maps: maps.as_bytes(), ..Request::default() },
        &json!({}),
    );
    let everything = done(json!({ "region": true, "alternatives": true }));
    for (index, why) in [(6, "the same value at every electrode"), (7, "has no value at Fpz")] {
        let record = text_of(&study.record(index, &everything).unwrap());
        assert!(
            record
                .contains(&format!("## Fit\nThis map could not be fitted.\nThe map “{}” ", ["flat", "gap"][index - 6])),
            "{record}"
        );
        assert!(
            record.contains(why) && record.contains("not a diagnostic finding") && !record.contains("## Numbers"),
            "{record}"
        );
        modest(&record);
    }
    let paragraph = study.methods(&Done::default()).paragraph;
    assert!(paragraph.contains("Maps that were constant or lacked values were left aside (two maps)."), "{paragraph}");
    sound(&study, "maps that cannot be fitted");
}

#[test]
fn every_sample_has_its_words() {
    let folder = tests_folder().join("data/understood");
    let outcomes: Value = serde_json::from_slice(&std::fs::read(folder.join("outcomes.json")).unwrap()).unwrap();
    let mut told = 0;
    for sample in outcomes["samples"].as_array().unwrap() {
        let what = sample["what"].as_str().unwrap();
        let names: Vec<&str> = sample["files"].as_array().unwrap().iter().map(|name| name.as_str().unwrap()).collect();
        let contents: Vec<Vec<u8>> = names.iter().map(|name| std::fs::read(folder.join(name)).unwrap()).collect();
        let files = names.iter().zip(&contents).map(|(name, content)| (*name, content.as_slice())).collect();
        let settings =
            sample.get("settings").map(|given| serde_json::from_value(given.clone()).unwrap()).unwrap_or_default();
        let Ok(study) = Study::open(&Request { files, settings, ..Request::default() }) else { continue };
        sound(&study, what);
        let paragraph = study.methods(&Done::default()).paragraph;
        let words = match what {
            "positions on a unit sphere" => "Positions on a unit sphere were scaled to a head radius of 88.0 mm.",
            "labels alone, one in each line" => "not measured but the standard ones of the labels",
            "left and right exchanged" => "were the mirror image of a head",
            "names of one's own: nothing tells the axes" => "The axes of the positions were assumed",
            "BIDS: labels that tell nothing, axes by the landmarks" => "the points at ears and nose",
            "BIDS: a bad channel in the table of channels" => "; left out as declared bad: ",
            "eyes, heart, stimuli and breath" => "Channels off the scalp were not used (",
            "a value whose label has no position" => "Channels without a position were not used (Q9)",
            "labels with a reference of both ears" => "(recording reference by the labels: A1A2)",
            "a channel that is zero throughout: the recording reference" => {
                "(recording reference, zero in every map and kept: "
            }
            "weights with the sphering matrix in another file" => {
                "pseudo-inverse of the unmixing matrix times the sphering matrix"
            }
            "an unmixing matrix as a table with names" => "pseudo-inverse of the unmixing matrix.",
            "the baseline subtracted" => "The mean from −200 to −50 ms was subtracted at each electrode",
            "one map in a column" => "was fitted to one map in",
            _ => "A single equivalent current dipole was fitted to ",
        };
        assert!(paragraph.contains(words), "{what}: {paragraph}");
        told += 1;
    }
    assert!(told > 150, "{told}");
}

/// Files under the names of people, which are in no word of what leaves once they are renamed.
#[test]
fn names_of_files_are_those_that_may_leave() {
    let (electrodes, maps) = (example("watch_electrodes.tsv"), named(["a", "b", "c", "d", "e", "f"]));
    for maps in [maps.clone(), maps.replace('\t', ";").replace('.', ",")] {
        let files = vec![("Jane Doe electrodes.tsv", electrodes.as_bytes()), ("jane_doe.csv", maps.as_bytes())];
        let settings = json!({ "files": { "jane_doe.csv": { "role": "maps" } } });
        let study = open(&Request { files, ..Request::default() }, &settings);
        let names = [("Jane Doe electrodes.tsv", "electrodes"), ("jane_doe.csv", "maps")];
        let names = names.map(|(from, to)| (from.to_owned(), to.to_owned()));
        let outward = study.renamed(&names).unwrap();
        assert_eq!(outward.methods(&done(all())), study.methods(&done(all())), "no file is named in a paper");
        let everything = done(json!({ "region": true, "alternatives": true }));
        for index in [0, 5] {
            let [shown, hidden] = [&study, &outward].map(|study| text_of(&study.record(index, &everything).unwrap()));
            assert!(shown.contains("jane_doe.csv: SHA-256") && shown.contains("Jane Doe electrodes.tsv: SHA-256"));
            assert!(!hidden.to_lowercase().contains("jane"), "{hidden}");
            let put = |text: &str| names.iter().fold(text.to_owned(), |text, (from, to)| text.replace(from, to));
            assert_eq!(put(&shown), hidden, "nothing else changes");
        }
    }
}

#[test]
fn names_of_any_length_are_cut() {
    let long = "x".repeat(100_000);
    let maps = named([&long, "b", "c", "d", "e", "f"]);
    let electrodes = example("watch_electrodes.tsv");
    let request = Request { electrodes: Some(electrodes.as_bytes()), maps: maps.as_bytes(), ..Request::default() };
    let record = open(&request, &json!({})).record(0, &Done::default()).unwrap();
    assert!(record.title.len() < 200 && text_of(&record).len() < 10_000, "{}", record.title);
    assert!(record.title.ends_with("x…”"), "{}", record.title);
}

#[test]
fn ten_electrodes_and_hundreds_have_their_words() {
    let series = PlainSeries::standard();
    let mut draw = Draw::from(12);
    for count in [10, 19, 256] {
        let set = Electrodes::set(count);
        let maps = Mixture::many(&series, &set.directions, 0.85, 3, &mut draw);
        let columns: Vec<(&str, &[f64])> = maps.iter().map(|map| ("m", map.values.as_slice())).collect();
        let positions: Vec<Vec3> = set.directions.iter().map(|&e| e * 88.0).collect();
        let (table, maps) = (set.table(&positions), set.maps(&columns));
        let request = Request { electrodes: Some(table.as_bytes()), maps: maps.as_bytes(), ..Request::default() };
        let study = open(&request, &json!({}));
        sound(&study, &format!("{count} electrodes"));
        let paragraph = study.methods(&done(all())).paragraph;
        assert!(paragraph.contains(&format!("Of {count} electrodes with a position and a value, all were used.")));
        // Twelve numbers and four values more.
        assert_eq!(paragraph.contains("two free dipoles"), count >= 16, "{paragraph}");
        let record = text_of(&study.record(0, &Done::default()).unwrap());
        assert_eq!(
            record.contains(&format!("With {count} electrodes almost any map can look like one dipole.")),
            count < 19
        );
    }
}

#[test]
fn native_and_wasm_tell_the_same() {
    let (electrodes, maps) = (example("watch_electrodes.tsv"), example("watch_maps.tsv"));
    let cases = [
        (json!({}), json!({}), 0),
        (json!({ "sources": { "draws": 1000 }, "mapUnit": "uV", "exclude": ["Cz"] }), all(), 3),
        (
            json!({ "errors": { "skullRatio": null, "backgroundSources": 0 } }),
            json!({ "region": true, "threshold": null }),
            5,
        ),
    ];
    let asked = cases.clone().map(|(settings, done, index)| {
        json!({ "request": { "electrodes": electrodes, "maps": maps, "settings": settings }, "done": done, "index": index })
    });
    let printed = Node::with_engine().run("js/words.mjs", &[], &json!(asked).to_string());
    let printed: Value = serde_json::from_str(&printed.unwrap_or_else(|why| panic!("{why}"))).unwrap();
    for ((settings, what, index), wasm) in cases.into_iter().zip(printed.as_array().unwrap()) {
        let (study, what) = (watch(settings), done(what));
        let native = json!({ "methods": study.methods(&what), "record": study.record(index, &what).unwrap() });
        // Only the build tool names the build, and takes every release's.
        let build = |text: &str| {
            let start = text.find("build ").unwrap() + 6;
            text[start..].split([')', '"']).next().unwrap().to_owned()
        };
        let told = wasm.to_string();
        assert_eq!(native.to_string().replace("0123abcd", &build(&told)), told);
    }
}

#[test]
fn the_paragraph_in_the_readme_is_what_is_told() {
    let (electrodes, maps) = (example("watch_electrodes.tsv"), example("lamp.tsv"));
    let request = Request { electrodes: Some(electrodes.as_bytes()), maps: maps.as_bytes(), ..Request::default() };
    let study = open(&request, &json!({ "mapUnit": "uV" }));
    let told = study.methods(&done(json!({ "region": true }))).paragraph.replace(", build 0123abcd", "");
    let readme = std::fs::read_to_string(tests_folder().join("../README.md")).unwrap();
    assert!(readme.contains(&format!("> {told}\n")), "the README has to have:\n> {told}");
}
