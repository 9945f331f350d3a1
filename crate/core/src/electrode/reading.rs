use super::{Grade, Label, StandardSite, modern_name, site};

/// What a label says, however it is written: `EEG Fp1-Ref`, `fp 1`, `FP1..` and `Fp1` all name one site.
#[derive(Clone, Debug, PartialEq)]
pub struct Reading {
    /// The name in it as written, without what stands before and after it; the whole label where no name is known.
    pub name: String,
    /// What names are compared by: that name in lower case, without blanks and marks.
    pub key: String,
    /// What it names.
    pub kind: Kind,
    /// What follows the name of a site.
    pub second: Option<Second>,
}

/// What a label names.
#[derive(Clone, Copy, Debug, PartialEq)]
pub enum Kind {
    /// A site of the standard systems, a mastoid or an ear lobe.
    Site(&'static StandardSite),
    /// A point of the head that is no electrode.
    Landmark(Landmark),
    /// A channel that does not measure the scalp.
    Other(Other),
    /// Nothing that is known: a name of the user's own.
    Unknown,
}

/// Points of the head that coordinates are referred to.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Landmark {
    /// Root of the nose.
    Nasion,
    /// Before the left ear.
    Left,
    /// Before the right ear.
    Right,
    /// Back of the head.
    Inion,
}

/// Channels that do not measure the scalp.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Other {
    /// Eye movements.
    Eye,
    /// Heart.
    Heart,
    /// Muscles.
    Muscle,
    /// Reference or ground.
    Reference,
    /// Stimuli, events, marks.
    Trigger,
    /// Anything else: breathing, skin, movement, sound.
    Auxiliary,
}

/// What follows the name of a site, as in `Fp1-Ref`.
#[derive(Clone, Debug, PartialEq)]
pub enum Second {
    /// A word that means a reference, an ear or a mastoid.
    Reference(String),
    /// Another site of the scalp.
    Site(&'static StandardSite),
    /// Something else.
    Unknown(String),
}

impl Second {
    /// What second parts are compared by.
    pub fn key(&self) -> String {
        self.text().to_ascii_lowercase()
    }

    /// As it is said.
    pub fn text(&self) -> &str {
        match self {
            Self::Site(site) => &site.name,
            Self::Reference(text) | Self::Unknown(text) => text,
        }
    }
}

/// Words before a name.
const PREFIXES: [&str; 7] = ["eeg", "pol", "chan", "channel", "ch", "electrode", "signal"];

/// Words after a name that tell its reference.
const REFERENCES: [&str; 24] = [
    "ref",
    "reference",
    "refs",
    "le",
    "av",
    "ar",
    "avg",
    "aver",
    "average",
    "car",
    "cle",
    "org",
    "lm",
    "linked",
    "ears",
    "ear",
    "mastoids",
    "nose",
    "com",
    "vref",
    "cref",
    "a1a2",
    "m1m2",
    "g2",
];

/// Ears and mastoids, the reference of many a recording.
const EARS: [&str; 4] = ["a1", "a2", "m1", "m2"];

/// Words after a name that tell its unit.
const UNITS: [&str; 5] = ["uv", "µv", "μv", "mv", "v"];

/// Names of landmarks.
const LANDMARKS: [(&str, Landmark); 9] = [
    ("nas", Landmark::Nasion),
    ("nasion", Landmark::Nasion),
    ("fidnz", Landmark::Nasion),
    ("lpa", Landmark::Left),
    ("fidt9", Landmark::Left),
    ("rpa", Landmark::Right),
    ("fidt10", Landmark::Right),
    ("inion", Landmark::Inion),
    ("ini", Landmark::Inion),
];

/// Parts of words that tell what a channel measures.
const PARTS: [(&str, Other); 4] =
    [("eog", Other::Eye), ("ecg", Other::Heart), ("ekg", Other::Heart), ("emg", Other::Muscle)];

/// Whole words, without the digits at their end, that tell what a channel measures.
const WORDS: [(Other, &[&str]); 6] = [
    (Other::Eye, &["loc", "roc", "eye", "lo", "io", "so", "veo", "heo"]),
    (Other::Heart, &["pulse", "ppg", "bvp", "pleth", "heart", "hr"]),
    (Other::Muscle, &["chin", "leg", "lleg", "rleg", "masseter"]),
    (Other::Reference, &["ref", "reference", "vref", "gnd", "ground", "cms", "drl"]),
    (
        Other::Trigger,
        &[
            "sti",
            "stim",
            "stimulus",
            "trig",
            "trigger",
            "triggers",
            "trg",
            "ttl",
            "status",
            "event",
            "events",
            "marker",
            "markers",
            "annotation",
            "annotations",
            "photic",
            "din",
            "dc",
        ],
    ),
    (
        Other::Auxiliary,
        &[
            "resp",
            "respiration",
            "gsr",
            "eda",
            "scr",
            "acc",
            "accel",
            "gyro",
            "aux",
            "misc",
            "bio",
            "temp",
            "spo",
            "sao",
            "osat",
            "etco",
            "abd",
            "abdomen",
            "thor",
            "thorax",
            "chest",
            "flow",
            "airflow",
            "snore",
            "mic",
            "audio",
            "light",
            "battery",
            "counter",
            "ibi",
            "bursts",
            "suppr",
        ],
    ),
];

impl Reading {
    /// Reads a label.
    pub fn of(label: &Label) -> Self {
        let text: String = label.as_str().chars().filter(|c| !c.is_control()).collect();
        // A prime or a star marks a place near a site: another name.
        let parts = |c: char| !(c.is_alphanumeric() || matches!(c, '\'' | '′' | '"' | '*'));
        let mut words: Vec<&str> = text.split(parts).filter(|word| !word.is_empty()).collect();
        let is = |word: &str, among: &[&str]| among.contains(&word.to_ascii_lowercase().as_str());
        while words.len() > 1 && words.last().is_some_and(|word| is(word, &UNITS)) {
            words.pop();
        }
        let whole = words.concat();
        if words.len() > 1 && words.first().is_some_and(|word| is(word, &PREFIXES)) {
            words.remove(0);
        } else if let Some(first) = words.first_mut()
            && first.get(..3).is_some_and(|start| start.eq_ignore_ascii_case("eeg"))
            && first.get(3..).is_some_and(|rest| found(rest).is_some())
        {
            *first = first.get(3..).unwrap_or_default();
        }
        // Only a word without digits goes together with the next: `Fp 1`, but not `F1 0`.
        let together = 1 + usize::from(words.first().is_some_and(|word| !word.contains(|c: char| c.is_ascii_digit())));
        for count in (1..=together.min(words.len())).rev() {
            let (name, rest) = words.split_at(count);
            if let Some(site) = found(&name.concat()) {
                let name = name.concat();
                // An old name beside the new one, as in `T7/T3`, is no second site.
                let same = |second: &Second| matches!(second, Second::Site(other) if other.name == site.name);
                let second = second(rest).filter(|second| !same(second));
                return Self { key: name.to_ascii_lowercase(), name, kind: Kind::Site(site), second };
            }
        }
        let mut core = words.as_slice();
        while let [before @ .., last] = core
            && !before.is_empty()
            && (is(last, &REFERENCES) || is(last, &EARS))
        {
            core = before;
        }
        let joined = core.concat().to_ascii_lowercase();
        let landmark =
            LANDMARKS.iter().find(|(name, _)| *name == joined).map(|(_, landmark)| Kind::Landmark(*landmark));
        let kind =
            landmark.or_else(|| core.iter().find_map(|word| other(word)).map(Kind::Other)).unwrap_or(Kind::Unknown);
        // A prefix is part of a name that is nothing without it: `EEG 001`.
        let key =
            whole.strip_suffix(&words[core.len().min(words.len())..].concat()).unwrap_or(&whole).to_ascii_lowercase();
        Self { name: label.to_string(), key, kind, second: None }
    }
}

/// The site that a name or an old name stands for.
fn found(name: &str) -> Option<&'static StandardSite> {
    site(modern_name(name).unwrap_or(name))
}

fn second(words: &[&str]) -> Option<Second> {
    let text = words.concat();
    let known = found(&text);
    let reference = |word: &&str| REFERENCES.contains(&word.to_ascii_lowercase().as_str());
    match known {
        _ if words.is_empty() => None,
        Some(site) if site.grade == Grade::Approximate => Some(Second::Reference(site.name.clone())),
        Some(site) => Some(Second::Site(site)),
        None if words.iter().any(reference) || REFERENCES.contains(&text.to_ascii_lowercase().as_str()) => {
            Some(Second::Reference(text))
        }
        None => Some(Second::Unknown(text)),
    }
}

fn other(word: &str) -> Option<Other> {
    let word = word.to_ascii_lowercase();
    let base = word.trim_end_matches(|c: char| c.is_ascii_digit());
    let part = PARTS.iter().find(|(part, _)| word.contains(part)).map(|(_, other)| *other);
    part.or_else(|| WORDS.iter().find(|(_, words)| words.contains(&base)).map(|(other, _)| *other))
}

#[cfg(test)]
mod tests {
    use super::*;

    fn read(text: &str) -> Reading {
        Reading::of(&Label::new(text))
    }

    fn site_of(text: &str) -> Option<&'static str> {
        match read(text).kind {
            Kind::Site(site) => Some(&site.name),
            _ => None,
        }
    }

    #[test]
    fn old_and_new_name_are_one_site() {
        for text in ["T7/T3", "T3/T7", "P7 (T5)", "EEG T8-T4"] {
            assert!(read(text).second.is_none() && site_of(text).is_some(), "{text}");
        }
        assert!(matches!(read("T7-T4").second, Some(Second::Site(_))));
    }

    #[test]
    fn one_site_is_written_in_many_ways() {
        for text in [
            "Fp1",
            "FP1",
            "fp1",
            " Fp1 ",
            "Fp1.",
            "Fp1..",
            "Fp 1",
            "FP-1",
            "fp_1",
            "EEG Fp1",
            "EEG:Fp1",
            "EEG-Fp1",
            "EEGFp1",
            "POL Fp1",
            "EEG Fp1-Ref",
            "EEG FP1-LE",
            "Fp1-A1",
            "Fp1 - Avg",
            "Fp1–A1A2",
            "Fp1-(A1+A2)",
            "Fp1 [uV]",
            "Fp1/M2",
            "Fp1-Cz",
            "Fp1\u{0}",
        ] {
            assert_eq!(site_of(text), Some("Fp1"), "{text}");
            assert!(read(text).name.to_ascii_lowercase().starts_with("fp"), "{text}");
        }
        for (old, new) in [("T3", "T7"), ("EEG T4-Ref", "T8"), ("t5", "P7"), ("T6.", "P8")] {
            assert_eq!(site_of(old), Some(new));
        }
        assert_eq!(read("EEG T3-Ref").name, "T3", "shown as the user calls it");
        assert_eq!(site_of("FFT7H"), Some("FFT7h"));
        assert_eq!(site_of("m1"), Some("M1"));
    }

    #[test]
    fn what_is_no_site_is_not_made_one() {
        for text in [
            "", "...", "F1-0", "F1 0", "P10-", "Q1", "C3'", "Fp1*", "E12", "EEG001", "EEG", "Fp1x", "NasalFz", "é",
            "日本",
        ] {
            assert!(!matches!(site_of(text), Some("F10")), "{text}");
            if !["F1-0", "F1 0", "P10-"].contains(&text) {
                assert_eq!(read(text).kind, Kind::Unknown, "{text}");
            }
        }
        for (a, b) in [("EEG 001", "eeg001"), ("E12.", "E12"), ("E-12", "e12"), ("E12-Ref", "E12"), ("A 12", "A12")] {
            assert_eq!(read(a).key, read(b).key);
        }
        assert_ne!(read("EEG001").key, read("EEG002").key);
    }

    #[test]
    fn channels_beside_the_scalp_are_known() {
        for (text, other) in [
            ("HEOG", Other::Eye),
            ("EOG 061", Other::Eye),
            ("VEOGL", Other::Eye),
            ("EEG EOG1-Ref", Other::Eye),
            ("ROC", Other::Eye),
            ("IO1", Other::Eye),
            ("ECG", Other::Heart),
            ("EEG EKG1-REF", Other::Heart),
            ("EMG_chin", Other::Muscle),
            ("Chin2", Other::Muscle),
            ("REF", Other::Reference),
            ("GND", Other::Reference),
            ("STI 014", Other::Trigger),
            ("STI101", Other::Trigger),
            ("Status", Other::Trigger),
            ("TRIG", Other::Trigger),
            ("EDF Annotations", Other::Trigger),
            ("Photic-Ref", Other::Trigger),
            ("DC1", Other::Trigger),
            ("Resp", Other::Auxiliary),
            ("acc x", Other::Auxiliary),
            ("misc 001", Other::Auxiliary),
        ] {
            assert_eq!(read(text).kind, Kind::Other(other), "{text}");
        }
        assert_eq!(
            (read("E1-M2").key.as_str(), read("E1-M2").kind),
            ("e1", Kind::Unknown),
            "an eye, or one of a series"
        );
        assert_eq!(read("LOC-A2").kind, Kind::Other(Other::Eye));
        for (text, landmark) in
            [("NAS", Landmark::Nasion), ("LPA", Landmark::Left), ("rpa", Landmark::Right), ("Inion", Landmark::Inion)]
        {
            assert_eq!(read(text).kind, Kind::Landmark(landmark), "{text}");
        }
    }

    #[test]
    fn second_parts_are_references_or_sites() {
        let reference = |text: &str| Some(Second::Reference(text.into()));
        for (text, second) in [
            ("Fp1", None),
            ("EEG Fp1-Ref", reference("Ref")),
            ("C3-A2", reference("A2")),
            ("Fp1-A1+A2", reference("A1A2")),
            ("Fp1 linked ears", reference("linkedears")),
            ("Fp1-F7", Some(Second::Site(site("F7").unwrap()))),
            ("F7-T3", Some(Second::Site(site("T7").unwrap()))),
            ("EEG Fp1 - F-7", Some(Second::Site(site("F7").unwrap()))),
            ("Fp1-xy", Some(Second::Unknown("xy".into()))),
        ] {
            assert_eq!(read(text).second, second, "{text}");
        }
    }
}
