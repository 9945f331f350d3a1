//! Residual variance over the whole brain, and a dipole that is placed by hand.

use super::number::{millimetres, percent, significant};
use super::sheet::{Row, place, row};
use super::{FittedMap, Polarity};
use crate::math::Vec3;
use crate::scene::Contour;
use serde::Serialize;

/// Residual variance in three slices through a place. Lengths in scalp radii, canonical.
#[derive(Clone, Debug, PartialEq)]
pub struct Landscape {
    /// Where the slices meet.
    pub at: Vec3,
    /// The best place.
    pub best: Vec3,
    /// Rows and columns of each.
    pub size: usize,
    /// Radius of the innermost shell: the slices cover the square from minus to plus that.
    pub brain: f64,
    /// From above, from behind, from the left.
    pub slices: [Slice; 3],
    /// What contours stand for.
    pub levels: Vec<Level>,
    /// In a sentence.
    pub sentence: String,
}

/// A slice; the first row is at the top.
#[derive(Clone, Debug, PartialEq)]
pub struct Slice {
    /// `above`, `behind` or `left`.
    pub view: &'static str,
    /// Residual variance of the best dipole at each place; not a number outside the region of sources.
    pub rv: Vec<f32>,
    /// Lines of equal residual variance: to the right and up in the view.
    pub contours: Vec<Contour>,
    /// In words.
    pub alt: String,
}

/// A line of equal residual variance.
#[derive(Clone, Debug, PartialEq, Serialize)]
pub struct Level {
    /// The value.
    pub rv: f64,
    /// What it stands for.
    pub label: String,
}

impl Landscape {
    /// Levels, and all in a sentence; `level` is what errors of the head and noise put between the best place and the true
    /// one in 95 % of simulated maps.
    pub fn levels(map: &FittedMap, level: f64) -> (Vec<Level>, String) {
        let rv = map.residual_variance;
        let [region, more] = [rv + level, rv + 0.01];
        let levels = vec![
            Level {
                rv: region,
                label: format!(
                    "{} %: as far above the best as the true place, in 95 % of simulated maps",
                    percent(region)
                ),
            },
            Level { rv: more, label: format!("{} %: one percentage point above the best", percent(more)) },
        ];
        let sentence = format!(
            "Least residual variance {} % {}. Inside the full line at {} %, errors of the head and noise do not tell places apart.",
            percent(rv),
            place(&map.dipole),
            percent(region)
        );
        (levels, sentence)
    }
}

/// What a slice shows, in words: `share` of it is within the first level.
pub(crate) fn slice_words(view: &str, share: f64, least: f64) -> String {
    let view = match view {
        "above" => "A level slice from above, front up",
        "behind" => "An upright slice from behind, top up",
        _ => "An upright slice from the left, front to the left",
    };
    format!(
        "{view}: residual variance is at least {} % in it; {} % of its area lie within the first line.",
        percent(least),
        percent(share)
    )
}

/// A dipole placed by hand, its moment chosen for the least residual.
#[derive(Clone, Debug, PartialEq, Serialize)]
pub struct Probe {
    /// Where: moved into the region of sources. Scalp radii, canonical.
    pub at: Vec3,
    /// Unit moment.
    pub direction: Vec3,
    /// Its residual variance.
    pub rv: f64,
    /// In a sentence.
    pub sentence: String,
    /// Its numbers.
    pub rows: Vec<Row>,
}

impl Probe {
    /// `map` is the map with the dipole by hand, `best` with its fit.
    pub fn new(map: &FittedMap, best: &FittedMap, at: Vec3) -> Self {
        let dipole = &map.dipole;
        let away = (dipole.canonical_mm - best.dipole.canonical_mm).norm();
        let cosine = dipole.canonical_direction.dot(best.dipole.canonical_direction).clamp(-1.0, 1.0);
        let (direction, cosine, meaning) = match dipole.polarity {
            Polarity::Arbitrary => ("Axis against the best", cosine.abs(), "Angle between the two axes, without sign."),
            Polarity::Declared => ("Direction against the best", cosine, "Angle between the two moments."),
        };
        Self {
            at,
            direction: dipole.canonical_direction,
            rv: map.residual_variance,
            sentence: format!(
                "By hand, not the best fit: a dipole {} leaves {} % over, the best one {} %, {} mm away.",
                place(dipole),
                percent(map.residual_variance),
                percent(best.residual_variance),
                millimetres(away)
            ),
            rows: vec![
                row(
                    "residual_variance",
                    "Residual variance",
                    percent(map.residual_variance),
                    "%",
                    "With the best moment for this place.",
                ),
                row(
                    "canonical_mm",
                    "Position from the centre",
                    dipole.canonical_mm.0.map(millimetres).join(", "),
                    "mm",
                    "x to the right, y to the front, z up.",
                ),
                row(
                    "direction_deg",
                    direction,
                    format!("{}°", millimetres(libm::acos(cosine).to_degrees())),
                    "",
                    meaning,
                ),
                row(
                    "strength",
                    "Strength",
                    significant(dipole.strength, 3),
                    dipole.strength_unit,
                    "Length of the moment.",
                ),
            ],
        }
    }
}
