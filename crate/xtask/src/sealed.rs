//! What no content security policy stops, kept out by looking: navigation, new windows, direct connections, storage,
//! text run as code or parsed as markup.

use crate::dist::Dist;
use crate::lexer::{Kind, Token, tokens};
use crate::workspace::{Workspace, files, read, slashed};
use anyhow::{Context, Result, bail};

/// Names that have no business in the scripts, whatever they are used for.
const NAMES: [&str; 25] = [
    "BroadcastChannel",
    "RTCPeerConnection",
    "caches",
    "contentWindow",
    "cookie",
    "cookieStore",
    "createContextualFragment",
    "eval",
    "import",
    "importScripts",
    "indexedDB",
    "innerHTML",
    "insertAdjacentHTML",
    "localStorage",
    "location",
    "navigation",
    "opener",
    "parseFromString",
    "sendBeacon",
    "serviceWorker",
    "sessionStorage",
    "setHTMLUnsafe",
    "srcdoc",
    "webkitRTCPeerConnection",
    "webkitRequestFileSystem",
];

/// Objects whose `open` opens a window.
const WINDOWS: [&str; 7] = ["window", "self", "globalThis", "top", "parent", "frames", "document"];

/// Looks through the four scripts, the page's markup and its style, and who of the page's modules talks to whom.
pub fn check(workspace: &Workspace, dist: &Dist) -> Result<()> {
    let mut found = Vec::new();
    let www = workspace.root.join("www");
    for path in files(&www)?.iter().filter(|path| path.extension().is_some_and(|extension| extension == "js")) {
        let name = slashed(path.strip_prefix(&www)?);
        let talk = talk(&name, &read(path)?).with_context(|| name.clone())?;
        found.extend(talk.into_iter().map(|what| format!("www/{name}, line {what}")));
    }
    // The packed engine is no text: any letters may follow each other in it.
    let module = dist.module.replacen(&dist.carried, "", 1);
    for (name, script) in [
        ("loader", &dist.loader),
        ("page script", &dist.script),
        ("worker script", &dist.worker),
        ("engine/inward.mjs", &module),
    ] {
        found.extend(in_script(script)?.into_iter().map(|what| format!("{name}, line {what}")));
    }
    found.extend(in_markup(&dist.answer).into_iter().map(|what| format!("answer.html, line {what}")));
    found.extend(in_markup(&dist.page).into_iter().map(|what| format!("inward.html, line {what}")));
    if !found.is_empty() {
        bail!("not sealed:\n{}", found.join("\n"));
    }
    println!("the scripts and the markup reach for nothing outside");
    Ok(())
}

/// Messages to other windows: from `host/` alone, to the window around and never to whoever it is. Workers are the
/// engine's.
fn talk(path: &str, script: &str) -> Result<Vec<String>> {
    let found = tokens(script)?;
    let (host, engine) = (path.starts_with("host/"), path.starts_with("engine/"));
    let bad = |at: usize| {
        let before = |steps: usize| at.checked_sub(steps).map_or("", |at| found[at].text);
        let text = found[at].text;
        match found[at].kind {
            Kind::Word if text == "postMessage" && host => before(1) != "." || before(2) != "parent",
            Kind::Word if text == "postMessage" => !engine,
            Kind::Word => matches!(text, "parent" | "frames") && !host,
            Kind::Quoted | Kind::Template => {
                let text = text.trim_matches(['"', '\'', '`']);
                matches!(text, "postMessage" | "parent" | "frames") || (host && text == "*")
            }
            Kind::Pattern | Kind::Mark => false,
        }
    };
    Ok((0..found.len()).filter(|at| bad(*at)).map(|at| format!("{}: {}", found[at].line, found[at].text)).collect())
}

fn in_script(script: &str) -> Result<Vec<String>> {
    let found = tokens(script)?;
    let reached = found
        .iter()
        .enumerate()
        .filter_map(|(at, token)| reach(&found, at).map(|what| format!("{}: {what}", token.line)));
    Ok(reached.collect())
}

fn reach(found: &[Token], at: usize) -> Option<String> {
    let token = found[at];
    let before = |steps: usize| at.checked_sub(steps).map_or("", |at| found[at].text);
    let after = |steps: usize| found.get(at + steps).map_or("", |token| token.text);
    let bad = match token.kind {
        Kind::Word => match token.text {
            name if NAMES.contains(&name) => true,
            // Read, it is the document's text; written, or named for `Object.assign`, it is parsed.
            "outerHTML" => before(1) != "." || after(1) == "=" || after(2) == "=",
            "Function" => before(1) == "new" || after(1) == "(",
            "write" | "writeln" => before(1) == "." && before(2) == "document",
            "setTimeout" | "setInterval" => matches!(after(2).chars().next(), Some('"' | '\'' | '`')),
            "open" if before(1) == "." => WINDOWS.contains(&before(2)),
            "open" => after(1) == "(" && before(1) != "function" && !defines(found, at + 1),
            _ => false,
        },
        Kind::Quoted | Kind::Template => {
            let text = token.text.trim_matches(['"', '\'', '`']);
            let looked_up = before(1) == "[" && after(1) == "]";
            (looked_up && (NAMES.contains(&text) || text == "open" || text == "outerHTML"))
                || leads_out(text)
                || text == "_blank"
        }
        Kind::Pattern | Kind::Mark => false,
    };
    bad.then(|| token.text.to_owned())
}

/// Whether the brackets that open here are a method's parameters: a body follows.
fn defines(found: &[Token], open: usize) -> bool {
    let depth = found[open].depth;
    let close = found[open + 1..].iter().position(|token| token.depth == depth).map(|at| open + 1 + at);
    close.and_then(|close| found.get(close + 1)).is_some_and(|token| token.is("{"))
}

/// Whether a text holds an address outside. Namespaces of markup are names, not addresses.
fn leads_out(text: &str) -> bool {
    let lower = text.to_lowercase().replace("http://www.w3.org/", "");
    ["http:", "https:", "ws:", "wss:", "javascript:"].iter().any(|scheme| lower.contains(scheme))
        || lower.starts_with("//")
}

fn in_markup(page: &str) -> Vec<String> {
    let mut found = Vec::new();
    let mut rest = page;
    while let Some(start) = rest.find('<') {
        let at = page.len() - rest.len() + start;
        let tag = rest[start..].split_inclusive('>').next().unwrap_or_default();
        if let Some(what) = tag_reach(tag) {
            found.push(format!("{}: {what}", page[..at].matches('\n').count() + 1));
        }
        rest = &rest[start + tag.len()..];
        // A script's or style's text is no markup; those that run are looked at as scripts.
        let end = ["script", "style"].iter().find(|name| tag[1..].starts_with(**name)).map(|name| format!("</{name}"));
        if let Some(end) = end {
            let (text, after) = rest.split_at(rest.find(&end).unwrap_or(rest.len()));
            if tag.starts_with("<style") && (text.contains("@import") || text.replace("url(data:", "").contains("url("))
            {
                found.push("a style sheet loads a resource".to_owned());
            }
            rest = after;
        }
    }
    found
}

fn tag_reach(tag: &str) -> Option<String> {
    let lower = tag.to_lowercase().replace(['\n', '\''], " ").replace('"', " ").replace("= ", "=");
    let name = lower[1..].split([' ', '>', '/']).next().unwrap_or_default();
    let values = |attribute: &str| {
        let named = format!(" {attribute}=");
        lower.find(&named).map(|at| lower[at + named.len()..].split([' ', '>']).next().unwrap_or_default().to_owned())
    };
    let outside = |value: String| !(value.starts_with('#') || value.starts_with("data:"));
    let bad = matches!(name, "base" | "iframe" | "object" | "embed" | "frame" | "portal")
        || values("target").is_some()
        || values("action").is_some()
        || values("http-equiv").is_some_and(|value| value == "refresh")
        || ["href", "src", "srcset", "ping", "formaction", "xlink:href"]
            .iter()
            .any(|one| values(one).is_some_and(outside))
        || lower.contains(" on") && lower.split(' ').any(|part| part.starts_with("on") && part.contains('='));
    bad.then(|| tag.to_owned())
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn planted_scripts_are_found() {
        for script in [
            "location.href = x;",
            "window.location = x;",
            "window[\"location\"] = x;",
            "globalThis['open'](x);",
            "document.location.assign(x)",
            "window.open(x)",
            "f(); open(x);",
            "new RTCPeerConnection()",
            "localStorage.a = 1",
            "const { sessionStorage } = window;",
            "indexedDB.open(x)",
            "eval(x)",
            "new Function(x)",
            "Function(x)()",
            "import(x)",
            "document.write(x)",
            "a.innerHTML = x",
            "a.outerHTML = x",
            "a.outerHTML += x",
            "a['outerHTML'] = x",
            "Object.assign(a, { outerHTML: x })",
            "opener.x = 1",
            "new BroadcastChannel(x)",
            "a.contentWindow.x()",
            "navigator.sendBeacon(x)",
            "navigator.serviceWorker.register(x)",
            "document.cookie = x",
            "setTimeout(\"x\")",
            "a.target = \"_blank\"",
            "a.href = \"https://example.org\"",
            "a.href = `//example.org/${x}`",
            "a.href = \"javascript:x\"",
        ] {
            let found = in_script(&format!("\n{script}")).unwrap();
            assert!(!found.is_empty() && found.iter().all(|what| what.starts_with("2: ")), "{script}: {found:?}");
        }
    }

    #[test]
    fn honest_scripts_pass() {
        let script = "// eval, location\nimports.open = 1; engine.open(x); async function open(a) {}\n\
            const o = { open(request) { return f(() => request); } }; typeof x === 'function';\n\
            document.createElementNS(\"http://www.w3.org/2000/svg\", \"svg\"); setTimeout(f, 1); f([\"open\", 1]);\n\
            import0; const text = a.outerHTML; a.href = URL.createObjectURL(blob);";
        assert_eq!(in_script(script).unwrap(), Vec::<String>::new());
    }

    #[test]
    fn planted_messages_are_found() {
        for (path, script) in [
            ("views/a.js", "parent.postMessage(x, y)"),
            ("views/a.js", "top.postMessage(x, y)"),
            ("views/a.js", "event.source.postMessage(x, y)"),
            ("views/a.js", "a[\"postMessage\"](x, y)"),
            ("session/a.js", "const { parent } = window"),
            ("engine/a.js", "parent.postMessage(x, y)"),
            ("engine/a.js", "frames[0].postMessage(x, y)"),
            ("host/a.js", "event.source.postMessage(x, y)"),
            ("host/a.js", "top.postMessage(x, y)"),
            ("host/a.js", "parent.postMessage(x, \"*\")"),
            ("host/a.js", "const { postMessage } = parent"),
        ] {
            assert!(!talk(path, script).unwrap().is_empty(), "{path}: {script}");
        }
        for (path, script) in [
            ("host/a.js", "parent.postMessage(x, origin)"),
            ("engine/a.js", "worker.postMessage(x)"),
            ("views/a.js", "// parent.postMessage\na.parentElement"),
        ] {
            assert_eq!(talk(path, script).unwrap(), [""; 0], "{path}: {script}");
        }
    }

    #[test]
    fn planted_markup_is_found() {
        for markup in [
            "<a href=\"https://example.org\">",
            "<a href='page.html'>",
            "<a href=#here target=_blank>",
            "<base href=\"#\">",
            "<img src=\"//example.org/a.png\">",
            "<link rel=\"icon\"\n href=\"icon.png\">",
            "<form action=\"#\">",
            "<meta http-equiv=\"refresh\" content=\"1\">",
            "<button onclick=\"x\">",
            "<iframe>",
            "<style>@import \"a\";</style>",
            "<style>a { background: url(a.png) }</style>",
        ] {
            assert_eq!(in_markup(&format!("<p>\n{markup}")).len(), 1, "{markup}");
        }
    }

    #[test]
    fn honest_markup_passes() {
        let markup = "<a href=\"#answer\" class=\"once\"><link rel=\"icon\" href=\"data:,\"><p>a < b on = c</p>\
            <script>if (a <b) { '<a href=x>' }</script><style>a { background: url(data:x) }</style>";
        assert_eq!(in_markup(markup), Vec::<String>::new());
    }
}
