use super::Reference;
use crate::math::Vec3;
use crate::simulate::SourceRule;
use serde::Serialize;

/// What a map may count as.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Serialize)]
#[serde(rename_all = "kebab-case")]
pub enum Word {
    /// One channel carries most of it.
    LoneElectrode,
    /// A mirrored pair of dipoles explains more of it than one does, by more than errors explain.
    Paired,
    /// The best position presses on the boundary of the region of sources.
    Edge,
    /// The best position lies where there is no brain.
    BelowTheBrain,
    /// Fitted as single dipoles are, and as several sources seldom are.
    Dipolar,
    /// Fitted as single dipoles are, but several sources are too; or as few single dipoles are.
    Undecided,
    /// Fitted worse than single dipoles are, but for one in a thousand.
    NotDipolar,
}

/// What speaks for a verdict, beside its number and the limit that it was held against.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Reason {
    /// What it is.
    pub code: ReasonCode,
    /// The number.
    pub value: f64,
    /// The limit, where it has one.
    pub limit: Option<f64>,
}

/// What speaks for a verdict.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Serialize)]
#[serde(rename_all = "kebab-case")]
pub enum ReasonCode {
    /// Share of the map's power on one electrode, over the limit.
    OneElectrode,
    /// The residual still falls outwards at the boundary of the sources; the number is the eccentricity.
    AtBoundary,
    /// Height above the floor of the brain in radii of the innermost shell, below 0.
    BelowFloor,
    /// Share of simulated single dipoles with a lower residual variance, of all or of those at about the same depth,
    /// whichever is less; within the limit.
    LikeOneDipole,
    /// The same over that limit, but not over the one that rules single dipoles out.
    SeldomOneDipole,
    /// The same over both.
    UnlikeOneDipole,
    /// Share of simulated pairs with a lower residual variance, within the limit.
    RareInTwo,
    /// The same over the limit.
    UsualInTwo,
    /// As for pairs: of a hundred dipoles.
    RareInHundred,
    /// The same over the limit.
    UsualInHundred,
    /// Angle at the centre between the position and the nearest electrode in degrees, over the limit.
    OutsideCoverage,
    /// A mirrored pair explains more than errors do; the number is the share of simulated single dipoles of which it explains
    /// as much more.
    PairExplainsMore,
    /// The same of two free dipoles.
    TwoExplainMore,
    /// The search ended before a minimum; the number is its evaluations.
    SearchUnfinished,
}

/// A fit as verdicts see it.
#[derive(Clone, Copy, Debug)]
pub struct Judged<'a> {
    /// The average-referenced map.
    pub measured: &'a [f64],
    /// Residual variance of its fit.
    pub residual_variance: f64,
    /// Position in radii of the innermost shell.
    pub position: Vec3,
    /// Whether it presses on the boundary.
    pub at_boundary: bool,
    /// Evaluations of a search that ended before a minimum.
    pub unfinished: Option<usize>,
    /// Share of simulated single dipoles of which a mirrored pair explains as much more, where that pair is preferred.
    pub pair: Option<f64>,
    /// The same of two free dipoles.
    pub two: Option<f64>,
}

/// What fits are held against.
#[derive(Clone, Copy, Debug)]
pub struct Bar<'a> {
    /// Simulated single dipoles, pairs and hundreds.
    pub references: [&'a Reference; 3],
    /// Where there is brain.
    pub rule: SourceRule,
    /// Electrodes: unit directions from the centre.
    pub directions: &'a [Vec3],
    /// Largest share of simulated single dipoles with a lower residual variance.
    pub one_dipole: f64,
    /// The share of them beyond which a map is none.
    pub ruled_out: f64,
    /// Largest share of pairs and hundreds.
    pub others: f64,
    /// Largest share of power on one electrode.
    pub lone_electrode: f64,
    /// Largest angle to the nearest electrode in degrees.
    pub coverage_deg: f64,
}

impl Bar<'_> {
    /// The first verdict that holds, with all that speaks for it or for caution.
    pub fn judge(&self, fit: &Judged) -> (Word, Vec<Reason>) {
        let [one, two, hundred] = self.references.map(|reference| reference.share_lower(fit.residual_variance));
        // An error of the head leaves more over where a source is shallow: at its own depth a map may be usual.
        let here = self.references[0].share_lower_at(fit.residual_variance, fit.position.norm());
        let one = one.min(here);
        let alone = lone_share(fit.measured);
        let above = fit.position[2] - self.rule.floor[0] - self.rule.floor[1] * fit.position[1];
        let mut reasons = Vec::new();
        let mut give = |code, value, limit| reasons.push(Reason { code, value, limit });
        if alone > self.lone_electrode {
            give(ReasonCode::OneElectrode, alone, Some(self.lone_electrode));
        }
        if let Some(share) = fit.pair {
            give(ReasonCode::PairExplainsMore, share, None);
        } else if let Some(share) = fit.two {
            give(ReasonCode::TwoExplainMore, share, None);
        }
        if fit.at_boundary {
            give(ReasonCode::AtBoundary, fit.position.norm(), None);
        }
        if above < 0.0 {
            give(ReasonCode::BelowFloor, above, Some(0.0));
        }
        let single = one <= self.one_dipole;
        let none = one > self.ruled_out;
        let (code, limit) = match (single, none) {
            (true, _) => (ReasonCode::LikeOneDipole, self.one_dipole),
            (false, false) => (ReasonCode::SeldomOneDipole, self.one_dipole),
            (false, true) => (ReasonCode::UnlikeOneDipole, self.ruled_out),
        };
        give(code, one, Some(limit));
        let code = if two <= self.others { ReasonCode::RareInTwo } else { ReasonCode::UsualInTwo };
        give(code, two, Some(self.others));
        let code = if hundred <= self.others { ReasonCode::RareInHundred } else { ReasonCode::UsualInHundred };
        give(code, hundred, Some(self.others));
        if let Some(angle) = nearest_angle(fit.position, self.directions).filter(|angle| *angle > self.coverage_deg) {
            give(ReasonCode::OutsideCoverage, angle, Some(self.coverage_deg));
        }
        if let Some(evaluations) = fit.unfinished {
            give(ReasonCode::SearchUnfinished, evaluations as f64, None);
        }
        let word = if alone > self.lone_electrode {
            Word::LoneElectrode
        } else if fit.pair.is_some() {
            Word::Paired
        } else if fit.at_boundary {
            Word::Edge
        } else if above < 0.0 {
            Word::BelowTheBrain
        } else if none {
            Word::NotDipolar
        } else if single && fit.two.is_none() && two <= self.others && hundred <= self.others {
            Word::Dipolar
        } else {
            Word::Undecided
        };
        (word, reasons)
    }
}

/// The largest share that one electrode has of a map's power.
pub fn lone_share(map: &[f64]) -> f64 {
    let largest = map.iter().fold(0.0f64, |most, value| most.max(value.abs()));
    // Scaled first: squares of very large or small values would leave the range of numbers.
    let all: f64 = map.iter().map(|value| (value / largest) * (value / largest)).sum();
    if largest > 0.0 { 1.0 / all } else { 0.0 }
}

/// Distance from the centre, in radii of the innermost shell, below which a position lies under no electrode more than under
/// others.
const CENTRAL: f64 = 0.3;

/// Angle in degrees between a position and the nearest of these directions; `None` near the centre.
fn nearest_angle(position: Vec3, directions: &[Vec3]) -> Option<f64> {
    let up = position.unit().filter(|_| position.norm() > CENTRAL)?;
    directions.iter().map(|direction| angle(up, *direction)).min_by(f64::total_cmp)
}

/// The median over the electrodes of the angle to the nearest other one: a position farther than that from all of them lies
/// beyond them, as in an even cover no gap is as wide.
pub fn usual_spacing_deg(directions: &[Vec3]) -> f64 {
    let nearest = |(i, one): (usize, &Vec3)| {
        let others = directions.iter().enumerate().filter(|(j, _)| *j != i);
        others.map(|(_, other)| angle(*one, *other)).fold(180.0, f64::min)
    };
    let mut angles: Vec<f64> = directions.iter().enumerate().map(nearest).collect();
    let middle = angles.len() / 2;
    crate::math::select(&mut angles, middle)
}

fn angle(a: Vec3, b: Vec3) -> f64 {
    libm::atan2(a.cross(b).norm(), a.dot(b)).to_degrees()
}
