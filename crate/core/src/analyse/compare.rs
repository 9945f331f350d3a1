//! Several decompositions side by side.

use super::{FEWEST_ELECTRODES, Study};
use crate::finding::{Code, Error, Finding, Place};
use crate::map::average_referenced;
use crate::math::{Vec3, assignment, dot, rank};
use crate::report::{
    Comparison, DecompositionReport, ErrorReport, MapReport, MapRow, Match, Member, NearDipolar, Note, Pair, Questions,
    RankReport, Settings, Summary, full_name,
};
use crate::understand::ColumnsAre;
use std::collections::HashMap;

/// Most maps of a decomposition that are matched with others, and whose rank is computed.
const MOST_MAPS: usize = 1024;

/// Pairs of decompositions that are matched without being asked for.
const MOST_PAIRS: usize = 45;

/// What is left of a map, scaled to unit length, when what others combine to is taken off: more than this makes it count.
/// Tables seldom have more than six digits.
const RANK_TOLERANCE: f64 = 1e-5;

/// A decomposition to compare.
#[derive(Clone, Debug)]
pub struct Decomposition {
    /// Its name.
    pub name: String,
    /// Whose it is.
    pub subject: Option<String>,
    /// A reduction of mutual information that the user has.
    pub information: Option<f64>,
    /// Its maps.
    pub study: Study,
}

impl Decomposition {
    fn full_name(&self) -> String {
        full_name(&self.name, self.subject.as_deref())
    }
}

/// Compares decompositions: fits all maps, counts the near-dipolar ones, matches components. Without `pairs`, all of one
/// subject are matched, and those that have none.
///
/// # Errors
/// `settings-unknown`. A decomposition without a map that can be fitted is no error.
pub fn compare(
    list: &[Decomposition],
    questions: &Questions,
    pairs: Option<&[[usize; 2]]>,
) -> Result<Comparison, Error> {
    let apart = |[a, b]: &[usize; 2]| a != b && *a < list.len() && *b < list.len();
    if !pairs.is_none_or(|pairs| pairs.iter().all(apart)) {
        return Err(Settings::unknown("`pairs` lists two different decompositions in each entry, counted from 0"));
    }
    questions.check()?;
    let mut members = Vec::new();
    let mut fits = Vec::new();
    let mut positions = Vec::new();
    for one in list {
        let maps = one.study.fit_range(0..one.study.count())?;
        let rows: Vec<Option<MapRow>> = maps
            .iter()
            .map(|map| match map {
                MapReport::Fitted(map) => Some(one.study.row(map)),
                MapReport::Failed { .. } => None,
            })
            .collect();
        members.push(Member {
            name: one.name.clone(),
            subject: one.subject.clone(),
            rv: rows.iter().map(|row| row.as_ref().map(|row| row.rv)).collect(),
            variance: rows.iter().map(|row| row.as_ref().and_then(|row| row.variance)).collect(),
            electrodes: one.study.placement.used().map(|electrode| electrode.label.to_string()).collect(),
            information: one.information,
        });
        positions.push(rows.iter().map(|row| row.as_ref().map(|row| row.canonical_mm)).collect::<Vec<_>>());
        fits.push(maps);
    }
    let summary = Summary::new(&members, questions)?.in_numbers();
    let mut notes = summary.notes;
    let mut decompositions = Vec::new();
    for ((one, maps), member) in list.iter().zip(fits).zip(summary.members) {
        let RankReport { rank, note } = one.study.rank(Some(&one.full_name()));
        notes.extend(note);
        let report = one.study.preamble();
        decompositions.push(DecompositionReport {
            name: member.name,
            subject: member.subject,
            information: member.information,
            inputs: report.inputs,
            settings: report.settings,
            head: report.head,
            electrodes: report.electrodes,
            maps,
            populations: report.populations,
            notes: report.notes,
            understood: report.understood,
            near_dipolar: NearDipolar {
                at: questions.at.clone(),
                share: member.share,
                count: member.count,
                weighted_share: member.weighted_share,
            },
            fitted: member.fitted,
            median_rv: member.median_rv,
            rank,
        });
    }
    let mut wanted: Vec<[usize; 2]> = match pairs {
        Some(pairs) => pairs.to_vec(),
        None => {
            let subject = |at: usize| list[at].subject.as_deref().filter(|subject| !subject.is_empty());
            let all = (0..list.len()).flat_map(|a| (a + 1..list.len()).map(move |b| [a, b]));
            all.filter(|[a, b]| subject(*a) == subject(*b)).collect()
        }
    };
    if pairs.is_none() && wanted.len() > MOST_PAIRS {
        let note = Finding::new(Code::PairsMany).with("found", wanted.len()).with("most", MOST_PAIRS);
        notes.push(Note::from(&note));
        wanted.clear();
    }
    let pair = |[a, b]: [usize; 2]| {
        let (first, second) = (&list[a], &list[b]);
        let found = first.study.matches(
            &second.study,
            [&positions[a], &positions[b]],
            [&first.full_name(), &second.full_name()],
        );
        let all = |study: &Study| (0..study.count()).collect();
        let mut pair = found.unwrap_or_else(|error| Pair {
            a,
            b,
            electrodes: 0,
            matches: Vec::new(),
            unmatched_a: all(&first.study),
            unmatched_b: all(&second.study),
            error: Some(ErrorReport::from(&error)),
        });
        pair.matches.iter_mut().for_each(|one| one.cells.clear());
        Pair { a, b, ..pair }
    };
    let program = list.first().map(|one| one.study.preamble().program);
    Ok(Comparison {
        format: "inward-comparison",
        version: 1,
        program: program.unwrap_or(crate::report::Program {
            name: "Inward",
            version: env!("CARGO_PKG_VERSION"),
            build: None,
        }),
        decompositions,
        pairs: wanted.into_iter().map(pair).collect(),
        groups: summary.groups,
        differences: summary.differences,
        notes,
    })
}

impl Study {
    /// Matches its maps with those of another study one to one, so that the sum of the absolute correlations over the
    /// electrodes that both use is largest. Maps that lack a value there or are the same everywhere have no partner.
    /// `positions` are those of the dipoles in canonical axes, `names` those of the decompositions.
    ///
    /// # Errors
    /// `electrodes-uncommon` with fewer than ten common electrodes, `maps-too-many` beyond 1,024 maps.
    pub fn matches(
        &self,
        other: &Self,
        positions: [&[Option<Vec3>]; 2],
        [name, other_name]: [&str; 2],
    ) -> Result<Pair, Error> {
        if let Some(found) = [self, other].into_iter().map(Self::count).find(|count| *count > MOST_MAPS) {
            let finding = Finding::new(Code::MapsTooMany).at(Place::input("maps"));
            return Err(finding.with("found", found).with("most", MOST_MAPS).into());
        }
        let mut rows = HashMap::new();
        for electrode in other.placement.used() {
            rows.insert(electrode.label.electrode(), electrode.row);
        }
        let common: Vec<(usize, usize)> = self
            .placement
            .used()
            .filter_map(|electrode| Some((electrode.row, *rows.get(&electrode.label.electrode())?)))
            .collect();
        if common.len() < FEWEST_ELECTRODES {
            let finding = Finding::new(Code::ElectrodesUncommon).at(Place::input("maps"));
            let finding = finding.with("a", name).with("b", other_name).with("found", common.len());
            return Err(finding.with("fewest", FEWEST_ELECTRODES).into());
        }
        let own = self.unit_maps(common.iter().map(|(row, _)| *row));
        let others = other.unit_maps(common.iter().map(|(_, row)| *row));
        let correlation = |a: &[f64], b: &[f64]| dot(a, b).clamp(-1.0, 1.0);
        let gains: Vec<f64> =
            own.iter().flat_map(|(_, a)| others.iter().map(move |(_, b)| correlation(a, b).abs())).collect();
        let partners = assignment(own.len(), others.len(), &gains);
        let position = |which: usize, index: usize| positions[which].get(index).copied().flatten();
        let name = |study: &Self, index: usize| study.tables.understood.maps.names[index].clone();
        let mut matches: Vec<Match> = Vec::with_capacity(own.len());
        for ((index_a, a), partner) in own.iter().zip(partners) {
            let Some((index_b, b)) = partner.and_then(|partner| others.get(partner)) else { continue };
            let found = Match {
                index_a: *index_a,
                index_b: *index_b,
                correlation: correlation(a, b),
                distance_mm: position(0, *index_a).zip(position(1, *index_b)).map(|(a, b)| (a - b).norm()),
                cells: Vec::new(),
            };
            let place = matches.partition_point(|one| one.correlation.abs() >= found.correlation.abs());
            matches.insert(place, found.told(&name(self, *index_a), &name(other, *index_b)));
        }
        let left = |study: &Self, taken: &dyn Fn(&Match) -> usize| {
            let mut free = vec![true; study.count()];
            matches.iter().for_each(|one| free[taken(one)] = false);
            (0..free.len()).filter(|index| free[*index]).collect()
        };
        let (unmatched_a, unmatched_b) = (left(self, &|one| one.index_a), left(other, &|one| one.index_b));
        Ok(Pair { a: 0, b: 1, electrodes: common.len(), matches, unmatched_a, unmatched_b, error: None })
    }

    /// The maps at some rows of their table, centred and of unit length, with their numbers; without those that have none.
    fn unit_maps(&self, rows: impl Iterator<Item = usize> + Clone) -> Vec<(usize, Vec<f64>)> {
        let map = |index: usize| {
            let column = self.tables.understood.maps.values.column(index);
            let values: Vec<f64> = rows.clone().map(|row| column[row]).collect();
            if values.iter().any(|value| value.is_nan()) {
                return None;
            }
            let (map, _) = super::normalise(&values)?;
            let scale = self.sign(index) / dot(&map, &map).sqrt();
            Some((index, map.into_iter().map(|value| scale * value).collect()))
        };
        (0..self.count()).filter_map(map).collect()
    }

    /// The numerical rank of a decomposition's maps at the used electrodes, as given: how many are needed until no other,
    /// scaled to unit length, has more than 10⁻⁵ that is not combined from them.
    pub fn rank(&self, name: Option<&str>) -> RankReport {
        let understood = &self.tables.understood;
        let maps: Option<Vec<Vec<f64>>> = (understood.columns_are == ColumnsAre::Components
            && self.count() <= MOST_MAPS)
            .then(|| (0..self.count()).map(|index| self.values(index).ok()).collect())
            .flatten();
        let Some(maps) = maps else { return RankReport { rank: None, note: None } };
        let (count, electrodes) = (maps.len(), self.fitter.field().count());
        // A centred map is the map itself if it was average-referenced.
        let largest = |map: &[f64]| map.iter().fold(0.0f64, |most, value| most.max(value.abs()));
        let referenced = maps.iter().all(|map| {
            let centred = average_referenced(map);
            map.iter().zip(&centred).all(|(a, b)| (a - b).abs() <= RANK_TOLERANCE * largest(map))
        });
        let rank = rank(maps, RANK_TOLERANCE);
        let note = (rank < count).then(|| {
            let cause = match (referenced, rank + 1 == electrodes) {
                (true, true) => "reference",
                (true, false) => "reference-and-more",
                (false, _) if rank == electrodes => "electrodes",
                (false, _) => "other",
            };
            let mut finding = Finding::new(Code::RankDeficient).with("maps", count).with("rank", rank);
            if let Some(name) = name {
                finding = finding.with("name", name);
            }
            Note::from(&finding.with("electrodes", electrodes).with("cause", cause))
        });
        RankReport { rank: Some(rank), note }
    }
}
