//! Bytes to parts without meaning: tables, matrices, lists of words. Every outcome is a value or an error that says
//! where; nothing panics, and time and memory grow with the file.
#![deny(clippy::unwrap_used, clippy::expect_used, clippy::indexing_slicing)]

mod bytes;
mod content;
mod decimal;
mod json;
pub mod mat;
pub mod npy;
mod scan;
pub mod signature;
mod table;
mod text;
pub mod zip;

pub use content::{Body, Cells, Content, Encoding, Format, Part, Record, Tree};
pub use table::{Delimiter, expect_number, has_decimal_comma, is_label_name, is_missing, number, number_with_comma};

use crate::finding::{Choice, Code, Error, Finding, Place};

/// Largest input in bytes.
pub const MOST_BYTES: usize = 64 << 20;

/// Most electrodes of a table.
pub const MOST_ELECTRODES: usize = 512;

/// Most maps of a table.
pub const MOST_MAPS: usize = 65_536;

/// Sizes that numbers may have: their squares stay inside the range of `f64`.
pub const SIZES: core::ops::RangeInclusive<f64> = 1e-100..=1e100;

/// How a text is to be read, where its content does not tell.
#[derive(Clone, Copy, Debug, Default, PartialEq)]
pub struct Reading {
    /// How its characters are written.
    pub encoding: Option<Encoding>,
    /// What divides its fields.
    pub delimiter: Option<Delimiter>,
    /// Whether it is not needed, and may hold anything.
    pub unused: bool,
}

/// Whether a matrix can be a table of electrodes and maps, either way round.
fn within_limits(rows: usize, columns: usize) -> bool {
    rows.min(columns) <= MOST_ELECTRODES && rows.max(columns) <= MOST_MAPS
}

/// Reads a file of any format, told by its content. An archive gives each of its files under a name that follows its
/// own; one of NumPy arrays is one file whose parts are the arrays.
///
/// # Errors
/// `input-empty`, `input-too-large`; those of [`signature::container`], [`npy::read`], [`mat::read`] and [`zip::read`]; `input-encoding`, `table-ragged`,
/// `table-large`, `json-syntax`, `json-content`. Their places name line or byte, and the file within an archive.
pub fn read(name: &str, bytes: &[u8], how: impl Fn(&str) -> Reading) -> Result<Vec<(String, Content)>, Error> {
    if bytes.len() > MOST_BYTES {
        return Err(Finding::new(Code::InputTooLarge).with("most_mib", MOST_BYTES >> 20).into());
    }
    if bytes.is_empty() {
        return Err(Finding::new(Code::InputEmpty).into());
    }
    if signature::container(bytes)? != Some(Format::Zip) {
        return Ok(vec![(name.to_owned(), read_one(bytes, how(name))?)]);
    }
    let mut arrays = Vec::new();
    let mut files = Vec::new();
    for (inside, bytes) in zip::read(bytes).map_err(|error| error.beneath(name))? {
        let own = format!("{name}/{inside}");
        let content = read_one(&bytes, how(&own)).map_err(|error| error.inside(&own))?;
        match (content.format, inside.strip_suffix(".npy")) {
            (Format::Npy, Some(variable)) => {
                arrays.extend(content.parts.into_iter().map(|part| Part { name: Some(variable.to_owned()), ..part }))
            }
            _ => files.push((own, content)),
        }
    }
    if !arrays.is_empty() {
        files.insert(0, (name.to_owned(), Content::of(Format::Zip, arrays)));
    }
    Ok(files)
}

fn read_one(bytes: &[u8], how: Reading) -> Result<Content, Error> {
    let content = read_as_told(bytes, how);
    if how.unused && content.is_err() { Ok(Content::of(Format::DelimitedText, Vec::new())) } else { content }
}

fn read_as_told(bytes: &[u8], how: Reading) -> Result<Content, Error> {
    match signature::container(bytes)? {
        None => read_text(bytes, how),
        Some(Format::Npy) => Ok(Content::of(Format::Npy, npy::read(bytes)?)),
        Some(Format::Mat) => {
            let (parts, notes) = mat::read(bytes)?;
            Ok(Content { notes, ..Content::of(Format::Mat, parts) })
        }
        Some(_) => Err(bytes::no_table("archive")),
    }
}

fn read_text(bytes: &[u8], how: Reading) -> Result<Content, Error> {
    let text::Decoded { text, encoding, from } = text::decode(bytes, how.encoding)?;
    let begun = text.trim_start();
    if begun.trim_end_matches(['\u{1a}', '\0']).is_empty() {
        return Err(Finding::new(Code::InputEmpty).into());
    }
    let encoded = Choice::new("encoding", from, encoding.name()).options(Encoding::ALL.map(Encoding::name));
    let content = Content { encoding: Some(encoding), choices: vec![encoded], ..Content::of(Format::Json, Vec::new()) };
    if begun.starts_with(['{', '[']) && how.delimiter.is_none() {
        return Ok(Content { parts: json::read_json(&text)?, ..content });
    }
    let table = table::read_table(&text, how.delimiter)?;
    if table.cells.height() == 0 {
        return Err(Finding::new(Code::InputEmpty).into());
    }
    let mut content = Content { format: Format::DelimitedText, ..content };
    if let Some((first, last)) = table.title {
        let place = Place { line: Some(first), ..Place::default() };
        content.notes.push(Finding::new(Code::TitlePassedOver).at(place).with("last", last));
    }
    let divided = Choice::new("delimiter", table.from, table.delimiter.name());
    content.choices.push(divided.options(Delimiter::ALL.map(Delimiter::name)));
    content.parts.push(Part { name: None, body: Body::Cells(table.cells) });
    Ok(content)
}
