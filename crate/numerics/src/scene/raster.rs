use super::disc::Fence;
use super::picture::MARGIN;
use super::{Disc, DiscPoint, Spline, hull};
use crate::math::{Vec3, dot};

/// A small square raster of many maps at the same electrodes: their splines meet every pixel in the same kernels, so that
/// these are computed once and a map costs a product of matrix and vector.
#[derive(Clone, Debug)]
pub struct Raster {
    size: usize,
    rim_degrees: f64,
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
        Self { size, rim_degrees: disc.rim_degrees(), outline, pixels, kernels }
    }

    /// Rows and columns.
    pub fn size(&self) -> usize {
        self.size
    }

    /// Angle from the top of the head at the rim of the disc.
    pub fn rim_degrees(&self) -> f64 {
        self.rim_degrees
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

/// The mean of rasters of several heads on one disc, NaN where one of them is; each comes with the angle at its rim
/// ([`Raster::rim_degrees`]), and the mean has the widest. A map's sign being arbitrary, each is turned so that it agrees with
/// the mean: signs are turned until none changes, which lets no turn of one raster raise the power of the mean.
pub fn mean_raster(rasters: &[(&[f32], f64)], size: usize) -> Vec<f32> {
    let rim = rasters.iter().fold(0.0f64, |most, (_, rim)| most.max(*rim));
    let place = |pixel: usize| (2.0 * pixel as f64 + 1.0) / size as f64 - 1.0;
    let seen = |raster: &[f32], own: f64, pixel: usize| {
        if own == rim {
            return f64::from(raster[pixel]);
        }
        // Between the four pixels around it; NaN where one of them is.
        let at = |one: usize| (place(one) * rim / own + 1.0) * size as f64 / 2.0 - 0.5;
        let (x, y) = (at(pixel % size), at(pixel / size));
        let (left, top) = (x.floor(), y.floor());
        let value = |x: f64, y: f64| match (0.0..size as f64).contains(&x) && (0.0..size as f64).contains(&y) {
            true => f64::from(raster[y as usize * size + x as usize]),
            false => f64::NAN,
        };
        let row = |y: f64| value(left, y) * (1.0 - x + left) + value(left + 1.0, y) * (x - left);
        row(top) * (1.0 - y + top) + row(top + 1.0) * (y - top)
    };
    let all: Vec<Vec<f64>> =
        rasters.iter().map(|(raster, own)| (0..size * size).map(|pixel| seen(raster, *own, pixel)).collect()).collect();
    let common: Vec<usize> = (0..size * size).filter(|&pixel| all.iter().all(|map| !map[pixel].is_nan())).collect();
    let maps: Vec<Vec<f64>> = all.iter().map(|map| common.iter().map(|&pixel| map[pixel]).collect()).collect();
    // The first one's sign holds at first; each next one agrees with those before it.
    let mut signs: Vec<f64> = Vec::with_capacity(maps.len());
    let mut sum = vec![0.0; common.len()];
    let add = |sum: &mut [f64], map: &[f64], factor: f64| {
        sum.iter_mut().zip(map).for_each(|(sum, value)| *sum += factor * value);
    };
    for map in &maps {
        let sign = if dot(&sum, map) < 0.0 { -1.0 } else { 1.0 };
        add(&mut sum, map, sign);
        signs.push(sign);
    }
    for _ in 0..maps.len() {
        let mut turned = false;
        for (map, sign) in maps.iter().zip(&mut signs) {
            if *sign * dot(&sum, map) < dot(map, map) * (1.0 - 1e-9) {
                *sign = -*sign;
                add(&mut sum, map, 2.0 * *sign);
                turned = true;
            }
        }
        if !turned {
            break;
        }
    }
    let mut mean = vec![f32::NAN; size * size];
    common.iter().zip(sum).for_each(|(&pixel, sum)| mean[pixel] = (sum / maps.len() as f64) as f32);
    mean
}
