//! Lines of the table of maps: numbers and words of each in one piece. Key by key, twenty keys cross to JavaScript more
//! slowly than a map is fitted.

use inward_core::report::MapRow;
use js_sys::Array;
use wasm_bindgen::JsValue;

/// `[numbers, words]`, from which `www/engine/row.js` makes the row; absent numbers are NaN, words are divided by NUL.
pub(crate) fn to_js(row: &MapRow) -> JsValue {
    let plain = [
        row.rv,
        row.adjusted_rv,
        row.degrees_of_freedom as f64,
        row.depth_mm,
        row.eccentricity,
        row.strength,
        row.radial_share.unwrap_or(f64::NAN),
        f64::from(u8::from(row.at_boundary)),
        row.power,
        row.variance.unwrap_or(f64::NAN),
        f64::from(u8::from(row.flipped)),
    ];
    let vectors = [row.canonical_mm, row.canonical_direction, row.position_mm];
    let numbers = plain.into_iter().chain(vectors.into_iter().flat_map(|vector| vector.0));
    let numbers: Array = numbers.map(JsValue::from).collect();
    let words = [&row.name, row.nearest_site.unwrap_or_default(), row.side, row.region];
    let words = words.into_iter().chain(row.cells.iter().map(String::as_str));
    let words: Vec<String> = words.map(|word| word.replace('\0', "\u{fffd}")).collect();
    Array::of2(&numbers, &words.join("\0").into()).into()
}
