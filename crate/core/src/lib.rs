//! Single-dipole localisation of scalp EEG maps in spherical heads.
//!
//! The science of Inward as a pure library: no files, no clock, no hidden randomness. A map goes one way:
//! bytes → [`read`] → [`understand`] → [`placement`] → [`fit`] (which asks [`forward`]) → [`assess`] → [`report`] and [`scene`].
//! A module imports only from those listed above it here. [`analyse()`] and [`Study`] do the whole way in one call.
//!
//! Every result is the same, bit for bit, natively and in WebAssembly: transcendental functions come from `libm`,
//! sums run in a written order, and no arithmetic depends on the processor it runs on.

pub use inward_numerics::{fit, forward, math, scene, simulate};

pub mod finding;

pub mod electrode;
pub mod head;
pub mod map;

pub mod read;

pub mod understand;

pub mod placement;

pub mod assess;

pub mod report;

mod analyse;

pub use analyse::{Decomposition, Request, Study, THUMBNAIL_SIZES, Thumbnails, analyse, compare, digest, kind, role};
pub use finding::{Choice, Code, Error, Finding, Origin, Place};
pub use math::Vec3;
pub use report::{MapReport, Program, Report, Settings};
