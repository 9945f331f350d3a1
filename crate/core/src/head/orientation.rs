use super::{Axes, AxesName};
use crate::math::{Symmetric3, Vec3};

/// A found rotation this near to axes with a name is taken to be those: heads sit tilted in their axes.
const SNAP_DEGREES: f64 = 30.0;

/// Fewest named electrodes that say how a head lies.
const FEWEST: usize = 4;

/// Largest rms angle in degrees between named electrodes and their standard places. Measured heads stay below 15°; labels
/// in disorder reach 60° and more.
const MISFIT_DEGREES: f64 = 30.0;

/// Largest standard error in degrees of the turn about the worst axis.
const VAGUE_DEGREES: f64 = 10.0;

/// A mirror image must leave less than this share of the squared misfit of the best rotation.
const MIRROR_SHARE: f64 = 0.25;

/// How a head lies in the frame of its table.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Orientation {
    /// The rotation to canonical axes; where left and right are exchanged, it brings front and up to their places.
    pub axes: Axes,
    /// Angle in degrees to the nearest axes with a name, before it was taken for those.
    pub tilt_degrees: f64,
    /// Rms angle in degrees between what was compared; 0 for landmarks.
    pub misfit_degrees: f64,
    /// Whether left and right are exchanged.
    pub mirrored: bool,
}

impl Orientation {
    fn new(rows: [Vec3; 3], misfit_degrees: f64, mirrored: bool) -> Self {
        let axes = Axes::from_rows(rows);
        let (name, tilt_degrees) = axes.nearest();
        let axes = if tilt_degrees <= SNAP_DEGREES { name.axes() } else { axes };
        Self { axes, tilt_degrees, misfit_degrees, mirrored }
    }

    /// From named electrodes: their directions in the table's frame, each with the standard one.
    ///
    /// The rotation R minimises Σ|R uᵢ − sᵢ|² (Kabsch 1976, Acta Cryst A32:922–923): with H = Σ sᵢ uᵢᵀ and the singular
    /// vectors of its two largest singular values, the third follows from R being a rotation, and the sign of what H does
    /// to it tells a mirror image. `None` if there are too few, if they fit neither way, or if they leave a turn open.
    pub fn of_named(pairs: &[(Vec3, Vec3)]) -> Option<Self> {
        let count = pairs.len() as f64;
        let h = |v: Vec3| pairs.iter().fold(Vec3::ZERO, |sum, (u, s)| sum + *s * u.dot(v));
        let axes = [Vec3::new(1.0, 0.0, 0.0), Vec3::new(0.0, 1.0, 0.0), Vec3::new(0.0, 0.0, 1.0)].map(h);
        let [_, second, first] = Symmetric3::from_fn(|i, j| axes[i].dot(axes[j])).eigen().vectors;
        let third = first.cross(second);
        let (first_image, second_image) = (h(first), h(second));
        let left = first_image.unit()?;
        let middle = (second_image - left * left.dot(second_image)).unit()?;
        let right = left.cross(middle);
        let (most, more, least) = (first_image.norm(), second_image.norm(), right.dot(h(third)));
        let squared = |trace: f64| (2.0 - 2.0 * trace / count).max(0.0);
        let (turned, mirrored) = (squared(most + more + least), squared(most + more - least));
        let exchanged = mirrored < MIRROR_SHARE * turned;
        let chord = if exchanged { mirrored } else { turned };
        let misfit_degrees = (2.0 * libm::asin((chord.sqrt() / 2.0).min(1.0))).to_degrees();
        // Each of two directions across has half of the squared misfit; all but the share along the first axis turns.
        let error = (chord / 2.0 / (more + least.abs())).sqrt().to_degrees();
        if pairs.len() < FEWEST || misfit_degrees > MISFIT_DEGREES || error.is_nan() || error > VAGUE_DEGREES {
            return None;
        }
        let side = if exchanged { -1.0 } else { 1.0 };
        let row = |i: usize| first * left[i] + second * middle[i] + third * (side * right[i]);
        let flip = if exchanged { -row(0) } else { row(0) };
        Some(Self::new([flip, row(1), row(2)], misfit_degrees, exchanged))
    }

    /// From the points before the ears and the root of the nose: x from the left one to the right one, y to the nose and
    /// at right angles to x. `above` is any point on their upper side: it tells a mirror image. `None` where they lie on one
    /// line.
    pub fn of_landmarks(landmarks: &Landmarks, above: Vec3) -> Option<Self> {
        let middle = (landmarks.left + landmarks.right) * 0.5;
        let x = (landmarks.right - landmarks.left).unit()?;
        let front = landmarks.nasion - middle;
        let level = front - x * x.dot(front);
        // A nose within a sixth of the way beside an ear is no nose.
        let y = level.unit().filter(|_| level.norm() > 0.3 * front.norm())?;
        let z = x.cross(y);
        let mirrored = z.dot(above - middle) < 0.0;
        Some(if mirrored { Self::new([-x, y, -z], 0.0, true) } else { Self::new([x, y, z], 0.0, false) })
    }

    /// Axes with a name, as someone states them.
    pub fn named(name: AxesName) -> Self {
        Self { axes: name.axes(), tilt_degrees: 0.0, misfit_degrees: 0.0, mirrored: false }
    }
}

/// Three points of a head.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Landmarks {
    /// Root of the nose.
    pub nasion: Vec3,
    /// Before the left ear.
    pub left: Vec3,
    /// Before the right ear.
    pub right: Vec3,
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::electrode::{Grade, standard_sites};

    fn pairs(names: &[&str], turn: impl Fn(Vec3) -> Vec3) -> Vec<(Vec3, Vec3)> {
        let sites = standard_sites()
            .iter()
            .filter(|site| site.grade == Grade::Ten && (names.is_empty() || names.contains(&site.name.as_str())));
        sites.map(|site| (turn(site.direction), site.direction)).collect()
    }

    const CAP: [&str; 8] = ["Fp1", "Fp2", "C3", "C4", "Cz", "P3", "O1", "O2"];

    #[test]
    fn every_quarter_turn_is_found_and_every_mirror_image_noticed() {
        for name in AxesName::all() {
            for names in [&[][..], &CAP, &["Fz", "Cz", "Pz", "Oz", "C3", "C4"]] {
                let found = Orientation::of_named(&pairs(names, |v| name.axes().to_table(v))).unwrap();
                assert_eq!((found.axes, found.mirrored), (name.axes(), false), "{name} {names:?}");
                assert!(found.tilt_degrees < 1e-5 && found.misfit_degrees < 1e-5, "{found:?}");
                let mirror = |v: Vec3| name.axes().to_table(Vec3::new(-v[0], v[1], v[2]));
                let found = Orientation::of_named(&pairs(names, mirror)).unwrap();
                assert_eq!((found.axes, found.mirrored), (name.axes(), true), "{name} {names:?}");
            }
        }
    }

    #[test]
    fn a_tilted_head_keeps_the_axes_and_an_oblique_one_is_turned() {
        let tilted = |degrees: f64| {
            let (s, c) = (libm::sin(degrees.to_radians()), libm::cos(degrees.to_radians()));
            pairs(&CAP, |v| Vec3::new(v[0], c * v[1] - s * v[2], s * v[1] + c * v[2]))
        };
        let found = Orientation::of_named(&tilted(20.0)).unwrap();
        assert_eq!(found.axes, Axes::CANONICAL);
        assert!((found.tilt_degrees - 20.0).abs() < 1e-9);
        let oblique = tilted(40.0);
        let found = Orientation::of_named(&oblique).unwrap();
        for (u, s) in oblique {
            assert!((found.axes.to_canonical(u) - s).norm() < 1e-12);
            assert!((found.axes.to_table(s) - u).norm() < 1e-12);
        }
    }

    #[test]
    fn too_little_or_disorder_tells_nothing() {
        assert_eq!(Orientation::of_named(&pairs(&["Cz", "Fz", "C3"], |v| v)), None, "three");
        assert_eq!(
            Orientation::of_named(&[(Vec3::new(0.0, 0.0, 1.0), Vec3::new(0.0, 0.0, 1.0)); 8]),
            None,
            "one place"
        );
        let mut scrambled = pairs(&[], |v| v);
        let directions: Vec<Vec3> = scrambled.iter().map(|pair| pair.0).collect();
        let count = directions.len();
        scrambled.iter_mut().enumerate().for_each(|(i, pair)| pair.0 = directions[(i * 17 + 5) % count]);
        assert_eq!(Orientation::of_named(&scrambled), None);
        // All on one plane through the centre: nothing tells left from right, and nothing is said about it.
        let midline = pairs(&["Fpz", "Fz", "Cz", "Pz", "Oz"], |v| Vec3::new(-v[0], v[1], v[2]));
        assert!(!Orientation::of_named(&midline).unwrap().mirrored);
    }

    #[test]
    fn landmarks_tell_axes_and_the_electrodes_above_them_a_mirror_image() {
        for name in AxesName::all() {
            let axes = name.axes();
            let point = |x, y, z| axes.to_table(Vec3::new(x, y, z)) + Vec3::new(3.0, -2.0, 9.0);
            let landmarks = Landmarks {
                nasion: point(1.0, 100.0, 5.0),
                left: point(-72.0, 0.0, 1.0),
                right: point(75.0, 2.0, -1.0),
            };
            let found = Orientation::of_landmarks(&landmarks, point(0.0, 10.0, 60.0)).unwrap();
            assert_eq!((found.axes, found.mirrored), (axes, false), "{name}");
            let exchanged = Landmarks { left: landmarks.right, right: landmarks.left, ..landmarks };
            let found = Orientation::of_landmarks(&exchanged, point(0.0, 10.0, 60.0)).unwrap();
            assert_eq!((found.axes, found.mirrored), (axes, true), "{name}");
        }
        let line = Landmarks { nasion: Vec3::ZERO, left: Vec3::new(-1.0, 0.0, 0.0), right: Vec3::new(1.0, 0.0, 0.0) };
        assert_eq!(Orientation::of_landmarks(&line, Vec3::new(0.0, 0.0, 1.0)), None);
    }
}
