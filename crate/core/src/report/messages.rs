//! Every sentence that belongs to a code.

use super::number::{significant, tenths};
use crate::finding::{Code, Finding, Place, Value};

/// What happened, with the values of the finding.
pub fn message(finding: &Finding) -> String {
    let value = |name: &str| match finding.value(name) {
        None => String::new(),
        Some(Value::Text(text)) if ["why", "lacks", "what"].contains(&name) => reason(text).to_owned(),
        Some(Value::Text(text)) if name == "problem" => shortened(text, 300),
        Some(Value::Text(text)) => clipped(text),
        Some(Value::Number(number)) => significant(*number, 3),
        Some(Value::Count(count)) => count.to_string(),
        Some(Value::List(list)) => listed(list),
        Some(Value::Flag(flag)) => if *flag { "yes" } else { "no" }.into(),
    };
    let counted = |name: &str, noun: &str| match value(name).as_str() {
        "1" => format!("1 {noun}"),
        count => format!("{count} {noun}s"),
    };
    let place = finding.place.as_ref();
    let line = place.and_then(|p| p.line).unwrap_or(1);
    let byte = place.and_then(|p| p.byte).unwrap_or(1);
    let input = input_name(place);
    match finding.code {
        Code::SettingsUnknown => format!("A setting was not understood: {}.", value("problem")),
        Code::HeadInvalid => match finding.value("shell") {
            Some(Value::Count(shell)) => format!("The head cannot be computed: shell {shell}: {}.", value("why")),
            _ => format!("The head cannot be computed: {}{}.", value("why"), value("label")),
        },
        Code::InputEmpty if place.is_some_and(|p| p.byte.is_some()) => {
            format!("The {input} holds nothing (byte {byte}).")
        }
        Code::InputEmpty => format!("The {input} holds nothing."),
        Code::InputTooLarge if finding.value("what").is_some() => {
            format!(
                "The {input} {} more than {} MiB, the most that is read (byte {byte}).",
                value("what"),
                value("most_mib")
            )
        }
        Code::InputTooLarge => {
            format!("The {input} is larger than {} MiB, the most that is read.", value("most_mib"))
        }
        Code::InputEncoding => {
            format!("The {input} is not text in {}: byte {byte} does not belong there.", value("encoding"))
        }
        Code::InputTruncated => format!(
            "The {input} ends at byte {byte}, in {}: at least {} more bytes belong there.",
            value("what"),
            value("missing")
        ),
        Code::InputDamaged => {
            format!("Byte {byte} of the {input}: found “{}”, expected {}.", value("found"), value("lacks"))
        }
        Code::InputHdf5 => {
            format!("The {input} is an HDF5 file, as MATLAB writes them with -v7.3; these are not read.")
        }
        Code::InputMatlab4 => format!("The {input} is a MATLAB file of level 4; these are not read."),
        Code::InputZip if finding.value("label").is_some() => {
            format!("“{}” in the {input} (byte {byte}) cannot be unpacked: {}.", value("label"), value("why"))
        }
        Code::InputZip => format!("The {input} cannot be unpacked (byte {byte}): {}.", value("why")),
        Code::InputNoTable => format!("The {input} is {}, not a table.", value("what")),
        Code::ArrayType if finding.value("labels").is_some() => {
            format!(
                "Nothing in the {input} is a table of real numbers or a list of words: {} ({}).",
                value("labels"),
                value("why")
            )
        }
        Code::ArrayType => format!("The array in the {input} holds “{}” (byte {byte}): {}.", value("found"), value("why")),
        Code::ArraySize if finding.value("dimensions").is_some() => {
            format!("The array in the {input} has {} dimensions (byte {byte}); one or two are read.", value("dimensions"))
        }
        Code::ArraySize => format!(
            "The array in the {input} is said to hold {} × {} entries (byte {byte}); at most {} × {} are read, either way round.",
            value("rows"),
            value("columns"),
            value("most_electrodes"),
            value("most_maps")
        ),
        Code::TableColumns => format!("The {input} lacks {} (line {line}).", value("lacks")),
        Code::TableRagged => {
            format!("Line {line} of the {input} has {}, most lines have {}.", counted("found", "field"), value("expected"))
        }
        Code::TableLarge => format!(
            "Line {line} of the {input}: at least {} rows or columns; tables of up to {} maps are read.",
            value("found"),
            value("most")
        ),
        Code::JsonSyntax => match finding.value("cut_short") {
            Some(Value::Flag(true)) => {
                format!("The {input} ends in line {line} (byte {byte}) before its JSON does.")
            }
            _ => format!("The {input} is not JSON: line {line} (byte {byte}) cannot stand there."),
        },
        Code::JsonContent => format!("The {input} holds JSON that is no table: line {line} (byte {byte}): {}.", value("why")),
        Code::MapsMissing => match value("file").as_str() {
            "" => "No file was given.".into(),
            _ => "None of the files holds maps.".into(),
        },
        Code::FilesSeveral => format!("Several files hold {}: {}.", role(&value("role")), value("files")),
        Code::ShapeUnmatched => format!(
            "The {input} has {} and {} without labels; neither side is as long as the labels known, which are {}.",
            counted("rows", "row"),
            counted("columns", "column"),
            value("labels")
        ),
        Code::ColumnUnknown => format!(
            "The {input} has no column “{}” (line {line}); it has {}{}.",
            value("column"),
            counted("width", "column"),
            match value("known").as_str() {
                "" => String::new(),
                known => format!(": {known}"),
            }
        ),
        Code::UnmixingSingular => format!("The unmixing matrix has no maps: {}.", value("why")),
        Code::BaselineEmpty => {
            format!("No map lies between {} and {} {}.", value("from"), value("to"), value("unit"))
        }
        Code::NumberExpected => format!(
            "Line {line}, column {} of the {input}: “{}” is not a number.",
            place.and_then(|p| p.column).unwrap_or(1),
            value("found")
        ),
        Code::NumberRange if place.is_some_and(|p| p.line.is_none()) => format!(
            "Byte {byte} of the {input}: {} is too large or too small; numbers from 1e-100 to 1e100 are read.",
            value("found")
        ),
        Code::NumberRange => format!(
            "Line {line}, column {} of the {input}: “{}” is too large or too small; numbers from 1e-100 to 1e100 are read.",
            place.and_then(|p| p.column).unwrap_or(1),
            value("found")
        ),
        Code::LabelDuplicate if !["", &value("label")].contains(&value("other").as_str()) => format!(
            "The labels “{}” and “{}” of the {input} (lines {} and {line}) stand for one electrode.",
            value("other"),
            value("label"),
            value("first_line")
        ),
        Code::LabelDuplicate => format!(
            "The label “{}” stands twice in the {input}: in lines {} and {line}.",
            value("label"),
            value("first_line")
        ),
        Code::LabelAmbiguous => format!(
            "The label “{}” of the maps may stand for any of these electrodes: {}.",
            value("label"),
            value("electrodes")
        ),
        Code::LabelBipolar => format!(
            "Labels that name two sites are bipolar derivations, differences of two electrodes and no map of a potential: {}.",
            value("labels")
        ),
        Code::ReferenceMixed => format!(
            "The labels name more than one reference, as in {}: values against different references are no map of one potential.",
            value("labels")
        ),
        Code::LabelsUnmatched if value("electrodes").is_empty() => {
            format!("No label of the maps ({}) is a standard electrode name.", value("maps"))
        }
        Code::LabelsUnmatched => format!(
            "No label of the maps ({}) is among the electrodes with a position ({}).",
            value("maps"),
            value("electrodes")
        ),
        Code::ElectrodesTooFew => format!(
            "Electrodes that have a position and a value and are not left out: {}; at least {} are needed.",
            value("found"),
            value("fewest")
        ),
        Code::ElectrodesTooMany => {
            format!("The {input} has {} rows; at most {} electrodes are read.", value("found"), value("most"))
        }
        Code::ElectrodesCoincident if finding.value("label").is_none() => "All electrodes stand at one place.".into(),
        Code::ElectrodesCoincident => {
            format!("The electrodes {} and {} stand at one place.", value("other"), value("label"))
        }
        Code::ElectrodesCollinear => "All electrodes stand on one line.".into(),
        Code::ElectrodesCoplanar => "All electrodes stand in one plane, so that no sphere can be fitted.".into(),
        Code::ElectrodeOff => format!(
            "The electrode {} lies {} mm off the sphere of the head.",
            value("label"),
            number(finding, "off_mm").map(tenths).unwrap_or_default()
        ),
        Code::UnitsUnrecognised if finding.value("unit").is_some() => format!(
            "Taken as {}, the positions would fit a head of radius {} mm; heads from 40 to 120 mm are computed.",
            unit_word(&value("unit")),
            value("radius_mm")
        ),
        Code::UnitsUnrecognised => match finding.value("radius") {
            Some(_) => format!(
                "The positions fit a sphere of radius {}, which is no head in metres, centimetres or millimetres; {} lies farthest from the rest.",
                value("radius"),
                value("label")
            ),
            None => format!("The positions fit no sphere; {} lies farthest from the rest.", value("label")),
        },
        Code::MapsNone => format!("The {input} holds no values."),
        Code::MapsTooMany => {
            format!("The table holds {} maps; at most {} are read.", value("found"), value("most"))
        }
        Code::MapConstant => format!("The map “{}” has the same value at every electrode, to rounding.", value("map")),
        Code::MapLaplacian => "The maps are surface Laplacians, said the settings; a dipole's potential cannot be fitted to them.".into(),
        Code::MapIncomplete => {
            format!("The map “{}” has no value at {}, where other maps have one.", value("map"), value("labels"))
        }
        Code::MapIndex => format!("There is no map {}; the table holds {}.", value("index"), value("count")),
        Code::PartPassedOver => format!("Passed over in the {input}: {} ({}).", value("labels"), value("why")),
        Code::ActivationSdInvalid => format!(
            "The standard deviation given for the activation of the map “{}” is not a number from 1e-100 to 1e100.",
            value("map")
        ),
        Code::SettingRange => format!(
            "The setting {} is {}; it must lie between {} and {}.",
            value("setting"),
            value("value"),
            value("least"),
            value("most")
        ),
        Code::PopulationsLacking => format!("There are no reference maps of the kind “{}” yet.", value("kind")),
        Code::DipolesTooMany => {
            format!("There are {} dipoles to group; at most {} are.", value("found"), value("most"))
        }
        Code::AxesAssumed => {
            let assumed = "Axes were assumed: x to the right, y to the front, z up.";
            match finding.value("named") {
                Some(_) => format!(
                    "{assumed} The {} labels with standard places fit the positions in no axes: labels and positions may have been sorted apart or shifted against each other.",
                    value("named")
                ),
                None => format!("{assumed} Neither labels nor landmarks tell them."),
            }
        }
        Code::LabelsMisplaced => format!(
            "Far from the places that their labels have, by {}° at most: {}. Labels may be exchanged, or a coordinate wrong.",
            value("degrees"),
            value("labels")
        ),
        Code::UnmixingSuspected => format!(
            "By its name “{}” may be an unmixing matrix, whose rows are weights and no maps; it was read as maps: please say which it is.",
            value("found")
        ),
        Code::DecimalsSuspected => format!(
            "Line {line} of the {input} has “-0” before a whole number. If its commas are decimal marks, numbers were taken apart and the maps are wrong: give a table in which other marks divide the fields."
        ),
        Code::AxesFound => {
            let tilt = number(finding, "tilt_degrees").filter(|tilt| *tilt >= 0.5).map(significant2);
            let axes = match (value("axes").as_str(), &tilt) {
                ("oblique", Some(tilt)) => format!("The head lies obliquely in its axes, turned by {tilt}° from the nearest of them, and was turned upright"),
                ("oblique", None) => "The head lies obliquely in its axes and was turned upright".into(),
                (name, _) => format!("Axes: {}", axes_words(name)),
            };
            let by = match value("by").as_str() {
                "landmarks" => "as the points at ears and nose tell".to_owned(),
                "labels" => format!(
                    "as these labels tell, which lie {}° (rms) from their standard places: {}",
                    number(finding, "misfit_degrees").map(|misfit| significant(misfit, 2)).unwrap_or_default(),
                    value("labels")
                ),
                _ => "as set".into(),
            };
            match (tilt, value("axes").as_str()) {
                (Some(tilt), name) if name != "oblique" => format!("{axes}, {by}; the head is tilted by {tilt}° in them."),
                _ => format!("{axes}, {by}."),
            }
        }
        Code::AxesContradicted => format!(
            "The labels contradict these axes: by their names the electrodes lie as if the axes were {}.",
            axes_words(&value("axes"))
        ),
        Code::Mirrored => "By their labels the electrodes are the mirror image of a head, left and right exchanged. Either the labels or an axis of the positions is wrong; positions were kept as they are written.".into(),
        Code::LabelsRenamed => format!("Labels of the maps read as electrodes: {}.", value("labels")),
        Code::NotScalp => format!("Left out, because they are not on the scalp: {}.", value("labels")),
        Code::ReferenceNamed => format!("The labels name a common reference, {}.", value("reference")),
        Code::ReferenceChannel => format!(
            "{} is exactly zero in every map: it was taken as the recording reference, whose 0 is a measurement, and kept.",
            value("labels")
        ),
        Code::ChannelsZero => format!(
            "Several channels are exactly zero in every map: {}. One can be the recording reference; the others hold no data and should be left out.",
            value("labels")
        ),
        Code::PositionsApproximate => format!("Mastoids and ear lobes stand at approximate places: {}.", value("labels")),
        Code::Interpolated => format!("Left out, because interpolated values are no data: {}.", value("labels")),
        Code::ChannelsBad => format!("Left out, because a file calls them bad: {}.", value("labels")),
        Code::UnmixingNotRedone => {
            "Electrodes were left out after the unmixing, which is not redone: the components remain those of all channels.".into()
        }
        Code::UnitOverruled => format!(
            "The positions are declared to be in {}, which the size of the head contradicts: they were taken as {}.",
            unit_word(&value("declared")),
            match value("unit").as_str() {
                "sphere" => "directions on a unit sphere",
                unit => unit_word(unit),
            }
        ),
        Code::ElectrodesProjected => format!(
            "Electrodes are projected onto the sphere along its radius; they lie {} mm off it (rms), {} farthest, by {} mm.",
            number(finding, "rms_mm").map(tenths).unwrap_or_default(),
            value("label"),
            number(finding, "max_mm").map(tenths).unwrap_or_default()
        ),
        Code::UnusualHead if value("shells") == "given" => {
            "An infant's head, or one with a defect of the skull or a craniotomy: the shells given must stand for it; concentric ones cannot show a hole.".into()
        }
        Code::UnusualHead => {
            "An infant's head, or one with a defect of the skull or a craniotomy: the standard shells do not hold for it, and positions, depths and strengths may be far off. Shells for this head can be given.".into()
        }
        Code::LaplacianSuspected => format!(
            "By its name the map “{}” may be a surface Laplacian (a current density), to which no potential can be fitted: please say whether it is.",
            value("map")
        ),
        Code::TitlePassedOver => match value("last") {
            last if last == line.to_string() => {
                format!("Line {line} of the {input} stands above the table and was passed over.")
            }
            last => format!("Lines {line} to {last} of the {input} stand above the table and were passed over."),
        },
        Code::EncodingAssumed => {
            format!("The {input} is not UTF-8; its characters were taken as Latin-1, one byte each.")
        }
        Code::DecimalComma => format!("Commas in the numbers of the {input} were taken as decimal marks."),
        Code::ColumnsPassedOver => {
            format!("Columns of the {input} without values were passed over: {}.", value("columns"))
        }
        Code::PartUnused if value("role") == "positions" => {
            format!("The positions in the {input} were not needed, as others were given apart.")
        }
        Code::PartUnused => match value("part").as_str() {
            "" => format!("The {input} was not needed."),
            part => format!("The part “{part}” of the {input} was not needed."),
        },
        Code::FileUnused => format!("The {input} holds nothing that is needed, and was left aside."),
        Code::AnglesRead => format!(
            "Positions of the {input} were computed from angles: {} and azimuth in {}{}.",
            value("polar"),
            value("unit"),
            if value("radius") == "yes" { ", at the distance given" } else { "" }
        ),
        Code::LabelsByOrder => format!(
            "The values for {} in the {input} have no labels; they were taken in the order of {}.{}",
            counted("count", "electrode"),
            if value("order").is_empty() { "the labels known".to_owned() } else { format!("“{}”", value("order")) },
            if value("other").is_empty() {
                String::new()
            } else {
                format!(" In “{}” the same stand in another order: if that is right, give a list of labels.", value("other"))
            }
        ),
        Code::OrientationAssumed => format!(
            "The {input} is square, {} by {}: each {} was taken as an electrode.",
            value("rows"),
            value("rows"),
            value("electrode")
        ),
        Code::UnmixingInverted => format!(
            "The maps are the pseudo-inverse of the unmixing matrix: {} maps of {} independent components.",
            value("maps"),
            value("components")
        ),
        Code::SpheringAbsent => {
            "No sphering matrix was given: if the unmixing was kept apart from it, these maps are wrong.".into()
        }
        Code::BaselineSubtracted => format!(
            "The mean from {} to {} {} was subtracted at each electrode ({}).",
            value("from"),
            value("to"),
            value("unit"),
            counted("maps", "map")
        ),
        Code::HeaderAssumed => format!("The first line of the {input} was taken as the names of its columns."),
        Code::UnitRecognised => format!(
            "Positions were taken as {}: the fitted head then has a radius of {} mm.",
            unit_word(&value("unit")),
            number(finding, "radius_mm").map(tenths).unwrap_or_default()
        ),
        Code::UnitSphereScaled => {
            format!("Positions on a unit sphere were scaled to a head radius of {} mm.", value("radius_mm"))
        }
        Code::StandardPositions => format!(
            "Positions are the standard ones of the labels, on a sphere of radius {} mm; none were measured.",
            value("radius_mm")
        ),
        Code::FewElectrodes => format!(
            "Only {} electrodes: {} degrees of freedom remain, and almost any map can look like one dipole.",
            value("electrodes"),
            value("degrees_of_freedom")
        ),
        Code::AverageReferenced => {
            let all = "all are referred to the average of the electrodes used";
            match value("maps").as_str() {
                "1" => format!("The mean of 1 map was not zero; {all}."),
                maps => format!("The means of {maps} maps were not zero; {all}."),
            }
        }
        Code::UnitRelative => {
            let comparable = match (value("activations").as_str(), value("count").as_str()) {
                ("" | "0", _) => "not comparable between maps",
                (some, all) if some == all => "comparable by the standard deviations of their activations",
                _ => "comparable only between maps whose activation's standard deviation is given",
            };
            format!("The unit of the maps is not known: strengths are relative and {comparable}.")
        }
        Code::PositionsWithoutValue => format!("These electrodes have no value in the maps: {}.", value("labels")),
        Code::ValuesWithoutPosition => {
            format!("These labels of the maps have no position and were left out: {}.", value("labels"))
        }
        Code::Excluded => format!("Left out by hand: {}.", value("labels")),
        Code::ExcludeUnmatched => format!("To be left out, but not in the tables: {}.", value("labels")),
        Code::SphereDeviation => format!(
            "Far off the fitted sphere, up to {} mm: {}. Check these positions; points that are not on the scalp should be left out.",
            value("max_mm"),
            value("labels")
        ),
        Code::SeriesOnly => "These shells are computed by the plain series, which is exact but slower.".into(),
        Code::ElectrodesUncommon => format!(
            "“{}” and “{}” have {} in common; at least {} are needed to compare maps.",
            value("a"),
            value("b"),
            counted("found", "electrode"),
            value("fewest")
        ),
        Code::RankDeficient => {
            let of = finding.value("name").map_or_else(String::new, |_| format!(" of “{}”", value("name")));
            let missing = match (finding.value("maps"), finding.value("rank")) {
                (Some(Value::Count(maps)), Some(Value::Count(rank))) => maps.saturating_sub(*rank),
                _ => 0,
            };
            let cause = match value("cause").as_str() {
                "reference" => format!(
                    "they are average-referenced, and such data have one component less than electrodes ({})",
                    value("electrodes")
                ),
                "electrodes" => format!("only {} electrodes are used", value("electrodes")),
                "reference-and-more" => "they are average-referenced, which takes one; the rest may be interpolated channels or components taken out".into(),
                _ => "channels may have been interpolated or components taken out before".into(),
            };
            format!(
                "The {} maps{of} have rank {}, so that {missing} of them repeat what others hold: {cause}.",
                value("maps"),
                value("rank")
            )
        }
        Code::ElectrodeSetsDiffer => format!(
            "The decompositions use different electrodes ({}); not in all of them: {}. Residual variance depends on the number of electrodes and on what they cover, so that shares are not strictly comparable.",
            value("sets"),
            value("labels")
        ),
        Code::ComponentsNoSample => {
            "Components of one recording are no sample of anything: no interval is computed from them. Intervals come from at least 5 subjects whose decompositions bear one name.".into()
        }
        Code::SubjectsFew => {
            format!("“{}” has {}: too few for an interval, which needs at least 5.", value("name"), counted("subjects", "subject"))
        }
        Code::SubjectsResampled => format!(
            "Intervals (nominally 95 %, at each threshold by itself) come from drawing the subjects anew {} times, seed {}, by expanded percentiles (Hesterberg 2015).",
            value("draws"),
            value("seed")
        ),
        Code::VarianceIncomplete => {
            format!("The variance of some components is not known, so that no share is weighted by it: {}.", value("names"))
        }
        Code::PairsMany => format!(
            "{} pairs of decompositions were not matched, more than {} unasked; name those wanted in settings.pairs.",
            value("found"),
            value("most")
        ),
    }
}

/// What to do about an error; empty for notes.
pub fn hint(code: Code) -> &'static str {
    match code {
        Code::SettingsUnknown => "Remove or correct the setting; the README lists all of them.",
        Code::HeadInvalid => {
            "Give shells from the inside out with rising ratios, the last one 1, and conductivities in S/m; a radius in mm between 40 and 120. Centre and radius are fitted to the electrodes where they are left out."
        }
        Code::InputEmpty => "Give a table with a label and a value or a position in each line.",
        Code::InputTooLarge => "Split the table, or leave out columns that are not needed.",
        Code::InputTruncated => "Copy or export the file again; this one is not whole.",
        Code::InputDamaged => "Export the file again, or write the table as text.",
        Code::InputHdf5 => "In MATLAB, save with save('name.mat', 'variable', '-v7'); or write the table as text.",
        Code::InputMatlab4 => "In MATLAB, load the file and save with '-v7'; or write the table as text.",
        Code::InputZip => "Unpack the archive yourself and give the files in it.",
        Code::InputNoTable => {
            "Give tables as text (from a spreadsheet: save as CSV), JSON, .npy or .mat; of a recording, export the maps."
        }
        Code::ArrayType => {
            "Save plain matrices of real numbers, and labels as a list of words (in MATLAB: full(), real(), cellstr(); in NumPy: astype(float), astype(str))."
        }
        Code::ArraySize => {
            "Save a matrix of electrodes and maps, without further dimensions and without the recording itself."
        }
        Code::InputEncoding => "Choose another encoding, or save the table as text in UTF-8 and give it again.",
        Code::TableColumns => {
            "Electrodes need the columns label, x, y, z, or labels alone, one in each line; maps need a label and at least one value in each line. A first line with such names settles which column is which."
        }
        Code::TableLarge => "Split the table; at most 512 electrodes and 65,536 maps are read.",
        Code::JsonSyntax => "Correct the text there, or write the file again from the program it comes from.",
        Code::JsonContent => {
            "Give a list of lists of numbers, a list of records with the same keys, a record of equally long lists, or { labels, positions, maps }."
        }
        Code::MapsMissing => {
            "Add a table with a label and a value in each line, or say in the settings which file holds the maps."
        }
        Code::FilesSeveral => "Remove all but one, or say in the settings what the others are.",
        Code::ShapeUnmatched => {
            "Give a table of electrodes or a list of labels with as many entries, in the same order, or a table with labels."
        }
        Code::ColumnUnknown => "Name a column of the header, or give its number from 1.",
        Code::UnmixingSingular => {
            "Give the weights without gaps, a row for each component, with the sphering matrix of the same channels if there is one."
        }
        Code::BaselineEmpty => "Give the window in the unit of the times, or correct start and step.",
        Code::TableRagged => "Give every line the same number of fields, divided by the same mark.",
        Code::NumberExpected => {
            "Correct the field, or write n/a where there is no value. Decimals have a point, or all of them a comma."
        }
        Code::NumberRange => "Correct the field, or scale the whole table.",
        Code::LabelDuplicate => "Rename or remove one of the two lines.",
        Code::LabelAmbiguous => "Write the label as one of these electrodes is written, or rename the others.",
        Code::LabelBipolar => {
            "Give the values of single electrodes against one reference, or leave these channels out."
        }
        Code::ReferenceMixed => "Refer all channels to one reference, before any decomposition.",
        Code::MapLaplacian => "Give the potentials that they were computed from.",
        Code::LabelsUnmatched => {
            "Use the same labels in both tables (upper and lower case do not matter), or standard 10-10 names without a table of electrodes."
        }
        Code::ElectrodesTooFew => "Add electrodes, or take back some of those left out.",
        Code::ElectrodesTooMany => "Leave out rows that are no scalp electrodes.",
        Code::ElectrodesCoincident => "Correct the position of one of them, or remove it.",
        Code::ElectrodesCollinear | Code::ElectrodesCoplanar => {
            "Check that the three coordinates are different columns; electrodes must surround a part of the head."
        }
        Code::ElectrodeOff => "Correct or remove its position, or the centre and radius if you have set them.",
        Code::UnitsUnrecognised => {
            "Give positions in metres, centimetres or millimetres (head radii from 40 to 120 mm), or on a unit sphere about the origin; check the electrode named."
        }
        Code::MapsNone => "Add at least one column of values.",
        Code::MapsTooMany => "Split the table into several.",
        Code::MapConstant => "Check the column: such a map has no pattern that a source could explain.",
        Code::MapIncomplete => "Fill in the value, or leave the electrode out.",
        Code::MapIndex => "Count maps from 0.",
        Code::ElectrodesUncommon => {
            "Take back electrodes that were left out of one of them, or compare decompositions whose electrodes bear the same labels."
        }
        Code::ActivationSdInvalid => {
            "Give a positive number in the unit of the activation, or leave it open; a list has one for each map, in their order."
        }
        Code::SettingRange => "Give a number in this range, or leave the setting out for its default.",
        Code::PopulationsLacking => {
            "Draw the population of each kind and hand it over first, or ask for the assessment, which draws them."
        }
        Code::DipolesTooMany => "Lower the residual variance up to which dipoles are taken, or leave recordings out.",
        _ => "",
    }
}

/// A message about one of several decompositions.
pub fn within_decomposition(name: &str, message: &str) -> String {
    format!("In the decomposition “{}”: {message}", clipped(name))
}

/// Whether a note is a warning.
pub fn is_warning(code: Code) -> bool {
    matches!(
        code,
        Code::AxesAssumed
            | Code::AxesContradicted
            | Code::LabelsMisplaced
            | Code::UnmixingSuspected
            | Code::DecimalsSuspected
            | Code::Mirrored
            | Code::ChannelsZero
            | Code::UnitOverruled
            | Code::UnusualHead
            | Code::LaplacianSuspected
            | Code::FewElectrodes
            | Code::ValuesWithoutPosition
            | Code::ExcludeUnmatched
            | Code::SphereDeviation
            | Code::EncodingAssumed
            | Code::OrientationAssumed
            | Code::SpheringAbsent
            | Code::FileUnused
            | Code::ElectrodeSetsDiffer
    )
}

fn number(finding: &Finding, name: &str) -> Option<f64> {
    match finding.value(name) {
        Some(Value::Number(number)) => Some(*number),
        _ => None,
    }
}

fn significant2(value: f64) -> String {
    significant(value, 2)
}

fn unit_word(symbol: &str) -> &'static str {
    match symbol {
        "m" => "metres",
        "cm" => "centimetres",
        _ => "millimetres",
    }
}

/// Axes in words: `right-front-up` is x to the right, y to the front, z up.
pub(super) fn axes_words(name: &str) -> String {
    let way = |word: &str| match word {
        "right" => "to the right",
        "left" => "to the left",
        "front" => "to the front",
        "back" => "to the back",
        "up" => "up",
        _ => "down",
    };
    let words = ["x", "y", "z"].iter().zip(name.split('-')).map(|(axis, word)| format!("{axis} {}", way(word)));
    words.collect::<Vec<_>>().join(", ")
}

fn input_name(place: Option<&Place>) -> String {
    if let Some(file) = place.and_then(|p| p.file.as_deref()) {
        return format!("file “{}”", clipped(file));
    }
    match place.and_then(|p| p.input) {
        Some("electrodes") => "table of electrodes".into(),
        Some("maps") => "table of maps".into(),
        _ => "input".into(),
    }
}

/// What several files hold, by the name of their role.
fn role(name: &str) -> &'static str {
    match name {
        "electrodes" => "electrodes",
        "channels" => "a table of channels",
        "sphering" => "a sphering matrix",
        _ => "maps",
    }
}

/// What lies behind an error, by its key.
fn reason(key: &str) -> &'static str {
    match key {
        "shell-count" => "a head has 1 to 16 shells",
        "conductivity" => "its conductivity is not between 0.000001 and 1000 S/m",
        "ratio" => "its ratio is not above that of the shell inside it (0.05 for the innermost) and at most 1",
        "outermost" => "the ratio of the outermost shell is not 1",
        "centre" => "the centre is not within 1 m of the origin",
        "radius" => "the radius is not between 40 and 120 mm",
        "electrode" => "with this centre and radius an electrode lies far off the sphere: ",
        "label-column" => "a column of labels",
        "coordinates" => "three columns of coordinates x, y, z",
        "label" => "a label",
        "unpacked" => "unpacks to",
        "npy-magic" => "the beginning of a .npy file",
        "npy-version" => "version 1, 2 or 3 of the format",
        "npy-header" => "the header of the array",
        "npy-header-end" => "the end of the header",
        "npy-keys" => "a header with 'descr', 'fortran_order' and 'shape'",
        "npy-key" => "'descr', 'fortran_order' and 'shape', each once",
        "npy-mark" => "a header such as {'descr': '<f8', 'fortran_order': False, 'shape': (71, 3), }",
        "npy-quote" => "a word in quotes",
        "npy-truth" => "True or False",
        "npy-shape" => "a shape such as (71, 3)",
        "npy-type" => "a type of numbers with its order of bytes such as '<f8'",
        "npy-numbers" => "the entries of the array",
        "npy-end" => "nothing after the last entry",
        "mat-header" => "the header of the file",
        "mat-endian" => "the version and the mark of a level-5 file",
        "mat-variable" => "a variable",
        "mat-element" => "a variable, plain or packed",
        "mat-inside" => "a variable whose parts agree with its size",
        "packed" => "sound packed data",
        "zip-directory" => "the directory of the archive",
        "zip-entry" => "an entry of the archive's directory",
        "zip-file" => "a file where the directory says it is",
        "zip-size" => "as many bytes as the directory says",
        "zip-checksum" => "content that agrees with its checksum",
        "zip-encrypted" => "it is encrypted",
        "zip-64" => "it has sizes of 64 bits",
        "zip-divided" => "it is divided over several files",
        "zip-many" => "it holds more than 1,024 files",
        "zip-method" => "it is packed by another method than deflate",
        "picture" => "a picture",
        "pdf" => "a PDF document",
        "markup" => "a page or a document in a markup language",
        "office" => "a spreadsheet or another office document",
        "packed-file" => "a packed file of a kind that is not read",
        "database" => "a database",
        "recording" => "a recording",
        "binary" => "a binary file of an unknown kind",
        "archive" => "an archive within an archive",
        "fields" => "records with named fields are not read",
        "kind" => "this kind of entry is not read",
        "complex" => "complex numbers are not read",
        "objects" => "objects are not read",
        "object" => "an object; cellstr() makes words of a string array, table2struct() a structure of a table",
        "sparse" => "sparse; full() makes a plain matrix of it",
        "function" => "a function handle",
        "dimensions" => "more than two dimensions",
        "size" => "larger than 512 × 65,536",
        "range" => "holds numbers that are infinite or beyond 1e-100 to 1e100",
        "nested" => "more than four levels deep",
        "mixed" => "neither words, nor numbers, nor vectors of one length",
        "json-scalar" => "it is a single value",
        "json-mixed" => "its entries are of different kinds",
        "json-deep" => "it is nested more deeply than a table",
        "json-large" => "it has more entries than a table can have",
        "sphering-size" => "the sphering matrix does not have a row and a column for each channel",
        "unmixing-gaps" => "values are missing",
        "unmixing-zero" => "all weights are zero",
        _ => {
            debug_assert!(false, "no reason for {key}");
            ""
        }
    }
}

/// The beginning of a text that may be of any length.
pub(super) fn clipped(text: &str) -> String {
    shortened(text, 60)
}

fn shortened(text: &str, most: usize) -> String {
    match text.char_indices().nth(most) {
        Some((end, _)) => format!("{}…", &text[..end]),
        None => text.to_owned(),
    }
}

/// At most twelve words, and how many more there are.
pub(super) fn listed(words: &[String]) -> String {
    const MOST: usize = 12;
    let shown = words.iter().take(MOST).map(|word| clipped(word)).collect::<Vec<_>>().join(", ");
    if words.len() > MOST { format!("{shown} and {} more", words.len() - MOST) } else { shown }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn every_error_says_what_to_do_and_every_code_has_a_sentence() {
        let notes_begin = Code::ALL.iter().position(|code| *code == Code::AxesAssumed).unwrap();
        for (index, &code) in Code::ALL.iter().enumerate() {
            assert!(message(&Finding::new(code)).ends_with('.'), "{code:?}");
            assert_eq!(hint(code).is_empty(), index >= notes_begin, "{code:?}");
        }
    }
}
