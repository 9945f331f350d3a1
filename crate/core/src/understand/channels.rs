use super::grid::Grid;
use super::positions::label_of;
use super::{Columns, Found};
use crate::electrode::Label;
use crate::finding::{Code, Error, Finding, Place};
use crate::read::MOST_ELECTRODES;

/// What a table of channels declares.
#[derive(Debug, Default)]
pub(super) struct Declared {
    /// In the order of the recording; of more than electrodes there may be, the first ones.
    pub all: Vec<Label>,
    pub scalp: Vec<Label>,
    pub other: Vec<Label>,
    pub bad: Vec<Label>,
}

/// Types and states of channels, as in a `*_channels.tsv` of the Brain Imaging Data Structure (BIDS 1.10,
/// "Channels description table"): `type` EEG is scalp EEG, anything else is not; `status` bad is bad.
///
/// # Errors
/// `table-columns` where a channel has no name.
pub(super) fn read_channels(grid: &Grid<'_>, found: &mut Found) -> Result<Declared, Error> {
    let named = |wanted: &str| grid.column(|name| name.eq_ignore_ascii_case(wanted));
    let place = Place { line: Some(grid.first_line()), ..found.place("channels", grid) };
    let label = grid.label_column().ok_or_else(|| {
        Error::from(
            Finding::new(Code::TableColumns).at(place).with("lacks", "label-column").with("width", grid.width()),
        )
    })?;
    let (kind, status) = (named("type"), named("status"));
    let mut declared = Declared::default();
    for row in 0..grid.height() {
        let name = label_of(grid, row, label, "channels", found)?;
        let says = |column: Option<usize>, word: &str| {
            column.is_some_and(|column| grid.word(row, column).eq_ignore_ascii_case(word))
        };
        if row <= MOST_ELECTRODES {
            declared.all.push(name.clone());
        }
        match kind {
            Some(_) if says(kind, "eeg") => declared.scalp.push(name.clone()),
            Some(column) if !crate::read::is_missing(grid.word(row, column)) => declared.other.push(name.clone()),
            _ => {}
        }
        if says(status, "bad") {
            declared.bad.push(name);
        }
    }
    let others = kind.map(|column| (column, "type")).into_iter().chain(status.map(|column| (column, "status")));
    found.columns = Columns::new(Some(label), others.collect());
    found.columns.passed_over =
        (0..grid.width()).filter(|column| !found.columns.used.iter().any(|(used, _)| used == column)).collect();
    Ok(declared)
}
