//! Cells of tables that are selected and copied: plain numbers, one row a line; everything else as it is.
use inward_tests::{Browser, CONTROL, Page, in_both_browsers};
use serde_json::json;

/// Copies what lies between two elements, both included, by the keyboard.
fn copied(page: &Page, from: &str, to: &str) -> String {
    page.ask(
        "const [from, to] = [...arguments].map((one) => document.querySelector(one));\
         document.activeElement?.blur(); getSelection().removeAllRanges();\
         const range = document.createRange(); range.setStart(from, 0); range.setEnd(to, to.childNodes.length);\
         getSelection().addRange(range);",
        &[json!(from), json!(to)],
    );
    page.session().chord(CONTROL, 'c').unwrap();
    page.clipboard()
}

/// A number as it is shown, as it is typed.
fn typed(shown: &str) -> String {
    shown.replace('\u{2212}', "-").replace(['\u{a0}', '\u{2009}', '\u{202f}'], " ")
}

fn cells_are_copied_as_plain_numbers(browser: Browser) {
    let page = Page::with_watch(browser);
    page.value("document.querySelector('#table-panel').open = true");
    page.until("all rows", |page| {
        page.value("return document.querySelectorAll('#all-numbers tbody tr').length") == json!(6)
    });

    // Rows of all maps: every cell as it is shown, with the signs of a keyboard.
    let text =
        copied(&page, "#all-numbers tbody tr:nth-child(2) td", "#all-numbers tbody tr:nth-child(3) td:last-child");
    let rows: Vec<Vec<String>> = text.lines().map(|line| line.split('\t').map(str::to_owned).collect()).collect();
    assert_eq!(rows.len(), 2, "{text}");
    for (at, row) in rows.iter().enumerate() {
        let shown = page.texts(&format!("#all-numbers tbody tr:nth-child({}) :is(td, th)", at + 2));
        assert_eq!(*row, shown.iter().map(|cell| typed(cell)).collect::<Vec<_>>());
        assert!(row.iter().filter(|cell| cell.parse::<f64>().is_ok()).count() > 8, "{row:?}");
    }
    assert!(page.text("#all-numbers tbody").contains('\u{2212}'), "something was to be changed");
    assert!(text.is_ascii(), "{text}");

    // A piece of a row, and one cell; the heading goes along where it is selected.
    let part = copied(&page, "#all-numbers tbody tr td:nth-child(3)", "#all-numbers tbody tr td:nth-child(5)");
    let shown =
        page.texts("#all-numbers tbody tr:first-child td")[1..4].iter().map(|cell| typed(cell)).collect::<Vec<_>>();
    assert_eq!(part, shown.join("\t"));
    let one = copied(&page, "#all-numbers tbody tr td:nth-child(5)", "#all-numbers tbody tr td:nth-child(5)");
    assert_eq!(one, shown[2]);
    let whole = copied(&page, "#all-numbers thead th", "#all-numbers tbody tr td:last-child");
    assert!(whole.lines().next().unwrap().contains("x (mm)"), "units stay in the heading: {whole}");
    assert_eq!(whole.lines().count(), 2);

    // Where the unit stands beside the value it has a column of its own.
    let numbers = copied(&page, "#numbers tbody tr th", "#numbers tbody tr:nth-child(2) td:last-child");
    let fields: Vec<&str> = numbers.lines().next().unwrap().split('\t').collect();
    assert!(fields[1].parse::<f64>().is_ok() && fields[2] == "%" && fields.len() == 4, "{fields:?}");
    let value = copied(&page, "#numbers tbody tr td", "#numbers tbody tr td");
    assert_eq!(value, fields[1]);

    // Outside of tables, and across their edge, nothing is touched.
    let sentence = page.text("#sentence");
    let blanks = |text: &str| text.split_whitespace().collect::<Vec<_>>().join(" ");
    assert_eq!(blanks(&copied(&page, "#sentence", "#sentence")), blanks(&sentence));
    let across = copied(&page, "#sentence", "#numbers tbody tr td");
    assert!(blanks(&across).contains(&blanks(&sentence)) && across.contains("Residual variance"), "{across}");
}

/// The copy buttons give the same plain numbers.
fn buttons_copy_plain_numbers(browser: Browser) {
    let page = Page::open(browser);
    page.click("#empty [data-example='lamp']");
    page.wait_for_verdict();
    page.until("populations", |page| page.visible("#population-table") && !page.visible("#drawing-line"));
    for (button, table, heading) in
        [("#copy-populations", "#population-table", "Sources\t"), ("#copy-table", "#numbers", "Quantity\t")]
    {
        page.click(button);
        page.until("the copy", |page| page.clipboard().starts_with(heading));
        let text = page.clipboard();
        assert!(!text.contains(['\u{2212}', '\u{a0}', '\u{2009}', '\u{202f}']), "{text}");
        let rows = page.value(&format!("return document.querySelectorAll('{table} tbody tr:not(.setting)').length"));
        assert_eq!(json!(text.lines().count() - 1), rows, "{text}");
    }
    page.click("#copy-populations");
    page.until("the draws", |page| page.clipboard().contains("\t10000\t"));
}

in_both_browsers!(cells_are_copied_as_plain_numbers, buttons_copy_plain_numbers);
