//! One browser window driven through the WebDriver protocol (W3C).
use crate::Outcome;
use crate::driver::Driver;
use crate::folder::Folder;
use base64::Engine;
use base64::engine::general_purpose::STANDARD;
use serde_json::{Value, json};
use std::path::{Path, PathBuf};
use std::time::Duration;
use ureq::Agent;

/// The control key, as the protocol writes it.
pub const CONTROL: char = '\u{E009}';

/// The tabulator key.
pub const TAB: char = '\u{E004}';

/// Key under which the protocol keeps an element's reference.
const ELEMENT: &str = "element-6066-11e4-a52e-4f735466cecf";

/// Reference to an element of the open document.
#[derive(Clone, Debug)]
pub struct Element(String);

/// An open browser window; ended when dropped.
pub struct Session {
    agent: Agent,
    root: String,
    // In this order: the server goes after the session has been closed, the folder after the server.
    _driver: Driver,
    folder: Folder,
}

impl Session {
    /// Asks the server for a window. `folder` holds the window's profile and downloads and goes with it.
    pub fn open(driver: Driver, capabilities: &Value, folder: Folder) -> Outcome<Self> {
        let agent: Agent = Agent::config_builder()
            .http_status_as_error(false)
            .timeout_global(Some(Duration::from_secs(120)))
            .build()
            .into();
        let mut session = Self { agent, root: driver.address(), _driver: driver, folder };
        let answer = session.post("/session", &json!({ "capabilities": { "alwaysMatch": capabilities } }))?;
        let id = answer["sessionId"].as_str().ok_or("the server gave no session")?;
        session.root = format!("{}/session/{id}", session.root);
        Ok(session)
    }

    /// Folder into which this window downloads.
    pub fn downloads(&self) -> PathBuf {
        self.folder.path().join("downloads")
    }

    fn post(&self, path: &str, body: &Value) -> Outcome<Value> {
        let url = format!("{}{path}", self.root);
        let answer = self.agent.post(&url).content_type("application/json").send(body.to_string());
        value_of(path, answer)
    }

    fn get(&self, path: &str) -> Outcome<Value> {
        value_of(path, self.agent.get(format!("{}{path}", self.root)).call())
    }

    /// Opens an address and waits for the document to be loaded.
    pub fn go(&self, address: &str) -> Outcome<()> {
        self.post("/url", &json!({ "url": address })).map(|_| ())
    }

    /// The first element that a CSS selector finds.
    pub fn find(&self, selector: &str) -> Outcome<Element> {
        let found = self.post("/element", &json!({ "using": "css selector", "value": selector }))?;
        let id = found[ELEMENT].as_str().ok_or_else(|| format!("no reference to {selector}"))?;
        Ok(Element(id.into()))
    }

    /// The element that has the focus.
    pub fn focused(&self) -> Outcome<Element> {
        let found = self.get("/element/active")?;
        Ok(Element(found[ELEMENT].as_str().ok_or("nothing has the focus")?.into()))
    }

    /// A click in the middle of an element, as by a mouse.
    pub fn click(&self, element: &Element) -> Outcome<()> {
        self.post(&format!("/element/{}/click", element.0), &json!({})).map(|_| ())
    }

    /// Keys typed into an element; a path typed into a file field picks that file.
    pub fn type_keys(&self, element: &Element, text: &str) -> Outcome<()> {
        self.post(&format!("/element/{}/value", element.0), &json!({ "text": text })).map(|_| ())
    }

    /// Keys pressed one after the other wherever the focus is, as on a keyboard.
    pub fn press(&self, keys: &str) -> Outcome<()> {
        self.strike(keys.chars().flat_map(|key| [stroke("keyDown", key), stroke("keyUp", key)]).collect())
    }

    /// A key pressed while another is held.
    pub fn chord(&self, held: char, key: char) -> Outcome<()> {
        self.strike(vec![stroke("keyDown", held), stroke("keyDown", key), stroke("keyUp", key), stroke("keyUp", held)])
    }

    fn strike(&self, strokes: Vec<Value>) -> Outcome<()> {
        let actions = json!({ "actions": [{ "type": "key", "id": "keyboard", "actions": strokes }] });
        self.post("/actions", &actions).map(|_| ())
    }

    /// Visible text of an element.
    pub fn text(&self, element: &Element) -> Outcome<String> {
        let text = self.get(&format!("/element/{}/text", element.0))?;
        Ok(text.as_str().unwrap_or_default().into())
    }

    /// Runs a script's body in the page; `arguments` are its `arguments`, the value it returns comes back.
    pub fn run(&self, script: &str, arguments: &[Value]) -> Outcome<Value> {
        self.post("/execute/sync", &json!({ "script": script, "args": arguments }))
    }

    /// Moves the mouse to a place given in CSS pixels from the middle of an element, and leaves it there.
    pub fn hover(&self, element: &Element, x: i64, y: i64) -> Outcome<()> {
        self.mouse(element, x, y, &[])
    }

    /// A click at a place given in CSS pixels from the middle of an element.
    pub fn click_at(&self, element: &Element, x: i64, y: i64) -> Outcome<()> {
        self.mouse(element, x, y, &["pointerDown", "pointerUp"])
    }

    /// Moves the mouse into the upper left corner of the window, where nothing is.
    pub fn mouse_away(&self) -> Outcome<()> {
        let corner = json!({ "type": "pointerMove", "duration": 0, "origin": "viewport", "x": 1, "y": 1 });
        self.post("/actions", &json!({ "actions": [{ "type": "pointer", "id": "mouse", "actions": [corner] }] }))
            .map(|_| ())
    }

    fn mouse(&self, element: &Element, x: i64, y: i64, then: &[&str]) -> Outcome<()> {
        let start = json!({ "type": "pointerMove", "duration": 0, "origin": element.argument(), "x": x, "y": y });
        let then = then.iter().map(|kind| json!({ "type": kind, "button": 0 }));
        let actions: Vec<Value> = std::iter::once(start).chain(then).collect();
        let mouse =
            json!({ "type": "pointer", "id": "mouse", "parameters": { "pointerType": "mouse" }, "actions": actions });
        self.post("/actions", &json!({ "actions": [mouse] })).map(|_| ())
    }

    /// The window as a picture, the bytes of a PNG.
    pub fn screenshot(&self) -> Outcome<Vec<u8>> {
        decoded(&self.get("/screenshot")?)
    }

    /// Writes a picture of the window to a file.
    pub fn picture(&self, file: &Path) -> Outcome<()> {
        std::fs::write(file, self.screenshot()?).map_err(|why| format!("{}: {why}", file.display()))
    }

    /// The document printed on paper of this size in centimetres, the bytes of a PDF.
    pub fn print(&self, width: f64, height: f64) -> Outcome<Vec<u8>> {
        let page = json!({ "width": width, "height": height });
        decoded(&self.post("/print", &json!({ "page": page, "background": false, "shrinkToFit": true }))?)
    }

    /// The document printed by Chromium on the paper and with the margins that its own style asks for.
    pub fn print_as_styled(&self) -> Outcome<Vec<u8>> {
        let parameters = json!({ "preferCSSPageSize": true });
        let printed = self.post("/goog/cdp/execute", &json!({ "cmd": "Page.printToPDF", "params": parameters }))?;
        decoded(&printed["data"])
    }

    /// A command of Chromium's own protocol.
    pub fn chromium_command(&self, command: &str, parameters: &Value) -> Outcome<()> {
        self.post("/goog/cdp/execute", &json!({ "cmd": command, "params": parameters })).map(|_| ())
    }

    /// Gives the page in Chromium a window of this size in CSS pixels, each a pixel of the picture, without scroll bars.
    pub fn viewport(&self, width: u32, height: u32) -> Outcome<()> {
        let metrics = json!({ "width": width, "height": height, "deviceScaleFactor": 1, "mobile": false });
        self.chromium_command("Emulation.setScrollbarsHidden", &json!({ "hidden": true }))?;
        self.chromium_command("Emulation.setDeviceMetricsOverride", &metrics)
    }

    /// Runs a script in Firefox's own window, around the page.
    pub fn run_in_firefox(&self, script: &str) -> Outcome<Value> {
        self.post("/moz/context", &json!({ "context": "chrome" }))?;
        let outcome = self.run(script, &[]);
        self.post("/moz/context", &json!({ "context": "content" }))?;
        outcome
    }

    /// Goes into a frame of the document: what follows happens there.
    pub fn enter_frame(&self, selector: &str) -> Outcome<()> {
        let frame = self.find(selector)?.argument();
        self.post("/frame", &json!({ "id": frame })).map(|_| ())
    }

    /// Back from a frame to the page around it.
    pub fn leave_frames(&self) -> Outcome<()> {
        self.post("/frame", &json!({ "id": null })).map(|_| ())
    }

    /// Sets the size of the window in CSS pixels.
    pub fn resize(&self, width: u32, height: u32) -> Outcome<()> {
        self.post("/window/rect", &json!({ "width": width, "height": height })).map(|_| ())
    }
}

fn decoded(text: &Value) -> Outcome<Vec<u8>> {
    STANDARD.decode(text.as_str().unwrap_or_default()).map_err(|why| why.to_string())
}

fn stroke(kind: &str, key: char) -> Value {
    json!({ "type": kind, "value": key.to_string() })
}

impl Element {
    /// The element as an argument of a script.
    pub fn argument(&self) -> Value {
        json!({ ELEMENT: self.0 })
    }
}

fn value_of(path: &str, answer: Result<ureq::http::Response<ureq::Body>, ureq::Error>) -> Outcome<Value> {
    let mut answer = answer.map_err(|why| format!("{path}: {why}"))?;
    let text =
        answer.body_mut().with_config().limit(1 << 28).read_to_string().map_err(|why| format!("{path}: {why}"))?;
    let body: Value = serde_json::from_str(&text).map_err(|why| format!("{path}: {why}"))?;
    let value = body["value"].clone();
    if answer.status().is_success() {
        return Ok(value);
    }
    Err(format!("{path}: {}: {}", value["error"].as_str().unwrap_or("error"), value["message"].as_str().unwrap_or("")))
}

impl Drop for Session {
    fn drop(&mut self) {
        let _ = self.agent.delete(&self.root).call();
    }
}
