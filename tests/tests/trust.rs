//! How far to trust a fit, on the page: verdicts, region and reference populations are those that the engine finds natively.
use inward_core::{Request, analyse};
use inward_tests::{Browser, Node, Page, example, in_both_browsers};
use serde_json::{Value, json};

#[test]
fn outlines_densities_and_lists_are_right() {
    let printed = Node::with_engine()
        .run("js/trust.test.mjs", &["--test-reporter=spec"], "")
        .unwrap_or_else(|why| panic!("{why}"));
    assert!(printed.contains("pass 8") && printed.contains("fail 0"), "{printed}");
}

/// Fewer draws than usual, set on the page.
const DRAWS: usize = 1000;

/// The watch with all verdicts told.
fn judged(browser: Browser) -> Page {
    let page = Page::with_watch(browser);
    page.value("document.querySelector('#trust-settings').open = true");
    page.fill("#set-sources-draws", "20");
    assert_eq!(page.attribute("#set-sources-draws", "aria-invalid"), "true", "too few are not taken");
    page.fill("#set-sources-draws", &DRAWS.to_string());
    page.until("verdicts of all draws", |page| {
        page.value("return document.querySelectorAll('#ledger .ledger-verdict:not([data-verdict=\"\"])').length")
            == json!(6)
            && !page.visible("#drawing-line")
            && page.texts("#population-table td").first().is_some_and(|count| *count == "1,000")
    });
    page
}

/// The same natively.
fn native() -> Value {
    let settings = json!({ "assess": ["region", "populations", "verdict"], "sources": { "draws": DRAWS } });
    let (electrodes, maps) = (example("watch_electrodes.tsv"), example("watch_maps.tsv"));
    let report = analyse(&Request {
        electrodes: Some(electrodes.as_bytes()),
        maps: maps.as_bytes(),
        settings: serde_json::from_value(settings).unwrap(),
        ..Request::default()
    });
    serde_json::to_value(report.unwrap()).unwrap()
}

/// As the report writes it: the page sets signs and blanks for the eye.
fn plain(text: &str) -> String {
    text.replace('\u{a0}', " ").replace('\u{2212}', "-").replace('\u{2019}', "'").trim().to_owned()
}

fn number(text: &str) -> f64 {
    text.replace(',', "").parse().unwrap_or_else(|_| panic!("{text} is a number"))
}

fn choose(page: &Page, list: &str, value: &str) {
    page.ask(
        "const list = document.querySelector(arguments[0]); list.value = arguments[1]; list.dispatchEvent(new Event('change'))",
        &[json!(list), json!(value)],
    );
}

fn what_is_told_is_what_the_engine_finds(browser: Browser) {
    let page = judged(browser);
    let report = native();
    let maps = report["maps"].as_array().unwrap();
    let words: Vec<&str> = maps.iter().map(|map| map["verdict"]["word"].as_str().unwrap()).collect();
    assert!(words.contains(&"dipolar") && words.contains(&"not-dipolar"), "{words:?}");

    // In the list, grouped, filtered, and in a file.
    for (at, word) in words.iter().enumerate() {
        assert_eq!(page.attribute(&format!("#map-{at} .ledger-verdict"), "data-verdict"), *word);
    }
    choose(&page, "#ledger-grouping", "verdict");
    let count = |word: &str| words.iter().filter(|one| **one == word).count();
    let first = plain(&page.texts("#ledger .ledger-heading")[0]);
    assert!(first.starts_with(&format!("Dipolar · {} map", count("dipolar"))), "{first}");
    choose(&page, "#ledger-verdict", "not-dipolar");
    let listed = page.value("return document.querySelectorAll('#ledger [role=option]').length");
    assert_eq!(listed, json!(count("not-dipolar")));
    choose(&page, "#ledger-verdict", "");
    page.value("document.querySelector('#table-panel').open = true");
    page.until("the table", |page| page.exists("#all-numbers tbody tr"));
    let table = page.download("#table-tsv", "inward-table.tsv");
    let rows: Vec<Vec<&str>> = table.lines().map(|line| line.split('\t').collect()).collect();
    let column = rows[0].iter().position(|head| *head == "verdict").unwrap();
    assert_eq!(rows[1..].iter().map(|row| row[column]).collect::<Vec<_>>(), words);
    page.value("document.querySelector('#table-panel').open = false");

    // Of the map in view: verdict, reasons, region, populations.
    let name = page.text("#subject").split(" · ").next().unwrap().to_owned();
    let map = maps.iter().find(|map| map["name"] == name.as_str()).unwrap();
    assert_eq!(plain(&page.text("#verdict-said")), map["verdict"]["text"].as_str().unwrap());
    let reasons: Vec<String> = page.texts("#verdict-reasons li").iter().map(|text| plain(text)).collect();
    let known: Vec<&str> =
        map["verdict"]["reasons"].as_array().unwrap().iter().map(|reason| reason["text"].as_str().unwrap()).collect();
    assert_eq!(reasons, known);
    let volume = page.text("#region-rows [data-code=volume_ml] .value");
    let (told, known) =
        (number(plain(&volume).split(' ').next().unwrap()), map["region"]["volume_ml"].as_f64().unwrap());
    assert!((told - known).abs() <= 0.051 * known, "{told} for {known}");
    assert_eq!(page.texts("#cause-table tbody tr").len(), map["region"]["from"].as_array().unwrap().len());
    let among = map["populations"].as_array().unwrap();
    for (at, population) in report["populations"].as_array().unwrap().iter().enumerate() {
        let kind = population["kind"].as_str().unwrap();
        let cells = page.texts(&format!("#population-table [data-kind={kind}] td"));
        let shown = [number(&cells[1]), number(&cells[3])];
        let known =
            [&population["rv_percentiles"]["50"], &among[at]["share_lower_rv"]].map(|v| 100.0 * v.as_f64().unwrap());
        for (shown, known) in shown.into_iter().zip(known) {
            assert!((shown - known).abs() <= 0.0501f64.max(0.006 * known), "{kind}: {shown} for {known}");
        }
    }

    // Figures: each with the rule beside it, on the page and in its file.
    let rule = report["populations"][0]["rule"].as_str().unwrap();
    assert!(page.texts("#trust .population-rule").iter().all(|text| plain(text) == plain(rule)));
    for (tools, file) in
        [("#curve-tools", "inward-reference-populations.svg"), ("#density-tools", "inward-eccentricity.svg")]
    {
        let figure = page.svg(tools, file);
        for part in ["pointing anywhere", "two dipoles", "this map"] {
            assert!(figure.contains(part), "{file} has {part:?}");
        }
    }

    // In the views: each mark can be taken away and comes back.
    let whole = page.pixels("#view-above").bytes;
    for mark in ["#region-cloud", "#region-errors", "#region-noise"] {
        page.click(mark);
        page.settle();
        assert_ne!(page.pixels("#view-above").bytes, whole, "{mark}");
        page.click(mark);
        page.settle();
        assert_eq!(page.pixels("#view-above").bytes, whole, "{mark}");
    }
    assert_eq!(page.accessibility_findings(), Vec::<String>::new());
    page.picture("trust");

    // Limits decide: with another one no map is ruled out; the way back is one click.
    page.fill("#set-limits-ruledOut", "1");
    page.until("no map ruled out", |page| {
        !page.texts("#ledger .ledger-verdict").iter().any(|text| text.contains("not dipolar"))
            && page.texts("#ledger .ledger-verdict").iter().all(|text| !text.is_empty())
    });
    page.click("#trust-defaults");
    page.until("defaults", |page| page.value("return document.querySelector('#set-sources-draws').value") == json!(""));
}

/// Drawing is told of, stopped and gone on with.
#[test]
fn drawing_stops_and_goes_on() {
    let page = Page::open(Browser::Chromium);
    page.click("#empty [data-example='lamp']");
    page.wait_for_answer();
    page.until("drawing", |page| page.visible("#draw-stop"));
    page.click("#draw-stop");
    page.until("stopped", |page| page.visible("#draw-go"));
    let told = || page.text("#drawn");
    let drawn = |text: &str| number(text.split(" of ").next().unwrap());
    page.settle();
    let stopped = told();
    std::thread::sleep(std::time::Duration::from_millis(700));
    assert_eq!(told(), stopped, "nothing is drawn meanwhile");
    assert!(drawn(&stopped) < 60_000.0, "{stopped}");
    page.click("#draw-go");
    page.until("more", |page| !page.visible("#drawing-line") || drawn(&page.text("#drawn")) > drawn(&stopped));
}

in_both_browsers!(what_is_told_is_what_the_engine_finds);
