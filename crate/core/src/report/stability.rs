//! What carries a fit, and what would move it: in numbers, and in words.

use super::EquivalentDipole;
use super::number::{millimetres, percent, tenths};
use crate::math::sort_by_number;
use serde::Serialize;

/// The fit without one electrode.
#[derive(Clone, Debug, PartialEq, Serialize)]
pub struct InfluenceReport {
    /// The electrode.
    pub label: String,
    /// How far the equivalent position moves; absent where the map is the same at all others, so that none is left to fit.
    pub shift_mm: Option<f64>,
    /// Residual variance at the others; absent likewise.
    pub rv_without: Option<f64>,
}

/// An electrode that holds strikingly much of what fits leave over.
#[derive(Clone, Debug, PartialEq, Serialize)]
pub struct SuspectReport {
    /// The electrode.
    pub label: String,
    /// Its mean share, over the maps, of the power of what is left over less the mean of the neighbours.
    pub share: f64,
    /// The share that each electrode would have if all were alike.
    pub even_share: f64,
    /// Number of maps in which it holds the largest share.
    pub largest_of: usize,
    /// Number of maps.
    pub maps: usize,
    /// Near-dipolar counts.
    pub near_dipolar: [WithAndWithout; 3],
}

/// How many maps are near-dipolar.
#[derive(Clone, Copy, Debug, PartialEq, Serialize)]
pub struct WithAndWithout {
    /// Up to this residual variance.
    pub at: f64,
    /// With the electrode.
    pub with: usize,
    /// Without it.
    pub without: usize,
}

/// What may be otherwise.
#[derive(Clone, Copy, Debug, PartialEq, Serialize)]
pub enum Change {
    /// Ratio of the conductivities of brain and skull.
    Skull(f64),
    /// Root-mean-square distance of electrodes from where they were measured, in mm.
    Electrodes(f64),
    /// The sphere fitted to the upper electrodes only.
    UpperSphere,
    /// The centre off by its standard error, the way that matters most.
    Centre,
    /// Times the radius.
    Radius(f64),
    /// Brain in place of cerebrospinal fluid.
    WithoutFluid,
}

/// The fit when something is otherwise.
#[derive(Clone, Debug, PartialEq, Serialize)]
pub struct WhatIfReport {
    /// Fixed name.
    pub change: String,
    /// How far the equivalent position moves: with electrodes misplaced, root mean square; absent where the change does not
    /// apply.
    pub shift_mm: Option<f64>,
    /// Depth under the inner skull of that head less that under the model's, positive when deeper; with electrodes misplaced,
    /// root mean square.
    pub depth_mm: Option<f64>,
    /// Residual variance; with electrodes misplaced, the mean.
    pub rv: Option<f64>,
}

/// Influence in words.
#[derive(Clone, Debug, PartialEq, Serialize)]
pub struct Influence {
    /// In a sentence.
    pub sentence: String,
    /// Electrodes, the one that moves the fit farthest first.
    pub electrodes: Vec<InfluenceWords>,
    /// What is to be said beside it.
    pub notes: Vec<&'static str>,
}

/// An electrode's influence in words.
#[derive(Clone, Debug, PartialEq, Serialize)]
pub struct InfluenceWords {
    /// The electrode.
    pub label: String,
    /// Shift in mm; empty where nothing is left to fit.
    pub shift: String,
    /// Residual variance without it, in percent; empty likewise.
    pub rv: String,
    /// For drawings: where nothing is left to fit, as much as of any other.
    pub shift_mm: f64,
    /// Whether the fit hangs on it.
    pub carries: bool,
}

/// An electrode carries a fit if the position moves at least so far without it: half the published error of sphere models,
/// common practice, no source.
const CARRIES_MM: f64 = 5.0;

/// Names in a sentence.
const NAMED: usize = 4;

impl Influence {
    /// In words; `rv` is that of the fit.
    pub fn new(found: &[InfluenceReport], rv: f64) -> Self {
        let mut order: Vec<&InfluenceReport> = found.iter().collect();
        // What leaves no map moves the fit farther than anything.
        let far = |one: &InfluenceReport| one.shift_mm.unwrap_or(f64::INFINITY);
        sort_by_number(&mut order, |one| -far(one));
        let carries = |one: &InfluenceReport| far(one) >= CARRIES_MM;
        let count = order.iter().filter(|one| carries(one)).count();
        let named: Vec<String> = order
            .iter()
            .take(count.min(NAMED))
            .map(|one| format!("{} ({} mm)", one.label, millimetres(far(one))))
            .collect();
        let farthest = found.iter().filter_map(|one| one.shift_mm).fold(0.0, f64::max);
        let alone = order.first().filter(|one| one.shift_mm.is_none());
        let moves = match (alone, count) {
            (Some(alone), _) => format!(
                "This map is one of {} alone: at all other electrodes it is the same, and without it nothing is left to fit.",
                alone.label
            ),
            (_, 0) => format!(
                "No single electrode carries this fit: without any of them the position moves by at most {} mm.",
                tenths(farthest)
            ),
            (_, n) if n > NAMED => format!(
                "The fit hangs on single electrodes: {n} move it by at least {} mm when left out, most of all {}.",
                millimetres(CARRIES_MM),
                named.join(", ")
            ),
            _ => format!(
                "The fit hangs on single electrodes: left out, these move it by at least {} mm: {}.",
                millimetres(CARRIES_MM),
                named.join(", ")
            ),
        };
        let left = found.iter().filter_map(|one| Some((&one.label, one.rv_without?)));
        let best = left.reduce(|a, b| if b.1 < a.1 { b } else { a });
        let left = match best.filter(|(_, without)| alone.is_none() && *without <= 0.5 * rv && rv > 1e-6) {
            Some((label, without)) => format!(
                " Most of what is left over is at {label}: without it {} % instead of {} %.",
                percent(without),
                percent(rv)
            ),
            None => String::new(),
        };
        let words = |one: &&InfluenceReport| InfluenceWords {
            label: one.label.clone(),
            shift: one.shift_mm.map_or_else(String::new, tenths),
            rv: one.rv_without.map_or_else(String::new, percent),
            shift_mm: one.shift_mm.unwrap_or(farthest.max(CARRIES_MM)),
            carries: carries(one),
        };
        Self {
            sentence: format!("{moves}{left}"),
            electrodes: order.iter().map(words).collect(),
            notes: vec![
                "An electrode that carries a fit is not wrong for that: near a shallow source few electrodes tell where it lies.",
            ],
        }
    }
}

/// Suspects in words.
#[derive(Clone, Debug, PartialEq, Serialize)]
pub struct Suspects {
    /// In a sentence.
    pub sentence: String,
    /// Electrodes to be checked.
    pub electrodes: Vec<SuspectWords>,
    /// The same in numbers, as reports have them.
    pub found: Vec<SuspectReport>,
}

/// A suspect in words.
#[derive(Clone, Debug, PartialEq, Serialize)]
pub struct SuspectWords {
    /// The electrode.
    pub label: String,
    /// Share in percent.
    pub share: String,
    /// Number of maps in which it holds most.
    pub count: usize,
    /// In a sentence.
    pub sentence: String,
}

impl Suspects {
    /// In words.
    pub fn new(found: Vec<SuspectReport>) -> Self {
        let words = |one: &SuspectReport| {
            let counts = one
                .near_dipolar
                .map(|n| format!("{} instead of {} up to {} %", n.without, n.with, millimetres(100.0 * n.at)));
            SuspectWords {
                label: one.label.clone(),
                share: percent(one.share),
                count: one.largest_of,
                sentence: format!(
                    "Check {}: it holds {} % of what is left over and not shared with its neighbours (an even share is {} %), and the largest part of it in {} of {} maps. Without it, near-dipolar maps: {}.",
                    one.label,
                    percent(one.share),
                    percent(one.even_share),
                    one.largest_of,
                    one.maps,
                    counts.join(", ")
                ),
            }
        };
        let labels: Vec<&str> = found.iter().map(|one| one.label.as_str()).collect();
        Self {
            sentence: match labels.is_empty() {
                true => "No electrode holds strikingly much of what is left over.".into(),
                false => format!(
                    "Check {}: {}.",
                    if labels.len() == 1 { "this electrode" } else { "these electrodes" },
                    labels.join(", ")
                ),
            },
            electrodes: found.iter().map(words).collect(),
            found,
        }
    }
}

/// What if, in words.
#[derive(Clone, Debug, PartialEq, Serialize)]
pub struct WhatIf {
    /// In a sentence.
    pub sentence: String,
    /// One for each change.
    pub rows: Vec<WhatIfWords>,
    /// What is to be said beside it.
    pub notes: Vec<&'static str>,
}

/// A change in words.
#[derive(Clone, Debug, PartialEq, Serialize)]
pub struct WhatIfWords {
    /// Fixed name.
    pub change: String,
    /// Name for people.
    pub label: String,
    /// Shift in mm.
    pub shift: String,
    /// Change of depth in mm, with its sign.
    pub depth: String,
    /// Residual variance in percent.
    pub rv: String,
    /// For drawings.
    pub shift_mm: f64,
    /// For drawings, from and to.
    pub depth_mm: [f64; 2],
    /// Residual variance less that of the fit.
    pub rv_change: f64,
    /// Why it does not apply.
    pub none: Option<&'static str>,
}

impl Change {
    /// As reports write it.
    pub fn code(self) -> String {
        match self {
            Self::Skull(ratio) => format!("skull-{ratio}"),
            Self::Electrodes(mm) => format!("electrodes-{mm}-mm"),
            Self::UpperSphere => "sphere-upper-electrodes".into(),
            Self::Centre => "sphere-centre".into(),
            Self::Radius(times) => if times > 1.0 { "sphere-larger" } else { "sphere-smaller" }.into(),
            Self::WithoutFluid => "no-fluid".into(),
        }
    }

    fn label(self) -> String {
        match self {
            Self::Skull(ratio) => format!("skull conducting {ratio} times less than brain"),
            Self::Electrodes(mm) => format!("electrodes misplaced by {mm} mm"),
            Self::UpperSphere => "sphere fitted to the upper electrodes only".into(),
            Self::Centre => "centre of the sphere off by its standard error".into(),
            Self::Radius(times) => format!(
                "sphere {} % {}",
                millimetres(100.0 * (times - 1.0).abs()),
                if times > 1.0 { "larger" } else { "smaller" }
            ),
            Self::WithoutFluid => "no shell of cerebrospinal fluid".into(),
        }
    }

    fn lacking(self) -> &'static str {
        match self {
            Self::Skull(_) => "The head has no shell called skull inside another.",
            Self::WithoutFluid => "The head has no shell of cerebrospinal fluid.",
            _ => "The sphere is not fitted to measured electrodes.",
        }
    }
}

/// A wrong skull is worth saying from here on: half the published error of sphere models.
const NOTABLE_MM: f64 = 5.0;

/// Changes of residual variance that no one would see.
const UNSEEN_RV: f64 = 0.01;

impl WhatIf {
    /// In words.
    pub fn new(found: &[(Change, WhatIfReport)], dipole: &EquivalentDipole, rv: f64) -> Self {
        let words = |(change, report): &(Change, WhatIfReport)| {
            let misplaced = matches!(change, Change::Electrodes(_));
            let deeper = report.depth_mm.unwrap_or(0.0);
            let depth = report.depth_mm.map_or_else(String::new, |mm| match (misplaced, tenths(mm)) {
                (true, mm) => format!("± {mm}"),
                (false, mm) if mm.starts_with(['-', '−']) || mm == "0.0" => mm.replace('-', "−"),
                (false, mm) => format!("+{mm}"),
            });
            WhatIfWords {
                change: report.change.clone(),
                label: change.label(),
                shift: report.shift_mm.map_or_else(String::new, tenths),
                depth,
                rv: report.rv.map_or_else(String::new, percent),
                shift_mm: report.shift_mm.unwrap_or(0.0),
                depth_mm: [if misplaced { -deeper } else { 0.0 }, deeper],
                rv_change: report.rv.map_or(0.0, |other| other - rv),
                none: report.shift_mm.is_none().then(|| change.lacking()),
            }
        };
        let rows: Vec<WhatIfWords> = found.iter().map(words).collect();
        let far = |a: &'_ &WhatIfWords, b: &'_ &WhatIfWords| a.shift_mm.total_cmp(&b.shift_mm);
        let unseen = |row: &&WhatIfWords| row.shift_mm >= NOTABLE_MM && row.rv_change.abs() <= UNSEEN_RV;
        let skulls = found.iter().zip(&rows).filter(|((change, _), _)| matches!(change, Change::Skull(_)));
        let skull = skulls.map(|(_, row)| row).filter(unseen).max_by(far);
        let sentence = match (skull, rows.iter().max_by(far)) {
            (Some(skull), _) => format!(
                "With a {} the position would lie {} mm away, and residual variance would not show it: {} instead of {} %.",
                skull.label,
                millimetres(skull.shift_mm),
                skull.rv,
                percent(rv)
            ),
            (_, Some(most)) => format!("What moves it most: {}, by {} mm.", most.label, millimetres(most.shift_mm)),
            _ => "Nothing of this applies to this head.".into(),
        };
        Self {
            sentence: match dipole.at_boundary {
                true => format!(
                    "{sentence} The position presses on the boundary of the modelled brain, where little can move it outwards."
                ),
                false => sentence,
            },
            rows,
            notes: vec![
                "The map stays as it is; it is fitted again in another head. How likely each change is, this table does not say.",
            ],
        }
    }
}
