//! Electrodes and map labels to positions on the head; says what it assumed and what did not match.

mod frame;
mod labels;

pub use frame::{AxesFound, Evidence};
pub use labels::LabelsFound;

use crate::electrode::{Electrode, Label, Landmark, Reading};
use crate::finding::{Choice, Code, Error, Finding, Place};
use crate::head::{AxesName, HEAD_RADII_MM, LengthUnit, STANDARD_RADIUS_MM, Sphere, SphereFit, spread};
use crate::map::Maps;
use crate::math::{Vec3, sort_by_number};
use frame::{Frame, find_axes, recognise_unit};
use labels::{Matched, approximate, match_labels};

/// Fewest electrodes that a dipole is fitted to: seven parameters of reference, position and moment, and three more.
pub const FEWEST_ELECTRODES: usize = 10;

/// Fewer electrodes than those of the 10-20 system bring a warning.
pub const FEW_ELECTRODES: usize = 19;

/// Electrodes closer than this are at one place.
const COINCIDENT_MM: f64 = 0.1;

/// Farthest that a centre may be from the origin of the electrode table.
const MOST_OFFSET_MM: f64 = 1000.0;

/// A deviation from the sphere, in radii, that is refused: 40 mm on the standard head.
const FAR: f64 = 0.45;

/// A deviation from the sphere that brings a warning; measured heads reach 14 to 21 mm.
const LARGE_DEVIATION_MM: f64 = 25.0;

/// A deviation from the sphere that is not worth a word.
const SMALL_DEVIATION_MM: f64 = 0.1;

/// Electrodes on the head.
#[derive(Clone, Debug)]
pub struct Placement {
    /// All electrodes that have a position and a value.
    pub electrodes: Vec<Placed>,
    /// The scalp, in millimetres, with the deviations of the electrodes from it.
    pub sphere: SphereFit,
    /// The way from the frame of the table to canonical axes.
    pub axes: AxesFound,
    /// Whether positions were measured, so that the sphere was fitted to them unless wished for otherwise.
    pub measured: bool,
    /// What became of the labels.
    pub labels: LabelsFound,
    /// What was inferred and can be chosen otherwise.
    pub choices: Vec<Choice>,
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
    /// Line in the table of electrodes.
    line: Option<usize>,
    /// What it may be called, the labels of both tables first.
    keys: Vec<String>,
}

/// What the user wants otherwise than the electrodes tell.
#[derive(Clone, Debug, Default)]
pub struct Wishes {
    /// Labels to leave out.
    pub exclude: Vec<Label>,
    /// Labels whose values were interpolated: left out too.
    pub interpolated: Vec<Label>,
    /// Labels that a file declares bad: left out too.
    pub bad: Vec<Label>,
    /// Channels that a file declares not to measure the scalp.
    pub other_channels: Vec<Label>,
    /// Channels that a file declares to measure the scalp, whatever their names.
    pub scalp: Vec<Label>,
    /// Axes of the electrode table.
    pub axes: Option<AxesName>,
    /// Whether left and right are to be exchanged.
    pub mirror: Option<bool>,
    /// Points of the head in the frame and unit of the electrode table.
    pub landmarks: Vec<(Landmark, Vec3)>,
    /// Unit of the electrode table, as the user sets it.
    pub unit: Option<LengthUnit>,
    /// Unit of the electrode table, as a file declares it: the size of the head has the last word.
    pub declared_unit: Option<LengthUnit>,
    /// Whether the maps come from an unmixing.
    pub components: bool,
    /// Centre of the head in the frame of the electrode table.
    pub centre_mm: Option<Vec3>,
    /// Scalp radius.
    pub radius_mm: Option<f64>,
}

impl Placed {
    /// Where its position stands.
    fn place(&self) -> Place {
        Place { line: self.line, label: Some(self.label.to_string()), ..Place::input("electrodes") }
    }
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
        directions.into_iter().map(|direction| self.axes.axes.to_canonical(direction)).collect()
    }

    /// A position of the table's frame in canonical axes, from the centre of the sphere.
    pub fn canonical(&self, position_mm: Vec3) -> Vec3 {
        self.axes.axes.to_canonical(position_mm - self.sphere.sphere.centre)
    }

    /// A canonical position in the frame of the table.
    pub fn table(&self, canonical_mm: Vec3) -> Vec3 {
        self.sphere.sphere.centre + self.axes.axes.to_table(canonical_mm)
    }
}

fn directions(electrodes: &[Placed], centre: Vec3) -> Vec<Vec3> {
    electrodes.iter().filter(|e| e.used).filter_map(|e| (e.position_mm - centre).unit()).collect()
}

/// Brings labels together, recognises the unit of length by the size of the head, fits the sphere to all electrodes that
/// have a position and a value, whether left out or not, and finds how the head lies in its table. Without a table, or with
/// labels alone, the electrodes stand at their standard positions on a sphere of [`STANDARD_RADIUS_MM`], or of the radius
/// wished for.
///
/// # Errors
/// `label-duplicate`, `label-ambiguous`, `label-bipolar`, `reference-mixed`, `labels-unmatched`, `electrodes-too-few`,
/// `electrodes-coincident`, `electrodes-collinear`, `electrodes-coplanar`, `units-unrecognised`, `electrode-off`,
/// `head-invalid`.
pub fn place(table: Option<&[Electrode]>, maps: &Maps, wishes: &Wishes) -> Result<Placement, Error> {
    let measured = table.filter(|electrodes| electrodes.iter().any(|e| e.position.is_some()));
    let Matched { mut electrodes, found: mut labels } = match_labels(table, measured.is_some(), maps, wishes)?;
    let mut notes = labels.notes();
    refuse_few(electrodes.len())?;
    let points: Vec<Vec3> = electrodes.iter().map(|e| e.position_mm).collect();
    refuse_flat(&points)?;
    let mut choices = Vec::new();
    let frame = match measured {
        Some(_) => recognise_unit(&electrodes, wishes, &mut choices, &mut notes)?,
        None => Frame::Directions(Code::StandardPositions),
    };
    let is_measured = matches!(frame, Frame::Positions { .. });
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
    let axes = match measured {
        Some(table) => find_axes(table, &frame, sphere, wishes, &mut choices, &mut notes),
        None => AxesFound::standard(),
    };
    let sphere = sphere.deviations(&electrodes.iter().map(|e| e.position_mm).collect::<Vec<_>>());
    leave_out(&mut electrodes, wishes, &mut labels, &mut notes);
    refuse_coincident(&electrodes)?;
    refuse_far(&electrodes, sphere.sphere, wishes)?;

    let directions = directions(&electrodes, sphere.sphere.centre);
    let used = directions.len();
    refuse_few(used)?;
    refuse_flat(&directions)?;
    if used < FEW_ELECTRODES {
        notes.push(Finding::new(Code::FewElectrodes).with("electrodes", used).with("degrees_of_freedom", used - 7));
    }
    let near = approximate(&electrodes);
    if measured.is_none() && !near.is_empty() {
        notes.push(Finding::new(Code::PositionsApproximate).at(Place::input("maps")).with("labels", near));
    }
    note_deviations(&electrodes, &sphere, &mut notes);
    note_zeros(&electrodes, maps, &mut notes);
    Ok(Placement { electrodes, sphere, axes, measured: is_measured, labels, choices, notes })
}

/// How far the electrodes lie off the sphere that they are projected on.
fn note_deviations(electrodes: &[Placed], sphere: &SphereFit, notes: &mut Vec<Finding>) {
    let Some((worst, off)) = most_off(electrodes, sphere.sphere) else { return };
    if off > SMALL_DEVIATION_MM {
        notes.push(
            Finding::new(Code::ElectrodesProjected)
                .at(worst.place())
                .with("max_mm", off)
                .with("label", worst.label.as_str())
                .with("rms_mm", sphere.rms),
        );
    }
    if off > LARGE_DEVIATION_MM {
        let far = electrodes.iter().filter(|e| e.used && deviation(e, sphere.sphere) > LARGE_DEVIATION_MM);
        let labels: Vec<String> = far.map(|e| e.label.to_string()).collect();
        notes.push(Finding::new(Code::SphereDeviation).at(worst.place()).with("max_mm", off).with("labels", labels));
    }
}

/// Says which channels are exactly zero in every map while others are not: one is the recording reference, whose value of 0
/// is a measurement like any other.
fn note_zeros(electrodes: &[Placed], maps: &Maps, notes: &mut Vec<Finding>) {
    let zero = |e: &&Placed| maps.values.row(e.row).iter().all(|&value| value == 0.0);
    let labels: Vec<String> = electrodes.iter().filter(|e| e.used).filter(zero).map(|e| e.label.to_string()).collect();
    let used = electrodes.iter().filter(|e| e.used).count();
    let code = match labels.len() {
        0 => return,
        // A table of zeros is said to be one.
        count if count == used => return,
        1 => Code::ReferenceChannel,
        _ => Code::ChannelsZero,
    };
    let place = Place { label: labels.first().cloned(), ..Place::input("maps") };
    notes.push(Finding::new(code).at(place).with("labels", labels));
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

/// The electrode whose distance from the median position differs most from the median distance.
fn farthest(electrodes: &[Placed]) -> Option<&Placed> {
    let median = |mut values: Vec<f64>| {
        sort_by_number(&mut values, |value| *value);
        values.get(values.len() / 2).copied().unwrap_or(0.0)
    };
    let middle = Vec3([0, 1, 2].map(|axis| median(electrodes.iter().map(|e| e.position_mm[axis]).collect())));
    let distance = |e: &Placed| (e.position_mm - middle).norm();
    let usual = median(electrodes.iter().map(distance).collect());
    let off = |e: &&Placed| (distance(e) - usual).abs();
    electrodes.iter().max_by(|a, b| off(a).total_cmp(&off(b)))
}

fn refuse_coincident(electrodes: &[Placed]) -> Result<(), Error> {
    let used: Vec<&Placed> = electrodes.iter().filter(|e| e.used).collect();
    for (index, a) in used.iter().enumerate() {
        if let Some(b) = used[..index].iter().find(|b| (a.position_mm - b.position_mm).norm() < COINCIDENT_MM) {
            return Err(Finding::new(Code::ElectrodesCoincident)
                .at(a.place())
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
    let used = electrodes.iter().filter(|e| e.used);
    used.map(|e| (e, deviation(e, sphere))).max_by(|a, b| a.1.total_cmp(&b.1))
}

/// How far an electrode lies off a sphere.
fn deviation(electrode: &Placed, sphere: Sphere) -> f64 {
    ((electrode.position_mm - sphere.centre).norm() - sphere.radius).abs()
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
        .at(worst.place())
        .with("label", worst.label.as_str())
        .with("off_mm", off)
        .into())
}

/// Leaves out what is named by a label of either table as written, else by what is in it.
fn leave_out(electrodes: &mut [Placed], wishes: &Wishes, found: &mut LabelsFound, notes: &mut Vec<Finding>) {
    let mut unmatched: Vec<String> = Vec::new();
    let lists = [
        (Code::Excluded, &wishes.exclude),
        (Code::Interpolated, &wishes.interpolated),
        (Code::ChannelsBad, &wishes.bad),
    ];
    for (code, labels) in lists {
        let mut named: Vec<String> = Vec::new();
        for label in labels {
            let own = label.key();
            let exactly = |e: &&mut Placed| e.keys.iter().take(2).any(|key| *key == own);
            let loose = labels::loose_keys(&Reading::of(label));
            let loosely = |e: &&mut Placed| loose.iter().any(|key| e.keys.contains(key));
            let exact = electrodes.iter_mut().any(|e| exactly(&e));
            let mut any = false;
            for electrode in electrodes.iter_mut().filter(|e| if exact { exactly(e) } else { loosely(e) }) {
                electrode.used = false;
                any = true;
            }
            // A file may call channels bad that are not on the scalp.
            match any {
                true => named.push(label.to_string()),
                false if code == Code::ChannelsBad => {}
                false => unmatched.push(label.to_string()),
            }
        }
        if !named.is_empty() {
            notes.push(Finding::new(code).with("labels", named.clone()));
        }
        if code == Code::Interpolated {
            found.interpolated = named;
        }
    }
    if wishes.components && electrodes.iter().any(|e| !e.used) {
        notes.push(Finding::new(Code::UnmixingNotRedone));
    }
    if !unmatched.is_empty() {
        notes.push(Finding::new(Code::ExcludeUnmatched).with("labels", unmatched));
    }
}
