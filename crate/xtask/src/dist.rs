//! What is delivered: `inward.html` with its digest, `engine/inward.mjs`, and a page that embeds the first.

use crate::bundle::Modules;
use crate::engine::{loader_script, module, page_script, worker_script};
use crate::examples::examples;
use crate::markup::markup;
use crate::notices::notices;
use crate::packed::packed;
use crate::page::{LIMIT, Parts, page};
use crate::streams::taken_apart;
use crate::wasm::{Compiled, compile};
use crate::workspace::{Workspace, files, read};
use anyhow::{Context, Result, bail};
use sha2::{Digest, Sha256};
use std::path::Path;

/// Everything that was made, kept for the scans.
pub struct Dist {
    /// The module and its glue.
    pub compiled: Compiled,
    /// The module as it is carried: packed.
    pub carried: String,
    /// The page.
    pub page: String,
    /// The script that unpacks the page's.
    pub loader: String,
    /// The page's script.
    pub script: String,
    /// The worker's script.
    pub worker: String,
    /// `inward.mjs`.
    pub module: String,
    /// The answer's elements, which the page's script makes.
    pub answer: String,
    /// A wiki-like page that embeds the page.
    pub host: String,
}

/// Builds and writes it all, and tells the sizes.
pub fn build(workspace: &Workspace) -> Result<Dist> {
    let mut compiled = compile(workspace)?;
    let streams;
    (streams, compiled.wasm) = taken_apart(&compiled.wasm)?;
    let www = workspace.root.join("www");
    let modules = Modules::read(&www).context("in www")?;
    let carried = packed(&streams)?;
    let loader = loader_script(&modules.join("load.js")?)?;
    let styles = styles(&www.join("style"))?;
    let answer = read(&www.join("answer.html"))?;
    let elements = markup(&answer)?;
    let examples = examples(&workspace.root.join("example_maps"))?;
    let script = page_script(&modules.join("main.js")?, &examples, &styles, &elements)?;
    let worker = worker_script(&modules.join("engine/worker.js")?, &compiled.glue)?;
    let parts = Parts {
        style: &styles.first,
        loader: &loader,
        script: &script,
        packed: &packed(script.as_bytes())?,
        worker: &packed(worker.as_bytes())?,
        wasm: &carried,
        notices: &packed(notices(workspace)?.as_bytes())?,
    };
    let page = page(&read(&www.join("index.html"))?, &parts)?;
    let module = module(&modules.join("engine/module.js")?, &compiled.glue, &carried);
    write(&workspace.dist.join("inward.html"), &page)?;
    write(&workspace.dist.join("engine/inward.mjs"), &module)?;
    let host = read(&www.join("sample_host.html"))?;
    write(&workspace.dist.join("sample_host.html"), &host)?;
    // As `sha256sum --check` takes it.
    let digest: String = Sha256::digest(&page).iter().map(|byte| format!("{byte:02x}")).collect();
    write(&workspace.dist.join("inward.html.sha256"), &format!("{digest}  inward.html\n"))?;
    println!("{:>9} bytes  engine, {} packed", compiled.wasm.len(), carried.len());
    println!("{:>9} bytes  target/dist/engine/inward.mjs", module.len());
    println!("{:>9} bytes  target/dist/inward.html", page.len());
    println!("SHA-256 of inward.html: {digest}");
    if page.len() > LIMIT {
        bail!("inward.html is larger than {LIMIT} bytes");
    }
    Ok(Dist { compiled, carried, page, loader, script, worker, module, answer, host })
}

/// Style sheets from this name on are of the answer: they are packed with the script, which is there before it.
const ANSWER_STYLE: &str = "6";

/// Style sheets by where they go.
pub struct Styles {
    /// What the page begins with.
    pub first: String,
    /// Of the answer.
    pub answer: String,
    /// Of a report on paper and as a page of its own.
    pub report: String,
}

/// All style sheets in the order of their names.
fn styles(folder: &Path) -> Result<Styles> {
    let mut styles = Styles { first: String::new(), answer: String::new(), report: String::new() };
    for path in files(folder)? {
        let name = path.file_name().unwrap_or_default().to_string_lossy();
        if path.extension().is_some_and(|extension| extension == "css") {
            let joined = match &*name {
                "report.css" => &mut styles.report,
                name if name < ANSWER_STYLE => &mut styles.first,
                _ => &mut styles.answer,
            };
            *joined += &tightened(&read(&path)?);
        }
    }
    if [&styles.answer, &styles.report].iter().any(|style| style.contains("@import") || style.contains("url(")) {
        bail!("a style sheet loads a resource");
    }
    // A report is written as XML writes text, and its digest is that of the text as it is here.
    if styles.report.contains(['<', '>', '&']) {
        bail!("the style sheet of a report has a letter that does not stand for itself in every markup");
    }
    Ok(styles)
}

/// A style sheet without comments and without blanks at the ends of lines and after a property; no string in it holds any.
fn tightened(style: &str) -> String {
    let mut parts = style.split("/*");
    let mut bare = parts.next().unwrap_or_default().to_owned();
    bare.extend(parts.filter_map(|part| part.split_once("*/")).map(|(_, after)| after));
    let mut tight = String::new();
    for line in bare.lines().map(str::trim).filter(|line| !line.is_empty()) {
        if line.starts_with('}') && tight.ends_with(';') {
            tight.pop();
        }
        match line.strip_suffix(" {") {
            Some(selector) => tight.extend([selector, "{"]),
            None if line.ends_with(';') => tight += &line.replacen(": ", ":", 1),
            None => tight += line,
        }
        if !line.ends_with(['{', '}', ';', ',']) {
            tight.push('\n');
        }
    }
    tight + "\n"
}

fn write(path: &Path, text: &str) -> Result<()> {
    std::fs::create_dir_all(path.parent().unwrap_or(path))?;
    std::fs::write(path, text).with_context(|| path.display().to_string())
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn style_sheets_lose_comments_and_blanks_only() {
        let style =
            "/* a */\np,\na :is(b) {\n  margin: 0; /* b\n c */\n  left: calc(1px\n + 2px);\n}\n\n@media (a: b) {\n}\n";
        assert_eq!(tightened(style), "p,a :is(b){margin:0;left: calc(1px\n+ 2px)}@media (a: b){}\n");
    }
}
