//! The licences of all that is linked in, and of the tools.

use crate::notices::linked;
use crate::wasm::TARGET;
use crate::workspace::{Workspace, read, text};
use anyhow::{Context, Result, bail};
use serde_json::Value;
use spdx::{Expression, ParseMode};
use std::collections::BTreeSet;

/// Licences under which a crate may be linked in.
const LINKED: [&str; 12] = [
    "0BSD",
    "Apache-2.0",
    "Apache-2.0 WITH LLVM-exception",
    "BSD-2-Clause",
    "BSD-3-Clause",
    "BSL-1.0",
    "CC0-1.0",
    "ISC",
    "MIT",
    "Unicode-3.0",
    "Unlicense",
    "Zlib",
];

/// Licences that will do for a tool of the build or the tests, besides those.
const TOOLS: [&str; 1] = ["MPL-2.0"];

/// Looks at every crate of the lock file and every package of the tests' lock file.
pub fn check(workspace: &Workspace) -> Result<()> {
    let mut refused = Vec::new();
    let mut inside = BTreeSet::new();
    for (package, target) in [("inward-wasm", Some(TARGET)), ("inward-core", None)] {
        for one in linked(workspace, package, target)? {
            if !allowed(&one.licence, &[])? {
                refused.push(format!("{}: {}", one.title, one.licence));
            }
            inside.insert(one.title);
        }
    }
    let mut tools = tools(workspace)?;
    tools.retain(|(title, _)| !inside.contains(title));
    let mut special = Vec::new();
    for (title, licence) in &tools {
        if !allowed(licence, &TOOLS)? {
            refused.push(format!("{title}: {licence}"));
        } else if !allowed(licence, &[])? {
            special.push(format!("{title} ({licence})"));
        }
    }
    if !refused.is_empty() {
        bail!("licences that will not do:\n{}", refused.join("\n"));
    }
    println!(
        "{} crates linked, all permissive; {} tools, of these not permissive: {}",
        inside.len(),
        tools.len(),
        or_none(&special)
    );
    Ok(())
}

fn or_none(names: &[String]) -> String {
    if names.is_empty() { "none".to_owned() } else { names.join(", ") }
}

fn allowed(licence: &str, more: &[&str]) -> Result<bool> {
    // Older crates write a slash for OR.
    let expression = Expression::parse_mode(licence, ParseMode::LAX).with_context(|| licence.to_owned())?;
    Ok(expression.evaluate(|one| LINKED.iter().chain(more).any(|name| one.to_string() == **name)))
}

/// Every package that takes part, linked or not, with its licence.
fn tools(workspace: &Workspace) -> Result<Vec<(String, String)>> {
    let metadata = workspace.metadata(&[])?;
    let mut found = Vec::new();
    for package in metadata["packages"].as_array().context("cargo metadata without packages")? {
        let licence = package["license"].as_str().unwrap_or("NOASSERTION").to_owned();
        found.push((format!("{} {}", text(package, "name")?, text(package, "version")?), licence));
    }
    found.extend(scripts(&read(&workspace.root.join("tests/package-lock.json"))?)?);
    Ok(found)
}

/// The packages of an npm lock file, which must not say where they were fetched from.
fn scripts(lock: &str) -> Result<Vec<(String, String)>> {
    let lock: Value = serde_json::from_str(lock)?;
    let mut found = Vec::new();
    for (path, package) in lock["packages"].as_object().context("package-lock.json without packages")? {
        let Some(name) = path.strip_prefix("node_modules/") else { continue };
        if !package["resolved"].is_null() {
            bail!(
                "package-lock.json names the registry's host for {name}; npm config: omit-lockfile-registry-resolved"
            );
        }
        let licence = package["license"].as_str().unwrap_or("NOASSERTION");
        found.push((format!("{name} {}", package["version"].as_str().unwrap_or_default()), licence.to_owned()));
    }
    Ok(found)
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn a_choice_needs_one_permissive_licence_and_a_sum_all() {
        for licence in ["MIT", "MIT/Apache-2.0", "GPL-3.0-only OR MIT", "(MIT OR Apache-2.0) AND Unicode-3.0"] {
            assert!(allowed(licence, &[]).unwrap(), "{licence}");
        }
        for licence in ["GPL-3.0-only", "MIT AND GPL-3.0-only", "MPL-2.0", "AGPL-3.0-or-later", "LGPL-2.1-or-later"] {
            assert!(!allowed(licence, &[]).unwrap(), "{licence}");
        }
        assert!(allowed("MPL-2.0", &TOOLS).unwrap());
        assert!(["whatever", "NOASSERTION"].iter().all(|licence| !allowed(licence, &TOOLS).unwrap_or(false)));
    }

    #[test]
    fn a_lock_file_names_no_host() {
        let lock = |entry: &str| format!(r#"{{"packages": {{"": {{}}, "node_modules/a": {entry}}}}}"#);
        let found = scripts(&lock(r#"{"version": "1.0.0", "license": "MIT"}"#)).unwrap();
        assert_eq!(found, [("a 1.0.0".to_owned(), "MIT".to_owned())]);
        assert!(scripts(&lock(r#"{"resolved": "somewhere", "license": "MIT"}"#)).is_err());
    }
}
