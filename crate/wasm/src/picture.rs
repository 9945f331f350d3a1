//! Pictures as typed arrays.

use crate::wire::set;
use inward_core::Thumbnails;
use inward_core::scene::{Contour, Layer, Picture};
use js_sys::{Array, Float32Array, Float64Array, Object};
use wasm_bindgen::JsValue;

/// The picture as the page's painters take it.
pub(crate) fn to_js(picture: &Picture) -> Object {
    let layers = [("measured", &picture.measured), ("projected", &picture.projected), ("residual", &picture.residual)];
    let each = |make: &dyn Fn(&Layer) -> JsValue| {
        object(&layers.iter().map(|(name, layer)| (*name, make(layer))).collect::<Vec<_>>()).into()
    };
    let rings = picture
        .rings
        .iter()
        .map(|ring| object(&[("degrees", ring.degrees.into()), ("radius", ring.radius.into())]))
        .collect::<Array>();
    let electrodes = picture
        .electrodes
        .iter()
        .map(|electrode| {
            let [x, y] = electrode.place;
            let label = electrode.label.as_str().into();
            object(&[("label", label), ("x", x.into()), ("y", y.into()), ("used", electrode.used.into())])
        })
        .collect::<Array>();
    let dipole = picture.dipole.map_or(JsValue::NULL, |[x, y]| {
        let [dx, dy] = picture.axis;
        object(&[("x", x.into()), ("y", y.into()), ("dx", dx.into()), ("dy", dy.into())]).into()
    });
    let extremes = |layer: &Layer| {
        object(&[("max", (layer.extremes.max as u32).into()), ("min", (layer.extremes.min as u32).into())]).into()
    };
    let result = object(&[
        ("size", (picture.size as u32).into()),
        ("limit", picture.limit.into()),
        ("stretch", picture.stretch.into()),
        ("levels", Float64Array::from(&picture.levels[..]).into()),
        ("contours", each(&|layer| layer.contours.iter().map(contour).collect::<Array>().into())),
        ("extremes", each(&extremes)),
        ("outline", points(&picture.outline).into()),
        ("rings", rings.into()),
        ("electrodes", electrodes.into()),
        ("dipole", dipole),
    ]);
    for (name, layer) in layers {
        set(&result, name, Float32Array::from(&layer.raster[..]).into());
    }
    result
}

/// Thumbnails, likewise.
pub(crate) fn small(thumbnails: &Thumbnails) -> Object {
    let measured = thumbnails.measured.iter().map(|raster| JsValue::from(Float32Array::from(&raster[..])));
    object(&[
        ("size", (thumbnails.size as u32).into()),
        ("rim_degrees", thumbnails.rim_degrees.into()),
        ("outline", points(&thumbnails.outline).into()),
        ("measured", measured.collect::<Array>().into()),
        ("limit", thumbnails.limit.iter().map(|limit| JsValue::from(*limit)).collect::<Array>().into()),
    ])
}

/// A contour line.
pub(crate) fn contour(contour: &Contour) -> Object {
    object(&[("level", contour.level.into()), ("points", points(&contour.points).into())])
}

fn points(points: &[[f64; 2]]) -> Float32Array {
    let flat: Vec<f32> = points.iter().flatten().map(|v| *v as f32).collect();
    Float32Array::from(&flat[..])
}

fn object(entries: &[(&str, JsValue)]) -> Object {
    let object = Object::new();
    for (name, value) in entries {
        set(&object, name, value.clone());
    }
    object
}
