use crate::finding::{Code, Error, Finding, Place};
use crate::simulate::Orientation;
use core::ops::RangeInclusive;
use serde::{Deserialize, Serialize};

/// What the region and the single dipoles of the reference populations are off in.
#[derive(Clone, Copy, Debug, PartialEq, Serialize, Deserialize)]
#[serde(deny_unknown_fields, default, rename_all = "camelCase")]
pub struct ErrorSettings {
    /// Root-mean-square distance along the scalp of an electrode from where it was measured.
    pub electrodes_mm: f64,
    /// Least and largest ratio of the conductivities of brain and skull; `None` for the modelled one.
    pub skull_ratio: Option<[f64; 2]>,
    /// Standard errors of the sphere's fit by which centre and radius are off.
    pub sphere: f64,
    /// Weak sources that the noise comes from; 0 for noise that is independent at each electrode.
    pub background_sources: usize,
    /// Draws for a region.
    pub draws: usize,
    /// Determines them.
    pub seed: u32,
}

impl Default for ErrorSettings {
    fn default() -> Self {
        Self {
            electrodes_mm: 5.0,
            skull_ratio: Some([15.0, 40.0]),
            sphere: 1.0,
            background_sources: 30,
            draws: 200,
            seed: 1,
        }
    }
}

/// Known noise, in the unit of the maps.
#[derive(Clone, Copy, Debug, PartialEq, Serialize, Deserialize)]
#[serde(deny_unknown_fields, untagged)]
pub enum NoiseSettings {
    /// At each electrode of a map.
    Sd {
        /// Standard deviation.
        sd: f64,
    },
    /// At each electrode of a single trial, of which so many were averaged.
    Trials {
        /// Standard deviation.
        #[serde(rename = "singleTrialSd")]
        single_trial_sd: f64,
        /// Number of trials.
        trials: usize,
    },
}

impl NoiseSettings {
    /// Standard deviation at each electrode of a map.
    pub fn sd(&self) -> f64 {
        match *self {
            Self::Sd { sd } => sd,
            Self::Trials { single_trial_sd, trials } => single_trial_sd / (trials as f64).sqrt(),
        }
    }
}

/// Sources of the reference populations.
#[derive(Clone, Copy, Debug, PartialEq, Serialize, Deserialize)]
#[serde(deny_unknown_fields, default, rename_all = "camelCase")]
pub struct SourceSettings {
    /// Maps of each kind.
    pub draws: usize,
    /// Determines them.
    pub seed: u32,
    /// Largest distance from the centre over the radius of the innermost shell.
    pub max_eccentricity: f64,
    /// See [`crate::simulate::SourceRule::floor`].
    pub floor: [f64; 2],
    /// How they point.
    pub orientation: Orientation,
    /// Share of noise in the power of the single dipoles' maps.
    pub noise: f64,
}

impl Default for SourceSettings {
    fn default() -> Self {
        Self {
            draws: 10_000,
            seed: 1,
            max_eccentricity: 0.9,
            floor: [-0.5, 0.25],
            orientation: Orientation::Isotropic,
            noise: 0.01,
        }
    }
}

/// Where verdicts change.
#[derive(Clone, Copy, Debug, PartialEq, Serialize, Deserialize)]
#[serde(deny_unknown_fields, default, rename_all = "camelCase")]
pub struct Limits {
    /// Share of simulated single dipoles with a lower residual variance, of all or of those at about the same depth, up to
    /// which a map may be one.
    pub one_dipole: f64,
    /// That share beyond which a map is none.
    pub ruled_out: f64,
    /// Share of simulated pairs, and of simulated hundreds, with a lower residual variance, up to which a map is not taken
    /// for one of theirs.
    pub others: f64,
    /// Share of a map's power on one electrode beyond which it is that electrode's alone.
    pub lone_electrode: f64,
    /// Angle at the centre between a position and the nearest electrode beyond which it lies under none; `None` for the
    /// usual distance of neighbours.
    pub coverage_deg: Option<f64>,
}

impl Default for Limits {
    fn default() -> Self {
        Self { one_dipole: 0.95, ruled_out: 0.999, others: 0.05, lone_electrode: 0.5, coverage_deg: None }
    }
}

/// Least share of the ball of sources, along the normal of the floor, that must be above it.
const ABOVE_FLOOR: f64 = 0.5;

/// Checks what the assessments need.
///
/// # Errors
/// `setting-range`.
pub(super) fn check(
    errors: &ErrorSettings,
    noise: Option<NoiseSettings>,
    sources: &SourceSettings,
    limits: &Limits,
) -> Result<(), Error> {
    within("errors.electrodesMm", errors.electrodes_mm, 0.0..=30.0)?;
    if let Some([least, most]) = errors.skull_ratio {
        within("errors.skullRatio[0]", least, 1.0..=1000.0)?;
        within("errors.skullRatio[1]", most, least..=1000.0)?;
    }
    within("errors.sphere", errors.sphere, 0.0..=10.0)?;
    within("errors.backgroundSources", errors.background_sources as f64, 0.0..=1000.0)?;
    within("errors.draws", errors.draws as f64, 200.0..=5000.0)?;
    match noise {
        Some(NoiseSettings::Sd { sd }) => within("noise.sd", sd, super::settings::SIZES)?,
        Some(NoiseSettings::Trials { single_trial_sd, trials }) => {
            within("noise.singleTrialSd", single_trial_sd, super::settings::SIZES)?;
            within("noise.trials", trials as f64, 1.0..=1e9)?;
        }
        None => {}
    }
    within("sources.draws", sources.draws as f64, 1000.0..=100_000.0)?;
    within("sources.maxEccentricity", sources.max_eccentricity, 0.1..=crate::forward::MAX_ECCENTRICITY)?;
    let [height, slope] = sources.floor;
    within("sources.floor[1]", slope, -1.0..=1.0)?;
    let highest = ABOVE_FLOOR * sources.max_eccentricity * (1.0 + slope * slope).sqrt();
    within("sources.floor[0]", height, -2.0..=highest)?;
    within("sources.noise", sources.noise, 0.0..=0.5)?;
    within("limits.oneDipole", limits.one_dipole, 0.5..=1.0)?;
    within("limits.ruledOut", limits.ruled_out, limits.one_dipole..=1.0)?;
    within("limits.others", limits.others, 0.0..=0.5)?;
    within("limits.loneElectrode", limits.lone_electrode, 0.1..=1.0)?;
    limits.coverage_deg.map_or(Ok(()), |angle| within("limits.coverageDeg", angle, 1.0..=180.0))
}

pub(super) fn within(setting: &str, value: f64, range: RangeInclusive<f64>) -> Result<(), Error> {
    if range.contains(&value) {
        return Ok(());
    }
    Err(Finding::new(Code::SettingRange)
        .at(Place::input("settings"))
        .with("setting", setting)
        .with("value", value)
        .with("least", *range.start())
        .with("most", *range.end())
        .into())
}
