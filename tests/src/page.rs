//! The page in a browser, by what a person can do with it.
use crate::bitmap::Bitmap;
use crate::browser::Browser;
use crate::place::{dist_file, example, screenshot_file};
use crate::session::{CONTROL, Element, Session, TAB};
use crate::surroundings::Surroundings;
use crate::{Outcome, tests_folder};
use serde_json::{Value, json};
use std::path::{Path, PathBuf};
use std::thread::sleep;
use std::time::{Duration, Instant};

/// How long a state may take to come: never a measure of speed, only the end of hope.
const PATIENCE: Duration = Duration::from_secs(90);

/// What a driver says of an element that is not there yet, does not take room yet, lies under another or was replaced.
const NOT_YET: [&str; 4] = ["no such element", "not interactable", "click intercepted", "stale element"];

/// A file dropped on the page.
pub struct DroppedFile<'a> {
    /// Its name.
    pub name: &'a str,
    /// Its content.
    pub text: &'a str,
}

/// An open page. Every method panics where the browser does not do as asked.
pub struct Page {
    session: Session,
    browser: Browser,
}

impl Page {
    /// Opens the delivered page from disk and waits until it can be used.
    pub fn open(browser: Browser) -> Self {
        let page = Self::load(browser, &dist_file("inward.html"));
        page.wait_for("ready").unwrap_or_else(|why| panic!("{}: {why}", browser.name()));
        page
    }

    /// Opens the page and gives it the invented maps of the watch.
    pub fn with_watch(browser: Browser) -> Self {
        let page = Self::open(browser);
        page.drop_files(&[
            DroppedFile { name: "electrodes.tsv", text: &example("watch_electrodes.tsv") },
            DroppedFile { name: "maps.tsv", text: &example("watch_maps.tsv") },
        ]);
        page.until("an answer", Self::rests);
        page
    }

    /// Opens a file as a page, without waiting for more than the document.
    pub fn load(browser: Browser, file: &Path) -> Self {
        Self::at(browser, &format!("file://{}", file.display()))
    }

    /// Opens an address, without waiting for more than the document.
    pub fn at(browser: Browser, address: &str) -> Self {
        let session = browser.window();
        session.go(address).unwrap();
        Self { session, browser }
    }

    /// The window that shows the page.
    pub fn session(&self) -> &Session {
        &self.session
    }

    /// State of the page: loading, ready, busy, answered or failed.
    pub fn state(&self) -> String {
        self.value("return document.documentElement.dataset.state").as_str().unwrap_or_default().into()
    }

    /// Waits for a state.
    pub fn wait_for(&self, state: &str) -> Outcome<()> {
        self.wait_for_within(state, PATIENCE)
    }

    /// Waits for a state, no longer than told.
    pub fn wait_for_within(&self, state: &str, patience: Duration) -> Outcome<()> {
        let start = Instant::now();
        while self.state() != state {
            if start.elapsed() > patience {
                return Err(format!("the page is {:?}, not {state:?}; {}", self.state(), self.failure_text()));
            }
            sleep(Duration::from_millis(40));
        }
        Ok(())
    }

    /// Waits for an answer, or panics with what the page says instead.
    pub fn wait_for_answer(&self) {
        self.until("an answer", |page| page.state() == "answered");
        assert!(self.visible("#answer"), "the answer is shown");
    }

    /// Waits until the verdict of the map in view rests on all draws: nothing comes after it.
    pub fn wait_for_verdict(&self) {
        self.until("a verdict of all draws", |page| {
            !page.visible("#drawing-line") && !["", "null"].contains(&&*page.attribute("#verdict-said", "data-verdict"))
        });
    }

    /// Waits for a failure, or panics.
    pub fn wait_for_failure(&self) {
        self.until("a failure", |page| page.state() == "failed");
        assert!(self.visible("#failure"), "the failure is shown");
    }

    /// Waits until something holds.
    pub fn until(&self, what: &str, mut holds: impl FnMut(&Self) -> bool) {
        let start = Instant::now();
        while !holds(self) {
            if start.elapsed() > PATIENCE {
                self.picture("waited-in-vain");
                panic!(
                    "{}: waited for {what}; the page is {:?}; {}",
                    self.browser.name(),
                    self.state(),
                    self.failure_text()
                );
            }
            sleep(Duration::from_millis(40));
        }
    }

    /// What the failure panel says.
    pub fn failure_text(&self) -> String {
        self.value("const p = document.querySelector('#failure'); return p ? p.innerText : '(no panel)'")
            .as_str()
            .unwrap_or_default()
            .into()
    }

    /// An element that must be there.
    pub fn find(&self, selector: &str) -> Element {
        self.on(selector, |element| Ok(Element::clone(element)))
    }

    /// Visible text of an element.
    pub fn text(&self, selector: &str) -> String {
        self.on(selector, |element| self.session.text(element))
    }

    /// What is done with an element as soon as it can be: a person waits, too, for a button that the engine's answer
    /// brings, and presses again where the page has meanwhile put another one in its place.
    fn on<T>(&self, selector: &str, act: impl Fn(&Element) -> Outcome<T>) -> T {
        let start = Instant::now();
        loop {
            match self.session.find(selector).and_then(|element| act(&element)) {
                Ok(done) => return done,
                Err(why) if start.elapsed() < PATIENCE && NOT_YET.iter().any(|reason| why.contains(reason)) => {
                    sleep(Duration::from_millis(40));
                }
                Err(why) => panic!("{}: {selector}: {why}", self.browser.name()),
            }
        }
    }

    /// Whether an element takes room on the page.
    pub fn visible(&self, selector: &str) -> bool {
        let script = "const e = document.querySelector(arguments[0]);\
                      return !!e && e.getClientRects().length > 0 && getComputedStyle(e).visibility === 'visible'";
        self.ask(script, &[json!(selector)]) == json!(true)
    }

    /// Whether an element is there at all.
    pub fn exists(&self, selector: &str) -> bool {
        self.ask("return document.querySelector(arguments[0]) !== null", &[json!(selector)]) == json!(true)
    }

    /// An attribute of an element, empty where it has none.
    pub fn attribute(&self, selector: &str, name: &str) -> String {
        let script = "return document.querySelector(arguments[0]).getAttribute(arguments[1]) ?? ''";
        self.ask(script, &[json!(selector), json!(name)]).as_str().unwrap_or_default().into()
    }

    /// Presses keys where the focus is.
    pub fn press(&self, keys: &str) {
        self.session.press(keys).unwrap();
    }

    /// Goes to an element by the tabulator key alone, as a person without a mouse does.
    pub fn tab_to(&self, selector: &str) {
        let script = "return document.activeElement?.matches(arguments[0]) ?? false";
        for _ in 0..250 {
            if self.ask(script, &[json!(selector)]) == json!(true) {
                return;
            }
            self.press(&TAB.to_string());
        }
        panic!("{}: the tabulator key never reaches {selector}", self.browser.name());
    }

    /// Gives an element the focus.
    pub fn focus(&self, selector: &str) {
        self.ask("document.querySelector(arguments[0]).focus()", &[json!(selector)]);
    }

    /// Replaces what stands in a field by typing, and leaves it.
    pub fn fill(&self, selector: &str, text: &str) {
        self.ask("const e = document.querySelector(arguments[0]); e.focus(); e.select()", &[json!(selector)]);
        self.press(&format!("{text}{TAB}"));
    }

    /// Chooses an option of a list by its words, as a person does by mouse.
    pub fn choose(&self, list: &str, words: &str) {
        let script = "\
            const list = document.querySelector(arguments[0]);\
            const option = [...list.options].find((one) => one.text === arguments[1]);\
            if (!option) return [...list.options].map((one) => one.text).join(' / ');\
            list.focus(); list.value = option.value;\
            list.dispatchEvent(new Event('change', { bubbles: true })); return ''";
        assert_eq!(self.ask(script, &[json!(list), json!(words)]), json!(""), "{list} has {words:?}");
    }

    /// Whether there is an answer and no map is fitted any more.
    pub fn rests(&self) -> bool {
        self.state() == "answered" && !self.visible("#progress")
    }

    /// How far the document is wider than the window.
    pub fn overhang(&self) -> Value {
        self.value("return document.documentElement.scrollWidth - document.documentElement.clientWidth")
    }

    /// Texts of all elements that a selector finds.
    pub fn texts(&self, selector: &str) -> Vec<String> {
        let script = "return [...document.querySelectorAll(arguments[0])].map((e) => e.innerText.trim())";
        let found = self.ask(script, &[json!(selector)]);
        found.as_array().expect("a list").iter().map(|text| text.as_str().unwrap_or_default().into()).collect()
    }

    /// Clicks on an element, in the middle of the window where nothing lies over it.
    pub fn click(&self, selector: &str) {
        self.on(selector, |element| {
            self.session
                .run("arguments[0].scrollIntoView({ block: 'center', behavior: 'instant' })", &[element.argument()])?;
            self.session.click(element)
        });
    }

    /// Moves the mouse to a place in CSS pixels from the middle of an element, which is brought into view before.
    pub fn hover(&self, selector: &str, x: i64, y: i64) {
        self.bring_into_view(selector);
        self.session.hover(&self.find(selector), x, y).unwrap_or_else(|why| panic!("{selector}: {why}"));
    }

    /// A click at a place in CSS pixels from the middle of an element, which is brought into view before.
    pub fn click_at(&self, selector: &str, x: i64, y: i64) {
        self.bring_into_view(selector);
        self.session.click_at(&self.find(selector), x, y).unwrap_or_else(|why| panic!("{selector}: {why}"));
    }

    fn bring_into_view(&self, selector: &str) {
        let script = "document.querySelector(arguments[0]).scrollIntoView({ block: 'center', behavior: 'instant' })";
        self.ask(script, &[json!(selector)]);
        self.settle();
    }

    /// Value of a script without arguments.
    pub fn value(&self, script: &str) -> Value {
        self.ask(script, &[])
    }

    /// Value of a script.
    pub fn ask(&self, script: &str, arguments: &[Value]) -> Value {
        self.session.run(script, arguments).unwrap_or_else(|why| panic!("{}: {why}", self.browser.name()))
    }

    /// Pastes text into a field, or where no field is for `body`: copied and pasted by the keyboard, as people do.
    pub fn paste(&self, selector: &str, text: &str) {
        let copy = "\
            const source = document.createElement('textarea');\
            source.id = 'copied-from'; source.value = arguments[0];\
            document.body.append(source); source.focus(); source.select();";
        self.ask(copy, &[json!(text)]);
        self.session.chord(CONTROL, 'c').unwrap();
        let aim = "\
            document.querySelector('#copied-from').remove();\
            const target = document.querySelector(arguments[0]);\
            document.activeElement?.blur(); target.focus(); target.select?.();";
        self.ask(aim, &[json!(selector)]);
        self.session.chord(CONTROL, 'v').unwrap();
    }

    /// Text on the clipboard, found by pasting it into a field of its own.
    pub fn clipboard(&self) -> String {
        let field = "\
            const field = document.createElement('textarea');\
            field.id = 'pasted-here';\
            document.body.append(field); field.focus();";
        self.value(field);
        self.session.chord(CONTROL, 'v').unwrap();
        let text =
            self.value("const field = document.querySelector('#pasted-here'); field.remove(); return field.value");
        text.as_str().unwrap_or_default().into()
    }

    /// Picks a file in a file field.
    pub fn pick(&self, selector: &str, file: &Path) {
        self.session.type_keys(&self.find(selector), &file.display().to_string()).unwrap();
    }

    /// Drops files of text somewhere on the page.
    pub fn drop_files(&self, files: &[DroppedFile<'_>]) {
        let files: Vec<(&str, &[u8])> = files.iter().map(|file| (file.name, file.text.as_bytes())).collect();
        self.drop_bytes(&files);
    }

    /// Drops files by name and content somewhere on the page.
    pub fn drop_bytes(&self, files: &[(&str, &[u8])]) {
        let script = "\
            const data = new DataTransfer();\
            const bytes = (text) => Uint8Array.from(atob(text), (letter) => letter.charCodeAt(0));\
            for (const [name, text] of arguments[0]) data.items.add(new File([bytes(text)], name));\
            const target = document.querySelector('main') ?? document.body;\
            for (const kind of ['dragenter', 'dragover', 'drop'])\
              target.dispatchEvent(new DragEvent(kind, { dataTransfer: data, bubbles: true, cancelable: true, composed: true }));";
        let coded = |bytes| base64::Engine::encode(&base64::engine::general_purpose::STANDARD, bytes);
        let files: Vec<Value> = files.iter().map(|(name, bytes)| json!([name, coded(*bytes)])).collect();
        self.ask(script, &[json!(files)]);
    }

    /// The report as one file, by name and text.
    pub fn report_page(&self) -> (String, String) {
        let pages = || -> Vec<PathBuf> {
            let files = std::fs::read_dir(self.session.downloads()).expect("downloads have their folder");
            files
                .flatten()
                .map(|file| file.path())
                .filter(|path| path.extension().is_some_and(|end| end == "html"))
                .collect()
        };
        for old in pages() {
            std::fs::remove_file(old).expect("a page of before is taken away");
        }
        self.click("#leaving-save");
        let mut found = None;
        self.until("a page of its own", |_| {
            found = pages().into_iter().find_map(|path| {
                let text = std::fs::read_to_string(&path).unwrap_or_default();
                let name = path.file_name()?.to_string_lossy().into_owned();
                text.trim_end().ends_with("</html>").then_some((name, text))
            });
            found.is_some()
        });
        found.expect("it was found")
    }

    /// Methods of a paper as they are copied.
    pub fn methods(&self) -> String {
        self.until("what was copied before", |page| page.text("#leaving-methods") != "Copied");
        self.click("#leaving-methods");
        self.until("methods", |page| page.text("#leaving-methods") == "Copied");
        self.clipboard()
    }

    /// What a canvas holds.
    pub fn pixels(&self, selector: &str) -> Bitmap {
        let script = "\
            const canvas = document.querySelector(arguments[0]);\
            const { width, height } = canvas;\
            const bytes = canvas.getContext('2d').getImageData(0, 0, width, height).data;\
            let text = ''; for (const byte of bytes) text += String.fromCharCode(byte);\
            return [width, height, btoa(text)]";
        let found = self.ask(script, &[json!(selector)]);
        let bytes =
            base64::Engine::decode(&base64::engine::general_purpose::STANDARD, found[2].as_str().unwrap()).unwrap();
        Bitmap { width: found[0].as_u64().unwrap() as usize, height: found[1].as_u64().unwrap() as usize, bytes }
    }

    /// From now on every word written on a canvas is taken down, with its place in pixels of the bitmap.
    pub fn take_down_words(&self) {
        self.value(
            "window.written = [];\
             const write = CanvasRenderingContext2D.prototype.fillText;\
             CanvasRenderingContext2D.prototype.fillText = function (text, x, y, ...rest) {\
               const { a, b, c, d, e, f } = this.getTransform();\
               window.written.push([this.canvas.id, text, a * x + c * y + e, b * x + d * y + f]);\
               return write.call(this, text, x, y, ...rest);\
             };",
        );
    }

    /// Words written on a canvas since the last call, with their places.
    pub fn written_on(&self, id: &str) -> Vec<(String, f64, f64)> {
        let script = "const mine = window.written.filter(([id]) => id === arguments[0]);\
                      window.written = window.written.filter(([id]) => id !== arguments[0]);\
                      return mine";
        let found = self.ask(script, &[json!(id)]);
        let number = |value: &Value| value.as_f64().expect("a number");
        let words = found.as_array().expect("a list").iter();
        words.map(|word| (word[1].as_str().unwrap_or_default().into(), number(&word[2]), number(&word[3]))).collect()
    }

    /// Downloads the report by its button and reads the file that lands on disk.
    pub fn download_report(&self) -> Value {
        self.downloaded(|| self.click("#download-json"))
    }

    /// The same without moving focus or mouse.
    pub fn report(&self) -> Value {
        self.downloaded(|| {
            self.value("document.querySelector('#download-json').click()");
        })
    }

    /// The report of an answer once something holds of it.
    pub fn report_when(&self, what: &str, holds: impl Fn(&Value) -> bool) -> Value {
        let mut report = Value::Null;
        self.until(what, |page| {
            if page.state() != "answered" {
                return false;
            }
            report = page.report();
            holds(&report)
        });
        report
    }

    /// Downloads a file by its button and reads what lands on disk.
    pub fn download(&self, button: &str, name: &str) -> String {
        let file = self.session.downloads().join(name);
        let _ = std::fs::remove_file(&file);
        self.click(button);
        let (start, mut last) = (Instant::now(), String::new());
        loop {
            sleep(Duration::from_millis(40));
            let text = std::fs::read_to_string(&file).unwrap_or_default();
            // Half a file still grows.
            if !text.is_empty() && text == last {
                return text;
            }
            assert!(start.elapsed() < PATIENCE, "{}: no {name} was downloaded", self.browser.name());
            last = text;
        }
    }

    /// Saves a figure as `kind` by the tools at `place`, and says where it lies; only `kind`s of text can be read by `download`.
    pub fn save_figure(&self, place: &str, kind: &str, name: &str) -> std::path::PathBuf {
        if self.attribute(&format!("{place} .figure-save"), "aria-expanded") == "false" {
            self.click(&format!("{place} .figure-save"));
        }
        let file = self.session.downloads().join(name);
        let _ = std::fs::remove_file(&file);
        self.click(&format!("{place} .figure-panel [data-figure={kind}]"));
        self.until("the figure", |page| {
            page.text(".figure-panel [role=status]").starts_with(&format!("Saved as {name}")) && file.exists()
        });
        file
    }

    /// The text of a figure that is saved as SVG.
    pub fn svg(&self, place: &str, name: &str) -> String {
        let file = self.save_figure(place, "svg", name);
        let mut text = String::new();
        self.until("a whole figure", |_| {
            text = std::fs::read_to_string(&file).unwrap_or_default();
            text.trim_end().ends_with("</svg>")
        });
        text
    }

    fn downloaded(&self, ask: impl Fn()) -> Value {
        let file = self.session.downloads().join("inward-report.json");
        let _ = std::fs::remove_file(&file);
        let start = Instant::now();
        let mut asked = None::<Instant>;
        loop {
            // One that was asked for while the answer changed is given up, and asked for once more.
            if asked.is_none_or(|at| at.elapsed() > Duration::from_secs(8)) {
                ask();
                asked = Some(Instant::now());
            }
            // Half a file is not JSON yet.
            if let Some(report) = std::fs::read_to_string(&file).ok().and_then(|text| serde_json::from_str(&text).ok())
            {
                return report;
            }
            assert!(start.elapsed() < PATIENCE, "{}: no report was downloaded", self.browser.name());
            sleep(Duration::from_millis(40));
        }
    }

    /// What the accessibility checker has against the page as it stands, one line per finding.
    pub fn accessibility_findings(&self) -> Vec<String> {
        let file = tests_folder().join("node_modules/axe-core/axe.min.js");
        let checker = std::fs::read_to_string(&file)
            .unwrap_or_else(|_| panic!("axe-core is missing: run `cargo xtask test --install`, or `npm ci` in tests/"));
        let script = format!(
            "{checker}; return axe.run(document, {{ resultTypes: ['violations'] }}).then(found => found.violations.flatMap(rule => \
             rule.nodes.map(node => `${{rule.id}}: ${{node.target}}: ${{node.failureSummary}}`)))"
        );
        let found = self.value(&script);
        found
            .as_array()
            .expect("a list of findings")
            .iter()
            .map(|line| line.as_str().unwrap_or_default().into())
            .collect()
    }

    /// Sets what the person's device asks for.
    pub fn surround(&self, surroundings: Surroundings) {
        surroundings.set(self.browser, &self.session).unwrap_or_else(|why| panic!("{}: {why}", self.browser.name()));
        // Two frames: the page hears of it and has painted.
        self.settle();
    }

    /// Waits until what was asked for before has been painted.
    pub fn settle(&self) {
        self.value("return new Promise((done) => requestAnimationFrame(() => requestAnimationFrame(() => setTimeout(done, 30))))");
    }

    /// Keeps a picture of the window for looking at.
    pub fn picture(&self, name: &str) {
        let file = screenshot_file(&format!("{}-{name}", self.browser.name()));
        self.session.picture(&file).unwrap();
    }
}
