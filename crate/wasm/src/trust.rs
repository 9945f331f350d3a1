//! How far fits may be trusted: populations that are drawn in pieces, and what is told of a map.

use crate::clock::Clock;
use crate::wire::{misunderstood, plain, thrown};
use crate::{Study, wire};
use inward_core::fit::BATCH;
use inward_core::simulate::{Draw, Kind};
use inward_core::{MapReport, Settings};
use js_sys::Array;
use wasm_bindgen::prelude::*;

#[wasm_bindgen]
impl Study {
    /// Equal for studies whose reference populations are the same.
    #[wasm_bindgen(js_name = populationKey)]
    pub fn population_key(&self) -> String {
        self.0.population_key()
    }

    /// Maps of each population.
    #[wasm_bindgen(getter, js_name = populationSize)]
    pub fn population_size(&self) -> usize {
        self.0.population_size()
    }

    /// Draws of a population from `first` on until `milliseconds` have passed or `last` is reached; at least a few. Two
    /// numbers for each: residual variance; eccentricity, negative at the boundary.
    pub fn population(&self, kind: JsValue, first: usize, last: usize, milliseconds: f64) -> Result<Vec<f64>, JsValue> {
        let kind = kind_of(kind)?;
        let last = last.min(self.0.population_size());
        let clock = Clock::start();
        let mut numbers = Vec::new();
        let mut next = first;
        while next < last {
            let end = last.min(next + BATCH);
            numbers.extend(self.0.population(kind, next..end).iter().flat_map(pair));
            next = end;
            if clock.milliseconds() >= milliseconds {
                break;
            }
        }
        Ok(numbers)
    }

    /// Takes over the draws 0, 1, … of a population that were made elsewhere.
    #[wasm_bindgen(js_name = keepPopulation)]
    pub fn keep_population(&self, kind: JsValue, numbers: &[f64]) -> Result<(), JsValue> {
        let kind = kind_of(kind)?;
        let draws = numbers.chunks(2).map(|pair| match *pair {
            [residual_variance, eccentricity] if residual_variance.is_finite() && eccentricity.is_finite() => {
                Some(Draw {
                    residual_variance,
                    eccentricity: eccentricity.abs(),
                    at_boundary: eccentricity.is_sign_negative(),
                })
            }
            _ => None,
        });
        let draws = draws.collect::<Option<Vec<Draw>>>();
        self.0.keep_population(kind, draws.ok_or_else(|| thrown(&Settings::unknown(misunderstood("numbers"))))?);
        Ok(())
    }

    /// All that is told of how far the fit of a map may be trusted; `null` for one that cannot be fitted.
    pub fn trust(&self, index: JsValue) -> Result<JsValue, JsValue> {
        let index = wire::index(&index, self.0.count())?;
        match self.0.fit(index).map_err(|error| thrown(&error))? {
            MapReport::Failed { .. } => Ok(JsValue::NULL),
            MapReport::Fitted(map) => self.0.trust(index, &map).map_or(Ok(JsValue::NULL), |trust| plain(&trust)),
        }
    }

    /// Verdicts of maps from `first` on, before `last`, until `milliseconds` have passed; at least a few. `null` for a map
    /// that cannot be fitted.
    pub fn verdicts(&self, first: usize, last: usize, milliseconds: f64) -> Result<Array, JsValue> {
        let clock = Clock::start();
        let last = last.min(self.0.count());
        let words = Array::new();
        let mut next = first;
        while next < last {
            let end = last.min(next + BATCH);
            for word in self.0.verdicts(next..end).map_err(|error| thrown(&error))? {
                words.push(&plain(&word)?);
            }
            next = end;
            if clock.milliseconds() >= milliseconds {
                break;
            }
        }
        Ok(words)
    }
}

/// A fit at the boundary has an eccentricity over zero, so that its sign can tell it.
fn pair(draw: &Draw) -> [f64; 2] {
    [draw.residual_variance, if draw.at_boundary { -draw.eccentricity } else { draw.eccentricity }]
}

fn kind_of(kind: JsValue) -> Result<Kind, JsValue> {
    serde_wasm_bindgen::from_value(kind).map_err(|_| thrown(&Settings::unknown(misunderstood("kind"))))
}
