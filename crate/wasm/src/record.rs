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

/// By hand: its own code for one small object would be larger.
fn of(done: JsValue) -> Result<Done, JsValue> {
    const KEYS: [&str; 14] = [
        "region",
        "populations",
        "verdict",
        "alternatives",
        "influence",
        "what_if",
        "course",
        "shares",
        "groups",
        "group_count",
        "matches",
        "threshold",
        "decompositions",
        "subjects",
    ];
    if let Some(key) = keys(&done).find(|key| !KEYS.contains(&key.as_str())) {
        return Err(thrown(&Settings::unknown(format!("nothing of this kind belongs at `done.{key}`"))));
    }
    let flag = |name: &str| part(&done, name).is_truthy();
    let number = |name: &str| part(&done, name).as_f64();
    let count = |name: &str| number(name).unwrap_or(0.0) as usize;
    Ok(Done {
        region: flag("region"),
        populations: flag("populations"),
        verdict: flag("verdict"),
        alternatives: flag("alternatives"),
        influence: flag("influence"),
        what_if: flag("what_if"),
        course: flag("course"),
        shares: flag("shares"),
        groups: flag("groups"),
        group_count: Some(count("group_count")).filter(|count| *count > 0),
        matches: flag("matches"),
        threshold: number("threshold"),
        decompositions: count("decompositions"),
        subjects: count("subjects"),
    })
}
