//! A fitted map as one line of a table.

use super::FittedMap;
use super::number::{hundredths, millimetres, percent, significant, tenths};
use super::sheet::Written;
use crate::map::MapUnit;
use crate::math::Vec3;
use serde::Serialize;

/// What a table of maps shows of one of them: numbers to order and draw by, and the same in words.
#[derive(Clone, Debug, PartialEq)]
pub struct MapRow {
    /// Its name.
    pub name: String,
    /// Residual variance.
    pub rv: f64,
    /// See [`crate::assess::adjusted_residual_variance`].
    pub adjusted_rv: f64,
    /// Electrodes used less 7.
    pub degrees_of_freedom: usize,
    /// Position with x right, y front, z up and the origin at the sphere's centre.
    pub canonical_mm: Vec3,
    /// Unit moment in the same axes.
    pub canonical_direction: Vec3,
    /// Position in the frame of the electrode table.
    pub position_mm: Vec3,
    /// Inner-skull radius less the distance from the centre.
    pub depth_mm: f64,
    /// Distance from the centre over the radius of the innermost shell.
    pub eccentricity: f64,
    /// As in [`super::EquivalentDipole`].
    pub strength: f64,
    /// (m·r̂)² / |m|²; absent within 1 mm of the centre.
    pub radial_share: Option<f64>,
    /// Whether the position lies on the boundary of the region of sources.
    pub at_boundary: bool,
    /// Standard site radially above.
    pub nearest_site: Option<&'static str>,
    /// Which half of the head.
    pub side: &'static str,
    /// Third of the head from front to back, with the side.
    pub region: &'static str,
    /// Mean square of the average-referenced map over the used electrodes, in its unit squared.
    pub power: f64,
    /// Power times the squared standard deviation of the activation: the mean over the electrodes of the variance that
    /// the component gives them. Absent without an activation, and where it leaves the range of numbers.
    pub variance: Option<f64>,
    /// Whether the sign was turned.
    pub flipped: bool,
    /// All in words, in the order of [`columns`].
    pub cells: Vec<String>,
}

/// A column of the table of maps.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Serialize)]
pub struct Column {
    /// Fixed name for programs.
    pub code: &'static str,
    /// Name for people.
    pub label: &'static str,
    /// Unit, empty where it has none.
    pub unit: &'static str,
    /// What it means, in a line.
    pub meaning: &'static str,
}

/// The columns of the table of maps; without the maps' unit, units that depend on it are named together.
pub fn columns(unit: Option<MapUnit>) -> Vec<Column> {
    let column = |code, label, unit, meaning| Column { code, label, unit, meaning };
    vec![
        column("name", "Map", "", "Name of the map."),
        column("rv", "Residual variance", "%", "Share of the map's power that the dipole does not reproduce."),
        column(
            "adjusted_rv",
            "Adjusted residual variance",
            "%",
            "Residual variance per degree of freedom, comparable between numbers of electrodes.",
        ),
        column("x", "x", "mm", "Equivalent position to the right of the sphere's centre."),
        column("y", "y", "mm", "Equivalent position in front of the sphere's centre."),
        column("z", "z", "mm", "Equivalent position above the sphere's centre."),
        column(
            "site",
            "Site above",
            "",
            "Standard electrode site radially above the position, if one is within 20°; it names no anatomy.",
        ),
        column("side", "Side", "", "Half of the head; midline within 5 mm of its mid-plane."),
        column(
            "region",
            "Region",
            "",
            "Third of the head from front to back, cut at a third of the scalp radius before and behind the centre, with the side; centre within 5 mm of it. It names no anatomy.",
        ),
        column(
            "depth",
            "Model depth",
            "mm",
            "Distance from the position outwards to the inner skull of the model; extended sources fit too deep.",
        ),
        column("eccentricity", "Eccentricity", "", "Distance from the centre over the radius of the modelled brain."),
        column(
            "strength",
            "Strength",
            match unit {
                None => "nAm or relative",
                Some(MapUnit::Relative) => "relative",
                Some(_) => "nAm",
            },
            "Length of the moment, times the standard deviation of the activation where it is given.",
        ),
        column("radial", "Radial share", "", "Part of the squared moment that points along the radius."),
        column(
            "boundary",
            "At the boundary",
            "",
            "Whether the best position presses on the boundary of the modelled brain.",
        ),
        column(
            "variance",
            "Variance",
            match unit {
                None => "µV² or relative",
                Some(MapUnit::Relative) => "relative",
                Some(_) => "µV²",
            },
            "Mean square of the map over the electrodes, times the variance of the activation; empty where that is not given.",
        ),
    ]
}

impl MapRow {
    /// The row of a fitted map.
    pub fn new(map: &FittedMap, radius_mm: f64, unit: MapUnit) -> Self {
        let dipole = &map.dipole;
        let squares: f64 = map.measured.iter().map(|value| value * value).sum();
        let power = squares / map.measured.len() as f64;
        let variance = map.activation_sd.map(|sd| power * sd * sd).filter(|v| v.is_finite() && *v > 0.0);
        let region = region(dipole.canonical_mm, radius_mm, dipole.side);
        let factor = Written::of(unit).factor;
        let yes_no = if dipole.at_boundary { "yes" } else { "no" };
        let [x, y, z] = dipole.canonical_mm.0.map(tenths);
        let cells = vec![
            map.name.clone(),
            percent(map.residual_variance),
            percent(map.adjusted_rv),
            x,
            y,
            z,
            dipole.nearest_site.unwrap_or("none").into(),
            dipole.side.into(),
            region.into(),
            millimetres(dipole.depth_mm),
            hundredths(dipole.eccentricity),
            significant(dipole.strength, 3),
            dipole.radial_share.map_or("undefined".into(), hundredths),
            yes_no.into(),
            variance.map_or_else(String::new, |variance| significant(variance * factor * factor, 3)),
        ];
        Self {
            name: map.name.clone(),
            rv: map.residual_variance,
            adjusted_rv: map.adjusted_rv,
            degrees_of_freedom: map.degrees_of_freedom,
            canonical_mm: dipole.canonical_mm,
            canonical_direction: dipole.canonical_direction,
            position_mm: dipole.position_mm,
            depth_mm: dipole.depth_mm,
            eccentricity: dipole.eccentricity,
            strength: dipole.strength,
            radial_share: dipole.radial_share,
            at_boundary: dipole.at_boundary,
            nearest_site: dipole.nearest_site,
            side: dipole.side,
            region,
            power,
            variance,
            flipped: map.flipped,
            cells,
        }
    }
}

/// A part of the head by its place in the sphere: front and back begin a third of the scalp radius before and behind the
/// centre, the midline is that of `side`. Within 5 mm of the centre there is no telling.
fn region(canonical_mm: Vec3, radius_mm: f64, side: &str) -> &'static str {
    /// The thirds with their sides.
    const REGIONS: [[&str; 3]; 3] = [
        ["front-left", "front-midline", "front-right"],
        ["middle-left", "middle-midline", "middle-right"],
        ["back-left", "back-midline", "back-right"],
    ];
    if canonical_mm.norm() <= super::CENTRE_MM {
        return "centre";
    }
    let third = match canonical_mm[1] / radius_mm {
        y if y > 1.0 / 3.0 => 0,
        y if y < -1.0 / 3.0 => 2,
        _ => 1,
    };
    let side = match side {
        "left" => 0,
        "right" => 2,
        _ => 1,
    };
    REGIONS[third][side]
}
