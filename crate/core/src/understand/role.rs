use super::grid::{Grid, Header};
use super::{Role, positions};
use crate::electrode::{Kind as LabelKind, Label, Reading, standard_position};
use crate::head::{LengthUnit, Sphere, SphereFit, spread};
use crate::math::Vec3;
use crate::read::{Body, Content, Record, is_label_name};

/// Largest rms deviation from the fitted sphere in radii: measured heads stay below 0.08, also with electrodes 12 mm off.
const ROUGH: f64 = 0.12;

/// Largest radius over the rms distance of the points from their own mean: 1 to 1.15 for heads, 1.3 for a cap on the upper
/// third; a loose cloud of values fits a huge sphere.
const SHALLOW: f64 = 1.35;

/// Least correlation of the distances between electrodes with those of the standard: above 0.92 on heads measured to
/// 15 mm, 0.43 in the median and 0.65 for nine in ten of three maps taken as positions.
const AS_NAMED: f64 = 0.7;

/// Names of columns of electrode tables that hold numbers but no maps.
const BESIDE_POSITIONS: [&str; 14] = [
    "impedance",
    "size",
    "diameter",
    "number",
    "no",
    "nr",
    "index",
    "id",
    "urchan",
    "theta",
    "phi",
    "radius",
    "rho",
    "ref",
];

/// What a grid is by its content.
///
/// Electrodes have columns named x, y and z, or angles, or three unnamed columns of numbers, besides one that counts the
/// rows, that lie about on a sphere. A table of channels has their type beside their unit or status. One column of words is a list of
/// labels. All else is taken for maps.
pub(super) fn role_of(grid: &Grid<'_>) -> Role {
    let part = grid.part.unwrap_or_default().to_ascii_lowercase();
    let named = |names: &[&str]| grid.column(|name| names.iter().any(|known| name.eq_ignore_ascii_case(known)));
    if grid.is_numeric() {
        return role_of_numbers(grid, &part);
    }
    if named(&["type"]).is_some() && named(&["units", "unit", "status"]).is_some() && positions::axes(grid).is_none() {
        return Role::Channels;
    }
    let label = grid.label_column();
    if let Some(used) = positions::named(grid) {
        let more = values_beside(grid, label, &used).next().is_some();
        return if more { Role::ElectrodesAndMaps } else { Role::Electrodes };
    }
    let Some(label) = label else { return role_without_words(grid) };
    let numeric: Vec<usize> = (0..grid.width())
        .filter(|&column| column != label && !grid.numbers_rows(column, Some(label)) && grid.has_numbers(column))
        .take(4)
        .collect();
    match numeric.as_slice() {
        [] if grid.height() > 1 && is_list(grid, label) => Role::Labels,
        // A unit or a remark among the variables of a file.
        [] if grid.height() == 1 && grid.is_words() => Role::Unused,
        [x, y, z, more @ ..]
            if may_be_axes(grid, [*x, *y, *z])
                && is_head(grid, [*x, *y, *z])
                && lie_as_named(grid, label, [*x, *y, *z]) =>
        {
            if more.is_empty() {
                Role::Electrodes
            } else {
                Role::ElectrodesAndMaps
            }
        }
        _ => Role::Maps,
    }
}

/// Whether words are a list of labels, and not sentences of a letter: of one column, under a usual name, or with a site.
fn is_list(grid: &Grid<'_>, label: usize) -> bool {
    let site = |row: usize| matches!(Reading::of(&Label::new(grid.word(row, label))).kind, LabelKind::Site(_));
    let plain = grid.width() == 1 || (0..grid.height()).any(site);
    is_label_name(grid.name(label)) || grid.header == Header::Absent && plain
}

/// Whether three columns have no names, or names with x, y and z in them.
fn may_be_axes(grid: &Grid<'_>, columns: [usize; 3]) -> bool {
    let named = |(column, axis): (usize, char)| grid.name(column).to_ascii_lowercase().contains(axis);
    grid.header == Header::Absent || columns.into_iter().zip(['x', 'y', 'z']).all(named)
}

fn role_of_numbers(grid: &Grid<'_>, part: &str) -> Role {
    let named = |words: &[&str]| words.iter().any(|word| part.contains(word));
    match (grid.height(), grid.width()) {
        (0, _) | (_, 0) | (1, 1) => Role::Unused,
        _ if named(&["spher", "whiten"]) => Role::Sphering,
        (_, 1) | (1, _) if part == "time" || part == "times" => Role::Times,
        (rows, 3) if rows > 3 && (named(&["pos", "xyz", "coord", "loc"]) || is_head(grid, [0, 1, 2])) => {
            Role::Electrodes
        }
        _ => Role::Maps,
    }
}

/// Positions in a table without words, perhaps behind the numbers of the electrodes; else maps.
fn role_without_words(grid: &Grid<'_>) -> Role {
    let values: Vec<usize> = (0..grid.width()).filter(|&column| Some(column) != grid.numbered()).take(4).collect();
    match values.as_slice() {
        &[x, y, z] if grid.height() > 3 && may_be_axes(grid, [x, y, z]) && is_head(grid, [x, y, z]) => Role::Electrodes,
        _ => Role::Maps,
    }
}

/// Columns of numbers beside positions that can only be maps.
pub(super) fn values_beside<'g>(
    grid: &'g Grid<'_>,
    label: Option<usize>,
    used: &'g [usize],
) -> impl Iterator<Item = usize> + 'g {
    (0..grid.width()).filter(move |&column| {
        let name = grid.name(column);
        Some(column) != label
            && !used.contains(&column)
            && !BESIDE_POSITIONS.iter().any(|known| name.eq_ignore_ascii_case(known))
            && !grid.numbers_rows(column, label)
            && grid.has_numbers(column)
    })
}

/// Whether three columns lie about on a sphere of a head's size.
pub(super) fn is_head(grid: &Grid<'_>, columns: [usize; 3]) -> bool {
    let point = |row: usize| {
        let [x, y, z] = columns.map(|column| grid.number(row, column));
        Some(Vec3::new(x?, y?, z?))
    };
    let rows = grid.height();
    if rows > crate::read::MOST_ELECTRODES {
        return false;
    }
    let points: Vec<Vec3> = (0..rows).filter_map(point).collect();
    let Some(SphereFit { sphere, rms, .. }) = Sphere::fit(&points) else { return false };
    let spread = (spread(&points).values.iter().sum::<f64>() / points.len() as f64).sqrt();
    (LengthUnit::of_head(sphere.radius).is_some() || sphere.is_unit())
        && rms <= ROUGH * sphere.radius
        && sphere.radius <= SHALLOW * spread
}

/// Whether electrodes lie about as far from each other as those of their names do, where these are six
/// or more of the standard.
fn lie_as_named(grid: &Grid<'_>, label: usize, columns: [usize; 3]) -> bool {
    let pair = |row: usize| {
        let [x, y, z] = columns.map(|column| grid.number(row, column));
        Some((Vec3::new(x?, y?, z?), standard_position(&Label::new(grid.word(row, label)))?))
    };
    let mut pairs: Vec<(Vec3, Vec3)> = Vec::new();
    for one in (0..grid.height()).filter_map(pair) {
        if !pairs.iter().any(|other| other.1 == one.1) {
            pairs.push(one);
        }
    }
    let distances = || {
        let others = |(index, one)| pairs.iter().take(index).map(move |other| (one, other));
        let apart = |(one, other): (&(Vec3, Vec3), &(Vec3, Vec3))| ((one.0 - other.0).norm(), (one.1 - other.1).norm());
        pairs.iter().enumerate().flat_map(others).map(apart)
    };
    let count = distances().count() as f64;
    let (a, b) = distances().fold((0.0, 0.0), |(a, b), (p, q)| (a + p / count, b + q / count));
    let (aa, bb, ab) = distances().fold((0.0, 0.0, 0.0), |(aa, bb, ab), (p, q)| {
        (aa + (p - a) * (p - a), bb + (q - b) * (q - b), ab + (p - a) * (q - b))
    });
    pairs.len() < 6 || ab > AS_NAMED * (aa * bb).sqrt()
}

/// What a record is: a description of coordinates, or nothing that is needed.
pub(super) fn role_of_record(record: &Record) -> Role {
    let describes = |key: &str| {
        let key = key.to_ascii_lowercase();
        key.contains("coordinates") || key.contains("coordinateunits") || key.contains("coordinatesystem")
    };
    if record.iter().any(|(key, _)| describes(key)) { Role::Coordinates } else { Role::Unused }
}

/// What a file is, where only electrodes and maps are told apart.
#[derive(Clone, Copy, Debug, PartialEq, Eq, serde::Serialize)]
#[serde(rename_all = "lowercase")]
pub enum Kind {
    /// Labels with positions, or labels alone.
    Electrodes,
    /// Labels with values, and all that is neither.
    Maps,
}

/// What files that belong together are, taken as a whole.
pub fn role_of_files<'a>(contents: impl IntoIterator<Item = &'a Content> + Clone) -> Role {
    let grids = contents.clone().into_iter().flat_map(|content| Grid::of(0, &content.parts, None));
    let records = contents.into_iter().flat_map(|content| &content.parts).filter_map(|part| match &part.body {
        Body::Record(record) => Some(role_of_record(record)),
        _ => None,
    });
    together(&grids.map(|grid| role_of(&grid)).chain(records).collect::<Vec<_>>())
}

/// What parts with these roles are, taken as a whole.
pub(super) fn together(roles: &[Role]) -> Role {
    let has = |role: Role| roles.contains(&role);
    match (has(Role::Electrodes), has(Role::Maps)) {
        (true, true) => Role::ElectrodesAndMaps,
        _ => Role::ALL
            .into_iter()
            .filter(|role| has(*role))
            .min_by_key(|role| match role {
                Role::ElectrodesAndMaps => 0,
                Role::Maps => 1,
                Role::Electrodes => 2,
                _ => 3,
            })
            .unwrap_or(Role::Unused),
    }
}

/// Whether files hold electrodes and no maps.
pub fn kind_of<'a>(contents: impl IntoIterator<Item = &'a Content>) -> Kind {
    let grids: Vec<Grid<'_>> = contents.into_iter().flat_map(|content| Grid::of(0, &content.parts, None)).collect();
    let any = |roles: &[Role]| grids.iter().any(|grid| roles.contains(&role_of(grid)));
    let maps = any(&[Role::Maps, Role::ElectrodesAndMaps]);
    if !maps && any(&[Role::Electrodes, Role::Labels]) { Kind::Electrodes } else { Kind::Maps }
}
