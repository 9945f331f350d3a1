//! Results as they leave the program: plain structures for reports, and the only place where numbers become text.

mod choices;
mod comparison;
mod explanations;
mod figure;
mod groups;
mod landscape;
mod messages;
mod methods;
mod number;
mod record;
mod response;
mod row;
mod settings;
mod sheet;
mod stability;
mod summary;
mod trust;
mod trust_settings;

pub use choices::{ChoiceOffer, ChoiceReport, OptionReport, offered};
pub use comparison::{Comparison, DecompositionReport, Match, NearDipolar, Pair, RankReport};
pub use explanations::{
    AlternativeReport, Alternatives, Decision, Explanation, LEAST_APART_MM, MIRRORED_PART, MOST_OPPOSED,
    PREFERRED_SHARE, Refusal, WORSE_SHARE,
};
pub use figure::{Figure, FigureDipole, FigureShell};
pub use groups::{Criterion, Group, GroupedDipole, GroupedMember, Groups, GroupsRequest};
pub(crate) use landscape::slice_words;
pub use landscape::{Landscape, Level, Probe, Slice};
pub use messages::{hint, is_warning, message, within_decomposition};
pub use methods::{Done, Facts, Methods};
pub use record::{Record, RecordPart};
pub use response::{Fixed, FixedFit, Floor, Instant, Measured, NoiseFound, Response};
pub use row::{Column, MapRow, columns};
pub use settings::{Assessment, HeadSettings, Polarity, Settings};
pub use sheet::{Alternative, HeadSheet, Row, Scale, Sheet, SheetElectrode, Site};
pub use stability::{
    Change, Influence, InfluenceReport, SuspectReport, Suspects, WhatIf, WhatIfReport, WithAndWithout,
};
pub(crate) use summary::full_name;
pub use summary::{Curve, Difference, GroupSummary, Member, MemberSummary, Questions, Summary};
pub use trust::{
    Among, CauseReport, DrawnEllipsoid, NoiseOnly, Percentiles, PopulationReport, ReasonReport, RegionReport, Repeats,
    Structure, Trust, TrustPopulation, TrustRegion, VerdictReport, rule,
};
pub use trust_settings::{ErrorSettings, Limits, NoiseSettings, SourceSettings};

use crate::finding::{Code, Error, Finding, Place, Value};
use crate::fit::Stopped;
use crate::head::Shell;
use crate::math::Vec3;
use crate::understand::{ColumnsAre, FileFacts, Moments};
use serde::Serialize;
use std::collections::BTreeMap;

/// Distance from the centre below which a position has no site above, no region and no place seen from above.
pub const CENTRE_MM: f64 = 5.0;

/// Everything about one table of maps. Every key is always present; what is absent is `null`.
#[derive(Clone, Debug, PartialEq, Serialize)]
pub struct Report {
    /// `inward-report`.
    pub format: &'static str,
    /// Version of this structure.
    pub version: u32,
    /// What made it.
    pub program: Program,
    /// Inputs with the SHA-256 of their bytes.
    pub inputs: Vec<Input>,
    /// Settings, defaults included.
    pub settings: Settings,
    /// The head of all fits.
    pub head: HeadReport,
    /// Electrodes with position and value.
    pub electrodes: Vec<ElectrodeReport>,
    /// One entry for each map, in the order of the table.
    pub maps: Vec<MapReport>,
    /// Simulated maps that maps were set against; empty unless they were asked for.
    pub populations: Vec<PopulationReport>,
    /// Electrodes that hold the largest residual of many maps; empty unless influence was asked for.
    pub suspects: Vec<SuspectReport>,
    /// What was assumed and what did not match.
    pub notes: Vec<Note>,
    /// What was made of the files, with everything that can be changed.
    pub understood: UnderstoodReport,
}

/// What was made of the files.
#[derive(Clone, Debug, PartialEq, Serialize)]
pub struct UnderstoodReport {
    /// One entry for each file, or for each part of it.
    pub files: Vec<FileFacts>,
    /// Inferences that a setting changes.
    pub choices: Vec<ChoiceReport>,
    /// How the maps belong together.
    pub columns_are: ColumnsAre,
    /// When the maps were, where that is known.
    pub times: Option<Moments>,
    /// What became of the labels.
    pub labels: LabelsReport,
}

/// What became of the labels.
#[derive(Clone, Debug, Default, PartialEq, Serialize)]
pub struct LabelsReport {
    /// How many have a position and a value.
    pub matched: usize,
    /// Labels that were read as other names.
    pub renamed: Vec<Renamed>,
    /// With a position, without a value.
    pub without_value: Vec<String>,
    /// With a value, without a position.
    pub without_position: Vec<String>,
    /// Of channels that do not measure the scalp.
    pub not_scalp: Vec<String>,
    /// Of channels that were interpolated.
    pub interpolated: Vec<String>,
    /// The common reference that the labels name.
    pub reference: Option<String>,
}

/// A label that was read as another name.
#[derive(Clone, Debug, PartialEq, Eq, Serialize)]
pub struct Renamed {
    /// As it is written.
    pub from: String,
    /// As it was read.
    pub to: String,
}

/// Name and version of the program.
#[derive(Clone, Debug, PartialEq, Eq, Serialize)]
pub struct Program {
    /// Its name.
    pub name: &'static str,
    /// Its version.
    pub version: &'static str,
    /// Short hash of the engine's sources, where the build tool has given it.
    pub build: Option<&'static str>,
}

/// An input.
#[derive(Clone, Debug, PartialEq, Eq, Serialize)]
pub struct Input {
    /// `electrodes`, `maps`, or the name of the file.
    pub name: String,
    /// SHA-256 of its bytes, hexadecimal.
    pub sha256: String,
}

/// The head model.
#[derive(Clone, Debug, PartialEq, Serialize)]
pub struct HeadReport {
    /// Name in the catalogue of heads, where the shells are exactly one of its.
    pub name: Option<&'static str>,
    /// Centre in the frame of the electrode table.
    pub centre_mm: Vec3,
    /// Whether the centre was fitted to the electrodes; otherwise it was set or is the standard one.
    pub centre_is_fitted: bool,
    /// Scalp radius.
    pub radius_mm: f64,
    /// Whether the radius was fitted to the electrodes.
    pub radius_is_fitted: bool,
    /// Root mean square of the electrodes' radial deviations from the sphere.
    pub fit_rms_mm: f64,
    /// Largest absolute deviation.
    pub fit_max_mm: f64,
    /// Shells, innermost first.
    pub shells: Vec<Shell>,
    /// Whether it is said to be a head for which the standard shells do not hold.
    pub unusual: bool,
    /// The canonical x, y and z as unit vectors in the frame of the electrode table.
    pub axes: [Vec3; 3],
}

/// An electrode.
#[derive(Clone, Debug, PartialEq, Serialize)]
pub struct ElectrodeReport {
    /// Its label.
    pub label: String,
    /// Position in the frame of the electrode table.
    pub position_mm: Vec3,
    /// Whether the fits use it.
    pub used: bool,
}

/// The outcome for one map.
#[derive(Clone, Debug, PartialEq, Serialize)]
#[serde(untagged)]
pub enum MapReport {
    /// A fitted map.
    Fitted(Box<FittedMap>),
    /// A map that cannot be fitted.
    Failed {
        /// Its name.
        name: String,
        /// Why not.
        error: Box<ErrorReport>,
    },
}

/// A fitted map. Shares are fractions, lengths millimetres.
#[derive(Clone, Debug, PartialEq, Serialize)]
pub struct FittedMap {
    /// Its name.
    pub name: String,
    /// Whether its sign was turned; all that follows is of the turned map.
    pub flipped: bool,
    /// Standard deviation of its activation, where it is given.
    pub activation_sd: Option<f64>,
    /// |d − L m|² / |d|², both average-referenced.
    pub residual_variance: f64,
    /// 1 − residual variance.
    pub variance_explained: f64,
    /// See [`crate::assess::adjusted_residual_variance`].
    pub adjusted_rv: f64,
    /// Electrodes used less 7.
    pub degrees_of_freedom: usize,
    /// The dipole.
    pub dipole: EquivalentDipole,
    /// How the search went.
    pub fit: SearchReport,
    /// The map, average-referenced, in its own unit and the order of the used electrodes.
    pub measured: Vec<f64>,
    /// The dipole's map.
    pub projected: Vec<f64>,
    /// The difference.
    pub residual: Vec<f64>,
    /// Where the dipole may be; absent unless asked for, as what follows.
    pub region: Option<RegionReport>,
    /// The map among simulated ones.
    pub populations: Option<Vec<Among>>,
    /// What it may count as.
    pub verdict: Option<VerdictReport>,
    /// What else may explain it.
    pub alternatives: Option<Vec<AlternativeReport>>,
    /// The fit without each electrode.
    pub influence: Option<Vec<InfluenceReport>>,
    /// The fit when something is otherwise.
    pub what_if: Option<Vec<WhatIfReport>>,
}

impl FittedMap {
    /// Largest absolute value of the map and of the dipole's map: the end of the scale that all three share.
    pub fn scale_limit(&self) -> f64 {
        self.measured.iter().chain(&self.projected).fold(0.0, |most, v| most.max(v.abs()))
    }
}

/// An equivalent dipole.
#[derive(Clone, Debug, PartialEq, Serialize)]
pub struct EquivalentDipole {
    /// Position in the frame of the electrode table.
    pub position_mm: Vec3,
    /// Position with x right, y front, z up and the origin at the sphere's centre; turned from the table's axes.
    pub canonical_mm: Vec3,
    /// Standard site radially above, where one is within 20°; absent within 5 mm of the centre.
    pub nearest_site: Option<&'static str>,
    /// Which half of the head, `midline` within 5 mm of its mid-plane.
    pub side: &'static str,
    /// Unit moment in the frame of the electrode table, for the sign of the map as given or turned.
    pub direction: Vec3,
    /// The same with x right, y front, z up.
    pub canonical_direction: Vec3,
    /// Whether the map's sign means something, and with it the sense of the direction.
    pub polarity: Polarity,
    /// Moment in nAm, times the standard deviation of the activation where it is given; relative maps count as µV.
    pub strength: f64,
    /// `nAm` or `relative`.
    pub strength_unit: &'static str,
    /// Whether strengths may be compared between maps of the table: their unit or their activation is known.
    pub strength_comparable: bool,
    /// Distance from the centre over the radius of the innermost shell.
    pub eccentricity: f64,
    /// Inner-skull radius less the distance from the centre.
    pub depth_mm: f64,
    /// (m·r̂)² / |m|²; absent within 1 mm of the centre.
    pub radial_share: Option<f64>,
    /// Whether the position lies on the boundary of the region of sources.
    pub at_boundary: bool,
}

/// How a search went.
#[derive(Clone, Debug, PartialEq, Serialize)]
pub struct SearchReport {
    /// Why it ended.
    pub stopped_because: Stopped,
    /// Evaluations of the residual.
    pub evaluations: usize,
}

/// A note in words.
#[derive(Clone, Debug, PartialEq, Serialize)]
pub struct Note {
    /// What it is.
    pub code: Code,
    /// `info` or `warning`.
    pub severity: &'static str,
    /// In words.
    pub message: String,
    /// Where in the input.
    #[serde(rename = "where")]
    pub place: Option<Place>,
    /// The values of the message.
    pub values: BTreeMap<&'static str, Value>,
}

/// An error in words.
#[derive(Clone, Debug, PartialEq, Serialize)]
pub struct ErrorReport {
    /// What it is.
    pub code: Code,
    /// In words.
    pub message: String,
    /// Where in the input.
    #[serde(rename = "where")]
    pub place: Option<Place>,
    /// What to do.
    pub hint: String,
}

impl From<&Finding> for Note {
    fn from(finding: &Finding) -> Self {
        Self {
            code: finding.code,
            severity: if is_warning(finding.code) { "warning" } else { "info" },
            message: message(finding),
            place: finding.place.clone(),
            // Collected, they would bring another copy of the library's sort.
            values: finding.values.iter().cloned().fold(BTreeMap::new(), |mut values, (name, value)| {
                values.insert(name, value);
                values
            }),
        }
    }
}

impl From<&Error> for ErrorReport {
    fn from(error: &Error) -> Self {
        let finding = error.finding();
        Self {
            code: finding.code,
            message: message(finding),
            place: finding.place.clone(),
            hint: hint(finding.code).to_owned(),
        }
    }
}
