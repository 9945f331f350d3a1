//! What the program has to say about its input: notes about what it assumed, and errors.
//!
//! A [`Finding`] holds a code, a place and values; its words are made in [`crate::report`], the only place where
//! numbers become text.

/// Where in the input a finding points to; lines, columns and bytes count from 1.
#[derive(Clone, Debug, Default, PartialEq, serde::Serialize)]
pub struct Place {
    /// Which input: `electrodes`, `maps` or `settings`.
    pub input: Option<&'static str>,
    /// Name of the file, where one is known.
    pub file: Option<String>,
    /// Line in the text.
    pub line: Option<usize>,
    /// Column of the table (a field, not a character).
    pub column: Option<usize>,
    /// Byte in the file.
    pub byte: Option<usize>,
    /// Label of an electrode.
    pub label: Option<String>,
    /// Name of a map.
    pub map: Option<String>,
}

impl Place {
    /// A whole input.
    pub fn input(input: &'static str) -> Self {
        Self { input: Some(input), ..Self::default() }
    }

    /// A line of an input.
    pub fn line(input: &'static str, line: usize) -> Self {
        Self { line: Some(line), ..Self::input(input) }
    }

    /// A field of a line of an input.
    pub fn field(input: &'static str, line: usize, column: usize) -> Self {
        Self { column: Some(column), ..Self::line(input, line) }
    }
}

/// A value that a message mentions.
#[derive(Clone, Debug, PartialEq, serde::Serialize)]
#[serde(untagged)]
pub enum Value {
    /// A word, a label, a piece of the input.
    Text(String),
    /// A measured number; its unit is told by its name.
    Number(f64),
    /// A count.
    Count(usize),
    /// Several words.
    List(Vec<String>),
    /// Yes or no.
    Flag(bool),
}

impl From<&str> for Value {
    fn from(text: &str) -> Self {
        Self::Text(text.into())
    }
}
impl From<String> for Value {
    fn from(text: String) -> Self {
        Self::Text(text)
    }
}
impl From<f64> for Value {
    fn from(number: f64) -> Self {
        Self::Number(number)
    }
}
impl From<usize> for Value {
    fn from(count: usize) -> Self {
        Self::Count(count)
    }
}
impl From<Vec<String>> for Value {
    fn from(list: Vec<String>) -> Self {
        Self::List(list)
    }
}

impl From<bool> for Value {
    fn from(flag: bool) -> Self {
        Self::Flag(flag)
    }
}

/// How something came to be taken as it was.
#[derive(Clone, Copy, Debug, PartialEq, Eq, serde::Serialize)]
#[serde(rename_all = "lowercase")]
pub enum Origin {
    /// The user said so.
    Setting,
    /// The content shows it.
    Found,
    /// A file says so.
    Declared,
    /// Nothing tells it; the usual was taken.
    Assumed,
}

/// One inference that the user can change by a setting. Its sentence and the words for its options are made in
/// [`crate::report`].
#[derive(Clone, Debug, PartialEq)]
pub struct Choice {
    /// Name of the choice: the setting with dots between its keys, those of a file without `files` and its name.
    pub setting: &'static str,
    /// Where in the settings it is changed: keys from the outside in.
    pub path: Vec<String>,
    /// The file it is about.
    pub file: Option<String>,
    /// What is in force.
    pub value: Value,
    /// What can be chosen, with words of their own for options that are pieces of the input.
    pub options: Vec<(Value, Option<String>)>,
    /// How it came about.
    pub from: Origin,
    /// Further values for its sentence, by name.
    pub values: Vec<(&'static str, Value)>,
}

impl Choice {
    /// A choice of a setting.
    pub fn new(setting: &'static str, from: Origin, value: impl Into<Value>) -> Self {
        Self {
            setting,
            path: setting.split('.').map(String::from).collect(),
            file: None,
            value: value.into(),
            options: Vec::new(),
            from,
            values: Vec::new(),
        }
    }

    /// The same, about a file.
    pub fn about(mut self, file: &str) -> Self {
        self.file = Some(file.into());
        self
    }

    /// The same, about a file and changed among the settings of that file.
    pub fn of_file(mut self, file: &str) -> Self {
        self.path = ["files", file].into_iter().chain(self.setting.split('.')).map(String::from).collect();
        self.about(file)
    }

    /// The same, with options that have words for them.
    pub fn options<T: Into<Value>>(mut self, options: impl IntoIterator<Item = T>) -> Self {
        self.options.extend(options.into_iter().map(|option| (option.into(), None)));
        self
    }

    /// The same, with one more value for its sentence.
    pub fn with(mut self, name: &'static str, value: impl Into<Value>) -> Self {
        self.values.push((name, value.into()));
        self
    }

    /// The further value of this name.
    pub fn value(&self, name: &str) -> Option<&Value> {
        self.values.iter().find(|(n, _)| *n == name).map(|(_, value)| value)
    }
}

macro_rules! codes {
    ($($(#[doc = $doc:literal])* $name:ident = $text:literal,)*) => {
        /// Every error and note that the program knows.
        #[derive(Clone, Copy, Debug, PartialEq, Eq, Hash)]
        pub enum Code { $($(#[doc = $doc])* $name,)* }

        impl Code {
            /// All codes.
            pub const ALL: &[Self] = &[$(Self::$name,)*];

            /// The code as it stands in reports.
            pub fn as_str(self) -> &'static str {
                match self { $(Self::$name => $text,)* }
            }
        }
    };
}

codes! {
    /// Error: a setting that does not exist, or a value it cannot take.
    SettingsUnknown = "settings-unknown",
    /// Error: the head asked for cannot be.
    HeadInvalid = "head-invalid",
    /// Error: an input without any content.
    InputEmpty = "input-empty",
    /// Error: an input over the size limit.
    InputTooLarge = "input-too-large",
    /// Error: bytes that do not belong into the encoding of a text.
    InputEncoding = "input-encoding",
    /// Error: a binary file that ends too early.
    InputTruncated = "input-truncated",
    /// Error: a binary file with something that does not belong there.
    InputDamaged = "input-damaged",
    /// Error: an HDF5 file, also MATLAB 7.3.
    InputHdf5 = "input-hdf5",
    /// Error: a MATLAB file of level 4.
    InputMatlab4 = "input-matlab-4",
    /// Error: an archive that cannot be unpacked.
    InputZip = "input-zip",
    /// Error: a picture, a document or another file without a table.
    InputNoTable = "input-no-table",
    /// Error: an array of what is neither real numbers nor words.
    ArrayType = "array-type",
    /// Error: an array beyond the limits.
    ArraySize = "array-size",
    /// Error: the table lacks the columns it needs.
    TableColumns = "table-columns",
    /// Error: a line has more or fewer fields than the others.
    TableRagged = "table-ragged",
    /// Error: a table with more rows or columns than any that is read.
    TableLarge = "table-large",
    /// Error: a text that begins like JSON and is none.
    JsonSyntax = "json-syntax",
    /// Error: JSON that holds no table.
    JsonContent = "json-content",
    /// Error: no file holds maps.
    MapsMissing = "maps-missing",
    /// Error: several files for one purpose.
    FilesSeveral = "files-several",
    /// Error: numbers without labels of which neither side is as long as the labels known.
    ShapeUnmatched = "shape-unmatched",
    /// Error: a setting names a column that is not there.
    ColumnUnknown = "column-unknown",
    /// Error: an unmixing matrix that has no maps.
    UnmixingSingular = "unmixing-singular",
    /// Error: a baseline in which no map lies.
    BaselineEmpty = "baseline-empty",
    /// Error: a field that should hold a number.
    NumberExpected = "number-expected",
    /// Error: a number too large or too small to be computed with.
    NumberRange = "number-range",
    /// Error: a label that stands twice.
    LabelDuplicate = "label-duplicate",
    /// Error: a label that stands for several electrodes.
    LabelAmbiguous = "label-ambiguous",
    /// Error: labels that name two sites.
    LabelBipolar = "label-bipolar",
    /// Error: labels that name different references.
    ReferenceMixed = "reference-mixed",
    /// Error: no label of the maps is among the electrodes.
    LabelsUnmatched = "labels-unmatched",
    /// Error: fewer than ten electrodes with position and value.
    ElectrodesTooFew = "electrodes-too-few",
    /// Error: more electrodes than the limit.
    ElectrodesTooMany = "electrodes-too-many",
    /// Error: two electrodes at one place.
    ElectrodesCoincident = "electrodes-coincident",
    /// Error: all electrodes on one line.
    ElectrodesCollinear = "electrodes-collinear",
    /// Error: all electrodes in one plane.
    ElectrodesCoplanar = "electrodes-coplanar",
    /// Error: an electrode so far off the sphere that its direction means nothing.
    ElectrodeOff = "electrode-off",
    /// Error: the positions are of no head's size in m, cm or mm.
    UnitsUnrecognised = "units-unrecognised",
    /// Error: a table of maps without a map.
    MapsNone = "maps-none",
    /// Error: more maps than the limit.
    MapsTooMany = "maps-too-many",
    /// Error: a map with the same value at every electrode.
    MapConstant = "map-constant",
    /// Error: maps that are surface Laplacians.
    MapLaplacian = "map-laplacian",
    /// Error: a map that lacks a value which other maps have.
    MapIncomplete = "map-incomplete",
    /// Error: there is no map of this number.
    MapIndex = "map-index",
    /// Error: a standard deviation of an activation that is no positive number.
    ActivationSdInvalid = "activation-sd-invalid",
    /// Error: a setting outside its range.
    SettingRange = "setting-range",
    /// Error: verdicts are asked for before the reference populations are drawn.
    PopulationsLacking = "populations-lacking",
    /// Error: two decompositions have too few electrodes in common to compare their maps.
    ElectrodesUncommon = "electrodes-uncommon",
    /// Error: more dipoles than are grouped.
    DipolesTooMany = "dipoles-too-many",
    /// Note: x right, y front, z up was assumed.
    AxesAssumed = "axes-assumed",
    /// Note: parts of a file that are no tables.
    PartPassedOver = "part-passed-over",
    /// Note: what told the axes of the table.
    AxesFound = "axes-found",
    /// Note: the named electrodes contradict the axes.
    AxesContradicted = "axes-contradicted",
    /// Note: left and right of the positions contradict the labels.
    Mirrored = "mirrored",
    /// Note: labels that stand for electrodes written in another way.
    LabelsRenamed = "labels-renamed",
    /// Note: channels and points that are not on the scalp.
    NotScalp = "not-scalp",
    /// Note: the reference that the labels name.
    ReferenceNamed = "reference-named",
    /// Note: a channel that is exactly zero in every map, the recording reference.
    ReferenceChannel = "reference-channel",
    /// Note: several channels that are exactly zero in every map.
    ChannelsZero = "channels-zero",
    /// Note: standard places that are approximate.
    PositionsApproximate = "positions-approximate",
    /// Note: channels whose values were interpolated.
    Interpolated = "interpolated",
    /// Note: channels that a file declares bad.
    ChannelsBad = "channels-bad",
    /// Note: electrodes were left out after an unmixing, which was not redone.
    UnmixingNotRedone = "unmixing-not-redone",
    /// Note: a declared unit of length that the size of the head contradicts.
    UnitOverruled = "unit-overruled",
    /// Note: how far the electrodes lie off the sphere that they are projected on.
    ElectrodesProjected = "electrodes-projected",
    /// Note: the standard shells do not hold for this head.
    UnusualHead = "unusual-head",
    /// Note: the maps may be surface Laplacians.
    LaplacianSuspected = "laplacian-suspected",
    /// Note: by their labels, electrodes lie far from where they should.
    LabelsMisplaced = "labels-misplaced",
    /// Note: by its name, what was read as maps may be an unmixing matrix.
    UnmixingSuspected = "unmixing-suspected",
    /// Note: commas that divide fields may have been decimal marks.
    DecimalsSuspected = "decimals-suspected",
    /// Note: a first line without a usual name was taken as names of the columns.
    HeaderAssumed = "header-assumed",
    /// Note: lines above the table were passed over.
    TitlePassedOver = "title-passed-over",
    /// Note: text was taken as Latin-1.
    EncodingAssumed = "encoding-assumed",
    /// Note: decimals are written with a comma.
    DecimalComma = "decimal-comma",
    /// Note: columns that hold neither labels nor values.
    ColumnsPassedOver = "columns-passed-over",
    /// Note: a part of a file that is not needed.
    PartUnused = "part-unused",
    /// Note: a file that is not needed.
    FileUnused = "file-unused",
    /// Note: positions were computed from angles.
    AnglesRead = "angles-read",
    /// Note: numbers without labels took them from another table, in its order.
    LabelsByOrder = "labels-by-order",
    /// Note: nothing tells which way a square matrix lies.
    OrientationAssumed = "orientation-assumed",
    /// Note: maps are the pseudo-inverse of an unmixing matrix.
    UnmixingInverted = "unmixing-inverted",
    /// Note: no sphering matrix stands beside an unmixing matrix.
    SpheringAbsent = "sphering-absent",
    /// Note: the mean of a window of time was subtracted.
    BaselineSubtracted = "baseline-subtracted",
    /// Note: the length unit was recognised by the size of the head.
    UnitRecognised = "unit-recognised",
    /// Note: positions on a unit sphere were scaled to the standard head.
    UnitSphereScaled = "unit-sphere-scaled",
    /// Note: positions come from the labels alone.
    StandardPositions = "standard-positions",
    /// Note: few electrodes, few degrees of freedom.
    FewElectrodes = "few-electrodes",
    /// Note: the maps were referred to the average of the electrodes used.
    AverageReferenced = "average-referenced",
    /// Note: the unit of the map is not known.
    UnitRelative = "unit-relative",
    /// Note: positions for which the maps have no value.
    PositionsWithoutValue = "positions-without-value",
    /// Note: values for which no position is known.
    ValuesWithoutPosition = "values-without-position",
    /// Note: electrodes left out by hand.
    Excluded = "excluded",
    /// Note: electrodes to leave out that are not in the table.
    ExcludeUnmatched = "exclude-unmatched",
    /// Note: the electrodes lie far from the fitted sphere.
    SphereDeviation = "sphere-deviation",
    /// Note: the quick lead field was not accurate enough for this head; the series serves throughout.
    SeriesOnly = "series-only",
    /// Note: a decomposition has fewer independent maps than maps.
    RankDeficient = "rank-deficient",
    /// Note: decompositions were fitted at other electrodes.
    ElectrodeSetsDiffer = "electrode-sets-differ",
    /// Note: no interval comes from the components of one recording.
    ComponentsNoSample = "components-no-sample",
    /// Note: too few subjects for an interval.
    SubjectsFew = "subjects-few",
    /// Note: how intervals were computed.
    SubjectsResampled = "subjects-resampled",
    /// Note: some components' variances are not known, so that no share is weighted by them.
    VarianceIncomplete = "variance-incomplete",
    /// Note: more pairs of decompositions than are matched unasked.
    PairsMany = "pairs-many",
}

impl serde::Serialize for Code {
    fn serialize<S: serde::Serializer>(&self, serializer: S) -> Result<S::Ok, S::Error> {
        serializer.serialize_str(self.as_str())
    }
}

/// One thing to say: a note, or the content of an [`Error`].
#[derive(Clone, Debug, PartialEq)]
pub struct Finding {
    /// What it is.
    pub code: Code,
    /// Where it is.
    pub place: Option<Place>,
    /// The values its message needs, by name.
    pub values: Vec<(&'static str, Value)>,
}

impl Finding {
    /// A finding without place and values.
    pub fn new(code: Code) -> Self {
        Self { code, place: None, values: Vec::new() }
    }

    /// The same, at a place.
    pub fn at(mut self, place: Place) -> Self {
        self.place = Some(place);
        self
    }

    /// The same, with one more value.
    pub fn with(mut self, name: &'static str, value: impl Into<Value>) -> Self {
        self.values.push((name, value.into()));
        self
    }

    /// The value of this name.
    pub fn value(&self, name: &str) -> Option<&Value> {
        self.values.iter().find(|(n, _)| *n == name).map(|(_, value)| value)
    }
}

/// A finding that ends the work.
#[derive(Clone, Debug, PartialEq)]
pub struct Error(Box<Finding>);

impl Error {
    /// What is wrong, where, and with which values.
    pub fn finding(&self) -> &Finding {
        &self.0
    }
}

impl Error {
    /// The same, in a file that stands inside another.
    pub fn inside(mut self, file: &str) -> Self {
        self.0.place.get_or_insert_default().file.get_or_insert_with(|| file.to_owned());
        self
    }

    /// The same, where it names a file that stands inside another.
    pub fn beneath(mut self, archive: &str) -> Self {
        if let Some(file) = self.0.place.as_mut().and_then(|place| place.file.as_mut()) {
            *file = format!("{archive}/{file}");
        }
        self
    }

    /// The same, in an input and, where one is known, a file; a file inside is kept.
    pub fn within(mut self, input: &'static str, file: Option<&str>) -> Self {
        let place = self.0.place.get_or_insert_default();
        place.input = Some(input);
        if place.file.is_none() {
            place.file = file.map(String::from);
        }
        self
    }
}

impl From<inward_numerics::shells::ShellFault> for Error {
    fn from(fault: inward_numerics::shells::ShellFault) -> Self {
        let mut finding = Finding::new(Code::HeadInvalid).at(Place::input("settings"));
        if let Some(shell) = fault.shell {
            finding = finding.with("shell", shell);
        }
        finding.with("why", fault.why).into()
    }
}

impl From<Finding> for Error {
    fn from(finding: Finding) -> Self {
        Self(Box::new(finding))
    }
}
