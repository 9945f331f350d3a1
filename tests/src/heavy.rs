use crate::{Draw, level5};

/// A file of about a given size that asks much of its reader.
pub struct Heavy {
    /// What it is.
    pub name: &'static str,
    /// Its content.
    pub file: Vec<u8>,
    /// Bytes that unpacking it gives.
    pub unpacked: usize,
}

/// Files of about `size` bytes for each reader, a multiple of 65,536.
pub fn heavy(size: usize) -> Vec<Heavy> {
    let mut draw = Draw::from(11);
    let mut noise = |count: usize| -> Vec<u8> { (0..count).map(|_| (draw.between(0.0, 256.0)) as u8).collect() };
    let doubles: Vec<u8> = (0..size / 8).flat_map(|k| (k as f64 * 0.001 - 7.0).to_le_bytes()).collect();
    let bytes = noise(size);
    let mut all = Vec::new();
    let mut add = |name, file: Vec<u8>, unpacked| all.push(Heavy { name, file, unpacked });

    let columns = size / 8 / 64;
    add("npy of f8", npy("<f8", "False", (64, columns), &doubles), 0);
    add("npy of f8, columns first", npy("<f8", "True", (64, columns), &doubles), 0);
    add("npy of i1", npy("|i1", "False", (512, size / 512), &bytes), 0);
    add("npy of i1, columns first", npy("|i1", "True", (512, size / 512), &bytes), 0);
    let letters: Vec<u8> = bytes.iter().map(|byte| b'a' + byte % 26).collect();
    add("npy of words", npy("|S16", "False", (size / 16, 1), &letters), 0);
    let wide: Vec<u8> = letters.iter().take(size / 4).flat_map(|&letter| u32::from(letter).to_le_bytes()).collect();
    add("npy of cells", npy("<U8", "True", (size / 32 / 8, 8), &wide), 0);

    let plain = level5::matrix(6, 64, columns, "A", &level5::element(9, &doubles));
    let short = level5::matrix(6, 512, size / 512, "A", &level5::element(1, &bytes));
    add("mat of doubles", level5::file(std::slice::from_ref(&plain)), 0);
    add("mat of doubles in bytes", level5::file(std::slice::from_ref(&short)), 0);
    add("mat, packed", level5::file(&[level5::packed(&plain)]), size);
    add("mat of bytes, packed", level5::file(&[level5::packed(&short)]), size);
    let one = level5::word("Fp1");
    let count = size / one.len();
    add("mat of words", level5::file(&[level5::matrix(1, count, 1, "labels", &one.repeat(count))]), 0);
    let nothing = level5::element(14, &[]);
    add(
        "mat of empty cells",
        level5::file(&[level5::matrix(1, 256, size / 8 / 256, "c", &nothing.repeat(size / 8))]),
        0,
    );
    let number = level5::matrix(6, 1, 1, "", &level5::element(9, &1.5_f64.to_le_bytes()));
    let row = [one.clone(), number.clone(), nothing.clone(), number.clone()].concat();
    let names = [4_u32.to_le_bytes().to_vec(), b"lab\0x\0\0\0y\0\0\0z\0\0\0".to_vec()];
    let fields = [level5::element(5, &names[0]), level5::element(1, &names[1])].concat();
    let count = size / row.len();
    let records = [fields, row.repeat(count)].concat();
    add("mat of records", level5::file(&[level5::matrix(2, count, 1, "r", &records)]), 0);
    let mixed = [one, number.clone()].concat();
    let count = size / mixed.len();
    add("mat of mixed cells", level5::file(&[level5::matrix(1, 2, count, "m", &mixed.repeat(count))]), 0);
    let small = level5::matrix(6, 1, 1, "abc", &level5::element(9, &1.5_f64.to_le_bytes()));
    add("mat of many variables", level5::file(&vec![small.clone(); size / small.len()]), 0);
    let pack = level5::packed(&small);
    add(
        "mat of many packed variables",
        level5::file(&vec![pack.clone(); size / pack.len()]),
        size / pack.len() * small.len(),
    );
    let sparse = level5::matrix(5, 1, 1, "S", &[]);
    add("mat of what is passed over", level5::file(&vec![sparse.clone(); size / sparse.len()]), 0);

    add("text of numbers", lines(size, |k| format!("E{k}"), |k| format!("\t{:.3}", (k as f64 * 0.7).sin()), 64), 0);
    add("text of decimal commas", lines(size, |k| format!("E{k}"), |k| format!(";{},5", k % 97), 64), 0);
    add("text of blanks", lines(size, |_| "Cz".into(), |_| "   1".into(), 64), 0);
    add("text of narrow columns", lines(size, |_| "a".into(), |_| "\t1".into(), 512), 0);
    add("text of quotes", lines(size, |k| format!("\"E,{k}\""), |_| ",\"1\"".into(), 64), 0);
    add("text of quotes in quotes", [&b"a,\""[..], &b"\"\"".repeat(size / 2 - 4), b"\"\n"].concat(), 0);
    add("text of open quotes", lines(size, |_| "\"a \"b".into(), |_| ",\"1".into(), 16), 0);
    add("text in one line", b"1 ".repeat(size / 2), 0);
    let wide = lines(size / 2, |_| "Cz".into(), |_| "\t1".into(), 64);
    let wide = wide.iter().flat_map(|&letter| [letter, 0]).collect::<Vec<u8>>();
    add("text in UTF-16", [&b"\xff\xfe"[..], &wide].concat(), 0);
    add("text in Latin-1", b"\xb5V \xe9\xe9\xe9\xe9\xe9\xe9\xe9\xe9\xe9,1.5\n".repeat(size / 17), 0);
    add("text of remarks", b"# remark\n".repeat(size / 9), 0);
    add("text of empty lines", [b"Cz 1".to_vec(), b"\r".repeat(size)].concat(), 0);
    let rows = |row: &str, end: &str| format!("[{}{end}]", row.repeat(size / row.len()));
    add("json matrix", rows(&format!("[{}3e-2],", "1,-2.5,".repeat(32)), "[1]").into_bytes(), 0);
    add("json list", rows("0,", "1").into_bytes(), 0);
    add("json words", rows("\"electrode 0001\",", "\"\"").into_bytes(), 0);
    add("json records", rows("{\"label\":\"Cz\",\"x\":1},", "{}").into_bytes(), 0);
    add(
        "json keys",
        {
            let keys: String = (0..size / 16).map(|k| format!("\"key{k:07}\":[],")).collect();
            format!("{{{keys}\"end\":1}}").into_bytes()
        },
        0,
    );
    add(
        "json of distinct keys",
        {
            let record = |k: usize| (0..size >> 14).map(|j| format!("\"{k:04}{j:03}\":12345,")).collect::<String>();
            let records: String = (0..1000).map(|k| format!("{{{}\"x\":1}},", record(k))).collect();
            format!("[{records}{{}}]").into_bytes()
        },
        0,
    );
    let object = |value: &str| {
        let count = size / (value.len() + 11);
        let keys: String = (0..count).map(|k| format!("\"k{k:06}\":{value},")).collect();
        format!("{{{keys}\"end\":1}}").into_bytes()
    };
    add("json of refused lists", object("[1,[2,[3]]]"), 0);
    add("json of many matrices", object("[[1,2],[3,4]]"), 0);
    add("json of many tables", object("[{\"a\":1},{\"a\":2}]"), 0);
    add("json of spoilt numbers", object("[1e999,1]"), 0);
    add("json deep", "[".repeat(size).into_bytes(), 0);
    add("json nested", rows("[[[[[[[[1]]]]]]]],", "1").into_bytes(), 0);
    add("json escapes", format!("[\"{}\"]", "\\u00e9".repeat(size / 6)).into_bytes(), 0);
    add("zip, stored", archive(&[("a.tsv".to_owned(), letters.clone())], false), size);
    add("zip, packed", archive(&[("a.tsv".to_owned(), letters.clone())], true), size);
    let files: Vec<_> =
        letters.chunks(size / 1024).enumerate().map(|(k, part)| (format!("{k}"), part.to_vec())).collect();
    add("zip of many files", archive(&files, true), size);
    // Directories that are not there: every byte could begin one.
    add("zip without an end", [&b"PK\x03\x04"[..], &b"PK\x05\x06".repeat(size / 4)].concat(), 0);
    all
}

/// Lines of a label and values until there are so many bytes.
fn lines(size: usize, label: impl Fn(usize) -> String, value: impl Fn(usize) -> String, values: usize) -> Vec<u8> {
    let mut text = String::with_capacity(size + 4096);
    for line in 0.. {
        if text.len() >= size {
            break;
        }
        text += &label(line);
        (0..values).for_each(|k| text += &value(k));
        text.push('\n');
    }
    text.into_bytes()
}

fn npy(kind: &str, columns_first: &str, shape: (usize, usize), numbers: &[u8]) -> Vec<u8> {
    let header =
        format!("{{'descr': '{kind}', 'fortran_order': {columns_first}, 'shape': ({}, {}), }}\n", shape.0, shape.1);
    let length = (header.len() as u16).to_le_bytes();
    [b"\x93NUMPY\x01\x00", &length[..], header.as_bytes(), numbers].concat()
}

/// An archive of files, packed or not.
pub fn archive(files: &[(String, Vec<u8>)], pack: bool) -> Vec<u8> {
    let (mut file, mut directory) = (Vec::new(), Vec::new());
    for (name, content) in files {
        let packed = if pack { miniz_oxide::deflate::compress_to_vec(content, 6) } else { content.clone() };
        let method = if pack { 8_u16 } else { 0 };
        let common: Vec<u8> = [
            [20_u16, 0, method, 0, 0].map(u16::to_le_bytes).concat(),
            [checksum(content), packed.len() as u32, content.len() as u32].map(u32::to_le_bytes).concat(),
            [name.len() as u16, 0].map(u16::to_le_bytes).concat(),
        ]
        .concat();
        let begin = file.len() as u32;
        file.extend([b"PK\x03\x04", &common[..], name.as_bytes(), &packed].concat());
        let rest = [[0_u8; 10].to_vec(), begin.to_le_bytes().to_vec()].concat();
        directory.extend([b"PK\x01\x02\x14\0", &common[..], &rest, name.as_bytes()].concat());
    }
    let count = (files.len() as u16).to_le_bytes();
    let place = [directory.len() as u32, file.len() as u32].map(u32::to_le_bytes).concat();
    [file, directory, b"PK\x05\x06\0\0\0\0".to_vec(), count.to_vec(), count.to_vec(), place, vec![0, 0]].concat()
}

/// The cyclic redundancy check of zip, bit by bit.
pub fn checksum(bytes: &[u8]) -> u32 {
    !bytes.iter().fold(!0_u32, |sum, byte| {
        (0..8).fold(sum ^ u32::from(*byte), |sum, _| (sum >> 1) ^ if sum & 1 == 1 { 0xedb8_8320 } else { 0 })
    })
}
