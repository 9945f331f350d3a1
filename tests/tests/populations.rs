//! Reference populations in the page: who draws them changes nothing, they are drawn for these electrodes and this head once,
//! and can be stopped. The workers are listened to by a script that the delivered page does not have.
use inward_tests::{Browser, Folder, Page, Variant, in_both_browsers};
use serde_json::{Value, json};

/// Notes the draws, and that the browser has so many cores; a tenth of the usual draws is asked for.
fn listen(cores: usize) -> String {
    "
    Object.defineProperty(Navigator.prototype, 'hardwareConcurrency', { get: () => CORES });
    const Own = Worker;
    const heard = { workers: new Set(), draws: {}, twice: 0, words: [] };
    globalThis.heard = heard;
    let started = 0;
    globalThis.Worker = class extends Own {
      constructor(...given) {
        super(...given);
        this.number = started++;
        this.asked = new Map();
        this.addEventListener('message', ({ data: { id, value } }) => {
          const task = this.asked.get(id);
          if (task?.kind === 'verdicts' && value) heard.words.push(value);
          if (task?.kind !== 'population' || !value) return;
          heard.workers.add(this.number);
          const draws = heard.draws[task.population] ??= [];
          value.forEach((number, at) => {
            if (draws[2 * task.first + at] !== undefined) heard.twice++;
            draws[2 * task.first + at] = number;
          });
        });
      }
      postMessage(message, ...more) {
        this.asked.set(message.id, message);
        for (const request of Object.values(message.named ?? {})) (request.settings ??= {}).sources = { draws: 1000 };
        super.postMessage(message, ...more);
      }
    };"
    .replace("CORES", &cores.to_string())
}

fn listening(browser: Browser, cores: usize) -> Page {
    let folder = Folder::fresh("populations");
    let page = Page::load(browser, &Variant::delivered().with_script(&listen(cores)).write(&folder));
    page.wait_for("ready").unwrap();
    page.click("#empty [data-example='lamp']");
    page.wait_for_answer();
    page
}

/// The draws of all kinds since it was asked last, when all are there and every map has its verdict.
fn drawn(page: &Page) -> Value {
    page.until("all draws and the verdicts", |page| {
        page.value("return heard.words.length > 0 && Object.values(heard.draws).filter((one) => one.length === 2000 && !one.includes(undefined)).length")
            == json!(6)
    });
    page.value("const { draws, words } = heard; Object.assign(heard, { draws: {}, words: [] }); return [draws, words]")
}

fn draws_do_not_depend_on_who_makes_them(browser: Browser) {
    let [few, many] = [2, 4].map(|cores| {
        let page = listening(browser, cores);
        let drawn = drawn(&page);
        assert_eq!(page.value("return heard.twice"), json!(0), "no draw is made twice");
        (drawn, page.value("return heard.workers.size").as_u64().unwrap())
    });
    assert!(few.1 == 2 && many.1 > 2, "{} and {} workers", few.1, many.1);
    assert!(few.0 == many.0, "the same draws and verdicts, to the bit");
}

fn another_head_draws_anew_and_the_former_is_kept(browser: Browser) {
    let page = listening(browser, 2);
    let first = drawn(&page);
    let row = "[...document.querySelectorAll('#electrode-table tbody tr')].find((row) => row.innerText.trim().startsWith('Cz'))";
    page.value(&format!("{row}.querySelector('input').click()"));
    let without = drawn(&page);
    assert_ne!(first[0], without[0], "other electrodes");
    page.click("#undo");
    page.until("the verdicts", |page| page.value("return heard.words.length") == json!(1));
    assert_eq!(page.value("return Object.keys(heard.draws).length"), json!(0), "what is known is not drawn again");
    assert_eq!(page.value("return heard.words"), first[1]);
}

fn what_was_stopped_goes_on(browser: Browser) {
    let page = listening(browser, 2);
    // Pressed as soon as it is there: a driver may come too late.
    page.value(
        "const stop = document.querySelector('#draw-stop'); let pressed = false;\
         const watch = setInterval(() => { if (!pressed && stop.checkVisibility()) { pressed = true; stop.click(); clearInterval(watch); } }, 2);\
         return null",
    );
    page.until("the stop", |page| page.visible("#draw-go"));
    let count = || page.value("return Object.values(heard.draws).flat().length").as_u64().unwrap();
    // A piece that a worker is at may still be told.
    std::thread::sleep(std::time::Duration::from_millis(500));
    let stopped = count();
    std::thread::sleep(std::time::Duration::from_millis(700));
    assert!(stopped < 12000 && count() == stopped, "{stopped} of 12000 numbers, then {}", count());
    page.click("#draw-go");
    drawn(&page);
    assert!(!page.visible("#draw-go") && !page.visible("#draw-stop"));
}

in_both_browsers!(
    draws_do_not_depend_on_who_makes_them,
    another_head_draws_anew_and_the_former_is_kept,
    what_was_stopped_goes_on,
);
