//! Text that the page carries packed, as `www/text/packed.js` unpacks it.
use lzma_rust2::{LzmaOptions, LzmaReader, LzmaWriter};
use std::io::Write;

/// The characters that hold 13 bits by two.
fn letters() -> Vec<char> {
    (' '..='~').filter(|letter| !" \"<\\".contains(*letter)).collect()
}

/// An LZMA file of a stated length.
pub fn lzma(bytes: &[u8], options: &LzmaOptions) -> Vec<u8> {
    let mut packer =
        LzmaWriter::new_use_header(Vec::new(), options, Some(bytes.len() as u64)).expect("options that LZMA knows");
    packer.write_all(bytes).expect("memory takes it");
    packer.finish().expect("memory takes it")
}

/// Bytes as letters, their number before them.
pub fn lettered(bytes: &[u8]) -> String {
    let bits: String = bytes.iter().map(|byte| format!("{byte:08b}")).collect();
    let letters = letters();
    let mut text = format!("{} ", bytes.len());
    for group in bits.as_bytes().chunks(13) {
        let bits = format!("{:0<13}", String::from_utf8_lossy(group));
        let number = usize::from_str_radix(&bits, 2).expect("bits");
        text.extend([letters[number / 91], letters[number % 91]]);
    }
    text
}

/// Packs a text.
pub fn packed(text: &str) -> String {
    lettered(&lzma(text.as_bytes(), &LzmaOptions::default()))
}

/// What a packed text was.
pub fn unpacked(packed: &str) -> String {
    let (length, text) = packed.trim().split_once(' ').expect("a length and a text");
    let letters = letters();
    let digit = |letter| letters.iter().position(|one| *one == letter).expect("one of the letters");
    let digits: Vec<usize> = text.chars().map(digit).collect();
    let bits: String = digits.chunks(2).map(|pair| format!("{:013b}", 91 * pair[0] + pair[1])).collect();
    let byte = |at: usize| u8::from_str_radix(&bits[8 * at..8 * at + 8], 2).expect("bits");
    let bytes: Vec<u8> = (0..length.parse().expect("a number")).map(byte).collect();
    let reader = LzmaReader::new_mem_limit(&bytes[..], 1 << 16, None).expect("a header");
    std::io::read_to_string(reader).expect("LZMA of a text")
}
