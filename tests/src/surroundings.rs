//! What a person's device asks of a page: dark, forced colours, less motion, paper, zoom.
use crate::Outcome;
use crate::browser::Browser;
use crate::session::Session;
use serde_json::json;

/// Wishes that style sheets can ask for, and the zoom.
#[derive(Clone, Copy, Debug, Default)]
pub struct Surroundings {
    /// A dark colour scheme instead of a light one.
    pub dark: bool,
    /// Few colours, chosen by the person.
    pub forced_colours: bool,
    /// Less motion.
    pub reduced_motion: bool,
    /// The style of paper.
    pub print: bool,
    /// Size of a CSS pixel over the usual; 0 is 1. The window stays: at 4 it is a quarter as wide for the page.
    pub zoom: u32,
}

impl Surroundings {
    /// Tells the browser.
    pub(crate) fn set(self, browser: Browser, session: &Session) -> Outcome<()> {
        match browser {
            Browser::Chromium => self.tell_chromium(session),
            Browser::Firefox => self.tell_firefox(session),
        }
    }

    fn zoom(self) -> u32 {
        self.zoom.max(1)
    }

    fn tell_chromium(self, session: &Session) -> Outcome<()> {
        let feature = |name: &str, on: &str, off: &str, wanted: bool| json!({ "name": name, "value": if wanted { on } else { off } });
        let media = json!({
            "media": if self.print { "print" } else { "" },
            "features": [
                feature("prefers-color-scheme", "dark", "light", self.dark),
                feature("forced-colors", "active", "none", self.forced_colours),
                feature("prefers-reduced-motion", "reduce", "no-preference", self.reduced_motion),
            ],
        });
        session.chromium_command("Emulation.setEmulatedMedia", &media)?;
        if self.zoom() == 1 {
            return session.chromium_command("Emulation.clearDeviceMetricsOverride", &json!({}));
        }
        let (width, height) = (1280 / self.zoom(), 1000 / self.zoom());
        let metrics = json!({ "width": width, "height": height, "deviceScaleFactor": self.zoom(), "mobile": false });
        session.chromium_command("Emulation.setDeviceMetricsOverride", &metrics)
    }

    fn tell_firefox(self, session: &Session) -> Outcome<()> {
        // The keyboard goes back to the page. 0 is dark and 1 light; 2 forces the person's colours on every page, 0 on none.
        let script = format!(
            "Services.prefs.setIntPref('layout.css.prefers-color-scheme.content-override', {});\
             Services.prefs.setIntPref('browser.display.document_color_use', {});\
             Services.prefs.setIntPref('ui.prefersReducedMotion', {});\
             const browser = Services.wm.getMostRecentWindow('navigator:browser').gBrowser.selectedBrowser;\
             browser.browsingContext.top.mediumOverride = {};\
             browser.fullZoom = {};\
             browser.focus();",
            i32::from(!self.dark),
            if self.forced_colours { 2 } else { 0 },
            i32::from(self.reduced_motion),
            if self.print { "'print'" } else { "''" },
            self.zoom(),
        );
        session.run_in_firefox(&script).map(|_| ())
    }
}
