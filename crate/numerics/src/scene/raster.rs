use super::disc::Fence;
use super::picture::MARGIN;
use super::{Disc, DiscPoint, Spline, hull};
use crate::math::{Vec3, dot};

/// A small square raster of many maps at the same electrodes: their splines meet every pixel in the same kernels, so that
/// these are computed once and a map costs a product of matrix and vector.
#[derive(Clone, Debug)]
pub struct Raster {
    size: usize,
    outline: Vec<DiscPoint>,
    /// Pixels that are painted.
    pixels: Vec<usize>,
    /// A row of kernels for each of them.
    kernels: Vec<f64>,
}

impl Raster {
    /// Prepares a raster with this many rows and columns; `electrodes` are directions from the centre and whether the
    /// electrode is used. It paints where a [`super::Picture`] does.
    pub fn new(spline: &Spline, electrodes: impl Iterator<Item = (Vec3, bool)> + Clone, size: usize) -> Self {
        let disc = Disc::holding(electrodes.clone().map(|(direction, _)| direction));
        let used = electrodes.filter(|(_, used)| *used).map(|(direction, _)| disc.project(direction));
        let outline = hull(&used.collect::<Vec<_>>());
        let fence = Fence::new(&outline, MARGIN);
        let place = |index: usize| (2.0 * index as f64 + 1.0) / size as f64 - 1.0;
        let (mut pixels, mut kernels) = (Vec::new(), Vec::new());
        for pixel in 0..size * size {
            let point = [place(pixel % size), -place(pixel / size)];
            if fence.holds(point) {
                pixels.push(pixel);
                kernels.extend(spline.kernels(disc.direction(point)));
            }
        }
        Self { size, outline, pixels, kernels }
    }

    /// Rows and columns.
    pub fn size(&self) -> usize {
        self.size
    }

    /// Hull of the used electrodes, counter-clockwise.
    pub fn outline(&self) -> &[DiscPoint] {
        &self.outline
    }

    /// The values of a map, given at the used electrodes; NaN where nothing is painted.
    pub fn paint(&self, spline: &Spline, map: &[f64]) -> Vec<f32> {
        let (constant, coefficients) = spline.coefficients(map);
        let mut raster = vec![f32::NAN; self.size * self.size];
        for (&pixel, kernels) in self.pixels.iter().zip(self.kernels.chunks_exact(map.len())) {
            raster[pixel] = (constant + dot(kernels, &coefficients)) as f32;
        }
        raster
    }
}
