//! Time and memory of the readers grow with the file and no faster. A binary of its own: it counts every allocation.
use cpu_time::ThreadTime;
use inward_core::read::{self, Reading, mat, npy, zip};
use inward_tests::{Heavy, heavy};
use peak_alloc::PeakAlloc;

#[global_allocator]
static MEMORY: PeakAlloc = PeakAlloc;

const SMALL: usize = 256 << 10;

/// What four times the file may take, in times of the quarter.
const MOST_TIMES: f64 = 8.0;

/// Lists of words cost a string each, of which there are at most 65,536.
const WORDS: usize = 4 << 20;

fn is_read(heavy: &Heavy) -> bool {
    match heavy.name.split([' ', ',']).next() {
        Some("npy") => npy::read(&heavy.file).is_ok(),
        Some("mat") => mat::read(&heavy.file).is_ok(),
        Some("zip") => zip::read(&heavy.file).is_ok(),
        _ => read::read("file", &heavy.file, |_| Reading::default()).is_ok(),
    }
}

/// Time that the processor spent on it, least of several runs: other work on the machine does not count.
fn seconds(heavy: &Heavy) -> f64 {
    let once = || {
        let start = ThreadTime::now();
        is_read(heavy);
        start.elapsed().as_secs_f64()
    };
    (0..9).map(|_| once()).fold(f64::INFINITY, f64::min)
}

/// One test: nothing else may run or allocate meanwhile.
#[test]
fn four_times_the_file_takes_at_most_eight_times_as_long_and_eight_times_its_size_in_memory() {
    let mut faults = Vec::new();
    for (small, large) in heavy(SMALL).into_iter().zip(heavy(4 * SMALL)) {
        // Whichever way it ends, it ends the same way for both.
        assert_eq!(is_read(&small), is_read(&large), "{}", large.name);
        // Below 20 µs the clock and the caches are what is measured.
        let times = [seconds(&small).max(2e-5), seconds(&large)];
        let before = MEMORY.current_usage();
        MEMORY.reset_peak_usage();
        is_read(&large);
        let peak = MEMORY.peak_usage() - before;
        let held = large.file.len() + large.unpacked;
        println!(
            "{:30} {:7.3} ms, {:5.2} times the quarter; memory {:5.2} times the file{}",
            large.name,
            times[1] * 1e3,
            times[1] / times[0],
            peak as f64 / held as f64,
            if large.unpacked > 0 { " and what is in it" } else { "" }
        );
        if times[1] > MOST_TIMES * times[0] {
            faults.push(format!("{}: {times:?} s", large.name));
        }
        if peak > 8 * held + if large.name.contains("words") { WORDS } else { 1 << 16 } {
            faults.push(format!("{}: {peak} bytes for {held}", large.name));
        }
    }
    assert!(faults.is_empty(), "{faults:#?}");
}
