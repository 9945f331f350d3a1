//! The head: the axes of its frame, a sphere fitted to the electrodes and the concentric shells inside it.

mod axes;
mod catalogue;
mod length;
mod orientation;
mod sphere;

pub use axes::{Axes, AxesName};
pub use catalogue::{CatalogueHead, catalogued, heads};
pub use inward_numerics::shells::{Shell, ShellFault, ShellSpec, Shells, Tissue};
pub use length::LengthUnit;
pub use orientation::{Landmarks, Orientation};
pub(crate) use sphere::spread;
pub use sphere::{Sphere, SphereFit};

/// Radius in millimetres of the head that electrodes without measured positions stand on: the outer radius of
/// Cuffin & Cohen 1979 (EEG Clin Neurophysiol 47:132–146).
pub const STANDARD_RADIUS_MM: f64 = 88.0;

/// Radii in millimetres that a head may have, 40 to 120 with what rounded positions add: from infants to large adults.
pub const HEAD_RADII_MM: core::ops::RangeInclusive<f64> = 39.95..=120.05;
