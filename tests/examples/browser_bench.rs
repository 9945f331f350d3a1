//! The times of `bench.mjs` in headless Chromium.
use inward_tests::{Browser, dist_file, tests_folder};
use serde_json::{Value, json};
use std::thread::sleep;
use std::time::Duration;

const START: &str = "\
    window.lines = [];\
    const address = (text) => URL.createObjectURL(new Blob([text], { type: 'text/javascript' }));\
    const [engine, work] = [...arguments].map((text) => import(address(text)));\
    (async () => (await work).bench((await engine).openEngine, (line) => window.lines.push(line)))()\
      .then(() => window.lines.push(''), (error) => window.lines.push(String(error), ''))";

fn main() {
    let text = |path| json!(std::fs::read_to_string(path).expect("a script"));
    let scripts = [text(dist_file("engine/inward.mjs")), text(tests_folder().join("bench.mjs"))];
    let session = Browser::Chromium.window();
    session.go("about:blank").expect("an empty page");
    session.run(START, &scripts).expect("the work begins");
    loop {
        let lines = session.run("return window.lines.splice(0)", &[]).expect("the page answers between two works");
        for line in lines.as_array().into_iter().flatten().filter_map(Value::as_str) {
            if line.is_empty() {
                return;
            }
            println!("{line}");
        }
        sleep(Duration::from_millis(100));
    }
}
