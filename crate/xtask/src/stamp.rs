//! The build's name: a short hash of what the engine is made from.

use crate::workspace::{Workspace, files};
use anyhow::Result;
use sha2::{Digest, Sha256};

/// Twelve hexadecimal digits of the SHA-256 over `Cargo.lock` and every file of the engine, paths included.
pub fn stamp(workspace: &Workspace) -> Result<String> {
    let mut paths = vec![workspace.root.join("Cargo.lock")];
    for package in ["crate/numerics", "crate/core", "crate/wasm"] {
        paths.extend(files(&workspace.root.join(package))?);
    }
    let mut hash = Sha256::new();
    for path in paths {
        let content = std::fs::read(&path)?;
        // Lengths keep one file's end apart from the next one's start.
        hash.update(format!("{} {}\n", workspace.relative(&path), content.len()));
        hash.update(&content);
    }
    Ok(hash.finalize().iter().take(6).map(|byte| format!("{byte:02x}")).collect())
}
