//! Text that the page carries packed, as `www/text/packed.js` unpacks it.
use std::io::Write;

/// The characters that hold 13 bits by two.
fn letters() -> Vec<char> {
    (' '..='~').filter(|letter| !" \"<\\".contains(*letter)).collect()
}

/// Packs a text.
pub fn packed(text: &str) -> String {
    let mut packer = flate2::write::GzEncoder::new(Vec::new(), flate2::Compression::fast());
    packer.write_all(text.as_bytes()).expect("memory takes it");
    let bytes = packer.finish().expect("memory takes it");
    let bits: String = bytes.iter().map(|byte| format!("{byte:08b}")).collect();
    let mut packed = format!("{} ", bytes.len());
    for group in bits.as_bytes().chunks(13) {
        let bits = format!("{:0<13}", String::from_utf8_lossy(group));
        let number = usize::from_str_radix(&bits, 2).expect("bits");
        packed.extend([letters()[number / 91], letters()[number % 91]]);
    }
    packed
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
    std::io::read_to_string(flate2::read::GzDecoder::new(&bytes[..])).expect("gzip of a text")
}
