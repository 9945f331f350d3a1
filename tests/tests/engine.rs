//! The engine as a module in Node, and the same digits natively and in WebAssembly.
use inward_core::{Request, Settings, Vec3, analyse};
use inward_tests::{Draw, Electrodes, Mixture, Node, PlainSeries, example};
use serde_json::{Value, json};

#[test]
fn scripts_find_what_they_rely_on() {
    let printed = Node::with_engine()
        .run("js/engine.test.mjs", &["--test-reporter=spec"], "")
        .unwrap_or_else(|why| panic!("{why}"));
    println!("{printed}");
    assert!(printed.contains("fail 0"), "{printed}");
    let passed = printed.lines().find_map(|line| line.split_once("pass ")?.1.parse::<u32>().ok());
    assert!(passed.is_some_and(|count| count >= 16), "{printed}");
}

#[test]
fn the_page_shares_work_among_workers_and_replaces_them() {
    let printed = Node::with_engine()
        .run("js/pool.test.mjs", &["--test-reporter=spec"], "")
        .unwrap_or_else(|why| panic!("{why}"));
    assert!(printed.contains("pass 16") && printed.contains("fail 0"), "{printed}");
}

#[test]
fn the_page_pairs_and_names_files_as_their_names_say() {
    let printed = Node::with_engine()
        .run("js/decompositions.test.mjs", &["--test-reporter=spec"], "")
        .unwrap_or_else(|why| panic!("{why}"));
    assert!(printed.contains("pass 7") && printed.contains("fail 0"), "{printed}");
}

/// A request as JSON for Node and its report made natively.
struct Case {
    request: Value,
    native: Value,
}

fn case(electrodes: Option<&str>, maps: &str, settings: Value) -> Case {
    let mut request = json!({ "maps": maps, "settings": settings });
    if let Some(electrodes) = electrodes {
        request["electrodes"] = json!(electrodes);
    }
    let settings: Settings = serde_json::from_value(settings).unwrap();
    let report = analyse(&Request {
        electrodes: electrodes.map(str::as_bytes),
        maps: maps.as_bytes(),
        settings,
        ..Request::default()
    });
    Case { request, native: serde_json::to_value(report.unwrap()).unwrap() }
}

/// Where two values differ, numbers compared bit by bit.
fn differences(path: &str, a: &Value, b: &Value, found: &mut Vec<String>) {
    match (a, b) {
        (Value::Object(a), Value::Object(b)) => {
            if a.keys().ne(b.keys()) {
                found.push(format!("{path}: other keys"));
            }
            for (key, value) in a {
                differences(&format!("{path}.{key}"), value, &b[key], found);
            }
        }
        (Value::Array(a), Value::Array(b)) => {
            if a.len() != b.len() {
                found.push(format!("{path}: other lengths"));
            }
            for (index, (a, b)) in a.iter().zip(b).enumerate() {
                differences(&format!("{path}[{index}]"), a, b, found);
            }
        }
        (Value::Number(x), Value::Number(y)) => {
            let (x, y) = (x.as_f64().unwrap(), y.as_f64().unwrap());
            // JSON does not know the sign of zero.
            if x.to_bits() != y.to_bits() && !(x == 0.0 && y == 0.0) {
                found.push(format!("{path}: {x:e} and {y:e}"));
            }
        }
        _ if a == b => {}
        _ => found.push(format!("{path}: {a} and {b}")),
    }
}

#[test]
fn native_and_wasm_give_equal_bits() {
    let series = PlainSeries::standard();
    let mut draw = Draw::from(64);
    let mut cases = vec![
        case(Some(&example("watch_electrodes.tsv")), &example("watch_maps.tsv"), json!({})),
        case(
            None,
            &example("watch_maps.tsv"),
            json!({ "mapUnit": "V", "exclude": ["Cz", "T7"], "flip": [1, 2], "activationSd": [null, 0.3] }),
        ),
    ];
    let trust = json!({
        "assess": ["region", "populations", "verdict", "alternatives", "influence", "what_if"], "sources": { "draws": 1000, "seed": 7 }, "noise": { "singleTrialSd": 9.5, "trials": 100 },
    });
    cases.push(case(Some(&example("watch_electrodes.tsv")), &example("watch_maps.tsv"), trust));
    // A head that lies obliquely in its axes, and its mirror image.
    let set = Electrodes::set(32);
    let turn = draw.rotation();
    let oblique: Vec<Vec3> = set.directions.iter().map(|&e| turn(e * 88.0) + draw.direction() * 3.0).collect();
    let mirrored: Vec<Vec3> = oblique.iter().map(|p| Vec3::new(p[0], -p[1], p[2])).collect();
    let maps = Mixture::many(&series, &set.directions, 0.85, 20, &mut draw);
    let columns: Vec<(&str, &[f64])> = maps.iter().map(|map| ("m", map.values.as_slice())).collect();
    cases.push(case(Some(&set.table(&oblique)), &set.maps(&columns), json!({ "assess": ["influence", "what_if"] })));
    cases.push(case(Some(&set.table(&mirrored)), &set.maps(&columns), json!({ "mirror": true })));
    cases.push(case(Some(&set.table(&oblique)), &set.maps(&columns), json!({ "axes": "front-left-up" })));
    for (count, unit) in [(19, 1.0), (32, 0.1), (71, 0.001), (128, 1.0), (256, 1.0)] {
        let set = Electrodes::set(count);
        let maps = Mixture::many(&series, &set.directions, 0.85, 60, &mut draw);
        let names: Vec<String> = (0..maps.len()).map(|k| format!("m{k}")).collect();
        let columns: Vec<(&str, &[f64])> =
            names.iter().zip(&maps).map(|(name, map)| (name.as_str(), map.values.as_slice())).collect();
        let positions = set.measured(91.0, Vec3::new(1.0, -8.0, 21.0), 4.0, &mut draw);
        let table = set.table(&positions.iter().map(|&p| p * unit).collect::<Vec<_>>());
        let head = json!({ "head": { "shells": [
            { "tissue": "brain", "ratio": 0.87, "conductivity": 0.33 },
            { "tissue": "skull", "ratio": 0.92, "conductivity": 0.008 },
            { "tissue": "scalp", "ratio": 1.0, "conductivity": 0.43 }
        ] } });
        cases.push(case(Some(&table), &set.maps(&columns), json!({})));
        cases.push(case(Some(&table), &set.maps(&columns[..20]), head));
    }
    let requests: Vec<&Value> = cases.iter().map(|case| &case.request).collect();
    let printed = Node::with_engine()
        .run("js/report.mjs", &[], &json!(requests).to_string())
        .unwrap_or_else(|why| panic!("{why}"));
    let reports: Value = serde_json::from_str(&printed).unwrap();
    let mut compared = 0;
    for (index, (case, wasm)) in cases.iter().zip(reports.as_array().unwrap()).enumerate() {
        let (mut native, mut wasm) = (case.native.clone(), wasm.clone());
        // Only the build tool names the build.
        native["program"]["build"] = Value::Null;
        assert!(wasm["program"]["build"].is_string());
        wasm["program"]["build"] = Value::Null;
        let mut found = Vec::new();
        differences("", &native, &wasm, &mut found);
        assert!(
            found.is_empty(),
            "case {index}: {} differences, such as {:#?}",
            found.len(),
            &found[..found.len().min(8)]
        );
        compared += native["maps"].as_array().unwrap().len();
    }
    println!("{compared} maps, equal bits");
    assert!(compared > 400);
}
