//! The page inside others: what its address asks for, what it hands over and takes, and to whom.
use inward_tests::{Browser, Page, Site, dist_file, in_both_browsers};
use serde_json::{Value, json};
use sha2::{Digest, Sha256};

/// The delivered page with something behind its #.
fn address(hash: &str) -> String {
    format!("file://{}#{hash}", dist_file("inward.html").display())
}

/// Changes what stands behind the #, as a link of the page around does.
fn go_to(page: &Page, hash: &str) {
    page.ask("location.hash = arguments[0]", &[json!(hash)]);
}

/// Whether the panel is unfolded, has the focus and stands in view.
fn begins_at(page: &Page, selector: &str) -> bool {
    let script = "\
        const panel = document.querySelector(arguments[0]);\
        const { top } = panel.getBoundingClientRect();\
        return panel.contains(document.activeElement) && panel.closest('details:not([open])') === null &&\
               top > -5 && top < innerHeight";
    page.ask(script, &[json!(selector)]) == json!(true)
}

fn the_address_opens_an_example_at_a_panel(browser: Browser) {
    let page = Page::at(browser, &address("example=watch&view=slices"));
    page.until("the slices", |page| page.visible("#slice-above") && begins_at(page, "#slices"));
    assert_eq!(page.attribute(".example[aria-current]", "data-example"), "watch");

    for (name, selector) in [
        ("answer", "#sentence"),
        ("list", "#overview"),
        ("where", "#where"),
        ("trust", "#trust"),
        ("alternatives", "#alternatives"),
        ("influence", "#influence"),
        ("what-if", "#what-if"),
        ("populations", "#populations"),
        ("numbers", "#numbers-panel"),
        ("electrodes", "#electrode-panel"),
        ("head", "#head-panel"),
        ("understood", "#assumed"),
        ("shares", "#shares"),
        ("all-dipoles", "#all-dipoles"),
        ("table", "#table-panel"),
        ("words", "#glossary"),
    ] {
        go_to(&page, &format!("view={name}"));
        page.until(name, |page| page.visible(selector) && begins_at(page, selector));
    }
    go_to(&page, "example=fog");
    page.until("the fog", |page| page.rests() && page.attribute(".example[aria-current]", "data-example") == "fog");
    // A place of the page is the browser's own business.
    go_to(&page, "main");
    page.focus("body");
    assert_eq!(page.state(), "answered");

    for (hash, code, said) in [
        ("example=nowhere", "example-unknown", "lamp, engine-room"),
        ("view=nowhere", "view-unknown", "answer, list"),
        ("view=constructor", "view-unknown", "answer, list"),
        ("view=response", "view-absent", "“response”"),
        ("example=%E0%A4%A&%", "example-unknown", "lamp, engine-room"),
        ("view=%", "view-unknown", "“%”"),
    ] {
        go_to(&page, hash);
        page.wait_for_failure();
        let text = page.failure_text();
        assert!(text.contains(said), "{hash}: {text}");
        assert!(page.text("#failure-message").contains("address"), "{hash}: {text}");
        let details = page.value("return document.querySelector('#failure-details').textContent");
        assert!(details.as_str().unwrap().contains(code), "{hash}: {details}");
        page.click("#failure-dismiss");
        assert_eq!(page.state(), "answered", "{hash}: the answer stays");
    }
}

/// Without an answer yet, and with nothing to wait for.
fn an_address_that_asks_for_nothing_there_says_so(browser: Browser) {
    let page = Page::at(browser, &address("example=%F0%28%8C&view=nowhere"));
    page.wait_for_failure();
    assert!(page.failure_text().contains("lamp, engine-room"), "{}", page.failure_text());
    assert!(page.visible("#empty-examples"));
    page.session().go(&address("view=words")).unwrap();
    page.until("the words", |page| page.visible("#glossary-list") && begins_at(page, "#glossary"));
}

fn delivered(name: &str) -> String {
    std::fs::read_to_string(dist_file(name)).expect("what the build made is text")
}

/// The sample host and the page as one site.
fn wiki() -> Site {
    Site::start(&[("/sample_host.html", delivered("sample_host.html")), ("/inward.html", delivered("inward.html"))])
}

/// A page around the frame that takes down what comes from it, and sends what it is told to.
fn around(frame: &str) -> String {
    format!(
        "<!doctype html><html lang=en><title>around</title><h1>around</h1>\
         <script>heard = []; addEventListener('message', (event) => {{\
           if (event.source === document.getElementById('inward').contentWindow) heard.push([event.data, event.origin]);\
         }});</script>\
         <iframe id=inward title=inward width=600 height=700 sandbox='allow-scripts allow-downloads' src='{frame}'></iframe>"
    )
}

/// Messages that the page around has heard, of a kind.
fn heard(page: &Page, kind: &str) -> Vec<Value> {
    let all = page.ask("return heard.filter(([data]) => data.kind === arguments[0])", &[json!(kind)]);
    all.as_array().unwrap().clone()
}

/// Runs a script in the page around, and nothing else there.
fn outside<T>(page: &Page, look: impl Fn(&Page) -> T) -> T {
    page.session().leave_frames().unwrap();
    let found = look(page);
    page.session().enter_frame("#inward").unwrap();
    found
}

fn the_sample_host_gives_data_and_receives_the_report(browser: Browser) {
    let wiki = wiki();
    let page = Page::at(browser, &wiki.address("/sample_host.html"));
    page.until("the frame", |page| page.text("#said").contains("is ready"));
    page.click("#give");
    page.until("what came of it", |page| page.text("#said").contains("waits for your click"));
    page.session().enter_frame("#inward").unwrap();
    assert_eq!(page.state(), "ready", "nothing is taken without a click");
    let banner = page.text("#hosted");
    assert!(banner.contains(wiki.origin()) && banner.contains("lamp.tsv"), "{banner}");
    assert_eq!(page.accessibility_findings(), [""; 0]);
    page.picture("hosted");
    assert_eq!(page.overhang(), json!(0));

    // By the keyboard alone.
    page.focus("#hosted button");
    page.tab_to("#hosted .wish button");
    page.press("\u{E007}");
    page.until("an answer", Page::rests);
    assert_eq!(page.value("return document.querySelector('input[name=unit]:checked').value"), json!("uV"));

    outside(&page, |page| page.click("#ask"));
    page.until("the question", |page| page.text("#hosted").contains("asks for the report"));
    page.settle();
    outside(&page, |page| assert_eq!(page.text("#line"), "nothing yet", "nothing leaves without a click"));
    assert_eq!(page.accessibility_findings(), [""; 0]);
    page.click("#hosted .wish button");
    outside(&page, |page| {
        page.until("the report", |page| page.text("#line").contains("one equivalent dipole reproduces"));
        assert!(page.text("#line").contains("CP3"), "{}", page.text("#line"));
        page.picture("sample-host");
    });
    page.click("#hosted button");
    assert!(page.text("#hosted").starts_with("Stopped"), "{}", page.text("#hosted"));
    outside(&page, |page| assert!(page.text("#said").contains("stopped")));
    assert_eq!(wiki.seen(), ["/sample_host.html", "/inward.html"], "nothing else was asked for");
}

fn messages_that_are_not_as_they_should_be_are_refused(browser: Browser) {
    let site = Site::start(&[("/inward.html", delivered("inward.html"))]);
    // The page around has another origin than the one that serves the frame.
    let wiki = Site::start(&[("/around.html", String::new())]);
    let text = around(&format!("{}/inward.html#host={}", site.origin(), wiki.origin()));
    drop(wiki);
    let wiki = Site::start(&[("/around.html", text)]);
    let page = Page::at(browser, &wiki.address("/around.html"));
    // The port is another one: by its address the frame talks to somebody else, and hears of nothing.
    page.until("the frame", |page| {
        page.session().enter_frame("#inward").unwrap();
        let ready = page.state() == "ready";
        page.session().leave_frames().unwrap();
        ready
    });
    let post = "const [message, bytes] = arguments;\
                if (bytes !== undefined) message.files[0].content = new Uint8Array(bytes);\
                document.getElementById('inward').contentWindow.postMessage(message, '*')";
    let good = json!({ "inward": 1, "kind": "data", "id": "a", "files": [{ "name": "a.tsv", "content": "Cz\t1" }] });
    page.ask(post, std::slice::from_ref(&good));
    page.settle();
    assert_eq!(heard(&page, "received").len() + heard(&page, "refused").len() + heard(&page, "ready").len(), 0);
    page.session().enter_frame("#inward").unwrap();
    assert!(!page.text("#hosted").contains("offers"), "{}", page.text("#hosted"));
    page.session().leave_frames().unwrap();

    // Now with the right one.
    let frame = format!("{}/inward.html#host={}", site.origin(), wiki.origin());
    page.ask("document.getElementById('inward').src = arguments[0]", &[json!(frame)]);
    page.until("the frame", |page| heard(page, "ready").len() == 1);
    assert_eq!(heard(&page, "ready")[0][1], json!("null"), "the origin of a sandboxed frame");
    // From the frame itself, and from a frame beside it.
    page.session().enter_frame("#inward").unwrap();
    page.ask("window.postMessage(arguments[0], '*')", std::slice::from_ref(&good));
    page.session().leave_frames().unwrap();
    let beside = "const other = document.createElement('iframe');\
                  other.srcdoc = `<script>parent.frames[0].postMessage(${JSON.stringify(arguments[0])}, '*')<\\/script>`;\
                  document.body.append(other); return new Promise((done) => { other.onload = () => setTimeout(done, 200) })";
    page.ask(beside, std::slice::from_ref(&good));
    assert_eq!(heard(&page, "received").len() + heard(&page, "refused").len(), 0);

    let file = |name: Value, content: Value| json!({ "inward": 1, "kind": "data", "id": 7, "files": [{ "name": name, "content": content }] });
    let with = |settings: Value| {
        let mut message = good.clone();
        message["settings"] = settings;
        message
    };
    for (message, code, place) in [
        (json!("hello"), "message-malformed", "message"),
        (json!(null), "message-malformed", "message"),
        (json!([1]), "message-malformed", "message"),
        (json!({}), "version-unknown", "inward"),
        (json!({ "inward": 2, "kind": "data" }), "version-unknown", "inward"),
        (json!({ "inward": "1", "kind": "data" }), "version-unknown", "inward"),
        (json!({ "inward": 1 }), "kind-unknown", "kind"),
        (json!({ "inward": 1, "kind": "report" }), "kind-unknown", "kind"),
        (json!({ "inward": 1, "kind": "data", "id": {} }), "message-malformed", "id"),
        (json!({ "inward": 1, "kind": "data" }), "message-malformed", "files"),
        (json!({ "inward": 1, "kind": "data", "files": [] }), "message-malformed", "files"),
        (json!({ "inward": 1, "kind": "data", "files": [3] }), "message-malformed", "files[0].name"),
        (file(json!(3), json!("Cz\t1")), "message-malformed", "files[0].name"),
        (file(json!("a"), json!(3)), "message-malformed", "files[0].content"),
        (file(json!("a"), json!([1, 2])), "message-malformed", "files[0].content"),
        (with(json!([])), "message-malformed", "settings"),
        (with(json!({ "mapUnit": "furlong" })), "message-malformed", "settings.mapUnit"),
        (with(json!({ "exclude": "Cz" })), "message-malformed", "settings.exclude"),
        (with(json!({ "head": {} })), "setting-unknown", "settings.head"),
        (with(json!({ "constructor": 1 })), "setting-unknown", "settings.constructor"),
    ] {
        let before = heard(&page, "refused").len();
        page.ask(post, std::slice::from_ref(&message));
        page.until("a refusal", |page| heard(page, "refused").len() == before + 1);
        let refusal = heard(&page, "refused")[before][0].clone();
        assert_eq!((&refusal["code"], &refusal["where"]), (&json!(code), &json!(place)), "{message}: {refusal}");
        assert!(refusal["message"].as_str().unwrap().len() > 10 && refusal["hint"].as_str().unwrap().len() > 5);
        assert_eq!(refusal["inward"], json!(1));
    }
    let before = heard(&page, "refused").len();
    page.ask(post, &[file(json!("a"), json!("")), json!((64 << 20) + 1)]);
    page.until("a refusal", |page| heard(page, "refused").len() == before + 1);
    assert_eq!(heard(&page, "refused")[before][0]["code"], json!("data-large"));
    page.session().enter_frame("#inward").unwrap();
    assert_eq!((page.state(), page.exists("#hosted .wish")), ("ready".into(), false), "nothing has changed");
    page.session().leave_frames().unwrap();

    // A later offer takes the place of the former; saying no is told; nothing of it was taken.
    page.ask(post, std::slice::from_ref(&good));
    page.ask(post, &[file(json!("../<b>b.tsv"), json!("Cz\t1"))]);
    page.until("both", |page| heard(page, "received").len() == 2);
    page.until("the former", |page| {
        heard(page, "refused").last().is_some_and(|one| one[0]["code"] == json!("superseded"))
    });
    page.session().enter_frame("#inward").unwrap();
    assert!(page.text("#hosted").contains("<b>b.tsv"), "a name is text: {}", page.text("#hosted"));
    page.click("#hosted .wish .quiet");
    assert_eq!(page.state(), "ready");
    outside(&page, |page| {
        page.until("the no", |page| {
            heard(page, "refused").last().is_some_and(|one| one[0]["code"] == json!("declined"))
        });
        assert_eq!(heard(page, "taken").len() + heard(page, "report").len(), 0);
    });
    assert_eq!(site.seen(), ["/inward.html"], "another # is no other page");
}

fn hosts_without_an_origin_are_refused(browser: Browser) {
    let wiki = wiki();
    let page = Page::at(browser, &wiki.address("/inward.html#host=null"));
    for host in ["null", "file:///home", "javascript:1", "wiki.example.org", "https://a/b", "*", "%", "https://u@a", ""]
    {
        page.session().go("about:blank").unwrap();
        page.session().go(&wiki.address(&format!("/inward.html#host={host}"))).unwrap();
        page.wait_for_failure();
        assert!(page.text("#failure-message").contains("It talks to none"), "{host}: {}", page.failure_text());
        assert!(!page.visible("#hosted"));
    }
    // In a tab of its own there is nobody to talk to.
    page.session().go("about:blank").unwrap();
    page.session().go(&wiki.address(&format!("/inward.html#host={}", wiki.origin()))).unwrap();
    page.wait_for("ready").unwrap();
    assert!(!page.visible("#hosted"));
}

/// What the panel says of the digest, once it is opened.
fn told_digest(page: &Page) -> String {
    page.click("#sealed > summary");
    page.until("the digest", |page| page.exists("#sealed-digest") && !page.text("#sealed-digest").starts_with("Being"));
    page.text("#sealed-digest")
}

fn the_page_tells_the_digest_of_its_file(browser: Browser) {
    let file = delivered("inward.html");
    let digest: String = Sha256::digest(&file).iter().map(|byte| format!("{byte:02x}")).collect();
    assert_eq!(delivered("inward.html.sha256"), format!("{digest}  inward.html\n"));
    let site = Site::start(&[
        ("/inward.html", file.clone()),
        ("/around.html", around("inward.html#view=sealed")),
        ("/changed.html", file.replacen("<body>", "<body class=\"other\">", 1)),
    ]);

    let page = Page::at(browser, &format!("file://{}", dist_file("inward.html").display()));
    page.wait_for("ready").unwrap();
    assert_eq!(told_digest(&page), digest, "from a file");
    assert_eq!(page.accessibility_findings(), [""; 0]);
    page.picture("sealed");

    page.session().go(&site.address("/inward.html")).unwrap();
    page.wait_for("ready").unwrap();
    assert_eq!(told_digest(&page), digest, "over http");

    page.session().go(&site.address("/changed.html")).unwrap();
    page.wait_for("ready").unwrap();
    assert!(told_digest(&page).contains("changed the document"));

    page.session().go(&site.address("/around.html")).unwrap();
    page.session().enter_frame("#inward").unwrap();
    page.until("the digest, opened by its address", |page| {
        page.exists("#sealed-digest") && page.text("#sealed-digest") == digest
    });
}

in_both_browsers!(
    the_address_opens_an_example_at_a_panel,
    an_address_that_asks_for_nothing_there_says_so,
    the_sample_host_gives_data_and_receives_the_report,
    messages_that_are_not_as_they_should_be_are_refused,
    hosts_without_an_origin_are_refused,
    the_page_tells_the_digest_of_its_file,
);
