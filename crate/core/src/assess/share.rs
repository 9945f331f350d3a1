use crate::math::select;

/// Residual variances of the fitted maps of a decomposition with the variances of the components. Its near-dipolar share at
/// x is the part of them with a residual variance of at most x.
#[derive(Clone, Debug, Default)]
pub struct Sample {
    rv: Vec<f64>,
    /// The components' variances; empty unless every one is known.
    variance: Vec<f64>,
}

impl Sample {
    /// Of residual variances with the variance of each component, where known; what is not a number was not fitted.
    pub fn new(maps: impl Iterator<Item = (f64, Option<f64>)>) -> Self {
        let (mut rv, mut variance) = (Vec::new(), Vec::new());
        for (one, of_it) in maps.filter(|(rv, _)| rv.is_finite()) {
            rv.push(one);
            variance.extend(of_it);
        }
        if variance.len() < rv.len() {
            variance.clear();
        }
        Self { rv, variance }
    }

    /// Number of fitted maps.
    pub fn fitted(&self) -> usize {
        self.rv.len()
    }

    /// How many have a residual variance of at most this.
    pub fn count(&self, most: f64) -> usize {
        self.rv.iter().filter(|rv| **rv <= most).count()
    }

    /// The share of them; `None` if none is fitted.
    pub fn share(&self, most: f64) -> Option<f64> {
        (!self.rv.is_empty()).then(|| self.count(most) as f64 / self.rv.len() as f64)
    }

    /// Their part of the sum of all components' variances; `None` unless that of each fitted map is known.
    pub fn weighted(&self, most: f64) -> Option<f64> {
        let (mut all, mut part) = (0.0, 0.0);
        for (rv, variance) in self.rv.iter().zip(&self.variance) {
            all += variance;
            part += if *rv <= most { *variance } else { 0.0 };
        }
        (all > 0.0).then(|| part / all)
    }

    /// The median; of an even number the mean of the middle two.
    pub fn median(&self) -> Option<f64> {
        let middle = self.rv.len().checked_sub(1)? / 2;
        let mut rv = self.rv.clone();
        let lower = select(&mut rv, middle);
        Some((lower + select(&mut rv, self.rv.len() / 2)) / 2.0)
    }
}
