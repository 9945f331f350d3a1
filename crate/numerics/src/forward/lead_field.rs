use super::field::{Field, Source, along};
use super::{Images, MAX_ECCENTRICITY, QUICK_TOLERANCE, ROUGH_TOLERANCE, Series};
use crate::math::{Double, Lanes, Single, Vec3};
use crate::shells::Shells;
use ndarray::{Array2, Axis};
use std::sync::Arc;

/// The lead field of a set of electrodes on a layered sphere.
#[derive(Clone, Debug)]
pub struct LeadField {
    directions: Vec<Vec3>,
    kernels: Arc<Kernels>,
    field: Field<Double>,
    scale: f64,
    brain_ratio: f64,
}

/// What belongs to the shells alone.
#[derive(Debug)]
struct Kernels {
    series: Arc<Series>,
    images: Option<Images<Double>>,
    rough: Images<Single>,
}

impl LeadField {
    /// Electrodes in these unit directions from the centre, on a head of this scalp radius in millimetres.
    pub fn new(shells: &Shells, radius_mm: f64, directions: Vec<Vec3>) -> Self {
        let series = Series::new(shells);
        let images = Images::new(shells, &series, &[1, 8, 10, 12, 14], 16, QUICK_TOLERANCE);
        let images = Some(images).filter(|images| images.error_bound() <= QUICK_TOLERANCE);
        Self::with_kernels(shells, radius_mm, directions, series, images)
    }

    /// The same with the plain series only.
    pub fn by_series(shells: &Shells, radius_mm: f64, directions: Vec<Vec3>) -> Self {
        Self::with_kernels(shells, radius_mm, directions, Series::new(shells), None)
    }

    /// Other electrodes on the same head.
    pub fn elsewhere(&self, directions: Vec<Vec3>) -> Self {
        let field = Field::new(&directions, self.field.source().clone());
        Self { directions, field, kernels: Arc::clone(&self.kernels), ..*self }
    }

    fn with_kernels(
        shells: &Shells,
        radius_mm: f64,
        directions: Vec<Vec3>,
        series: Series,
        images: Option<Images<Double>>,
    ) -> Self {
        let series = Arc::new(series);
        let rough = Images::new(shells, &series, &[1, 4, 5, 6], 8, ROUGH_TOLERANCE);
        let source = images.clone().map_or_else(|| Source::Series(Arc::clone(&series)), Source::Images);
        let field = Field::new(&directions, source);
        // 1 nAm over 1 S/m · 1 mm² is 1 mV = 1000 µV.
        let scale = 1000.0 / (4.0 * core::f64::consts::PI * shells.specs()[0].conductivity * radius_mm * radius_mm);
        let kernels = Arc::new(Kernels { series, images, rough });
        Self { directions, kernels, field, scale, brain_ratio: shells.brain_ratio() }
    }

    /// Unit directions of the electrodes.
    pub fn directions(&self) -> &[Vec3] {
        &self.directions
    }

    /// Number of electrodes.
    pub fn count(&self) -> usize {
        self.directions.len()
    }

    /// Radius of the innermost shell in scalp radii.
    pub fn brain_ratio(&self) -> f64 {
        self.brain_ratio
    }

    /// Largest distance of a source from the centre, in scalp radii.
    pub fn reach(&self) -> f64 {
        MAX_ECCENTRICITY * self.brain_ratio
    }

    /// The quick evaluation, where one is accurate enough for this head.
    pub fn images(&self) -> Option<&Images<Double>> {
        self.kernels.images.as_ref()
    }

    /// The evaluation for searches.
    pub fn rough_images(&self) -> &Images<Single> {
        &self.kernels.rough
    }

    /// The series.
    pub fn series(&self) -> &Series {
        &self.kernels.series
    }

    /// κ: µV per nAm of a lead field of 1 on the unit sphere.
    pub fn scale(&self) -> f64 {
        self.scale
    }

    /// What the fit evaluates.
    pub(crate) fn field(&self) -> &Field<Double> {
        &self.field
    }

    /// What the search for starts evaluates.
    pub(crate) fn rough(&self) -> Field<Single> {
        Field::new(&self.directions, Source::Images(self.kernels.rough.clone()))
    }

    /// Lead field by the series: potential in µV per nAm of moment along x, y, z; one row per electrode. The potential's
    /// mean over the whole scalp is zero; `position` is in scalp radii from the centre.
    pub fn exact(&self, position: Vec3) -> Array2<f64> {
        self.matrix(&Field::new(&self.directions, Source::Series(Arc::clone(&self.kernels.series))), position)
    }

    /// The same by the quick evaluation, or by the series where there is none.
    pub fn quick(&self, position: Vec3) -> Array2<f64> {
        self.matrix(&self.field, position)
    }

    fn matrix(&self, field: &Field<Double>, position: Vec3) -> Array2<f64> {
        let mut potentials = Vec::new();
        field.potentials::<false>(position, &mut potentials);
        let twice_p = position.0.map(|c| Double::splat(2.0 * c));
        let mut rows = Array2::zeros((self.count(), 3));
        for ((mut rows, e), t) in rows.axis_chunks_iter_mut(Axis(0), Double::WIDTH).zip(field.blocks()).zip(&potentials)
        {
            for axis in 0..3 {
                let lead = t.s * e[axis] + t.u * twice_p[axis];
                fill(rows.column_mut(axis), lead, self.scale);
            }
        }
        rows
    }

    /// Derivatives of the lead field: for each electrode the symmetric matrix ∂Lᵢ/∂pⱼ in µV per nAm and scalp radius,
    /// as rows (xx, xy, xz, yy, yz, zz).
    pub fn gradient(&self, position: Vec3) -> Array2<f64> {
        let mut potentials = Vec::new();
        self.field.potentials::<true>(position, &mut potentials);
        let (p, two) = (position.0.map(Double::splat), Double::splat(2.0));
        let u4 = Double::splat(4.0 * position.dot(position));
        let mut rows = Array2::zeros((self.count(), 6));
        let blocks = self.field.blocks().iter().zip(&potentials);
        for (mut rows, (e, potential)) in rows.axis_chunks_iter_mut(Axis(0), Double::WIDTH).zip(blocks) {
            let t = potential.terms(u4, along(e, &p));
            for (column, (i, j)) in [(0, 0), (0, 1), (0, 2), (1, 1), (1, 2), (2, 2)].into_iter().enumerate() {
                let diagonal = if i == j { t.u * two } else { Double::default() };
                let mixed = t.us * two * (e[i] * p[j] + e[j] * p[i]);
                let entry = t.ss * e[i] * e[j] + mixed + t.uu * (two * two * p[i] * p[j]) + diagonal;
                fill(rows.column_mut(column), entry, self.scale);
            }
        }
        rows
    }
}

/// Writes as many lanes as there is room for.
fn fill(mut column: ndarray::ArrayViewMut1<f64>, lanes: Double, scale: f64) {
    let mut values = [0.0; Double::WIDTH];
    lanes.unpack(&mut values);
    column.iter_mut().zip(values).for_each(|(value, lane)| *value = scale * lane);
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::shells::ShellSpec;

    fn directions() -> Vec<Vec3> {
        (0..50)
            .map(|i| {
                let (z, angle) = (1.0 - 2.0 * (f64::from(i) + 0.5) / 50.0, 2.399 * f64::from(i));
                let r = (1.0 - z * z).sqrt();
                Vec3::new(r * libm::cos(angle), r * libm::sin(angle), z)
            })
            .chain([Vec3::new(0.0, 0.0, 1.0), Vec3::new(0.0, 0.0, -1.0)])
            .collect()
    }

    fn largest(a: &Array2<f64>) -> f64 {
        a.iter().fold(0.0, |m: f64, v| m.max(v.abs()))
    }

    #[test]
    fn images_keep_their_bound_against_the_series() {
        let field = LeadField::new(&Shells::standard(), 88.0, directions());
        let images = field.images().expect("the standard head has a quick evaluation");
        assert!(images.count() > 1 && images.error_bound() <= super::super::QUICK_TOLERANCE);
        for eccentricity in [0.0, 0.1, 0.5, 0.8, 0.9, 0.95, 0.98] {
            for axis in [Vec3::new(0.0, 0.0, 1.0), Vec3::new(0.6, 0.48, 0.64)] {
                let p = axis * (eccentricity * field.brain_ratio());
                let (exact, quick) = (field.exact(p), field.quick(p));
                let difference = largest(&(&exact - &quick)) / largest(&exact);
                assert!(difference <= 1e-8, "{eccentricity}: {difference:e}");
            }
        }
    }

    #[test]
    fn a_homogeneous_head_needs_one_image() {
        let homogeneous =
            Shells::new(vec![ShellSpec { tissue: "head".into(), ratio: 1.0, conductivity: 0.33 }]).unwrap();
        let field = LeadField::new(&homogeneous, 88.0, directions());
        assert_eq!(field.images().map(Images::count), Some(1));
    }

    #[test]
    fn derivatives_agree_with_differences_in_both_evaluations() {
        let shells = Shells::standard();
        let all = [LeadField::new(&shells, 88.0, directions()), LeadField::by_series(&shells, 88.0, directions())];
        for field in &all {
            for p in [Vec3::ZERO, Vec3::new(0.1, -0.3, 0.2), Vec3::new(0.0, 0.0, 0.8), Vec3::new(0.5, 0.5, -0.4)] {
                let h = 1e-5;
                let gradient = field.gradient(p);
                for j in 0..3 {
                    let mut step = [0.0; 3];
                    step[j] = h;
                    let difference = (field.quick(p + Vec3(step)) - field.quick(p - Vec3(step))) / (2.0 * h);
                    for (index, row) in difference.rows().into_iter().enumerate() {
                        for i in 0..3 {
                            let column = [[0, 1, 2], [1, 3, 4], [2, 4, 5]][i][j];
                            let error = (row[i] - gradient[[index, column]]).abs();
                            assert!(error <= 2e-6 * largest(&gradient), "{p:?} {index} {i}{j}: {error:e}");
                        }
                    }
                }
            }
        }
    }
}
