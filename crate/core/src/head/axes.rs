use crate::math::Vec3;
use core::fmt;
use core::str::FromStr;

/// The way from the frame of a table to the canonical one, x right, y front, z up: a rotation, or a rotation and a mirror
/// image where the table shows left and right exchanged.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Axes {
    /// The canonical x, y and z in the frame of the table.
    rows: [Vec3; 3],
}

impl Axes {
    /// The frame of the table is the canonical one.
    pub const CANONICAL: Self =
        Self { rows: [Vec3::new(1.0, 0.0, 0.0), Vec3::new(0.0, 1.0, 0.0), Vec3::new(0.0, 0.0, 1.0)] };

    /// From the canonical x, y and z, which must be orthonormal.
    pub(super) fn from_rows(rows: [Vec3; 3]) -> Self {
        Self { rows }
    }

    /// The canonical x, y and z in the frame of the table.
    pub fn rows(&self) -> [Vec3; 3] {
        self.rows
    }

    /// A direction or a distance from the centre, in canonical axes.
    pub fn to_canonical(&self, v: Vec3) -> Vec3 {
        // Not even the sign of a zero changes where nothing is turned.
        if *self == Self::CANONICAL { v } else { Vec3(self.rows.map(|row| row.dot(v))) }
    }

    /// A canonical direction in the axes of the table.
    pub fn to_table(&self, v: Vec3) -> Vec3 {
        if *self == Self::CANONICAL {
            return v;
        }
        let [x, y, z] = self.rows;
        x * v[0] + y * v[1] + z * v[2]
    }

    /// The same with left and right exchanged.
    pub fn mirrored(self) -> Self {
        let [x, y, z] = self.rows;
        Self { rows: [-x, y, z] }
    }

    /// The angle in degrees by which another rotation differs.
    pub fn angle_to(&self, other: &Self) -> f64 {
        let trace: f64 = self.rows.iter().zip(other.rows).map(|(a, b)| a.dot(b)).sum();
        libm::acos(((trace - 1.0) / 2.0).clamp(-1.0, 1.0)).to_degrees()
    }

    /// The named frame that is nearest, with the angle to it in degrees.
    pub fn nearest(&self) -> (AxesName, f64) {
        AxesName::all()
            .map(|name| (name, self.angle_to(&name.axes())))
            .reduce(|best, next| if next.1 < best.1 { next } else { best })
            .unwrap_or((AxesName::CANONICAL, 0.0))
    }
}

/// The directions that x, y and z of a frame point to, as in `right-front-up`.
///
/// Only right-handed frames have a name: a left-handed one is the mirror image of a head in a right-handed one.
#[derive(Clone, Copy, Debug, PartialEq, Eq, serde::Serialize, serde::Deserialize)]
#[serde(into = "String", try_from = "String")]
pub struct AxesName([Way; 3]);

/// A direction of the head: the canonical axis and whether it points against it.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
struct Way {
    axis: usize,
    against: bool,
}

/// Words of the three axes, along and against.
const WORDS: [[&str; 2]; 3] = [["right", "left"], ["front", "back"], ["up", "down"]];

/// All six, in the order of their words.
const WAYS: [Way; 6] = [
    Way { axis: 0, against: false },
    Way { axis: 0, against: true },
    Way { axis: 1, against: false },
    Way { axis: 1, against: true },
    Way { axis: 2, against: false },
    Way { axis: 2, against: true },
];

impl Way {
    fn word(self) -> &'static str {
        WORDS[self.axis][usize::from(self.against)]
    }

    fn direction(self) -> Vec3 {
        let mut direction = [0.0; 3];
        direction[self.axis] = if self.against { -1.0 } else { 1.0 };
        Vec3(direction)
    }
}

impl AxesName {
    /// x right, y front, z up.
    pub const CANONICAL: Self = Self([WAYS[0], WAYS[2], WAYS[4]]);

    /// All 24, those with z up first and the canonical one before all others.
    pub fn all() -> impl Iterator<Item = Self> {
        let upright = |name: &Self| name.0[2] == WAYS[4];
        let every = || WAYS.into_iter().flat_map(|x| WAYS.into_iter().filter_map(move |y| Self::from_two(x, y)));
        every().filter(upright).chain(every().filter(move |name| !upright(name)))
    }

    /// The right-handed frame with these x and y.
    fn from_two(x: Way, y: Way) -> Option<Self> {
        let third = x.direction().cross(y.direction());
        WAYS.into_iter().find(|z| z.direction() == third).map(|z| Self([x, y, z]))
    }

    /// The rotation from this frame to the canonical one.
    pub fn axes(self) -> Axes {
        let columns = self.0.map(Way::direction);
        Axes { rows: [0, 1, 2].map(|i| Vec3(columns.map(|column| column[i]))) }
    }

    /// The words of x, y and z.
    pub fn words(self) -> [&'static str; 3] {
        self.0.map(Way::word)
    }
}

impl fmt::Display for AxesName {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        f.write_str(&self.words().join("-"))
    }
}

impl FromStr for AxesName {
    type Err = String;

    fn from_str(text: &str) -> Result<Self, String> {
        AxesName::all()
            .find(|name| name.to_string() == text)
            .ok_or_else(|| format!("“{}” names no right-handed axes", text.chars().take(40).collect::<String>()))
    }
}

impl From<AxesName> for String {
    fn from(name: AxesName) -> Self {
        name.to_string()
    }
}

impl TryFrom<String> for AxesName {
    type Error = String;

    fn try_from(text: String) -> Result<Self, String> {
        text.parse()
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn twenty_four_names_are_rotations_there_and_back() {
        let all: Vec<AxesName> = AxesName::all().collect();
        assert_eq!(all.len(), 24);
        assert_eq!(all[0], AxesName::CANONICAL);
        assert_eq!(all[0].axes(), Axes::CANONICAL);
        let v = Vec3::new(1.0, 2.0, 3.0);
        for (index, name) in all.iter().enumerate() {
            assert!(!all[..index].contains(name));
            assert_eq!(name.to_string().parse(), Ok(*name));
            let axes = name.axes();
            let [x, y, z] = axes.rows;
            assert_eq!(x.cross(y), z, "{name} is a rotation");
            assert_eq!(axes.to_table(axes.to_canonical(v)), v);
            assert_eq!(axes.nearest(), (*name, 0.0));
        }
        // Nose along +x, left ear along +y.
        let name: AxesName = "front-left-up".parse().unwrap();
        assert_eq!(name.axes().to_canonical(Vec3::new(1.0, 0.0, 0.0)), Vec3::new(0.0, 1.0, 0.0));
        assert_eq!(name.axes().to_canonical(Vec3::new(0.0, 1.0, 0.0)), Vec3::new(-1.0, 0.0, 0.0));
        assert!("right-back-up".parse::<AxesName>().is_err(), "left-handed");
    }
}
