#![no_main]
use inward_core::read::zip;

libfuzzer_sys::fuzz_target!(|file: &[u8]| {
    let _ = zip::read(file);
});
