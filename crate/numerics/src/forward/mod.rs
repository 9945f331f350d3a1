//! The lead field: the potential at the electrodes per unit moment of a dipole, and its derivatives.
//!
//! Work is done on the unit sphere: p is the dipole's position over the scalp radius R, e an electrode's direction
//! (|e| = 1). By reciprocity the lead field is a gradient, L(p) = κ ∇Φ(u, s), with u = p·p, s = p·e and
//! κ = 1 / (4π σ₁ R²), where σ₁ is the conductivity of the innermost shell. Written in u and s nothing is singular at
//! the centre or at the poles. Φ is harmonic in p, which spares half of its derivatives.
//!
//! - [`Series`]: the infinite sum of Legendre terms, cut off by a bound of its tail; the measure of all else.
//! - [`Images`]: a few image sources whose strengths are solved for, with a proven bound of their error; quick.

mod cut;
mod field;
mod images;
mod lead_field;
mod potential;
mod series;

pub use cut::CutSeries;
pub(crate) use field::{Field, along};
pub use images::Images;
pub use lead_field::LeadField;
pub(crate) use potential::Potential;
pub use series::Series;

/// Largest eccentricity (distance from the centre over the radius of the innermost shell) that sources may have.
pub const MAX_ECCENTRICITY: f64 = 0.98;

/// Largest error bound of the quick lead field, relative to the largest value on the scalp of a radial dipole, that is taken
/// for a head. A tangential dipole reaches at least a third of that value (2 / 3^1.5 = 0.385 in the limit of a flat scalp,
/// 0.34 the least seen over 306 heads), so that no error exceeds 1e-8 of the largest value that it belongs to.
pub const QUICK_TOLERANCE: f64 = 3e-9;

/// The same for searches, which need starts but no digits. Where eight images do not reach it, more of the starts are
/// refined with all digits.
const ROUGH_TOLERANCE: f64 = 1e-3;
