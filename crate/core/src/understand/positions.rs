use super::grid::Grid;
use super::wishes::{AngleUnit, AngleWishes, ColumnName, ColumnWishes, Polar};
use super::{Columns, Found, Wishes};
use crate::electrode::{Electrode, Label, standard_position};
use crate::finding::{Choice, Code, Error, Finding, Origin, Place};
use crate::math::Vec3;
use crate::read::MOST_ELECTRODES;
use core::f64::consts::PI;

/// Names of columns of angles, without a unit that may follow them.
const INCLINATION: [&str; 7] = ["inclination", "incl", "inc", "colatitude", "polar", "theta", "sph_theta"];
const ELEVATION: [&str; 5] = ["elevation", "elev", "latitude", "lat", "el"];
const AZIMUTH: [&str; 8] = ["azimuth", "azim", "azi", "az", "longitude", "lon", "phi", "sph_phi"];
const RADIUS: [&str; 5] = ["radius", "r", "rho", "distance", "sph_radius"];

/// Where the positions of a table stand.
#[derive(Clone, Copy, Debug, PartialEq)]
enum Places {
    /// In columns x, y, z.
    Cartesian([usize; 3]),
    /// In columns of two angles and, perhaps, a distance.
    Angles { polar: usize, azimuth: usize, radius: Option<usize> },
}

/// Electrodes of a grid, in the unit of the grid: label, x, y, z; or label, two angles and perhaps a radius; or labels
/// alone. Columns are found by name, without names by their content: the three that hold numbers and do not count the
/// rows.
///
/// Angles give x = r sin(inclination) cos(azimuth), y = r sin(inclination) sin(azimuth), z = r cos(inclination), where the
/// inclination is 90° less the elevation and may be negative; r is 1 where it is not given. A missing position is allowed.
///
/// # Errors
/// `table-columns`, `column-unknown`, `number-expected`, `number-range`, `electrodes-too-many`.
pub(super) fn read_electrodes(
    grid: &Grid<'_>,
    label: Option<usize>,
    wishes: &ColumnWishes,
    angles: &AngleWishes,
    found: &mut Found,
) -> Result<Vec<Electrode>, Error> {
    let input = "electrodes";
    if grid.height() > MOST_ELECTRODES {
        let finding = Finding::new(Code::ElectrodesTooMany).at(found.place(input, grid));
        return Err(finding.with("found", grid.height()).with("most", MOST_ELECTRODES).into());
    }
    let wished = |name: &Option<ColumnName>| name.as_ref().map(|name| column(grid, name, found)).transpose();
    let xyz = [wished(&wishes.x)?, wished(&wishes.y)?, wished(&wishes.z)?];
    let turned = [wished(&wishes.polar)?, wished(&wishes.azimuth)?];
    let radius = wished(&wishes.radius)?;
    let by_wish = xyz.iter().chain(&turned).any(Option::is_some);
    let lacks = |what: &str| {
        let place = Place { line: Some(grid.first_line()), ..found.place(input, grid) };
        Error::from(Finding::new(Code::TableColumns).at(place).with("lacks", what).with("width", grid.width()))
    };
    let places = match (turned, complete(xyz, axes(grid))) {
        ([Some(polar), Some(azimuth)], _) => Some(Places::Angles { polar, azimuth, radius }),
        (_, Some(xyz)) => Some(Places::Cartesian(xyz)),
        _ => angles_of(grid).or_else(|| unnamed(grid, label).map(Places::Cartesian)),
    };
    if places.is_none()
        && (by_wish || grid.width() > 1 && (0..grid.width()).any(|c| Some(c) != label && grid.has_numbers(c)))
    {
        return Err(lacks("coordinates"));
    }
    let places = match places {
        Some(Places::Angles { polar, azimuth, radius })
            if turned == [None, None] && swapped(grid, label, [polar, azimuth], angles) =>
        {
            Some(Places::Angles { polar: azimuth, azimuth: polar, radius })
        }
        _ => places,
    };
    let meaning = match places {
        Some(Places::Angles { polar, azimuth, radius }) => {
            Some(meaning(grid, label, [polar, azimuth], radius, angles, found))
        }
        _ => None,
    };
    if let (Some(label), Some(label_wish)) = (label, Some(&wishes.label)) {
        let from = if label_wish.is_some() { Origin::Setting } else { Origin::Found };
        found.choices.push(columns_choice("columns.label", grid, label, from, found));
    }
    if let Some(Places::Cartesian(xyz)) = places {
        for ((setting, column), wish) in
            ["columns.x", "columns.y", "columns.z"].into_iter().zip(xyz).zip([&wishes.x, &wishes.y, &wishes.z])
        {
            let from = if wish.is_some() { Origin::Setting } else { Origin::Found };
            found.choices.push(columns_choice(setting, grid, column, from, found));
        }
    }
    if let Some(Places::Angles { polar, azimuth, radius: distance }) = places {
        let angles = [
            ("columns.polar", Some(polar), &wishes.polar),
            ("columns.azimuth", Some(azimuth), &wishes.azimuth),
            ("columns.radius", distance, &wishes.radius),
        ];
        for (setting, column, wish) in angles {
            let from = if wish.is_some() { Origin::Setting } else { Origin::Found };
            found.choices.extend(column.map(|column| columns_choice(setting, grid, column, from, found)));
        }
    }
    let mut electrodes = Vec::with_capacity(grid.height());
    for row in 0..grid.height() {
        let name = match label {
            Some(column) => label_of(grid, row, column, input, found)?,
            None => Label::new(""),
        };
        let value = |column: usize| {
            let place = || Place {
                label: Some(name.to_string()).filter(|name| !name.is_empty()),
                line: Some(grid.line(row)),
                column: Some(column + 1),
                ..found.place(input, grid)
            };
            grid.value(row, column, place)
        };
        let position = match (places, meaning) {
            (Some(Places::Cartesian([x, y, z])), _) => Some(Vec3::new(value(x)?, value(y)?, value(z)?)),
            (Some(Places::Angles { polar, azimuth, radius }), Some((from, unit))) => {
                let radius = radius.map_or(Ok(1.0), value)?;
                Some(on_sphere(value(polar)?, value(azimuth)?, radius, from, unit))
            }
            _ => None,
        };
        let position = position.filter(|position| !position.0.iter().any(|coordinate| coordinate.is_nan()));
        electrodes.push(Electrode { label: name, position, line: grid.line(row) });
    }
    found.columns = Columns::new(
        label,
        match places {
            Some(Places::Cartesian([x, y, z])) => vec![(x, "x"), (y, "y"), (z, "z")],
            Some(Places::Angles { polar, azimuth, radius }) => [(polar, "polar"), (azimuth, "azimuth")]
                .into_iter()
                .chain(radius.map(|radius| (radius, "radius")))
                .collect(),
            None => Vec::new(),
        },
    );
    Ok(electrodes)
}

/// The point at a polar angle, an azimuth and a distance.
fn on_sphere(polar: f64, azimuth: f64, radius: f64, from: Polar, unit: AngleUnit) -> Vec3 {
    let radians = |angle: f64| if unit == AngleUnit::Degrees { angle * (PI / 180.0) } else { angle };
    let (polar, azimuth) = (radians(polar), radians(azimuth));
    let (outwards, up) = match from {
        Polar::Inclination => (libm::sin(polar), libm::cos(polar)),
        Polar::Elevation => (libm::cos(polar), libm::sin(polar)),
    };
    Vec3::new(radius * outwards * libm::cos(azimuth), radius * outwards * libm::sin(azimuth), radius * up)
}

/// What the angles mean. Their names say whether the polar one is an inclination, unless that is `theta`: then the
/// heights that standard labels should have decide, where there are five. Angles beyond a full turn are degrees.
fn meaning(
    grid: &Grid<'_>,
    label: Option<usize>,
    [polar, azimuth]: [usize; 2],
    radius: Option<usize>,
    wishes: &AngleWishes,
    found: &mut Found,
) -> (Polar, AngleUnit) {
    let (unit, unit_from, largest) = unit_of(grid, [polar, azimuth], wishes);
    let (sites, as_inclination) = misfit(grid, label, polar, Polar::Inclination, unit);
    let (_, as_elevation) = misfit(grid, label, polar, Polar::Elevation, unit);
    let name = bare(grid.name(polar));
    let (from, origin) = match wishes.polar {
        Some(from) => (from, Origin::Setting),
        None if ELEVATION.contains(&name.as_str()) => (Polar::Elevation, Origin::Declared),
        None if INCLINATION.contains(&name.as_str()) && !name.contains("theta") => {
            (Polar::Inclination, Origin::Declared)
        }
        None if sites >= 5 => {
            (if as_elevation < as_inclination { Polar::Elevation } else { Polar::Inclination }, Origin::Found)
        }
        None => (Polar::Inclination, Origin::Assumed),
    };
    let file = found.file_name(grid);
    let choices = [
        Choice::new("angles.polar", origin, from.name())
            .options([Polar::Inclination, Polar::Elevation].map(Polar::name)),
        Choice::new("angles.unit", unit_from, unit.name())
            .options([AngleUnit::Degrees, AngleUnit::Radians].map(AngleUnit::name))
            .with("largest", largest),
    ];
    found.choices.extend(choices.map(|choice| choice.about(&file)));
    let place = Place { line: Some(grid.first_line()), ..found.place("electrodes", grid) };
    found.notes.push(
        Finding::new(Code::AnglesRead)
            .at(place)
            .with("polar", from.name())
            .with("unit", unit.name())
            .with("radius", radius.is_some()),
    );
    (from, unit)
}

/// The unit of angles, how it was told, and the largest of them.
fn unit_of(grid: &Grid<'_>, columns: [usize; 2], wishes: &AngleWishes) -> (AngleUnit, Origin, f64) {
    let largest = columns
        .iter()
        .flat_map(|&column| (0..grid.height()).filter_map(move |row| grid.number(row, column)))
        .fold(0.0, |most: f64, angle| most.max(angle.abs()));
    let says = |word: &str| columns.iter().any(|&column| grid.name(column).to_ascii_lowercase().contains(word));
    let (unit, from) = match wishes.unit {
        Some(unit) => (unit, Origin::Setting),
        None if says("deg") || says("°") => (AngleUnit::Degrees, Origin::Declared),
        None if says("rad") && !says("radius") => (AngleUnit::Radians, Origin::Declared),
        None if largest > 2.2 * PI => (AngleUnit::Degrees, Origin::Found),
        None => (AngleUnit::Radians, Origin::Found),
    };
    (unit, from, largest)
}

/// How many labels have a standard height, and the sum of what a polar angle differs from it.
fn misfit(grid: &Grid<'_>, label: Option<usize>, polar: usize, from: Polar, unit: AngleUnit) -> (usize, f64) {
    let rows = (0..grid.height()).filter_map(|row| {
        let site = standard_position(&Label::new(grid.word(row, label?)))?;
        Some((on_sphere(grid.number(row, polar)?, 0.0, 1.0, from, unit)[2] - site[2]).abs())
    });
    rows.fold((0, 0.0), |(count, sum), off| (count + 1, sum + off))
}

/// Whether columns named theta and phi hold the azimuth first, as some write them: where the heights of five standard
/// labels or more fit the second much better.
fn swapped(grid: &Grid<'_>, label: Option<usize>, columns: [usize; 2], wishes: &AngleWishes) -> bool {
    let [theta, phi] = columns.map(|column| grid.name(column).to_ascii_lowercase());
    let (unit, ..) = unit_of(grid, columns, wishes);
    let best = |column: usize| {
        let [one, other] = [Polar::Inclination, Polar::Elevation].map(|from| misfit(grid, label, column, from, unit));
        (one.0, one.1.min(other.1))
    };
    let [(sites, as_named), (_, exchanged)] = columns.map(best);
    theta.contains("theta") && phi.contains("phi") && sites >= 5 && exchanged < 0.5 * as_named
}

/// The label column of a grid: by setting, by name, or by content.
pub(super) fn label_wish(
    grid: &Grid<'_>,
    wishes: &Wishes,
    general: Option<&ColumnName>,
    found: &Found,
) -> Result<Option<usize>, Error> {
    let own = wishes.files.get(&found.file_name(grid)).and_then(|wish| wish.label.as_ref());
    match own.or(general) {
        Some(name) => column(grid, name, found).map(Some),
        None if grid.is_numeric() => Ok(None),
        None => Ok(grid.label_column()),
    }
}

/// The columns that names tell to hold positions; `None` where no names do.
pub(super) fn named(grid: &Grid<'_>) -> Option<Vec<usize>> {
    match axes(grid) {
        Some(xyz) => Some(xyz.to_vec()),
        None => match angles_of(grid)? {
            Places::Angles { polar, azimuth, radius } => Some([polar, azimuth].into_iter().chain(radius).collect()),
            Places::Cartesian(xyz) => Some(xyz.to_vec()),
        },
    }
}

/// The columns named x, y and z.
pub(super) fn axes(grid: &Grid<'_>) -> Option<[usize; 3]> {
    let axis = |axis: char| grid.column(|name| is_axis_name(name, axis));
    Some([axis('x')?, axis('y')?, axis('z')?])
}

/// Whether a column is named by this axis, perhaps with a unit, as `x_mm` or `x (m)`.
pub(super) fn is_axis_name(name: &str, axis: char) -> bool {
    let mut letters = name.chars();
    letters.next().is_some_and(|first| first.eq_ignore_ascii_case(&axis))
        && letters.next().is_none_or(|second| !second.is_alphanumeric())
}

fn angles_of(grid: &Grid<'_>) -> Option<Places> {
    let named = |names: &[&str]| grid.column(|name| names.contains(&bare(name).as_str()));
    let polar = named(&INCLINATION).or_else(|| named(&ELEVATION))?;
    Some(Places::Angles { polar, azimuth: named(&AZIMUTH)?, radius: named(&RADIUS) })
}

/// A name in lower case without a unit behind it.
fn bare(name: &str) -> String {
    let name = name.to_ascii_lowercase();
    let units = ["degrees", "degree", "deg", "radians", "radian", "rad", "°", "mm", "cm", "m"];
    let stem = name.trim_end_matches([')', ']']);
    let without = units.iter().find_map(|unit| {
        let stem = stem.strip_suffix(unit)?;
        let end = stem.trim_end_matches([' ', '_', '(', '[', '-', '.']);
        (end.len() < stem.len() && !end.is_empty()).then(|| end.to_owned())
    });
    without.unwrap_or(name)
}

/// The first three columns of numbers that do not count the rows, where there are three.
pub(super) fn unnamed(grid: &Grid<'_>, label: Option<usize>) -> Option<[usize; 3]> {
    let mut others = (0..grid.width())
        .filter(|&column| Some(column) != label && !grid.numbers_rows(column, label) && grid.has_numbers(column));
    Some([others.next()?, others.next()?, others.next()?])
}

/// All three columns, wished for or found.
fn complete(wished: [Option<usize>; 3], found: Option<[usize; 3]>) -> Option<[usize; 3]> {
    match (wished, found) {
        ([Some(x), Some(y), Some(z)], _) => Some([x, y, z]),
        ([x, y, z], Some([a, b, c])) => Some([x.unwrap_or(a), y.unwrap_or(b), z.unwrap_or(c)]),
        _ => None,
    }
}

/// The number of a column that a setting names.
///
/// # Errors
/// `column-unknown`.
pub(super) fn column(grid: &Grid<'_>, name: &ColumnName, found: &Found) -> Result<usize, Error> {
    let at = match name {
        ColumnName::Number(number) => number.checked_sub(1).filter(|&column| column < grid.width()),
        ColumnName::Name(name) => grid.column(|known| known.trim().eq_ignore_ascii_case(name.trim())),
    };
    at.ok_or_else(|| {
        let written = match name {
            ColumnName::Number(number) => number.to_string(),
            ColumnName::Name(name) => name.clone(),
        };
        let place = Place { line: Some(grid.first_line()), ..found.place("settings", grid) };
        let known: Vec<String> = grid.names().filter(|name| !name.is_empty()).map(String::from).collect();
        let finding = Finding::new(Code::ColumnUnknown).at(place).with("column", written);
        finding.with("width", grid.width()).with("known", known).into()
    })
}

/// The choice of a column among those of a grid.
pub(super) fn columns_choice(
    setting: &'static str,
    grid: &Grid<'_>,
    column: usize,
    from: Origin,
    found: &Found,
) -> Choice {
    let mut choice = Choice::new(setting, from, column + 1).about(&found.file_name(grid));
    choice.options = (0..grid.width().min(MOST_OPTIONS))
        .map(|column| ((column + 1).into(), Some(grid.name(column).to_owned()).filter(|name| !name.is_empty())))
        .collect();
    choice
}

/// Columns that are offered: a table of maps may have thousands.
const MOST_OPTIONS: usize = 64;

/// The label in a row.
///
/// # Errors
/// `table-columns` where there is none.
pub(super) fn label_of(
    grid: &Grid<'_>,
    row: usize,
    column: usize,
    input: &'static str,
    found: &Found,
) -> Result<Label, Error> {
    let label = Label::new(grid.word(row, column));
    let number = grid.number(row, column).filter(|_| label.as_str().is_empty());
    if let Some(number) = number.filter(|number| number.fract() == 0.0 && number.abs() < 1e9) {
        return Ok(Label::new(&(number as i64).to_string()));
    }
    if label.as_str().is_empty() || label.as_str().eq_ignore_ascii_case("n/a") {
        let place = Place { line: Some(grid.line(row)), column: Some(column + 1), ..found.place(input, grid) };
        return Err(Finding::new(Code::TableColumns).at(place).with("lacks", "label").into());
    }
    Ok(label)
}
