use super::sources::mixture;
use super::{Background, Cause, HeadErrors, SourceRule, part};
use crate::fit::{BATCH, Fitter};
use crate::math::{Stream, centre, dot};
use core::ops::Range;

/// Simulated maps for one set of electrodes and one head, each fitted by one dipole: what others than a single source look
/// like to the fit.
#[derive(Clone, Debug)]
pub struct Population<'a> {
    /// Fits of this head and these electrodes.
    pub fitter: &'a Fitter,
    /// Where sources lie.
    pub rule: SourceRule,
    /// What the single dipoles' heads are off in.
    pub errors: &'a HeadErrors,
    /// What the noise of the single dipoles looks like.
    pub background: Background,
    /// Its share of the power of their maps.
    pub noise: f64,
    /// Determines all draws.
    pub seed: u64,
}

/// What the maps of a population come from.
#[derive(Clone, Copy, Debug, PartialEq, Eq, PartialOrd, Ord, serde::Serialize, serde::Deserialize)]
#[serde(rename_all = "kebab-case")]
pub enum Kind {
    /// Independent normal values.
    Noise,
    /// One dipole in a head that is not quite as modelled, and noise.
    OneDipole,
    /// Two dipoles in the head as modelled; so the others.
    TwoDipoles,
    /// Five.
    FiveDipoles,
    /// Twenty.
    TwentyDipoles,
    /// A hundred.
    HundredDipoles,
}

impl Kind {
    /// All of them.
    pub const ALL: [Self; 6] =
        [Self::Noise, Self::OneDipole, Self::TwoDipoles, Self::FiveDipoles, Self::TwentyDipoles, Self::HundredDipoles];

    /// As settings and reports write it.
    pub fn name(self) -> &'static str {
        match self {
            Self::Noise => "noise",
            Self::OneDipole => "one-dipole",
            Self::TwoDipoles => "two-dipoles",
            Self::FiveDipoles => "five-dipoles",
            Self::TwentyDipoles => "twenty-dipoles",
            Self::HundredDipoles => "hundred-dipoles",
        }
    }

    /// Its place in [`Self::ALL`].
    pub fn place(self) -> usize {
        Self::ALL.iter().position(|kind| *kind == self).unwrap_or(0)
    }
}

/// The fit of a simulated map.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Draw {
    /// Residual variance.
    pub residual_variance: f64,
    /// Distance of the fitted dipole from the centre over the radius of the innermost shell.
    pub eccentricity: f64,
    /// Whether it presses on the boundary of the region of sources.
    pub at_boundary: bool,
}

impl Population<'_> {
    /// The draws of these numbers; which others are made, and when, changes no bit of them.
    pub fn draws(&self, kind: Kind, range: Range<u64>) -> Vec<Draw> {
        let brain = self.fitter.field().brain_ratio();
        let mut draws = Vec::with_capacity((range.end - range.start) as usize);
        for first in range.clone().step_by(BATCH) {
            let maps: Vec<Vec<f64>> =
                (first..range.end.min(first + BATCH as u64)).map(|index| self.map(kind, index)).collect();
            let fits = self.fitter.fit_batch(&maps.iter().map(Vec::as_slice).collect::<Vec<_>>());
            // No draw is the same everywhere; if one were, it would count as one that no dipole explains.
            draws.extend(fits.into_iter().map(|fit| match fit {
                Some(fit) => Draw {
                    residual_variance: fit.residual_variance,
                    eccentricity: fit.position.norm() / brain,
                    at_boundary: fit.at_boundary,
                },
                None => Draw { residual_variance: 1.0, eccentricity: 0.0, at_boundary: false },
            }));
        }
        draws
    }

    /// The map of one draw.
    pub fn map(&self, kind: Kind, index: u64) -> Vec<f64> {
        let mut stream = Stream::new(self.seed, part::POPULATION + kind.place() as u64, index);
        let stream = &mut stream;
        match kind {
            Kind::Noise => (0..self.fitter.field().count()).map(|_| stream.normal()).collect(),
            Kind::OneDipole => self.single(index, stream),
            Kind::TwoDipoles => mixture(self.fitter, 2, &self.rule, stream),
            Kind::FiveDipoles => mixture(self.fitter, 5, &self.rule, stream),
            Kind::TwentyDipoles => mixture(self.fitter, 20, &self.rule, stream),
            Kind::HundredDipoles => mixture(self.fitter, 100, &self.rule, stream),
        }
    }

    fn single(&self, index: u64, stream: &mut Stream) -> Vec<f64> {
        let (position, moment) = self.rule.draw(stream);
        let brain = self.fitter.field().brain_ratio();
        let head = self.errors.draw(&Cause::ALL, self.rule.max_eccentricity * brain, self.seed, index);
        let mut map = head.map(position * brain, moment);
        centre(&mut map);
        let noise = self.background.draw(self.fitter, stream);
        // Of the whole power this share is noise.
        let size = (self.noise / (1.0 - self.noise) * dot(&map, &map)).sqrt();
        map.iter_mut().zip(noise).for_each(|(value, noise)| *value += size * noise);
        map
    }
}
