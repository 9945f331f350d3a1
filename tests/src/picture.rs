//! A picture of a window: a PNG read as far as browsers write it.
use miniz_oxide::inflate::decompress_to_vec_zlib_with_limit;

const MOST_BYTES: usize = 1 << 28;

/// Colours of a picture, row by row.
pub struct Picture {
    /// Pixels across.
    pub width: usize,
    /// Pixels down.
    pub height: usize,
    /// Red, green and blue of each pixel.
    colours: Vec<[u8; 3]>,
}

impl Picture {
    /// Reads a PNG of eight bits a channel, with or without transparency, not interlaced (ISO/IEC 15948).
    pub fn read(png: &[u8]) -> Option<Self> {
        let mut rest = png.strip_prefix(b"\x89PNG\r\n\x1a\n")?;
        let (mut header, mut packed) = (None, Vec::new());
        while rest.len() >= 12 {
            let length = u32::from_be_bytes(rest[..4].try_into().ok()?) as usize;
            let body = rest.get(8..8 + length)?;
            match &rest[4..8] {
                b"IHDR" => header = Some(body),
                b"IDAT" => packed.extend_from_slice(body),
                _ => {}
            }
            rest = rest.get(12 + length..)?;
        }
        let header = header?;
        let size = |at: usize| Some(u32::from_be_bytes(header.get(at..at + 4)?.try_into().ok()?) as usize);
        let (width, height) = (size(0)?, size(4)?);
        let channels = match header.get(8..13)? {
            [8, 2, 0, 0, 0] => 3,
            [8, 6, 0, 0, 0] => 4,
            _ => return None,
        };
        let mut lines = decompress_to_vec_zlib_with_limit(&packed, MOST_BYTES).ok()?;
        let stride = width * channels;
        if lines.len() != height * (stride + 1) {
            return None;
        }
        let mut above = vec![0u8; stride];
        let mut colours = Vec::with_capacity(width * height);
        for line in lines.chunks_mut(stride + 1) {
            let (filter, line) = line.split_first_mut()?;
            for k in 0..stride {
                let left = if k < channels { 0 } else { line[k - channels] };
                let corner = if k < channels { 0 } else { above[k - channels] };
                let guess = match *filter {
                    0 => 0,
                    1 => left,
                    2 => above[k],
                    3 => left.midpoint(above[k]),
                    4 => nearest(left, above[k], corner),
                    _ => return None,
                };
                line[k] = line[k].wrapping_add(guess);
            }
            colours.extend(line.chunks(channels).map(|pixel| [pixel[0], pixel[1], pixel[2]]));
            above.copy_from_slice(line);
        }
        Some(Self { width, height, colours })
    }

    /// Red, green and blue of a pixel.
    pub fn at(&self, x: usize, y: usize) -> [u8; 3] {
        self.colours[y * self.width + x]
    }

    /// Share of the squares of `side` pixels whose mean colours differ by more than `tolerance` of 255 in some channel.
    pub fn difference(&self, other: &Self, side: usize, tolerance: f64) -> f64 {
        if (self.width, self.height) != (other.width, other.height) {
            return 1.0;
        }
        let (mut differ, mut all) = (0u32, 0u32);
        for y in (0..self.height).step_by(side) {
            for x in (0..self.width).step_by(side) {
                let (a, b) = (self.mean(x, y, side), other.mean(x, y, side));
                all += 1;
                differ += u32::from((0..3).any(|k| (a[k] - b[k]).abs() > tolerance));
            }
        }
        f64::from(differ) / f64::from(all)
    }

    fn mean(&self, x: usize, y: usize, side: usize) -> [f64; 3] {
        let (right, below) = ((x + side).min(self.width), (y + side).min(self.height));
        let mut sum = [0.0; 3];
        for row in y..below {
            for pixel in &self.colours[row * self.width + x..row * self.width + right] {
                (0..3).for_each(|k| sum[k] += f64::from(pixel[k]));
            }
        }
        sum.map(|total| total / ((right - x) * (below - y)) as f64)
    }
}

/// Of left, above and corner the one nearest to left + above − corner.
fn nearest(left: u8, above: u8, corner: u8) -> u8 {
    let aim = i32::from(left) + i32::from(above) - i32::from(corner);
    [left, above, corner].into_iter().min_by_key(|&value| (aim - i32::from(value)).abs()).expect("three of them")
}
