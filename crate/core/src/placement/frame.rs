//! Unit, centre and axes of the table of electrodes.

use super::labels::readings;
use super::{FAR, Placed, Wishes, farthest};
use crate::electrode::{Electrode, Grade, Kind, Label, Landmark, Reading};
use crate::finding::{Choice, Code, Error, Finding, Origin, Place};
use crate::head::{Axes, AxesName, HEAD_RADII_MM, Landmarks, LengthUnit, Orientation, Sphere};
use crate::math::{Vec3, sort_by_number};

/// Axes that labels contradict by more than this are worth a warning.
const CONTRADICTED_DEGREES: f64 = 45.0;

/// So far from its standard place an electrode of a measured head does not lie, tilted or not: more is an exchange.
const MISPLACED_DEGREES: f64 = 40.0;

/// Fewest labels with standard places that are expected to tell the axes.
const MANY: usize = 10;

/// What the numbers of a table are.
pub(super) enum Frame {
    /// Positions in a unit of so many millimetres, and the fitted sphere in millimetres.
    Positions { millimetres: f64, sphere: Sphere },
    /// Directions from the centre, and the note that says so.
    Directions(Code),
}

/// What told the axes of a table.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Evidence {
    /// The user.
    Setting,
    /// Points at ears and nose.
    Landmarks,
    /// Electrodes with standard names.
    Labels,
    /// The positions are the standard ones.
    Standard,
    /// Nothing: x right, y front, z up was assumed.
    Nothing,
}

/// The axes of a table and how they were found.
#[derive(Clone, Debug, PartialEq)]
pub struct AxesFound {
    /// The way to canonical axes.
    pub axes: Axes,
    /// What told them.
    pub evidence: Evidence,
    /// Their name; `None` where the head lies obliquely in them.
    pub name: Option<AxesName>,
    /// Angle in degrees between the axes and what told them.
    pub tilt_degrees: f64,
    /// Rms angle in degrees between named electrodes and their standard places, where these told the axes.
    pub misfit_degrees: Option<f64>,
    /// Whether what told the axes has left and right exchanged against the positions.
    pub mirrored: bool,
}

impl AxesFound {
    pub(super) fn standard() -> Self {
        let name = Some(AxesName::CANONICAL);
        Self {
            axes: Axes::CANONICAL,
            evidence: Evidence::Standard,
            name,
            tilt_degrees: 0.0,
            misfit_degrees: None,
            mirrored: false,
        }
    }
}

/// The unit of the positions: the one wished for, else that in which the fitted sphere is a head.
pub(super) fn recognise_unit(
    electrodes: &[Placed],
    wishes: &Wishes,
    choices: &mut Vec<Choice>,
    notes: &mut Vec<Finding>,
) -> Result<Frame, Error> {
    let points: Vec<Vec3> = electrodes.iter().map(|e| e.position_mm).collect();
    let unrecognised = || {
        let finding = Finding::new(Code::UnitsUnrecognised);
        match farthest(electrodes) {
            Some(one) => finding.at(one.place()).with("label", one.label.as_str()),
            None => finding.at(Place::input("electrodes")),
        }
    };
    let sphere = Sphere::fit(&points).ok_or_else(unrecognised)?.sphere;
    let mut choose = |unit: Option<LengthUnit>| {
        let origin = match (wishes.unit, wishes.declared_unit) {
            (Some(_), _) => Origin::Setting,
            (None, Some(declared)) if unit == Some(declared) => Origin::Declared,
            _ => Origin::Found,
        };
        let symbol = unit.map_or("sphere", LengthUnit::symbol);
        choices.push(Choice::new("units", origin, symbol).options(["m", "cm", "mm"]));
        if let Some(declared) = wishes.declared_unit.filter(|_| origin == Origin::Found) {
            let finding = Finding::new(Code::UnitOverruled).at(Place::input("electrodes"));
            notes.push(finding.with("declared", declared.symbol()).with("unit", symbol));
        }
    };
    if wishes.unit.is_none() && sphere.is_unit() {
        choose(None);
        return Ok(Frame::Directions(Code::UnitSphereScaled));
    }
    let unit = match wishes.unit.or(LengthUnit::of_head(sphere.radius)) {
        Some(unit) if HEAD_RADII_MM.contains(&(sphere.radius * unit.millimetres())) => unit,
        Some(unit) => {
            let radius = sphere.radius * unit.millimetres();
            return Err(unrecognised().with("unit", unit.symbol()).with("radius_mm", radius).into());
        }
        None => return Err(unrecognised().with("radius", sphere.radius).into()),
    };
    choose(Some(unit));
    let millimetres = unit.millimetres();
    let sphere = Sphere { centre: sphere.centre * millimetres, radius: sphere.radius * millimetres };
    notes.push(
        Finding::new(Code::UnitRecognised)
            .at(Place::input("electrodes"))
            .with("unit", unit.symbol())
            .with("radius_mm", sphere.radius),
    );
    Ok(Frame::Positions { millimetres, sphere })
}

/// The axes of a table: those wished for, else what landmarks tell, else what the named electrodes tell, whether they have
/// a value or not, else x right, y front, z up.
pub(super) fn find_axes(
    table: &[Electrode],
    frame: &Frame,
    sphere: Sphere,
    wishes: &Wishes,
    choices: &mut Vec<Choice>,
    notes: &mut Vec<Finding>,
) -> AxesFound {
    let to_mm = |p: Vec3| match frame {
        Frame::Positions { millimetres, .. } => p * *millimetres,
        Frame::Directions(_) => sphere.centre + p * sphere.radius,
    };
    let labels: Vec<&Label> = table.iter().map(|e| &e.label).collect();
    let read: Vec<(&Electrode, Reading, Vec3)> =
        table.iter().zip(readings(&labels)).filter_map(|(e, reading)| Some((e, reading, to_mm(e.position?)))).collect();
    let named: Vec<(&Electrode, (Vec3, Vec3))> = read
        .iter()
        .filter_map(|(electrode, reading, position)| match reading.kind {
            Kind::Site(site) if site.grade != Grade::Approximate => {
                let arm = *position - sphere.centre;
                let near = (arm.norm() - sphere.radius).abs() <= FAR * sphere.radius;
                Some((*electrode, (arm.unit().filter(|_| near)?, site.direction)))
            }
            _ => None,
        })
        .collect();
    let by_labels = Orientation::of_named(&named.iter().map(|(_, pair)| *pair).collect::<Vec<_>>());
    let by_landmarks = landmarks(&read, wishes, to_mm).and_then(|landmarks| {
        let positions = read.iter().filter(|(_, reading, _)| !matches!(reading.kind, Kind::Landmark(_)));
        let (sum, count) = positions.fold((Vec3::ZERO, 0.0), |(sum, count), (_, _, p)| (sum + *p, count + 1.0));
        Orientation::of_landmarks(&landmarks, sum * (1.0 / f64::max(count, 1.0)))
    });

    let nothing = || (Orientation::named(AxesName::CANONICAL), Evidence::Nothing);
    let (orientation, evidence) = match (wishes.axes, by_landmarks, by_labels) {
        (Some(name), _, _) => (Orientation::named(name), Evidence::Setting),
        (None, Some(landmarks), _) => (landmarks, Evidence::Landmarks),
        (None, None, Some(labels)) => (labels, Evidence::Labels),
        (None, None, None) => nothing(),
    };
    // Labels know left from right better than points that may have been exchanged themselves.
    let mirrored = by_labels.or(by_landmarks).is_some_and(|found| found.mirrored);
    let (nearest, off) = orientation.axes.nearest();
    let name = (off < 1e-6).then_some(nearest);
    let value = name.map_or("oblique".into(), |name| name.to_string());

    let at = || Place::input("electrodes");
    let origin = match evidence {
        Evidence::Setting => Origin::Setting,
        Evidence::Nothing => Origin::Assumed,
        _ => Origin::Found,
    };
    let from: Vec<String> = match evidence {
        Evidence::Labels => named.iter().map(|(electrode, _)| electrode.label.to_string()).collect(),
        _ => Vec::new(),
    };
    let by = match evidence {
        Evidence::Landmarks => "landmarks",
        Evidence::Labels => "labels",
        Evidence::Setting => "setting",
        Evidence::Standard | Evidence::Nothing => "nothing",
    };
    let misfit_degrees = (evidence == Evidence::Labels).then_some(orientation.misfit_degrees);
    let upright = AxesName::all().take(4).chain(name).map(|name| name.to_string());
    let mut options: Vec<String> = Vec::new();
    upright.for_each(|option| {
        if !options.contains(&option) {
            options.push(option)
        }
    });
    choices.push(
        Choice::new("axes", origin, value.as_str())
            .options(options)
            .with("by", by)
            .with("labels", from.clone())
            .with("tilt_degrees", orientation.tilt_degrees),
    );
    notes.push(match evidence {
        // So many names always tell how a head lies, if they are those of its electrodes.
        Evidence::Nothing if named.len() >= MANY => Finding::new(Code::AxesAssumed).at(at()).with("named", named.len()),
        Evidence::Nothing => Finding::new(Code::AxesAssumed).at(at()),
        _ => Finding::new(Code::AxesFound)
            .at(at())
            .with("axes", value)
            .with("by", by)
            .with("labels", from)
            .with("misfit_degrees", orientation.misfit_degrees)
            .with("tilt_degrees", orientation.tilt_degrees),
    });
    if let Some(labels) = by_labels.filter(|labels| labels.axes.angle_to(&orientation.axes) > CONTRADICTED_DEGREES) {
        let (nearest, _) = labels.axes.nearest();
        notes.push(Finding::new(Code::AxesContradicted).at(at()).with("axes", nearest.to_string()));
    }
    let axes = if wishes.mirror == Some(true) { orientation.axes.mirrored() } else { orientation.axes };
    let agree = by_labels.is_some_and(|labels| labels.axes.angle_to(&orientation.axes) <= CONTRADICTED_DEGREES);
    // In a mirror image every label is off.
    if agree && (!mirrored || wishes.mirror == Some(true)) {
        let most = MISPLACED_DEGREES + orientation.tilt_degrees;
        let off = |arm: Vec3, site: Vec3| libm::acos(axes.to_canonical(arm).dot(site).clamp(-1.0, 1.0)).to_degrees();
        let named = named.iter().map(|(electrode, (arm, site))| (off(*arm, *site), electrode.label.to_string()));
        let mut far: Vec<(f64, String)> = named.filter(|(off, _)| *off > most).collect();
        sort_by_number(&mut far, |far| -far.0);
        if let Some((degrees, _)) = far.first() {
            let finding = Finding::new(Code::LabelsMisplaced).at(at()).with("degrees", degrees.round() as usize);
            notes.push(finding.with("labels", far.into_iter().map(|(_, label)| label).collect::<Vec<String>>()));
        }
    }
    if mirrored || wishes.mirror == Some(true) {
        let origin = if wishes.mirror.is_some() { Origin::Setting } else { Origin::Assumed };
        let value = wishes.mirror == Some(true);
        choices.push(Choice::new("mirror", origin, value).options([false, true]));
        if mirrored && wishes.mirror.is_none() {
            notes.push(Finding::new(Code::Mirrored).at(at()));
        }
    }
    AxesFound { axes, evidence, name, tilt_degrees: orientation.tilt_degrees, misfit_degrees, mirrored }
}

/// The landmarks of a file of coordinates, else those in the table.
fn landmarks(read: &[(&Electrode, Reading, Vec3)], wishes: &Wishes, to_mm: impl Fn(Vec3) -> Vec3) -> Option<Landmarks> {
    let declared = |which: Landmark| wishes.landmarks.iter().find(|(one, _)| *one == which).map(|(_, p)| to_mm(*p));
    let row =
        |which: Landmark| read.iter().find(|(_, reading, _)| reading.kind == Kind::Landmark(which)).map(|(_, _, p)| *p);
    let site = |key: &str| read.iter().find(|(_, reading, _)| reading.key == key).map(|(_, _, p)| *p);
    let find = |which| declared(which).or_else(|| row(which));
    Some(Landmarks {
        nasion: find(Landmark::Nasion).or_else(|| site("nz"))?,
        left: find(Landmark::Left)?,
        right: find(Landmark::Right)?,
    })
}
