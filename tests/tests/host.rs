//! The page inside others: what its address asks for, what it hands over and takes, and to whom.
use inward_tests::{Browser, Page, dist_file, in_both_browsers};
use serde_json::json;

/// The delivered page with something behind its #.
fn address(hash: &str) -> String {
    format!("file://{}#{hash}", dist_file("inward.html").display())
}

/// Changes what stands behind the #, as a link of the page around does.
fn go_to(page: &Page, hash: &str) {
    page.ask("location.hash = arguments[0]", &[json!(hash)]);
}

/// Whether the panel is unfolded, has the focus and stands in view.
fn begins_at(page: &Page, selector: &str) -> bool {
    let script = "\
        const panel = document.querySelector(arguments[0]);\
        const { top } = panel.getBoundingClientRect();\
        return panel.contains(document.activeElement) && panel.closest('details:not([open])') === null &&\
               top > -5 && top < innerHeight";
    page.ask(script, &[json!(selector)]) == json!(true)
}

fn the_address_opens_an_example_at_a_panel(browser: Browser) {
    let page = Page::at(browser, &address("example=watch&view=slices"));
    page.until("the slices", |page| page.visible("#slice-above") && begins_at(page, "#slices"));
    assert_eq!(page.attribute(".example[aria-current]", "data-example"), "watch");

    for (name, selector) in [
        ("answer", "#sentence"),
        ("list", "#overview"),
        ("where", "#where"),
        ("trust", "#trust"),
        ("alternatives", "#alternatives"),
        ("influence", "#influence"),
        ("what-if", "#what-if"),
        ("populations", "#populations"),
        ("numbers", "#numbers-panel"),
        ("electrodes", "#electrode-panel"),
        ("head", "#head-panel"),
        ("understood", "#assumed"),
        ("shares", "#shares"),
        ("all-dipoles", "#all-dipoles"),
        ("table", "#table-panel"),
        ("words", "#glossary"),
    ] {
        go_to(&page, &format!("view={name}"));
        page.until(name, |page| page.visible(selector) && begins_at(page, selector));
    }
    go_to(&page, "example=fog");
    page.until("the fog", |page| page.rests() && page.attribute(".example[aria-current]", "data-example") == "fog");
    // A place of the page is the browser's own business.
    go_to(&page, "main");
    page.focus("body");
    assert_eq!(page.state(), "answered");

    for (hash, code, said) in [
        ("example=nowhere", "example-unknown", "lamp, engine-room"),
        ("view=nowhere", "view-unknown", "answer, list"),
        ("view=constructor", "view-unknown", "answer, list"),
        ("view=response", "view-absent", "“response”"),
        ("example=%E0%A4%A&%", "example-unknown", "lamp, engine-room"),
        ("view=%", "view-unknown", "“%”"),
    ] {
        go_to(&page, hash);
        page.wait_for_failure();
        let text = page.failure_text();
        assert!(text.contains(said), "{hash}: {text}");
        assert!(page.text("#failure-message").contains("address"), "{hash}: {text}");
        let details = page.value("return document.querySelector('#failure-details').textContent");
        assert!(details.as_str().unwrap().contains(code), "{hash}: {details}");
        page.click("#failure-dismiss");
        assert_eq!(page.state(), "answered", "{hash}: the answer stays");
    }
}

/// Without an answer yet, and with nothing to wait for.
fn an_address_that_asks_for_nothing_there_says_so(browser: Browser) {
    let page = Page::at(browser, &address("example=%F0%28%8C&view=nowhere"));
    page.wait_for_failure();
    assert!(page.failure_text().contains("lamp, engine-room"), "{}", page.failure_text());
    assert!(page.visible("#empty-examples"));
    page.session().go(&address("view=words")).unwrap();
    page.until("the words", |page| page.visible("#glossary-list") && begins_at(page, "#glossary"));
}

in_both_browsers!(the_address_opens_an_example_at_a_panel, an_address_that_asks_for_nothing_there_says_so);
