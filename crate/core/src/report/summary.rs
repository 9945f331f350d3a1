//! Several decompositions side by side, from numbers alone.

use super::Note;
use super::Settings;
use super::number::{given, percent, tenths};
use crate::assess::Sample;
use crate::electrode::Label;
use crate::finding::{Code, Error, Finding};
use crate::math::{Resampler, mean, sort_by_number};
use serde::{Deserialize, Serialize};

/// Fewest subjects that an interval is computed from.
pub(super) const FEWEST_SUBJECTS: usize = 5;

/// A decomposition in numbers.
#[derive(Clone, Debug, Default, PartialEq, Deserialize)]
#[serde(default)]
pub struct Member {
    /// Its name; decompositions of several subjects that bear one name are a group.
    pub name: String,
    /// Whose it is.
    pub subject: Option<String>,
    /// Residual variances; absent or not a number for a map that could not be fitted.
    pub rv: Vec<Option<f64>>,
    /// Variance of each component, where it is known.
    pub variance: Vec<Option<f64>>,
    /// Labels of the electrodes used.
    pub electrodes: Vec<String>,
    /// A reduction of mutual information that the user has.
    pub information: Option<f64>,
}

impl Member {
    fn full_name(&self) -> String {
        full_name(&self.name, self.subject.as_deref())
    }
}

/// What is asked about decompositions side by side.
#[derive(Clone, Debug, PartialEq, Deserialize)]
#[serde(default)]
pub struct Questions {
    /// Thresholds of residual variance.
    pub at: Vec<f64>,
    /// Seed of the draws.
    pub seed: u32,
    /// Number of draws.
    pub draws: usize,
}

impl Default for Questions {
    fn default() -> Self {
        Self { at: vec![0.05, 0.10, 0.15], seed: 1, draws: 4000 }
    }
}

/// Decompositions side by side.
#[derive(Clone, Debug, PartialEq, Serialize)]
pub struct Summary {
    /// The thresholds in percent, as text.
    pub labels: Vec<String>,
    /// In the order in which they were given.
    pub members: Vec<MemberSummary>,
    /// Decompositions of several subjects under one name.
    pub groups: Vec<GroupSummary>,
    /// Each group beside each later one.
    pub differences: Vec<Difference>,
    /// What is to be said of them.
    pub notes: Vec<Note>,
}

/// A decomposition beside others.
#[derive(Clone, Debug, PartialEq, Serialize)]
pub struct MemberSummary {
    /// Its name.
    pub name: String,
    /// Whose it is.
    pub subject: Option<String>,
    /// As given.
    pub information: Option<f64>,
    /// Number of fitted maps.
    pub fitted: usize,
    /// Part of them with a residual variance of at most each threshold; absent if none is fitted.
    pub share: Vec<Option<f64>>,
    /// How many these are.
    pub count: Vec<usize>,
    /// Their part of the components' variance; absent unless every one is known.
    pub weighted_share: Option<Vec<Option<f64>>>,
    /// Median residual variance.
    pub median_rv: Option<f64>,
    /// In words: fitted; count and share at each threshold; weighted share at each; median.
    pub cells: Vec<String>,
}

/// Decompositions of several subjects under one name. Subjects count alike; several of one subject are averaged first.
#[derive(Clone, Debug, PartialEq, Serialize)]
pub struct GroupSummary {
    /// Their name.
    pub name: String,
    /// Their places among the members.
    pub members: Vec<usize>,
    /// Number of subjects with a fitted map.
    pub subjects: usize,
    /// Mean of `information`, if all have it.
    pub information: Option<f64>,
    /// Mean share at each threshold.
    pub share: Vec<Option<f64>>,
    /// Lower end of its interval.
    pub low: Vec<Option<f64>>,
    /// Upper end.
    pub high: Vec<Option<f64>>,
    /// The mean share as a function of residual variance.
    pub curve: Curve,
    /// Mean of the subjects' medians.
    pub median_rv: Option<f64>,
    /// In words: subjects; share and interval at each threshold; median.
    #[serde(skip_serializing_if = "Vec::is_empty")]
    pub cells: Vec<String>,
}

/// A near-dipolar share as a function of residual variance.
#[derive(Clone, Debug, PartialEq, Serialize)]
pub struct Curve {
    /// Residual variances.
    pub rv: Vec<f64>,
    /// Mean share at each.
    pub share: Vec<f64>,
    /// Lower ends of its intervals, each for itself.
    pub low: Option<Vec<f64>>,
    /// Upper ends.
    pub high: Option<Vec<f64>>,
}

/// Two groups beside each other, over the subjects that both have.
#[derive(Clone, Debug, PartialEq, Serialize)]
pub struct Difference {
    /// Place among the groups.
    pub a: usize,
    /// Place among the groups.
    pub b: usize,
    /// Number of common subjects.
    pub subjects: usize,
    /// Mean share of `a` less that of `b` at each threshold.
    pub difference: Vec<f64>,
    /// Lower end of its interval.
    pub low: Vec<Option<f64>>,
    /// Upper end.
    pub high: Vec<Option<f64>>,
    /// In words, in percentage points: subjects; difference and interval at each threshold.
    #[serde(skip_serializing_if = "Vec::is_empty")]
    pub cells: Vec<String>,
}

impl Questions {
    /// Checks their ranges.
    ///
    /// # Errors
    /// `settings-unknown`.
    pub fn check(&self) -> Result<(), Error> {
        if self.at.is_empty() || self.at.iter().any(|at| !(*at > 0.0 && *at <= 1.0)) {
            return Err(Settings::unknown("`at` lists residual variances over 0 and at most 1"));
        }
        match self.draws {
            2_000..=100_000 => Ok(()),
            _ => Err(Settings::unknown("`draws` is a whole number from 2,000 to 100,000")),
        }
    }
}

/// Subjects of a group with the places of their members that have fitted maps.
type Subjects<'a> = Vec<(&'a str, Vec<usize>)>;

impl Summary {
    /// Puts decompositions side by side.
    ///
    /// # Errors
    /// Those of [`Questions::check`].
    pub fn new(members: &[Member], questions: &Questions) -> Result<Self, Error> {
        questions.check()?;
        let at = &questions.at;
        let sample = |member: &Member| {
            let rv = member.rv.iter().enumerate();
            Sample::new(rv.map(|(k, rv)| (rv.unwrap_or(f64::NAN), member.variance.get(k).copied().flatten())))
        };
        let samples: Vec<Sample> = members.iter().map(sample).collect();
        let subjects = grouped(members, &samples);
        let resampler =
            |count: usize| (count >= FEWEST_SUBJECTS).then(|| Resampler::new(count, questions.draws, questions.seed));
        let groups: Vec<GroupSummary> = subjects
            .iter()
            .map(|group| group.summary(members, &samples, at, resampler(group.subjects.len())))
            .collect();
        let mut differences = Vec::new();
        for (a, first) in subjects.iter().enumerate() {
            for (b, second) in subjects.iter().enumerate().skip(a + 1) {
                let common: Vec<(&Vec<usize>, &Vec<usize>)> = first
                    .subjects
                    .iter()
                    .filter_map(|(name, x)| second.subjects.iter().find(|(n, _)| n == name).map(|(_, y)| (x, y)))
                    .collect();
                if common.is_empty() {
                    continue;
                }
                let resampler = resampler(common.len());
                let values = |at: f64| -> Vec<f64> {
                    common.iter().map(|(x, y)| of_subject(&samples, x, at) - of_subject(&samples, y, at)).collect()
                };
                let (mut difference, mut low, mut high) = (Vec::new(), Vec::new(), Vec::new());
                let mut cells = vec![common.len().to_string()];
                for &at in at {
                    let values = values(at);
                    let interval = resampler.as_ref().map(|resampler| resampler.interval(&values));
                    difference.push(mean(&values));
                    cells.extend([signed(mean(&values)), interval.map_or_else(String::new, |i| between(i, signed))]);
                    low.push(interval.map(|[low, _]| low));
                    high.push(interval.map(|[_, high]| high));
                }
                differences.push(Difference { a, b, subjects: common.len(), difference, low, high, cells });
            }
        }
        let notes = notes(members, &samples, &groups, questions).iter().map(Note::from).collect();
        Ok(Self {
            labels: at.iter().map(|at| given(100.0 * at)).collect(),
            members: members.iter().zip(&samples).map(|(member, sample)| one(member, sample, at)).collect(),
            groups,
            differences,
            notes,
        })
    }

    /// The same without words.
    pub fn in_numbers(mut self) -> Self {
        self.groups.iter_mut().for_each(|group| group.cells.clear());
        self.differences.iter_mut().for_each(|difference| difference.cells.clear());
        self
    }
}

fn one(member: &Member, sample: &Sample, at: &[f64]) -> MemberSummary {
    let count: Vec<usize> = at.iter().map(|at| sample.count(*at)).collect();
    let share: Vec<Option<f64>> = at.iter().map(|at| sample.share(*at)).collect();
    let weighted: Vec<Option<f64>> = at.iter().map(|at| sample.weighted(*at)).collect();
    let median_rv = sample.median();
    let text = |share: &Option<f64>| share.map_or_else(String::new, percent);
    let mut cells = vec![sample.fitted().to_string()];
    cells.extend(count.iter().zip(&share).flat_map(|(count, share)| [count.to_string(), text(share)]));
    cells.extend(weighted.iter().map(text));
    cells.push(text(&median_rv));
    MemberSummary {
        name: member.name.clone(),
        subject: member.subject.clone(),
        information: member.information,
        fitted: sample.fitted(),
        share,
        count,
        weighted_share: weighted.iter().all(Option::is_some).then_some(weighted),
        median_rv,
        cells,
    }
}

/// A group that is being put together.
struct Group<'a> {
    name: &'a str,
    members: Vec<usize>,
    subjects: Subjects<'a>,
}

/// Names that several subjects bear, in the order in which they first stand.
fn grouped<'a>(members: &'a [Member], samples: &[Sample]) -> Vec<Group<'a>> {
    let mut groups: Vec<Group> = Vec::new();
    for (index, member) in members.iter().enumerate() {
        let Some(subject) = member.subject.as_deref().filter(|subject| !subject.is_empty()) else { continue };
        let at = groups.iter().position(|group| group.name == member.name).unwrap_or_else(|| {
            groups.push(Group { name: &member.name, members: Vec::new(), subjects: Vec::new() });
            groups.len() - 1
        });
        let Some(group) = groups.get_mut(at) else { continue };
        group.members.push(index);
        if samples.get(index).is_none_or(|sample| sample.fitted() == 0) {
            continue;
        }
        match group.subjects.iter_mut().find(|(name, _)| *name == subject) {
            Some((_, of_subject)) => of_subject.push(index),
            None => group.subjects.push((subject, vec![index])),
        }
    }
    groups.retain(|group| group.subjects.len() > 1);
    groups
}

/// The mean share of one subject's decompositions.
fn of_subject(samples: &[Sample], members: &[usize], at: f64) -> f64 {
    mean(&members.iter().filter_map(|index| samples.get(*index)?.share(at)).collect::<Vec<_>>())
}

impl Group<'_> {
    fn summary(
        &self,
        members: &[Member],
        samples: &[Sample],
        at: &[f64],
        resampler: Option<Resampler>,
    ) -> GroupSummary {
        let shares = |at: f64| -> Vec<f64> {
            self.subjects.iter().map(|(_, members)| of_subject(samples, members, at)).collect()
        };
        let band = |at: f64| resampler.as_ref().map(|resampler| resampler.interval(&shares(at)));
        let bands: Vec<Option<[f64; 2]>> = at.iter().map(|at| band(*at)).collect();
        let rv = curve(at);
        let along: Option<Vec<[f64; 2]>> = rv.iter().map(|at| band(*at)).collect();
        let ends = |end: usize| along.as_ref().map(|along| along.iter().map(|band| band[end]).collect());
        let subject_means = |of: &dyn Fn(usize) -> Option<f64>| -> Option<f64> {
            let each = self.subjects.iter().map(|(_, members)| {
                members.iter().map(|index| of(*index)).collect::<Option<Vec<f64>>>().map(|values| mean(&values))
            });
            each.collect::<Option<Vec<f64>>>().map(|values| mean(&values))
        };
        let median_rv = subject_means(&|index| samples.get(index)?.median());
        let share: Vec<f64> = at.iter().map(|at| mean(&shares(*at))).collect();
        let mut cells = vec![self.subjects.len().to_string()];
        cells.extend(
            share.iter().zip(&bands).flat_map(|(share, band)| {
                [percent(*share), band.map_or_else(String::new, |band| between(band, percent))]
            }),
        );
        cells.push(median_rv.map_or_else(String::new, percent));
        GroupSummary {
            name: self.name.into(),
            members: self.members.clone(),
            subjects: self.subjects.len(),
            information: subject_means(&|index| members.get(index)?.information),
            share: share.into_iter().map(Some).collect(),
            low: bands.iter().map(|band| band.map(|[low, _]| low)).collect(),
            high: bands.iter().map(|band| band.map(|[_, high]| high)).collect(),
            curve: Curve { share: rv.iter().map(|at| mean(&shares(*at))).collect(), low: ends(0), high: ends(1), rv },
            median_rv,
            cells,
        }
    }
}

/// Residual variances at which a group's curve is told: twenty to each power of ten from 0.1 to 10 %, 1.25 % apart from
/// there, and the thresholds, so that curve and table agree at them.
fn curve(at: &[f64]) -> Vec<f64> {
    let low = (0..40).map(|k| libm::exp10(f64::from(k) / 20.0 - 3.0));
    let mut rv: Vec<f64> = low.chain((8..=80).map(|k| f64::from(k) / 80.0)).chain(at.iter().copied()).collect();
    sort_by_number(&mut rv, |rv| *rv);
    rv.dedup();
    rv
}

fn notes(members: &[Member], samples: &[Sample], groups: &[GroupSummary], questions: &Questions) -> Vec<Finding> {
    let mut notes = Vec::new();
    notes.extend(electrode_sets(members));
    let few = |group: &&GroupSummary| group.subjects < FEWEST_SUBJECTS;
    let banded: Vec<usize> =
        groups.iter().filter(|group| !few(group)).flat_map(|group| group.members.clone()).collect();
    if (0..members.len()).any(|index| !banded.contains(&index)) {
        notes.push(Finding::new(Code::ComponentsNoSample));
    }
    for group in groups.iter().filter(few) {
        let note = Finding::new(Code::SubjectsFew).with("name", group.name.as_str());
        notes.push(note.with("subjects", group.subjects));
    }
    if !banded.is_empty() {
        let note = Finding::new(Code::SubjectsResampled).with("draws", questions.draws);
        notes.push(note.with("seed", questions.seed as usize));
    }
    let partly = |(member, sample): &(&Member, &Sample)| {
        sample.fitted() > 0 && sample.weighted(1.0).is_none() && member.variance.iter().flatten().next().is_some()
    };
    let names: Vec<String> = members.iter().zip(samples).filter(partly).map(|(member, _)| member.full_name()).collect();
    if !names.is_empty() {
        notes.push(Finding::new(Code::VarianceIncomplete).with("names", names));
    }
    notes
}

/// The warning that electrodes differ: how many each set has, and the labels that are not in all.
fn electrode_sets(members: &[Member]) -> Option<Finding> {
    let mut sets: Vec<(Vec<String>, &Member, usize)> = Vec::new();
    for member in members.iter().filter(|member| !member.electrodes.is_empty()) {
        // Reading labels takes its time, and most decompositions write them alike.
        if let Some((.., count)) = sets.iter_mut().find(|(_, known, _)| known.electrodes == member.electrodes) {
            *count += 1;
            continue;
        }
        let keys: Vec<String> = member.electrodes.iter().map(|label| Label::new(label).electrode()).collect();
        let same = |known: &[String]| known.len() == keys.len() && keys.iter().all(|key| known.contains(key));
        match sets.iter_mut().find(|(known, ..)| same(known)) {
            Some((.., count)) => *count += 1,
            None => sets.push((keys, member, 1)),
        }
    }
    if sets.len() < 2 {
        return None;
    }
    let everywhere = |key: &String| sets.iter().all(|(keys, ..)| keys.contains(key));
    let mut labels: Vec<String> = Vec::new();
    for label in sets.iter().flat_map(|(_, member, _)| &member.electrodes) {
        if !everywhere(&Label::new(label).electrode())
            && !labels.iter().any(|known| Label::new(known).electrode() == Label::new(label).electrode())
        {
            labels.push(label.clone());
        }
    }
    let told = |(keys, member, count): &(Vec<String>, &Member, usize)| match count {
        1 => format!("{} in “{}”", keys.len(), member.full_name()),
        _ => format!("{} in “{}” and {} more", keys.len(), member.full_name(), count - 1),
    };
    let sets = sets.iter().map(told).collect::<Vec<_>>();
    Some(Finding::new(Code::ElectrodeSetsDiffer).with("sets", sets).with("labels", labels))
}

/// Name and subject.
pub(crate) fn full_name(name: &str, subject: Option<&str>) -> String {
    match subject {
        Some(subject) if !subject.is_empty() => format!("{name}, {subject}"),
        _ => name.to_owned(),
    }
}

/// Percentage points, with a sign.
fn signed(difference: f64) -> String {
    let text = tenths(100.0 * difference);
    if difference > 0.0 && text != "0.0" { format!("+{text}") } else { text }
}

/// An interval in words; without any width it would look like certainty.
fn between([low, high]: [f64; 2], text: fn(f64) -> String) -> String {
    if high - low < 1e-12 { "all subjects alike".into() } else { format!("{} to {}", text(low), text(high)) }
}
