use super::Role;
use super::role::role_of_record;
use crate::electrode::{Kind, Label, Landmark, Reading};
use crate::head::LengthUnit;
use crate::math::Vec3;
use crate::read::{Record, Tree};

/// What a description of coordinates says.
#[derive(Debug, Default)]
pub(super) struct Described {
    pub unit: Option<LengthUnit>,
    pub landmarks: Vec<(Landmark, Vec3)>,
}

/// Unit and landmarks of a `*_coordsystem.json` of the Brain Imaging Data Structure (BIDS 1.10, "Coordinate System
/// JSON"), whatever the prefix of its keys: `EEGCoordinateUnits`, `AnatomicalLandmarkCoordinates` and their units. Landmarks are brought to the unit of the electrodes.
/// What the names of coordinate systems mean is not used, that is told by the landmarks; only whether landmarks and electrodes have the same.
pub(super) fn read_coordinates(records: &[(usize, &Record)]) -> Described {
    let mut described = Described::default();
    for (_, record) in records.iter().filter(|(_, record)| role_of_record(record) == Role::Coordinates) {
        let text = |ends: &str, starts: &str| {
            let fits = |key: &str| key.ends_with(ends) && key.starts_with(starts);
            record.iter().find_map(|(key, value)| match value {
                Tree::Text(text) if fits(&key.to_ascii_lowercase()) => Some(text.trim().to_ascii_lowercase()),
                _ => None,
            })
        };
        let unit = |ends: &str, starts: &str| text(ends, starts).and_then(|unit| unit_of(&unit));
        let electrodes = unit("eegcoordinateunits", "")
            .or_else(|| unit("coordinateunits", "eeg"))
            .or_else(|| unit("coordinateunits", "coordinateunits"))
            .or_else(|| unit("units", "units"))
            .or_else(|| unit("unit", "unit"));
        described.unit = described.unit.or(electrodes);
        for (key, value) in record.iter() {
            let key = key.to_ascii_lowercase();
            let Tree::Record(points) = value else { continue };
            let kind = ["anatomicallandmark", "fiducials", "landmark"].into_iter().find(|kind| key.starts_with(kind));
            let Some(kind) = kind.filter(|_| key.ends_with("coordinates") || key.ends_with("landmarks")) else {
                continue;
            };
            // Points in another system than the electrodes' say nothing of these.
            let systems = text("coordinatesystem", kind).zip(text("coordinatesystem", "eeg"));
            if systems.is_some_and(|(points, electrodes)| points != electrodes) {
                continue;
            }
            let own = unit("coordinateunits", kind).or(electrodes);
            let scale = match (own, electrodes) {
                (Some(own), Some(electrodes)) => own.millimetres() / electrodes.millimetres(),
                _ => 1.0,
            };
            for (name, point) in points {
                let reading = Reading::of(&Label::new(name));
                let (Kind::Landmark(landmark), Some(point)) = (reading.kind, point_of(point)) else { continue };
                if !described.landmarks.iter().any(|(known, _)| *known == landmark) {
                    described.landmarks.push((landmark, point * scale));
                }
            }
        }
    }
    described
}

fn unit_of(text: &str) -> Option<LengthUnit> {
    [
        (LengthUnit::Metre, ["m", "meter", "metre", "meters", "metres"]),
        (LengthUnit::Centimetre, ["cm", "centimeter", "centimetre", "centimeters", "centimetres"]),
        (LengthUnit::Millimetre, ["mm", "millimeter", "millimetre", "millimeters", "millimetres"]),
    ]
    .into_iter()
    .find(|(_, names)| names.contains(&text))
    .map(|(unit, _)| unit)
}

fn point_of(value: &Tree) -> Option<Vec3> {
    let Tree::List(values) = value else { return None };
    let [Tree::Number(x), Tree::Number(y), Tree::Number(z)] = values.as_slice() else { return None };
    Some(Vec3::new(*x, *y, *z))
}
