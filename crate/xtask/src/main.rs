//! The build tool: `cargo xtask build | serve | test | bench`.

mod bench;
mod bundle;
mod digits;
mod dist;
mod engine;
mod examples;
mod lexer;
mod licences;
mod markup;
mod notices;
mod packed;
mod page;
mod paths;
mod reproduce;
mod rules;
mod sealed;
mod serve;
mod stamp;
mod steps;
mod streams;
mod tools;
mod wasm;
mod workspace;

use anyhow::{Context, Result, bail};
use std::path::PathBuf;
use std::process::ExitCode;
use workspace::Workspace;

const USAGE: &str = "\
cargo xtask build               write target/dist: inward.html, its SHA-256, engine/inward.mjs, sample_host.html
cargo xtask serve [--port N]    build, then serve the page on this machine only
cargo xtask test [--install]    run every check; with --install fetch what they need first
cargo xtask bench               build, then time the engine natively and in Node

  --root DIR                    work on the clone in DIR instead of this one";

fn main() -> ExitCode {
    match run() {
        Ok(()) => ExitCode::SUCCESS,
        Err(error) => {
            eprintln!("error: {error:#}");
            ExitCode::FAILURE
        }
    }
}

fn run() -> Result<()> {
    let mut arguments = Arguments(std::env::args().skip(1).collect());
    let root = arguments.value("--root")?.map(PathBuf::from);
    let command = arguments.command();
    let workspace = Workspace::open(root)?;
    match command.as_deref() {
        Some("build") => {
            arguments.finish()?;
            dist::build(&workspace)?;
        }
        Some("serve") => {
            let port = arguments.value("--port")?.map_or(Ok(8000), |port| port.parse()).context("--port")?;
            arguments.finish()?;
            let dist = dist::build(&workspace)?;
            serve::serve(&workspace, dist, port)?;
        }
        Some("test") => {
            let install = arguments.flag("--install");
            arguments.finish()?;
            steps::test(&workspace, install)?;
        }
        Some("bench") => {
            arguments.finish()?;
            bench::bench(&workspace)?;
        }
        _ => bail!("what shall be done?\n\n{USAGE}"),
    }
    Ok(())
}

/// What stands on the command line and has not been read yet.
struct Arguments(Vec<String>);

impl Arguments {
    fn command(&mut self) -> Option<String> {
        (!self.0.is_empty()).then(|| self.0.remove(0))
    }

    fn flag(&mut self, name: &str) -> bool {
        let before = self.0.len();
        self.0.retain(|argument| argument != name);
        self.0.len() < before
    }

    fn value(&mut self, name: &str) -> Result<Option<String>> {
        let Some(at) = self.0.iter().position(|argument| argument == name) else {
            return Ok(None);
        };
        if at + 1 == self.0.len() {
            bail!("{name} needs a value");
        }
        self.0.remove(at);
        Ok(Some(self.0.remove(at)))
    }

    fn finish(self) -> Result<()> {
        match self.0.first() {
            Some(argument) => bail!("unknown argument {argument}\n\n{USAGE}"),
            None => Ok(()),
        }
    }
}
