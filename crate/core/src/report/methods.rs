//! What was done, in the words of a paper: made of the settings, of what was found in the files and of what is said to have
//! been done beyond the fit, with the sources that these words cite.

use super::messages::{axes_words, clipped, listed};
use super::number::{given, signed, significant, tenths};
use super::sheet::{Written, head_title, skull};
use super::summary::FEWEST_SUBJECTS;
use super::trust::{drawn_errors, drawn_noise, source_words};
use super::{NoiseSettings, Polarity, Report, Settings};
use crate::finding::Value;
use crate::map::MapUnit;
use crate::placement::{AxesFound, Evidence};
use crate::understand::{ColumnsAre, Role};
use serde::{Deserialize, Serialize};

/// The paragraph. `{name}` stands for a value, `[name:…]` is left out where that value is empty, `[!name:…]` where it is not;
/// notes are values by their codes.
const PARAGRAPH: &str = "\
A single equivalent current dipole was fitted to [one:one ][!one:each of {maps} ]\
[components:component map][time-points:time point][repeats:repeat][unrelated:map][!one:s]\
[time-points: of a response][repeats: of a map][span: ({span})] in a spherical head model with Inward \
(version {version}[build:, build {build}]).\
[unfitted: Maps that were constant or lacked values were left aside ({unfitted}).]\
[several: In all, {several}[subjects: from {subjects}] were analysed; the numbers of maps and electrodes given here are those of one of them.]\
[unmixing-inverted: Maps were the columns of the pseudo-inverse of the unmixing matrix[sphering: times the sphering matrix].]\
[baseline: The mean from {baseline} was subtracted at each electrode.]\
[course: Global field power was the root mean square (rms) of the average-referenced map (Lehmann & Skrandies 1980).] \
Of {placed} electrodes with a position and a value, [all:all][!all:{used}] were used\
[excluded:; left out by hand: {excluded}][interpolated:; left out as interpolated: {interpolated}][channels-bad:; left out as declared bad: {channels-bad}].\
[not-scalp: Channels off the scalp were not used ({not-scalp}).]\
[values-without-position: Channels without a position were not used ({values-without-position}).] \
Maps and lead field were referred to the average of the electrodes used\
[reference-named: (recording reference by the labels: {reference-named})]\
[reference-channel: (recording reference, zero in every map and kept: {reference-channel})].\
[unit-sphere-scaled: {unit-sphere-scaled}]\
[standard-positions: Electrode positions were not measured but the standard ones of the labels (idealised 10-5 system; names: Oostenveld & Praamstra 2001), on a sphere of radius {radius} mm.]\
[measured: A sphere was [sphere-set:set by hand][!sphere-set:fitted to the electrode positions given[centre-set:, its centre set by hand][radius-set:, its radius set by hand]] \
(radius {radius} mm; electrodes off it by {off} mm rms, {farthest} mm at most), onto which electrodes were projected along its radius.]\
[axes-set: The axes of the positions were set by hand ({axes-set}).]\
[landmarks: The axes of the head were taken from the points at ears and nose.]\
[misfit: The axes of the head were found by rotating electrodes with standard names onto their standard places (Kabsch 1976; misfit {misfit}° rms).]\
[axes-assumed: The axes of the positions were assumed (x to the right, y to the front, z up).]\
[mirror: Left and right of the positions were exchanged.]\
[mirrored: By their labels the positions were the mirror image of a head; they were kept as given.] \
The head was [shells:modelled by {shells} concentric shells ({tissues}) with outer radii of {radii} mm and conductivities of {conductivities} S/m]\
[!shells:one homogeneous sphere of radius {radii} mm and conductivity {conductivities} S/m] ({source}).\
[unusual-head: It was declared unusual, so that concentric shells may not hold for it.] \
Potentials were computed by the infinite series for a layered sphere (de Munck & Peters 1993; Zhang 1995)\
[images:, evaluated by image sources (after Berg & Scherg 1994) with an error of at most 3·10⁻⁹ of the largest value on the scalp]. \
Residual variance (RV), the squared norm of the map less the dipole's map over that of the map, was minimised over all positions within 0.98 of the innermost radius, \
the moment being eliminated by variable projection (Golub & Pereyra 1973): a scan of about 1,600 positions gave up to five separate starts, which Newton steps with exact derivatives refined; the boundary was an active constraint. \
Adjusted RV was RV · (N − 1)/(N − 7), with N = {used} electrodes and {free} degrees of freedom after reference, position and moment. \
The sign of a map was taken as [declared:meaningful and its moment as a direction][!declared:arbitrary and its moment as an axis][flips:, with {flips} turned]. \
[microvolts:Maps were in µV and moments in nAm][volts:Maps were in V and moments in nAm][relative:The unit of the maps was not known and moments were relative]\
[activations:, multiplied by the standard deviation of the activation for {activations}].\
[region: The region of uncertainty is the ellipsoid about the fitted position that held 95 % of {draws} refits: the fitted dipole was seen through heads {drawn}, and fitted again in the head as modelled.\
[repeats: The scatter of the repeats' positions was computed too.] \
The profile region for independent noise (Bates & Watts 1988) and Moran's I of the residual (Moran 1950; Cliff & Ord 1981) were computed for comparison.]\
[simulated: Reference populations were {population} maps of each kind – [populations:independent noise, one, two, five, twenty][!populations:one, two] and a hundred dipoles – simulated for the same electrodes and head (random numbers of seed {seed}; O'Neill 2014) and fitted likewise. \
Their sources were {sources}, of equal moments; single dipoles were seen through an imperfect head – {errors} – with {share} % of the power from {noise}.]\
[verdict: The verdict on a map was the first that held of lone electrode (one channel with over {lone} % of its power), \
[paired:paired (a mirrored pair preferred, see below), ]edge (position on the boundary), below the brain (position under the floor of the simulated sources), \
not dipolar (more left over than with {ruled-out} % of simulated single dipoles, both of all and of those at about its depth), \
dipolar (more left over than with at most {one-dipole} % of them and than with at most {others} % of simulated pairs and of mixtures of a hundred\
[two-free:, and two free dipoles not preferred]), else undecided. These limits are conventions.]\
[alternatives: Other explanations of a map – the best minimum elsewhere[both:, a mirrored pair of dipoles and two free dipoles]\
[!both:[mirrored-pair: and a mirrored pair of dipoles][free-pair: and two free dipoles]] – were compared with single dipoles by a parametric bootstrap (Efron & Tibshirani 1993; sequential, Besag & Clifford 1991): \
the fitted dipole was seen through up to {draws} heads [region:drawn as for the region][!region:{drawn}], and explained in the same ways.\
[pairs: Pairs were refined by Levenberg–Marquardt steps with the moments eliminated (Marquardt 1963; Kaufman 1975) and preferred if at most 2 % of simulated single dipoles gained as much – \
the fall of RV over the RV of the pair plus what errors of the head alone leave[both:; a mirrored pair also with at least 0.8 of the gain of two free dipoles]. \
Pairs under 20 mm apart, or whose two maps were over 4 times as long as their sum, were refused.]]\
[influence: Each electrode was left out in turn and the map fitted again.]\
[what-if: Maps were fitted again with [skull:brain-to-skull ratios of 15 to 80, ]electrodes misplaced by 2 and 5 mm and other spheres.]\
[shares: The near-dipolar share was the part of the fitted maps with an RV of at most {at} %\
[mean:, averaged over the subjects of decompositions of one name][intervals:; from five subjects on, 95 % intervals came from 4,000 draws of subjects (expanded percentiles, Hesterberg 2015; O'Neill 2014)].]\
[matches: Maps of two decompositions were matched one to one by the largest sum of |r| over the electrodes of both (Jonker & Volgenant 1987; Crouse 2016).]\
[groups: Equivalent dipoles of several people, brought to one head of radius 88 mm, were grouped by Ward's hierarchy (Ward 1963) of the squared distance of places plus (30 mm)² sin² of the angle between axes, \
into [group-count:{group-count}, a number chosen by hand][!group-count:as many groups as made the mean silhouette largest (Rousseeuw 1987)].] \
Positions are equivalent positions in a spherical model; the published error of such models is about 10 mm (Cuffin et al. 2001).";

/// Heads and noise of refits.
const DRAWN: &str = "\
drawn anew (random numbers of seed {errors-seed}; O'Neill 2014) – {errors} –, with {noise}[where: ({sources})] \
[noise-sd:of standard deviation {noise-sd} at each electrode[trials: (an average of {trials})]]\
[!noise-sd:strong enough to explain, with the error of the head, what the fit left over]";

/// What was done beyond the fits.
#[derive(Clone, Debug, Default, PartialEq, Deserialize)]
#[serde(default, deny_unknown_fields)]
pub struct Done {
    /// Regions were told.
    pub region: bool,
    /// Maps were set against reference populations.
    pub populations: bool,
    /// Verdicts were told.
    pub verdict: bool,
    /// Other explanations were looked for.
    pub alternatives: bool,
    /// Electrodes were left out in turn.
    pub influence: bool,
    /// Maps were fitted in other heads.
    pub what_if: bool,
    /// The course of a response was told.
    pub course: bool,
    /// Near-dipolar shares were told.
    pub shares: bool,
    /// Dipoles of several people were grouped.
    pub groups: bool,
    /// Number of groups, where it was chosen by hand.
    pub group_count: Option<usize>,
    /// Maps of two decompositions were matched.
    pub matches: bool,
    /// Residual variance up to which maps counted as near-dipolar; those of common practice without it.
    pub threshold: Option<f64>,
    /// Number of decompositions.
    pub decompositions: usize,
    /// Number of people that they come from, where that is known.
    pub subjects: usize,
}

/// Methods to paste into a paper.
#[derive(Clone, Debug, PartialEq, Eq, Serialize)]
pub struct Methods {
    /// The paragraph.
    pub paragraph: String,
    /// Each source that it cites, in the order of the alphabet.
    pub references: Vec<&'static str>,
}

/// What the paragraph needs beside a report without its maps.
#[derive(Clone, Debug)]
pub struct Facts<'a> {
    /// The report.
    pub report: &'a Report,
    /// Number of maps.
    pub maps: usize,
    /// Those of them that are constant or lack a value.
    pub unfitted: usize,
    /// Whether positions came with the files.
    pub measured: bool,
    /// What told the axes.
    pub axes: &'a AxesFound,
    /// Whether image sources stand for the series.
    pub images: bool,
    /// What is drawn of the skull.
    pub skull: Option<[f64; 2]>,
    /// Whether the sphere is drawn.
    pub sphere: bool,
    /// Whether mirrored and free pairs can be tried.
    pub pairs: [bool; 2],
}

/// What can be cited, in the order of the alphabet.
const SOURCES: [&str; 28] = [
    "Bates & Watts 1988, Nonlinear Regression Analysis and Its Applications, Wiley",
    "Baumann, Wozny, Kelly & Meno 1997, IEEE Trans Biomed Eng 44:220–223",
    "Berg & Scherg 1994, Electroencephalogr Clin Neurophysiol 90:58–64",
    "Besag & Clifford 1991, Biometrika 78:301–304",
    "Cliff & Ord 1981, Spatial Processes: Models and Applications, Pion",
    "Crouse 2016, IEEE Trans Aerosp Electron Syst 52:1679–1696",
    "Cuffin & Cohen 1979, Electroencephalogr Clin Neurophysiol 47:132–146",
    "Cuffin et al. 2001, Clin Neurophysiol 112:2288–2292",
    "de Munck & Peters 1993, IEEE Trans Biomed Eng 40:1166–1174",
    "Efron & Tibshirani 1993, An Introduction to the Bootstrap, Chapman & Hall",
    "Geddes & Baker 1967, Med Biol Eng 5:271–293",
    "Golub & Pereyra 1973, SIAM J Numer Anal 10:413–432",
    "Hesterberg 2015, Am Stat 69:371–386",
    "Jonker & Volgenant 1987, Computing 38:325–340",
    "Kabsch 1976, Acta Cryst A32:922–923",
    "Kaufman 1975, BIT 15:49–57",
    "Lai et al. 2005, Clin Neurophysiol 116:456–465",
    "Lehmann & Skrandies 1980, Electroencephalogr Clin Neurophysiol 48:609–621",
    "Marquardt 1963, J Soc Indust Appl Math 11:431–441",
    "Moran 1950, Biometrika 37:17–23",
    "O'Neill 2014, Harvey Mudd College HMC-CS-2014-0905",
    "Oostendorp, Delbeke & Stegeman 2000, IEEE Trans Biomed Eng 47:1487–1492",
    "Oostenveld & Praamstra 2001, Clin Neurophysiol 112:713–719",
    "Rousseeuw 1987, J Comput Appl Math 20:53–65",
    "Rush & Driscoll 1968, Anesth Analg 47:717–723",
    "Ward 1963, J Am Stat Assoc 58:236–244",
    "Wilson & Bayley 1950, Circulation 1:84–92",
    "Zhang 1995, Phys Med Biol 40:335–349",
];

/// How a source is cited: its authors, of more than two the first, and the year.
fn citation(source: &str) -> String {
    let is_year = |word: &&str| word.len() > 4 && word.as_bytes()[..4].iter().all(u8::is_ascii_digit);
    let year = source.split(' ').find(is_year).map_or("", |word| &word[..4]);
    let (authors, _) = source.split_once(year).unwrap_or_default();
    match authors.split_once(',') {
        Some((first, _)) => format!("{first} et al. {year}"),
        None => format!("{authors}{year}"),
    }
}

/// A template with its values.
fn filled(template: &str, values: &[(&str, String)]) -> String {
    let value = |name: &str| values.iter().find(|(known, _)| *known == name).map_or("", |(_, value)| value.as_str());
    let mut text = String::new();
    // Blocks that are open within one that is left out, itself included.
    let mut hidden = 0;
    let mut rest = template;
    while let Some(at) = rest.find(['[', ']', '{']) {
        let (before, mark) = rest.split_at(at);
        if hidden == 0 {
            text.push_str(before);
        }
        rest = &mark[1..];
        match mark.as_bytes()[0] {
            b'[' => {
                let (name, inside) = rest.split_once(':').unwrap_or_default();
                let shown =
                    name.strip_prefix('!').map_or_else(|| !value(name).is_empty(), |name| value(name).is_empty());
                if hidden > 0 || !shown {
                    hidden += 1;
                }
                rest = inside;
            }
            b'{' => {
                let (name, after) = rest.split_once('}').unwrap_or_default();
                if hidden == 0 {
                    text.push_str(value(name));
                }
                rest = after;
            }
            _ if hidden > 0 => hidden -= 1,
            _ => {}
        }
    }
    text + rest
}

impl Methods {
    /// From what was done.
    pub fn new(facts: &Facts, done: &Done) -> Self {
        let paragraph = filled(PARAGRAPH, &values(facts, done));
        let references = SOURCES.into_iter().filter(|source| paragraph.contains(&citation(source))).collect();
        Self { paragraph, references }
    }
}

type Values = Vec<(&'static str, String)>;

/// Values by their names. The names stand in one table: beside each value they would take twice the code.
macro_rules! named {
    ($($name:literal => $value:expr,)*) => {{
        const NAMES: &[&str] = &[$($name,)*];
        NAMES.iter().copied().zip([$($value,)*])
    }};
}

/// What the template is filled with.
fn values(facts: &Facts, done: &Done) -> Values {
    let Report { program, settings, head, electrodes, understood, notes, .. } = facts.report;
    let Settings { errors, sources, limits, .. } = settings;
    let simulated = done.populations || done.verdict;
    let [mirrored, free] = facts.pairs;
    let axes = facts.axes;
    let used = electrodes.iter().filter(|electrode| electrode.used).count();
    let mut values = Values::new();
    for note in notes {
        let told = match note.values.get("labels").or(note.values.get("reference")) {
            Some(Value::List(labels)) => listed(labels),
            Some(Value::Text(label)) => clipped(label),
            _ => note.message.clone(),
        };
        values.push((note.code.as_str(), told));
    }
    let flags = named! {
        "components" => understood.columns_are == ColumnsAre::Components,
        "time-points" => understood.columns_are == ColumnsAre::TimePoints,
        "repeats" => understood.columns_are == ColumnsAre::Repeats,
        "unrelated" => understood.columns_are == ColumnsAre::Unrelated,
        "one" => facts.maps - facts.unfitted == 1,
        "sphering" => understood.files.iter().any(|file| file.role == Role::Sphering),
        "course" => done.course && understood.columns_are == ColumnsAre::TimePoints,
        "all" => used == electrodes.len(),
        "measured" => facts.measured,
        "centre-set" => !head.centre_is_fitted,
        "radius-set" => !head.radius_is_fitted,
        "sphere-set" => !head.centre_is_fitted && !head.radius_is_fitted,
        "landmarks" => axes.evidence == Evidence::Landmarks,
        "mirror" => settings.mirror == Some(true),
        "mirrored" => axes.mirrored && settings.mirror == Some(false),
        "images" => facts.images,
        "declared" => settings.polarity == Polarity::Declared,
        "volts" => settings.map_unit == MapUnit::Volt,
        "microvolts" => settings.map_unit == MapUnit::Microvolt,
        "relative" => settings.map_unit == MapUnit::Relative,
        "region" => done.region,
        "simulated" => simulated,
        "populations" => done.populations,
        "verdict" => done.verdict,
        "alternatives" => done.alternatives,
        "mirrored-pair" => mirrored,
        "free-pair" => free,
        "pairs" => mirrored || free,
        "both" => mirrored && free,
        "paired" => done.alternatives && mirrored,
        "two-free" => done.alternatives && free,
        "influence" => done.influence,
        "what-if" => done.what_if,
        "skull" => skull(head).is_some(),
        "shares" => done.shares,
        "mean" => done.subjects > 1,
        "intervals" => done.subjects >= FEWEST_SUBJECTS,
        "matches" => done.matches,
        "groups" => done.groups,
        // Where simulated sources lie is told once.
        "where" => errors.background_sources > 0 && !simulated,
    };
    for (name, is) in flags {
        if is {
            values.push((name, name.to_owned()));
        }
    }
    let [mut tissues, mut radii, mut conductivities] = [Vec::new(), Vec::new(), Vec::new()];
    for shell in &head.shells {
        tissues.push(clipped(&shell.tissue));
        radii.push(tenths(shell.outer_radius_mm));
        conductivities.push(given(shell.conductivity_s_per_m));
    }
    let source = match (head.name, head_title(head).1) {
        (None, _) => "set by hand".into(),
        (_, source) => source.strip_prefix("Radii").map_or(source.into(), |rest| format!("radii{rest}")),
    };
    let unit = Written::of(settings.map_unit);
    let (times, time_unit) = understood.times.as_ref().map_or((&[][..], ""), |times| (&times.times, times.unit));
    let between = |ends: Option<(f64, f64)>| match ends {
        Some((from, to)) => format!("{} to {} {time_unit}", signed(from), signed(to)),
        None => String::new(),
    };
    let trials = match settings.noise {
        Some(NoiseSettings::Trials { trials, .. }) => trials,
        _ => 0,
    };
    values.extend(named! {
        "maps" => number(facts.maps - facts.unfitted),
        "version" => program.version.to_owned(),
        "build" => program.build.unwrap_or_default().to_owned(),
        "unfitted" => counted(facts.unfitted, "map"),
        "several" => counted(if done.decompositions > 1 { done.decompositions } else { 0 }, "decomposition"),
        "subjects" => counted(done.subjects, "subject"),
        "span" => between(times.first().copied().zip(times.last().copied())),
        "baseline" => between(settings.baseline.map(|window| (window.from, window.to))),
        "placed" => electrodes.len().to_string(),
        "used" => used.to_string(),
        "free" => (used - 7).to_string(),
        "radius" => tenths(head.radius_mm),
        "off" => tenths(head.fit_rms_mm),
        "farthest" => tenths(head.fit_max_mm),
        "axes-set" => match (axes.evidence, axes.name) {
            (Evidence::Setting, Some(name)) => axes_words(&name.to_string()),
            _ => String::new(),
        },
        "misfit" => axes.misfit_degrees.map_or_else(String::new, |misfit| significant(misfit, 2)),
        "shells" => if head.shells.len() > 1 { number(head.shells.len()) } else { String::new() },
        "tissues" => series(&tissues),
        "radii" => series(&radii),
        "conductivities" => series(&conductivities),
        "source" => source,
        "flips" => counted(settings.flip.len(), "sign"),
        "activations" => counted(settings.activation_sd.iter().flatten().count(), "map"),
        "draws" => number(errors.draws),
        "errors-seed" => errors.seed.to_string(),
        "errors" => drawn_errors(errors, facts.skull, facts.sphere),
        "noise" => drawn_noise(errors),
        "noise-sd" => match &settings.noise {
            Some(noise) => format!("{} {}", significant(unit.factor * noise.sd(), 2), unit.name),
            None => String::new(),
        },
        "trials" => counted(trials, "trial"),
        "population" => number(sources.draws),
        "seed" => sources.seed.to_string(),
        "sources" => source_words(sources),
        "share" => percentage(sources.noise),
        "lone" => percentage(limits.lone_electrode),
        "ruled-out" => percentage(limits.ruled_out),
        "one-dipole" => percentage(limits.one_dipole),
        "others" => percentage(limits.others),
        "at" => done.threshold.map_or_else(|| USUAL_SHARES.into(), percentage),
        "group-count" => counted(done.group_count.unwrap_or(0), "group"),
    });
    values.push(("drawn", filled(DRAWN, &values)));
    values
}

/// What counts as near-dipolar where nothing else is said, in percent.
const USUAL_SHARES: &str = "5, 10 and 15";

/// A share as it was set.
fn percentage(share: f64) -> String {
    given(100.0 * share)
}

/// A count as running text has it.
fn number(count: usize) -> String {
    const WORDS: [&str; 10] = ["no", "one", "two", "three", "four", "five", "six", "seven", "eight", "nine"];
    match WORDS.get(count) {
        Some(word) => (*word).to_owned(),
        None if count < 1000 => count.to_string(),
        None => format!("{},{:03}", count / 1000, count % 1000),
    }
}

/// A number of things; nothing for none.
fn counted(count: usize, noun: &str) -> String {
    if count == 0 {
        return String::new();
    }
    format!("{} {noun}{}", number(count), if count == 1 { "" } else { "s" })
}

/// "a, b and c".
fn series(words: &[String]) -> String {
    match words.split_last() {
        None => String::new(),
        Some((last, [])) => last.clone(),
        Some((last, others)) => format!("{} and {last}", others.join(", ")),
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::assess::CANONICAL_RADIUS_MM;
    use crate::forward::{MAX_ECCENTRICITY, QUICK_TOLERANCE};
    use crate::report::{LEAST_APART_MM, MIRRORED_PART, MOST_OPPOSED, PREFERRED_SHARE, Questions};

    #[test]
    fn templates_show_and_leave_out_what_their_values_say() {
        let values = [("a", "1".to_owned()), ("b", String::new())];
        let text = "x {a}[a: y[b: no [a:{a}] no][!b: z]][!a: no][b: no]{b}.";
        assert_eq!(filled(text, &values), "x 1 y z.");
        for text in [PARAGRAPH, DRAWN] {
            let count = |mark: char| text.matches(mark).count();
            assert_eq!((count('['), count('{')), (count(']'), count('}')));
        }
    }

    #[test]
    fn numbers_of_the_paragraph_are_those_computed_with() {
        for words in [
            format!("within {} of the innermost radius", given(MAX_ECCENTRICITY)),
            format!("preferred if at most {} % of", percentage(PREFERRED_SHARE)),
            format!("at least {} of the gain", given(MIRRORED_PART)),
            format!("Pairs under {} mm apart", given(LEAST_APART_MM)),
            format!("over {} times as long", given(MOST_OPPOSED)),
            format!("one head of radius {} mm", given(CANONICAL_RADIUS_MM)),
            format!("from {} draws of subjects", number(Questions::default().draws)),
            format!("from {} subjects on", number(FEWEST_SUBJECTS)),
        ] {
            assert!(PARAGRAPH.contains(&words), "{words}");
        }
        assert_eq!(QUICK_TOLERANCE, 3e-9);
        assert_eq!(series(&Questions::default().at.into_iter().map(percentage).collect::<Vec<_>>()), USUAL_SHARES);
    }

    #[test]
    fn counts_and_lists_are_as_running_text_has_them() {
        assert_eq!([0, 1, 9, 10, 1000, 65_536].map(number), ["no", "one", "nine", "10", "1,000", "65,536"]);
        assert_eq!((counted(1, "map"), counted(2, "map")), ("one map".into(), "two maps".into()));
        let words = ["a", "b", "c"].map(str::to_owned);
        assert_eq!([1, 2, 3].map(|count| series(&words[..count])), ["a", "a and b", "a, b and c"]);
    }
}
