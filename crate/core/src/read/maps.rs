use super::electrodes::{label, refuse_duplicates};
use super::table::{LABEL_NAMES, expect_number, is_missing};
use super::{MOST_ELECTRODES, MOST_MAPS, Table, decode};
use crate::finding::{Code, Error, Finding, Place};
use crate::map::Maps;
use ndarray::Array2;

const INPUT: &str = "maps";

/// Maps of a delimited table, a column of labels and one column of values for each map, with what was assumed.
///
/// The label column is found by its name (label, name, electrode, channel, site), otherwise it is the first one that
/// holds words. Maps are named by the header, otherwise by their number. A missing value (`n/a`, `NaN`, empty) becomes NaN.
///
/// # Errors
/// Those of [`decode`] and [`Table::read`]; `table-columns`, `maps-none`, `maps-too-many`, `electrodes-too-many`,
/// `number-expected`, `number-range`, `label-duplicate`.
pub fn read_maps(bytes: &[u8]) -> Result<(Maps, Vec<Finding>), Error> {
    let table = Table::read(decode(bytes, INPUT)?, INPUT)?;
    let first_line = table.header.as_ref().or(table.rows.first()).map_or(1, |row| row.line);
    let label_column = table.column(LABEL_NAMES).or_else(|| table.words()).ok_or_else(|| {
        Finding::new(Code::TableColumns)
            .at(Place::line(INPUT, first_line))
            .with("lacks", "label-column")
            .with("width", table.width)
    })?;
    let columns: Vec<usize> = (0..table.width).filter(|&column| column != label_column).collect();
    if columns.is_empty() || table.rows.is_empty() {
        return Err(Finding::new(Code::MapsNone).at(Place::line(INPUT, first_line)).into());
    }
    let limits =
        [(Code::MapsTooMany, columns.len(), MOST_MAPS), (Code::ElectrodesTooMany, table.rows.len(), MOST_ELECTRODES)];
    for (code, found, most) in limits {
        if found > most {
            return Err(Finding::new(code).at(Place::input(INPUT)).with("found", found).with("most", most).into());
        }
    }
    let name = |(index, &column): (usize, &usize)| match table.header.as_ref().map_or("", |header| header.field(column))
    {
        "" => format!("map {}", index + 1),
        name => name.to_owned(),
    };
    let names: Vec<String> = columns.iter().enumerate().map(name).collect();
    let labels = table.rows.iter().map(|row| label(row, label_column, INPUT)).collect::<Result<Vec<_>, _>>()?;
    let lines: Vec<usize> = table.rows.iter().map(|row| row.line).collect();
    refuse_duplicates(INPUT, labels.iter().zip(lines.iter().copied()))?;

    let mut values = Array2::from_elem((labels.len(), columns.len()), f64::NAN);
    for ((row, label), mut out) in table.rows.iter().zip(&labels).zip(values.rows_mut()) {
        for ((&column, value), name) in columns.iter().zip(out.iter_mut()).zip(&names) {
            let field = row.field(column);
            if is_missing(field) {
                continue;
            }
            let place = || Place {
                label: Some(label.to_string()),
                map: Some(name.clone()),
                ..Place::field(INPUT, row.line, column + 1)
            };
            *value = expect_number(field, place)?;
        }
    }
    Ok((Maps { labels, lines, names, values }, table.notes(INPUT)))
}
