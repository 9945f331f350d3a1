//! Invented maps refitted by an independent program in NumPy and SciPy (tests/reference/scipy_refit.py).
use inward_core::{MapReport, Request, Settings, Vec3, analyse};
use inward_tests::data;
use serde_json::Value;

fn vector(value: &Value) -> Vec3 {
    Vec3(std::array::from_fn(|k| value[k].as_f64().unwrap()))
}

#[test]
fn position_moment_and_residual_variance_agree_with_an_independent_fit() {
    let table: Value = serde_json::from_str(&data("scipy_refit.json")).unwrap();
    let (mut count, mut boundary) = (0, 0);
    let mut worst = [0.0f64; 4];
    for case in table["cases"].as_array().unwrap() {
        let mut settings: Settings = serde_json::from_value(case["settings"].clone()).unwrap();
        settings.map_unit = inward_core::map::MapUnit::Microvolt;
        let electrodes = case["electrodes"].as_str();
        let request = Request {
            electrodes: electrodes.map(str::as_bytes),
            maps: case["maps"].as_str().unwrap().as_bytes(),
            settings,
            ..Request::default()
        };
        let report = analyse(&request).unwrap();
        let name = case["name"].as_str().unwrap();
        let centre = (vector(&case["head"]["centre_mm"]) - report.head.centre_mm).norm();
        let radius = (case["head"]["radius_mm"].as_f64().unwrap() - report.head.radius_mm).abs();
        let head = centre.max(radius);
        worst[0] = worst[0].max(head);
        assert!(head < 1e-6, "{name}: centre or radius off by {head} mm");
        let answers = case["answers"].as_array().unwrap();
        assert_eq!(answers.len(), report.maps.len());
        for (map, answer) in report.maps.iter().zip(answers) {
            let MapReport::Fitted(map) = map else { panic!("{name}: {map:?}") };
            let dipole = &map.dipole;
            let place = format!("{name}, {}: {dipole:?} for {answer}", map.name);
            assert_eq!(map.name, answer["name"].as_str().unwrap());
            let rv = (map.residual_variance - answer["residual_variance"].as_f64().unwrap()).abs();
            let position = (dipole.position_mm - vector(&answer["position_mm"])).norm();
            let moment = vector(&answer["moment_nam"]);
            let turned = (dipole.direction * dipole.strength - moment).norm() / moment.norm();
            assert!(rv < 1e-9, "residual variance off by {rv:e}: {place}");
            assert!(position < 1e-4, "position off by {position:e} mm: {place}");
            assert!(turned < 1e-6, "moment off by {turned:e}: {place}");
            assert_eq!(dipole.at_boundary, answer["at_boundary"].as_bool().unwrap(), "{place}");
            worst = [worst[0], worst[1].max(rv), worst[2].max(position), worst[3].max(turned)];
            count += 1;
            boundary += usize::from(dipole.at_boundary);
        }
    }
    println!(
        "{count} maps, {boundary} on the boundary: head off by {:.1e} mm, residual variance {:.1e}, position {:.1e} mm, moment {:.1e} at most",
        worst[0], worst[1], worst[2], worst[3]
    );
    assert!(count >= 40 && boundary > 0 && boundary < count);
}
