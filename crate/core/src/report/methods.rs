//! What was done, in the words of a paper: made of the settings, of what was found in the files and of what is said to have
//! been done beyond the fit, with the sources that these words cite.

use super::messages::{axes_words, listed};
use super::number::{given, significant, tenths};
use super::sheet::{Written, capitalised, head_title};
use super::summary::{FEWEST_SUBJECTS, Questions};
use super::trust::{drawn_errors, drawn_noise, sources};
use super::{
    HeadReport, LEAST_APART_MM, MIRRORED_PART, MOST_OPPOSED, NoiseSettings, PREFERRED_SHARE, Polarity, Report,
};
use crate::assess::CANONICAL_RADIUS_MM;
use crate::finding::{Code, Value};
use crate::map::MapUnit;
use crate::placement::{AxesFound, Evidence};
use crate::understand::{ColumnsAre, Role};
use serde::{Deserialize, Serialize};

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
    /// Number of image sources; `None` for the plain series.
    pub images: Option<usize>,
    /// What is drawn of the skull.
    pub skull: Option<[f64; 2]>,
    /// Whether the sphere is drawn.
    pub sphere: bool,
    /// Whether the head has a skull and cerebrospinal fluid that can be otherwise.
    pub tissues: [bool; 2],
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

impl Methods {
    /// From what was done.
    pub fn new(facts: &Facts, done: &Done) -> Self {
        let steps = [
            maps(facts, done),
            electrodes(facts),
            sphere(facts),
            head(&facts.report.head),
            forward_and_fit(facts),
            region(facts, done),
            populations(facts, done),
            verdict(facts, done),
            explanations(facts, done),
            stability(facts, done),
            several(done),
        ];
        let paragraph = steps.concat().join(" ");
        let references = SOURCES.into_iter().filter(|source| paragraph.contains(&citation(source))).collect();
        Self { paragraph, references }
    }
}

fn maps(facts: &Facts, done: &Done) -> Vec<String> {
    let Report { program, settings, understood, .. } = facts.report;
    let [one, many] = match understood.columns_are {
        ColumnsAre::Components => ["component map", "component maps"],
        ColumnsAre::TimePoints => ["time point of a response", "time points of a response"],
        ColumnsAre::Repeats => ["repeat of a map", "repeats of a map"],
        ColumnsAre::Unrelated => ["map", "maps"],
    };
    let to = if facts.maps == 1 { format!("one {one}") } else { format!("each of {} {many}", number(facts.maps)) };
    let build = program.build.map_or_else(String::new, |build| format!(", build {build}"));
    let mut told = vec![format!(
        "A single equivalent current dipole was fitted to {to} in a spherical head model with {} (version {}{build}).",
        program.name, program.version
    )];
    if facts.unfitted > 0 {
        let had = if facts.unfitted == 1 {
            "map was constant or lacked a value and was"
        } else {
            "maps were constant or lacked values and were"
        };
        told.push(format!("{} {had} not fitted.", capitalised(&number(facts.unfitted))));
    }
    if done.decompositions > 1 {
        let from =
            if done.subjects > 0 { format!(" from {}", counted(done.subjects, "subject")) } else { String::new() };
        told.push(format!(
            "{}{from} were analysed; numbers of maps and electrodes are given for one of them.",
            capitalised(&counted(done.decompositions, "decomposition"))
        ));
    }
    if has(facts, Code::UnmixingInverted) {
        let sphered = understood.files.iter().any(|file| file.role == Role::Sphering);
        let sphered = if sphered { ", multiplied by its sphering matrix" } else { "" };
        told.push(format!("Maps were the columns of the pseudo-inverse of the unmixing matrix{sphered}."));
    }
    if let Some(window) = settings.baseline.filter(|_| has(facts, Code::BaselineSubtracted)) {
        let unit = understood.times.as_ref().map_or("", |times| times.unit);
        told.push(format!(
            "The mean from {} to {} {unit} was subtracted at each electrode.",
            signed(window.from),
            signed(window.to)
        ));
    }
    if done.course && understood.columns_are == ColumnsAre::TimePoints {
        told.push("Global field power was the root mean square over the electrodes of the average-referenced map (Lehmann & Skrandies 1980).".into());
    }
    told
}

fn electrodes(facts: &Facts) -> Vec<String> {
    let Report { electrodes, understood, .. } = facts.report;
    let labels = &understood.labels;
    let used = electrodes.iter().filter(|electrode| electrode.used).count();
    let reasons =
        [(Code::Excluded, "by hand"), (Code::Interpolated, "interpolated"), (Code::ChannelsBad, "declared bad")];
    let left_out =
        reasons.iter().filter_map(|(code, why)| Some(format!("{} ({why})", listed(labels_of(facts, *code)?))));
    let left_out: Vec<String> = left_out.collect();
    let mut told = vec![match electrodes.len() - used {
        0 => format!("All {used} electrodes with a position and a value were used."),
        one => format!(
            "Of {} electrodes with a position and a value, {used} were used; left out {} {}.",
            electrodes.len(),
            if one == 1 { "was" } else { "were" },
            series(&left_out)
        ),
    }];
    let apart = [
        (labels.not_scalp.len(), "channel", "off the scalp"),
        (labels.without_position.len(), "channel", "without a position"),
    ];
    let apart =
        apart.iter().filter(|one| one.0 > 0).map(|(count, noun, what)| format!("{} {what}", counted(*count, noun)));
    let apart: Vec<String> = apart.collect();
    if !apart.is_empty() {
        told.push(format!("{} had no part in the fits.", capitalised(&series(&apart))));
    }
    let named = match &labels.reference {
        Some(reference) => format!("; the labels of the channels name {reference} as the recording reference"),
        None => String::new(),
    };
    let kept = match labels_of(facts, Code::ReferenceChannel) {
        Some(labels) => {
            format!("; {}, zero in every map, was taken as the recording reference and kept", listed(labels))
        }
        None => String::new(),
    };
    told.push(format!("Maps and lead field were referred to the average of the electrodes used{named}{kept}."));
    told
}

fn sphere(facts: &Facts) -> Vec<String> {
    let Report { head, .. } = facts.report;
    let radius = tenths(head.radius_mm);
    let mut told = Vec::new();
    if !facts.measured && has(facts, Code::UnitSphereScaled) {
        told.push(format!("Electrode positions were given as directions and put on a sphere of radius {radius} mm."));
    } else if !facts.measured {
        told.push(format!(
            "Electrode positions were not measured: idealised positions of the 10-5 system (names: Oostenveld & Praamstra 2001) were taken by the labels, on a sphere of radius {radius} mm."
        ));
    } else {
        let by = match (head.centre_is_fitted, head.radius_is_fitted) {
            (true, true) => "was fitted to the electrode positions given",
            (true, false) => "was centred by a fit to the electrode positions given, its radius set by hand",
            (false, true) => "had its radius from a fit to the electrode positions given, its centre set by hand",
            (false, false) => "had its centre and radius set by hand",
        };
        told.push(format!(
            "The sphere of the scalp {by} (radius {radius} mm; electrodes off it by {} mm, root mean square, and {} mm at most); electrodes were projected onto it along its radius.",
            tenths(head.fit_rms_mm),
            tenths(head.fit_max_mm)
        ));
    }
    let axes = facts.axes;
    told.extend(match axes.evidence {
        Evidence::Standard => None,
        Evidence::Setting => {
            let name = axes.name.map(|name| name.to_string()).unwrap_or_default();
            Some(format!("The axes of the positions were set by hand ({}).", axes_words(&name)))
        }
        Evidence::Landmarks => Some("The axes of the head were taken from the points at both ears and the nose.".into()),
        Evidence::Labels => Some(format!(
            "The axes of the head were found by rotating the electrodes with standard names onto their standard places (Kabsch 1976; {}° left, root mean square).",
            significant(axes.misfit_degrees.unwrap_or_default(), 2)
        )),
        Evidence::Nothing => Some("Nothing told the axes of the positions: x to the right, y to the front and z up were assumed.".into()),
    });
    match (facts.report.settings.mirror, axes.mirrored) {
        (Some(true), _) => told.push("Left and right of the positions were exchanged.".into()),
        (_, true) => told.push(
            "By their labels the electrodes were a mirror image of the head; positions were kept as given.".into(),
        ),
        _ => {}
    }
    told
}

fn head(head: &HeadReport) -> Vec<String> {
    let (_, source) = head_title(head);
    let source = match head.name {
        Some(_) => source.replacen("Radii", "radii", 1),
        None => "set by hand".into(),
    };
    let all = |what: fn(&crate::head::Shell) -> String| series(&head.shells.iter().map(what).collect::<Vec<_>>());
    let (radii, conductivities) =
        (all(|shell| tenths(shell.outer_radius_mm)), all(|shell| given(shell.conductivity_s_per_m)));
    let mut told = vec![match head.shells.len() {
        1 => format!(
            "The head was one homogeneous sphere of radius {radii} mm and conductivity {conductivities} S/m ({source})."
        ),
        count => format!(
            "The head was modelled by {} concentric shells, {}, with outer radii of {radii} mm and conductivities of {conductivities} S/m ({source}).",
            number(count),
            all(|shell| shell.tissue.clone())
        ),
    }];
    if head.unusual {
        told.push("The head was declared unusual (an infant's, or one with a defect of the skull or a craniotomy), for which concentric shells may not hold.".into());
    }
    told
}

fn forward_and_fit(facts: &Facts) -> Vec<String> {
    let Report { settings, electrodes, .. } = facts.report;
    let used = electrodes.iter().filter(|electrode| electrode.used).count();
    let images = match facts.images {
        Some(count) => format!(
            ", evaluated by {} (after Berg & Scherg 1994) with an error of at most 3·10⁻⁹ of the largest value on the scalp",
            counted(count, "image source")
        ),
        None => String::new(),
    };
    let turned = match settings.flip.len() {
        0 => String::new(),
        count => format!(
            "; {} turned",
            if count == 1 { "that of one map was".into() } else { format!("those of {} maps were", number(count)) }
        ),
    };
    let sign = match settings.polarity {
        Polarity::Arbitrary => "The sign of a map was taken as arbitrary and its moment as an axis",
        Polarity::Declared => "The sign of a map was taken as meaningful and its moment as a direction",
    };
    let unit = match settings.map_unit {
        MapUnit::Microvolt => "Maps were given in µV and moments in nAm",
        MapUnit::Volt => "Maps were given in V and moments in nAm",
        MapUnit::Relative => "The unit of the maps was not known, so that moments were relative",
    };
    let activations = settings.activation_sd.iter().flatten().count();
    let activation = match activations {
        0 => String::new(),
        all if all == facts.maps => "; they were multiplied by the standard deviation of the map's activation".into(),
        some => format!(
            "; those of {} were multiplied by the standard deviation of the map's activation",
            counted(some, "map")
        ),
    };
    vec![
        format!("Potentials were those of the infinite series for layered spheres (de Munck & Peters 1993; Zhang 1995){images}."),
        "Residual variance (RV), the squared norm of the difference between the map and the dipole's map over that of the map, was minimised over all positions within 0.98 of the innermost radius. The moment was eliminated (variable projection; Golub & Pereyra 1973), about 1,600 positions gave up to five separate starts, and Newton steps with exact derivatives refined them; the boundary was an active constraint.".into(),
        format!(
            "Beside RV stands the adjusted RV, [RSS/(N − 7)] / [TSS/(N − 1)], with N = {used} electrodes and {} degrees of freedom (seven parameters: the reference, three of position and three of moment).",
            used - 7
        ),
        format!("{sign}{turned}."),
        format!("{unit}{activation}."),
    ]
}

fn region(facts: &Facts, done: &Done) -> Vec<String> {
    if !done.region {
        return Vec::new();
    }
    let settings = &facts.report.settings;
    let unit = Written::of(settings.map_unit);
    let strong = match &settings.noise {
        None => "so strong as to explain, together with the error of the head, what the fit had left over".to_owned(),
        Some(known) => {
            let from = match known {
                NoiseSettings::Sd { .. } => String::new(),
                NoiseSettings::Trials { trials, .. } => format!(" (an average of {trials} trials)"),
            };
            format!(
                "of standard deviation {} {} at each electrode{from}",
                significant(unit.factor * known.sd(), 2),
                unit.name
            )
        }
    };
    vec![
        format!(
            "The region of uncertainty comes from {} refits (seed {}): in each the fitted dipole was seen through a head drawn anew – {} –, with {} added, {strong}, and fitted again in the head as modelled. The region is the ellipsoid about the fitted position that held 95 % of the refits.",
            settings.errors.draws,
            settings.errors.seed,
            imperfect(facts),
            drawn_noise(&settings.errors),
        ),
        "For comparison, the profile region for independent noise was computed (Bates & Watts 1988), and Moran's I of the residual (Moran 1950; Cliff & Ord 1981).".into(),
    ]
}

fn populations(facts: &Facts, done: &Done) -> Vec<String> {
    if !(done.populations || done.verdict) {
        return Vec::new();
    }
    let kinds = match done.populations {
        true => "independent noise and of one, two, five, twenty and a hundred dipoles",
        false => "one, two and a hundred dipoles",
    };
    let settings = &facts.report.settings;
    vec![
        format!(
            "Reference populations were {} simulated maps each of {kinds} (seed {}; random numbers: O'Neill 2014), for the same electrodes and head and fitted in the same way.",
            number(settings.sources.draws),
            settings.sources.seed
        ),
        format!(
            "Their sources were {}. Simulated single dipoles were seen through an imperfect head – {} –, {} % of their power being {}.",
            sources(&settings.sources).replace('-', "−"),
            imperfect(facts),
            share(settings.sources.noise),
            drawn_noise(&settings.errors)
        ),
    ]
}

fn verdict(facts: &Facts, done: &Done) -> Vec<String> {
    if !done.verdict {
        return Vec::new();
    }
    let limits = &facts.report.settings.limits;
    let (paired, two) = match done.alternatives {
        true => ("paired if a mirrored pair was preferred (see below), ", ", and two free dipoles were not preferred"),
        false => ("", ""),
    };
    vec![format!(
        "A map was called, by the first of these that held, lone electrode if one channel had more than {} % of its power, {paired}edge if the position lay on the boundary, below the brain if it lay under the floor of the simulated sources, not dipolar if more than {} % of simulated single dipoles left less over (both of all and of those at about its depth), dipolar if at most {} % of them did, at most {others} % of simulated pairs and at most {others} % of mixtures of a hundred dipoles{two}, and otherwise undecided. These limits are conventions.",
        share(limits.lone_electrode),
        share(limits.ruled_out),
        share(limits.one_dipole),
        others = share(limits.others)
    )]
}

fn explanations(facts: &Facts, done: &Done) -> Vec<String> {
    if !done.alternatives {
        return Vec::new();
    }
    let [mirrored, free] = facts.pairs;
    let tried = [
        Some("the best minimum elsewhere"),
        mirrored.then_some("a pair of dipoles at mirrored places"),
        free.then_some("two free dipoles"),
    ];
    let tried: Vec<String> = tried.into_iter().flatten().map(str::to_owned).collect();
    let mut told = vec![format!(
        "Other explanations of a map – {} – were held against single dipoles by a parametric bootstrap (Efron & Tibshirani 1993; sequential, Besag & Clifford 1991): the fitted dipole was seen through up to {} heads and with noise, both drawn as {}, and explained in the same ways.",
        series(&tried),
        facts.report.settings.errors.draws,
        match done.region {
            true => "for the region".to_owned(),
            false => format!("follows: {}; {}", imperfect(facts), drawn_noise(&facts.report.settings.errors)),
        }
    )];
    if mirrored || free {
        let part = match facts.pairs {
            [true, true] => format!(
                ", and a mirrored pair only with at least {} of the gain of two free dipoles",
                given(MIRRORED_PART)
            ),
            _ => String::new(),
        };
        told.push(format!(
            "Pairs were refined by Levenberg–Marquardt steps with the moments eliminated (Marquardt 1963; Kaufman 1975) and preferred if at most {} % of simulated single dipoles gained as much{part}. The gain was the fall of RV over the RV of the pair and that which errors of the head alone leave. Pairs under {} mm apart, or whose two maps together were over {} times as long as their sum, were refused.",
            share(PREFERRED_SHARE),
            given(LEAST_APART_MM),
            given(MOST_OPPOSED)
        ));
    }
    told
}

fn stability(facts: &Facts, done: &Done) -> Vec<String> {
    let mut told = Vec::new();
    if done.influence {
        told.push("Each electrode was left out in turn and the map fitted again from its best two minima.".into());
    }
    if done.what_if {
        let [skull, fluid] = facts.tissues;
        let head = &facts.report.head;
        let changes = [
            skull.then_some("a brain-to-skull ratio of conductivities of 15, 20, 25, 40 and 80"),
            Some("electrodes misplaced by 2 and 5 mm (root mean square of 20 draws)"),
            (head.centre_is_fitted && head.radius_is_fitted)
                .then_some("the sphere of the upper 65 % of the electrodes; a centre off by its standard error"),
            Some("a sphere 5 % larger and smaller"),
            fluid.then_some("brain in place of cerebrospinal fluid"),
        ];
        let changes: Vec<String> = changes.into_iter().flatten().map(str::to_owned).collect();
        told.push(format!("Maps were fitted again in other heads: {}.", changes.join("; ")));
    }
    told
}

fn several(done: &Done) -> Vec<String> {
    let mut told = Vec::new();
    if done.shares {
        let usual = Questions::default();
        let at = match done.threshold {
            Some(threshold) => share(threshold),
            None => series(&usual.at.iter().map(|at| share(*at)).collect::<Vec<_>>()),
        };
        told.push(format!("The near-dipolar share was the part of the fitted maps with an RV of at most {at} %."));
        if done.subjects > 1 {
            told.push("Shares of decompositions of one name were averaged over their subjects.".into());
        }
        if done.subjects >= FEWEST_SUBJECTS {
            told.push(format!(
                "Where these were {} or more, 95 % intervals came from drawing subjects anew {} times (percentiles expanded for few subjects, Hesterberg 2015; random numbers: O'Neill 2014).",
                number(FEWEST_SUBJECTS),
                number(usual.draws)
            ));
        }
    }
    if done.matches {
        told.push("Maps of two decompositions were matched one to one so that the sum of |r| was largest, r being their correlation over the electrodes of both (Jonker & Volgenant 1987; Crouse 2016).".into());
    }
    if done.groups {
        let count = match done.group_count {
            Some(count) => format!("into {} as chosen by hand", counted(count, "group")),
            None => "into as many groups as made the mean silhouette largest (Rousseeuw 1987)".into(),
        };
        told.push(format!(
            "Equivalent dipoles of several people were brought to one head of {} mm radius and grouped by Ward's hierarchy (Ward 1963) of the squared distance of their places plus (30 mm)² sin² of the angle between their axes, {count}.",
            given(CANONICAL_RADIUS_MM)
        ));
    }
    told.push("Positions are equivalent positions in a spherical model, whose published error is about 10 mm (Cuffin et al. 2001).".into());
    told
}

/// What a drawn head is off in, as exactly as a paper says it.
fn imperfect(facts: &Facts) -> String {
    drawn_errors(&facts.report.settings.errors, facts.skull, facts.sphere)
        .replace(" mm off", " mm off along the scalp (root mean square)")
        .replace("as skull", "as skull (even in the logarithm)")
}

fn has(facts: &Facts, code: Code) -> bool {
    facts.report.notes.iter().any(|note| note.code == code)
}

/// The labels that a note names.
fn labels_of<'a>(facts: &Facts<'a>, code: Code) -> Option<&'a [String]> {
    let note = facts.report.notes.iter().find(|note| note.code == code)?;
    match note.values.get("labels") {
        Some(Value::List(labels)) => Some(labels),
        _ => None,
    }
}

/// A share in percent as it was set.
fn share(value: f64) -> String {
    given(100.0 * value)
}

/// A number that may be below zero, with the sign of mathematics.
fn signed(value: f64) -> String {
    given(value).replace('-', "−")
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

fn counted(count: usize, noun: &str) -> String {
    format!("{} {noun}{}", number(count), if count == 1 { "" } else { "s" })
}

/// "a, b and c".
pub(super) fn series(words: &[String]) -> String {
    match words.split_last() {
        None => String::new(),
        Some((last, [])) => last.clone(),
        Some((last, others)) => format!("{} and {last}", others.join(", ")),
    }
}
