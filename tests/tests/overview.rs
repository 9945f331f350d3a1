//! All maps of a decomposition: the list beside the answer, the table of all numbers and what is made of it.
use inward_core::read::{Body, Reading, read};
use inward_tests::{Browser, DroppedFile, Page, Surroundings, example};
use serde_json::{Value, json};

const DOWN: &str = "\u{E015}";
const LEFT: &str = "\u{E012}";
const HOME: &str = "\u{E011}";
const END: &str = "\u{E010}";
const ENTER: &str = "\u{E007}";

/// The maps of the watch, one of them told by a name that spreadsheets compute and one with the same value everywhere.
fn maps() -> String {
    let mut lines = Vec::new();
    for (at, line) in example("watch_maps.tsv").lines().enumerate() {
        let (names, value) =
            ("label\t=1+1,\"a\"\tengine room\tswell\ttwo horns\tsalt\tfog", if at == 0 { "flat" } else { "3" });
        lines.push(format!("{}\t{value}", if at == 0 { names } else { line }));
    }
    lines.join("\n")
}

fn watch(browser: Browser) -> Page {
    let page = Page::open(browser);
    page.drop_files(&[
        DroppedFile { name: "electrodes.tsv", text: &example("watch_electrodes.tsv") },
        DroppedFile { name: "maps.tsv", text: &maps() },
    ]);
    page.until("all maps", |page| page.rests() && page.exists("#ledger [data-index='6']"));
    page
}

/// Names of the listed maps, from top to bottom.
fn listed(page: &Page) -> Vec<String> {
    let script = "return [...document.querySelectorAll('#ledger [role=option]')].sort((a, b) => parseFloat(a.style.top) - parseFloat(b.style.top))\
                  .map((row) => row.querySelector('.ledger-name').textContent)";
    let found = page.value(script);
    found.as_array().unwrap().iter().map(|name| name.as_str().unwrap().into()).collect()
}

/// Name and residual variance of each fitted map, the smallest first.
fn by_rv(report: &Value) -> Vec<(String, f64)> {
    let maps = report["maps"].as_array().unwrap().iter();
    let mut found: Vec<(String, f64)> =
        maps.filter_map(|map| Some((map["name"].as_str()?.to_string(), map["residual_variance"].as_f64()?))).collect();
    found.sort_by(|a, b| a.1.total_cmp(&b.1));
    found
}

fn names(maps: &[(String, f64)]) -> Vec<String> {
    maps.iter().map(|(name, _)| name.clone()).collect()
}

fn choose(page: &Page, list: &str, value: &str) {
    page.ask(
        "const list = document.querySelector(arguments[0]); list.value = arguments[1]; list.dispatchEvent(new Event('change'))",
        &[json!(list), json!(value)],
    );
}

/// Grouped by bands of residual variance and sorted in them; chosen by keys and mouse; filtered; each with its picture.
fn maps_are_listed_and_chosen(browser: Browser) {
    let page = watch(browser);
    let report = page.report();
    let sorted = by_rv(&report);
    let all: Vec<String> = names(&sorted).into_iter().chain(["flat".into()]).collect();
    page.until("the list", |page| listed(page).len() == all.len());
    assert_eq!(listed(&page), all);
    let within = sorted.iter().filter(|(_, rv)| *rv <= 0.05).count();
    assert!((1..sorted.len()).contains(&within), "bands that differ");
    let groups = page.texts("#ledger .ledger-heading");
    assert_eq!(groups[0].replace('\u{a0}', " "), format!("At most 5 % · {within} maps"));
    assert_eq!(groups.last().unwrap().replace('\u{a0}', " "), "Not fitted · 1 map");
    assert!(page.text("#ledger [data-index='6']").contains("flat"), "the reason stands beside the name");
    assert!(page.text("#ledger [data-index='6'] .ledger-place").contains("value"));

    // By keys: to the first, one on, to the last, which is not fitted, and on to the answer.
    page.tab_to("#ledger");
    page.press(HOME);
    page.press(DOWN);
    page.until("the second", |page| page.text("#subject").starts_with(&all[1]));
    assert_eq!(page.text("#ledger [aria-selected='true'] .ledger-name"), all[1]);
    let active = page.attribute("#ledger", "aria-activedescendant");
    assert_eq!(page.attribute(&format!("#{active}"), "aria-posinset"), "2");
    assert_eq!(page.text("#map-step"), "2 of 7 in the list");
    page.press(END);
    page.until("the reason", |page| page.text("#sentence").starts_with("flat"));
    page.press(HOME);
    page.press(ENTER);
    assert_eq!(page.value("return document.activeElement.id"), json!("sentence"));
    // By typing the beginning of a name, or a number.
    page.focus("#ledger");
    page.press("tw");
    page.until("two horns", |page| page.text("#subject").starts_with("two horns"));
    // After a pause something else is typed.
    std::thread::sleep(std::time::Duration::from_secs(1));
    page.press("3");
    page.until("the third", |page| page.text("#subject").starts_with("swell"));
    // By mouse, and by the steps in the order of the list.
    page.click("#ledger [data-index='5']");
    page.until("the fog", |page| page.text("#subject").starts_with("fog"));
    page.click("#map-previous");
    page.until("the one before", |page| page.text("#subject").starts_with(&all[all.len() - 3]));

    // Filtered by number and by the slider.
    page.fill("#ledger-most", "5");
    page.until("the filter", |page| listed(page).len() == within + 1);
    assert!(page.text("#ledger-count").contains(&format!("{} of", within + 1)), "{}", page.text("#ledger-count"));
    page.focus("#ledger-slider");
    page.press(HOME);
    page.until("the least", |page| listed(page) == ["flat"]);
    page.press(END);
    page.until("all again", |page| listed(page) == all);
    page.press(LEFT);
    assert_ne!(page.attribute("#ledger-slider", "aria-valuetext"), "all maps");
    page.press(END);
    page.fill("#ledger-most", "many");
    assert_eq!(page.attribute("#ledger-most", "aria-invalid"), "true");
    page.fill("#ledger-most", " ");
    assert_eq!(page.attribute("#ledger-most", "aria-invalid"), "false");

    choose(&page, "#ledger-grouping", "none");
    choose(&page, "#ledger-order", "number");
    let table: Vec<String> =
        report["maps"].as_array().unwrap().iter().map(|m| m["name"].as_str().unwrap().into()).collect();
    page.until("the order of the table", |page| listed(page) == table);

    // Each map has its own picture; the one without a pattern has none.
    let coloured = |index: usize| {
        let map = page.pixels(&format!("#ledger [data-index='{index}'] canvas"));
        let all = (0..map.height).flat_map(|y| (0..map.width).map(move |x| (x, y)));
        (all.filter(|&(x, y)| map.coloured(x as f64, y as f64)).count(), map.bytes)
    };
    page.until("the pictures", |_| (0..6).all(|index| coloured(index).0 > 40));
    assert_ne!(coloured(0).1, coloured(1).1);
    assert_eq!(coloured(6).0, 0);
}

#[test]
fn maps_are_listed_and_chosen_in_chromium() {
    maps_are_listed_and_chosen(Browser::Chromium);
}

#[test]
fn maps_are_listed_and_chosen_in_firefox() {
    maps_are_listed_and_chosen(Browser::Firefox);
}

/// A map that is opened while all are fitted anew, under another setting, stays in view.
#[test]
fn a_map_opened_meanwhile_stays_in_view() {
    let page = watch(Browser::Chromium);
    let shown = page.text("#subject");
    page.value(
        "document.querySelector('#electrode-list input').click();\
         document.querySelector(\"#ledger [data-index='3']\").click()",
    );
    page.until("the setting", |page| {
        page.report()["electrodes"].as_array().unwrap().iter().filter(|electrode| electrode["used"] == false).count()
            == 1
    });
    page.until("rest", Page::rests);
    assert_ne!(shown, page.text("#subject"));
    assert!(page.text("#subject").starts_with("two horns"), "{}", page.text("#subject"));
    assert_eq!(page.attribute("#ledger [aria-selected=true]", "data-index"), "3");
}

/// Fields of a table of text as the engine reads them.
fn fields(name: &str, text: &str) -> Vec<Vec<String>> {
    let how = |_: &str| Reading { encoding: None, delimiter: None, unused: false };
    let contents = read(name, text.as_bytes(), how).unwrap_or_else(|why| panic!("{name}: {why:?}"));
    let Some(Body::Cells(cells)) =
        contents.into_iter().next().and_then(|(_, content)| content.parts.into_iter().next()).map(|part| part.body)
    else {
        panic!("{name} is no table of text")
    };
    (0..cells.height()).map(|row| cells.row(row).map(String::from).collect()).collect()
}

/// Sorted by its heads, copied as it stands, and in files with every bit, which the engine reads back.
#[test]
fn the_table_is_sorted_copied_and_read_back() {
    let page = watch(Browser::Chromium);
    let report = page.report();
    assert!(!page.exists("#table-panel[open]"), "folded at first");
    page.until("verdicts, which are a column", |page| {
        page.value("return document.querySelectorAll('#ledger .ledger-verdict:not([data-verdict=\"\"])').length")
            == json!(6)
    });
    page.click("#table-panel summary");
    page.until("the rows", |page| page.texts("#all-numbers tbody tr").len() == 7);
    page.click("#all-numbers [data-code='rv'] button");
    let sorted = by_rv(&report);
    let rows = || page.texts("#all-numbers tbody th");
    assert_eq!(rows()[..6], names(&sorted)[..]);
    assert_eq!(page.attribute("#all-numbers [data-code='rv']", "aria-sort"), "ascending");
    page.click("#all-numbers [data-code='rv'] button");
    assert_eq!(rows()[..6], names(&sorted).into_iter().rev().collect::<Vec<_>>()[..]);
    assert_eq!(rows()[6], "flat", "what has no number comes last either way");
    page.click("#all-numbers tbody tr:first-child button");
    page.until("the map of the first row", |page| page.text("#subject").starts_with(&rows()[0]));

    page.click("#table-copy");
    page.until("the copy", |page| page.clipboard().lines().count() == 8);
    let copied = page.clipboard();
    let first: Vec<&str> = copied.lines().nth(1).unwrap().split('\t').collect();
    assert_eq!(first.len(), page.texts("#all-numbers thead th").len());
    let shown = 100.0 * sorted[5].1;
    assert!((first[2].parse::<f64>().unwrap() - shown).abs() < 0.006 * shown, "{} for {shown}", first[2]);
    assert!(copied.contains("\t'=1+1,\"a\"\t"), "guarded: {copied}");
    assert!(page.text("#table-guard").contains("apostrophe"));

    let table: Value = serde_json::from_str(&page.download("#table-json", "inward-table.json")).unwrap();
    for (kind, button) in [("csv", "#table-csv"), ("tsv", "#table-tsv")] {
        let read = fields(kind, &page.download(button, &format!("inward-table.{kind}")));
        assert_eq!(read.len(), 8);
        let column = |name: &str| read[0].iter().position(|head| head == name).unwrap_or_else(|| panic!("no {name}"));
        for (at, map) in report["maps"].as_array().unwrap().iter().enumerate() {
            let row = &read[at + 1];
            let name = map["name"].as_str().unwrap();
            assert_eq!(row[column("name")], if at == 0 { format!("'{name}") } else { name.into() });
            assert_eq!(table["maps"][at]["name"], name);
            if at == 6 {
                assert_eq!(row[column("rv")], "");
                assert_eq!(row[column("not_fitted")], map["error"]["message"].as_str().unwrap());
                continue;
            }
            let dipole = &map["dipole"];
            let pairs = [
                ("rv", &map["residual_variance"]),
                ("x_mm", &dipole["canonical_mm"][0]),
                ("z_mm", &dipole["canonical_mm"][2]),
                ("depth_mm", &dipole["depth_mm"]),
                ("strength", &dipole["strength"]),
            ];
            for (head, value) in pairs {
                assert_eq!(
                    row[column(head)].parse::<f64>().unwrap().to_bits(),
                    value.as_f64().unwrap().to_bits(),
                    "{head}"
                );
                assert_eq!(&table["maps"][at][head], value);
            }
        }
    }
}

/// Nothing against the list, the table and two decompositions in any surroundings, and nothing sticks out where it is narrow.
#[test]
fn no_findings_in_list_and_table() {
    let page = Page::open(Browser::Chromium);
    page.drop_files(&[
        DroppedFile { name: "electrodes.tsv", text: &example("watch_electrodes.tsv") },
        DroppedFile { name: "first.tsv", text: &maps() },
        DroppedFile { name: "second.tsv", text: &example("watch_maps.tsv") },
    ]);
    page.until("two decompositions", |page| page.rests() && page.texts("#decomposition-list li").len() == 2);
    page.click("#table-panel summary");
    page.until("the rows", |page| page.exists("#all-numbers tbody tr"));
    page.click("#decomposition-list [aria-expanded]");
    for (name, surroundings) in [
        ("light", Surroundings::default()),
        ("dark", Surroundings { dark: true, ..Surroundings::default() }),
        ("forced colours", Surroundings { forced_colours: true, ..Surroundings::default() }),
        ("400 per cent", Surroundings { zoom: 4, ..Surroundings::default() }),
    ] {
        page.surround(surroundings);
        let mut found = page.accessibility_findings();
        // Of the person's own colours, contrast is the person's choice.
        found.retain(|line| !(surroundings.forced_colours && line.starts_with("color-contrast")));
        assert_eq!(found, Vec::<String>::new(), "{name}");
        assert_eq!(page.overhang(), json!(0), "{name}");
        page.picture(&format!("overview {name}"));
    }
    page.surround(Surroundings { print: true, ..Surroundings::default() });
    assert!(!page.visible("#overview") && page.visible("#all-numbers"), "on paper the open table without the list");
}

/// A single map needs neither list nor table.
#[test]
fn one_map_has_no_list() {
    let page = Page::open(Browser::Chromium);
    page.click("#empty [data-example='lamp']");
    page.wait_for_answer();
    for part in ["#overview", "#table-panel", "#decompositions", "#choice"] {
        assert!(!page.visible(part), "{part}");
    }
}
