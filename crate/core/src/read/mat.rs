//! MATLAB level-5 files, after the published description of the format ("MAT-File Format", The MathWorks).
//!
//! A file is a header of 128 bytes and a sequence of elements: a tag with type and length, then the data, padded to eight
//! bytes; each variable is an element of type matrix, as it is or packed by zlib.

use super::MOST_BYTES;
use super::bytes::{Endian, Numbers, Stored, byte, damaged, shown, truncated, words};
use super::content::{Body, Cells, Part};
use super::{MOST_ELECTRODES, MOST_MAPS, within_limits};
use crate::finding::{Code, Error, Finding, Place};
use miniz_oxide::inflate::{TINFLStatus, decompress_to_vec_zlib_with_limit};
use ndarray::Array2;

/// What a file of level 7.3 begins with; the rest is HDF5.
pub(super) const BEGIN_HDF5: &[u8] = b"MATLAB 7.3 MAT-file";

const BEGIN: &[u8] = b"MATLAB 5.0 MAT-file";

/// Length of the header.
const HEADER: usize = 128;

/// Structures within structures, cells within cells: how deep they are followed.
const DEEPEST: usize = 4;

/// Most fields of a structure.
const MOST_FIELDS: usize = 1_024;

/// Whether a file is of level 5.
pub(super) fn is_level_5(file: &[u8]) -> bool {
    file.starts_with(BEGIN) || endian(file).is_some()
}

/// The order of bytes, from the version and the mark at the end of the header.
fn endian(file: &[u8]) -> Option<Endian> {
    match file.get(HEADER - 4..HEADER)? {
        [0x00, 0x01, b'I', b'M'] => Some(Endian::Little),
        [0x01, 0x00, b'M', b'I'] => Some(Endian::Big),
        _ => None,
    }
}

/// Whether a file begins like one of level 4: five integers (kind, rows, columns, imaginary part, length of the name), then
/// the name and a zero.
pub(super) fn is_level_4(file: &[u8]) -> bool {
    let like = |endian: Endian| {
        let number = |index: usize| file.get(4 * index..).and_then(|bytes| endian.u32(bytes));
        let (Some(kind), Some(imaginary), Some(length)) = (number(0), number(3), number(4)) else { return false };
        let name = file.get(20..).and_then(|rest| rest.get(..length as usize));
        // Thousands: machine; tens: how numbers are stored; ones: numbers, text, sparse.
        let kind_is_one = kind / 1000 <= 4 && kind / 100 % 10 == 0 && kind / 10 % 10 <= 5 && kind % 10 <= 2;
        let named = name.and_then(<[u8]>::split_last).is_some_and(|(end, name)| {
            *end == 0 && !name.is_empty() && name.iter().all(|&byte| byte.is_ascii_alphanumeric() || byte == b'_')
        });
        kind_is_one && imaginary <= 1 && named
    };
    like(Endian::Little) || like(Endian::Big)
}

/// The variables of a file that can be tables or lists, and a note about those that cannot: sparse or complex matrices,
/// objects, function handles, more than two dimensions, too large, with numbers that cannot be computed with. The fields
/// of a structure are named `structure.field`; of an array of structures, a field is a list over its elements.
///
/// # Errors
/// `input-truncated`, `input-damaged`, `input-too-large` where the packed variables unpack to more than the limit,
/// `input-empty`, `array-type` if nothing in the file can be a table.
pub fn read(file: &[u8]) -> Result<(Vec<Part>, Vec<Finding>), Error> {
    if file.len() < HEADER {
        return Err(truncated(file.len(), HEADER - file.len(), "mat-header"));
    }
    let endian = endian(file).ok_or_else(|| damaged(HEADER - 4, shown(file, HEADER - 4), "mat-endian"))?;
    let mut reading = Reading { endian, unpacked: MOST_BYTES, numbers: MOST_ELECTRODES * MOST_MAPS };
    let mut found = Found::default();
    let mut walk = Walk { bytes: file, at: HEADER, endian };
    while walk.at < file.len() {
        let at = walk.at;
        let element = walk.element().map_err(|wrong| match wrong {
            Wrong::Short(missing) => truncated(file.len(), missing, "mat-variable"),
            Wrong::Element => damaged(at, shown(file, at), "mat-element"),
        })?;
        let variable = match element.kind {
            Kind::Packed => {
                let unpacked = reading.unpack(element.data, at)?;
                let mut inside = Walk { bytes: &unpacked, at: 0, endian };
                let matrix = inside.element().ok().filter(|matrix| matrix.kind == Kind::Matrix);
                matrix.and_then(|matrix| reading.matrix(matrix.data, 0))
            }
            Kind::Matrix => reading.matrix(element.data, 0),
            _ => return Err(damaged(at, shown(file, at), "mat-element")),
        };
        let Some(Variable { name, value }) = variable else { return Err(damaged(at, shown(file, at), "mat-inside")) };
        // The file's own store of objects has no name.
        if !name.is_empty() {
            found.add(name, value);
        }
    }
    found.outcome()
}

/// What the data of an element are.
#[derive(Clone, Copy, PartialEq)]
enum Kind {
    Number(Stored),
    Utf8,
    Utf16,
    Utf32,
    Matrix,
    Packed,
}

impl Kind {
    fn of(code: u32) -> Option<Self> {
        Some(match code {
            1 => Self::Number(Stored::I8),
            2 => Self::Number(Stored::U8),
            3 => Self::Number(Stored::I16),
            4 => Self::Number(Stored::U16),
            5 => Self::Number(Stored::I32),
            6 => Self::Number(Stored::U32),
            7 => Self::Number(Stored::F32),
            9 => Self::Number(Stored::F64),
            12 => Self::Number(Stored::I64),
            13 => Self::Number(Stored::U64),
            14 => Self::Matrix,
            15 => Self::Packed,
            16 => Self::Utf8,
            17 => Self::Utf16,
            18 => Self::Utf32,
            _ => return None,
        })
    }
}

struct Element<'a> {
    kind: Kind,
    data: &'a [u8],
}

/// Why there is no element.
enum Wrong {
    /// So many bytes are missing.
    Short(usize),
    /// The tag is none.
    Element,
}

/// A walk from element to element.
struct Walk<'a> {
    bytes: &'a [u8],
    at: usize,
    endian: Endian,
}

impl<'a> Walk<'a> {
    fn element(&mut self) -> Result<Element<'a>, Wrong> {
        let rest = self.bytes.get(self.at..).unwrap_or_default();
        let number = |from: usize| rest.get(from..).and_then(|bytes| self.endian.u32(bytes));
        let (Some(first), Some(second)) = (number(0), number(4)) else {
            return Err(Wrong::Short(8 - rest.len().min(8)));
        };
        // A small element has its length in the upper half of the first number, and its data in place of the second.
        let (code, begin, length) = match first >> 16 {
            0 => (first, 8, second as usize),
            small if small <= 4 => (first & 0xffff, 4, small as usize),
            _ => return Err(Wrong::Element),
        };
        let kind = Kind::of(code).ok_or(Wrong::Element)?;
        let body = rest.get(begin..).unwrap_or_default();
        let data = body.get(..length).ok_or(Wrong::Short(length.saturating_sub(body.len())))?;
        let end = begin + length;
        // Packed elements are not padded; the last one of all may lack its padding.
        let step = if kind == Kind::Packed { end } else { end.next_multiple_of(8) };
        self.at = self.bytes.len().min(self.at + step);
        Ok(Element { kind, data })
    }

    fn next(&mut self) -> Option<Element<'a>> {
        self.element().ok()
    }
}

struct Variable {
    name: String,
    value: Value,
}

/// The content of a variable, of a cell, or of a field. Scalars and words stand here themselves: tables of them are long.
enum Value {
    Empty,
    Number(f64),
    Word(String),
    Numbers(Box<Array2<f64>>),
    Words(Box<[String]>),
    Cell(Box<CellArray>),
    Structure(Box<Structure>),
    /// What cannot be read, by the key of the reason.
    Refused(&'static str),
}

struct CellArray {
    rows: usize,
    columns: usize,
    /// In the order of the file: down the columns.
    values: Vec<Value>,
}

struct Structure {
    fields: Vec<String>,
    /// The fields of the first element, those of the second, and so on.
    values: Vec<Value>,
}

/// What may still be unpacked and held.
struct Reading {
    endian: Endian,
    unpacked: usize,
    numbers: usize,
}

impl Reading {
    fn unpack(&mut self, data: &[u8], at: usize) -> Result<Vec<u8>, Error> {
        let unpacked = decompress_to_vec_zlib_with_limit(data, self.unpacked).map_err(|error| match error.status {
            TINFLStatus::HasMoreOutput => {
                let finding = Finding::new(Code::InputTooLarge).at(byte(at));
                Error::from(finding.with("what", "unpacked").with("most_mib", MOST_BYTES >> 20))
            }
            _ => damaged(at, shown(data, 0), "packed"),
        })?;
        self.unpacked -= unpacked.len();
        Ok(unpacked)
    }

    /// The matrix whose data these are; `None` where they are none.
    fn matrix(&mut self, data: &[u8], depth: usize) -> Option<Variable> {
        if data.is_empty() {
            return Some(Variable { name: String::new(), value: Value::Empty });
        }
        let mut walk = Walk { bytes: data, at: 0, endian: self.endian };
        let flags = self.endian.u32(walk.next()?.data)?;
        let class = flags & 0xff;
        const COMPLEX: u32 = 0x800;
        const OPAQUE: u32 = 17;
        let refused = |name: String, why: &'static str| Some(Variable { name, value: Value::Refused(why) });
        if class == OPAQUE {
            return refused(words(walk.next()?.data), "object");
        }
        let dimensions: Vec<usize> =
            walk.next()?.data.chunks_exact(4).filter_map(|bytes| self.endian.u32(bytes)).map(|d| d as usize).collect();
        let name = words(walk.next()?.data);
        match class {
            1 | 2 | 4 | 6..=15 => {}
            3 => return refused(name, "object"),
            5 => return refused(name, "sparse"),
            16 => return refused(name, "function"),
            _ => return None,
        }
        let [rows, columns] = match dimensions.as_slice() {
            &[rows, columns] => [rows, columns],
            &[rows, columns, ref more @ ..] if more.iter().all(|&size| size == 1) => [rows, columns],
            [_, _, ..] => return refused(name, "dimensions"),
            _ => return None,
        };
        if flags & COMPLEX != 0 {
            return refused(name, "complex");
        }
        if !within_limits(rows, columns) {
            return refused(name, "size");
        }
        let value = match class {
            1 => self.cells(&mut walk, rows, columns, depth)?,
            2 => self.structure(&mut walk, rows * columns, depth)?,
            4 => self.letters(&mut walk, rows, columns)?,
            _ => self.numbers(&mut walk, rows, columns)?,
        };
        Some(Variable { name, value })
    }

    fn numbers(&mut self, walk: &mut Walk<'_>, rows: usize, columns: usize) -> Option<Value> {
        if rows * columns == 0 {
            return Some(Value::Empty);
        }
        let Element { kind: Kind::Number(stored), data } = walk.next()? else { return None };
        if data.len() != rows * columns * stored.size() {
            return None;
        }
        match self.numbers.checked_sub(rows * columns) {
            None => return Some(Value::Refused("size")),
            Some(left) => self.numbers = left,
        }
        let numbers = Numbers { bytes: data, stored, endian: self.endian, columns_first: true };
        Some(match (rows * columns, numbers.matrix(rows, columns)) {
            (_, Err(_)) => Value::Refused("range"),
            (1, Ok(matrix)) => matrix.first().map_or(Value::Empty, |&number| Value::Number(number)),
            (_, Ok(matrix)) => Value::Numbers(Box::new(matrix)),
        })
    }

    /// Text: a word in each row, without the blanks that fill it up.
    fn letters(&self, walk: &mut Walk<'_>, rows: usize, columns: usize) -> Option<Value> {
        if rows * columns == 0 {
            return Some(Value::Empty);
        }
        let Element { kind, data } = walk.next()?;
        let units: Vec<u16> = match kind {
            Kind::Utf8 => words(data).encode_utf16().collect(),
            Kind::Utf16 | Kind::Number(Stored::U16) => {
                data.chunks_exact(2).filter_map(|unit| self.endian.u16(unit)).collect()
            }
            Kind::Utf32 => {
                let letters = data.chunks_exact(4).filter_map(|letter| self.endian.u32(letter));
                let letter = |code| char::from_u32(code).unwrap_or(char::REPLACEMENT_CHARACTER);
                letters.map(letter).collect::<String>().encode_utf16().collect()
            }
            Kind::Number(Stored::U8 | Stored::I8) => data.iter().copied().map(u16::from).collect(),
            _ => return None,
        };
        if rows == 1 {
            return Some(Value::Word(String::from_utf16_lossy(&units).trim_end().to_owned()));
        }
        if units.len() != rows * columns {
            return None;
        }
        let row = |row: usize| {
            let units: Vec<u16> = units.iter().skip(row).step_by(rows).copied().collect();
            String::from_utf16_lossy(&units).trim_end().to_owned()
        };
        Some(Value::Words((0..rows).map(row).collect()))
    }

    /// So many matrices; no more room is taken than the data can fill.
    fn several(&mut self, walk: &mut Walk<'_>, count: usize, depth: usize) -> Option<Vec<Value>> {
        let mut values = Vec::with_capacity(count.min(walk.bytes.len().saturating_sub(walk.at) / 8));
        for _ in 0..count {
            let Element { kind: Kind::Matrix, data } = walk.next()? else { return None };
            values.push(self.matrix(data, depth + 1)?.value);
        }
        Some(values)
    }

    fn cells(&mut self, walk: &mut Walk<'_>, rows: usize, columns: usize, depth: usize) -> Option<Value> {
        if depth == DEEPEST {
            return Some(Value::Refused("nested"));
        }
        let mut values = self.several(walk, rows * columns, depth)?;
        // A list whose every word stands in a cell of its own is still a list of words.
        for value in &mut values {
            if let Value::Cell(inner) = value
                && inner.values.len() == 1
            {
                *value = inner.values.pop().unwrap_or(Value::Empty);
            }
        }
        Some(if values.is_empty() { Value::Empty } else { Value::Cell(Box::new(CellArray { rows, columns, values })) })
    }

    fn structure(&mut self, walk: &mut Walk<'_>, count: usize, depth: usize) -> Option<Value> {
        if depth == DEEPEST {
            return Some(Value::Refused("nested"));
        }
        let length = self.endian.u32(walk.next()?.data)? as usize;
        let names = walk.next()?.data;
        if length == 0 || names.is_empty() || count == 0 {
            return Some(Value::Empty);
        }
        if names.len() / length > MOST_FIELDS {
            return Some(Value::Refused("size"));
        }
        let name = |bytes: &[u8]| words(bytes.split(|&byte| byte == 0).next().unwrap_or_default());
        let fields: Vec<String> = names.chunks_exact(length).map(name).collect();
        let values = self.several(walk, count.saturating_mul(fields.len()), depth)?;
        Some(Value::Structure(Box::new(Structure { fields, values })))
    }
}

/// Parts, and what was passed over, by reason.
#[derive(Default)]
struct Found {
    parts: Vec<Part>,
    refused: Vec<(&'static str, Vec<String>)>,
}

impl Found {
    fn put(&mut self, name: String, body: Body) {
        self.parts.push(Part { name: Some(name), body });
    }

    fn refuse(&mut self, name: String, why: &'static str) {
        match self.refused.iter_mut().find(|(reason, _)| *reason == why) {
            Some((_, names)) => names.push(name),
            None => self.refused.push((why, vec![name])),
        }
    }

    fn add(&mut self, name: String, value: Value) {
        match value {
            Value::Empty => {}
            Value::Number(number) => self.put(name, Body::Numbers(Array2::from_elem((1, 1), number))),
            Value::Word(word) => self.put(name, Body::Words(vec![word])),
            Value::Numbers(numbers) => self.put(name, Body::Numbers(*numbers)),
            Value::Words(words) => self.put(name, Body::Words(words.into_vec())),
            Value::Cell(cell) => self.list(name, *cell),
            Value::Structure(structure) => self.structure(&name, *structure),
            Value::Refused(why) => self.refuse(name, why),
        }
    }

    fn structure(&mut self, name: &str, structure: Structure) {
        let count = structure.fields.len();
        let rows = structure.values.len() / count.max(1);
        let mut columns: Vec<Vec<Value>> = (0..count).map(|_| Vec::with_capacity(rows)).collect();
        let mut values = structure.values.into_iter();
        for _ in 0..rows {
            for (column, value) in columns.iter_mut().zip(values.by_ref()) {
                column.push(value);
            }
        }
        for (field, mut values) in structure.fields.into_iter().zip(columns) {
            let name = format!("{name}.{field}");
            match values.len() {
                1 => self.add(name, values.pop().unwrap_or(Value::Empty)),
                rows => self.list(name, CellArray { rows, columns: 1, values }),
            }
        }
    }

    /// Cells of words, of numbers, of both, or of vectors of one length.
    fn list(&mut self, name: String, list: CellArray) {
        let CellArray { rows, columns, values } = list;
        let every =
            |fits: &dyn Fn(&Value) -> bool| values.iter().all(|value| matches!(value, Value::Empty) || fits(value));
        if every(&|_| false) {
            return;
        }
        let at = |row: usize, column: usize| values.get(column * rows + row).unwrap_or(&Value::Empty);
        if every(&|value| matches!(value, Value::Number(_))) {
            let number = |value: &Value| if let Value::Number(number) = value { *number } else { f64::NAN };
            let matrix = Array2::from_shape_fn((rows, columns), |(row, column)| number(at(row, column)));
            return self.put(name, Body::Numbers(matrix));
        }
        if every(&|value| matches!(value, Value::Word(_))) && rows.min(columns) == 1 {
            let word = |value| if let Value::Word(word) = value { word } else { String::new() };
            return self.put(name, Body::Words(values.into_iter().map(word).collect()));
        }
        if every(&|value| matches!(value, Value::Word(_) | Value::Number(_))) {
            let mut cells = Cells::new(columns);
            for row in 0..rows {
                let text = |column| match at(row, column) {
                    Value::Word(word) => word.as_str().into(),
                    Value::Number(number) => format!("{number:?}").into(),
                    _ => std::borrow::Cow::Borrowed(""),
                };
                let fields: Vec<_> = (0..columns).map(text).collect();
                cells.push(row + 1, fields.iter().map(|field| field.as_ref()));
            }
            return self.put(name, Body::Cells(cells));
        }
        let length = |value: &Value| match value {
            Value::Numbers(vector) if vector.nrows().min(vector.ncols()) == 1 => Some(vector.len()),
            _ => None,
        };
        match values.iter().find_map(length) {
            Some(width)
                if rows.min(columns) == 1
                    && within_limits(values.len(), width)
                    && every(&|value| length(value) == Some(width)) =>
            {
                let mut matrix = Array2::from_elem((values.len(), width), f64::NAN);
                for (mut row, value) in matrix.rows_mut().into_iter().zip(&values) {
                    if let Value::Numbers(vector) = value {
                        row.iter_mut().zip(vector.iter()).for_each(|(to, from)| *to = *from);
                    }
                }
                self.put(name, Body::Numbers(matrix));
            }
            _ => {
                let inside =
                    values.iter().find_map(|value| if let Value::Refused(why) = value { Some(*why) } else { None });
                self.refuse(name, inside.unwrap_or("mixed"));
            }
        }
    }

    fn outcome(self) -> Result<(Vec<Part>, Vec<Finding>), Error> {
        let finding = |code, (why, names): &(&'static str, Vec<String>)| {
            Finding::new(code).at(Place::default()).with("why", *why).with("labels", names.clone())
        };
        match (self.parts.is_empty(), self.refused.first()) {
            (true, Some(first)) => Err(finding(Code::ArrayType, first).into()),
            (true, None) => Err(Finding::new(Code::InputEmpty).at(Place::default()).into()),
            _ => Ok((self.parts, self.refused.iter().map(|one| finding(Code::PartPassedOver, one)).collect())),
        }
    }
}
