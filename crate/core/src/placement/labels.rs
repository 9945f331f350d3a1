//! Labels of the maps to labels of the electrodes.

use super::{Placed, Wishes};
use crate::electrode::{Electrode, Grade, Kind, Label, Other, Reading, Second};
use crate::finding::{Code, Error, Finding, Place};
use crate::map::Maps;
use crate::math::Vec3;
use std::collections::{BTreeMap, HashMap, HashSet};

/// What became of the labels.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct LabelsFound {
    /// Electrodes with position and value.
    pub matched: usize,
    /// Labels of the maps that stand for an electrode written in another way, case aside: from, to.
    pub renamed: Vec<(String, String)>,
    /// Electrodes without a value.
    pub without_value: Vec<String>,
    /// Labels of the maps without a position.
    pub without_position: Vec<String>,
    /// Channels and points that are not on the scalp.
    pub not_scalp: Vec<String>,
    /// Electrodes whose values were interpolated.
    pub interpolated: Vec<String>,
    /// The reference that the labels name.
    pub reference: Option<String>,
}

/// Electrodes with position and value, positions still in the unit of the table.
pub(super) struct Matched {
    pub electrodes: Vec<Placed>,
    pub found: LabelsFound,
}

/// Labels of one table with what they say.
struct Names<'a> {
    labels: Vec<&'a Label>,
    readings: Vec<Reading>,
}

impl<'a> Names<'a> {
    fn new(labels: Vec<&'a Label>) -> Self {
        let readings = readings(&labels);
        Self { labels, readings }
    }
}

/// What labels of one table say. Where they number through a letter they say nothing: beside A3 or C17, A1 is no ear and C3
/// no site, beside E3, E1 is no eye.
pub(super) fn readings(labels: &[&Label]) -> Vec<Reading> {
    let mut readings: Vec<Reading> = labels.iter().map(|label| Reading::of(label)).collect();
    let numbered = |reading: &Reading| -> Option<(char, u32)> {
        let letter = reading.key.chars().next().filter(char::is_ascii_alphabetic)?;
        Some((letter, reading.key.get(1..)?.parse().ok()?))
    };
    // Sites with one letter reach number 12 in some caps, ears, mastoids and eyes number 2.
    let beyond = |(letter, number): &(char, u32)| *number > if "ame".contains(*letter) { 2 } else { 12 };
    let series: String = readings.iter().filter_map(numbered).filter(beyond).map(|(letter, _)| letter).collect();
    for (reading, label) in readings.iter_mut().zip(labels) {
        match numbered(reading) {
            Some((letter, _)) if series.contains(letter) => forget(reading, label),
            Some(('e', 1 | 2)) => reading.kind = Kind::Other(Other::Eye),
            _ => {}
        }
    }
    readings
}

/// A name that is nothing known after all.
fn forget(reading: &mut Reading, label: &Label) {
    let key = label.key().chars().filter(|c| c.is_alphanumeric()).collect();
    *reading = Reading { name: label.to_string(), key, kind: Kind::Unknown, second: None };
}

/// Brings the labels of the maps and those of the table together: as written, upper and lower case alike; else by what is
/// in them beside prefix, suffix, blanks and marks; else by the site they stand for under its old or its new name.
pub(super) fn match_labels(
    table: Option<&[Electrode]>,
    measured: bool,
    maps: &Maps,
    wishes: &Wishes,
) -> Result<Matched, Error> {
    let mut names = Names::new(maps.labels.iter().collect());
    let electrodes = table.unwrap_or_default();
    let known = Names::new(electrodes.iter().map(|e| &e.label).collect());
    let index = Index::new(&known);
    let mut found = LabelsFound::default();
    let positioned =
        |label: &Label| index.exact(label).is_some_and(|i| electrodes.get(i).is_some_and(|e| e.position.is_some()));

    let keys = |labels: &[Label]| labels.iter().map(Label::key).collect::<HashSet<_>>();
    let (scalp, others) = (keys(&wishes.scalp), keys(&wishes.other_channels));
    let mut rows = Vec::new();
    for (row, (label, reading)) in maps.labels.iter().zip(&names.readings).enumerate() {
        let key = label.key();
        if !scalp.contains(&key) && (others.contains(&key) || off_scalp(reading, positioned(label))) {
            found.not_scalp.push(label.to_string());
        } else if maps.values.row(row).iter().all(|value| value.is_nan()) {
            if table.is_none() {
                found.without_value.push(label.to_string());
            }
        } else {
            rows.push(row);
        }
    }
    if maps.values.iter().all(|value| value.is_nan()) {
        return Err(Finding::new(Code::MapsNone).at(Place::input("maps")).into());
    }
    found.reference = reference(&mut names, &rows, maps, wishes)?;

    let mut placed: Vec<Placed> = Vec::new();
    for row in rows {
        let (Some(label), Some(reading)) = (maps.labels.get(row), names.readings.get(row)) else { continue };
        let electrode = match table {
            Some(_) => index
                .find(label, reading, &known, line(maps, row))?
                .and_then(|i| Some((electrodes.get(i)?, known.readings.get(i)?))),
            None => None,
        };
        let (shown, position) = match (electrode, table) {
            (Some((electrode, other)), _) => {
                (electrode.label.clone(), if measured { electrode.position } else { site(other).or(site(reading)) })
            }
            (None, Some(_)) => (label.clone(), None),
            (None, None) => (Label::new(&reading.name), site(reading)),
        };
        let Some(position_mm) = position else {
            found.without_position.push(label.to_string());
            continue;
        };
        let to = match (electrode, reading.kind) {
            (None, Kind::Site(site)) => site.name.clone(),
            _ => shown.to_string(),
        };
        if Label::new(&to) != *label {
            found.renamed.push((label.to_string(), to));
        }
        let mut keys = vec![shown.key(), label.key()];
        keys.extend(loose_keys(reading));
        let line = electrode.map(|(electrode, _)| electrode.line);
        placed.push(Placed { label: shown, position_mm, row, used: true, line, keys });
    }
    refuse_duplicates(&placed, maps, &names)?;
    if placed.is_empty() {
        return Err(unmatched(maps, electrodes));
    }

    let valued: HashSet<String> = placed.iter().map(|e| e.label.key()).collect();
    for (electrode, reading) in electrodes.iter().zip(&known.readings) {
        if valued.contains(&electrode.label.key()) || (electrode.position.is_none() && measured) {
            continue;
        }
        let list = if off_scalp(reading, electrode.position.is_some()) {
            &mut found.not_scalp
        } else {
            &mut found.without_value
        };
        if !list.iter().any(|label| Label::new(label) == electrode.label) {
            list.push(electrode.label.to_string());
        }
    }
    found.matched = placed.len();
    Ok(Matched { electrodes: placed, found })
}

/// Whether a channel or a point does not measure the scalp. A reference with a place of its own is an electrode.
fn off_scalp(reading: &Reading, positioned: bool) -> bool {
    match reading.kind {
        Kind::Other(Other::Reference | Other::Auxiliary) => !positioned,
        Kind::Other(_) | Kind::Landmark(_) => true,
        Kind::Site(_) | Kind::Unknown => false,
    }
}

fn site(reading: &Reading) -> Option<Vec3> {
    match reading.kind {
        Kind::Site(site) => Some(site.direction),
        _ => None,
    }
}

fn site_key(reading: &Reading) -> Option<String> {
    match reading.kind {
        Kind::Site(site) => Some(site.name.to_ascii_lowercase()),
        _ => None,
    }
}

/// What an electrode may be called besides its label: the name in it and the site.
pub(super) fn loose_keys(reading: &Reading) -> Vec<String> {
    [reading.key.clone()].into_iter().chain(site_key(reading)).collect()
}

/// Electrodes of a table by what they are called.
struct Index {
    /// By the label as written, the key in it, the site it stands for.
    levels: [HashMap<String, Vec<usize>>; 3],
}

impl Index {
    fn new(names: &Names) -> Self {
        let mut levels: [HashMap<String, Vec<usize>>; 3] = Default::default();
        for (i, (label, reading)) in names.labels.iter().zip(&names.readings).enumerate() {
            let keys = [Some(label.key()), Some(reading.key.clone()), site_key(reading)];
            for (level, key) in levels.iter_mut().zip(keys) {
                if let Some(key) = key {
                    level.entry(key).or_default().push(i);
                }
            }
        }
        Self { levels }
    }

    fn exact(&self, label: &Label) -> Option<usize> {
        self.levels[0].get(&label.key()).and_then(|found| found.first().copied())
    }

    /// The electrode that a label of the maps stands for.
    fn find(&self, label: &Label, reading: &Reading, names: &Names, line: usize) -> Result<Option<usize>, Error> {
        let keys = [Some(label.key()), Some(reading.key.clone()), site_key(reading)];
        for (level, key) in self.levels.iter().zip(keys) {
            match key.and_then(|key| level.get(&key)).map(Vec::as_slice) {
                None | Some([]) => {}
                Some([one]) => return Ok(Some(*one)),
                Some(several) => {
                    let labels: Vec<String> =
                        several.iter().filter_map(|&i| names.labels.get(i)).map(|label| label.to_string()).collect();
                    let place = Place { label: Some(label.to_string()), ..Place::line("maps", line) };
                    return Err(Finding::new(Code::LabelAmbiguous)
                        .at(place)
                        .with("label", label.as_str())
                        .with("electrodes", labels)
                        .into());
                }
            }
        }
        Ok(None)
    }
}

/// The reference that all labels name, as in `Fp1-Ref`. Labels that are left out have no say.
fn reference(names: &mut Names, rows: &[usize], maps: &Maps, wishes: &Wishes) -> Result<Option<String>, Error> {
    let left_out: Vec<Reading> = wishes.exclude.iter().chain(&wishes.interpolated).map(Reading::of).collect();
    let counts = |row: &usize| {
        let (Some(label), Some(reading)) = (names.labels.get(*row), names.readings.get(*row)) else { return false };
        let named = |other: &Reading| {
            other.name == label.as_str() || (other.key == reading.key && other.second == reading.second)
        };
        !left_out.iter().any(named)
    };
    let rows: Vec<usize> = rows.iter().copied().filter(counts).collect();
    let of = |row: usize| names.readings.get(row).and_then(|reading| reading.second.as_ref());
    let sites =
        rows.iter().filter(|&&row| names.readings.get(row).is_some_and(|r| matches!(r.kind, Kind::Site(_)))).count();
    let mut seconds: BTreeMap<String, Vec<usize>> = BTreeMap::new();
    for &row in &rows {
        if let Some(second) = of(row) {
            seconds.entry(second.key()).or_default().push(row);
        }
    }
    let text = |row: usize| of(row).map(|second| second.text().to_owned());
    // One suffix of most labels is the reference, whatever it is called.
    if let [most] = seconds.values().collect::<Vec<_>>()[..]
        && 2 * most.len() > sites
        && most.len() > 1
    {
        let named = |text: &String| text.contains(char::is_alphabetic);
        return Ok(most.first().and_then(|&row| text(row)).filter(named));
    }
    let labels = |rows: &[usize]| -> Vec<String> {
        rows.iter().filter_map(|&row| names.labels.get(row)).map(|l| l.to_string()).collect()
    };
    let bipolar: Vec<usize> = rows.iter().copied().filter(|&row| matches!(of(row), Some(Second::Site(_)))).collect();
    let refused = |code: Code, rows: &[usize]| {
        let labels = labels(rows);
        let first = rows.first().map_or(1, |&row| line(maps, row));
        let place = Place { label: labels.first().cloned(), ..Place::line("maps", first) };
        Error::from(Finding::new(code).at(place).with("labels", labels))
    };
    if !bipolar.is_empty() {
        return Err(refused(Code::LabelBipolar, &bipolar));
    }
    let named: Vec<&Vec<usize>> = seconds
        .values()
        .filter(|rows| rows.first().is_some_and(|&row| matches!(of(row), Some(Second::Reference(_)))))
        .collect();
    if named.len() > 1 {
        let examples: Vec<usize> = named.iter().filter_map(|rows| rows.first().copied()).collect();
        return Err(refused(Code::ReferenceMixed, &examples));
    }
    let reference = named.first().and_then(|rows| rows.first()).and_then(|&row| text(row));
    // What follows a name and is no reference belongs to the name.
    let unknown: Vec<usize> = rows.iter().copied().filter(|&row| matches!(of(row), Some(Second::Unknown(_)))).collect();
    for row in unknown {
        if let (Some(reading), Some(label)) = (names.readings.get_mut(row), names.labels.get(row)) {
            forget(reading, label);
        }
    }
    Ok(reference)
}

/// No electrode and no site may have two rows of values.
fn refuse_duplicates(placed: &[Placed], maps: &Maps, names: &Names) -> Result<(), Error> {
    let mut seen: HashMap<String, usize> = HashMap::new();
    for electrode in placed {
        let site = names.readings.get(electrode.row).and_then(site_key).map(|key| format!("site {key}"));
        for key in site.into_iter().chain([format!("label {}", electrode.label.key())]) {
            let Some(first) = seen.insert(key, electrode.row) else { continue };
            if first == electrode.row {
                continue;
            }
            let label = |row: usize| maps.labels.get(row).map(Label::to_string).unwrap_or_default();
            let place = Place { label: Some(label(electrode.row)), ..Place::line("maps", line(maps, electrode.row)) };
            return Err(Finding::new(Code::LabelDuplicate)
                .at(place)
                .with("label", label(electrode.row))
                .with("other", label(first))
                .with("first_line", line(maps, first))
                .into());
        }
    }
    Ok(())
}

/// The line of a row of the maps.
fn line(maps: &Maps, row: usize) -> usize {
    maps.lines.get(row).copied().unwrap_or(1)
}

fn unmatched(maps: &Maps, electrodes: &[Electrode]) -> Error {
    let some = |labels: Vec<String>| labels.into_iter().take(5).collect::<Vec<_>>();
    Finding::new(Code::LabelsUnmatched)
        .at(Place::input("maps"))
        .with("maps", some(maps.labels.iter().map(Label::to_string).collect()))
        .with("electrodes", some(electrodes.iter().map(|e| e.label.to_string()).collect()))
        .into()
}

impl LabelsFound {
    /// The notes about labels; `approximate` are those on approximate standard places.
    pub(super) fn notes(&self) -> Vec<Finding> {
        let mut notes = Vec::new();
        let mut note = |code, input, labels: Vec<String>| {
            if !labels.is_empty() {
                notes.push(Finding::new(code).at(Place::input(input)).with("labels", labels));
            }
        };
        note(Code::LabelsRenamed, "maps", self.renamed.iter().map(|(from, to)| format!("{from} → {to}")).collect());
        note(Code::NotScalp, "maps", self.not_scalp.clone());
        note(Code::ValuesWithoutPosition, "maps", self.without_position.clone());
        note(Code::PositionsWithoutValue, "electrodes", self.without_value.clone());
        if let Some(reference) = &self.reference {
            notes.push(
                Finding::new(Code::ReferenceNamed).at(Place::input("maps")).with("reference", reference.as_str()),
            );
        }
        notes
    }
}

/// Electrodes on mastoids and ear lobes at their approximate standard places.
pub(super) fn approximate(electrodes: &[Placed]) -> Vec<String> {
    let near = |e: &&Placed| matches!(Reading::of(&e.label).kind, Kind::Site(site) if site.grade == Grade::Approximate);
    electrodes.iter().filter(near).map(|e| e.label.to_string()).collect()
}
