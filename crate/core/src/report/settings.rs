use super::trust_settings::{self, ErrorSettings, Limits, NoiseSettings, SourceSettings};
use crate::finding::{Code, Error, Finding, Place};
use crate::head::{AxesName, LengthUnit, ShellSpec};
use crate::map::MapUnit;
use crate::math::Vec3;
use crate::understand::{
    AngleWishes, Baseline, ColumnWishes, ColumnsAre, FileWishes, MapsAre, Orientation, Times, Wishes,
};
use serde::{Deserialize, Serialize};
use std::collections::BTreeMap;

/// What the user may choose; all optional, unknown keys and values are refused.
#[derive(Clone, Debug, Default, PartialEq, Serialize, Deserialize)]
#[serde(deny_unknown_fields, default, rename_all = "camelCase")]
pub struct Settings {
    /// The head; what it leaves open is fitted to the electrodes or standard.
    pub head: Option<HeadSettings>,
    /// Labels of electrodes to leave out.
    pub exclude: Vec<String>,
    /// Labels of electrodes whose values were interpolated: they are no data, and left out.
    pub interpolated: Vec<String>,
    /// Directions of x, y and z of the electrode table, as in `front-left-up`.
    pub axes: Option<AxesName>,
    /// Whether left and right of the electrode table are to be exchanged; `None` is undecided.
    pub mirror: Option<bool>,
    /// An infant's head, or one with a defect of the skull or a craniotomy: the standard shells do not hold.
    pub unusual_head: bool,
    /// Whether the maps are surface Laplacians; `None` is undecided.
    pub laplacian: Option<bool>,
    /// Unit of the maps.
    pub map_unit: MapUnit,
    /// Maps, counted from 0, whose sign is turned.
    pub flip: Vec<usize>,
    /// Whether the maps' sign means something.
    pub polarity: Polarity,
    /// Standard deviation of each map's activation, by the number of the map; strengths are multiplied by it.
    pub activation_sd: Vec<Option<f64>>,
    /// What to add to each fit.
    pub assess: Vec<Assessment>,
    /// How far head and electrodes may be off, for region and populations.
    pub errors: ErrorSettings,
    /// Standard deviation of the noise of a map, where it is known.
    pub noise: Option<NoiseSettings>,
    /// Sources of the reference populations.
    pub sources: SourceSettings,
    /// Where verdicts change.
    pub limits: Limits,
    /// What is said about single files, by their names.
    pub files: BTreeMap<String, FileWishes>,
    /// Unit of the positions.
    pub units: Option<LengthUnit>,
    /// Which way the table of maps lies.
    pub orientation: Option<Orientation>,
    /// What the table of maps holds.
    pub maps_are: Option<MapsAre>,
    /// Columns of the table of electrodes.
    pub columns: ColumnWishes,
    /// What angles in the table of electrodes mean.
    pub angles: AngleWishes,
    /// How the maps belong together.
    pub columns_are: Option<ColumnsAre>,
    /// When the maps were.
    pub times: Option<Times>,
    /// The window of time whose mean is zero.
    pub baseline: Option<Baseline>,
}

/// Whether the sign of a map means something.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq, Serialize, Deserialize)]
#[serde(rename_all = "kebab-case")]
pub enum Polarity {
    /// As of a component: the dipole is an axis without direction.
    #[default]
    Arbitrary,
    /// Positive values are positive: the dipole has a direction.
    Declared,
}

/// A head other than the standard one.
#[derive(Clone, Debug, Default, PartialEq, Serialize, Deserialize)]
#[serde(deny_unknown_fields, default)]
pub struct HeadSettings {
    /// Shells, innermost first.
    pub shells: Option<Vec<ShellSpec>>,
    /// Centre in the frame of the electrode table.
    pub centre_mm: Option<Vec3>,
    /// Scalp radius.
    pub radius_mm: Option<f64>,
}

/// Standard deviations that are computed with, as for numbers of tables.
pub(super) const SIZES: core::ops::RangeInclusive<f64> = 1e-100..=1e100;

/// What can be added to a fit.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Serialize, Deserialize)]
#[serde(rename_all = "kebab-case")]
pub enum Assessment {
    /// Where the dipole may be when head, electrodes and map are not exact.
    Region,
    /// The map among simulated ones.
    Populations,
    /// What it may count as.
    Verdict,
    /// What else may explain the map.
    Alternatives,
    /// The fit without each electrode.
    Influence,
    /// The fit when something is otherwise.
    #[serde(rename = "what_if")]
    WhatIf,
}

impl Settings {
    /// Checks what names maps by their number, and what lies in a range.
    ///
    /// # Errors
    /// `map-index`, `activation-sd-invalid`, `setting-range`.
    pub fn check(&self, maps: &[String]) -> Result<(), Error> {
        trust_settings::check(&self.errors, self.noise, &self.sources, &self.limits)?;
        let finding = |code, index: usize| Finding::new(code).at(Place::input("settings")).with("index", index);
        let named = self.flip.iter().copied().chain(self.activation_sd.len().checked_sub(1));
        if let Some(index) = named.into_iter().find(|index| *index >= maps.len()) {
            return Err(finding(Code::MapIndex, index).with("count", maps.len()).into());
        }
        let invalid = |sd: &Option<f64>| sd.is_some_and(|sd| !SIZES.contains(&sd));
        match self.activation_sd.iter().position(invalid) {
            Some(index) => {
                let name = maps.get(index).map(String::as_str).unwrap_or_default();
                Err(finding(Code::ActivationSdInvalid, index).with("map", name).into())
            }
            None => Ok(()),
        }
    }

    /// What they say about the meaning of the files.
    pub fn wishes(&self) -> Wishes {
        Wishes {
            files: self.files.clone(),
            orientation: self.orientation,
            maps_are: self.maps_are,
            columns: self.columns.clone(),
            angles: self.angles.clone(),
            columns_are: self.columns_are,
            times: self.times,
            baseline: self.baseline,
        }
    }

    /// Whether the sign of this map is turned.
    pub fn flipped(&self, map: usize) -> bool {
        self.flip.contains(&map)
    }

    /// The standard deviation of this map's activation, where it is given.
    pub fn activation_sd(&self, map: usize) -> Option<f64> {
        self.activation_sd.get(map).copied().flatten()
    }

    /// The error for settings that could not be understood.
    pub fn unknown(problem: impl core::fmt::Display) -> Error {
        Finding::new(Code::SettingsUnknown).at(Place::input("settings")).with("problem", problem.to_string()).into()
    }
}
