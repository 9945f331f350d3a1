//! Shared helpers of the checks: browsers, the page, Node, outside values, invented maps.
mod attack;
mod bitmap;
mod browser;
mod canary;
mod draw;
mod driver;
mod electrodes;
mod folder;
mod heavy;
pub mod level5;
mod mixture;
mod multistart;
mod mutate;
mod node;
pub mod packed;
mod page;
mod paper;
mod picture;
mod place;
mod program;
mod series;
mod session;
mod shapes;
mod site;
mod surroundings;
mod tables;
pub mod truth;
mod variant;

pub use attack::attack;
pub use bitmap::Bitmap;
pub use browser::Browser;
pub use canary::Canary;
pub use draw::Draw;
pub use electrodes::Electrodes;
pub use folder::Folder;
pub use heavy::{Heavy, archive, checksum, heavy};
pub use mixture::Mixture;
pub use multistart::MultiStart;
pub use mutate::mutate;
pub use node::Node;
pub use page::{DroppedFile, Page};
pub use paper::Paper;
pub use picture::Picture;
pub use place::{data, dist_file, example, sample, samples, screenshot_file, tests_folder};
pub use series::PlainSeries;
pub use session::{CONTROL, Element, Session, TAB};
pub use shapes::{Shape, shapes};
pub use site::Site;
pub use surroundings::Surroundings;
pub use tables::{electrodes_and_maps, understood};
pub use variant::Variant;

/// Text that went wrong on the way to a browser, a driver or Node.
pub type Outcome<T> = Result<T, String>;

/// Makes two tests of each check, one per browser; the check takes a [`Browser`].
#[macro_export]
macro_rules! in_both_browsers {
    ($($(#[$note:meta])* $check:ident),+ $(,)?) => {
        mod chromium { $( $(#[$note])* #[test] fn $check() { super::$check($crate::Browser::Chromium); } )+ }
        mod firefox { $( $(#[$note])* #[test] fn $check() { super::$check($crate::Browser::Firefox); } )+ }
    };
}
