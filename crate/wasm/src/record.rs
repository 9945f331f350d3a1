//! What was done in the words of a paper, and notes on single maps.

use crate::wire::{misunderstood, plain, thrown};
use crate::{Study, wire};
use inward_core::Settings;
use inward_core::report::Done;
use wasm_bindgen::prelude::*;

#[wasm_bindgen]
impl Study {
    /// The methods as a paragraph with its references, by what was done beyond the fits.
    pub fn methods(&self, done: JsValue) -> Result<JsValue, JsValue> {
        plain(&self.0.methods(&of(done)?))
    }

    /// A note on one map in parts, with what was done beyond its fit.
    pub fn record(&self, index: JsValue, done: JsValue) -> Result<JsValue, JsValue> {
        let index = wire::index(&index, self.0.count())?;
        plain(&self.0.record(index, &of(done)?).map_err(|error| thrown(&error))?)
    }
}

fn of(done: JsValue) -> Result<Done, JsValue> {
    if done.is_undefined() {
        return Ok(Done::default());
    }
    serde_wasm_bindgen::from_value(done).map_err(|_| thrown(&Settings::unknown(misunderstood("done"))))
}
