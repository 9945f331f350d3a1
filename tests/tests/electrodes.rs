//! Electrodes on the page: pointed at, left out and taken back, by mouse and by keyboard.
use inward_tests::{Browser, Page, in_both_browsers};
use serde_json::Value;
use std::collections::HashMap;

/// A page with the example that has one noisy electrode.
fn salt(browser: Browser) -> Page {
    let page = Page::open(browser);
    page.click("#empty [data-example='salt']");
    page.wait_for_answer();
    page
}

fn number(value: &Value) -> f64 {
    value.as_f64().unwrap_or_else(|| panic!("{value} is a number"))
}

fn rv(report: &Value) -> f64 {
    number(&report["maps"][0]["residual_variance"])
}

fn used(report: &Value) -> usize {
    report["electrodes"].as_array().unwrap().iter().filter(|electrode| electrode["used"] == true).count()
}

/// The report once so many electrodes are used.
fn report_with(page: &Page, count: usize) -> Value {
    let mut report = Value::Null;
    page.until(&format!("an answer from {count} electrodes"), |page| {
        if page.state() != "answered" || !page.text("#electrodes-out").contains(&format!("{count} ")) {
            return false;
        }
        report = page.report();
        used(&report) == count
    });
    report
}

fn residuals(report: &Value) -> HashMap<String, f64> {
    let labels = report["electrodes"].as_array().unwrap().iter().filter(|electrode| electrode["used"] == true);
    let values = report["maps"][0]["residual"].as_array().unwrap();
    labels.map(|electrode| electrode["label"].as_str().unwrap().to_owned()).zip(values.iter().map(number)).collect()
}

/// Labels of the list from top to bottom.
fn listed(page: &Page) -> Vec<String> {
    page.texts("#electrode-table tbody th")
}

fn box_of(label: &str) -> String {
    format!("#electrode-table tbody tr[data-label='{label}'] input")
}

/// Goes to an electrode's box with the mouse and clicks.
fn tick(page: &Page, label: &str) {
    page.hover(&box_of(label), 0, 0);
    page.settle();
    page.click(&box_of(label));
}

/// Marks each row with its label, so that selectors can name it.
fn name_rows(page: &Page) {
    page.value("for (const row of document.querySelectorAll('#electrode-table tbody tr')) row.dataset.label = row.querySelector('th').innerText.trim()");
}

/// The list sorts by misfit: its order is that of the report's left-over values; each row tells the map's values.
fn the_list_is_sorted_by_misfit_and_tells_the_values(browser: Browser) {
    let page = salt(browser);
    let report = page.report();
    let left = residuals(&report);
    let order = listed(&page);
    assert_eq!(order.len(), 70);
    assert_eq!(order[0], "P6", "the noisy one first: {order:?}");
    for pair in order.windows(2) {
        assert!(left[&pair[0]].abs() >= left[&pair[1]].abs(), "{pair:?}");
    }
    let rows = page.value("return [...document.querySelectorAll('#electrode-table tbody tr')].map((row) => [...row.children].map((cell) => cell.innerText.trim()))");
    let labels: Vec<&str> =
        report["electrodes"].as_array().unwrap().iter().map(|e| e["label"].as_str().unwrap()).collect();
    let total: f64 = left.values().map(|x| x * x).sum();
    let read = |text: &str| {
        text.replace('\u{2212}', "-")
            .replace(['+', '%'], "")
            .trim()
            .parse::<f64>()
            .unwrap_or_else(|_| panic!("{text:?} is a number"))
    };
    for row in rows.as_array().unwrap() {
        let cells: Vec<&str> = row.as_array().unwrap().iter().map(|cell| cell.as_str().unwrap()).collect();
        let at = labels.iter().position(|label| *label == cells[0]).unwrap();
        for (cell, key) in cells[1..4].iter().zip(["measured", "projected", "residual"]) {
            let value = number(&report["maps"][0][key][at]);
            // Half of the last digit shown: two places at most below one, coarser above.
            assert!(
                (read(cell) - value).abs() <= 0.051 + 0.01 * value.abs(),
                "{key} at {}: {cell} for {value}",
                cells[0]
            );
        }
        let share = 100.0 * left[cells[0]].powi(2) / total;
        match cells[4].strip_prefix("under ") {
            Some(bound) => assert!(share < read(bound), "share at {}: {} for {share}", cells[0], cells[4]),
            None => assert!((read(cells[4]) - share).abs() <= 0.51, "share at {}: {} for {share}", cells[0], cells[4]),
        }
    }
    page.click("input[name=electrode-order][value=table]");
    assert_eq!(listed(&page), labels);
    page.click("input[name=electrode-order][value=label]");
    let mut alphabetical = listed(&page);
    let shown = alphabetical.clone();
    alphabetical.sort_by_key(|label| label.trim_end_matches(|c: char| c.is_ascii_digit()).to_lowercase());
    assert_eq!(shown[0], alphabetical[0]);
    assert_ne!(shown, labels);
}

/// Left out by a click on the map, by its box and by keys on the map; the numbers follow, and come back to the last bit.
fn left_out_and_taken_back_in_every_way(browser: Browser) {
    let page = salt(browser);
    let before = page.report();
    let picture = page.pixels("#map-measured").bytes;
    name_rows(&page);

    // By its box in the list, with the mouse.
    tick(&page, "P6");
    let without = report_with(&page, 69);
    assert!(rv(&without) < 0.015 && rv(&before) > 0.08, "{} instead of {}", rv(&without), rv(&before));
    assert!(!residuals(&without).contains_key("P6"));
    let told = page.text("#sentence").replace('\u{a0}', " ");
    assert!(told.contains("62 degrees of freedom"), "{told}");
    let explained = 100.0 * number(&without["maps"][0]["variance_explained"]);
    assert!([1, 2].iter().any(|&digits| told.contains(&format!("{explained:.digits$} %"))), "{explained}: {told}");
    page.settle();
    assert_ne!(page.pixels("#map-measured").bytes, picture);
    page.picture("left-out");
    let none: Vec<String> = Vec::new();
    assert_eq!(page.accessibility_findings(), none, "with an electrode left out");
    tick(&page, "P6");
    let again = report_with(&page, 70);
    assert_eq!(again["maps"], before["maps"]);
    assert_eq!(again["electrodes"], before["electrodes"]);

    // By its box with the keyboard.
    page.session().mouse_away().unwrap();
    page.tab_to("#electrode-table input");
    let first = page.value("return document.activeElement.closest('tr').querySelector('th').innerText.trim()");
    page.press("\u{E015} ");
    let without = report_with(&page, 69);
    let gone: Vec<&Value> = without["electrodes"].as_array().unwrap().iter().filter(|e| e["used"] == false).collect();
    assert_ne!(gone[0]["label"], first, "the arrow key went on");
    page.press(" ");
    assert_eq!(report_with(&page, 70)["maps"], before["maps"]);

    // On the map with the keyboard: the first to be pointed at is the largest value.
    let said = |page: &Page| {
        page.value("return document.querySelector('#electrode-said').textContent").as_str().unwrap().to_owned()
    };
    page.focus("#main");
    page.tab_to("#map-measured");
    page.press("\u{E014}\u{E012}");
    page.until("the electrode in words", |page| !said(page).is_empty());
    let words = said(&page);
    let label = words.split(':').next().unwrap().to_owned();
    assert!(residuals(&before).contains_key(&label), "{words:?} begins with a label");
    page.press(" ");
    let without = report_with(&page, 69);
    assert!(!residuals(&without).contains_key(&label), "{label} is left out");
    assert!(
        said(&page).contains("left out") || said(&page).contains("69"),
        "told to a screen reader: {:?}",
        said(&page)
    );
    page.press(" ");
    assert_eq!(report_with(&page, 70)["maps"], before["maps"]);

    // By a click on the map, where the dot is.
    let (x, y) = dot(&page, &before, "P6");
    page.click_at("#map-measured", x, y);
    let without = report_with(&page, 69);
    assert!(!residuals(&without).contains_key("P6"));
    page.click_at("#map-measured", x, y);
    assert_eq!(report_with(&page, 70)["maps"], before["maps"]);

    // Several, and all back at once.
    name_rows(&page);
    let mut without = Value::Null;
    for (label, count) in [("Cz", 69), ("P6", 68), ("Oz", 67)] {
        tick(&page, label);
        without = report_with(&page, count);
    }
    assert_eq!(without["maps"][0]["degrees_of_freedom"], 60);
    page.click("#electrodes-back");
    assert_eq!(report_with(&page, 70)["maps"], before["maps"]);
    page.value("document.activeElement.blur(); document.querySelector('#map-measured').blur()");
    page.session().mouse_away().unwrap();
    page.settle();
    assert_eq!(page.pixels("#map-measured").bytes, picture, "and the picture is the same");
}

/// Where an electrode's dot is on the measured map, in CSS pixels from the canvas's middle: azimuthal equidistant with
/// the rim at 120° and 20 pixels around it.
fn dot(page: &Page, report: &Value, label: &str) -> (i64, i64) {
    let electrode = report["electrodes"].as_array().unwrap().iter().find(|e| e["label"] == label).unwrap();
    let d: [f64; 3] =
        std::array::from_fn(|k| number(&electrode["position_mm"][k]) - number(&report["head"]["centre_mm"][k]));
    let level = d[0].hypot(d[1]);
    let r = level.atan2(d[2]).to_degrees() / 120.0;
    let half = number(&page.value(
        "const c = document.querySelector('#map-measured'); return Math.min(c.clientWidth, c.clientHeight) / 2",
    )) - 20.0;
    ((half * r * d[0] / level).round() as i64, (-half * r * d[1] / level).round() as i64)
}

/// Pointing with the mouse, or the focus, tells label and the three values.
fn pointing_tells_label_and_values(browser: Browser) {
    let page = salt(browser);
    let report = page.report();
    let hint = page.text("#electrode-readout");
    let painted = page.pixels("#map-residual").bytes;
    let (x, y) = dot(&page, &report, "P6");
    page.hover("#map-residual", x, y);
    page.until("the values at P6", |page| page.text("#electrode-readout").contains("P6"));
    let told = page.text("#electrode-readout");
    let at = report["electrodes"].as_array().unwrap().iter().position(|e| e["label"] == "P6").unwrap();
    for key in ["measured", "projected", "residual"] {
        let value = number(&report["maps"][0][key][at]);
        let forms = [format!("{:.2}", value.abs()), format!("{:.1}", value.abs())];
        assert!(forms.iter().any(|form| told.contains(form)), "{key} {value} in {told:?}");
    }
    assert!(told.contains('%'), "the share of what is left over: {told:?}");
    page.settle();
    assert_ne!(page.pixels("#map-residual").bytes, painted, "the electrode is marked");
    page.session().mouse_away().unwrap();
    page.until("the hint again", |page| page.text("#electrode-readout") == hint);
    page.focus("#electrode-table input");
    page.until("the values of the first row", |page| page.text("#electrode-readout").contains("P6"));
}

/// So many left out that nothing can be fitted: the page says so beside the list and the way back is there.
fn too_few_are_refused_and_the_answer_stays(browser: Browser) {
    let page = salt(browser);
    let before = page.report();
    let sentence = page.text("#sentence");
    page.value("for (const box of [...document.querySelectorAll('#electrode-table input')].slice(0, 62)) box.click()");
    page.until("the refusal", |page| page.visible("#electrode-problem") && page.state() != "busy");
    assert!(page.text("#electrode-problem-text").ends_with('.'));
    assert!(page.visible("#answer"));
    page.click("#electrode-restore");
    page.until("no refusal", |page| page.state() == "answered" && !page.visible("#electrode-problem"));
    let count = used(&page.report());
    assert!((10..=70).contains(&count), "{count}");
    if page.visible("#electrodes-back") {
        page.click("#electrodes-back");
    }
    assert_eq!(report_with(&page, 70)["maps"], before["maps"]);
    assert_eq!(page.text("#sentence"), sentence);
}

in_both_browsers!(
    the_list_is_sorted_by_misfit_and_tells_the_values,
    left_out_and_taken_back_in_every_way,
    pointing_tells_label_and_values,
    too_few_are_refused_and_the_answer_stays,
);
