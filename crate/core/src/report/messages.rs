//! Every sentence that belongs to a code.

use super::number::{significant, tenths};
use crate::finding::{Code, Finding, Place, Value};

/// What happened, with the values of the finding.
pub fn message(finding: &Finding) -> String {
    let value = |name: &str| match finding.value(name) {
        None => String::new(),
        Some(Value::Text(text)) if name == "why" || name == "lacks" => reason(text).to_owned(),
        Some(Value::Text(text)) if name == "problem" => text.clone(),
        Some(Value::Text(text)) => clipped(text),
        Some(Value::Number(number)) => significant(*number, 3),
        Some(Value::Count(count)) => count.to_string(),
        Some(Value::List(list)) => listed(list),
        Some(Value::Flag(flag)) => if *flag { "yes" } else { "no" }.into(),
    };
    let place = finding.place.as_ref();
    let line = place.and_then(|p| p.line).unwrap_or(1);
    let input = input_name(place);
    match finding.code {
        Code::SettingsUnknown => format!("A setting was not understood: {}.", value("problem")),
        Code::HeadInvalid => match finding.value("shell") {
            Some(Value::Count(shell)) => format!("The head cannot be computed: shell {shell}: {}.", value("why")),
            _ => format!("The head cannot be computed: {}{}.", value("why"), value("label")),
        },
        Code::InputEmpty => format!("The {input} holds nothing."),
        Code::InputTooLarge => {
            format!("The {input} is larger than {} MiB, the most that is read.", value("most_mib"))
        }
        Code::InputEncoding => {
            let byte = place.and_then(|p| p.byte).unwrap_or(1);
            format!("The {input} is not UTF-8 text: byte {byte} does not belong there.")
        }
        Code::TableColumns => format!("The {input} lacks {} (line {line}).", value("lacks")),
        Code::TableRagged => format!(
            "Line {line} of the {input} has {} fields, the first line has {}.",
            value("found"),
            value("expected")
        ),
        Code::NumberExpected => format!(
            "Line {line}, column {} of the {input}: “{}” is not a number.",
            place.and_then(|p| p.column).unwrap_or(1),
            value("found")
        ),
        Code::NumberRange => format!(
            "Line {line}, column {} of the {input}: “{}” is too large or too small; numbers from 1e-100 to 1e100 are read.",
            place.and_then(|p| p.column).unwrap_or(1),
            value("found")
        ),
        Code::LabelDuplicate => format!(
            "The label “{}” stands twice in the {input}: in lines {} and {line}.",
            value("label"),
            value("first_line")
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
        Code::UnitsUnrecognised => match finding.value("radius") {
            Some(_) => format!(
                "The positions fit a sphere of radius {}, which is no head in metres, centimetres or millimetres; {} lies farthest from the rest.",
                value("radius"),
                value("label")
            ),
            None => format!("The positions fit no sphere; {} lies farthest from the rest.", value("label")),
        },
        Code::MapsNone => "The table of maps holds no values.".into(),
        Code::MapsTooMany => {
            format!("The table holds {} maps; at most {} are read.", value("found"), value("most"))
        }
        Code::MapConstant => format!("The map “{}” has the same value at every electrode, to rounding.", value("map")),
        Code::MapIncomplete => {
            format!("The map “{}” has no value at {}, where other maps have one.", value("map"), value("labels"))
        }
        Code::MapIndex => format!("There is no map {}; the table holds {}.", value("index"), value("count")),
        Code::AxesAssumed => {
            "Axes were assumed: x to the right, y to the front, z up. Nothing in the table was used to check this."
                .into()
        }
        Code::HeaderAssumed => format!("The first line of the {input} was taken as the names of its columns."),
        Code::UnitRecognised => format!(
            "Positions were taken as {}: the fitted head then has a radius of {} mm.",
            match value("unit").as_str() {
                "m" => "metres",
                "cm" => "centimetres",
                _ => "millimetres",
            },
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
            "The unit of the maps is not known: strengths are relative and not comparable between maps.".into()
        }
        Code::PositionsWithoutValue => format!("These electrodes have no value in the maps: {}.", value("labels")),
        Code::ValuesWithoutPosition => {
            format!("These labels of the maps have no position and were left out: {}.", value("labels"))
        }
        Code::Excluded => format!("Left out by hand: {}.", value("labels")),
        Code::ExcludeUnmatched => format!("To be left out, but not in the tables: {}.", value("labels")),
        Code::SphereDeviation => format!(
            "The electrode {} lies {} mm off the fitted sphere; check its position.",
            value("label"),
            value("max_mm")
        ),
        Code::SeriesOnly => "These shells are computed by the plain series, which is exact but slower.".into(),
    }
}

/// What to do about an error; empty for notes.
pub fn hint(code: Code) -> &'static str {
    match code {
        Code::SettingsUnknown => "Remove or correct the setting; the README lists all of them.",
        Code::HeadInvalid => {
            "Give shells from the inside out with rising ratios, the last one 1, and conductivities in S/m; a radius in mm between 40 and 120."
        }
        Code::InputEmpty => "Give a table with a label and a value or a position in each line.",
        Code::InputTooLarge => "Split the table, or leave out columns that are not needed.",
        Code::InputEncoding => "Save the table as text in UTF-8 and give it again.",
        Code::TableColumns => {
            "Electrodes need the columns label, x, y, z, or labels alone, one in each line; maps need a label and at least one value in each line. A first line with such names settles which column is which."
        }
        Code::TableRagged => "Give every line the same number of fields, divided by the same mark.",
        Code::NumberExpected => {
            "Correct the field, or write n/a where there is no value. Decimals are written with a point."
        }
        Code::NumberRange => "Correct the field, or scale the whole table.",
        Code::LabelDuplicate => "Rename or remove one of the two lines.",
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
        _ => "",
    }
}

/// Whether a note is a warning.
pub fn is_warning(code: Code) -> bool {
    matches!(code, Code::FewElectrodes | Code::ValuesWithoutPosition | Code::ExcludeUnmatched | Code::SphereDeviation)
}

fn number(finding: &Finding, name: &str) -> Option<f64> {
    match finding.value(name) {
        Some(Value::Number(number)) => Some(*number),
        _ => None,
    }
}

fn input_name(place: Option<&Place>) -> &'static str {
    match place.and_then(|p| p.input) {
        Some("electrodes") => "table of electrodes",
        Some("maps") => "table of maps",
        _ => "input",
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
        _ => {
            debug_assert!(false, "no reason for {key}");
            ""
        }
    }
}

/// The beginning of a text that may be of any length.
fn clipped(text: &str) -> String {
    match text.char_indices().nth(60) {
        Some((end, _)) => format!("{}…", &text[..end]),
        None => text.to_owned(),
    }
}

/// At most twelve words, and how many more there are.
fn listed(words: &[String]) -> String {
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
