use super::disc::Fence;
use super::{Contour, Disc, DiscPoint, Spline, contours, hull};
use crate::math::Vec3;

/// Three maps of one fit on the disc, with one scale.
#[derive(Clone, Debug)]
pub struct Picture {
    /// Rasters have this many rows and columns, the first row at the front; their centres span the square −1 … 1.
    pub size: usize,
    /// Shared scale: −limit … limit.
    pub limit: f64,
    /// Factor for the left-over map so that its pattern shows: 1, 2, 5, 10, … 5000; not applied to its raster.
    pub stretch: f64,
    /// Levels of the contour lines of the first two maps; those of the left-over map are divided by the stretch.
    pub levels: Vec<f64>,
    /// The map.
    pub measured: Layer,
    /// The dipole's map.
    pub projected: Layer,
    /// What is left over.
    pub residual: Layer,
    /// Hull of the used electrodes, counter-clockwise: nothing is painted outside it.
    pub outline: Vec<DiscPoint>,
    /// Circles of equal angle from the top of the head.
    pub rings: Vec<Ring>,
    /// All electrodes.
    pub electrodes: Vec<PictureElectrode>,
    /// Where the equivalent position lies on the disc; absent near the centre of the head and below the rim.
    pub dipole: Option<DiscPoint>,
    /// The horizontal part of the dipole's axis, at most of length 1.
    pub axis: DiscPoint,
}

/// A map as raster and lines, reaching a little beyond the outline so that its edge can be cut smoothly.
#[derive(Clone, Debug)]
pub struct Layer {
    /// Values over the limit of the picture; NaN well outside the outline.
    pub raster: Vec<f32>,
    /// Contour lines.
    pub contours: Vec<Contour>,
    /// Electrodes with the largest and the smallest value.
    pub extremes: Extremes,
}

/// Indices into the electrodes of the picture.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub struct Extremes {
    /// Largest value.
    pub max: usize,
    /// Smallest value.
    pub min: usize,
}

/// A circle about the top of the head.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Ring {
    /// Angle from the top.
    pub degrees: f64,
    /// Radius on the disc.
    pub radius: f64,
}

/// An electrode on the disc.
#[derive(Clone, Debug, PartialEq)]
pub struct PictureElectrode {
    /// Its label.
    pub label: String,
    /// Its place.
    pub place: DiscPoint,
    /// Whether the fit uses it.
    pub used: bool,
}

/// Rows and columns of the rasters.
const SIZE: usize = 96;

/// How far beyond the outline the maps are computed, on the disc: two pixels.
pub(super) const MARGIN: f64 = 4.0 / SIZE as f64;

/// Contour lines on each side of zero.
const LEVELS: usize = 5;

impl Picture {
    /// Draws the values at the used electrodes on a scale of −limit … limit. `electrodes` are labels, directions from the
    /// centre and whether the electrode is used.
    pub fn new(
        spline: &Spline,
        electrodes: Vec<(String, Vec3, bool)>,
        [measured, projected, residual]: [&[f64]; 3],
        limit: f64,
        position: Option<Vec3>,
        direction: Vec3,
    ) -> Self {
        let disc = Disc::holding(electrodes.iter().map(|(_, direction, _)| *direction));
        let electrodes: Vec<PictureElectrode> = electrodes
            .into_iter()
            .map(|(label, direction, used)| PictureElectrode { label, place: disc.project(direction), used })
            .collect();
        let used: Vec<usize> = (0..electrodes.len()).filter(|&i| electrodes[i].used).collect();
        let points: Vec<DiscPoint> = used.iter().map(|&i| electrodes[i].place).collect();
        let outline = hull(&points);

        let coefficients = [measured, projected, residual].map(|map| spline.coefficients(map));
        let place = |index: usize| (2.0 * index as f64 + 1.0) / SIZE as f64 - 1.0;
        let mut rasters = [(); 3].map(|()| vec![f64::NAN; SIZE * SIZE]);
        let fence = Fence::new(&outline, MARGIN);
        for pixel in 0..SIZE * SIZE {
            let point = [place(pixel % SIZE), -place(pixel / SIZE)];
            if fence.holds(point) {
                let values = spline.values(&coefficients, disc.direction(point));
                rasters.iter_mut().zip(values).for_each(|(raster, value)| raster[pixel] = value);
            }
        }

        let largest = |map: &[f64]| map.iter().fold(0.0f64, |most, v| most.max(v.abs()));
        let stretch = stretch(limit, largest(residual));
        let levels: Vec<f64> = (1..=LEVELS)
            .flat_map(|k| [-1.0, 1.0].map(|sign| sign * limit * (k as f64 - 0.5) / LEVELS as f64))
            .collect();
        let layer = |values: &[f64], raster: &[f64], stretch: f64| {
            let levels: Vec<f64> = levels.iter().map(|level| level / stretch).collect();
            Layer {
                raster: raster.iter().map(|value| (value / limit) as f32).collect(),
                contours: contours(raster, SIZE, &levels),
                extremes: extremes(values, &used),
            }
        };
        Self {
            size: SIZE,
            limit,
            stretch,
            measured: layer(measured, &rasters[0], 1.0),
            projected: layer(projected, &rasters[1], 1.0),
            residual: layer(residual, &rasters[2], stretch),
            levels,
            outline,
            rings: [30.0, 60.0, 90.0, disc.rim_degrees()]
                .map(|degrees| Ring { degrees, radius: degrees / disc.rim_degrees() })
                .to_vec(),
            dipole: position.map(|position| disc.project(position)).filter(|[x, y]| libm::hypot(*x, *y) <= 1.0),
            axis: [direction[0], direction[1]],
            electrodes,
        }
    }
}

/// The largest of 1, 2, 5, …, 5000 that keeps the left-over map within the scale, if it would not fill a quarter of it. What
/// is mere rounding is not blown up.
fn stretch(limit: f64, left_over: f64) -> f64 {
    const ROUNDING: f64 = 1e-6;
    if left_over <= ROUNDING * limit || left_over * 4.0 >= limit {
        return 1.0;
    }
    let room = limit / left_over;
    let decade = libm::pow(10.0, libm::floor(libm::log10(room)).min(3.0));
    [5.0, 2.0, 1.0].into_iter().map(|step| step * decade).find(|factor| *factor <= room).unwrap_or(1.0)
}

fn extremes(values: &[f64], used: &[usize]) -> Extremes {
    let best = |sign: f64| {
        (0..values.len()).reduce(|best, i| if sign * values[i] > sign * values[best] { i } else { best }).unwrap_or(0)
    };
    let electrode = |index: usize| used.get(index).copied().unwrap_or(0);
    Extremes { max: electrode(best(1.0)), min: electrode(best(-1.0)) }
}

#[cfg(test)]
mod tests {
    use super::stretch;

    #[test]
    fn the_left_over_map_is_stretched_into_the_scale() {
        for (left_over, factor) in
            [(3.0, 1.0), (1.0, 10.0), (0.9, 10.0), (0.4, 20.0), (1e-3, 5000.0), (1e-6, 1.0), (0.0, 1.0)]
        {
            assert_eq!(stretch(10.0, left_over), factor, "{left_over}");
        }
    }
}
