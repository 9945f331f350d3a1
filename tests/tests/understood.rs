//! What the page understood of files, shown and changed in place, in both browsers.
use inward_tests::{Browser, CONTROL, DroppedFile, Folder, Page, example, in_both_browsers, sample};
use serde_json::{Value, json};

const ENTER: &str = "\u{E007}";
const DOWN: &str = "\u{E015}";

fn electrodes() -> String {
    example("watch_electrodes.tsv")
}

fn maps() -> String {
    example("watch_maps.tsv")
}

fn drop_watch(page: &Page) {
    page.drop_files(&[
        DroppedFile { name: "watch_maps.tsv", text: &maps() },
        DroppedFile { name: "watch_electrodes.tsv", text: &electrodes() },
    ]);
    page.until("the cards of the watch", |page| page.rests() && page.exists("[data-file='watch_electrodes.tsv']"));
}

/// Value of the row of numbers with a code.
fn number(page: &Page, code: &str) -> String {
    page.text(&format!("#numbers [data-code={code}] td"))
}

/// The positions, maps and labels of `cap.npz` as three files.
fn cap() -> [(String, Vec<u8>); 3] {
    let bytes = sample("cap.npz");
    let files = inward_core::read::zip::read(&bytes).unwrap();
    let part = |wanted: &str| {
        let (name, bytes) = files.iter().find(|(name, _)| name.starts_with(wanted)).unwrap();
        (name.clone(), bytes.clone())
    };
    [part("A"), part("labels"), part("positions")]
}

fn what_is_no_table_is_refused_by_itself(page: &Page) {
    page.drop_bytes(&[("holiday.png", b"\x89PNG\r\n\x1a\n\x00\x00\x00\rIHDR\x00\x00\x00\x01\x00\x00\x00\x01\x08")]);
    page.wait_for_failure();
    assert!(page.text("#failure-message").contains("a picture"), "{}", page.failure_text());
    let names =
        page.value("return ['maps', 'electrodes'].map((kind) => document.querySelector(`#${kind}-name`).textContent)");
    assert_eq!(names, json!(["", ""]), "nothing of it stays");
    assert!(!page.visible("#undo"), "nothing was changed that could be undone");
    page.click("#failure-dismiss");
}

fn binary_files_are_told_apart_in_any_order(page: &Page) {
    let parts = cap();
    let mut seen = Vec::new();
    for order in [[0, 1, 2], [2, 1, 0], [1, 2, 0]] {
        for at in order {
            let (name, bytes) = &parts[at];
            page.drop_bytes(&[(name, bytes)]);
        }
        page.until("nineteen electrodes", |page| {
            page.rests() && page.texts(".card").iter().filter(|card| card.contains("NumPy")).count() == 3
        });
        let report = page.download_report();
        assert_eq!(report["electrodes"].as_array().unwrap().len(), 19);
        assert_eq!(report["understood"]["labels"]["matched"], 19);
        seen.push(report["maps"].clone());
        while page.visible("#undo") {
            page.click("#undo");
        }
        page.until("an empty page", |page| page.visible("#empty"));
    }
    assert!(seen.iter().all(|maps| *maps == seen[0]), "the order of files does not matter");
    // All of it in one file.
    page.drop_bytes(&[("cap.mat", &sample("cap.mat"))]);
    page.until("the MATLAB file", |page| page.rests() && page.exists("[data-file='cap.mat']"));
    assert_eq!(page.download_report()["maps"].as_array().unwrap().len(), seen[0].as_array().unwrap().len());
    assert!(!page.text("#subject").contains("standard positions"), "positions stand in the same file");
}

fn cards_tell_what_was_understood(page: &Page) {
    drop_watch(page);
    let said = page.text("#said");
    assert!(said.contains("cap.mat"), "what gave way is named: {said:?}");
    let card = page.text("[data-file='watch_electrodes.tsv']");
    for words in ["electrodes", "Text table", "UTF-8", "70 rows", "4 columns", "1 “label” label", "4 “z” z"] {
        assert!(card.contains(words), "{words:?} in {card:?}");
    }
    let head = page.text("#head-card");
    for words in ["millimetres", "With a position and a value: 70"] {
        assert!(head.contains(words), "{words:?} in {head:?}");
    }
    let whole = page.value("return [...document.querySelector('#set-mapsAre').options].map((option) => option.text)");
    assert_eq!(whole[2], "an unmixing matrix, whose pseudo-inverse holds the maps", "words of ours are not shortened");
    let report = page.download_report();
    assert!(!page.text("#cards").contains("Its fields are divided by tabs."), "what is seldom wrong is folded away");
    page.click("[data-file='watch_maps.tsv'] summary");
    page.click("[data-file='watch_electrodes.tsv'] summary");
    let shown = page.text("#cards");
    for choice in report["understood"]["choices"].as_array().unwrap() {
        let sentence = choice["sentence"].as_str().unwrap();
        assert!(shown.contains(sentence), "{sentence:?} is shown: {shown}");
    }
    for canvas in ["#preview-above", "#preview-left"] {
        assert!(page.pixels(canvas).bytes.iter().any(|byte| *byte > 0), "{canvas} is painted");
        let words = page.attribute(canvas, "aria-label");
        assert!(words.contains("front") && words.len() > 30, "{canvas} says what it shows: {words}");
    }
}

fn a_wrong_file_leaves_answer_and_inputs(page: &Page) {
    let before = (page.text("#sentence"), page.text("#cards"), page.download_report());
    let wrong: [(&str, &[u8]); 4] = [
        ("holiday.txt", b"Dear all,\nthe weather is fine.\nYours, K.\n"),
        ("level_7_3.mat", &sample("level_7_3.mat")),
        ("cut.mat", &sample("cut.mat")),
        ("empty.tsv", b""),
    ];
    for (name, bytes) in wrong {
        page.drop_bytes(&[(name, bytes)]);
        page.until(name, |page| page.state() == "failed" && page.text("#failure").contains(name));
        let after = (page.text("#sentence"), page.text("#cards"), page.download_report());
        assert_eq!(after, before, "{name}");
        let names = page
            .value("return ['maps', 'electrodes'].map((kind) => document.querySelector(`#${kind}-name`).textContent)");
        assert_eq!(names, json!(["watch_maps.tsv", "watch_electrodes.tsv"]), "{name}");
        page.click("#failure-dismiss");
        assert!(!page.visible("#failure"));
    }
}

fn a_refused_file_is_helped_by_a_setting(page: &Page) {
    // Neither side of this matrix is as long as the electrodes.
    let numbers: String =
        (0..8).map(|row| format!("{}\n", ["1.5\t2"; 4].map(|v| format!("{v}{row}")).join("\t"))).collect();
    page.drop_files(&[DroppedFile { name: "matrix.txt", text: &numbers }]);
    page.wait_for_failure();
    assert!(page.visible("#failure-help"), "{}", page.failure_text());
    assert_eq!(page.accessibility_findings(), Vec::<String>::new(), "with help");
    assert_eq!(page.value("return document.querySelector('#maps-name').textContent"), json!("watch_maps.tsv"));
    // The refusal before it looks alike, but for its rows, which are written anew.
    page.value("document.querySelector('#failure-rows select').dataset.former = ''");
    page.choose("#failure-rows [data-setting=orientation] select", "a column for each electrode");
    page.until("the refusal again", |page| page.state() == "failed" && !page.exists("[data-former]"));
    assert_eq!(page.value("return document.querySelector('#maps-name').textContent"), json!("watch_maps.tsv"));
    page.choose("#failure-rows [data-setting=role] select", "not needed");
    page.until("the matrix aside", |page| page.rests() && page.exists("[data-file='matrix.txt']"));
    assert!(!page.visible("#failure") && page.exists("[data-file='watch_maps.tsv']"));
    page.click("#undo");
    page.until("the matrix gone", |page| page.rests() && !page.exists("[data-file='matrix.txt']"));
}

fn a_wrong_axis_is_put_right(page: &Page) {
    let before = number(page, "canonical_mm");
    page.choose("#set-axes", "x to the front, y to the left, z up");
    page.until("another position", |page| page.rests() && number(page, "canonical_mm") != before);
    let wrong = page.attribute("#preview-above", "aria-label");
    assert!(page.text("#head-card").contains("your setting"));
    assert_eq!(page.value("return document.activeElement.id"), json!("set-axes"), "the list keeps the focus");
    // By keyboard alone: undo outside of text fields.
    page.session().chord(CONTROL, 'z').unwrap();
    page.until("the position of before", |page| page.rests() && number(page, "canonical_mm") == before);
    assert_ne!(page.attribute("#preview-above", "aria-label"), wrong, "the small head turns with the axes");
    // By keyboard alone: the list, then the button.
    page.focus("#set-axes");
    page.press(DOWN);
    page.press(DOWN);
    page.press(ENTER);
    page.until("a chosen axis", |page| page.rests() && page.text("#head-card").contains("your setting"));
    page.focus("#main");
    page.tab_to("#undo");
    while page.text("#undo").contains("axes") {
        page.press(ENTER);
    }
    page.until("the position of before", |page| page.rests() && number(page, "canonical_mm") == before);
    // Back to what is found by itself.
    page.choose("#set-axes", "x to the front, y to the left, z up");
    page.until("another position", |page| page.rests() && number(page, "canonical_mm") != before);
    page.choose("#set-axes", "automatic");
    page.until("the position of before", |page| page.rests() && number(page, "canonical_mm") == before);
}

fn settings_of_a_table_go_with_it(page: &Page) {
    page.choose("#set-axes", "x to the front, y to the left, z up");
    page.until("a chosen axis", |page| page.rests() && page.text("#head-card").contains("your setting"));
    let changed = electrodes().replace("label\tx\ty\tz", "name\tx\ty\tz");
    page.drop_files(&[DroppedFile { name: "other.tsv", text: &changed }]);
    page.until("the other table", |page| page.rests() && page.exists("[data-file='other.tsv']"));
    let said = page.text("#said");
    assert!(said.contains("watch_electrodes.tsv") && said.contains("axes"), "{said}");
    assert!(!page.text("#head-card").contains("your setting"));
    page.click("#undo");
    page.until("the table of before", |page| page.rests() && page.exists("[data-file='watch_electrodes.tsv']"));
    assert!(page.text("#head-card").contains("your setting"), "with its settings");
}

fn fields_of_the_head_card_work(page: &Page) {
    let electrode_count = |report: &Value| {
        report["electrodes"].as_array().unwrap().iter().filter(|electrode| electrode["used"] == json!(true)).count()
    };
    page.fill("#set-interpolated", "Fp1, Oz");
    page.until("two electrodes less", |page| page.rests() && electrode_count(&page.download_report()) == 68);
    page.click("#set-unusualHead");
    page.until("the caution", |page| page.rests() && page.text("#notes").contains("standard shells"));
    // In a text field, the keys that undo are the field's.
    page.ask("document.querySelector('#set-interpolated').focus()", &[]);
    page.session().chord(CONTROL, 'z').unwrap();
    page.settle();
    assert_eq!(page.download_report()["settings"]["unusualHead"], json!(true));
}

fn a_spreadsheet_is_pasted(page: &Page) {
    let maps = one_map().replace('.', ",");
    page.paste("body", &maps);
    page.until("the pasted map", |page| {
        page.rests() && page.texts("#cards h3").iter().any(|title| title.contains("pasted maps"))
    });
    // Panels that come in may move what is clicked on.
    page.until("the card unfolded", |page| {
        let told = || page.text("[data-file='pasted maps']");
        if !told().contains("comma") {
            page.click("[data-file='pasted maps'] summary");
        }
        let card = told();
        card.contains("comma") && card.contains("tabs")
    });
    let value = page.download_report()["maps"][0]["variance_explained"].as_f64().unwrap();
    assert!(value > 0.97, "{value}");
}

/// The first map as a spreadsheet copies it.
fn one_map() -> String {
    let rows = maps();
    let rows = rows.lines().map(|line| line.split('\t').take(2).collect::<Vec<_>>().join("\t"));
    rows.map(|row| format!("{row}\r\n")).collect()
}

fn hostile_names_are_harmless(page: &Page) {
    let name = format!("<img src=x onerror=window.bad=1>\u{202e}{}.tsv", "n".repeat(200));
    let label = format!("<script>window.bad=1</script>{}", "L".repeat(10_000));
    let text = format!("{}{label}\t1.5\n", one_map());
    page.drop_files(&[DroppedFile { name: &name, text: &text }]);
    page.until("the map with a hostile name", |page| {
        page.rests() && page.texts("#cards h3").iter().any(|title| title.contains("<img"))
    });
    assert_eq!(page.value("return window.bad ?? null"), Value::Null);
    assert!(!page.exists("#cards img") && !page.exists("#cards script"));
    let shown = page.text("main");
    assert!(!shown.contains('\u{202e}'), "nothing turns the writing round");
    assert!(page.text("#cards").len() < 20_000, "long names are shortened");
    assert_eq!(page.overhang(), json!(0));
}

fn it_fits_and_is_accessible(page: &Page) {
    drop_watch(page);
    assert_eq!(page.accessibility_findings(), Vec::<String>::new());
    page.session().resize(480, 900).unwrap();
    assert_eq!(page.overhang(), json!(0));
}

fn further_files_are_picked_listed_and_removed(page: &Page) {
    let folder = Folder::fresh("further");
    let rows: String = electrodes()
        .lines()
        .skip(1)
        .map(|line| format!("{}\tEEG\tuV\tgood\n", line.split('\t').next().unwrap()))
        .collect();
    let channels = format!("name\ttype\tunits\tstatus\n{}", rows.replacen("good", "bad", 1));
    page.value("if (document.querySelector('#intake-body').hidden) document.querySelector('#fold').click()");
    page.pick("#any-files", &folder.write("channels.tsv", channels));
    page.until("the channels", |page| page.rests() && page.exists("[data-file='channels.tsv']"));
    page.value("if (document.querySelector('#intake-body').hidden) document.querySelector('#fold').click()");
    let listed = page.text("#others");
    assert!(listed.contains("channels.tsv") && listed.contains("table of channels"), "{listed}");
    assert!(page.text("#notes").contains("calls them bad"), "{}", page.text("#notes"));
    page.focus("#any-files");
    page.tab_to("#unit input");
    page.click("#others button");
    page.until("the channels gone", |page| page.rests() && !page.exists("[data-file='channels.tsv']"));
}

fn files_are_understood_and_put_right(browser: Browser) {
    let page = Page::open(browser);
    what_is_no_table_is_refused_by_itself(&page);
    binary_files_are_told_apart_in_any_order(&page);
    cards_tell_what_was_understood(&page);
    a_wrong_file_leaves_answer_and_inputs(&page);
    a_refused_file_is_helped_by_a_setting(&page);
    a_wrong_axis_is_put_right(&page);
    settings_of_a_table_go_with_it(&page);
    fields_of_the_head_card_work(&page);
    a_spreadsheet_is_pasted(&page);
    hostile_names_are_harmless(&page);
    further_files_are_picked_listed_and_removed(&page);
    it_fits_and_is_accessible(&page);
}

in_both_browsers!(files_are_understood_and_put_right);
