//! Tables are told apart by their content, labels find their standard places.
use inward_core::Vec3;
use inward_core::electrode::{Label, nearest_site, standard_position};
use inward_core::understand::Kind;
use inward_core::{MapReport, Request, analyse, kind};
use inward_tests::{Draw, Electrodes, Mixture, PlainSeries, data, example};
use serde_json::json;

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

const LABELS: [&str; 20] = [
    "Fp1", "Fp2", "F7", "F3", "Fz", "F4", "F8", "T7", "C3", "Cz", "C4", "T8", "P7", "P3", "Pz", "P4", "P8", "O1", "Oz",
    "O2",
];

/// How many maps a table holds, and the first one's name and values.
fn first_map(electrodes: Option<&str>, maps: &str) -> (usize, String, Vec<f64>) {
    let (electrodes, maps) = (electrodes.map(str::as_bytes), maps.as_bytes());
    let report = analyse(&Request { electrodes, maps, ..Request::default() });
    let report = report.unwrap_or_else(|error| panic!("{error:?}: {}", String::from_utf8_lossy(maps)));
    let MapReport::Fitted(map) = &report.maps[0] else { panic!("{report:?}") };
    (report.maps.len(), map.name.clone(), map.measured.clone())
}

/// Tables that could be taken for more than they hold, or the wrong way round.
#[test]
fn tables_hold_what_a_reader_sees_in_them() {
    let places: Vec<Vec3> = LABELS.iter().map(|label| standard_position(&Label::new(label)).unwrap()).collect();
    let values: Vec<String> = places.iter().map(|p| format!("{:.1}", 10.0 * p[0] - 4.0 * p[1] * p[2] + 3.05)).collect();
    let table = |row: &dyn Fn(usize) -> String| (0..LABELS.len()).map(|i| row(i) + "\n").collect::<String>();
    let place = |i: usize| format!("{}\t{}\t{}", 90.0 * places[i][0], 90.0 * places[i][1], 90.0 * places[i][2]);
    let plain = table(&|i| format!("{}\t{}", LABELS[i], values[i]));
    let electrodes = table(&|i| format!("{}\t{}", LABELS[i], place(i)));
    let expected = first_map(Some(&electrodes), &plain).2;
    let same = |electrodes: Option<&str>, maps: &str, count: usize, name: &str| {
        let (found, first, measured) = first_map(electrodes, maps);
        assert_eq!((found, first.as_str()), (count, name), "{maps}");
        assert!(measured.iter().zip(&expected).all(|(a, b)| (a - b).abs() < 1e-9), "{maps}");
    };
    let comma = table(&|i| values[i].replace('.', ","));
    same(Some(&electrodes), &comma, 1, "map 1");
    // Numbers of rows before the labels, picked, sorted or counted down.
    for number in [|i: usize| 2 * i + 3, |i: usize| i + 1 + usize::from(i > 4), |i: usize| 20 - i] {
        same(None, &table(&|i| format!("{}\t{}\t{}", number(i), LABELS[i], values[i])), 1, "map 1");
        let electrodes = table(&|i| format!("{}\t{}\t{}", number(i), LABELS[i], place(i)));
        same(Some(&electrodes), &plain, 1, "map 1");
    }
    // Values beside positions without names, or with names of their own.
    let beside = table(&|i| format!("{}\t{}\t{}", LABELS[i], place(i), values[i]));
    same(None, &beside, 1, "map 1");
    same(None, &format!("label\tpos_x\tpos_y\tpos_z\tleft\n{beside}"), 1, "left");
    // Maps in rows: named like sites, by times, by numbers.
    let row = values.join("\t");
    for (corner, names) in [("map", ["M1", "M2", "F3"]), ("time", ["-4", "0", "4"]), ("", ["0", "1", "2"])] {
        let rows: String = names.iter().map(|name| format!("{name}\t{row}\n")).collect();
        same(None, &format!("{corner}\t{}\n{rows}", LABELS.join("\t")), 3, names[0]);
    }
    // Neither table has words: numbers name the electrodes, else their order.
    let numbered = table(&|i| format!("{}\t{}", i + 1, place(i)));
    let bare = table(&place);
    same(Some(&numbered), &table(&|i| format!("{}\t{}", i + 1, values[i])), 1, "map 1");
    same(Some(&bare), &table(&|i| values[i].clone()), 1, "map 1");
    let backwards: String = (0..20).rev().map(|i| format!("{}\t{}\n", i + 1, values[i])).collect();
    let (count, _, measured) = first_map(Some(&numbered), &backwards);
    assert_eq!(count, 1);
    assert!(measured.iter().rev().zip(&expected).all(|(a, b)| (a - b).abs() < 1e-9));
    // Angles named theta and phi, whichever comes first.
    for elevation in [false, true] {
        let polar = |p: Vec3| if elevation { p[2].asin() } else { p[2].acos() }.to_degrees();
        let row = |i: usize| {
            format!("{}\t{}\t{}", LABELS[i], places[i][1].atan2(places[i][0]).to_degrees(), polar(places[i]))
        };
        same(Some(&format!("label\ttheta\tphi\n{}", table(&row))), &plain, 1, "map 1");
    }
    // A letter is no list of labels, a page of the web no table.
    for text in ["Dear all,\nthe weather\nis fine,\n", "<!DOCTYPE html><p>Fp1", "{\\rtf1 Fp1"] {
        assert_eq!(kind(text.as_bytes()), Kind::Maps, "{text}");
        let request = Request { maps: text.as_bytes(), ..Request::default() };
        assert!(analyse(&request).is_err());
    }
}

/// Positions given apart replace those that stand beside the values, in one table or in another part of the file, and the
/// report says so.
#[test]
fn positions_given_apart_replace_those_beside_the_values() {
    let (electrodes, maps) = (example("watch_electrodes.tsv"), example("watch_maps.tsv"));
    let rows =
        |table: &str| table.lines().map(|line| line.split('\t').map(String::from).collect()).collect::<Vec<Vec<_>>>();
    let (places, values) = (rows(&electrodes), rows(&maps));
    let beside = |from: usize, label: &str| -> String {
        let row = |row: usize| {
            // Other positions: every electrode where the next one is.
            let place = places.get(row + usize::from(row > 0)).unwrap_or(&places[1]);
            format!("{}\t{}\t{}\n", places[row][0].replace("label", label), place[1..].join("\t"), values[row][1])
        };
        (from..places.len()).map(row).collect()
    };
    let positions = json!(places[1..].iter().skip(1).chain([&places[1]]).map(|row| numbers(row)).collect::<Vec<_>>());
    let labels = json!(places[1..].iter().map(|row| &row[0]).collect::<Vec<_>>());
    let column = json!(values[1..].iter().map(|row| [row[1].parse::<f64>().unwrap()]).collect::<Vec<_>>());
    let parts = json!({ "labels": labels, "positions": positions, "maps": column }).to_string();
    let only = |files: &[(&str, &[u8])]| {
        let report = analyse(&Request { files: files.to_vec(), ..Request::default() })
            .unwrap_or_else(|error| panic!("{error:?}"));
        let MapReport::Fitted(map) = &report.maps[0] else { panic!("{report:?}") };
        let noted =
            report.notes.iter().any(|note| note.code.as_str() == "part-unused" && note.message.contains("both"));
        (map.dipole.position_mm, report.maps.len(), noted)
    };
    let one: String = values.iter().map(|row| format!("{}\t{}\n", row[0], row[1])).collect();
    let expected = only(&[("one", one.as_bytes()), ("apart", electrodes.as_bytes())]);
    assert_eq!((expected.1, expected.2), (1, false));
    for both in [beside(0, "label"), beside(1, "label"), parts] {
        let own = only(&[("both", both.as_bytes())]);
        assert!((own.0 - expected.0).norm() > 5.0 && !own.2, "positions of its own: {own:?}");
        for files in [
            [("both", both.as_bytes()), ("apart", electrodes.as_bytes())],
            [("apart", electrodes.as_bytes()), ("both", both.as_bytes())],
        ] {
            assert_eq!(only(&files), (expected.0, 1, true), "{both}");
        }
    }
}

fn numbers(row: &[String]) -> Vec<f64> {
    row[1..].iter().map(|number| number.parse().unwrap()).collect()
}
