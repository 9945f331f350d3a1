//! The picture in the README shows the page as it is. With INWARD_PICTURE=write the test makes it anew.
use inward_tests::{Browser, Page, Picture, Surroundings, tests_folder};
use std::fs;

/// The window of the picture in CSS pixels.
const SIZE: (u32, u32) = (1200, 840);

/// Squares of sixteen pixels may differ by this much of 255 before they count, and this share of them may count: letters
/// are set a little differently on every machine, places and colours are not.
const SIDE: usize = 16;
const TOLERANCE: f64 = 28.0;
const SHARE: f64 = 0.06;

fn shown(page: &Page, button: &str, name: &str) -> Vec<u8> {
    page.click(button);
    page.until(name, |page| page.state() == "answered" && page.report()["maps"][0]["name"] == name);
    page.wait_for_verdict();
    page.value("document.activeElement?.blur(); scrollTo(0, 0)");
    page.session().mouse_away().unwrap();
    page.settle();
    page.session().screenshot().unwrap()
}

#[test]
fn the_readme_shows_the_answer_as_it_is() {
    let file = tests_folder().join("pictures/answer.png");
    let readme = fs::read_to_string(tests_folder().join("../README.md")).unwrap();
    assert!(readme.contains("](tests/pictures/answer.png)"), "the README shows the picture");

    let page = Page::open(Browser::Chromium);
    page.surround(Surroundings::default());
    page.session().viewport(SIZE.0, SIZE.1).unwrap();
    let now = shown(&page, "#empty [data-example=lamp]", "lamp");
    if std::env::var_os("INWARD_PICTURE").is_some_and(|wish| wish == "write") {
        fs::write(&file, &now).unwrap();
    }
    let committed = fs::read(&file).unwrap();
    assert!(committed.len() <= 250_000, "{} bytes", committed.len());
    let committed = Picture::read(&committed).expect("a PNG");
    let now = Picture::read(&now).expect("a PNG");
    assert_eq!((now.width, now.height), (SIZE.0 as usize, SIZE.1 as usize));
    let difference = now.difference(&committed, SIDE, TOLERANCE);
    println!("{:.2} % of the squares differ", 100.0 * difference);
    assert!(
        difference <= SHARE,
        "{:.1} % of the picture differ from the page: look at it, then INWARD_PICTURE=write cargo test -p inward-tests --test picture",
        100.0 * difference
    );

    // The measure tells another answer from this one.
    page.click("#fold");
    page.click("#more-examples summary");
    let other = shown(&page, "#more-examples [data-example=two-horns]", "two horns");
    let other = Picture::read(&other).expect("a PNG");
    assert!(other.difference(&committed, SIDE, TOLERANCE) > SHARE);
}
