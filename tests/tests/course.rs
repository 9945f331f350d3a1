//! Time points of one response and dipoles of several people on the page: what is told is what the engine finds natively.
use inward_core::report::Groups;
use inward_core::{Request, Study, Vec3};
use inward_tests::{Browser, Draw, DroppedFile, Electrodes, Page, PlainSeries, Surroundings, in_both_browsers};
use scraper::Html;
use serde_json::{Value, json};

/// A response as a table in µV, every 20 ms from −100: a source that rises from 40 ms on and moves, in noise.
fn response_table() -> String {
    let electrodes = Electrodes::set(32);
    let series = PlainSeries::standard();
    let mut draw = Draw::from(5);
    let times: Vec<f64> = (0..21).map(|k| -100.0 + 20.0 * f64::from(k)).collect();
    let maps: Vec<Vec<f64>> = times
        .iter()
        .map(|time| {
            let after = (time - 120.0) / 45.0;
            let moment = Vec3::new(0.6, 0.3, 0.8) * (60.0 * if *time > 30.0 { (-after * after).exp() } else { 0.0 });
            let place = Vec3::new(0.4 + after / 40.0, 0.1, 0.5);
            let lead = series.lead(place, &electrodes.directions, 1e-10);
            lead.iter().map(|row| row.dot(moment) + 0.2 * draw.normal()).collect()
        })
        .collect();
    let mut text = format!("label\t{}\n", times.iter().map(|time| format!("{time} ms")).collect::<Vec<_>>().join("\t"));
    for (row, label) in electrodes.labels.iter().enumerate() {
        text +=
            &format!("{label}\t{}\n", maps.iter().map(|map| format!("{:.4}", map[row])).collect::<Vec<_>>().join("\t"));
    }
    text
}

/// As the engine writes it: the page sets signs and blanks for the eye.
fn plain(text: &str) -> String {
    text.replace('\u{a0}', " ").replace('\u{2212}', "-").replace('\u{2019}', "'").trim().to_owned()
}

/// Reference populations are another matter, and would take the time.
fn draw_nothing(page: &Page) {
    page.until("drawing", |page| page.visible("#draw-stop"));
    page.click("#draw-stop");
}

/// The panel of this name in the dark, on a narrow page and on paper.
fn in_all_surroundings(page: &Page, panel: &str) {
    let plain = Surroundings::default();
    for (name, surroundings) in [
        ("dark", Surroundings { dark: true, ..plain }),
        ("narrow", Surroundings { zoom: 4, ..plain }),
        ("print", Surroundings { print: true, ..plain }),
    ] {
        page.surround(surroundings);
        page.settle();
        if name == "dark" {
            assert_eq!(page.accessibility_findings(), Vec::<String>::new());
        }
        if name != "print" {
            assert_eq!(page.overhang(), json!(0), "{name}");
        }
        page.value(&format!("document.querySelector('#{panel}-sentence').scrollIntoView()"));
        page.picture(&format!("{panel}-{name}"));
    }
    page.surround(plain);
}

/// A press of a key beside Control and the tabulator, by its number in the WebDriver standard.
fn key(code: u32) -> String {
    char::from_u32(code).unwrap().to_string()
}
const RIGHT: u32 = 0xE014;
const END: u32 = 0xE010;

fn a_response_is_chosen_in_time(browser: Browser) {
    let table = response_table();
    let study = Study::open(&Request {
        maps: table.as_bytes(),
        settings: serde_json::from_value(json!({ "mapUnit": "uV" })).unwrap(),
        ..Request::default()
    })
    .unwrap();
    let native = study.response().unwrap();
    let page = Page::open(browser);
    page.drop_files(&[DroppedFile { name: "response.tsv", text: &table }]);
    page.until("an answer", Page::rests);
    page.value("document.querySelector('[name=unit][value=uV]').click()");
    page.until("the response", |page| plain(&page.text("#response-sentence")) == native.sentence);
    draw_nothing(&page);
    let labels: Vec<String> = page.texts("#response-instants button").iter().map(|text| plain(text)).collect();
    assert_eq!(labels, native.instants.iter().map(|one| one.label.clone()).collect::<Vec<_>>());

    // The map of an instant is shown everywhere, by button, by key and by pointer.
    let shown = |index: usize| {
        page.until("the map", |page| page.text("#subject").starts_with(&format!("{} ms", native.times[index])));
        assert_eq!(page.attribute("#response-instant", "aria-valuenow"), index.to_string());
        assert!(plain(&page.text("#response-readout")).starts_with(&format!("{} ms", native.times[index])));
    };
    page.click("#response-instants button:nth-child(2)");
    let middle = native.instants[1].index;
    shown(middle);
    assert_eq!(page.attribute("#response-instants button:nth-child(2)", "aria-pressed"), "true");
    page.focus("#response-instant");
    page.press(&key(RIGHT));
    shown(middle + 1);
    page.press(&key(END));
    shown(20);
    let before = page.pixels("#response-map").bytes;
    let width = page.value("return document.querySelector('#response-figure').clientWidth").as_f64().unwrap();
    let peak = native.instants[2].index;
    let across = 46.0 + (width - 60.0) * peak as f64 / 20.0;
    page.click_at("#response-figure", (across - width / 2.0).round() as i64, 60);
    shown(peak);
    page.until("its map", |page| page.pixels("#response-map").bytes != before);
    assert!(plain(&page.text("#response-quiet")).contains("of 21 time points, drawn faint"));

    // One position over an interval: by fields, by keys; what cannot be is refused.
    let fixed = |first: usize, last: usize| {
        let native = study.fixed(first, last).unwrap().unwrap();
        page.until("one position", |page| plain(&page.text("#fixed-sentence")) == native.sentence);
        let told = page.text("#fixed-rows [data-code=pooled_residual_variance] .value");
        assert!(told.starts_with(&native.rows[0].value), "{told}");
    };
    page.click("#fixed summary");
    fixed(native.instants[0].index, peak);
    page.fill("#fixed-to", "1000");
    assert_eq!(page.attribute("#fixed-to", "aria-invalid"), "true");
    page.fill("#fixed-to", "161");
    fixed(native.instants[0].index, 13);
    page.focus("#fixed-first");
    page.press(&key(RIGHT));
    fixed(native.instants[0].index + 1, 13);
    assert_eq!(page.accessibility_findings(), Vec::<String>::new());
    page.picture("response");
    in_all_surroundings(&page, "response");
    let figure = page.svg("#response-tools", "inward-response.svg");
    for part in ["global field power", "mid-rise", "one position", "seen from above"] {
        assert!(figure.contains(part), "{part}");
    }

    // The baseline gives the noise, which is taken for the region.
    page.click("#response-baseline");
    page.fill("#set-baseline-from", "-100");
    page.fill("#set-baseline-to", "0");
    page.until("noise", |page| page.visible("#response-take"));
    page.click("#response-take");
    page.until("taken", |page| {
        page.value("return document.querySelector('#set-noise-sd').value !== ''") == json!(true)
    });
    let taken = || page.value("return document.querySelector('#response-take').disabled");
    assert_eq!(taken(), json!(true));

    // What leaves tells of time points, and of the response.
    page.until("an answer", Page::rests);
    let methods = page.methods();
    for told in ["each of 21 time points of a response", "Global field power", "Lehmann & Skrandies 1980, "] {
        assert!(methods.contains(told), "{told}: {methods}");
    }
    let (_, report) = page.report_page();
    let text = plain(&Html::parse_document(&report).root_element().text().collect::<String>());
    let shown = page.text("#subject");
    let instant = plain(shown.split(" ·").next().unwrap());
    for told in [
        &*format!("map “{instant}”"),
        "21 time points of a response",
        "Global field power",
        "The mean from -100 to 0 ms",
    ] {
        assert!(text.contains(told), "{told} of {shown}: {} bytes", text.len());
    }
}

/// Maps of three places in four people, each a little elsewhere, and of noise; with standard positions.
fn recordings() -> Vec<(String, String)> {
    let electrodes = Electrodes::set(32);
    let series = PlainSeries::standard();
    let mut draw = Draw::from(9);
    let places = [Vec3::new(0.45, 0.2, 0.4), Vec3::new(-0.45, 0.1, 0.4), Vec3::new(0.0, -0.5, 0.4)];
    (1..=4)
        .map(|person| {
            let mut maps: Vec<Vec<f64>> = places
                .iter()
                .map(|place| {
                    let near = Vec3::new(draw.normal(), draw.normal(), draw.normal()) * 0.04;
                    let sign = if draw.normal() < 0.0 { -1.0 } else { 1.0 };
                    let lead = series.lead(*place + near, &electrodes.directions, 1e-10);
                    lead.iter().map(|row| sign * row.dot(Vec3::new(0.3, 0.2, 0.9)) + 0.001 * draw.normal()).collect()
                })
                .collect();
            maps.push((0..32).map(|_| draw.normal()).collect());
            let mut text = "label\ta\tb\tc\tnoise\n".to_owned();
            for (row, label) in electrodes.labels.iter().enumerate() {
                text += &format!(
                    "{label}\t{}\n",
                    maps.iter().map(|map| format!("{:.5}", map[row])).collect::<Vec<_>>().join("\t")
                );
            }
            (format!("sub-{person:02}_maps.tsv"), text)
        })
        .collect()
}

/// The same natively, of maps with a residual variance of at most 10 %.
fn grouped(recordings: &[(String, String)], groups: Option<usize>) -> Groups {
    let members: Vec<Value> = recordings
        .iter()
        .map(|(name, text)| {
            let study = Study::open(&Request { maps: text.as_bytes(), ..Request::default() }).unwrap();
            let radius = study.head().radius_mm;
            let dipoles: Vec<Value> = (0..study.count())
                .filter_map(|map| {
                    let found = serde_json::to_value(study.fit(map).unwrap()).unwrap();
                    let rv = found["residual_variance"].as_f64().unwrap();
                    let mm = found["dipole"]["canonical_mm"].as_array().unwrap();
                    let position: Vec<f64> = mm.iter().map(|part| part.as_f64().unwrap() / radius).collect();
                    let direction = &found["dipole"]["canonical_direction"];
                    (rv <= 0.1).then(|| json!({ "map": map, "position": position, "direction": direction, "rv": rv }))
                })
                .collect();
            json!({ "name": name, "subject": name[4..6], "dipoles": dipoles })
        })
        .collect();
    Groups::new(&serde_json::from_value(json!({ "members": members, "groups": groups })).unwrap()).unwrap()
}

fn dipoles_of_several_people_are_grouped(browser: Browser) {
    let recordings = recordings();
    let native = grouped(&recordings, None);
    assert_eq!((native.count, native.groups[0].subjects), (3, 4));
    let page = Page::open(browser);
    let files: Vec<DroppedFile> = recordings.iter().map(|(name, text)| DroppedFile { name, text }).collect();
    page.drop_files(&files);
    page.until("all recordings", |page| page.rests() && page.texts(".decomposition").len() == 4);
    draw_nothing(&page);
    assert!(!page.methods().contains("Ward's hierarchy"), "nothing is grouped before it is asked for");
    page.click("#groups > summary");
    let told = |native: &Groups| {
        page.until("groups", |page| plain(&page.text("#groups-sentence")) == native.sentence);
        let cells: Vec<String> = page.texts("#groups-table td").iter().map(|cell| plain(cell)).collect();
        assert_eq!(cells, native.groups.iter().flat_map(|group| group.cells.clone()).collect::<Vec<_>>());
    };
    told(&native);
    let methods = page.methods();
    assert!(methods.contains("Ward's hierarchy") && !methods.contains("matched one to one"), "{methods}");
    assert_eq!(page.texts("#groups-people tbody td:last-child"), ["3"; 4]);
    assert!(page.text("#groups-notes").contains("a centimetre or more"));
    let values: Vec<String> = native.criterion.iter().map(|one| one.text.clone()).collect();
    assert_eq!(page.texts("#groups-criterion td").iter().map(|text| plain(text)).collect::<Vec<_>>(), values);
    page.until("mean maps", |page| page.texts("#groups-maps canvas").len() == 3 && !page.visible("#groups-progress"));
    assert_eq!(page.accessibility_findings(), Vec::<String>::new());
    page.value("document.querySelector('#groups-sentence').scrollIntoView()");
    page.picture("groups");

    // Chosen by hand; another person; one left out; all maps.
    page.choose("#groups-count", "2");
    told(&grouped(&recordings, Some(2)));
    assert!(page.methods().contains("into two groups, a number chosen by hand"));
    page.choose("#groups-count", "automatic");
    told(&native);
    assert!(page.methods().contains("as many groups as made the mean silhouette largest (Rousseeuw 1987)"));
    page.fill("#groups-people tbody tr:last-child [type=text]", "01");
    page.until("three people", |page| page.text("#groups-sentence").contains("of 3 people"));
    page.click("#groups-people tbody tr:last-child [type=checkbox]");
    told(&grouped(&recordings[..3], None));

    // Names leave only where they are asked for.
    let copied = || {
        page.click("#copy-groups");
        page.until("a copy", |page| page.text("#copy-groups") == "Copied");
        page.clipboard()
    };
    let without = copied();
    assert!(!without.contains("\t01\t") && !without.contains("maps") && without.contains("\ta\t"), "{without}");
    page.until("again", |page| page.text("#copy-groups") != "Copied");
    page.click("#groups-names");
    assert!(copied().contains("1\t01\t"));
    let figure = page.svg("#groups-tools", "inward-groups.svg");
    assert!(figure.contains("Group 3") && figure.contains("seen from the left"));

    // A member opens its map.
    page.click("#groups-members details:nth-child(2) summary");
    let member = page.text("#groups-members details:nth-child(2) button:nth-of-type(3)");
    page.click("#groups-members details:nth-child(2) button:nth-of-type(3)");
    page.until("its map", |page| {
        page.text("#subject").starts_with(member.split(" · ").next().unwrap())
            && page.text("#subject").contains("sub-03")
    });
    in_all_surroundings(&page, "groups");
}

/// Components are no response.
#[test]
fn components_have_no_time_points() {
    let page = Page::open(Browser::Chromium);
    page.drop_files(&[DroppedFile { name: "response.tsv", text: &response_table() }]);
    page.until("an answer", Page::rests);
    page.until("the response", |page| page.visible("#response"));
    page.choose("#set-columnsAre", "components of one decomposition");
    page.until("none", |page| !page.visible("#response"));
}

in_both_browsers!(a_response_is_chosen_in_time, dipoles_of_several_people_are_grouped);
