//! Nothing leaves the machine: the policy in the file, watched by a server that counts.
use inward_tests::{Browser, Canary, Folder, Page, Site, Variant, dist_file, example, in_both_browsers};
use serde_json::json;
use std::time::Duration;

/// Every way out that a script has and the policy must stop; each asks for a path of its own.
fn attempts(host: &str) -> String {
    let script = r#"
        window.tried = [];
        const attempt = (name, job) => {
            try { Promise.resolve(job(`http://HOST/${name}`)).catch(() => {}); } catch {}
            window.tried.push(name);
        };
        const element = (tag, changes) => document.head.append(Object.assign(document.createElement(tag), changes));
        attempt("fetch", (url) => fetch(url, { mode: "no-cors" }));
        attempt("xhr", (url) => { const request = new XMLHttpRequest(); request.open("GET", url); request.send(); });
        attempt("beacon", (url) => navigator.sendBeacon(url, "x"));
        attempt("socket", () => new WebSocket("ws://HOST/socket"));
        attempt("events", (url) => new EventSource(url));
        attempt("image", (url) => { new Image().src = url; });
        attempt("style", (url) => element("link", { rel: "stylesheet", href: url }));
        attempt("script", (url) => element("script", { src: url }));
        attempt("frame", (url) => document.body.append(Object.assign(document.createElement("iframe"), { src: url })));
        attempt("media", (url) => document.body.append(Object.assign(document.createElement("video"), { src: url, preload: "auto" })));
        attempt("font", (url) => { const font = new FontFace("x", `url(${url})`); return font.load(); });
        attempt("import", (url) => import(url));
        attempt("form", (url) => {
            const frame = Object.assign(document.createElement("iframe"), { name: "elsewhere" });
            const form = Object.assign(document.createElement("form"), { action: url, method: "post", target: "elsewhere" });
            document.body.append(frame, form);
            form.submit();
        });
        attempt("worker", () => {
            const text = `fetch("http://HOST/worker", { mode: "no-cors" }).catch(() => {}); postMessage("tried")`;
            const address = URL.createObjectURL(new Blob([text], { type: "text/javascript" }));
            const own = globalThis.trustedTypes;
            const worker = new Worker(own ? own.createPolicy("pool", { createScriptURL: (x) => x }).createScriptURL(address) : address);
            worker.onmessage = () => window.tried.push("within worker");
        });
    "#;
    format!("(() => {{{}}})();", script.replace("HOST", host))
}

/// Names tried that arrived.
fn arrived(canary: &Canary, tried: &[String]) -> Vec<String> {
    let seen = canary.seen();
    tried.iter().filter(|name| seen.iter().any(|line| line.contains(&format!("/{name} ")))).cloned().collect()
}

/// Names tried, once the added worker has run too.
fn tried(page: &Page) -> Vec<String> {
    let names = || page.value("return window.tried.filter((name) => name !== 'within worker')");
    page.until("the added worker", |page| page.value("return window.tried.includes('within worker')") == json!(true));
    names().as_array().expect("the added script ran").iter().map(|name| name.as_str().unwrap().to_owned()).collect()
}

fn nothing_passes_the_policy_and_everything_without_it(browser: Browser) {
    let canary = Canary::start();
    let folder = Folder::fresh("open");
    let page = Page::load(
        browser,
        &Variant::delivered().with_script(&attempts(&canary.host())).without_policy().write(&folder),
    );
    let names = tried(&page);
    assert_eq!(names.len(), 14);
    page.until("every request without a policy", |_| arrived(&canary, &names).len() == names.len());
    drop(page);

    let canary = Canary::start();
    let folder = Folder::fresh("sealed");
    let page = Page::load(browser, &Variant::delivered().with_script(&attempts(&canary.host())).write(&folder));
    assert_eq!(tried(&page), names, "the added script is admitted and runs");
    // As long as the open page took, and more: what has not arrived by now does not arrive.
    std::thread::sleep(Duration::from_secs(3));
    assert_eq!(canary.seen(), Vec::<String>::new());
}

/// As in a wiki: the frame reaches neither a server nor the page around.
fn nothing_passes_from_a_sandboxed_frame(browser: Browser) {
    let canary = Canary::start();
    let around = "<!doctype html><title>around</title>\
                  <iframe sandbox='allow-scripts allow-downloads' src='inward.html' width=600 height=600></iframe>";
    let sealed = Variant::delivered().with_script(&attempts(&canary.host())).text().to_owned();
    let site = Site::start(&[("/around.html", around.to_owned()), ("/inward.html", sealed)]);
    let page = Page::at(browser, &site.address("/around.html"));
    page.session().enter_frame("iframe").unwrap();
    assert_eq!(tried(&page).len(), 14);
    let reached = "const ways = [() => parent.document.title, () => parent.localStorage, () => localStorage, () => document.cookie];\
                   return ways.filter((way) => { try { way(); return true } catch { return false } }).length";
    assert_eq!(page.value(reached), json!(0));
    std::thread::sleep(Duration::from_secs(3));
    assert_eq!(canary.seen(), Vec::<String>::new());
    assert_eq!(site.seen(), ["/around.html", "/inward.html"]);
}

/// The whole way through the delivered page, with every way out recorded by the browser itself.
fn a_whole_visit_asks_for_nothing(browser: Browser) {
    let page = Page::open(browser);
    page.paste("#electrodes-text", &example("watch_electrodes.tsv"));
    page.paste("#maps-text", &example("watch_maps.tsv"));
    page.wait_for_answer();
    page.download_report();
    let asked = page.value("return performance.getEntriesByType('resource').map((entry) => entry.name).filter((name) => !/^(blob|data):/.test(name))");
    assert_eq!(asked, json!([]));
    let kept = page.value(
        "let count = 0; try { count += localStorage.length + sessionStorage.length } catch {} return [count, document.cookie, history.length]",
    );
    assert_eq!(kept[0], json!(0), "no storage");
    assert_eq!(kept[1], json!(""), "no cookies");
}

in_both_browsers!(
    nothing_passes_the_policy_and_everything_without_it,
    nothing_passes_from_a_sandboxed_frame,
    a_whole_visit_asks_for_nothing,
);

#[test]
fn the_policy_is_the_strict_one() {
    let page = Variant::delivered();
    let text = page.text();
    let start = text.find("<meta http-equiv=\"Content-Security-Policy\"").expect("the page holds a policy");
    assert!(
        !text[..start].contains("<script") && !text[..start].contains("<style") && !text[..start].contains("<link"),
        "the policy comes first"
    );
    let policy = &text[start..start + text[start..].find('>').unwrap()];
    for part in [
        "default-src 'none'",
        "script-src 'sha256-",
        "'wasm-unsafe-eval'",
        "style-src 'sha256-",
        "worker-src blob:",
        "img-src data: blob:",
        "base-uri 'none'",
        "form-action 'none'",
        "require-trusted-types-for 'script'",
        "trusted-types page pool",
    ] {
        assert!(policy.contains(part), "{part} is missing in {policy}");
    }
    for loose in ["unsafe-inline", "'unsafe-eval'", "http:", "https:", " *", "connect-src", "'self'"] {
        assert!(!policy.contains(loose), "{loose} in {policy}");
    }
}

/// What no policy stops must not stand in the page at all.
#[test]
fn the_bundle_holds_no_way_around_the_policy() {
    let page = Variant::delivered();
    // What is packed is no script; those of page and worker are looked at as they run.
    let packed = ["id=\"wasm\"", "id=\"notices", "id=\"worker\"", "id=\"script\""];
    let scripts: String = page
        .text()
        .split("<script")
        .skip(1)
        .filter(|part| part.split('>').next().is_some_and(|tag| !packed.iter().any(|id| tag.contains(id))))
        .map(|part| part.split("</script>").next().unwrap_or_default())
        .chain([page.worker().as_str(), page.script().as_str()])
        .collect();
    assert!(
        page.worker().contains("postMessage") && page.script().contains("addEventListener") && scripts.len() > 10_000,
        "the scripts were found"
    );
    for way in [
        "window.open",
        "location.href",
        "location.assign",
        "location.replace",
        "location =",
        "location=",
        "RTCPeerConnection",
        "localStorage",
        "sessionStorage",
        "indexedDB",
        "document.cookie",
        "serviceWorker",
        "eval(",
        "new Function",
        "importScripts",
        "http-equiv=\"refresh\"",
    ] {
        assert!(!scripts.contains(way), "{way} in the bundle");
    }
}

#[test]
fn the_page_is_small_enough_to_mail() {
    let size = std::fs::metadata(dist_file("inward.html")).unwrap().len();
    println!("inward.html: {size} bytes");
    assert!(size <= 600_000, "{size} bytes");
}
