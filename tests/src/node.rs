//! Node, to run the engine as a module.
use crate::Outcome;
use crate::place::{dist_file, tests_folder};
use crate::program::find_program;
use std::io::Write;
use std::path::PathBuf;
use std::process::{Command, Stdio};

/// Node with the built engine.
pub struct Node {
    program: PathBuf,
    dist: PathBuf,
}

impl Node {
    /// Finds both; panics where one is missing.
    pub fn with_engine() -> Self {
        dist_file("engine/inward.mjs");
        let dist = dist_file("inward.html").parent().expect("a file lies in a folder").to_path_buf();
        Self { program: find_program("INWARD_NODE", &["node", "nodejs"]), dist }
    }

    /// Runs a script of this package with `input` on its standard input, and returns what it printed.
    pub fn run(&self, script: &str, arguments: &[&str], input: &str) -> Outcome<String> {
        let mut process = Command::new(&self.program)
            .args(arguments)
            .arg(tests_folder().join(script))
            .env("INWARD_DIST", &self.dist)
            .stdin(Stdio::piped())
            .stdout(Stdio::piped())
            .stderr(Stdio::piped())
            .spawn()
            .map_err(|why| why.to_string())?;
        let mut pipe = process.stdin.take().expect("the input was asked for");
        let input = input.to_owned();
        // A thread of its own: the script may print before it has read everything.
        let feed = std::thread::spawn(move || pipe.write_all(input.as_bytes()));
        let done = process.wait_with_output().map_err(|why| why.to_string())?;
        let _ = feed.join();
        let printed = String::from_utf8_lossy(&done.stdout).into_owned();
        if done.status.success() {
            return Ok(printed);
        }
        Err(format!("{script} failed\n{printed}\n{}", String::from_utf8_lossy(&done.stderr)))
    }
}
