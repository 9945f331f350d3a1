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
    let numeric = |name: &str| {
        matches!(name, "ndarray" | "matrixmultiply" | "libm" | "wide" | "safe_arch") || name.starts_with("num-")
    };
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
    #[test]
    fn clippy_refuses_the_compilers_own_functions_in_the_core_and_the_bindings() {
        let workspace = Workspace::open(None).unwrap();
        let folder = std::env::temp_dir().join(format!("inward-clippy-{}", std::process::id()));
        std::fs::create_dir_all(&folder).unwrap();
        let planted = "pub fn f(x: f64, y: f32) -> (f64, f32) { (x.sin().mul_add(x, x.powi(2)), f32::exp(y)) }";
        std::fs::write(folder.join("planted.rs"), planted).unwrap();
        for package in ["crate/numerics", "crate/core", "crate/wasm"] {
            let mut clippy = workspace.command("clippy-driver");
            clippy.current_dir(&folder).env("CARGO_MANIFEST_DIR", workspace.root.join(package));
            clippy.args(["planted.rs", "--crate-type=lib", "--edition=2024", "--emit=metadata"]);
            let refused = clippy.arg("-Dclippy::disallowed_methods").output().unwrap();
            let told = String::from_utf8_lossy(&refused.stderr);
            for method in ["f64::sin", "f64::mul_add", "f64::powi", "f32::exp"] {
                assert!(told.contains(&format!("disallowed method `{method}`")), "{told}");
            }
        }
        std::fs::remove_dir_all(folder).unwrap();
    }
}
