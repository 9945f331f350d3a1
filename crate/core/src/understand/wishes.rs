use crate::read::{Delimiter, Encoding};
use serde::{Deserialize, Serialize};
use std::collections::BTreeMap;

/// What the user says about the files, where their content does not tell or tells otherwise; all optional.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct Wishes {
    /// By the name of the file.
    pub files: BTreeMap<String, FileWishes>,
    /// Which way the table of maps lies.
    pub orientation: Option<Orientation>,
    /// What the table of maps holds.
    pub maps_are: Option<MapsAre>,
    /// Columns of the table of electrodes.
    pub columns: ColumnWishes,
    /// What angles in the table of electrodes mean.
    pub angles: AngleWishes,
    /// How the maps of the table belong together.
    pub columns_are: Option<ColumnsAre>,
    /// When the maps were, if they are points of time.
    pub times: Option<Times>,
    /// The window of time whose mean is zero.
    pub baseline: Option<Baseline>,
}

/// What the user says about one file.
#[derive(Clone, Debug, Default, PartialEq, Serialize, Deserialize)]
#[serde(deny_unknown_fields, default)]
pub struct FileWishes {
    /// What it is.
    pub role: Option<Role>,
    /// Which of its parts is meant, by name.
    pub part: Option<String>,
    /// How its characters are written.
    pub encoding: Option<Encoding>,
    /// What divides its fields.
    pub delimiter: Option<Delimiter>,
    /// What stands before its decimals.
    pub decimal: Option<Decimal>,
    /// Which column holds the labels.
    pub label: Option<ColumnName>,
}

/// What a file, or a part of one, is.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Serialize, Deserialize)]
#[serde(rename_all = "kebab-case")]
pub enum Role {
    /// Positions, with or without labels.
    Electrodes,
    /// Values.
    Maps,
    /// Positions and values side by side.
    ElectrodesAndMaps,
    /// Labels alone: of the rows of another part, or of standard positions.
    Labels,
    /// What kind of channel each one is, and whether it is bad.
    Channels,
    /// Unit and landmarks of the positions.
    Coordinates,
    /// The sphering matrix that belongs to an unmixing matrix.
    Sphering,
    /// When the maps were.
    Times,
    /// Nothing that is needed.
    Unused,
}

impl Role {
    /// All that a user may choose.
    pub const ALL: [Self; 9] = [
        Self::Electrodes,
        Self::Maps,
        Self::ElectrodesAndMaps,
        Self::Labels,
        Self::Channels,
        Self::Coordinates,
        Self::Sphering,
        Self::Times,
        Self::Unused,
    ];

    /// As settings write it.
    pub fn name(self) -> &'static str {
        match self {
            Self::Electrodes => "electrodes",
            Self::Maps => "maps",
            Self::ElectrodesAndMaps => "electrodes-and-maps",
            Self::Labels => "labels",
            Self::Channels => "channels",
            Self::Coordinates => "coordinates",
            Self::Sphering => "sphering",
            Self::Times => "times",
            Self::Unused => "unused",
        }
    }
}

/// What stands before decimals.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Serialize, Deserialize)]
#[serde(rename_all = "kebab-case")]
pub enum Decimal {
    /// A point.
    Point,
    /// A comma.
    Comma,
}

impl Decimal {
    /// As settings write it.
    pub fn name(self) -> &'static str {
        match self {
            Self::Point => "point",
            Self::Comma => "comma",
        }
    }
}

/// Which way a table of maps lies.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Serialize, Deserialize)]
#[serde(rename_all = "kebab-case")]
pub enum Orientation {
    /// A row for each electrode.
    ChannelsInRows,
    /// A column for each electrode.
    ChannelsInColumns,
}

impl Orientation {
    /// Both.
    pub const ALL: [Self; 2] = [Self::ChannelsInRows, Self::ChannelsInColumns];

    /// As settings write it.
    pub fn name(self) -> &'static str {
        match self {
            Self::ChannelsInRows => "channels-in-rows",
            Self::ChannelsInColumns => "channels-in-columns",
        }
    }
}

/// What a table of maps holds.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Serialize, Deserialize)]
#[serde(rename_all = "kebab-case")]
pub enum MapsAre {
    /// Maps: what each component or moment adds at each electrode.
    Maps,
    /// Weights that make components of channels; their pseudo-inverse holds the maps.
    Unmixing,
}

impl MapsAre {
    /// Both.
    pub const ALL: [Self; 2] = [Self::Maps, Self::Unmixing];

    /// As settings write it.
    pub fn name(self) -> &'static str {
        match self {
            Self::Maps => "maps",
            Self::Unmixing => "unmixing",
        }
    }
}

/// How the maps of a table belong together.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Serialize, Deserialize)]
#[serde(rename_all = "kebab-case")]
pub enum ColumnsAre {
    /// Components of one decomposition.
    Components,
    /// Moments of one response.
    TimePoints,
    /// One map, measured or computed several times.
    Repeats,
    /// Maps that have nothing to do with each other.
    Unrelated,
}

impl ColumnsAre {
    /// All of them.
    pub const ALL: [Self; 4] = [Self::Components, Self::TimePoints, Self::Repeats, Self::Unrelated];

    /// As settings write it.
    pub fn name(self) -> &'static str {
        match self {
            Self::Components => "components",
            Self::TimePoints => "time-points",
            Self::Repeats => "repeats",
            Self::Unrelated => "unrelated",
        }
    }
}

/// A column, by its number from 1 or by its name.
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize)]
#[serde(untagged)]
pub enum ColumnName {
    /// Counted from 1.
    Number(usize),
    /// As the header has it, upper and lower case alike.
    Name(String),
}

/// Columns of a table of electrodes.
#[derive(Clone, Debug, Default, PartialEq, Serialize, Deserialize)]
#[serde(deny_unknown_fields, default)]
pub struct ColumnWishes {
    /// Labels.
    pub label: Option<ColumnName>,
    /// First coordinate.
    pub x: Option<ColumnName>,
    /// Second coordinate.
    pub y: Option<ColumnName>,
    /// Third coordinate.
    pub z: Option<ColumnName>,
    /// Angle from the vertical or above the horizontal.
    pub polar: Option<ColumnName>,
    /// Angle about the vertical.
    pub azimuth: Option<ColumnName>,
    /// Distance from the centre.
    pub radius: Option<ColumnName>,
}

/// What the angles of a table of electrodes mean.
#[derive(Clone, Debug, Default, PartialEq, Serialize, Deserialize)]
#[serde(deny_unknown_fields, default)]
pub struct AngleWishes {
    /// What the polar angle is measured from.
    pub polar: Option<Polar>,
    /// Their unit.
    pub unit: Option<AngleUnit>,
}

/// What a polar angle is measured from.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Serialize, Deserialize)]
#[serde(rename_all = "kebab-case")]
pub enum Polar {
    /// From the vertical: 0 at the vertex, negative on one side where a table likes that.
    Inclination,
    /// From the horizontal: 90° at the vertex.
    Elevation,
}

impl Polar {
    /// As settings write it.
    pub fn name(self) -> &'static str {
        match self {
            Self::Inclination => "inclination",
            Self::Elevation => "elevation",
        }
    }
}

/// Unit of angles.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Serialize, Deserialize)]
#[serde(rename_all = "kebab-case")]
pub enum AngleUnit {
    /// Degrees.
    Degrees,
    /// Radians.
    Radians,
}

impl AngleUnit {
    /// As settings write it.
    pub fn name(self) -> &'static str {
        match self {
            Self::Degrees => "degrees",
            Self::Radians => "radians",
        }
    }
}

/// Equally spaced moments.
#[derive(Clone, Copy, Debug, PartialEq, Serialize, Deserialize)]
#[serde(deny_unknown_fields)]
pub struct Times {
    /// The first moment.
    pub start: f64,
    /// From one to the next.
    pub step: f64,
    /// Of both, and of the baseline.
    #[serde(default)]
    pub unit: TimeUnit,
}

/// Unit of time.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq, Serialize, Deserialize)]
pub enum TimeUnit {
    /// Milliseconds.
    #[default]
    #[serde(rename = "ms")]
    Milliseconds,
    /// Seconds.
    #[serde(rename = "s")]
    Seconds,
}

impl TimeUnit {
    /// Its symbol.
    pub fn symbol(self) -> &'static str {
        match self {
            Self::Milliseconds => "ms",
            Self::Seconds => "s",
        }
    }
}

/// A window of time, in the unit of the times, both ends included.
#[derive(Clone, Copy, Debug, PartialEq, Serialize, Deserialize)]
#[serde(deny_unknown_fields)]
pub struct Baseline {
    /// Begin.
    pub from: f64,
    /// End.
    pub to: f64,
}
