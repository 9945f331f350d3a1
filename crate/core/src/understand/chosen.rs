//! Which parts of the files are read as what, and what they hold.

use super::facts::{facts, note_details};
use super::grid::{Grid, Header};
use super::positions::label_wish;
use super::{
    Columns, Found, MapsAre, Role, Source, Understood, Wishes, channels, coordinates, maps, positions, sequence,
    unmixing,
};
use crate::electrode::{Electrode, Kind as LabelKind, Label, Reading as LabelReading};
use crate::finding::{Choice, Code, Error, Finding, Origin, Place};
use crate::math::sort_by_number;
use crate::read::{MOST_ELECTRODES, Record};
use std::collections::{HashMap, HashSet};

/// Fewest rows whose first columns are positions beyond doubt if they lie on a head and have no names.
const SURELY_PLACED: usize = 19;

/// The grids that are read, by their numbers.
#[derive(Debug, Default)]
pub(super) struct Chosen {
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
    pub(super) fn of(
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

    pub(super) fn read(
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
        let mut declared = channels::Declared::default();
        let channel_grid = self.channels.and_then(grid);
        if let Some(grid) = channel_grid {
            declared = channels::read_channels(grid, &mut found)?;
            columns.push((self.channels.unwrap_or_default(), std::mem::take(&mut found.columns)));
        }
        // Whose order unlabelled values have: a list of labels is there for that, a table of channels tells the order of the
        // recording, one of electrodes has any.
        let usable = |labels: &&Vec<Label>| (1..=MOST_ELECTRODES).contains(&labels.len());
        let recorded = [&declared.scalp, &declared.all].into_iter().filter(usable);
        let known: Vec<(Option<&Grid<'_>>, Vec<Label>)> = list
            .iter()
            .map(|(grid, list)| (Some(*grid), list.clone()))
            .chain(recorded.map(|labels| (channel_grid, labels.clone())))
            .chain(
                electrodes.iter().map(|(read, _, grid)| (Some(*grid), read.iter().map(|e| e.label.clone()).collect())),
            )
            .collect();
        let (of_order, known): (Vec<_>, Vec<_>) = known.into_iter().unzip();
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
                sort_by_number(&mut maps_columns.passed_over, |column| *column as f64);
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
            let order = known.iter().position(|labels| *labels == maps.labels).and_then(|at| *of_order.get(at)?);
            let keys = |labels: &[Label]| labels.iter().map(Label::key).collect::<HashSet<String>>();
            let other = known.iter().zip(&of_order).find(|(labels, _)| {
                labels.len() == maps.labels.len() && **labels != maps.labels && keys(labels) == keys(&maps.labels)
            });
            let name = |grid: Option<&Grid<'_>>| grid.map(|grid| found.file_name(grid)).unwrap_or_default();
            found.notes.push(
                Finding::new(Code::LabelsByOrder)
                    .at(place)
                    .with("count", maps.labels.len())
                    .with("order", name(order))
                    .with("other", name(other.and_then(|(_, grid)| *grid))),
            );
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

        let described = coordinates::read_coordinates(records);
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

fn labels_of(grid: &Grid<'_>, wishes: &Wishes, found: &Found) -> Result<Vec<Label>, Error> {
    let column = label_wish(grid, wishes, None, found)?.unwrap_or(0);
    (0..grid.height()).map(|row| positions::label_of(grid, row, column, "electrodes", found)).collect()
}

/// Whether a file or one of its parts is named as unmixing matrices usually are.
fn hints_at_unmixing(name: &str) -> bool {
    let name = name.to_ascii_lowercase();
    let last = name.rsplit('.').next().unwrap_or_default();
    last == "w" || ["unmix", "weights", "demix"].iter().any(|word| name.contains(word))
}
