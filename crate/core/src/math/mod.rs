//! Vectors, small linear algebra and least squares; knows nothing of heads.

mod cholesky;
mod least_squares;
mod sum;
mod symmetric;
mod vec3;

pub use cholesky::Cholesky;
pub use least_squares::least_squares;
pub use sum::{centre, dot, dot_f32, mean};
pub use symmetric::{Eigen, Symmetric3};
pub use vec3::Vec3;
