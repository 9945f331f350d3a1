//! Where things are, and how a child process is started.

use anyhow::{Context, Result, bail};
use serde_json::Value;
use std::ffi::OsStr;
use std::path::{Path, PathBuf};
use std::process::Command;

/// The clone that is worked on.
pub struct Workspace {
    /// The folder of the workspace's `Cargo.toml`.
    pub root: PathBuf,
    /// Cargo's target directory, wherever the environment has put it.
    pub target: PathBuf,
    /// What is delivered: always `target/dist` in the root, so that its place can be told.
    pub dist: PathBuf,
}

impl Workspace {
    /// Opens the clone in `root`, or the one this tool was started from.
    pub fn open(root: Option<PathBuf>) -> Result<Self> {
        let root = match (root, std::env::var_os("CARGO_MANIFEST_DIR")) {
            (Some(root), _) => root,
            (None, Some(package)) => Path::new(&package).join("../.."),
            (None, None) => bail!("start this tool as `cargo xtask`, or give --root"),
        };
        let root = root.canonicalize().with_context(|| root.display().to_string())?;
        let mut workspace = Self { target: root.join("target"), dist: root.join("target/dist"), root };
        let metadata = workspace.metadata(&["--no-deps"])?;
        workspace.target = PathBuf::from(text(&metadata, "target_directory")?);
        Ok(workspace)
    }

    /// A child process in the root, without what `cargo run` told this one about its own package.
    pub fn command(&self, program: impl AsRef<OsStr>) -> Command {
        let mut command = Command::new(program);
        command.current_dir(&self.root);
        for (name, _) in std::env::vars_os() {
            let known = name.to_string_lossy();
            if known == "CARGO" || known.starts_with("CARGO_PKG_") || known.starts_with("CARGO_MANIFEST_") {
                command.env_remove(&name);
            }
        }
        command
    }

    /// Cargo in the root.
    pub fn cargo(&self) -> Command {
        self.command("cargo")
    }

    /// `cargo metadata`, never touching the lock file.
    pub fn metadata(&self, arguments: &[&str]) -> Result<Value> {
        let mut cargo = self.cargo();
        cargo.args(["metadata", "--format-version=1", "--locked"]).args(arguments);
        Ok(serde_json::from_str(&output(&mut cargo)?)?)
    }

    /// A path as it is told to the reader: relative to the root, with forward slashes.
    pub fn relative(&self, path: &Path) -> String {
        slashed(path.strip_prefix(&self.root).unwrap_or(path))
    }
}

/// A string field of `cargo metadata`.
pub fn text<'a>(value: &'a Value, key: &str) -> Result<&'a str> {
    value[key].as_str().with_context(|| format!("cargo metadata without {key}"))
}

/// A path with forward slashes on every system.
pub fn slashed(path: &Path) -> String {
    let parts: Vec<_> = path.iter().map(|part| part.to_string_lossy()).collect();
    parts.join("/")
}

/// Runs a child to its end; an error if it fails.
pub fn run(command: &mut Command) -> Result<()> {
    let status = command.status().with_context(|| told(command))?;
    if !status.success() {
        bail!("{} failed ({status})", told(command));
    }
    Ok(())
}

/// Runs a child and returns what it printed; an error with its complaints if it fails.
pub fn output(command: &mut Command) -> Result<String> {
    let output = command.output().with_context(|| told(command))?;
    if !output.status.success() {
        bail!("{} failed ({})\n{}", told(command), output.status, String::from_utf8_lossy(&output.stderr));
    }
    Ok(String::from_utf8(output.stdout)?)
}

fn told(command: &Command) -> String {
    let words = std::iter::once(command.get_program()).chain(command.get_args());
    words.map(|word| word.to_string_lossy()).collect::<Vec<_>>().join(" ")
}

/// A text file with the line ends every system agrees on.
pub fn read(path: &Path) -> Result<String> {
    let text = std::fs::read_to_string(path).with_context(|| path.display().to_string())?;
    Ok(text.replace("\r\n", "\n"))
}

/// All files under a folder, in the order of their paths.
pub fn files(folder: &Path) -> Result<Vec<PathBuf>> {
    let mut found = Vec::new();
    for entry in std::fs::read_dir(folder).with_context(|| folder.display().to_string())? {
        let path = entry?.path();
        if path.is_dir() {
            found.extend(files(&path)?);
        } else {
            found.push(path);
        }
    }
    found.sort();
    Ok(found)
}
