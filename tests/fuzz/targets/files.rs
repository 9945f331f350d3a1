#![no_main]
#[path = "../../src/attack.rs"]
mod attack;

libfuzzer_sys::fuzz_target!(|file: &[u8]| attack::attack("files", file));
