//! What carries a fit, and what would move it.

use super::Study;
use super::trust::scaled;
use crate::fit::{Fit, Fitter, LocalFitter};
use crate::forward::LeadField;
use crate::head::{ShellSpec, Shells, Sphere};
use crate::math::{Vec3, mean, sort_by_number};
use crate::placement::Placed;
use crate::report::{
    Change, FittedMap, Influence, InfluenceReport, Settings, SuspectReport, Suspects, WhatIf, WhatIfReport,
    WithAndWithout,
};
use crate::simulate::{HeadErrors, displaced, with_skull};

/// Skulls that a fit is tried with: how many times less they conduct than brain. 15 and 80 are Oostendorp 2000 (IEEE TBME
/// 47:1487–92) and the usual value before; 25 is Lai 2005 (Clin Neurophysiol 116:456–65).
const SKULLS: [f64; 5] = [15.0, 20.0, 25.0, 40.0, 80.0];

/// Distances of electrodes from where they were measured, in mm: of a digitised cap, and of a cap placed by eye. Common
/// practice, no source.
const MISPLACED_MM: [f64; 2] = [2.0, 5.0];

/// Displacements drawn for each of these distances.
const DISPLACEMENTS: u64 = 20;

/// Part of the electrodes that an upper sphere is fitted to, highest first.
const UPPER: f64 = 0.65;

/// Radii that a fit is tried with.
const RADII: [f64; 2] = [1.05, 0.95];

/// Fewest maps that suspects are looked for in.
const FEWEST_MAPS: usize = 10;

/// A suspect's mean share of what neighbours do not share: at least this, and at least so many times an even share. Common
/// practice, no source; in two open recordings with one channel of five times its neighbours' noise it holds 0.11 to 0.20 of
/// 61 electrodes.
const SUSPECT_SHARE: f64 = 0.1;
const SUSPECT_TIMES: f64 = 3.0;

/// Residuals below this are rounding.
const NOTHING_LEFT: f64 = 1e-9;

/// Residual variances at which near-dipolar maps are counted.
const COUNTED_AT: [f64; 3] = [0.05, 0.1, 0.15];

/// A head in which the same map is fitted again.
#[derive(Clone, Debug)]
pub(super) struct OtherHead {
    fitter: LocalFitter,
    /// Its centre in scalp radii of the model, and its radius over the model's.
    centre: Vec3,
    radius: f64,
    /// Radius of its inner skull over its scalp's.
    inner_skull: f64,
}

/// A change with the heads that stand for it; none where it does not apply.
pub(super) type Variation = (Change, Vec<OtherHead>);

impl Study {
    /// The fit without each electrode; `None` for a map that cannot be fitted.
    pub fn influence(&self, index: usize, map: &FittedMap) -> Option<Influence> {
        Some(Influence::new(&self.influence_of(index)?, map.residual_variance))
    }

    /// The same in numbers, in the order of the used electrodes.
    pub(super) fn influence_of(&self, index: usize) -> Option<Vec<InfluenceReport>> {
        let (values, fit) = self.fit_of(index)?;
        let starts = self.starts(&values, &fit);
        let radius = self.placement.sphere.sphere.radius;
        let directions = self.fitter.field().directions();
        let without = |(place, electrode): (usize, &Placed)| {
            let others = |count: usize| (0..count).filter(move |other| *other != place);
            let field = self.fitter.field().elsewhere(others(values.len()).map(|other| directions[other]).collect());
            let rest: Vec<f64> = others(values.len()).map(|other| values[other]).collect();
            let there = LocalFitter::new(field).fit(&rest, &starts);
            InfluenceReport {
                label: electrode.label.to_string(),
                shift_mm: there.as_ref().map(|there| (there.position - fit.position).norm() * radius),
                rv_without: there.map(|there| there.residual_variance),
            }
        };
        Some(self.placement.used().enumerate().map(without).collect())
    }

    /// The fit when something is otherwise; `None` for a map that cannot be fitted.
    pub fn what_if(&self, index: usize, map: &FittedMap) -> Option<WhatIf> {
        Some(WhatIf::new(&self.what_if_of(index)?, &map.dipole, map.residual_variance))
    }

    /// The same in numbers.
    pub(super) fn what_if_of(&self, index: usize) -> Option<Vec<(Change, WhatIfReport)>> {
        let (values, fit) = self.fit_of(index)?;
        let starts = self.starts(&values, &fit);
        let radius = self.placement.sphere.sphere.radius;
        let depth = |inner: f64, position: Vec3| inner - position.norm();
        let before = depth(self.shells.inner_skull_ratio(), fit.position);
        let moved = |head: &OtherHead| {
            let starts: Vec<Vec3> = starts.iter().map(|start| (*start - head.centre) * (1.0 / head.radius)).collect();
            let there = head.fitter.fit(&values, &starts)?;
            let position = head.centre + there.position * head.radius;
            let deeper = head.radius * depth(head.inner_skull, there.position) - before;
            Some(((position - fit.position).norm() * radius, deeper * radius, there.residual_variance))
        };
        let told = |(change, heads): &Variation| {
            let found: Vec<(f64, f64, f64)> = heads.iter().filter_map(moved).collect();
            let rms = |of: fn(&(f64, f64, f64)) -> f64| {
                mean(&found.iter().map(|one| of(one) * of(one)).collect::<Vec<_>>()).sqrt()
            };
            let numbers = match change {
                _ if found.is_empty() => None,
                Change::Electrodes(_) => {
                    Some((rms(|one| one.0), rms(|one| one.1), mean(&found.iter().map(|one| one.2).collect::<Vec<_>>())))
                }
                // Of the ways that it may go, the one that moves the fit farthest.
                _ => found.iter().copied().reduce(|a, b| if b.0 > a.0 { b } else { a }),
            };
            let report = WhatIfReport {
                change: change.code(),
                shift_mm: numbers.map(|numbers| numbers.0),
                depth_mm: numbers.map(|numbers| numbers.1),
                rv: numbers.map(|numbers| numbers.2),
            };
            (*change, report)
        };
        Some(self.simulated.variations.get_or_init(|| self.variations()).iter().map(told).collect())
    }

    /// Where the best minima of a map are: the fit, and the best one apart from it.
    fn starts(&self, values: &[f64], fit: &Fit) -> Vec<Vec3> {
        core::iter::once(fit.position).chain(self.fitter.second(values, fit).map(|second| second.position)).collect()
    }

    fn variations(&self) -> Vec<Variation> {
        let field = self.fitter.field();
        let directions = || field.directions().to_vec();
        let Sphere { centre, radius } = self.placement.sphere.sphere;
        let head = |field: LeadField, shells: &Shells, centre: Vec3, radius: f64| OtherHead {
            fitter: LocalFitter::new(field),
            centre,
            radius,
            inner_skull: shells.inner_skull_ratio(),
        };
        let of_shells = |shells: &Shells| head(LeadField::new(shells, radius, directions()), shells, Vec3::ZERO, 1.0);
        let elsewhere = |directions, centre, radius| head(field.elsewhere(directions), &self.shells, centre, radius);
        let has_skull = HeadErrors::has_skull(&self.shells);
        let mut made: Vec<Variation> = Vec::new();
        for ratio in SKULLS {
            let heads = has_skull.then(|| of_shells(&with_skull(&self.shells, ratio)));
            made.push((Change::Skull(ratio), heads.into_iter().collect()));
        }
        let Settings { errors, .. } = &self.settings;
        let points = &self.head_errors().points;
        for distance in MISPLACED_MM {
            let off = |draw| displaced(points, distance / radius, Vec3::ZERO, u64::from(errors.seed), draw);
            let heads = (0..DISPLACEMENTS).map(|draw| elsewhere(off(draw), Vec3::ZERO, 1.0)).collect();
            made.push((Change::Electrodes(distance), heads));
        }
        let seen_from =
            |centre: Vec3| -> Vec<Vec3> { points.iter().filter_map(|point| (*point - centre).unit()).collect() };
        let fitted = self.head();
        let fitted = fitted.centre_is_fitted && fitted.radius_is_fitted;
        let upper = fitted.then(|| self.upper_sphere()).flatten().map(|sphere| {
            let off = self.placement.axes.axes.to_canonical(sphere.centre - centre) * (1.0 / radius);
            elsewhere(seen_from(off), off, sphere.radius / radius)
        });
        made.push((Change::UpperSphere, upper.into_iter().collect()));
        let errors = HeadErrors::sphere_of(&self.all_points()).filter(|_| fitted);
        let mut centres = Vec::new();
        if let Some((sd, normal)) = errors {
            for axis in 0..3 {
                let unit: Vec<f64> = (0..4).map(|i| if i == axis { 1.0 } else { 0.0 }).collect();
                let error = sd * normal.solve(&unit)[axis].sqrt();
                for sign in [1.0, -1.0] {
                    let off = Vec3([0, 1, 2].map(|i| if i == axis { sign * error } else { 0.0 }));
                    centres.push(elsewhere(seen_from(off), off, 1.0));
                }
            }
        }
        made.push((Change::Centre, centres));
        // Radially projected, electrodes keep their directions on any sphere about the same centre.
        made.extend(RADII.map(|times| (Change::Radius(times), vec![elsewhere(directions(), Vec3::ZERO, times)])));
        made.push((Change::WithoutFluid, without_fluid(&self.shells).iter().map(of_shells).collect()));
        made
    }

    /// Fitted to the highest electrodes.
    fn upper_sphere(&self) -> Option<Sphere> {
        let mut electrodes: Vec<&Placed> = self.placement.electrodes.iter().collect();
        sort_by_number(&mut electrodes, |e| -self.placement.canonical(e.position_mm)[2]);
        let count = libm::ceil(UPPER * electrodes.len() as f64) as usize;
        let points: Vec<Vec3> = electrodes.iter().take(count).map(|e| e.position_mm).collect();
        let [least, most] = [0.7, 1.4].map(|times| times * self.placement.sphere.sphere.radius);
        Some(Sphere::fit(&points)?.sphere).filter(|sphere| (least..most).contains(&sphere.radius))
    }

    /// For each map, electrode by electrode, the share of the power of its residual less the mean of the neighbours'
    /// residuals: what a fault of one channel leaves, but hardly a source. Not numbers for a map that cannot be fitted or
    /// leaves nothing over.
    ///
    /// # Errors
    /// `map-index`.
    pub fn unshared(&self, range: core::ops::Range<usize>) -> Result<Vec<f32>, crate::finding::Error> {
        self.check(&range)?;
        let electrodes = self.fitter.field().count();
        let mut around = vec![Vec::new(); electrodes];
        for &[a, b] in self.neighbours() {
            around[a].push(b);
            around[b].push(a);
        }
        let shares = |map: Option<FittedMap>| -> Vec<f32> {
            let Some(map) = map.filter(|map| map.residual_variance > NOTHING_LEFT) else {
                return vec![f32::NAN; electrodes];
            };
            let residual = scaled(&map.residual);
            let own = |place: usize| {
                let count = around[place].len() as f64;
                let others = around[place].iter().map(|other| residual[*other]).sum::<f64>() / count.max(1.0);
                let off = residual[place] - others;
                // Of independent noise of equal variance every electrode has as much.
                off * off * count / (count + 1.0)
            };
            let powers: Vec<f64> = (0..electrodes).map(own).collect();
            let all: f64 = powers.iter().sum();
            powers.into_iter().map(|power| (power / all) as f32).collect()
        };
        Ok(self.outcomes(range).into_iter().flat_map(|map| shares(map.ok())).collect())
    }

    /// Electrodes that hold strikingly much of what is left over, from [`Self::unshared`] of all maps; `None` for fewer than
    /// ten that leave something over.
    pub fn suspects(&self, unshared: &[f32]) -> Option<Suspects> {
        Some(Suspects::new(self.suspect_reports(unshared)?))
    }

    /// The same in numbers.
    pub fn suspect_reports(&self, unshared: &[f32]) -> Option<Vec<SuspectReport>> {
        let electrodes = self.fitter.field().count();
        let (mut sums, mut leads, mut maps) = (vec![0.0f64; electrodes], vec![0usize; electrodes], 0usize);
        for shares in unshared.chunks_exact(electrodes).filter(|shares| !shares[0].is_nan()) {
            maps += 1;
            sums.iter_mut().zip(shares).for_each(|(sum, share)| *sum += f64::from(*share));
            let most = (1..electrodes).fold(0, |most, place| if shares[place] > shares[most] { place } else { most });
            leads[most] += 1;
        }
        if maps < FEWEST_MAPS {
            return None;
        }
        let share = |place: usize| sums[place] / maps as f64;
        let limit = SUSPECT_SHARE.max(SUSPECT_TIMES / electrodes as f64);
        let mut places: Vec<usize> = (0..electrodes).filter(|place| share(*place) >= limit).collect();
        sort_by_number(&mut places, |place| -share(*place));
        let with = if places.is_empty() { Vec::new() } else { self.residual_variances(&self.fitter, None) };
        let used: Vec<&Placed> = self.placement.used().collect();
        let report = |place: usize| {
            let directions = self.fitter.field().directions().iter().enumerate();
            let others = directions.filter(|(other, _)| *other != place).map(|(_, direction)| *direction).collect();
            let fitter = Fitter::new(self.fitter.field().elsewhere(others));
            let without = self.residual_variances(&fitter, Some(place));
            let count = |all: &[f64], at: f64| all.iter().filter(|rv| **rv <= at).count();
            let counted = |at| WithAndWithout { at, with: count(&with, at), without: count(&without, at) };
            SuspectReport {
                label: used[place].label.to_string(),
                share: share(place),
                even_share: 1.0 / electrodes as f64,
                largest_of: leads[place],
                maps,
                near_dipolar: COUNTED_AT.map(counted),
            }
        };
        Some(places.into_iter().map(report).collect())
    }

    /// Residual variances of all maps that can be fitted, with one electrode left out.
    fn residual_variances(&self, fitter: &Fitter, without: Option<usize>) -> Vec<f64> {
        let maps: Vec<Vec<f64>> = (0..self.count())
            .filter_map(|index| self.values(index).ok())
            .map(|values| values.into_iter().enumerate().filter(|(i, _)| Some(*i) != without).map(|(_, v)| v).collect())
            .collect();
        let maps: Vec<&[f64]> = maps.iter().map(Vec::as_slice).collect();
        let batches = maps.chunks(crate::fit::BATCH).flat_map(|batch| fitter.fit_batch(batch));
        batches.flatten().map(|fit| fit.residual_variance).collect()
    }

    /// All electrodes in scalp radii from the centre.
    pub(super) fn all_points(&self) -> Vec<Vec3> {
        let radius = self.placement.sphere.sphere.radius;
        let point = |e: &Placed| self.placement.canonical(e.position_mm) * (1.0 / radius);
        self.placement.electrodes.iter().map(point).collect()
    }
}

/// The same head with brain in place of cerebrospinal fluid; `None` where it has none.
fn without_fluid(shells: &Shells) -> Option<Shells> {
    let specs = shells.specs();
    let fluid = specs.iter().position(|shell| {
        let name = shell.tissue.to_ascii_lowercase();
        name == "csf" || name.contains("cerebrospinal")
    })?;
    let inner = fluid.checked_sub(1)?;
    let merged =
        specs.iter().enumerate().filter(|(index, _)| *index != inner).map(|(index, shell)| match index == fluid {
            true => ShellSpec { ratio: shell.ratio, ..specs[inner].clone() },
            false => shell.clone(),
        });
    Shells::new(merged.collect()).ok()
}
