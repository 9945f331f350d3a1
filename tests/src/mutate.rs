use crate::Draw;

/// Pieces that readers take for something: limits of integers, marks of formats, numbers that are none.
const PIECES: [&[u8]; 34] = [
    b"\0",
    b"\xff",
    b"\xff\xff",
    b"\xff\xff\xff\xff",
    b"\0\0\0\0",
    b"\x80\0\0\0",
    b"\0\0\0\x80",
    b"\xff\xff\xff\x7f",
    b"\x7f\xff\xff\xff",
    b"\x01\0\0\0",
    b"\0\0\0\x01",
    b"\0\0\xf0\x7f",
    b"\xef\xbb\xbf",
    b"\xff\xfe",
    b"\xfe\xff",
    b"\t",
    b",",
    b";",
    b" ",
    b"\n",
    b"\r\n",
    b"\"",
    b"[",
    b"{",
    b":",
    b"-",
    b"1e999",
    b"1e-400",
    b"n/a",
    b"NaN",
    b"1,5",
    b"999999999",
    b"\xe2\x80\xae",
    b"#",
];

/// Changes a file in a few places, as accidents and ill will do; `other` lends pieces.
pub fn mutate(file: &mut Vec<u8>, other: &[u8], longest: usize, draw: &mut Draw) {
    for _ in 0..1 + draw.below(4) {
        let at = draw.below(file.len() + 1);
        let most = 1 << draw.below(9);
        let length = draw.below(most + 1).min(file.len() - at);
        match draw.below(9) {
            0 if at < file.len() => file[at] ^= 1 << draw.below(8),
            1 if at < file.len() => file[at] = draw.below(256) as u8,
            2 => drop(file.drain(at..at + length)),
            3 => {
                let piece = file[at..at + length].to_vec();
                file.splice(at..at, piece);
            }
            4 => file.truncate(at),
            5 if !other.is_empty() => {
                let from = draw.below(other.len());
                let piece = &other[from..other.len().min(from + length.max(1))];
                file.splice(at..at, piece.iter().copied());
            }
            6 => {
                let piece = PIECES[draw.below(PIECES.len())];
                file.splice(at..at, piece.iter().copied());
            }
            7 => {
                let piece = PIECES[draw.below(PIECES.len())];
                let end = file.len().min(at + piece.len());
                file.splice(at..end, piece.iter().copied());
            }
            _ => {
                // Numbers in text.
                let digit = file.iter().skip(at).position(u8::is_ascii_digit).map(|found| at + found);
                if let Some(digit) = digit {
                    file[digit] = b'0' + draw.below(10) as u8;
                }
            }
        }
    }
    file.truncate(longest);
}
