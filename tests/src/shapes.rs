//! Files that belong together and ask much of whoever makes sense of them.

/// Files of about a given size together.
pub struct Shape {
    /// What they are.
    pub name: &'static str,
    /// By name.
    pub files: Vec<(String, Vec<u8>)>,
    /// How many names and labels they hold or are given.
    pub words: usize,
    /// Whether they are read to their end; others are refused.
    pub is_read: bool,
}

/// Labels of a cap with names of its own.
fn own(count: usize) -> Vec<String> {
    (0..count).map(|k| format!("S{k}")).collect()
}

/// A table of electrodes on half a sphere.
fn electrodes(labels: &[String]) -> String {
    let row = |(k, label): (usize, &String)| {
        let z = 1.0 - (k as f64 + 0.5) / labels.len() as f64 * 1.2;
        let (r, turn) = ((1.0 - z * z).sqrt() * 90.0, k as f64 * 2.4);
        format!("{label}\t{:.1}\t{:.1}\t{:.1}\n", r * turn.cos(), r * turn.sin(), 90.0 * z)
    };
    format!("label\tx\ty\tz\n{}", labels.iter().enumerate().map(row).collect::<String>())
}

fn digit(row: usize, column: usize) -> String {
    ((row * 7 + column * column * 3) % 10).to_string()
}

/// Rows of a label and values.
fn rows(labels: &[String], columns: usize, mark: &str, value: impl Fn(usize, usize) -> String) -> String {
    let row = |(row, label): (usize, &String)| {
        let values: String = (0..columns).map(|column| format!("{mark}{}", value(row, column))).collect();
        format!("{label}{values}\n")
    };
    labels.iter().enumerate().map(row).collect()
}

fn names(count: usize, mark: &str, name: impl Fn(usize) -> String) -> String {
    (0..count).map(|k| format!("{mark}{}", name(k))).collect()
}

/// End of the names of what is refused.
const REFUSED: &str = " (refused)";

/// Shapes of about `size` bytes.
pub fn shapes(size: usize) -> Vec<Shape> {
    let mut all: Vec<Shape> = Vec::new();
    let mut add = |name: &'static str, files: Vec<(&str, String)>, words| {
        let is_read = !name.ends_with(REFUSED);

        let files = files.into_iter().map(|(name, text)| (name.to_owned(), text.into_bytes())).collect();
        all.push(Shape { name, files, words, is_read });
    };
    let side = ((size / 4) as f64).sqrt() as usize;
    let (wide, ten) = (size / 28, own(10));
    let square = rows(&own(side), side, "\t", |i, j| format!("{}.{}", digit(i, j), digit(j, i)));
    add("a square of labels and maps", vec![("e", electrodes(&own(side))), ("m", square.clone())], 2 * side);
    add("a square without electrodes (refused)", vec![("m", square)], 2 * side);
    add("many maps in columns", vec![("e", electrodes(&ten)), ("m", rows(&ten, size / 16, "\t", digit))], size / 16);
    let named = names(wide, "\t", |k| format!("IC{k}"));
    let named = format!("label{named}\n{}", rows(&ten, wide, "\t", digit));
    add("many maps with names", vec![("e", electrodes(&ten)), ("m", named)], wide);
    let line = |columns: usize| (0..columns).map(|j| format!(",{}", digit(j, j))).collect::<String>() + "\n";
    let down = size / 30;
    let head = format!("map{}\n", names(10, ",", |k| format!("S{k}")));
    let below: String = (0..down).map(|k| format!("IC{k}{}", line(10))).collect();
    add("many maps in rows", vec![("e", electrodes(&ten)), ("m", head + &below)], down);
    add(
        "a matrix of numbers",
        vec![("e", electrodes(&own(512))), ("m", line(size / 1024).replacen(',', "", 1).repeat(512))],
        512,
    );
    let beside = |label: &str, place: &str| format!("{label}\t{}", place.replace('\n', &"\t1".repeat(size / 40)));
    let places = electrodes(&own(19));
    let both: String = places
        .lines()
        .skip(1)
        .map(|line| line.split_once('\t').unwrap())
        .map(|(label, place)| beside(label, &format!("{place}\n")) + "\n")
        .collect();
    add("values beside positions", vec![("b", both)], size / 40);
    let strangers = (0..size / 24).map(|k| format!("nobody {k:08}\t1\t2\n")).collect::<String>();
    add("labels that match nothing (refused)", vec![("e", electrodes(&own(64))), ("m", strangers.clone())], size / 24);
    let few = rows(&(0..512).map(|k| format!("nobody {k}")).collect::<Vec<_>>(), size / 1100, "\t", digit);
    add("512 labels that match nothing (refused)", vec![("e", electrodes(&own(512))), ("m", few)], 512);
    add(
        "a long list of labels (refused)",
        vec![("l", (0..size / 8).map(|k| format!("S{k}\n")).collect()), ("m", strangers)],
        size / 4,
    );
    let kinds: String = (0..size / 32)
        .map(|k| format!("S{k}\t{}\tuV\t{}\n", ["EEG", "MISC"][k % 2], ["good", "bad"][k % 3 / 2]))
        .collect();
    let channels = format!("name\ttype\tunits\tstatus\n{kinds}");
    add(
        "a long table of channels",
        vec![("c", channels), ("e", electrodes(&own(512))), ("m", rows(&own(512), 9, "\t", digit))],
        size / 32,
    );
    let long: String = (0..20).map(|k| format!("S{k}{}\t1\t{k}\n", "L".repeat(size / 20))).collect();
    add("labels without end (refused)", vec![("m", long)], 20);
    let list = |items: Vec<String>| format!("[{}]", items.join(","));
    let of = |count: usize, item: &mut dyn FnMut(usize) -> String| list((0..count).map(item).collect());
    let maps = of(64, &mut |i| of(size / 128, &mut |j| digit(i, j)));
    let places = electrodes(&own(64));
    let mut places = places.lines().skip(1).map(|line| line.split_once('\t').map_or("", |(_, place)| place));
    let positions = of(64, &mut |_| format!("[{}]", places.next().unwrap_or_default().replace('\t', ",")));
    let json =
        format!("{{\"labels\":{},\"positions\":{positions},\"maps\":{maps}}}", of(64, &mut |i| format!("\"S{i}\"")));
    add("JSON of labels, positions and maps", vec![("j", json)], size / 128);
    let records = of(size / 64, &mut |k| format!("{{\"label\":\"S{k}\",\"lamp\":{k},\"swell\":1.5,\"fog\":-2}}"));
    add("JSON records (refused)", vec![("j", records)], size / 64);
    let keys = (0..size / 20).map(|k| format!("\"S{k:06}\":[1,2,{}]", k % 9)).collect::<Vec<_>>().join(",");
    add("JSON of values under labels (refused)", vec![("j", format!("{{{keys}}}"))], size / 20);
    let tables = (0..size / 300)
        .map(|k| format!("\"t{k}\":[{}]", "[1,2,3,4,5],".repeat(20) + "[5,4,3,2,1]"))
        .collect::<Vec<_>>()
        .join(",");
    add("JSON of many tables (refused)", vec![("j", format!("{{{tables}}}"))], size / 300);
    let lists = (0..size / 40).map(|k| format!("\"w{k}\":[\"a\",\"b\",\"c\",\"d\"]")).collect::<Vec<_>>().join(",");
    add("JSON of many lists of words (refused)", vec![("j", format!("{{{lists},\"end\":1}}"))], size / 10);
    all
}
