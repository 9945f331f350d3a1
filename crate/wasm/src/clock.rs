//! The time that a call has taken, so that long work can be cut into slices.

use wasm_bindgen::JsCast;
use web_sys::WorkerGlobalScope;

/// Runs since it was started.
pub(crate) struct Clock {
    begin: f64,
}

impl Clock {
    pub(crate) fn start() -> Self {
        Self { begin: now() }
    }

    pub(crate) fn milliseconds(&self) -> f64 {
        now() - self.begin
    }
}

/// The worker's steady clock; elsewhere, as in Node, the time of day.
fn now() -> f64 {
    js_sys::global()
        .dyn_into::<WorkerGlobalScope>()
        .ok()
        .and_then(|scope| scope.performance())
        .map_or_else(js_sys::Date::now, |clock| clock.now())
}
