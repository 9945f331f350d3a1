use super::MOST_BYTES;
use crate::finding::{Code, Error, Finding, Place};

/// The text of an input: UTF-8, with or without byte-order mark.
///
/// # Errors
/// `input-too-large`, `input-encoding` with the byte, `input-empty`.
pub fn decode<'a>(bytes: &'a [u8], input: &'static str) -> Result<&'a str, Error> {
    if bytes.len() > MOST_BYTES {
        return Err(Finding::new(Code::InputTooLarge)
            .at(Place::input(input))
            .with("most_mib", MOST_BYTES >> 20)
            .into());
    }
    let bytes = bytes.strip_prefix(b"\xef\xbb\xbf").unwrap_or(bytes);
    let text = core::str::from_utf8(bytes).map_err(|error| {
        let place = Place { byte: Some(error.valid_up_to() + 1), ..Place::input(input) };
        Error::from(Finding::new(Code::InputEncoding).at(place))
    })?;
    if text.trim().is_empty() {
        return Err(Finding::new(Code::InputEmpty).at(Place::input(input)).into());
    }
    Ok(text)
}
