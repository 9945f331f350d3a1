//! What fits are worth: residual variance adjusted for the degrees of freedom, how many of many are near-dipolar, how a map
//! stands among simulated ones, what it may count as, and which dipoles of several people lie together.

mod grouping;
mod origin;
mod reference;
mod share;
mod verdict;

pub use grouping::{CANONICAL_RADIUS_MM, Grouping, MOST_GROUPS};
pub use origin::{Hint, hints};
pub use reference::Reference;
pub use share::Sample;
pub use verdict::{Bar, Judged, Reason, ReasonCode, Word, lone_share, usual_spacing_deg};

/// Degrees of freedom of one dipole's fit to `electrodes` average-referenced values: one goes with the reference, six
/// with position and moment.
pub fn degrees_of_freedom(electrodes: usize) -> usize {
    electrodes.saturating_sub(7)
}

/// Residual variance as a ratio of variances: [RSS / (N − 7)] / [|d|² / (N − 1)], the complement of Ezekiel's adjusted R²
/// (Ezekiel 1930, Methods of Correlation Analysis).
pub fn adjusted_residual_variance(residual_variance: f64, electrodes: usize) -> f64 {
    residual_variance * electrodes.saturating_sub(1) as f64 / degrees_of_freedom(electrodes).max(1) as f64
}
