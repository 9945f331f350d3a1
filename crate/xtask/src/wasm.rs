//! The engine compiled to WebAssembly, and its JavaScript glue.

use crate::stamp::stamp;
use crate::workspace::{Workspace, output, run, text};
use anyhow::{Context, Result, bail};
use std::collections::BTreeSet;
use std::path::{Path, PathBuf};
use wasm_bindgen_cli_support::Bindgen;

/// The compiler's name for the browser.
pub const TARGET: &str = "wasm32-unknown-unknown";

/// What the page and the module carry.
pub struct Compiled {
    /// The module's bytes.
    pub wasm: Vec<u8>,
    /// A classic script that defines `wasm_bindgen`.
    pub glue: String,
}

/// Compiles the engine; the bytes depend on the sources and the compiler, not on the machine.
pub fn compile(workspace: &Workspace) -> Result<Compiled> {
    add_target(workspace)?;
    // Its own target directory: the flags differ from those of native builds.
    let target = workspace.target.join("wasm");
    let mut cargo = workspace.cargo();
    cargo
        .args(["build", "--release", "--locked", "--package", "inward-wasm", "--target", TARGET])
        .arg("--target-dir")
        .arg(&target)
        .env("CARGO_ENCODED_RUSTFLAGS", flags(workspace)?.join("\u{1f}"))
        .env("INWARD_BUILD", stamp(workspace)?);
    for (name, _) in std::env::vars_os() {
        if name.to_string_lossy().starts_with("CARGO_PROFILE_") {
            cargo.env_remove(&name);
        }
    }
    run(&mut cargo)?;
    bind(&target.join(TARGET).join("release/inward_wasm.wasm"))
}

/// Whether the compiler holds the standard library for the browser.
pub fn has_target(workspace: &Workspace) -> Result<bool> {
    let mut rustc = workspace.command("rustc");
    rustc.args(["--print", "target-libdir", "--target", TARGET]);
    let Ok(entries) = std::fs::read_dir(output(&mut rustc)?.trim()) else { return Ok(false) };
    Ok(entries.flatten().any(|entry| entry.file_name().to_string_lossy().starts_with("libstd-")))
}

fn add_target(workspace: &Workspace) -> Result<()> {
    if has_target(workspace)? {
        return Ok(());
    }
    println!("adding the compiler's {TARGET} target");
    let added = run(workspace.command("rustup").args(["target", "add", TARGET]));
    if added.is_err() || !has_target(workspace)? {
        bail!(
            "this Rust compiler has no {TARGET} target and rustup could not add it.\n\
             Install Rust by rustup (https://rustup.rs), then run: rustup target add {TARGET}"
        );
    }
    Ok(())
}

fn flags(workspace: &Workspace) -> Result<Vec<String>> {
    let mut flags = vec!["-Ctarget-feature=+simd128".to_owned()];
    // Without it the compiler copies functions into their callers until the page is a third larger and no quicker; what
    // is marked `inline`, as the wide registers are, still is.
    flags.push("-Cllvm-args=-inline-threshold=5 -inlinehint-threshold=60".to_owned());
    for (from, to) in remapped(workspace)? {
        flags.push(format!("--remap-path-prefix={}={to}", from.display()));
    }
    Ok(flags)
}

/// The machine's folders that a compiler writes into a module, and what stands there instead.
fn remapped(workspace: &Workspace) -> Result<Vec<(PathBuf, String)>> {
    let metadata = workspace.metadata(&["--filter-platform", TARGET])?;
    let mut folders = BTreeSet::new();
    for package in metadata["packages"].as_array().context("cargo metadata without packages")? {
        let folder = Path::new(text(package, "manifest_path")?).parent();
        folders.extend(folder.and_then(Path::parent).map(Path::to_owned));
    }
    // The last prefix that fits counts, so the root's own folders come after those of the registry.
    let mut pairs: Vec<_> = folders.into_iter().map(|folder| (folder, "/crates".to_owned())).collect();
    pairs.push((workspace.root.clone(), "/inward".to_owned()));
    // With the component rust-src the compiler knows where its library's sources lie, without it only this name.
    let sysroot = output(workspace.command("rustc").args(["--print", "sysroot"]))?;
    let version = output(workspace.command("rustc").arg("-vV"))?;
    let commit = version.lines().find_map(|line| line.strip_prefix("commit-hash: ")).unwrap_or("unknown");
    let library = Path::new(sysroot.trim()).join("lib/rustlib/src/rust");
    pairs.push((library, format!("/rustc/{commit}")));
    Ok(pairs)
}

fn bind(compiled: &Path) -> Result<Compiled> {
    let mut output = Bindgen::new()
        .input_path(compiled)
        .no_modules(true)?
        .typescript(false)
        .remove_name_section(true)
        .remove_producers_section(true)
        .generate_output()?;
    let glue = without_location(output.js())?;
    Ok(Compiled { wasm: output.wasm_mut().emit_wasm(), glue })
}

/// The glue looks up its script's address to find a module beside it. Ours is handed its module, and in a
/// `srcdoc` frame the look-up throws.
fn without_location(glue: &str) -> Result<String> {
    let start = glue.find("let script_src;").context("the glue's shape is new: no script_src")?;
    let end = glue[start..].find("}\n").context("the glue's shape is new: no end of script_src")?;
    let rest = &glue[start + end + 2..];
    if rest.contains("script_src") {
        bail!("the glue's shape is new: script_src is used");
    }
    Ok(format!("{}{}", &glue[..start], rest))
}
