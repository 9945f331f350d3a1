//! Vectors, small linear algebra and least squares; knows nothing of heads.

mod assignment;
mod cholesky;
pub mod lanes;
mod least_squares;
mod rank;
mod resample;
mod sum;
mod symmetric;
mod vec3;

pub use assignment::assignment;
pub use cholesky::Cholesky;
pub use lanes::{Double, Lanes, Single};
pub use least_squares::least_squares;
pub use rank::rank;
pub use resample::{Resampler, select};
pub use sum::{centre, dot, mean};
pub use symmetric::{Eigen, Factor3, Symmetric3};
pub use vec3::Vec3;
