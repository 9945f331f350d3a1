//! Who may import whom.

use crate::bundle::Modules;
use crate::lexer::{Kind, Token, tokens};
use crate::workspace::{Workspace, files, read, slashed, text};
use anyhow::{Context, Result, bail};

/// The modules of the numerics and of the core, each of which imports only from those before it; `use crate::` finds
/// both from the core, which hands the numerics on.
const ORDER: [&str; 16] = [
    "math",
    "shells",
    "finding",
    "electrode",
    "head",
    "map",
    "read",
    "understand",
    "placement",
    "forward",
    "fit",
    "simulate",
    "assess",
    "scene",
    "report",
    "analyse",
];

/// Checks the numerics, the core, the bindings and the page.
pub fn check(workspace: &Workspace) -> Result<()> {
    let mut broken = Vec::new();
    for package in ["crate/numerics/src", "crate/core/src"] {
        let sources = workspace.root.join(package);
        for path in files(&sources)? {
            let inside = slashed(path.strip_prefix(&sources)?);
            broken.extend(in_core(&inside, &read(&path)?).into_iter().map(|what| format!("{package}/{what}")));
        }
    }
    broken.extend(in_bindings(workspace)?);
    let www = workspace.root.join("www");
    for (path, module) in Modules::read(&www)?.iter() {
        let imports = module.imports.iter().map(|import| (import.path.as_str(), import.line));
        broken.extend(in_page(path, &read(&www.join(path))?, imports)?.into_iter().map(|what| format!("www/{what}")));
    }
    if !broken.is_empty() {
        bail!("against the rules of who imports whom:\n{}", broken.join("\n"));
    }
    println!("modules import only from those before them");
    Ok(())
}

/// Imports in a file of the numerics or the core that point the wrong way.
fn in_core(path: &str, source: &str) -> Vec<String> {
    let mut broken = Vec::new();
    let module = path.split('/').next().unwrap_or_default().trim_end_matches(".rs");
    let own = ORDER.iter().position(|one| *one == module);
    if own.is_none() && module != "lib" {
        broken.push(format!("{path}: `{module}` has no place in the order of modules"));
    }
    // Comments may name anything.
    let code: Vec<_> = source.lines().map(|line| line.split("//").next().unwrap_or_default()).collect();
    let code = code.join("\n");
    for name in ["wasm_bindgen", "js_sys", "web_sys", "JsValue"] {
        broken
            .extend(code.find(name).map(|at| format!("{path}:{}: only the bindings know JavaScript", line(&code, at))));
    }
    for name in ORDER {
        // Followed by a path: `super::electrodes` is another name than `super::electrode::`.
        let hidden = code.find(&format!("super::{name}::"));
        broken.extend(hidden.map(|at| format!("{path}:{}: write `crate::{name}`, not `super::`", line(&code, at))));
    }
    for (at, name) in imported(&code) {
        let place = format!("{path}:{}", line(&code, at));
        match (ORDER.iter().position(|one| *one == name), own) {
            (Some(other), Some(own)) if other > own => {
                broken.push(format!("{place}: `{module}` imports from `{name}`, which comes after it"));
            }
            (None, Some(_)) => broken.push(format!("{place}: write the module, `crate::{name}` hides it")),
            _ => {}
        }
    }
    broken
}

/// The names that follow a `crate::`, each in a pair of braces included, with their places.
fn imported(code: &str) -> Vec<(usize, &str)> {
    let mut found = Vec::new();
    for (start, _) in code.match_indices("crate::") {
        let mut depth = 0;
        let mut expected = true;
        for (at, character) in code.char_indices().skip_while(|(at, _)| *at < start + "crate::".len()) {
            match character {
                '{' => (depth, expected) = (depth + 1, depth == 0),
                '}' => (depth, expected) = (depth - 1, false),
                ',' => expected = depth == 1,
                _ if expected && !character.is_whitespace() => {
                    let end = code[at..].find(|c: char| !(c.is_alphanumeric() || c == '_')).unwrap_or(code.len() - at);
                    found.push((at, &code[at..at + end]));
                    expected = false;
                }
                _ => {}
            }
            if depth <= 0 && !expected {
                break;
            }
        }
    }
    found
}

fn line(code: &str, at: usize) -> usize {
    code[..at].matches('\n').count() + 1
}

/// The core knows the numerics, the bindings the core, and nothing else of the workspace.
fn in_bindings(workspace: &Workspace) -> Result<Vec<String>> {
    let metadata = workspace.metadata(&["--no-deps"])?;
    let mut broken = Vec::new();
    for package in metadata["packages"].as_array().context("cargo metadata without packages")? {
        let allowed: &[&str] = match text(package, "name")? {
            "inward-wasm" | "inward-tests" => &["inward-core"],
            "inward-core" => &["inward-numerics"],
            _ => &[],
        };
        for dependency in package["dependencies"].as_array().context("cargo metadata without dependencies")? {
            let name = text(dependency, "name")?;
            if !dependency["path"].is_null() && !allowed.contains(&name) {
                broken.push(format!("{} depends on {name}", text(package, "name")?));
            }
        }
    }
    Ok(broken)
}

/// Folders of the page that have no words of their own.
const WITHOUT_WORDS: [&str; 4] = ["draw/", "export/", "intake/", "views/"];

/// Whether a piece of text is for reading: three words one after the other, or two that begin or end like a sentence.
fn is_sentence(text: &str) -> bool {
    let text = text.trim_matches(|one| "\"'`{}$ ".contains(one));
    let is_word = |word: &str| word.len() > 1 && word.chars().all(|one| one.is_alphabetic() || "’'".contains(one));
    let mut run = 0;
    let longest = text.split(' ').map(|word| {
        let bare = word.trim_end_matches([',', '.', ':', ';', '?', '!']);
        run = if is_word(bare) { run + 1 } else { 0 };
        run
    });
    let longest = longest.max().unwrap_or_default();
    let capital = text.chars().next().is_some_and(char::is_uppercase) && !text.contains("::");
    longest >= 3 || (longest == 2 && (capital || text.ends_with(['.', '?', '!'])))
}

/// Sentences of the page stand in `text/`; what is thrown at programmers may stand where it is thrown.
fn sentences(path: &str, found: &[Token]) -> Vec<String> {
    let at = |place: Option<usize>| place.and_then(|place| found.get(place));
    let thrown = |place: usize| at(place.checked_sub(2)).is_some_and(|token| token.text.ends_with("Error"));
    let told = found.iter().enumerate().filter(|(place, token)| {
        matches!(token.kind, Kind::Quoted | Kind::Template) && is_sentence(token.text) && !thrown(*place)
    });
    told.map(|(_, token)| format!("{path}:{}: words stand in text/: {}", token.line, token.text)).collect()
}

/// Only `engine/` touches the module, no view reaches for the engine, and words stand in `text/`.
fn in_page<'a>(path: &str, script: &str, imports: impl Iterator<Item = (&'a str, usize)>) -> Result<Vec<String>> {
    let mut broken = Vec::new();
    if path.starts_with("views/") {
        let engine = imports.filter(|(imported, _)| imported.starts_with("engine/"));
        broken.extend(engine.map(|(_, line)| format!("{path}:{line}: a view imports the engine")));
    }
    if !path.starts_with("engine/") {
        let touches = |token: &&Token| ["WebAssembly", "wasmGlue", "wasm_bindgen"].iter().any(|name| token.is(name));
        let found = tokens(script)?;
        broken.extend(
            found.iter().find(touches).map(|token| format!("{path}:{}: only engine/ touches wasm", token.line)),
        );
        if WITHOUT_WORDS.iter().any(|folder| path.starts_with(folder)) {
            broken.extend(sentences(path, &found));
        }
    }
    Ok(broken)
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn names_after_crate_are_found() {
        let code =
            "use crate::fit::{Fit, crate_x};\nuse crate::{\n  math::{a, b},\n  head,\n};\nlet x = crate::map::f(1, y);";
        let names: Vec<_> = imported(code).into_iter().map(|(at, name)| (line(code, at), name)).collect();
        assert_eq!(names, [(1, "fit"), (3, "math"), (4, "head"), (6, "map")]);
    }

    #[test]
    fn planted_upward_imports_are_found() {
        for (path, source) in [
            ("math/solve.rs", "\nuse crate::fit::Fit;"),
            ("forward/mod.rs", "\nuse crate::{math, analyse::analyse};"),
            ("fit.rs", "\nlet x = crate::report::row();"),
            ("fit.rs", "\nuse crate::Finding;"),
            ("fit/mod.rs", "\nuse super::report::Row;"),
            ("fit.rs", "\nuse wasm_bindgen::JsValue;"),
        ] {
            let broken = in_core(path, source);
            assert!(
                broken.first().is_some_and(|what| what.starts_with(&format!("{path}:2: "))),
                "{source}: {broken:?}"
            );
        }
        assert_eq!(in_core("new/mod.rs", "").len(), 1);
    }

    #[test]
    fn downward_imports_pass() {
        assert_eq!(in_core("fit/mod.rs", "use crate::forward::f; // crate::report\nuse crate::fit::g;"), [""; 0]);
        assert_eq!(in_core("lib.rs", "pub use crate::analyse::analyse;"), [""; 0]);
    }

    #[test]
    fn planted_reaches_for_the_engine_are_found() {
        let found =
            |path, script, imports: &[(&'static str, usize)]| in_page(path, script, imports.iter().copied()).unwrap();
        assert_eq!(found("views/a.js", "", &[("engine/b.js", 3)]), ["views/a.js:3: a view imports the engine"]);
        assert_eq!(
            found("session/a.js", "\nnew WebAssembly.Module(x)", &[]),
            ["session/a.js:2: only engine/ touches wasm"]
        );
        assert_eq!(found("session/a.js", "// WebAssembly", &[("engine/b.js", 3)]), [""; 0]);
        assert_eq!(found("engine/a.js", "WebAssembly", &[]), [""; 0]);
    }

    #[test]
    fn planted_sentences_are_found() {
        let found = |path, script: &str| in_page(path, script, std::iter::empty()).unwrap();
        for told in [
            "make(\"p\", \"Nothing found.\");",
            "f(`${count} maps were left out`);",
            "title = 'the map in view';",
            "x = \"Left over\";",
        ] {
            assert_eq!(found("views/a.js", &format!("\n{told}")).len(), 1, "{told}");
            assert_eq!(found("text/a.js", told), [""; 0]);
        }
        for other in [
            "make(\"p\", \"\", { class: \"small quiet\" });",
            "throw new TypeError(\"no canvas to draw on\");",
            "table.querySelector(`tbody tr[data-index=\"${at}\"] button`);",
            "pen.font = \"11px sans-serif\"; // Nothing is told here.",
        ] {
            assert_eq!(found("views/a.js", other), [""; 0]);
        }
    }
}
