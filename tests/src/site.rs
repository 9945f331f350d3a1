//! A few files served on this machine, as a wiki serves them; what else is asked for is remembered.
use std::io::{Read, Write};
use std::net::{TcpListener, TcpStream};
use std::sync::{Arc, Mutex};
use std::thread;
use std::time::Duration;

/// A server of its own origin.
pub struct Site {
    origin: String,
    seen: Arc<Mutex<Vec<String>>>,
}

impl Site {
    /// Serves files by their paths, such as `/page.html`, as pages.
    pub fn start(files: &[(&str, String)]) -> Self {
        let listener = TcpListener::bind("127.0.0.1:0").expect("a port is free");
        let origin = format!("http://{}", listener.local_addr().expect("a listener has an address"));
        let seen = Arc::new(Mutex::new(Vec::new()));
        let record = Arc::clone(&seen);
        let files: Arc<Vec<(String, String)>> =
            Arc::new(files.iter().map(|(path, text)| ((*path).to_owned(), text.clone())).collect());
        thread::spawn(move || {
            for stream in listener.incoming().flatten() {
                let (record, files) = (Arc::clone(&record), Arc::clone(&files));
                thread::spawn(move || answer(stream, &files, &record));
            }
        });
        Self { origin, seen }
    }

    /// `http://127.0.0.1:port`.
    pub fn origin(&self) -> &str {
        &self.origin
    }

    /// Address of a file.
    pub fn address(&self, path: &str) -> String {
        format!("{}{path}", self.origin)
    }

    /// Paths asked for so far, without those that browsers ask for by themselves.
    pub fn seen(&self) -> Vec<String> {
        self.seen.lock().expect("no thread of the server panics").clone()
    }
}

fn answer(mut stream: TcpStream, files: &[(String, String)], seen: &Mutex<Vec<String>>) {
    let _ = stream.set_read_timeout(Some(Duration::from_secs(5)));
    let mut request = [0; 8192];
    let length = stream.read(&mut request).unwrap_or(0);
    let text = String::from_utf8_lossy(&request[..length]);
    let Some(path) = text.split(' ').nth(1) else { return };
    if path != "/favicon.ico" {
        seen.lock().expect("no thread of the server panics").push(path.to_owned());
    }
    let (status, body) =
        files.iter().find(|(one, _)| one == path).map_or(("404 Not Found", ""), |(_, body)| ("200 OK", body.as_str()));
    let head = format!(
        "HTTP/1.1 {status}\r\nContent-Type: text/html; charset=utf-8\r\nContent-Length: {}\r\nConnection: close\r\n\r\n",
        body.len()
    );
    let _ = stream.write_all(head.as_bytes()).and_then(|()| stream.write_all(body.as_bytes()));
}
