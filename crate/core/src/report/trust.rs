//! How far a fit may be trusted: as it stands in a report, and in words.

use super::number::{given, hundredths, millimetres, percent, percent_left, signed, significant, tenths};
use super::sheet::{Row, Written, row};
use super::{ErrorSettings, FittedMap, HeadReport, Settings, SourceSettings};
use crate::assess::{Hint, Reason, ReasonCode, Reference, Word};
use crate::map::MapUnit;
use crate::math::{Autocorrelation, Ellipsoid, Vec3};
use crate::simulate::{Kind, Orientation};
use serde::Serialize;
use std::sync::Arc;

/// Where the dipole may be when head, electrodes and map are not exact.
#[derive(Clone, Debug, PartialEq, Serialize)]
pub struct RegionReport {
    /// Share of refits that the ellipsoid holds.
    pub level: f64,
    /// Number of refits.
    pub draws: usize,
    /// What determines them.
    pub seed: u32,
    /// What was drawn, and what each cause does alone.
    pub from: Vec<CauseReport>,
    /// Mean of (x − c)(x − c)ᵀ of the refitted positions x about the fitted one c, in the frame of the electrode table.
    pub covariance_mm2: [[f64; 3]; 3],
    /// Semi-axes of the ellipsoid about the fitted position, longest first.
    pub semi_axes_mm: [f64; 3],
    /// Their directions in the frame of the electrode table.
    pub axes: [Vec3; 3],
    /// Volume of the ellipsoid.
    pub volume_ml: f64,
    /// Root mean square of the change of depth.
    pub depth_sd_mm: f64,
    /// Angle that 95 % of the refitted moments stay within.
    pub direction_deg: f64,
    /// Root mean square of the relative change of strength.
    pub strength_sd: f64,
    /// The region if the residual were independent noise.
    pub noise_only: NoiseOnly,
    /// Moran's I of the residual.
    pub residual_structure: Option<Structure>,
    /// Scatter of the fits of all maps, where they repeat one map.
    pub repeats: Option<Repeats>,
    /// Whether the ellipsoid reaches beyond the region of sources.
    pub reaches_boundary: bool,
}

/// A cause of scatter.
#[derive(Clone, Debug, PartialEq, Serialize)]
pub struct CauseReport {
    /// `electrodes`, `skull`, `sphere` or `noise`.
    pub cause: &'static str,
    /// What was drawn: root-mean-square distance in mm; least and largest ratio; standard errors of centre and radius in
    /// mm; standard deviation in the unit of the map.
    pub size: Vec<f64>,
    /// Root mean square, per axis, of the shift of refits under this cause alone from the fitted position.
    pub sd_mm: f64,
}

/// What independent noise would say.
#[derive(Clone, Debug, PartialEq, Serialize)]
pub struct NoiseOnly {
    /// Standard deviation at each electrode, in the unit of the map.
    pub noise_sd: f64,
    /// `residual` or `settings`.
    pub noise_from: &'static str,
    /// s² (DᵀD)⁻¹, in the frame of the electrode table; absent where the map does not determine the position.
    pub covariance_mm2: Option<[[f64; 3]; 3]>,
    /// Residual variance up to which a position belongs to the profile region.
    pub profile_limit: f64,
    /// Volume of that region.
    pub profile_volume_ml: f64,
    /// Whether it reaches the boundary of the region of sources.
    pub reaches_boundary: bool,
}

/// See [`Autocorrelation`].
#[derive(Clone, Copy, Debug, PartialEq, Serialize)]
pub struct Structure {
    /// Moran's I.
    pub moran: f64,
    /// Its expectation for independent noise.
    pub expected: f64,
    /// Standard deviations above it.
    pub z: f64,
    /// Chance of so much for independent noise.
    pub p: f64,
}

impl From<Autocorrelation> for Structure {
    fn from(Autocorrelation { moran, expected, z, p }: Autocorrelation) -> Self {
        Self { moran, expected, z, p }
    }
}

/// Fits of repeats of one map.
#[derive(Clone, Debug, PartialEq, Serialize)]
pub struct Repeats {
    /// How many were fitted.
    pub count: usize,
    /// Their mean position in the frame of the electrode table.
    pub mean_mm: Vec3,
    /// Root-mean-square distance from it.
    pub rms_mm: f64,
    /// Largest distance from it.
    pub max_mm: f64,
    /// For drawings: the first few hundred, in scalp radii, canonical.
    #[serde(skip)]
    pub points: Arc<[Vec3]>,
}

/// A reference population.
#[derive(Clone, Debug, PartialEq, Serialize)]
pub struct PopulationReport {
    /// Of what.
    pub kind: Kind,
    /// Number of maps.
    pub draws: usize,
    /// What determines them.
    pub seed: u32,
    /// Head, depth, number and orientation of the sources.
    pub rule: String,
    /// Residual variances that these percentages of the maps lie below.
    pub rv_percentiles: Percentiles,
    /// Share of maps whose dipole presses on the boundary.
    pub at_boundary_share: f64,
}

/// Residual variances by percentage.
#[derive(Clone, Copy, Debug, PartialEq, Serialize)]
#[allow(missing_docs)]
pub struct Percentiles {
    #[serde(rename = "1")]
    pub p1: f64,
    #[serde(rename = "5")]
    pub p5: f64,
    #[serde(rename = "25")]
    pub p25: f64,
    #[serde(rename = "50")]
    pub p50: f64,
    #[serde(rename = "75")]
    pub p75: f64,
    #[serde(rename = "95")]
    pub p95: f64,
    #[serde(rename = "99")]
    pub p99: f64,
}

impl PopulationReport {
    /// Of the fits of a population.
    pub fn new(kind: Kind, reference: &Reference, seed: u32, rule: String) -> Self {
        let at = |share| reference.percentile(share);
        Self {
            kind,
            draws: reference.draws().len(),
            seed,
            rule,
            rv_percentiles: Percentiles {
                p1: at(0.01),
                p5: at(0.05),
                p25: at(0.25),
                p50: at(0.5),
                p75: at(0.75),
                p95: at(0.95),
                p99: at(0.99),
            },
            at_boundary_share: reference.boundary_share(),
        }
    }
}

/// A map among the maps of a population.
#[derive(Clone, Copy, Debug, PartialEq, Serialize)]
pub struct Among {
    /// Of what.
    pub kind: Kind,
    /// Share of its maps with a lower residual variance.
    pub share_lower_rv: f64,
    /// The same among those fitted at about the same eccentricity.
    pub share_lower_rv_at_this_depth: f64,
}

/// What a map may count as.
#[derive(Clone, Debug, PartialEq, Serialize)]
pub struct VerdictReport {
    /// The verdict.
    pub word: Word,
    /// In words.
    pub text: String,
    /// What speaks for it or for caution.
    pub reasons: Vec<ReasonReport>,
    /// What place and map hint at.
    pub hints: Vec<HintReport>,
}

/// A reason in words.
#[derive(Clone, Debug, PartialEq, Serialize)]
pub struct ReasonReport {
    /// What it is.
    pub code: ReasonCode,
    /// In words.
    pub text: String,
    /// The number.
    pub value: f64,
    /// The limit that it was held against.
    pub limit: Option<f64>,
}

/// A hint in words: common practice, no source.
#[derive(Clone, Debug, PartialEq, Serialize)]
pub struct HintReport {
    /// What it is.
    pub code: Hint,
    /// In words.
    pub text: &'static str,
    /// What it rests on.
    pub basis: &'static str,
}

impl VerdictReport {
    /// In words; `noise` is the share of noise in the power of simulated single dipoles.
    pub fn new(word: Word, reasons: &[Reason], hints: &[Hint], noise: f64) -> Self {
        Self {
            word,
            text: match reasons.iter().map(|reason| reason.code) {
                mut codes if word == Word::Undecided => match codes.find(|code| UNDECIDED_FOR.contains(code)) {
                    Some(ReasonCode::TwoExplainMore) => TWO,
                    Some(_) => SELDOM,
                    None => verdict_text(word),
                },
                _ => verdict_text(word),
            }
            .into(),
            reasons: reasons.iter().map(|one| reason(one, noise)).collect(),
            hints: hints
                .iter()
                .map(|&code| HintReport { code, text: hint_text(code), basis: "common practice, no source" })
                .collect(),
        }
    }
}

/// Of a map that two dipoles explain better.
const TWO: &str =
    "Undecided: two dipoles explain more of this map than one, by more than errors of the head and noise do.";

/// Reasons for which a map is undecided whatever populations say, in the order that they are given in.
const UNDECIDED_FOR: [ReasonCode; 2] = [ReasonCode::TwoExplainMore, ReasonCode::SeldomOneDipole];

/// Of a map that is undecided because few single dipoles leave as much over.
const SELDOM: &str =
    "Undecided: more is left over than with most simulated single dipoles, but a few of them leave as much.";

fn verdict_text(word: Word) -> &'static str {
    match word {
        Word::LoneElectrode => {
            "Lone electrode: one channel carries most of this map, which may be a fault of its contact; a dipole says little about it."
        }
        Word::Paired => {
            "Paired: a mirrored pair of dipoles explains more of this map than a single one, by more than errors of the head and noise do."
        }
        Word::Edge => {
            "Edge: the best position presses on the boundary of the modelled brain. The source may lie outside it, or the fit is noisy."
        }
        Word::BelowTheBrain => {
            "Below the brain: the best position lies low in the head, where the model has no brain: orbit, face, base of the skull or neck."
        }
        Word::Dipolar => {
            "Dipolar with this head and these electrodes: as little is left over as with simulated single dipoles, and seldom with two or a hundred."
        }
        Word::Undecided => {
            "Undecided: one equivalent dipole fits as well as with simulated single dipoles, but several sources often fit as well here."
        }
        Word::NotDipolar => {
            "Not dipolar with this head and these electrodes: more is left over than the limit for simulated single dipoles allows."
        }
    }
}

fn reason(reason: &Reason, noise: f64) -> ReasonReport {
    let share = |share: f64| format!("{} %", near_all(share));
    let (value, limit) = (reason.value, reason.limit.unwrap_or(f64::NAN));
    let among = |what: &str, how: &str| match value > 0.0 {
        true => {
            format!("{} of the simulated {what} leave less over ({how} the limit of {}).", share(value), share(limit))
        }
        false => format!("None of the simulated {what} leaves less over (limit {}).", share(limit)),
    };
    // Of all or of those at about this depth, whichever is less.
    let single = "single dipoles, of all or of those at about this depth,";
    let text = match reason.code {
        ReasonCode::OneElectrode => {
            format!("One electrode carries {} of the map's power (limit {}).", share(value), share(limit))
        }
        ReasonCode::AtBoundary => format!(
            "At eccentricity {} the residual still falls outwards, at the boundary of the sources.",
            hundredths(value)
        ),
        ReasonCode::BelowFloor => {
            format!("The position lies {} brain radii below the floor of the modelled brain.", hundredths(-value))
        }
        ReasonCode::LikeOneDipole => among(single, "within"),
        ReasonCode::SeldomOneDipole | ReasonCode::UnlikeOneDipole => format!(
            "{} They are drawn with {} % of noise; of a noisier map more is left over, whatever its source.",
            among(single, "over"),
            percent(noise)
        ),
        ReasonCode::RareInTwo => among("pairs of dipoles", "within"),
        ReasonCode::UsualInTwo => among("pairs of dipoles", "over"),
        ReasonCode::RareInHundred => among("mixtures of a hundred dipoles", "within"),
        ReasonCode::UsualInHundred => among("mixtures of a hundred dipoles", "over"),
        ReasonCode::OutsideCoverage => format!(
            "The nearest electrode is {}° away from the position, seen from the centre (limit {}°): it lies under none.",
            millimetres(value),
            millimetres(limit)
        ),
        ReasonCode::PairExplainsMore => {
            format!("A mirrored pair gains as much with {} of the simulated single dipoles.", share(value))
        }
        ReasonCode::TwoExplainMore => {
            format!("Two free dipoles gain as much with {} of the simulated single dipoles.", share(value))
        }
        ReasonCode::SearchUnfinished => "The search ended before it reached a minimum.".into(),
    };
    ReasonReport { code: reason.code, text, value, limit: reason.limit }
}

fn hint_text(hint: Hint) -> &'static str {
    match hint {
        Hint::NearEyes => "Low at the front: movements of eyes and lids make such maps.",
        Hint::NearTemple => "Low at the side and near the surface: the muscles of the temples make such maps.",
        Hint::NearNeck => "Low at the back: the muscles of the neck make such maps.",
        Hint::ShallowRadial => "Very shallow and radial: muscle or a single electrode can make such maps.",
        Hint::OneChannel => "One electrode has much of what is left over: look at its contact before the map.",
    }
}

/// The answer to how far a fit may be trusted.
#[derive(Clone, Debug, PartialEq, Serialize)]
pub struct Trust {
    /// What the map may count as; absent until the populations that it depends on are there.
    pub verdict: Option<VerdictReport>,
    /// Where the dipole may be.
    pub region: TrustRegion,
    /// The populations that are there.
    pub populations: Vec<TrustPopulation>,
    /// Head, depth, number and orientation of the sources.
    pub rule: String,
    /// What stands below all of it.
    pub cautions: [&'static str; 3],
}

/// A region in words and as it is drawn: canonical axes, the scalp at radius 1.
#[derive(Clone, Debug, PartialEq, Serialize)]
pub struct TrustRegion {
    /// In a sentence.
    pub sentence: String,
    /// Its numbers.
    pub rows: Vec<Row>,
    /// What each cause does.
    pub causes: Vec<TrustCause>,
    /// Refitted positions.
    pub cloud: Vec<Vec3>,
    /// The ellipsoid that holds 95 % of them.
    pub ellipsoid: DrawnEllipsoid,
    /// The same if the residual were independent noise.
    pub noise_only: Option<DrawnEllipsoid>,
    /// The residual's spatial structure.
    pub structure: String,
    /// Repeats of the map.
    pub repeats: Option<TrustRepeats>,
    /// The drawing in words.
    pub alt: String,
    /// What else is to be said.
    pub notes: Vec<&'static str>,
}

/// A line of the table of causes.
#[derive(Clone, Debug, PartialEq, Serialize)]
pub struct TrustCause {
    /// Fixed name.
    pub cause: &'static str,
    /// Name for people.
    pub label: &'static str,
    /// What was drawn.
    pub size: String,
    /// Its contribution in mm.
    pub sd: String,
}

/// Repeats in words and as they are drawn.
#[derive(Clone, Debug, PartialEq, Serialize)]
pub struct TrustRepeats {
    /// In a sentence.
    pub sentence: String,
    /// Their numbers.
    pub rows: Vec<Row>,
    /// Fitted positions.
    pub points: Vec<Vec3>,
}

/// (x − centre)ᵀ C⁻¹ (x − centre) ≤ scale²; C as xx, xy, xz, yy, yz, zz.
#[derive(Clone, Copy, Debug, PartialEq, Serialize)]
pub struct DrawnEllipsoid {
    /// The centre.
    pub centre: Vec3,
    /// C.
    pub covariance: [f64; 6],
    /// The scale.
    pub scale: f64,
}

impl From<&Ellipsoid> for DrawnEllipsoid {
    fn from(ellipsoid: &Ellipsoid) -> Self {
        let c = &ellipsoid.covariance;
        let covariance = [(0, 0), (0, 1), (0, 2), (1, 1), (1, 2), (2, 2)].map(|(i, j)| c.at(i, j));
        Self { centre: ellipsoid.centre, covariance, scale: ellipsoid.scale }
    }
}

/// A population in words, and the map in it; percent without the sign.
#[derive(Clone, Debug, PartialEq, Serialize)]
pub struct TrustPopulation {
    /// Of what.
    pub kind: Kind,
    /// Name for people.
    pub label: &'static str,
    /// Number of maps.
    pub draws: usize,
    /// The map in it, in a sentence.
    pub sentence: String,
    /// Residual variance that half of them lie below.
    pub median: String,
    /// That 5 % lie below.
    pub percentile_5: String,
    /// That 95 % lie below.
    pub percentile_95: String,
    /// Share with a lower residual variance than the map.
    pub share_lower: String,
    /// The same at about the same eccentricity.
    pub share_lower_here: String,
    /// Share at the boundary.
    pub boundary: String,
}

/// The published error that stands beside every millimetre.
pub(super) const PUBLISHED: &str =
    "Published error of sphere models: about 10 mm (176 implanted sources, 10.6 ± 5.5 mm; Cuffin 2001).";

pub(super) const CAUTIONS: [&str; 3] = [
    "These populations are simulations in this model; they give no probability that the map has a single source.",
    "A low residual variance says nothing about extent: active patches of 19 to 49 cm² fit with less than 1 % left over, 8 to 19 mm too deep (simulation at 71 electrodes).",
    "For research. Not a medical device; licensed practice and local rules come first.",
];

impl Trust {
    /// From a fitted map and what was made of it; `drawn` holds the refits with their ellipsoid and that of independent noise.
    pub fn new(
        map: &FittedMap,
        region: &RegionReport,
        drawn: (Vec<Vec3>, DrawnEllipsoid, Option<DrawnEllipsoid>),
        verdict: Option<VerdictReport>,
        populations: &[(PopulationReport, Among)],
        rule: String,
        unit: MapUnit,
    ) -> Self {
        let (cloud, ellipsoid, noise_only) = drawn;
        let mut notes = Vec::new();
        if region.reaches_boundary {
            notes.push("The ellipsoid reaches beyond the modelled brain; of a source there it says nothing.");
        }
        notes.push(
            "The region is as wide as the errors that it is drawn from; it holds nothing about sources of another kind than one dipole.",
        );
        let [a, b, c] = region.semi_axes_mm.map(millimetres);
        let doubt = match verdict.as_ref().map(|verdict| verdict.word) {
            Some(Word::LoneElectrode | Word::Edge | Word::NotDipolar) => {
                "The verdict speaks against one dipole: what follows only says how its best fit scatters. "
            }
            _ => "",
        };
        Self {
            verdict,
            region: TrustRegion {
                sentence: format!(
                    "{doubt}When head, electrodes and map are off as assumed here, 95 % of refits lie in an ellipsoid of {} ml, {a} × {b} × {c} mm to each side of the position. {PUBLISHED}",
                    significant(region.volume_ml, 2)
                ),
                rows: region_rows(region, Written::of(unit)),
                causes: causes(region, Written::of(unit)),
                cloud,
                ellipsoid,
                noise_only,
                structure: structure(region.residual_structure),
                repeats: region.repeats.as_ref().map(repeats),
                alt: format!(
                    "Refitted positions scatter about the equivalent dipole, 95 % of them within {a} × {b} × {c} mm to each side."
                ),
                notes,
            },
            populations: populations.iter().map(|(population, among)| among_words(map, population, among)).collect(),
            rule,
            cautions: CAUTIONS,
        }
    }
}

pub(super) fn region_rows(region: &RegionReport, unit: Written) -> Vec<Row> {
    let noise = &region.noise_only;
    let axes = region.semi_axes_mm.map(millimetres).join(" × ");
    let mut rows = vec![
        row(
            "volume_ml",
            "Volume of the region",
            significant(region.volume_ml, 2),
            "ml",
            "Of the ellipsoid that holds 95 % of the refits.",
        ),
        row("semi_axes_mm", "Semi-axes", axes, "mm", "From the equivalent position to its surface, longest first."),
        row(
            "depth_sd_mm",
            "Depth",
            format!("± {}", millimetres(region.depth_sd_mm)),
            "mm",
            "Root mean square of the change of depth over the refits.",
        ),
        row(
            "direction_deg",
            "Direction",
            format!("within {}°", millimetres(region.direction_deg)),
            "",
            "Angle that 95 % of the refitted moments stay within.",
        ),
        row(
            "strength_sd",
            "Strength",
            format!("± {}", percent(region.strength_sd)),
            "%",
            "Root mean square of the relative change of strength over the refits.",
        ),
        row("draws", "Refits", region.draws.to_string(), "", "Heads, electrodes and noise drawn anew by a seed."),
        row(
            "profile_volume_ml",
            "If the residual were independent noise",
            significant(noise.profile_volume_ml, 2),
            "ml",
            "Volume of the positions whose residual variance stays below a limit from the F or χ² distribution; too small wherever the residual is not independent noise.",
        ),
        row(
            "noise_sd",
            if noise.noise_from == "residual" {
                "Independent noise, from the residual"
            } else {
                "Independent noise, as given"
            },
            significant(unit.factor * noise.noise_sd, 2),
            unit.name,
            "Standard deviation at each electrode that the row above assumes.",
        ),
    ];
    if let Some(found) = region.residual_structure {
        rows.push(row(
            "moran",
            "Likeness of neighbours in the residual",
            format!("{} ({} expected)", hundredths(found.moran), hundredths(found.expected)),
            "",
            "Moran's I (Moran 1950; Cliff & Ord 1981), with what independent noise would give.",
        ));
    }
    rows
}

pub(super) fn causes(region: &RegionReport, unit: Written) -> Vec<TrustCause> {
    let line = |cause: &CauseReport| {
        let (label, size) = match (cause.cause, &cause.size[..]) {
            ("electrodes", [mm]) => ("Electrodes misplaced", format!("{} mm", given(*mm))),
            ("skull", [least, most]) => {
                ("Conductivity of the skull", format!("brain {} to {} times", given(*least), given(*most)))
            }
            ("sphere", [centre, radius]) => {
                ("Sphere", format!("centre {} mm, radius {} mm", significant(*centre, 2), significant(*radius, 2)))
            }
            ("noise", [sd]) => {
                ("Noise as drawn for the refits", format!("{} {}", significant(unit.factor * sd, 2), unit.name))
            }
            _ => ("", String::new()),
        };
        TrustCause { cause: cause.cause, label, size, sd: tenths(cause.sd_mm) }
    };
    region.from.iter().map(line).collect()
}

/// Chance below which likeness of neighbours is told as such.
const TELLING: f64 = 0.05;

fn structure(found: Option<Structure>) -> String {
    match found {
        Some(Structure { z, p, .. }) if p < TELLING => format!(
            "Neighbouring electrodes are left over alike, {} standard deviations more than with independent noise: the residual is error of the model or other sources, and the region from independent noise is too small.",
            tenths(z)
        ),
        Some(_) => {
            "No likeness of neighbouring electrodes is seen in the residual; with few electrodes that shows little."
                .into()
        }
        None => "Too little is left over to look for structure in it.".into(),
    }
}

fn repeats(found: &Repeats) -> TrustRepeats {
    TrustRepeats {
        sentence: format!(
            "The table holds {} repeats of this map: their equivalent positions scatter by {} mm about their mean (root mean square), at most {} mm. That is measured, not modelled; an error that all repeats share is not in it.",
            found.count,
            millimetres(found.rms_mm),
            millimetres(found.max_mm)
        ),
        rows: vec![
            row("repeats", "Repeats fitted", found.count.to_string(), "", "Maps of the table with a dipole."),
            row(
                "repeats_rms_mm",
                "Scatter",
                millimetres(found.rms_mm),
                "mm",
                "Root-mean-square distance from their mean position.",
            ),
            row(
                "repeats_max_mm",
                "Farthest",
                millimetres(found.max_mm),
                "mm",
                "Largest distance from their mean position.",
            ),
        ],
        points: found.points.to_vec(),
    }
}

/// A share in percent, with as many decimals as tell it from all.
fn near_all(share: f64) -> String {
    if share > 0.99 { percent_left(1.0 - share) } else { percent(share) }
}

/// How a kind is called.
fn label(kind: Kind) -> &'static str {
    match kind {
        Kind::Noise => "noise",
        Kind::OneDipole => "one dipole, imperfect head",
        Kind::TwoDipoles => "two dipoles",
        Kind::FiveDipoles => "five dipoles",
        Kind::TwentyDipoles => "twenty dipoles",
        Kind::HundredDipoles => "a hundred dipoles",
    }
}

fn among_words(map: &FittedMap, population: &PopulationReport, among: &Among) -> TrustPopulation {
    let many = match among.kind {
        Kind::Noise => "maps of noise",
        Kind::OneDipole => "single dipoles",
        Kind::TwoDipoles => "pairs of dipoles",
        Kind::FiveDipoles => "mixtures of five dipoles",
        Kind::TwentyDipoles => "mixtures of twenty dipoles",
        Kind::HundredDipoles => "mixtures of a hundred dipoles",
    };
    let rv = percent(map.residual_variance);
    let share = among.share_lower_rv;
    let stands = match share {
        s if s <= 0.0 => format!("lower than with all {} {many} simulated here", population.draws),
        s if s < 0.05 => format!("lower than with {} % of {many} simulated here", near_all(1.0 - s)),
        s if s <= 0.95 => format!("usual for {many} simulated here; {} % of them leave less over", percent(s)),
        s if s < 1.0 => format!("higher than with {} % of {many} simulated here", near_all(s)),
        _ => format!("higher than with all {} {many} simulated here", population.draws),
    };
    let at = &population.rv_percentiles;
    TrustPopulation {
        kind: among.kind,
        label: label(among.kind),
        draws: population.draws,
        sentence: format!("Residual variance {rv} %: {stands}."),
        median: percent(at.p50),
        percentile_5: percent(at.p5),
        percentile_95: percent(at.p95),
        share_lower: percent(share),
        share_lower_here: percent(among.share_lower_rv_at_this_depth),
        boundary: percent(population.at_boundary_share),
    }
}

/// Head, electrodes, depth, number and orientation of the simulated sources: stands beside every figure. `skull` is what is
/// drawn of the skull, `sphere` whether the sphere is.
pub fn rule(
    head: &HeadReport,
    electrodes: usize,
    settings: &Settings,
    skull: Option<[f64; 2]>,
    sphere: bool,
    draws: usize,
) -> String {
    let shells: Vec<String> =
        head.shells.iter().map(|s| format!("{} {}", s.tissue, given(s.conductivity_s_per_m))).collect();
    format!(
        "{electrodes} electrodes on a sphere of {} mm ({}; S/m). Sources {}, of equal moments. Single dipoles: {}, {} % {}. {draws} maps of each kind, seed {}.",
        tenths(head.radius_mm),
        shells.join(", "),
        source_words(&settings.sources),
        drawn_errors(&settings.errors, skull, sphere),
        percent(settings.sources.noise),
        drawn_noise(&settings.errors),
        settings.sources.seed
    )
}

/// Where simulated sources are and how they point.
pub(super) fn source_words(sources: &SourceSettings) -> String {
    let pointing = match sources.orientation {
        Orientation::Isotropic => "pointing anywhere",
        Orientation::Radial => "pointing outwards or inwards",
        Orientation::Tangential => "pointing along the sphere",
    };
    format!(
        "even in the volume of the brain up to eccentricity {}, above z = {} {} {} y in brain radii, {pointing}",
        given(sources.max_eccentricity),
        signed(sources.floor[0]),
        if sources.floor[1] < 0.0 { "−" } else { "+" },
        given(sources.floor[1].abs())
    )
}

/// What a drawn head is off in.
pub(super) fn drawn_errors(errors: &ErrorSettings, skull: Option<[f64; 2]>, sphere: bool) -> String {
    let skull = match skull {
        Some([least, most]) => format!(
            "brain conducting {} to {} times as well as skull (even in the logarithm)",
            given(least),
            given(most)
        ),
        None => "conductivities as modelled".into(),
    };
    let sphere = match (sphere, errors.sphere) {
        (false, _) => "sphere as modelled".into(),
        (true, 1.0) => "sphere off by the standard error of its fit".into(),
        (true, times) => format!("sphere off by {} times the standard error of its fit", given(times)),
    };
    let electrodes = match errors.electrodes_mm {
        0.0 => "electrodes as given".into(),
        mm => format!("electrodes {} mm off along the scalp (rms)", given(mm)),
    };
    format!("{electrodes}, {skull}, {sphere}")
}

/// Where drawn noise comes from.
pub(super) fn drawn_noise(errors: &ErrorSettings) -> String {
    match errors.background_sources {
        0 => "independent noise".into(),
        count => format!("noise of {count} weak sources"),
    }
}
