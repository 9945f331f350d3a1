/// Residual variances of the fitted maps of a decomposition, in ascending order with the variances of the components. Its
/// near-dipolar share at x is the part of them with a residual variance of at most x.
#[derive(Clone, Debug, Default)]
pub struct Sample {
    rv: Vec<f64>,
    /// Sums of the components' variances up to each map; empty unless every one is known.
    weights: Vec<f64>,
}

impl Sample {
    /// Of residual variances with the variance of each component, where known; what is not a number was not fitted.
    pub fn new(maps: impl Iterator<Item = (f64, Option<f64>)>) -> Self {
        let mut maps: Vec<(f64, Option<f64>)> = maps.filter(|(rv, _)| rv.is_finite()).collect();
        maps.sort_by(|(a, _), (b, _)| a.total_cmp(b));
        let mut weights = Vec::new();
        if maps.iter().all(|(_, variance)| variance.is_some()) {
            let mut sum = 0.0;
            weights.extend(maps.iter().filter_map(|(_, variance)| *variance).map(|variance| {
                sum += variance;
                sum
            }));
        }
        Self { rv: maps.into_iter().map(|(rv, _)| rv).collect(), weights }
    }

    /// Number of fitted maps.
    pub fn fitted(&self) -> usize {
        self.rv.len()
    }

    /// How many have a residual variance of at most this.
    pub fn count(&self, most: f64) -> usize {
        self.rv.partition_point(|rv| *rv <= most)
    }

    /// The share of them; `None` if none is fitted.
    pub fn share(&self, most: f64) -> Option<f64> {
        (!self.rv.is_empty()).then(|| self.count(most) as f64 / self.rv.len() as f64)
    }

    /// Their part of the sum of all components' variances; `None` unless that of each fitted map is known.
    pub fn weighted(&self, most: f64) -> Option<f64> {
        let all = self.weights.last().filter(|all| **all > 0.0)?;
        let up_to = self.count(most).checked_sub(1).and_then(|last| self.weights.get(last)).unwrap_or(&0.0);
        Some(up_to / all)
    }

    /// The median; of an even number the mean of the middle two.
    pub fn median(&self) -> Option<f64> {
        let middle = self.rv.len() / 2;
        let upper = self.rv.get(middle)?;
        Some(match self.rv.len() % 2 {
            0 => (self.rv.get(middle - 1)? + upper) / 2.0,
            _ => *upper,
        })
    }
}
