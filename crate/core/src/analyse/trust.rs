//! How far a fit may be trusted: refits under drawn errors, simulated maps of other sources, and a verdict.

use super::Study;
use super::stability::Variation;
use crate::assess::{Bar, Judged, Reference, degrees_of_freedom, hints, usual_spacing_deg};
use crate::finding::{Code, Error, Finding};
use crate::fit::{Fit, PairSearch, Stopped, Tangent};
use crate::math::{
    Autocorrelation, Ellipsoid, Symmetric3, Vec3, chi_squared_3_quantile, dot, f_quantile, mean, neighbours, select,
};
use crate::placement::Placed;
use crate::report::{
    Among, Assessment, CauseReport, Decision, DrawnEllipsoid, Explanation, FittedMap, NoiseOnly, NoiseSettings,
    PopulationReport, RegionReport, Repeats, Settings, SuspectReport, Trust, VerdictReport, rule,
};
use crate::simulate::{Background, Draw, HeadErrors, Kind, Noise, Population, Refits, SourceRule};
use crate::understand::ColumnsAre;
use core::ops::Range;
use sha2::{Digest, Sha256};
use std::sync::{Arc, Mutex, OnceLock, PoisonError};

/// Share of refits in the region, and level of what independent noise would say.
const LEVEL: f64 = 0.95;

/// Rays of the profile region.
const RAYS: usize = 50;

/// Electrodes that count as neighbours in Moran's I, as in a hexagonal cover.
const NEIGHBOURS: usize = 6;

/// What assessments draw for one head, one set of electrodes and one group of settings, kept for all maps.
#[derive(Clone, Debug, Default)]
pub(super) struct Simulated {
    refits: Arc<OnceLock<Refits>>,
    references: Arc<Mutex<Kept>>,
    repeats: Arc<OnceLock<Option<Repeats>>>,
    /// Which electrodes are neighbours.
    neighbours: Arc<OnceLock<Vec<[usize; 2]>>>,
    /// Their usual angle.
    spacing_deg: Arc<OnceLock<f64>>,
    /// Starts for pairs.
    pub pairs: Arc<OnceLock<PairSearch>>,
    /// Heads for what would be otherwise.
    pub variations: Arc<OnceLock<Vec<Variation>>>,
    /// Of this study's own settings.
    errors: OnceLock<HeadErrors>,
}

/// Populations by the place of their kind.
type Kept = [Option<Arc<Reference>>; Kind::ALL.len()];

/// A region with what is drawn of it.
struct Region {
    report: RegionReport,
    cloud: Vec<Vec3>,
    ellipsoid: DrawnEllipsoid,
    noise_only: Option<DrawnEllipsoid>,
}

impl Simulated {
    /// What of another study's holds for this one too.
    pub fn of(study: &Study, other: &Study) -> Self {
        let (own, others) = (&study.settings, &other.settings);
        let same = study.population_key() == other.population_key();
        let drawn = |settings: &Settings| (settings.errors.draws, settings.errors.seed);
        // Beside what populations rest on: displacements have the seed and are in mm, and it matters what was fitted and which
        // shell is the fluid.
        let varied = |study: &Study| {
            let head = study.head();
            (study.settings.errors.seed, head.radius_mm, head.centre_is_fitted && head.radius_is_fitted, head.shells)
        };
        let same_variations = same && varied(study) == varied(other);
        let kept = &other.simulated;
        Self {
            refits: if same && drawn(own) == drawn(others) { Arc::clone(&kept.refits) } else { Arc::default() },
            references: if same { Arc::clone(&kept.references) } else { Arc::default() },
            repeats: Arc::default(),
            neighbours: if same { Arc::clone(&kept.neighbours) } else { Arc::default() },
            spacing_deg: if same { Arc::clone(&kept.spacing_deg) } else { Arc::default() },
            pairs: if same { Arc::clone(&kept.pairs) } else { Arc::default() },
            variations: if same_variations { Arc::clone(&kept.variations) } else { Arc::default() },
            // Made for the key.
            errors: study.simulated.errors.clone(),
        }
    }
}

impl Study {
    /// Text that is equal for studies whose reference populations are the same: a digest of head, electrodes, errors and
    /// sources.
    pub fn population_key(&self) -> String {
        let mut digest = Sha256::new();
        let mut add = |numbers: &[f64]| numbers.iter().for_each(|number| digest.update(number.to_le_bytes()));
        for shell in self.shells.specs() {
            add(&[shell.ratio, shell.conductivity, f64::from(u8::from(shell.tissue.eq_ignore_ascii_case("skull")))]);
        }
        let HeadErrors { points, electrodes, skull_ratio, sphere, .. } = self.head_errors();
        points.iter().chain(self.fitter.field().directions()).for_each(|point| add(&point.0));
        add(&[*electrodes, sphere.as_ref().map_or(0.0, |(sd, _)| *sd)]);
        add(&skull_ratio.unwrap_or_default());
        let Settings { errors, sources, .. } = &self.settings;
        add(&[errors.background_sources as f64, sources.draws as f64, f64::from(sources.seed)]);
        add(&[sources.max_eccentricity, sources.floor[0], sources.floor[1], sources.noise]);
        add(&[sources.orientation as u8 as f64]);
        digest.finalize().iter().take(16).map(|byte| format!("{byte:02x}")).collect()
    }

    /// Maps of each population.
    pub fn population_size(&self) -> usize {
        self.settings.sources.draws
    }

    /// Draws of a population, each the same whatever others are made.
    pub fn population(&self, kind: Kind, range: Range<usize>) -> Vec<Draw> {
        let sources = &self.settings.sources;
        let population = Population {
            fitter: &self.fitter,
            rule: self.source_rule(),
            errors: self.head_errors(),
            background: self.background(),
            noise: sources.noise,
            seed: u64::from(sources.seed),
        };
        population.draws(kind, range.start as u64..range.end.min(sources.draws) as u64)
    }

    /// Takes over draws 0, 1, … that were made elsewhere.
    pub fn keep_population(&self, kind: Kind, draws: Vec<Draw>) {
        self.kept()[kind.place()] = Reference::new(draws).map(Arc::new);
    }

    fn kept(&self) -> std::sync::MutexGuard<'_, Kept> {
        self.simulated.references.lock().unwrap_or_else(PoisonError::into_inner)
    }

    fn reference(&self, kind: Kind) -> Option<Arc<Reference>> {
        self.kept()[kind.place()].clone()
    }

    /// Populations of these kinds, those that are not kept whole drawn first.
    fn references(&self, kinds: &[Kind]) -> Vec<(Kind, Arc<Reference>)> {
        let size = self.population_size();
        let whole = |&kind: &Kind| {
            let kept = self.reference(kind);
            if let Some(kept) = kept.as_ref().filter(|kept| kept.draws().len() == size) {
                return Some((kind, Arc::clone(kept)));
            }
            let mut draws = kept.map_or_else(Vec::new, |kept| kept.draws().to_vec());
            draws.truncate(size);
            draws.extend(self.population(kind, draws.len()..size));
            let reference = Arc::new(Reference::new(draws)?);
            self.kept()[kind.place()] = Some(Arc::clone(&reference));
            Some((kind, reference))
        };
        kinds.iter().filter_map(whole).collect()
    }

    fn population_reports(&self, references: &[(Kind, Arc<Reference>)]) -> Vec<PopulationReport> {
        let report = |(kind, reference): &(Kind, Arc<Reference>)| {
            let rule = self.rule(reference.draws().len());
            PopulationReport::new(*kind, reference, self.settings.sources.seed, rule)
        };
        references.iter().map(report).collect()
    }

    /// Those that are kept whole, in numbers.
    pub(super) fn whole_populations(&self) -> Vec<PopulationReport> {
        let whole = |kind| {
            let kept = self.reference(kind)?;
            (kept.draws().len() == self.population_size()).then_some((kind, kept))
        };
        self.population_reports(&Kind::ALL.into_iter().filter_map(whole).collect::<Vec<_>>())
    }

    /// Adds what is asked for to the fit of one map; populations that are not kept are drawn, which takes seconds.
    pub(super) fn assessed(&self, index: usize, map: &mut FittedMap, what: &[Assessment]) {
        if what.is_empty() {
            return;
        }
        if what.contains(&Assessment::Region)
            && let Some((values, fit)) = self.fit_of(index)
        {
            map.region = self.region(map, &values, &fit).map(|region| region.report);
        }
        if what.contains(&Assessment::Alternatives) {
            map.alternatives = self.alternatives_of(index, map);
        }
        if what.contains(&Assessment::Influence) {
            map.influence = self.influence_of(index);
        }
        if what.contains(&Assessment::WhatIf) {
            map.what_if = self.what_if_of(index).map(|found| found.into_iter().map(|(_, report)| report).collect());
        }
        if what.contains(&Assessment::Populations) {
            let among = |(kind, reference): &(Kind, Arc<Reference>)| among(map, *kind, reference);
            map.populations = Some(self.references(&Kind::ALL).iter().map(among).collect());
        }
        if what.contains(&Assessment::Verdict) {
            self.references(&BARS);
            map.verdict = self.verdict(map);
        }
    }

    /// All that is said about how far the fit of a map may be trusted, with the populations that are kept.
    pub fn trust(&self, index: usize, map: &FittedMap) -> Option<Trust> {
        let (values, fit) = self.fit_of(index)?;
        let region = self.region(map, &values, &fit)?;
        let kept = Kind::ALL.into_iter().filter_map(|kind| Some((kind, self.reference(kind)?)));
        let kept: Vec<(Kind, Arc<Reference>)> = kept.collect();
        let reports = self.population_reports(&kept);
        let among = kept.iter().map(|(kind, reference)| among(map, *kind, reference));
        let populations: Vec<_> = reports.into_iter().zip(among).collect();
        let drawn = (region.cloud, region.ellipsoid, region.noise_only);
        let draws = kept.iter().map(|(_, reference)| reference.draws().len()).min();
        let rule = self.rule(draws.unwrap_or(self.population_size()));
        let unit = self.settings.map_unit;
        Some(Trust::new(map, &region.report, drawn, self.verdict(map), &populations, rule, unit))
    }

    /// Verdicts of maps that follow each other; `None` for one that cannot be fitted.
    ///
    /// # Errors
    /// `map-index`; `populations-lacking` unless those that verdicts depend on are kept.
    pub fn verdicts(&self, range: Range<usize>) -> Result<Vec<Option<crate::assess::Word>>, Error> {
        self.check(&range)?;
        let lacking = BARS.into_iter().find(|kind| self.reference(*kind).is_none());
        if let Some(kind) = lacking {
            return Err(Finding::new(Code::PopulationsLacking).with("kind", kind.name()).into());
        }
        let outcomes = self.outcomes(range);
        Ok(outcomes.iter().map(|map| Some(self.verdict(map.as_ref().ok()?)?.word)).collect())
    }

    pub(super) fn verdict(&self, map: &FittedMap) -> Option<VerdictReport> {
        let [one, two, hundred] = BARS.map(|kind| self.reference(kind));
        let (one, two, hundred) = (one?, two?, hundred?);
        let limits = &self.settings.limits;
        let directions = self.fitter.field().directions();
        let bar = Bar {
            references: [&one, &two, &hundred],
            rule: self.source_rule(),
            directions,
            one_dipole: limits.one_dipole,
            ruled_out: limits.ruled_out,
            others: limits.others,
            lone_electrode: limits.lone_electrode,
            coverage_deg: limits
                .coverage_deg
                .unwrap_or_else(|| *self.simulated.spacing_deg.get_or_init(|| usual_spacing_deg(directions))),
        };
        let dipole = &map.dipole;
        let brain_mm = self.shells.brain_ratio() * self.placement.sphere.sphere.radius;
        let position = dipole.canonical_mm * (1.0 / brain_mm);
        let unfinished = (map.fit.stopped_because == Stopped::IterationLimit).then_some(map.fit.evaluations);
        let judged = Judged {
            measured: &map.measured,
            residual_variance: map.residual_variance,
            position,
            at_boundary: dipole.at_boundary,
            unfinished,
            pair: preferred(map, Explanation::MirroredPair),
            two: preferred(map, Explanation::TwoDipoles),
        };
        let (word, reasons) = bar.judge(&judged);
        Some(VerdictReport::new(
            word,
            &reasons,
            &hints(position, dipole.radial_share, &map.residual, map.residual_variance),
            self.settings.sources.noise,
        ))
    }

    /// Suspects, where the settings ask for them.
    pub(super) fn asked_suspects(&self) -> Vec<SuspectReport> {
        if !self.settings.assess.contains(&Assessment::Influence) {
            return Vec::new();
        }
        let unshared = self.unshared(0..self.count()).unwrap_or_default();
        self.suspect_reports(&unshared).unwrap_or_default()
    }

    /// Values of a map and its fit, without a turned sign.
    pub(super) fn fit_of(&self, index: usize) -> Option<(Vec<f64>, Fit)> {
        let values = self.values(index).ok()?;
        let fit = self.fitter.fit(&values)?;
        Some((values, fit))
    }

    fn region(&self, map: &FittedMap, values: &[f64], fit: &Fit) -> Option<Region> {
        let radius = self.placement.sphere.sphere.radius;
        let Settings { errors, noise, .. } = &self.settings;
        let tangent = self.fitter.tangent(fit);
        let known = noise.as_ref().map(NoiseSettings::sd);
        let scatter = self.refits().scatter(&self.fitter, fit, &tangent, known.map_or(Noise::FromResidual, Noise::Sd));
        let cloud: Vec<Vec3> = scatter.together.iter().map(|fit| fit.position).collect();
        let ellipsoid = Ellipsoid::holding(&cloud, fit.position, LEVEL)?;
        let axes = ellipsoid.axes();
        let off = |of: &dyn Fn(&Fit) -> f64| {
            mean(&scatter.together.iter().map(|one| of(one) * of(one)).collect::<Vec<_>>()).sqrt()
        };
        let strength = fit.moment.norm();
        let spread = |positions: &[Vec3]| {
            let squares: Vec<f64> = positions.iter().map(|p| (*p - fit.position).dot(*p - fit.position)).collect();
            if squares.is_empty() { 0.0 } else { radius * (mean(&squares) / 3.0).sqrt() }
        };
        let sphere = self.sphere_errors();
        let caused = |cause, size: Vec<f64>, positions: &[Vec3]| CauseReport { cause, size, sd_mm: spread(positions) };
        let [by_electrodes, by_skull, by_sphere] = &scatter.alone;
        let mut from = vec![caused("electrodes", vec![errors.electrodes_mm], by_electrodes)];
        if let Some([least, most]) = self.head_errors().skull_ratio {
            from.push(caused("skull", vec![least, most], by_skull));
        }
        if let Some(sizes) = sphere {
            from.push(caused("sphere", sizes.map(|size| size * radius).to_vec(), by_sphere));
        }
        from.push(caused("noise", vec![known.unwrap_or(scatter.noise_sd)], &scatter.noise));
        let noise = self.noise_only(map, values, fit, &tangent, known);
        let pairs = self.neighbours();
        let constant = vec![1.0 / (values.len() as f64).sqrt(); values.len()];
        let basis: Vec<Vec<f64>> = core::iter::once(constant).chain(tangent.basis.iter().cloned()).collect();
        // What rounding leaves has no structure.
        let structure = (map.residual_variance > 1e-12)
            .then(|| Autocorrelation::new(&scaled(&map.residual), &basis, pairs))
            .flatten();
        let reach = self.fitter.field().reach();
        let report = RegionReport {
            level: LEVEL,
            draws: scatter.together.len(),
            seed: errors.seed,
            from,
            covariance_mm2: self.table_covariance(&ellipsoid.covariance),
            semi_axes_mm: axes.map(|(length, _)| length * radius),
            axes: axes.map(|(_, direction)| self.placement.axes.axes.to_table(direction)),
            volume_ml: ellipsoid.volume() * radius * radius * radius * 1e-3,
            depth_sd_mm: radius * off(&|one| one.position.norm() - fit.position.norm()),
            direction_deg: turned(&scatter.together, fit),
            strength_sd: off(&|one| one.moment.norm() / strength - 1.0),
            noise_only: noise.0,
            residual_structure: structure.map(Into::into),
            repeats: self.repeats(),
            reaches_boundary: reaches(&ellipsoid, reach),
        };
        Some(Region { report, cloud, ellipsoid: (&ellipsoid).into(), noise_only: noise.1 })
    }

    /// What independent noise would say: the profile region RSS ≤ RSS_min (1 + 3 F / (N − 7)) with the quantile F of 3 and
    /// N − 7 degrees of freedom, or RSS ≤ RSS_min + s² χ² with that of 3 where s is known (Bates & Watts, Nonlinear
    /// Regression Analysis, 1988, §6.1).
    fn noise_only(
        &self,
        map: &FittedMap,
        values: &[f64],
        fit: &Fit,
        tangent: &Tangent,
        known: Option<f64>,
    ) -> (NoiseOnly, Option<DrawnEllipsoid>) {
        let radius = self.placement.sphere.sphere.radius;
        let free = degrees_of_freedom(values.len()).max(1) as f64;
        let power = dot(&map.measured, &map.measured);
        let rv = fit.residual_variance;
        let sd = known.unwrap_or_else(|| (power * rv / free).sqrt());
        let (excess, quantile) = match known {
            Some(sd) => {
                let quantile = chi_squared_3_quantile(LEVEL);
                (sd * sd * quantile / power, quantile)
            }
            None => {
                let quantile = 3.0 * f_quantile(LEVEL, 3.0, free);
                (rv * quantile / free, quantile)
            }
        };
        let profile = self.fitter.profile(values, fit, rv + excess, RAYS);
        let covariance = tangent.covariance(sd);
        let drawn = covariance.as_ref().map(|covariance| {
            (&Ellipsoid { centre: fit.position, covariance: *covariance, scale: quantile.sqrt() }).into()
        });
        let report = NoiseOnly {
            noise_sd: sd,
            noise_from: if known.is_some() { "settings" } else { "residual" },
            covariance_mm2: covariance.map(|covariance| self.table_covariance(&covariance)),
            profile_limit: rv + excess,
            profile_volume_ml: profile.as_ref().map_or(0.0, |p| p.volume * radius * radius * radius * 1e-3),
            reaches_boundary: fit.at_boundary || profile.is_some_and(|profile| profile.reaches_boundary),
        };
        (report, drawn)
    }

    /// A covariance in scalp radii² and canonical axes as mm² in the frame of the table.
    fn table_covariance(&self, covariance: &Symmetric3) -> [[f64; 3]; 3] {
        let radius = self.placement.sphere.sphere.radius;
        let axes = self.placement.axes.axes;
        let unit = |i: usize| axes.to_canonical(Vec3([0, 1, 2].map(|k| if k == i { 1.0 } else { 0.0 })));
        let entry = |i, j| radius * radius * unit(i).dot(covariance.apply(unit(j)));
        [0, 1, 2].map(|i| [0, 1, 2].map(|j| entry(i, j)))
    }

    /// Scatter of the fits of all maps, where they are repeats of one.
    fn repeats(&self) -> Option<Repeats> {
        /// Of fewer no scatter is told.
        const FEWEST: usize = 3;
        /// More are no clearer in a drawing.
        const DRAWN: usize = 400;
        let all = || {
            if self.tables.understood.columns_are != ColumnsAre::Repeats {
                return None;
            }
            let fits = self.batches(0..self.count(), |_, _, fit| fit.map(|fit| fit.position));
            let points: Vec<Vec3> = fits.into_iter().flatten().collect();
            if points.len() < FEWEST {
                return None;
            }
            let radius = self.placement.sphere.sphere.radius;
            let middle = points.iter().fold(Vec3::ZERO, |sum, p| sum + *p) * (1.0 / points.len() as f64);
            let off: Vec<f64> = points.iter().map(|p| (*p - middle).norm() * radius).collect();
            Some(Repeats {
                count: points.len(),
                mean_mm: self.placement.table(middle * radius),
                rms_mm: mean(&off.iter().map(|d| d * d).collect::<Vec<_>>()).sqrt(),
                max_mm: off.iter().fold(0.0, |most, d| d.max(most)),
                points: points.into_iter().take(DRAWN).collect(),
            })
        };
        self.simulated.repeats.get_or_init(all).clone()
    }

    /// Which electrodes are neighbours.
    pub(super) fn neighbours(&self) -> &[[usize; 2]] {
        self.simulated.neighbours.get_or_init(|| neighbours(self.fitter.field().directions(), NEIGHBOURS))
    }

    /// Heads and noise that all maps are seen through.
    pub(super) fn refits(&self) -> &Refits {
        let errors = &self.settings.errors;
        self.simulated.refits.get_or_init(|| {
            let seed = u64::from(errors.seed);
            Refits::new(&self.fitter, self.head_errors(), self.background(), errors.draws, seed)
        })
    }

    fn rule(&self, draws: usize) -> String {
        let HeadErrors { skull_ratio, sphere, .. } = self.head_errors();
        rule(&self.head(), self.fitter.field().count(), &self.settings, *skull_ratio, sphere.is_some(), draws)
    }

    fn source_rule(&self) -> SourceRule {
        let sources = &self.settings.sources;
        SourceRule {
            max_eccentricity: sources.max_eccentricity,
            floor: sources.floor,
            orientation: sources.orientation,
        }
    }

    fn background(&self) -> Background {
        Background { sources: self.settings.errors.background_sources, rule: self.source_rule() }
    }

    pub(super) fn head_errors(&self) -> &HeadErrors {
        self.simulated.errors.get_or_init(|| {
            let radius = self.placement.sphere.sphere.radius;
            let errors = &self.settings.errors;
            let point = |e: &Placed| self.placement.canonical(e.position_mm) * (1.0 / radius);
            let head = self.head();
            // The sphere is fitted to all electrodes, and off only where it was fitted.
            let fitted = head.centre_is_fitted && head.radius_is_fitted && errors.sphere > 0.0;
            let sphere = fitted.then(|| HeadErrors::sphere_of(&self.all_points())).flatten();
            HeadErrors {
                electrodes: errors.electrodes_mm / radius,
                skull_ratio: errors.skull_ratio.filter(|_| HeadErrors::has_skull(&self.shells)),
                sphere: sphere.map(|(sd, normal)| (sd * errors.sphere, normal)),
                shells: self.shells.clone(),
                points: self.placement.used().map(point).collect(),
            }
        })
    }

    /// Standard errors of centre (root mean square over the axes) and radius, in scalp radii.
    fn sphere_errors(&self) -> Option<[f64; 2]> {
        let (sd, normal) = self.head_errors().sphere.as_ref()?;
        let variance = |axis: usize| {
            let unit: Vec<f64> = (0..4).map(|i| if i == axis { 1.0 } else { 0.0 }).collect();
            sd * sd * normal.solve(&unit)[axis]
        };
        Some([((variance(0) + variance(1) + variance(2)) / 3.0).sqrt(), variance(3).sqrt()])
    }
}

/// Angle in degrees that the share [`LEVEL`] of the refitted moments stay within.
fn turned(refits: &[Fit], fit: &Fit) -> f64 {
    let angle = |one: &Fit| libm::atan2(one.moment.cross(fit.moment).norm(), one.moment.dot(fit.moment)).to_degrees();
    let mut angles: Vec<f64> = refits.iter().map(angle).collect();
    let Some(last) = angles.len().checked_sub(1) else { return 0.0 };
    let at = (libm::ceil(LEVEL * angles.len() as f64) as usize).saturating_sub(1).min(last);
    select(&mut angles, at)
}

/// Whether an ellipsoid reaches beyond a sphere about the origin: at the ends of its axes, or where it reaches farthest along
/// the line from the origin to its centre.
fn reaches(ellipsoid: &Ellipsoid, reach: f64) -> bool {
    let centre = ellipsoid.centre;
    let ends = ellipsoid.axes().into_iter().flat_map(|(length, axis)| [axis * length, axis * -length]);
    let outwards = centre.unit().map(|n| {
        let c = ellipsoid.covariance.apply(n);
        c * (ellipsoid.scale / n.dot(c).sqrt())
    });
    ends.chain(outwards).any(|end| (centre + end).norm() > reach)
}

/// The populations that verdicts depend on.
const BARS: [Kind; 3] = [Kind::OneDipole, Kind::TwoDipoles, Kind::HundredDipoles];

fn among(map: &FittedMap, kind: Kind, reference: &Reference) -> Among {
    Among {
        kind,
        share_lower_rv: reference.share_lower(map.residual_variance),
        share_lower_rv_at_this_depth: reference.share_lower_at(map.residual_variance, map.dipole.eccentricity),
    }
}

/// Share of simulated single dipoles behind an explanation that is preferred.
fn preferred(map: &FittedMap, kind: Explanation) -> Option<f64> {
    let found = map.alternatives.iter().flatten().find(|one| one.kind == kind);
    found.filter(|one| one.decision == Decision::Preferred)?.share_of_single_as_large
}

/// Over the largest value: squares of very large or small ones would leave the range of numbers.
pub(super) fn scaled(values: &[f64]) -> Vec<f64> {
    let largest = values.iter().fold(0.0f64, |most, value| most.max(value.abs()));
    values.iter().map(|value| value / largest).collect()
}
