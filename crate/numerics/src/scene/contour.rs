use super::DiscPoint;
use std::collections::HashMap;

/// A line of equal value.
#[derive(Clone, Debug, PartialEq)]
pub struct Contour {
    /// The value.
    pub level: f64,
    /// Its points on the disc; closed when the last equals the first.
    pub points: Vec<DiscPoint>,
}

/// Lines of equal value of a square raster, whose rows run from the front (y = 1) to the back and whose columns from left
/// to right: marching squares (Lorensen & Cline 1987, Comput Graph 21:163–169, in the plane) with linear interpolation,
/// segments joined to lines. In a saddle the mean of the four corners decides. Cells with a corner that is not a number are
/// passed over.
pub fn contours(raster: &[f64], size: usize, levels: &[f64]) -> Vec<Contour> {
    levels.iter().flat_map(|&level| level_lines(raster, size, level)).collect()
}

/// An edge of the raster, by its first corner and whether it goes down.
type Edge = (usize, bool);

fn level_lines(raster: &[f64], size: usize, level: f64) -> Vec<Contour> {
    let above = |corner: usize| raster[corner] >= level;
    // Each crossed edge belongs to at most two segments.
    let mut neighbours: HashMap<Edge, [Option<Edge>; 2]> = HashMap::new();
    let mut order: Vec<Edge> = Vec::new();
    let mut join = |a: Edge, b: Edge| {
        for (from, to) in [(a, b), (b, a)] {
            let slots = neighbours.entry(from).or_insert_with(|| {
                order.push(from);
                [None, None]
            });
            let free = if slots[0].is_none() { 0 } else { 1 };
            slots[free] = Some(to);
        }
    };
    for row in 0..size.saturating_sub(1) {
        for column in 0..size - 1 {
            let corner = row * size + column;
            let (right, below, across) = (corner + 1, corner + size, corner + size + 1);
            let (top, left) = ((corner, false), (corner, true));
            let (bottom, far) = ((below, false), (right, true));
            let corners = [corner, right, across, below];
            if corners.iter().any(|&one| raster[one].is_nan()) {
                continue;
            }
            match corners.map(above) {
                [a, b, c, d] if a == b && b == c && c == d => {}
                [a, b, c, d] if a == c && b == d => {
                    let middle = (raster[corner] + raster[right] + raster[across] + raster[below]) / 4.0;
                    if (middle >= level) == a {
                        join(top, far);
                        join(left, bottom);
                    } else {
                        join(top, left);
                        join(far, bottom);
                    }
                }
                [a, b, c, d] => {
                    let crossed = [(top, a != b), (far, b != c), (bottom, c != d), (left, d != a)];
                    let mut edges = crossed.into_iter().filter(|(_, crossed)| *crossed).map(|(edge, _)| edge);
                    if let (Some(first), Some(second)) = (edges.next(), edges.next()) {
                        join(first, second);
                    }
                }
            }
        }
    }
    let point = |(corner, down): Edge| -> DiscPoint {
        let other = if down { corner + size } else { corner + 1 };
        let part = (level - raster[corner]) / (raster[other] - raster[corner]);
        let (row, column) = ((corner / size) as f64, (corner % size) as f64);
        let (row, column) = if down { (row + part, column) } else { (row, column + part) };
        let place = |index: f64| (2.0 * index + 1.0) / size as f64 - 1.0;
        [place(column), -place(row)]
    };
    let mut lines = Vec::new();
    let ends_first = order.iter().filter(|edge| neighbours[edge][1].is_none()).chain(&order).copied();
    let mut visited = std::collections::HashSet::new();
    for start in ends_first.collect::<Vec<_>>() {
        let mut points = Vec::new();
        let (mut here, mut before) = (Some(start), None);
        while let Some(edge) = here {
            if !visited.insert(edge) {
                if edge == start && points.len() > 2 {
                    points.push(point(edge));
                }
                break;
            }
            points.push(point(edge));
            let next = neighbours[&edge].into_iter().flatten().find(|&next| Some(next) != before);
            (before, here) = (Some(edge), next);
        }
        if points.len() > 1 {
            lines.push(Contour { level, points });
        }
    }
    lines
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn a_hill_has_one_closed_round_line() {
        let size = 41;
        let place = |i: usize| (2.0 * i as f64 + 1.0) / size as f64 - 1.0;
        let raster: Vec<f64> = (0..size * size)
            .map(|i| {
                let (x, y) = (place(i % size), -place(i / size));
                (x - 0.2) * (x - 0.2) + (y + 0.1) * (y + 0.1)
            })
            .collect();
        let lines = contours(&raster, size, &[0.25, 9.0]);
        assert_eq!(lines.len(), 1);
        let points = &lines[0].points;
        assert_eq!(points.first(), points.last());
        assert!(points.len() > 50);
        for [x, y] in points {
            assert!((libm::hypot(x - 0.2, y + 0.1) - 0.5).abs() < 0.003);
        }
    }

    #[test]
    fn a_slope_has_one_open_line_from_edge_to_edge() {
        let size = 8;
        let raster: Vec<f64> = (0..64).map(|i| (i % size) as f64).collect();
        let lines = contours(&raster, size, &[3.5]);
        assert_eq!(lines.len(), 1);
        assert_eq!(lines[0].points.len(), 8);
        assert!(lines[0].points.iter().all(|p| p[0].abs() < 1e-12));
    }
}
