//! No machine path in what is delivered or committed.

use crate::dist::Dist;
use crate::workspace::{Workspace, output};
use anyhow::{Result, bail};
use std::path::{Path, PathBuf};

/// Folders of people's homes on common systems, written in pieces so that this file passes its own check.
const HOMES: [&str; 4] =
    [concat!("/ho", "me/"), concat!("/ro", "ot/"), concat!("/Us", "ers/"), concat!("C:\\Us", "ers\\")];

/// Looks through the module, the page, `inward.mjs` and every tracked file.
pub fn check(workspace: &Workspace, dist: &Dist) -> Result<()> {
    let needles = needles(workspace)?;
    let mut found = Vec::new();
    let mut look =
        |name: &str, bytes: &[u8]| found.extend(first(&needles, bytes).map(|place| format!("{name}{place}")));
    look("the engine's module", &dist.compiled.wasm);
    // The compressed module is looked at above; as text it could hold any short path by chance.
    look("inward.html", dist.page.replace(&dist.carried, "").as_bytes());
    look("engine/inward.mjs", dist.module.replace(&dist.carried, "").as_bytes());
    let tracked = tracked(workspace)?;
    for path in &tracked {
        // A tracked file may be deleted but not yet committed.
        if let Ok(bytes) = std::fs::read(workspace.root.join(path)) {
            look(&path.to_string_lossy(), &bytes);
        }
    }
    if !found.is_empty() {
        bail!("machine paths:\n{}", found.join("\n"));
    }
    println!("no machine path in the delivered files and {} tracked ones", tracked.len());
    Ok(())
}

/// Every file that is committed or would be, relative to the root.
pub fn tracked(workspace: &Workspace) -> Result<Vec<PathBuf>> {
    let mut git = workspace.command("git");
    let listed = output(git.args(["ls-files", "-z", "--cached", "--others", "--exclude-standard"]))?;
    Ok(listed.split('\0').filter(|path| !path.is_empty()).map(PathBuf::from).collect())
}

fn needles(workspace: &Workspace) -> Result<Vec<String>> {
    let sysroot = output(workspace.command("rustc").args(["--print", "sysroot"]))?;
    let mut folders = vec![workspace.root.clone(), workspace.target.clone(), PathBuf::from(sysroot.trim())];
    folders.extend(["HOME", "CARGO_HOME", "RUSTUP_HOME"].iter().filter_map(std::env::var_os).map(PathBuf::from));
    // A home such as `/` would be found everywhere.
    folders.retain(|folder| folder.as_os_str().len() >= 5);
    let homes = HOMES.iter().map(ToString::to_string);
    Ok(folders.iter().map(|folder| in_text(folder)).chain(homes).collect())
}

/// A folder as it stands in a text: with what follows, since `/work` also starts `/workers`.
fn in_text(folder: &Path) -> String {
    format!("{}{}", folder.display(), std::path::MAIN_SEPARATOR)
}

/// The first needle in these bytes, with its line.
fn first(needles: &[String], bytes: &[u8]) -> Option<String> {
    needles.iter().find_map(|needle| {
        let at = bytes.windows(needle.len()).position(|window| window == needle.as_bytes())?;
        let line = bytes[..at].iter().filter(|&&byte| byte == b'\n').count() + 1;
        Some(format!(":{line}: {needle}"))
    })
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn a_planted_path_is_found_with_its_line() {
        let workspace = Workspace::open(None).unwrap();
        let needles = needles(&workspace).unwrap();
        let planted = workspace.root.join("crate");
        let text = format!("\0asm\n at {}", planted.display());
        assert!(first(&needles, text.as_bytes()).unwrap().starts_with(":2: "));
        for home in HOMES {
            assert!(first(&needles, format!("x{home}someone").as_bytes()).is_some());
        }
        assert_eq!(first(&needles, b"crate/core/src/lib.rs"), None);
    }
}
