//! What is to be drawn, in unit coordinates: rasters and lines, no colours, no pixels of a screen.

mod contour;
mod disc;
mod picture;
mod raster;
mod spline;

pub use contour::{Contour, contours};
pub use disc::DiscPoint;
pub use picture::{Extremes, Layer, Picture, PictureElectrode, Ring};
pub use raster::{Raster, mean_raster};
pub use spline::Spline;

use disc::{Disc, hull};
