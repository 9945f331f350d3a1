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
    /// One electrode has much of what is left over.
    OneChannel,
}

/// Share of what is left over that one electrode has, and the share of the map's power that this is at least.
const STANDS_OUT: f64 = 0.3;
const WORTH_A_WORD: f64 = 0.002;

/// Hints from a position in radii of the innermost shell (x right, y front, z up), the share of the moment that is radial,
/// and what is left over.
pub fn hints(position: Vec3, radial_share: Option<f64>, residual: &[f64], residual_variance: f64) -> Vec<Hint> {
    let distance = position.norm();
    let [x, y, z] = position.0.map(|c| if distance > 0.0 { c / distance } else { 0.0 });
    // Sines and cosines of angles: 0.5 is 30° or 60°, 0.17 is 10°.
    let outer = distance > 0.6;
    let one = lone_share(residual);
    let found = [
        (Hint::NearEyes, outer && y > 0.7 && z < 0.0),
        (Hint::NearTemple, distance > 0.8 && x.abs() > 0.7 && (-0.6..0.17).contains(&z)),
        (Hint::NearNeck, outer && y < -0.3 && z < -0.34),
        (Hint::ShallowRadial, distance > 0.9 && radial_share.is_some_and(|share| share > 0.9)),
        (Hint::OneChannel, one > STANDS_OUT && one * residual_variance > WORTH_A_WORD),
    ];
    found.into_iter().filter(|(_, holds)| *holds).map(|(hint, _)| hint).collect()
}
