//! The dipole in the head: coordinates for drawings, and words for those who do not see them.

use super::number::millimetres;
use super::{EquivalentDipole, HeadReport, Polarity, Site};
use crate::math::Vec3;
use serde::Serialize;

/// What drawings of the head show: x right, y front, z up, the scalp at radius 1 about the origin.
#[derive(Clone, Debug, PartialEq, Serialize)]
pub struct Figure {
    /// Shells, innermost first.
    pub shells: Vec<FigureShell>,
    /// Electrodes, on the scalp.
    pub electrodes: Vec<Vec3>,
    /// The dipole.
    pub dipole: FigureDipole,
    /// Whether the dipole is an axis without direction.
    pub axis: bool,
}

/// A shell of a [`Figure`].
#[derive(Clone, Debug, PartialEq, Serialize)]
pub struct FigureShell {
    /// Name of the tissue.
    pub tissue: String,
    /// Outer radius.
    pub radius: f64,
}

/// The dipole of a [`Figure`].
#[derive(Clone, Debug, PartialEq, Serialize)]
pub struct FigureDipole {
    /// Where it is.
    pub position: Vec3,
    /// Unit direction of its moment.
    pub direction: Vec3,
}

impl Figure {
    /// The figure of a dipole among all electrodes.
    pub fn new(dipole: &EquivalentDipole, head: &HeadReport, sites: &[Site]) -> Self {
        let radius = |mm: f64| mm / head.radius_mm;
        let shell = |shell: &crate::head::Shell| FigureShell {
            tissue: shell.tissue.clone(),
            radius: radius(shell.outer_radius_mm),
        };
        Self {
            shells: head.shells.iter().map(shell).collect(),
            electrodes: sites.iter().map(|site| site.direction).collect(),
            dipole: FigureDipole {
                position: dipole.canonical_mm * (1.0 / head.radius_mm),
                direction: dipole.canonical_direction,
            },
            axis: dipole.polarity == Polarity::Arbitrary,
        }
    }
}

/// The names of the axes' ends, positive end first.
const ENDS: [[&str; 2]; 3] = [["right", "left"], ["front", "back"], ["up", "down"]];

/// A view of the head.
pub(super) struct View {
    /// How it begins.
    what: &'static str,
    /// The axes that it shows.
    axes: &'static [usize],
}

pub(super) const ABOVE: View = View { what: "The head from above, front up", axes: &[0, 1] };
pub(super) const BEHIND: View = View { what: "The head from behind, top up", axes: &[0, 2] };
pub(super) const LEFT: View = View { what: "The head from the left, front to the left", axes: &[1, 2] };
pub(super) const TURNED: View =
    View { what: "The head with its shells and electrodes, to be turned", axes: &[0, 1, 2] };

impl View {
    /// What is seen of the dipole.
    pub(super) fn words(&self, dipole: &EquivalentDipole) -> String {
        format!("{}: the equivalent dipole lies {}. {}", self.what, self.place(dipole), self.axis(dipole))
    }

    fn place(&self, dipole: &EquivalentDipole) -> String {
        let steps: Vec<String> = self
            .axes
            .iter()
            .map(|&axis| (axis, dipole.canonical_mm[axis]))
            .filter(|(_, mm)| mm.abs() >= 0.5)
            .map(|(axis, mm)| {
                let to_the = if axis == 2 { "" } else { "to the " };
                format!("{} mm {to_the}{}", millimetres(mm.abs()), ENDS[axis][usize::from(mm < 0.0)])
            })
            .collect();
        match steps.split_last() {
            None => "at the centre of the sphere".into(),
            Some((last, [])) => format!("{last} from the centre of the sphere"),
            Some((last, others)) => format!("{} and {last} from the centre of the sphere", others.join(", ")),
        }
    }

    /// Where the moment points as far as the view shows it; both ways where its sign is arbitrary.
    fn axis(&self, dipole: &EquivalentDipole) -> String {
        /// Less than this part of the moment in the view's plane is called the line of sight.
        const END_ON: f64 = 0.35;
        let seen = Vec3([0, 1, 2].map(|axis| match self.axes.contains(&axis) {
            true => dipole.canonical_direction[axis],
            false => 0.0,
        }));
        let end_on = seen.norm() < END_ON;
        let toward = towards(if end_on { dipole.canonical_direction } else { seen });
        let sight = if end_on { ", nearly along the line of sight" } else { "" };
        match dipole.polarity {
            Polarity::Declared => format!("It points {toward}{sight}."),
            Polarity::Arbitrary => {
                let back = towards(-if end_on { dipole.canonical_direction } else { seen });
                format!("Its axis runs between {toward} and {back}{sight}.")
            }
        }
    }
}

/// A direction by the ends of the axes that it follows noticeably.
fn towards(direction: Vec3) -> String {
    /// Less than 22.5° off an axis counts as along it.
    const NOTICEABLE: f64 = 0.382_683_432_365_089_8;
    let length = direction.norm();
    let words: Vec<&str> = [2, 1, 0]
        .into_iter()
        .filter(|&axis| direction[axis].abs() > NOTICEABLE * length)
        .map(|axis| ENDS[axis][usize::from(direction[axis] < 0.0)])
        .collect();
    words.join("-")
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn directions_are_named_by_the_ends_of_the_axes() {
        for (direction, words) in [
            ([1.0, 0.0, 0.0], "right"),
            ([-1.0, 0.0, 0.3], "left"),
            ([0.0, 1.0, -1.0], "down-front"),
            ([1.0, -1.0, 1.0], "up-back-right"),
        ] {
            assert_eq!(towards(Vec3(direction)), words);
        }
    }
}
