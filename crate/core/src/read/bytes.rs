use crate::finding::{Code, Error, Finding, Place, Value};
use ndarray::Array2;

/// Order of the bytes of a number.
#[derive(Clone, Copy, Debug, PartialEq)]
pub(super) enum Endian {
    Little,
    Big,
}

impl Endian {
    pub(super) fn u16(self, bytes: &[u8]) -> Option<u16> {
        let bytes = bytes.get(..2)?.try_into().ok()?;
        Some(if self == Self::Little { u16::from_le_bytes(bytes) } else { u16::from_be_bytes(bytes) })
    }

    pub(super) fn u32(self, bytes: &[u8]) -> Option<u32> {
        let bytes = bytes.get(..4)?.try_into().ok()?;
        Some(if self == Self::Little { u32::from_le_bytes(bytes) } else { u32::from_be_bytes(bytes) })
    }
}

/// How a number is stored.
#[derive(Clone, Copy, Debug, PartialEq)]
pub(super) enum Stored {
    I8,
    U8,
    I16,
    U16,
    I32,
    U32,
    I64,
    U64,
    F32,
    F64,
}

impl Stored {
    /// Bytes of a number.
    pub(super) fn size(self) -> usize {
        match self {
            Self::I8 | Self::U8 => 1,
            Self::I16 | Self::U16 => 2,
            Self::I32 | Self::U32 | Self::F32 => 4,
            Self::I64 | Self::U64 | Self::F64 => 8,
        }
    }

    fn read(self, bytes: &[u8], endian: Endian) -> Option<f64> {
        macro_rules! number {
            ($type:ty) => {{
                let bytes = bytes.try_into().ok()?;
                (if endian == Endian::Little { <$type>::from_le_bytes(bytes) } else { <$type>::from_be_bytes(bytes) })
                    as f64
            }};
        }
        Some(match self {
            Self::I8 => number!(i8),
            Self::U8 => number!(u8),
            Self::I16 => number!(i16),
            Self::U16 => number!(u16),
            Self::I32 => number!(i32),
            Self::U32 => number!(u32),
            Self::I64 => number!(i64),
            Self::U64 => number!(u64),
            Self::F32 => number!(f32),
            Self::F64 => number!(f64),
        })
    }
}

/// Numbers as they lie in a file.
pub(super) struct Numbers<'a> {
    pub bytes: &'a [u8],
    pub stored: Stored,
    pub endian: Endian,
    /// Whether the first index runs quickest.
    pub columns_first: bool,
}

impl Numbers<'_> {
    /// The matrix; where a number cannot be computed with, its byte among these, from 0. There must be `rows` · `columns`
    /// numbers, and no more than the limits.
    pub(super) fn matrix(&self, rows: usize, columns: usize) -> Result<Array2<f64>, (usize, f64)> {
        let size = self.stored.size();
        let mut unfit: Option<(usize, f64)> = None;
        let matrix = Array2::from_shape_fn((rows, columns), |(row, column)| {
            let at = size * if self.columns_first { column * rows + row } else { row * columns + column };
            let number = self.bytes.get(at..at + size).and_then(|bytes| self.stored.read(bytes, self.endian));
            let number = number.unwrap_or(f64::NAN);
            let fits = number.is_nan() || number == 0.0 || super::SIZES.contains(&number.abs());
            if !fits && unfit.is_none_or(|(before, _)| at < before) {
                unfit = Some((at, number));
            }
            number
        });
        unfit.map_or(Ok(matrix), Err)
    }
}

/// The byte after `before` others, counted from 1, in whichever input it is.
pub(super) fn byte(before: usize) -> Place {
    Place { byte: Some(before + 1), ..Place::default() }
}

/// The error of a file that ends too early.
pub(super) fn truncated(length: usize, missing: usize, inside: &'static str) -> Error {
    let place = Place { byte: Some(length), ..Place::default() };
    Finding::new(Code::InputTruncated).at(place).with("missing", missing).with("what", inside).into()
}

/// The error of a byte, counted from 0, that does not belong there.
pub(super) fn damaged(before: usize, found: impl Into<Value>, expected: &'static str) -> Error {
    Finding::new(Code::InputDamaged).at(byte(before)).with("found", found).with("lacks", expected).into()
}

/// The first bytes from a place on, for a message.
pub(super) fn shown(file: &[u8], at: usize) -> String {
    let rest = file.get(at..).unwrap_or_default();
    rest.iter().take(8).map(|byte| format!("{byte:02x}")).collect::<Vec<_>>().join(" ")
}

/// Words of bytes that are UTF-8, or else Latin-1.
pub(super) fn words(bytes: &[u8]) -> String {
    core::str::from_utf8(bytes).map_or_else(|_| bytes.iter().copied().map(char::from).collect(), str::to_owned)
}

/// The error of a file that holds no table, with the key of what it is.
pub(super) fn no_table(what: &'static str) -> Error {
    Finding::new(Code::InputNoTable).with("what", what).into()
}

#[cfg(test)]
#[allow(clippy::indexing_slicing, clippy::unwrap_used)]
mod tests {
    use super::*;

    #[test]
    fn either_order_of_bytes_and_of_indices() {
        let little = Numbers {
            bytes: &[1, 0, 2, 0, 3, 0, 4, 0, 5, 0, 255, 255],
            stored: Stored::I16,
            endian: Endian::Little,
            columns_first: false,
        };
        assert_eq!(little.matrix(2, 3).unwrap(), ndarray::array![[1.0, 2.0, 3.0], [4.0, 5.0, -1.0]]);
        let big = Numbers {
            bytes: &[0, 1, 0, 2, 0, 3, 0, 4, 0, 5, 255, 255],
            endian: Endian::Big,
            columns_first: true,
            ..little
        };
        assert_eq!(big.matrix(2, 3).unwrap(), ndarray::array![[1.0, 3.0, 5.0], [2.0, 4.0, -1.0]]);
    }

    #[test]
    fn what_cannot_be_computed_with_is_found_first_in_the_file() {
        let values = [1.0, f64::INFINITY, 0.0, f64::NAN, 1e-300, -0.0];
        let bytes: Vec<u8> = values.iter().flat_map(|value: &f64| value.to_le_bytes()).collect();
        let numbers =
            |columns_first| Numbers { bytes: &bytes, stored: Stored::F64, endian: Endian::Little, columns_first };
        assert_eq!(numbers(true).matrix(2, 3), Err((8, f64::INFINITY)));
        assert_eq!(numbers(false).matrix(3, 2), Err((8, f64::INFINITY)));
    }
}
