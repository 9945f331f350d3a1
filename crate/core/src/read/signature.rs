//! Formats told by the first bytes, never by the name.

use super::bytes::no_table;
use super::content::Format;
use super::{mat, npy, zip};
use crate::finding::{Code, Error, Finding};

/// Beginnings of files that hold no table, with the key of what they are.
const OTHERS: [(&[u8], &str); 17] = [
    (b"\x89PNG\r\n\x1a\n", "picture"),
    (b"\xff\xd8\xff", "picture"),
    (b"GIF8", "picture"),
    (b"%PDF-", "pdf"),
    // What office programs wrote before they packed their files.
    (b"\xd0\xcf\x11\xe0\xa1\xb1\x1a\xe1", "office"),
    (b"{\\rtf", "office"),
    (b"<!DOCTYPE", "markup"),
    (b"<!doctype", "markup"),
    (b"<html", "markup"),
    (b"<?xml", "markup"),
    (b"\x1f\x8b", "packed-file"),
    (b"BZh9", "packed-file"),
    (b"\xfd7zXZ\0", "packed-file"),
    (b"7z\xbc\xaf\x27\x1c", "packed-file"),
    (b"Rar!\x1a\x07", "packed-file"),
    (b"SQLite format 3\0", "database"),
    // European data format: a recording, and its form with 24 bits.
    (b"0       ", "recording"),
];

/// The format of a binary file; `None` for text, in whatever encoding.
///
/// # Errors
/// `input-hdf5`, `input-matlab-4` and `input-no-table` for what is recognised and cannot be read.
pub fn container(file: &[u8]) -> Result<Option<Format>, Error> {
    if file.starts_with(npy::MAGIC) {
        return Ok(Some(Format::Npy));
    }
    if file.starts_with(b"\x89HDF\r\n\x1a\n") || file.starts_with(mat::BEGIN_HDF5) {
        return Err(Finding::new(Code::InputHdf5).into());
    }
    if mat::is_level_5(file) {
        return Ok(Some(Format::Mat));
    }
    if zip::MAGICS.iter().any(|magic| file.starts_with(magic)) {
        return Ok(Some(Format::Zip));
    }
    if mat::is_level_4(file) {
        return Err(Finding::new(Code::InputMatlab4).into());
    }
    let known = OTHERS.iter().find(|(begin, what)| {
        // A table may begin with a naught and blanks; a recording goes on with numbers at fixed places.
        let text = file.strip_prefix(b"\xef\xbb\xbf").unwrap_or(file);
        text.starts_with(begin) && (*what != "recording" || is_recording(file))
    });
    match known {
        Some((_, what)) => Err(no_table(what)),
        None if is_binary(file) => Err(no_table("binary")),
        None => Ok(None),
    }
}

/// The header of a recording says its own length, 256 bytes and 256 for each signal, and the number of signals.
fn is_recording(file: &[u8]) -> bool {
    let number = |from: usize, to: usize| {
        let text = core::str::from_utf8(file.get(from..to)?).ok()?;
        text.trim_end().parse::<usize>().ok()
    };
    matches!((number(184, 192), number(252, 256)), (Some(length), Some(signals)) if length == 256 * (signals + 1))
}

/// Whether bytes stand there that text has not. The zeros of UTF-16 stand at every other byte, all even or all odd.
fn is_binary(file: &[u8]) -> bool {
    let begin = file.get(..4096).unwrap_or(file);
    if begin.starts_with(b"\xff\xfe") || begin.starts_with(b"\xfe\xff") {
        return false;
    }
    let zeros = |parity: usize| begin.iter().skip(parity).step_by(2).filter(|&&byte| byte == 0).count();
    let (even, odd) = (zeros(0), zeros(1));
    let control = |byte: u8| matches!(byte, 1..=8 | 14..=25 | 28..=31 | 127);
    let controls = begin.iter().filter(|&&byte| control(byte)).count();
    // A stray one in a label is text that was spoilt.
    controls > 1 + begin.len() / 32 || even + odd > 1 + begin.len() / 32 && even.min(odd) > even.max(odd) / 16
}

#[cfg(test)]
#[allow(clippy::unwrap_used)]
mod tests {
    use super::*;

    #[test]
    fn text_is_told_from_what_is_none() {
        let utf16: Vec<u8> = "Fp1\t1.5\nFp2\t2.5\n".encode_utf16().flat_map(u16::to_le_bytes).collect();
        let high_first: Vec<u8> = "Fp1\t1.5\n".encode_utf16().flat_map(u16::to_be_bytes).collect();
        let texts: [&[u8]; 7] = [
            b"",
            b"Fp1 1\n",
            &utf16,
            &high_first,
            b"\xff\xfe",
            b"0       1\n2 3\n",
            b"Fp\x001,2\nCz,3\nPz,7.5,8.25,9.125,1.25\n\
              Oz,1.0625,2.03125,3.015625\n",
        ];
        for text in texts {
            assert_eq!(container(text), Ok(None), "{text:?}");
        }
        let code = |file: &[u8]| container(file).map_err(|error| error.finding().code);
        assert_eq!(code(b"PK\x03\x04"), Ok(Some(Format::Zip)));
        assert_eq!(code(b"\x93NUMPY"), Ok(Some(Format::Npy)));
        assert_eq!(code(b"\x89HDF\r\n\x1a\n"), Err(Code::InputHdf5));
        assert_eq!(code(b"\x89PNG\r\n\x1a\n\0\0"), Err(Code::InputNoTable));
        assert_eq!(code(&[1, 2, 0, 0, 0, 7, 0, 0, 0, 0, 9]), Err(Code::InputNoTable));
    }
}
