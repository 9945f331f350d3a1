//! Invented tables written in every way that leaves no doubt are read back as the same electrodes and maps: bit for bit in
//! the unit of the table, within two units in the last place in millimetres.
use inward_core::Vec3;
use inward_core::placement::{self, place};
use inward_core::read::{is_label_name, is_missing, number, number_with_comma};
use inward_core::report::ErrorReport;
use inward_tests::{Draw, Electrodes, understood};
use serde_json::json;
use std::collections::{BTreeMap, HashSet};

/// Tables that are tried, unless `INWARD_CASES` says how many; the later the larger, so that the first that fails is about
/// the smallest.
const CASES: u64 = 6000;

/// What is to be written and read.
struct Watch {
    electrodes: Vec<(String, [f64; 3])>,
    /// In an order of their own.
    labels: Vec<String>,
    /// Of the maps; empty where they have none.
    names: Vec<String>,
    /// By label, then map.
    values: Vec<Vec<f64>>,
}

/// How text is written.
struct Hand {
    mark: &'static str,
    comma: bool,
    quote_all: bool,
    end: &'static str,
    /// Behind every line.
    tail: String,
    /// Whether fields stand in columns of characters.
    fixed: bool,
    missing: &'static str,
}

fn pick<T: Copy>(draw: &mut Draw, of: &[T]) -> T {
    of[draw.below(of.len())]
}

fn chance(draw: &mut Draw, percent: usize) -> bool {
    draw.below(100) < percent
}

/// A word that is no number, no gap and no usual name; plain, or with what needs quotes.
fn word(draw: &mut Draw, plain: bool) -> String {
    let pieces: &[&str] = if plain {
        &["a", "Q", "x7", "é", "ß", "µ", "b_", "K-", "9", "Ω", "日", ".", "Z", "(", "'", "u"]
    } else {
        &[
            "a", "Q", "x7", "é", " ", ",", ";", "\"", "\t", "\n", "\r\n", "#", "%", "ß", "1,5", "\u{202e}", "<b>", "'",
            "Z",
        ]
    };
    loop {
        let word: String = (0..1 + draw.below(5)).map(|_| pick(draw, pieces)).collect();
        let letter = word.starts_with(|c: char| c.is_alphabetic());
        let known = is_missing(&word) || is_label_name(&word) || number(&word).or(number_with_comma(&word)).is_some();
        if letter && !known && word.trim() == word && !word.ends_with('\'') {
            return word;
        }
    }
}

fn words(draw: &mut Draw, count: usize, plain: bool) -> Vec<String> {
    let mut seen = HashSet::new();
    std::iter::repeat_with(|| word(draw, plain)).filter(|word| seen.insert(word.to_lowercase())).take(count).collect()
}

/// A value of any size, sometimes whole, sometimes nought.
fn value(draw: &mut Draw) -> f64 {
    match draw.below(12) {
        0 => draw.between(-99.0, 99.0).round(),
        1 => pick(draw, &[0.0, -0.0]),
        2 => draw.normal() * 10f64.powf(draw.between(-90.0, 90.0)),
        3 => f64::NAN,
        _ => draw.normal() * 10f64.powf(draw.between(-6.0, 3.0)),
    }
}

fn watch(draw: &mut Draw, most: usize, plain: bool) -> (Watch, Vec<Vec3>, f64) {
    let count = 10 + draw.below(most);
    let all = Electrodes::standard();
    let sites = chance(draw, 50);
    let set = if sites {
        let order = draw.order(all.count());
        all.only(&order[..count.min(all.count())])
    } else {
        Electrodes { labels: words(draw, count, plain), ..Electrodes::spread(count, -0.3) }
    };
    let count = set.count();
    let centre = draw.direction() * draw.between(0.0, 40.0);
    let radius = draw.between(45.0, 115.0);
    let positions = set.measured(radius, centre, 2.0, draw);
    let millimetres = pick(draw, &[1.0, 10.0, 1000.0]);
    let electrodes = set.labels.iter().cloned().zip(positions.iter().map(|p| p.0.map(|x| x / millimetres))).collect();
    let order = draw.order(count);
    let maps = 1 + draw.below(6);
    let names = words(draw, maps, plain);
    let mut values: Vec<Vec<f64>> = (0..count).map(|_| (0..maps).map(|_| value(draw)).collect()).collect();
    // Something to tell decimals and values by.
    values.iter_mut().take(3).flatten().for_each(|value| *value = draw.normal());
    let labels = order.iter().map(|&at| set.labels[at].clone()).collect();
    (Watch { electrodes, labels, names, values }, positions, millimetres)
}

fn hand(watch: &Watch, draw: &mut Draw) -> Hand {
    let mark = pick(draw, &["\t", ";", ",", " "]);
    let comma = chance(draw, 40);
    let even = watch.labels.iter().chain(&watch.names).all(|word| !word.contains(['\t', '\n', '\r', '"', ',', ';']));
    let fixed = mark == " " && even && chance(draw, 40);
    let tail = match mark {
        " " => " ".repeat(draw.below(3)),
        mark => mark.repeat(pick(draw, &[0, 0, 0, 1, 3])),
    };
    Hand {
        mark,
        comma,
        quote_all: !fixed && chance(draw, 25),
        end: pick(draw, &["\n", "\n", "\r\n", "\r"]),
        tail: if fixed { String::new() } else { tail },
        fixed,
        missing: if mark == " " || chance(draw, 50) { pick(draw, &["n/a", "NaN", "NA", "nan"]) } else { "" },
    }
}

impl Hand {
    fn number(&self, value: f64, draw: &mut Draw) -> String {
        if value.is_nan() {
            return self.missing.into();
        }
        let plain = match draw.below(6) {
            0 => format!("{value:e}"),
            1 => format!("{value:E}"),
            2 if value.is_sign_positive() => format!("+{value}"),
            3 if value.abs() < 1.0 && value != 0.0 => value.to_string().replacen("0.", ".", 1),
            _ => value.to_string(),
        };
        if self.comma { plain.replace('.', ",") } else { plain }
    }

    fn field(&self, field: &str) -> String {
        let odd =
            |c: char| if self.mark == " " { c.is_whitespace() || ",;".contains(c) } else { self.mark.contains(c) };
        let needed = field.contains(odd) || field.contains(['"', '\n', '\r']) || field.starts_with(['#', '%']);
        if self.fixed || !(needed || self.quote_all || field.is_empty() && self.mark == " ") {
            return field.into();
        }
        format!("\"{}\"", field.replace('"', "\"\""))
    }

    fn text(&self, rows: &[Vec<String>], draw: &mut Draw) -> String {
        let mut lines: Vec<String> = if self.fixed {
            let width = |column: usize| rows.iter().map(|row| row[column].chars().count()).max().unwrap() + 2;
            let widths: Vec<usize> = (0..rows[0].len()).map(width).collect();
            let line =
                |row: &Vec<String>| row.iter().zip(&widths).map(|(field, &width)| format!("{field:width$}")).collect();
            rows.iter().map(line).collect()
        } else {
            let mut line = |row: &Vec<String>| {
                let mark = if self.mark == " " { " ".repeat(1 + draw.below(4)) } else { self.mark.to_owned() };
                row.iter().map(|field| self.field(field)).collect::<Vec<_>>().join(&mark) + &self.tail
            };
            rows.iter().map(&mut line).collect()
        };
        for _ in 0..draw.below(3) {
            let at = draw.below(lines.len() + 1);
            lines.insert(at, pick(draw, &["", "# a remark, of; some", "% 1 2 3", "  "]).to_owned());
        }
        let last = if chance(draw, 80) { self.end } else { "" };
        lines.join(self.end) + last
    }
}

fn encoded(text: &str, draw: &mut Draw) -> Vec<u8> {
    let marked =
        |units: &dyn Fn(u16) -> [u8; 2]| "\u{feff}".encode_utf16().chain(text.encode_utf16()).flat_map(units).collect();
    match draw.below(8) {
        0 => marked(&u16::to_le_bytes),
        1 => marked(&u16::to_be_bytes),
        2 => format!("\u{feff}{text}").into(),
        3 if text.chars().all(|c| u32::from(c) < 0x100) => {
            let bytes: Vec<u8> = text.chars().map(|c| c as u8).collect();
            // Some pairs of letters are one letter of UTF-8.
            if std::str::from_utf8(&bytes).is_ok() { text.into() } else { bytes }
        }
        _ => text.into(),
    }
}

fn electrode_text(watch: &Watch, draw: &mut Draw) -> Vec<u8> {
    let hand = hand(watch, draw);
    // A few electrodes of chance need not look like a head.
    let named = hand.fixed || watch.electrodes.len() < 19 || chance(draw, 60);
    let numbered = chance(draw, 20);
    let mut head: Vec<String> = vec![label_name(&hand, watch, draw)];
    let unit = pick(draw, &["", "", "_pos", " (unit)"]);
    head.extend(["x", "y", "z"].map(|axis| format!("{axis}{}", if hand.mark == " " { "" } else { unit })));
    let mut rows: Vec<Vec<String>> = vec![head];
    for (label, position) in &watch.electrodes {
        let numbers = position.iter().map(|&value| hand.number(value, draw));
        rows.push(std::iter::once(label.clone()).chain(numbers).collect());
    }
    let order = if named { draw.order(4) } else { pick(draw, &[[0, 1, 2, 3], [1, 2, 3, 0], [1, 0, 2, 3]]).to_vec() };
    for (number, row) in rows.iter_mut().enumerate() {
        *row = order.iter().map(|&at| row[at].clone()).collect();
        if numbered {
            row.insert(0, if number == 0 { "no".into() } else { number.to_string() });
        }
    }
    encoded(&hand.text(&rows[usize::from(!named)..], draw), draw)
}

/// A name above the labels; in fixed columns as wide as they are, so that no blank runs through all of them.
fn label_name(hand: &Hand, watch: &Watch, draw: &mut Draw) -> String {
    let widest = watch.labels.iter().map(|label| label.chars().count()).max().unwrap_or(0);
    match hand.fixed {
        true => format!("label{}", "_".repeat(widest)),
        false => pick(draw, &["label", "Name", "ELECTRODE", "channel", "Kanal"]).into(),
    }
}

fn map_text(watch: &mut Watch, draw: &mut Draw) -> Vec<u8> {
    let hand = hand(watch, draw);
    let mut numbers = |values: &[f64]| values.iter().map(|&value| hand.number(value, draw)).collect::<Vec<_>>();
    let values: Vec<Vec<String>> = watch.values.iter().map(|values| numbers(values)).collect();
    let in_rows = hand.fixed || chance(draw, 60);
    let named = hand.fixed || chance(draw, 75);
    let mut rows: Vec<Vec<String>> = Vec::new();
    if in_rows {
        // Three unnamed columns may be positions.
        let named = named || watch.names.len() == 3;
        if named {
            rows.push(std::iter::once(label_name(&hand, watch, draw)).chain(watch.names.iter().cloned()).collect());
        } else {
            watch.names.clear();
        }
        let place = if chance(draw, 75) || hand.fixed { 0 } else { draw.below(values[0].len() + 1) };
        for (label, values) in watch.labels.iter().zip(&values) {
            rows.push(values.clone());
            rows.last_mut().unwrap().insert(place, label.clone());
        }
        if let Some(head) = rows.first_mut().filter(|_| named) {
            let label = head.remove(0);
            head.insert(place, label);
        }
    } else {
        rows.push(watch.labels.clone());
        for (map, name) in watch.names.iter().enumerate() {
            rows.push(values.iter().map(|row| row[map].clone()).collect());
            if named {
                rows.last_mut().unwrap().insert(0, name.clone());
            }
        }
        if named {
            rows[0].insert(0, pick(draw, &["map", "", "label", "Karte"]).into());
        } else {
            watch.names.clear();
        }
    }
    let title =
        if hand.mark != " " && rows[0].len() > 1 && rows.len() > 3 && chance(draw, 15) { "A night" } else { "" };
    let text = hand.text(&rows, draw);
    encoded(&if title.is_empty() { text } else { format!("{title}{}{text}", hand.end) }, draw)
}

/// JSON, of numbers as they are; a missing one is null.
fn map_json(watch: &mut Watch, draw: &mut Draw) -> Vec<u8> {
    let number = |value: f64| if value.is_nan() { "null".to_owned() } else { format!("{value:e}") };
    let list = |items: Vec<String>, mark: &str| format!("[{}]", items.join(mark));
    let row = |(label, values): (&String, &Vec<f64>)| {
        list(std::iter::once(json!(label).to_string()).chain(values.iter().map(|&value| number(value))).collect(), ", ")
    };
    let rows = |watch: &Watch| watch.labels.iter().zip(&watch.values).map(row).collect::<Vec<_>>();
    let head =
        |watch: &Watch| json!(std::iter::once(&"label".to_owned()).chain(&watch.names).collect::<Vec<_>>()).to_string();
    let text = match draw.below(5) {
        0 => list([vec![head(watch)], rows(watch)].concat(), ",\n "),
        1 => {
            if watch.names.len() == 3 {
                watch.names.pop();
                watch.values.iter_mut().for_each(|values| values.truncate(2));
            }
            watch.names.clear();
            list(rows(watch), ",\n ")
        }
        2 => {
            let record = |(label, values): (&String, &Vec<f64>)| {
                let fields = watch
                    .names
                    .iter()
                    .zip(values)
                    .map(|(name, &value)| format!(", {}: {}", json!(name), number(value)));
                format!("{{\"label\": {}{}}}", json!(label), fields.collect::<String>())
            };
            list(watch.labels.iter().zip(&watch.values).map(record).collect(), ",\n ")
        }
        3 => {
            let column = |(at, name): (usize, &String)| {
                format!(",\n{}: {}", json!(name), list(watch.values.iter().map(|row| number(row[at])).collect(), ", "))
            };
            format!(
                "{{\"label\": {}{}}}",
                json!(watch.labels),
                watch.names.iter().enumerate().map(column).collect::<String>()
            )
        }
        _ => {
            let turned = chance(draw, 50);
            let of = |row: &Vec<f64>| list(row.iter().map(|&value| number(value)).collect(), ", ");
            let maps = if turned {
                (0..watch.names.len()).map(|map| of(&watch.values.iter().map(|row| row[map]).collect())).collect()
            } else {
                watch.values.iter().map(of).collect()
            };
            let square = watch.labels.len() == watch.names.len();
            assert!(!square, "electrodes are more than maps");
            let names = json!(watch.names);
            let named = watch.names.len() > 1 && chance(draw, 50);
            if !named {
                watch.names.clear();
            }
            // A column by itself is named like any other.
            if watch.values[0].len() == 1 && !turned {
                watch.names.push("maps".into());
            }
            let names = if named { format!(", \"names\": {names}") } else { String::new() };
            format!("{{\"labels\": {}, \"maps\": {}{names}}}", json!(watch.labels), list(maps, ",\n"))
        }
    };
    text.into()
}

/// An array of numbers of eight bytes.
fn npy(rows: &[Vec<f64>], draw: &mut Draw) -> Vec<u8> {
    let (high_first, columns_first) = (chance(draw, 50), chance(draw, 50));
    let (height, width) = (rows.len(), rows[0].len());
    let order = if columns_first { "True" } else { "False" };
    let kind = if high_first { ">f8" } else { "<f8" };
    let head = format!("{{'descr': '{kind}', 'fortran_order': {order}, 'shape': ({height}, {width}), }}\n");
    let bytes = |value: f64| if high_first { value.to_be_bytes() } else { value.to_le_bytes() };
    let at = |index: usize| {
        if columns_first { rows[index % height][index / height] } else { rows[index / width][index % width] }
    };
    let length = (head.len() as u16).to_le_bytes();
    let numbers = (0..height * width).flat_map(|index| bytes(at(index)));
    [b"\x93NUMPY\x01\x00", &length[..], head.as_bytes()].concat().into_iter().chain(numbers).collect()
}

/// Files that hold all of it; what they do not hold is taken out of the watch.
fn written(watch: &mut Watch, draw: &mut Draw) -> Vec<Vec<u8>> {
    match draw.below(10) {
        0 => {
            // Labels and values by order.
            watch.names.clear();
            let turned = chance(draw, 50);
            let maps = watch.values[0].len();
            let rows = if turned {
                (0..maps).map(|map| watch.values.iter().map(|row| row[map]).collect()).collect()
            } else {
                watch.values.clone()
            };
            vec![electrode_text(watch, draw), npy(&rows, draw), json!(watch.labels).to_string().into()]
        }
        1 | 2 => vec![electrode_text(watch, draw), map_json(watch, draw)],
        3 => {
            let record = |(label, p): &(String, [f64; 3])| json!({ "name": label, "x": p[0], "y": p[1], "z": p[2] });
            let electrodes = json!(watch.electrodes.iter().map(record).collect::<Vec<_>>()).to_string();
            vec![electrodes.into(), map_text(watch, draw)]
        }
        _ => vec![electrode_text(watch, draw), map_text(watch, draw)],
    }
}

fn shown(files: &[Vec<u8>]) -> String {
    let text = |file: &Vec<u8>| {
        let units = |unit: fn([u8; 2]) -> u16| {
            String::from_utf16_lossy(&file.as_chunks().0.iter().map(|&pair| unit(pair)).collect::<Vec<_>>())
        };
        match file.as_slice() {
            [0xff, 0xfe, ..] => units(u16::from_le_bytes),
            [0xfe, 0xff, ..] => units(u16::from_be_bytes),
            _ => String::from_utf8_lossy(file).into_owned(),
        }
    };
    files.iter().map(|file| format!("{:?}\n", text(file))).collect()
}

#[test]
fn what_is_written_without_doubt_is_read_back() {
    let cases = std::env::var("INWARD_CASES").ok().and_then(|text| text.parse().ok()).unwrap_or(CASES);
    let mut faults = Vec::new();
    let mut placed = 0;
    for seed in 0..cases {
        let mut draw = Draw::from(seed);
        let plain = chance(&mut draw, 60);
        let (mut watch, positions, millimetres) = watch(&mut draw, 1 + (seed % CASES) as usize / 120, plain);
        let files = written(&mut watch, &mut draw);
        let order = draw.order(files.len());
        let given: Vec<(&str, &[u8])> = order.iter().map(|&at| (["a", "b", "c"][at], files[at].as_slice())).collect();
        let mut fault = |what: String| faults.push(format!("seed {seed}: {what}\n{}", shown(&files)));
        let read = match understood(&given, &Default::default()) {
            Ok(read) => read,
            Err(error) => {
                let error = ErrorReport::from(&error);
                fault(format!("{} {:?}", error.message, error.place));
                continue;
            }
        };
        let bits =
            |values: &[f64]| values.iter().map(|v| if v.is_nan() { u64::MAX } else { v.to_bits() }).collect::<Vec<_>>();
        let electrodes = read.electrodes.clone().unwrap_or_default();
        let found: Vec<_> = electrodes.iter().map(|e| (e.label.to_string(), e.position.map(|p| bits(&p.0)))).collect();
        let told: Vec<_> = watch.electrodes.iter().map(|(label, p)| (label.clone(), Some(bits(p)))).collect();
        if found != told {
            fault(format!("electrodes {found:?}\nnot {told:?}"));
            continue;
        }
        let labels: Vec<String> = read.maps.labels.iter().map(|label| label.to_string()).collect();
        let unnamed = (1..=read.maps.names.len()).map(|number| format!("map {number}")).collect();
        let names = if watch.names.is_empty() { unnamed } else { watch.names.clone() };
        if (&labels, &read.maps.names) != (&watch.labels, &names) {
            fault(format!("labels {labels:?} and names {:?}\nnot {:?} and {names:?}", read.maps.names, watch.labels));
            continue;
        }
        let values: Vec<_> = read.maps.values.rows().into_iter().map(|row| bits(&row.to_vec())).collect();
        if values != watch.values.iter().map(|row| bits(row)).collect::<Vec<_>>() {
            let apart =
                values.iter().flatten().zip(watch.values.iter().flatten()).position(|(a, b)| *a != bits(&[*b])[0]);
            let both = apart.map(|at| (read.maps.values.iter().nth(at), watch.values.iter().flatten().nth(at)));
            fault(format!("the first value that differs: {both:?}"));
            continue;
        }
        // Labels that tell more than themselves are for other tests.
        let Ok(placement) = place(Some(&electrodes), &read.maps, &placement::Wishes::default()) else { continue };
        placed += 1;
        let told: BTreeMap<String, Vec3> =
            watch.electrodes.iter().map(|(label, _)| label.clone()).zip(positions).collect();
        for electrode in &placement.electrodes {
            let told = told[electrode.label.as_str()];
            let apart =
                |axis: usize| (electrode.position_mm[axis].to_bits() as i64).abs_diff(told[axis].to_bits() as i64);
            if (0..3).any(|axis| apart(axis) > if millimetres == 1.0 { 0 } else { 2 }) {
                fault(format!("{} at {:?} mm, not {told:?}", electrode.label, electrode.position_mm));
            }
        }
    }
    println!("{placed} of {cases} placed on a head");
    let shown = faults.iter().take(12).map(|fault| fault.chars().take(3000).collect::<String>()).collect::<Vec<_>>();
    assert!(faults.is_empty(), "{} of {cases}\n{}", faults.len(), shown.join("\n"));
    assert!(placed > cases / 2, "{placed} of {cases} placed on a head");
}
