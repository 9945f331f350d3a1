use super::{Background, Cause, DrawnHead, HeadErrors, part};
use crate::fit::{Fit, Fitter, Tangent};
use crate::math::{Stream, Vec3, dot, mean};

/// Heads that are off and noise maps, drawn once for all maps of a table.
#[derive(Clone, Debug)]
pub struct Refits {
    draws: Vec<Drawn>,
    alone: [Vec<DrawnHead>; 3],
}

#[derive(Clone, Debug)]
struct Drawn {
    head: DrawnHead,
    noise: Vec<f64>,
}

/// How strong the noise is.
#[derive(Clone, Copy, Debug, PartialEq)]
pub enum Noise {
    /// So that it leaves, together with the errors of the head, what the fit leaves.
    FromResidual,
    /// Of this root mean square over the electrodes.
    Sd(f64),
}

/// Where fits go when the head is off and noise is added.
#[derive(Clone, Debug)]
pub struct Scatter {
    /// Under all errors together.
    pub together: Vec<Fit>,
    /// Positions under errors of one cause alone, of fewer draws.
    pub alone: [Vec<Vec3>; 3],
    /// Under noise alone.
    pub noise: Vec<Vec3>,
    /// Root mean square of the noise over draws and electrodes, in the unit of the map.
    pub noise_sd: f64,
}

/// A map of one dipole in a head that is off.
#[derive(Clone, Debug)]
pub struct Simulated<'a> {
    /// The map, noise included.
    pub map: Vec<f64>,
    noise: &'a [f64],
    size: f64,
}

/// Draws that each cause alone is refitted in: its standard deviation is then known to a tenth.
const ALONE: usize = 50;

impl Refits {
    /// So many draws, determined by a seed.
    pub fn new(fitter: &Fitter, errors: &HeadErrors, background: Background, draws: usize, seed: u64) -> Self {
        let reach = fitter.field().reach();
        let drawn = |index: u64| Drawn {
            head: errors.draw(&Cause::ALL, reach, seed, index),
            noise: background.draw(fitter, &mut Stream::new(seed, part::NOISE, index)),
        };
        let alone =
            |cause| (0..draws.min(ALONE) as u64).map(|index| errors.draw(&[cause], reach, seed, index)).collect();
        Self { draws: (0..draws as u64).map(drawn).collect(), alone: Cause::ALL.map(alone) }
    }

    /// The maps that the dipole of a fit makes in each of the heads, with noise: maps of one dipole that look, to the fit,
    /// like the one that was fitted.
    ///
    /// Where the noise is not known, its strength is that which explains the residual: in each draw, what it leaves beside
    /// the fit adds up with what the errors of the head leave to what the fit left.
    pub fn maps<'a>(
        &'a self,
        fitter: &'a Fitter,
        fit: &Fit,
        tangent: &'a Tangent,
        noise: Noise,
    ) -> impl Iterator<Item = Simulated<'a>> {
        let (position, moment) = (fit.position, fit.moment * fitter.field().scale());
        let projected = fitter.project(fit.position, fit.moment);
        let rv = fit.residual_variance;
        let left = dot(&projected, &projected) * rv / (1.0 - rv).max(1e-9);
        self.draws.iter().map(move |draw| {
            let map = draw.head.map(position, moment);
            let size = match noise {
                Noise::Sd(sd) => sd * (map.len() as f64).sqrt(),
                Noise::FromResidual => {
                    let off: Vec<f64> = map.iter().zip(&projected).map(|(a, b)| a - b).collect();
                    strength(&tangent.left(&off), &tangent.left(&draw.noise), left)
                }
            };
            Simulated { map: added(&map, &draw.noise, size), noise: &draw.noise, size }
        })
    }

    /// Where the fits of these maps go, in the head as modelled.
    pub fn scatter(&self, fitter: &Fitter, fit: &Fit, tangent: &Tangent, noise: Noise) -> Scatter {
        let moment = fit.moment * fitter.field().scale();
        let projected = fitter.project(fit.position, fit.moment);
        let follow = |map: &[f64]| fitter.follow(map, fit.position);
        let mut scatter = Scatter { together: Vec::new(), alone: Default::default(), noise: Vec::new(), noise_sd: 0.0 };
        let mut squares = Vec::with_capacity(self.draws.len());
        for (index, Simulated { map, noise, size }) in self.maps(fitter, fit, tangent, noise).enumerate() {
            squares.push(size * size / map.len() as f64);
            scatter.together.extend(follow(&map));
            if index < ALONE {
                scatter.noise.extend(follow(&added(&projected, noise, size)).map(|fit| fit.position));
            }
        }
        scatter.alone = [0, 1, 2].map(|cause: usize| {
            let seen = self.alone[cause].iter().filter_map(|head| follow(&head.map(fit.position, moment)));
            seen.map(|fit| fit.position).collect()
        });
        scatter.noise_sd = mean(&squares).sqrt();
        scatter
    }
}

fn added(map: &[f64], noise: &[f64], size: f64) -> Vec<f64> {
    map.iter().zip(noise).map(|(value, noise)| value + size * noise).collect()
}

/// The a ≥ 0 for which |h + a b|² = left; 0 where h alone leaves more.
fn strength(h: &[f64], b: &[f64], left: f64) -> f64 {
    let (hh, hb, bb) = (dot(h, h), dot(h, b), dot(b, b));
    if hh >= left || bb <= 0.0 {
        return 0.0;
    }
    ((hb * hb + bb * (left - hh)).sqrt() - hb) / bb
}
