use super::potential::{Potential, Terms};
use super::{Images, MAX_ECCENTRICITY, Series};
use crate::math::Vec3;
use crate::math::lanes::{Lanes, WIDTH, blocks};
use crate::shells::Shells;
use ndarray::{Array2, Axis};

/// The lead field of a set of electrodes on a layered sphere.
#[derive(Clone, Debug)]
pub struct LeadField {
    directions: Vec<Vec3>,
    blocks: Vec<Block>,
    series: Series,
    images: Option<Images>,
    scale: f64,
    brain_ratio: f64,
}

/// Components x, y, z of the directions of a block of electrodes; zero where there are no more.
pub(crate) type Block = [Lanes; 3];

/// The lead field around one position: what the fit needs of it.
#[derive(Clone, Debug)]
pub struct Local<'a> {
    pub(crate) position: Vec3,
    blocks: &'a [Block],
    potentials: Vec<Potential>,
}

impl LeadField {
    /// Electrodes in these unit directions from the centre, on a head of this scalp radius in millimetres.
    pub fn new(shells: &Shells, radius_mm: f64, directions: Vec<Vec3>) -> Self {
        let series = Series::new(shells);
        let images = Images::new(shells, &series);
        Self::with_kernels(shells, radius_mm, directions, series, images)
    }

    /// The same with the plain series only.
    pub fn by_series(shells: &Shells, radius_mm: f64, directions: Vec<Vec3>) -> Self {
        Self::with_kernels(shells, radius_mm, directions, Series::new(shells), None)
    }

    /// Other electrodes on the same head.
    pub fn elsewhere(&self, directions: Vec<Vec3>) -> Self {
        Self {
            blocks: in_blocks(&directions),
            directions,
            series: self.series.clone(),
            images: self.images.clone(),
            ..*self
        }
    }

    fn with_kernels(
        shells: &Shells,
        radius_mm: f64,
        directions: Vec<Vec3>,
        series: Series,
        images: Option<Images>,
    ) -> Self {
        let blocks = in_blocks(&directions);
        // 1 nAm over 1 S/m · 1 mm² is 1 mV = 1000 µV.
        let scale = 1000.0 / (4.0 * core::f64::consts::PI * shells.specs()[0].conductivity * radius_mm * radius_mm);
        Self { directions, blocks, series, images, scale, brain_ratio: shells.brain_ratio() }
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
    pub fn images(&self) -> Option<&Images> {
        self.images.as_ref()
    }

    /// The series.
    pub fn series(&self) -> &Series {
        &self.series
    }

    /// κ: µV per nAm of a lead field of 1 on the unit sphere.
    pub fn scale(&self) -> f64 {
        self.scale
    }

    /// Lead field by the series: potential in µV per nAm of moment along x, y, z; one row per electrode. The potential's
    /// mean over the whole scalp is zero; `position` is in scalp radii from the centre.
    pub fn exact(&self, position: Vec3) -> Array2<f64> {
        self.matrix(&self.local_by(position, None, 0))
    }

    /// The same by the quick evaluation, or by the series where there is none.
    pub fn quick(&self, position: Vec3) -> Array2<f64> {
        self.matrix(&self.local_by(position, self.images.as_ref(), 0))
    }

    /// Derivatives of the lead field: for each electrode the symmetric matrix ∂Lᵢ/∂pⱼ in µV per nAm and scalp radius,
    /// as rows (xx, xy, xz, yy, yz, zz).
    pub fn gradient(&self, position: Vec3) -> Array2<f64> {
        let p = position;
        let mut rows = Array2::zeros((self.count(), 6));
        for (mut rows, (e, t)) in rows.axis_chunks_iter_mut(Axis(0), WIDTH).zip(self.local(position).terms()) {
            for (column, (i, j)) in [(0, 0), (0, 1), (0, 2), (1, 1), (1, 2), (2, 2)].into_iter().enumerate() {
                let diagonal = if i == j { t.u * 2.0 } else { Lanes::ZERO };
                let entry = t.ss * e[i] * e[j]
                    + t.us * 2.0 * (e[i] * p[j] + e[j] * p[i])
                    + t.uu * (4.0 * p[i] * p[j])
                    + diagonal;
                rows.column_mut(column).iter_mut().zip(entry.to_array()).for_each(|(value, v)| *value = self.scale * v);
            }
        }
        rows
    }

    /// The lead field around a position, for the fit.
    pub fn local(&self, position: Vec3) -> Local<'_> {
        self.local_by(position, self.images.as_ref(), 2)
    }

    /// By images or, without, by the series; derivatives of the lead field up to this order, 0 or 2.
    fn local_by(&self, position: Vec3, images: Option<&Images>, order: usize) -> Local<'_> {
        let u = position.dot(position);
        let terms = if images.is_some() { 0 } else { self.series.terms(u.sqrt(), order) };
        let potential = |block: &Block| {
            let s = along(block, position);
            match images {
                Some(images) if order == 0 => images.potential::<false>(u, s),
                Some(images) => images.potential::<true>(u, s),
                None => self.series.potential(terms, u, s),
            }
        };
        Local { position, blocks: &self.blocks, potentials: self.blocks.iter().map(potential).collect() }
    }

    fn matrix(&self, local: &Local) -> Array2<f64> {
        let mut rows = Array2::zeros((self.count(), 3));
        for (mut rows, lead) in rows.axis_chunks_iter_mut(Axis(0), WIDTH).zip(local.leads()) {
            for (axis, lead) in lead.into_iter().enumerate() {
                rows.column_mut(axis).iter_mut().zip(lead.to_array()).for_each(|(value, v)| *value = self.scale * v);
            }
        }
        rows
    }
}

impl Local<'_> {
    /// The lead field on the unit sphere, 2Φᵤ p + Φₛ e, block by block.
    pub(crate) fn leads(&self) -> impl Iterator<Item = [Lanes; 3]> {
        let p = self.position;
        self.blocks
            .iter()
            .zip(&self.potentials)
            .map(move |(e, potential)| [0, 1, 2].map(|axis| potential.s * e[axis] + potential.u * (2.0 * p[axis])))
    }

    /// Directions and derivatives of Φ, block by block.
    pub(crate) fn terms(&self) -> impl Iterator<Item = (&Block, Terms)> {
        let u = self.position.dot(self.position);
        self.blocks
            .iter()
            .zip(&self.potentials)
            .map(move |(e, potential)| (e, potential.terms(u, along(e, self.position))))
    }
}

fn in_blocks(directions: &[Vec3]) -> Vec<Block> {
    let [x, y, z] = [0, 1, 2].map(|axis| blocks(&directions.iter().map(|e| e[axis]).collect::<Vec<_>>()));
    x.into_iter().zip(y).zip(z).map(|((x, y), z)| [x, y, z]).collect()
}

/// The scalar products of a block's directions with a vector.
#[inline]
pub(crate) fn along(block: &Block, vector: Vec3) -> Lanes {
    block[0] * vector[0] + block[1] * vector[1] + block[2] * vector[2]
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
