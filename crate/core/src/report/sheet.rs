use super::figure::{ABOVE, BEHIND, Figure, LEFT, TURNED};
use super::number::{beside, given, hundredths, millimetres, percent, percent_left, significant, tenths};
use super::{EquivalentDipole, FittedMap, HeadReport, Polarity};
use crate::fit::Stopped;
use crate::head::heads;
use crate::map::MapUnit;
use crate::math::Vec3;
use serde::Serialize;
use std::borrow::Cow;

/// The answer for one map in words and in a table.
#[derive(Clone, Debug, PartialEq, Serialize)]
pub struct Sheet {
    /// The answer.
    pub sentence: String,
    /// The numbers.
    pub rows: Vec<Row>,
    /// The head that they were computed in.
    pub head: HeadSheet,
    /// All electrodes that have a position.
    pub electrodes: Vec<SheetElectrode>,
    /// The dipole in the head.
    pub figure: Figure,
    /// The drawings in words.
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
    pub code: Cow<'static, str>,
    /// Name for people.
    pub label: Cow<'static, str>,
    /// The number.
    pub value: String,
    /// Its unit, empty where it has none.
    pub unit: &'static str,
    /// What it means, in a line.
    pub meaning: &'static str,
}

/// A head in words and numbers.
#[derive(Clone, Debug, PartialEq, Serialize)]
pub struct HeadSheet {
    /// Its name for people.
    pub title: &'static str,
    /// Where its shells come from.
    pub source: &'static str,
    /// Its numbers.
    pub rows: Vec<Row>,
}

/// Values at one electrode as text, with the digits that the scale of the maps deserves.
#[derive(Clone, Debug, PartialEq, Serialize)]
pub struct SheetElectrode {
    /// Its label.
    pub label: String,
    /// Whether the fit uses it.
    pub used: bool,
    /// How far the dipole's map is off, without sign, in the unit of the map; 0 where the map has no value.
    pub misfit: f64,
    /// Value of the map; empty where it has none.
    pub measured: String,
    /// Value of the dipole's map.
    pub projected: String,
    /// What is left over; empty where the map has no value.
    pub residual: String,
    /// Its share of what is left over, in percent of the power; empty where the fit does not use it.
    pub share: String,
}

/// The drawings in words, for those who do not see them.
#[derive(Clone, Debug, PartialEq, Serialize)]
pub struct Alternative {
    /// The map.
    pub measured: String,
    /// The dipole's map.
    pub projected: String,
    /// What is left over.
    pub residual: String,
    /// The dipole from above.
    pub above: String,
    /// The dipole from behind.
    pub behind: String,
    /// The dipole from the left.
    pub left: String,
    /// The dipole in the view that can be turned.
    pub turned: String,
}

/// An electrode with its direction from the centre and its values, referred to the mean of the used electrodes.
#[derive(Clone, Debug)]
pub struct Site<'a> {
    /// Its label.
    pub label: &'a str,
    /// Unit direction: x right, y front, z up.
    pub direction: Vec3,
    /// Whether the fit uses it.
    pub used: bool,
    /// Value of the map; NaN where it has none.
    pub measured: f64,
    /// Value of the dipole's map.
    pub projected: f64,
}

impl Site<'_> {
    fn residual(&self) -> f64 {
        self.measured - self.projected
    }
}

impl Sheet {
    /// The sheet of a fitted map; `sites` are all electrodes that have a position.
    pub fn new(map: &FittedMap, head: &HeadReport, sites: &[Site], unit: MapUnit) -> Self {
        let used: Vec<&Site> = sites.iter().filter(|site| site.used).collect();
        let dipole = &map.dipole;
        let unit = Written::of(unit);
        Self {
            sentence: sentence(map, head),
            rows: rows(map, head, used.len(), sites.len()),
            head: head_sheet(head),
            electrodes: electrodes(map, sites, unit),
            figure: Figure::new(dipole, head, sites),
            alt: Alternative {
                measured: described("Measured map", &used, |site| site.measured, unit),
                projected: described("Map of the one dipole", &used, |site| site.projected, unit),
                residual: described("Left over", &used, |site| site.residual(), unit),
                above: ABOVE.words(dipole),
                behind: BEHIND.words(dipole),
                left: LEFT.words(dipole),
                turned: TURNED.words(dipole),
            },
            scale: Scale { limit: significant(unit.factor * map.scale_limit(), 2), unit: unit.name },
        }
    }
}

fn electrodes(map: &FittedMap, sites: &[Site], unit: Written) -> Vec<SheetElectrode> {
    let limit = map.scale_limit();
    // Scaled first: squares of very large or small values would leave the range of numbers.
    let power = |residual: f64| (residual / limit) * (residual / limit);
    let all: f64 = map.residual.iter().map(|r| power(*r)).sum();
    let electrode = |site: &Site| {
        let residual = site.residual();
        let text = |value: f64| match value.is_nan() {
            true => String::new(),
            false => beside(unit.factor * value, unit.factor * limit),
        };
        SheetElectrode {
            label: site.label.to_owned(),
            used: site.used,
            misfit: if residual.is_nan() { 0.0 } else { residual.abs() },
            measured: text(site.measured),
            projected: text(site.projected),
            residual: text(residual),
            share: match site.used {
                true => percent(if all > 0.0 { power(residual) / all } else { 0.0 }),
                false => String::new(),
            },
        }
    };
    sites.iter().map(electrode).collect()
}

pub(super) fn sentence(map: &FittedMap, head: &HeadReport) -> String {
    let dipole = &map.dipole;
    let shares = format!(
        "One equivalent dipole reproduces {} % of this map (residual variance {} %, {} degrees of freedom) in a spherical model.",
        percent_left(map.residual_variance),
        percent(map.residual_variance),
        map.degrees_of_freedom
    );
    let place = format!("Equivalent position {}; published error of sphere models about 10 mm.", place(dipole));
    let reservation = match map.fit.stopped_because {
        Stopped::Converged => "",
        Stopped::Boundary => {
            " The best position presses on the boundary of the modelled brain: a better one may lie outside it, or the map is noisy."
        }
        Stopped::IterationLimit => " The search ended before it reached a minimum: do not rely on this position.",
    };
    let unusual = if head.unusual { " The shells of the model may not hold for this head." } else { "" };
    format!("{shares} {place}{reservation}{unusual} {CAUTION}")
}

/// Where a dipole lies, as in "under CP3, left, model depth 14 mm".
pub(super) fn place(dipole: &EquivalentDipole) -> String {
    let site = match dipole.nearest_site {
        Some(site) => format!("under {site}"),
        None if dipole.eccentricity < 0.1 => "near the centre of the sphere".into(),
        None if dipole.canonical_mm[2] < 0.0 => "low in the head, under no standard site".into(),
        None => "away from all standard sites".into(),
    };
    format!("{site}, {}, model depth {} mm", dipole.side, millimetres(dipole.depth_mm))
}

/// Stands beside every share.
const CAUTION: &str = "A low residual variance alone does not show that a map has a single source.";

pub(super) fn rows(map: &FittedMap, head: &HeadReport, used: usize, placed: usize) -> Vec<Row> {
    let dipole = &map.dipole;
    let arbitrary = dipole.polarity == Polarity::Arbitrary;
    let mut rows = vec![
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
            "electrodes",
            "Electrodes used",
            if used == placed { used.to_string() } else { format!("{used} of {placed}") },
            "",
            "Electrodes with position and value, not left out.",
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
            match skull(head) {
                Some(_) => {
                    "Distance from the position outwards to the inner skull of the model; extended sources fit too deep."
                }
                None => {
                    "Distance from the position outwards to the surface of the innermost shell; extended sources fit too deep."
                }
            },
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
    ];
    let (canonical, table) = (direction(dipole.canonical_direction, arbitrary), direction(dipole.direction, arbitrary));
    rows.extend(match arbitrary {
        true => [
            row(
                "canonical_direction",
                "Axis",
                canonical,
                "",
                "Unit vector along the moment, x to the right, y to the front, z up; the map's sign is arbitrary, so that both senses are the same.",
            ),
            row("direction", "Axis in the table's frame", table, "", "The same in the axes of the electrode table."),
        ],
        false => [
            row(
                "canonical_direction",
                "Direction",
                canonical,
                "",
                "Unit moment from the negative to the positive pole, x to the right, y to the front, z up.",
            ),
            row(
                "direction",
                "Direction in the table's frame",
                table,
                "",
                "The same in the axes of the electrode table.",
            ),
        ],
    });
    rows.extend([
        row(
            "polarity",
            "Sign of the map",
            format!("{}, {}", if map.flipped { "turned" } else { "as given" }, if arbitrary { "arbitrary" } else { "declared" }),
            "",
            "Whether the map's sign was turned, and whether it means something; a component's does not unless it is declared.",
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
            match (dipole.strength_comparable, map.activation_sd.is_some()) {
                (false, _) => {
                    "Length of the moment; relative, not comparable between components unless their activations' standard deviations are given."
                }
                (true, false) => "Length of the moment.",
                (true, true) => "Length of the moment times the standard deviation of the activation.",
            },
        ),
    ]);
    rows.extend([
        row("head", "Head", head_title(head).0.to_owned(), "", "The shells that the position was computed in."),
        row(
            "head_radius_mm",
            "Head radius",
            tenths(head.radius_mm),
            "mm",
            "Radius of the sphere that stands for the scalp.",
        ),
    ]);
    rows
}

/// The head's title and source.
pub(super) fn head_title(head: &HeadReport) -> (&'static str, &'static str) {
    heads()
        .iter()
        .find(|known| head.name == Some(known.name))
        .map_or(("Edited shells", "Shells and conductivities set by hand"), |known| (known.title, known.source))
}

/// Index of the shell called skull, if there is one inside another.
pub(super) fn skull(head: &HeadReport) -> Option<usize> {
    head.shells.iter().position(|shell| shell.tissue.eq_ignore_ascii_case("skull")).filter(|index| *index > 0)
}

pub(super) fn head_sheet(head: &HeadReport) -> HeadSheet {
    let (title, source) = head_title(head);
    let mut rows = vec![
        row(
            "head_radius_mm",
            "Radius",
            tenths(head.radius_mm),
            "mm",
            match head.radius_is_fitted {
                true => "Radius of the scalp, fitted to the electrodes.",
                false => "Radius of the scalp, set by hand or the standard one.",
            },
        ),
        row(
            "head_centre_mm",
            "Centre",
            triple(head.centre_mm, tenths),
            "mm",
            match head.centre_is_fitted {
                true => "Centre of the sphere in the frame of the electrode table, fitted to the electrodes.",
                false => "Centre of the sphere in the frame of the electrode table, set by hand or the standard one.",
            },
        ),
        row(
            "head_fit_rms_mm",
            "Electrodes off the sphere, rms",
            tenths(head.fit_rms_mm),
            "mm",
            "Root mean square distance of the electrodes from the sphere.",
        ),
        row(
            "head_fit_max_mm",
            "Electrode farthest off",
            tenths(head.fit_max_mm),
            "mm",
            "Largest distance of an electrode from the sphere; measured heads reach 14 to 21 mm.",
        ),
    ];
    for (index, shell) in head.shells.iter().enumerate() {
        let [radius, conductivity] = [tenths(shell.outer_radius_mm), given(shell.conductivity_s_per_m)];
        rows.push(row(
            format!("shell_{}", index + 1),
            capitalised(&shell.tissue),
            format!("{radius} mm, {conductivity} S/m"),
            "",
            "Outer radius and conductivity.",
        ));
    }
    if let (Some(skull), Some(brain)) = (skull(head), head.shells.first()) {
        rows.push(row(
            "brain_to_skull",
            "Brain to skull",
            significant(brain.conductivity_s_per_m / head.shells[skull].conductivity_s_per_m, 2),
            "",
            "Ratio of the two conductivities, which is not known for a person; it moves positions in and out.",
        ));
    }
    HeadSheet { title, source, rows }
}

pub(super) fn row(
    code: impl Into<Cow<'static, str>>,
    label: impl Into<Cow<'static, str>>,
    value: String,
    unit: &'static str,
    meaning: &'static str,
) -> Row {
    Row { code: code.into(), label: label.into(), value, unit, meaning }
}

pub(super) fn capitalised(word: &str) -> String {
    let mut letters = word.chars();
    letters
        .next()
        .map_or_else(String::new, |first| core::iter::once(first.to_ascii_uppercase()).chain(letters).collect())
}

fn triple(vector: Vec3, text: fn(f64) -> String) -> String {
    vector.0.map(text).join(", ")
}

/// A unit vector; both senses of it where its sign is arbitrary.
fn direction(vector: Vec3, arbitrary: bool) -> String {
    let text = triple(vector, hundredths);
    if arbitrary { format!("±({text})") } else { text }
}

fn described(what: &str, sites: &[&Site], value: fn(&Site) -> f64, unit: Written) -> String {
    let extreme = |sign: f64| {
        let best = sites.iter().reduce(|best, site| if sign * value(site) > sign * value(best) { site } else { best });
        best.map_or_else(String::new, |site| {
            let size = significant(unit.factor * value(site), 3);
            format!("{} ({size} {}, {})", site.label, unit.name, region(site.direction))
        })
    };
    format!("{what}, seen from above: most positive at {}, most negative at {}.", extreme(1.0), extreme(-1.0))
}

/// The unit in which values of a map are written, and what they are multiplied by for it.
#[derive(Clone, Copy)]
pub(super) struct Written {
    pub name: &'static str,
    pub factor: f64,
}

impl Written {
    /// Volts are written as microvolts, which need no powers of ten.
    pub fn of(unit: MapUnit) -> Self {
        match unit {
            MapUnit::Microvolt => Self { name: "µV", factor: 1.0 },
            MapUnit::Volt => Self { name: "µV", factor: 1e6 },
            MapUnit::Relative => Self { name: "relative units", factor: 1.0 },
        }
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
