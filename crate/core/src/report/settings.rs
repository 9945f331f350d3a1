use crate::finding::{Code, Error, Finding, Place};
use crate::head::ShellSpec;
use crate::map::MapUnit;
use crate::math::Vec3;
use serde::{Deserialize, Serialize};

/// What the user may choose; all optional, unknown keys and values are refused.
#[derive(Clone, Debug, Default, PartialEq, Serialize, Deserialize)]
#[serde(deny_unknown_fields, default, rename_all = "camelCase")]
pub struct Settings {
    /// The head; what it leaves open is fitted to the electrodes or standard.
    pub head: Option<HeadSettings>,
    /// Labels of electrodes to leave out.
    pub exclude: Vec<String>,
    /// Unit of the maps.
    pub map_unit: MapUnit,
    /// What to add to each fit.
    pub assess: Vec<Assessment>,
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

/// What can be added to a fit: nothing yet.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Serialize, Deserialize)]
#[serde(rename_all = "kebab-case")]
pub enum Assessment {}

impl Settings {
    /// The error for settings that could not be understood.
    pub fn unknown(problem: impl core::fmt::Display) -> Error {
        Finding::new(Code::SettingsUnknown).at(Place::input("settings")).with("problem", problem.to_string()).into()
    }
}
