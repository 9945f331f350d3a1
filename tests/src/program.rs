//! Programs of the system that the tests need.
use std::ffi::OsString;
use std::path::{Path, PathBuf};

/// Full path of a program: named by a variable of the environment, or the first of `names` on the search path.
/// Panics where there is none: a test without its browser has failed, not passed.
pub fn find_program(variable: &str, names: &[&str]) -> PathBuf {
    if let Some(given) = std::env::var_os(variable) {
        let file = PathBuf::from(given);
        assert!(file.is_file(), "{variable} names {}, which is not there", file.display());
        return file;
    }
    let path = std::env::var_os("PATH").unwrap_or_default();
    names.iter().find_map(|name| on_path(&path, name)).unwrap_or_else(|| {
        panic!("none of {names:?} is installed: run `cargo xtask test --install`, or name it by {variable}")
    })
}

fn on_path(path: &OsString, name: &str) -> Option<PathBuf> {
    std::env::split_paths(path).map(|folder| folder.join(name)).find(|file: &PathBuf| Path::is_file(file))
}
