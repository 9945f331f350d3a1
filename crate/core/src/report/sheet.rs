use super::number::{hundredths, millimetres, percent, percent_left, significant, tenths};
use super::{FittedMap, HeadReport};
use crate::fit::Stopped;
use crate::map::MapUnit;
use crate::math::Vec3;
use serde::Serialize;

/// The answer for one map in words and in a table.
#[derive(Clone, Debug, PartialEq, Serialize)]
pub struct Sheet {
    /// The answer.
    pub sentence: String,
    /// The numbers.
    pub rows: Vec<Row>,
    /// The three maps in words.
    pub alt: Alternative,
    /// What the shared scale of the three maps ends with.
    pub scale: Scale,
}

/// The ends of a scale from −limit to limit.
#[derive(Clone, Debug, PartialEq, Serialize)]
pub struct Scale {
    /// The limit, without sign.
    pub limit: String,
    /// Its unit.
    pub unit: &'static str,
}

/// A number with its name, unit and meaning.
#[derive(Clone, Debug, PartialEq, Serialize)]
pub struct Row {
    /// Fixed name for programs.
    pub code: &'static str,
    /// Name for people.
    pub label: &'static str,
    /// The number.
    pub value: String,
    /// Its unit, empty where it has none.
    pub unit: &'static str,
    /// What it means, in a line.
    pub meaning: &'static str,
}

/// The maps in words, for those who do not see them.
#[derive(Clone, Debug, PartialEq, Serialize)]
pub struct Alternative {
    /// The map.
    pub measured: String,
    /// The dipole's map.
    pub projected: String,
    /// What is left over.
    pub residual: String,
}

/// An electrode's label with its direction from the centre.
#[derive(Clone, Copy, Debug)]
pub struct Site<'a> {
    /// Its label.
    pub label: &'a str,
    /// Unit direction: x right, y front, z up.
    pub direction: Vec3,
}

impl Sheet {
    /// The sheet of a fitted map.
    pub fn new(map: &FittedMap, head: &HeadReport, sites: &[Site], unit: MapUnit) -> Self {
        Self {
            sentence: sentence(map),
            rows: rows(map, head, sites.len()),
            alt: Alternative {
                measured: described("Measured map", &map.measured, sites, unit),
                projected: described("Map of the one dipole", &map.projected, sites, unit),
                residual: described("Left over", &map.residual, sites, unit),
            },
            scale: Scale { limit: significant(map.scale_limit(), 2), unit: unit_name(unit) },
        }
    }
}

fn sentence(map: &FittedMap) -> String {
    let dipole = &map.dipole;
    let shares = format!(
        "One equivalent dipole reproduces {} % of this map (residual variance {} %, {} degrees of freedom) in a spherical model.",
        percent_left(map.residual_variance),
        percent(map.residual_variance),
        map.degrees_of_freedom
    );
    let site = match dipole.nearest_site {
        Some(site) => format!("under {site}"),
        None if dipole.eccentricity < 0.1 => "near the centre of the sphere".into(),
        None if dipole.canonical_mm[2] < 0.0 => "low in the head, under no standard site".into(),
        None => "away from all standard sites".into(),
    };
    let place = format!(
        "Equivalent position {site}, {}, model depth {} mm; published error of sphere models about 10 mm.",
        dipole.side,
        millimetres(dipole.depth_mm)
    );
    let reservation = match map.fit.stopped_because {
        Stopped::Converged => "",
        Stopped::Boundary => {
            " The best position presses on the boundary of the modelled brain: a better one may lie outside it, or the map is noisy."
        }
        Stopped::IterationLimit => " The search ended before it reached a minimum: do not rely on this position.",
    };
    format!("{shares} {place}{reservation} {CAUTION}")
}

/// Stands beside every share.
const CAUTION: &str = "A low residual variance alone does not show that a map has a single source.";

fn rows(map: &FittedMap, head: &HeadReport, electrodes: usize) -> Vec<Row> {
    let dipole = &map.dipole;
    let triple = |v: Vec3, text: fn(f64) -> String| v.0.map(text).join(", ");
    let row = |code, label, value: String, unit, meaning| Row { code, label, value, unit, meaning };
    let shells = head
        .shells
        .iter()
        .map(|s| {
            format!("{} {} mm {} S/m", s.tissue, tenths(s.outer_radius_mm), significant(s.conductivity_s_per_m, 3))
        })
        .collect::<Vec<_>>()
        .join("; ");
    vec![
        row(
            "residual_variance",
            "Residual variance",
            percent(map.residual_variance),
            "%",
            "Share of the map's power that the dipole does not reproduce.",
        ),
        row(
            "variance_explained",
            "Variance explained",
            percent_left(map.residual_variance),
            "%",
            "100 % less the residual variance.",
        ),
        row(
            "adjusted_rv",
            "Adjusted residual variance",
            percent(map.adjusted_rv),
            "%",
            "Residual variance per degree of freedom, comparable between numbers of electrodes.",
        ),
        row(
            "degrees_of_freedom",
            "Degrees of freedom",
            map.degrees_of_freedom.to_string(),
            "",
            "Electrodes used less seven: the reference, three of position, three of moment.",
        ),
        row(
            "nearest_site",
            "Nearest site above",
            dipole.nearest_site.unwrap_or("none").to_owned(),
            "",
            "Standard electrode site radially above the position, if one is within 20°; it names no anatomy.",
        ),
        row("side", "Side", dipole.side.to_owned(), "", "Half of the head; midline within 5 mm of its mid-plane."),
        row(
            "depth_mm",
            "Model depth",
            millimetres(dipole.depth_mm),
            "mm",
            "Distance from the position outwards to the inner skull of the model; extended sources fit too deep.",
        ),
        row(
            "eccentricity",
            "Eccentricity",
            hundredths(dipole.eccentricity),
            "",
            "Distance from the centre over the radius of the modelled brain.",
        ),
        row(
            "canonical_mm",
            "Position from the centre",
            triple(dipole.canonical_mm, tenths),
            "mm",
            "x to the right, y to the front, z up, from the centre of the sphere.",
        ),
        row(
            "position_mm",
            "Position in the table's frame",
            triple(dipole.position_mm, tenths),
            "mm",
            "Position in the axes and from the origin of the electrode table.",
        ),
        row(
            "direction",
            "Direction",
            triple(dipole.direction, hundredths),
            "",
            "Unit moment from the negative to the positive pole, for the sign of the map as given; a component's sign is arbitrary.",
        ),
        row(
            "radial_share",
            "Radial share",
            dipole.radial_share.map_or("undefined".into(), hundredths),
            "",
            "Part of the squared moment that points along the radius.",
        ),
        row(
            "strength",
            "Strength",
            significant(dipole.strength, 3),
            dipole.strength_unit,
            "Length of the moment; relative strengths are not comparable between maps.",
        ),
        row(
            "electrodes",
            "Electrodes used",
            electrodes.to_string(),
            "",
            "Electrodes with position and value, not left out.",
        ),
        row(
            "head_radius_mm",
            "Head radius",
            tenths(head.radius_mm),
            "mm",
            "Radius of the sphere that stands for the scalp.",
        ),
        row(
            "head_fit_rms_mm",
            "Electrodes off the sphere, rms",
            tenths(head.fit_rms_mm),
            "mm",
            "Root mean square distance of the electrodes from that sphere.",
        ),
        row(
            "shells",
            "Shells, outer radius and conductivity",
            shells,
            "",
            "The layers of the head model, from the inside.",
        ),
    ]
}

fn described(what: &str, map: &[f64], sites: &[Site], unit: MapUnit) -> String {
    let unit = unit_name(unit);
    let extreme = |sign: f64| {
        let best = (0..map.len()).reduce(|best, i| if sign * map[i] > sign * map[best] { i } else { best });
        best.and_then(|i| {
            let site = sites.get(i)?;
            Some(format!("{} ({} {unit}, {})", site.label, significant(map[i], 3), region(site.direction)))
        })
        .unwrap_or_default()
    };
    format!("{what}, seen from above: most positive at {}, most negative at {}.", extreme(1.0), extreme(-1.0))
}

fn unit_name(unit: MapUnit) -> &'static str {
    match unit {
        MapUnit::Microvolt => "µV",
        MapUnit::Volt => "V",
        MapUnit::Relative => "relative units",
    }
}

/// A direction in plain words.
fn region(direction: Vec3) -> String {
    let word = |value: f64, positive: &'static str, negative: &'static str| match value {
        v if v > 0.35 => positive,
        v if v < -0.35 => negative,
        _ => "",
    };
    let words = [word(direction[1], "front", "back"), word(direction[0], "right", "left")];
    let words: Vec<&str> = words.into_iter().filter(|word| !word.is_empty()).collect();
    if words.is_empty() { "top".into() } else { words.join(" ") }
}
