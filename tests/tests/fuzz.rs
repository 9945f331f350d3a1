//! Readers under spoilt files: the committed corpus and finds as they are, then changed at random for a while. Seconds a reader:
//! `INWARD_FUZZ_SECONDS`, 10 by default; the deep search is libFuzzer's, in `fuzz/`.
use inward_tests::{Draw, attack, mutate, sample, samples, tests_folder};
use std::panic::{AssertUnwindSafe, catch_unwind};
use std::path::Path;
use std::time::{Duration, Instant};

/// Longest file that changes make.
const LONGEST: usize = 8 << 10;

/// A file so small that takes longer hangs its reader.
const SLOWEST: Duration = Duration::from_secs(2);

/// The content of every file of a folder, by name; none where there is no folder.
fn files(folder: &Path) -> Vec<Vec<u8>> {
    let mut paths: Vec<_> =
        std::fs::read_dir(folder).into_iter().flatten().map(|entry| entry.unwrap().path()).collect();
    paths.sort();
    paths.iter().map(|path| std::fs::read(path).unwrap()).collect()
}

/// Runs a reader over its corpus, its finds and the samples whose names end so, then over changed ones.
fn hammer(reader: &str, endings: &[&str], read: impl Fn(&[u8])) {
    let mut seeds = files(&tests_folder().join("fuzz/corpus").join(reader));
    assert!(!seeds.is_empty(), "{reader} has no corpus");
    seeds.extend(files(&tests_folder().join("data/finds").join(reader)));
    let understood = tests_folder().join("data/understood");
    let fits = |name: &String| endings.iter().any(|ending| name.ends_with(ending));
    seeds.extend(samples().into_iter().filter(fits).map(|name| sample(&name)).filter(|file| file.len() <= LONGEST));
    let tables = std::fs::read_dir(&understood).unwrap().map(|entry| entry.unwrap().file_name().into_string().unwrap());
    let mut tables: Vec<String> = tables.filter(fits).collect();
    tables.sort();
    seeds.extend(
        tables.iter().map(|name| std::fs::read(understood.join(name)).unwrap()).filter(|file| file.len() <= LONGEST),
    );

    let run = |file: &[u8]| {
        let start = Instant::now();
        let sound = catch_unwind(AssertUnwindSafe(|| read(file))).is_ok();
        if sound && start.elapsed() < SLOWEST {
            return;
        }
        let folder = tests_folder().join("../target/finds").join(reader);
        std::fs::create_dir_all(&folder).unwrap();
        let find = folder.join("find");
        std::fs::write(&find, file).unwrap();
        let what = if sound { "takes too long over" } else { "panics at" };
        panic!("{reader} {what} {}: copy it to tests/data/finds/{reader}/ under a name that says why", find.display());
    };
    seeds.iter().for_each(|seed| run(seed));

    let seconds = std::env::var("INWARD_FUZZ_SECONDS").ok().and_then(|text| text.parse().ok()).unwrap_or(10.0);
    let end = Instant::now() + Duration::from_secs_f64(seconds);
    let mut draw = Draw::from(1);
    let mut count = 0_u64;
    while Instant::now() < end {
        let mut file = seeds[draw.below(seeds.len())].clone();
        let other = draw.below(seeds.len());
        mutate(&mut file, &seeds[other], LONGEST, &mut draw);
        run(&file);
        count += 1;
    }
    println!("{reader}: {} files, then {count} changed ones", seeds.len());
    assert!(seconds < 1.0 || count > 1000, "{reader}: only {count} files in {seconds} s");
}

#[test]
fn npy_files() {
    hammer("npy", &[".npy"], |file| attack("npy", file));
}

#[test]
fn mat_files() {
    hammer("mat", &[".mat"], |file| attack("mat", file));
}

#[test]
fn zip_files() {
    hammer("zip", &[".zip", ".npz"], |file| attack("zip", file));
}

#[test]
fn text_files() {
    hammer("text", &[".txt", ".tsv", ".csv"], |file| attack("text", file));
}

#[test]
fn json_files() {
    hammer("json", &[".json"], |file| attack("json", file));
}

#[test]
fn files_together() {
    hammer("files", &[""], |file| attack("files", file));
}

/// What these tests are for.
#[test]
#[should_panic(expected = "npy panics at")]
fn a_planted_panic_is_found() {
    hammer("npy", &[], |file| assert!(!file.ends_with(b"1e999"), "planted"));
}
