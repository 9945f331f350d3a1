//! Requests from JavaScript, reports and errors to JavaScript.

use inward_core::report::{ErrorReport, within_decomposition};
use inward_core::{Code, Error, Finding, Place, Settings};
use js_sys::{Array, Object, Reflect, Uint8Array};
use serde::Serialize;
use wasm_bindgen::prelude::*;

/// A request with its bytes.
pub(crate) struct Inputs {
    pub electrodes: Option<Vec<u8>>,
    pub maps: Vec<u8>,
    pub files: Vec<(String, Vec<u8>)>,
    pub settings: Settings,
}

impl Inputs {
    /// Takes `{ electrodes?, maps, settings? }` or `{ files: [{ name, content }], settings? }`; what else stands in it is refused.
    pub(crate) fn from_js(request: &JsValue) -> Result<Self, JsValue> {
        if !request.is_object() {
            return Err(thrown(&Settings::unknown("the request is not an object")));
        }
        for key in Object::keys(request.unchecked_ref::<Object>()).iter() {
            let key = key.as_string().unwrap_or_default();
            if !["electrodes", "maps", "files", "settings"].contains(&key.as_str()) {
                return Err(thrown(&Settings::unknown(format!("unknown part `{key}` of the request"))));
            }
        }
        let part = |name: &str| Reflect::get(request, &name.into()).unwrap_or(JsValue::UNDEFINED);
        let settings = settings(&part("settings"))?;
        let files = files(&part("files"))?;
        if !files.is_empty() {
            if !part("electrodes").is_undefined() || !part("maps").is_undefined() {
                return Err(thrown(&Settings::unknown(
                    "`files` stand in place of `electrodes` and `maps`, not beside them",
                )));
            }
            return Ok(Self { electrodes: None, maps: Vec::new(), files, settings });
        }
        let maps = bytes(&part("maps"), "maps")?
            .ok_or_else(|| thrown(&Finding::new(Code::InputEmpty).at(Place::input("maps")).into()))?;
        Ok(Self { electrodes: bytes(&part("electrodes"), "electrodes")?, maps, files, settings })
    }
}

/// Names and contents of `[{ name, content }]`.
fn files(given: &JsValue) -> Result<Vec<(String, Vec<u8>)>, JsValue> {
    if given.is_undefined() || given.is_null() {
        return Ok(Vec::new());
    }
    let unknown = || thrown(&Settings::unknown(misunderstood("files")));
    let list = given.dyn_ref::<Array>().ok_or_else(unknown)?;
    let file = |given: JsValue| {
        let part = |name: &str| Reflect::get(&given, &name.into()).unwrap_or(JsValue::UNDEFINED);
        let alone = given.is_object() && keys(&given).all(|key| ["name", "content"].contains(&key.as_str()));
        let name = part("name").as_string().filter(|_| alone).ok_or_else(unknown)?;
        let content = bytes(&part("content"), "content")?.ok_or_else(unknown)?;
        Ok((name, content))
    };
    if list.length() == 0 {
        return Err(thrown(&Finding::new(Code::MapsMissing).at(Place::input("maps")).into()));
    }
    list.iter().map(file).collect()
}

/// The settings. Keys that are `undefined` are as good as absent; `serde_wasm_bindgen` asks objects for the keys it knows,
/// so that others are looked for here.
pub(crate) fn settings(given: &JsValue) -> Result<Settings, JsValue> {
    if given.is_undefined() || given.is_null() {
        return Ok(Settings::default());
    }
    let unknown = |problem: String| thrown(&Settings::unknown(problem));
    if !given.is_object() {
        return Err(unknown(misunderstood("settings")));
    }
    let given = without_undefined(given);
    let settings: Settings = serde_wasm_bindgen::from_value(given.clone()).map_err(|_| {
        let alone = |key: &String| {
            let one = Object::new();
            set(&one, key, Reflect::get(&given, &key.as_str().into()).unwrap_or(JsValue::UNDEFINED));
            serde_wasm_bindgen::from_value::<Settings>(one.into()).is_err()
        };
        unknown(misunderstood(&keys(&given).find(alone).unwrap_or_else(|| "settings".into())))
    })?;
    match misplaced(&given, &plain(&settings)?) {
        Some(path) => Err(unknown(format!("nothing of this kind belongs at `settings{path}`"))),
        None => Ok(settings),
    }
}

/// What is said of a value of the wrong kind.
pub(crate) fn misunderstood(key: &str) -> String {
    format!("the value of `{key}` is not one that it can have")
}

/// The settings as an object of its own; empty where they are left out.
pub(crate) fn settings_object(given: &JsValue) -> Result<Object, JsValue> {
    if given.is_undefined() || given.is_null() {
        return Ok(Object::new());
    }
    if !given.is_object() || Array::is_array(given) {
        return Err(thrown(&Settings::unknown(misunderstood("settings"))));
    }
    Ok(Object::assign(&Object::new(), given.unchecked_ref::<Object>()))
}

/// A property; `undefined` where there is none, and of what has none.
pub(crate) fn part(of: &JsValue, name: &str) -> JsValue {
    Reflect::get(of, &name.into()).unwrap_or(JsValue::UNDEFINED)
}

pub(crate) fn keys(object: &JsValue) -> impl Iterator<Item = String> {
    let object = if object.is_object() { object.clone() } else { Object::new().into() };
    Object::keys(object.unchecked_ref::<Object>())
        .iter()
        .filter_map(|key| key.as_string())
        .collect::<Vec<_>>()
        .into_iter()
}

/// A copy of a plain object, and of those in it, without keys that are `undefined`; anything else as it is.
fn without_undefined(value: &JsValue) -> JsValue {
    if !value.is_object() || Array::is_array(value) || value.is_instance_of::<js_sys::Map>() {
        return value.clone();
    }
    let copy = Object::new();
    for key in keys(value) {
        let part = Reflect::get(value, &key.as_str().into()).unwrap_or(JsValue::UNDEFINED);
        if !part.is_undefined() {
            set(&copy, &key, without_undefined(&part));
        }
    }
    copy.into()
}

/// The path of a key in `given` that `understood` lacks, or of a list where it has none.
fn misplaced(given: &JsValue, understood: &JsValue) -> Option<String> {
    if !given.is_object() {
        return None;
    }
    let alike = understood.is_object() && Array::is_array(given) == Array::is_array(understood);
    if !alike || given.is_instance_of::<js_sys::Map>() {
        return Some(String::new());
    }
    keys(given).find_map(|key| {
        let part = |of: &JsValue| Reflect::get(of, &key.as_str().into()).unwrap_or(JsValue::UNDEFINED);
        let known = Reflect::has(understood, &key.as_str().into()).unwrap_or(false);
        let rest = if known { misplaced(&part(given), &part(understood))? } else { String::new() };
        Some(format!(".{key}{rest}"))
    })
}

/// The content of an input, a string or bytes; `None` where it is left out.
pub(crate) fn bytes(value: &JsValue, name: &str) -> Result<Option<Vec<u8>>, JsValue> {
    if value.is_undefined() || value.is_null() {
        Ok(None)
    } else if let Some(text) = value.as_string() {
        Ok(Some(text.into_bytes()))
    } else if let Some(array) = value.dyn_ref::<Uint8Array>() {
        Ok(Some(array.to_vec()))
    } else {
        Err(thrown(&Settings::unknown(format!("`{name}` is neither a string nor a Uint8Array"))))
    }
}

/// The number of a map; what is no whole number from 0 on names no map.
pub(crate) fn index(value: &JsValue, count: usize) -> Result<usize, JsValue> {
    match value.as_f64() {
        Some(number) if number >= 0.0 && number < count as f64 && number.fract() == 0.0 => Ok(number as usize),
        number => {
            let written = number.map_or_else(|| "of that kind".into(), |number| number.to_string());
            let finding = Finding::new(Code::MapIndex).at(Place::input("maps"));
            Err(thrown(&finding.with("index", written).with("count", count).into()))
        }
    }
}

/// The same for where maps end: one after the last.
pub(crate) fn end(value: &JsValue, count: usize) -> Result<usize, JsValue> {
    if value.as_f64() == Some(count as f64) { Ok(count) } else { index(value, count) }
}

/// A value as plain objects, arrays, numbers, strings, booleans and `null`.
pub(crate) fn plain(value: &impl Serialize) -> Result<JsValue, JsValue> {
    Ok(value.serialize(&serde_wasm_bindgen::Serializer::json_compatible())?)
}

/// A JavaScript `Error` with `code`, `message`, `where` and `hint`.
pub(crate) fn thrown(error: &Error) -> JsValue {
    let report = ErrorReport::from(error);
    let thrown = js_sys::Error::new(&report.message);
    if let Ok(place) = plain(&report.place) {
        set(&thrown, "where", place);
    }
    set(&thrown, "code", report.code.as_str().into());
    set(&thrown, "hint", report.hint.into());
    thrown.into()
}

/// An error that was thrown, naming the decomposition it is about.
pub(crate) fn thrown_within(error: JsValue, decomposition: &str) -> JsValue {
    if let Some(error) = error.dyn_ref::<js_sys::Error>() {
        error.set_message(&within_decomposition(decomposition, &String::from(error.message())));
        set(error.unchecked_ref::<Object>(), "decomposition", decomposition.into());
    }
    error
}

/// Sets a property of an object that was just made here, which cannot fail.
pub(crate) fn set(object: &Object, name: &str, value: JsValue) {
    let done = Reflect::set(object, &name.into(), &value);
    debug_assert!(done.is_ok());
}
