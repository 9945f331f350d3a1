//! What is told about the files: what each was taken for, and how its numbers and names were read.

use super::grid::{Grid, Header};
use super::{Columns, Decimal, FileFacts, Found, Role, Source, UsedColumn, Wishes, role};
use crate::finding::{Choice, Code, Finding, Origin, Place, Value};
use crate::read::Record;

/// What each file was taken for.
pub(super) fn facts(
    grids: &[(Grid<'_>, Role)],
    records: &[(usize, &Record)],
    sources: &[Source],
    columns: &[(usize, Columns)],
    wishes: &Wishes,
    found: &mut Found,
) -> Vec<FileFacts> {
    let mut facts = Vec::new();
    for (file, source) in sources.iter().enumerate() {
        let fact = |part: Option<&str>, role: Role, rows: usize, width: usize| FileFacts {
            name: source.name.clone(),
            part: part.filter(|_| source.content.parts.len() > 1).map(String::from),
            role,
            format: source.content.format,
            encoding: source.content.encoding,
            rows,
            columns: width,
            header: false,
            used: Vec::new(),
            passed_over: Vec::new(),
        };
        let mut roles: Vec<Role> = Vec::new();
        for (index, (grid, role)) in grids.iter().enumerate().filter(|(_, (grid, _))| grid.file == file) {
            let mut fact = fact(grid.part, *role, grid.height(), grid.width());
            fact.header = grid.header != Header::Absent;
            if let Some((_, columns)) = columns.iter().find(|(known, _)| *known == index) {
                fact.used = used_columns(grid, columns);
                fact.passed_over = columns.passed_over.iter().map(|&column| grid.written(column)).collect();
            }
            roles.push(*role);
            facts.push(fact);
        }
        for (_, record) in records.iter().filter(|(own, _)| *own == file) {
            let role = role::role_of_record(record);
            roles.push(role);
            facts.push(fact(None, role, record.len(), 2));
        }
        if roles.is_empty() {
            facts.push(fact(None, Role::Unused, 0, 0));
        }
        let told = wishes.files.get(&source.name).is_some_and(|wish| wish.role.is_some());
        let from = if told { Origin::Setting } else { Origin::Found };
        let role = role::together(&roles);
        if source.role.is_none() {
            found
                .choices
                .push(Choice::new("role", from, role.name()).of_file(&source.name).options(Role::ALL.map(Role::name)));
        }
        if role == Role::Unused && !told {
            let place = Place { file: found.given_name(file), ..Place::input("file") };
            found.notes.push(Finding::new(Code::FileUnused).at(place).with("file", source.name.as_str()));
        }
    }
    facts
}

/// Columns with their meaning.
fn used_columns(grid: &Grid<'_>, columns: &Columns) -> Vec<UsedColumn> {
    let used = columns.used.iter();
    used.map(|&(column, meaning)| UsedColumn { column: column + 1, name: grid.name(column).to_owned(), meaning })
        .collect()
}

/// The first line in which a comma may have been a decimal mark: `-0`, then a whole number without a sign.
fn divided_decimals(grid: &Grid<'_>) -> Option<usize> {
    let whole = |word: &str| !word.is_empty() && word.bytes().all(|byte| byte.is_ascii_digit());
    let suspect =
        |row: usize| (1..grid.width()).any(|next| grid.word(row, next - 1) == "-0" && whole(grid.word(row, next)));
    (0..grid.height()).find(|&row| suspect(row)).map(|row| grid.line(row))
}

/// Notes and choices about how numbers and names were read.
pub(super) fn note_details(grids: &[(Grid<'_>, Role)], found: &mut Found) {
    for (grid, role) in grids.iter().filter(|(_, role)| *role != Role::Unused) {
        let input = if *role == Role::Electrodes { "electrodes" } else { "maps" };
        let place = Place { line: Some(grid.first_line()), ..found.place(input, grid) };
        if grid.header == Header::Assumed {
            found.notes.push(Finding::new(Code::HeaderAssumed).at(place.clone()));
        }
        let name = found.file_name(grid);
        let divided = |choice: &Choice| {
            choice.setting == "delimiter" && choice.file.as_ref() == Some(&name) && choice.value == "comma".into()
        };
        if found.choices.iter().any(divided)
            && let Some(line) = divided_decimals(grid)
        {
            let place = Place { line: Some(line), ..place.clone() };
            found.notes.push(Finding::new(Code::DecimalsSuspected).at(place));
        }
        if let Some((decimal, from)) = grid.decimal {
            let choice = Choice::new("decimal", from, decimal.name()).of_file(&name);
            let choice = choice.options([Decimal::Point, Decimal::Comma].map(Decimal::name));
            // Its setting is for all tables of a file.
            if !found.choices.iter().any(|known| known.path == choice.path) {
                found.choices.push(choice);
            }
            if decimal == Decimal::Comma && from == Origin::Found {
                found.notes.push(Finding::new(Code::DecimalComma).at(Place { line: None, ..place }));
            }
        }
    }
    let latin = found.choices.iter().filter(|c| c.setting == "encoding" && c.from == Origin::Assumed);
    let latin: Vec<Finding> = latin
        .filter_map(|choice| {
            let file = choice.file.clone().filter(|name| found.files.iter().any(|f| f.is_given && f.name == *name));
            let value = matches!(&choice.value, Value::Text(_)).then_some("latin-1")?;
            Some(Finding::new(Code::EncodingAssumed).at(Place { file, ..Place::input("file") }).with("encoding", value))
        })
        .collect();
    found.notes.extend(latin);
}
