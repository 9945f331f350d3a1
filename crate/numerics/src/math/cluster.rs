//! Points that lie together.

use super::sort_by_number;

/// Ward's hierarchy (Ward 1963, J Am Stat Assoc 58:236–244): points are joined step by step, so that each step adds least to
/// the sum of squared distances from the means.
///
/// Nearest neighbours are followed until two are each other's (Benzécri 1982; Murtagh 1983, Comput J 26:354–359), which takes
/// time as the square of the number of points and no more memory than they do: what a step adds follows from means and sizes
/// alone, |A| |B| / (|A| + |B|) · |a − b|².
#[derive(Clone, Debug)]
pub struct Hierarchy {
    count: usize,
    /// A point of each of the two that are joined, least addition first.
    steps: Vec<(usize, usize)>,
}

/// A group on its way.
#[derive(Clone, Copy)]
struct Mean<const D: usize> {
    size: f64,
    at: [f64; D],
}

impl Hierarchy {
    /// Of points in a space of `D` dimensions; of equal distances the first counts.
    pub fn ward<const D: usize>(points: &[[f64; D]]) -> Self {
        let mut means: Vec<Option<Mean<D>>> = points.iter().map(|&at| Some(Mean { size: 1.0, at })).collect();
        let added = |a: &Mean<D>, b: &Mean<D>| squared(&a.at, &b.at) * (a.size * b.size / (a.size + b.size));
        let mut steps: Vec<(f64, usize, usize)> = Vec::with_capacity(points.len().saturating_sub(1));
        let mut chain: Vec<usize> = Vec::new();
        let mut first = 0;
        while steps.len() + 1 < points.len() {
            let end = match chain.last() {
                Some(&end) => end,
                None => {
                    while means[first].is_none() {
                        first += 1;
                    }
                    chain.push(first);
                    first
                }
            };
            let Some(own) = means[end] else { break };
            // Of equals the one before it in the chain, or it would never end.
            let before = chain.len().checked_sub(2).map(|at| chain[at]);
            let mut nearest = before.and_then(|at| Some((added(&own, means[at].as_ref()?), at)));
            for (at, other) in means.iter().enumerate() {
                let Some(other) = other.as_ref().filter(|_| at != end) else { continue };
                let one = added(&own, other);
                if nearest.is_none_or(|(least, _)| one < least) {
                    nearest = Some((one, at));
                }
            }
            let Some((least, other)) = nearest else { break };
            if before != Some(other) {
                chain.push(other);
                continue;
            }
            chain.truncate(chain.len() - 2);
            if let (Some(a), Some(b)) = (means[end].take(), means[other].take()) {
                let size = a.size + b.size;
                let at = core::array::from_fn(|k| (a.size * a.at[k] + b.size * b.at[k]) / size);
                means[end.min(other)] = Some(Mean { size, at });
                first = first.min(end).min(other);
            }
            steps.push((least, end, other));
        }
        sort_by_number(&mut steps, |step| step.0);
        Self { count: points.len(), steps: steps.into_iter().map(|(_, a, b)| (a, b)).collect() }
    }

    /// The group of each point where there are so many; groups are numbered in the order of their first points.
    pub fn cut(&self, groups: usize) -> Vec<usize> {
        let mut above: Vec<usize> = (0..self.count).collect();
        fn top(above: &[usize], mut at: usize) -> usize {
            while above[at] != at {
                at = above[at];
            }
            at
        }
        for &(a, b) in &self.steps[..self.count.saturating_sub(groups).min(self.steps.len())] {
            let (a, b) = (top(&above, a), top(&above, b));
            above[a.max(b)] = a.min(b);
        }
        let mut numbers = vec![None; self.count];
        let mut next = 0;
        (0..self.count)
            .map(|at| {
                *numbers[top(&above, at)].get_or_insert_with(|| {
                    next += 1;
                    next - 1
                })
            })
            .collect()
    }
}

/// The mean silhouette (b − a) / max(a, b) of the points under each of several groupings (Rousseeuw 1987, J Comput Appl Math
/// 20:53–65): a is a point's mean distance from the others of its group, b that from the nearest other group; 0 for a point
/// that is alone. `None` for a grouping into one group.
pub fn silhouettes<const D: usize>(points: &[[f64; D]], groupings: &[Vec<usize>]) -> Vec<Option<f64>> {
    let sizes: Vec<Vec<f64>> = groupings
        .iter()
        .map(|groups| {
            let mut sizes = vec![0.0; groups.iter().max().map_or(0, |most| most + 1)];
            groups.iter().for_each(|group| sizes[*group] += 1.0);
            sizes
        })
        .collect();
    let mut totals = vec![0.0; groupings.len()];
    let mut sums: Vec<Vec<f64>> = sizes.iter().map(|sizes| vec![0.0; sizes.len()]).collect();
    for (index, point) in points.iter().enumerate() {
        sums.iter_mut().flatten().for_each(|sum| *sum = 0.0);
        for (at, other) in points.iter().enumerate() {
            let distance = squared(point, other).sqrt();
            for (sums, groups) in sums.iter_mut().zip(groupings) {
                sums[groups[at]] += distance;
            }
        }
        for (((total, sums), sizes), groups) in totals.iter_mut().zip(&sums).zip(&sizes).zip(groupings) {
            let own = groups[index];
            if sizes[own] > 1.0 {
                let a = sums[own] / (sizes[own] - 1.0);
                let others = sums.iter().zip(sizes).enumerate().filter(|(group, _)| *group != own);
                let b = others.fold(f64::INFINITY, |least, (_, (sum, size))| least.min(sum / size));
                let most = a.max(b);
                *total += if most > 0.0 && most.is_finite() { (b - a) / most } else { 0.0 };
            }
        }
    }
    let mean = |(total, sizes): (f64, &Vec<f64>)| (sizes.len() > 1).then(|| total / points.len() as f64);
    totals.into_iter().zip(&sizes).map(mean).collect()
}

fn squared<const D: usize>(a: &[f64; D], b: &[f64; D]) -> f64 {
    a.iter().zip(b).map(|(a, b)| (a - b) * (a - b)).sum()
}
