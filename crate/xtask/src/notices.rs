//! The licences of what is linked into the engine.

use crate::wasm::TARGET;
use crate::workspace::{Workspace, output, read, text};
use anyhow::{Context, Result, bail};
use std::collections::BTreeSet;
use std::path::{Path, PathBuf};

/// A linked crate.
pub struct Linked {
    /// Name and version.
    pub title: String,
    /// Its licence expression.
    pub licence: String,
    folder: PathBuf,
}

/// The crates linked into the engine for a target (the own ones left out), in the order of their names.
pub fn linked(workspace: &Workspace, package: &str, target: Option<&str>) -> Result<Vec<Linked>> {
    let mut tree = workspace.cargo();
    tree.args([
        "tree",
        "--locked",
        "--edges=normal,no-proc-macro",
        "--prefix=none",
        "--format={p}",
        "--package",
        package,
    ]);
    tree.args(target.map(|target| format!("--target={target}")));
    let tree = output(&mut tree)?;
    // A line is `name vVERSION`, then remarks.
    let titles: BTreeSet<String> = tree
        .lines()
        .filter_map(|line| line.split_once(" v").map(|(name, rest)| (name, rest.split(' ').next())))
        .map(|(name, version)| format!("{name} {}", version.unwrap_or_default()))
        .collect();
    let filter = target.map(|target| format!("--filter-platform={target}"));
    let metadata = workspace.metadata(&filter.iter().map(String::as_str).collect::<Vec<_>>())?;
    let mut linked = Vec::new();
    for package in metadata["packages"].as_array().context("cargo metadata without packages")? {
        let title = format!("{} {}", text(package, "name")?, text(package, "version")?);
        if package["source"].is_null() || !titles.contains(&title) {
            continue;
        }
        let licence = package["license"].as_str().with_context(|| format!("{title} states no licence"))?;
        let folder = Path::new(text(package, "manifest_path")?).parent().map(Path::to_owned);
        linked.push(Linked { title, licence: licence.to_owned(), folder: folder.unwrap_or_default() });
    }
    linked.sort_by(|one, other| one.title.cmp(&other.title));
    Ok(linked)
}

/// The notices of everything inside the engine; a text shared by several crates is given once.
pub fn notices(workspace: &Workspace) -> Result<String> {
    let own = read(&workspace.root.join("LICENSE-MIT"))?;
    let standard = own.split_once("\n\n").and_then(|(_, rest)| rest.split_once("\n\n"));
    let (_, terms) = standard.context("LICENSE-MIT: a title, a copyright line and the terms are expected")?;
    let rust = format!("Copyright (c) The Rust Project Contributors\n\n{terms}");
    let mut texts = vec![
        (own, vec!["Inward, MIT OR Apache-2.0".to_owned()]),
        (rust, vec!["The Rust standard library, MIT OR Apache-2.0".to_owned()]),
    ];
    for one in linked(workspace, "inward-wasm", Some(TARGET))? {
        let title = format!("{}, {}", one.title, one.licence);
        for text in licence_texts(&one)? {
            match texts.iter_mut().find(|(known, _)| *known == text) {
                Some((_, titles)) => titles.push(title.clone()),
                None => texts.push((text, vec![title.clone()])),
            }
        }
    }
    let told = texts.iter().map(|(text, titles)| format!("{}\n\n{}\n", titles.join("\n"), text.trim()));
    Ok(told.collect::<Vec<_>>().join(&format!("\n{}\n\n", "-".repeat(72))))
}

/// A crate's licence files. Where the choice is between MIT and Apache, MIT is the one taken.
fn licence_texts(one: &Linked) -> Result<Vec<String>> {
    let starts = ["LICENSE", "LICENCE", "COPYING", "NOTICE", "UNLICENSE"];
    let upper = |path: &PathBuf| path.file_name().unwrap_or_default().to_string_lossy().to_uppercase();
    let mut paths = Vec::new();
    for entry in std::fs::read_dir(&one.folder)? {
        paths.push(entry?.path());
    }
    paths.retain(|path| path.is_file() && starts.iter().any(|start| upper(path).starts_with(start)));
    if paths.iter().any(|path| upper(path).contains("MIT")) {
        paths.retain(|path| !upper(path).contains("APACHE"));
    }
    if paths.is_empty() {
        bail!("{} comes without a licence text", one.title);
    }
    paths.sort();
    paths.iter().map(|path| read(path)).collect()
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn every_linked_crate_is_named_with_a_text() {
        let workspace = Workspace::open(None).unwrap();
        let notices = notices(&workspace).unwrap();
        for name in ["ndarray 0", "libm 0", "serde 1", "wasm-bindgen 0", "The Rust standard library"] {
            assert!(notices.lines().any(|line| line.starts_with(name)), "{name}");
        }
        assert!(!notices.contains("syn "), "macros run at compile time and are not linked");
    }

    #[test]
    fn of_a_choice_mit_is_taken_and_no_text_is_refused() {
        let folder = std::env::temp_dir().join(format!("inward-notices-{}", std::process::id()));
        std::fs::create_dir_all(&folder).unwrap();
        let one = Linked { title: "one 1.0.0".into(), licence: "MIT OR Apache-2.0".into(), folder: folder.clone() };
        assert!(licence_texts(&one).unwrap_err().to_string().starts_with("one 1.0.0"));
        for (name, text) in [("LICENSE-APACHE", "a"), ("License-MIT.txt", "b"), ("NOTICE", "c"), ("README.md", "d")] {
            std::fs::write(folder.join(name), text).unwrap();
        }
        assert_eq!(licence_texts(&one).unwrap(), ["b", "c"]);
        std::fs::remove_dir_all(folder).unwrap();
    }
}
