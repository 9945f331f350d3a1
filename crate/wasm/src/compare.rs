//! Several decompositions at once.

use crate::wire::{Inputs, keys, misunderstood, part, plain, set, settings_object, thrown, thrown_within};
use crate::{Inner, Study};
use inward_core::report::{Groups, GroupsRequest, Member, Questions, Summary};
use inward_core::{Decomposition, Settings, Vec3};
use js_sys::{Array, Float32Array, Object};
use serde::de::DeserializeOwned;
use wasm_bindgen::prelude::*;

/// Keys of a decomposition that a request of its own has too.
const INPUTS: [&str; 4] = ["electrodes", "maps", "files", "settings"];

/// Keys of the settings that are about the comparison.
const QUESTIONS: [&str; 4] = ["at", "seed", "draws", "pairs"];

/// Near-dipolar shares of `{ members, at, seed, draws }`.
#[wasm_bindgen]
pub fn summary(request: JsValue) -> Result<JsValue, JsValue> {
    let members: Vec<Member> = of(&request, "members")?.unwrap_or_default();
    plain(&Summary::new(&members, &questions(&request)?).map_err(|error| thrown(&error))?)
}

/// Dipoles of `{ members, groups, axisMm }` in groups by place and axis.
#[wasm_bindgen]
pub fn groups(request: JsValue) -> Result<JsValue, JsValue> {
    let unknown = |_| thrown(&Settings::unknown(misunderstood("members")));
    let request: GroupsRequest = serde_wasm_bindgen::from_value(request).map_err(unknown)?;
    plain(&Groups::new(&request).map_err(|error| thrown(&error))?)
}

/// The mean of rasters as `thumbnails` gives them, `[[raster, rim_degrees], …]`, signs turned so that they agree.
#[wasm_bindgen(js_name = meanRaster)]
pub fn mean_raster(list: JsValue, size: usize) -> Result<Vec<f32>, JsValue> {
    let wrong = || thrown(&Settings::unknown(misunderstood("rasters")));
    let list = list.dyn_ref::<Array>().filter(|list| list.length() > 0).ok_or_else(wrong)?;
    let one = |pair: JsValue| {
        let raster = part(&pair, "0").dyn_into::<Float32Array>().ok()?.to_vec();
        let rim = part(&pair, "1").as_f64().filter(|rim| *rim > 0.0)?;
        (raster.len() == size.checked_mul(size)?).then_some((raster, rim))
    };
    let rasters: Vec<(Vec<f32>, f64)> = list.iter().map(one).collect::<Option<_>>().ok_or_else(wrong)?;
    let rasters: Vec<(&[f32], f64)> = rasters.iter().map(|(raster, rim)| (raster.as_slice(), *rim)).collect();
    Ok(inward_core::scene::mean_raster(&rasters, size))
}

/// The comparison of `[{ name, maps, subject?, electrodes?, files?, head?, settings?, information? }, …]` under
/// `{ electrodes?, settings? }`, which hold where a decomposition has none of its own.
#[wasm_bindgen]
pub fn compare(list: JsValue, common: JsValue) -> Result<JsValue, JsValue> {
    let unknown = |problem: String| thrown(&Settings::unknown(problem));
    let list = list.dyn_ref::<Array>().ok_or_else(|| unknown(misunderstood("the list of decompositions")))?;
    if let Some(key) = keys(&common).find(|key| !["electrodes", "settings"].contains(&key.as_str())) {
        return Err(unknown(format!("unknown part `{key}` of what decompositions have in common")));
    }
    let shared = settings_object(&part(&common, "settings"))?;
    let asked = Object::new();
    for key in QUESTIONS {
        let value = part(&shared, key);
        if !value.is_undefined() {
            set(&asked, key, value);
            let _ = js_sys::Reflect::delete_property(&shared, &key.into());
        }
    }
    let mut comparison = Comparison::new();
    for one in list.iter() {
        let name = part(&one, "name")
            .as_string()
            .filter(|name| !name.trim().is_empty())
            .ok_or_else(|| unknown(format!("decomposition {} has no name", comparison.0.len() + 1)))?;
        let request = Object::new();
        for key in keys(&one) {
            match key.as_str() {
                "name" | "subject" | "information" | "head" | "settings" => {}
                key if INPUTS.contains(&key) => set(&request, key, part(&one, key)),
                _ => return Err(thrown_within(unknown(format!("unknown part `{key}`")), &name)),
            }
        }
        let within = |error: JsValue| thrown_within(error, &name);
        if part(&request, "electrodes").is_undefined() && part(&request, "files").is_undefined() {
            set(&request, "electrodes", part(&common, "electrodes"));
        }
        let own = settings_object(&part(&one, "settings")).map_err(within)?;
        let all = Object::assign(&Object::assign(&Object::new(), &shared), &own);
        let head = part(&one, "head");
        if !head.is_undefined() {
            set(&all, "head", head);
        }
        set(&request, "settings", all.into());
        let inputs = Inputs::from_js(&request).map_err(within)?;
        let study = Inner::open(&inputs.request()).map_err(|error| within(thrown(&error)))?;
        comparison.put(name.clone(), part(&one, "subject"), part(&one, "information"), study)?;
    }
    comparison.finish(asked.into())
}

/// A comparison of open studies, put together one by one.
#[wasm_bindgen]
pub struct Comparison(Vec<Decomposition>);

#[wasm_bindgen]
impl Comparison {
    /// Without a decomposition.
    #[allow(clippy::new_without_default)]
    #[wasm_bindgen(constructor)]
    pub fn new() -> Self {
        Self(Vec::new())
    }

    /// Adds one.
    pub fn add(&mut self, name: String, subject: JsValue, information: JsValue, study: &Study) -> Result<(), JsValue> {
        self.put(name, subject, information, study.0.clone())
    }

    /// The report under `{ at?, seed?, draws?, pairs? }`.
    pub fn finish(self, settings: JsValue) -> Result<JsValue, JsValue> {
        let settings = settings_object(&settings)?;
        if let Some(key) = keys(&settings).find(|key| !QUESTIONS.contains(&key.as_str())) {
            return Err(thrown(&Settings::unknown(format!("nothing of this kind belongs at `settings.{key}`"))));
        }
        let pairs: Option<Vec<[usize; 2]>> = of(&settings, "pairs")?;
        let report = inward_core::compare(&self.0, &questions(&settings)?, pairs.as_deref());
        plain(&report.map_err(|error| thrown(&error))?)
    }

    fn put(&mut self, name: String, subject: JsValue, information: JsValue, study: Inner) -> Result<(), JsValue> {
        let wrong = |key: &str| thrown_within(thrown(&Settings::unknown(misunderstood(key))), &name);
        let absent = |value: &JsValue| value.is_undefined() || value.is_null();
        if !absent(&subject) && subject.as_string().is_none() {
            return Err(wrong("subject"));
        }
        let number = information.as_f64().filter(|value| value.is_finite());
        if !absent(&information) && number.is_none() {
            return Err(wrong("information"));
        }
        self.0.push(Decomposition { name, subject: subject.as_string(), information: number, study });
        Ok(())
    }
}

/// Positions of maps, three numbers each.
pub(crate) fn positions(numbers: &[f64]) -> Vec<Option<Vec3>> {
    numbers.as_chunks::<3>().0.iter().map(|position| Some(Vec3(*position)).filter(|p| p.is_finite())).collect()
}

fn questions(given: &JsValue) -> Result<Questions, JsValue> {
    let usual = Questions::default();
    Ok(Questions {
        at: of(given, "at")?.unwrap_or(usual.at),
        seed: of(given, "seed")?.unwrap_or(usual.seed),
        draws: of(given, "draws")?.unwrap_or(usual.draws),
    })
}

/// A part of an object; `None` where it is left out.
fn of<T: DeserializeOwned>(given: &JsValue, key: &str) -> Result<Option<T>, JsValue> {
    serde_wasm_bindgen::from_value(part(given, key)).map_err(|_| thrown(&Settings::unknown(misunderstood(key))))
}
