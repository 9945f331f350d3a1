//! Bytes as the text that the page carries them in: gzip, then 13 bits in two characters.
//!
//! Two characters of 91 can tell 8281 things apart and hold 13 bits, so that the text is 16/13 as long as the bytes;
//! base64 makes it 16/12. `www/text/packed.js` unpacks it.

use std::io::Result;
use zopfli::{Format, Options, compress};

/// The number of bytes, a blank, and the packed bytes; nothing in it ends a script or a string.
pub fn packed(bytes: &[u8]) -> Result<String> {
    let bytes = gzip(bytes)?;
    let mut text = format!("{} ", bytes.len());
    let (mut bits, mut count) = (0u32, 0);
    for &byte in &bytes {
        bits = bits << 8 | u32::from(byte);
        count += 8;
        if count >= 13 {
            count -= 13;
            text.extend(pair(bits >> count));
            bits &= (1 << count) - 1;
        }
    }
    if count > 0 {
        text.extend(pair(bits << (13 - count)));
    }
    Ok(text)
}

/// Thirteen bits as two of the printable characters that are neither `"`, `<` nor a backslash.
fn pair(bits: u32) -> [char; 2] {
    [bits / 91, bits % 91].map(|digit| {
        let skipped = [b'"', b'<', b'\\'];
        let letters = (b'!'..=b'~').filter(|letter| !skipped.contains(letter));
        letters.map(char::from).nth(digit as usize).unwrap_or('!')
    })
}

/// Gzip without a date, so that equal bytes give equal bytes; the search for short matches takes seconds and saves a
/// twenty-fifth.
fn gzip(bytes: &[u8]) -> Result<Vec<u8>> {
    let mut packed = Vec::new();
    compress(Options::default(), Format::Gzip, bytes, &mut packed)?;
    Ok(packed)
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn compressed_bytes_carry_no_date() {
        let bytes = gzip(b"map").unwrap();
        assert_eq!(bytes[..8], [0x1f, 0x8b, 8, 0, 0, 0, 0, 0]);
    }

    #[test]
    fn all_pairs_are_different_and_end_nothing() {
        let pairs: std::collections::BTreeSet<[char; 2]> = (0..1 << 13).map(pair).collect();
        assert_eq!(pairs.len(), 1 << 13);
        assert!(pairs.iter().flatten().all(|letter| letter.is_ascii_graphic() && !"\"<\\".contains(*letter)));
        assert_eq!([pair(0), pair(8191)], [['!', '!'], ['~', '#']]);
    }
}
