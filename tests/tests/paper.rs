//! What leaves the page as a report: on paper, page by page, and as one file without a script.
use inward_tests::{Browser, DroppedFile, Page, Paper, Surroundings, example, in_both_browsers};
use scraper::Html;
use serde_json::json;
use std::borrow::Cow;

/// Three maps with names of files that nobody else is to read.
fn answered(browser: Browser) -> Page {
    let page = Page::open(browser);
    let maps: String = example("watch_maps.tsv")
        .lines()
        .map(|line| line.split('\t').take(4).collect::<Vec<_>>().join("\t") + "\n")
        .collect();
    page.drop_files(&[
        DroppedFile { name: "sub-Brown_electrodes.tsv", text: &example("watch_electrodes.tsv") },
        DroppedFile { name: "sub-Brown_maps.tsv", text: &maps },
    ]);
    page.until("an answer", Page::rests);
    page.wait_for_verdict();
    page
}

/// Asks for a report and waits until it is made; what is printed stays in place until the printer is done.
fn ask(page: &Page, button: &str) {
    page.value("window.printed = 0; window.print = () => { window.printed++; window.called = document.title }");
    page.click(button);
    page.until("a report", |page| page.text("#leaving-status") == "The report is ready.");
}

/// What is in the report that is being printed.
fn printed(page: &Page) -> String {
    page.until("paper", |page| page.value("return window.printed") == json!(1));
    page.value("return document.querySelector('#report').textContent").as_str().unwrap().to_owned()
}

/// Each sheet has its words as text, not as outlines: what a person searches for or copies.
fn text_can_be_selected(page: &Page, text: &str, paper: &Paper) {
    let last = paper.pages() - 1;
    let is_sum = |word: &&str| word.len() == 64 && word.chars().all(|c| c.is_ascii_hexdigit());
    let sum = text.split(|c: char| !c.is_ascii_hexdigit()).find(is_sum).expect("a file with its SHA-256");
    // Of several maps, the first in the list comes first.
    let verdict = if paper.pages() == 4 { page.text("#verdict-said") } else { "Reasons of the verdict".into() };
    for (sheet, text) in [
        (0, sum),
        (0, "Notes and warnings"),
        (1, "Residual variance"),
        (1, &verdict),
        (2, "not a diagnostic finding"),
        (last, "References"),
    ] {
        assert!(paper.has(sheet, text), "{text} on sheet {sheet}: {}", paper.sheets[sheet]);
    }
    for sheet in 0..=last {
        assert!(paper.has(sheet, "research use, not a medical device"), "sheet {sheet}: {}", paper.sheets[sheet]);
    }
    assert!(!paper.has(0, "References"), "a sheet has its own text alone");
}

fn reports_leave_on_paper(browser: Browser) {
    let page = answered(browser);
    page.surround(Surroundings { dark: true, ..Surroundings::default() });
    for (size, width, height, points) in [("a4", 21.0, 29.7, (595, 842)), ("letter", 21.59, 27.94, (612, 792))] {
        page.value(&format!("document.querySelector('#leaving-{size}').click()"));
        for which in ["the one in view", "all listed"] {
            page.choose("#leaving-which", which);
            ask(&page, "#leaving-print");
            let text = printed(&page);
            for there in ["SHA-256", "dipolar", "medical device", "diagnostic", "Inward 0", "Name", "Remarks"] {
                assert!(text.contains(there), "{there}: {text}");
            }
            assert!(!text.contains("Brown"), "{text}");
            let maps = page.value("return document.querySelectorAll('#report .map').length").as_u64().unwrap();
            assert_eq!(maps, if which == "all listed" { 3 } else { 1 });
            let title = page.value("return window.called");
            assert!(
                title.as_str().unwrap().starts_with("inward-report-20") && !title.to_string().contains("Brown"),
                "{title}"
            );
            let pdf = if browser == Browser::Chromium {
                page.session().print_as_styled().unwrap()
            } else {
                page.session().print(width, height).unwrap()
            };
            let file = inward_tests::screenshot_file(&format!("{}-report-{size}-{maps}", browser.name()));
            std::fs::write(file.with_extension("pdf"), &pdf).unwrap();
            let paper = Paper::read(&pdf).expect("a document with pages");
            assert!(paper.points.0.abs_diff(points.0) <= 1 && paper.points.1.abs_diff(points.1) <= 1, "{paper:?}");
            // A summary, each map and its note, and the methods: none shares its paper, and none is cut.
            let least = 2 + 2 * usize::try_from(maps).unwrap();
            let most = if browser == Browser::Chromium { least } else { 2 * least };
            assert!((least..=most).contains(&paper.pages()), "{} sheets, not {least}", paper.pages());
            if browser == Browser::Chromium {
                text_can_be_selected(&page, &text, &paper);
            }
            page.until("the page again", |page| {
                page.value("dispatchEvent(new Event('afterprint'))");
                !page.exists("#report")
            });
            assert_eq!(page.value("return document.title"), json!("Inward"));
        }
    }
}

fn reports_leave_as_a_page(browser: Browser) {
    let page = answered(browser);
    let (name, text) = page.report_page();
    assert!(!name.contains("Brown") && !text.contains("Brown"), "{name}");
    assert!(text.len() <= 300_000, "{} bytes", text.len());
    let lower = text.to_lowercase();
    for absent in ["<script", " style=", " onload", " onclick", "javascript:", "<iframe", "<object", "<form"] {
        assert!(!lower.contains(absent), "{absent}");
    }
    // The parser of a browser engine, which mends faults and tells of them.
    assert_eq!(Html::parse_document(&text).errors, Vec::<Cow<str>>::new());
    assert!(!Html::parse_document(&text.replacen("</h1>", "</h2>", 1)).errors.is_empty(), "a planted fault is found");
    let outside = lower.replace("http://www.w3.org/", "");
    assert!(!outside.contains("http:") && !outside.contains("https:"), "no address");
    assert!(text.contains("default-src 'none'; style-src 'sha256-"));
    let folder = page.session().downloads().join(&name);
    page.session().go(&format!("file://{}", folder.display())).unwrap();
    assert_eq!(page.accessibility_findings(), Vec::<String>::new());
    let levels = page.value("return [...document.querySelectorAll('h1,h2,h3')].map((e) => Number(e.localName[1]))");
    let levels: Vec<i64> = levels.as_array().unwrap().iter().filter_map(|level| level.as_i64()).collect();
    assert_eq!(levels[0], 1);
    assert!(levels.windows(2).all(|pair| pair[1] - pair[0] <= 1), "{levels:?}");
    let fair = "const bare = [...document.querySelectorAll('table')].filter((t) => !t.caption || [...t.querySelectorAll('th')].some((th) => !th.scope));\
                const ids = [...document.querySelectorAll('[id]')].map((e) => e.id);\
                const mute = [...document.querySelectorAll('svg[role=img]')].filter((s) => !s.querySelector('title').textContent || !s.querySelector('desc').textContent);\
                return [bare.length, ids.length - new Set(ids).size, mute.length, document.documentElement.lang, getComputedStyle(document.querySelector('h2')).fontWeight]";
    assert_eq!(page.value(fair), json!([0, 0, 0, "en-GB", "700"]), "the style is taken");
}

fn choices_of_a_report_are_kept_to(browser: Browser) {
    let page = answered(browser);
    page.choose("#leaving-which", "by number");
    for (entry, told) in [("", "No map is chosen"), ("2-1", "backwards"), ("9", "beyond"), ("x", "no number")] {
        page.fill("#leaving-numbers", entry);
        page.click("#leaving-save");
        assert!(page.text("#leaving-fault").contains(told), "{entry}: {}", page.text("#leaving-fault"));
    }
    page.fill("#leaving-numbers", "1, 2-3");
    assert_eq!(page.text("#leaving-count"), "3 maps");
    page.value("document.querySelector('#leaving-person').value = 'A. Reader'");
    page.click("#leaving-names");
    let (name, text) = page.report_page();
    assert!(text.contains("Brown") && text.contains("A. Reader"), "{name}");
    assert_eq!(text.matches("class=\"leaf map\"").count(), 3);
    assert_eq!(page.accessibility_findings(), Vec::<String>::new());

    // Given up while it is being made.
    page.value(
        "document.querySelector('#leaving-explained').checked = true;\
         new MutationObserver(() => document.querySelector('#leaving-stop').click()).observe(document.querySelector('#leaving-status'), { childList: true });\
         document.querySelector('#leaving-save').click()",
    );
    page.until("it is given up", |page| page.text("#leaving-status") == "The report was given up.");
}

/// Two decompositions and a map that cannot be fitted: each has its summary, both their comparison, the map its reason.
#[test]
fn decompositions_and_maps_without_a_fit_are_reported() {
    let page = Page::open(Browser::Chromium);
    page.session().run("location.hash = 'example=night'", &[]).unwrap();
    page.until("both", |page| page.rests() && page.texts("#decomposition-list > li").len() == 2);
    page.wait_for_verdict();
    let (_, text) = page.report_page();
    assert!(text.len() <= 300_000, "{} bytes", text.len());
    assert_eq!(Html::parse_document(&text).errors, Vec::<Cow<str>>::new());
    for there in [
        "Summary · independent",
        "Summary · principal",
        "Decompositions compared",
        "32 electrodes used",
        "decompositions",
    ] {
        assert!(text.contains(there), "{there}");
    }

    let flat: Vec<String> = example("watch_maps.tsv")
        .lines()
        .enumerate()
        .map(|(at, line)| {
            let cells: Vec<&str> = line.split('\t').collect();
            format!("{}\t{}\t{}\n", cells[0], cells[1], if at == 0 { "flat" } else { "3" })
        })
        .collect();
    page.drop_files(&[
        DroppedFile { name: "electrodes.tsv", text: &example("watch_electrodes.tsv") },
        DroppedFile { name: "maps.tsv", text: &flat.concat() },
    ]);
    page.until("two maps", |page| page.rests() && page.texts("#ledger [role=option]").len() == 2);
    page.wait_for_verdict();
    page.choose("#leaving-which", "all listed");
    let (_, text) = page.report_page();
    assert_eq!(text.matches("class=\"leaf map\"").count(), 2);
    let reason = page.text("#ledger [data-index='1'] .ledger-place");
    assert!(!reason.is_empty() && text.contains(&reason), "{reason}");
}

in_both_browsers!(reports_leave_on_paper, reports_leave_as_a_page, choices_of_a_report_are_kept_to);
