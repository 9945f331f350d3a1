use crate::math::{Vec3, sort_by_number};

/// The head seen from above as a flat disc: azimuthal equidistant, so that the distance from the middle is the angle from
/// the top of the head. x points right, y to the front, the rim has radius 1.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Disc {
    rim_degrees: f64,
}

/// A point on the disc.
pub type DiscPoint = [f64; 2];

/// Angle at the rim: below the lowest standard sites, which lie at 112.5°.
const RIM_DEGREES: f64 = 120.0;

/// Room between the lowest electrode and the rim.
const MARGIN_DEGREES: f64 = 5.0;

impl Disc {
    /// A disc that holds all these directions.
    pub fn holding(directions: impl Iterator<Item = Vec3>) -> Self {
        let lowest = directions.map(|d| angle(d).to_degrees()).fold(0.0, f64::max);
        Self { rim_degrees: RIM_DEGREES.max(lowest + MARGIN_DEGREES).min(180.0) }
    }

    /// Angle from the top of the head at the rim.
    pub fn rim_degrees(&self) -> f64 {
        self.rim_degrees
    }

    /// Where a direction from the centre of the head comes to lie.
    pub fn project(&self, direction: Vec3) -> DiscPoint {
        let level = libm::hypot(direction[0], direction[1]);
        if level == 0.0 {
            return [0.0, 0.0];
        }
        let r = angle(direction).to_degrees() / self.rim_degrees;
        [r * direction[0] / level, r * direction[1] / level]
    }

    /// The direction that lies at a point; beyond the rim too.
    pub fn direction(&self, [x, y]: DiscPoint) -> Vec3 {
        let r = libm::hypot(x, y);
        if r == 0.0 {
            return Vec3::new(0.0, 0.0, 1.0);
        }
        let angle = (r * self.rim_degrees).min(180.0).to_radians();
        let level = libm::sin(angle) / r;
        Vec3::new(x * level, y * level, libm::cos(angle))
    }
}

fn angle(direction: Vec3) -> f64 {
    libm::atan2(libm::hypot(direction[0], direction[1]), direction[2])
}

/// The convex hull of points, counter-clockwise (monotone chain; Andrew 1979, Inf Process Lett 9:216–219).
pub fn hull(points: &[DiscPoint]) -> Vec<DiscPoint> {
    let mut sorted = points.to_vec();
    sort_by_number(&mut sorted, |point| point[1]);
    sort_by_number(&mut sorted, |point| point[0]);
    let chain = |points: &mut dyn Iterator<Item = &DiscPoint>| {
        let mut chain: Vec<DiscPoint> = Vec::new();
        for &point in points {
            while let [.., a, b] = chain.as_slice()
                && turn(*a, *b, point) <= 0.0
            {
                chain.pop();
            }
            chain.push(point);
        }
        chain.pop();
        chain
    };
    let mut hull = chain(&mut sorted.iter());
    hull.extend(chain(&mut sorted.iter().rev()));
    hull
}

fn turn(a: DiscPoint, b: DiscPoint, c: DiscPoint) -> f64 {
    (b[0] - a[0]) * (c[1] - a[1]) - (b[1] - a[1]) * (c[0] - a[0])
}

/// A counter-clockwise convex polygon, with a margin around it, that is asked about many points.
pub(super) struct Fence(Vec<(DiscPoint, DiscPoint, f64)>);

impl Fence {
    /// Around a polygon, at most this far outside.
    pub(super) fn new(polygon: &[DiscPoint], margin: f64) -> Self {
        let edge = |i: usize| {
            let (a, b) = (polygon[i], polygon[(i + 1) % polygon.len()]);
            (a, b, -margin * libm::hypot(b[0] - a[0], b[1] - a[1]))
        };
        Self((0..polygon.len()).map(edge).collect())
    }

    /// Whether a point lies inside.
    pub(super) fn holds(&self, point: DiscPoint) -> bool {
        self.0.iter().all(|(a, b, least)| turn(*a, *b, point) >= *least)
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn projection_and_direction_are_inverse() {
        let disc = Disc::holding([Vec3::new(0.0, 0.6, -0.8)].into_iter());
        assert!(disc.rim_degrees() > 140.0);
        let d = Vec3::new(0.48, -0.6, 0.64);
        assert!((disc.direction(disc.project(d)) - d).norm() < 1e-14);
        let [x, y] = disc.project(Vec3::new(-1.0, 1.0, 1.0));
        assert!(x < 0.0 && y > 0.0, "left is left and the front is up");
    }

    #[test]
    fn hull_of_a_square_with_points_inside() {
        let points = [[0.0, 0.0], [1.0, 1.0], [-1.0, 1.0], [0.3, 0.2], [-1.0, -1.0], [1.0, -1.0], [0.0, 1.0]];
        assert_eq!(hull(&points), [[-1.0, -1.0], [1.0, -1.0], [1.0, 1.0], [-1.0, 1.0]]);
        let fence = |margin| Fence::new(&hull(&points), margin);
        assert!(fence(0.0).holds([0.9, -0.9]) && fence(0.15).holds([1.1, 0.0]) && !fence(0.05).holds([1.1, 0.0]));
    }
}
