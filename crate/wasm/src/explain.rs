//! What else may explain a map, what carries its fit and would move it, and where else a dipole might lie.

use crate::clock::Clock;
use crate::picture::{contour, to_js};
use crate::wire::{plain, set, thrown};
use crate::{Study, wire};
use inward_core::fit::BATCH;
use inward_core::report::FittedMap;
use inward_core::{MapReport, Vec3};
use js_sys::{Array, Float32Array, Object};
use wasm_bindgen::prelude::*;

#[wasm_bindgen]
impl Study {
    /// Other explanations of a map; `null` for one that cannot be fitted.
    pub fn alternatives(&self, index: JsValue) -> Result<JsValue, JsValue> {
        self.of_fitted(&index, |index, map| self.0.alternatives(index, map).map(|found| plain(&found)))
    }

    /// The fit without each electrode; `null` likewise.
    pub fn influence(&self, index: JsValue) -> Result<JsValue, JsValue> {
        self.of_fitted(&index, |index, map| self.0.influence(index, map).map(|found| plain(&found)))
    }

    /// The fit when something is otherwise; `null` likewise.
    #[wasm_bindgen(js_name = whatIf)]
    pub fn what_if(&self, index: JsValue) -> Result<JsValue, JsValue> {
        self.of_fitted(&index, |index, map| self.0.what_if(index, map).map(|found| plain(&found)))
    }

    /// Residual variance in slices through a place, three numbers in scalp radii, or through the best one; `null` likewise.
    pub fn landscape(&self, index: JsValue, at: Option<Vec<f64>>) -> Result<JsValue, JsValue> {
        self.of_fitted(&index, |index, map| {
            let found = self.0.landscape(index, map, at.as_deref().map(place))?;
            let slices = found.slices.iter().map(|slice| {
                let object = Object::new();
                set(&object, "view", slice.view.into());
                set(&object, "rv", Float32Array::from(&slice.rv[..]).into());
                set(&object, "contours", slice.contours.iter().map(contour).collect::<Array>().into());
                set(&object, "alt", slice.alt.as_str().into());
                object
            });
            let object = Object::new();
            set(&object, "slices", slices.collect::<Array>().into());
            set(&object, "size", (found.size as u32).into());
            set(&object, "brain", found.brain.into());
            set(&object, "sentence", found.sentence.as_str().into());
            let rest = [("at", plain(&found.at)), ("best", plain(&found.best)), ("levels", plain(&found.levels))];
            Some(
                rest.into_iter()
                    .try_fold(object, |object, (name, value)| {
                        set(&object, name, value?);
                        Ok(object)
                    })
                    .map(JsValue::from),
            )
        })
    }

    /// The map with its dipole placed by hand, with its picture if that is asked for; `null` likewise.
    pub fn probe(&self, index: JsValue, at: Vec<f64>, picture: bool) -> Result<JsValue, JsValue> {
        self.of_fitted(&index, |index, map| {
            let (probe, by_hand) = self.0.probe(index, map, place(&at))?;
            Some(plain(&probe).inspect(|object| {
                let drawn = picture.then(|| self.0.picture(&by_hand)).flatten();
                let drawn = drawn.map_or(JsValue::NULL, |picture| to_js(&picture).into());
                set(&Object::from(object.clone()), "picture", drawn);
            }))
        })
    }

    /// Shares for `suspects`, so many for each map as there are used electrodes, from `first` on, before `last`, until
    /// `milliseconds` have passed; of a few maps at least.
    pub fn unshared(&self, first: usize, last: usize, milliseconds: f64) -> Result<Vec<f32>, JsValue> {
        let clock = Clock::start();
        let last = last.min(self.0.count());
        let mut shares = Vec::new();
        let mut next = first;
        while next < last {
            let end = last.min(next + BATCH);
            shares.extend(self.0.unshared(next..end).map_err(|error| thrown(&error))?);
            next = end;
            if clock.milliseconds() >= milliseconds {
                break;
            }
        }
        Ok(shares)
    }

    /// Electrodes that hold strikingly much of what is left over; `null` for fewer than ten maps.
    pub fn suspects(&self, unshared: &[f32]) -> Result<JsValue, JsValue> {
        self.0.suspects(unshared).map_or(Ok(JsValue::NULL), |found| plain(&found))
    }

    fn of_fitted(
        &self,
        index: &JsValue,
        tell: impl FnOnce(usize, &FittedMap) -> Option<Result<JsValue, JsValue>>,
    ) -> Result<JsValue, JsValue> {
        let index = wire::index(index, self.0.count())?;
        match self.0.fit(index).map_err(|error| thrown(&error))? {
            MapReport::Failed { .. } => Ok(JsValue::NULL),
            MapReport::Fitted(map) => tell(index, &map).unwrap_or(Ok(JsValue::NULL)),
        }
    }
}

/// What lacks coordinates is not a number there, and no place.
fn place(at: &[f64]) -> Vec3 {
    Vec3([0, 1, 2].map(|axis| at.get(axis).copied().unwrap_or(f64::NAN)))
}
