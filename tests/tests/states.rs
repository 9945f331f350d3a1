//! The page in other surroundings and when the browser refuses: dark, forced colours, narrow, large, on paper, blocked.
use inward_tests::{Browser, Folder, Page, Paper, Surroundings, Variant, in_both_browsers};
use serde_json::json;

fn none() -> Vec<String> {
    Vec::new()
}

fn answered(browser: Browser) -> Page {
    let page = Page::open(browser);
    page.click("#empty [data-example='lamp']");
    page.wait_for_answer();
    page
}

/// What sticks out of the window to the right.
fn wider_than_the_window(page: &Page) -> serde_json::Value {
    page.value(
        "const most = document.documentElement.clientWidth;\
         return document.documentElement.scrollWidth <= most ? [] : [...document.querySelectorAll('body *')]\
           .filter((e) => e.getBoundingClientRect().right > most + 1).map((e) => e.tagName + '#' + e.id + '.' + e.className).slice(0, 9)",
    )
}

const PLAIN: Surroundings =
    Surroundings { dark: false, forced_colours: false, reduced_motion: false, print: false, zoom: 1 };

/// Findings of the checker; where the person's own colours are used, their contrast is the person's choice.
fn findings(page: &Page, surroundings: Surroundings) -> Vec<String> {
    let mut found = page.accessibility_findings();
    found.retain(|line| !(surroundings.forced_colours && line.starts_with("color-contrast")));
    found
}

const SURROUNDINGS: [(&str, Surroundings); 4] = [
    ("light", PLAIN),
    ("dark", Surroundings { dark: true, ..PLAIN }),
    ("forced colours", Surroundings { forced_colours: true, ..PLAIN }),
    ("400 per cent", Surroundings { zoom: 4, ..PLAIN }),
];

/// Nothing against a state of the page in any surroundings; at 400 % nothing is cut off.
fn walk(page: &Page, state: &str) {
    for (name, surroundings) in SURROUNDINGS {
        page.surround(surroundings);
        assert_eq!(findings(page, surroundings), none(), "{state}, {name}");
        assert_eq!(wider_than_the_window(page), json!([]), "{state}, {name}");
        // A part of a page that is several windows high is enough to look at.
        page.picture(&format!("{state} {name}"));
    }
    page.surround(PLAIN);
}

fn unfold(page: &Page) {
    page.value("for (const panel of document.querySelectorAll('details')) panel.open = true");
}

/// One map, then many and two decompositions, with every panel open: nothing against the page.
fn no_findings_with_every_panel_open(browser: Browser) {
    let page = Page::open(browser);
    unfold(&page);
    walk(&page, "empty, unfolded");
    page.click("#empty [data-example='lamp']");
    page.wait_for_verdict();
    unfold(&page);
    page.until("slices, influence and what if", |page| {
        page.text("#slices-sentence").ends_with('.')
            && page.exists("#influence-figure svg")
            && page.exists("#what-if-table tbody tr")
    });
    page.focus("#slice-above");
    page.press("\u{e014}");
    page.click("#hand-keep");
    page.click("#maps-tools .figure-save");
    walk(&page, "one map, unfolded");

    // The list of examples stands in a panel that is open.
    page.value("document.querySelector('#intake-examples [data-example=night]').click()");
    page.until("all maps of both", |page| page.rests() && page.visible("#shares") && page.visible("#matching"));
    unfold(&page);
    page.until("all panels", |page| {
        ["#match-table tbody tr", "#share-table tbody tr", "#groups-maps canvas", "#all-numbers tbody tr"]
            .iter()
            .all(|part| page.exists(part))
    });
    page.focus("#match-table tbody button");
    page.press(" ");
    page.until("a pair", |page| page.texts(".match-pair figure").len() == 2);
    page.click("#share-tools .figure-save");
    walk(&page, "two decompositions, unfolded");
    // What a picture is of is told by its name: extremes, sign and place.
    for canvas in ["#map-measured", ".match-pair canvas", "#groups-maps canvas"] {
        let name = page.attribute(canvas, "aria-label");
        assert!(name.contains("most positive") && name.contains("most negative"), "{canvas}: {name:?}");
    }
    let nameless = page.value(
        "return [...document.querySelectorAll('canvas, svg')].filter((e) => e.getClientRects().length && !e.closest('[aria-hidden=true]')\
         && !(e.getAttribute('aria-label') ?? '').trim()).map((e) => e.id || e.parentElement.id || e.outerHTML.slice(0, 90))",
    );
    assert_eq!(nameless, json!([]), "pictures without a name");

    // A file that is none, while all that is open.
    page.drop_files(&[inward_tests::DroppedFile { name: "letter.tsv", text: "Dear reader,\nno numbers here.\n" }]);
    page.until("a failure", |page| page.visible("#failure") || page.state() == "failed");
    walk(&page, "failure, unfolded");
}

/// While maps are fitted.
fn no_findings_while_busy(browser: Browser) {
    let page = Page::open(browser);
    // Workers that never answer: the page waits for as long as it takes to look at it.
    page.value("Worker.prototype.postMessage = () => {}");
    page.click("#empty [data-example='lamp']");
    page.until("a page that waits", |page| page.state() == "busy");
    page.until("the progress", |page| page.visible("progress"));
    walk(&page, "busy");
}

/// Nothing against the page in any surroundings, empty and answered; the maps take the theme; at 400 % nothing is cut off.
fn no_findings_in_any_surroundings(browser: Browser) {
    let page = Page::open(browser);
    walk(&page, "empty");
    page.click("#empty [data-example='lamp']");
    page.wait_for_answer();
    let mut pictures = std::collections::BTreeMap::new();
    for (name, surroundings) in SURROUNDINGS {
        page.surround(surroundings);
        assert_eq!(findings(&page, surroundings), none(), "answered, {name}");
        assert_eq!(wider_than_the_window(&page), json!([]), "answered, {name}");
        for canvas in ["#map-measured", "#view-above", "#view-turned"] {
            let map = page.pixels(canvas);
            assert!(
                map.width >= 180 && map.colours() > 10,
                "{canvas}, {name}: {} pixels, {} colours",
                map.width,
                map.colours()
            );
        }
        pictures.insert(name, page.pixels("#map-measured").bytes);
        page.picture(&format!("answered {name}"));
    }
    assert_ne!(pictures["light"], pictures["dark"]);
    // 320 CSS pixels.
    page.surround(Surroundings { zoom: 4, ..PLAIN });
    assert_eq!(page.value("return innerWidth"), json!(320));
    assert!(page.value("return parseFloat(getComputedStyle(document.body).fontSize)").as_f64().unwrap() >= 14.0);
    page.surround(PLAIN);
    page.settle();
    assert_eq!(page.pixels("#map-measured").bytes, pictures["light"], "back in the light nothing has changed");
}

/// The focus can be seen: each control that the keyboard reaches changes its look, in the light and with forced colours.
fn the_focus_is_visible(browser: Browser) {
    let page = answered(browser);
    // What is written anew takes the focus with it.
    page.wait_for_verdict();
    unfold(&page);
    page.until("all panels", |page| {
        page.text("#slices-sentence").ends_with('.')
            && page.exists("#influence-table tbody tr")
            && page.exists("#what-if-table tbody tr")
    });
    page.click("#maps-tools .figure-save");
    for surroundings in [PLAIN, Surroundings { forced_colours: true, ..PLAIN }] {
        page.surround(surroundings);
        page.focus("#main");
        let mut seen = std::collections::BTreeSet::new();
        for _ in 0..400 {
            page.press(&inward_tests::TAB.to_string());
            let found = page.value(
                "const e = document.activeElement; if (!e || e === document.body) return null;\
                 const shown = [e, e.closest('.pick'), e.nextElementSibling, e.closest('label')].filter(Boolean).some((part) => {\
                   const s = getComputedStyle(part); return s.outlineStyle !== 'none' && parseFloat(s.outlineWidth) >= 2; });\
                 const box = e.getBoundingClientRect();\
                 window.countedFocus ??= new Map(); if (!window.countedFocus.has(e)) window.countedFocus.set(e, window.countedFocus.size);\
                 return [window.countedFocus.get(e), (e.id || e.className || e.tagName) + '', shown, box.width > 0, getComputedStyle(e).outline + ' ' + e.matches(':focus-visible') + ' ' + e.innerText]",
            );
            let Some(place) = found.as_array() else { break };
            assert!(place[2] == true && place[3] == true, "{surroundings:?}: the focus is not seen: {place:?}");
            if !seen.insert(place[0].as_u64()) {
                break;
            }
        }
        assert!(seen.len() > 100, "{} stops", seen.len());
    }
}

/// With less motion asked for, nothing moves by itself.
fn reduced_motion_is_kept(browser: Browser) {
    let page = answered(browser);
    let moving = "return [...document.querySelectorAll('*')].flatMap((e) => [null, '::before', '::after'].map((part) => getComputedStyle(e, part)))\
                  .filter((s) => (s.animationName !== 'none' && parseFloat(s.animationDuration) > 0) || s.transitionDuration.split(',').some((d) => parseFloat(d) > 0.01) || s.scrollBehavior === 'smooth').length";
    page.value("document.querySelector('#progress').hidden = false");
    page.surround(Surroundings { reduced_motion: true, ..PLAIN });
    assert_eq!(page.value(moving), json!(0));
}

/// On paper: light, without controls, with letters, caution and sentence, on A4 and Letter.
fn paper_holds_the_answer(browser: Browser) {
    let page = answered(browser);
    page.take_down_words();
    page.surround(Surroundings { print: true, dark: true, ..PLAIN });
    for shown in
        ["#sentence", "#map-measured", "#view-above", "#view-behind", "#view-left", "#trust", "#numbers", "#caution"]
    {
        assert!(page.visible(shown), "{shown} is printed");
    }
    let controls = page.value(
        "return [...document.querySelectorAll('button, input, select, textarea, summary')].filter((e) => e.getClientRects().length && getComputedStyle(e).visibility === 'visible' && !e.matches('.term')).map((e) => e.id || e.className)",
    );
    assert_eq!(controls, json!([]), "no control is printed");
    assert_eq!(page.value("return getComputedStyle(document.body).backgroundColor"), json!("rgb(255, 255, 255)"));
    assert!(page.text("#caution").to_lowercase().contains("medical device"));
    assert!(page.text("#answer").contains("lamp"), "the map is named on paper");
    page.surround(Surroundings { dark: true, ..PLAIN });
    page.settle();
    for id in ["map-measured", "view-above", "view-behind", "view-left"] {
        page.written_on(id);
    }

    for (width, height, points) in [(21.0, 29.7, (595, 842)), (21.59, 27.94, (612, 792))] {
        let pdf = page.session().print(width, height).unwrap();
        std::fs::write(
            inward_tests::screenshot_file(&format!("{}-{}", browser.name(), points.0)).with_extension("pdf"),
            &pdf,
        )
        .unwrap();
        let paper = Paper::read(&pdf).expect("a document with pages");
        assert!(
            paper.points.0.abs_diff(points.0) <= 1 && paper.points.1.abs_diff(points.1) <= 1,
            "{paper:?} for {points:?}"
        );
        assert!((1..=7).contains(&paper.pages()), "{paper:?}");
        for (id, words) in [
            ("map-measured", &["L", "R", "front", "seen from above"][..]),
            ("view-above", &["L", "R", "seen from above"]),
            ("view-behind", &["L", "R", "seen from behind"]),
            ("view-left", &["seen from the left (L)"]),
        ] {
            let written = page.written_on(id);
            for word in words {
                assert!(
                    written.iter().any(|(text, ..)| text == word),
                    "{id} is painted for paper with {word:?}: {written:?}"
                );
            }
        }
    }
}

/// What the page says when the browser refuses WebAssembly or workers, each with its own sentence.
fn what_the_browser_blocks_has_its_own_sentence(browser: Browser) {
    let mut sentences = Vec::new();
    for (name, code, from, to) in [
        ("wasm", "wasm-unavailable", "'wasm-unsafe-eval'", ""),
        ("worker", "worker-unavailable", "worker-src blob:", "worker-src 'none'"),
    ] {
        let folder = Folder::fresh(name);
        let page = Page::load(browser, &Variant::delivered().with_policy(from, to).write(&folder));
        page.wait_for_failure();
        let details = page.value("return document.querySelector('#failure-details').textContent");
        assert!(details.as_str().unwrap().contains(code), "{name}: {details}");
        assert!(page.text("#failure-hint").ends_with('.'));
        assert_eq!(page.accessibility_findings(), none(), "{name} blocked");
        page.picture(&format!("blocked {name}"));
        sentences.push(page.text("#failure-message"));
    }
    assert!(sentences.iter().all(|sentence| sentence.ends_with('.')) && sentences[0] != sentences[1], "{sentences:?}");
}

/// Lets the page's own script fail in each way that nothing catches.
const STRAY: &str = "
    const STRAYS = {
      error: () => { throw new Error('thrown for the test'); },
      text: () => { throw 'text for the test'; },
      rejection: () => void Promise.reject(new Error('rejected for the test')),
      nothing: () => void Promise.reject(undefined),
    };
    addEventListener('stray', (event) => setTimeout(STRAYS[event.detail]));";

/// Errors of the page itself end in the same panel, whatever is thrown, and the page goes on.
fn stray_errors_end_in_the_panel(browser: Browser) {
    let folder = Folder::fresh("stray");
    let page = Page::load(browser, &Variant::delivered().with_script(STRAY).write(&folder));
    page.wait_for("ready").unwrap();
    page.click("#empty [data-example='lamp']");
    page.wait_for_answer();
    let sentence = page.text("#sentence");
    for what in ["error", "text", "rejection", "nothing"] {
        page.ask("dispatchEvent(new CustomEvent('stray', { detail: arguments[0] }))", &[json!(what)]);
        page.until(what, |page| page.visible("#failure"));
        assert!(page.text("#failure-message").ends_with('.') && page.text("#failure-hint").ends_with('.'), "{what}");
        let details = page.value("return document.querySelector('#failure-details').textContent");
        assert!(details.as_str().unwrap().contains("page-error"), "{what}: {details}");
        assert!(page.visible("#answer") && page.text("#sentence") == sentence, "{what}: the answer stays");
        page.click("#failure-dismiss");
        page.until("no panel", |page| !page.visible("#failure"));
    }
    let before = page.report();
    page.drop_files(&[inward_tests::DroppedFile { name: "swell.tsv", text: &inward_tests::example("swell.tsv") }]);
    page.until("the next map", |page| page.state() == "answered" && page.report()["maps"] != before["maps"]);
}

in_both_browsers!(
    no_findings_in_any_surroundings,
    no_findings_with_every_panel_open,
    no_findings_while_busy,
    the_focus_is_visible,
    reduced_motion_is_kept,
    paper_holds_the_answer,
    what_the_browser_blocks_has_its_own_sentence,
    stray_errors_end_in_the_panel,
);
