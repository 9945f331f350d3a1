use crate::math::sort_by_number;
use crate::simulate::Draw;

/// Fits of the simulated maps of one kind, to set others against.
#[derive(Clone, Debug)]
pub struct Reference {
    draws: Vec<Draw>,
    /// Residual variances in ascending order.
    sorted: Vec<f64>,
}

/// Half the width of the window of eccentricities to begin with, and what it grows by.
const WINDOW: f64 = 0.05;

/// Draws that a share at one depth rests on.
const FEWEST_IN_WINDOW: usize = 200;

impl Reference {
    /// Of draws in their order; `None` for none.
    pub fn new(draws: Vec<Draw>) -> Option<Self> {
        let mut sorted: Vec<f64> = draws.iter().map(|draw| draw.residual_variance).collect();
        sort_by_number(&mut sorted, |rv| *rv);
        (!draws.is_empty()).then_some(Self { draws, sorted })
    }

    /// The draws.
    pub fn draws(&self) -> &[Draw] {
        &self.draws
    }

    /// Share of maps with a lower residual variance.
    pub fn share_lower(&self, residual_variance: f64) -> f64 {
        self.sorted.partition_point(|rv| *rv < residual_variance) as f64 / self.sorted.len() as f64
    }

    /// The same among those fitted at about this eccentricity: within 0.05, wider until there are 200 of them.
    pub fn share_lower_at(&self, residual_variance: f64, eccentricity: f64) -> f64 {
        let enough = FEWEST_IN_WINDOW.min(self.draws.len());
        let mut window = WINDOW;
        loop {
            let near = |draw: &&Draw| (draw.eccentricity - eccentricity).abs() <= window;
            let count = self.draws.iter().filter(near).count();
            if count >= enough {
                let lower = |draw: &&Draw| draw.residual_variance < residual_variance;
                return self.draws.iter().filter(near).filter(lower).count() as f64 / count as f64;
            }
            // Such a window holds every eccentricity that is a number.
            if window > 2.0 {
                return self.share_lower(residual_variance);
            }
            window += WINDOW;
        }
    }

    /// The residual variance that this share of the maps lies below: the value at the place ⌈share × n⌉.
    pub fn percentile(&self, share: f64) -> f64 {
        let place = libm::ceil(share * self.sorted.len() as f64) as usize;
        self.sorted[place.clamp(1, self.sorted.len()) - 1]
    }

    /// Share of maps whose dipole presses on the boundary.
    pub fn boundary_share(&self) -> f64 {
        self.draws.iter().filter(|draw| draw.at_boundary).count() as f64 / self.draws.len() as f64
    }
}
