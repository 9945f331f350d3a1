//! What else may explain a map: another minimum, a mirrored pair, two free dipoles.

use super::Study;
use crate::fit::{Arrangement, Fit, PairSearch, Stopped, Tangent};
use crate::math::{Vec3, dot, mean};
use crate::placement::Evidence;
use crate::report::{
    AlternativeReport, Alternatives, Decision, Explanation, FittedMap, LEAST_APART_MM, MIRRORED_PART, MOST_OPPOSED,
    NoiseSettings, PREFERRED_SHARE, Refusal, WORSE_SHARE,
};
use crate::simulate::Noise;

/// How many simulated maps have been tried, and of how many as much more is explained.
#[derive(Clone, Copy, Debug, Default)]
struct Tally {
    as_large: usize,
    draws: usize,
}

/// So many maps of which as much more is explained decide: the share is then known to a fifth of itself or lies far above
/// any limit (Besag & Clifford 1991, Biometrika 78:301–304).
const ENOUGH: usize = 20;

impl Tally {
    fn decided(&self) -> bool {
        self.as_large >= ENOUGH
    }

    fn add(&mut self, as_large: bool) {
        self.draws += 1;
        self.as_large += usize::from(as_large);
    }

    /// (1 + k) / (1 + n), or k / n where the search ended for k (Besag & Clifford 1991).
    fn share(&self) -> f64 {
        match self.decided() {
            true => self.as_large as f64 / self.draws as f64,
            false => (1 + self.as_large) as f64 / (1 + self.draws) as f64,
        }
    }
}

/// A pair that was fitted, or why not.
struct Tried {
    kind: Explanation,
    arrangement: Arrangement,
    /// Its dipoles, as fits of their own.
    dipoles: Vec<Fit>,
    residual_variance: Option<f64>,
    refused: Option<Refusal>,
    tally: Tally,
}

impl Study {
    /// Other explanations of a map in words; `None` for one that cannot be fitted.
    pub fn alternatives(&self, index: usize, map: &FittedMap) -> Option<Alternatives> {
        let mut map = map.clone();
        let found = self.alternatives_of(index, &map)?;
        map.alternatives = Some(found.clone());
        let verdict = self.verdict(&map);
        Some(Alternatives::new(&map, &found, self.placement.sphere.sphere.radius, verdict))
    }

    /// The same in numbers.
    pub(super) fn alternatives_of(&self, index: usize, map: &FittedMap) -> Option<Vec<AlternativeReport>> {
        let (values, fit) = self.fit_of(index)?;
        let second = self.fitter.second(&values, &fit);
        let mut tried = self.try_pairs(&values, &fit);
        let excess = second.as_ref().map(|second| second.residual_variance - fit.residual_variance);
        let tangent = self.fitter.tangent(&fit);
        let errors_leave = self.errors_leave(&fit, &tangent);
        let elsewhere = self.against_single_dipoles(&fit, &tangent, errors_leave, excess, &mut tried);
        let gains = |one: &Tried| one.residual_variance.map(|rv| fit.residual_variance - rv);
        let mirrored_falls_short = match (gains(&tried[0]), gains(&tried[1])) {
            (Some(mirrored), Some(free)) => tried[1].refused.is_none() && mirrored < MIRRORED_PART * free,
            _ => false,
        };
        let mut found = vec![self.second_report(index, map, &fit, second.as_ref(), elsewhere)];
        found.extend(tried.iter().map(|one| {
            let share = (one.tally.draws > 0).then(|| one.tally.share());
            let preferred = share.is_some_and(|share| share <= PREFERRED_SHARE);
            let decision = match one.refused {
                Some(_) => Decision::Refused,
                None if preferred && one.kind == Explanation::MirroredPair && mirrored_falls_short => Decision::Worse,
                None if preferred => Decision::Preferred,
                None => Decision::NotDecidable,
            };
            let dipoles: Vec<_> = one.dipoles.iter().map(|dipole| self.placed(index, map, dipole)).collect();
            let distance_mm = match &dipoles[..] {
                [a, b] => Some((a.canonical_mm - b.canonical_mm).norm()),
                _ => None,
            };
            let parameters = one.arrangement.parameters();
            let numbers = one.residual_variance.map(|rv| Numbers::new(rv, map, parameters));
            AlternativeReport {
                kind: one.kind,
                residual_variance: one.residual_variance,
                adjusted_rv: numbers.and_then(|numbers| numbers.adjusted),
                dipoles,
                distance_mm,
                parameters,
                f: numbers.and_then(|numbers| numbers.f),
                bic_difference: numbers.and_then(|numbers| numbers.bic),
                share_of_single_as_large: share,
                draws: one.tally.draws,
                decision,
                refused: one.refused,
            }
        }));
        Some(found)
    }

    fn second_report(
        &self,
        index: usize,
        map: &FittedMap,
        fit: &Fit,
        second: Option<&Fit>,
        tally: Tally,
    ) -> AlternativeReport {
        let numbers = second.map(|second| Numbers::new(second.residual_variance, map, 6));
        let share = second.map(|_| tally.share());
        AlternativeReport {
            kind: Explanation::SecondMinimum,
            residual_variance: second.map(|second| second.residual_variance),
            adjusted_rv: numbers.and_then(|numbers| numbers.adjusted),
            dipoles: second.iter().map(|second| self.placed(index, map, second)).collect(),
            distance_mm: second
                .map(|second| (second.position - fit.position).norm() * self.placement.sphere.sphere.radius),
            parameters: 6,
            f: None,
            bic_difference: numbers.and_then(|numbers| numbers.bic),
            share_of_single_as_large: share,
            draws: tally.draws,
            decision: match share {
                None => Decision::Refused,
                Some(share) if share <= WORSE_SHARE => Decision::Worse,
                Some(_) => Decision::NotDecidable,
            },
            refused: second.is_none().then_some(Refusal::None),
        }
    }

    /// Whether mirrored and free pairs are tried at all.
    pub(super) fn pairs_are_tried(&self) -> [bool; 2] {
        let [mirrored, free] =
            [Arrangement::Mirrored, Arrangement::Free].map(|one| enough(self.fitter.field().count(), one));
        [mirrored && self.knows_midline(), free]
    }

    fn knows_midline(&self) -> bool {
        self.placement.axes.evidence != Evidence::Nothing
    }

    /// Both arrangements, each fitted to the map unless it cannot count.
    fn try_pairs(&self, values: &[f64], fit: &Fit) -> [Tried; 2] {
        let radius = self.placement.sphere.sphere.radius;
        let midline = self.knows_midline();
        let kinds = [(Explanation::MirroredPair, Arrangement::Mirrored), (Explanation::TwoDipoles, Arrangement::Free)];
        kinds.map(|(kind, arrangement)| {
            let mut tried = Tried {
                kind,
                arrangement,
                dipoles: Vec::new(),
                residual_variance: None,
                refused: None,
                tally: Tally::default(),
            };
            if !enough(values.len(), arrangement) {
                tried.refused = Some(Refusal::FewElectrodes);
                return tried;
            }
            if arrangement == Arrangement::Mirrored && !midline {
                tried.refused = Some(Refusal::MidlineUnknown);
                return tried;
            }
            let Some(pair) = self.pairs().fit(&self.fitter, values, arrangement, fit.position) else {
                tried.refused = Some(Refusal::None);
                return tried;
            };
            let reach = self.fitter.field().reach();
            tried.dipoles = (0..2)
                .map(|k| Fit {
                    position: pair.positions[k],
                    moment: pair.moments[k],
                    residual_variance: pair.residual_variance,
                    at_boundary: pair.positions[k].norm() >= reach * (1.0 - 1e-10),
                    stopped: Stopped::Converged,
                    evaluations: 0,
                })
                .collect();
            tried.residual_variance = Some(pair.residual_variance);
            if (pair.positions[0] - pair.positions[1]).norm() * radius < LEAST_APART_MM {
                tried.refused = Some(Refusal::Close);
            } else if pair.opposition > MOST_OPPOSED {
                tried.refused = Some(Refusal::Cancelling);
            }
            tried
        })
    }

    /// Parametric bootstrap (Efron & Tibshirani 1993, An Introduction to the Bootstrap, §6.5) of the single dipole: maps that
    /// it makes in heads that are off, with noise, are explained in the same ways.
    fn against_single_dipoles(
        &self,
        fit: &Fit,
        tangent: &Tangent,
        errors_leave: f64,
        excess: Option<f64>,
        tried: &mut [Tried],
    ) -> Tally {
        let mut elsewhere = Tally::default();
        for map in self.refits().maps(&self.fitter, fit, tangent, self.noise()) {
            let Some(single) = self.fitter.follow(&map.map, fit.position) else { continue };
            if let (Some(excess), Some(above)) = (excess, self.above(&map.map, fit, &single)) {
                elsewhere.add(above >= excess);
            }
            for one in tried.iter_mut().filter(|one| one.refused.is_none() && !one.tally.decided()) {
                let Some(rv) = one.residual_variance else { continue };
                let pair = self.pairs().fit(&self.fitter, &map.map, one.arrangement, single.position);
                let gained =
                    pair.map_or(0.0, |pair| gain(single.residual_variance, pair.residual_variance, errors_leave));
                one.tally.add(gained >= gain(fit.residual_variance, rv, errors_leave));
            }
        }
        elsewhere
    }

    /// What errors of the head alone leave of the map of a single dipole, on average over the drawn heads.
    fn errors_leave(&self, fit: &Fit, tangent: &Tangent) -> f64 {
        let share = |map: Vec<f64>| {
            let left = tangent.left(&map);
            dot(&left, &left) / dot(&map, &map).max(f64::MIN_POSITIVE)
        };
        let maps = self.refits().maps(&self.fitter, fit, tangent, Noise::Sd(0.0));
        mean(&maps.map(|simulated| share(simulated.map)).collect::<Vec<_>>())
    }

    /// How far a simulated map's residual variance at the place that it comes from lies above its least.
    fn above(&self, map: &[f64], from: &Fit, best: &Fit) -> Option<f64> {
        let (there, _) = self.fitter.held(map, from.position)?;
        Some((there - best.residual_variance).max(0.0))
    }

    /// By how much errors of head and noise put the true place above the best one in so great a share of simulated maps.
    pub(super) fn level(&self, fit: &Fit, tangent: &Tangent, share: f64) -> f64 {
        let maps = self.refits().maps(&self.fitter, fit, tangent, self.noise());
        let mut above: Vec<f64> =
            maps.filter_map(|map| self.above(&map.map, fit, &self.fitter.follow(&map.map, fit.position)?)).collect();
        let Some(last) = above.len().checked_sub(1) else { return 0.0 };
        let at = (libm::ceil(share * above.len() as f64) as usize).saturating_sub(1).min(last);
        crate::math::select(&mut above, at)
    }

    fn noise(&self) -> Noise {
        self.settings.noise.as_ref().map_or(Noise::FromResidual, |noise| Noise::Sd(NoiseSettings::sd(noise)))
    }

    fn pairs(&self) -> &PairSearch {
        self.simulated.pairs.get_or_init(|| PairSearch::new(&self.fitter))
    }

    /// A dipole as reports have it, with the sign of the map.
    fn placed(&self, index: usize, map: &FittedMap, fit: &Fit) -> crate::report::EquivalentDipole {
        let moment: Vec3 = fit.moment * self.sign(index);
        self.equivalent_dipole(fit, moment, map.activation_sd)
    }
}

/// By how much residual variance falls, over what is left then and what errors of the head leave in any case: a fall that
/// these explain is none, however little is left.
fn gain(single: f64, pair: f64, errors_leave: f64) -> f64 {
    (single - pair) / (pair + errors_leave).max(f64::MIN_POSITIVE)
}

/// Values that must be left besides the numbers that are fitted.
const FEWEST_LEFT: usize = 4;

fn enough(values: usize, arrangement: Arrangement) -> bool {
    values >= arrangement.parameters() + FEWEST_LEFT
}

/// Figures of a fit with so many numbers.
#[derive(Clone, Copy)]
struct Numbers {
    adjusted: Option<f64>,
    f: Option<f64>,
    bic: Option<f64>,
}

impl Numbers {
    fn new(rv: f64, map: &FittedMap, parameters: usize) -> Self {
        let (all, single) = ((map.measured.len() - 1) as f64, map.residual_variance);
        let (more, free) = (parameters as f64 - 6.0, all - parameters as f64);
        let told = rv > 0.0 && single > 0.0;
        let adjusted = (free > 0.0).then(|| rv * all / free);
        let f = (told && more > 0.0 && free > 0.0).then(|| ((single - rv) / more) / (rv / free));
        Self { adjusted, f, bic: told.then(|| all * libm::log(rv / single) + more * libm::log(all)) }
    }
}
