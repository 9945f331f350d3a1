//! A server on this machine that only counts what reaches it.
use std::io::{Read, Write};
use std::net::{SocketAddr, TcpListener, TcpStream};
use std::sync::{Arc, Mutex};
use std::thread;
use std::time::Duration;

/// Remembers the first line of every request; an error in a browser proves nothing, a request that arrived does.
pub struct Canary {
    address: SocketAddr,
    seen: Arc<Mutex<Vec<String>>>,
}

impl Canary {
    /// Starts listening on a free port.
    pub fn start() -> Self {
        let listener = TcpListener::bind("127.0.0.1:0").expect("a port is free");
        let address = listener.local_addr().expect("a listener has an address");
        let seen = Arc::new(Mutex::new(Vec::new()));
        let record = Arc::clone(&seen);
        thread::spawn(move || {
            for stream in listener.incoming().flatten() {
                let record = Arc::clone(&record);
                thread::spawn(move || answer(stream, &record));
            }
        });
        Self { address, seen }
    }

    /// `127.0.0.1:port`.
    pub fn host(&self) -> String {
        self.address.to_string()
    }

    /// First lines of all requests so far; a connection that said nothing counts as an empty one.
    pub fn seen(&self) -> Vec<String> {
        self.seen.lock().expect("no thread of the server panics").clone()
    }
}

fn answer(mut stream: TcpStream, seen: &Mutex<Vec<String>>) {
    let _ = stream.set_read_timeout(Some(Duration::from_secs(5)));
    let mut text = [0; 2048];
    let length = stream.read(&mut text).unwrap_or(0);
    let line = String::from_utf8_lossy(&text[..length]).lines().next().unwrap_or_default().to_owned();
    seen.lock().expect("no thread of the server panics").push(line);
    let _ = stream.write_all(
        b"HTTP/1.1 200 OK\r\nAccess-Control-Allow-Origin: *\r\nContent-Length: 0\r\nConnection: close\r\n\r\n",
    );
}
