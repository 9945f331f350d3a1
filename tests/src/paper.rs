//! A printed document, as far as its size and number of pages can be read without a viewer.
use miniz_oxide::inflate::decompress_to_vec_zlib_with_limit;

const MOST_BYTES: usize = 1 << 24;

/// Pages of a PDF.
#[derive(Debug, PartialEq)]
pub struct Paper {
    /// Number of pages.
    pub pages: usize,
    /// Width and height of the sheets in points, rounded.
    pub points: (u32, u32),
}

impl Paper {
    /// Reads the page objects, which lie open or in compressed streams.
    pub fn read(pdf: &[u8]) -> Option<Self> {
        let mut text = String::from_utf8_lossy(pdf).into_owned();
        let mut rest = pdf;
        while let Some(at) = find(rest, b"stream") {
            let body = &rest[at + 6..];
            let body = body.strip_prefix(b"\r\n").or(body.strip_prefix(b"\n")).unwrap_or(body);
            // What is no compressed stream is passed over.
            let open = decompress_to_vec_zlib_with_limit(body, MOST_BYTES).unwrap_or_default();
            if find(&open, b"/Page").is_some() {
                text.push_str(&String::from_utf8_lossy(&open));
            }
            rest = body;
        }
        let pages = text.match_indices("/Type").filter(|(at, _)| {
            let after = text[at + 5..].trim_start();
            after.strip_prefix("/Page").is_some_and(|after| !after.starts_with(|c: char| c.is_ascii_alphabetic()))
        });
        let (_, frame) = text.split_once("/MediaBox")?;
        let numbers: Vec<f64> =
            frame.trim_start().strip_prefix('[')?.split(']').next()?.split_whitespace().flat_map(str::parse).collect();
        let [_, _, width, height] = numbers[..] else { return None };
        Some(Self { pages: pages.count(), points: (width.round() as u32, height.round() as u32) })
    }
}

fn find(bytes: &[u8], part: &[u8]) -> Option<usize> {
    bytes.windows(part.len()).position(|window| window == part)
}
