//! The delivered page from disk, in both browsers, by what a person does with it.
use inward_tests::{Browser, DroppedFile, Folder, Page, TAB, Variant, data, example, in_both_browsers};
use serde_json::{Value, json};
use sha2::{Digest, Sha256};
use std::time::Duration;

fn electrodes() -> String {
    example("watch_electrodes.tsv")
}

fn maps() -> String {
    example("watch_maps.tsv")
}

/// One map of the example, by the number of its column.
fn one_map(column: usize) -> String {
    maps()
        .lines()
        .map(|line| line.split('\t').collect::<Vec<_>>())
        .map(|row| format!("{}\t{}\n", row[0], row[column]))
        .collect()
}

/// A page that shows the answer to the example.
fn answered(browser: Browser) -> Page {
    let page = Page::open(browser);
    page.drop_files(&[
        DroppedFile { name: "positions.tsv", text: &electrodes() },
        DroppedFile { name: "maps.tsv", text: &maps() },
    ]);
    page.wait_for_answer();
    page
}

fn radius(report: &Value) -> f64 {
    report["head"]["radius_mm"].as_f64().expect("a number")
}

/// Share of a map's variance that its dipole explains.
fn explained(report: &Value, map: usize) -> f64 {
    report["maps"][map]["variance_explained"].as_f64().expect("a number")
}

/// Whether a text holds a per cent figure that rounds from the fraction.
fn tells_percent(text: &str, fraction: f64) -> bool {
    (0..=3).any(|digits| {
        text.contains(&format!("{:.digits$} %", 100.0 * fraction))
            || text.contains(&format!("{:.digits$}\u{a0}%", 100.0 * fraction))
    })
}

fn pasted_tables_are_answered(browser: Browser) {
    let page = Page::open(browser);
    page.picture("ready");
    page.paste("#electrodes-text", &electrodes());
    page.paste("#maps-text", &maps());
    page.wait_for_answer();
    page.picture("answered");
    let report = page.download_report();
    assert_eq!(report["electrodes"].as_array().unwrap().len(), 70);
    let sentence = page.text("#sentence");
    assert!(tells_percent(&sentence, explained(&report, 0)), "{sentence} {}", explained(&report, 0));
}

fn labels_alone_are_answered_with_a_note(browser: Browser) {
    let page = Page::open(browser);
    page.paste("#maps-text", &one_map(1));
    page.wait_for_answer();
    let report = page.download_report();
    assert_eq!(radius(&report), 88.0);
    let codes: Vec<&str> =
        report["notes"].as_array().unwrap().iter().filter_map(|note| note["code"].as_str()).collect();
    assert!(codes.contains(&"standard-positions"), "{codes:?}");
    let shown = page.text("#notes");
    for note in report["notes"].as_array().unwrap() {
        let message = note["message"].as_str().unwrap();
        assert!(shown.contains(message), "the page shows {message:?}: {shown}");
    }
}

fn picked_files_are_answered(browser: Browser) {
    let page = Page::open(browser);
    let folder = Folder::fresh("picked");
    page.pick("#electrodes-file", &folder.write("positions.tsv", electrodes()));
    page.pick("#maps-file", &folder.write("maps.tsv", maps()));
    page.wait_for_answer();
    let report = page.download_report();
    assert_eq!(report["electrodes"].as_array().unwrap().len(), 70);
    assert_eq!(report["maps"].as_array().unwrap().len(), 6);
}

fn files_dropped_one_by_one_are_told_apart(browser: Browser) {
    let page = Page::open(browser);
    page.drop_files(&[DroppedFile { name: "a.txt", text: &maps() }]);
    page.wait_for_answer();
    assert_eq!(radius(&page.download_report()), 88.0, "standard positions until a table comes");
    page.drop_files(&[DroppedFile { name: "b.txt", text: &electrodes() }]);
    page.until("the table's head", |page| page.state() == "answered" && radius(&page.download_report()) != 88.0);
}

fn a_paste_outside_the_fields_is_answered(browser: Browser) {
    let page = Page::open(browser);
    page.paste("body", &maps());
    page.wait_for_answer();
    assert_eq!(page.download_report()["maps"].as_array().unwrap().len(), 6);
}

fn the_download_is_the_report(browser: Browser) {
    let page = answered(browser);
    let report = page.download_report();
    assert_eq!(report["format"], "inward-report");
    assert_eq!(report["version"], 1);
    let keys: Vec<&String> = report.as_object().unwrap().keys().collect();
    let expected = "electrodes format head inputs maps notes populations program settings suspects understood version";
    assert_eq!(keys, expected.split(' ').collect::<Vec<_>>());
    assert!(report["maps"][0]["region"]["volume_ml"].as_f64().unwrap() > 0.0);
    let hashes: Vec<&str> =
        report["inputs"].as_array().unwrap().iter().map(|input| input["sha256"].as_str().unwrap()).collect();
    for content in [electrodes(), maps()] {
        let hash: String = Sha256::digest(content.as_bytes()).iter().map(|byte| format!("{byte:02x}")).collect();
        assert!(hashes.contains(&hash.as_str()), "{hashes:?} name {hash}");
    }
    let names: Vec<&str> = report["maps"].as_array().unwrap().iter().map(|map| map["name"].as_str().unwrap()).collect();
    assert_eq!(names, ["lamp", "engine room", "swell", "two horns", "salt", "fog"]);
    // The invented source of the first map lies under CP3 at eccentricity .80; the noise moves it by a millimetre.
    assert!(explained(&report, 0) > 0.97);
    assert_eq!(report["maps"][0]["dipole"]["nearest_site"], "CP3");
    assert!(explained(&report, 5) < 0.5, "two dozen sources are not one dipole");
}

fn the_table_and_its_copy_tell_the_same_numbers(browser: Browser) {
    let page = answered(browser);
    let report = page.download_report();
    let shown = page.text("#numbers");
    assert!(tells_percent(&shown, explained(&report, 0)), "{shown}");
    let rows = page.value("return document.querySelectorAll('#numbers tbody tr').length").as_u64().unwrap();
    assert!(rows >= 8, "{rows} rows");
    page.click("#copy-table");
    let copied = || page.clipboard();
    page.until("the copy", |_| copied().lines().count() as u64 >= rows);
    let copied = copied();
    assert!(copied.lines().all(|line| line.split('\t').count() == 3), "{copied}");
    assert!(tells_percent(&copied.replace('\t', " "), explained(&report, 0)), "{copied}");
}

fn another_map_is_chosen(browser: Browser) {
    let page = answered(browser);
    let report = page.download_report();
    assert!(tells_percent(&page.text("#sentence"), explained(&report, 0)));
    page.click("#ledger [data-index='1']");
    page.until("the second map", |page| {
        page.state() == "answered" && tells_percent(&page.text("#numbers"), explained(&report, 1))
    });
}

fn pictures_are_painted_and_nothing_beyond_the_electrodes(browser: Browser) {
    let page = Page::open(browser);
    // Electrodes on the right half of the head alone.
    let standard = data("standard_positions.csv");
    let right: Vec<Vec<&str>> = standard
        .lines()
        .skip(1)
        .map(|line| line.split(',').collect::<Vec<_>>())
        .filter(|row| row[1].parse::<f64>().unwrap() > 0.15 && row[3].parse::<f64>().unwrap() >= 0.0)
        .collect();
    assert!(right.len() > 20);
    let map: String = right
        .iter()
        .map(|row| {
            let [x, y, z] = [1, 2, 3].map(|k| row[k].parse::<f64>().unwrap());
            format!("{}\t{}\n", row[0], 5.0 * y + 3.0 * z - 2.0 * x)
        })
        .collect();
    page.paste("#maps-text", &map);
    page.wait_for_answer();
    page.picture("half");
    for canvas in ["#map-measured", "#map-projected"] {
        let map = page.pixels(canvas);
        let (width, height) = (map.width, map.height);
        assert!(width > 100 && height > 100);
        let coloured = |x: usize| (0..height).filter(|&y| map.coloured(x as f64, y as f64)).count();
        // The first electrodes stand 0.15 of the radius right of the middle.
        let left = (0..width / 2).map(coloured).sum::<usize>();
        let right = (width / 2..width).map(coloured).sum::<usize>();
        assert!(right > width * height / 20, "{canvas}: {right} coloured pixels on the right");
        assert!(
            left < right / 50,
            "{canvas}: {left} coloured pixels on the left, where no electrode is, {right} on the right"
        );
        assert!(map.colours() > 30, "{canvas}: {} colours", map.colours());
    }
}

fn the_left_over_map_differs_from_the_measured_one(browser: Browser) {
    let page = answered(browser);
    let [measured, projected, residual] =
        ["#map-measured", "#map-projected", "#map-residual"].map(|canvas| page.pixels(canvas));
    assert_ne!(measured.bytes, projected.bytes);
    assert_ne!(measured.bytes, residual.bytes);
    for canvas in ["#map-measured", "#map-projected", "#map-residual"] {
        let words =
            page.ask("return document.querySelector(arguments[0]).getAttribute('aria-label')", &[json!(canvas)]);
        assert!(words.as_str().is_some_and(|words| words.len() > 20), "{canvas} says in words what it shows: {words}");
    }
}

fn a_wrong_file_leaves_the_answer(browser: Browser) {
    let page = answered(browser);
    let before = page.text("#sentence");
    page.drop_files(&[DroppedFile { name: "holiday.txt", text: "Dear all,\nthe weather is fine.\nYours, K.\n" }]);
    page.wait_for_failure();
    page.picture("failed");
    assert!(page.visible("#answer"));
    assert_eq!(page.text("#sentence"), before);
    for part in ["#failure-message", "#failure-hint"] {
        let text = page.text(part);
        assert!(text.ends_with('.') && text.len() > 10, "{part}: {text:?} is a sentence");
    }
    let details = page.value("return document.querySelector('#failure-details').textContent");
    assert!(details.as_str().unwrap().contains("code: "), "{details}");
    page.click("#copy-details");
    page.until("the copied details", |page| json!(page.clipboard()) == details);
    assert_eq!(page.ask("return document.querySelector('#failure').getAttribute('role')", &[]), json!("alert"));
    page.paste("#maps-text", &one_map(2));
    page.wait_for_answer();
    assert!(!page.visible("#failure"));
}

fn a_table_without_a_known_label_fails_by_name(browser: Browser) {
    let page = Page::open(browser);
    let text: String = (0..20).map(|k| format!("Q{k}\t{}\n", (k * 7 % 11) as f64)).collect();
    page.paste("#maps-text", &text);
    page.wait_for_failure();
    let details = page.value("return document.querySelector('#failure-details').textContent");
    assert!(details.as_str().unwrap().contains("labels-unmatched"), "{details}");
}

fn the_last_of_two_quick_pastes_wins(browser: Browser) {
    let page = Page::open(browser);
    page.paste("#maps-text", &one_map(6));
    page.paste("#maps-text", &one_map(1));
    page.until("the later map", |page| {
        page.state() == "answered" && page.download_report()["maps"][0]["name"] == "lamp"
    });
    // Nothing late may undo it.
    std::thread::sleep(Duration::from_millis(500));
    assert_eq!(page.download_report()["maps"][0]["name"], "lamp");
}

/// Lets the fit of a map named `trapped` trap.
const TRAP: &str = concat!(include_str!("../js/trap.js"), include_str!("../js/trap_by_name.js"));

fn a_trap_is_a_failure_and_the_next_map_works(browser: Browser) {
    let folder = Folder::fresh("trap");
    let page = Page::load(browser, &Variant::delivered().before_worker(TRAP).write(&folder));
    page.wait_for("ready").unwrap();
    page.paste("#maps-text", &one_map(1).replace("lamp", "trapped"));
    page.wait_for_failure();
    let details = page.value("return document.querySelector('#failure-details').textContent");
    let details = details.as_str().unwrap();
    assert!(details.contains("engine-trap") && details.contains("RuntimeError"), "{details}");
    assert!(page.text("#failure-message").ends_with('.'));
    page.paste("#maps-text", &one_map(2));
    page.wait_for_answer();
    assert_eq!(page.download_report()["maps"][0]["name"], "engine room");
}

fn a_blocked_script_is_noticed(browser: Browser) {
    let folder = Folder::fresh("blocked");
    let page = Page::load(browser, &Variant::delivered().with_unannounced_script().write(&folder));
    let waited = page.wait_for_within("ready", Duration::from_secs(5));
    assert!(waited.is_err(), "a page whose script the policy refuses never gets ready");
    assert_eq!(page.state(), "loading");
    drop(page);
    let page = Page::load(browser, &Variant::delivered().with_unannounced_packed_script().write(&folder));
    page.until("the refusal", |page| page.state() == "failed");
    assert!(page.text("#unstarted").contains("not as it was built"));
}

fn everything_works_by_keyboard(browser: Browser) {
    let page = Page::open(browser);
    let focus = |id: &str| {
        for _ in 0..60 {
            if page.value("return document.activeElement?.id ?? ''") == json!(id) {
                return;
            }
            page.session().press(&TAB.to_string()).unwrap();
        }
        panic!("the tabulator key never reaches #{id}");
    };
    focus("maps-text");
    let typed = "Fp1 1.5\u{E007}Fp2 0.9\u{E007}F7 2.1\u{E007}F3 4.2\u{E007}Fz 3.1\u{E007}F4 0.7\u{E007}F8 -1.2\u{E007}T7 1.1\u{E007}\
                 C3 3.9\u{E007}Cz 1.8\u{E007}C4 -1.6\u{E007}T8 -2.2\u{E007}P3 0.4\u{E007}Pz -0.9\u{E007}P4 -2.4\u{E007}";
    page.session().press(typed).unwrap();
    page.wait_for_answer();
    page.until("all fifteen electrodes", |page| {
        page.state() == "answered"
            && page.value("return document.querySelector('#maps-text').value.trim().split('\\n').length") == json!(15)
    });
    focus("electrodes-text");
    focus("download-json");
    let file = page.session().downloads().join("inward-report.json");
    page.session().press("\u{E007}").unwrap();
    page.until("the download by keyboard", |_| file.exists());
}

fn no_accessibility_findings(browser: Browser) {
    let page = Page::open(browser);
    let none: Vec<String> = Vec::new();
    assert_eq!(page.accessibility_findings(), none, "ready");
    page.paste("#electrodes-text", &electrodes());
    page.paste("#maps-text", &maps());
    page.wait_for_answer();
    assert_eq!(page.accessibility_findings(), none, "answered");
    page.drop_files(&[DroppedFile { name: "holiday.txt", text: "Dear all,\nthe weather is fine.\n" }]);
    page.wait_for_failure();
    assert_eq!(page.accessibility_findings(), none, "failed");
    // The checker must be able to find something.
    page.value("document.querySelector('#map-measured').removeAttribute('aria-label'); document.documentElement.removeAttribute('lang')");
    assert!(!page.accessibility_findings().is_empty());
}

fn no_part_of_the_page_is_wider_than_the_window(browser: Browser) {
    let page = answered(browser);
    for width in [1280, 760, 480] {
        page.session().resize(width, 900).unwrap();
        let parts = page.value(
            "const most = document.documentElement.clientWidth;\
             return document.documentElement.scrollWidth <= most ? [] : [...document.querySelectorAll('body *')]\
               .filter((e) => e.getBoundingClientRect().right > most + 1).map((e) => e.tagName + '#' + e.id + '.' + e.className).slice(0, 9)",
        );
        page.picture(&format!("width-{width}"));
        assert_eq!(parts, json!([]), "{width} pixels: the document scrolls sideways");
    }
}

fn a_long_run_is_cancelled_and_the_page_goes_on(browser: Browser) {
    let page = Page::open(browser);
    let repeated = |line: &str| {
        let (label, values) = line.split_once('\t').unwrap();
        format!("{label}{}\n", format!("\t{values}").repeat(3000))
    };
    let many: String = maps().lines().map(repeated).collect();
    page.drop_files(&[DroppedFile { name: "many.tsv", text: &many }]);
    page.until("the button that cancels", |page| page.visible("#cancel"));
    page.click("#cancel");
    page.until("rest", |page| page.state() != "busy" && !page.visible("#cancel"));
    page.drop_files(&[DroppedFile { name: "maps.tsv", text: &maps() }]);
    page.until("the few maps", |page| {
        page.state() == "answered" && page.download_report()["maps"].as_array().unwrap().len() == 6
    });
}

fn it_works_in_a_frame_that_allows_scripts_and_downloads_alone(browser: Browser) {
    let folder = Folder::fresh("framed");
    Variant::delivered().write(&folder);
    let host = folder.write(
        "host.html",
        "<!doctype html><html lang=en><title>host</title><iframe sandbox='allow-scripts allow-downloads' src='inward.html' width=1200 height=900></iframe>",
    );
    let page = Page::load(browser, &host);
    page.session().enter_frame("iframe").unwrap();
    page.wait_for("ready").unwrap();
    page.drop_files(&[DroppedFile { name: "maps.tsv", text: &maps() }]);
    page.wait_for_answer();
    assert!(page.pixels("#map-measured").bytes.iter().any(|&byte| byte > 0));
    assert_eq!(page.download_report()["maps"].as_array().unwrap().len(), 6);
}

fn caution_and_notices_are_shown(browser: Browser) {
    let page = Page::open(browser);
    let caution = page.text("#caution").to_lowercase();
    for word in ["research", "medical device"] {
        assert!(caution.contains(word), "{caution}");
    }
    page.click("#notices summary");
    page.until("the notices", |page| page.visible("#notices-shown") && page.text("#notices").len() > 1000);
    let notices = page.text("#notices");
    for word in ["wasm-bindgen", "ndarray", "MIT", "Apache"] {
        assert!(notices.contains(word), "the notices name {word}");
    }
}

in_both_browsers!(
    pasted_tables_are_answered,
    labels_alone_are_answered_with_a_note,
    picked_files_are_answered,
    files_dropped_one_by_one_are_told_apart,
    a_paste_outside_the_fields_is_answered,
    the_download_is_the_report,
    the_table_and_its_copy_tell_the_same_numbers,
    another_map_is_chosen,
    pictures_are_painted_and_nothing_beyond_the_electrodes,
    the_left_over_map_differs_from_the_measured_one,
    a_wrong_file_leaves_the_answer,
    a_table_without_a_known_label_fails_by_name,
    the_last_of_two_quick_pastes_wins,
    a_trap_is_a_failure_and_the_next_map_works,
    a_blocked_script_is_noticed,
    everything_works_by_keyboard,
    no_accessibility_findings,
    no_part_of_the_page_is_wider_than_the_window,
    a_long_run_is_cancelled_and_the_page_goes_on,
    it_works_in_a_frame_that_allows_scripts_and_downloads_alone,
    caution_and_notices_are_shown,
);
