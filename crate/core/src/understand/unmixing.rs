use super::Found;
use super::grid::Grid;
use crate::finding::{Code, Error, Finding};
use crate::map::Maps;
use ndarray::{Array2, ArrayView2, Axis};

/// Singular values below this share of the largest are zero: printed with six digits, weights of dependent components
/// come this close to each other. Channels differ in size by far less.
const RANK: f64 = 1e-6;

/// The maps that belong to weights: the pseudo-inverse of W, or of W S where a sphering matrix S is kept apart, whose
/// columns tell what each component adds at each channel. `weights` holds Wᵀ: a row for each channel.
///
/// # Errors
/// `unmixing-singular` where values are missing, all weights are zero, or the sphering matrix is of another size.
pub(super) fn mixing(
    weights: Maps,
    grid: &Grid<'_>,
    sphering: Option<&Grid<'_>>,
    found: &mut Found,
) -> Result<Maps, Error> {
    let refuse = |why: &'static str, at: &Grid<'_>| {
        Error::from(Finding::new(Code::UnmixingSingular).at(found.place("maps", at)).with("why", why))
    };
    let channels = weights.labels.len();
    let transposed = match sphering {
        // (W S)ᵀ = Sᵀ Wᵀ.
        Some(sphering) => {
            if sphering.height() != channels || sphering.width() != channels {
                return Err(refuse("sphering-size", sphering));
            }
            let matrix = Array2::from_shape_fn((channels, channels), |(row, column)| {
                sphering.number(row, column).unwrap_or(f64::NAN)
            });
            product(matrix.t(), weights.values.view())
        }
        None => weights.values.clone(),
    };
    if transposed.iter().any(|value| !value.is_finite()) {
        return Err(refuse("unmixing-gaps", grid));
    }
    let inverse = pseudo_inverse(transposed.view()).ok_or_else(|| refuse("unmixing-zero", grid))?;
    let note = Finding::new(Code::UnmixingInverted).at(found.place("maps", grid)).with("components", inverse.rank);
    found.notes.push(note.with("maps", weights.names.len()));
    if sphering.is_none() {
        found.notes.push(Finding::new(Code::SpheringAbsent).at(found.place("maps", grid)));
    }
    // pinv(Aᵀ) is pinv(A)ᵀ: channels in rows again.
    Ok(Maps { values: inverse.matrix.t().as_standard_layout().into_owned(), ..weights })
}

fn product(a: ArrayView2<'_, f64>, b: ArrayView2<'_, f64>) -> Array2<f64> {
    Array2::from_shape_fn((a.nrows(), b.ncols()), |(row, column)| dot(a.row(row).iter(), b.column(column).iter()))
}

fn dot<'a>(a: impl Iterator<Item = &'a f64>, b: impl Iterator<Item = &'a f64>) -> f64 {
    a.zip(b).map(|(a, b)| a * b).sum()
}

struct Inverse {
    matrix: Array2<f64>,
    rank: usize,
}

/// The pseudo-inverse V Σ⁺ Uᵀ, from singular values found by turning pairs of columns until all are at right angles
/// (one-sided Jacobi; Hestenes 1958, J SIAM 6:51–90). `None` for a matrix of zeros.
fn pseudo_inverse(a: ArrayView2<'_, f64>) -> Option<Inverse> {
    // Columns as rows of these, for memory's sake; the shorter side is turned.
    let tall = a.nrows() >= a.ncols();
    let mut u = if tall { a.t().as_standard_layout().into_owned() } else { a.as_standard_layout().into_owned() };
    let count = u.nrows();
    let mut v = Array2::<f64>::eye(count);
    for _ in 0..60 {
        let mut turned = false;
        for first in 0..count {
            for second in first + 1..count {
                turned |= turn(&mut u, &mut v, first, second);
            }
        }
        if !turned {
            break;
        }
    }
    let norms: Vec<f64> = u.axis_iter(Axis(0)).map(|row| dot(row.iter(), row.iter()).sqrt()).collect();
    let largest = norms.iter().fold(0.0, |most: f64, norm| most.max(*norm));
    if largest <= 0.0 {
        return None;
    }
    let kept = |norm: f64| norm > RANK * largest;
    // Rows of u are σ times left vectors; their share in the inverse is divided by σ².
    let mut inverse = Array2::<f64>::zeros((count, u.ncols()));
    for ((left, right), norm) in u.axis_iter(Axis(0)).zip(v.axis_iter(Axis(0))).zip(&norms) {
        if !kept(*norm) {
            continue;
        }
        for (mut row, weight) in inverse.axis_iter_mut(Axis(0)).zip(right) {
            row.iter_mut().zip(left).for_each(|(sum, value)| *sum += weight * value / (norm * norm));
        }
    }
    let rank = norms.iter().filter(|norm| kept(**norm)).count();
    let matrix = if tall { inverse } else { inverse.t().as_standard_layout().into_owned() };
    Some(Inverse { matrix, rank })
}

/// Turns two rows of `u`, and those of `v` with them, to right angles; whether that was needed.
fn turn(u: &mut Array2<f64>, v: &mut Array2<f64>, first: usize, second: usize) -> bool {
    let (a, b, c) = {
        let (p, q) = (u.row(first), u.row(second));
        (dot(p.iter(), p.iter()), dot(q.iter(), q.iter()), dot(p.iter(), q.iter()))
    };
    if c.abs() <= 1e-15 * (a * b).sqrt() || c == 0.0 {
        return false;
    }
    let zeta = (b - a) / (2.0 * c);
    let tangent = zeta.signum() / (zeta.abs() + (1.0 + zeta * zeta).sqrt());
    let cosine = 1.0 / (1.0 + tangent * tangent).sqrt();
    let sine = cosine * tangent;
    for matrix in [u, v] {
        let (mut p, mut q) = matrix.multi_slice_mut((ndarray::s![first, ..], ndarray::s![second, ..]));
        p.iter_mut().zip(q.iter_mut()).for_each(|(p, q)| (*p, *q) = (cosine * *p - sine * *q, sine * *p + cosine * *q));
    }
    true
}

#[cfg(test)]
mod tests {
    use super::*;

    fn matrix(rows: usize, columns: usize) -> Array2<f64> {
        Array2::from_shape_fn((rows, columns), |(i, j)| libm::sin((3 * i * i + 7 * j + i * j) as f64 + 0.3))
    }

    /// The four conditions of Penrose 1955 (Math Proc Camb Phil Soc 51:406–413).
    fn check(a: &Array2<f64>, expected: usize) {
        let Some(Inverse { matrix: x, rank }) = pseudo_inverse(a.view()) else { panic!("no inverse") };
        assert_eq!(rank, expected);
        assert_eq!(x.dim(), (a.ncols(), a.nrows()));
        let (ax, xa) = (product(a.view(), x.view()), product(x.view(), a.view()));
        let close = |p: &Array2<f64>, q: &Array2<f64>| p.iter().zip(q).all(|(p, q)| (p - q).abs() < 1e-9);
        assert!(close(&product(ax.view(), a.view()), a) && close(&product(xa.view(), x.view()), &x));
        assert!(close(&ax, &ax.t().to_owned()) && close(&xa, &xa.t().to_owned()));
    }

    #[test]
    fn the_pseudo_inverse_meets_its_conditions() {
        check(&matrix(9, 9), 9);
        check(&matrix(12, 5), 5);
        check(&matrix(5, 12), 5);
        let thin = matrix(9, 3);
        check(&product(thin.view(), matrix(3, 7).view()), 3);
        assert!(pseudo_inverse(Array2::zeros((4, 3)).view()).is_none());
    }
}
