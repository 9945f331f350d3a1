use super::grid::{Grid, Header};
use super::positions::{columns_choice, label_of, label_wish};
use super::{Columns, Found, MapsAre, Orientation, Wishes};
use crate::electrode::{Kind, Label, Reading};
use crate::finding::{Choice, Code, Error, Finding, Origin, Place};
use crate::map::Maps;
use crate::read::{MOST_ELECTRODES, MOST_MAPS, is_missing};
use ndarray::Array2;
use std::collections::HashSet;

const INPUT: &str = "maps";

/// Names that are looked at to tell whether they are labels.
const SAMPLE: usize = 600;

/// Maps, and what their table has of its own.
pub(super) struct Read {
    pub maps: Maps,
    /// Whether it has labels.
    pub labelled: bool,
    /// Whether it has names for the maps.
    pub named: bool,
}

/// Maps of a grid: a column, a row, or a matrix of either orientation. Labels stand in a column or in the header, whichever holds more
/// names of sites or of the electrodes known; a matrix without labels takes those of a list or a table of electrodes
/// as long as one of its sides. Maps are named by the other side, otherwise by their number. A missing value becomes NaN.
///
/// # Errors
/// `table-columns`, `shape-unmatched`, `maps-none`, `maps-too-many`, `electrodes-too-many`, `number-expected`,
/// `number-range`.
pub(super) fn read_maps(
    grid: &Grid<'_>,
    beside: &[usize],
    known: &[Vec<Label>],
    numbered: Option<usize>,
    wishes: &Wishes,
    found: &mut Found,
) -> Result<Read, Error> {
    let first = Place { line: Some(grid.first_line()), ..found.place(INPUT, grid) };
    let whole = Place { line: None, ..first.clone() };
    let none = || Error::from(Finding::new(Code::MapsNone).at(whole.clone()));
    let mut label = label_wish(grid, wishes, None, found)?.or(numbered);
    let (mut columns, mut passed_over) = value_columns(grid, label, beside);
    let keys: HashSet<String> = known.iter().flatten().map(Label::key).collect();
    let (orientation, from) = orientation(grid, label, &columns, known, &keys, wishes);
    let Some(orientation) = orientation else {
        return Err(match known.iter().map(Vec::len).find(|&count| count > 0) {
            None => {
                let finding = Finding::new(Code::TableColumns).at(first);
                finding.with("lacks", "label-column").with("width", grid.width()).into()
            }
            Some(count) => {
                let finding = Finding::new(Code::ShapeUnmatched).at(whole);
                finding.with("rows", grid.height()).with("columns", columns.len()).with("labels", count).into()
            }
        });
    };
    if orientation == Orientation::ChannelsInColumns && label.is_none() {
        label = if names_maps(grid, &columns, &keys) {
            Some(columns.remove(0))
        } else {
            // What counts the rows counts the maps here.
            passed_over.iter().position(|&column| grid.counts(column)).map(|index| passed_over.remove(index))
        };
    }
    if columns.is_empty() || grid.height() == 0 {
        return Err(none());
    }
    let in_rows = orientation == Orientation::ChannelsInRows;
    let (electrodes, count) = if in_rows { (grid.height(), columns.len()) } else { (columns.len(), grid.height()) };
    for (code, number, most) in
        [(Code::MapsTooMany, count, MOST_MAPS), (Code::ElectrodesTooMany, electrodes, MOST_ELECTRODES)]
    {
        if number > most {
            let place = Place { line: None, ..first };
            return Err(Finding::new(code).at(place).with("found", number).with("most", most).into());
        }
    }
    let header = || columns.iter().map(|&column| grid.name(column)).collect::<Vec<_>>();
    let has_header = grid.header != Header::Absent && header().iter().any(|name| !name.is_empty());
    let by_order = || known.iter().find(|labels| labels.len() == electrodes && !unnamed(labels)).cloned();
    let mut labelled = true;
    let labels = match (in_rows, label) {
        (true, Some(column)) => {
            (0..electrodes).map(|row| label_of(grid, row, column, INPUT, found)).collect::<Result<_, _>>()?
        }
        (false, _) if has_header => header().into_iter().map(Label::new).collect(),
        _ => {
            labelled = false;
            by_order().ok_or_else(|| {
                let finding = Finding::new(Code::ShapeUnmatched).at(whole.clone());
                let labels = known.iter().map(Vec::len).max().unwrap_or(0);
                Error::from(finding.with("rows", grid.height()).with("columns", columns.len()).with("labels", labels))
            })?
        }
    };
    let mut named = false;
    let name = |index: usize| {
        let written = match (in_rows, label) {
            (true, _) => columns.get(index).map_or("", |&column| grid.name(column)),
            (false, Some(column)) => grid.word(index, column),
            (false, None) => "",
        };
        named |= !written.is_empty();
        if written.is_empty() { format!("map {}", index + 1) } else { written.to_owned() }
    };
    let names: Vec<String> = (0..count).map(name).collect();
    let lines: Vec<usize> =
        if in_rows { (0..electrodes).map(|row| grid.line(row)).collect() } else { vec![grid.first_line(); electrodes] };
    let mut values = Array2::from_elem((electrodes, count), f64::NAN);
    for row in 0..grid.height() {
        for (index, &column) in columns.iter().enumerate() {
            let (electrode, map) = if in_rows { (row, index) } else { (index, row) };
            let place = || Place {
                label: labels.get(electrode).map(Label::to_string),
                map: names.get(map).cloned(),
                line: Some(grid.line(row)),
                column: Some(column + 1),
                ..found.place(INPUT, grid)
            };
            if let Some(value) = values.get_mut((electrode, map)) {
                *value = grid.value(row, column, place)?;
            }
        }
    }
    let file = found.file_name(grid);
    found.choices.push(
        Choice::new("orientation", from, orientation.name())
            .about(&file)
            .options(Orientation::ALL.map(Orientation::name)),
    );
    if from == Origin::Assumed && !labelled {
        let place = found.place(INPUT, grid);
        found.notes.push(
            Finding::new(Code::OrientationAssumed)
                .at(place)
                .with("rows", grid.height())
                .with("electrode", if in_rows { "row" } else { "column" }),
        );
    }
    if let Some(column) = label.filter(|_| in_rows) {
        let wished = wishes.files.get(&file).is_some_and(|wish| wish.label.is_some());
        let from = if wished { Origin::Setting } else { Origin::Found };
        found.choices.push(columns_choice("label", grid, column, from, found).of_file(&file));
    }
    if !passed_over.is_empty() {
        let names: Vec<String> = passed_over.iter().map(|&column| grid.written(column)).collect();
        found.notes.push(Finding::new(Code::ColumnsPassedOver).at(found.place(INPUT, grid)).with("columns", names));
    }
    // Of the columns of values the first and the last tell which they are.
    let ends = columns.first().into_iter().chain(columns.last().filter(|last| Some(*last) != columns.first()));
    let used = ends.map(|&column| (column, "value")).collect();
    found.columns = Columns { passed_over, ..Columns::new(label, used) };
    Ok(Read { maps: Maps { labels, lines, names, values }, labelled, named })
}

/// Whether the first of several columns, one for each channel, holds the times or the numbers of the maps: it says so, or has
/// no name or none of a channel, and rises.
fn names_maps(grid: &Grid<'_>, columns: &[usize], keys: &HashSet<String>) -> bool {
    let &[first, _, ..] = columns else { return false };
    let name = grid.name(first).trim().to_ascii_lowercase();
    let value = |row: usize| grid.number(row, first);
    let rises = (1..grid.height()).all(|row| value(row - 1).zip(value(row)).is_some_and(|(one, next)| one < next));
    let says = name.starts_with("time") || ["t", "latency", "sample", "index"].contains(&name.as_str());
    let has_names = grid.header != Header::Absent;
    let channel = is_label(&name, keys);
    has_names && !channel && rises && (says || name.is_empty() || grid.height() > 2)
}

fn is_label(name: &str, keys: &HashSet<String>) -> bool {
    let label = Label::new(name);
    keys.contains(&label.key()) || matches!(Reading::of(&label).kind, Kind::Site(_))
}

fn unnamed(labels: &[Label]) -> bool {
    labels.iter().all(|label| label.as_str().is_empty())
}

/// Columns that hold values, and those that hold words or count the rows.
fn value_columns(grid: &Grid<'_>, label: Option<usize>, beside: &[usize]) -> (Vec<usize>, Vec<usize>) {
    let others = (0..grid.width()).filter(|column| Some(*column) != label && !beside.contains(column));
    if grid.is_numeric() {
        return (others.collect(), Vec::new());
    }
    let rows = grid.height();
    let only_words =
        |column: usize| !grid.has_numbers(column) && (0..rows).any(|row| !is_missing(grid.word(row, column)));
    let counting = |column: usize| {
        let name = grid.name(column);
        let plain = ["", "no", "nr", "no.", "#", "number", "index", "id"].iter().any(|n| name.eq_ignore_ascii_case(n));
        plain && grid.counts(column) || label.is_some_and(|label| column < label) && grid.numbers_rows(column, label)
    };
    let (values, passed_over): (Vec<usize>, Vec<usize>) = if beside.is_empty() {
        others.partition(|&column| !only_words(column) && !counting(column))
    } else {
        let values: Vec<usize> = super::role::values_beside(grid, label, beside).collect();
        // They rise.
        others.partition(|column| values.binary_search(column).is_ok())
    };
    // A table in which nothing but words was found is told by its first wrong field.
    if values.is_empty() { (passed_over, Vec::new()) } else { (values, passed_over) }
}

/// Which way a grid lies; `None` where neither side can have labels.
fn orientation(
    grid: &Grid<'_>,
    label: Option<usize>,
    columns: &[usize],
    known: &[Vec<Label>],
    keys: &HashSet<String>,
    wishes: &Wishes,
) -> (Option<Orientation>, Origin) {
    if let Some(wish) = wishes.orientation {
        return (Some(wish), Origin::Setting);
    }
    // How many percent of the names are labels, and how many they are: of two maps `M1` and `M2` all are.
    let share = |names: &mut dyn Iterator<Item = &str>| {
        let (mut labels, mut all) = (0, 0);
        for name in names.take(SAMPLE) {
            all += 1;
            labels += usize::from(is_label(name, keys));
        }
        ((100 * labels).checked_div(all).unwrap_or(0), labels)
    };
    let above = share(&mut columns.iter().map(|&column| grid.name(column)));
    let beside = share(&mut (0..grid.height()).filter_map(|row| Some(grid.word(row, label?))));
    if above.0 >= 50 && above > beside {
        return (Some(Orientation::ChannelsInColumns), Origin::Found);
    }
    let fits = |side: usize| known.iter().any(|labels| labels.len() == side && !unnamed(labels));
    let has_header = grid.header != Header::Absent;
    if label.is_some() && !has_header && beside.1 == 0 && fits(columns.len()) && !fits(grid.height()) {
        // Names of maps, whose values follow the order of the electrodes.
        return (Some(Orientation::ChannelsInColumns), Origin::Found);
    }
    if label.is_some() {
        return (Some(Orientation::ChannelsInRows), if beside.0 >= 50 { Origin::Found } else { Origin::Assumed });
    }
    let unmixing = wishes.maps_are == Some(MapsAre::Unmixing);
    match (fits(grid.height()), fits(columns.len())) {
        // An unmixing matrix has a row for each component.
        (true, true) if unmixing => (Some(Orientation::ChannelsInColumns), Origin::Assumed),
        (true, true) if grid.height() == columns.len() => (Some(Orientation::ChannelsInRows), Origin::Assumed),
        (true, _) => (Some(Orientation::ChannelsInRows), Origin::Found),
        (false, true) => (Some(Orientation::ChannelsInColumns), Origin::Found),
        (false, false) => (None, Origin::Assumed),
    }
}
