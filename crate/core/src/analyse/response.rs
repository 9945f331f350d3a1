//! Time points of one response: a moving dipole, one fixed over an interval, and what the baseline tells.

use super::Study;
use crate::finding::Error;
use crate::fit::Fit;
use crate::map::average_referenced;
use crate::math::{Symmetric3, Vec3, dot};
use crate::report::{Fixed, FixedFit, Measured, Response};
use crate::understand::ColumnsAre;

impl Study {
    /// The response over time; `None` unless the maps are time points.
    pub fn response(&self) -> Option<Response> {
        self.response_of(|| {
            self.batches(0..self.count(), |index, _, fit| {
                let fit = fit?;
                Some((fit.position, fit.moment.norm() * self.strength_factor(index), fit.residual_variance))
            })
        })
    }

    /// The same of fits made before: position, strength as it is reported, and residual variance of each map that has them.
    pub fn response_of(&self, fits: impl FnOnce() -> Vec<Option<(Vec3, f64, f64)>>) -> Option<Response> {
        let understood = &self.tables.understood;
        if understood.columns_are != ColumnsAre::TimePoints {
            return None;
        }
        let count = self.count();
        let mut gfp = vec![f64::NAN; count];
        let times = understood.moments.as_ref().map(|moments| (moments.times.clone(), moments.unit));
        let baseline = self.settings.baseline;
        let quiet = |index: usize| match (&times, baseline) {
            (Some((times, _)), Some(window)) => (window.from..=window.to).contains(&times[index]),
            _ => false,
        };
        let (mut squares, mut inside) = (0.0, 0usize);
        let electrodes = self.fitter.field().count();
        for (index, gfp) in gfp.iter_mut().enumerate() {
            let Ok(values) = self.values(index) else { continue };
            let map = average_referenced(&values);
            let sum = dot(&map, &map);
            *gfp = (sum / electrodes as f64).sqrt();
            if quiet(index) {
                squares += sum;
                inside += 1;
            }
        }
        // The mean of the window was subtracted from each channel, that of the electrodes from each map.
        let freedom = inside.saturating_sub(1) * (electrodes - 1);
        let noise_sd = (freedom > 0).then(|| (squares / freedom as f64).sqrt());
        let (mut fits, unit) = (fits(), self.settings.map_unit);
        fits.resize(count, None);
        Some(Response::new(Measured { times, gfp, fits, baseline, noise_sd, unit }))
    }

    /// One position for the time points from `first` to `last`, both included, each with a moment of its own; `None` unless
    /// the maps are time points.
    ///
    /// # Errors
    /// `map-index`, `map-incomplete` for a time point that lacks a value, `map-constant` if all are.
    pub fn fixed(&self, first: usize, last: usize) -> Result<Option<Fixed>, Error> {
        let understood = &self.tables.understood;
        let range = first.min(last)..first.max(last).saturating_add(1);
        self.check(&range)?;
        if understood.columns_are != ColumnsAre::TimePoints {
            return Ok(None);
        }
        let values = range.clone().map(|index| self.values(index)).collect::<Result<Vec<_>, _>>()?;
        let maps: Vec<&[f64]> = values.iter().map(Vec::as_slice).collect();
        let common = self.fitter.fit_common(&maps).ok_or_else(|| self.constant(range.start))?;
        let tensor = Symmetric3::from_fn(|i, j| common.moments.iter().map(|m| m[i] * m[j]).sum());
        let axis = tensor.eigen().vectors[2];
        let all: f64 = common.moments.iter().map(|m| m.dot(*m)).sum();
        let signed: Vec<f64> = range.clone().zip(&common.moments).map(|(at, m)| self.sign(at) * m.dot(axis)).collect();
        // The sense in which the moment is largest, so that the course over time has its peak upwards.
        let most = signed.iter().fold(0.0f64, |most, one| if one.abs() > most.abs() { *one } else { most });
        let sense = if most < 0.0 { -1.0 } else { 1.0 };
        let fit = Fit { moment: axis * sense, ..common.fit };
        let strongest = signed.iter().position(|one| *one == most).unwrap_or(0);
        let mut map = self.fitted(range.start + strongest, maps[strongest], &fit);
        map.dipole = self.equivalent_dipole(&fit, fit.moment, None);
        let powers: Vec<f64> = values.iter().map(|map| power(map)).collect();
        let moving = self.fitter.fit_batch(&maps);
        let left = moving.iter().zip(&powers).filter_map(|(fit, power)| Some(fit.as_ref()?.residual_variance * power));
        let moving = left.sum::<f64>() / powers.iter().sum::<f64>();
        let interval = match &understood.moments {
            Some(moments) => ([moments.times[range.start], moments.times[range.end - 1]], moments.unit),
            None => ([range.start as f64 + 1.0, range.end as f64], "samples"),
        };
        let fixed = FixedFit {
            map: &map,
            interval,
            position: fit.position,
            rv: common.residual_variances,
            strength: range.zip(signed).map(|(at, one)| sense * self.strength_factor(at) * one).collect(),
            along: common.moments.iter().map(|m| m.dot(axis) * m.dot(axis)).sum::<f64>() / all,
            moving,
        };
        Ok(Some(Fixed::new(fixed, &self.head(), maps[0].len(), self.placement.electrodes.len())))
    }
}

/// Σ of the squares of the average-referenced map.
fn power(map: &[f64]) -> f64 {
    let map = average_referenced(map);
    dot(&map, &map)
}
