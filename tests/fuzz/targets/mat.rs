#![no_main]
use inward_core::read::mat;

libfuzzer_sys::fuzz_target!(|file: &[u8]| {
    let _ = mat::read(file);
});
