//! From the empty page to the answer for one map: examples, sentence, maps, views of the head, sign and unit.
use inward_core::Vec3;
use inward_tests::{Bitmap, Browser, Page, data, in_both_browsers};
use serde_json::{Value, json};

const MAPS: [&str; 3] = ["map-measured", "map-projected", "map-residual"];
const VIEWS: [&str; 4] = ["view-above", "view-behind", "view-left", "view-turned"];

/// A page that shows the answer to one of the examples.
fn example_shown(browser: Browser, name: &str) -> Page {
    let page = Page::open(browser);
    page.click(&button(name));
    page.wait_for_answer();
    page
}

/// Opens the input column where it is folded away.
fn unfold(page: &Page) {
    if page.attribute("#fold", "aria-expanded") == "false" {
        page.click("#fold");
    }
}

fn button(name: &str) -> String {
    format!("#empty [data-example='{name}']")
}

fn examples() -> Value {
    serde_json::from_str(&inward_tests::example("examples.json")).unwrap()
}

fn vector(value: &Value) -> Vec3 {
    Vec3(std::array::from_fn(|k| value[k].as_f64().unwrap()))
}

fn number(value: &Value) -> f64 {
    value.as_f64().unwrap_or_else(|| panic!("{value} is a number"))
}

/// Scalp radius and middle of a head view or of a map in pixels of its bitmap, by its outermost circle: met from four
/// corners on the diagonals, where hardly a letter stands.
fn circle(map: &Bitmap, paper: [u8; 4]) -> (f64, f64, f64) {
    let middle = (map.width as f64 / 2.0, map.height as f64 / 2.0);
    let most = middle.0.min(middle.1) * std::f64::consts::SQRT_2;
    let differs = |x: f64, y: f64| {
        let pixel = map.at(x, y);
        pixel[3] > 0 && (0..3).any(|k| pixel[k].abs_diff(paper[k]) > 24)
    };
    let reach = |dx: f64, dy: f64| {
        let step = |k: i32| most - f64::from(k) * 0.25;
        let distance = (0..).map(step).find(|&r| r <= 0.0 || differs(middle.0 + r * dx, middle.1 + r * dy));
        distance.unwrap_or(0.0)
    };
    let h = std::f64::consts::FRAC_1_SQRT_2;
    let mut reaches = [(h, h), (h, -h), (-h, h), (-h, -h)].map(|(dx, dy)| reach(dx, dy));
    reaches.sort_by(f64::total_cmp);
    // The stretch stands in one corner of its map.
    assert!(reaches[0] > 40.0 && reaches[2] - reaches[0] < 3.0, "a circle around the middle: {reaches:?}");
    (middle.0, middle.1, reaches[1])
}

/// Light paper as canvases get it: clear, or the page's own.
fn paper(page: &Page) -> [u8; 4] {
    let found = page.value(
        "const c = document.createElement('canvas').getContext('2d');\
         c.fillStyle = getComputedStyle(document.querySelector('#map-measured')).backgroundColor; c.fillRect(0, 0, 1, 1);\
         return [...c.getImageData(0, 0, 1, 1).data]",
    );
    std::array::from_fn(|k| found[k].as_u64().unwrap() as u8)
}

/// Every example is one click or key away, and its answer agrees with the report and with what was planted.
fn examples_are_one_click_away(browser: Browser) {
    let page = Page::open(browser);
    let manifest = examples();
    let entries = manifest.as_array().unwrap();
    let text = page.text("#empty");
    for entry in entries {
        for key in ["title", "line"] {
            assert!(text.contains(entry[key].as_str().unwrap()), "the empty page says {}: {text}", entry[key]);
        }
    }
    assert!(entries.len() >= 6 && entries.len() == page.texts("#empty [data-example]").len());
    let none: Vec<String> = Vec::new();
    assert_eq!(page.accessibility_findings(), none, "the empty page");
    page.picture("empty");

    page.click(&button("lamp"));
    page.wait_for_answer();
    page.picture("lamp");
    let report = page.report();
    assert_eq!(report["maps"][0]["name"], "lamp");
    assert_eq!(report["electrodes"].as_array().unwrap().len(), 70);
    let sentence = page.text("#sentence");
    let explained = 100.0 * number(&report["maps"][0]["variance_explained"]);
    for part in [&format!("{explained:.1}"), "63 degrees of freedom", "CP3", "left", "10 mm"] {
        assert!(sentence.replace('\u{a0}', " ").contains(part), "{part:?} stands in {sentence:?}");
    }
    let largest = page.value(
        "const sizes = (list) => [...list].filter((e) => e.getClientRects().length).map((e) => parseFloat(getComputedStyle(e).fontSize));\
         return [Math.max(...sizes(document.querySelectorAll('#sentence, #sentence *'))),\
           Math.max(...sizes([...document.querySelectorAll('body *')].filter((e) => !e.closest('#sentence'))))]",
    );
    assert!(number(&largest[0]) > number(&largest[1]), "the sentence is the largest: {largest}");

    // By keyboard alone, from the answer to another example.
    page.session().go(page.value("return document.URL").as_str().unwrap()).unwrap();
    page.wait_for("ready").unwrap();
    page.tab_to(&button("two-horns"));
    page.press("\u{E007}");
    page.wait_for_answer();
    let report = page.report();
    assert_eq!(report["maps"][0]["name"], "two horns");
    let record: Value = serde_json::from_str(&data("example_maps.json")).unwrap();
    for source in record["maps"]["two horns"]["sources"].as_array().unwrap() {
        let away = (vector(&report["maps"][0]["dipole"]["position_mm"]) - vector(&source["position_mm"])).norm();
        assert!(away > 40.0, "{away} mm");
    }
}

/// Own data set aside for an example come back.
fn own_data_come_back_after_an_example(browser: Browser) {
    let page = Page::open(browser);
    let own: String = inward_tests::example("salt.tsv").replace("salt", "mine");
    page.paste("#maps-text", &own);
    page.wait_for_answer();
    let before = page.report();
    unfold(&page);
    page.click("#more-examples summary");
    page.click("#more-examples [data-example='fog']");
    page.until("the example", |page| page.state() == "answered" && page.report()["maps"][0]["name"] == "fog");
    assert!(page.visible("#set-aside"));
    page.click("#take-back");
    page.until("the own map", |page| page.state() == "answered" && page.report()["maps"][0]["name"] == "mine");
    assert_eq!(page.report()["maps"], before["maps"]);
}

/// Pixels of the three maps: the sign has its colour where the report has the extremes, nothing lies beyond the hull of
/// the electrodes, and the letters stand where they belong.
fn maps_are_coloured_by_sign_within_the_electrodes(browser: Browser) {
    let page = Page::open(browser);
    page.take_down_words();
    page.click(&button("swell"));
    page.wait_for_answer();
    page.settle();
    let report = page.report();
    let map = &report["maps"][0];
    let centre = vector(&report["head"]["centre_mm"]);
    let electrodes = report["electrodes"].as_array().unwrap();
    let angle = |v: Vec3| v[0].hypot(v[1]).atan2(v[2]);
    let directions: Vec<Vec3> = electrodes.iter().map(|e| vector(&e["position_mm"]) - centre).collect();
    // Azimuthal equidistant (Snyder 1987): the distance from the middle is the angle from the top.
    let rim = 120f64.to_radians();
    assert!(directions.iter().all(|&d| angle(d) < rim));
    let flat: Vec<(f64, f64)> = directions
        .iter()
        .map(|&d| {
            let (r, level) = (angle(d) / rim, d[0].hypot(d[1]));
            (r * d[0] / level, r * d[1] / level)
        })
        .collect();
    for (id, key) in MAPS.iter().zip(["measured", "projected", "residual"]) {
        let bitmap = page.pixels(&format!("#{id}"));
        let (x0, y0, radius) = circle(&bitmap, paper(&page));
        let place = |k: usize| (x0 + radius * flat[k].0, y0 - radius * flat[k].1);
        let values: Vec<f64> = map[key].as_array().unwrap().iter().map(number).collect();
        if *id != "map-residual" {
            let largest = values.iter().copied().fold(0.0, f64::max);
            let (mut right, mut all) = (0, 0);
            for (k, &value) in values.iter().enumerate().filter(|(_, value)| value.abs() > 0.4 * largest) {
                let (x, y) = place(k);
                all += 1;
                // Around the electrode's own dot.
                let share = bitmap
                    .share_near(x, y, 7.0, |x, y| bitmap.coloured(x, y) && (bitmap.warmth(x, y) > 0) == (value > 0.0));
                right += usize::from(share > 0.5);
            }
            assert!(all >= 10 && right >= all - 1, "{id}: {right} of {all} electrodes have the colour of their sign");
        }
        // No colour beyond the rim of the hull: every coloured pixel is within some triangle of electrodes.
        let hull = hull(&flat);
        let outside = (0..bitmap.height)
            .flat_map(|y| (0..bitmap.width).map(move |x| (x as f64 + 0.5, y as f64 + 0.5)))
            .filter(|&(x, y)| bitmap.coloured(x, y))
            .filter(|&(x, y)| {
                let p = ((x - x0) / radius, (y0 - y) / radius);
                hull.iter().zip(hull.iter().cycle().skip(1)).any(|(a, b)| {
                    let length = (b.0 - a.0).hypot(b.1 - a.1);
                    // Farther to the right of a side than a pixel and a half.
                    ((b.0 - a.0) * (p.1 - a.1) - (b.1 - a.1) * (p.0 - a.0)) / length < -2.0 / radius
                })
            })
            .count();
        assert_eq!(outside, 0, "{id}: coloured pixels beyond the electrodes");
        assert!(bitmap.colours() > 60, "{id}: {} colours", bitmap.colours());

        let words = page.written_on(id);
        let at = |word: &str| {
            let found = words.iter().rev().find(|(text, ..)| text == word);
            found.unwrap_or_else(|| panic!("{id}: {word:?} is written: {words:?}")).clone()
        };
        assert!(at("L").1 < x0 - radius * 0.9 && at("R").1 > x0 + radius * 0.9, "left on the left");
        assert!(at("front").2 < y0 - radius * 0.9, "front up");
        at("seen from above");
        for sign in ["+", "\u{2212}"] {
            assert!(words.iter().any(|(text, ..)| text.starts_with(sign)), "{id}: the extreme {sign} is marked");
        }
    }
    let alt = page.attribute("#map-measured", "aria-label");
    let label = |k: usize| electrodes[k]["label"].as_str().unwrap();
    let values: Vec<f64> = map["measured"].as_array().unwrap().iter().map(number).collect();
    let extreme =
        |sign: f64| (0..values.len()).max_by(|&a, &b| (sign * values[a]).total_cmp(&(sign * values[b]))).unwrap();
    for sign in [1.0, -1.0] {
        assert!(alt.contains(label(extreme(sign))), "{} is told in {alt:?}", label(extreme(sign)));
    }
}

/// Corners of the convex hull, counter-clockwise (gift wrapping; Jarvis 1973).
fn hull(points: &[(f64, f64)]) -> Vec<(f64, f64)> {
    let start = *points.iter().min_by(|a, b| a.0.total_cmp(&b.0)).unwrap();
    let mut hull = vec![start];
    loop {
        let last = *hull.last().unwrap();
        let next = points.iter().filter(|&&p| p != last).copied().reduce(|best, p| {
            let turn = (best.0 - last.0) * (p.1 - last.1) - (best.1 - last.1) * (p.0 - last.0);
            if turn < 0.0 { p } else { best }
        });
        let next = next.unwrap();
        if next == start {
            return hull;
        }
        hull.push(next);
    }
}

/// A point of the head as a view shows it: to the right, up.
type Flattened = fn(Vec3) -> (f64, f64);

/// The dipole is painted where the report has it, in each view; the turnable view turns by keys; axis and arrow differ.
fn views_paint_the_dipole_where_it_is(browser: Browser) {
    let page = Page::open(browser);
    page.take_down_words();
    // From above x right, y up; from behind x right, z up; from the left, front on the left.
    let seen: [(&str, Flattened, &str); 3] = [
        ("view-above", |p| (p[0], p[1]), "seen from above"),
        ("view-behind", |p| (p[0], p[2]), "seen from behind"),
        ("view-left", |p| (-p[1], p[2]), "seen from the left (L)"),
    ];
    let mut places: Vec<Vec3> = Vec::new();
    let mut painted: Vec<Vec<(Bitmap, f64, f64, f64)>> = Vec::new();
    for name in ["lamp", "engine-room", "swell"] {
        if page.state() == "ready" {
            page.click(&button(name));
        } else {
            page.session().go(page.value("return document.URL").as_str().unwrap()).unwrap();
            page.wait_for("ready").unwrap();
            page.take_down_words();
            page.click(&button(name));
        }
        page.wait_for_answer();
        // Without the region around it, whenever that comes.
        page.value("for (const box of document.querySelectorAll('#region-legend input')) box.checked = false");
        page.until("the region", |page| page.visible("#region-legend"));
        page.settle();
        let report = page.report();
        let dipole = vector(&report["maps"][0]["dipole"]["canonical_mm"]);
        places.push(dipole * (1.0 / number(&report["head"]["radius_mm"])));
        let mut views = Vec::new();
        for (id, _, words) in &seen {
            let bitmap = page.pixels(&format!("#{id}"));
            let (x, y, radius) = circle(&bitmap, paper(&page));
            views.push((bitmap, x, y, radius));
            let written = page.written_on(id);
            assert!(written.iter().any(|(text, ..)| text == words), "{id}: {words:?} in {written:?}");
            if *id != "view-left" {
                let side = |word: &str| written.iter().find(|(text, ..)| text == word).unwrap().1;
                assert!(side("L") < x && side("R") > x, "{id}: left on the left");
            }
            assert!(page.attribute(&format!("#{id}"), "aria-label").len() > 20, "{id} is told in words");
        }
        painted.push(views);
    }
    // Where a dipole is, a dot is; where only another map's dipole would be, there is none.
    for (own, views) in painted.iter().enumerate() {
        for ((id, project, _), (bitmap, x0, y0, radius)) in seen.iter().zip(views) {
            for (other, &place) in places.iter().enumerate() {
                let (x, y) = project(place);
                let filled =
                    bitmap.share_near(x0 + radius * x, y0 - radius * y, 2.5, |x, y| bitmap.darkness(x, y) > 0.6);
                if other == own {
                    assert!(filled > 0.9, "{id}: {filled} of the dot at the dipole of map {own}");
                } else {
                    assert!(filled < 0.9, "{id}: {filled} of a dot at the dipole of map {other} instead of {own}");
                }
            }
        }
    }

    // The turnable view; what is drawn into it comes late.
    page.wait_for_verdict();
    let turned = || page.pixels("#view-turned").bytes;
    let start = turned();
    page.tab_to("#view-turned");
    page.press("\u{E014}");
    page.settle();
    let right = turned();
    assert_ne!(right, start, "an arrow key turns the head");
    let words = page.written_on("view-turned");
    assert!(words.iter().any(|(text, ..)| text.starts_with("seen from")), "{words:?}");
    page.press("\u{E013}");
    page.settle();
    assert_ne!(turned(), right);
    page.press("\u{E015}\u{E012}");
    page.settle();
    assert_eq!(turned(), start, "and back");

    // An axis has two equal ends; declared, it becomes an arrow.
    let axis: Vec<Bitmap> = VIEWS.iter().map(|id| page.pixels(&format!("#{id}"))).collect();
    assert_eq!(page.report()["maps"][0]["dipole"]["polarity"], "arbitrary");
    page.click("input[name=polarity][value=declared]");
    page.until("a declared polarity", |page| {
        page.state() == "answered" && page.report()["maps"][0]["dipole"]["polarity"] == "declared"
    });
    page.settle();
    for (id, axis) in VIEWS.iter().zip(&axis) {
        assert_ne!(page.pixels(&format!("#{id}")).bytes, axis.bytes, "{id}: an arrow instead of an axis");
    }
    page.picture("arrow");
    page.click("input[name=polarity][value=arbitrary]");
    page.until("an axis", |page| {
        page.state() == "answered" && page.report()["maps"][0]["dipole"]["polarity"] == "arbitrary"
    });
    page.settle();
    for (id, axis) in VIEWS.iter().zip(&axis) {
        assert_eq!(page.pixels(&format!("#{id}")).bytes, axis.bytes, "{id}: the axis again");
    }
}

/// Unit, sign, polarity and standard deviation change what they name and nothing else.
fn unit_sign_and_strength(browser: Browser) {
    let page = example_shown(browser, "lamp");
    let dipole = |report: &Value| report["maps"][0]["dipole"].clone();
    let strength = |report: &Value| number(&dipole(report)["strength"]);
    let micro = page.report();
    assert_eq!(dipole(&micro)["strength_unit"], "nAm", "the example's unit is known");
    assert!(page.text("#numbers").contains("nAm"));
    assert!(page.text("#scale-high").contains("µV"));
    unfold(&page);
    page.click("#unit input[value=V]");
    let volt = page.report_when("volt", |report| (strength(report) / strength(&micro) / 1e6 - 1.0).abs() < 1e-9);
    assert_eq!(dipole(&volt)["position_mm"], dipole(&micro)["position_mm"]);
    unfold(&page);
    page.click("#unit input[value=relative]");
    let first = page.report_when("relative", |report| dipole(report)["strength_unit"] == "relative");
    assert_eq!(strength(&first), strength(&micro), "the same figure without a unit");
    assert_eq!(dipole(&first)["strength_comparable"], false);
    assert!(page.text("#numbers").contains("not comparable"), "{}", page.text("#numbers"));

    // The sign turned, once and back.
    let canvas = page.pixels("#map-measured").bytes;
    page.click("#flip");
    page.until("a turned sign", |page| page.state() == "answered" && page.report()["maps"][0]["flipped"] == true);
    page.settle();
    let turned = page.report();
    assert_eq!(page.attribute("#flip", "aria-pressed"), "true");
    for key in ["measured", "projected", "residual"] {
        for (a, b) in first["maps"][0][key].as_array().unwrap().iter().zip(turned["maps"][0][key].as_array().unwrap()) {
            assert_eq!(number(a), -number(b), "{key}");
        }
    }
    assert_eq!(dipole(&turned)["position_mm"], dipole(&first)["position_mm"]);
    assert!((vector(&dipole(&turned)["direction"]) + vector(&dipole(&first)["direction"])).norm() < 1e-12);
    assert_ne!(page.pixels("#map-measured").bytes, canvas);
    page.click("#flip");
    page.until("the sign as given", |page| page.state() == "answered" && page.report()["maps"] == first["maps"]);
    page.settle();
    assert_eq!(page.pixels("#map-measured").bytes, canvas, "the same picture again");

    // With the standard deviation of its activation a component's strength can be compared.
    page.fill("#activation-sd", "2.5");
    page.until("comparable strength", |page| {
        page.state() == "answered" && page.report()["maps"][0]["dipole"]["strength_comparable"] == true
    });
    let scaled = page.report();
    assert_eq!(scaled["maps"][0]["activation_sd"], 2.5);
    assert!(!page.text("#numbers").contains("not comparable"), "{}", page.text("#numbers"));
    page.click("#activation-sd-clear");
    page.until("relative again", |page| page.state() == "answered" && page.report()["maps"] == first["maps"]);
    let none: Vec<String> = Vec::new();
    assert_eq!(page.accessibility_findings(), none);
}

/// Every number has a unit or says it has none, and every quantity a line that explains it.
fn every_number_and_term_is_explained(browser: Browser) {
    let page = example_shown(browser, "lamp");
    page.wait_for_verdict();
    let rows =
        page.value("return [...document.querySelectorAll('#numbers tbody tr')].map((row) => row.innerText.trim())");
    let rows: Vec<&str> = rows.as_array().unwrap().iter().map(|row| row.as_str().unwrap()).collect();
    assert!(rows.len() >= 14, "{rows:?}");
    for wanted in [
        "residual variance",
        "adjusted",
        "explained",
        "eccentricity",
        "depth",
        "radial",
        "strength",
        "axis",
        "electrodes",
    ] {
        assert!(rows.iter().any(|row| row.to_lowercase().contains(wanted)), "a row for {wanted}: {rows:#?}");
    }
    let unexplained = page.value(
        "return [...document.querySelectorAll('#numbers tbody tr')].filter((row) => (row.querySelector('.meaning, .long')?.innerText ?? '').trim().length < 10).map((row) => row.innerText)",
    );
    assert_eq!(unexplained, json!([]), "rows without a line of explanation");
    let terms = page
        .value("return [...document.querySelectorAll('.term')].filter((e) => e.getClientRects().length).length")
        .as_u64()
        .unwrap();
    assert!(terms >= 3, "{terms} explained words");
    let mut said = std::collections::BTreeSet::new();
    for k in 0..terms {
        // What is written anew between focus and key takes the focus with it.
        page.until("the explanation", |page| {
            page.ask(
                "[...document.querySelectorAll('.term')].filter((e) => e.getClientRects().length)[arguments[0]].focus()",
                &[json!(k)],
            );
            page.press("\u{E007}");
            page.settle();
            page.visible("#term-note")
        });
        let note = page.text("#term-note");
        assert!(note.len() > 25 && note.trim_end().ends_with('.'), "{note:?}");
        said.insert(note);
        page.press("\u{E00C}");
        page.until("no explanation", |page| !page.visible("#term-note"));
    }
    assert!(said.len() >= 3, "{said:?}");
}

in_both_browsers!(
    examples_are_one_click_away,
    own_data_come_back_after_an_example,
    maps_are_coloured_by_sign_within_the_electrodes,
    views_paint_the_dipole_where_it_is,
    unit_sign_and_strength,
    every_number_and_term_is_explained,
);
