//! Invented maps of many kinds, from good dipoles to noise.
use crate::draw::Draw;
use crate::series::PlainSeries;
use inward_core::Vec3;

/// One invented map; `kind` is for messages.
pub struct Mixture {
    /// What it is made of.
    pub kind: String,
    /// Values in µV.
    pub values: Vec<f64>,
}

impl Mixture {
    /// `count` maps in turn: one dipole at several noise levels, two dipoles, noise alone. `reach` is the largest
    /// distance of a source from the centre in scalp radii.
    pub fn many(series: &PlainSeries, electrodes: &[Vec3], reach: f64, count: usize, draw: &mut Draw) -> Vec<Self> {
        let kinds: [(usize, f64); 9] =
            [(1, 0.0), (1, 0.02), (1, 0.1), (1, 0.3), (1, 0.6), (2, 0.0), (2, 0.05), (2, 0.3), (0, 1.0)];
        (0..count)
            .map(|k| {
                let (sources, level) = kinds[k % kinds.len()];
                let mut values = vec![0.0; electrodes.len()];
                for _ in 0..sources {
                    let position = draw.position(0.0, reach);
                    let moment = draw.direction() * draw.between(5.0, 40.0);
                    for (value, row) in values.iter_mut().zip(series.lead(position, electrodes, 1e-10)) {
                        *value += row.dot(moment);
                    }
                }
                let size = deviation(&values);
                let size = if size > 0.0 { size } else { 1.0 };
                for value in &mut values {
                    *value += level * size * draw.normal();
                }
                Self { kind: format!("{sources} dipoles, noise {level}, number {k}"), values }
            })
            .collect()
    }
}

fn deviation(values: &[f64]) -> f64 {
    let mean = values.iter().sum::<f64>() / values.len() as f64;
    (values.iter().map(|v| (v - mean) * (v - mean)).sum::<f64>() / values.len() as f64).sqrt()
}
