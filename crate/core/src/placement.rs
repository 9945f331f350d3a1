//! Electrodes and map labels to positions on the head; says what it assumed and what did not match.

use crate::electrode::{Electrode, Label, standard_position};
use crate::finding::{Code, Error, Finding, Place};
use crate::head::{Axes, HEAD_RADII_MM, LengthUnit, STANDARD_RADIUS_MM, Sphere, SphereFit, spread};
use crate::map::Maps;
use crate::math::Vec3;
use std::collections::{HashMap, HashSet};

/// Fewest electrodes that a dipole is fitted to: seven parameters of reference, position and moment, and three more.
pub const FEWEST_ELECTRODES: usize = 10;

/// Fewer electrodes than those of the 10-20 system bring a warning.
pub const FEW_ELECTRODES: usize = 19;

/// Electrodes closer than this are at one place.
const COINCIDENT_MM: f64 = 0.1;

/// Farthest that a centre may be from the origin of the electrode table.
const MOST_OFFSET_MM: f64 = 1000.0;

/// A deviation from the sphere, in radii, that is refused.
const FAR: f64 = 0.6;

/// A deviation from the sphere that brings a warning; measured heads reach 14 to 21 mm.
const LARGE_DEVIATION_MM: f64 = 25.0;

/// Electrodes on the head.
#[derive(Clone, Debug)]
pub struct Placement {
    /// All electrodes that have a position and a value.
    pub electrodes: Vec<Placed>,
    /// The scalp, in millimetres, with the deviations of the electrodes from it.
    pub sphere: SphereFit,
    /// The way from the frame of the table to canonical axes.
    pub axes: Axes,
    /// Whether positions were measured, so that the sphere was fitted to them unless wished for otherwise.
    pub measured: bool,
    /// What was assumed and what did not match.
    pub notes: Vec<Finding>,
}

/// An electrode with its row in the table of maps.
#[derive(Clone, Debug, PartialEq)]
pub struct Placed {
    /// Label as the table of electrodes, or else that of maps, writes it.
    pub label: Label,
    /// Position in the frame of the electrode table.
    pub position_mm: Vec3,
    /// Row in the maps.
    pub row: usize,
    /// Whether the fits use it; false when left out by hand.
    pub used: bool,
}

/// What the user wants otherwise than the electrodes tell.
#[derive(Clone, Debug, Default)]
pub struct Wishes {
    /// Labels to leave out.
    pub exclude: Vec<Label>,
    /// Centre of the head in the frame of the electrode table.
    pub centre_mm: Option<Vec3>,
    /// Scalp radius.
    pub radius_mm: Option<f64>,
}

impl Placement {
    /// Electrodes that the fits use.
    pub fn used(&self) -> impl Iterator<Item = &Placed> {
        self.electrodes.iter().filter(|electrode| electrode.used)
    }

    /// Unit directions of the used electrodes from the centre, in canonical axes: they are projected onto the sphere along
    /// its radius.
    pub fn directions(&self) -> Vec<Vec3> {
        let directions = directions(&self.electrodes, self.sphere.sphere.centre);
        directions.into_iter().map(|direction| self.axes.to_canonical(direction)).collect()
    }

    /// A position of the table's frame in canonical axes, from the centre of the sphere.
    pub fn canonical(&self, position_mm: Vec3) -> Vec3 {
        self.axes.to_canonical(position_mm - self.sphere.sphere.centre)
    }

    /// A canonical position in the frame of the table.
    pub fn table(&self, canonical_mm: Vec3) -> Vec3 {
        self.sphere.sphere.centre + self.axes.to_table(canonical_mm)
    }
}

fn directions(electrodes: &[Placed], centre: Vec3) -> Vec<Vec3> {
    electrodes.iter().filter(|e| e.used).filter_map(|e| (e.position_mm - centre).unit()).collect()
}

/// Matches labels without regard to case, recognises the unit of length by the size of the head, and fits the sphere to
/// all electrodes that have a position and a value, whether left out or not. Without a table, or with labels alone, the
/// electrodes stand at their standard positions on a sphere of [`STANDARD_RADIUS_MM`], or of the radius wished for.
///
/// # Errors
/// `labels-unmatched`, `electrodes-too-few`, `electrodes-coincident`, `electrodes-collinear`, `electrodes-coplanar`,
/// `units-unrecognised`, `electrode-off`, `head-invalid`.
pub fn place(table: Option<&[Electrode]>, maps: &Maps, wishes: &Wishes) -> Result<Placement, Error> {
    let mut notes = Vec::new();
    let measured = table.filter(|electrodes| electrodes.iter().any(|e| e.position.is_some()));
    let mut electrodes = match_labels(table, measured.is_some(), maps, &mut notes)?;
    refuse_few(electrodes.len())?;
    let points: Vec<Vec3> = electrodes.iter().map(|e| e.position_mm).collect();
    refuse_flat(&points)?;
    let frame = match measured {
        Some(_) => recognise_unit(&electrodes, &mut notes)?,
        None => Frame::Directions(Code::StandardPositions),
    };
    let measured = matches!(frame, Frame::Positions { .. });
    let sphere = match frame {
        Frame::Positions { millimetres, sphere } => {
            electrodes.iter_mut().for_each(|e| e.position_mm = e.position_mm * millimetres);
            wished(sphere, wishes)?
        }
        Frame::Directions(note) => {
            let sphere = wished(Sphere { centre: Vec3::ZERO, radius: STANDARD_RADIUS_MM }, wishes)?;
            notes.push(Finding::new(note).with("radius_mm", sphere.radius));
            electrodes.iter_mut().for_each(|e| e.position_mm = sphere.centre + e.position_mm * sphere.radius);
            sphere
        }
    };
    let sphere = sphere.deviations(&electrodes.iter().map(|e| e.position_mm).collect::<Vec<_>>());
    leave_out(&mut electrodes, &wishes.exclude, &mut notes);
    refuse_coincident(&electrodes)?;
    refuse_far(&electrodes, sphere.sphere, wishes)?;

    let directions = directions(&electrodes, sphere.sphere.centre);
    let used = directions.len();
    refuse_few(used)?;
    refuse_flat(&directions)?;
    if used < FEW_ELECTRODES {
        notes.push(Finding::new(Code::FewElectrodes).with("electrodes", used).with("degrees_of_freedom", used - 7));
    }
    notes.push(Finding::new(Code::AxesAssumed));
    if let Some((worst, off)) = most_off(&electrodes, sphere.sphere).filter(|(_, off)| *off > LARGE_DEVIATION_MM) {
        notes.push(
            Finding::new(Code::SphereDeviation)
                .at(Place { label: Some(worst.label.to_string()), ..Place::input("electrodes") })
                .with("max_mm", off)
                .with("label", worst.label.as_str()),
        );
    }
    Ok(Placement { electrodes, sphere, axes: Axes::CANONICAL, measured, notes })
}

/// Electrodes with position and value, positions still in the unit of the table.
fn match_labels(
    table: Option<&[Electrode]>,
    measured: bool,
    maps: &Maps,
    notes: &mut Vec<Finding>,
) -> Result<Vec<Placed>, Error> {
    let known: Option<HashMap<String, &Electrode>> =
        table.map(|electrodes| electrodes.iter().map(|e| (e.label.key(), e)).collect());
    let mut placed = Vec::new();
    let mut unplaced = Vec::new();
    let mut without_value: Vec<String> = Vec::new();
    for (row, label) in maps.labels.iter().enumerate() {
        if maps.values.row(row).iter().all(|value| value.is_nan()) {
            if table.is_none() {
                without_value.push(label.to_string());
            }
            continue;
        }
        let electrode = match &known {
            Some(known) => known.get(&label.key()).copied().map(|e| (e.label.clone(), e.position)),
            None => Some((label.clone(), None)),
        };
        let found = electrode.and_then(|(label, position)| {
            let position = if measured { position } else { standard_position(&label) };
            position.map(|position_mm| Placed { label, position_mm, row, used: true })
        });
        match found {
            Some(electrode) => placed.push(electrode),
            None => unplaced.push(label.to_string()),
        }
    }
    if maps.values.iter().all(|value| value.is_nan()) {
        return Err(Finding::new(Code::MapsNone).at(Place::input("maps")).into());
    }
    if placed.is_empty() {
        let some = |labels: Vec<String>| labels.into_iter().take(5).collect::<Vec<_>>();
        let electrodes = table.map(|t| t.iter().map(|e| e.label.to_string()).collect()).unwrap_or_default();
        return Err(Finding::new(Code::LabelsUnmatched)
            .at(Place::input("maps"))
            .with("maps", some(maps.labels.iter().map(Label::to_string).collect()))
            .with("electrodes", some(electrodes))
            .into());
    }
    if !unplaced.is_empty() {
        notes.push(Finding::new(Code::ValuesWithoutPosition).at(Place::input("maps")).with("labels", unplaced));
    }
    let valued: HashSet<String> = placed.iter().map(|e| e.label.key()).collect();
    let unvalued = |e: &&Electrode| (e.position.is_some() || !measured) && !valued.contains(&e.label.key());
    without_value.extend(table.unwrap_or_default().iter().filter(unvalued).map(|e| e.label.to_string()));
    if !without_value.is_empty() {
        notes.push(
            Finding::new(Code::PositionsWithoutValue).at(Place::input("electrodes")).with("labels", without_value),
        );
    }
    Ok(placed)
}

fn refuse_few(found: usize) -> Result<(), Error> {
    if found >= FEWEST_ELECTRODES {
        return Ok(());
    }
    Err(Finding::new(Code::ElectrodesTooFew)
        .at(Place::input("maps"))
        .with("found", found)
        .with("fewest", FEWEST_ELECTRODES)
        .into())
}

/// Least share of the scatter that a third dimension must have: a fifth of a millimetre on a head.
const FLAT: f64 = 1e-5;

fn refuse_flat(points: &[Vec3]) -> Result<(), Error> {
    let [least, middle, most] = spread(points).values;
    let code = if most <= 0.0 {
        Code::ElectrodesCoincident
    } else if middle <= FLAT * most {
        Code::ElectrodesCollinear
    } else if least <= FLAT * most {
        Code::ElectrodesCoplanar
    } else {
        return Ok(());
    };
    Err(Finding::new(code).at(Place::input("electrodes")).into())
}

/// What the numbers of a table are.
enum Frame {
    /// Positions in a unit of so many millimetres, and the fitted sphere in millimetres.
    Positions { millimetres: f64, sphere: Sphere },
    /// Directions from the centre, and the note that says so.
    Directions(Code),
}

fn recognise_unit(electrodes: &[Placed], notes: &mut Vec<Finding>) -> Result<Frame, Error> {
    let points: Vec<Vec3> = electrodes.iter().map(|e| e.position_mm).collect();
    let unrecognised = |radius: Option<f64>| {
        let label = farthest(electrodes);
        let place = Place { label: Some(label.clone()), ..Place::input("electrodes") };
        let finding = Finding::new(Code::UnitsUnrecognised).at(place).with("label", label);
        Error::from(match radius {
            Some(radius) => finding.with("radius", radius),
            None => finding,
        })
    };
    let sphere = Sphere::fit(&points).ok_or_else(|| unrecognised(None))?.sphere;
    if sphere.is_unit() {
        return Ok(Frame::Directions(Code::UnitSphereScaled));
    }
    let unit = LengthUnit::of_head(sphere.radius).ok_or_else(|| unrecognised(Some(sphere.radius)))?;
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

/// The electrode whose distance from the median position differs most from the median distance.
fn farthest(electrodes: &[Placed]) -> String {
    let median = |mut values: Vec<f64>| {
        values.sort_by(f64::total_cmp);
        values.get(values.len() / 2).copied().unwrap_or(0.0)
    };
    let middle = Vec3([0, 1, 2].map(|axis| median(electrodes.iter().map(|e| e.position_mm[axis]).collect())));
    let distance = |e: &Placed| (e.position_mm - middle).norm();
    let usual = median(electrodes.iter().map(distance).collect());
    let off = |e: &&Placed| (distance(e) - usual).abs();
    electrodes.iter().max_by(|a, b| off(a).total_cmp(&off(b))).map(|e| e.label.to_string()).unwrap_or_default()
}

fn refuse_coincident(electrodes: &[Placed]) -> Result<(), Error> {
    let used: Vec<&Placed> = electrodes.iter().filter(|e| e.used).collect();
    for (index, a) in used.iter().enumerate() {
        if let Some(b) = used[..index].iter().find(|b| (a.position_mm - b.position_mm).norm() < COINCIDENT_MM) {
            return Err(Finding::new(Code::ElectrodesCoincident)
                .at(Place { label: Some(a.label.to_string()), ..Place::input("electrodes") })
                .with("label", a.label.as_str())
                .with("other", b.label.as_str())
                .into());
        }
    }
    Ok(())
}

/// The sphere that the user wishes, else the fitted one.
fn wished(fitted: Sphere, wishes: &Wishes) -> Result<Sphere, Error> {
    let sphere =
        Sphere { centre: wishes.centre_mm.unwrap_or(fitted.centre), radius: wishes.radius_mm.unwrap_or(fitted.radius) };
    let why = if !(sphere.centre.is_finite() && sphere.centre.norm() <= MOST_OFFSET_MM) {
        "centre"
    } else if !HEAD_RADII_MM.contains(&sphere.radius) {
        "radius"
    } else {
        return Ok(sphere);
    };
    Err(Finding::new(Code::HeadInvalid).at(Place::input("settings")).with("why", why).into())
}

/// The used electrode farthest off a sphere, and how far.
fn most_off(electrodes: &[Placed], sphere: Sphere) -> Option<(&Placed, f64)> {
    let off = |e: &Placed| ((e.position_mm - sphere.centre).norm() - sphere.radius).abs();
    electrodes.iter().filter(|e| e.used).map(|e| (e, off(e))).max_by(|a, b| a.1.total_cmp(&b.1))
}

/// No electrode may be so far off the sphere that its direction from the centre means nothing.
fn refuse_far(electrodes: &[Placed], sphere: Sphere, wishes: &Wishes) -> Result<(), Error> {
    let Some((worst, off)) = most_off(electrodes, sphere).filter(|(_, off)| *off > FAR * sphere.radius) else {
        return Ok(());
    };
    if wishes.centre_mm.is_some() || wishes.radius_mm.is_some() {
        let finding = Finding::new(Code::HeadInvalid).at(Place::input("settings")).with("why", "electrode");
        return Err(finding.with("label", worst.label.as_str()).into());
    }
    Err(Finding::new(Code::ElectrodeOff)
        .at(Place { label: Some(worst.label.to_string()), ..Place::input("electrodes") })
        .with("label", worst.label.as_str())
        .with("off_mm", off)
        .into())
}

fn leave_out(electrodes: &mut [Placed], exclude: &[Label], notes: &mut Vec<Finding>) {
    let excluded: HashSet<String> = exclude.iter().map(Label::key).collect();
    let known: HashSet<String> = electrodes.iter().map(|e| e.label.key()).collect();
    electrodes.iter_mut().for_each(|e| e.used = !excluded.contains(&e.label.key()));
    let labels = |found: bool| -> Vec<String> {
        exclude.iter().filter(|label| known.contains(&label.key()) == found).map(Label::to_string).collect()
    };
    for (code, labels) in [(Code::Excluded, labels(true)), (Code::ExcludeUnmatched, labels(false))] {
        if !labels.is_empty() {
            notes.push(Finding::new(code).with("labels", labels));
        }
    }
}
