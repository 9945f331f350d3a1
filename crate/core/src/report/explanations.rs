//! Other explanations of a map than one dipole at its best place: in numbers, and in words.

use super::number::{millimetres, percent, significant};
use super::sheet::place;
use super::{EquivalentDipole, FittedMap, VerdictReport};
use crate::math::Vec3;
use serde::Serialize;

/// What else may explain a map.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Serialize)]
#[serde(rename_all = "kebab-case")]
pub enum Explanation {
    /// The best dipole of all; for comparison.
    Single,
    /// One dipole at the best minimum apart from it.
    SecondMinimum,
    /// Two dipoles at places that are each other's image in the mid-plane.
    MirroredPair,
    /// Two dipoles anywhere.
    TwoDipoles,
}

/// How an explanation stands beside the single dipole.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Serialize)]
#[serde(rename_all = "kebab-case")]
pub enum Decision {
    /// The single dipole itself.
    Reference,
    /// It leaves less over, by more than errors of head and noise explain.
    Preferred,
    /// Errors of head and noise explain the difference.
    NotDecidable,
    /// It explains the map less well.
    Worse,
    /// It does not count.
    Refused,
}

/// Why an explanation does not count.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Serialize)]
#[serde(rename_all = "kebab-case")]
pub enum Refusal {
    /// Too few electrodes for so many numbers.
    FewElectrodes,
    /// Where left and right meet is not known.
    MidlineUnknown,
    /// The two lie so close to each other that they are hardly two.
    Close,
    /// The two work against each other: each alone would make a much stronger map.
    Cancelling,
    /// No minimum was found.
    None,
}

/// Another explanation of a map, in numbers.
#[derive(Clone, Debug, PartialEq, Serialize)]
pub struct AlternativeReport {
    /// What it is.
    pub kind: Explanation,
    /// Share of the map's power that it leaves over; absent where it was not computed.
    pub residual_variance: Option<f64>,
    /// [RSS / (N − 1 − parameters)] / [|d|² / (N − 1)].
    pub adjusted_rv: Option<f64>,
    /// Its dipoles.
    pub dipoles: Vec<EquivalentDipole>,
    /// Distance of its two dipoles; of a second minimum, from the best one.
    pub distance_mm: Option<f64>,
    /// Numbers that it determines.
    pub parameters: usize,
    /// [(RSS₁ − RSS) / (parameters − 6)] / [RSS / (N − 1 − parameters)]: shown, not decided by, since its law does not hold
    /// where the second position is not identified.
    pub f: Option<f64>,
    /// (N − 1) ln(RSS / RSS₁) + (parameters − 6) ln(N − 1); below 0 for it. Shown, not decided by.
    pub bic_difference: Option<f64>,
    /// Share of simulated single dipoles, seen through heads that are off and with noise, of which it explains as much more
    /// as of this map; for a second minimum, whose true place is left as far above the best one.
    pub share_of_single_as_large: Option<f64>,
    /// Simulated maps behind that share.
    pub draws: usize,
    /// How it stands.
    pub decision: Decision,
    /// Why it does not count.
    pub refused: Option<Refusal>,
}

/// Least distance of two dipoles that count as two.
pub const LEAST_APART_MM: f64 = 20.0;

/// Most that the lengths of the maps of two dipoles may add up to over that of their sum.
pub const MOST_OPPOSED: f64 = 4.0;

/// Share of simulated single dipoles up to which a pair is preferred: two kinds are tried, and both together shall seldom be
/// found where there is one source.
pub const PREFERRED_SHARE: f64 = 0.02;

/// Share of simulated single dipoles up to which another place is ruled out.
pub const WORSE_SHARE: f64 = 0.05;

/// A mirrored pair that gains less than this part of what two free dipoles gain is not what the map comes from.
pub const MIRRORED_PART: f64 = 0.8;

/// Other explanations in words.
#[derive(Clone, Debug, PartialEq, Serialize)]
pub struct Alternatives {
    /// All in one sentence.
    pub sentence: String,
    /// The single dipole and what else was tried.
    pub kinds: Vec<AlternativeWords>,
    /// The drawing in words.
    pub alt: String,
    /// What is to be said beside it.
    pub notes: Vec<&'static str>,
    /// What the map may count as, now that this is known; absent without populations.
    pub verdict: Option<VerdictReport>,
}

/// An explanation in words.
#[derive(Clone, Debug, PartialEq, Serialize)]
pub struct AlternativeWords {
    /// What it is.
    pub kind: Explanation,
    /// Name for people.
    pub label: &'static str,
    /// How it stands, in a sentence.
    pub sentence: String,
    /// The same as a code.
    pub decision: Decision,
    /// Residual variance and adjusted residual variance in percent, parameters, distance in mm, F, difference of the
    /// Bayesian information criterion, share of simulated single dipoles in percent; empty where there is none.
    pub cells: Vec<String>,
    /// Its dipoles in scalp radii, canonical.
    pub dipoles: Vec<ExplainingDipole>,
}

/// A dipole as it is drawn.
#[derive(Clone, Debug, PartialEq, Serialize)]
pub struct ExplainingDipole {
    /// Where.
    pub position: Vec3,
    /// Unit moment.
    pub direction: Vec3,
}

impl Alternatives {
    /// In words; `radius_mm` is that of the scalp.
    pub fn new(map: &FittedMap, found: &[AlternativeReport], radius_mm: f64, verdict: Option<VerdictReport>) -> Self {
        let drawn = |dipole: &EquivalentDipole| ExplainingDipole {
            position: dipole.canonical_mm * (1.0 / radius_mm),
            direction: dipole.canonical_direction,
        };
        let single = AlternativeWords {
            kind: Explanation::Single,
            label: label(Explanation::Single),
            sentence: format!("{} % left over with one dipole {}.", percent(map.residual_variance), place(&map.dipole)),
            decision: Decision::Reference,
            cells: [&*percent(map.residual_variance), &percent(map.adjusted_rv), "6", "", "", "", ""]
                .map(str::to_owned)
                .to_vec(),
            dipoles: vec![drawn(&map.dipole)],
        };
        let others = found.iter().map(|one| AlternativeWords {
            kind: one.kind,
            label: label(one.kind),
            sentence: sentence(one),
            decision: one.decision,
            cells: cells(one),
            dipoles: one.dipoles.iter().map(drawn).collect(),
        });
        let of = |kind| found.iter().find(|one| one.kind == kind).map(|one| one.decision);
        let preferred = |kind| of(kind) == Some(Decision::Preferred);
        let elsewhere = of(Explanation::SecondMinimum) == Some(Decision::NotDecidable);
        let all = if preferred(Explanation::MirroredPair) {
            "A mirrored pair of dipoles explains more of this map than a single one, by more than errors of the head and noise do."
        } else if preferred(Explanation::TwoDipoles) {
            "Two dipoles explain more of this map than one, by more than errors of the head and noise do."
        } else if elsewhere {
            "One dipole somewhere else explains this map as well as errors of the head and noise can tell."
        } else {
            "That more than one source made this map is not shown; with these electrodes and this head it is not excluded either."
        };
        Self {
            sentence: all.into(),
            kinds: core::iter::once(single).chain(others).collect(),
            alt: others_alt(found),
            notes: vec![
                "F and the Bayesian information criterion are figures, no decision: where there is one source, the place of a second is not determined, and errors of the head alone make two win (Davies 1977, Biometrika 64:247–254).",
                "The decision rests on simulated single dipoles: the fitted one, seen through heads that are off and with noise as strong as explains what is left over.",
            ],
            verdict,
        }
    }
}

fn label(kind: Explanation) -> &'static str {
    match kind {
        Explanation::Single => "one dipole",
        Explanation::SecondMinimum => "one dipole, elsewhere",
        Explanation::MirroredPair => "mirrored pair",
        Explanation::TwoDipoles => "two free dipoles",
    }
}

fn others_alt(found: &[AlternativeReport]) -> String {
    let told = |one: &AlternativeReport| {
        let places: Vec<String> = one.dipoles.iter().map(place).collect();
        (!places.is_empty()).then(|| format!("{}: {}", label(one.kind), places.join(" and ")))
    };
    let told: Vec<String> = found.iter().filter_map(told).collect();
    if told.is_empty() { "No other explanation to draw.".into() } else { format!("{}.", told.join("; ")) }
}

fn cells(one: &AlternativeReport) -> Vec<String> {
    let text = |value: Option<f64>, text: fn(f64) -> String| value.map_or_else(String::new, text);
    vec![
        text(one.residual_variance, percent),
        text(one.adjusted_rv, percent),
        one.parameters.to_string(),
        text(one.distance_mm, millimetres),
        text(one.f, |f| significant(f, 3)),
        text(one.bic_difference, |bic| significant(bic, 3)),
        text(one.share_of_single_as_large, percent),
    ]
}

fn sentence(one: &AlternativeReport) -> String {
    let places: Vec<String> = one.dipoles.iter().map(place).collect();
    let left = match one.residual_variance {
        Some(rv) => {
            let dipoles = if places.len() > 1 { "dipoles" } else { "a dipole" };
            format!("{} % left over with {dipoles} {}. ", percent(rv), places.join(" and "))
        }
        None => String::new(),
    };
    let share = one.share_of_single_as_large.unwrap_or(1.0);
    let of_single = match share {
        s if s <= 1.0 / one.draws.max(1) as f64 => format!("none of {} simulated single dipoles", one.draws),
        s => format!("{} % of simulated single dipoles", percent(s)),
    };
    let stands = match (one.decision, one.refused, one.kind) {
        (_, Some(Refusal::FewElectrodes), _) => {
            format!("Not tried: {} numbers from so few electrodes say nothing.", one.parameters)
        }
        (_, Some(Refusal::MidlineUnknown), _) => {
            "Not tried: nothing tells where left and right meet. Give the axes of the electrode table.".into()
        }
        (_, Some(Refusal::Close), _) => format!(
            "Refused: the two lie {} mm apart; under {} mm they are hardly two.",
            millimetres(one.distance_mm.unwrap_or(0.0)),
            millimetres(LEAST_APART_MM)
        ),
        (_, Some(Refusal::Cancelling), _) => {
            "Refused: the two work against each other; each alone would make a much stronger map.".into()
        }
        (_, Some(Refusal::None), _) => "None found: no other minimum lies apart from the best one.".into(),
        (Decision::Preferred, ..) => format!("Preferred: it gains as much with {of_single}."),
        (Decision::Worse, _, Explanation::SecondMinimum) => {
            format!("Less well: the true place lies as far above the best one with {of_single}.")
        }
        (Decision::Worse, ..) => "Less well: two free dipoles gain much more.".into(),
        (_, _, Explanation::SecondMinimum) => {
            format!("Not decidable: the true place lies as far above the best one with {of_single}.")
        }
        _ => format!("Not decidable: it gains as much with {of_single}."),
    };
    format!("{left}{stands}")
}
