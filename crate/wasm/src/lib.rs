//! The engine's WebAssembly bindings: requests in, reports out, as plain JavaScript values. The only place that knows
//! JavaScript; everything it does is one call into `inward_core`.

mod clock;
mod compare;
mod explain;
mod picture;
mod record;
mod row;
mod trust;
mod wire;

use clock::Clock;
use inward_core::fit::BATCH;
use inward_core::{MapReport, Request, Settings, Study as Inner, Vec3};
use js_sys::{Array, Object};
use wasm_bindgen::prelude::*;
use wire::{Inputs, misunderstood, plain, set, thrown};

/// Panic messages go to the console, where the calling script finds them for its copyable details.
#[wasm_bindgen(start)]
fn start() {
    console_error_panic_hook::set_once();
}

/// Short hash of the engine's sources, given by the build tool.
const BUILD: Option<&str> = option_env!("INWARD_BUILD");

/// Name, version and build of the program.
#[wasm_bindgen]
pub fn program() -> Result<JsValue, JsValue> {
    plain(&inward_core::Program { name: "Inward", version: env!("CARGO_PKG_VERSION"), build: BUILD })
}

/// Published heads to choose from, the default one first.
#[wasm_bindgen]
pub fn heads() -> Result<JsValue, JsValue> {
    plain(&inward_core::head::heads())
}

/// Whether the content of a file, a string or bytes, is a table of `electrodes` or of `maps`.
#[wasm_bindgen(js_name = kindOf)]
pub fn kind_of(content: JsValue) -> Result<JsValue, JsValue> {
    let bytes = wire::bytes(&content, "content")?.unwrap_or_default();
    plain(&inward_core::kind(&bytes))
}

/// What a file is by its content: one of the roles that `settings.files` takes.
#[wasm_bindgen(js_name = roleOf)]
pub fn role_of(name: &str, content: JsValue) -> Result<JsValue, JsValue> {
    let bytes = wire::bytes(&content, "content")?.unwrap_or_default();
    plain(&inward_core::role(name, &bytes).map_err(|error| thrown(&error))?)
}

/// SHA-256 of a string or of bytes, in hexadecimal.
#[wasm_bindgen]
pub fn digest(content: JsValue) -> Result<String, JsValue> {
    Ok(inward_core::digest(&wire::bytes(&content, "content")?.unwrap_or_default()))
}

/// Every choice among fixed options with its options in words.
#[wasm_bindgen]
pub fn choices() -> Result<JsValue, JsValue> {
    plain(&inward_core::report::offered())
}

/// The columns of the table of maps, for maps of this unit or of any.
#[wasm_bindgen]
pub fn columns(unit: JsValue) -> Result<JsValue, JsValue> {
    let unit =
        serde_wasm_bindgen::from_value(unit).map_err(|_| thrown(&Settings::unknown(misunderstood("mapUnit"))))?;
    plain(&inward_core::report::columns(unit))
}

/// The report of `{ electrodes?, maps, settings? }` or `{ files: [{ name, content }], settings? }`.
#[wasm_bindgen]
pub fn analyse(request: JsValue) -> Result<JsValue, JsValue> {
    let inputs = Inputs::from_js(&request)?;
    plain(&inward_core::analyse(&inputs.request()).map_err(|error| thrown(&error))?)
}

/// Reads and prepares `{ electrodes?, maps, settings? }` or `{ files: [{ name, content }], settings? }` once, to fit maps one by one.
#[wasm_bindgen]
pub fn open(request: JsValue) -> Result<Study, JsValue> {
    let inputs = Inputs::from_js(&request)?;
    Inner::open(&inputs.request()).map(Study).map_err(|error| thrown(&error))
}

/// A prepared table of maps.
#[wasm_bindgen]
pub struct Study(Inner);

#[wasm_bindgen]
impl Study {
    /// The same tables under other settings; nothing is read again.
    pub fn with(&self, settings: JsValue) -> Result<Study, JsValue> {
        self.0.with(wire::settings(&settings)?).map(Study).map_err(|error| thrown(&error))
    }

    /// The same study with its files under other names, `{ [name]: name }`.
    pub fn renamed(&self, names: JsValue) -> Result<Study, JsValue> {
        let names: Vec<_> = wire::keys(&names)
            .map(|from| {
                let to = wire::part(&names, &from).as_string().unwrap_or_else(|| from.clone());
                (from, to)
            })
            .collect();
        self.0.renamed(&names).map(Study).map_err(|error| thrown(&error))
    }

    /// Other tables as by `open`; what was prepared is used again where head and electrodes are the same.
    pub fn beside(&self, request: JsValue) -> Result<Study, JsValue> {
        let inputs = Inputs::from_js(&request)?;
        self.0.beside(&inputs.request()).map(Study).map_err(|error| thrown(&error))
    }

    /// Number of maps.
    #[wasm_bindgen(getter)]
    pub fn count(&self) -> usize {
        self.0.count()
    }

    /// The head of all fits.
    pub fn head(&self) -> Result<JsValue, JsValue> {
        plain(&self.0.head())
    }

    /// Electrodes with position and value.
    pub fn electrodes(&self) -> Result<JsValue, JsValue> {
        plain(&self.0.electrodes())
    }

    /// What was assumed and what did not match.
    pub fn notes(&self) -> Result<JsValue, JsValue> {
        plain(&self.0.notes())
    }

    /// What was made of the files.
    pub fn understood(&self) -> Result<JsValue, JsValue> {
        plain(&self.0.understood())
    }

    /// The report without its maps.
    pub fn preamble(&self) -> Result<JsValue, JsValue> {
        plain(&self.0.preamble())
    }

    /// The fit of one map.
    pub fn fit(&self, index: JsValue) -> Result<JsValue, JsValue> {
        let index = wire::index(&index, self.0.count())?;
        plain(&self.0.fit(index).map_err(|error| thrown(&error))?)
    }

    /// Fits maps from `first` on until `milliseconds` have passed or none is left; at least a few. So a worker can
    /// answer other messages in between.
    #[wasm_bindgen(js_name = fitWithin)]
    pub fn fit_within(&self, first: usize, milliseconds: f64) -> Result<Array, JsValue> {
        self.within(first, self.0.count(), milliseconds, |report| plain(&report))
    }

    /// The same as lines of a table in pieces, before `last`; what cannot be fitted as in the report.
    #[wasm_bindgen(js_name = rowsWithin)]
    pub fn rows_within(&self, first: usize, last: usize, milliseconds: f64) -> Result<Array, JsValue> {
        self.within(first, last.min(self.0.count()), milliseconds, |report| match report {
            MapReport::Fitted(map) => Ok(row::to_js(&self.0.row(&map))),
            failed => plain(&failed),
        })
    }

    fn within(
        &self,
        first: usize,
        last: usize,
        milliseconds: f64,
        shape: impl Fn(MapReport) -> Result<JsValue, JsValue>,
    ) -> Result<Array, JsValue> {
        let clock = Clock::start();
        let reports = Array::new();
        let mut next = first;
        while next < last {
            let end = last.min(next + BATCH);
            for report in self.0.fit_range(next..end).map_err(|error| thrown(&error))? {
                reports.push(&shape(report)?);
            }
            next = end;
            if clock.milliseconds() >= milliseconds {
                break;
            }
        }
        Ok(reports)
    }

    /// Fits of the maps from `first` to before `last` as numbers alone, eight for each; see `Study::fits` of the core.
    pub fn fits(&self, first: JsValue, last: JsValue) -> Result<Vec<f64>, JsValue> {
        let [first, last] = [first, last].map(|bound| wire::end(&bound, self.0.count()));
        let fits = self.0.fits(first?..last?).map_err(|error| thrown(&error))?;
        Ok(fits.into_iter().flatten().collect())
    }

    /// Small rasters of maps as they are measured; `null` where the electrodes carry no interpolation.
    pub fn thumbnails(&self, indexes: JsValue, size: usize) -> Result<JsValue, JsValue> {
        let list = indexes.dyn_ref::<Array>().ok_or_else(|| thrown(&Settings::unknown(misunderstood("indexes"))))?;
        let indexes = list.iter().map(|index| wire::index(&index, self.0.count())).collect::<Result<Vec<_>, _>>()?;
        let thumbnails = self.0.thumbnails(&indexes, size).map_err(|error| thrown(&error))?;
        Ok(thumbnails.map_or(JsValue::NULL, |thumbnails| picture::small(&thumbnails).into()))
    }

    /// Its maps matched one to one with those of another study; positions are three numbers for each map, not numbers where
    /// it is not fitted; `names` are those of the two in what may be said.
    pub fn matches(
        &self,
        other: &Study,
        own: &[f64],
        others: &[f64],
        names: Option<Vec<String>>,
    ) -> Result<JsValue, JsValue> {
        let [own, others] = [own, others].map(compare::positions);
        let name = |at: usize, otherwise: &'static str| {
            names.as_ref().and_then(|names| names.get(at)).map_or(otherwise, String::as_str)
        };
        let found = self.0.matches(&other.0, [&own, &others], [name(0, "first"), name(1, "second")]);
        plain(&found.map_err(|error| thrown(&error))?)
    }

    /// The numerical rank of its maps, with a note where that is less than their number.
    pub fn rank(&self) -> Result<JsValue, JsValue> {
        plain(&self.0.rank(None))
    }

    /// The fit of one map with what is named added to it: `region`, `populations`, `verdict`, `alternatives`,
    /// `influence`, `what_if`.
    pub fn assess(&self, index: JsValue, what: JsValue) -> Result<JsValue, JsValue> {
        let index = wire::index(&index, self.0.count())?;
        let what = match what.is_undefined() {
            true => Vec::new(),
            false => serde_wasm_bindgen::from_value::<Vec<inward_core::report::Assessment>>(what)
                .map_err(|_| thrown(&Settings::unknown(misunderstood("assess"))))?,
        };
        plain(&self.0.assess(index, &what).map_err(|error| thrown(&error))?)
    }

    /// The response over time; `null` unless the maps are time points. What was fitted before may be given, five numbers for
    /// each map: position in scalp radii, strength, residual variance; NaN for one without a fit.
    pub fn response(&self, fits: Option<Vec<f64>>) -> Result<JsValue, JsValue> {
        let one = |fit: &[f64; 5]| fit[4].is_finite().then(|| (Vec3::new(fit[0], fit[1], fit[2]), fit[3], fit[4]));
        plain(&match fits {
            None => self.0.response(),
            Some(fits) => self.0.response_of(|| fits.as_chunks::<5>().0.iter().map(one).collect()),
        })
    }

    /// One position for the time points from `first` to `last`, both included; `null` unless the maps are time points.
    pub fn fixed(&self, first: JsValue, last: JsValue) -> Result<JsValue, JsValue> {
        let [first, last] = [first, last].map(|index| wire::index(&index, self.0.count()));
        plain(&self.0.fixed(first?, last?).map_err(|error| thrown(&error))?)
    }

    /// The answer for one map in words, numbers and pictures; `null` for a map that cannot be fitted.
    pub fn sheet(&self, index: JsValue) -> Result<JsValue, JsValue> {
        let index = wire::index(&index, self.0.count())?;
        match self.0.fit(index).map_err(|error| thrown(&error))? {
            MapReport::Failed { .. } => Ok(JsValue::NULL),
            MapReport::Fitted(map) => {
                let sheet = plain(&self.0.sheet(index, &map))?;
                let picture = self.0.picture(&map).map_or(JsValue::NULL, |picture| picture::to_js(&picture).into());
                set(&Object::from(sheet.clone()), "picture", picture);
                Ok(sheet)
            }
        }
    }
}

impl Inputs {
    fn request(&self) -> Request<'_> {
        Request {
            electrodes: self.electrodes.as_deref(),
            maps: &self.maps,
            files: self.files.iter().map(|(name, content)| (name.as_str(), content.as_slice())).collect(),
            settings: self.settings.clone(),
            build: BUILD,
        }
    }
}
