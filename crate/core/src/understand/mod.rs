//! Parts of files to electrodes and maps: tells files apart, finds columns, orientation, names and units. Every inference
//! that could have gone otherwise is a [`Choice`] that a setting changes.
#![deny(clippy::unwrap_used, clippy::expect_used, clippy::indexing_slicing)]

mod channels;
mod chosen;
mod coordinates;
mod facts;
mod grid;
mod maps;
mod positions;
mod role;
mod sequence;
mod unmixing;
mod wishes;

pub use role::{Kind, kind_of, role_of_files};
pub use sequence::Moments;
pub use wishes::{
    AngleUnit, AngleWishes, Baseline, ColumnName, ColumnWishes, ColumnsAre, Decimal, FileWishes, MapsAre, Orientation,
    Polar, Role, TimeUnit, Times, Wishes,
};

use crate::electrode::{Electrode, Label, Landmark};
use crate::finding::{Choice, Error, Finding, Place};
use crate::head::LengthUnit;
use crate::map::Maps;
use crate::math::Vec3;
use crate::read::{Body, Content, Encoding, Format, Record};
use chosen::Chosen;
use grid::Grid;
use serde::Serialize;

/// A file with its name and what was read of it.
#[derive(Clone, Debug, PartialEq)]
pub struct Source {
    /// Its name.
    pub name: String,
    /// What it has to be: tables that were given as electrodes or as maps.
    pub role: Option<Role>,
    /// What it holds.
    pub content: Content,
}

/// Electrodes and maps with all that the files say about them.
#[derive(Clone, Debug)]
pub struct Understood {
    /// Electrodes with positions in the unit of their table, or labels alone; `None` where no file has any.
    pub electrodes: Option<Vec<Electrode>>,
    /// The maps.
    pub maps: Maps,
    /// Landmarks, in the unit of the electrodes.
    pub landmarks: Vec<(Landmark, Vec3)>,
    /// Unit of the electrodes, by what a file declares.
    pub declared_unit: Option<LengthUnit>,
    /// Labels of channels that a file declares to be scalp EEG.
    pub scalp: Vec<Label>,
    /// Labels of channels that a file declares to be something else.
    pub other_channels: Vec<Label>,
    /// Labels of channels that a file declares to be bad.
    pub bad: Vec<Label>,
    /// How the maps belong together.
    pub columns_are: ColumnsAre,
    /// When the maps were.
    pub moments: Option<Moments>,
    /// Names of the files that hold the electrodes and the maps, where the user knows them by name.
    pub file_names: [Option<String>; 2],
    /// What each file, or part of one, was taken for.
    pub files: Vec<FileFacts>,
    /// What the user can change.
    pub choices: Vec<Choice>,
    /// What was inferred and what was left aside.
    pub notes: Vec<Finding>,
}

impl Understood {
    /// The finding with the name of the file it is about, where it is about electrodes or maps and has none.
    pub fn name_file(&self, finding: &mut Finding) {
        let Some(place) = finding.place.as_mut().filter(|place| place.file.is_none()) else { return };
        let [electrodes, maps] = &self.file_names;
        place.file = match place.input {
            Some("electrodes") => electrodes.clone(),
            Some("maps") => maps.clone(),
            _ => None,
        };
    }

    /// An error with the name of the file it is about.
    pub fn in_file(&self, error: Error) -> Error {
        let mut finding = error.finding().clone();
        self.name_file(&mut finding);
        finding.into()
    }
}

/// What a file, or a part of one, was taken for.
#[derive(Clone, Debug, PartialEq, Serialize)]
pub struct FileFacts {
    /// Name of the file.
    pub name: String,
    /// Name of the part, where the file has several.
    pub part: Option<String>,
    /// What it is.
    pub role: Role,
    /// How it is written.
    pub format: Format,
    /// How its text is written; `null` for binary files.
    pub encoding: Option<Encoding>,
    /// Rows, without the header.
    pub rows: usize,
    /// Columns.
    pub columns: usize,
    /// Whether a first row names the columns.
    pub header: bool,
    /// Columns that mean something; those of maps only by their first and last.
    pub used: Vec<UsedColumn>,
    /// Names of columns that mean nothing here, or their numbers.
    pub passed_over: Vec<String>,
}

/// A column and its meaning.
#[derive(Clone, Debug, PartialEq, Eq, Serialize)]
pub struct UsedColumn {
    /// Counted from 1.
    pub column: usize,
    /// Its name in the header; empty where it has none.
    pub name: String,
    /// `label`, `x`, `y`, `z`, `polar`, `azimuth`, `radius`, `value`, `type`, `status`.
    #[serde(rename = "as")]
    pub meaning: &'static str,
}

/// What is found on the way.
#[derive(Debug, Default)]
struct Found {
    files: Vec<FileName>,
    notes: Vec<Finding>,
    choices: Vec<Choice>,
    columns: Columns,
}

#[derive(Debug)]
struct FileName {
    name: String,
    /// Whether the user knows the file by this name.
    is_given: bool,
}

/// Columns of the grid that was read last.
#[derive(Clone, Debug, Default, PartialEq)]
struct Columns {
    used: Vec<(usize, &'static str)>,
    passed_over: Vec<usize>,
}

impl Columns {
    fn new(label: Option<usize>, others: Vec<(usize, &'static str)>) -> Self {
        Self { used: label.map(|label| (label, "label")).into_iter().chain(others).collect(), passed_over: Vec::new() }
    }
}

impl Found {
    /// A file as a place.
    fn place(&self, input: &'static str, grid: &Grid<'_>) -> Place {
        Place { file: self.given_name(grid.file), ..Place::input(input) }
    }

    fn given_name(&self, file: usize) -> Option<String> {
        self.files.get(file).filter(|file| file.is_given).map(|file| file.name.clone())
    }

    fn name(&self, file: usize) -> String {
        self.files.get(file).map(|file| file.name.clone()).unwrap_or_default()
    }

    fn file_name(&self, grid: &Grid<'_>) -> String {
        self.name(grid.file)
    }
}

/// Makes sense of the files, in any order.
///
/// # Errors
/// `maps-missing`, `files-several`, `shape-unmatched`, `table-columns`, `column-unknown`, `number-expected`,
/// `number-range`, `label-duplicate`, `electrodes-too-many`, `maps-too-many`, `maps-none`, `unmixing-singular`,
/// `baseline-empty`.
pub fn understand(sources: &[Source], wishes: &Wishes) -> Result<Understood, Error> {
    let mut found = Found {
        files: sources.iter().map(|file| FileName { name: file.name.clone(), is_given: file.role.is_none() }).collect(),
        ..Found::default()
    };
    let mut grids: Vec<(Grid<'_>, Role)> = Vec::new();
    let mut records: Vec<(usize, &Record)> = Vec::new();
    for (file, source) in sources.iter().enumerate() {
        let wish = wishes.files.get(&source.name);
        found.choices.extend(source.content.choices.iter().cloned().map(|choice| choice.of_file(&source.name)));
        let input = match source.role {
            Some(Role::Electrodes) => "electrodes",
            Some(_) => "maps",
            None => "file",
        };
        let name = found.given_name(file);
        found.notes.extend(source.content.notes.iter().cloned().map(|mut note| {
            let place = note.place.take().unwrap_or_default();
            note.at(Place { input: Some(input), file: name.clone(), ..place })
        }));
        let own = Grid::of(file, &source.content.parts, wish.and_then(|wish| wish.decimal));
        let told = wish.and_then(|wish| wish.role).or(source.role);
        grids.extend(roles(own, told, wish.and_then(|wish| wish.part.as_deref()), sources.len() == 1));
        records.extend(source.content.parts.iter().filter_map(|part| match &part.body {
            Body::Record(record) => Some((file, record)),
            _ => None,
        }));
    }
    let unmixing = wishes.maps_are == Some(MapsAre::Unmixing);
    let chosen = Chosen::of(&mut grids, sources, wishes, unmixing, &mut found)?;
    chosen.read(&grids, &records, sources, wishes, found)
}

/// Gives each grid of a file its role: by its content, unless the file's is told. What is told to be maps may hold
/// positions too where it is the only file.
fn roles<'a>(grids: Vec<Grid<'a>>, told: Option<Role>, part: Option<&str>, only: bool) -> Vec<(Grid<'a>, Role)> {
    let with_role = |grid: Grid<'a>| {
        let role = role::role_of(&grid);
        (grid, role)
    };
    let mut roles: Vec<(Grid<'a>, Role)> = grids.into_iter().map(with_role).collect();
    let Some(told) = told else {
        return chosen_part(roles, part);
    };
    // Both in several parts.
    let holds = |wanted: Role| roles.iter().any(|(_, role)| *role == wanted);
    if told == Role::ElectrodesAndMaps && holds(Role::Electrodes) && holds(Role::Maps) {
        return chosen_part(roles, part);
    }
    // Labels alone are electrodes too.
    let fits = |role: Role| {
        role == told
            || (told == Role::Electrodes && role == Role::Labels)
            || (told == Role::Maps && role == Role::ElectrodesAndMaps && only)
    };
    let alone = roles.len() == 1;
    let known = roles.iter().any(|(_, role)| fits(*role));
    let mut given = false;
    for (grid, role) in &mut roles {
        let takes =
            alone || told == Role::Unused || (!known && !given && *role != Role::Labels && *role != Role::Unused);
        let wanted = part.is_some() && grid.part == part;
        if (takes && !fits(*role)) || wanted {
            *role = told;
            given = true;
        }
    }
    chosen_part(roles, part)
}

/// Where one part is wanted, others like it are not.
fn chosen_part<'a>(mut roles: Vec<(Grid<'a>, Role)>, part: Option<&str>) -> Vec<(Grid<'a>, Role)> {
    let Some(wanted) = part else { return roles };
    let Some(role) = roles.iter().find(|(grid, _)| grid.part == Some(wanted)).map(|(_, role)| *role) else {
        return roles;
    };
    for (grid, other) in &mut roles {
        if grid.part != Some(wanted) && *other == role {
            *other = Role::Unused;
        }
    }
    roles
}
