//! Scalp maps as a table gives them: one value per electrode, several maps side by side.

use crate::electrode::Label;
use ndarray::Array2;

/// Maps of one table.
#[derive(Clone, Debug, PartialEq)]
pub struct Maps {
    /// Label of each row.
    pub labels: Vec<Label>,
    /// Line of each row.
    pub lines: Vec<usize>,
    /// Name of each map.
    pub names: Vec<String>,
    /// One row for each label, one column for each map, in the table's unit; NaN where the table has no value.
    pub values: Array2<f64>,
}

/// The unit of the values.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq, serde::Serialize, serde::Deserialize)]
pub enum MapUnit {
    /// Microvolts.
    #[serde(rename = "uV")]
    Microvolt,
    /// Volts.
    #[serde(rename = "V")]
    Volt,
    /// Unknown: a component's map, whose scale means nothing by itself.
    #[default]
    #[serde(rename = "relative")]
    Relative,
}

impl MapUnit {
    /// Microvolts per unit; relative values count as microvolts.
    pub fn microvolts(self) -> f64 {
        match self {
            Self::Volt => 1e6,
            Self::Microvolt | Self::Relative => 1.0,
        }
    }
}

/// The value minus the mean, for every value.
pub fn average_referenced(map: &[f64]) -> Vec<f64> {
    let mut map = map.to_vec();
    crate::math::centre(&mut map);
    map
}
