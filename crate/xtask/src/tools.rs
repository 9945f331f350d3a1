//! The programs that the checks need: found, asked for, or installed.

use crate::wasm::{TARGET, has_target};
use crate::workspace::{Workspace, output, run};
use anyhow::{Context, Result, bail};
use std::path::{Path, PathBuf};
use std::process::{Child, Command, Stdio};

/// What was found on this machine.
#[derive(Default)]
pub struct Tools {
    /// Node, 20 or later.
    pub node: Option<PathBuf>,
    npm: Option<PathBuf>,
    chromium: Option<PathBuf>,
    chromedriver: Option<PathBuf>,
    firefox: Option<PathBuf>,
    geckodriver: Option<PathBuf>,
    /// geckodriver being compiled while other checks run.
    compiling: Option<Child>,
}

/// The oldest Node with all that the module needs.
const NODE: u32 = 20;

/// A kind of system: its package manager, how to install with it, and its packages for what the checks need.
struct System {
    manager: &'static str,
    install: &'static str,
    packages: [(&'static str, &'static str); 5],
}

const SYSTEMS: [System; 3] = [
    System {
        manager: "apt-get",
        install: "apt-get install --no-install-recommends",
        packages: [
            ("chromium", "chromium"),
            ("chromedriver", "chromium-driver"),
            ("firefox", "firefox-esr"),
            ("node", "nodejs"),
            ("npm", "npm"),
        ],
    },
    System {
        manager: "dnf",
        install: "dnf install",
        packages: [
            ("chromium", "chromium"),
            ("chromedriver", "chromedriver"),
            ("firefox", "firefox"),
            ("node", "nodejs"),
            ("npm", "npm"),
        ],
    },
    System {
        manager: "brew",
        install: "brew install",
        packages: [
            ("chromium", "chromium"),
            ("chromedriver", "chromedriver"),
            ("firefox", "firefox"),
            ("node", "node"),
            ("npm", "node"),
        ],
    },
];

impl Tools {
    /// What is there: named by `INWARD_…` in the environment, on the path, or installed by this tool earlier.
    pub fn find(workspace: &Workspace) -> Self {
        let new_enough = |node: &PathBuf| major(node).is_some_and(|major| major >= NODE);
        Self {
            node: find("INWARD_NODE", &["node", "nodejs"]).filter(new_enough),
            npm: find("INWARD_NPM", &["npm"]),
            chromium: find("INWARD_CHROMIUM", &["chromium", "chromium-browser", "google-chrome"]),
            chromedriver: find("INWARD_CHROMEDRIVER", &["chromedriver"]),
            firefox: find("INWARD_FIREFOX", &["firefox-esr", "firefox"]),
            geckodriver: find("INWARD_GECKODRIVER", &["geckodriver"]).or_else(|| existing(compiled(workspace))),
            compiling: None,
        }
    }

    /// All that is needed, or an error with what to install; `install` installs it where it may.
    pub fn ready(workspace: &Workspace, install: bool) -> Result<Self> {
        let mut tools = Self::find(workspace);
        if install {
            install_rust(workspace)?;
            install_packages(workspace, &tools.lacking())?;
            tools = Self::find(workspace);
            if let Some(npm) = tools.npm.as_ref().filter(|_| !scripts_ready(workspace)) {
                let mut npm = workspace.command(npm);
                npm.current_dir(workspace.root.join("tests"));
                run(npm.args(["ci", "--ignore-scripts", "--no-audit", "--no-fund"]))?;
            }
            if tools.geckodriver.is_none() {
                tools.compiling = Some(compile_geckodriver(workspace)?);
            }
        }
        let missing = tools.missing(workspace)?;
        if !missing.is_empty() {
            let hint = if install { "" } else { "\n`cargo xtask test --install` installs what it may." };
            bail!(
                "missing on this machine:\n{}\nA program elsewhere is named by INWARD_NODE, INWARD_NPM, INWARD_CHROMIUM, \
                 INWARD_CHROMEDRIVER, INWARD_FIREFOX, INWARD_GECKODRIVER.{hint}",
                missing.join("\n")
            );
        }
        for (name, path) in tools.environment() {
            println!("{name}={}", path.display());
        }
        Ok(tools)
    }

    /// Waits for what is still being compiled.
    pub fn wait(&mut self, workspace: &Workspace) -> Result<()> {
        if let Some(mut child) = self.compiling.take() {
            let status = child.wait()?;
            self.geckodriver = existing(compiled(workspace));
            if !status.success() || self.geckodriver.is_none() {
                bail!("`cargo install geckodriver --locked` failed ({status}); run it by hand to see why");
            }
        }
        Ok(())
    }

    /// What the tests are told of it.
    pub fn environment(&self) -> Vec<(&'static str, &Path)> {
        let named = [
            ("INWARD_NODE", &self.node),
            ("INWARD_CHROMIUM", &self.chromium),
            ("INWARD_CHROMEDRIVER", &self.chromedriver),
            ("INWARD_FIREFOX", &self.firefox),
            ("INWARD_GECKODRIVER", &self.geckodriver),
        ];
        named.into_iter().filter_map(|(name, path)| path.as_deref().map(|path| (name, path))).collect()
    }

    /// Those of the package managers' programs that are not there.
    fn lacking(&self) -> Vec<&'static str> {
        let found = [
            ("chromium", &self.chromium),
            ("chromedriver", &self.chromedriver),
            ("firefox", &self.firefox),
            ("node", &self.node),
            ("npm", &self.npm),
        ];
        found.iter().filter(|(_, path)| path.is_none()).map(|(name, _)| *name).collect()
    }

    /// One line for everything that is missing, each with what to do.
    fn missing(&self, workspace: &Workspace) -> Result<Vec<String>> {
        let mut missing = Vec::new();
        for name in lacking_components(workspace) {
            missing.push(format!("  {name}: rustup component add {name}"));
        }
        if !has_target(workspace)? {
            missing.push(format!("  the compiler's browser target: rustup target add {TARGET}"));
        }
        for name in self.lacking() {
            let ways: Vec<_> = SYSTEMS.iter().map(|system| system.line(&[name])).collect();
            let name = if name == "node" { "node 20 or later" } else { name };
            missing.push(format!("  {name}: {}", ways.join(" | ")));
        }
        if self.geckodriver.is_none() && self.compiling.is_none() {
            missing.push("  geckodriver: cargo install geckodriver --locked".to_owned());
        }
        if !scripts_ready(workspace) {
            missing.push("  the tests' scripts: npm ci --ignore-scripts, in tests/".to_owned());
        }
        Ok(missing)
    }
}

impl System {
    fn packages(&self, names: &[&str]) -> Vec<&'static str> {
        let mut packages: Vec<_> =
            self.packages.iter().filter(|(name, _)| names.contains(name)).map(|(_, package)| *package).collect();
        packages.dedup();
        packages
    }

    fn line(&self, names: &[&str]) -> String {
        format!("{} {}", self.install, self.packages(names).join(" "))
    }
}

fn find(variable: &str, names: &[&str]) -> Option<PathBuf> {
    match std::env::var_os(variable) {
        Some(path) => existing(PathBuf::from(path)),
        None => names.iter().find_map(|name| on_path(name)),
    }
}

fn on_path(name: &str) -> Option<PathBuf> {
    let path = std::env::var_os("PATH")?;
    let file = format!("{name}{}", std::env::consts::EXE_SUFFIX);
    std::env::split_paths(&path).find_map(|folder| existing(folder.join(&file)))
}

fn existing(path: PathBuf) -> Option<PathBuf> {
    path.is_file().then_some(path)
}

fn major(node: &Path) -> Option<u32> {
    let version = output(Command::new(node).arg("--version")).ok()?;
    version.trim().trim_start_matches('v').split('.').next()?.parse().ok()
}

/// Where `compile_geckodriver` puts it: beside everything else that is compiled, and kept between runs.
fn compiled(workspace: &Workspace) -> PathBuf {
    workspace.target.join("tools/bin").join(format!("geckodriver{}", std::env::consts::EXE_SUFFIX))
}

fn compile_geckodriver(workspace: &Workspace) -> Result<Child> {
    println!("compiling geckodriver beside the other checks");
    let mut install = workspace.cargo();
    install.args(["install", "geckodriver", "--locked", "--quiet", "--root"]).arg(workspace.target.join("tools"));
    // Its intermediate files go into a folder of cargo's own that is removed afterwards.
    install.env_remove("CARGO_TARGET_DIR").stdout(Stdio::null());
    install.spawn().context("cargo install geckodriver")
}

fn lacking_components(workspace: &Workspace) -> Vec<&'static str> {
    let there = |subcommand: &str| output(workspace.cargo().args([subcommand, "--version"])).is_ok();
    [("fmt", "rustfmt"), ("clippy", "clippy")]
        .into_iter()
        .filter(|(one, _)| !there(one))
        .map(|(_, name)| name)
        .collect()
}

fn install_rust(workspace: &Workspace) -> Result<()> {
    let components = lacking_components(workspace);
    if !components.is_empty() {
        run(workspace.command("rustup").args(["component", "add"]).args(components))?;
    }
    if !has_target(workspace)? {
        run(workspace.command("rustup").args(["target", "add", TARGET]))?;
    }
    Ok(())
}

/// Installs by apt where this run may; elsewhere the list of what is missing says what to do.
fn install_packages(workspace: &Workspace, names: &[&str]) -> Result<()> {
    let apt = &SYSTEMS[0];
    if names.is_empty() || on_path(apt.manager).is_none() {
        return Ok(());
    }
    let root = output(workspace.command("id").arg("-u")).is_ok_and(|user| user.trim() == "0");
    if !root && on_path("sudo").is_none() {
        return Ok(());
    }
    let apt_get = |arguments: &[&str]| {
        let mut command = workspace.command(if root { "env" } else { "sudo" });
        command.args(if root { &[][..] } else { &["env"] }).args([
            "DEBIAN_FRONTEND=noninteractive",
            apt.manager,
            "-qq",
        ]);
        run(command.args(arguments))
    };
    println!("installing {}", apt.packages(names).join(" "));
    apt_get(&["update"])?;
    apt_get(&[&["install", "--yes", "--no-install-recommends"], &apt.packages(names)[..]].concat())
}

/// Whether `npm ci` has run since the lock file changed.
fn scripts_ready(workspace: &Workspace) -> bool {
    let changed = |path: &str| std::fs::metadata(workspace.root.join(path)).and_then(|file| file.modified()).ok();
    match (changed("tests/node_modules/.package-lock.json"), changed("tests/package-lock.json")) {
        (Some(installed), Some(locked)) => installed >= locked,
        _ => false,
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn everything_missing_is_named_with_what_to_do() {
        let workspace = Workspace::open(None).unwrap();
        let missing = Tools::default().missing(&workspace).unwrap().join("\n");
        for line in [
            "chromedriver: apt-get install --no-install-recommends chromium-driver | dnf install chromedriver",
            "firefox: apt-get install --no-install-recommends firefox-esr | dnf install firefox",
            "node 20 or later: apt-get install --no-install-recommends nodejs",
            "geckodriver: cargo install geckodriver --locked",
        ] {
            assert!(missing.contains(line), "{missing}");
        }
    }

    #[test]
    fn a_package_of_two_programs_is_installed_once() {
        assert_eq!(SYSTEMS[2].line(&["node", "npm"]), "brew install node");
    }
}
