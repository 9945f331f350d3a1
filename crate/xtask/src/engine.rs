//! The engine as a module for scripts and other pages, and the glue both it and the worker carry.

use crate::bundle::Joined;
use crate::dist::Styles;
use crate::lexer::terse;
use crate::page::digest;
use anyhow::Context;

/// The glue as a function: each call gives a fresh instance, which is how a trap is recovered from.
fn wasm_glue(glue: &str) -> String {
    format!("function wasmGlue() {{\n{}\nreturn wasm_bindgen;\n}}\n", glue.trim())
}

/// The script that unpacks and runs the page's: classic, since a module script cannot run from a file.
pub fn loader_script(joined: &Joined) -> anyhow::Result<String> {
    classic("", joined).context("the script that loads the page's")
}

/// The page's script, with the invented maps, the answer's style and elements and the style of reports inside.
pub fn page_script(joined: &Joined, examples: &str, styles: &Styles, answer: &str) -> anyhow::Result<String> {
    let [style, report] = [&styles.answer, &styles.report].map(serde_json::to_string);
    // A report that is saved as a page runs nothing, loads nothing and has this very style.
    let policy = format!("default-src 'none'; style-src {}; img-src data:", digest(&styles.report));
    let data = format!(
        "const EXAMPLES = {examples};\nconst ANSWER_STYLE = {};\nconst ANSWER_MARKUP = {answer};\n\
         const REPORT_STYLE = {};\nconst REPORT_POLICY = \"{policy}\";\n",
        style?, report?
    );
    classic(&data, joined).context("page script")
}

/// The worker's script.
pub fn worker_script(joined: &Joined, glue: &str) -> anyhow::Result<String> {
    classic(&wasm_glue(glue), joined).context("worker script")
}

fn classic(before: &str, joined: &Joined) -> anyhow::Result<String> {
    terse(&format!("(() => {{\n\"use strict\";\n{before}{}}})();", joined.code))
}

/// `inward.mjs`: the entry's own exports, with the engine inside.
pub fn module(joined: &Joined, glue: &str, wasm: &str) -> String {
    let exports = joined.exports.join(", ");
    let glue = wasm_glue(glue);
    format!("const WASM_PACKED = \"{wasm}\";\n{glue}{}export {{ {exports} }};\n", joined.code)
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn the_module_exports_what_its_entry_does() {
        let joined = Joined { code: "function openEngine() {}\n".into(), exports: vec!["openEngine".into()] };
        let module = module(&joined, "let wasm_bindgen = 1;\n", "AA==");
        assert!(
            module.starts_with("const WASM_PACKED = \"AA==\";\nfunction wasmGlue() {\nlet wasm_bindgen = 1;\nreturn")
        );
        assert!(module.ends_with("function openEngine() {}\nexport { openEngine };\n"));
    }
}
