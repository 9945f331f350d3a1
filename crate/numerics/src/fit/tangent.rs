use super::{Fit, Fitter};
use crate::math::{Symmetric3, Vec3, centre, dot};

/// The maps that a fitted dipole can make by small changes, and what they say of its position.
#[derive(Clone, Debug)]
pub struct Tangent {
    /// Orthonormal, average-referenced: by the moment (at most three), then by the position (at most three).
    pub basis: Vec<Vec<f64>>,
    /// DᵀD, where D holds the derivatives of the map by the position without what a change of the moment makes up for; in
    /// the map's unit and scalp radii.
    pub information: Symmetric3,
}

impl Tangent {
    /// The covariance of the position in scalp radii² under independent noise of this standard deviation at each electrode:
    /// s² (DᵀD)⁻¹, the Cramér–Rao bound; `None` where the map does not determine it.
    pub fn covariance(&self, sd: f64) -> Option<Symmetric3> {
        let factor = self.information.factor()?;
        let columns =
            [0, 1, 2].map(|axis| factor.solve(Vec3([0, 1, 2].map(|i| if i == axis { sd * sd } else { 0.0 }))));
        Some(Symmetric3::from_fn(|i, j| columns[j][i]))
    }

    /// What of a map no small change of the dipole makes.
    pub fn left(&self, map: &[f64]) -> Vec<f64> {
        let mut left = map.to_vec();
        take_out(&mut left, &self.basis);
        left
    }
}

impl Fitter {
    /// At a fit.
    pub fn tangent(&self, fit: &Fit) -> Tangent {
        let columns = self.field.quick(fit.position);
        let gradient = self.field.gradient(fit.position);
        let m = fit.moment;
        let by_moment = (0..3).map(|axis| columns.column(axis).to_vec());
        // ∂(L m)/∂pⱼ from the rows (xx, xy, xz, yy, yz, zz).
        let by_position = [[0, 1, 2], [1, 3, 4], [2, 4, 5]].map(|places| -> Vec<f64> {
            gradient.rows().into_iter().map(|row| Vec3(places.map(|place| row[place])).dot(m)).collect()
        });
        let mut basis: Vec<Vec<f64>> = Vec::with_capacity(6);
        let add = |mut column: Vec<f64>, basis: &mut Vec<Vec<f64>>| {
            let before = dot(&column, &column);
            take_out(&mut column, basis);
            take_out(&mut column, basis);
            let left = dot(&column, &column);
            if left > 1e-20 * before {
                column.iter_mut().for_each(|value| *value /= left.sqrt());
                basis.push(column);
            }
        };
        for mut column in by_moment {
            centre(&mut column);
            add(column, &mut basis);
        }
        let slopes = by_position.map(|mut column| {
            centre(&mut column);
            take_out(&mut column, &basis);
            column
        });
        let information = Symmetric3::from_fn(|i, j| dot(&slopes[i], &slopes[j]));
        slopes.into_iter().for_each(|column| add(column, &mut basis));
        Tangent { basis, information }
    }
}

/// Takes out what orthonormal columns hold of a map.
pub(super) fn take_out(map: &mut [f64], basis: &[Vec<f64>]) {
    for column in basis {
        let share = dot(map, column);
        map.iter_mut().zip(column).for_each(|(value, column)| *value -= share * column);
    }
}
