//! Several decompositions in one report.

use super::number::{hundredths, millimetres};
use super::{
    Difference, ElectrodeReport, ErrorReport, GroupSummary, HeadReport, Input, MapReport, Note, PopulationReport,
    Program, Settings, UnderstoodReport,
};
use serde::Serialize;

/// Everything about several decompositions. Every key is always present; what is absent is `null`.
#[derive(Clone, Debug, PartialEq, Serialize)]
pub struct Comparison {
    /// `inward-comparison`.
    pub format: &'static str,
    /// Version of this structure.
    pub version: u32,
    /// What made it.
    pub program: Program,
    /// In the order in which they were given.
    pub decompositions: Vec<DecompositionReport>,
    /// Components matched between two of them.
    pub pairs: Vec<Pair>,
    /// Decompositions of several subjects under one name.
    pub groups: Vec<GroupSummary>,
    /// Each group beside each later one.
    pub differences: Vec<Difference>,
    /// What is to be said of all of them.
    pub notes: Vec<Note>,
}

/// A decomposition of a [`Comparison`].
#[derive(Clone, Debug, PartialEq, Serialize)]
pub struct DecompositionReport {
    /// Its name.
    pub name: String,
    /// Whose it is.
    pub subject: Option<String>,
    /// A reduction of mutual information, as given.
    pub information: Option<f64>,
    /// As in a [`super::Report`], like all up to `understood`.
    pub inputs: Vec<Input>,
    /// Settings, defaults included.
    pub settings: Settings,
    /// The head of its fits.
    pub head: HeadReport,
    /// Electrodes with position and value.
    pub electrodes: Vec<ElectrodeReport>,
    /// One entry for each map.
    pub maps: Vec<MapReport>,
    /// Simulated maps that maps were set against.
    pub populations: Vec<PopulationReport>,
    /// What was assumed and what did not match.
    pub notes: Vec<Note>,
    /// What was made of its files.
    pub understood: UnderstoodReport,
    /// How many maps have a residual variance of at most what.
    pub near_dipolar: NearDipolar,
    /// Number of fitted maps.
    pub fitted: usize,
    /// Median residual variance of the fitted maps.
    pub median_rv: Option<f64>,
    /// Numerical rank of the maps; absent where they are no decomposition, lack values or are more than 1,024.
    pub rank: Option<usize>,
}

/// Near-dipolar shares at thresholds, over the fitted maps.
#[derive(Clone, Debug, PartialEq, Serialize)]
pub struct NearDipolar {
    /// Residual variances.
    pub at: Vec<f64>,
    /// Part of the maps with at most this residual variance.
    pub share: Vec<Option<f64>>,
    /// Their number.
    pub count: Vec<usize>,
    /// Their part of the components' variance.
    pub weighted_share: Option<Vec<Option<f64>>>,
}

/// Components of two decompositions matched one to one.
#[derive(Clone, Debug, PartialEq, Serialize)]
pub struct Pair {
    /// Place among the decompositions.
    pub a: usize,
    /// Place among the decompositions.
    pub b: usize,
    /// Number of common electrodes.
    pub electrodes: usize,
    /// In descending order of |correlation|.
    pub matches: Vec<Match>,
    /// Maps of `a` without a partner.
    pub unmatched_a: Vec<usize>,
    /// Maps of `b` without a partner.
    pub unmatched_b: Vec<usize>,
    /// Why nothing could be matched.
    pub error: Option<ErrorReport>,
}

/// Two maps that belong together.
#[derive(Clone, Debug, PartialEq, Serialize)]
pub struct Match {
    /// Map of the first decomposition.
    pub index_a: usize,
    /// Map of the second one.
    pub index_b: usize,
    /// Correlation of the two maps, as given or turned, over the common electrodes.
    pub correlation: f64,
    /// Distance of their dipoles in canonical axes; absent unless both are fitted.
    pub distance_mm: Option<f64>,
    /// In words: the two names, |correlation|, whether the signs are alike, the distance in mm.
    #[serde(skip_serializing_if = "Vec::is_empty")]
    pub cells: Vec<String>,
}

impl Match {
    /// The same with its words.
    pub fn told(mut self, name_a: &str, name_b: &str) -> Self {
        self.cells = vec![
            name_a.into(),
            name_b.into(),
            hundredths(self.correlation.abs()),
            if self.correlation < 0.0 { "opposite" } else { "same" }.into(),
            self.distance_mm.map_or_else(String::new, millimetres),
        ];
        self
    }
}

/// The numerical rank of the maps with what is to be said of it.
#[derive(Clone, Debug, PartialEq, Serialize)]
pub struct RankReport {
    /// The rank.
    pub rank: Option<usize>,
    /// Where it is less than the number of maps.
    pub note: Option<Note>,
}
