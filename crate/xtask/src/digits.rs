//! Numeric crates without `std`: with it they choose instructions at run time, and digits part between machines.

use crate::wasm::TARGET;
use crate::workspace::{Workspace, output};
use anyhow::{Result, bail};

/// Looks at the features of the engine's crates in the browser, natively, and as the tests build them.
pub fn check(workspace: &Workspace) -> Result<()> {
    let builds: [&[&str]; 3] = [
        &["--package=inward-wasm", "--target", TARGET, "--edges=normal"],
        &["--package=inward-core", "--edges=normal"],
        &["--package=inward-core", "--package=inward-tests", "--edges=normal,dev"],
    ];
    for build in builds {
        let mut tree = workspace.cargo();
        tree.args(["tree", "--locked", "--prefix=none", "--no-dedupe", "--format={p} [{f}]"]).args(build);
        let tree = output(&mut tree)?;
        if let Some(line) = with_std(&tree) {
            bail!("a numeric crate has `std` ({}): {line}", build.join(" "));
        }
    }
    println!("the numeric crates come without std");
    Ok(())
}

/// The first line of a tree with a numeric crate that has `std`.
fn with_std(tree: &str) -> Option<&str> {
    let numeric = |name: &str| matches!(name, "ndarray" | "matrixmultiply" | "libm") || name.starts_with("num-");
    tree.lines().find(|line| {
        let features = line.split_once('[').map_or("", |(_, features)| features.trim_end_matches(']'));
        numeric(line.split(' ').next().unwrap_or_default()) && features.split(',').any(|feature| feature == "std")
    })
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn std_is_found_in_numeric_crates_only() {
        let clean =
            "serde v1.0.0 [default,std]\nndarray v0.17.2 []\nnum-traits v0.2.19 [i128,libm]\nlibm v0.2.16 [arch]";
        assert_eq!(with_std(clean), None);
        for planted in ["num-traits v0.2.19 [default,std]", "ndarray v0.17.2 [std]", "matrixmultiply v0.3.11 [std]"] {
            assert_eq!(with_std(&format!("{clean}\n{planted}")), Some(planted));
        }
    }
}
