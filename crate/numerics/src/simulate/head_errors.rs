use super::part;
use crate::forward::CutSeries;
use crate::math::{Cholesky, Stream, Vec3, centre};
use crate::shells::{ShellSpec, Shells};

/// How far the model of a head may be off: what is drawn anew for each simulated head.
#[derive(Clone, Debug)]
pub struct HeadErrors {
    /// The shells as modelled.
    pub shells: Shells,
    /// Electrodes as they were measured, in scalp radii from the centre.
    pub points: Vec<Vec3>,
    /// Root-mean-square distance along the scalp of an electrode from where it was measured, in scalp radii.
    pub electrodes: f64,
    /// Least and largest ratio of the conductivities of brain and skull, even in its logarithm in between.
    pub skull_ratio: Option<[f64; 2]>,
    /// Of the sphere's fit, in scalp radii: standard deviation of the points' distances from it, and the factors of JᵀJ,
    /// J being the derivatives of these distances by centre and radius.
    pub sphere: Option<(f64, Cholesky)>,
}

/// What a simulated head is off in.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Cause {
    /// Places of electrodes.
    Electrodes,
    /// Conductivity of the skull.
    Skull,
    /// Centre and radius of the sphere.
    Sphere,
}

impl Cause {
    /// All of them.
    pub const ALL: [Self; 3] = [Self::Electrodes, Self::Skull, Self::Sphere];
}

/// Farthest that centre and radius of a sphere are drawn from those of the model, in its radii.
const FARTHEST_OFF: f64 = 0.3;

/// A head that differs from the model.
#[derive(Clone, Debug)]
pub struct DrawnHead {
    series: CutSeries,
    directions: Vec<Vec3>,
    centre: Vec3,
    radius: f64,
    reach: f64,
    scale: f64,
}

impl HeadErrors {
    /// Fits of the sphere to these points, in scalp radii from its centre: what [`Self::sphere`] holds. `None` where they
    /// lie on it.
    pub fn sphere_of(points: &[Vec3]) -> Option<(f64, Cholesky)> {
        let slopes: Vec<[f64; 4]> = points.iter().filter_map(|p| p.unit()).map(|u| [u[0], u[1], u[2], 1.0]).collect();
        let squares: f64 = points.iter().map(|p| (p.norm() - 1.0) * (p.norm() - 1.0)).sum();
        let free = points.len().checked_sub(4).filter(|free| *free > 0)?;
        let sd = (squares / free as f64).sqrt();
        let normal = Cholesky::new(4, |i, j| slopes.iter().map(|row| row[i] * row[j]).sum())?;
        (sd > 1e-9).then_some((sd, normal))
    }

    /// Whether the shells have a skull whose conductivity can be drawn.
    pub fn has_skull(shells: &Shells) -> bool {
        skull(shells).is_some()
    }

    /// The head of draw `index`, off in these respects only; sources lie at most so far from the model's centre, in scalp
    /// radii.
    pub fn draw(&self, causes: &[Cause], farthest: f64, seed: u64, index: u64) -> DrawnHead {
        let drawn = |cause| causes.contains(&cause);
        let (offset, radius) = match &self.sphere {
            Some((sd, normal)) if drawn(Cause::Sphere) => {
                let mut stream = Stream::new(seed, part::SPHERE, index);
                let mut drawn = || {
                    let off = normal.spread(&[0; 4].map(|_| sd * stream.normal()));
                    (Vec3::new(off[0], off[1], off[2]), 1.0 + off[3])
                };
                // Few electrodes in a ring may leave the sphere so open that no head would be like a draw of it.
                let usual = |(offset, radius): &(Vec3, f64)| {
                    offset.norm() <= FARTHEST_OFF && (radius - 1.0).abs() <= FARTHEST_OFF
                };
                (0..100).map(|_| drawn()).find(usual).unwrap_or((Vec3::ZERO, 1.0))
            }
            _ => (Vec3::ZERO, 1.0),
        };
        let moved = if drawn(Cause::Electrodes) { self.electrodes } else { 0.0 };
        let directions = displaced(&self.points, moved, offset, seed, index);
        let shells = match self.skull_ratio {
            Some([least, most]) if drawn(Cause::Skull) => {
                let even = Stream::new(seed, part::SKULL, index).even();
                with_skull(&self.shells, least * libm::pow(most / least, even))
            }
            _ => self.shells.clone(),
        };
        let reach = crate::forward::MAX_ECCENTRICITY * shells.brain_ratio();
        DrawnHead {
            series: CutSeries::new(&shells, ((farthest + offset.norm()) / radius).min(reach)),
            directions,
            centre: offset,
            radius,
            reach,
            scale: 1.0 / (radius * radius),
        }
    }
}

impl DrawnHead {
    /// The average-referenced map of a dipole, position in scalp radii of the model from its centre; µV for nAm once it is
    /// multiplied by the scale of the model's lead field.
    pub fn map(&self, position: Vec3, moment: Vec3) -> Vec<f64> {
        let inside = (position - self.centre) * (1.0 / self.radius);
        let distance = inside.norm();
        // In a smaller head a source at the boundary stays inside the brain.
        let inside = if distance > self.reach { inside * (self.reach / distance) } else { inside };
        let mut map = self.series.map(&self.directions, inside, moment * self.scale);
        centre(&mut map);
        map
    }
}

/// Directions of electrodes that are off by this root-mean-square distance along the scalp, in scalp radii, from a centre
/// that is.
pub fn displaced(points: &[Vec3], distance: f64, centre: Vec3, seed: u64, index: u64) -> Vec<Vec3> {
    let mut stream = Stream::new(seed, part::ELECTRODES, index);
    let moved = distance * core::f64::consts::FRAC_1_SQRT_2;
    let directions = points.iter().filter_map(|&point| {
        let out = point.unit()?;
        let error = stream.normal3() * moved;
        // Along the scalp: what goes inwards or outwards is projected away in any case.
        (point + error - out * out.dot(error) - centre).unit()
    });
    directions.collect()
}

/// The shell called skull, unless it is the innermost one.
fn skull(shells: &Shells) -> Option<usize> {
    let found = shells.specs().iter().position(|shell| shell.tissue.eq_ignore_ascii_case("skull"));
    found.filter(|skull| *skull > 0)
}

/// The same shells with a skull that conducts so many times less than the brain.
pub fn with_skull(shells: &Shells, ratio: f64) -> Shells {
    let brain = shells.specs()[0].conductivity;
    let skull = skull(shells);
    let specs = shells.specs().iter().enumerate().map(|(index, shell)| ShellSpec {
        conductivity: if Some(index) == skull { brain / ratio } else { shell.conductivity },
        ..shell.clone()
    });
    Shells::new(specs.collect()).unwrap_or_else(|_| shells.clone())
}
