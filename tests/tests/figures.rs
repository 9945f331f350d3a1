//! Figures as files: every figure as SVG, in which text is text, and as PNG of the size in the world that was chosen.
use inward_tests::{Browser, Page, Picture, in_both_browsers};
use serde_json::json;
use std::path::Path;

/// Where figures of one map are saved, the file, and words that stand in it.
const FIGURES: [(&str, &str, &[&str]); 8] = [
    (
        "#maps-tools",
        "inward-maps",
        &["measured", "one dipole, by hand", "left over ×", "seen from above", "front", "L", "R"],
    ),
    (
        "#views-tools",
        "inward-head",
        &["seen from above", "seen from behind", "seen from the left (L)", "95 % of these"],
    ),
    ("#slices-tools", "inward-slices", &["seen from above", "RV of the best dipole at each place."]),
    ("#hand-tools", "inward-by-hand", &["measured", "one dipole, by hand", "left over ×"]),
    ("#influence-tools", "inward-influence", &["seen from above"]),
    ("#curve-tools", "inward-reference-populations", &["this map", "two dipoles"]),
    ("#density-tools", "inward-eccentricity", &["this map", "two dipoles"]),
    ("#preview-tools", "inward-electrodes", &["seen from above", "seen from the left (L)"]),
];

/// Widths in millimetres that can be chosen, and pixels an inch.
const WIDTHS: [(&str, f64); 3] = [("85 mm", 85.0), ("120 mm", 120.0), ("180 mm", 180.0)];
const RESOLUTIONS: [u32; 3] = [150, 300, 600];

/// What the browser's own reader of XML finds in a figure that is a document of its own.
const READ: &str = "
    const all = [...document.querySelectorAll('*')];
    const svg = document.documentElement;
    return {
      fault: document.querySelector('parsererror')?.textContent ?? '',
      root: svg.localName,
      title: svg.querySelector(':scope > title')?.textContent ?? '',
      description: svg.querySelector(':scope > desc')?.textContent ?? '',
      width: svg.getAttribute('width'),
      words: [...svg.querySelectorAll('text')].map((text) => text.textContent),
      families: [...new Set([...svg.querySelectorAll('text')].map((text) => text.getAttribute('font-family')))],
      outside: all.flatMap((e) => [...e.attributes]).filter((a) => a.localName === 'href' || /url\\(|:\\/\\//.test(a.value))
        .map((a) => a.value).filter((v) => !v.startsWith('data:image/png;base64,') && !/^url\\(#[\\w-]+\\)$/.test(v) && v !== 'http://www.w3.org/2000/svg'),
      active: all.filter((e) => ['script', 'foreignObject', 'style', 'a', 'animate'].includes(e.localName) || [...e.attributes].some((a) => /^on|^style$/.test(a.name))).length,
      unclipped: [...svg.querySelectorAll('[clip-path]')].filter((e) => !svg.querySelector('#' + e.getAttribute('clip-path').slice(5, -1))).length,
      images: svg.querySelectorAll('image').length,
    };";

fn plain(text: &str) -> String {
    text.replace('\u{a0}', " ")
}

/// The chunk of a PNG's resolution, in dots a metre.
fn dots_a_metre(png: &[u8]) -> Option<(u32, u32)> {
    let at = png.windows(4).position(|four| four == b"pHYs")?;
    let number = |from: usize| u32::from_be_bytes(png[from..from + 4].try_into().unwrap());
    assert_eq!(png[at + 12], 1, "metres");
    assert_eq!(number(at - 4), 9, "its length");
    // Its sum is that of ISO/IEC 15948.
    assert_eq!(number(at + 13), inward_tests::checksum(&png[at..at + 13]));
    assert_eq!(at, 37, "it follows the header");
    Some((number(at + 4), number(at + 8)))
}

/// Everything drawn of the lamp, the dipole moved by hand.
fn drawn(browser: Browser) -> Page {
    let page = Page::open(browser);
    page.click("#empty [data-example='lamp']");
    page.wait_for_verdict();
    page.value("for (const id of ['slices', 'influence', 'populations']) document.querySelector('#' + id).open = true");
    page.until("slices and influence", |page| {
        page.text("#slices-sentence").ends_with('.') && page.exists("#influence-figure svg")
    });
    page.focus("#slice-above");
    page.press("\u{e014}");
    page.click("#hand-keep");
    page.until("the dipole by hand", |page| page.visible("#hand-rows"));
    page
}

fn every_figure_is_a_file(browser: Browser) {
    let page = drawn(browser);
    let mut bytes = std::collections::BTreeMap::new();
    for (at, (tools, name, _)) in FIGURES.iter().enumerate() {
        page.click(&format!("{tools} .figure-save"));
        assert_eq!(page.value("return document.querySelectorAll('.figure-panel').length"), json!(1));
        let (label, millimetres) = WIDTHS[at % WIDTHS.len()];
        page.choose(".figure-panel [data-figure=width]", label);
        let text = page.svg(tools, &format!("{name}.svg"));
        bytes.insert(*name, text.len());
        let resolution = RESOLUTIONS[at % RESOLUTIONS.len()];
        page.choose(".figure-panel [data-figure=resolution]", &resolution.to_string());
        let png = whole(&page, &page.save_figure(tools, "png", &format!("{name}.png")));
        let dots = f64::from(resolution) / 0.0254;
        assert_eq!(dots_a_metre(&png), Some((dots.round() as u32, dots.round() as u32)), "{name}");
        let picture = Picture::read(&png).expect("a PNG");
        let across = millimetres / 25.4 * f64::from(resolution);
        assert!((picture.width as f64 - across).abs() <= 1.0, "{name}: {} dots for {across}", picture.width);
        let said = page.text(".figure-panel [role=status]").replace(',', "");
        assert!(said.contains(&format!("{} × {} pixels", picture.width, picture.height)), "{said}");
        let colours = (0..picture.height).step_by(3).flat_map(|y| (0..picture.width).map(move |x| (x, y)));
        let inked = colours.filter(|&(x, y)| picture.at(x, y) != [255, 255, 255]).count();
        if *name == "inward-maps" {
            let tints: std::collections::BTreeSet<_> = (0..picture.height)
                .flat_map(|y| (0..picture.width).map(move |x| (x, y)))
                .map(|(x, y)| picture.at(x, y))
                .collect();
            assert!(tints.len() > 400, "the rasters are in the bitmap: {} colours", tints.len());
        }
        assert!(inked * 60 > picture.width * picture.height / 3, "{name} is drawn: {inked} dots");
    }
    assert!(bytes["inward-maps"] + bytes["inward-head"] < 250_000, "{bytes:?}");

    // One panel for all figures, which keeps what was chosen; the button that unfolded it folds it, and so does Escape.
    let chosen = page.value("return [...document.querySelectorAll('.figure-panel select')].map((list) => list.value)");
    page.focus("#maps-tools .figure-save");
    page.press(" ");
    assert_eq!(
        page.value("return [...document.querySelectorAll('.figure-panel select')].map((list) => list.value)"),
        chosen
    );
    assert_eq!(page.accessibility_findings(), Vec::<String>::new());
    page.picture("figure-panel");
    page.press(&inward_tests::TAB.to_string());
    assert_eq!(
        page.value("return document.activeElement.dataset.figure"),
        json!("width"),
        "the next stop of the keyboard"
    );
    page.press("\u{e00c}");
    assert!(!page.exists(".figure-panel"));
    assert!(page.value("return document.activeElement.matches('#maps-tools .figure-save')") == json!(true));

    // As on the page, which is wide here, and more dots than browsers draw.
    page.click("#maps-tools .figure-save");
    page.choose(".figure-panel [data-figure=width]", "as on the page");
    let text = page.svg("#maps-tools", "inward-maps.svg");
    let wide = page.value("return document.querySelector('.maps').clientWidth").as_f64().unwrap();
    let width =
        text.split("width=\"").nth(1).and_then(|rest| rest.split_once("mm\"")).unwrap().0.parse::<f64>().unwrap();
    assert!((width - wide * 25.4 / 96.0).abs() < 0.02, "{width} mm for {wide} pixels");
    page.value("document.querySelector('#maps-tools').style.width = '4000px'");
    page.choose(".figure-panel [data-figure=resolution]", "600");
    page.click(".figure-panel [data-figure=png]");
    page.until("a refusal", |page| page.text(".figure-panel [role=status]").contains("more than browsers draw"));

    for (at, (_, name, words)) in FIGURES.iter().enumerate() {
        let file = page.session().downloads().join(format!("{name}.svg"));
        page.session().go(&format!("file://{}", file.display())).unwrap();
        let read = page.value(READ);
        assert_eq!((&read["fault"], &read["root"]), (&json!(""), &json!("svg")), "{name}");
        assert!(!read["title"].as_str().unwrap().is_empty(), "{name} has a title");
        assert!(read["description"].as_str().unwrap().len() > 40, "{name} is described: {}", read["description"]);
        assert_eq!(read["families"], json!(["sans-serif"]), "{name}");
        assert_eq!(read["outside"], json!([]), "{name} asks for nothing");
        assert_eq!((&read["active"], &read["unclipped"]), (&json!(0), &json!(0)), "{name}");
        page.picture(&format!("figure-{name}"));
        let width: f64 = read["width"].as_str().unwrap().strip_suffix("mm").unwrap().parse().unwrap();
        let millimetres = WIDTHS[at % WIDTHS.len()].1;
        assert!(*name == "inward-maps" || (width - millimetres).abs() < 0.01, "{name}: {width} mm for {millimetres}");
        let written: Vec<String> =
            read["words"].as_array().unwrap().iter().map(|word| plain(word.as_str().unwrap())).collect();
        for word in *words {
            assert!(written.iter().any(|text| text.starts_with(word)), "{name} has {word:?}: {written:?}");
        }
        assert!(read["images"].as_u64().unwrap() >= if name.contains("maps") { 3 } else { 0 });
    }
}

/// Half a file still grows.
fn whole(page: &Page, file: &Path) -> Vec<u8> {
    let mut bytes = Vec::new();
    page.until("a whole picture", |_| {
        bytes = std::fs::read(file).unwrap_or_default();
        bytes.windows(4).rev().take(16).any(|four| four == b"IEND")
    });
    bytes
}

in_both_browsers!(every_figure_is_a_file);
