//! A running WebDriver server, ended when dropped.
use crate::Outcome;
use std::io::{BufRead, BufReader};
use std::os::unix::process::CommandExt;
use std::path::Path;
use std::process::{Child, Command, Stdio};
use std::sync::mpsc;
use std::thread;
use std::time::Duration;

const PATIENCE: Duration = Duration::from_secs(60);

/// The server's process with its browser, in a process group of their own.
pub struct Driver {
    process: Child,
    port: u16,
}

impl Driver {
    /// Starts the server on a free port; it prints which, after one of `announcements`.
    pub fn start(program: &Path, arguments: &[String], announcement: &'static str) -> Outcome<Self> {
        let mut process = Command::new(program)
            .args(arguments)
            .stdin(Stdio::null())
            .stdout(Stdio::piped())
            .stderr(Stdio::null())
            .process_group(0)
            .spawn()
            .map_err(|why| format!("{}: {why}", program.display()))?;
        let output = process.stdout.take().expect("the output was asked for");
        let (say, hear) = mpsc::channel();
        // Reads to the end: a full pipe would stop the server.
        thread::spawn(move || {
            for line in BufReader::new(output).lines().map_while(Result::ok) {
                if let Some(port) = port_after(&line, announcement) {
                    let _ = say.send(port);
                }
            }
        });
        let mut driver = Self { process, port: 0 };
        driver.port = hear.recv_timeout(PATIENCE).map_err(|_| format!("{} named no port", program.display()))?;
        Ok(driver)
    }

    /// Address of the server.
    pub fn address(&self) -> String {
        format!("http://127.0.0.1:{}", self.port)
    }
}

fn port_after(line: &str, announcement: &str) -> Option<u16> {
    let (_, rest) = line.split_once(announcement)?;
    let digits: String = rest.chars().take_while(char::is_ascii_digit).collect();
    digits.parse().ok()
}

impl Drop for Driver {
    fn drop(&mut self) {
        // The whole group: a browser must not outlive its server.
        let _ = Command::new("kill").arg("--").arg(format!("-{}", self.process.id())).status();
        let _ = self.process.kill();
        let _ = self.process.wait();
    }
}
