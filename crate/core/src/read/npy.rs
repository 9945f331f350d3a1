//! Arrays written by NumPy (NumPy Enhancement Proposal 1; `numpy.lib.format`).

use super::bytes::{Endian, Numbers, Stored, byte, damaged, shown, truncated, words};
use super::content::{Body, Cells, Part};
use super::{MOST_ELECTRODES, MOST_MAPS, within_limits};
use crate::finding::{Code, Error, Finding};

/// What such a file begins with.
pub(super) const MAGIC: &[u8] = b"\x93NUMPY";

/// The array of a NumPy `.npy` file, versions 1 to 3: at most two
/// dimensions of integers, floating-point numbers of 4 or 8 bytes, booleans or strings, in either order of indices and
/// bytes. What the header announces is checked against the limits and the length of the file before it is believed.
///
/// # Errors
/// `input-truncated`, `input-damaged`, `array-type`, `array-size`, `number-range`, each with the byte.
pub fn read(file: &[u8]) -> Result<Vec<Part>, Error> {
    let short = |wanted: usize| truncated(file.len(), wanted.saturating_sub(file.len()), "npy-header");
    if !file.starts_with(MAGIC) {
        return Err(damaged(0, shown(file, 0), "npy-magic"));
    }
    let &[.., major, _] = file.get(..8).ok_or_else(|| short(8))? else { return Err(short(8)) };
    let (begin, length): (usize, _) = match major {
        1 => (10, file.get(8..10).and_then(|bytes| Endian::Little.u16(bytes)).map(usize::from)),
        2 | 3 => (12, file.get(8..12).and_then(|bytes| Endian::Little.u32(bytes)).map(|length| length as usize)),
        _ => return Err(damaged(6, usize::from(major), "npy-version")),
    };
    let end = begin.saturating_add(length.ok_or_else(|| short(begin))?);
    let text = file.get(begin..end).ok_or_else(|| short(end))?;
    let header = Header::read(text, begin)?;
    let body = file.get(end..).unwrap_or_default();
    Ok(vec![Part { name: None, body: array(&header, body, file.len(), end)? }])
}

fn array(header: &Header, body: &[u8], length: usize, begin: usize) -> Result<Body, Error> {
    let (rows, columns) = match *header.shape.as_slice() {
        [] => (1, 1),
        [rows] => (rows, 1),
        [rows, columns] => (rows, columns),
        _ => return Err(size(header).with("dimensions", header.shape.len()).into()),
    };
    let text = !matches!(header.item, Item::Number(_));
    if !within_limits(rows, columns) || (text && rows * columns > MOST_MAPS) {
        return Err(size(header)
            .with("rows", rows)
            .with("columns", columns)
            .with("most_electrodes", MOST_ELECTRODES)
            .with("most_maps", MOST_MAPS)
            .into());
    }
    if rows * columns == 0 {
        return Err(Finding::new(Code::InputEmpty).at(byte(header.shape_at)).into());
    }
    let item = match header.item {
        Item::Number(stored) => stored.size(),
        Item::Unicode(length) => length.saturating_mul(4),
        Item::Bytes(length) => length,
    };
    let expected = item.saturating_mul(rows * columns);
    if body.len() < expected {
        return Err(truncated(length, expected - body.len(), "npy-numbers"));
    }
    if body.len() > expected {
        return Err(damaged(begin + expected, shown(body, expected), "npy-end"));
    }
    let texts = |decode: &dyn Fn(&[u8]) -> String| {
        let text = |row: usize, column: usize| {
            let at = item * if header.columns_first { column * rows + row } else { row * columns + column };
            body.get(at..at + item).map(decode).unwrap_or_default()
        };
        if rows.min(columns) == 1 {
            return Body::Words((0..rows * columns).map(|at| text(at / columns, at % columns)).collect());
        }
        let mut cells = Cells::new(columns);
        for row in 0..rows {
            let fields: Vec<String> = (0..columns).map(|column| text(row, column)).collect();
            cells.push(row + 1, fields.iter().map(String::as_str));
        }
        Body::Cells(cells)
    };
    Ok(match header.item {
        Item::Unicode(_) => texts(&|bytes| {
            let letters = bytes.chunks_exact(4).filter_map(|letter| header.endian.u32(letter));
            let text: String =
                letters.map(|code| char::from_u32(code).unwrap_or(char::REPLACEMENT_CHARACTER)).collect();
            text.trim_end_matches('\0').to_owned()
        }),
        Item::Bytes(_) => texts(&|bytes| words(bytes).trim_end_matches('\0').to_owned()),
        Item::Number(stored) => {
            let numbers = Numbers { bytes: body, stored, endian: header.endian, columns_first: header.columns_first };
            Body::Numbers(numbers.matrix(rows, columns).map_err(|(at, number)| {
                Error::from(Finding::new(Code::NumberRange).at(byte(begin + at)).with("found", number))
            })?)
        }
    })
}

fn size(header: &Header) -> Finding {
    Finding::new(Code::ArraySize).at(byte(header.shape_at))
}

/// What an array holds.
#[derive(Clone, Copy)]
enum Item {
    Number(Stored),
    /// Letters of four bytes, so many of them.
    Unicode(usize),
    /// Bytes of text, so many of them.
    Bytes(usize),
}

/// A header such as `{'descr': '<f8', 'fortran_order': False, 'shape': (71, 3), }`.
struct Header {
    item: Item,
    endian: Endian,
    columns_first: bool,
    shape: Vec<usize>,
    /// Byte where the shape stands, from 0.
    shape_at: usize,
}

impl Header {
    fn read(text: &[u8], begin: usize) -> Result<Self, Error> {
        let mut scan = Scan { text, at: 0, begin };
        let (mut item, mut columns_first, mut shape) = (None, None, None);
        scan.mark(b'{')?;
        while !scan.takes(b'}') {
            scan.blanks();
            let at = scan.at;
            let key = scan.quoted()?;
            scan.mark(b':')?;
            scan.blanks();
            let twice = match key {
                b"descr" => item.replace(scan.item()?).is_some(),
                b"fortran_order" => columns_first.replace(scan.truth()?).is_some(),
                b"shape" => shape.replace((begin + scan.at, scan.shape()?)).is_some(),
                _ => true,
            };
            if twice {
                return Err(damaged(begin + at, words(key), "npy-key"));
            }
            if !scan.takes(b',') {
                scan.mark(b'}')?;
                break;
            }
        }
        scan.blanks();
        match (item, columns_first, shape) {
            _ if scan.at < text.len() => Err(scan.wrong("npy-header-end")),
            (Some((item, endian)), Some(columns_first), Some((shape_at, shape))) => {
                Ok(Self { item, endian, columns_first, shape, shape_at })
            }
            _ => Err(scan.wrong("npy-keys")),
        }
    }
}

/// A walk through the text of a header, a literal of Python.
struct Scan<'a> {
    text: &'a [u8],
    at: usize,
    /// Byte of the file where the text begins, from 0.
    begin: usize,
}

impl<'a> Scan<'a> {
    fn next(&self) -> Option<u8> {
        self.text.get(self.at).copied()
    }

    fn blanks(&mut self) {
        while self.next().is_some_and(|byte| byte.is_ascii_whitespace()) {
            self.at += 1;
        }
    }

    fn wrong(&self, expected: &'static str) -> Error {
        let rest = self.text.get(self.at..).unwrap_or_default();
        damaged(self.begin + self.at, words(rest.get(..12).unwrap_or(rest)), expected)
    }

    fn takes(&mut self, mark: u8) -> bool {
        self.blanks();
        let there = self.next() == Some(mark);
        self.at += usize::from(there);
        there
    }

    fn mark(&mut self, mark: u8) -> Result<(), Error> {
        if self.takes(mark) { Ok(()) } else { Err(self.wrong("npy-mark")) }
    }

    fn quoted(&mut self) -> Result<&'a [u8], Error> {
        let quote = self.next().filter(|quote| b"'\"".contains(quote)).ok_or_else(|| self.wrong("npy-quote"))?;
        let rest = self.text.get(self.at + 1..).unwrap_or_default();
        let end = rest.iter().position(|&byte| byte == quote).ok_or_else(|| self.wrong("npy-quote"))?;
        self.at += end + 2;
        Ok(rest.get(..end).unwrap_or_default())
    }

    fn truth(&mut self) -> Result<bool, Error> {
        let rest = self.text.get(self.at..).unwrap_or_default();
        let truth = rest.starts_with(b"True");
        if !truth && !rest.starts_with(b"False") {
            return Err(self.wrong("npy-truth"));
        }
        self.at += if truth { 4 } else { 5 };
        Ok(truth)
    }

    fn whole(&mut self) -> Result<usize, Error> {
        let rest = self.text.get(self.at..).unwrap_or_default();
        let length = rest.iter().take_while(|byte| byte.is_ascii_digit()).count();
        let digits = rest.get(..length).and_then(|digits| core::str::from_utf8(digits).ok());
        let Some(number) = digits.filter(|digits| !digits.is_empty()) else { return Err(self.wrong("npy-shape")) };
        // What does not fit into the integers of this machine is beyond the limits in any case.
        let number = number.parse().unwrap_or(usize::MAX);
        self.at += length;
        // Python 2 wrote long integers so.
        self.at += usize::from(self.next() == Some(b'L'));
        Ok(number)
    }

    fn shape(&mut self) -> Result<Vec<usize>, Error> {
        self.mark(b'(')?;
        let mut shape = Vec::new();
        while !self.takes(b')') {
            shape.push(self.whole()?);
            if !self.takes(b',') {
                // A number in parentheses is no list of numbers.
                if shape.len() == 1 || !self.takes(b')') {
                    return Err(self.wrong("npy-shape"));
                }
                break;
            }
        }
        Ok(shape)
    }

    fn item(&mut self) -> Result<(Item, Endian), Error> {
        let at = self.begin + self.at;
        let refused = |found: String, why: &'static str| {
            Error::from(Finding::new(Code::ArrayType).at(byte(at)).with("found", found).with("why", why))
        };
        if self.next() == Some(b'[') {
            return Err(refused("[…]".into(), "fields"));
        }
        let kind = self.quoted()?;
        let (endian, rest) = match kind.split_first() {
            Some((b'<', rest)) => (Some(Endian::Little), rest),
            Some((b'>', rest)) => (Some(Endian::Big), rest),
            Some((b'|', rest)) => (None, rest),
            _ => return Err(damaged(at, words(kind), "npy-type")),
        };
        let length = |digits: &[u8]| core::str::from_utf8(digits).ok().and_then(|digits| digits.parse().ok());
        let item = match rest {
            b"b1" | b"u1" => Item::Number(Stored::U8),
            b"i1" => Item::Number(Stored::I8),
            b"i2" => Item::Number(Stored::I16),
            b"u2" => Item::Number(Stored::U16),
            b"i4" => Item::Number(Stored::I32),
            b"u4" => Item::Number(Stored::U32),
            b"i8" => Item::Number(Stored::I64),
            b"u8" => Item::Number(Stored::U64),
            b"f4" => Item::Number(Stored::F32),
            b"f8" => Item::Number(Stored::F64),
            [b'U', digits @ ..] => Item::Unicode(length(digits).ok_or_else(|| refused(words(kind), "kind"))?),
            [b'S', digits @ ..] => Item::Bytes(length(digits).ok_or_else(|| refused(words(kind), "kind"))?),
            [b'c', ..] => return Err(refused(words(kind), "complex")),
            [b'O', ..] => return Err(refused(words(kind), "objects")),
            _ => return Err(refused(words(kind), "kind")),
        };
        match (endian, item) {
            (None, Item::Number(stored)) if stored.size() > 1 => Err(damaged(at, words(kind), "npy-type")),
            (None, Item::Unicode(length)) if length > 0 => Err(damaged(at, words(kind), "npy-type")),
            _ => Ok((item, endian.unwrap_or(Endian::Little))),
        }
    }
}
