//! Tables are told apart by their content, labels find their standard places.
use inward_core::Vec3;
use inward_core::electrode::{Label, nearest_site, standard_position};
use inward_core::kind;
use inward_core::understand::Kind;
use inward_tests::{Draw, Electrodes, Mixture, PlainSeries, data, example};

fn headless(table: &str) -> String {
    table.split_once('\n').unwrap().1.into()
}

#[test]
fn electrodes_and_maps_are_told_apart() {
    let (electrodes, maps) = (example("watch_electrodes.tsv"), example("watch_maps.tsv"));
    let labels: String = maps.lines().skip(1).map(|line| format!("{}\n", line.split('\t').next().unwrap())).collect();
    let three: String = maps.lines().map(|line| line.rsplit_once('\t').unwrap().0.to_owned() + "\n").collect();
    for (text, expected) in [
        (electrodes.clone(), Kind::Electrodes),
        (headless(&electrodes), Kind::Electrodes),
        (electrodes.replace('\t', ";"), Kind::Electrodes),
        (labels, Kind::Electrodes),
        (maps.clone(), Kind::Maps),
        (headless(&maps), Kind::Maps),
        (three.clone(), Kind::Maps),
        (headless(&three), Kind::Maps),
        ("no table at all".into(), Kind::Maps),
        (String::new(), Kind::Maps),
    ] {
        assert_eq!(kind(text.as_bytes()), expected, "{text}");
    }
}

/// Three maps may by chance lie about on a sphere: rarely enough. Heads must never be missed.
#[test]
fn three_maps_without_a_header_are_hardly_ever_taken_for_positions() {
    let series = PlainSeries::standard();
    let mut draw = Draw::from(4);
    let (mut mistaken, mut all) = (0, 0);
    for count in [19, 32, 71] {
        let set = Electrodes::set(count);
        for _ in 0..60 {
            let maps = Mixture::many(&series, &set.directions, 0.85, 9, &mut draw);
            for three in maps.chunks(3) {
                let columns: Vec<(&str, &[f64])> = three.iter().map(|map| ("m", map.values.as_slice())).collect();
                mistaken += usize::from(kind(headless(&set.maps(&columns)).as_bytes()) != Kind::Maps);
                all += 1;
            }
            // In metres, a small head to a large one, measured carelessly.
            let positions = set.measured(draw.between(0.06, 0.1), Vec3::new(0.01, -0.02, 0.03), 0.008, &mut draw);
            assert_eq!(kind(headless(&set.table(&positions)).as_bytes()), Kind::Electrodes, "{count} electrodes");
        }
    }
    println!("{mistaken} of {all} triples of maps taken for positions");
    assert!(mistaken * 100 <= all, "{mistaken} of {all} triples of maps are taken for positions");
}

/// The idealised 10-10 system as the committed table has it, 12 digits.
#[test]
fn labels_stand_at_the_standard_positions() {
    let set = Electrodes::standard();
    assert_eq!(set.count(), data("standard_positions.csv").lines().count() - 1);
    for (label, &expected) in set.labels.iter().zip(&set.directions) {
        for written in [label.clone(), label.to_uppercase(), label.to_lowercase()] {
            let found = standard_position(&Label::new(&written)).unwrap_or_else(|| panic!("{written} is not known"));
            assert!((found - expected).norm() < 1e-11, "{written}: {found:?}, not {expected:?}");
        }
        assert_eq!(nearest_site(expected * 40.0), Some(label.as_str()));
    }
    for (old, new) in [("T3", "T7"), ("T4", "T8"), ("T5", "P7"), ("T6", "P8")] {
        assert_eq!(standard_position(&Label::new(old)), standard_position(&Label::new(new)));
    }
    assert_eq!(standard_position(&Label::new("E12")), None);
}
