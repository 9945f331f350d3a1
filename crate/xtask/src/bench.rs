//! The engine timed, natively, in Node and in Chromium.

use crate::dist::build;
use crate::tools::Tools;
use crate::workspace::{Workspace, output, run};
use anyhow::{Context, Result};

/// Runs the core's example `bench`, the same work through the module in Node and in a browser, the search for misses, and
/// the same job in NumPy and SciPy.
pub fn bench(workspace: &Workspace) -> Result<()> {
    build(workspace)?;
    println!("\nnative");
    let example = |package: &str, name: &str| {
        let mut cargo = workspace.cargo();
        cargo.args(["run", "--release", "--locked", "--quiet", &format!("--package={package}"), "--example", name]);
        cargo
    };
    let native = output(&mut example("inward-core", "bench"))?;
    println!("{native}");
    let fit = native.lines().find_map(|line| line.strip_prefix("calibrations a fit: ")).unwrap_or("0");
    println!("\nNode");
    let node = Tools::find(workspace).node.context("Node 20 or later is needed; INWARD_NODE may name it")?;
    let mut script = workspace.command(node);
    run(script.arg("tests/bench.mjs").env("INWARD_DIST", &workspace.dist).env("INWARD_NATIVE_FIT", fit))?;
    println!("\nChromium");
    for name in ["browser_bench", "page_bench"] {
        let mut browser = example("inward-tests", name);
        run(browser.env("INWARD_DIST", &workspace.dist).env("INWARD_NATIVE_FIT", fit))?;
    }
    println!("\nmisses");
    run(&mut example("inward-tests", "misses"))?;
    println!("\nNumPy and SciPy");
    let packages = workspace.command("python3").args(["-c", "import numpy, scipy"]).output();
    if !packages.is_ok_and(|tried| tried.status.success()) {
        println!("not run: it needs python3 with numpy and scipy");
        return Ok(());
    }
    let mut script = workspace.command("python3");
    let told = output(script.arg("tests/reference/scipy_bench.py").env("OMP_NUM_THREADS", "1"))?;
    println!("{told}");
    let number = |text: &str| text.trim().parse::<f64>().ok();
    let scipy = told.rsplit("; ").next().and_then(|last| number(last.split(" µs").next()?));
    let own = native.lines().find_map(|line| number(line.strip_prefix("microseconds a fit: ")?));
    if let Some((scipy, own)) = scipy.zip(own) {
        println!("one fit takes NumPy and SciPy {:.0} times as long as native code of one thread", scipy / own);
    }
    Ok(())
}
