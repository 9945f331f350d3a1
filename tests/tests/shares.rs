//! Decompositions as a whole on the page: near-dipolar shares, all dipoles, maps that match, and figures as files.
use inward_tests::{
    Browser, Draw, DroppedFile, Electrodes, Mixture, Page, PlainSeries, Surroundings, in_both_browsers,
};
use serde_json::{Value, json};

const COUNT: usize = 12;
const SEED: u64 = 20_261_201;

/// Two decompositions of the same maps: the second has one map less, in another order, all signs turned, a little noise.
struct Two {
    first: String,
    second: String,
    /// For each map of the second the one of the first that it is.
    planted: Vec<usize>,
}

fn two() -> Two {
    let electrodes = Electrodes::set(32);
    let mut draw = Draw::from(SEED);
    let maps = Mixture::many(&PlainSeries::standard(), &electrodes.directions, 0.7, COUNT, &mut draw);
    let planted: Vec<usize> = (0..COUNT - 1).map(|k| (5 * k + 3) % COUNT).collect();
    let mut value = |map: usize, at: usize, turned: bool| {
        let value = maps[map].values[at];
        if turned { -value * 1.7 + 0.01 * draw.normal() } else { value }
    };
    let head = |letter: char, count: usize| (1..=count).map(|k| format!("\t{letter}{k}")).collect::<String>();
    let mut first = format!("label{}\n", head('a', COUNT));
    let mut second = format!("label{}\n", head('b', COUNT - 1));
    for (at, label) in electrodes.labels.iter().enumerate() {
        let row = |values: Vec<f64>| values.iter().map(|value| format!("\t{value:.6}")).collect::<String>();
        first += &format!("{label}{}\n", row((0..COUNT).map(|map| value(map, at, false)).collect()));
        second += &format!("{label}{}\n", row(planted.iter().map(|&map| value(map, at, true)).collect()));
    }
    Two { first, second, planted }
}

/// A page with one decomposition or both, all fitted.
fn opened(browser: Browser, tables: &Two, both: bool) -> Page {
    let page = Page::open(browser);
    let mut files = vec![DroppedFile { name: "first.tsv", text: &tables.first }];
    if both {
        files.push(DroppedFile { name: "second.tsv", text: &tables.second });
    }
    page.drop_files(&files);
    page.until("all maps fitted", |page| page.rests() && page.visible("#shares"));
    for panel in ["#shares", "#all-dipoles"] {
        page.ask("document.querySelector(arguments[0]).open = true", &[json!(panel)]);
    }
    let rows = if both { 2 } else { 1 };
    page.until("the table of shares", |page| {
        page.value("return document.querySelectorAll('#share-table tbody tr').length") == json!(rows)
            && page.texts("#share-table tbody td")[0] == COUNT.to_string()
    });
    page
}

fn residual_variances(report: &Value) -> Vec<f64> {
    report["maps"].as_array().unwrap().iter().filter_map(|map| map["residual_variance"].as_f64()).collect()
}

/// A file that a click on an element downloads.
/// The table, the words of the threshold and the ends of the curve are the shares that the residual variances give; the
/// threshold moves by keyboard and by number; the figure is a file with its words, and a bitmap of the size asked for.
fn shares_are_counted_and_saved(browser: Browser) {
    let page = opened(browser, &two(), false);
    let variances = residual_variances(&page.report());
    assert_eq!(variances.len(), COUNT);
    let count = |x: f64| variances.iter().filter(|rv| **rv <= x).count();
    let share = |x: f64| format!("{:.1}", 100.0 * count(x) as f64 / COUNT as f64);
    let told = |x: f64| {
        page.until("the count at the threshold", |page| {
            let cell = &page.texts("#share-table tbody td")[1];
            cell.split(|c: char| !c.is_ascii_digit()).next() == Some(count(x).to_string().as_str())
        });
        let words = page.attribute("#threshold-handle", "aria-valuetext").replace('\u{a0}', " ");
        assert!(words.contains(&format!("{} %", share(x))) || share(x).starts_with("0.0"), "{x}: {words}");
    };
    told(0.10);
    page.focus("#threshold-handle");
    page.press("\u{e014}\u{e014}\u{e00e}");
    assert_eq!(page.attribute("#threshold-handle", "aria-valuenow"), "17", "10 + 1 + 1 + 5");
    told(0.17);
    for entered in ["2.5", "30", "64"] {
        page.fill("#threshold", entered);
        told(entered.parse::<f64>().unwrap() / 100.0);
    }
    page.fill("#threshold", "900");
    assert!(page.visible("#threshold-fault"), "what is no percentage is refused beside the field");
    page.click("#usual-thresholds label:first-of-type");
    told(0.05);

    // Heights of the drawn steps, from the longest path of the figure, are the shares.
    page.click("#share-scale label:last-of-type");
    let drawn = page.value(
        "const paths = [...document.querySelectorAll('#share-figure path')].map((path) => path.getAttribute('d'));\
         const line = paths.sort((a, b) => b.length - a.length)[0];\
         const points = line.slice(1).split('L').map((point) => point.split(' ').map(Number));\
         const ends = [points[0][1], points.at(-1)[1]];\
         return [...new Set(points.map(([, y]) => (y - ends[0]) / (ends[1] - ends[0])))].map((share) => Math.round(1e3 * share) / 1e3)",
    );
    let levels: Vec<f64> = drawn.as_array().unwrap().iter().map(|level| level.as_f64().unwrap()).collect();
    // A share that holds over next to no width is a point on the way up, and not drawn.
    let mut sorted = residual_variances(&page.report());
    sorted.sort_by(f64::total_cmp);
    let wide = |k: usize| k == 0 || k == COUNT || sorted[k] - sorted[k - 1] > 1e-6;
    let steps: Vec<f64> = (0..=COUNT).filter(|k| wide(*k)).map(|k| k as f64 / COUNT as f64).collect();
    assert!(steps.len() >= COUNT && levels.len() == steps.len(), "{levels:?}, not {steps:?}");
    for (level, step) in levels.iter().zip(steps) {
        assert!((level - step).abs() < 0.003, "a step of {step} at {level}");
    }
    let none: Vec<String> = Vec::new();
    assert_eq!(page.accessibility_findings(), none);

    let text = page.svg("#share-tools", "inward-near-dipolar-share.svg");
    for word in ["<title>", "<desc>", "decomposition 1", "residual variance", "sans-serif"] {
        assert!(text.contains(word), "{word} stands in the figure");
    }
    assert!(!text.contains("first"), "a file's name is not told");
    // The browser reads it as a document of its own.
    let svg = page.session().downloads().join("inward-near-dipolar-share.svg");
    page.session().go(&format!("file://{}", svg.display())).unwrap();
    assert_eq!(page.value("return document.documentElement.localName"), json!("svg"));
    let words = page.value("return [...document.querySelectorAll('text')].map((text) => text.textContent).join(' ')");
    assert!(words.as_str().unwrap().contains("5\u{a0}%"), "{words}");
}

/// A dipole chosen by keyboard or mouse is named and opens its map.
fn a_dipole_opens_its_map(browser: Browser) {
    let page = opened(browser, &two(), false);
    let named = |page: &Page| page.text("#dipole-said").split(':').next().unwrap_or_default().to_owned();
    page.focus("#dipole-views");
    page.press("\u{e011}\u{e014}\u{e014}");
    page.until("the third map", |page| named(page) == "a3");
    page.until("its answer", |page| page.text("#subject").starts_with("a3"));

    // Where the mouse finds a dipole, a click chooses it.
    let box_ = page.value(
        "const b = document.querySelector('#dipole-views-above').getBoundingClientRect(); return [b.width, b.height]",
    );
    let half = (box_[0].as_f64().unwrap() / 2.0) as i64;
    'found: for y in (-half..half).step_by(16) {
        for x in (-half..half).step_by(16) {
            page.hover("#dipole-views-above", x, y);
            if page.value("return document.querySelector('#dipole-views-above').style.cursor") == json!("pointer") {
                page.click_at("#dipole-views-above", x, y);
                if named(&page) != "a3" {
                    break 'found;
                }
            }
        }
    }
    let name = named(&page);
    assert_ne!(name, "a3", "a click chooses a dipole");
    page.until("its answer", |page| page.text("#subject").starts_with(&name));
    page.surround(Surroundings { dark: true, ..Surroundings::default() });
    let none: Vec<String> = Vec::new();
    assert_eq!(page.accessibility_findings(), none);
}

/// The planted pairs are found with their sign; a pair shows both maps and opens one; what is left over is named.
fn planted_pairs_are_listed(browser: Browser) {
    let tables = two();
    let page = opened(browser, &tables, true);
    assert!(!page.methods().contains("matched one to one"));
    page.click("#matching summary");
    page.until("the pairs", |page| page.texts("#match-table tbody tr").len() == COUNT - 1);
    let methods = page.methods();
    assert!(methods.contains("matched one to one") && methods.contains("Crouse 2016, "), "{methods}");
    let pairs = page.texts("#match-table tbody th");
    for (k, map) in tables.planted.iter().enumerate() {
        let pair = format!("a{} \u{2013} b{}", map + 1, k + 1);
        assert!(pairs.contains(&pair), "{pair} among {pairs:?}");
    }
    let signs = page.texts("#match-table tbody td:nth-child(3)");
    assert!(signs.iter().all(|sign| sign == "opposite"), "all are turned: {signs:?}");
    let left = (0..COUNT).find(|map| !tables.planted.contains(map)).unwrap();
    assert!(page.text("#match-unpaired").contains(&format!("a{}", left + 1)), "{}", page.text("#match-unpaired"));

    page.focus("#match-table tbody button");
    page.press("\u{e007}");
    page.until("both maps", |page| page.texts(".match-pair figure").len() == 2);
    assert!(page.text(".match-pair").contains("turned"));
    page.until("painted maps", |page| {
        page.value("return [...document.querySelectorAll('.match-pair canvas')].every((c) => c.width > 100)")
            == json!(true)
    });
    let none: Vec<String> = Vec::new();
    assert_eq!(page.accessibility_findings(), none);
    let second = page.texts("#match-table tbody th")[0].split(' ').next_back().unwrap().to_owned();
    page.click(".match-pair figure:last-of-type button");
    page.until("the second map", |page| page.text("#subject").starts_with(&second));
}

in_both_browsers!(shares_are_counted_and_saved, a_dipole_opens_its_map, planted_pairs_are_listed);
