//! The engine timed, natively, in Node and in Chromium.

use crate::dist::build;
use crate::tools::Tools;
use crate::workspace::{Workspace, run};
use anyhow::{Context, Result};

/// Runs the core's example `bench` and the same work through the module in Node and in a browser.
pub fn bench(workspace: &Workspace) -> Result<()> {
    build(workspace)?;
    println!("\nnative");
    run(workspace.cargo().args(["run", "--release", "--locked", "--package=inward-core", "--example=bench"]))?;
    println!("\nNode");
    let node = Tools::find(workspace).node.context("Node 20 or later is needed; INWARD_NODE may name it")?;
    run(workspace.command(node).arg("tests/bench.mjs").env("INWARD_DIST", &workspace.dist))?;
    println!("\nChromium");
    for example in ["--example=browser_bench", "--example=page_bench"] {
        let mut browser = workspace.cargo();
        browser.args(["run", "--release", "--locked", "--quiet", "--package=inward-tests", example]);
        run(browser.env("INWARD_DIST", &workspace.dist))?;
    }
    Ok(())
}
