//! One response over time, in numbers and words.

use super::number::{given, percent, significant};
use super::sheet::{Written, row, rows};
use super::{FittedMap, HeadReport, Row};
use crate::map::MapUnit;
use crate::math::{Vec3, mean};
use crate::understand::Baseline;
use serde::Serialize;

/// A response over time; what a time point lacks because it cannot be fitted is absent.
#[derive(Clone, Debug, PartialEq, Serialize)]
pub struct Response {
    /// When each map was; its number, from 1, where that is not known.
    pub times: Vec<f64>,
    /// Unit of the times.
    pub unit: &'static str,
    /// Global field power, the root mean square over the electrodes used of the average-referenced map (Lehmann & Skrandies
    /// 1980, Electroencephalogr Clin Neurophysiol 48:609–621); absent where a value is missing.
    pub gfp: Vec<Option<f64>>,
    /// Unit of the field power.
    pub gfp_unit: &'static str,
    /// Residual variance of the moving dipole: the fit of each time point by itself.
    pub rv: Vec<Option<f64>>,
    /// Its position in scalp radii, canonical axes.
    pub positions: Vec<Option<Vec3>>,
    /// Length of its moment, in `strength_unit`.
    pub strengths: Vec<Option<f64>>,
    /// Unit of the strengths.
    pub strength_unit: &'static str,
    /// Time points that mean something, in the order of time.
    pub instants: Vec<Instant>,
    /// What the field power has to exceed to count as more than noise.
    pub floor: Option<Floor>,
    /// What the baseline tells of the noise; absent without a baseline window of two time points.
    pub noise: Option<NoiseFound>,
    /// What was found.
    pub sentence: String,
    /// What is to be said of it.
    pub notes: Vec<String>,
}

/// A time point that means something.
#[derive(Clone, Debug, PartialEq, Serialize)]
pub struct Instant {
    /// `onset`, `mid-rise` or `peak`.
    pub code: &'static str,
    /// The map.
    pub index: usize,
    /// Its name and time.
    pub label: String,
}

/// A field power below which a map is near the noise.
#[derive(Clone, Debug, PartialEq, Serialize)]
pub struct Floor {
    /// The field power.
    pub gfp: f64,
    /// Where it comes from.
    pub sentence: String,
}

/// Noise of the baseline.
#[derive(Clone, Debug, PartialEq, Serialize)]
pub struct NoiseFound {
    /// Standard deviation at each electrode, in the unit of the maps: what `settings.noise.sd` takes.
    pub sd: f64,
    /// The same in words.
    pub sentence: String,
}

/// A response in numbers.
#[derive(Clone, Debug)]
pub struct Measured {
    /// Times with their unit, where they are known.
    pub times: Option<(Vec<f64>, &'static str)>,
    /// Field power of each map in its unit; NaN where a value is missing.
    pub gfp: Vec<f64>,
    /// Position, strength and residual variance of each fit.
    pub fits: Vec<Option<(Vec3, f64, f64)>>,
    /// The baseline window, if one is set.
    pub baseline: Option<Baseline>,
    /// Of the noise in it, in the unit of the maps.
    pub noise_sd: Option<f64>,
    /// Unit of the maps.
    pub unit: MapUnit,
}

/// Standard deviations of the baseline's field power above its mean (common practice, no source).
const DEVIATIONS: f64 = 3.0;

/// Share of the peak that stands for it where there is no baseline (common practice, no source).
const SHARE_OF_PEAK: f64 = 0.1;

impl Response {
    /// From numbers.
    pub fn new(measured: Measured) -> Self {
        let Measured { times, gfp, fits, baseline, noise_sd, unit } = measured;
        let written = Written::of(unit);
        let gfp: Vec<f64> = gfp.into_iter().map(|value| value * written.factor).collect();
        let known = times.is_some();
        let (times, unit_of_time) =
            times.unwrap_or_else(|| ((1..=gfp.len()).map(|number| number as f64).collect(), "samples"));
        let at = |index: usize| match known {
            true => format!("{} {unit_of_time}", given(times[index])),
            false => format!("sample {}", given(times[index])),
        };
        let power = |value: f64| format!("{} {}", significant(value, 3), written.name);
        let largest = (0..gfp.len()).filter(|index| gfp[*index] > 0.0).max_by(|a, b| {
            // Of equal ones the first.
            gfp[*a].total_cmp(&gfp[*b]).then(b.cmp(a))
        });
        let window = baseline.filter(|_| known).map(|window| {
            let inside = |time: f64| (window.from..=window.to).contains(&time);
            let quiet = times.iter().zip(&gfp).filter(|(time, value)| inside(**time) && !value.is_nan());
            (window, quiet.map(|(_, value)| *value).collect::<Vec<f64>>())
        });
        let floor = largest.map(|peak| match window.as_ref().filter(|(_, quiet)| quiet.len() > 1) {
            Some((window, quiet)) => {
                let middle = mean(quiet);
                let squares: f64 = quiet.iter().map(|value| (value - middle) * (value - middle)).sum();
                let gfp = middle + DEVIATIONS * (squares / (quiet.len() - 1) as f64).sqrt();
                let sentence = format!(
                    "{}, the mean and {DEVIATIONS} standard deviations of the field power in the baseline window, {} to {} {unit_of_time}",
                    power(gfp),
                    given(window.from),
                    given(window.to)
                );
                Floor { gfp, sentence }
            }
            None => {
                let gfp = SHARE_OF_PEAK * gfp[peak];
                let share = percent(SHARE_OF_PEAK);
                Floor { gfp, sentence: format!("{}, {share} % of the peak, as there is no baseline window", power(gfp)) }
            }
        });
        let mut instants = Vec::new();
        if let (Some(peak), Some(floor)) = (largest, &floor) {
            let above = (0..=peak).rev().take_while(|index| gfp[*index] > floor.gfp).last();
            if let Some(onset) = above.filter(|onset| *onset < peak) {
                let half = 0.5 * (gfp[onset] + gfp[peak]);
                let middle = (onset..=peak).find(|index| gfp[*index] >= half).unwrap_or(peak);
                instants.push(Instant { code: "onset", index: onset, label: format!("Onset, {}", at(onset)) });
                instants.push(Instant { code: "mid-rise", index: middle, label: format!("Mid-rise, {}", at(middle)) });
            }
            instants.push(Instant { code: "peak", index: peak, label: format!("Peak, {}", at(peak)) });
        }
        let sentence = match (instants.as_slice(), &floor) {
            ([onset, middle, peak], Some(floor)) => format!(
                "Global field power is largest at {} ({}). At {} it rises above {}; at {} it is half way up.",
                at(peak.index),
                power(gfp[peak.index]),
                at(onset.index),
                floor.sentence,
                at(middle.index)
            ),
            ([peak], Some(floor)) => format!(
                "Global field power is largest at {} ({}); no onset lies before it: above {} it is {}.",
                at(peak.index),
                power(gfp[peak.index]),
                floor.sentence,
                if gfp[peak.index] > floor.gfp { "at that time point alone" } else { "nowhere" }
            ),
            _ => "No time point has a field power.".into(),
        };
        let noise = noise_sd.filter(|sd| *sd > 0.0 && sd.is_finite()).map(|sd| NoiseFound {
            sd,
            sentence: format!(
                "Noise in the baseline window: standard deviation {} at each electrode. Slow drifts and background activity in the window count as noise.",
                power(sd * written.factor)
            ),
        });
        let mut notes = vec![
            "The moving dipole is a fit of each time point by itself. Where the field power is near the noise, residual variance and position mean nothing.".to_owned(),
        ];
        if floor.is_some() {
            notes.push("The onset is where the field power last rose above that level before the peak, the middle of the rise half way from there (common practice, no source).".into());
        }
        if !known {
            notes.push("No times are known; time points are counted from 1.".into());
        }
        let told = |value: f64| Some(value).filter(|value| value.is_finite());
        Self {
            unit: unit_of_time,
            gfp: gfp.iter().map(|value| told(*value)).collect(),
            gfp_unit: written.name,
            rv: fits.iter().map(|fit| fit.map(|(_, _, rv)| rv)).collect(),
            positions: fits.iter().map(|fit| fit.map(|(position, _, _)| position)).collect(),
            strengths: fits.iter().map(|fit| fit.map(|(_, strength, _)| strength)).collect(),
            strength_unit: if unit == MapUnit::Relative { "relative" } else { "nAm" },
            instants,
            floor,
            noise,
            sentence,
            notes,
            times,
        }
    }
}

/// One position for an interval of time points, each with a moment of its own.
#[derive(Clone, Debug, PartialEq, Serialize)]
pub struct Fixed {
    /// The answer.
    pub sentence: String,
    /// The numbers.
    pub rows: Vec<Row>,
    /// The position in scalp radii, canonical axes.
    pub position: Vec3,
    /// Main axis of the moments: that along which the sum of their squares is largest.
    pub direction: Vec3,
    /// Residual variance of each time point; absent where a map is constant.
    pub rv: Vec<Option<f64>>,
    /// Moment along the main axis, signed.
    pub strength: Vec<f64>,
    /// Unit of the strengths.
    pub strength_unit: &'static str,
    /// Whether the position presses on the boundary of the region of sources.
    pub at_boundary: bool,
}

/// A fixed dipole in numbers.
#[derive(Clone, Debug)]
pub struct FixedFit<'a> {
    /// One of the maps with the dipole along the main axis of all moments and the pooled residual variance.
    pub map: &'a FittedMap,
    /// First and last time with their unit, or numbers of maps.
    pub interval: ([f64; 2], &'static str),
    /// In scalp radii.
    pub position: Vec3,
    /// Residual variance of each time point.
    pub rv: Vec<f64>,
    /// Moment of each along the main axis.
    pub strength: Vec<f64>,
    /// Share of the squared moments along the main axis.
    pub along: f64,
    /// Pooled residual variance of a position for each time point.
    pub moving: f64,
}

impl Fixed {
    /// From numbers; `electrodes` are used, `placed` have a position.
    pub fn new(fixed: FixedFit, head: &HeadReport, electrodes: usize, placed: usize) -> Self {
        let FixedFit { map, interval: ([from, to], unit), position, rv, strength, along, moving } = fixed;
        let pooled = map.residual_variance;
        let site = map.dipole.nearest_site.map_or("under no standard site".into(), |site| format!("under {site}"));
        let boundary = match map.dipole.at_boundary {
            true => " It presses on the boundary of the modelled brain.",
            false => "",
        };
        let sentence = format!(
            "One equivalent position with free moments from {} to {} {unit} ({} time points) leaves {} % of their power; a position for each leaves {} %. It lies {site}, {}.{boundary}",
            given(from),
            given(to),
            rv.len(),
            percent(pooled),
            percent(moving),
            map.dipole.side
        );
        let mut all = vec![
            row(
                "pooled_residual_variance",
                "Residual variance over the interval",
                percent(pooled),
                "%",
                "What the one position leaves of all time points, over the sum of their squares.",
            ),
            row(
                "moving_residual_variance",
                "The same for a moving dipole",
                percent(moving),
                "%",
                "What fits of each time point by itself leave; never more, as they have three more parameters each.",
            ),
            row(
                "moment_along_axis",
                "Squared moment along the main axis",
                percent(along),
                "%",
                "Nearer to 100 %, the moment keeps its axis over the interval.",
            ),
        ];
        const PLACE: [&str; 7] =
            ["nearest_site", "side", "depth_mm", "eccentricity", "canonical_mm", "position_mm", "canonical_direction"];
        all.extend(rows(map, head, electrodes, placed).into_iter().filter(|row| PLACE.contains(&row.code.as_ref())));
        Self {
            sentence,
            rows: all,
            position,
            direction: map.dipole.canonical_direction,
            rv: rv.into_iter().map(|rv| Some(rv).filter(|rv| rv.is_finite())).collect(),
            strength,
            strength_unit: map.dipole.strength_unit,
            at_boundary: map.dipole.at_boundary,
        }
    }
}
