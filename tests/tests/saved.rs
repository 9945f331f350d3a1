//! Work that is saved and comes back: the same session in another tab, files of every version, files that are damaged.
use inward_core::{Request, Settings, analyse};
use inward_tests::{Browser, DroppedFile, Page, data, example, in_both_browsers, tests_folder};
use serde_json::{Value, json};

/// The version that the page writes.
const VERSION: u64 = 1;

in_both_browsers!(a_session_comes_back_digit_by_digit, what_is_damaged_changes_nothing);

fn save(page: &Page) -> String {
    page.download("#save-work", "inward-work.json")
}

fn restored(browser: Browser, work: &str) -> Page {
    let page = Page::open(browser);
    page.drop_files(&[DroppedFile { name: "anything.json", text: work }]);
    page.until("the session", Page::rests);
    page
}

/// The JSON report as text, so that not a byte may differ; before all draws are there it has no verdicts.
fn report(page: &Page) -> String {
    page.wait_for_verdict();
    page.download("#download-json", "inward-report.json")
}

fn click(page: &Page, selector: &str) {
    page.ask("document.querySelector(arguments[0]).click()", &[json!(selector)]);
}

/// Several decompositions under names that nobody else should read, with settings, another map, another threshold and
/// other explanations: saved, restored in another tab and saved again.
fn a_session_comes_back_digit_by_digit(browser: Browser) {
    let page = Page::open(browser);
    assert!(!page.visible("#save-work"), "nothing to save");
    let leaves = "const leaving = new Event('beforeunload', { cancelable: true }); dispatchEvent(leaving); return leaving.defaultPrevented";
    assert_eq!(page.value(leaves), json!(false), "nothing to lose");
    page.drop_files(&[
        DroppedFile { name: "sub-doe_electrodes.tsv", text: &example("watch_electrodes.tsv") },
        DroppedFile { name: "sub-doe_jane_first.tsv", text: &example("watch_maps.tsv") },
        DroppedFile { name: "sub-doe_jane_second.tsv", text: &example("watch_maps.tsv") },
    ]);
    page.until("both", |page| page.rests() && page.texts("#decomposition-list > li").len() == 2);
    click(&page, "#electrode-table tbody input");
    page.until("an electrode out", |page| page.rests() && !page.text("#electrodes-out").is_empty());
    click(&page, "#ledger [data-index='3']");
    page.until("the fourth map", |page| page.text("#subject").starts_with("two horns"));
    click(&page, "#flip");
    page.until("the sign", |page| page.rests() && page.attribute("#flip", "aria-pressed") == "true");
    page.wait_for_verdict();
    click(&page, "#explain");
    page.until("other explanations", |page| page.visible("#alternatives-found"));
    assert_eq!(page.value(leaves), json!(true), "a warning before it is lost");
    assert_eq!(page.text("#work-state"), "Not saved yet: it goes with this tab.");
    let work = save(&page);
    assert_eq!(page.text("#work-state"), "Saved as it stands.");
    assert_eq!(page.value(leaves), json!(false), "saved");
    let told = report(&page);
    for (what, text) in [("the work", &work), ("the report", &told)] {
        for name in ["doe", "jane"] {
            assert!(!text.to_lowercase().contains(name), "{what} names {name}");
        }
    }
    let parsed: Value = serde_json::from_str(&work).unwrap();
    assert_eq!((parsed["version"].as_u64(), parsed["explained"].clone()), (Some(VERSION), json!([3])));

    let again = restored(browser, &work);
    again.wait_for_verdict();
    again.until("other explanations", |page| page.visible("#alternatives-found"));
    assert!(again.text("#subject").starts_with("two horns"));
    assert_eq!(again.text("#sentence"), page.text("#sentence"));
    assert_eq!(again.text("#work-state"), "Saved as it stands.");
    assert!(report(&again) == told, "the same bytes of the report");
    assert!(save(&again) == work, "the same bytes of the work");
    // One change, and it is unsaved again.
    click(&again, "#flip");
    again.until("the sign", |page| page.text("#work-state").starts_with("Not saved"));

    // Names go along when they are asked for; taking work up can be undone.
    click(&page, "#work-names");
    let named = save(&page);
    assert!(named.contains("sub-doe_jane_first.tsv") && report(&page).contains("sub-doe_jane_first.tsv"));
    again.drop_files(&[DroppedFile { name: "w.json", text: &named }]);
    again.until("names", |page| page.rests() && page.text("#maps-loaded").contains("jane"));
    // That names were in a file does not let them out of this tab.
    assert_eq!(again.value("return document.querySelector('#work-names').checked"), json!(false));
    assert!(!report(&again).contains("jane") && !save(&again).contains("jane"));
    click(&again, "#undo");
    again.until("without names", |page| page.rests() && !page.text("#maps-loaded").contains("jane"));

    // Nothing stays in the browser.
    let kept = "return [localStorage.length, sessionStorage.length, document.cookie]";
    if browser == Browser::Chromium {
        assert_eq!(page.value(kept), json!([0, 0, ""]));
    }
}

/// Whatever is wrong with a file is said, and the session that was there goes on.
fn what_is_damaged_changes_nothing(browser: Browser) {
    let page = Page::with_watch(browser);
    let work = save(&page);
    let before = report(&page);
    let parsed: Value = serde_json::from_str(&work).unwrap();
    let with = |change: &dyn Fn(&mut Value)| {
        let mut work = parsed.clone();
        change(&mut work);
        // The format stands first, as the page writes it.
        let rest = work.as_object_mut().unwrap();
        let format = rest.remove("format").unwrap();
        format!("{{\"format\": {format}, {}", &Value::Object(rest.clone()).to_string()[1..])
    };
    let damaged = "That saved work is damaged";
    let cases = [
        ("cut short", work[..work.len() / 2].to_owned(), damaged, ""),
        (
            "a digit of a table",
            with(&|work| {
                let data = work["contents"][1]["data"].as_str().unwrap().replacen('3', "4", 1);
                work["contents"][1]["data"] = json!(data);
            }),
            damaged,
            "SHA-256",
        ),
        ("no tables", with(&|work| work["contents"] = json!([])), damaged, "files[0]"),
        (
            "a table elsewhere",
            with(&|work| work["decompositions"][0]["maps"] = json!(7)),
            damaged,
            "decompositions[0]: files",
        ),
        ("a threshold", with(&|work| work["threshold"] = json!("high")), damaged, "threshold"),
        ("settings", with(&|work| work["decompositions"][0]["settings"]["exclude"] = json!("Cz")), damaged, "settings"),
        ("nothing current", with(&|work| work["current"] = json!(-1)), damaged, "current"),
        ("no version", with(&|work| work["version"] = Value::Null), damaged, "version"),
        (
            "base64",
            with(&|work| {
                work["contents"][0]["kind"] = json!("base64");
                work["contents"][0]["data"] = json!("°");
            }),
            damaged,
            "contents[0]",
        ),
        (
            "newer",
            with(&|work| work["version"] = json!(VERSION + 1)),
            "saved by a newer version",
            "version 2, saved by Inward",
        ),
        ("a report", before.clone(), "says what came out", "inward-report"),
    ];
    for (what, text, message, details) in &cases {
        assert_ne!(*text, work, "{what} is a change");
        page.drop_files(&[DroppedFile { name: "work.json", text }]);
        page.until(what, |page| page.failure_text().contains(message));
        assert!(page.visible("#failure-hint"), "{what}: what to do");
        let told = page.value("return document.querySelector('#failure-details').textContent");
        assert!(told.as_str().unwrap().contains(details), "{what}: {told}");
        click(&page, "#failure-dismiss");
        page.until("the answer as it was", Page::rests);
    }
    page.drop_files(&[
        DroppedFile { name: "work.json", text: &work },
        DroppedFile { name: "maps.tsv", text: &example("watch_maps.tsv") },
    ]);
    page.until("it has to come alone", |page| page.failure_text().contains("has to come alone"));
    click(&page, "#failure-dismiss");
    assert!(report(&page) == before, "the session goes on");
    // What is shared by all goes back too.
    let threshold = |page: &Page| serde_json::from_str::<Value>(&save(page)).unwrap()["threshold"].clone();
    let other = with(&|work| work["threshold"] = json!(0.05));
    page.drop_files(&[DroppedFile { name: "work.json", text: &other }]);
    page.until("another threshold", |page| page.rests() && threshold(page) == json!(0.05));
    click(&page, "#undo");
    page.until("the threshold as before", |page| page.rests() && threshold(page) == json!(0.1));
    // A setting that the engine refuses is told by it, and undone.
    let odd = with(&|work| work["decompositions"][0]["settings"]["colour"] = json!("red"));
    page.drop_files(&[DroppedFile { name: "work.json", text: &odd }]);
    page.until("an unknown setting", |page| page.failure_text().contains("colour"));
    click(&page, "#undo");
    page.until("as before", |page| page.rests() && !page.visible("#failure"));
    assert!(report(&page) == before, "the session is back");
}

/// A file of every version that was ever written is kept, and opens: its tables under its settings give what they gave.
#[test]
fn files_of_every_version_open() {
    let folder = tests_folder().join("data/saved");
    for version in 1..=VERSION {
        let work = std::fs::read_to_string(folder.join(format!("version_{version}.json"))).unwrap();
        let kept: Value = serde_json::from_str(&work).unwrap();
        assert_eq!(kept["version"].as_u64(), Some(version));
        let page = restored(Browser::Chromium, &work);
        page.until("both", |page| page.rests() && page.texts("#decomposition-list > li").len() == 2);
        let report = page.report();
        // The engine itself, called with what stands in the file.
        let one = &kept["decompositions"][kept["current"].as_u64().unwrap() as usize];
        let file = |key: &str| {
            let file = &kept["files"][one[key].as_u64().unwrap() as usize];
            let content = &kept["contents"][file["content"].as_u64().unwrap() as usize];
            (file["name"].as_str().unwrap(), content["data"].as_str().unwrap().as_bytes())
        };
        let settings: Settings = serde_json::from_value(one["settings"].clone()).unwrap();
        let request = Request { files: vec![file("maps"), file("electrodes")], settings, ..Request::default() };
        let direct = json!(analyse(&request).unwrap());
        assert_eq!(report["inputs"], direct["inputs"]);
        let maps = |report: &Value| -> Vec<Value> {
            let keys = ["name", "flipped", "residual_variance", "dipole", "projected"];
            report["maps"].as_array().unwrap().iter().map(|map| keys.map(|key| map[key].clone()).into()).collect()
        };
        assert_eq!(maps(&report), maps(&direct), "version {version}");
        // As a table beside this file has it from the day on which it was saved.
        let told = data(&format!("saved/version_{version}.tsv"));
        for (line, map) in told.lines().skip(1).zip(direct["maps"].as_array().unwrap()) {
            let [name, rv, x] = line.split('\t').collect::<Vec<_>>()[..] else { panic!("{line}") };
            assert_eq!(map["name"], json!(name));
            let close = |found: &Value, kept: &str, within: f64| {
                let (found, kept) = (found.as_f64().unwrap(), kept.parse::<f64>().unwrap());
                assert!((found - kept).abs() <= within, "{name}: {found}, {kept} when it was saved");
            };
            close(&map["residual_variance"], rv, 1e-9);
            close(&map["dipole"]["canonical_mm"][0], x, 1e-4);
        }
        assert!(told.lines().count() > 2, "maps that are compared");
    }
    let known = std::fs::read_dir(&folder).unwrap().count() as u64;
    assert_eq!(known, 2 * VERSION, "a file and a table for each version");
}
