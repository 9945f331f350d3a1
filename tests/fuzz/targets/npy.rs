#![no_main]
use inward_core::read::npy;

libfuzzer_sys::fuzz_target!(|file: &[u8]| {
    let _ = npy::read(file);
});
