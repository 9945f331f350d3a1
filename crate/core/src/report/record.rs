//! A technical note on the fit of one map, to go with a record: what went in, what was assumed, numbers and limits. It gives
//! no advice and finds nothing, whatever the verdict.

use super::sheet::{Row, Written, head_sheet, rows, sentence};
use super::trust::{CAUTIONS, PUBLISHED, causes, region_rows};
use super::{Alternatives, Done, ErrorReport, FittedMap, MapReport, Report};
use crate::finding::Origin;
use crate::understand::ColumnsAre;
use serde::Serialize;

/// A note in parts.
#[derive(Clone, Debug, PartialEq, Eq, Serialize)]
pub struct Record {
    /// What it is about.
    pub title: String,
    /// Its parts, in order.
    pub parts: Vec<RecordPart>,
}

/// A part of a note.
#[derive(Clone, Debug, PartialEq, Eq, Serialize)]
pub struct RecordPart {
    /// What it tells.
    pub heading: &'static str,
    /// Line by line.
    pub lines: Vec<String>,
}

/// Stands first in every note.
const STATUS: &str = "This is not a diagnostic finding; it does not show extent, propagation or an epileptogenic zone.";

/// Stands below every note.
const LIMITS: [&str; 3] = [
    "The position is that of an equivalent dipole in a spherical model; it names no anatomy.",
    "Residual variance shows neither an error of the sphere nor one of the skull's conductivity, which is not known for a person.",
    "That one dipole reproduces a map, or does not, says something about this model and these electrodes, and nothing about health or illness.",
];

impl Record {
    /// Of map `index` of `count`; `report` has no maps, `alternatives` are there where they were looked for.
    pub fn new(
        report: &Report,
        [index, count]: [usize; 2],
        map: &MapReport,
        alternatives: Option<&Alternatives>,
        done: &Done,
    ) -> Self {
        let (name, told) = match map {
            MapReport::Fitted(map) => (&map.name, of_fitted(report, map, alternatives, done)),
            MapReport::Failed { name, error } => (name, vec![("Fit", of_failed(error))]),
        };
        let parts = [
            ("Status", vec![STATUS.to_owned(), CAUTIONS[2].to_owned()]),
            ("Inputs", inputs(report, index, count, name)),
            ("Found and assumed", assumed(report)),
            ("Model", model(report)),
        ];
        let program = &report.program;
        let build = program.build.map_or_else(String::new, |build| format!(", build {build}"));
        let made_by = ("Program", vec![format!("{}, version {}{build}", program.name, program.version)]);
        let parts = parts.into_iter().chain(told).chain([("Limits", limits(report)), made_by]);
        let parts = parts.filter(|(_, lines)| !lines.is_empty()).map(|(heading, lines)| RecordPart { heading, lines });
        Self { title: format!("Technical note on an equivalent dipole: map “{name}”"), parts: parts.collect() }
    }
}

fn inputs(report: &Report, index: usize, count: usize, name: &str) -> Vec<String> {
    let files = report.inputs.iter().map(|input| format!("{}: SHA-256 {}", input.name, input.sha256));
    let kind = match report.understood.columns_are {
        ColumnsAre::Components => "components of one decomposition",
        ColumnsAre::TimePoints => "time points of one response",
        ColumnsAre::Repeats => "repeats of one map",
        ColumnsAre::Unrelated => "maps",
    };
    files.chain([format!("Map “{name}”: {} of {count} ({kind})", index + 1)]).collect()
}

/// Where a message turns to who reads it on the page, asking for something.
const ASKS: [&str; 7] =
    [": please ", " Check ", " If its ", " Give ", " and should ", ": if that is right", " Shells for this "];

/// What a message states.
fn stated(message: &str) -> String {
    let end = ASKS.iter().filter_map(|ask| message.find(ask)).min().unwrap_or(message.len());
    let text = message[..end].replace("as you chose", "as set by hand");
    if text.ends_with('.') { text } else { format!("{text}.") }
}

fn assumed(report: &Report) -> Vec<String> {
    let settled = |from: &Origin| matches!(from, Origin::Setting | Origin::Assumed);
    let choices =
        report.understood.choices.iter().filter(|choice| settled(&choice.from)).map(|choice| match &choice.file {
            Some(file) => format!("{file}: {}", stated(&choice.sentence)),
            None => stated(&choice.sentence),
        });
    choices.chain(report.notes.iter().map(|note| stated(&note.message))).collect()
}

fn model(report: &Report) -> Vec<String> {
    let head = head_sheet(&report.head);
    let labels = |used: bool| -> Vec<&str> {
        report.electrodes.iter().filter(|one| one.used == used).map(|one| one.label.as_str()).collect()
    };
    let (used, left_out) = (labels(true), labels(false));
    let mut told = vec![format!("{} ({})", head.title, head.source)];
    told.extend(head.rows.iter().map(line));
    told.push(format!("Electrodes used ({}): {}", used.len(), used.join(", ")));
    if !left_out.is_empty() {
        told.push(format!("Electrodes left out ({}): {}", left_out.len(), left_out.join(", ")));
    }
    told.push("Reference: average of the electrodes used".into());
    told
}

fn of_fitted(
    report: &Report,
    map: &FittedMap,
    alternatives: Option<&Alternatives>,
    done: &Done,
) -> Vec<(&'static str, Vec<String>)> {
    let placed = report.electrodes.len();
    let numbers = rows(map, &report.head, map.measured.len(), placed);
    let numbers = numbers.iter().filter(|row| !["electrodes", "head", "head_radius_mm"].contains(&row.code.as_ref()));
    let mut told = vec![("Fit", vec![sentence(map, &report.head)]), ("Numbers", numbers.map(line).collect())];
    if let Some(region) = map.region.as_ref().filter(|_| done.region) {
        let unit = Written::of(report.settings.map_unit);
        let by =
            causes(region, unit).into_iter().map(|one| format!("{}, {}: {} mm per axis", one.label, one.size, one.sd));
        told.push(("Uncertainty", region_rows(region, unit).iter().map(line).chain(by).collect()));
    }
    if let Some(verdict) = map.verdict.as_ref().filter(|_| done.verdict) {
        let reasons = verdict.reasons.iter().map(|reason| reason.text.clone());
        let on = "The verdict rests on simulated maps and conventional limits; it is about one equivalent dipole in this model.";
        told.push(("Verdict", [verdict.text.clone()].into_iter().chain(reasons).chain([on.to_owned()]).collect()));
    }
    if let Some(found) = alternatives {
        let kinds = found
            .kinds
            .iter()
            .map(|one| format!("{}: {}", super::sheet::capitalised(one.label), stated(&one.sentence)));
        told.push(("Other explanations", kinds.collect()));
    }
    told
}

fn of_failed(error: &ErrorReport) -> Vec<String> {
    vec!["No dipole was fitted to this map.".into(), error.message.clone()]
}

fn limits(report: &Report) -> Vec<String> {
    let used = report.electrodes.iter().filter(|electrode| electrode.used).count();
    let few = (used < crate::placement::FEW_ELECTRODES)
        .then(|| format!("With {used} electrodes almost any map can look like one dipole."));
    let fixed = LIMITS.into_iter().chain([PUBLISHED, CAUTIONS[1], CAUTIONS[0]]).map(str::to_owned);
    fixed.chain(few).collect()
}

fn line(row: &Row) -> String {
    let gap = if row.unit.is_empty() { "" } else { " " };
    format!("{}: {}{gap}{}", row.label, row.value, row.unit)
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::finding::{Code, Finding};
    use crate::report::message;

    #[test]
    fn a_record_states_and_asks_for_nothing() {
        for &code in Code::ALL {
            let told = stated(&message(&Finding::new(code))).to_lowercase();
            for word in ["please", "should", " check ", "give a"] {
                assert!(!told.contains(word), "{told}");
            }
        }
    }
}
