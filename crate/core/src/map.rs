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

/// Whether a name or a unit speaks of a surface Laplacian: a current density, or volts per area.
pub fn hints_at_laplacian(text: &str) -> bool {
    let text = text.to_ascii_lowercase();
    let words = || text.split(|c: char| !c.is_alphanumeric());
    text.contains("laplac")
        || words().any(|word| ["csd", "scd"].contains(&word.trim_end_matches(|c: char| c.is_ascii_digit())))
        || ["v/m²", "v/m2", "v/m^2", "v/cm²", "v/cm2", "v/cm^2", "v/mm²", "v/mm2"]
            .iter()
            .any(|unit| text.contains(unit))
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn names_of_laplacians_are_noticed() {
        for name in ["CSD", "csd_1", "surface Laplacian 3", "P300 [µV/m²]", "uV/cm2", "V/m^2"] {
            assert!(hints_at_laplacian(name), "{name}");
        }
        for name in ["ICA1", "left tap", "map 3", "discsd", "µV", "V/m"] {
            assert!(!hints_at_laplacian(name), "{name}");
        }
    }
}
