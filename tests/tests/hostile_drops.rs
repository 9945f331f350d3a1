//! Files that are no tables, broken, vast or hostile, dropped on a page 320 pixels wide that shows an answer: refused by
//! name or shown as text, and the answer stays.
use inward_tests::{Browser, DroppedFile, Page, Surroundings, example, in_both_browsers, sample};
use serde_json::{Value, json};

fn watch(browser: Browser) -> Page {
    let page = Page::open(browser);
    page.surround(Surroundings { zoom: 4, ..Surroundings::default() });
    assert_eq!(page.value("return innerWidth"), json!(320));
    page.drop_files(&[
        DroppedFile { name: "watch_maps.tsv", text: &example("watch_maps.tsv") },
        DroppedFile { name: "watch_electrodes.tsv", text: &example("watch_electrodes.tsv") },
    ]);
    page.until("the cards of the watch", |page| page.rests() && page.exists("[data-file='watch_electrodes.tsv']"));
    page
}

/// What must not change: the answer, what is understood, what is loaded.
fn held(page: &Page) -> Value {
    page.value(
        "const text = (id) => document.querySelector(id).textContent;\
         return ['#subject', '#sentence', '#numbers', '#cards', '#notes', '#maps-name', '#electrodes-name', '#others'].map(text)",
    )
}

/// Nothing of a file became more than text: no element, no attribute that acts, no script that ran, nothing that
/// turns the writing round or cannot be seen, in the document or on a canvas; nothing sticks out.
fn assert_harmless(page: &Page, context: &str) {
    let found = page.value(
        "const strange = /[\\u0000-\\u0008\\u000b-\\u001f\\u007f-\\u009f\\u200e\\u200f\\u202a-\\u202e\\u2066-\\u2069]/;\
         const all = [...document.body.querySelectorAll('*')].filter((e) => !e.matches('script, textarea'));\
         const found = [];\
         if (window.bad !== undefined) found.push('a script ran');\
         for (const e of all) {\
           if (!(e.matches('svg[role=img]') && e.parentElement.matches('.drawing')) && !(e.matches('svg.swatch') && e.parentElement.matches('[data-marks]')) && !e.matches('svg.verdict-mark') && e.matches('img, svg, iframe, b, u, style, object, embed, #template-of-the-file')) found.push(e.outerHTML.slice(0, 80));\
           for (const { name, value } of e.attributes) {\
             if (name.startsWith('on') || (name !== 'data-file' && strange.test(value))) found.push(`${name}=${value.slice(0, 80)}`);\
           }\
           for (const node of e.childNodes) if (node.nodeType === 3 && strange.test(node.data)) found.push(node.data.slice(0, 80));\
         }\
         for (const [canvas, text] of window.written ?? []) if (strange.test(text) || text.length > 60) found.push(`${canvas}: ${text.slice(0, 80)}`);\
         return found",
    );
    assert_eq!(found, json!([]), "{context}");
    assert_eq!(page.overhang(), json!(0), "{context}");
}

/// Files of every unreadable kind are refused by name, with a next step; nothing else changes.
fn what_cannot_be_read_is_refused_by_name(page: &Page) {
    let before = held(page);
    let nested = "[".repeat(100_000) + &"]".repeat(100_000);
    let files: [(&str, &[u8], &str); 13] = [
        ("empty.tsv", b"", "holds nothing"),
        ("blank.tsv", b" \n\t\n", "holds nothing"),
        ("cut.mat", &sample("cut.mat"), "byte"),
        ("cut.npy", &sample("cut_numbers.npy"), "byte"),
        ("cut.zip", &sample("cut.zip"), "byte"),
        ("holiday.png", b"\x89PNG\r\n\x1a\n\x00\x00\x00\rIHDR", "a picture"),
        ("paper.pdf", b"%PDF-1.7\n%\xe2\xe3\xcf\xd3\n1 0 obj\n", "PDF"),
        ("book.xlsx", &sample("spreadsheet.zip"), "spreadsheet"),
        ("page.tsv", b"<!doctype html><table><tr><td>Fp1<td>1</table>", "markup"),
        ("deep.json", nested.as_bytes(), "nested"),
        ("billion.npy", &sample("billion_rows.npy"), "1000000000"),
        ("level_7_3.mat", &sample("level_7_3.mat"), "HDF5"),
        ("<img src=x onerror=window.bad=1>\u{202e}.pdf", b"%PDF-1.7\n", "<img src=x onerror=window.bad=1>\u{fffd}.pdf"),
    ];
    for (name, bytes, words) in files {
        page.drop_bytes(&[(name, bytes)]);
        // The message before it may have the same words: this one's has the file's name, but for what cannot be shown.
        let told = |message: &str| message.contains(words) && (name.starts_with('<') || message.contains(name));
        page.until(name, |page| page.state() == "failed" && told(&page.text("#failure-message")));
        assert!(page.text("#failure-hint").ends_with('.'), "{name}: {}", page.failure_text());
        assert!(page.text("#failure-kept").contains("watch_maps.tsv"), "{name}: {}", page.failure_text());
        assert_harmless(page, name);
        assert_eq!(held(page), before, "{name}");
    }
    assert_eq!(page.accessibility_findings(), Vec::<String>::new());
    page.click("#failure-dismiss");
    page.until("rest", Page::rests);
}

/// A file over the limit is not even loaded; one beside it that is sound is taken.
fn what_is_too_large_is_refused_by_name(page: &Page) {
    let before = held(page);
    let script = "\
        const data = new DataTransfer();\
        data.items.add(new File([new Uint8Array(64 * 2 ** 20 + 1)], 'vast.tsv'));\
        if (arguments[0] !== null) data.items.add(new File([arguments[0]], 'beside.tsv'));\
        document.querySelector('main').dispatchEvent(new DragEvent('drop', { dataTransfer: data, bubbles: true, cancelable: true }))";
    let refused =
        |page: &Page| page.text("#failure").contains("“vast.tsv”") && page.text("#failure").contains("64 MiB");
    page.ask(script, &[Value::Null]);
    page.until("the refusal", |page| page.state() == "failed" && refused(page));
    assert_eq!(held(page), before);
    page.click("#failure-dismiss");
    page.ask(script, &[json!(example("lamp.tsv"))]);
    page.until("the map beside it", |page| page.state() == "failed" && page.text("#subject").contains("beside.tsv"));
    assert!(refused(page), "{}", page.failure_text());
    page.click("#failure-dismiss");
    page.click("#undo");
    page.until("the watch", |page| page.rests() && held(page) == before);
}

/// Names of files, electrodes and maps, whatever they are, are text.
fn whatever_names_are_they_are_text(page: &Page) {
    page.take_down_words();
    let before = page.text("#sentence");
    let long = "L".repeat(10_000);
    let names = [
        "<img src=x onerror=window.bad=1>",
        "\"><script>window.bad=1</script>",
        "&lt;b&gt;bold&lt;/b&gt;",
        "\u{202e}gpj.exe\u{2066}\u{200f}",
        "nul\0bell\u{7}",
        "__proto__",
        &long,
    ];
    let rows: Vec<(String, String)> = example("lamp.tsv")
        .lines()
        .skip(1)
        .map(|line| line.split_once('\t').unwrap())
        .map(|(label, value)| (label.into(), value.into()))
        .collect();
    for name in names {
        // Electrodes of that name too: at the front of the head, where the small head and the map name them.
        let quoted = format!("\"{}\"", name.replace('"', "\"\""));
        let field = if name.contains('"') { quoted.as_str() } else { name };
        let maps: String = rows.iter().map(|(label, value)| format!("{}\t{value}\n", renamed(label, field))).collect();
        let electrodes: String = example("watch_electrodes.tsv")
            .lines()
            .map(|line| line.split_once('\t').unwrap())
            .map(|(label, rest)| format!("{}\t{rest}\n", renamed(label, field)))
            .collect();
        let file = format!("{name}.tsv");
        let maps = format!("label\t{field}\n{maps}");
        page.drop_files(&[
            DroppedFile { name: &file, text: &maps },
            DroppedFile { name: "positions.tsv", text: &electrodes },
        ]);
        // No name outlives the way of a file into the page with what cannot be seen.
        let shown: String =
            name.replace(|c: char| c.is_control() || ('\u{200e}'..='\u{2069}').contains(&c), "\u{fffd}");
        let start: String = shown.chars().take(30).collect();
        page.until(&start, |page| page.rests() && page.text("#subject").starts_with(&start));
        assert_eq!(page.text("#sentence"), before, "{start}: names change no number");
        let titles = page.texts("#cards h3");
        assert!(titles.iter().any(|title| title.starts_with(&start)), "{start}: {titles:?}");
        let listed = page.texts("#electrode-table tbody th");
        assert!(listed.iter().any(|label| label.starts_with(&start)), "{start} in the list of electrodes");
        page.click("[data-file='positions.tsv'] summary");
        assert_harmless(page, &start);
        // By its name an electrode is left out.
        let row = "[...document.querySelectorAll('#electrode-table tbody tr')].find((row) => row.innerText.trim().startsWith(arguments[0]))";
        page.ask(&format!("{row}.querySelector('input').click()"), &[json!(start)]);
        page.until("one less", |page| page.rests() && page.text("#electrodes-out").starts_with("69 of 70"));
        // Where names are keys of a record, too.
        if name != "__proto__" {
            continue;
        }
        let card = "[...document.querySelectorAll('.card')].find((card) => card.querySelector('h3').innerText.startsWith(arguments[0]))";
        page.ask(
            &format!(
                "const list = {card}.querySelector('[data-setting=role] select');\
                 list.selectedIndex = [...list.options].findIndex((one) => one.text === 'maps');\
                 list.dispatchEvent(new Event('change', {{ bubbles: true }}))"
            ),
            &[json!(start)],
        );
        page.until("the chosen role", |page| {
            page.rests()
                && page
                    .ask(&format!("return {card}.innerText"), &[json!(start)])
                    .as_str()
                    .unwrap()
                    .contains("as set by hand")
        });
        assert_harmless(page, &start);
    }
    assert_eq!(page.accessibility_findings(), Vec::<String>::new());
}

fn renamed<'a>(label: &'a str, name: &'a str) -> &'a str {
    if label == "Fpz" { name } else { label }
}

fn hostile_files_are_harmless(browser: Browser) {
    let page = watch(browser);
    what_cannot_be_read_is_refused_by_name(&page);
    what_is_too_large_is_refused_by_name(&page);
    whatever_names_are_they_are_text(&page);
}

in_both_browsers!(hostile_files_are_harmless);
