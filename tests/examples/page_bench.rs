//! The page in headless Chromium with the tables of a published comparison: 13 subjects, 22 decompositions of 71 components
//! over 71 electrodes, dropped together; how long it takes, and how much memory the page's process has.
use inward_tests::{Browser, Page};
use std::thread::sleep;
use std::time::{Duration, Instant};

const MAPS: u64 = 13 * 22 * 71;

/// Drops invented tables: a dipole each in an unbounded medium, and noise.
const DROP: &str = "\
    let state = 1n;\
    const chance = () => {\
      state = (state * 6364136223846793005n + 1442695040888963407n) & 0xffffffffffffffffn;\
      return Number(state >> 11n) / 2 ** 53; };\
    const normal = () => chance() + chance() + chance() + chance() - 2;\
    const places = Array.from({ length: 71 }, (_, k) => {\
      const z = 1 - (1.35 * (k + 0.5)) / 71;\
      const [r, angle] = [Math.sqrt(1 - z * z), k * Math.PI * (3 - Math.sqrt(5))];\
      return [88 * r * Math.cos(angle), 88 * r * Math.sin(angle), 88 * z]; });\
    const map = () => {\
      const [source, moment] = [[50 * normal(), 50 * normal(), 30 * chance()], [normal(), normal(), normal()]];\
      return places.map((p) => {\
        const d = p.map((v, i) => v - source[i]);\
        return (1e4 * d.reduce((sum, v, i) => sum + v * moment[i], 0)) / Math.hypot(...d) ** 3 + 0.2 * normal(); }); };\
    const table = () => {\
      const maps = Array.from({ length: 71 }, map);\
      return places.map((_, i) => [`E${i + 1}`, ...maps.map((one) => one[i].toPrecision(7))].join('\\t')).join('\\n'); };\
    const data = new DataTransfer();\
    data.items.add(new File([places.map((p, i) => [`E${i + 1}`, ...p].join('\\t')).join('\\n')], 'electrodes.tsv'));\
    for (let subject = 1; subject <= 13; subject++)\
      for (let way = 1; way <= 22; way++) data.items.add(new File([table()], `sub-${subject}_way${way}.tsv`));\
    document.querySelector('main').dispatchEvent(new DragEvent('drop', { dataTransfer: data, bubbles: true, cancelable: true }))";

/// Private memory in MiB of the largest renderer that this process has started; on Linux.
fn memory() -> Option<u64> {
    let field = |text: &str, name: &str| -> Option<u64> {
        text.lines().find_map(|line| line.strip_prefix(name)?.split_whitespace().next()?.parse().ok())
    };
    let read = |pid: u64, file: &str| std::fs::read_to_string(format!("/proc/{pid}/{file}")).ok();
    let parent = |pid: u64| field(&read(pid, "status")?, "PPid:");
    let own = u64::from(std::process::id());
    let started = |pid: u64| std::iter::successors(Some(pid), |&one| parent(one)).take(12).any(|one| one == own);
    let processes = std::fs::read_dir("/proc").ok()?;
    processes
        .filter_map(|entry| entry.ok()?.file_name().to_str()?.parse().ok())
        .filter(|&pid| read(pid, "cmdline").is_some_and(|line| line.contains("--type=renderer")) && started(pid))
        .filter_map(|pid| {
            let rollup = read(pid, "smaps_rollup")?;
            Some((field(&rollup, "Private_Clean:")? + field(&rollup, "Private_Dirty:")?) >> 10)
        })
        .max()
}

/// Waits until all tables are there and all maps are fitted; returns when the first answer was there, when all were, and the most memory.
fn watched(page: &Page, change: &str) -> (Duration, Duration, Option<u64>) {
    let mut most = memory();
    page.value(change);
    let start = Instant::now();
    let mut first = None;
    let mut quiet = 0;
    // The line of progress comes and goes: a while without it is the end.
    while quiet < 10 {
        sleep(Duration::from_millis(50));
        most = most.max(memory());
        if page.state() == "answered" {
            first.get_or_insert_with(|| start.elapsed());
        }
        let tables = page.value("return document.querySelectorAll('.decomposition').length");
        quiet = if page.rests() && tables == 286 { quiet + 1 } else { 0 };
    }
    (first.expect("an answer"), start.elapsed() - Duration::from_millis(500), most)
}

fn main() {
    let page = Page::open(Browser::Chromium);
    let cores = page.value("return navigator.hardwareConcurrency");
    let empty = memory();
    let shown = |memory: Option<u64>| memory.map_or("memory not known here".into(), |mib| format!("{mib} MiB"));
    let (first, all, most) = watched(&page, DROP);
    let rate = MAPS as f64 / all.as_secs_f64();
    println!(
        "page, {cores} cores: {MAPS} maps of 286 tables dropped together: first answer {} ms, all in {:.2} s ({rate:.0} a second, with \
         reading, rows and all else), {} private at most ({} before)",
        first.as_millis(),
        all.as_secs_f64(),
        shown(most),
        shown(empty),
    );
    let out = "document.querySelector('#electrode-table tbody input').click()";
    let (_, again, most) = watched(&page, out);
    println!("an electrode left out, all fitted again in {:.2} s, {} at most", again.as_secs_f64(), shown(most));
    assert!(!page.visible("#failure"), "{}", page.failure_text());
}
