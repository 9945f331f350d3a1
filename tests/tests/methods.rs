//! Methods and records: the words that leave for papers and files tell what was done, and nothing else.
use inward_core::report::{Done, Methods, Record};
use inward_core::{Request, Settings, Study};
use inward_tests::example;
use serde_json::{Value, json};

fn study(electrodes: Option<&str>, maps: &str, settings: Value) -> Study {
    Study::open(&Request {
        electrodes: electrodes.map(str::as_bytes),
        maps: maps.as_bytes(),
        settings: serde_json::from_value::<Settings>(settings).unwrap(),
        build: Some("0123abcd"),
        ..Request::default()
    })
    .unwrap()
}

fn watch(settings: Value) -> Study {
    study(Some(&example("watch_electrodes.tsv")), &example("watch_maps.tsv"), settings)
}

fn done(done: Value) -> Done {
    serde_json::from_value(done).unwrap()
}

/// Authors and years as running text cites them.
fn cited(paragraph: &str) -> Vec<String> {
    let words: Vec<&str> = paragraph.split([' ', '(', ')', ';', ',', ':', '.', '\u{a0}']).collect();
    let is_year = |word: &str| {
        word.len() == 4
            && (word.starts_with("19") || word.starts_with("20"))
            && word.bytes().all(|b| b.is_ascii_digit())
    };
    let years = words.iter().enumerate().filter(|(_, word)| is_year(word));
    years
        .map(|(at, year)| {
            format!(
                "{} {year}",
                words[..at]
                    .iter()
                    .rev()
                    .find(|word| word.len() > 2 && word.chars().next().unwrap().is_uppercase())
                    .unwrap()
            )
        })
        .collect()
}

/// Each way of being done, alone.
const ALONE: [&str; 10] = [
    "region",
    "populations",
    "verdict",
    "alternatives",
    "influence",
    "what_if",
    "course",
    "shares",
    "groups",
    "matches",
];

#[test]
fn references_are_those_that_the_paragraph_cites() {
    let watch = watch(json!({}));
    let all: serde_json::Map<String, Value> = ALONE.iter().map(|one| ((*one).to_owned(), json!(true))).collect();
    let mut cases = vec![json!({}), Value::Object(all)];
    cases.extend(ALONE.iter().map(|one| json!({ *one: true, "subjects": 6, "decompositions": 12 })));
    for case in cases {
        let Methods { paragraph, references } = watch.methods(&done(case.clone()));
        let mut sorted = references.clone();
        sorted.sort_by_key(|reference| reference.to_lowercase());
        sorted.dedup();
        assert_eq!(sorted, references, "{case}");
        let cited = cited(&paragraph);
        for one in &cited {
            let (author, year) = one.split_once(' ').unwrap();
            let named = references.iter().filter(|text| text.contains(author) && text.contains(year)).count();
            assert_eq!(named, 1, "{one} in {case}: {references:?}");
        }
        for reference in &references {
            let told = |one: &String| {
                one.split_once(' ').is_some_and(|(author, year)| reference.contains(author) && reference.contains(year))
            };
            assert!(cited.iter().any(told), "{reference} in {case}");
        }
    }
}

#[test]
fn a_record_has_its_parts_and_says_what_it_is_not() {
    let all = json!({ "region": true, "verdict": true, "alternatives": true });
    let watch = watch(json!({ "sources": { "draws": 1000 } }));
    let Record { title, parts } = watch.record(0, &done(all)).unwrap();
    assert!(title.ends_with("map “lamp”"), "{title}");
    let headings: Vec<&str> = parts.iter().map(|part| part.heading).collect();
    assert_eq!(
        headings,
        [
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
            "Program"
        ]
    );
    assert_eq!(
        parts[0].lines[0],
        "This is not a diagnostic finding; it does not show extent, propagation or an epileptogenic zone."
    );
    let plain: Vec<&str> = watch.record(0, &Done::default()).unwrap().parts.iter().map(|part| part.heading).collect();
    assert_eq!(plain, [&headings[..6], &headings[9..]].concat());
    assert!(watch.record(6, &Done::default()).is_err());
}
