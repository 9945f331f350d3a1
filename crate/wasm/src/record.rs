//! What was done in the words of a paper, and notes on single maps.

use crate::wire::{keys, part, plain, thrown};
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

/// By hand: derived code for one small object would be larger.
fn of(done: JsValue) -> Result<Done, JsValue> {
    let mut read = Done::default();
    for key in keys(&done) {
        let value = part(&done, &key);
        let number = value.as_f64();
        let flag = match key.as_str() {
            "region" => &mut read.region,
            "populations" => &mut read.populations,
            "verdict" => &mut read.verdict,
            "alternatives" => &mut read.alternatives,
            "influence" => &mut read.influence,
            "what_if" => &mut read.what_if,
            "course" => &mut read.course,
            "shares" => &mut read.shares,
            "groups" => &mut read.groups,
            "matches" => &mut read.matches,
            key => {
                match key {
                    "threshold" => read.threshold = number,
                    "group_count" => read.group_count = number.map(|count| count as usize),
                    "decompositions" => read.decompositions = number.unwrap_or(0.0) as usize,
                    "subjects" => read.subjects = number.unwrap_or(0.0) as usize,
                    _ => {
                        return Err(thrown(&Settings::unknown(format!(
                            "nothing of this kind belongs at `done.{key}`"
                        ))));
                    }
                }
                continue;
            }
        };
        *flag = value.is_truthy();
    }
    Ok(read)
}
