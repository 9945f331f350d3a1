//! Bytes as the text that the page carries them in: LZMA, then 13 bits in two characters.
//!
//! Two characters of 91 can tell 8281 things apart and hold 13 bits, so that the text is 16/13 as long as the bytes;
//! base64 makes it 16/12. `www/text/packed.js` unpacks it.

use lzma_rust2::{EncodeMode, LzmaOptions, LzmaWriter, MfType};
use std::io::{Result, Write};

/// The number of bytes, a blank, and the packed bytes; nothing in it ends a script or a string.
pub fn packed(bytes: &[u8]) -> Result<String> {
    let bytes = lzma(bytes)?;
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

/// An LZMA file of a stated length. What it holds is aligned to nothing.
fn lzma(bytes: &[u8]) -> Result<Vec<u8>> {
    let options = LzmaOptions {
        dict_size: 1 << 20,
        lc: 2,
        lp: 0,
        pb: 0,
        mode: EncodeMode::Normal,
        nice_len: LzmaOptions::NICE_LEN_MAX,
        mf: MfType::Bt4,
        depth_limit: 1000,
        preset_dict: None,
    };
    let mut writer = LzmaWriter::new_use_header(Vec::new(), &options, Some(bytes.len() as u64))?;
    writer.write_all(bytes)?;
    writer.finish()
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn compressed_bytes_state_their_length() {
        let bytes = lzma(b"map, map, map").unwrap();
        assert_eq!(bytes[..14], [2, 0, 0, 16, 0, 13, 0, 0, 0, 0, 0, 0, 0, 0]);
    }

    #[test]
    fn all_pairs_are_different_and_end_nothing() {
        let pairs: std::collections::BTreeSet<[char; 2]> = (0..1 << 13).map(pair).collect();
        assert_eq!(pairs.len(), 1 << 13);
        assert!(pairs.iter().flatten().all(|letter| letter.is_ascii_graphic() && !"\"<\\".contains(*letter)));
        assert_eq!([pair(0), pair(8191)], [['!', '!'], ['~', '#']]);
    }
}
