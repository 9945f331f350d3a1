//! What the page has understood is put right in it: times and a baseline, axes, sides, a sphering matrix, tables that
//! come one after the other; each change by keyboard too, each undone, each said.
use inward_tests::{Browser, CONTROL, DroppedFile, Folder, Page, TAB, example, in_both_browsers};
use serde_json::{Value, json};

const ENTER: &str = "\u{E007}";
const ESCAPE: &str = "\u{E00C}";
const DOWN: &str = "\u{E015}";

fn fields(table: &str) -> Vec<Vec<String>> {
    table.lines().map(|line| line.split('\t').map(String::from).collect()).collect()
}

fn table(rows: impl IntoIterator<Item = Vec<String>>) -> String {
    rows.into_iter().map(|row| row.join("\t") + "\n").collect()
}

/// The electrodes of the example with other labels and in other axes; the first row is the header.
fn electrodes(label: impl Fn(usize, &str) -> String, place: impl Fn([f64; 3]) -> [f64; 3]) -> String {
    table(fields(&example("watch_electrodes.tsv")).into_iter().enumerate().map(|(at, row)| {
        if at == 0 {
            return row;
        }
        let [x, y, z] = place([1, 2, 3].map(|k| row[k].parse::<f64>().unwrap()));
        vec![label(at, &row[0]), x.to_string(), y.to_string(), z.to_string()]
    }))
}

/// The maps of the example with other labels and names.
fn maps(label: impl Fn(usize, &str) -> String, name: impl Fn(usize, &str) -> String) -> String {
    table(fields(&example("watch_maps.tsv")).into_iter().enumerate().map(|(at, row)| match at {
        0 => row.iter().enumerate().map(|(k, text)| if k == 0 { text.clone() } else { name(k, text) }).collect(),
        _ => std::iter::once(label(at, &row[0])).chain(row[1..].iter().cloned()).collect(),
    }))
}

fn same(_: usize, text: &str) -> String {
    text.into()
}

fn numbered(at: usize, _: &str) -> String {
    format!("E{at}")
}

fn drop_two(page: &Page, maps: &str, electrodes: &str) {
    page.drop_files(&[
        DroppedFile { name: "maps.tsv", text: maps },
        DroppedFile { name: "positions.tsv", text: electrodes },
    ]);
    page.until("two cards", |page| {
        page.rests() && page.exists("[data-file='maps.tsv']") && page.exists("[data-file='positions.tsv']")
    });
}

/// Back to the empty page, change by change; the answer follows.
fn undo_all(page: &Page) {
    let mut steps = 0;
    while page.visible("#undo") {
        page.value("document.querySelector('#undo').click()");
        assert!(page.text("#said").starts_with("Undone: ") || !page.visible("#said"), "{}", page.text("#said"));
        steps += 1;
        assert!(steps < 60);
    }
    page.until("an empty page", |page| page.visible("#empty") && page.state() == "ready");
}

fn assert_accessible(page: &Page, state: &str) {
    assert_eq!(page.accessibility_findings(), Vec::<String>::new(), "{state}");
}

fn focused(page: &Page) -> Value {
    page.value("return document.activeElement.id")
}

fn number(page: &Page, code: &str) -> String {
    page.text(&format!("#numbers [data-code={code}] td"))
}

/// What a screen reader was told last.
fn spoken(page: &Page) -> String {
    page.value("return document.querySelector('#spoken').textContent.trim()").as_str().unwrap().replace('\u{a0}', " ")
}

/// A step of a list by keyboard alone. Where the list is open, Enter chooses; where it was not, it may open now.
fn next_option(page: &Page, list: &str, times: usize) {
    page.focus("#main");
    page.tab_to(list);
    let before = page.ask("return document.querySelector(arguments[0]).selectedIndex", &[json!(list)]);
    page.press(&DOWN.repeat(times));
    page.press(ENTER);
    page.press(ESCAPE);
    let script = "return document.querySelector(arguments[0]).selectedIndex";
    page.until("another option", |page| page.rests() && page.ask(script, &[json!(list)]) != before);
}

/// Start, step and baseline by keyboard; what cannot be is said beside the field; each change is undone by the keys.
fn times_are_set(page: &Page) {
    drop_two(page, &maps(same, |k, _| format!("sample {k}")), &example("watch_electrodes.tsv"));
    assert!(!page.exists("#set-times-start"));
    page.choose("#set-columnsAre", "time points of one response");
    page.until("fields for the times", |page| page.rests() && page.exists("#set-times-start"));
    assert!(page.text("#cards").contains("Times of the maps: not known"));
    assert!(!page.exists("#set-baseline-from"), "no baseline before times are known");
    assert_eq!(spoken(page), "The answer in words is unchanged.");
    page.focus("#set-times-start");
    page.press(&format!("-100{TAB}12,5{TAB}"));
    page.until("the times", |page| page.rests() && page.text("#subject").contains("sample 1 · −100 ms"));
    assert_eq!(focused(page), json!("set-times-unit"), "whoever types goes on");
    let names = page.texts("#ledger .ledger-name");
    assert_eq!(names.len(), 6, "moments follow one another: {names:?}");
    assert_eq!(names[5].replace('\u{a0}', " ").split(" · ").nth(1), Some("−37.5 ms"));
    assert!(page.text("#cards").contains("Times of the maps: −100 to −37.5 ms"));
    let before = number(page, "residual_variance");
    page.press(&format!("{TAB}-100{TAB}-75{TAB}"));
    page.until("the baseline", |page| page.rests() && page.text("#notes").contains("(3 maps)"));
    assert_ne!(number(page, "residual_variance"), before, "another map now");
    let settings = page.report()["settings"].clone();
    assert_eq!(settings["times"], json!({ "start": -100, "step": 12.5, "unit": "ms" }));
    assert_eq!(settings["baseline"], json!({ "from": -100, "to": -75 }));
    assert_accessible(page, "time points");
    // A window without a map: said where it was entered, and the answer stays.
    let answered = page.text("#sentence");
    page.fill("#set-baseline-to", "-500");
    page.until("the refusal", |page| page.state() == "failed");
    assert!(page.exists(".card #failure") && page.text("#failure-message").contains("−500"), "{}", page.failure_text());
    assert_eq!(page.text("#sentence"), answered);
    assert_accessible(page, "a refused setting");
    // Half an entry is not taken, and not lost to the answer to another one.
    page.fill("#set-baseline-to", "-75");
    page.until("the window of before", Page::rests);
    page.ask("document.querySelector('#set-interpolated').value = 'Fp'", &[]);
    page.choose("#set-times-unit", "s");
    page.until("seconds", |page| page.rests() && page.text("#subject").contains("−100 s"));
    assert_eq!(page.value("return document.querySelector('#set-interpolated').value"), json!("Fp"));
    // Change by change, by the keys: the unit, the window that was refused and those before it, the times, what maps are.
    page.focus("#main");
    let back = |what: &str, state: &str, holds: &dyn Fn() -> bool| {
        page.session().chord(CONTROL, 'z').unwrap();
        page.until(what, |page| page.state() == state && !page.visible("#progress") && holds());
    };
    let baseline = || page.text("#notes").contains("(3 maps)");
    back("milliseconds", "answered", &|| page.text("#subject").contains("−100 ms") && baseline());
    back("the refused window", "failed", &|| page.text("#failure-message").contains("−500"));
    back("the first window", "answered", &baseline);
    back("no baseline", "answered", &|| number(page, "residual_variance") == before);
    back("no times", "answered", &|| page.text("#subject").starts_with("sample 1 · maps.tsv"));
    back("no choice", "answered", &|| !page.exists("#set-times-start"));
    undo_all(page);
    // Times that the header tells.
    drop_two(page, &maps(same, |k, _| format!("{} ms", 4 * k)), &example("watch_electrodes.tsv"));
    assert!(page.text("#cards").contains("time points of one response, by their names"), "{}", page.text("#cards"));
    assert!(page.text("#cards").contains("Times of the maps: 4 to 24 ms"));
    assert!(page.text("#subject").starts_with("4 ms · maps.tsv"), "said once: {}", page.text("#subject"));
    assert!(page.text("#sign-words").contains("these maps"), "no component");
    undo_all(page);
}

/// Axes that nothing tells: said beside the answer, chosen by keyboard, seen on the small head; a mirror image the same.
fn axes_and_sides_are_put_right(page: &Page) {
    // x to the front, y to the left.
    let turned = |[x, y, z]: [f64; 3]| [y, -x, z];
    drop_two(page, &maps(numbered, same), &electrodes(numbered, turned));
    assert!(page.text("#warned").contains("Axes were assumed"), "beside the answer: {}", page.text("#answer"));
    assert_accessible(page, "assumed axes");
    let (sentence, head) = (page.text("#sentence"), page.attribute("#preview-above", "aria-label"));
    let pixels = page.pixels("#preview-above").bytes;
    next_option(page, "#set-axes", 3);
    page.until("other axes", |page| page.rests() && page.text("#sentence") != sentence);
    assert_eq!(focused(page), json!("set-axes"));
    assert!(page.text("#sentence").contains("under CP3, left"), "{}", page.text("#sentence"));
    assert!(page.text("#sentence").contains(&spoken(page)), "what is new is said: {}", spoken(page));
    assert!(!page.visible("#warned") && page.attribute("#preview-above", "aria-label") != head);
    assert_ne!(page.pixels("#preview-above").bytes, pixels);
    page.focus("#main");
    page.tab_to("#undo");
    while page.text("#undo").contains("axes") {
        page.press(ENTER);
        page.settle();
    }
    page.until("the axes of before", |page| page.rests() && page.text("#sentence") == sentence);
    undo_all(page);
    drop_two(page, &example("watch_maps.tsv"), &electrodes(same, |[x, y, z]| [-x, y, z]));
    assert!(page.text("#warned").contains("mirror image"), "{}", page.text("#warned"));
    assert!(page.text("#sentence").contains("CP4, right"));
    next_option(page, "#set-mirror", 2);
    page.until("sides exchanged", |page| page.rests() && page.text("#sentence").contains("CP3, left"));
    assert!(!page.text("#answer").contains("although the labels contradict"));
    page.session().chord(CONTROL, 'z').unwrap();
    page.until("sides as written", |page| page.rests() && page.text("#sentence").contains("CP4, right"));
    undo_all(page);
}

/// BIDS tables in one drop: landmarks give the axes, the size of the head overrules the unit, channels tell what counts.
fn what_describes_the_tables_is_read(page: &Page) {
    let metres = |[x, y, z]: [f64; 3]| [y / 1000.0, -x / 1000.0, z / 1000.0];
    let positions = electrodes(numbered, metres);
    let [left, front, right] = [[-80.0, 6.0, 2.0], [0.0, 98.0, 10.0], [80.0, 6.0, 2.0]].map(metres);
    let described = json!({
        "EEGCoordinateSystem": "Other", "EEGCoordinateUnits": "mm",
        "AnatomicalLandmarkCoordinates": { "LPA": left, "NAS": front, "RPA": right },
        "AnatomicalLandmarkCoordinateUnits": "mm"
    });
    let channels: String = (1..=70)
        .map(|at| {
            format!("E{at}\t{}\tuV\t{}\n", if at == 5 { "EOG" } else { "EEG" }, if at == 9 { "bad" } else { "good" })
        })
        .collect();
    let files = [
        ("sub-1_coordsystem.json", described.to_string()),
        ("sub-1_channels.tsv", format!("name\ttype\tunits\tstatus\n{channels}")),
        ("sub-1_electrodes.tsv", positions),
        ("maps.tsv", maps(numbered, same)),
        ("participant.pdf", "%PDF-1.7 a letter".to_owned()),
    ];
    page.drop_files(&files.iter().map(|(name, text)| DroppedFile { name, text }).collect::<Vec<_>>());
    // The letter keeps none of them out.
    page.until("five files", |page| page.state() == "failed" && page.visible("#answer"));
    assert!(page.text("#failure-message").contains("participant.pdf"), "{}", page.failure_text());
    page.click("#failure-dismiss");
    for (name, role) in [
        ("sub-1_coordsystem.json", "description of coordinates"),
        ("sub-1_channels.tsv", "table of channels"),
        ("sub-1_electrodes.tsv", "electrodes"),
        ("maps.tsv", "maps"),
    ] {
        assert!(page.text(&format!("[data-file='{name}'] h3")).contains(role), "{name}");
    }
    let cards = page.text("#cards");
    for words in [
        "x to the front, y to the left, z up, as the points at ears and nose tell",
        "Positions are in metres",
        "Not on the scalp: E5",
    ] {
        assert!(cards.contains(words), "{words:?}: {cards}");
    }
    assert!(page.text("#warned").contains("declared to be in millimetres"), "{}", page.text("#warned"));
    assert!(page.text("#notes").contains("calls them bad: E9"));
    assert!(page.text("#sentence").contains("CP3, left"), "{}", page.text("#sentence"));
    let used = page.report()["electrodes"].as_array().unwrap().iter().filter(|e| e["used"] == true).count();
    assert_eq!(used, 68);
    assert_accessible(page, "BIDS");
    undo_all(page);
}

const COUNT: usize = 20;

/// A reflection, which is its own inverse (Householder 1958, J ACM 5:339–342).
fn reflection(row: usize, column: usize) -> f64 {
    let part = |at: usize| (at * at % 7) as f64 + 1.0;
    let length: f64 = (0..COUNT).map(|at| part(at) * part(at)).sum();
    f64::from(u8::from(row == column)) - 2.0 * part(row) * part(column) / length
}

fn spread(at: usize) -> f64 {
    0.5 + 0.3 * (at * 5 % COUNT) as f64
}

fn matrix(entry: impl Fn(usize, usize) -> f64) -> String {
    table((0..COUNT).map(|row| (0..COUNT).map(|column| entry(row, column).to_string()).collect()))
}

/// An unmixing matrix asks for its sphering matrix, takes it by its button or when it is dropped next, and gives the
/// maps of both: the inverse of a reflection times a diagonal.
fn a_sphering_matrix_is_asked_for(page: &Page) {
    let positions = table(fields(&example("watch_electrodes.tsv")).into_iter().step_by(3).take(COUNT + 1));
    let positions = format!("label\tx\ty\tz\n{}", positions.split_once('\n').unwrap().1);
    let (unmixing, sphering) =
        (matrix(reflection), matrix(|row, column| if row == column { spread(row) } else { 0.0 }));
    drop_two(page, &unmixing, &positions);
    page.choose("#set-mapsAre", "an unmixing matrix, whose pseudo-inverse holds the maps");
    page.until("the question", |page| page.rests() && page.visible("#cards .pick"));
    assert!(page.text("[data-file='maps.tsv']").contains("Pick the sphering matrix"));
    assert!(page.text("#warned").contains("No sphering matrix was given"), "{}", page.text("#warned"));
    assert!(page.text("#warned").contains("each column was taken"), "{}", page.text("#warned"));
    assert_accessible(page, "sphering asked for");
    let lone = page.report()["maps"].clone();
    let expected: Vec<f64> = {
        let column: Vec<f64> = (0..COUNT).map(|row| reflection(row, 0) / spread(row)).collect();
        let mean = column.iter().sum::<f64>() / COUNT as f64;
        column.iter().map(|value| value - mean).collect()
    };
    let is_right = |page: &Page| {
        let map = page.report()["maps"][0]["measured"].clone();
        let found: Vec<f64> = map.as_array().unwrap().iter().map(|value| value.as_f64().unwrap()).collect();
        found.iter().zip(&expected).all(|(a, b)| (a - b).abs() < 1e-9)
    };
    let taken = |page: &Page| {
        page.until("both matrices", |page| page.rests() && page.exists("[data-file='sphering.txt']"));
        assert!(page.text("[data-file='sphering.txt'] h3").contains("sphering matrix"));
        assert!(is_right(page) && !page.text("#answer").contains("No sphering matrix"));
        assert!(!page.exists("#sphering-file"), "asked no more");
    };
    let folder = Folder::fresh("sphering");
    page.pick("#sphering-file", &folder.write("sphering.txt", &sphering));
    taken(page);
    page.click("#undo");
    page.until("one matrix", |page| page.rests() && page.exists("#sphering-file"));
    assert_eq!(page.report()["maps"], lone);
    // Dropped next, it may be another map or belong to this one.
    page.drop_files(&[DroppedFile { name: "sphering.txt", text: &sphering }]);
    page.until("the offer", |page| {
        page.rests() && page.visible("#take-sphering") && page.text("#subject").contains("sphering.txt")
    });
    assert!(page.text("#said").contains("maps.tsv") && !is_right(page), "{}", page.text("#said"));
    page.focus("#main");
    page.tab_to("#take-sphering");
    page.press(ENTER);
    taken(page);
    assert!(!page.visible("#take-sphering") && focused(page) == json!("undo"));
    undo_all(page);
}

/// Of two other tables the first fits no more than the second, but both may; values beside positions need no question.
fn tables_come_one_after_the_other(page: &Page) {
    page.drop_files(&[DroppedFile { name: "first.tsv", text: &example("watch_electrodes.tsv") }]);
    page.until("the next step", |page| page.text("#status").contains("first.tsv (electrodes). Now give a map"));
    drop_two(page, &example("watch_maps.tsv"), &example("watch_electrodes.tsv"));
    let before = page.text("#sentence");
    page.drop_files(&[DroppedFile { name: "others.tsv", text: &electrodes(numbered, |place| place) }]);
    page.wait_for_failure();
    assert!(page.text("#failure-kept").contains("give it next"), "{}", page.failure_text());
    page.drop_files(&[DroppedFile { name: "theirs.tsv", text: &maps(numbered, same) }]);
    page.until("both", |page| page.rests() && page.exists("[data-file='others.tsv']"));
    assert!(page.text("#subject").contains("theirs.tsv · others.tsv") && !page.visible("#failure"));
    page.click("#undo");
    page.until("the former two", |page| page.rests() && page.text("#sentence") == before);
    // Positions apart and beside: those apart count.
    let beside = table(
        fields(&example("watch_electrodes.tsv"))
            .into_iter()
            .zip(fields(&example("lamp.tsv")))
            .map(|(place, value)| place.into_iter().chain([value[1].clone()]).collect()),
    );
    page.drop_files(&[
        DroppedFile { name: "both.tsv", text: &beside },
        DroppedFile { name: "apart.tsv", text: &example("watch_electrodes.tsv") },
    ]);
    page.until("both", |page| page.rests() && page.text("#subject").contains("both.tsv · apart.tsv"));
    assert!(
        page.text("#notes").contains("The positions in the file “both.tsv” were not needed"),
        "{}",
        page.text("#notes")
    );
    // A spreadsheet's cells with decimal commas, into the field.
    page.click("#fold");
    page.paste("#maps-text", &example("lamp.tsv").replace('.', ",").replace('\n', "\r\n"));
    page.until("the pasted map", |page| page.rests() && page.exists("[data-file='pasted maps']"));
    assert!(page.text("#sentence").contains("98.9"), "{}", page.text("#sentence"));
    assert!(page.text("#notes").contains("taken as decimal marks"), "{}", page.text("#notes"));
    // A map is named, not numbered, where its entry is refused.
    page.fill("#activation-sd", "1e300");
    page.wait_for_failure();
    assert!(page.text("#failure-message").contains("“lamp”"), "{}", page.failure_text());
    undo_all(page);
}

fn what_is_wrong_is_put_right(browser: Browser) {
    let page = Page::open(browser);
    times_are_set(&page);
    axes_and_sides_are_put_right(&page);
    what_describes_the_tables_is_read(&page);
    a_sphering_matrix_is_asked_for(&page);
    tables_come_one_after_the_other(&page);
}

in_both_browsers!(what_is_wrong_is_put_right);
