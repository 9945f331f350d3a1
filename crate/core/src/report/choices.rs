//! Words for choices: a sentence for each, and a name for each option.

use super::messages::{axes_words, clipped, listed};
use super::number::significant;
use crate::finding::{Choice, Origin, Value};
use crate::head::AxesName;
use crate::read::{Delimiter, Encoding};
use crate::understand::{AngleUnit, ColumnsAre, Decimal, MapsAre, Orientation, Polar, Role};
use serde::Serialize;

/// A choice in words, as reports and the page have it.
#[derive(Clone, Debug, PartialEq, Serialize)]
pub struct ChoiceReport {
    /// Its name.
    pub setting: &'static str,
    /// Keys in the settings, from the outside in, where another value is put.
    pub path: Vec<String>,
    /// The file it is about.
    pub file: Option<String>,
    /// What is in force.
    pub value: Value,
    /// What can be chosen.
    pub options: Vec<OptionReport>,
    /// `setting`, `found`, `declared` or `assumed`.
    pub from: Origin,
    /// In words.
    pub sentence: String,
}

/// An option of a choice.
#[derive(Clone, Debug, PartialEq, Serialize)]
pub struct OptionReport {
    /// What the setting takes.
    pub value: Value,
    /// In words.
    pub label: String,
}

impl From<&Choice> for ChoiceReport {
    fn from(choice: &Choice) -> Self {
        let label = |(value, own): &(Value, Option<String>)| OptionReport {
            value: value.clone(),
            label: option_label(choice.setting, value, own.as_deref()),
        };
        Self {
            setting: choice.setting,
            path: choice.path.clone(),
            file: choice.file.clone(),
            value: choice.value.clone(),
            options: choice.options.iter().map(label).collect(),
            from: choice.from,
            sentence: sentence(choice),
        }
    }
}

/// Every choice among fixed options, whether a file gave rise to it or not: what can be tried when files were not understood.
pub fn offered() -> Vec<ChoiceOffer> {
    let axes = AxesName::all().take(4).map(|name| name.to_string()).collect::<Vec<_>>();
    let names = |names: &[&str]| names.iter().map(|name| Value::from(*name)).collect::<Vec<_>>();
    let flags = vec![Value::Flag(false), Value::Flag(true)];
    [
        ("role", names(&Role::ALL.map(Role::name))),
        ("encoding", names(&Encoding::ALL.map(Encoding::name))),
        ("delimiter", names(&Delimiter::ALL.map(Delimiter::name))),
        ("decimal", names(&[Decimal::Point, Decimal::Comma].map(Decimal::name))),
        ("orientation", names(&Orientation::ALL.map(Orientation::name))),
        ("mapsAre", names(&MapsAre::ALL.map(MapsAre::name))),
        ("columnsAre", names(&ColumnsAre::ALL.map(ColumnsAre::name))),
        ("units", names(&["m", "cm", "mm"])),
        ("axes", axes.into_iter().map(Value::from).collect()),
        ("mirror", flags.clone()),
        ("laplacian", flags),
        ("angles.polar", names(&[Polar::Inclination, Polar::Elevation].map(Polar::name))),
        ("angles.unit", names(&[AngleUnit::Degrees, AngleUnit::Radians].map(AngleUnit::name))),
    ]
    .into_iter()
    .map(|(setting, values)| {
        let option = |value: Value| OptionReport { label: option_label(setting, &value, None), value };
        ChoiceOffer { setting, options: values.into_iter().map(option).collect() }
    })
    .collect()
}

/// What a choice can be set to.
#[derive(Clone, Debug, PartialEq, Serialize)]
pub struct ChoiceOffer {
    /// Its name.
    pub setting: &'static str,
    /// What can be chosen.
    pub options: Vec<OptionReport>,
}

/// What was chosen, and why.
pub fn sentence(choice: &Choice) -> String {
    let own = choice.options.iter().find(|(value, _)| *value == choice.value).and_then(|(_, own)| own.as_deref());
    let value = option_label(choice.setting, &choice.value, own);
    let number = |name: &str| match choice.value(name) {
        Some(Value::Number(number)) => significant(*number, 3),
        _ => String::new(),
    };
    let what = match choice.setting {
        "role" => format!("This file is taken as {value}"),
        "part" => format!("Of its parts, “{value}” is read"),
        "encoding" => format!("Its characters are written as {value}"),
        "delimiter" => format!("Its fields are divided by {value}"),
        "decimal" => format!("Its decimals have a {value}"),
        "label" | "columns.label" => format!("Labels stand in {value}"),
        "columns.x" => format!("x stands in {value}"),
        "columns.y" => format!("y stands in {value}"),
        "columns.z" => format!("z stands in {value}"),
        "columns.polar" => format!("The polar angle stands in {value}"),
        "columns.azimuth" => format!("The azimuth stands in {value}"),
        "columns.radius" => format!("The radius stands in {value}"),
        "angles.polar" => format!("The polar angle is {value}"),
        "angles.unit" => format!("Angles are in {value} (the largest is {})", number("largest")),
        "orientation" => format!("The table has {value}"),
        "mapsAre" => format!("The table holds {value}"),
        "columnsAre" => format!("Its maps are {value}"),
        "units" if value == "directions" => "Positions are directions on a unit sphere".into(),
        "units" => format!("Positions are in {value}"),
        "axes" if choice.value == Value::from("oblique") => {
            "The head lies obliquely in its axes and was turned upright".into()
        }
        "axes" => format!("Axes are {value}"),
        "mirror" if choice.value == Value::Flag(true) => "Left and right of the positions were exchanged".into(),
        "mirror" => "Left and right are as the positions are written".into(),
        setting => format!("{setting}: {value}"),
    };
    let tilt = match choice.value("tilt_degrees") {
        Some(Value::Number(tilt)) if choice.setting == "axes" && *tilt >= 0.5 => {
            format!("; the head is tilted by {}° in them", significant(*tilt, 2))
        }
        _ => String::new(),
    };
    let labels = match (choice.value("by"), choice.value("labels")) {
        (Some(Value::Text(by)), Some(Value::List(labels))) if by == "labels" => {
            format!(", as the labels tell: {}", listed(labels))
        }
        (Some(Value::Text(by)), _) if by == "landmarks" => ", as the points at ears and nose tell".into(),
        (Some(Value::Text(by)), _) if choice.setting == "columnsAre" => format!(", by {by}"),
        _ => String::new(),
    };
    let why = match (choice.from, choice.setting) {
        (Origin::Setting, _) => ", as set by hand",
        (Origin::Declared, "encoding") => ", by the mark at its beginning",
        (Origin::Declared, _) => ", as a file says",
        (Origin::Found, "units") => ", by the size of the head",
        (Origin::Found, "axes" | "columnsAre") => &labels,
        (Origin::Assumed, "mirror") => ", although the labels contradict them",
        (Origin::Found, _) => "",
        (Origin::Assumed, _) => "; nothing in the files tells otherwise",
    };
    format!("{what}{why}{tilt}.")
}

/// An option in words; pieces of the input are shown as they are.
pub fn option_label(setting: &str, value: &Value, own: Option<&str>) -> String {
    let text = match value {
        Value::Text(text) => text.clone(),
        Value::Count(count) => count.to_string(),
        Value::Number(number) => significant(*number, 3),
        Value::Flag(flag) => if *flag { "yes" } else { "no" }.into(),
        Value::List(list) => list.join(", "),
    };
    let words = match (setting, text.as_str()) {
        ("role", "electrodes") => "electrodes",
        ("role", "maps") => "maps",
        ("role", "electrodes-and-maps") => "electrodes and maps together",
        ("role", "labels") => "a list of labels",
        ("role", "channels") => "a table of channels",
        ("role", "coordinates") => "a description of coordinates",
        ("role", "sphering") => "a sphering matrix",
        ("role", "times") => "a list of times",
        ("role", "unused") => "not needed",
        ("encoding", "utf-8") => "UTF-8",
        ("encoding", "latin-1") => "Latin-1",
        ("encoding", "utf-16le") => "UTF-16, low byte first",
        ("encoding", "utf-16be") => "UTF-16, high byte first",
        ("delimiter", "tab") => "tabs",
        ("delimiter", "semicolon") => "semicolons",
        ("delimiter", "comma") => "commas",
        ("delimiter", "blanks") => "blanks",
        ("delimiter", "columns") => "their place in the line",
        ("angles.polar", "inclination") => "an inclination from the vertical",
        ("angles.polar", "elevation") => "an elevation above the horizontal",
        ("orientation", "channels-in-rows") => "a row for each electrode",
        ("orientation", "channels-in-columns") => "a column for each electrode",
        ("mapsAre", "maps") => "maps",
        ("mapsAre", "unmixing") => "an unmixing matrix, whose pseudo-inverse holds the maps",
        ("columnsAre", "components") => "components of one decomposition",
        ("columnsAre", "time-points") => "time points of one response",
        ("columnsAre", "repeats") => "repeats of one map",
        ("columnsAre", "unrelated") => "unrelated maps",
        ("units", "m") => "metres",
        ("units", "cm") => "centimetres",
        ("units", "mm") => "millimetres",
        ("units", "sphere") => "directions",
        ("mirror", "yes") => "exchange left and right",
        ("mirror", "no") => "keep them as written",
        ("axes", name) if name != "oblique" => return axes_words(name),
        (setting, _) if setting == "label" || setting.starts_with("columns.") => {
            return match own {
                Some(name) => format!("column {text}, “{}”", clipped(name)),
                None => format!("column {text}"),
            };
        }
        _ => return clipped(own.unwrap_or(&text)),
    };
    words.into()
}
