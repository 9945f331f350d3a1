//! The same sources in another place give the same bytes.

use crate::paths::tracked;
use crate::workspace::{Workspace, run};
use anyhow::{Context, Result, bail};
use std::path::Path;

/// Builds a copy of the tracked files elsewhere and compares it with `target/dist`.
pub fn check(workspace: &Workspace) -> Result<()> {
    // Neither the depth nor the length of the path is that of this clone.
    let place = std::env::temp_dir().join(format!("inward-{}/another/clone", std::process::id()));
    let result = compare(workspace, &place);
    // Whatever came out, nothing stays behind.
    if let Some(top) = place.ancestors().nth(2) {
        let _ = std::fs::remove_dir_all(top);
    }
    result
}

fn compare(workspace: &Workspace, place: &Path) -> Result<()> {
    for path in tracked(workspace)? {
        let (from, to) = (workspace.root.join(&path), place.join(&path));
        if from.is_file() {
            std::fs::create_dir_all(to.parent().unwrap_or(place))?;
            std::fs::copy(&from, &to).with_context(|| from.display().to_string())?;
        }
    }
    // This very tool builds the copy: only the engine is compiled again.
    let mut build = workspace.command(std::env::current_exe()?);
    build.arg("--root").arg(place).arg("build").env("CARGO_TARGET_DIR", place.join("target"));
    run(&mut build)?;
    for name in ["inward.html", "inward.html.sha256", "engine/inward.mjs", "sample_host.html"] {
        let here = std::fs::read(workspace.dist.join(name))?;
        let there = std::fs::read(place.join("target/dist").join(name))?;
        if here != there {
            let at =
                here.iter().zip(&there).position(|(one, other)| one != other).unwrap_or(here.len().min(there.len()));
            bail!("{name} differs between two clones from byte {at}");
        }
    }
    println!("two clones at different paths: equal bytes");
    Ok(())
}
