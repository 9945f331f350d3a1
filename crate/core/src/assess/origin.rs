use super::verdict::lone_share;
use crate::math::Vec3;
use serde::Serialize;

/// What place and shape of a map may hint at; rules of thumb, common practice without a source.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Serialize)]
#[serde(rename_all = "kebab-case")]
pub enum Hint {
    /// Low at the front.
    NearEyes,
    /// At the side, low and outward.
    NearTemple,
    /// Low at the back.
    NearNeck,
    /// Just under the electrodes and pointing at them.
    ShallowRadial,
    /// One electrode stands out.
    OneChannel,
}

/// Share of a map's power on one electrode that stands out, though it is not the half that a verdict asks for.
const STANDS_OUT: f64 = 0.3;

/// Hints from a position in radii of the innermost shell (x right, y front, z up), the share of the moment that is radial,
/// and the map.
pub fn hints(position: Vec3, radial_share: Option<f64>, measured: &[f64]) -> Vec<Hint> {
    let distance = position.norm();
    let [x, y, z] = position.0.map(|c| if distance > 0.0 { c / distance } else { 0.0 });
    // Sines and cosines of angles: 0.5 is 30° or 60°, 0.17 is 10°.
    let outer = distance > 0.6;
    let found = [
        (Hint::NearEyes, outer && y > 0.7 && z < 0.0),
        (Hint::NearTemple, distance > 0.8 && x.abs() > 0.7 && (-0.6..0.17).contains(&z)),
        (Hint::NearNeck, outer && y < -0.3 && z < -0.34),
        (Hint::ShallowRadial, distance > 0.9 && radial_share.is_some_and(|share| share > 0.9)),
        (Hint::OneChannel, lone_share(measured) > STANDS_OUT),
    ];
    found.into_iter().filter(|(_, holds)| *holds).map(|(hint, _)| hint).collect()
}
