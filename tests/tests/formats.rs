//! Binary files as other programs write them are read to the last bit, told by their content alone; what is cut short,
//! spoilt, hostile or of another kind is refused with the byte.
use inward_core::read::{Body, Format, Part, mat, npy, signature, zip};
use inward_core::report::ErrorReport;
use inward_core::{Error, Finding, Request, analyse};
use inward_tests::{archive, level5, sample, samples};
use serde_json::Value;
use std::collections::BTreeMap;

/// What the first bytes call for.
enum Read {
    Parts(Vec<Part>, Vec<Finding>),
    Files(Vec<(String, Vec<u8>)>),
    Text,
}

fn read(file: &[u8]) -> Result<Read, Error> {
    Ok(match signature::container(file)? {
        Some(Format::Npy) => Read::Parts(npy::read(file)?, Vec::new()),
        Some(Format::Mat) => mat::read(file).map(|(parts, notes)| Read::Parts(parts, notes))?,
        Some(Format::Zip) => Read::Files(zip::read(file)?),
        _ => Read::Text,
    })
}

fn expected() -> Vec<(String, Value)> {
    let manifest: Value = serde_json::from_slice(&sample("parts.json")).unwrap();
    manifest.as_object().unwrap().iter().map(|(name, what)| (name.clone(), what.clone())).collect()
}

fn equal(part: &Part, expected: &Value, context: &str) {
    assert_eq!(part.name.as_deref(), expected["name"].as_str(), "{context}");
    match &part.body {
        Body::Numbers(numbers) => {
            let shape = [numbers.nrows(), numbers.ncols()].map(Value::from);
            assert_eq!([&shape[0], &shape[1]], [&expected["rows"], &expected["columns"]], "{context}");
            // `null` stands for NaN; all else to the bit.
            let values = expected["values"].as_array().unwrap().iter().map(|value| value.as_f64().map(f64::to_bits));
            let found = numbers.iter().map(|number| Some(number.to_bits()).filter(|_| !number.is_nan()));
            assert!(found.eq(values), "{context}: {numbers:?}");
        }
        Body::Words(words) => assert_eq!(Value::from(words.clone()), expected["words"], "{context}"),
        Body::Cells(cells) => {
            let rows = expected["cells"].as_array().unwrap();
            assert_eq!(cells.height(), rows.len(), "{context}");
            for (row, expected) in rows.iter().enumerate() {
                let expected = expected.as_array().unwrap().iter().map(|field| field.as_str().unwrap());
                // Other programs write exponents in other ways.
                let same = |(a, b): (&str, &str)| a == b || a.parse::<f64>().unwrap() == b.parse::<f64>().unwrap();
                assert!(
                    cells.width() == expected.len() && cells.row(row).zip(expected).all(same),
                    "{context}: {cells:?}"
                );
            }
        }
        Body::Record(_) => panic!("{context}: no record was written"),
    }
}

fn all_equal(parts: &[Part], expected: &Value, context: &str) {
    let expected = expected.as_array().unwrap();
    let names = |parts: &[Part]| parts.iter().filter_map(|part| part.name.clone()).collect::<Vec<_>>();
    assert_eq!(parts.len(), expected.len(), "{context}: {:?}", names(parts));
    for (part, expected) in parts.iter().zip(expected) {
        equal(part, expected, &format!("{context}, {}", expected["name"]));
    }
}

#[test]
fn every_sample_is_read_as_it_was_written_or_refused_with_code_and_byte() {
    let expected = expected();
    for (name, what) in &expected {
        let outcome = read(&sample(name));
        if let Some(code) = what["error"].as_str() {
            let error = outcome.err().unwrap_or_else(|| panic!("{name} was read"));
            let report = ErrorReport::from(&error);
            assert_eq!(report.code.as_str(), code, "{name}: {report:?}");
            let byte = report.place.as_ref().and_then(|place| place.byte);
            assert!(
                what["byte"].is_null() || byte == what["byte"].as_u64().map(|byte| byte as usize),
                "{name}: {report:?}"
            );
            continue;
        }
        match outcome.unwrap_or_else(|error| panic!("{name}: {:?}", ErrorReport::from(&error))) {
            Read::Parts(parts, notes) => {
                all_equal(&parts, &what["parts"], name);
                let passed_over: BTreeMap<String, Value> = notes
                    .iter()
                    .map(|note| {
                        let value = |key| serde_json::to_value(note.value(key)).unwrap();
                        (value("why").as_str().unwrap().to_owned(), value("labels"))
                    })
                    .collect();
                assert_eq!(serde_json::to_value(passed_over).unwrap(), what["passed_over"], "{name}");
            }
            Read::Files(files) => {
                let members = what["members"].as_array().unwrap();
                assert_eq!(files.len(), members.len(), "{name}");
                for ((file, content), member) in files.iter().zip(members) {
                    assert_eq!(Some(file.as_str()), member["name"].as_str(), "{name}");
                    match (member["text"].as_str(), read(content).unwrap()) {
                        (Some(text), Read::Text) => assert_eq!(content, text.as_bytes(), "{name}: {file}"),
                        (None, Read::Parts(parts, _)) => all_equal(&parts, &member["parts"], name),
                        _ => panic!("{name}: {file} was taken for something else"),
                    }
                }
            }
            Read::Text => panic!("{name} was taken for text"),
        }
    }
    // Whoever adds a file says what is in it; texts and archives of archives are for the whole way.
    let known: Vec<&String> = expected.iter().map(|(name, _)| name).collect();
    let untold: Vec<String> = samples().into_iter().filter(|name| !known.contains(&name)).collect();
    assert!(untold.iter().all(|name| name.ends_with(".txt") || name.ends_with(".json")), "{untold:?}");
}

/// A `.npy` file of numbers, by the shortest road.
fn written(rows: usize, columns: usize, numbers: impl Iterator<Item = f64>) -> Vec<u8> {
    let header = format!("{{'descr': '<f8', 'fortran_order': False, 'shape': ({rows}, {columns}), }}\n");
    let mut file = b"\x93NUMPY\x01\x00".to_vec();
    file.extend((header.len() as u16).to_le_bytes());
    file.extend(header.bytes());
    file.extend(numbers.flat_map(f64::to_le_bytes));
    file
}

#[test]
fn what_was_read_and_is_written_again_reads_the_same() {
    let mut again = 0;
    for (name, what) in expected() {
        if what["parts"].is_null() {
            continue;
        }
        let Read::Parts(parts, _) = read(&sample(&name)).unwrap() else { panic!("{name}") };
        for part in parts {
            if let Body::Numbers(numbers) = &part.body {
                let file = written(numbers.nrows(), numbers.ncols(), numbers.iter().copied());
                let Body::Numbers(second) = &npy::read(&file).unwrap()[0].body else { panic!("{name}") };
                let bits = |matrix: &ndarray::Array2<f64>| matrix.iter().map(|n| n.to_bits()).collect::<Vec<_>>();
                assert!(second.dim() == numbers.dim() && bits(second) == bits(numbers), "{name}");
                again += 1;
            }
        }
    }
    assert!(again > 60, "only {again} matrices");
}

/// Every beginning of a sound file is refused, never read as a smaller one.
#[test]
fn no_beginning_of_a_file_is_taken_for_the_whole() {
    for name in ["f8_little.npy", "labels_u.npy", "cap.mat", "cap_packed.mat", "kinds.mat", "cap.zip"] {
        let file = sample(name);
        let whole = match read(&file).unwrap() {
            Read::Parts(parts, _) => parts.len(),
            Read::Files(files) => files.len(),
            Read::Text => panic!("{name}"),
        };
        for length in (0..file.len()).step_by(if file.len() > 2000 { 7 } else { 1 }) {
            match read(&file[..length]) {
                // Between two variables a file may as well have ended.
                Ok(Read::Parts(parts, _)) => {
                    assert!(name.ends_with(".mat") && parts.len() < whole, "{name} to {length}")
                }
                Ok(Read::Files(_)) => panic!("{name} to {length}"),
                Ok(Read::Text) => assert!(length < 19, "{name} to {length}"),
                Err(error) => assert!(ErrorReport::from(&error).place.is_some(), "{name} to {length}: {error:?}"),
            }
        }
    }
}

#[test]
fn what_unpacks_to_more_than_the_limit_is_refused() {
    let code = |file: &[u8]| read(file).err().map(|error| ErrorReport::from(&error).code.as_str());
    let zeros = vec![0; (64 << 20) + 1];
    assert_eq!(code(&level5::file(&[level5::packed(&zeros)])), Some("input-too-large"));
    // Two that are below it one by one.
    let half = level5::packed(&level5::matrix(5, 1, 1, "S", &zeros[..40 << 20]));
    assert_eq!(code(&level5::file(std::slice::from_ref(&half))), Some("array-type"));
    assert_eq!(code(&level5::file(&[half.clone(), half])), Some("input-too-large"));

    let whole = archive(&[("a.tsv".to_owned(), zeros.clone())], true);
    assert_eq!(code(&whole), Some("input-too-large"));
    // A directory that says less than there is.
    let size = whole.windows(4).rposition(|four| four == (zeros.len() as u32).to_le_bytes()).unwrap();
    let liar = [&whole[..size], &1000_u32.to_le_bytes(), &whole[size + 4..]].concat();
    assert_eq!(code(&liar), Some("input-damaged"));
    let megabyte = |count: usize| archive(&vec![("a.tsv".to_owned(), zeros[..1 << 20].to_vec()); count], true);
    assert_eq!(code(&megabyte(64)), None);
    assert_eq!(code(&megabyte(65)), Some("input-too-large"));
}

/// The same electrodes and maps in every format, each under a name that tells nothing.
#[test]
fn one_cap_gives_one_answer_in_every_format() {
    let archive = zip::read(&sample("cap.zip")).unwrap();
    let analysed = |files: &[&[u8]]| {
        let files = ["first.thing", "second"].into_iter().zip(files.iter().copied()).collect();
        let report = analyse(&Request { files, ..Request::default() }).unwrap_or_else(|error| panic!("{error:?}"));
        assert_eq!(report.electrodes.len(), 19);
        let report = serde_json::to_value(&report).unwrap();
        report["maps"].as_array().unwrap().iter().map(|map| map["dipole"].clone()).collect::<Vec<_>>()
    };
    let expected = analysed(&[&archive[0].1, &archive[1].1]);
    assert_eq!(expected.len(), 4);
    for name in ["cap.zip", "cap.npz", "cap.mat", "cap_packed.mat"] {
        let found = analysed(&[&sample(name)]);
        assert!(found == expected, "{name}");
    }
}
