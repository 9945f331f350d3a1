//! What a canvas holds, pixel by pixel.

/// Colours of a canvas, row by row.
#[derive(Clone, Debug, PartialEq)]
pub struct Bitmap {
    /// Pixels across.
    pub width: usize,
    /// Pixels down.
    pub height: usize,
    /// Red, green, blue and alpha of each pixel.
    pub bytes: Vec<u8>,
}

impl Bitmap {
    /// Red, green, blue and alpha at the pixel that holds a point; clear beyond the edge.
    pub fn at(&self, x: f64, y: f64) -> [u8; 4] {
        if !(0.0..self.width as f64).contains(&x) || !(0.0..self.height as f64).contains(&y) {
            return [0; 4];
        }
        let at = 4 * (y as usize * self.width + x as usize);
        self.bytes[at..at + 4].try_into().expect("four bytes")
    }

    /// Whether a point has a colour, which no grey line and no paper has.
    pub fn coloured(&self, x: f64, y: f64) -> bool {
        let [red, green, blue, alpha] = self.at(x, y);
        let (low, high) = (red.min(green).min(blue), red.max(green).max(blue));
        u32::from(high - low) * u32::from(alpha) > 30 * 255
    }

    /// How much redder than blue a point is.
    pub fn warmth(&self, x: f64, y: f64) -> i32 {
        let [red, _, blue, _] = self.at(x, y);
        i32::from(red) - i32::from(blue)
    }

    /// How dark a point is, 0 for white or clear, 1 for black.
    pub fn darkness(&self, x: f64, y: f64) -> f64 {
        let [red, green, blue, alpha] = self.at(x, y);
        let light = (f64::from(red) + f64::from(green) + f64::from(blue)) / 765.0;
        (1.0 - light) * f64::from(alpha) / 255.0
    }

    /// Share of the pixels within `radius` of a point for which something holds.
    pub fn share_near(&self, x: f64, y: f64, radius: f64, holds: impl Fn(f64, f64) -> bool) -> f64 {
        let reach = radius.ceil() as i64;
        let (mut count, mut all) = (0, 0);
        for dy in -reach..=reach {
            for dx in -reach..=reach {
                let (dx, dy) = (dx as f64, dy as f64);
                if dx.hypot(dy) <= radius {
                    all += 1;
                    count += usize::from(holds(x + dx, y + dy));
                }
            }
        }
        f64::from(count as u32) / f64::from(all)
    }

    /// Number of different colours.
    pub fn colours(&self) -> usize {
        self.bytes.chunks(4).collect::<std::collections::HashSet<_>>().len()
    }
}
