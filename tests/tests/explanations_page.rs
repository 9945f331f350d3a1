//! Other explanations, influence, other heads and residual variance over the brain, on the page and by the keyboard: what is
//! shown is what the engine finds natively.
use inward_core::{Request, analyse};
use inward_tests::{Browser, Draw, DroppedFile, Page, Surroundings, example, in_both_browsers};
use serde_json::{Value, json};

const ENTER: &str = "\u{E007}";
const ESCAPE: &str = "\u{E00C}";
const RIGHT: &str = "\u{E014}";
const UP: &str = "\u{E013}";
const PAGE_UP: &str = "\u{E00E}";

/// Fewer draws than usual, set on the page.
const DRAWS: usize = 1000;

/// The map of the watch with two sources at mirrored places.
const HORNS: usize = 3;

const PLAIN: Surroundings =
    Surroundings { dark: false, forced_colours: false, reduced_motion: false, print: false, zoom: 1 };

/// The watch with its two horns in view.
fn two_horns(browser: Browser) -> Page {
    let page = Page::with_watch(browser);
    page.value("document.querySelector('#trust-settings').open = true");
    page.fill("#set-sources-draws", &DRAWS.to_string());
    page.value("document.querySelector('#trust-settings').open = false");
    page.click(&format!("#ledger [data-index='{HORNS}']"));
    page.until("a verdict of few draws", |page| {
        page.text("#subject").starts_with("two horns")
            && page.texts("#population-table td").first().is_some_and(|count| *count == "1,000")
            && page.attribute("#verdict-said", "data-verdict") == "not-dipolar"
    });
    page
}

/// The same natively.
fn native() -> Value {
    let assess = json!(["region", "populations", "alternatives", "verdict", "influence", "what_if"]);
    let (electrodes, maps) = (example("watch_electrodes.tsv"), example("watch_maps.tsv"));
    let report = analyse(&Request {
        electrodes: Some(electrodes.as_bytes()),
        maps: maps.as_bytes(),
        settings: serde_json::from_value(json!({ "assess": assess, "sources": { "draws": DRAWS } })).unwrap(),
        ..Request::default()
    });
    serde_json::to_value(report.unwrap()).unwrap()["maps"][HORNS].clone()
}

/// Opens a panel by the keyboard, from the tab stop before it on; the focus must be seen.
fn open(page: &Page, from: &str, panel: &str) {
    page.focus(from);
    page.tab_to(&format!("{panel} > summary"));
    let outline = "const s = getComputedStyle(document.activeElement); return s.outlineStyle !== 'none' && parseFloat(s.outlineWidth) >= 2";
    assert_eq!(page.value(outline), json!(true), "{panel}: the focus is seen");
    page.press(ENTER);
    page.until("the panel", |page| {
        page.value(&format!("return document.querySelector('{panel}').open")) == json!(true)
    });
}

/// Pictures that follow the dipole.
fn followers(page: &Page) -> [Vec<u8>; 3] {
    page.settle();
    ["#map-projected", "#slice-above", "#slice-behind"].map(|canvas| page.pixels(canvas).bytes)
}

/// Slices are moved through, and the dipole with them; what is not kept goes back.
fn the_dipole_is_moved_by_keys(page: &Page) {
    open(page, "#region-cloud", "#slices");
    page.until("slices", |page| page.text("#slices-sentence").starts_with("Least residual variance"));
    page.tab_to("#slice-above");
    let (sentence, best) = (page.text("#sentence"), followers(page));
    assert!(page.pixels("#slice-above").colours() > 50);
    assert!(!page.visible("#by-hand") && !page.visible("#hand"));
    let moved = |page: &Page, keys: &str, from: &[Vec<u8>; 3]| {
        page.press(keys);
        page.until("the dipole by hand", |page| page.text("#slice-readout").starts_with("By hand, not the best fit"));
        page.until("maps and slices that follow", |page| {
            followers(page).iter().zip(from).all(|(now, before)| now != before)
        });
        assert!(page.visible("#by-hand") && page.visible("#map-by-hand") && page.texts("#hand-rows tr").len() >= 4);
        assert_eq!(page.text("#sentence"), sentence, "the answer stays that of the best fit");
        page.text("#slice-readout")
    };
    let back = |page: &Page| {
        page.until("the best fit", |page| !page.visible("#by-hand") && !page.visible("#hand"));
        page.until("maps and slices of the best fit", |page| followers(page) == best);
    };
    let there = moved(page, UP, &best);
    assert_ne!(moved(page, PAGE_UP, &followers(page)), there, "from where it was, not from the best place");
    page.press(ESCAPE);
    back(page);
    assert_eq!(page.value("return document.activeElement.id"), json!("slice-above"));

    // Something else is looked at.
    moved(page, UP, &best);
    page.focus("#sentence");
    back(page);
    page.focus("#slice-above");
    moved(page, RIGHT, &best);
    page.tab_to("#hand-keep");
    page.press(ENTER);
    page.focus("#sentence");
    page.settle();
    assert!(page.visible("#by-hand"), "kept for looking");
    page.focus("#slice-left");
    page.tab_to("#hand-back");
    page.press(ENTER);
    back(page);

    // Pointing moves nothing.
    page.hover("#slice-above", 20, -20);
    page.until("what is pointed at", |page| page.text("#slice-readout").contains("mm away"));
    assert!(!page.visible("#by-hand"));
    page.hover("#sentence", 0, 0);
    page.until("the hint", |page| page.text("#slice-readout").starts_with("Point at a place"));

    // A click takes the dipole along.
    page.click_at("#slice-left", 15, -15);
    page.until("the dipole by hand", |page| {
        page.visible("#by-hand") && followers(page).iter().zip(&best).all(|(now, before)| now != before)
    });
    page.press(ESCAPE);
    back(page);
}

fn panels_are_worked_by_keyboard(browser: Browser) {
    let page = two_horns(browser);
    let map = native();
    the_dipole_is_moved_by_keys(&page);

    // Other explanations are looked for, and the verdict takes notice of them.
    page.focus("#slices > summary");
    page.tab_to("#explain");
    page.press(ENTER);
    page.until("other explanations", |page| page.visible("#alternatives-found"));
    assert_eq!(page.value("return document.activeElement.id"), json!("alternatives-sentence"));
    for one in map["alternatives"].as_array().unwrap() {
        let kind = one["kind"].as_str().unwrap();
        assert_eq!(
            page.attribute(&format!("#alternatives-table [data-kind={kind}]"), "data-decision"),
            one["decision"]
        );
    }
    assert_eq!(page.attribute("#alternatives-table [data-kind=mirrored-pair]", "data-decision"), "preferred");
    page.until("the verdict", |page| page.attribute("#verdict-said", "data-verdict") == "paired");
    assert!(page.text("#verdict-said").starts_with("Paired"));
    page.until("the list", |page| page.attribute(&format!("#map-{HORNS} .ledger-verdict"), "data-verdict") == "paired");
    let pair = page.pixels("#view-behind").bytes;
    page.click("#region-mirrored-pair");
    page.settle();
    assert_ne!(page.pixels("#view-behind").bytes, pair, "the pair is drawn and can be taken away");

    open(&page, "#copy-alternatives", "#influence");
    let influence = map["influence"].as_array().unwrap();
    page.until("electrodes", |page| page.texts("#influence-table tbody tr").len() == 8);
    page.tab_to("#influence-more");
    page.press(ENTER);
    let labels = page.texts("#influence-table tbody th");
    assert_eq!(labels.len(), influence.len());
    let farthest = influence.iter().max_by(|a, b| a["shift_mm"].as_f64().partial_cmp(&b["shift_mm"].as_f64()).unwrap());
    assert_eq!(labels[0], farthest.unwrap()["label"].as_str().unwrap());

    open(&page, "#influence-more", "#what-if");
    let changes = map["what_if"].as_array().unwrap();
    page.until("other heads", |page| page.texts("#what-if-table tbody tr").len() == changes.len());
    for one in changes {
        let told =
            page.texts(&format!("#what-if-table [data-change='{}'] .bar-value", one["change"].as_str().unwrap()));
        let shift: f64 = told[0].parse().unwrap();
        assert!((shift - one["shift_mm"].as_f64().unwrap()).abs() <= 0.0501, "{told:?} for {one}");
    }

    // The report tells what is known of the map in view, and of no other.
    let report = page.report();
    let told = &report["maps"][HORNS];
    assert_eq!(told["verdict"]["word"], "paired");
    for key in ["alternatives", "influence", "what_if"] {
        assert_eq!(told[key].as_array().unwrap().len(), map[key].as_array().unwrap().len(), "{key}");
        assert!(report["maps"][0][key].is_null(), "{key}");
    }

    assert_eq!(page.accessibility_findings(), Vec::<String>::new());
    page.picture("explanations");
    page.surround(Surroundings { print: true, ..PLAIN });
    for shown in [
        "#slices h3",
        "#slice-left",
        "#alternatives-table",
        "#influence-figure svg",
        "#influence-table",
        "#what-if-table",
    ] {
        assert!(page.visible(shown), "{shown} is printed");
    }
    for hidden in ["#explain", "#slices > summary", "#what-if > summary", "#influence-more", "#slices-how"] {
        assert!(!page.visible(hidden), "{hidden} is not printed");
    }
    page.surround(Surroundings { dark: true, zoom: 4, ..PLAIN });
    assert_eq!(page.overhang(), json!(0), "320 CSS pixels, all panels open");
    assert_eq!(page.accessibility_findings(), Vec::<String>::new());
    page.picture("explanations-narrow");
}

/// A search that is given up leaves nothing behind, and can be made again.
#[test]
fn a_search_is_given_up() {
    let page = Page::open(Browser::Chromium);
    page.click("#empty [data-example='lamp']");
    page.wait_for_answer();
    page.until("the panel", |page| page.visible("#explain"));
    let at_once = "document.querySelector('#explain').click();\
                   const shown = !document.querySelector('#explaining').hidden && document.activeElement.id;\
                   document.querySelector('#explain-stop').click(); return [shown, document.activeElement.id]";
    assert_eq!(page.value(at_once), json!(["explain-stop", "explain"]));
    std::thread::sleep(std::time::Duration::from_secs(2));
    assert!(page.visible("#explain") && !page.visible("#explaining") && !page.visible("#alternatives-found"));
    page.press(ENTER);
    page.until("other explanations", |page| page.visible("#alternatives-found"));
}

/// An electrode with noise of its own is named, shown, and left out from there.
fn a_bad_electrode_is_named(browser: Browser) {
    let mut draw = Draw::from(3);
    let table = example("night_independent.tsv");
    let noisy = |line: &str| {
        let mut cells: Vec<String> = line.split('\t').map(str::to_owned).collect();
        if cells[0] == "C4" {
            for cell in &mut cells[1..] {
                *cell = format!("{:.3}", cell.parse::<f64>().unwrap() + 1.5 * draw.normal());
            }
        }
        cells.join("\t")
    };
    let lines: Vec<String> = table.lines().map(noisy).collect();
    let page = Page::open(browser);
    page.drop_files(&[DroppedFile { name: "night.tsv", text: &lines.join("\n") }]);
    page.until("an answer", Page::rests);
    page.until("an electrode to check", |page| page.visible("#suspects"));
    assert_eq!(page.text("#suspects > summary"), "Check this electrode: C4.");
    let report = page.report();
    assert_eq!(report["suspects"][0]["label"], "C4");
    assert_eq!(report["suspects"].as_array().unwrap().len(), 1);
    open(&page, "#table-panel > summary", "#suspects");
    assert!(page.text("#suspects-lines").contains("near-dipolar maps"));
    assert_eq!(page.accessibility_findings(), Vec::<String>::new());
    page.tab_to("#suspects-lines button");
    page.press(ENTER);
    page.until("an answer without it", |page| page.rests() && !page.visible("#suspects"));
    assert_eq!(page.value("return document.activeElement.id"), json!("ledger"));
    let out = page.report_when("the report without it", |report| {
        report["electrodes"].as_array().unwrap().iter().any(|one| one["label"] == "C4" && one["used"] == false)
    });
    assert_eq!(out["suspects"], json!([]));
}

/// What cannot be told is refused in words; of a map that cannot be fitted nothing is told.
#[test]
fn too_little_is_refused() {
    const TWELVE: [&str; 12] = ["Fp1", "Fp2", "F3", "F4", "C3", "C4", "P3", "P4", "O1", "O2", "T7", "T8"];
    let table = example("night_independent.tsv");
    let rows = table.lines().skip(1).map(|line| line.split('\t').collect::<Vec<_>>());
    let rows = rows.filter(|row| TWELVE.contains(&row[0])).map(|row| format!("{}\t{}\t0\n", row[0], row[1]));
    let page = Page::open(Browser::Chromium);
    page.drop_files(&[DroppedFile {
        name: "few.tsv",
        text: &format!("label\tgood\tflat\n{}", rows.collect::<String>()),
    }]);
    page.until("an answer", Page::rests);
    page.until("the panel", |page| page.visible("#explain"));
    page.value("for (const id of ['slices', 'influence', 'what-if']) document.querySelector(`#${id}`).open = true");
    page.click("#explain");
    page.until("other explanations", |page| page.visible("#alternatives-found"));
    let refused =
        page.texts("#alternatives-lines li").iter().filter(|text| text.contains("from so few electrodes")).count();
    assert_eq!(refused, 2);
    page.until("influence", |page| page.text("#influence-sentence").starts_with("The fit hangs on single electrodes"));
    page.click("#ledger [data-index='1']");
    page.until("the flat map", |page| page.text("#subject").starts_with("flat"));
    for panel in ["#slices", "#influence", "#what-if", "#alternatives"] {
        assert!(!page.visible(panel), "{panel} of a map that cannot be fitted");
    }
    assert_eq!(page.accessibility_findings(), Vec::<String>::new());
    page.click("#ledger [data-index='0']");
    page.until("the first map's panels", |page| {
        page.visible("#alternatives-found") && page.text("#slices-sentence").starts_with("Least residual variance")
    });
}

in_both_browsers!(panels_are_worked_by_keyboard, a_bad_electrode_is_named);
