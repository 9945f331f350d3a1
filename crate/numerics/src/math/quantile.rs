use core::f64::consts::{FRAC_1_SQRT_2, FRAC_2_PI};

/// Quantile of the F distribution with these degrees of freedom: F = (b/a) x/(1 − x) where the regularised incomplete beta
/// function Iₓ(a/2, b/2) is `level` (Abramowitz & Stegun 1964, 26.6.2).
pub fn f_quantile(level: f64, a: f64, b: f64) -> f64 {
    let x = bisected(0.0, 1.0, |x| incomplete_beta(x, a / 2.0, b / 2.0) < level);
    b / a * x / (1.0 - x)
}

/// Quantile of χ² with three degrees of freedom, whose distribution is erf √(x/2) − √(2x/π) e^(−x/2).
pub fn chi_squared_3_quantile(level: f64) -> f64 {
    let below = |x: f64| libm::erf((x / 2.0).sqrt()) - (FRAC_2_PI * x).sqrt() * libm::exp(-x / 2.0);
    bisected(0.0, 200.0, |x| below(x) < level)
}

/// Share of the standard normal distribution above z.
pub fn normal_above(z: f64) -> f64 {
    0.5 * libm::erfc(z * FRAC_1_SQRT_2)
}

/// Where a condition that holds from `low` on ends before `high`.
fn bisected(mut low: f64, mut high: f64, holds: impl Fn(f64) -> bool) -> f64 {
    for _ in 0..80 {
        let middle = 0.5 * (low + high);
        if holds(middle) { low = middle } else { high = middle }
    }
    0.5 * (low + high)
}

/// Iₓ(a, b) by its continued fraction (Abramowitz & Stegun 1964, 26.5.8), evaluated as Lentz 1976 (Appl Opt 15:668–671).
fn incomplete_beta(x: f64, a: f64, b: f64) -> f64 {
    if x <= 0.0 || x >= 1.0 {
        return x.clamp(0.0, 1.0);
    }
    // The fraction is quick on this side of the mean only.
    if x > (a + 1.0) / (a + b + 2.0) {
        return 1.0 - incomplete_beta(1.0 - x, b, a);
    }
    let logarithm = libm::lgamma(a + b) - libm::lgamma(a) - libm::lgamma(b) + a * libm::log(x) + b * libm::log1p(-x);
    let kept = |value: f64| if value.abs() < 1e-300 { 1e-300 } else { value };
    let mut c = 1.0;
    let mut d = 1.0 / kept(1.0 - (a + b) * x / (a + 1.0));
    let mut fraction = d;
    for m in 1..500 {
        let m = f64::from(m);
        let even = m * (b - m) * x / ((a + 2.0 * m - 1.0) * (a + 2.0 * m));
        let odd = -(a + m) * (a + b + m) * x / ((a + 2.0 * m) * (a + 2.0 * m + 1.0));
        let before = fraction;
        for term in [even, odd] {
            d = 1.0 / kept(1.0 + term * d);
            c = kept(1.0 + term / c);
            fraction *= c * d;
        }
        if (fraction - before).abs() <= 1e-15 * fraction.abs() {
            break;
        }
    }
    libm::exp(logarithm) * fraction / a
}
