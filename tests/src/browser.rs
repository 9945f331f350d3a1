//! The two browsers that the page is delivered to.
use crate::Outcome;
use crate::driver::Driver;
use crate::folder::Folder;
use crate::program::find_program;
use crate::session::Session;
use serde_json::{Value, json};
use std::path::Path;

/// How often a window is started at most.
const STARTS: usize = 4;

/// A browser to test in.
#[derive(Clone, Copy, Debug, PartialEq)]
pub enum Browser {
    /// Chromium, by chromedriver.
    Chromium,
    /// Firefox, by geckodriver.
    Firefox,
}

impl Browser {
    /// Name for file names and messages.
    pub fn name(self) -> &'static str {
        match self {
            Self::Chromium => "chromium",
            Self::Firefox => "firefox",
        }
    }

    /// A window of this browser without a screen, with a profile of its own; panics where something is missing. Where
    /// other windows start at the same time, a server can find its port taken: a start that fails is tried again.
    pub fn window(self) -> Session {
        (1..STARTS)
            .find_map(|_| self.started().ok())
            .unwrap_or_else(|| self.started().unwrap_or_else(|why| panic!("{}: {why}", self.name())))
    }

    fn started(self) -> Outcome<Session> {
        let folder = Folder::fresh(self.name());
        let profile = folder.path().join("profile");
        let downloads = folder.path().join("downloads");
        for each in [&profile, &downloads] {
            std::fs::create_dir_all(each).expect("a temporary folder can be made");
        }
        let (driver, capabilities) = match self {
            Self::Chromium => chromium(&profile, &downloads)?,
            Self::Firefox => firefox(&profile, &downloads)?,
        };
        Session::open(driver, &capabilities, folder)
    }
}

fn chromium(profile: &Path, downloads: &Path) -> Outcome<(Driver, Value)> {
    let browser = find_program("INWARD_CHROMIUM", &["chromium", "chromium-browser", "google-chrome"]);
    let server = find_program("INWARD_CHROMEDRIVER", &["chromedriver"]);
    let driver = Driver::start(&server, &["--port=0".into()], "started successfully on port ")?;
    let capabilities = json!({
        "browserName": "chrome",
        "goog:chromeOptions": {
            "binary": browser,
            "args": [
                "--headless=new",
                // Tests may run as root, and in containers with little shared memory.
                "--no-sandbox",
                "--disable-dev-shm-usage",
                "--disable-gpu",
                "--no-first-run",
                "--window-size=1280,1000",
                format!("--user-data-dir={}", profile.display()),
            ],
            "prefs": {
                "download.default_directory": downloads,
                "download.prompt_for_download": false,
                // One after the other without a question.
                "profile.default_content_setting_values.automatic_downloads": 1,
            },
        },
    });
    Ok((driver, capabilities))
}

fn firefox(profile: &Path, downloads: &Path) -> Outcome<(Driver, Value)> {
    let browser = find_program("INWARD_FIREFOX", &["firefox-esr", "firefox"]);
    let server = find_program("INWARD_GECKODRIVER", &["geckodriver"]);
    let arguments = [
        "--port".into(),
        "0".into(),
        "--websocket-port".into(),
        "0".into(),
        "--profile-root".into(),
        profile.display().to_string(),
        // Dark, forced colours and the like are set from the window around the page.
        "--allow-system-access".into(),
    ];
    let driver = Driver::start(&server, &arguments, "Listening on 127.0.0.1:")?;
    let capabilities = json!({
        "browserName": "firefox",
        "moz:firefoxOptions": {
            "binary": browser,
            "args": ["-headless", "--width=1280", "--height=1000"],
            "prefs": {
                "browser.download.folderList": 2,
                "browser.download.dir": downloads,
                "browser.download.useDownloadDir": true,
                // A panel that opens by itself takes the next click or key.
                "browser.download.alwaysOpenPanel": false,
                "browser.helperApps.neverAsk.saveToDisk": "application/json,text/plain",
            },
        },
    });
    Ok((driver, capabilities))
}
