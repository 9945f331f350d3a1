//! Every check, timed.

use crate::tools::Tools;
use crate::workspace::{Workspace, run};
use crate::{digits, dist, licences, paths, reproduce, rules, sealed, wasm};
use anyhow::{Context, Result, bail};
use std::thread::Scope;
use std::time::Instant;

/// Runs every check; what fails is told at the end, and those that do not depend on it run all the same.
pub fn test(workspace: &Workspace, install: bool) -> Result<()> {
    std::thread::scope(|scope| run_all(workspace, install, scope))
}

fn run_all<'scope>(workspace: &'scope Workspace, install: bool, scope: &'scope Scope<'scope, '_>) -> Result<()> {
    let mut steps = Steps::default();
    let Some(mut tools) = steps.step("what the checks need", || Tools::ready(workspace, install)) else {
        return steps.finish();
    };
    let cargo = |arguments: &[&str]| run(workspace.cargo().args(arguments));
    steps.step("format", || cargo(&["fmt", "--all", "--check"]));
    steps.step("clippy, native", || {
        cargo(&["clippy", "--workspace", "--all-targets", "--locked", "--quiet", "--", "-Dwarnings"])
    });
    steps.step("clippy, browser", || {
        let packages =
            ["--package=inward-numerics", "--package=inward-core", "--package=inward-wasm", "--target", wasm::TARGET];
        cargo(&[&["clippy", "--locked", "--quiet"], &packages[..], &["--", "-Dwarnings"]].concat())
    });
    steps.step("documentation", || {
        let mut doc = workspace.cargo();
        run(doc.args(["doc", "--workspace", "--no-deps", "--locked", "--quiet"]).env("RUSTDOCFLAGS", "-Dwarnings"))
    });
    let dist = steps.step("build", || dist::build(workspace));
    if let Some(dist) = &dist {
        steps.step("no machine path", || paths::check(workspace, dist));
        steps.step("sealed", || sealed::check(workspace, dist));
    }
    // Its compiler works on one core for most of the time: the tests are compiled meanwhile.
    let twin = dist.is_some().then(|| scope.spawn(|| reproduce::check(workspace)));
    steps.step("who imports whom", || rules::check(workspace));
    steps.step("numeric crates", || digits::check(workspace));
    steps.step("licences", || licences::check(workspace));
    steps.step("types of the page's scripts", || {
        let node = tools.node.as_ref().context("Node")?;
        run(workspace.command(node).args(["tests/node_modules/typescript/bin/tsc", "-p", "tests/tsconfig.json"]))
    });
    // As it was built to run this, not optimised like the rest.
    steps.step("tests of the build tool", || {
        cargo(&["test", "--package=inward-xtask", "--profile=dev", "--locked", "--quiet"])
    });
    steps.step("compile the tests", || {
        cargo(&["test", "--workspace", "--exclude=inward-xtask", "--locked", "--quiet", "--no-run"])
    });
    if let Some(twin) = twin {
        steps.step("two clones, equal bytes", || twin.join().unwrap_or_else(|_| bail!("the second build panicked")));
    }
    steps.step("wait for what is being installed", || tools.wait(workspace));
    if dist.is_some() {
        steps.step("tests, engine in Node, page in browsers", || {
            let mut test = workspace.cargo();
            test.args(["test", "--workspace", "--exclude=inward-xtask", "--locked", "--no-fail-fast"]);
            run(test.envs(tools.environment()).env("INWARD_DIST", &workspace.dist))
        });
    }
    steps.finish()
}

/// What ran, how long it took, and whether it went well.
#[derive(Default)]
struct Steps(Vec<(String, f64, bool)>);

impl Steps {
    fn step<T>(&mut self, name: &str, work: impl FnOnce() -> Result<T>) -> Option<T> {
        println!("\n== {name}");
        let start = Instant::now();
        let result = work();
        let seconds = start.elapsed().as_secs_f64();
        if let Err(error) = &result {
            println!("{error:#}");
        }
        println!("-- {name}: {seconds:.1} s{}", if result.is_ok() { "" } else { ", FAILED" });
        self.0.push((name.to_owned(), seconds, result.is_ok()));
        result.ok()
    }

    fn finish(self) -> Result<()> {
        println!("\n   seconds");
        for (name, seconds, well) in &self.0 {
            println!("{seconds:>10.1}  {name}{}", if *well { "" } else { "  FAILED" });
        }
        println!("{:>10.1}  in all", self.0.iter().map(|(_, seconds, _)| seconds).sum::<f64>());
        let failed: Vec<_> = self.0.iter().filter(|(.., well)| !well).map(|(name, ..)| name.as_str()).collect();
        if !failed.is_empty() {
            bail!("failed: {}", failed.join("; "));
        }
        println!("every check passed");
        Ok(())
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn a_failed_step_fails_the_run_and_is_named() {
        let mut steps = Steps::default();
        assert_eq!(steps.step("first", || Ok(1)), Some(1));
        assert_eq!(steps.step("second", || -> Result<()> { bail!("no") }), None);
        assert_eq!(steps.step("third", || Ok(3)), Some(3));
        assert_eq!(steps.finish().unwrap_err().to_string(), "failed: second");
    }
}
