//! What was done in the words of a paper, and a note on one map for a record.

use super::Study;
use crate::finding::Error;
use crate::report::{Alternatives, Assessment, Done, Facts, MapReport, Methods, Record};

impl Study {
    /// What was done, as a paper tells it, with the sources that it cites; nothing is fitted for it.
    pub fn methods(&self, done: &Done) -> Methods {
        let errors = self.head_errors();
        let unfitted = |&index: &usize| self.normal(index).is_none();
        Methods::new(
            &Facts {
                report: &self.facts(),
                maps: self.count(),
                unfitted: (0..self.count()).filter(unfitted).count(),
                measured: self.placement.measured,
                axes: &self.placement.axes,
                images: self.fitter.field().images().is_some(),
                skull: errors.skull_ratio,
                sphere: errors.sphere.is_some(),
                pairs: self.pairs_are_tried(),
            },
            done,
        )
    }

    /// A note on one map, counted from 0, with what is said to be done; populations that a verdict needs and that are not kept
    /// are drawn, which takes seconds.
    ///
    /// # Errors
    /// `map-index`.
    pub fn record(&self, index: usize, done: &Done) -> Result<Record, Error> {
        let asked = [(done.region, Assessment::Region), (done.alternatives, Assessment::Alternatives)];
        let asked: Vec<Assessment> = asked.into_iter().filter(|(done, _)| *done).map(|(_, what)| what).collect();
        let mut map = self.assess(index, &asked)?;
        if let MapReport::Fitted(map) = &mut map
            && done.verdict
        {
            // Of the populations that are kept, as the page tells it, also while they are still being drawn.
            map.verdict = map.verdict.take().or_else(|| self.verdict(map));
            if map.verdict.is_none() {
                self.assessed(index, map, &[Assessment::Verdict]);
            }
        }
        let alternatives = match &map {
            MapReport::Fitted(map) => map
                .alternatives
                .as_ref()
                .map(|found| Alternatives::new(map, found, self.placement.sphere.sphere.radius, None)),
            MapReport::Failed { .. } => None,
        };
        Ok(Record::new(&self.facts(), [index, self.count()], &map, alternatives.as_ref(), done))
    }
}
