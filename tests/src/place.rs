//! Where things lie: what the build made, what the tests read and what they leave behind.
use std::fs;
use std::path::{Path, PathBuf};

/// The folder of this package.
pub fn tests_folder() -> PathBuf {
    PathBuf::from(env!("CARGO_MANIFEST_DIR"))
}

fn top() -> PathBuf {
    tests_folder().parent().expect("the package lies in the project's folder").to_path_buf()
}

/// A file that the build made, such as `inward.html`; panics with the command that makes it where it is missing.
pub fn dist_file(name: &str) -> PathBuf {
    let dist = std::env::var_os("INWARD_DIST").map_or_else(|| top().join("target/dist"), PathBuf::from);
    let file = dist.join(name);
    assert!(file.is_file(), "{} is missing: run `cargo xtask build`", file.display());
    fs::canonicalize(file).expect("a file that exists has a full path")
}

/// Content of a committed table of expected values.
pub fn data(name: &str) -> String {
    read(&tests_folder().join("data").join(name))
}

/// Content of an example of the project.
pub fn example(name: &str) -> String {
    read(&top().join("example_maps").join(name))
}

fn read(file: &Path) -> String {
    fs::read_to_string(file).unwrap_or_else(|why| panic!("{}: {why}", file.display()))
}

/// Where a picture of the page goes, for looking at by eye.
pub fn screenshot_file(name: &str) -> PathBuf {
    let folder = top().join("target/screenshots");
    fs::create_dir_all(&folder).expect("the folder of pictures can be made");
    folder.join(format!("{name}.png"))
}

/// Content of a small file as another program wrote it.
pub fn sample(name: &str) -> Vec<u8> {
    let file = tests_folder().join("data/samples").join(name);
    fs::read(&file).unwrap_or_else(|why| panic!("{}: {why}", file.display()))
}

/// The names of all of them, in order.
pub fn samples() -> Vec<String> {
    let folder = fs::read_dir(tests_folder().join("data/samples")).expect("the samples are committed");
    let mut names: Vec<String> =
        folder.map(|entry| entry.expect("a folder can be listed").file_name().to_string_lossy().into_owned()).collect();
    names.sort();
    names
}
