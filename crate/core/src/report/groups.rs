//! Dipoles of several people in one head, grouped by place and axis.

use super::number::{hundredths, millimetres, percent, tenths};
use super::trust_settings::within;
use super::{CENTRE_MM, DrawnEllipsoid, Settings};
use crate::assess::{CANONICAL_RADIUS_MM, Grouping, MOST_GROUPS};
use crate::electrode::nearest_site;
use crate::finding::{Code, Error, Finding, Place};
use crate::math::{Ellipsoid, Symmetric3, Vec3, mean};
use serde::{Deserialize, Serialize};
use std::collections::HashSet;

/// Most dipoles that are grouped: time grows with their square.
const MOST_DIPOLES: usize = 5000;

/// What is grouped.
#[derive(Clone, Debug, PartialEq, Deserialize)]
#[serde(default, rename_all = "camelCase", deny_unknown_fields)]
pub struct GroupsRequest {
    /// Recordings or decompositions.
    pub members: Vec<GroupedMember>,
    /// How many groups; `None` for where the mean silhouette is largest.
    pub groups: Option<usize>,
    /// How far apart in mm dipoles at one place count whose axes cross at a right angle.
    pub axis_mm: f64,
}

impl Default for GroupsRequest {
    fn default() -> Self {
        Self { members: Vec::new(), groups: None, axis_mm: 30.0 }
    }
}

/// A recording or decomposition with those of its dipoles that are grouped.
#[derive(Clone, Debug, Default, PartialEq, Deserialize)]
#[serde(default, deny_unknown_fields)]
pub struct GroupedMember {
    /// Its name.
    pub name: String,
    /// Whose it is; what has no subject counts as a person of its own.
    pub subject: Option<String>,
    /// Its dipoles.
    pub dipoles: Vec<GroupedDipole>,
}

/// A dipole in canonical axes.
#[derive(Clone, Copy, Debug, PartialEq, Deserialize)]
#[serde(deny_unknown_fields)]
pub struct GroupedDipole {
    /// The map that it was fitted to.
    pub map: usize,
    /// Position in scalp radii of its own head.
    pub position: Vec3,
    /// Direction, of any length.
    pub direction: Vec3,
    /// Residual variance.
    pub rv: f64,
}

/// Dipoles in groups.
#[derive(Clone, Debug, PartialEq, Serialize)]
pub struct Groups {
    /// Number of groups.
    pub count: usize,
    /// The mean silhouette for each number of groups that was compared.
    pub criterion: Vec<Criterion>,
    /// What was found.
    pub sentence: String,
    /// The groups, largest first.
    pub groups: Vec<Group>,
    /// What is to be said of them.
    pub notes: Vec<String>,
}

/// How well a number of groups divides the dipoles.
#[derive(Clone, Debug, PartialEq, Serialize)]
pub struct Criterion {
    /// Number of groups.
    pub groups: usize,
    /// Mean silhouette, −1 to 1.
    pub value: f64,
    /// The same as text.
    pub text: String,
}

/// A group of dipoles.
#[derive(Clone, Debug, PartialEq, Serialize)]
pub struct Group {
    /// Of each dipole the place of its member in the request, and its own among the member's.
    pub members: Vec<[usize; 2]>,
    /// How many people are in it.
    pub subjects: usize,
    /// Mean position in scalp radii.
    pub position: Vec3,
    /// Mean axis: that along which the squared parts of the unit moments are largest, turned towards its largest part.
    pub axis: Vec3,
    /// Two standard deviations of the positions about their mean; absent for fewer than four dipoles.
    pub ellipsoid: Option<DrawnEllipsoid>,
    /// Dipoles; people; mean position, mm; spread of positions, mm, and of axes, degrees (root mean square); mean residual
    /// variance, percent.
    pub cells: Vec<String>,
    /// The same in words.
    pub sentence: String,
}

/// A dipole with where it comes from.
struct Placed {
    at: [usize; 2],
    mm: Vec3,
    axis: Vec3,
    rv: f64,
}

impl Groups {
    /// Groups them.
    ///
    /// # Errors
    /// `dipoles-too-many`, `setting-range`, and `settings-unknown` for a dipole that is none.
    pub fn new(request: &GroupsRequest) -> Result<Self, Error> {
        let found: usize = request.members.iter().map(|member| member.dipoles.len()).sum();
        if found > MOST_DIPOLES {
            let finding = Finding::new(Code::DipolesTooMany).at(Place::input("maps"));
            return Err(finding.with("found", found).with("most", MOST_DIPOLES).into());
        }
        within("axisMm", request.axis_mm, 0.0..=200.0)?;
        request.groups.map_or(Ok(()), |groups| within("groups", groups as f64, 1.0..=MOST_GROUPS as f64))?;
        let mut dipoles = Vec::with_capacity(found);
        for (index, member) in request.members.iter().enumerate() {
            for (at, dipole) in member.dipoles.iter().enumerate() {
                let axis = dipole.direction.unit().filter(|axis| axis.is_finite());
                let whole = dipole.position.norm() <= 2.0 && dipole.rv.is_finite();
                let axis = axis.filter(|_| whole).ok_or_else(|| {
                    Settings::unknown(format!("dipole {} of “{}” lacks a number that can be used", at + 1, member.name))
                })?;
                dipoles.push(Placed {
                    at: [index, at],
                    mm: dipole.position * CANONICAL_RADIUS_MM,
                    axis,
                    rv: dipole.rv,
                });
            }
        }
        let points: Vec<(Vec3, Vec3)> = dipoles.iter().map(|dipole| (dipole.mm, dipole.axis)).collect();
        let grouping = Grouping::new(&points, request.axis_mm, request.groups);
        let person = |index: usize| match request.members[index].subject.as_deref() {
            Some(subject) if !subject.is_empty() => (Some(subject), 0),
            _ => (None, index),
        };
        let people = request.members.iter().enumerate().map(|(index, _)| person(index)).collect::<HashSet<_>>();
        let groups: Vec<Group> = (0..grouping.count)
            .map(|group| {
                let own = dipoles.iter().zip(&grouping.groups).filter(|(_, of)| **of == group).map(|(one, _)| one);
                let own: Vec<&Placed> = own.collect();
                let subjects = own.iter().map(|dipole| person(dipole.at[0])).collect::<HashSet<_>>().len();
                Group::new(group + 1, &own, subjects, people.len())
            })
            .collect();
        let criterion =
            grouping.criterion.iter().map(|&(groups, value)| Criterion { groups, value, text: hundredths(value) });
        let mut notes = vec![format!(
            "Places are scaled by the radius of each head to one of {} mm, and approximate: a centimetre or more apart for the same source in two people. At one place, axes at a right angle count as {} mm apart.",
            millimetres(CANONICAL_RADIUS_MM),
            millimetres(request.axis_mm)
        )];
        let of_several = people.len() < request.members.len();
        if of_several {
            notes.push("Several tables of one person count as one person; their dipoles count each.".into());
        }
        if request.members.iter().any(|member| member.subject.as_deref().unwrap_or_default().is_empty()) {
            notes.push("A table without a subject counts as a person of its own.".into());
        }
        notes.push("The silhouette compares two groups and more; it cannot say that there are none.".into());
        let criterion: Vec<Criterion> = criterion.collect();
        let sentence = summed_up(&criterion, grouping.count, found, people.len(), request.groups.is_some());
        Ok(Self { count: grouping.count, criterion, sentence, groups, notes })
    }
}

fn summed_up(criterion: &[Criterion], count: usize, dipoles: usize, people: usize, asked: bool) -> String {
    let of = |number: usize, one: &str, many: &str| format!("{number} {}", if number == 1 { one } else { many });
    let what = format!("{} of {}", of(dipoles, "dipole", "dipoles"), of(people, "person", "people"));
    let silhouette = criterion.iter().find(|one| one.groups == count).map(|one| one.text.as_str());
    match (dipoles, silhouette) {
        (0, _) => "There is no dipole to group.".into(),
        (_, Some(value)) if asked => {
            format!("{what} in {} as chosen; mean silhouette {value}.", of(count, "group", "groups"))
        }
        (_, Some(value)) => {
            format!("{what} in {}, where the mean silhouette is largest ({value}).", of(count, "group", "groups"))
        }
        _ => format!("{what} in {}.", of(count, "group", "groups")),
    }
}

impl Group {
    fn new(number: usize, dipoles: &[&Placed], subjects: usize, of: usize) -> Self {
        let count = dipoles.len() as f64;
        let centre = dipoles.iter().fold(Vec3::ZERO, |sum, dipole| sum + dipole.mm) * (1.0 / count);
        let tensor =
            Symmetric3::from_fn(|i, j| dipoles.iter().map(|one| one.axis[i] * one.axis[j]).sum::<f64>() / count);
        let axis = tensor.eigen().vectors[2];
        let most = axis.0.iter().fold(0.0f64, |most, part| if part.abs() > most.abs() { *part } else { most });
        let axis = if most < 0.0 { -axis } else { axis };
        let positions: Vec<Vec3> = dipoles.iter().map(|dipole| dipole.mm * (1.0 / CANONICAL_RADIUS_MM)).collect();
        let rms = |squares: f64| (squares / count).sqrt();
        let spread = rms(dipoles.iter().map(|dipole| (dipole.mm - centre).dot(dipole.mm - centre)).sum());
        let angles = dipoles.iter().map(|dipole| libm::acos(dipole.axis.dot(axis).abs().min(1.0)).to_degrees());
        let turn = rms(angles.map(|angle| angle * angle).sum());
        let rv = mean(&dipoles.iter().map(|dipole| dipole.rv).collect::<Vec<_>>());
        let position = centre * (1.0 / CANONICAL_RADIUS_MM);
        let held = Ellipsoid::holding(&positions, position, 0.5).filter(|_| dipoles.len() >= 4);
        let ellipsoid = held.map(|one| DrawnEllipsoid { scale: 2.0, ..DrawnEllipsoid::from(&one) });
        let site = match nearest_site(centre).filter(|_| centre.norm() > CENTRE_MM) {
            Some(site) => format!("under {site}"),
            None => format!("{} mm from the centre", millimetres(centre.norm())),
        };
        let [x, y, z] = centre.0.map(millimetres);
        let sentence = format!(
            "Group {number}: {} {} in {subjects} of {of} people, mean equivalent position {site}, spread {} mm, axes {}°, mean residual variance {} %.",
            dipoles.len(),
            if dipoles.len() == 1 { "dipole" } else { "dipoles" },
            tenths(spread),
            millimetres(turn),
            percent(rv)
        );
        let cells = vec![
            dipoles.len().to_string(),
            format!("{subjects} of {of}"),
            format!("{x}, {y}, {z}"),
            tenths(spread),
            millimetres(turn),
            percent(rv),
        ];
        Self {
            members: dipoles.iter().map(|one| one.at).collect(),
            subjects,
            position,
            axis,
            ellipsoid,
            cells,
            sentence,
        }
    }
}
