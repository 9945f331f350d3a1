use super::Encoding;
use crate::finding::{Code, Error, Finding, Origin, Place};
use std::borrow::Cow;

/// How much of a file is looked at to tell text without a mark.
const SAMPLE: usize = 4096;

/// Text with the encoding it was written in, and how that was told.
pub(super) struct Decoded<'a> {
    pub text: Cow<'a, str>,
    pub encoding: Encoding,
    pub from: Origin,
}

/// The text of a file: as wished, else by its byte-order mark, else UTF-16 where every other byte of the beginning is
/// zero, else UTF-8, else Latin-1, which any bytes are.
///
/// # Errors
/// `input-encoding` with the byte for bytes that do not belong into the encoding wished for or marked, and for control
/// characters among what could only be Latin-1.
pub(super) fn decode(bytes: &[u8], wish: Option<Encoding>) -> Result<Decoded<'_>, Error> {
    const MARKS: [(&[u8], Encoding); 3] =
        [(b"\xef\xbb\xbf", Encoding::Utf8), (b"\xff\xfe", Encoding::Utf16Le), (b"\xfe\xff", Encoding::Utf16Be)];
    let marked = MARKS.iter().find_map(|(mark, encoding)| Some((mark.len(), *encoding, bytes.strip_prefix(*mark)?)));
    let (skipped, encoding, rest, from) = match (wish, marked) {
        (Some(wish), Some((mark, encoding, rest))) if wish == encoding => (mark, wish, rest, Origin::Setting),
        (Some(wish), _) => (0, wish, bytes, Origin::Setting),
        (None, Some((mark, encoding, rest))) => (mark, encoding, rest, Origin::Declared),
        (None, None) => match unmarked_utf16(bytes) {
            Some(encoding) => (0, encoding, bytes, Origin::Found),
            None if core::str::from_utf8(bytes).is_ok() => (0, Encoding::Utf8, bytes, Origin::Found),
            None => (0, Encoding::Latin1, bytes, Origin::Assumed),
        },
    };
    let wrong = |at: usize| {
        let place = Place { byte: Some(skipped + at + 1), ..Place::default() };
        Error::from(Finding::new(Code::InputEncoding).at(place).with("encoding", encoding.name()))
    };
    let text = match encoding {
        Encoding::Utf8 => core::str::from_utf8(rest).map_err(|error| wrong(error.valid_up_to()))?.into(),
        Encoding::Utf16Le => utf16(rest, u16::from_le_bytes).map_err(wrong)?.into(),
        Encoding::Utf16Be => utf16(rest, u16::from_be_bytes).map_err(wrong)?.into(),
        Encoding::Latin1 => {
            let strange = rest.iter().position(|byte| *byte < b' ' && !b"\t\n\x0c\r\x1a".contains(byte));
            match strange {
                Some(at) if from != Origin::Setting => return Err(wrong(at)),
                _ => rest.iter().map(|&byte| char::from(byte)).collect::<String>().into(),
            }
        }
    };
    Ok(Decoded { text, encoding, from })
}

/// UTF-16 without a mark: nearly every character of a table is below 256, so that one of its two bytes is zero.
fn unmarked_utf16(bytes: &[u8]) -> Option<Encoding> {
    let pairs = || bytes.as_chunks::<2>().0.iter().take(SAMPLE / 2);
    let zeros = |which: fn(&[u8; 2]) -> u8| pairs().filter(|pair| which(pair) == 0).count();
    let (high_first, low_first) = (zeros(|[first, _]| *first), zeros(|[_, second]| *second));
    let most = pairs().count() * 3 / 4;
    match () {
        () if low_first > most && high_first == 0 => Some(Encoding::Utf16Le),
        () if high_first > most && low_first == 0 => Some(Encoding::Utf16Be),
        () => None,
    }
}

/// The text of pairs of bytes, or the byte at which it ceases to be text.
fn utf16(bytes: &[u8], unit: fn([u8; 2]) -> u16) -> Result<String, usize> {
    let (pairs, rest) = bytes.as_chunks::<2>();
    let mut text = String::with_capacity(pairs.len());
    let mut at = 0;
    for character in char::decode_utf16(pairs.iter().map(|&pair| unit(pair))) {
        let character = character.map_err(|_| at)?;
        at += 2 * character.len_utf16();
        text.push(character);
    }
    if rest.is_empty() { Ok(text) } else { Err(at) }
}

impl Encoding {
    /// All of them, the usual one first.
    pub const ALL: [Self; 4] = [Self::Utf8, Self::Latin1, Self::Utf16Le, Self::Utf16Be];

    /// Its name, as settings write it.
    pub fn name(self) -> &'static str {
        match self {
            Self::Utf8 => "utf-8",
            Self::Utf16Le => "utf-16le",
            Self::Utf16Be => "utf-16be",
            Self::Latin1 => "latin-1",
        }
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    fn decoded(bytes: &[u8], wish: Option<Encoding>) -> Option<(String, Encoding, Origin)> {
        let decoded = decode(bytes, wish).ok()?;
        Some((decoded.text.into_owned(), decoded.encoding, decoded.from))
    }

    #[test]
    fn text_is_told_by_mark_zeros_or_validity() {
        let text = "Fz\t1,5 µV\n";
        let units = |unit: fn(u16) -> [u8; 2]| text.encode_utf16().flat_map(unit).collect::<Vec<u8>>();
        let (little, big) = (units(u16::to_le_bytes), units(u16::to_be_bytes));
        let latin: Vec<u8> = text.chars().map(|c| c as u8).collect();
        let expect = |encoding, from| Some((text.to_owned(), encoding, from));
        assert_eq!(decoded(text.as_bytes(), None), expect(Encoding::Utf8, Origin::Found));
        assert_eq!(decoded(format!("\u{feff}{text}").as_bytes(), None), expect(Encoding::Utf8, Origin::Declared));
        assert_eq!(decoded(&little, None), expect(Encoding::Utf16Le, Origin::Found));
        assert_eq!(decoded(&big, None), expect(Encoding::Utf16Be, Origin::Found));
        let marked = |mark: [u8; 2], rest: &[u8]| decoded(&[&mark, rest].concat(), None);
        assert_eq!(marked([0xff, 0xfe], &little), expect(Encoding::Utf16Le, Origin::Declared));
        assert_eq!(marked([0xfe, 0xff], &big), expect(Encoding::Utf16Be, Origin::Declared));
        assert_eq!(decoded(&latin, None), expect(Encoding::Latin1, Origin::Assumed));
        assert_eq!(decoded(&latin, Some(Encoding::Latin1)), expect(Encoding::Latin1, Origin::Setting));
    }

    #[test]
    fn what_does_not_belong_is_named_by_its_byte() {
        let byte = |bytes: &[u8], wish| {
            let error = decode(bytes, wish).err()?;
            assert_eq!(error.finding().code, Code::InputEncoding);
            error.finding().place.as_ref()?.byte
        };
        assert_eq!(byte(b"ab\xff1", Some(Encoding::Utf8)), Some(3));
        assert_eq!(byte(b"\xef\xbb\xbfab\xff1", None), Some(6));
        assert_eq!(byte(b"ab\xff\x001", None), Some(4));
        assert_eq!(byte(b"\xff\xfea\0b\0\0", None), Some(7));
        assert_eq!(byte(b"\xff\xfea\0\0\xd8b\0", None), Some(5));
    }
}
