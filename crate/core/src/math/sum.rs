//! Sums in one written order: four running sums, so that compilers may use wide registers without changing a bit.

/// Scalar product Σ aᵢ bᵢ of two slices of equal length.
pub fn dot(a: &[f64], b: &[f64]) -> f64 {
    let (quads_a, rest_a) = a.as_chunks::<4>();
    let (quads_b, rest_b) = b.as_chunks::<4>();
    let mut sums = [0.0; 4];
    for (x, y) in quads_a.iter().zip(quads_b) {
        for lane in 0..4 {
            sums[lane] += x[lane] * y[lane];
        }
    }
    let mut sum = (sums[0] + sums[1]) + (sums[2] + sums[3]);
    for (x, y) in rest_a.iter().zip(rest_b) {
        sum += x * y;
    }
    sum
}

/// Scalar product in single precision, for searches only.
pub fn dot_f32(a: &[f32], b: &[f32]) -> f32 {
    let (octets_a, rest_a) = a.as_chunks::<8>();
    let (octets_b, rest_b) = b.as_chunks::<8>();
    let mut sums = [0.0f32; 8];
    for (x, y) in octets_a.iter().zip(octets_b) {
        for lane in 0..8 {
            sums[lane] += x[lane] * y[lane];
        }
    }
    let mut sum = ((sums[0] + sums[1]) + (sums[2] + sums[3])) + ((sums[4] + sums[5]) + (sums[6] + sums[7]));
    for (x, y) in rest_a.iter().zip(rest_b) {
        sum += x * y;
    }
    sum
}

/// Arithmetic mean; 0 for an empty slice.
pub fn mean(values: &[f64]) -> f64 {
    if values.is_empty() { 0.0 } else { values.iter().sum::<f64>() / values.len() as f64 }
}

/// Subtracts the mean, in place.
pub fn centre(values: &mut [f64]) {
    let mean = mean(values);
    for value in values {
        *value -= mean;
    }
}
