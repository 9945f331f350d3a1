use super::grid::Grid;
use super::{ColumnsAre, Found, MapsAre, TimeUnit, Wishes};
use crate::finding::{Choice, Code, Error, Finding, Origin};
use crate::map::Maps;
use crate::read::number_with_comma;
use serde::Serialize;

/// When maps were.
#[derive(Clone, Debug, PartialEq, Serialize)]
pub struct Moments {
    /// One for each map.
    pub times: Vec<f64>,
    /// Their unit.
    pub unit: &'static str,
    /// Whether the maps have them as their names.
    #[serde(skip)]
    pub are_names: bool,
}

/// How maps belong together: as wished, else by their names. Times come from the settings, from a list of as many
/// numbers, or from the names. The mean of the baseline is subtracted.
///
/// # Errors
/// `baseline-empty`.
pub(super) fn sequence(
    maps: &mut Maps,
    grid: &Grid<'_>,
    times: Option<&Grid<'_>>,
    wishes: &Wishes,
    found: &mut Found,
) -> Result<(ColumnsAre, Option<Moments>), Error> {
    let listed = times.and_then(|times| listed(times, maps.names.len()));
    let named = named_times(&maps.names);
    let ((are, from), by) = match wishes.columns_are {
        Some(are) => ((are, Origin::Setting), ""),
        None if wishes.times.is_some() => ((ColumnsAre::TimePoints, Origin::Found), "their times"),
        None if wishes.maps_are == Some(MapsAre::Unmixing) => {
            ((ColumnsAre::Components, Origin::Found), "what the table holds")
        }
        None if named.is_some() => ((ColumnsAre::TimePoints, Origin::Found), "their names"),
        None if listed.is_some() => ((ColumnsAre::TimePoints, Origin::Found), "a list of times"),
        None => (by_names(&maps.names), "their names"),
    };
    let file = found.file_name(grid);
    let choice = Choice::new("columnsAre", from, are.name()).about(&file).with("by", by);
    found.choices.push(choice.options(ColumnsAre::ALL.map(ColumnsAre::name)));
    if are != ColumnsAre::TimePoints {
        return Ok((are, None));
    }
    let moments = match wishes.times {
        Some(given) => {
            let times = (0..maps.names.len()).map(|index| given.start + index as f64 * given.step).collect();
            Some(Moments { times, unit: given.unit.symbol(), are_names: false })
        }
        None => named.or(listed),
    };
    if let (Some(window), Some(moments)) = (wishes.baseline, &moments) {
        let inside: Vec<usize> = moments
            .times
            .iter()
            .enumerate()
            .filter(|(_, time)| (window.from..=window.to).contains(*time))
            .map(|(index, _)| index)
            .collect();
        let place = found.place("maps", grid);
        let said = |code| {
            let finding = Finding::new(code).at(place.clone()).with("from", window.from).with("to", window.to);
            finding.with("unit", moments.unit).with("maps", inside.len())
        };
        if inside.is_empty() {
            return Err(said(Code::BaselineEmpty).into());
        }
        found.notes.push(said(Code::BaselineSubtracted));
        for mut row in maps.values.rows_mut() {
            let mean = inside.iter().filter_map(|&index| row.get(index)).sum::<f64>() / inside.len() as f64;
            row.iter_mut().for_each(|value| *value -= mean);
        }
    }
    Ok((are, moments))
}

/// A list of as many rising numbers as there are maps.
fn listed(grid: &Grid<'_>, count: usize) -> Option<Moments> {
    let along = if grid.width() == 1 { (grid.height(), true) } else { (grid.width(), false) };
    let times: Vec<f64> =
        (0..along.0).filter_map(|index| if along.1 { grid.number(index, 0) } else { grid.number(0, index) }).collect();
    (times.len() == count && rises(&times)).then(|| Moments { unit: unit_of(&times), times, are_names: false })
}

/// Times that the names of three or more maps are, as `-100`, `0.004` or `12 ms`; numbers that only count are none.
fn named_times(names: &[String]) -> Option<Moments> {
    let mut common: Option<String> = None;
    let times: Vec<f64> = names
        .iter()
        .map(|name| {
            let name = name.trim().trim_start_matches(['t', 'T']).trim_start_matches(['=', '_', ' ']);
            let end = name.find(|c: char| !(c.is_ascii_digit() || "+-.,eE".contains(c))).unwrap_or(name.len());
            let (number, unit) = name.split_at_checked(end)?;
            let unit = unit.trim().to_ascii_lowercase();
            let same = *common.get_or_insert_with(|| unit.clone()) == unit;
            number_with_comma(number.trim()).filter(|time| same && time.is_finite())
        })
        .collect::<Option<_>>()?;
    let unit = match common.as_deref() {
        Some("ms" | "msec") => Some("ms"),
        Some("s" | "sec") => Some("s"),
        Some("") => None,
        _ => return None,
    };
    let counted = times.iter().enumerate().all(|(index, time)| *time == index as f64 + times.first().unwrap_or(&0.0))
        && times.first().is_some_and(|first| *first == 0.0 || *first == 1.0);
    let enough = times.len() > 2 || unit.is_some();
    (enough && rises(&times) && (unit.is_some() || !counted)).then(|| Moments {
        unit: unit.unwrap_or_else(|| unit_of(&times)),
        times,
        are_names: true,
    })
}

fn rises(times: &[f64]) -> bool {
    !times.is_empty() && times.windows(2).all(|pair| pair.first() < pair.last())
}

/// Whole numbers, or such beyond ten, are milliseconds: no response lasts ten seconds.
fn unit_of(times: &[f64]) -> &'static str {
    let largest = times.iter().fold(0.0, |most: f64, time| most.max(time.abs()));
    let whole = times.iter().all(|time| time.fract() == 0.0);
    let unit = if largest > 10.0 || whole { TimeUnit::Milliseconds } else { TimeUnit::Seconds };
    unit.symbol()
}

/// What most names say.
fn by_names(names: &[String]) -> (ColumnsAre, Origin) {
    const COMPONENTS: [&str; 9] = ["ic", "pc", "ica", "pca", "comp", "component", "factor", "mode", "source"];
    const REPEATS: [&str; 11] =
        ["repeat", "rep", "resample", "boot", "bootstrap", "half", "split", "spike", "trial", "fold", "run"];
    let most = |words: &[&str]| {
        let says = |name: &&String| {
            let name = name.to_ascii_lowercase();
            let numbered = name.trim_end_matches(|c: char| c.is_ascii_digit());
            let stem = numbered.trim_end_matches([' ', '_', '-', '.', '#']);
            numbered.len() < name.len() && words.contains(&stem)
        };
        2 * names.iter().filter(says).count() > names.len()
    };
    match () {
        () if most(&COMPONENTS) => (ColumnsAre::Components, Origin::Found),
        () if most(&REPEATS) => (ColumnsAre::Repeats, Origin::Found),
        () => (ColumnsAre::Unrelated, Origin::Assumed),
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    fn guess(names: &[&str]) -> (ColumnsAre, Option<Moments>) {
        let names: Vec<String> = names.iter().map(|name| (*name).to_owned()).collect();
        (by_names(&names).0, named_times(&names))
    }

    #[test]
    fn names_tell_what_columns_are() {
        assert_eq!(guess(&["IC1", "IC2", "IC 3"]), (ColumnsAre::Components, None));
        assert_eq!(guess(&["half_1", "half_2"]), (ColumnsAre::Repeats, None));
        assert_eq!(guess(&["left ear", "both ears"]), (ColumnsAre::Unrelated, None));
        assert_eq!(guess(&["1", "2", "3"]), (ColumnsAre::Unrelated, None));
        let times = |names: &[&str]| guess(names).1.map(|moments| (moments.times, moments.unit));
        assert_eq!(times(&["-100", "0", "100"]), Some((vec![-100.0, 0.0, 100.0], "ms")));
        assert_eq!(times(&["-0.1", "0", "0.1"]), Some((vec![-0.1, 0.0, 0.1], "s")));
        assert_eq!(times(&["0 ms", "4 ms"]), Some((vec![0.0, 4.0], "ms")));
        assert_eq!(times(&["4", "2", "9"]), None);
        assert_eq!(times(&["4 uV", "5 uV", "7 uV"]), None);
    }
}
