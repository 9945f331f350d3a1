//! The times of `bench.mjs` in headless Chromium.
use inward_tests::{Browser, dist_file, tests_folder};
use serde_json::{Value, json};
use std::thread::sleep;
use std::time::Duration;

/// Workers are classic ones, which every page may have: the modules' `export` is left out.
const START: &str = "\
    window.lines = [];\
    const [texts, native] = [[...arguments].slice(0, 2), arguments[2]];\
    const address = (text) => URL.createObjectURL(new Blob([text], { type: 'text/javascript' }));\
    const [engine, work] = texts.map((text) => import(address(text)));\
    const plain = (text) => text.replace(/^export \\{.*$/gm, '').replace(/^export /gm, '');\
    const [made, asked] = texts.map(plain);\
    const answering = `(async () => { const openEngine = (() => { ${made}\\n return openEngine; })();\\n ${asked}\\n\
      const answer = answerer(await openEngine());\
      self.onmessage = ({ data }) => self.postMessage(answer(data)); self.postMessage('ready'); })()`;\
    const worker = () => {\
      const thread = new Worker(address(answering));\
      const next = () => new Promise((resolve, reject) => {\
        thread.onmessage = ({ data }) => resolve(data);\
        thread.onerror = (event) => reject(new Error(event.message)); });\
      const ready = next();\
      return { ask: async (question) => { await ready; const answer = next(); thread.postMessage(question); return answer; },\
        end: () => thread.terminate() };\
    };\
    (async () => (await work).bench((await engine).openEngine, (line) => window.lines.push(line), worker, native))()\
      .then(() => window.lines.push(''), (error) => window.lines.push(String(error), ''))";

fn main() {
    let text = |path| json!(std::fs::read_to_string(path).expect("a script"));
    let native: f64 = std::env::var("INWARD_NATIVE_FIT").ok().and_then(|value| value.parse().ok()).unwrap_or(0.0);
    let scripts = [text(dist_file("engine/inward.mjs")), text(tests_folder().join("bench.mjs")), json!(native)];
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
