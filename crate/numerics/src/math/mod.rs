//! Vectors, small linear algebra and least squares; knows nothing of heads.

mod assignment;
mod autocorrelation;
mod cholesky;
mod cluster;
mod ellipsoid;
pub mod lanes;
mod least_squares;
mod order;
mod quantile;
mod rank;
mod resample;
mod stream;
mod sum;
mod symmetric;
mod vec3;

pub use assignment::assignment;
pub use autocorrelation::{Autocorrelation, neighbours};
pub use cholesky::Cholesky;
pub use cluster::{Hierarchy, silhouettes};
pub use ellipsoid::Ellipsoid;
pub use lanes::{Double, Lanes, Single};
pub use least_squares::least_squares;
pub use order::{order, sort_by_number};
pub use quantile::{chi_squared_3_quantile, f_quantile, normal_above};
pub use rank::rank;
pub use resample::{Resampler, select};
pub use stream::Stream;
pub use sum::{centre, dot, mean};
pub use symmetric::{Eigen, Factor3, Symmetric3};
pub use vec3::Vec3;
