use super::potential::Potential;
use super::{Images, Series};
use crate::math::lanes::{blocks, splat3};
use crate::math::{Lanes, Vec3};
use std::sync::Arc;

/// Electrodes and what gives Φ at them, in registers of one precision.
#[derive(Clone, Debug)]
pub(crate) struct Field<L> {
    blocks: Vec<Block<L>>,
    /// 1 for each electrode of the last block, 0 where there are no more.
    last: L,
    count: usize,
    source: Source<L>,
}

/// Components x, y, z of the directions of a block of electrodes; zero where there are no more.
pub(crate) type Block<L> = [L; 3];

/// What gives Φ.
#[derive(Clone, Debug)]
pub(crate) enum Source<L> {
    Images(Images<L>),
    Series(Arc<Series>),
}

impl<L: Lanes> Field<L> {
    pub(super) fn new(directions: &[Vec3], source: Source<L>) -> Self {
        let [x, y, z] = [0, 1, 2].map(|axis| blocks(&directions.iter().map(|e| e[axis]).collect::<Vec<_>>()));
        let blocks = x.into_iter().zip(y).zip(z).map(|((x, y), z)| [x, y, z]).collect();
        let in_last = directions.len().saturating_sub(1) % L::WIDTH + 1;
        Self { blocks, last: L::pack(&vec![1.0; in_last]), count: directions.len(), source }
    }

    pub(crate) fn blocks(&self) -> &[Block<L>] {
        &self.blocks
    }

    pub(crate) fn last(&self) -> L {
        self.last
    }

    /// Electrodes.
    pub(crate) fn count(&self) -> usize {
        self.count
    }

    pub(super) fn source(&self) -> &Source<L> {
        &self.source
    }

    /// Derivatives of Φ at a position for all blocks, zero where a block has no more electrodes; those that only
    /// derivatives of the lead field need are left out unless `HIGHER`.
    pub(crate) fn potentials<const HIGHER: bool>(&self, position: Vec3, potentials: &mut Vec<Potential<L>>) {
        let distance2 = position.dot(position);
        let (p, u) = (splat3(position), L::splat(distance2));
        potentials.clear();
        match &self.source {
            Source::Images(images) => {
                for e in &self.blocks {
                    potentials.push(images.potential::<HIGHER>(u, along(e, &p)));
                }
            }
            Source::Series(series) => {
                let terms = series.terms(distance2.sqrt(), if HIGHER { 2 } else { 0 });
                potentials.extend(self.blocks.iter().map(|e| series.potential(terms, u, along(e, &p))));
            }
        }
        if let Some(last) = potentials.last_mut() {
            *last = last.masked(self.last);
        }
    }
}

/// The scalar products of a block's directions with a vector.
#[inline(always)]
pub(crate) fn along<L: Lanes>(block: &Block<L>, vector: &[L; 3]) -> L {
    block[0] * vector[0] + block[1] * vector[1] + block[2] * vector[2]
}
