//! Dipoles of several people in groups: against scikit-learn, planted groups, limits.
use inward_core::report::{GroupedDipole, GroupedMember, Groups, GroupsRequest};
use inward_core::scene::mean_raster;
use inward_core::{Error, Vec3};
use inward_tests::{Draw, data};
use serde_json::{Value, json};
use std::collections::HashMap;

fn vec3(value: &Value) -> Vec3 {
    serde_json::from_value(value.clone()).unwrap()
}

fn dipole(map: usize, position: Vec3, direction: Vec3) -> GroupedDipole {
    GroupedDipole { map, position, direction, rv: 0.05 }
}

fn member(name: &str, subject: &str, dipoles: Vec<GroupedDipole>) -> GroupedMember {
    GroupedMember { name: name.into(), subject: Some(subject.into()), dipoles }
}

/// The group of each dipole, in the order of the request.
fn labels(request: &GroupsRequest, groups: &Groups) -> Vec<usize> {
    let first: Vec<usize> = request
        .members
        .iter()
        .scan(0, |before, member| {
            let own = *before;
            *before += member.dipoles.len();
            Some(own)
        })
        .collect();
    let mut labels = vec![usize::MAX; request.members.iter().map(|member| member.dipoles.len()).sum()];
    for (number, group) in groups.groups.iter().enumerate() {
        for [member, at] in &group.members {
            assert_eq!(std::mem::replace(&mut labels[first[*member] + at], number), usize::MAX, "in one group only");
        }
    }
    assert!(!labels.contains(&usize::MAX), "every dipole is in a group");
    labels
}

/// Whether two groupings are the same but for the numbers of their groups.
fn same(a: &[usize], b: &[usize]) -> bool {
    let (mut forth, mut back) = (HashMap::new(), HashMap::new());
    a.len() == b.len()
        && a.iter().zip(b).all(|(a, b)| *forth.entry(a).or_insert(b) == b && *back.entry(b).or_insert(a) == a)
}

/// AgglomerativeClustering with linkage "ward" and silhouette_score, scikit-learn 1.9.1; reference/grouping.py.
#[test]
fn groups_and_silhouettes_are_those_of_scikit_learn() {
    let known: Value = serde_json::from_str(&data("grouping.json")).unwrap();
    let all: Vec<GroupedDipole> = known["dipoles"]
        .as_array()
        .unwrap()
        .iter()
        .enumerate()
        .map(|(map, one)| dipole(map, vec3(&one["position"]), vec3(&one["direction"])))
        .collect();
    // Three people: where dipoles come from does not change their groups.
    let members = all.chunks(20).enumerate().map(|(k, some)| member("ICA", &k.to_string(), some.to_vec())).collect();
    let mut request =
        GroupsRequest { members, axis_mm: known["axis_mm"].as_f64().unwrap(), ..GroupsRequest::default() };
    let cuts = known["cuts"].as_array().unwrap();
    assert_eq!(cuts.len(), 11);
    let unasked = Groups::new(&request).unwrap();
    let largest =
        cuts.iter().max_by(|a, b| a["silhouette"].as_f64().unwrap().total_cmp(&b["silhouette"].as_f64().unwrap()));
    assert_eq!(unasked.count as u64, largest.unwrap()["groups"].as_u64().unwrap());
    for (cut, criterion) in cuts.iter().zip(&unasked.criterion) {
        let number = cut["groups"].as_u64().unwrap() as usize;
        assert_eq!(criterion.groups, number);
        let silhouette = cut["silhouette"].as_f64().unwrap();
        assert!((criterion.value - silhouette).abs() < 1e-12, "{number}: {} and {silhouette}", criterion.value);
        request.groups = Some(number);
        let groups = Groups::new(&request).unwrap();
        assert_eq!((groups.count, groups.groups.len()), (number, number));
        let others: Vec<usize> = serde_json::from_value(cut["labels"].clone()).unwrap();
        assert!(same(&labels(&request, &groups), &others), "{number} groups");
        assert!(groups.groups.is_sorted_by(|a, b| a.members.len() >= b.members.len()), "the largest first");
    }
}

/// Twelve people with a dipole at each of five places, two of which are one place with two axes, and signs by chance.
#[test]
fn planted_groups_are_found_with_their_people() {
    let places = [
        ([-0.45, -0.2, 0.5], [1.0, 0.0, 0.3]),
        ([0.45, -0.2, 0.5], [1.0, 0.0, -0.3]),
        ([0.0, 0.5, 0.35], [0.0, 1.0, 0.2]),
        ([0.05, -0.6, 0.2], [0.0, 0.0, 1.0]),
        ([0.05, -0.6, 0.2], [1.0, 0.0, 0.0]),
    ];
    let mut draw = Draw::from(5);
    let mut members = Vec::new();
    for person in 0..12 {
        let mut dipoles = Vec::new();
        for (map, (place, axis)) in places.iter().enumerate() {
            // The last place is lacking in every third person.
            if map == 4 && person % 3 == 0 {
                continue;
            }
            let sign = if draw.normal() < 0.0 { -1.0 } else { 1.0 };
            let off = Vec3(std::array::from_fn(|_| draw.normal())) * (4.0 / 88.0);
            let turn = Vec3(std::array::from_fn(|_| draw.normal())) * 0.1;
            dipoles.push(dipole(map, Vec3(*place) + off, (Vec3(*axis) + turn) * sign));
        }
        members.push(member("ICA", &format!("{person}"), dipoles));
    }
    let request = GroupsRequest { members, ..GroupsRequest::default() };
    let groups = Groups::new(&request).unwrap();
    assert_eq!(groups.count, 5, "{}", groups.sentence);
    for group in &groups.groups {
        let planted = group.members.iter().map(|[member, at]| request.members[*member].dipoles[*at].map);
        let planted: Vec<usize> = planted.collect();
        assert!(planted.iter().all(|one| *one == planted[0]), "{planted:?}");
        let (place, axis) = places[planted[0]];
        assert_eq!(group.subjects, if planted[0] == 4 { 8 } else { 12 });
        let off = (group.position - Vec3(place)).norm() * 88.0;
        assert!(off < 4.0, "{off} mm off");
        assert!(group.axis.dot(Vec3(axis).unit().unwrap()).abs() > 0.99);
        assert!(group.ellipsoid.is_some() && group.cells.len() == 6);
    }
    // Without regard to the axes the two at one place are one group.
    let blind = Groups::new(&GroupsRequest { axis_mm: 0.0, ..request.clone() }).unwrap();
    assert_eq!(blind.count, 4, "{}", blind.sentence);
    // A second table of a person adds dipoles, but nobody.
    let mut twice = request;
    twice.members.push(twice.members[0].clone());
    let again = Groups::new(&twice).unwrap();
    assert!(again.groups.iter().all(|group| group.subjects <= 12) && again.notes.len() > groups.notes.len());
}

#[test]
fn few_dipoles_none_and_too_many_are_told() {
    let of = |count: usize| {
        let dipoles =
            (0..count).map(|k| dipole(k, Vec3::new(0.1 * (k % 7) as f64, 0.2, 0.3), Vec3::new(1.0, 0.0, 0.0)));
        GroupsRequest { members: vec![member("a", "", dipoles.collect())], ..GroupsRequest::default() }
    };
    for count in 0..4 {
        let groups = Groups::new(&of(count)).unwrap();
        assert_eq!(groups.groups.iter().map(|group| group.members.len()).sum::<usize>(), count);
        assert_eq!(groups.criterion.len(), count.saturating_sub(2), "{groups:?}");
        assert!(groups.sentence.ends_with('.'));
    }
    // All at one place: every silhouette is 0, and the smallest number stands.
    let mut equal = of(9);
    equal.members[0].dipoles.iter_mut().for_each(|one| one.position = Vec3::ZERO);
    let groups = Groups::new(&equal).unwrap();
    assert!(groups.count == 2 && groups.criterion.iter().all(|one| one.value == 0.0));
    let code = |request: &GroupsRequest| match Groups::new(request) {
        Err(error) => Error::finding(&error).code.as_str(),
        Ok(_) => "none",
    };
    assert_eq!(code(&of(5001)), "dipoles-too-many");
    for (key, value) in [("groups", json!(0)), ("groups", json!(25)), ("axisMm", json!(-1.0)), ("axisMm", json!(201.0))]
    {
        let mut request: GroupsRequest = serde_json::from_value(json!({ key: value })).unwrap();
        request.members = of(9).members;
        assert_eq!(code(&request), "setting-range", "{key} {value}");
    }
    let mut broken = of(3);
    broken.members[0].dipoles[1].direction = Vec3::ZERO;
    assert_eq!(code(&broken), "settings-unknown");
}

#[test]
fn mean_maps_agree_in_sign_and_stay_within_what_all_show() {
    let size = 16;
    let place = |pixel: usize| ((pixel % size) as f64 / 8.0 - 1.0, 1.0 - (pixel / size) as f64 / 8.0);
    let pattern = |pixel: usize| (place(pixel).0 * 2.0) as f32;
    let mut rasters: Vec<Vec<f32>> = Vec::new();
    for (k, sign) in [1.0f32, -1.0, -1.0, 1.0, -1.0].into_iter().enumerate() {
        let other = |pixel: usize| 0.3 * ((pixel * (k + 3)) as f32).sin();
        rasters.push((0..size * size).map(|pixel| sign * (pattern(pixel) + other(pixel))).collect());
        rasters[k][k * 17] = f32::NAN;
    }
    let given: Vec<(&[f32], f64)> = rasters.iter().map(|raster| (raster.as_slice(), 120.0)).collect();
    let mean = mean_raster(&given, size);
    let holes: Vec<usize> = (0..5).map(|k| k * 17).collect();
    let signs = [1.0f32, -1.0, -1.0, 1.0, -1.0];
    for pixel in 0..size * size {
        if holes.contains(&pixel) {
            assert!(mean[pixel].is_nan());
            continue;
        }
        let by_hand: f32 = rasters.iter().zip(signs).map(|(raster, sign)| sign * raster[pixel]).sum::<f32>() / 5.0;
        assert!((mean[pixel] - by_hand).abs() < 1e-5, "{pixel}: {} and {by_hand}", mean[pixel]);
    }
    // A map that is linear on the disc stays the same map where the rims differ.
    let wide: Vec<f32> = (0..size * size).map(|pixel| place(pixel).0 as f32 + 1.0 / 16.0).collect();
    let half: Vec<f32> = wide.iter().map(|value| value / 1.25).collect();
    let mean = mean_raster(&[(&wide, 150.0), (&half, 120.0)], size);
    let told = mean.iter().zip(&wide).filter(|(mean, _)| !mean.is_nan());
    assert!(told.clone().count() > 100);
    assert!(told.into_iter().all(|(mean, wide)| (mean - wide).abs() < 1e-5));
}
