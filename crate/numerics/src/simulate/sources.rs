use crate::fit::Fitter;
use crate::math::{Stream, Vec3, centre, dot};

/// Where simulated sources lie and how they point. All have the same moment.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct SourceRule {
    /// Largest distance from the centre over the radius of the innermost shell; up to there even in volume.
    pub max_eccentricity: f64,
    /// The lowest z in radii of the innermost shell, at the centre, and how much higher it is one radius further to the
    /// front: below there is no brain.
    pub floor: [f64; 2],
    /// How they point.
    pub orientation: Orientation,
}

/// How simulated sources point.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq, serde::Serialize, serde::Deserialize)]
#[serde(rename_all = "kebab-case")]
pub enum Orientation {
    /// All directions alike.
    #[default]
    Isotropic,
    /// Outwards or inwards.
    Radial,
    /// All directions along the sphere alike.
    Tangential,
}

/// What noise looks like on the scalp.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Background {
    /// So many weak sources, drawn by the rule; none for values that are independent of each other.
    pub sources: usize,
    /// Where they lie.
    pub rule: SourceRule,
}

impl SourceRule {
    /// Whether a position in radii of the innermost shell is above the floor.
    pub fn above_floor(&self, position: Vec3) -> bool {
        position[2] >= self.floor[0] + self.floor[1] * position[1]
    }

    /// Position, in radii of the innermost shell, and unit moment of a source.
    pub fn draw(&self, stream: &mut Stream) -> (Vec3, Vec3) {
        // Settings are refused that leave less than a tenth of the ball; no stream runs so long.
        const MOST_TRIES: usize = 10_000;
        let mut position = Vec3::ZERO;
        for _ in 0..MOST_TRIES {
            position = Vec3([0; 3].map(|_| 2.0 * stream.even() - 1.0)) * self.max_eccentricity;
            if position.norm() <= self.max_eccentricity && self.above_floor(position) {
                break;
            }
        }
        let direction = stream.direction();
        let radial = position.unit().unwrap_or(direction);
        let along = radial.dot(direction);
        let moment = match self.orientation {
            Orientation::Isotropic => direction,
            Orientation::Radial => radial * along.signum(),
            Orientation::Tangential => (direction - radial * along).unit().unwrap_or(direction),
        };
        (position, moment)
    }
}

impl Background {
    /// An average-referenced map of noise, of unit length.
    pub fn draw(&self, fitter: &Fitter, stream: &mut Stream) -> Vec<f64> {
        let mut map = match self.sources {
            0 => (0..fitter.field().count()).map(|_| stream.normal()).collect(),
            count => mixture(fitter, count, &self.rule, stream),
        };
        centre(&mut map);
        let length = dot(&map, &map).sqrt();
        map.iter_mut().for_each(|value| *value /= length);
        map
    }
}

/// The map of so many sources.
pub(super) fn mixture(fitter: &Fitter, count: usize, rule: &SourceRule, stream: &mut Stream) -> Vec<f64> {
    let brain = fitter.field().brain_ratio();
    let sources = (0..count).map(|_| rule.draw(stream));
    fitter.rough_sum(sources.map(|(position, moment)| (position * brain, moment)))
}
