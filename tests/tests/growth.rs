//! Time and memory of the readers, and of all that is made of what they read, grow with the files and no faster. A binary of its own: it counts every allocation.
use cpu_time::ThreadTime;
use inward_core::placement::{self, place};
use inward_core::read::{self, Reading, mat, npy, zip};
use inward_tests::{Heavy, Shape, heavy, shapes, understood};
use peak_alloc::PeakAlloc;

#[global_allocator]
static MEMORY: PeakAlloc = PeakAlloc;

const SMALL: usize = 256 << 10;

/// What four times the file may take, in times of the quarter.
const MOST_TIMES: f64 = 8.0;

/// Lists of words cost a string each, of which there are at most 65,536.
const WORDS: usize = 4 << 20;

/// What a name or a label may cost besides, which is a string too.
const WORD: usize = 64;

/// Files whose growth is measured.
struct Case {
    name: &'static str,
    files: Vec<(String, Vec<u8>)>,
    /// Whether memory is that of a reader alone.
    read: bool,
    /// Bytes that are held, those that a file unpacks to counted.
    bytes: usize,
    /// Memory beyond eight times these.
    spare: usize,
}

impl Case {
    fn of_reader(Heavy { name, file, unpacked }: Heavy) -> Self {
        let spare = if name.contains("words") { WORDS } else { 1 << 16 };
        Self { name, bytes: file.len() + unpacked, files: vec![("file".into(), file)], read: true, spare }
    }

    fn of_all(Shape { name, files, words, is_read }: Shape) -> Self {
        let bytes = files.iter().map(|(_, file)| file.len()).sum();
        let case = Self { name, files, read: false, bytes, spare: (1 << 16) + words * WORD };
        assert_eq!(case.understand(), is_read, "{name}");
        case
    }

    fn read(&self) -> bool {
        let [(_, file)] = self.files.as_slice() else { panic!("readers read one file") };
        match self.name.split([' ', ',']).next() {
            Some("npy") => npy::read(file).is_ok(),
            Some("mat") => mat::read(file).is_ok(),
            Some("zip") => zip::read(file).is_ok(),
            _ => read::read("file", file, |_| Reading::default()).is_ok(),
        }
    }

    /// Read, understood, and placed on a head.
    fn understand(&self) -> bool {
        let given: Vec<(&str, &[u8])> =
            self.files.iter().map(|(name, file)| (name.as_str(), file.as_slice())).collect();
        let Ok(understood) = understood(&given, &Default::default()) else { return false };
        let wishes = placement::Wishes {
            bad: understood.bad.clone(),
            other_channels: understood.other_channels.clone(),
            scalp: understood.scalp.clone(),
            ..placement::Wishes::default()
        };
        place(understood.electrodes.as_deref(), &understood.maps, &wishes).is_ok()
    }

    /// Time that the processor spent on all of it, least of several runs: other work on the machine does not count.
    fn seconds(&self) -> f64 {
        let (mut least, mut spent) = (f64::INFINITY, 0.0);
        for run in 0..9 {
            if run > 2 && spent > 0.1 {
                break;
            }
            let start = ThreadTime::now();
            self.understand();
            let seconds = start.elapsed().as_secs_f64();
            (least, spent) = (f64::min(least, seconds), spent + seconds);
        }
        least
    }

    /// The most memory that it takes beyond its files.
    fn memory(&self) -> usize {
        let before = MEMORY.current_usage();
        MEMORY.reset_peak_usage();
        if self.read {
            self.read()
        } else {
            self.understand()
        };
        MEMORY.peak_usage() - before
    }
}

fn cases(size: usize) -> impl Iterator<Item = Case> {
    heavy(size).into_iter().map(Case::of_reader).chain(shapes(size).into_iter().map(Case::of_all))
}

/// One test: nothing else may run or allocate meanwhile.
#[test]
fn four_times_the_file_takes_at_most_eight_times_as_long_and_eight_times_its_size_in_memory() {
    let mut faults = Vec::new();
    for (small, large) in cases(SMALL).zip(cases(4 * SMALL)) {
        // Whichever way it ends, it ends the same way for both.
        if large.read {
            assert_eq!(small.read(), large.read(), "{}", large.name);
        }
        // Below 20 µs the clock and the caches are what is measured.
        let times = [small.seconds().max(2e-5), large.seconds()];
        let peak = large.memory();
        println!(
            "{:36} {:7.3} ms, {:5.2} times the quarter; memory {:5.2} times the file and what is in it",
            large.name,
            times[1] * 1e3,
            times[1] / times[0],
            peak as f64 / large.bytes as f64,
        );
        if times[1] > MOST_TIMES * times[0] {
            faults.push(format!("{}: {times:?} s", large.name));
        }
        if peak > 8 * large.bytes + large.spare {
            faults.push(format!("{}: {peak} bytes for {}", large.name, large.bytes));
        }
    }
    assert!(faults.is_empty(), "{faults:#?}");
}
