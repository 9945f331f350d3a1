//! Parts of files to electrodes and maps: tells files apart, finds columns, orientation, names and units. Every inference
//! that could have gone otherwise is a [`Choice`] that a setting changes.
#![deny(clippy::unwrap_used, clippy::expect_used, clippy::indexing_slicing)]

mod channels;
mod coordinates;
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

use crate::electrode::{Electrode, Kind as LabelKind, Label, Landmark, Reading as LabelReading};
use crate::finding::{Choice, Code, Error, Finding, Origin, Place, Value};
use crate::head::LengthUnit;
use crate::map::Maps;
use crate::math::Vec3;
use crate::read::{Body, Content, Encoding, Format, Record};
use grid::{Grid, Header};
use serde::Serialize;
use std::collections::{HashMap, HashSet};

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

/// Fewest rows whose first columns are positions beyond doubt if they lie on a head and have no names.
const SURELY_PLACED: usize = 19;

/// The grids that are read, by their numbers.
#[derive(Debug, Default)]
struct Chosen {
    maps: usize,
    electrodes: Option<usize>,
    labels: Vec<usize>,
    channels: Option<usize>,
    sphering: Option<usize>,
    times: Option<usize>,
    /// The table of maps has positions of its own, which a table of electrodes replaces.
    replaced: bool,
}

impl Chosen {
    fn of(
        grids: &mut [(Grid<'_>, Role)],
        sources: &[Source],
        wishes: &Wishes,
        unmixing: bool,
        found: &mut Found,
    ) -> Result<Self, Error> {
        let with = |grids: &[(Grid<'_>, Role)], roles: &[Role]| -> Vec<usize> {
            let numbered = grids.iter().enumerate();
            numbered.filter(|(_, (_, role))| roles.contains(role)).map(|(index, _)| index).collect()
        };
        // Values beside positions are maps unless there are maps, and the positions count unless others are given apart.
        // A few values without names may lie like a head by chance.
        let few = |grid: &Grid<'_>| grid.height() < SURELY_PLACED && positions::named(grid).is_none();
        let both: Vec<usize> = with(grids, &[Role::ElectrodesAndMaps])
            .into_iter()
            .filter(|&index| grids.get(index).is_some_and(|(grid, _)| !few(grid)))
            .collect();
        let replaced = with(grids, &[Role::Maps]).is_empty() && !with(grids, &[Role::Electrodes]).is_empty();
        if replaced || !with(grids, &[Role::Maps]).is_empty() {
            for (_, role) in grids.iter_mut().filter(|(_, role)| *role == Role::ElectrodesAndMaps) {
                *role = if replaced { Role::Maps } else { Role::Electrodes };
            }
        }
        // What only looks like positions holds maps where other positions are named and there are no maps.
        if with(grids, &[Role::Maps, Role::ElectrodesAndMaps]).is_empty() {
            let named = |grid: &Grid<'_>| positions::named(grid).is_some();
            let of_electrodes = grids.iter_mut().filter(|(_, role)| *role == Role::Electrodes);
            let (sure, likely): (Vec<_>, Vec<_>) = of_electrodes.partition(|(grid, _)| named(grid));
            if !sure.is_empty() {
                likely.into_iter().for_each(|(_, role)| *role = Role::Maps);
            }
        }
        let counts: Vec<usize> = with(grids, &[Role::Electrodes, Role::ElectrodesAndMaps, Role::Labels])
            .into_iter()
            .filter_map(|index| grids.get(index).map(|(grid, _)| grid.height()))
            .collect();
        if unmixing && with(grids, &[Role::Sphering]).is_empty() {
            take_for_sphering(grids);
        }
        let candidates = with(grids, &[Role::Maps, Role::ElectrodesAndMaps]);
        let likely = |index: &usize| {
            let Some((grid, _)) = grids.get(*index) else { return 0 };
            let part = grid.part.unwrap_or_default().to_ascii_lowercase();
            let named = ["map", "mixing", "pattern", "topograph", "component", "a"].iter();
            let named = named.filter(|name| part == **name || (name.len() > 1 && part.contains(**name))).count();
            usize::from(named > 0) + 2 * usize::from(counts.contains(&grid.height()) || counts.contains(&grid.width()))
        };
        let Some(maps) = one_of(&candidates, grids, "maps", likely, found)? else {
            let mut finding = Finding::new(Code::MapsMissing);
            if let Some(source) = sources.first() {
                finding = finding
                    .at(Place { file: found.given_name(0), ..Place::input("maps") })
                    .with("file", source.name.as_str());
            }
            return Err(finding.into());
        };
        let replaced = replaced && both.contains(&maps);
        if let Some((grid, _)) = grids.get(maps).filter(|_| replaced) {
            found.notes.push(
                Finding::new(Code::PartUnused).at(found.place("file", grid)).with("role", "positions").with("part", ""),
            );
        }
        let mut candidates = with(grids, &[Role::Electrodes, Role::ElectrodesAndMaps]);
        // Positions in a file of their own replace those in the file of the maps.
        let file_of = |index: usize| grids.get(index).map(|(grid, _)| grid.file);
        if candidates.iter().any(|&index| file_of(index) != file_of(maps)) {
            candidates.retain(|&index| file_of(index) != file_of(maps));
        }
        let electrodes = one_of(&candidates, grids, "electrodes", |_| 0, found)?;
        let candidates = with(grids, &[Role::Channels]);
        let channels = one_of(&candidates, grids, "channels", |_| 0, found)?;
        let candidates = with(grids, &[Role::Sphering]);
        let sphering = one_of(&candidates, grids, "sphering", |_| 0, found)?;
        let times = with(grids, &[Role::Times]).first().copied();
        let labels = with(grids, &[Role::Labels]);
        let kept: Vec<usize> = [Some(maps), electrodes, channels, sphering, times]
            .into_iter()
            .flatten()
            .chain(labels.iter().copied())
            .collect();
        for (index, (grid, role)) in grids.iter_mut().enumerate() {
            let idle = sphering == Some(index) && !unmixing;
            if !kept.contains(&index) || idle {
                let told = wishes.files.get(&found.file_name(grid)).is_some_and(|wish| wish.role == Some(Role::Unused));
                if *role != Role::Unused && !told {
                    let mut unused = Finding::new(Code::PartUnused).at(found.place("file", grid));
                    unused = unused.with("role", role.name());
                    found.notes.push(unused.with("part", grid.part.unwrap_or_default()));
                }
                // A sphering matrix waits for its unmixing matrix.
                if !idle {
                    *role = Role::Unused;
                }
            }
        }
        let sphering = sphering.filter(|_| unmixing);
        Ok(Self { maps, electrodes, labels, channels, sphering, times, replaced })
    }

    fn read(
        self,
        grids: &[(Grid<'_>, Role)],
        records: &[(usize, &Record)],
        sources: &[Source],
        wishes: &Wishes,
        mut found: Found,
    ) -> Result<Understood, Error> {
        let grid = |index: usize| grids.get(index).map(|(grid, _)| grid);
        let lost = || Error::from(Finding::new(Code::MapsMissing));
        let maps_grid = grid(self.maps).ok_or_else(lost)?;
        let mut columns: Vec<(usize, Columns)> = Vec::new();

        // Where neither table has words, numbers or the order name the electrodes.
        let wordless = self.labels.is_empty()
            && self.electrodes != Some(self.maps)
            && maps_grid.header == Header::Absent
            && label_wish(maps_grid, wishes, None, &found)?.is_none();
        let mut electrodes = None;
        if let Some(electrode_grid) = self.electrodes.and_then(grid) {
            let label = label_wish(electrode_grid, wishes, wishes.columns.label.as_ref(), &found)?;
            let label = label.or_else(|| electrode_grid.numbered().filter(|_| wordless));
            let read = positions::read_electrodes(electrode_grid, label, &wishes.columns, &wishes.angles, &mut found)?;
            columns.push((self.electrodes.unwrap_or_default(), std::mem::take(&mut found.columns)));
            electrodes = Some((read, label.is_some(), electrode_grid));
        }
        let mut lists: Vec<(&Grid<'_>, Vec<Label>)> = Vec::new();
        for (&index, grid) in self.labels.iter().filter_map(|index| Some((index, grid(*index)?))) {
            lists.push((grid, labels_of(grid, wishes, &found)?));
            columns.push((index, Columns::new(grid.label_column(), Vec::new())));
        }
        let labels_known = electrodes.as_ref().filter(|(_, labelled, _)| *labelled).map(|(read, _, _)| read.as_slice());
        let list = list_of_electrodes(&lists, labels_known, maps_grid).map(|at| lists.swap_remove(at));
        // Positions without labels take those of a list as long as they are.
        let mut by_order = Vec::new();
        if let Some((read, false, electrode_grid)) = &mut electrodes
            && let Some((_, list)) = list.as_ref().filter(|(_, list)| list.len() == read.len())
        {
            read.iter_mut().zip(list).for_each(|(electrode, label)| electrode.label = label.clone());
            by_order.push(electrode_grid.file);
        }
        if let Some((read, false, _)) = electrodes.as_mut().filter(|_| wordless) {
            let numbers = (1..).map(|number: usize| Label::new(&number.to_string()));
            read.iter_mut().zip(numbers).for_each(|(electrode, number)| electrode.label = number);
        }
        let known: Vec<Vec<Label>> = list
            .iter()
            .map(|(_, list)| list.clone())
            .chain(electrodes.iter().map(|(read, _, _)| read.iter().map(|e| e.label.clone()).collect()))
            .collect();
        let beside = if self.electrodes == Some(self.maps) {
            columns
                .last()
                .map(|(_, columns)| columns.used.iter().map(|(column, _)| *column).collect())
                .unwrap_or_default()
        } else {
            // Positions that other ones replace.
            let unnamed = || positions::unnamed(maps_grid, maps_grid.label_column()).filter(|_| self.replaced);
            let named = positions::named(maps_grid).filter(|_| !maps_grid.is_numeric());
            named.or_else(|| unnamed().map(Vec::from)).unwrap_or_default()
        };
        let numbered = maps_grid.numbered().filter(|_| wordless && electrodes.is_some());
        let read = maps::read_maps(maps_grid, &beside, &known, numbered, wishes, &mut found)?;
        let mut maps_columns = std::mem::take(&mut found.columns);
        match columns.iter_mut().find(|(index, _)| *index == self.maps) {
            Some((_, known)) => {
                known.used.extend(maps_columns.used.into_iter().filter(|(_, meaning)| *meaning == "value"));
                known.passed_over = maps_columns.passed_over;
            }
            None => {
                // Positions that were replaced.
                maps_columns.passed_over.extend(&beside);
                maps_columns.passed_over.sort_unstable();
                columns.push((self.maps, maps_columns));
            }
        }
        let maps::Read { mut maps, labelled, named } = read;
        if let Some((_, names)) = lists.iter().find(|(_, list)| !named && list.len() == maps.names.len()) {
            maps.names = names.iter().map(Label::to_string).collect();
        }
        if let Some((read, false, electrode_grid)) = &mut electrodes
            && read.iter().all(|electrode| electrode.label.as_str().is_empty())
        {
            if !labelled || maps.labels.len() != read.len() {
                let finding = Finding::new(Code::ShapeUnmatched).at(found.place("electrodes", electrode_grid));
                let finding = finding.with("rows", read.len()).with("columns", electrode_grid.width());
                return Err(finding.with("labels", maps.labels.len()).into());
            }
            read.iter_mut().zip(&maps.labels).for_each(|(electrode, label)| electrode.label = label.clone());
            by_order.push(electrode_grid.file);
        }
        if !labelled {
            by_order.push(maps_grid.file);
        }
        by_order.dedup();
        for file in by_order {
            let place = Place { file: found.given_name(file), ..Place::input("maps") };
            found.notes.push(Finding::new(Code::LabelsByOrder).at(place).with("count", maps.labels.len()));
        }
        let written = [maps_grid.part.map(String::from), Some(found.name(maps_grid.file))];
        if wishes.maps_are.is_none()
            && let Some(name) = written.into_iter().flatten().find(|name| hints_at_unmixing(name))
        {
            let place = found.place("maps", maps_grid);
            found.notes.push(Finding::new(Code::UnmixingSuspected).at(place).with("found", name));
        }
        if wishes.maps_are == Some(MapsAre::Unmixing) {
            let sphering = self.sphering.and_then(grid);
            maps = unmixing::mixing(maps, maps_grid, sphering, &mut found)?;
        }
        found.choices.push(
            Choice::new(
                "mapsAre",
                if wishes.maps_are.is_some() { Origin::Setting } else { Origin::Assumed },
                wishes.maps_are.unwrap_or(MapsAre::Maps).name(),
            )
            .about(&found.file_name(maps_grid))
            .options(MapsAre::ALL.map(MapsAre::name)),
        );
        let times = self.times.and_then(grid);
        let (columns_are, moments) = sequence::sequence(&mut maps, maps_grid, times, wishes, &mut found)?;

        let declared = match self.channels.and_then(grid) {
            Some(grid) => {
                let declared = channels::read_channels(grid, &mut found)?;
                columns.push((self.channels.unwrap_or_default(), std::mem::take(&mut found.columns)));
                declared
            }
            None => channels::Declared::default(),
        };
        let described = coordinates::read_coordinates(records, &mut found);
        let electrodes = electrodes.map(|(read, _, _)| read).or_else(|| {
            // A list of labels alone names the electrodes, if it is not the list of a matrix.
            let (grid, list) = list.as_ref().filter(|_| labelled)?;
            let electrode = |(row, label): (usize, &Label)| Electrode {
                label: label.clone(),
                position: None,
                line: grid.line(row),
            };
            Some(list.iter().enumerate().map(electrode).collect())
        });
        let electrode_grid = self.electrodes.and_then(grid).or(list.as_ref().map(|(grid, _)| *grid));
        if let (Some(electrodes), Some(electrode_grid)) = (&electrodes, electrode_grid) {
            refuse_duplicates(&found.place("electrodes", electrode_grid), electrodes)?;
        }
        let file_names = [electrode_grid, Some(maps_grid)].map(|grid| found.given_name(grid?.file));
        let files = facts(grids, records, sources, &columns, wishes, &mut found);
        note_details(grids, &mut found);
        Ok(Understood {
            electrodes,
            maps,
            landmarks: described.landmarks,
            declared_unit: described.unit,
            scalp: declared.scalp,
            other_channels: declared.other,
            bad: declared.bad,
            columns_are,
            moments,
            file_names,
            files,
            choices: found.choices,
            notes: found.notes,
        })
    }
}

/// The list of words that names the electrodes: the one with most sites and labels of the table of electrodes, else the one
/// whose name says so, else the longest. Others may name the maps, and so may the only one, where it has no label of the
/// table and only the other side of the maps is as long as that.
fn list_of_electrodes(
    lists: &[(&Grid<'_>, Vec<Label>)],
    electrodes: Option<&[Electrode]>,
    maps: &Grid<'_>,
) -> Option<usize> {
    let keys: HashSet<String> = electrodes.into_iter().flatten().map(|electrode| electrode.label.key()).collect();
    let is_known =
        |label: &&Label| keys.contains(&label.key()) || matches!(LabelReading::of(label).kind, LabelKind::Site(_));
    let likely = |(grid, list): &(&Grid<'_>, Vec<Label>)| {
        let name = grid.inner_name().to_ascii_lowercase();
        let says = ["label", "chan", "elec", "site", "sens"].iter().any(|begin| name.starts_with(begin));
        (list.iter().filter(is_known).count(), says, list.len())
    };
    let (best, (known, _, length)) = lists.iter().map(likely).enumerate().rev().max_by_key(|(_, likely)| *likely)?;
    let sides = [maps.height(), maps.width()];
    let of_maps = |count: usize| count != length && sides.contains(&length) && sides.contains(&count);
    (known > 0 || !electrodes.is_some_and(|electrodes| of_maps(electrodes.len()))).then_some(best)
}

/// A label may stand once, unless it names no electrode of the scalp.
fn refuse_duplicates(table: &Place, electrodes: &[Electrode]) -> Result<(), Error> {
    let mut seen: HashMap<String, usize> = HashMap::new();
    for Electrode { label, line, .. } in electrodes {
        let Some(first) = seen.insert(label.key(), *line) else { continue };
        if matches!(LabelReading::of(label).kind, LabelKind::Other(_)) {
            continue;
        }
        let place = Place { label: Some(label.to_string()), line: Some(*line), ..table.clone() };
        let finding = Finding::new(Code::LabelDuplicate).at(place).with("label", label.as_str());
        return Err(finding.with("first_line", first).into());
    }
    Ok(())
}

/// With an unmixing matrix of components × channels, a square matrix of channels × channels is its sphering matrix.
fn take_for_sphering(grids: &mut [(Grid<'_>, Role)]) {
    let matrices: Vec<(usize, usize, usize)> = grids
        .iter()
        .enumerate()
        .filter(|(_, (grid, role))| *role == Role::Maps && grid.is_numeric())
        .map(|(index, (grid, _))| (index, grid.height(), grid.width()))
        .collect();
    let [(first, rows, columns), (second, more_rows, more_columns)] = matrices.as_slice() else { return };
    let sphering = match (rows == columns, more_rows == more_columns) {
        (true, false) if more_rows == rows || more_columns == rows => *first,
        (false, true) if rows == more_rows || columns == more_rows => *second,
        _ => return,
    };
    if let Some((_, role)) = grids.get_mut(sphering) {
        *role = Role::Sphering;
    }
}

/// One of several grids for a purpose: of one file the likeliest, which is a choice; of several files none.
fn one_of(
    candidates: &[usize],
    grids: &[(Grid<'_>, Role)],
    purpose: &'static str,
    likely: impl Fn(&usize) -> usize,
    found: &mut Found,
) -> Result<Option<usize>, Error> {
    let grid = |index: &usize| grids.get(*index).map(|(grid, _)| grid);
    let mut files: Vec<usize> = candidates.iter().filter_map(|index| Some(grid(index)?.file)).collect();
    files.dedup();
    if files.len() > 1 {
        let names: Vec<String> = files.iter().map(|&file| found.name(file)).collect();
        let place = Place { file: found.given_name(*files.last().unwrap_or(&0)), ..Place::default() };
        return Err(Finding::new(Code::FilesSeveral).at(place).with("role", purpose).with("files", names).into());
    }
    let mut best: Option<usize> = None;
    for candidate in candidates {
        if best.is_none_or(|best| likely(candidate) > likely(&best)) {
            best = Some(*candidate);
        }
    }
    if let (Some(chosen), true) = (best.as_ref().and_then(grid), candidates.len() > 1) {
        let parts = candidates.iter().filter_map(|index| grid(index)?.part).map(String::from);
        let name = found.file_name(chosen);
        let choice = Choice::new("part", Origin::Assumed, chosen.part.unwrap_or_default()).options(parts);
        found.choices.push(choice.of_file(&name));
    }
    Ok(best)
}

/// The label column of a grid: by setting, by name, or by content.
fn label_wish(
    grid: &Grid<'_>,
    wishes: &Wishes,
    general: Option<&ColumnName>,
    found: &Found,
) -> Result<Option<usize>, Error> {
    let own = wishes.files.get(&found.file_name(grid)).and_then(|wish| wish.label.as_ref());
    match own.or(general) {
        Some(name) => positions::column(grid, name, found).map(Some),
        None if grid.is_numeric() => Ok(None),
        None => Ok(grid.label_column()),
    }
}

fn labels_of(grid: &Grid<'_>, wishes: &Wishes, found: &Found) -> Result<Vec<Label>, Error> {
    let column = label_wish(grid, wishes, None, found)?.unwrap_or(0);
    (0..grid.height()).map(|row| positions::label_of(grid, row, column, "electrodes", found)).collect()
}

/// What each file was taken for.
fn facts(
    grids: &[(Grid<'_>, Role)],
    records: &[(usize, &Record)],
    sources: &[Source],
    columns: &[(usize, Columns)],
    wishes: &Wishes,
    found: &mut Found,
) -> Vec<FileFacts> {
    let mut facts = Vec::new();
    for (file, source) in sources.iter().enumerate() {
        let fact = |part: Option<&str>, role: Role, rows: usize, width: usize| FileFacts {
            name: source.name.clone(),
            part: part.filter(|_| source.content.parts.len() > 1).map(String::from),
            role,
            format: source.content.format,
            encoding: source.content.encoding,
            rows,
            columns: width,
            header: false,
            used: Vec::new(),
            passed_over: Vec::new(),
        };
        let mut roles: Vec<Role> = Vec::new();
        for (index, (grid, role)) in grids.iter().enumerate().filter(|(_, (grid, _))| grid.file == file) {
            let mut fact = fact(grid.part, *role, grid.height(), grid.width());
            fact.header = grid.header != Header::Absent;
            if let Some((_, columns)) = columns.iter().find(|(known, _)| *known == index) {
                fact.used = used_columns(grid, columns);
                fact.passed_over = columns.passed_over.iter().map(|&column| written(grid, column)).collect();
            }
            roles.push(*role);
            facts.push(fact);
        }
        for (_, record) in records.iter().filter(|(own, _)| *own == file) {
            let role = role::role_of_record(record);
            roles.push(role);
            facts.push(fact(None, role, record.len(), 2));
        }
        if roles.is_empty() {
            facts.push(fact(None, Role::Unused, 0, 0));
        }
        let told = wishes.files.get(&source.name).is_some_and(|wish| wish.role.is_some());
        let from = if told { Origin::Setting } else { Origin::Found };
        let role = role::together(&roles);
        if source.role.is_none() {
            found
                .choices
                .push(Choice::new("role", from, role.name()).of_file(&source.name).options(Role::ALL.map(Role::name)));
        }
        if role == Role::Unused && !told {
            let place = Place { file: found.given_name(file), ..Place::input("file") };
            found.notes.push(Finding::new(Code::FileUnused).at(place).with("file", source.name.as_str()));
        }
    }
    facts
}

/// Name of a column, or its number.
fn written(grid: &Grid<'_>, column: usize) -> String {
    match grid.name(column) {
        "" => (column + 1).to_string(),
        name => name.to_owned(),
    }
}

/// Columns with their meaning.
fn used_columns(grid: &Grid<'_>, columns: &Columns) -> Vec<UsedColumn> {
    let used = columns.used.iter();
    used.map(|&(column, meaning)| UsedColumn { column: column + 1, name: grid.name(column).to_owned(), meaning })
        .collect()
}

/// Notes and choices about how numbers and names were read.
/// Whether a file or one of its parts is named as unmixing matrices usually are.
fn hints_at_unmixing(name: &str) -> bool {
    let name = name.to_lowercase();
    let last = name.rsplit('.').next().unwrap_or_default();
    last == "w" || ["unmix", "weights", "demix"].iter().any(|word| name.contains(word))
}

/// The first line in which a comma may have been a decimal mark: `-0`, then a whole number without a sign.
fn divided_decimals(grid: &Grid<'_>) -> Option<usize> {
    let whole = |word: &str| !word.is_empty() && word.bytes().all(|byte| byte.is_ascii_digit());
    let suspect =
        |row: usize| (1..grid.width()).any(|next| grid.word(row, next - 1) == "-0" && whole(grid.word(row, next)));
    (0..grid.height()).find(|&row| suspect(row)).map(|row| grid.line(row))
}

fn note_details(grids: &[(Grid<'_>, Role)], found: &mut Found) {
    for (grid, role) in grids.iter().filter(|(_, role)| *role != Role::Unused) {
        let input = if *role == Role::Electrodes { "electrodes" } else { "maps" };
        let place = Place { line: Some(grid.first_line()), ..found.place(input, grid) };
        if grid.header == Header::Assumed {
            found.notes.push(Finding::new(Code::HeaderAssumed).at(place.clone()));
        }
        let name = found.file_name(grid);
        let divided = |choice: &Choice| {
            choice.setting == "delimiter" && choice.file.as_ref() == Some(&name) && choice.value == "comma".into()
        };
        if found.choices.iter().any(divided)
            && let Some(line) = divided_decimals(grid)
        {
            let place = Place { line: Some(line), ..place.clone() };
            found.notes.push(Finding::new(Code::DecimalsSuspected).at(place));
        }
        if let Some((decimal, from)) = grid.decimal {
            let choice = Choice::new("decimal", from, decimal.name()).of_file(&name);
            let choice = choice.options([Decimal::Point, Decimal::Comma].map(Decimal::name));
            // Its setting is for all tables of a file.
            if !found.choices.iter().any(|known| known.path == choice.path) {
                found.choices.push(choice);
            }
            if decimal == Decimal::Comma && from == Origin::Found {
                found.notes.push(Finding::new(Code::DecimalComma).at(Place { line: None, ..place }));
            }
        }
    }
    let latin = found.choices.iter().filter(|c| c.setting == "encoding" && c.from == Origin::Assumed);
    let latin: Vec<Finding> = latin
        .filter_map(|choice| {
            let file = choice.file.clone().filter(|name| found.files.iter().any(|f| f.is_given && f.name == *name));
            let value = matches!(&choice.value, Value::Text(_)).then_some("latin-1")?;
            Some(Finding::new(Code::EncodingAssumed).at(Place { file, ..Place::input("file") }).with("encoding", value))
        })
        .collect();
    found.notes.extend(latin);
}
