//! A temporary folder, removed when dropped.
use std::path::{Path, PathBuf};
use std::sync::atomic::{AtomicUsize, Ordering};

/// An empty folder of its own under the system's temporary folder.
pub struct Folder(PathBuf);

impl Folder {
    /// Makes the folder; `name` only helps a person who looks.
    pub fn fresh(name: &str) -> Self {
        static COUNT: AtomicUsize = AtomicUsize::new(0);
        let count = COUNT.fetch_add(1, Ordering::Relaxed);
        let path = std::env::temp_dir().join(format!("inward-tests-{}-{count}-{name}", std::process::id()));
        std::fs::create_dir_all(&path).expect("a temporary folder can be made");
        Self(path)
    }

    /// Its path.
    pub fn path(&self) -> &Path {
        &self.0
    }

    /// Writes a file into it and returns the file's path.
    pub fn write(&self, name: &str, content: impl AsRef<[u8]>) -> PathBuf {
        let file = self.0.join(name);
        std::fs::write(&file, content).expect("a temporary file can be written");
        file
    }
}

impl Drop for Folder {
    fn drop(&mut self) {
        let _ = std::fs::remove_dir_all(&self.0);
    }
}
