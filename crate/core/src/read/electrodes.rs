use super::table::{LABEL_NAMES, Row, expect_number, is_missing, number};
use super::{MOST_ELECTRODES, Table, decode};
use crate::electrode::{Electrode, Label};
use crate::finding::{Code, Error, Finding, Place};
use crate::math::Vec3;
use std::collections::HashMap;

const INPUT: &str = "electrodes";

/// Electrodes of a delimited table, label, x, y, z in any unit or labels alone, with what was assumed.
///
/// Columns are found by their names (label, name, electrode, channel, site; x, y, z), without a header by their content:
/// the column that holds words, and the first three others that do not count the rows. A missing position (`n/a`, empty) is allowed.
///
/// # Errors
/// Those of [`decode`] and [`Table::read`]; `table-columns`, `number-expected`, `number-range`, `label-duplicate`,
/// `electrodes-too-many`.
pub fn read_electrodes(bytes: &[u8]) -> Result<(Vec<Electrode>, Vec<Finding>), Error> {
    let table = Table::read(decode(bytes, INPUT)?, INPUT)?;
    let columns = columns(&table)?;
    if table.rows.len() > MOST_ELECTRODES {
        return Err(Finding::new(Code::ElectrodesTooMany)
            .at(Place::input(INPUT))
            .with("found", table.rows.len())
            .with("most", MOST_ELECTRODES)
            .into());
    }
    let electrodes: Vec<Electrode> = table.rows.iter().map(|row| electrode(row, &columns)).collect::<Result<_, _>>()?;
    refuse_duplicates(INPUT, electrodes.iter().map(|e| (&e.label, e.line)))?;
    Ok((electrodes, table.notes(INPUT)))
}

struct Columns {
    label: usize,
    xyz: Option<[usize; 3]>,
}

fn columns(table: &Table<'_>) -> Result<Columns, Error> {
    let lacks = |what: &str| {
        let line = table.header.as_ref().or(table.rows.first()).map_or(1, |row| row.line);
        Error::from(
            Finding::new(Code::TableColumns)
                .at(Place::line(INPUT, line))
                .with("lacks", what)
                .with("width", table.width),
        )
    };
    let label = table.column(LABEL_NAMES).or_else(|| table.words()).ok_or_else(|| lacks("label-column"))?;
    if table.width == 1 {
        return Ok(Columns { label, xyz: None });
    }
    let named = ['x', 'y', 'z'].map(|axis| table.axis(axis));
    if let [Some(x), Some(y), Some(z)] = named {
        return Ok(Columns { label, xyz: Some([x, y, z]) });
    }
    let holds_numbers = |column: usize| table.rows.iter().any(|row| number(row.field(column)).is_some());
    let numeric = |column: &usize| *column != label && !table.counts(*column) && holds_numbers(*column);
    let mut others = (0..table.width).filter(numeric);
    match (others.next(), others.next(), others.next()) {
        (Some(x), Some(y), Some(z)) => Ok(Columns { label, xyz: Some([x, y, z]) }),
        _ => Err(lacks("coordinates")),
    }
}

fn electrode(row: &Row<'_>, columns: &Columns) -> Result<Electrode, Error> {
    let label = label(row, columns.label, INPUT)?;
    let mut position = None;
    if let Some(xyz) = columns.xyz
        && !xyz.iter().any(|&column| is_missing(row.field(column)))
    {
        let mut coordinates = [0.0; 3];
        for (coordinate, column) in coordinates.iter_mut().zip(xyz) {
            let place = || Place { label: Some(label.to_string()), ..Place::field(INPUT, row.line, column + 1) };
            *coordinate = expect_number(row.field(column), place)?;
        }
        position = Some(Vec3(coordinates));
    }
    Ok(Electrode { label, position, line: row.line })
}

/// The label in a row.
pub(super) fn label(row: &Row<'_>, column: usize, input: &'static str) -> Result<Label, Error> {
    let label = Label::new(row.field(column));
    if label.as_str().is_empty() {
        return Err(Finding::new(Code::TableColumns)
            .at(Place::field(input, row.line, column + 1))
            .with("lacks", "label")
            .into());
    }
    Ok(label)
}

pub(super) fn refuse_duplicates<'a>(
    input: &'static str,
    labels: impl Iterator<Item = (&'a Label, usize)>,
) -> Result<(), Error> {
    let mut seen = HashMap::new();
    for (label, line) in labels {
        if let Some(first) = seen.insert(label.key(), line) {
            let place = Place { label: Some(label.to_string()), ..Place::line(input, line) };
            return Err(Finding::new(Code::LabelDuplicate)
                .at(place)
                .with("label", label.as_str())
                .with("first_line", first)
                .into());
        }
    }
    Ok(())
}
