//! The engine's WebAssembly bindings.
use wasm_bindgen::prelude::*;

/// Version of the program.
#[wasm_bindgen]
pub fn version() -> String {
    env!("CARGO_PKG_VERSION").into()
}
