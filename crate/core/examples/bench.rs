//! Times of the work that users wait for, as ratios to a calibration kernel of the same run: machines and their load differ.

use inward_core::electrode::{Grade, StandardSite, standard_sites};
use inward_core::fit::Fitter;
use inward_core::forward::LeadField;
use inward_core::head::Shells;
use inward_core::report::Assessment;
use inward_core::simulate::Kind;
use inward_core::{MapReport, Request, Settings, Study, Vec3};
use std::hint::black_box;
use std::time::{Duration, Instant};

fn main() {
    let unit = calibration();
    println!("calibration kernel (2 million divisions in sequence): {:.2} ms", unit.as_secs_f64() * 1e3);
    for electrodes in [19, 32, 71, 128, 256] {
        let directions = cap(electrodes);
        let field = LeadField::new(&Shells::standard(), 88.0, directions.clone());
        let images = field.images().map_or(0, |images| images.count());
        let bound = field.images().map_or(0.0, |images| images.error_bound());
        let p = Vec3::new(0.2, -0.3, 0.6);
        row(electrodes, "lead field, series", unit, 50, || drop(black_box(field.exact(black_box(p)))));
        row(electrodes, "lead field, images", unit, 2000, || drop(black_box(field.quick(black_box(p)))));
        row(electrodes, "head set-up with grid", unit, 3, || drop(black_box(fitter(&directions))));
        let fitter = Fitter::new(field);
        let maps = maps(&fitter, 60);
        let fits = row(electrodes, "60 fits", unit, 3, || fit_all(&fitter, &maps));
        println!(
            "{electrodes:4} electrodes  {:.0} fits/s; {images} images, error at most {bound:.1e}",
            60.0 / fits.as_secs_f64()
        );
    }
    numbers(unit);
    whole_table(unit);
    let (directions, maps) = invented(0.0, 256, 256);
    let time = shortest(|| set_up_and_fit(&directions, &maps));
    println!("256 maps at 256 electrodes with head set-up: {:.1} ms", time.as_secs_f64() * 1e3);
    picture(unit);
    trust(unit);
}

fn told(time: Duration, count: usize, unit: Duration) -> String {
    let (seconds, fits) = (time.as_secs_f64(), count as f64);
    let (each, rate) = (1e6 * seconds / fits, fits / seconds);
    let calibrations = seconds / fits / unit.as_secs_f64();
    format!("{:.0} ms ({each:.1} µs a fit, {rate:.0} a second; a fit is {calibrations:.5} calibrations)", 1e3 * seconds)
}

/// The prepared search, many maps; what the module is compared to reads the last line.
fn numbers(unit: Duration) {
    let (directions, maps) = invented(0.0, 71, 2000);
    let fitter = fitter(&directions);
    let time = shortest(|| fit_all(&fitter, &maps));
    println!("71 electrodes, 2000 fits as numbers: {}", told(time, maps.len(), unit));
    println!("microseconds a fit: {:.2}", time.as_secs_f64() / maps.len() as f64 * 1e6);
    println!("calibrations a fit: {:.7}", time.as_secs_f64() / maps.len() as f64 / unit.as_secs_f64());
}

/// 13 montages of 71 electrodes, 22 decompositions of 71 maps for each: heads set up and maps fitted.
fn whole_table(unit: Duration) {
    let montages: Vec<_> = (0..13).map(|k| invented(f64::from(k), 71, 22 * 71)).collect();
    let times = [1usize, 2].map(|threads| {
        let time = shortest(|| {
            std::thread::scope(|scope| {
                for part in montages.chunks(13usize.div_ceil(threads)) {
                    scope.spawn(|| part.iter().for_each(|(directions, maps)| set_up_and_fit(directions, maps)));
                }
            });
        });
        println!("13 × 22 × 71 maps, head set-up and fits, threads: {threads}: {}", told(time, 13 * 22 * 71, unit));
        time.as_secs_f64()
    });
    println!("two threads against one: {:.2} times as quick", times[0] / times[1]);
}

/// Electrodes of one of many caps, and mixed maps on them.
fn invented(turn: f64, electrodes: usize, count: usize) -> (Vec<Vec3>, Vec<Vec<f64>>) {
    let (sin, cos) = (libm::sin(turn), libm::cos(turn));
    let turned = |e: Vec3| Vec3::new(cos * e[0] - sin * e[1], sin * e[0] + cos * e[1], e[2]);
    let directions: Vec<Vec3> = cap(electrodes).into_iter().map(turned).collect();
    let maps = maps(&fitter(&directions), count);
    (directions, maps)
}

fn fitter(directions: &[Vec3]) -> Fitter {
    Fitter::new(LeadField::new(&Shells::standard(), 88.0, directions.to_vec()))
}

fn fit_all(fitter: &Fitter, maps: &[Vec<f64>]) {
    let maps: Vec<&[f64]> = maps.iter().map(|map| &map[..]).collect();
    maps.chunks(inward_core::fit::BATCH).for_each(|batch| drop(black_box(fitter.fit_batch(batch))));
}

fn set_up_and_fit(directions: &[Vec3], maps: &[Vec<f64>]) {
    fit_all(&fitter(directions), maps);
}

fn shortest(mut work: impl FnMut()) -> Duration {
    let pass = |work: &mut dyn FnMut()| {
        let start = Instant::now();
        work();
        start.elapsed()
    };
    (0..5).map(|_| pass(&mut work)).min().unwrap_or_default()
}

/// The reference populations of 71 electrodes, and the region of a map.
fn trust(unit: Duration) {
    let directions = cap(71);
    let maps = maps(&fitter(&directions), 40);
    let labelled = |columns: &dyn Fn(usize) -> Vec<f64>| -> String {
        let line = |i: usize| columns(i).iter().map(|value| format!("\t{value}")).collect::<String>();
        (0..71).map(|i| format!("E{}{}\n", i + 1, line(i))).collect()
    };
    let electrodes = labelled(&|i| (directions[i] * 88.0).0.to_vec());
    let table = labelled(&|i| maps.iter().map(|map| map[i]).collect());
    let request = Request { electrodes: Some(electrodes.as_bytes()), maps: table.as_bytes(), ..Request::default() };
    let Ok(study) = Study::open(&request) else { return };
    let each = study.population_size();
    let times = [1usize, 2].map(|threads| {
        let start = Instant::now();
        std::thread::scope(|scope| {
            for part in 0..threads {
                let study = &study;
                let range = each * part / threads..each * (part + 1) / threads;
                scope.spawn(move || Kind::ALL.map(|kind| black_box(study.population(kind, range.clone())).len()));
            }
        });
        let time = start.elapsed();
        let calibrations = time.as_secs_f64() / unit.as_secs_f64();
        println!(
            "71 electrodes, {} population maps, threads: {threads}: {:.2} s ({calibrations:.0} calibrations)",
            6 * each,
            time.as_secs_f64()
        );
        time.as_secs_f64()
    });
    println!("two threads against one: {:.2} times as quick", times[0] / times[1]);
    drop(black_box(study.assess(0, &[Assessment::Region])));
    let mut index = 0;
    row(71, "region of a map, 200 refits", unit, 40, || {
        index = (index + 1) % study.count();
        drop(black_box(study.assess(index, &[Assessment::Region])));
    });
    explanations(&study, unit);
}

/// What else may explain a map, what carries its fit and would move it, residual variance over the brain.
fn explanations(study: &Study, unit: Duration) {
    let mut index = 0;
    let mut next = || {
        index = (index + 1) % study.count();
        match study.fit(index) {
            Ok(MapReport::Fitted(map)) => Some((index, map)),
            _ => None,
        }
    };
    drop(black_box(next().and_then(|(index, map)| study.alternatives(index, &map))));
    drop(black_box(next().and_then(|(index, map)| study.what_if(index, &map))));
    row(71, "other explanations of a map", unit, 10, || {
        drop(black_box(next().and_then(|(index, map)| study.alternatives(index, &map))));
    });
    row(71, "influence of each electrode", unit, 40, || {
        drop(black_box(next().and_then(|(index, map)| study.influence(index, &map))));
    });
    row(71, "other heads", unit, 40, || {
        drop(black_box(next().and_then(|(index, map)| study.what_if(index, &map))));
    });
    row(71, "three slices", unit, 10, || {
        drop(black_box(next().and_then(|(index, map)| study.landscape(index, &map, None))));
    });
    let Some((index, map)) = next() else { return };
    let mut step = 0.0;
    let mut moves = [0; 200].map(|_| {
        step += 0.004;
        let at = Vec3::new(step - 0.4, 0.3 - step, 0.4);
        let start = Instant::now();
        if let Some((told, by_hand)) = study.probe(index, &map, black_box(at)) {
            black_box((told, study.picture(&by_hand)));
        }
        start.elapsed()
    });
    moves.sort();
    println!("  71 electrodes  dipole moved by hand, with its maps: median {:.2} ms", moves[100].as_secs_f64() * 1e3);
}

/// One map from text to picture.
fn picture(unit: Duration) {
    let ten = |site: &&StandardSite| site.grade == Grade::Ten;
    let sites: Vec<&StandardSite> = standard_sites().iter().filter(ten).collect();
    let table: String = sites
        .iter()
        .enumerate()
        .map(|(i, site)| format!("{}\t{}\n", site.name, libm::sin(i as f64) + 3.0 * site.direction[0]))
        .collect();
    let request = Request { maps: table.as_bytes(), ..Request::default() };
    row(sites.len(), "open, text to search", unit, 3, || drop(black_box(Study::open(&request))));
    let Ok(study) = Study::open(&request) else { return };
    if let Ok(MapReport::Fitted(map)) = study.fit(0) {
        row(sites.len(), "picture of a fit", unit, 3, || drop(black_box(study.picture(&map))));
    }
    row(sites.len(), "leave one out, to picture", unit, 3, || {
        let settings = Settings { exclude: vec!["Cz".into()], ..Settings::default() };
        let Ok(study) = study.with(black_box(settings)) else { return };
        let Ok(MapReport::Fitted(map)) = study.fit(0) else { return };
        black_box((study.sheet(0, &map), study.picture(&map)));
    });
}

/// Shortest of several passes.
fn row(electrodes: usize, what: &str, unit: Duration, repeats: u32, mut work: impl FnMut()) -> Duration {
    let pass = |work: &mut dyn FnMut()| {
        let start = Instant::now();
        (0..repeats).for_each(|_| work());
        start.elapsed() / repeats
    };
    let best = (0..5).map(|_| pass(&mut work)).min().unwrap_or_default();
    let ratio = best.as_secs_f64() / unit.as_secs_f64();
    println!("{electrodes:4} electrodes  {what:26} {:10.1} µs  {ratio:9.4} calibrations", best.as_secs_f64() * 1e6);
    best
}

fn calibration() -> Duration {
    let pass = || {
        let start = Instant::now();
        let mut x = black_box(1.5f64);
        for _ in 0..2_000_000 {
            x = 1.0 + 1.0 / x;
        }
        black_box(x);
        start.elapsed()
    };
    (0..5).map(|_| pass()).min().unwrap_or_default()
}

/// Electrodes spread evenly from the top of the head to 20° below its equator.
fn cap(count: usize) -> Vec<Vec3> {
    (0..count)
        .map(|i| {
            let (z, angle) = (1.0 - 1.34 * (i as f64 + 0.5) / count as f64, 2.399_963 * i as f64);
            let ring = (1.0 - z * z).sqrt();
            Vec3::new(ring * libm::cos(angle), ring * libm::sin(angle), z)
        })
        .collect()
}

/// One dipole with noise, two dipoles, and noise alone in turn.
fn maps(fitter: &Fitter, count: usize) -> Vec<Vec<f64>> {
    let mut state = 7u64;
    let mut draw = || {
        state = state.wrapping_mul(6_364_136_223_846_793_005).wrapping_add(1_442_695_040_888_963_407);
        (state >> 33) as f64 / (1u64 << 30) as f64 - 1.0
    };
    (0..count)
        .map(|kind| {
            let mut map: Vec<f64> = (0..fitter.field().count()).map(|_| 0.3 * draw()).collect();
            for _ in 0..kind % 3 {
                let position = Vec3::new(draw(), draw(), draw()) * 0.5;
                let moment = Vec3::new(draw(), draw(), draw()) * 20.0;
                map.iter_mut().zip(fitter.project(position, moment)).for_each(|(v, p)| *v += p);
            }
            map
        })
        .collect()
}
