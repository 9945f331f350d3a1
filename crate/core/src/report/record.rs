//! A technical note on the fit of one map, to go with a record: what went in, what was assumed, numbers and limits. It gives
//! no advice and finds nothing, whatever the verdict.

use super::choices::option_label;
use super::messages::clipped;
use super::sheet::{Row, Written, head_sheet, rows, sentence};
use super::trust::{CAUTIONS, PUBLISHED, causes, region_rows};
use super::{Alternatives, Done, FittedMap, MapReport, Program, Report};
use crate::finding::Origin;
use crate::placement::FEW_ELECTRODES;
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
        let name = match map {
            MapReport::Fitted(map) => clipped(&map.name),
            MapReport::Failed { name, .. } => clipped(name),
        };
        let mut record =
            Self { title: format!("Technical note on an equivalent dipole: map “{name}”"), parts: Vec::new() };
        record.part("Status", &[STATUS, CAUTIONS[2]]);

        record.part("Inputs", &[]);
        for input in &report.inputs {
            record.line(format!("{}: SHA-256 {}", input.name, input.sha256));
        }
        let are = option_label("columnsAre", &report.understood.columns_are.name().into(), None);
        record.line(format!("Map “{name}”: {} of {count} ({are})", index + 1));

        record.part("Found and assumed", &[]);
        for choice in &report.understood.choices {
            if matches!(choice.from, Origin::Setting | Origin::Assumed) {
                let file = choice.file.as_ref().map_or_else(String::new, |file| format!("{file}: "));
                record.line(file + &stated(&choice.sentence));
            }
        }
        for note in &report.notes {
            record.line(stated(&note.message));
        }

        let head = head_sheet(&report.head);
        record.part("Model", &[]);
        record.line(format!("{} ({})", head.title, head.source));
        record.rows(&head.rows);
        for (used, what) in [(true, "used"), (false, "left out")] {
            let mut labels: Vec<String> = Vec::new();
            for electrode in &report.electrodes {
                if electrode.used == used {
                    labels.push(clipped(&electrode.label));
                }
            }
            if !labels.is_empty() {
                record.line(format!("Electrodes {what} ({}): {}", labels.len(), labels.join(", ")));
            }
        }
        record.line("Reference: average of the electrodes used".into());

        match map {
            MapReport::Fitted(map) => record.fitted(report, map, alternatives, done),
            MapReport::Failed { error, .. } => {
                record.part("Fit", &["This map could not be fitted."]);
                record.line(stated(&error.message));
            }
        }

        record.part("Limits", &LIMITS);
        for line in [PUBLISHED, CAUTIONS[1]] {
            record.line(line.into());
        }
        let used = report.electrodes.iter().filter(|electrode| electrode.used).count();
        if used < FEW_ELECTRODES {
            record.line(format!("With {used} electrodes almost any map can look like one dipole."));
        }
        let Program { name, version, build } = &report.program;
        record.part("Program", &[]);
        record.line(format!(
            "{name}, version {version}{}{}",
            if build.is_some() { ", build " } else { "" },
            build.unwrap_or_default()
        ));
        record
    }

    fn fitted(&mut self, report: &Report, map: &FittedMap, alternatives: Option<&Alternatives>, done: &Done) {
        self.part("Fit", &[&sentence(map, &report.head)]);
        self.part("Numbers", &[]);
        let mut numbers = rows(map, &report.head, map.measured.len(), report.electrodes.len());
        // They stand above, with the model.
        numbers.retain(|row| !["electrodes", "head", "head_radius_mm"].contains(&row.code.as_ref()));
        self.rows(&numbers);
        if let (true, Some(region)) = (done.region, &map.region) {
            let unit = Written::of(report.settings.map_unit);
            self.part("Uncertainty", &[]);
            self.rows(&region_rows(region, unit));
            for cause in causes(region, unit) {
                self.line(format!("{}, {}: {} mm per axis", cause.label, cause.size, cause.sd));
            }
        }
        if let (true, Some(verdict)) = (done.verdict, &map.verdict) {
            self.part("Verdict", &[&verdict.text]);
            for reason in &verdict.reasons {
                self.line(reason.text.clone());
            }
            self.line("The verdict rests on simulated maps and conventional limits; it is about one equivalent dipole in this model.".into());
            self.line(CAUTIONS[0].into());
        }
        if let Some(found) = alternatives {
            self.part("Other explanations", &[]);
            for one in &found.kinds {
                self.line(format!("{}: {}", one.label, stated(&one.sentence)));
            }
        }
    }

    fn part(&mut self, heading: &'static str, lines: &[&str]) {
        self.parts.push(RecordPart { heading, lines: Vec::new() });
        for line in lines {
            self.line((*line).to_owned());
        }
    }

    /// One more line of the last part.
    fn line(&mut self, line: String) {
        if let Some(part) = self.parts.last_mut() {
            part.lines.push(line);
        }
    }

    fn rows(&mut self, rows: &[Row]) {
        for row in rows {
            let gap = if row.unit.is_empty() { "" } else { " " };
            self.line(format!("{}: {}{gap}{}", row.label, row.value, row.unit));
        }
    }
}

/// Where a message turns to who reads it on the page, asking for something.
const ASKS: [&str; 7] =
    [": please ", " Check ", " If its ", " Give ", " and should ", ": if that is right", " Shells for this "];

/// What a message states.
fn stated(message: &str) -> String {
    let mut end = message.len();
    for ask in ASKS {
        end = end.min(message.find(ask).unwrap_or(end));
    }
    let text = &message[..end];
    format!("{text}{}", if text.ends_with('.') { "" } else { "." })
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::finding::{Code, Finding};
    use crate::report::message;

    #[test]
    fn a_record_states_and_asks_for_nothing() {
        for &code in Code::ALL {
            let told = stated(&message(&Finding::new(code))).to_ascii_lowercase();
            for word in ["please", "should", " check ", "give a"] {
                assert!(!told.contains(word), "{told}");
            }
        }
    }
}
