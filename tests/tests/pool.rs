//! Several decompositions in the page, fitted by several workers: who fits what, and what is lost with a worker. The workers
//! are listened to by a script that the delivered page does not have.
use inward_tests::{Browser, DroppedFile, Folder, Page, Variant, example, in_both_browsers};
use serde_json::{Value, json};

/// Notes what workers are asked and what they tell, and can end one as a browser does that is short of memory.
const LISTEN: &str = "
    const Own = Worker;
    const heard = { named: {}, rows: {}, workers: [], ended: null, endAt: Infinity, roles: 0, early: null };
    globalThis.heard = heard;
    globalThis.Worker = class extends Own {
      constructor(...given) {
        super(...given);
        heard.workers.push(this);
        this.fits = new Map();
        this.addEventListener('message', ({ data: { id, progress } }) => {
          if (!progress?.maps || !this.fits.has(id)) return;
          const rows = heard.rows[this.fits.get(id)] ??= [];
          progress.maps.forEach((row, at) => (rows[progress.first + at] ??= []).push(row.rv));
          const all = Object.values(heard.rows).flat().length;
          if (heard.ended !== null || all < heard.endAt) return;
          heard.ended = heard.workers.indexOf(this);
          this.terminate();
          setTimeout(() => this.dispatchEvent(new ErrorEvent('error', { message: 'out of memory' })));
        });
      }
      postMessage(message, ...more) {
        Object.assign(heard.named, message.named);
        if (message.kind === 'roleOf') heard.roles++;
        if (message.kind === 'open') heard.early ??= heard.roles;
        if (message.kind === 'fit') this.fits.set(message.id, message.key);
        super.postMessage(message, ...more);
      }
    };";

fn listening(browser: Browser) -> Page {
    let folder = Folder::fresh("pool");
    let page = Page::load(browser, &Variant::delivered().with_script(LISTEN).write(&folder));
    page.wait_for("ready").unwrap();
    page
}

/// The maps of the watch, each so many times.
fn watch(times: usize) -> String {
    let widened = |line: &str| {
        let (label, values) = line.split_once('\t').unwrap();
        format!("{label}{}\n", format!("\t{values}").repeat(times))
    };
    example("watch_maps.tsv").lines().map(widened).collect()
}

/// Of the studies that were asked for: their maps that were told, least and most often, and what was left out.
fn told(page: &Page) -> Value {
    page.value(
        "return Object.keys(heard.rows).map(Number).map((key) => {\
           const times = heard.rows[key].map((row) => row.length);\
           const { settings } = heard.named[key];\
           return [times.length, Math.min(...times), Math.max(...times), settings.exclude ?? [], settings.flip ?? []]; })",
    )
}

fn forget(page: &Page) {
    page.value("heard.rows = {}");
}

/// Six tables in one drop are six decompositions with the electrodes beside them, of which the first is asked about before all
/// are recognised; what is left out goes for all, a turned sign for one, and nothing is fitted that did not change.
fn tables_dropped_together_are_fitted_side_by_side(browser: Browser) {
    let page = listening(browser);
    let electrodes = example("watch_electrodes.tsv");
    let tables: Vec<String> = (1..=6).map(watch).collect();
    page.drop_files(&[
        DroppedFile { name: "sub-01_a.tsv", text: &tables[0] },
        DroppedFile { name: "watch_electrodes.tsv", text: &electrodes },
        DroppedFile { name: "sub-01_b.tsv", text: &tables[1] },
        DroppedFile { name: "sub-02_a.tsv", text: &tables[2] },
        DroppedFile { name: "sub-02_b.tsv", text: &tables[3] },
        DroppedFile { name: "sub-03_a.tsv", text: &tables[4] },
        DroppedFile { name: "sub-03_b.tsv", text: &tables[5] },
        DroppedFile { name: "holiday.pdf", text: "%PDF-1.7\n%\n1 0 obj\n" },
    ]);
    let all = |out: Value| (1..=6).map(|times| json!([6 * times, 1, 1, out, []])).collect::<Value>();
    let whole = all(json!([]));
    // What cannot be read keeps the others out of nothing, and is told by name.
    page.until("the refusal", |page| page.state() == "failed" && page.text("#failure-message").contains("holiday.pdf"));
    page.until("all maps", |page| told(page) == whole);
    assert_eq!(page.texts(".decomposition-facts").len(), tables.len());
    let early = page.value("return [heard.early, heard.roles]");
    assert!(early[0].as_u64() < Some(7) && early[1] == 8, "asked about after {} of {} files", early[0], early[1]);
    page.click("#failure-dismiss");
    page.until("rest", Page::rests);
    assert!(page.text("#subject").contains("sub-01_a.tsv"), "{}", page.text("#subject"));
    assert!(page.text("#electrodes-loaded").contains("watch_electrodes.tsv"));

    forget(&page);
    let row = "[...document.querySelectorAll('#electrode-table tbody tr')].find((row) => row.innerText.trim().startsWith('Cz'))";
    page.value(&format!("{row}.querySelector('input').click()"));
    let without = all(json!(["Cz"]));
    page.until("all maps without Cz", |page| told(page) == without);
    page.until("rest", Page::rests);

    forget(&page);
    page.click("#flip");
    page.until("the turned map", |page| page.rests() && told(page) == json!([[6, 1, 1, ["Cz"], [0]]]));
    forget(&page);
    page.click("#undo");
    page.until("the map as it was", |page| page.rests() && told(page) == json!([[6, 1, 1, ["Cz"], []]]));
    forget(&page);
    page.click("#undo");
    page.until("all maps with Cz", |page| page.rests() && told(page) == whole);
    assert_eq!(page.accessibility_findings(), Vec::<String>::new());
}

/// A worker that is lost in the middle loses the maps it has not told: another fits these and no others, to the same bits.
fn a_lost_worker_loses_its_unfinished_maps_alone(browser: Browser) {
    let page = listening(browser);
    let (maps, electrodes) = (watch(200), example("watch_electrodes.tsv"));
    page.value("heard.endAt = 400");
    page.drop_files(&[
        DroppedFile { name: "many.tsv", text: &maps },
        DroppedFile { name: "watch_electrodes.tsv", text: &electrodes },
    ]);
    page.until("all maps", |page| page.rests() && told(page) == json!([[1200, 1, 1, [], []]]));
    assert!(!page.visible("#failure"), "{}", page.failure_text());
    assert!(page.value("return heard.ended !== null") == json!(true), "a worker was ended");
    assert!(page.value("return heard.workers.length").as_u64() >= Some(3), "and replaced");
    // The six maps come again and again: each with the same bits, whoever fitted it.
    let distinct = "return new Set(Object.values(heard.rows)[0].map((row, at) => `${at % 6} ${row[0]}`)).size";
    assert_eq!(page.value(distinct), json!(6));
}

/// Cancelled in the middle, the page keeps what is fitted, works, and goes on where it was stopped.
fn what_was_cancelled_goes_on(browser: Browser) {
    let page = listening(browser);
    let (maps, electrodes) = (watch(1200), example("watch_electrodes.tsv"));
    // Pressed as soon as there is an answer: a driver may come too late.
    page.value(
        "const [cancel, answer] = ['#cancel', '#answer'].map((id) => document.querySelector(id));\
         const watch = setInterval(() => {\
           if (cancel.hidden || answer.hidden) return;\
           clearInterval(watch);\
           cancel.click();\
         }, 3); return null",
    );
    page.drop_files(&[
        DroppedFile { name: "many.tsv", text: &maps },
        DroppedFile { name: "watch_electrodes.tsv", text: &electrodes },
    ]);
    page.until("rest", |page| page.rests() && page.visible("#fit-rest"));
    let fitted = || page.value("return Object.values(heard.rows)[0].filter(Boolean).length").as_u64().unwrap();
    let before = fitted();
    assert!((1..7200).contains(&before), "{before} maps fitted before the end");
    let sentence = page.text("#sentence");
    page.fill("#map-number", "2");
    page.until("another map", |page| page.text("#sentence") != sentence);
    assert_eq!(fitted(), before, "nothing goes on by itself");
    page.click("#fit-rest");
    page.until("all maps", |page| page.rests() && fitted() == 7200);
    assert!(!page.visible("#fit-rest") && !page.visible("#failure"));
}

in_both_browsers!(
    tables_dropped_together_are_fitted_side_by_side,
    a_lost_worker_loses_its_unfinished_maps_alone,
    what_was_cancelled_goes_on,
);
