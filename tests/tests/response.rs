//! Time points of one response: field power, instants, noise of the baseline, a moving and a fixed dipole.
use inward_core::report::{Fixed, Response};
use inward_core::{Request, Settings, Study, Vec3};
use inward_tests::{Draw, Electrodes, MultiStart, PlainSeries};
use serde_json::{Value, json};

/// Largest distance of a source from the centre in the default head, in scalp radii.
const REACH: f64 = 0.98 * 79.0 / 88.0;

/// A table of time points by their labels, in µV.
fn table(labels: &[String], times: &[f64], maps: &[Vec<f64>]) -> String {
    let mut text = format!("label\t{}\n", times.iter().map(|time| format!("{time} ms")).collect::<Vec<_>>().join("\t"));
    for (row, label) in labels.iter().enumerate() {
        let values: Vec<String> = maps.iter().map(|map| format!("{:?}", map[row])).collect();
        text += &format!("{label}\t{}\n", values.join("\t"));
    }
    text
}

fn open(maps: &str, settings: Value) -> Study {
    let settings: Settings = serde_json::from_value(settings).unwrap();
    Study::open(&Request { maps: maps.as_bytes(), settings, ..Request::default() }).unwrap()
}

/// Every `step` ms from −100 on; a source at a fixed place whose moment rises, and one that moves if it is to.
struct Scenario {
    times: Vec<f64>,
    maps: Vec<Vec<f64>>,
    electrodes: Electrodes,
    place: Vec3,
}

fn scenario(noise: f64, moving: bool) -> Scenario {
    let electrodes = Electrodes::set(32);
    let series = PlainSeries::standard();
    let times: Vec<f64> = (0..41).map(|k| -100.0 + 10.0 * f64::from(k)).collect();
    let place = Vec3::new(0.4, 0.1, 0.55);
    let mut draw = Draw::from(11);
    let maps = times
        .iter()
        .map(|&time| {
            let course = if time > 40.0 { (-((time - 120.0) / 35.0) * ((time - 120.0) / 35.0)).exp() } else { 0.0 };
            let along = if moving { (time - 120.0) / 1000.0 } else { 0.0 };
            let turn = (time - 120.0) / 400.0;
            let moment = Vec3::new(turn.cos(), turn.sin(), 0.4) * (40.0 * course);
            let lead = series.lead(place + Vec3::new(-along, along, 0.0), &electrodes.directions, 1e-10);
            lead.iter().map(|row| row.dot(moment) + noise * draw.normal()).collect()
        })
        .collect();
    Scenario { times, maps, electrodes, place }
}

fn response(scenario: &Scenario, settings: Value) -> Response {
    open(&table(&scenario.electrodes.labels, &scenario.times, &scenario.maps), settings).response().unwrap()
}

/// Values by hand: at 10 electrodes, three with 3, −1, −2 and the others 0 give √(14 / 10); a constant changes nothing.
#[test]
fn field_power_is_the_root_mean_square_of_the_referenced_map() {
    let labels: Vec<String> = "Fp1 Fp2 F3 F4 C3 C4 P3 P4 O1 O2".split(' ').map(String::from).collect();
    let mut map = vec![5.0; 10];
    (map[0], map[4], map[7]) = (8.0, 4.0, 3.0);
    let twice: Vec<f64> = map.iter().map(|value| 2.0 * value).collect();
    let text = table(&labels, &[0.0, 4.0, 8.0], &[map.clone(), twice, map]);
    let found = open(&text, json!({ "mapUnit": "uV" })).response().unwrap();
    assert_eq!((found.times.as_slice(), found.unit, found.gfp_unit), (&[0.0, 4.0, 8.0][..], "ms", "µV"));
    for (gfp, factor) in found.gfp.iter().zip([1.0, 2.0, 1.0]) {
        assert!((gfp.unwrap() - factor * 1.4f64.sqrt()).abs() < 1e-12);
    }
    let volts = open(&text, json!({ "mapUnit": "V" })).response().unwrap();
    assert!((volts.gfp[0].unwrap() - 1e6 * 1.4f64.sqrt()).abs() < 1e-6 && volts.gfp_unit == "µV");
}

#[test]
fn onset_mid_rise_and_peak_follow_the_baseline_or_the_peak() {
    let quiet = scenario(0.05, false);
    let with = response(&quiet, json!({ "mapUnit": "uV", "baseline": { "from": -100, "to": 0 } }));
    let index = |response: &Response, code: &str| {
        response.instants.iter().find(|instant| instant.code == code).map(|instant| instant.index).unwrap()
    };
    let gfp: Vec<f64> = with.gfp.iter().map(|gfp| gfp.unwrap()).collect();
    let inside = &gfp[..=10];
    let mean = inside.iter().sum::<f64>() / 11.0;
    let sd = (inside.iter().map(|one| (one - mean) * (one - mean)).sum::<f64>() / 10.0).sqrt();
    let floor = with.floor.as_ref().unwrap().gfp;
    assert!((floor - (mean + 3.0 * sd)).abs() < 1e-12 * floor);
    let (onset, middle, peak) = (index(&with, "onset"), index(&with, "mid-rise"), index(&with, "peak"));
    assert_eq!(quiet.times[peak], 120.0);
    assert!(gfp[onset - 1] <= floor && gfp[onset..=peak].iter().all(|one| *one > floor), "{onset} {peak}");
    let half = 0.5 * (gfp[onset] + gfp[peak]);
    assert!(gfp[middle] >= half && gfp[onset..middle].iter().all(|one| *one < half));
    assert!(with.sentence.contains("baseline"), "{}", with.sentence);
    let without = response(&quiet, json!({ "mapUnit": "uV" }));
    let tenth = without.floor.as_ref().unwrap();
    assert!((tenth.gfp - 0.1 * without.gfp[peak].unwrap()).abs() < 1e-12 && tenth.sentence.contains("10.0 %"));
    assert!(without.noise.is_none() && with.noise.is_some());
    // Components are no response.
    let none = open(&table(&quiet.electrodes.labels, &quiet.times, &quiet.maps), json!({ "columnsAre": "components" }));
    assert!(none.response().is_none() && none.fixed(0, 3).unwrap().is_none());
    // Where no times are known, time points are counted, and it is said.
    let counted = table(&quiet.electrodes.labels, &quiet.times, &quiet.maps).replace(" ms", "");
    let named = counted.replacen("label\t-100\t", "label\ta-100\t", 1);
    let samples = open(&named, json!({ "columnsAre": "time-points" })).response().unwrap();
    assert_eq!((samples.times[0], samples.unit), (1.0, "samples"));
    assert!(samples.notes.iter().any(|note| note.contains("counted")));
}

/// The noise planted at each electrode comes back from the baseline: mean of 40 draws within 1 %.
#[test]
fn the_baseline_gives_the_noise_that_was_planted() {
    let electrodes = Electrodes::set(32);
    let mut draw = Draw::from(3);
    let times: Vec<f64> = (0..24).map(|k| f64::from(k) * 10.0 - 100.0).collect();
    let mut squares = 0.0;
    for _ in 0..40 {
        let maps: Vec<Vec<f64>> =
            times.iter().map(|_| (0..32).map(|k| 3.0 * f64::from(k) + 0.7 * draw.normal()).collect()).collect();
        let study = open(
            &table(&electrodes.labels, &times, &maps),
            json!({ "mapUnit": "uV", "baseline": { "from": -100, "to": 60 } }),
        );
        let sd = study.response().unwrap().noise.unwrap().sd;
        squares += sd * sd / 40.0;
    }
    assert!((squares.sqrt() / 0.7 - 1.0).abs() < 0.01, "{}", squares.sqrt());
}

/// Against a dense search that sums what each map leaves, with other code and formulas.
#[test]
fn the_fixed_dipole_is_the_best_one_position() {
    let search = MultiStart::new(PlainSeries::standard(), Electrodes::set(32).directions, REACH);
    for (noise, moving) in [(0.3, false), (1.0, true), (3.0, true)] {
        let scenario = scenario(noise, moving);
        let study =
            open(&table(&scenario.electrodes.labels, &scenario.times, &scenario.maps), json!({ "mapUnit": "uV" }));
        let (first, last) = (17, 29);
        let fixed = study.fixed(first, last).unwrap().unwrap();
        let maps: Vec<&[f64]> = scenario.maps[first..=last].iter().map(Vec::as_slice).collect();
        let (least, place) = search.best_common(&maps);
        let power = |map: &[f64]| {
            let mean = map.iter().sum::<f64>() / map.len() as f64;
            map.iter().map(|value| (value - mean) * (value - mean)).sum::<f64>()
        };
        let all: f64 = maps.iter().map(|map| power(map)).sum();
        let pooled: f64 = maps.iter().zip(&fixed.rv).map(|(map, rv)| rv.unwrap() * power(map) / all).sum();
        assert!(pooled - least < 1e-6, "{pooled} at {:?}, {least} at {place:?}", fixed.position);
        let again: f64 = maps.iter().map(|map| search.residual_variance(fixed.position, map) * power(map) / all).sum();
        assert!((again - pooled).abs() < 1e-7, "{again} and {pooled}");
        assert_eq!(fixed.rv.len(), last - first + 1);
    }
}

#[test]
fn a_planted_source_is_found_as_fixed_and_as_moving() {
    let still = scenario(0.2, false);
    let study = open(&table(&still.electrodes.labels, &still.times, &still.maps), json!({ "mapUnit": "uV" }));
    let off = |fixed: &Fixed, place: Vec3| (fixed.position - place).norm() * 88.0;
    let fixed = study.fixed(16, 28).unwrap().unwrap();
    assert!(off(&fixed, still.place) < 1.5, "{} mm off", off(&fixed, still.place));
    // The moment's main axis and its course: at 120 ms the whole of 40 · |(1, 0, 0.4)| nAm.
    let planted = Vec3::new(1.0, 0.0, 0.4);
    assert!(fixed.direction.dot(planted.unit().unwrap()) > 0.98, "{:?}", fixed.direction);
    let peak = fixed.strength.iter().copied().fold(f64::MIN, f64::max);
    assert!((peak / (40.0 * planted.norm()) - 1.0).abs() < 0.05 && fixed.strength_unit == "nAm", "{peak}");
    assert!(fixed.sentence.contains("60 to 180 ms (13 time points)"), "{}", fixed.sentence);
    // The same interval from its end, and of one time point, where it is the fit of that map.
    assert_eq!(study.fixed(28, 16).unwrap().unwrap(), fixed);
    let one = study.fixed(22, 22).unwrap().unwrap();
    let fit = study.fits(22..23).unwrap()[0];
    assert!(
        (one.rv[0].unwrap() - fit[6]).abs() < 1e-12 && (one.position - Vec3::new(fit[0], fit[1], fit[2])).norm() < 1e-6
    );
    assert!(study.fixed(3, 41).is_err());
    // Strengths are those of the fits, also where time points have a size of their own.
    let mut sizes = vec![Value::Null; 41];
    sizes[22] = json!(3.0);
    let sized = study.with(serde_json::from_value(json!({ "mapUnit": "uV", "activationSd": sizes })).unwrap()).unwrap();
    let [x, y, z] = [3, 4, 5].map(|part| sized.fits(22..23).unwrap()[0][part]);
    let strength = sized.fixed(22, 22).unwrap().unwrap().strength[0];
    assert!((strength / x.hypot(y).hypot(z) - 1.0).abs() < 1e-6 && (strength / one.strength[0] - 3.0).abs() < 1e-9);
    let moved = scenario(0.02, true);
    let study = open(&table(&moved.electrodes.labels, &moved.times, &moved.maps), json!({ "mapUnit": "uV" }));
    let course = study.response().unwrap();
    for (index, time) in moved.times.iter().enumerate().filter(|(_, time)| (80.0..=160.0).contains(*time)) {
        let along = (time - 120.0) / 1000.0;
        let place = moved.place + Vec3::new(-along, along, 0.0);
        let distance = (course.positions[index].unwrap() - place).norm() * 88.0;
        assert!(distance < 2.5, "{distance} mm off at {time} ms");
    }
    let (early, late) = (course.positions[18].unwrap(), course.positions[26].unwrap());
    assert!((late - early).norm() * 88.0 > 7.0, "it moves");
}
