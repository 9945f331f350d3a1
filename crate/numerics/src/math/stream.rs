use super::Vec3;
use rand_pcg::Pcg32;
use rand_pcg::rand_core::Rng;

/// Random numbers that a seed and a number determine: each draw of a simulation has a stream of its own, so that neither
/// the order of the draws nor who makes them changes a digit.
#[derive(Clone, Debug)]
pub struct Stream {
    source: Pcg32,
    /// Normal numbers come in pairs.
    spare: Option<f64>,
}

impl Stream {
    /// The stream of draw `index` in the part `part` of a simulation.
    pub fn new(seed: u64, part: u64, index: u64) -> Self {
        let state = mixed(mixed(mixed(seed) ^ part) ^ index);
        Self { source: Pcg32::new(state, mixed(state)), spare: None }
    }

    /// Even in [0, 1), in steps of 2⁻⁵³.
    pub fn even(&mut self) -> f64 {
        let (high, low) = (self.source.next_u32() >> 5, self.source.next_u32() >> 6);
        (f64::from(high) * 67_108_864.0 + f64::from(low)) / 9_007_199_254_740_992.0
    }

    /// Standard normal (Marsaglia & Bray 1964, SIAM Rev 6:260–264).
    pub fn normal(&mut self) -> f64 {
        if let Some(spare) = self.spare.take() {
            return spare;
        }
        loop {
            let (x, y) = (2.0 * self.even() - 1.0, 2.0 * self.even() - 1.0);
            let square = x * x + y * y;
            if square < 1.0 && square > 0.0 {
                let factor = (-2.0 * libm::log(square) / square).sqrt();
                self.spare = Some(y * factor);
                return x * factor;
            }
        }
    }

    /// Three standard normal numbers.
    pub fn normal3(&mut self) -> Vec3 {
        Vec3([0; 3].map(|_| self.normal()))
    }

    /// A unit vector, all directions alike.
    pub fn direction(&mut self) -> Vec3 {
        loop {
            if let Some(direction) = self.normal3().unit() {
                return direction;
            }
        }
    }
}

/// Spreads neighbouring numbers over all (the finaliser of Steele, Lea & Flood 2014, OOPSLA, p. 453–472).
fn mixed(number: u64) -> u64 {
    let a = number.wrapping_add(0x9e37_79b9_7f4a_7c15);
    let b = (a ^ (a >> 30)).wrapping_mul(0xbf58_476d_1ce4_e5b9);
    let c = (b ^ (b >> 27)).wrapping_mul(0x94d0_49bb_1331_11eb);
    c ^ (c >> 31)
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn streams_are_normal_and_do_not_resemble_each_other() {
        let count = 20_000;
        let rows: Vec<[f64; 2]> = (0..count)
            .map(|index| {
                let mut stream = Stream::new(1, 2, index);
                [stream.normal(), stream.normal()]
            })
            .collect();
        let mean = |f: &dyn Fn(&[f64; 2]) -> f64| rows.iter().map(f).sum::<f64>() / count as f64;
        // Standard errors are 0.007, 0.010 and 0.035; those of neighbouring streams 0.007.
        assert!(mean(&|row| row[0]).abs() < 0.03);
        assert!((mean(&|row| row[0] * row[0]) - 1.0).abs() < 0.04);
        assert!((mean(&|row| row[1] * row[1] * row[1] * row[1]) - 3.0).abs() < 0.15);
        assert!(mean(&|row| row[0] * row[1]).abs() < 0.03);
        let neighbours = rows.windows(2).map(|pair| pair[0][0] * pair[1][0]).sum::<f64>() / count as f64;
        assert!(neighbours.abs() < 0.03);
        let below = rows.iter().filter(|row| row[0] < 1.644_853_627).count() as f64 / count as f64;
        assert!((below - 0.95).abs() < 0.006, "{below}");
        assert_ne!(Stream::new(1, 2, 3).even(), Stream::new(1, 3, 2).even());
        assert_ne!(Stream::new(1, 2, 3).even(), Stream::new(2, 2, 3).even());
    }
}
